//! Channels that are computed from others: the causes that they add to theirs.

use std::boxed::Box;
use std::collections::BTreeMap;
use std::format;
use std::vec::Vec;

use super::super::rosette::{Part, RosetteNode};
use super::super::{Bar, BarPart, Cause, Node, Scale, Term, slope};
use super::{Builder, Plans, When};
use crate::measurement::{Channel, Measurement, MeasurementError, RosetteSource, Source};
use crate::strain::{Loading, Material, Section};

/// The causes that a channel which is computed from others adds to theirs.
pub(in crate::measurement) enum Derived {
    /// Of each weight: the place of its cause and what the weight is raised by.
    Sum(Vec<Option<(usize, f64)>>),
    /// Relative change of the factor per unit of each cause.
    Product(Vec<(usize, f64)>),
    Rosette(Box<RosetteNode>),
}

/// Returns the causes that a channel which is computed from others adds, and how; `None` for one that reads.
pub(in crate::measurement) fn derived(measurement: &Measurement, channel: usize) -> Option<(Vec<Cause>, Derived)> {
    let own = measurement.channels.get(channel)?;
    let mut builder = Builder {
        measurement,
        plans: &mut Plans::default(),
        states: &[],
        top: channel,
        causes: Vec::new(),
        known: BTreeMap::new(),
        nodes: Vec::new(),
        made: BTreeMap::new(),
        unused: Vec::new(),
    };
    let derived = match &own.source {
        Source::Reading(_) => return None,
        Source::Combination(terms) => {
            Derived::Sum(terms.iter().map(|(of, weight)| builder.weight(own, *of, *weight)).collect())
        }
        Source::Stress { loading, bar, .. } => {
            let scale = builder.scale(own, (*loading).zip(*bar));
            let count = builder.causes.len();
            let slopes = scale.causes().into_iter().map(|cause| {
                let step = 0.1 * builder.causes.get(cause).map_or(0.0, Cause::standard);
                let moved = |by: f64| {
                    let mut off = std::vec![0.0; count];
                    if let Some(slot) = off.get_mut(cause) {
                        *slot = by;
                    }
                    scale.times(&off)
                };
                (cause, if step > 0.0 { slope(step, moved) } else { 0.0 })
            });
            Derived::Product(slopes.collect())
        }
        Source::Rosette(source) => {
            let grids = (0..source.each_grid().len()).collect();
            Derived::Rosette(Box::new(builder.rosette_node(own, source, grids)))
        }
    };
    Some((builder.causes, derived))
}

impl<'m> Builder<'m> {
    pub(super) fn combination(&mut self, own: &'m Channel, terms: &[(usize, f64)]) -> Result<Node, MeasurementError> {
        let mut out = Vec::new();
        for (channel, weight) in terms {
            let of = self.node(*channel, When::Now)?;
            let cause = self.weight(own, *channel, *weight);
            out.push(Term { of, weight: *weight, cause });
        }
        Ok(Node::Sum(out))
    }

    /// The cause of a weight, and what it is raised by per unit of its error.
    fn weight(&mut self, own: &Channel, of: usize, weight: f64) -> Option<(usize, f64)> {
        let name = self.measurement.channels.get(of).map(|c| c.name.as_str())?;
        let stated = own.stated.iter().find(|s| s.key == format!("combine.{name}"))?;
        Some((self.stated_cause(own, stated, ""), weight / stated.value))
    }

    pub(super) fn scale(&mut self, own: &Channel, bar: Option<(Loading, (Section, Material))>) -> Scale {
        let mut scale = Scale::default();
        let mut parts = Vec::new();
        for stated in &own.stated {
            let part = match stated.key.as_str() {
                "material.modulus" => BarPart::Modulus,
                "material.poisson" => BarPart::Poisson,
                "section.diameter" => BarPart::Diameter,
                "section.bore" => BarPart::Bore,
                "section.width" => BarPart::Width,
                "section.height" => BarPart::Height,
                "section.area" => BarPart::Area,
                _ => continue,
            };
            parts.push((self.stated_cause(own, stated, ""), part, stated.value));
        }
        match bar {
            Some((loading, (section, material))) => {
                let parts = parts.into_iter().map(|(cause, part, _)| (cause, part)).collect();
                scale.bar = Some(Bar { section, material, loading, parts });
            }
            _ => {
                let modulus = parts.into_iter().find(|(_, part, _)| *part == BarPart::Modulus);
                scale.modulus = modulus.map(|(cause, _, value)| (cause, value));
            }
        }
        scale
    }

    pub(super) fn rosette(
        &mut self,
        own: &'m Channel,
        source: &RosetteSource,
    ) -> Result<RosetteNode, MeasurementError> {
        let mut grids = Vec::new();
        for (channel, ..) in source.each_grid() {
            grids.push(self.node(channel, When::Now)?);
        }
        Ok(self.rosette_node(own, source, grids))
    }

    fn rosette_node(&mut self, own: &Channel, source: &RosetteSource, grids: Vec<usize>) -> RosetteNode {
        let mut parts = Vec::new();
        for stated in &own.stated {
            let place = stated.key.split_once('[').and_then(|(_, n)| n.trim_end_matches(']').parse::<usize>().ok());
            let place = place.unwrap_or(0).saturating_sub(1);
            let part = match stated.key.split('[').next().unwrap_or("") {
                "angles" => Part::Angle(place),
                "transverse" if stated.key.contains('[') => Part::Sensitivity(place),
                "transverse" => Part::Sensitivities,
                "material.modulus" => Part::Modulus,
                "material.poisson" => Part::Poisson,
                _ => continue,
            };
            if source.material.is_none() && matches!(part, Part::Modulus | Part::Poisson) {
                continue;
            }
            parts.push((self.stated_cause(own, stated, ""), part));
        }
        RosetteNode { source: source.clone(), grids, parts, nominal: f64::NAN }
    }
}

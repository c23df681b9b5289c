//! A rosette on the way to the result.

use std::vec::Vec;

use super::{Cause, add, slope};
use crate::measurement::{Give, Grids, RosetteSource};
use crate::strain::{Grid, Material, Rosette, Tee};

/// What of a rosette a cause moves.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Part {
    /// Angle of a grid, degrees, by its place.
    Angle(usize),
    /// Transverse sensitivity of a grid, by its place.
    Sensitivity(usize),
    /// Transverse sensitivity of all grids.
    Sensitivities,
    Modulus,
    Poisson,
}

#[derive(Clone, Debug)]
pub(in crate::measurement) struct RosetteNode {
    pub(super) source: RosetteSource,
    /// The steps that give the grids' strains, the fourth last.
    pub(super) grids: Vec<usize>,
    pub(super) parts: Vec<(usize, Part)>,
    pub(super) nominal: f64,
}

impl RosetteNode {
    /// The rosette when its constants are off.
    fn source_at(&self, off: &[f64]) -> Option<RosetteSource> {
        let by = |cause: usize| off.get(cause).copied().unwrap_or(0.0);
        let mut out = self.source.clone();
        if self.parts.iter().all(|(cause, _)| by(*cause) == 0.0) {
            return Some(out);
        }
        let moved = |place: usize, grid: &Grid| {
            let mut grid = *grid;
            for (cause, part) in &self.parts {
                match part {
                    Part::Angle(n) if *n == place => grid.degrees += by(*cause),
                    Part::Sensitivity(n) if *n == place => grid.sensitivity += by(*cause),
                    Part::Sensitivities => grid.sensitivity += by(*cause),
                    _ => {}
                }
            }
            grid
        };
        out.grids = match &self.source.grids {
            Grids::Three(rosette) => {
                let [a, b, c] = rosette.grids();
                Grids::Three(Rosette::new([moved(0, a), moved(1, b), moved(2, c)]).ok()?)
            }
            Grids::Two(tee) => {
                let second = Grid { degrees: 0.0, sensitivity: tee.second_sensitivity() };
                Grids::Two(Tee::new(moved(0, tee.first()), moved(1, &second).sensitivity).ok()?)
            }
        };
        out.fourth = self.source.fourth.map(|(channel, scale, grid)| (channel, scale, moved(3, &grid)));
        if let Some((material, _)) = &mut out.material {
            let (mut modulus, mut poisson) = (material.modulus(), material.poisson());
            for (cause, part) in &self.parts {
                match part {
                    Part::Modulus => modulus += by(*cause),
                    Part::Poisson => poisson += by(*cause),
                    _ => {}
                }
            }
            *material = Material::new(modulus, poisson).ok()?;
        }
        Some(out)
    }

    fn strains(&self, values: &[f64]) -> Vec<f64> {
        let scales = self.source.channels.iter().map(|(_, scale)| *scale);
        let scales = scales.chain(self.source.fourth.map(|(_, scale, _)| scale));
        let grids = self.grids.iter().map(|n| values.get(*n).copied().unwrap_or(f64::NAN));
        grids.zip(scales).map(|(value, scale)| scale * value).collect()
    }

    /// A direction beside the nominal one, not half a turn from it.
    fn near(&self, value: f64) -> f64 {
        if self.source.give == Give::Direction && self.nominal.is_finite() {
            return self.nominal + libm::remainder(value - self.nominal, 180.0 * self.source.scale);
        }
        value
    }

    pub(super) fn moved(&self, off: &[f64], values: &[f64]) -> f64 {
        let result = self.source_at(off).and_then(|source| source.one(&self.strains(values)));
        self.near(result.unwrap_or(f64::NAN))
    }

    pub(super) fn gradient(
        &self,
        off: &[f64],
        values: &[f64],
        gradients: &[Vec<f64>],
        causes: &[Cause],
        own: &mut [f64],
    ) -> f64 {
        let standard = |cause: usize| causes.get(cause).map_or(0.0, Cause::standard);
        let Some(slopes) = self.slopes(off, values, standard) else { return f64::NAN };
        for (node, slope) in self.grids.iter().zip(slopes.grids) {
            add(own, gradients.get(*node), slope);
        }
        for (cause, slope) in slopes.parts {
            if let Some(slot) = own.get_mut(cause) {
                *slot += slope;
            }
        }
        self.near(slopes.value)
    }

    /// The result, and its slopes.
    pub(in crate::measurement) fn slopes(
        &self,
        off: &[f64],
        values: &[f64],
        standard: impl Fn(usize) -> f64,
    ) -> Option<Slopes> {
        let mut strains = self.strains(values);
        let source = self.source_at(off)?;
        let scales = self.source.channels.iter().map(|(_, scale)| *scale);
        let scales = scales.chain(self.source.fourth.map(|(_, scale, _)| scale));
        let largest = strains.iter().fold(0.0_f64, |m, e| m.max(e.abs()));
        // a step that neither rounding nor the bend of the law spoils
        let step = 1e-3 * if largest > 0.0 { largest } else { 1e-6 };
        let value = source.one(&strains)?;
        let mut grids = Vec::with_capacity(self.grids.len());
        for (i, scale) in scales.enumerate() {
            let kept = strains.get(i).copied()?;
            let mut moved = |by: f64| {
                if let Some(slot) = strains.get_mut(i) {
                    *slot = kept + by;
                }
                source.one(&strains).map_or(f64::NAN, |result| self.beside(value, result))
            };
            let rise = 8.0 * (moved(step) - moved(-step)) - (moved(2.0 * step) - moved(-2.0 * step));
            moved(0.0);
            grids.push(rise / (12.0 * step) * scale);
        }
        let mut parts = Vec::with_capacity(self.parts.len());
        for (cause, _) in &self.parts {
            let step = 0.1 * standard(*cause);
            let moved = |by: f64| {
                let mut off = off.to_vec();
                if let Some(slot) = off.get_mut(*cause) {
                    *slot += by;
                }
                let result = self.source_at(&off).and_then(|s| s.one(&strains));
                result.map_or(f64::NAN, |result| self.beside(value, result))
            };
            parts.push((*cause, if step > 0.0 { slope(step, moved) } else { 0.0 }));
        }
        Some(Slopes { value, grids, parts })
    }

    /// A direction beside another, not half a turn from it.
    fn beside(&self, value: f64, result: f64) -> f64 {
        if self.source.give != Give::Direction {
            return result;
        }
        value + libm::remainder(result - value, 180.0 * self.source.scale)
    }
}

/// A result of a rosette and its slopes.
pub(in crate::measurement) struct Slopes {
    pub(in crate::measurement) value: f64,
    /// By the values of the grids' channels, in their order.
    pub(in crate::measurement) grids: Vec<f64>,
    /// By the causes of the rosette's own constants.
    pub(in crate::measurement) parts: Vec<(usize, f64)>,
}

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
pub(super) struct RosetteNode {
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
        let strains = self.strains(values);
        let Some(source) = self.source_at(off) else { return f64::NAN };
        let scales: Vec<f64> = self
            .source
            .channels
            .iter()
            .map(|(_, scale)| *scale)
            .chain(self.source.fourth.map(|(_, scale, _)| scale))
            .collect();
        let largest = strains.iter().fold(0.0_f64, |m, e| m.max(e.abs()));
        // a step that neither rounding nor the bend of the law spoils
        let step = 1e-3 * if largest > 0.0 { largest } else { 1e-6 };
        for (i, (node, scale)) in self.grids.iter().zip(&scales).enumerate() {
            let moved = |by: f64| {
                let mut strains = strains.clone();
                if let Some(slot) = strains.get_mut(i) {
                    *slot += by;
                }
                self.near(source.one(&strains).unwrap_or(f64::NAN))
            };
            add(own, gradients.get(*node), slope(step, moved) * scale);
        }
        for (cause, _) in &self.parts {
            let step = 0.1 * causes.get(*cause).map_or(0.0, Cause::standard);
            let moved = |by: f64| {
                let mut off = off.to_vec();
                if let Some(slot) = off.get_mut(*cause) {
                    *slot += by;
                }
                self.near(self.source_at(&off).and_then(|s| s.one(&strains)).unwrap_or(f64::NAN))
            };
            if let Some(slot) = own.get_mut(*cause).filter(|_| step > 0.0) {
                *slot += slope(step, moved);
            }
        }
        self.near(source.one(&strains).unwrap_or(f64::NAN))
    }
}

//! Rosettes as channels: grids in, one result of the plane state out.

use std::vec::Vec;

use super::Column;
use crate::chain::Word;
use crate::strain::{Grid, Material, Plane, PlaneStrain, PlaneStress, Rosette, Tee};

/// What one channel of a rosette gives.
#[derive(Clone, Copy, Debug, PartialEq)]
#[non_exhaustive]
pub enum Give {
    /// The larger principal strain.
    PrincipalMax,
    /// The smaller principal strain.
    PrincipalMin,
    /// Direction from x to the larger principal strain, degrees anticlockwise.
    Direction,
    /// Largest engineering shear strain in the plane.
    ShearMax,
    /// Normal strain along x.
    StrainX,
    /// Normal strain along y.
    StrainY,
    /// Engineering shear strain γ_xy.
    StrainXy,
    /// Normal strain in a direction, degrees from x.
    StrainAlong(f64),
    /// The larger principal stress in the plane.
    StressMax,
    /// The smaller principal stress in the plane.
    StressMin,
    /// Normal stress along x.
    StressX,
    /// Normal stress along y.
    StressY,
    /// Shear stress τ_xy.
    StressXy,
    /// Normal stress in a direction, degrees from x.
    StressAlong(f64),
    /// Equivalent stress of von Mises.
    VonMises,
    /// Equivalent stress of Tresca.
    Tresca,
    /// What a fourth grid indicates, less what the other three say that it should.
    Consistency,
}

/// How the grids determine the state of strain.
#[derive(Clone, Copy, Debug, PartialEq)]
#[non_exhaustive]
pub enum Grids {
    /// Three grids at any angles.
    Three(Rosette),
    /// Two grids at right angles along the principal directions.
    Two(Tee),
}

/// One result of a rosette.
#[derive(Clone, Debug, PartialEq)]
pub struct RosetteSource {
    /// The strain channels of the grids, with what their values are multiplied by to be plain strain.
    pub channels: Vec<(usize, f64)>,
    /// What the grids are.
    pub grids: Grids,
    /// A fourth grid and its channel, for the check of consistency.
    pub fourth: Option<(usize, f64, Grid)>,
    /// Material and what is zero out of the plane; needed for stresses.
    pub material: Option<(Material, Plane)>,
    /// What this channel gives.
    pub give: Give,
    /// What the plain result (strain, Pa, degrees) is multiplied by to be in the channel's unit.
    pub scale: f64,
}

impl RosetteSource {
    /// Returns 90° in the unit of a direction: an uncertainty from there on says nothing; `None` for other results.
    #[must_use]
    pub fn quarter_turn(&self) -> Option<f64> {
        (self.give == Give::Direction).then_some(90.0 * self.scale)
    }

    /// Returns each grid with its channel and what that channel's values are multiplied by to be plain strain; the fourth
    /// grid last.
    #[must_use]
    pub fn each_grid(&self) -> Vec<(usize, f64, Grid)> {
        let grids = match &self.grids {
            Grids::Three(rosette) => rosette.grids().to_vec(),
            Grids::Two(tee) => {
                let first = *tee.first();
                Vec::from([first, Grid { degrees: first.degrees + 90.0, sensitivity: tee.second_sensitivity() }])
            }
        };
        let own = self.channels.iter().zip(grids).map(|(&(channel, scale), grid)| (channel, scale, grid));
        own.chain(self.fourth).collect()
    }

    /// Channels that must be computed before.
    pub(super) fn feeders(&self) -> Vec<usize> {
        self.channels.iter().map(|(c, _)| *c).chain(self.fourth.iter().map(|(c, ..)| *c)).collect()
    }

    /// The rows of this result; a grid's word stands for the rosette.
    pub(super) fn compute(&self, results: &[Column], rows: usize) -> Column {
        let mut out = Column::missing(rows);
        let mut columns: Vec<(&Column, f64)> =
            self.channels.iter().filter_map(|(c, scale)| results.get(*c).map(|c| (c, *scale))).collect();
        if columns.len() != self.channels.len() {
            return out;
        }
        let fourth = self.fourth.as_ref().filter(|_| self.give == Give::Consistency);
        if let Some((channel, scale, _)) = fourth {
            columns.extend(results.get(*channel).map(|c| (c, *scale)));
        }
        let mut strains = std::vec![0.0; columns.len()];
        for (row, (value, word)) in out.values.iter_mut().zip(&mut out.words).enumerate() {
            *word = Word::Good;
            for ((column, scale), strain) in columns.iter().zip(&mut strains) {
                *strain = scale * column.values.get(row).copied().unwrap_or(f64::NAN);
                let grid = column.words.get(row).copied().unwrap_or(Word::Missing);
                if *word == Word::Good || (word.has_number() && !grid.has_number()) {
                    *word = grid;
                }
            }
            if !word.has_number() {
                continue;
            }
            match self.one(&strains) {
                Some(result) => *value = result,
                // every direction is principal
                None => *word = Word::Ambiguous,
            }
        }
        out
    }

    /// The result for the grids' plain strains, the fourth last; `None` where every direction is principal.
    pub(crate) fn one(&self, strains: &[f64]) -> Option<f64> {
        let at = |i: usize| strains.get(i).copied().unwrap_or(f64::NAN);
        let state = match &self.grids {
            Grids::Three(rosette) => rosette.state([at(0), at(1), at(2)]),
            Grids::Two(tee) => tee.state([at(0), at(1)]),
        };
        let plain = match self.give {
            Give::PrincipalMax => state.principal().larger,
            Give::PrincipalMin => state.principal().smaller,
            Give::Direction => state.principal().degrees?,
            Give::ShearMax => state.principal().shear,
            Give::StrainX => state.x,
            Give::StrainY => state.y,
            Give::StrainXy => state.shear,
            Give::StrainAlong(degrees) => state.along(degrees),
            Give::Consistency => {
                let (_, _, grid) = self.fourth.as_ref()?;
                at(self.channels.len()) - Rosette::indicated(grid, &state)
            }
            stress => self.stress(&state).map(|s| match stress {
                Give::StressMin => s.principal()[1],
                Give::StressX => s.x,
                Give::StressY => s.y,
                Give::StressXy => s.shear,
                Give::StressAlong(degrees) => s.along(degrees)[0],
                Give::VonMises => s.von_mises(),
                Give::Tresca => s.tresca(),
                _ => s.principal()[0],
            })?,
        };
        Some(plain * self.scale)
    }

    fn stress(&self, state: &PlaneStrain) -> Option<PlaneStress> {
        self.material.as_ref().map(|(material, plane)| material.stress(state, *plane))
    }
}

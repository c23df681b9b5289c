//! The rows that models are evaluated at.

use std::vec::Vec;

use super::robust::range;
use super::store::Gathered;

/// Rows at which a model is evaluated, with what was delivered there.
#[derive(Clone, Debug, Default)]
pub(super) struct Sample {
    pub(super) positions: Vec<usize>,
    /// One for each part.
    pub(super) parts: Vec<Gathered>,
    pub(super) own: Vec<f64>,
    pub(super) theirs: Vec<f64>,
    /// Half a step of the delivered figures.
    pub(super) half: Vec<f64>,
    /// What rounding may make of a difference: half a step, and what rounding of the readings adds.
    pub(super) tolerance: Vec<f64>,
}

impl Sample {
    /// How much a prediction may lie off at a row: half a step of the delivered figures; what rounding of the readings does, as
    /// many times as the prediction moves more than the own value; and what rounding of a delivered temperature does.
    pub(super) fn allowed(&self, row: usize, scale: f64, extra: f64) -> f64 {
        let half = self.half.get(row).copied().unwrap_or(0.0);
        let whole = self.tolerance.get(row).copied().unwrap_or(half);
        half + (whole - half) * scale + extra
    }

    /// How many times as much these predictions move as the own values.
    pub(super) fn scale_of(&self, predicted: &[f64]) -> f64 {
        let (low, high) = range(&self.own);
        let (a, b) = range(predicted);
        let scale = (b - a) / (high - low);
        if scale.is_finite() && scale > 0.0 { scale } else { 1.0 }
    }

    /// So many of its rows, one from each stretch of equal length, at no fixed distance.
    pub(super) fn thinned(&self, most: usize) -> Self {
        let (rows, most) = (self.positions.len(), most.max(1));
        if rows <= most {
            return self.clone();
        }
        let chosen: Vec<usize> = (0..most)
            .map(|k| {
                let (from, to) = (k * rows / most, (k + 1) * rows / most);
                // a place within the stretch that follows no period
                let mixed = (k as u64).wrapping_mul(0x9e37_79b9_7f4a_7c15) >> 40;
                from + (mixed as usize) % (to - from).max(1)
            })
            .collect();
        fn thin<T: Copy>(v: &[T], chosen: &[usize]) -> Vec<T> {
            chosen.iter().filter_map(|i| v.get(*i).copied()).collect()
        }
        let numbers = |v: &Vec<f64>| thin(v, &chosen);
        let part = |g: &Gathered| Gathered {
            readings: numbers(&g.readings),
            supplies: numbers(&g.supplies),
            celsius: g.celsius.each_ref().map(numbers),
            segment: thin(&g.segment, &chosen),
            own: numbers(&g.own),
            seconds: numbers(&g.seconds),
        };
        Self {
            positions: thin(&self.positions, &chosen),
            parts: self.parts.iter().map(part).collect(),
            own: numbers(&self.own),
            theirs: numbers(&self.theirs),
            half: numbers(&self.half),
            tolerance: numbers(&self.tolerance),
        }
    }
}

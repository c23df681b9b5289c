//! Numbers that were delivered where the readings give none.

use std::string::ToString;
use std::vec::Vec;

use super::channel::Channel;
use super::model::{Codes, Model, root_mean_square};
use super::store::Store;
use super::verdict::{Explanation, Verdict};

/// How a gap may have been filled.
enum Filled {
    Constant(f64),
    Before,
    Line,
}

impl Channel<'_> {
    /// Judges a delivery that agrees but for such rows; false where there are none among those kept.
    pub(super) fn judge_alone(&mut self, store: &Store) -> bool {
        let Some((explanation, explained)) = self.look_alone(store, &self.base) else { return false };
        self.out.verdict = if explained { Verdict::Explained } else { Verdict::Unexplained };
        self.out.explanations = explanation.into_iter().collect();
        self.out.material = true;
        self.out.only_alone = true;
        if !explained {
            self.out.settle = "ask what stands in their column where there is no good reading".into();
        }
        true
    }

    /// What may have been done in such rows by somebody who computes as this model says, and whether it accounts for all of them;
    /// `None` where there are none among those kept.
    pub(super) fn look_alone(&self, store: &Store, model: &Model) -> Option<(Option<Explanation>, bool)> {
        let own = store.results.get(self.target.channel)?;
        let theirs = store.theirs.get(self.delivered)?;
        let alone: Vec<usize> = own
            .iter()
            .zip(theirs)
            .enumerate()
            .filter(|(_, (own, theirs))| !own.is_finite() && theirs.is_finite())
            .map(|(i, _)| i)
            .collect();
        if alone.is_empty() {
            return None;
        }
        let at: Vec<Option<usize>> = alone.iter().map(|i| Some(*i)).collect();
        let mut open = model.clone();
        // end codes are codes like any others to somebody who does not know them
        super::mistake::before(&mut open, &mut |b, c, supply| {
            c.converter.is_some() && super::mistake::own_codes(b, c, supply, Codes::AsTheyAre)
        });
        let parts = open.gather(self.measurement, store, &at);
        let read = |row: usize| {
            parts.iter().all(|p| p.readings.is_empty() || p.readings.get(row).is_some_and(|v| v.is_finite()))
        };
        let made = open.run(&parts).unwrap_or_default();
        let delivered = |i: usize| theirs.get(i).copied().unwrap_or(f64::NAN);
        let rows = |list: &[usize]| ("rows".to_string(), list.len() as f64);
        // readings that were taken and converted; all else was put there in some other way
        let left = |k: usize| alone.get(k).zip(made.get(k)).map_or(f64::NAN, |(i, made)| delivered(*i) - made);
        let converted =
            |k: &usize| read(*k) && alone.get(*k).is_some_and(|i| left(*k).abs() <= self.half(delivered(*i)));
        let (faults, gaps): (Vec<usize>, Vec<usize>) = (0..alone.len()).partition(converted);
        let mut explanations = Vec::new();
        if !faults.is_empty() {
            let residual = root_mean_square(faults.iter().map(|k| left(*k)));
            explanations.push(Explanation::of("faults-converted", rows(&faults), residual));
        }
        let mut explained = true;
        if !gaps.is_empty() {
            let places: Vec<usize> = gaps.iter().filter_map(|k| alone.get(*k).copied()).collect();
            match self.filled(store, own, &places) {
                Some((filled, residual)) => {
                    let mut e = Explanation::of("gaps-filled", rows(&gaps), residual);
                    match filled {
                        Filled::Constant(value) => e.parameters.push(("value".into(), value)),
                        Filled::Before => e.note = "with the value before".into(),
                        Filled::Line => e.note = "along a straight line".into(),
                    }
                    explanations.push(e);
                }
                None => explained = false,
            }
        }
        // both at once are one explanation
        let explanation = explanations.into_iter().reduce(|mut a: Explanation, b| {
            a.id = std::format!("{}+{}", a.id, b.id);
            a.parameters.extend(b.parameters.into_iter().map(|(name, v)| (std::format!("{name} of gaps"), v)));
            a.note = b.note;
            a.residual = a.residual.max(b.residual);
            a
        });
        Some((explanation, explained))
    }

    /// How these gaps were filled, and what that leaves.
    fn filled(&self, store: &Store, own: &[f64], places: &[usize]) -> Option<(Filled, f64)> {
        let theirs = store.theirs.get(self.delivered)?;
        let value = |i: usize| theirs.get(i).copied().unwrap_or(f64::NAN);
        // the last row with an own value before each, and the next behind it, in the same run
        let good = |i: usize| own.get(i).is_some_and(|v| v.is_finite());
        let same_run = |i: usize, j: usize| store.run.get(i) == store.run.get(j);
        let step = |last: Option<usize>, i: usize| if good(i) { Some(i) } else { last.filter(|j| same_run(i, *j)) };
        let scan = |last: &mut Option<usize>, i: usize| {
            *last = step(*last, i);
            Some(*last)
        };
        let before: Vec<Option<usize>> = (0..own.len()).scan(None, scan).collect();
        let mut behind: Vec<Option<usize>> = (0..own.len()).rev().scan(None, scan).collect();
        behind.reverse();
        let near =
            |side: &[Option<usize>], i: usize| side.get(i).copied().flatten().and_then(|j| Some((j, *own.get(j)?)));
        let first = value(*places.first()?);
        let ways: [(Filled, &dyn Fn(usize) -> f64); 3] = [
            (Filled::Constant(first), &|_| first),
            (Filled::Before, &|i| near(&before, i).map_or(f64::NAN, |(_, v)| v)),
            (Filled::Line, &|i| match (near(&before, i), near(&behind, i)) {
                (Some((from, a)), Some((to, b))) => a + (b - a) * (i - from) as f64 / (to - from) as f64,
                _ => f64::NAN,
            }),
        ];
        ways.into_iter().find_map(|(filled, made)| {
            let left: Vec<f64> = places.iter().map(|i| value(*i) - made(*i)).collect();
            let all = places.iter().zip(&left).all(|(i, d)| d.abs() <= self.half(value(*i)));
            all.then(|| (filled, root_mean_square(left.into_iter())))
        })
    }
}

//! Where a chain's results end, and what is said beyond.

use std::vec::Vec;

use crate::chain::{Inputs, Plan, Word};

/// One channel of readings: a plan with what stands beside every reading.
#[derive(Clone, Copy, Debug)]
pub(super) struct Reader<'a> {
    pub(super) plan: &'a Plan,
    pub(super) inputs: &'a Inputs,
    /// Readings are whole numbers.
    pub(super) whole: bool,
}

/// Words on one side: each edge is the first reading outward that has its word.
pub(super) type Edges = Vec<(f64, Word)>;

/// Doubles in their order, as integers.
fn place(x: f64) -> i64 {
    let bits = x.to_bits() as i64;
    if bits < 0 { i64::MIN.wrapping_sub(bits) } else { bits }
}

/// The inverse of [`place`].
fn at(place: i64) -> f64 {
    f64::from_bits((if place < 0 { i64::MIN.wrapping_sub(place) } else { place }) as u64)
}

/// Readings between which stretches of one word are looked for.
const SAMPLES: i32 = 96;

impl Reader<'_> {
    pub(super) fn word(&self, reading: f64) -> Word {
        self.plan.one(Inputs { reading, ..*self.inputs }).word
    }

    pub(super) fn value(&self, reading: f64) -> f64 {
        let outcome = self.plan.one(Inputs { reading, ..*self.inputs });
        if outcome.word == Word::Good { outcome.value } else { f64::NAN }
    }

    pub(super) fn good(&self, reading: f64) -> bool {
        self.word(reading) == Word::Good
    }

    /// The last reading from `inside` towards `outside` that has a number.
    pub(super) fn last_good(&self, inside: f64, outside: f64) -> f64 {
        self.last(inside, outside, |r| self.good(r))
    }

    /// The last reading from `inside` towards `outside` that passes, where it changes once.
    fn last(&self, inside: f64, outside: f64, passes: impl Fn(f64) -> bool) -> f64 {
        if passes(outside) {
            return outside;
        }
        if self.whole {
            let (mut good, mut bad) = (inside.round(), outside);
            while (bad - good).abs() > 1.0 {
                let middle = ((good + bad) * 0.5).trunc();
                *(if passes(middle) { &mut good } else { &mut bad }) = middle;
            }
            return good;
        }
        let (mut good, mut bad) = (place(inside), place(outside));
        while good.abs_diff(bad) > 1 {
            let middle = good.midpoint(bad);
            *(if passes(at(middle)) { &mut good } else { &mut bad }) = middle;
        }
        at(good)
    }

    /// The next reading from here towards `outside`.
    fn next(&self, here: f64, outside: f64) -> f64 {
        match (self.whole, outside > here) {
            (true, true) => here + 1.0,
            (true, false) => here - 1.0,
            (false, true) => here.next_up(),
            (false, false) => here.next_down(),
        }
    }

    /// What is said of readings from beyond `end` to `outside`: a number that the table does not give counts as out of range.
    pub(super) fn beyond(&self, end: f64, outside: f64) -> Edges {
        let said = |reading: f64| match self.word(reading) {
            Word::Good => Word::OutOfRange,
            word => word,
        };
        let mut here = self.next(end, outside);
        let mut edges = std::vec![(here, said(here))];
        // evenly over the readings, and evenly over their exponents
        let mut stops: Vec<f64> = Vec::new();
        for i in 1..=SAMPLES {
            let share = f64::from(i) / f64::from(SAMPLES);
            let even = here + (outside - here) * share;
            let (from, to) = (i128::from(place(here)), i128::from(place(outside)));
            let by_exponent = at((from + (to - from) * i128::from(i) / i128::from(SAMPLES)) as i64);
            // and near the end of the table
            let near = here + (end.abs().max(1.0) * 4.0 * share).copysign(outside - end);
            stops.extend([even, by_exponent, near].map(|x| if self.whole { x.round() } else { x }));
        }
        stops.push(outside);
        let (low, high) = (end.min(outside), end.max(outside));
        stops.retain(|x| *x == outside || (*x > low && *x < high));
        if outside > end {
            stops.sort_by(f64::total_cmp);
        } else {
            stops.sort_by(|a, b| b.total_cmp(a));
        }
        for stop in stops {
            let mut word = said(here);
            while said(stop) != word {
                let last = self.last(here, stop, |r| said(r) == word);
                here = self.next(last, outside);
                word = said(here);
                edges.push((here, word));
            }
            here = stop;
        }
        // neighbours that say the same are one
        edges.dedup_by(|next, kept| next.1 == kept.1);
        edges
    }
}

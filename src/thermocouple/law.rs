//! A reference function in pieces, and its exact inverse.

use crate::math::{Dual, MOST_STEPS, Real, exp, sqrt};

/// One piece of a reference function: E = Σ cᵢ tⁱ + a₀ exp[a₁ (t − a₂)²], E in mV, t in °C.
#[derive(Debug)]
pub(super) struct Piece {
    pub(super) low: f64,
    /// The piece owns this end, the join with the next.
    pub(super) high: f64,
    /// c₀, c₁, …, mV/°Cⁱ.
    pub(super) c: &'static [f64],
    /// a₀, a₁, a₂.
    pub(super) bell: Option<[f64; 3]>,
}

/// Most pieces of a function.
const PIECES: usize = 3;

/// Nodes from which an inverse starts.
const NODES: usize = 33;

/// The reference function of one type, reference junction at 0 °C.
#[derive(Debug)]
pub(crate) struct Function {
    pieces: &'static [Piece],
    /// Lowest and highest temperature, °C.
    pub(super) range: [f64; 2],
    /// Where the emf is lowest inside the range, °C; −∞ where it rises all over.
    pub(super) minimum: f64,
    /// Lowest temperature of the inverse, °C: the minimum, or the lowest of all.
    pub(super) floor: f64,
    /// Emf in mV at the upper end of each piece.
    tops: [f64; PIECES],
    /// Emf in mV, rising, at equal steps from `floor` to the highest temperature, without the bell (at most 0.12 mV): a start.
    nodes: [f64; NODES],
}

/// Most Newton steps after the start; tests/thermocouples.rs shows that they leave rounding alone.
const STEPS: usize = 7;
const _: () = assert!(STEPS <= MOST_STEPS);

/// Newton's steps double the digits: after one of this size, K, rounding is left.
const LAST_STEP: f64 = 1e-6;

impl Function {
    /// Worked out by the compiler alone, which is why it may index.
    #[allow(clippy::indexing_slicing, reason = "runs at compile time, for statics only")]
    pub(super) const fn new(pieces: &'static [Piece], minimum: f64) -> Self {
        let low = pieces[0].low;
        let high = pieces[pieces.len() - 1].high;
        let floor = if minimum > low { minimum } else { low };
        let mut tops = [0.0; PIECES];
        let mut p = 0;
        while p < pieces.len() {
            // the same steps as in `Piece::millivolts`, and so the same bits
            let (piece, t) = (&pieces[p], pieces[p].high);
            let mut i = piece.c.len();
            while i > 0 {
                i -= 1;
                tops[p] = tops[p] * t + piece.c[i];
            }
            if let Some([a0, a1, a2]) = piece.bell {
                let from = t - a2;
                tops[p] += a0 * exp(a1 * from * from);
            }
            p += 1;
        }
        let mut nodes = [0.0; NODES];
        let mut n = 0;
        while n < NODES {
            let t = floor + (high - floor) * (n as f64 / (NODES - 1) as f64);
            let mut p = 0;
            while p + 1 < pieces.len() && t > pieces[p].high {
                p += 1;
            }
            let mut i = pieces[p].c.len();
            while i > 0 {
                i -= 1;
                nodes[n] = nodes[n] * t + pieces[p].c[i];
            }
            n += 1;
        }
        Self { pieces, range: [low, high], minimum, floor, tops, nodes }
    }

    #[cfg(test)]
    pub(super) fn pieces(&self) -> &'static [Piece] {
        self.pieces
    }

    /// Visits the temperatures at which pieces join, °C.
    #[cfg(feature = "std")]
    pub(crate) fn joins(&self) -> impl Iterator<Item = f64> {
        self.pieces.iter().skip(1).map(|p| p.low)
    }

    /// Whether the function reaches this temperature, °C.
    #[inline(always)]
    pub(crate) fn holds(&self, celsius: f64) -> bool {
        let [low, high] = self.range;
        (celsius >= low) & (celsius <= high)
    }

    /// Emf in mV at `t` °C; outside the range the end pieces are continued.
    #[inline]
    pub(crate) fn millivolts_from_celsius<R: Real>(&self, t: R) -> R {
        let mut pieces = self.pieces.iter().skip_while(|p| t.value() > p.high);
        pieces.next().or(self.pieces.last()).map_or(R::from_f64(f64::NAN), |p| p.millivolts(t))
    }

    /// Seebeck coefficient dE/dt in mV/K at `t` °C, of the lower piece at a join.
    pub(crate) fn millivolts_per_kelvin(&self, t: f64) -> f64 {
        self.millivolts_from_celsius(Dual::variable(t)).slope
    }

    /// Temperature in °C at `mv`; the caller has checked that it lies between the emfs of `floor` and the highest
    /// temperature. The lower piece owns a join; an emf inside a gap gives the join.
    #[inline]
    pub(crate) fn celsius_from_millivolts(&self, mv: f64) -> f64 {
        self.celsius_in_steps(mv).0
    }

    /// The same with the number of Newton steps that it took.
    #[inline]
    fn celsius_in_steps(&self, mv: f64) -> (f64, usize) {
        let mut pieces = self.pieces.iter().zip(&self.tops).skip_while(|(_, top)| mv > **top).map(|(piece, _)| piece);
        let Some(piece) = pieces.next().or(self.pieces.last()) else { return (f64::NAN, 0) };
        let low = if piece.low > self.floor { piece.low } else { self.floor };
        let mut t = within(self.start(mv), low, piece.high);
        // beside a minimum the steps merely halve
        let last = if self.minimum == self.floor { 0.0 } else { LAST_STEP };
        let mut steps = 0;
        while steps < STEPS {
            steps += 1;
            let (value, slope) = piece.millivolts_and_slope(t);
            let before = t;
            t = within(t - (value - mv) / slope, low, piece.high);
            if (t - before).abs() <= last {
                break;
            }
        }
        (t, steps)
    }

    /// A first guess by straight lines between the nodes; beside a minimum by the parabola through two of them.
    #[inline]
    fn start(&self, mv: f64) -> f64 {
        let width = (self.range[1] - self.floor) / (NODES - 1) as f64;
        let left = self.nodes.partition_point(|node| mv >= *node).saturating_sub(1).min(NODES - 2);
        let node = |i: usize| self.nodes.get(i).copied().unwrap_or(f64::NAN);
        let (number, below, above) = (left as f64, node(left), node(left + 1));
        let share = (mv - below) / (above - below);
        let parabola = left == 0 && self.minimum == self.floor;
        let share = if parabola { sqrt(if share > 0.0 { share } else { 0.0 }) } else { share };
        self.floor + width * (number + share)
    }
}

/// The nearest number in `low..=high`; `f64::clamp` would bring a panic along. NaN stays.
#[inline(always)]
fn within(x: f64, low: f64, high: f64) -> f64 {
    let x = if x < low { low } else { x };
    if x > high { high } else { x }
}

impl Piece {
    #[inline]
    fn millivolts<R: Real>(&self, t: R) -> R {
        // E = c₀ + t (c₁ + t (c₂ + …))
        let mut sum = R::from_f64(0.0);
        for c in self.c.iter().rev() {
            sum = sum * t + R::from_f64(*c);
        }
        if let Some([a0, a1, a2]) = self.bell {
            let from = t - R::from_f64(a2);
            sum = sum + R::from_f64(a0) * (R::from_f64(a1) * from * from).exp();
        }
        sum
    }

    #[inline]
    fn millivolts_and_slope(&self, t: f64) -> (f64, f64) {
        let (mut sum, mut slope) = (0.0, 0.0);
        for c in self.c.iter().rev() {
            slope = slope * t + sum;
            sum = sum * t + c;
        }
        if let Some([a0, a1, a2]) = self.bell {
            let from = t - a2;
            let bell = a0 * exp(a1 * from * from);
            sum += bell;
            slope += 2.0 * a1 * from * bell;
        }
        (sum, slope)
    }
}

impl PartialEq for Function {
    /// There is one of each type.
    fn eq(&self, other: &Self) -> bool {
        core::ptr::eq(self, other)
    }
}

#[cfg(test)]
mod tests {
    extern crate std;
    use super::*;
    use crate::thermocouple::Thermocouple;

    #[test]
    fn what_the_compiler_worked_out() {
        for kind in Thermocouple::ALL {
            let f = kind.function();
            for (piece, top) in f.pieces.iter().zip(&f.tops) {
                assert_eq!(piece.millivolts(piece.high).to_bits(), top.to_bits(), "{kind:?}");
            }
            assert!(f.nodes.is_sorted(), "{kind:?}: {:?}", f.nodes);
        }
    }

    #[test]
    fn steps_of_the_inverse() {
        for kind in Thermocouple::ALL {
            let f = kind.function();
            let range = kind.millivolts_range();
            let joins = f.pieces.iter().flat_map(|p| {
                let e = p.millivolts(p.high);
                [e, e.next_up(), e.next_down()]
            });
            let dense = (0..=40_000).map(|i| range.min + (range.max - range.min) * f64::from(i) / 40_000.0);
            let ends = [range.min.next_up(), range.max.next_down()];
            let inside = |mv: &f64| (range.min..=range.max).contains(mv);
            let most = dense.chain(ends).chain(joins).filter(inside).map(|mv| f.celsius_in_steps(mv).1).max();
            std::println!("{kind:?}: {most:?} steps");
            // beside a minimum all steps are taken, elsewhere none is missing: the last one found nothing to do
            let beside = f.minimum == f.floor;
            assert!(most <= Some(if beside { STEPS } else { STEPS - 1 }), "{kind:?}: {most:?}");
        }
    }
}

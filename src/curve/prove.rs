//! The proof: how far a polynomial can be from the chain, over every reading of its piece.
//!
//! With G(x, q) = 0 where reading x and result q belong together, and p the polynomial: G(x, p(x)) = G_q(x, ξ) (p(x) − q(x))
//! for some ξ between p(x) and q(x), so |p − q| ≤ max |G(x, p(x))| / min |G_q|. Both are enclosed over stretches of readings,
//! and stretches are halved until that is tight. G(x, p(x)) is small and nearly flat: over a stretch about its middle m it is
//! g(m) + g′(m)(x − m) + ½ g″(X)(x − m)², with g″ enclosed over the whole stretch.
//!
//! G_q is enclosed over p(X) and `reach` beyond. Where the bound that comes out is within `reach`, G changes its sign between
//! p(x) − reach and p(x) + reach, so that a result lies there, and with G_q ≠ 0 just one; it is the chain's own where the plan,
//! asked for the middle, gives a result within the same reach, since the results of one stretch hang together.

use crate::chain::enclosure::Enclosure;
use crate::math::{Interval, Jet, Real};

/// A polynomial in u = (x − knot) · inverse, for readings between two ends.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Piece {
    pub(super) from: f64,
    pub(super) to: f64,
    pub(super) knot: f64,
    /// A power of two.
    pub(super) inverse: f64,
    /// As they are stored, exactly; 0 above the degree.
    pub(super) c: [f64; 4],
}

impl Piece {
    fn jet(&self, x: Jet) -> Jet {
        let u = (x - Jet::from_f64(self.knot)) * Jet::from_f64(self.inverse);
        let mut sum = Jet::from_f64(0.0);
        for c in self.c.iter().rev() {
            sum = sum * u + Jet::from_f64(*c);
        }
        sum
    }

    /// The polynomial in plain numbers.
    pub(super) fn at(&self, x: f64) -> f64 {
        let u = (x - self.knot) * self.inverse;
        self.c.iter().rev().fold(0.0, |sum, c| sum * u + c)
    }
}

/// Stretches into which a piece is halved at most.
const MOST: usize = 20_000;

/// What is asked of a proof.
pub(super) struct Claim<'a> {
    pub(super) enclosure: &'a Enclosure,
    /// The bound that must hold.
    pub(super) reach: f64,
    /// The bound from which on no stretch is halved any more, at most `reach`.
    pub(super) enough: f64,
}

impl Claim<'_> {
    /// Returns the proven bound of |p − q| over a piece; the reading about which it cannot be had where there is none.
    ///
    /// - `plan`: the result of a reading, to know the branch.
    pub(super) fn bound(&self, piece: &Piece, plan: impl Fn(f64) -> f64) -> Result<f64, f64> {
        let mut open = std::vec![(piece.from, piece.to)];
        let (mut worst, mut count) = (0.0_f64, 0);
        while let Some((a, b)) = open.pop() {
            count += 1;
            let middle = a + 0.5 * (b - a);
            let bound = self.over(piece, a, b, middle);
            if bound <= self.enough {
                let off = (plan(middle) - piece.at(middle)).abs();
                if off.is_nan() || off > self.reach {
                    return Err(middle);
                }
                worst = worst.max(bound);
                continue;
            }
            if count > MOST || middle <= a || middle >= b {
                // as narrow as it gets: still a proof where it is within reach
                if bound <= self.reach && (plan(middle) - piece.at(middle)).abs() <= self.reach {
                    worst = worst.max(bound);
                    continue;
                }
                return Err(middle);
            }
            open.push((middle, b));
            open.push((a, middle));
        }
        Ok(worst)
    }

    /// A bound of |p − q| over the readings a..=b; infinite where there is none within reach.
    fn over(&self, piece: &Piece, a: f64, b: f64, middle: f64) -> f64 {
        let all = Interval::between(a, b);
        let whole = Jet::variable(all);
        let p = piece.jet(whole);
        let near = p.value + Interval::between(-self.reach, self.reach);
        let beside = Jet::constant(all);
        let by_result = self.enclosure.gap(beside, Jet::variable(near));
        let mut slope = by_result.value.slope;
        if by_result.smooth {
            // about the middle: what a long polynomial makes of an interval is far too wide
            let centre = Interval::point(near.value());
            let there = self.enclosure.gap(beside, Jet::variable(centre)).value.slope;
            let about = there + by_result.value.bend * (near - centre);
            slope = if about.least() > slope.least() { about } else { slope };
        }
        let least = slope.least();
        if least == 0.0 {
            return f64::INFINITY;
        }
        let along = self.enclosure.gap(whole, p);
        let mut most = along.value.value.most();
        if by_result.smooth && along.smooth {
            let here = Jet::variable(Interval::point(middle));
            let at = self.enclosure.gap(here, piece.jet(here)).value;
            // how far the ends are from the middle, and its square
            let step = all - Interval::point(middle);
            let half = Interval::point(0.5);
            let second = at.value + at.slope * step + along.value.bend * step.square() * half;
            let first = at.value + along.value.slope * step;
            most = most.min(second.most()).min(first.most());
        } else {
            most = (most + self.enclosure.jump).next_up();
        }
        let bound = (most / least).next_up();
        // beyond reach nothing is known of the slope
        if bound <= self.reach { bound } else { f64::INFINITY }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::chain::{Chain, Element, Inputs, Network};
    use crate::curve::fit::Grid;
    use crate::platinum::IEC_60751;

    #[test]
    fn what_is_off_is_not_proven_whatever_the_plan_says() {
        let chain = Chain::new(Network::Resistance { leads: None }, Element::Platinum(IEC_60751));
        let enclosure = Enclosure::new(&chain, &Inputs::default(), 1.0).unwrap();
        let plan = chain.plan().unwrap();
        let value = |x: f64| plan.one(x).value;
        let piece = Grid::Double.fit(100.0, 180.0, 3, &value).unwrap();
        let seen = Grid::seen(&piece, &value);
        let claim = |reach: f64| Claim { enclosure: &enclosure, reach, enough: reach };
        // a plan that agrees with everything
        let agrees = |piece: Piece| move |x: f64| piece.at(x);
        let bound = claim(1.2 * seen).bound(&piece, agrees(piece)).unwrap();
        assert!(bound >= seen && bound <= 1.2 * seen, "{bound:e} {seen:e}");
        assert!(claim(0.99 * seen).bound(&piece, agrees(piece)).is_err());
        for (power, end) in [(0, 1.0), (1, 80.0), (2, 6_400.0), (3, 512_000.0)] {
            for sign in [1.0, -1.0] {
                let mut off = piece;
                off.c[power] += sign * 3.0 * seen / end;
                assert!(claim(1.2 * seen).bound(&off, agrees(off)).is_err(), "{power} {sign}");
            }
        }
        // and no proof for another branch, whatever G says
        assert!(claim(1.2 * seen).bound(&piece, |_| f64::NAN).is_err());
        assert!(claim(1.2 * seen).bound(&piece, |x| piece.at(x) + 1.0).is_err());
    }
}

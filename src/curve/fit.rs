//! One polynomial over a stretch of readings, in the numbers of a table.

use super::prove::Piece;

/// The numbers of a table.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Grid {
    Double,
    Single,
    Fixed { reading_bits: i32, result_bits: i32 },
}

/// Half a unit in the last place of doubles and of single precision, relative.
const DOUBLE: f64 = f64::EPSILON / 2.0;
const SINGLE: f64 = f32::EPSILON as f64 / 2.0;

/// Below these results lose digits, or become 0 on processors that flush them, and then less than this.
const TINY_DOUBLE: f64 = f64::MIN_POSITIVE;
const TINY_SINGLE: f64 = f32::MIN_POSITIVE as f64;

/// What sums of positive bounds are multiplied by, for their own rounding.
const UPWARD: f64 = 1.0 + 1e-12;

/// 2 to a power, exactly; −1022..=1023.
pub(super) fn power(exponent: i32) -> f64 {
    f64::from_bits(((exponent.clamp(-1022, 1023) + 1023) as u64) << 52)
}

/// Places where a polynomial of each degree passes through the chain, as shares of the stretch from −1 to 1: the zeros of
/// Chebyshev's polynomials.
const NODES: [&[f64]; 3] = [
    &[-core::f64::consts::FRAC_1_SQRT_2, core::f64::consts::FRAC_1_SQRT_2],
    &[-0.866_025_403_784_438_6, 0.0, 0.866_025_403_784_438_6],
    &[-0.923_879_532_511_286_7, -0.382_683_432_365_089_8, 0.382_683_432_365_089_8, 0.923_879_532_511_286_7],
];

/// Places at which a fit is looked at, besides its ends.
const LOOKS: i32 = 32;

impl Grid {
    /// The number of the grid at or below a reading.
    pub(super) fn below(self, x: f64) -> f64 {
        match self {
            Self::Double => x,
            Self::Single => {
                let near = x as f32;
                f64::from(if f64::from(near) > x { near.next_down() } else { near })
            }
            Self::Fixed { reading_bits, .. } => floor(x * power(reading_bits)) * power(-reading_bits),
        }
    }

    /// The number of the grid at or above a reading.
    pub(super) fn above(self, x: f64) -> f64 {
        -self.below(-x)
    }

    /// The next number of the grid.
    pub(super) fn next(self, x: f64) -> f64 {
        match self {
            Self::Double => x.next_up(),
            Self::Single => f64::from((x as f32).next_up()),
            Self::Fixed { reading_bits, .. } => x + power(-reading_bits),
        }
    }

    /// Width of a piece of the fixed grid as a power of two of its steps.
    pub(super) fn shift(self, from: f64, to: f64) -> u8 {
        match self {
            Self::Fixed { reading_bits, .. } => {
                let steps = (to - from) * power(reading_bits);
                (0..=31).find(|s| steps <= power(*s)).unwrap_or(31) as u8
            }
            _ => 0,
        }
    }

    /// The polynomial of this degree over a stretch, in stored coefficients; `None` where they cannot be stored.
    pub(super) fn fit(self, from: f64, to: f64, degree: usize, value: &impl Fn(f64) -> f64) -> Option<Piece> {
        let nodes = NODES.get(degree.checked_sub(1)?)?;
        let width = to - from;
        let mut u = [0.0; 4];
        let mut c = [0.0; 4];
        for ((u, c), node) in u.iter_mut().zip(&mut c).zip(*nodes) {
            *u = 0.5 + 0.5 * node;
            *c = value(from + width * *u);
        }
        // Newton's divided differences
        for k in 1..=degree {
            let mut before = *c.get(k - 1)?;
            for i in k..=degree {
                let here = *c.get(i)?;
                *c.get_mut(i)? = (here - before) / (*u.get(i)? - *u.get(i - k)?);
                before = here;
            }
        }
        // to powers of u, from the innermost factor out
        for k in (0..degree).rev() {
            for j in k..degree {
                let next = *c.get(j + 1)?;
                *c.get_mut(j)? -= next * *u.get(k)?;
            }
        }
        let shift = i32::from(self.shift(from, to));
        let (inverse, ratio) = match self {
            Self::Fixed { reading_bits, .. } if shift <= 30 => {
                (power(reading_bits - shift), power(shift - reading_bits) / width)
            }
            Self::Fixed { .. } => return None,
            _ => (1.0, 1.0 / width),
        };
        let mut scale = 1.0;
        for c in &mut c {
            *c = self.stored(*c * scale)?;
            scale *= ratio;
        }
        if let Self::Fixed { result_bits, .. } = self {
            let sum = c.iter().fold(0.0, |sum, c| sum + c.abs()) * power(result_bits);
            if sum >= f64::from(i32::MAX) {
                return None;
            }
        }
        Some(Piece { from, to, knot: from, inverse, c })
    }

    /// The nearest coefficient that can be stored.
    fn stored(self, c: f64) -> Option<f64> {
        let near = match self {
            Self::Double => c,
            // what a processor may take for 0 is stored as 0
            Self::Single if c.abs() < TINY_SINGLE => 0.0,
            Self::Single => f64::from(c as f32),
            Self::Fixed { result_bits, .. } => floor(c * power(result_bits) + 0.5) * power(-result_bits),
        };
        near.is_finite().then_some(near)
    }

    /// The largest error that is seen; NaN where the chain has no result.
    pub(super) fn seen(piece: &Piece, value: &impl Fn(f64) -> f64) -> f64 {
        let off = |x: f64| (piece.at(x) - value(x)).abs();
        let mut worst = off(piece.from);
        for i in 1..=LOOKS {
            let x = piece.from + (piece.to - piece.from) * f64::from(i) / f64::from(LOOKS);
            let here = off(x.min(piece.to));
            // NaN stays
            worst = if worst.is_nan() || here <= worst { worst } else { here };
        }
        worst
    }

    /// A bound of what rounding does to the evaluation of a piece, over all its readings.
    pub(super) fn rounding(self, piece: &Piece, degree: usize) -> f64 {
        let (unit, tiny) = match self {
            Self::Double => (DOUBLE, TINY_DOUBLE),
            Self::Single => (SINGLE, TINY_SINGLE),
            // every product is off by half a unit, and what comes before is multiplied by at most 1
            Self::Fixed { result_bits, .. } => return 0.5 * degree as f64 * power(-result_bits),
        };
        // the step t is off by `unit` of itself; a product and a sum add their own
        let t = (piece.to - piece.from) * (1.0 + 2.0 * unit);
        let mut coefficients = piece.c.iter().take(degree + 1).rev();
        let mut most = coefficients.next().map_or(0.0, |c| c.abs());
        let mut error = 0.0;
        for c in coefficients {
            let product = (most + error) * t;
            let exact = c.abs() + product;
            error = (error * t + product * 2.01 * unit + 2.0 * tiny + (exact + error * t) * 1.01 * unit) * UPWARD;
            most = exact * UPWARD;
        }
        error
    }
}

/// The whole number at or below; numbers without fraction stay.
fn floor(x: f64) -> f64 {
    libm::floor(x)
}

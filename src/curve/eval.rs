//! Tables as they run: a search and a few multiplications. The same arithmetic as the generated C and Rust, bit for bit.

use crate::chain::Word;

/// Beyond the ends of a table: from which reading outward which word holds.
///
/// In order from the table outward; a reading between the table and the first edge counts to the first.
pub type Edges<'a, T> = &'a [(T, Word)];

macro_rules! floating {
    ($(#[$doc:meta])* $name:ident, $t:ty) => {
        $(#[$doc])*
        #[derive(Clone, Copy, Debug, PartialEq)]
        pub struct $name<'a> {
            /// Where pieces begin, and where the last one ends: rising.
            pub knots: &'a [$t],
            /// `degree` + 1 coefficients of each piece, lowest power first.
            pub coefficients: &'a [$t],
            /// Highest power, 1..=3.
            pub degree: usize,
            /// Words of readings below the first knot.
            pub below: Edges<'a, $t>,
            /// Words of readings above the last knot.
            pub above: Edges<'a, $t>,
        }

        impl $name<'_> {
            /// Returns the result of a reading.
            ///
            /// With x the reading and k the knot at or below it: t = x − k, then c₀ + t (c₁ + t (c₂ + t c₃)) from the
            /// inside out, every step rounded.
            ///
            /// # Errors
            /// The word where there is no number: `missing` for NaN, what the edges say beyond the ends, and `unreadable` for
            /// a table whose parts do not belong together.
            #[inline]
            pub fn value(&self, reading: $t) -> Result<$t, Word> {
                if reading.is_nan() {
                    return Err(Word::Missing);
                }
                let (Some(first), Some(last)) = (self.knots.first(), self.knots.last()) else {
                    return Err(Word::Unreadable);
                };
                if reading < *first {
                    return Err(word(self.below, |edge| reading <= edge));
                }
                if reading > *last {
                    return Err(word(self.above, |edge| reading >= edge));
                }
                let piece = piece(self.knots, reading);
                let knot = self.knots.get(piece).copied().unwrap_or(<$t>::NAN);
                let t = reading - knot;
                let count = self.degree.saturating_add(1);
                let row = self.coefficients.get(piece.saturating_mul(count)..).and_then(|rest| rest.get(..count));
                let Some((top, rest)) = row.and_then(<[$t]>::split_last) else { return Err(Word::Unreadable) };
                let mut sum = *top;
                for c in rest.iter().rev() {
                    sum = sum * t + *c;
                }
                Ok(sum)
            }
        }
    };
}

floating!(
    /// A table in doubles.
    Double,
    f64
);
floating!(
    /// A table in single precision.
    Single,
    f32
);

/// A table in 32-bit integers.
///
/// A reading is x · 2^−`reading_bits`, a result y · 2^−`result_bits`. With k the knot at or below x and w the width of its
/// piece as a power of two (`shifts`): u = (x − k) · 2^(30 − w), and then c₀ + u (c₁ + u (c₂ + u c₃)) from the inside out,
/// where every product of 64 bits is divided by 2³⁰ and rounded to nearest, the upper of two.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Fixed<'a> {
    /// Where pieces begin, and where the last one ends: rising, all within ±2³⁰.
    pub knots: &'a [i32],
    /// `degree` + 1 coefficients of each piece, lowest power first.
    pub coefficients: &'a [i32],
    /// Width of each piece as a power of two, at most 30: no reading of the piece is further from its knot.
    pub shifts: &'a [u8],
    /// Highest power, 1..=3.
    pub degree: usize,
    /// Words of readings below the first knot.
    pub below: Edges<'a, i32>,
    /// Words of readings above the last knot.
    pub above: Edges<'a, i32>,
}

impl Fixed<'_> {
    /// Returns the result of a reading, both as integers.
    ///
    /// # Errors
    /// The word where there is no number: what the edges say beyond the ends, and `unreadable` for a table whose parts do not
    /// belong together.
    #[inline]
    pub fn value(&self, reading: i32) -> Result<i32, Word> {
        let (Some(first), Some(last)) = (self.knots.first(), self.knots.last()) else {
            return Err(Word::Unreadable);
        };
        if reading < *first {
            return Err(word(self.below, |edge| reading <= edge));
        }
        if reading > *last {
            return Err(word(self.above, |edge| reading >= edge));
        }
        let piece = piece(self.knots, reading);
        let count = self.degree.saturating_add(1);
        let row = self.coefficients.get(piece.saturating_mul(count)..).and_then(|rest| rest.get(..count));
        let (Some(knot), Some(shift), Some((top, rest))) =
            (self.knots.get(piece), self.shifts.get(piece), row.and_then(<[i32]>::split_last))
        else {
            return Err(Word::Unreadable);
        };
        let u = (i64::from(reading) - i64::from(*knot)).wrapping_shl(30 - u32::from((*shift).min(30)));
        let mut sum = i64::from(*top);
        for c in rest.iter().rev() {
            sum = i64::from(*c) + shifted(sum.wrapping_mul(u));
        }
        // proven to fit where the table was built; never anything that looks like a result but is none
        Ok(sum.clamp(-i64::from(i32::MAX), i64::from(i32::MAX)) as i32)
    }
}

/// v · 2⁻³⁰ to the nearest integer, the upper of two.
#[inline]
const fn shifted(v: i64) -> i64 {
    const HALF: i64 = 1 << 29;
    v.wrapping_add(HALF) >> 30
}

/// The word of the last edge that the reading has passed; the first where it has passed none.
#[inline]
fn word<T: Copy>(edges: Edges<'_, T>, passed: impl Fn(T) -> bool) -> Word {
    let mut found = edges.first().map_or(Word::OutOfRange, |(_, word)| *word);
    for (edge, word) in edges {
        if passed(*edge) {
            found = *word;
        }
    }
    found
}

/// The piece that holds a reading between the ends; the last one owns the last knot.
#[inline]
fn piece<T: PartialOrd + Copy>(knots: &[T], reading: T) -> usize {
    let (mut low, mut high) = (0, knots.len().saturating_sub(1));
    while high.saturating_sub(low) > 1 {
        let middle = (low + high) >> 1;
        if knots.get(middle).is_some_and(|knot| reading >= *knot) { low = middle } else { high = middle }
    }
    low
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn products_round_to_nearest_and_upwards_between_two() {
        let one = 1_i64 << 30;
        assert_eq!(shifted(5 * one), 5);
        assert_eq!(shifted(5 * one + one / 2), 6);
        assert_eq!(shifted(-5 * one - one / 2), -5);
        assert_eq!(shifted(-5 * one - one / 2 - 1), -6);
    }

    #[test]
    fn words_follow_the_edges_outward() {
        let knots = [0.0, 1.0, 2.0];
        let coefficients = [0.0, 1.0, 1.0, 2.0];
        let below = [(-0.5, Word::OutOfRange), (-3.0, Word::Short), (-9.0, Word::Saturated)];
        let table = Double { knots: &knots, coefficients: &coefficients, degree: 1, below: &below, above: &[] };
        assert_eq!(table.value(0.5), Ok(0.5));
        assert_eq!(table.value(2.0), Ok(3.0));
        for (reading, word) in [
            (-0.1, Word::OutOfRange),
            (-2.9, Word::OutOfRange),
            (-3.0, Word::Short),
            (-9.0, Word::Saturated),
            (f64::NEG_INFINITY, Word::Saturated),
            (2.1, Word::OutOfRange),
            (f64::NAN, Word::Missing),
        ] {
            assert_eq!(table.value(reading), Err(word), "{reading}");
        }
    }

    #[test]
    fn parts_that_do_not_belong_together_are_no_result() {
        let table = Single { knots: &[0.0, 1.0], coefficients: &[1.0], degree: 3, below: &[], above: &[] };
        assert_eq!(table.value(0.5), Err(Word::Unreadable));
        let table = Fixed { knots: &[0, 9], coefficients: &[1], shifts: &[], degree: 1, below: &[], above: &[] };
        assert_eq!(table.value(5), Err(Word::Unreadable));
        assert_eq!(Fixed { knots: &[], ..table }.value(5), Err(Word::Unreadable));
    }
}

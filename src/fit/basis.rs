//! The functions that a curve is a sum of, in a form that keeps their coefficients apart.

use std::vec::Vec;

use crate::math::{Double, Real, substitute};

/// Highest power of a polynomial.
pub(super) const HIGHEST: usize = 6;

/// Functions φₖ(x) of a curve Σ cₖ φₖ(x).
#[derive(Clone, Debug, PartialEq)]
pub(super) enum Basis {
    /// zᵏ with z = (x − centre)/half, k from `from` to `to`; the coefficients that are published are those of (x − about)ᵏ.
    Powers { from: usize, to: usize, centre: f64, half: f64, about: f64 },
    /// 1, L, L³.
    SteinhartHart,
    /// 1 (unless held), t, t², and below 0 °C (t − 100) t³, with t in hundreds of °C.
    Platinum { constant: bool, fourth: bool },
    /// The terms of an ITS-90 deviation function: (W − 1)ⁱ for i in `powers`, (W − 1) ln W, (ln W)ⁱ for i in `logs`, and above
    /// the ratio at the freezing point of aluminium the square of the distance from it.
    Deviation { powers: &'static [u8], product: bool, logs: &'static [u8], above: Option<f64> },
}

fn power<R: Real>(x: R, exponent: u8) -> R {
    (0..exponent).fold(R::from_f64(1.0), |p, _| p * x)
}

impl Basis {
    /// A polynomial that covers these values of x.
    pub(super) fn powers(x: &[f64], from: usize, to: usize, about: f64) -> Self {
        let low = x.iter().copied().fold(f64::INFINITY, f64::min);
        let high = x.iter().copied().fold(f64::NEG_INFINITY, f64::max);
        // a polynomial without its constant must keep its zero where it is
        let centre = if from == 0 { 0.5 * (low + high) } else { about };
        let half = (high - centre).abs().max((low - centre).abs());
        Self::Powers { from, to, centre, half: if half > 0.0 { half } else { 1.0 }, about }
    }

    /// Number of functions.
    pub(super) fn len(&self) -> usize {
        match self {
            Self::Powers { from, to, .. } => to + 1 - from,
            Self::SteinhartHart => 3,
            Self::Platinum { constant, fourth } => 2 + usize::from(*constant) + usize::from(*fourth),
            Self::Deviation { powers, product, logs, above } => {
                powers.len() + usize::from(*product) + logs.len() + usize::from(above.is_some())
            }
        }
    }

    /// φₖ(x), k in order.
    pub(super) fn row<R: Real>(&self, x: R) -> Vec<R> {
        let one = R::from_f64(1.0);
        let mut row = Vec::with_capacity(self.len());
        match self {
            Self::Powers { from, to, centre, half, .. } => {
                let z = (x - R::from_f64(*centre)) / R::from_f64(*half);
                let mut p = one;
                for k in 0..=*to {
                    if k >= *from {
                        row.push(p);
                    }
                    p = p * z;
                }
            }
            Self::SteinhartHart => row.extend([one, x, x * x * x]),
            Self::Platinum { constant, fourth } => {
                let t = x / R::from_f64(100.0);
                if *constant {
                    row.push(one);
                }
                row.extend([t, t * t]);
                if *fourth {
                    row.push(if x.value() < 0.0 { (t - one) * t * t * t } else { R::from_f64(0.0) });
                }
            }
            Self::Deviation { powers, product, logs, above } => {
                let (off, log) = (x - one, x.ln());
                row.extend(powers.iter().map(|i| power(off, *i)));
                if *product {
                    row.push(off * log);
                }
                row.extend(logs.iter().map(|i| power(log, *i)));
                if let Some(aluminium) = above {
                    let above = x - R::from_f64(*aluminium);
                    row.push(if above.value() > 0.0 { above * above } else { R::from_f64(0.0) });
                }
            }
        }
        row
    }

    /// Rows of the matrix that turns coefficients of φₖ into published ones.
    pub(super) fn published(&self) -> Vec<Vec<Double>> {
        let n = self.len();
        let unit = |i: usize, value: Double| -> Vec<Double> {
            (0..n).map(|k| if k == i { value } else { Double::from_f64(0.0) }).collect()
        };
        let one = Double::from_f64(1.0);
        match self {
            Self::Powers { from, to, centre, half, about } => {
                // zᵏ = ((about − centre) + u)ᵏ/halfᵏ with u = x − about
                let half = Double::from_f64(*half);
                let shift = (Double::from_f64(*about) - Double::from_f64(*centre)) / half;
                let columns: Vec<[Double; HIGHEST + 1]> = (*from..=*to)
                    .map(|k| {
                        let mut p = [Double::from_f64(0.0); HIGHEST + 1];
                        if let Some(slot) = p.get_mut(k) {
                            *slot = one;
                        }
                        substitute(&p, shift, one / half)
                    })
                    .collect();
                let element = |column: &[Double; HIGHEST + 1], i: usize| column.get(i).copied();
                (*from..=*to).map(|i| columns.iter().filter_map(|c| element(c, i)).collect()).collect()
            }
            Self::Platinum { constant, fourth } => {
                let first = usize::from(*constant);
                let mut rows = Vec::with_capacity(n);
                if *constant {
                    rows.push(unit(0, one));
                }
                let hundredths = |power: i8| Double::power_of_ten(-2 * power);
                rows.extend([unit(first, hundredths(1)), unit(first + 1, hundredths(2))]);
                if *fourth {
                    rows.push(unit(first + 2, hundredths(4)));
                }
                rows
            }
            Self::SteinhartHart | Self::Deviation { .. } => (0..n).map(|i| unit(i, one)).collect(),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn published_powers_are_those_about_the_stated_place() {
        // 3 + 2 z + z² with z = (x − 5)/2 about x = 1, u = x − 1: z = u/2 − 2: 3 − 4 + u + u²/4 − 2u + 4 = 3 − u + u²/4
        let basis = Basis::Powers { from: 0, to: 2, centre: 5.0, half: 2.0, about: 1.0 };
        let got: Vec<f64> = basis
            .published()
            .iter()
            .map(|row| row.iter().zip([3.0, 2.0, 1.0]).map(|(p, c)| p.value() * c).sum())
            .collect();
        assert_eq!(got, [3.0, -1.0, 0.25]);
        assert_eq!(basis.row(9.0), [1.0, 2.0, 4.0]);
    }

    #[test]
    fn platinum_in_hundreds() {
        let basis = Basis::Platinum { constant: true, fourth: true };
        assert_eq!(basis.row(-200.0), [1.0, -2.0, 4.0, 24.0]);
        assert_eq!(basis.row(200.0), [1.0, 2.0, 4.0, 0.0]);
        let diagonal: Vec<f64> = basis.published().iter().enumerate().map(|(i, row)| row[i].value()).collect();
        for (got, want) in diagonal.iter().zip([1.0, 1e-2, 1e-4, 1e-8]) {
            assert!((got - want).abs() <= 1e-16 * want);
        }
    }
}

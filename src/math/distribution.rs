//! The normal distribution and Student's t: probabilities and quantiles.
//!
//! Relative error below 1e-10 against 50-digit arithmetic, in the tails too (tests/distribution.rs). What falls below the
//! smallest double is 0, what exceeds the largest is ±∞.
//!
//! ```
//! use ohmwright::distribution::{normal_quantile, student_quantile};
//!
//! // JCGM 100:2008, Table G.2: k = 2.26 for 95 % and 9 degrees of freedom, 1.960 for infinitely many
//! let two_sided = |p: f64| (1.0 + p) / 2.0;
//! assert!((student_quantile(two_sided(0.95), 9.0) - 2.26).abs() < 0.005);
//! assert!((student_quantile(two_sided(0.95), f64::INFINITY) - 1.960).abs() < 0.0005);
//! assert!(normal_quantile(1.5).is_nan());
//! ```

use super::{exp, ln, sqrt};

/// From this many degrees of freedom the expansion about the normal distribution is right to more than 1e-15.
const NEARLY_NORMAL: f64 = 2e4;

/// Steps allowed to a continued fraction: twice of what [`NEARLY_NORMAL`] degrees of freedom need.
const TERMS: usize = 500;

/// Newton steps allowed to a quantile; about six are needed.
const STEPS: usize = 40;

/// Returns the probability that a standard normal variable is at most `z`.
///
/// `Φ(z) = ½ erfc(−z/√2)`; 0 and 1 at −∞ and ∞, NaN for NaN.
///
/// # Source
/// NIST/SEMATECH e-Handbook of Statistical Methods, 1.3.6.6.1.
#[must_use]
pub fn normal_probability(z: f64) -> f64 {
    0.5 * libm::erfc(-z * core::f64::consts::FRAC_1_SQRT_2)
}

/// Returns the value that a standard normal variable stays below with this probability.
///
/// The inverse of [`normal_probability`]; −∞ and ∞ at 0 and 1, NaN outside `0..=1`. An upper tail keeps more digits when
/// it is asked for as the lower one with the sign changed.
///
/// - `probability`: plain number, `0..=1`.
#[must_use]
pub fn normal_quantile(probability: f64) -> f64 {
    both_sides(probability, normal_upper)
}

/// Returns the density of Student's t at `t`.
///
/// `f(t) = Γ((ν + 1)/2) / (√(ν π) Γ(ν/2)) (1 + t²/ν)^(−(ν + 1)/2)`; the normal density for ν = ∞, NaN for ν ≤ 0.
#[must_use]
pub fn student_density(t: f64, degrees_of_freedom: f64) -> f64 {
    let nu = degrees_of_freedom;
    if nu.is_nan() || nu <= 0.0 {
        return f64::NAN;
    }
    if nu == f64::INFINITY {
        return normal_density(t);
    }
    exp(log_density(t, nu))
}

/// ln f(t) of Student's t.
fn log_density(t: f64, nu: f64) -> f64 {
    ln(peak(nu)) - 0.5 * (nu + 1.0) * log_one_plus_square(t, nu)
}

/// Returns the probability that a variable of Student's t distribution is at most `t`.
///
/// `1 − ½ I_x(ν/2, ½)` with `x = ν/(ν + t²)` for t ≥ 0, I the regularised incomplete beta function.
///
/// - `t`: plain number.
/// - `degrees_of_freedom`: ν above 0, any real number; ∞ gives the normal distribution.
/// - Returns a plain number in `0..=1`; NaN for NaN or ν ≤ 0.
///
/// # Source
/// NIST/SEMATECH e-Handbook of Statistical Methods, 1.3.6.6.4; the continued fraction is that of W. J. Lentz for I_x.
/// From 2·10⁴ degrees of freedom on: G. W. Hill, Commun. ACM 13 (1970) 617 (algorithm 395).
#[must_use]
pub fn student_probability(t: f64, degrees_of_freedom: f64) -> f64 {
    let nu = degrees_of_freedom;
    if t.is_nan() || nu.is_nan() || nu <= 0.0 {
        return f64::NAN;
    }
    let upper = student_upper_tail(t.abs(), nu);
    if t < 0.0 { upper } else { 1.0 - upper }
}

/// Returns the value that a variable of Student's t distribution stays below with this probability.
///
/// The inverse of [`student_probability`]. For a two-sided interval of coverage probability p ask for (1 + p)/2.
///
/// - `probability`: plain number, `0..=1`.
/// - `degrees_of_freedom`: ν above 0, any real number; ∞ gives the normal distribution.
/// - Returns a plain number; −∞ and ∞ at 0 and 1, NaN outside `0..=1` and for ν ≤ 0.
///
/// # Source
/// Checked with JCGM 100:2008, Table G.2, and the table of NIST/SEMATECH e-Handbook 1.3.6.7.2 (tests/distribution.rs).
#[must_use]
pub fn student_quantile(probability: f64, degrees_of_freedom: f64) -> f64 {
    let nu = degrees_of_freedom;
    if nu.is_nan() || nu <= 0.0 {
        return f64::NAN;
    }
    if nu == f64::INFINITY {
        return normal_quantile(probability);
    }
    both_sides(probability, |side| student_upper(side, nu))
}

/// How a side of a symmetric distribution is asked for, both for values at and above 0.
#[derive(Clone, Copy)]
enum Side {
    /// The probability above the value, at most ¼.
    Above(f64),
    /// The probability between −value and value, below ½.
    Within(f64),
}

/// A quantile from the one of the upper half.
fn both_sides(probability: f64, upper: impl Fn(Side) -> f64) -> f64 {
    let p = probability;
    if !(0.0..=1.0).contains(&p) {
        return f64::NAN;
    }
    // 1 − p and p − ½ are exact wherever they are used
    let tail = if p < 0.5 { p } else { 1.0 - p };
    if tail == 0.0 {
        return if p < 0.5 { f64::NEG_INFINITY } else { f64::INFINITY };
    }
    let value = if tail <= 0.25 { upper(Side::Above(tail)) } else { upper(Side::Within(2.0 * (p - 0.5).abs())) };
    if p < 0.5 { -value } else { value }
}

fn normal_density(z: f64) -> f64 {
    exp(-0.5 * z * z) * 0.398_942_280_401_432_7
}

fn normal_upper(side: Side) -> f64 {
    match side {
        Side::Within(p) => {
            // P(|z| ≤ x) = erf(x/√2) is concave: from the tangent at 0 Newton's method climbs to the root
            let mut x = p / (2.0 * normal_density(0.0));
            for _ in 0..STEPS {
                let step = (p - libm::erf(x * core::f64::consts::FRAC_1_SQRT_2)) / (2.0 * normal_density(x));
                x += step;
                if step.abs() <= 1e-15 * x {
                    break;
                }
            }
            x
        }
        Side::Above(tail) => {
            // ln Q(x) ≈ −x²/2: a start, then Newton's method on the logarithm, which is concave
            let log = ln(tail);
            let mut x = sqrt((-2.0 * log - ln(-4.0 * log)).max(0.4));
            for _ in 0..STEPS {
                let above = normal_probability(-x);
                let hazard = normal_density(x) / above;
                if !(hazard.is_finite() && hazard > 0.0) {
                    break;
                }
                let step = (ln(above) - log) / hazard;
                x += step;
                if step.abs() <= 1e-15 * x {
                    break;
                }
            }
            x
        }
    }
}

/// Γ((ν + 1)/2) / (√(ν π) Γ(ν/2)): the density at 0.
fn peak(nu: f64) -> f64 {
    // Γ(a + ½)/Γ(a) = √a (1 − 1/(8a) + 1/(128a²) + 5/(1024a³) − 21/(32768a⁴) − 399/(262144a⁵) + 869/(4194304a⁶) + 39325/(33554432a⁷) − …);
    // below a = 40 by Γ(a + ½)/Γ(a) = a/(a + ½) · Γ(a + 3/2)/Γ(a + 1)
    let (mut a, mut product) = (0.5 * nu, 1.0);
    while a < 40.0 {
        product *= a / (a + 0.5);
        a += 1.0;
    }
    let r = 1.0 / a;
    let series = 1.0
        + r * (-1.0 / 8.0
            + r * (1.0 / 128.0
                + r * (5.0 / 1024.0
                    + r * (-21.0 / 32768.0
                        + r * (-399.0 / 262_144.0 + r * (869.0 / 4_194_304.0 + r * 39_325.0 / 33_554_432.0))))));
    product * series * sqrt(a / (nu * core::f64::consts::PI))
}

/// ln(1 + t²/ν).
fn log_one_plus_square(t: f64, nu: f64) -> f64 {
    let r = t.abs() / sqrt(nu);
    if r > 1e9 { 2.0 * ln(r) } else { libm::log1p(t * t / nu) }
}

/// P(T > t) for t ≥ 0.
fn student_upper_tail(t: f64, nu: f64) -> f64 {
    if t == f64::INFINITY {
        return 0.0;
    }
    if nu == f64::INFINITY {
        return normal_probability(-t);
    }
    if nu >= NEARLY_NORMAL {
        return normal_probability(-normal_equivalent(t, nu));
    }
    let (tail, within) = student_parts(t, nu);
    tail.unwrap_or(0.5 - 0.5 * within)
}

/// P(T > t) where it is the smaller part, and P(|T| ≤ t), for t ≥ 0.
fn student_parts(t: f64, nu: f64) -> (Option<f64>, f64) {
    let a = 0.5 * nu;
    let square = t * t / nu;
    let x = 1.0 / (1.0 + square);
    // x^a (1 − x)^½ / B(a, ½) = t f(t) · x^(a + ½) … written with the density: B(a, ½) = 1/(√ν f(0))
    let front = sqrt(nu)
        * peak(nu)
        * exp(-a * log_one_plus_square(t, nu))
        * (if square > 1e18 { 1.0 } else { sqrt(square * x) });
    if x < (a + 1.0) / (a + 2.5) {
        let tail = 0.5 * front * fraction(a, 0.5, x) / a;
        (Some(tail), 1.0 - 2.0 * tail)
    } else {
        (None, front * fraction(0.5, a, square * x) / 0.5)
    }
}

/// The continued fraction of I_x(a, b) = x^a (1 − x)^b / (a B(a, b)) · fraction, by Lentz's method.
fn fraction(a: f64, b: f64, x: f64) -> f64 {
    const TINY: f64 = 1e-300;
    let guard = |v: f64| if v.abs() < TINY { TINY } else { v };
    let mut c = 1.0;
    let mut d = 1.0 / guard(1.0 - (a + b) * x / (a + 1.0));
    let mut h = d;
    let mut m = 0.0;
    for _ in 0..TERMS {
        m += 1.0;
        let even = m * (b - m) * x / ((a + 2.0 * m - 1.0) * (a + 2.0 * m));
        d = 1.0 / guard(1.0 + even * d);
        c = guard(1.0 + even / c);
        h *= d * c;
        let odd = -(a + m) * (a + b + m) * x / ((a + 2.0 * m) * (a + 2.0 * m + 1.0));
        d = 1.0 / guard(1.0 + odd * d);
        c = guard(1.0 + odd / c);
        let factor = d * c;
        h *= factor;
        if (factor - 1.0).abs() <= 1e-16 {
            break;
        }
    }
    h
}

/// The standard normal value with the same tail, for many degrees of freedom (Hill's expansion).
fn normal_equivalent(t: f64, nu: f64) -> f64 {
    let a = nu - 0.5;
    let b = 48.0 * a * a;
    let y = a * log_one_plus_square(t, nu);
    let correction = (((-0.4 * y - 3.3) * y - 24.0) * y - 85.5) / (0.8 * y * y + 100.0 + b);
    ((correction + y + 3.0) / b + 1.0) * sqrt(y)
}

fn student_upper(side: Side, nu: f64) -> f64 {
    match side {
        Side::Within(p) => {
            // P(|T| ≤ t) is concave: from the tangent at 0 Newton's method climbs to the root
            let mut t = p / (2.0 * peak(nu));
            for _ in 0..STEPS {
                let within = if nu >= NEARLY_NORMAL {
                    libm::erf(normal_equivalent(t, nu) * core::f64::consts::FRAC_1_SQRT_2)
                } else {
                    student_parts(t, nu).1
                };
                let step = (p - within) / (2.0 * student_density(t, nu));
                t += step;
                if !step.is_finite() || step.abs() <= 1e-15 * t {
                    break;
                }
            }
            t
        }
        Side::Above(tail) => {
            // in s = ln t the logarithm of the tail is concave, from level to the straight line −ν s; the start is
            // ν ln(1 + t²/ν) = z² with the normal quantile z
            let log = ln(tail);
            let z = normal_upper(side);
            let y = z * z / nu;
            let mut s = 0.5 * (ln(nu) + y + ln(-libm::expm1(-y)));
            for _ in 0..STEPS {
                let t = exp(s);
                let above = student_upper_tail(t, nu);
                let slope = exp(s + log_density(t, nu) - ln(above));
                if !(slope.is_finite() && slope > 0.0) {
                    break;
                }
                let step = (ln(above) - log) / slope;
                s += step;
                if step.abs() <= 1e-15 * s.abs().max(1.0) {
                    break;
                }
            }
            exp(s)
        }
    }
}

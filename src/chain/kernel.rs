//! One loop body per stage. Scalar and slice call the same functions; none has a branch.

use super::plan::{BLOCK, Columns, Front, Law, Plan, Span, Tail};
use super::polynomial::{Arms, near_root, newton, residual};
use crate::math::horner;
use crate::{platinum, thermistor};

/// The reading as the front takes it; NaN where it is not believed.
#[inline(always)]
pub(super) fn enter(plan: &Plan, reading: f64, supply: f64) -> f64 {
    let believed = if plan.raw_holds(reading) { reading } else { f64::NAN };
    if plan.divides_by_supply {
        // an infinite supply would make every reading look like no signal
        mask_by(supply.abs() <= f64::MAX, (believed + plan.reading_offset) / supply)
    } else {
        believed
    }
}

/// u with y = (n₀ + n₁ u)/(d₀ + d₁ u).
#[inline(always)]
pub(super) fn moebius(n: &[f64; 2], d: &[f64; 2], y: f64) -> f64 {
    (y * d[0] - n[0]) / (n[1] - y * d[1])
}

/// u with y = (n₀ + n₁ u + n₂ u²)/(d₀ + d₁ u + d₂ u²).
#[inline(always)]
pub(super) fn quadratic(n: &[f64; 3], d: &[f64; 3], branch: f64, y: f64) -> f64 {
    near_root(n[0] - y * d[0], n[1] - y * d[1], n[2] - y * d[2], branch)
}

/// u for polynomials up to the fourth degree: Newton from the root of the quadratic part. The higher terms come from
/// loading alone and are small: four steps end at rounding, and the last one proves it.
#[inline(always)]
pub(super) fn quartic(n: &[f64; 5], d: &[f64; 5], branch: f64, y: f64) -> f64 {
    let f = residual(n, d, y);
    let u = near_root(f[0], f[1], f[2], branch);
    let u = newton(&f, newton(&f, newton(&f, u)));
    let last = newton(&f, u);
    // a step that still moves has not arrived: no number rather than a wrong one
    let moved = last - u;
    let small = 1e-9 * last;
    if moved * moved <= small * small + f64::MIN_POSITIVE { last } else { f64::NAN }
}

/// u for arms that also move with the temperature.
#[inline(always)]
pub(super) fn arms(arms: &Arms, tau: &[f64; 7], branch: f64, celsius: f64, y: f64) -> f64 {
    let (n, d) = arms.at(horner(celsius, tau));
    quartic(&n, &d, branch, y)
}

/// q = (v − p(T))/(f₀ + f₁ T).
#[inline(always)]
pub(super) fn thermal(p: &[f64; 7], f: &[f64; 2], span: &Span, celsius: f64, v: f64) -> f64 {
    mask_by(span.holds(celsius), (v - horner(celsius, p)) / (f[0] + f[1] * celsius))
}

#[inline(always)]
pub(super) fn mask(v: f64, span: &Span) -> f64 {
    mask_by(span.holds(v), v)
}

#[inline(always)]
fn mask_by(keep: bool, v: f64) -> f64 {
    if keep { v } else { f64::NAN }
}

/// All blocks of a column through all stages.
#[inline(always)]
pub(super) fn convert(plan: &Plan, columns: &Columns<'_>, out: &mut [f64]) {
    let mut supplies = columns.supplies.chunks(BLOCK);
    let mut celsius = columns.celsius.chunks(BLOCK);
    for (readings, out) in columns.readings.chunks(BLOCK).zip(out.chunks_mut(BLOCK)) {
        let supplies = if plan.divides_by_supply { supplies.next().unwrap_or(&[]) } else { &[] };
        let celsius = if plan.uses_temperature() { celsius.next().unwrap_or(&[]) } else { &[] };
        block(plan, readings, supplies, celsius, out);
    }
}

#[inline(always)]
fn each(out: &mut [f64], f: impl Fn(f64) -> f64) {
    for v in out {
        *v = f(*v);
    }
}

#[inline(always)]
fn each_with(out: &mut [f64], side: &[f64], f: impl Fn(f64, f64) -> f64) {
    for (v, s) in out.iter_mut().zip(side) {
        *v = f(*v, *s);
    }
}

#[inline(always)]
fn block(plan: &Plan, readings: &[f64], supplies: &[f64], celsius: &[f64], out: &mut [f64]) {
    if plan.divides_by_supply {
        for ((v, r), s) in out.iter_mut().zip(readings).zip(supplies) {
            *v = enter(plan, *r, *s);
        }
    } else {
        for (v, r) in out.iter_mut().zip(readings) {
            *v = enter(plan, *r, 1.0);
        }
    }
    let span = plan.front_span;
    match &plan.front {
        Front::Moebius { n, d } => each(out, |y| mask(moebius(n, d, y), &span)),
        Front::Quadratic { n, d, branch } => each(out, |y| mask(quadratic(n, d, *branch, y), &span)),
        Front::Quartic { n, d, branch } => each(out, |y| mask(quartic(n, d, *branch, y), &span)),
        Front::Arms { arms: a, tau, branch } => {
            each_with(out, celsius, |y, t| mask(arms(a, tau, *branch, t, y), &span));
        }
    }
    match &plan.law {
        Law::None => {}
        Law::Platinum(k) => each(out, |r| platinum::celsius_from_ohms(k, r)),
        Law::Thermistor(thermistor::Law::Beta(k)) => each(out, |r| thermistor::celsius_from_ohms_beta(k, r)),
        Law::Thermistor(thermistor::Law::SteinhartHart(k)) => {
            each(out, |r| thermistor::celsius_from_ohms_steinhart_hart(k, r));
        }
    }
    let span = plan.span;
    match &plan.tail {
        Tail::None => each(out, |v| mask(v, &span)),
        Tail::Affine { scale, offset } => each(out, |v| mask(scale * v + offset, &span)),
        Tail::Thermal { p, f } => {
            each_with(out, celsius, |v, t| mask(thermal(p, f, &plan.temperature_span, t, v), &span));
        }
    }
}

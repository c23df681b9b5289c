//! One loop body per stage. Scalar and slice call the same functions; none has a branch.

use super::law::Law;
use super::plan::{BLOCK, Columns, Plan};
use super::polynomial::{near_root, newton, residual};
use super::stage::{Degree, Excess, Front, Heated, Shift, Span, Tail};
use crate::math::horner;
use crate::strain::Points;
use crate::{metal, thermistor};

/// Beyond this nothing is a reading, and squares could overflow: a root that is divided by infinity would come out as 0.
pub(super) const ABSURD: f64 = 1e100;

/// The reading as the front takes it; NaN where it is not believed.
#[inline(always)]
pub(super) fn enter(plan: &Plan, reading: f64, supply: f64) -> f64 {
    let believed = if plan.raw_holds(reading) { reading } else { f64::NAN };
    if plan.divides_by_supply {
        // an infinite supply would make every reading look like no signal
        let entered = (believed + plan.reading_offset) / supply;
        mask_by((supply.abs() <= f64::MAX) & (entered.abs() <= ABSURD), entered)
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

/// u for polynomials up to the fourth degree.
#[inline(always)]
pub(super) fn quartic(n: &[f64; 5], d: &[f64; 5], branch: f64, y: f64) -> f64 {
    quartic_root(&residual(n, d, y), branch)
}

/// The root of f₀ + f₁ u.
#[inline(always)]
pub(super) fn moebius_root(f: &[f64; 5]) -> f64 {
    -f[0] / f[1]
}

/// The root of f₀ + f₁ u + f₂ u² on the branch.
#[inline(always)]
pub(super) fn quadratic_root(f: &[f64; 5], branch: f64) -> f64 {
    near_root(f[0], f[1], f[2], branch)
}

/// The root of f up to the fourth degree on the branch: Newton from the root of the quadratic part. The higher terms come
/// from loading alone and are small: four steps end at rounding, and the last one proves it.
#[inline(always)]
pub(super) fn quartic_root(f: &[f64; 5], branch: f64) -> f64 {
    let u = near_root(f[0], f[1], f[2], branch);
    let u = newton(f, newton(f, newton(f, u)));
    let last = newton(f, u);
    // a step that still moves has not arrived: no number rather than a wrong one
    let moved = last - u;
    let small = 1e-9 * last;
    if moved * moved <= small * small + f64::MIN_POSITIVE { last } else { f64::NAN }
}

/// u for arms that also move with the temperature, where y is a ratio of first degree in u.
#[inline(always)]
fn heated_moebius(arms: &Heated, tau: f64, y: f64) -> f64 {
    let ([n0, n1, ..], [d0, d1, ..]) = arms.at_tau(tau);
    moebius(&[n0, n1], &[d0, d1], y)
}

/// The same for the second degree.
#[inline(always)]
fn heated_quadratic(arms: &Heated, tau: f64, y: f64) -> f64 {
    let ([n0, n1, n2, ..], [d0, d1, d2, ..]) = arms.at_tau(tau);
    quadratic(&[n0, n1, n2], &[d0, d1, d2], arms.branch, y)
}

/// The same up to the fourth degree.
#[inline(always)]
fn heated_quartic(arms: &Heated, tau: f64, y: f64) -> f64 {
    let (n, d) = arms.at_tau(tau);
    quartic(&n, &d, arms.branch, y)
}

/// The one of the three that the arms need.
#[inline(always)]
pub(super) fn heated(arms: &Heated, celsius: f64, y: f64) -> f64 {
    let tau = arms.tau_at(celsius);
    match arms.degree {
        Degree::First => heated_moebius(arms, tau, y),
        Degree::Second => heated_quadratic(arms, tau, y),
        Degree::Fourth => heated_quartic(arms, tau, y),
    }
}

/// The same for a block; `tau` gives τ at a temperature.
#[inline(always)]
fn heated_block(arms: &Heated, celsius: &[f64], kept: &Span, out: &mut [f64], tau: impl Fn(f64) -> f64) {
    match arms.degree {
        Degree::First => each_with(out, celsius, |y, t| mask(heated_moebius(arms, tau(t), y), kept)),
        Degree::Second => each_with(out, celsius, |y, t| mask(heated_quadratic(arms, tau(t), y), kept)),
        Degree::Fourth => each_with(out, celsius, |y, t| mask(heated_quartic(arms, tau(t), y), kept)),
    }
}

/// q = (v − p(T))/(f₀ + f₁ T).
#[inline(always)]
pub(super) fn thermal(p: &[f64; 7], f: &[f64; 2], span: &Span, celsius: f64, v: f64) -> f64 {
    mask_by(span.holds(celsius), (v - horner(celsius, p)) / (f[0] + f[1] * celsius))
}

/// The same with points: q = (v − p(T) − scale · table(T))/(f₀ + f₁ T).
#[inline]
pub(super) fn thermal_points(
    p: &[f64; 7],
    f: &[f64; 2],
    points: &Points,
    scale: f64,
    span: &Span,
    celsius: f64,
    v: f64,
) -> f64 {
    let output = horner(celsius, p) + scale * points.at(celsius);
    mask_by(span.holds(celsius), (v - output) / (f[0] + f[1] * celsius))
}

/// A resistance without what its leads add at their temperature; NaN where there are no such leads.
#[inline(always)]
pub(super) fn without_excess(excess: &Excess, lead_celsius: f64, ohms: f64) -> f64 {
    mask_by(excess.warmth.holds(lead_celsius), ohms - excess.at(lead_celsius))
}

#[inline(always)]
pub(super) fn mask(v: f64, span: &Span) -> f64 {
    mask_by(span.holds(v), v)
}

#[inline(always)]
pub(super) fn mask_by(keep: bool, v: f64) -> f64 {
    if keep { v } else { f64::NAN }
}

/// The part of columns that belongs to the rows from `start` on, `rows` of them.
#[inline(always)]
fn part<'a>(columns: &Columns<'a>, start: usize, rows: usize) -> Columns<'a> {
    let cut = |column: &'a [f64]| {
        let end = (start + rows).min(column.len());
        column.get(start.min(end)..end).unwrap_or(&[])
    };
    Columns {
        readings: cut(columns.readings),
        supplies: cut(columns.supplies),
        celsius: cut(columns.celsius),
        lead_celsius: cut(columns.lead_celsius),
        arm_celsius: columns.arm_celsius.map(cut),
    }
}

/// All blocks of a column through all stages; returns how many results are no number.
#[inline(always)]
pub(super) fn convert(plan: &Plan, columns: &Columns<'_>, out: &mut [f64]) -> usize {
    let mut invalid = 0;
    let mut start = 0;
    for out in out.chunks_mut(BLOCK) {
        block(plan, &part(columns, start, out.len()), out);
        start += out.len();
        // counted while the block is in the cache, without a branch
        invalid += out.iter().map(|v| u64::from(v.is_nan())).sum::<u64>() as usize;
    }
    invalid
}

/// The same the short way, and `whole` for the blocks that cannot go it. Apart from [`convert`], since together the loops are
/// too much for the compiler to keep them all wide.
#[inline(always)]
pub(super) fn convert_short(
    plan: &Plan,
    columns: &Columns<'_>,
    out: &mut [f64],
    whole: impl Fn(&Columns<'_>, &mut [f64]) -> usize,
) -> usize {
    let mut invalid = 0;
    let mut start = 0;
    for out in out.chunks_mut(BLOCK) {
        let columns = part(columns, start, out.len());
        start += out.len();
        if !plan.short.piece(&plan.law, columns.readings, columns.celsius, out) {
            invalid += whole(&columns, out);
        }
    }
    invalid
}

#[inline(always)]
pub(super) fn each(out: &mut [f64], f: impl Fn(f64) -> f64) {
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
fn block(plan: &Plan, columns: &Columns<'_>, out: &mut [f64]) {
    let celsius = columns.celsius;
    if plan.divides_by_supply {
        for ((v, r), s) in out.iter_mut().zip(columns.readings).zip(columns.supplies) {
            *v = enter(plan, *r, *s);
        }
    } else {
        for (v, r) in out.iter_mut().zip(columns.readings) {
            *v = enter(plan, *r, 1.0);
        }
    }
    let span = plan.front_span;
    // without a shift the front's result is masked in the same pass
    let kept = if plan.shift.is_some() { Span::ALL } else { span };
    match &plan.front {
        Front::Moebius { n, d } => each(out, |y| mask(moebius(n, d, y), &kept)),
        Front::Quadratic { n, d, branch } => each(out, |y| mask(quadratic(n, d, *branch, y), &kept)),
        Front::Quartic { n, d, branch } => each(out, |y| mask(quartic(n, d, *branch, y), &kept)),
        Front::Arms(arms) if arms.tau.points.is_none() => {
            // without points τ is a polynomial, and the loop has no branch
            heated_block(arms, celsius, &kept, out, |t| horner(t, &arms.tau.polynomial) - arms.tau_at_zero);
        }
        Front::Arms(arms) => heated_block(arms, celsius, &kept, out, |t| arms.tau_at(t)),
        Front::Live(live) => live.block(out, &kept, |i| columns.row(i)),
    }
    if let Some(shift) = &plan.shift {
        let temperature = match shift {
            Shift::Leads { .. } => columns.lead_celsius,
            Shift::Junction(_) => celsius,
        };
        each_with(out, temperature, |v, t| mask(shift.remove(t, v), &span));
    }
    match &plan.heating {
        None => law_block(&plan.law, out),
        Some(heating) => {
            let mut sensor = [0.0; BLOCK];
            for (keep, v) in sensor.iter_mut().zip(&*out) {
                *keep = *v;
            }
            law_block(&plan.law, out);
            if heating.by_supply {
                for ((v, r), s) in out.iter_mut().zip(&sensor).zip(columns.supplies) {
                    *v -= heating.kelvin(*r, *s);
                }
            } else {
                for (v, r) in out.iter_mut().zip(&sensor) {
                    *v -= heating.kelvin(*r, 1.0);
                }
            }
        }
    }
    let span = plan.span;
    match &plan.tail {
        Tail::None => each(out, |v| mask(v, &span)),
        Tail::Affine { scale, offset } => each(out, |v| mask(scale * v + offset, &span)),
        Tail::Thermal { p, f } => {
            each_with(out, celsius, |v, t| mask(thermal(p, f, &plan.temperature_span, t, v), &span));
        }
        Tail::ThermalPoints { p, f, points, scale } => each_with(out, celsius, |v, t| {
            mask(thermal_points(p, f, points, *scale, &plan.temperature_span, t, v), &span)
        }),
    }
}

/// The law of the sensor, one loop for each that is worth one.
#[inline(always)]
fn law_block(law: &Law, out: &mut [f64]) {
    use thermistor::Law::{Beta, LogarithmOfRatio, Points, ReciprocalOfTemperature, SteinhartHart};
    match law {
        Law::None => {}
        Law::Platinum(k) => k.each(out),
        Law::Standard { triple_point_ohms, deviation } => {
            each(out, |r| deviation.celsius_from_ratio(r / triple_point_ohms));
        }
        Law::Metal(metal::Law::Nickel(k)) => each(out, |r| metal::celsius_from_ohms_nickel(k, r)),
        Law::Metal(metal::Law::Copper(k)) => each(out, |r| metal::celsius_from_ohms_copper(k, r)),
        Law::Thermistor(Beta(k)) => each(out, |r| thermistor::celsius_from_ohms_beta(k, r)),
        Law::Thermistor(SteinhartHart(k)) => each(out, |r| thermistor::celsius_from_ohms_steinhart_hart(k, r)),
        Law::Thermistor(LogarithmOfRatio(k)) => each(out, |r| k.celsius_from_ohms(r)),
        Law::Thermistor(ReciprocalOfTemperature(k)) => each(out, |r| k.celsius_from_ohms(r)),
        Law::Thermistor(Points(k)) => each(out, |r| k.celsius_from_ohms(r)),
        Law::Thermocouple(k) => {
            let function = k.function();
            each(out, |mv| function.celsius_from_millivolts(mv));
        }
        Law::Certificate(k) if k.gives_output => each(out, |v| k.inverse(v)),
        Law::Certificate(k) => each(out, |v| k.polynomial(v)),
    }
}

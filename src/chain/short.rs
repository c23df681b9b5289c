//! The short way of one reading: the common kinds of plan, with all checks of range done once by a stretch of readings.
//!
//! Within that stretch nothing can be masked, which is shown when the plan is made; what lies outside goes the whole way and
//! is asked there for its word. Both ways call the same functions with the same constants: the same bits (tests/batch.rs).

use super::kernel;
use super::law::Law;
use super::plan::Plan;
use super::stage::{Front, Span, Tail};
use crate::math::horner;
use crate::thermistor::{self, Beta, SteinhartHart};

/// y = (n₀ + n₁ u)/(d₀ + d₁ u), and the readings for which u needs no check.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Line {
    readings: Span,
    n: [f64; 2],
    d: [f64; 2],
}

impl Line {
    #[inline(always)]
    fn root(&self, reading: f64) -> Option<f64> {
        if self.readings.encloses(reading) { Some(kernel::moebius(&self.n, &self.d, reading)) } else { None }
    }

    /// All of a piece; whether every reading lies in the stretch.
    #[inline(always)]
    fn piece(&self, readings: &[f64], out: &mut [f64]) -> bool {
        let mut inside = true;
        for (v, r) in out.iter_mut().zip(readings) {
            inside &= self.readings.holds(*r);
            *v = kernel::moebius(&self.n, &self.d, *r);
        }
        inside
    }
}

/// The kinds of plan that have a short way.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Kind {
    /// None of them.
    None,
    /// One gauge, its thermal output a cubic and its factor constant.
    Cubic,
    /// One moving arm.
    Line,
    /// Two moving arms.
    Quadratic,
    /// One gauge with any thermal output.
    Thermal,
    /// A platinum thermometer.
    Platinum,
    /// A thermistor by its beta.
    Beta,
    /// A thermistor by Steinhart and Hart.
    SteinhartHart,
}

/// What the short way needs, in one shape for all kinds, so that a kind is told once.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Short {
    pub(super) kind: Kind,
    line: Line,
    /// Temperatures for which the result needs no check.
    celsius: Span,
    /// Constants in the order that the kind says.
    k: [f64; 9],
}

impl Short {
    /// No short way.
    pub(super) const NONE: Self = Self {
        kind: Kind::None,
        line: Line { readings: Span { low: f64::INFINITY, high: f64::NEG_INFINITY }, n: [0.0; 2], d: [0.0; 2] },
        celsius: Span::ALL,
        k: [0.0; 9],
    };

    /// The result where the short way knows it; `law` is the plan's own.
    #[inline(always)]
    pub(super) fn value(&self, law: &Law, reading: f64, celsius: f64) -> Option<f64> {
        match self.kind {
            Kind::None => None,
            Kind::Cubic => self.cubic(reading, celsius),
            Kind::Line => self.line.root(reading),
            Kind::Quadratic => {
                let (n, d, branch) = self.quadratic();
                if self.line.readings.encloses(reading) {
                    Some(kernel::quadratic(&n, &d, branch, reading))
                } else {
                    None
                }
            }
            Kind::Thermal => {
                let v = self.line.root(reading)?;
                let (p, f) = self.thermal();
                if self.celsius.encloses(celsius) {
                    Some((v - horner(celsius, &p)) / (f[0] + f[1] * celsius))
                } else {
                    None
                }
            }
            Kind::Platinum => match law {
                Law::Platinum(k) => Some(k.inside(self.line.root(reading)?)),
                _ => None,
            },
            Kind::Beta => Some(thermistor::celsius_from_ohms_beta(&self.beta(), self.line.root(reading)?)),
            Kind::SteinhartHart => {
                Some(thermistor::celsius_from_ohms_steinhart_hart(&self.steinhart_hart(), self.line.root(reading)?))
            }
        }
    }

    /// One gauge, its thermal output a cubic and its factor constant.
    #[inline(always)]
    pub(super) fn cubic(&self, reading: f64, celsius: f64) -> Option<f64> {
        let v = self.line.root(reading)?;
        if self.celsius.encloses(celsius) { Some(self.after_cubic(v, celsius)) } else { None }
    }

    /// One moving arm.
    #[cfg(feature = "capi")]
    #[inline(always)]
    pub(super) fn line(&self, reading: f64) -> Option<f64> {
        self.line.root(reading)
    }

    #[inline(always)]
    fn after_cubic(&self, v: f64, t: f64) -> f64 {
        let [p0, p1, p2, p3, f, ..] = self.k;
        (v - (((p3 * t + p2) * t + p1) * t + p0)) / f
    }

    #[inline(always)]
    fn thermal(&self) -> ([f64; 7], [f64; 2]) {
        let [p0, p1, p2, p3, p4, p5, p6, f0, f1] = self.k;
        ([p0, p1, p2, p3, p4, p5, p6], [f0, f1])
    }

    #[inline(always)]
    fn quadratic(&self) -> ([f64; 3], [f64; 3], f64) {
        let ([n0, n1], [d0, d1], [n2, d2, branch, ..]) = (self.line.n, self.line.d, self.k);
        ([n0, n1, n2], [d0, d1, d2], branch)
    }

    #[inline(always)]
    fn beta(&self) -> Beta {
        let [r25_ohms, beta_kelvin, ..] = self.k;
        Beta { r25_ohms, beta_kelvin, range_celsius: [0.0; 2] }
    }

    #[inline(always)]
    fn steinhart_hart(&self) -> SteinhartHart {
        let [a, b, c, ..] = self.k;
        SteinhartHart { a, b, c, range_celsius: [0.0; 2] }
    }

    /// The same for a piece of a slice; `false` when a reading of it must go the whole way, and then all must.
    #[inline(always)]
    pub(super) fn piece(&self, law: &Law, readings: &[f64], celsius: &[f64], out: &mut [f64]) -> bool {
        match self.kind {
            Kind::None => false,
            Kind::Line => self.line.piece(readings, out),
            Kind::Cubic => self.piece_with(readings, celsius, out, |v, t| self.after_cubic(v, t)),
            Kind::Thermal => {
                let (p, f) = self.thermal();
                self.piece_with(readings, celsius, out, |v, t| (v - horner(t, &p)) / (f[0] + f[1] * t))
            }
            Kind::Quadratic => {
                let (n, d, branch) = self.quadratic();
                let mut inside = true;
                for (v, r) in out.iter_mut().zip(readings) {
                    inside &= self.line.readings.holds(*r);
                    *v = kernel::quadratic(&n, &d, branch, *r);
                }
                inside
            }
            Kind::Platinum => match law {
                Law::Platinum(k) => {
                    let inside = self.line.piece(readings, out);
                    if inside {
                        k.each(out);
                    }
                    inside
                }
                _ => false,
            },
            Kind::Beta => {
                let (inside, law) = (self.line.piece(readings, out), self.beta());
                if inside {
                    kernel::each(out, |r| thermistor::celsius_from_ohms_beta(&law, r));
                }
                inside
            }
            Kind::SteinhartHart => {
                let (inside, law) = (self.line.piece(readings, out), self.steinhart_hart());
                if inside {
                    kernel::each(out, |r| thermistor::celsius_from_ohms_steinhart_hart(&law, r));
                }
                inside
            }
        }
    }

    /// A piece with what the temperature does to each.
    #[inline(always)]
    fn piece_with(&self, readings: &[f64], celsius: &[f64], out: &mut [f64], f: impl Fn(f64, f64) -> f64) -> bool {
        let mut inside = true;
        for ((v, r), t) in out.iter_mut().zip(readings).zip(celsius) {
            inside &= self.line.readings.holds(*r) & self.celsius.holds(*t);
            *v = f(kernel::moebius(&self.line.n, &self.line.d, *r), *t);
        }
        inside
    }

    /// The short way of a plan, where it has one.
    pub(super) fn of(plan: &Plan) -> Self {
        let plain = !plan.divides_by_supply
            && plan.shift.is_none()
            && plan.heating.is_none()
            && !plan.uses.lead
            && plan.uses.arms == [false; 4]
            && !plan.is_watched();
        if plain { Self::of_plain(plan).unwrap_or(Self::NONE) } else { Self::NONE }
    }

    fn of_plain(plan: &Plan) -> Option<Self> {
        use thermistor::Law::{Beta, SteinhartHart};
        let moebius = |wanted: Span| match plan.front {
            Front::Moebius { n, d } => Some(Line { readings: of_moebius(&n, &d, wanted, plan)?, n, d }),
            _ => None,
        };
        let padded = |first: &[f64]| {
            let mut k = [0.0; 9];
            k.iter_mut().zip(first).for_each(|(slot, c)| *slot = *c);
            k
        };
        let with = |kind, line, first: &[f64]| Some(Self { kind, line, celsius: Span::ALL, k: padded(first) });
        match (&plan.law, &plan.tail) {
            (Law::None, Tail::None) => {
                let wanted = plan.front_span.both(plan.span);
                let Front::Quadratic { n, d, branch } = plan.front else {
                    return with(Kind::Line, moebius(wanted)?, &[]);
                };
                let readings = of_quadratic(&n, &d, branch, wanted, plan)?;
                let ([n0, n1, n2], [d0, d1, d2]) = (n, d);
                with(Kind::Quadratic, Line { readings, n: [n0, n1], d: [d0, d1] }, &[n2, d2, branch])
            }
            (Law::None, Tail::Thermal { p, f }) => {
                // the widest temperatures at which the result is believed whatever the polynomial does with the reading
                let (line, celsius) = TEMPERATURES.iter().find_map(|reach| {
                    let celsius = plan.temperature_span.both(Span { low: -reach, high: *reach });
                    Some((moebius(plan.front_span.both(before_tail(p, f, celsius, plan.span)?))?, celsius))
                })?;
                // with +0 above the third power, and +0 or a number for it, Horner's rule begins at the third anyway
                let zero = |c: &f64| c.to_bits() == 0;
                let ([p0, p1, p2, p3, p4, p5, p6], [f0, f1]) = (*p, *f);
                let cubic = f1 == 0.0 && [p4, p5, p6].iter().all(zero) && (p3 != 0.0 || zero(&p3));
                Some(if cubic {
                    Self { kind: Kind::Cubic, line, celsius, k: padded(&[p0, p1, p2, p3, f0]) }
                } else {
                    Self { kind: Kind::Thermal, line, celsius, k: [p0, p1, p2, p3, p4, p5, p6, f0, f1] }
                })
            }
            // no result of the laws is masked behind them
            (law, Tail::None) if plan.span == Span::ALL => match law {
                Law::Platinum(k) if k.starts_everywhere() => with(Kind::Platinum, moebius(plan.front_span)?, &[]),
                Law::Thermistor(Beta(k)) => with(Kind::Beta, moebius(plan.front_span)?, &[k.r25_ohms, k.beta_kelvin]),
                Law::Thermistor(SteinhartHart(k)) => {
                    with(Kind::SteinhartHart, moebius(plan.front_span)?, &[k.a, k.b, k.c])
                }
                _ => None,
            },
            _ => None,
        }
    }
}

/// Temperatures that a gauge may have, °C: the first reach for which the short way can be shown to hold.
const TEMPERATURES: [f64; 5] = [1000.0, 500.0, 250.0, 150.0, 75.0];

/// Share of a stretch that is left out at both its ends, far more than rounding moves a value.
const MARGIN: f64 = 1e-6;

/// Some rounding errors together.
const ROUNDING: f64 = 16.0 * f64::EPSILON;

/// The stretch without its margins; `None` where it is empty or has no end.
fn inner(wanted: Span) -> Option<(Span, f64)> {
    let margin = MARGIN * (wanted.high - wanted.low);
    (margin.is_finite() && margin > 0.0)
        .then_some((Span { low: wanted.low + margin, high: wanted.high - margin }, margin))
}

/// The readings believed between the two that belong to the ends of a stretch.
fn between(a: f64, b: f64, plan: &Plan) -> Option<Span> {
    let span = Span { low: a.min(b), high: a.max(b) }.both(plan.raw.believed);
    (span.low < span.high && span.low.is_finite() && span.high.is_finite()).then_some(span)
}

/// What is left of the largest and the smallest magnitude of k − y d over a stretch; 0 as the smallest where it changes sign.
fn magnitudes(k: f64, d: f64, span: Span) -> [f64; 2] {
    let (a, b) = (k - span.low * d, k - span.high * d);
    let smallest = if a * b > 0.0 { a.abs().min(b.abs()) } else { 0.0 };
    [smallest, a.abs().max(b.abs())]
}

/// Readings whose u, as computed, lies in this stretch: u is monotone where neither denominator changes its sign.
fn of_moebius(n: &[f64; 2], d: &[f64; 2], wanted: Span, plan: &Plan) -> Option<Span> {
    let (wanted, margin) = inner(wanted)?;
    let [low, high] = [wanted.low, wanted.high].map(|u| horner(u, d));
    if low * high <= 0.0 {
        return None;
    }
    let span = between(horner(wanted.low, n) / low, horner(wanted.high, n) / high, plan)?;
    let largest = span.low.abs().max(span.high.abs());
    let [bottom, _] = magnitudes(n[1], d[1], span);
    let off_top = ROUNDING * (largest * d[0].abs() + n[0].abs());
    let off_bottom = ROUNDING * (n[1].abs() + largest * d[1].abs());
    let u = wanted.low.abs().max(wanted.high.abs());
    let off = (off_top + u * off_bottom) / (bottom - off_bottom);
    (bottom > 2.0 * off_bottom && off <= 0.5 * margin).then_some(span)
}

/// The same for two moving arms, whose root is monotone on the stretch that the plan believes.
fn of_quadratic(n: &[f64; 3], d: &[f64; 3], branch: f64, wanted: Span, plan: &Plan) -> Option<Span> {
    let (wanted, margin) = inner(wanted)?;
    let [low, high] = [wanted.low, wanted.high].map(|u| horner(u, d));
    if low * high <= 0.0 {
        return None;
    }
    let span = between(horner(wanted.low, n) / low, horner(wanted.high, n) / high, plan)?;
    let largest = span.low.abs().max(span.high.abs());
    let [_, c] = magnitudes(n[0], d[0], span);
    let [b_least, b] = magnitudes(n[1], d[1], span);
    let [_, a] = magnitudes(n[2], d[2], span);
    // b² − 4 a c stays above 0 by far more than rounding, and b keeps the sense of the branch: then nothing cancels
    let under = b_least * b_least - 4.0 * a * c;
    if (n[1] - span.low * d[1]) * branch <= 0.0 || under < 0.01 * b * b {
        return None;
    }
    let rounding = |n: f64, d: f64| ROUNDING * (n.abs() + largest * d.abs());
    let (off_a, off_b, off_c) = (rounding(n[2], d[2]), rounding(n[1], d[1]), rounding(n[0], d[0]));
    let off_under = 2.0 * b * off_b + 4.0 * (a * off_c + c * off_a) + ROUNDING * (b * b + 4.0 * a * c);
    let bottom = b_least + crate::math::sqrt(under);
    let off_bottom = off_b + off_under / crate::math::sqrt(under) + ROUNDING * 2.0 * b;
    let u = wanted.low.abs().max(wanted.high.abs());
    let off = (2.0 * off_c + u * off_bottom) / bottom;
    (off <= 0.5 * margin).then_some(span)
}

/// What may come before the tail so that (v − p(T))/(f₀ + f₁ T) lies in `span` at every temperature of the stretch.
fn before_tail(p: &[f64; 7], f: &[f64; 2], celsius: Span, span: Span) -> Option<Span> {
    let largest = celsius.low.abs().max(celsius.high.abs());
    let output = horner(largest, &p.map(f64::abs)) * (1.0 + MARGIN);
    let [a, b] = [celsius.low, celsius.high].map(|t| f[0] + f[1] * t);
    if !output.is_finite() || a * b <= 0.0 {
        return None;
    }
    let (from, to) = if a > 0.0 { (span.low, span.high) } else { (span.high, span.low) };
    let wanted = Span { low: (from * a).max(from * b) + output, high: (to * a).min(to * b) - output };
    // the margins taken from it are to be far more than what rounding moves v − p
    (wanted.high - wanted.low > 1e-3 * (wanted.high.abs() + wanted.low.abs() + output)).then_some(wanted)
}

#[cfg(test)]
mod tests {
    extern crate std;
    use std::vec::Vec;

    use super::*;
    use crate::chain::{Chain, Element, Inputs, Network, Supply, Temperature, Word};
    use crate::platinum::IEC_60751;
    use crate::signal::{Arm, Bridge, Conductor, Divider, Driven, Each, Leads, Side, Wires};
    use crate::strain::{Gauge, ThermalOutput};
    use crate::thermistor::Law;

    /// A chain of every kind; all figures made up to be ordinary.
    fn chains() -> Vec<(Kind, Chain)> {
        let mut bridge = Bridge::one_gauge(350.0);
        bridge.leads = Some(Leads { wires: Wires::Three, each: Each::Same(Conductor::Ohms(1.8)) });
        let warm = |slope, coefficients| {
            let thermal_output = Some(ThermalOutput {
                coefficients,
                fahrenheit: false,
                gauge_factor: 2.0,
                range_celsius: [-60.0, 180.0],
            });
            let gauge = Gauge { slope, thermal_output, ..Gauge::new(2.08) };
            let mut chain = Chain::strain(bridge, gauge);
            chain.temperature = Temperature::Column;
            if let Element::Gauge { zero, .. } = &mut chain.element {
                zero.celsius = Some(21.0);
            }
            chain
        };
        let arm = |factor| Arm::Active { factor, driven: Driven::Along };
        let two = Bridge::equal(350.0, [arm(1.0), Arm::Fixed, arm(1.0), Arm::Fixed]);
        let divider = Divider { fixed: 10e3, sensor: Side::Low, input_resistance: Some(1e7) };
        let thermistor = |law| {
            let mut chain = Chain::new(Network::Divider { divider, leads: None }, Element::Thermistor(law));
            chain.supply = Supply::Fixed(3.3);
            chain
        };
        let range_celsius = [-40.0, 125.0];
        let beta = Beta { r25_ohms: 10e3, beta_kelvin: 3950.0, range_celsius };
        let (a, b, c) = (1.129_148e-3, 2.341_25e-4, 8.767_41e-8);
        std::vec![
            (Kind::Line, Chain::strain(bridge, Gauge::new(2.08))),
            (Kind::Cubic, warm(0.0, [-31.8, 2.77, -6.55e-2, 3.28e-4, 0.0, 0.0, 0.0])),
            (Kind::Thermal, warm(1.1e-4, [-31.8, 2.77, -6.55e-2, 3.28e-4, -3.26e-7, 0.0, 0.0])),
            (Kind::Quadratic, Chain::strain(two, Gauge::new(2.08))),
            (Kind::Platinum, Chain::new(Network::Resistance { leads: None }, Element::Platinum(IEC_60751))),
            (Kind::Beta, thermistor(Law::Beta(beta))),
            (Kind::SteinhartHart, thermistor(Law::SteinhartHart(SteinhartHart { a, b, c, range_celsius }))),
            (Kind::None, Chain::new(Network::Direct, Element::Direct { scale: 2.0, offset: 1.0 })),
        ]
    }

    #[test]
    fn the_short_way_leads_where_the_whole_way_does() {
        for (kind, chain) in chains() {
            let plan = chain.plan().expect("a plan");
            let short = &plan.short;
            assert_eq!(short.kind, kind);
            if kind == Kind::None {
                continue;
            }
            let Span { low, high } = short.line.readings;
            let Span { low: cold, high: hot } =
                short.celsius.both(Span { low: -1e3, high: 1e3 }).both(plan.temperature_span);
            let dense = (0..=50_000).map(|i| (low + (high - low) * f64::from(i) / 50_000.0).min(high));
            let ends = [low, low.next_up(), high.next_down(), high];
            let beyond = [low.next_down(), high.next_up(), f64::NAN, f64::INFINITY, -1e9, 1e9];
            let mut inside = 0;
            for (i, reading) in ends.into_iter().chain(beyond).chain(dense).enumerate() {
                let celsius = match i % 7 {
                    0 => cold,
                    1 => hot,
                    k => cold + (hot - cold) * k as f64 / 7.0,
                };
                let whole = plan.whole(&Inputs { reading, celsius, ..Inputs::default() });
                let mut out = [0.0; 1];
                let piece = short.piece(&plan.law, &[reading], &[celsius], &mut out);
                match short.value(&plan.law, reading, celsius) {
                    Some(value) => {
                        inside += 1;
                        assert_eq!(
                            (value.to_bits(), Word::Good),
                            (whole.value.to_bits(), whole.word),
                            "{kind:?} {reading}"
                        );
                        assert!(piece && out[0].to_bits() == value.to_bits(), "{kind:?} {reading}");
                    }
                    None => assert!(!piece && (4..10).contains(&i), "{kind:?} {reading}"),
                }
                if kind == Kind::Cubic || kind == Kind::Line {
                    let own = if kind == Kind::Line { short.line.root(reading) } else { short.cubic(reading, celsius) };
                    assert_eq!(own.map(f64::to_bits), short.value(&plan.law, reading, celsius).map(f64::to_bits));
                }
                // a temperature that the laws do not cover goes the whole way
                if kind == Kind::Cubic || kind == Kind::Thermal {
                    for celsius in [cold.next_down(), hot.next_up(), f64::NAN] {
                        assert_eq!(short.value(&plan.law, reading, celsius), None);
                        assert!(!short.piece(&plan.law, &[reading], &[celsius], &mut out));
                    }
                }
            }
            assert_eq!(inside, 50_005, "{kind:?}");
            // little is left to the whole way: less than a thousandth of the results
            let whole_way = |reading: f64| plan.whole(&Inputs { reading, celsius: 21.0, ..Inputs::default() }).word;
            let margin = 1e-3 * (high - low);
            if kind != Kind::Cubic && kind != Kind::Thermal {
                assert!(whole_way(low - margin) != Word::Good && whole_way(high + margin) != Word::Good, "{kind:?}");
            }
        }
    }
}

//! The chain over intervals: which results can belong to a reading?
//!
//! Reading x and result q belong together where G(x, q) = 0. G is put together from those directions of the stages that are
//! explicit (a thermistor's 1/T = a + b ln R + c ln³ R, a platinum curve's R(T), a network's N(u) = y D(u)), so that no iterated
//! inverse has to be enclosed. The coefficients are enclosed once.

use super::forward::ten;
use super::polynomial::fold;
use super::thermometer::Heat;
use super::{Chain, Element, Inputs, Network, Sides, Supply, Temperature};
use crate::Error;
use crate::math::{Interval, Jet, Real, horner};
use crate::platinum::Coefficients;
use crate::platinum::its90::Deviation;
use crate::signal::Bridge;
use crate::strain::{Certificate, Gauge, Transducer, Zero};
use crate::thermistor::{ICE_KELVIN, Law};

/// G with what is to be said of it.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Gap {
    /// G, by whatever the arguments were derived by.
    pub(crate) value: Jet,
    /// Whether G is twice differentiable there: no law changes from one piece to the next.
    pub(crate) smooth: bool,
}

/// A chain whose side inputs are fixed, with enclosed coefficients.
#[derive(Clone, Debug)]
pub(crate) struct Enclosure {
    /// y = k · reading + m.
    k: Jet,
    m: Jet,
    /// outside = scale · inside + offset.
    scale: Jet,
    offset: Jet,
    stage: Stage,
    /// What a law jumps by at most where its pieces join, in the unit of G.
    pub(crate) jump: f64,
}

#[derive(Clone, Debug)]
#[allow(clippy::large_enum_variant, reason = "one of them, once for each curve")]
enum Stage {
    Direct {
        scale: Jet,
        offset: Jet,
    },
    /// N(u) = y D(u), u the result inside the chain divided by `unit`.
    Ratio {
        n: [Jet; 5],
        d: [Jet; 5],
        unit: Jet,
    },
    /// The same where the result is a polynomial of u, or u one of the result.
    Certificate {
        n: [Jet; 5],
        d: [Jet; 5],
        law: Certificate<Jet>,
    },
    Thermometer {
        /// y = (n₀ + n₁ R)/(d₀ + d₁ R).
        n: [Jet; 2],
        d: [Jet; 2],
        element: Element<Jet>,
        heat: Option<Heat<Jet>>,
        supply: Option<Jet>,
    },
    /// E(t) = y + E(t reference), mV.
    Thermocouple {
        function: &'static crate::thermocouple::Function,
        millivolts: Jet,
        junction: Jet,
    },
}

fn exact(value: f64) -> Jet {
    Jet::from_f64(value)
}

/// How near to a join a law is not asked, in the unit of its argument: an interval that ends at the join would have a middle
/// that rounding may carry over it.
const AT_JOIN: f64 = 1e-9;

/// A law in pieces over an interval that may lie on several: each is asked for its own part.
fn over_pieces(t: Jet, joins: &[f64], law: impl Fn(Jet) -> Jet) -> (Jet, bool) {
    let (low, high) = (t.value.low(), t.value.high());
    if low == high || !joins.iter().any(|join| low <= *join && *join <= high) {
        return (law(t), true);
    }
    let mut found: Option<Jet> = None;
    let mut pieces = 0;
    for i in 0..=joins.len() {
        let start = i.checked_sub(1).and_then(|i| joins.get(i)).copied().unwrap_or(f64::NEG_INFINITY);
        let end = joins.get(i).copied().unwrap_or(f64::INFINITY);
        let (mut from, mut to) = (low.max(start), high.min(end));
        if from > to || (from == to && pieces > 0) {
            continue;
        }
        // more of the same piece than was asked for is still an enclosure
        if to == end && to - from < AT_JOIN {
            from = to - AT_JOIN;
        } else if from == start && to - from < AT_JOIN {
            to = from + AT_JOIN;
        }
        let here = law(Jet { value: Interval::between(from, to), ..t });
        found = Some(found.map_or(here, |f: Jet| f.hull(here)));
        pieces += 1;
    }
    (found.unwrap_or(Jet::constant(Interval::ALL)), false)
}

/// u as a function of y where N(u) = y D(u): the root beside that of the middle, which is proven to be the only one there.
fn network_inverse(n: &[Jet; 5], d: &[Jet; 5], y: Jet) -> Jet {
    let f = |y: Jet| {
        let mut f = *n;
        for (f, d) in f.iter_mut().zip(d) {
            *f = *f - y * *d;
        }
        f
    };
    let middle = f(exact(y.value())).map(Real::value);
    let mut near = 0.0;
    for _ in 0..32 {
        let [_, b, c, d, e] = middle;
        near -= horner(near, &middle) / horner(near, &[b, 2.0 * c, 3.0 * d, 4.0 * e]);
    }
    let all = Interval::root(&f(Jet::constant(y.value)).map(|c| c.value), near);
    // y = h(u): u′ = y′/h′, u″ = (y″ − h″ u′²)/h′
    let u = Jet::variable(all);
    let h = horner(u, n) / horner(u, d);
    let slope = y.slope / h.slope;
    Jet { value: all, slope, bend: (y.bend - h.bend * slope.square()) / h.slope }
}

impl Enclosure {
    /// Encloses a chain; its results are multiplied by `factor`.
    pub(crate) fn new(chain: &Chain, inputs: &Inputs, factor: f64) -> Result<Self, Error> {
        let given = |used: bool, value: f64| used.then(|| exact(value));
        let arms = chain.needs_arm_temperatures();
        let column = chain.needs_temperature() && matches!(chain.temperature, Temperature::Column);
        let mut arm_celsius = [None; 4];
        for ((slot, used), t) in arm_celsius.iter_mut().zip(arms).zip(inputs.arm_celsius) {
            *slot = given(used, t);
        }
        let sides = Sides {
            supply: given(chain.needs_supply_column(), inputs.supply),
            celsius: given(column, inputs.celsius),
            lead_celsius: given(chain.needs_lead_temperature(), inputs.lead_celsius),
            arm_celsius,
        };
        let chain = chain.map(|_, v| exact(v));
        let line = chain.line()?;
        // volts per volt where the supply is a column
        let (mut k, mut m) = (line.k, line.m);
        if let (true, Supply::Column { exponent }, Some(supply)) =
            (chain.needs_supply_column(), chain.supply, sides.supply)
        {
            let volts = supply * ten(exponent);
            (k, m) = (k / volts, m / volts);
        }
        let (scale, offset) = chain.scale();
        let mut jump = 0.0;
        let warm = match &chain.lead_warmth {
            Some(w) if chain.needs_lead_temperature() => {
                w.factor(sides.lead_celsius.ok_or(Error::Missing { what: "the temperature of the leads" })?)
            }
            _ => chain.fixed_lead_factor(),
        };
        let stage = match (&chain.element, &chain.network) {
            (Element::Direct { scale, offset }, _) => Stage::Direct { scale: *scale, offset: *offset },
            (Element::Gauge { gauge, zero, .. }, Network::Bridge(bridge)) => {
                chain.enclosed_gauge(bridge, gauge, zero, &sides, warm)?
            }
            (Element::Transducer { law, zero, .. }, Network::Bridge(bridge)) => {
                let settled = chain.settle(bridge, None, zero)?;
                let (c, _) = bridge.drive();
                let forms = settled.bridge.with_leads_times(warm).expand(&chain.amplifier);
                let rest = c.map(|c| c * settled.x0);
                let (n, d) = (fold(&forms.numerator, &rest, &c), fold(&forms.denominator, &rest, &c));
                match law {
                    Transducer::Rated { output, capacity } => Stage::Ratio { n, d, unit: *capacity / *output },
                    Transducer::Certificate(law) => Stage::Certificate { n, d, law: *law },
                }
            }
            (Element::Thermocouple(kind), _) => {
                let function = kind.function();
                let junction = chain.junction(sides.celsius)?;
                for join in function.joins() {
                    let beside = Jet::constant(Interval::between(join, join + AT_JOIN));
                    let (a, b) =
                        (function.millivolts_from_celsius(exact(join)), function.millivolts_from_celsius(beside));
                    jump = f64::max(jump, (a - b).value.most());
                }
                let junction = function.millivolts_from_celsius(junction);
                Stage::Thermocouple { function, millivolts: exact(1e3), junction }
            }
            (element, network) if element.is_thermometer() => {
                let (p, q) = chain.around.moebius();
                let (n, d) = network.moebius(&chain.amplifier, warm)?;
                // y = (n₀ q + n₁ p)/(d₀ q + d₁ p)
                let through = |c: [Jet; 2]| [c[0] * q[0] + c[1] * p[0], c[0] * q[1] + c[1] * p[1]];
                if let Element::Standard { deviation: deviation @ Deviation::MercuryToGallium { .. }, .. } = element {
                    let beside = Jet::constant(Interval::between(0.01, 0.01 + AT_JOIN));
                    let step = deviation.reference_ratio(exact(0.01)) - deviation.reference_ratio(beside);
                    jump = step.value.most();
                }
                let element = match element {
                    Element::AlphaDeltaBeta(k) => Element::Platinum(Coefficients::from(*k)),
                    other => *other,
                };
                Stage::Thermometer {
                    n: through(n),
                    d: through(d),
                    element,
                    heat: chain.heat(warm)?,
                    supply: sides.supply,
                }
            }
            _ => return Err(Error::Unfit { what: "strain gauges are read through a bridge" }),
        };
        let factor = exact(factor);
        Ok(Self { k, m, scale: scale * factor, offset: offset * factor, stage, jump })
    }

    /// G(reading, quantity), the quantity in the unit of the result.
    pub(crate) fn gap(&self, reading: Jet, quantity: Jet) -> Gap {
        let y = self.k * reading + self.m;
        let inside = (quantity - self.offset) / self.scale;
        let (value, smooth) = match &self.stage {
            Stage::Direct { scale, offset } => (inside - (*scale * y + *offset), true),
            Stage::Ratio { n, d, unit } => {
                let u = inside / *unit;
                (horner(u, n) - y * horner(u, d), true)
            }
            Stage::Certificate { n, d, law } => {
                let unit = ten::<Jet>(law.output_exponent);
                let load = inside / exact(law.load_scale);
                let gap = if law.gives_output {
                    let u = horner(load, &law.coefficients) * unit;
                    horner(u, n) - y * horner(u, d)
                } else {
                    horner(network_inverse(n, d, y) / unit, &law.coefficients) - load
                };
                (gap, true)
            }
            Stage::Thermometer { n, d, element, heat, supply } => {
                let ohms = (y * d[0] - n[0]) / (n[1] - y * d[1]);
                let celsius = match heat {
                    Some(heat) => inside + heat.kelvin(ohms, *supply),
                    None => inside,
                };
                thermometer(element, celsius, ohms)
            }
            Stage::Thermocouple { function, millivolts, junction } => {
                let joins: [f64; MOST_JOINS] = {
                    let mut all = [f64::INFINITY; MOST_JOINS];
                    for (slot, join) in all.iter_mut().zip(function.joins()) {
                        *slot = join;
                    }
                    all
                };
                let known = joins.iter().take_while(|j| j.is_finite()).count();
                let (emf, smooth) =
                    over_pieces(inside, joins.get(..known).unwrap_or(&[]), |t| function.millivolts_from_celsius(t));
                (emf - *junction - y * *millivolts, smooth)
            }
        };
        Gap { value, smooth }
    }
}

/// More joins than any reference function has.
const MOST_JOINS: usize = 8;

/// G of a thermometer at its own temperature and resistance.
fn thermometer(element: &Element<Jet>, celsius: Jet, ohms: Jet) -> (Jet, bool) {
    let kelvin = celsius + exact(ICE_KELVIN);
    let one = exact(1.0);
    match element {
        Element::Standard { triple_point_ohms, deviation } => {
            let join: &[f64] = if matches!(deviation, Deviation::MercuryToGallium { .. }) { &[0.01] } else { &[] };
            let (reference, one_piece) = over_pieces(celsius, join, |t| deviation.reference_ratio(t));
            let w = ohms / *triple_point_ohms;
            let aluminium = match deviation {
                Deviation::ToSilver { w_aluminium, .. } => [w_aluminium.value()],
                _ => [f64::INFINITY],
            };
            let (off, smooth) = over_pieces(w, &aluminium, |w| deviation.at(w));
            (reference - (w - off), one_piece && smooth)
        }
        Element::Thermistor(Law::SteinhartHart(k)) => (k.inverse_kelvin(ohms.ln()) - one / kelvin, true),
        Element::Thermistor(Law::ReciprocalOfTemperature(k)) => {
            (horner((ohms / k.reference_ohms).ln(), &[k.a, k.b, k.c, k.d]) - one / kelvin, true)
        }
        Element::Thermistor(Law::Points(points)) => {
            let mut joins = [0.0; crate::thermistor::MOST_POINTS];
            let mut count = 0;
            for (slot, (celsius, _)) in joins.iter_mut().zip(points.points()) {
                *slot = celsius;
                count += 1;
            }
            // the ends are no joins
            let inner = joins.get(1..count - 1).unwrap_or(&[]);
            let (law, smooth) = over_pieces(celsius, inner, |t| points.ohms_from_celsius(t));
            (law - ohms, smooth)
        }
        Element::Platinum(_) | Element::Metal(_) => {
            let (law, smooth) = over_pieces(celsius, &[0.0], |t| element.ohms_from_celsius(t));
            (law - ohms, smooth)
        }
        _ => (element.ohms_from_celsius(celsius) - ohms, true),
    }
}

impl Chain<Jet> {
    /// N(e) = y D(e) of a gauge, every temperature being known.
    fn enclosed_gauge(
        &self,
        bridge: &Bridge<Jet>,
        gauge: &Gauge<Jet>,
        zero: &Zero<Jet>,
        sides: &Sides<Jet>,
        warm: Jet,
    ) -> Result<Stage, Error> {
        let tau = gauge.tau();
        let settled = self.settle(bridge, gauge.has_thermal().then_some(&tau), zero)?;
        let (c, on) = bridge.drive();
        let [f0, f1] = gauge.factor_line();
        let common = self.celsius(gauge, sides.celsius)?;
        let nought = exact(0.0);
        // δ = c (F(T) e + x₀) + t (τ(T) − τ(T₀)), T of the arm
        let (mut slope, mut rest) = ([nought; 4], [nought; 4]);
        let arms = slope.iter_mut().zip(&mut rest).zip(c.iter().zip(on)).zip(settled.tau_at_zero).enumerate();
        for (i, (((slope, rest), (c, on)), tau_at_zero)) in arms {
            let t = self.arm_celsius(i, gauge, sides, common, on)?;
            *slope = *c * (f0 + f1 * t);
            *rest = *c * settled.x0;
            if gauge.has_thermal() && on == 1.0 {
                *rest = *rest + tau.at(t) - tau_at_zero;
            }
        }
        let forms = settled.bridge.with_leads_times(warm).expand(&self.amplifier);
        Ok(Stage::Ratio {
            n: fold(&forms.numerator, &rest, &slope),
            d: fold(&forms.denominator, &rest, &slope),
            unit: exact(1.0),
        })
    }
}

//! The chain forwards, over any number type: which reading does this quantity give?

use super::polynomial::{Arms, solve};
use super::{Chain, Element, Network, Output, Signal, Supply, Temperature};
use crate::Error;
use crate::math::{Double, Real};
use crate::signal::{Arm, Bridge};
use crate::strain::{Gauge, Tau, Transducer, Zero, ZeroMeaning, ZeroReading};

/// y = k · reading + m, where y is output over supply (or ohms); per volt of supply when that comes in a column.
pub(super) struct Line<R> {
    pub(super) k: R,
    pub(super) m: R,
}

/// A gauge bridge with its zero worked in.
pub(super) struct Settled<R> {
    /// Its leads as stated: the state of a reading multiplies them.
    pub(super) bridge: Bridge<R>,
    /// What the zero leaves in the driven arms.
    pub(super) x0: R,
    /// τ(T) of each arm is `tau` there less this.
    pub(super) tau_at_zero: [R; 4],
}

/// What comes with a quantity besides the chain, over any number type; `None` where the chain does not use it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Sides<R = f64> {
    /// Supply, in the unit of its column.
    pub supply: Option<R>,
    /// Temperature of the gauge, °C.
    pub celsius: Option<R>,
    /// Temperature of the leads, °C.
    pub lead_celsius: Option<R>,
    /// Temperatures of arms 1-4, °C.
    pub arm_celsius: [Option<R>; 4],
}

impl<R> Default for Sides<R> {
    fn default() -> Self {
        Self { supply: None, celsius: None, lead_celsius: None, arm_celsius: [const { None }; 4] }
    }
}

/// Ten to a power in any number type, correctly rounded in each.
pub(super) fn ten<R: Real>(exponent: i8) -> R {
    let magnitude = Double::power_of_ten(exponent.saturating_abs());
    let r = R::from_f64(magnitude.value());
    if exponent < 0 { R::from_f64(1.0) / r } else { r }
}

impl<R: Real> Chain<R> {
    /// The straight line between reading and network output.
    pub(super) fn line(&self) -> Result<Line<R>, Error> {
        let mut k = ten::<R>(self.reading.exponent);
        let mut m = R::from_f64(0.0);
        if let Some(converter) = &self.converter {
            // V = (code − zero code) · FS / codes
            k = k * converter.full_scale() / R::from_f64(converter.codes());
            m = -R::from_f64(converter.zero_code()) * k;
        }
        if matches!(self.network, Network::Direct) || self.reading.signal == Signal::Ohms {
            return Ok(Line { k, m });
        }
        // in = (out − offset) / gain
        let offset = self.amplifier.offset();
        let gain = self.amplifier.block_gain();
        if matches!(self.network, Network::Emf) {
            return Ok(Line { k: k / gain, m: (m - offset) / gain });
        }
        let supply = match self.supply {
            Supply::Fixed(v) => Some(v),
            Supply::Column { .. } => Some(R::from_f64(1.0)),
            Supply::None => None,
        };
        if self.is_ratiometric() {
            // an offset of 0 counts too: what is not known of it does not vanish with its value
            match self.supply {
                Supply::Fixed(v) => m = m - offset / v,
                _ if offset.value() != 0.0 => {
                    return Err(Error::Missing {
                        what: "the one supply voltage that the amplifier's offset is referred to",
                    });
                }
                _ => {}
            }
            return Ok(Line { k: k / gain, m: m / gain });
        }
        let supply = supply.ok_or(Error::Missing { what: "the supply that the volts belong to" })?;
        Ok(Line { k: k / (gain * supply), m: (m - offset) / (gain * supply) })
    }

    /// Works the zero into the bridge: x₀, or another resistance.
    pub(super) fn settle(&self, bridge: &Bridge<R>, tau: Option<&Tau<R>>, zero: &Zero<R>) -> Result<Settled<R>, Error> {
        let nought = R::from_f64(0.0);
        let mut tau_at_zero = [nought; 4];
        if let Some(tau) = tau {
            let arms = tau_at_zero.iter_mut().zip(&bridge.arms);
            let gauges = arms
                .zip(self.arm_temperatures.iter().zip(&zero.arm_celsius))
                .filter(|((_, arm), _)| !matches!(arm, Arm::Fixed));
            for ((slot, _), (own, at)) in gauges {
                let t0 = match own {
                    Temperature::None => zero.celsius,
                    // an arm of one temperature has it at zero too, unless stated otherwise
                    Temperature::Fixed(t) => at.or(Some(*t)),
                    Temperature::Column => *at,
                };
                *slot = tau
                    .at(t0.ok_or(Error::Missing { what: "the temperature at zero that thermal output counts from" })?);
            }
        }
        // balancing and the zero reading saw the leads as they were then
        let then = self.lead_factor_at_zero(zero);
        let cold = bridge.with_leads_times(then).with_balance_settled();
        let mut settled = Settled {
            bridge: Bridge {
                leads: bridge.leads,
                supply_leads: bridge.supply_leads,
                signal_leads: bridge.signal_leads,
                ..cold
            },
            x0: nought,
            tau_at_zero,
        };
        let Some(reading) = zero.reading else { return Ok(settled) };
        let y = match reading {
            ZeroReading::Ratio(y) => y,
            ZeroReading::AsRecorded(r) => {
                if self.needs_supply_column() {
                    return Err(Error::Missing { what: "a zero as output over supply (the supply varies)" });
                }
                let line = self.line()?;
                line.k * r + line.m
            }
        };
        // the zero was read before any shunt was connected
        let cold = Bridge { shunt: None, ..cold };
        let (c, _) = cold.drive();
        let arms = Arms::new(cold.expand(&self.amplifier), c, [0.0; 4]);
        match zero.meaning {
            ZeroMeaning::Strain => {
                let (n, d) = arms.at(nought);
                settled.x0 =
                    solve(&n, &d, y).ok_or(Error::Unfit { what: "no strain of this bridge gives the zero reading" })?;
            }
            ZeroMeaning::Resistance => {
                let mut driven = bridge.arms.iter().enumerate().filter(|(_, a)| matches!(a, Arm::Active { .. }));
                let (Some((index, Arm::Active { .. })), None) = (driven.next(), driven.next()) else {
                    return Err(Error::Unfit {
                        what: "a zero by the gauge's own resistance needs exactly one gauge in the bridge",
                    });
                };
                // x = x₀ exactly where only this arm is off
                let x = arms.single(index, y);
                if let Some(r) = settled.bridge.resistances.get_mut(index) {
                    *r = *r * (R::from_f64(1.0) + x);
                }
            }
            ZeroMeaning::Completion => {
                let [_, second, _, _] = bridge.arms;
                if !matches!(second, Arm::Fixed) {
                    return Err(Error::Unfit {
                        what: "a zero by completion needs a fixed resistor in arm 2, and this arm is a gauge",
                    });
                }
                let x = arms.single(1, y);
                settled.bridge.resistances[1] = settled.bridge.resistances[1] * (R::from_f64(1.0) + x);
            }
        }
        for r in settled.bridge.resistances {
            crate::signal::positive("bridge resistance that the zero reading asks for", "ohm", r)?;
        }
        Ok(settled)
    }

    /// The arm that is the thermometer.
    pub(super) fn sensor_arm(bridge: &Bridge<R>) -> Result<usize, Error> {
        let mut active = bridge.arms.iter().enumerate().filter(|(_, a)| !matches!(a, Arm::Fixed));
        match (active.next(), active.next()) {
            (Some((index, Arm::Active { .. })), None) => Ok(index),
            _ => Err(Error::Unfit {
                what: "a thermometer bridge has its sensor in one arm and fixed resistors in the others",
            }),
        }
    }

    /// Returns the reading that a quantity gives, over any number type.
    ///
    /// - `quantity`: in the unit of the output.
    /// - `sides`: what comes with the reading, where the chain uses it.
    ///
    /// For plain numbers [`Plan::forward`](super::Plan::forward) is the one that counts: same equations, correctly
    /// rounded coefficients.
    ///
    /// # Errors
    /// `Error::Missing` for an input that the chain needs, `Error::Unfit` for stages that do not fit together.
    pub fn forward(&self, quantity: R, sides: &Sides<R>) -> Result<R, Error> {
        let line = self.line()?;
        let warm = match &self.lead_warmth {
            Some(w) if self.needs_lead_temperature() => {
                w.factor(sides.lead_celsius.ok_or(Error::Missing { what: "the temperature of the leads" })?)
            }
            _ => self.fixed_lead_factor(),
        };
        let y = match (&self.element, &self.network) {
            (Element::Direct { scale, offset }, _) => (quantity - *offset) / *scale,
            (Element::Gauge { gauge, zero, .. }, Network::Bridge(bridge)) => {
                let t = self.celsius(gauge, sides.celsius)?;
                let tau = gauge.tau();
                let settled = self.settle(bridge, gauge.has_thermal().then_some(&tau), zero)?;
                let (c, on) = bridge.drive();
                let [f0, f1] = gauge.factor_line();
                let e = self.inside(quantity);
                // δ = c (F(T) e + x₀) + t (τ(T) − τ(T₀)), T of the arm
                let mut delta = [R::from_f64(0.0); 4];
                for (i, slot) in delta.iter_mut().enumerate() {
                    let at = |all: &[R; 4]| all.get(i).copied().unwrap_or(R::from_f64(0.0));
                    let t = self.arm_celsius(i, gauge, sides, t, on.get(i).copied().unwrap_or(0.0))?;
                    let driven = at(&c) * ((f0 + f1 * t) * e + settled.x0);
                    *slot = if gauge.has_thermal() && on.get(i) == Some(&1.0) {
                        driven + tau.at(t) - at(&settled.tau_at_zero)
                    } else {
                        driven
                    };
                }
                let part = settled.bridge.with_leads_times(warm).transfer(&self.amplifier, delta);
                part.numerator / part.denominator
            }
            (Element::Transducer { law, zero, .. }, Network::Bridge(bridge)) => {
                let settled = self.settle(bridge, None, zero)?;
                let u = settled.x0
                    + match law {
                        Transducer::Rated { output, capacity } => quantity / *capacity * *output,
                        Transducer::Certificate(k) => {
                            k.output(quantity / R::from_f64(k.load_scale)) * ten(k.output_exponent)
                        }
                    };
                let (c, _) = bridge.drive();
                let part = settled.bridge.with_leads_times(warm).transfer(&self.amplifier, c.map(|c| c * u));
                part.numerator / part.denominator
            }
            (Element::Thermocouple(kind), _) => {
                let f = kind.function();
                let junction = self.junction(sides.celsius)?;
                let mv = f.millivolts_from_celsius(self.inside(quantity)) - f.millivolts_from_celsius(junction);
                mv / R::from_f64(1e3)
            }
            (element, network) if element.is_thermometer() => {
                let t = match self.heat(warm)? {
                    Some(heat) => element.warmed(self.inside(quantity), |ohms| heat.kelvin(ohms, sides.supply))?,
                    None => self.inside(quantity),
                };
                let ([p0, p1], [q0, q1]) = self.around.moebius();
                let ohms = element.ohms_from_celsius(t);
                let path = (p0 + p1 * ohms) / (q0 + q1 * ohms);
                let ([n0, n1], [d0, d1]) = network.moebius(&self.amplifier, warm)?;
                (n0 + n1 * path) / (d0 + d1 * path)
            }
            _ => return Err(Error::Unfit { what: "strain gauges are read through a bridge" }),
        };
        let y = match (self.needs_supply_column(), self.supply) {
            (true, Supply::Column { exponent }) => {
                y * sides.supply.ok_or(Error::Missing { what: "the supply of this reading" })? * ten(exponent)
            }
            _ => y,
        };
        Ok((y - line.m) / line.k)
    }

    /// The temperature of one arm, where `common` is that of the gauge and `on` says whether the arm feels it (1).
    pub(super) fn arm_celsius(
        &self,
        arm: usize,
        gauge: &Gauge<R>,
        sides: &Sides<R>,
        common: R,
        on: f64,
    ) -> Result<R, Error> {
        match self.arm_temperatures.get(arm) {
            Some(Temperature::Fixed(own)) => Ok(*own),
            Some(Temperature::Column) if gauge.needs_temperature() => {
                match sides.arm_celsius.get(arm).copied().flatten() {
                    Some(t) => Ok(t),
                    None if on == 0.0 => Ok(common),
                    None => Err(Error::Missing { what: "the temperature of an arm" }),
                }
            }
            _ => Ok(common),
        }
    }

    /// Scale and offset of the result: outside = scale · inside + offset, inside in plain strain along the grid or °C.
    pub(super) fn scale(&self) -> (R, R) {
        let (scale, offset) = self.output.scale::<R>();
        match &self.transverse {
            Some(transverse) => (scale * transverse.factor(), offset),
            None => (scale, offset),
        }
    }

    fn inside(&self, outside: R) -> R {
        let (scale, offset) = self.scale();
        (outside - offset) / scale
    }

    /// The temperature of the gauge.
    ///
    /// Where no value depends on it, because the slope of the gauge factor is 0, the derivative with respect to that
    /// slope still does: it is taken at the temperature that is stated, or at the reference temperature.
    pub(super) fn celsius(&self, gauge: &Gauge<R>, column: Option<R>) -> Result<R, Error> {
        // arms that all have temperatures of their own leave no use for that of the gauge
        let needed = self.needs_temperature();
        let stated = match self.temperature {
            Temperature::Fixed(t) => Some(t),
            Temperature::Column => column.filter(|t| needed || t.value().is_finite()),
            Temperature::None => None,
        };
        match (stated, self.temperature) {
            (Some(t), _) => Ok(t),
            (None, _) if !needed => Ok(gauge.reference_celsius),
            (None, Temperature::Column) => Err(Error::Missing { what: "the temperature of this reading" }),
            (None, _) => Err(Error::Missing { what: "the temperature of the gauge" }),
        }
    }
}

impl Chain {
    /// Returns output over supply (or the resistance that was read) behind converter and amplifier: the number whose
    /// mean over a window is a zero.
    ///
    /// # Errors
    /// `Error::Missing` for a supply that the chain needs and lacks.
    pub fn network_output(&self, inputs: &super::Inputs) -> Result<f64, Error> {
        let line = self.line()?;
        let y = line.k * inputs.reading + line.m;
        Ok(match self.supply {
            Supply::Column { exponent } if self.needs_supply_column() => y / (inputs.supply * ten::<f64>(exponent)),
            _ => y,
        })
    }
}

impl<R: Real> Network<R> {
    /// y = (n₀ + n₁ R)/(d₀ + d₁ R) for a sensor of R Ω.
    pub(super) fn moebius(
        &self,
        amplifier: &crate::signal::Amplifier<R>,
        lead_factor: R,
    ) -> Result<([R; 2], [R; 2]), Error> {
        let (zero, one) = (R::from_f64(0.0), R::from_f64(1.0));
        let shift = |(n, d): ([R; 2], [R; 2]), by: R| ([n[0] + n[1] * by, n[1]], [d[0] + d[1] * by, d[1]]);
        Ok(match self {
            Self::Resistance { leads } => {
                shift(([zero, one], [one, zero]), leads.map_or(zero, |l| l.times(lead_factor).excess_ohms()))
            }
            Self::Reference { ohms, leads } => {
                shift(([zero, one], [*ohms, zero]), leads.map_or(zero, |l| l.times(lead_factor).excess_ohms()))
            }
            Self::Divider { divider, leads } => {
                shift(divider.moebius(), leads.map_or(zero, |l| l.times(lead_factor).excess_ohms()))
            }
            Self::Bridge(bridge) => {
                let index = Chain::sensor_arm(bridge)?;
                let bridge = bridge.with_leads_times(lead_factor).with_balance_settled();
                let arms = Arms::new(bridge.expand(amplifier), [zero; 4], [0.0; 4]);
                let (n, d) = arms.along(index);
                // δ = R/R₀ − 1
                let r0 = bridge.resistances.get(index).copied().unwrap_or(one);
                ([n[0] - n[1], n[1] / r0], [d[0] - d[1], d[1] / r0])
            }
            // millivolts in volts
            Self::Emf => ([zero, one], [R::from_f64(1e3), zero]),
            Self::Direct => ([zero, one], [one, zero]),
        })
    }
}

impl Output {
    /// The quantity inside the chain, plain strain or °C, as scale and offset: inside = (outside − offset) / scale.
    pub(super) fn scale<R: Real>(self) -> (R, R) {
        let (zero, one) = (R::from_f64(0.0), R::from_f64(1.0));
        match self {
            Self::Strain { exponent } => (ten(exponent), zero),
            // γ = 2 e
            Self::ShearStrain { exponent } => (ten::<R>(exponent) * R::from_f64(2.0), zero),
            Self::Celsius | Self::AsRead => (one, zero),
            // T/K = t/°C + 273.15
            Self::Kelvin => (one, R::from_f64(273.15)),
            // t/°F = 9/5 t/°C + 32
            Self::Fahrenheit => (R::from_f64(9.0) / R::from_f64(5.0), R::from_f64(32.0)),
        }
    }
}

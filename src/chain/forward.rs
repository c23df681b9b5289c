//! The chain forwards, over any number type: which reading does this quantity give?

use super::polynomial::{Arms, solve};
use super::{Chain, Element, Network, Output, Signal, Supply, Temperature};
use crate::Error;
use crate::math::{Double, Real};
use crate::signal::{Arm, Bridge, Wires};
use crate::strain::{Gauge, Zero, ZeroMeaning, ZeroReading};

/// y = k · reading + m, where y is output over supply (or ohms); per volt of supply when that comes in a column.
pub(super) struct Line<R> {
    pub(super) k: R,
    pub(super) m: R,
}

/// A gauge bridge with its zero worked in.
pub(super) struct Settled<R> {
    pub(super) bridge: Bridge<R>,
    /// What the zero leaves in the driven arms.
    pub(super) x0: R,
    /// τ(T) as a polynomial in °C.
    pub(super) tau: [R; 7],
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
                    return Err(Error::Missing { what: "one supply voltage, to refer the amplifier's offset to" });
                }
                _ => {}
            }
            return Ok(Line { k: k / gain, m: m / gain });
        }
        let supply = supply.ok_or(Error::Missing { what: "the supply that the volts belong to" })?;
        Ok(Line { k: k / (gain * supply), m: (m - offset) / (gain * supply) })
    }

    /// Works the zero into the bridge: x₀, or another resistance.
    pub(super) fn settle(&self, bridge: &Bridge<R>, gauge: &Gauge<R>, zero: &Zero<R>) -> Result<Settled<R>, Error> {
        let nought = R::from_f64(0.0);
        let tau = if gauge.has_thermal() {
            let t0 =
                zero.celsius.ok_or(Error::Missing { what: "the temperature at zero, which thermal output needs" })?;
            gauge.thermal_polynomial(t0)
        } else {
            [nought; 7]
        };
        let mut settled = Settled { bridge: *bridge, x0: nought, tau };
        let Some(reading) = zero.reading else { return Ok(settled) };
        let y = match reading {
            ZeroReading::Ratio(y) => y,
            ZeroReading::AsRecorded(r) => {
                if self.needs_supply_column() {
                    return Err(Error::Missing {
                        what: "a zero reading as output over supply, since the supply varies",
                    });
                }
                let line = self.line()?;
                line.k * r + line.m
            }
        };
        let (c, _) = bridge.drive();
        let arms = Arms::new(bridge.expand(&self.amplifier), c, [0.0; 4]);
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
                let mut whole = bridge.resistances[1];
                if let Some(leads) = &bridge.leads
                    && leads.wires == Wires::Two
                    && bridge.balanced
                {
                    whole = whole + leads.excess_ohms();
                }
                settled.bridge.resistances[1] = whole * (R::from_f64(1.0) + x);
                settled.bridge.balanced = false;
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
    /// - `supply`: with a supply column, in its unit; otherwise ignored.
    /// - `celsius`: with a temperature column; otherwise ignored.
    ///
    /// For plain numbers [`Plan::forward`](super::Plan::forward) is the one that counts: same equations, correctly
    /// rounded coefficients.
    ///
    /// # Errors
    /// `Error::Missing` for an input that the chain needs, `Error::Unfit` for stages that do not fit together.
    pub fn forward(&self, quantity: R, supply: Option<R>, celsius: Option<R>) -> Result<R, Error> {
        let line = self.line()?;
        let y = match (&self.element, &self.network) {
            (Element::Direct { scale, offset }, _) => (quantity - *offset) / *scale,
            (Element::Gauge { gauge, zero, .. }, Network::Bridge(bridge)) => {
                let t = self.celsius(gauge, celsius)?;
                let settled = self.settle(bridge, gauge, zero)?;
                let (c, on) = bridge.drive();
                let [f0, f1] = gauge.factor_line();
                // δ = c (F(T) e + x₀) + t τ(T)
                let u = (f0 + f1 * t) * self.output.to_internal(quantity) + settled.x0;
                let tau = crate::math::horner(t, &settled.tau);
                let [c1, c2, c3, c4] = c;
                let [t1, t2, t3, t4] = on.map(R::from_f64);
                let part = settled.bridge.transfer(
                    &self.amplifier,
                    [c1 * u + t1 * tau, c2 * u + t2 * tau, c3 * u + t3 * tau, c4 * u + t4 * tau],
                );
                part.numerator / part.denominator
            }
            (Element::Platinum(_) | Element::Thermistor(_), network) => {
                let t = self.output.to_internal(quantity);
                let ohms = match &self.element {
                    Element::Platinum(k) => k.ohms_from_celsius(t),
                    Element::Thermistor(law) => law.ohms_from_celsius(t),
                    Element::Gauge { .. } | Element::Direct { .. } => t,
                };
                network.ratio_from_ohms(&self.amplifier, ohms)?
            }
            _ => return Err(Error::Unfit { what: "strain gauges are read through a bridge" }),
        };
        let y = match (self.needs_supply_column(), self.supply) {
            (true, Supply::Column { exponent }) => {
                y * supply.ok_or(Error::Missing { what: "the supply of this reading" })? * ten(exponent)
            }
            _ => y,
        };
        Ok((y - line.m) / line.k)
    }

    /// The temperature of the gauge.
    ///
    /// Where no value depends on it, because the slope of the gauge factor is 0, the derivative with respect to that
    /// slope still does: it is taken at the temperature that is stated, or at the reference temperature.
    fn celsius(&self, gauge: &Gauge<R>, column: Option<R>) -> Result<R, Error> {
        let needed = gauge.needs_temperature();
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
    /// Output over supply (or ohms read) for a sensor of this resistance.
    fn ratio_from_ohms(&self, amplifier: &crate::signal::Amplifier<R>, ohms: R) -> Result<R, Error> {
        let ([n0, n1], [d0, d1]) = self.moebius(amplifier)?;
        Ok((n0 + n1 * ohms) / (d0 + d1 * ohms))
    }

    /// y = (n₀ + n₁ R)/(d₀ + d₁ R) for a sensor of R Ω.
    pub(super) fn moebius(&self, amplifier: &crate::signal::Amplifier<R>) -> Result<([R; 2], [R; 2]), Error> {
        let (zero, one) = (R::from_f64(0.0), R::from_f64(1.0));
        let shift = |(n, d): ([R; 2], [R; 2]), by: R| ([n[0] + n[1] * by, n[1]], [d[0] + d[1] * by, d[1]]);
        Ok(match self {
            Self::Resistance { leads } => {
                shift(([zero, one], [one, zero]), leads.as_ref().map_or(zero, crate::signal::Leads::excess_ohms))
            }
            Self::Divider { divider, leads } => {
                shift(divider.moebius(), leads.as_ref().map_or(zero, crate::signal::Leads::excess_ohms))
            }
            Self::Bridge(bridge) => {
                let index = Chain::sensor_arm(bridge)?;
                let arms = Arms::new(bridge.expand(amplifier), [zero; 4], [0.0; 4]);
                let (n, d) = arms.along(index);
                // δ = R/R₀ − 1
                let r0 = bridge.resistances.get(index).copied().unwrap_or(one);
                ([n[0] - n[1], n[1] / r0], [d[0] - d[1], d[1] / r0])
            }
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

    fn to_internal<R: Real>(self, outside: R) -> R {
        let (scale, offset) = self.scale::<R>();
        (outside - offset) / scale
    }
}

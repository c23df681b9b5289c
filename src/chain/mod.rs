//! One reading ⇄ one quantity: the chain in words, the plan that runs it, and its derivatives.
//!
//! A [`Chain`] says what was wired. [`Chain::plan`] lowers it once, in twice the working precision, to a [`Plan`] of a
//! few kernels; every value comes from the plan. The chain itself runs over any [`Real`] number type, which gives
//! derivatives with respect to every [`Parameter`].

mod derivative;
mod dispatch;
mod faces;
mod forward;
mod kernel;
mod lower;
mod parameter;
mod plan;
mod polynomial;
mod word;

pub use crate::math::{Dual, Real};
pub use derivative::Derivative;
pub use parameter::Parameter;
pub use plan::{Batch, Columns, Inputs, Limit, Outcome, Plan};
pub use word::Word;

use crate::Error;
use crate::platinum::Coefficients;
use crate::signal::{Amplifier, Bridge, Converter, Divider, FullScale, Leads, positive};
use crate::strain::{Gauge, Zero};
use crate::thermistor::Law;

/// What kind of number was recorded.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
#[non_exhaustive]
pub enum Signal {
    /// Volts.
    Volts,
    /// Volts per volt of supply.
    Ratio,
    /// Ohms.
    Ohms,
    /// Converter codes.
    Count,
    /// The wanted quantity itself.
    Quantity,
}

/// The unit of the readings: a kind and a power of ten (mV/V is `Ratio` with −3).
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct Reading {
    /// The kind.
    pub signal: Signal,
    /// Power of ten of the unit, −15..=15.
    pub exponent: i8,
}

/// What drives the network.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
#[non_exhaustive]
pub enum Supply<R = f64> {
    /// Not needed: the reading is a ratio or a resistance.
    None,
    /// One value for all readings, V; A for a current source.
    Fixed(R),
    /// One value with every reading, in a unit that is this power of ten of V or A.
    Column {
        /// Power of ten of the unit.
        exponent: i8,
    },
}

/// The circuit between sensor and output.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
#[non_exhaustive]
#[allow(clippy::large_enum_variant, reason = "plain data of one size, with no allocator to box it")]
pub enum Network<R = f64> {
    /// A bridge.
    Bridge(Bridge<R>),
    /// The instrument reads ohms, or volts at a known current (the supply).
    Resistance {
        /// Lead wires; `None` = negligible.
        leads: Option<Leads<R>>,
    },
    /// A voltage divider.
    Divider {
        /// The circuit.
        divider: Divider<R>,
        /// Lead wires of the sensor; `None` = negligible.
        leads: Option<Leads<R>>,
    },
    /// None: the reading is the quantity.
    Direct,
}

/// What turns resistance into the wanted quantity.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
#[non_exhaustive]
#[allow(clippy::large_enum_variant, reason = "plain data of one size, with no allocator to box it")]
pub enum Element<R = f64> {
    /// Strain gauges in the driven arms.
    Gauge {
        /// The gauge.
        gauge: Gauge<R>,
        /// Its zero.
        zero: Zero<R>,
        /// Largest |strain| that is believed.
        limit: f64,
    },
    /// A platinum thermometer.
    Platinum(Coefficients<R>),
    /// A thermistor.
    Thermistor(Law<R>),
    /// Nothing: value = scale · reading + offset.
    Direct {
        /// Scale.
        scale: R,
        /// Offset.
        offset: R,
    },
}

/// Where the temperature of a gauge comes from.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
#[non_exhaustive]
pub enum Temperature<R = f64> {
    /// It is not needed.
    None,
    /// One value for all readings, °C.
    Fixed(R),
    /// One value with every reading, °C.
    Column,
}

/// The unit of the result.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
#[non_exhaustive]
pub enum Output {
    /// Strain e in a unit of 10^−`exponent` m/m: 6 = microstrain, 2 = percent.
    Strain {
        /// Power of ten that the plain strain is multiplied by.
        exponent: i8,
    },
    /// Shear strain γ = 2 e in the same units.
    ShearStrain {
        /// Power of ten that the plain strain is multiplied by.
        exponent: i8,
    },
    /// Temperature, °C.
    Celsius,
    /// Temperature, K.
    Kelvin,
    /// Temperature, °F.
    Fahrenheit,
    /// The quantity as it was read, after scale and offset.
    AsRead,
}

/// One measuring chain, as it was wired.
///
/// Plain data: nothing is checked until [`plan`](Self::plan). The number type `R` is `f64` for a chain that one states;
/// [`map`](Self::map) gives the same chain over another.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct Chain<R = f64> {
    /// Unit of the readings.
    pub reading: Reading,
    /// Converter, when counts were recorded.
    pub converter: Option<Converter<R>>,
    /// Amplifier.
    pub amplifier: Amplifier<R>,
    /// What drives the network.
    pub supply: Supply<R>,
    /// The circuit.
    pub network: Network<R>,
    /// The sensor.
    pub element: Element<R>,
    /// Temperature of a gauge.
    pub temperature: Temperature<R>,
    /// Unit of the result.
    pub output: Output,
    /// Whether laws are used outside their range; such results carry the word `extrapolated`.
    pub extrapolate: bool,
    /// Readings below this are not believed; closed limits in the unit of the readings.
    pub low_limit: Option<Limit>,
    /// Readings above this are not believed.
    pub high_limit: Option<Limit>,
}

/// Largest |strain| that is believed unless another limit is set.
pub const STRAIN_LIMIT: f64 = 0.1;

impl<R: Real> Chain<R> {
    /// Returns a chain of this network and element; the reading is V/V for a bridge or divider, ohms for a resistance,
    /// and the result microstrain or °C.
    #[must_use]
    pub fn new(network: Network<R>, element: Element<R>) -> Self {
        let signal = match network {
            Network::Bridge(_) | Network::Divider { .. } => Signal::Ratio,
            Network::Resistance { .. } => Signal::Ohms,
            Network::Direct => Signal::Quantity,
        };
        let output = match element {
            Element::Gauge { .. } => Output::Strain { exponent: 6 },
            Element::Platinum(_) | Element::Thermistor(_) => Output::Celsius,
            Element::Direct { .. } => Output::AsRead,
        };
        Self {
            reading: Reading { signal, exponent: 0 },
            converter: None,
            amplifier: Amplifier::None,
            supply: Supply::None,
            network,
            element,
            temperature: Temperature::None,
            output,
            extrapolate: false,
            low_limit: None,
            high_limit: None,
        }
    }

    /// Returns whether the reading is a ratio to the supply already.
    pub(crate) fn is_ratiometric(&self) -> bool {
        match self.converter {
            Some(converter) => converter.full_scale_is_supply(),
            None => self.reading.signal == Signal::Ratio,
        }
    }

    /// Returns whether the result depends on the temperature of the gauge.
    #[must_use]
    pub fn needs_temperature(&self) -> bool {
        matches!(&self.element, Element::Gauge { gauge, .. } if gauge.needs_temperature())
    }

    /// Returns whether every reading comes with its own supply.
    #[must_use]
    pub fn needs_supply_column(&self) -> bool {
        matches!(self.supply, Supply::Column { .. }) && !self.is_ratiometric() && self.reading.signal != Signal::Ohms
    }

    /// Visits every parameter under its stable name and returns the chain over the values that `f` gives.
    pub fn map<S: Real>(&self, mut f: impl FnMut(Parameter, R) -> S) -> Chain<S> {
        let f = &mut f;
        Chain {
            reading: self.reading,
            converter: self.converter.map(|c| c.map(f)),
            amplifier: self.amplifier.map(f),
            supply: match self.supply {
                Supply::None => Supply::None,
                Supply::Fixed(v) => Supply::Fixed(f(Parameter::Supply, v)),
                Supply::Column { exponent } => Supply::Column { exponent },
            },
            network: match &self.network {
                Network::Bridge(bridge) => Network::Bridge(bridge.map(f)),
                Network::Resistance { leads } => Network::Resistance { leads: leads.map(|l| l.map(f)) },
                Network::Divider { divider, leads } => {
                    Network::Divider { divider: divider.map(f), leads: leads.map(|l| l.map(f)) }
                }
                Network::Direct => Network::Direct,
            },
            element: match &self.element {
                Element::Gauge { gauge, zero, limit } => {
                    Element::Gauge { gauge: gauge.map(f), zero: zero.map(f), limit: *limit }
                }
                Element::Platinum(k) => Element::Platinum(k.map(f)),
                Element::Thermistor(law) => Element::Thermistor(law.map(f)),
                Element::Direct { scale, offset } => {
                    Element::Direct { scale: f(Parameter::Scale, *scale), offset: f(Parameter::ScaleOffset, *offset) }
                }
            },
            temperature: match self.temperature {
                Temperature::None => Temperature::None,
                Temperature::Fixed(t) => Temperature::Fixed(f(Parameter::Temperature, t)),
                Temperature::Column => Temperature::Column,
            },
            output: self.output,
            extrapolate: self.extrapolate,
            low_limit: self.low_limit,
            high_limit: self.high_limit,
        }
    }

    /// Checks that the stages fit together and every constant is usable.
    fn check(&self) -> Result<(), Error> {
        if self.reading.exponent.unsigned_abs() > 15 {
            return Err(Error::OutOfRange {
                what: "power of ten of the reading",
                value: f64::from(self.reading.exponent),
                min: -15.0,
                max: 15.0,
                unit: "",
            });
        }
        let counts = self.reading.signal == Signal::Count;
        match &self.converter {
            Some(converter) if counts => converter.check()?,
            Some(_) => {
                return Err(Error::Unfit {
                    what: "a converter turns counts into volts, but the readings are no counts",
                });
            }
            None if counts => return Err(Error::Missing { what: "the converter that the counts come from" }),
            None => {}
        }
        self.amplifier.check()?;
        match &self.network {
            Network::Bridge(bridge) => bridge.check()?,
            Network::Resistance { leads } => {
                leads.as_ref().map_or(Ok(()), Leads::check)?;
            }
            Network::Divider { divider, leads } => {
                divider.check()?;
                leads.as_ref().map_or(Ok(()), Leads::check)?;
                if leads.is_some_and(|l| l.wires == crate::signal::Wires::Three) {
                    return Err(Error::Unfit {
                        what: "a divider cannot compensate leads: its sensor has two or four wires",
                    });
                }
            }
            Network::Direct => {}
        }
        if !matches!(self.network, Network::Bridge(_)) && matches!(self.amplifier, Amplifier::Difference { .. }) {
            return Err(Error::Unfit { what: "a difference amplifier needs a bridge before it" });
        }
        match (&self.element, self.reading.signal, &self.network) {
            (Element::Direct { scale, offset }, _, Network::Direct) => {
                crate::signal::finite("scale", *scale)?;
                crate::signal::finite("scale offset", *offset)?;
                if scale.value() == 0.0 {
                    return Err(Error::Unfit { what: "a scale of 0 loses the reading" });
                }
            }
            (Element::Direct { .. }, ..) | (.., Network::Direct) => {
                return Err(Error::Unfit {
                    what: "a reading that is the quantity itself needs no network and no sensor",
                });
            }
            (_, Signal::Quantity, _) => {
                return Err(Error::Unfit { what: "a reading in the wanted unit needs no sensor" });
            }
            (Element::Gauge { .. }, _, Network::Resistance { .. } | Network::Divider { .. }) => {
                return Err(Error::Unfit { what: "strain gauges are read through a bridge" });
            }
            (Element::Gauge { .. }, Signal::Ohms, _) => {
                return Err(Error::Unfit { what: "a bridge gives volts or a ratio, not ohms" });
            }
            (
                Element::Platinum(_) | Element::Thermistor(_),
                Signal::Ohms,
                Network::Bridge(_) | Network::Divider { .. },
            ) => {
                return Err(Error::Unfit { what: "this circuit gives volts or a ratio, not ohms" });
            }
            _ => {}
        }
        match &self.element {
            Element::Gauge { gauge, zero, limit } => {
                gauge.check()?;
                zero.check()?;
                crate::Range::new("largest believed strain", "", f64::MIN_POSITIVE, 1.0).check(*limit)?;
            }
            Element::Platinum(k) => k.check()?,
            Element::Thermistor(law) => law.check()?,
            Element::Direct { .. } => {}
        }
        if let Supply::Fixed(v) = self.supply {
            positive("supply", "V", v)?;
        }
        if let Temperature::Fixed(t) = self.temperature {
            crate::signal::finite("temperature", t)?;
        }
        let fits = match self.output {
            Output::Strain { .. } | Output::ShearStrain { .. } => matches!(self.element, Element::Gauge { .. }),
            Output::Celsius | Output::Kelvin | Output::Fahrenheit => {
                matches!(self.element, Element::Platinum(_) | Element::Thermistor(_))
            }
            Output::AsRead => matches!(self.element, Element::Direct { .. }),
        };
        if fits { Ok(()) } else { Err(Error::Unfit { what: "the unit of the result does not belong to this sensor" }) }
    }
}

impl<R> Converter<R> {
    pub(crate) const fn full_scale_is_supply(&self) -> bool {
        matches!(self.full_scale, FullScale::Supply)
    }
}

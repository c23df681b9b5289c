//! One reading ⇄ one quantity: the chain in words, the plan that runs it, and its derivatives.
//!
//! A [`Chain`] says what was wired. [`Chain::plan`] lowers it once, in twice the working precision, to a [`Plan`] of a
//! few kernels; every value comes from the plan. The chain itself runs over any [`Real`] number type, which gives
//! derivatives with respect to every [`Parameter`].

mod back;
mod broken;
mod derivative;
mod dispatch;
#[cfg(feature = "std")]
pub(crate) mod enclosure;
mod faces;
mod forward;
mod kernel;
mod law;
mod live;
mod lower;
mod plan;
mod polynomial;
mod short;
mod shunt;
mod stage;
mod thermometer;
mod why;

pub use crate::math::{Dual, Real};
pub use crate::parameter::Parameter;
pub use crate::word::Word;
pub use derivative::Derivative;
pub use forward::Sides;
#[cfg(feature = "capi")]
pub(crate) use plan::Way;
pub use plan::{Batch, Columns, Inputs, Outcome, Plan};
pub use stage::Limit;
pub use thermometer::SelfHeating;

use crate::Error;
use crate::metal;
use crate::platinum::its90::Deviation;
use crate::platinum::{AlphaDeltaBeta, Coefficients};
use crate::signal::{Amplifier, Arm, Around, Bridge, Converter, Divider, Driven, FullScale, Leads, positive};
use crate::strain::{Gauge, Transducer, Transverse, Zero};
use crate::thermistor::Law;
use crate::thermocouple::Thermocouple;

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
    /// A thermometer and a resistor in series with it, whose voltages are compared: the reading is the voltage of the
    /// thermometer, the supply that of the resistor.
    Reference {
        /// The resistor, Ω.
        ohms: R,
        /// Lead wires; `None` = negligible.
        leads: Option<Leads<R>>,
    },
    /// The sensor's own voltage.
    Emf,
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
    /// A transducer: a full bridge whose arms change by ± its output over supply.
    Transducer {
        /// What turns output into load.
        law: Transducer<R>,
        /// Its reading without load.
        zero: Zero<R>,
        /// Largest |load| that is believed, in the unit of the result.
        limit: f64,
    },
    /// A platinum thermometer.
    Platinum(Coefficients<R>),
    /// A platinum thermometer whose curve is stated in Callendar's letters.
    AlphaDeltaBeta(AlphaDeltaBeta<R>),
    /// A standard platinum thermometer of ITS-90, by its certificate.
    Standard {
        /// Resistance at the triple point of water, Ω.
        triple_point_ohms: R,
        /// Deviation function of a subrange.
        deviation: Deviation<R>,
    },
    /// A nickel or copper thermometer.
    Metal(metal::Law<R>),
    /// A thermistor.
    Thermistor(Law<R>),
    /// A thermocouple; the chain's temperature is that of its reference junction.
    Thermocouple(Thermocouple),
    /// Nothing: value = scale · reading + offset.
    Direct {
        /// Scale.
        scale: R,
        /// Offset.
        offset: R,
    },
}

/// Where the temperature of a gauge, or of a thermocouple's reference junction, comes from.
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

impl<R: Real> Temperature<R> {
    fn map<S: Real>(&self, name: Parameter, f: &mut impl FnMut(Parameter, R) -> S) -> Temperature<S> {
        match *self {
            Self::None => Temperature::None,
            Self::Fixed(t) => Temperature::Fixed(f(name, t)),
            Self::Column => Temperature::Column,
        }
    }
}

/// How lead wires change with temperature: r = r₀ [1 + α (T − T_ref)].
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct LeadWarmth<R = f64> {
    /// Temperature coefficient α, 1/K.
    pub coefficient: R,
    /// Temperature T_ref at which the resistances are stated, °C.
    pub reference_celsius: R,
    /// Temperature of the leads; `Temperature::None` is refused.
    pub temperature: Temperature<R>,
}

impl<R: Real> LeadWarmth<R> {
    /// What the resistances are multiplied by at this temperature.
    pub(crate) fn factor(&self, celsius: R) -> R {
        R::from_f64(1.0) + self.coefficient * (celsius - self.reference_celsius)
    }
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
    /// Temperature of a gauge, or of a thermocouple's reference junction.
    pub temperature: Temperature<R>,
    /// Temperature of arms 1-4 where an arm has its own; `Temperature::None` = as the gauge.
    pub arm_temperatures: [Temperature<R>; 4],
    /// What temperature does to the leads; `None` = their resistances hold as stated.
    pub lead_warmth: Option<LeadWarmth<R>>,
    /// Resistors beside a thermometer.
    pub around: Around<R>,
    /// What the current that reads a thermometer does to it; `None` = nothing.
    pub self_heating: Option<SelfHeating<R>>,
    /// Transverse sensitivity of a single grid; `None` = none, or left to a rosette.
    pub transverse: Option<Transverse<R>>,
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
            Network::Bridge(_) | Network::Divider { .. } | Network::Reference { .. } => Signal::Ratio,
            Network::Emf => Signal::Volts,
            Network::Resistance { .. } => Signal::Ohms,
            Network::Direct => Signal::Quantity,
        };
        let output = match element {
            Element::Gauge { .. } => Output::Strain { exponent: 6 },
            Element::Direct { .. } | Element::Transducer { .. } => Output::AsRead,
            _ => Output::Celsius,
        };
        Self {
            reading: Reading { signal, exponent: 0 },
            converter: None,
            amplifier: Amplifier::None,
            supply: Supply::None,
            network,
            element,
            temperature: Temperature::None,
            arm_temperatures: [const { Temperature::None }; 4],
            lead_warmth: None,
            around: Around::NONE,
            self_heating: None,
            transverse: None,
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

    /// Returns whether the result depends on the temperature of the gauge (of an arm that has none of its own), or of a
    /// thermocouple's reference junction.
    #[must_use]
    pub fn needs_temperature(&self) -> bool {
        if matches!(self.element, Element::Thermocouple(_)) {
            return true;
        }
        let (Element::Gauge { gauge, .. }, Network::Bridge(bridge)) = (&self.element, &self.network) else {
            return false;
        };
        gauge.needs_temperature()
            && bridge
                .arms
                .iter()
                .zip(&self.arm_temperatures)
                .any(|(arm, own)| !matches!(arm, Arm::Fixed) && matches!(own, Temperature::None))
    }

    /// Returns whether the leads' temperature comes with every reading.
    #[must_use]
    pub fn needs_lead_temperature(&self) -> bool {
        let has_leads = match &self.network {
            Network::Bridge(bridge) => bridge.has_leads(),
            // four wires leave nothing to be taken off
            Network::Resistance { leads } | Network::Divider { leads, .. } | Network::Reference { leads, .. } => {
                leads.is_some_and(|l| l.wires != crate::signal::Wires::Four)
            }
            Network::Emf | Network::Direct => false,
        };
        has_leads && matches!(self.lead_warmth, Some(LeadWarmth { temperature: Temperature::Column, .. }))
    }

    /// Returns which arms have a temperature that comes with every reading.
    #[must_use]
    pub fn needs_arm_temperatures(&self) -> [bool; 4] {
        let (Element::Gauge { gauge, .. }, Network::Bridge(bridge)) = (&self.element, &self.network) else {
            return [false; 4];
        };
        let mut needed = bridge.arms.map(|arm| gauge.needs_temperature() && !matches!(arm, Arm::Fixed));
        for (needed, own) in needed.iter_mut().zip(&self.arm_temperatures) {
            *needed &= matches!(own, Temperature::Column);
        }
        needed
    }

    /// What the leads are multiplied by at zero.
    pub(crate) fn lead_factor_at_zero(&self, zero: &Zero<R>) -> R {
        let Some(warmth) = &self.lead_warmth else { return R::from_f64(1.0) };
        match (zero.lead_celsius, warmth.temperature) {
            (Some(t), _) | (None, Temperature::Fixed(t)) => warmth.factor(t),
            _ => R::from_f64(1.0),
        }
    }

    /// What the leads are multiplied by where their temperature is one value.
    pub(crate) fn fixed_lead_factor(&self) -> R {
        match &self.lead_warmth {
            Some(LeadWarmth { temperature: Temperature::Fixed(t), .. }) => {
                self.lead_warmth.as_ref().map_or(R::from_f64(1.0), |w| w.factor(*t))
            }
            _ => R::from_f64(1.0),
        }
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
                Network::Reference { ohms, leads } => {
                    Network::Reference { ohms: f(Parameter::ReferenceResistor, *ohms), leads: leads.map(|l| l.map(f)) }
                }
                Network::Emf => Network::Emf,
                Network::Direct => Network::Direct,
            },
            element: match &self.element {
                Element::Gauge { gauge, zero, limit } => {
                    Element::Gauge { gauge: gauge.map(f), zero: zero.map(f), limit: *limit }
                }
                Element::Transducer { law, zero, limit } => {
                    Element::Transducer { law: law.map(f), zero: zero.map(f), limit: *limit }
                }
                Element::Platinum(k) => Element::Platinum(k.map(f)),
                Element::AlphaDeltaBeta(k) => Element::AlphaDeltaBeta(k.map(f)),
                Element::Standard { triple_point_ohms, deviation } => {
                    let triple_point_ohms = f(Parameter::TriplePoint, *triple_point_ohms);
                    let mut n = 0;
                    let deviation = deviation.map(|k| {
                        n += 1;
                        f(Parameter::Deviation(n), k)
                    });
                    Element::Standard { triple_point_ohms, deviation }
                }
                Element::Metal(law) => Element::Metal(law.map(f)),
                Element::Thermistor(law) => Element::Thermistor(law.map(f)),
                Element::Thermocouple(kind) => Element::Thermocouple(*kind),
                Element::Direct { scale, offset } => {
                    Element::Direct { scale: f(Parameter::Scale, *scale), offset: f(Parameter::ScaleOffset, *offset) }
                }
            },
            temperature: {
                let name = match self.element {
                    Element::Thermocouple(_) => Parameter::ReferenceJunction,
                    _ => Parameter::Temperature,
                };
                self.temperature.map(name, f)
            },
            arm_temperatures: {
                let mut n = 0;
                self.arm_temperatures.map(|t| {
                    n += 1;
                    t.map(Parameter::ArmTemperature(n), f)
                })
            },
            lead_warmth: self.lead_warmth.map(|w| LeadWarmth {
                coefficient: f(Parameter::LeadCoefficient, w.coefficient),
                reference_celsius: f(Parameter::LeadReference, w.reference_celsius),
                temperature: w.temperature.map(Parameter::LeadTemperature, f),
            }),
            around: self.around.map(f),
            self_heating: self.self_heating.map(|h| h.map(f)),
            transverse: self.transverse.map(|t| t.map(f)),
            output: self.output,
            extrapolate: self.extrapolate,
            low_limit: self.low_limit,
            high_limit: self.high_limit,
        }
    }

    /// Checks that the stages fit together and every constant is usable.
    #[inline(never)]
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
            Network::Reference { ohms, leads } => {
                positive("reference resistor", "ohm", *ohms)?;
                leads.as_ref().map_or(Ok(()), Leads::check)?;
            }
            Network::Emf | Network::Direct => {}
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
            (
                Element::Gauge { .. } | Element::Transducer { .. },
                _,
                Network::Resistance { .. } | Network::Divider { .. } | Network::Reference { .. } | Network::Emf,
            ) => {
                return Err(Error::Unfit { what: "strain gauges are read through a bridge" });
            }
            (Element::Gauge { .. } | Element::Transducer { .. }, Signal::Ohms, _) => {
                return Err(Error::Unfit { what: "a bridge gives volts or a ratio, not ohms" });
            }
            (Element::Thermocouple(_), signal, network)
                if !matches!(network, Network::Emf) || signal == Signal::Ohms || self.is_ratiometric() =>
            {
                return Err(Error::Unfit { what: "a thermocouple is read as its own voltage" });
            }
            (Element::Thermocouple(_), ..) => {}
            (.., Network::Emf) => {
                return Err(Error::Unfit { what: "this sensor has no voltage of its own" });
            }
            (_, Signal::Ohms, Network::Bridge(_) | Network::Divider { .. } | Network::Reference { .. }) => {
                return Err(Error::Unfit { what: "this circuit gives volts or a ratio, not ohms" });
            }
            _ => {}
        }
        self.check_thermometer()?;
        match &self.element {
            Element::Gauge { gauge, zero, limit } => {
                gauge.check()?;
                zero.check()?;
                crate::Range::new("largest believed strain", "", f64::MIN_POSITIVE, 1.0).check(*limit)?;
            }
            Element::Transducer { law, zero, limit } => {
                law.check()?;
                zero.check()?;
                positive("largest believed load", "", *limit)?;
                if zero.meaning != crate::strain::ZeroMeaning::Strain {
                    return Err(Error::Unfit { what: "the zero of a transducer is its reading without load" });
                }
            }
            Element::Platinum(k) => k.check()?,
            Element::AlphaDeltaBeta(k) => {
                positive("coefficient alpha", "1/K", k.alpha)?;
                Coefficients::from(*k).check()?;
            }
            Element::Standard { triple_point_ohms, deviation } => {
                positive("resistance at the triple point of water", "ohm", *triple_point_ohms)?;
                deviation.map(Real::value).check()?;
            }
            Element::Metal(law) => law.map(&mut |_, v| v.value()).check()?,
            Element::Thermistor(law) => law.check()?,
            Element::Thermocouple(_) | Element::Direct { .. } => {}
        }
        if let Some(transverse) = &self.transverse {
            transverse.check()?;
            if !matches!(self.element, Element::Gauge { .. }) {
                return Err(Error::Unfit { what: "transverse sensitivity belongs to strain gauges" });
            }
            if let Network::Bridge(bridge) = &self.network
                && bridge.arms.iter().any(|arm| matches!(arm, Arm::Active { driven: Driven::Across, .. }))
            {
                return Err(Error::Unfit {
                    what: "one strain ratio does not fit gauges along and across the strain: their transverse \
                           sensitivity cannot be taken off",
                });
            }
        }
        if let Some(warmth) = &self.lead_warmth {
            crate::signal::finite("temperature coefficient of the leads", warmth.coefficient)?;
            crate::signal::finite("reference temperature of the leads", warmth.reference_celsius)?;
            match warmth.temperature {
                Temperature::None => return Err(Error::Missing { what: "the temperature of the leads" }),
                Temperature::Fixed(t) => {
                    positive("resistance of the leads at their temperature", "", warmth.factor(t))?
                }
                Temperature::Column => {}
            }
            if let Element::Gauge { zero, .. } | Element::Transducer { zero, .. } = &self.element
                && let Some(t) = zero.lead_celsius
            {
                positive("resistance of the leads at their temperature at zero", "", warmth.factor(t))?;
            }
        }
        for t in &self.arm_temperatures {
            if let Temperature::Fixed(t) = t {
                crate::signal::finite("temperature of an arm", *t)?;
            }
        }
        if [self.low_limit, self.high_limit].into_iter().flatten().any(|limit| limit.at.is_nan()) {
            return Err(Error::NotFinite { what: "limit of the readings" });
        }
        // beyond a limit there is no number, so its word must be one without
        if [self.low_limit, self.high_limit].into_iter().flatten().any(|limit| limit.word.has_number()) {
            return Err(Error::Unfit { what: "the word of a limit must be one that stands beside no number" });
        }
        if let (Some(low), Some(high)) = (&self.low_limit, &self.high_limit)
            && low.at.value() >= high.at.value()
        {
            return Err(Error::Unfit { what: "the lower limit of the readings is not below the upper one" });
        }
        if let Supply::Fixed(v) = self.supply {
            positive("supply", "V", v)?;
        }
        if let Temperature::Fixed(t) = self.temperature {
            crate::signal::finite("temperature", t)?;
        }
        let fits = match self.output {
            Output::Strain { .. } | Output::ShearStrain { .. } => matches!(self.element, Element::Gauge { .. }),
            Output::Celsius | Output::Kelvin | Output::Fahrenheit => self.element.is_thermometer(),
            Output::AsRead => matches!(self.element, Element::Direct { .. } | Element::Transducer { .. }),
        };
        if fits { Ok(()) } else { Err(Error::Unfit { what: "the unit of the result does not belong to this sensor" }) }
    }
}

impl<R> Converter<R> {
    pub(crate) const fn full_scale_is_supply(&self) -> bool {
        matches!(self.full_scale, FullScale::Supply)
    }
}

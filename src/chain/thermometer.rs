//! What is particular to thermometers: their laws over any number type, and the heat of the current that reads them.

use super::forward::ten;
use super::{Chain, Element, Network, Supply, Temperature};
use crate::Error;
use crate::math::{MOST_STEPS, Real};
use crate::parameter::Parameter;
use crate::platinum::Coefficients;
use crate::signal::{Side, not_negative, positive};

/// A thermometer that the current which reads it makes warmer than what it measures: T = t(R) − κ i² R.
///
/// IEC 60751:2008 limits the effect for a thermometer; κ is stated for the medium and flow in which it was measured.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct SelfHeating<R = f64> {
    /// κ, K/W: 1 K/mW is 1000 K/W.
    pub kelvin_per_watt: R,
    /// The current, A, where the circuit does not say it: an instrument that reads ohms, or a ratio alone.
    pub amperes: Option<R>,
}

impl<R: Real> SelfHeating<R> {
    pub(super) fn map<S: Real>(&self, f: &mut impl FnMut(Parameter, R) -> S) -> SelfHeating<S> {
        SelfHeating {
            kelvin_per_watt: f(Parameter::SelfHeating, self.kelvin_per_watt),
            amperes: self.amperes.map(|i| f(Parameter::MeasuringCurrent, i)),
        }
    }
}

/// ΔT = κ i² R with i = s a/(b + c R), s the supply that comes with the reading.
#[derive(Clone, Copy, Debug)]
pub(super) struct Heat<R> {
    pub(super) kelvin_per_watt: R,
    pub(super) a: R,
    pub(super) b: R,
    pub(super) c: R,
    pub(super) by_supply: bool,
}

impl<R: Real> Heat<R> {
    pub(super) fn kelvin(&self, ohms: R, supply: Option<R>) -> R {
        let s = supply.filter(|_| self.by_supply).unwrap_or(R::from_f64(1.0));
        let i = s * self.a / (self.b + self.c * ohms);
        self.kelvin_per_watt * i * i * ohms
    }
}

impl<R: Real> Element<R> {
    /// Returns whether this is a thermometer.
    #[must_use]
    pub const fn is_thermometer(&self) -> bool {
        !matches!(self, Self::Gauge { .. } | Self::Transducer { .. } | Self::Direct { .. })
    }

    /// Returns the lowest and highest temperature of a thermometer's law, °C; `None` for what is no thermometer.
    #[must_use]
    pub fn range_celsius(&self) -> Option<[f64; 2]> {
        Some(match self {
            Self::Platinum(k) => k.range_celsius,
            Self::AlphaDeltaBeta(k) => k.range_celsius,
            Self::Standard { deviation, .. } => deviation.range_celsius(),
            Self::Metal(law) => law.range_celsius(),
            Self::Thermistor(law) => law.range_celsius(),
            Self::Thermocouple(kind) => {
                let range = kind.celsius_range();
                [range.min, range.max]
            }
            Self::Gauge { .. } | Self::Transducer { .. } | Self::Direct { .. } => return None,
        })
    }

    /// Resistance of a resistance thermometer, Ω.
    pub(crate) fn ohms_from_celsius(&self, t: R) -> R {
        match self {
            Self::Platinum(k) => k.ohms_from_celsius(t),
            Self::AlphaDeltaBeta(k) => Coefficients::from(*k).ohms_from_celsius(t),
            Self::Standard { triple_point_ohms, deviation } => *triple_point_ohms * deviation.ratio_from_celsius(t),
            Self::Metal(law) => law.ohms_from_celsius(t),
            Self::Thermistor(law) => law.ohms_from_celsius(t),
            Self::Thermocouple(_) | Self::Gauge { .. } | Self::Transducer { .. } | Self::Direct { .. } => t,
        }
    }

    /// The temperature of the thermometer itself where what it measures has this one: t = T + ΔT(R(t)).
    pub(super) fn warmed(&self, celsius: R, heat: impl Fn(R) -> R) -> Result<R, Error> {
        let excess = |t: R| t - heat(self.ohms_from_celsius(t)) - celsius;
        // a central difference: the heat is a small and smooth part
        let slope = |t: f64| {
            let h = 1e-5 * (1.0 + t.abs());
            let at = |t: f64| excess(R::from_f64(t)).value();
            (at(t + h) - at(t - h)) / (2.0 * h)
        };
        let mut t = celsius.value();
        for _ in 0..STEPS {
            let next = t - excess(R::from_f64(t)).value() / slope(t);
            let moved = (next - t).abs();
            t = next;
            if moved <= 1e-13 * (1.0 + t.abs()) {
                break;
            }
        }
        let fixed = R::from_f64(t);
        let rest = excess(fixed);
        if rest.value().is_nan() || rest.value().abs() > 1e-9 * (1.0 + t.abs()) {
            return Err(Error::Unfit { what: "the thermometer warms itself without end in this circuit" });
        }
        // one more step in the number type of the caller carries what it carries
        Ok(fixed - rest / R::from_f64(slope(t)))
    }
}

/// What warms a thermometer where no current is stated.
const SUPPLY: &str = "the supply, or the current that warms the thermometer";

/// Steps towards the temperature of a thermometer that warms itself; a few do, unless it runs away.
const STEPS: usize = MOST_STEPS;

impl<R: Real> Chain<R> {
    /// The temperature of a thermocouple's reference junction.
    pub(super) fn junction(&self, column: Option<R>) -> Result<R, Error> {
        match self.temperature {
            Temperature::Fixed(t) => Some(t),
            Temperature::Column => column,
            Temperature::None => None,
        }
        .ok_or(Error::Missing { what: "the temperature of the reference junction" })
    }

    /// What the current that reads a thermometer does to it; `warm` multiplies the leads.
    pub(super) fn heat(&self, warm: R) -> Result<Option<Heat<R>>, Error> {
        let Some(SelfHeating { kelvin_per_watt, amperes }) = self.self_heating else { return Ok(None) };
        let (zero, one) = (R::from_f64(0.0), R::from_f64(1.0));
        // through the path: i = s a/(b + c N), N its resistance without leads
        let excess = |leads: &Option<crate::signal::Leads<R>>| leads.map_or(zero, |l| l.times(warm).excess_ohms());
        // through the path: i = s a/(b + c N), N its resistance without leads
        let ((a, by_supply), b, c) = match (&self.network, amperes) {
            (_, Some(i)) => ((i, false), one, zero),
            (Network::Resistance { .. }, None) => (self.source("the current that warms the thermometer")?, one, zero),
            (Network::Reference { ohms, .. }, None) => (self.source(SUPPLY)?, *ohms, zero),
            (Network::Divider { divider, leads }, None) => {
                let g = divider.input_resistance.map_or(zero, |r| one / r);
                // the node carries the load: i = V/(R_f + N (1 + R_f g)), and (1 + R_f g) times that from the high side
                let c = one + divider.fixed * g;
                let (v, by_supply) = self.source(SUPPLY)?;
                let a = if divider.sensor == Side::High { v * c } else { v };
                ((a, by_supply), divider.fixed + c * excess(leads), c)
            }
            (Network::Bridge(bridge), None) => {
                let (v, by_supply) = self.source(SUPPLY)?;
                let index = Chain::sensor_arm(bridge)?;
                let settled = bridge.with_leads_times(warm).with_balance_settled();
                let (current, [b, c]) = settled.arm_current(&self.amplifier, index);
                ((v * current, by_supply), b, c)
            }
            (Network::Emf | Network::Direct, None) => {
                return Err(Error::Unfit { what: "only the current through a resistance thermometer warms it" });
            }
        };
        // N = R_s + R/(1 + G R), and of its current the thermometer takes 1/(1 + G R)
        let (p, q) = self.around.moebius();
        Ok(Some(Heat { kelvin_per_watt, a, b: b * q[0] + c * p[0], c: b * q[1] + c * p[1], by_supply }))
    }

    /// The supply in V or A: one value, or what its column is multiplied by.
    fn source(&self, what: &'static str) -> Result<(R, bool), Error> {
        match self.supply {
            Supply::Fixed(v) => Ok((v, false)),
            Supply::Column { exponent } if self.needs_supply_column() => Ok((ten(exponent), true)),
            _ => Err(Error::Missing { what }),
        }
    }

    /// Checks what only thermometers have.
    pub(super) fn check_thermometer(&self) -> Result<(), Error> {
        let resistive = self.element.is_thermometer() && !matches!(self.element, Element::Thermocouple(_));
        self.around.check()?;
        if !self.around.is_none() && !resistive {
            return Err(Error::Unfit { what: "resistors beside the sensor belong to resistance thermometers" });
        }
        if let Some(heating) = &self.self_heating {
            not_negative("self-heating", "K/W", heating.kelvin_per_watt)?;
            heating.amperes.map_or(Ok(()), |i| positive("current through the thermometer", "A", i))?;
            if !resistive {
                return Err(Error::Unfit { what: "only the current through a resistance thermometer warms it" });
            }
            if self.needs_lead_temperature()
                && !matches!(self.network, Network::Resistance { .. })
                && heating.amperes.is_none()
            {
                return Err(Error::Unfit {
                    what: "self-heating behind leads of changing temperature needs the current to be stated",
                });
            }
            self.heat(R::from_f64(1.0))?;
        }
        if let (Element::Thermocouple(kind), Temperature::Fixed(t)) = (&self.element, self.temperature) {
            kind.celsius_range().check(t.value())?;
        }
        let endless = matches!(
            self.element,
            Element::Thermocouple(_)
                | Element::Standard { .. }
                | Element::Thermistor(crate::thermistor::Law::Points(_))
        );
        if self.extrapolate && endless {
            return Err(Error::Unfit {
                what: "this sensor's law says nothing outside its range: it cannot be extrapolated",
            });
        }
        Ok(())
    }
}

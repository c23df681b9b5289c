//! Lead wires of one sensor.

use super::{not_negative, positive};
use crate::Error;
use crate::math::Real;
use crate::parameter::Parameter;

/// Resistivity of annealed copper at 20 °C, Ω·m: 1/58 Ω·mm²/m (IEC 60028:1925, international annealed copper standard).
pub const COPPER_OHM_METRES: f64 = 1.0 / 58.0e6;

/// Temperature coefficient of the resistance of annealed copper at 20 °C, 1/K (IEC 60028:1925).
pub const COPPER_PER_KELVIN: f64 = 0.00393;

/// Returns the cross-section of a solid wire of the American wire gauge, mm².
///
/// - `number`: gauge number, −3 (for 4/0) ..= 40.
///
/// d = 0.127 mm · 92^((36 − n)/39).
///
/// # Errors
/// `Error::OutOfRange` outside −3..=40.
/// # Source
/// ASTM B258; the published ohms per length are checked in tests/lead_wires.rs.
pub fn awg_square_millimetres(number: i8) -> Result<f64, Error> {
    crate::Range::new("American wire gauge", "", -3.0, 40.0).check(f64::from(number))?;
    let diameter = 0.127 * libm::pow(92.0, (36.0 - f64::from(number)) / 39.0);
    Ok(core::f64::consts::PI / 4.0 * diameter * diameter)
}

/// How many conductors go to the sensor.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
#[non_exhaustive]
pub enum Wires {
    /// Both conductors are in series with the sensor.
    Two,
    /// One conductor in each of two adjacent arms, the third in series with the output.
    Three,
    /// Current and potential have their own pairs: nothing is in series with the sensor.
    Four,
}

/// One conductor, one way.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
#[non_exhaustive]
pub enum Conductor<R = f64> {
    /// Its resistance, Ω.
    Ohms(R),
    /// Its run: R = ρ l / A.
    Run {
        /// One-way length, m.
        metres: R,
        /// Cross-section, mm².
        square_millimetres: R,
        /// Resistivity, Ω·m.
        ohm_metres: R,
    },
}

impl<R: Real> Conductor<R> {
    /// Returns the resistance of this conductor, Ω.
    #[must_use]
    pub fn ohms(&self) -> R {
        match *self {
            Self::Ohms(r) => r,
            // R = ρ l / A
            Self::Run { metres, square_millimetres, ohm_metres } => {
                ohm_metres * R::from_f64(1e6) * metres / square_millimetres
            }
        }
    }

    /// Returns the same conductor with its resistance multiplied.
    fn times(&self, factor: R) -> Self {
        match *self {
            Self::Ohms(r) => Self::Ohms(r * factor),
            Self::Run { metres, square_millimetres, ohm_metres } => {
                Self::Run { metres, square_millimetres, ohm_metres: ohm_metres * factor }
            }
        }
    }

    fn check(&self) -> Result<(), Error> {
        match *self {
            Self::Ohms(r) => not_negative("lead resistance", "ohm", r),
            Self::Run { metres, square_millimetres, ohm_metres } => {
                not_negative("lead length", "m", metres)?;
                positive("lead cross-section", "mm2", square_millimetres)?;
                positive("lead resistivity", "ohm m", ohm_metres)
            }
        }
    }

    fn map<S: Real>(&self, n: u8, f: &mut impl FnMut(Parameter, R) -> S) -> Conductor<S> {
        match *self {
            Self::Ohms(r) => Conductor::Ohms(f(Parameter::Lead(n), r)),
            Self::Run { metres, square_millimetres, ohm_metres } => Conductor::Run {
                metres: f(Parameter::LeadLength(n), metres),
                square_millimetres: f(Parameter::LeadArea(n), square_millimetres),
                ohm_metres: f(Parameter::LeadResistivity(n), ohm_metres),
            },
        }
    }
}

/// The conductors of one sensor.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
#[non_exhaustive]
pub enum Each<R = f64> {
    /// All alike: one value, one error.
    Same(Conductor<R>),
    /// Each its own; the third is used with three wires only.
    Own([Conductor<R>; 3]),
}

/// Lead wires: how many, and what each conductor is.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct Leads<R = f64> {
    /// Number of conductors.
    pub wires: Wires,
    /// The conductors.
    pub each: Each<R>,
}

impl<R: Real> Leads<R> {
    /// Returns the resistances of the three conductors, Ω.
    #[must_use]
    pub fn ohms(&self) -> [R; 3] {
        match &self.each {
            Each::Same(c) => [c.ohms(); 3],
            Each::Own([a, b, c]) => [a.ohms(), b.ohms(), c.ohms()],
        }
    }

    /// Returns the same leads with their resistances multiplied, as warming does.
    pub(crate) fn times(&self, factor: R) -> Self {
        let each = match &self.each {
            Each::Same(c) => Each::Same(c.times(factor)),
            Each::Own(all) => Each::Own(all.map(|c| c.times(factor))),
        };
        Self { wires: self.wires, each }
    }

    /// Returns what the leads add to a resistance reading, Ω: both when two-wire, the difference of the first two when
    /// three-wire, nothing when four-wire.
    #[must_use]
    pub fn excess_ohms(&self) -> R {
        let [a, b, _] = self.ohms();
        match self.wires {
            Wires::Two => a + b,
            Wires::Three => a - b,
            Wires::Four => R::from_f64(0.0),
        }
    }

    pub(crate) fn check(&self) -> Result<(), Error> {
        match &self.each {
            Each::Same(c) => c.check(),
            Each::Own(all) => all.iter().try_for_each(Conductor::check),
        }
    }

    pub(crate) fn map<S: Real>(&self, f: &mut impl FnMut(Parameter, R) -> S) -> Leads<S> {
        Leads {
            wires: self.wires,
            each: match &self.each {
                Each::Same(c) => Each::Same(c.map(0, f)),
                Each::Own([a, b, c]) => Each::Own([a.map(1, f), b.map(2, f), c.map(3, f)]),
            },
        }
    }
}

/// The two leads of a pair, Ω.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
#[non_exhaustive]
pub enum Pair<R = f64> {
    /// Both alike: one value, one error.
    Same(R),
    /// Each its own: positive and negative supply, or the leads of the nodes between arms 1-2 and 3-4.
    Own([R; 2]),
    /// Both alike, by what the conductor is.
    Run(Conductor<R>),
}

impl<R: Real> Pair<R> {
    /// Returns leads without resistance.
    #[must_use]
    pub fn none() -> Self {
        Self::Same(R::from_f64(0.0))
    }

    /// Returns both resistances, Ω.
    #[must_use]
    pub fn ohms(&self) -> [R; 2] {
        match *self {
            Self::Same(r) => [r; 2],
            Self::Own(both) => both,
            Self::Run(c) => [c.ohms(); 2],
        }
    }

    /// Returns the same pair with its resistances multiplied, as warming does.
    pub(crate) fn times(&self, factor: R) -> Self {
        match self {
            Self::Same(r) => Self::Same(*r * factor),
            Self::Own([a, b]) => Self::Own([*a * factor, *b * factor]),
            Self::Run(c) => Self::Run(c.times(factor)),
        }
    }

    pub(crate) fn check(&self, what: &'static str) -> Result<(), Error> {
        self.ohms().iter().try_for_each(|r| not_negative(what, "ohm", *r))
    }

    pub(crate) fn map<S: Real>(&self, name: fn(u8) -> Parameter, f: &mut impl FnMut(Parameter, R) -> S) -> Pair<S> {
        match *self {
            Self::Same(r) => Pair::Same(f(name(0), r)),
            Self::Own([a, b]) => Pair::Own([f(name(1), a), f(name(2), b)]),
            Self::Run(c) => Pair::Run(c.map(0, f)),
        }
    }
}

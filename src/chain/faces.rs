//! Typed faces: quantities in, quantities out.

use uom::si::electric_potential::volt;
use uom::si::electrical_resistance::ohm;
use uom::si::f64::{ElectricPotential, ElectricalResistance, Ratio, ThermodynamicTemperature};
use uom::si::ratio::ratio;
use uom::si::thermodynamic_temperature::degree_celsius;

use super::{Chain, Element, Inputs, Network, Output, Plan, Reading, Signal, Supply, Temperature};
use crate::quantity::Strain;
use crate::signal::Bridge;
use crate::strain::{Gauge, Zero};
use crate::{Error, chain::STRAIN_LIMIT};

impl Chain {
    /// Returns a chain of strain gauges in a bridge, for readings as a ratio to the supply.
    #[must_use]
    pub fn strain(bridge: Bridge, gauge: Gauge) -> Self {
        Self::new(Network::Bridge(bridge), Element::Gauge { gauge, zero: Zero::default(), limit: STRAIN_LIMIT })
    }

    /// Returns the chain for readings in volts at this supply.
    #[must_use]
    pub fn volts_at(mut self, supply: ElectricPotential) -> Self {
        self.supply = Supply::Fixed(supply.get::<volt>());
        self.reading = Reading { signal: Signal::Volts, exponent: 0 };
        self
    }

    /// Returns the chain with the gauge at this temperature.
    #[must_use]
    pub fn at_temperature(mut self, temperature: ThermodynamicTemperature) -> Self {
        self.temperature = Temperature::Fixed(temperature.get::<degree_celsius>());
        self
    }

    /// Returns the chain with this zero.
    #[must_use]
    pub fn zeroed(mut self, new: Zero) -> Self {
        if let Element::Gauge { zero, .. } = &mut self.element {
            *zero = new;
        }
        self
    }

    /// Returns a typed face of the chain's strain: readings in volts, results as [`Strain`].
    ///
    /// # Errors
    /// As [`plan`](Self::plan).
    pub fn strain_meter(&self) -> Result<StrainMeter, Error> {
        let plain = Self { output: Output::Strain { exponent: 0 }, ..*self };
        Ok(StrainMeter(plain.plan()?))
    }
}

/// A lowered chain whose results are strains.
///
/// For a chain with neither supply nor temperature column; those need [`Plan::one`] and [`Plan::slice`].
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct StrainMeter(Plan);

impl StrainMeter {
    /// Returns the strain at this output voltage; for a chain that reads volts.
    ///
    /// # Errors
    /// `Error::Flagged` with the word that says why there is no strain.
    pub fn strain(&self, output: ElectricPotential) -> Result<Strain, Error> {
        self.0.one(Inputs::from(output.get::<volt>())).number().map(Strain::from_strain)
    }

    /// Returns the strain at this ratio of output to supply; for a chain that reads a ratio.
    ///
    /// # Errors
    /// `Error::Flagged` with the word that says why there is no strain.
    pub fn strain_from_ratio(&self, output: Ratio) -> Result<Strain, Error> {
        self.0.one(Inputs::from(output.get::<ratio>())).number().map(Strain::from_strain)
    }

    /// Returns the output voltage that this strain gives; for a chain that reads volts.
    ///
    /// # Errors
    /// `Error::Flagged` when the strain is beyond what the chain believes.
    pub fn output(&self, strain: Strain) -> Result<ElectricPotential, Error> {
        self.0.forward(strain.strain(), Inputs::default()).map(ElectricPotential::new::<volt>)
    }
}

impl Bridge {
    /// Returns a bridge with one gauge of this resistance in arm 1.
    #[must_use]
    pub fn quarter(gauge: ElectricalResistance) -> Self {
        Self::one_gauge(gauge.get::<ohm>())
    }

    /// Returns the bridge with a three-wire gauge whose conductors have this resistance each.
    #[must_use]
    pub fn three_wire(mut self, each: ElectricalResistance) -> Self {
        self.leads = Some(crate::signal::Leads {
            wires: crate::signal::Wires::Three,
            each: crate::signal::Each::Same(crate::signal::Conductor::Ohms(each.get::<ohm>())),
        });
        self
    }
}

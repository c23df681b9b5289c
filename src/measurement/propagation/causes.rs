//! Independent causes of error.

use std::string::{String, ToString};

use crate::uncertainty::{Contribution, Uncertainty};

/// One cause of error, independent of all others.
#[derive(Clone, Debug, PartialEq)]
pub struct Cause {
    /// What is off: the key, with the channel before it where that is another one.
    pub name: String,
    /// The estimate of what is off, in `unit`; NaN for an error whose estimate is 0 by its nature.
    pub estimate: f64,
    /// Unit of estimate and uncertainty; empty for plain numbers.
    pub unit: String,
    /// Its uncertainty.
    pub uncertainty: Uncertainty,
    /// As the sheet writes it, or where it comes from.
    pub text: String,
    /// Whether several channels share it.
    pub shared: bool,
    /// What tells it from all other causes of the measurement.
    pub(in crate::measurement) id: String,
}

impl Cause {
    /// Returns its standard uncertainty.
    #[must_use]
    pub fn standard(&self) -> f64 {
        self.uncertainty.standard()
    }

    pub(super) fn contribution(&self, sensitivity: f64, number: u32) -> Contribution {
        Contribution {
            sensitivity,
            standard: self.uncertainty.standard(),
            degrees_of_freedom: self.uncertainty.degrees_of_freedom(),
            shape: self.uncertainty.shape(),
            cause: number,
        }
    }
}

/// The unit in which the library has the value of a key.
pub(super) fn unit_of_key(key: &str, reading: &str) -> String {
    let key = key.strip_suffix(".uncertainty").unwrap_or(key);
    let head = key.split('[').next().unwrap_or(key);
    let last = head.rsplit('.').next().unwrap_or(head);
    let unit = match (head, last) {
        ("uncertainty" | "resolution", _) => return reading.to_string(),
        ("zero.at", _) if reading.ends_with("/V") => "V/V",
        ("zero.at", _) if reading.ends_with('V') => "V",
        ("zero.at", _) => return reading.to_string(),
        ("thermistor.reference" | "circuit.reference", _) => "ohm",
        ("circuit.parallel" | "circuit.series" | "circuit.leakage", _) => "ohm",
        ("self_heating", _) => "K/W",
        ("platinum.delta" | "platinum.beta", _) => "K",
        (
            _,
            "resistance" | "resistances" | "each" | "supply_leads" | "signal_leads" | "input_resistance" | "r0" | "r25",
        )
        | (_, "divider" | "input" | "feedback" | "triple_point") => "ohm",
        (_, "supply" | "full_scale" | "offset") => "V",
        (_, "current") => "A",
        (_, "temperature" | "temperatures" | "lead_temperature" | "reference") => "degC",
        (_, "slope" | "coefficient" | "specimen" | "data" | "scatter") => "/K",
        (_, "modulus") => "Pa",
        (_, "length" | "diameter" | "bore" | "width" | "height") => "m",
        ("section.area", _) => "m2",
        (_, "area") => "mm2",
        (_, "resistivity") => "ohm m",
        (_, "angles") => "deg",
        (_, "beta") => "K",
        (_, "rated") => "V/V",
        _ => "",
    };
    unit.to_string()
}

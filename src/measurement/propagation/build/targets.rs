//! Where the error of a stated key goes in.

use std::string::ToString;
use std::vec::Vec;

use super::super::reading::Target;
use crate::chain::{Chain, Element, Inputs, Parameter, Temperature};
use crate::measurement::{Segment, Stated};
use crate::strain::{Zero, ZeroReading};

pub(super) fn zero_of(chain: &Chain) -> Option<&Zero> {
    match &chain.element {
        Element::Gauge { zero, .. } | Element::Transducer { zero, .. } => Some(zero),
        _ => None,
    }
}

pub(super) fn zero_temperature(zero: &Zero, parameter: Parameter) -> Option<f64> {
    match parameter {
        Parameter::ZeroTemperature => zero.celsius,
        Parameter::ZeroLeadTemperature => zero.lead_celsius,
        Parameter::ZeroArmTemperature(n) => zero.arm_celsius.get(usize::from(n).saturating_sub(1)).copied().flatten(),
        _ => None,
    }
}

/// What one unit of the supply's column is in the library's unit; `None` for a supply that is no column.
pub(super) fn supply_size(chain: &Chain) -> Option<f64> {
    let crate::chain::Supply::Column { exponent } = chain.supply else { return None };
    Some(libm::pow(10.0, f64::from(exponent)))
}

/// Where the error of a stated key goes in, and by how much.
pub(super) fn targets(stated: &Stated, chain: &Chain, segment: &Segment, inputs: &Inputs) -> Vec<(Target, f64)> {
    let key = stated.key.as_str();
    let mut all: Vec<(Parameter, f64)> = Vec::new();
    chain.map(|parameter, value| {
        // a parameter that stands in several places is one
        if !all.iter().any(|(p, _)| *p == parameter) {
            all.push((parameter, value));
        }
        value
    });
    let of = |parameter: Parameter, factor: f64| (Target::Parameter(parameter), factor);
    match key {
        _ if key.ends_with("supply.uncertainty") || key.ends_with("current.uncertainty") => {
            let Some(size) = supply_size(chain) else { return Vec::new() };
            let volts: f64 = inputs.supply;
            return if volts.is_finite() { Vec::from([(Target::Supply, 1.0 / size)]) } else { Vec::new() };
        }
        "thermal_output.scatter" => return scatter(chain, &all),
        _ => {}
    }
    let named = |wanted: &str| -> Vec<(Target, f64)> {
        let found = all.iter().filter(|(parameter, _)| parameter.to_string() == wanted);
        // the chain may have the value in another unit
        let factor = |value: f64| {
            if stated.value != 0.0 && value != 0.0 && stated.value.is_finite() && value != stated.value {
                value / stated.value
            } else {
                1.0
            }
        };
        found.map(|(parameter, value)| of(*parameter, factor(*value))).collect()
    };
    match key {
        "zero.at" => {
            let factor = match zero_of(chain).and_then(|z| z.reading) {
                Some(ZeroReading::AsRecorded(_)) => 1.0 / segment.reading_size,
                _ => 1.0,
            };
            named(key).into_iter().map(|(to, _)| (to, factor)).collect()
        }
        // of all arms, unless the sheet states theirs
        "gauge.resistance" => {
            let arms = all.iter().filter(|(p, _)| matches!(p, Parameter::ArmResistance(_)) && !segment.arms_stated);
            arms.map(|(p, _)| of(*p, 1.0)).collect()
        }
        // one temperature for all readings holds at zero too, unless another is stated
        "temperature" => {
            let at_zero = matches!(chain.temperature, Temperature::Fixed(_)) && !segment.zero_temperature_stated;
            let mut out = named(key);
            if at_zero && !out.is_empty() {
                out.extend(named("zero.temperature").into_iter().map(|(to, _)| (to, 1.0)));
            }
            out
        }
        "temperature.uncertainty" => Vec::from([of(Parameter::Temperature, 1.0)]),
        "circuit.supply" | "circuit.current" => {
            // a current that is no supply only warms the thermometer
            let supply = named("bridge.supply");
            if supply.is_empty() { named(key) } else { supply }
        }
        "platinum.aluminium_ratio" => Vec::from([of(Parameter::Deviation(5), 1.0)]),
        "bridge.input_resistance" | "circuit.input_resistance" => named("input_resistance"),
        _ => named(key),
    }
}

/// The scatter of a lot's thermal output: a slope, so that it grows with |T − T₀|.
pub(super) fn scatter(chain: &Chain, all: &[(Parameter, f64)]) -> Vec<(Target, f64)> {
    let Element::Gauge { gauge, .. } = &chain.element else { return Vec::new() };
    let per_degree = |fahrenheit: bool| if fahrenheit { 1e6 / 1.8 } else { 1e6 };
    if let Some(output) = &gauge.thermal_output {
        return Vec::from([(Target::Parameter(Parameter::ThermalCoefficient(1)), per_degree(output.fahrenheit))]);
    }
    let Some(table) = &gauge.thermal_points else { return Vec::new() };
    // every point is off by its temperature times the slope
    let points = all.iter().filter_map(|(p, _)| match p {
        Parameter::ThermalPoint(_) => Some(*p),
        _ => None,
    });
    points.zip(table.points.points()).map(|(p, (t, _))| (Target::Parameter(p), 1e6 * t)).collect()
}

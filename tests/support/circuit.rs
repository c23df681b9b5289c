//! Arms as the tables write them.
#![allow(dead_code, reason = "every test file uses its own part of this")]

use ohmwright::signal::{Arm, Driven};

use crate::support::table::Row;

/// What a cell says of one arm: `0`, `dummy`, `e`, `-nu e`, `-1.0097 e`.
pub fn arm(text: &str) -> Arm {
    match text {
        "0" => return Arm::Fixed,
        "dummy" => return Arm::Dummy,
        _ => {}
    }
    let body = text.strip_suffix('e').unwrap_or_else(|| panic!("arm {text:?}")).trim();
    let (sign, body) = body.strip_prefix('-').map_or((1.0, body), |b| (-1.0, b.trim()));
    let (driven, body) = body.strip_prefix("nu").map_or((Driven::Along, body), |b| (Driven::Across, b.trim()));
    let size: f64 = if body.is_empty() { 1.0 } else { body.parse().unwrap_or_else(|e| panic!("arm {text:?}: {e}")) };
    Arm::Active { factor: sign * size, driven }
}

/// The columns `arm1` to `arm4`.
pub fn arms(row: &Row<'_>) -> [Arm; 4] {
    ["arm1", "arm2", "arm3", "arm4"].map(|c| arm(row.text(c)))
}

/// Signed multiple of the wanted strain that an arm sees.
pub fn multiple(arm: Arm, poisson: f64) -> f64 {
    match arm {
        Arm::Active { factor, driven: Driven::Across } => factor * poisson,
        Arm::Active { factor, .. } => factor,
        _ => 0.0,
    }
}

/// Change of output/supply per unit of strain to first order, for equal arms: F (c₁ − c₂ + c₃ − c₄)/4. Scales
/// tolerances, never expected values.
pub fn sensitivity(gauge_factor: f64, arms: [Arm; 4], poisson: f64) -> f64 {
    let [a, b, c, d] = arms.map(|arm| multiple(arm, poisson));
    gauge_factor * (a - b + c - d) / 4.0
}

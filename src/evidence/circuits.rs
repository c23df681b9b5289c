//! Operating points of circuits, against a circuit simulator and exact arithmetic.

use once_cell::sync::Lazy;

use super::Check;
use super::strain::{arms, plain};
use super::table::{Row, Table};
use crate::Error;
use crate::chain::{Inputs, Temperature};
use crate::signal::{Amplifier, Arm, Bridge, Conductor, Difference, Each, Leads, Pair, Reference, Wires};
use crate::strain::{Gauge, ThermalOutput, Zero};

static POINTS: Lazy<Table> =
    Lazy::new(|| Table::new("data/strain/ngspice_oracle.csv", include_str!("../../data/strain/ngspice_oracle.csv")));

/// Every case with all its stated elements.
pub(super) fn operating_points() -> Check {
    let mut check = Check::new("circuits with leads, loads and amplifiers, operating points", &POINTS);
    for row in POINTS.rows() {
        if row.text("r1_unstrained_ohm").is_empty() {
            check.leave_out(&row, "an amplifier between two sources, with no bridge");
            continue;
        }
        let Some(expected) = row.number("exact_V") else { continue };
        let source = row.or_zero("source_V");
        let output = row.text("output");
        let got = match output {
            "vo_bridge" => {
                check.leave_out(&row, "the bridge's output before the amplifier that loads it is no reading");
                continue;
            }
            // supply across the bridge: what a ratio to the source is of a ratio to the sensed supply
            "vbridge" => ratio(&row, false).and_then(|y| Ok(source * y / ratio(&row, true)?)),
            _ => ratio(&row, false).map(|y| source * y),
        };
        // 1e-12 relative, or 4e-16 of the two halves of the supply that cancel at the output
        check.compare(&row, expected, (1e-12 * expected.abs()).max(4e-16 * source), got);
    }
    check
}

/// Output over source (or over the sensed supply).
fn ratio(row: &Row<'_>, sensed: bool) -> Result<f64, Error> {
    let number = |column: &str| row.or_zero(column);
    let has = |column: &str| row.number(column).is_some();
    // with factors per arm the gauge factor of arm 1 leads; without them the case is at rest or states its resistances
    let strained = has("f1") && row.number("f1") != Some(0.0);
    let column = if strained { "unstrained_ohm" } else { "ohm" };
    let mut resistances = ["r1", "r2", "r3", "r4"].map(|r| number(&std::format!("{r}_{column}")));
    if let (Some(shunt), Some(arm)) = (row.number("shunt_ohm"), row.number("shunt_arm"))
        && let Some(r) = resistances.get_mut(arm as usize - 1)
    {
        *r = *r * shunt / (*r + shunt);
    }
    let factor = if strained { number("f1") } else { 2.0 };
    let mut arms = arms(row);
    if strained {
        for (arm, f) in arms.iter_mut().zip(["f1", "f2", "f3", "f4"]) {
            if let Arm::Active { factor: multiple, driven } = arm {
                *driven = crate::signal::Driven::Along;
                *multiple = number(f) / factor;
            }
        }
    }
    let each = number("lead_ohm");
    let leads = match row.text("lead_wires") {
        "2" => Some(Wires::Two),
        "3" => Some(Wires::Three),
        _ => None,
    }
    .map(|wires| Leads { wires, each: Each::Same(Conductor::Ohms(each)) });
    let bridge = Bridge {
        resistances,
        leads,
        supply_leads: Pair::Same(number("supply_lead_ohm")),
        signal_leads: Pair::Same(number("signal_lead_ohm")),
        sensed,
        input_resistance: row.number("input_ohm"),
        ..Bridge::equal(resistances[0], arms)
    };
    // a common drift of both gauges is a thermal output of one: 1 K of it, in microstrain at a data gauge factor of 1
    let drift = number("common_drift");
    let mut gauge = Gauge::new(factor);
    if drift != 0.0 {
        gauge.thermal_output = Some(ThermalOutput {
            coefficients: [0.0, drift * 1e6, 0.0, 0.0, 0.0, 0.0, 0.0],
            fahrenheit: false,
            gauge_factor: 1.0,
            range_celsius: [f64::NEG_INFINITY, f64::INFINITY],
        });
    }
    let mut chain = plain(bridge, gauge).zeroed(Zero { celsius: Some(0.0), ..Zero::default() });
    chain.temperature = Temperature::Fixed(1.0);
    if row.text("output") == "vamp" {
        let (input, feedback) = (number("amplifier_input_ohm"), number("amplifier_feedback_ohm"));
        chain.amplifier = Amplifier::Difference {
            circuit: Difference {
                input: [input; 2],
                feedback: [feedback; 2],
                open_loop_gain: row.number("open_loop_gain"),
                reference: Reference::Negative,
            },
            offset: 0.0,
        };
    }
    let strain = if strained { number("strain_ue") / 1e6 } else { 0.0 };
    chain.plan()?.forward(strain, Inputs::default())
}

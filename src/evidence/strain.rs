//! Tables of bridges and gauges.

use once_cell::sync::Lazy;

use super::Check;
use super::table::{Row, Table};
use crate::Error;
use crate::chain::{Chain, Derivative, Element, Inputs, Output, Temperature};
use crate::signal::{Arm, Bridge, Conductor, Driven, Each, Leads, Pair, Place, Shunt, Wires};
use crate::strain::{Gauge, ThermalOutput, Zero, ZeroReading};

macro_rules! table {
    ($name:literal) => {
        Table::new(concat!("data/strain/", $name), include_str!(concat!("../../data/strain/", $name)))
    };
}

static ARRANGEMENTS: Lazy<Table> = Lazy::new(|| table!("bridge_arrangements.csv"));
static NONLINEARITY: Lazy<Table> = Lazy::new(|| table!("quarter_bridge_nonlinearity.csv"));
static WORKED: Lazy<Table> = Lazy::new(|| table!("nonlinearity_worked.csv"));
static LEADS: Lazy<Table> = Lazy::new(|| table!("lead_wires.csv"));
static SHUNTS: Lazy<Table> = Lazy::new(|| table!("shunt_table.csv"));
static SHUNT_CASES: Lazy<Table> = Lazy::new(|| table!("shunt_cases.csv"));
static SHUNT_TRANSDUCER: Lazy<Table> = Lazy::new(|| table!("shunt_transducer.csv"));
static LOT: Lazy<Table> = Lazy::new(|| table!("thermal_output_example_lot.csv"));
static POLYNOMIAL: Lazy<Table> = Lazy::new(|| table!("polynomial_values.csv"));
static THERMAL: Lazy<Table> = Lazy::new(|| table!("thermal_cases.csv"));

/// What an arm is, as the tables and the sheet write it.
pub(super) fn arm(text: &str) -> Arm {
    let active = |factor, driven| Arm::Active { factor, driven };
    match text {
        "e" => active(1.0, Driven::Along),
        "-e" => active(-1.0, Driven::Along),
        "nu e" => active(1.0, Driven::Across),
        "-nu e" => active(-1.0, Driven::Across),
        "dummy" => Arm::Dummy,
        other => match other.strip_suffix(" e").and_then(|f| f.parse().ok()) {
            Some(factor) => active(factor, Driven::Along),
            None => Arm::Fixed,
        },
    }
}

pub(super) fn arms(row: &Row<'_>) -> [Arm; 4] {
    ["arm1", "arm2", "arm3", "arm4"].map(|column| arm(row.text(column)))
}

/// A chain that gives plain strain for a ratio.
pub(super) fn plain(bridge: Bridge, gauge: Gauge) -> Chain {
    Chain { output: Output::Strain { exponent: 0 }, ..Chain::strain(bridge, gauge) }
}

fn believing(chain: Chain, largest: f64) -> Chain {
    let mut chain = chain;
    if let Element::Gauge { limit, .. } = &mut chain.element {
        *limit = largest;
    }
    chain
}

fn microstrain(chain: &Chain, ratio: f64) -> Result<f64, Error> {
    chain.plan()?.one(ratio).number().map(|e| e * 1e6)
}

/// Output of every arrangement, and back.
pub(super) fn arrangements() -> Check {
    let mut check = Check::new("bridge arrangements, exact output and its inverse", &ARRANGEMENTS);
    for row in ARRANGEMENTS.rows() {
        let (Some(factor), Some(poisson), Some(strain)) =
            (row.number("gauge_factor"), row.number("poisson"), row.number("strain_ue"))
        else {
            continue;
        };
        let bridge = Bridge { poisson, ..Bridge::equal(350.0, arms(&row)) };
        let chain = plain(bridge, Gauge::new(factor));
        let got = chain.plan().and_then(|p| p.forward(strain / 1e6, Inputs::default()));
        check.printed(&row, "exact_mV_per_V", got.map(|y| y * 1e3));
        // the printed output carries 15 digits: half its last one, through the first-order sensitivity
        if let (Some((output, half)), Some(first)) = (row.printed("exact_mV_per_V"), row.number("first_order_mV_per_V"))
        {
            let tolerance = (half * strain / first).abs().max(1e-9) * 1.1;
            check.compare(&row, strain, tolerance, microstrain(&chain, output / 1e3));
        }
    }
    check
}

/// One active arm, up to ten per cent of strain.
pub(super) fn nonlinearity() -> Check {
    let mut check = Check::new("quarter-bridge nonlinearity, strain from output", &NONLINEARITY);
    for row in NONLINEARITY.rows() {
        let (Some(factor), Some(strain), Some((output, half))) =
            (row.number("gauge_factor"), row.number("strain_ue"), row.printed("exact_mV_per_V"))
        else {
            continue;
        };
        let chain = believing(plain(Bridge::one_gauge(120.0), Gauge::new(factor)), 0.2);
        let got = chain.plan().and_then(|p| p.forward(strain / 1e6, Inputs::default()));
        check.printed(&row, "exact_mV_per_V", got.map(|y| y * 1e3));
        // de/dr = 4/(F (1 − 2 r)²) below 3000 microstrain per mV/V over this table
        check.compare(&row, strain, half * 3e3, microstrain(&chain, output / 1e3));
    }
    check
}

/// The worked example of the note.
pub(super) fn nonlinearity_worked() -> Check {
    let mut check = Check::new("quarter-bridge nonlinearity, worked example", &WORKED);
    for row in WORKED.rows() {
        let (Some(factor), Some(indicated), Some(actual)) =
            (row.number("gauge_factor"), row.number("indicated_ue"), row.number("published_actual_ue"))
        else {
            continue;
        };
        // a linear instrument indicates 4 r / F
        let ratio = factor * indicated / 4e6;
        let chain = plain(Bridge::one_gauge(120.0), Gauge::new(factor));
        // printed to 10 microstrain
        check.compare(&row, actual, 5.0, microstrain(&chain, ratio));
        check.printed(&row, "exact_actual_ue", microstrain(&chain, ratio));
    }
    check
}

fn two_wire(each: f64, balanced: bool) -> impl Fn(Bridge) -> Bridge {
    move |bridge| Bridge {
        leads: Some(Leads { wires: Wires::Two, each: Each::Same(Conductor::Ohms(each)) }),
        balanced,
        ..bridge
    }
}

/// Sensitivity at zero strain, with leads over without.
fn remaining(with: &Chain, without: &Chain) -> Result<f64, Error> {
    let slope = |chain: &Chain| chain.derivative(Derivative::Reading, 0.0, &Inputs::default());
    Ok(slope(without)? / slope(with)?)
}

/// What leads leave of the sensitivity.
pub(super) fn lead_factors() -> Check {
    let mut check = Check::new("lead wires, sensitivity remaining and strain of warmed leads", &LEADS);
    for row in LEADS.rows() {
        let (Some(gauge), Some(each)) = (row.number("gauge_ohm"), row.number("lead_ohm_each")) else {
            check.leave_out(&row, "resistance of a wire gauge as printed, not a law");
            continue;
        };
        let one = Bridge::one_gauge(gauge);
        let full = Bridge::equal(gauge, ["e", "-e", "e", "-e"].map(arm));
        let factor = row.number("gauge_factor").unwrap_or(2.0);
        let (bridge, bare) = match row.text("wires") {
            "2" => (two_wire(each, true)(one), one),
            "3" => (
                Bridge { leads: Some(Leads { wires: Wires::Three, each: Each::Same(Conductor::Ohms(each)) }), ..one },
                one,
            ),
            _ => (Bridge { supply_leads: Pair::Same(each), ..full }, full),
        };
        let left = remaining(&plain(bridge, Gauge::new(factor)), &plain(bare, Gauge::new(factor)));
        match row.text("quantity") {
            "factor" => {
                if row.number("published").is_some() {
                    check.printed(&row, "published", left);
                }
                check.printed(&row, "computed", left);
            }
            "percent_loss" => {
                // printed as 2 r/R in one row and as 2 r/(R + 2 r) in the other: both round to the printed figure
                check.printed(&row, "published", left.map(|f| 100.0 * (1.0 - f)));
            }
            "apparent_ue" => {
                // three equal leads, warmed alike: none
                let warm = Bridge {
                    leads: Some(Leads { wires: Wires::Three, each: Each::Same(Conductor::Ohms(0.59)) }),
                    ..one
                };
                check.compare(&row, 0.0, 1e-9, microstrain(&plain(warm, Gauge::new(factor)), 0.0));
            }
            "apparent_ue_exact" => {
                // balanced cold, read warm: the bridge as it then is, seen by a chain that knows only the cold leads
                let (Some(dt), cold) = (row.number("dT_K"), plain(bridge, Gauge::new(factor))) else { continue };
                let warm = each * (1.0 + 0.00393 * dt);
                let mut hot = Bridge { resistances: [gauge, gauge + 2.0 * each, gauge, gauge], ..one };
                hot = two_wire(warm, false)(hot);
                let reading = plain(hot, Gauge::new(factor)).plan().and_then(|p| p.forward(0.0, Inputs::default()));
                check.printed(&row, "computed", reading.and_then(|y| microstrain(&cold, y)));
            }
            other => {
                check.leave_out(&row, &std::format!("{other}: a first-order figure, which the library never gives"))
            }
        }
    }
    check
}

/// What a shunt gives, and the strain that it simulates.
fn shunted(bridge: Bridge, factor: f64, arm: u8, ohms: f64) -> (Result<f64, Error>, Result<f64, Error>) {
    let chain = plain(bridge, Gauge::new(factor));
    let shunt = Shunt { arm, ohms, place: Place::Gauge };
    let output = chain.with_shunt(shunt).and_then(|c| c.plan()?.forward(0.0, Inputs::default()));
    (output.map(|y| y * 1e3), chain.simulated(shunt, 0.0, &Inputs::default()).map(|e| e * 1e6))
}

/// Resistors across the gauge arm, from the strain that they simulate.
pub(super) fn shunts() -> Check {
    let mut check = Check::new("shunt across the gauge arm, resistor and output", &SHUNTS);
    for row in SHUNTS.rows() {
        let (Some(gauge), Some(factor), Some(strain), Some(shunt)) = (
            row.number("gauge_ohm"),
            row.number("gauge_factor"),
            row.number("simulated_compression_ue"),
            row.number("exact_Rc_ohm"),
        ) else {
            continue;
        };
        let one = Bridge::one_gauge(gauge);
        let resistor = plain(one, Gauge::new(factor)).shunt_for(1, Place::Gauge, -strain / 1e6, &Inputs::default());
        check.printed(&row, "published_Rc_ohm", resistor);
        let (output, simulated) = shunted(one, factor, 1, shunt);
        check.printed(&row, "exact_mV_per_V", output);
        // the resistor is printed to 1e-7 ohm: far below 1e-6 microstrain
        check.compare(&row, -strain, 1e-6, simulated);
        // dropping the "− R" is a mistake that must show
        if let (Some((wrong, half)), Ok(resistor)) = (row.printed("Rc_if_minus_R_term_dropped_ohm"), resistor) {
            check.misprint(&row, wrong, half, resistor);
        }
    }
    check
}

/// Resistors across the gauge and across the adjacent arm.
pub(super) fn shunt_cases() -> Check {
    let mut check = Check::new("shunt across gauge and adjacent arm, exact strain and output", &SHUNT_CASES);
    for row in SHUNT_CASES.rows() {
        let (Some(gauge), Some(factor), Some(shunt)) =
            (row.number("gauge_ohm"), row.number("gauge_factor"), row.number("Rc_ohm"))
        else {
            continue;
        };
        let one = Bridge::one_gauge(gauge);
        for (arm, name) in [(1, "gauge"), (2, "dummy")] {
            let (output, simulated) = shunted(one, factor, arm, shunt);
            check.printed(&row, &std::format!("strain_{name}_shunted_ue"), simulated);
            check.printed(&row, &std::format!("mV_per_V_{name}_shunted"), output);
        }
    }
    check
}

/// Resistors across one arm of a transducer.
pub(super) fn shunt_transducers() -> Check {
    let mut check = Check::new("shunt across one arm of an equal-arm transducer", &SHUNT_TRANSDUCER);
    for row in SHUNT_TRANSDUCER.rows() {
        let (Some(bridge), Some(shunt)) = (row.number("bridge_ohm"), row.number("Rc_ohm")) else { continue };
        let full = Bridge::equal(bridge, ["e", "-e", "e", "-e"].map(arm));
        // across arm 2 or 4 the output rises
        let (output, _) = shunted(full, 1.0, 2, shunt);
        check.printed(&row, "mV_per_V", output);
    }
    check
}

fn lot(column: &str) -> ThermalOutput {
    let mut coefficients = [0.0; 7];
    for (slot, row) in coefficients.iter_mut().zip(LOT.rows()) {
        *slot = row.or_zero(column);
    }
    ThermalOutput {
        coefficients,
        fahrenheit: column == "a_degF",
        gauge_factor: 2.0,
        range_celsius: [f64::NEG_INFINITY, f64::INFINITY],
    }
}

/// The polynomial of the example lot in both units.
pub(super) fn thermal_polynomial() -> Check {
    let mut check = Check::new("thermal output polynomial, in °C and in °F", &POLYNOMIAL);
    for row in POLYNOMIAL.rows() {
        let Some(t) = row.number("T_C") else { continue };
        let Some(expected) = row.number("thermal_output_ue") else { continue };
        // exact decimals: what is allowed is 4e-16 of the sum of the terms' sizes, at most about 1200 here
        for column in ["a_degC", "a_degF"] {
            check.compare(&row, expected, 1e-12 * expected.abs().max(1.0), lot(column).microstrain(t));
        }
    }
    check
}

/// Indicated strain to corrected strain.
pub(super) fn thermal_cases() -> Check {
    let mut check = Check::new("thermal output taken off, with gauge factor slope", &THERMAL);
    for row in THERMAL.rows() {
        let number = |column: &str| row.number(column).unwrap_or(f64::NAN);
        let instrument = number("instrument_F");
        let gauge = Gauge {
            slope: number("gf_slope_pct_per_100C") / 1e4,
            reference_celsius: 24.0,
            thermal_output: Some(lot("a_degC")),
            ..Gauge::new(number("gauge_factor_24C"))
        };
        // the case is linear in ΔR/R: indicated · F_i is the relative change of the gauge, x/(4 + 2 x) the bridge's output
        let x = number("indicated_ue") / 1e6 * instrument;
        let zero = Zero { reading: Some(ZeroReading::Ratio(0.0)), celsius: Some(number("T0_C")), ..Zero::default() };
        let chain = Chain {
            temperature: Temperature::Fixed(number("T_C")),
            ..plain(Bridge::one_gauge(350.0), gauge).zeroed(zero)
        };
        check.printed(&row, "corrected_ue", microstrain(&chain, x / (4.0 + 2.0 * x)));
    }
    check
}

//! Whole circuits: data/strain/ngspice_oracle.csv, with the element lists of data/strain/ngspice_elements.csv.
//!
//! DC operating points of constructed circuits, by a circuit simulator (ngspice 39) and by 50-digit nodal analysis of
//! the same element list; `exact_V` is the latter, to about 20 digits. Tolerances are the allowed error of the code:
//! forwards 1e-12 relative, or 4e-16 of the terms where they nearly cancel; backwards 1e-12 relative or 5e-16 V/V
//! referred through the sensitivity. The simulator's own column is good to 1e-9 relative at best.

#[path = "support/circuit.rs"]
mod circuit;
mod support;

use ohmwright::chain::{Chain, Inputs, Plan, Reading, Signal, Supply, Temperature};
use ohmwright::signal::{Amplifier, Arm, Bridge, Conductor, Difference, Driven, Each, Leads, Pair, Reference, Wires};
use ohmwright::strain::{Gauge, ThermalOutput, Zero};
use support::report::Report;
use support::table::{Row, Table};

const RELATIVE: f64 = 1e-12;
/// Terms near one half of the supply that cancel to the output: a share of the supply.
const FORWARD_FLOOR: f64 = 4e-16;
/// The same for a reading, V/V, before it is referred through the sensitivity.
const INVERSE_FLOOR: f64 = 5e-16;

const ORACLE: &str = "data/strain/ngspice_oracle.csv";

/// A number that the parameters column states.
fn stated(row: &Row<'_>, key: &str) -> Option<f64> {
    let found = row.text("parameters").split(';').find_map(|p| p.trim().strip_prefix(key)?.strip_prefix('='));
    found.map(|v| v.parse().unwrap_or_else(|e| panic!("{}: {key}: {e}", row.at())))
}

fn parallel(r: f64, shunt: Option<f64>) -> f64 {
    shunt.map_or(r, |s| r * s / (r + s))
}

fn bridge(row: &Row<'_>) -> Bridge {
    let mut resistances =
        ["r1_unstrained_ohm", "r2_unstrained_ohm", "r3_unstrained_ohm", "r4_unstrained_ohm"].map(|c| row.number(c));
    match row.text("shunt_arm") {
        // directly across the gauge, inside its leads
        "1" => resistances[0] = parallel(resistances[0], row.maybe("shunt_ohm")),
        "2" => resistances[1] = parallel(resistances[1], row.maybe("shunt_ohm")),
        "" => {}
        other => panic!("{}: shunt across arm {other}", row.at()),
    }
    let wires = match row.text("lead_wires") {
        "2" => Some(Wires::Two),
        "3" => Some(Wires::Three),
        _ => None,
    };
    Bridge {
        resistances,
        poisson: stated(row, "nu").unwrap_or(0.0),
        // both conductors stand in arm 1 and arm 2 holds what its column says
        leads: wires.map(|wires| Leads { wires, each: Each::Same(Conductor::Ohms(row.number("lead_ohm"))) }),
        balanced: false,
        supply_leads: Pair::Same(row.maybe("supply_lead_ohm").unwrap_or(0.0)),
        signal_leads: Pair::Same(row.maybe("signal_lead_ohm").unwrap_or(0.0)),
        input_resistance: row.maybe("input_ohm"),
        ..Bridge::equal(1.0, circuit::arms(row))
    }
}

/// Gauge factor and strain of a row; the signal of a transducer where no strain is stated.
fn driven(row: &Row<'_>) -> (f64, f64) {
    match (row.maybe("f1"), row.maybe("strain_ue")) {
        (Some(f), Some(e)) => (f, e),
        // a load cell: x = rated signal × share of the load in every arm, read as strain of a gauge factor of 1
        (None, None) => (1.0, 1e6 * stated(row, "rated_mVV").unwrap() * 1e-3 * stated(row, "load_fraction").unwrap()),
        // no strain and no gauge factor needed
        _ => (2.0, row.number("strain_ue")),
    }
}

fn chain(row: &Row<'_>) -> Chain {
    let (f, _) = driven(row);
    let mut gauge = Gauge::new(f);
    let mut zero = Zero::default();
    if let Some(drift) = row.maybe("common_drift") {
        // τ = F_d TO(T) with F_d = 1, T₀ = 0 °C, T = 1 °C: a thermal output of `drift` m/m per K
        gauge.thermal_output = Some(ThermalOutput {
            coefficients: [0.0, drift * 1e6, 0.0, 0.0, 0.0, 0.0, 0.0],
            fahrenheit: false,
            gauge_factor: 1.0,
            range_celsius: [-10.0, 10.0],
        });
        zero.celsius = Some(0.0);
    }
    let mut chain = Chain::strain(bridge(row), gauge).zeroed(zero);
    chain.reading = Reading { signal: Signal::Volts, exponent: 0 };
    chain.supply = Supply::Fixed(row.number("source_V"));
    chain.temperature = Temperature::Fixed(1.0);
    if let Some(input) = row.maybe("amplifier_input_ohm") {
        chain.amplifier = difference(row, input);
    }
    chain
}

fn difference(row: &Row<'_>, input: f64) -> Amplifier {
    let circuit = Difference {
        input: [input; 2],
        feedback: [row.number("amplifier_feedback_ohm"); 2],
        open_loop_gain: row.maybe("open_loop_gain"),
        reference: Reference::Negative,
    };
    Amplifier::Difference { circuit, offset: 0.0 }
}

fn sense(chain: &mut Chain, sensed: bool) {
    if let ohmwright::chain::Network::Bridge(bridge) = &mut chain.network {
        bridge.sensed = sensed;
    }
}

fn forward(plan: &Plan, e: f64) -> f64 {
    plan.forward(e, Inputs { celsius: 1.0, ..Inputs::default() }).unwrap()
}

#[test]
fn every_output() {
    let table = Table::read(ORACLE);
    let mut report = Report::new("circuits by 50-digit nodal analysis");
    let (mut cases, mut left_out) = (0, Vec::new());
    for row in table.rows() {
        let (at, input, exact) = (row.at(), row.text("case"), row.number("exact_V"));
        let simulated = row.number("ngspice_V");
        let volts = match row.text("output") {
            "vo" | "vo_amp" | "vamp" if row.maybe("source_V").is_some() => {
                let (f, e) = driven(&row);
                let chain = chain(&row);
                let plan = chain.plan().unwrap();
                let ours = forward(&plan, e);
                let supply = row.number("source_V");
                // the amplifier's gain scales what cancels
                let gain = row.maybe("amplifier_feedback_ohm").map_or(1.0, |r| r / row.number("amplifier_input_ohm"));
                let allowed = (RELATIVE * exact.abs()).max(FORWARD_FLOOR * gain * supply);
                report.check("output, V", at, input, exact, ours, allowed);

                let slope = circuit::sensitivity(f, circuit::arms(&row), stated(&row, "nu").unwrap_or(0.0)).abs();
                let back = plan.one(exact).number();
                let shunted = row.maybe("shunt_ohm").is_some();
                if shunted {
                    // the shunted arm is the arm: no strain
                    report.equal("strain of a shunted bridge", at, input, true, back.is_ok_and(|b| b.abs() < 1e-8));
                } else {
                    let allowed = (RELATIVE * e.abs()).max(INVERSE_FLOOR / slope * 1e6);
                    report.check("strain, microstrain", at, input, e, back.unwrap(), allowed);
                }
                // the temperature with every reading, and the supply with every reading: the same circuit
                let mut columns = chain;
                (columns.temperature, columns.supply) = (Temperature::Column, Supply::Column { exponent: 0 });
                let plan = columns.plan().unwrap();
                let inputs = Inputs { reading: exact, supply, celsius: 1.0, ..Inputs::default() };
                let ours = plan.forward(e, inputs).unwrap();
                report.check("output by columns, V", at, input, exact, ours, allowed);
                let allowed = (RELATIVE * e.abs()).max(INVERSE_FLOOR / slope * 1e6);
                report.check("strain by columns", at, input, e, plan.one(inputs).number().unwrap(), allowed);
                cases += 1;
                ours
            }
            "vbridge" => {
                // the same output over the source and over the bridge's own supply: their ratio is the latter
                let (_, e) = driven(&row);
                let mut chain = chain(&row);
                chain.reading.signal = Signal::Ratio;
                chain.supply = Supply::None;
                sense(&mut chain, false);
                let over_source = forward(&chain.plan().unwrap(), e);
                sense(&mut chain, true);
                let plan = chain.plan().unwrap();
                let over_bridge = forward(&plan, e);
                let ours = row.number("source_V") * over_source / over_bridge;
                report.check("bridge supply, V", at, input, exact, ours, RELATIVE * exact);
                // and backwards from the ratio that a sensed supply gives
                let vo = table.rows().find(|r| r.text("case") == input && r.text("output").starts_with("vo")).unwrap();
                let y = vo.number("exact_V") / exact;
                let (f, arms) = (driven(&row).0, circuit::arms(&row));
                let slope = circuit::sensitivity(f, arms, stated(&row, "nu").unwrap_or(0.0));
                let allowed = (RELATIVE * e.abs()).max(INVERSE_FLOOR / slope * 1e6);
                report.check("strain, supply sensed", at, input, e, plan.one(y).number().unwrap(), allowed);
                cases += 1;
                ours
            }
            "vamp" => {
                // n19, no bridge: two ideal sources
                let ours = two_sources(&row);
                // 226 kΩ/1.961 kΩ × 1.74 V twice, which cancel to 0.47 V
                let terms = 2.0 * 1.743 * 226.0 / 1.961;
                report.check("two sources, V", at, input, exact, ours, FORWARD_FLOOR * terms + RELATIVE * exact);
                cases += 1;
                ours
            }
            other => {
                left_out.push((input, other));
                continue;
            }
        };
        let allowed = (1e-9 * simulated.abs()).max(1e-13);
        report.check("the simulator, V", at, input, simulated, volts, allowed);
    }
    // n17 asks for the input of a difference amplifier as well; a chain gives its output alone
    report.equal("left out", ORACLE, "cases", vec![("n17", "vo_bridge")], left_out);
    report.equal("cases", ORACLE, "cases", 28, cases);
    report.finish();
}

/// A difference amplifier on two ideal sources: a bridge of arms so small (1e-15 of the volts in ohms) that the
/// amplifier's microamperes move its nodes by 1e-21 V.
fn two_sources(row: &Row<'_>) -> f64 {
    let (plus, minus) = (stated(row, "Vplus").unwrap(), stated(row, "Vminus").unwrap());
    let supply = 4.0;
    let none = Arm::Active { factor: 1.0, driven: Driven::Along };
    let mut bridge = Bridge::equal(1.0, [none, Arm::Fixed, Arm::Fixed, Arm::Fixed]);
    bridge.resistances = [plus, supply - plus, supply - minus, minus].map(|r| 1e-15 * r);
    let mut chain = Chain::strain(bridge, Gauge::new(2.0));
    chain.reading = Reading { signal: Signal::Volts, exponent: 0 };
    chain.supply = Supply::Fixed(supply);
    chain.amplifier = difference(row, row.number("amplifier_input_ohm"));
    chain.plan().unwrap().forward(0.0, Inputs::default()).unwrap()
}

/// What the loaded circuits would miss without their third wire or signal leads: 2.4e-9, 1.6e-9 and 9.8e-5.
#[test]
fn leads_in_series_with_a_loaded_output_count() {
    let table = Table::read(ORACLE);
    let mut report = Report::new("third wire and signal leads");
    for (case, output, share) in [("n05l", "vo", 2.4e-9), ("n26l", "vo", 1.6e-9), ("n23", "vo_amp", 9.8e-5)] {
        let row = table.rows().find(|r| r.text("case") == case && r.text("output") == output).unwrap();
        let mut without = chain(&row);
        if let ohmwright::chain::Network::Bridge(bridge) = &mut without.network {
            bridge.signal_leads = Pair::none();
            if let Some(leads) = &mut bridge.leads {
                let each = leads.ohms();
                leads.each = Each::Own([each[0], each[1], 0.0].map(Conductor::Ohms));
            }
        }
        let off = forward(&without.plan().unwrap(), driven(&row).1) / row.number("exact_V") - 1.0;
        report.check("share missed", row.at(), case, share, off, 0.05e-9_f64.max(0.05e-5 * f64::from(case == "n23")));
    }
    report.finish();
}

/// The circuits of the oracle are those of the element lists.
#[test]
fn elements_are_those_of_the_oracle() {
    let elements = Table::read("data/strain/ngspice_elements.csv");
    let table = Table::read(ORACLE);
    let mut report = Report::new("element lists");
    let mut used = 0;
    for row in table.rows() {
        let case = row.text("case");
        let value = |name: &str| {
            elements
                .rows()
                .find(|r| r.text("case") == case && r.text("element") == name)
                .map(|r| r.number("value").to_bits())
        };
        for (column, names) in [
            ("source_V", &["Vex"] as &[_]),
            ("r1_ohm", &["R1"]),
            ("r2_ohm", &["R2"]),
            ("r3_ohm", &["R3"]),
            ("r4_ohm", &["R4"]),
            ("supply_lead_ohm", &["RLa", "RLb"]),
            ("signal_lead_ohm", &["RLc", "RLd"]),
            ("lead_ohm", if row.text("lead_wires") == "3" { &["RL1", "RL2", "RL3"] } else { &["RL1", "RL2"] }),
            ("input_ohm", &["Rin"]),
            ("shunt_ohm", &["RS"]),
            ("amplifier_input_ohm", &["Rd1", "Rd3"]),
            ("amplifier_feedback_ohm", &["Rd2", "Rd4"]),
            ("open_loop_gain", &["Eop"]),
        ] {
            for name in names {
                report.equal(column, row.at(), name, row.maybe(column).map(f64::to_bits), value(name));
                used += usize::from(value(name).is_some() && first_of_case(&table, &row));
            }
        }
    }
    // V1 and V2 of n19 stand in its parameters
    report.equal("elements used", "the table", "elements", elements.rows().count() - 2, used);
    report.finish();
}

/// Whether this is the first output of its case.
fn first_of_case(table: &Table, row: &Row<'_>) -> bool {
    table.rows().find(|r| r.text("case") == row.text("case")).is_some_and(|r| r.at().line == row.at().line)
}

//! The circuits of data/strain/ngspice_oracle.csv as measurement sheets, with every stated element in the sheet: operating
//! points of a general-purpose circuit simulator (ngspice 39) and, to 1e-12, of 50-digit nodal analysis of the same element
//! lists (column `exact_V`). Constructed cases, not published ones.
#![cfg(feature = "files")]

mod support;

use ohmwright::chain::{Chain, Inputs};
use ohmwright::sheet::Sheet;
use ohmwright::signal::{Place, Shunt};
use support::report::Report;
use support::table::{Row, Table};

const ORACLE: &str = "data/strain/ngspice_oracle.csv";

/// A figure of the `parameters` column, as in `nu=0.287`.
fn stated(row: &Row<'_>, name: &str) -> Option<f64> {
    row.text("parameters").split(';').find_map(|p| p.trim().strip_prefix(name)?.strip_prefix('=')?.parse().ok())
}

/// The sheet of one case; `sensed` = the supply is measured at the bridge.
fn sheet(row: &Row<'_>, sensed: bool) -> String {
    let ohms = ["r1", "r2", "r3", "r4"].map(|r| format!("\"{} ohm\"", row.text(&format!("{r}_unstrained_ohm"))));
    let arms = ["arm1", "arm2", "arm3", "arm4"].map(|a| format!("\"{}\"", row.text(a)));
    let mut bridge = format!("arms = [{}], resistances = [{}]", arms.join(", "), ohms.join(", "));
    if sensed {
        bridge += ", sensed = true";
    } else {
        bridge += &format!(", supply = \"{} V\"", row.text("source_V"));
    }
    if arms.iter().any(|a| a.contains("nu")) {
        bridge += &format!(", poisson = {}", stated(row, "nu").expect("a ratio"));
    }
    for (key, column) in
        [("supply_leads", "supply_lead_ohm"), ("signal_leads", "signal_lead_ohm"), ("input_resistance", "input_ohm")]
    {
        if !row.text(column).is_empty() {
            bridge += &format!(", {key} = \"{} ohm\"", row.text(column));
        }
    }
    let mut text =
        format!("[channel.x]\ncolumn = 1\nreads = \"{}\"\nbridge = {{ {bridge} }}\n", if sensed { "V/V" } else { "V" });
    if row.text("case") == "n23" {
        let rated = stated(row, "rated_mVV").expect("a rated output");
        text += &format!("transducer = {{ rated = \"{rated} mV/V\", capacity = \"1 kN\" }}\n");
    } else {
        let factor = if row.text("f1").is_empty() { "2.0" } else { row.text("f1") };
        text += "output = \"microstrain\"\n";
        text +=
            &format!("gauge = {{ resistance = \"{} ohm\", gauge_factor = {factor} }}\n", row.text("r1_unstrained_ohm"));
    }
    match row.text("lead_wires") {
        "" => {}
        wires => {
            let balanced = if wires == "2" { ", balanced = false" } else { "" };
            text += &format!("leads = {{ wires = {wires}, each = \"{} ohm\"{balanced} }}\n", row.text("lead_ohm"));
        }
    }
    if !row.text("amplifier_input_ohm").is_empty() {
        let (i, f) = (row.text("amplifier_input_ohm"), row.text("amplifier_feedback_ohm"));
        text += &format!(
            "amplifier = {{ difference = {{ input = [\"{i} ohm\", \"{i} ohm\"], feedback = [\"{f} ohm\", \"{f} ohm\"], open_loop_gain = {} }} }}\n",
            row.text("open_loop_gain")
        );
    }
    if let Some(drift) = row.maybe("common_drift") {
        // both gauges drift by this share: a thermal output of it per kelvin, one kelvin from the zero
        text +=
            &format!("thermal_output = {{ coefficients = [0, {}], in = \"degC\", gauge_factor = 1.0 }}\n", drift * 1e6);
        text += "temperature = \"1 degC\"\nzero = { temperature = \"0 degC\" }\n";
    }
    text
}

fn chain(text: &str) -> Chain {
    let sheet = Sheet::read("case.toml", text).unwrap_or_else(|e| panic!("{e}\n{text}"));
    sheet.measurement.channels[0].segments().expect("a reading")[0].chain
}

#[test]
fn every_circuit_as_a_sheet() {
    let table = Table::read(ORACLE);
    let mut report = Report::new("circuits as sheets, against 50-digit nodal analysis");
    let mut left_out = Vec::new();
    let mut seen = 0;
    for row in table.rows() {
        let (at, case, output) = (row.at(), row.text("case"), row.text("output"));
        if row.text("source_V").is_empty() || output == "vo_bridge" {
            // n19 has no bridge; the bridge's own output before a loading amplifier is no reading
            left_out.push(format!("{case} {output}"));
            continue;
        }
        let shunted = |chain: Chain| match (row.maybe("shunt_ohm"), row.maybe("shunt_arm")) {
            (Some(ohms), Some(arm)) => {
                chain.with_shunt(Shunt { arm: arm as u8, ohms, place: Place::Gauge }).expect("a bridge")
            }
            _ => chain,
        };
        let value = match (case, row.maybe("strain_ue")) {
            ("n23", _) => stated(&row, "load_fraction").expect("a load"),
            (_, Some(e)) => e,
            _ => 0.0,
        };
        let (exact, supply) = (row.number("exact_V"), row.number("source_V"));
        let over_source = chain(&sheet(&row, false));
        let volts = shunted(over_source).plan().expect("a plan").forward(value, Inputs::default()).expect("a signal");
        let gain = row.maybe("amplifier_feedback_ohm").map_or(1.0, |r| r / row.number("amplifier_input_ohm"));
        // design allowance: 1e-12 relative, or 4e-16 of the two halves of the supply that cancel (times the gain)
        let floor = 4e-16 * gain * supply;
        if output == "vbridge" {
            // the same output over the sensed supply: their ratio is that supply
            let ratio =
                chain(&sheet(&row, true)).plan().expect("a plan").forward(value, Inputs::default()).expect("a ratio");
            report.check("bridge supply, V", at, case, exact, volts / ratio, 1e-12 * exact);
        } else {
            report.check("output, V", at, case, exact, volts, (1e-12 * exact.abs()).max(floor));
            if row.maybe("shunt_ohm").is_none() {
                // and back: 1e-12 relative, or 5e-16 V/V at the bridge through about 2 microstrain per µV/V
                let back = over_source.plan().expect("a plan").one(exact).number().expect("a value");
                report.check("value", at, case, value, back, (1e-12 * value.abs()).max(4e-9));
            }
        }
        seen += 1;
    }
    assert_eq!(left_out, ["n17 vo_bridge", "n19 vamp"]);
    assert_eq!(seen, 27);
    report.finish();
}

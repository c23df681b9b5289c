//! Shunt resistors across a gauge, across the dummy beside it, and across an arm of a transducer.
//!
//! - data/strain/shunt_cases.csv: constructed on Micro-Measurements Tech Note TN-514, Eq. 514.43-514.45, in 50 digits.
//! - data/strain/shunt_transducer.csv: mV/V = 1000 R/(4 Rc + 2 R), L. Clegg, Western Regional Strain Gage Committee, 2005.
//!
//! The shunted arm is a forward case: its resistance is the parallel combination.

mod support;

use ohmwright::chain::{Chain, Inputs};
use ohmwright::signal::Bridge;
use ohmwright::strain::Gauge;
use support::report::Report;
use support::table::Table;

const RELATIVE: f64 = 1e-12;

/// Output over supply with a resistor across one arm of four equal ones.
fn shunted(ohms: f64, arm: usize, shunt: f64) -> f64 {
    let mut bridge = Bridge::one_gauge(ohms);
    bridge.resistances[arm] = ohms * shunt / (ohms + shunt);
    Chain::strain(bridge, Gauge::new(2.0)).plan().unwrap().forward(0.0, Inputs::default()).unwrap()
}

#[test]
fn gauge_and_dummy() {
    let table = Table::read("data/strain/shunt_cases.csv");
    let mut report = Report::new("TN-514: shunt across the gauge and across the dummy");
    for row in table.rows() {
        let (at, id) = (row.at(), row.text("id"));
        let (r, shunt) = (row.number("gauge_ohm"), row.number("Rc_ohm"));
        let gauge = Chain::strain(Bridge::one_gauge(r), Gauge::new(row.number("gauge_factor"))).plan().unwrap();
        for (arm, name) in [(0, "gauge"), (1, "dummy")] {
            let y = shunted(r, arm, shunt);
            let column = format!("mV_per_V_{name}_shunted");
            let half = row.half_digit(&column).max(RELATIVE * 1e3 * y.abs());
            report.check(&column, at, id, row.number(&column), 1e3 * y, half);
            let column = format!("strain_{name}_shunted_ue");
            let e = gauge.one(y).number().unwrap();
            let half = row.half_digit(&column).max(RELATIVE * e.abs());
            report.check(&column, at, id, row.number(&column), e, half);
        }
    }
    report.equal("rows", "the table", "rows", 2, table.rows().count());
    report.finish();
}

#[test]
fn transducer() {
    let table = Table::read("data/strain/shunt_transducer.csv");
    let mut report = Report::new("Clegg 2005: shunt across an arm of a transducer");
    for row in table.rows() {
        let (r, shunt) = (row.number("bridge_ohm"), row.number("Rc_ohm"));
        let half = row.half_digit("mV_per_V").max(RELATIVE * row.number("mV_per_V"));
        // across arm 2 or 4 the output is positive; across 1 or 3 it has the other sign
        for (arm, sign) in [(0, -1e3), (1, 1e3), (2, -1e3), (3, 1e3)] {
            let y = sign * shunted(r, arm, shunt);
            report.check("mV/V", row.at(), format!("{r} {shunt} arm {}", arm + 1), row.number("mV_per_V"), y, half);
        }
    }
    report.equal("rows", "the table", "rows", 4, table.rows().count());
    report.finish();
}

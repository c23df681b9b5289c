//! Bridge arrangements: data/strain/bridge_arrangements.csv.
//!
//! Closed forms per arrangement of Micro-Measurements Tech Notes TN-507 and TN-514; the numbers are computed from the
//! resistor ratio in 50 digits and given to 15. Those 15 digits are finer than the allowed error of a network, 1e-12
//! relative, which is therefore the tolerance. The first-order column is a known mistake wherever the arrangement is
//! not linear, and must not be what the library gives.

#[path = "support/circuit.rs"]
mod circuit;
mod support;

use ohmwright::chain::{Chain, Inputs, Output, Reading, Signal};
use ohmwright::signal::Bridge;
use ohmwright::strain::Gauge;
use support::report::Report;
use support::table::{Row, Table};

const RELATIVE: f64 = 1e-12;

fn chain(row: &Row<'_>) -> Chain {
    let bridge = Bridge { poisson: row.number("poisson"), ..Bridge::equal(350.0, circuit::arms(row)) };
    let mut chain = Chain::strain(bridge, Gauge::new(row.number("gauge_factor")));
    chain.reading = Reading { signal: Signal::Ratio, exponent: -3 };
    chain
}

#[test]
fn outputs_and_strains() {
    let table = Table::read("data/strain/bridge_arrangements.csv");
    let mut report = Report::new("TN-507, TN-514: bridge arrangements");
    for row in table.rows() {
        let (e, exact) = (row.number("strain_ue"), row.number("exact_mV_per_V"));
        let input = format!("{} {e}", row.text("arrangement"));
        let plan = chain(&row).plan().unwrap();
        let ours = plan.forward(e, Inputs::default()).unwrap();
        report.check("mV/V from strain", row.at(), &input, exact, ours, RELATIVE * exact.abs());
        let back = plan.one(exact).number().unwrap();
        report.check("strain from mV/V", row.at(), &input, e, back, RELATIVE * e.abs());

        let first = row.number("first_order_mV_per_V");
        let printed = row.text("nonlinearity_percent");
        let percent = 100.0 * (ours / first - 1.0);
        if row.text("linear") == "yes" {
            report.check("no nonlinearity", row.at(), &input, 0.0, percent, 1e-12 * 100.0);
        } else {
            report.check("nonlinearity, %", row.at(), &input, row.number("nonlinearity_percent"), percent, {
                support::table::half_digit(printed)
            });
            let off = (ours / first - 1.0).abs() > 5e-4;
            report.equal("first order not given", row.at(), &input, true, off);
            let read = plan.one(first).number().unwrap();
            report.equal("first order not read", row.at(), &input, true, (read / e - 1.0).abs() > 5e-4);
        }
        if row.text("arrangement") == "half_shear" {
            // γ = 2 e: the table states the grid strain
            let shear = Chain { output: Output::ShearStrain { exponent: 6 }, ..chain(&row) }.plan().unwrap();
            let gamma = shear.one(exact).number().unwrap();
            report.check("shear strain", row.at(), &input, 2.0 * e, gamma, RELATIVE * 2.0 * e.abs());
            let ours = shear.forward(2.0 * e, Inputs::default()).unwrap();
            report.check("mV/V from shear strain", row.at(), &input, exact, ours, RELATIVE * exact.abs());
        }
    }
    report.equal("rows", "the table", "rows", 24, table.rows().count());
    report.finish();
}

/// Which arms count: the sense of the output turns with the arm, as output/supply = R1/(R1+R2) − R4/(R3+R4).
#[test]
fn one_gauge_in_each_arm() {
    let mut report = Report::new("sense of the output, one gauge in each arm");
    for (at, expected) in [(0, 1.0), (1, -1.0), (2, 1.0), (3, -1.0)] {
        let mut arms = [circuit::arm("0"); 4];
        arms[at] = circuit::arm("e");
        let plan = Chain::strain(Bridge::equal(120.0, arms), Gauge::new(2.0)).plan().unwrap();
        // x = 0.002 in one arm of four equal ones: ± x/(4 + 2x) = ± 0.002/4.004; in arm 2 and 4 the same magnitude,
        // since 1/2 − 1/(2 + x) = x/(4 + 2x)
        let y = expected * 0.002 / 4.004;
        let ours = plan.forward(1000.0, Inputs::default()).unwrap();
        report.check("output", format!("arm {}", at + 1), 1000, y, ours, RELATIVE * y.abs());
    }
    report.finish();
}

//! One active arm: data/strain/quarter_bridge_nonlinearity.csv and data/strain/nonlinearity_worked.csv.
//!
//! The statement (0.1 % at 1000, 1 % at 10 000, 10 % at 100 000 microstrain, relative to the indicated strain) and the
//! worked example 1 stand in Micro-Measurements Tech Note TN-507; the rows of the first table are computed from it in
//! 50 digits. Tolerances are half the last printed digit, never below the allowed error of a network, 1e-12 relative.

mod support;

use ohmwright::chain::{Chain, Element, Inputs, Network};
use ohmwright::signal::Bridge;
use ohmwright::strain::{Gauge, Zero};
use support::report::Report;
use support::table::Table;

const RELATIVE: f64 = 1e-12;

/// A quarter bridge that believes ±200 000 microstrain: the table ends on ±100 000, where the usual limit stands.
fn quarter(gauge_factor: f64) -> Chain {
    let element = Element::Gauge { gauge: Gauge::new(gauge_factor), zero: Zero::default(), limit: 0.2 };
    Chain::new(Network::Bridge(Bridge::one_gauge(350.0)), element)
}

#[test]
fn computed_rows() {
    let table = Table::read("data/strain/quarter_bridge_nonlinearity.csv");
    let mut report = Report::new("TN-507: nonlinearity of one active arm");
    for row in table.rows() {
        let (f, e, at) = (row.number("gauge_factor"), row.number("strain_ue"), row.at());
        let plan = quarter(f).plan().unwrap();
        let y = plan.forward(e, Inputs::default()).unwrap();
        let exact = row.number("exact_mV_per_V");
        let allowed = |column: &str| row.half_digit(column).max(RELATIVE * row.number(column).abs());
        report.check("mV/V from strain", at, e, exact, 1e3 * y, RELATIVE * exact.abs());
        let back = plan.one(1e-3 * exact).number().unwrap();
        report.check("strain from mV/V", at, e, e, back, RELATIVE * e.abs());
        // what an instrument that takes strain as 4 y/F shows
        let shown = 1e6 * 4.0 * y / f;
        let indicated = row.number("indicated_linear_ue");
        report.check("indicated strain", at, e, indicated, shown, allowed("indicated_linear_ue"));
        // a difference of two strains: twice the allowed error of the larger
        let differs = row.half_digit("error_ue").max(2.0 * RELATIVE * e.abs());
        report.check("error of the indicated strain", at, e, row.number("error_ue"), shown - back, differs);
        let percent = 100.0 * (shown - back) / back;
        let column = "error_percent_of_true";
        report.check("error, % of true", at, e, row.number(column), percent, row.half_digit(column));
        let percent = 100.0 * (back - shown) / shown;
        // the statement of TN-507 is exact: F x indicated/2
        let stated = row.number("error_percent_of_indicated");
        report.check("error, % of indicated", at, e, stated, percent, 2.0 * 100.0 * RELATIVE);
        report.equal(
            "indicated strain not given",
            at,
            e,
            true,
            (back - indicated).abs() > 0.9 * row.number("error_ue").abs(),
        );
    }
    report.equal("rows", "the table", "rows", 11, table.rows().count());
    report.finish();
}

#[test]
fn worked_example() {
    let table = Table::read("data/strain/nonlinearity_worked.csv");
    let mut report = Report::new("TN-507, numerical example 1");
    for row in table.rows() {
        let (f, shown) = (row.number("gauge_factor"), row.number("indicated_ue"));
        // indicated = 4 y/F
        let e = quarter(f).plan().unwrap().one(1e-6 * shown * f / 4.0).number().unwrap();
        report.check("exact strain", row.at(), shown, row.number("exact_actual_ue"), e, {
            row.half_digit("exact_actual_ue")
        });
        // the note works to 10 microstrain
        report.check("published strain", row.at(), shown, row.number("published_actual_ue"), e, 5.0);
        report.check("published correction", row.at(), shown, row.number("published_correction_ue"), e - shown, 5.0);
    }
    report.finish();
}

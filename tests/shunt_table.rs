//! Shunt resistors and the strain they simulate: data/strain/shunt_table.csv.
//!
//! Relations of Micro-Measurements Tech Note TN-514, Eq. 514.5-514.7: a shunt across the gauge arm simulates compression
//! exactly, Rc = R/(F e) − R. Resistors are catalogue values from memory, the other columns computed in 50 digits. Here
//! the shunted arm is a forward case: its resistance is the parallel combination, and the strain gauge reads the bridge.

mod support;

use ohmwright::chain::{Chain, Inputs, Plan};
use ohmwright::signal::Bridge;
use ohmwright::strain::Gauge;
use support::report::Report;
use support::table::{Row, Table, half_digit};

const RELATIVE: f64 = 1e-12;

fn gauge(row: &Row<'_>) -> Gauge {
    Gauge::new(row.number("gauge_factor"))
}

/// Output over supply of a balanced bridge with this resistor across one arm.
fn shunted(row: &Row<'_>, arm: usize, shunt: f64) -> f64 {
    let r = row.number("gauge_ohm");
    let mut bridge = Bridge::one_gauge(r);
    bridge.resistances[arm] = r * shunt / (r + shunt);
    Chain::strain(bridge, gauge(row)).plan().unwrap().forward(0.0, Inputs::default()).unwrap()
}

/// The same bridge without the resistor: what reads the strain.
fn reader(row: &Row<'_>) -> Plan {
    Chain::strain(Bridge::one_gauge(row.number("gauge_ohm")), gauge(row)).plan().unwrap()
}

#[test]
fn every_row() {
    let table = Table::read("data/strain/shunt_table.csv");
    let mut report = Report::new("TN-514: shunt resistors");
    for row in table.rows() {
        let (at, r, f) = (row.at(), row.number("gauge_ohm"), row.number("gauge_factor"));
        let e = row.number("simulated_compression_ue");
        let strain = |shunt| reader(&row).one(shunted(&row, 0, shunt)).number().unwrap();

        // Rc = R/(F e) − R, on paper; 57 983.333... Ω where the table prints 12 digits
        let rc = r / (f * 1e-6 * e) - r;
        report.check("Rc as printed", at, e, row.number("exact_Rc_ohm"), rc, row.half_digit("exact_Rc_ohm"));
        // what an ohm of Rc is worth: R/F/(R + Rc)²
        let slope = |shunt: f64| 1e6 * r / f / ((r + shunt) * (r + shunt));
        let y = 1e3 * shunted(&row, 0, rc);
        let printed = row.number("exact_mV_per_V");
        report.check("mV/V of the shunt", at, rc, printed, y, row.half_digit("exact_mV_per_V").max(RELATIVE * y.abs()));
        report.check("simulated strain", at, rc, -e, strain(rc), RELATIVE * e);
        let indicated = row.number("indicated_linear_ue");
        report.check(
            "indicated strain 4 y/F",
            at,
            rc,
            indicated,
            1e3 * 4.0 * y / f,
            row.half_digit("indicated_linear_ue"),
        );
        report.equal("indicated strain not given", at, rc, true, (strain(rc) - indicated).abs() > 5e-7 * e);

        // the catalogue resistor: half an ohm of it, as strain. 57 983 Ω of 350 Ω simulates 3000.01714 microstrain
        let catalogue = row.number("published_Rc_ohm");
        let allowed = half_digit(row.text("published_Rc_ohm")) * slope(catalogue) * (1.0 + 1e-9) + RELATIVE * e;
        report.check("strain of the catalogue resistor", at, catalogue, -e, strain(catalogue), allowed);
        if catalogue == 57_983.0 {
            report.check("57 983 ohm", at, catalogue, -3_000.017_14, strain(catalogue), 5e-6);
        }

        // R/(F e) without the − R: short by the share F e
        let dropped = row.number("Rc_if_minus_R_term_dropped_ohm");
        let short = 1.0 + strain(dropped) / e;
        let share = f * e * 1e-6;
        report.check("Rc without - R simulates less", at, dropped, share / (1.0 + share), short, 1e-9);

        // across the adjacent arm the same resistor simulates tension: e = R/(F Rc)
        let tension = reader(&row).one(shunted(&row, 1, rc)).number().unwrap();
        let exact = 1e6 * r / (f * rc);
        report.check("across the adjacent arm", at, rc, exact, tension, RELATIVE * exact);
    }
    report.equal("rows", "the table", "rows", 11, table.rows().count());
    report.finish();
}

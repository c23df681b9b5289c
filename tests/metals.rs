//! Nickel and copper thermometers against printed tables.
//!
//! - Coefficients, bit for bit: data/temperature/rtd_other_metal_coefficients.csv (nickel read, copper from memory).
//! - DIN 43760:1987, nickel table: data/temperature/ni100_din43760_table.csv (read); one known misfit.
//! - GOST 6651-78/-84, copper table of an older generation: data/temperature/cu100_gost_1428_table.csv (read), which the
//!   curve of 2009 must not reproduce; four values of GOST 6651-2009 from memory.

mod support;

use ohmwright::metal::{COPPER_10_OHM, COPPER_GOST_6651_2009, Copper, Law, Metal, NICKEL_DIN_43760, Nickel, PUBLISHED};
use support::report::Report;
use support::table::Table;
use support::twofold::Twofold;

#[test]
fn every_curve_bit_for_bit() {
    let table = Table::read("data/temperature/rtd_other_metal_coefficients.csv");
    let mut report = Report::new("nickel and copper curves");
    for row in table.rows() {
        let third = row.maybe("C_or_D").unwrap_or(0.0);
        let (r0_ohms, a, b) = (row.number("R0_ohm"), row.number("A"), row.maybe("B").unwrap_or(0.0));
        let range_celsius = [row.number("t_min_C"), row.number("t_max_C")];
        let (want, ours) = match row.text("form") {
            "poly246" => {
                let f = row.number("F");
                (Law::Nickel(Nickel { r0_ohms, a, b, d: third, f, range_celsius }), Law::Nickel(NICKEL_DIN_43760))
            }
            "gostcu" => {
                (Law::Copper(Copper { r0_ohms, a, b, c: third, range_celsius }), Law::Copper(COPPER_GOST_6651_2009))
            }
            // the line is known from 0 °C upwards alone
            "lin above 0" => {
                let range_celsius = [0.0, row.number("t_max_C")];
                (Law::Copper(Copper { r0_ohms, a, b, c: third, range_celsius }), Law::Copper(COPPER_10_OHM))
            }
            other => panic!("{other}"),
        };
        report.equal("constants", row.at(), row.text("id"), want, ours);
        report.equal("listed", row.at(), row.text("id"), 1, PUBLISHED.iter().filter(|p| p.law == ours).count());
    }
    report.equal("rows", "the table", "rows", 3, table.rows().count());
    report.finish();
}

#[test]
fn nickel_table() {
    let table = Table::read("data/temperature/ni100_din43760_table.csv");
    let mut report = Report::new("DIN 43760:1987: Ni100, -60 to 250 degC");
    let ni100 = Metal::new(Law::Nickel(NICKEL_DIN_43760)).unwrap();
    for row in table.rows() {
        let (t, printed, half) = (row.number("t_C"), row.number("R_ohm"), row.half_digit("R_ohm"));
        let ours = ni100.ohms_from_celsius(t).unwrap();
        if t == 80.0 {
            // 148.2 is printed where the formula gives 148.250 37
            report.equal("misfit not reproduced", row.at(), t, true, (half..0.051).contains(&(ours - printed)));
            continue;
        }
        report.check("ohms", row.at(), t, printed, ours, half);
        if printed >= ni100.ohms_range().min {
            // dR/dt is at least 0.47 Ω/K
            report.check("celsius", row.at(), printed, t, ni100.celsius_from_ohms(printed).unwrap(), half / 0.47);
        }
    }
    report.equal("rows", "the table", "rows", 16, table.rows().count());
    report.finish();
}

#[test]
fn copper_tables() {
    let cu100 = Metal::new(Law::Copper(COPPER_GOST_6651_2009)).unwrap();
    let mut report = Report::new("GOST 6651: copper 100 ohm");
    // GOST 6651-2009, from memory
    for (t, printed) in [(-180.0, 20.53), (-100.0, 56.54), (-50.0, 78.46), (150.0, 164.20)] {
        report.check("edition of 2009", "from memory", t, printed, cu100.ohms_from_celsius(t).unwrap(), 0.005);
    }
    let table = Table::read("data/temperature/cu100_gost_1428_table.csv");
    let mut apart = 0;
    for row in table.rows() {
        let (t, printed) = (row.number("t_C"), row.number("R_ohm"));
        let Ok(ours) = cu100.ohms_from_celsius(t) else {
            report.equal("outside", row.at(), t, -200.0, t);
            continue;
        };
        // another edition: up to 0.017 Ω apart above 0 °C, 0.082 Ω below
        let allowed = if t < 0.0 { 0.082 } else { 0.0171 };
        report.check("older generation", row.at(), t, printed, ours, allowed);
        apart += i32::from((ours - printed).abs() > if t < 0.0 { 0.005 } else { 0.0005 });
    }
    report.equal("rows", "the table", "rows", 21, table.rows().count());
    report.equal("rows that tell the editions apart", "the table", "rows", 17, apart);
    report.finish();
}

/// R/R₀ as the standards write it, in twice the precision.
fn written_out(law: &Law, t: f64) -> f64 {
    let d = Twofold::new;
    let x = d(t);
    match *law {
        Law::Nickel(k) => {
            let s = x * x;
            (d(k.r0_ohms) * (d(1.0) + d(k.a) * x + d(k.b) * s + d(k.d) * s * s + d(k.f) * s * s * s)).hi
        }
        Law::Copper(k) => {
            let below = if t < 0.0 { d(k.b) * x * (x + d(6.7)) + d(k.c) * x * x * x } else { d(0.0) };
            (d(k.r0_ohms) * (d(1.0) + d(k.a) * x + below)).hi
        }
        other => panic!("{other:?}"),
    }
}

#[test]
fn both_ways_on_dense_grids() {
    let mut report = Report::new("nickel and copper: forward and inverse");
    for p in PUBLISHED {
        // another resistance at 0 °C is the same curve
        for law in [p.law, p.law.with_r0(1000.0)] {
            let metal = Metal::new(law).unwrap();
            let [low, high] = law.range_celsius();
            for i in 0..=50_000 {
                let t = (low + (high - low) * f64::from(i) / 50_000.0).clamp(low, high);
                let want = written_out(&law, t);
                let ohms = metal.ohms_from_celsius(t).unwrap();
                report.check("ohms", p.name, t, want, ohms, 1e-12 * want);
                let back = metal.celsius_from_ohms(want.clamp(metal.ohms_range().min, metal.ohms_range().max)).unwrap();
                report.check("celsius", p.name, t, t, back, 1e-9);
            }
        }
    }
    report.finish();
}

#[test]
fn what_is_no_curve_is_refused() {
    let cu100 = Metal::new(Law::Copper(COPPER_GOST_6651_2009)).unwrap();
    for bad in [f64::NAN, f64::INFINITY, -1.0, 0.0, 185.7] {
        assert!(cu100.celsius_from_ohms(bad).is_err(), "{bad}");
    }
    assert!(cu100.ohms_from_celsius(-180.1).is_err() && cu100.ohms_from_celsius(200.1).is_err());
    let nickel = NICKEL_DIN_43760;
    for bad in [
        Nickel { r0_ohms: 0.0, ..nickel },
        Nickel { a: f64::NAN, ..nickel },
        Nickel { b: -2e-5, ..nickel }, // falls above 137 °C
        Nickel { f: f64::INFINITY, ..nickel },
        Nickel { range_celsius: [10.0, -10.0], ..nickel },
        Nickel { range_celsius: [-200.0, 2000.0], ..nickel }, // F t⁶ turns it over
    ] {
        assert!(Metal::new(Law::Nickel(bad)).is_err(), "{bad:?}");
    }
    // rises all over, but a start of ρ/A = −80 000 °C does not arrive
    let steep = Copper { r0_ohms: 100.0, a: 1e-5, b: 0.0, c: 1e-7, range_celsius: [-200.0, 200.0] };
    assert!(Metal::new(Law::Copper(steep)).is_err());
}

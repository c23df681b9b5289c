//! The International Temperature Scale of 1990.
//!
//! - H. Preston-Thomas, Metrologia 27 (1990) 3-10 and 107: Wr of defining fixed points, Table 1
//!   (data/temperature/its90_fixed_points.csv, read; six more below from memory), coefficients
//!   (its90_reference_coefficients.csv, from memory), deviation functions (its90_deviation_functions.csv, table read, general
//!   forms from memory).
//! - Functions evaluated here in twice the precision from those tables; certificates are constructed.

mod support;

use ohmwright::chain::Real;
use ohmwright::platinum::its90::{
    Deviation, StandardThermometer, celsius_from_reference_ratio, reference_ratio_from_celsius,
};
use support::report::Report;
use support::table::Table;
use support::twofold::Twofold;

/// °C of a printed temperature in K, free of the rounding of the difference.
fn celsius(kelvin: f64) -> f64 {
    ((kelvin - 273.15) * 1e4).round() / 1e4
}

/// The reference functions as printed: coefficients A and C.
struct Printed {
    a: Vec<f64>,
    c: Vec<f64>,
}

impl Printed {
    fn read() -> Self {
        let table = Table::read("data/temperature/its90_reference_coefficients.csv");
        let family = |f: &str| table.rows().filter(|r| r.text("family") == f).map(|r| r.number("value")).collect();
        Self { a: family("A"), c: family("C") }
    }

    /// Wr at t °C, in twice the precision: sum of powers.
    fn ratio(&self, t: f64, cold: bool) -> Twofold {
        let d = Twofold::new;
        let kelvin = d(t) + d(27315.0) / d(100.0);
        let sum = |x: Twofold, k: &[f64]| {
            let (mut power, mut sum) = (d(1.0), d(0.0));
            for c in k {
                sum = sum + d(*c) * power;
                power = power * x;
            }
            sum
        };
        if cold {
            let x = (kelvin / (d(27316.0) / d(100.0))).ln();
            sum((x + d(1.5)) / d(1.5), &self.a).exp()
        } else {
            sum((kelvin - d(754.15)) / d(481.0), &self.c)
        }
    }
}

fn grid(low: f64, high: f64, steps: u32) -> impl Iterator<Item = f64> {
    (0..=steps).map(move |i| if i == steps { high } else { low + (high - low) * f64::from(i) / f64::from(steps) })
}

#[test]
fn fixed_points() {
    let table = Table::read("data/temperature/its90_fixed_points.csv");
    let mut report = Report::new("ITS-90: Wr of the defining fixed points");
    for row in table.rows() {
        let (t, wr) = (celsius(row.number("T90_K")), row.number("Wr"));
        // printed to 1e-8, and so are the coefficients of the function
        report.check("read", row.at(), t, wr, reference_ratio_from_celsius(t).unwrap(), 1e-8);
    }
    report.equal("rows", "the table", "rows", 6, table.rows().count());
    for (substance, kelvin, wr) in [
        ("neon, triple point", 24.5561, 0.00844974),
        ("argon, triple point", 83.8058, 0.21585975),
        ("water, triple point", 273.16, 1.0),
        ("indium, freezing point", 429.7485, 1.60980185),
        ("zinc, freezing point", 692.677, 2.56891730),
        ("silver, freezing point", 1234.93, 4.28642053),
    ] {
        // the function itself gives 0.999 999 99 at 273.16 K: 1e-8, and its rounding
        let allowed = if kelvin == 273.16 { 1.5e-8 } else { 1e-8 };
        let t = celsius(kelvin);
        report.check("from memory", substance, t, wr, reference_ratio_from_celsius(t).unwrap(), allowed);
    }
    report.finish();
}

#[test]
fn reference_functions_and_their_inverses() {
    let printed = Printed::read();
    let mut report = Report::new("ITS-90: reference functions and exact inverses");
    for (low, high) in [(-259.3467, 0.01), (0.01, 961.78)] {
        for t in grid(low, high, 100_000) {
            // both functions meet at 273.16 K, which the lower owns
            let cold = t <= 0.01;
            let want = printed.ratio(t, cold);
            let got = reference_ratio_from_celsius(t).unwrap();
            report.check_error("Wr", "Metrologia 27", t, want.hi, got, (want - Twofold::new(got)).hi, 1e-12 * want.hi);
            let [low, high] = [-259.3467, 961.78].map(|t| reference_ratio_from_celsius(t).unwrap());
            let back = celsius_from_reference_ratio(want.hi.clamp(low, high)).unwrap();
            report.check("inverse", "Metrologia 27", t, t, back, 1e-9);
        }
    }
    let (lower, upper) = (printed.ratio(0.01, true).hi, printed.ratio(0.01, false).hi);
    report.check("join", "273.16 K", "Wr", lower, upper, 2e-8);
    if lower < upper {
        let inside = 0.5 * (lower + upper);
        report.check("gap", "273.16 K", inside, 0.01, celsius_from_reference_ratio(inside).unwrap(), 1e-12);
    }
    for bad in [f64::NAN, f64::INFINITY, -1.0, 0.0, 0.00119, 4.2865] {
        report.equal("refused", "ends", bad, true, celsius_from_reference_ratio(bad).is_err());
    }
    for bad in [f64::NAN, -259.35, 961.79] {
        report.equal("refused", "ends", bad, true, reference_ratio_from_celsius(bad).is_err());
    }
    report.finish();
}

/// A constructed certificate of a subrange: the library's, and its terms in the general form of the text.
struct Certificate {
    section: &'static str,
    deviation: Deviation,
    ab: [f64; 2],
    /// c₁ to c₅ with n (3.3.1), or b (W − 1) ln W in place of b (W − 1)² (3.3.1.3), or c and d (3.3.2).
    rest: Rest,
    coefficients: usize,
}

enum Rest {
    Logarithms([f64; 5], u32),
    ProductWithLogarithm,
    Powers { c: f64, d: f64, w_aluminium: f64 },
}

impl Certificate {
    /// W − Wr in twice the precision.
    fn written_out(&self, w: f64) -> Twofold {
        let d = Twofold::new;
        let [a, b] = self.ab.map(d);
        let (x, log) = (d(w) - d(1.0), d(w).ln());
        match &self.rest {
            Rest::Logarithms(c, n) => {
                let mut sum = a * x + b * x * x;
                for (i, c) in c.iter().enumerate() {
                    let mut term = d(*c);
                    for _ in 0..(i as u32 + 1 + n) {
                        term = term * log;
                    }
                    sum = sum + term;
                }
                sum
            }
            Rest::ProductWithLogarithm => a * x + b * x * log,
            Rest::Powers { c, d: last, w_aluminium } => {
                let above = d(w) - d(*w_aluminium);
                let last = if above.hi > 0.0 { d(*last) } else { d(0.0) };
                a * x + b * x * x + d(*c) * x * x * x + last * above * above
            }
        }
    }
}

fn certificates() -> Vec<Certificate> {
    // sizes as of a sound thermometer: W − Wr of some 1e-4
    let (a, b) = (-2.4e-4, -2.2e-4);
    let c = [1.3e-7, -2.6e-8, 3.1e-9, 4.4e-10, -2.5e-11];
    let (third, d, w_aluminium) = (2.9e-6, -5.5e-6, 3.3755);
    let none = Rest::Powers { c: 0.0, d: 0.0, w_aluminium };
    let new = |section, deviation, ab, rest, coefficients| Certificate { section, deviation, ab, rest, coefficients };
    let line = || Rest::Powers { c: 0.0, d: 0.0, w_aluminium };
    vec![
        new("3.3.1", Deviation::FromHydrogen { a, b, c }, [a, b], Rest::Logarithms(c, 2), 7),
        new(
            "3.3.1.1",
            Deviation::FromNeon { a, b, c: [c[0], c[1], c[2]] },
            [a, b],
            Rest::Logarithms([c[0], c[1], c[2], 0.0, 0.0], 0),
            5,
        ),
        new(
            "3.3.1.2",
            Deviation::FromOxygen { a, b, c1: c[0] },
            [a, b],
            Rest::Logarithms([c[0], 0.0, 0.0, 0.0, 0.0], 1),
            3,
        ),
        new("3.3.1.3", Deviation::FromArgon { a, b }, [a, b], Rest::ProductWithLogarithm, 2),
        new(
            "3.3.2",
            Deviation::ToSilver { a, b, c: third, d, w_aluminium },
            [a, b],
            Rest::Powers { c: third, d, w_aluminium },
            4,
        ),
        new(
            "3.3.2.1",
            Deviation::ToAluminium { a, b, c: third },
            [a, b],
            Rest::Powers { c: third, d: 0.0, w_aluminium },
            3,
        ),
        new("3.3.2.2", Deviation::ToZinc { a, b }, [a, b], line(), 2),
        new("3.3.2.3", Deviation::ToTin { a, b }, [a, b], line(), 2),
        new("3.3.2.4", Deviation::ToIndium { a }, [a, 0.0], line(), 1),
        new("3.3.2.5", Deviation::ToGallium { a }, [a, 0.0], line(), 1),
        new("3.3.3", Deviation::MercuryToGallium { a, b }, [a, b], none, 2),
    ]
}

/// `"24.5561 K..273.16 K"` and `"-38.8344..29.7646 C"` in °C.
fn range(text: &str) -> [f64; 2] {
    let (low, high) = text.split_once("..").unwrap();
    let kelvin = high.ends_with('K');
    [low, high].map(|t| {
        let t: f64 = t.trim_end_matches([' ', 'K', 'C']).parse().unwrap();
        if kelvin { celsius(t) } else { t }
    })
}

/// `"9;12-15"` is five points.
fn count(points: &str) -> usize {
    let part =
        |p: &str| p.split_once('-').map_or(1, |(a, b)| b.parse::<usize>().unwrap() + 1 - a.parse::<usize>().unwrap());
    points.split(';').map(part).sum()
}

#[test]
fn deviation_functions_of_every_subrange() {
    let printed = Printed::read();
    let table = Table::read("data/temperature/its90_deviation_functions.csv");
    let certificates = certificates();
    let mut report = Report::new("ITS-90: deviation functions, constructed certificates");
    for row in table.rows() {
        let Some(own) = certificates.iter().find(|c| c.section == row.text("section")) else {
            report.fail("section", row.at(), row.text("section"));
            continue;
        };
        // the triple point of water fixes W = 1; every other point one coefficient
        report.equal("coefficients", row.at(), own.section, count(row.text("points")) - 1, own.coefficients);
        let [low, high] = range(row.text("range"));
        report.equal("range", row.at(), own.section, [low, high], own.deviation.range_celsius());
        let thermometer = StandardThermometer::new(25.5, own.deviation).unwrap();
        for t in grid(low, high, 10_000) {
            let w = thermometer.ratio_from_celsius(t).unwrap();
            let cold = own.section.starts_with("3.3.1") || (own.section == "3.3.3" && t <= 0.01);
            // W is the one number with W − (W − Wr)(W) = Wr(T)
            let rest = Twofold::new(w) - own.written_out(w) - printed.ratio(t, cold);
            report.check_error("W", own.section, t, w, w + rest.hi, rest.hi, 1e-12 * w);
            report.check("celsius of W", own.section, t, t, thermometer.celsius_from_ratio(w).unwrap(), 1e-9);
            let ohms = thermometer.ohms_from_celsius(t).unwrap();
            report.check("ohms", own.section, t, 25.5 * w, ohms, 1e-15 * ohms);
            let within = ohms.clamp(thermometer.ohms_range().min, thermometer.ohms_range().max);
            report.check("celsius of ohms", own.section, t, t, thermometer.celsius_from_ohms(within).unwrap(), 1e-9);
        }
        for bad in [low - 0.001, high + 0.001, f64::NAN] {
            report.equal("refused", own.section, bad, true, thermometer.ratio_from_celsius(bad).is_err());
        }
        let range = thermometer.ratio_range();
        for bad in [range.min.next_down(), range.max.next_up(), f64::NAN] {
            report.equal("refused", own.section, bad, true, thermometer.celsius_from_ratio(bad).is_err());
        }
    }
    report.equal("rows", "the table", "rows", certificates.len(), table.rows().count());
    report.finish();
}

/// A certificate made from its fixed points gives the fixed points back: a, b from W at tin and zinc, by hand.
#[test]
fn a_certificate_from_its_fixed_points() {
    let mut report = Report::new("ITS-90: a certificate from W at the freezing points of tin and zinc");
    // Wr as the scale prints them, W constructed
    let (wr_tin, wr_zinc, w_tin, w_zinc) = (1.89279768, 2.56891730, 1.8925804, 2.5684952);
    let (x, y) = ((w_tin - wr_tin) / (w_tin - 1.0), (w_zinc - wr_zinc) / (w_zinc - 1.0));
    let b = (y - x) / (w_zinc - w_tin);
    let a = x - b * (w_tin - 1.0);
    let thermometer = StandardThermometer::new(25.4987, Deviation::ToZinc { a, b }).unwrap();
    // Wr is printed to 1e-8 and dWr/dT is 0.0037 and 0.0035 per kelvin: 3 µK, and the function's own 1e-8 as much again
    for (t, w) in [(231.928, w_tin), (419.527, w_zinc)] {
        let within = w.min(thermometer.ratio_range().max);
        report.check("fixed point", "Metrologia 27", w, t, thermometer.celsius_from_ratio(within).unwrap(), 6e-6);
        report.check("W", "Metrologia 27", t, w, thermometer.ratio_from_celsius(t).unwrap(), 2e-8);
    }
    report.finish();
}

#[test]
fn what_is_no_certificate_is_refused() {
    let sound = Deviation::ToZinc { a: -2e-4, b: -1e-5 };
    assert!(StandardThermometer::new(25.5, sound).is_ok());
    for ohms in [0.0, -25.5, f64::NAN, f64::INFINITY] {
        assert!(StandardThermometer::new(ohms, sound).is_err(), "{ohms}");
    }
    for bad in [
        Deviation::ToZinc { a: f64::NAN, b: 0.0 },
        Deviation::ToIndium { a: f64::INFINITY },
        Deviation::ToIndium { a: 1.0 }, // W drops out
        Deviation::ToSilver { a: -2e-4, b: 0.0, c: 0.0, d: 0.0, w_aluminium: 1.0 },
        Deviation::FromHydrogen { a: 0.0, b: 0.0, c: [0.0, 0.0, 0.0, 0.0, 0.1] },
    ] {
        assert!(StandardThermometer::new(25.5, bad).is_err(), "{bad:?}");
    }
}

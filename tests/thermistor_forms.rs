//! Published forms of a thermistor's curve: four terms, β of two points, points, linearising resistors.
//!
//! - Amphenol Thermometrics, Sensor Temperature Resistance Curves - Reference Guide, Rev. C (2014), p. 5, material type 1:
//!   both four-term forms as printed in the header of data/temperature/thermistor_material1_table.csv, its rows, and β per
//!   range in thermistor_material1_beta.csv (all read).
//! - Points and linearising resistors: no source needed, the curve they must give follows from a β law or from the two
//!   resistor rules, in twice the precision.

mod support;

use ohmwright::chain::Real;
use ohmwright::chain::{Chain, Element, Network};
use ohmwright::signal::Around;
use ohmwright::thermistor::{Beta, Law, LogarithmOfRatio, Points, ReciprocalOfTemperature, Thermistor};
use support::report::Report;
use support::table::Table;
use support::twofold::Twofold;

const TABLE: &str = "data/temperature/thermistor_material1_table.csv";

/// The eight coefficients of the header: A to D, a to d.
fn printed() -> [f64; 8] {
    let text = support::read(TABLE);
    ["A=", "B=", "C=", "D=", "a=", "b=", "c=", "d="].map(|key| {
        let at = text.find(&format!(" {key}")).unwrap_or_else(|| panic!("no {key}")) + 1 + key.len();
        let end = text[at..].find([' ', '\n']).unwrap();
        text[at..at + end].parse().unwrap()
    })
}

fn logarithm(reference_ohms: f64) -> LogarithmOfRatio {
    let [a, b, c, d, ..] = printed();
    LogarithmOfRatio { reference_ohms, a, b, c, d, range_celsius: [-40.0, 155.0] }
}

fn reciprocal(reference_ohms: f64) -> ReciprocalOfTemperature {
    let [.., a, b, c, d] = printed();
    ReciprocalOfTemperature { reference_ohms, a, b, c, d, range_celsius: [-40.0, 155.0] }
}

fn thermistor(law: Law) -> Thermistor {
    Thermistor::new(law).unwrap()
}

fn kelvin(t: f64) -> Twofold {
    Twofold::new(t) + Twofold::new(27315.0) / Twofold::new(100.0)
}

#[test]
fn four_term_forms_against_the_printed_table() {
    let table = Table::read(TABLE);
    let mut report = Report::new("material type 1: both four-term forms");
    let (first, second) =
        (thermistor(Law::LogarithmOfRatio(logarithm(1.0))), thermistor(Law::ReciprocalOfTemperature(reciprocal(1.0))));
    for row in table.rows() {
        let (t, ratio, half) = (row.number("t_C"), row.number("ratio"), row.half_digit("ratio"));
        report.check("ratio", row.at(), t, ratio, first.ohms_from_celsius(t).unwrap(), half);
        let inside = |r: &Thermistor| ratio.clamp(r.ohms_range().min, r.ohms_range().max);
        // %/K by a central difference, wrong by about 1e-8 of it
        let h = 1e-3_f64.min(0.5 * (t + 40.0));
        let alpha = if h > 0.0 {
            let [below, above] = [t - h, t + h].map(|t| libm::log(first.ohms_from_celsius(t).unwrap()));
            100.0 * (above - below) / (2.0 * h)
        } else {
            let [here, above] = [t, t + 1e-5].map(|t| libm::log(first.ohms_from_celsius(t).unwrap()));
            100.0 * (above - here) / 1e-5
        };
        // printed to 0.01 %/K; a last zero is cut off in the table
        report.check("%/K", row.at(), t, row.number("alpha_pct_per_K"), alpha, 0.005);
        let rounding = 100.0 * half / ratio / alpha.abs();
        report.check(
            "celsius, first form",
            row.at(),
            ratio,
            t,
            first.celsius_from_ohms(inside(&first)).unwrap(),
            rounding,
        );
        // the guide says that the two forms are separate fits: up to 0.023 K apart
        let got = second.celsius_from_ohms(inside(&second)).unwrap();
        report.check("celsius, second form", row.at(), ratio, t, got, 0.023);
    }
    report.equal("rows", "the table", "rows", 18, table.rows().count());
    // 6 mK apart at 25 °C, where the second form gives R/R25 = 1 by 1/a
    let apart = second.celsius_from_ohms(first.ohms_from_celsius(25.0).unwrap()).unwrap() - 25.0;
    report.check("apart at 25 degC, mK", "the guide", 25, 6.0, 1e3 * apart.abs(), 0.5);
    report.finish();
}

#[test]
fn four_term_forms_are_exact_both_ways() {
    let mut report = Report::new("four-term forms, twice the precision");
    let d = Twofold::new;
    let (log, rec) = (logarithm(10e3), reciprocal(10e3));
    let (first, second) = (thermistor(Law::LogarithmOfRatio(log)), thermistor(Law::ReciprocalOfTemperature(rec)));
    for i in 0..=50_000 {
        let t = -40.0 + 195.0 * f64::from(i) / 50_000.0;
        let y = d(1.0) / kelvin(t);
        let want = d(10e3) * (d(log.a) + d(log.b) * y + d(log.c) * y * y + d(log.d) * y * y * y).exp();
        let got = first.ohms_from_celsius(t).unwrap();
        report.check_error("ohms, first form", "Twofold", t, want.hi, got, (want - d(got)).hi, 1e-12 * want.hi);
        let within = want.hi.clamp(first.ohms_range().min, first.ohms_range().max);
        report.check("celsius, first form", "Twofold", t, t, first.celsius_from_ohms(within).unwrap(), 1e-9);
        // second form: the temperature of the resistance that was found
        let ohms = second.ohms_from_celsius(t).unwrap();
        let l = (d(ohms) / d(10e3)).ln();
        let back = d(1.0) / (d(rec.a) + d(rec.b) * l + d(rec.c) * l * l + d(rec.d) * l * l * l);
        report.check_error("ohms, second form", "Twofold", t, ohms, ohms, (back - kelvin(t)).hi, 1e-11);
        report.check("celsius, second form", "Twofold", t, t, second.celsius_from_ohms(ohms).unwrap(), 1e-9);
    }
    report.finish();
}

#[test]
fn beta_between_two_points() {
    let table = Table::read("data/temperature/thermistor_material1_beta.csv");
    let mut report = Report::new("material type 1: beta of two points");
    for row in table.rows() {
        let (t1, t2) = (row.number("t1_C"), row.number("t2_C"));
        let (ratio, half) = (row.number("ratio"), row.half_digit("ratio"));
        let law = Beta::through([t1, 1e3 * ratio], [t2, 1e3], [-40.0, 155.0]).unwrap();
        // the ratio is rounded too: half a digit of it is worth this much of beta
        let step = 1.0 / (t1 + 273.15) - 1.0 / (t2 + 273.15);
        report.check("beta", row.at(), ratio, row.number("beta_K"), law.beta_kelvin, 0.5 + half / ratio / step);
        let own = thermistor(Law::Beta(law));
        for (t, ohms) in [(t1, 1e3 * ratio), (t2, 1e3)] {
            report.check("through its points", row.at(), t, ohms, own.ohms_from_celsius(t).unwrap(), 1e-12 * ohms);
        }
    }
    report.equal("rows", "the table", "rows", 3, table.rows().count());
    for bad in
        [[[0.0, 1e3], [50.0, 2e3]], [[0.0, 1e3], [0.0, 1e3]], [[-274.0, 2e3], [0.0, 1e3]], [[0.0, -1.0], [50.0, 1e3]]]
    {
        report.equal(
            "refused",
            "constructed",
            format!("{bad:?}"),
            true,
            Beta::through(bad[0], bad[1], [0.0, 50.0]).is_err(),
        );
    }
    report.finish();
}

#[test]
fn points() {
    let table = Table::read(TABLE);
    let mut report = Report::new("material type 1: points");
    let all: Vec<[f64; 2]> = table.rows().map(|r| [r.number("t_C"), 1e4 * r.number("ratio")]).collect();
    let own = thermistor(Law::Points(Points::new(&all).unwrap()));
    for [t, ohms] in &all {
        report.check("through its points", "the table", t, *ohms, own.ohms_from_celsius(*t).unwrap(), 1e-12 * ohms);
        let within = ohms.clamp(own.ohms_range().min, own.ohms_range().max);
        report.check("and back", "the table", ohms, *t, own.celsius_from_ohms(within).unwrap(), 1e-9);
    }
    for pair in all.windows(2) {
        let mut last = f64::INFINITY;
        for i in 0..=2000 {
            let t = (pair[0][0] + (pair[1][0] - pair[0][0]) * f64::from(i) / 2000.0).min(pair[1][0]);
            let ohms = own.ohms_from_celsius(t).unwrap();
            let between = ohms < last && ohms <= pair[0][1] * (1.0 + 1e-14) && ohms >= pair[1][1] * (1.0 - 1e-14);
            report.equal("falls, between its points", "the table", t, true, between);
            last = ohms;
            let within = ohms.clamp(own.ohms_range().min, own.ohms_range().max);
            report.check("round trip", "the table", t, t, own.celsius_from_ohms(within).unwrap(), 1e-9);
        }
    }
    // every other row left out: half a digit of a ratio is at most 0.5 in 1000, or 0.016 K, and what the form itself
    // misses over steps of 20 K must stay inside that (common practice, no source)
    let half: Vec<[f64; 2]> = all.iter().step_by(2).copied().collect();
    let coarse = thermistor(Law::Points(Points::new(&half).unwrap()));
    for [t, ohms] in all.iter().skip(1).step_by(2).filter(|p| p[0] < half[half.len() - 1][0]) {
        report.check("rows left out", "the table", ohms, *t, coarse.celsius_from_ohms(*ohms).unwrap(), 0.016);
    }
    // points of one β law give that law, exactly
    let law = Beta { r25_ohms: 10e3, beta_kelvin: 3950.0, range_celsius: [-40.0, 120.0] };
    let exact = thermistor(Law::Beta(law));
    let of_law: Vec<[f64; 2]> = [-40.0, -31.0, 0.0, 3.0, 25.0, 80.0, 120.0]
        .iter()
        .map(|t| [*t, exact.ohms_from_celsius(*t).unwrap()])
        .collect();
    let own = thermistor(Law::Points(Points::new(&of_law).unwrap()));
    for i in 0..=16_000 {
        let t = -40.0 + f64::from(i) / 100.0;
        let want = exact.ohms_from_celsius(t).unwrap();
        report.check("a beta law stays one", "constructed", t, want, own.ohms_from_celsius(t).unwrap(), 1e-12 * want);
    }
    // steps and shelves: the inverse must not leave its interval
    let harsh = [[0.0, 1e5], [10.0, 9.99e4], [20.0, 1e3], [40.0, 999.0], [60.0, 10.0], [90.0, 9.0]];
    let own = thermistor(Law::Points(Points::new(&harsh).unwrap()));
    for i in 0..=45_000 {
        let t = f64::from(i) / 500.0;
        let ohms = own.ohms_from_celsius(t).unwrap();
        let within = ohms.clamp(own.ohms_range().min, own.ohms_range().max);
        let back = own.celsius_from_ohms(within).unwrap();
        // where the curve is level at an end, a resistance tells little of its temperature: the answer has this resistance
        let got = own.ohms_from_celsius(back.clamp(0.0, 90.0)).unwrap();
        report.check("steps and shelves, ohms", "constructed", t, within, got, 2e-14 * within);
        if (1.0..=89.0).contains(&t) {
            report.check("steps and shelves", "constructed", t, t, back, 1e-9);
        }
    }
    let two = Points::new(&[of_law[0], of_law[6]]).unwrap();
    report.check(
        "two points",
        "constructed",
        25,
        10e3,
        thermistor(Law::Points(two)).ohms_from_celsius(25.0).unwrap(),
        1e-8,
    );
    let many = [[0.0, 1.0]; 25];
    for bad in [
        &[[0.0, 1e3]][..],
        &many[..],
        &[[0.0, 1e3], [0.0, 900.0]],
        &[[0.0, 1e3], [1.0, 1e3]],
        &[[0.0, 1e3], [1.0, f64::NAN]],
        &[[f64::NAN, 1e3], [1.0, 900.0]],
        &[[0.0, 1e3], [1.0, 0.0]],
    ] {
        report.equal("refused", "constructed", format!("{bad:?}"), true, Points::new(bad).is_err());
    }
    report.finish();
}

#[test]
fn linearising_resistors() {
    let mut report = Report::new("linearising resistors");
    let d = Twofold::new;
    let law = Law::LogarithmOfRatio(logarithm(10e3));
    let bare = thermistor(law);
    let chain = |around| Chain { around, ..Chain::new(Network::Resistance { leads: None }, Element::Thermistor(law)) };
    let around = |parallel, series| Around { parallel, series, ..Around::NONE };
    for (parallel, series) in [(Some(10e3), None), (None, Some(2.2e3)), (Some(3.3e3), Some(470.0)), (None, None)] {
        let own = chain(around(parallel, series)).plan().unwrap();
        // a leak of the insulation is a resistor in parallel like any other
        let leaking = chain(Around { leakage: parallel, series, ..Around::NONE }).plan().unwrap();
        for i in 1..19_500 {
            let t = (-40.0 + f64::from(i) / 100.0).min(155.0);
            let r = bare.ohms_from_celsius(t).unwrap();
            // 1/(1/R + 1/R_p) + R_s
            let pair = parallel.map_or(d(r), |p| d(1.0) / (d(1.0) / d(r) + d(1.0) / d(p)));
            let want = (pair + d(series.unwrap_or(0.0))).hi;
            let got = own.forward(t, 0.0).unwrap();
            report.check("ohms", format!("{parallel:?} {series:?}"), t, want, got, 1e-12 * want);
            // where a parallel resistor hides the thermistor, the rounding of the whole's resistance counts
            let per_ohm = parallel.map_or(1.0, |p| (1.0 + r / p) * (1.0 + r / p));
            let hidden = 4e-16 * want * per_ohm / (0.02 * r);
            let back = own.one(want).number().unwrap();
            report.check("celsius", format!("{parallel:?} {series:?}"), t, t, back, 1e-9_f64.max(hidden));
            report.check(
                "leakage",
                format!("{parallel:?} {series:?}"),
                t,
                back,
                leaking.one(want).number().unwrap(),
                0.0,
            );
        }
    }
    for bad in [around(Some(0.0), None), around(Some(f64::NAN), None), around(None, Some(-1.0))] {
        report.equal("refused", "constructed", format!("{bad:?}"), true, chain(bad).plan().is_err());
    }
    report.finish();
}

#[test]
fn what_is_no_curve_is_refused() {
    let (log, rec) = (logarithm(10e3), reciprocal(10e3));
    for bad in [
        Law::LogarithmOfRatio(LogarithmOfRatio { reference_ohms: 0.0, ..log }),
        Law::LogarithmOfRatio(LogarithmOfRatio { d: f64::NAN, ..log }),
        Law::LogarithmOfRatio(LogarithmOfRatio { b: -4400.0, ..log }), // rises
        Law::LogarithmOfRatio(LogarithmOfRatio { range_celsius: [50.0, 0.0], ..log }),
        // falls, but the straight line is no start for it
        Law::LogarithmOfRatio(LogarithmOfRatio { b: 1.0, c: 0.0, d: 1e9, ..log }),
        Law::ReciprocalOfTemperature(ReciprocalOfTemperature { b: -2.5e-4, ..rec }),
        Law::ReciprocalOfTemperature(ReciprocalOfTemperature { a: f64::INFINITY, ..rec }),
    ] {
        assert!(Thermistor::new(bad).is_err(), "{bad:?}");
    }
    let own = thermistor(Law::LogarithmOfRatio(log));
    for bad in [f64::NAN, f64::INFINITY, 0.0, -1.0, own.ohms_range().max.next_up(), own.ohms_range().min.next_down()] {
        assert!(own.celsius_from_ohms(bad).is_err(), "{bad}");
    }
    assert!(own.ohms_from_celsius(-40.1).is_err() && own.ohms_from_celsius(155.1).is_err());
}

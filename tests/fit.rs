//! Fits against certified and published values, and back to the curves that points were made from.
//!
//! - NIST/ITL Statistical Reference Datasets: Pontius (data/strain/pontius_*.csv), MGH10 from both starting points
//!   (data/temperature/thermistor_mgh10_*.csv).
//! - NIST/SEMATECH e-Handbook, 4.5.2.1: the load of a deflection with its interval (data/strain/calibration_inverse.csv).
//! - JCGM 100:2008, H.3 (data/strain/gum_h3_*.csv).
//! - Fieller's interval of a straight line in closed form, the textbook formula.
//! - 50-digit points on known curves (tests/fit_oracle/curves.csv): temperatures come back to 1e-9 K.
#![cfg(feature = "std")]

mod support;

use ohmwright::distribution::student_quantile;
use ohmwright::fit::{
    Cell, Coverage, Curve, FitError, Fourth, Points, Polynomial, Subrange, ThermistorForm, Uncertainty, its90,
    nonlinear, platinum, polynomial, thermal_output, thermistor, transducer, vogel,
};
use ohmwright::platinum::{IEC_60751, Platinum};
use ohmwright::thermistor::Thermistor;
use support::report::Report;
use support::table::Table;

fn columns(path: &str, x: &str, y: &str) -> (Vec<f64>, Vec<f64>) {
    Table::read(path).rows().map(|row| (row.number(x), row.number(y))).unzip()
}

fn pontius() -> (Vec<f64>, Vec<f64>) {
    columns("data/strain/pontius_data.csv", "x", "y")
}

#[test]
fn pontius_certified() {
    let (x, y) = pontius();
    let fit = transducer(&Points::new(&x, &y), 2, false).unwrap();
    let curve = &fit.curve;
    let table = Table::read("data/strain/pontius_certified.csv");
    let mut report = Report::new("NIST StRD Pontius");
    for row in table.rows() {
        let want = row.number("certified");
        let got = match row.text("name") {
            "residual_sd" => curve.statistics().residual_standard_deviation,
            name => {
                let i: usize = name[1..].parse().unwrap();
                let deviation = row.number("std_dev");
                let u = curve.coefficients()[i].standard_uncertainty;
                report.check("standard deviation", row.at(), name, deviation, u, 1e-9 * deviation.abs());
                report.equal("coefficient", row.at(), name, curve.coefficients()[i].value, fit.coefficients[i]);
                fit.coefficients[i]
            }
        };
        report.check("certified", row.at(), row.text("name"), want, got, 1e-9 * want.abs());
    }
    report.equal("degrees of freedom", "the table", "37", 37, curve.statistics().degrees_of_freedom);
    report.finish();
}

#[test]
fn handbook_inverse_reading() {
    let (x, y) = pontius();
    let fit = transducer(&Points::new(&x, &y), 2, false).unwrap();
    let table = Table::read("data/strain/calibration_inverse.csv");
    let mut report = Report::new("the load of a deflection");
    for row in table.rows() {
        let inverse = fit.curve.inverse(row.number("deflection"), &Coverage::default()).unwrap();
        for (name, got) in [("load", inverse.x), ("low", inverse.handbook[0]), ("high", inverse.handbook[1])] {
            let published = format!("published_{name}");
            report.check(&published, row.at(), name, row.number(&published), got, row.half_digit(&published));
            report.check(name, row.at(), name, row.number(name), got, row.half_digit(name));
        }
        // the curve is all but straight and well known: both intervals agree to a thousandth of their width
        let width = inverse.handbook[1] - inverse.handbook[0];
        for (exact, handbook) in inverse.exact.into_iter().zip(inverse.handbook) {
            report.check("exact beside first order", row.at(), "end", handbook, exact, 1e-3 * width);
        }
    }
    report.finish();
}

#[test]
fn mgh10_from_both_starting_points() {
    let (x, y) = columns("data/temperature/thermistor_mgh10_data.csv", "x", "y");
    let table = Table::read("data/temperature/thermistor_mgh10_certified.csv");
    let rows: Vec<_> = table.rows().filter(|row| row.text("name").starts_with('b')).collect();
    let mut report = Report::new("NIST StRD MGH10");
    for start in ["start1", "start2", "our own"] {
        let begin = (start != "our own").then(|| {
            let values: Vec<f64> = rows.iter().map(|row| row.number(start)).collect();
            <[f64; 3]>::try_from(values).unwrap()
        });
        let fit = vogel(&Points::new(&x, &y), begin).unwrap().fit;
        println!("MGH10 from {start}: {} iterations, condition {:.1e}", fit.iterations, fit.condition);
        for (i, row) in rows.iter().enumerate() {
            let (want, deviation) = (row.number("certified"), row.number("std_dev"));
            let (got, u) = (fit.coefficients[i], fit.standard_uncertainties[i]);
            report.check("certified", row.at(), start, want, got, 1e-8 * want.abs());
            report.check("standard deviation", row.at(), start, deviation, u, 1e-8 * deviation.abs());
            report.check(
                "covariance",
                row.at(),
                start,
                deviation * deviation,
                fit.covariance[i][i],
                3e-8 * deviation * deviation,
            );
        }
        // certified residual standard deviation, from memory; √(8.7945855171E+01/13)
        let s = fit.residual_standard_deviation;
        report.check("residual standard deviation", "NIST StRD MGH10", start, 2.6009740065, s, 1e-8 * s);
        report.equal("degrees of freedom", "the table", start, 13, fit.degrees_of_freedom);
    }
    report.finish();
}

#[test]
fn points_that_lie_on_the_curve_to_rounding() {
    // R = b1 exp(b2/(t + b3)) of 0.005 Ω, 6200 K, 345 K, to 2 decimals and to all digits (computed elsewhere)
    let celsius = [50.0, 70.0, 90.0, 110.0];
    let printed = [32790.21, 15389.51, 7743.09, 4138.37];
    let fit = vogel(&Points::new(&celsius, &printed), None).unwrap().fit;
    assert!((fit.coefficients[1] / 6200.0 - 1.0).abs() < 1e-3 && fit.residual_standard_deviation < 0.02);
    for scale in [1.0, 1e-6, 1e6] {
        let exact: Vec<f64> = celsius.iter().map(|t| scale * 0.005 * libm::exp(6200.0 / (t + 345.0))).collect();
        let fit = vogel(&Points::new(&celsius, &exact), None).unwrap().fit;
        for (got, want) in fit.coefficients.into_iter().zip([scale * 0.005, 6200.0, 345.0]) {
            assert!((got / want - 1.0).abs() < 1e-9, "{got} {want}");
        }
        let three = vogel(&Points::new(&celsius[..3], &exact[..3]), None).unwrap().fit;
        assert!((three.coefficients[1] / 6200.0 - 1.0).abs() < 1e-9 && three.residual_standard_deviation.is_nan());
    }
}

#[test]
fn thermometer_of_the_guide() {
    let (t, b) = columns("data/strain/gum_h3_data.csv", "t_C", "b_C");
    let wanted = Polynomial { degree: 1, about: 20.0, through_zero: false };
    let fit = polynomial(&Points::new(&t, &b), wanted).unwrap();
    let table = Table::read("data/strain/gum_h3_results.csv");
    let mut report = Report::new("JCGM 100, H.3");
    for row in table.rows() {
        let [y1, y2] = fit.coefficients() else { panic!("a line") };
        let got = match row.text("name") {
            "y1" => y1.value,
            "u_y1" => y1.standard_uncertainty,
            "y2" => y2.value,
            "u_y2" => y2.standard_uncertainty,
            "r" => fit.correlation()[0][1],
            "s" => fit.statistics().residual_standard_deviation,
            "b30" => fit.at(30.0),
            "u_b30" => fit.standard_uncertainty(30.0),
            "nu" => fit.statistics().degrees_of_freedom as f64,
            other => panic!("{other}"),
        };
        let text = row.text("published");
        let allowed = if text.contains('.') { row.half_digit("published") } else { 0.0 };
        report.check("published", row.at(), row.text("name"), row.number("published"), got, allowed);
    }
    // H.3.4: u(b) is the same from the covariance of y1, y2 in closed form, (H.15)
    let u = |i: usize| fit.coefficients()[i].standard_uncertainty;
    let square = u(0) * u(0) + 100.0 * u(1) * u(1) + 20.0 * u(0) * u(1) * fit.correlation()[0][1];
    let at_30 = fit.standard_uncertainty(30.0);
    report.check("(H.15)", "JCGM 100, H.3.4", "30", square.sqrt(), at_30, 1e-12);
    report.finish();
}

fn square(v: f64) -> f64 {
    v * v
}

/// Fieller's interval of x for a mean of m readings on a straight line, by the quadratic of the textbook.
fn fieller(x: &[f64], y: &[f64], y0: f64, m: f64, k: f64) -> [f64; 2] {
    let n = x.len() as f64;
    let (xm, ym) = (x.iter().sum::<f64>() / n, y.iter().sum::<f64>() / n);
    let sxx: f64 = x.iter().map(|x| (x - xm) * (x - xm)).sum();
    let b = x.iter().zip(y).map(|(x, y)| (x - xm) * (y - ym)).sum::<f64>() / sxx;
    let sse: f64 = x.iter().zip(y).map(|(x, y)| square(y - ym - b * (x - xm))).sum();
    let s2 = sse / (n - 2.0);
    // (y0 − ym − b d)² = k² s² (1/m + 1/n + d²/Sxx), d = x − xm
    let (e, ks) = (y0 - ym, k * k * s2);
    let (a2, a1, a0) = (b * b - ks / sxx, -2.0 * b * e, e * e - ks * (1.0 / m + 1.0 / n));
    let root = (a1 * a1 - 4.0 * a2 * a0).sqrt();
    [xm + (-a1 - root) / (2.0 * a2), xm + (-a1 + root) / (2.0 * a2)]
}

#[test]
fn straight_line_against_fieller() {
    // scattered enough that the two intervals differ
    let x = [0.0, 1.0, 2.0, 3.0, 4.0, 5.0, 6.0];
    let y = [0.3, 0.8, 2.4, 2.7, 4.5, 4.6, 6.3];
    let fit = polynomial(&Points::new(&x, &y), Polynomial::of_degree(1)).unwrap();
    let mut report = Report::new("Fieller 1954");
    for (y0, repeats, probability) in [(3.0, 1, 0.95), (4.7, 1, 0.95), (1.1, 4, 0.95), (3.3, 1, 0.99)] {
        let coverage = Coverage { probability, repeats, reading_uncertainty: None };
        let got = fit.inverse(y0, &coverage).unwrap();
        let k = student_quantile((1.0 + probability) / 2.0, 5.0);
        let want = fieller(&x, &y, y0, f64::from(repeats), k);
        for (want, got) in want.into_iter().zip(got.exact) {
            report.check("end", "closed form", y0, want, got, 1e-10);
        }
        assert!(got.exact[0] < got.handbook[0] || got.exact[1] > got.handbook[1]);
    }
    // a reading beyond an end by no more than its own band belongs to a place just beyond it
    let [low, high] = [fit.at(0.0), fit.at(6.0)];
    let over = fit.inverse(high + 0.1, &Coverage::default()).unwrap();
    report.check("beyond the end", "straight line", "6 + 0.1/slope", 6.0 + 0.1 / fit.slope(6.0), over.x, 1e-12);
    let under = fit.inverse(low - 0.1, &Coverage::default()).unwrap();
    report.check("beyond the end", "straight line", "-0.1/slope", -0.1 / fit.slope(0.0), under.x, 1e-12);
    assert!(
        fit.inverse(high + 2.0, &Coverage::default()).is_err() && fit.inverse(low - 2.0, &Coverage::default()).is_err()
    );
    // with hardly any slope no reading tells x: the interval is open
    let flat = [0.3, 0.1, 0.4, 0.2, 0.3, 0.5, 0.35];
    let fit = polynomial(&Points::new(&x, &flat), Polynomial::of_degree(1)).unwrap();
    let got = fit.inverse(0.3, &Coverage { probability: 0.99, ..Coverage::default() }).unwrap();
    assert_eq!(got.exact, [f64::NEG_INFINITY, f64::INFINITY]);
    report.finish();
}

#[test]
fn confidence_band_by_hand() {
    // x = 0 1 2 3, y = 1 3 5 8: s² = 0.3/2, u²(y(0)) = s² · 0.7, u²(y(3/2)) = s²/4; t(0.975, 2) = 4.302652730
    let fit = polynomial(&Points::new(&[0.0, 1.0, 2.0, 3.0], &[1.0, 3.0, 5.0, 8.0]), Polynomial::of_degree(1)).unwrap();
    let near = |a: f64, b: f64| assert!((a - b).abs() < 1e-9, "{a} {b}");
    near(fit.statistics().residual_standard_deviation, 0.15_f64.sqrt());
    for (x, y, factor) in [(0.0, 0.8, 0.7), (1.5, 4.25, 0.25)] {
        let half = 4.302652730 * (0.15_f64 * factor).sqrt();
        let [low, high] = fit.band(x, 0.95).unwrap();
        near(low, y - half);
        near(high, y + half);
    }
    let shares: f64 = fit.residuals().iter().map(|r| r.leverage).sum();
    near(shares, 2.0);
}

/// Points and check places of one kind of curves.csv.
fn curve_points(table: &Table, kind: &str, usage: &str) -> (Vec<f64>, Vec<f64>) {
    table
        .rows()
        .filter(|row| row.text("kind") == kind && row.text("use") == usage)
        .map(|row| (row.number("x"), row.number("y")))
        .unzip()
}

#[test]
fn curves_at_fifty_digits_come_back() {
    let table = Table::read("tests/fit_oracle/curves.csv");
    let mut kinds: Vec<&str> = table.rows().map(|row| row.text("kind")).collect();
    kinds.dedup();
    assert_eq!(kinds.len(), 21);
    let mut report = Report::new("points on known curves");
    for kind in kinds {
        let (x, y) = curve_points(&table, kind, "fit");
        let points = Points::new(&x, &y);
        let law: Box<dyn Fn(f64) -> f64> = match kind {
            "platinum" | "platinum-warm" | "platinum-four" => {
                let fit = platinum(&points, None, Fourth::Auto).unwrap();
                assert_eq!(fit.coefficients.c == 0.0, kind == "platinum-warm", "{}", fit.note);
                let law = Platinum::new(fit.coefficients).unwrap();
                Box::new(move |ohms| law.celsius_from_ohms(ohms).unwrap())
            }
            "steinhart_hart" | "steinhart_hart-three" => thermistor_law(&points, ThermistorForm::SteinhartHart),
            "ratio_terms" => thermistor_law(&points, ThermistorForm::LogarithmOfRatio { reference_ohms: 1e4 }),
            "reciprocal_terms" => {
                thermistor_law(&points, ThermistorForm::ReciprocalOfTemperature { reference_ohms: 1e4 })
            }
            "thermal-output" => {
                let fit = thermal_output(&points, None, 2.0).unwrap();
                assert_eq!(fit.degree, 3, "{}", fit.note);
                // here the other way round: microstrain from °C
                let (check_x, check_y) = curve_points(&table, kind, "check");
                for (t, want) in check_x.iter().zip(&check_y) {
                    let got = fit.thermal_output.microstrain(*t).unwrap();
                    report.check(kind, "curves.csv", t, *want, got, 1e-11);
                }
                continue;
            }
            "transducer" => {
                let fit = transducer(&points, 3, false).unwrap();
                let curve = fit.curve;
                let exact = Coverage { reading_uncertainty: Some(0.0), ..Coverage::default() };
                Box::new(move |output| curve.inverse(output, &exact).unwrap().x)
            }
            other => {
                let name = other.strip_prefix("its90-").unwrap();
                let name = name.strip_suffix("-over").unwrap_or(name);
                let subrange = Subrange::ALL.into_iter().find(|s| s.name() == name).unwrap();
                let fit = its90(&points, subrange, None).unwrap();
                // the triple point of water is no point of the curve
                let spare = usize::from(other.ends_with("-over"));
                let statistics = fit.curve.statistics();
                assert_eq!((statistics.points, statistics.degrees_of_freedom), (x.len() - 1, spare), "{other}");
                for (t, off) in x.iter().zip(&fit.kelvin) {
                    // the reference functions themselves give Wr = 1 at 0.01 °C to 1e-8 only; dWr/dT = 3.987e-3 /K
                    let allowed = if *t == 0.01 { 1e-8 / 3.987e-3 } else { 1e-9 };
                    report.check("its90 at its points", "curves.csv", other, 0.0, *off, allowed);
                }
                Box::new(move |ohms| fit.thermometer.celsius_from_ohms(ohms).unwrap())
            }
        };
        let (check_x, check_y) = curve_points(&table, kind, "check");
        for (t, y) in check_x.iter().zip(&check_y) {
            report.check(kind, "curves.csv", y, *t, law(*y), 1e-9);
        }
    }
    report.finish();
}

fn thermistor_law(points: &Points<'_>, form: ThermistorForm) -> Box<dyn Fn(f64) -> f64> {
    let fit = thermistor(points, form).unwrap();
    let law = Thermistor::new(fit.law).unwrap();
    Box::new(move |ohms| law.celsius_from_ohms(ohms).unwrap())
}

#[test]
fn platinum_rule_for_c() {
    let iec = Platinum::new(IEC_60751).unwrap();
    let exact = |t: &[f64]| t.iter().map(|t| iec.ohms_from_celsius(*t).unwrap()).collect::<Vec<f64>>();
    let fit = |t: &[f64], ohms: &[f64]| platinum(&Points::new(t, ohms), None, Fourth::Auto).unwrap();
    // no point below 0 °C
    let t = [0.0, 50.0, 100.0, 150.0];
    let got = fit(&t, &exact(&t));
    assert_eq!((got.coefficients.c, got.coefficients.range_celsius), (0.0, [0.0, 150.0]), "{}", got.note);
    // too few to fit it: the cold point is left out
    let t = [-50.0, 0.0, 50.0, 100.0];
    let three = [-50.0, 0.0, 100.0];
    assert!(matches!(
        platinum(&Points::new(&three, &exact(&three)), None, Fourth::Auto),
        Err(FitError::TooFew { needed: 3, .. })
    ));
    // four points, C decided by how cold the coldest is
    let got = fit(&t, &exact(&t));
    assert!((got.coefficients.c / IEC_60751.c - 1.0).abs() < 1e-6, "{}", got.note);
    let t = [-10.0, 0.0, 50.0, 100.0];
    let got = fit(&t, &exact(&t));
    assert_eq!((got.coefficients.c, got.coefficients.range_celsius), (0.0, [0.0, 100.0]), "{}", got.note);
    assert_eq!(got.used, [false, true, true, true]);
    // scatter of some mK hides C near 0 °C, not at −100 °C
    let scatter = [2e-3, -1e-3, -2e-3, 1e-3, 2e-3, -2e-3, 1e-3, -1e-3];
    for (t, wanted) in [
        ([-10.0, -5.0, 0.0, 20.0, 40.0, 60.0, 80.0, 100.0], false),
        ([-100.0, -50.0, 0.0, 20.0, 40.0, 60.0, 80.0, 100.0], true),
    ] {
        let ohms: Vec<f64> = exact(&t).iter().zip(scatter).map(|(r, d)| r + d).collect();
        let got = fit(&t, &ohms);
        assert_eq!(got.coefficients.c != 0.0, wanted, "{}", got.note);
        assert_eq!(got.coefficients.range_celsius, [t[0], 100.0]);
        // asked for
        let zero = platinum(&Points::new(&t, &ohms), None, Fourth::Zero).unwrap();
        assert_eq!(zero.coefficients.c, 0.0);
        let fitted = platinum(&Points::new(&t, &ohms), None, Fourth::Fit).unwrap();
        assert!(fitted.coefficients.c != 0.0);
    }
}

#[test]
fn platinum_with_r0_held() {
    let iec = Platinum::new(IEC_60751).unwrap();
    let t = [-80.0, -40.0, 0.0, 50.0, 100.0, 200.0];
    let ohms: Vec<f64> = t.iter().map(|t| iec.ohms_from_celsius(*t).unwrap()).collect();
    let fit = platinum(&Points::new(&t, &ohms), Some(100.0), Fourth::Auto).unwrap();
    for (got, want) in
        [(fit.coefficients.a, IEC_60751.a), (fit.coefficients.b, IEC_60751.b), (fit.coefficients.c, IEC_60751.c)]
    {
        assert!((got / want - 1.0).abs() < 1e-9, "{got:e} {want:e}");
    }
    assert_eq!(fit.coefficients.r0_ohms, 100.0);
    assert_eq!(fit.curve.coefficients()[0].standard_uncertainty, 0.0);
    assert!((fit.curve.at(100.0) - 138.5055).abs() < 1e-10);
    let inverse =
        fit.temperature(138.5055, &Coverage { reading_uncertainty: Some(0.0), ..Coverage::default() }).unwrap();
    assert!((inverse.x - 100.0).abs() < 1e-9);
}

#[test]
fn uncertainty_of_a_quotient_follows_to_first_order() {
    // u(A) by propagation against the spread of A when each point is moved: Σ (∂A/∂Rᵢ)² s², derivatives by differences
    let t = [0.0, 60.0, 120.0, 200.0, 320.0, 420.0];
    let off = [1.3e-3, -0.7e-3, 0.4e-3, -1.1e-3, 0.9e-3, -0.2e-3];
    let iec = Platinum::new(IEC_60751).unwrap();
    let ohms: Vec<f64> = t.iter().zip(off).map(|(t, d)| iec.ohms_from_celsius(*t).unwrap() + d).collect();
    let run = |ohms: &[f64]| platinum(&Points::new(&t, ohms), None, Fourth::Auto).unwrap();
    let fit = run(&ohms);
    let s = fit.curve.statistics().residual_standard_deviation;
    let pick = |c: &[f64; 3], i: usize| c[i];
    let abc = |ohms: &[f64]| {
        let k = run(ohms).coefficients;
        [k.r0_ohms, k.a, k.b]
    };
    for i in 0..3 {
        let sum: f64 = (0..t.len())
            .map(|point| {
                let moved = |by: f64| {
                    let mut ohms = ohms.clone();
                    ohms[point] += by;
                    pick(&abc(&ohms), i)
                };
                square((moved(1e-3) - moved(-1e-3)) / 2e-3 * s)
            })
            .sum();
        let u = fit.curve.coefficients()[i].standard_uncertainty;
        assert!((u / sum.sqrt() - 1.0).abs() < 1e-6, "{i}: {u:e} {:e}", sum.sqrt());
    }
}

#[test]
fn stated_uncertainties_weigh() {
    // weights 1, 1/4, 1 on a mean line; by hand from the normal equations: x = 0 1 2, y = 0 2 2, u = 1 2 1
    // S = 9/4, Sx = 9/4, Sxx = 17/4, Sy = 5/2, Sxy = 9/2: D = 9/2·… slope = (S Sxy − Sx Sy)/(S Sxx − Sx²)
    let (s, sx, sxx, sy, sxy) = (2.25, 2.25, 4.25, 2.5, 4.5);
    let d = s * sxx - sx * sx;
    let (slope, constant) = ((s * sxy - sx * sy) / d, (sxx * sy - sx * sxy) / d);
    let (x, y, u) = ([0.0, 1.0, 2.0], [0.0, 2.0, 2.0], [1.0, 2.0, 1.0]);
    let points = Points { uncertainty: Uncertainty::OfY(&u), ..Points::new(&x, &y) };
    let fit = polynomial(&points, Polynomial::of_degree(1)).unwrap();
    let near = |a: f64, b: f64| assert!((a - b).abs() < 1e-14, "{a} {b}");
    near(fit.coefficients()[0].value, constant);
    near(fit.coefficients()[1].value, slope);
    // a point of twice the uncertainty has a quarter of the weight; h = w (Sxx − 2 x Sx + x² S)/D, by hand
    for (r, (x, w)) in fit.residuals().iter().zip([(0.0, 1.0), (1.0, 0.25), (2.0, 1.0)]) {
        near(r.leverage, w * (sxx - 2.0 * x * sx + x * x * s) / d);
    }
    // scatter is below what was stated: the covariance is the stated one, k is of the normal distribution
    near(fit.covariance()[0][0], sxx / d);
    near(fit.covariance()[0][1], -sx / d);
    assert!((fit.coverage_factor(0.95).unwrap() - 1.959964).abs() < 1e-6);
    // stated a tenth as large it is above: multiplied by χ²/ν, k from Student's t
    let tenth = u.map(|u| u / 10.0);
    let points = Points { uncertainty: Uncertainty::OfY(&tenth), ..points };
    let wide = polynomial(&points, Polynomial::of_degree(1)).unwrap();
    let ratio = wide.statistics().residual_standard_deviation;
    assert!(ratio > 1.0);
    near(wide.covariance()[0][0], sxx / d / 100.0 * ratio * ratio);
    assert!((wide.coverage_factor(0.95).unwrap() - 12.706).abs() < 5e-4);
    // of x: the slope turns them into those of y; a line of slope about 2 doubles them
    let (x, y) = ([0.0, 1.0, 2.0, 3.0], [0.0, 2.0, 4.0, 6.0]);
    let of_x = polynomial(
        &Points { uncertainty: Uncertainty::OfX(&[0.1; 4]), ..Points::new(&x, &y) },
        Polynomial::of_degree(1),
    );
    let of_y = polynomial(
        &Points { uncertainty: Uncertainty::OfY(&[0.2; 4]), ..Points::new(&x, &y) },
        Polynomial::of_degree(1),
    );
    near(of_x.unwrap().covariance()[1][1], of_y.unwrap().covariance()[1][1]);
}

#[test]
fn what_is_missing_is_said() {
    let line = |x: &[f64], y: &[f64], degree| polynomial(&Points::new(x, y), Polynomial::of_degree(degree));
    let said = |result: Result<Curve, FitError>| result.unwrap_err().to_string();
    assert_eq!(
        said(line(&[1.0, 1.0, 2.0], &[1.0, 1.1, 2.0], 2)),
        "3 different values of x are needed, and the points have 2: 1, 2"
    );
    assert!(said(line(&[1.0, 2.0], &[1.0, f64::NAN], 1)).starts_with("point 2: value is not a finite number"));
    assert!(matches!(
        line(&[1.0, f64::INFINITY], &[1.0, 2.0], 1),
        Err(FitError::Point { index: 1, what: Cell::X, .. })
    ));
    assert!(said(line(&[1.0, 2.0], &[1.0], 1)).contains("has 1 elements where"));
    assert!(said(line(&[1.0, 2.0], &[1.0, 2.0], 7)).contains("degree of the polynomial 7 is outside 1..=6"));
    // numbers whose squares no double holds
    assert!(
        line(&[0.0, 1.0, 2.0], &[0.0, 1e300, 2e305], 1).is_err()
            && line(&[0.0, 1e305, 2e305], &[0.0, 1.0, 2.0], 1).is_err()
    );
    // two places that doubles hardly tell apart
    let near = 1.0 + 4.0 * f64::EPSILON;
    assert!(
        line(&[0.0, 1.0, near, 3.0], &[0.0, 1.0, 1.0, 3.0], 3).is_err_and(|e| matches!(e, FitError::Dependent { .. }))
    );

    let few = its90(&Points::new(&[0.01, 231.928], &[25.0, 47.0]), Subrange::Zinc, None).unwrap_err().to_string();
    assert!(few.contains("tin 231.928, zinc 419.527 °C") && few.contains("have 1: 231.928"), "{few}");
    let water = its90(&Points::new(&[231.928], &[47.0]), Subrange::Indium, None).unwrap_err().to_string();
    assert!(water.contains("subrange") || water.contains("triple point of water"), "{water}");
    let cold = platinum(&Points::new(&[-50.0, -20.0], &[80.3, 92.2]), None, Fourth::Auto).unwrap_err().to_string();
    assert!(cold.contains("3 different temperatures at or above 0 °C are needed, and the points have none"), "{cold}");
    let few = thermistor(&Points::new(&[0.0, 25.0], &[32e3, 10e3]), ThermistorForm::SteinhartHart).unwrap_err();
    assert!(few.to_string().contains("3 different temperatures are needed, and the points have 2: 0, 25 °C"), "{few}");
    // a certificate that turns back, and a reading outside
    let turn = transducer(&Points::new(&[0.0, 1.0, 2.0, 3.0], &[0.0, 1.0, 1.2, 0.3]), 2, false).unwrap_err();
    assert!(turn.to_string().contains("turns back"), "{turn}");
    let curve = line(&[0.0, 1.0, 2.0], &[0.0, 1.0, 2.1], 1).unwrap();
    assert!(
        curve.inverse(5.0, &Coverage::default()).is_err() && curve.inverse(f64::NAN, &Coverage::default()).is_err()
    );
    assert!(curve.band(1.0, 1.0).is_err() && curve.band(1.0, 0.0).is_err());
    // points on a line to the last bit leave no scatter at all
    let exact = line(&[0.0, 1.0, 2.0, 3.0], &[1.0, 1.5, 2.0, 2.5], 1).unwrap();
    assert_eq!(exact.statistics().residual_standard_deviation, 0.0);
    let [low, high] = exact.inverse(2.0, &Coverage::default()).unwrap().exact;
    assert!(low == high && (low - 2.0).abs() < 1e-15);
    // as many points as coefficients: a curve, but nothing about its uncertainty
    let square = line(&[0.0, 1.0], &[0.0, 1.0], 1).unwrap();
    assert!(square.coefficients()[0].standard_uncertainty.is_nan());
    assert!(square.band(0.5, 0.95).is_err());
}

#[test]
fn order_of_thermal_output_is_found() {
    // alternating scatter of 0.3 microstrain on a cubic
    let t: Vec<f64> = (0..15).map(|i| -20.0 + 12.0 * f64::from(i)).collect();
    let scatter = [0.3, -0.2, 0.25, -0.3, 0.1, 0.2, -0.25, 0.3, -0.1, -0.3, 0.2, 0.15, -0.2, 0.3, -0.25];
    let cubic = |t: f64| -24.0 + t * (1.9 + t * (-0.04 + t * 2.5e-4));
    let y: Vec<f64> = t.iter().zip(scatter).map(|(t, d)| cubic(*t) + d).collect();
    let fit = thermal_output(&Points::new(&t, &y), None, 2.0).unwrap();
    assert_eq!(fit.degree, 3, "{}", fit.note);
    // four temperatures allow no more than a square
    let fit = thermal_output(&Points::new(&t[..4], &y[..4]), None, 2.0).unwrap();
    assert!(fit.degree <= 2 && fit.curve.statistics().degrees_of_freedom >= 1);
    let six = thermal_output(&Points::new(&t, &y), Some(6), 2.0).unwrap();
    assert_eq!((six.degree, six.thermal_output.range_celsius), (6, [-20.0, 148.0]));
}

#[test]
fn through_zero() {
    // Σ x y/Σ x² by hand: (1·2 + 2·3)/(1 + 4) = 1.6
    let wanted = Polynomial { through_zero: true, ..Polynomial::of_degree(1) };
    let fit = polynomial(&Points::new(&[1.0, 2.0], &[2.0, 3.0]), wanted).unwrap();
    assert!((fit.coefficients()[0].value - 1.6).abs() < 1e-15);
    let cell = transducer(&Points::new(&[10.0, 20.0, 30.0], &[0.4, 0.8, 1.21]), 1, true).unwrap();
    assert_eq!((cell.coefficients[0], cell.range), (0.0, [0.0, 30.0]));
}

#[test]
fn thermistor_intervals() {
    // with scatter: the band holds the curve, the prediction is wider; a stated reading uncertainty of 0 leaves the band
    let (t, r) = columns("data/temperature/thermistor_mgh10_data.csv", "x", "y");
    for form in [
        ThermistorForm::SteinhartHart,
        ThermistorForm::LogarithmOfRatio { reference_ohms: 10e3 },
        ThermistorForm::ReciprocalOfTemperature { reference_ohms: 10e3 },
    ] {
        let fit = thermistor(&Points::new(&t, &r), form).unwrap();
        let at = fit.temperature(9744.0, &Coverage::default()).unwrap();
        assert!((at.celsius - 85.0).abs() < 0.02);
        assert!(at.prediction[0] < at.band[0] && at.band[0] < at.celsius && at.celsius < at.band[1]);
        let sharp =
            fit.temperature(9744.0, &Coverage { reading_uncertainty: Some(0.0), ..Coverage::default() }).unwrap();
        assert_eq!(sharp.band, sharp.prediction);
        // a relative change of R by 1e-3 is about T²/beta · 1e-3 K, beta about 4000 K
        let wide =
            fit.temperature(9744.0, &Coverage { reading_uncertainty: Some(9.744), ..Coverage::default() }).unwrap();
        let half = 0.5 * (wide.prediction[1] - wide.prediction[0]) / wide.coverage_factor;
        assert!((half / (358.15 * 358.15 / 4000.0 * 1e-3) - 1.0).abs() < 0.2, "{half}");
        // residuals are K, and small
        assert!(fit.residual_standard_deviation_kelvin() < 0.01);
    }
}

#[test]
fn any_model_over_dual_numbers() {
    // y = b1 exp(−b2 x) from exact points, ln 2 and e from the mathematics
    use ohmwright::chain::{Dual, Real};
    let x = [0.0, 1.0, 2.0, 3.0];
    let y = [8.0, 4.0, 2.0, 1.0];
    let fit = nonlinear(&x, &y, [1.0, 0.1], |x, [a, b]: &[Dual; 2]| *a * (-*b * Dual::constant(x)).exp()).unwrap();
    assert!((fit.coefficients[0] - 8.0).abs() < 1e-12);
    assert!((fit.coefficients[1] - core::f64::consts::LN_2).abs() < 1e-13);
    assert!(fit.residual_standard_deviation < 1e-12);
    // two coefficients that only act together
    let both = nonlinear(&x, &y, [1.0, 0.1], |_, [a, b]: &[Dual; 2]| *a * *b);
    assert!(both.is_err());
}

/// A stated uncertainty of the reading does not rest on the scatter of the points: t is that of both together.
#[test]
fn a_stated_reading_and_a_short_fit() {
    // four points of y = x with residuals ±0.01, by hand: s² = 2e-4 of 2 degrees of freedom, at the middle u²(y) = s²/4
    let (x, y) = ([0.0, 1.0, 2.0, 3.0], [0.01, 0.99, 1.99, 3.01]);
    let fit = polynomial(&Points::new(&x, &y), Polynomial { degree: 1, about: 0.0, through_zero: false }).unwrap();
    assert_eq!(fit.statistics().degrees_of_freedom, 2);
    let curve = fit.standard_uncertainty(1.5);
    assert!((curve - (2e-4_f64 / 4.0).sqrt()).abs() < 1e-12, "{curve}");
    let with = |u: f64, repeats: u32| {
        let coverage = Coverage { reading_uncertainty: Some(u), repeats, ..Coverage::default() };
        fit.inverse(1.5, &coverage).unwrap().coverage_factor
    };
    // JCGM 100:2008, table G.2: 4.30 for 2, 2.31 for 8, 1.960 for many
    assert!((with(0.0, 1) - 4.30).abs() <= 0.005);
    // of the same size: ν_eff = 2 · 2² = 8
    assert!((with(curve, 1) - 2.31).abs() <= 0.005);
    assert!((with(2.0 * curve, 4) - 2.31).abs() <= 0.005);
    assert!((with(0.5, 1) - 1.960).abs() <= 0.0005);
    // one that scatters as the points do rests on theirs
    let own = fit.inverse(1.5, &Coverage::default()).unwrap();
    assert!((own.coverage_factor - 4.30).abs() <= 0.005);
}

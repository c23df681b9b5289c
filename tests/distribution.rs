//! The normal distribution and Student's t.
//!
//! - JCGM 100:2008, Table G.2 (data/statistics/student_t_jcgm100_g2.csv) and the table of the NIST/SEMATECH e-Handbook,
//!   1.3.6.7.2 (student_t_nist.csv), both from memory: every cell to half its last digit.
//! - 40-digit arithmetic, tests/fit_oracle/distribution.csv: relative error below 1e-10.

mod support;

use ohmwright::distribution::{
    normal_probability, normal_quantile, student_density, student_probability, student_quantile,
};
use support::report::Report;
use support::table::Table;

#[test]
fn table_g2_of_the_guide() {
    let table = Table::read("data/statistics/student_t_jcgm100_g2.csv");
    let mut report = Report::new("JCGM 100, Table G.2");
    // the three columns of 1, 2 and 3 standard deviations stand for the exact probabilities of a normal distribution
    let within = |k: f64| 2.0 * normal_probability(k) - 1.0;
    for row in table.rows() {
        for (column, p) in [
            ("p68.27", within(1.0)),
            ("p90", 0.90),
            ("p95", 0.95),
            ("p95.45", within(2.0)),
            ("p99", 0.99),
            ("p99.73", within(3.0)),
        ] {
            if let Some(want) = row.maybe(column) {
                let got = student_quantile((1.0 + p) / 2.0, row.number("nu"));
                report.check(column, row.at(), row.text("nu"), want, got, row.half_digit(column) + 1e-12);
            }
        }
    }
    report.finish();
}

#[test]
fn table_of_critical_values() {
    let table = Table::read("data/statistics/student_t_nist.csv");
    let mut report = Report::new("critical values of Student's t");
    for row in table.rows() {
        for (column, p) in [("p0.90", 0.90), ("p0.95", 0.95), ("p0.975", 0.975), ("p0.99", 0.99), ("p0.995", 0.995)] {
            let got = student_quantile(p, row.number("nu"));
            report.check(column, row.at(), row.text("nu"), row.number(column), got, row.half_digit(column));
        }
    }
    report.finish();
}

#[test]
fn forty_digit_arithmetic() {
    let table = Table::read("tests/fit_oracle/distribution.csv");
    let mut report = Report::new("normal and Student's t");
    for row in table.rows() {
        let (nu, x, want) = (row.number("nu"), row.number("x"), row.number("value"));
        let (got, other) = match row.text("kind") {
            "probability" => (student_probability(x, nu), normal_probability(x)),
            _ => (student_quantile(x, nu), normal_quantile(x)),
        };
        // where a quantile lies next to 0 the last bit of the probability is worth more than any arithmetic
        let input = format!("{} {}", row.text("nu"), row.text("x"));
        report.check(row.text("kind"), row.at(), &input, want, got, 1e-10 * want.abs());
        if nu.is_infinite() {
            report.check("normal", row.at(), &input, want, other, 1e-12 * want.abs());
        }
    }
    report.finish();
}

#[test]
fn closed_forms() {
    // ν = 1: P = ½ + atan(t)/π, density 1/(π (1 + t²)); ν = 2: t = (2p − 1)/√(2 p (1 − p)); both by hand
    let pi = core::f64::consts::PI;
    assert!((student_probability(1.0, 1.0) - 0.75).abs() < 1e-15);
    assert!((student_density(2.0, 1.0) - 1.0 / (5.0 * pi)).abs() < 1e-15);
    assert!((student_quantile(0.75, 1.0) - 1.0).abs() < 1e-14);
    assert!((student_quantile(0.9, 2.0) - 0.8 / (0.18_f64).sqrt()).abs() < 1e-13);
    assert!((student_density(0.0, f64::INFINITY) - 1.0 / (2.0 * pi).sqrt()).abs() < 1e-15);
}

#[test]
fn ends_and_what_is_no_probability() {
    for nu in [0.5, 1.0, 9.0, 1e5, f64::INFINITY] {
        assert_eq!(student_quantile(0.5, nu), 0.0);
        assert_eq!(student_quantile(0.0, nu), f64::NEG_INFINITY);
        assert_eq!(student_quantile(1.0, nu), f64::INFINITY);
        assert_eq!(student_probability(f64::NEG_INFINITY, nu), 0.0);
        assert_eq!(student_probability(f64::INFINITY, nu), 1.0);
        assert!((student_probability(0.0, nu) - 0.5).abs() < 1e-15);
        for p in [-0.1, 1.1, f64::NAN] {
            assert!(student_quantile(p, nu).is_nan() && normal_quantile(p).is_nan());
        }
        assert!(student_probability(f64::NAN, nu).is_nan());
    }
    for nu in [0.0, -1.0, f64::NAN] {
        assert!(student_quantile(0.9, nu).is_nan() && student_probability(1.0, nu).is_nan());
        assert!(student_density(1.0, nu).is_nan());
    }
    // extreme corners give no nonsense
    for nu in [1e-3, 0.1, 1.0, 50.0, 1e4, 1e8] {
        for p in [f64::MIN_POSITIVE, 1e-300, 1e-100, 1e-17, 1.0 - f64::EPSILON / 2.0] {
            let t = student_quantile(p, nu);
            assert!(!t.is_nan() && (t < 0.0) == (p < 0.5), "{p:e} {nu}: {t:e}");
        }
    }
}

#[test]
fn quantiles_rise_with_the_probability_and_fall_with_the_degrees_of_freedom() {
    let mut last = f64::NEG_INFINITY;
    for i in 1..2000 {
        let t = student_quantile(f64::from(i) / 2000.0, 7.3);
        assert!(t > last);
        last = t;
    }
    let mut last = f64::INFINITY;
    let mut nu = 0.5;
    while nu < 1e6 {
        // across the change of method at 20 000
        let t = student_quantile(0.975, nu);
        assert!(t < last, "{nu}: {t} {last}");
        last = t;
        nu *= 1.04;
    }
}

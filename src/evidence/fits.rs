//! Fits against certified values.

use once_cell::sync::Lazy;
use std::vec::Vec;

use super::Check;
use super::table::Table;
use crate::Error;
use crate::fit::{Coverage, Curve, Points, Polynomial, TransducerFit, polynomial, transducer, vogel};

macro_rules! table {
    ($name:literal) => {
        Table::new(concat!("data/", $name), include_str!(concat!("../../data/", $name)))
    };
}

static PONTIUS: Lazy<Table> = Lazy::new(|| table!("strain/pontius_data.csv"));
static PONTIUS_CERTIFIED: Lazy<Table> = Lazy::new(|| table!("strain/pontius_certified.csv"));
static INVERSE: Lazy<Table> = Lazy::new(|| table!("strain/calibration_inverse.csv"));
static MGH10: Lazy<Table> = Lazy::new(|| table!("temperature/thermistor_mgh10_data.csv"));
static MGH10_CERTIFIED: Lazy<Table> = Lazy::new(|| table!("temperature/thermistor_mgh10_certified.csv"));
static GUIDE: Lazy<Table> = Lazy::new(|| table!("strain/gum_h3_data.csv"));
static GUIDE_RESULTS: Lazy<Table> = Lazy::new(|| table!("strain/gum_h3_results.csv"));

fn columns(table: &Table, x: &str, y: &str) -> (Vec<f64>, Vec<f64>) {
    table.rows().map(|row| (row.or_zero(x), row.or_zero(y))).unzip()
}

fn load_cell() -> Option<TransducerFit> {
    let (x, y) = columns(&PONTIUS, "x", "y");
    transducer(&Points::new(&x, &y), 2, false).ok()
}

const FAILED: Error = Error::Unfit { what: "the fit did not come about" };

/// The load cell of the reference datasets, to 1e-9.
pub(super) fn pontius() -> Check {
    let mut check = Check::new("NIST StRD Pontius, quadratic through the loads of a cell", &PONTIUS_CERTIFIED);
    let fit = load_cell();
    for row in PONTIUS_CERTIFIED.rows() {
        let (name, want) = (row.text("name"), row.or_zero("certified"));
        let index = name.strip_prefix('B').and_then(|i| i.parse::<usize>().ok());
        let deviation_of = |fit: &TransducerFit| Some(fit.curve.coefficients().get(index?)?.standard_uncertainty);
        match index {
            Some(i) => {
                let got = fit.as_ref().and_then(|f| f.coefficients.get(i).copied());
                check.compare(&row, want, 1e-9 * want.abs(), got.ok_or(FAILED));
                let deviation = row.or_zero("std_dev");
                let got = fit.as_ref().and_then(deviation_of);
                check.compare(&row, deviation, 1e-9 * deviation.abs(), got.ok_or(FAILED));
            }
            None => {
                let got = fit.as_ref().map(|f| f.curve.statistics().residual_standard_deviation);
                check.compare(&row, want, 1e-9 * want.abs(), got.ok_or(FAILED));
            }
        }
    }
    check
}

/// The load that a deflection belongs to, with its interval.
pub(super) fn inverse_reading() -> Check {
    let mut check = Check::new("NIST/SEMATECH handbook, load of a deflection and its 95 % interval", &INVERSE);
    let fit = load_cell();
    for row in INVERSE.rows() {
        let coverage = Coverage::default();
        let inverse = fit.as_ref().and_then(|f| f.curve.inverse(row.or_zero("deflection"), &coverage).ok());
        for (column, got) in [
            ("published_load", inverse.map(|i| i.x)),
            ("published_low", inverse.map(|i| i.handbook[0])),
            ("published_high", inverse.map(|i| i.handbook[1])),
        ] {
            check.printed(&row, column, got.ok_or(FAILED));
        }
    }
    check
}

/// The thermistor of the reference datasets from both of its starting points, to 1e-8.
pub(super) fn mgh10() -> Check {
    let mut check = Check::new("NIST StRD MGH10, thermistor from both starting points", &MGH10_CERTIFIED);
    let (x, y) = columns(&MGH10, "x", "y");
    for start in ["start1", "start2"] {
        let begin: Vec<f64> = MGH10_CERTIFIED.rows().map(|row| row.or_zero(start)).take(3).collect();
        let fit = begin.first_chunk::<3>().and_then(|b| vogel(&Points::new(&x, &y), Some(*b)).ok()).map(|v| v.fit);
        for row in MGH10_CERTIFIED.rows() {
            let Some(i) = row.text("name").strip_prefix('b').and_then(|i| i.parse::<usize>().ok()) else { continue };
            let (want, deviation) = (row.or_zero("certified"), row.or_zero("std_dev"));
            let at = |values: &[f64; 3]| values.get(i.wrapping_sub(1)).copied();
            let got = fit.as_ref().and_then(|f| at(&f.coefficients));
            check.compare(&row, want, 1e-8 * want.abs(), got.ok_or(FAILED));
            let got = fit.as_ref().and_then(|f| at(&f.standard_uncertainties));
            check.compare(&row, deviation, 1e-8 * deviation.abs(), got.ok_or(FAILED));
        }
    }
    check
}

/// The thermometer calibration of the guide.
pub(super) fn guide() -> Check {
    let mut check = Check::new("JCGM 100:2008 H.3, calibration line of a thermometer", &GUIDE_RESULTS);
    let (t, b) = columns(&GUIDE, "t_C", "b_C");
    let line = polynomial(&Points::new(&t, &b), Polynomial { degree: 1, about: 20.0, through_zero: false }).ok();
    let of = |curve: &Curve, name: &str| {
        let coefficient = |i: usize| curve.coefficients().get(i);
        Some(match name {
            "y1" => coefficient(0)?.value,
            "u_y1" => coefficient(0)?.standard_uncertainty,
            "y2" => coefficient(1)?.value,
            "u_y2" => coefficient(1)?.standard_uncertainty,
            "r" => *curve.correlation().first()?.get(1)?,
            "s" => curve.statistics().residual_standard_deviation,
            "b30" => curve.at(30.0),
            "u_b30" => curve.standard_uncertainty(30.0),
            "nu" => curve.statistics().degrees_of_freedom as f64,
            _ => return None,
        })
    };
    for row in GUIDE_RESULTS.rows() {
        let got = line.as_ref().and_then(|curve| of(curve, row.text("name")));
        check.printed(&row, "published", got.ok_or(FAILED));
    }
    check
}

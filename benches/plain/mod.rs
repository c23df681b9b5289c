//! Laws of thermometers written out by hand, as one would without a library: Newton's method where the formula runs the other
//! way. Coefficients are read from the tables of data/ once.

use std::sync::OnceLock;

use ohmwright::metal::{COPPER_GOST_6651_2009, NICKEL_DIN_43760};

/// Newton's method on f from a start.
fn newton(start: f64, f: impl Fn(f64) -> (f64, f64)) -> f64 {
    super::newton(0.0, start, 1e-7 * start.abs(), f)
}

pub fn nickel(ohms: f64, _: f64, _: f64) -> f64 {
    let k = NICKEL_DIN_43760;
    newton((ohms / k.r0_ohms - 1.0) / k.a, |t| {
        let r = 1.0 + k.a * t + k.b * t * t + k.d * t.powi(4) + k.f * t.powi(6) - ohms / k.r0_ohms;
        (r, k.a + 2.0 * k.b * t + 4.0 * k.d * t.powi(3) + 6.0 * k.f * t.powi(5))
    })
}

pub fn copper(ohms: f64, _: f64, _: f64) -> f64 {
    let k = COPPER_GOST_6651_2009;
    let line = (ohms / k.r0_ohms - 1.0) / k.a;
    if line >= 0.0 {
        return line;
    }
    newton(line, |t| {
        let r = 1.0 + k.a * t + k.b * t * (t + 6.7) + k.c * t * t * t - ohms / k.r0_ohms;
        (r, k.a + k.b * (2.0 * t + 6.7) + 3.0 * k.c * t * t)
    })
}

/// A to D of ln(R/R_ref), and R_ref, as data/temperature/thermistor_material1_table.csv prints them.
pub const RATIO_TERMS: [f64; 4] = [-14.195_756, 4_407.478_5, -5_165.873_0, -1.401_736_8e7];
/// a to d of 1/T from the same header.
pub const RECIPROCAL_TERMS: [f64; 4] = [3.353_943_8e-3, 2.564_609_5e-4, 2.515_816_6e-6, 1.050_306_9e-7];

pub fn ratio_terms(ohms: f64, _: f64, _: f64) -> f64 {
    let [a, b, c, d] = RATIO_TERMS;
    let log = (ohms / 10e3).ln();
    let x = newton((log - a) / b, |x| (a + x * (b + x * (c + x * d)) - log, b + x * (2.0 * c + 3.0 * d * x)));
    1.0 / x - 273.15
}

pub fn reciprocal_terms(ohms: f64, _: f64, _: f64) -> f64 {
    let [a, b, c, d] = RECIPROCAL_TERMS;
    let l = (ohms / 10e3).ln();
    1.0 / (a + l * (b + l * (c + l * d))) - 273.15
}

/// Numbers of a column where another holds a text, in the order of the table.
fn family(text: &str, wanted: &[(usize, &str)], column: usize) -> Vec<f64> {
    let rows = text.lines().filter(|l| !l.starts_with('#')).skip(1).map(|l| l.split(',').collect::<Vec<_>>());
    rows.filter(|cells| wanted.iter().all(|(i, word)| cells[*i] == *word))
        .map(|cells| cells[column].parse().expect("a number"))
        .collect()
}

/// W of a standard thermometer without deviation: Newton on the reference function from 0 °C upwards.
pub fn its90(ratio: f64, _: f64, _: f64) -> f64 {
    static C: OnceLock<Vec<f64>> = OnceLock::new();
    let c = C.get_or_init(|| {
        family(include_str!("../../data/temperature/its90_reference_coefficients.csv"), &[(0, "C")], 2)
    });
    newton((ratio - 1.0) / 3.9e-3, |t| {
        let x = (t + 273.15 - 754.15) / 481.0;
        let (mut value, mut slope) = (0.0, 0.0);
        for k in c.iter().rev() {
            slope = slope * x + value;
            value = value * x + k;
        }
        (value - ratio, slope / 481.0)
    })
}

/// Type K with its reference junction: Newton on the reference function.
pub fn type_k(millivolts: f64, _: f64, junction: f64) -> f64 {
    static PIECES: OnceLock<[Vec<f64>; 2]> = OnceLock::new();
    let pieces = PIECES.get_or_init(|| {
        let text = include_str!("../../data/temperature/thermocouple_direct_coefficients.csv");
        ["0", "1"].map(|piece| family(text, &[(0, "K"), (1, piece)], 5))
    });
    let emf = |t: f64| {
        // the three of the exponential stand behind the polynomial
        let (c, bell) = if t < 0.0 { (&pieces[0][..], &[][..]) } else { pieces[1].split_at(10) };
        let (mut value, mut slope) = (0.0, 0.0);
        for k in c.iter().rev() {
            slope = slope * t + value;
            value = value * t + k;
        }
        if let [a0, a1, a2] = bell {
            let e = a0 * (a1 * (t - a2) * (t - a2)).exp();
            value += e;
            slope += 2.0 * a1 * (t - a2) * e;
        }
        (value, slope)
    };
    let wanted = millivolts + emf(junction).0;
    newton(wanted / 0.041, |t| {
        let (value, slope) = emf(t);
        (value - wanted, slope)
    })
}

/// Points of the curve below: °C and Ω.
pub const POINTS: [[f64; 2]; 6] =
    [[-40.0, 333_600.0], [0.0, 32_550.0], [25.0, 10e3], [50.0, 3_601.0], [85.0, 1_072.0], [125.0, 339.2]];

/// Straight lines in ln R over 1/T between the points: less than the smooth curve, and what a table look-up costs.
pub fn points(ohms: f64, _: f64, _: f64) -> f64 {
    let log = ohms.ln();
    let upper = POINTS.iter().position(|[_, r]| *r <= ohms).unwrap_or(POINTS.len() - 1).max(1);
    let [[t0, r0], [t1, r1]] = [POINTS[upper - 1], POINTS[upper]];
    let (x0, x1) = (1.0 / (t0 + 273.15), 1.0 / (t1 + 273.15));
    1.0 / (x0 + (x1 - x0) * (log - r0.ln()) / (r1.ln() - r0.ln())) - 273.15
}

/// A Pt100 on 15 V behind 3.3 kΩ that a milliwatt warms by 0.4 K.
pub fn heated(volts: f64, _: f64, _: f64) -> f64 {
    let ohms = 3300.0 * volts / (15.0 - volts);
    super::platinum(ohms, 0.0, 0.0) - 400.0 * volts * volts / ohms
}

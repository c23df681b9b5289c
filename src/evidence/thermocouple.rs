//! Thermocouples: tables, exercises, tolerances, coefficients.

use once_cell::sync::Lazy;

use super::Check;
use super::table::Table;
use crate::thermocouple::{Class, Thermocouple, Tolerance};

macro_rules! table {
    ($name:literal) => {
        Table::new(concat!("data/temperature/", $name), include_str!(concat!("../../data/temperature/", $name)))
    };
}

static POINTS: Lazy<Table> = Lazy::new(|| table!("thermocouple_points.csv"));
static K_NEG: Lazy<Table> = Lazy::new(|| table!("thermocouple_K_table_neg.csv"));
static T_NEG: Lazy<Table> = Lazy::new(|| table!("thermocouple_T_table_neg.csv"));
static EXERCISES: Lazy<Table> = Lazy::new(|| table!("thermocouple_cjc_examples.csv"));
static COEFFICIENTS: Lazy<Table> = Lazy::new(|| table!("thermocouple_direct_coefficients.csv"));
static TOLERANCES: Lazy<Table> = Lazy::new(|| table!("thermocouple_tolerances.csv"));

fn named(letter: &str) -> Option<Thermocouple> {
    Thermocouple::ALL.into_iter().find(|k| k.letter() == letter)
}

/// Emf at round temperatures, every type.
pub(super) fn points() -> Check {
    emfs("thermocouples, emf at round temperatures", &POINTS, None)
}

/// Type K below 0 °C.
pub(super) fn type_k() -> Check {
    emfs("thermocouple type K, table below 0 degC", &K_NEG, Some(Thermocouple::K))
}

/// Type T below 0 °C.
pub(super) fn type_t() -> Check {
    emfs("thermocouple type T, table below 0 degC", &T_NEG, Some(Thermocouple::T))
}

fn emfs(what: &'static str, table: &Table, of: Option<Thermocouple>) -> Check {
    let mut check = Check::new(what, table);
    for row in table.rows() {
        let (Some(of), Some(t)) = (of.or_else(|| named(row.text("type"))), row.number("t_C")) else { continue };
        check.printed(&row, "E_mV", of.millivolts_from_celsius(t));
    }
    check
}

/// Exercises with a reference junction: its emf is added, never its temperature.
pub(super) fn exercises() -> Check {
    let mut check = Check::new("thermocouples, exercises with a reference junction", &EXERCISES);
    for row in EXERCISES.rows() {
        let (Some(of), Some(reference), Some(mv), Some(hot)) =
            (named(row.text("type")), row.number("reference"), row.number("measured_mV"), row.number("hot"))
        else {
            continue;
        };
        let fahrenheit = row.text("unit") == "degF";
        let celsius = |t: f64| if fahrenheit { (t - 32.0) / 1.8 } else { t };
        if row.text("answer") == "mV" {
            // formed from two table values rounded to 0.001 mV each
            let got = of.millivolts_from_celsius_and_reference(celsius(hot), celsius(reference));
            check.compare(&row, mv, 0.001, got);
            continue;
        }
        let shown = |t: f64| if fahrenheit { t * 1.8 + 32.0 } else { t };
        let got = of.celsius_from_millivolts_and_reference(mv, celsius(reference)).map(shown);
        check.compare(&row, hot, 0.5, got);
    }
    check
}

/// Every piece of every reference function, written out from the table of coefficients at its middle.
pub(super) fn coefficients() -> Check {
    let mut check = Check::new("thermocouples, reference functions written out from their coefficients", &COEFFICIENTS);
    for row in COEFFICIENTS.rows() {
        let (Some(of), Some(low), Some(high)) = (named(row.text("type")), row.number("t_lo_C"), row.number("t_hi_C"))
        else {
            continue;
        };
        // one comparison for each coefficient: at a temperature of its piece
        let same = |r: &super::table::Row<'_>| {
            r.text("type") == row.text("type") && r.text("range_index") == row.text("range_index")
        };
        let piece: std::vec::Vec<_> = COEFFICIENTS.rows().filter(same).collect();
        let place = piece.iter().position(|r| r.line == row.line).unwrap_or(0);
        let t = low + (high - low) * (place as f64 + 0.5) / piece.len() as f64;
        let mut sum = 0.0;
        let mut size = 0.0_f64;
        let mut bell = [0.0; 3];
        for r in piece.iter().rev() {
            match r.text("i") {
                "exp_a0" => bell[0] = r.or_zero("c_i_mV"),
                "exp_a1" => bell[1] = r.or_zero("c_i_mV"),
                "exp_a2" => bell[2] = r.or_zero("c_i_mV"),
                _ => {
                    sum = sum * t + r.or_zero("c_i_mV");
                    size = size * t.abs() + r.or_zero("c_i_mV").abs();
                }
            }
        }
        sum += bell[0] * libm::exp(bell[1] * (t - bell[2]) * (t - bell[2]));
        check.compare(&row, sum, 1e-15 * size.max(1e-3), of.millivolts_from_celsius(t));
    }
    check
}

/// Tolerance classes of every type.
pub(super) fn tolerances() -> Check {
    let mut check = Check::new("thermocouples, tolerance classes and their ranges", &TOLERANCES);
    for row in TOLERANCES.rows() {
        let class = match row.text("class") {
            "1" => Class::One,
            "2" => Class::Two,
            _ => Class::Three,
        };
        for of in Thermocouple::ALL.into_iter().filter(|k| row.text("types").contains(k.letter())) {
            let Some(ours) = Tolerance::iec_60584(of, class) else {
                check.leave_out(&row, "no such class is compiled in");
                continue;
            };
            for (column, got) in [
                ("abs_C", ours.fixed_kelvin),
                ("rel", ours.relative),
                ("t_lo_C", ours.range_celsius[0]),
                ("t_hi_C", ours.range_celsius[1]),
                ("knee_C", ours.knee_celsius.unwrap_or(0.0)),
            ] {
                check.compare(&row, row.or_zero(column), 1e-12, Ok(got));
            }
        }
    }
    check
}

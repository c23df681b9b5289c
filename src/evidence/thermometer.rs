//! Older editions, other metals, tolerances, thermistor forms and ITS-90.

use once_cell::sync::Lazy;

use super::Check;
use super::table::{Row, Table};
use crate::Error;
use crate::metal::{self, COPPER_10_OHM, COPPER_GOST_6651_2009, Metal, NICKEL_DIN_43760};
use crate::platinum::its90::{Deviation, reference_ratio_from_celsius};
use crate::platinum::{
    Class, Coefficients, GOST_6651_2009, IEC_751_1983, IEC_751_1983_SHORT, IEC_60751, Platinum, RATIO_1_3902,
    RATIO_1_3911, RATIO_1_3916, RATIO_1_3920, Resistor, Tolerance, its90_from_ipts68,
};
use crate::thermistor::{Law, LogarithmOfRatio, ReciprocalOfTemperature, Thermistor};

macro_rules! table {
    ($name:literal) => {
        Table::new(concat!("data/temperature/", $name), include_str!(concat!("../../data/temperature/", $name)))
    };
}

static CURVES: Lazy<Table> = Lazy::new(|| table!("pt100_cvd_coefficients.csv"));
static EDITION_1983: Lazy<Table> = Lazy::new(|| table!("pt100_iec751_1983_table.csv"));
static CLASSES: Lazy<Table> = Lazy::new(|| table!("iec60751_tolerance_classes.csv"));
static CLASS_VALUES: Lazy<Table> = Lazy::new(|| table!("iec60751_tolerance_values.csv"));
static METALS: Lazy<Table> = Lazy::new(|| table!("rtd_other_metal_coefficients.csv"));
static NICKEL: Lazy<Table> = Lazy::new(|| table!("ni100_din43760_table.csv"));
static COPPER: Lazy<Table> = Lazy::new(|| table!("cu100_gost_1428_table.csv"));
static FIXED_POINTS: Lazy<Table> = Lazy::new(|| table!("its90_fixed_points.csv"));
static REFERENCE: Lazy<Table> = Lazy::new(|| table!("its90_reference_coefficients.csv"));
static DEVIATIONS: Lazy<Table> = Lazy::new(|| table!("its90_deviation_functions.csv"));
static SCALES: Lazy<Table> = Lazy::new(|| table!("scale_t90_t68.csv"));
static MATERIAL: Lazy<Table> = Lazy::new(|| table!("thermistor_material1_table.csv"));
static CIRCUITS: Lazy<Table> = Lazy::new(|| table!("lead_and_selfheating_examples.csv"));

fn exact(check: &mut Check, row: &Row<'_>, column: &str, got: f64) {
    // the same double, bit for bit
    let want = row.or_zero(column);
    check.compare(row, want, f64::MIN_POSITIVE, if got.to_bits() == want.to_bits() { Ok(want) } else { Ok(got) });
}

/// Constants and R₁₀₀/R₀ of every published curve of platinum; two nominal ratios are no ratios of their curves.
pub(super) fn curves() -> Check {
    let mut check = Check::new("platinum, constants of the published curves and R100/R0", &CURVES);
    for row in CURVES.rows() {
        let ours: Coefficients = match row.text("id") {
            "iec60751_2008" => IEC_60751,
            "iec751_1983_ipts68" => IEC_751_1983,
            "iec751_1983_ipts68_short" => IEC_751_1983_SHORT,
            "pt3911_us" => RATIO_1_3911,
            "pt3920_us" => RATIO_1_3920,
            "pt3916_jis" => RATIO_1_3916,
            "pt3902_us" => RATIO_1_3902,
            "pt3910_gost6651_2009" => GOST_6651_2009,
            _ => {
                check.leave_out(&row, "no curve of this name is compiled in");
                continue;
            }
        };
        for (column, got) in [("A", ours.a), ("B", ours.b), ("C", ours.c), ("t_min_C", ours.range_celsius[0])] {
            exact(&mut check, &row, column, got);
        }
        let ratio = Platinum::new(ours).and_then(|p| p.ohms_from_celsius(100.0)).map(|r| r / 100.0);
        match (row.text("id"), row.printed("R100_over_R0"), ratio) {
            ("pt3916_jis" | "pt3902_us", Some((nominal, half)), Ok(got)) => check.misprint(&row, nominal, half, got),
            (.., got) => check.printed(&row, "R100_over_R0", got),
        }
    }
    check
}

/// The edition of 1983; two of the reprints hold rows of other generations.
pub(super) fn edition_1983() -> Check {
    let mut check =
        Check::new("IEC 751:1983 platinum on IPTS-68, resistance table of a 100 ohm element", &EDITION_1983);
    let curve = Platinum::new(IEC_751_1983);
    for row in EDITION_1983.rows() {
        let Some(t) = row.number("t_C") else { continue };
        let got = curve.and_then(|p| p.ohms_from_celsius(t));
        if row.number("srcC_ohm").is_some() {
            check.printed(&row, "srcC_ohm", got);
        }
        // where the first reprint departs from the edition it must not be reproduced
        let other = t == 150.0 || (250.0..=410.0).contains(&t) || t == 690.0;
        match (row.printed("srcA_ohm"), got) {
            (Some((printed, half)), Ok(got)) if other => check.misprint(&row, printed, half, got),
            (Some(_), got) => check.printed(&row, "srcA_ohm", got),
            _ => {}
        }
        if let (Some((printed, half)), Ok(got)) = (row.printed("srcB_ohm"), got)
            && (got - printed).abs() > half
        {
            check.misprint(&row, printed, half, got);
        }
    }
    check
}

/// The classes of IEC 60751, half-widths and ranges.
pub(super) fn classes() -> Check {
    let mut check = Check::new("IEC 60751 tolerance classes and their ranges", &CLASSES);
    for row in CLASSES.rows() {
        let Some(class) = class(row.text("class")) else { continue };
        let film = row.text("applies_to").ends_with("film");
        let ours = Tolerance::iec_60751(class, if film { Resistor::Film } else { Resistor::WireWound });
        for (column, got) in [
            ("a_C", ours.a_kelvin),
            ("b", ours.b),
            ("t_min_C", ours.range_celsius[0]),
            ("t_max_C", ours.range_celsius[1]),
        ] {
            exact(&mut check, &row, column, got);
        }
    }
    check
}

fn class(name: &str) -> Option<Class> {
    [("AA", Class::AA), ("A", Class::A), ("B", Class::B), ("C", Class::C)]
        .into_iter()
        .find(|(word, _)| *word == name)
        .map(|(_, class)| class)
}

/// Tolerances in kelvin and ohm; the ohm column of class B is inconsistent from 700 °C upwards.
pub(super) fn class_values() -> Check {
    let mut check = Check::new("IEC 60751 tolerances in kelvin and ohm", &CLASS_VALUES);
    let pt100 = Platinum::new(IEC_60751);
    for row in CLASS_VALUES.rows() {
        let Some(t) = row.number("t_C") else { continue };
        for (of, kelvin, ohm) in [(Class::A, "A_degC", "A_ohm"), (Class::B, "B_degC", "B_ohm")] {
            let (Some((printed, half)), Some(tolerance)) = (row.printed(kelvin), Tolerance::iec_751(of)) else {
                continue;
            };
            let got = tolerance.kelvin_at_celsius(t);
            // 4.55 K is printed 4.6: a tie, hence the 1e-9
            check.compare(&row, printed, half + 1e-9, got);
            let slope = pt100.and_then(|p| p.ohms_per_kelvin_at_celsius(t));
            let got = got.and_then(|k| slope.map(|s| s * k));
            match (row.printed(ohm), got) {
                (Some((wrong, half)), Ok(got)) if of == Class::B && t >= 700.0 => {
                    check.misprint(&row, wrong, half, got)
                }
                (_, got) => check.printed(&row, ohm, got),
            }
        }
    }
    check
}

/// Constants of nickel and copper.
pub(super) fn metals() -> Check {
    let mut check = Check::new("nickel and copper, constants of the published curves", &METALS);
    for row in METALS.rows() {
        let ours: [f64; 4] = match row.text("id") {
            "ni100_din43760" => {
                let k = NICKEL_DIN_43760;
                exact(&mut check, &row, "F", k.f);
                [k.r0_ohms, k.a, k.b, k.d]
            }
            "cu4280_gost6651_2009" => {
                let k = COPPER_GOST_6651_2009;
                [k.r0_ohms, k.a, k.b, k.c]
            }
            "cu10_4274" => {
                let k = COPPER_10_OHM;
                [k.r0_ohms, k.a, k.b, k.c]
            }
            _ => {
                check.leave_out(&row, "no curve of this name is compiled in");
                continue;
            }
        };
        for (column, got) in ["R0_ohm", "A", "B", "C_or_D"].into_iter().zip(ours) {
            exact(&mut check, &row, column, got);
        }
    }
    check
}

/// The nickel table; one printed cell misses its formula.
pub(super) fn nickel() -> Check {
    let mut check = Check::new("DIN 43760 nickel, resistance table of a 100 ohm element", &NICKEL);
    let ni100 = Metal::new(metal::Law::Nickel(NICKEL_DIN_43760));
    for row in NICKEL.rows() {
        let Some(t) = row.number("t_C") else { continue };
        let got = ni100.and_then(|m| m.ohms_from_celsius(t));
        match (row.printed("R_ohm"), got) {
            (Some((wrong, half)), Ok(got)) if t == 80.0 => check.misprint(&row, wrong, half, got),
            (_, got) => check.printed(&row, "R_ohm", got),
        }
    }
    check
}

/// An older generation of copper: the difference between the editions is what its source says.
pub(super) fn copper() -> Check {
    let mut check =
        Check::new("copper of an older generation against GOST 6651-2009, difference between the editions", &COPPER);
    let cu100 = Metal::new(metal::Law::Copper(COPPER_GOST_6651_2009));
    for row in COPPER.rows() {
        let (Some(t), Some(ohms)) = (row.number("t_C"), row.number("R_ohm")) else { continue };
        if t < -180.0 {
            check.leave_out(&row, "GOST 6651-2009 begins at -180 degC");
            continue;
        }
        // 0.017 ohm from 0 °C upwards, 0.082 ohm below, with half a digit of the figure that says so
        let apart = if t >= 0.0 { 0.0175 } else { 0.0825 };
        check.compare(&row, ohms, apart, cu100.and_then(|m| m.ohms_from_celsius(t)));
    }
    check
}

/// Wr of the fixed points.
pub(super) fn fixed_points() -> Check {
    let mut check = Check::new("ITS-90, reference ratio Wr of the defining fixed points", &FIXED_POINTS);
    for row in FIXED_POINTS.rows() {
        let (Some(kelvin), Some(wr)) = (row.number("T90_K"), row.number("Wr")) else { continue };
        // printed to 1e-8, and so are the coefficients of the function
        check.compare(&row, wr, 1e-8, reference_ratio_from_celsius(kelvin - 273.15));
    }
    check
}

/// The reference functions, written out from the table of their coefficients.
pub(super) fn reference_functions() -> Check {
    let mut check = Check::new("ITS-90, reference functions written out from their coefficients", &REFERENCE);
    let family = |name: &str| -> std::vec::Vec<f64> {
        REFERENCE.rows().filter(|r| r.text("family") == name).map(|r| r.or_zero("value")).collect()
    };
    let sum = |k: &[f64], x: f64| k.iter().rev().fold(0.0, |sum, k| sum * x + k);
    let (cold, warm) = (family("A"), family("C"));
    for row in REFERENCE.rows() {
        // one temperature for each coefficient, spread over its function
        let Some(i) = row.number("i") else { continue };
        let (t, want) = match row.text("family") {
            "A" => {
                let t = -259.0 + 258.0 * i / 12.0;
                let x = (libm::log((t + 273.15) / 273.16) + 1.5) / 1.5;
                (t, libm::exp(sum(&cold, x)))
            }
            "C" => {
                let t = 1.0 + 960.0 * i / 9.0;
                (t, sum(&warm, (t + 273.15 - 754.15) / 481.0))
            }
            _ => {
                check.leave_out(&row, "approximate inverse: a start alone, the inverse here is exact");
                continue;
            }
        };
        check.compare(&row, want, 1e-12 * want, reference_ratio_from_celsius(t));
    }
    check
}

/// Ranges of the subranges, and as many coefficients as fixed points beside that of water determine.
pub(super) fn deviations() -> Check {
    let mut check = Check::new("ITS-90, subranges and the coefficients of their deviation functions", &DEVIATIONS);
    for row in DEVIATIONS.rows() {
        let z = 0.0;
        let (deviation, count) = match row.text("section") {
            "3.3.1" => (Deviation::FromHydrogen { a: z, b: z, c: [z; 5] }, 7),
            "3.3.1.1" => (Deviation::FromNeon { a: z, b: z, c: [z; 3] }, 5),
            "3.3.1.2" => (Deviation::FromOxygen { a: z, b: z, c1: z }, 3),
            "3.3.1.3" => (Deviation::FromArgon { a: z, b: z }, 2),
            "3.3.2" => (Deviation::ToSilver { a: z, b: z, c: z, d: z, w_aluminium: 3.376 }, 4),
            "3.3.2.1" => (Deviation::ToAluminium { a: z, b: z, c: z }, 3),
            "3.3.2.2" => (Deviation::ToZinc { a: z, b: z }, 2),
            "3.3.2.3" => (Deviation::ToTin { a: z, b: z }, 2),
            "3.3.2.4" => (Deviation::ToIndium { a: z }, 1),
            "3.3.2.5" => (Deviation::ToGallium { a: z }, 1),
            "3.3.3" => (Deviation::MercuryToGallium { a: z, b: z }, 2),
            _ => {
                check.leave_out(&row, "no subrange of this number");
                continue;
            }
        };
        let text = row.text("range").trim_end_matches(" C");
        let kelvin = text.contains('K');
        let ends = text.split("..").map(|end| end.trim_end_matches(" K").parse::<f64>().ok());
        for (end, got) in ends.zip(deviation.range_celsius()) {
            let want = end.unwrap_or(f64::NAN) - if kelvin { 273.15 } else { 0.0 };
            check.compare(&row, want, 1e-9, Ok(got));
        }
        // points are numbered; 9 is the triple point of water, which W = 1 already holds
        let points: std::vec::Vec<i32> = row
            .text("points")
            .split(';')
            .flat_map(|part| {
                let (a, b) = part.split_once('-').unwrap_or((part, part));
                a.parse().unwrap_or(0)..=b.parse().unwrap_or(0)
            })
            .filter(|point| *point != 9)
            .collect();
        check.compare(&row, points.len() as f64, 1e-9, Ok(f64::from(count)));
    }
    check
}

/// From IPTS-68 to ITS-90.
pub(super) fn scales() -> Check {
    let mut check = Check::new("t90 - t68 from -180 degC to 260 degC", &SCALES);
    for row in SCALES.rows() {
        let (Some(t), Some((printed, half))) = (row.number("t_C"), row.printed("t90_minus_t68")) else { continue };
        // the published function is good to 1.5 mK below 0 °C and 1 mK above it
        let function = if t < 0.0 { 1.5e-3 } else { 1e-3 };
        check.compare(&row, printed, half + function, its90_from_ipts68(t).map(|t90| t90 - t));
    }
    check
}

/// Both four-term forms against the table of the same guide.
pub(super) fn four_terms() -> Check {
    let mut check = Check::new("thermistor, four-term forms against their table", &MATERIAL);
    let range_celsius = [-40.0, 155.0];
    let log = LogarithmOfRatio {
        reference_ohms: 1e4,
        a: -14.195_756,
        b: 4_407.478_5,
        c: -5_165.873_0,
        d: -1.401_736_8e7,
        range_celsius,
    };
    let reciprocal = ReciprocalOfTemperature {
        reference_ohms: 1e4,
        a: 3.353_943_8e-3,
        b: 2.564_609_5e-4,
        c: 2.515_816_6e-6,
        d: 1.050_306_9e-7,
        range_celsius: [-40.0, 154.0],
    };
    for row in MATERIAL.rows() {
        let (Some(t), Some(ratio)) = (row.number("t_C"), row.number("ratio")) else { continue };
        let first = Thermistor::new(Law::LogarithmOfRatio(log)).and_then(|m| m.ohms_from_celsius(t));
        check.printed(&row, "ratio", first.map(|r| r / 1e4));
        if t > -40.0 {
            // the guide: two fits of their own, up to 0.023 K apart
            let second = Thermistor::new(Law::ReciprocalOfTemperature(reciprocal));
            check.compare(&row, t, 0.0235, second.and_then(|m| m.celsius_from_ohms(1e4 * ratio)));
        }
    }
    check
}

/// A three-wire thermometer by two taps, and the heat of its current.
pub(super) fn circuits() -> Check {
    let mut check = Check::new("three wires by two taps, and self-heating, as worked in print", &CIRCUITS);
    let value = |id: &str, quantity: &str| {
        CIRCUITS
            .rows()
            .find(|r| r.text("id") == id && r.text("quantity") == quantity)
            .map_or(f64::NAN, |r| r.or_zero("value"))
    };
    let tapped = || -> Result<f64, Error> {
        // the tap sees the sensor and one lead, the whole sees one lead more; 0.41 mA makes 215.12 ohm of 88.2 mV
        let volts = 2.0 * value("L1", "V_ED") - value("L1", "V_CD");
        Ok(volts / 0.41)
    };
    for row in CIRCUITS.rows() {
        let (Some(want), quantity) = (row.number("value"), row.text("quantity")) else { continue };
        match (row.text("id"), quantity) {
            ("L1", "R_rtd") => check.compare(&row, want, 0.005, tapped()),
            ("L1", "t_table") => {
                let t = tapped().and_then(|r| Platinum::new(IEC_60751)?.celsius_from_ohms(r));
                check.compare(&row, want, 0.5, t);
            }
            ("L1", "t_linear") => check.compare(&row, want, 0.005, tapped().map(|r| (r / 100.0 - 1.0) / 0.003_85)),
            ("H1", "P") => check.compare(&row, want, 1e-18, Ok(1e-3 * 1e-3 * 100.0)),
            ("H1", "dT") => check.compare(&row, want, 1e-12, heated()),
            _ => check.leave_out(&row, "given, not an answer"),
        }
    }
    check
}

/// 20 K/W and 1 mA at the ice point: what the chain takes off.
fn heated() -> Result<f64, Error> {
    use crate::chain::{Chain, Element, Network, SelfHeating};
    let bare = Chain::new(Network::Resistance { leads: None }, Element::Platinum(IEC_60751));
    let warmed = Chain { self_heating: Some(SelfHeating { kelvin_per_watt: 20.0, amperes: Some(1e-3) }), ..bare };
    Ok(bare.plan()?.one(100.0).number()? - warmed.plan()?.one(100.0).number()?)
}

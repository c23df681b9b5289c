//! Thermocouples against their published reference functions and tables.
//!
//! - NIST Monograph 175 (1993), coefficients in full digits: data/temperature/thermocouple_direct_coefficients.csv (K and
//!   B read, the others from memory), evaluated here in twice the precision.
//! - Printed emf tables: thermocouple_K_table_neg.csv, thermocouple_T_table_neg.csv (read), thermocouple_points.csv
//!   (350 °C read, the others from memory).
//! - Exercises with a reference junction, answers printed: thermocouple_cjc_examples.csv (read).
//! - IEC 584-2:1982 tolerance classes: thermocouple_tolerances.csv (J and T read, the others from memory).

mod support;

use ohmwright::chain::Real;
use ohmwright::thermocouple::{Class, Thermocouple, Tolerance};
use support::report::Report;
use support::table::Table;
use support::twofold::Twofold;

fn named(letter: &str) -> Thermocouple {
    let found = Thermocouple::ALL.into_iter().find(|t| t.letter() == letter);
    found.unwrap_or_else(|| panic!("no type {letter}"))
}

/// A piece of a reference function as the table prints it.
struct Piece {
    low: f64,
    high: f64,
    c: Vec<f64>,
    bell: Vec<f64>,
}

fn pieces(of: Thermocouple) -> Vec<Piece> {
    let table = Table::read("data/temperature/thermocouple_direct_coefficients.csv");
    let mut out: Vec<Piece> = Vec::new();
    for row in table.rows().filter(|r| r.text("type") == of.letter()) {
        let index = row.number("range_index") as usize;
        if index == out.len() {
            let (low, high) = (row.number("t_lo_C"), row.number("t_hi_C"));
            out.push(Piece { low, high, c: Vec::new(), bell: Vec::new() });
        }
        let list = if row.text("i").starts_with("exp") { &mut out[index].bell } else { &mut out[index].c };
        list.push(row.number("c_i_mV"));
    }
    out
}

impl Piece {
    /// E, dE/dt and the sums of their terms' sizes, in twice the precision.
    fn at(&self, t: f64) -> (Twofold, f64, [f64; 2]) {
        let d = Twofold::new;
        let (mut power, mut sum, mut slope, mut size) = (d(1.0), d(0.0), d(0.0), [0.0; 2]);
        for (i, c) in self.c.iter().enumerate() {
            if let Some(next) = self.c.get(i + 1) {
                let term = d(*next) * d((i + 1) as f64) * power;
                slope = slope + term;
                size[1] += term.hi.abs();
            }
            let term = d(*c) * power;
            sum = sum + term;
            size[0] += term.hi.abs();
            power = power * d(t);
        }
        if let [a0, a1, a2] = self.bell[..] {
            let from = d(t) - d(a2);
            let bell = d(a0) * (d(a1) * from * from).exp();
            sum = sum + bell;
            slope = slope + d(2.0) * d(a1) * from * bell;
            size[0] += bell.hi.abs();
        }
        (sum, slope.hi, size)
    }
}

fn grid(low: f64, high: f64, steps: u32) -> impl Iterator<Item = f64> {
    (0..=steps).map(move |i| if i == steps { high } else { low + (high - low) * f64::from(i) / f64::from(steps) })
}

#[test]
fn reference_functions_and_their_inverses_on_dense_grids() {
    let mut report = Report::new("NIST Monograph 175: reference functions, Seebeck coefficients, inverses");
    for of in Thermocouple::ALL {
        let letter = of.letter();
        let range = of.celsius_range();
        let pieces = pieces(of);
        report.equal("range", letter, "°C", [pieces[0].low, pieces[pieces.len() - 1].high], [range.min, range.max]);
        for piece in &pieces {
            for t in grid(piece.low, piece.high, 20_000) {
                if t == piece.low && t != range.min {
                    continue; // the lower piece owns a join
                }
                let (e, slope, size) = piece.at(t);
                // twice the unit roundoff of the largest terms where they cancel
                let [floor, floor_of_slope] = size.map(|s| 4e-16 * s);
                let got = of.millivolts_from_celsius(t).unwrap();
                let error = (e - Twofold::new(got)).hi;
                report.check_error("emf", letter, t, e.hi, got, error, floor.max(1e-12 * e.hi.abs()));
                let seebeck = of.microvolts_per_kelvin_at_celsius(t).unwrap();
                report.check("Seebeck", letter, t, 1e3 * slope, seebeck, 1e3 * floor_of_slope.max(1e-9 * slope.abs()));
                if letter == "B" && t < 21.1 {
                    continue; // the other branch, and the minimum: below
                }
                if e.hi > of.millivolts_range().max || e.hi < of.millivolts_range().min {
                    continue; // the last unit of an end
                }
                let back = of.celsius_from_millivolts(e.hi).unwrap();
                // rounding of the emf through the slope; where two pieces overlap by up to 1e-7 mV, the join
                let allowed = if t == piece.high { 1e-6 } else { (floor / slope).max(1e-9) };
                report.check("inverse", letter, t, t, back, allowed.min(1e-6));
            }
        }
    }
    report.finish();
}

#[test]
fn joins_meet_and_belong_to_the_lower_piece() {
    let mut report = Report::new("NIST Monograph 175: joins");
    for of in Thermocouple::ALL {
        for pair in pieces(of).windows(2) {
            let join = pair[0].high;
            report.equal("pieces adjoin", of.letter(), join, join, pair[1].low);
            let (lower, upper) = (pair[0].at(join).0, pair[1].at(join).0);
            report.check_error("gap, mV", of.letter(), join, lower.hi, upper.hi, (lower - upper).hi, 1e-7);
            let own = of.millivolts_from_celsius(join).unwrap();
            report.check("emf of the lower piece", of.letter(), join, lower.hi, own, 1e-13);
            // from a little below to a little above the join the inverse stays, and what lies in a gap is the join
            let gap = upper.hi - own;
            for share in [0.25, 0.5, 0.75] {
                let mv = own + share * gap;
                if gap > 1e-12 && mv > own && mv < upper.hi {
                    let t = of.celsius_from_millivolts(mv).unwrap();
                    report.equal("inside the gap", of.letter(), mv, join, t);
                }
            }
            // the emf of a join is the join, also where the upper piece starts lower
            report.check("the join itself", of.letter(), own, join, of.celsius_from_millivolts(own).unwrap(), 1e-10);
            for mv in [own - 1e-9, own + 2e-7] {
                report.check("beside it", of.letter(), mv, join, of.celsius_from_millivolts(mv).unwrap(), 1e-4);
            }
        }
    }
    report.finish();
}

#[test]
fn type_b_gives_the_upper_branch() {
    let b = Thermocouple::B;
    let mut report = Report::new("NIST Monograph 175: type B below 42.13 degC");
    // minimum and second zero: mpmath 1.3.0, 40 digits, from the published coefficients
    let (minimum, lowest, zero) = (21.020_261_884_768_556, -0.002_584_971_988_488_413_6, 42.134_948_8);
    report.check("lowest emf", "mpmath", "mV", lowest, b.millivolts_range().min, 1e-18);
    report.check("second zero", "printed 42.13", 0, 42.13, b.celsius_from_millivolts(0.0).unwrap(), 0.005);
    report.equal("below the lowest", "mpmath", "mV", true, b.celsius_from_millivolts(lowest - 1e-9).is_err());
    let piece = &pieces(b)[0];
    for t in grid(0.0, zero, 4000) {
        let (e, slope, _) = piece.at(t);
        if e.hi < b.millivolts_range().min {
            continue;
        }
        let back = b.celsius_from_millivolts(e.hi).unwrap();
        report.equal("upper branch", "mpmath", t, true, back >= minimum - 1e-12);
        report.equal("ambiguous", "mpmath", t, e.hi <= 0.0, b.is_ambiguous(e.hi));
        if t > minimum {
            // 1e-18 V through the slope; within the root of that beside the minimum, where dE/dt vanishes
            let near = (1e-15 / 5.9e-6_f64).sqrt();
            report.check("inverse", "mpmath", t, t, back, (1e-15 / slope).min(near).max(1e-9));
        }
        // the emf of the answer is the emf asked for, on either side of the minimum
        let error = (piece.at(back).0 - e).hi;
        report.check_error("emf of the answer", "mpmath", t, e.hi, e.hi + error, error, 1e-17);
    }
    // unit by unit away from the lowest emf
    let mut mv = b.millivolts_range().min;
    for _ in 0..20_000 {
        let back = b.celsius_from_millivolts(mv).unwrap();
        let error = (piece.at(back).0 - Twofold::new(mv)).hi;
        report.check_error("beside the minimum", "mpmath", mv, mv, mv + error, error, 1e-17);
        mv = mv.next_up();
    }
    report.equal(
        "no other type",
        "all",
        0,
        0,
        Thermocouple::ALL.iter().filter(|t| t.letter() != "B" && t.is_ambiguous(0.0)).count(),
    );
    report.equal("above", "B", 1, false, b.is_ambiguous(1e-3));
    report.finish();
}

#[test]
fn printed_tables() {
    let mut report = Report::new("NIST ITS-90 tables: emf of round temperatures");
    let mut rows = 0;
    for (file, letter) in
        [("thermocouple_K_table_neg.csv", "K"), ("thermocouple_T_table_neg.csv", "T"), ("thermocouple_points.csv", "")]
    {
        let table = Table::read(&format!("data/temperature/{file}"));
        for row in table.rows() {
            let of = named(if letter.is_empty() { row.text("type") } else { letter });
            let (t, printed, half) = (row.number("t_C"), row.number("E_mV"), row.half_digit("E_mV"));
            report.check("emf", row.at(), t, printed, of.millivolts_from_celsius(t).unwrap(), half);
            // the inverse of the print is within what half a digit is worth; 1.4 for the bend over that half digit
            // a print may lie up to half a digit outside of the last emf
            let within = printed.clamp(of.millivolts_range().min, of.millivolts_range().max);
            let back = of.celsius_from_millivolts(within).unwrap();
            let slope = 1e-3 * of.microvolts_per_kelvin_at_celsius(t).unwrap();
            report.check("celsius", row.at(), printed, t, back, 1.4 * half / slope);
            rows += 1;
        }
    }
    report.equal("rows", "the tables", "rows", 79 + 116 + 58, rows);
    report.finish();
}

#[test]
fn reference_junctions_as_emf() {
    let table = Table::read("data/temperature/thermocouple_cjc_examples.csv");
    let mut report = Report::new("exercises with a reference junction");
    for row in table.rows() {
        let of = named(row.text("type"));
        let fahrenheit = row.text("unit") == "degF";
        let celsius = |t: f64| if fahrenheit { (t - 32.0) / 1.8 } else { t };
        let reference = celsius(row.number("reference"));
        if row.text("answer") == "mV" {
            let got = of.millivolts_from_celsius_and_reference(celsius(row.number("hot")), reference).unwrap();
            // formed from two table values rounded to 0.001 mV each
            report.check("mV", row.at(), row.text("hot"), row.number("measured_mV"), got, 0.001);
        } else {
            let mv = row.number("measured_mV");
            let t = of.celsius_from_millivolts_and_reference(mv, reference).unwrap();
            let got = if fahrenheit { t * 1.8 + 32.0 } else { t };
            report.check("hot junction", row.at(), mv, row.number("hot"), got, 0.5);
            // adding the reference as temperature is another number
            let wrong = of.celsius_from_millivolts(mv).unwrap() + reference;
            report.equal("not as temperature", row.at(), mv, true, (wrong - t).abs() > 0.2);
        }
    }
    report.equal("rows", "the table", "rows", 6, table.rows().count());
    report.finish();
}

#[test]
fn tolerance_classes() {
    let table = Table::read("data/temperature/thermocouple_tolerances.csv");
    let mut report = Report::new("IEC 584-2:1982: tolerance classes");
    let mut classes = 0;
    for row in table.rows() {
        let class = [Class::One, Class::Two, Class::Three][row.number("class") as usize - 1];
        for letter in row.text("types").split("") {
            let Some(of) = Thermocouple::ALL.into_iter().find(|t| t.letter() == letter) else { continue };
            classes += 1;
            let Some(ours) = Tolerance::iec_60584(of, class) else {
                report.fail("class", row.at(), letter);
                continue;
            };
            let range_celsius = [row.number("t_lo_C"), row.number("t_hi_C")];
            let want = Tolerance {
                fixed_kelvin: row.number("abs_C"),
                relative: row.number("rel"),
                knee_celsius: row.maybe("knee_C"),
                range_celsius,
            };
            report.equal("class", row.at(), letter, want, ours);
            let [low, high] = range_celsius;
            report.equal("outside", row.at(), letter, true, ours.kelvin_at_celsius(high + 1.0).is_err());
            report.equal("outside", row.at(), letter, true, ours.kelvin_at_celsius(low - 1.0).is_err());
        }
    }
    let defined = Thermocouple::ALL.iter().flat_map(|t| [Class::One, Class::Two, Class::Three].map(|c| (*t, c)));
    report.equal(
        "no class more",
        "the table",
        "classes",
        classes,
        defined.filter(|(t, c)| Tolerance::iec_60584(*t, *c).is_some()).count(),
    );
    // by hand from the rule "the larger of the two figures"
    for (of, class, t, want) in [
        (Thermocouple::J, Class::One, 100.0, 1.5),
        (Thermocouple::J, Class::One, 700.0, 2.8),
        (Thermocouple::T, Class::Three, -200.0, 3.0),
        (Thermocouple::T, Class::Three, -50.0, 1.0),
        (Thermocouple::S, Class::One, 1000.0, 1.0),
        (Thermocouple::S, Class::One, 1600.0, 2.5),
    ] {
        let got = Tolerance::iec_60584(of, class).unwrap().kelvin_at_celsius(t).unwrap();
        report.check("half-width", of.letter(), t, want, got, 1e-12);
    }
    report.finish();
}

#[test]
fn what_cannot_be_converted_is_refused() {
    for of in Thermocouple::ALL {
        let (celsius, emf) = (of.celsius_range(), of.millivolts_range());
        for bad in [f64::NAN, f64::INFINITY, f64::NEG_INFINITY] {
            assert!(of.millivolts_from_celsius(bad).is_err() && of.celsius_from_millivolts(bad).is_err());
        }
        assert!(of.millivolts_from_celsius(celsius.max.next_up()).is_err());
        assert!(of.millivolts_from_celsius(celsius.min.next_down()).is_err());
        assert!(of.celsius_from_millivolts(emf.max.next_up()).is_err());
        assert!(of.celsius_from_millivolts(emf.min.next_down()).is_err());
        assert_eq!(of.celsius_from_millivolts(emf.max).unwrap(), celsius.max, "{}", of.letter());
        assert!(of.celsius_from_millivolts(emf.min).unwrap() >= celsius.min);
    }
}

//! `check` as it is typed: verdicts, exit codes, JSON, and what a sheet says of delivered columns.
//!
//! Expected values by the closed formula of one gauge, e = 4 y/(1 − 2 y)/F (Wheatstone bridge, Kirchhoff's laws).
#![cfg(feature = "cli")]
#![allow(clippy::disallowed_methods, reason = "made-up signals and textbook formulas need no pinned arithmetic")]

use std::fmt::Write as _;
use std::path::PathBuf;
use std::process::{Command, Output};

struct Place(tempfile::TempDir);

impl Place {
    fn new() -> Self {
        Self(tempfile::tempdir().unwrap())
    }

    fn file(&self, name: &str, text: &str) -> PathBuf {
        let path = self.0.path().join(name);
        std::fs::write(&path, text).unwrap();
        path
    }

    fn run(&self, args: &[&str]) -> Output {
        Command::new(env!("CARGO_BIN_EXE_ohmwright"))
            .current_dir(self.0.path())
            .arg("check")
            .args(args)
            .output()
            .unwrap()
    }
}

fn out(output: &Output) -> String {
    String::from_utf8(output.stdout.clone()).unwrap()
}

fn err(output: &Output) -> String {
    String::from_utf8(output.stderr.clone()).unwrap()
}

/// Microstrain of one gauge at a reading in mV/V.
fn strain(mv: f64, factor: f64) -> f64 {
    let y = mv * 1e-3;
    1e6 * 4.0 * y / (1.0 - 2.0 * y) / factor
}

const GAUGE: &str = "reads = \"mV/V\"\ngauge = { resistance = \"350 ohm\", gauge_factor = \"2.08 ± 1 %\" }\nbridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }\n";

fn sheet(reported: &str) -> String {
    format!("[channel.g]\ncolumn = \"CH01\"\n{GAUGE}{reported}")
}

/// Readings that rise from −0.7 to 0.7 mV/V, with what `theirs` makes of them.
fn delivery(rows: usize, header: &str, theirs: impl Fn(usize, f64) -> String) -> String {
    let mut text = format!("time,CH01,{header}\n");
    for i in 0..rows {
        let mv: f64 = format!("{:.5}", -0.7 + 1.4 * i as f64 / (rows - 1) as f64).parse().unwrap();
        let _ = writeln!(text, "{i},{mv},{}", theirs(i, mv));
    }
    text
}

fn right(_: usize, mv: f64) -> String {
    format!("{:.1}", strain(mv, 2.08))
}

#[test]
fn agreement_is_exit_code_0() {
    let place = Place::new();
    place.file("s.toml", &sheet(""));
    // without a word in the sheet, a column with the name of the channel is its result
    place.file("d.csv", &delivery(200, "g (microstrain)", right));
    let output = place.run(&["s.toml", "d.csv"]);
    assert_eq!(output.status.code(), Some(0), "{}", err(&output));
    assert!(out(&output).starts_with("g: agrees. 200 rows, printed to 0.1 microstrain; "), "{}", out(&output));
}

#[test]
fn a_difference_is_exit_code_1_and_told_as_json() {
    let place = Place::new();
    place.file("s.toml", &sheet("reported = { column = \"their strain\" }\n"));
    place.file("d.csv", &delivery(200, "their strain", |_, mv| format!("{:.1}", strain(mv, 2.0))));
    let output = place.run(&["s.toml", "d.csv", "--json"]);
    assert_eq!(output.status.code(), Some(1), "{}", err(&output));
    let json: serde_json::Value = serde_json::from_slice(&output.stdout).unwrap();
    let keys = |v: &serde_json::Value| -> Vec<String> { v.as_object().unwrap().keys().cloned().collect() };
    assert_eq!(keys(&json), ["channels"]);
    let g = &json["channels"][0];
    let wanted =
        ["name", "verdict", "material", "rows", "largest_difference", "unit", "slope", "offset", "explanations"];
    assert_eq!(keys(g)[..wanted.len()], wanted);
    assert_eq!(g["stretches"], serde_json::json!([]));
    assert_eq!((&g["name"], &g["verdict"], &g["rows"]), (&"g".into(), &"explained".into(), &200.into()));
    // 4 % of the value is more than the 1 % that the gauge factor is uncertain by
    assert_eq!(g["material"], true);
    assert_eq!(g["unit"], "microstrain");
    // 2.08/2.00
    assert!((g["slope"].as_f64().unwrap() - 1.04).abs() < 2e-4);
    let largest = strain(0.7, 2.0) - strain(0.7, 2.08);
    assert!((g["largest_difference"].as_f64().unwrap().abs() - largest).abs() < 0.06);
    let first = &g["explanations"][0];
    assert_eq!(keys(first), ["id", "parameters", "residual", "tie", "tied", "ask"]);
    assert_eq!((&first["id"], &first["parameters"]["gauge factor"]), (&"gauge-factor".into(), &2.0.into()));
    // what rounding to 0.1 leaves: 0.1/√12
    assert!((first["residual"].as_f64().unwrap() - 0.0289).abs() < 0.003);

    let text = out(&place.run(&["s.toml", "d.csv"]));
    for words in ["g: explained. Over 200 rows", "gauge factor 2 [gauge-factor]", "To be sure, ask: which gauge factor"]
    {
        assert!(text.contains(words), "{text}");
    }
}

#[test]
fn too_little_is_exit_code_3() {
    let place = Place::new();
    place.file("s.toml", &sheet("reported = { column = \"theirs\" }\n"));
    // a bridge at rest: nothing shows whether the gauge factor is right
    let quiet = |i: usize, _: f64| format!("{:.1}", strain(0.0001 * (i % 3) as f64, 2.0));
    let mut text = String::from("time,CH01,theirs\n");
    for i in 0..50 {
        let _ = writeln!(text, "{i},{},{}", 0.0001 * (i % 3) as f64, quiet(i, 0.0));
    }
    place.file("d.csv", &text);
    let output = place.run(&["s.toml", "d.csv"]);
    assert_eq!(output.status.code(), Some(3), "{}{}", out(&output), err(&output));
    let text = out(&output);
    assert!(text.starts_with("g: cannot tell from 50 rows that span 0.4") || text.contains("cannot tell"), "{text}");
    assert!(text.contains("what they make of a reading of") && text.contains("mV/V would settle it"), "{text}");
    // six rows are too few, although they agree
    place.file("d.csv", &delivery(6, "theirs", right));
    assert_eq!(place.run(&["s.toml", "d.csv"]).status.code(), Some(3));
    // where another channel differs, the answer is no
    place.file(
        "s2.toml",
        &format!(
            "{}[channel.h]\ncolumn = \"CH01\"\n{GAUGE}reported = {{ column = \"b\" }}\n",
            sheet("reported = { column = \"a\" }\n")
        ),
    );
    place.file("d2.csv", &delivery(6, "a,b", |i, mv| format!("{},{:.1}", right(i, mv), 3.0 * strain(mv, 2.08))));
    assert_eq!(place.run(&["s2.toml", "d2.csv"]).status.code(), Some(1));
}

#[test]
fn a_tolerance_lets_pass_and_rows_beyond_it_are_told() {
    let place = Place::new();
    let wrong = |i: usize, mv: f64| {
        let by = if (120..130).contains(&i) { 0.35 } else { 0.0 };
        format!("{:.1}", strain(mv, 2.08) + by)
    };
    place.file("d.csv", &delivery(1000, "theirs", wrong));
    place.file("s.toml", &sheet("reported = { column = \"theirs\" }\n"));
    let output = place.run(&["s.toml", "d.csv"]);
    assert_eq!(output.status.code(), Some(1));
    let text = out(&output);
    assert!(text.contains("g: unexplained.") && text.contains("All but 10 rows of them agree."), "{text}");
    assert!(text.contains("10 of 1000 rows: rows 121 to 130 (0.3"), "{text}");
    place.file("s.toml", &sheet("reported = { column = \"theirs\", tolerance = \"0.5 microstrain\" }\n"));
    assert_eq!(place.run(&["s.toml", "d.csv"]).status.code(), Some(0));
}

#[test]
fn a_difference_within_our_uncertainty_is_still_one() {
    let place = Place::new();
    place.file("s.toml", &sheet("reported = { column = \"theirs\", uncertainty = \"20 microstrain (k=2)\" }\n"));
    // 0.5 % where the gauge factor is known to 1 % (half-width): U (k = 2) is 1.15 %
    place.file("d.csv", &delivery(400, "theirs", |_, mv| format!("{:.1}", strain(mv, 2.07))));
    let output = place.run(&["s.toml", "d.csv", "--json"]);
    assert_eq!(output.status.code(), Some(1));
    let json: serde_json::Value = serde_json::from_slice(&output.stdout).unwrap();
    let g = &json["channels"][0];
    assert_eq!((&g["verdict"], &g["material"]), (&"explained".into(), &false.into()), "{g}");
    let text = out(&place.run(&["s.toml", "d.csv"]));
    assert!(text.contains("not material") && text.contains("|E_n|"), "{text}");
}

/// A strain of 0 is 0 with any gauge factor, of which alone an uncertainty is stated: that is why this row has none.
#[test]
fn a_row_that_no_uncertainty_moves_is_explained() {
    let place = Place::new();
    place.file("s.toml", &sheet("reported = { column = \"theirs\" }\n"));
    let text: String = (0..25)
        .map(|i| format!("{:.5}", f64::from(i - 12) * 0.050037))
        .enumerate()
        .map(|(i, mv)| format!("{i},{mv},{:.2}\n", strain(mv.parse().unwrap(), 2.09)))
        .collect();
    place.file("d.csv", &format!("time,CH01,theirs\n{text}"));
    let told = out(&place.run(&["s.toml", "d.csv"]));
    // 1 % rectangular is u = 0.577 %, U = 1.155 %; 2.09 for 2.08 is 0.478 % of theirs: 0.41 to 0.42 of U
    assert!(
        told.contains(
            "in the same row; 24 of 25 rows that were looked at have one (in the other nothing whose uncertainty is stated moves the result, as a gauge factor does not move a strain of 0): not material"
        ),
        "{told}"
    );
    // an uncertainty of the readings moves every result
    place.file("s.toml", &sheet("uncertainty = \"0.1 uV/V (k=2)\"\nreported = { column = \"theirs\" }\n"));
    let told = out(&place.run(&["s.toml", "d.csv"]));
    assert!(told.contains("in the same row: not material"), "{told}");
}

#[test]
fn units_and_files_of_their_own() {
    let place = Place::new();
    // percent strain in a file beside the sheet
    place.file("s.toml", &sheet("reported = { column = \"e\", unit = \"%\", file = \"theirs.csv\" }\n"));
    let d = place.file("d.csv", &delivery(300, "nothing", |_, _| "0".into()));
    let mut theirs = String::from("time,e\n");
    for line in std::fs::read_to_string(d).unwrap().lines().skip(1) {
        let cells: Vec<&str> = line.split(',').collect();
        let _ = writeln!(theirs, "{},{:.6}", cells[0], strain(cells[1].parse().unwrap(), 2.08) * 1e-4);
    }
    let path = place.file("theirs.csv", &theirs);
    let output = place.run(&["s.toml", "d.csv"]);
    assert_eq!(output.status.code(), Some(0), "{}{}", out(&output), err(&output));
    // rounding of 1e-6 % is 0.01 microstrain
    assert!(out(&output).contains("printed to 0.01 microstrain"), "{}", out(&output));
    // a row less
    let shorter: Vec<&str> = theirs.lines().take(300).collect();
    std::fs::write(path, shorter.join("\n")).unwrap();
    let output = place.run(&["s.toml", "d.csv"]);
    assert_eq!(output.status.code(), Some(2));
    assert!(err(&output).contains("theirs.csv: it has fewer rows than d.csv"), "{}", err(&output));
}

#[test]
fn what_is_wrong_is_said_with_its_place() {
    let place = Place::new();
    place.file("d.csv", &delivery(20, "theirs", right));
    for (reported, words) in [
        (
            "reported = { colum = \"x\" }\n",
            "s.toml:6:14: unknown key 'channel.g.reported.colum'; did you mean 'column'?",
        ),
        (
            "reported = { unit = \"degC\" }\n",
            "reported.unit = 'degC' does not measure what the channel gives, microstrain",
        ),
        ("reported = { tolerance = \"1 ohm\" }\n", "reported.tolerance: value '1 ohm'"),
        ("reported = { uncertainty = \"1 ohm\" }\n", "reported.uncertainty: value '1 ohm'"),
        ("reported = { column = 0 }\n", "reported.column counts from 1"),
        (
            "reported = { column = \"thers\" }\n",
            "d.csv:1: value 'thers': no column has this name; the nearest is 'theirs'",
        ),
        ("", "d.csv: no column here is somebody's result of a channel"),
    ] {
        place.file("s.toml", &sheet(reported));
        let output = place.run(&["s.toml", "d.csv"]);
        assert_eq!(output.status.code(), Some(2), "{reported}");
        assert!(err(&output).contains(words), "{reported}: {}", err(&output));
    }
    // a header that contradicts the sheet
    place.file("s.toml", &sheet("reported = { column = \"theirs\", unit = \"%\" }\n"));
    place.file("d.csv", &delivery(20, "theirs (microstrain)", right));
    let output = place.run(&["s.toml", "d.csv"]);
    assert!(err(&output).contains("one of the two is wrong"), "{}", err(&output));
}

/// A reading that stands for a fault is no strain, however plausible what the formula makes of it.
#[test]
fn faults_that_were_converted_are_told() {
    let place = Place::new();
    place.file(
        "s.toml",
        &sheet("reported = { column = \"theirs\" }\nlimits = { high = \"0.6 mV/V\", above = \"saturated\" }\n"),
    );
    place.file("d.csv", &delivery(200, "theirs", right));
    let output = place.run(&["s.toml", "d.csv"]);
    let text = out(&output);
    assert_eq!(output.status.code(), Some(1), "{text}");
    assert!(text.starts_with("g: explained. Where both give a number, in 185 rows, they agree"), "{text}");
    assert!(text.contains("rows 15 [faults-converted]"), "{text}");
    assert!(
        text.contains("They give a number in 15 rows where the reading cannot be converted here: rows 186 to 200."),
        "{text}"
    );
    // something else in their place: no explanation, and no agreement
    let zeros = |i: usize, mv: f64| if mv > 0.6 { format!("{i}.5") } else { right(i, mv) };
    place.file("d.csv", &delivery(200, "theirs", zeros));
    let output = place.run(&["s.toml", "d.csv"]);
    assert!(output.status.code() == Some(1) && out(&output).starts_with("g: unexplained."), "{}", out(&output));
    // nothing in their place: right
    let blanks = |i: usize, mv: f64| if mv > 0.6 { String::new() } else { right(i, mv) };
    place.file("d.csv", &delivery(200, "theirs", blanks));
    assert_eq!(place.run(&["s.toml", "d.csv"]).status.code(), Some(0));
}

#[test]
fn gaps_that_were_filled_are_told() {
    let place = Place::new();
    place.file("s.toml", &sheet("reported = { column = \"theirs\" }\n"));
    let gap = |i: usize| (50..60).contains(&i) || i == 120;
    let filled = |how: &dyn Fn(usize) -> f64| {
        let text = delivery(200, "theirs", |i, mv| if gap(i) { format!("{:.1}", how(i)) } else { right(i, mv) });
        let blank = |(i, line): (usize, &str)| {
            let mut cells: Vec<&str> = line.split(',').collect();
            if i > 0 && gap(i - 1) {
                cells[1] = "";
            }
            cells.join(",") + "\n"
        };
        text.lines().enumerate().map(blank).collect::<String>()
    };
    // the own values as they are printed, so that a line between them is known
    let own = |i: usize| strain(format!("{:.5}", -0.7 + 1.4 * i as f64 / 199.0).parse().unwrap(), 2.08);
    let line = |i: usize| {
        let (a, b) = if i == 120 { (119, 121) } else { (49, 60) };
        own(a) + (own(b) - own(a)) * (i - a) as f64 / (b - a) as f64
    };
    let before = |i: usize| own(if i == 120 { 119 } else { 49 });
    for (how, said) in [
        (&(|_: usize| 0.0) as &dyn Fn(usize) -> f64, "rows 11, value 0 [gaps-filled]"),
        (&before, "(with the value before): rows 11 [gaps-filled]"),
        (&line, "(along a straight line): rows 11 [gaps-filled]"),
    ] {
        place.file("d.csv", &filled(how));
        let output = place.run(&["s.toml", "d.csv"]);
        assert_eq!(output.status.code(), Some(1));
        assert!(out(&output).contains(said), "{said}\n{}", out(&output));
    }
}

/// From row 301 to row 420 with another gauge factor, and right before and behind.
#[test]
fn a_mistake_in_part_of_a_recording_is_found_there() {
    let place = Place::new();
    place.file("s.toml", &sheet("reported = { column = \"theirs\" }\n"));
    let factor = |i: usize| if (300..420).contains(&i) { 2.0 } else { 2.08 };
    let text = delivery(1000, "theirs", |i, mv| format!("{:.1}", strain(mv, factor(i))));
    place.file("d.csv", &text);
    let output = place.run(&["s.toml", "d.csv", "--json"]);
    assert_eq!(output.status.code(), Some(1));
    let json: serde_json::Value = serde_json::from_slice(&output.stdout).unwrap();
    let first = &json["channels"][0]["explanations"][0];
    assert_eq!((&first["id"], &first["parameters"]["gauge factor"]), (&"gauge-factor".into(), &2.0.into()), "{json:#}");
    assert_eq!(
        (&first["parameters"]["from row"], &first["parameters"]["to row"]),
        (&301.0.into(), &420.0.into()),
        "{json:#}"
    );
    assert_eq!(json["channels"][0]["rows_beyond_rounding"], 0, "{json:#}");
}

/// Thermal output by a temperature that is itself wrong: τ/F = 1.9 (T − T0) microstrain at the data gauge factor 2, so 1.9 · 2/2.08.
#[test]
fn a_wrong_temperature_is_traced_to_what_it_corrects() {
    let place = Place::new();
    place.file(
        "s.toml",
        &format!(
            "[channel.g]\ncolumn = \"CH01\"\n{GAUGE}thermal_output = {{ coefficients = [0.0, 1.9], in = \"degC\", gauge_factor = 2.0 }}\n\
             temperature = \"deck\"\nzero = {{ temperature = \"20 degC\" }}\nreported = {{ column = \"theirs\" }}\n\
             [channel.deck]\ncolumn = \"T\"\nreads = \"degC\"\nreported = {{ column = \"T theirs\" }}\n"
        ),
    );
    let mut text = String::from("time,CH01,T,theirs,T theirs\n");
    for i in 0..400 {
        let mv: f64 = format!("{:.5}", 0.7 * (f64::from(i) * 0.05).sin()).parse().unwrap();
        let t: f64 = format!("{:.2}", 20.0 + 15.0 * (f64::from(i) * 0.013).sin()).parse().unwrap();
        // their thermometer is taken for one that reads 4 % more and 1.5 K less
        let wrong: f64 = format!("{:.2}", 1.04 * t - 1.5).parse().unwrap();
        let e = strain(mv, 2.08) - 1.9 * 2.0 / 2.08 * (wrong - 20.0);
        let _ = writeln!(text, "{i},{mv},{t},{e:.1},{wrong:.2}");
    }
    place.file("d.csv", &text);
    let output = place.run(&["s.toml", "d.csv", "--json"]);
    let json: serde_json::Value = serde_json::from_slice(&output.stdout).unwrap();
    let g = &json["channels"][0];
    assert_eq!((&g["name"], &g["verdict"]), (&"g".into(), &"explained".into()), "{json:#}");
    assert_eq!(g["explanations"][0]["id"], "temperature-delivered", "{json:#}");
}

/// Codes at the ends of a converter are no readings, whatever the formula makes of them.
#[test]
fn end_codes_that_were_converted_are_told() {
    let place = Place::new();
    place.file(
        "s.toml",
        "[channel.g]\ncolumn = \"CH01\"\nreads = \"count\"\ngauge = { resistance = \"350 ohm\", gauge_factor = 2.08 }\n\
         bridge = { arms = [\"e\", \"0\", \"0\", \"0\"], supply = \"2.5 V\" }\n\
         converter = { bits = 16, full_scale = \"±10 mV\", coding = \"signed\" }\nreported = { column = \"theirs\" }\n",
    );
    // V = code · 10 mV / 2^15
    let value = |code: i32| strain(f64::from(code) * 10.0 / 32768.0 / 2.5, 2.08);
    let mut text = String::from("time,CH01,theirs\n");
    for i in 0..300 {
        let code = ((f64::from(i) * 0.05).sin() * 36000.0).round().clamp(-32768.0, 32767.0) as i32;
        let _ = writeln!(text, "{i},{code},{:.1}", value(code));
    }
    place.file("d.csv", &text);
    let output = place.run(&["s.toml", "d.csv"]);
    let said = out(&output);
    assert!(output.status.code() == Some(1) && said.contains("[faults-converted]"), "{said}");
    assert!(said.contains("where the reading cannot be converted here: rows 24 to 40"), "{said}");
}

/// A gauge factor, and a gap that is filled: one explanation of both.
#[test]
fn a_mistake_and_a_filled_gap_are_told_together() {
    let place = Place::new();
    place.file("s.toml", &sheet("reported = { column = \"theirs\" }\n"));
    let text = delivery(400, "theirs", |i, mv| if i == 100 { "0.0".into() } else { format!("{:.1}", strain(mv, 2.0)) });
    let blank = |(i, line): (usize, &str)| {
        let mut cells: Vec<&str> = line.split(',').collect();
        if i == 101 {
            cells[1] = "";
        }
        cells.join(",") + "\n"
    };
    place.file("d.csv", &text.lines().enumerate().map(blank).collect::<String>());
    let said = out(&place.run(&["s.toml", "d.csv"]));
    assert!(said.contains("[gauge-factor+gaps-filled]") && said.contains("value 0"), "{said}");
}

/// 0.01 and then 0.1: nothing of the sheet is another, and no constant is given that is the sheet's own.
#[test]
fn figures_rounded_twice_are_told() {
    let place = Place::new();
    place.file("s.toml", &sheet("reported = { column = \"theirs\" }\n"));
    // in whole hundredths, halves away from zero
    let twice = |v: f64| {
        let hundredths = (v * 100.0).round() as i64;
        let tenths = (hundredths.abs() + 5) / 10 * hundredths.signum();
        format!("{}{}.{}", if tenths < 0 { "-" } else { "" }, tenths.abs() / 10, tenths.abs() % 10)
    };
    // readings with so many digits that their own rounding is nothing
    let mut text = String::from("time,CH01,theirs\n");
    for i in 0..1500 {
        let mv: f64 = format!("{:.8}", 0.7 * (f64::from(i) * 0.013).sin()).parse().unwrap();
        let _ = writeln!(text, "{i},{mv},{}", twice(strain(mv, 2.08)));
    }
    place.file("d.csv", &text);
    let output = place.run(&["s.toml", "d.csv"]);
    let said = out(&output);
    assert!(output.status.code() == Some(1) && said.contains("[rounded-twice]"), "{said}");
    assert!(!said.contains("gauge factor 2.08"), "{said}");
}

/// A strain as a plain number is 1e-6 of the microstrain, also where readings are coarse.
#[test]
fn strain_instead_of_microstrain() {
    let place = Place::new();
    place.file("s.toml", &sheet("reported = { column = \"theirs\" }\n"));
    let coarse = |_: usize, mv: f64| format!("{:.8}", 1e-6 * strain((mv * 1000.0).round() / 1000.0, 2.08));
    let mut text = String::from("time,CH01,theirs\n");
    for i in 0..300 {
        let mv: f64 = format!("{:.3}", 0.7 * (f64::from(i) * 0.05).sin()).parse().unwrap();
        let _ = writeln!(text, "{i},{mv:.3},{}", coarse(0, mv));
    }
    place.file("d.csv", &text);
    let output = place.run(&["s.toml", "d.csv", "--json"]);
    let json: serde_json::Value = serde_json::from_slice(&output.stdout).unwrap();
    let first = &json["channels"][0]["explanations"][0];
    assert_eq!((&first["id"], &first["parameters"]["exponent"]), (&"power-of-ten".into(), &(-6.0).into()), "{json:#}");
}

/// A zero that creeps by 12 microstrain in proportion to time, taken off or not, alone and beside another gauge factor.
#[test]
fn a_drift_is_part_of_what_is_compared() {
    let place = Place::new();
    let zero = "zero = { rows = 1, again = { rows = 1 }, drift = \"time\" }\n";
    place.file("s.toml", &sheet(&format!("reported = {{ column = \"theirs\" }}\n{zero}")));
    // e = 4 y/(1 − 2 y)/F, and y of e
    let y = |e: f64| 1e3 * e * 2.08e-6 / (4.0 + 2.0 * e * 2.08e-6);
    let rows = 500;
    let signal = |i: usize| 300.0 * (std::f64::consts::TAU * 4.0 * i as f64 / (rows - 1) as f64).sin();
    let share = |i: usize| i as f64 / (rows - 1) as f64;
    let written = |factor: f64, taken: f64| {
        let mut text = String::from("time,CH01,theirs\n");
        for i in 0..rows {
            let mv: f64 = format!("{:.9}", y(signal(i) + 12.0 * share(i))).parse().unwrap();
            let theirs = strain(mv, factor) - taken * 12.0 * 2.08 / factor * share(i);
            let _ = writeln!(text, "{i},{mv},{theirs:.1}");
        }
        text
    };
    for (factor, taken, code, said) in [
        (2.08, 1.0, 0, "g: agrees."),
        (2.08, 0.0, 1, "[drift-ignored]"),
        (2.0, 1.0, 1, "gauge factor 2 [gauge-factor]"),
        (2.0, 0.0, 1, "[drift-ignored+gauge-factor]"),
    ] {
        place.file("d.csv", &written(factor, taken));
        let output = place.run(&["s.toml", "d.csv"]);
        let text = out(&output);
        assert!(
            output.status.code() == Some(code) && text.contains(said),
            "{factor} {taken}\n{text}\n{}",
            err(&output)
        );
    }
}

/// Where they state an uncertainty, E_n is told of what agrees too.
#[test]
fn the_normalised_error_of_what_agrees() {
    let place = Place::new();
    place.file("s.toml", &sheet("reported = { column = \"theirs\", uncertainty = \"20 microstrain (k=2)\" }\n"));
    place.file("d.csv", &delivery(400, "theirs", right));
    let output = place.run(&["s.toml", "d.csv", "--json"]);
    assert_eq!(output.status.code(), Some(0));
    let json: serde_json::Value = serde_json::from_slice(&output.stdout).unwrap();
    let error = json["channels"][0]["normalised_error"].as_f64().unwrap();
    assert!(error > 0.0 && error < 0.01, "{json:#}");
    assert!(json["channels"][0]["rounding"].as_f64().is_some_and(|step| (step - 0.1).abs() < 1e-9), "{json:#}");
}

/// Nothing known makes these figures, but one mistake comes much nearer than the sheet.
#[test]
fn what_comes_nearest_is_told() {
    let place = Place::new();
    place.file("s.toml", &sheet("reported = { column = \"theirs\" }\n"));
    // a gauge factor of 2 and waves of 4 microstrain that no mistake makes
    let waves = |i: usize, mv: f64| format!("{:.1}", strain(mv, 2.0) + 4.0 * ((i * i) as f64).sin());
    place.file("d.csv", &delivery(600, "theirs", waves));
    let output = place.run(&["s.toml", "d.csv"]);
    let text = out(&output);
    assert!(text.starts_with("g: unexplained.") && text.contains("nearest comes"), "{text}");
    assert!(text.contains("[gauge-factor]"), "{text}");
}

#[test]
fn the_mistakes_can_be_listed() {
    let output = Place::new().run(&["--mistakes"]);
    let text = out(&output);
    assert_eq!(output.status.code(), Some(0));
    for id in ["gauge-factor (element)", "wrong-column (columns)", "thermal-output-unit (element)"] {
        assert!(text.contains(id), "{text}");
    }
    // without arguments it is a mistake of usage
    assert_eq!(Place::new().run(&[]).status.code(), Some(2));
}

#[test]
fn a_pipe_is_refused() {
    let place = Place::new();
    place.file("s.toml", &sheet("reported = { column = \"theirs\" }\n"));
    let output = place.run(&["s.toml", "-"]);
    assert_eq!(output.status.code(), Some(2));
    assert!(err(&output).contains("a delivery is read more than once: give a file, not a pipe"), "{}", err(&output));
}

#[test]
fn nothing_delivered_is_no_agreement() {
    let place = Place::new();
    place.file("s.toml", &sheet("reported = { column = \"theirs\" }\n"));
    place.file("d.csv", &delivery(30, "theirs", |_, _| String::new()));
    let output = place.run(&["s.toml", "d.csv"]);
    assert_eq!(output.status.code(), Some(3));
    let text = out(&output);
    // e = 1000 microstrain at F = 2.08: y = F e/(4 + 2 F e) = 0.519460 mV/V
    assert!(text.contains("a reading of 0.51946 mV/V would settle it: it should be 1000 microstrain"), "{text}");
}

/// More rows than are kept in memory: runs of them are, and all are counted.
#[test]
fn long_recordings_are_counted_to_the_last_row() {
    let place = Place::new();
    place.file("s.toml", &sheet("reported = { column = \"theirs\" }\n"));
    let rows = 70_000;
    let value = |i: usize| 0.7 * ((i as f64) * 0.0021).sin();
    let mut text = String::from("time,CH01,theirs\n");
    for i in 0..rows {
        let mv: f64 = format!("{:.5}", value(i)).parse().unwrap();
        let by = if (40_000..40_007).contains(&i) { 3.0 } else { 0.0 };
        let _ = writeln!(text, "{i},{mv},{:.1}", strain(mv, 2.0) + by);
    }
    place.file("d.csv", &text);
    let text = out(&place.run(&["s.toml", "d.csv"]));
    assert!(text.contains("g: explained. Over 70000 rows") && text.contains("gauge factor 2 [gauge-factor]"), "{text}");
    assert!(text.contains("It does not account for 7 of 70000 rows: rows 40001 to 40007 (3"), "{text}");
    // a clock an hour ahead: 3600 rows of a second
    let mut text = String::from("time,CH01,theirs\n");
    for i in 0..rows {
        let mv = |i: usize| -> f64 { format!("{:.5}", value(i) + 1e-6 * (i % 70_001) as f64).parse().unwrap() };
        let cell = if i < 3600 { String::new() } else { format!("{:.1}", strain(mv(i - 3600), 2.08)) };
        let _ = writeln!(text, "{i},{},{cell}", mv(i));
    }
    place.file("d.csv", &text);
    let text = out(&place.run(&["s.toml", "d.csv"]));
    assert!(text.contains("[hour-shift]") && text.contains("hours 1"), "{text}");
}

/// Three significant digits without an exponent: from 1000 microstrain upwards a zero only holds the place.
#[test]
fn significant_digits_agree() {
    let place = Place::new();
    place.file("s.toml", &sheet(""));
    let three = |_: usize, mv: f64| {
        let value = strain(mv, 2.08);
        let digits = if value == 0.0 { 0 } else { 2 - value.abs().log10().floor() as i32 };
        let unit = 10f64.powi(-digits);
        let rounded = (value / unit).round() * unit;
        if digits > 0 { format!("{rounded:.*}", digits as usize) } else { format!("{rounded:.0}") }
    };
    place.file("d.csv", &delivery(600, "g (microstrain)", three));
    let output = place.run(&["s.toml", "d.csv"]);
    assert_eq!(output.status.code(), Some(0), "{}", out(&output));
}

/// A column that stands still is no result that was cut off at its ends.
#[test]
fn a_constant_column_is_not_explained() {
    let place = Place::new();
    place.file("s.toml", &sheet(""));
    place.file("d.csv", &delivery(200, "g (microstrain)", |_, _| "123.4".into()));
    let output = place.run(&["s.toml", "d.csv"]);
    assert_eq!(output.status.code(), Some(1));
    assert!(out(&output).contains("unexplained"), "{}", out(&output));
    let output = place.run(&["s.toml", "none.csv"]);
    assert!(
        output.status.code() == Some(2) && err(&output).contains("none.csv") && !err(&output).contains("pipe"),
        "{}",
        err(&output)
    );
}

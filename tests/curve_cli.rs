//! `ohmwright curve` as it is typed: forms, messages, refusals.
#![cfg(feature = "cli")]

use std::fs;
use std::path::PathBuf;
use std::process::Command;

/// Chains of a chilled-water plant and of a footbridge; the figures are made up.
const SHEET: &str = r#"
title = "Chilled-water plant and footbridge"

[channel.supply]
column = "R"
reads = "ohm"
output = "degC"
platinum = { standard = "IEC 60751", r0 = "100 ohm" }

[channel.return_2]
column = "adc"
reads = "count"
output = "degF"
converter = { bits = 12, full_scale = "supply", coding = "unsigned" }
thermistor = { r25 = "10 kohm", beta = "3950 K", range = ["-40 degC", "125 degC"] }
circuit = { divider = "10 kohm", sensor = "low" }

[channel.girder]
column = "CH01"
reads = "mV/V"
output = "microstrain"
gauge = { resistance = "350 ohm", gauge_factor = "2.08 ± 0.5 %" }
bridge = { arms = ["e", "0", "0", "0"] }
thermal_output = { coefficients = [-24.0, 1.90, -0.0400, 2.50e-4], in = "degC", gauge_factor = 2.0 }
expansion = { specimen = "11.7e-6/K", data = "12.1e-6/K" }
temperature = { channel = "supply" }
zero = { rows = 200 }

[channel.tie]
column = "CH02"
reads = "mV"
output = "microstrain"
gauge = { resistance = "350 ohm", gauge_factor = 2.1 }
bridge = { arms = ["e", "-e", "0", "0"], supply = { column = "V_ex", reads = "V" } }

[channel.tie_stress]
of = "tie"
material = { modulus = "210 GPa" }
output = "MPa"

[channel.level]
column = "L"
reads = "mm"

[channel.later]
column = "CH03"
reads = "mV/V"
output = "microstrain"
gauge = { resistance = "350 ohm", gauge_factor = 2.1 }
bridge = { arms = ["e", "0", "0", "0"] }

[[channel.later.change]]
from = "2026-03-12T10:00:00Z"
gauge = { gauge_factor = 2.2 }

[channel.spread]
combine = { girder = 0.5, tie = 0.5 }
"#;

struct Dir(tempfile::TempDir);

struct Ran {
    code: Option<i32>,
    out: String,
    err: String,
}

impl Dir {
    fn new() -> Self {
        let dir = Self(tempfile::tempdir().unwrap());
        fs::write(dir.path("s.toml"), SHEET).unwrap();
        dir
    }

    fn path(&self, name: &str) -> PathBuf {
        self.0.path().join(name)
    }

    fn run(&self, args: &[&str]) -> Ran {
        let ran = Command::new(env!("CARGO_BIN_EXE_ohmwright")).current_dir(self.0.path()).args(args).output().unwrap();
        let text = |bytes| String::from_utf8(bytes).unwrap();
        Ran { code: ran.status.code(), out: text(ran.stdout), err: text(ran.stderr) }
    }

    fn curve(&self, channel: &str, args: &[&str]) -> Ran {
        self.run(&[&["curve", "s.toml", channel], args].concat())
    }

    /// Ended with code 2 and nothing but this message.
    #[track_caller]
    fn refuses(&self, channel: &str, args: &[&str], message: &str) {
        let ran = self.curve(channel, args);
        assert_eq!((ran.code, ran.out.as_str(), ran.err.trim_end()), (Some(2), "", message));
    }
}

/// Result of a CSV table by its own rule.
fn by_csv(table: &str, reading: f64) -> Option<f64> {
    let rows = table.lines().filter(|l| !l.starts_with('#')).skip(1);
    let rows: Vec<Vec<f64>> = rows.map(|l| l.split(',').map(|c| c.parse().unwrap()).collect()).collect();
    let row = rows.iter().rev().find(|r| reading >= r[0] && reading <= r[1])?;
    Some(row[2..].iter().rev().fold(0.0, |sum, c| sum * (reading - row[0]) + c))
}

/// What is typed.
type Words<'a> = &'a [&'a str];

/// The number in front of a unit.
fn number(text: &str) -> f64 {
    text.split_whitespace().next().unwrap().parse().unwrap()
}

#[test]
fn a_csv_table_gives_what_value_gives() {
    let dir = Dir::new();
    let cases: [(&str, Words<'_>, Words<'_>, Words<'_>, f64); 5] = [
        ("supply", &["--within", "0.001 K"], &[], &["20", "80.31", "99.99", "100", "109.73", "390.4"], 0.001),
        // 0.018 degF is 0.01 K
        ("return_2", &["--within", "0.018"], &[], &["150", "1024", "2048", "3900"], 0.018),
        (
            "girder",
            &["--within", "0.01 microstrain"],
            &["supply=35degC", "zero=0.03mV/V", "zero_temperature=20degC"],
            &["-2", "0", "0.03", "1.5"],
            0.01,
        ),
        ("tie", &["--within", "0.5 um/m"], &["V_ex=2.5V"], &["-20", "0", "3"], 0.5),
        (
            "tie_stress",
            &["--within", "20 kPa", "--from", "-300 MPa", "--to", "300"],
            &["V_ex=2.5V"],
            &["-3", "0", "3"],
            0.02,
        ),
    ];
    for (channel, args, with, readings, tolerance) in cases {
        let with: Vec<&str> = with.iter().flat_map(|w| ["--with", *w]).collect();
        let table = dir.curve(channel, &[args, &with[..]].concat());
        assert_eq!(table.code, Some(0), "{}", table.err);
        assert!(table.err.contains("proven within"), "{}", table.err);
        for reading in readings {
            let value = dir.run(&[&["value", "s.toml", channel, reading][..], &with[..]].concat());
            let want = number(&value.out);
            let got = by_csv(&table.out, reading.parse().unwrap()).unwrap_or_else(|| panic!("{channel} {reading}"));
            assert!((got - want).abs() <= tolerance, "{channel} {reading}: {got} for {want}");
        }
        // beyond the table there is no row
        assert_eq!(by_csv(&table.out, 1e9), None, "{channel}");
    }
}

#[test]
fn a_table_says_what_it_is() {
    let dir = Dir::new();
    let with = ["--with", "supply=35degC", "--with", "zero=0.03mV/V", "--with", "zero_temperature=20degC"];
    for (form, mark) in [("csv", "# "), ("c", " * "), ("rust", "// ")] {
        let ran = dir.curve("girder", &[&["--within", "0.5 microstrain", "--as", form][..], &with].concat());
        assert_eq!(ran.code, Some(0), "{}", ran.err);
        for said in [
            "Channel girder as a table: microstrain from readings.",
            "Sheet: Chilled-water plant and footbridge",
            concat!("Made by ohmwright ", env!("CARGO_PKG_VERSION"), "."),
            "Tolerance asked for: 0.5 microstrain.",
            "fixed: supply=35degC",
            "fixed: zero=0.03mV/V",
            "gauge: gauge factor F = 2.08",
            "Not a protective function",
        ] {
            assert!(ran.out.lines().any(|l| l.starts_with(&format!("{mark}{said}"))), "{form}: {said}\n{}", ran.out);
        }
        let bound = ran.out.split("Proven bound of |table - chain|: ").nth(1).map(number).unwrap();
        assert!(bound > 0.0 && bound <= 0.5, "{bound}");
        // an uncertainty is none of the table
        assert!(!ran.out.contains("± 0.5 %"), "{}", ran.out);
    }
    let fixed = dir.curve("supply", &["--within", "0.001", "--as", "c", "--numbers", "fixed", "--name", "water"]);
    assert!(fixed.out.contains("A reading is an integer x, Q11.20: x / 2^20 ohm"), "{}", fixed.out);
    assert!(fixed.out.contains("A result is an integer y, Q11.20: y / 2^20 degC"), "{}", fixed.out);
    assert!(fixed.out.contains("int32_t water(int32_t reading, int32_t *value)\n{"), "{}", fixed.out);
    assert!(fixed.err.contains("reading x / 2^20, result y / 2^20"), "{}", fixed.err);
    let named = dir.curve("return_2", &["--within", "0.1", "--as", "rust"]);
    assert!(named.out.contains("pub fn curve_return_2(reading: f32) -> Result<f32, u8> {"), "{}", named.out);
    let degree = dir.curve("supply", &["--within", "0.1", "--degree", "1"]);
    assert!(degree.out.contains("from (ohm),to (ohm),c0 (degC),c1 (degC/ohm)\n"), "{}", degree.out);
}

#[test]
fn a_file_appears_whole_or_not_at_all() {
    let dir = Dir::new();
    let ran = dir.curve("supply", &["--within", "0.01 K", "--as", "c", "-o", "supply.c"]);
    assert_eq!((ran.code, ran.out.as_str()), (Some(0), ""), "{}", ran.err);
    assert!(ran.err.contains("supply.c: "), "{}", ran.err);
    let text = fs::read_to_string(dir.path("supply.c")).unwrap();
    assert!(text.starts_with("/*\n") && text.ends_with("}\n"), "{text}");
    // what is refused leaves the file as it was, and no other behind
    let ran = dir.curve("supply", &["--within", "1e-12 K", "--as", "c", "-o", "supply.c"]);
    assert_eq!(ran.code, Some(2), "{}", ran.err);
    assert_eq!(fs::read_to_string(dir.path("supply.c")).unwrap(), text);
    let ran = dir.curve("supply", &["--within", "0.01 K", "-o", "nowhere/supply.csv"]);
    assert_eq!(ran.code, Some(2));
    let mut names: Vec<_> = fs::read_dir(dir.0.path()).unwrap().map(|e| e.unwrap().file_name()).collect();
    names.sort();
    assert_eq!(names, ["s.toml", "supply.c", "supply.c.trace"]);
}

#[test]
fn what_is_not_stated_is_refused() {
    let dir = Dir::new();
    let within = ["--within", "0.5"];
    let with = |more: &[&'static str]| [&within[..], more].concat();
    dir.refuses("girder", &within, "channel 'girder' needs a temperature: give it by --with supply=21degC");
    dir.refuses(
        "girder",
        &with(&["--with", "supply=20degC", "--with", "zero_temperature=20degC"]),
        "channel 'girder' takes its zero from a recording, which a table has not: give it by --with zero=READING",
    );
    dir.refuses("tie", &within, "channel 'tie' needs its supply: give it by --with V_ex=2.5V");
    dir.refuses("later", &within, "channel 'later' changes in time: a table holds one chain of a channel");
    dir.refuses("level", &within, "channel 'level': its results have no end, so the range is needed: --from and --to");
    assert_eq!(dir.curve("level", &with(&["--from", "-1 mm", "--to", "1 m"])).code, Some(0));
    dir.refuses("spread", &within, "channel 'spread' combines several channels: compute them one by one");
    dir.refuses("supply", &["--within", "0"], "--within '0' must be above zero");
    dir.refuses("supply", &with(&["--from", "50", "--to", "20"]), "--from and --to: 50 to 20 degC is no range");
    dir.refuses(
        "supply",
        &with(&["--to", "900 degC"]),
        "value '900 degC' is beyond the range of channel 'supply': -200 to 850 degC",
    );
    dir.refuses(
        "supply",
        &with(&["--numbers", "fixed"]),
        "--numbers: a CSV table is in doubles; --as c and --as rust have a choice",
    );
    dir.refuses(
        "supply",
        &with(&["--as", "c", "--name", "int"]),
        "--name 'int': expected letters, digits and single underscores, a letter first, and no word of C or Rust",
    );
    let unknown = dir.curve("suply", &within);
    assert_eq!(unknown.code, Some(2));
    assert!(unknown.err.contains("did you mean 'supply'?"), "{}", unknown.err);
    let wrong = dir.curve("supply", &["--within", "0.5 ohm"]);
    assert!(wrong.code == Some(2) && wrong.err.starts_with("--within: "), "{}", wrong.err);
    assert_eq!(dir.curve("supply", &[]).code, Some(2));
    assert_eq!(dir.curve("supply", &with(&["--degree", "4"])).code, Some(2));
}

#[test]
fn a_tolerance_beyond_all_results_can_be_had() {
    let dir = Dir::new();
    for within in ["1000 K", "1e9 K"] {
        let ran = dir.curve("supply", &["--within", within, "--as", "c"]);
        assert_eq!(ran.code, Some(0), "{}", ran.err);
        assert!(
            ran.out.contains(&format!(
                "Tolerance asked for: {} degC",
                within.split(' ').next().unwrap().parse::<f64>().unwrap()
            )),
            "{}",
            ran.out
        );
    }
}

#[test]
fn the_tightest_that_can_be_had_is_said_and_can_be_had() {
    let dir = Dir::new();
    // also where what is asked for lies a thousand million times below
    for (numbers, asked) in [("fixed", "1e-9 K"), ("float", "1e-9 K"), ("float", "1e-15 K")] {
        let ran = dir.curve("supply", &["--within", asked, "--as", "c", "--numbers", numbers]);
        assert_eq!(ran.code, Some(2));
        let had = ran.err.trim_end().rsplit("; ").next().and_then(|t| t.strip_suffix(" degC can be had")).unwrap();
        let asked = dir.curve("supply", &["--within", had, "--as", "c", "--numbers", numbers]);
        assert_eq!(asked.code, Some(0), "{had}: {}", asked.err);
        // half of it cannot
        let half = format!("{}", had.parse::<f64>().unwrap() / 2.0);
        assert_eq!(dir.curve("supply", &["--within", &half, "--as", "c", "--numbers", numbers]).code, Some(2));
    }
}

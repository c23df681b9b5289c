//! `table STANDARD`: what is printed is the standard's table, and what cannot be is said.
//!
//! Sources: the tables of data/temperature, each with its source in its head.
#![cfg(feature = "cli")]

mod support;

use std::process::Command;

use support::report::Report;
use support::table::Table;

/// Exit code, standard output and standard error.
fn table(args: &[&str]) -> (Option<i32>, String, String) {
    let out = Command::new(env!("CARGO_BIN_EXE_ohmwright")).arg("table").args(args).output().expect("it runs");
    let text = |bytes: Vec<u8>| String::from_utf8(bytes).expect("UTF-8");
    (out.status.code(), text(out.stdout), text(out.stderr))
}

/// The lines of a table by their first cell.
fn rows(args: &[&str]) -> (Vec<String>, Vec<Vec<String>>) {
    let (code, out, err) = table(args);
    assert_eq!(code, Some(0), "{args:?}: {err}");
    let mut lines = out.lines().map(|l| l.split(',').map(str::to_string).collect::<Vec<_>>());
    (lines.next().expect("a header"), lines.collect())
}

fn cell(lines: &[Vec<String>], t: f64, column: usize) -> f64 {
    let line =
        lines.iter().find(|l| l[0].parse::<f64>().is_ok_and(|own| own == t)).unwrap_or_else(|| panic!("no line {t}"));
    line[column].parse().unwrap_or_else(|_| panic!("line {t}: {line:?}"))
}

#[test]
fn printed_tables() {
    let mut report = Report::new("tables of standards as they are printed");
    for (name, step, file, column) in [
        ("IEC 60751", "10", "pt100_iec60751_table_10C.csv", "accepted_ohm"),
        ("IEC 60751:2008", "1", "pt100_iec60751_table_1C_neg.csv", "R_ohm"),
        ("IEC 751:1983", "10", "pt100_iec751_1983_table.csv", "srcC_ohm"),
        ("type K", "1", "thermocouple_K_table_neg.csv", "E_mV"),
        ("type T", "1", "thermocouple_T_table_neg.csv", "E_mV"),
        ("nickel DIN 43760", "5", "ni100_din43760_table.csv", "R_ohm"),
    ] {
        let (header, lines) = rows(&[name, "--step", step]);
        let at = header.iter().position(|h| h.starts_with("resistance") || h.starts_with("emf")).expect("a column");
        for row in Table::read(&format!("data/temperature/{file}")).rows() {
            let (t, Some(printed)) = (row.number("t_C"), row.maybe(column)) else { continue };
            if name == "nickel DIN 43760" && t == 80.0 {
                continue; // a cell that misses its own formula, tests/metals.rs
            }
            // half a digit of theirs, and of our four decimals
            report.check(name, row.at(), t, printed, cell(&lines, t, at), row.half_digit(column) + 0.5e-4);
        }
    }
    report.finish();
}

#[test]
fn classes_and_slopes() {
    // IEC 60751:2008, tolerance table of class A: ±0.15 K, ±0.06 Ω at 0 °C and ±0.55 K, ±0.20 Ω at 200 °C
    let (header, lines) = rows(&["IEC 60751", "--class", "A", "--from", "0", "--to", "500", "--step", "100"]);
    assert_eq!(
        header,
        [
            "temperature (degC)",
            "resistance (ohm)",
            "slope (ohm/K)",
            "tolerance (K)",
            "at its lower end (ohm)",
            "at its upper end (ohm)"
        ]
    );
    for (t, kelvin, ohms) in [(0.0, 0.15, 0.06), (200.0, 0.55, 0.20)] {
        assert_eq!(cell(&lines, t, 3), kelvin);
        let half_width = 0.5 * (cell(&lines, t, 5) - cell(&lines, t, 4));
        assert!((half_width - ohms).abs() <= 0.005, "{t}: {half_width}");
    }
    // a wire-wound class A ends at 450 °C
    assert_eq!(lines[5][3..], ["", "", ""]);
    let film = rows(&["IEC 60751", "--class", "A", "--film", "--from", "300", "--to", "400", "--step", "100"]).1;
    assert_eq!((film[0][3].as_str(), film[1][3].as_str()), ("0.75", ""));
    // dR/dt of 100 Ω at 0 °C is 100 A = 0.39083 Ω/K, and ten times that of 1 kΩ
    assert_eq!(cell(&lines, 0.0, 2), 0.39083);
    assert_eq!(cell(&rows(&["IEC 60751", "--r0", "1 kohm", "--from", "0", "--to", "0"]).1, 0.0, 2), 3.9083);
    // NIST: type K has 41.4 µV/K at 100 °C; class 2 is 2.5 K there
    let (_, k) = rows(&["type K", "--class", "2", "--from", "100", "--to", "100"]);
    assert!((cell(&k, 100.0, 2) - 41.4).abs() <= 0.05 && cell(&k, 100.0, 3) == 2.5);
    // ITS-90: Wr is 1.11813889 at 29.7646 °C (gallium), 4e-3 per kelvin about
    let (_, wr) = rows(&["ITS-90", "--from", "29.7646", "--to", "29.7646"]);
    assert!((cell(&wr, 29.7646, 1) - 1.118_138_89).abs() <= 1.5e-8, "{wr:?}");
    // t90 - t68 at 100 °C is -0.026 K (CRC Handbook)
    let (_, old) = rows(&["IEC 751:1983", "--from", "100", "--to", "100"]);
    assert!((cell(&old, 100.0, 1) - 99.974).abs() <= 0.0015, "{old:?}");
}

#[test]
fn a_channel_in_a_table() {
    let folder = tempfile::tempdir().expect("a folder");
    let sheet = folder.path().join("s.toml");
    let text = "[channel.t]\ncolumn = 1\nreads = \"V\"\nthermistor = { r25 = \"10 kohm\", beta = \"3950 K\" }\n\
                circuit = { divider = \"10 kohm\", sensor = \"low\", supply = \"5 V\" }\n\
                [channel.g]\ncolumn = 2\nreads = \"mV/V\"\ngauge = { resistance = \"350 ohm\", gauge_factor = 2 }\n\
                bridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }\n";
    std::fs::write(&sheet, text).expect("written");
    let sheet = sheet.to_str().expect("UTF-8");
    // at 25 °C both resistors are alike
    let (_, lines) = rows(&["temperatures", sheet, "t", "--from", "25", "--to", "25"]);
    assert_eq!(lines[0][..2], ["25", "2.500000"]);
    // dV/dT = −V/4 β/T² there: −1.25 · 3950/298.15²
    let slope: f64 = lines[0][2].parse().expect("a number");
    assert!((slope + 1.25 * 3950.0 / (298.15 * 298.15)).abs() < 1e-8, "{slope}");
    for (args, words) in [
        (&["temperatures", sheet, "g"][..], "channel 'g' is no thermometer"),
        (&["temperatures"], "name a sheet and a channel"),
        (&["temperatures", sheet, "t", "--class", "A"], "belongs to a table of a standard"),
        (&["shunts", sheet, "t"], "no bridge of gauges"),
        (&["IEC 60751", sheet], "takes no sheet"),
        (&["IEC 60752"], "is not known; there are IEC 60751, ASTM E1137"),
        (&["IEC 60751", "--class", "D"], "IEC 60751 has AA, A, B, C"),
        (&["IEC 60751", "--class", "1/3 B"], "trade usage"),
        (&["DIN 43760", "--class", "A"], "no class of"),
        (&["type J", "--class", "3"], "no such class for type J"),
        (&["type K", "--r0", "1 ohm"], "no resistance at 0 degC"),
        (&["type K", "--from", "-300"], "beyond the range, -270 degC to 1372 degC"),
        (&["IEC 60751", "--with", "a=1"], "belongs to a table of a channel"),
        (&["IEC 60751", "--r0", "100"], "--r0"),
    ] {
        let (code, out, err) = table(args);
        assert!(code == Some(2) && out.is_empty() && err.contains(words), "{args:?}: {code:?} {err}");
    }
}

//! `convert --against`: what changed since an earlier result. Expected figures by hand: one gauge is e = 4 y/(1 − 2 y)/F, so
//! another gauge factor is one ratio.
#![cfg(feature = "cli")]

#[path = "support/place.rs"]
mod place;

use place::Place;

use serde_json::Value;

fn sheet(factor: f64, more: &str) -> String {
    format!(
        "[channel.g]\ncolumn = \"CH01\"\nreads = \"mV/V\"\noutput = \"microstrain\"\n\
         gauge = {{ resistance = \"350 ohm\", gauge_factor = {factor} }}\nbridge = {{ arms = [\"e\", \"0\", \"0\", \"0\"] }}\n\
         [channel.t]\ncolumn = \"T\"\nreads = \"degC\"\n{more}"
    )
}

fn recording(rows: i32) -> String {
    let rows: Vec<String> = (0..rows).map(|i| format!("{i},{},{}\n", f64::from(i - 50) * 0.01, 20 + i % 3)).collect();
    format!("time,CH01,T\n{}", rows.concat())
}

#[test]
fn a_ratio_and_what_the_sheet_said() {
    let place = Place::new();
    place.put("r.csv", &recording(101));
    place.put("old.toml", &sheet(2.08, ""));
    place.put("new.toml", &sheet(2.0, "[channel.u]\ncolumn = \"T\"\nreads = \"degC\"\n"));
    place.good(&["convert", "old.toml", "r.csv", "-o", "old.csv", "-q"]);
    let text = place.good(&["convert", "new.toml", "r.csv", "-o", "new.csv", "-q", "--against", "old.csv"]);
    // row 101: 0.5 mV/V; row 1: −0.5 mV/V; 4 y/(1 − 2 y)(1/2.00 − 1/2.08), the larger in tension
    let by = 1e6 * 4.0 * 0.5e-3 / (1.0 - 1e-3) * (1.0 / 2.0 - 1.0 / 2.08);
    assert!(text.contains("g (microstrain): 100 of 101 rows differ, most by "), "{text}");
    assert!(text.contains("in row 101") && text.contains("now = 1.04 earlier + 0"), "{text}");
    assert!(
        text.contains("F = 2.08") && text.contains("F = 2") && text.contains("  earlier: ") && text.contains("  now: "),
        "{text}"
    );
    assert!(text.contains("t (degC): the same in all 101 rows") && text.contains("u (degC): was not there"), "{text}");
    let json: Value = serde_json::from_str(&place.good(&[
        "convert",
        "new.toml",
        "r.csv",
        "-o",
        "new.csv",
        "-q",
        "--against",
        "old.csv",
        "--json",
    ]))
    .unwrap();
    let g = &json["channels"][0];
    assert!((g["ratio"].as_f64().unwrap() - 1.04).abs() < 1e-9, "{json:#}");
    assert!((g["largest_difference"].as_f64().unwrap() - by).abs() < 1e-6, "{json:#}");
    assert_eq!((&g["row"], &g["same"], &g["rows"]), (&101.into(), &1.into(), &101.into()));
    assert_eq!(json["rows"], serde_json::json!([101, 101]));
}

#[test]
fn folders_other_rows_and_no_trace() {
    let place = Place::new();
    place.put("a.csv", &recording(101));
    place.put("b.csv", &recording(60));
    place.put("s.toml", &sheet(2.08, ""));
    place.good(&["convert", "s.toml", "a.csv", "b.csv", "--into", "old", "-q"]);
    let text = place.good(&["convert", "s.toml", "a.csv", "b.csv", "--into", "new", "-q", "--against", "old"]);
    assert_eq!(text.matches("the same in all 101 rows").count(), 2, "{text}");
    assert_eq!(text.matches("the same in all 60 rows").count(), 2, "{text}");
    // another recording under the same name, and nobody knows by which sheet
    place.put("b.csv", &recording(62).replace("\n3,", "\n3.5,"));
    std::fs::remove_file(place.0.path().join("old/b.csv.trace")).unwrap();
    let text = place.good(&["convert", "s.toml", "b.csv", "--into", "new", "-q", "--against", "old"]);
    assert!(
        text.contains("62 rows now, 60 earlier") && text.contains("row 4: the time is '3.5', earlier '3'"),
        "{text}"
    );
    assert!(text.contains("stands no trace"), "{text}");
    // a result that would replace what it is compared with, and one that is not there
    let same = place.refused(&["convert", "s.toml", "b.csv", "--into", "old", "-q", "--against", "old"]);
    assert!(same.contains("the result would replace the earlier one"), "{same}");
    let none = place.refused(&["convert", "s.toml", "b.csv", "-o", "x.csv", "-q", "--against", "none.csv"]);
    assert!(none.contains("none.csv: cannot open") && !place.0.path().join("x.csv").exists(), "{none}");
    let nowhere = place.refused(&["convert", "s.toml", "b.csv", "-q", "--against", "old"]);
    assert!(nowhere.contains("give -o OUT or --into DIR"), "{nowhere}");
}

#[test]
fn values_that_came_and_went() {
    let place = Place::new();
    place.put("r.csv", &recording(101));
    place.put("old.toml", &sheet(2.08, "limits = { high = \"21.5 degC\", above = \"open\" }\n"));
    place.put("new.toml", &sheet(2.08, ""));
    place.good(&["convert", "old.toml", "r.csv", "-o", "old.csv", "-q"]);
    let text = place.good(&["convert", "new.toml", "r.csv", "-o", "new.csv", "-q", "--against", "old.csv"]);
    // every third row is 22 °C: 33 of 101, from row 3 on
    assert!(
        text.contains("t (degC): 0 of 68 rows differ") && text.contains("33 rows have a value now alone"),
        "{text}"
    );
}

/// A chain that changes is told stretch by stretch, and its one zero once.
#[test]
fn what_a_change_changes_is_told_with_its_stretch() {
    let place = Place::new();
    place.put("r.csv", &recording(101));
    let sheet = |factor: f64, from: u32| {
        let more = format!("[[channel.g.change]]\nfrom = \"{from} s\"\ngauge = {{ gauge_factor = {factor} }}\n");
        sheet(2.08, "").replace("[channel.t]", &format!("zero = {{ rows = 3 }}\n{more}[channel.t]"))
    };
    place.put("old.toml", &sheet(2.0, 50));
    let told = place.run(&["convert", "old.toml", "r.csv", "-o", "old.csv"]);
    let told = String::from_utf8(told.stderr).unwrap();
    assert_eq!(told.matches("g: zero -0.490000 mV/V, mean of 3 readings in the first 3 rows\n").count(), 1, "{told}");
    for (factor, from, before, now) in [
        (
            2.1,
            50,
            "  earlier: from 50 s on, gauge: gauge factor F = 2 at",
            "  now: from 50 s on, gauge: gauge factor F = 2.1 at",
        ),
        (
            2.0,
            60,
            "  earlier: from 50 s on, gauge: gauge factor F = 2 at",
            "  now: from 60 s on, gauge: gauge factor F = 2 at",
        ),
    ] {
        place.put("new.toml", &sheet(factor, from));
        let text = place.good(&["convert", "new.toml", "r.csv", "-o", "new.csv", "-q", "--against", "old.csv"]);
        assert!(text.contains(before) && text.contains(now) && !text.contains("from the start"), "{text}");
    }
}

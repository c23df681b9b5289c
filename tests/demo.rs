//! The demo through the library: data/demo/README.md says what a right conversion is.
//!
//! Everything there is invented; truth and bounds come from data/demo/generate.py, which writes the circuits down a second time.
#![cfg(feature = "files")]

mod support;

use std::collections::BTreeMap;
use std::io::Read;

use ohmwright::recording::{CsvWriter, Output, RecordingError, Rows, Summary, convert};
use ohmwright::sheet::Sheet;

/// The recording, as a file or as a pipe.
struct Recording {
    text: String,
    is_file: bool,
}

impl Rows for Recording {
    fn open(&mut self) -> Result<Box<dyn Read + '_>, RecordingError> {
        Ok(Box::new(self.text.as_bytes()))
    }

    fn name(&self) -> &str {
        "footbridge.csv"
    }

    fn is_file(&self) -> bool {
        self.is_file
    }
}

fn converted(sheet: &str, is_file: bool) -> (String, Summary) {
    let sheet = Sheet::read("footbridge.toml", sheet).unwrap_or_else(|e| panic!("{e}"));
    let mut rows = Recording { text: support::read("data/demo/footbridge.csv"), is_file };
    let mut text = Vec::new();
    let mut writer = CsvWriter::new(Output::to_writer(&mut text, "result"));
    let summary = convert(&sheet.measurement, &sheet.layout, &sheet.keep, &mut rows, &mut writer, &mut |_| {}).unwrap();
    writer.finish().unwrap();
    (String::from_utf8(text).unwrap(), summary)
}

/// Rows by the time as written; cells by header.
fn table(text: &str) -> (Vec<String>, BTreeMap<String, Vec<String>>) {
    let mut reader = csv::ReaderBuilder::new().has_headers(false).from_reader(text.as_bytes());
    let mut rows = reader.records().map(|r| r.unwrap().iter().map(String::from).collect::<Vec<_>>());
    let header: Vec<String> = rows.next().unwrap();
    let time = header.iter().position(|h| h == "time").unwrap_or(0);
    (header, rows.map(|r| (r[time].clone(), r)).collect())
}

/// Largest |deviation|, mean deviation, slope − 1, over the truth rows without a word; and what else is wrong.
fn compare(text: &str) -> (BTreeMap<String, [f64; 3]>, Vec<String>) {
    let (got_header, got) = table(text);
    let (header, truth) = table(&support::read("data/demo/footbridge_truth.csv"));
    let place =
        |header: &[String], name: &str| header.iter().position(|h| h == name).unwrap_or_else(|| panic!("{name}"));
    let mut wrong = Vec::new();
    let mut figures = BTreeMap::new();
    let flags = (place(&got_header, "flags"), place(&header, "flags"));
    for (time, want) in &truth {
        let row = &got[time];
        if row[flags.0] != want[flags.1] {
            wrong.push(format!("{time}: flags '{}', not '{}'", row[flags.0], want[flags.1]));
        }
    }
    for name in header.iter().filter(|h| !["time", "flags"].contains(&h.as_str())) {
        let (ours, theirs) = (place(&got_header, name), place(&header, name));
        let channel = name.split(' ').next().unwrap();
        let mut pairs = Vec::new();
        for (time, want) in &truth {
            let cell = got[time][ours].as_str();
            let flagged = want[flags.1].split(' ').any(|f| f.split(':').next() == Some(channel));
            if flagged != cell.is_empty() && channel != "deck" {
                wrong.push(format!("{time} {name}: '{cell}' where the words are '{}'", want[flags.1]));
            }
            if let Ok(value) = cell.parse::<f64>() {
                let truth: f64 = want[theirs].parse().unwrap();
                pairs.push((truth, value - truth));
            }
        }
        let n = pairs.len() as f64;
        let worst = pairs.iter().fold(0.0_f64, |m, (_, d)| m.max(d.abs()));
        let mean = pairs.iter().map(|(_, d)| d).sum::<f64>() / n;
        let middle = pairs.iter().map(|(t, _)| t).sum::<f64>() / n;
        let over: f64 = pairs.iter().map(|(t, _)| (t - middle) * (t - middle)).sum();
        let scale = pairs.iter().map(|(t, d)| (t - middle) * d).sum::<f64>() / over;
        figures.insert(name.clone(), [worst, mean.abs(), scale.abs()]);
    }
    (figures, wrong)
}

fn bounds() -> BTreeMap<String, [f64; 3]> {
    let text = support::read("data/demo/footbridge_bounds.csv");
    text.lines()
        .skip(1)
        .map(|line| {
            let cells: Vec<&str> = line.split(',').collect();
            let number = |i: usize| cells[i].parse().unwrap();
            (cells[0].to_string(), [number(1), number(2), number(3)])
        })
        .collect()
}

/// Which bounds a conversion passes over.
fn passed_over(text: &str) -> Vec<String> {
    let (figures, _) = compare(text);
    let mut out = Vec::new();
    for (name, limits) in bounds() {
        for ((figure, limit), what) in figures[&name].iter().zip(limits).zip(["row", "mean", "scale"]) {
            println!("{name} {what}: {figure:.5} of {limit}");
            if figure.is_nan() || *figure > limit {
                out.push(format!("{name} {what}"));
            }
        }
    }
    out
}

#[test]
fn the_truth_comes_back() {
    let (text, summary) = converted(&support::read("data/demo/footbridge.toml"), true);
    let (figures, wrong) = compare(&text);
    assert_eq!(wrong, [""; 0]);
    assert_eq!(figures.len(), 10);
    assert_eq!(passed_over(&text), [""; 0]);
    assert_eq!((summary.rows, text.lines().count()), (24_001, 24_002));
    // README.md of the demo: the lower girder gauge ends 3.4 microstrain above zero
    let last: f64 = text.lines().last().unwrap().split(',').nth(2).unwrap().parse().unwrap();
    assert!((last - 3.4).abs() < 1.7, "{last}");
    // every row outside the truth rows as well: a deck value where there is a sample, words as in the table of faults
    let (header, rows) = table(&text);
    let at = |name: &str| header.iter().position(|h| h == name).unwrap();
    let (deck, flags) = (at("deck (degC)"), at("flags"));
    let samples = rows.values().filter(|r| !r[deck].is_empty()).count();
    // one in 10 s over 480 s, both ends, less one unreadable and two missing
    assert_eq!(samples, 49 - 3);
    let count = |flag: &str| rows.values().filter(|r| r[flags].split(' ').any(|f| f == flag)).count();
    // README.md of the demo: times of the faults at 50 Hz, both ends included
    assert_eq!(count("rail_bend:unreadable"), 10);
    assert_eq!((count("rail_bend:missing"), count("hanger:missing")), (6, 6));
    assert_eq!(count("hanger:saturated"), 61 + 5);
    assert_eq!(count("air:open"), 201);
    assert_eq!(count("abutment:missing"), 151);
    assert_eq!(count("deck:unreadable"), 1);
    // 330 s and 360 s carry samples: 1499 rows between
    assert_eq!(count("deck:missing"), 1499);
    assert_eq!(count("girder_mid:missing"), 1499 + 5 + 26);
    assert_eq!(count("girder_top:missing"), 1499 + 51);
}

#[test]
fn mistakes_in_the_sheet_are_noticed() {
    let sheet = support::read("data/demo/footbridge.toml");
    for (right, mistaken, channel) in [
        ("leads = { wires = 3, each = \"1.85 ohm ± 5 %\" }\n", "", "girder_mid"),
        (", slope = \"0.9 %/100K\"", "", "girder_top"),
        ("each = \"0.62 ohm\"", "each = \"0 ohm\"", "rail_bend"),
        ("poisson = 0.3", "poisson = 0.285", "post"),
        ("open_loop_gain = 5e5", "open_loop_gain = 1e12", "hanger"),
        ("\"3610 K ± 0.5 %\"", "\"3650 K\"", "deck"),
        ("each = \"0.43 ohm\"", "each = \"0 ohm\"", "abutment"),
        ("expansion = {", "# expansion = {", "girder_mid"),
    ] {
        assert!(sheet.contains(right), "{right}");
        let (text, _) = converted(&sheet.replacen(right, mistaken, 1), true);
        let noticed = passed_over(&text);
        assert!(noticed.iter().any(|n| n.starts_with(channel)), "{mistaken}: {noticed:?}");
    }
}

#[test]
fn a_pipe_gives_the_same_bytes() {
    // a time window needs a file; rows do not
    let sheet = support::read("data/demo/footbridge.toml")
        .replace("from = \"2026-05-09T06:30:05.000Z\", to = \"2026-05-09T06:30:25.000Z\"", "rows = 1000");
    assert!(sheet.contains("rows = 1000"));
    let (file, pipe) = (converted(&sheet, true), converted(&sheet, false));
    assert!(file.0 == pipe.0);
    assert_eq!(file.1.zeros, pipe.1.zeros);
}

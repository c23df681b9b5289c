//! The uncertainty of every reading of a recording against that of each reading alone.

#![cfg(feature = "files")]

mod support;

use std::io::Read;

use ohmwright::chain::Word;
use ohmwright::measurement::{Column, Engine, EveryReading, Measurement, Propagation};
use ohmwright::recording::{CsvWriter, Options, Output, RecordingError, Rows, convert_with};
use ohmwright::sheet::Sheet;
use ohmwright::uncertainty::Coverage;
use support::report::Report;
use support::states::BENCH;

const P95: Coverage = Coverage::Probability(0.95);

/// Readings of row `i` that wander over their ranges, each in its own rhythm.
fn readings(measurement: &Measurement, i: usize) -> Vec<f64> {
    let swing = |period: f64, low: f64, high: f64| {
        let phase = (i as f64 / period).fract();
        low + (high - low) * (1.0 - (2.0 * phase - 1.0).abs())
    };
    measurement
        .inputs
        .iter()
        .map(|input| match input.to_string().as_str() {
            "a" => swing(7.3, -1.9, 2.0),
            "b" => swing(11.7, -0.55, 0.6),
            "c" => swing(5.1, 0.7, 0.9),
            "twin" => swing(8.9, -0.2, 1.3),
            "deck" => swing(29.0, 103.0, 112.0),
            "air" => swing(31.0, 0.95, 1.15),
            "code" => swing(13.0, -2_345_678.0, 2_345_678.0),
            "v" => swing(17.0, 2.45, 2.55),
            "twist" => swing(9.0, -1.1, 1.1),
            "cell" => swing(12.0, 0.0, 1.9),
            "hot" => swing(10.0, 0.5, 30.0),
            other => panic!("{other}"),
        })
        .collect()
}

fn blocks(measurement: &Measurement, rows: &[Vec<f64>], size: usize, mut each: impl FnMut(usize, &[f64])) {
    let mut engine = Engine::new(measurement).unwrap();
    let mut every = EveryReading::new(measurement, P95).unwrap();
    let (mut out, mut at) = (Vec::new(), 0);
    for chunk in rows.chunks(size) {
        let columns = (0..measurement.inputs.len())
            .map(|c| Column { values: chunk.iter().map(|r| r[c]).collect(), words: vec![Word::Good; chunk.len()] });
        engine.push((0..chunk.len()).map(|i| (at + i) as f64).collect(), columns.collect(), ());
        at += chunk.len();
    }
    engine.end();
    let mut row = 0;
    while let Some(block) = engine.pop() {
        for i in 0..block.rows() {
            every.row(&block, i, &mut out);
            each(row, &out);
            row += 1;
        }
    }
}

#[test]
fn every_reading_has_the_uncertainty_that_it_has_alone() {
    let measurement = Sheet::read("s.toml", BENCH).unwrap().measurement;
    let rows: Vec<Vec<f64>> = (0..3).map(|i| readings(&measurement, 5 * i)).collect();
    let mut report = Report::new("uncertainty of every reading");
    blocks(&measurement, &rows, 3, |row, out| {
        // alone: all states of this row, everything computed
        let states = support::states::of_row(&measurement, &rows[row]);
        for (i, channel) in measurement.channels.iter().enumerate() {
            let alone = Propagation::new(&measurement, &states, i).unwrap().budget(P95).unwrap().expanded.expanded;
            report.check("U", "", format!("{} row {row}", channel.name), alone, out[i], 1e-6 * alone);
        }
    });
    report.finish();
}

#[test]
fn no_figure_depends_on_the_rows_before() {
    let measurement = Sheet::read("s.toml", BENCH).unwrap().measurement;
    let rows: Vec<Vec<f64>> = (0..3).map(|i| readings(&measurement, i)).collect();
    let mut one = Vec::new();
    blocks(&measurement, &rows, 3, |_, out| one.push(out.to_vec()));
    let same = |a: &[f64], b: &[f64]| a.iter().zip(b).all(|(a, b)| a.to_bits() == b.to_bits());
    blocks(&measurement, &rows, 1, |row, out| assert!(same(out, &one[row]), "row {row}"));
    // from another row on
    blocks(&measurement, &rows[2..], 3, |row, out| assert!(same(out, &one[2 + row]), "row {row}"));
}

struct Text(&'static str);

impl Rows for Text {
    fn open(&mut self) -> Result<Box<dyn Read + '_>, RecordingError> {
        Ok(Box::new(self.0.as_bytes()))
    }
    fn name(&self) -> &str {
        "run.csv"
    }
    fn is_file(&self) -> bool {
        true
    }
}

fn table(sheet: &str, rows: &'static str, coverage: Coverage) -> String {
    let sheet = Sheet::read("s.toml", sheet).unwrap();
    let mut text = Vec::new();
    let mut out = CsvWriter::new(Output::to_writer(&mut text, "out"));
    let options = Options { uncertainty: Some(coverage), ..Options::default() };
    convert_with(&sheet.measurement, &sheet.layout, &sheet.keep, &mut Text(rows), &mut out, &options, &mut |_| {})
        .unwrap();
    out.finish().unwrap();
    String::from_utf8(text).unwrap()
}

/// By hand: near 0 °C a Pt100 has 0.39083 Ω/K (IEC 60751), so 0.1 Ω (standard) is 0.2559 K, times 1.96.
#[test]
fn columns_of_uncertainty() {
    let sheet = "[channel.t]\ncolumn = \"t\"\nreads = \"ohm\"\ndecimals = 1\nuncertainty = \"0.1 ohm (standard)\"\n\
                 platinum = { standard = \"IEC 60751\", r0 = \"100 ohm\" }\n\
                 [channel.plain]\ncolumn = \"p\"\nreads = \"V\"\n";
    let rows = "time,t,p\n0,100,1\n1,,2\n2,9999,3\n";
    assert_eq!(
        table(sheet, rows, P95),
        "time,t (degC),\"U t (degC, 95 %)\",plain (V),\"U plain (V, 95 %)\",flags\n\
         0,0.0,0.50,1,,\n1,,,2,,t:missing\n2,,,3,,t:open\n"
    );
    assert!(table(sheet, rows, Coverage::Factor(2.0)).contains("\"U t (degC, k = 2)\""));
    assert!(table(sheet, rows, Coverage::Factor(2.0)).contains("\n0,0.0,0.51,1,,\n"));
}

/// A slow thermometer beside fast strain: rows between its samples have an uncertainty too, and one that follows the line.
#[test]
fn rows_between_two_samples_of_a_temperature() {
    let sheet = "[channel.g]\ncolumn = \"g\"\nreads = \"mV/V\"\ngauge = { resistance = \"350 ohm\", gauge_factor = 2.0 }\n\
                 bridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }\n\
                 thermal_output = { coefficients = [0, 0, 1.0], in = \"degC\", gauge_factor = 2.0 }\n\
                 temperature = \"t\"\nzero = { at = \"0 mV/V\", temperature = \"0 degC ± 0 K\" }\n\
                 [channel.t]\ncolumn = \"t\"\nreads = \"degC\"\nuncertainty = \"0.1 K (standard)\"\n";
    let rows = "time,g,t\n0,0.1,10\n1,0.1,\n2,0.1,20\n";
    // by hand: de/dT = −2 T microstrain per kelvin, u = 0.1 K: U = 1.96 · 0.2 T = 3.9, 5.9 and 7.8
    let text = table(sheet, rows, P95);
    let found: Vec<&str> = text.lines().skip(1).map(|line| line.split(',').nth(2).unwrap()).collect();
    assert_eq!(found, ["3.9", "5.9", "7.8"], "{text}");
}

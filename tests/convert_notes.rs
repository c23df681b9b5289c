//! What a conversion must not keep to itself: zeros from other rows than one thinks, changes that never come, no time.
#![cfg(feature = "files")]

use std::io::Read;

use ohmwright::recording::{ConvertError, CsvWriter, Output, RecordingError, Rows, Summary, convert};
use ohmwright::sheet::Sheet;

struct Text(&'static str);

impl Rows for Text {
    fn open(&mut self) -> Result<Box<dyn Read + '_>, RecordingError> {
        Ok(Box::new(self.0.as_bytes()))
    }

    fn name(&self) -> &str {
        "r.csv"
    }

    fn is_file(&self) -> bool {
        true
    }
}

fn run(sheet: &str, recording: &'static str) -> Result<(String, Summary), ConvertError> {
    let sheet = Sheet::read("s.toml", sheet).unwrap_or_else(|e| panic!("{e}"));
    let mut bytes = Vec::new();
    let summary = {
        let mut out = CsvWriter::new(Output::to_writer(&mut bytes, "out"));
        let summary =
            convert(&sheet.measurement, &sheet.layout, &sheet.keep, &mut Text(recording), &mut out, &mut |_| {})?;
        out.finish().expect("a table");
        summary
    };
    Ok((String::from_utf8(bytes).expect("text"), summary))
}

const GAUGE: &str = "[channel.g]\ncolumn = \"y\"\nreads = \"mV/V\"\noutput = \"microstrain\"\ndecimals = 1\n\
    gauge = { resistance = \"350 ohm\", gauge_factor = 2.0 }\nbridge = { arms = [\"e\", \"-e\", \"0\", \"0\"] }\n";

#[test]
fn a_zero_that_a_change_states_is_read_from_that_moment_on() {
    // bending pair, F = 2: output/supply = e, so 1 mV/V = 1000 microstrain. Zero 0.5 mV/V first, 2.0 from t = 3 on: the
    // mean of the two rows there, not of the first two of the file. The last change goes on with that zero.
    let sheet = format!(
        "{GAUGE}zero = {{ rows = 2 }}\n[[channel.g.change]]\nfrom = \"3\"\nzero = {{ rows = 2 }}\n\
         [[channel.g.change]]\nfrom = \"6\"\ngauge = {{ gauge_factor = 4.0 }}\n"
    );
    let (table, summary) = run(&sheet, "time,y\n0,0.4\n1,0.6\n2,1.5\n3,1.9\n4,2.1\n5,3\n6,3\n").unwrap();
    let values: Vec<&str> = table.lines().skip(1).map(|l| l.split(',').nth(1).unwrap()).collect();
    assert_eq!(values, ["-100.0", "100.0", "1000.0", "-100.0", "100.0", "1000.0", "500.0"]);
    assert_eq!(
        summary.zeros,
        // that the last change goes on with it is not said again
        [
            "g: zero 0.500000 mV/V, mean of 2 readings in the first 2 rows",
            "g: zero 2.000000 mV/V, mean of 2 readings in the first 2 rows from 3 on",
        ]
    );
}

#[test]
fn a_zero_over_more_rows_than_there_are_is_told() {
    let (_, summary) = run(&format!("{GAUGE}zero = {{ rows = 100 }}\n"), "time,y\n0,0.4\n1,0.6\n2,\n").unwrap();
    let said = "g: zero 0.500000 mV/V, mean of 2 readings in the first 100 rows, of which the recording has only 3";
    assert_eq!(summary.zeros, [said]);
}

#[test]
fn a_zero_that_cannot_be_found_says_why() {
    let error = run(&format!("{GAUGE}zero = {{ rows = 3 }}\n"), "time,y\n0,\n1,x\n2,\n3,1\n").unwrap_err();
    assert!(
        error.to_string().ends_with("no reading in the first 3 rows can be converted (2 missing, 1 unreadable)"),
        "{error}"
    );
    let warm = format!(
        "{GAUGE}zero = {{ rows = 2 }}\nthermal_output = {{ coefficients = [0, 1], in = \"degC\", gauge_factor = 2.0 }}\n\
         temperature = \"t\"\n[channel.t]\ncolumn = \"t\"\nreads = \"degC\"\n"
    );
    let error = run(&warm, "time,y,t\n0,0.1,\n1,0.1,\n2,0.1,20\n").unwrap_err();
    assert!(error.to_string().contains("(2 rows, all without the temperature that the conversion needs)"), "{error}");
}

#[test]
fn changes_that_never_come_and_missing_time_are_told() {
    let sheet = format!("{GAUGE}[[channel.g.change]]\nfrom = \"9\"\ngauge = {{ gauge_factor = 4.0 }}\n");
    let (_, summary) = run(&sheet, "time,y\n0,0.4\n1,0.6\n").unwrap();
    assert_eq!(
        summary.remarks,
        ["s.toml:9:8: channel 'g': the change from 9 on begins after the last row (recording r.csv)"]
    );
    let (table, summary) = run(GAUGE, "x,y\n0.5,0.4\n1.5,0.6\n").unwrap();
    assert_eq!(
        summary.remarks,
        ["r.csv: no time column was found: recording.time names one, recording.interval stands in for one"]
    );
    assert!(table.starts_with("g (microstrain),flags\n400.0,\n"), "{table}");
}

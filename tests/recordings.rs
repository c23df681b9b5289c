//! Recordings as they come from site: each of tests/recordings (make.py writes them, and computes what must come out) and some
//! that are too large to keep. All failures are told at once. The table is the same for any size of blocks and pieces.
#![cfg(feature = "files")]

use std::fmt::Write;
use std::fs;
use std::io::{self, Read};
use std::num::NonZeroUsize;
use std::path::{Path, PathBuf};
use std::time::Instant;

use ohmwright::recording::{
    CsvWriter, Options, Output, RecordingError, Rows, convert_joined, convert_with, settle_zero_files,
};
use ohmwright::sheet::Sheet;
use ohmwright::uncertainty::Coverage;

/// A recording in memory that comes in pieces.
struct Memory {
    name: String,
    bytes: Vec<u8>,
    piece: usize,
}

struct Pieces<'a>(&'a [u8], usize);

impl Read for Pieces<'_> {
    fn read(&mut self, buffer: &mut [u8]) -> io::Result<usize> {
        let count = self.1.min(buffer.len()).min(self.0.len());
        let (now, later) = self.0.split_at(count);
        buffer[..count].copy_from_slice(now);
        self.0 = later;
        Ok(count)
    }
}

impl Rows for Memory {
    fn open(&mut self) -> Result<Box<dyn Read + '_>, RecordingError> {
        Ok(Box::new(Pieces(&self.bytes, self.piece)))
    }

    fn name(&self) -> &str {
        &self.name
    }

    fn is_file(&self) -> bool {
        true
    }
}

fn folder() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/recordings")
}

/// The table and what was said, or why there is none.
type Outcome = Result<(String, Vec<String>), String>;

fn run(sheet: &Sheet, parts: &[(&str, &[u8])], piece: usize, rows: Option<usize>, uncertainty: bool) -> Outcome {
    let mut files: Vec<Memory> =
        parts.iter().map(|(name, bytes)| Memory { name: (*name).into(), bytes: bytes.to_vec(), piece }).collect();
    let options = Options {
        uncertainty: uncertainty.then_some(Coverage::Probability(0.95)),
        rows: rows.and_then(NonZeroUsize::new),
    };
    let mut table = Vec::new();
    let mut out = CsvWriter::new(Output::to_writer(&mut table, "table"));
    let (measurement, layout, keep) = (&sheet.measurement, &sheet.layout, &sheet.keep);
    let mut open = |file: &str| {
        let bytes = fs::read(folder().join(file)).map_err(|e| RecordingError::from_io(file, "read", &e))?;
        Ok(Box::new(Memory { name: file.into(), bytes, piece }) as Box<dyn Rows>)
    };
    let (measurement, mut said) = settle_zero_files(measurement, layout, &mut open).map_err(|e| e.to_string())?;
    let summary = match files.as_mut_slice() {
        [only] => convert_with(&measurement, layout, keep, only, &mut out, &options, &mut |_| {}),
        several => {
            let mut parts: Vec<&mut dyn Rows> = several.iter_mut().map(|f| f as &mut dyn Rows).collect();
            convert_joined(&measurement, layout, keep, &mut parts, &mut out, &options, &mut |_| {})
        }
    }
    .map_err(|e| e.to_string())?;
    out.finish().map_err(|e| e.to_string())?;
    said.extend(summary.joins.into_iter().chain(summary.zeros).chain(summary.remarks));
    Ok((String::from_utf8(table).expect("a table is UTF-8"), said))
}

/// The same for several sizes of blocks and pieces, which must not matter.
fn convert(sheet: &Sheet, parts: &[(&str, &[u8])], uncertainty: bool) -> Outcome {
    let whole = run(sheet, parts, usize::MAX, None, uncertainty);
    for (piece, rows) in [(1, Some(1)), (7, Some(3)), (1 << 16, Some(2)), (3, None)] {
        assert_eq!(
            run(sheet, parts, piece, rows, uncertainty),
            whole,
            "{}: pieces of {piece}, blocks of {rows:?}",
            parts[0].0
        );
    }
    whole
}

#[test]
fn every_recording_gives_what_it_must() {
    let mut names: Vec<String> = fs::read_dir(folder())
        .unwrap()
        .filter_map(|entry| Some(entry.unwrap().file_name().to_str()?.strip_suffix(".toml")?.to_string()))
        .collect();
    names.sort();
    assert!(names.len() >= 70, "{} recordings", names.len());
    let read = |name: &str, what: &str| fs::read_to_string(folder().join(format!("{name}.{what}"))).ok();
    let mut failures = String::new();
    for name in &names {
        let file = format!("{name}.csv");
        let recording = fs::read(folder().join(&file)).unwrap();
        let text = read(name, "toml").unwrap();
        let outcome = match Sheet::read(&format!("{name}.toml"), &text) {
            Ok(sheet) => convert(&sheet, &[(&file, &recording)], text.starts_with("# uncertainty")),
            // the drawing below the first line is the sheet's own test
            Err(error) => Err(error.to_string().lines().next().unwrap_or_default().into()),
        };
        let (want, error) = (read(name, "want"), read(name, "error"));
        let mut fail = |what: &str, expected: &str, got: &str| {
            let _ = write!(failures, "{name}: {what}\n--- expected\n{expected}\n--- got\n{got}\n");
        };
        match (outcome, want, error) {
            (Ok((table, said)), Some(want), None) => {
                if table != want {
                    fail("another table", &want, &table);
                }
                for line in read(name, "notes").unwrap_or_default().lines().filter(|l| !said.iter().any(|s| s == l)) {
                    fail("not told", line, &said.join("\n"));
                }
            }
            (Err(got), None, Some(error)) => {
                // how much of a binary file is no text is not for this test
                let whole = !error.trim_end_matches('\n').ends_with(' ');
                let error = error.trim_end_matches('\n');
                if (whole && got != error) || !got.starts_with(error) {
                    fail("another error", error, &got);
                }
            }
            (Ok((table, _)), _, error) => fail("no error", &error.unwrap_or_default(), &table),
            (Err(got), want, _) => fail("an error", &want.unwrap_or_default(), &got),
        }
    }
    assert!(failures.is_empty(), "{failures}");
}

const CELL: &str = "[channel.cell]\ncolumn = \"load\"\nreads = \"mV/V\"\ndecimals = 4\ntransducer = { rated = \"2 mV/V\", capacity = \"50 kN\" }\n";

#[test]
fn a_line_of_a_million_characters() {
    let sheet = Sheet::read("s.toml", CELL).unwrap();
    let long = "x".repeat(1_000_000);
    // in a cell that nobody reads, and in one that is read
    let recording = format!("time,load,note\n0,0.0113,{long}\n1,{long},a\n2,-0.2371,b\n");
    let (table, said) = convert(&sheet, &[("long.csv", recording.as_bytes())], false).unwrap();
    assert_eq!(table, "time,cell (kN),flags\n0,0.2825,\n1,,cell:unreadable\n2,-5.9275,\n");
    assert_eq!(said, [format!("long.csv:3:2: value '{}': not a number", &long[..80])]);
}

#[test]
fn thousands_of_columns() {
    let columns = 5_000;
    let mut recording = String::from("time");
    for column in 0..columns {
        let _ = write!(recording, ",c{column}");
    }
    for row in 0..20 {
        let _ = write!(recording, "\n{row}");
        for column in 0..columns {
            let _ = write!(recording, ",{}.{:03}", row % 2, column % 1000);
        }
    }
    let sheet = |column: &str| Sheet::read("s.toml", &CELL.replace("load", column)).unwrap();
    let start = Instant::now();
    let (table, _) = run(&sheet("c4999"), &[("wide.csv", recording.as_bytes())], usize::MAX, None, false).unwrap();
    // 25 kN per mV/V: 0.999 mV/V and 1.999 mV/V by turns
    assert!(table.starts_with("time,cell (kN),flags\n0,24.9750,\n1,49.9750,\n2,24.9750,\n"), "{table}");
    let error = run(&sheet("c5000"), &[("wide.csv", recording.as_bytes())], usize::MAX, None, false).unwrap_err();
    assert_eq!(error, "wide.csv:1: value 'c5000': no column has this name; the nearest is 'c500'");
    // some 10 ms; quadratic work would take minutes
    assert!(start.elapsed().as_secs() < 20, "{:?}", start.elapsed());
}

/// Rows of a moment each, `step` seconds apart, and a load.
fn part(first: u32, step: u32, loads: &[f64]) -> String {
    let mut text = String::from("time,load\n");
    for (i, load) in loads.iter().enumerate() {
        let at = first + step * i as u32;
        let _ = writeln!(text, "2026-03-12T{:02}:{:02}:{:02}Z,{load}", at / 3600, at / 60 % 60, at % 60);
    }
    text
}

#[test]
fn joined_recordings_are_one() {
    let sheet = Sheet::read("s.toml", &format!("{CELL}zero = {{ rows = 3 }}\n")).unwrap();
    let (a, b, c) = (part(0, 1, &[0.1, 0.2]), part(2, 1, &[0.3, 0.4]), part(60, 1, &[0.5]));
    let b = b.replace("time,load", "load,time").lines().map(swapped).collect::<Vec<_>>().join("\n");
    // in the order of their time; another order of columns; one zero over the first join, 0.2 mV/V; a file without rows
    let parts = [("c.csv", c.as_bytes()), ("a.csv", a.as_bytes()), ("b.csv", b.as_bytes())];
    let (table, said) = convert(&sheet, &parts, false).unwrap();
    let numbers: Vec<&str> = table.lines().skip(1).filter_map(|l| l.split(',').nth(1)).collect();
    assert_eq!(numbers, ["-2.5000", "0.0000", "2.5000", "5.0000", "7.5000"]);
    assert_eq!(
        said,
        [
            "b.csv: follows a.csv without a gap, 1 s later",
            "c.csv: follows b.csv after a gap of 57 s (rows were 1 s apart)",
            "cell: zero 0.200000 mV/V, mean of 3 readings in the first 3 rows",
        ]
    );
    let late = part(1, 1, &[0.7, 0.8]);
    let (table, said) = convert(&sheet, &[("a.csv", a.as_bytes()), ("late.csv", late.as_bytes())], false).unwrap();
    assert_eq!(table.lines().count(), 5, "no row is dropped: {table}");
    assert_eq!(said[0], "late.csv: begins at the moment at which a.csv ends");
    let overlap = part(0, 1, &[0.7, 0.8, 0.9]);
    let (_, said) = convert(&sheet, &[("a.csv", a.as_bytes()), ("over.csv", overlap.as_bytes())], false).unwrap();
    assert_eq!(said[0], "over.csv: overlaps a.csv by 1 s: its rows stand behind, none is left out");
    assert_eq!(
        convert(&sheet, &[("a.csv", a.as_bytes()), ("x.csv", b"time,laod\n2026-03-12T00:00:05Z,1\n")], false)
            .unwrap_err(),
        "x.csv:1: value 'load': no column has this name; the nearest is 'laod'"
    );
}

#[test]
fn a_join_within_the_hour_that_comes_twice() {
    let sheet = Sheet::read("s.toml", &format!("[recording]\ntime_zone = \"Europe/Berlin\"\n{CELL}")).unwrap();
    let a = b"time,load\n2026-10-25 02:59:40,0.1\n2026-10-25 02:59:50,0.2\n";
    let b = b"time,load\n2026-10-25 02:00:00,0.3\n2026-10-25 02:00:10,0.4\n";
    // by itself b begins in the first pass, and before a; behind a that went on before it, it is the second
    let before = b"time,load\n2026-10-25 01:59:50,0\n2026-10-25 02:30:00,0\n";
    let (_, said) = convert(&sheet, &[("a.csv", a), ("b.csv", b)], false).unwrap();
    assert_eq!(said[0], "a.csv: follows b.csv after a gap of 3570 s (rows were 10 s apart)");
    let (_, said) = convert(&sheet, &[("before.csv", before), ("b.csv", b)], false).unwrap();
    assert_eq!(said[0], "b.csv: follows before.csv without a gap, 1800 s later");
    assert!(
        said.iter().any(|s| s.starts_with("b.csv:2:1: value '2026-10-25 02:00:00': the clock showed it twice")
            && s.contains("0 placed in the first pass and 2 in the second")),
        "{said:?}"
    );
}

#[test]
fn recordings_of_the_night_in_which_the_clock_is_set_back() {
    let sheet = |more: &str| {
        let text = format!("[recording]\ntime_zone = \"Europe/Berlin\"\n{more}{CELL}");
        Sheet::read("s.toml", &text).unwrap()
    };
    // from 01:50 CEST to 03:10 CET, a row every 5 min, in three recordings that begin at 01:50, 02:45 (the first pass) and 02:35
    // (the second): the last two could not be told apart by their first moments
    let clock: Vec<String> = (0..29)
        .map(|i| 110 + 5 * i)
        .map(|m| if m < 180 { m } else { m - 60 })
        .map(|m| format!("2026-10-25 {:02}:{:02}:00", m / 60, m % 60))
        .collect();
    let rows = |range: std::ops::Range<usize>| {
        let rows: String = range.map(|i| format!("{},{}\n", clock[i], 0.01 * i as f64)).collect();
        format!("time,load\n{rows}")
    };
    let parts = [rows(0..11), rows(11..21), rows(21..29)];
    assert!(parts[1].contains("\n2026-10-25 02:45:00,") && parts[2].contains("\n2026-10-25 02:35:00,"));
    for more in ["", "repeated_hour = \"first\"\n", "repeated_hour = \"second\"\n"] {
        for order in [[0, 1, 2], [2, 1, 0], [1, 2, 0]] {
            let names = ["a.csv", "b.csv", "c.csv"];
            let given: Vec<(&str, &[u8])> = order.iter().map(|&i| (names[i], parts[i].as_bytes())).collect();
            let (table, said) = convert(&sheet(more), &given, false).unwrap();
            let wanted: String =
                clock.iter().enumerate().map(|(i, t)| format!("{t},{:.4},\n", 0.25 * i as f64)).collect();
            assert_eq!(table, format!("time,cell (kN),flags\n{wanted}"), "{more}{order:?}");
            let joins: Vec<&String> = said.iter().filter(|s| s.contains("follows")).collect();
            assert_eq!(
                joins,
                ["b.csv: follows a.csv without a gap, 300 s later", "c.csv: follows b.csv without a gap, 300 s later"],
                "{more}{order:?}"
            );
            // 12 moments of each pass, none in doubt
            let twice = |first, second| format!("{first} placed in the first pass and {second} in the second");
            for (file, first, second) in [("a.csv", 9, 0), ("b.csv", 3, 7), ("c.csv", 0, 5)] {
                let wanted = twice(first, second);
                let told = said.iter().any(|s| s.starts_with(file) && s.contains(&wanted) && s.ends_with("goes on"));
                assert!(told, "{more}{order:?}: {wanted}: {said:?}");
            }
            // in the stated pass one of them would overlap another
            let moved = said.iter().filter(|s| s.contains(", in the second pass: in the other it would overlap a.csv"));
            assert_eq!(moved.count(), usize::from(!more.contains("second")), "{more}{order:?}: {said:?}");
            let own = said.iter().filter(|s| s.contains("in the first pass: in the other its time would step back"));
            assert_eq!(own.count(), usize::from(more.contains("second")), "{more}{order:?}: {said:?}");
        }
    }
    // by itself the last recording is what the sheet says
    for (more, first, second) in [("", 5, 0), ("repeated_hour = \"second\"\n", 0, 5)] {
        let (_, said) = convert(&sheet(more), &[("c.csv", parts[2].as_bytes())], false).unwrap();
        let (taken, other) = if first > 0 { ("first", "second") } else { ("second", "first") };
        assert_eq!(
            said,
            [format!(
                "c.csv:2:1: value '2026-10-25 02:35:00': the clock showed it twice, since it was set back; 5 rows from here on at such times, {first} placed in the first pass and {second} in the second, so that time goes on; no row before it tells its pass: the {taken} is taken, and recording.repeated_hour = \"{other}\" takes the {other}"
            )]
        );
    }
}

fn swapped(line: &str) -> String {
    match line.split_once(',') {
        Some((a, b)) if a != "load" => format!("{b},{a}"),
        _ => line.into(),
    }
}

#[test]
fn times_that_say_no_order_are_not_joined() {
    let sheet = Sheet::read("s.toml", CELL).unwrap();
    let join = |a: &str, b: &str| convert(&sheet, &[("a.csv", a.as_bytes()), ("b.csv", b.as_bytes())], false);
    // seconds that go on, in any order of files; seconds that begin anew
    let (table, said) = join("time,load\n2,0.3\n3,0.4\n", "time,load\n0,0.1\n1,0.2\n").unwrap();
    assert_eq!(table, "time,cell (kN),flags\n0,2.5000,\n1,5.0000,\n2,7.5000,\n3,10.0000,\n");
    assert_eq!(said, ["a.csv: follows b.csv without a gap, 1 s later"]);
    assert_eq!(
        join("time,load\n0,0.3\n3,0.4\n", "time,load\n0,0.1\n1,0.2\n").unwrap_err(),
        "b.csv: its time begins 3 s before a.csv ends, and counts from no common moment: recordings are joined where their time goes on from one to the next, or has a date"
    );
    assert_eq!(
        join("time,load\n10:00:00,0.3\n", "time,load\n11:00:00,0.1\n").unwrap_err(),
        "a.csv: its time has no date, so nobody can tell where it belongs: recordings are joined by moments with a date, or by seconds that go on"
    );
    assert_eq!(
        join("time,load\n2026-03-12 10:00:00,0.3\n", "time,load\n5,0.1\n").unwrap_err(),
        "b.csv: its time is of another kind than that of a.csv: they cannot be joined"
    );
    // an interval goes on from file to file, in the order given; civil moments count from one midnight
    let each = Sheet::read("s.toml", &format!("[recording]\ninterval = \"0.1 s\"\n{CELL}")).unwrap();
    let (table, _) = convert(&each, &[("b.csv", b"load\n0.3\n0.4\n"), ("a.csv", b"load\n0.1\n0.2\n")], false).unwrap();
    assert_eq!(table, "time (s),cell (kN),flags\n0,7.5000,\n0.1,10.0000,\n0.2,2.5000,\n0.3,5.0000,\n");
    let (_, said) = join("time,load\n2026-03-12 23:59:59,0.3\n", "time,load\n2026-03-13 00:00:01,0.1\n").unwrap();
    assert_eq!(said, ["b.csv: follows a.csv without a gap, 2 s later"]);
}

#[test]
fn side_channels_are_interpolated_across_joins() {
    // the deck is sampled in the first row of each file alone: 20 °C and 30 °C, 8 s apart
    let sheet = "[channel.g]\ncolumn = \"load\"\nreads = \"mV/V\"\noutput = \"microstrain\"\ndecimals = 2\n\
        gauge = { resistance = \"350 ohm\", gauge_factor = 2 }\nbridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }\n\
        thermal_output = { coefficients = [0, 10], in = \"degC\", gauge_factor = 2 }\ntemperature = \"deck\"\n\
        zero = { at = \"0 mV/V\", temperature = \"0 degC\" }\n[channel.deck]\ncolumn = \"deck\"\nreads = \"degC\"\nshow = false\n";
    let sheet = Sheet::read("s.toml", sheet).unwrap();
    let a = b"time,load,deck\n0,0,20\n2,0,\n4,0,\n";
    let b = b"time,load,deck\n8,0,30\n10,0,\n";
    let (table, _) = convert(&sheet, &[("a.csv", a), ("b.csv", b)], false).unwrap();
    // thermal output of 10 microstrain/K alone is taken off: e = -TO(T)
    assert_eq!(table, "time,g (microstrain),flags\n0,-200.00,\n2,-225.00,\n4,-250.00,\n8,-300.00,\n10,,g:missing\n");
}

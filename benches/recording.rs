//! Rows per second of a recording as text: reading ten numeric columns, and converting them, beside a plain loop that
//! splits the same bytes at commas and parses every cell.
//!
//! `read` gives numbers and words, `convert` a strain per column on top of that, as text again; both find the shape of the
//! file first. The sums of all numbers are compared before anything is timed.
#![allow(missing_docs, reason = "criterion's macros make undocumented functions")]

use std::fmt::Write;
use std::hint::black_box;
use std::io::Read;
use std::time::{Duration, Instant};

use criterion::{Criterion, SamplingMode, Throughput, criterion_group};
use ohmwright::chain::Word;
use ohmwright::recording::{Block, CsvWriter, Layout, Output, Reader, RecordingError, Rows, convert};
use ohmwright::sheet::Sheet;

const ROWS: usize = 20_000;
const COLUMNS: usize = 10;

/// A time column of 50 Hz and ten columns of mV/V with five decimals.
fn recording() -> String {
    let mut text = String::from("time");
    for column in 1..=COLUMNS {
        let _ = write!(text, ",CH{column:02}");
    }
    text.push('\n');
    for row in 0..ROWS {
        let _ = write!(text, "{:.2}", 0.02 * row as f64);
        for column in 0..COLUMNS {
            // scattered over ±1.5 mV/V, always the same
            let share = ((row * COLUMNS + column) as f64 * 0.618_033_988_749_894_9).fract();
            let _ = write!(text, ",{:.5}", 3.0 * share - 1.5);
        }
        text.push('\n');
    }
    text
}

fn sheet() -> Sheet {
    let mut text = String::from(
        "[common.gauge]\nreads = \"mV/V\"\noutput = \"microstrain\"\ndecimals = 1\n\
         gauge = { resistance = \"350 ohm\", gauge_factor = \"2.08\" }\nbridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }\n",
    );
    for column in 1..=COLUMNS {
        let _ = write!(text, "[channel.g{column}]\nlike = \"gauge\"\ncolumn = \"CH{column:02}\"\n");
    }
    Sheet::read("sheet.toml", &text).expect("a good sheet")
}

/// Every cell by the standard library, and their sum.
fn plain(text: &str) -> f64 {
    let mut sum = 0.0;
    for line in text.lines().skip(1) {
        for cell in line.split(',') {
            sum += cell.parse::<f64>().expect("a number");
        }
    }
    sum
}

/// Every cell by the reader, and their sum in the same order.
fn read(text: &str) -> f64 {
    let mut reader = Reader::new(text.as_bytes(), "run.csv", &Layout::default()).expect("a recording");
    let columns: Vec<usize> = (1..=COLUMNS).collect();
    reader.select(&columns, &[]).expect("the columns are there");
    let mut block = Block::new(4096);
    let mut sum = 0.0;
    while reader.next_block(&mut block).expect("no error") > 0 {
        for row in 0..block.rows() {
            sum += block.seconds[row];
            for column in &block.columns {
                debug_assert_eq!(column.words[row], Word::Good);
                sum += column.values[row];
            }
        }
    }
    sum
}

struct Text<'a>(&'a str);

impl Rows for Text<'_> {
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

/// The whole way: text in, strains as text out.
fn converted(sheet: &Sheet, text: &str) -> Vec<u8> {
    let mut table = Vec::new();
    let mut out = CsvWriter::new(Output::to_writer(&mut table, "table"));
    let summary = convert(&sheet.measurement, &sheet.layout, &sheet.keep, &mut Text(text), &mut out, &mut |_| {})
        .expect("no error");
    out.finish().expect("memory takes everything");
    assert_eq!((summary.rows, summary.flagged(&sheet.measurement)), (ROWS as u64, 0));
    table
}

/// Before anything is timed: the same numbers, and strains as the formula of one gauge has them.
fn check(sheet: &Sheet, text: &str) {
    assert_eq!(read(text).to_bits(), plain(text).to_bits());
    let table = String::from_utf8(converted(sheet, text)).expect("text");
    let cells = |line: Option<&str>| -> Vec<f64> {
        line.into_iter().flat_map(|l| l.split(',')).filter_map(|c| c.parse().ok()).collect()
    };
    for line in [1, 777, ROWS] {
        let (from, to) = (cells(text.lines().nth(line)), cells(table.lines().nth(line)));
        for column in 1..=COLUMNS {
            let y = from[column] * 1e-3;
            let strain = 4.0 * y / (1.0 - 2.0 * y) / 2.08 * 1e6;
            assert!((to[column] - strain).abs() <= 0.05 + 1e-6, "{} {strain}", to[column]);
        }
    }
}

fn recordings(c: &mut Criterion) {
    let (text, sheet) = (recording(), sheet());
    check(&sheet, &text);
    let mut group = c.benchmark_group("recording/ten_columns");
    group.sampling_mode(SamplingMode::Flat).sample_size(20).throughput(Throughput::Elements(ROWS as u64));
    group.bench_function("read/20000", |b| b.iter(|| read(black_box(&text))));
    group.bench_function("convert/20000", |b| b.iter(|| converted(&sheet, black_box(&text))));
    group.bench_function("plain/20000", |b| b.iter(|| plain(black_box(&text))));
    group.finish();
}

/// Shortest of several passes.
fn shortest<T>(mut pass: impl FnMut() -> T) -> Duration {
    let once = |_| {
        let start = Instant::now();
        black_box(pass());
        start.elapsed()
    };
    (0..30).map(once).min().unwrap_or_default()
}

fn table() {
    let (text, sheet) = (recording(), sheet());
    check(&sheet, &text);
    let plain = shortest(|| plain(black_box(&text)));
    println!("\n{ROWS} rows of a time and {COLUMNS} numbers, {} MB", text.len() as f64 / 1e6);
    let rows = [
        ("split and parse", plain),
        ("read", shortest(|| read(black_box(&text)))),
        ("convert", shortest(|| converted(&sheet, black_box(&text)))),
    ];
    for (name, time) in rows {
        let (seconds, base) = (time.as_secs_f64(), plain.as_secs_f64());
        println!(
            "  {name:<18}{:>10.0} rows/s{:>8.0} MB/s   {:.2} x the plain loop",
            ROWS as f64 / seconds,
            text.len() as f64 / 1e6 / seconds,
            seconds / base
        );
    }
}

criterion_group!(benches, recordings);

fn main() {
    // `cargo bench -- --test` runs every bench once: the checks, no figures
    let checking = std::env::args().any(|a| a == "--test");
    // OHMWRIGHT_TABLE alone leaves criterion out
    if std::env::var_os("OHMWRIGHT_TABLE").is_none() {
        benches();
        Criterion::default().configure_from_args().final_summary();
    }
    if !checking {
        table();
    }
}

//! A skeleton sheet for a recording: what its columns may be, each guess marked as one.

use std::collections::BTreeSet;
use std::fmt::Write as _;
use std::format;
use std::io::Read;
use std::string::{String, ToString};
use std::vec::Vec;

use super::reader::name_and_unit;
use super::{Block, Reader, RecordingError};
use crate::chain::Word;
use crate::sheet::Sheet;

/// Rows that guesses rest on.
const ROWS: usize = 20_000;
/// Readings with this share of cells or more are numbers.
const NUMBERS: f64 = 0.5;
/// Values that loggers write where there is none: nines, and the ends of integers.
const SENTINELS: [f64; 11] =
    [-999.0, -999.9, -9999.0, -9999.9, -99999.0, -999999.0, 9999.0, 99999.0, 999999.0, -32768.0, -2147483648.0];

/// What was seen of a column.
#[derive(Clone, Debug, Default)]
struct Seen {
    numbers: u64,
    texts: u64,
    blanks: u64,
    low: f64,
    high: f64,
    whole: bool,
    /// Rows with each of the sentinels.
    sentinels: [u64; SENTINELS.len()],
}

/// Returns a sheet to begin with: one channel for each column of numbers, with what the file says and with guesses marked as such.
///
/// It can be used as it is, and then passes every column with a known unit on as it stands; what sensor a column belongs to is
/// proposed in comments and decided by nobody but its reader. The first 20 000 rows are looked at.
///
/// # Errors
/// As [`Reader::next_block`].
pub fn start<R: Read>(reader: &mut Reader<R>, file: &str) -> Result<String, RecordingError> {
    let seen = look(reader)?;
    let mut out = String::new();
    let _ = writeln!(
        out,
        "# Begun from {file} by ohmwright {}. A line with \"guess\" was read off the figures: check it. What no file can say (gauge\n\
         # factors, wiring, supplies, zeros) stands in comments: fill it in, and take the # away.\n\ntitle = {}\n",
        env!("CARGO_PKG_VERSION"),
        quoted(title(file))
    );
    let times: Vec<usize> = reader.time_columns().to_vec();
    recording(&mut out, reader, &seen, &times);
    let mut used = BTreeSet::new();
    let mut open = 0;
    for (i, seen) in seen.iter().enumerate().filter(|(i, _)| !times.contains(i)) {
        if is_number(seen) {
            open += usize::from(!channel(&mut out, reader, i, seen, &mut used));
        }
    }
    if open > 0 {
        let _ = writeln!(
            out,
            "# {open} column{} without a unit {} left out above: state `reads`, and take the # away.",
            if open == 1 { "" } else { "s" },
            if open == 1 { "is" } else { "are" }
        );
    }
    Ok(out)
}

fn look<R: Read>(reader: &mut Reader<R>) -> Result<Vec<Seen>, RecordingError> {
    let all: Vec<usize> = (0..reader.names().len()).collect();
    reader.select(&all, &[])?;
    let new = Seen { low: f64::INFINITY, high: f64::NEG_INFINITY, whole: true, ..Seen::default() };
    let mut seen = std::vec![new; all.len()];
    let mut block = Block::new(2048);
    let mut rows = 0;
    while rows < ROWS {
        let read = reader.next_block(&mut block)?;
        if read == 0 {
            break;
        }
        rows += read;
        for (seen, column) in seen.iter_mut().zip(&block.columns) {
            for (value, word) in column.values.iter().zip(&column.words) {
                match word {
                    Word::Missing => seen.blanks += 1,
                    Word::Unreadable => seen.texts += 1,
                    _ if !value.is_finite() => seen.blanks += 1,
                    _ => {
                        seen.numbers += 1;
                        if let Some(k) = SENTINELS.iter().position(|s| s == value)
                            && let Some(count) = seen.sentinels.get_mut(k)
                        {
                            *count += 1;
                            continue;
                        }
                        (seen.low, seen.high) = (seen.low.min(*value), seen.high.max(*value));
                        seen.whole &= *value == libm::trunc(*value);
                    }
                }
            }
        }
    }
    Ok(seen)
}

fn is_number(seen: &Seen) -> bool {
    seen.numbers as f64 > NUMBERS * (seen.numbers + seen.texts) as f64
}

/// `[recording]`: what was found as comments, and what has to be stated.
fn recording<R: Read>(out: &mut String, reader: &Reader<R>, seen: &[Seen], times: &[usize]) {
    out.push_str("[recording]\n");
    for line in reader.findings().lines() {
        let _ = writeln!(out, "# {line}");
    }
    let name = |i: &usize| reader.names().get(*i).map_or_else(String::new, |n| quoted(n));
    match times {
        [] => out.push_str("# interval = \"0.02 s\"     # from row to row: no time column was found\n"),
        [one] => {
            let _ = writeln!(out, "time = {}", name(one));
        }
        several => {
            let all: Vec<String> = several.iter().map(name).collect();
            let _ = writeln!(out, "time = [{}]", all.join(", "));
        }
    }
    let sentinels: Vec<String> = SENTINELS
        .iter()
        .enumerate()
        .filter(|(k, s)| {
            // one that stands far outside everything else
            seen.iter().any(|c| {
                let count = c.sentinels.get(*k).copied().unwrap_or(0);
                let span = (c.high - c.low).max(1e-9);
                count > 0 && is_number(c) && c.high >= c.low && (**s > c.high + 3.0 * span || **s < c.low - 3.0 * span)
            })
        })
        .map(|(_, s)| quoted(&s.to_string()))
        .collect();
    if !sentinels.is_empty() {
        let _ = writeln!(out, "missing = [{}]     # guess: stands far outside everything else", sentinels.join(", "));
    }
    let texts: Vec<String> = (0..seen.len())
        .filter(|i| !times.contains(i) && seen.get(*i).is_some_and(|s| s.texts > 0 && !is_number(s)))
        .map(|i| name(&i))
        .collect();
    if !texts.is_empty() {
        let _ = writeln!(out, "keep = [{}]     # texts, copied through", texts.join(", "));
    }
    out.push('\n');
}

/// One channel; false where its unit is not known and all of it stands in comments.
fn channel<R: Read>(out: &mut String, reader: &Reader<R>, i: usize, seen: &Seen, used: &mut BTreeSet<String>) -> bool {
    let header = reader.names().get(i).map_or("", String::as_str);
    let bare = name_and_unit(header).map_or(header, |(name, _)| name);
    let ambiguous = reader.names().iter().filter(|n| *n == header).count() > 1;
    let column = if reader.findings().names_line.0 == 0 || header.is_empty() || ambiguous {
        (i + 1).to_string()
    } else {
        quoted(header)
    };
    // what a name of a channel cannot hold, since flags and --with are made of it
    let cannot = |c: char| c.is_whitespace() || c.is_control() || ":,\"'`=".contains(c);
    let mut name = bare.trim().replace(cannot, "_");
    if name.is_empty() || ambiguous {
        name = format!("column_{}", i + 1);
    }
    while !used.insert(name.clone()) {
        name.push('_');
    }
    let written = reader.unit(i).filter(|unit| reads(unit).is_some());
    let guess = if written.is_some() { None } else { guessed(bare, seen) };
    let unit = written.map(str::to_string).or_else(|| guess.as_ref().map(|(unit, _)| (*unit).to_string()));
    let range = if seen.high >= seen.low {
        format!("{} to {}", figure(seen.low), figure(seen.high))
    } else {
        "no values".into()
    };
    let mark = if unit.is_some() { "" } else { "# " };
    let _ = writeln!(out, "{mark}[channel.{}]", key(&name));
    let _ = writeln!(out, "{mark}column = {column}     # {range}{}", odd(seen));
    match (&unit, written, &guess) {
        (Some(unit), Some(_), _) => {
            let _ = writeln!(out, "reads = {}     # as the file says", quoted(unit));
        }
        (Some(unit), None, Some((_, why))) => {
            let _ = writeln!(out, "reads = {}     # guess: {why}", quoted(unit));
        }
        _ => {
            let said =
                reader.unit(i).map_or_else(String::new, |u| format!("; the file says '{u}', which no sheet knows"));
            let _ = writeln!(out, "# reads = \"?\"     # V, mV, mV/V, ohm, mA, count, or the unit of a result{said}");
        }
    }
    proposals(out, unit.as_deref().and_then(reads).as_deref(), seen);
    out.push('\n');
    unit.is_some()
}

fn odd(seen: &Seen) -> String {
    let mut out = String::new();
    for (count, what) in [(seen.texts, "with text"), (seen.blanks, "blank")] {
        if count > 0 {
            let _ = write!(out, ", {count} {what}");
        }
    }
    out
}

/// A unit by the name and the values, and why.
fn guessed(name: &str, seen: &Seen) -> Option<(&'static str, &'static str)> {
    let lower = name.to_lowercase();
    let within = |low: f64, high: f64| seen.low >= low && seen.high <= high && seen.high >= seen.low;
    let word = |all: &[&str]| all.iter().any(|w| lower.contains(w));
    if word(&["temp", "degc"]) && within(-273.15, 2000.0) {
        return Some(("degC", "by its name"));
    }
    if word(&["microstrain", "strain", "eps"]) && within(-1e5, 1e5) {
        return Some(("microstrain", "by its name"));
    }
    if word(&["ohm", "pt100", "pt1000", "resist"]) && within(0.0, 1e9) {
        return Some(("ohm", "by its name"));
    }
    if word(&["adc", "raw", "code", "count"]) && seen.whole {
        return Some(("count", "by its name, and whole numbers"));
    }
    if word(&["supply", "excit", "v_ex", "volt"]) && within(-50.0, 50.0) {
        return Some(("V", "by its name"));
    }
    if seen.whole && seen.high - seen.low > 200.0 {
        return Some(("count", "whole numbers over a wide span"));
    }
    None
}

/// What the column may be, in comments.
fn proposals(out: &mut String, unit: Option<&str>, seen: &Seen) {
    let small = seen.high.abs().max(seen.low.abs()) < 20.0;
    match unit.unwrap_or_default() {
        "V/V" | "mV/V" | "uV/V" => {
            gauge(out, "");
            out.push_str(
                "# a transducer: output = \"kN\"; transducer = { rated = \"2.0 mV/V\", capacity = \"50 kN\" }\n",
            );
        }
        "V" | "mV" | "uV" | "nV" => {
            gauge(out, ", supply = \"2.5 V\"");
            if small {
                out.push_str(
                    "# a thermocouple: output = \"degC\"; thermocouple = { type = \"K\", reference = \"name of a channel in degC\" }\n",
                );
            }
        }
        "ohm" | "kohm" | "mohm" => {
            let near = |nominal: f64| {
                // IEC 60751 from −50 °C to 250 °C: 0.8 R0 to 1.95 R0
                seen.low > 0.8 * nominal && seen.high < 1.95 * nominal
            };
            let r0 = if near(1000.0) { "1000 ohm" } else { "100 ohm" };
            let hint = if near(100.0) || near(1000.0) { "guess by the values: " } else { "" };
            let _ = writeln!(
                out,
                "# {hint}a platinum thermometer: output = \"degC\"; platinum = {{ standard = \"IEC 60751\", r0 = \"{r0}\" }}; leads = {{ wires = 4 }}\n\
                 # a thermistor: output = \"degC\"; thermistor = {{ r25 = \"10 kohm\", beta = \"3950 K\" }}"
            );
        }
        "count" => {
            out.push_str(
                "# converter = { bits = 24, full_scale = \"±2.5 V\", coding = \"signed\" }; amplifier = { gain = 1 }\n",
            );
            gauge(out, ", supply = \"2.5 V\"");
        }
        "mA" | "A" | "uA" => out.push_str("# see the README for what reads a current\n"),
        _ => {}
    }
}

fn gauge(out: &mut String, supply: &str) {
    let _ = writeln!(
        out,
        "# a strain gauge: output = \"microstrain\"; gauge = {{ resistance = \"350 ohm\", gauge_factor = \"2.08 ± 1 %\" }}\n\
         #   bridge = {{ arms = [\"e\", \"0\", \"0\", \"0\"]{supply} }}; leads = {{ wires = 3, each = \"0.5 ohm\" }}; zero = {{ rows = 100 }}"
    );
}

/// A unit of readings as a sheet prints it; `None` for one that it does not take.
fn reads(unit: &str) -> Option<String> {
    let sheet = Sheet::read("", &format!("[channel.x]\ncolumn = 1\nreads = {}\n", quoted(unit))).ok()?;
    sheet.measurement.channels.first().map(|c| c.unit.clone())
}

fn quoted(text: &str) -> String {
    toml::Value::String(text.into()).to_string()
}

/// A key of TOML, quoted where it must be.
fn key(name: &str) -> String {
    let plain = !name.is_empty() && name.chars().all(|c| c.is_ascii_alphanumeric() || c == '_' || c == '-');
    if plain { name.into() } else { quoted(name) }
}

fn figure(value: f64) -> String {
    super::NumberText(value, super::Digits::Shortest).to_string()
}

/// The name of the file without folder and ending.
fn title(file: &str) -> &str {
    let name = file.rsplit(['/', '\\']).next().unwrap_or(file);
    name.split('.').next().filter(|n| !n.is_empty()).unwrap_or(name)
}

//! `table`: a standard's table, or a table at a channel's values.

mod bridge;
mod temperature;

use ohmwright::recording::{CsvWriter, Digits, Output};

use crate::args::Table;
use crate::failure::Failure;
use crate::files;
use crate::side::{Alone, single};

/// Most lines of a table.
const MOST: usize = 100_000;

/// What a table of a channel can be about.
const SUBJECTS: [&str; 4] = ["shunts", "leads", "nonlinearity", "temperatures"];

pub(crate) fn run(args: &Table) -> Result<(), Failure> {
    let subject = match args.subject.as_str() {
        "shunts" => Some(bridge::Subject::Shunts),
        "leads" => Some(bridge::Subject::Leads),
        "nonlinearity" => Some(bridge::Subject::Nonlinearity),
        _ => None,
    };
    let rows = if subject.is_some() || args.subject == "temperatures" {
        let (Some(sheet), Some(name)) = (&args.sheet, &args.channel) else {
            return Err(Failure::error(format!("table {}: name a sheet and a channel of it", args.subject)));
        };
        let sheet = files::sheet(sheet)?;
        let index = single(&sheet, name)?;
        let alone = Alone::new(&sheet, index, &args.with)?;
        match subject {
            Some(subject) => bridge::rows(args, subject, (sheet, index, alone))?,
            None => temperature::of_channel(args, &sheet, index, &alone)?,
        }
    } else {
        if let Some(sheet) = &args.sheet {
            return Err(Failure::error(format!(
                "table '{}' takes no sheet ('{}'): a table of a channel is shunts, leads, nonlinearity or temperatures",
                args.subject,
                sheet.display()
            )));
        }
        temperature::of_standard(args)?
    };
    // the whole table or nothing
    let mut out = CsvWriter::new(Output::stdout());
    for row in rows {
        for cell in row {
            match cell {
                Cell::Text(text) => out.text(&text),
                Cell::Exact(value) => out.number(value, Digits::Shortest),
                Cell::Fixed(value, decimals) => out.number(value, Digits::Fixed(decimals)),
                Cell::Blank => out.blank(),
            };
        }
        out.end_row()?;
    }
    out.finish()?;
    Ok(())
}

enum Cell {
    Text(String),
    Exact(f64),
    Fixed(f64, u8),
    Blank,
}

fn header(names: &[String]) -> Vec<Cell> {
    names.iter().cloned().map(Cell::Text).collect()
}

/// Twelve significant digits of a number that was computed.
fn rounded(value: f64) -> f64 {
    format!("{value:.11e}").parse().unwrap_or(value)
}

/// Six significant digits.
fn six(value: f64) -> Cell {
    Cell::Exact(format!("{value:.5e}").parse().unwrap_or(value))
}

/// The lines from `from` to `to`; each is a whole number of steps from the first.
fn lines([from, to, step]: [f64; 3]) -> Result<Vec<f64>, Failure> {
    if !(from.is_finite() && to.is_finite() && step.is_finite()) || step == 0.0 || (to - from) / step < 0.0 {
        return Err(Failure::error(format!(
            "no line from {} to {} in steps of {}: check --from, --to and --step",
            rounded(from),
            rounded(to),
            rounded(step)
        )));
    }
    let count = ((to - from) / step + 1e-9).floor();
    if count >= MOST as f64 {
        return Err(Failure::error(format!("--step is too small: more than {MOST} lines")));
    }
    // what is left of a line at zero is rounding
    let line = |i: usize| from + step * i as f64;
    let line = |i| if line(i).abs() < 1e-9 * step.abs() { 0.0 } else { rounded(line(i)) };
    Ok((0..=count as usize).map(line).collect())
}

/// Reads what was typed, or takes the default.
fn typed<const N: usize>(
    texts: [&Option<String>; N],
    default: [f64; N],
    read: impl Fn(&str) -> Result<f64, String>,
) -> Result<[f64; N], Failure> {
    let mut out = default;
    for (slot, text) in out.iter_mut().zip(texts) {
        if let Some(text) = text {
            *slot = read(text).map_err(Failure::error)?;
        }
    }
    Ok(out)
}

//! What became of a recording, in words.

use std::io::Write;

use ohmwright::chain::Word;
use ohmwright::measurement::Measurement;
use ohmwright::recording::{Digits, NumberText, Summary};

/// Writes the summary of one conversion.
pub(super) fn write_summary(
    err: &mut impl Write,
    name: &str,
    measurement: &Measurement,
    summary: &Summary,
) -> std::io::Result<()> {
    let shape = |line: &&String| ["separator", "time from"].iter().any(|head| line.starts_with(head));
    let found: Vec<&str> = summary.layout.iter().filter(shape).map(String::as_str).collect();
    if !found.is_empty() {
        writeln!(err, "{name}: {}", found.join("; "))?;
    }
    for remark in &summary.remarks {
        writeln!(err, "{remark}")?;
    }
    for join in &summary.joins {
        writeln!(err, "{join}")?;
    }
    for zero in &summary.zeros {
        writeln!(err, "{zero}")?;
    }
    for shunt in &summary.shunts {
        writeln!(err, "{shunt}")?;
    }
    let seconds = summary.elapsed.as_secs_f64();
    let rate = if seconds >= 0.1 { format!(", {:.0} rows/s", summary.rows as f64 / seconds) } else { String::new() };
    let rows = if summary.rows == 1 { "row" } else { "rows" };
    writeln!(err, "{name}: {} {rows} in {seconds:.2} s{rate}", summary.rows)?;
    let width = measurement.channels.iter().map(|c| c.name.chars().count()).max().unwrap_or(0);
    for (channel, figures) in measurement.channels.iter().zip(&summary.channels).filter(|(c, _)| c.show) {
        let values = if figures.count() == 1 { "value" } else { "values" };
        write!(err, "  {:width$}  {} {values}", channel.name, figures.count())?;
        if figures.count() > 0 {
            let digits = Digits::Fixed(channel.decimals.unwrap_or_else(|| decimals(figures.min, figures.max)));
            write!(
                err,
                ", min {}, mean {}, max {} {}",
                NumberText(figures.min, digits),
                NumberText(figures.mean(), digits),
                NumberText(figures.max, digits),
                channel.unit
            )?;
        }
        for word in Word::ALL.into_iter().skip(1) {
            let count = figures.words.get(word as usize).copied().unwrap_or(0);
            if count > 0 {
                write!(err, "; {count} {word}")?;
            }
        }
        if figures.between > 0 {
            let rows = if figures.between == 1 { "row" } else { "rows" };
            write!(err, "; {} {rows} between samples", figures.between)?;
        }
        writeln!(err)?;
    }
    Ok(())
}

/// Decimals that show five digits of the largest figure, and three at least.
fn decimals(min: f64, max: f64) -> u8 {
    let mut largest = min.abs().max(max.abs());
    let mut decimals = 0;
    while largest > 0.0 && largest < 1e4 && decimals < 17 {
        largest *= 10.0;
        decimals += 1;
    }
    decimals.max(3)
}

//! `convert`: a recording into a table.

use std::io::{IsTerminal, Write};
use std::sync::atomic::Ordering;

use indicatif::{ProgressBar, ProgressStyle};
use ohmwright::chain::Word;
use ohmwright::measurement::Measurement;
use ohmwright::recording::{ConvertError, CsvWriter, Digits, NumberText, Options, Output, Rows, Summary, convert_with};
use ohmwright::uncertainty::Coverage;

use crate::args::Convert;
use crate::failure::Failure;
use crate::files::{self, Source};

pub(crate) fn run(args: &Convert) -> Result<(), Failure> {
    let coverage = args.uncertainty.then(|| Coverage::Probability(args.coverage.unwrap_or(0.95)));
    if let Some(p) = args.coverage.filter(|p| !(*p > 0.0 && *p < 1.0)) {
        return Err(Failure::error(format!("--coverage {p}: expected a probability above 0 and below 1, as in 0.95")));
    }
    let sheet = files::sheet(&args.sheet).map_err(|failure| {
        if args.recording.extension().is_some_and(|e| e == "toml") {
            return Failure::error(format!("{failure}\nthe sheet comes first, then the recording"));
        }
        failure
    })?;
    let mut source = Source::new(&args.recording);
    let name = source.name().to_string();
    let target = args.output.as_ref().filter(|path| path.as_os_str() != "-");
    if let Some(Ok(out)) = target.map(|path| path.canonicalize()) {
        for (input, what) in [(&args.recording, "recording"), (&args.sheet, "sheet")] {
            if input.canonicalize().is_ok_and(|input| input == out) {
                let input = input.display();
                return Err(Failure::error(format!(
                    "{input}: the result would replace the {what} itself; give another -o"
                )));
            }
        }
    }
    let output = match target {
        Some(path) => Output::to_path(path)?,
        None => Output::stdout(),
    };
    let mut writer = CsvWriter::new(output);

    let bar = bar(args, &source, target.is_some());
    let taken = std::sync::Arc::clone(&source.taken);
    let options = Options { uncertainty: coverage };
    let mut progress = |rows| {
        if let Some(bar) = &bar {
            bar.set_position(taken.load(Ordering::Relaxed));
            bar.set_message(format!("{rows} rows"));
        }
    };
    let summary =
        convert_with(&sheet.measurement, &sheet.layout, &sheet.keep, &mut source, &mut writer, &options, &mut progress)
            .map_err(|error| match error {
                // what is wrong with the channels is wrong in the sheet
                ConvertError::Measurement(error) => Failure::error(format!("{}: {error}", args.sheet.display())),
                error => error.into(),
            })?;
    writer.finish()?;
    if let Some(bar) = bar {
        bar.finish_and_clear();
    }
    if !args.quiet {
        let mut err = std::io::stderr().lock();
        // a summary that nobody can read is no reason to fail
        let _ = write_summary(&mut err, &name, &sheet.measurement, &summary);
    }
    let mut against = Vec::new();
    let flagged = summary.flagged(&sheet.measurement);
    if flagged > 0 {
        against.push(format!("{flagged} flagged {}", if flagged == 1 { "reading" } else { "readings" }));
    }
    let shunts = summary.shunts.iter().filter(|shunt| !shunt.agrees()).count();
    if shunts > 0 {
        against.push(format!(
            "{shunts} shunt {} or cannot be judged",
            if shunts == 1 { "step that disagrees" } else { "steps that disagree" }
        ));
    }
    if args.strict && !against.is_empty() {
        return Err(Failure::No(format!("{name}: {} (--strict)", against.join(", "))));
    }
    Ok(())
}

/// A progress bar, where there is a terminal to see it and results do not scroll over it.
fn bar(args: &Convert, source: &Source, with_file: bool) -> Option<ProgressBar> {
    let visible = !args.quiet && std::io::stderr().is_terminal() && (with_file || !std::io::stdout().is_terminal());
    let size = source.size().filter(|_| visible)?;
    let bar = ProgressBar::new(size);
    let style = ProgressStyle::with_template("{bar:30} {bytes}/{total_bytes} {msg} {eta}").ok()?;
    bar.set_style(style);
    Some(bar)
}

fn write_summary(
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

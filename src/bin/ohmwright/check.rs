//! `check`: are somebody else's results right, and if not, why?

use std::io::Write;
use std::path::{Path, PathBuf};
use std::sync::atomic::Ordering;

use indicatif::{ProgressBar, ProgressStyle};
use ohmwright::check::{MISTAKES, check};
use ohmwright::recording::{ConvertError, Rows};

use crate::args::Check;
use crate::failure::Failure;
use crate::files::{self, Source};

pub(crate) fn run(args: &Check) -> Result<(), Failure> {
    let mut out = std::io::stdout().lock();
    let (Some(path), Some(delivered)) = (&args.sheet, &args.delivered) else {
        return mistakes(&mut out);
    };
    let sheet = files::sheet(path)?;
    let mut source = Source::new(delivered);
    let bar = bar(args, &source);
    let taken = std::sync::Arc::clone(&source.taken);
    // a file that the sheet names stands beside the sheet
    let beside = path.parent().map(Path::to_path_buf).unwrap_or_default();
    let mut open = |name: &str| -> Result<Box<dyn Rows>, ConvertError> {
        let path: PathBuf = beside.join(name);
        Ok(Box::new(Source::new(&path)))
    };
    let report = check(&sheet, &mut source, &mut open, &mut |rows| {
        if let Some(bar) = &bar {
            bar.set_position(taken.load(Ordering::Relaxed));
            bar.set_message(format!("{rows} rows"));
        }
    })
    .map_err(|error| match error {
        // what is wrong with the channels is wrong in the sheet
        ConvertError::Measurement(error) if error.place().is_none() => {
            Failure::error(format!("{}: {error}", path.display()))
        }
        error => error.into(),
    })?;
    if let Some(bar) = bar {
        bar.finish_and_clear();
    }
    if !args.quiet {
        let mut err = std::io::stderr().lock();
        for line in report.remarks.iter().chain(&report.zeros) {
            // a remark that nobody can read is no reason to fail
            let _ = writeln!(err, "{line}");
        }
    }
    if args.json {
        writeln!(out, "{}", report.json())?
    } else {
        write!(out, "{report}")?
    }
    match report.code() {
        0 => Ok(()),
        1 => Err(Failure::No(String::new())),
        _ => Err(Failure::CannotTell),
    }
}

/// A progress bar, where there is a terminal to see it.
fn bar(args: &Check, source: &Source) -> Option<ProgressBar> {
    use std::io::IsTerminal;
    let size = source.size().filter(|_| !args.quiet && std::io::stderr().is_terminal())?;
    let bar = ProgressBar::new(size);
    bar.set_style(ProgressStyle::with_template("{bar:30} {bytes}/{total_bytes} {msg}").ok()?);
    Some(bar)
}

fn mistakes(out: &mut impl Write) -> Result<(), Failure> {
    for m in MISTAKES {
        writeln!(out, "{} ({})", m.id, m.stage)?;
        writeln!(out, "  {}", m.what)?;
        if m.parameter != "-" {
            writeln!(out, "  parameter: {}", m.parameter)?;
        }
        if m.sign != "-" {
            writeln!(out, "  shows as: {}", m.sign)?;
        }
        if m.not_for != "-" {
            writeln!(out, "  not tried for: {}", m.not_for)?;
        }
        writeln!(out, "  to be sure: {}", m.ask)?;
    }
    Ok(())
}

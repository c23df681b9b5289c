//! `convert`: recordings into tables.

mod against;
mod many;
mod summary;
mod trace;
pub(crate) mod writer;

use std::io::IsTerminal;
use std::path::{Path, PathBuf};
use std::sync::atomic::Ordering;

use indicatif::{ProgressBar, ProgressStyle};
use ohmwright::recording::{
    ConvertError, Options, Output, RecordingError, ResultTable, Rows, Summary, Undone, convert_joined, convert_with,
};
use ohmwright::sheet::Sheet;
use ohmwright::uncertainty::Coverage;

use crate::args::Convert;
use crate::failure::Failure;
use crate::files::{self, Source};
use crate::trace::{beside, has_trace, keep};
use writer::Writer;

pub(crate) fn run(args: &Convert) -> Result<(), Failure> {
    let coverage = args.uncertainty.then(|| Coverage::Probability(args.coverage.unwrap_or(0.95)));
    if let Some(p) = args.coverage.filter(|p| !(*p > 0.0 && *p < 1.0)) {
        return Err(Failure::error(format!("--coverage {p}: expected a probability above 0 and below 1, as in 0.95")));
    }
    let recordings = many::recordings(args)?;
    let (sheet, beside) = files::sheet_and_files(&args.sheet).map_err(|failure| {
        if recordings.first().is_some_and(|r| r.extension().is_some_and(|e| e == "toml")) {
            return Failure::error(format!("{failure}\nthe sheet comes first, then the recording"));
        }
        failure
    })?;
    if !args.quiet {
        for note in &sheet.notes {
            crate::side::tell(note);
        }
    }
    let options = Options { uncertainty: coverage, ..Options::default() };
    let earlier = match &args.undo {
        Some(path) => Some((path.clone(), files::sheet(path)?)),
        None => None,
    };
    if let Some((path, _)) = earlier.as_ref().filter(|_| !args.quiet) {
        tell_other_sheets(path, &recordings)?;
    }
    let job = Job { args, sheet: &sheet, beside: &beside, earlier, options };
    if args.follow && recordings.first().is_some_and(|r| r.as_os_str() == "-") {
        return Err(Failure::error(
            "--follow is for a file: a pipe is read to its end anyway, and every row written at once",
        ));
    }
    if args.against.is_some() && args.into.is_none() && args.output.as_deref().is_none_or(|o| o.as_os_str() == "-") {
        return Err(Failure::error("--against compares a result that is written to a file: give -o OUT or --into DIR"));
    }
    if let Some(directory) = &args.into {
        return many::into_directory(&job, &recordings, directory);
    }
    if let [_, second, ..] = recordings.as_slice()
        && !args.join
    {
        return Err(Failure::error(format!(
            "{}: a second recording; --into DIR makes a table of each, --join -o OUT one of all",
            second.display()
        )));
    }
    let target = args.output.as_deref().filter(|path| path.as_os_str() != "-");
    job.convert(&recordings, target)
}

/// Says which results were made by another sheet than the one that is to undo them, by the traces beside them.
fn tell_other_sheets(earlier: &Path, results: &[PathBuf]) -> Result<(), Failure> {
    let sheet = files::fingerprint(earlier)?;
    for result in results {
        let beside = beside(result);
        let Ok(text) = std::fs::read_to_string(&beside) else { continue };
        let Ok(trace) = ohmwright::recording::Trace::read(&beside.display().to_string(), &text) else { continue };
        if trace.sheet.fingerprint != sheet {
            crate::side::tell(&format!(
                "{}: its trace says that it was made by {} as it was then, which {} is not, or not any more",
                result.display(),
                trace.sheet.file,
                earlier.display()
            ));
        }
    }
    Ok(())
}

/// What all tables of one call have in common.
struct Job<'a> {
    args: &'a Convert,
    sheet: &'a Sheet,
    /// Files that the sheet names.
    beside: &'a [PathBuf],
    /// The sheet that the recordings were converted by before, with its path.
    earlier: Option<(PathBuf, Sheet)>,
    options: Options,
}

impl Job<'_> {
    /// Makes one table of these recordings, of which there are several only where they are joined.
    fn convert(&self, recordings: &[PathBuf], target: Option<&Path>) -> Result<(), Failure> {
        let (args, sheet) = (self.args, self.sheet);
        if let Some(path) = target {
            let mut inputs: Vec<_> = recordings.iter().map(|r| (r.as_path(), "recording")).collect();
            inputs.push((&args.sheet, "sheet"));
            inputs.extend(args.undo.iter().map(|e| (e.as_path(), "earlier sheet")));
            keep(path, &inputs)?;
        }
        let compared = match (&args.against, target) {
            (Some(earlier), Some(path)) => Some(against::earlier_of(earlier, path)?),
            _ => None,
        };
        let traced = target.filter(|path| has_trace(path));
        let new = |path: &PathBuf| match (traced, args.follow) {
            (Some(_), _) => Source::new(path).with_fingerprint(),
            (None, true) => Source::new(path).followed(),
            (None, false) => Source::new(path),
        };
        let sources: Vec<Source> = recordings.iter().map(new).collect();
        let output = match target {
            Some(path) => Output::to_path(path)?.with_fingerprint(),
            None => Output::stdout(),
        };
        let mut writer = Writer::new(output, target, args.single, sheet, &args.sheet)?;
        let bar = bar(args, &sources, target.is_some());
        let taken: Vec<_> = sources.iter().map(|source| std::sync::Arc::clone(&source.taken)).collect();
        let mut progress = |rows| {
            if let Some(bar) = &bar {
                bar.set_position(taken.iter().map(|taken| taken.load(Ordering::Relaxed)).sum());
                bar.set_message(format!("{rows} rows"));
            }
        };
        let name = match sources.as_slice() {
            [only] => only.name().to_string(),
            several => format!("{} recordings", several.len()),
        };
        let earlier = self.earlier.as_ref().map(|(_, sheet)| sheet);
        let summary = run_over(sheet, &args.sheet, &sources, earlier, writer.table(), &self.options, &mut progress)?;
        let made = writer.finish()?;
        if let (Some(path), Some(made)) = (traced, made) {
            trace::write(self, path, made, recordings, &sources, &summary)?;
        }
        if let Some(bar) = bar {
            bar.finish_and_clear();
        }
        if !args.quiet {
            let mut err = std::io::stderr().lock();
            // a summary that nobody can read is no reason to fail
            let _ = summary::write_summary(&mut err, &name, &sheet.measurement, &summary);
        }
        if let (Some(earlier), Some(path)) = (&compared, target) {
            against::report(self, earlier, path)?;
        }
        self.judge(&name, &summary)
    }

    /// With `--strict` the answer is no where a reading is flagged or a shunt step is not as it should be.
    fn judge(&self, name: &str, summary: &Summary) -> Result<(), Failure> {
        let mut against = Vec::new();
        let flagged = summary.flagged(&self.sheet.measurement);
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
        if self.args.strict && !against.is_empty() {
            return Err(Failure::No(format!("{name}: {} (--strict)", against.join(", "))));
        }
        Ok(())
    }
}

/// Converts one recording, or several that are joined; where there is an earlier sheet, what it was made into by that.
pub(crate) fn run_over(
    sheet: &Sheet,
    sheet_path: &Path,
    sources: &[Source],
    earlier: Option<&Sheet>,
    writer: &mut dyn ResultTable,
    options: &Options,
    progress: &mut dyn FnMut(u64),
) -> Result<Summary, Failure> {
    let mut rows: Vec<Box<dyn Rows + '_>> = Vec::new();
    for source in sources {
        rows.push(match earlier {
            None => Box::new(source.clone()),
            Some(earlier) => Box::new(Undone::new(earlier, source.clone())?),
        });
    }
    let (measurement, layout, keep) = (&sheet.measurement, &sheet.layout, &sheet.keep);
    let result = match rows.as_mut_slice() {
        [only] => convert_with(measurement, layout, keep, &mut **only, writer, options, progress),
        several => {
            let mut parts: Vec<&mut dyn Rows> = several.iter_mut().map(|s| &mut **s as &mut dyn Rows).collect();
            convert_joined(measurement, layout, keep, &mut parts, writer, options, progress)
        }
    };
    result.map_err(|error| match error {
        // what is wrong with the channels is wrong in the sheet
        ConvertError::Measurement(error) if error.place().is_none() => {
            Failure::error(format!("{}: {error}", sheet_path.display()))
        }
        ConvertError::Recording(error @ RecordingError::NoSuchName { .. }) if earlier.is_some() => {
            Failure::error(format!(
                "{error}: of the recording that these results were made from there are the readings of their channels, and what the earlier sheet kept (keep)"
            ))
        }
        error => error.into(),
    })
}

/// A progress bar, where there is a terminal to see it and results do not scroll over it.
fn bar(args: &Convert, sources: &[Source], with_file: bool) -> Option<ProgressBar> {
    let visible = !args.quiet && std::io::stderr().is_terminal() && (with_file || !std::io::stdout().is_terminal());
    if !visible {
        return None;
    }
    let size = sources.iter().map(Source::size).sum::<Option<u64>>()?;
    let bar = ProgressBar::new(size);
    let style = ProgressStyle::with_template("{bar:30} {bytes}/{total_bytes} {msg} {eta}").ok()?;
    bar.set_style(style);
    Some(bar)
}

//! What changed since an earlier result.

use std::io::Write;
use std::path::{Path, PathBuf};

use ohmwright::check::against;
use ohmwright::recording::{RecordingError, Trace, layout_of_results};

use super::Job;
use crate::failure::Failure;
use crate::files::Source;
use crate::side::tell;
use crate::trace;

/// The earlier result that belongs to this one: the file itself, or that of the same name in a folder.
pub(super) fn earlier_of(earlier: &Path, result: &Path) -> Result<PathBuf, Failure> {
    let path: PathBuf = match result.file_name() {
        Some(name) if earlier.is_dir() => earlier.join(name),
        _ => earlier.to_path_buf(),
    };
    let name = path.display().to_string();
    // before anything is converted
    let found = path.canonicalize().map_err(|e| RecordingError::from_io(&name, "open", &e))?;
    if result.canonicalize().is_ok_and(|result| result == found) {
        return Err(Failure::error(format!(
            "{name}: the result would replace the earlier one; give another -o or --into"
        )));
    }
    Ok(path)
}

/// Compares a result with the earlier one, and prints what changed.
pub(super) fn report(job: &Job<'_>, earlier: &Path, result: &Path) -> Result<(), Failure> {
    let beside = trace::beside(earlier);
    let name = beside.display().to_string();
    let read = match std::fs::read_to_string(&beside) {
        Ok(text) => match Trace::read(&name, &text) {
            Ok(trace) => Some(trace),
            Err(reason) => {
                tell(&reason);
                None
            }
        },
        Err(_) => None,
    };
    let layout = layout_of_results(&job.sheet.layout);
    let (mut before, mut now) = (Source::new(earlier), Source::new(result));
    let changes = against(&mut before, &mut now, &layout, read.as_ref(), job.sheet)?;
    let mut out = std::io::stdout().lock();
    if job.args.json {
        writeln!(out, "{}", changes.json())?;
    } else {
        write!(out, "{changes}")?;
    }
    Ok(())
}

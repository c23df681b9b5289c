//! The trace beside a table of results.

use std::path::{Path, PathBuf};

use ohmwright::recording::{Asked, Fingerprint, Summary, Trace, Used};

use super::Job;
use crate::failure::Failure;
use crate::files::{self, Source};
use crate::trace::{beside, folder_of, used};

/// Writes the trace of a result.
pub(super) fn write(
    job: &Job<'_>,
    result: &Path,
    made: Fingerprint,
    recordings: &[PathBuf],
    sources: &[Source],
    summary: &Summary,
) -> Result<(), Failure> {
    let path = beside(result);
    let folder = folder_of(&path);
    let of = |file: &Path| -> Result<Used, Failure> { Ok(used(&folder, file, files::fingerprint(file)?)) };
    let read = recordings.iter().zip(sources);
    let read = read.map(|(recording, source)| Ok(used(&folder, recording, source.fingerprint()?)));
    let trace = Trace::new(
        job.sheet,
        summary,
        used(&folder, result, made),
        of(&job.args.sheet)?,
        read.collect::<Result<_, Failure>>()?,
        job.beside.iter().map(|file| of(file)).collect::<Result<_, _>>()?,
        Asked {
            uncertainty: job.args.uncertainty,
            coverage: job.args.coverage,
            join: job.args.join,
            single: job.args.single,
            undo: job.earlier.as_ref().map(|(path, _)| of(path)).transpose()?,
        },
    );
    files::whole(&path, trace.to_text().as_bytes())
}

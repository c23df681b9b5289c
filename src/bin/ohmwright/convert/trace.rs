//! The trace beside a result.

use std::ffi::OsString;
use std::path::{Component, Path, PathBuf};

use ohmwright::recording::{Asked, Fingerprint, Output, Summary, Trace, Used};

use super::Job;
use crate::failure::Failure;
use crate::files::{self, Source};

/// Where the trace of a result stands: its name with `.trace` behind it.
pub(crate) fn beside(result: &Path) -> PathBuf {
    let mut name = OsString::from(result);
    name.push(".trace");
    name.into()
}

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
    let used = |file: &Path, fingerprint| Used { file: from_folder(&folder, file), fingerprint };
    let of = |file: &Path| -> Result<Used, Failure> { Ok(used(file, files::fingerprint(file)?)) };
    let mut read = Vec::new();
    for (recording, source) in recordings.iter().zip(sources) {
        let fingerprint = source.fingerprint()?;
        read.push(if recording.as_os_str() == "-" {
            Used { file: "-".into(), fingerprint }
        } else {
            used(recording, fingerprint)
        });
    }
    let trace = Trace::new(
        job.sheet,
        summary,
        used(result, made),
        of(&job.args.sheet)?,
        read,
        job.beside.iter().map(|file| of(file)).collect::<Result<_, _>>()?,
        Asked {
            uncertainty: job.args.uncertainty,
            coverage: job.args.coverage,
            join: job.args.join,
            single: job.args.single,
            undo: job.earlier.as_ref().map(|(path, _)| of(path)).transpose()?,
        },
    );
    let mut output = Output::to_path(&path)?;
    output.put(trace.to_text().as_bytes())?;
    output.finish()?;
    Ok(())
}

/// The folder that a file is in.
pub(crate) fn folder_of(file: &Path) -> PathBuf {
    file.parent().filter(|p| !p.as_os_str().is_empty()).unwrap_or_else(|| Path::new(".")).to_path_buf()
}

/// A path as it is written in a trace: from its folder, with `/` between names; whole where there is no way from there.
fn from_folder(folder: &Path, file: &Path) -> String {
    let whole = |path: &Path| path.canonicalize().or_else(|_| std::path::absolute(path));
    let (Ok(folder), Ok(target)) = (whole(folder), whole(file)) else { return file.display().to_string() };
    let (from, to): (Vec<Component<'_>>, Vec<Component<'_>>) =
        (folder.components().collect(), target.components().collect());
    let common = from.iter().zip(&to).take_while(|(a, b)| a == b).count();
    if common == 0 {
        return target.display().to_string();
    }
    let up = std::iter::repeat_n("..".to_string(), from.len() - common);
    let down = to.iter().skip(common).map(|c| c.as_os_str().to_string_lossy().into_owned());
    up.chain(down).collect::<Vec<_>>().join("/")
}

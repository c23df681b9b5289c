//! Many recordings: which they are, and a table for each.

use std::collections::BTreeMap;
use std::io::{self, BufRead, BufReader};
use std::path::{Path, PathBuf};

use ohmwright::recording::RecordingError;

use super::Job;
use crate::args::Convert;
use crate::failure::Failure;
use crate::side::tell;

/// The recordings that were typed, and then those that `--list` names.
pub(super) fn recordings(args: &Convert) -> Result<Vec<PathBuf>, Failure> {
    let mut out = args.recording.clone();
    if let Some(list) = &args.list {
        out.extend(listed(list)?);
    }
    if out.is_empty() {
        return Err(Failure::error("there is no recording: name one behind the sheet, or many in a file with --list"));
    }
    for (i, path) in out.iter().enumerate() {
        let same = |other: &PathBuf| match (path.canonicalize(), other.canonicalize()) {
            (Ok(a), Ok(b)) => a == b,
            _ => path == other,
        };
        if let Some(other) = out.iter().take(i).find(|other| same(other)) {
            return Err(Failure::error(format!(
                "{}: this recording is given twice{}",
                path.display(),
                if other == path { String::new() } else { format!(", also as {}", other.display()) }
            )));
        }
    }
    if let [_, _, ..] = out.as_slice()
        && out.iter().any(|path| path.as_os_str() == "-")
    {
        return Err(Failure::error("-: a pipe is read only once, and alone; several recordings are files"));
    }
    Ok(out)
}

/// One path a line, from where the program runs; blank lines and those that begin with `#` are passed over.
fn listed(list: &Path) -> Result<Vec<PathBuf>, Failure> {
    let (name, reader): (String, Box<dyn BufRead>) = if list.as_os_str() == "-" {
        ("standard input".into(), Box::new(io::stdin().lock()))
    } else {
        let name = list.display().to_string();
        let file = std::fs::File::open(list).map_err(|e| RecordingError::from_io(&name, "open", &e))?;
        (name, Box::new(BufReader::new(file)))
    };
    let mut out = Vec::new();
    for (i, line) in reader.lines().enumerate() {
        let line = line.map_err(|e| match e.kind() {
            io::ErrorKind::InvalidData => Failure::error(format!("{name}:{}: not UTF-8 text: expected a path", i + 1)),
            _ => RecordingError::from_io(&name, "read", &e).into(),
        })?;
        let line = line.trim_start_matches('\u{feff}').trim();
        if line.is_empty() || line.starts_with('#') {
            continue;
        }
        out.push(PathBuf::from(line));
    }
    Ok(out)
}

/// Makes a table of each recording, named after it. What is wrong with one does not stop the others.
pub(super) fn into_directory(job: &Job<'_>, recordings: &[PathBuf], directory: &Path) -> Result<(), Failure> {
    if directory.exists() && !directory.is_dir() {
        return Err(Failure::error(format!(
            "{}: --into names the folder for the tables, and this is a file; one table goes into a file by -o, several recordings into one by --join -o",
            directory.display()
        )));
    }
    let targets = targets(recordings, directory)?;
    std::fs::create_dir_all(directory)
        .map_err(|e| RecordingError::from_io(&directory.display().to_string(), "make", &e))?;
    let inputs: Vec<PathBuf> =
        recordings.iter().chain([&job.args.sheet]).filter_map(|p| p.canonicalize().ok()).collect();
    if let Some((recording, target)) =
        targets.iter().find(|(_, target)| target.canonicalize().is_ok_and(|target| inputs.contains(&target)))
    {
        return Err(Failure::error(format!(
            "{}: its table, {}, would replace a recording or the sheet; give another --into",
            recording.display(),
            target.display()
        )));
    }
    let (mut failed, mut against) = (0usize, 0usize);
    for (recording, target) in &targets {
        match job.convert(core::slice::from_ref(*recording), Some(target)) {
            Ok(()) => {}
            Err(Failure::No(message)) => {
                against += 1;
                tell(&message);
            }
            Err(failure) => {
                failed += 1;
                tell(failure.to_string().trim_end());
            }
        }
    }
    let all = targets.len();
    if failed > 0 {
        return Err(Failure::error(format!("{failed} of {all} recordings could not be converted")));
    }
    if against > 0 {
        return Err(Failure::No(format!("{against} of {all} recordings have something against them (--strict)")));
    }
    Ok(())
}

/// The table of each recording: its name with `.csv`, refused where two would be one.
fn targets<'a>(recordings: &'a [PathBuf], directory: &Path) -> Result<Vec<(&'a PathBuf, PathBuf)>, Failure> {
    let mut taken: BTreeMap<String, &PathBuf> = BTreeMap::new();
    let mut out = Vec::new();
    for recording in recordings {
        let Some(stem) = recording.file_stem().filter(|_| recording.as_os_str() != "-") else {
            return Err(Failure::error(format!(
                "{}: it has no name to give to a table in --into {}",
                recording.display(),
                directory.display()
            )));
        };
        // run3.csv.gz is run3.csv, packed
        let packed = recording.extension().is_some_and(|e| e == "gz" || e == "zst");
        let mut name = Path::new(stem).file_stem().filter(|_| packed).unwrap_or(stem).to_os_string();
        name.push(".csv");
        let target = directory.join(name);
        // some file systems do not tell a from A
        if let Some(other) = taken.insert(target.to_string_lossy().to_lowercase(), recording) {
            return Err(Failure::error(format!(
                "{}: its table would be {}, as that of {}: nothing was converted",
                recording.display(),
                target.display(),
                other.display()
            )));
        }
        out.push((recording, target));
    }
    Ok(out)
}

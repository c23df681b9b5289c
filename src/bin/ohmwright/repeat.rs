//! `repeat`: are the same bytes obtained now?

use std::io::Write;
use std::path::{Path, PathBuf};

use ohmwright::recording::{Options, Output, Trace, Used};
use ohmwright::uncertainty::Coverage;

use crate::args::Repeat;
use crate::convert::{run_over, trace::folder_of, writer::Writer};
use crate::failure::Failure;
use crate::files::{self, Source};

pub(crate) fn run(args: &Repeat) -> Result<(), Failure> {
    let name = args.trace.display().to_string();
    let text = std::fs::read_to_string(&args.trace)
        .map_err(|e| Failure::from(ohmwright::recording::RecordingError::from_io(&name, "read", &e)))?;
    let trace = Trace::read(&name, &text).map_err(Failure::error)?;
    let folder = folder_of(&args.trace);
    let at = |used: &Used| -> PathBuf { folder.join(&used.file) };
    let mut out = std::io::stdout().lock();
    let mut changed = 0;
    if trace.recordings.iter().any(|r| r.file == "-") {
        return Err(Failure::error(format!("{name}: the result was made from a pipe, which cannot be read again")));
    }
    let inputs = [("sheet", &trace.sheet)]
        .into_iter()
        .chain(trace.recordings.iter().map(|r| ("recording", r)))
        .chain(trace.beside.iter().map(|b| ("file of the sheet", b)))
        .chain(trace.asked.undo.iter().map(|u| ("earlier sheet", u)));
    for (what, used) in inputs {
        let now = files::fingerprint(&at(used))?;
        if now != used.fingerprint {
            changed += 1;
            writeln!(
                out,
                "{what} {}: changed since then ({} bytes, SHA-256 {}; it was {} bytes, {})",
                used.file,
                now.bytes,
                short(&now.sha256),
                used.fingerprint.bytes,
                short(&used.fingerprint.sha256)
            )?;
        }
    }
    if trace.version != env!("CARGO_PKG_VERSION") {
        writeln!(out, "ohmwright {} made it, this is {}", trace.version, env!("CARGO_PKG_VERSION"))?;
    }
    let beside = files::fingerprint(&at(&trace.result)).ok();
    match &beside {
        None => writeln!(out, "result {}: is not there", trace.result.file)?,
        Some(now) if *now != trace.result.fingerprint => {
            changed += 1;
            writeln!(out, "result {}: is not what this trace tells of", trace.result.file)?;
        }
        Some(_) => {}
    }
    let made = again(&trace, &at)?;
    let wanted = &trace.result.fingerprint;
    if made == *wanted {
        writeln!(out, "the same: {} bytes, SHA-256 {}", made.bytes, made.sha256)?;
    } else {
        writeln!(
            out,
            "not the same: {} bytes, SHA-256 {}; it was {} bytes, {}",
            made.bytes, made.sha256, wanted.bytes, wanted.sha256
        )?;
    }
    if made == *wanted && changed == 0 { Ok(()) } else { Err(Failure::No(String::new())) }
}

/// Makes the result again, into nothing but its fingerprint.
fn again(trace: &Trace, at: &dyn Fn(&Used) -> PathBuf) -> Result<ohmwright::recording::Fingerprint, Failure> {
    let sheet_path: PathBuf = at(&trace.sheet);
    let sheet = files::sheet(&sheet_path)?;
    let earlier = trace.asked.undo.as_ref().map(|u| files::sheet(&at(u))).transpose()?;
    let sources: Vec<Source> = trace.recordings.iter().map(|r| Source::new(&at(r))).collect();
    let options = Options {
        uncertainty: trace.asked.uncertainty.then(|| Coverage::Probability(trace.asked.coverage.unwrap_or(0.95))),
        ..Options::default()
    };
    let nowhere = Output::to_writer(std::io::sink(), "nowhere").with_fingerprint();
    let mut writer =
        Writer::new(nowhere, Some(Path::new(&trace.result.file)), trace.asked.single, &sheet, &sheet_path)?;
    run_over(&sheet, Path::new(&sheet_path), &sources, earlier.as_ref(), writer.table(), &options, &mut |_| {})?;
    let made = writer.finish()?;
    made.ok_or_else(|| Failure::error("no fingerprint was taken"))
}

/// The first digits of a hash.
fn short(hash: &str) -> &str {
    hash.get(..12).unwrap_or(hash)
}

//! `repeat`: are the same bytes obtained now?

use std::io::{StdoutLock, Write};
use std::path::{Path, PathBuf};

use ohmwright::recording::{Fingerprint, Options, Output, RecordingError, Trace, Used};
use ohmwright::uncertainty::Coverage;

use crate::args::{Curve, Image, Repeat};
use crate::convert::{run_over, writer::Writer};
use crate::failure::Failure;
use crate::files::{self, Source};
use crate::trace::{self, Asked, Made, Product};
use crate::{curve, evidence, image, start};

pub(crate) fn run(args: &Repeat) -> Result<(), Failure> {
    let name = args.trace.display().to_string();
    let text = std::fs::read(&args.trace).map_err(|e| RecordingError::from_io(&name, "read", &e))?;
    let text = String::from_utf8_lossy(&text);
    let folder = trace::folder_of(&args.trace);
    let at = |used: &Used| -> PathBuf { folder.join(&used.file) };
    let mut told = Told { out: std::io::stdout().lock(), at: &at, changed: 0 };
    if let Some(made) = Made::read(&name, &text) {
        let made = made?;
        pipes(&name, &made.read)?;
        let inputs = made.read.iter().map(|used| ("made of", used));
        told.before(inputs, &made.version, &made.result)?;
        // what cannot be made again is told of the trace that asks for it
        let again = product_again(&made, &at).map_err(|e| match e {
            Failure::Error(message) => Failure::error(format!("{name}: made again: {message}")),
            other => other,
        })?;
        return told.after(&again, &made.result);
    }
    let trace = Trace::read(&name, &text).map_err(|e| no_trace(&args.trace, e))?;
    pipes(&name, &trace.recordings)?;
    let inputs = [("sheet", &trace.sheet)]
        .into_iter()
        .chain(trace.recordings.iter().map(|r| ("recording", r)))
        .chain(trace.beside.iter().map(|b| ("file of the sheet", b)))
        .chain(trace.asked.undo.iter().map(|u| ("earlier sheet", u)));
    told.before(inputs, &trace.version, &trace.result)?;
    told.after(&table_again(&trace, &at)?, &trace.result)
}

/// Says that a file is no trace, and where the trace is when the result was meant.
fn no_trace(path: &Path, message: String) -> Failure {
    let beside = trace::beside(path);
    Failure::error(if beside.exists() {
        format!("{message}; the trace of this file is {}", beside.display())
    } else {
        format!("{message}; a command with -o OUT writes one beside OUT, OUT.trace")
    })
}

/// Refuses what was made from a pipe.
fn pipes(name: &str, read: &[Used]) -> Result<(), Failure> {
    if read.iter().any(|r| r.file == "-") {
        return Err(Failure::error(format!("{name}: the result was made from a pipe, which cannot be read again")));
    }
    Ok(())
}

/// What is said, and how many files are not what they were.
struct Told<'a> {
    out: StdoutLock<'static>,
    at: &'a dyn Fn(&Used) -> PathBuf,
    changed: usize,
}

impl Told<'_> {
    /// Which files have changed, before the result is made again.
    fn before<'u>(
        &mut self,
        inputs: impl Iterator<Item = (&'u str, &'u Used)>,
        version: &str,
        result: &Used,
    ) -> Result<(), Failure> {
        for (what, used) in inputs {
            let now = files::fingerprint(&(self.at)(used))?;
            if now != used.fingerprint {
                self.changed += 1;
                writeln!(
                    self.out,
                    "{what} {}: changed since then ({} bytes, SHA-256 {}; it was {} bytes, {})",
                    used.file,
                    now.bytes,
                    short(&now.sha256),
                    used.fingerprint.bytes,
                    short(&used.fingerprint.sha256)
                )?;
            }
        }
        if version != env!("CARGO_PKG_VERSION") {
            writeln!(self.out, "ohmwright {version} made it, this is {}", env!("CARGO_PKG_VERSION"))?;
        }
        match files::fingerprint(&(self.at)(result)) {
            Err(_) => writeln!(self.out, "result {}: is not there", result.file)?,
            Ok(now) if now != result.fingerprint => {
                self.changed += 1;
                writeln!(self.out, "result {}: is not what this trace tells of", result.file)?;
            }
            Ok(_) => {}
        }
        Ok(())
    }

    /// Whether the same came out.
    fn after(mut self, made: &Fingerprint, result: &Used) -> Result<(), Failure> {
        let wanted = &result.fingerprint;
        if made == wanted {
            writeln!(self.out, "the same: {} bytes, SHA-256 {}", made.bytes, made.sha256)?;
        } else {
            writeln!(
                self.out,
                "not the same: {} bytes, SHA-256 {}; it was {} bytes, {}",
                made.bytes, made.sha256, wanted.bytes, wanted.sha256
            )?;
        }
        if made == wanted && self.changed == 0 { Ok(()) } else { Err(Failure::No(String::new())) }
    }
}

/// Makes what is no table of results again.
fn product_again(made: &Made, at: &dyn Fn(&Used) -> PathBuf) -> Result<Fingerprint, Failure> {
    let first = || made.read.first().map(at).ok_or_else(|| Failure::error("the trace names no file that was read"));
    let Product { bytes, .. } = match &made.asked {
        Asked::Image => image::make(&Image { sheet: first()?, output: PathBuf::new() })?,
        Asked::Curve(asked) => curve::make(&Curve { sheet: first()?, ..asked.clone() })?,
        Asked::Start => start::make(&first()?)?,
        Asked::Evidence(asked) => evidence::make(asked),
    };
    trace::fingerprint(&bytes)
}

/// Makes a table of results again, into nothing but its fingerprint.
fn table_again(trace: &Trace, at: &dyn Fn(&Used) -> PathBuf) -> Result<Fingerprint, Failure> {
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

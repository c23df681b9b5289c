//! `evidence`: every published check value, computed again.

use std::io::Write;

use ohmwright::evidence::{Check, report, report_json, run as compute};
use ohmwright::recording::Output;

use crate::args::Evidence;
use crate::failure::Failure;

pub(crate) fn run(args: &Evidence) -> Result<(), Failure> {
    let checks = compute();
    let text = if args.json { report_json(&checks) + "\n" } else { report(&checks) };
    match &args.output {
        Some(path) => {
            let mut out = Output::to_path(path)?;
            out.put(text.as_bytes())?;
            out.finish()?;
        }
        None => std::io::stdout().lock().write_all(text.as_bytes())?,
    }
    if checks.iter().all(Check::passed) {
        Ok(())
    } else {
        Err(Failure::No("evidence falls short: see the lines marked FAILED".into()))
    }
}

//! `evidence`: every published check value, computed again.

use ohmwright::evidence::{Check, report, report_json, run as compute};

use crate::args::Evidence;
use crate::failure::Failure;
use crate::trace::{self, Asked, Product};

pub(crate) fn run(args: &Evidence) -> Result<(), Failure> {
    let checks = compute();
    let target = args.output.as_deref().filter(|path| path.as_os_str() != "-");
    trace::write(&product(&checks, args), target, Asked::Evidence(args.clone()))?;
    if checks.iter().all(Check::passed) {
        Ok(())
    } else {
        Err(Failure::No("evidence falls short: see the lines marked FAILED".into()))
    }
}

/// The report.
pub(crate) fn make(args: &Evidence) -> Product {
    product(&compute(), args)
}

fn product(checks: &[Check], args: &Evidence) -> Product {
    let text = if args.json { report_json(checks) + "\n" } else { report(checks) };
    Product { bytes: text.into_bytes(), read: Vec::new(), notes: Vec::new() }
}

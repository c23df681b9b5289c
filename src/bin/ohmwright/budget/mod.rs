//! `budget`: where the uncertainty of one result comes from.

mod page;
mod states;

use std::io::Write;

use ohmwright::measurement::{Budget, Propagation};
use ohmwright::montecarlo::{Run, Validation};
use ohmwright::recording::settle_zeros;
use ohmwright::sheet::Sheet;
use ohmwright::uncertainty::{Acceptance, Coverage, Interval, conformity, conformity_by_probability};

use crate::args::Budget as Args;
use crate::failure::Failure;
use crate::files;
use crate::side::channel;

use page::{Page, at_place, shortest, two, with_unit};
use states::States;

/// From this share on, what the second order adds is worth a line.
const SECOND_ORDER_MATTERS: f64 = 0.01;

pub(crate) fn run(args: &Args) -> Result<(), Failure> {
    let mut sheet = files::sheet(&args.sheet)?;
    let index = channel(&sheet, &args.channel)?;
    if let Some(path) = &args.recording {
        let mut source = files::Source::new(path);
        let (settled, said) = settle_zeros(&sheet.measurement, &sheet.layout, &mut source)?;
        sheet.measurement = settled;
        let mut err = std::io::stderr().lock();
        for line in said {
            let _ = writeln!(err, "{line}");
        }
    }
    if let Some(p) = args.coverage.filter(|p| !(*p > 0.0 && *p < 1.0)) {
        return Err(Failure::error(format!("--coverage {p}: expected a probability above 0 and below 1, as in 0.95")));
    }
    if let Some(k) = args.k.filter(|k| !(*k > 0.0 && k.is_finite())) {
        return Err(Failure::error(format!("--k {k}: expected a coverage factor above 0, as in 2")));
    }
    let coverage = match (args.k, args.coverage) {
        (Some(k), _) => Coverage::Factor(k),
        (None, p) => Coverage::Probability(p.unwrap_or(0.95)),
    };
    let mut states = States::new(&sheet, args, index)?;
    states.resolve(index)?;
    states.check_words()?;
    states.tell_notes();
    let propagation =
        Propagation::new(&states.sheet.measurement, &states.found, index).map_err(|e| Failure::error(e.to_string()))?;
    let unused = match propagation.unused() {
        [] => String::new(),
        keys => format!(" ({}: stated, but without effect on this result)", keys.join(", ")),
    };
    if propagation.causes().is_empty() {
        return Err(Failure::error(format!(
            "channel '{}': no uncertainty is stated, so none can be given{unused}; write it behind the values of the sheet, as in \"2.08 ± 0.5 %\"",
            propagation.channel()
        )));
    }
    if let Some((class, [low, high], at)) = propagation.beyond_class() {
        return Err(Failure::error(format!(
            "channel '{}': the {class} ends at {low} °C and {high} °C; for {} °C it gives no uncertainty",
            propagation.channel(),
            at_place(at, 2)
        )));
    }
    if propagation.value().is_nan() {
        return Err(Failure::error(format!("channel '{}' has no number there", propagation.channel())));
    }
    let budget = propagation.budget(coverage).map_err(|e| Failure::error(format!("{}: {e}", args.channel)))?;
    if budget.combined.standard == 0.0 {
        return Err(Failure::error(format!(
            "channel '{}': nothing that is stated moves this result, so no uncertainty can be given{unused}",
            propagation.channel()
        )));
    }
    if let Some(most) = propagation.quarter_turn().filter(|most| budget.expanded.expanded >= *most) {
        return Err(Failure::error(format!(
            "channel '{}': this direction is not determined: U in first order is {}, and from {} on every direction lies within it",
            propagation.channel(),
            with_unit(two(budget.expanded.expanded), propagation.unit()),
            with_unit(shortest(most), propagation.unit())
        )));
    }
    let simulated = match args.monte_carlo {
        Some(trials) => Some(simulated(&propagation, &budget, trials, args.seed)?),
        None => None,
    };
    let wanted = args.improve.as_deref().map(|text| difference(&sheet, index, "--improve", text)).transpose()?;
    let limits = limits(&sheet, index, &args.limit)?;
    let verdict = match limits {
        Some(limits) => {
            let guard = match &args.guard {
                Some(text) => difference(&sheet, index, "--guard", text)?,
                None => budget.expanded.expanded,
            };
            let found = match &simulated {
                Some(s) => conformity_by_probability(budget.value, s.run.within(limits), limits, guard),
                None => conformity(budget.value, &budget.combined, limits, guard),
            };
            Some((limits, found.map_err(|e| Failure::error(format!("--limit: {e}")))?))
        }
        None => None,
    };
    let page =
        Page { propagation: &propagation, budget: &budget, simulated: simulated.as_ref(), coverage, wanted, verdict };
    if args.json {
        let text = page.json()?;
        writeln!(std::io::stdout().lock(), "{text}")?;
    } else if args.csv {
        page.csv()?;
    } else {
        page.text(&mut std::io::stdout().lock())?;
    }
    match verdict {
        Some((_, verdict)) if verdict.guarded == Acceptance::Rejected => Err(Failure::No(String::new())),
        _ => Ok(()),
    }
}

struct Simulated {
    run: Run,
    seed: u64,
    validation: Validation,
}

fn simulated(propagation: &Propagation, budget: &Budget, trials: usize, seed: u64) -> Result<Simulated, Failure> {
    let run = propagation.trials(trials, 0, seed).map_err(|e| Failure::error(format!("--monte-carlo: {e}")))?;
    let validation =
        run.validate(budget.value, budget.combined.standard, budget.expanded.expanded, budget.expanded.probability);
    Ok(Simulated { run, seed, validation })
}

/// A size in the unit of a channel: a temperature difference has no offset.
fn difference(sheet: &Sheet, channel: usize, option: &str, text: &str) -> Result<f64, Failure> {
    let size = sheet.difference(channel, text.trim()).map_err(|e| Failure::error(format!("{option}: {e}")))?;
    if size > 0.0 { Ok(size) } else { Err(Failure::error(format!("{option} '{text}' must be above zero"))) }
}

/// `<= 200 MPa`, `>= -500`, both.
fn limits(sheet: &Sheet, channel: usize, words: &[String]) -> Result<Option<Interval>, Failure> {
    let mut out = Interval { low: f64::NEG_INFINITY, high: f64::INFINITY };
    for word in words {
        let word = word.trim();
        let strip = |marks: [&str; 2]| marks.iter().find_map(|mark| word.strip_prefix(mark));
        let value =
            |text: &str| sheet.result(channel, text.trim()).map_err(|e| Failure::error(format!("--limit: {e}")));
        if let Some(text) = strip(["<=", "≤"]) {
            out.high = out.high.min(value(text)?);
        } else if let Some(text) = strip([">=", "≥"]) {
            out.low = out.low.max(value(text)?);
        } else {
            return Err(Failure::error(format!("--limit '{word}': expected \"<= VALUE\" or \">= VALUE\"")));
        }
    }
    Ok((!words.is_empty()).then_some(out))
}

//! `budget`: where the uncertainty of one result comes from.

use std::io::Write;

use ohmwright::chain::Inputs;
use ohmwright::measurement::{Budget, Cause, Propagation, Source, State};
use ohmwright::montecarlo::{Run, Validation};
use ohmwright::recording::{CsvWriter, Digits, NumberText, Output, settle_zeros};
use ohmwright::sheet::Sheet;
use ohmwright::uncertainty::{
    Acceptance, Conformity, Coverage, Family, Interval, Rule, conformity, conformity_by_probability, decimals, rounded,
};

use crate::args::{Budget as Args, With};
use crate::failure::Failure;
use crate::files;
use crate::side::{Alone, channel, takes};

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

/// States of the channels that a result is made of, from what was typed.
struct States<'a> {
    sheet: Sheet,
    args: &'a Args,
    found: Vec<Option<State>>,
    /// Channels that words of `--with` can be for.
    readers: Vec<usize>,
    notes: Vec<String>,
    /// The only channel with a reading, where `--at` names none.
    only: Option<usize>,
    used: Vec<bool>,
}

impl<'a> States<'a> {
    fn new(sheet: &Sheet, args: &'a Args, index: usize) -> Result<Self, Failure> {
        let mut readers = Vec::new();
        reading_channels(sheet, index, &mut readers);
        let only = match readers.as_slice() {
            [only] => Some(*only),
            _ => None,
        };
        let found = vec![None; sheet.measurement.channels.len()];
        let used = vec![false; args.at.len()];
        Ok(Self { sheet: sheet.clone(), args, found, readers, notes: Vec::new(), only, used })
    }

    fn name(&self, channel: usize) -> &str {
        self.sheet.measurement.channels.get(channel).map_or("", |c| c.name.as_str())
    }

    /// The reading that was typed for a channel.
    fn reading(&mut self, channel: usize) -> Result<f64, Failure> {
        let name = self.name(channel).to_string();
        for (place, word) in self.args.at.iter().enumerate() {
            let text = match word.split_once('=') {
                Some((named, text)) if named.trim() == name => text,
                None if self.only == Some(channel) => word,
                _ => continue,
            };
            if let Some(used) = self.used.get_mut(place) {
                *used = true;
            }
            return self.sheet.reading(channel, text.trim()).map_err(Failure::error);
        }
        Err(Failure::error(format!("the reading of channel '{name}' is missing: give it by --at {name}=READING")))
    }

    /// Words of `--with` that mean something for a channel.
    fn words(&self, channel: usize) -> With {
        let for_it = |word: &&String| takes(&self.sheet, channel, word);
        With { with: self.args.with.with.iter().filter(for_it).cloned().collect() }
    }

    fn resolve(&mut self, channel: usize) -> Result<(), Failure> {
        if self.found.get(channel).is_some_and(Option::is_some) {
            return Ok(());
        }
        let source = self.sheet.measurement.channels.get(channel).map(|c| c.source.clone());
        let below: Vec<usize> = match &source {
            Some(Source::Combination(terms)) => terms.iter().map(|(c, _)| *c).collect(),
            Some(Source::Stress { of, .. }) => vec![*of],
            Some(Source::Rosette(rosette)) => rosette.each_grid().iter().map(|(c, ..)| *c).collect(),
            _ => Vec::new(),
        };
        for channel in &below {
            self.resolve(*channel)?;
        }
        if !below.is_empty() {
            return Ok(());
        }
        let reading = self.reading(channel)?;
        let alone = Alone::new(&self.sheet, channel, &self.words(channel))?;
        self.notes.extend(alone.notes().iter().cloned());
        let inputs = Inputs { reading, ..alone.inputs };
        let outcome = alone.plan.one(inputs);
        if !outcome.word.has_number() {
            return Err(Failure::error(format!("channel '{}': this reading is {}", self.name(channel), outcome.word)));
        }
        self.keep(channel, &alone, State { value: outcome.value, inputs, segment: 0 });
        // the temperatures that stand beside it
        let sides: Vec<(usize, f64)> = self
            .sheet
            .measurement
            .channels
            .get(channel)
            .and_then(|c| c.segments())
            .and_then(|s| s.first())
            .map(|s| {
                let [a, b, c, d] = inputs.arm_celsius;
                let celsius = [inputs.celsius, inputs.lead_celsius, a, b, c, d];
                let sides = s.sides().into_iter().zip(celsius);
                sides
                    .filter_map(|(side, t)| {
                        side.map(|side| (side.channel, (t - side.to_celsius.1) / side.to_celsius.0))
                    })
                    .collect()
            })
            .unwrap_or_default();
        for (side, value) in sides {
            self.side(side, value)?;
        }
        Ok(())
    }

    /// A temperature that was typed, as the reading that its channel must have had.
    fn side(&mut self, channel: usize, value: f64) -> Result<(), Failure> {
        if self.found.get(channel).is_some_and(Option::is_some) {
            return Ok(());
        }
        if self.sheet.measurement.channels.get(channel).is_some_and(|c| c.segments().is_none()) {
            return Err(Failure::error(format!(
                "channel '{}' is a temperature that is computed from others: its uncertainty is not followed here",
                self.name(channel)
            )));
        }
        let alone = Alone::new(&self.sheet, channel, &self.words(channel))?;
        let reading = alone
            .plan
            .forward(value, alone.inputs)
            .map_err(|_| Failure::error(format!("channel '{}': no reading stands for {value}", self.name(channel))))?;
        let inputs = Inputs { reading, ..alone.inputs };
        self.readers.push(channel);
        self.keep(channel, &alone, State { value, inputs, segment: 0 });
        Ok(())
    }

    /// Keeps a state, and the chain with what was typed of its zero.
    fn keep(&mut self, channel: usize, alone: &Alone, state: State) {
        if let Some(own) = self.sheet.measurement.channels.get_mut(channel)
            && let Source::Reading(segments) = &mut own.source
            && let Some(segment) = segments.first_mut()
        {
            segment.chain = alone.chain;
        }
        if let Some(slot) = self.found.get_mut(channel) {
            *slot = Some(state);
        }
    }

    /// A word that no channel takes is an error, as everywhere.
    fn check_words(&self) -> Result<(), Failure> {
        for word in &self.args.with.with {
            if !self.readers.iter().any(|c| takes(&self.sheet, *c, word)) {
                let first = self.readers.first().copied().unwrap_or_default();
                // says what is wrong with it
                Alone::new(&self.sheet, first, &With { with: vec![word.clone()] })?;
            }
        }
        if let Some((word, _)) = self.args.at.iter().zip(&self.used).find(|(_, used)| !**used) {
            let names: Vec<&str> = self.readers.iter().map(|c| self.name(*c)).collect();
            return Err(Failure::error(format!(
                "--at {word}: this result is made of readings of {}: give each by NAME=READING",
                names.join(", ")
            )));
        }
        Ok(())
    }

    fn tell_notes(&self) {
        let mut told: Vec<&str> = Vec::new();
        let mut err = std::io::stderr().lock();
        for note in &self.notes {
            if !told.contains(&note.as_str()) {
                told.push(note);
                let _ = writeln!(err, "{note}");
            }
        }
    }
}

/// The channels with readings that a result is made of.
fn reading_channels(sheet: &Sheet, channel: usize, out: &mut Vec<usize>) {
    match sheet.measurement.channels.get(channel).map(|c| &c.source) {
        Some(Source::Combination(terms)) => terms.iter().for_each(|(c, _)| reading_channels(sheet, *c, out)),
        Some(Source::Stress { of, .. }) => reading_channels(sheet, *of, out),
        Some(Source::Rosette(rosette)) => {
            rosette.each_grid().iter().for_each(|(c, ..)| reading_channels(sheet, *c, out))
        }
        _ if !out.contains(&channel) => out.push(channel),
        _ => {}
    }
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

/// What is printed.
struct Page<'a> {
    propagation: &'a Propagation,
    budget: &'a Budget,
    simulated: Option<&'a Simulated>,
    coverage: Coverage,
    wanted: Option<f64>,
    verdict: Option<(Interval, Conformity)>,
}

/// Two significant digits.
fn two(value: f64) -> String {
    digits(value, 0)
}

/// Two significant digits and so many more.
fn digits(value: f64, more: i32) -> String {
    match decimals(value.abs()) {
        Some(places) => at_place(value, places + more),
        None => shortest(value),
    }
}

fn at_place(value: f64, places: i32) -> String {
    if value == 0.0 && places > 6 {
        return "0".into();
    }
    if (0..=6).contains(&places) && value.abs() < 1e9 {
        return NumberText(value, Digits::Fixed(places as u8)).to_string();
    }
    let value = rounded(value, places);
    if value != 0.0 && (value.abs() < 1e-4 || value.abs() >= 1e9) {
        // as many digits as the place asks for
        let size = value.abs().log10_floor();
        let after = usize::try_from((size + places).max(0)).unwrap_or(0);
        return format!("{value:.after$e}");
    }
    format!("{value}")
}

/// The power of ten of the first digit, from the text of a number.
trait FirstDigit {
    fn log10_floor(self) -> i32;
}

impl FirstDigit for f64 {
    fn log10_floor(self) -> i32 {
        format!("{self:e}").split_once('e').and_then(|(_, power)| power.parse().ok()).unwrap_or(0)
    }
}

fn shortest(value: f64) -> String {
    NumberText(value, Digits::Shortest).to_string()
}

fn freedom(nu: f64) -> String {
    if nu.is_nan() {
        "unknown".into()
    } else if nu.is_infinite() {
        "infinite".into()
    } else {
        if nu < 100.0 { format!("{nu:.1}") } else { format!("{nu:.0}") }
    }
}

fn with_unit(text: String, unit: &str) -> String {
    if unit.is_empty() { text } else { format!("{text} {unit}") }
}

fn percent(share: f64) -> String {
    // not even of a bounded distribution is it said that there is none
    if share < 1e-4 {
        return "less than 0.01 %".into();
    }
    if share > 1.0 - 1e-4 {
        return "more than 99.99 %".into();
    }
    let text = format!("{:.2}", share * 100.0);
    format!("{} %", text.trim_end_matches('0').trim_end_matches('.'))
}

impl Page<'_> {
    fn share(&self, part: f64) -> f64 {
        let u = self.budget.combined.standard;
        if u > 0.0 { part * part / (u * u) } else { 0.0 }
    }

    /// Estimate, to the last digit of its uncertainty.
    fn estimate(cause: &Cause) -> String {
        if cause.estimate.is_nan() {
            return "0".into();
        }
        match decimals(cause.standard()) {
            Some(places) => with_unit(at_place(cause.estimate, places), &cause.unit),
            None => with_unit(shortest(cause.estimate), &cause.unit),
        }
    }

    fn text(&self, out: &mut impl Write) -> std::io::Result<()> {
        let (p, b) = (self.propagation, self.budget);
        let unit = p.unit();
        let head =
            ["quantity", "estimate", "standard uncertainty", "distribution", "sensitivity", "contribution", "share"];
        let mut rows: Vec<[String; 7]> = vec![head.map(str::to_string)];
        for (cause, part) in p.causes().iter().zip(&b.parts) {
            let mut name = cause.name.clone();
            if cause.shared {
                name.push_str(" (shared)");
            }
            let mut shape = part.shape.as_str().to_string();
            if part.degrees_of_freedom.is_finite() {
                shape.push_str(&format!(", dof {}", freedom(part.degrees_of_freedom).trim_end_matches(".0")));
            }
            rows.push([
                name,
                Self::estimate(cause),
                with_unit(two(part.standard), &cause.unit),
                shape,
                digits(part.sensitivity, 1),
                with_unit(two(part.signed()), unit),
                format!("{:.1} %", 100.0 * self.share(part.signed())),
            ]);
        }
        let widths: Vec<usize> = (0..7)
            .map(|c| rows.iter().filter_map(|r| r.get(c)).map(|t| t.chars().count()).max().unwrap_or(0))
            .collect();
        for row in &rows {
            let cells: Vec<String> = row
                .iter()
                .zip(&widths)
                .enumerate()
                .map(|(c, (text, width))| {
                    let gap = " ".repeat(width.saturating_sub(text.chars().count()));
                    if matches!(c, 0 | 3) { format!("{text}{gap}") } else { format!("{gap}{text}") }
                })
                .collect();
            writeln!(out, "{}", cells.join("  ").trim_end())?;
        }
        writeln!(out)?;
        let u = b.combined.standard;
        let places = decimals(b.expanded.expanded);
        let value = places.map_or_else(|| shortest(b.value), |places| at_place(b.value, places));
        writeln!(out, "{} = {}", p.channel(), with_unit(value.clone(), unit))?;
        writeln!(out, "combined standard uncertainty  {}", with_unit(two(u), unit))?;
        writeln!(out, "effective degrees of freedom   {}", freedom(b.combined.degrees_of_freedom))?;
        let rule = match b.expanded.rule {
            Rule::Stated => format!("stated; coverage probability {}", percent(b.expanded.probability)),
            rule => format!("coverage probability {}, {}", percent(b.expanded.probability), rule.as_str()),
        };
        writeln!(out, "coverage factor k              {:.2} ({rule})", b.expanded.factor)?;
        writeln!(out, "expanded uncertainty U         {}", with_unit(two(b.expanded.expanded), unit))?;
        let expanded = two(b.expanded.expanded);
        if unit.is_empty() {
            writeln!(out, "{} = {value} ± {expanded}", p.channel())?;
        } else {
            writeln!(out, "{} = ({value} ± {expanded}) {unit}", p.channel())?;
        }
        if let Some(order) = &b.order
            && order.share().abs() >= SECOND_ORDER_MATTERS
        {
            writeln!(
                out,
                "second order: u would be {} ({:+.1} %); --monte-carlo shows what that does to the interval",
                with_unit(two(order.standard()), unit),
                100.0 * order.share()
            )?;
        }
        if b.order.is_none() {
            writeln!(
                out,
                "second order: unknown, since the result ends within half a standard uncertainty of an input"
            )?;
        }
        if let Family::Trapezoidal { .. } | Family::Rectangular = b.combined.family {
            let k = if b.expanded.rule == Rule::Stated { "the probability of the stated k" } else { "k" };
            writeln!(
                out,
                "the distribution of the result is not near normal: {k} is that of the contributions that decide"
            )?;
        }
        self.text_of_trials(out)?;
        self.text_of_improvements(out)?;
        self.text_of_limits(out)?;
        if !p.unused().is_empty() {
            writeln!(out, "stated, but without effect on this result: {}", p.unused().join(", "))?;
        }
        writeln!(
            out,
            "rounded for print alone: uncertainties to two significant digits, the result to the last digit of U"
        )
    }

    fn text_of_trials(&self, out: &mut impl Write) -> std::io::Result<()> {
        let (Some(s), unit) = (self.simulated, self.propagation.unit()) else { return Ok(()) };
        let p = self.budget.expanded.probability;
        let places = decimals(self.budget.combined.standard).unwrap_or(6) + 1;
        let show = |v: f64| at_place(v, places);
        let [low, high] = s.run.symmetric(p);
        let [short_low, short_high] = s.run.shortest(p);
        let lost = if s.run.lost() > 0 { format!(", {} without a result", s.run.lost()) } else { String::new() };
        writeln!(out)?;
        writeln!(out, "Monte Carlo: {} trials, seed {}{lost}", s.run.count() + s.run.lost(), s.seed)?;
        writeln!(
            out,
            "  mean {}, standard uncertainty {}",
            with_unit(show(s.run.mean()), unit),
            with_unit(show(s.run.standard()), unit)
        )?;
        writeln!(
            out,
            "  {} within {} to {} (symmetric), {} to {} (shortest)",
            percent(p),
            show(low),
            show(high),
            show(short_low),
            show(short_high)
        )?;
        let verdict = if s.validation.holds() { "validated" } else { "not validated" };
        writeln!(
            out,
            "  first order {verdict}: its ends are {} and {} off, {} allowed",
            show(s.validation.low),
            show(s.validation.high),
            shortest(s.validation.tolerance)
        )
    }

    fn text_of_improvements(&self, out: &mut impl Write) -> std::io::Result<()> {
        let Some(wanted) = self.wanted else { return Ok(()) };
        let unit = self.propagation.unit();
        let b = self.budget;
        writeln!(out)?;
        let goal = with_unit(shortest(wanted), unit);
        if b.expanded.expanded <= wanted {
            return writeln!(out, "U = {goal} is reached already");
        }
        writeln!(out, "to reach U = {goal}:")?;
        let all = b.improvements(wanted, self.coverage).unwrap_or_default();
        for (rank, i) in all.iter().enumerate() {
            let (Some(cause), Some(part)) = (self.propagation.causes().get(i.cause), b.parts.get(i.cause)) else {
                continue;
            };
            match i.needed {
                Some(needed) => writeln!(
                    out,
                    "  {}. {}: standard uncertainty {} instead of {}",
                    rank + 1,
                    cause.name,
                    with_unit(two(needed), &cause.unit),
                    with_unit(two(part.standard), &cause.unit)
                )?,
                None => writeln!(
                    out,
                    "  {}. {}: not by itself; without it U = {}",
                    rank + 1,
                    cause.name,
                    with_unit(two(i.left), unit)
                )?,
            }
        }
        if let Ok(level) = b.common_level(wanted, self.coverage) {
            let over: Vec<&str> = self
                .propagation
                .causes()
                .iter()
                .zip(&b.parts)
                .filter(|(_, part)| part.signed().abs() > level)
                .map(|(cause, _)| cause.name.as_str())
                .collect();
            if over.len() > 1 {
                writeln!(
                    out,
                    "  or together: no contribution above {} ({})",
                    with_unit(two(level), unit),
                    over.join(", ")
                )?;
            }
        }
        Ok(())
    }

    fn text_of_limits(&self, out: &mut impl Write) -> std::io::Result<()> {
        let Some((limits, c)) = &self.verdict else { return Ok(()) };
        let unit = self.propagation.unit();
        let mut words = Vec::new();
        if limits.low.is_finite() {
            words.push(format!("at least {}", with_unit(shortest(limits.low), unit)));
        }
        if limits.high.is_finite() {
            words.push(format!("at most {}", with_unit(shortest(limits.high), unit)));
        }
        let said = |a: Acceptance| if a == Acceptance::Accepted { "accepted" } else { "rejected" };
        writeln!(out)?;
        writeln!(out, "limit: {}", words.join(" and "))?;
        let wrong = if c.simple == Acceptance::Accepted { "false acceptance" } else { "false rejection" };
        writeln!(out, "  simple acceptance: {}; probability of {wrong} {}", said(c.simple), percent(c.risk()))?;
        writeln!(out, "  guarded by {}: {}", with_unit(two(c.guard), unit), said(c.guarded))?;
        writeln!(out, "  probability that the limit is met: {} ({})", percent(c.conforming), self.whence())
    }

    /// What the probability for a limit rests on.
    fn whence(&self) -> &'static str {
        match (self.simulated, self.budget.combined.family) {
            (Some(_), _) => "share of the trials",
            (_, Family::Rectangular | Family::Trapezoidal { .. }) => "rectangular contributions and a normal rest",
            _ if self.budget.combined.degrees_of_freedom.is_finite() => "Student's t",
            _ if self.budget.combined.rectangular[0] > 0.0 => "rectangular contributions and a normal rest",
            _ => "normal",
        }
    }

    fn csv(&self) -> Result<(), Failure> {
        let (p, b) = (self.propagation, self.budget);
        let mut csv = CsvWriter::new(Output::stdout());
        for head in [
            "quantity",
            "estimate",
            "unit",
            "standard uncertainty",
            "distribution",
            "degrees of freedom",
            "sensitivity",
            "contribution",
            "share (%)",
            "coverage factor",
            "expanded uncertainty",
            "coverage probability",
        ] {
            csv.text(head);
        }
        csv.end_row()?;
        let finite = |v: f64| if v.is_finite() { v } else { f64::NAN };
        for (cause, part) in p.causes().iter().zip(&b.parts) {
            csv.text(&cause.name)
                .number(cause.estimate, Digits::Shortest)
                .text(&cause.unit)
                .number(part.standard, Digits::Shortest)
                .text(part.shape.as_str())
                .number(finite(part.degrees_of_freedom), Digits::Shortest)
                .number(part.sensitivity, Digits::Shortest)
                .number(part.signed(), Digits::Shortest)
                .number(100.0 * self.share(part.signed()), Digits::Shortest)
                .blank()
                .blank()
                .blank()
                .end_row()?;
        }
        csv.text(p.channel())
            .number(b.value, Digits::Shortest)
            .text(p.unit())
            .number(b.combined.standard, Digits::Shortest)
            .text(family(b.combined.family))
            .number(finite(b.combined.degrees_of_freedom), Digits::Shortest)
            .blank()
            .blank()
            .blank()
            .number(b.expanded.factor, Digits::Shortest)
            .number(b.expanded.expanded, Digits::Shortest)
            .number(b.expanded.probability, Digits::Shortest)
            .end_row()?;
        csv.finish()?;
        Ok(())
    }

    fn json(&self) -> Result<String, Failure> {
        let (p, b) = (self.propagation, self.budget);
        let finite = |v: f64| if v.is_finite() { serde_json::json!(v) } else { serde_json::Value::Null };
        let inputs: Vec<_> = p
            .causes()
            .iter()
            .zip(&b.parts)
            .map(|(cause, part)| {
                serde_json::json!({
                    "quantity": cause.name,
                    "estimate": finite(cause.estimate),
                    "unit": cause.unit,
                    "stated": cause.text,
                    "shared": cause.shared,
                    "standard_uncertainty": part.standard,
                    "distribution": part.shape.as_str(),
                    "degrees_of_freedom": finite(part.degrees_of_freedom),
                    "sensitivity": part.sensitivity,
                    "contribution": part.signed(),
                    "share": self.share(part.signed()),
                })
            })
            .collect();
        let mut out = serde_json::json!({
            "channel": p.channel(),
            "unit": p.unit(),
            "value": b.value,
            "inputs": inputs,
            "combined_standard_uncertainty": b.combined.standard,
            "effective_degrees_of_freedom": finite(b.combined.degrees_of_freedom),
            "distribution": family(b.combined.family),
            "coverage_factor": b.expanded.factor,
            "coverage_factor_from": b.expanded.rule.as_str(),
            "coverage_probability": b.expanded.probability,
            "expanded_uncertainty": b.expanded.expanded,
            "standard_uncertainty_with_second_order": b.order.map_or(serde_json::Value::Null, |o| finite(o.standard())),
            "without_effect": p.unused(),
        });
        let mut put = |key: &str, value: serde_json::Value| {
            if let Some(map) = out.as_object_mut() {
                map.insert(key.to_string(), value);
            }
        };
        if let Some(s) = self.simulated {
            let probability = b.expanded.probability;
            put(
                "monte_carlo",
                serde_json::json!({
                    "trials": s.run.count() + s.run.lost(),
                    "without_result": s.run.lost(),
                    "seed": s.seed,
                    "mean": s.run.mean(),
                    "standard_uncertainty": s.run.standard(),
                    "symmetric_interval": s.run.symmetric(probability),
                    "shortest_interval": s.run.shortest(probability),
                    "first_order_off": [s.validation.low, s.validation.high],
                    "allowed": s.validation.tolerance,
                    "first_order_validated": s.validation.holds(),
                }),
            );
        }
        if let Some(wanted) = self.wanted {
            let all = b.improvements(wanted, self.coverage).map_err(|e| Failure::error(e.to_string()))?;
            let all: Vec<_> = all
                .iter()
                .map(|i| {
                    serde_json::json!({
                        "quantity": p.causes().get(i.cause).map(|c| c.name.as_str()),
                        "standard_uncertainty_needed": i.needed,
                        "expanded_uncertainty_left": i.left,
                    })
                })
                .collect();
            put("wanted_expanded_uncertainty", serde_json::json!(wanted));
            put("improvements", serde_json::json!(all));
        }
        if let Some((limits, c)) = &self.verdict {
            put(
                "conformity",
                serde_json::json!({
                    "low": finite(limits.low),
                    "high": finite(limits.high),
                    "guard": c.guard,
                    "simple": c.simple == Acceptance::Accepted,
                    "guarded": c.guarded == Acceptance::Accepted,
                    "probability_met": c.conforming,
                    "probability_from": self.whence(),
                    "probability_of_wrong_verdict": c.risk(),
                }),
            );
        }
        serde_json::to_string_pretty(&out).map_err(|e| Failure::error(e.to_string()))
    }
}

const fn family(family: Family) -> &'static str {
    match family {
        Family::Rectangular => "rectangular",
        Family::Trapezoidal { .. } => "trapezoidal",
        _ => "normal",
    }
}

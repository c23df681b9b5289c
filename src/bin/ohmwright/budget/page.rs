//! A budget as text, CSV and JSON.

use std::io::Write;

use ohmwright::measurement::{Budget, Cause, Propagation};
use ohmwright::recording::{CsvWriter, Digits, NumberText, Output};
use ohmwright::uncertainty::{Acceptance, Conformity, Coverage, Family, Interval, Rule, decimals, rounded};

use super::{SECOND_ORDER_MATTERS, Simulated};
use crate::failure::Failure;

/// What is printed.
pub(super) struct Page<'a> {
    pub(super) propagation: &'a Propagation,
    pub(super) budget: &'a Budget,
    pub(super) simulated: Option<&'a Simulated>,
    pub(super) coverage: Coverage,
    pub(super) wanted: Option<f64>,
    pub(super) verdict: Option<(Interval, Conformity)>,
}

/// Two significant digits.
pub(super) fn two(value: f64) -> String {
    digits(value, 0)
}

/// Two significant digits and so many more.
fn digits(value: f64, more: i32) -> String {
    match decimals(value.abs()) {
        Some(places) => at_place(value, places + more),
        None => shortest(value),
    }
}

pub(super) fn at_place(value: f64, places: i32) -> String {
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

pub(super) fn shortest(value: f64) -> String {
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

pub(super) fn with_unit(text: String, unit: &str) -> String {
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

    pub(super) fn text(&self, out: &mut impl Write) -> std::io::Result<()> {
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

    pub(super) fn csv(&self) -> Result<(), Failure> {
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

    pub(super) fn json(&self) -> Result<String, Failure> {
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

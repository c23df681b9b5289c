//! What was found, as a colleague would put it, and as JSON.

use std::fmt;
use std::format;
use std::string::{String, ToString};
use std::vec::Vec;

use serde_json::{Map, Value, json};

use super::mistake::MISTAKES;
use super::verdict::{Checked, Report, Verdict, rows_in_words};

/// A number without needless digits.
pub(super) fn figure(value: f64) -> String {
    let size = value.abs();
    if size != 0.0 && !(1e-4..1e7).contains(&size) { format!("{value:e}") } else { format!("{value}") }
}

/// A number to a few significant digits.
pub(super) fn short(value: f64, digits: usize) -> String {
    figure(format!("{value:.*e}", digits - 1).parse().unwrap_or(value))
}

impl Report {
    /// Returns the exit code of the command: 0 all agree, 1 some differ, 3 some cannot be told and none differs.
    #[must_use]
    pub fn code(&self) -> u8 {
        let any = |v: Verdict| self.channels.iter().any(|c| c.verdict == v);
        if any(Verdict::Explained) || any(Verdict::Unexplained) {
            1
        } else if any(Verdict::CannotTell) {
            3
        } else {
            0
        }
    }

    /// Returns the report as JSON.
    #[must_use]
    pub fn json(&self) -> String {
        let number = |v: f64| if v.is_finite() { json!(v) } else { Value::Null };
        let channels: Vec<Value> = self
            .channels
            .iter()
            .map(|c| {
                let explanations: Vec<Value> = c
                    .explanations
                    .iter()
                    .map(|e| {
                        let parameters: Map<String, Value> =
                            e.parameters.iter().map(|(name, v)| (name.clone(), number(*v))).collect();
                        json!({ "id": e.id, "parameters": parameters, "residual": number(e.residual), "tie": e.tie,
                            "tied": e.tied, "ask": said(&e.id).1 })
                    })
                    .collect();
                json!({
                    "name": c.name,
                    "verdict": c.verdict.as_str(),
                    "material": c.material,
                    "rows": c.rows,
                    "largest_difference": number(c.largest_difference),
                    "unit": c.unit,
                    "slope": c.slope.map_or(Value::Null, number),
                    "offset": c.offset.map_or(Value::Null, number),
                    "explanations": explanations,
                    "column": c.column,
                    "rounding": number(c.step),
                    "largest_row": c.largest_row,
                    "rows_beyond_rounding": c.beyond,
                    "stretches": c.stretches.iter().map(|s| {
                        json!({ "from": s.from, "to": s.to, "largest": number(s.largest) })
                    }).collect::<Vec<_>>(),
                    "rows_ours_alone": c.alone[0],
                    "rows_theirs_alone": c.alone[1],
                    "theirs_alone": c.alone_at.iter().map(|s| json!({ "from": s.from, "to": s.to })).collect::<Vec<_>>(),
                    "share_of_uncertainty": c.share_of_uncertainty.map_or(Value::Null, number),
                    "normalised_error": c.normalised_error.map_or(Value::Null, number),
                    "follows": c.trends.iter().map(|(what, part)| {
                        json!({ "what": what, "part": number(*part) })
                    }).collect::<Vec<_>>(),
                    "to_settle": c.settle,
                })
            })
            .collect();
        format!("{:#}", json!({ "channels": channels }))
    }
}

impl fmt::Display for Report {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        for (i, channel) in self.channels.iter().enumerate() {
            if i > 0 {
                writeln!(f)?;
            }
            channel.fmt(f)?;
        }
        Ok(())
    }
}

/// What the mistakes of an explanation are, in words, and what to ask.
fn said(id: &str) -> (Vec<&'static str>, Vec<&'static str>) {
    id.split('+').filter_map(|id| MISTAKES.iter().find(|m| m.id == id)).map(|m| (m.what, m.ask)).unzip()
}

impl fmt::Display for Checked {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let unit = &self.unit;
        let printed = if self.step > 0.0 { format!("to {}", short(self.step, 3)) } else { "with all digits".into() };
        match self.verdict {
            Verdict::Agrees => writeln!(
                f,
                "{}: agrees. {}, printed {printed} {unit}; the largest difference, {} {unit} in row {}, is {}.",
                self.name,
                rows_in_words(self.rows),
                short(self.largest_difference, 3),
                self.largest_row,
                if self.tolerance > 0.0 { "within rounding and the tolerance" } else { "rounding" }
            )?,
            Verdict::CannotTell => writeln!(f, "{}: cannot tell from {}.", self.name, self.settle)?,
            // the differences are rounding, but numbers stand where there can be none
            Verdict::Explained | Verdict::Unexplained if self.largest_row == 0 || self.only_alone => writeln!(
                f,
                "{}: {}. Where both give a number, in {}, they agree; theirs is printed {printed} {unit}.",
                self.name,
                self.verdict.as_str(),
                rows_in_words(self.rows),
            )?,
            Verdict::Explained | Verdict::Unexplained => {
                writeln!(
                    f,
                    "{}: {}. Over {} their values, printed {printed} {unit}, are off by as much as {} {unit} (row {}).",
                    self.name,
                    self.verdict.as_str(),
                    rows_in_words(self.rows),
                    short(self.largest_difference, 4),
                    self.largest_row
                )?;
                if self.verdict == Verdict::Unexplained && 50 * self.beyond <= self.rows {
                    writeln!(f, "  All but {} of them agree.", rows_in_words(self.beyond))?;
                } else if let (Some(slope), Some(offset)) = (self.slope, self.offset) {
                    writeln!(f, "  Their value is {} times ours, {} {unit} more.", short(slope, 6), short(offset, 4))?;
                }
                for (what, part) in &self.trends {
                    writeln!(
                        f,
                        "  The difference also follows {what}: {} {unit} of it from end to end.",
                        short(*part, 3)
                    )?;
                }
                if let Some(share) = self.share_of_uncertainty {
                    let share = short(share, 2);
                    let [of, all] = self.weighed;
                    let others = all - of;
                    let partly = match self.unmoved {
                        _ if others == 0 => String::new(),
                        0 => format!("; {of} of {all} rows that were looked at have one"),
                        unmoved => {
                            let which = match (others, unmoved) {
                                (1, _) => "in the other".to_string(),
                                (_, n) if n == others => "in the others".to_string(),
                                (_, n) => format!("in {n} of the others"),
                            };
                            format!(
                                "; {of} of {all} rows that were looked at have one ({which} nothing whose uncertainty is stated moves the result, as a gauge factor does not move a strain of 0)"
                            )
                        }
                    };
                    let times = if self.material { "up to" } else { "at most" };
                    let verdict = match (self.material, of < all) {
                        (false, _) => "not material, but a difference",
                        (true, true) if share.parse::<f64>().is_ok_and(|s| s <= 1.0) => {
                            "whether it is material is not decided, since the largest difference has none"
                        }
                        (true, _) => "material",
                    };
                    writeln!(
                        f,
                        "  That is {times} {share} times our own expanded uncertainty (k = 2) in the same row{partly}: {verdict}."
                    )?;
                }
            }
        }
        if let Some(error) = self.normalised_error {
            writeln!(f, "  With the uncertainty that they state, |E_n| is {} at most.", short(error, 3))?;
        }
        self.explanations_in_words(f)?;
        self.rows_in_words(f)
    }
}

impl Checked {
    fn explanations_in_words(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let unit = &self.unit;
        let explained = self.verdict == Verdict::Explained;
        for (i, e) in self.explanations.iter().enumerate() {
            let (what, ask) = said(&e.id);
            let parameters: Vec<String> = e.parameters.iter().map(|(n, v)| format!("{n} {}", short(*v, 6))).collect();
            let mut head = what.join("; and ");
            if !e.note.is_empty() {
                head = format!("{head} ({})", e.note);
            }
            if !parameters.is_empty() {
                head = format!("{head}: {}", parameters.join(", "));
            }
            let lead = match (explained, i) {
                (true, 0) => "Their figures come out when",
                (true, _) => "Less likely:",
                (false, 0) => "Nothing known here makes their figures; nearest comes",
                (false, _) => "or",
            };
            writeln!(f, "  {lead} {head} [{}], to {} {unit} r.m.s.", e.id, short(e.residual, 2))?;
            if !e.tied.is_empty() {
                let most = 6;
                let more = e.tied.len().saturating_sub(most);
                let shown: Vec<&str> = e.tied.iter().take(most).map(String::as_str).collect();
                let more = if more > 0 { format!("; and {more} more") } else { String::new() };
                writeln!(f, "  These data cannot tell that from {}{more}.", shown.join("; "))?;
            }
            if explained && i == 0 {
                let mut asked: Vec<&str> = ask;
                for id in &e.tie {
                    for question in said(id).1 {
                        if !asked.contains(&question) && asked.len() < 4 {
                            asked.push(question);
                        }
                    }
                }
                writeln!(f, "  To be sure, ask: {}.", asked.join("; "))?;
            }
        }
        if self.verdict == Verdict::Unexplained && self.explanations.is_empty() && !self.only_alone {
            writeln!(f, "  Nothing known here makes their figures, or comes near.")?;
        }
        if self.verdict == Verdict::Unexplained && !self.settle.is_empty() {
            writeln!(f, "  {}.", capital(&self.settle))?;
        }
        Ok(())
    }

    fn rows_in_words(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        if self.beyond > 0 {
            let stretch = |s: &super::Stretch| {
                let rows =
                    if s.from == s.to { format!("row {}", s.from) } else { format!("rows {} to {}", s.from, s.to) };
                format!("{rows} ({} {})", short(s.largest, 3), self.unit)
            };
            let shown: Vec<String> = self.stretches.iter().take(4).map(stretch).collect();
            let more = if self.stretches.len() > 4 { " and others" } else { "" };
            let left = if self.verdict == Verdict::Explained { "It does not account for" } else { "Beyond rounding:" };
            let rows = if self.rows == 1 { "row" } else { "rows" };
            writeln!(f, "  {left} {} of {} {rows}: {}{more}.", self.beyond, self.rows, shown.join(", "))?;
        }
        let [ours, theirs] = self.alone;
        if theirs > 0 {
            writeln!(
                f,
                "  They give a number in {} where the reading cannot be converted here: {}.",
                rows_in_words(theirs),
                told(&self.alone_at)
            )?;
        }
        if ours > 0 {
            writeln!(f, "  They give none in {} where there is one here.", rows_in_words(ours))?;
        }
        Ok(())
    }
}

/// The first stretches of rows, without what stands in them.
fn told(stretches: &[super::Stretch]) -> String {
    let one = |s: &super::Stretch| {
        if s.from == s.to { format!("row {}", s.from) } else { format!("rows {} to {}", s.from, s.to) }
    };
    let shown: Vec<String> = stretches.iter().take(4).map(one).collect();
    format!("{}{}", shown.join(", "), if stretches.len() > 4 { " and others" } else { "" })
}

fn capital(text: &str) -> String {
    let mut chars = text.chars();
    chars.next().map_or_else(String::new, |c| c.to_uppercase().to_string() + chars.as_str())
}

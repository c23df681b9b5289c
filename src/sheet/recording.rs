//! `[recording]`: how the file is laid out.

use std::string::ToString;
use std::vec::Vec;

use super::layout::{Decimal, Encoding, Layout, Pass, Separator};
use super::node::{Section, Value};
use super::shape::Shape;
use super::unit::Kind;
use crate::measurement::ColumnRef;

/// Reads `[recording]`; everything in it is optional.
pub(super) fn read(root: &Section<'_>) -> (Layout, Vec<ColumnRef>) {
    let mut layout = Layout::default();
    let Some(section) = root.section("recording") else { return (layout, Vec::new()) };
    let s = &section;
    layout.time = columns(s, "time").unwrap_or_default();
    if let Some((text, span)) = s.text("time_format") {
        if let Err(reason) = Shape::new(text) {
            s.say(
                span,
                std::format!("recording.time_format is '{text}': {reason}; it is written as in \"day.month.year hour:minute:second\""),
            );
        }
        layout.time_format = Some(text.to_string());
    }
    if let Some((text, span)) = s.text("time_zone") {
        if let Some(more) = unknown_zone(text) {
            s.say(span, std::format!("recording.time_zone is '{text}'; expected a zone as in \"Europe/Berlin\"{more}"));
        }
        layout.time_zone = Some(text.to_string());
    }
    if s.has("repeated_hour") {
        layout.repeated_hour = s.choice("repeated_hour", &[("first", Pass::First), ("second", Pass::Second)]);
        if !s.has("time_zone")
            && let Some(entry) = s.entry("repeated_hour")
        {
            s.say(
                entry.key_span.clone(),
                "recording.repeated_hour needs recording.time_zone: the zone says which hour comes twice",
            );
        }
    }
    layout.interval = s.quantity("interval", &[Kind::Seconds]).map(|q| q.quantity.value);
    layout.separator = word(s, "separator", Separator::from_text, "\",\" or \";\" or \"tab\"");
    layout.decimal = word(s, "decimal", Decimal::from_text, "\".\" or \",\"");
    layout.encoding = word(s, "encoding", Encoding::from_text, "\"utf-8\", \"windows-1252\" or \"utf-16\"");
    (layout.names_line, layout.more_names) = names_lines(s);
    layout.units_line = line(s, "units_line");
    layout.first_line = line(s, "first_line");
    layout.comment = s.text("comment").map(|(text, _)| text.to_string());
    layout.missing = words(s, "missing");
    layout.saturated = words(s, "saturated");
    if let Some(interval) = layout.interval
        && !(interval.is_finite() && interval > 0.0)
        && let Some(entry) = s.entry("interval")
    {
        s.say(entry.node.span.clone(), "recording.interval must be above zero");
    }
    if layout.interval.is_some()
        && !layout.time.is_empty()
        && let Some(entry) = s.entry("interval")
    {
        s.say(
            entry.node.span.clone(),
            "recording.interval is for a recording without a time column, but recording.time names one",
        );
    }
    (layout, columns(s, "keep").unwrap_or_default())
}

/// What to say of a zone that the database of this system does not have; `None` where it has it, or has nothing at all.
fn unknown_zone(name: &str) -> Option<std::string::String> {
    let database = jiff::tz::db();
    if database.get(name).is_ok() {
        return None;
    }
    let known: Vec<std::string::String> = database.available().map(|zone| zone.to_string()).collect();
    if known.is_empty() {
        return None;
    }
    // a city alone is what people remember
    let city =
        |zone: &&std::string::String| zone.rsplit('/').next().is_some_and(|last| last.eq_ignore_ascii_case(name));
    let near = known.iter().find(city).map(std::string::String::as_str);
    let near = near.or_else(|| super::nearest(name, known.iter().map(std::string::String::as_str)));
    Some(near.map_or_else(std::string::String::new, |near| std::format!("; did you mean \"{near}\"?")))
}

/// The line of names, and those that continue it.
fn names_lines(s: &Section<'_>) -> (Option<u64>, Vec<u64>) {
    let Some(entry) = s.table.peek("names_line") else { return (None, Vec::new()) };
    let Value::List(list) = &entry.node.value else { return (line(s, "names_line"), Vec::new()) };
    s.entry("names_line");
    let line = |node: &super::node::Node| match &node.value {
        Value::Number(text) => text.parse::<u64>().ok().filter(|n| (1..=1_000_000).contains(n)),
        _ => None,
    };
    let lines: Option<Vec<u64>> = list.iter().map(line).collect();
    match lines.as_deref() {
        Some([first, more @ ..]) if lines.iter().flatten().is_sorted_by(|a, b| a < b) => (Some(*first), more.to_vec()),
        _ => {
            s.say(
                entry.node.span.clone(),
                "recording.names_line is a line, or a list of lines from top to bottom, as in [2, 3]",
            );
            (None, Vec::new())
        }
    }
}

fn line(s: &Section<'_>, key: &str) -> Option<u64> {
    if s.has(key) { s.whole(key, 0, 1_000_000) } else { None }
}

fn word<T>(s: &Section<'_>, key: &str, read: impl Fn(&str) -> Option<T>, expected: &str) -> Option<T> {
    let (text, span) = s.text(key)?;
    let found = read(text);
    if found.is_none() {
        s.say(span, std::format!("recording.{key} is '{text}'; expected {expected}"));
    }
    found
}

/// Texts or numbers, one or several.
fn words(s: &Section<'_>, key: &str) -> Vec<std::string::String> {
    let Some(entry) = s.entry(key) else { return Vec::new() };
    let one = |node: &super::node::Node| match &node.value {
        Value::Text(text) | Value::Number(text) => Some(text.clone()),
        _ => {
            s.say(
                node.span.clone(),
                std::format!(
                    "{} is {}; expected texts or numbers, as in [\"-9999\", \"NaN\"]",
                    s.key_path(key),
                    node.kind()
                ),
            );
            None
        }
    };
    match &entry.node.value {
        Value::List(list) => list.iter().filter_map(one).collect(),
        _ => one(&entry.node).into_iter().collect(),
    }
}

/// One column or a list of them, each by header or by number.
pub(super) fn columns(s: &Section<'_>, key: &str) -> Option<Vec<ColumnRef>> {
    let entry = s.entry(key)?;
    let one = |node: &super::node::Node| match &node.value {
        Value::Text(text) => Some(ColumnRef::Name(text.clone())),
        Value::Number(text) => match text.parse() {
            Ok(number) if number >= 1 => Some(ColumnRef::Number(number)),
            _ => {
                s.say(
                    node.span.clone(),
                    std::format!(
                        "{} is {text}; expected a column header, or its number counted from 1",
                        s.key_path(key)
                    ),
                );
                None
            }
        },
        _ => {
            s.say(
                node.span.clone(),
                std::format!("{} is {}; expected a column header or number", s.key_path(key), node.kind()),
            );
            None
        }
    };
    match &entry.node.value {
        Value::List(list) => list.iter().map(one).collect(),
        _ => one(&entry.node).map(|c| std::vec![c]),
    }
}

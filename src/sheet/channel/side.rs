//! Where a temperature comes from: a value, or a channel.

use std::collections::BTreeMap;
use std::format;
use std::string::{String, ToString};
use std::vec::Vec;

use super::{Known, lookup};
use crate::measurement::{Between, Side};
use crate::sheet::node::{Read, Section, Value};
use crate::sheet::unit::Kind;
use crate::sheet::{quantity, table_of};

/// Reads where a temperature comes from: a value, or a channel.
pub(in crate::sheet) fn side(
    s: &Section<'_>,
    key: &str,
    known: &BTreeMap<&str, Known>,
    assumed: &mut Vec<String>,
) -> Option<Result<Read, Side>> {
    let entry = s.entry(key)?;
    let path = s.key_path(key);
    if let Value::Text(text) = &entry.node.value {
        return side_of_text(s, &path, text, entry.node.span.clone(), known, assumed);
    }
    if table_of(&entry.node.value).is_none() {
        let kind = entry.node.kind();
        s.say(
            entry.node.span.clone(),
            format!("{path} is {kind}; expected a value such as \"21 degC\", a channel, or {{ channel = ..., longest_gap = ... }}"),
        );
        return None;
    }
    let section = s.section(key)?;
    let Some((name, span)) = section.text("channel") else {
        if !section.has("channel") {
            section.lack("channel", "the channel that is the temperature");
        }
        return None;
    };
    let found = lookup(s, known, name, span.clone())?;
    let between = if section.has("between") {
        section.choice("between", &[("line", Between::Line), ("last", Between::Last)])?
    } else {
        Between::Line
    };
    let gap = match section.quantity("longest_gap", &[Kind::Seconds]) {
        Some(gap) => gap.quantity.value,
        None if section.has("longest_gap") => return None,
        None => {
            assumed
                .push(format!("{path}.longest_gap: samples of '{name}' that are no more than 60 s apart are bridged"));
            60.0
        }
    };
    if gap.is_nan() || gap < 0.0 {
        section.say(section.span.clone(), format!("{path}.longest_gap must not be below zero"));
        return None;
    }
    make_side(s, name, found, between, gap, span).map(Err)
}

/// The same where it is a text: a value with its unit, or the name of a channel.
pub(in crate::sheet) fn side_of_text(
    s: &Section<'_>,
    path: &str,
    text: &str,
    span: core::ops::Range<usize>,
    known: &BTreeMap<&str, Known>,
    assumed: &mut Vec<String>,
) -> Option<Result<Read, Side>> {
    match quantity::parse(text, &[Kind::Celsius]) {
        Ok(quantity) => return Some(Ok(Read { quantity, text: text.to_string() })),
        Err(message)
            if text.trim_start().starts_with(|c: char| c.is_ascii_digit() || c == '-' || c == '+')
                && !known.contains_key(text) =>
        {
            // it was meant as a value
            s.say(span, format!("{path}: {message}"));
            return None;
        }
        Err(_) => {}
    }
    let found = lookup(s, known, text, span.clone())?;
    assumed.push(format!("{path}: straight line between samples of '{text}' that are no more than 60 s apart"));
    make_side(s, text, found, Between::Line, 60.0, span).map(Err)
}

fn make_side(
    s: &Section<'_>,
    name: &str,
    found: Known,
    between: Between,
    longest_gap: f64,
    span: core::ops::Range<usize>,
) -> Option<Side> {
    let unit = found.unit?;
    if unit.kind != Kind::Celsius {
        s.say(span, format!("channel '{name}' gives {}, not a temperature", unit.kind.expected()));
        return None;
    }
    Some(Side {
        channel: found.index,
        between,
        longest_gap,
        to_celsius: (unit.factor, unit.offset),
        name: name.to_string(),
    })
}

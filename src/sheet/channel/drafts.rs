//! The channels as written, before they are read: common keys under their own, units, and who feeds whom.

use std::format;
use std::string::String;
use std::vec::Vec;

use crate::sheet::node::{Entry, Section, Table, Value};
use crate::sheet::unit::{self, Kind, Unit};
use crate::sheet::{nearest, table_of};

/// A channel's keys with its common ones under them.
pub(super) struct Draft<'a> {
    pub(super) name: &'a str,
    pub(super) key: &'a Entry,
    pub(super) table: Table,
}

pub(super) fn drafts<'a>(root: &Section<'a>) -> Vec<Draft<'a>> {
    let common = root.section("common");
    let Some(channels) = root.section("channel") else { return Vec::new() };
    let mut out: Vec<Draft<'_>> = Vec::new();
    if let Some(common) = &common {
        for entry in &common.table.entries {
            common.table.take(&entry.key);
            if table_of(&entry.node.value).is_none() {
                root.say(
                    entry.node.span.clone(),
                    format!("common.{} must be a table, as in [common.{}]", entry.key, entry.key),
                );
            }
        }
    }
    for entry in &channels.table.entries {
        channels.table.take(&entry.key);
        let Some(own) = table_of(&entry.node.value) else {
            root.say(
                entry.node.span.clone(),
                format!("channel.{} must be a table, as in [channel.{}]", entry.key, entry.key),
            );
            continue;
        };
        if is_odd(&entry.key) {
            root.say(
                entry.key_span.clone(),
                format!(
                    "channel name '{}' must not be empty nor hold blanks, colons, commas, quotes or '='",
                    entry.key.escape_debug()
                ),
            );
        }
        let section =
            Section { table: own, path: String::new(), span: entry.key_span.clone(), findings: root.findings };
        let table = match section.text("like") {
            None => own.clone(),
            Some((like, span)) => {
                let found = common.as_ref().and_then(|c| c.table.peek(like)).and_then(|e| table_of(&e.node.value));
                match found {
                    Some(shared) => own.over(shared, ""),
                    None => {
                        let names = common.iter().flat_map(|c| c.table.entries.iter().map(|e| e.key.as_str()));
                        let near = nearest(like, names).map_or_else(String::new, |n| format!("; did you mean '{n}'?"));
                        root.say(span, format!("like = '{like}': there is no [common.{like}]{near}"));
                        own.clone()
                    }
                }
            }
        };
        out.push(Draft { name: &entry.key, key: entry, table });
    }
    if let Some(common) = common {
        // keys of a common table that no channel is like are not judged
        for entry in &common.table.entries {
            let used = out.iter().any(|d| {
                d.table.peek("like").is_some_and(|e| matches!(&e.node.value, Value::Text(t) if *t == entry.key))
            });
            if !used && let Some(table) = table_of(&entry.node.value) {
                table.mark_used();
            }
        }
    }
    out
}

/// Whether a name would be taken apart in headers, flags or on the command line.
pub(in crate::sheet) fn is_odd(name: &str) -> bool {
    name.is_empty()
        || name.contains(|c: char| c.is_whitespace() || c.is_control() || matches!(c, ':' | ',' | '=' | '"'))
}

/// The unit of a channel, before the channel itself is read.
pub(super) fn output_unit(draft: &Draft<'_>, drafts: &[Draft<'_>], depth: usize) -> Option<Unit> {
    let text = |key: &str| match &draft.table.peek(key)?.node.value {
        Value::Text(text) => Some(text.as_str()),
        _ => None,
    };
    let output = text("output");
    if draft.table.has("combine") {
        let terms = table_of(&draft.table.peek("combine")?.node.value)?;
        let first = drafts.iter().find(|d| terms.entries.first().is_some_and(|e| e.key == d.name))?;
        let own = if depth < drafts.len() { output_unit(first, drafts, depth + 1)? } else { return None };
        let sum: f64 = terms.entries.iter().filter_map(|e| weight(&e.node.value)).sum();
        let kind = if own.kind == Kind::Celsius && is_difference(sum) { Kind::Kelvins } else { own.kind };
        return match output {
            Some(output) => unit::find(kind, output),
            None if kind == Kind::Kelvins => unit::find(kind, "K"),
            None => Some(own),
        };
    }
    if draft.table.has("of") && (draft.table.has("section") || draft.table.has("load")) {
        let moment = text("load").is_some_and(|l| l != "axial");
        let (kind, usual) = if moment { (Kind::NewtonMetres, "N m") } else { (Kind::Newtons, "kN") };
        return unit::find(kind, output.unwrap_or(usual));
    }
    if draft.table.has("of") {
        return unit::find(Kind::Pascals, output.unwrap_or("MPa"));
    }
    if draft.table.has("gauge") {
        let output = output.unwrap_or("microstrain");
        return unit::find(Kind::Strain, output).or_else(|| unit::find(Kind::ShearStrain, output));
    }
    if ["platinum", "metal", "thermistor", "thermocouple"].iter().any(|sensor| draft.table.has(sensor)) {
        return unit::find(Kind::Celsius, output.unwrap_or("degC"));
    }
    if let Some(transducer) = draft.table.peek("transducer").and_then(|e| table_of(&e.node.value)) {
        // the unit of the load: stated as the output, with the capacity, or of the certificate
        let within = |key: &str| match &transducer.peek(key)?.node.value {
            Value::Text(text) => Some(text.as_str()),
            _ => None,
        };
        let own = match within("capacity") {
            Some(capacity) => {
                crate::sheet::quantity::parse(capacity, crate::sheet::circuit::LOADS).ok().map(|q| q.unit)
            }
            None => ["in", "gives"].iter().find_map(|key| crate::sheet::circuit::load_unit(within(key)?)),
        };
        return output.map_or(own, |output| unit::find(own?.kind, output));
    }
    unit::candidates(output.or_else(|| text("reads"))?).next()
}

/// A weight in `combine`, where it is a plain number.
fn weight(value: &Value) -> Option<f64> {
    match value {
        Value::Text(text) | Value::Number(text) => {
            crate::sheet::quantity::parse(&text.replace('_', ""), &[Kind::Number]).ok().map(|q| q.value)
        }
        _ => None,
    }
}

pub(super) fn is_difference(sum: f64) -> bool {
    sum.abs() < 1e-9
}

/// Whether a channel is computed from itself through `combine` and `of`.
pub(super) fn depends_on_itself(draft: &Draft<'_>, drafts: &[Draft<'_>]) -> bool {
    let mut seen: Vec<&str> = Vec::new();
    let mut open: Vec<&str> = feeders(draft);
    while let Some(name) = open.pop() {
        if name == draft.name {
            return true;
        }
        if !seen.contains(&name) {
            seen.push(name);
            open.extend(drafts.iter().filter(|d| d.name == name).flat_map(feeders));
        }
    }
    false
}

fn feeders<'a>(draft: &'a Draft<'_>) -> Vec<&'a str> {
    let mut out = Vec::new();
    if let Some(terms) = draft.table.peek("combine").and_then(|e| table_of(&e.node.value)) {
        out.extend(terms.entries.iter().map(|e| e.key.as_str()));
    }
    if let Some(Value::Text(of)) = draft.table.peek("of").map(|e| &e.node.value) {
        out.push(of);
    }
    out
}

//! `[channel.*]`: which channels there are and how they feed one another.

use std::collections::HashMap;
use std::format;
use std::string::{String, ToString};
use std::vec::Vec;

use super::circuit::Circuit;
use super::node::{Entry, Section, Table, Value};
use super::unit::{self, Kind, Unit};
use super::{Sheet, nearest, recording, table_of};
use crate::measurement::{
    Between, Channel, ColumnRef, Measurement, MeasurementError, Moment, Segment, Side, Source, Stated,
};

/// A channel's keys with its common ones under them.
struct Draft<'a> {
    name: &'a str,
    key: &'a Entry,
    table: Table,
}

/// What other channels need to know of a channel.
#[derive(Clone, Copy)]
pub(super) struct Known {
    pub(super) index: usize,
    pub(super) unit: Option<Unit>,
}

pub(super) fn read_sheet(root: &Section<'_>) -> Option<Sheet> {
    let title = root.text("title").map_or_else(String::new, |(text, _)| text.to_string());
    let (layout, keep) = recording::read(root);
    let drafts = drafts(root);
    if drafts.is_empty() && root.findings.count() == 0 {
        root.say(root.span.clone(), "the sheet has no [channel.NAME]: there is nothing to convert");
        return None;
    }
    let known: HashMap<&str, Known> = drafts
        .iter()
        .enumerate()
        .map(|(index, draft)| (draft.name, Known { index, unit: output_unit(draft) }))
        .collect();
    let mut inputs = Vec::new();
    let mut channels = Vec::new();
    let mut assumed = Vec::new();
    for draft in &drafts {
        let mut said = Vec::new();
        let section = Section {
            table: &draft.table,
            path: String::new(),
            span: draft.key.key_span.clone(),
            findings: root.findings,
        };
        if let Some(channel) = read_channel(draft, &section, &known, &mut inputs, &mut said) {
            channels.push(channel);
        }
        assumed.push(said);
    }
    if root.findings.count() > 0 {
        return None;
    }
    match Measurement::new(title, inputs, channels) {
        Ok(measurement) => {
            check_chains(&measurement, &drafts, root);
            Some(Sheet { measurement, layout, keep, assumed })
        }
        Err(error) => {
            let name = match &error {
                MeasurementError::Circle { channel }
                | MeasurementError::LateSide { channel, .. }
                | MeasurementError::Chain { channel, .. }
                | MeasurementError::NoZero { channel, .. } => channel,
            };
            let span = drafts.iter().find(|d| d.name == name).map_or(0..0, |d| d.key.key_span.clone());
            root.say(span, error.to_string());
            None
        }
    }
}

/// Lowers every chain once, so that what does not fit is told with its line.
fn check_chains(measurement: &Measurement, drafts: &[Draft<'_>], root: &Section<'_>) {
    for (channel, draft) in measurement.channels.iter().zip(drafts) {
        for segment in channel.segments().into_iter().flatten() {
            let mut chain = segment.chain;
            if segment.zero != crate::measurement::ZeroSource::Stated
                && let crate::chain::Element::Gauge { zero, .. } = &mut chain.element
            {
                // the window will say
                zero.celsius = zero.celsius.or(Some(20.0));
            }
            if let Err(error) = chain.plan() {
                root.say(draft.key.key_span.clone(), format!("channel '{}': {error}", channel.name));
                break;
            }
        }
    }
}

fn drafts<'a>(root: &Section<'a>) -> Vec<Draft<'a>> {
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
        if entry.key.contains([':', ' ', ',']) || entry.key.is_empty() {
            root.say(
                entry.key_span.clone(),
                format!("channel name '{}' must not be empty nor hold blanks, colons or commas", entry.key),
            );
        }
        let section =
            Section { table: own, path: String::new(), span: entry.key_span.clone(), findings: root.findings };
        let table = match section.text("like") {
            None => own.clone(),
            Some((like, span)) => {
                let found = common.as_ref().and_then(|c| c.table.peek(like)).and_then(|e| table_of(&e.node.value));
                match found {
                    Some(shared) => own.over(shared),
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

/// The unit of a channel, before the channel itself is read.
fn output_unit(draft: &Draft<'_>) -> Option<Unit> {
    let text = |key: &str| match &draft.table.peek(key)?.node.value {
        Value::Text(text) => Some(text.as_str()),
        _ => None,
    };
    if let Some(output) = text("output") {
        return unit::candidates(output).next();
    }
    if draft.table.has("gauge") {
        return unit::find(Kind::Strain, "microstrain");
    }
    if draft.table.has("platinum") || draft.table.has("thermistor") {
        return unit::find(Kind::Celsius, "degC");
    }
    unit::candidates(text("reads")?).next()
}

fn read_channel(
    draft: &Draft<'_>,
    s: &Section<'_>,
    known: &HashMap<&str, Known>,
    inputs: &mut Vec<ColumnRef>,
    assumed: &mut Vec<String>,
) -> Option<Channel> {
    let before = s.findings.count();
    s.entry("like");
    let decimals = if s.has("decimals") { s.whole("decimals", 0, 17).and_then(|n| u8::try_from(n).ok()) } else { None };
    let show = s.flag("show").unwrap_or(true);
    let mut stated = Vec::new();
    let (unit_name, source) = if s.has("combine") {
        combination(s, known)?
    } else if s.has("of") {
        stress(s, known, &mut stated)?
    } else {
        let (unit_name, segments) = segments(s, known, inputs, assumed)?;
        (unit_name, Source::Reading(segments))
    };
    let shared = shared(s);
    if s.findings.count() > before {
        return None;
    }
    Some(Channel { name: draft.name.to_string(), unit: unit_name, decimals, show, source, stated, shared })
}

/// Keys whose error is shared; each must stand in this channel.
fn shared(s: &Section<'_>) -> Vec<String> {
    let mut out = Vec::new();
    for (path, span) in s.texts("shared").unwrap_or_default() {
        let mut table = Some(s.table);
        let mut found = false;
        for part in path.split('.') {
            let entry = table.and_then(|t| t.peek(part));
            found = entry.is_some();
            table = entry.and_then(|e| table_of(&e.node.value));
        }
        if found {
            out.push(path.to_string());
        } else {
            s.say(span, format!("shared names '{path}', which is no key of this channel"));
        }
    }
    out
}

fn lookup(s: &Section<'_>, known: &HashMap<&str, Known>, name: &str, span: core::ops::Range<usize>) -> Option<Known> {
    if let Some(found) = known.get(name) {
        return Some(*found);
    }
    let near = nearest(name, known.keys().copied()).map_or_else(String::new, |n| format!("; did you mean '{n}'?"));
    s.say(span, format!("there is no channel '{name}'{near}"));
    None
}

fn combination(s: &Section<'_>, known: &HashMap<&str, Known>) -> Option<(String, Source)> {
    let section = s.section("combine")?;
    let output = s.text("output");
    let mut terms = Vec::new();
    let mut units = Vec::new();
    for entry in &section.table.entries {
        let read = section.quantity(&entry.key, &[Kind::Number]);
        let found = lookup(s, known, &entry.key, entry.key_span.clone());
        let (Some(read), Some(found)) = (read, found) else { continue };
        terms.push((found.index, read.quantity.value));
        units.push(found.unit?);
    }
    if terms.len() != section.table.entries.len() {
        return None;
    }
    let Some(first) = units.first() else {
        s.say(section.span.clone(), "combine needs at least one channel, as in { g01 = 0.5, g02 = -0.5 }");
        return None;
    };
    if units.iter().any(|u| u.kind != first.kind) {
        s.say(section.span.clone(), "combine: these channels have units of different kinds");
        return None;
    }
    let sum: f64 = terms.iter().map(|(_, w)| w).sum();
    if first.kind == Kind::Celsius {
        if units.iter().any(|u| u != first) {
            s.say(section.span.clone(), "combine: temperatures must have one unit before they are combined");
            return None;
        }
        if sum.abs() < 1e-9 {
            // a difference: in kelvin
            if let Some((text, span)) = output
                && unit::find(Kind::Kelvins, text).is_none()
            {
                s.say(span, format!("output is '{text}', but these weights sum to 0: a temperature difference, in K"));
                return None;
            }
            for (_, weight) in &mut terms {
                *weight *= first.factor;
            }
            return Some(("K".into(), Source::Combination(terms)));
        }
        if (sum - 1.0).abs() < 1e-9 {
            if let Some((text, span)) = output
                && unit::find(Kind::Celsius, text) != Some(*first)
            {
                s.say(span, format!("output is '{text}', but the mean is in the channels' own unit, {}", first.name));
                return None;
            }
            return Some((first.name.into(), Source::Combination(terms)));
        }
        s.say(
            section.span.clone(),
            format!(
                "combine: weights of temperatures sum to 0 (a difference, in K) or to 1 (a mean); these sum to {sum}"
            ),
        );
        return None;
    }
    let unit = match output {
        None => *first,
        Some((text, span)) => match unit::find(first.kind, text) {
            Some(unit) => unit,
            None => {
                s.say(span, format!("output is '{text}'; these channels give {}", first.kind.expected()));
                return None;
            }
        },
    };
    for ((_, weight), own) in terms.iter_mut().zip(&units) {
        *weight *= between(own, &unit);
    }
    Some((unit.name.into(), Source::Combination(terms)))
}

/// Factor from one unit to another of its kind.
fn between(from: &Unit, to: &Unit) -> f64 {
    if from == to {
        return 1.0;
    }
    let power: f64 = format!("1e{}", i32::from(from.exponent) - i32::from(to.exponent)).parse().unwrap_or(f64::NAN);
    power * from.factor / to.factor
}

fn stress(s: &Section<'_>, known: &HashMap<&str, Known>, stated: &mut Vec<Stated>) -> Option<(String, Source)> {
    let (name, span) = s.text("of")?;
    let found = lookup(s, known, name, span.clone())?;
    let from = found.unit?;
    if from.kind != Kind::Strain {
        s.say(
            span,
            format!("of = '{name}': stress needs a strain channel, and this one gives {}", from.kind.expected()),
        );
        return None;
    }
    let output = match s.text("output") {
        None => unit::find(Kind::Pascals, "MPa")?,
        Some((text, span)) => match unit::find(Kind::Pascals, text) {
            Some(unit) => unit,
            None => {
                s.say(span, format!("output is '{text}'; expected {}", Kind::Pascals.expected()));
                return None;
            }
        },
    };
    let Some(material) = s.section("material") else {
        s.lack("material", "stress needs a modulus, as in material = { modulus = \"205 GPa\" }");
        return None;
    };
    material.quantity("poisson", &[Kind::Number]);
    let Some(modulus) = material.quantity("modulus", &[Kind::Pascals]) else {
        if !material.has("modulus") {
            material.lack("modulus", "the modulus of elasticity, as in \"205 GPa\"");
        }
        return None;
    };
    let modulus = modulus.quantity;
    if modulus.value <= 0.0 {
        s.say(material.span.clone(), "material.modulus must be above zero");
        return None;
    }
    if let Some(uncertainty) = modulus.uncertainty {
        stated.push(Stated { key: "material.modulus".into(), value: modulus.value, uncertainty });
    }
    // σ = E e, in units of the output per unit of the strain
    let power: f64 = format!("1e{}", i32::from(from.exponent) - i32::from(output.exponent)).parse().unwrap_or(f64::NAN);
    let factor = crate::strain::uniaxial_stress(modulus.value, power);
    Some((output.name.into(), Source::Stress { of: found.index, factor }))
}

fn segments(
    s: &Section<'_>,
    known: &HashMap<&str, Known>,
    inputs: &mut Vec<ColumnRef>,
    assumed: &mut Vec<String>,
) -> Option<(String, Vec<Segment>)> {
    let first = Circuit::read(s, known, inputs, assumed);
    let mut out: Vec<Segment> = Vec::new();
    let unit_name = first.as_ref().map_or_else(String::new, |c| c.unit.clone());
    out.extend(first.map(|c| c.segment));
    if let Some(entry) = s.entry("change") {
        let Value::List(list) = &entry.node.value else {
            s.say(entry.node.span.clone(), "change must be a list of tables, as in [[channel.NAME.change]]");
            return None;
        };
        for node in list {
            let Value::Table(own) = &node.value else {
                s.say(node.span.clone(), "change must be a list of tables, as in [[channel.NAME.change]]");
                return None;
            };
            let place =
                Section { table: own, path: "change".into(), span: entry.key_span.clone(), findings: s.findings };
            let Some((from, span)) = place.text("from") else {
                if !place.has("from") {
                    place.lack("from", "the moment from which these keys hold");
                }
                return None;
            };
            // the channel's own keys without its changes, and these over them
            let base = Table { entries: s.table.entries.iter().filter(|e| e.key != "change").cloned().collect() };
            let changed = Table { entries: own.entries.iter().filter(|e| e.key != "from").cloned().collect() };
            let table = changed.over(&base);
            let section = Section { table: &table, path: String::new(), span, findings: s.findings };
            let mut silent = Vec::new();
            let circuit = Circuit::read(&section, known, inputs, &mut silent)?;

            if circuit.unit != unit_name {
                section.say(section.span.clone(), "a change cannot give the channel another unit");
                return None;
            }
            out.push(Segment { from: Some(Moment::unplaced(from)), ..circuit.segment });
        }
    }
    if out.is_empty() { None } else { Some((unit_name, out)) }
}

/// Reads where the temperature of a gauge comes from: a value, or a channel.
pub(super) fn side(
    s: &Section<'_>,
    known: &HashMap<&str, Known>,
    assumed: &mut Vec<String>,
) -> Option<Result<f64, Side>> {
    let entry = s.table.peek("temperature")?;
    if let Value::Text(text) = &entry.node.value {
        s.entry("temperature");
        if let Ok(q) = super::quantity::parse(text, &[Kind::Celsius]) {
            return Some(Ok(q.value));
        }
        if text.trim_start().starts_with(|c: char| c.is_ascii_digit() || c == '-' || c == '+') {
            // it was meant as a value
            s.quantity("temperature", &[Kind::Celsius]);
            return None;
        }
        let found = lookup(s, known, text, entry.node.span.clone())?;
        assumed.push(format!("temperature: line between samples of '{text}' no more than 60 s apart"));
        return make_side(s, text, found, Between::Line, 60.0, entry.node.span.clone()).map(Err);
    }
    let section = s.section("temperature")?;
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
            assumed.push(format!("temperature: samples of '{name}' no more than 60 s apart are bridged"));
            60.0
        }
    };
    if gap.is_nan() || gap < 0.0 {
        section.say(section.span.clone(), "temperature.longest_gap must not be below zero");
        return None;
    }
    make_side(s, name, found, between, gap, span).map(Err)
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

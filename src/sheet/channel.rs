//! `[channel.*]`: which channels there are and how they feed one another.

use std::collections::BTreeMap;
use std::format;
use std::string::{String, ToString};
use std::vec::Vec;

use super::circuit::Circuit;
use super::node::{Entry, Read, Section, Table, Value};
use super::unit::{self, Kind, Unit};
use super::{Sheet, nearest, recording, rosette, table_of};
use crate::measurement::{
    Between, Channel, ColumnRef, Measurement, MeasurementError, Moment, Segment, Side, Source, Stated, ZeroSource,
};
use crate::strain::{Loading, Material, Section as BarSection};

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
    /// Whether it takes off the transverse sensitivity of its grid itself.
    pub(super) corrected: bool,
}

pub(super) fn read_sheet(root: &Section<'_>) -> Option<Sheet> {
    let title = root.text("title").map_or_else(String::new, |(text, _)| text.to_string());
    let (layout, keep) = recording::read(root);
    let drafts = drafts(root);
    if drafts.is_empty() && root.findings.count() == 0 {
        root.say(root.span.clone(), "the sheet has no [channel.NAME]: there is nothing to convert");
        return None;
    }
    let known: BTreeMap<&str, Known> = drafts
        .iter()
        .enumerate()
        .map(|(index, draft)| {
            let corrected = draft.table.has("transverse");
            (draft.name, Known { index, unit: output_unit(draft, &drafts, 0), corrected })
        })
        .collect();
    if let Some(draft) = drafts.iter().find(|d| depends_on_itself(d, &drafts)) {
        let error = MeasurementError::Circle { channel: draft.name.to_string() };
        root.say(draft.key.key_span.clone(), error.to_string());
        return None;
    }
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
    channels.extend(rosette::read(root, &known, &mut assumed));
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
                | MeasurementError::NoZero { channel, .. }
                | MeasurementError::Order { channel, .. } => channel,
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
                zero.arm_celsius = zero.arm_celsius.map(|t| t.or(Some(20.0)));
            }
            if let Err(error) = chain.plan() {
                root.say(place_of(&error, draft), format!("channel '{}': {error}", channel.name));
                break;
            }
        }
    }
}

/// Where to point for what is wrong with a chain as a whole.
fn place_of(error: &crate::Error, draft: &Draft<'_>) -> core::ops::Range<usize> {
    let words = error.to_string();
    let path: &[&str] = match error {
        crate::Error::Blind => &["bridge", "arms"],
        _ if words.contains("zero") => &["zero"],
        _ if words.contains("transducer") || words.contains("rated output") => &["transducer"],
        _ if words.contains("largest believed load") => &["largest_load"],
        _ if words.contains("transverse") || words.contains("strain ratio") => &["transverse"],
        _ if words.contains("thermal output") => &["thermal_output"],
        _ if words.contains("temperature of the gauge") => &["temperature"],
        _ if words.contains("lead") => &["leads"],
        _ if words.contains("platinum") => &["platinum"],
        _ if words.contains("thermistor") || words.contains("coefficient") => &["thermistor"],
        _ if words.contains("largest believed strain") => &["largest_strain"],
        _ => &[],
    };
    let mut table = Some(&draft.table);
    let mut span = draft.key.key_span.clone();
    for key in path {
        let Some(entry) = table.and_then(|t| t.peek(key)) else { break };
        span = entry.key_span.clone();
        table = table_of(&entry.node.value);
    }
    span
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
pub(super) fn is_odd(name: &str) -> bool {
    name.is_empty()
        || name.contains(|c: char| c.is_whitespace() || c.is_control() || matches!(c, ':' | ',' | '=' | '"'))
}

/// The unit of a channel, before the channel itself is read.
fn output_unit(draft: &Draft<'_>, drafts: &[Draft<'_>], depth: usize) -> Option<Unit> {
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
    if draft.table.has("platinum") || draft.table.has("thermistor") {
        return unit::find(Kind::Celsius, output.unwrap_or("degC"));
    }
    if let Some(transducer) = draft.table.peek("transducer").and_then(|e| table_of(&e.node.value)) {
        // the unit of the load: stated as the output, with the capacity, or of the certificate
        let within = |key: &str| match &transducer.peek(key)?.node.value {
            Value::Text(text) => Some(text.as_str()),
            _ => None,
        };
        let own = match within("capacity") {
            Some(capacity) => super::quantity::parse(capacity, super::circuit::LOADS).ok().map(|q| q.unit),
            None => ["in", "gives"].iter().find_map(|key| super::circuit::load_unit(within(key)?)),
        };
        return output.map_or(own, |output| unit::find(own?.kind, output));
    }
    unit::candidates(output.or_else(|| text("reads"))?).next()
}

/// A weight in `combine`, where it is a plain number.
fn weight(value: &Value) -> Option<f64> {
    match value {
        Value::Text(text) | Value::Number(text) => {
            super::quantity::parse(&text.replace('_', ""), &[Kind::Number]).ok().map(|q| q.value)
        }
        _ => None,
    }
}

fn is_difference(sum: f64) -> bool {
    sum.abs() < 1e-9
}

/// Whether a channel is computed from itself through `combine` and `of`.
fn depends_on_itself(draft: &Draft<'_>, drafts: &[Draft<'_>]) -> bool {
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

fn read_channel(
    draft: &Draft<'_>,
    s: &Section<'_>,
    known: &BTreeMap<&str, Known>,
    inputs: &mut Vec<ColumnRef>,
    assumed: &mut Vec<String>,
) -> Option<Channel> {
    let before = s.findings.count();
    s.entry("like");
    let decimals = if s.has("decimals") { s.whole("decimals", 0, 17).and_then(|n| u8::try_from(n).ok()) } else { None };
    let show = s.flag("show").unwrap_or(true);
    let mut stated = Vec::new();
    let (unit_name, source) = if s.has("combine") {
        combination(s, known, &mut stated)?
    } else if s.has("of") && (s.has("section") || s.has("load")) {
        load(s, known, &mut stated)?
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
    Some(Channel { name: draft.name.to_string(), unit: unit_name, decimals, show, source, stated, shared, bar: None })
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

pub(super) fn lookup(
    s: &Section<'_>,
    known: &BTreeMap<&str, Known>,
    name: &str,
    span: core::ops::Range<usize>,
) -> Option<Known> {
    if let Some(found) = known.get(name) {
        return Some(*found);
    }
    let near = nearest(name, known.keys().copied()).map_or_else(String::new, |n| format!("; did you mean '{n}'?"));
    s.say(span, format!("there is no channel '{name}'{near}"));
    None
}

fn combination(s: &Section<'_>, known: &BTreeMap<&str, Known>, stated: &mut Vec<Stated>) -> Option<(String, Source)> {
    let section = s.section("combine")?;
    let output = s.text("output");
    let mut terms = Vec::new();
    let mut units = Vec::new();
    for entry in &section.table.entries {
        let read = section.quantity(&entry.key, &[Kind::Number]);
        let found = lookup(s, known, &entry.key, entry.key_span.clone());
        let (Some(read), Some(found)) = (read, found) else { continue };
        if let Some(uncertainty) = read.quantity.uncertainty {
            stated.push(Stated {
                key: section.key_path(&entry.key),
                value: read.quantity.value,
                text: read.text.clone(),
                uncertainty,
            });
        }
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
    if let Some((unit, entry)) = units.iter().zip(&section.table.entries).find(|(u, _)| u.kind != first.kind) {
        s.say(
            entry.key_span.clone(),
            format!(
                "combine: '{}' gives {}, but the first gives {}",
                entry.key,
                unit.kind.expected(),
                first.kind.expected()
            ),
        );
        return None;
    }
    let sum: f64 = terms.iter().map(|(_, w)| w).sum();
    if first.kind == Kind::Celsius {
        if units.iter().any(|u| u != first) {
            let each: Vec<String> =
                section.table.entries.iter().zip(&units).map(|(e, u)| format!("{} {}", e.key, u.name)).collect();
            s.say(
                section.span.clone(),
                format!("combine: temperatures must have one unit before they are combined: {}", each.join(", ")),
            );
            return None;
        }
        if is_difference(sum) {
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
pub(super) fn between(from: &Unit, to: &Unit) -> f64 {
    if from == to {
        return 1.0;
    }
    by_power_of_ten(from.factor / to.factor, i32::from(from.exponent) - i32::from(to.exponent))
}

/// By one multiplication or division with an exact power of ten.
pub(super) fn by_power_of_ten(value: f64, power: i32) -> f64 {
    let ten: f64 = format!("1e{}", power.unsigned_abs()).parse().unwrap_or(f64::NAN);
    if power < 0 { value / ten } else { value * ten }
}

fn stress(s: &Section<'_>, known: &BTreeMap<&str, Known>, stated: &mut Vec<Stated>) -> Option<(String, Source)> {
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
        if !s.has("material") {
            s.lack("material", "stress needs a modulus, as in material = { modulus = \"205 GPa\" }");
        }
        return None;
    };
    material.quantity("poisson", &[Kind::Number]);
    let Some(modulus) = material.quantity("modulus", &[Kind::Pascals]) else {
        if !material.has("modulus") {
            material.lack("modulus", "the modulus of elasticity, as in \"205 GPa\"");
        }
        return None;
    };
    let (modulus, text) = (modulus.quantity, modulus.text);
    if modulus.value <= 0.0 {
        s.say(material.span.clone(), "material.modulus must be above zero");
        return None;
    }
    if let Some(uncertainty) = modulus.uncertainty {
        stated.push(Stated { key: "material.modulus".into(), value: modulus.value, text, uncertainty });
    }
    // σ = E e, in units of the output per unit of the strain
    let plain = crate::strain::uniaxial_stress(modulus.value, 1.0);
    let power = i32::from(from.exponent) - i32::from(output.exponent);
    let factor = by_power_of_ten(plain, power) * from.factor / output.factor;
    Some((output.name.into(), Source::Stress { of: found.index, loading: None, factor }))
}

/// Axial force, bending moment or torque of a bar, from a strain channel.
fn load(s: &Section<'_>, known: &BTreeMap<&str, Known>, stated: &mut Vec<Stated>) -> Option<(String, Source)> {
    let (name, span) = s.text("of")?;
    let found = lookup(s, known, name, span.clone())?;
    let from = found.unit?;
    if !s.has("load") {
        s.lack("load", "\"axial\", \"bending\" or \"torsion\"");
        return None;
    }
    let loading =
        s.choice("load", &[("axial", Loading::Axial), ("bending", Loading::Bending), ("torsion", Loading::Torsion)])?;
    let (wanted, given) = match loading {
        Loading::Torsion => (Kind::NewtonMetres, Kind::ShearStrain),
        Loading::Bending => (Kind::NewtonMetres, Kind::Strain),
        _ => (Kind::Newtons, Kind::Strain),
    };
    if from.kind != given {
        s.say(
            span,
            format!(
                "of = '{name}': this load needs {}, and the channel gives {}",
                given.expected(),
                from.kind.expected()
            ),
        );
        return None;
    }
    let output = match s.text("output") {
        None => unit::find(wanted, if wanted == Kind::Newtons { "kN" } else { "N m" })?,
        Some((text, span)) => match unit::find(wanted, text) {
            Some(unit) => unit,
            None => {
                s.say(span, format!("output is '{text}'; expected {}", wanted.expected()));
                return None;
            }
        },
    };
    if !s.has("section") {
        s.lack("section", "the section of the bar, as in { diameter = \"40 mm\" }");
        return None;
    }
    let shape = s.section("section")?;
    // a dimension or constant of a table, with its uncertainty
    let mut stated_in = |table: &Section<'_>, key: &str, kind: Kind, what: &str| {
        if !table.has(key) {
            table.lack(key, what);
            return None;
        }
        let read = table.quantity(key, &[kind])?;
        if let Some(uncertainty) = read.quantity.uncertainty {
            let (value, text) = (read.quantity.value, read.text);
            stated.push(Stated { key: table.key_path(key), value, text, uncertainty });
        }
        Some(read.quantity.value)
    };
    let section = match (shape.has("diameter"), shape.has("width") || shape.has("height"), shape.has("area")) {
        (true, false, false) => {
            let diameter = stated_in(&shape, "diameter", Kind::Metres, "")?;
            let bore = if shape.has("bore") { stated_in(&shape, "bore", Kind::Metres, "")? } else { 0.0 };
            BarSection::Round { diameter, bore }
        }
        (false, true, false) => BarSection::Rectangular {
            width: stated_in(&shape, "width", Kind::Metres, "the width, along the axis of bending")?,
            height: stated_in(&shape, "height", Kind::Metres, "the height, in the plane of bending")?,
        },
        (false, false, true) => BarSection::Area { area: stated_in(&shape, "area", Kind::SquareMetres, "")? },
        _ => {
            s.say(shape.span.clone(), "section is { diameter, bore }, { width, height } or { area }");
            return None;
        }
    };
    let Some(material) = s.section("material") else {
        if !s.has("material") {
            s.lack("material", "a load needs a modulus, as in material = { modulus = \"205 GPa\", poisson = 0.29 }");
        }
        return None;
    };
    let modulus = stated_in(&material, "modulus", Kind::Pascals, "the modulus of elasticity, as in \"205 GPa\"")?;
    let poisson = if material.has("poisson") || loading == Loading::Torsion {
        stated_in(&material, "poisson", Kind::Number, "Poisson's ratio, which torsion needs")?
    } else {
        0.0
    };
    let elastic = match Material::new(modulus, poisson) {
        Ok(elastic) => elastic,
        Err(error) => {
            s.say(material.span.clone(), format!("material: {error}"));
            return None;
        }
    };
    match section.load_per_strain(loading, &elastic) {
        Ok(plain) => {
            let power = i32::from(from.exponent) - i32::from(output.exponent);
            let factor = by_power_of_ten(plain, power) * from.factor / output.factor;
            Some((output.name.into(), Source::Stress { of: found.index, loading: Some(loading), factor }))
        }
        Err(error) => {
            s.say(shape.span.clone(), format!("section: {error}"));
            None
        }
    }
}

fn segments(
    s: &Section<'_>,
    known: &BTreeMap<&str, Known>,
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
        // the channel's own keys without its changes; every change goes on from the one before
        let mut table = Table { entries: s.table.entries.iter().filter(|e| e.key != "change").cloned().collect() };
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
            let changed = Table { entries: own.entries.iter().filter(|e| e.key != "from").cloned().collect() };
            if changed.entries.is_empty() {
                place.say(span, "this change has no other key: nothing changes");
                return None;
            }
            let changed_zero = changed.has("zero");
            table = changed.over(&table, "");
            let section = Section { table: &table, path: String::new(), span, findings: s.findings };
            let mut silent = Vec::new();
            let circuit = Circuit::read(&section, known, inputs, &mut silent)?;
            if circuit.unit != unit_name {
                section.say(section.span.clone(), "a change cannot give the channel another unit");
                return None;
            }
            let mut segment = Segment { from: Some(Moment::unplaced(from)), ..circuit.segment };
            // a zero that the change states is read from that moment on; one it goes on with, where it was
            if let ZeroSource::Rows(rows) = segment.zero {
                if changed_zero {
                    segment.zero = ZeroSource::RowsFrom { from: Moment::unplaced(from), rows };
                } else if let Some(before) = out.last() {
                    segment.zero = before.zero.clone();
                }
            }
            out.push(segment);
        }
    }
    if out.is_empty() { None } else { Some((unit_name, out)) }
}

/// Reads where a temperature comes from: a value, or a channel.
pub(super) fn side(
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
pub(super) fn side_of_text(
    s: &Section<'_>,
    path: &str,
    text: &str,
    span: core::ops::Range<usize>,
    known: &BTreeMap<&str, Known>,
    assumed: &mut Vec<String>,
) -> Option<Result<Read, Side>> {
    match super::quantity::parse(text, &[Kind::Celsius]) {
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

//! `[channel.*]`: which channels there are and how they feed one another.

mod change;
mod derived;
mod drafts;
mod side;

use std::collections::BTreeMap;
use std::format;
use std::string::{String, ToString};
use std::vec::Vec;

pub(super) use derived::{between, by_power_of_ten};
pub(super) use drafts::is_odd;
use drafts::{Draft, depends_on_itself, drafts, output_unit};
pub(super) use side::{side, side_of_text};

use super::node::Section;
use super::unit::Unit;
use super::{Sheet, nearest, recording, rosette, table_of};
use crate::measurement::{Channel, ColumnRef, Measurement, MeasurementError, Source};

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
    let mut reported = Vec::new();
    for draft in &drafts {
        let mut said = Vec::new();
        let before = root.findings.said();
        let section = Section {
            table: &draft.table,
            path: String::new(),
            span: draft.key.key_span.clone(),
            findings: root.findings,
        };
        if let Some(channel) = read_channel(draft, &section, &known, &mut inputs, &mut said) {
            let difference = matches!(channel.source, Source::Combination(_)) && channel.unit == "K";
            reported.push(super::reported::read(&section, &channel.unit, difference));
            channels.push(channel);
        }
        root.findings.blame(before, draft.name, &draft.key.key_span);
        assumed.push(said);
    }
    channels.extend(rosette::read(root, &known, &mut assumed, &mut reported));
    if root.findings.count() > 0 {
        return None;
    }
    match Measurement::new(title, inputs, channels) {
        Ok(measurement) => {
            check_chains(&measurement, &drafts, root);
            Some(Sheet { measurement, layout, keep, assumed, reported, notes: Vec::new() })
        }
        Err(error) => {
            let name = match &error {
                MeasurementError::Circle { channel }
                | MeasurementError::LateSide { channel, .. }
                | MeasurementError::Chain { channel, .. }
                | MeasurementError::NoZero { channel, .. }
                | MeasurementError::ShuntedZero { channel, .. }
                | MeasurementError::Again { channel, .. }
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
                let place = place_of(&error, draft);
                // of common keys of many channels the row of the list is the place
                let own = draft.key.key_span.clone();
                let elsewhere = root.findings.is_listed(&own) && !root.findings.is_listed(&place);
                let place = if elsewhere { own } else { place };
                root.say(place, format!("channel '{}': {error}", channel.name));
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
        _ if words.contains("cannot be extrapolated") => &["extrapolate"],
        _ if words.contains("warm") || words.contains("self-heating") => &["self_heating"],
        _ if words.contains("metal") => &["metal"],
        _ if words.contains("platinum") || words.contains("deviation") || words.contains("triple point") => {
            &["platinum"]
        }
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
        derived::combination(s, known, &mut stated)?
    } else if s.has("of") && (s.has("section") || s.has("load")) {
        derived::load(s, known, &mut stated)?
    } else if s.has("of") {
        derived::stress(s, known, &mut stated)?
    } else {
        let (unit_name, segments) = change::segments(s, known, inputs, assumed)?;
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

pub(super) fn lookup(
    s: &Section<'_>,
    known: &BTreeMap<&str, Known>,
    name: &str,
    span: core::ops::Range<usize>,
) -> Option<Known> {
    if let Some(found) = known.get(name) {
        return Some(*found);
    }
    if name.split_once(' ').is_some_and(|(_, give)| rosette::gives(give)) {
        let channels: Vec<&str> = known.keys().copied().collect();
        s.say(
            span,
            format!(
                "'{name}' is a result of a rosette, and no channel is computed from one; here stand the channels of the sheet ({}), and what the rosette itself can give, stresses too, stands in its give",
                channels.join(", ")
            ),
        );
        return None;
    }
    let near = nearest(name, known.keys().copied()).map_or_else(String::new, |n| format!("; did you mean '{n}'?"));
    s.say(span, format!("there is no channel '{name}'{near}"));
    None
}

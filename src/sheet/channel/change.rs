//! `[[channel.NAME.change]]`: the stretches of a channel, each with its own keys.

use std::collections::BTreeMap;
use std::string::String;
use std::vec::Vec;

use super::Known;
use crate::measurement::{ColumnRef, Segment, ZeroSource};
use crate::sheet::circuit::Circuit;
use crate::sheet::node::{Section, Table, Value};
use crate::sheet::order::rising;

pub(super) fn segments(
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
            if let Some(before) = out.last().and_then(|segment| segment.from.as_ref())
                && !rising(&place, &before.text, (from, span.clone()), false)
            {
                return None;
            }
            let moment = place.moment((from, span.clone()));
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
            let mut segment = Segment { from: Some(moment.clone()), ..circuit.segment };
            // a zero that the change states is read from that moment on; one it goes on with, where it was
            if let ZeroSource::Rows(rows) = segment.zero
                && segment.zero_file.is_none()
            {
                if changed_zero {
                    segment.zero = ZeroSource::RowsFrom { from: moment, rows };
                } else if let Some(before) = out.last() {
                    segment.zero = before.zero.clone();
                }
            }
            out.push(segment);
        }
    }
    if out.len() > 1 && out.iter().any(|segment| segment.again.is_some()) {
        let span = s.entry("change").map_or(s.span.clone(), |e| e.key_span.clone());
        s.say(span, "a channel that changes in time has no second zero: zero.again would compare two circuits");
        return None;
    }
    if out.is_empty() { None } else { Some((unit_name, out)) }
}

//! `list = "sensors.csv"`: channels from a table whose headers are keys of a channel.

use core::ops::Range;
use std::format;
use std::string::{String, ToString};
use std::vec::Vec;

use toml::de::DeTable;

use super::error::Source;
use super::known;
use super::layout::Decimal;
use super::nearest;
use super::node::{Entry, Findings, Node, Section, Table, Value};

/// What gives the list that a sheet names: its name for messages and its bytes, or in words why there is none.
pub type OpenList<'o> = dyn FnMut(&str) -> Result<(String, Vec<u8>), String> + 'o;

/// A cell of the list.
struct Cell {
    text: String,
    /// Bytes of the list.
    span: Range<usize>,
}

/// A column of the list: the key that its header is, and the unit in brackets behind it.
struct Key {
    path: Vec<String>,
    unit: Option<String>,
}

/// Puts the channels of the list before those of the sheet; returns the list, for messages. Its bytes count from `base`.
pub(super) fn apply(root: &mut Table, findings: &Findings, base: usize, open: &mut OpenList<'_>) -> Option<Source> {
    let (file, decimal, span) = stated(root, findings)?;
    let (name, bytes) = match open(&file) {
        Ok(opened) => opened,
        Err(reason) => {
            findings.say(span, format!("list = '{file}': {reason}"));
            return None;
        }
    };
    let text = match String::from_utf8(bytes) {
        Ok(text) => text,
        Err(error) => encoding_rs::WINDOWS_1252.decode_without_bom_handling(error.as_bytes()).0.into_owned(),
    };
    let body = if text.starts_with('\u{feff}') { 3 } else { 0 };
    let rows = cells(&text, body);
    let mut source = Source { file: name, base, places: Vec::new(), text };
    for (line, row) in &rows {
        source.places.extend(row.iter().enumerate().map(|(i, cell)| (cell.span.start, *line, i + 1)));
    }
    let mut rows = rows.into_iter();
    let Some((_, headers)) = rows.next() else {
        findings
            .say(span, format!("list = '{file}': the list is empty; its first line is keys, as in name,like,column"));
        return Some(source);
    };
    findings.begin_list(base);
    let at = |cell: &Cell| base + cell.span.start..base + cell.span.end;
    let keys = keys(&headers, &at, findings);
    let Some(name_at) = headers.iter().position(|h| h.text.trim() == "name") else {
        let place = headers.first().map_or(base..base, at);
        findings.say(place, "the list has no column 'name': each row is a channel and needs one");
        return Some(source);
    };
    let mut channels: Vec<Entry> = Vec::new();
    let mut lines: Vec<u64> = Vec::new();
    // the first cell with a decimal comma that is not stated, and how many there are
    let mut commas: Option<(Range<usize>, String, u64)> = None;
    for (line, row) in rows {
        if row.iter().all(|cell| cell.text.trim().is_empty()) {
            continue;
        }
        let named = row.get(name_at).filter(|cell| !cell.text.trim().is_empty());
        let Some(named) = named else {
            let place = row.first().map_or(base..base, at);
            findings.say(place, "this row has no name: a channel needs one");
            continue;
        };
        if let Some(cell) = row.iter().skip(headers.len()).find(|cell| !cell.text.trim().is_empty()) {
            findings.say(at(cell), format!("value '{}': there is no header above it", cell.text.trim()));
            continue;
        }
        let channel = named.text.trim().to_string();
        if let Some(k) = channels.iter().position(|c| c.key == channel) {
            let first = lines.get(k).copied().unwrap_or_default();
            findings.say(at(named), format!("channel '{channel}' stands twice: also in line {first}"));
            continue;
        }
        let mut table = Table::default();
        for (key, cell) in keys.iter().zip(&row) {
            let Some(key) = key else { continue };
            if cell.text.trim().is_empty() {
                continue;
            }
            let mut decimal = decimal;
            if decimal == Decimal::Point
                && key.path != ["column"]
                && key.path != ["like"]
                && has_comma(cell.text.trim())
            {
                decimal = Decimal::Comma;
                let said = || (at(cell), format!("{} is '{}'", key.path.join("."), cell.text.trim()), 0);
                commas.get_or_insert_with(said).2 += 1;
            }
            match value(key, cell.text.trim(), decimal, &at(cell)) {
                Ok(value) => insert(&mut table, &key.path, Node { span: at(cell), value }, &at(cell)),
                Err(reason) => {
                    findings.say(at(cell), format!("{} is '{}': {reason}", key.path.join("."), cell.text.trim()))
                }
            }
        }
        lines.push(line);
        channels.push(Entry::new(&channel, at(named), Node { span: at(named), value: Value::Table(table) }));
    }
    if let Some((place, said, count)) = commas {
        let more = if count > 1 { format!(", the first of {count}") } else { String::new() };
        findings.say(
            place,
            format!(
                "{said}, with a decimal comma{more}: state in the sheet list = {{ file = \"{file}\", decimal = \",\" }}, or write points"
            ),
        );
    }
    if channels.is_empty() && findings.count() == 0 {
        findings.say(span, format!("list = '{file}': the list has no row, so it gives no channel"));
    }
    join(root, channels, findings);
    Some(source)
}

/// What the sheet says of its list.
fn stated(root: &Table, findings: &Findings) -> Option<(String, Decimal, Range<usize>)> {
    let entry = root.peek("list")?;
    let section = Section { table: root, path: String::new(), span: entry.key_span.clone(), findings };
    if let Value::Table(_) = &entry.node.value {
        let section = section.section("list")?;
        let Some((file, span)) = section.text("file") else {
            if !section.has("file") {
                section.lack("file", "the list, as in { file = \"sensors.csv\", decimal = \",\" }");
            }
            return None;
        };
        let marks = [(".", Decimal::Point), (",", Decimal::Comma)];
        let decimal = if section.has("decimal") { section.choice("decimal", &marks)? } else { Decimal::Point };
        return Some((file.to_string(), decimal, span));
    }
    let (file, span) = section.text("list")?;
    Some((file.to_string(), Decimal::Point, span))
}

/// Puts the channels of the list before those of the sheet.
fn join(root: &mut Table, channels: Vec<Entry>, findings: &Findings) {
    if let Some(own) = root.entries.iter_mut().find(|e| e.key == "channel") {
        if let Value::Table(table) = &mut own.node.value {
            for channel in channels.iter().filter(|c| table.has(&c.key)) {
                findings.say(
                    channel.key_span.clone(),
                    format!("channel '{}' stands twice: also in the sheet, as [channel.{}]", channel.key, channel.key),
                );
            }
            table.entries.splice(0..0, channels);
        }
    } else if let Some(span) = channels.first().map(|c| c.key_span.clone()) {
        let node = Node { span: span.clone(), value: Value::Table(Table { entries: channels }) };
        root.entries.push(Entry::new("channel", span, node));
    }
}

/// The keys that the headers are; `None` for `name`, for a blank header, and for what is none.
fn keys(headers: &[Cell], at: &dyn Fn(&Cell) -> Range<usize>, findings: &Findings) -> Vec<Option<Key>> {
    let mut out: Vec<Option<Key>> = Vec::new();
    let mut seen: Vec<&str> = Vec::new();
    for header in headers {
        let text = header.text.trim();
        let (path, unit) = match text.split_once(['(', '[']) {
            Some((path, unit)) => (path.trim(), Some(unit.trim_end_matches([')', ']']).trim())),
            None => (text, None),
        };
        out.push(None);
        if path.is_empty() {
            continue;
        }
        let inner = |other: &&str| {
            other
                .strip_prefix(path)
                .or_else(|| path.strip_prefix(*other))
                .is_some_and(|r| r.is_empty() || r.starts_with('.'))
        };
        if let Some(other) = seen.iter().find(|other| inner(other)) {
            findings.say(at(header), format!("key '{path}' stands beside '{other}': one of them says it already"));
            continue;
        }
        seen.push(path);
        if path == "name" {
            continue;
        }
        let parts: Vec<&str> = path.split('.').collect();
        if !known::is_channel_key(&parts) {
            if parts.first() == Some(&"change") {
                findings.say(
                    at(header),
                    "a channel that changes in time stands in the sheet, with its [[channel.NAME.change]]",
                );
                continue;
            }
            let known = known::channel_keys();
            let last = |p: &&String| p.rsplit('.').next() == parts.last().copied();
            let near =
                nearest(path, known.iter().map(String::as_str)).or_else(|| known.iter().find(last).map(String::as_str));
            let more = match near {
                Some(near) => {
                    findings.mean(near.to_string());
                    format!("; did you mean '{near}'?")
                }
                None => ": headers are name, and keys of a channel such as like, column, leads.length".to_string(),
            };
            findings.say(at(header), format!("unknown key '{path}'{more}"));
            continue;
        }
        let path = parts.into_iter().map(ToString::to_string).collect();
        if let Some(slot) = out.last_mut() {
            *slot = Some(Key { path, unit: unit.map(ToString::to_string) });
        }
    }
    out
}

/// What a cell says: TOML where it has its marks, a number, true or false, otherwise text.
fn value(key: &Key, text: &str, decimal: Decimal, span: &Range<usize>) -> Result<Value, String> {
    if key.path == ["like"] {
        return Ok(Value::Text(text.to_string()));
    }
    if text.starts_with(['[', '{', '"', '\'']) {
        let line = format!("x = {text}");
        return match DeTable::parse(&line) {
            Ok(tree) => {
                let table = Table::new(tree.get_ref());
                let mut node = table.entries.into_iter().next().ok_or("it says nothing")?.node;
                node.move_to(span);
                Ok(node.value)
            }
            Err(error) => Err(format!("it begins like a list, table or quoted text, but {}", error.message())),
        };
    }
    let pointed = match decimal {
        Decimal::Point => text.to_string(),
        Decimal::Comma => with_points(text),
    };
    Ok(match pointed.as_str() {
        "true" => Value::Flag(true),
        "false" => Value::Flag(false),
        number if is_number(number) => match &key.unit {
            Some(unit) => Value::Text(format!("{number} {unit}")),
            None => Value::Number(number.to_string()),
        },
        other => Value::Text(if key.path == ["column"] { text.to_string() } else { other.to_string() }),
    })
}

/// Whether text begins with a number that has a decimal comma, as `5,0` and `12,5 m` do.
fn has_comma(text: &str) -> bool {
    let first = text.split(' ').next().unwrap_or(text);
    first.matches(',').count() == 1 && is_number(&with_points(first))
}

fn is_number(text: &str) -> bool {
    text.bytes().all(|b| b.is_ascii_digit() || matches!(b, b'+' | b'-' | b'.' | b'e' | b'E'))
        && text.parse::<f64>().is_ok()
}

/// The text with a point for every comma between two digits.
fn with_points(text: &str) -> String {
    let bytes = text.as_bytes();
    let digit = |i: Option<usize>| i.and_then(|i| bytes.get(i)).is_some_and(u8::is_ascii_digit);
    let point = |(i, c): (usize, char)| if c == ',' && digit(i.checked_sub(1)) && digit(Some(i + 1)) { '.' } else { c };
    text.char_indices().map(point).collect()
}

/// Puts a value into the table that its path says, making those on the way.
fn insert(table: &mut Table, path: &[String], node: Node, span: &Range<usize>) {
    let Some((first, rest)) = path.split_first() else { return };
    if rest.is_empty() {
        table.entries.push(Entry::new(first, span.clone(), node));
        return;
    }
    if !table.has(first) {
        let inner = Node { span: span.clone(), value: Value::Table(Table::default()) };
        table.entries.push(Entry::new(first, span.clone(), inner));
    }
    if let Some(Value::Table(inner)) = table.entries.iter_mut().find(|e| e.key == *first).map(|e| &mut e.node.value) {
        insert(inner, rest, node, span);
    }
}

/// The rows of the list with their lines, without blank lines and comments; cells as RFC 4180 writes them.
fn cells(text: &str, start: usize) -> Vec<(u64, Vec<Cell>)> {
    let bytes = text.as_bytes();
    let mut out: Vec<(u64, Vec<Cell>)> = Vec::new();
    let (mut at, mut line) = (start, 1u64);
    let mut separator = None;
    while at < bytes.len() {
        let rest = text.get(at..).unwrap_or_default();
        let end = rest.find(['\n', '\r']).map_or(bytes.len(), |i| at + i);
        let this = text.get(at..end).unwrap_or_default();
        if this.trim().is_empty() || this.starts_with('#') {
            at = after_line(bytes, end);
            line += 1;
            continue;
        }
        // the headers hold no separator of another kind
        let count = |c: char| this.matches(c).count();
        let separator = *separator.get_or_insert_with(|| {
            let most = [';', '\t', ','].into_iter().max_by_key(|c| count(*c));
            most.map_or(b',', |c| c as u8)
        });
        let first_line = line;
        let mut row = Vec::new();
        loop {
            let (cell, next) = one_cell(text, at, separator);
            line += cell.text.matches('\n').count() as u64;
            row.push(cell);
            at = next;
            match bytes.get(at) {
                Some(&b) if b == separator => at += 1,
                _ => break,
            }
        }
        at = after_line(bytes, at);
        line += 1;
        out.push((first_line, row));
    }
    out
}

/// The byte after the line end that stands here.
fn after_line(bytes: &[u8], at: usize) -> usize {
    match (bytes.get(at), bytes.get(at + 1)) {
        (Some(b'\r'), Some(b'\n')) => at + 2,
        (Some(_), _) => at + 1,
        (None, _) => at,
    }
}

/// The cell that begins here, and the separator or line end behind it.
fn one_cell(text: &str, start: usize, separator: u8) -> (Cell, usize) {
    let bytes = text.as_bytes();
    let (mut at, mut out) = (start, Vec::new());
    if bytes.get(at) == Some(&b'"') {
        at += 1;
        while let Some(&byte) = bytes.get(at) {
            match (byte, bytes.get(at + 1)) {
                (b'"', Some(b'"')) => {
                    out.push(b'"');
                    at += 2;
                }
                (b'"', _) => {
                    at += 1;
                    break;
                }
                _ => {
                    out.push(byte);
                    at += 1;
                }
            }
        }
    }
    while let Some(&byte) = bytes.get(at).filter(|b| **b != separator && !matches!(**b, b'\n' | b'\r')) {
        out.push(byte);
        at += 1;
    }
    (Cell { text: String::from_utf8_lossy(&out).into_owned(), span: start..at }, at)
}

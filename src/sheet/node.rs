//! The sheet as a tree that remembers where each key stands and which keys were read.

use core::cell::{Cell, RefCell};
use core::ops::Range;
use std::borrow::ToOwned;
use std::format;
use std::rc::Rc;
use std::string::{String, ToString};
use std::vec::Vec;

use toml::Spanned;
use toml::de::{DeTable, DeValue};

use super::error::{Diagnostic, Source};
use super::quantity::{self, Quantity};
use super::unit::Kind;
use crate::measurement::Moment;

/// A value with its place.
#[derive(Clone, Debug)]
pub(super) struct Node {
    pub(super) span: Range<usize>,
    pub(super) value: Value,
}

#[derive(Clone, Debug)]
pub(super) enum Value {
    Text(String),
    /// As written, so that it is rounded once.
    Number(String),
    Flag(bool),
    List(Vec<Node>),
    Table(Table),
}

/// A table: its keys in order, each with its place and whether it was read.
#[derive(Clone, Debug, Default)]
pub(super) struct Table {
    pub(super) entries: Vec<Entry>,
}

#[derive(Clone, Debug)]
pub(super) struct Entry {
    pub(super) key: String,
    pub(super) key_span: Range<usize>,
    pub(super) node: Node,
    /// Shared between the copies that `like` makes: one reading counts for the common key.
    used: Rc<Cell<bool>>,
}

/// Keys that say the same thing in different ways, by the table they stand in.
const ALTERNATIVES: &[(&str, &[&[&str]])] = &[
    ("zero", &[&["at"], &["rows"], &["to"]]),
    ("zero", &[&["at"], &["file"]]),
    ("again", &[&["rows"], &["from", "to"]]),
    ("leads", &[&["each"], &["length", "area", "awg", "material", "resistivity"]]),
    ("leads", &[&["area"], &["awg"]]),
    ("leads", &[&["material"], &["resistivity"]]),
    ("amplifier", &[&["gain"], &["difference"]]),
    ("circuit", &[&["divider", "sensor", "input_resistance"], &["current"], &["reference"]]),
    ("circuit", &[&["supply"], &["current"]]),
    ("transducer", &[&["rated", "capacity"], &["polynomial", "in", "gives", "range"]]),
    ("thermal_output", &[&["coefficients", "range"], &["points"]]),
    ("section", &[&["diameter", "bore"], &["width", "height"], &["area"]]),
    (
        "platinum",
        &[
            &["standard", "class", "resistor"],
            &["a", "b", "c"],
            &["alpha", "delta", "beta"],
            &["triple_point", "subrange", "deviation", "aluminium_ratio"],
        ],
    ),
    ("platinum", &[&["r0"], &["triple_point"]]),
    ("thermistor", &[&["r25", "beta"], &["steinhart_hart"], &["points"], &["ratio_terms"], &["reciprocal_terms"]]),
];

impl Entry {
    pub(super) fn new(key: &str, key_span: Range<usize>, node: Node) -> Self {
        Self { key: key.to_string(), key_span, node, used: Rc::new(Cell::new(false)) }
    }

    fn mark_used(&self) {
        self.used.set(true);
        self.node.mark_used();
    }
}

impl Node {
    pub(super) fn new(value: &Spanned<DeValue<'_>>) -> Self {
        let kind = match value.get_ref() {
            DeValue::String(text) => Value::Text(text.to_string()),
            DeValue::Integer(n) => Value::Number(n.to_string()),
            DeValue::Float(n) => Value::Number(n.to_string()),
            DeValue::Boolean(flag) => Value::Flag(*flag),
            DeValue::Datetime(moment) => Value::Text(moment.to_string()),
            DeValue::Array(list) => Value::List(list.iter().map(Self::new).collect()),
            DeValue::Table(table) => Value::Table(Table::new(table)),
        };
        Self { span: value.span(), value: kind }
    }

    /// Lets it and all within stand at one place.
    pub(super) fn move_to(&mut self, span: &Range<usize>) {
        self.span = span.clone();
        match &mut self.value {
            Value::List(list) => list.iter_mut().for_each(|node| node.move_to(span)),
            Value::Table(table) => {
                for entry in &mut table.entries {
                    entry.key_span = span.clone();
                    entry.node.move_to(span);
                }
            }
            Value::Text(_) | Value::Number(_) | Value::Flag(_) => {}
        }
    }

    pub(super) const fn kind(&self) -> &'static str {
        match self.value {
            Value::Text(_) => "text",
            Value::Number(_) => "a number",
            Value::Flag(_) => "true or false",
            Value::List(_) => "a list",
            Value::Table(_) => "a table",
        }
    }

    fn mark_used(&self) {
        match &self.value {
            Value::Table(table) => table.mark_used(),
            Value::List(list) => list.iter().for_each(Self::mark_used),
            Value::Text(_) | Value::Number(_) | Value::Flag(_) => {}
        }
    }
}

impl Table {
    pub(super) fn new(table: &DeTable<'_>) -> Self {
        let entries =
            table.iter().map(|(key, value)| Entry::new(key.get_ref(), key.span(), Node::new(value))).collect();
        Self { entries }
    }

    /// Looks at a key without reading it.
    pub(super) fn peek(&self, key: &str) -> Option<&Entry> {
        self.entries.iter().find(|e| e.key == key)
    }

    /// Reads a key.
    pub(super) fn take(&self, key: &str) -> Option<&Entry> {
        let entry = self.peek(key)?;
        entry.used.set(true);
        Some(entry)
    }

    pub(super) fn has(&self, key: &str) -> bool {
        self.peek(key).is_some()
    }

    /// Returns this table over `common`: merged key by key at every depth, its own keys win. `name` is the key that the
    /// table stands under; of keys that say the same thing in different ways ([`ALTERNATIVES`]) its own replace the others.
    pub(super) fn over(&self, common: &Self, name: &str) -> Self {
        let mut entries = common.entries.clone();
        for (_, ways) in ALTERNATIVES.iter().filter(|(table, _)| *table == name) {
            let own = |way: &[&str]| way.iter().any(|key| self.has(key));
            if ways.iter().any(|way| own(way)) {
                for key in ways.iter().filter(|way| !own(way)).flat_map(|way| way.iter()) {
                    // it has served as what these keys replace
                    if let Some(at) = entries.iter().position(|e| e.key == *key) {
                        entries.remove(at).mark_used();
                    }
                }
            }
        }
        if name == "zero"
            && (self.has("at") || self.has("rows"))
            && common.has("to")
            && let Some(at) = entries.iter().position(|e| e.key == "from")
        {
            // with `to` beside it this is the start of a window, not a meaning
            entries.remove(at).mark_used();
        }
        for own in &self.entries {
            match entries.iter_mut().find(|e| e.key == own.key) {
                Some(entry) => {
                    let merged = match (&own.node.value, &entry.node.value) {
                        (Value::Table(mine), Value::Table(theirs)) => {
                            Node { span: own.node.span.clone(), value: Value::Table(mine.over(theirs, &own.key)) }
                        }
                        _ => own.node.clone(),
                    };
                    // the common key has served: its value, or the keys under it, stand in the merged table
                    entry.used.set(true);
                    *entry = Entry { node: merged, ..own.clone() };
                }
                None => entries.push(own.clone()),
            }
        }
        Self { entries }
    }

    pub(super) fn mark_used(&self) {
        self.entries.iter().for_each(Entry::mark_used);
    }

    /// Keys that nobody has read, with their paths.
    pub(super) fn unused(&self, path: &str, out: &mut Vec<(String, Range<usize>)>) {
        for entry in &self.entries {
            let here = if path.is_empty() { entry.key.clone() } else { format!("{path}.{}", entry.key) };
            if !entry.used.get() {
                out.push((here, entry.key_span.clone()));
                continue;
            }
            match &entry.node.value {
                Value::Table(table) => table.unused(&here, out),
                Value::List(list) => {
                    for table in list.iter().filter_map(|node| super::table_of(&node.value)) {
                        table.unused(&here, out);
                    }
                }
                Value::Text(_) | Value::Number(_) | Value::Flag(_) => {}
            }
        }
    }
}

/// Collects what is wrong while a sheet is read, so that all of it can be told at once.
#[derive(Default)]
pub(super) struct Findings {
    list: RefCell<Vec<Diagnostic>>,
    /// The sheet, and then its list.
    sources: RefCell<Vec<Source>>,
    /// Keys that were meant where another was written: that they are missing need not be said as well.
    meant: RefCell<Vec<String>>,
    /// First byte of the list behind the sheet; 0 without one.
    list_from: Cell<usize>,
    /// What is wrong in common keys of channels of the list, with the names of these channels.
    common: RefCell<Vec<(Diagnostic, Vec<String>)>>,
}

impl Findings {
    pub(super) fn say(&self, span: Range<usize>, message: impl Into<String>) {
        self.list.borrow_mut().push(Diagnostic { span, message: message.into() });
    }

    /// Notes a text that spans are about.
    pub(super) fn know(&self, source: Source) {
        self.sources.borrow_mut().push(source);
    }

    /// Returns where this stands, `file:line:column`.
    pub(super) fn place(&self, span: &Range<usize>) -> String {
        let sources = self.sources.borrow();
        let source = sources.iter().rev().find(|s| s.base <= span.start);
        source.map_or_else(String::new, |source| {
            let (line, column) = source.place(span.start - source.base);
            format!("{}:{line}:{column}", source.file)
        })
    }

    /// Notes that an unknown key most likely means this one.
    pub(super) fn mean(&self, path: String) {
        self.meant.borrow_mut().push(path);
    }

    fn is_meant(&self, path: &str) -> bool {
        self.meant.borrow().iter().any(|m| m == path)
    }

    pub(super) fn count(&self) -> usize {
        self.list.borrow().len() + self.common.borrow().len()
    }

    /// Notes where the bytes of the list begin.
    pub(super) fn begin_list(&self, base: usize) {
        self.list_from.set(base);
    }

    /// Whether this stands in the list.
    pub(super) fn is_listed(&self, span: &Range<usize>) -> bool {
        let base = self.list_from.get();
        base > 0 && span.start >= base
    }

    /// How much has been said so far, for [`blame`](Self::blame).
    pub(super) fn said(&self) -> usize {
        self.list.borrow().len()
    }

    /// What was said of the sheet since, while a channel of the list was read, is about that channel: it is said once for all
    /// channels that it is about.
    pub(super) fn blame(&self, since: usize, channel: &str, key_span: &Range<usize>) {
        if !self.is_listed(key_span) {
            return;
        }
        let base = self.list_from.get();
        let mut list = self.list.borrow_mut();
        let kept = since.min(list.len());
        let new = list.split_off(kept);
        let mut common = self.common.borrow_mut();
        for diagnostic in new {
            if diagnostic.span.start >= base {
                list.push(diagnostic);
                continue;
            }
            match common.iter_mut().find(|(said, _)| *said == diagnostic) {
                Some((_, channels)) => channels.push(channel.to_string()),
                None => common.push((diagnostic, std::vec![channel.to_string()])),
            }
        }
    }

    pub(super) fn into_inner(self) -> Vec<Diagnostic> {
        let mut out = self.list.into_inner();
        for (Diagnostic { span, message }, mut channels) in self.common.into_inner() {
            channels.dedup();
            let first = channels.first().map_or("", String::as_str);
            let about = match channels.len() {
                0 | 1 => format!(" (channel '{first}')"),
                count => format!(" (channel '{first}' and {} more of the list)", count - 1),
            };
            out.push(Diagnostic { span, message: message + &about });
        }
        out
    }
}

/// A quantity that was read from a key.
#[derive(Clone, Debug)]
pub(super) struct Read {
    pub(super) quantity: Quantity,
    /// As written.
    pub(super) text: String,
}

/// A table being read: knows its path for messages and where to say what is wrong.
#[derive(Clone)]
pub(super) struct Section<'a> {
    pub(super) table: &'a Table,
    pub(super) path: String,
    pub(super) span: Range<usize>,
    pub(super) findings: &'a Findings,
}

impl<'a> Section<'a> {
    pub(super) fn key_path(&self, key: &str) -> String {
        if self.path.is_empty() { key.to_string() } else { format!("{}.{key}", self.path) }
    }

    pub(super) fn say(&self, span: Range<usize>, message: impl Into<String>) {
        self.findings.say(span, message);
    }

    pub(super) fn has(&self, key: &str) -> bool {
        self.table.has(key)
    }

    /// Says that a key is missing.
    pub(super) fn lack(&self, key: &str, what: &str) {
        if self.findings.is_meant(&self.key_path(key)) {
            return;
        }
        self.say(self.span.clone(), format!("{} is missing: {what}", self.key_path(key)));
    }

    fn wrong(&self, key: &str, node: &Node, expected: &str) {
        self.say(node.span.clone(), format!("{} is {}; expected {expected}", self.key_path(key), node.kind()));
    }

    pub(super) fn entry(&self, key: &str) -> Option<&'a Entry> {
        self.table.take(key)
    }

    pub(super) fn section(&self, key: &str) -> Option<Section<'a>> {
        let entry = self.entry(key)?;
        if let Value::Table(table) = &entry.node.value {
            Some(Section { table, path: self.key_path(key), span: entry.key_span.clone(), findings: self.findings })
        } else {
            self.wrong(key, &entry.node, "a table, as in { key = value }");
            None
        }
    }

    pub(super) fn text(&self, key: &str) -> Option<(&'a str, Range<usize>)> {
        let entry = self.entry(key)?;
        if let Value::Text(text) = &entry.node.value {
            Some((text, entry.node.span.clone()))
        } else {
            self.wrong(key, &entry.node, "text in quotes");
            None
        }
    }

    /// A moment as it is written here.
    pub(super) fn moment(&self, (text, span): (&str, Range<usize>)) -> Moment {
        Moment::stated(text, self.findings.place(&span))
    }

    pub(super) fn flag(&self, key: &str) -> Option<bool> {
        let entry = self.entry(key)?;
        if let Value::Flag(flag) = entry.node.value {
            Some(flag)
        } else {
            self.wrong(key, &entry.node, "true or false");
            None
        }
    }

    /// One of a few words.
    pub(super) fn choice<T: Copy>(&self, key: &str, words: &[(&str, T)]) -> Option<T> {
        let (text, span) = self.text(key)?;
        if let Some((_, value)) = words.iter().find(|(word, _)| *word == text) {
            return Some(*value);
        }
        let all: Vec<String> = words.iter().map(|(word, _)| format!("\"{word}\"")).collect();
        let near = super::nearest(text, words.iter().map(|(word, _)| *word))
            .map_or_else(String::new, |n| format!("; did you mean \"{n}\"?"));
        self.say(span, format!("{} is '{text}'; expected {}{near}", self.key_path(key), all.join(" or ")));
        None
    }

    /// A whole number from `low` to `high`.
    pub(super) fn whole(&self, key: &str, low: u64, high: u64) -> Option<u64> {
        let entry = self.entry(key)?;
        if let Value::Number(text) = &entry.node.value
            && let Ok(n) = text.replace('_', "").parse::<u64>()
            && (low..=high).contains(&n)
        {
            return Some(n);
        }
        let shown = match &entry.node.value {
            Value::Number(text) => text.clone(),
            _ => entry.node.kind().to_owned(),
        };
        let range = match (low, high) {
            (1, u64::MAX) => "above 0".to_string(),
            _ => format!("from {low} to {high}"),
        };
        self.say(
            entry.node.span.clone(),
            format!("{} is {shown}; expected a whole number {range}", self.key_path(key)),
        );
        None
    }

    /// A physical value; a bare number where a plain number is among the kinds.
    pub(super) fn quantity(&self, key: &str, kinds: &[Kind]) -> Option<Read> {
        let entry = self.entry(key)?;
        self.read(&entry.node, &self.key_path(key), kinds)
    }

    /// A list of so many physical values.
    pub(super) fn quantities(&self, key: &str, kinds: &[Kind], low: usize, high: usize) -> Option<Vec<Read>> {
        let entry = self.entry(key)?;
        let Value::List(list) = &entry.node.value else {
            self.wrong(key, &entry.node, "a list");
            return None;
        };
        if list.len() < low || list.len() > high {
            let count = if low == high { format!("{low}") } else { format!("{low} to {high}") };
            self.say(
                entry.node.span.clone(),
                format!("{} has {} values; expected {count}", self.key_path(key), list.len()),
            );
            return None;
        }
        let path = self.key_path(key);
        let read: Vec<Option<Read>> =
            list.iter().enumerate().map(|(i, node)| self.read(node, &format!("{path}[{}]", i + 1), kinds)).collect();
        read.into_iter().collect()
    }

    /// A list of rows of so many plain numbers.
    pub(super) fn rows(&self, key: &str, width: usize) -> Option<Vec<Vec<f64>>> {
        let entry = self.entry(key)?;
        let Value::List(list) = &entry.node.value else {
            self.wrong(key, &entry.node, "a list of rows, as in [[0, -31.2], [24, 0.4]]");
            return None;
        };
        let mut out = Vec::new();
        for (i, row) in list.iter().enumerate() {
            let path = format!("{}[{}]", self.key_path(key), i + 1);
            let Value::List(cells) = &row.value else {
                self.say(row.span.clone(), format!("{path} is {}; expected a row of {width} numbers", row.kind()));
                return None;
            };
            if cells.len() != width {
                self.say(row.span.clone(), format!("{path} has {} numbers; expected {width}", cells.len()));
                return None;
            }
            let read: Option<Vec<f64>> =
                cells.iter().map(|cell| self.read(cell, &path, &[Kind::Number]).map(|q| q.quantity.value)).collect();
            out.push(read?);
        }
        Some(out)
    }

    pub(super) fn read(&self, node: &Node, path: &str, kinds: &[Kind]) -> Option<Read> {
        let text = match &node.value {
            Value::Text(text) => text.clone(),
            Value::Number(text) => text.replace('_', ""),
            Value::Flag(_) | Value::List(_) | Value::Table(_) => {
                let expected: Vec<&str> = kinds.iter().map(|k| k.expected()).collect();
                self.say(node.span.clone(), format!("{path} is {}; expected {}", node.kind(), expected.join(" or ")));
                return None;
            }
        };
        match quantity::parse(&text, kinds) {
            Ok(quantity) => Some(Read { quantity, text }),
            Err(message) => {
                self.say(node.span.clone(), format!("{path}: {message}"));
                None
            }
        }
    }

    /// Texts of a list; a single text counts as a list of one.
    pub(super) fn texts(&self, key: &str) -> Option<Vec<(&'a str, Range<usize>)>> {
        let entry = self.entry(key)?;
        match &entry.node.value {
            Value::Text(text) => Some(std::vec![(text.as_str(), entry.node.span.clone())]),
            Value::List(list) => {
                let mut out = Vec::new();
                for node in list {
                    if let Value::Text(text) = &node.value {
                        out.push((text.as_str(), node.span.clone()));
                    } else {
                        self.wrong(key, node, "text in quotes");
                        return None;
                    }
                }
                Some(out)
            }
            _ => {
                self.wrong(key, &entry.node, "text, or a list of texts");
                None
            }
        }
    }
}

//! Every key there is, to suggest from.

use std::format;
use std::string::{String, ToString};
use std::vec::Vec;

use super::nearest;
use super::node::{Entry, Findings, Table, Value};

/// Keys by the table they stand in; `*` is a name that the sheet chooses.
const KEYS: &[(&str, &[&str])] = &[
    ("", &["title", "list", "recording", "common", "channel", "rosette"]),
    ("list", &["file", "decimal"]),
    (
        "recording",
        &[
            "time",
            "time_format",
            "time_zone",
            "repeated_hour",
            "interval",
            "separator",
            "decimal",
            "encoding",
            "names_line",
            "units_line",
            "first_line",
            "missing",
            "saturated",
            "comment",
            "keep",
        ],
    ),
    (
        "channel.*",
        &[
            "like",
            "column",
            "reads",
            "output",
            "decimals",
            "show",
            "shared",
            "extrapolate",
            "uncertainty",
            "resolution",
            "gauge",
            "bridge",
            "circuit",
            "converter",
            "amplifier",
            "platinum",
            "metal",
            "thermistor",
            "thermocouple",
            "self_heating",
            "thermal_output",
            "expansion",
            "temperature",
            "leads",
            "zero",
            "limits",
            "largest_strain",
            "largest_load",
            "transducer",
            "transverse",
            "shunt",
            "section",
            "load",
            "combine",
            "of",
            "material",
            "reported",
            "change",
        ],
    ),
    ("reported", super::reported::KEYS),
    ("gauge", &["resistance", "gauge_factor", "slope", "reference"]),
    (
        "bridge",
        &[
            "arms",
            "supply",
            "resistances",
            "poisson",
            "input_resistance",
            "supply_leads",
            "signal_leads",
            "temperatures",
            "sensed",
        ],
    ),
    ("supply", &["column", "reads", "reversed", "uncertainty"]),
    (
        "circuit",
        &[
            "divider",
            "sensor",
            "supply",
            "current",
            "input_resistance",
            "reference",
            "parallel",
            "series",
            "leakage",
            "reversed",
            "tap",
        ],
    ),
    ("current", &["column", "reads", "uncertainty"]),
    ("converter", &["bits", "full_scale", "coding"]),
    ("amplifier", &["gain", "offset", "difference"]),
    ("difference", &["input", "feedback", "open_loop_gain", "reference"]),
    (
        "platinum",
        &[
            "standard",
            "r0",
            "class",
            "resistor",
            "a",
            "b",
            "c",
            "alpha",
            "delta",
            "beta",
            "covariance",
            "dof",
            "range",
            "triple_point",
            "subrange",
            "deviation",
            "aluminium_ratio",
        ],
    ),
    ("metal", &["standard", "r0", "range"]),
    ("thermocouple", &["type", "reference", "class"]),
    (
        "thermistor",
        &[
            "r25",
            "beta",
            "steinhart_hart",
            "points",
            "reference",
            "ratio_terms",
            "reciprocal_terms",
            "range",
            "covariance",
            "dof",
        ],
    ),
    ("thermal_output", &["coefficients", "points", "in", "gauge_factor", "range", "scatter", "covariance", "dof"]),
    ("expansion", &["specimen", "data"]),
    ("temperature", &["channel", "longest_gap", "between"]),
    ("transducer", &["rated", "capacity", "polynomial", "in", "gives", "range", "covariance", "dof"]),
    ("transverse", &["sensitivity", "strain_ratio"]),
    ("shunt", &["from", "to", "resistor", "across", "place", "expected", "tolerance"]),
    ("section", &["diameter", "bore", "width", "height", "area"]),
    ("rosette.*", &["grids", "angles", "transverse", "material", "plane", "give", "decimals", "show", "reported"]),
    ("grids", &["a", "b", "c", "d"]),
    (
        "leads",
        &[
            "wires",
            "each",
            "length",
            "area",
            "awg",
            "material",
            "resistivity",
            "balanced",
            "temperature",
            "coefficient",
            "reference",
        ],
    ),
    (
        "zero",
        &[
            "at",
            "temperature",
            "lead_temperature",
            "temperatures",
            "from",
            "to",
            "rows",
            "meaning",
            "file",
            "again",
            "drift",
        ],
    ),
    ("again", &["rows", "from", "to"]),
    ("limits", &["low", "below", "high", "above"]),
    ("material", &["modulus", "poisson"]),
];

/// Keys that belong to a channel as a whole, which a change in time does not touch.
const WHOLE: &[&str] =
    &["like", "decimals", "show", "shared", "combine", "of", "section", "load", "material", "reported", "change"];

/// Keys that may stand in a table of this name; `None` where the sheet chooses them.
fn keys_of(table: &str) -> Option<Vec<&'static str>> {
    let keys = |name: &str| KEYS.iter().find(|(table, _)| *table == name).map(|(_, keys)| keys.to_vec());
    match table {
        "common.*" => keys("channel.*").map(|k| k.into_iter().filter(|k| *k != "like").collect()),
        "change" => keys("channel.*").map(|k| k.into_iter().filter(|k| !WHOLE.contains(k)).chain(["from"]).collect()),
        _ => keys(table),
    }
}

/// The table that stands under a key of another.
fn below<'k>(table: &str, key: &'k str) -> &'k str {
    match (table, key) {
        ("thermocouple", "reference") => "temperature",
        _ => key,
    }
}

/// Whether this is a key of a channel that one value can stand for.
pub(super) fn is_channel_key(path: &[&str]) -> bool {
    let mut table = "channel.*";
    for (i, key) in path.iter().enumerate() {
        // what is summed up is named by the sheet
        if table == "combine" {
            return i + 1 == path.len() && !key.is_empty();
        }
        if *key == "change" || !keys_of(table).is_some_and(|known| known.contains(key)) {
            return false;
        }
        table = below(table, key);
    }
    true
}

/// Every key of a channel, with those of the tables in it.
pub(super) fn channel_keys() -> Vec<String> {
    fn add(table: &str, path: &str, depth: usize, out: &mut Vec<String>) {
        for key in keys_of(table).unwrap_or_default().into_iter().filter(|key| *key != "change") {
            let here = if path.is_empty() { key.to_string() } else { format!("{path}.{key}") };
            if depth < 3 {
                add(below(table, key), &here, depth + 1, out);
            }
            out.push(here);
        }
    }
    let mut out = Vec::new();
    add("channel.*", "", 0, &mut out);
    out
}

/// Says of every key that no sheet knows that it is unknown, with the nearest one that could stand there.
pub(super) fn unknown_keys(root: &Table, findings: &Findings) {
    walk(root, "", "", findings);
}

fn walk(table: &Table, name: &str, path: &str, findings: &Findings) {
    let known = keys_of(name);
    for entry in &table.entries {
        let key = entry.key.as_str();
        let here = if path.is_empty() { key.to_string() } else { format!("{path}.{key}") };
        if let Some(known) = &known
            && !known.contains(&key)
        {
            unknown(entry, &here, known, table, findings);
            continue;
        }
        let under = match (name, key) {
            ("common", _) => "common.*",
            ("channel", _) => "channel.*",
            ("rosette", _) => "rosette.*",
            // a rosette's list of sensitivities is no table
            ("rosette.*", "transverse") => continue,
            ("combine", _) => continue,
            // a table for each of what it gives
            ("rosette.*", "reported") => "reported.*",
            ("reported.*", _) => "reported",
            _ => below(name, key),
        };
        match &entry.node.value {
            Value::Table(table) => walk(table, under, &here, findings),
            Value::List(list) if under == "change" => {
                for table in list.iter().filter_map(|node| super::table_of(&node.value)) {
                    walk(table, under, &here, findings);
                }
            }
            _ => {}
        }
    }
}

fn unknown(entry: &Entry, path: &str, known: &[&'static str], table: &Table, findings: &Findings) {
    let key = entry.key.as_str();
    // a key that stands there already is not what was meant
    let free = || known.iter().copied().filter(|k| !table.has(k));
    let more = match nearest(key, free()) {
        Some(near) => {
            // within the channel: `gauge.gauge_factor`
            let parts: Vec<&str> = path.split('.').collect();
            let inside = match parts.as_slice() {
                ["channel", _, "change", inside @ ..] | ["channel" | "common" | "rosette", _, inside @ ..] => inside,
                all => all,
            };
            let above: String = inside.iter().rev().skip(1).rev().map(|part| format!("{part}.")).collect();
            findings.mean(format!("{above}{near}"));
            format!("; did you mean '{near}'?")
        }
        None => {
            let elsewhere = KEYS
                .iter()
                .filter(|(table, keys)| known.contains(table) && keys.contains(&key))
                .map(|(table, _)| format!("'{table}.{key}'"))
                .next();
            match elsewhere {
                Some(elsewhere) => format!("; did you mean {elsewhere}?"),
                None => format!("; known here: {}", known.join(", ")),
            }
        }
    };
    findings.say(entry.key_span.clone(), format!("unknown key '{path}'{more}"));
}

/// Says of every key that nobody has read that nothing uses it.
pub(super) fn unused_keys(root: &Table, findings: &Findings) {
    let mut unused = Vec::new();
    root.unused("", &mut unused);
    for (path, span) in unused {
        let who = if path.starts_with("common.") {
            "no channel that is like it uses it"
        } else if path.starts_with("rosette.") {
            "nothing in this rosette uses it"
        } else {
            "nothing in this channel uses it"
        };
        findings.say(span, format!("{path} has no meaning here: {who}"));
    }
}

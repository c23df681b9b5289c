//! Every key there is, to suggest from.

use std::format;
use std::string::String;
use std::vec::Vec;

use super::nearest;
use super::node::{Findings, Table};

/// Keys by the table they stand in; `*` is a name that the sheet chooses.
const KEYS: &[(&str, &[&str])] = &[
    ("", &["title", "recording", "common", "channel"]),
    (
        "recording",
        &[
            "time",
            "time_format",
            "time_zone",
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
            "gauge",
            "bridge",
            "circuit",
            "converter",
            "amplifier",
            "platinum",
            "thermistor",
            "thermal_output",
            "expansion",
            "temperature",
            "leads",
            "zero",
            "limits",
            "largest_strain",
            "combine",
            "of",
            "material",
            "change",
        ],
    ),
    ("channel.*.change", &["from"]),
    ("gauge", &["resistance", "gauge_factor", "slope", "reference"]),
    (
        "bridge",
        &["arms", "supply", "resistances", "poisson", "input_resistance", "supply_leads", "signal_leads", "sensed"],
    ),
    ("supply", &["column", "reads"]),
    ("circuit", &["divider", "sensor", "supply", "current", "input_resistance"]),
    ("converter", &["bits", "full_scale", "coding"]),
    ("amplifier", &["gain", "offset", "difference"]),
    ("difference", &["input", "feedback", "open_loop_gain", "reference"]),
    ("platinum", &["standard", "r0", "class", "a", "b", "c", "range"]),
    ("thermistor", &["r25", "beta", "steinhart_hart", "range"]),
    ("thermal_output", &["coefficients", "in", "gauge_factor", "range"]),
    ("expansion", &["specimen", "data"]),
    ("temperature", &["channel", "longest_gap", "between"]),
    ("leads", &["wires", "each", "length", "area", "material", "resistivity", "balanced"]),
    ("zero", &["at", "temperature", "from", "to", "rows", "meaning"]),
    ("limits", &["low", "below", "high", "above"]),
    ("material", &["modulus", "poisson"]),
];

/// Says of every key that nobody has read that it is unknown, with the nearest one that could stand there.
pub(super) fn unknown_keys(root: &Table, findings: &Findings) {
    let mut unused = Vec::new();
    root.unused("", &mut unused);
    for (path, span) in unused {
        let parts: Vec<&str> = path.split('.').collect();
        let key = parts.last().copied().unwrap_or("");
        let place: String = match parts.as_slice() {
            [] | [_] => String::new(),
            ["channel" | "common", _, _] => "channel.*".into(),
            [.., table, _] => (*table).into(),
        };
        let known: Vec<&str> =
            KEYS.iter().filter(|(table, _)| *table == place).flat_map(|(_, keys)| keys.iter().copied()).collect();
        if known.contains(&key) {
            findings.say(span, format!("{path} has no meaning here: nothing in this channel uses it"));
            continue;
        }
        let near = nearest(key, known.iter().copied()).map_or_else(
            || {
                if known.is_empty() { String::new() } else { format!("; known here: {}", known.join(", ")) }
            },
            |n| format!("; did you mean '{n}'?"),
        );
        findings.say(span, format!("unknown key '{path}'{near}"));
    }
}

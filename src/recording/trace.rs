//! What a result was made of: a trace that stands beside it.

use std::collections::BTreeMap;
use std::format;
use std::string::{String, ToString};
use std::vec::Vec;

use serde::{Deserialize, Serialize};

use super::{Fingerprint, Summary};
use crate::chain::{Element, Word};
use crate::measurement::Measurement;
use crate::sheet::Sheet;

/// The form that this version writes and reads.
const FORM: u32 = 1;

/// A file, with what it was when it was used.
#[derive(Clone, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct Used {
    /// Its path, from the folder of the trace.
    pub file: String,
    /// What it was.
    #[serde(flatten)]
    pub fingerprint: Fingerprint,
}

/// How the result was asked for.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
pub struct Asked {
    /// Whether uncertainties were asked for.
    pub uncertainty: bool,
    /// Their coverage probability.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub coverage: Option<f64>,
    /// Whether several recordings were joined.
    #[serde(default)]
    pub join: bool,
    /// Whether 32-bit floats were asked for.
    #[serde(default)]
    pub single: bool,
    /// The sheet by which converted values were taken back to readings.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub undo: Option<Used>,
}

/// What became of one channel.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct TracedChannel {
    /// Its name.
    pub name: String,
    /// Its unit.
    pub unit: String,
    /// The chain with every default, in words.
    pub words: Vec<String>,
    /// Rows with a value.
    pub values: u64,
    /// Rows with each word but `good`.
    pub flags: BTreeMap<String, u64>,
}

/// What a result was made of.
///
/// Written beside the result as JSON; `repeat` makes the result again from it. Paths are from the folder of the trace.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct Trace {
    /// The form of this file.
    #[serde(rename = "trace of ohmwright")]
    pub form: u32,
    /// The version of ohmwright that made the result.
    pub version: String,
    /// The result.
    pub result: Used,
    /// Its rows.
    pub rows: u64,
    /// The measurement sheet.
    pub sheet: Used,
    /// The recordings, in the order in which they were given.
    pub recordings: Vec<Used>,
    /// Files that the sheet names: lists of sensors, recordings of zeros.
    pub beside: Vec<Used>,
    /// How it was asked for.
    pub asked: Asked,
    /// Editions of standards whose figures were used.
    pub standards: Vec<String>,
    /// A line for each zero that was a mean, each join, each shunt step, and what was odd.
    pub notes: Vec<String>,
    /// The channels.
    pub channels: Vec<TracedChannel>,
}

impl Trace {
    /// Returns the trace of a conversion.
    #[must_use]
    pub fn new(
        sheet: &Sheet,
        summary: &Summary,
        result: Used,
        sheet_file: Used,
        recordings: Vec<Used>,
        beside: Vec<Used>,
        asked: Asked,
    ) -> Self {
        let measurement = &sheet.measurement;
        let channels = measurement.channels.iter().zip(&summary.channels).enumerate();
        let channels = channels.map(|(i, (channel, figures))| TracedChannel {
            name: channel.name.clone(),
            unit: channel.unit.clone(),
            words: sheet.describe(i),
            values: figures.count(),
            flags: Word::ALL
                .into_iter()
                .skip(1)
                .filter_map(|word| {
                    let count = figures.words.get(word as usize).copied().unwrap_or(0);
                    (count > 0).then(|| (word.to_string(), count))
                })
                .collect(),
        });
        let shunts = summary.shunts.iter().map(ToString::to_string);
        Self {
            form: FORM,
            version: env!("CARGO_PKG_VERSION").into(),
            result,
            rows: summary.rows,
            sheet: sheet_file,
            recordings,
            beside,
            asked,
            standards: editions(measurement),
            notes: summary
                .zeros
                .iter()
                .chain(&summary.joins)
                .cloned()
                .chain(shunts)
                .chain(summary.remarks.clone())
                .collect(),
            channels: channels.collect(),
        }
    }

    /// Returns the trace as text.
    #[must_use]
    pub fn to_text(&self) -> String {
        let mut text = serde_json::to_string_pretty(self).unwrap_or_default();
        text.push('\n');
        text
    }

    /// Reads a trace.
    ///
    /// - `name`: the file, for messages.
    ///
    /// # Errors
    /// In words, with line and column, what is wrong with the text, or that it is of another form.
    pub fn read(name: &str, text: &str) -> Result<Self, String> {
        let trace: Self = serde_json::from_str(text)
            .map_err(|e| format!("{name}:{}:{}: this is no trace of a result: {e}", e.line(), e.column()))?;
        if trace.form != FORM {
            return Err(format!(
                "{name}: value '{}': the form of this trace; this version reads form {FORM}",
                trace.form
            ));
        }
        Ok(trace)
    }
}

/// Editions of the standards whose figures a measurement uses.
fn editions(measurement: &Measurement) -> Vec<String> {
    let mut out = Vec::new();
    for segment in measurement.channels.iter().filter_map(|c| c.segments()).flatten() {
        let edition = match &segment.chain.element {
            Element::Platinum(k) => crate::platinum::PUBLISHED
                .iter()
                .find(|p| (p.coefficients.a, p.coefficients.b, p.coefficients.c) == (k.a, k.b, k.c))
                .map(|p| p.source),
            Element::Metal(law) => {
                crate::metal::PUBLISHED.iter().find(|p| p.law.with_r0(1.0) == law.with_r0(1.0)).map(|p| p.source)
            }
            Element::Thermocouple(_) => Some("IEC 60584-1, reference functions of NIST Monograph 175"),
            Element::Standard { .. } => Some("ITS-90, Preston-Thomas, Metrologia 27 (1990)"),
            _ => None,
        };
        if let Some(edition) = edition.map(ToString::to_string).filter(|e| !out.contains(e)) {
            out.push(edition);
        }
    }
    out
}

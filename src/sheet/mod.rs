//! The measurement sheet: text ⇄ measurement.
//!
//! A sheet is TOML. Every physical value is text with its unit; an unknown key, unit or name is an error that points at
//! its line and suggests the nearest known one. All that is wrong is told at once.

mod channel;
mod circuit;
mod error;
mod known;
mod layout;
mod list;
mod node;
mod order;
mod quantity;
#[cfg(test)]
mod reach;
mod recording;
mod reported;
mod rosette;
mod shape;
mod unit;
mod words;

use std::string::{String, ToString};
use std::vec::Vec;

use toml::de::DeTable;

use error::Source;
pub use error::{Diagnostic, SheetError};
pub use layout::{Decimal, Encoding, Layout, Pass, Separator};
pub use list::OpenList;
pub use reported::Reported;
pub(crate) use reported::conversion;
pub(crate) use shape::{Shape, Token};

use crate::measurement::{ColumnRef, Measurement};
use node::{Findings, Section, Table, Value};

/// A sheet that was read: what to measure, how the recording is laid out, what to keep.
#[derive(Clone, Debug)]
pub struct Sheet {
    /// The channels.
    pub measurement: Measurement,
    /// What the sheet says about the recording.
    pub layout: Layout,
    /// Columns of the recording that are copied through.
    pub keep: Vec<ColumnRef>,
    /// For each channel, what was assumed because the sheet does not say it.
    pub assumed: Vec<Vec<String>>,
    /// For each channel, somebody else's result of it.
    pub reported: Vec<Option<Reported>>,
    /// What was read from other files for it, one line each; whoever reads them adds to it.
    pub notes: Vec<String>,
}

impl Sheet {
    /// Reads a sheet.
    ///
    /// - `file`: its name, for messages.
    /// - `text`: its text.
    ///
    /// # Errors
    /// Everything that is wrong with it, each with line, column and what was expected.
    pub fn read(file: &str, text: &str) -> Result<Self, SheetError> {
        Self::read_with(file, text, &mut |_| Err("files are not read here".to_string()))
    }

    /// Reads a sheet that may read channels from a list.
    ///
    /// - `file`, `text`: as for [`read`](Self::read).
    /// - `open`: gives the list that the sheet names.
    ///
    /// # Errors
    /// Everything that is wrong with sheet and list, each with line, column and what was expected; of a list the column is the
    /// number of the cell.
    pub fn read_with(file: &str, text: &str, open: &mut OpenList<'_>) -> Result<Self, SheetError> {
        // a byte-order mark is no part of the text, but keep the places in step
        let body = text.strip_prefix('\u{feff}').unwrap_or(text);
        let tree = DeTable::parse(body).map_err(|e| {
            let span = e.span().unwrap_or(0..0);
            let message = match body.get(span.clone()) {
                Some(key) if e.message() == "duplicate key" => std::format!("'{key}' stands twice"),
                _ => e.message().to_string(),
            };
            SheetError::new(file, body, std::vec![Diagnostic { span, message }])
        })?;
        let mut root = Table::new(tree.get_ref());
        let findings = Findings::default();
        let source =
            |text: &str| Source { file: file.to_string(), text: text.to_string(), base: 0, places: Vec::new() };
        findings.know(source(body));
        known::unknown_keys(&root, &findings);
        let list = list::apply(&mut root, &findings, body.len() + 1, open);
        list.iter().for_each(|list| findings.know(list.clone()));
        let sheet =
            channel::read_sheet(&Section { table: &root, path: String::new(), span: 0..0, findings: &findings });
        if findings.count() == 0 {
            known::unused_keys(&root, &findings);
        }
        match sheet {
            Some(sheet) if findings.count() == 0 => Ok(sheet),
            _ => {
                if findings.count() == 0 {
                    findings.say(0..0, "the sheet cannot be read");
                }
                Err(SheetError::new(file, body, findings.into_inner()).with(list))
            }
        }
    }

    /// Returns the chains, defaults and equations of a channel in words, one line each.
    #[must_use]
    pub fn describe(&self, channel: usize) -> Vec<String> {
        let mut out = words::describe(self, channel);
        out.extend(self.reported.get(channel).and_then(Option::as_ref).map(Reported::in_words));
        out
    }

    /// Returns the index of the channel of this name.
    ///
    /// # Errors
    /// That there is none, with the nearest name and those there are.
    pub fn channel(&self, name: &str) -> Result<usize, String> {
        self.measurement.position(name).ok_or_else(|| {
            let names = || self.measurement.channels.iter().map(|c| c.name.as_str());
            let near = nearest(name, names()).map_or_else(String::new, |n| std::format!("; did you mean '{n}'?"));
            let all: Vec<&str> = names().collect();
            std::format!("there is no channel '{name}'; the sheet has {}{near}", all.join(", "))
        })
    }

    /// Returns a one-line text of a value with this unit, for messages.
    #[must_use]
    pub fn show_value(value: f64, unit: &str) -> String {
        quantity::show(value, unit)
    }

    /// Reads one physical value that is typed beside a channel: the reading of the channel in its unit.
    ///
    /// - `text`: `1.2075 mV`, or a bare number in the unit of the channel's readings.
    ///
    /// # Errors
    /// What is wrong with the text, in words.
    pub fn reading(&self, channel: usize, text: &str) -> Result<f64, String> {
        circuit::typed_reading(self, channel, text)
    }

    /// Reads a typed zero of a strain channel: a reading as [`reading`](Self::reading), or output over supply.
    ///
    /// # Errors
    /// What is wrong with the text, in words.
    pub fn zero(&self, channel: usize, text: &str) -> Result<crate::strain::ZeroReading, String> {
        circuit::typed_zero(self, channel, text)
    }

    /// Reads one physical value that is typed as a result of a channel, in the channel's unit.
    ///
    /// # Errors
    /// What is wrong with the text, in words.
    pub fn result(&self, channel: usize, text: &str) -> Result<f64, String> {
        circuit::typed_result(self, channel, text)
    }

    /// Reads a typed size of a channel's result, such as an uncertainty, in the channel's unit.
    ///
    /// # Errors
    /// What is wrong with the text, in words.
    pub fn difference(&self, channel: usize, text: &str) -> Result<f64, String> {
        circuit::typed_difference(self, channel, text)
    }

    /// Reads a typed resistance, Ω; a bare number is in ohms.
    ///
    /// # Errors
    /// What is wrong with the text, in words.
    pub fn resistance(text: &str) -> Result<f64, String> {
        match quantity::bare_number(text) {
            Some(ohms) => Ok(ohms),
            None => quantity::parse(text, &[unit::Kind::Ohms]).map(|q| q.value),
        }
    }

    /// Reads a typed resistor with its unit, Ω.
    ///
    /// # Errors
    /// What is wrong with the text, in words.
    pub fn resistor(text: &str) -> Result<f64, String> {
        quantity::parse(text, &[unit::Kind::Ohms]).map(|q| q.value)
    }

    /// Reads a typed temperature, °C; a bare number is in °C.
    ///
    /// # Errors
    /// What is wrong with the text, in words.
    pub fn temperature(text: &str) -> Result<f64, String> {
        match quantity::bare_number(text) {
            Some(t) => Ok(t),
            None => quantity::parse(text, &[unit::Kind::Celsius]).map(|q| q.value),
        }
    }

    /// Reads a typed difference of temperatures, K: a degree Celsius is a kelvin, a degree Fahrenheit 5/9 of one; a bare number
    /// is in K.
    ///
    /// # Errors
    /// What is wrong with the text, in words.
    pub fn temperature_step(text: &str) -> Result<f64, String> {
        match quantity::bare_number(text) {
            Some(kelvin) => Ok(kelvin),
            None => quantity::parse_interval(text),
        }
    }

    /// Reads a typed strain, a plain number; a bare number is in microstrain.
    ///
    /// # Errors
    /// What is wrong with the text, in words.
    pub fn strain(text: &str) -> Result<f64, String> {
        match quantity::bare_number(text) {
            Some(e) => Ok(e / 1e6),
            None => quantity::parse(text, &[unit::Kind::Strain]).map(|q| q.value),
        }
    }

    /// Reads a typed angle, degrees; a bare number is in degrees.
    ///
    /// # Errors
    /// What is wrong with the text, in words.
    pub fn angle(text: &str) -> Result<f64, String> {
        match quantity::bare_number(text) {
            Some(angle) => Ok(angle),
            None => quantity::parse(text, &[unit::Kind::Degrees]).map(|q| q.value),
        }
    }

    /// Returns one result of the rosette of this name, for its grids; `None` where no rosette has the name.
    #[must_use]
    pub fn rosette(&self, name: &str) -> Option<&crate::measurement::RosetteSource> {
        self.measurement.channels.iter().find_map(|channel| match &channel.source {
            crate::measurement::Source::Rosette(rosette) => {
                channel.name.strip_prefix(name).is_some_and(|rest| rest.starts_with(' ')).then_some(&**rosette)
            }
            _ => None,
        })
    }

    /// Reads a typed supply in the unit of the chain's supply column; a bare number is in that unit.
    ///
    /// # Errors
    /// What is wrong with the text, in words.
    pub fn supply(chain: &crate::chain::Chain, text: &str) -> Result<f64, String> {
        circuit::typed_supply(chain, text)
    }

    /// Returns the unit of the chain's supply column; `None` where the supply is no column.
    #[must_use]
    pub fn supply_unit(chain: &crate::chain::Chain) -> Option<String> {
        circuit::supply_unit(chain)
    }

    /// Returns the unit of a channel's readings; `None` for a channel that reads no column.
    #[must_use]
    pub fn reading_unit(&self, channel: usize) -> Option<String> {
        circuit::channel_unit(self.measurement.channels.get(channel)?)
    }
}

/// Returns the candidate that is most like the text, where one is like it at all.
#[must_use]
pub fn nearest<'a>(text: &str, candidates: impl IntoIterator<Item = &'a str>) -> Option<&'a str> {
    candidates
        .into_iter()
        .map(|c| (strsim::damerau_levenshtein(&text.to_lowercase(), &c.to_lowercase()), c))
        .filter(|(distance, c)| {
            let length = c.chars().count().max(text.chars().count());
            *distance <= (length / 3).max(1) && *distance < length
        })
        .min_by_key(|(distance, _)| *distance)
        .map(|(_, c)| c)
}

/// Merges a list of `key=value` words, as typed on a command line, into the text of a sheet with one channel.
///
/// # Errors
/// The word that is not of that form.
pub fn sheet_of_words(reading: &str, words: &[String]) -> Result<String, String> {
    circuit::sheet_of_words(reading, words)
}

/// What is assumed where a transverse sensitivity counts.
const NU0: &str = "transverse: ν0 = 0.285, Poisson's ratio of the beam on which gauge factors are calibrated";

const fn table_of(value: &Value) -> Option<&Table> {
    match value {
        Value::Table(table) => Some(table),
        _ => None,
    }
}

/// Returns the unit of voltage of this power of ten.
pub(crate) fn current_unit(exponent: i8) -> Option<String> {
    circuit::unit_name(unit::Kind::Amperes, exponent)
}

pub(crate) fn voltage_unit(exponent: i8) -> Option<String> {
    circuit::unit_name(unit::Kind::Volts, exponent)
}

/// Returns whether a unit as a file writes it means the one that the sheet states; `None` for a spelling that no sheet
/// knows.
pub(crate) fn same_unit(written: &str, stated: &str) -> Option<bool> {
    let stated: Vec<unit::Unit> = unit::candidates(stated).collect();
    let mut written = unit::candidates(written).peekable();
    written.peek()?;
    Some(written.any(|w| stated.contains(&w)))
}

/// Returns whether a sheet can write this unit.
pub(crate) fn knows_unit(text: &str) -> bool {
    unit::candidates(text).next().is_some()
}

/// Returns the unit of voltage over voltage of this power of ten.
pub(crate) fn ratio_unit(exponent: i8) -> Option<String> {
    circuit::unit_name(unit::Kind::VoltageRatio, exponent)
}

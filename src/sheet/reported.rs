//! `reported`: somebody else's result of a channel, to be checked.

use std::format;
use std::string::{String, ToString};

use super::node::{Section, Value};
use super::quantity;
use super::unit::{self, Kind, Unit};
use crate::measurement::ColumnRef;
use crate::uncertainty::Uncertainty;

/// Where somebody else's result of a channel stands, and what they say of it.
#[derive(Clone, Debug, PartialEq)]
pub struct Reported {
    /// Its column; `None` = the one with the name of the channel.
    pub column: Option<ColumnRef>,
    /// The file it stands in, as written; `None` = beside the readings.
    pub file: Option<String>,
    /// Its unit as written; `None` = what the file says, or the unit of the channel.
    pub unit: Option<String>,
    /// The uncertainty that they state, in the unit of the channel.
    pub uncertainty: Option<Uncertainty>,
    /// Difference that is let pass besides rounding, in the unit of the channel.
    pub tolerance: f64,
}

impl Reported {
    /// Where it stands and what is stated of it, in one line.
    pub(super) fn in_words(&self) -> String {
        let column = match &self.column {
            None => "the column with the name of the channel".to_string(),
            Some(ColumnRef::Name(name)) => format!("column '{name}'"),
            Some(ColumnRef::Number(number)) => format!("column {number}"),
        };
        let mut out = format!("reported, for check: {column}");
        if let Some(file) = &self.file {
            out.push_str(&format!(" of {file}"));
        }
        if let Some(unit) = &self.unit {
            out.push_str(&format!(", in {unit}"));
        }
        if self.tolerance > 0.0 {
            out.push_str(&format!(", a difference of {} let pass besides rounding", self.tolerance));
        }
        if let Some(uncertainty) = &self.uncertainty {
            out.push_str(&format!(", stated with a standard uncertainty of {}", uncertainty.standard()));
        }
        out
    }
}

/// Keys of the table.
pub(super) const KEYS: &[&str] = &["column", "unit", "file", "uncertainty", "tolerance"];

/// What a value is multiplied by and what is then added to go from one unit to another; `None` where they do not measure
/// the same. `difference`: K is a difference of temperatures.
pub(crate) fn conversion(from: &str, to: &str, difference: bool) -> Option<(f64, f64)> {
    let usable = |u: &Unit| !difference || u.kind != Kind::Celsius;
    let to = unit::candidates(to).find(usable)?;
    let from = unit::candidates(from).find(|u| u.kind == to.kind)?;
    let factor = super::channel::between(&from, &to);
    let size = super::channel::by_power_of_ten(to.factor, i32::from(to.exponent));
    Some((factor, (from.offset - to.offset) / size))
}

/// Reads the table of a channel with this unit.
pub(super) fn read(s: &Section<'_>, own: &str, difference: bool) -> Option<Reported> {
    if !s.has("reported") {
        return None;
    }
    one(&s.section("reported")?, own, difference)
}

/// Reads a table that says where one result stands.
pub(super) fn one(section: &Section<'_>, own: &str, difference: bool) -> Option<Reported> {
    let column = match section.entry("column") {
        None => None,
        Some(entry) => match &entry.node.value {
            Value::Text(name) => Some(ColumnRef::Name(name.clone())),
            Value::Number(number) => match number.parse::<usize>() {
                Ok(number) if number > 0 => Some(ColumnRef::Number(number)),
                _ => {
                    section.say(entry.node.span.clone(), format!("{} counts from 1", section.key_path("column")));
                    return None;
                }
            },
            _ => {
                section.say(
                    entry.node.span.clone(),
                    format!("{} is {}; expected a name or a number", section.key_path("column"), entry.node.kind()),
                );
                return None;
            }
        },
    };
    let text = |key: &str| -> Option<Option<String>> {
        if section.has(key) { section.text(key).map(|(text, _)| Some(text.to_string())) } else { Some(None) }
    };
    let (file, unit) = (text("file")?, text("unit")?);
    if let Some(unit) = &unit
        && conversion(unit, own, difference).is_none()
    {
        let span = section.entry("unit").map_or_else(|| section.span.clone(), |e| e.node.span.clone());
        section.say(
            span,
            format!("{} = '{unit}' does not measure what the channel gives, {own}", section.key_path("unit")),
        );
        return None;
    }
    // everywhere else a percentage is a share of the value, here it would be a strain
    let percent = |key: &str, text: &str, span: &core::ops::Range<usize>| {
        let doubtful = text.contains('%') && own != "%";
        if doubtful {
            let message = format!(
                "{}: value '{text}': is this a share of the value, or a strain? expected a size in {own}",
                section.key_path(key)
            );
            section.say(span.clone(), message);
        }
        doubtful
    };
    let uncertainty = if section.has("uncertainty") {
        let (text, span) = section.text("uncertainty")?;
        if percent("uncertainty", text, &span) {
            return None;
        }
        match stated(text, own, difference) {
            Ok(uncertainty) => Some(uncertainty),
            Err(message) => {
                section.say(span, format!("{}: {message}", section.key_path("uncertainty")));
                return None;
            }
        }
    } else {
        None
    };
    let tolerance = if section.has("tolerance") {
        let (text, span) = section.text("tolerance")?;
        if percent("tolerance", text, &span) {
            return None;
        }
        match size(text, own, difference) {
            Ok(size) if size >= 0.0 => size,
            Ok(_) => {
                section.say(span, format!("{} must not be below zero", section.key_path("tolerance")));
                return None;
            }
            Err(message) => {
                section.say(span, format!("{}: {message}", section.key_path("tolerance")));
                return None;
            }
        }
    } else {
        0.0
    };
    Some(Reported { column, file, unit, uncertainty, tolerance })
}

/// The unit of a channel, and the kind that sizes of its results are in.
fn sized(own: &str, difference: bool) -> Result<(Unit, Kind), String> {
    let usable = |u: &Unit| !difference || u.kind != Kind::Celsius;
    let unit = unit::candidates(own).find(usable).ok_or_else(|| format!("the unit '{own}' is not known"))?;
    Ok((unit, if unit.kind == Kind::Celsius { Kind::Kelvins } else { unit.kind }))
}

fn size(text: &str, own: &str, difference: bool) -> Result<f64, String> {
    let (unit, kind) = sized(own, difference)?;
    let size = quantity::parse(text, &[kind])?.value;
    Ok(size / super::channel::by_power_of_ten(unit.factor, i32::from(unit.exponent)))
}

fn stated(text: &str, own: &str, difference: bool) -> Result<Uncertainty, String> {
    let (unit, _) = sized(own, difference)?;
    let uncertainty = quantity::parse_uncertainty(text, unit.kind)?;
    Ok(uncertainty.times(1.0 / super::channel::by_power_of_ten(unit.factor, i32::from(unit.exponent))))
}

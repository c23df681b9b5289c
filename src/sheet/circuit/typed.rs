//! Values that are typed beside a sheet.

use std::format;
use std::string::{String, ToString};

use super::{READABLE, channel_unit, in_unit};
use crate::chain::{Chain, Network, Supply};
use crate::measurement::Source;
use crate::sheet::Sheet;
use crate::sheet::unit::{self, Kind, Unit};
use crate::strain::ZeroReading;

/// The number of a typed value whose unit is this very one: no unit is changed, so no digit is.
fn in_own(text: &str, own: Unit) -> Option<f64> {
    let end = text.rfind(|c: char| c.is_ascii_digit() || c == '.')? + 1;
    // 1e-3 V has a letter among its digits, a unit has no digit behind it but m2
    let (number, unit) = text.split_at_checked(end)?;
    let same = unit::find(own.kind, unit.trim()).is_some_and(|u| u == own);
    crate::sheet::quantity::bare_number(number).filter(|_| same)
}

/// A typed reading: with a unit of the same kind, or a bare number in the channel's own.
pub(in crate::sheet) fn typed_reading(sheet: &Sheet, channel: usize, text: &str) -> Result<f64, String> {
    let channel = sheet.measurement.channels.get(channel).ok_or("there is no such channel")?;
    if channel.segments().is_none() {
        return Err(format!("channel '{}' reads no column: give readings to the channels it is made of", channel.name));
    }
    if let Some(number) = crate::sheet::quantity::bare_number(text) {
        return Ok(number);
    }
    let own = channel_unit(channel).ok_or("the channel reads no column")?;
    let found =
        READABLE.iter().find_map(|kind| unit::find(*kind, &own)).ok_or("the unit of the readings is unknown")?;
    if let Some(number) = in_own(text, found) {
        return Ok(number);
    }
    crate::sheet::quantity::parse(text, &[found.kind]).map(|q| in_unit(q.value, found))
}

/// A typed zero: a reading, or output over supply where that is another unit.
pub(in crate::sheet) fn typed_zero(sheet: &Sheet, channel: usize, text: &str) -> Result<ZeroReading, String> {
    match crate::sheet::quantity::parse(text, &[Kind::VoltageRatio]) {
        Ok(ratio) if crate::sheet::quantity::bare_number(text).is_none() => Ok(ZeroReading::Ratio(ratio.value)),
        _ => typed_reading(sheet, channel, text).map(ZeroReading::AsRecorded),
    }
}

/// The unit of a supply column.
pub(in crate::sheet) fn supply_unit(chain: &Chain) -> Option<String> {
    let Supply::Column { exponent } = chain.supply else { return None };
    super::unit_name(supply_kind(chain), exponent)
}

fn supply_kind(chain: &Chain) -> Kind {
    if matches!(chain.network, Network::Resistance { .. }) { Kind::Amperes } else { Kind::Volts }
}

/// A typed supply: with a unit, or a bare number in that of the column.
pub(in crate::sheet) fn typed_supply(chain: &Chain, text: &str) -> Result<f64, String> {
    if let Some(number) = crate::sheet::quantity::bare_number(text) {
        return Ok(number);
    }
    let Supply::Column { exponent } = chain.supply else { return Err("the supply is no column".to_string()) };
    let kind = supply_kind(chain);
    let column = Unit { name: "", kind, exponent, factor: 1.0, offset: 0.0 };
    if let Some(name) = super::unit_name(kind, exponent)
        && let Some(number) = unit::find(kind, &name).and_then(|own| in_own(text, own))
    {
        return Ok(number);
    }
    crate::sheet::quantity::parse(text, &[kind]).map(|q| in_unit(q.value, column))
}

/// A typed result: with a unit of the same kind, or a bare number in the channel's own.
pub(in crate::sheet) fn typed_result(sheet: &Sheet, channel: usize, text: &str) -> Result<f64, String> {
    let channel = sheet.measurement.channels.get(channel).ok_or("there is no such channel")?;
    if let Some(number) = crate::sheet::quantity::bare_number(text) {
        return Ok(number);
    }
    let kinds = if matches!(channel.source, Source::Combination(_)) && channel.unit == "K" {
        std::vec![Kind::Kelvins]
    } else {
        READABLE.to_vec()
    };
    let own =
        kinds.iter().find_map(|kind| unit::find(*kind, &channel.unit)).ok_or("the unit of the channel is unknown")?;
    if let Some(number) = in_own(text, own) {
        return Ok(number);
    }
    crate::sheet::quantity::parse(text, &[own.kind]).map(|q| in_unit(q.value, own))
}

/// A typed size of a result, such as an uncertainty: a temperature difference has no offset.
pub(in crate::sheet) fn typed_difference(sheet: &Sheet, channel: usize, text: &str) -> Result<f64, String> {
    let own = sheet.measurement.channels.get(channel).ok_or("there is no such channel")?;
    match unit::find(Kind::Celsius, &own.unit) {
        Some(unit) if crate::sheet::quantity::bare_number(text).is_none() => {
            crate::sheet::quantity::parse_interval(text).map(|kelvin| kelvin / unit.factor)
        }
        _ => typed_result(sheet, channel, text),
    }
}

/// Makes a sheet with one channel, `value`, of a typed reading and `key=value` words.
pub(in crate::sheet) fn sheet_of_words(reading: &str, words: &[String]) -> Result<String, String> {
    let mut out = String::from("[channel.value]\ncolumn = 1\n");
    let mut has_reads = false;
    for word in words {
        let (key, value) = word
            .split_once('=')
            .ok_or_else(|| format!("'{word}': expected key=value, as in platinum.r0=\"100 ohm\""))?;
        let (key, value) = (key.trim(), value.trim());
        let key_is_plain = !key.is_empty() && key.chars().all(|c| c.is_ascii_alphanumeric() || c == '.' || c == '_');
        if !key_is_plain {
            return Err(format!("'{word}': '{key}' is no key of a sheet"));
        }
        has_reads |= key == "reads";
        // numbers, lists, tables, flags and quoted text stand as they are; anything else is text
        let as_is = value.parse::<f64>().is_ok()
            || value.starts_with(['[', '{', '"', '\''])
            || value == "true"
            || value == "false";
        if as_is {
            out.push_str(&format!("{key} = {value}\n"));
        } else {
            out.push_str(&format!("{key} = {}\n", toml::Value::String(value.to_string())));
        }
    }
    if !has_reads {
        let unit =
            crate::sheet::quantity::parse(reading, READABLE).map_err(|e| format!("{e} (or say reads=...)"))?.unit;
        if unit.name.is_empty() {
            return Err(format!("value '{reading}' has no unit: write it behind the number, as in \"109.73 ohm\""));
        }
        out.push_str(&format!("reads = {}\n", toml::Value::String(unit.name.to_string())));
    }
    Ok(out)
}

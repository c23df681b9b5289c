//! `value`: one reading, at once.

use std::io::Write;
use std::path::Path;

use ohmwright::chain::{Inputs, Word};
use ohmwright::recording::{Digits, NumberText};
use ohmwright::sheet::{Sheet, sheet_of_words};

use crate::args::Value;
use crate::failure::Failure;
use crate::files;
use crate::side::{Alone, from_one_reading, single, tell};

/// A number with its unit behind it, where it has one.
pub(crate) fn with_unit(value: f64, digits: Digits, unit: &str) -> String {
    let gap = if unit.is_empty() { "" } else { " " };
    format!("{}{gap}{unit}", NumberText(value, digits))
}

pub(crate) fn run(args: &Value) -> Result<(), Failure> {
    let (first, rest) = args.words.split_first().ok_or_else(|| Failure::error("a sheet or a reading is missing"))?;
    // a number that is no file is a reading
    let number = first.trim_start_matches(['\u{2212}', '+', '.']).starts_with(|c: char| c.is_ascii_digit());
    let typed = !Path::new(first).is_file() && (number || (!rest.is_empty() && rest.iter().all(|w| w.contains('='))));
    if typed && rest.is_empty() {
        return Err(Failure::error(format!(
            "value '{first}': what was it read from? give keys of a sheet, as in platinum.standard=\"IEC 60751\" platinum.r0=\"100 ohm\""
        )));
    }
    let (sheet, index, readings) = if typed {
        let text = sheet_of_words(first, rest).map_err(Failure::error)?;
        let sheet = Sheet::read("value", &text).map_err(|e| {
            // the lines are those of the words as a sheet: show what is wrong, without a place nobody has seen
            let all: Vec<String> = e.diagnostics().iter().map(|d| d.message.replace("channel.value.", "")).collect();
            Failure::error(all.join("\n"))
        })?;
        (sheet, 0, std::slice::from_ref(first))
    } else {
        let sheet = files::sheet(Path::new(first))?;
        let (name, readings) = rest.split_first().ok_or_else(|| {
            let names = from_one_reading(&sheet).join(", ");
            Failure::error(format!("a channel and a reading are missing; the sheet has {names}"))
        })?;
        let index = single(&sheet, name)?;
        if readings.is_empty() {
            return Err(Failure::error(format!("a reading for channel '{name}' is missing")));
        }
        (sheet, index, readings)
    };
    let alone = Alone::of_columns(&sheet, index, &args.with)?;
    let own = sheet.measurement.channels.get(index).ok_or_else(|| Failure::error("there is no such channel"))?;
    let readings = readings.iter().map(|text| alone.reading(&sheet, text));
    let readings = readings.collect::<Result<Vec<_>, _>>()?;
    alone.tell_notes();
    let mut out = std::io::stdout().lock();
    let mut flagged = 0;
    for reading in readings {
        let outcome = alone.plan.one(Inputs { reading, ..alone.inputs });
        flagged += u64::from(outcome.word != Word::Good);
        if outcome.word.has_number() {
            let digits = own.decimals.map_or(Digits::Shortest, Digits::Fixed);
            write!(out, "{}", with_unit(outcome.value * alone.factor, digits, &own.unit))?;
            if outcome.word != Word::Good {
                write!(out, " {}", outcome.word)?;
            }
            writeln!(out)?;
        } else {
            writeln!(out, "{}", outcome.word)?;
            if let Some(lead) = alone.chain.broken_lead(&Inputs { reading, ..alone.inputs }) {
                tell(&format!("this is what the circuit reads with lead {lead} of the three wires broken"));
            }
        }
    }
    if args.strict && flagged > 0 { Err(Failure::No(String::new())) } else { Ok(()) }
}

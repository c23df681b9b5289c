//! `expect`: which signal should this value give?

use std::io::Write;

use ohmwright::recording::Digits;

use crate::args::Expect;
use crate::failure::Failure;
use crate::files;
use crate::side::{Alone, channel};
use crate::value::with_unit;

pub(crate) fn run(args: &Expect) -> Result<(), Failure> {
    let sheet = files::sheet(&args.sheet)?;
    let index = channel(&sheet, &args.channel)?;
    let alone = Alone::new(&sheet, index, &args.with)?;
    let own = sheet.measurement.channels.get(index).ok_or_else(|| Failure::error("there is no such channel"))?;
    let unit = sheet.reading_unit(alone.read).unwrap_or_else(|| own.unit.clone());
    let values = args.values.iter().map(|text| sheet.result(index, text).map(|v| (text, v)));
    let values = values.collect::<Result<Vec<_>, _>>().map_err(Failure::error)?;
    alone.tell_notes();
    let mut out = std::io::stdout().lock();
    for (text, value) in values {
        let reading = alone
            .plan
            .forward(value / alone.factor, alone.inputs)
            .map_err(|_| Failure::error(format!("value '{text}' is beyond what channel '{}' believes", own.name)))?;
        writeln!(out, "{}", with_unit(reading, Digits::Shortest, &unit))?;
    }
    Ok(())
}

//! `image`: the chains of a sheet as bytes for firmware.

use ohmwright::image;
use ohmwright::measurement::ZeroSource;

use crate::args::Image;
use crate::failure::Failure;
use crate::files;
use crate::side::tell;
use crate::trace::{self, Asked, Product};

pub(crate) fn run(args: &Image) -> Result<(), Failure> {
    let product = make(args)?;
    let target = Some(args.output.as_path()).filter(|path| path.as_os_str() != "-");
    trace::write(&product, target, Asked::Image)?;
    product.notes.iter().for_each(|note| tell(note));
    Ok(())
}

/// The bytes of an image.
pub(crate) fn make(args: &Image) -> Result<Product, Failure> {
    let (sheet, named) = files::sheet_and_files(&args.sheet)?;
    let read = trace::taken([args.sheet.clone()].into_iter().chain(named))?;
    let mut notes = Vec::new();
    let mut chains = Vec::new();
    for channel in &sheet.measurement.channels {
        let Some(segments) = channel.segments() else {
            notes.push(format!(
                "channel '{}' is computed from other channels: the logger does that itself, it is left out",
                channel.name
            ));
            continue;
        };
        let [segment] = segments.as_slice() else {
            return Err(Failure::error(format!(
                "channel '{}' changes in time: an image holds one chain of each channel",
                channel.name
            )));
        };
        if segment.again.as_ref().is_some_and(|again| again.drift.is_some()) {
            return Err(Failure::error(format!(
                "channel '{}' takes off a drift that a whole recording shows, which firmware has not: leave out zero.drift",
                channel.name
            )));
        }
        if segment.zero != ZeroSource::Stated {
            return Err(Failure::error(format!(
                "channel '{}' takes its zero from a recording, which firmware has not: state it as zero = {{ at = ... }}",
                channel.name
            )));
        }
        segment.chain.plan().map_err(|e| Failure::error(format!("channel '{}': {e}", channel.name)))?;
        if let Some(paired) = segment.paired {
            let column = sheet.measurement.inputs.get(paired.input).map(ToString::to_string).unwrap_or_default();
            notes.push(format!(
                "channel '{}': the reading is what the two columns make together; column '{column}' is for the logger to take in",
                channel.name
            ));
        }
        // what a logger has to hand over with every reading, by the members of ow_inputs
        let mut asks = Vec::new();
        if let Some(supply) = segment.supply.filter(|_| segment.chain.needs_supply_column()) {
            let column = sheet.measurement.inputs.get(supply).map(ToString::to_string).unwrap_or_default();
            asks.push(format!("the supply in column '{column}' (supply)"));
        }
        let members =
            ["celsius", "lead_celsius", "arm_celsius[0]", "arm_celsius[1]", "arm_celsius[2]", "arm_celsius[3]"];
        for (side, member) in segment.sides().into_iter().zip(members) {
            asks.extend(side.map(|side| format!("the temperature of '{}' ({member})", side.name)));
        }
        if !asks.is_empty() {
            notes.push(format!(
                "chain {}, channel '{}', asks with every reading for {}",
                chains.len(),
                channel.name,
                asks.join(" and ")
            ));
        }
        chains.push((channel.name.as_str(), channel.unit.as_str(), &segment.chain));
    }
    if chains.is_empty() {
        return Err(Failure::error("the sheet has no channel that reads a column"));
    }
    let count = chains.len();
    let bytes = image::write(chains.iter().copied()).map_err(|place| {
        let name = chains.get(place).map_or("", |(name, ..)| name);
        Failure::error(format!("channel '{name}': its name or unit is longer than 255 bytes"))
    })?;
    notes.push(format!(
        "{}: {count} chain{}, {} bytes",
        args.output.display(),
        if count == 1 { "" } else { "s" },
        bytes.len()
    ));
    Ok(Product { bytes, read, notes })
}

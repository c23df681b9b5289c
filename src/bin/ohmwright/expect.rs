//! `expect`: which signal should this value give?

use std::io::Write;

use ohmwright::measurement::{Grids, RosetteSource};
use ohmwright::recording::Digits;
use ohmwright::sheet::Sheet;
use ohmwright::strain::{PrincipalStrains, Rosette};

use crate::args::{Expect, With};
use crate::failure::Failure;
use crate::files;
use crate::side::{Alone, single, takes};
use crate::value::with_unit;

pub(crate) fn run(args: &Expect) -> Result<(), Failure> {
    let sheet = files::sheet(&args.sheet)?;
    if let Some(source) = sheet.rosette(&args.channel) {
        return rosette(args, &sheet, source);
    }
    let index = single(&sheet, &args.channel)?;
    let alone = Alone::new(&sheet, index, &args.with)?;
    let own = sheet.measurement.channels.get(index).ok_or_else(|| Failure::error("there is no such channel"))?;
    let unit = sheet.reading_unit(alone.read).unwrap_or_else(|| own.unit.clone());
    let values = args.values.iter().map(|text| sheet.result(index, text).map(|v| (text, v)));
    let values = values.collect::<Result<Vec<_>, _>>().map_err(Failure::error)?;
    alone.tell_notes();
    let mut out = std::io::stdout().lock();
    for (text, value) in values {
        let quantity = value / alone.factor;
        let reading = alone.plan.forward(quantity, alone.inputs).map_err(|_| alone.beyond(text, quantity))?;
        writeln!(out, "{}", with_unit(reading, Digits::Shortest, &unit))?;
    }
    Ok(())
}

/// A plane state through all grids of a rosette: a line for each.
fn rosette(args: &Expect, sheet: &Sheet, source: &RosetteSource) -> Result<(), Failure> {
    let name = &args.channel;
    let [larger, smaller, direction] = args.values.as_slice() else {
        return Err(Failure::error(format!(
            "'{name}' is a rosette: give the larger principal strain, the smaller, and the direction of the larger from x, as in expect SHEET {name} 900 -300 30"
        )));
    };
    let [one, other] = [larger, smaller];
    let (larger, smaller) = (Sheet::strain(one), Sheet::strain(other));
    let (larger, smaller) = (larger.map_err(Failure::error)?, smaller.map_err(Failure::error)?);
    let degrees = Sheet::angle(direction).map_err(Failure::error)?;
    if smaller > larger {
        return Err(Failure::error(format!("'{one}' and '{other}': the larger principal strain comes first")));
    }
    // the grids of a tee lie along the principal directions
    if let Grids::Two(tee) = &source.grids {
        let first = tee.first().degrees;
        let along = (degrees - first).rem_euclid(90.0);
        if along.min(90.0 - along) > 1e-9 {
            let other = first + 90.0;
            return Err(Failure::error(format!(
                "direction '{direction}': '{name}' is a tee, whose grids lie along the principal directions, so that the larger principal strain is along {first} or {other} degrees from x; in another state of strain its two readings say too little"
            )));
        }
    }
    let state = PrincipalStrains { larger, smaller, shear: larger - smaller, degrees: Some(degrees) }.state();
    let grids = source.each_grid();
    // what is assumed for one grid mostly is for all
    let (mut lines, mut said) = (Vec::new(), Vec::new());
    for &(index, scale, grid) in &grids {
        let grid_of =
            |word: &&String| takes(sheet, index, word) || !grids.iter().any(|&(other, ..)| takes(sheet, other, word));
        let with = With { with: args.with.with.iter().filter(grid_of).cloned().collect() };
        let alone = Alone::new(sheet, index, &with)?;
        let own = sheet.measurement.channels.get(index).ok_or_else(|| Failure::error("there is no such channel"))?;
        let indicated = Rosette::indicated(&grid, &state);
        // the channel's own unit, then what it is computed from
        let quantity = indicated / scale / alone.factor;
        let shown = with_unit(indicated / scale, Digits::Fixed(3), &own.unit);
        let reading = alone.plan.forward(quantity, alone.inputs).map_err(|_| alone.beyond(&shown, quantity))?;
        let unit = sheet.reading_unit(alone.read).unwrap_or_else(|| own.unit.clone());
        alone.tell_new_notes(&mut said);
        lines.push(format!("{}: {}", own.name, with_unit(reading, Digits::Shortest, &unit)));
    }
    let mut out = std::io::stdout().lock();
    for line in lines {
        writeln!(out, "{line}")?;
    }
    Ok(())
}

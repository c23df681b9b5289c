//! Are somebody else's results right, and if not, why?
//!
//! [`check`] is handed a recording that holds raw readings and what somebody made of them. It converts the readings by the
//! sheet, compares, and where the two differ by more than rounding it runs the chain again with one mistake in it at a time,
//! then with two, until one makes the delivered figures. Every mistake that is tried stands in [`MISTAKES`].
//!
//! Both sides share readings and constants, so a difference within the uncertainty is still a difference: it is explained or
//! not, and marked as not material.

mod against;
mod alone;
mod bent;
mod channel;
mod explain;
mod figures;
mod mistake;
mod model;
mod pass;
mod robust;
mod sample;
mod store;
mod verdict;
mod weigh;
mod words;

pub use against::{Change, Changes, against};
pub use mistake::{MISTAKES, Mistake};
pub use pass::Open;
pub use verdict::{Checked, Explanation, Report, Stretch, Verdict};

use std::string::ToString;
use std::vec::Vec;

use crate::recording::{ConvertError, Rows, settle_zeros};
use crate::sheet::Sheet;

use channel::Channel;
use pass::{AllFigures, Delivery};
use store::Store;
use verdict::Extremes;

/// Rows that are all kept in memory; of a longer recording, as many spread over it.
const KEPT: usize = 65_536;
/// Runs of successive rows that are kept of a longer recording, and their length.
const RUNS: usize = 128;
const RUN: usize = 256;
/// Rows that are kept on either side of the largest and smallest values, and of the largest difference.
const AROUND: u64 = 32;

/// Compares delivered results with those of a sheet, and explains the differences.
///
/// - `sheet`: the channels; `reported` says where their delivered results stand. Without it a column with the name of a channel
///   is taken for its result.
/// - `delivered`: a file with the readings, and with the results unless the sheet names another file.
/// - `open`: opens such a file.
/// - `progress`: told the number of rows read, which begins anew with each reading of the file.
///
/// # Errors
/// `ConvertError` as [`convert`](crate::recording::convert), for a pipe, and where no column holds a result.
pub fn check(
    sheet: &Sheet,
    delivered: &mut dyn Rows,
    open: &mut Open<'_>,
    progress: &mut dyn FnMut(u64),
) -> Result<Report, ConvertError> {
    if !delivered.is_file() {
        // a file that is not there says so itself
        drop(delivered.open()?);
        return Err(ConvertError::Unfit {
            file: delivered.name().to_string(),
            reason: "a delivery is read more than once: give a file, not a pipe".into(),
        });
    }
    let (measurement, zeros) = settle_zeros(&sheet.measurement, &sheet.layout, delivered)?;
    let mut delivery = Delivery::find(sheet, measurement, delivered, open)?;
    let mut figures = AllFigures::default();
    let mut store = Store::default();
    let mut extremes: Vec<Extremes> = delivery.targets.iter().map(|_| Extremes::default()).collect();
    let targets = delivery.targets.clone();
    let (mut rows, mut clock) = (0u64, f64::NEG_INFINITY);
    delivery.run(Some(&mut figures), progress, &mut |block, first| {
        rows += block.rows() as u64;
        for ((at, target), theirs) in extremes.iter_mut().zip(&targets).zip(&block.payload) {
            if let Some(own) = block.results.get(target.channel) {
                at.add(&own.values, theirs, first);
            }
        }
        // what is more than can be kept is read once more, when it is known what to keep
        if rows <= KEPT as u64 {
            store.append(block, 0, block.rows(), first, &mut clock);
        }
    })?;
    let whole = rows <= KEPT as u64;
    if !whole {
        store = spread(&mut delivery, rows, &store, &extremes, progress)?;
    }
    let (measurement, inputs) = (delivery.measurement.clone(), delivery.inputs.clone());
    let mut channels: Vec<Channel<'_>> = targets
        .iter()
        .enumerate()
        .filter_map(|(k, target)| {
            let stated = sheet.reported.get(target.channel).and_then(Option::as_ref);
            Channel::new(&measurement, &store, k, &targets, stated, &figures, &inputs)
        })
        .collect();
    if whole {
        for channel in &mut channels {
            channel.count(&store);
        }
    } else {
        over_all(&mut delivery, &mut channels, |_| true, progress)?;
    }
    let mut again = false;
    for channel in &mut channels {
        channel.judge(&store);
        again |= channel.is_explained();
    }
    if whole {
        for channel in channels.iter_mut().filter(|c| c.is_explained()) {
            channel.count(&store);
        }
    } else if again {
        for channel in channels.iter_mut().filter(|c| c.is_explained_by_rows()) {
            channel.count(&store);
        }
        over_all(&mut delivery, &mut channels, |c| c.is_explained() && !c.is_explained_by_rows(), progress)?;
    }
    Ok(Report {
        file: sheet.measurement.title.clone(),
        rows,
        zeros,
        remarks: delivery.remarks.iter().map(ToString::to_string).collect(),
        channels: channels.into_iter().map(Channel::finish).collect(),
    })
}

/// Counts over all rows of the delivery, for some channels.
fn over_all(
    delivery: &mut Delivery<'_>,
    channels: &mut [Channel<'_>],
    wanted: impl Fn(&Channel<'_>) -> bool,
    progress: &mut dyn FnMut(u64),
) -> Result<(), ConvertError> {
    let mut clock = f64::NEG_INFINITY;
    delivery.run(None, progress, &mut |block, first| {
        let mut chunk = Store::default();
        chunk.append(block, 0, block.rows(), first, &mut clock);
        for channel in channels.iter_mut().filter(|c| wanted(c)) {
            channel.count(&chunk);
        }
    })
}

/// Keeps runs of rows spread over the recording, and those about its extremes.
fn spread(
    delivery: &mut Delivery<'_>,
    rows: u64,
    begun: &Store,
    extremes: &[Extremes],
    progress: &mut dyn FnMut(u64),
) -> Result<Store, ConvertError> {
    let mut wanted: Vec<(u64, u64)> = Vec::new();
    // runs an hour apart, or a whole share or multiple of one, so that a clock an hour off can be seen
    let steps: Vec<f64> = begun.seconds.iter().zip(begun.seconds.iter().skip(1)).map(|(a, b)| b - a).collect();
    let hour = 3600.0 / robust::median(&steps);
    let plain = rows as f64 / RUNS as f64;
    let apart = if !(hour.is_finite() && hour > 1.0) {
        plain
    } else if plain <= hour {
        hour / libm::floor(hour / plain).max(1.0)
    } else {
        hour * libm::ceil(plain / hour)
    };
    let apart = apart.max(RUN as f64);
    let mut at = 0.0;
    while at < rows as f64 {
        let first = libm::floor(at) as u64 + 1;
        wanted.push((first, (first + RUN as u64 - 1).min(rows)));
        at += apart;
    }
    for row in extremes.iter().flat_map(Extremes::rows) {
        wanted.push((row.saturating_sub(AROUND).max(1), (row + AROUND).min(rows)));
    }
    wanted.sort_unstable();
    let mut merged: Vec<(u64, u64)> = Vec::new();
    for (from, to) in wanted {
        match merged.last_mut() {
            Some((_, end)) if from <= *end + 1 => *end = to.max(*end),
            _ => merged.push((from, to)),
        }
    }
    let mut store = Store::default();
    let mut clock = f64::NEG_INFINITY;
    delivery.run(None, progress, &mut |block, first| {
        let last = first + block.rows() as u64 - 1;
        let start = merged.partition_point(|(_, to)| *to < first);
        for (from, to) in merged.iter().skip(start).take_while(|(from, _)| *from <= last) {
            let from = (from.max(&first) - first) as usize;
            let to = (to.min(&last) - first) as usize + 1;
            store.append(block, from, to, first, &mut clock);
        }
    })?;
    Ok(store)
}

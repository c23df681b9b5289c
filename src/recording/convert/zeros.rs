//! Zeros that are means: of the recording itself, of another, and second ones at the end.

use std::boxed::Box;
use std::format;
use std::string::{String, ToString};
use std::vec::Vec;

use super::parts::{self, Parts};
use super::{ConvertError, ROWS, Rows};
use crate::measurement::{
    AgainPass, AgainWindow, Column, ColumnRef, Measurement, ZeroPass, ZeroSource, ZerosElsewhere,
};
use crate::recording::{Block, RecordingError, reader_of};
use crate::sheet::Layout;

/// Settles the zeros that are means from a recording, without converting it.
///
/// - `measurement`, `layout`, `rows`: as for [`convert`](super::convert); the recording is a file.
/// - Returns the measurement with its zeros, and a line of words for each.
///
/// # Errors
/// As [`convert`](super::convert).
pub fn settle_zeros(
    measurement: &Measurement,
    layout: &Layout,
    rows: &mut dyn Rows,
) -> Result<(Measurement, Vec<String>), ConvertError> {
    if !rows.is_file() {
        let file = rows.name().to_string();
        return Err(ConvertError::Unfit {
            file,
            reason: "zeros are taken from a file: a pipe is read only once".into(),
        });
    }
    let mut measurement = measurement.clone();
    let said = zeros_of(&mut measurement, layout, &[], &mut [rows], ROWS)?;
    Ok((measurement, said))
}

/// What gives the recording of a name, as a sheet writes it.
pub type OpenRows<'o> = dyn FnMut(&str) -> Result<Box<dyn Rows>, RecordingError> + 'o;

/// Settles the zeros that a sheet takes from other recordings (`zero.file`).
///
/// - `measurement`, `layout`: as for [`convert`](super::convert); these recordings are laid out like the one that is converted.
/// - `open`: gives the recording of a name, as the sheet writes it.
/// - Returns the measurement with these zeros, and a line of words for each.
///
/// # Errors
/// As [`convert`](super::convert).
pub fn settle_zero_files(
    measurement: &Measurement,
    layout: &Layout,
    open: &mut OpenRows<'_>,
) -> Result<(Measurement, Vec<String>), ConvertError> {
    let mut measurement = measurement.clone();
    let mut said = Vec::new();
    for file in measurement.zero_files() {
        let mut rows = open(&file)?;
        let name = rows.name().to_string();
        let unfit = |reason: String| ConvertError::Unfit { file: name.clone(), reason };
        if !rows.is_file() {
            // a file that is not there says so itself
            drop(rows.open()?);
            return Err(unfit("zeros are taken from a file: a pipe is read only once".into()));
        }
        for mut elsewhere in ZerosElsewhere::of(&measurement, &file) {
            let mut reader = reader_of(&mut *rows, layout)?;
            let found = parts::find(&elsewhere.measurement, &reader, &[], &name, Some(&elsewhere.needed))?;
            parts::place(&mut elsewhere.measurement, &reader)?;
            reader.select(&found.numbers, &[])?;
            let mut pass = ZeroPass::new(&elsewhere.measurement)?;
            let mut block = Block::new(ROWS);
            while !pass.is_done() {
                let count = reader.next_block(&mut block)?;
                if count == 0 {
                    break;
                }
                let mut columns = core::mem::take(&mut block.columns);
                for (column, _) in columns.iter_mut().zip(&elsewhere.needed).filter(|(_, needed)| !**needed) {
                    *column = Column::missing(count);
                }
                pass.push(core::mem::take(&mut block.seconds), columns);
            }
            let zeros = pass.finish().map_err(|error| ConvertError::of_zero(&error, &name, reader.tally().doubt()))?;
            said.extend(elsewhere.settle(zeros, &file, &mut measurement));
        }
    }
    Ok((measurement, each_once(said)))
}

/// Settles first and second zeros from these files; a line of words for each.
pub(super) fn zeros_of(
    measurement: &mut Measurement,
    layout: &Layout,
    keep: &[ColumnRef],
    files: &mut [&mut dyn Rows],
    rows: usize,
) -> Result<Vec<String>, ConvertError> {
    let name = files.first().map_or_else(String::new, |f| f.name().to_string());
    refuse_files(measurement, &name)?;
    let mut said = Vec::new();
    let mut block = Block::new(rows);
    if measurement.needs_zero_pass() {
        let mut parts = Parts::open(&mut *files, measurement, layout, keep)?;
        let mut pass = ZeroPass::new(measurement)?;
        while !pass.is_done() && parts.next_block(&mut block)? > 0 {
            pass.push(core::mem::take(&mut block.seconds), core::mem::take(&mut block.columns));
        }
        said.extend(
            pass.finish().map_err(|error| ConvertError::of_zero(&error, &name, parts.doubt()))?.settle(measurement),
        );
    }
    if measurement.needs_again_pass() {
        let mut parts = Parts::open(files, measurement, layout, keep)?;
        let mut pass = AgainPass::new(measurement)?;
        while parts.next_block(&mut block)? > 0 {
            pass.push(core::mem::take(&mut block.seconds), core::mem::take(&mut block.columns));
        }
        let found = pass.finish().map_err(|error| ConvertError::of_zero(&error, &name, parts.doubt()))?;
        said.extend(measurement.settle_again(&found));
    }
    Ok(each_once(said))
}

/// The lines without those that stand there already: that a change goes on with a zero need not be said.
pub(super) fn each_once(lines: Vec<String>) -> Vec<String> {
    let mut said = std::collections::BTreeSet::new();
    lines.into_iter().filter(|line| said.insert(line.clone())).collect()
}

/// A zero from another recording must not be taken from this one.
pub(super) fn refuse_files(measurement: &Measurement, name: &str) -> Result<(), ConvertError> {
    match measurement.zero_files().first() {
        None => Ok(()),
        Some(file) => Err(ConvertError::Unfit {
            file: name.to_string(),
            reason: format!("a zero of the sheet is read from {file}, which has to come first (settle_zero_files)"),
        }),
    }
}

/// A pipe is read once: a stretch of time may lie anywhere in it.
pub(super) fn refuse_on_pipe(measurement: &Measurement, is_file: bool) -> Result<(), String> {
    if is_file {
        return Ok(());
    }
    for channel in &measurement.channels {
        for segment in channel.segments().into_iter().flatten() {
            let where_from = match (&segment.zero, &segment.again) {
                (ZeroSource::Window { from, to }, _) => format!("its zero from {} to {}", from.text, to.text),
                (ZeroSource::RowsFrom { from, rows }, _) => {
                    format!("its zero from the first {rows} rows after {}", from.text)
                }
                (_, Some(again)) => match &again.window {
                    AgainWindow::LastRows(rows) => format!("a second zero from the last {rows} rows"),
                    AgainWindow::Window { from, to } => format!("a second zero from {} to {}", from.text, to.text),
                },
                (ZeroSource::Stated | ZeroSource::Rows(_), None) => continue,
            };
            return Err(format!(
                "channel '{}' takes {where_from}, which needs a whole file: a pipe, or a file that is followed, is read only once",
                channel.name
            ));
        }
    }
    Ok(())
}

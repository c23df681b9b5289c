//! Reading what was delivered: as often as it takes, a block at a time.

use std::boxed::Box;
use std::format;
use std::string::{String, ToString};
use std::vec::Vec;

use super::figures::Figures;
use super::store::Theirs;
use crate::measurement::{Converted, Engine, Measurement};
use crate::recording::{Block, ConvertError, Rows, prepare, reader_of};
use crate::sheet::{Layout, Sheet, conversion};

/// Rows that are read together.
pub(super) const ROWS: usize = 4096;

/// One delivered column.
#[derive(Clone, Debug)]
pub(super) struct Target {
    /// The channel that it is a result of.
    pub(super) channel: usize,
    /// Which file it stands in: 0 = beside the readings.
    pub(super) file: usize,
    /// Its place there, from 0.
    pub(super) column: usize,
    /// Its header.
    pub(super) header: String,
    /// What its figures are multiplied by, and what is added, to be in the unit of the channel.
    pub(super) scale: f64,
    pub(super) offset: f64,
}

/// A file that results stand in, opened by its name in the sheet.
pub type Open<'a> = dyn FnMut(&str) -> Result<Box<dyn Rows>, ConvertError> + 'a;

/// Everything that is read.
pub(super) struct Delivery<'a> {
    pub(super) measurement: Measurement,
    pub(super) layout: &'a Layout,
    main: &'a mut dyn Rows,
    others: Vec<(String, Box<dyn Rows>)>,
    pub(super) targets: Vec<Target>,
    /// Places of the inputs among the columns of the file.
    pub(super) inputs: Vec<usize>,
    pub(super) remarks: Vec<String>,
}

/// What the figures of all columns show.
#[derive(Clone, Debug, Default)]
pub(super) struct AllFigures {
    pub(super) theirs: Vec<Figures>,
    pub(super) inputs: Vec<Figures>,
}

impl<'a> Delivery<'a> {
    /// Finds the columns; zeros that are means have been settled in `measurement`.
    pub(super) fn find(
        sheet: &'a Sheet,
        mut measurement: Measurement,
        main: &'a mut dyn Rows,
        open: &mut Open<'_>,
    ) -> Result<Self, ConvertError> {
        let name = main.name().to_string();
        let unfit = |reason: String| ConvertError::Unfit { file: name.clone(), reason };
        let mut others: Vec<(String, Box<dyn Rows>)> = Vec::new();
        let mut targets = Vec::new();
        let mut remarks;
        let inputs;
        {
            let mut reader = reader_of(main, &sheet.layout)?;
            let found = prepare(&mut measurement, &mut reader, &[], &name)?;
            (inputs, remarks) = (found.numbers, found.remarks);
            for (channel, own) in measurement.channels.iter().enumerate() {
                let stated = sheet.reported.get(channel).and_then(Option::as_ref);
                let file = match stated.and_then(|r| r.file.as_deref()) {
                    None => 0,
                    Some(file) => match others.iter().position(|(name, _)| name == file) {
                        Some(k) => k + 1,
                        None => {
                            others.push((file.to_string(), open(file)?));
                            others.len()
                        }
                    },
                };
                let column = stated.and_then(|r| r.column.clone());
                let wanted = column.clone().unwrap_or_else(|| own.name.as_str().into());
                // (place, header, unit in the file)
                let place = match file.checked_sub(1).and_then(|k| others.get_mut(k)) {
                    None => reader
                        .find(&wanted)
                        .map(|i| (i, reader.names().get(i).cloned(), reader.unit(i).map(ToString::to_string))),
                    Some((_, rows)) => {
                        let reader = reader_of(&mut **rows, &sheet.layout)?;
                        reader
                            .find(&wanted)
                            .map(|i| (i, reader.names().get(i).cloned(), reader.unit(i).map(ToString::to_string)))
                    }
                };
                let (place, header, unit) = match place {
                    Ok(place) => place,
                    Err(error) if stated.is_some() => return Err(error.into()),
                    Err(_) => continue,
                };
                if stated.is_none() && inputs.contains(&place) {
                    continue;
                }
                let difference = own.unit == "K" && matches!(own.source, crate::measurement::Source::Combination(_));
                let said = stated.and_then(|r| r.unit.clone());
                if let (Some(said), Some(written)) = (&said, &unit)
                    && crate::sheet::same_unit(written, said) == Some(false)
                {
                    return Err(unfit(format!(
                        "value '{written}': the unit of column '{wanted}', but the sheet says that '{}' is reported in {said}; one of the two is wrong",
                        own.name
                    )));
                }
                let unit = said.or(unit).unwrap_or_else(|| own.unit.clone());
                let (scale, offset) = conversion(&unit, &own.unit, difference).unwrap_or_else(|| {
                    remarks.push(format!(
                        "{name}: the unit '{unit}' of column '{wanted}' is not known here, and is taken for {}",
                        own.unit
                    ));
                    (1.0, 0.0)
                });
                targets.push(Target {
                    channel,
                    file,
                    column: place,
                    header: header.unwrap_or_default(),
                    scale,
                    offset,
                });
            }
        }
        if targets.is_empty() {
            return Err(unfit(
                "no column here is somebody's result of a channel: name one in the sheet, as in reported = { column = \"strain 1\" }".into(),
            ));
        }
        Ok(Self { measurement, layout: &sheet.layout, main, others, targets, inputs, remarks })
    }

    /// Reads everything once: `sink` gets each block with the number of its first row.
    pub(super) fn run(
        &mut self,
        mut figures: Option<&mut AllFigures>,
        progress: &mut dyn FnMut(u64),
        sink: &mut dyn FnMut(&Converted<Theirs>, u64),
    ) -> Result<(), ConvertError> {
        let name = self.main.name().to_string();
        let targets = &self.targets;
        let in_file = |file: usize| targets.iter().filter(move |t| t.file == file);
        let mut reader = reader_of(self.main, self.layout)?;
        let numbers: Vec<usize> = self.inputs.iter().copied().chain(in_file(0).map(|t| t.column)).collect();
        let texts: &[usize] = if figures.is_some() { &numbers } else { &[] };
        reader.select(&numbers, texts)?;
        let mut others = Vec::new();
        for (k, (_, rows)) in self.others.iter_mut().enumerate() {
            let name = rows.name().to_string();
            let mut reader = reader_of(&mut **rows, self.layout)?;
            let numbers: Vec<usize> = in_file(k + 1).map(|t| t.column).collect();
            reader.select(&numbers, if figures.is_some() { &numbers } else { &[] })?;
            others.push((name, reader, Block::new(ROWS)));
        }
        if let Some(figures) = &mut figures {
            figures.theirs = std::vec![Figures::default(); targets.len()];
            figures.inputs = std::vec![Figures::default(); self.inputs.len()];
        }
        let mut engine: Engine<'_, Theirs> = Engine::new(&self.measurement)?;
        let mut block = Block::new(ROWS);
        let (mut read, mut written) = (0u64, 1u64);
        loop {
            let rows = reader.next_block(&mut block)?;
            for (other, reader, block) in &mut others {
                let their_rows = reader.next_block(block)?;
                if their_rows != rows {
                    return Err(ConvertError::Unfit {
                        file: other.clone(),
                        reason: format!(
                            "it has {} rows than {name}: {} and {}",
                            if their_rows < rows { "fewer" } else { "more" },
                            if their_rows < rows {
                                format!("{}", read + their_rows as u64)
                            } else {
                                format!("more than {}", read + rows as u64)
                            },
                            if their_rows < rows {
                                format!("at least {}", read + rows as u64)
                            } else {
                                format!("{}", read + rows as u64)
                            },
                        ),
                    });
                }
            }
            if rows == 0 {
                break;
            }
            read += rows as u64;
            let own = block.columns.split_off(self.inputs.len());
            let mut theirs: Theirs = std::vec![Vec::new(); targets.len()];
            let mut columns = own.into_iter();
            for (k, (target, slot)) in targets.iter().zip(&mut theirs).enumerate() {
                let (column, text) = if target.file == 0 {
                    let place = in_file(0).take_while(|t| t.channel != target.channel).count();
                    (columns.next(), block.texts.get(self.inputs.len() + place))
                } else {
                    let place = in_file(target.file).take_while(|t| t.channel != target.channel).count();
                    let other = target.file.checked_sub(1).and_then(|k| others.get_mut(k));
                    match other {
                        Some((_, _, block)) => {
                            (block.columns.get_mut(place).map(core::mem::take), block.texts.get(place))
                        }
                        None => (None, None),
                    }
                };
                let column = column.unwrap_or_default();
                if let (Some(figures), Some(text)) = (&mut figures, text)
                    && let Some(figures) = figures.theirs.get_mut(k)
                {
                    column.values.iter().zip(text.iter()).for_each(|(v, text)| figures.add(text, *v));
                }
                *slot = column.values;
                if (target.scale, target.offset) != (1.0, 0.0) {
                    slot.iter_mut().for_each(|v| *v = target.scale * *v + target.offset);
                }
            }
            let inputs = core::mem::take(&mut block.columns);
            if let Some(figures) = &mut figures {
                for ((figures, column), text) in figures.inputs.iter_mut().zip(&inputs).zip(&block.texts) {
                    column.values.iter().zip(text.iter()).for_each(|(v, text)| figures.add(text, *v));
                }
            }
            engine.push(core::mem::take(&mut block.seconds), inputs, theirs);
            while let Some(done) = engine.pop() {
                sink(&done, written);
                written += done.rows() as u64;
            }
            progress(read);
        }
        engine.end();
        while let Some(done) = engine.pop() {
            sink(&done, written);
            written += done.rows() as u64;
        }
        Ok(())
    }
}

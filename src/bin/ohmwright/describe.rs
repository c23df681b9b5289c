//! `describe`: the chains in words.

use std::io::Write;

use ohmwright::measurement;
use ohmwright::recording::{Reader, Rows, reader_of};
use ohmwright::sheet::Sheet;

use crate::args::Describe;
use crate::failure::Failure;
use crate::files::{self, Source};

/// Unused columns that are told one by one.
const TOLD: usize = 40;

/// What becomes of each column of a recording.
fn uses<R: std::io::Read>(sheet: &Sheet, reader: &Reader<R>) -> Result<Vec<String>, Failure> {
    let mut becomes: Vec<Vec<String>> = vec![Vec::new(); reader.names().len()];
    let mut add = |at: usize, what: String| {
        if let Some(list) = becomes.get_mut(at).filter(|list| !list.contains(&what)) {
            list.push(what);
        }
    };
    reader.time_columns().iter().for_each(|at| add(*at, "time".into()));
    for channel in &sheet.measurement.channels {
        for segment in channel.segments().into_iter().flatten() {
            for input in segment.inputs() {
                let Some(column) = sheet.measurement.inputs.get(input) else { continue };
                let own = input == segment.reading || segment.paired.is_some_and(|p| p.input == input);
                let role = if own { "reading" } else { "supply" };
                add(reader.find(column)?, format!("{role} of {}", channel.name));
            }
        }
    }
    for (channel, reported) in sheet.measurement.channels.iter().zip(&sheet.reported) {
        let Some(reported) = reported.as_ref().filter(|r| r.file.is_none()) else { continue };
        let column = reported.column.clone().unwrap_or_else(|| channel.name.as_str().into());
        if let Ok(at) = reader.find(&column) {
            add(at, format!("somebody else's result of {}, for check", channel.name));
        }
    }
    for column in &sheet.keep {
        add(reader.find(column)?, "copied through".into());
    }
    let name = |at: usize| reader.names().get(at).map_or("", String::as_str);
    let used = becomes.iter().enumerate().filter(|(_, list)| !list.is_empty());
    let mut lines: Vec<String> =
        used.map(|(at, list)| format!("column {} '{}': {}", at + 1, name(at), list.join(", "))).collect();
    let unused: Vec<usize> = becomes.iter().enumerate().filter(|(_, l)| l.is_empty()).map(|(at, _)| at).collect();
    if !unused.is_empty() {
        let told: Vec<String> = unused.iter().take(TOLD).map(|at| format!("{} '{}'", at + 1, name(*at))).collect();
        let more = if unused.len() > TOLD { format!(" and {} more", unused.len() - TOLD) } else { String::new() };
        lines.push(format!("not used: column {}{more}", told.join(", ")));
    }
    Ok(lines)
}

pub(crate) fn run(args: &Describe) -> Result<(), Failure> {
    let sheet = files::sheet(&args.sheet)?;
    let mut out = std::io::stdout().lock();
    if !sheet.measurement.title.is_empty() {
        writeln!(out, "{}", sheet.measurement.title)?;
    }
    let mut columns = Vec::new();
    if let Some(path) = &args.recording {
        let mut source = Source::new(path);
        let name = source.name().to_string();
        let reader = reader_of(&mut source, &sheet.layout)?;
        writeln!(out, "\nrecording {name}")?;
        for line in reader.findings().lines() {
            writeln!(out, "  {line}")?;
        }
        for line in uses(&sheet, &reader)? {
            writeln!(out, "  {line}")?;
        }
        for input in &sheet.measurement.inputs {
            let at = reader.find(input)?;
            let unit = reader.unit(at);
            let header = reader.names().get(at).filter(|n| !n.is_empty());
            columns.push(format!(
                "column {}{}{}",
                at + 1,
                header.map_or_else(String::new, |h| format!(" '{h}'")),
                unit.map_or_else(String::new, |u| format!(", unit '{u}' in the file"))
            ));
        }
    }
    // the results of a rosette say once what they have in common
    let mut rosette: Option<(&str, &str, Vec<String>)> = None;
    for (i, channel) in sheet.measurement.channels.iter().enumerate() {
        writeln!(out, "\n{}{}", channel.name, if channel.show { "" } else { " (not shown)" })?;
        let lines = sheet.describe(i);
        let own = matches!(channel.source, measurement::Source::Rosette(_))
            .then(|| channel.name.split(' ').next().unwrap_or(""));
        match (&rosette, own) {
            (Some((name, first, said)), Some(own)) if *name == own => {
                for line in lines.iter().filter(|line| !said.contains(line)) {
                    writeln!(out, "  {line}")?;
                }
                writeln!(out, "  all else as {first}")?;
            }
            _ => {
                for line in &lines {
                    writeln!(out, "  {line}")?;
                }
                rosette = own.map(|own| (own, channel.name.as_str(), lines));
            }
        }
        let mut found: Vec<usize> = Vec::new();
        for input in channel.segments().into_iter().flatten().flat_map(ohmwright::measurement::Segment::inputs) {
            if !found.contains(&input) {
                found.push(input);
            }
        }
        for column in found.iter().filter_map(|input| columns.get(*input)) {
            writeln!(out, "  found: {column}")?;
        }
    }
    Ok(())
}

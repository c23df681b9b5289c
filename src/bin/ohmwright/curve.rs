//! `curve`: one channel as a table with a proven bound.

use ohmwright::chain::Element;
use ohmwright::curve::build::{Curve, Data, Error, Numbers, Request};
use ohmwright::curve::text::{self, Page};
use ohmwright::measurement::ZeroSource;
use ohmwright::sheet::Sheet;

use crate::args::{Curve as Args, CurveForm, CurveNumbers};
use crate::failure::Failure;
use crate::files;
use crate::side::{Alone, single, tell};
use crate::trace::{self, Asked, Product};

pub(crate) fn run(args: &Args) -> Result<(), Failure> {
    let product = make(args)?;
    let target = args.output.as_deref().filter(|path| path.as_os_str() != "-");
    trace::write(&product, target, Asked::Curve(args.clone()))?;
    product.notes.iter().for_each(|note| tell(note));
    Ok(())
}

/// The text of a table.
pub(crate) fn make(args: &Args) -> Result<Product, Failure> {
    let (sheet, named) = files::sheet_and_files(&args.sheet)?;
    let read = trace::taken([args.sheet.clone()].into_iter().chain(named))?;
    let index = single(&sheet, &args.channel)?;
    let alone = Alone::new(&sheet, index, &args.with)?;
    still(&sheet, &alone)?;
    let own = sheet.measurement.channels.get(index).ok_or_else(|| Failure::error("there is no such channel"))?;
    let tolerance =
        sheet.difference(index, args.within.trim()).map_err(|e| Failure::error(format!("--within: {e}")))?;
    let end = |option: &str, text: &Option<String>| {
        let value = text.as_ref().map(|text| sheet.result(index, text.trim())).transpose();
        value.map_err(|e| Failure::error(format!("{option}: {e}")))
    };
    let (from, to) = (end("--from", &args.from)?, end("--to", &args.to)?);
    if let (Some(a), Some(b)) = (from, to)
        && a >= b
    {
        return Err(Failure::error(format!("--from and --to: {a} to {b} {} is no range", own.unit)));
    }
    let numbers = match (args.form, args.numbers) {
        (CurveForm::Csv, None) => Numbers::Double,
        (CurveForm::Csv, Some(_)) => {
            return Err(Failure::error("--numbers: a CSV table is in doubles; --as c and --as rust have a choice"));
        }
        (_, Some(CurveNumbers::Fixed)) => Numbers::Fixed,
        (_, Some(CurveNumbers::Float) | None) => Numbers::Single,
    };
    let name = match &args.name {
        Some(name) if text::is_name(name) => name.clone(),
        Some(name) => {
            return Err(Failure::error(format!(
                "--name '{name}': expected letters, digits and single underscores, a letter first, and no word of C or Rust"
            )));
        }
        None => function_name(&own.name),
    };
    let request = Request {
        chain: &alone.chain,
        inputs: &alone.inputs,
        factor: alone.factor,
        tolerance,
        from,
        to,
        degree: args.degree,
        numbers,
    };
    let reading_unit = sheet.reading_unit(alone.read).unwrap_or_else(|| own.unit.clone());
    let curve = Curve::new(&request).map_err(|e| refused(&e, &alone, args, &own.name, &own.unit, &reading_unit))?;
    let mut notes = alone.notes.clone();
    let lines = said(&sheet, index, &alone, args);
    let page = Page {
        name: &name,
        title: &sheet.measurement.title,
        channel: &own.name,
        reading_unit: &reading_unit,
        unit: &own.unit,
        lines: &lines,
    };
    let out = match args.form {
        CurveForm::Csv => text::csv(&curve, &page),
        CurveForm::C => text::c(&curve, &page),
        CurveForm::Rust => text::rust(&curve, &page),
    };
    let out = out.ok_or_else(|| Failure::error("this form has no such numbers"))?;
    let gap = if own.unit.is_empty() { "" } else { " " };
    let unit = &own.unit;
    let bits = match &curve.data {
        Data::Fixed(t) if t.reading_bits == 0 => format!("; result y / 2^{}", t.result_bits),
        Data::Fixed(t) => format!("; reading x / 2^{}, result y / 2^{}", t.reading_bits, t.result_bits),
        _ => String::new(),
    };
    notes.push(format!(
        "{}: {} piece{} of degree {}, {} bytes{bits}; proven within {}{gap}{unit}, worst of {} readings {:.2e}{gap}{unit}",
        args.output.as_ref().map_or_else(|| own.name.clone(), |p| p.display().to_string()),
        curve.pieces(),
        if curve.pieces() == 1 { "" } else { "s" },
        curve.degree,
        curve.bytes(),
        curve.bound,
        curve.looks,
        curve.seen
    ));
    Ok(Product { bytes: out.into_bytes(), read, notes })
}

/// Refuses what a table cannot follow.
fn still(sheet: &Sheet, alone: &Alone) -> Result<(), Failure> {
    let own = sheet.measurement.channels.get(alone.read);
    let Some((own, segments)) = own.and_then(|c| c.segments().map(|s| (c, s))) else {
        return Err(Failure::error("the channel reads nothing"));
    };
    let [segment] = segments.as_slice() else {
        return Err(Failure::error(format!(
            "channel '{}' changes in time: a table holds one chain of a channel",
            own.name
        )));
    };
    let zeroed = match &alone.chain.element {
        Element::Gauge { zero, .. } | Element::Transducer { zero, .. } => zero.reading.is_some(),
        _ => true,
    };
    if segment.zero != ZeroSource::Stated && !zeroed {
        return Err(Failure::error(format!(
            "channel '{}' takes its zero from a recording, which a table has not: give it by --with zero=READING",
            own.name
        )));
    }
    Ok(())
}

/// A name for the function, from that of the channel.
fn function_name(channel: &str) -> String {
    let mut name = String::from("curve");
    for c in channel.chars() {
        if c.is_ascii_alphanumeric() {
            if name == "curve" {
                name.push('_');
            }
            name.push(c.to_ascii_lowercase());
        } else if !name.ends_with('_') {
            name.push('_');
        }
    }
    name.truncate(63);
    name.trim_end_matches('_').to_string()
}

/// The chain in words, and what was fixed beside it.
fn said(sheet: &Sheet, index: usize, alone: &Alone, args: &Args) -> Vec<String> {
    let left = |line: &&String| {
        let kept = ["uncertainty:", "reported:", "one error with", "reads:"];
        !kept.iter().any(|start| line.starts_with(start))
    };
    let mut all = sheet.describe(alone.read);
    if index != alone.read {
        all.extend(sheet.describe(index));
    }
    let mut lines: Vec<String> = all.iter().filter(left).cloned().collect();
    lines.extend(args.with.with.iter().map(|word| format!("fixed: {word}")));
    lines
}

/// Why there is no table, in the units of the sheet.
fn refused(e: &Error, alone: &Alone, args: &Args, channel: &str, unit: &str, reading_unit: &str) -> Failure {
    let had = |tightest: &Option<f64>| match tightest {
        Some(t) => format!("; {t} {unit} can be had"),
        None => "; no tolerance was found that can be had".into(),
    };
    let numbers = match (args.form, args.numbers) {
        (CurveForm::Csv, _) => "doubles",
        (_, Some(CurveNumbers::Fixed)) => "32-bit integers",
        _ => "single precision",
    };
    Failure::error(match e {
        Error::Tolerance(_) => format!("--within '{}' must be above zero", args.within),
        Error::Endless => {
            format!("channel '{channel}': its results have no end, so the range is needed: --from and --to")
        }
        Error::Empty if alone.chain.extrapolate => format!(
            "channel '{channel}': no table: all its results must be good, and beyond the range of the law they are extrapolated; --from and --to within it"
        ),
        Error::Empty if args.with.with.is_empty() => {
            format!("channel '{channel}': no reading in this range has a result")
        }
        Error::Empty => {
            format!("channel '{channel}': no reading in this range has a result with {}", args.with.with.join(" and "))
        }
        Error::End { result } => return alone.beyond(&format!("{result} {unit}"), result / alone.factor),
        Error::Readings => {
            format!("channel '{channel}': its readings do not fit into {numbers} without loss; a narrower range may")
        }
        Error::TooTight { reading, tightest, .. } => format!(
            "--within '{}': no proof in {numbers} for channel '{channel}' (about reading {reading} {reading_unit}){}",
            args.within,
            had(tightest)
        ),
        Error::TooLong { most, tightest, .. } => {
            format!("--within '{}': channel '{channel}' needs more than {most} pieces{}", args.within, had(tightest))
        }
        e => format!("channel '{channel}': {e}"),
    })
}

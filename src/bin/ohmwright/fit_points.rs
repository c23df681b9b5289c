//! Calibration points from a table.

use ohmwright::chain::Word;
use ohmwright::fit::{Cell, FitError, Points, Uncertainty};
use ohmwright::recording::{Block, ColumnRef, Layout, Reader, Rows};
use ohmwright::sheet::Sheet;

use crate::args::FitPoints;
use crate::failure::Failure;
use crate::files::Source;

/// Most points of a fit.
const MOST: usize = 1_000_000;

/// What a column may be.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum Role {
    Temperature,
    Resistance,
    Strain,
    Load,
    Output,
}

impl Role {
    pub(crate) const fn name(self) -> &'static str {
        match self {
            Self::Temperature => "temperature",
            Self::Resistance => "resistance",
            Self::Strain => "strain",
            Self::Load => "load",
            Self::Output => "output",
        }
    }

    const fn example(self) -> &'static str {
        match self {
            Self::Temperature => "a unit of temperature, as in temperature (degC)",
            Self::Resistance => "a unit of resistance, as in resistance (ohm)",
            Self::Strain => "a unit of strain, as in thermal output (microstrain)",
            Self::Load => "a unit other than a voltage ratio, as in load (kN)",
            Self::Output => "a voltage ratio, as in output (mV/V)",
        }
    }

    /// Whether this is a unit of it.
    fn has(self, unit: &str) -> bool {
        match self {
            Self::Temperature => Sheet::temperature(&format!("1 {unit}")).is_ok() && !unit.is_empty(),
            Self::Resistance => Sheet::resistance(&format!("1 {unit}")).is_ok() && !unit.is_empty(),
            Self::Strain => Sheet::strain(&format!("1 {unit}")).is_ok() && !unit.is_empty(),
            Self::Output => is_ratio(unit),
            Self::Load => !unit.is_empty() && !is_ratio(unit),
        }
    }

    /// A number of this unit in the unit of the fit.
    pub(crate) fn number(self, value: f64, unit: &str) -> Result<f64, String> {
        let text = || format!("{value} {unit}");
        let ready = |zero: Result<f64, String>, one: Result<f64, String>, scale: f64| {
            zero.is_ok_and(|z| z == 0.0) && one.is_ok_and(|o| o == scale)
        };
        let (zero, one) = (format!("0 {unit}"), format!("1 {unit}"));
        match self {
            Self::Temperature if ready(Sheet::temperature(&zero), Sheet::temperature(&one), 1.0) => Ok(value),
            Self::Temperature => Sheet::temperature(&text()),
            Self::Resistance if ready(Sheet::resistance(&zero), Sheet::resistance(&one), 1.0) => Ok(value),
            Self::Resistance => Sheet::resistance(&text()),
            Self::Strain if ready(Sheet::strain(&zero), Sheet::strain(&one), 1e-6) => Ok(value),
            Self::Strain => Sheet::strain(&text()).map(|strain| strain * 1e6),
            Self::Load | Self::Output => Ok(value),
        }
    }

    /// An uncertainty of this unit in the unit of the fit; `None` where it is no unit of this quantity.
    fn uncertainty(self, value: f64, unit: &str, own: &str) -> Option<f64> {
        match self {
            Self::Temperature => match unit {
                "K" | "degC" | "°C" | "deg C" | "C" => Some(value),
                "mK" => Some(value / 1e3),
                "degF" | "°F" => Some(value * 5.0 / 9.0),
                _ => None,
            },
            Self::Resistance | Self::Strain => self.has(unit).then(|| self.number(value, unit).ok()).flatten(),
            Self::Load | Self::Output => (unit == own).then_some(value),
        }
    }

    /// The unit that the fit works in.
    pub(crate) fn unit(self, own: &str) -> &str {
        match self {
            Self::Temperature => "degC",
            Self::Resistance => "ohm",
            Self::Strain => "microstrain",
            Self::Load | Self::Output => own,
        }
    }
}

/// Power of ten of a voltage ratio.
pub(crate) fn ratio_exponent(unit: &str) -> Option<i8> {
    match unit.replace(['\u{b5}', '\u{3bc}'], "u").as_str() {
        "V/V" => Some(0),
        "mV/V" => Some(-3),
        "uV/V" => Some(-6),
        _ => None,
    }
}

fn is_ratio(unit: &str) -> bool {
    ratio_exponent(unit).is_some()
}

/// Points with the places they were read from.
pub(crate) struct Table {
    file: String,
    lines: Vec<u64>,
    /// Numbers of the columns of x, y and uncertainty, from 1.
    places: [usize; 3],
    pub(crate) x: Vec<f64>,
    pub(crate) y: Vec<f64>,
    /// Uncertainties, and whether they are of x.
    uncertainty: Option<(Vec<f64>, bool)>,
    pub(crate) roles: [Role; 2],
    /// Units of x and y as the file writes them.
    pub(crate) units: [String; 2],
}

struct Column {
    index: usize,
    name: String,
    unit: String,
}

/// `load (kN)` into name and unit.
fn split(header: &str) -> (&str, &str) {
    let header = header.trim();
    for (open, close) in [('(', ')'), ('[', ']')] {
        if let Some(inner) = header.strip_suffix(close)
            && let Some((name, unit)) = inner.rsplit_once(open)
        {
            return (name.trim(), unit.trim());
        }
    }
    (header, "")
}

/// Whether a header says that its column holds uncertainties.
fn is_uncertainty(name: &str) -> bool {
    let name = name.to_lowercase();
    name.contains("uncertainty") || name == "u" || name.starts_with("u(") || name.starts_with("u_")
}

impl Table {
    /// Reads points whose columns have these roles.
    pub(crate) fn read(args: &FitPoints, roles: [Role; 2]) -> Result<Self, Failure> {
        let p = args.coverage;
        if !(p > 0.0 && p < 1.0) {
            let message = format!("--coverage {p}: expected a probability above 0 and below 1, as in 0.95");
            return Err(Failure::error(message));
        }
        let mut source = Source::new(&args.points);
        let file = source.name().to_string();
        let mut reader = Reader::new(source.open()?, &file, &Layout::default())?;
        let line = reader.findings().names_line.0;
        if line == 0 {
            return Err(Failure::error(format!(
                "{file}:1: the points need a header with units, as in {} ({}),{} ({})",
                roles[0].name(),
                roles[0].unit("kN"),
                roles[1].name(),
                roles[1].unit("mV/V"),
            )));
        }
        let units_line = reader.units().map(<[String]>::to_vec);
        let columns: Vec<Column> = reader
            .names()
            .iter()
            .enumerate()
            .map(|(index, header)| {
                let (name, own) = split(header);
                let below = units_line.as_ref().and_then(|u| u.get(index)).map_or("", String::as_str);
                Column { index, name: name.into(), unit: if own.is_empty() { below.into() } else { own.into() } }
            })
            .collect();
        let stated = stated(args, &reader, roles)?;
        let at = |message: String| Failure::error(format!("{file}:{line}: {message}"));

        let uncertain = match stated[2] {
            Some(index) => columns.get(index),
            None => {
                let mut found = columns.iter().filter(|c| is_uncertainty(&c.name));
                let first = found.next();
                if let (Some(a), Some(b)) = (first, found.next()) {
                    return Err(at(format!(
                        "columns {} and {} both are uncertainties; pick one with --column uncertainty=NUMBER",
                        a.index + 1,
                        b.index + 1
                    )));
                }
                first
            }
        };
        let mut picked = [0; 2];
        for (slot, (role, stated)) in picked.iter_mut().zip(roles.into_iter().zip(stated)) {
            *slot = match stated {
                Some(index) => index,
                None => {
                    let free = |c: &&Column| {
                        !is_uncertainty(&c.name) && uncertain.is_none_or(|u| u.index != c.index) && role.has(&c.unit)
                    };
                    let mut found = columns.iter().filter(free);
                    let first = found.next().ok_or_else(|| {
                        let headers: Vec<&str> = reader.names().iter().map(String::as_str).collect();
                        at(format!(
                            "no column holds the {}: its header needs {}, or say --column {}=NAME; the columns here are {}",
                            role.name(),
                            role.example(),
                            role.name(),
                            headers.join(", ")
                        ))
                    })?;
                    if let Some(second) = found.next() {
                        return Err(at(format!(
                            "columns {} and {} both can be the {}; pick one with --column {}=NUMBER",
                            first.index + 1,
                            second.index + 1,
                            role.name(),
                            role.name()
                        )));
                    }
                    first.index
                }
            };
        }
        let unit_of = |index: usize| columns.get(index).map_or_else(String::new, |c| c.unit.clone());
        let units = picked.map(unit_of);
        for ((role, unit), index) in roles.into_iter().zip(&units).zip(picked) {
            // a load or an output that was picked by hand may be in any unit
            if !matches!(role, Role::Load | Role::Output) && !role.has(unit) {
                return Err(Failure::error(format!(
                    "{file}:{line}:{}: '{unit}' is no unit of the {}; the header needs {}",
                    index + 1,
                    role.name(),
                    role.example()
                )));
            }
        }
        let wanted: Vec<usize> = picked.into_iter().chain(uncertain.map(|c| c.index)).collect();
        let of_uncertainty = uncertain.map(|c| (c.index, c.unit.clone()));
        let mut table = Self {
            file: file.clone(),
            lines: Vec::new(),
            places: [picked[0] + 1, picked[1] + 1, of_uncertainty.as_ref().map_or(0, |u| u.0 + 1)],
            x: Vec::new(),
            y: Vec::new(),
            uncertainty: None,
            roles,
            units,
        };
        reader.select(&wanted, &[])?;
        let mut raw: Vec<Vec<f64>> = vec![Vec::new(); wanted.len()];
        let mut block = Block::new(4096);
        while reader.next_block(&mut block)? > 0 {
            for ((column, into), index) in block.columns.iter().zip(&mut raw).zip(&wanted) {
                for ((value, word), line) in column.values.iter().zip(&column.words).zip(&block.line) {
                    if *word != Word::Good {
                        let what = if *word == Word::Missing { "no value" } else { "not a number" };
                        let cell = reader.tally().columns.iter().find_map(|t| t.first_unreadable.as_ref());
                        let text = cell
                            .filter(|c| c.line == *line && c.column == index + 1)
                            .map_or_else(String::new, |c| format!("value '{}': ", c.text.escape_debug()));
                        return Err(Failure::error(format!("{file}:{line}:{}: {text}{what}", index + 1)));
                    }
                    into.push(*value);
                }
            }
            table.lines.extend_from_slice(&block.line);
            if table.lines.len() > MOST {
                return Err(Failure::error(format!("{file}: more than {MOST} points")));
            }
        }
        let mut raw = raw.into_iter();
        let (xs, ys, us) = (raw.next().unwrap_or_default(), raw.next().unwrap_or_default(), raw.next());
        table.x = table.convert(0, &xs)?;
        table.y = table.convert(1, &ys)?;
        if let (Some(us), Some((index, unit))) = (us, of_uncertainty) {
            let of = |i: usize, u: f64| roles[i].uncertainty(u, &unit, &table.units[i]);
            let of_x = of(0, 1.0).is_some();
            if !of_x && of(1, 1.0).is_none() {
                return Err(Failure::error(format!(
                    "{file}:{line}:{}: '{unit}' is a unit of neither the {} nor the {}",
                    index + 1,
                    roles[0].name(),
                    roles[1].name()
                )));
            }
            let values = us.iter().map(|u| of(usize::from(!of_x), *u).unwrap_or(f64::NAN)).collect();
            table.uncertainty = Some((values, of_x));
        }
        Ok(table)
    }

    fn convert(&self, side: usize, values: &[f64]) -> Result<Vec<f64>, Failure> {
        let (role, unit) = (self.roles[side], &self.units[side]);
        values
            .iter()
            .zip(&self.lines)
            .map(|(v, line)| {
                role.number(*v, unit)
                    .map_err(|e| Failure::error(format!("{}:{line}:{}: {e}", self.file, self.places[side])))
            })
            .collect()
    }

    /// The points as a fit takes them.
    pub(crate) fn points(&self) -> Points<'_> {
        let uncertainty = match &self.uncertainty {
            None => Uncertainty::None,
            Some((u, true)) => Uncertainty::OfX(u),
            Some((u, false)) => Uncertainty::OfY(u),
        };
        Points { x: &self.x, y: &self.y, uncertainty }
    }

    /// A failure with the place of its point.
    pub(crate) fn failure(&self, error: &FitError) -> Failure {
        let file = &self.file;
        match error {
            FitError::Point { index, what, error } => {
                let place = match what {
                    Cell::X => 0,
                    Cell::Y => 1,
                    Cell::Uncertainty => 2,
                };
                let line = self.lines.get(*index).copied().unwrap_or(0);
                Failure::error(format!("{file}:{line}:{}: {error}", self.places[place]))
            }
            other => Failure::error(format!("{file}: {other}")),
        }
    }

    pub(crate) fn file(&self) -> &str {
        &self.file
    }

    /// Unit that the fit works in: 0 x, 1 y.
    pub(crate) fn unit(&self, side: usize) -> &str {
        self.roles[side].unit(&self.units[side])
    }

    /// Header of a side: 0 x, 1 y.
    pub(crate) fn header(&self, side: usize) -> String {
        let unit = self.unit(side);
        let name = self.roles[side].name();
        if unit.is_empty() { name.into() } else { format!("{name} ({unit})") }
    }

    /// A value that was typed, in the unit of the fit; a bare number is in the unit of the file.
    pub(crate) fn typed(&self, side: usize, text: &str) -> Result<f64, Failure> {
        let (role, own) = (self.roles[side], self.units[side].as_str());
        let text = text.trim().replace('\u{2212}', "-");
        let bare = |text: &str| text.trim().parse::<f64>().ok().filter(|v| v.is_finite());
        let result = match (bare(&text), role) {
            (Some(value), _) => role.number(value, own),
            (None, Role::Temperature) => Sheet::temperature(&text),
            (None, Role::Resistance) => Sheet::resistance(&text),
            (None, Role::Strain) => Sheet::strain(&text).map(|strain| strain * 1e6),
            (None, _) => text
                .strip_suffix(own)
                .and_then(bare)
                .ok_or_else(|| format!("value '{text}' is no number in the unit of the points, '{own}'")),
        };
        result.map_err(Failure::error)
    }
}

/// The columns stated with `--column`: x, y, uncertainty.
fn stated<R: std::io::Read>(
    args: &FitPoints,
    reader: &Reader<R>,
    roles: [Role; 2],
) -> Result<[Option<usize>; 3], Failure> {
    let mut out = [None; 3];
    for word in &args.column {
        let names = [roles[0].name(), roles[1].name(), "uncertainty"];
        let wrong = || {
            Failure::error(format!(
                "--column '{word}': expected {}=NAME, {}=NAME or uncertainty=NAME, with the header of a column or its number",
                names[0], names[1]
            ))
        };
        let (what, column) = word.split_once('=').ok_or_else(wrong)?;
        let slot = names.iter().zip(&mut out).find(|(name, _)| **name == what.trim()).map(|(_, slot)| slot);
        let column = match column.trim().parse::<usize>() {
            Ok(number) if !reader.names().iter().any(|n| n == column) => ColumnRef::Number(number),
            _ => column.into(),
        };
        *slot.ok_or_else(wrong)? = Some(reader.find(&column)?);
    }
    Ok(out)
}

//! Tables over temperature: of a standard, or of a channel's thermometer.

use ohmwright::chain::{Chain, Derivative, Element, Inputs, Network, Output, Temperature};
use ohmwright::measurement::Tolerance;
use ohmwright::platinum::its90::Deviation;
use ohmwright::platinum::{self, FractionOfB, Grade, Resistor, Scale};
use ohmwright::sheet::Sheet;
use ohmwright::thermocouple::{self, Thermocouple};
use ohmwright::{metal, platinum::Class};

use super::{Cell, SUBJECTS, header, lines, typed};
use crate::args::Table;
use crate::failure::Failure;
use crate::side::{Alone, tell};

/// What is tabulated.
struct Column {
    /// Chains by the temperatures they hold for; the reading of each is in the unit of `head`.
    chains: Vec<([f64; 2], Chain)>,
    head: String,
    slope_head: String,
    /// What the reading is multiplied by before it is printed, and the slope.
    scale: [f64; 2],
    decimals: [u8; 2],
    /// Temperatures are on IPTS-68.
    old_scale: bool,
    tolerance: Option<Tolerance>,
}

impl Column {
    fn range(&self) -> [f64; 2] {
        let ends = self.chains.iter().map(|(range, _)| *range);
        ends.reduce(|[low, high], [a, b]| [low.min(a), high.max(b)]).unwrap_or([0.0, 0.0])
    }

    /// The reading and its slope at a temperature in °C.
    fn at(&self, celsius: f64, inputs: &Inputs) -> Result<[f64; 2], Failure> {
        let held = self.chains.iter().find(|([low, high], _)| (*low..=*high).contains(&celsius));
        let Some((_, chain)) = held else {
            let [low, high] = self.range();
            return Err(Failure::error(format!("{celsius} degC is beyond the range, {low} degC to {high} degC")));
        };
        let failed = |e: ohmwright::Error| Failure::error(format!("{celsius} degC: {e}"));
        let chain = Chain { output: Output::Celsius, ..*chain };
        let reading = chain.plan().and_then(|plan| plan.forward(celsius, *inputs)).map_err(failed)?;
        let slope = 1.0 / chain.derivative(Derivative::Reading, celsius, inputs).map_err(failed)?;
        Ok([reading * self.scale[0], slope * self.scale[1]])
    }

    fn rows(&self, args: &Table, inputs: &Inputs) -> Result<Vec<Vec<Cell>>, Failure> {
        let [low, high] = self.range();
        let step = typed([&args.step], [10.0], interval)?[0];
        // whole steps inside the range, downwards where the step is below zero
        let size = step.abs();
        let whole = if size > 0.0 { [(low / size).ceil() * size, (high / size).floor() * size] } else { [low, high] };
        let ends = if step < 0.0 { [whole[1], whole[0]] } else { whole };
        let [from, to] = typed([&args.from, &args.to], ends, Sheet::temperature)?;
        let first = if self.old_scale { "temperature on IPTS-68 (degC)" } else { "temperature (degC)" };
        let mut names = vec![first.to_string()];
        if self.old_scale {
            names.push("on ITS-90 (degC)".into());
        }
        names.extend([self.head.clone(), self.slope_head.clone()]);
        if self.tolerance.is_some() {
            let (_, unit) = self.head.split_once(" (").unwrap_or((&self.head, ")"));
            names.extend([
                "tolerance (K)".into(),
                format!("at its lower end ({unit}"),
                format!("at its upper end ({unit}"),
            ]);
        }
        let mut rows = vec![header(&names)];
        for t in lines([from, to, step])? {
            let [reading, slope] = self.at(t, inputs)?;
            let mut row = vec![Cell::Exact(t)];
            if self.old_scale {
                row.push(platinum::its90_from_ipts68(t).map_or(Cell::Blank, |t| Cell::Fixed(t, 3)));
            }
            let [places, slope_places] = self.decimals;
            row.extend([Cell::Fixed(reading, places), Cell::Fixed(slope, slope_places)]);
            if let Some(tolerance) = &self.tolerance {
                match tolerance.kelvin_at_celsius(t) {
                    Ok(kelvin) => {
                        row.push(Cell::Exact(super::rounded(kelvin)));
                        for end in [t - kelvin, t + kelvin] {
                            row.push(self.at(end, inputs).map_or(Cell::Blank, |[r, _]| Cell::Fixed(r, places)));
                        }
                    }
                    Err(_) => row.extend([Cell::Blank, Cell::Blank, Cell::Blank]),
                }
            }
            rows.push(row);
        }
        Ok(rows)
    }
}

/// A step is a difference of temperatures, whose zero is 0.
fn interval(text: &str) -> Result<f64, String> {
    Sheet::temperature_step(text).map_err(|e| format!("--step: {e}"))
}

/// A resistance thermometer in ohms.
fn resistance(element: Element, r0: f64, old_scale: bool, tolerance: Option<Tolerance>) -> Column {
    // a microkelvin's worth of digits is no use to anybody: six of R0
    let decimals = if r0 >= 1e3 {
        3
    } else if r0 >= 50.0 {
        4
    } else {
        5
    };
    Column {
        chains: vec![(
            element.range_celsius().unwrap_or_default(),
            Chain::new(Network::Resistance { leads: None }, element),
        )],
        head: "resistance (ohm)".into(),
        slope_head: "slope (ohm/K)".into(),
        scale: [1.0, 1.0],
        decimals: [decimals, decimals + 1],
        old_scale,
        tolerance,
    }
}

/// A table of a published standard.
pub(super) fn of_standard(args: &Table) -> Result<Vec<Vec<Cell>>, Failure> {
    let name = args.subject.trim();
    for (typed, what) in [(&args.resistor, "--resistor"), (&args.with.with.first().cloned(), "--with")] {
        if typed.is_some() {
            return Err(Failure::error(format!("{what} belongs to a table of a channel")));
        }
    }
    let r0 = args.r0.as_ref().map(|text| Sheet::resistor(text)).transpose();
    let r0 = r0.map_err(|e| Failure::error(format!("--r0: {e}")))?;
    let no_r0 = |what: &str| match r0 {
        Some(_) => Err(Failure::error(format!("--r0: {what} has no resistance at 0 degC"))),
        None => Ok(()),
    };
    let plain = Inputs::default();
    let named = |published: &str| {
        let bare = name.strip_suffix(":2008").or_else(|| name.strip_suffix(":2022")).filter(|n| *n == "IEC 60751");
        bare.unwrap_or(name).eq_ignore_ascii_case(published)
    };
    if let Some(published) = platinum::PUBLISHED.iter().find(|p| named(p.name)) {
        let r0 = r0.unwrap_or(100.0);
        let tolerance = args.class.as_deref().map(|class| platinum_class(args, published.name, class)).transpose()?;
        let element = Element::Platinum(published.coefficients.with_r0(r0));
        return resistance(element, r0, published.scale == Scale::Ipts68, tolerance).rows(args, &plain);
    }
    let metal_named = |published: &str| named(published) || (published == "nickel DIN 43760" && named("DIN 43760"));
    if let Some(published) = metal::PUBLISHED.iter().find(|p| metal_named(p.name)) {
        no_class(args, published.name)?;
        let law = r0.map_or(published.law, |r0| published.law.with_r0(r0));
        let own = match law {
            metal::Law::Nickel(k) => k.r0_ohms,
            metal::Law::Copper(k) => k.r0_ohms,
            _ => 100.0,
        };
        return resistance(Element::Metal(law), own, false, None).rows(args, &plain);
    }
    let prefix = name.get(..5).filter(|prefix| prefix.eq_ignore_ascii_case("type "));
    let letter = prefix.and_then(|prefix| name.get(prefix.len()..)).unwrap_or(name).trim();
    if let Some(kind) = Thermocouple::ALL.into_iter().find(|k| k.letter().eq_ignore_ascii_case(letter)) {
        no_r0("a thermocouple")?;
        let tolerance = args.class.as_deref().map(|class| thermocouple_class(kind, class)).transpose()?;
        let chain =
            Chain { temperature: Temperature::Fixed(0.0), ..Chain::new(Network::Emf, Element::Thermocouple(kind)) };
        let range = kind.celsius_range();
        let column = Column {
            chains: vec![([range.min, range.max], chain)],
            head: "emf (mV)".into(),
            slope_head: "Seebeck coefficient (uV/K)".into(),
            scale: [1e3, 1e6],
            decimals: [4, 3],
            old_scale: false,
            tolerance,
        };
        return column.rows(args, &plain);
    }
    if name.eq_ignore_ascii_case("ITS-90") {
        no_r0("a reference function")?;
        no_class(args, name)?;
        let of = |deviation: Deviation| {
            let element = Element::Standard { triple_point_ohms: 1.0, deviation };
            (deviation.range_celsius(), Chain::new(Network::Resistance { leads: None }, element))
        };
        let silver = Deviation::ToSilver { a: 0.0, b: 0.0, c: 0.0, d: 0.0, w_aluminium: 3.376_008_60 };
        let column = Column {
            chains: vec![of(Deviation::FromHydrogen { a: 0.0, b: 0.0, c: [0.0; 5] }), of(silver)],
            head: "reference ratio Wr".into(),
            slope_head: "slope (1/K)".into(),
            scale: [1.0, 1.0],
            decimals: [8, 10],
            old_scale: false,
            tolerance: None,
        };
        return column.rows(args, &plain);
    }
    Err(unknown(name, prefix.is_some()))
}

/// Says that no table has this name, and which is nearest.
///
/// - `letter`: the name says that it is a type of thermocouple; all types are equally near then.
fn unknown(name: &str, letter: bool) -> Failure {
    let mut known: Vec<&str> = platinum::PUBLISHED.iter().map(|p| p.name).collect();
    known.extend(metal::PUBLISHED.iter().map(|p| p.name));
    let types = Thermocouple::ALL.map(|k| format!("type {}", k.letter()));
    let more = ["IEC 60751:2008", "IEC 60751:2022", "DIN 43760", "ITS-90"].into_iter().chain(SUBJECTS);
    let candidates = known.iter().copied().chain(more).chain(types.iter().map(String::as_str).filter(|_| !letter));
    let near =
        ohmwright::sheet::nearest(name, candidates).map_or_else(String::new, |n| format!("; did you mean '{n}'?"));
    Failure::error(format!(
        "table '{name}' is not known; there are {}, type B to T, ITS-90, and of a channel {}{near}",
        known.join(", "),
        SUBJECTS.join(", ")
    ))
}

fn no_class(args: &Table, name: &str) -> Result<(), Failure> {
    match &args.class {
        Some(_) => Err(Failure::error(format!("--class: no class of {name} is known here"))),
        None => Ok(()),
    }
}

fn platinum_class(args: &Table, standard: &str, class: &str) -> Result<Tolerance, Failure> {
    let unknown = |known: &str| Failure::error(format!("--class {class}: {standard} has {known}"));
    let resistor = if args.film { Resistor::Film } else { Resistor::WireWound };
    if !args.film && standard == "IEC 60751" && matches!(class, "AA" | "A" | "B" | "C") {
        tell("assumed class of a wire-wound resistor: --film for the narrower range of a film resistor");
    }
    let tolerance = match (standard, class) {
        ("IEC 60751", "AA") => platinum::Tolerance::iec_60751(Class::AA, resistor),
        ("IEC 60751", "A") => platinum::Tolerance::iec_60751(Class::A, resistor),
        ("IEC 60751", "B") => platinum::Tolerance::iec_60751(Class::B, resistor),
        ("IEC 60751", "C") => platinum::Tolerance::iec_60751(Class::C, resistor),
        ("IEC 60751", "1/3 B" | "1/10 B") => {
            let fraction = if class == "1/3 B" { FractionOfB::Third } else { FractionOfB::Tenth };
            let (Some(from), Some(to)) = (&args.from, &args.to) else {
                return Err(Failure::error(format!(
                    "--class {class} is trade usage, in no standard: give the range that the maker states by --from and --to"
                )));
            };
            let [from, to] = [from, to].map(|t| Sheet::temperature(t));
            let range = [from.map_err(Failure::error)?, to.map_err(Failure::error)?];
            platinum::Tolerance::fraction_of_b(fraction, range).map_err(|e| Failure::error(e.to_string()))?
        }
        ("IEC 60751", _) => return Err(unknown("AA, A, B, C, and by trade usage 1/3 B and 1/10 B")),
        ("ASTM E1137", "A") => platinum::Tolerance::astm_e1137(Grade::A),
        ("ASTM E1137", "B") => platinum::Tolerance::astm_e1137(Grade::B),
        ("ASTM E1137", _) => return Err(unknown("grades A and B")),
        ("IEC 751:1983" | "IEC 751:1983, short figures", "A" | "B") => {
            let class = if class == "A" { Class::A } else { Class::B };
            platinum::Tolerance::iec_751(class).ok_or_else(|| unknown("A and B"))?
        }
        ("IEC 751:1983" | "IEC 751:1983, short figures", _) => return Err(unknown("A and B")),
        _ => return Err(unknown("no class that is known here")),
    };
    Ok(Tolerance::Platinum(tolerance))
}

fn thermocouple_class(kind: Thermocouple, class: &str) -> Result<Tolerance, Failure> {
    let class_of = match class {
        "1" => Some(thermocouple::Class::One),
        "2" => Some(thermocouple::Class::Two),
        "3" => Some(thermocouple::Class::Three),
        _ => None,
    };
    class_of.and_then(|class| thermocouple::Tolerance::iec_60584(kind, class)).map(Tolerance::Thermocouple).ok_or_else(
        || Failure::error(format!("--class {class}: IEC 60584-1 has no such class for type {}", kind.letter())),
    )
}

/// A table of a channel's thermometer: the reading at each temperature.
pub(super) fn of_channel(args: &Table, sheet: &Sheet, index: usize, alone: &Alone) -> Result<Vec<Vec<Cell>>, Failure> {
    let Some(range) = alone.chain.element.range_celsius() else {
        let name = args.channel.as_deref().unwrap_or_default();
        return Err(Failure::error(format!("channel '{name}' is no thermometer, which this table is about")));
    };
    for (typed, what) in [(&args.class, "--class"), (&args.r0, "--r0")] {
        if typed.is_some() {
            return Err(Failure::error(format!(
                "{what} belongs to a table of a standard: the sheet states it for a channel"
            )));
        }
    }
    alone.tell_notes();
    let unit = sheet.reading_unit(alone.read).unwrap_or_default();
    let segment = sheet.measurement.channels.get(index).and_then(|c| c.segments()?.first());
    let column = Column {
        chains: vec![(range, alone.chain)],
        head: format!("reading ({unit})"),
        slope_head: format!("slope ({unit}/K)"),
        scale: [1.0, 1.0],
        decimals: [6, 8],
        old_scale: false,
        tolerance: segment.and_then(|s| Some(s.tolerance.as_ref()?.limits)),
    };
    column.rows(args, &alone.inputs)
}

//! Physical values as text: number, uncertainty, unit.

use std::format;
use std::string::{String, ToString};

use super::unit::{self, Kind, Unit};
use crate::uncertainty::{Shape, Uncertainty};

/// A value in the library's unit of its kind, with the uncertainty that was stated.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) struct Quantity {
    pub(crate) value: f64,
    pub(crate) uncertainty: Option<Uncertainty>,
    pub(crate) unit: Unit,
}

/// Reads a quantity of one of these kinds.
///
/// Forms: `2.08`, `2.08 ± 0.5 %`, `100.012 ohm ± 0.010 ohm (k=2)`, `100.012(5) ohm`, `±2.5 V`; `+-` and `+/-` for `±`. What
/// stands in brackets behind an uncertainty: see [`Marks`].
pub(crate) fn parse(text: &str, kinds: &[Kind]) -> Result<Quantity, String> {
    let text = text.replace('\u{2212}', "-");
    let whole = text.trim();
    // a leading sign of both ways states a range by its half: full scale
    let body = strip_plus_minus(whole).unwrap_or(whole);
    let (head, spread) = split_plus_minus(body);
    let (number, rest) = split_number(head.trim())
        .ok_or_else(|| format!("value '{whole}' does not begin with a number; expected {}", expected(kinds)))?;
    let (digits, rest) = match rest.strip_prefix('(') {
        Some(inner) if inner.starts_with(|c: char| c.is_ascii_digit()) => {
            let (digits, after) = inner
                .split_once(')')
                .ok_or_else(|| format!("value '{whole}': the bracket behind the number is not closed"))?;
            (Some(digits.trim()), after)
        }
        _ => (None, rest),
    };
    if rest.strip_prefix(',').is_some_and(|behind| behind.starts_with(|c: char| c.is_ascii_digit())) {
        return Err(format!("value '{whole}': a sheet writes the decimal mark as a point"));
    }
    let (unit_text, head) = split_marks(rest.trim());
    let unit = pick_unit(whole, unit_text, kinds)?;
    let value = scaled(number, &unit).ok_or_else(|| format!("value '{whole}': '{number}' is no number"))?;
    if !value.is_finite() {
        return Err(format!("value '{whole}' is too large"));
    }
    let head = match (head, digits) {
        (Some(marks), None) => {
            return Err(format!(
                "value '{whole}': ({marks}) belongs behind an uncertainty, as in '1.00 V ± 0.01 V (k=2)'"
            ));
        }
        (Some(marks), Some(_)) => Marks::read(marks).map_err(|why| format!("value '{whole}': ({marks}) {why}"))?,
        (None, _) => Marks::default(),
    };
    if head.k.is_some() || head.standard || head.shape.is_some_and(|shape| shape != Shape::Normal) {
        return Err(format!(
            "value '{whole}': digits in brackets are a standard uncertainty, normal; only degrees of freedom can be added, as in (dof=9)"
        ));
    }
    let uncertainty = match (spread, digits) {
        (None, None) => None,
        (Some(_), Some(_)) => {
            return Err(format!("value '{whole}' states its uncertainty twice, in brackets and behind ±"));
        }
        (None, Some(digits)) => {
            Some(head.of_standard(Uncertainty::Standard { standard: in_last_digits(whole, number, digits, &unit)? }))
        }
        (Some(spread), None) => Some(parse_spread(whole, spread, value, &unit)?),
    };
    Ok(Quantity { value, uncertainty, unit })
}

/// Reads the uncertainty of readings of this kind, which stands alone: `2.2 uV (k=1)`.
pub(crate) fn parse_uncertainty(text: &str, kind: Kind) -> Result<Uncertainty, String> {
    let whole = text.trim();
    let size = strip_plus_minus(whole).unwrap_or(whole);
    let (_, rest) = split_number(size)
        .ok_or_else(|| format!("value '{whole}' does not begin with a number; expected {}", kind.expected()))?;
    let (unit_text, _) = split_marks(rest.trim());
    if unit_text == "%" && kind != Kind::Strain {
        return Err(format!("value '{whole}' is a share of each reading; expected {}", kind.expected()));
    }
    // a difference of temperatures is in kelvin
    let kinds: &[Kind] = if kind == Kind::Celsius { &[Kind::Kelvins, Kind::Celsius] } else { &[kind] };
    pick_unit(whole, unit_text, kinds)?;
    parse_spread(whole, size, f64::NAN, &Unit { name: "", kind, exponent: 0, factor: 1.0, offset: 0.0 })
}

/// Reads the uncertainty of readings that may grow with them, `0.05 % + 2 uV (k=2)`: the fixed part and, of the same form, the
/// share of the reading. Meters state limits of both kinds that are added.
pub(crate) fn parse_reading_uncertainty(text: &str, kind: Kind) -> Result<(Uncertainty, Option<Uncertainty>), String> {
    let text = text.replace('\u{2212}', "-");
    let whole = text.trim();
    let body = strip_plus_minus(whole).unwrap_or(whole);
    let (sizes, marks) = split_marks(body);
    let marks = marks.map_or_else(String::new, |marks| format!(" ({marks})"));
    let two = split_sum(sizes);
    let share_of = |part: &str| {
        let (number, rest) = split_number(part.trim())?;
        (rest.trim() == "%").then_some(number).and_then(|number| with_exponent(number, -2))
    };
    let shares = two.iter().flatten().filter(|part| share_of(part).is_some()).count();
    if shares == 0 && two[1].is_none() || kind == Kind::Strain && two[1].is_none() {
        return Ok((parse_uncertainty(whole, kind)?, None));
    }
    if kind == Kind::Celsius {
        return Err(format!("value '{whole}': no share of a temperature is meant; expected an interval in K"));
    }
    if kind == Kind::Strain {
        return Err(format!("value '{whole}': % is a unit of strain itself; expected one size, as in '2 microstrain'"));
    }
    let (Some(share), fixed) = (match two {
        [Some(a), None] => (share_of(a), None),
        [Some(a), Some(b)] if share_of(b).is_none() => (share_of(a), Some(b)),
        [Some(a), Some(b)] if share_of(a).is_none() => (share_of(b), Some(a)),
        _ => (None, None),
    }) else {
        return Err(format!("value '{whole}': expected a share of the reading and a size, as in '0.05 % + 2 uV'"));
    };
    if !(share.is_finite() && share >= 0.0) {
        return Err(format!("value '{whole}': the share must be a finite size, not below zero"));
    }
    let grown = Marks::read(marks.trim().trim_start_matches('(').trim_end_matches(')'))
        .map_err(|why| format!("value '{whole}' {why}"))?;
    let fixed = match fixed {
        Some(fixed) => parse_uncertainty(&format!("{}{marks}", fixed.trim()), kind)?,
        None => grown.of_size(0.0),
    };
    Ok((fixed, Some(grown.of_size(share))))
}

/// `0.05 % + 2 uV` into its two parts; a plus of an exponent is none.
fn split_sum(text: &str) -> [Option<&str>; 2] {
    let behind = split_number(text.trim()).map_or(text, |(_, rest)| rest);
    match behind.find('+') {
        Some(at) => {
            let at = text.len() - behind.len() + at;
            [text.get(..at), text.get(at + 1..)]
        }
        None => [Some(text), None],
    }
}

/// Reads a difference of temperatures, K, also where its unit is that of a temperature.
pub(crate) fn parse_interval(text: &str) -> Result<f64, String> {
    let wrong = match parse(text, &[Kind::Kelvins]) {
        Ok(interval) => return Ok(interval.value),
        Err(wrong) => wrong,
    };
    let read = || {
        // the size of a degree, without its zero
        let unit = Unit { offset: 0.0, ..parse(text, &[Kind::Celsius]).ok()?.unit };
        let text = text.replace('\u{2212}', "-");
        let (number, _) = split_number(text.trim())?;
        scaled(number, &unit)
    };
    read().ok_or(wrong)
}

/// A finite number without a unit.
pub(crate) fn bare_number(text: &str) -> Option<f64> {
    text.trim().replace('\u{2212}', "-").parse().ok().filter(|n: &f64| n.is_finite())
}

fn expected(kinds: &[Kind]) -> String {
    if kinds.len() > 6 {
        return "a number with its unit, as a recording has it".into();
    }
    let mut out = String::new();
    for (i, kind) in kinds.iter().enumerate() {
        if i > 0 {
            out.push_str(" or ");
        }
        out.push_str(kind.expected());
    }
    out
}

fn pick_unit(whole: &str, text: &str, kinds: &[Kind]) -> Result<Unit, String> {
    if let Some(unit) = kinds.iter().find_map(|kind| unit::find(*kind, text)) {
        return Ok(unit);
    }
    if text.is_empty() {
        return Err(format!("value '{whole}' has no unit; expected {}", expected(kinds)));
    }
    if let Some(other) = unit::candidates(text).next() {
        return Err(format!(
            "value '{whole}': '{text}' is the unit of {}; expected {}",
            other.kind.expected(),
            expected(kinds)
        ));
    }
    let known = kinds.iter().flat_map(|kind| unit::spellings(Some(*kind)));
    let nearest =
        super::nearest(&unit::plain(text), known).map_or_else(String::new, |n| format!("; did you mean '{n}'?"));
    Err(format!("value '{whole}': unknown unit '{text}'; expected {}{nearest}", expected(kinds)))
}

/// Number text times the unit, rounded once where the unit is a power of ten.
fn scaled(number: &str, unit: &Unit) -> Option<f64> {
    let plain = with_exponent(number, unit.exponent)?;
    Some(if unit.factor == 1.0 && unit.offset == 0.0 { plain } else { plain * unit.factor + unit.offset })
}

/// `number` · 10^`exponent`, correctly rounded, by moving the exponent in the text.
fn with_exponent(number: &str, exponent: i8) -> Option<f64> {
    let (mantissa, power) = match number.split_once(['e', 'E']) {
        Some((mantissa, power)) => (mantissa, power.parse::<i32>().ok()?),
        None => (number, 0),
    };
    format!("{mantissa}e{}", power.checked_add(i32::from(exponent))?).parse().ok()
}

fn parse_spread(whole: &str, text: &str, value: f64, unit: &Unit) -> Result<Uncertainty, String> {
    let bad = |why: &str| format!("value '{whole}': uncertainty '{}' {why}", text.trim());
    let (number, rest) = split_number(text.trim()).ok_or_else(|| bad("does not begin with a number"))?;
    let (unit_text, marks) = split_marks(rest.trim());
    let marks = Marks::read(marks.unwrap_or("")).map_err(|why| bad(&why))?;
    let size = if unit_text == "%" && unit.kind != Kind::Strain {
        let percent = with_exponent(number, -2).ok_or_else(|| bad("is no number"))?;
        percent * value.abs()
    } else if unit_text.is_empty() {
        with_exponent(number, unit.exponent).ok_or_else(|| bad("is no number"))? * unit.factor
    } else {
        // a difference of temperatures is in kelvin, with no offset
        let kind = if unit.kind == Kind::Celsius { Kind::Kelvins } else { unit.kind };
        let own = unit::find(kind, unit_text)
            .or_else(|| unit::find(unit.kind, unit_text))
            .ok_or_else(|| bad(&format!("is not in a unit of the value, nor in percent: '{unit_text}'")))?;
        with_exponent(number, own.exponent).ok_or_else(|| bad("is no number"))? * own.factor
    };
    if !(size.is_finite() && size >= 0.0) {
        return Err(bad("must be a finite size, not below zero"));
    }
    Ok(marks.of_size(size))
}

/// `100.012(5)`: five in the last digit.
fn in_last_digits(whole: &str, number: &str, digits: &str, unit: &Unit) -> Result<f64, String> {
    let bad = || format!("value '{whole}': the digits in brackets are no whole number");
    let count: f64 =
        if digits.chars().all(|c| c.is_ascii_digit()) { digits.parse().map_err(|_| bad())? } else { return Err(bad()) };
    let mantissa = number.split(['e', 'E']).next().unwrap_or(number);
    let power = number.split_once(['e', 'E']).map_or(0, |(_, p)| p.parse::<i32>().unwrap_or(0));
    let places = mantissa.split_once('.').map_or(0, |(_, behind)| behind.len());
    let places = i32::try_from(places).map_err(|_| bad())?;
    let step: f64 = format!("1e{}", power - places + i32::from(unit.exponent)).parse().map_err(|_| bad())?;
    Ok(count * step * unit.factor)
}

/// The number at the start and what follows it.
fn split_number(text: &str) -> Option<(&str, &str)> {
    let bytes = text.as_bytes();
    let mut end = 0;
    let digit = |i: usize| bytes.get(i).is_some_and(u8::is_ascii_digit);
    if matches!(bytes.first(), Some(b'+' | b'-')) {
        end += 1;
    }
    let start = end;
    while digit(end) {
        end += 1;
    }
    if bytes.get(end) == Some(&b'.') {
        end += 1;
        while digit(end) {
            end += 1;
        }
    }
    if !bytes.get(start..end)?.iter().any(u8::is_ascii_digit) {
        return None;
    }
    if matches!(bytes.get(end), Some(b'e' | b'E')) {
        let sign = usize::from(matches!(bytes.get(end + 1), Some(b'+' | b'-')));
        if digit(end + 1 + sign) {
            end += 1 + sign;
            while digit(end) {
                end += 1;
            }
        }
    }
    Some((text.get(..end)?, text.get(end..)?))
}

fn strip_plus_minus(text: &str) -> Option<&str> {
    ["±", "+/-", "+-"].iter().find_map(|mark| text.strip_prefix(mark)).map(str::trim_start)
}

fn split_plus_minus(text: &str) -> (&str, Option<&str>) {
    ["±", "+/-", "+-"]
        .iter()
        .filter_map(|mark| text.find(mark).map(|at| (at, mark.len())))
        .min()
        .and_then(|(at, len)| Some((text.get(..at)?, Some(text.get(at + len..)?))))
        .unwrap_or((text, None))
}

/// `ohm (k=2)` into the unit and what stands in the brackets, where that says something of an uncertainty.
fn split_marks(text: &str) -> (&str, Option<&str>) {
    if let Some((unit, rest)) = text.split_once('(')
        && let Some(inner) = rest.trim_end().strip_suffix(')')
        && (inner.contains('=') || inner.split(',').any(|word| Marks::WORDS.contains(&word.trim())))
    {
        return (unit.trim(), Some(inner.trim()));
    }
    (text.trim(), None)
}

/// The factor of a half-width that is called normal and no more: 95 % of a normal distribution (JCGM 100:2008, 4.3.4).
const NORMAL_FACTOR: f64 = 1.96;

/// What stands in brackets behind an uncertainty: `rectangular` (as without brackets), `triangular`, `arcsine`, `normal` (an
/// interval of 95 %), `k=2`, `standard`; `dof=9` beside any of them or alone.
#[derive(Clone, Copy, Default)]
struct Marks {
    shape: Option<Shape>,
    standard: bool,
    k: Option<f64>,
    degrees_of_freedom: Option<f64>,
}

impl Marks {
    const WORDS: [&str; 5] = ["rectangular", "triangular", "arcsine", "normal", "standard"];

    fn read(text: &str) -> Result<Self, String> {
        let mut out = Self::default();
        for word in text.split(',').map(str::trim).filter(|w| !w.is_empty()) {
            let twice = || format!("says '{word}' beside something else of the same kind");
            if let Some((key, value)) = word.split_once('=') {
                let number: Option<f64> = value.trim().parse().ok();
                let (slot, what) = match key.trim() {
                    "k" => (&mut out.k, "a coverage factor"),
                    "dof" => (&mut out.degrees_of_freedom, "degrees of freedom"),
                    other => return Err(format!("says '{other}'; known are k and dof")),
                };
                let number = number.ok_or_else(|| format!("has {what} that is no number"))?;
                if !(number.is_finite() && number > 0.0) {
                    return Err(format!("needs {what} above zero"));
                }
                if slot.replace(number).is_some() {
                    return Err(twice());
                }
                continue;
            }
            let shape = match word {
                "rectangular" => Some(Shape::Rectangular),
                "triangular" => Some(Shape::Triangular),
                "arcsine" => Some(Shape::Arcsine),
                "normal" => Some(Shape::Normal),
                "standard" => None,
                other => {
                    let near = super::nearest(other, Self::WORDS.into_iter().chain(["k=2", "dof=9"]))
                        .map_or_else(String::new, |n| format!("; did you mean '{n}'?"));
                    return Err(format!("says '{other}', which is no form of an uncertainty{near}"));
                }
            };
            if out.shape.is_some() && shape.is_some() || out.standard && shape.is_none() {
                return Err(twice());
            }
            out.shape = out.shape.or(shape);
            out.standard |= shape.is_none();
        }
        let bounded = out.shape.is_some_and(|shape| shape != Shape::Normal);
        if out.k.is_some() && (bounded || out.standard) {
            return Err(
                "has a coverage factor, which belongs to an expanded uncertainty of a normal distribution".into()
            );
        }
        Ok(out)
    }

    /// The uncertainty of this size.
    fn of_size(&self, size: f64) -> Uncertainty {
        let uncertainty = match (self.k, self.standard, self.shape) {
            (Some(coverage_factor), ..) => Uncertainty::Expanded { expanded: size, coverage_factor },
            (None, true, None | Some(Shape::Normal)) => Uncertainty::Standard { standard: size },
            (None, true, Some(shape)) => {
                Uncertainty::Estimated { standard: size, degrees_of_freedom: f64::INFINITY, shape }
            }
            (None, false, None | Some(Shape::Rectangular)) => Uncertainty::Rectangular { half_width: size },
            (None, false, Some(Shape::Triangular)) => Uncertainty::Triangular { half_width: size },
            (None, false, Some(Shape::Arcsine)) => Uncertainty::Arcsine { half_width: size },
            (None, false, Some(Shape::Normal)) => {
                Uncertainty::Expanded { expanded: size, coverage_factor: NORMAL_FACTOR }
            }
        };
        self.of_standard(uncertainty)
    }

    /// The same with the degrees of freedom that stand beside it.
    fn of_standard(&self, uncertainty: Uncertainty) -> Uncertainty {
        match self.degrees_of_freedom {
            Some(degrees) => uncertainty.with_degrees_of_freedom(degrees),
            None => uncertainty,
        }
    }
}

/// Prints a number with the unit behind it.
pub(crate) fn show(value: f64, unit: &str) -> String {
    if unit.is_empty() { value.to_string() } else { format!("{value} {unit}") }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn q(text: &str, kind: Kind) -> Quantity {
        parse(text, &[kind]).unwrap()
    }

    #[test]
    fn the_forms_of_the_sheet() {
        // sizes worked by hand
        let g = q("2.08 ± 0.5 %", Kind::Number);
        assert_eq!((g.value, g.uncertainty), (2.08, Some(Uncertainty::Rectangular { half_width: 0.005 * 2.08 })));
        let r = q("100.012 ohm ± 0.010 ohm (k=2)", Kind::Ohms);
        assert_eq!(r.uncertainty, Some(Uncertainty::Expanded { expanded: 0.010, coverage_factor: 2.0 }));
        let d = q("100.012(5) ohm", Kind::Ohms);
        assert_eq!((d.value, d.uncertainty), (100.012, Some(Uncertainty::Standard { standard: 0.005 })));
        assert_eq!(q("±2.5 V", Kind::Volts).value, 2.5);
        assert_eq!(q("1.0 %/100K", Kind::PerKelvin).value, 1e-4);
        assert_eq!(q("11.7e-6/K", Kind::PerKelvin).value, 11.7e-6);
        assert_eq!(q("0.35 kΩ", Kind::Ohms).value, 350.0);
        assert_eq!(q("2.2 µV", Kind::Volts).value, 2.2e-6);
        assert_eq!(q("-12 um/m", Kind::Strain).value, -12e-6);
        assert_eq!(q("1 min", Kind::Seconds).value, 60.0);
        assert_eq!(q("293.15 K", Kind::Celsius).value, 20.0);
        assert!((q("68 degF", Kind::Celsius).value - 20.0).abs() < 1e-13);
        let t = q("21 degC +- 0.5 K", Kind::Celsius);
        assert_eq!(t.uncertainty, Some(Uncertainty::Rectangular { half_width: 0.5 }));
    }

    #[test]
    fn what_stands_in_brackets() {
        // forms, and standard uncertainties by hand: JCGM 100:2008 4.3.4, 4.3.7, 4.3.9; arcsine JCGM 101:2008 6.4.6
        let of = |text: &str| q(&format!("10 V ± 0.6 V ({text})"), Kind::Volts).uncertainty.unwrap();
        for (text, shape, standard, degrees) in [
            ("rectangular", Shape::Rectangular, 0.6 / 3f64.sqrt(), f64::INFINITY),
            ("triangular", Shape::Triangular, 0.6 / 6f64.sqrt(), f64::INFINITY),
            ("arcsine", Shape::Arcsine, 0.6 / 2f64.sqrt(), f64::INFINITY),
            ("normal", Shape::Normal, 0.6 / 1.96, f64::INFINITY),
            ("k=2", Shape::Normal, 0.3, f64::INFINITY),
            ("normal, k = 3", Shape::Normal, 0.2, f64::INFINITY),
            ("standard", Shape::Normal, 0.6, f64::INFINITY),
            ("k=2, dof=9", Shape::Normal, 0.3, 9.0),
            ("dof=50", Shape::Rectangular, 0.6 / 3f64.sqrt(), 50.0),
            ("standard, dof=4.5", Shape::Normal, 0.6, 4.5),
        ] {
            let u = of(text);
            assert_eq!((u.shape(), u.degrees_of_freedom()), (shape, degrees), "{text}");
            assert!((u.standard() - standard).abs() < 1e-15, "{text}: {u:?}");
        }
        let digits = q("10.00(6) V (dof=7)", Kind::Volts).uncertainty.unwrap();
        assert_eq!((digits.standard(), digits.degrees_of_freedom()), (0.06, 7.0));
        let share = q("10 V ± 2 % (triangular)", Kind::Volts).uncertainty;
        assert_eq!(share, Some(Uncertainty::Triangular { half_width: 0.02 * 10.0 }));
    }

    #[test]
    fn a_share_of_the_reading() {
        let of = |text: &str| parse_reading_uncertainty(text, Kind::Volts);
        let flat = |half_width: f64| Uncertainty::Rectangular { half_width };
        assert_eq!(of("0.05 % + 2 uV"), Ok((flat(2e-6), Some(flat(5e-4)))));
        assert_eq!(of("± 2 uV + 0.05%"), Ok((flat(2e-6), Some(flat(5e-4)))));
        assert_eq!(of("1 %"), Ok((flat(0.0), Some(flat(0.01)))));
        assert_eq!(of("2e+0 uV"), Ok((flat(2e-6), None)));
        let wide = |expanded: f64| Uncertainty::Expanded { expanded, coverage_factor: 2.0 };
        assert_eq!(of("0.05 % + 2 uV (k=2)"), Ok((wide(2e-6), Some(wide(5e-4)))));
        for (text, kind, words) in [
            ("0.05 % + 1 %", Kind::Volts, "a share of the reading and a size"),
            ("2 uV + 3 uV", Kind::Volts, "a share of the reading and a size"),
            ("0.05 % + 2 ohm", Kind::Volts, "is the unit of a resistance"),
            ("-1 %", Kind::Volts, "not below zero"),
            ("0.05 % (k=0)", Kind::Volts, "above zero"),
            ("1 %", Kind::Celsius, "no share of a temperature"),
            ("1 % + 2 microstrain", Kind::Strain, "a unit of strain itself"),
        ] {
            let error = parse_reading_uncertainty(text, kind).unwrap_err();
            assert!(error.contains(words), "{text}: {error}");
        }
    }

    #[test]
    fn milli_is_rounded_once() {
        // 0.3 · 0.001 in doubles is not 0.0003
        assert_eq!(q("0.3 mV", Kind::Volts).value, 0.0003);
        assert_eq!(q("1.1 uV/V", Kind::VoltageRatio).value, 1.1e-6);
    }

    #[test]
    fn refusals_say_what_was_expected() {
        for (text, kind, words) in [
            ("350", Kind::Ohms, "has no unit; expected a resistance"),
            ("350 V", Kind::Ohms, "'V' is the unit of a voltage"),
            ("350 kohn", Kind::Ohms, "did you mean 'kohm'?"),
            ("ohm 350", Kind::Ohms, "does not begin with a number"),
            ("350 ohm ± 1 V", Kind::Ohms, "is not in a unit of the value"),
            ("100.0(5) ohm ± 1 %", Kind::Ohms, "twice"),
            ("2.0 ± 0.1 (k=0)", Kind::Number, "above zero"),
            ("2.0 ± 0.1 (dof=0)", Kind::Number, "above zero"),
            ("2.0 ± 0.1 (trianguler)", Kind::Number, "trianguler"),
            ("2.0 ± 0.1 (triangular, trianguler)", Kind::Number, "did you mean 'triangular'?"),
            ("2.0 ± 0.1 (triangular, k=2)", Kind::Number, "belongs to an expanded uncertainty"),
            ("2.0 ± 0.1 (k=2, k=3)", Kind::Number, "of the same kind"),
            ("2.0 ± 0.1 (n=10)", Kind::Number, "known are k and dof"),
            ("2.0(1) (k=2)", Kind::Number, "only degrees of freedom"),
            ("2.0 (triangular)", Kind::Number, "belongs behind an uncertainty"),
            ("1e999 ohm", Kind::Ohms, "too large"),
        ] {
            let error = parse(text, &[kind]).unwrap_err();
            assert!(error.contains(words), "{text}: {error}");
        }
    }
}

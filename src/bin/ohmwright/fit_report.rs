//! What a fit says: as text, as JSON, as the fragment of a sheet.

use std::io::Write;

use ohmwright::fit::{Coefficient, Curve, Statistics};
use serde_json::{Value, json};

use crate::args::FitPoints;
use crate::failure::Failure;

/// An answer to `--reading` or `--at`.
pub(crate) struct Answer {
    pub(crate) asked: String,
    pub(crate) value: f64,
    pub(crate) unit: String,
    pub(crate) standard_uncertainty: f64,
    pub(crate) coverage_factor: f64,
    /// Name and ends of each interval.
    pub(crate) intervals: Vec<(&'static str, [f64; 2])>,
}

/// Everything there is to say.
pub(crate) struct Report {
    pub(crate) model: &'static str,
    pub(crate) file: String,
    pub(crate) equation: String,
    pub(crate) notes: Vec<String>,
    pub(crate) coefficients: Vec<Coefficient>,
    pub(crate) covariance: Vec<Vec<f64>>,
    pub(crate) correlation: Vec<Vec<f64>>,
    pub(crate) statistics: Statistics,
    /// Residual standard deviation as it is told, with its unit.
    pub(crate) scatter: (f64, String),
    pub(crate) heads: Vec<String>,
    pub(crate) rows: Vec<Vec<f64>>,
    pub(crate) answers: Vec<Answer>,
    pub(crate) probability: f64,
    pub(crate) fragment: Option<String>,
    /// Whether the points lie on the curve to within rounding, so that nothing tells how uncertain it is.
    pub(crate) on_the_curve: bool,
    /// Whether the uncertainty of a reading is stated.
    pub(crate) reading_known: bool,
}

impl Report {
    /// The parts that every linear fit has in common.
    pub(crate) fn new(model: &'static str, file: &str, equation: &str, curve: &Curve, args: &FitPoints) -> Self {
        // a scatter of the last bits is that of the arithmetic, not of the points
        let size = curve.residuals().iter().fold(0.0_f64, |m, r| m.max(r.y.abs()));
        let on_the_curve =
            !curve.statistics().stated && curve.statistics().residual_standard_deviation <= 4.0 * f64::EPSILON * size;
        let mut coefficients = curve.coefficients().to_vec();
        let mut covariance = curve.covariance().to_vec();
        let mut correlation = curve.correlation();
        if on_the_curve {
            coefficients.iter_mut().for_each(|c| c.standard_uncertainty = f64::NAN);
            covariance.iter_mut().flatten().for_each(|c| *c = f64::NAN);
            correlation.iter_mut().flatten().for_each(|r| *r = f64::NAN);
        }
        Self {
            model,
            file: file.into(),
            equation: equation.into(),
            notes: Vec::new(),
            coefficients,
            covariance,
            correlation,
            statistics: *curve.statistics(),
            scatter: (curve.statistics().residual_standard_deviation, String::new()),
            heads: Vec::new(),
            rows: Vec::new(),
            answers: Vec::new(),
            probability: args.coverage,
            fragment: None,
            on_the_curve,
            reading_known: args.reading_uncertainty.is_some(),
        }
    }

    /// `, covariance = [[...], ...], dof = 9` of a fragment: the sheet's coefficients in their order, of which those before and
    /// behind the fitted ones are held. Empty where nothing tells how uncertain they are.
    pub(crate) fn covariance_keys(&self, before: usize, all: usize) -> String {
        let known = self.covariance.iter().flatten().all(|c| c.is_finite());
        if !known || self.covariance.iter().flatten().all(|c| *c == 0.0) {
            return String::new();
        }
        let at = |i: usize, j: usize| {
            let of = |i: usize, j: usize| self.covariance.get(i).and_then(|row| row.get(j)).copied();
            match (i.checked_sub(before), j.checked_sub(before)) {
                // both halves alike, whatever the last bit
                (Some(i), Some(j)) => of(i.min(j), i.max(j)).unwrap_or(0.0),
                _ => 0.0,
            }
        };
        let rows: Vec<String> = (0..all).map(|i| list((0..all).map(|j| at(i, j)))).collect();
        let free = self.statistics.coverage_degrees_of_freedom;
        let dof = if free.is_finite() { format!(", dof = {free}") } else { String::new() };
        format!(", covariance = [{}]{dof}", rows.join(", "))
    }

    /// Prints it as it is wanted, whole or not at all.
    pub(crate) fn print(&self, args: &FitPoints) -> Result<(), Failure> {
        let text = if args.sheet {
            match &self.fragment {
                Some(fragment) => format!("{fragment}\n"),
                None => {
                    let why = self.notes.last().map_or("", String::as_str);
                    return Err(Failure::error(format!("{}: there is no fragment for a sheet: {why}", self.file)));
                }
            }
        } else if args.json {
            format!("{:#}\n", self.json())
        } else {
            self.text()
        };
        std::io::stdout().lock().write_all(text.as_bytes())?;
        Ok(())
    }

    fn json(&self) -> Value {
        let s = &self.statistics;
        // null where the points tell nothing of it
        let known = |v: f64| if self.on_the_curve { f64::NAN } else { v };
        let of_reading = |v: f64| if self.reading_known { v } else { known(v) };
        json!({
            "model": self.model,
            "points": self.file,
            "equation": self.equation,
            "notes": self.notes,
            "coefficients": self.coefficients.iter().map(|c| json!({
                "name": c.name, "value": c.value, "standard_uncertainty": c.standard_uncertainty, "unit": c.unit,
            })).collect::<Vec<_>>(),
            "covariance": self.covariance,
            "correlation": self.correlation,
            "statistics": {
                "points": s.points,
                "degrees_of_freedom": s.degrees_of_freedom,
                "residual_standard_deviation": known(self.scatter.0),
                "unit": self.scatter.1,
                "stated_uncertainties": s.stated,
                "condition": s.condition,
            },
            "residuals": { "columns": self.heads, "rows": self.rows },
            "answers": self.answers.iter().map(|a| json!({
                "asked": a.asked, "value": a.value, "unit": a.unit, "standard_uncertainty": of_reading(a.standard_uncertainty),
                "coverage_factor": a.coverage_factor, "probability": self.probability,
                "intervals": a.intervals.iter().map(|(name, ends)| json!({ "name": name, "ends": ends.map(of_reading) })).collect::<Vec<_>>(),
            })).collect::<Vec<_>>(),
            "sheet": self.fragment,
        })
    }

    fn text(&self) -> String {
        let mut out = format!("{} from {}\n{}\n", self.model, self.file, self.equation);
        for note in &self.notes {
            out += &format!("{note}\n");
        }
        out.push('\n');
        let mut rows = vec![["coefficient", "value", "standard uncertainty", "unit"].map(String::from).to_vec()];
        for c in &self.coefficients {
            // one without uncertainty among others that have one was held
            let held = c.standard_uncertainty == 0.0 && self.coefficients.iter().any(|o| o.standard_uncertainty > 0.0);
            let u = if held { "held".into() } else { two_digits(c.standard_uncertainty) };
            rows.push(vec![c.name.clone(), all_digits(c.value), u, c.unit.clone()]);
        }
        out += &columns(&rows);
        if self.coefficients.len() > 1 && self.correlation.iter().flatten().all(|r| r.is_finite()) {
            out += "\ncorrelation\n";
            let mut rows = vec![vec![String::new()]];
            rows[0].extend(self.coefficients.iter().map(|c| c.name.clone()));
            for (c, line) in self.coefficients.iter().zip(&self.correlation) {
                let mut row = vec![c.name.clone()];
                row.extend(line.iter().map(|r| format!("{r:.5}")));
                rows.push(row);
            }
            out += &columns(&rows);
        }
        out += &format!("\n{}\n\n", self.summary());
        let mut rows = vec![self.heads.clone()];
        // what was fitted to three digits of the residuals beside it
        let at = self.heads.iter().position(|h| h.starts_with("residual")).unwrap_or(0);
        let size = self.rows.iter().filter_map(|row| row.get(at)).fold(0.0_f64, |m, r| m.max(r.abs()));
        for row in &self.rows {
            let cell = |(i, v): (usize, &f64)| match i {
                0 | 1 => all_digits(*v),
                _ if self.heads.get(i).is_some_and(|h| h == "leverage") => format!("{v:.4}"),
                _ if self.heads.get(i).is_some_and(|h| h.starts_with("fitted")) => {
                    digits_for(*v, size.max(1e-12 * v.abs()))
                }
                _ => three_digits(*v),
            };
            rows.push(row.iter().enumerate().map(cell).collect());
        }
        out += &columns(&rows);
        for answer in &self.answers {
            out += &format!("\n{}\n", self.answer(answer));
        }
        if let Some(fragment) = &self.fragment {
            out += &format!("\nfor a sheet\n{fragment}\n");
        }
        out
    }

    fn summary(&self) -> String {
        let s = &self.statistics;
        let (scatter, unit) = (&self.scatter.0, &self.scatter.1);
        let free = format!(
            "{} points, {} degree{} of freedom, condition {}",
            s.points,
            s.degrees_of_freedom,
            if s.degrees_of_freedom == 1 { "" } else { "s" },
            significant(s.condition, 2)
        );
        if s.degrees_of_freedom == 0 {
            let known = if s.stated { "uncertainties are those stated" } else { "nothing to judge uncertainties by" };
            return format!("{free}: no spare point, {known}");
        }
        let gap = if unit.is_empty() { "" } else { " " };
        if self.on_the_curve {
            return format!(
                "{free}: the points lie on the curve to within rounding, nothing to judge uncertainties by"
            );
        }
        if s.stated {
            let verdict = if s.residual_standard_deviation > 1.0 {
                "more than stated: all uncertainties are multiplied by it"
            } else {
                "not more than stated: uncertainties follow from those stated"
            };
            return format!(
                "scatter {} of the stated uncertainties, {verdict}\n{free}",
                three_digits(s.residual_standard_deviation)
            );
        }
        format!("residual standard deviation {}{gap}{unit}, {free}", three_digits(*scatter))
    }

    fn answer(&self, a: &Answer) -> String {
        if self.on_the_curve && !self.reading_known {
            return format!("{}: {} {}, no uncertainty is known", a.asked, all_digits(a.value), a.unit);
        }
        let mut out = format!(
            "{}: {} {}, standard uncertainty {}, k = {:.4}",
            a.asked,
            digits_for(a.value, a.standard_uncertainty),
            a.unit,
            two_digits(a.standard_uncertainty),
            a.coverage_factor
        );
        for (name, [low, high]) in &a.intervals {
            let digits = |v: f64| digits_for(v, a.standard_uncertainty);
            out += &format!(
                "\n  {name}, {} %: {} to {} {}",
                percent(self.probability),
                digits(*low),
                digits(*high),
                a.unit
            );
        }
        out
    }
}

/// 95 for 0.95, without the noise of the multiplication.
fn percent(p: f64) -> String {
    let text = format!("{:.6}", 100.0 * p);
    text.trim_end_matches('0').trim_end_matches('.').into()
}

/// Shortest digits that read back as the same number.
pub(crate) fn all_digits(value: f64) -> String {
    // + 0 turns −0 into 0
    let value = value + 0.0;
    let plain = format!("{value}");
    if value == 0.0 || (value.abs() >= 1e-4 && value.abs() < 1e15) { plain } else { format!("{value:e}") }
}

/// A number as a sheet takes it where a number stands bare.
pub(crate) fn bare(value: f64) -> String {
    format!("{:?}", value + 0.0)
}

/// A list of bare numbers.
pub(crate) fn list(values: impl IntoIterator<Item = f64>) -> String {
    let values: Vec<String> = values.into_iter().map(bare).collect();
    format!("[{}]", values.join(", "))
}

/// A size to so many significant digits; a plain number where that is short.
fn significant(v: f64, digits: usize) -> String {
    let short = format!("{v:.*e}", digits - 1);
    let Some((mantissa, power)) = short.split_once('e') else { return short };
    let power: i32 = power.parse().unwrap_or(0);
    match usize::try_from(digits as i32 - 1 - power) {
        Ok(places) if power >= -4 => format!("{v:.places$}"),
        Ok(_) => format!("{mantissa}e{power}"),
        Err(_) if power < 5 => format!("{v:.0}"),
        Err(_) => format!("{mantissa}e{power}"),
    }
}

fn two_digits(u: f64) -> String {
    if u.is_nan() {
        "-".into()
    } else if u == 0.0 {
        "0".into()
    } else {
        significant(u, 2)
    }
}

fn three_digits(v: f64) -> String {
    if v.is_nan() {
        "-".into()
    } else if v == 0.0 {
        "0".into()
    } else {
        significant(v, 3)
    }
}

/// A value to three digits of its uncertainty.
fn digits_for(value: f64, uncertainty: f64) -> String {
    if !value.is_finite() {
        return if value.is_nan() { "-".into() } else { format!("{value}") };
    }
    if !uncertainty.is_finite() || uncertainty <= 0.0 {
        return all_digits(value);
    }
    let mut places = 2;
    let mut u = uncertainty;
    while u < 1.0 && places < 17 {
        u *= 10.0;
        places += 1;
    }
    while u >= 10.0 && places > 0 {
        u /= 10.0;
        places -= 1;
    }
    format!("{value:.places$}")
}

/// Cells in columns, the first to the left, the others to the right.
fn columns(rows: &[Vec<String>]) -> String {
    let count = rows.iter().map(Vec::len).max().unwrap_or(0);
    let width = |i: usize| rows.iter().filter_map(|r| r.get(i)).map(|c| c.chars().count()).max().unwrap_or(0);
    let widths: Vec<usize> = (0..count).map(width).collect();
    let mut out = String::new();
    for row in rows {
        let mut line = String::new();
        for (i, (cell, width)) in row.iter().zip(&widths).enumerate() {
            if i == 0 {
                line += &format!("{cell:<width$}");
            } else {
                line += &format!("  {cell:>width$}");
            }
        }
        out += line.trim_end();
        out.push('\n');
    }
    out
}

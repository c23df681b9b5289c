//! A table as CSV.

use core::fmt::Write;
use std::string::String;
use std::vec::Vec;

use super::{Page, heading, plain};
use crate::chain::Word;
use crate::curve::table::{Curve, Data};

/// Returns the table as CSV: lines that begin with `#`, then a header and one row for each piece.
///
/// With k the `from` of the piece that holds a reading and t = reading − k, the result is c0 + t (c1 + t (c2 + t c3)), in
/// doubles. `None` for a table that is not made of doubles.
#[must_use]
pub fn csv(curve: &Curve, page: &Page<'_>) -> Option<String> {
    let Data::Double(table) = &curve.data else { return None };
    let mut out = String::new();
    for line in heading(curve, page) {
        let _ = writeln!(out, "# {}", plain(&line));
    }
    let _ = writeln!(
        out,
        "# With t = reading - from: result = c0 + t (c1 + t (c2 + t c3)), in doubles; the last piece owns its end."
    );
    let said = |edges: &[(f64, Word)], side: &str, beyond: &str, out: &mut String| {
        for (i, (edge, word)) in edges.iter().enumerate() {
            let from = match i {
                0 => String::new(),
                _ if edge.is_infinite() => ", infinite".into(),
                _ => std::format!(", {edge} and {beyond}"),
            };
            let _ = writeln!(out, "# {side} the table{from}: {word}, no number.");
        }
    };
    said(&table.below, "Below", "below", &mut out);
    said(&table.above, "Above", "above", &mut out);
    let unit = |name: &str, unit: &str| if unit.is_empty() { name.into() } else { std::format!("{name} ({unit})") };
    let per = |power: usize| match (power, page.reading_unit) {
        (_, "") | (0, _) => page.unit.into(),
        (1, per) => std::format!("{}/{per}", page.unit),
        (n, per) => std::format!("{}/{per}^{n}", page.unit),
    };
    let mut names: Vec<String> = std::vec![unit("from", page.reading_unit), unit("to", page.reading_unit)];
    names.extend((0..=curve.degree).map(|n| unit(&std::format!("c{n}"), &per(n))));
    let quoted = names
        .iter()
        .map(|n| if n.contains([',', '"']) { std::format!("\"{}\"", n.replace('"', "\"\"")) } else { n.clone() });
    let _ = writeln!(out, "{}", quoted.collect::<Vec<_>>().join(","));
    let ends = table.knots.iter().zip(table.knots.iter().skip(1));
    for ((from, to), row) in ends.zip(table.coefficients.chunks(curve.degree + 1)) {
        let _ = write!(out, "{from},{to}");
        for c in row {
            // −0 prints 0
            let _ = write!(out, ",{}", c + 0.0);
        }
        let _ = writeln!(out);
    }
    Some(out)
}

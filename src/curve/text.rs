//! Tables as text: CSV, C99 and Rust.
//!
//! What is written is self-contained: constant arrays and one function, with no call of any library. The arithmetic is that of
//! [`eval`](super::eval), so that all three give the same bits.

use core::fmt::Write;
use std::string::String;
use std::vec::Vec;

use super::build::{Curve, Data};
use crate::chain::Word;

/// What a table is called and what is said of it.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Page<'a> {
    /// Name of the function: letters, digits and underscores, no digit first; see [`is_name`].
    pub name: &'a str,
    /// Title of the sheet.
    pub title: &'a str,
    /// Name of the channel.
    pub channel: &'a str,
    /// Unit of the readings.
    pub reading_unit: &'a str,
    /// Unit of the results.
    pub unit: &'a str,
    /// The chain in words, and what was fixed or assumed beside it.
    pub lines: &'a [String],
}

/// Words of C99, C11 and Rust that no function can have as its name, and names of C's own headers that are used.
const TAKEN: &[&str] = &[
    "NAN", "_Alignas", "_Alignof", "_Atomic", "_Bool", "_Complex", "_Generic", "_Imaginary", "_Noreturn", "_Static_assert",
    "_Thread_local", "abstract", "as", "async", "auto", "await", "become", "bool", "box", "break", "case", "char", "const",
    "continue", "crate", "default", "do", "double", "dyn", "else", "enum", "extern", "false", "final", "float", "fn", "for",
    "gen", "goto", "if", "impl", "in", "inline", "int", "int32_t", "int64_t", "let", "long", "loop", "macro", "main", "match",
    "mod", "move", "mut", "override", "priv", "pub", "ref", "register", "restrict", "return", "self", "Self", "short",
    "signed", "sizeof", "static", "struct", "super", "switch", "trait", "true", "try", "type", "typedef", "typeof",
    "uint32_t", "uint8_t", "union", "unsafe", "unsigned", "unsized", "use", "virtual", "void", "volatile", "where", "while",
    "yield", "_", "asm", "INT32_MIN", "INT32_MAX", "INT64_C",
];

/// Returns whether C and Rust take this as the name of a function.
#[must_use]
pub fn is_name(name: &str) -> bool {
    let mut letters = name.chars();
    letters.next().is_some_and(|c| c.is_ascii_alphabetic())
        && letters.all(|c| c.is_ascii_alphanumeric() || c == '_')
        && name.len() <= 63
        && !name.contains("__")
        && !TAKEN.contains(&name)
}

/// What stands above every table, in one line each.
fn heading(curve: &Curve, page: &Page<'_>) -> Vec<String> {
    let gap = |unit: &str| if unit.is_empty() { String::new() } else { std::format!(" {unit}") };
    let (unit, reading_unit) = (gap(page.unit), gap(page.reading_unit));
    let mut out = Vec::new();
    let mut say = |line: String| out.push(line);
    say(std::format!("Channel {} as a table: {} from readings.", page.channel, page.unit));
    if !page.title.is_empty() {
        say(std::format!("Sheet: {}", page.title));
    }
    say(std::format!("Made by ohmwright {}.", env!("CARGO_PKG_VERSION")));
    let [low, high] = curve.readings;
    say(std::format!("Readings: {low} to {high}{reading_unit}."));
    let [low, high] = curve.results;
    say(std::format!("Results: {low} to {high}{unit}."));
    say(std::format!("Tolerance asked for: {}{unit}.", curve.tolerance));
    say(std::format!(
        "Proven bound of |table - chain|: {}{unit}, over every reading of the table, rounding of the table and of its arithmetic included.",
        curve.bound
    ));
    say(std::format!("Largest error seen over {} readings: {:.3e}{unit}.", curve.looks, curve.seen));
    let kind = match &curve.data {
        Data::Double(_) => "doubles",
        Data::Single(_) => "single precision",
        Data::Fixed(_) => "32-bit integers",
    };
    let pieces = curve.pieces();
    let s = if pieces == 1 { "" } else { "s" };
    say(std::format!("{pieces} piece{s} of degree {} in {kind}, {} bytes.", curve.degree, curve.bytes()));
    if let Data::Fixed(table) = &curve.data {
        let (r, v) = (table.reading_bits, table.result_bits);
        let (Some(first), Some(last)) = (table.knots.first(), table.knots.last()) else { return out };
        if r == 0 {
            say(std::format!("A reading is a whole number, {first} to {last}."));
        } else {
            say(std::format!(
                "A reading is an integer x{}: x / 2^{r}{reading_unit}, {first} to {last}; rounding it to that is the caller's and not in the bound.",
                q(r)
            ));
        }
        say(std::format!("A result is an integer y{}: y / 2^{v}{unit}, {} to {}.", q(v), curve.results[0], curve.results[1]));
    } else if !matches!(&curve.data, Data::Double(_)) && page.reading_unit != "count" {
        say("Rounding a reading to single precision is the caller's and not in the bound.".into());
    }
    out.extend(page.lines.iter().cloned());
    out.push(
        "Not a protective function: alarms, trips and stop limits stay with the responsible engineer. A word is no value."
            .into(),
    );
    out
}

/// Integer and fraction bits beside the sign, where both are bits of 32.
fn q(fraction: i32) -> String {
    if (0..=31).contains(&fraction) { std::format!(", Q{}.{fraction}", 31 - fraction) } else { String::new() }
}

/// Only what may stand in a comment.
fn plain(line: &str) -> String {
    let line: String = line.chars().map(|c| if c.is_control() { ' ' } else { c }).collect();
    line.replace("*/", "* /").replace("/*", "/ *").replace("??", "? ?")
}

/// Lines of at most so many characters.
fn wrapped(line: &str, width: usize) -> Vec<String> {
    let mut out = Vec::new();
    let mut now = String::new();
    for word in plain(line).split_whitespace() {
        if !now.is_empty() && now.chars().count() + 1 + word.chars().count() > width {
            out.push(core::mem::replace(&mut now, String::from("  ")));
        }
        if !now.is_empty() && now != "  " {
            now.push(' ');
        }
        now.push_str(word);
    }
    out.push(now);
    out
}

/// A number of a table in C and Rust.
trait Literal: Copy {
    fn literal(self) -> String;
}

impl Literal for f64 {
    fn literal(self) -> String {
        std::format!("{self:e}")
    }
}

impl Literal for f32 {
    fn literal(self) -> String {
        std::format!("{self:e}")
    }
}

impl Literal for i32 {
    fn literal(self) -> String {
        std::format!("{self}")
    }
}

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
    let _ = writeln!(out, "# With t = reading - from: result = c0 + t (c1 + t (c2 + t c3)), in doubles; the last piece owns its end.");
    let said = |edges: &[(f64, Word)], side: &str, out: &mut String| {
        for (i, (edge, word)) in edges.iter().enumerate() {
            let from = match i {
                0 => String::new(),
                _ if edge.is_infinite() => ", infinite".into(),
                _ => std::format!(", from {edge} on"),
            };
            let _ = writeln!(out, "# {side} the table{from}: {word}, no number.");
        }
    };
    said(&table.below, "Below", &mut out);
    said(&table.above, "Above", &mut out);
    let unit = |name: &str, unit: &str| if unit.is_empty() { name.into() } else { std::format!("{name} ({unit})") };
    let per = |power: usize| match (power, page.reading_unit) {
        (_, "") | (0, _) => page.unit.into(),
        (1, per) => std::format!("{}/{per}", page.unit),
        (n, per) => std::format!("{}/{per}^{n}", page.unit),
    };
    let mut names: Vec<String> = std::vec![unit("from", page.reading_unit), unit("to", page.reading_unit)];
    names.extend((0..=curve.degree).map(|n| unit(&std::format!("c{n}"), &per(n))));
    let quoted = names.iter().map(|n| if n.contains([',', '"']) { std::format!("\"{}\"", n.replace('"', "\"\"")) } else { n.clone() });
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

/// Words that a table can say, with their numbers: those of the C interface.
const SAID: [Word; 8] = [
    Word::Good,
    Word::Missing,
    Word::Unreadable,
    Word::Saturated,
    Word::Open,
    Word::Short,
    Word::OutOfRange,
    Word::Ambiguous,
];

/// A word as part of a name.
fn shouted(word: Word) -> String {
    word.as_str().to_uppercase().replace('-', "_")
}

/// Numbers in rows of a few, each with `suffix`.
fn rows<T: Literal>(numbers: &[T], each: usize, open: &str, close: &str, suffix: &str) -> String {
    let mut out = String::new();
    for row in numbers.chunks(each) {
        let row: Vec<String> = row.iter().map(|n| n.literal() + suffix).collect();
        let _ = writeln!(out, "    {open}{}{close},", row.join(", "));
    }
    out
}

/// How a language writes numbers and conditions.
struct Language<S, L> {
    suffix: &'static str,
    infinity: &'static str,
    said: S,
    line: L,
}

/// Comparisons with the edges, outermost first; the first word is what is left.
fn edges<T: Literal>(
    edges: &[(T, Word)],
    sign: &str,
    language: &Language<impl Fn(Word) -> String, impl Fn(Option<String>, String) -> String>,
) -> String {
    let Language { suffix, infinity, said, line } = language;
    let mut out = String::new();
    for (edge, word) in edges.iter().skip(1).rev() {
        let edge = match edge.literal().as_str() {
            "inf" => (*infinity).into(),
            "-inf" => std::format!("-{infinity}"),
            number => std::format!("{number}{suffix}"),
        };
        out += &line(Some(std::format!("reading {sign} {edge}")), said(*word));
    }
    out + &line(None, said(edges.first().map_or(Word::OutOfRange, |(_, word)| *word)))
}

/// What C says of one table.
struct InC<'a, T> {
    knots: &'a [T],
    coefficients: &'a [T],
    below: &'a [(T, Word)],
    above: &'a [(T, Word)],
    /// Type of its numbers.
    kind: &'static str,
    suffix: &'static str,
    /// What stands where there is no number.
    nothing: &'static str,
}

/// Returns the table as C99: constant arrays and one function.
///
/// The function returns 0 and writes a result, or returns what there is to say and writes NaN (`INT32_MIN` for integers),
/// which is no result of any table. `None` for a table of doubles.
#[must_use]
pub fn c(curve: &Curve, page: &Page<'_>) -> Option<String> {
    Some(match &curve.data {
        Data::Single(t) => in_c(
            curve,
            page,
            &InC {
                knots: &t.knots,
                coefficients: &t.coefficients,
                below: &t.below,
                above: &t.above,
                kind: "float",
                suffix: "f",
                nothing: "NAN",
            },
            None,
        ),
        Data::Fixed(t) => in_c(
            curve,
            page,
            &InC {
                knots: &t.knots,
                coefficients: &t.coefficients,
                below: &t.below,
                above: &t.above,
                kind: "int32_t",
                suffix: "",
                nothing: "INT32_MIN",
            },
            Some(&t.shifts),
        ),
        Data::Double(_) => return None,
    })
}

fn in_c<T: Literal>(curve: &Curve, page: &Page<'_>, t: &InC<'_, T>, shifts: Option<&[u8]>) -> String {
    let (name, big) = (page.name, page.name.to_uppercase());
    let InC { kind, suffix, nothing, .. } = *t;
    let mut out = String::from("/*\n");
    let mut lines = heading(curve, page);
    lines.push(std::format!(
        "int32_t {name}({kind} reading, {kind} *value) returns 0 and writes the result, or returns what there is to say and writes {nothing}, which is no result; -1 where value is null."
    ));
    lines.push(if shifts.is_none() {
        "The bound holds with and without fused multiply-add and excess precision; bits are those of the Rust form only without them: compile with -ffp-contract=off (-std=c99 of gcc does that), never with -ffast-math.".into()
    } else {
        "Saturating: a result that would leave 32 bits stops at the end; none does within the table.".into()
    });
    for line in &lines {
        for line in wrapped(line, 116) {
            let _ = writeln!(out, " * {line}");
        }
    }
    out.push_str(" */\n#include <stdint.h>\n");
    if shifts.is_none() {
        out.push_str("#include <math.h> /* NAN and INFINITY alone */\n\n#ifdef __FAST_MATH__\n#error \"-ffast-math takes readings that are no numbers for numbers\"\n#endif\n");
    }
    let pieces = curve.pieces();
    let said = |word: Word| std::format!("{big}_{}", shouted(word));
    out.push_str("\nenum {\n");
    for word in SAID {
        let _ = writeln!(out, "    {} = {},", said(word), word as u8);
    }
    // no comma after the last, for C++ of 1998
    out.truncate(out.len() - 2);
    out.push_str("\n};\n\n");
    let _ = write!(out, "static const {kind} {name}_knots[{}] = {{\n{}}};\n\n", pieces + 1, rows(t.knots, 6, "", "", suffix));
    let _ = write!(
        out,
        "static const {kind} {name}_coefficients[{pieces}][{}] = {{\n{}}};\n\n",
        curve.degree + 1,
        rows(t.coefficients, curve.degree + 1, "{ ", " }", suffix)
    );
    if let Some(shifts) = shifts {
        let shifts: Vec<i32> = shifts.iter().map(|s| i32::from(*s)).collect();
        let _ = write!(out, "static const uint8_t {name}_shifts[{pieces}] = {{\n{}}};\n\n", rows(&shifts, 24, "", "", ""));
        let _ = write!(
            out,
            "/* v / 2^30 to the nearest integer, ties away from zero */\nstatic int64_t {name}_shifted(int64_t v)\n{{\n    const int64_t half = INT64_C(1) << 29;\n    return v < 0 ? -((half - v) >> 30) : (v + half) >> 30;\n}}\n\n"
        );
    }
    let _ = write!(
        out,
        "int32_t {name}({kind} reading, {kind} *value);\n\nint32_t {name}({kind} reading, {kind} *value)\n{{\n    uint32_t low = 0u, high = {pieces}u, middle;\n"
    );
    out.push_str(if shifts.is_some() { "    int64_t u, sum;\n" } else { "    float t, product, sum;\n" });
    let _ = write!(out, "    if (value == 0) {{\n        return -1;\n    }}\n    *value = {nothing};\n");
    if shifts.is_none() {
        let _ = write!(out, "    if (reading != reading) {{\n        return {};\n    }}\n", said(Word::Missing));
    }
    let line = |condition: Option<String>, word: String| match condition {
        Some(condition) => std::format!("        if ({condition}) {{\n            return {word};\n        }}\n"),
        None => std::format!("        return {word};\n"),
    };
    let language = Language { suffix, infinity: "INFINITY", said, line };
    let first = t.knots.first().map_or_else(String::new, |k| k.literal());
    let last = t.knots.last().map_or_else(String::new, |k| k.literal());
    let _ = write!(out, "    if (reading < {first}{suffix}) {{\n{}    }}\n", edges(t.below, "<=", &language));
    let _ = write!(out, "    if (reading > {last}{suffix}) {{\n{}    }}\n", edges(t.above, ">=", &language));
    let _ = write!(
        out,
        "    while (high - low > 1u) {{\n        middle = (low + high) >> 1;\n        if (reading >= {name}_knots[middle]) {{\n            low = middle;\n        }} else {{\n            high = middle;\n        }}\n    }}\n"
    );
    let degree = curve.degree;
    if shifts.is_some() {
        let _ = writeln!(out, "    u = ((int64_t)reading - {name}_knots[low]) << (30 - {name}_shifts[low]);");
        let _ = writeln!(out, "    sum = {name}_coefficients[low][{degree}];");
        for n in (0..degree).rev() {
            let _ = writeln!(out, "    sum = {name}_coefficients[low][{n}] + {name}_shifted(sum * u);");
        }
        out.push_str("    if (sum > INT32_MAX) {\n        sum = INT32_MAX;\n    }\n    if (sum < -INT32_MAX) {\n        sum = -INT32_MAX;\n    }\n    *value = (int32_t)sum;\n");
    } else {
        let _ = writeln!(out, "    t = reading - {name}_knots[low];");
        let _ = writeln!(out, "    sum = {name}_coefficients[low][{degree}];");
        for n in (0..degree).rev() {
            let _ = writeln!(out, "    product = sum * t;\n    sum = product + {name}_coefficients[low][{n}];");
        }
        out.push_str("    *value = sum;\n");
    }
    let _ = write!(out, "    return {};\n}}\n", (language.said)(Word::Good));
    out
}

/// Returns the table as a Rust module: constant arrays and one function, without std, allocation, panic and unsafe code.
///
/// The function returns the result, or the number of what there is to say, as the C interface has it. `None` for a table of
/// doubles.
#[must_use]
pub fn rust(curve: &Curve, page: &Page<'_>) -> Option<String> {
    Some(match &curve.data {
        Data::Single(t) => in_rust(curve, page, (&t.knots, &t.coefficients), (&t.below, &t.above), "f32", None),
        Data::Fixed(t) => in_rust(curve, page, (&t.knots, &t.coefficients), (&t.below, &t.above), "i32", Some(&t.shifts)),
        Data::Double(_) => return None,
    })
}

/// Words on one side of a table.
type Beyond<'a, T> = &'a [(T, Word)];

fn in_rust<T: Literal>(
    curve: &Curve,
    page: &Page<'_>,
    (knots, coefficients): (&[T], &[T]),
    (below, above): (Beyond<'_, T>, Beyond<'_, T>),
    kind: &str,
    shifts: Option<&[u8]>,
) -> String {
    let (name, pieces, degree) = (page.name, curve.pieces(), curve.degree);
    let mut out = String::new();
    for line in heading(curve, page) {
        for line in wrapped(&line, 116) {
            let _ = writeln!(out, "// {}", line.trim_end());
        }
    }
    let said: Vec<String> = SAID.iter().skip(1).map(|w| std::format!("{} {w}", *w as u8)).collect();
    let _ = write!(
        out,
        "\n/// Result of a reading, or the number of what there is to say: {}.\n#[allow(non_snake_case, clippy::all, clippy::pedantic)]\n",
        said.join(", ")
    );
    let _ = write!(out, "pub fn {name}(reading: {kind}) -> Result<{kind}, u8> {{\n");
    let _ = write!(out, "    const KNOTS: [{kind}; {}] = [\n{}    ];\n", pieces + 1, rows(knots, 6, "    ", "", ""));
    let _ = write!(
        out,
        "    const COEFFICIENTS: [[{kind}; {}]; {pieces}] = [\n{}    ];\n",
        degree + 1,
        rows(coefficients, degree + 1, "    [", "]", "")
    );
    if let Some(shifts) = shifts {
        let shifts: Vec<i32> = shifts.iter().map(|s| i32::from(*s)).collect();
        let _ = write!(out, "    const SHIFTS: [u8; {pieces}] = [\n{}    ];\n", rows(&shifts, 24, "    ", "", ""));
    } else {
        let _ = write!(out, "    if reading.is_nan() {{\n        return Err({});\n    }}\n", Word::Missing as u8);
    }
    let number = |word: Word| std::format!("{}", word as u8);
    let line = |condition: Option<String>, word: String| match condition {
        Some(condition) => std::format!("        if {condition} {{\n            return Err({word});\n        }}\n"),
        None => std::format!("        return Err({word});\n"),
    };
    let language = Language { suffix: "", infinity: "f32::INFINITY", said: number, line };
    let first = knots.first().map_or_else(String::new, |k| k.literal());
    let last = knots.last().map_or_else(String::new, |k| k.literal());
    let _ = write!(out, "    if reading < {first} {{\n{}    }}\n", edges(below, "<=", &language));
    let _ = write!(out, "    if reading > {last} {{\n{}    }}\n", edges(above, ">=", &language));
    let _ = write!(
        out,
        "    let (mut low, mut high) = (0usize, {pieces}usize);\n    while high - low > 1 {{\n        let middle = (low + high) >> 1;\n        match KNOTS.get(middle) {{\n            Some(knot) if reading >= *knot => low = middle,\n            _ => high = middle,\n        }}\n    }}\n"
    );
    if shifts.is_some() {
        let _ = write!(
            out,
            "    let (Some(knot), Some(c), Some(shift)) = (KNOTS.get(low), COEFFICIENTS.get(low), SHIFTS.get(low)) else {{\n        return Err({});\n    }};\n    // v / 2^30 to the nearest integer, ties away from zero\n    let shifted = |v: i64| if v < 0 {{ -(((1i64 << 29) - v) >> 30) }} else {{ (v + (1i64 << 29)) >> 30 }};\n    let u = (reading as i64 - *knot as i64) << (30 - *shift);\n    let mut sum = c[{degree}] as i64;\n",
            Word::Unreadable as u8
        );
        for n in (0..degree).rev() {
            let _ = writeln!(out, "    sum = c[{n}] as i64 + shifted(sum * u);");
        }
        out.push_str("    if sum > i32::MAX as i64 {\n        sum = i32::MAX as i64;\n    }\n    if sum < -(i32::MAX as i64) {\n        sum = -(i32::MAX as i64);\n    }\n    Ok(sum as i32)\n}\n");
    } else {
        let _ = write!(
            out,
            "    let (Some(knot), Some(c)) = (KNOTS.get(low), COEFFICIENTS.get(low)) else {{\n        return Err({});\n    }};\n    let t = reading - *knot;\n    let mut sum = c[{degree}];\n",
            Word::Unreadable as u8
        );
        for n in (0..degree).rev() {
            let _ = writeln!(out, "    sum = sum * t + c[{n}];");
        }
        out.push_str("    Ok(sum)\n}\n");
    }
    out
}

//! A table as a Rust module.

use core::fmt::Write;
use std::string::String;
use std::vec::Vec;

use super::{Language, Literal, Page, SAID, edges, heading, rows, steps, wrapped};
use crate::chain::Word;
use crate::curve::table::{Curve, Data};

/// Returns the table as a Rust module: constant arrays and one function, without std, allocation, panic and unsafe code.
///
/// The function returns the result, or the number of what there is to say, as the C interface has it. `None` for a table of
/// doubles.
#[must_use]
pub fn rust(curve: &Curve, page: &Page<'_>) -> Option<String> {
    Some(match &curve.data {
        Data::Single(t) => in_rust(curve, page, (&t.knots, &t.coefficients), (&t.below, &t.above), "f32", None),
        Data::Fixed(t) => {
            in_rust(curve, page, (&t.knots, &t.coefficients), (&t.below, &t.above), "i32", Some(&t.shifts))
        }
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
    let _ = writeln!(out, "pub fn {name}(reading: {kind}) -> Result<{kind}, u8> {{");
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
    let _ = writeln!(out, "    let {}low = 0usize;", if pieces > 1 { "mut " } else { "" });
    for step in steps(pieces) {
        let _ = write!(
            out,
            "    if KNOTS.get(low + {step}).is_some_and(|knot| reading >= *knot) {{\n        low += {step};\n    }}\n"
        );
    }
    if shifts.is_some() {
        let _ = write!(
            out,
            "    let (Some(knot), Some(c), Some(shift)) = (KNOTS.get(low), COEFFICIENTS.get(low), SHIFTS.get(low)) else {{\n        return Err({});\n    }};\n    // v / 2^30 to the nearest integer, the upper of two\n    let shifted = |v: i64| (v + (1i64 << 29)) >> 30;\n    let u = (reading as i64 - *knot as i64) << (30 - *shift);\n    let mut sum = c[{degree}] as i64;\n",
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

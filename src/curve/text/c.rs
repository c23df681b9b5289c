//! A table as C99.

use core::fmt::Write;
use std::string::String;
use std::vec::Vec;

use super::{Language, Literal, Page, SAID, edges, heading, rows, steps, wrapped};
use crate::chain::Word;
use crate::curve::table::{Curve, Data};

/// A word as part of a name.
fn shouted(word: Word) -> String {
    word.as_str().to_uppercase().replace('-', "_")
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
    let _ = write!(
        out,
        "static const {kind} {name}_knots[{}] = {{\n{}}};\n\n",
        pieces + 1,
        rows(t.knots, 6, "", "", suffix)
    );
    let _ = write!(
        out,
        "static const {kind} {name}_coefficients[{pieces}][{}] = {{\n{}}};\n\n",
        curve.degree + 1,
        rows(t.coefficients, curve.degree + 1, "{ ", " }", suffix)
    );
    if let Some(shifts) = shifts {
        let shifts: Vec<i32> = shifts.iter().map(|s| i32::from(*s)).collect();
        let _ =
            write!(out, "static const uint8_t {name}_shifts[{pieces}] = {{\n{}}};\n\n", rows(&shifts, 24, "", "", ""));
        let _ = write!(
            out,
            "/* v / 2^30 to the nearest integer, the upper of two; lifted by 2^62, since C leaves the shift of a negative number open */\nstatic int64_t {name}_shifted(int64_t v)\n{{\n    const uint64_t lifted = (UINT64_C(1) << 62) + (UINT64_C(1) << 29);\n    return (int64_t)(((uint64_t)v + lifted) >> 30) - (INT64_C(1) << 32);\n}}\n\n"
        );
    }
    let _ = write!(
        out,
        "int32_t {name}({kind} reading, {kind} *value);\n\nint32_t {name}({kind} reading, {kind} *value)\n{{\n    uint32_t low = 0u;\n"
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
    for step in steps(pieces) {
        let _ = write!(out, "    if (reading >= {name}_knots[low + {step}u]) {{\n        low += {step}u;\n    }}\n");
    }
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

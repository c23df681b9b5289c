//! What can stand in a line of units.

/// Returns a unit without the brackets around it.
pub(in crate::recording) fn bare_unit(text: &str) -> &str {
    let text = text.trim();
    let inner = |open, close| text.strip_prefix(open).and_then(|t: &str| t.strip_suffix(close));
    inner('(', ')').or_else(|| inner('[', ']')).map_or(text, str::trim)
}

/// Whether a cell can stand in a line of units: blank, or factors of known units.
pub(in crate::recording) fn is_unit(cell: &str) -> bool {
    const UNITS: [&str; 66] = [
        "V",
        "A",
        "W",
        "J",
        "N",
        "Nm",
        "Pa",
        "bar",
        "s",
        "min",
        "h",
        "d",
        "Hz",
        "K",
        "°C",
        "℃",
        "degC",
        "deg C",
        "C",
        "degF",
        "°F",
        "F",
        "deg",
        "°",
        "rad",
        "m",
        "in",
        "ft",
        "g",
        "kg",
        "t",
        "lb",
        "l",
        "L",
        "ohm",
        "Ohm",
        "ohms",
        "Ω",
        "Ω",
        "S",
        "F",
        "strain",
        "ε",
        "epsilon",
        "count",
        "counts",
        "digit",
        "digits",
        "bit",
        "%",
        "%RH",
        "‰",
        "ppm",
        "dB",
        "1",
        "-",
        "psi",
        "UTC",
        "date",
        "hh:mm:ss",
        "yyyy-mm-dd",
        "ISO 8601",
        "ISO8601",
        "text",
        "none",
        "gal",
    ];
    const PREFIXES: [&str; 11] = ["", "n", "u", "\u{b5}", "\u{3bc}", "micro", "m", "c", "k", "M", "G"];
    let unit = bare_unit(cell);
    if unit.is_empty() || UNITS.contains(&unit) {
        return true;
    }
    unit.split(['/', '·', '*', '^']).all(|factor| {
        let factor = factor.trim().trim_end_matches(|c: char| c.is_ascii_digit() || "²³⁻¹-".contains(c));
        factor.is_empty() || UNITS.iter().any(|u| PREFIXES.iter().any(|p| factor.strip_prefix(p) == Some(u)))
    })
}

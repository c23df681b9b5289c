//! Units as sheets write them.

use std::string::String;
use std::vec::Vec;

/// What a unit measures.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum Kind {
    Number,
    Volts,
    VoltageRatio,
    Ohms,
    Amperes,
    Count,
    Strain,
    ShearStrain,
    Celsius,
    PerKelvin,
    Pascals,
    Seconds,
    Metres,
    SquareMillimetres,
    OhmMetres,
    Kelvins,
    Newtons,
    NewtonMetres,
    Kilograms,
    Degrees,
    SquareMetres,
    KelvinsPerWatt,
}

impl Kind {
    /// What to call it, with the units one would expect.
    pub(crate) const fn expected(self) -> &'static str {
        match self {
            Self::Number => "a plain number",
            Self::Volts => "a voltage (V, mV, uV)",
            Self::VoltageRatio => "a voltage ratio (V/V, mV/V, uV/V)",
            Self::Ohms => "a resistance (ohm, kohm, Mohm)",
            Self::Amperes => "a current (A, mA, uA)",
            Self::Count => "a converter code (count)",
            Self::Strain => "a strain (microstrain, %, strain)",
            Self::ShearStrain => "a shear strain (shear microstrain)",
            Self::Celsius => "a temperature (degC, K, degF)",
            Self::PerKelvin => "a coefficient per kelvin (/K, %/100K, ppm/K)",
            Self::Pascals => "a stress, pressure or modulus (Pa, kPa, MPa, GPa, bar)",
            Self::Seconds => "a time (s, ms, min, h)",
            Self::Metres => "a length (m, cm, mm, km, ft)",
            Self::SquareMillimetres => "a cross-section (mm2)",
            Self::OhmMetres => "a resistivity (ohm m, ohm mm2/m)",
            Self::Kelvins => "a temperature difference (K)",
            Self::Newtons => "a force (N, kN, MN, lbf)",
            Self::NewtonMetres => "a moment or torque (N m, kN m, lbf ft)",
            Self::Kilograms => "a mass (kg, g, t)",
            Self::Degrees => "an angle (deg, rad)",
            Self::KelvinsPerWatt => "a self-heating (K/mW, K/W)",
            Self::SquareMetres => "an area (m2, cm2, mm2)",
        }
    }
}

/// One unit: value in the library's unit = number · 10^exponent · factor + offset.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) struct Unit {
    /// As it is printed.
    pub(crate) name: &'static str,
    pub(crate) kind: Kind,
    pub(crate) exponent: i8,
    pub(crate) factor: f64,
    pub(crate) offset: f64,
}

const fn unit(name: &'static str, kind: Kind, exponent: i8) -> Unit {
    Unit { name, kind, exponent, factor: 1.0, offset: 0.0 }
}

/// Every unit; the first spelling of each is the one that is printed.
const UNITS: &[(Unit, &[&str])] = &[
    (unit("", Kind::Number, 0), &["1"]),
    (unit("V", Kind::Volts, 0), &["Volt", "Volts", "volt", "volts"]),
    (unit("mV", Kind::Volts, -3), &["millivolt", "millivolts"]),
    (unit("uV", Kind::Volts, -6), &[]),
    (unit("nV", Kind::Volts, -9), &[]),
    (unit("kV", Kind::Volts, 3), &[]),
    (unit("V/V", Kind::VoltageRatio, 0), &[]),
    (unit("mV/V", Kind::VoltageRatio, -3), &[]),
    (unit("uV/V", Kind::VoltageRatio, -6), &[]),
    (unit("ohm", Kind::Ohms, 0), &["Ohm", "ohms", "Ohms"]),
    (unit("mohm", Kind::Ohms, -3), &["mOhm"]),
    (unit("kohm", Kind::Ohms, 3), &["kOhm"]),
    (unit("Mohm", Kind::Ohms, 6), &["MOhm"]),
    (unit("Gohm", Kind::Ohms, 9), &["GOhm"]),
    (unit("A", Kind::Amperes, 0), &[]),
    (unit("mA", Kind::Amperes, -3), &[]),
    (unit("uA", Kind::Amperes, -6), &[]),
    (unit("count", Kind::Count, 0), &["counts"]),
    (unit("microstrain", Kind::Strain, -6), &["um/m", "ue", "ustrain"]),
    (unit("strain", Kind::Strain, 0), &["m/m"]),
    (unit("millistrain", Kind::Strain, -3), &["mm/m"]),
    (unit("%", Kind::Strain, -2), &["percent"]),
    (unit("shear microstrain", Kind::ShearStrain, -6), &["microrad"]),
    (unit("shear strain", Kind::ShearStrain, 0), &["rad"]),
    (unit("degC", Kind::Celsius, 0), &["°C", "Celsius", "celsius", "deg C", "C"]),
    (Unit { name: "K", kind: Kind::Celsius, exponent: 0, factor: 1.0, offset: -273.15 }, &["kelvin"]),
    (
        Unit { name: "degF", kind: Kind::Celsius, exponent: 0, factor: 5.0 / 9.0, offset: -160.0 / 9.0 },
        &["°F", "Fahrenheit"],
    ),
    (unit("K", Kind::Kelvins, 0), &["delta degC", "delta K"]),
    (unit("K/W", Kind::KelvinsPerWatt, 0), &["degC/W", "°C/W", "mK/mW"]),
    (unit("K/mW", Kind::KelvinsPerWatt, 3), &["degC/mW", "°C/mW"]),
    (unit("/K", Kind::PerKelvin, 0), &["1/K", "K-1", "/degC", "1/degC", "/°C", "1/°C"]),
    (
        unit("ppm/K", Kind::PerKelvin, -6),
        &[
            "um/m/K",
            "um/m/degC",
            "um/m/°C",
            "ppm/degC",
            "ppm/°C",
            "microstrain/K",
            "microstrain/degC",
            "microstrain/°C",
        ],
    ),
    (unit("%/K", Kind::PerKelvin, -2), &["%/degC", "%/°C"]),
    (unit("%/100K", Kind::PerKelvin, -4), &["%/100 K", "%/100degC", "%/100 degC"]),
    (unit("Pa", Kind::Pascals, 0), &["N/m2"]),
    (unit("kPa", Kind::Pascals, 3), &[]),
    (unit("MPa", Kind::Pascals, 6), &["N/mm2"]),
    (unit("GPa", Kind::Pascals, 9), &["kN/mm2"]),
    (unit("s", Kind::Seconds, 0), &["sec"]),
    (unit("ms", Kind::Seconds, -3), &[]),
    (Unit { name: "min", kind: Kind::Seconds, exponent: 0, factor: 60.0, offset: 0.0 }, &[]),
    (Unit { name: "h", kind: Kind::Seconds, exponent: 0, factor: 3600.0, offset: 0.0 }, &["hour"]),
    (unit("m", Kind::Metres, 0), &[]),
    (unit("cm", Kind::Metres, -2), &[]),
    (unit("mm", Kind::Metres, -3), &[]),
    (unit("km", Kind::Metres, 3), &[]),
    // both exact by definition
    (Unit { name: "ft", kind: Kind::Metres, exponent: 0, factor: 0.3048, offset: 0.0 }, &["feet", "foot"]),
    (Unit { name: "in", kind: Kind::Metres, exponent: 0, factor: 0.0254, offset: 0.0 }, &["inch", "inches"]),
    (unit("mm2", Kind::SquareMillimetres, 0), &["mm^2"]),
    (unit("ohm m", Kind::OhmMetres, 0), &["ohm*m"]),
    (unit("ohm mm2/m", Kind::OhmMetres, -6), &["ohm*mm2/m"]),
    (unit("N", Kind::Newtons, 0), &["newton"]),
    (unit("kN", Kind::Newtons, 3), &[]),
    (unit("MN", Kind::Newtons, 6), &[]),
    // 0.45359237 kg · 9.80665 m/s², exact by definition
    (Unit { name: "lbf", kind: Kind::Newtons, exponent: 0, factor: 4.448_221_615_260_5, offset: 0.0 }, &[]),
    (Unit { name: "kgf", kind: Kind::Newtons, exponent: 0, factor: 9.80665, offset: 0.0 }, &["kp"]),
    (unit("N m", Kind::NewtonMetres, 0), &["Nm", "N*m"]),
    (unit("kN m", Kind::NewtonMetres, 3), &["kNm", "kN*m"]),
    (
        // 4.4482216152605 N · 0.3048 m
        Unit { name: "lbf ft", kind: Kind::NewtonMetres, exponent: 0, factor: 1.355_817_948_331_400_4, offset: 0.0 },
        &["ft lbf"],
    ),
    (
        // 4.4482216152605 N · 0.0254 m
        Unit { name: "lbf in", kind: Kind::NewtonMetres, exponent: 0, factor: 0.112_984_829_027_616_7, offset: 0.0 },
        &["in lbf"],
    ),
    (unit("kg", Kind::Kilograms, 0), &[]),
    (unit("g", Kind::Kilograms, -3), &[]),
    (unit("t", Kind::Kilograms, 3), &["tonne"]),
    (Unit { name: "lb", kind: Kind::Kilograms, exponent: 0, factor: 0.453_592_37, offset: 0.0 }, &[]),
    (unit("bar", Kind::Pascals, 5), &[]),
    (unit("mbar", Kind::Pascals, 2), &["hPa"]),
    (Unit { name: "psi", kind: Kind::Pascals, exponent: 0, factor: 6_894.757_293_168_361, offset: 0.0 }, &["lbf/in2"]),
    (Unit { name: "ksi", kind: Kind::Pascals, exponent: 3, factor: 6_894.757_293_168_361, offset: 0.0 }, &[]),
    (Unit { name: "Msi", kind: Kind::Pascals, exponent: 6, factor: 6_894.757_293_168_361, offset: 0.0 }, &[]),
    (unit("deg", Kind::Degrees, 0), &["°", "degree", "degrees"]),
    // 180°/π
    (
        Unit { name: "rad", kind: Kind::Degrees, exponent: 0, factor: 57.295_779_513_082_32, offset: 0.0 },
        &["radian", "radians"],
    ),
    (unit("m2", Kind::SquareMetres, 0), &["m^2"]),
    (unit("cm2", Kind::SquareMetres, -4), &["cm^2"]),
    (unit("mm2", Kind::SquareMetres, -6), &["mm^2"]),
];

/// Symbols and spellings that mean the same: either micro sign, Ω, ε, ², and blanks in odd places.
pub(crate) fn plain(text: &str) -> String {
    let mut out = String::new();
    for c in text.trim().chars() {
        match c {
            '\u{b5}' | '\u{3bc}' => out.push('u'),
            '\u{3a9}' | '\u{2126}' => out.push_str("ohm"),
            '²' => out.push('2'),
            'ε' => out.push('e'),
            'º' | '˚' => out.push('°'),
            '·' | '⋅' => out.push(' '),
            c => out.push(c),
        }
    }
    out
}

/// Returns the unit of this kind with this spelling.
pub(crate) fn find(kind: Kind, text: &str) -> Option<Unit> {
    candidates(text).find(|u| u.kind == kind)
}

/// Returns all units with this spelling; K is both a temperature and a difference.
pub(crate) fn candidates(text: &str) -> impl Iterator<Item = Unit> {
    let text = plain(text);
    UNITS
        .iter()
        .filter(move |(unit, more)| unit.name == text || more.iter().any(|m| plain(m) == text))
        .map(|(unit, _)| *unit)
}

/// Returns every spelling, or those of one kind, to suggest from.
pub(crate) fn spellings(kind: Option<Kind>) -> Vec<&'static str> {
    UNITS
        .iter()
        .filter(|(unit, _)| kind.is_none_or(|k| k == unit.kind))
        .flat_map(|(unit, more)| core::iter::once(unit.name).chain(more.iter().copied()))
        .collect()
}

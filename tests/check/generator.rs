//! Deliveries with a known mistake in them, from closed formulas alone: nothing here calls the library.
//!
//! Formulas: Kirchhoff's laws for each bridge and divider; ASTM E251 (gauge factor, thermal output, transverse sensitivity, by
//! TN-504 and TN-509); IEC 60751:2008 for platinum; Steinhart and Hart (1968); NIST Monograph 175 for type K. All data are
//! invented.

use std::fmt::Write;

/// Numbers that look random and are always the same: splitmix64.
pub struct Dice(u64);

impl Dice {
    pub fn new(seed: u64) -> Self {
        Self(seed)
    }

    fn next(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9e37_79b9_7f4a_7c15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
        z ^ (z >> 31)
    }

    /// In 0..1.
    pub fn uniform(&mut self) -> f64 {
        (self.next() >> 11) as f64 / (1u64 << 53) as f64
    }

    pub fn between(&mut self, low: f64, high: f64) -> f64 {
        low + (high - low) * self.uniform()
    }

    pub fn one_of<T: Copy>(&mut self, all: &[T]) -> T {
        all[(self.next() % all.len() as u64) as usize]
    }

    /// About normal, standard deviation 1.
    pub fn noise(&mut self) -> f64 {
        (0..12).map(|_| self.uniform()).sum::<f64>() - 6.0
    }
}

/// The constants of a conversion, right or wrong. One set for all scenes; each reads its own.
#[derive(Clone, Debug)]
pub struct Constants {
    pub gauge_factor: f64,
    pub inverted: bool,
    pub slope: f64,
    pub thermal: f64,
    pub thermal_as_fahrenheit: bool,
    /// Thermal output is taken off the strain as it is printed, whatever gauge factor it was taken with.
    pub thermal_direct: bool,
    pub specimen: f64,
    pub zero_celsius: f64,
    pub transverse: bool,
    pub supply: Option<f64>,
    pub nominal_supply: f64,
    pub gain: f64,
    pub lead: f64,
    pub thermometer_lead: f64,
    pub two_wire: bool,
    pub warm: bool,
    pub zero_times: f64,
    pub zero_inside: bool,
    pub bend: Bend,
    pub nu: f64,
    pub arms: f64,
    pub supply_lead: f64,
    pub full_scale_codes: f64,
    pub coding: Coding,
    pub r0: f64,
    pub curve: [f64; 3],
    pub straight: Option<f64>,
    pub reference: f64,
    pub beta: f64,
    pub r25: f64,
    pub log10: bool,
    pub inverted_divider: bool,
    pub junction: Junction,
    pub couple: Couple,
    pub gauge_ohms: f64,
    pub as_beta: Option<f64>,
    pub series_resistor: f64,
    pub modulus: f64,
    pub order: [usize; 3],
    pub grid_k: [f64; 3],
    pub uniaxial: bool,
    pub material_nu: f64,
    /// What is done behind it all: each multiplied, then added.
    pub behind: Vec<(f64, f64)>,
    pub angle: Option<(f64, f64)>,
    pub rows: Rows,
    pub figures: Digits,
}

#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Bend {
    Exact,
    Ignored,
    Reversed,
    Added,
}

#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Coding {
    Right,
    Unsigned,
    Offset,
}

#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Junction {
    Right,
    Added,
    Ignored,
    At(f64),
    Twice,
    Subtracted,
    /// As emf, and as a temperature besides.
    Both,
}

/// What the emf is turned into a temperature by.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Couple {
    K,
    J,
    T,
    /// One number of µV per K, on top of the junction's temperature or of nothing.
    Straight(f64, bool),
}

#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Rows {
    Own,
    Shifted(i64),
    Held(usize),
    OtherColumn,
}

#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Digits {
    Rounded,
    MarkLost,
    Whole,
    Cut,
    Clipped(f64, f64),
}

pub const SUPPLY: f64 = 2.5;
const GAUGE: f64 = 350.0;
const FD: f64 = 2.0;
const TO: [f64; 4] = [-24.0, 1.90, -0.0400, 2.50e-4];
const DATA: f64 = 12.1e-6;
const REFERENCE_CELSIUS: f64 = 24.0;
const K_SINGLE: f64 = 0.012;
const RATIO: f64 = 0.6;
const COPPER: f64 = 0.00393;
const BITS: i32 = 12;
const FULL_SCALE: f64 = 2.5;
const FIXED: f64 = 10e3;
const DIVIDER_SUPPLY: f64 = 3.3;
const SH: [f64; 3] = [1.129148e-3, 2.34125e-4, 8.76741e-8];

impl Constants {
    /// As the sheet says them.
    pub fn right() -> Self {
        Self {
            gauge_factor: 2.08,
            inverted: false,
            slope: 1.0e-4,
            thermal: 1.0,
            thermal_as_fahrenheit: false,
            thermal_direct: false,
            specimen: 16.0e-6,
            zero_celsius: 21.0,
            transverse: true,
            supply: None,
            nominal_supply: SUPPLY,
            gain: 200.0,
            lead: 4.2,
            thermometer_lead: 0.35,
            two_wire: false,
            warm: true,
            zero_times: 1.0,
            zero_inside: false,
            bend: Bend::Exact,
            nu: 0.285,
            arms: 1.0,
            supply_lead: 1.7,
            full_scale_codes: 2f64.powi(BITS - 1),
            coding: Coding::Right,
            r0: 100.0,
            curve: [3.9083e-3, -5.775e-7, -4.183e-12],
            straight: None,
            reference: 100.0,
            beta: 3950.0,
            r25: 10e3,
            log10: false,
            inverted_divider: false,
            junction: Junction::Right,
            couple: Couple::K,
            gauge_ohms: GAUGE,
            as_beta: None,
            series_resistor: FIXED,
            modulus: 205.0,
            order: [0, 1, 2],
            grid_k: [0.006, 0.011, 0.006],
            uniaxial: false,
            material_nu: 0.29,
            behind: Vec::new(),
            angle: None,
            rows: Rows::Own,
            figures: Digits::Rounded,
        }
    }
}

/// What was wired and recorded.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Scene {
    /// One gauge, three wires, amplifier, thermal output; volts.
    Quarter,
    /// One gauge, two warm wires; mV/V.
    Warm,
    /// Full bridge behind a converter, its supply recorded.
    Counts,
    /// Two gauges in bending.
    Bending,
    /// One gauge with a shunt step.
    Shunt,
    /// Stress of one gauge.
    Stress,
    /// Larger principal strain, direction and stress of three grids.
    RosetteStrain,
    RosetteAngle,
    RosetteStress,
    /// Platinum, two wires, ohms.
    Platinum,
    /// The same, colder.
    Cold,
    /// Platinum against a reference resistor.
    Reference,
    /// Thermistor in a divider.
    Divider,
    /// Thermistor by three constants, ohms.
    Steinhart,
    /// Type K.
    Thermocouple,
    /// Difference of two platinum thermometers.
    Difference,
}

pub const SCENES: [Scene; 16] = [
    Scene::Quarter,
    Scene::Warm,
    Scene::Counts,
    Scene::Bending,
    Scene::Shunt,
    Scene::Stress,
    Scene::RosetteStrain,
    Scene::RosetteAngle,
    Scene::RosetteStress,
    Scene::Platinum,
    Scene::Cold,
    Scene::Reference,
    Scene::Divider,
    Scene::Steinhart,
    Scene::Thermocouple,
    Scene::Difference,
];

/// One row: readings, then what the conversion needs.
#[derive(Clone, Debug, Default)]
pub struct Row {
    pub raw: Vec<f64>,
    /// The readings that a wrong column would give.
    pub other: Vec<f64>,
    pub celsius: f64,
    pub supply: f64,
}

/// A recording with the constants that made it.
pub struct Recording {
    pub scene: Scene,
    pub rows: Vec<Row>,
    /// Reading at zero, in the unit of the readings.
    pub zero: f64,
}

impl Scene {
    pub fn is_strain(self) -> bool {
        matches!(
            self,
            Self::Quarter
                | Self::Warm
                | Self::Counts
                | Self::Bending
                | Self::Shunt
                | Self::Stress
                | Self::RosetteStrain
        )
    }

    /// Name of the channel that is delivered.
    pub fn channel(self) -> &'static str {
        match self {
            Self::RosetteStrain => "R principal-max",
            Self::RosetteAngle => "R direction",
            Self::RosetteStress => "R stress-max",
            _ => "x",
        }
    }

    pub fn sheet(self) -> String {
        let deck = "[channel.deck]\ncolumn = \"T\"\nreads = \"degC\"\n";
        let gauge = "gauge = { resistance = \"350 ohm\", gauge_factor = 2.08 }\n";
        match self {
            Self::Quarter => {
                let common = "reads = \"V\"\n\
                     gauge = { resistance = \"350 ohm\", gauge_factor = 2.08, slope = \"1.0 %/100K\", reference = \"24 degC\" }\n\
                     bridge = { arms = [\"e\", \"0\", \"0\", \"0\"], supply = \"2.5 V\" }\namplifier = { gain = 200 }\n\
                     leads = { wires = 3, each = \"4.2 ohm\" }\n\
                     thermal_output = { coefficients = [-24.0, 1.90, -0.0400, 2.50e-4], in = \"degC\", gauge_factor = 2.0 }\n\
                     expansion = { specimen = \"16.0e-6/K\", data = \"12.1e-6/K\" }\n\
                     transverse = { sensitivity = \"1.2 %\", strain_ratio = 0.6 }\n\
                     temperature = \"deck\"\nzero = { at = \"0.155 V\", temperature = \"21 degC\" }\n";
                format!("[channel.x]\ncolumn = \"a\"\n{common}\n[channel.y]\ncolumn = \"b\"\n{common}\n{deck}")
            }
            Self::Warm => format!(
                "[channel.x]\ncolumn = \"a\"\nreads = \"mV/V\"\n{gauge}bridge = {{ arms = [\"e\", \"0\", \"0\", \"0\"] }}\n\
                 leads = {{ wires = 2, each = \"4.2 ohm\", temperature = \"deck\" }}\n\
                 zero = {{ at = \"0.31 mV/V\", lead_temperature = \"21 degC\" }}\n{deck}"
            ),
            Self::Counts => format!(
                "[channel.x]\ncolumn = \"a\"\nreads = \"count\"\n{gauge}\
                 converter = {{ bits = 12, full_scale = \"±2.5 V\", coding = \"signed\" }}\namplifier = {{ gain = 200 }}\n\
                 bridge = {{ arms = [\"e\", \"-nu e\", \"e\", \"-nu e\"], poisson = 0.285, supply_leads = \"1.7 ohm\", supply = {{ column = \"V\", reads = \"V\" }} }}\n"
            ),
            Self::Bending => format!(
                "[channel.x]\ncolumn = \"a\"\nreads = \"mV/V\"\n{gauge}bridge = {{ arms = [\"e\", \"-e\", \"0\", \"0\"] }}\n\
                 zero = {{ at = \"0.31 mV/V\" }}\n"
            ),
            Self::Shunt => format!(
                "[channel.x]\ncolumn = \"a\"\nreads = \"mV/V\"\n{gauge}bridge = {{ arms = [\"e\", \"0\", \"0\", \"0\"] }}\n\
                 leads = {{ wires = 3, each = \"4.2 ohm\" }}\n\
                 shunt = {{ from = \"600 s\", to = \"900 s\", resistor = \"59.88 kohm\", across = \"arm 1\", place = \"instrument\" }}\n"
            ),
            Self::Stress => format!(
                "[channel.e]\ncolumn = \"a\"\nreads = \"mV/V\"\n{gauge}bridge = {{ arms = [\"e\", \"0\", \"0\", \"0\"] }}\n\
                 [channel.x]\nof = \"e\"\noutput = \"MPa\"\nmaterial = {{ modulus = \"205 GPa\" }}\n"
            ),
            Self::RosetteStrain | Self::RosetteAngle | Self::RosetteStress => {
                let mut sheet = String::new();
                for name in ["a", "b", "c"] {
                    let _ = write!(
                        sheet,
                        "[channel.g{name}]\ncolumn = \"{name}\"\nreads = \"mV/V\"\n{gauge}bridge = {{ arms = [\"e\", \"0\", \"0\", \"0\"] }}\n"
                    );
                }
                let give = self.channel().trim_start_matches("R ");
                let _ = write!(
                    sheet,
                    "[rosette.R]\ngrids = {{ a = \"ga\", b = \"gb\", c = \"gc\" }}\nangles = [\"0 deg\", \"45 deg\", \"90 deg\"]\n\
                     transverse = [\"0.6 %\", \"1.1 %\", \"0.6 %\"]\nmaterial = {{ modulus = \"205 GPa\", poisson = 0.29 }}\n\
                     give = [\"{give}\"]\nreported = {{ {give} = {{ column = \"theirs\" }} }}\n"
                );
                return sheet;
            }
            Self::Platinum | Self::Cold => {
                let one = "reads = \"ohm\"\nplatinum = { standard = \"IEC 60751\", r0 = \"100 ohm\" }\nleads = { wires = 2, each = \"0.35 ohm\" }\n";
                format!("[channel.x]\ncolumn = \"a\"\n{one}[channel.y]\ncolumn = \"b\"\n{one}")
            }
            Self::Reference => "[channel.x]\ncolumn = \"a\"\nreads = \"V\"\nplatinum = { standard = \"IEC 60751\", r0 = \"100 ohm\" }\n\
                 circuit = { reference = \"100 ohm\", supply = { column = \"V\", reads = \"V\" } }\n"
                .into(),
            Self::Divider => "[channel.x]\ncolumn = \"a\"\nreads = \"V\"\nthermistor = { r25 = \"10 kohm\", beta = \"3950 K\" }\n\
                 circuit = { divider = \"10 kohm\", sensor = \"low\", supply = \"3.3 V\" }\n"
                .into(),
            Self::Steinhart => "[channel.x]\ncolumn = \"a\"\nreads = \"ohm\"\n\
                 thermistor = { steinhart_hart = [1.129148e-3, 2.34125e-4, 8.76741e-8], range = [\"-40 degC\", \"125 degC\"] }\n"
                .into(),
            Self::Thermocouple => format!(
                "[channel.x]\ncolumn = \"a\"\nreads = \"mV\"\nthermocouple = {{ type = \"K\", reference = \"deck\" }}\n{deck}"
            ),
            Self::Difference => {
                let pt = "reads = \"ohm\"\nplatinum = { standard = \"IEC 60751\", r0 = \"100 ohm\" }\n";
                format!(
                    "[channel.p]\ncolumn = \"a\"\n{pt}[channel.q]\ncolumn = \"b\"\n{pt}[channel.x]\ncombine = {{ p = 1, q = -1 }}\noutput = \"K\"\n"
                )
            }
        }
        .replacen("[channel.x]\n", "[channel.x]\nreported = { column = \"theirs\" }\n", 1)
    }

    fn columns(self) -> &'static [&'static str] {
        match self {
            Self::Quarter => &["a", "b", "T"],
            Self::Warm | Self::Thermocouple => &["a", "T"],
            Self::Counts | Self::Reference => &["a", "V"],
            Self::RosetteStrain | Self::RosetteAngle | Self::RosetteStress => &["a", "b", "c"],
            Self::Platinum | Self::Cold | Self::Difference => &["a", "b"],
            _ => &["a"],
        }
    }
}

/// Thermal output in microstrain at a temperature, with the polynomial in the unit it was taken in.
fn thermal_output(c: &Constants, celsius: f64) -> f64 {
    let t = if c.thermal_as_fahrenheit { 1.8 * celsius + 32.0 } else { celsius };
    TO[0] + t * (TO[1] + t * (TO[2] + t * TO[3]))
}

/// Strain, microstrain, of the one gauge with everything.
fn quarter(c: &Constants, volts: f64, zero_volts: f64, celsius: f64) -> f64 {
    let factor = if c.inverted { 1.0 / c.gauge_factor } else { c.gauge_factor };
    let supply = c.supply.unwrap_or(c.nominal_supply);
    let (y, y0) = (volts / c.gain / supply, zero_volts / c.gain / supply);
    // arms 1 and 2 hold the gauge's resistance and one lead each; with two wires both leads, arm 2 balanced
    let leads = if c.two_wire { 2.0 * c.lead } else { c.lead };
    let slope = (1.0 + leads / c.gauge_ohms) * 4.0;
    let ratio = |y: f64| slope * y / (1.0 - 2.0 * y);
    let u = y - c.zero_times * y0;
    let correct = ratio(y) - c.zero_times * ratio(y0);
    let x = match c.bend {
        Bend::Exact if c.zero_inside => ratio(u),
        Bend::Exact => correct,
        Bend::Ignored => slope * u,
        Bend::Reversed => slope * u / (1.0 + 2.0 * u),
        Bend::Added => correct / (1.0 - 2.0 * u),
    };
    let f = factor * (1.0 + c.slope * (celsius - REFERENCE_CELSIUS));
    let data = if c.thermal_direct { factor } else { FD };
    let tau = c.thermal * data * 1e-6 * (thermal_output(c, celsius) - thermal_output(c, c.zero_celsius))
        + factor * (c.specimen - DATA) * (celsius - c.zero_celsius);
    let e = 1e6 * (x - tau) / f;
    let e = e / c.arms;
    if c.transverse { e * (1.0 - 0.285 * K_SINGLE) / (1.0 + K_SINGLE * RATIO) } else { e }
}

fn plain_quarter(c: &Constants, y: f64) -> f64 {
    let factor = if c.inverted { 1.0 / c.gauge_factor } else { c.gauge_factor };
    let x = match c.bend {
        Bend::Exact => 4.0 * y / (1.0 - 2.0 * y),
        Bend::Ignored => 4.0 * y,
        Bend::Reversed => 4.0 * y / (1.0 + 2.0 * y),
        Bend::Added => 4.0 * y / (1.0 - 2.0 * y) / (1.0 - 2.0 * y),
    };
    1e6 * x / factor / c.arms
}

/// Callendar and Van Dusen forwards.
fn platinum_ohms(c: &Constants, t: f64) -> f64 {
    let [a, b, cc] = c.curve;
    let cc = if t < 0.0 { cc } else { 0.0 };
    c.r0 * (1.0 + a * t + b * t * t + cc * (t - 100.0) * t * t * t)
}

fn platinum_celsius(c: &Constants, ohms: f64) -> f64 {
    if let Some(alpha) = c.straight {
        return (ohms / c.r0 - 1.0) / alpha;
    }
    bisect(|t| platinum_ohms(c, t) - ohms, -250.0, 900.0)
}

/// The root of what rises, to the last digits.
fn bisect(f: impl Fn(f64) -> f64, mut low: f64, mut high: f64) -> f64 {
    for _ in 0..90 {
        let middle = 0.5 * (low + high);
        if f(middle) < 0.0 { low = middle } else { high = middle }
    }
    0.5 * (low + high)
}

/// NIST Monograph 175, type K above 0 °C, mV.
fn type_k(t: f64) -> f64 {
    const C: [f64; 10] = [
        -0.176004136860e-1,
        0.389212049750e-1,
        0.185587700320e-4,
        -0.994575928740e-7,
        0.318409457190e-9,
        -0.560728448890e-12,
        0.560750590590e-15,
        -0.320207200030e-18,
        0.971511471520e-22,
        -0.121047212750e-25,
    ];
    let sum = C.iter().rev().fold(0.0, |sum, c| sum * t + c);
    sum + 0.1185976 * (-0.1183432e-3 * (t - 126.9686) * (t - 126.9686)).exp()
}

/// NIST Monograph 175, type J from -210 degC to 760 degC, mV; from memory, as in data/temperature.
const TYPE_J: [f64; 9] = [
    0.0,
    0.503811878150e-1,
    0.304758369300e-4,
    -0.856810657200e-7,
    0.132281952950e-9,
    -0.170529583370e-12,
    0.209480906970e-15,
    -0.125383953360e-18,
    0.156317256970e-22,
];

/// NIST Monograph 175, type T from 0 degC to 400 degC, mV; from memory, as in data/temperature.
const TYPE_T: [f64; 9] = [
    0.0,
    0.387481063640e-1,
    0.332922278800e-4,
    0.206182434040e-6,
    -0.218822568460e-8,
    0.109968809280e-10,
    -0.308157587720e-13,
    0.454791352900e-16,
    -0.275129016730e-19,
];

fn power_series(c: &[f64], t: f64) -> f64 {
    c.iter().rev().fold(0.0, |sum, c| sum * t + c)
}

fn steinhart_celsius(c: &Constants, ohms: f64) -> f64 {
    let l = if c.log10 { ohms.log10() } else { ohms.ln() };
    if let Some(beta) = c.as_beta {
        let r25 = steinhart_ohms(25.0);
        return 1.0 / (1.0 / 298.15 + (ohms / r25).ln() / beta) - 273.15;
    }
    1.0 / (SH[0] + SH[1] * l + SH[2] * l * l * l) - 273.15
}

pub fn steinhart_ohms(t: f64) -> f64 {
    bisect(|l| SH[0] + SH[1] * l + SH[2] * l * l * l - 1.0 / (t + 273.15), 0.0, 30.0).exp()
}

fn grid(k: f64, degrees: f64, [x, y, shear]: [f64; 3]) -> f64 {
    let along = |d: f64| {
        let (s, c) = d.to_radians().sin_cos();
        x * c * c + y * s * s + shear * s * c
    };
    (along(degrees) + k * along(degrees + 90.0)) / (1.0 - 0.285 * k)
}

/// 0°, 45°, 90° rosette with unequal sensitivities: x, y and shear strain.
fn rosette(k: [f64; 3], e: [f64; 3]) -> [f64; 3] {
    // ê (1 − ν₀ K) = e(θ) + K e(θ + 90°)
    let m = [e[0] * (1.0 - 0.285 * k[0]), e[1] * (1.0 - 0.285 * k[1]), e[2] * (1.0 - 0.285 * k[2])];
    let x = (m[0] - k[0] * m[2]) / (1.0 - k[0] * k[2]);
    let y = (m[2] - k[2] * m[0]) / (1.0 - k[0] * k[2]);
    // at 45°: (x + y)/2 (1 + K) + shear/2 (1 − K)
    let shear = (m[1] - 0.5 * (x + y) * (1.0 + k[1])) * 2.0 / (1.0 - k[1]);
    [x, y, shear]
}

/// A strain signal: slow waves, and lorries.
fn strain_signal(n: usize, dice: &mut Dice) -> Vec<f64> {
    let (a, b, phase) = (dice.between(500.0, 800.0), dice.between(200.0, 500.0), dice.uniform() * 6.0);
    let mut out: Vec<f64> = (0..n)
        .map(|i| {
            let t = i as f64;
            a * (t * 0.0173 + phase).sin() + b * (t * 0.11 + 2.0 * phase).sin()
        })
        .collect();
    for _ in 0..n / 60 {
        let at = (dice.uniform() * (n as f64 - 6.0)) as usize;
        let size = dice.between(-300.0, 300.0);
        for (i, share) in [0.4, 1.0, 0.7, 0.2].into_iter().enumerate() {
            out[at + i] += size * share;
        }
    }
    let most = out.iter().fold(0.0f64, |m, v| m.max(v.abs()));
    let scale = 1500.0 / most;
    out.iter().map(|v| v * scale).collect()
}

fn day(n: usize, low: f64, high: f64, dice: &mut Dice) -> Vec<f64> {
    let phase = dice.uniform() * 6.0;
    (0..n)
        .map(|i| {
            let t = i as f64 / n as f64 * std::f64::consts::TAU;
            0.5 * (low + high) + 0.5 * (high - low) * (0.93 * (t + phase).sin() + 0.07 * (5.0 * t + phase).sin())
        })
        .collect()
}

/// Digits of a reading as it is printed.
fn printed(v: f64) -> f64 {
    format!("{v:.9e}").parse().unwrap()
}

impl Recording {
    /// A day of one row per minute, or fewer rows.
    pub fn new(scene: Scene, n: usize, noise: f64, dice: &mut Dice) -> Self {
        let c = Constants::right();
        let wanted = strain_signal(n, dice);
        let second = strain_signal(n, dice);
        let celsius = day(n, -20.0, 60.0, dice);
        let mut zero = 0.0;
        let mut rows = Vec::with_capacity(n);
        for i in 0..n {
            let (e, f) = (wanted[i] + noise * dice.noise(), second[i] + noise * dice.noise());
            let t = printed(celsius[i]);
            let mut row = Row { celsius: t, supply: SUPPLY, ..Row::default() };
            let y = |e: f64, bridge: f64| {
                let x = e * 1e-6 * c.gauge_factor * bridge;
                x / (4.0 + 2.0 * x)
            };
            match scene {
                Scene::Quarter => {
                    zero = 0.155;
                    // by bisection of the conversion itself, which rises
                    let back = |e: f64| printed(bisect(|v| quarter(&c, v, zero, t) - e, -5.0, 5.0));
                    (row.raw, row.other) = (vec![back(e)], vec![back(f)]);
                }
                Scene::Warm => {
                    zero = 0.31;
                    row.raw = vec![printed(bisect(|v| warm(&c, v, zero, t) - e, -50.0, 50.0))];
                }
                Scene::Counts => {
                    row.supply = printed(SUPPLY * (1.0 + 0.004 * (i as f64 * 0.01).sin()));
                    let code = |e: f64| {
                        let x = e * 1e-6 * c.gauge_factor;
                        let y = (1.0 + c.nu) * x / (2.0 + (1.0 - c.nu) * x + 4.0 * c.supply_lead / GAUGE);
                        (y * row.supply * c.gain / FULL_SCALE * c.full_scale_codes).round()
                    };
                    row.raw = vec![code(e)];
                }
                Scene::Bending => {
                    zero = 0.31;
                    row.raw = vec![printed(zero + 1e3 * e * 1e-6 * c.gauge_factor / 2.0)];
                }
                Scene::Shunt => {
                    let r = c.lead / GAUGE;
                    row.raw = vec![printed(
                        1e3 * {
                            let x = e * 1e-6 * c.gauge_factor / (1.0 + r);
                            x / (4.0 + 2.0 * x)
                        },
                    )];
                }
                Scene::Stress => row.raw = vec![printed(1e3 * y(e, 1.0))],
                Scene::RosetteStrain | Scene::RosetteAngle | Scene::RosetteStress => {
                    let state = [e, 0.5 * f - 0.3 * e, 0.6 * f + 0.2 * e + 150.0];
                    row.raw = [0.0, 45.0, 90.0]
                        .iter()
                        .zip(c.grid_k)
                        .map(|(d, k)| printed(1e3 * y(grid(k, *d, state), 1.0)))
                        .collect();
                }
                Scene::Platinum | Scene::Cold => {
                    let t = if scene == Scene::Cold { 0.9 * t - 75.0 } else { t };
                    let other = 0.6 * t + 0.01 * f;
                    let t = t + 0.004 * e;
                    let ohms = |t: f64| printed(platinum_ohms(&c, t) + 0.7);
                    (row.raw, row.other) = (vec![ohms(t)], vec![ohms(other)]);
                }
                Scene::Reference => {
                    row.supply = printed(0.1 * (1.0 + 0.003 * (i as f64 * 0.02).sin()));
                    row.raw = vec![printed(platinum_ohms(&c, t + 0.004 * e) / c.reference * row.supply)];
                }
                Scene::Divider => {
                    let kelvin = t + 0.004 * e + 273.15;
                    let r = c.r25 * (c.beta * (1.0 / kelvin - 1.0 / 298.15)).exp();
                    row.raw = vec![printed(DIVIDER_SUPPLY * r / (r + FIXED))];
                }
                Scene::Steinhart => row.raw = vec![printed(steinhart_ohms(t + 0.004 * e))],
                Scene::Thermocouple => {
                    row.celsius = printed(25.0 + 0.15 * t);
                    row.raw = vec![printed(type_k(150.0 + 2.0 * t + 0.01 * e) - type_k(row.celsius))];
                }
                Scene::Difference => {
                    let (a, b) = (t + 0.004 * e, 0.4 * t + 10.0);
                    row.raw = vec![printed(platinum_ohms(&c, a)), printed(platinum_ohms(&c, b))];
                }
            }
            rows.push(row);
        }
        Self { scene, rows, zero }
    }

    /// What somebody with these constants makes of one row.
    fn one(&self, c: &Constants, row: &Row) -> f64 {
        let raw = if c.rows == Rows::OtherColumn && !row.other.is_empty() { &row.other } else { &row.raw };
        let v = raw[0];
        let value = match self.scene {
            Scene::Quarter => quarter(c, v, self.zero, row.celsius),
            Scene::Warm => warm(c, v, self.zero, row.celsius),
            Scene::Counts => {
                let all = 2f64.powi(BITS);
                let code = match c.coding {
                    Coding::Right => v,
                    Coding::Unsigned => {
                        if v < 0.0 {
                            v + all
                        } else {
                            v
                        }
                    }
                    Coding::Offset => v - 0.5 * all,
                };
                let supply = c.supply.unwrap_or(row.supply);
                let y = code / c.full_scale_codes * FULL_SCALE / c.gain / supply;
                let factor = if c.inverted { 1.0 / c.gauge_factor } else { c.gauge_factor };
                let x = y * (2.0 + 4.0 * c.supply_lead / GAUGE) / ((1.0 + c.nu) - (1.0 - c.nu) * y);
                1e6 * x / factor / c.arms
            }
            Scene::Bending => {
                let (y, y0) = (v * 1e-3, self.zero * 1e-3);
                let factor = if c.inverted { 1.0 / c.gauge_factor } else { c.gauge_factor };
                let x = 2.0 * (y - c.zero_times * y0);
                let x = if c.bend == Bend::Added { x / (1.0 - 2.0 * (y - c.zero_times * y0)) } else { x };
                1e6 * x / factor / c.arms
            }
            Scene::Shunt => {
                let scale = 1.0 + c.lead / c.gauge_ohms;
                scale * plain_quarter(c, v * 1e-3)
            }
            Scene::Stress => plain_quarter(c, v * 1e-3) * c.modulus * 1e-3,
            Scene::RosetteStrain | Scene::RosetteAngle | Scene::RosetteStress => {
                let e = [0, 1, 2].map(|i| plain_quarter(c, raw[c.order[i]] * 1e-3));
                let [x, y, shear] = rosette(c.grid_k, e);
                let (mean, q, s) = (0.5 * (x + y), 0.5 * (x - y), 0.5 * shear);
                let r = q.hypot(s);
                match self.scene {
                    Scene::RosetteStrain => mean + r,
                    Scene::RosetteStress => {
                        let (e1, e2) = (mean + r, mean - r);
                        let modulus = c.modulus * 1e-3;
                        if c.uniaxial {
                            modulus * e1
                        } else {
                            modulus / (1.0 - c.material_nu * c.material_nu) * (e1 + c.material_nu * e2)
                        }
                    }
                    _ => {
                        let angle = 0.5 * s.atan2(q).to_degrees();
                        match c.angle {
                            None => angle,
                            Some((sense, turn)) => {
                                let turned = sense * angle + turn;
                                turned - 180.0 * ((turned - 90.0) / 180.0).ceil()
                            }
                        }
                    }
                }
            }
            Scene::Platinum | Scene::Cold => platinum_celsius(c, v - 2.0 * c.thermometer_lead),
            Scene::Reference => platinum_celsius(c, v / row.supply * c.reference),
            Scene::Divider => {
                let supply = c.supply.unwrap_or(DIVIDER_SUPPLY);
                let share = v / supply;
                let r = if c.inverted_divider {
                    c.series_resistor * (1.0 - share) / share
                } else {
                    c.series_resistor * share / (1.0 - share)
                };
                let l = if c.log10 { (r / c.r25).log10() } else { (r / c.r25).ln() };
                1.0 / (1.0 / 298.15 + l / c.beta) - 273.15
            }
            Scene::Steinhart => steinhart_celsius(c, v),
            Scene::Thermocouple => {
                let emf = |t: f64| match c.couple {
                    Couple::J => power_series(&TYPE_J, t),
                    Couple::T => power_series(&TYPE_T, t),
                    _ => type_k(t),
                };
                if let Couple::Straight(microvolts, on_junction) = c.couple {
                    1e3 * v / microvolts + if on_junction { row.celsius } else { 0.0 }
                } else {
                    let back =
                        |mv: f64| bisect(|t| emf(t) - mv, 0.0, if c.couple == Couple::K { 1300.0 } else { 400.0 });
                    match c.junction {
                        Junction::Right => back(v + emf(row.celsius)),
                        Junction::Added => back(v) + row.celsius,
                        Junction::Ignored => back(v),
                        Junction::At(t) => back(v + emf(t)),
                        Junction::Twice => back(v + 2.0 * emf(row.celsius)),
                        Junction::Subtracted => back(v - emf(row.celsius)),
                        Junction::Both => back(v + emf(row.celsius)) + row.celsius,
                    }
                }
            }
            Scene::Difference => platinum_celsius(c, raw[0]) - platinum_celsius(c, raw[1]),
        };
        c.behind.iter().fold(value, |v, (scale, offset)| scale * v + offset)
    }

    /// What somebody with these constants makes of it, before rounding; NaN where there is nothing.
    pub fn made(&self, c: &Constants) -> Vec<f64> {
        let n = self.rows.len() as i64;
        (0..n)
            .map(|i| {
                let from = match c.rows {
                    Rows::Shifted(by) => i - by,
                    Rows::Held(rows) => i - i % rows as i64,
                    _ => i,
                };
                if (0..n).contains(&from) { self.one(c, &self.rows[from as usize]) } else { f64::NAN }
            })
            .map(|v| match c.figures {
                Digits::Clipped(low, high) => v.clamp(low, high),
                _ => v,
            })
            .collect()
    }

    /// The delivery as a file.
    pub fn delivery(&self, values: &[f64], c: &Constants, decimals: usize) -> String {
        let mut out = String::from("time");
        for name in self.scene.columns() {
            let _ = write!(out, ",{name}");
        }
        out.push_str(",theirs\n");
        for (i, (row, value)) in self.rows.iter().zip(values).enumerate() {
            let _ = write!(out, "{}", i * 60);
            let mut raw = row.raw.iter().chain(&row.other);
            for name in self.scene.columns() {
                let cell = match *name {
                    "T" => row.celsius,
                    "V" => row.supply,
                    _ => *raw.next().unwrap(),
                };
                let _ = write!(out, ",{cell}");
            }
            let _ = writeln!(out, ",{}", figures(*value, c.figures, decimals));
        }
        out
    }
}

/// Two warm wires: R₁ = R (1 + x) + 2 r w(T) against R₂ = R + 2 r w(T₀).
fn warm(c: &Constants, mv: f64, zero_mv: f64, celsius: f64) -> f64 {
    let w = |t: f64| if c.warm { 1.0 + COPPER * (t - 20.0) } else { 1.0 };
    let r2 = GAUGE + 2.0 * c.lead * w(21.0);
    let x = |y: f64, w: f64| (r2 * (0.5 + y) / (0.5 - y) - 2.0 * c.lead * w) / GAUGE - 1.0;
    let (y, y0) = (mv * 1e-3, zero_mv * 1e-3);
    let e = x(y, w(celsius)) - c.zero_times * x(y0, w(21.0));
    1e6 * e / c.gauge_factor / c.arms
}

/// What the shunt of the scene simulates at the gauge over what it does at the instrument.
pub fn shunt_ratio() -> f64 {
    let (rg, r, rs, f) = (GAUGE, 4.2, 59.88e3, 2.08);
    let strain = |y: f64| (1.0 + r / rg) * 4.0 * y / (1.0 - 2.0 * y) / f;
    let arm = rg * rs / (rg + rs) + r;
    let at_gauge = arm / (arm + rg + r) - 0.5;
    // from the far end of the signal wire to the supply terminal
    let arm = (rg + r) * (rs + r) / (rg + rs + 2.0 * r);
    let at_instrument = arm / (arm + rg + r) * rs / (rs + r) - 0.5;
    strain(at_gauge) / strain(at_instrument)
}

fn figures(v: f64, how: Digits, decimals: usize) -> String {
    if v.is_nan() {
        return String::new();
    }
    let step = 10f64.powi(-(decimals as i32));
    match how {
        Digits::Rounded | Digits::Clipped(..) => format!("{v:.decimals$}"),
        Digits::Cut => format!("{:.decimals$}", (v / step).trunc() * step),
        Digits::Whole => format!("{v:.decimals$}").split('.').next().unwrap_or("").to_string(),
        Digits::MarkLost => {
            let text = format!("{v:.decimals$}");
            if decimals == 0 { text } else { text.trim_end_matches('0').trim_end_matches('.').replace('.', "") }
        }
    }
}

//! Recordings of a laboratory through sheets: a rosette on warm leads, a torque shaft, load cells, a shunt step, a dummy of its
//! own temperature. Invented truths; the recorded signals are computed from them node by node (tests/support/nodes.rs), and what
//! comes out must be the truths again. Nothing expected here comes from the library.
//!
//! A recorded signal is rounded to a double and so are the arms behind it, some 1e-16 V/V: 4/F of it is 2e-10 microstrain.
#![cfg(feature = "files")]

#[path = "support/nodes.rs"]
mod nodes;
#[path = "support/twofold.rs"]
#[allow(dead_code, reason = "the nodes use a part of it")]
mod twofold;

use std::io::Read;

use nodes::{Wired, root};
use ohmwright::chain::{Inputs, Word};
use ohmwright::measurement::{ShuntDoubt, ShuntVerdict};
use ohmwright::recording::{CsvWriter, Output, RecordingError, Rows, Summary, convert};
use ohmwright::sheet::Sheet;

struct Text(String);

impl Rows for Text {
    fn open(&mut self) -> Result<Box<dyn Read + '_>, RecordingError> {
        Ok(Box::new(self.0.as_bytes()))
    }

    fn name(&self) -> &str {
        "r.csv"
    }

    fn is_file(&self) -> bool {
        true
    }
}

/// What came out.
struct Table {
    header: Vec<String>,
    rows: Vec<Vec<String>>,
    summary: Summary,
}

impl Table {
    fn new(sheet: &str, columns: &str, rows: &[Vec<f64>]) -> Self {
        let sheet = Sheet::read("s.toml", sheet).unwrap_or_else(|e| panic!("{e}"));
        let mut text = format!("{columns}\n");
        for row in rows {
            let cells: Vec<String> =
                row.iter().map(|v| if v.is_nan() { String::new() } else { format!("{v:?}") }).collect();
            text.push_str(&(cells.join(",") + "\n"));
        }
        let mut bytes = Vec::new();
        let mut out = CsvWriter::new(Output::to_writer(&mut bytes, "out"));
        let summary = convert(&sheet.measurement, &sheet.layout, &sheet.keep, &mut Text(text), &mut out, &mut |_| {})
            .unwrap_or_else(|e| panic!("{e}"));
        out.finish().unwrap();
        let text = String::from_utf8(bytes).unwrap();
        let mut lines = text.lines().map(|l| l.split(',').map(String::from).collect::<Vec<_>>());
        Self { header: lines.next().unwrap(), rows: lines.collect(), summary }
    }

    #[track_caller]
    fn column(&self, name: &str) -> Vec<f64> {
        let at = self.header.iter().position(|h| h == name).unwrap_or_else(|| panic!("{name} in {:?}", self.header));
        self.rows.iter().map(|r| r[at].parse().unwrap_or(f64::NAN)).collect()
    }
}

#[track_caller]
fn near(what: &str, got: &[f64], want: &[f64], allowed: f64) {
    assert_eq!(got.len(), want.len(), "{what}");
    for (i, (g, w)) in got.iter().zip(want).enumerate() {
        assert!((g - w).abs() <= allowed, "{what}, row {i}: {g}, not {w}");
    }
}

/// The chain of a channel forwards and back: the signal that was computed node by node, and the same value again.
#[track_caller]
fn forwards(sheet: &str, channel: usize, value: f64, inputs: Inputs, signal: f64, allowed: f64) {
    let sheet = Sheet::read("s.toml", sheet).unwrap_or_else(|e| panic!("{e}"));
    let plan = sheet.measurement.channels[channel].segments().unwrap()[0].chain.plan().unwrap();
    let expected = plan.forward(value, inputs).unwrap();
    assert!((expected - signal).abs() <= allowed, "{expected}, not {signal}");
    let outcome = plan.one(Inputs { reading: expected, ..inputs });
    assert_eq!(outcome.word, Word::Good);
    assert!((outcome.value / value - 1.0).abs() < 1e-11, "{} became {}", value, outcome.value);
}

/// 28 m of 0.14 mm² at 1/58 Ω·mm²/m and 20 °C, 0.00393 /K.
fn lead(celsius: f64) -> f64 {
    28.0 / (58.0 * 0.14) * (1.0 + 0.00393 * (celsius - 20.0))
}

/// τ of the gauges: F_d TO(T) + F (α_s − α_d) T.
fn tau(t: f64) -> f64 {
    2.0 * (-24.6 + 1.93 * t - 0.041 * t * t + 2.6e-4 * t * t * t) * 1e-6 + 2.09 * (11.3e-6 - 12.1e-6) * t
}

/// F(T).
fn factor(t: f64) -> f64 {
    2.09 * (1.0 + 1e-4 * (t - 24.0))
}

const GRID: &str = "[common.grid]\nreads = \"mV/V\"\ngauge = { resistance = \"350 ohm\", gauge_factor = 2.09, slope = \"1.0 %/100K\", reference = \"24 degC\" }\n\
    bridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }\nleads = { wires = 3, length = \"28 m\", area = \"0.14 mm2\", material = \"copper\", temperature = { channel = \"air\", longest_gap = \"5 s\" } }\n\
    thermal_output = { coefficients = [-24.6, 1.93, -0.041, 2.6e-4], in = \"degC\", gauge_factor = 2.0 }\n\
    expansion = { specimen = \"11.3e-6/K\", data = \"12.1e-6/K\" }\ntemperature = { channel = \"deck\", longest_gap = \"5 s\" }\n";
const SIDES: &str =
    "[channel.deck]\ncolumn = \"deck\"\nreads = \"degC\"\n[channel.air]\ncolumn = \"air\"\nreads = \"degC\"\n";

/// mV/V of a gauge in arm 1 on its three wires.
fn quarter(strain: f64, offset: f64, deck: f64, deck_at_zero: f64, air: f64) -> f64 {
    let gauge = 350.0 * (1.0 + factor(deck) * strain + offset + tau(deck) - tau(deck_at_zero));
    1e3 * Wired { three: [lead(air); 3], ..Wired::new([gauge, 350.0, 350.0, 350.0]) }.output()
}

#[test]
fn a_rosette_on_warm_leads_with_thermal_output() {
    let degrees: [f64; 3] = [10.0, 70.0, 130.0];
    let sensitivity = [0.012, 0.02, -0.004];
    let offsets = [3e-4, -5e-4, 1e-4];
    let sheet = format!(
        "{GRID}zero = {{ from = \"0 s\", to = \"2 s\" }}\n{}{SIDES}[rosette.R]\ngrids = {{ a = \"a\", b = \"b\", c = \"c\" }}\n\
         angles = [\"10 deg\", \"70 deg\", \"130 deg\"]\ntransverse = [\"1.2 %\", \"2 %\", \"-0.4 %\"]\n\
         material = {{ modulus = \"205 GPa\", poisson = 0.29 }}\nplane = \"stress\"\n\
         give = [\"principal-max\", \"principal-min\", \"direction\", \"shear-max\", \"strain-x\", \"shear-xy\", \"strain 30 deg\", \"stress-max\", \"stress-min\", \"stress 30 deg\", \"von-mises\", \"tresca\"]\n",
        ["a", "b", "c"].map(|c| format!("[channel.{c}]\nlike = \"grid\"\ncolumn = \"{c}\"\n")).concat()
    );
    // time, deck, air, ε_x, ε_y, γ_xy in microstrain; at 5 s the deck rests: 27 °C on the line between its neighbours
    let truth: [[f64; 6]; 8] = [
        [0.0, 20.0, 15.0, 0.0, 0.0, 0.0],
        [1.0, 20.0, 15.0, 0.0, 0.0, 0.0],
        [2.0, 20.0, 15.0, 0.0, 0.0, 0.0],
        [3.0, 21.0, 35.0, 850.0, -310.0, 420.0],
        [4.0, 24.0, -5.0, -1200.0, 300.0, -900.0],
        [5.0, 27.0, 42.0, 15.0, 900.0, 60.0],
        [6.0, 30.0, 42.5, 400.0, 390.0, -2000.0],
        [7.0, 60.0, 10.0, 3000.0, 2500.0, 10.0],
    ];
    let turned = |[x, y, g]: [f64; 3], degrees: f64| {
        let (sin, cos) = libm::sincos(degrees.to_radians());
        x * cos * cos + y * sin * sin + g * sin * cos
    };
    let rows: Vec<Vec<f64>> = truth
        .iter()
        .map(|&[time, deck, air, x, y, g]| {
            let mut row = vec![time];
            for ((degrees, k), offset) in degrees.iter().zip(sensitivity).zip(offsets) {
                let state = [x, y, g];
                // ê (1 − ν₀ K) = ε(θ) + K ε(θ + 90°)
                let indicated = (turned(state, *degrees) + k * turned(state, degrees + 90.0)) / (1.0 - 0.285 * k);
                row.push(quarter(indicated * 1e-6, offset, deck, 20.0, air));
            }
            row.extend([if time == 5.0 { f64::NAN } else { deck }, air]);
            row
        })
        .collect();
    let table = Table::new(&sheet, "time,a,b,c,deck,air", &rows);
    assert_eq!(table.summary.zeros.len(), 3);
    assert!(
        table.summary.zeros[0]
            .ends_with("mean of 3 readings in the window from 0 s to 2 s, at 20.000 °C, leads at 15.000 °C"),
        "{}",
        table.summary.zeros[0]
    );
    // by hand: Mohr's circles of strain and of stress, σ = E/(1 − ν²) (ε₁ + ν ε₂)
    let (modulus, nu) = (205e3, 0.29);
    let all =
        |f: &dyn Fn([f64; 3]) -> f64| truth.iter().map(|[_, _, _, x, y, g]| f([*x, *y, *g])).collect::<Vec<f64>>();
    let radius = |[x, y, g]: [f64; 3]| libm::hypot((x - y) / 2.0, g / 2.0);
    let one = |s: [f64; 3]| (s[0] + s[1]) / 2.0 + radius(s);
    let two = |s: [f64; 3]| (s[0] + s[1]) / 2.0 - radius(s);
    let stress = |a: f64, b: f64| modulus / (1.0 - nu * nu) * (a + nu * b) * 1e-6;
    let (s1, s2) = (|s: [f64; 3]| stress(one(s), two(s)), |s: [f64; 3]| stress(two(s), one(s)));
    // three grids share what the signals' rounding does to each
    let (strain, mega) = (2e-8, 5e-9);
    for (name, want, allowed) in [
        ("R principal-max (microstrain)", all(&one), strain),
        ("R principal-min (microstrain)", all(&two), strain),
        ("R shear-max (shear microstrain)", all(&|s| 2.0 * radius(s)), strain),
        ("R strain-x (microstrain)", all(&|s| s[0]), strain),
        ("R shear-xy (shear microstrain)", all(&|s| s[2]), strain),
        ("R strain 30 deg (microstrain)", all(&|s| turned(s, 30.0)), strain),
        ("R stress-max (MPa)", all(&s1), mega),
        ("R stress-min (MPa)", all(&s2), mega),
        // the strain along the face's normal and across it
        ("R stress 30 deg (MPa)", all(&|s| stress(turned(s, 30.0), turned(s, 120.0))), mega),
        ("R von-mises (MPa)", all(&|s| (s1(s) * s1(s) - s1(s) * s2(s) + s2(s) * s2(s)).sqrt()), mega),
        ("R tresca (MPa)", all(&|s| s1(s).abs().max(s2(s).abs()).max((s1(s) - s2(s)).abs())), mega),
    ] {
        near(name, &table.column(name), &want, allowed);
    }
    let directions = all(&|[x, y, g]| 0.5 * libm::atan2(g, x - y).to_degrees());
    near("direction", &table.column("R direction (deg)")[3..], &directions[3..], 1e-8);
    // forwards, with the zero as the window found it
    let at = |offset: f64| quarter(0.0, offset, 20.0, 20.0, 15.0);
    let stated = sheet.replace(
        "zero = { from = \"0 s\", to = \"2 s\" }",
        &format!(
            "zero = {{ at = \"{:?} mV/V\", temperature = \"20 degC\", lead_temperature = \"15 degC\" }}",
            at(3e-4)
        ),
    );
    for [_, deck, air, ..] in &truth[3..] {
        let inputs = Inputs { celsius: *deck, lead_celsius: *air, ..Inputs::default() };
        forwards(&stated, 0, 700.0, inputs, quarter(700e-6, 3e-4, *deck, 20.0, *air), 1e-12);
    }
}

#[test]
fn a_torque_shaft() {
    // four gauges at ±45° of a tube 60/40 mm: each sees γ/2. G = 210/2.6 GPa, Wp = π (D⁴ − d⁴)/(16 D)
    let sheet = "[channel.shear]\ncolumn = \"u\"\nreads = \"mV\"\noutput = \"shear microstrain\"\n\
        gauge = { resistance = \"1 kohm\", gauge_factor = 2.13 }\n\
        bridge = { arms = [\"e\", \"-e\", \"e\", \"-e\"], supply = { column = \"V\", reads = \"V\" }, supply_leads = [\"1.2 ohm\", \"1.4 ohm\"], signal_leads = \"0.9 ohm\", input_resistance = \"220 kohm\" }\n\
        [channel.torque]\nof = \"shear\"\nload = \"torsion\"\nsection = { diameter = \"60 mm\", bore = \"4 cm\" }\n\
        material = { modulus = \"210 GPa\", poisson = 0.3 }\noutput = \"kN m\"\n";
    let wired = |gamma: f64| {
        let x = 2.13 * gamma / 2.0;
        let arms = [1.0 + x, 1.0 - x, 1.0 + x, 1.0 - x].map(|r| 1000.0 * r);
        Wired { supply: [1.2, 1.4], signal: [0.9; 2], load: Some(220e3), ..Wired::new(arms) }.output()
    };
    let truth = [[5.0, 0.0], [5.1, 850.0], [4.9, -1730.0], [2.5, 12.5]];
    let rows: Vec<Vec<f64>> = truth.iter().map(|[v, gamma]| vec![1e3 * v * wired(gamma * 1e-6), *v]).collect();
    let table = Table::new(sheet, "u,V", &rows);
    let gammas = truth.map(|[_, gamma]| gamma);
    near("shear", &table.column("shear (shear microstrain)"), &gammas, 5e-9);
    let wp = std::f64::consts::PI * (libm::pow(0.06, 4.0) - libm::pow(0.04, 4.0)) / (16.0 * 0.06);
    let torque = gammas.map(|gamma| 210e9 / 2.6 * wp * gamma * 1e-6 * 1e-3);
    near("torque", &table.column("torque (kN m)"), &torque, 2e-11);
    let inputs = Inputs { supply: 5.1, ..Inputs::default() };
    forwards(sheet, 0, 850.0, inputs, 1e3 * 5.1 * wired(850e-6), 1e-12);
}

#[test]
fn load_cells_with_leads() {
    // 28.3 m of AWG 24 (0.5106 mm by its formula), to a load of 48.2 kΩ; one rated, one with a certificate; zero without load
    let cell = |name: &str, law: &str| {
        format!(
            "[channel.{name}]\ncolumn = \"{name}\"\nreads = \"mV/V\"\ntransducer = {{ {law} }}\n\
             bridge = {{ resistances = [\"351.9 ohm\", \"351.9 ohm\", \"351.9 ohm\", \"351.9 ohm\"], input_resistance = \"48.2 kohm\" }}\n\
             leads = {{ length = \"28.3 m\", awg = 24, temperature = \"air\" }}\nzero = {{ rows = 2 }}\n"
        )
    };
    let sheet = format!(
        "{}{}[channel.air]\ncolumn = \"air\"\nreads = \"degC\"\n[channel.both]\ncombine = {{ rated = 1, curve = 1 }}\noutput = \"N\"\n",
        cell("rated", "rated = \"2.1147 mV/V\", capacity = \"50 kN\""),
        cell(
            "curve",
            "polynomial = [0, 0.0423, -1.5e-5, 2e-7], in = \"kN\", gives = \"mV/V\", range = [\"-5 kN\", \"50 kN\"]"
        ),
    );
    let diameter = 0.127 * libm::pow(92.0, (36.0 - 24.0) / 39.0);
    let lead = |air: f64| {
        let area = std::f64::consts::PI / 4.0 * diameter * diameter;
        28.3 / (58.0 * area) * (1.0 + 0.00393 * (air - 20.0))
    };
    let wired = |u: f64, air: f64| {
        let arms = [1.0 + u, 1.0 - u, 1.0 + u, 1.0 - u].map(|r| 351.9 * r);
        let l = lead(air);
        1e3 * Wired { supply: [l; 2], signal: [l; 2], load: Some(48_200.0), ..Wired::new(arms) }.output()
    };
    let rated = |q: f64| 2.1147e-3 * q / 50.0;
    let curve = |q: f64| (0.0423 * q - 1.5e-5 * q * q + 2e-7 * q * q * q) * 1e-3;
    let truth = [[12.0, 0.0], [12.0, 0.0], [12.0, 31.85], [45.0, 31.85], [-10.0, -4.5], [30.0, 50.0]];
    let row = |(i, [air, q]): (usize, &[f64; 2])| {
        vec![i as f64, wired(1.3e-5 + rated(*q), *air), wired(-2.7e-5 + curve(*q), *air), *air]
    };
    let rows: Vec<Vec<f64>> = truth.iter().enumerate().map(row).collect();
    let table = Table::new(&sheet, "time,rated,curve,air", &rows);
    let loads = truth.map(|[_, q]| q);
    // 1e-16 V/V over 42 µV/V per kN
    near("rated", &table.column("rated (kN)"), &loads, 5e-11);
    // the last one is the end of the certificate, and may lie a rounding beyond it
    near("curve", &table.column("curve (kN)")[..5], &loads[..5], 5e-11);
    near("both", &table.column("both (N)")[..5], &loads.map(|q| 2000.0 * q)[..5], 1e-7);
    assert!(table.summary.zeros[0].ends_with("mean of 2 readings in the first 2 rows, leads at 12.000 °C"));
    let stated = sheet.replace("zero = { rows = 2 }", "zero = { at = \"0.01 mV/V\", lead_temperature = \"12 degC\" }");
    // the zero of the forward chain: the u₀ that gives 0.01 mV/V on the leads of 12 °C
    let u0 = root(|u| wired(u, 12.0), 0.01, 0.0, 1e-3);
    let inputs = Inputs { lead_celsius: 45.0, ..Inputs::default() };
    forwards(&stated, 0, 31.85, inputs, wired(u0 + rated(31.85), 45.0), 1e-12);
    forwards(&stated, 1, 31.85, inputs, wired(u0 + curve(31.85), 45.0), 1e-12);
}

#[test]
fn a_dummy_of_its_own_temperature() {
    // gauge on the deck, dummy in the air, both move with their own temperature; three wires that stay cold
    let sheet = format!(
        "{}[channel.h]\nlike = \"grid\"\ncolumn = \"h\"\nzero = {{ rows = 2 }}\nbridge = {{ arms = [\"e\", \"dummy\", \"0\", \"0\"], temperatures = [\"deck\", \"air\", \"\", \"\"] }}\n{SIDES}",
        GRID.replace(", temperature = { channel = \"air\", longest_gap = \"5 s\" } }", " }")
    );
    let half = |e: f64, deck: f64, air: f64| {
        let gauge = 350.0 * (1.0 + factor(deck) * e + 4e-4 + tau(deck) - tau(18.0));
        let dummy = 350.0 * (1.0 + tau(air) - tau(7.0));
        1e3 * Wired { three: [lead(20.0); 3], ..Wired::new([gauge, dummy, 350.0, 350.0]) }.output()
    };
    let truth = [[0.0, 18.0, 7.0, 0.0], [1.0, 18.0, 7.0, 0.0], [2.0, 25.0, 7.0, 640.0], [3.0, 25.0, 40.0, -2100.0]];
    let rows: Vec<Vec<f64>> =
        truth.iter().map(|[t, deck, air, e]| vec![*t, half(e * 1e-6, *deck, *air), *deck, *air]).collect();
    let table = Table::new(&sheet, "time,h,deck,air", &rows);
    near("h", &table.column("h (microstrain)"), &truth.map(|r| r[3]), 5e-9);
    assert!(
        table.summary.zeros[0]
            .ends_with("mean of 2 readings in the first 2 rows, arm 1 at 18.000 °C, arm 2 at 7.000 °C"),
        "{}",
        table.summary.zeros[0]
    );
    let stated = sheet.replace(
        "zero = { rows = 2 }",
        &format!(
            "zero = {{ at = \"{:?} mV/V\", temperatures = [\"18 degC\", \"7 degC\", \"\", \"\"] }}",
            half(0.0, 18.0, 7.0)
        ),
    );
    let inputs = Inputs { arm_celsius: [25.0, 40.0, f64::NAN, f64::NAN], ..Inputs::default() };
    forwards(&stated, 0, -2100.0, inputs, half(-2100e-6, 25.0, 40.0), 1e-12);
}

/// One gauge on three wires, 59.88 kΩ across arm 1 from 10 s to 19 s while the strain is 120 microstrain.
struct Shunted {
    /// What the step is at the instrument and at the gauge, microstrain, by elimination and bisection.
    steps: [f64; 2],
    verdicts: Vec<ShuntVerdict>,
}

const SHUNT: &str = "shunt = { from = \"10 s\", to = \"19 s\", resistor = \"59.88 kohm\", across = \"arm 1\", place = \"instrument\" }\n";

/// Records with `signal` made of the true one, and converts.
fn shunted(more: &str, signal: impl Fn(f64, f64) -> f64) -> Shunted {
    let wired = |e: f64, shunt: Option<(f64, bool)>| {
        let gauge = 350.0 * (1.0 + 2.09 * e);
        1e3 * Wired { three: [lead(31.0); 3], shunt, ..Wired::new([gauge, 350.0, 350.0, 350.0]) }.output()
    };
    let step = |at_instrument| {
        let y = wired(120e-6, Some((59_880.0, at_instrument)));
        1e6 * root(|e| wired(e, None), y, -0.05, 0.05) - 120.0
    };
    let rows: Vec<Vec<f64>> = (0..30)
        .map(|t| {
            let on = (10..20).contains(&t).then_some((59_880.0, true));
            vec![f64::from(t), signal(f64::from(t), wired(120e-6, on))]
        })
        .collect();
    let sheet = format!(
        "[channel.g]\ncolumn = \"y\"\nreads = \"mV/V\"\ngauge = {{ resistance = \"350 ohm\", gauge_factor = 2.09 }}\nbridge = {{ arms = [\"e\", \"0\", \"0\", \"0\"] }}\n\
         leads = {{ wires = 3, length = \"28 m\", area = \"0.14 mm2\", temperature = \"31 degC\" }}\n{more}"
    );
    let table = Table::new(&sheet, "time,y", &rows);
    Shunted { steps: [step(true), step(false)], verdicts: table.summary.shunts }
}

fn six(value: f64) -> f64 {
    format!("{value:.5e}").parse().unwrap()
}

#[test]
fn a_shunt_step_that_agrees() {
    let Shunted { steps: [here, there], verdicts } = shunted(SHUNT, |_, y| y);
    let [verdict] = verdicts.as_slice() else { panic!("{}", verdicts.len()) };
    near("steps", &[verdict.read, verdict.expected, verdict.other_place], &[here, here, there], 1e-7);
    // at the gauge about −R/(F (R + Rc)) = −2781; three leads of 3.6 ohm beside 350 make it some 4 % more at the instrument
    assert!((there + 2781.0).abs() < 2.0 && (here / there - 1.04).abs() < 0.005, "{here} {there}");
    assert_eq!((verdict.rows, verdict.agrees()), ([10, 9], true));
    assert_eq!(
        verdict.to_string(),
        format!(
            "g: shunt of 59880 ohm across arm 1 at the instrument: read {0} microstrain, expected {0} microstrain, ratio 1.00000, within 1 %; at the gauge it would simulate {1} microstrain ({2:+.2} %)",
            six(here),
            six(there),
            100.0 * (there / here - 1.0)
        )
    );
}

#[test]
fn a_shunt_step_that_disagrees() {
    // the recorder was 5 % too low
    let Shunted { steps: [here, there], verdicts } = shunted(SHUNT, |_, y| 0.95 * y);
    let said = verdicts[0].to_string();
    assert!(!verdicts[0].agrees());
    let ratio = verdicts[0].ratio();
    assert!((ratio - 0.95).abs() < 1e-3 && (verdicts[0].read / here - ratio).abs() < 1e-4, "{ratio}");
    assert!(
        said.contains(&format!(
            " ratio {ratio:.5}, NOT within 1 %; readings times {:.5} would agree; at the gauge",
            1.0 / ratio
        )),
        "{said}"
    );
    assert!(!said.contains("signs"), "{said}");
    // what the data sheet of the instrument promises, in the unit of the channel; a wider tolerance
    let stated = SHUNT.replace("place", "expected = \"-0.27 %\", tolerance = \"7 %\", place");
    let Shunted { verdicts, .. } = shunted(&stated, |_, y| 0.95 * y);
    let verdict = &verdicts[0];
    assert!((verdict.expected + 2700.0).abs() < 1e-9 && verdict.agrees());
    near("simulated", &[verdict.simulated, verdict.other_place], &[here, there], 3.0);
    let said = verdict.to_string();
    assert!(
        said.contains(", expected -2700 microstrain, ratio ")
            && said.contains(", within 7 %; in this bridge it simulates -2896.4"),
        "{said}"
    );
}

#[test]
fn a_shunt_step_the_wrong_way_round() {
    let Shunted { verdicts, .. } = shunted(SHUNT, |_, y| -y);
    let said = verdicts[0].to_string();
    assert!(!verdicts[0].agrees() && verdicts[0].ratio() < -0.9);
    assert!(
        said.contains(", NOT within 1 %; the signs differ: the shunt was across an adjacent arm, or the signal wires are crossed; at the gauge"),
        "{said}"
    );
    assert!(!said.contains("times"), "{said}");
}

#[test]
fn shunt_steps_that_cannot_be_judged() {
    let nothing = |from: f64, to: f64| move |t: f64, y: f64| if (from..=to).contains(&t) { f64::NAN } else { y };
    let said = |more: &str, from: f64, to: f64| {
        let verdicts = shunted(more, nothing(from, to)).verdicts;
        assert!(!verdicts[0].agrees());
        verdicts[0].to_string()
    };
    assert_eq!(
        said(SHUNT, 10.0, 19.0),
        "g: the shunt step cannot be judged: no reading from 10 s to 19 s has a number"
    );
    assert_eq!(
        said(SHUNT, 0.0, 9.9),
        "g: the shunt step cannot be judged: no reading in the equally long stretch before 10 s has a number"
    );
    // 1 kΩ across 350 Ω simulates some −120 000 microstrain
    assert_eq!(
        said(&SHUNT.replace("59.88 kohm", "1 kohm"), 50.0, 60.0),
        "g: the shunt step cannot be judged: 1000 ohm across arm 1 at the instrument drives this channel beyond what it believes"
    );
}

#[test]
fn shunt_windows_that_miss_their_step() {
    let (uneven, before) = (Some(ShuntDoubt::Uneven), Some(ShuntDoubt::UnevenBefore));
    // the shunt is on from 10 to 19 s, whatever the sheet says; noise and drift of a few microstrain
    let verdict = |from: u8, to: u8| {
        let noisy = |t: f64, y: f64| y * (1.0 + 1e-3 * libm::sin(97.0 * t)) + 1e-5 * t;
        let more = SHUNT.replace("\"10 s\"", &format!("\"{from} s\"")).replace("\"19 s\"", &format!("\"{to} s\""));
        shunted(&more, noisy).verdicts.remove(0)
    };
    for (from, to, doubt) in [
        (10, 19, None),
        (12, 18, before),
        (10, 20, uneven),
        (9, 19, uneven),
        (10, 22, uneven),
        (12, 21, uneven),
        (5, 14, uneven),
        (21, 29, before),
        // 29 s is the last row, and the next would come at 30 s
        (10, 31, Some(ShuntDoubt::Ends)),
    ] {
        let verdict = verdict(from, to);
        assert_eq!(verdict.doubt, doubt, "{from} {to}: {verdict}");
        assert_eq!(verdict.agrees(), doubt.is_none(), "{from} {to}: {verdict}");
        assert_eq!(verdict.to_string().contains("cannot be judged"), doubt.is_some(), "{verdict}");
        assert!(!verdict.to_string().contains("times"), "{verdict}");
    }
    assert_eq!(verdict(10, 31).to_string(), "g: the shunt step cannot be judged: the recording ends before 31 s");
    assert_eq!(
        verdict(10, 22).to_string(),
        "g: the shunt step cannot be judged: readings from 10 s to 22 s jump or scatter far more than those before, as they do where some are without the shunt"
    );
    assert_eq!(
        verdict(12, 18).to_string(),
        "g: the shunt step cannot be judged: readings in the equally long stretch before 12 s jump or scatter far more than those from there on, as they do where the shunt is on already"
    );
    // a filter spreads the edges: no jump, but scatter
    let slow = |t: f64, y: f64| if (19.5..26.0).contains(&t) { y + (t - 26.0) * 0.2 } else { y };
    let verdict = shunted(&SHUNT.replace("\"19 s\"", "\"24 s\""), slow).verdicts.remove(0);
    assert_eq!(verdict.doubt, uneven, "{verdict}");
    // one row of 11 hardly counts where the tolerance is as wide: a tenth of 95 % is more than 9.1 %
    let wide = SHUNT.replace("\"10 s\"", "\"9 s\"").replace("place", "tolerance = \"95 %\", place");
    assert_eq!(shunted(&wide, |_, y| y).verdicts[0].doubt, None);
    let less = wide.replace("95 %", "90 %");
    assert_eq!(shunted(&less, |_, y| y).verdicts[0].doubt, uneven);
    // never connected
    let flat =
        shunted(&SHUNT.replace("\"10 s\"", "\"5 s\"").replace("\"19 s\"", "\"9 s\""), |_, y| y).verdicts.remove(0);
    assert_eq!((flat.doubt, flat.agrees()), (None, false));
    assert!(
        flat.to_string().contains(", NOT within 1 %; that is no step: was the shunt connected then?; at the gauge"),
        "{flat}"
    );
    assert!(!flat.to_string().contains("times"), "{flat}");
}

#[test]
fn a_shunt_step_beside_changes() {
    // one step, one verdict, by the keys in force when it was connected
    let change = |from: &str| format!("[[channel.g.change]]\nfrom = \"{from}\"\ngauge = {{ gauge_factor = 2.2 }}\n");
    for (from, factor) in [("5 s", 2.2), ("25 s", 2.09)] {
        let Shunted { steps: [here, _], verdicts } = shunted(&format!("{SHUNT}{}", change(from)), |_, y| y);
        let [verdict] = verdicts.as_slice() else { panic!("{} verdicts", verdicts.len()) };
        // the same change of resistance by another gauge factor; the strain it rests at moves it a little
        near("expected", &[verdict.expected], &[here * 2.09 / factor], 1.0);
    }
}

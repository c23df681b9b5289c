//! Generated C and Rust, compiled here and run on many readings: the same bits as the library's tables, within the proven
//! bound of the chain, and the chain's word for every reading without a number. The chains are common practice, their figures
//! made up.
//!
//! Every code of 12 and 16 bits; of 24 bits a stride and all codes about every knot and end, or every code with
//! `--cfg exhaustive`.
#![cfg(feature = "std")]

mod support;

use std::io::Write;
use std::path::{Path, PathBuf};
use std::process::{Command, Stdio};

use ohmwright::chain::{Chain, Element, Inputs, Limit, Network, Signal, Word};
use ohmwright::curve::build::{Curve, Data, Numbers, Request};
use ohmwright::curve::text::{self, Page};
use ohmwright::platinum::IEC_60751;
use ohmwright::signal::{Amplifier, Bridge, Coding, Converter, Divider, FullScale, Side};
use ohmwright::strain::Gauge;
use support::chains;

/// Two to a power.
fn two(exponent: i32) -> f64 {
    libm::ldexp(1.0, exponent)
}

/// A folder that goes with the test.
fn folder(name: &str) -> PathBuf {
    let folder = Path::new(env!("CARGO_TARGET_TMPDIR")).join(format!("curve_{name}"));
    let _ = std::fs::remove_dir_all(&folder);
    std::fs::create_dir_all(&folder).unwrap();
    folder
}

fn run(command: &mut Command) -> String {
    let ran = command.output().unwrap_or_else(|e| panic!("{command:?}: {e}"));
    let said = format!("{}{}", String::from_utf8_lossy(&ran.stdout), String::from_utf8_lossy(&ran.stderr));
    assert!(ran.status.success(), "{command:?}\n{said}");
    said
}

fn compiler() -> String {
    std::env::var("CC").unwrap_or_else(|_| "cc".into())
}

/// Reads readings of four bytes, writes status and value of each.
const MAIN_C: &str = r#"
#include <stdint.h>
#include <stdio.h>
#include <string.h>
int32_t sensor(KIND reading, KIND *value);
int main(void)
{
    static KIND in[4096];
    size_t n, i;
    if (sensor(0, 0) != -1) return 9;
    while ((n = fread(in, 4, 4096, stdin)) > 0) {
        for (i = 0; i < n; i++) {
            KIND value;
            int32_t out[2];
            memset(&value, 0x55, 4);
            out[0] = sensor(in[i], &value);
            memcpy(&out[1], &value, 4);
            fwrite(out, 4, 2, stdout);
        }
    }
    return 0;
}
"#;

const MAIN_RS: &str = r"
mod table;
use std::io::{Read, Write};
fn main() {
    let mut all = Vec::new();
    std::io::stdin().read_to_end(&mut all).unwrap();
    let mut out = Vec::new();
    for c in all.chunks(4) {
        let reading = KIND::from_ne_bytes([c[0], c[1], c[2], c[3]]);
        let (status, value) = match table::sensor(reading) {
            Ok(value) => (0i32, value.to_ne_bytes()),
            Err(word) => (i32::from(word), NOTHING.to_ne_bytes()),
        };
        out.extend(status.to_ne_bytes());
        out.extend(value);
    }
    std::io::stdout().write_all(&out).unwrap();
}
";

/// The programs of one table.
struct Programs(Vec<(String, PathBuf)>);

/// Compiles both forms of a table in every way that is promised.
fn programs(curve: &Curve, name: &str) -> Programs {
    let folder = folder(name);
    let title = "a title that ends */ and /* begins, \\ with ??/ odd things";
    let lines = ["first: line".to_string(), "second */ line\nwith a break".to_string()];
    let page = Page { name: "sensor", title, channel: name, reading_unit: "count", unit: "degC", lines: &lines };
    let (c, rust) = (text::c(curve, &page).unwrap(), text::rust(curve, &page).unwrap());
    let (kind, rust_kind, nothing) = match curve.data {
        Data::Single(_) => ("float", "f32", "f32::NAN"),
        _ => ("int32_t", "i32", "i32::MIN"),
    };
    std::fs::write(folder.join("table.c"), &c).unwrap();
    std::fs::write(folder.join("main.c"), MAIN_C.replace("KIND", kind)).unwrap();
    std::fs::write(folder.join("table.rs"), &rust).unwrap();
    std::fs::write(folder.join("main.rs"), MAIN_RS.replace("KIND", rust_kind).replace("NOTHING", nothing)).unwrap();
    std::fs::write(folder.join("lib.rs"), "#![no_std]\n#![forbid(unsafe_code)]\npub mod table;\n").unwrap();
    let mut out = Vec::new();
    for (standard, level) in [("c99", "-O0"), ("c99", "-O2"), ("c11", "-O2")] {
        let object = folder.join(format!("table_{standard}{level}.o"));
        run(Command::new(compiler())
            .args([
                &format!("-std={standard}"),
                level,
                "-Wall",
                "-Wextra",
                "-Werror",
                "-pedantic",
                "-ffp-contract=off",
                "-c",
            ])
            .arg(folder.join("table.c"))
            .arg("-o")
            .arg(&object));
        // no call of any library
        let undefined = run(Command::new("nm").arg("-u").arg(&object));
        assert_eq!(undefined.trim(), "", "{name}");
        let program = folder.join(format!("c_{standard}{level}"));
        run(Command::new(compiler())
            .args([&format!("-std={standard}"), level])
            .arg(folder.join("main.c"))
            .arg(&object)
            .arg("-o")
            .arg(&program));
        out.push((format!("{standard} {level}"), program));
    }
    let rustc = std::env::var("RUSTC").unwrap_or_else(|_| "rustc".into());
    let strict = ["--edition", "2021", "-D", "warnings"];
    run(Command::new(&rustc)
        .args(strict)
        .args(["--crate-type", "lib", "--emit", "metadata"])
        .arg("--out-dir")
        .arg(&folder)
        .arg(folder.join("lib.rs")));
    for level in ["0", "2"] {
        let program = folder.join(format!("rust_{level}"));
        run(Command::new(&rustc)
            .args(strict)
            .args(["-C", &format!("opt-level={level}"), "-o"])
            .arg(&program)
            .arg(folder.join("main.rs")));
        out.push((format!("Rust, level {level}"), program));
    }
    Programs(out)
}

/// Status and value of each reading, by one program.
fn answers(program: &Path, readings: &[u32]) -> Vec<(i32, u32)> {
    let mut child = Command::new(program).stdin(Stdio::piped()).stdout(Stdio::piped()).spawn().unwrap();
    let mut stdin = child.stdin.take().unwrap();
    let bytes: Vec<u8> = readings.iter().flat_map(|r| r.to_ne_bytes()).collect();
    let feed = std::thread::spawn(move || stdin.write_all(&bytes).unwrap());
    let out = child.wait_with_output().unwrap();
    feed.join().unwrap();
    assert!(out.status.success(), "{}", program.display());
    let word = |b: &[u8]| u32::from_ne_bytes([b[0], b[1], b[2], b[3]]);
    out.stdout.chunks(8).map(|b| (word(b) as i32, word(&b[4..]))).collect()
}

/// One reading in the bits that the programs take, and in the unit of the readings.
fn typed(curve: &Curve, reading: f64) -> (u32, f64) {
    match &curve.data {
        Data::Single(_) => ((reading as f32).to_bits(), f64::from(reading as f32)),
        Data::Fixed(t) => {
            let steps = two(t.reading_bits);
            let x = (reading * steps).round() as i32;
            (x as u32, f64::from(x) / steps)
        }
        _ => panic!("another kind of table"),
    }
}

/// Runs all forms over these readings and compares them with the table of the library and with the chain.
fn compare(name: &str, chain: &Chain, inputs: &Inputs, curve: &Curve, readings: &[f64]) {
    let plan = chain.plan().unwrap();
    let typed: Vec<(u32, f64)> = readings.iter().map(|r| typed(curve, *r)).collect();
    let bits: Vec<u32> = typed.iter().map(|(bits, _)| *bits).collect();
    let Programs(programs) = programs(curve, name);
    let (first, others) = programs.split_first().unwrap();
    let given = answers(&first.1, &bits);
    assert_eq!(given.len(), bits.len(), "{name}");
    for (form, program) in others {
        assert!(answers(program, &bits) == given, "{name}: {form} and {} differ", first.0);
    }
    let (mut worst, mut good) = (0.0_f64, 0);
    for ((status, value), (bits, reading)) in given.iter().zip(&typed) {
        // the library's own table, bit for bit
        let (own, nothing) = match &curve.data {
            Data::Single(t) => {
                (t.table(curve.degree).value(f32::from_bits(*bits)).map(f32::to_bits), f32::NAN.to_bits())
            }
            Data::Fixed(t) => (t.table(curve.degree).value(*bits as i32).map(|v| v as u32), i32::MIN as u32),
            _ => panic!("another kind of table"),
        };
        assert_eq!((*status, *value), own.map_or_else(|word| (word as i32, nothing), |v| (0, v)), "{name}: {reading}");
        // the chain
        let want = plan.one(Inputs { reading: *reading, ..*inputs });
        assert_eq!(*status, want.word as i32, "{name}: {reading}: {want:?}");
        if want.word == Word::Good {
            let value = match &curve.data {
                Data::Fixed(t) => f64::from(*value as i32) / two(t.result_bits),
                _ => f64::from(f32::from_bits(*value)),
            };
            let off = (value - want.value).abs();
            assert!(off <= curve.bound, "{name}: {reading}: {value} for {}, bound {}", want.value, curve.bound);
            worst = worst.max(off);
            good += 1;
        }
    }
    assert!(good > 0 && good < readings.len(), "{name}: {good} of {} readings have a result", readings.len());
    println!(
        "{name}: {} pieces of degree {}, {} bytes, bound {}, worst {worst:.3e} over {good} readings of {}",
        curve.pieces(),
        curve.degree,
        curve.bytes(),
        curve.bound,
        readings.len()
    );
}

fn built(chain: &Chain, inputs: &Inputs, tolerance: f64, numbers: Numbers) -> Curve {
    let request = Request { chain, inputs, factor: 1.0, tolerance, from: None, to: None, degree: None, numbers };
    Curve::new(&request).unwrap()
}

const BOTH: [(Numbers, &str); 2] = [(Numbers::Single, "float"), (Numbers::Fixed, "fixed")];

/// A thermistor below a resistor, by a ratiometric converter.
fn thermistor(bits: u8) -> Chain {
    let divider = Divider { fixed: 10_000.0, sensor: Side::Low, input_resistance: None };
    let mut chain = Chain::new(Network::Divider { divider, leads: None }, Element::Thermistor(chains::BETA));
    chain.reading.signal = Signal::Count;
    chain.converter = Some(Converter { bits, full_scale: FullScale::Supply, coding: Coding::Unsigned });
    chain
}

#[test]
fn every_code_of_a_thermistor_divider_of_12_bits() {
    for (numbers, kind) in BOTH {
        let (chain, inputs) = (thermistor(12), Inputs::default());
        let curve = built(&chain, &inputs, 0.01, numbers);
        // and codes that the converter has not
        let codes: Vec<f64> = (-40..=4140).map(f64::from).chain([-1e6, 1e6]).collect();
        compare(&format!("thermistor_12_{kind}"), &chain, &inputs, &curve, &codes);
    }
}

#[test]
fn every_code_of_a_thermistor_divider_of_16_bits() {
    for (numbers, kind) in BOTH {
        let (chain, inputs) = (thermistor(16), Inputs::default());
        let curve = built(&chain, &inputs, 0.002, numbers);
        let codes: Vec<f64> = (-40..=65_600).map(f64::from).collect();
        compare(&format!("thermistor_16_{kind}"), &chain, &inputs, &curve, &codes);
    }
}

/// A quarter bridge of 350 ohm behind a gain of 16, by a ratiometric converter of 24 bits: its whole scale is ± 62.5 mV/V.
fn quarter() -> Chain {
    let mut chain = Chain::strain(Bridge::one_gauge(350.0), Gauge::new(2.08));
    chain.reading.signal = Signal::Count;
    chain.converter = Some(Converter { bits: 24, full_scale: FullScale::Supply, coding: Coding::Signed });
    chain.amplifier = Amplifier::Gain { gain: 16.0, offset: 0.0 };
    chain
}

#[test]
fn codes_of_a_quarter_bridge_of_24_bits() {
    for (numbers, kind, tolerance) in [(Numbers::Single, "float", 0.1), (Numbers::Fixed, "fixed", 0.01)] {
        let (chain, inputs) = (quarter(), Inputs::default());
        let curve = built(&chain, &inputs, tolerance, numbers);
        let (low, high) = (-(1_i32 << 23), (1_i32 << 23) - 1);
        let mut codes: Vec<i32> =
            if cfg!(exhaustive) { (low..=high).collect() } else { (low..=high).step_by(1009).collect() };
        let knots: Vec<i32> = match &curve.data {
            Data::Single(t) => t.knots.iter().map(|k| *k as i32).collect(),
            Data::Fixed(t) => t.knots.clone(),
            _ => panic!("another kind of table"),
        };
        for knot in knots.into_iter().chain([low, 0, high]) {
            codes.extend(knot - 300..=knot + 300);
        }
        let codes: Vec<f64> = codes.into_iter().map(f64::from).collect();
        compare(&format!("quarter_24_{kind}"), &chain, &inputs, &curve, &codes);
    }
}

#[test]
fn platinum_from_ohms() {
    for (numbers, kind) in BOTH {
        let chain = Chain::new(Network::Resistance { leads: None }, Element::Platinum(IEC_60751));
        let inputs = Inputs::default();
        let curve = built(&chain, &inputs, 0.001, numbers);
        // short, out of range, all of the range, out of range, open
        let mut ohms: Vec<f64> = (-2_000..=60_000).map(|i| f64::from(i) * 0.021).collect();
        ohms.extend(curve.readings);
        if numbers == Numbers::Single {
            ohms.extend([
                f64::NAN,
                f64::INFINITY,
                f64::NEG_INFINITY,
                f64::from(f32::MAX),
                -f64::from(f32::MAX),
                1e-45,
                -0.0,
            ]);
        }
        compare(&format!("platinum_{kind}"), &chain, &inputs, &curve, &ohms);
    }
}

#[test]
fn chains_of_other_kinds() {
    for name in [
        "type K",
        "quarter, three wires, fixed temperature",
        "transducer, certificate of outputs",
        "half, opposite arms",
    ] {
        let case = chains::all().into_iter().find(|c| c.name == name).unwrap();
        let tolerance = (case.span[1] - case.span[0]) * 1e-5;
        for (numbers, kind) in BOTH {
            let curve = built(&case.chain, &case.inputs, tolerance, numbers);
            let [low, high] = curve.readings;
            let width = high - low;
            let readings: Vec<f64> = (-600..=2_600).map(|i| low + width * f64::from(i) / 2_000.0).collect();
            let short = name.replace([' ', ','], "_");
            compare(&format!("{short}_{kind}"), &case.chain, &case.inputs, &curve, &readings);
        }
    }
}

#[test]
fn what_is_only_extrapolated_has_its_word_and_no_number() {
    let mut chain = Chain::new(Network::Resistance { leads: None }, Element::Platinum(IEC_60751));
    chain.extrapolate = true;
    chain.high_limit = Some(Limit { at: 500.0, word: Word::Saturated });
    let inputs = Inputs::default();
    for (numbers, kind) in BOTH {
        let curve = built(&chain, &inputs, 0.01, numbers);
        let ohms: Vec<f64> = (-20..=6_000).map(|i| f64::from(i) * 0.1).collect();
        let plan = chain.plan().unwrap();
        for word in [Word::Extrapolated, Word::Saturated, Word::Short] {
            assert!(ohms.iter().any(|r| plan.one(*r).word == word), "{word}");
        }
        compare(&format!("extrapolated_{kind}"), &chain, &inputs, &curve, &ohms);
    }
}

#[test]
fn names_that_are_none() {
    for name in ["girder", "curve_1", "a", "Sensor_2", "half", "wall", "to_degrees"] {
        assert!(text::is_name(name), "{name}");
    }
    // functions of the C library, and names that it keeps for itself
    for name in [
        "round",
        "sinf",
        "fabsl",
        "printf",
        "abs",
        "strength",
        "isotherm",
        "total",
        "memory",
        "ow_convert",
        "linux",
        "std",
    ] {
        assert!(!text::is_name(name), "{name}");
    }
    for name in ["", "1st", "_a", "int", "fn", "a-b", "tr\u{e4}ger", "a__b", "NAN", "x".repeat(64).as_str()] {
        assert!(!text::is_name(name), "{name}");
    }
}

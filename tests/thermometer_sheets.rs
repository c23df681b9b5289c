//! Thermometers and thermocouples as sheets name them: each form becomes the chain that it says, and what is wrong is said
//! with its place. The chains that are expected are written here from what the keys mean, not read back.
#![cfg(feature = "files")]

#[path = "support/sheets.rs"]
mod sheets;

use ohmwright::chain::{Chain, Element, Network, Reading, SelfHeating, Signal, Supply, Temperature};
use ohmwright::measurement::{Paired, Pairing, Tolerance};
use ohmwright::metal::{self, COPPER_10_OHM, COPPER_GOST_6651_2009, NICKEL_DIN_43760};
use ohmwright::platinum::its90::Deviation;
use ohmwright::platinum::{
    self, AlphaDeltaBeta, Class, FractionOfB, Grade, IEC_751_1983, IEC_60751, RATIO_1_3911, Resistor,
};
use ohmwright::sheet::Sheet;
use ohmwright::signal::{Around, Conductor, Divider, Each, Leads, Side, Wires};
use ohmwright::thermistor::{Beta, Law, LogarithmOfRatio, Points, ReciprocalOfTemperature};
use ohmwright::thermocouple::{self, Thermocouple};
use sheets::{mistakes_as, segment};

fn of(reads: &str, more: &str) -> Sheet {
    let text = format!("[channel.t]\ncolumn = 1\nreads = \"{reads}\"\n{more}\n");
    Sheet::read("s.toml", &text).unwrap_or_else(|e| panic!("{e}"))
}

fn ohms(element: Element) -> Chain {
    Chain::new(Network::Resistance { leads: None }, element)
}

#[test]
fn curves_by_their_names() {
    for (keys, element) in [
        ("platinum = { standard = \"IEC 60751:2022\", r0 = \"1 kohm\" }", Element::Platinum(IEC_60751.with_r0(1e3))),
        ("platinum = { standard = \"IEC 751:1983\", r0 = \"100 ohm\" }", Element::Platinum(IEC_751_1983)),
        (
            "platinum = { standard = \"R100/R0 = 1.3911\", r0 = \"50 ohm\" }",
            Element::Platinum(RATIO_1_3911.with_r0(50.0)),
        ),
        (
            "platinum = { r0 = \"99.8 ohm\", alpha = 3.851e-3, delta = 1.4998, beta = 0.1086 }",
            Element::AlphaDeltaBeta(AlphaDeltaBeta {
                r0_ohms: 99.8,
                alpha: 3.851e-3,
                delta: 1.4998,
                beta: 0.1086,
                range_celsius: [-200.0, 850.0],
            }),
        ),
        // without β nothing is known below 0 °C
        (
            "platinum = { r0 = \"100 ohm\", alpha = 3.85e-3, delta = 1.5 }",
            Element::AlphaDeltaBeta(AlphaDeltaBeta {
                r0_ohms: 100.0,
                alpha: 3.85e-3,
                delta: 1.5,
                beta: 0.0,
                range_celsius: [0.0, 850.0],
            }),
        ),
        (
            "platinum = { triple_point = \"25.4781 ohm\", subrange = \"argon\", deviation = [-1.2e-4, 3.1e-5] }",
            Element::Standard { triple_point_ohms: 25.4781, deviation: Deviation::FromArgon { a: -1.2e-4, b: 3.1e-5 } },
        ),
        (
            "platinum = { triple_point = \"0.25 ohm\", subrange = \"silver\", deviation = [1e-4, 2e-5, 3e-6, 4e-6], aluminium_ratio = 3.3758 }",
            Element::Standard {
                triple_point_ohms: 0.25,
                deviation: Deviation::ToSilver { a: 1e-4, b: 2e-5, c: 3e-6, d: 4e-6, w_aluminium: 3.3758 },
            },
        ),
        (
            "metal = { standard = \"DIN 43760\", r0 = \"1000 ohm\" }",
            Element::Metal(metal::Law::Nickel(NICKEL_DIN_43760).with_r0(1e3)),
        ),
        (
            "metal = { standard = \"GOST 6651-2009\", r0 = \"53 ohm\" }",
            Element::Metal(metal::Law::Copper(COPPER_GOST_6651_2009).with_r0(53.0)),
        ),
        ("metal = { standard = \"copper 10 ohm\" }", Element::Metal(metal::Law::Copper(COPPER_10_OHM))),
        (
            "thermistor = { points = [[0, 32650], [25, 10000], [50, 3602]] }",
            Element::Thermistor(Law::Points(Points::new(&[[0.0, 32_650.0], [25.0, 10e3], [50.0, 3602.0]]).unwrap())),
        ),
        // two points are a β law between them, or over a range that is stated
        (
            "thermistor = { points = [[25, 10000], [85, 1071]] }",
            Element::Thermistor(Law::Beta(Beta::through([25.0, 10e3], [85.0, 1071.0], [25.0, 85.0]).unwrap())),
        ),
        (
            "thermistor = { points = [[25, 10000], [85, 1071]], range = [\"0 degC\", \"100 degC\"] }",
            Element::Thermistor(Law::Beta(Beta::through([25.0, 10e3], [85.0, 1071.0], [0.0, 100.0]).unwrap())),
        ),
        (
            "thermistor = { reference = \"10 kohm\", ratio_terms = [-14.6, 4791, -115334, -3.73e6], range = [\"-50 degC\", \"150 degC\"] }",
            Element::Thermistor(Law::LogarithmOfRatio(LogarithmOfRatio {
                reference_ohms: 10e3,
                a: -14.6,
                b: 4791.0,
                c: -115_334.0,
                d: -3.73e6,
                range_celsius: [-50.0, 150.0],
            })),
        ),
        (
            "thermistor = { reference = \"10 kohm\", reciprocal_terms = [3.354e-3, 2.57e-4, 2.6e-6, 6.3e-8], range = [\"0 degC\", \"80 degC\"] }",
            Element::Thermistor(Law::ReciprocalOfTemperature(ReciprocalOfTemperature {
                reference_ohms: 10e3,
                a: 3.354e-3,
                b: 2.57e-4,
                c: 2.6e-6,
                d: 6.3e-8,
                range_celsius: [0.0, 80.0],
            })),
        ),
    ] {
        assert_eq!(segment(&of("ohm", keys), 0).chain, ohms(element), "{keys}");
    }
}

#[test]
fn circuits() {
    let pt = "platinum = { standard = \"IEC 60751\", r0 = \"100 ohm\" }\n";
    let volts = |exponent| Reading { signal: Signal::Volts, exponent };
    let plain = ohms(Element::Platinum(IEC_60751));
    let heat = |amperes| Some(SelfHeating { kelvin_per_watt: 400.0, amperes });
    let two = Some(Leads { wires: Wires::Two, each: Each::Same(Conductor::Ohms(0.3)) });
    for (reads, keys, want) in [
        (
            "ohm",
            "circuit = { current = \"1 mA\", leakage = \"2 Mohm\" }\nself_heating = \"0.4 K/mW\"\n",
            Chain { around: Around { leakage: Some(2e6), ..Around::NONE }, self_heating: heat(Some(1e-3)), ..plain },
        ),
        (
            "mV",
            "circuit = { current = \"1 mA\" }\nself_heating = \"400 mK/mW\"\nleads = { wires = 2, each = \"0.3 ohm\" }\n",
            Chain {
                reading: volts(-3),
                supply: Supply::Fixed(1e-3),
                self_heating: heat(None),
                network: Network::Resistance { leads: two },
                ..plain
            },
        ),
        (
            "mV",
            "circuit = { current = { column = 2, reads = \"mA\" } }\n",
            Chain { reading: volts(-3), supply: Supply::Column { exponent: -3 }, ..plain },
        ),
        (
            "V",
            "circuit = { reference = \"100.02 ohm\", supply = { column = 2, reads = \"V\" } }\n",
            Chain {
                reading: volts(0),
                supply: Supply::Column { exponent: 0 },
                network: Network::Reference { ohms: 100.02, leads: None },
                ..plain
            },
        ),
        (
            "V/V",
            "circuit = { reference = \"100 ohm\" }\n",
            Chain {
                reading: Reading { signal: Signal::Ratio, exponent: 0 },
                network: Network::Reference { ohms: 100.0, leads: None },
                ..plain
            },
        ),
        (
            "V",
            "circuit = { divider = \"1 kohm\", sensor = \"high\", supply = \"5 V\", series = \"47 ohm\", parallel = \"1 Mohm\" }\n",
            Chain {
                reading: volts(0),
                supply: Supply::Fixed(5.0),
                around: Around { parallel: Some(1e6), leakage: None, series: Some(47.0) },
                network: Network::Divider {
                    divider: Divider { fixed: 1e3, sensor: Side::High, input_resistance: None },
                    leads: None,
                },
                ..plain
            },
        ),
    ] {
        assert_eq!(segment(&of(reads, &format!("{pt}{keys}")), 0).chain, want, "{keys}");
    }
    let sheet = of(
        "mV",
        &format!(
            "{pt}circuit = {{ reference = \"100 ohm\", supply = {{ column = 2, reads = \"mV\", reversed = 4 }}, reversed = 3 }}\n"
        ),
    );
    let paired = |input, how| Some(Paired { input, how });
    let own = segment(&sheet, 0);
    assert_eq!(own.inputs().collect::<Vec<_>>().len(), 4);
    assert_eq!(
        (own.paired.map(|p| p.how), own.supply_paired.map(|p| p.how)),
        (Some(Pairing::Reversed), Some(Pairing::Reversed))
    );
    let sheet = of("mV", &format!("{pt}circuit = {{ current = \"0.41 mA\", tap = 2 }}\n"));
    assert_eq!(segment(&sheet, 0).paired, paired(1, Pairing::Tap));
}

#[test]
fn thermocouples() {
    let junction =
        "[channel.j]\ncolumn = 2\nreads = \"ohm\"\nplatinum = { standard = \"IEC 60751\", r0 = \"100 ohm\" }\n";
    for (keys, temperature) in [
        ("\"ice point\"", Temperature::Fixed(0.0)),
        ("\"23.5 degC\"", Temperature::Fixed(23.5)),
        ("\"j\"", Temperature::Column),
        ("{ channel = \"j\", longest_gap = \"5 s\", between = \"last\" }", Temperature::Column),
    ] {
        let text = format!("thermocouple = {{ type = \"N\", reference = {keys} }}\n{junction}");
        let sheet = of("uV", &text);
        let want = Chain {
            reading: Reading { signal: Signal::Volts, exponent: -6 },
            temperature,
            ..Chain::new(Network::Emf, Element::Thermocouple(Thermocouple::N))
        };
        assert_eq!(segment(&sheet, 0).chain, want, "{keys}");
        assert_eq!(segment(&sheet, 0).temperature.is_some(), temperature == Temperature::Column);
    }
}

#[test]
fn classes() {
    let platinum = |keys: &str| format!("platinum = {{ r0 = \"100 ohm\", {keys} }}\n");
    let iec = |class, resistor| Tolerance::Platinum(platinum::Tolerance::iec_60751(class, resistor));
    for (reads, keys, want) in [
        (
            "ohm",
            platinum("standard = \"IEC 60751\", class = \"AA\", resistor = \"wire-wound\""),
            iec(Class::AA, Resistor::WireWound),
        ),
        // the narrower range where nothing says which
        ("ohm", platinum("standard = \"IEC 60751\", class = \"B\""), iec(Class::B, Resistor::Film)),
        (
            "ohm",
            platinum("standard = \"IEC 60751\", class = \"1/3 B\", range = [\"0 degC\", \"100 degC\"]"),
            Tolerance::Platinum(platinum::Tolerance::fraction_of_b(FractionOfB::Third, [0.0, 100.0]).unwrap()),
        ),
        (
            "ohm",
            platinum("standard = \"ASTM E1137\", class = \"A\""),
            Tolerance::Platinum(platinum::Tolerance::astm_e1137(Grade::A)),
        ),
        (
            "mV",
            "thermocouple = { type = \"K\", reference = \"ice point\", class = \"2\" }".to_string(),
            Tolerance::Thermocouple(
                thermocouple::Tolerance::iec_60584(Thermocouple::K, thermocouple::Class::Two).unwrap(),
            ),
        ),
    ] {
        let sheet = of(reads, &keys);
        assert_eq!(segment(&sheet, 0).tolerance.as_ref().map(|c| c.limits), Some(want), "{keys}");
    }
    // ASTM E1137 grade A at 100 °C: 0.13 + 0.17 (from memory)
    assert!((platinum::Tolerance::astm_e1137(Grade::A).kelvin_at_celsius(100.0).unwrap() - 0.30).abs() < 1e-12);
    assert!((platinum::Tolerance::astm_e1137(Grade::B).kelvin_at_celsius(-100.0).unwrap() - 0.67).abs() < 1e-12);
}

#[test]
fn what_is_wrong_is_said_with_its_place() {
    let head = |reads: &str| format!("[channel.t]\ncolumn = 1\nreads = \"{reads}\"\n");
    let (t, mv) = (head("ohm"), head("mV"));
    for (text, words) in [
        (
            format!("{t}‹platinum› = {{ r0 = \"100 ohm\", a = 3.9e-3, b = -5e-7, alpha = 3.85e-3 }}\n"),
            "platinum is stated in more than one way: it is a standard, or a, b and c, or alpha, delta and beta, or triple_point and a deviation function",
        ),
        (
            format!("{t}platinum = {{ r0 = \"100 ohm\", a = 3.9e-3, b = -5e-7, ‹class› = \"A\" }}\n"),
            "a class belongs to the curve of a standard: state the uncertainty of a curve of its own with its figures",
        ),
        (
            format!("{t}platinum = {{ standard = \"R100/R0 = 1.3920\", r0 = \"100 ohm\", ‹class› = \"A\" }}\n"),
            "no class of R100/R0 = 1.3920 is known here",
        ),
        (
            format!("{t}‹platinum› = {{ standard = \"IEC 60751\", r0 = \"100 ohm\", class = \"1/10 B\" }}\n"),
            "platinum.range is missing: a fraction of class B is trade usage, in no standard: state the range that the maker gives it for",
        ),
        (
            format!("{t}platinum = {{ triple_point = \"25.5 ohm\", subrange = \"tin\", deviation = ‹[1e-4]› }}\n"),
            "platinum.deviation has 1 values; expected 2",
        ),
        (
            format!("{t}‹platinum› = {{ triple_point = \"25.5 ohm\", subrange = \"tin\" }}\n"),
            "platinum.deviation is missing: subrange, as in \"zinc\", and deviation = [a, b, ...] of the certificate",
        ),
        (
            format!("{t}thermistor = {{ points = ‹[[0, 100], [25, 200], [50, 50]]› }}\n"),
            "thermistor.points: the resistances of the points must fall while their temperatures rise",
        ),
        (
            format!("{t}‹metal› = {{ r0 = \"100 ohm\" }}\n"),
            "metal.standard is missing: as in standard = \"DIN 43760\" (nickel) or \"GOST 6651-2009\" (copper)",
        ),
        (
            format!("{mv}‹thermocouple› = {{ type = \"K\" }}\n"),
            "thermocouple.reference is missing: the temperature of the reference junction: a channel, a value as \"25 degC\", or \"ice point\"",
        ),
        (
            format!("{mv}thermocouple = {{ type = \"J\", reference = \"ice point\", class = ‹\"3\"› }}\n"),
            "thermocouple.class: IEC 60584-1 has no such class for type J",
        ),
        (
            format!(
                "{mv}thermocouple = {{ type = \"J\", reference = \"ice point\" }}\n‹leads› = {{ wires = 2, each = \"1 ohm\" }}\n"
            ),
            "a thermocouple has no leads: it is read as its own voltage",
        ),
        (
            format!(
                "{}thermocouple = {{ type = \"J\", reference = \"ice point\" }}\n",
                t.replace("\"ohm\"", "‹\"ohm\"›")
            ),
            "reads is 'ohm', but a thermocouple is read in volts or counts",
        ),
        (
            format!("{t}platinum = {{ standard = \"IEC 60751\", r0 = \"100 ohm\" }}\n‹self_heating› = \"0.4 K/mW\"\n"),
            "self_heating needs the current that does it, as in circuit = { current = \"1 mA\" }, or the supply of the circuit",
        ),
        (
            format!(
                "{t}platinum = {{ standard = \"IEC 60751\", r0 = \"100 ohm\" }}\ncircuit = {{ ‹divider› = \"1 kohm\" }}\n"
            ),
            "circuit.divider turns volts into ohms, but reads is in ohms already",
        ),
        (
            format!(
                "{mv}platinum = {{ standard = \"IEC 60751\", r0 = \"100 ohm\" }}\ncircuit = {{ divider = \"1 kohm\", sensor = \"low\", supply = \"5 V\", ‹reversed› = 2 }}\n"
            ),
            "circuit.reversed is a second voltage beside that of a thermometer at a known current or in series with a reference",
        ),
        (
            format!(
                "{mv}platinum = {{ standard = \"IEC 60751\", r0 = \"100 ohm\" }}\ncircuit = {{ reference = \"100 ohm\", ‹supply› = {{ column = 2, reads = \"V\" }}, reversed = 3 }}\n"
            ),
            "circuit.supply.reversed is missing: the column of the same voltage with the current reversed",
        ),
        (
            format!("{mv}thermocouple = {{ type = \"J\", reference = \"ice point\" }}\n‹extrapolate› = true\n"),
            "channel 't': this sensor's law says nothing outside its range: it cannot be extrapolated",
        ),
    ] {
        mistakes_as(&text, &[words]);
    }
}

/// Every line of the thermometers that README shows is a key that a sheet takes.
#[test]
fn what_the_readme_shows() {
    let text = include_str!("../README.md");
    let (_, rest) = text.split_once("Other thermometers, each a key").expect("the section");
    let block = rest.split("```").nth(1).and_then(|b| b.strip_prefix("toml")).expect("a block");
    let pt = "platinum = { standard = \"IEC 60751\", r0 = \"100 ohm\" }\n";
    let mut seen = 0;
    for line in block.lines().filter(|l| !l.trim().is_empty() && !l.trim_start().starts_with('#')) {
        // a comment stands behind the closing brace or quote
        let keys = line.split("  #").next().expect("a part").split("} #").next().expect("a part").trim_end();
        let keys = if line.contains("} #") { format!("{keys}}}") } else { keys.to_string() };
        let junction = "[channel.junction]\ncolumn = 9\nreads = \"degC\"\n";
        let (reads, before, after) = match keys.split(' ').next().expect("a key") {
            "platinum" | "metal" | "thermistor" => ("ohm", String::new(), ""),
            "thermocouple" => ("mV", String::new(), junction),
            "circuit" => ("mV", pt.to_string(), ""),
            _ => ("mV", format!("{pt}circuit = {{ current = \"1 mA\" }}\n"), ""),
        };
        of(reads, &format!("{before}{keys}\n{after}"));
        seen += 1;
    }
    assert!(seen >= 15, "{seen}");
}

/// Where a thermocouple tells little, `describe` says so: type K has 0.7 µV/K left at -270 °C (NIST tables, from memory), type J
/// has 20 µV/K at its cold end.
#[test]
fn ill_conditioned_ends_are_named() {
    let words = |kind: &str| {
        let sheet = of("mV", &format!("thermocouple = {{ type = \"{kind}\", reference = \"ice point\" }}\n"));
        sheet.describe(0).join("\n")
    };
    for kind in ["E", "K", "N", "T"] {
        assert!(words(kind).contains("ill-conditioned towards -270 °C"), "{}", words(kind));
    }
    assert!(words("B").contains("ill-conditioned towards 0 °C") && words("B").contains("42.13 °C"), "{}", words("B"));
    for kind in ["J", "R", "S"] {
        assert!(!words(kind).contains("ill-conditioned towards 1"), "{}", words(kind));
    }
    assert!(!words("J").contains("ill-conditioned"), "{}", words("J"));
}

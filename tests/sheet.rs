//! Measurement sheets: every key into the right chain, and every mistake told where it is.
//!
//! Expected chains are built in Rust from the same constants; expected places are marked in the sheets themselves with ‹ ›.
#![cfg(feature = "files")]

#[path = "support/sheets.rs"]
mod sheets;

use ohmwright::chain::{Chain, Element, Limit, Network, Output, Reading, Signal, Supply, Temperature, Word};
use ohmwright::measurement::{Between, Channel, ColumnRef, Segment, Source, Uncertainty, ZeroSource};
use ohmwright::platinum::IEC_60751;
use ohmwright::sheet::{Decimal, Encoding, Separator, Sheet};
use ohmwright::signal::{
    Amplifier, Arm, Bridge, COPPER_OHM_METRES, Coding, Conductor, Converter, Difference, Divider, Driven, Each,
    FullScale, Leads, Pair, Reference, Side, Wires,
};
use ohmwright::strain::{Expansion, Gauge, ThermalOutput, Zero, ZeroMeaning, ZeroReading};
use ohmwright::thermistor::{Beta, Law, SteinhartHart};
use sheets::{E, chain, gauge, gauge_chain, mistakes_as, read, same, segment, with_bridge, with_gauge};

const NU: Arm = Arm::Active { factor: -1.0, driven: Driven::Across };

#[test]
fn gauge_keys() {
    assert_eq!(chain(&gauge("")), gauge_chain());
    let full = "[channel.g]\ncolumn = 3\nreads = \"uV/V\"\noutput = \"%\"\ndecimals = 4\nlargest_strain = \"20 %\"\n\
        gauge = { resistance = \"0.12 kohm\", gauge_factor = \"2.1 ± 1 %\", slope = \"1.0 %/100K\", reference = \"25 degC\" }\n\
        bridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }\ntemperature = \"293.15 K\"\n";
    let sheet = read(full);
    let want = Chain {
        reading: Reading { signal: Signal::Ratio, exponent: -6 },
        temperature: Temperature::Fixed(20.0),
        output: Output::Strain { exponent: 2 },
        ..Chain::new(
            Network::Bridge(Bridge::one_gauge(120.0)),
            Element::Gauge {
                gauge: Gauge { slope: 1e-4, reference_celsius: 25.0, ..Gauge::new(2.1) },
                zero: Zero::default(),
                limit: 0.2,
            },
        )
    };
    assert_eq!(segment(&sheet, 0).chain, want);
    let channel = &sheet.measurement.channels[0];
    assert_eq!((channel.decimals, channel.unit.as_str(), channel.show), (Some(4), "%", true));
    assert_eq!(sheet.measurement.inputs, [ColumnRef::Number(3)]);
    assert_eq!(segment(&sheet, 0).reads, "uV/V");
    // outputs
    for (text, output) in [
        ("microstrain", Output::Strain { exponent: 6 }),
        ("µm/m", Output::Strain { exponent: 6 }),
        ("um/m", Output::Strain { exponent: 6 }),
        ("με", Output::Strain { exponent: 6 }),
        ("strain", Output::Strain { exponent: 0 }),
        ("shear microstrain", Output::ShearStrain { exponent: 6 }),
    ] {
        assert_eq!(chain(&gauge(&format!("output = \"{text}\""))).output, output, "{text}");
    }
}

#[test]
fn bridge_keys() {
    let text = "[channel.g]\ncolumn = \"CH01\"\nreads = \"mV\"\ngauge = { resistance = \"350 ohm\", gauge_factor = 2.08 }\n\
        bridge = { arms = [\"e\", \"-nu e\", \"-1.0097 e\", \"dummy\"], poisson = 0.285, supply = \"2.500 V ± 0.1 %\", \
        resistances = [\"350 Ω\", \"351 ohm\", \"352 ohm\", \"353 ohm\"], input_resistance = \"220 kohm\", \
        supply_leads = \"2.4 ohm\", signal_leads = [\"2.5 ohm\", \"2.6 ohm\"], sensed = true }\n";
    let bridge = Bridge {
        resistances: [350.0, 351.0, 352.0, 353.0],
        arms: [E, NU, Arm::Active { factor: -1.0097, driven: Driven::Along }, Arm::Dummy],
        poisson: 0.285,
        leads: None,
        balanced: false,
        supply_leads: Pair::Same(2.4),
        signal_leads: Pair::Own([2.5, 2.6]),
        sensed: true,
        input_resistance: Some(220e3),
        shunt: None,
    };
    let want = Chain {
        reading: Reading { signal: Signal::Volts, exponent: -3 },
        supply: Supply::Fixed(2.5),
        ..Chain::new(Network::Bridge(bridge), gauge_chain().element)
    };
    assert_eq!(chain(text), want);
    // arms, one spelling each
    for (text, arm) in [
        ("e", E),
        ("-e", Arm::Active { factor: -1.0, driven: Driven::Along }),
        ("nu e", Arm::Active { factor: 1.0, driven: Driven::Across }),
        ("-nu e", NU),
        ("2 nu e", Arm::Active { factor: 2.0, driven: Driven::Across }),
        ("0.5e", Arm::Active { factor: 0.5, driven: Driven::Along }),
        ("dummy", Arm::Dummy),
        ("0", Arm::Fixed),
    ] {
        let text = gauge("").replace("[\"e\", \"0\",", &format!("[\"e\", \"{text}\","));
        let text = text.replace("\"0\"] }", "\"0\"], poisson = 0.3 }");
        let Network::Bridge(bridge) = (match text.contains("\"e\", \"e\"") {
            // equal neighbours would be blind
            true => chain(&text.replace("\"e\", \"e\"", "\"0\", \"e\"")),
            false => chain(&text),
        })
        .network
        else {
            panic!("no bridge")
        };
        assert_eq!(bridge.arms[1], arm);
    }
    // a supply column
    let column = text.replace("\"2.500 V ± 0.1 %\"", "{ column = \"V_ex\", reads = \"mV\" }");
    let sheet = read(&column);
    assert_eq!(segment(&sheet, 0).chain.supply, Supply::Column { exponent: -3 });
    assert_eq!(sheet.measurement.inputs, [ColumnRef::from("CH01"), ColumnRef::from("V_ex")]);
    assert_eq!((segment(&sheet, 0).reading, segment(&sheet, 0).supply), (0, Some(1)));
}

#[test]
fn lead_keys() {
    let with = |wires, each, balanced| {
        with_bridge(gauge_chain(), |b| {
            b.leads = Some(Leads { wires, each });
            b.balanced = balanced;
        })
    };
    let ohms = |r| same(Conductor::Ohms(r));
    assert_eq!(chain(&gauge("leads = { wires = 3, each = \"1.85 ohm\" }")), with(Wires::Three, ohms(1.85), false));
    assert_eq!(
        chain(&gauge("leads = { wires = 2, each = \"1.85 ohm\" }")),
        with(Wires::Two, ohms(1.85), true),
        "balanced with the leads in place unless resistances are stated"
    );
    assert_eq!(
        chain(&gauge("leads = { wires = 2, each = \"1 ohm\", balanced = false }")),
        with(Wires::Two, ohms(1.0), false)
    );
    let stated = gauge("leads = { wires = 2, each = \"1 ohm\" }")
        .replace("\"0\"] }", "\"0\"], resistances = [\"350 ohm\", \"350 ohm\", \"350 ohm\", \"350 ohm\"] }");
    assert_eq!(chain(&stated), with(Wires::Two, ohms(1.0), false));
    let own = |all: [f64; 3]| Each::Own(all.map(Conductor::Ohms));
    assert_eq!(
        chain(&gauge("leads = { wires = 3, each = [\"1 ohm\", \"2 ohm\", \"3 ohm\"] }")),
        with(Wires::Three, own([1.0, 2.0, 3.0]), false)
    );
    let run = |ohm_metres| same(Conductor::Run { metres: 12.4, square_millimetres: 0.25, ohm_metres });
    for material in ["", ", material = \"copper\""] {
        let text = gauge(&format!("leads = {{ wires = 3, length = \"12.4 m\", area = \"0.25 mm²\"{material} }}"));
        assert_eq!(chain(&text), with(Wires::Three, run(COPPER_OHM_METRES), false));
    }
    let text =
        gauge("leads = { wires = 3, length = \"1240 cm\", area = \"0.25 mm2\", resistivity = \"0.0282 ohm mm2/m\" }");
    assert_eq!(chain(&text), with(Wires::Three, run(0.0282e-6), false));
}

#[test]
fn converter_and_amplifier_keys() {
    let counts = |converter: &str, amplifier: &str| {
        gauge("")
            .replace("\"mV/V\"", "\"count\"")
            .replace("\"0\"] }", "\"0\"], supply = \"2.5 V\" }")
            .replace("gauge =", &format!("converter = {{ {converter} }}\n{amplifier}\ngauge ="))
    };
    let want = |converter, amplifier| Chain {
        reading: Reading { signal: Signal::Count, exponent: 0 },
        converter: Some(converter),
        amplifier,
        supply: Supply::Fixed(2.5),
        ..gauge_chain()
    };
    let volts = FullScale::Volts(2.5);
    assert_eq!(
        chain(&counts("bits = 24, full_scale = \"±2.5 V\", coding = \"signed\"", "")),
        want(Converter { bits: 24, full_scale: volts, coding: Coding::Signed }, Amplifier::None)
    );
    assert_eq!(
        chain(&counts(
            "bits = 16, full_scale = \"2500 mV\", coding = \"offset\"",
            "amplifier = { gain = \"250 ± 0.05 %\" }"
        )),
        want(
            Converter { bits: 16, full_scale: volts, coding: Coding::Offset },
            Amplifier::Gain { gain: 250.0, offset: 0.0 }
        )
    );
    assert_eq!(
        chain(&counts(
            "bits = 12, full_scale = \"supply\", coding = \"unsigned\"",
            "amplifier = { gain = 250, offset = \"-3 mV\" }"
        )),
        want(
            Converter { bits: 12, full_scale: FullScale::Supply, coding: Coding::Unsigned },
            Amplifier::Gain { gain: 250.0, offset: -0.003 }
        )
    );
    let difference = |open_loop_gain, reference, offset| Amplifier::Difference {
        circuit: Difference { input: [1500.0, 1501.0], feedback: [330e3, 331e3], open_loop_gain, reference },
        offset,
    };
    let resistors = "input = [\"1.5 kohm\", \"1.501 kohm\"], feedback = [\"330 kohm\", \"331 kohm\"]";
    for (more, behind, amplifier) in [
        ("", "", difference(None, Reference::Negative, 0.0)),
        (", open_loop_gain = 1e5", "", difference(Some(1e5), Reference::Negative, 0.0)),
        (", reference = \"centre\"", ", offset = \"1 mV\"", difference(None, Reference::Centre, 0.001)),
        (", reference = \"negative\"", "", difference(None, Reference::Negative, 0.0)),
    ] {
        let text = format!("amplifier = {{ difference = {{ {resistors}{more} }}{behind} }}");
        let text = counts("bits = 24, full_scale = \"±2.5 V\", coding = \"signed\"", &text);
        assert_eq!(chain(&text), want(Converter { bits: 24, full_scale: volts, coding: Coding::Signed }, amplifier));
    }
}

#[test]
fn thermal_keys() {
    let text = gauge(
        "thermal_output = { coefficients = [-24.0, 1.90, -0.0400, 2.50e-4], in = \"degC\", gauge_factor = 2.01, range = [\"-20 degC\", \"80 degC\"] }\n\
         expansion = { specimen = \"11.7e-6/K\", data = \"12.1 ppm/K\" }\n\
         temperature = \"21 degC ± 0.5 K\"\nzero = { at = \"0.0312 mV/V\", temperature = \"20 degC\" }",
    );
    let sheet = read(&text);
    let mut want = with_gauge(gauge_chain(), |gauge, zero, _| {
        gauge.thermal_output = Some(ThermalOutput {
            coefficients: [-24.0, 1.90, -0.04, 2.5e-4, 0.0, 0.0, 0.0],
            fahrenheit: false,
            gauge_factor: 2.01,
            range_celsius: [-20.0, 80.0],
        });
        gauge.expansion = Some(Expansion { specimen: 11.7e-6, data: 12.1e-6 });
        *zero = Zero {
            reading: Some(ZeroReading::AsRecorded(0.0312)),
            meaning: ZeroMeaning::Strain,
            celsius: Some(20.0),
            ..Zero::default()
        };
    });
    want.temperature = Temperature::Fixed(21.0);
    assert_eq!(segment(&sheet, 0).chain, want);
    let stated = &segment(&sheet, 0).stated;
    assert_eq!(stated.len(), 1);
    assert_eq!(
        (stated[0].key.as_str(), stated[0].uncertainty),
        ("temperature", Uncertainty::Rectangular { half_width: 0.5 })
    );
    // defaults: degC, 2.0, every temperature
    let text = gauge(
        "thermal_output = { coefficients = [1] }\ntemperature = \"21 degC\"\nzero = { temperature = \"20 degC\" }",
    );
    let sheet = read(&text);
    let Element::Gauge { gauge: g, zero, .. } = segment(&sheet, 0).chain.element else { panic!() };
    let to = g.thermal_output.unwrap();
    assert_eq!((to.fahrenheit, to.gauge_factor), (false, 2.0));
    assert_eq!(to.range_celsius, [f64::NEG_INFINITY, f64::INFINITY]);
    assert_eq!((zero.reading, zero.celsius), (None, Some(20.0)));
    assert!(sheet.assumed[0].iter().any(|a| a == "thermal_output: polynomial in degC"), "{:?}", sheet.assumed);
    assert!(sheet.assumed[0].iter().any(|a| a == "thermal_output: taken with a gauge factor of 2.0"));
    let fahrenheit = text.replace("[1]", "[1], in = \"degF\"");
    let Element::Gauge { gauge: g, .. } = chain(&fahrenheit).element else { panic!() };
    assert!(g.thermal_output.unwrap().fahrenheit);
}

#[test]
fn zero_keys() {
    let zero = |text: &str| {
        let sheet = read(&gauge(&format!("zero = {text}")));
        let segment = segment(&sheet, 0);
        let Element::Gauge { zero, .. } = segment.chain.element else { panic!() };
        (zero, segment.zero.clone(), segment.zero_temperature_stated)
    };
    let recorded = |r| Some(ZeroReading::AsRecorded(r));
    let (z, source, stated) = zero("{ at = \"31.2 uV/V\" }");
    assert_eq!(
        (z.reading, z.meaning, z.celsius, source, stated),
        (recorded(0.0312), ZeroMeaning::Strain, None, ZeroSource::Stated, false)
    );
    assert_eq!(zero("{ at = \"1 mV/V\", from = \"resistance\" }").0.meaning, ZeroMeaning::Resistance);
    assert_eq!(zero("{ at = \"1 mV/V\", from = \"completion\" }").0.meaning, ZeroMeaning::Completion);
    let (z, source, stated) = zero("{ rows = 200, temperature = \"21 degC\" }");
    assert_eq!((z.reading, z.celsius, source, stated), (None, Some(21.0), ZeroSource::Rows(200), true));
    for text in [
        "{ from = \"2026-05-09T06:30:05Z\", to = \"2026-05-09T06:30:25Z\", meaning = \"resistance\" }",
        "{ from = 2026-05-09T06:30:05Z, to = 2026-05-09T06:30:25Z, meaning = \"resistance\" }",
    ] {
        let (z, source, _) = zero(text);
        let ZeroSource::Window { from, to } = source else { panic!() };
        assert_eq!((from.text.as_str(), to.text.as_str()), ("2026-05-09T06:30:05Z", "2026-05-09T06:30:25Z"));
        assert_eq!(z.meaning, ZeroMeaning::Resistance);
    }
    // a ratio beside readings in volts
    let volts = gauge("zero = { at = \"0.5 mV/V\" }")
        .replace("\"mV/V\"\ng", "\"mV\"\ng")
        .replace("\"0\"] }", "\"0\"], supply = \"2 V\" }");
    let Element::Gauge { zero: z, .. } = chain(&volts).element else { panic!() };
    assert_eq!(z.reading, Some(ZeroReading::Ratio(0.0005)));
    let Element::Gauge { zero: z, .. } = chain(&volts.replace("0.5 mV/V", "0.5 V")).element else { panic!() };
    assert_eq!(z.reading, recorded(500.0), "in the unit of the readings");
}

#[test]
fn thermometer_keys() {
    let ohms = |sensor: &str| format!("[channel.t]\ncolumn = 1\nreads = \"ohm\"\n{sensor}\n");
    let plain = |element, leads| Chain::new(Network::Resistance { leads }, element);
    let iec = Element::Platinum(IEC_60751.with_r0(100.0));
    let pt100 = "platinum = { standard = \"IEC 60751\", r0 = \"100 ohm\", class = \"A\" }";
    assert_eq!(chain(&ohms(pt100)), plain(iec, None));
    for (leads, want) in [
        ("wires = 2, each = \"0.35 ohm\"", Leads { wires: Wires::Two, each: same(Conductor::Ohms(0.35)) }),
        ("wires = 4", Leads { wires: Wires::Four, each: same(Conductor::Ohms(0.0)) }),
        (
            "wires = 3, each = [\"0.35 ohm\", \"0.30 ohm\"]",
            Leads { wires: Wires::Three, each: Each::Own([0.35, 0.30, 0.0].map(Conductor::Ohms)) },
        ),
    ] {
        assert_eq!(chain(&ohms(&format!("{pt100}\nleads = {{ {leads} }}"))), plain(iec, Some(want)));
    }
    let own = IEC_60751.with_r0(1000.0);
    let own =
        ohmwright::platinum::Coefficients { a: 3.9e-3, b: -5.8e-7, c: -4.2e-12, range_celsius: [-50.0, 200.0], ..own };
    let text =
        "platinum = { r0 = \"1 kohm\", a = 3.9e-3, b = -5.8e-7, c = -4.2e-12, range = [\"-50 degC\", \"200 degC\"] }";
    assert_eq!(chain(&ohms(text)), plain(Element::Platinum(own), None));
    for (output, want) in [("K", Output::Kelvin), ("°C", Output::Celsius), ("degF", Output::Fahrenheit)] {
        assert_eq!(chain(&ohms(&format!("{pt100}\noutput = \"{output}\""))).output, want);
    }
    let beta = Beta { r25_ohms: 1e4, beta_kelvin: 3950.0, range_celsius: [-50.0, 150.0] };
    for text in ["beta = \"3950 K\"", "beta = 3950"] {
        let text = ohms(&format!("thermistor = {{ r25 = \"10 kohm\", {text} }}"));
        assert_eq!(chain(&text), plain(Element::Thermistor(Law::Beta(beta)), None));
        assert!(read(&text).assumed[0].iter().any(|a| a.contains("range -50 °C to 150 °C")));
    }
    let law = SteinhartHart { a: 1.1e-3, b: 2.4e-4, c: 7.5e-8, range_celsius: [-40.0, 125.0] };
    let text = ohms("thermistor = { steinhart_hart = [1.1e-3, 2.4e-4, 7.5e-8], range = [\"-40 degC\", \"125 degC\"] }");
    assert_eq!(chain(&text), plain(Element::Thermistor(Law::SteinhartHart(law)), None));
    // in a divider, at a ratiometric converter, with limits
    let text = "[channel.t]\ncolumn = 1\nreads = \"count\"\nextrapolate = true\nthermistor = { r25 = \"10 kohm\", beta = 3950 }\n\
        converter = { bits = 12, full_scale = \"supply\", coding = \"unsigned\" }\n\
        circuit = { divider = \"10 kohm\", sensor = \"high\", supply = \"3.3 V\", input_resistance = \"1 Mohm\" }\n\
        limits = { low = \"5 count\", below = \"short\", high = \"4090 count\", above = \"open\" }\n\
        leads = { wires = 2, each = \"1 ohm\" }\n";
    let divider = Divider { fixed: 1e4, sensor: Side::High, input_resistance: Some(1e6) };
    let leads = Some(Leads { wires: Wires::Two, each: same(Conductor::Ohms(1.0)) });
    let want = Chain {
        reading: Reading { signal: Signal::Count, exponent: 0 },
        converter: Some(Converter { bits: 12, full_scale: FullScale::Supply, coding: Coding::Unsigned }),
        supply: Supply::Fixed(3.3),
        extrapolate: true,
        low_limit: Some(Limit { at: 5.0, word: Word::Short }),
        high_limit: Some(Limit { at: 4090.0, word: Word::Open }),
        ..Chain::new(Network::Divider { divider, leads }, Element::Thermistor(Law::Beta(beta)))
    };
    assert_eq!(chain(text), want);
    // a current source, and limits in the unit of the readings
    let text = "[channel.t]\ncolumn = 1\nreads = \"mV\"\nplatinum = { standard = \"IEC 60751:2008\", r0 = \"100 ohm\" }\n\
        circuit = { current = \"1 mA\" }\nlimits = { low = \"0.01 V\", high = \"300 mV\", above = \"saturated\" }\n";
    let want = Chain {
        reading: Reading { signal: Signal::Volts, exponent: -3 },
        supply: Supply::Fixed(0.001),
        low_limit: Some(Limit { at: 10.0, word: Word::OutOfRange }),
        high_limit: Some(Limit { at: 300.0, word: Word::Saturated }),
        ..plain(iec, None)
    };
    assert_eq!(chain(text), want);
    // in a bridge
    let text = "[channel.t]\ncolumn = 1\nreads = \"V/V\"\nplatinum = { standard = \"IEC 60751\", r0 = \"100 ohm\" }\n\
        bridge = { arms = [\"sensor\", \"0\", \"0\", \"0\"] }\n";
    let want = Chain {
        reading: Reading { signal: Signal::Ratio, exponent: 0 },
        ..Chain::new(Network::Bridge(Bridge::one_gauge(100.0)), iec)
    };
    assert_eq!(chain(text), want);
}

#[test]
fn readings_that_are_the_quantity() {
    let direct = |reads: &str, output: &str| {
        let text = format!("[channel.d]\ncolumn = 1\nreads = \"{reads}\"\n{output}\n");
        let Element::Direct { scale, offset } = chain(&text).element else { panic!() };
        (scale, offset, read(&text).measurement.channels[0].unit.clone())
    };
    assert_eq!(direct("mA", ""), (1.0, 0.0, "mA".into()));
    assert_eq!(direct("degC", ""), (1.0, 0.0, "degC".into()));
    assert_eq!(direct("mV", "output = \"V\""), (0.001, 0.0, "V".into()));
    let (scale, offset, _) = direct("K", "output = \"degC\"");
    assert_eq!((scale, offset), (1.0, -273.15));
    let (scale, offset, _) = direct("degF", "output = \"degC\"");
    // 212 °F and 32 °F by definition
    assert!((scale * 212.0 + offset - 100.0).abs() < 1e-12 && (scale * 32.0 + offset).abs() < 1e-12);
    let sheet = read("[channel.d]\ncolumn = 1\nreads = \"mV\"\nshow = false\nuncertainty = \"2.2 uV (k=1)\"\n");
    assert!(!sheet.measurement.channels[0].show);
    let stated = &segment(&sheet, 0).stated[0];
    assert_eq!(stated.uncertainty, Uncertainty::Expanded { expanded: 2.2e-6, coverage_factor: 1.0 });
}

#[test]
fn channels_of_channels() {
    let two = "[channel.a]\ncolumn = 1\nreads = \"microstrain\"\n[channel.b]\ncolumn = 2\nreads = \"strain\"\n";
    let source = |text: &str, i: usize| {
        let channel = read(text).measurement.channels[i].clone();
        (channel.source, channel.unit)
    };
    let text = format!("{two}[channel.c]\ncombine = {{ a = 0.5, b = -0.5 }}\n");
    // 1 strain = 1e6 microstrain
    assert_eq!(source(&text, 2), (Source::Combination(vec![(0, 0.5), (1, -0.5e6)]), "microstrain".into()));
    let text = format!("{two}[channel.c]\ncombine = {{ a = 1, b = 1 }}\noutput = \"strain\"\n");
    assert_eq!(source(&text, 2), (Source::Combination(vec![(0, 1e-6), (1, 1.0)]), "strain".into()));
    let text = format!("{two}[channel.s]\nof = \"a\"\nmaterial = {{ modulus = \"205 GPa ± 2 %\", poisson = 0.29 }}\n");
    // 205e9 Pa · 1e-6 = 0.205 MPa
    assert_eq!(source(&text, 2), (Source::Stress { of: 0, loading: None, bar: None, factor: 0.205 }, "MPa".into()));
    let stated = read(&text).measurement.channels[2].stated.clone();
    assert_eq!((stated[0].key.as_str(), stated[0].value), ("material.modulus", 205e9));
    let text = format!("{two}[channel.s]\nof = \"b\"\noutput = \"GPa\"\nmaterial = {{ modulus = \"70 GPa\" }}\n");
    assert_eq!(source(&text, 2), (Source::Stress { of: 1, loading: None, bar: None, factor: 70.0 }, "GPa".into()));
    // temperatures: a difference in kelvin, a mean in their own unit; a combination of combinations
    let temperatures = "[channel.t]\ncolumn = 1\nreads = \"degC\"\n[channel.u]\ncolumn = 2\nreads = \"degC\"\n";
    let text = format!(
        "{temperatures}[channel.d]\ncombine = {{ t = 1, u = -1 }}\n[channel.m]\ncombine = {{ t = 0.5, u = 0.5 }}\n[channel.dd]\ncombine = {{ d = 2 }}\n[channel.x]\ncombine = {{ m = 1, t = -1 }}\n"
    );
    assert_eq!(source(&text, 2), (Source::Combination(vec![(0, 1.0), (1, -1.0)]), "K".into()));
    assert_eq!(source(&text, 3), (Source::Combination(vec![(0, 0.5), (1, 0.5)]), "degC".into()));
    assert_eq!(source(&text, 4), (Source::Combination(vec![(2, 2.0)]), "K".into()));
    assert_eq!(source(&text, 5), (Source::Combination(vec![(3, 1.0), (0, -1.0)]), "K".into()));
    // Fahrenheit degrees differ by 5/9 K
    let text = "[channel.t]\ncolumn = 1\nreads = \"degF\"\n[channel.u]\ncolumn = 2\nreads = \"degF\"\n[channel.d]\ncombine = { t = 1, u = -1 }\n";
    assert_eq!(source(text, 2).0, Source::Combination(vec![(0, 5.0 / 9.0), (1, -5.0 / 9.0)]));
}

#[test]
fn temperature_from_a_channel() {
    let slope = gauge("").replace("2.08 }", "2.08, slope = \"1 %/100K\" }");
    let deck =
        "[channel.deck]\ncolumn = \"R\"\nreads = \"ohm\"\nplatinum = { standard = \"IEC 60751\", r0 = \"100 ohm\" }\n";
    let side = |temperature: &str, output: &str| {
        let sheet = read(&format!("{slope}temperature = {temperature}\n{deck}{output}"));
        let segment = segment(&sheet, 0);
        assert_eq!(segment.chain.temperature, Temperature::Column);
        segment.temperature.clone().unwrap()
    };
    let s = side("{ channel = \"deck\", longest_gap = \"2 min\", between = \"last\" }", "");
    assert_eq!(
        (s.channel, s.between, s.longest_gap, s.to_celsius, s.name.as_str()),
        (1, Between::Last, 120.0, (1.0, 0.0), "deck")
    );
    let s = side("{ channel = \"deck\" }", "output = \"K\"\n");
    assert_eq!((s.between, s.longest_gap, s.to_celsius), (Between::Line, 60.0, (1.0, -273.15)));
    let s = side("\"deck\"", "output = \"degF\"\n");
    assert_eq!((s.between, s.longest_gap), (Between::Line, 60.0));
    let (scale, offset) = s.to_celsius;
    assert!((scale * 212.0 + offset - 100.0).abs() < 1e-12);
    // a channel may be named like a number
    let text = format!("{slope}temperature = \"1st\"\n{}", deck.replace("channel.deck", "channel.1st"));
    assert_eq!(segment(&read(&text), 0).temperature.as_ref().unwrap().name, "1st");
}

#[test]
fn uncertainties_and_shared() {
    let text = "[channel.g]\ncolumn = 1\nreads = \"mV\"\n\
        gauge = { resistance = \"350.0(2) ohm\", gauge_factor = \"2.08 ± 0.5 %\" }\n\
        bridge = { arms = [\"e\", \"0\", \"0\", \"0\"], supply = \"2.5 V +- 1 mV (k=2)\", resistances = [\"350 ohm\", \"350 ohm +/- 0.1 %\", \"350 ohm\", \"350 ohm\"] }\n\
        leads = { wires = 3, each = \"1 ohm ± 0.1 ohm\" }\n\
        shared = [\"gauge.gauge_factor\", \"bridge.supply\"]\n";
    let sheet = read(text);
    let stated: Vec<(&str, f64, Uncertainty)> =
        segment(&sheet, 0).stated.iter().map(|s| (s.key.as_str(), s.value, s.uncertainty)).collect();
    assert_eq!(
        stated,
        [
            ("gauge.resistance", 350.0, Uncertainty::Standard { standard: 0.2 }),
            ("gauge.gauge_factor", 2.08, Uncertainty::Rectangular { half_width: 0.005 * 2.08 }),
            ("bridge.resistances[2]", 350.0, Uncertainty::Rectangular { half_width: 0.001 * 350.0 }),
            ("bridge.supply", 2.5, Uncertainty::Expanded { expanded: 0.001, coverage_factor: 2.0 }),
            ("leads.each", 1.0, Uncertainty::Rectangular { half_width: 0.1 }),
        ]
    );
    assert_eq!(sheet.measurement.channels[0].shared, ["gauge.gauge_factor", "bridge.supply"]);
}

#[test]
fn recording_keys() {
    let text = "title = \"Run 3\"\n[recording]\ntime = [\"date\", \"clock\"]\ntime_format = \"day.month.year hour:minute:second\"\n\
        time_zone = \"Europe/Berlin\"\nseparator = \";\"\ndecimal = \",\"\nencoding = \"Windows-1252\"\nnames_line = 1\nunits_line = 2\n\
        first_line = 3\nmissing = [\"-9999\", \"NaN\", -8888, 7999.5]\nsaturated = \"OVER\"\ncomment = \"%\"\nkeep = [\"load step\", 4]\n\
        [channel.d]\ncolumn = 1\nreads = \"mV\"\n";
    let sheet = read(text);
    let l = &sheet.layout;
    assert_eq!(sheet.measurement.title, "Run 3");
    assert_eq!(l.time, [ColumnRef::from("date"), ColumnRef::from("clock")]);
    assert_eq!(l.time_format.as_deref(), Some("day.month.year hour:minute:second"));
    assert_eq!(l.time_zone.as_deref(), Some("Europe/Berlin"));
    assert_eq!(
        (l.separator, l.decimal, l.encoding),
        (Some(Separator::Semicolon), Some(Decimal::Comma), Some(Encoding::Windows1252))
    );
    assert_eq!((l.names_line, l.units_line, l.first_line), (Some(1), Some(2), Some(3)));
    assert_eq!(l.missing, ["-9999", "NaN", "-8888", "7999.5"]);
    assert_eq!((l.saturated.as_slice(), l.comment.as_deref()), (&["OVER".to_string()][..], Some("%")));
    assert_eq!(sheet.keep, [ColumnRef::from("load step"), ColumnRef::from(4)]);
    let sheet =
        read("[recording]\ninterval = \"20 ms\"\nseparator = \"tab\"\n[channel.d]\ncolumn = 1\nreads = \"mV\"\n");
    assert_eq!((sheet.layout.interval, sheet.layout.separator), (Some(0.02), Some(Separator::Tab)));
}

#[test]
fn common_keys_merge_at_every_depth() {
    let common = "[common.girder]\nreads = \"count\"\ndecimals = 1\nshow = false\ngauge = { resistance = \"350 ohm\", gauge_factor = 2.08, slope = \"1 %/100K\", reference = \"24 degC\" }\n\
        bridge = { arms = [\"e\", \"0\", \"0\", \"0\"], supply = { column = \"V1\", reads = \"V\" } }\n\
        converter = { bits = 24, full_scale = \"±2.5 V\", coding = \"signed\" }\n\
        amplifier = { difference = { input = [\"1 kohm\", \"1 kohm\"], feedback = [\"99 kohm\", \"99 kohm\"], open_loop_gain = 1e5 } }\n\
        leads = { wires = 3, area = \"0.25 mm2\", material = \"copper\" }\ntemperature = \"21 degC\"\nzero = { rows = 200, from = \"resistance\" }\n";
    let text = format!(
        "{common}[channel.g]\nlike = \"girder\"\ncolumn = \"CH01\"\nshow = true\nleads = {{ length = \"12.4 m\" }}\n\
         [channel.h]\nlike = \"girder\"\ncolumn = \"CH02\"\ngauge.gauge_factor = 2.11\nbridge.supply.column = \"V2\"\n\
         amplifier.difference.open_loop_gain = 2e5\nleads = {{ each = \"1 ohm\" }}\nzero.at = \"0 mV/V\"\n"
    );
    let sheet = read(&text);
    let (g, h) = (segment(&sheet, 0), segment(&sheet, 1));
    let channels: Vec<(&str, Option<u8>, bool)> =
        sheet.measurement.channels.iter().map(|c: &Channel| (c.name.as_str(), c.decimals, c.show)).collect();
    assert_eq!(channels, [("g", Some(1), true), ("h", Some(1), false)]);
    let gauge_of = |s: &Segment| match s.chain.element {
        Element::Gauge { gauge, zero, .. } => (gauge, zero),
        _ => panic!(),
    };
    let want = Gauge { slope: 1e-4, reference_celsius: 24.0, ..Gauge::new(2.08) };
    assert_eq!(gauge_of(g).0, want);
    assert_eq!(gauge_of(h).0, Gauge { factor: 2.11, ..want });
    let leads_of = |s: &Segment| match s.chain.network {
        Network::Bridge(b) => b.leads.unwrap(),
        _ => panic!(),
    };
    let run = Conductor::Run { metres: 12.4, square_millimetres: 0.25, ohm_metres: COPPER_OHM_METRES };
    assert_eq!(leads_of(g), Leads { wires: Wires::Three, each: same(run) });
    // its own way of saying it replaces the common one: each instead of area and material, at instead of rows
    assert_eq!(leads_of(h), Leads { wires: Wires::Three, each: same(Conductor::Ohms(1.0)) });
    assert_eq!((&g.zero, gauge_of(g).1.meaning), (&ZeroSource::Rows(200), ZeroMeaning::Resistance));
    assert_eq!((&h.zero, gauge_of(h).1.meaning), (&ZeroSource::Stated, ZeroMeaning::Resistance));
    assert_eq!(gauge_of(h).1.reading, Some(ZeroReading::Ratio(0.0)));
    let inputs = &sheet.measurement.inputs;
    assert_eq!(
        (&inputs[g.supply.unwrap()], &inputs[h.supply.unwrap()]),
        (&ColumnRef::from("V1"), &ColumnRef::from("V2"))
    );
    let gain = |s: &Segment| match s.chain.amplifier {
        Amplifier::Difference { circuit, .. } => circuit.open_loop_gain,
        _ => panic!(),
    };
    assert_eq!((gain(g), gain(h)), (Some(1e5), Some(2e5)));
}

#[test]
fn changes_go_on_from_one_another() {
    let text = gauge(
        "[[channel.g.change]]\nfrom = \"2026-03-12T10:00:00Z\"\ngauge = { gauge_factor = 2.11 }\n\
         [[channel.g.change]]\nfrom = 2026-03-12T11:00:00Z\ncolumn = \"CH02\"\nleads = { wires = 3, each = \"1 ohm\" }\n",
    );
    let sheet = read(&text);
    let segments = sheet.measurement.channels[0].segments().unwrap();
    assert_eq!(segments.len(), 3);
    let froms: Vec<Option<&str>> = segments.iter().map(|s| s.from.as_ref().map(|m| m.text.as_str())).collect();
    assert_eq!(froms, [None, Some("2026-03-12T10:00:00Z"), Some("2026-03-12T11:00:00Z")]);
    let first = with_gauge(gauge_chain(), |g, _, _| g.factor = 2.11);
    assert_eq!(segments[1].chain, first);
    // from this moment on: the second change keeps what the first one brought
    let leads = Some(Leads { wires: Wires::Three, each: same(Conductor::Ohms(1.0)) });
    assert_eq!(segments[2].chain, with_bridge(first, |b| b.leads = leads));
    assert_eq!((segments[0].reading, segments[2].reading), (0, 1));
}

#[test]
fn byte_order_mark_and_line_ends() {
    let unix = gauge("");
    let want = read(&unix).measurement;
    for text in
        [format!("\u{feff}{unix}"), unix.replace('\n', "\r\n"), format!("\u{feff}{}", unix.replace('\n', "\r\n"))]
    {
        assert_eq!(read(&text).measurement, want);
    }
    // columns are counted in characters
    mistakes_as(
        "[channel.d]\ncolumn = 1\nreads = \"mV\"\nlimits = { low = \"1 µV\", high = ‹\"2 Ω\"› }\n",
        &[
            "limits.high: value '2 Ω': 'Ω' is the unit of a resistance (ohm, kohm, Mohm); expected a voltage (V, mV, uV)",
        ],
    );
    // places do not move
    mistakes_as(
        "\u{feff}[channel.g]\ncolumn = 1\nreads = ‹\"mVV\"›\n",
        &["reads = 'mVV' is no unit that a recording can have; did you mean 'mV'?"],
    );
    mistakes_as(
        "[channel.g]\r\ncolumn = 1\r\nreads = ‹\"mVV\"›\r\n",
        &["reads = 'mVV' is no unit that a recording can have; did you mean 'mV'?"],
    );
}

/// A gauge whose lines may be replaced: (key, line), or further lines.
#[track_caller]
fn gauge_mistake(replace: &str, by: &str, messages: &[&str]) {
    let text = gauge("");
    assert!(text.contains(replace), "{replace}");
    mistakes_as(&text.replace(replace, by), messages);
}

#[test]
fn unknown_keys() {
    gauge_mistake(
        "gauge_factor =",
        "‹gauge_facter› =",
        &["unknown key 'channel.g.gauge.gauge_facter'; did you mean 'gauge_factor'?"],
    );
    gauge_mistake("column =", "‹colum› =", &["unknown key 'channel.g.colum'; did you mean 'column'?"]);
    mistakes_as(&gauge("‹wires› = 3"), &["unknown key 'channel.g.wires'; did you mean 'leads.wires'?"]);
    mistakes_as(
        &gauge("leads = { wires = 3, each = \"1 ohm\", ‹colour› = \"red\" }"),
        &[
            "unknown key 'channel.g.leads.colour'; known here: wires, each, length, area, awg, material, resistivity, balanced, temperature, coefficient, reference",
        ],
    );
    mistakes_as(
        &format!("[‹chanel›.x]\ncolumn = 1\n{}", gauge("")),
        &["unknown key 'chanel'; known here: title, list, recording, common, channel, rosette"],
    );
    mistakes_as(&format!("‹titel› = \"x\"\n{}", gauge("")), &["unknown key 'titel'; did you mean 'title'?"]);
    mistakes_as(
        &format!("[recording]\n‹seperator› = \";\"\n{}", gauge("")),
        &["unknown key 'recording.seperator'; did you mean 'separator'?"],
    );
    // a common table that nobody is like, and inside a change
    mistakes_as(
        &format!("[common.x]\n‹gaige› = {{}}\n{}", gauge("")),
        &["unknown key 'common.x.gaige'; did you mean 'gauge'?"],
    );
    mistakes_as(
        &gauge("[[channel.g.change]]\nfrom = \"2026-03-12T10:00:00Z\"\ngauge = { ‹gauge_facto› = 2.11 }"),
        &["unknown key 'channel.g.change.gauge.gauge_facto'; did you mean 'gauge_factor'?"],
    );
    mistakes_as(
        &gauge("[[channel.g.change]]\nfrom = \"2026-03-12T10:00:00Z\"\n‹decimal› = 2"),
        &[
            "unknown key 'channel.g.change.decimal'; known here: column, reads, output, extrapolate, uncertainty, resolution, gauge, bridge, circuit, converter, amplifier, platinum, metal, thermistor, thermocouple, self_heating, thermal_output, expansion, temperature, leads, zero, limits, largest_strain, largest_load, transducer, transverse, shunt, from",
        ],
    );
    // known, but nothing uses it
    mistakes_as(
        &gauge("‹material› = { modulus = \"205 GPa\" }"),
        &["channel.g.material has no meaning here: nothing in this channel uses it"],
    );
    mistakes_as(
        "[common.x]\n‹expansion› = { specimen = \"1e-6/K\", data = \"1e-6/K\" }\n[channel.t]\nlike = \"x\"\ncolumn = 1\nreads = \"ohm\"\n",
        &["common.x.expansion has no meaning here: no channel that is like it uses it"],
    );
}

#[test]
fn units_and_values() {
    gauge_mistake("\"mV/V\"", "‹\"mVV\"›", &["reads = 'mVV' is no unit that a recording can have; did you mean 'mV'?"]);
    gauge_mistake(
        "\"350 ohm\"",
        "‹\"350 kohn\"›",
        &[
            "gauge.resistance: value '350 kohn': unknown unit 'kohn'; expected a resistance (ohm, kohm, Mohm); did you mean 'kohm'?",
        ],
    );
    gauge_mistake(
        "\"350 ohm\"",
        "‹\"350\"›",
        &["gauge.resistance: value '350' has no unit; expected a resistance (ohm, kohm, Mohm)"],
    );
    gauge_mistake(
        "\"350 ohm\"",
        "‹350›",
        &["gauge.resistance: value '350' has no unit; expected a resistance (ohm, kohm, Mohm)"],
    );
    gauge_mistake(
        "\"350 ohm\"",
        "‹\"350 mV\"›",
        &[
            "gauge.resistance: value '350 mV': 'mV' is the unit of a voltage (V, mV, uV); expected a resistance (ohm, kohm, Mohm)",
        ],
    );
    gauge_mistake(
        "\"350 ohm\"",
        "‹\"ohm 350\"›",
        &["gauge.resistance: value 'ohm 350' does not begin with a number; expected a resistance (ohm, kohm, Mohm)"],
    );
    gauge_mistake(
        "\"350 ohm\"",
        "‹\"350,0 ohm\"›",
        &["gauge.resistance: value '350,0 ohm': a sheet writes the decimal mark as a point"],
    );
    gauge_mistake("\"350 ohm\"", "‹\"-350 ohm\"›", &["gauge.resistance must be above zero"]);
    gauge_mistake("\"350 ohm\"", "‹\"0 ohm\"›", &["gauge.resistance must be above zero"]);
    gauge_mistake(
        "\"350 ohm\"",
        "‹true›",
        &["gauge.resistance is true or false; expected a resistance (ohm, kohm, Mohm)"],
    );
    gauge_mistake(
        "\"350 ohm\"",
        "‹\"350 ohm ± 1 V\"›",
        &[
            "gauge.resistance: value '350 ohm ± 1 V': uncertainty '1 V' is not in a unit of the value, nor in percent: 'V'",
        ],
    );
    gauge_mistake(
        "\"350 ohm\"",
        "‹\"350(1 ohm\"›",
        &["gauge.resistance: value '350(1 ohm': the bracket behind the number is not closed"],
    );
    gauge_mistake(
        "\"350 ohm\"",
        "‹\"350 ohm (k=2)\"›",
        &[
            "gauge.resistance: value '350 ohm (k=2)': (k=2) belongs behind an uncertainty, as in '1.00 V ± 0.01 V (k=2)'",
        ],
    );
    gauge_mistake(
        "2.08",
        "‹\"2.08 ± 0.5 % (k=x)\"›",
        &[
            "gauge.gauge_factor: value '2.08 ± 0.5 % (k=x)': uncertainty '0.5 % (k=x)' has a coverage factor that is no number",
        ],
    );
    gauge_mistake(
        "2.08",
        "‹nan›",
        &["gauge.gauge_factor: value 'nan' does not begin with a number; expected a plain number"],
    );
    gauge_mistake(
        "[\"e\", \"0\", \"0\", \"0\"]",
        "‹[\"e\", \"0\"]›",
        &["bridge.arms has 2 entries; a bridge has four arms"],
    );
    let arms = "\"e\", \"-e\", \"nu e\", \"-nu e\", a multiple such as \"-1.0097 e\", \"dummy\" or \"0\"";
    for (text, arm) in [
        ("‹\"x\"›", "x"),
        ("‹\"0.5\"›", "0.5"),
        ("‹\"sensor\"›", "sensor"),
        ("‹\"Dummy\"›", "Dummy"),
        ("‹\"0 e\"›", "0 e"),
    ] {
        gauge_mistake("[\"e\", \"0\",", &format!("[\"e\", {text},"), &[&format!("'{arm}' is no arm; expected {arms}")]);
    }
    mistakes_as(
        &gauge("output = ‹\"microstrian\"›"),
        &[
            "output is 'microstrian'; this sensor gives a strain (microstrain, %, strain) or a shear strain (shear microstrain); did you mean 'microstrain'?",
        ],
    );
    mistakes_as(
        &gauge("output = ‹\"degC\"›"),
        &[
            "output is 'degC'; this sensor gives a strain (microstrain, %, strain) or a shear strain (shear microstrain)",
        ],
    );
    mistakes_as(&gauge("decimals = ‹-1›"), &["decimals is -1; expected a whole number from 0 to 17"]);
    mistakes_as(&gauge("decimals = ‹1.5›"), &["decimals is 1.5; expected a whole number from 0 to 17"]);
    mistakes_as(&gauge("show = ‹\"yes\"›"), &["show is text; expected true or false"]);
    mistakes_as(
        &gauge("temperature = ‹21›"),
        &[
            "temperature is a number; expected a value such as \"21 degC\", a channel, or { channel = ..., longest_gap = ... }",
        ],
    );
    mistakes_as(
        &gauge("temperature = ‹\"21 deg\"›"),
        &[
            "temperature: value '21 deg': 'deg' is the unit of an angle (deg, rad); expected a temperature (degC, K, degF)",
        ],
    );
    mistakes_as(
        &gauge("uncertainty = ‹\"2.2\"›"),
        &["uncertainty: value '2.2' has no unit; expected a voltage ratio (V/V, mV/V, uV/V)"],
    );
    mistakes_as(
        &gauge("uncertainty = ‹\"0.1 % + 0.2 %\"›"),
        &["uncertainty: value '0.1 % + 0.2 %': expected a share of the reading and a size, as in '0.05 % + 2 uV'"],
    );
    mistakes_as(
        &gauge("uncertainty = ‹\"2 uV\"›"),
        &[
            "uncertainty: value '2 uV': 'uV' is the unit of a voltage (V, mV, uV); expected a voltage ratio (V/V, mV/V, uV/V)",
        ],
    );
    gauge_mistake(
        "column = \"CH01\"",
        "column = ‹0›",
        &["column is 0; expected a column header, or its number counted from 1"],
    );
    gauge_mistake("column = \"CH01\"", "column = ‹[1, 2]›", &["column is a list; a channel reads one column"]);
    gauge_mistake(
        "reads = \"mV/V\"",
        "reads = ‹\"ohm\"›",
        &["reads is 'ohm', but a strain gauge bridge is read in volts, a voltage ratio or counts"],
    );
    gauge_mistake("gauge = {", "gauge = ‹5› # {", &["gauge is a number; expected a table, as in { key = value }"]);
}

#[test]
fn missing_keys() {
    let lack = |text: &str, messages: &[&str]| mistakes_as(text, messages);
    lack(
        "[channel.‹g›]\ncolumn = 1\n",
        &["reads is missing: the unit of the recorded numbers, as in reads = \"mV/V\""],
    );
    lack(
        "[channel.‹g›]\nreads = \"mV\"\n",
        &["column is missing: the header, or the number from 1, of the column of the recording"],
    );
    lack(
        "[channel.g]\ncolumn = 1\nreads = \"mV/V\"\n‹gauge› = { resistance = \"350 ohm\" }\nbridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }\n",
        &["gauge.gauge_factor is missing: the gauge factor: a plain number"],
    );
    lack(
        "[channel.‹g›]\ncolumn = 1\nreads = \"mV/V\"\ngauge = { resistance = \"350 ohm\", gauge_factor = 2 }\n",
        &["bridge is missing: how the gauges are wired, as in bridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }"],
    );
    gauge_mistake(
        "bridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }",
        "‹bridge› = {}",
        &["bridge.arms is missing: four texts such as [\"e\", \"0\", \"0\", \"0\"]"],
    );
    gauge_mistake(
        "bridge = { arms = [\"e\", \"0\"",
        "‹bridge› = { arms = [\"e\", \"-nu e\"",
        &["bridge.poisson is missing: Poisson's ratio of the specimen, since an arm is a multiple of nu e"],
    );
    let text = gauge("").replace("\"mV/V\"", "\"mV\"").replace("bridge =", "‹bridge› =");
    lack(
        &text,
        &[
            "bridge.supply is missing: what the volts belong to, as in \"2.5 V\" or { column = \"V_ex\", reads = \"V\" }",
        ],
    );
    let text = gauge("").replace("\"mV/V\"\n", "\"count\"\n").replace("channel.g", "channel.‹g›");
    lack(
        &text,
        &[
            "converter is missing: what the counts come from, as in { bits = 24, full_scale = \"±2.5 V\", coding = \"signed\" }",
        ],
    );
    let text = gauge("").replace("\"mV/V\"\n", "\"count\"\n‹converter› = {}\n");
    let error = Sheet::read("s.toml", &text.replace(['‹', '›'], "")).unwrap_err();
    let said: Vec<&str> = error.diagnostics().iter().map(|d| d.message.as_str()).collect();
    assert_eq!(
        said,
        [
            "converter.bits is missing: the number of bits",
            "converter.full_scale is missing: \"supply\", or a voltage such as \"±2.5 V\"",
            "converter.coding is missing: \"signed\", \"offset\" or \"unsigned\"",
        ]
    );
    lack(&gauge("‹leads› = { each = \"1 ohm\" }"), &["leads.wires is missing: 2 or 3"]);
    lack(
        &gauge("‹leads› = { wires = 3 }"),
        &["leads.each is missing: the resistance of one conductor, or length and area"],
    );
    lack(
        &gauge("‹leads› = { wires = 3, length = \"3 m\" }"),
        &["leads.area is missing: the cross-section, or awg: a cross-section (mm2)"],
    );
    lack(
        &gauge("‹amplifier› = {}"),
        &["amplifier.gain is missing: the gain, or difference = { input = [...], feedback = [...] }"],
    );
    lack(
        &gauge("").replace("2.08 }", "2.08, slope = \"1 %/100K\" }").replace("channel.g", "channel.‹g›"),
        &[
            "temperature is missing: the gauge's slope, thermal output or expansion needs it: a channel, or a value such as \"21 degC\"",
        ],
    );
    lack(
        &gauge("‹thermal_output› = {}"),
        &[
            "thermal_output.coefficients is missing: the polynomial of the gauge package, lowest power first, in microstrain",
        ],
    );
    lack(
        &gauge("thermal_output = { coefficients = [1] }\ntemperature = \"21 degC\"\n‹zero› = { at = \"0 mV/V\" }"),
        &["zero.temperature is missing: the temperature at which the zero was taken, which thermal output counts from"],
    );
    lack(
        &gauge("thermal_output = { coefficients = [1] }\ntemperature = \"21 degC\"")
            .replace("channel.g", "channel.‹g›"),
        &[
            "zero is missing: thermal output counts from the temperature at zero, as in zero = { at = \"0 mV/V\", temperature = \"21 degC\" }",
        ],
    );
    lack(
        &gauge("[[channel.g.‹change›]]\ngauge = { gauge_factor = 2 }"),
        &["change.from is missing: the moment from which these keys hold"],
    );
    let t = "[channel.t]\ncolumn = 1\nreads = \"ohm\"\n";
    lack(
        &format!("{t}‹platinum› = {{ r0 = \"100 ohm\" }}\n"),
        &["platinum.standard is missing: as in standard = \"IEC 60751\", or the coefficients a, b and c"],
    );
    lack(
        &format!("{t}‹platinum› = {{ standard = \"IEC 60751\" }}\n"),
        &["platinum.r0 is missing: the resistance at 0 °C: a resistance (ohm, kohm, Mohm)"],
    );
    lack(
        &format!("{t}‹thermistor› = {{ r25 = \"1 kohm\" }}\n"),
        &["thermistor.beta is missing: the constant β, as in \"3950 K\""],
    );
    lack(
        &format!("{t}‹thermistor› = {{}}\n"),
        &[
            "thermistor.r25 is missing: r25 and beta, or steinhart_hart = [a, b, c], or points = [[degC, ohm], ...], or reference with ratio_terms or reciprocal_terms",
        ],
    );
    lack(
        &format!("{t}‹thermistor› = {{ steinhart_hart = [1e-3, 1e-4, 1e-7] }}\n"),
        &[
            "thermistor.range is missing: the temperatures that the coefficients hold for, as in [\"-40 degC\", \"125 degC\"]",
        ],
    );
    lack(
        &format!("{t}thermistor = {{ r25 = \"1 kohm\", beta = 3950 }}\n")
            .replace("ohm\"\nth", "V\"\nth")
            .replace("channel.t", "channel.‹t›"),
        &[
            "circuit is missing: volts become ohms only through a circuit, as in { divider = \"10 kohm\", sensor = \"low\", supply = \"3.3 V\" } or { current = \"1 mA\" }",
        ],
    );
    let v = "[channel.t]\ncolumn = 1\nreads = \"V\"\nthermistor = { r25 = \"1 kohm\", beta = 3950 }\n";
    lack(
        &format!("{v}‹circuit› = {{ divider = \"1 kohm\", supply = \"1 V\" }}\n"),
        &[
            "circuit.sensor is missing: \"low\" when the sensor goes from the node to ground, \"high\" when it goes to the supply",
        ],
    );
    lack(
        &format!("{v}‹circuit› = {{ divider = \"1 kohm\", sensor = \"low\" }}\n"),
        &[
            "circuit.supply is missing: what the volts belong to, as in \"2.5 V\" or { column = \"V_ex\", reads = \"V\" }",
        ],
    );
    lack(
        &format!("{t}‹limits› = {{ below = \"short\" }}\n"),
        &["limits.low is missing: limits.below says what a reading beyond it means"],
    );
    lack(
        "[channel.a]\ncolumn = 1\nreads = \"microstrain\"\n[channel.‹s›]\nof = \"a\"\n",
        &["material is missing: stress needs a modulus, as in material = { modulus = \"205 GPa\" }"],
    );
    lack(
        "[channel.a]\ncolumn = 1\nreads = \"microstrain\"\n[channel.s]\nof = \"a\"\n‹material› = {}\n",
        &["material.modulus is missing: the modulus of elasticity, as in \"205 GPa\""],
    );
    lack("‹›title = \"x\"\n", &["the sheet has no [channel.NAME]: there is nothing to convert"]);
}

#[test]
fn angles_that_are_typed() {
    // 180/π = 57.295 779 513 082 320 9
    assert_eq!(Sheet::angle("1 rad"), Ok(57.295_779_513_082_32));
    assert_eq!(Sheet::angle("30"), Sheet::angle("30 deg"));
    assert!(Sheet::angle("1 mm").is_err());
}

#[test]
fn contradictions() {
    let sensors = "a channel has one sensor, and this one has gauge and platinum";
    mistakes_as(&gauge("‹platinum› = { standard = \"IEC 60751\", r0 = \"100 ohm\" }"), &[sensors]);
    let blind = "channel 'g': the output of this bridge does not depend on the wanted quantity: its driven arms cancel each other";
    gauge_mistake("arms = [\"e\", \"0\", \"0\", \"0\"]", "‹arms› = [\"e\", \"e\", \"0\", \"0\"]", &[blind]);
    let full = "leads.wires is for gauges in arms 1 and 2; a full bridge has bridge.supply_leads, bridge.signal_leads and bridge.sensed";
    gauge_mistake(
        "bridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }",
        "‹leads› = { wires = 3, each = \"1 ohm\" }\nbridge = { arms = [\"e\", \"-e\", \"e\", \"-e\"] }",
        &[full],
    );
    gauge_mistake(
        "bridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }",
        "‹leads› = { wires = 2, each = \"1 ohm\" }\nbridge = { arms = [\"e\", \"-e\", \"0\", \"0\"] }",
        &["two wires go to one gauge in arm 1"],
    );
    let lead = |keys: &str, message: &str| mistakes_as(&gauge(&format!("‹leads› = {{ {keys} }}")), &[message]);
    lead(
        "wires = 3, each = \"1 ohm\", balanced = true",
        "leads.balanced is for two wires: three wires balance by themselves",
    );
    lead("wires = 3, each = \"1 ohm\", length = \"1 m\"", "leads: give either each, or length and area");
    lead(
        "wires = 3, length = \"1 m\", area = \"1 mm2\", material = \"copper\", resistivity = \"1 ohm mm2/m\"",
        "leads: give either material or resistivity",
    );
    mistakes_as(
        &gauge("leads = { wires = ‹4›, each = \"1 ohm\" }"),
        &["leads.wires is 4; expected a whole number from 2 to 3"],
    );
    mistakes_as(
        &gauge("leads = { wires = 3, each = ‹[\"1 ohm\", \"1 ohm\"]› }"),
        &["leads.each has 2 values; expected 3"],
    );
    mistakes_as(
        &gauge("leads = { wires = 2, each = ‹[\"1 ohm\", \"1 ohm\", \"1 ohm\"]› }"),
        &["leads.each has 3 values; expected 2"],
    );
    mistakes_as(
        &gauge("‹leads› = { wires = 3, each = \"-1 ohm\" }"),
        &["channel 'g': lead resistance -1 ohm is below 0 ohm"],
    );
    mistakes_as(
        &gauge("leads = { wires = 3, length = \"1 m\", area = \"1 mm2\", material = ‹\"copper wire\"› }"),
        &["leads.material is 'copper wire'; expected \"copper\""],
    );
    mistakes_as(
        &gauge("‹circuit› = { current = \"1 mA\" }"),
        &["strain gauges are read through a bridge, not a circuit"],
    );
    mistakes_as(
        &gauge("‹converter› = { bits = 24, full_scale = \"supply\", coding = \"signed\" }"),
        &["converter turns counts into volts, but reads is not \"count\""],
    );
    mistakes_as(
        &gauge(
            "‹amplifier› = { gain = 1, difference = { input = [\"1 ohm\", \"1 ohm\"], feedback = [\"1 ohm\", \"1 ohm\"] } }",
        ),
        &["amplifier has both gain and difference; it is one or the other"],
    );
    mistakes_as(
        &gauge("amplifier = { difference = { input = [\"1 ohm\", \"1 ohm\"], feedback = ‹[\"1 ohm\", \"0 ohm\"]› } }"),
        &["amplifier.difference.feedback[2] must be above zero"],
    );
    mistakes_as(
        &gauge("amplifier = { gain = 10, offset = \"1 mV\" }").replace("bridge =", "‹bridge› ="),
        &["bridge.supply is missing: one voltage, since amplifier.offset is in volts and the readings are a ratio"],
    );
    let one_of = "zero has one of: at = a reading; rows = a number of first rows; from and to = a stretch of time; or temperatures alone";
    for keys in [
        "at = \"0 mV/V\", rows = 5",
        "rows = 5, from = \"a\", to = \"b\"",
        "to = \"2026-05-09\"",
        "from = \"resistance\"",
    ] {
        mistakes_as(&gauge(&format!("‹zero› = {{ {keys} }}")), &[one_of]);
    }
    mistakes_as(
        &gauge("zero = { at = \"0 mV/V\", from = ‹\"resistence\"› }"),
        &[
            "zero.from is 'resistence'; expected \"strain\", \"resistance\" or \"completion\", or a moment with zero.to beside it",
        ],
    );
    mistakes_as(&gauge("zero = { rows = ‹0› }"), &["zero.rows is 0; expected a whole number above 0"]);
    mistakes_as(
        &gauge("zero = { at = ‹\"0.1 mV\"› }"),
        &[
            "zero.at: value '0.1 mV': 'mV' is the unit of a voltage (V, mV, uV); expected a voltage ratio (V/V, mV/V, uV/V)",
        ],
    );
    mistakes_as(
        &gauge("‹zero› = { at = \"900 mV/V\" }"),
        &["channel 'g': no strain of this bridge gives the zero reading"],
    );
    mistakes_as(
        &gauge("‹zero› = { at = \"0 mV/V\", from = \"completion\" }")
            .replace("\"0\", \"0\", \"0\"", "\"-e\", \"0\", \"0\""),
        &["channel 'g': a zero by completion needs a fixed resistor in arm 2, and this arm is a gauge"],
    );
    let column = gauge("zero = { at = ‹\"0.1 mV\"› }")
        .replace("\"mV/V\"\n", "\"mV\"\n")
        .replace("\"0\"] }", "\"0\"], supply = { column = \"V_ex\", reads = \"V\" } }");
    mistakes_as(
        &column,
        &["zero.at must be output over supply, as in \"0.03 mV/V\", since the supply varies from row to row"],
    );
    let supply = gauge("").replace("\"0\"] }", "\"0\"], supply = { column = \"V_ex\", reads = ‹\"mA\"› } }");
    mistakes_as(&supply, &["bridge.supply.reads is 'mA'; expected a voltage (V, mV, uV)"]);
    mistakes_as(
        &gauge("‹limits› = { low = \"2 mV/V\", high = \"1 mV/V\" }"),
        &["limits.low must be below limits.high"],
    );
    mistakes_as(&gauge("‹limits› = {}"), &["limits has neither low nor high"]);
    mistakes_as(
        &gauge("limits = { low = \"2 mV/V\", below = ‹\"shorted\"› }"),
        &[
            "limits.below is 'shorted'; expected \"short\" or \"open\" or \"saturated\" or \"out-of-range\" or \"missing\"; did you mean \"short\"?",
        ],
    );
    mistakes_as(&gauge("largest_strain = ‹\"200 %\"›"), &["largest_strain must be above zero and at most 100 %"]);
    mistakes_as(
        &gauge("shared = [‹\"gauge.factor\"›]"),
        &["shared names 'gauge.factor', which is no key of this channel"],
    );
    mistakes_as(
        &gauge("[[channel.g.change]]\nfrom = ‹\"2026-03-12T10:00:00Z\"›"),
        &["this change has no other key: nothing changes"],
    );
    mistakes_as(
        &gauge("[[channel.g.change]]\nfrom = ‹\"2026-03-12T10:00:00Z\"›\noutput = \"%\""),
        &["a change cannot give the channel another unit"],
    );
    mistakes_as(&gauge("change = ‹5›"), &["change must be a list of tables, as in [[channel.NAME.change]]"]);

    let t = "[channel.t]\ncolumn = 1\nreads = \"ohm\"\n";
    let both = "platinum is stated in more than one way: it is a standard, or a, b and c, or alpha, delta and beta, or triple_point and a deviation function";
    mistakes_as(&format!("{t}‹platinum› = {{ standard = \"IEC 60751\", r0 = \"100 ohm\", a = 3.9e-3 }}\n"), &[both]);
    let both = "thermistor has steinhart_hart and r25 and beta; it is one of them";
    mistakes_as(
        &format!("{t}‹thermistor› = {{ r25 = \"1 kohm\", beta = 3950, steinhart_hart = [1, 1, 1] }}\n"),
        &[both],
    );
    let pt = format!("{t}platinum = {{ standard = \"IEC 60751\", r0 = \"100 ohm\" }}\n");
    mistakes_as(
        &pt.replace("\"IEC 60751\"", "‹\"IEC60751\"›"),
        &[
            "platinum.standard is 'IEC60751'; expected \"IEC 60751\" or \"ASTM E1137\" or \"IEC 751:1983\" or \"IEC 751:1983, short figures\" or \"GOST 6651-2009\" or \"R100/R0 = 1.3911\" or \"R100/R0 = 1.3920\" or \"R100/R0 = 1.3916\" or \"R100/R0 = 1.3902\" or \"IEC 60751:2008\" or \"IEC 60751:2022\"; did you mean \"IEC 60751\"?",
        ],
    );
    mistakes_as(
        &pt.replace("\"100 ohm\"", "\"100 ohm\", class = ‹\"D\"›"),
        &["platinum.class is 'D'; expected \"AA\" or \"A\" or \"B\" or \"C\" or \"1/3 B\" or \"1/10 B\""],
    );
    mistakes_as(
        &pt.replace("\"100 ohm\"", "\"100 ohm\", range = ‹[\"50 degC\", \"0 degC\"]›"),
        &["platinum.range must run from low to high"],
    );
    mistakes_as(&format!("{pt}‹zero› = {{ rows = 5 }}\n"), &["a thermometer has no zero"]);
    mistakes_as(
        &format!("{pt}circuit = {{ ‹current› = \"1 mA\" }}\n"),
        &["circuit.current turns volts into ohms, but reads is in ohms already; it counts with self_heating alone"],
    );
    mistakes_as(
        &format!("{pt}‹leads› = {{ wires = 2, each = \"1 ohm\", balanced = true }}\n"),
        &["leads.balanced is for two wires to a bridge"],
    );
    mistakes_as(
        &format!("{pt}output = ‹\"microstrain\"›\n"),
        &["output is 'microstrain'; this sensor gives a temperature (degC, K, degF)"],
    );
    mistakes_as(
        &pt.replace("\"ohm\"", "‹\"degC\"›"),
        &["reads is 'degC', but a thermometer is read in volts, a voltage ratio, ohms or counts"],
    );
    let ratio = format!("{pt}‹circuit› = {{ current = \"1 mA\" }}\n").replace("\"ohm\"", "\"mV/V\"");
    mistakes_as(&ratio, &["circuit.current needs readings in volts: a ratio to a supply says nothing of the current"]);
    let volts =
        format!("{pt}‹circuit› = {{ current = \"1 mA\", divider = \"1 kohm\" }}\n").replace("\"ohm\"", "\"mV\"");
    mistakes_as(
        &volts,
        &[
            "circuit is { divider, sensor, supply }, { current }, or { reference, supply }: a resistor in series and the voltage across it",
        ],
    );
    let bridge = format!("{pt}bridge = {{ arms = [‹\"e2\"›, \"0\", \"0\", \"0\"] }}\n").replace("\"ohm\"", "\"mV/V\"");
    mistakes_as(&bridge, &["'e2' is no arm; expected \"sensor\" for the thermometer or \"0\" for a fixed resistor"]);
    let no_sensor = |key: &str| {
        format!(
            "{key} needs a sensor: this channel has no gauge, transducer, platinum, metal, thermistor, thermocouple"
        )
    };
    mistakes_as(&format!("{t}‹leads› = {{ wires = 2, each = \"1 ohm\" }}\n"), &[&no_sensor("leads")]);
    mistakes_as(
        &format!("{t}output = ‹\"degC\"›\n"),
        &[
            "output is 'degC', but the readings are a resistance (ohm, kohm, Mohm) and no sensor turns them into something else",
        ],
    );

    let interval = "recording.interval is for a recording without a time column, but recording.time names one";
    let d = "[channel.d]\ncolumn = 1\nreads = \"mV\"\n";
    mistakes_as(&format!("[recording]\ntime = \"t\"\ninterval = ‹\"1 s\"›\n{d}"), &[interval]);
    mistakes_as(&format!("[recording]\ninterval = ‹\"0 s\"›\n{d}"), &["recording.interval must be above zero"]);
    mistakes_as(
        &format!("[recording]\nseparator = ‹\"|\"›\n{d}"),
        &["recording.separator is '|'; expected \",\" or \";\" or \"tab\""],
    );
    mistakes_as(
        &format!("[recording]\ndecimal = ‹\";\"›\n{d}"),
        &["recording.decimal is ';'; expected \".\" or \",\""],
    );
    mistakes_as(
        &format!("[recording]\nencoding = ‹\"latin-1\"›\n{d}"),
        &["recording.encoding is 'latin-1'; expected \"utf-8\", \"windows-1252\" or \"utf-16\""],
    );
    mistakes_as(
        &format!("[recording]\nkeep = ‹true›\n{d}"),
        &["recording.keep is true or false; expected a column header or number"],
    );
}

#[test]
fn channels_that_do_not_fit_together() {
    let two = "[channel.a]\ncolumn = 1\nreads = \"microstrain\"\n[channel.t]\ncolumn = 2\nreads = \"degC\"\n[channel.u]\ncolumn = 3\nreads = \"degC\"\n";
    let with = |more: &str| format!("{two}{more}\n");
    mistakes_as(&with("[channel.c]\ncombine = { a = 1, ‹aa› = 1 }"), &["there is no channel 'aa'; did you mean 'a'?"]);
    mistakes_as(
        &with("[channel.c]\ncombine = { a = 1, ‹t› = 1 }"),
        &["combine: 't' gives a temperature (degC, K, degF), but the first gives a strain (microstrain, %, strain)"],
    );
    mistakes_as(
        &with("[channel.c]\n‹combine› = { t = 1, u = 1 }"),
        &["combine: weights of temperatures sum to 0 (a difference, in K) or to 1 (a mean); these sum to 2"],
    );
    mistakes_as(
        &with("[channel.c]\ncombine = { t = 1, u = -1 }\noutput = ‹\"degC\"›"),
        &["output is 'degC', but these weights sum to 0: a temperature difference, in K"],
    );
    mistakes_as(
        &with("[channel.c]\ncombine = { t = 0.5, u = 0.5 }\noutput = ‹\"K\"›"),
        &["output is 'K', but the mean is in the channels' own unit, degC"],
    );
    mistakes_as(
        &with("[channel.c]\n‹combine› = {}"),
        &["combine needs at least one channel, as in { g01 = 0.5, g02 = -0.5 }"],
    );
    mistakes_as(
        &with("[channel.c]\ncombine = { a = ‹\"1 V\"› }"),
        &["combine.a: value '1 V': 'V' is the unit of a voltage (V, mV, uV); expected a plain number"],
    );
    mistakes_as(
        &with("[channel.c]\nof = ‹\"t\"›\nmaterial = { modulus = \"205 GPa\" }"),
        &["of = 't': stress needs a strain channel, and this one gives a temperature (degC, K, degF)"],
    );
    mistakes_as(
        &with("[channel.c]\nof = \"a\"\nmaterial = { modulus = ‹\"205\"› }"),
        &["material.modulus: value '205' has no unit; expected a stress, pressure or modulus (Pa, kPa, MPa, GPa, bar)"],
    );
    mistakes_as(
        &with("[channel.c]\nof = \"a\"\noutput = ‹\"V\"›\nmaterial = { modulus = \"205 GPa\" }"),
        &["output is 'V'; expected a stress, pressure or modulus (Pa, kPa, MPa, GPa, bar)"],
    );
    // circles, through each kind of link
    mistakes_as(
        "[channel.‹a›]\ncombine = { b = 1 }\n[channel.b]\ncombine = { a = 1 }\n",
        &["channel 'a' depends on itself"],
    );
    mistakes_as("[channel.‹a›]\ncombine = { a = 1 }\n", &["channel 'a' depends on itself"]);
    mistakes_as("[channel.‹s›]\nof = \"s\"\nmaterial = { modulus = \"1 GPa\" }\n", &["channel 's' depends on itself"]);
    // a temperature difference is no temperature
    let slope = gauge("").replace("2.08 }", "2.08, slope = \"1 %/100K\" }");
    mistakes_as(
        &format!("{slope}temperature = ‹\"d\"›\n{two}[channel.d]\ncombine = {{ t = 1, u = -1 }}\n"),
        &["channel 'd' gives a temperature difference (K), not a temperature"],
    );
    mistakes_as(
        &format!("{slope}temperature = ‹\"dek\"›\n[channel.deck]\ncolumn = 2\nreads = \"degC\"\n"),
        &["there is no channel 'dek'; did you mean 'deck'?"],
    );
    mistakes_as(
        &format!("{slope}temperature = {{ channel = \"a\", between = ‹\"lines\"› }}\n{two}"),
        &["temperature.between is 'lines'; expected \"line\" or \"last\"; did you mean \"line\"?"],
    );
    mistakes_as(
        &format!("{slope}‹temperature› = {{ channel = \"t\", longest_gap = \"-1 s\" }}\n{two}"),
        &["temperature.longest_gap must not be below zero"],
    );
    // like, and names
    mistakes_as(
        &format!("[common.girder]\ndecimals = 1\n{}", gauge("like = ‹\"girders\"›")),
        &["like = 'girders': there is no [common.girders]; did you mean 'girder'?"],
    );
    mistakes_as(&gauge("like = ‹\"girder\"›"), &["like = 'girder': there is no [common.girder]"]);
    mistakes_as("[channel]\ng = ‹5›\n", &["channel.g must be a table, as in [channel.g]"]);
    mistakes_as(&format!("[common]\ng = ‹5›\n{}", gauge("")), &["common.g must be a table, as in [common.g]"]);
    mistakes_as(
        "[channel.‹\"a b\"›]\ncolumn = 1\nreads = \"mV\"\n",
        &["channel name 'a b' must not be empty nor hold blanks, colons, commas, quotes or '='"],
    );
}

#[test]
fn toml_mistakes() {
    mistakes_as("[channel.g]\ncolumn = 1\n‹column› = 2\n", &["'column' stands twice"]);
    mistakes_as("[channel.g]\ncolumn = 1\n[channel.‹g›]\nreads = \"mV\"\n", &["'g' stands twice"]);
    mistakes_as("a = ‹=› 1\n", &["extra `=`, expected nothing"]);
    mistakes_as("[channel.g]\nreads = ‹mV›\n", &["string values must be quoted, expected literal string"]);
}

#[test]
fn several_mistakes_are_told_at_once_in_order() {
    mistakes_as(
        "‹titel› = \"x\"\n[channel.a]\ncolumn = 1\nreads = ‹\"mVV\"›\ngauge = { resistance = ‹\"350\"›, gauge_factor = ‹\"2 V\"› }\n\
         bridge = { arms = [\"e\", ‹\"x\"›, \"0\", \"0\"] }\n[channel.‹b›]\nreads = \"mV\"\n[channel.c]\ncombine = { ‹d› = 1 }\n",
        &[
            "unknown key 'titel'; did you mean 'title'?",
            "reads = 'mVV' is no unit that a recording can have; did you mean 'mV'?",
            "gauge.resistance: value '350' has no unit; expected a resistance (ohm, kohm, Mohm)",
            "gauge.gauge_factor: value '2 V': 'V' is the unit of a voltage (V, mV, uV); expected a plain number",
            "'x' is no arm; expected \"e\", \"-e\", \"nu e\", \"-nu e\", a multiple such as \"-1.0097 e\", \"dummy\" or \"0\"",
            "column is missing: the header, or the number from 1, of the column of the recording",
            "there is no channel 'd'",
        ],
    );
}

#[test]
fn files_that_are_no_text() {
    // a sheet is text already here; the command line judges bytes: tests/cli.rs
    let error = Sheet::read("s.toml", "").unwrap_err().to_string();
    assert_eq!(error, "s.toml:1:1: the sheet has no [channel.NAME]: there is nothing to convert\n");
}

#[test]
fn describe_says_what_is_done() {
    let lines = |text: &str| read(text).describe(0);
    let says = |text: &str, wanted: &[&str]| {
        let lines = lines(text);
        for line in wanted {
            assert!(lines.iter().any(|l| l == line), "'{line}' is not among\n{}", lines.join("\n"));
        }
    };
    says(
        &gauge(
            "leads = { wires = 2, length = \"12.4 m\", area = \"0.25 mm2\" }\nzero = { rows = 200, from = \"completion\" }\nextrapolate = true\nlargest_strain = \"1 %\"",
        ),
        &[
            // 12.4 m / (58 m/(ohm mm2) · 0.25 mm2) = 0.855172 ohm
            "leads: two wires, 0.855172 ohm and 0.855172 ohm (ρ l/A: 12.4 m one way, 0.25 mm2, 0.0172414 ohm mm2/m), both in arm 1; arm 2 was made up to balance the bridge with them in place",
            "zero: the mean of output/supply over the readings in the first 200 rows; the fixed resistor in arm 2 was off",
            "range: |e| up to 10000 microstrain, beyond it a reading is out-of-range; open or short where a gauge is beyond three times or a third of its resistance",
            "extrapolates: laws are used outside their range; such results carry the word extrapolated",
            "assumed: leads: the bridge was balanced with them in place (balanced = true)",
        ],
    );
    says(
        &gauge("").replace("[\"e\", \"0\", \"0\", \"0\"]", "[\"nu e\", \"-1.0097 e\", \"dummy\", \"0\"], poisson = 0.3, supply_leads = [\"2 ohm\", \"3 ohm\"], sensed = true, signal_leads = \"1 ohm\", input_resistance = \"1 Mohm\""),
        &[
            "bridge: arm 1 a gauge that sees ν e, 350 ohm; 2 a gauge that sees −1.0097 e, 350 ohm; 3 a dummy gauge (temperature, no strain), 350 ohm; 4 fixed, 350 ohm",
            "bridge: Poisson's ratio ν = 0.3",
            "supply leads: 2 ohm and 3 ohm; the supply is sensed at the bridge, behind them",
            "signal leads: 1 ohm and 1 ohm",
            "load: 1000000 ohm across the output",
        ],
    );
    let thermal = gauge(
        "thermal_output = { coefficients = [-24, 0, 1e-5], in = \"degF\", range = [\"-20 degC\", \"80 degC\"] }\ntemperature = { channel = \"t\", longest_gap = \"5 s\", between = \"last\" }\nzero = { at = \"0.5 mV/V\", temperature = \"21 degC\" }\n[channel.t]\ncolumn = 2\nreads = \"degC\"",
    );
    says(
        &thermal,
        &[
            "thermal output: τ = Fd (TO(T) − TO(T0))",
            "thermal output: TO(T) = −24 + 1e-5 T² microstrain, T in °F, data taken with gauge factor Fd = 2",
            "thermal output: holds from -20 °C to 80 °C",
            "temperature: T from channel t, its last sample, for no more than 5 s",
            "zero: the reading 0.5 mV/V; it was a strain of the gauges, e = strain(reading) − strain(zero)",
            "zero: temperature at zero T0 = 21 °C",
        ],
    );
    let counts = "[channel.t]\ncolumn = 1\nreads = \"count\"\nthermistor = { r25 = \"10 kohm\", beta = 3950 }\nuncertainty = \"2 count (k=1)\"\n\
        converter = { bits = 12, full_scale = \"±5 V\", coding = \"offset\" }\namplifier = { gain = 2, offset = \"1 mV\" }\n\
        circuit = { divider = \"10 kohm\", sensor = \"high\", supply = \"3.3 V\", input_resistance = \"1 Mohm\" }\nlimits = { high = \"4000 count\" }\n";
    says(
        counts,
        &[
            "reads: column 1 in count",
            "converter: 12 bits, offset binary, V = (code − 2^11) · 5 V/2^11; its end codes are saturated",
            "amplifier: out = 2 · in + 0.001 V; it does not load the bridge",
            "supply: 3.3 V for all readings",
            "divider: sensor R from the supply to the node, fixed resistor Rf = 10000 ohm, node loaded by Rin = 1000000 ohm",
            "divider: node/supply = Rf/(R + Rf + R Rf/Rin)",
            "limit: a reading above 4000 count is out-of-range",
            "uncertainty: of every reading, 2 count (k=1) (normal, coverage factor 1)",
            "assumed: limits.above: out-of-range",
        ],
    );
    let current = "[channel.t]\ncolumn = 1\nreads = \"mV\"\nplatinum = { r0 = \"100 ohm\", a = 3.9e-3, b = -5.8e-7 }\ncircuit = { current = \"1 mA\" }\nleads = { wires = 3, each = [\"1.5 ohm\", \"1 ohm\"] }\n";
    says(
        current,
        &[
            "current: 0.001 A through the sensor, R = V/I",
            "leads: three wires; the instrument takes off one lead itself, left is 1.5 ohm − 1 ohm",
            "platinum: A = 3.9e-3 /K, B = -5.8e-7 /K², C = 0e0 /K⁴ (as stated), t in °C on ITS-90",
            "assumed: platinum: range 0 °C to 850 °C",
        ],
    );
    says(
        "[channel.p]\ncolumn = 1\nreads = \"degF\"\noutput = \"degC\"\n",
        &["passed on in another unit: value = 0.5555555555555556 · reading − 17.77777777777778"],
    );
    says("[channel.p]\ncolumn = 1\nreads = \"mA\"\n", &["passed on as it is read: no sensor is named"]);
    let both = "[channel.c]\ncombine = { a = -0.5, b = 1 }\n[channel.a]\ncolumn = 1\nreads = \"mA\"\n[channel.b]\ncolumn = 2\nreads = \"mA\"\n";
    says(both, &["computed: −0.5 a + b", "gives: mA, with the shortest digits that read back exactly"]);
    // a change tells what changes, and no more
    let change =
        lines(&gauge("[[channel.g.change]]\nfrom = \"2026-03-12T10:00:00Z\"\ngauge = { gauge_factor = 2.11 }"));
    let at = change.iter().position(|l| l == "from 2026-03-12T10:00:00Z on:").unwrap();
    assert_eq!(
        change[at + 1..at + 3],
        [
            "gauge: gauge factor F = 2.11 at every temperature",
            "gives: microstrain, with the shortest digits that read back exactly"
        ]
    );
}

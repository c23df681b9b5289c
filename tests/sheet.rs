//! Measurement sheets: every key into the right chain, and every mistake told where it is.
//!
//! Expected chains are built in Rust from the same constants; expected places are marked in the sheets themselves with ‹ ›.
#![cfg(feature = "files")]

use ohmwright::chain::{Chain, Element, Limit, Network, Output, Reading, Signal, Supply, Temperature, Word};
use ohmwright::measurement::{Between, Channel, ColumnRef, Segment, Source, Uncertainty, ZeroSource};
use ohmwright::platinum::IEC_60751;
use ohmwright::sheet::{Decimal, Encoding, Separator, Sheet};
use ohmwright::signal::{
    Amplifier, Arm, Bridge, COPPER_OHM_METRES, Coding, Conductor, Converter, Difference, Divider, Driven, Each, FullScale,
    Leads, Pair, Reference, Side, Wires,
};
use ohmwright::strain::{Expansion, Gauge, ThermalOutput, Zero, ZeroMeaning, ZeroReading};
use ohmwright::thermistor::{Beta, Law, SteinhartHart};

const E: Arm = Arm::Active { factor: 1.0, driven: Driven::Along };
const NU: Arm = Arm::Active { factor: -1.0, driven: Driven::Across };

fn read(text: &str) -> Sheet {
    Sheet::read("s.toml", text).unwrap_or_else(|e| panic!("{e}"))
}

fn segment(sheet: &Sheet, channel: usize) -> &Segment {
    &sheet.measurement.channels[channel].segments().unwrap()[0]
}

fn chain(text: &str) -> Chain {
    segment(&read(text), 0).chain
}

/// One gauge of 350 Ω with these further lines.
fn gauge(more: &str) -> String {
    format!(
        "[channel.g]\ncolumn = \"CH01\"\nreads = \"mV/V\"\ngauge = {{ resistance = \"350 ohm\", gauge_factor = 2.08 }}\n\
         bridge = {{ arms = [\"e\", \"0\", \"0\", \"0\"] }}\n{more}\n"
    )
}

/// The same chain in Rust.
fn gauge_chain() -> Chain {
    let element = Element::Gauge { gauge: Gauge::new(2.08), zero: Zero::default(), limit: 0.1 };
    Chain {
        reading: Reading { signal: Signal::Ratio, exponent: -3 },
        ..Chain::new(Network::Bridge(Bridge::one_gauge(350.0)), element)
    }
}

fn with_gauge(mut chain: Chain, change: impl FnOnce(&mut Gauge, &mut Zero, &mut f64)) -> Chain {
    let Element::Gauge { gauge, zero, limit } = &mut chain.element else { panic!("no gauge") };
    change(gauge, zero, limit);
    chain
}

fn with_bridge(mut chain: Chain, change: impl FnOnce(&mut Bridge)) -> Chain {
    let Network::Bridge(bridge) = &mut chain.network else { panic!("no bridge") };
    change(bridge);
    chain
}

fn same(conductor: Conductor) -> Each {
    Each::Same(conductor)
}

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
    assert_eq!(chain(&gauge("leads = { wires = 2, each = \"1 ohm\", balanced = false }")), with(Wires::Two, ohms(1.0), false));
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
    let text = gauge("leads = { wires = 3, length = \"1240 cm\", area = \"0.25 mm2\", resistivity = \"0.0282 ohm mm2/m\" }");
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
        chain(&counts("bits = 16, full_scale = \"2500 mV\", coding = \"offset\"", "amplifier = { gain = \"250 ± 0.05 %\" }")),
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
        *zero = Zero { reading: Some(ZeroReading::AsRecorded(0.0312)), meaning: ZeroMeaning::Strain, celsius: Some(20.0) };
    });
    want.temperature = Temperature::Fixed(21.0);
    assert_eq!(segment(&sheet, 0).chain, want);
    let stated = &segment(&sheet, 0).stated;
    assert_eq!(stated.len(), 1);
    assert_eq!((stated[0].key.as_str(), stated[0].uncertainty), ("temperature", Uncertainty::Rectangular { half_width: 0.5 }));
    // defaults: degC, 2.0, every temperature
    let text = gauge("thermal_output = { coefficients = [1] }\ntemperature = \"21 degC\"\nzero = { temperature = \"20 degC\" }");
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
    assert_eq!((z.reading, z.meaning, z.celsius, source, stated), (recorded(0.0312), ZeroMeaning::Strain, None, ZeroSource::Stated, false));
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
    let volts = gauge("zero = { at = \"0.5 mV/V\" }").replace("\"mV/V\"\ng", "\"mV\"\ng").replace("\"0\"] }", "\"0\"], supply = \"2 V\" }");
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
    let own = ohmwright::platinum::Coefficients { a: 3.9e-3, b: -5.8e-7, c: -4.2e-12, range_celsius: [-50.0, 200.0], ..own };
    let text = "platinum = { r0 = \"1 kohm\", a = 3.9e-3, b = -5.8e-7, c = -4.2e-12, range = [\"-50 degC\", \"200 degC\"] }";
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
    assert_eq!(source(&text, 2), (Source::Stress { of: 0, factor: 0.205 }, "MPa".into()));
    let stated = read(&text).measurement.channels[2].stated.clone();
    assert_eq!((stated[0].key.as_str(), stated[0].value), ("material.modulus", 205e9));
    let text = format!("{two}[channel.s]\nof = \"b\"\noutput = \"GPa\"\nmaterial = {{ modulus = \"70 GPa\" }}\n");
    assert_eq!(source(&text, 2), (Source::Stress { of: 1, factor: 70.0 }, "GPa".into()));
    // temperatures: a difference in kelvin, a mean in their own unit; a combination of combinations
    let temperatures = "[channel.t]\ncolumn = 1\nreads = \"degC\"\n[channel.u]\ncolumn = 2\nreads = \"degC\"\n";
    let text = format!("{temperatures}[channel.d]\ncombine = {{ t = 1, u = -1 }}\n[channel.m]\ncombine = {{ t = 0.5, u = 0.5 }}\n[channel.dd]\ncombine = {{ d = 2 }}\n[channel.x]\ncombine = {{ m = 1, t = -1 }}\n");
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
    let deck = "[channel.deck]\ncolumn = \"R\"\nreads = \"ohm\"\nplatinum = { standard = \"IEC 60751\", r0 = \"100 ohm\" }\n";
    let side = |temperature: &str, output: &str| {
        let sheet = read(&format!("{slope}temperature = {temperature}\n{deck}{output}"));
        let segment = segment(&sheet, 0);
        assert_eq!(segment.chain.temperature, Temperature::Column);
        segment.temperature.clone().unwrap()
    };
    let s = side("{ channel = \"deck\", longest_gap = \"2 min\", between = \"last\" }", "");
    assert_eq!((s.channel, s.between, s.longest_gap, s.to_celsius, s.name.as_str()), (1, Between::Last, 120.0, (1.0, 0.0), "deck"));
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
    assert_eq!((l.separator, l.decimal, l.encoding), (Some(Separator::Semicolon), Some(Decimal::Comma), Some(Encoding::Windows1252)));
    assert_eq!((l.names_line, l.units_line, l.first_line), (Some(1), Some(2), Some(3)));
    assert_eq!(l.missing, ["-9999", "NaN", "-8888", "7999.5"]);
    assert_eq!((l.saturated.as_slice(), l.comment.as_deref()), (&["OVER".to_string()][..], Some("%")));
    assert_eq!(sheet.keep, [ColumnRef::from("load step"), ColumnRef::from(4)]);
    let sheet = read("[recording]\ninterval = \"20 ms\"\nseparator = \"tab\"\n[channel.d]\ncolumn = 1\nreads = \"mV\"\n");
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
    assert_eq!((&inputs[g.supply.unwrap()], &inputs[h.supply.unwrap()]), (&ColumnRef::from("V1"), &ColumnRef::from("V2")));
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
    for text in [format!("\u{feff}{unix}"), unix.replace('\n', "\r\n"), format!("\u{feff}{}", unix.replace('\n', "\r\n"))] {
        assert_eq!(read(&text).measurement, want);
    }
    // places do not move
    mistakes_as("\u{feff}[channel.g]\ncolumn = 1\nreads = ‹\"mVV\"›\n", &["reads = 'mVV' is no unit that a recording can have; did you mean 'mV'?"]);
    mistakes_as("[channel.g]\r\ncolumn = 1\r\nreads = ‹\"mVV\"›\r\n", &["reads = 'mVV' is no unit that a recording can have; did you mean 'mV'?"]);
}

/// Checks every message in order, each with its place: marked by ‹ › in the text.
#[track_caller]
fn mistakes_as(marked: &str, messages: &[&str]) {
    let mut text = String::new();
    let mut places = Vec::new();
    for c in marked.chars() {
        match c {
            '‹' => places.push((text.len(), 0)),
            '›' => places.last_mut().unwrap().1 = text.len(),
            c => text.push(c),
        }
    }
    assert_eq!(places.len(), messages.len(), "marks in {marked}");
    let error = Sheet::read("s.toml", &text).expect_err(marked);
    let body = text.strip_prefix('\u{feff}').unwrap_or(&text);
    let mark = text.len() - body.len();
    let said = error.to_string();
    let mut want = String::new();
    for (i, ((start, end), message)) in places.iter().zip(messages).enumerate() {
        let before = &body[..start - mark];
        let line = before.matches('\n').count() + 1;
        let column = before.rsplit('\n').next().unwrap().chars().count() + 1;
        let source = body.lines().nth(line - 1).unwrap();
        let width = line.to_string().len();
        let marked = &body[start - mark..end - mark];
        let carets = marked.lines().next().map_or(1, |l| l.chars().count()).max(1);
        if i > 0 {
            want.push('\n');
        }
        want.push_str(&format!("s.toml:{line}:{column}: {message}\n"));
        want.push_str(&format!("{:width$} |\n{line} | {source}\n", ""));
        want.push_str(&format!("{:width$} | {:column$}{}\n", "", "", "^".repeat(carets), column = column - 1));
    }
    assert_eq!(said, want, "\n--- said:\n{said}--- wanted:\n{want}");
    for message in messages {
        assert!(!message.ends_with('.') && message.chars().next().is_some_and(|c| !c.is_uppercase()), "{message}");
    }
}

//! Transducers, rosettes, warm leads, arms of their own temperatures, shunt steps and loads of bars in a sheet: every key into
//! the right chain, and every mistake told where it is.
//!
//! Expected chains are built in Rust from the same constants; expected places are marked in the sheets themselves with ‹ ›.
#![cfg(feature = "files")]

#[path = "support/sheets.rs"]
mod sheets;

use ohmwright::chain::{Chain, Element, LeadWarmth, Network, Output, Reading, Signal, Supply, Temperature};
use ohmwright::measurement::{
    Between, Give, Grids, RosetteSource, Segment, ShuntStep, Side, Source, Uncertainty, ZeroSource,
};
use ohmwright::sheet::Sheet;
use ohmwright::signal::{
    Arm, Bridge, COPPER_OHM_METRES, COPPER_PER_KELVIN, Conductor, Driven, Each, Leads, Pair, Place, Shunt, Wires,
    awg_square_millimetres,
};
use ohmwright::strain::{
    Certificate, Expansion, Grid, Material, Plane, Points, Rosette, Tee, ThermalPoints, Transducer, Transverse, Zero,
    ZeroReading,
};
use sheets::{E, chain, gauge, gauge_chain, mistakes_as, read, same, segment, with_bridge, with_gauge};

const NOT_E: Arm = Arm::Active { factor: -1.0, driven: Driven::Along };
const DECK: &str = "[channel.deck]\ncolumn = \"deck\"\nreads = \"degC\"\n";

fn cell(transducer: &str, more: &str) -> String {
    format!("[channel.f]\ncolumn = 1\nreads = \"mV/V\"\ntransducer = {{ {transducer} }}\n{more}\n")
}

const RATED: &str = "rated = \"2.0137 mV/V\", capacity = \"50 kN\"";

/// What a transducer's chain should be.
fn cell_chain(bridge: Bridge, law: Transducer, limit: f64) -> Chain {
    Chain {
        reading: Reading { signal: Signal::Ratio, exponent: -3 },
        ..Chain::new(Network::Bridge(bridge), Element::Transducer { law, zero: Zero::default(), limit })
    }
}

fn full(ohms: f64) -> Bridge {
    Bridge::equal(ohms, [E, NOT_E, E, NOT_E])
}

fn says(sheet: &Sheet, channel: usize, wanted: &[&str]) {
    let lines = sheet.describe(channel);
    for line in wanted {
        assert!(lines.iter().any(|l| l == line), "'{line}' is not among\n{}", lines.join("\n"));
    }
}

fn says_nothing_of(sheet: &Sheet, channel: usize, words: &str) {
    let lines = sheet.describe(channel);
    assert!(!lines.iter().any(|l| l.contains(words)), "{}", lines.join("\n"));
}

#[test]
fn rated_transducers() {
    let rated = |capacity| Transducer::Rated { output: 2.0137e-3, capacity };
    // without leads and load the arms do not count
    assert_eq!(chain(&cell(RATED, "")), cell_chain(full(350.0), rated(50.0), 75.0));
    assert_eq!(read(&cell(RATED, "")).measurement.channels[0].unit, "kN");
    let sheet = read(&cell(RATED, "output = \"N\"\nlargest_load = \"60 kN ± 1 %\""));
    assert_eq!(segment(&sheet, 0).chain, cell_chain(full(350.0), rated(50_000.0), 60_000.0));
    assert_eq!(sheet.measurement.channels[0].unit, "N");
    assert_eq!(segment(&sheet, 0).stated[0].key, "largest_load");
    // every kind of load; 1 lbf = 4.4482216152605 N, exact by definition
    for (capacity, unit, number) in [
        ("5 lbf", "lbf", 5.0),
        ("10 bar", "bar", 10.0),
        ("200 N m", "N m", 200.0),
        ("3 t", "t", 3.0),
        ("20 mm", "mm", 20.0),
        ("7", "", 7.0),
    ] {
        let sheet = read(&cell(&format!("rated = \"2 mV/V\", capacity = \"{capacity}\""), ""));
        let Element::Transducer { law: Transducer::Rated { capacity: got, .. }, .. } = segment(&sheet, 0).chain.element
        else {
            panic!()
        };
        assert!((got / number - 1.0).abs() < 1e-15, "{capacity}: {got}");
        assert_eq!(sheet.measurement.channels[0].unit, unit);
    }
    // leads by their run, warm, with the load of the instrument
    let text = cell(
        RATED,
        "bridge = { resistances = [\"351.9 ohm\", \"352 ohm\", \"353 ohm\", \"354 ohm\"], input_resistance = \"48.2 kohm\", sensed = true }\n\
         leads = { length = \"28.3 m\", awg = 24, temperature = \"35 degC\" }\nzero = { at = \"0.013 mV/V\" }",
    );
    let run = Pair::Run(Conductor::Run {
        metres: 28.3,
        square_millimetres: awg_square_millimetres(24).unwrap(),
        ohm_metres: COPPER_OHM_METRES,
    });
    let bridge = Bridge {
        resistances: [351.9, 352.0, 353.0, 354.0],
        input_resistance: Some(48_200.0),
        sensed: true,
        supply_leads: run,
        signal_leads: run,
        ..full(1.0)
    };
    let zero = Zero { reading: Some(ZeroReading::AsRecorded(0.013)), ..Zero::default() };
    let want = Chain {
        element: Element::Transducer { law: rated(50.0), zero, limit: 75.0 },
        lead_warmth: Some(LeadWarmth {
            coefficient: COPPER_PER_KELVIN,
            reference_celsius: 20.0,
            temperature: Temperature::Fixed(35.0),
        }),
        ..cell_chain(bridge, rated(50.0), 75.0)
    };
    assert_eq!(chain(&text), want);
    // in volts at a supply; its arms may be written out
    let volts = cell(RATED, "bridge = { arms = [\"e\", \"-e\", \"e\", \"-e\"], supply = \"10 V\" }")
        .replace("reads = \"mV/V\"", "reads = \"mV\"");
    let mut want = cell_chain(full(350.0), rated(50.0), 75.0);
    (want.reading.signal, want.supply) = (Signal::Volts, Supply::Fixed(10.0));
    assert_eq!(chain(&volts), want);
    let rows = segment(&read(&cell(RATED, "zero = { rows = 10 }")), 0).zero.clone();
    assert_eq!(rows, ZeroSource::Rows(10));
}

#[test]
fn certificates_of_transducers() {
    let certificate = |coefficients: [f64; 7], gives_output, load_scale, range| {
        Transducer::Certificate(Certificate { coefficients, gives_output, output_exponent: -3, load_scale, range })
    };
    let text = cell(
        "polynomial = [\"-0.0021 ± 0.0002\", 0.0402, 1e-6], in = \"kN\", gives = \"mV/V\", range = [\"0 kN\", \"50000 N\"]",
        "",
    );
    let law = certificate([-0.0021, 0.0402, 1e-6, 0.0, 0.0, 0.0, 0.0], true, 1.0, [0.0, 50.0]);
    let sheet = read(&text);
    assert_eq!(segment(&sheet, 0).chain, cell_chain(full(350.0), law, 75.0));
    assert_eq!(segment(&sheet, 0).stated[0].key, "transducer.polynomial[0]");
    assert!(!sheet.assumed[0].iter().any(|a| a.contains("largest_load")), "its own range is what is believed");
    // the other way round, in another unit of the result
    let text = cell(
        "polynomial = [0.05, 24.8], in = \"mV/V\", gives = \"kN\", range = [\"-50 kN\", \"50 kN\"]",
        "output = \"N\"\nlargest_load = \"20 kN\"",
    );
    let law = certificate([0.05, 24.8, 0.0, 0.0, 0.0, 0.0, 0.0], false, 1000.0, [-50.0, 50.0]);
    assert_eq!(chain(&text), cell_chain(full(350.0), law, 20_000.0));
    says(
        &read(&text),
        0,
        &[
            "transducer: load q = 0.05 + 24.8 u, u in mV/V",
            "transducer: result = 1000 N · q",
            "range: loads from -50000 N to 50000 N, as the certificate holds; read by the same polynomial from -51000 N to 51000 N, beyond it a reading is out-of-range",
            "range: loads up to 20000 N either way, beyond it a reading is out-of-range",
        ],
    );
}

#[test]
fn transducers_of_transducers() {
    // what a combination is in: the capacity's unit, the certificate's, or the stated output, never that of the readings
    let two = |more: &str| {
        format!(
            "{}[channel.h]\ncolumn = 2\nreads = \"mV/V\"\noutput = \"N\"\ntransducer = {{ polynomial = [0, 25], in = \"mV/V\", gives = \"kN\", range = [\"0 kN\", \"50 kN\"] }}\n{more}",
            cell(RATED, "")
        )
    };
    let sheet = read(&two("[channel.sum]\ncombine = { f = 1, h = 1 }\n"));
    assert_eq!(sheet.measurement.channels[2].unit, "kN");
    assert_eq!(sheet.measurement.channels[2].source, Source::Combination(vec![(0, 1.0), (1, 1e-3)]));
    let sheet = read(&two("[channel.sum]\ncombine = { h = 1, f = 1 }\n"));
    assert_eq!(sheet.measurement.channels[2].source, Source::Combination(vec![(1, 1.0), (0, 1e3)]));
    mistakes_as(
        &two("[channel.s]\nof = ‹\"f\"›\nmaterial = { modulus = \"200 GPa\" }\n"),
        &["of = 'f': stress needs a strain channel, and this one gives a force (N, kN, MN, lbf)"],
    );
}

#[test]
fn transducer_mistakes() {
    let wrong = |transducer: &str, more: &str, message: &str| mistakes_as(&cell(transducer, more), &[message]);
    let late = |more: &str, message: &str| wrong(RATED, more, message);
    mistakes_as(
        &cell("capacity = \"50 kN\"", "").replace("transducer", "‹transducer›"),
        &["transducer.rated is missing: the rated output, as in \"2.0137 mV/V\", with capacity; or a polynomial"],
    );
    mistakes_as(
        &cell("rated = \"2 mV/V\"", "").replace("transducer", "‹transducer›"),
        &["transducer.capacity is missing: the load at rated output, as in \"50 kN\""],
    );
    mistakes_as(
        &cell("rated = \"2 mV/V\", polynomial = [0, 1]", "").replace("transducer", "‹transducer›"),
        &["transducer has both rated and polynomial; it is one or the other"],
    );
    wrong(
        "rated = ‹\"2 mV\"›, capacity = \"50 kN\"",
        "",
        "transducer.rated: value '2 mV': 'mV' is the unit of a voltage (V, mV, uV); expected a voltage ratio (V/V, mV/V, uV/V)",
    );
    wrong(
        "rated = \"2 mV/V\", capacity = ‹\"50 kNm/s\"›",
        "",
        "transducer.capacity: value '50 kNm/s': unknown unit 'kNm/s'; expected a force (N, kN, MN, lbf) or a stress, pressure or modulus (Pa, kPa, MPa, GPa, bar) or a moment or torque (N m, kN m, lbf ft) or a mass (kg, g, t) or a length (m, cm, mm, km, ft) or a plain number",
    );
    wrong("rated = \"2 mV/V\", capacity = ‹\"0 kN\"›", "", "transducer.capacity must be above zero");
    wrong(
        "rated = \"2 mV/V\", ‹capcity› = \"5 kN\"",
        "",
        "unknown key 'channel.f.transducer.capcity'; did you mean 'capacity'?",
    );
    late("largest_load = ‹\"0 kN\"›", "largest_load must be above zero");
    late(
        "largest_load = ‹\"5 bar\"›",
        "largest_load: value '5 bar': 'bar' is the unit of a stress, pressure or modulus (Pa, kPa, MPa, GPa, bar); expected a force (N, kN, MN, lbf)",
    );
    late("output = ‹\"bar\"›", "output is 'bar'; this transducer gives a force (N, kN, MN, lbf)");
    late("‹temperature› = \"21 degC\"", "temperature does not belong to a transducer");
    late("‹largest_strain› = \"1 %\"", "largest_strain does not belong to a transducer");
    late(
        "‹zero› = { at = \"0 mV/V\", from = \"resistance\" }",
        "the zero of a transducer is its reading without load: it has no other meaning",
    );
    late(
        "bridge = { arms = ‹[\"e\", \"0\", \"0\", \"0\"]› }",
        "a transducer is a full bridge, [\"e\", \"-e\", \"e\", \"-e\"]: its rated output says what its arms do together",
    );
    late("bridge = { ‹poisson› = 0.3 }", "bridge.poisson does not belong to a transducer");
    // what acts on the arms needs them
    for acting in ["supply_leads = \"1 ohm\"", "signal_leads = \"1 ohm\"", "input_resistance = \"1 Mohm\""] {
        let key = acting.split(' ').next().unwrap();
        late(
            &format!("‹bridge› = {{ {acting} }}"),
            &format!("bridge.resistances is missing: the four arms of the transducer, which bridge.{key} acts on"),
        );
    }
    late(
        "‹bridge› = { supply = \"10 V\" }\nleads = { each = \"1 ohm\" }",
        "bridge.resistances is missing: the four arms of the transducer, which leads acts on",
    );
    let amplifier =
        "amplifier = { difference = { input = [\"1 kohm\", \"1 kohm\"], feedback = [\"9 kohm\", \"9 kohm\"] } }";
    for (more, acting) in [
        (amplifier, "amplifier.difference"),
        ("leads = { each = \"1 ohm\" }", "leads"),
        (
            "shunt = { from = \"1 s\", to = \"2 s\", resistor = \"59 kohm\", across = \"arm 1\", place = \"gauge\" }",
            "shunt",
        ),
    ] {
        mistakes_as(
            &cell(RATED, more).replace("[channel.f]", "[channel.‹f›]"),
            &[&format!("bridge.resistances is missing: the four arms of the transducer, which {acting} acts on")],
        );
    }
    mistakes_as(
        &cell(RATED, "").replace("[channel.f]", "[channel.‹f›]").replace("\"mV/V\"\n", "\"mV\"\n"),
        &["bridge is missing: volts need the supply they belong to, as in bridge = { supply = \"10 V\" }"],
    );
    mistakes_as(
        &cell(RATED, "").replace("reads = \"mV/V\"", "reads = ‹\"ohm\"›"),
        &["reads is 'ohm', but a transducer is read in volts, a voltage ratio or counts"],
    );
    mistakes_as(
        &cell(RATED, "gauge = { resistance = \"350 ohm\", gauge_factor = 2 }")
            .replace("transducer =", "‹transducer› ="),
        &["a channel has one sensor, and this one has gauge and transducer"],
    );
    // certificates
    let poly = |rest: &str| format!("polynomial = [0, 25], {rest}");
    let range = "range = [\"0 kN\", \"50 kN\"]";
    for (rest, message) in [
        (
            format!("in = \"mV/V\", gives = \"uV/V\", {range}"),
            "transducer: in and gives are both voltage ratios; one of them is the load",
        ),
        (
            format!("in = \"kN\", gives = \"N\", {range}"),
            "transducer: neither in nor gives is a voltage ratio such as mV/V",
        ),
        (
            format!("gives = \"mV/V\", {range}"),
            "transducer.in is missing: a unit of load or of output, as in in = \"kN\", gives = \"mV/V\"",
        ),
        (
            "in = \"mV/V\", gives = \"kN\"".to_string(),
            "transducer.range is missing: the loads that the certificate holds for, as in [\"0 kN\", \"50 kN\"]",
        ),
    ] {
        mistakes_as(&cell(&poly(&rest), "").replace("transducer", "‹transducer›"), &[message]);
    }
    wrong(
        &poly(&format!("in = ‹\"kn\"›, gives = \"mV/V\", {range}")),
        "",
        "transducer.in is 'kn'; expected a unit of load or a voltage ratio",
    );
    wrong(
        "polynomial = ‹[25]›, in = \"kN\", gives = \"mV/V\", range = [\"0 kN\", \"50 kN\"]",
        "",
        "transducer.polynomial has 1 values; expected 2 to 7",
    );
    wrong(
        &poly("in = \"kN\", gives = \"mV/V\", range = [\"0 kN\", ‹\"5 V\"›]"),
        "",
        "transducer.range[2]: value '5 V': 'V' is the unit of a voltage (V, mV, uV); expected a force (N, kN, MN, lbf)",
    );
    for zero in ["{ rows = 5 }", "{ at = \"0 mV/V\" }"] {
        wrong(
            "polynomial = ‹[0.1, 25]›, in = \"mV/V\", gives = \"kN\", range = [\"0 kN\", \"50 kN\"]",
            &format!("zero = {zero}"),
            "transducer.polynomial begins with what is there without load, and so does zero: write 0 for the one, or leave out the other",
        );
    }
    // 1 − 0.02 q is 0 at 50 kN
    for (law, message) in [
        (
            "polynomial = [0, 1, -0.01], in = \"kN\", gives = \"mV/V\", range = [\"0 kN\", \"60 kN\"]",
            "channel 'f': the polynomial of the transducer turns back within its range",
        ),
        (
            "polynomial = [0, 1], in = \"kN\", gives = \"mV/V\", range = [\"60 kN\", \"0 kN\"]",
            "channel 'f': the loads of a transducer's range must run from low to high",
        ),
        ("rated = \"0 mV/V\", capacity = \"50 kN\"", "channel 'f': a rated output of 0 sees no load"),
    ] {
        mistakes_as(&cell(law, "").replace("transducer", "‹transducer›"), &[message]);
    }
}

#[test]
fn leads_by_wire_gauge_and_warm() {
    let run = |area, ohm_metres| same(Conductor::Run { metres: 12.4, square_millimetres: area, ohm_metres });
    let with = |each, lead_warmth| {
        let mut want = with_bridge(gauge_chain(), |b| b.leads = Some(Leads { wires: Wires::Three, each }));
        want.lead_warmth = lead_warmth;
        want
    };
    let leads = |keys: &str| gauge(&format!("leads = {{ wires = 3, length = \"12.4 m\", {keys} }}"));
    for (awg, number) in
        [("26", 26), ("\"26\"", 26), ("0", 0), ("\"1/0\"", 0), ("\"2/0\"", -1), ("\"4/0\"", -3), ("40", 40)]
    {
        let area = awg_square_millimetres(number).unwrap();
        assert_eq!(chain(&leads(&format!("awg = {awg}"))), with(run(area, COPPER_OHM_METRES), None));
    }
    // 40.6824 ft are 12.4 m, by 0.3048 m
    let feet = leads("awg = 26").replace("12.4 m", "100 ft");
    let Network::Bridge(Bridge { leads: Some(Leads { each: Each::Same(Conductor::Run { metres, .. }), .. }), .. }) =
        chain(&feet).network
    else {
        panic!()
    };
    assert!((metres - 30.48).abs() < 1e-13, "{metres}");
    let warmth =
        |coefficient, reference_celsius, temperature| Some(LeadWarmth { coefficient, reference_celsius, temperature });
    let each =
        |temperature: &str| gauge(&format!("leads = {{ wires = 3, each = \"2 ohm\", temperature = {temperature} }}"));
    let ohms = same(Conductor::Ohms(2.0));
    let sheet = read(&each("\"35 degC ± 2 K\""));
    assert_eq!(segment(&sheet, 0).chain, with(ohms, warmth(COPPER_PER_KELVIN, 20.0, Temperature::Fixed(35.0))));
    assert_eq!(segment(&sheet, 0).stated[0].key, "leads.temperature");
    assert!(sheet.assumed[0].contains(&"leads.coefficient: 0.00393 /K, copper at 20 °C (IEC 60028)".to_string()));
    assert!(sheet.assumed[0].contains(&"leads.reference: their resistance is stated at 20 °C".to_string()));
    let own = each("\"35 degC\", coefficient = \"0.0040 /K\", reference = \"25 degC\"");
    assert_eq!(chain(&own), with(ohms, warmth(0.004, 25.0, Temperature::Fixed(35.0))));
    assert!(!read(&own).assumed[0].iter().any(|a| a.contains("coefficient") || a.contains("reference")));
    // from a channel
    for (temperature, between, gap) in [
        ("\"deck\"", Between::Line, 60.0),
        ("{ channel = \"deck\", longest_gap = \"5 s\", between = \"last\" }", Between::Last, 5.0),
    ] {
        let sheet = read(&format!("{}{DECK}", each(temperature)));
        let g = segment(&sheet, 0);
        assert_eq!(g.chain, with(ohms, warmth(COPPER_PER_KELVIN, 20.0, Temperature::Column)));
        let side = Side { channel: 1, between, longest_gap: gap, to_celsius: (1.0, 0.0), name: "deck".into() };
        assert_eq!((&g.lead_temperature, &g.temperature), (&Some(side), &None));
    }
    // a thermometer's leads warm as well
    let text = format!(
        "[channel.t]\ncolumn = 1\nreads = \"ohm\"\nplatinum = {{ standard = \"IEC 60751\", r0 = \"100 ohm\" }}\n\
         leads = {{ wires = 2, each = \"1 ohm\", temperature = \"deck\" }}\n{DECK}"
    );
    let sheet = read(&text);
    assert_eq!(segment(&sheet, 0).chain.lead_warmth, warmth(COPPER_PER_KELVIN, 20.0, Temperature::Column));
    assert_eq!(segment(&sheet, 0).lead_temperature.as_ref().unwrap().channel, 1);
    // a full bridge states its one conductor without wires
    let text = |leads: &str| {
        gauge(leads).replace("[\"e\", \"0\", \"0\", \"0\"]", "[\"e\", \"-e\", \"e\", \"-e\"], supply_leads = \"3 ohm\"")
    };
    let want = with_bridge(gauge_chain(), |b| {
        b.arms = [E, NOT_E, E, NOT_E];
        b.supply_leads = Pair::Same(3.0);
        b.signal_leads = Pair::Run(Conductor::Ohms(2.0));
    });
    assert_eq!(chain(&text("leads = { each = \"2 ohm\" }")), want);
    says(
        &read(&text("leads = { length = \"10 m\", area = \"0.5 mm2\" }").replace(", supply_leads = \"3 ohm\"", "")),
        0,
        &[
            // 10 m / (58 m/(ohm mm2) · 0.5 mm2) = 0.344828 ohm
            "supply leads: 0.344828 ohm and 0.344828 ohm (ρ l/A: 10 m one way, 0.5 mm2, 0.0172414 ohm mm2/m); the supply is that before them",
            "signal leads: 0.344828 ohm and 0.344828 ohm (ρ l/A: 10 m one way, 0.5 mm2, 0.0172414 ohm mm2/m)",
            "assumed: leads.material: copper, 1/58 ohm mm2/m at 20 °C (IEC 60028)",
        ],
    );
}

#[test]
fn lead_mistakes() {
    let wrong = |leads: &str, message: &str| mistakes_as(&gauge(leads), &[message]);
    let run = |keys: &str| format!("leads = {{ wires = 3, length = \"12.4 m\", {keys} }}");
    for awg in ["‹41›", "‹-1›", "‹\"5/0\"›", "‹2.5›", "‹\"thin\"›", "‹true›"] {
        wrong(
            &run(&format!("awg = {awg}")),
            "leads.awg: expected an American wire gauge: a whole number from 0 to 40, or \"1/0\" to \"4/0\"",
        );
    }
    wrong(
        &run("awg = 26, temperature = \"35 degC\", reference = ‹\"25 degC\"›"),
        "the resistivity of a material is that at 20 degC: leave leads.reference out, or state resistivity",
    );
    wrong(&run("awg = 26, area = \"0.1 mm2\"").replace("leads", "‹leads›"), "leads: give either area or awg");
    wrong("‹leads› = { wires = 3, each = \"1 ohm\", awg = 26 }", "leads: give either each, or length and area");
    wrong(
        &run("resistivity = \"0.49 ohm mm2/m\", area = \"0.25 mm2\", temperature = \"35 degC\"")
            .replace("leads", "‹leads›"),
        "leads.coefficient is missing: what a kelvin does to wires of this resistivity, as in \"0.0040 /K\"",
    );
    wrong(
        "leads = { wires = 3, each = \"1 ohm\", temperature = ‹\"dek\"› }\n[channel.deck]\ncolumn = 2\nreads = \"degC\"",
        "there is no channel 'dek'; did you mean 'deck'?",
    );
    wrong(
        "leads = { wires = 3, each = \"1 ohm\", temperature = ‹\"35 ohm\"› }",
        "leads.temperature: value '35 ohm': 'ohm' is the unit of a resistance (ohm, kohm, Mohm); expected a temperature (degC, K, degF)",
    );
    wrong(
        "leads = { wires = 3, each = \"1 ohm\", temperature = ‹35› }",
        "leads.temperature is a number; expected a value such as \"21 degC\", a channel, or { channel = ..., longest_gap = ... }",
    );
    wrong(
        "leads = { wires = 3, each = \"1 ohm\", ‹coefficient› = \"0.004 /K\" }",
        "channel.g.leads.coefficient has no meaning here: nothing in this channel uses it",
    );
    wrong(
        "leads = { wires = 3, each = \"1 ohm\", temperature = \"35 degC\", coefficient = ‹\"0.4\"› }",
        "leads.coefficient: value '0.4' has no unit; expected a coefficient per kelvin (/K, %/100K, ppm/K)",
    );
    wrong(
        "‹leads› = { wires = 3, each = \"1 ohm\", temperature = \"-10 degC\", coefficient = \"0.1 /K\" }",
        "channel 'g': resistance of the leads at their temperature -2 is not above 0",
    );
    mistakes_as(
        &gauge("‹leads› = { each = \"1 ohm\" }").replace(
            "[\"e\", \"0\", \"0\", \"0\"]",
            "[\"e\", \"-e\", \"e\", \"-e\"], supply_leads = \"3 ohm\", signal_leads = \"3 ohm\"",
        ),
        &["leads: bridge.supply_leads and bridge.signal_leads have said what every wire is"],
    );
    mistakes_as(&gauge("‹leads› = { each = \"1 ohm\" }"), &["leads.wires is missing: 2 or 3"]);
}

#[test]
fn transverse_sensitivity_of_one_grid() {
    let sheet = read(&gauge("transverse = { sensitivity = \"0.7 %\", strain_ratio = \"-0.3 ± 0.02\" }"));
    let want = Chain { transverse: Some(Transverse { sensitivity: 0.007, strain_ratio: -0.3 }), ..gauge_chain() };
    assert_eq!(segment(&sheet, 0).chain, want);
    assert_eq!(segment(&sheet, 0).stated[0].key, "transverse.strain_ratio");
    assert_eq!(chain(&gauge("transverse = { sensitivity = 0.007, strain_ratio = -0.3 }")), want);
    says(
        &sheet,
        0,
        &[
            "transverse: e = ê (1 − ν0 K)/(1 + K · ratio), ê what the grid indicates, ν0 = 0.285, K = 0.7 %, strain across over strain along = -0.3",
        ],
    );
    let wrong = |keys: &str, message: &str| mistakes_as(&gauge(keys), &[message]);
    wrong(
        "‹transverse› = { strain_ratio = -0.3 }",
        "transverse.sensitivity is missing: the transverse sensitivity K, as in \"0.4 %\"",
    );
    wrong(
        "‹transverse› = { sensitivity = \"0.7 %\" }",
        "transverse.strain_ratio is missing: strain across the grid over strain along it; minus Poisson's ratio in a uniaxial state: a plain number",
    );
    wrong(
        "‹transverse› = { sensitivity = \"70 %\", strain_ratio = -0.3 }",
        "channel 'g': transverse sensitivity 0.7 is outside -0.5..=0.5",
    );
    wrong("transverse = ‹\"0.7 %\"›", "transverse is text; expected a table, as in { key = value }");
    wrong(
        "transverse = { sensitivity = ‹\"0.7 mV\"›, strain_ratio = -0.3 }",
        "transverse.sensitivity: value '0.7 mV': 'mV' is the unit of a voltage (V, mV, uV); expected a strain (microstrain, %, strain) or a plain number",
    );
}

#[test]
fn thermal_output_as_points() {
    let text = gauge(
        "thermal_output = { points = [[-20, -80.5], [0, -31], [24, 0], [60.5, 12.25]], gauge_factor = 2.1, scatter = \"0.27 um/m/°C\" }\n\
         temperature = \"21 degC\"\nzero = { temperature = \"20 degC\" }",
    );
    let sheet = read(&text);
    let points = Points::new(&[[-20.0, -80.5], [0.0, -31.0], [24.0, 0.0], [60.5, 12.25]]).unwrap();
    let mut want = with_gauge(gauge_chain(), |gauge, zero, _| {
        gauge.thermal_points = Some(ThermalPoints { points, gauge_factor: 2.1 });
        zero.celsius = Some(20.0);
    });
    want.temperature = Temperature::Fixed(21.0);
    assert_eq!(segment(&sheet, 0).chain, want);
    let stated = &segment(&sheet, 0).stated[0];
    assert_eq!(stated.key, "thermal_output.scatter");
    assert_eq!(stated.uncertainty, Uncertainty::Rectangular { half_width: 0.27e-6 });
    let spread = text.replace("0.27 um/m/°C", "±0.27 ppm/K (k=2)");
    assert_eq!(
        segment(&read(&spread), 0).stated[0].uncertainty,
        Uncertainty::Expanded { expanded: 0.27e-6, coverage_factor: 2.0 }
    );
    says(
        &sheet,
        0,
        &[
            "thermal output: TO(T) in microstrain through the points -20 °C -80.5, 0 °C -31, 24 °C 0, 60.5 °C 12.25, joined by a monotone cubic, data taken with gauge factor Fd = 2.1",
            "thermal output: holds from -20 °C to 60.5 °C",
            "uncertainty: thermal_output.scatter = 0.27 um/m/°C (half-width, rectangular)",
            "assumed: thermal_output: points in degC",
        ],
    );
    // °F by definition: 32 °F = 0 °C, 212 °F = 100 °C
    let Element::Gauge { gauge: g, .. } =
        chain(&text.replace("[[-20, -80.5], [0, -31], [24, 0], [60.5, 12.25]]", "[[32, 1], [212, 2]], in = \"degF\""))
            .element
    else {
        panic!()
    };
    assert_eq!(g.thermal_points.unwrap().points, Points::new(&[[0.0, 1.0], [100.0, 2.0]]).unwrap());
    let wrong = |points: &str, message: &str| {
        mistakes_as(
            &gauge(&format!(
                "thermal_output = {{ points = {points} }}\ntemperature = \"21 degC\"\nzero = {{ temperature = \"20 degC\" }}"
            )),
            &[message],
        );
    };
    wrong("‹[[0, 1]]›", "thermal_output.points: number of points 1 is outside 2..=24");
    wrong("‹[[0, 1], [0, 2]]›", "thermal_output.points: the temperatures of the points must rise");
    wrong("[[0, 1], ‹[2]›]", "thermal_output.points[2] has 1 numbers; expected 2");
    wrong("[[0, 1], ‹5›]", "thermal_output.points[2] is a number; expected a row of 2 numbers");
    wrong("‹5›", "thermal_output.points is a number; expected a list of rows, as in [[0, -31.2], [24, 0.4]]");
    wrong(
        "[[0, 1], [2, ‹\"3 V\"›]]",
        "thermal_output.points[2]: value '3 V': 'V' is the unit of a voltage (V, mV, uV); expected a plain number",
    );
    wrong(
        "[[0, 1], [50, 3]], ‹range› = [\"0 degC\", \"1 degC\"]",
        "channel.g.thermal_output.range has no meaning here: nothing in this channel uses it",
    );
    wrong(
        "[[0, 1], [50, 3]], scatter = ‹\"0.3 microstrain\"›",
        "thermal_output.scatter: value '0.3 microstrain': 'microstrain' is the unit of a strain (microstrain, %, strain); expected a coefficient per kelvin (/K, %/100K, ppm/K)",
    );
    mistakes_as(
        &gauge("‹thermal_output› = { points = [[0, 1], [2, 3]], coefficients = [1] }"),
        &["thermal_output has both coefficients and points; it is one or the other"],
    );
    mistakes_as(
        &gauge(
            "thermal_output = { points = [[0, 1], [9, 3]] }\n‹temperature› = \"21 degC\"\nzero = { temperature = \"5 degC\" }",
        ),
        &["channel 'g': temperature of the gauge 21 °C is outside 0..=9 °C"],
    );
    // a channel's own points replace the polynomial that is common
    let common = "[common.x]\nthermal_output = { coefficients = [1, 2], range = [\"0 degC\", \"9 degC\"], gauge_factor = 2.1, in = \"degC\" }\n";
    let own = gauge(
        "like = \"x\"\nthermal_output = { points = [[0, 1], [2, 3]] }\ntemperature = \"1 degC\"\nzero = { temperature = \"2 degC\" }",
    );
    let Element::Gauge { gauge: g, .. } = chain(&format!("{common}{own}")).element else { panic!() };
    assert!(g.thermal_output.is_none() && g.thermal_points.unwrap().gauge_factor == 2.1);
}

#[test]
fn temperatures_of_arms_and_of_the_zero() {
    let thermal = "expansion = { specimen = \"11e-6/K\", data = \"12e-6/K\" }\n";
    let text = |temperatures: &str, more: &str| {
        format!(
            "{}{DECK}[channel.air]\ncolumn = \"air\"\nreads = \"K\"\n",
            gauge(&format!("{thermal}{more}")).replace(
                "[\"e\", \"0\", \"0\", \"0\"]",
                &format!("[\"e\", \"dummy\", \"0\", \"0\"], temperatures = {temperatures}")
            )
        )
    };
    let want = |temperature, arm_temperatures, zero: Zero| {
        let mut want = with_bridge(gauge_chain(), |b| b.arms = [E, Arm::Dummy, Arm::Fixed, Arm::Fixed]);
        want = with_gauge(want, |gauge, z, _| {
            gauge.expansion = Some(Expansion { specimen: 11e-6, data: 12e-6 });
            *z = zero;
        });
        (want.temperature, want.arm_temperatures) = (temperature, arm_temperatures);
        want
    };
    let (none, column, fixed) = (Temperature::None, Temperature::Column, Temperature::Fixed);
    let at = |own: [Option<f64>; 4], celsius| Zero { celsius, arm_celsius: own, ..Zero::default() };
    // a dummy in the air
    let sheet = read(&text(
        "[\"\", \"air\", \"\", \"\"]",
        "temperature = \"deck\"\nzero = { temperature = \"20 degC\", temperatures = [\"\", \"15 degC ± 1 K\", \"\", \"\"] }",
    ));
    let g = segment(&sheet, 0);
    assert_eq!(g.chain, want(column, [none, column, none, none], at([None, Some(15.0), None, None], Some(20.0))));
    let name = |side: &Option<Side>| side.as_ref().map(|s| (s.channel, s.to_celsius));
    assert_eq!(name(&g.temperature), Some((1, (1.0, 0.0))));
    assert_eq!(g.arm_temperatures.each_ref().map(name), [None, Some((2, (1.0, -273.15))), None, None]);
    assert_eq!(g.stated[0].key, "zero.temperatures[2]");
    says(
        &sheet,
        0,
        &[
            "zero: temperature at zero T0 = 20 °C",
            "zero: temperature of arm 2 at zero = 15 °C",
            "temperature: T from channel deck, on the straight line between samples no more than 60 s apart",
            "temperature of arm 2: T from channel air, on the straight line between samples no more than 60 s apart",
        ],
    );
    // every gauge has its own: nothing is asked of the others, and a fixed one is the same at zero
    let sheet = read(&text(
        "[\"deck\", \"40 degC\", \"\", \"\"]",
        "zero = { at = \"0.1 mV/V\", temperatures = [\"20 degC\", \"\", \"\", \"\"] }",
    ));
    let zero = Zero { reading: Some(ZeroReading::AsRecorded(0.1)), ..at([Some(20.0), None, None, None], None) };
    assert_eq!(segment(&sheet, 0).chain, want(none, [column, fixed(40.0), none, none], zero));
    says(&sheet, 0, &["zero: temperature of arm 1 at zero = 20 °C", "zero: temperature of arm 2 at zero = 40 °C"]);
    says_nothing_of(&sheet, 0, "T0 =");
    // a window finds them all
    let sheet = read(&text("[\"deck\", \"air\", \"\", \"\"]", "zero = { rows = 5 }"));
    assert_eq!(segment(&sheet, 0).chain, want(none, [column, column, none, none], Zero::default()));
    says(&sheet, 0, &["zero: temperature of arm 2 at zero = the mean temperature of the same rows"]);
    // temperatures alone
    let sheet = read(&text(
        "[\"deck\", \"deck\", \"\", \"\"]",
        "zero = { temperatures = [\"1 degC\", \"2 degC\", \"\", \"\"] }",
    ));
    assert_eq!(
        segment(&sheet, 0).chain,
        want(none, [column, column, none, none], at([Some(1.0), Some(2.0), None, None], None))
    );
    // a gauge that does not feel temperature waits for no channel
    let plain = text("[\"deck\", \"air\", \"\", \"\"]", "").replace(thermal, "");
    assert_eq!(segment(&read(&plain), 0).sides(), [None; 6]);
    // leads at zero
    let leads = |temperature: &str, zero: &str| {
        format!(
            "{}{DECK}",
            gauge(&format!(
                "leads = {{ wires = 3, each = \"2 ohm\", temperature = {temperature} }}\nzero = {{ {zero} }}"
            ))
        )
    };
    let lead_celsius = |text: &str| {
        let Element::Gauge { zero, .. } = chain(text).element else { panic!() };
        zero.lead_celsius
    };
    let stated = leads("\"deck\"", "at = \"0.1 mV/V\", lead_temperature = \"12 degC ± 1 K\"");
    assert_eq!(lead_celsius(&stated), Some(12.0));
    assert_eq!(segment(&read(&stated), 0).stated[0].key, "zero.lead_temperature");
    says(&read(&stated), 0, &["zero: temperature of the leads at zero = 12 °C"]);
    assert_eq!(lead_celsius(&leads("\"deck\"", "rows = 5, lead_temperature = \"12 degC\"")), Some(12.0));
    let assumed = "assumed: zero.lead_temperature: the one at which the resistance of the leads is stated";
    let not_stated = read(&leads("\"deck\"", "at = \"0.1 mV/V\""));
    says(&not_stated, 0, &[assumed, "zero: temperature of the leads at zero = 20 °C"]);
    let fixed = read(&leads("\"31 degC\"", "at = \"0.1 mV/V\""));
    says(&fixed, 0, &["zero: temperature of the leads at zero = 31 °C"]);
    says_nothing_of(&fixed, 0, assumed);
    let window = read(&leads("\"deck\"", "rows = 5"));
    says(&window, 0, &["zero: temperature of the leads at zero = the mean temperature of the same rows"]);
    says_nothing_of(&window, 0, assumed);
    // refusals
    let wrong = |temperatures: &str, more: &str, messages: &[&str]| mistakes_as(&text(temperatures, more), messages);
    wrong(
        "‹[\"deck\", \"air\"]›",
        "zero = { rows = 5 }",
        &["bridge.temperatures has 2 entries; a bridge has four arms (\"\" = as the gauge)"],
    );
    wrong(
        "[\"deck\", \"deck\", ‹\"air\"›, \"\"]",
        "zero = { rows = 5 }",
        &["bridge.temperatures[3]: this arm is a fixed resistor, which feels no temperature"],
    );
    wrong(
        "[\"deck\", ‹\"aire\"›, \"\", \"\"]",
        "zero = { rows = 5 }",
        &["there is no channel 'aire'; did you mean 'air'?"],
    );
    wrong(
        "[\"deck\", ‹\"g\"›, \"\", \"\"]",
        "zero = { rows = 5 }",
        &["channel 'g' gives a strain (microstrain, %, strain), not a temperature"],
    );
    wrong(
        "[\"deck\", ‹\"20 V\"›, \"\", \"\"]",
        "zero = { rows = 5 }",
        &[
            "bridge.temperatures[2]: value '20 V': 'V' is the unit of a voltage (V, mV, uV); expected a temperature (degC, K, degF)",
        ],
    );
    wrong(
        "[\"deck\", \"air\", \"\", \"\"]",
        "‹zero› = { at = \"0 mV/V\", temperatures = [\"20 degC\", \"\", \"\", \"\"] }",
        &[
            "zero.temperatures is missing: of the arms whose temperature is a channel, when the zero was taken, as in [\"20 degC\", \"\", \"\", \"\"]",
        ],
    );
    wrong(
        "[\"deck\", \"\", \"\", \"\"]",
        "temperature = \"air\"\n‹zero› = { at = \"0 mV/V\", temperatures = [\"20 degC\", \"\", \"\", \"\"] }",
        &["zero.temperature is missing: the temperature at which the zero was taken, which thermal output counts from"],
    );
    wrong(
        "[\"deck\", \"air\", \"\", \"\"]",
        "zero = { rows = 5, temperatures = ‹[\"20 degC\"]› }",
        &["zero.temperatures has 1 entries; a bridge has four arms (\"\" = as the gauge)"],
    );
    wrong(
        "[\"deck\", \"air\", \"\", \"\"]",
        "zero = { rows = 5, temperatures = [\"\", \"\", ‹\"20 degC\"›, \"\"] }",
        &["zero.temperatures[3]: this arm has no temperature of its own in bridge.temperatures"],
    );
    wrong(
        "[\"deck\", \"air\", \"\", \"\"]",
        "zero = { rows = 5, temperatures = [\"\", ‹\"20\"›, \"\", \"\"] }",
        &["zero.temperatures[2]: value '20' has no unit; expected a temperature (degC, K, degF)"],
    );
    mistakes_as(
        &gauge("zero = { at = \"0 mV/V\", ‹lead_temperature› = \"20 degC\" }"),
        &["zero.lead_temperature has no meaning without leads.temperature: the leads keep their resistance"],
    );
}

#[test]
fn shunt_steps() {
    let shunt = |keys: &str, more: &str| gauge(&format!("{more}\nshunt = {{ {keys} }}"));
    let all = "from = \"10 s\", to = 2026-05-09T06:30:25Z, resistor = \"59.88 kohm ± 0.1 %\", across = \"arm 2\", place = \"instrument\"";
    let sheet = read(&shunt(all, ""));
    let step = segment(&sheet, 0).shunt.clone().unwrap();
    let ShuntStep { from, to, shunt: what, expected, tolerance } = step;
    assert_eq!((from.text.as_str(), to.text.as_str()), ("10 s", "2026-05-09T06:30:25Z"));
    assert_eq!(what, Shunt { arm: 2, ohms: 59_880.0, place: Place::Instrument });
    assert_eq!((expected, tolerance), (None, 0.01));
    assert_eq!(segment(&sheet, 0).stated[0].key, "shunt.resistor");
    assert_eq!(segment(&sheet, 0).chain, gauge_chain(), "the shunt is no part of the chain");
    says(
        &sheet,
        0,
        &[
            "shunt: 59880 ohm across arm 2 at the instrument from 10 s to 2026-05-09T06:30:25Z; expected is what it simulates in this bridge, within 1 %",
            "assumed: shunt.tolerance: 1 % of the step",
        ],
    );
    // expected in the unit of the channel
    let sheet = read(&shunt(
        &format!(
            "{}, expected = \"0.15 %\", tolerance = \"0.7 %\"",
            all.replace("instrument", "gauge").replace("arm 2", "arm 4")
        ),
        "",
    ));
    let step = segment(&sheet, 0).shunt.clone().unwrap();
    assert_eq!((step.shunt.arm, step.shunt.place, step.tolerance), (4, Place::Gauge, 0.007));
    assert!((step.expected.unwrap() - 1500.0).abs() < 1e-9);
    says(
        &sheet,
        0,
        &[
            "shunt: 59880 ohm across arm 4 at the gauge from 10 s to 2026-05-09T06:30:25Z; expected 1500 microstrain, within 0.7 %",
        ],
    );
    // a change keeps the step or brings its own
    let text = shunt(all, "") + "[[channel.g.change]]\nfrom = \"20 s\"\nshunt = { across = \"arm 1\" }\n";
    let sheet = read(&text);
    let arms: Vec<u8> =
        sheet.measurement.channels[0].segments().unwrap().iter().map(|s| s.shunt.as_ref().unwrap().shunt.arm).collect();
    assert_eq!(arms, [2, 1]);
    let all = "from = \"1 s\", to = \"2 s\", resistor = \"59 kohm\", across = \"arm 2\", place = \"gauge\"";
    let wrong = |from: &str, by: &str, message: &str| {
        assert!(all.contains(from));
        mistakes_as(&shunt(&all.replace(from, by), ""), &[message]);
    };
    wrong(
        "\"arm 2\"",
        "‹\"arm 5\"›",
        "shunt.across is 'arm 5'; expected \"arm 1\" or \"arm 2\" or \"arm 3\" or \"arm 4\"; did you mean \"arm 1\"?",
    );
    wrong(
        "\"gauge\"",
        "‹\"gage\"›",
        "shunt.place is 'gage'; expected \"gauge\" or \"instrument\"; did you mean \"gauge\"?",
    );
    wrong("\"59 kohm\"", "‹\"0 kohm\"›", "shunt.resistor must be above zero");
    wrong(
        "\"59 kohm\"",
        "‹\"59 k\"›",
        "shunt.resistor: value '59 k': unknown unit 'k'; expected a resistance (ohm, kohm, Mohm)",
    );
    wrong("place", "expected = ‹\"0 microstrain\"›, place", "shunt.expected must not be zero: a shunt makes a step");
    wrong(
        "place",
        "expected = ‹\"1 mV/V\"›, place",
        "shunt.expected: value '1 mV/V': 'mV/V' is the unit of a voltage ratio (V/V, mV/V, uV/V); expected a strain (microstrain, %, strain)",
    );
    wrong("place", "tolerance = ‹\"0 %\"›, place", "shunt.tolerance must be above zero");
    wrong(
        "place",
        "‹resistance› = \"1 ohm\", place",
        "unknown key 'channel.g.shunt.resistance'; known here: from, to, resistor, across, place, expected, tolerance",
    );
    for (key, what) in [
        ("from", "the moment from which the shunt was connected"),
        ("to", "the moment until which it was"),
        ("resistor", "its resistance"),
        ("across", "the arm, as in \"arm 1\""),
        ("place", "\"gauge\" or \"instrument\""),
    ] {
        let kept: Vec<&str> = all.split(", ").filter(|k| !k.starts_with(&format!("{key} "))).collect();
        mistakes_as(
            &shunt(&kept.join(", "), "").replace("shunt =", "‹shunt› ="),
            &[&format!("shunt.{key} is missing: {what}")],
        );
    }
    mistakes_as(
        &format!(
            "[channel.t]\ncolumn = 1\nreads = \"ohm\"\nplatinum = {{ standard = \"IEC 60751\", r0 = \"100 ohm\" }}\n‹shunt› = {{ {all} }}\n"
        ),
        &["a shunt goes across an arm of a bridge: this channel has no gauge or transducer"],
    );
}

/// Strain channels a, b, c, d in microstrain and a rosette of them.
fn rosette(keys: &str) -> String {
    let channels: String =
        "abcd".chars().map(|c| format!("[channel.{c}]\ncolumn = \"{c}\"\nreads = \"microstrain\"\n")).collect();
    format!("{channels}[channel.e]\ncolumn = \"e\"\nreads = \"%\"\n[rosette.R]\n{keys}\n")
}

const THREE: &str = "grids = { a = \"a\", b = \"b\", c = \"c\" }\nangles = [\"0 deg\", \"45 deg\", \"90 deg\"]\n";

fn sources(text: &str) -> Vec<RosetteSource> {
    let all = read(text).measurement.channels;
    all.iter().filter_map(|c| if let Source::Rosette(r) = &c.source { Some((**r).clone()) } else { None }).collect()
}

#[test]
fn rosettes() {
    let grid = |degrees, sensitivity| Grid { degrees, sensitivity };
    let material = Material::new(70e9, 0.33).unwrap();
    let text = rosette(&format!(
        "{THREE}transverse = [\"0.4 %\", \"0.6 ± 0.1 %\", 0.002]\nmaterial = {{ modulus = \"70 GPa ± 2 %\", poisson = 0.33 }}\n\
         plane = \"strain\"\ndecimals = 2\nshow = false\ngive = [\"direction\", \"shear-max\", \"stress-max\", \"strain 30.5 deg\", \"stress -30°\"]"
    ));
    let text = text.replace("\"0.6 ± 0.1 %\"", "\"0.6 % ± 0.1 %\"");
    let sheet = read(&text);
    let common = RosetteSource {
        channels: vec![(0, 1e-6), (1, 1e-6), (2, 1e-6)],
        grids: Grids::Three(Rosette::new([grid(0.0, 0.004), grid(45.0, 0.006), grid(90.0, 0.002)]).unwrap()),
        fourth: None,
        material: Some((material, Plane::Strain)),
        give: Give::Direction,
        scale: 1.0,
    };
    let want = [
        (Give::Direction, 1.0, "R direction", "deg"),
        (Give::ShearMax, 1e6, "R shear-max", "shear microstrain"),
        (Give::StressMax, 1e-6, "R stress-max", "MPa"),
        (Give::StrainAlong(30.5), 1e6, "R strain 30.5 deg", "microstrain"),
        (Give::StressAlong(-30.0), 1e-6, "R stress -30°", "MPa"),
    ];
    for (channel, (give, scale, name, unit)) in sheet.measurement.channels[5..].iter().zip(want) {
        let source = Source::Rosette(Box::new(RosetteSource { give, scale, ..common.clone() }));
        assert_eq!(channel.source, source);
        assert_eq!((channel.name.as_str(), channel.unit.as_str()), (name, unit));
        assert_eq!((channel.decimals, channel.show), (Some(2), false));
        let keys: Vec<&str> = channel.stated.iter().map(|s| s.key.as_str()).collect();
        assert_eq!(keys, ["transverse[2]", "material.modulus"]);
    }
    assert_eq!(sheet.measurement.channels.len(), 10);
    // units of results, by what they are
    let units = |give: &str| {
        let text =
            rosette(&format!("{THREE}material = {{ modulus = \"70 GPa\", poisson = 0.33 }}\ngive = [\"{give}\"]"));
        read(&text).measurement.channels[5].unit.clone()
    };
    for give in ["principal-max", "principal-min", "strain-x", "strain-y", "strain 1 deg"] {
        assert_eq!(units(give), "microstrain");
    }
    for give in ["shear-max", "shear-xy"] {
        assert_eq!(units(give), "shear microstrain");
    }
    for give in
        ["stress-max", "stress-min", "stress-x", "stress-y", "shear-stress-xy", "von-mises", "tresca", "stress 1 deg"]
    {
        assert_eq!(units(give), "MPa");
    }
    // one sensitivity for all, a grid in per cent, a fourth grid, one text to give
    let text = rosette(
        "grids = { a = \"e\", b = \"b\", c = \"c\", d = \"d\" }\nangles = [\"0 deg\", \"60 deg\", \"120 deg\", \"90 deg\"]\ntransverse = \"1 %\"\ngive = \"consistency\"",
    );
    let want = RosetteSource {
        channels: vec![(4, 1e-2), (1, 1e-6), (2, 1e-6)],
        grids: Grids::Three(Rosette::new([0.0, 60.0, 120.0].map(|d| grid(d, 0.01))).unwrap()),
        fourth: Some((3, 1e-6, grid(90.0, 0.01))),
        material: None,
        give: Give::Consistency,
        scale: 1e6,
    };
    assert_eq!(sources(&text), [want]);
    // a tee, either way round and any number of turns
    for (second, first) in [(120.0, 30.0), (-60.0, 30.0), (300.0, 30.0)] {
        let text = rosette(&format!(
            "grids = {{ a = \"a\", b = \"b\" }}\nangles = [\"{first} deg\", \"{second} deg\"]\ntransverse = [\"1 %\", \"2 %\"]\ngive = [\"strain-x\"]"
        ));
        let source = &sources(&text)[0];
        assert_eq!(source.grids, Grids::Two(Tee::new(grid(30.0, 0.01), 0.02).unwrap()));
        assert_eq!(source.channels.len(), 2);
        assert!(
            read(&text).assumed[5].contains(&"angles: the two grids lie along the principal directions".to_string())
        );
    }
}

#[test]
fn describe_a_rosette() {
    let text = rosette(&format!(
        "{THREE}transverse = \"0.7 %\"\nmaterial = {{ modulus = \"70 GPa\", poisson = 0.33 }}\ngive = [\"direction\", \"tresca\"]"
    ));
    let sheet = read(&text);
    let lines = |i: usize| sheet.describe(i).join("\n");
    assert_eq!(
        lines(5),
        "rosette: a at 0°, K = 0.7 %; b at 45°, K = 0.7 %; c at 90°, K = 0.7 %\n\
         rosette: ê (1 − ν0 K) = e(θ) + K e(θ + 90°) for each grid, ê what it indicates, θ anticlockwise from x, ν0 = 0.285; solved together\n\
         material: E = 70 GPa, ν = 0.33, plane stress (a free surface)\n\
         gives: the direction from x to the larger principal strain, anticlockwise, in (−90°, 90°]; ambiguous where every direction is principal\n\
         gives: deg, with the shortest digits that read back exactly\n\
         assumed: transverse: ν0 = 0.285, Poisson's ratio of the beam on which gauge factors are calibrated\n\
         assumed: plane: stress, a free surface"
    );
    assert!(lines(6).contains(
        "gives: the equivalent stress of Tresca: the largest difference of two principal stresses, σz with them\n"
    ));
    let text = rosette(
        "grids = { a = \"a\", b = \"b\", c = \"c\", d = \"d\" }\nangles = [\"0 deg\", \"45 deg\", \"90 deg\", \"135 deg\"]\ngive = [\"consistency\"]",
    );
    says(
        &read(&text),
        5,
        &[
            "fourth grid: d at 135°, K = 0 %",
            "gives: what the fourth grid indicates, less what it should by the other three",
            "assumed: transverse: no transverse sensitivity",
        ],
    );
    let text =
        rosette("grids = { a = \"a\", b = \"b\" }\nangles = [\"0 deg\", \"90 deg\"]\ngive = [\"principal-max\"]");
    says(
        &read(&text),
        5,
        &[
            "tee: a at 0°, K = 0 %; b at 90°, K = 0 %",
            "tee: ê (1 − ν0 K) = e(θ) + K e(θ + 90°) for each grid, ê what it indicates, ν0 = 0.285; their directions are taken as the principal ones, without shear",
        ],
    );
}

#[test]
fn rosette_mistakes() {
    let wrong = |keys: &str, message: &str| mistakes_as(&rosette(keys), &[message]);
    let give = "give = [\"direction\"]\n";
    let grids = "grids are a and b, a tee at right angles; or a, b and c; or these and d, a fourth to check them";
    for keys in
        ["a = \"a\"", "b = \"b\", c = \"c\"", "a = \"a\", b = \"b\", d = \"d\"", "a = \"a\", c = \"c\", d = \"d\""]
    {
        wrong(&format!("‹grids› = {{ {keys} }}\nangles = [\"0 deg\", \"90 deg\"]\n{give}"), grids);
    }
    wrong(
        &format!("grids = {{ a = \"a\", b = \"b\", c = ‹\"b\"› }}\n{give}"),
        "grids.c = 'b': this channel is another grid already",
    );
    wrong(&format!("grids = {{ a = \"a\", b = ‹\"bb\"› }}\n{give}"), "there is no channel 'bb'; did you mean 'b'?");
    wrong(&format!("grids = {{ a = \"a\", b = ‹5› }}\n{give}"), "grids.b is a number; expected text in quotes");
    wrong(
        &format!("grids = {{ a = \"a\", ‹e› = \"b\" }}\n{give}"),
        "unknown key 'rosette.R.grids.e'; known here: a, b, c, d",
    );
    mistakes_as(
        &rosette(&format!("{THREE}{give}"))
            .replace("\"b\"\nreads = \"microstrain\"", "\"b\"\nreads = \"mV\"")
            .replace("b = \"b\"", "b = ‹\"b\"›"),
        &["grids.b = 'b': a grid is a strain channel, and this one gives a voltage (V, mV, uV)"],
    );
    mistakes_as(
        &format!(
            "{}[rosette.R]\ngrids = {{ a = ‹\"g\"›, b = \"g\" }}\n{give}",
            gauge("transverse = { sensitivity = \"1 %\", strain_ratio = 0 }")
        ),
        &["grids.a = 'g': this channel has a transverse of its own, but a rosette needs what its grids indicate"],
    );
    mistakes_as(
        &rosette(give).replace("[rosette.R]", "[rosette.‹R›]"),
        &["grids is missing: the channels of the grids, as in { a = \"r1a\", b = \"r1b\", c = \"r1c\" }"],
    );
    // its results feed no channel
    for keys in ["combine = { ‹\"R direction\"› = 1 }", "of = ‹\"R direction\"›\nmaterial = { modulus = \"70 GPa\" }"]
    {
        mistakes_as(
            &rosette(&format!("{THREE}{give}[channel.x]\n{keys}\n")),
            &[
                "'R direction' is a result of a rosette, and no channel is computed from one; here stand the channels of the sheet (a, b, c, d, e, x), and what the rosette itself can give, stresses too, stands in its give",
            ],
        );
    }
    let three = "grids = { a = \"a\", b = \"b\", c = \"c\" }\n";
    mistakes_as(
        &rosette(&format!("{three}{give}")).replace("[rosette.R]", "[rosette.‹R›]"),
        &["angles is missing: the angle of each grid from x, anticlockwise, as in [\"0 deg\", \"45 deg\", \"90 deg\"]"],
    );
    mistakes_as(
        &rosette(THREE).replace("[rosette.R]", "[rosette.‹R›]"),
        &["give is missing: what it shall give, as in [\"principal-max\", \"principal-min\", \"direction\"]"],
    );
    mistakes_as(
        &rosette(&format!("{THREE}give = []")).replace("[rosette.R]", "[rosette.‹R›]"),
        &["give is missing: at least one of what a rosette gives, as in [\"principal-max\", \"direction\"]"],
    );
    wrong(&format!("{three}angles = ‹[\"0 deg\", \"45 deg\"]›\n{give}"), "angles has 2 values; expected 3");
    wrong(
        &format!("{three}angles = [\"0 deg\", ‹\"45\"›, \"90 deg\"]\n{give}"),
        "angles[2]: value '45' has no unit; expected an angle (deg, rad)",
    );
    wrong(
        &format!("{three}angles = ‹[\"0 deg\", \"45 deg\", \"180 deg\"]›\n{give}"),
        "angles: the grids of a rosette must point in three different directions",
    );
    wrong(
        &format!("grids = {{ a = \"a\", b = \"b\" }}\nangles = ‹[\"0 deg\", \"60 deg\"]›\n{give}"),
        "angles: two grids must stand at right angles, and these stand 60 deg apart",
    );
    wrong(&format!("{THREE}transverse = ‹[\"1 %\", \"1 %\"]›\n{give}"), "transverse has 2 values; expected 3");
    wrong(
        &format!("{THREE}transverse = ‹\"60 %\"›\n{give}"),
        "transverse: transverse sensitivity 0.6 is outside -0.5..=0.5",
    );
    wrong(
        &format!("{THREE}plane = ‹\"stres\"›\n{give}"),
        "plane is 'stres'; expected \"stress\" or \"strain\"; did you mean \"stress\"?",
    );
    wrong(
        &format!("{THREE}give = [\"direction\", ‹\"principle-max\"›]"),
        "give: 'principle-max' is nothing that a rosette gives; did you mean \"principal-max\"?; known: principal-max, principal-min, direction, shear-max, strain-x, strain-y, shear-xy, stress-max, stress-min, stress-x, stress-y, shear-stress-xy, von-mises, tresca, consistency, \"strain 30 deg\", \"stress 30 deg\"",
    );
    wrong(&format!("{THREE}give = [\"direction\", ‹\"direction\"›]"), "give: 'direction' stands twice");
    wrong(
        &format!("{THREE}give = [‹\"tresca\"›]"),
        "give: 'tresca' needs a material, as in material = { modulus = \"70 GPa\", poisson = 0.33 }",
    );
    wrong(&format!("{THREE}give = [‹\"consistency\"›]"), "give: 'consistency' needs a fourth grid, grids.d");
    wrong(
        &format!("{THREE}‹material› = {{ modulus = \"70 GPa\" }}\n{give}"),
        "material.poisson is missing: Poisson's ratio",
    );
    wrong(
        &format!("{THREE}‹material› = {{ modulus = \"70 GPa\", poisson = 0.5 }}\n{give}"),
        "material: Poisson's ratio 0.5 is outside -0.999..=0.499",
    );
    wrong(
        &format!("{THREE}‹angels› = [\"0 deg\"]\n{give}"),
        "unknown key 'rosette.R.angels'; known here: grids, angles, transverse, material, plane, give, decimals, show, reported",
    );
    mistakes_as(
        &rosette(&format!("{THREE}{give}")).replace("[rosette.R]", "[rosette.‹\"R 1\"›]"),
        &["rosette name 'R 1' must not be empty nor hold blanks, colons, commas, quotes or '='"],
    );
    mistakes_as(
        "[channel.a]\ncolumn = 1\nreads = \"mV\"\n[rosette]\nR = ‹5›\n",
        &["rosette.R must be a table, as in [rosette.R]"],
    );
    // a mistyped key is told once, not also as missing
    wrong(
        &format!("{three}‹angle› = [\"0 deg\", \"45 deg\", \"90 deg\"]\n{give}"),
        "unknown key 'rosette.R.angle'; did you mean 'angles'?",
    );
}

#[test]
fn loads_of_bars_and_stresses() {
    let bar = |reads: &str, keys: &str| {
        format!("[channel.e]\ncolumn = 1\nreads = \"{reads}\"\n[channel.l]\nof = \"e\"\n{keys}\n")
    };
    let steel = "material = { modulus = \"200 GPa ± 1 %\", poisson = 0.25 }";
    let factor = |text: &str| {
        let sheet = read(text);
        let channel = &sheet.measurement.channels[1];
        let Source::Stress { of: 0, factor, .. } = channel.source else { panic!() };
        (factor, channel.unit.clone())
    };
    let near = |got: (f64, String), want: f64, unit: &str| {
        assert!((got.0 / want - 1.0).abs() < 1e-14 && got.1 == unit, "{got:?}, not {want} {unit}");
    };
    // by hand: A = 1200 mm², E A = 240 MN, so 0.24 kN per microstrain; 1 lbf = 4.4482216152605 N
    let axial = format!("load = \"axial\"\nsection = {{ area = \"1200 mm2\" }}\n{steel}");
    near(factor(&bar("microstrain", &axial)), 0.24, "kN");
    near(factor(&bar("microstrain", &format!("{axial}\noutput = \"lbf\""))), 240.0 / 4.448_221_615_260_5, "lbf");
    near(factor(&bar("%", &axial)), 2400.0, "kN");
    // W = 0.03 · 0.05²/6 = 1.25e-5 m³, E W = 2.5 MN·m
    let bending =
        format!("load = \"bending\"\nsection = {{ width = \"30 mm ± 0.1 mm\", height = \"50 mm\" }}\n{steel}");
    near(factor(&bar("microstrain", &bending)), 2.5, "N m");
    near(factor(&bar("microstrain", &format!("{bending}\noutput = \"kN m\""))), 2.5e-3, "kN m");
    let stated: Vec<String> =
        read(&bar("microstrain", &bending)).measurement.channels[1].stated.iter().map(|s| s.key.clone()).collect();
    assert_eq!(stated, ["section.width", "material.modulus"]);
    // Wp = π d³/16, d = 40 mm: 1.2566370614359172e-5 m³, G = 80 GPa
    let torsion = format!("load = \"torsion\"\nsection = {{ diameter = \"40 mm\" }}\n{steel}");
    near(factor(&bar("shear microstrain", &torsion)), 80e9 * 1.256_637_061_435_917_2e-5 * 1e-6, "N m");
    near(
        factor(&bar("shear microstrain", &format!("{torsion}\noutput = \"lbf ft\""))),
        80e3 * 1.256_637_061_435_917_2e-5 / 1.355_817_948_331_400_4,
        "lbf ft",
    );
    says(
        &read(&bar("shear microstrain", &torsion)),
        1,
        &[
            "computed: torque T = G Wp γ at the surface, with γ from e",
            "section: round, diameter 40 mm",
            "material: E = 200 GPa, ν = 0.25",
            "uncertainty: material.modulus = 200 GPa ± 1 % (half-width, rectangular)",
        ],
    );
    let tube = torsion.replace("40 mm\"", "40 mm\", bore = \"12.5 mm\"");
    says(&read(&bar("shear microstrain", &tube)), 1, &["section: round, diameter 40 mm, bore 12.5 mm"]);
    says(&read(&bar("microstrain", &axial)), 1, &["section: area 1200 mm2", "material: E = 200 GPa"]);
    says(
        &read(&bar("microstrain", &bending)),
        1,
        &["section: rectangular, width 30 mm along the axis of bending, height 50 mm", "material: E = 200 GPa"],
    );
    // a load of a load's unit: its channel combines as a moment
    let sum = bar("microstrain", &bending) + "[channel.sum]\ncombine = { l = 1 }\noutput = \"kN m\"\n";
    assert_eq!(read(&sum).measurement.channels[2].source, Source::Combination(vec![(1, 1e-3)]));
    // stress in pounds: 1 psi = 1 lbf/in² = 4.4482216152605/0.0254² Pa
    let stress =
        |output: &str| bar("microstrain", &format!("output = \"{output}\"\nmaterial = {{ modulus = \"30 Msi\" }}"));
    near(factor(&stress("psi")), 30.0, "psi");
    near(factor(&stress("ksi")), 0.03, "ksi");
    near(factor(&stress("MPa")), 30.0 * 4.448_221_615_260_5 / (0.0254 * 0.0254) * 1e-6, "MPa");
    // refusals
    let wrong = |reads: &str, keys: &str, message: &str| mistakes_as(&bar(reads, keys), &[message]);
    let here = |reads: &str, keys: &str, message: &str| {
        mistakes_as(&bar(reads, keys).replace("[channel.l]", "[channel.‹l›]"), &[message]);
    };
    here(
        "microstrain",
        &axial.replace("load = \"axial\"\n", ""),
        "load is missing: \"axial\", \"bending\" or \"torsion\"",
    );
    here(
        "microstrain",
        &format!("load = \"axial\"\n{steel}"),
        "section is missing: the section of the bar, as in { diameter = \"40 mm\" }",
    );
    here(
        "microstrain",
        "load = \"axial\"\nsection = { area = \"1 cm2\" }",
        "material is missing: a load needs a modulus, as in material = { modulus = \"205 GPa\", poisson = 0.29 }",
    );
    wrong(
        "microstrain",
        &axial.replace("\"axial\"", "‹\"axail\"›"),
        "load is 'axail'; expected \"axial\" or \"bending\" or \"torsion\"; did you mean \"axial\"?",
    );
    mistakes_as(
        &bar("microstrain", &torsion).replace("of = \"e\"", "of = ‹\"e\"›"),
        &[
            "of = 'e': this load needs a shear strain (shear microstrain), and the channel gives a strain (microstrain, %, strain)",
        ],
    );
    mistakes_as(
        &bar("shear microstrain", &axial).replace("of = \"e\"", "of = ‹\"e\"›"),
        &[
            "of = 'e': this load needs a strain (microstrain, %, strain), and the channel gives a shear strain (shear microstrain)",
        ],
    );
    wrong("microstrain", &format!("{axial}\noutput = ‹\"N m\"›"), "output is 'N m'; expected a force (N, kN, MN, lbf)");
    let shapes = "section is { diameter, bore }, { width, height } or { area }";
    for shape in ["", "diameter = \"4 cm\", area = \"1 cm2\"", "bore = \"4 cm\""] {
        wrong("microstrain", &format!("load = \"axial\"\n‹section› = {{ {shape} }}\n{steel}"), shapes);
    }
    let section = |words: &str, message: &str| {
        wrong("microstrain", &format!("load = \"bending\"\n{words}\n{steel}"), message);
    };
    section("‹section› = { width = \"3 cm\" }", "section.height is missing: the height, in the plane of bending");
    section(
        "‹section› = { area = \"3 cm2\" }",
        "section: an area alone gives axial force only: state the section's shape",
    );
    section(
        "‹section› = { diameter = \"3 cm\", bore = \"4 cm\" }",
        "section: the bore must be smaller than the diameter",
    );
    section(
        "section = { diameter = ‹\"3 cm2\"› }",
        "section.diameter: value '3 cm2': 'cm2' is the unit of an area (m2, cm2, mm2); expected a length (m, cm, mm, km, ft)",
    );
    section("section = ‹\"3 cm\"›", "section is text; expected a table, as in { key = value }");
    section(
        "section = { diameter = \"3 cm\", ‹bor› = \"1 cm\" }",
        "unknown key 'channel.l.section.bor'; did you mean 'bore'?",
    );
    wrong(
        "shear microstrain",
        "load = \"torsion\"\nsection = { diameter = \"3 cm\" }\n‹material› = { modulus = \"200 GPa\" }",
        "material.poisson is missing: Poisson's ratio, which torsion needs",
    );
    wrong(
        "microstrain",
        "load = \"axial\"\nsection = { diameter = \"3 cm\" }\n‹material› = { modulus = \"200 GPa\", poisson = 0.7 }",
        "material: Poisson's ratio 0.7 is outside -0.999..=0.499",
    );
    // which way a section is stated, its own replaces the common one
    let common = "[common.x]\nsection = { diameter = \"4 cm\", bore = \"1 cm\" }\n";
    near(factor(&format!("{}{common}", bar("microstrain", &format!("like = \"x\"\n{axial}")))), 0.24, "kN");
}

#[test]
fn readings_that_are_loads() {
    // any output unit when no sensor is named
    for (reads, output, scale) in [
        ("kN", "N", 1e3),
        ("N m", "kN m", 1e-3),
        ("kg", "t", 1e-3),
        ("mm", "m", 1e-3),
        ("deg", "deg", 1.0),
        ("bar", "kPa", 100.0),
    ] {
        let text = format!("[channel.d]\ncolumn = 1\nreads = \"{reads}\"\noutput = \"{output}\"\n");
        let Element::Direct { scale: got, offset } = chain(&text).element else { panic!() };
        assert!((got / scale - 1.0).abs() < 1e-15 && offset == 0.0, "{reads}: {got}");
        assert_eq!(chain(&text).output, Output::AsRead);
        let sheet = read(&text);
        assert_eq!(
            (sheet.result(0, &format!("5 {output}")), sheet.reading(0, &format!("5 {reads}"))),
            (Ok(5.0), Ok(5.0))
        );
    }
    // results typed in other units of the same kind
    let sheet = read(&cell(RATED, ""));
    assert_eq!(sheet.result(0, "2500 N"), Ok(2.5));
    assert!(sheet.result(0, "2500 bar").unwrap_err().contains("expected a force"));
}

#[test]
fn a_segment_has_its_places() {
    // sides in the order gauge, leads, arms
    let text = format!(
        "{}{DECK}",
        gauge("expansion = { specimen = \"11e-6/K\", data = \"12e-6/K\" }\ntemperature = \"deck\"\nleads = { wires = 3, each = \"1 ohm\", temperature = \"deck\" }\nzero = { rows = 3 }")
            .replace("[\"e\", \"0\", \"0\", \"0\"]", "[\"e\", \"dummy\", \"0\", \"0\"], temperatures = [\"\", \"deck\", \"\", \"\"]")
    );
    let sheet = read(&text);
    let g: &Segment = segment(&sheet, 0);
    let found: Vec<bool> = g.sides().iter().map(Option::is_some).collect();
    assert_eq!(found, [true, true, false, true, false, false]);
}

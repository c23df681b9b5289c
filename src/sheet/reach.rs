//! Everything that a chain can be is reached by some sheet.
//!
//! Inside the crate the matches need no wildcard: a variant that is added does not compile here until it has a name, and fails
//! until a sheet reaches it.

use std::collections::BTreeSet;
use std::format;
use std::string::{String, ToString};
use std::vec::Vec;

use super::Sheet;
use crate::chain::{Chain, Element, Network, Output, SelfHeating, Signal, Supply, Temperature, Word};
use crate::measurement::{Between, ColumnRef, Give, Grids, Segment, Source, Tolerance, Uncertainty, ZeroSource};
use crate::metal;
use crate::platinum::its90::Deviation;
use crate::signal::{
    Amplifier, Arm, Coding, Conductor, Driven, Each, FullScale, Leads, Pair, Place, Reference, Side, Wires,
};
use crate::strain::{Loading, Material, Plane, Section, Transducer, ZeroMeaning, ZeroReading};
use crate::thermistor::Law;
use crate::thermocouple::Thermocouple;

/// Enum and variant.
type Reached = BTreeSet<(&'static str, &'static str)>;

macro_rules! variants {
    ($($name:ident: $type:ty { $($pattern:pat => $word:literal,)+ })+) => {
        $(
            fn $name(reached: &mut Reached, value: &$type) {
                reached.insert((stringify!($name), match value { $($pattern => $word,)+ }));
            }
        )+
        fn all() -> Reached {
            [$($((stringify!($name), $word),)+)+].into_iter().collect()
        }
    };
}

variants! {
    signal: Signal {
        Signal::Volts => "volts",
        Signal::Ratio => "ratio",
        Signal::Ohms => "ohms",
        Signal::Count => "count",
        Signal::Quantity => "quantity",
    }
    supply: Supply {
        Supply::None => "none",
        Supply::Fixed(_) => "fixed",
        Supply::Column { .. } => "column",
    }
    network: Network {
        Network::Bridge(_) => "bridge",
        Network::Resistance { .. } => "resistance",
        Network::Divider { .. } => "divider",
        Network::Reference { .. } => "reference",
        Network::Emf => "emf",
        Network::Direct => "direct",
    }
    element: Element {
        Element::Gauge { .. } => "gauge",
        Element::Transducer { .. } => "transducer",
        Element::Platinum(_) => "platinum",
        Element::AlphaDeltaBeta(_) => "alpha, delta, beta",
        Element::Standard { .. } => "standard",
        Element::Metal(_) => "metal",
        Element::Thermocouple(_) => "thermocouple",
        Element::Thermistor(_) => "thermistor",
        Element::Direct { .. } => "direct",
    }
    thermistor: Law {
        Law::Beta(_) => "beta",
        Law::SteinhartHart(_) => "Steinhart-Hart",
        Law::LogarithmOfRatio(_) => "logarithm of ratio",
        Law::ReciprocalOfTemperature(_) => "reciprocal of temperature",
        Law::Points(_) => "points",
    }
    deviation: Deviation {
        Deviation::FromHydrogen { .. } => "hydrogen",
        Deviation::FromNeon { .. } => "neon",
        Deviation::FromOxygen { .. } => "oxygen",
        Deviation::FromArgon { .. } => "argon",
        Deviation::MercuryToGallium { .. } => "mercury",
        Deviation::ToGallium { .. } => "gallium",
        Deviation::ToIndium { .. } => "indium",
        Deviation::ToTin { .. } => "tin",
        Deviation::ToZinc { .. } => "zinc",
        Deviation::ToAluminium { .. } => "aluminium",
        Deviation::ToSilver { .. } => "silver",
    }
    metal: metal::Law {
        metal::Law::Nickel(_) => "nickel",
        metal::Law::Copper(_) => "copper",
    }
    thermocouple: Thermocouple {
        Thermocouple::B => "B",
        Thermocouple::E => "E",
        Thermocouple::J => "J",
        Thermocouple::K => "K",
        Thermocouple::N => "N",
        Thermocouple::R => "R",
        Thermocouple::S => "S",
        Thermocouple::T => "T",
    }
    tolerance: Tolerance {
        Tolerance::Platinum(_) => "platinum",
        Tolerance::Thermocouple(_) => "thermocouple",
    }
    parallel: Option<f64> {
        Some(_) => "present",
        None => "absent",
    }
    leakage: Option<f64> {
        Some(_) => "present",
        None => "absent",
    }
    series: Option<f64> {
        Some(_) => "present",
        None => "absent",
    }
    heating: Option<SelfHeating> {
        Some(SelfHeating { amperes: Some(_), .. }) => "current stated",
        Some(SelfHeating { amperes: None, .. }) => "current of the circuit",
        None => "absent",
    }
    transducer: Transducer {
        Transducer::Rated { .. } => "rated",
        Transducer::Certificate(_) => "certificate",
    }
    gives_output: bool {
        true => "output of a load",
        false => "load of an output",
    }
    output: Output {
        Output::Strain { .. } => "strain",
        Output::ShearStrain { .. } => "shear strain",
        Output::Celsius => "Celsius",
        Output::Kelvin => "kelvin",
        Output::Fahrenheit => "Fahrenheit",
        Output::AsRead => "as read",
    }
    gauge_temperature: Temperature {
        Temperature::None => "none",
        Temperature::Fixed(_) => "fixed",
        Temperature::Column => "column",
    }
    arm_temperature: Temperature {
        Temperature::None => "none",
        Temperature::Fixed(_) => "fixed",
        Temperature::Column => "column",
    }
    // leads that warm have a temperature: none is refused
    lead_temperature: Option<Temperature> {
        None | Some(Temperature::None) => "none",
        Some(Temperature::Fixed(_)) => "fixed",
        Some(Temperature::Column) => "column",
    }
    amplifier: Amplifier {
        Amplifier::None => "none",
        Amplifier::Gain { .. } => "gain",
        Amplifier::Difference { .. } => "difference",
    }
    reference: Reference {
        Reference::Negative => "negative",
        Reference::Centre => "centre",
    }
    coding: Coding {
        Coding::Signed => "signed",
        Coding::Offset => "offset",
        Coding::Unsigned => "unsigned",
    }
    full_scale: FullScale {
        FullScale::Supply => "supply",
        FullScale::Volts(_) => "volts",
    }
    wires: Wires {
        Wires::Two => "two",
        Wires::Three => "three",
        Wires::Four => "four",
    }
    each: Each {
        Each::Same(_) => "same",
        Each::Own(_) => "own",
    }
    conductor: Conductor {
        Conductor::Ohms(_) => "ohms",
        Conductor::Run { .. } => "run",
    }
    pair: Pair {
        Pair::Same(_) => "same",
        Pair::Own(_) => "own",
        Pair::Run(_) => "run",
    }
    arm: Arm {
        Arm::Active { .. } => "active",
        Arm::Dummy => "dummy",
        Arm::Fixed => "fixed",
    }
    driven: Driven {
        Driven::Along => "along",
        Driven::Across => "across",
    }
    side: Side {
        Side::Low => "low",
        Side::High => "high",
    }
    place: Place {
        Place::Gauge => "gauge",
        Place::Instrument => "instrument",
    }
    zero_meaning: ZeroMeaning {
        ZeroMeaning::Strain => "strain",
        ZeroMeaning::Resistance => "resistance",
        ZeroMeaning::Completion => "completion",
    }
    zero_reading: Option<ZeroReading> {
        None => "none",
        Some(ZeroReading::AsRecorded(_)) => "as recorded",
        Some(ZeroReading::Ratio(_)) => "ratio",
    }
    zero_source: ZeroSource {
        ZeroSource::Stated => "stated",
        ZeroSource::Rows(_) => "rows",
        ZeroSource::RowsFrom { .. } => "rows from",
        ZeroSource::Window { .. } => "window",
    }
    between: Between {
        Between::Line => "line",
        Between::Last => "last",
    }
    column: ColumnRef {
        ColumnRef::Name(_) => "name",
        ColumnRef::Number(_) => "number",
    }
    source: Source {
        Source::Reading(_) => "reading",
        Source::Combination(_) => "combination",
        Source::Stress { .. } => "stress",
        Source::Rosette(_) => "rosette",
    }
    loading: Option<Loading> {
        None => "none",
        Some(Loading::Axial) => "axial",
        Some(Loading::Bending) => "bending",
        Some(Loading::Torsion) => "torsion",
    }
    grids: Grids {
        Grids::Three(_) => "three",
        Grids::Two(_) => "two",
    }
    fourth_grid: bool {
        true => "there",
        false => "not there",
    }
    plane: Plane {
        Plane::Stress => "stress",
        Plane::Strain => "strain",
    }
    give: Give {
        Give::PrincipalMax => "principal-max",
        Give::PrincipalMin => "principal-min",
        Give::Direction => "direction",
        Give::ShearMax => "shear-max",
        Give::StrainX => "strain-x",
        Give::StrainY => "strain-y",
        Give::StrainXy => "shear-xy",
        Give::StrainAlong(_) => "strain 30 deg",
        Give::StressMax => "stress-max",
        Give::StressMin => "stress-min",
        Give::StressX => "stress-x",
        Give::StressY => "stress-y",
        Give::StressXy => "shear-stress-xy",
        Give::StressAlong(_) => "stress 30 deg",
        Give::VonMises => "von-mises",
        Give::Tresca => "tresca",
        Give::Consistency => "consistency",
    }
    uncertainty: Uncertainty {
        Uncertainty::Rectangular { .. } => "rectangular",
        Uncertainty::Expanded { .. } => "expanded",
        Uncertainty::Standard { .. } => "standard",
        Uncertainty::Triangular { .. } => "triangular",
        Uncertainty::Arcsine { .. } => "arcsine",
        Uncertainty::Estimated { .. } => "estimated",
    }
    limit: Word {
        Word::Good => "good",
        Word::Missing => "missing",
        Word::Unreadable => "unreadable",
        Word::Saturated => "saturated",
        Word::Open => "open",
        Word::Short => "short",
        Word::OutOfRange => "out-of-range",
        Word::Ambiguous => "ambiguous",
        Word::Extrapolated => "extrapolated",
    }
}

/// What a limit cannot mean: such words come from elsewhere.
const NO_LIMIT: [&str; 4] = ["good", "unreadable", "ambiguous", "extrapolated"];

fn leads_of(r: &mut Reached, leads: Option<&Leads>) {
    let Some(leads) = leads else { return };
    wires(r, &leads.wires);
    each(r, &leads.each);
    match &leads.each {
        Each::Same(one) => conductor(r, one),
        Each::Own(all) => all.iter().for_each(|one| conductor(r, one)),
    }
}

fn chain_of(r: &mut Reached, chain: &Chain) {
    signal(r, &chain.reading.signal);
    supply(r, &chain.supply);
    network(r, &chain.network);
    element(r, &chain.element);
    output(r, &chain.output);
    amplifier(r, &chain.amplifier);
    if let Amplifier::Difference { circuit, .. } = &chain.amplifier {
        reference(r, &circuit.reference);
    }
    if let Some(converter) = &chain.converter {
        coding(r, &converter.coding);
        full_scale(r, &converter.full_scale);
    }
    gauge_temperature(r, &chain.temperature);
    chain.arm_temperatures.iter().for_each(|t| arm_temperature(r, t));
    lead_temperature(r, &chain.lead_warmth.map(|w| w.temperature));
    match &chain.network {
        Network::Bridge(bridge) => {
            bridge.arms.iter().for_each(|a| arm(r, a));
            for a in &bridge.arms {
                if let Arm::Active { driven: d, .. } = a {
                    driven(r, d);
                }
            }
            leads_of(r, bridge.leads.as_ref());
            pair(r, &bridge.supply_leads);
            pair(r, &bridge.signal_leads);
        }
        Network::Resistance { leads } => leads_of(r, leads.as_ref()),
        Network::Divider { divider, leads } => {
            side(r, &divider.sensor);
            leads_of(r, leads.as_ref());
        }
        Network::Reference { leads, .. } => leads_of(r, leads.as_ref()),
        Network::Emf | Network::Direct => {}
    }
    parallel(r, &chain.around.parallel);
    leakage(r, &chain.around.leakage);
    series(r, &chain.around.series);
    heating(r, &chain.self_heating);
    match &chain.element {
        Element::Gauge { zero, .. } => {
            zero_meaning(r, &zero.meaning);
            zero_reading(r, &zero.reading);
        }
        Element::Transducer { law, .. } => {
            transducer(r, law);
            if let Transducer::Certificate(k) = law {
                gives_output(r, &k.gives_output);
            }
        }
        Element::Thermistor(law) => thermistor(r, law),
        Element::Standard { deviation: d, .. } => deviation(r, d),
        Element::Metal(law) => metal(r, law),
        Element::Thermocouple(kind) => thermocouple(r, kind),
        Element::Platinum(_) | Element::AlphaDeltaBeta(_) | Element::Direct { .. } => {}
    }
    for at in [chain.low_limit, chain.high_limit].into_iter().flatten() {
        limit(r, &at.word);
    }
}

fn segment_of(r: &mut Reached, segment: &Segment) {
    chain_of(r, &segment.chain);
    zero_source(r, &segment.zero);
    segment.sides().into_iter().flatten().for_each(|s| between(r, &s.between));
    segment.tolerance.iter().for_each(|t| tolerance(r, &t.limits));
    segment.stated.iter().for_each(|s| uncertainty(r, &s.uncertainty));
    if let Some(step) = &segment.shunt {
        place(r, &step.shunt.place);
    }
}

fn read(text: &str) -> Sheet {
    Sheet::read("s.toml", text).unwrap_or_else(|e| panic!("{e}\n{text}"))
}

fn sheet_of(r: &mut Reached, text: &str) {
    let sheet = read(text);
    sheet.measurement.inputs.iter().for_each(|c| column(r, c));
    for channel in &sheet.measurement.channels {
        source(r, &channel.source);
        match &channel.source {
            Source::Reading(segments) => segments.iter().for_each(|s| segment_of(r, s)),
            Source::Combination(_) => {}
            Source::Stress { loading: l, .. } => loading(r, l),
            Source::Rosette(rosette) => {
                grids(r, &rosette.grids);
                give(r, &rosette.give);
                fourth_grid(r, &rosette.fourth.is_some());
                if let Some((_, p)) = &rosette.material {
                    plane(r, p);
                }
            }
        }
    }
}

/// A gauge with this bridge and these further lines.
fn gauge(reads: &str, bridge: &str, more: &str) -> String {
    format!(
        "[channel.g]\ncolumn = 1\nreads = \"{reads}\"\ngauge = {{ resistance = \"350 ohm\", gauge_factor = 2.08 }}\n\
         bridge = {{ {bridge} }}\n{more}\n[channel.t]\ncolumn = \"T\"\nreads = \"degC\"\n"
    )
}

fn thermometer(reads: &str, more: &str) -> String {
    format!("[channel.t]\ncolumn = 1\nreads = \"{reads}\"\n{more}\n")
}

fn sheets() -> Vec<String> {
    let one = "arms = [\"e\", \"0\", \"0\", \"0\"]";
    let full = "arms = [\"e\", \"-nu e\", \"e\", \"-nu e\"], poisson = 0.3";
    let thermal = "expansion = { specimen = \"11e-6/K\", data = \"12e-6/K\" }\n";
    let change = "[[channel.g.change]]\nfrom = \"10 s\"\nzero = { rows = 5 }";
    let at = |more: &str| format!("zero = {{ at = \"0.1 mV/V\"{more} }}");
    let shunt = |place: &str| {
        format!(
            "shunt = {{ from = \"1 s\", to = \"2 s\", resistor = \"59 kohm\", across = \"arm 1\", place = \"{place}\" }}"
        )
    };
    let counts = |full_scale: &str, coding: &str, more: &str| {
        let converter = format!("converter = {{ bits = 16, full_scale = \"{full_scale}\", coding = \"{coding}\" }}\n");
        gauge("count", &format!("{one}, supply = \"2.5 V\""), &(converter + more))
    };
    let difference = |reference: &str| {
        format!(
            "amplifier = {{ difference = {{ input = [\"1 kohm\", \"1 kohm\"], feedback = [\"99 kohm\", \"99 kohm\"], reference = \"{reference}\" }} }}"
        )
    };
    let pt = "platinum = { standard = \"IEC 60751\", r0 = \"100 ohm\" }\n";
    let ntc = "thermistor = { r25 = \"10 kohm\", beta = 3950 }\n";
    let transducer = |law: &str| format!("[channel.f]\ncolumn = 1\nreads = \"mV/V\"\ntransducer = {{ {law} }}\n");
    let strains: String =
        "abcd".chars().map(|c| format!("[channel.{c}]\ncolumn = \"{c}\"\nreads = \"microstrain\"\n")).collect();
    let bar = |load: &str, reads: &str| {
        format!(
            "[channel.e]\ncolumn = 1\nreads = \"{reads}\"\n[channel.l]\nof = \"e\"\nload = \"{load}\"\n\
             section = {{ diameter = \"40 mm\" }}\nmaterial = {{ modulus = \"200 GPa\", poisson = 0.3 }}\n"
        )
    };
    let rosette = |grids: &str, angles: &str, plane: &str, give: &[&str]| {
        let give: Vec<String> = give.iter().map(|g| format!("\"{g}\"")).collect();
        format!(
            "{strains}[rosette.R]\ngrids = {{ {grids} }}\nangles = [{angles}]\nplane = \"{plane}\"\n\
             material = {{ modulus = \"200 GPa\", poisson = 0.3 }}\ngive = [{}]\n",
            give.join(", ")
        )
    };
    let gives: Vec<&str> = all().iter().filter(|(e, _)| *e == "give").map(|(_, w)| *w).collect();
    let four = "a = \"a\", b = \"b\", c = \"c\", d = \"d\"";
    std::vec![
        gauge("mV/V", one, ""),
        gauge("mV", &format!("{full}, supply = \"2.5 V\""), "output = \"shear microstrain\""),
        gauge("mV", &format!("{one}, supply = {{ column = \"V\", reads = \"V\" }}"), &at("")),
        gauge("mV/V", one, &at(", from = \"resistance\"")),
        gauge("mV/V", one, &at(", from = \"completion\"")),
        gauge("mV/V", one, &format!("zero = {{ rows = 5 }}\n{change}")),
        gauge("mV/V", one, "zero = { from = \"1 s\", to = \"2 s\" }"),
        gauge(
            "mV/V",
            "arms = [\"e\", \"dummy\", \"0\", \"0\"]",
            "leads = { wires = 3, each = \"1 ohm\", temperature = \"30 degC\" }"
        ),
        gauge("mV/V", one, "leads = { wires = 2, each = [\"1 ohm\", \"2 ohm\"], temperature = \"t\" }"),
        gauge(
            "mV/V",
            &format!("{full}, supply_leads = [\"1 ohm\", \"2 ohm\"]"),
            "leads = { length = \"10 m\", awg = 24 }"
        ),
        gauge("mV/V", one, &format!("{thermal}temperature = \"21 degC\"\nzero = {{ temperature = \"20 degC\" }}")),
        gauge(
            "mV/V",
            "arms = [\"e\", \"dummy\", \"0\", \"0\"], temperatures = [\"\", \"t\", \"\", \"\"]",
            &format!("{thermal}temperature = {{ channel = \"t\", between = \"last\" }}\nzero = {{ rows = 5 }}"),
        ),
        gauge(
            "mV/V",
            "arms = [\"e\", \"dummy\", \"0\", \"0\"], temperatures = [\"\", \"40 degC\", \"\", \"\"]",
            &format!("{thermal}temperature = \"t\"\nzero = {{ temperature = \"20 degC\" }}"),
        ),
        gauge("mV/V", one, &shunt("gauge")),
        gauge("mV/V", one, &shunt("instrument")),
        gauge("mV/V", one, "largest_strain = \"1.0(1) %\"\nuncertainty = \"1 uV/V (k=2)\""),
        gauge("mV/V", one, "uncertainty = \"1 uV/V (triangular)\""),
        gauge("mV/V", one, "uncertainty = \"1 uV/V (arcsine)\""),
        gauge("mV/V", one, "uncertainty = \"1 uV/V (k=2, dof=9)\""),
        gauge("mV/V", one, "limits = { low = \"-1 mV/V\", below = \"open\", high = \"1 mV/V\", above = \"short\" }"),
        gauge(
            "mV/V",
            one,
            "limits = { low = \"-1 mV/V\", below = \"missing\", high = \"1 mV/V\", above = \"saturated\" }"
        ),
        gauge("mV/V", one, "limits = { low = \"-1 mV/V\", below = \"out-of-range\" }"),
        counts("±2.5 V", "signed", ""),
        counts("±2.5 V", "offset", "amplifier = { gain = \"250 ± 1 %\" }"),
        counts("supply", "unsigned", &difference("negative")),
        counts("supply", "signed", &difference("centre")),
        thermometer("ohm", &format!("{pt}leads = {{ wires = 4 }}")),
        thermometer("ohm", &format!("{pt}output = \"K\"\nleads = {{ wires = 3, each = [\"1 ohm\", \"2 ohm\"] }}")),
        thermometer(
            "mV",
            &format!(
                "{pt}output = \"degF\"\ncircuit = {{ current = \"1 mA\" }}\nleads = {{ wires = 2, length = \"5 m\", area = \"0.25 mm2\" }}"
            )
        ),
        thermometer("mV/V", &format!("{ntc}circuit = {{ divider = \"10 kohm\", sensor = \"low\" }}")),
        thermometer("mV/V", &format!("{ntc}circuit = {{ divider = \"10 kohm\", sensor = \"high\" }}")),
        thermometer(
            "ohm",
            "thermistor = { steinhart_hart = [1.1e-3, 2.3e-4, 8e-8], range = [\"-20 degC\", \"80 degC\"] }"
        ),
        thermometer("ohm", "platinum = { r0 = \"100 ohm\", alpha = 0.00385, delta = 1.5, beta = 0.1 }"),
        thermometer(
            "ohm",
            "metal = { standard = \"DIN 43760\", r0 = \"100 ohm\" }\ncircuit = { leakage = \"2 Mohm\" }"
        ),
        thermometer("ohm", "metal = { standard = \"GOST 6651-2009\", r0 = \"50 ohm\" }"),
        thermometer("ohm", "thermistor = { points = [[0, 32650], [25, 10000], [50, 3600]] }"),
        thermometer(
            "V",
            "platinum = { standard = \"IEC 60751\", r0 = \"100 ohm\", class = \"AA\" }\nself_heating = \"0.3 K/mW\"\n\
             circuit = { reference = \"100 ohm\", supply = { column = 2, reads = \"V\" } }"
        ),
        thermometer(
            "ohm",
            "thermistor = { reference = \"10 kohm\", ratio_terms = [-14.6337, 4791.842, -115334, -3.730535e6], range = [\"-50 degC\", \"150 degC\"] }\n\
             circuit = { parallel = \"10 kohm\", series = \"1 kohm\", current = \"0.1 mA\" }\nself_heating = \"2 K/mW\""
        ),
        thermometer(
            "ohm",
            "thermistor = { reference = \"10 kohm\", reciprocal_terms = [3.354016e-3, 2.56985e-4, 2.620131e-6, 6.383091e-8], range = [\"0 degC\", \"80 degC\"] }"
        ),
        transducer("rated = \"2 mV/V\", capacity = \"50 kN\""),
        transducer("polynomial = [0.01, 0.04], in = \"kN\", gives = \"mV/V\", range = [\"0 kN\", \"50 kN\"]"),
        transducer("polynomial = [0.01, 25.0], in = \"mV/V\", gives = \"kN\", range = [\"0 kN\", \"50 kN\"]"),
        format!(
            "{strains}[channel.sum]\ncombine = {{ a = 1, b = -1 }}\n[channel.s]\nof = \"a\"\nmaterial = {{ modulus = \"70 GPa\" }}\n"
        ),
        bar("axial", "microstrain"),
        bar("bending", "microstrain"),
        bar("torsion", "shear microstrain"),
        rosette(four, "\"0 deg\", \"45 deg\", \"90 deg\", \"135 deg\"", "stress", &gives),
        rosette("a = \"a\", b = \"b\"", "\"0 deg\", \"90 deg\"", "strain", &["stress-max"]),
    ]
}

/// A standard thermometer of every subrange, a thermocouple of every type.
fn more_sheets() -> Vec<String> {
    let subranges = [
        ("hydrogen", "[0, 0, 0, 0, 0, 0, 0]"),
        ("neon", "[0, 0, 0, 0, 0]"),
        ("oxygen", "[0, 0, 0]"),
        ("argon", "[-1e-4, 2e-5]"),
        ("mercury", "[-1e-4, 2e-5]"),
        ("gallium", "[-1e-4]"),
        ("indium", "[-1e-4]"),
        ("tin", "[-1e-4, 2e-5]"),
        ("zinc", "[-1e-4, 2e-5]"),
        ("aluminium", "[-1e-4, 2e-5, 1e-6]"),
        ("silver", "[-1e-4, 2e-5, 1e-6, 1e-6], aluminium_ratio = 3.3758"),
    ];
    let certificate = |(name, terms): &(&str, &str)| {
        thermometer(
            "ohm",
            &format!("platinum = {{ triple_point = \"25.5 ohm\", subrange = \"{name}\", deviation = {terms} }}"),
        )
    };
    let couple = |kind: Thermocouple| {
        let class = if kind == Thermocouple::K { ", class = \"2\"" } else { "" };
        let words = format!("thermocouple = {{ type = \"{}\", reference = \"ice point\"{class} }}", kind.letter());
        thermometer("mV", &words)
    };
    subranges.iter().map(certificate).chain(Thermocouple::ALL.into_iter().map(couple)).collect()
}

#[test]
fn every_variant_is_reached_by_a_sheet() {
    let mut reached = Reached::new();
    sheets().iter().chain(&more_sheets()).for_each(|text| sheet_of(&mut reached, text));
    let wanted: Reached = all().into_iter().filter(|(e, w)| *e != "limit" || !NO_LIMIT.contains(w)).collect();
    let missing: Vec<_> = wanted.difference(&reached).collect();
    assert!(missing.is_empty(), "no sheet reaches {missing:?}");
    assert_eq!(reached, wanted);
}

#[test]
fn every_word_of_give_means_its_result() {
    // the words in the table above are those of the sheet, and each channel gives what its name says
    let text = sheets().into_iter().find(|t| t.contains("consistency")).unwrap();
    let mut seen = 0;
    for channel in &read(&text).measurement.channels {
        let Source::Rosette(rosette) = &channel.source else { continue };
        let mut one = Reached::new();
        give(&mut one, &rosette.give);
        let (_, word) = one.into_iter().next().unwrap();
        assert_eq!(channel.name, format!("R {word}"));
        if let Give::StrainAlong(degrees) | Give::StressAlong(degrees) = rosette.give {
            assert_eq!(degrees, 30.0);
        }
        seen += 1;
    }
    assert_eq!(seen, 17);
}

#[test]
fn every_section_and_loading() {
    // E = 200 GPa, ν = 0.25; the sheet writes the dimensions in other units than the library
    let bars = [
        ("diameter = \"40 mm\", bore = \"2 cm\"", Section::Round { diameter: 0.04, bore: 0.02 }),
        ("diameter = \"40 mm\"", Section::Round { diameter: 0.04, bore: 0.0 }),
        ("width = \"3 cm\", height = \"0.05 m\"", Section::Rectangular { width: 0.03, height: 0.05 }),
        ("area = \"12 cm2\"", Section::Area { area: 12e-4 }),
    ];
    let material = Material::new(200e9, 0.25).unwrap();
    let mut shapes = BTreeSet::new();
    for (words, section) in bars {
        shapes.insert(match section {
            Section::Round { .. } => "round",
            Section::Rectangular { .. } => "rectangular",
            Section::Area { .. } => "area",
        });
        for loading in [Loading::Axial, Loading::Bending, Loading::Torsion] {
            // kN or N·m per microstrain
            let (word, reads, scale) = match loading {
                Loading::Axial => ("axial", "microstrain", 1e-9),
                Loading::Bending => ("bending", "microstrain", 1e-6),
                Loading::Torsion => ("torsion", "shear microstrain", 1e-6),
            };
            let text = format!(
                "[channel.e]\ncolumn = 1\nreads = \"{reads}\"\n[channel.l]\nof = \"e\"\nload = \"{word}\"\n\
                 section = {{ {words} }}\nmaterial = {{ modulus = \"200 GPa\", poisson = 0.25 }}\n"
            );
            match (section.load_per_strain(loading, &material), Sheet::read("s.toml", &text)) {
                (Ok(plain), Ok(sheet)) => {
                    let Source::Stress { of: 0, loading: Some(found), factor, .. } =
                        sheet.measurement.channels[1].source
                    else {
                        panic!("{text}")
                    };
                    assert_eq!(found, loading);
                    assert!((factor / (plain * scale) - 1.0).abs() < 1e-15, "{factor} {plain}");
                }
                (Err(error), Err(said)) => {
                    assert!(said.to_string().starts_with(&format!("s.toml:7:1: section: {error}\n")), "{said}");
                }
                (by_hand, read) => panic!("{by_hand:?} {read:?}"),
            }
        }
    }
    assert_eq!(shapes.len(), 3);
}

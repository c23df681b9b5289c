//! A chain in words: what `describe` prints.

use std::format;
use std::string::{String, ToString};
use std::vec::Vec;

mod gauge;
mod thermometer;

use gauge::{gauge_words, polynomial, zero_words};

use super::Sheet;
use crate::chain::{Chain, Element, Inputs, Network, Supply, Temperature};
use crate::measurement::{Between, ColumnRef, Pairing, Segment, Side as MeasuredSide, Source, Stated, Uncertainty};
use crate::signal::{
    Amplifier, Arm, Bridge, Coding, Conductor, Converter, Driven, Each, FullScale, Leads, Pair, Place, Reference, Side,
    Wires,
};
use crate::strain::{Loading, Section, Transducer};

pub(super) fn describe(sheet: &Sheet, index: usize) -> Vec<String> {
    let Some(channel) = sheet.measurement.channels.get(index) else { return Vec::new() };
    let mut out = Vec::new();
    let other = |i: usize| sheet.measurement.channels.get(i);
    let name = |i: usize| other(i).map_or_else(String::new, |c| c.name.clone());
    match &channel.source {
        Source::Combination(terms) => {
            let sum: Vec<(String, f64)> = terms.iter().map(|(i, w)| (name(*i), *w)).collect();
            out.push(format!("computed: {}", sum_of(&sum)));
            out.push("a row in which one of them has no number has none, and takes its word".into());
        }
        Source::Rosette(rosette) => out.extend(super::rosette::describe(rosette, &name)),
        Source::Stress { of, loading, bar, factor } => {
            let unit = other(*of).map_or("", |c| c.unit.as_str());
            let (law, constant) = match loading {
                None => ("uniaxial stress σ = E e, with e", "modulus"),
                Some(Loading::Axial) => ("axial force N = E A e, with e", "stiffness"),
                Some(Loading::Bending) => ("bending moment M = E W e at the outer fibre, with e", "stiffness"),
                Some(_) => ("torque T = G Wp γ at the surface, with γ", "stiffness"),
            };
            out.push(format!("computed: {law} from {}", name(*of)));
            if let Some((section, material)) = bar {
                out.push(format!("section: {}", shape(section)));
                // torsion alone asks for the ratio
                let poisson = match loading {
                    Some(Loading::Torsion) => format!(", ν = {}", short(material.poisson())),
                    _ => String::new(),
                };
                out.push(format!("material: E = {} GPa{poisson}", about(material.modulus() / 1e9)));
            }
            out.push(format!("{constant}: {} {} per {unit}", short(*factor), channel.unit));
        }
        Source::Reading(segments) => {
            for (i, segment) in segments.iter().enumerate() {
                match &segment.from {
                    Some(from) => out.push(format!("from {} on:", from.text)),
                    None if segments.len() > 1 => out.push("from the start:".into()),
                    None => {}
                }
                let before = i.checked_sub(1).and_then(|before| segments.get(before));
                let said = before.map_or_else(Vec::new, |s| chain(s, sheet, &channel.unit));
                let own = chain(segment, sheet, &channel.unit);
                if own == said {
                    out.push("the chain is the same in every figure".into());
                }
                out.extend(own.into_iter().filter(|line| !said.contains(line)));
            }
        }
    }
    for stated in &channel.stated {
        out.push(uncertainty(stated));
    }
    if !channel.shared.is_empty() {
        out.push(format!("one error with every channel that shares it: {}", channel.shared.join(", ")));
    }
    let digits = match channel.decimals {
        None => "with the shortest digits that read back exactly".to_string(),
        Some(1) => "with 1 decimal".to_string(),
        Some(n) => format!("with {n} decimals"),
    };
    let unit = if channel.unit.is_empty() { "a plain number" } else { &channel.unit };
    out.push(format!("gives: {unit}, {digits}"));
    for assumed in sheet.assumed.get(index).into_iter().flatten() {
        out.push(format!("assumed: {assumed}"));
    }
    out
}

/// The fewest digits that read back, with an exponent where zeros would have to be counted.
fn short(value: f64) -> String {
    if value == 0.0 || (1e-4..1e7).contains(&value.abs()) { value.to_string() } else { format!("{value:e}") }
}

/// Six digits of a number that was computed.
pub(super) fn about(value: f64) -> String {
    short(format!("{value:.5e}").parse().unwrap_or(value))
}

fn column(sheet: &Sheet, input: usize) -> String {
    match sheet.measurement.inputs.get(input) {
        Some(ColumnRef::Number(number)) => format!("column {number}"),
        Some(ColumnRef::Name(name)) => format!("column '{name}'"),
        None => String::new(),
    }
}

/// A section in words.
fn shape(section: &Section) -> String {
    let mm = |metres: f64| about(1e3 * metres);
    match section {
        Section::Round { diameter, bore: 0.0 } => format!("round, diameter {} mm", mm(*diameter)),
        Section::Round { diameter, bore } => format!("round, diameter {} mm, bore {} mm", mm(*diameter), mm(*bore)),
        Section::Rectangular { width, height } => {
            format!("rectangular, width {} mm along the axis of bending, height {} mm", mm(*width), mm(*height))
        }
        Section::Area { area } => format!("area {} mm2", about(1e6 * area)),
    }
}

/// `0.5 a − 0.5 b`.
fn sum_of(terms: &[(String, f64)]) -> String {
    let mut out = String::new();
    for (name, weight) in terms {
        let sign = match (out.is_empty(), *weight < 0.0) {
            (true, false) => "",
            (true, true) => "−",
            (false, false) => " + ",
            (false, true) => " − ",
        };
        let size = weight.abs();
        let size = if size == 1.0 { String::new() } else { format!("{} ", short(size)) };
        out.push_str(&format!("{sign}{size}{name}"));
    }
    out
}

fn uncertainty(stated: &Stated) -> String {
    let Stated { key, text, uncertainty, .. } = stated;
    let kind = match uncertainty {
        Uncertainty::Rectangular { .. } => "half-width, rectangular".to_string(),
        Uncertainty::Expanded { coverage_factor, .. } => format!("normal, coverage factor {coverage_factor}"),
        Uncertainty::Standard { .. } if text.contains("standard") => "standard uncertainty, normal".to_string(),
        Uncertainty::Standard { .. } => "standard uncertainty in the last digits, normal".to_string(),
        Uncertainty::Triangular { .. } => "half-width, triangular".to_string(),
        Uncertainty::Arcsine { .. } => "half-width, arcsine".to_string(),
        Uncertainty::Estimated { degrees_of_freedom, shape, .. } => {
            format!("{}, {degrees_of_freedom} degrees of freedom", shape.as_str())
        }
    };
    if key == "uncertainty" {
        format!("uncertainty: of every reading, {text} ({kind})")
    } else {
        format!("uncertainty: {key} = {text} ({kind})")
    }
}

fn chain(segment: &Segment, sheet: &Sheet, unit: &str) -> Vec<String> {
    let mut out = Vec::new();
    let chain = &segment.chain;
    out.push(format!(
        "reads: {} in {}",
        column(sheet, segment.reading),
        if segment.reads.is_empty() { "plain numbers" } else { &segment.reads }
    ));
    for (paired, of) in [(segment.paired, "reading"), (segment.supply_paired, "voltage of the reference")] {
        let Some(paired) = paired else { continue };
        let second = column(sheet, paired.input);
        out.push(match paired.how {
            Pairing::Reversed => format!("{of}: half of the difference to {second}, read with the current reversed"),
            Pairing::Tap => format!("{of}: twice {second} less the column above, which takes off two equal leads"),
        });
    }
    if let Some(c) = &chain.converter {
        out.push(converter(c));
    }
    amplifier(&chain.amplifier, &mut out);
    match chain.supply {
        Supply::None => {
            if matches!(chain.network, Network::Bridge(_) | Network::Divider { .. } | Network::Reference { .. }) {
                out.push("supply: not needed, the readings are a ratio to it".into());
            }
        }
        Supply::Fixed(v) if matches!(chain.network, Network::Resistance { .. }) => {
            out.push(format!("current: {} A through the sensor, R = V/I", short(v)));
        }
        Supply::Fixed(v) => {
            let unused = if chain.is_ratiometric() { ", not needed: the readings are a ratio to it" } else { "" };
            out.push(format!("supply: {} V for all readings{unused}", short(v)));
        }
        Supply::Column { exponent } if matches!(chain.network, Network::Resistance { .. }) => {
            let unit = super::current_unit(exponent).unwrap_or_default();
            let from = segment.supply.map_or_else(String::new, |s| column(sheet, s));
            out.push(format!("current: {from} in {unit}, row by row, R = V/I"));
        }
        Supply::Column { exponent } => {
            let unit = super::voltage_unit(exponent).unwrap_or_default();
            let from = segment.supply.map_or_else(String::new, |s| column(sheet, s));
            let unused = if chain.needs_supply_column() { "" } else { ", not needed: the readings are a ratio to it" };
            out.push(format!("supply: {from} in {unit}, row by row{unused}"));
        }
    }
    match &chain.network {
        Network::Bridge(b) => bridge(b, chain, &mut out),
        Network::Resistance { leads: l } => {
            leads(l.as_ref(), &mut out);
        }
        Network::Divider { divider, leads: l } => {
            let (place, equation) = match (divider.sensor, divider.input_resistance) {
                (Side::Low, None) => ("from the node to ground", "node/supply = R/(R + Rf)"),
                (Side::Low, Some(_)) => ("from the node to ground", "node/supply = R/(R + Rf + R Rf/Rin)"),
                (Side::High, None) => ("from the supply to the node", "node/supply = Rf/(R + Rf)"),
                (Side::High, Some(_)) => ("from the supply to the node", "node/supply = Rf/(R + Rf + R Rf/Rin)"),
            };
            let load = divider
                .input_resistance
                .map_or_else(|| ", no load on the node".into(), |r| format!(", node loaded by Rin = {} ohm", short(r)));
            out.push(format!("divider: sensor R {place}, fixed resistor Rf = {} ohm{load}", short(divider.fixed)));
            out.push(format!("divider: {equation}"));
            leads(l.as_ref(), &mut out);
        }
        Network::Reference { ohms, leads: l } => {
            out.push(format!(
                "reference: the voltage of the sensor over that of a resistor of {} ohm in series with it, R = ratio · {} ohm",
                short(*ohms),
                short(*ohms)
            ));
            leads(l.as_ref(), &mut out);
        }
        Network::Emf | Network::Direct => {}
    }
    broken_leads(segment, &mut out);
    thermometer::beside(chain, &mut out);
    if let Some(w) = &chain.lead_warmth {
        out.push(format!(
            "leads: r = r0 [1 + {} /K · (T − {} °C)], T their temperature",
            short(w.coefficient),
            short(w.reference_celsius)
        ));
        out.extend(temperature("lead temperature", w.temperature, segment.lead_temperature.as_ref()));
    }
    element(segment, unit, &mut out);
    let what = if matches!(chain.network, Network::Emf) { "reference junction" } else { "temperature" };
    out.extend(temperature(what, chain.temperature, segment.temperature.as_ref()));
    for (i, (own, side)) in chain.arm_temperatures.iter().zip(&segment.arm_temperatures).enumerate() {
        out.extend(temperature(&format!("temperature of arm {}", i + 1), *own, side.as_ref()));
    }
    if let Some(t) = &chain.transverse {
        out.push(format!(
            "transverse: e = ê (1 − ν0 K)/(1 + K · ratio), ê what the grid indicates, ν0 = 0.285, K = {} %, strain across over strain along = {}",
            about(100.0 * t.sensitivity),
            short(t.strain_ratio)
        ));
    }
    if let Some(step) = &segment.shunt {
        let place = if step.shunt.place == Place::Gauge { "gauge" } else { "instrument" };
        let expected = step.expected.map_or_else(
            || "expected is what it simulates in this bridge".into(),
            |e| format!("expected {} {}", short(e), unit),
        );
        out.push(format!(
            "shunt: {} ohm across arm {} at the {place} from {} to {}; {expected}, within {} %",
            short(step.shunt.ohms),
            step.shunt.arm,
            step.from.text,
            step.to.text,
            about(100.0 * step.tolerance)
        ));
    }
    for (limit, what) in [(chain.low_limit, "below"), (chain.high_limit, "above")] {
        if let Some(limit) = limit {
            out.push(format!("limit: a reading {what} {} {} is {}", short(limit.at), segment.reads, limit.word));
        }
    }
    if chain.extrapolate {
        out.push("extrapolates: laws are used outside their range; such results carry the word extrapolated".into());
    }
    for stated in &segment.stated {
        out.push(uncertainty(stated));
    }
    out
}

fn converter(c: &Converter) -> String {
    let power = if c.coding == Coding::Unsigned { c.bits } else { c.bits - 1 };
    let (coding, code) = match c.coding {
        Coding::Signed => ("two's complement", "code".to_string()),
        Coding::Offset => ("offset binary", format!("(code − 2^{power})")),
        Coding::Unsigned => ("unsigned", "code".to_string()),
    };
    let equation = match c.full_scale {
        FullScale::Supply => format!("V/supply = {code}/2^{power}"),
        FullScale::Volts(v) => format!("V = {code} · {} V/2^{power}", short(v)),
    };
    format!("converter: {} bits, {coding}, {equation}; its end codes are saturated", c.bits)
}

fn amplifier(amplifier: &Amplifier, out: &mut Vec<String>) {
    match amplifier {
        Amplifier::None => {}
        Amplifier::Gain { gain, offset } => {
            let offset = if *offset == 0.0 { ", no offset".into() } else { format!(" + {} V", short(*offset)) };
            out.push(format!("amplifier: out = {} · in{offset}; it does not load the bridge", short(*gain)));
        }
        Amplifier::Difference { circuit, offset } => {
            let gain = circuit.open_loop_gain.map_or_else(
                || "an ideal operational amplifier".into(),
                |a| format!("an operational amplifier of open-loop gain {}", short(a)),
            );
            let [ib, ia] = circuit.input.map(short);
            let [fb, fa] = circuit.feedback.map(short);
            let to = match circuit.reference {
                Reference::Centre => "the centre of the supply",
                Reference::Negative => "the negative supply",
            };
            out.push(format!(
                "amplifier: a difference amplifier around {gain}; it loads the bridge and passes common mode"
            ));
            out.push(format!(
                "amplifier: inverting side (node 3-4) {ib} ohm in and {fb} ohm back, other side (node 1-2) {ia} ohm in and {fa} ohm to {to}"
            ));
            if *offset != 0.0 {
                out.push(format!("amplifier: offset {} V at its output", short(*offset)));
            }
        }
    }
}

/// How a conductor comes by its resistance, where that is a length.
fn run(leads: &Leads) -> String {
    match &leads.each {
        Each::Same(conductor) => run_of(conductor),
        Each::Own(_) => String::new(),
    }
}

fn run_of(conductor: &Conductor) -> String {
    match conductor {
        Conductor::Run { metres, square_millimetres, ohm_metres } => format!(
            " (ρ l/A: {} m one way, {} mm2, {} ohm mm2/m)",
            about(*metres),
            about(*square_millimetres),
            about(*ohm_metres * 1e6)
        ),
        Conductor::Ohms(_) => String::new(),
    }
}

/// The same for the two leads of a pair.
fn run_of_pair(pair: &Pair) -> String {
    match pair {
        Pair::Run(conductor) => run_of(conductor),
        Pair::Same(_) | Pair::Own(_) => String::new(),
    }
}

/// Where a thermometer's circuit counts as broken.
fn faults(ohms: crate::Range) -> String {
    format!(
        "circuit: open above {} ohm, short below {} ohm: three times and a third of the law's ends",
        about(3.0 * ohms.max),
        about(ohms.min / 3.0)
    )
}

/// Where a temperature comes from.
fn temperature(what: &str, source: Temperature, side: Option<&MeasuredSide>) -> Option<String> {
    match (source, side) {
        (Temperature::Fixed(t), _) => Some(format!("{what}: T = {} °C for all readings", short(t))),
        (Temperature::Column, Some(side)) => {
            let gap = short(side.longest_gap);
            Some(match side.between {
                Between::Line => format!(
                    "{what}: T from channel {}, on the straight line between samples no more than {gap} s apart",
                    side.name
                ),
                Between::Last => {
                    format!("{what}: T from channel {}, its last sample, for no more than {gap} s", side.name)
                }
            })
        }
        _ => None,
    }
}

fn leads(leads: Option<&Leads>, out: &mut Vec<String>) {
    let Some(leads) = leads else { return };
    let [a, b, _] = leads.ohms().map(about);
    let run = run(leads);
    out.push(match leads.wires {
        Wires::Two => {
            format!("leads: two wires of {a} ohm and {b} ohm{run}, both in series with the sensor and taken off")
        }
        Wires::Three => {
            format!("leads: three wires; the instrument takes off one lead itself, left is {a} ohm − {b} ohm{run}")
        }
        Wires::Four => "leads: four wires, nothing to take off".into(),
    });
}

/// What three wires to a bridge read with one of them broken.
fn broken_leads(segment: &Segment, out: &mut Vec<String>) {
    let chain = &segment.chain;
    if chain.needs_supply_column() {
        return;
    }
    let inputs = Inputs { celsius: 20.0, lead_celsius: 20.0, arm_celsius: [20.0; 4], ..Inputs::default() };
    if let [Ok(one), Ok(two)] = [1, 2].map(|lead| chain.reading_with_broken_lead(lead, &inputs)) {
        out.push(format!(
            "leads: with the lead to arm 1 broken the reading is {} {unit}, with that to arm 2 {} {unit}; a break of the third has no reading of its own",
            about(one),
            about(two),
            unit = segment.reads
        ));
    }
}

fn arm_words(arm: &Arm, gauge: bool) -> String {
    match arm {
        Arm::Active { .. } if !gauge => "the sensor".into(),
        Arm::Active { factor, driven } => {
            let strain = if *driven == Driven::Across { "ν e" } else { "e" };
            let sign = if *factor < 0.0 { "−" } else { "" };
            let size = if factor.abs() == 1.0 { String::new() } else { format!("{} ", short(factor.abs())) };
            format!("a gauge that sees {sign}{size}{strain}")
        }
        Arm::Dummy => "a dummy gauge (temperature, no strain)".into(),
        Arm::Fixed => "fixed".into(),
    }
}

fn bridge(b: &Bridge, chain: &Chain, out: &mut Vec<String>) {
    let gauge = matches!(chain.element, Element::Gauge { .. } | Element::Transducer { .. });
    let mut arms: Vec<String> = Vec::new();
    for (i, (arm, ohms)) in b.arms.iter().zip(b.resistances).enumerate() {
        arms.push(format!("{} {}, {} ohm", i + 1, arm_words(arm, gauge), short(ohms)));
    }
    out.push(format!("bridge: arm {}", arms.join("; ")));
    out.push(
        "bridge: output/supply = R1/(R1 + R2) − R4/(R3 + R4) without leads and load; with them solved exactly, not linearised"
            .into(),
    );
    if b.arms.iter().any(|a| matches!(a, Arm::Active { driven: Driven::Across, .. })) {
        out.push(format!("bridge: Poisson's ratio ν = {}", short(b.poisson)));
    }
    if let Some(l) = &b.leads {
        let [a, c, third] = l.ohms().map(about);
        let run = run(l);
        out.push(match l.wires {
            Wires::Two => {
                let how = if b.balanced {
                    "arm 2 was made up to balance the bridge with them in place"
                } else {
                    "arm 2 is as stated"
                };
                format!("leads: two wires, {a} ohm and {c} ohm{run}, both in arm 1; {how}")
            }
            _ => format!(
                "leads: three wires, {a} ohm in arm 1, {c} ohm in arm 2, {third} ohm in series with the output{run}"
            ),
        });
    }
    let [p, n] = b.supply_leads.ohms();
    if p != 0.0 || n != 0.0 {
        let at =
            if b.sensed { "the supply is sensed at the bridge, behind them" } else { "the supply is that before them" };
        out.push(format!("supply leads: {} ohm and {} ohm{}; {at}", about(p), about(n), run_of_pair(&b.supply_leads)));
    }
    let [x, y] = b.signal_leads.ohms();
    if x != 0.0 || y != 0.0 {
        out.push(format!("signal leads: {} ohm and {} ohm{}", about(x), about(y), run_of_pair(&b.signal_leads)));
    }
    match b.input_resistance {
        Some(r) => out.push(format!("load: {} ohm across the output", short(r))),
        None if matches!(chain.amplifier, Amplifier::Difference { .. }) => {}
        None => out.push("load: none stated on the output".into()),
    }
}

fn element(segment: &Segment, unit: &str, out: &mut Vec<String>) {
    match &segment.chain.element {
        Element::Gauge { gauge, zero, limit } => {
            gauge_words(gauge, &segment.chain, out);
            let thermal = gauge.thermal_output.is_some() || gauge.thermal_points.is_some() || gauge.expansion.is_some();
            zero_words(zero, segment, thermal, out);
            out.push(format!(
                "range: |e| up to {} microstrain, beyond it a reading is out-of-range; open or short where a gauge is beyond three times or a third of its resistance",
                short(limit * 1e6)
            ));
        }
        Element::Direct { scale: 1.0, offset: 0.0 } => out.push("passed on as it is read: no sensor is named".into()),
        Element::Direct { scale, offset } => {
            let offset = match *offset {
                0.0 => String::new(),
                o if o < 0.0 => format!(" − {}", short(-o)),
                o => format!(" + {}", short(o)),
            };
            out.push(format!("passed on in another unit: value = {} · reading{offset}", short(*scale)));
        }
        Element::Transducer { law, zero, limit } => {
            out.push("transducer: u = its output over supply without leads and load, less u0 from the zero; each arm changes by ± u".into());
            let mut believed = *limit;
            match law {
                Transducer::Rated { output, capacity } => out.push(format!(
                    "transducer: load = u/rated · capacity, rated output {} mV/V, capacity {} {unit}",
                    about(output * 1e3),
                    about(*capacity)
                )),
                Transducer::Certificate(k) => {
                    let ratio = super::ratio_unit(k.output_exponent).unwrap_or_default();
                    out.push(if k.gives_output {
                        format!(
                            "transducer: u = {}, q the load, u in {ratio}; inverted exactly",
                            polynomial(&k.coefficients, "q")
                        )
                    } else {
                        format!("transducer: load q = {}, u in {ratio}", polynomial(&k.coefficients, "u"))
                    });
                    if k.load_scale != 1.0 {
                        out.push(format!("transducer: result = {} {unit} · q", about(k.load_scale)));
                    }
                    let [low, high] = k.range.map(|q| q * k.load_scale);
                    let [from, to] = k.believed().map(|q| q * k.load_scale);
                    out.push(format!(
                        "range: loads from {} {unit} to {} {unit}, as the certificate holds; read by the same polynomial from {} {unit} to {} {unit}, beyond it a reading is out-of-range",
                        about(low),
                        about(high),
                        about(from),
                        about(to)
                    ));
                    if believed >= from.abs().max(to.abs()) {
                        believed = f64::INFINITY;
                    }
                }
            }
            zero_words(zero, segment, false, out);
            if believed.is_finite() {
                out.push(format!(
                    "range: loads up to {} {unit} either way, beyond it a reading is out-of-range",
                    about(believed)
                ));
            }
        }
        _ => thermometer::element(segment, out),
    }
}

//! A chain in words: what `describe` prints.

use std::format;
use std::string::{String, ToString};
use std::vec::Vec;

use super::Sheet;
use crate::chain::{Chain, Element, Network, Output, Signal, Supply, Temperature};
use crate::measurement::{Between, Segment, Source, Stated, Uncertainty, ZeroSource};
use crate::signal::{Amplifier, Arm, Bridge, Coding, Driven, FullScale, Leads, Reference, Side, Wires};
use crate::strain::{ZeroMeaning, ZeroReading};
use crate::thermistor::Law;

pub(super) fn describe(sheet: &Sheet, index: usize) -> Vec<String> {
    let Some(channel) = sheet.measurement.channels.get(index) else { return Vec::new() };
    let mut out = Vec::new();
    let name = |i: usize| sheet.measurement.channels.get(i).map_or_else(String::new, |c| c.name.clone());
    match &channel.source {
        Source::Combination(terms) => {
            let sum: Vec<String> = terms.iter().map(|(i, w)| format!("{w} · {}", name(*i))).collect();
            out.push(format!("computed: {} ({})", sum.join(" + ").replace("+ -", "− "), channel.unit));
        }
        Source::Stress { of, factor } => {
            out.push(format!(
                "computed: uniaxial stress σ = E e of {}, {factor} {} for each of its unit",
                name(*of),
                channel.unit
            ));
        }
        Source::Reading(segments) => {
            for segment in segments {
                if let Some(from) = &segment.from {
                    out.push(format!("from {} on:", from.text));
                }
                let column =
                    sheet.measurement.inputs.get(segment.reading).map_or_else(String::new, ToString::to_string);
                out.push(format!("reads: column {column} in {}", reads(&segment.chain, &channel.unit)));
                chain(segment, sheet, &mut out);
                for stated in &segment.stated {
                    out.push(format!("uncertainty: {}", uncertainty(stated)));
                }
            }
            out.push(format!("gives: {}", channel.unit));
        }
    }
    for stated in &channel.stated {
        out.push(format!("uncertainty: {}", uncertainty(stated)));
    }
    if !channel.shared.is_empty() {
        out.push(format!("one error with other channels: {}", channel.shared.join(", ")));
    }
    for assumed in sheet.assumed.get(index).into_iter().flatten() {
        out.push(format!("assumed: {assumed}"));
    }
    out
}

fn reads(chain: &Chain, unit: &str) -> String {
    let base = match chain.reading.signal {
        Signal::Volts => "V",
        Signal::Ratio => "V/V",
        Signal::Ohms => "ohm",
        Signal::Count => "count",
        Signal::Quantity => return format!("its own unit, passed on as {unit}"),
    };
    if chain.reading.exponent == 0 { base.to_string() } else { format!("10^{} {base}", chain.reading.exponent) }
}

fn uncertainty(stated: &Stated) -> String {
    let Stated { key, value, uncertainty } = stated;
    let of = if value.is_nan() { String::new() } else { format!(" = {value}") };
    match uncertainty {
        Uncertainty::Rectangular { half_width } => format!("{key}{of} ± {half_width} (half-width, rectangular)"),
        Uncertainty::Expanded { expanded, coverage_factor } => {
            format!("{key}{of} ± {expanded} (k = {coverage_factor}, normal)")
        }
        Uncertainty::Standard { standard } => format!("{key}{of}, standard uncertainty {standard}"),
    }
}

fn chain(segment: &Segment, sheet: &Sheet, out: &mut Vec<String>) {
    let chain = &segment.chain;
    if let Some(c) = &chain.converter {
        let scale = match c.full_scale {
            FullScale::Supply => "the supply".to_string(),
            FullScale::Volts(v) => format!("{v} V"),
        };
        let (coding, power) = match c.coding {
            Coding::Signed => ("two's complement: V = code", c.bits - 1),
            Coding::Offset => ("offset binary: V = (code − 2^(N−1))", c.bits - 1),
            Coding::Unsigned => ("unipolar: V = code", c.bits),
        };
        out.push(format!("converter: {} bits, {coding} · {scale} / 2^{power}; end codes are saturated", c.bits));
    }
    match &chain.amplifier {
        Amplifier::None => {}
        Amplifier::Gain { gain, offset } => out.push(format!("amplifier: out = {gain} · in + {offset} V")),
        Amplifier::Difference { circuit, offset } => {
            let gain = circuit
                .open_loop_gain
                .map_or_else(|| "ideal operational amplifier".into(), |a| format!("open-loop gain {a}"));
            let [ib, ia] = circuit.input;
            let [fb, fa] = circuit.feedback;
            let to =
                if circuit.reference == Reference::Centre { "the centre of the supply" } else { "the negative supply" };
            out.push(format!(
                "amplifier: difference amplifier, inverting side {ib} ohm and {fb} ohm, other side {ia} ohm and {fa} ohm to {to}, {gain}, offset {offset} V; it loads the bridge"
            ));
        }
    }
    match chain.supply {
        Supply::None => {}
        Supply::Fixed(v) => {
            let unit = if matches!(chain.network, Network::Resistance { .. }) { "A" } else { "V" };
            out.push(format!("supply: {v} {unit}"));
        }
        Supply::Column { exponent } => {
            let column = segment
                .supply
                .and_then(|s| sheet.measurement.inputs.get(s))
                .map_or_else(String::new, ToString::to_string);
            out.push(format!("supply: column {column} · 10^{exponent} V"));
        }
    }
    match &chain.network {
        Network::Bridge(b) => bridge(b, out),
        Network::Resistance { leads: l } => leads(l.as_ref(), out),
        Network::Divider { divider, leads: l } => {
            let place = match divider.sensor {
                Side::Low => "sensor from node to ground: node/supply = R/(R + R_f)",
                Side::High => "sensor from supply to node: node/supply = R_f/(R + R_f)",
            };
            let load = divider.input_resistance.map_or_else(String::new, |r| format!(", node loaded by {r} ohm"));
            out.push(format!("divider: R_f = {} ohm, {place}{load}", divider.fixed));
            leads(l.as_ref(), out);
        }
        Network::Direct => {}
    }
    element(segment, out);
    match chain.temperature {
        Temperature::None => {}
        Temperature::Fixed(t) => out.push(format!("temperature: {t} °C for all readings")),
        Temperature::Column => {
            if let Some(side) = &segment.temperature {
                let between = match side.between {
                    Between::Line => "straight line between samples",
                    Between::Last => "last sample",
                };
                out.push(format!(
                    "temperature: channel {}, {between} no more than {} s apart",
                    side.name, side.longest_gap
                ));
            }
        }
    }
    for (limit, what) in [(chain.low_limit, "below"), (chain.high_limit, "above")] {
        if let Some(limit) = limit {
            out.push(format!("limit: a reading {what} {} is {}", limit.at, limit.word));
        }
    }
    if chain.extrapolate {
        out.push("laws are used outside their range; such results carry the word extrapolated".into());
    }
}

fn leads(leads: Option<&Leads>, out: &mut Vec<String>) {
    let Some(leads) = leads else { return };
    let [a, b, c] = leads.ohms();
    let words = match leads.wires {
        Wires::Two => format!("two wires of {a} ohm and {b} ohm, both taken off the reading"),
        Wires::Three => format!("three wires of {a}, {b} and {c} ohm; the difference of the first two is taken off"),
        Wires::Four => "four wires: nothing to take off".into(),
    };
    out.push(format!("leads: {words}"));
}

fn bridge(b: &Bridge, out: &mut Vec<String>) {
    let arms: Vec<String> = b
        .arms
        .iter()
        .zip(b.resistances)
        .map(|(arm, ohms)| match arm {
            Arm::Active { factor, driven: Driven::Along } => format!("{factor} e on {ohms} ohm"),
            Arm::Active { factor, driven: Driven::Across } => format!("{factor} ν e on {ohms} ohm"),
            Arm::Dummy => format!("dummy {ohms} ohm"),
            Arm::Fixed => format!("fixed {ohms} ohm"),
        })
        .collect();
    out.push(format!(
        "bridge: arms {}; solved exactly with leads and load, output/supply = R1/(R1+R2) − R4/(R3+R4) when unloaded",
        arms.join(", ")
    ));
    if b.arms.iter().any(|a| matches!(a, Arm::Active { driven: Driven::Across, .. })) {
        out.push(format!("Poisson's ratio: ν = {}", b.poisson));
    }
    if let Some(l) = &b.leads {
        let [a, c, third] = l.ohms();
        out.push(match l.wires {
            Wires::Two => {
                let how = if b.balanced { "R2 = gauge + leads: balanced with them in place" } else { "R2 as stated" };
                format!("leads: two wires of {a} ohm and {c} ohm in arm 1; {how}")
            }
            _ => {
                format!("leads: three wires, {a} ohm in arm 1, {c} ohm in arm 2, {third} ohm in series with the output")
            }
        });
    }
    let [p, n] = b.supply_leads.ohms();
    if p != 0.0 || n != 0.0 {
        let at = if b.sensed { "the supply is sensed at the bridge" } else { "the supply is stated before them" };
        out.push(format!("supply leads: {p} ohm and {n} ohm; {at}"));
    }
    let [x, y] = b.signal_leads.ohms();
    if x != 0.0 || y != 0.0 {
        out.push(format!("signal leads: {x} ohm and {y} ohm"));
    }
    if let Some(r) = b.input_resistance {
        out.push(format!("input resistance: {r} ohm across the output"));
    }
}

fn element(segment: &Segment, out: &mut Vec<String>) {
    match &segment.chain.element {
        Element::Gauge { gauge, zero, limit } => {
            out.push(format!("gauge: ΔR/R = F(T) e + x0 + τ(T), F = {}", gauge.factor));
            if gauge.slope != 0.0 {
                out.push(format!("gauge: F(T) = F [1 + {} (T − {} °C)]", gauge.slope, gauge.reference_celsius));
            }
            if let Some(to) = &gauge.thermal_output {
                let terms: Vec<String> = to
                    .coefficients
                    .iter()
                    .enumerate()
                    .filter(|(_, c)| **c != 0.0)
                    .map(|(i, c)| if i == 0 { c.to_string() } else { format!("{c} T^{i}") })
                    .collect();
                let unit = if to.fahrenheit { "°F" } else { "°C" };
                out.push(format!(
                    "thermal output: TO(T) = {} microstrain, T in {unit}, taken with gauge factor {}; τ = Fd (TO(T) − TO(T0))",
                    terms.join(" + ").replace("+ -", "− "),
                    to.gauge_factor
                ));
            }
            if let Some(e) = &gauge.expansion {
                out.push(format!(
                    "expansion: specimen {} /K, data {} /K; adds F (αs − αd)(T − T0) to τ",
                    e.specimen, e.data
                ));
            }
            let meaning = match zero.meaning {
                ZeroMeaning::Strain => "a strain that was there: strain(reading) − strain(zero)",
                ZeroMeaning::Resistance => "the gauge's own resistance was off",
                ZeroMeaning::Completion => "the fixed resistor in arm 2 was off",
            };
            let at = zero.celsius.map_or_else(String::new, |t| format!(", T0 = {t} °C"));
            match (&segment.zero, zero.reading) {
                (ZeroSource::Rows(n), _) => {
                    out.push(format!("zero: mean of output over supply in the first {n} rows{at}; {meaning}"))
                }
                (ZeroSource::Window { from, to }, _) => {
                    out.push(format!(
                        "zero: mean of output over supply from {} to {}{at}; {meaning}",
                        from.text, to.text
                    ));
                }
                (ZeroSource::Stated, Some(ZeroReading::AsRecorded(r))) => {
                    out.push(format!("zero: reading {r}{at}; {meaning}"))
                }
                (ZeroSource::Stated, Some(ZeroReading::Ratio(y))) => {
                    out.push(format!("zero: output/supply {y}{at}; {meaning}"))
                }
                (ZeroSource::Stated, None) => out.push(format!("zero: the bridge as stated{at}")),
            }
            out.push(format!("believed: |strain| up to {limit}"));
            if matches!(segment.chain.output, Output::ShearStrain { .. }) {
                out.push("shear strain γ = 2 e".into());
            }
        }
        Element::Platinum(k) => {
            let [low, high] = k.range_celsius;
            out.push(format!(
                "platinum: R = R0 [1 + A t + B t² + C (t − 100) t³], R0 = {} ohm, A = {:e}, B = {:e}, C = {:e} below 0 °C, {low} °C to {high} °C{}",
                k.r0_ohms,
                k.a,
                k.b,
                k.c,
                if crate::platinum::IEC_60751.with_r0(k.r0_ohms).a == k.a { " (IEC 60751:2008)" } else { "" }
            ));
        }
        Element::Thermistor(Law::Beta(k)) => {
            let [low, high] = k.range_celsius;
            out.push(format!(
                "thermistor: R = R25 exp[β (1/T − 1/298.15 K)], R25 = {} ohm, β = {} K, {low} °C to {high} °C",
                k.r25_ohms, k.beta_kelvin
            ));
        }
        Element::Thermistor(Law::SteinhartHart(k)) => {
            let [low, high] = k.range_celsius;
            out.push(format!(
                "thermistor: 1/T = a + b ln R + c ln³ R (Steinhart-Hart), a = {:e}, b = {:e}, c = {:e}, {low} °C to {high} °C",
                k.a, k.b, k.c
            ));
        }
        Element::Transducer { limit, .. } => out.push(format!("transducer: believed up to {limit}")),
        Element::Direct { scale, offset } => out.push(format!("value = {scale} · reading + {offset}")),
    }
}

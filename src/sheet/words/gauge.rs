//! A gauge and its zero in words.

use std::format;
use std::string::{String, ToString};
use std::vec::Vec;

use super::{about, short};
use crate::chain::{Chain, Element, Network, Output, Temperature};
use crate::measurement::{Drift, Segment, ZeroSource};
use crate::signal::Arm;
use crate::strain::{Gauge, Zero, ZeroMeaning, ZeroReading};

/// `-24 + 1.9 T − 0.04 T²`.
pub(super) fn polynomial(coefficients: &[f64], variable: &str) -> String {
    const POWERS: [&str; 7] = ["", "", "²", "³", "⁴", "⁵", "⁶"];
    let mut out = String::new();
    for (i, (c, power)) in coefficients.iter().zip(POWERS).enumerate().filter(|(_, (c, _))| **c != 0.0) {
        let variable = if i == 0 { "" } else { variable };
        let sign = match (out.is_empty(), *c < 0.0) {
            (true, false) => "",
            (true, true) => "−",
            (false, false) => " + ",
            (false, true) => " − ",
        };
        out.push_str(format!("{sign}{} {variable}{power}", short(c.abs())).trim_end());
    }
    if out.is_empty() { "0".into() } else { out }
}

pub(super) fn gauge_words(gauge: &Gauge, chain: &Chain, out: &mut Vec<String>) {
    let factor = if gauge.slope == 0.0 { "F" } else { "F(T)" };
    let output = gauge.thermal_output.is_some() || gauge.thermal_points.is_some();
    let thermal = output || gauge.expansion.is_some();
    let tau = if thermal { " + t τ(T)" } else { "" };
    let terms = if thermal { "; t = 1 for gauges and dummies, 0 for fixed arms" } else { "" };
    out.push(format!(
        "strain: each arm is R = R0 [1 + c ({factor} e + x0){tau}], c its multiple of e, x0 from the zero{terms}; solved for e"
    ));
    if gauge.slope == 0.0 {
        out.push(format!("gauge: gauge factor F = {} at every temperature", short(gauge.factor)));
    } else {
        out.push(format!(
            "gauge: F(T) = F [1 + s (T − Tref)], F = {}, s = {} /K, Tref = {} °C",
            short(gauge.factor),
            short(gauge.slope),
            short(gauge.reference_celsius)
        ));
    }
    match (output.then_some(()), &gauge.expansion) {
        (Some(()), Some(_)) => out.push("thermal output: τ = Fd (TO(T) − TO(T0)) + F (αs − αd)(T − T0)".into()),
        (Some(()), None) => out.push("thermal output: τ = Fd (TO(T) − TO(T0))".into()),
        (None, Some(_)) => out.push("thermal output: τ = F (αs − αd)(T − T0)".into()),
        (None, None) => out.push("thermal output: none is taken off".into()),
    }
    if let Some(to) = &gauge.thermal_output {
        let unit = if to.fahrenheit { "°F" } else { "°C" };
        out.push(format!(
            "thermal output: TO(T) = {} microstrain, T in {unit}, data taken with gauge factor Fd = {}",
            polynomial(&to.coefficients, "T"),
            short(to.gauge_factor)
        ));
        let [low, high] = to.range_celsius;
        if low.is_finite() && high.is_finite() {
            out.push(format!("thermal output: holds from {} °C to {} °C", short(low), short(high)));
        }
    }
    if let Some(to) = &gauge.thermal_points {
        let [low, high] = to.points.range_celsius();
        let points: Vec<String> = to.points.points().map(|(t, v)| format!("{} °C {}", short(t), short(v))).collect();
        out.push(format!(
            "thermal output: TO(T) in microstrain through the points {}, joined by a monotone cubic, data taken with gauge factor Fd = {}",
            points.join(", "),
            short(to.gauge_factor)
        ));
        out.push(format!("thermal output: holds from {} °C to {} °C", short(low), short(high)));
    }
    if let Some(e) = &gauge.expansion {
        out.push(format!(
            "expansion: specimen αs = {} /K, thermal output data for αd = {} /K",
            short(e.specimen),
            short(e.data)
        ));
    }
    if matches!(chain.output, Output::ShearStrain { .. }) {
        out.push("strain: e is the normal strain along the grids at 45° to the axis, and the result is the shear strain γ = 2 e".into());
    }
}

pub(super) fn zero_words(zero: &Zero, segment: &Segment, thermal: bool, out: &mut Vec<String>) {
    let from = match (&segment.zero, zero.reading) {
        (ZeroSource::Rows(n), _) => format!("the mean of output/supply over the readings in the first {n} rows"),
        (ZeroSource::RowsFrom { from, rows }, _) => {
            format!("the mean of output/supply over the readings in the first {rows} rows from {} on", from.text)
        }
        (ZeroSource::Window { from, to }, _) => {
            format!("the mean of output/supply over the readings from {} to {}", from.text, to.text)
        }
        (ZeroSource::Stated, Some(ZeroReading::Ratio(y))) if segment.zero_file.is_some() => {
            format!("output/supply = {} mV/V, a mean of readings", about(y * 1e3))
        }
        (ZeroSource::Stated, Some(ZeroReading::AsRecorded(r))) => format!("the reading {} {}", short(r), segment.reads),
        (ZeroSource::Stated, Some(ZeroReading::Ratio(y))) => format!("output/supply = {} mV/V", short(y * 1e3)),
        (ZeroSource::Stated, None) => {
            let nought = if matches!(segment.chain.element, Element::Transducer { .. }) { "u0" } else { "x0" };
            out.push(format!("zero: the bridge as stated, {nought} = 0"));
            zero_temperatures(zero, segment, thermal, out);
            return;
        }
    };
    let meaning = match zero.meaning {
        _ if matches!(segment.chain.element, Element::Transducer { .. }) => "the reading without load",
        ZeroMeaning::Strain => "it was a strain of the gauges, e = strain(reading) − strain(zero)",
        ZeroMeaning::Resistance => "the gauge's own resistance was off",
        ZeroMeaning::Completion => "the fixed resistor in arm 2 was off",
    };
    let file = segment.zero_file.as_ref().map_or_else(String::new, |file| format!(" of the recording {file}"));
    out.push(format!("zero: {from}{file}; {meaning}"));
    if let Some(again) = &segment.again {
        let window = again.window.in_words();
        let drift = match again.drift {
            None => "what it differs by is told and stays in the results",
            Some(Drift::Time) => {
                "what it differs by is taken off in proportion to time, from the middle of the first zero to that of the second; U does not contain it"
            }
            Some(Drift::Temperature) => {
                "what it differs by is taken off in proportion to temperature, extrapolated beyond a tenth of what the two zeros span; U does not contain it"
            }
        };
        out.push(format!("zero: read again in {window}; {drift}"));
    }
    zero_temperatures(zero, segment, thermal, out);
}

/// Temperatures at zero: of the gauge, of arms that have their own, of the leads.
fn zero_temperatures(zero: &Zero, segment: &Segment, thermal: bool, out: &mut Vec<String>) {
    const MEAN: &str = "the mean temperature of the same rows";
    let chain = &segment.chain;
    let celsius = |t: f64| format!("{} °C", short(t));
    let Network::Bridge(bridge) = &chain.network else { return };
    let gauges =
        || bridge.arms.iter().enumerate().zip(&chain.arm_temperatures).filter(|((_, arm), _)| **arm != Arm::Fixed);
    if thermal && gauges().any(|(_, own)| *own == Temperature::None) {
        let at = zero.celsius.map_or_else(|| MEAN.to_string(), celsius);
        out.push(format!("zero: temperature at zero T0 = {at}"));
    }
    for ((i, _), own) in gauges().filter(|(_, own)| thermal && **own != Temperature::None) {
        let at = match (zero.arm_celsius.get(i).copied().flatten(), own) {
            (Some(t), _) => celsius(t),
            (None, Temperature::Fixed(t)) => celsius(*t),
            _ => MEAN.to_string(),
        };
        out.push(format!("zero: temperature of arm {} at zero = {at}", i + 1));
    }
    if let Some(warmth) = &chain.lead_warmth {
        let at = match (zero.lead_celsius, warmth.temperature) {
            (Some(t), _) | (None, Temperature::Fixed(t)) => celsius(t),
            _ if segment.zero == ZeroSource::Stated => celsius(warmth.reference_celsius),
            _ => MEAN.to_string(),
        };
        out.push(format!("zero: temperature of the leads at zero = {at}"));
    }
}

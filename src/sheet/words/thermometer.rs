//! Thermometers in words.

use std::format;
use std::string::String;
use std::vec::Vec;

use super::{about, short};
use crate::chain::{Chain, Element};
use crate::measurement::{Segment, ToleranceClass};
use crate::metal;
use crate::platinum::its90::Deviation;
use crate::platinum::{Coefficients, PUBLISHED};
use crate::thermistor::Law;

/// The law of a thermometer, its range and its class.
pub(super) fn element(segment: &Segment, out: &mut Vec<String>) {
    let element = &segment.chain.element;
    match element {
        Element::Platinum(k) => {
            let same = |own: &Coefficients| (own.a, own.b, own.c) == (k.a, k.b, k.c);
            let name = PUBLISHED.iter().find(|p| same(&p.coefficients)).map_or("as stated", |p| p.name);
            out.push(format!(
                "platinum: R = R0 [1 + A t + B t² + C (t − 100 °C) t³], C only below 0 °C; R0 = {} ohm",
                short(k.r0_ohms)
            ));
            let name = if name == "IEC 60751" { "IEC 60751:2008" } else { name };
            let scale = match PUBLISHED.iter().find(|p| same(&p.coefficients)).map(|p| p.scale) {
                Some(crate::platinum::Scale::Ipts68) => "on IPTS-68",
                Some(crate::platinum::Scale::NotStated) => "on the scale of its source",
                _ => "on ITS-90",
            };
            out.push(format!(
                "platinum: A = {:e} /K, B = {:e} /K², C = {:e} /K⁴ ({name}), t in °C {scale}",
                k.a, k.b, k.c
            ));
        }
        Element::AlphaDeltaBeta(k) => {
            out.push(format!(
                "platinum: R = R0 (1 + α [t − δ (t/100) (t/100 − 1) − β (t/100)³ (t/100 − 1)]), β only below 0 °C; R0 = {} ohm",
                short(k.r0_ohms)
            ));
            out.push(format!("platinum: α = {} /K, δ = {} K, β = {} K", short(k.alpha), short(k.delta), short(k.beta)));
        }
        Element::Standard { triple_point_ohms, deviation } => {
            out.push(format!(
                "platinum: ITS-90, W = R/R(0.01 °C) with R(0.01 °C) = {} ohm, T from Wr = W − ΔW",
                short(*triple_point_ohms)
            ));
            out.push(format!("platinum: ΔW = {}", deviation_words(deviation)));
        }
        Element::Metal(metal::Law::Nickel(k)) => {
            out.push(format!("nickel: R = R0 (1 + A t + B t² + D t⁴ + F t⁶), R0 = {} ohm", short(k.r0_ohms)));
            out.push(format!(
                "nickel: A = {:e} /K, B = {:e} /K², D = {:e} /K⁴, F = {:e} /K⁶ (DIN 43760)",
                k.a, k.b, k.d, k.f
            ));
        }
        Element::Metal(metal::Law::Copper(k)) => {
            out.push(format!(
                "copper: R = R0 [1 + A t + B t (t + 6.7 °C) + C t³], B and C only below 0 °C; R0 = {} ohm",
                short(k.r0_ohms)
            ));
            let same =
                |law: &metal::Law| matches!(law, metal::Law::Copper(own) if (own.a, own.b, own.c) == (k.a, k.b, k.c));
            let source = metal::PUBLISHED.iter().find(|p| same(&p.law)).map_or("as stated", |p| p.source);
            out.push(format!("copper: A = {:e} /K, B = {:e} /K², C = {:e} /K³ ({source})", k.a, k.b, k.c));
        }
        Element::Thermistor(law) => thermistor(law, out),
        Element::Thermocouple(kind) => {
            out.push(format!(
                "thermocouple: type {}, E(t) = E + E(t reference), inverse of the reference function of IEC 60584-1",
                kind.letter()
            ));
            // where a microvolt is more than a fifth of a kelvin
            let range = kind.celsius_range();
            for end in [range.min, range.max] {
                let slope = kind.microvolts_per_kelvin_at_celsius(end).map_or(f64::INFINITY, f64::abs);
                if slope < 5.0 {
                    out.push(format!(
                        "thermocouple: ill-conditioned towards {} °C, where it gives {} µV/K: a microvolt there is {} K",
                        short(end),
                        about(slope),
                        about(1.0 / slope)
                    ));
                }
            }
            if *kind == crate::thermocouple::Thermocouple::B {
                out.push("thermocouple: up to 42.13 °C two temperatures have one emf; the higher is given, with the word ambiguous".into());
            }
        }
        Element::Gauge { .. } | Element::Transducer { .. } | Element::Direct { .. } => {}
    }
    if let Some([low, high]) = element.range_celsius() {
        out.push(format!("range: {} °C to {} °C, beyond it a reading is out-of-range", short(low), short(high)));
        if !matches!(element, Element::Thermocouple(_)) {
            let (a, b) = (element.ohms_from_celsius(low), element.ohms_from_celsius(high));
            out.push(super::faults(crate::Range::new("resistance", "Ω", a.min(b), a.max(b))));
        }
    }
    if let Some(ToleranceClass { text, limits: tolerance, .. }) = &segment.tolerance {
        let [low, high] = tolerance.range_celsius();
        let at = |t: f64| {
            tolerance
                .kelvin_at_celsius(t)
                .map_or_else(|_| String::new(), |k| format!("±{} K at {} °C", about(k), short(t)))
        };
        let places: Vec<String> = [low, 0.0_f64.clamp(low, high), high].map(at).into_iter().collect();
        out.push(format!("class {text}: {}, from {} °C to {} °C", places.join(", "), short(low), short(high)));
    }
}

fn thermistor(law: &Law, out: &mut Vec<String>) {
    match law {
        Law::Beta(k) => out.push(format!(
            "thermistor: R = R25 exp[β (1/T − 1/298.15 K)], T in K, R25 = {} ohm, β = {} K",
            short(k.r25_ohms),
            short(k.beta_kelvin)
        )),
        Law::SteinhartHart(k) => out.push(format!(
            "thermistor: 1/T = a + b ln R + c ln³ R, T in K, R in ohm (Steinhart-Hart); a = {:e} /K, b = {:e} /K, c = {:e} /K",
            k.a, k.b, k.c
        )),
        Law::LogarithmOfRatio(k) => out.push(format!(
            "thermistor: ln(R/Rref) = A + B/T + C/T² + D/T³, T in K, Rref = {} ohm; A = {:e}, B = {:e} K, C = {:e} K², D = {:e} K³",
            short(k.reference_ohms),
            k.a,
            k.b,
            k.c,
            k.d
        )),
        Law::ReciprocalOfTemperature(k) => out.push(format!(
            "thermistor: 1/T = a + b L + c L² + d L³, L = ln(R/Rref), T in K, Rref = {} ohm; a = {:e} /K, b = {:e} /K, c = {:e} /K, d = {:e} /K",
            short(k.reference_ohms),
            k.a,
            k.b,
            k.c,
            k.d
        )),
        Law::Points(k) => {
            let points: Vec<String> = k.points().map(|(t, r)| format!("{} °C {} ohm", short(t), short(r))).collect();
            out.push(format!("thermistor: a monotone cubic in ln R over 1/T through {}", points.join(", ")));
        }
    }
}

fn deviation_words(deviation: &Deviation) -> String {
    let line = |terms: &[(f64, &str)]| {
        let all: Vec<String> = terms.iter().map(|(k, x)| format!("{k:e} {x}")).collect();
        all.join(" + ").replace("+ -", "− ")
    };
    let (one, two, three) = ("(W − 1)", "(W − 1)²", "(W − 1)³");
    match *deviation {
        Deviation::FromHydrogen { a, b, c: [c1, c2, c3, c4, c5] } => {
            line(&[(a, one), (b, two), (c1, "ln³ W"), (c2, "ln⁴ W"), (c3, "ln⁵ W"), (c4, "ln⁶ W"), (c5, "ln⁷ W")])
        }
        Deviation::FromNeon { a, b, c: [c1, c2, c3] } => {
            line(&[(a, one), (b, two), (c1, "ln W"), (c2, "ln² W"), (c3, "ln³ W")])
        }
        Deviation::FromOxygen { a, b, c1 } => line(&[(a, one), (b, two), (c1, "ln² W")]),
        Deviation::FromArgon { a, b } => line(&[(a, one), (b, "(W − 1) ln W")]),
        Deviation::ToGallium { a } | Deviation::ToIndium { a } => line(&[(a, one)]),
        Deviation::MercuryToGallium { a, b } | Deviation::ToTin { a, b } | Deviation::ToZinc { a, b } => {
            line(&[(a, one), (b, two)])
        }
        Deviation::ToAluminium { a, b, c } => line(&[(a, one), (b, two), (c, three)]),
        Deviation::ToSilver { a, b, c, d, w_aluminium } => format!(
            "{}, and above 660.323 °C + {d:e} (W − {})²",
            line(&[(a, one), (b, two), (c, three)]),
            short(w_aluminium)
        ),
    }
}

/// What stands beside a thermometer, and what its current does to it.
pub(super) fn beside(chain: &Chain, out: &mut Vec<String>) {
    let around = &chain.around;
    for (resistor, what) in [(around.parallel, "resistor"), (around.leakage, "insulation")] {
        if let Some(r) = resistor {
            out.push(format!("beside the sensor: {what} of {} ohm in parallel with it", short(r)));
        }
    }
    if let Some(r) = around.series {
        out.push(format!("beside the sensor: resistor of {} ohm in series with it", short(r)));
    }
    if let Some(heating) = &chain.self_heating {
        let current = heating.amperes.map_or_else(|| "i from the circuit".into(), |i| format!("i = {} A", short(i)));
        out.push(format!("self-heating: T = t(R) − {} K/W · i² R, {current}", short(heating.kelvin_per_watt)));
    }
}

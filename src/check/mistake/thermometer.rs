//! Mistakes with thermometers and with temperatures.

use super::{Effect, Free, Trials, before, chains, step};
use crate::chain::{Chain, Element, Network, Output, Temperature};
use crate::check::model::{Model, Step, Straight};
use crate::measurement::Source;
use crate::platinum::{Coefficients, PUBLISHED};
use crate::signal::{Conductor, Each, Leads, Side, Wires};
use crate::thermistor::{Beta, Law, SteinhartHart};
use crate::thermocouple::Thermocouple;

pub(super) fn add(t: &mut Trials<'_>) {
    if let Some(Source::Combination(_)) = t.clues.measurement.channels.get(t.clues.channel).map(|c| &c.source)
        && t.clues.unit == "K"
    {
        for (scale, offset) in [(1.0, 273.15), (1.0, -273.15), (1.8, 32.0), (1.8, 0.0), (1.0, 32.0)] {
            t.add("difference-offset", Effect::Offset, move |m, _| step(m, Step::Line(scale, offset)))
                .fixed("factor", scale)
                .fixed("offset", offset);
        }
        return;
    }
    let Some(chain) = t.model.first().copied() else { return };
    if !chain.element.is_thermometer() {
        return;
    }
    units(t, &chain);
    circuit(t, &chain);
    match chain.element {
        Element::Platinum(k) => platinum(t, k),
        Element::Metal(law) => {
            let r0 = match law {
                crate::metal::Law::Nickel(k) => k.r0_ohms,
                crate::metal::Law::Copper(k) => k.r0_ohms,
            };
            t.add("r0", Effect::Curve, move |m, p| {
                chains(m, &mut |c| match &mut c.element {
                    Element::Metal(law) => {
                        *law = law.with_r0(p);
                        true
                    }
                    _ => false,
                })
            })
            .free(Free::ratio("resistance at 0 degC, ohm", r0).within(0.85, 1.15));
        }
        Element::Thermistor(law) => thermistor(t, law),
        Element::Thermocouple(kind) => junction(t, &chain, kind),
        _ => {}
    }
    if chain.self_heating.is_some() {
        t.add("self-heating-ignored", Effect::Curve, |m, _| chains(m, &mut |c| c.self_heating.take().is_some()));
    }
    if !chain.around.is_none() {
        t.add("parallel-ignored", Effect::Curve, |m, _| {
            chains(m, &mut |c| {
                let was = !c.around.is_none();
                c.around = crate::signal::Around::NONE;
                was
            })
        });
    }
}

fn units(t: &mut Trials<'_>, chain: &Chain) {
    match chain.output {
        Output::Celsius => {
            for offset in [273.15, -273.15, 273.0, -273.0, 273.16] {
                t.add("kelvin-offset", Effect::Offset, move |m, _| step(m, Step::Line(1.0, offset)))
                    .fixed("offset, K", offset);
            }
            for (scale, offset, words) in [
                (1.8, 32.0, "in degF"),
                (5.0 / 9.0, -160.0 / 9.0, "taken for degF and turned into degC"),
                (1.8, 0.0, "in degF without the 32"),
            ] {
                t.add("fahrenheit", Effect::Ratio, move |m, _| step(m, Step::Line(scale, offset))).note(words);
            }
        }
        Output::Kelvin => {
            for offset in [-273.15, -0.15, 0.01] {
                t.add("kelvin-offset", Effect::Offset, move |m, _| step(m, Step::Line(1.0, offset)))
                    .fixed("offset, K", offset);
            }
        }
        Output::Fahrenheit => {
            for (scale, offset, words) in [(5.0 / 9.0, -160.0 / 9.0, "in degC"), (1.0, -32.0, "without the 32")] {
                t.add("fahrenheit", Effect::Ratio, move |m, _| step(m, Step::Line(scale, offset))).note(words);
            }
        }
        _ => {}
    }
}

fn circuit(t: &mut Trials<'_>, chain: &Chain) {
    let leads = match &chain.network {
        Network::Resistance { leads } | Network::Divider { leads, .. } | Network::Reference { leads, .. } => *leads,
        _ => None,
    };
    if !matches!(chain.network, Network::Bridge(_) | Network::Emf | Network::Direct) {
        let on = |m: &mut Model, new: &dyn Fn(Option<Leads>) -> Option<Leads>| {
            chains(m, &mut |c| match &mut c.network {
                Network::Resistance { leads } | Network::Divider { leads, .. } | Network::Reference { leads, .. } => {
                    *leads = new(*leads);
                    true
                }
                _ => false,
            })
        };
        if let Some(own) = leads.filter(|l| l.excess_ohms() != 0.0) {
            t.add("leads-ignored", Effect::Curve, move |m, _| on(m, &|_| None));
            if chain.lead_warmth.is_some() {
                t.add("warm-leads", Effect::Temperature, |m, _| chains(m, &mut |c| c.lead_warmth.take().is_some()));
            }
            for wires in [Wires::Three, Wires::Four] {
                if wires != own.wires {
                    t.add("leads-wire-count", Effect::Curve, move |m, _| on(m, &|l| l.map(|l| Leads { wires, ..l })))
                        .fixed("wires", if wires == Wires::Three { 3.0 } else { 4.0 });
                }
            }
        } else if leads.is_some() {
            t.add("leads-wire-count", Effect::Curve, move |m, _| {
                on(m, &|l| l.map(|l| Leads { wires: Wires::Two, ..l }))
            })
            .fixed("wires", 2.0);
        }
        let each = leads.filter(|l| l.wires == Wires::Two).map_or(0.0, |l| 0.5 * l.excess_ohms());
        t.add("lead-ohms", Effect::Curve, move |m, p| {
            on(m, &|_| Some(Leads { wires: Wires::Two, each: Each::Same(Conductor::Ohms(p)) }))
        })
        .free(Free::difference("ohms of each lead", each, 0.1, [0.0, 1e6]));
    }
    match &chain.network {
        Network::Reference { ohms, .. } => {
            t.add("reference-resistor", Effect::Curve, |m, p| {
                chains(m, &mut |c| match &mut c.network {
                    Network::Reference { ohms, .. } => {
                        *ohms = p;
                        true
                    }
                    _ => false,
                })
            })
            .free(Free::ratio("ohms of the reference", *ohms));
        }
        Network::Divider { divider, .. } => {
            t.add("reference-resistor", Effect::Curve, |m, p| {
                chains(m, &mut |c| match &mut c.network {
                    Network::Divider { divider, .. } => {
                        divider.fixed = p;
                        true
                    }
                    _ => false,
                })
            })
            .free(Free::ratio("ohms of the fixed resistor", divider.fixed));
            t.add("divider-inverted", Effect::Curve, |m, _| {
                chains(m, &mut |c| match &mut c.network {
                    Network::Divider { divider, .. } => {
                        divider.sensor = match divider.sensor {
                            Side::Low => Side::High,
                            Side::High => Side::Low,
                        };
                        true
                    }
                    _ => false,
                })
            });
        }
        _ => {}
    }
}

fn curve(m: &mut Model, change: &dyn Fn(&mut Coefficients)) -> bool {
    chains(m, &mut |c| match &mut c.element {
        Element::Platinum(k) => {
            change(k);
            true
        }
        _ => false,
    })
}

fn platinum(t: &mut Trials<'_>, own: Coefficients) {
    let mut seen: std::vec::Vec<Coefficients> = std::vec![own.with_r0(100.0)];
    for published in PUBLISHED {
        let k = published.coefficients;
        let alike = |other: &Coefficients| (other.a, other.b, other.c) == (k.a, k.b, k.c);
        if seen.iter().any(alike) {
            continue;
        }
        seen.push(k);
        // R₁₀₀/R₀ = 1 + 100 A + 100² B
        let ratio = 1.0 + 100.0 * k.a + 1e4 * k.b;
        t.add("platinum-curve", Effect::Curve, move |m, _| curve(m, &|own| (own.a, own.b, own.c) = (k.a, k.b, k.c)))
            .fixed("R100/R0", ratio)
            .note(published.name);
    }
    t.add("r0", Effect::Curve, |m, p| curve(m, &|k| k.r0_ohms = p))
        .free(Free::ratio("resistance at 0 degC, ohm", own.r0_ohms).within(0.85, 1.15));
    let straight = |alpha: f64| {
        move |m: &mut Model, p: f64| {
            let alpha = if alpha > 0.0 { alpha } else { p };
            curve(m, &|k| (k.a, k.b, k.c) = (alpha, 0.0, 0.0))
        }
    };
    let mean = own.a + 100.0 * own.b;
    t.add("straight-line", Effect::Curve, straight(own.a)).fixed("slope, 1/K", own.a).note("the curve's A alone");
    t.add("straight-line", Effect::Curve, straight(-1.0)).free(Free::ratio("slope, 1/K", mean).within(0.9, 1.1));
    if own.c != 0.0 {
        t.add("quadratic-below-zero", Effect::Curve, |m, _| curve(m, &|k| k.c = 0.0));
    }
}

fn law(m: &mut Model, change: &dyn Fn(&mut Law) -> bool) -> bool {
    chains(m, &mut |c| match &mut c.element {
        Element::Thermistor(law) => change(law),
        _ => false,
    })
}

fn beta(m: &mut Model, change: &dyn Fn(&mut Beta)) -> bool {
    law(m, &|law| match law {
        Law::Beta(k) => {
            change(k);
            true
        }
        _ => false,
    })
}

/// ln 10
const LN_10: f64 = core::f64::consts::LN_10;

fn thermistor(t: &mut Trials<'_>, own: Law) {
    match own {
        Law::Beta(k) => {
            t.add("beta", Effect::Curve, |m, p| beta(m, &|k| k.beta_kelvin = p))
                .free(Free::ratio("beta, K", k.beta_kelvin).within(0.6, 1.6));
            let near = [0.96 * k.beta_kelvin, 1.04 * k.beta_kelvin];
            t.add("beta-range", Effect::Curve, |m, p| beta(m, &|k| k.beta_kelvin = p))
                .free(Free { range: near, ..Free::ratio("beta, K", k.beta_kelvin) })
                .note("beta of another pair of temperatures")
                .rare(0.7);
            t.add("r25", Effect::Curve, |m, p| beta(m, &|k| k.r25_ohms = p))
                .free(Free::ratio("ohms at 25 degC", k.r25_ohms).within(0.1, 10.0));
            // 1/T = 1/T₂₅ + lg(R/R₂₅)/β
            t.add("log10", Effect::Curve, |m, _| beta(m, &|k| k.beta_kelvin *= LN_10));
        }
        Law::SteinhartHart(_) => {
            t.add("log10", Effect::Curve, |m, _| {
                law(m, &|law| match law {
                    Law::SteinhartHart(k) => {
                        *k = SteinhartHart { b: k.b / LN_10, c: k.c / (LN_10 * LN_10 * LN_10), ..*k };
                        true
                    }
                    _ => false,
                })
            });
        }
        _ => {}
    }
    if !matches!(own, Law::Beta(_)) {
        let [low, high] = own.range_celsius();
        for upper in [50.0, 75.0, 80.0, 85.0, 100.0, 125.0] {
            if !(low..=high).contains(&25.0) || !(low..=high).contains(&upper) {
                continue;
            }
            let at = |t: f64| [t, own.ohms_from_celsius(t)];
            if let Ok(k) = Beta::through(at(25.0), at(upper), [low, high]) {
                t.add("beta-range", Effect::Curve, move |m, _| {
                    law(m, &|law| {
                        *law = Law::Beta(k);
                        true
                    })
                })
                .fixed("beta, K", k.beta_kelvin)
                .fixed("upper temperature, degC", upper);
            }
        }
        let (r25, range) = (own.ohms_from_celsius(25.0), own.range_celsius());
        let start =
            Beta::through([25.0, r25], [75.0, own.ohms_from_celsius(75.0)], range).map_or(3900.0, |k| k.beta_kelvin);
        t.add("beta", Effect::Curve, move |m, p| {
            law(m, &|law| {
                *law = Law::Beta(Beta { r25_ohms: r25, beta_kelvin: p, range_celsius: range });
                true
            })
        })
        .free(Free::ratio("beta, K", start).within(0.6, 1.6))
        .rare(0.5);
    }
}

fn junction(t: &mut Trials<'_>, chain: &Chain, own: Thermocouple) {
    for kind in Thermocouple::ALL.into_iter().filter(|kind| *kind != own) {
        t.add("thermocouple-type", Effect::Curve, move |m, _| {
            chains(m, &mut |c| {
                c.element = Element::Thermocouple(kind);
                true
            })
        })
        .note(std::format!("type {}", kind.letter()));
    }
    for (times, words) in [(1.0, "compensated twice"), (-2.0, "its emf taken off instead of added")] {
        t.add("junction", Effect::Temperature, move |m, _| {
            before(m, &mut |b, _, _| {
                b.junction = times;
                true
            })
        })
        .note(words);
    }
    if chain.output == Output::Celsius {
        straight(t, own);
        t.add("junction", Effect::Temperature, |m, _| step(m, Step::PlusJunction))
            .note("compensated as emf, and added as a temperature besides");
    }
    t.add("junction", Effect::Temperature, |m, _| fixed_junction(m, 0.0))
        .fixed("junction, degC", 0.0)
        .note("not taken into account");
    let celsius = chain.output == Output::Celsius;
    if celsius {
        if let Temperature::Fixed(tj) = chain.temperature {
            t.add("junction", Effect::Temperature, move |m, _| fixed_junction(m, 0.0) && step(m, Step::Line(1.0, tj)))
                .note("added as a temperature");
        } else {
            t.add("junction", Effect::Temperature, |m, _| fixed_junction(m, 0.0) && step(m, Step::PlusJunction))
                .note("added as a temperature");
        }
    }
    t.add("junction", Effect::Temperature, fixed_junction)
        .free(Free::difference("junction, degC", 25.0, 10.0, [-100.0, 200.0]))
        .note("one value instead");
}

/// One emf per kelvin for the whole span: that at 25 °C as a handbook rounds it, or any.
fn straight(t: &mut Trials<'_>, own: Thermocouple) {
    let Ok(at_25) = own.microvolts_per_kelvin_at_celsius(25.0) else { return };
    if at_25 <= 1.0 {
        return;
    }
    for from in [Straight::Junction, Straight::Zero] {
        let line = move |m: &mut Model, microvolts: f64| {
            before(m, &mut |b, _, _| {
                b.straight = Some((1e-3 * microvolts, from));
                true
            })
        };
        let note = match from {
            Straight::Junction => "on top of the temperature of the junction",
            Straight::Zero => "the junction left out",
        };
        t.add("straight-line", Effect::Curve, line)
            .free(Free::ratio("slope, uV/K", libm::round(at_25)).within(0.5, 2.0))
            .note(note);
    }
}

fn fixed_junction(m: &mut Model, celsius: f64) -> bool {
    chains(m, &mut |c| {
        c.temperature = Temperature::Fixed(celsius);
        true
    })
}

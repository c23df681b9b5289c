//! Mistakes with bridges, gauges, transducers and rosettes.

use super::{Effect, Free, Trials, before, chains, gauges, needs_supply, own_codes, scale_output, step};
use crate::chain::{Chain, Element, Inputs, Network, Output, Supply};
use crate::check::bent::{Bend, zero_times};
use crate::check::model::{Codes, Join, Model, Step, is_gauge, zero_reading};
use crate::measurement::{Give, Grids, Source};
use crate::signal::{Amplifier, Arm, Bridge, Coding, Conductor, Driven, Each, FullScale, Leads, Pair, Place, Wires};
use crate::strain::{Material, Rosette, Tee, Transducer, ZeroMeaning, ZeroReading};

pub(super) fn add(t: &mut Trials<'_>) {
    let Some(chain) = t.model.first().copied() else {
        rosette(t);
        return;
    };
    network(t, &chain);
    if let Some(converter) = chain.converter {
        counts(t, &converter);
    }
    if let Element::Transducer { law: Transducer::Rated { output, .. }, .. } = chain.element {
        t.add("rated-output", Effect::Ratio, move |m, p| {
            chains(m, &mut |c| match &mut c.element {
                Element::Transducer { law: Transducer::Rated { output, .. }, .. } => {
                    *output = p;
                    true
                }
                _ => false,
            })
        })
        .free(Free::ratio("rated output, V/V", output));
    }
    zero(t, &chain);
    if is_gauge(&chain) {
        gauge(t, &chain);
        bend(t, &chain);
    }
    rosette(t);
}

fn bridges(m: &mut Model, change: impl Fn(&mut Bridge) -> bool) -> bool {
    chains(m, &mut |c| match &mut c.network {
        Network::Bridge(bridge) => change(bridge),
        _ => false,
    })
}

fn network(t: &mut Trials<'_>, chain: &Chain) {
    if needs_supply(chain) {
        let start = match chain.supply {
            Supply::Fixed(v) => Some(v),
            _ => t.model.parts.iter().find_map(|p| p.supply),
        };
        if let Some(start) = start.filter(|v| *v > 0.0) {
            let name = if matches!(chain.network, Network::Resistance { .. }) { "current, A" } else { "supply, V" };
            t.electric("supply", Some(Free::ratio(name, start)), &[], |c, p| {
                c.supply = Supply::Fixed(p);
                true
            });
        }
    }
    match chain.amplifier {
        Amplifier::Gain { gain, .. } => {
            t.electric("gain", Some(Free::ratio("gain", gain)), &[], move |c, p| scale_output(c, gain / p));
        }
        Amplifier::Difference { circuit, .. } => {
            // input resistor to feedback resistor, side by side
            let gain = circuit.feedback[0] / circuit.input[0];
            t.electric("gain", Some(Free::ratio("gain", gain)), &[], move |c, p| match &mut c.amplifier {
                Amplifier::Difference { circuit, .. } => {
                    circuit.feedback = circuit.feedback.map(|r| r * p / gain);
                    true
                }
                _ => false,
            });
        }
        Amplifier::None => {}
    }
    if chain.amplifier.offset() != 0.0 {
        t.add("amplifier-offset", Effect::Offset, |m, _| {
            chains(m, &mut |c| match &mut c.amplifier {
                Amplifier::Gain { offset, .. } | Amplifier::Difference { offset, .. } => {
                    *offset = 0.0;
                    true
                }
                Amplifier::None => false,
            })
        });
    }
    let Network::Bridge(bridge) = &chain.network else { return };
    let [p, n] = bridge.supply_leads.ohms();
    if p + n > 0.0 {
        let sensed = bridge.sensed;
        t.add("supply-leads", Effect::Ratio, move |m, _| {
            bridges(m, |b| {
                if sensed {
                    b.sensed = false
                } else {
                    b.supply_leads = Pair::none()
                }
                true
            })
        })
        .note(if sensed { "taken off although the supply is sensed" } else { "not taken off" });
    }
    if chain.lead_warmth.is_some() && bridge.has_leads() {
        t.add("warm-leads", Effect::Temperature, |m, _| {
            chains(m, &mut |c| {
                c.lead_warmth = None;
                true
            })
        });
    }
    if bridge.has_leads() {
        t.add("leads-ignored", Effect::Ratio, |m, _| {
            bridges(m, |b| {
                b.leads = None;
                b.supply_leads = Pair::none();
                b.signal_leads = Pair::none();
                true
            })
        });
    }
    let gauge = matches!(chain.element, Element::Gauge { .. });
    let effect = if gauge { Effect::Ratio } else { Effect::Curve };
    if let Some(leads) = bridge.leads {
        let [each, ..] = leads.ohms();
        t.add("lead-ohms", effect, |m, p| {
            bridges(m, |b| {
                b.leads = b.leads.map(|l| Leads { each: Each::Same(Conductor::Ohms(p)), ..l });
                true
            })
        })
        .free(Free::difference("ohms of each lead", each, 0.1, [0.0, 1e6]));
    }
    if (bridge.has_leads() || bridge.input_resistance.is_some()) && gauge {
        // beside leads and loads alone it is more than a common factor
        let own = bridge.resistances[0];
        t.add("gauge-resistance", Effect::Ratio, move |m, p| {
            bridges(m, |b| {
                b.resistances = b.resistances.map(|r| r * p / own);
                true
            })
        })
        .free(Free::ratio("resistance of the gauges, ohm", own))
        .rare(1.0);
    }
    if let Some(leads) = bridge.leads {
        let others = [Wires::Two, Wires::Three].into_iter().filter(move |w| *w != leads.wires);
        for wires in others {
            for balanced in [true, false] {
                if wires == Wires::Three && balanced {
                    continue;
                }
                t.add("leads-wire-count", Effect::Ratio, move |m, _| {
                    bridges(m, |b| {
                        b.leads = b.leads.map(|l| Leads { wires, ..l });
                        b.balanced = balanced;
                        true
                    })
                })
                .fixed("wires", if wires == Wires::Two { 2.0 } else { 3.0 });
            }
        }
    }
    if bridge.poisson != 0.0 && bridge.arms.iter().any(|a| matches!(a, Arm::Active { driven: Driven::Across, .. })) {
        t.add("poisson", Effect::Ratio, |m, p| {
            bridges(m, |b| {
                b.poisson = p;
                true
            })
        })
        .free(Free::difference("Poisson's ratio", bridge.poisson, 0.1, [0.0, 1.0]));
    }
    let measurement = t.clues.measurement;
    let part = t.model.parts.first().map(|p| p.channel);
    let segments = part.and_then(|c| measurement.channels.get(c)).and_then(|c| c.segments());
    if let Some(shunt) = segments.and_then(|s| s.iter().find_map(|s| s.shunt.as_ref())).map(|s| s.shunt)
        && is_gauge(chain)
    {
        let other = match shunt.place {
            Place::Gauge => Place::Instrument,
            Place::Instrument => Place::Gauge,
        };
        let inputs = Inputs { supply: 1.0, ..Inputs::default() };
        let at = |place| chain.simulated(crate::signal::Shunt { place, ..shunt }, 0.0, &inputs).ok();
        if let (Some(own), Some(theirs)) = (at(shunt.place), at(other)) {
            let ratio = theirs / own;
            t.add("shunt-place", Effect::Ratio, move |m, _| step(m, Step::Line(ratio, 0.0))).fixed("ratio", ratio);
        }
    }
}

fn counts(t: &mut Trials<'_>, converter: &crate::signal::Converter) {
    let all = 2.0 * ten_to_two(converter.bits);
    let half = 0.5 * all;
    let bipolar = converter.coding != Coding::Unsigned;
    let codes = converter.codes();
    let wrong: &[f64] = if bipolar { &[all, half - 1.0, all - 1.0] } else { &[half, all - 1.0, half - 1.0] };
    for &per in wrong {
        let ratio = codes / per;
        t.electric("counts-scaling", None, &[("codes per full scale", per)], move |c, _| {
            match c.converter.as_mut().map(|k| &mut k.full_scale) {
                Some(FullScale::Volts(v)) => {
                    *v *= ratio;
                    true
                }
                _ => scale_output(c, ratio),
            }
        });
    }
    let ways: &[(Codes, &str)] = match converter.coding {
        Coding::Signed => &[
            (Codes::Unsigned(all), "negative codes read without their sign"),
            (Codes::More(-half), "read as offset binary"),
        ],
        Coding::Offset => &[
            (Codes::More(half), "the middle of the range not taken off"),
            (Codes::Signed(all), "read as two's complement"),
        ],
        Coding::Unsigned => &[(Codes::Signed(all), "read as two's complement")],
    };
    for &(codes, words) in ways {
        t.add("counts-sign", Effect::Offset, move |m, _| {
            before(m, &mut |b, c, supply| {
                let offset = c.converter.is_some_and(|k| k.coding == Coding::Offset);
                if !own_codes(b, c, supply, codes) {
                    return false;
                }
                if offset && matches!(codes, Codes::Signed(_)) {
                    // two's complement has its zero at code 0
                    b.line.1 = 0.0;
                }
                true
            })
        })
        .note(words);
    }
}

/// 2^(N−1).
fn ten_to_two(bits: u8) -> f64 {
    (1u64 << (bits.clamp(1, 52) - 1)) as f64
}

fn zero(t: &mut Trials<'_>, chain: &Chain) {
    if t.model.parts.iter().any(|p| p.drift.is_some()) {
        t.add("drift-ignored", Effect::Series, |m, _| {
            let mut any = false;
            for part in &mut m.parts {
                any |= part.drift.take().is_some();
            }
            any
        });
    }
    let (Element::Gauge { zero, .. } | Element::Transducer { zero, .. }) = &chain.element else { return };
    if zero.reading.is_none() || zero_reading(chain).is_none_or(|r| r == 0.0) {
        return;
    }
    t.add("zero-missing", Effect::Offset, |m, _| {
        chains(m, &mut |c| match &mut c.element {
            Element::Gauge { zero, .. } | Element::Transducer { zero, .. } => {
                zero.reading = None;
                zero.meaning = ZeroMeaning::Strain;
                true
            }
            _ => false,
        })
    });
    for (id, times) in [("zero-doubled", 2.0), ("zero-reversed", -1.0)] {
        t.add(id, Effect::Offset, move |m, _| {
            chains(m, &mut |c| {
                let Some(other) = zero_times(c, times) else { return false };
                match &mut c.element {
                    Element::Gauge { zero, .. } | Element::Transducer { zero, .. } => {
                        zero.reading = Some(ZeroReading::Ratio(other));
                        zero.meaning = ZeroMeaning::Strain;
                        true
                    }
                    _ => false,
                }
            })
        });
    }
    if zero.meaning == ZeroMeaning::Strain {
        t.add("zero-after-linearising", Effect::Curve, |m, _| {
            before(m, &mut |b, c, _| {
                let Some(reading) = zero_reading(c) else { return false };
                b.less = reading;
                b.by_supply = c.needs_supply_column();
                match &mut c.element {
                    Element::Gauge { zero, .. } | Element::Transducer { zero, .. } => zero.reading = None,
                    _ => return false,
                }
                true
            })
        })
        .note("strain(reading - zero reading)");
    } else {
        t.add("zero-after-linearising", Effect::Curve, |m, _| {
            gauges(m, &mut |_, zero| {
                zero.meaning = ZeroMeaning::Strain;
                true
            })
        })
        .note("strain(reading) - strain(zero reading)");
    }
}

fn gauge(t: &mut Trials<'_>, chain: &Chain) {
    let Element::Gauge { gauge, zero, .. } = &chain.element else { return };
    let own = gauge.factor;
    t.add("gauge-factor", Effect::Ratio, move |m, p| {
        gauges(m, &mut |g, _| {
            g.factor *= p / own;
            true
        })
    })
    .free(Free::ratio("gauge factor", own).within(0.2, 5.0));
    t.add("gauge-factor-inverted", Effect::Ratio, |m, _| {
        gauges(m, &mut |g, _| {
            g.factor = 1.0 / g.factor;
            true
        })
    });
    arms(t, chain);
    let shear = matches!(chain.output, Output::ShearStrain { .. });
    let ratio = if shear { 0.5 } else { 2.0 };
    t.add("shear-for-normal", Effect::Ratio, move |m, _| step(m, Step::Line(ratio, 0.0))).fixed("factor", ratio);
    if gauge.has_thermal() {
        let package = gauge.thermal_output.is_some() || gauge.thermal_points.is_some();
        if package {
            t.add("thermal-output-omitted", Effect::Temperature, |m, _| {
                gauges(m, &mut |g, _| {
                    (g.thermal_output, g.thermal_points) = (None, None);
                    true
                })
            });
            t.add("thermal-output-reversed", Effect::Temperature, |m, _| {
                gauges(m, &mut |g, _| {
                    reverse_output(g);
                    true
                })
            });
        }
        if gauge.expansion.is_some() && package {
            t.add("thermal-output-omitted", Effect::Temperature, |m, _| {
                gauges(m, &mut |g, _| {
                    (g.thermal_output, g.thermal_points, g.expansion) = (None, None, None);
                    true
                })
            })
            .note("with the difference in expansion");
            t.add("thermal-output-reversed", Effect::Temperature, |m, _| {
                gauges(m, &mut |g, _| {
                    reverse_output(g);
                    g.expansion = g.expansion.map(|e| crate::strain::Expansion { specimen: e.data, data: e.specimen });
                    true
                })
            })
            .note("with the difference in expansion");
        }
        if gauge.thermal_output.is_some() {
            t.add("thermal-output-unit", Effect::Temperature, |m, _| {
                gauges(m, &mut |g, _| match &mut g.thermal_output {
                    Some(output) => {
                        output.fahrenheit = !output.fahrenheit;
                        output.range_celsius = [f64::NEG_INFINITY, f64::INFINITY];
                        true
                    }
                    None => false,
                })
            })
            .note(if gauge.thermal_output.is_some_and(|o| o.fahrenheit) {
                "degF read as degC"
            } else {
                "degC read as degF"
            });
        }
        if package {
            t.add("thermal-output-gauge-factor", Effect::Temperature, |m, _| {
                gauges(m, &mut |g, _| {
                    let factor = g.factor;
                    match (&mut g.thermal_output, &mut g.thermal_points) {
                        (Some(output), _) => output.gauge_factor = factor,
                        (_, Some(points)) => points.gauge_factor = factor,
                        _ => return false,
                    }
                    true
                })
            });
        }
        if let Some(t0) = zero.celsius {
            t.add("zero-temperature", Effect::Offset, |m, p| {
                gauges(m, &mut |_, z| {
                    z.celsius = Some(p);
                    true
                })
            })
            .free(Free::difference("temperature at zero, degC", t0, 10.0, [-100.0, 300.0]));
        }
        if let Some(expansion) = gauge.expansion {
            t.add("expansion", Effect::Temperature, |m, p| {
                gauges(m, &mut |g, _| match &mut g.expansion {
                    Some(e) => {
                        e.specimen = p;
                        true
                    }
                    None => false,
                })
            })
            .free(Free::difference(
                "expansion of the specimen, 1/K",
                expansion.specimen,
                1e-6,
                [-1e-4, 1e-4],
            ));
        }
    }
    if gauge.slope != 0.0 {
        for (factor, words) in [
            (100.0, "%/100K read as %/K"),
            (0.01, "%/K read as %/100K"),
            (1.8, "per degF taken for per K"),
            (0.0, "not used"),
        ] {
            t.add("slope-unit", Effect::Temperature, move |m, _| {
                gauges(m, &mut |g, _| {
                    g.slope *= factor;
                    true
                })
            })
            .fixed("factor", factor)
            .note(words);
        }
    }
    if chain.transverse.is_some() {
        t.add("transverse-omitted", Effect::Ratio, |m, _| chains(m, &mut |c| c.transverse.take().is_some()));
    }
}

fn reverse_output(g: &mut crate::strain::Gauge) {
    if let Some(output) = &mut g.thermal_output {
        output.coefficients = output.coefficients.map(|c| -c);
    }
    if let Some(points) = &mut g.thermal_points {
        points.gauge_factor = -points.gauge_factor;
    }
}

/// Patterns of arms, by what they are called here.
fn arms(t: &mut Trials<'_>, chain: &Chain) {
    let Network::Bridge(bridge) = &chain.network else { return };
    let (c, _) = bridge.drive();
    // output over supply in first order is F e k/4
    let own = c[0] - c[1] + c[2] - c[3];
    let nu = if bridge.poisson == 0.0 { 0.3 } else { bridge.poisson };
    let along = |factor: f64| Arm::Active { factor, driven: Driven::Along };
    let across = |factor: f64| Arm::Active { factor, driven: Driven::Across };
    let patterns: [([Arm; 4], f64); 6] = [
        ([along(1.0), Arm::Fixed, Arm::Fixed, Arm::Fixed], 1.0),
        ([along(1.0), along(-1.0), Arm::Fixed, Arm::Fixed], 2.0),
        ([along(1.0), Arm::Fixed, along(1.0), Arm::Fixed], 2.0),
        ([along(1.0), across(-1.0), Arm::Fixed, Arm::Fixed], 1.0 + nu),
        ([along(1.0), along(-1.0), along(1.0), along(-1.0)], 4.0),
        ([along(1.0), across(-1.0), along(1.0), across(-1.0)], 2.0 * (1.0 + nu)),
    ];
    for (pattern, k) in patterns {
        if pattern == bridge.arms {
            continue;
        }
        t.add("arm-count", Effect::Ratio, move |m, _| {
            bridges(m, |b| {
                b.arms = pattern;
                b.poisson = nu;
                true
            })
        })
        .fixed("bridge factor", k)
        .rare(0.3);
        let ratio = own / k;
        if (ratio - 1.0).abs() > 1e-9 && ratio.is_finite() {
            t.add("arm-count", Effect::Ratio, move |m, _| step(m, Step::Line(ratio, 0.0))).fixed("bridge factor", k);
        }
    }
}

fn bend(t: &mut Trials<'_>, chain: &Chain) {
    // the amplifier's own gain stands in the output of a difference amplifier
    let plain = !matches!(chain.amplifier, Amplifier::Difference { .. });
    let ways: [(&str, Bend, bool); 5] = [
        ("nonlinearity-ignored", Bend::Proportional, true),
        ("nonlinearity-reversed", Bend::Reversed, plain),
        ("nonlinearity-reversed", Bend::Opposite, true),
        ("nonlinearity-added", Bend::Again, plain),
        ("nonlinearity-added", Bend::Twice, true),
    ];
    for (id, way, fits) in ways {
        if fits {
            t.add(id, Effect::Curve, move |m, _| {
                m.bend = way;
                true
            });
        }
    }
}

fn rosette(t: &mut Trials<'_>) {
    let own = t.clues.measurement.channels.get(t.clues.channel).map(|c| &c.source);
    if let Some(Source::Stress { factor, loading: None, .. }) = own {
        let start = *factor;
        t.add("modulus", Effect::Ratio, move |m, p| step(m, Step::Line(p / start, 0.0)))
            .free(Free::ratio("modulus, in the unit of the stress per unit of strain", start));
    }
    let Join::Rosette(rosette) = &t.model.join else { return };
    let with = |m: &mut Model, change: &dyn Fn(&mut crate::measurement::RosetteSource) -> bool| match &mut m.join {
        Join::Rosette(rosette) => change(rosette),
        _ => false,
    };
    let swaps: &[([usize; 3], &str)] = match &rosette.grids {
        Grids::Two(_) => &[([1, 0, 2], "a and b")],
        Grids::Three(_) => &[
            ([1, 0, 2], "a and b"),
            ([0, 2, 1], "b and c"),
            ([2, 1, 0], "a and c"),
            ([1, 2, 0], "all three, in turn"),
            ([2, 0, 1], "all three, in turn the other way"),
        ],
    };
    for &(order, words) in swaps {
        t.add("grids-swapped", Effect::Curve, move |m, _| {
            // each reading is taken for that of another grid
            with(m, &|r| {
                let grids = match &r.grids {
                    Grids::Three(law) => {
                        let all = law.grids();
                        let mut new = *all;
                        for (place, slot) in order.iter().zip(&mut new) {
                            if let Some(grid) = all.get(*place) {
                                *slot = *grid;
                            }
                        }
                        Rosette::new(new).map(Grids::Three)
                    }
                    Grids::Two(tee) => {
                        let first = tee.first();
                        Tee::new(
                            crate::strain::Grid {
                                degrees: first.degrees + 90.0,
                                sensitivity: tee.second_sensitivity(),
                            },
                            first.sensitivity,
                        )
                        .map(Grids::Two)
                    }
                };
                grids.map(|g| r.grids = g).is_ok()
            })
        })
        .note(words);
    }
    let sensitive = rosette.each_grid().iter().any(|(.., g)| g.sensitivity != 0.0);
    if sensitive {
        t.add("transverse-omitted", Effect::Curve, move |m, _| {
            with(m, &|r| {
                let plain = |g: &crate::strain::Grid| crate::strain::Grid { sensitivity: 0.0, ..*g };
                let grids = match &r.grids {
                    Grids::Three(law) => Rosette::new(law.grids().each_ref().map(plain)).map(Grids::Three),
                    Grids::Two(tee) => Tee::new(plain(tee.first()), 0.0).map(Grids::Two),
                };
                grids.map(|g| r.grids = g).is_ok()
            })
        });
    }
    if rosette.give == Give::Direction {
        let first = rosette.each_grid().first().map_or(0.0, |(.., g)| g.degrees);
        let ways = [
            (-1.0, 0.0, "clockwise"),
            (1.0, 90.0, "to the smaller principal strain"),
            (-1.0, 90.0, "to the smaller principal strain, clockwise"),
            (1.0, -first, "from grid a"),
            (-1.0, first, "from the larger principal strain to grid a"),
        ];
        for (sense, turn, words) in ways {
            t.add("principal-angle", Effect::Curve, move |m, _| step(m, Step::Turn(sense, turn)))
                .fixed("turn, deg", turn)
                .note(words);
        }
        t.add("principal-angle", Effect::Ratio, |m, _| step(m, Step::Line(2.0, 0.0)))
            .note("the double angle not halved");
        t.add("principal-angle", Effect::Series, |m, _| step(m, Step::Positive)).note("counted from 0 to 180 deg");
        t.add("principal-angle", Effect::Ratio, |m, _| step(m, Step::Line(core::f64::consts::PI / 180.0, 0.0)))
            .note("in radians");
    }
    let strain = match rosette.give {
        Give::StressMax => Some(Give::PrincipalMax),
        Give::StressMin => Some(Give::PrincipalMin),
        Give::StressX => Some(Give::StrainX),
        Give::StressY => Some(Give::StrainY),
        Give::StressAlong(degrees) => Some(Give::StrainAlong(degrees)),
        _ => None,
    };
    if let (Some(give), Some((material, _))) = (strain, rosette.material) {
        t.add("uniaxial-for-biaxial", Effect::Curve, move |m, _| {
            with(m, &|r| {
                r.give = give;
                r.scale *= material.modulus();
                true
            })
        });
    }
    let stress = strain.is_some() || matches!(rosette.give, Give::VonMises | Give::Tresca | Give::StressXy);
    if let (true, Some((material, _))) = (stress, rosette.material) {
        t.add("modulus", Effect::Ratio, move |m, p| step(m, Step::Line(p / (material.modulus() / 1e9), 0.0)))
            .free(Free::ratio("modulus, GPa", material.modulus() / 1e9));
        t.add("poisson", Effect::Curve, move |m, p| {
            with(m, &|r| match &mut r.material {
                Some((material, _)) => Material::new(material.modulus(), p).map(|new| *material = new).is_ok(),
                None => false,
            })
        })
        .free(Free::difference("Poisson's ratio", material.poisson(), 0.1, [0.0, 0.49]));
    }
}

//! What must hold whatever the circuit: round trips, order, ends of ranges, faults, symmetry.

mod support;

use ohmwright::Error;
use ohmwright::chain::{
    Chain, Derivative, Element, Inputs, Limit, Network, Output, Plan, STRAIN_LIMIT, Sides, Signal, Supply, Temperature,
    Word,
};
use ohmwright::platinum::{Coefficients, IEC_60751, Platinum};
use ohmwright::signal::{
    Amplifier, Arm, Bridge, Coding, Conductor, Converter, Difference, Divider, Driven, Each, FullScale, Leads, Pair,
    Reference, Side, Wires,
};
use ohmwright::strain::{Gauge, Zero, ZeroMeaning, ZeroReading};
use ohmwright::thermistor::{Law, Thermistor};
use proptest::prelude::*;
use proptest::test_runner::RngSeed;
use support::chains::{self, BETA, STEINHART_HART, across, along, strain, unequal, warm_gauge};
use support::report::Report;

const FIXED: Arm = Arm::Fixed;
const DUMMY: Arm = Arm::Dummy;

/// Arms that see strain, with the number of times that one unit of it counts.
const PATTERNS: [[Arm; 4]; 10] = [
    [along(1.0), FIXED, FIXED, FIXED],
    [FIXED, FIXED, FIXED, along(1.0)],
    [FIXED, along(-1.0), FIXED, FIXED],
    [along(1.0), DUMMY, FIXED, FIXED],
    [along(1.0), along(-1.0), FIXED, FIXED],
    [along(1.0), across(-1.0), FIXED, FIXED],
    [along(1.0), FIXED, along(1.0), FIXED],
    [along(1.0), along(-1.0), along(1.0), along(-1.0)],
    [along(1.0), across(-1.0), along(1.0), across(-1.0)],
    // nearly blind: arms 1 and 4 count against each other, and the output turns back within reach
    [along(1.0), across(-1.0), across(-1.0), along(1.0097)],
];

/// The same circuits every time; a hundred times as many, new every time, with `--cfg exhaustive`.
fn config() -> ProptestConfig {
    let base = ProptestConfig { failure_persistence: None, ..ProptestConfig::default() };
    if cfg!(exhaustive) {
        ProptestConfig { cases: 76_800, max_global_rejects: 1_000_000, ..base }
    } else {
        ProptestConfig { cases: 768, rng_seed: RngSeed::Fixed(20_260_312), ..base }
    }
}

fn number(plan: &Plan, inputs: impl Into<Inputs>) -> f64 {
    plan.one(inputs).number().expect("a number")
}

/// A value over several octaves.
fn octaves(low: f64, high: f64) -> impl Strategy<Value = f64> {
    (0.0..1.0).prop_map(move |u: f64| low * libm::pow(high / low, u))
}

fn leads() -> impl Strategy<Value = Option<Leads>> {
    let ohms = 0.05..10.0_f64;
    prop::option::of((any::<bool>(), ohms.clone(), ohms.clone(), ohms).prop_map(|(two, a, b, c)| Leads {
        wires: if two { Wires::Two } else { Wires::Three },
        each: Each::Own([Conductor::Ohms(a), Conductor::Ohms(b), Conductor::Ohms(c)]),
    }))
}

fn amplifier() -> impl Strategy<Value = Amplifier> {
    let r = || 900.0..3_000.0_f64;
    let f = || 50_000.0..400_000.0_f64;
    let difference = ([r(), r()], [f(), f()], prop::option::of(octaves(1e4, 1e7)), any::<bool>()).prop_map(
        |(input, feedback, open_loop_gain, centre)| Amplifier::Difference {
            circuit: Difference {
                input,
                feedback,
                open_loop_gain,
                reference: if centre { Reference::Centre } else { Reference::Negative },
            },
            offset: 0.0,
        },
    );
    prop_oneof![
        2 => Just(Amplifier::None),
        1 => octaves(1.0, 1e3).prop_map(|gain| Amplifier::Gain { gain, offset: 0.0 }),
        1 => difference,
    ]
}

prop_compose! {
    /// Any bridge of ordinary figures.
    fn bridge()(
        pattern in prop::sample::select(&PATTERNS[..]),
        r in octaves(100.0, 5_000.0),
        off in [0.97..1.03_f64, 0.97..1.03, 0.97..1.03, 0.97..1.03],
        poisson in 0.2..0.4_f64,
        leads in leads(),
        balanced in any::<bool>(),
        supply_leads in [0.0..5.0_f64, 0.0..5.0],
        signal_leads in [0.0..5.0_f64, 0.0..5.0],
        sensed in any::<bool>(),
        input_resistance in prop::option::of(octaves(5e3, 1e10)),
    ) -> Bridge {
        Bridge {
            resistances: off.map(|k| k * r),
            arms: pattern,
            poisson,
            leads,
            balanced,
            supply_leads: Pair::Own(supply_leads),
            signal_leads: Pair::Own(signal_leads),
            sensed,
            input_resistance,
            shunt: None,
        }
    }
}

prop_compose! {
    /// Any chain of strain gauges, plain strain out.
    fn gauge_chain()(
        bridge in bridge(),
        factor in 1.8..4.5_f64,
        amplifier in amplifier(),
        warm in 0..4_u8,
        celsius in -50.0..150.0_f64,
        zero in prop::option::of((-0.002..0.002_f64, 0..3_u8)),
        column in any::<bool>(),
        live in 0..5_u8,
    ) -> (Chain, f64) {
        let gauge = match warm {
            0 | 1 => Gauge::new(factor),
            2 => Gauge { factor, ..warm_gauge() },
            _ => Gauge { slope: -1.2e-4, ..Gauge::new(factor) },
        };
        let arm_celsius = [Some(22.0), None, None, Some(23.0)];
        let mut zeroed = Zero { celsius: Some(21.0), lead_celsius: Some(12.0), arm_celsius, ..Zero::default() };
        let mut chain = strain(bridge, gauge, zeroed);
        // leads and arms that have columns of their own stand at 0 °C, which is what the tests leave there
        if live == 1 || live == 3 {
            chain.lead_warmth = Some(chains::copper(Temperature::Column));
        }
        if live == 2 || live == 3 {
            chain.arm_temperatures =
                [Temperature::Column, Temperature::None, Temperature::Fixed(celsius), Temperature::Column];
        }
        chain.amplifier = amplifier;
        chain.temperature = if column { Temperature::Column } else { Temperature::Fixed(celsius) };
        if let Some((e, meaning)) = zero {
            // the reading at a small strain as the zero reading
            let plain = Chain {
                temperature: Temperature::Fixed(21.0),
                arm_temperatures: [Temperature::None; 4],
                ..chain
            };
            let then = Inputs { lead_celsius: 12.0, ..Inputs::default() };
            if let Ok(y) = plain.plan().and_then(|p| p.forward(e, then)) {
                let single = bridge.arms.iter().filter(|a| matches!(a, Arm::Active { .. })).count() == 1;
                // behind the gain: what a mean over a window of readings over supply gives, the gain taken off
                let gain = if let Amplifier::Gain { gain, .. } = amplifier { gain } else { 1.0 };
                zeroed.reading = Some(ZeroReading::Ratio(y / gain));
                zeroed.meaning = match meaning {
                    1 if single => ZeroMeaning::Resistance,
                    2 if matches!(bridge.arms[1], Arm::Fixed) => ZeroMeaning::Completion,
                    _ => ZeroMeaning::Strain,
                };
                if let Element::Gauge { zero, .. } = &mut chain.element {
                    *zero = zeroed;
                }
            }
        }
        (chain, celsius)
    }
}

/// Gain from bridge to reading.
fn gain(amplifier: &Amplifier) -> f64 {
    match *amplifier {
        Amplifier::Gain { gain, .. } => gain,
        Amplifier::Difference { circuit, .. } => circuit.feedback[0] / circuit.input[0],
        _ => 1.0,
    }
}

proptest! {
    #![proptest_config(config())]

    /// There and back is the same strain. Allowed is what both ways are allowed: 4e-16 of the two potentials (below 2)
    /// forwards and 5e-16 V/V backwards, or 1e-12 relative.
    #[test]
    fn strain_there_and_back((chain, celsius) in gauge_chain(), e in -0.0999..0.0999_f64) {
        let plan = chain.plan().expect("a plan");
        let inputs = Inputs { celsius, ..Inputs::default() };
        // a strain at which an arm is no longer believed, or beyond the turning point, has no reading
        let Ok(reading) = plan.forward(e, inputs) else {
            prop_assume!(false);
            unreachable!()
        };
        let back = plan.one(Inputs { reading, ..inputs });
        let slope = 1.0 / chain.derivative(Derivative::Reading, e, &inputs).expect("a slope");
        let allowed = (2e-12 * e.abs()).max(1.3e-15 * gain(&chain.amplifier) / slope.abs());
        prop_assert_eq!(back.word, Word::Good);
        prop_assert!((back.value - e).abs() <= allowed, "{} for {e}, allowed {allowed:e}, slope {slope}", back.value);
    }

    /// Of two readings the one on the far side has the larger strain, all over the believed range.
    #[test]
    fn strain_rises_with_the_reading((chain, celsius) in gauge_chain(), a in -0.0999..0.0999_f64, b in -0.0999..0.0999_f64) {
        prop_assume!((a - b).abs() > 1e-9);
        let plan = chain.plan().expect("a plan");
        let inputs = Inputs { celsius, ..Inputs::default() };
        let (Ok(ya), Ok(yb)) = (plan.forward(a, inputs), plan.forward(b, inputs)) else {
            prop_assume!(false);
            unreachable!()
        };
        let home = 1.0 / chain.derivative(Derivative::Reading, 0.0, &inputs).expect("a slope");
        prop_assert_eq!((ya < yb) == (a < b), home > 0.0);
        // in between, whatever reading: a number, and between
        for share in [0.25, 0.5, 0.75] {
            let middle = number(&plan, Inputs { reading: ya + share * (yb - ya), ..inputs });
            prop_assert!(a.min(b) < middle && middle < a.max(b), "{a} {middle} {b}");
        }
    }

    /// Turning the sense of all arms turns the sign of the strain.
    #[test]
    fn turned_arms_negate((chain, celsius) in gauge_chain(), e in -0.0999..0.0999_f64) {
        let mut chain = chain;
        if let Element::Gauge { zero, .. } = &mut chain.element {
            zero.reading = None;
        }
        let mut turned = chain;
        if let Network::Bridge(bridge) = &mut turned.network {
            bridge.arms = bridge.arms.map(|arm| match arm {
                Arm::Active { factor, driven } => Arm::Active { factor: -factor, driven },
                other => other,
            });
        }
        let (plan, other) = (chain.plan().expect("a plan"), turned.plan().expect("a plan"));
        let inputs = Inputs { celsius, ..Inputs::default() };
        let Ok(reading) = plan.forward(e, inputs) else {
            prop_assume!(false);
            unreachable!()
        };
        let inputs = Inputs { reading, ..inputs };
        let (q, minus) = (number(&plan, inputs), number(&other, inputs));
        let slope = 1.0 / chain.derivative(Derivative::Reading, e, &inputs).expect("a slope");
        let allowed = (1e-12 * e.abs()).max(5e-16 * gain(&chain.amplifier) / slope.abs());
        prop_assert!((q + minus).abs() <= allowed, "{q} {minus}");
    }

    /// Volts with the supply beside them are volts at that supply.
    #[test]
    fn a_supply_column_is_a_supply((chain, celsius) in gauge_chain(), e in -0.0999..0.0999_f64, supply in 0.5..15.0_f64, offset in -0.1..0.1_f64) {
        let mut fixed = Chain { supply: Supply::Fixed(supply), ..chain };
        fixed.reading.signal = Signal::Volts;
        match &mut fixed.amplifier {
            Amplifier::Gain { offset: o, .. } | Amplifier::Difference { offset: o, .. } => *o = offset,
            _ => {}
        }
        let column = Chain { supply: Supply::Column { exponent: 0 }, ..fixed };
        let milli = Chain { supply: Supply::Column { exponent: -3 }, ..fixed };
        let inputs = Inputs { celsius, ..Inputs::default() };
        let plan = fixed.plan().expect("a plan");
        let Ok(reading) = plan.forward(e, inputs) else {
            prop_assume!(false);
            unreachable!()
        };
        let want = number(&plan, Inputs { reading, ..inputs });
        let slope = 1.0 / chain.derivative(Derivative::Reading, e, &inputs).expect("a slope");
        // the offset enters the rounding of the quotient
        let floor = 5e-16 * (gain(&chain.amplifier) + (offset / supply).abs()) / slope.abs();
        let allowed = (2e-12 * e.abs()).max(2.0 * floor);
        for (chain, supply) in [(column, supply), (milli, supply * 1e3)] {
            let plan = chain.plan().expect("a plan");
            let got = number(&plan, Inputs { reading, supply, celsius, ..Inputs::default() });
            prop_assert!((got - want).abs() <= allowed, "{got} {want}");
            let there = plan.forward(e, Inputs { reading: 0.0, supply, celsius, ..Inputs::default() }).expect("inside");
            prop_assert!((there - reading).abs() <= 1e-15 * (supply * gain(&chain.amplifier) + offset.abs()));
        }
    }

    /// A bridge whose halves balance reads exactly zero at zero, and zero is exactly no strain.
    #[test]
    fn balance_is_exactly_zero(
        bridge in bridge(), r in octaves(100.0, 5_000.0), other in octaves(100.0, 5_000.0), each in 0.05..10.0_f64,
    ) {
        let balanced = Bridge {
            resistances: [r, r, other, other],
            leads: bridge.leads.map(|l| Leads { each: Each::Same(Conductor::Ohms(each)), ..l }),
            balanced: true,
            ..bridge
        };
        let plan = strain(balanced, Gauge::new(2.08), Zero::default()).plan().expect("a plan");
        prop_assert_eq!(plan.forward(0.0, Inputs::default()), Ok(0.0));
        prop_assert_eq!(number(&plan, 0.0), 0.0);
        prop_assert_eq!(number(&plan, -0.0), 0.0);
    }

    /// Two equal gauges in the arms of one half cancel: such a bridge is refused, whatever its resistances.
    #[test]
    fn a_blind_bridge_is_refused(bridge in bridge(), r in octaves(100.0, 5_000.0), half in any::<bool>(), driven in any::<bool>()) {
        let gauge = if driven { across(1.0) } else { along(-1.3) };
        let arms = if half { [gauge, gauge, FIXED, FIXED] } else { [FIXED, FIXED, gauge, gauge] };
        let bare = Bridge {
            arms, leads: None, supply_leads: Pair::none(), signal_leads: Pair::none(), input_resistance: None, ..bridge
        };
        prop_assert_eq!(strain(bare, Gauge::new(2.08), Zero::default()).plan(), Err(Error::Blind));
        // four gauges that all do the same
        let all = Bridge { arms: [gauge; 4], ..bare };
        prop_assert_eq!(strain(all, Gauge::new(2.08), Zero::default()).plan(), Err(Error::Blind));
        // gauges in the arms that join at one supply terminal cancel where the bridge is balanced
        let side = Bridge { arms: [gauge, FIXED, FIXED, gauge], resistances: [r; 4], ..bare };
        prop_assert_eq!(strain(side, Gauge::new(2.08), Zero::default()).plan(), Err(Error::Blind));
    }

    /// Whatever the inputs: no panic, and a finite number exactly where the word has one.
    #[test]
    fn a_word_or_a_finite_number(
        (chain, _) in gauge_chain(), reading in any::<f64>(), supply in any::<f64>(), celsius in any::<f64>(),
        volts in any::<bool>(), extrapolate in any::<bool>(),
    ) {
        let mut chain = Chain { extrapolate, ..chain };
        if volts {
            chain.reading.signal = Signal::Volts;
            chain.supply = Supply::Column { exponent: 0 };
        }
        let plan = chain.plan().expect("a plan");
        for reading in [reading, reading % 1.0, 0.0] {
            let outcome = plan.one(Inputs { reading, supply, celsius, ..Inputs::default() });
            prop_assert_eq!(outcome.word.has_number(), outcome.value.is_finite(), "{:?}", outcome);
            prop_assert!(outcome.value.is_finite() || outcome.value.is_nan());
        }
    }

    /// Thermometers: there and back, and in order.
    #[test]
    fn temperature_there_and_back(
        r0 in octaves(10.0, 2_000.0), a in 0.0038..0.0040_f64, b in -6.1e-7..-5.5e-7_f64, c in -4.6e-12..-3.9e-12_f64,
        lead in 0.0..5.0_f64, share in 0.0..1.0_f64, other in 0.0..1.0_f64,
    ) {
        let platinum = Coefficients { r0_ohms: r0, a, b, c, range_celsius: [-200.0, 850.0] };
        let leads = Some(Leads { wires: Wires::Two, each: Each::Same(Conductor::Ohms(lead)) });
        for (element, low, high, rises) in [
            (Element::Platinum(platinum), -200.0, 850.0, true),
            (Element::Thermistor(BETA), -40.0, 125.0, false),
            (Element::Thermistor(STEINHART_HART), -40.0, 125.0, false),
        ] {
            let plan = Chain::new(Network::Resistance { leads }, element).plan().expect("a plan");
            let (t, u) = (low + share * (high - low), low + other * (high - low));
            let (rt, ru) = (plan.forward(t, 0.0).expect("inside"), plan.forward(u, 0.0).expect("inside"));
            // each way is allowed what tests/accuracy.rs states; both together stay below one allowance
            prop_assert!((number(&plan, rt) - t).abs() <= 1e-9);
            if (t - u).abs() > 1e-9 {
                prop_assert_eq!((rt < ru) == (t < u), rises);
                prop_assert_eq!(number(&plan, rt) < number(&plan, ru), t < u);
            }
        }
    }
}

#[test]
fn chains_of_every_kind_come_back() {
    let mut report = Report::new("round trip");
    for case in chains::all() {
        let plan = case.chain.plan().expect("a plan");
        let [low, high] = case.span;
        let mut last: Option<(f64, f64)> = None;
        for step in 0..=200 {
            let q = low + (high - low) * f64::from(step) / 200.0;
            let reading = plan.forward(q, case.inputs).expect("inside");
            let back = plan.one(Inputs { reading, ..case.inputs });
            report.equal("word", case.name, q, Word::Good, back.word);
            report.check("round trip", case.name, q, q, back.value, 1e-12 * (high - low));
            if let Some((q0, r0)) = last {
                report.equal("order", case.name, q, case.rises == (q > q0), reading > r0);
            }
            last = Some((q, reading));
        }
        // what is not there is missing, what is infinite is saturated
        let word = |inputs| plan.one(inputs).word;
        let (reading, inputs) = (plan.forward(0.5 * (low + high), case.inputs).expect("inside"), case.inputs);
        let nan = f64::NAN;
        report.equal("missing", case.name, "reading", Word::Missing, word(Inputs { reading: nan, ..inputs }));
        for infinite in [f64::INFINITY, f64::NEG_INFINITY] {
            report.equal(
                "saturated",
                case.name,
                infinite,
                Word::Saturated,
                word(Inputs { reading: infinite, ..inputs }),
            );
        }
        if plan.uses_supply() {
            report.equal(
                "missing",
                case.name,
                "supply",
                Word::Missing,
                word(Inputs { reading, supply: nan, ..inputs }),
            );
            let infinite = Inputs { reading, supply: f64::INFINITY, ..inputs };
            report.equal("saturated", case.name, "supply", Word::Saturated, word(infinite));
            report.equal(
                "no supply",
                case.name,
                "0 V",
                Word::OutOfRange,
                word(Inputs { reading, supply: 0.0, ..inputs }),
            );
        }
        if plan.uses_temperature() {
            let absent = Inputs { reading, celsius: nan, ..inputs };
            report.equal("missing", case.name, "temperature", Word::Missing, word(absent));
            let infinite = Inputs { reading, celsius: f64::NEG_INFINITY, ..inputs };
            report.equal("saturated", case.name, "temperature", Word::Saturated, word(infinite));
        }
        let mut beside = Vec::new();
        if plan.uses_lead_temperature() {
            beside.push((
                "lead temperature",
                Inputs { lead_celsius: nan, ..inputs },
                Inputs { lead_celsius: f64::INFINITY, ..inputs },
            ));
            // leads of copper have no resistance left there
            let none = Inputs { reading, lead_celsius: -300.0, ..inputs };
            report.equal("no leads", case.name, "-300 degC", Word::OutOfRange, word(none));
            report.equal("no leads, forward", case.name, "-300 degC", true, plan.forward(low, none).is_err());
        }
        for arm in (0..4).filter(|i| plan.uses_arm_temperatures()[*i]) {
            let with = |t: f64| {
                let mut arm_celsius = inputs.arm_celsius;
                arm_celsius[arm] = t;
                Inputs { arm_celsius, ..inputs }
            };
            beside.push(("arm temperature", with(nan), with(f64::NEG_INFINITY)));
            // the laws of both gauges reach from -60 to 180 °C
            for (inside, outside) in [(-60.0, (-60.0_f64).next_down()), (180.0, 180.0_f64.next_up())] {
                let at = |t| Inputs { reading, ..with(t) };
                report.equal("arm inside", case.name, inside, Word::Good, word(at(inside)));
                report.equal("arm outside", case.name, outside, Word::OutOfRange, word(at(outside)));
                let flagged = Err(Error::Flagged(Word::OutOfRange));
                report.equal("arm outside, forward", case.name, outside, flagged, plan.forward(low, with(outside)));
                let wide = Chain { extrapolate: true, ..case.chain }.plan().expect("a plan");
                report.equal("arm extrapolated", case.name, outside, Word::Extrapolated, wide.one(at(outside)).word);
            }
        }
        for (what, absent, infinite) in beside {
            report.equal("missing", case.name, what, Word::Missing, word(Inputs { reading, ..absent }));
            report.equal("saturated", case.name, what, Word::Saturated, word(Inputs { reading, ..infinite }));
            for side in [absent, infinite] {
                let refused = matches!(plan.forward(low, side), Err(Error::NotFinite { .. }));
                report.equal("forward", case.name, what, true, refused);
            }
        }
        // forwards there is an error instead
        for wrong in [nan, f64::INFINITY, f64::NEG_INFINITY] {
            let refused = matches!(plan.forward(wrong, inputs), Err(Error::NotFinite { .. }));
            report.equal("forward", case.name, wrong, true, refused);
        }
    }
    report.finish();
}

#[test]
fn the_last_resistance_inside_converts_and_the_next_does_not() {
    for (element, range, ends) in [
        {
            let model = Platinum::new(IEC_60751).expect("a curve");
            (Element::Platinum(IEC_60751), model.ohms_range(), [-200.0, 850.0])
        },
        {
            let model = Thermistor::new(BETA).expect("a law");
            (Element::Thermistor(BETA), model.ohms_range(), [125.0, -40.0])
        },
        {
            let model = Thermistor::new(STEINHART_HART).expect("a law");
            (Element::Thermistor(STEINHART_HART), model.ohms_range(), [125.0, -40.0])
        },
    ] {
        let chain = Chain::new(Network::Resistance { leads: None }, element);
        let plan = chain.plan().expect("a plan");
        let wide = Chain { extrapolate: true, ..chain }.plan().expect("a plan");
        for (inside, outside, t, further, believed) in [
            (range.min, range.min.next_down(), ends[0], range.min * 0.9, range.min / 3.0),
            (range.max, range.max.next_up(), ends[1], range.max * 1.1, range.max * 3.0),
        ] {
            assert!((number(&plan, inside) - t).abs() < 1e-9, "{inside}");
            let out = plan.one(outside);
            assert!(out.word == Word::OutOfRange && out.value.is_nan(), "{outside}: {out:?}");
            // the typed model draws the same line
            let model = |r: f64| match element {
                Element::Platinum(k) => Platinum::new(k).expect("a curve").celsius_from_ohms(r),
                Element::Thermistor(law) => Thermistor::new(law).expect("a law").celsius_from_ohms(r),
                _ => unreachable!("a thermometer"),
            };
            assert!((model(inside).expect("inside") - t).abs() < 1e-9);
            assert!(matches!(model(outside), Err(Error::OutOfRange { .. })));
            // extrapolated only where that was asked for, and said so
            assert_eq!(wide.one(inside).word, Word::Good);
            for r in [outside, further] {
                let out = wide.one(r);
                assert!(out.word == Word::Extrapolated && out.value.is_finite(), "{r}: {out:?}");
            }
            // a third of the smallest and three times the largest resistance are believed to be a thermometer
            let fault = if believed < inside { Word::Short } else { Word::Open };
            let beyond = if believed < inside { believed * (1.0 - 1e-12) } else { believed * (1.0 + 1e-12) };
            for plan in [&plan, &wide] {
                let out = plan.one(beyond);
                assert!(out.word == fault && out.value.is_nan(), "{beyond}: {out:?}");
            }
            let near = if believed < inside { believed * (1.0 + 1e-12) } else { believed * (1.0 - 1e-12) };
            assert_eq!(plan.one(near).word, Word::OutOfRange, "{near}");
        }
        // forwards: the last temperature inside, the next outside
        for (t, next) in
            [(ends[0].min(ends[1]), f64::next_down as fn(f64) -> f64), (ends[0].max(ends[1]), f64::next_up)]
        {
            assert!(plan.forward(t, 0.0).is_ok());
            assert_eq!(plan.forward(next(t), 0.0), Err(Error::Flagged(Word::OutOfRange)));
            assert!(wide.forward(next(t), 0.0).is_ok());
        }
    }
}

/// The last reading from 0 towards `far` that converts, by halving the distance down to neighbours.
fn last_that_converts(plan: &Plan, inputs: Inputs, far: f64) -> f64 {
    let good = |reading| plan.one(Inputs { reading, ..inputs }).word == Word::Good;
    let (mut inside, mut outside) = (0.0, far);
    assert!(good(inside) && !good(outside));
    loop {
        let middle = 0.5 * (inside + outside);
        if middle == inside || middle == outside {
            return inside;
        }
        *(if good(middle) { &mut inside } else { &mut outside }) = middle;
    }
}

#[test]
fn the_strain_limit_is_a_sharp_line() {
    let two = [along(1.0), along(-1.0), FIXED, FIXED];
    for (bridge, limit) in [
        (unequal([along(1.0), FIXED, FIXED, FIXED]), STRAIN_LIMIT),
        (unequal(two), 0.05),
        (unequal([along(1.0), across(-1.0), along(1.0), across(-1.0)]), 0.003),
    ] {
        let mut chain = strain(bridge, Gauge::new(2.08), Zero::default());
        if let Element::Gauge { limit: l, .. } = &mut chain.element {
            *l = limit;
        }
        let plan = chain.plan().expect("a plan");
        let wide = Chain { extrapolate: true, ..chain }.plan().expect("a plan");
        for far in [-0.24, 0.24] {
            let last = last_that_converts(&plan, Inputs::default(), far);
            let next = if far > 0.0 { last.next_up() } else { last.next_down() };
            let e = number(&plan, last);
            assert!(e.abs() <= limit && (e - limit.copysign(far)).abs() < 1e-15, "{e}");
            assert_eq!(plan.one(next).word, Word::OutOfRange);
            let out = wide.one(next);
            assert!(out.word == Word::Extrapolated && out.value.abs() > limit, "{out:?}");
            assert_eq!(wide.one(last).word, Word::Good);
        }
        assert!(plan.forward(limit, 0.0).is_ok() && plan.forward(-limit, 0.0).is_ok());
        assert_eq!(plan.forward(limit.next_up(), 0.0), Err(Error::Flagged(Word::OutOfRange)));
        assert!(wide.forward(limit.next_up(), 0.0).is_ok());
    }
}

#[test]
fn thermal_output_ends_where_it_says() {
    let zero = Zero { celsius: Some(20.0), ..Zero::default() };
    for arms in [
        [along(1.0), FIXED, FIXED, FIXED],
        [along(1.0), DUMMY, FIXED, FIXED],
        [along(1.0), across(-1.0), along(1.0), across(-1.0)],
    ] {
        let mut chain = strain(unequal(arms), warm_gauge(), zero);
        chain.temperature = Temperature::Column;
        let plan = chain.plan().expect("a plan");
        let wide = Chain { extrapolate: true, ..chain }.plan().expect("a plan");
        let at = |celsius| Inputs { reading: 1e-3, celsius, ..Inputs::default() };
        // range_celsius of warm_gauge
        for (inside, outside) in [(-60.0, (-60.0_f64).next_down()), (180.0, 180.0_f64.next_up())] {
            assert_eq!(plan.one(at(inside)).word, Word::Good);
            let out = plan.one(at(outside));
            assert!(out.word == Word::OutOfRange && out.value.is_nan(), "{out:?}");
            let out = wide.one(at(outside));
            assert!(out.word == Word::Extrapolated && out.value.is_finite(), "{out:?}");
            assert!(plan.forward(0.0, at(inside)).is_ok());
            assert_eq!(plan.forward(0.0, at(outside)), Err(Error::Flagged(Word::OutOfRange)));
            // one temperature for all readings: the chain itself is refused
            let fixed = Chain { temperature: Temperature::Fixed(outside), ..chain };
            assert!(matches!(fixed.plan(), Err(Error::OutOfRange { .. })));
            // (the same chain that extrapolates gives numbers)
            assert!(Chain { extrapolate: true, ..fixed }.plan().expect("a plan").one(1e-3).word.has_number());
        }
        for infinite in [f64::INFINITY, f64::NEG_INFINITY] {
            assert_eq!(plan.one(at(infinite)).word, Word::Saturated);
            // a broken circuit is not claimed at a temperature that is not known
            let broken = Inputs { reading: 0.45, ..at(infinite) };
            assert_eq!(plan.one(broken).word, Word::Saturated);
        }
    }
}

#[test]
fn rails_are_open_or_short() {
    let quarter = |arm: usize| {
        let mut arms = [FIXED; 4];
        arms[arm] = along(1.0);
        strain(unequal(arms), Gauge::new(2.08), Zero::default())
    };
    // output/supply = R1/(R1+R2) − R4/(R3+R4), by hand with the resistances of `unequal`
    let [r1, r2, r3, r4] = unequal([FIXED; 4]).resistances;
    let (a, b) = (r1 / (r1 + r2), r4 / (r3 + r4));
    for (arm, open, short) in
        [(0, 1.0 - b, 0.0 - b), (1, 0.0 - b, 1.0 - b), (2, a - 0.0, a - 1.0), (3, a - 1.0, a - 0.0)]
    {
        for extrapolate in [false, true] {
            let plan = Chain { extrapolate, ..quarter(arm) }.plan().expect("a plan");
            for (rail, word) in [(open, Word::Open), (short, Word::Short)] {
                // at the rail, near it on both sides, and far beyond
                for reading in [rail, rail - 1e-9, rail + 1e-9, rail + (rail - (a - b)) * 0.5, 40.0 * rail] {
                    let out = plan.one(reading);
                    assert!(out.word == word && out.value.is_nan(), "arm {}, {reading}: {out:?}", arm + 1);
                }
            }
        }
    }
    // a divider: 0 = the node at ground, 1 = at the supply
    for (sensor, at_ground, at_supply) in [(Side::Low, Word::Short, Word::Open), (Side::High, Word::Open, Word::Short)]
    {
        let divider = Divider { fixed: 10_000.0, sensor, input_resistance: None };
        for element in
            [Element::Thermistor(BETA), Element::Thermistor(STEINHART_HART), Element::Platinum(IEC_60751.with_r0(1e4))]
        {
            let plan = Chain::new(Network::Divider { divider, leads: None }, element).plan().expect("a plan");
            for (reading, word) in [
                (0.0, at_ground),
                (-0.0, at_ground),
                (1e-6, at_ground),
                (-0.3, at_ground),
                (1.0, at_supply),
                (1.0 - 1e-6, at_supply),
                (1.3, at_supply),
            ] {
                assert_eq!(plan.one(reading).word, word, "{sensor:?} {reading}");
            }
        }
    }
    // ohms
    let plan = Chain::new(Network::Resistance { leads: None }, Element::Platinum(IEC_60751)).plan().expect("a plan");
    for (ohms, word) in
        [(0.0, Word::Short), (-5.0, Word::Short), (1.0, Word::Short), (1e4, Word::Open), (1e300, Word::Open)]
    {
        assert_eq!(plan.one(ohms).word, word, "{ohms}");
    }
    // several driven arms: some arm has no resistance, which one cannot be told
    let plan = strain(unequal([along(1.0), along(-1.0), FIXED, FIXED]), Gauge::new(2.08), Zero::default())
        .plan()
        .expect("a plan");
    for reading in [-0.5, 0.5, -0.7, 0.7] {
        assert_eq!(plan.one(reading).word, Word::Open, "{reading}");
    }
}

/// Readings that no circuit gives are no readings of nothing: where squares overflow, the root must not come out as 0.
#[test]
fn absurd_readings_give_no_number() {
    for case in chains::all() {
        if matches!(case.chain.network, Network::Direct) {
            continue;
        }
        for extrapolate in [false, true] {
            if extrapolate && !chains::extrapolates(&case.chain) {
                continue;
            }
            let plan = Chain { extrapolate, ..case.chain }.plan().expect("a plan");
            for size in [1e20, 1e60, 1e99, 1e101, 1e140, 1e155, 1e200, 1e250, 1e290, 1e301, 1e307, f64::MAX] {
                for reading in [size, -size] {
                    let out = plan.one(Inputs { reading, ..case.inputs });
                    assert!(out.value.is_nan() && !out.word.has_number(), "{}: {reading:e}: {out:?}", case.name);
                    // the same of a supply that is nearly none
                    if plan.uses_supply() {
                        let supply = 1.0 / size;
                        let out = plan.one(Inputs { reading: reading.signum(), supply, ..case.inputs });
                        assert!(out.value.is_nan() && !out.word.has_number(), "{}: {supply:e}: {out:?}", case.name);
                    }
                }
            }
        }
    }
}

/// A bridge whose output turns back while all its arms are whole: beyond that point nothing says that it is broken.
#[test]
fn beyond_a_turning_point_is_out_of_range() {
    // arms 1 and 4 count against each other: with x = F e, ν = 0.31 and arm 4 at 1.03 R the slope of the output is 0 where
    // (2.03 + 0.7303 x)/(2 + 0.69 x) = √(1.03 · 1.32/1.31), at x = 0.27 (without leads)
    let mut bridge = Bridge::equal(350.0, [along(1.0), across(-1.0), across(-1.0), along(1.01)]);
    bridge.resistances[3] = 360.5;
    bridge.poisson = 0.31;
    bridge.supply_leads = Pair::Same(1.7);
    let mut still = strain(bridge, warm_gauge(), Zero { celsius: Some(20.0), ..Zero::default() });
    if let Element::Gauge { limit, .. } = &mut still.element {
        *limit = 1.0;
    }
    still.temperature = Temperature::Fixed(20.0);
    // the forward chain believes everything: find where it turns, within arms of ⅓ to 3 times their resistance
    let y = |e: f64| still.forward(e, &Sides::default()).expect("forward");
    let far = |sign: f64| {
        (1..3_000).map(|k| sign * f64::from(k) * 1e-4).find(|e| {
            let (before, here) = (y(e - sign * 1e-4), y(*e));
            ((here - before) * sign).signum() != (y(1e-5) - y(-1e-5)).signum()
        })
    };
    let turns: Vec<f64> = [-1.0, 1.0].into_iter().filter_map(far).collect();
    assert!(!turns.is_empty(), "this bridge turns");
    let own = Chain { arm_temperatures: [Temperature::Fixed(20.0); 4], ..still };
    let column = Chain { temperature: Temperature::Column, ..still };
    let warm = Chain { lead_warmth: Some(chains::copper(Temperature::Column)), ..still };
    for (name, chain) in [("fixed", still), ("column", column), ("own", own), ("warm leads", warm)] {
        let plan = chain.plan().expect("a plan");
        let at = |reading| Inputs { reading, celsius: 20.0, lead_celsius: 20.0, ..Inputs::default() };
        for turn in &turns {
            // beyond the extremum of the output by a thousandth of its way from zero
            let beyond = y(*turn) + 1e-3 * (y(*turn) - y(0.0));
            let out = plan.one(at(beyond));
            assert!(out.word == Word::OutOfRange && out.value.is_nan(), "{name}, {turn}: {out:?}");
            let inside = 0.5 * turn;
            let near = number(&plan, at(y(inside)));
            assert!((near - inside).abs() < 1e-9, "{name}: {near} {inside}");
            // forwards nothing is given out that would be read back as another strain
            for e in [turn * 1.05, turn * 1.2] {
                assert_eq!(plan.forward(e, at(0.0)), Err(Error::Flagged(Word::OutOfRange)), "{name}, {e}");
            }
        }
    }
    // a pair that does not turn is still open at a rail, with leads that warm and with temperatures of its own
    let mut bridge = unequal([along(1.0), along(-1.0), FIXED, FIXED]);
    bridge.supply_leads = Pair::Same(1.7);
    let pair = strain(bridge, warm_gauge(), Zero { celsius: Some(20.0), ..Zero::default() });
    let pair = Chain { temperature: Temperature::Fixed(20.0), ..pair };
    for chain in [
        pair,
        Chain { arm_temperatures: [Temperature::Fixed(20.0); 4], ..pair },
        Chain { lead_warmth: Some(chains::copper(Temperature::Column)), ..pair },
    ] {
        let plan = chain.plan().expect("a plan");
        for reading in [-0.5, 0.5, -0.7, 0.7] {
            assert_eq!(plan.one(Inputs { reading, lead_celsius: 20.0, ..Inputs::default() }).word, Word::Open);
        }
    }
}

/// One gauge whose leads warm: its rails have their names as they have without.
#[test]
fn rails_of_warm_leads_are_open_or_short() {
    for (arm, open, short) in [(0, 0.5, -0.5), (1, -0.5, 0.5)] {
        let mut arms = [FIXED; 4];
        arms[arm] = along(1.0);
        let mut bridge = unequal(arms);
        bridge.leads = Some(Leads { wires: Wires::Three, each: Each::Same(Conductor::Ohms(0.9)) });
        let chain = strain(bridge, Gauge::new(2.08), Zero::default());
        let plan = Chain { lead_warmth: Some(chains::copper(Temperature::Column)), ..chain }.plan().expect("a plan");
        for (rail, word) in [(open, Word::Open), (short, Word::Short)] {
            for reading in [0.98 * rail, 1.02 * rail, 1.5 * rail, 40.0 * rail] {
                let out = plan.one(Inputs { reading, lead_celsius: 33.0, ..Inputs::default() });
                assert!(out.word == word && out.value.is_nan(), "arm {}, {reading}: {out:?}", arm + 1);
            }
        }
    }
}

#[test]
fn end_codes_are_saturated() {
    for bits in [8_u8, 12, 16, 24, 32, 52] {
        let half = (1_u64 << (bits - 1)) as f64;
        for (coding, low, high, zero) in [
            (Coding::Signed, -half, half - 1.0, 0.0),
            (Coding::Offset, 0.0, 2.0 * half - 1.0, half),
            (Coding::Unsigned, 0.0, 2.0 * half - 1.0, 0.0),
        ] {
            let mut chain = strain(Bridge::one_gauge(350.0), Gauge::new(2.08), Zero::default());
            chain.reading.signal = Signal::Count;
            chain.converter = Some(Converter { bits, full_scale: FullScale::Volts(0.1), coding });
            chain.supply = Supply::Fixed(5.0);
            let plan = chain.plan().expect("a plan");
            for (code, word) in [
                (low, Word::Saturated),
                (low - 1.0, Word::Saturated),
                (high, Word::Saturated),
                (high + 1.0, Word::Saturated),
                (low + 1.0, Word::Good),
                (high - 1.0, Word::Good),
            ] {
                assert_eq!(plan.one(code).word, word, "{bits} bits, {coding:?}, {code}");
            }
            if coding != Coding::Unsigned {
                assert_eq!(number(&plan, zero), 0.0, "{bits} bits, {coding:?}");
            }
            // V = code FS / 2^(N-1), unipolar code FS / 2^N: the code that 20 mV gives, by hand
            let volts_per_code = if coding == Coding::Unsigned { 0.1 / (2.0 * half) } else { 0.1 / half };
            let at_20_mv = zero + 0.02 / volts_per_code;
            let want = strain(Bridge::one_gauge(350.0), Gauge::new(2.08), Zero::default()).plan().expect("a plan");
            assert!((number(&plan, at_20_mv) - number(&want, 0.02 / 5.0)).abs() < 1e-15 * f64::from(bits));
        }
    }
}

#[test]
fn stated_limits_say_their_word() {
    let mut chain = Chain::new(Network::Resistance { leads: None }, Element::Platinum(IEC_60751));
    chain.low_limit = Some(Limit { at: 60.0, word: Word::Open });
    chain.high_limit = Some(Limit { at: 200.0, word: Word::Saturated });
    for extrapolate in [false, true] {
        let plan = Chain { extrapolate, ..chain }.plan().expect("a plan");
        for (reading, word) in [
            (60.0, Word::Good),
            (60.0_f64.next_down(), Word::Open),
            (200.0, Word::Good),
            (200.0_f64.next_up(), Word::Saturated),
            (1.0, Word::Open),
            (1e9, Word::Saturated),
        ] {
            assert_eq!(plan.one(reading).word, word, "{reading}");
        }
    }
}

#[test]
fn shear_strain_is_twice_the_strain_of_the_grid() {
    let bridge = unequal([along(1.0), along(-1.0), along(1.0), along(-1.0)]);
    let plain = Chain { output: Output::Strain { exponent: 6 }, ..strain(bridge, Gauge::new(2.08), Zero::default()) };
    let shear = Chain { output: Output::ShearStrain { exponent: 6 }, ..plain };
    let (plain, shear) = (plain.plan().expect("a plan"), shear.plan().expect("a plan"));
    for reading in [-0.1, -1e-3, 1e-6, 0.01, 0.2] {
        let (e, gamma) = (number(&plain, reading), number(&shear, reading));
        assert!((gamma - 2.0 * e).abs() <= 1e-12 * gamma.abs() + 1e-9, "{gamma} {e}");
    }
}

/// The law of `Driven` and of the sign of every arm: tension in arm 1 or 3 reads positive, in 2 or 4 negative.
#[test]
fn tension_in_arms_1_and_3_reads_positive() {
    for (arm, sign) in [(0, 1.0), (1, -1.0), (2, 1.0), (3, -1.0)] {
        for driven in [Driven::Along, Driven::Across] {
            let mut arms = [FIXED; 4];
            arms[arm] = Arm::Active { factor: 1.0, driven };
            let mut bridge = Bridge::equal(350.0, arms);
            bridge.poisson = 0.285;
            let plan = strain(bridge, Gauge::new(2.0), Zero::default()).plan().expect("a plan");
            // unloaded, one arm off by x: x/(2 (2 + x)), by hand
            let x = if driven == Driven::Along { 2.0 * 1e-3 } else { 2.0 * 0.285e-3 };
            let want = sign * x / (2.0 * (2.0 + x));
            let got = plan.forward(1e-3, 0.0).expect("inside");
            assert!((got - want).abs() < 1e-16, "arm {}: {got} {want}", arm + 1);
        }
    }
}

/// A thermistor whose law is used outside its range says so; there is no such thing for a strain of 0.
#[test]
fn laws_keep_to_their_range() {
    let Law::Beta(beta) = BETA else { unreachable!("a beta law") };
    let model = Thermistor::new(BETA).expect("a law");
    // R25 by definition
    assert!((model.ohms_from_celsius(25.0).expect("inside") - beta.r25_ohms).abs() < 1e-9);
    for t in [-40.0_f64.next_up(), 126.0, f64::NAN, f64::INFINITY] {
        let refused = model.ohms_from_celsius(t).is_err();
        assert_eq!(refused, !(-40.0..=125.0).contains(&t), "{t}");
    }
}

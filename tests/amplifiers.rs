//! Amplifiers and converters, worked by hand. No published source: every circuit is small enough to be solved on paper
//! beside its check, and the expected values are exact fractions.

mod support;

use ohmwright::Error;
use ohmwright::chain::{Chain, Inputs, Network, Reading, Signal, Supply, Word};
use ohmwright::signal::{Amplifier, Arm, Bridge, Coding, Converter, Difference, Driven, FullScale, Pair, Reference};
use ohmwright::strain::Gauge;
use support::report::Report;

const VOLTS: Reading = Reading { signal: Signal::Volts, exponent: 0 };
const COUNT: Reading = Reading { signal: Signal::Count, exponent: 0 };

fn along(factor: f64) -> Arm {
    Arm::Active { factor, driven: Driven::Along }
}

/// Half a bridge in bending, gauge factor 2: output/supply is the strain itself.
fn bending() -> Chain {
    let bridge = Bridge::equal(350.0, [along(1.0), along(-1.0), Arm::Fixed, Arm::Fixed]);
    Chain::strain(bridge, Gauge::new(2.0))
}

#[test]
fn gain_and_offset() {
    let mut report = Report::new("ideal gain and offset by hand");
    // 1000 µm/m at 2.5 V is 2.5 mV; 250 × 2.5 mV + 0.1 V = 0.725 V, −250 × 2.5 mV + 0.1 V = −0.525 V
    for (gain, e, volts) in [(250.0, 1000.0, 0.725), (250.0, -2000.0, -1.15), (-250.0, 1000.0, -0.525)] {
        let mut chain = bending();
        (chain.reading, chain.supply) = (VOLTS, Supply::Fixed(2.5));
        chain.amplifier = Amplifier::Gain { gain, offset: 0.1 };
        let mut check = |name: &str, chain: Chain, inputs: Inputs| {
            let plan = chain.plan().unwrap();
            let (ours, back) = (plan.forward(e, inputs).unwrap(), plan.one(inputs).number().unwrap());
            report.check(&format!("{name}, V"), gain, e, volts, ours, 1e-12 * volts.abs());
            // 5e-16 V/V of the reading over the gain, and of what the offset takes off it
            report.check(&format!("{name}, strain"), gain, volts, e, back, 1e-12 * e.abs());
        };
        check("fixed supply", chain, Inputs::from(volts));
        chain.supply = Supply::Column { exponent: 0 };
        check("supply column", chain, Inputs { reading: volts, supply: 2.5, celsius: 0.0, ..Inputs::default() });
        // a ratio to the supply behind the amplifier: 0.725 V / 2.5 V, the offset referred to one supply
        chain.supply = Supply::Fixed(2.5);
        chain.reading = Reading { signal: Signal::Ratio, exponent: 0 };
        let back = chain.plan().unwrap().one(volts / 2.5).number().unwrap();
        report.check("ratio, strain", gain, volts / 2.5, e, back, 1e-12 * e.abs());
    }
    report.finish();
}

#[test]
fn what_no_amplifier_can_be() {
    let mut chain = bending();
    (chain.reading, chain.supply) = (VOLTS, Supply::Fixed(2.5));
    chain.amplifier = Amplifier::Gain { gain: 0.0, offset: 0.0 };
    assert!(matches!(chain.plan(), Err(Error::Unfit { .. })));
    chain.amplifier = Amplifier::Gain { gain: f64::NAN, offset: 0.0 };
    assert!(matches!(chain.plan(), Err(Error::NotFinite { .. })));
    // an offset in volts cannot be referred to a ratio without one supply
    chain.amplifier = Amplifier::Gain { gain: 10.0, offset: 0.1 };
    (chain.reading, chain.supply) = (Reading { signal: Signal::Ratio, exponent: 0 }, Supply::None);
    assert!(matches!(chain.plan(), Err(Error::Missing { .. })));
}

/// A bridge whose two nodes each have a source resistance of 400 Ω: node(1,2) at 2/3 of the supply behind
/// 1200 ∥ 600 Ω, node(3,4) at 1/2 behind 800 ∥ 800 Ω.
const UNBALANCED: [f64; 4] = [1200.0, 600.0, 800.0, 800.0];
const BALANCED: [f64; 4] = [800.0; 4];

fn volts_out(resistances: [f64; 4], signal_leads: f64, circuit: Difference, offset: f64) -> f64 {
    let mut bridge = Bridge { resistances, ..Bridge::one_gauge(800.0) };
    bridge.signal_leads = Pair::Same(signal_leads);
    let mut chain = Chain::strain(bridge, Gauge::new(2.0));
    (chain.reading, chain.supply) = (VOLTS, Supply::Fixed(3.0));
    chain.amplifier = Amplifier::Difference { circuit, offset };
    chain.plan().unwrap().forward(0.0, Inputs::default()).unwrap()
}

#[test]
fn difference_amplifier() {
    // Input resistors of 1600 Ω with the 400 Ω of the bridge are 2000 Ω. Behind them the open-circuit voltages
    // e_a and e_b (3 V supply: 2 V and 1.5 V unbalanced, 1.5 V both balanced) drive the usual circuit:
    //
    //   non-inverting input  q = e_a f_a/(2000 + f_a)
    //   inverting input      m = (out · 2000 + e_b f_b)/(2000 + f_b)
    //   ideal                m = q    ⇒  out = q (1 + f_b/2000) − e_b f_b/2000
    //   open-loop gain A     out = A (q − m)
    //
    // With f_b = 18 kΩ: m = 0.1 out + 0.9 e_b, ideal out = 10 q − 9 e_b.
    let circuit = |fa: f64, gain: Option<f64>, reference| Difference {
        input: [1600.0; 2],
        feedback: [18_000.0, fa],
        open_loop_gain: gain,
        reference,
    };
    let negative = Reference::Negative;
    let mut report = Report::new("difference amplifier by hand");
    let mut check = |name: &str, expected: f64, got: f64| {
        // the terms 10 q and 9 e_b of up to 18 V that cancel: 4e-16 of them
        report.check(name, "on paper", "3 V", expected, got, (1e-12 * expected.abs()).max(4e-16 * 36.0));
    };
    // matched, f_a = 18 kΩ: q = 0.9 e_a, out = 9 (e_a − e_b): 4.5 V, and no common mode
    check("matched", 4.5, volts_out(UNBALANCED, 0.0, circuit(18_000.0, None, negative), 0.0));
    check("matched, balanced", 0.0, volts_out(BALANCED, 0.0, circuit(18_000.0, None, negative), 0.0));
    // f_a = 16 kΩ: q = 8/9 e_a, out = 80/9 · 2 − 13.5 = 77/18 V; balanced, the common mode passes: 80/9 · 1.5 − 13.5
    check("mismatched", 77.0 / 18.0, volts_out(UNBALANCED, 0.0, circuit(16_000.0, None, negative), 0.0));
    check("common mode", -1.0 / 6.0, volts_out(BALANCED, 0.0, circuit(16_000.0, None, negative), 0.0));
    // returned to the centre, 1.5 V, and measured against it: e_a = 0.5 V, e_b = 0: out = 80/9 · 0.5 = 40/9 V
    let centre = Reference::Centre;
    check("centre", 40.0 / 9.0, volts_out(UNBALANCED, 0.0, circuit(16_000.0, None, centre), 0.0));
    check("centre, balanced", 0.0, volts_out(BALANCED, 0.0, circuit(16_000.0, None, centre), 0.0));
    // A = 90: out = 90 (q − 0.1 out − 0.9 e_b), out = 9 (q − 0.9 e_b): matched 9 (1.8 − 1.35) = 4.05 V;
    // mismatched and balanced 9 (4/3 − 1.35) = −0.15 V
    check("finite gain", 4.05, volts_out(UNBALANCED, 0.0, circuit(18_000.0, Some(90.0), negative), 0.0));
    check("finite gain, common mode", -0.15, volts_out(BALANCED, 0.0, circuit(16_000.0, Some(90.0), negative), 0.0));
    // 600 Ω of lead to each input of 1000 Ω is the same circuit
    let short = |fa, gain| Difference { input: [1000.0; 2], ..circuit(fa, gain, negative) };
    check("leads", 77.0 / 18.0, volts_out(UNBALANCED, 600.0, short(16_000.0, None), 0.0));
    check("leads, finite gain", 4.05, volts_out(UNBALANCED, 600.0, short(18_000.0, Some(90.0)), 0.0));
    // the offset is added to the output
    check("offset", 4.75, volts_out(UNBALANCED, 0.0, circuit(18_000.0, None, negative), 0.25));
    // the sides are not exchanged: 8 kΩ on the inverting side, out = q (1 + 4) − 4 e_b = 9 − 6 V with f_a = 18 kΩ
    let sides = Difference { feedback: [8_000.0, 18_000.0], ..circuit(0.0, None, negative) };
    check("sides", 3.0, volts_out(UNBALANCED, 0.0, sides, 0.0));
    // 3600 Ω in front of the inverting side, 4000 Ω with the bridge: out = q (1 + 4.5) − 4.5 e_b = 9.9 − 6.75 V
    let inputs = Difference { input: [3600.0, 1600.0], ..circuit(18_000.0, None, negative) };
    check("inputs", 3.15, volts_out(UNBALANCED, 0.0, inputs, 0.0));
    report.finish();
}

/// The amplifier loads the bridge: what it gives is not its gain times the unloaded output.
#[test]
fn a_difference_amplifier_loads_the_bridge() {
    // unloaded 0.5 V × 18 000/1600 = 5.625 V, loaded 4.5 V
    let circuit = Difference {
        input: [1600.0; 2],
        feedback: [18_000.0; 2],
        open_loop_gain: None,
        reference: Reference::Negative,
    };
    let bridge = Bridge { resistances: UNBALANCED, ..Bridge::one_gauge(800.0) };
    let mut chain = Chain::strain(bridge, Gauge::new(2.0));
    (chain.reading, chain.supply) = (VOLTS, Supply::Fixed(3.0));
    chain.amplifier = Amplifier::Gain { gain: 11.25, offset: 0.0 };
    let unloaded = chain.plan().unwrap().forward(0.0, Inputs::default()).unwrap();
    assert!((unloaded - 5.625).abs() < 1e-12, "{unloaded}");
    chain.amplifier = Amplifier::Difference { circuit, offset: 0.0 };
    let loaded = chain.plan().unwrap().forward(0.0, Inputs::default()).unwrap();
    assert!((loaded - 4.5).abs() < 1e-12, "{loaded}");
    // and a strain comes back through the loaded circuit: 1000 µm/m make arm 1 1202.4 Ω, 1802.4 Ω with arm 2:
    // e_a = 3 · 1202.4/1802.4, source 1202.4 · 600/1802.4; q = 9/10.. of it: e_a · 18 000/(19 600 + source)
    let (e_a, source) = (3.0 * 1202.4 / 1802.4, 1202.4 * 600.0 / 1802.4);
    let out = 10.0 * e_a * 18_000.0 / (19_600.0 + source) - 9.0 * 1.5;
    let plan = chain.plan().unwrap();
    let forward = plan.forward(1000.0, Inputs::default()).unwrap();
    assert!((forward / out - 1.0).abs() < 1e-12, "{forward} {out}");
    let back = plan.one(out).number().unwrap();
    // 36 V of cancelling terms, 4e-16 of them, at 4 mV per 1000 µm/m of output
    assert!((back - 1000.0).abs() < 4e-9, "{back}");
    // a load needs something to load
    chain.network = Network::Resistance { leads: None };
    assert!(chain.plan().is_err());
}

/// The currents of a difference amplifier return to the supply past its negative lead, and the sensed supply knows it.
#[test]
fn a_sensed_supply_behind_its_leads() {
    // Four arms of 800 Ω, 400 Ω in the negative supply lead, supply 1. Input resistors 1600 Ω, f_b = 1600 Ω,
    // f_a = 4800 Ω: q = m = 3/4 v_a, out = m + (m − v_b) = 1.5 v_a − v_b. Currents at the nodes, × 6400 Ω:
    //
    //   a   8 (1 − v_a) = 8 (v_a − v_n) + v_a
    //   b   8 (1 − v_b) = 8 (v_b − v_n) + 4 (v_b − 3/4 v_a)
    //   n   8 (v_a − v_n) + 8 (v_b − v_n) = 16 v_n
    //
    // v_a = v_b = 8/13, v_n = 4/13, out = 4/13; over the bridge's own supply, 1 − 4/13 = 9/13, it is 4/9.
    let circuit = Difference {
        input: [1600.0; 2],
        feedback: [1600.0, 4800.0],
        open_loop_gain: None,
        reference: Reference::Negative,
    };
    for (sensed, expected) in [(false, 4.0 / 13.0), (true, 4.0 / 9.0)] {
        let bridge = Bridge { supply_leads: Pair::Own([0.0, 400.0]), sensed, ..Bridge::one_gauge(800.0) };
        let mut chain = Chain::strain(bridge, Gauge::new(2.0));
        chain.amplifier = Amplifier::Difference { circuit, offset: 0.0 };
        let out = chain.plan().unwrap().forward(0.0, Inputs::default()).unwrap();
        println!("sensed {sensed}: {out}");
        assert!((out - expected).abs() < 1e-12 * expected, "sensed {sensed}: {out} is not {expected}");
    }
}

#[test]
fn codes() {
    let mut report = Report::new("converter codings by hand");
    // 2.5 V on the bridge, gain 250: 1000 µm/m is 0.625 V, a quarter of 2.5 V.
    // 16 bits, bipolar ±2.5 V: 0.25 · 32 768 = 8192 codes from zero volts; unipolar 2.5 V: 0.25 · 65 536 = 16 384
    // ratiometric: 0.625 V is a quarter of the supply as well, the full scale being the supply
    let volts = FullScale::Volts(2.5);
    for (coding, full_scale, code, per) in [
        (Coding::Signed, volts, 8192.0, 8192.0),
        (Coding::Offset, volts, 40_960.0, 8192.0),
        (Coding::Unsigned, volts, 16_384.0, 16_384.0),
        (Coding::Signed, FullScale::Supply, 8192.0, 8192.0),
        (Coding::Offset, FullScale::Supply, 40_960.0, 8192.0),
        (Coding::Unsigned, FullScale::Supply, 16_384.0, 16_384.0),
    ] {
        let mut chain = bending();
        chain.reading = COUNT;
        chain.supply = if full_scale == FullScale::Supply { Supply::None } else { Supply::Fixed(2.5) };
        chain.converter = Some(Converter { bits: 16, full_scale, coding });
        chain.amplifier = Amplifier::Gain { gain: 250.0, offset: 0.0 };
        let plan = chain.plan().unwrap();
        let at = format!("{coding:?} {full_scale:?}");
        let mut check = |code: f64, e: f64| {
            report.check("strain", &at, code, e, plan.one(code).number().unwrap(), 1e-12 * 1000.0);
            report.check("code", &at, e, code, plan.forward(e, Inputs::default()).unwrap(), 1e-12 * 65_536.0);
        };
        check(code, 1000.0);
        check(code + per, 2000.0);
        check(code + 1.0, 1000.0 * (1.0 + 1.0 / per));
        // zero volts is an end code of a unipolar converter
        if coding != Coding::Unsigned {
            check(code - per, 0.0);
            check(code - 2.0 * per, -1000.0);
        }
        // the end codes say only that the signal is at or beyond them
        let (low, high) = if coding == Coding::Signed { (-32_768.0, 32_767.0) } else { (0.0, 65_535.0) };
        for end in [low, high, low - 1.0, high + 1.0] {
            report.equal("end code", &at, end, Word::Saturated, plan.one(end).word);
        }
        for inside in [low + 1.0, high - 1.0] {
            report.equal("code beside the end", &at, inside, Word::Good, plan.one(inside).word);
        }
    }
    report.finish();
}

/// 24 bits, offset binary, behind a difference amplifier: one code is FS/2^23.
#[test]
fn counts_behind_a_difference_amplifier() {
    let mut chain = Chain::strain(Bridge { resistances: UNBALANCED, ..Bridge::one_gauge(800.0) }, Gauge::new(2.0));
    (chain.reading, chain.supply) = (COUNT, Supply::Fixed(3.0));
    let circuit = Difference {
        input: [1600.0; 2],
        feedback: [18_000.0; 2],
        open_loop_gain: None,
        reference: Reference::Negative,
    };
    chain.amplifier = Amplifier::Difference { circuit, offset: 0.5 };
    chain.converter = Some(Converter { bits: 24, full_scale: FullScale::Volts(10.0), coding: Coding::Offset });
    // 4.5 V + 0.5 V is half the full scale: 2^23 + 2^22
    let code = chain.plan().unwrap().forward(0.0, Inputs::default()).unwrap();
    assert!((code - 12_582_912.0).abs() < 1e-12 * 12_582_912.0, "{code}");
    // counts without a converter, a converter without counts
    chain.reading = VOLTS;
    assert!(matches!(chain.plan(), Err(Error::Unfit { .. })));
    (chain.reading, chain.converter) = (COUNT, None);
    assert!(matches!(chain.plan(), Err(Error::Missing { .. })));
}

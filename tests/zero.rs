//! The zero of a strain channel in its three meanings, against formulas derived on paper. No published source: the
//! derivations stand beside the checks.
//!
//! One gauge of R Ω in arm 1, gauge factor F, arms 3 and 4 equal; y is output over supply, y₀ the reading at zero
//! strain. Whole arms 1 and 2, leads and all, are in the ratio
//!
//!     ρ(y) = (1/2 + y)/(1/2 − y),
//!
//! since arm 1/(arm 1 + arm 2) − 1/2 = y. With L Ω of lead in each of the two arms:
//!
//! - From strain: the gauge was strained when the zero was taken. R (1 + δ) + L = ρ (R + L) and e = [δ(y) − δ(y₀)]/F.
//! - From resistance: the gauge's own resistance was off by x₀ = δ(y₀). R (1 + x₀)(1 + F e) = R (1 + δ), so
//!   e = (δ(y) − x₀)/(1 + x₀)/F.
//! - From completion: arm 2 was off. Its whole resistance is S = (R + L)/ρ(y₀), and R (1 + F e) + L = ρ(y) S.
//!
//! Without leads δ = 4 y/(1 − 2 y) and the last two are one number, (ρ/ρ₀ − 1)/F: a ratio cannot tell which of the two
//! arms is off. With leads they part. None of the three is strain(y − y₀).

mod support;

use ohmwright::Error;
use ohmwright::chain::{Chain, Inputs, Reading, Signal, Supply, Temperature};
use ohmwright::signal::{Amplifier, Arm, Bridge, Conductor, Driven, Each, Leads, Wires};
use ohmwright::strain::{Expansion, Gauge, Zero, ZeroMeaning, ZeroReading};
use support::report::Report;

const F: f64 = 2.08;
const R: f64 = 350.0;

fn zero(y0: f64, meaning: ZeroMeaning) -> Zero {
    Zero { reading: Some(ZeroReading::Ratio(y0)), meaning, celsius: None, ..Zero::default() }
}

fn quarter() -> Chain {
    Chain::strain(Bridge::one_gauge(R), Gauge::new(F))
}

/// Zero readings and readings, V/V: small, usual, and large enough for the formulas to part by far.
const PAIRS: [(f64, f64); 7] = [
    (0.0, 5e-4),
    (1.2e-5, 5.1e-4),
    (1.2e-5, 1.2e-5),
    (-3.4e-4, 8.5e-4),
    (2.0e-3, 2.5e-3),
    (-6.0e-3, -5.0e-3),
    (0.010, -0.004),
];

/// ρ(y) − 1 = 2 y/(1/2 − y), which keeps its digits near balance.
fn rho_less_one(y: f64) -> f64 {
    2.0 * y / (0.5 - y)
}

/// ΔR/R of the gauge with `lead` Ω in each of arms 1 and 2: R (1 + δ) + L = ρ (R + L).
fn delta(y: f64, lead: f64) -> f64 {
    rho_less_one(y) * (R + lead) / R
}

/// The three strains in microstrain.
fn by_hand((y0, y): (f64, f64), lead: f64) -> [(ZeroMeaning, f64); 3] {
    let (x, x0) = (delta(y, lead), delta(y0, lead));
    // ρ/ρ₀ − 1
    let turn = (rho_less_one(y) - rho_less_one(y0)) / (1.0 + rho_less_one(y0));
    [
        (ZeroMeaning::Strain, 1e6 * (x - x0) / F),
        (ZeroMeaning::Resistance, 1e6 * (x - x0) / (1.0 + x0) / F),
        (ZeroMeaning::Completion, 1e6 * turn * (R + lead) / R / F),
    ]
}

/// Error allowed of a strain in microstrain: 1e-12 relative, or 5e-16 V/V of reading and of zero at F/4.
fn allowed(e: f64) -> f64 {
    (1e-12 * e.abs()).max(2.0 * 5e-16 * 4.0 / F * 1e6)
}

fn both_ways(report: &mut Report, bare: &Chain, lead: f64) {
    for (y0, y) in PAIRS {
        for (meaning, e) in by_hand((y0, y), lead) {
            let name = format!("{meaning:?}");
            let plan = bare.zeroed(zero(y0, meaning)).plan().unwrap();
            let input = format!("y0 {y0} y {y}");
            report.check(&name, "by hand", &input, e, plan.one(y).number().unwrap(), allowed(e));
            let forward = plan.forward(e, Inputs::default()).unwrap();
            report.check("forwards", &name, &input, y, forward, (1e-12 * y.abs()).max(2.0 * 4e-16));
            report.check("at zero", &name, &input, 0.0, plan.one(y0).number().unwrap(), allowed(0.0));
        }
    }
}

#[test]
fn three_meanings_without_leads() {
    let mut report = Report::new("zero by hand: one gauge, no leads");
    both_ways(&mut report, &quarter(), 0.0);
    report.finish();
}

fn wired(wires: Wires, each: f64, balanced: bool) -> Chain {
    let mut bridge = Bridge::one_gauge(R);
    bridge.leads = Some(Leads { wires, each: Each::Same(Conductor::Ohms(each)) });
    bridge.balanced = balanced;
    Chain::strain(bridge, Gauge::new(F))
}

#[test]
fn three_meanings_with_leads() {
    let mut report = Report::new("zero by hand: three wires; two wires balanced in place");
    both_ways(&mut report, &wired(Wires::Three, 7.5, false), 7.5);
    // both conductors in arm 1, and as many ohms in arm 2
    both_ways(&mut report, &wired(Wires::Two, 3.75, true), 7.5);
    report.finish();
}

/// The same, worked in numbers: y₀ = 0.010, y = −0.004, no leads.
#[test]
fn worked_in_numbers() {
    // δ(0.010) = 0.04/0.98 = 0.040 816 326 5, δ(−0.004) = −0.016/1.008 = −0.015 873 015 9; µm/m:
    // strain                  (−0.015 873 015 9 − 0.040 816 326 5)/2.08   = −27 254.491 540
    // resistance, completion  that / 1.040 816 326 5                      = −26 185.687 950
    // strain(y − y₀)          −0.056/1.028/2.08                           = −26 189.763 544
    let read = |chain: Chain, y: f64| chain.plan().unwrap().one(y).number().unwrap();
    let with = |meaning| read(quarter().zeroed(zero(0.010, meaning)), -0.004);
    let mistake = read(quarter(), -0.004 - 0.010);
    for (what, got, expected) in [
        ("strain", with(ZeroMeaning::Strain), -27_254.491_540),
        ("resistance", with(ZeroMeaning::Resistance), -26_185.687_950),
        ("completion", with(ZeroMeaning::Completion), -26_185.687_950),
        ("strain(y - y0)", mistake, -26_189.763_544),
    ] {
        println!("{what}: {got:.7}");
        assert!((got - expected).abs() <= 5e-7, "{what}: {got} is not {expected}");
    }
    // an everyday case, y₀ = 0.8 mV/V and y = 1.3 mV/V: δ = 0.0052/0.9974 and 0.0032/0.9984
    for (what, got, expected) in [
        ("strain", read(quarter().zeroed(zero(0.8e-3, ZeroMeaning::Strain)), 1.3e-3), 965.589_922),
        ("resistance", read(quarter().zeroed(zero(0.8e-3, ZeroMeaning::Resistance)), 1.3e-3), 962.504_971),
        // 0.002/0.999/2.08: 3.09 µm/m off, and 0.004
        ("strain(y - y0)", read(quarter(), 1.3e-3 - 0.8e-3), 962.500_963),
    ] {
        println!("{what}: {got:.7}");
        assert!((got - expected).abs() <= 5e-7, "{what}: {got} is not {expected}");
    }
}

/// Readings of the zero as recorded, in the unit of the readings and behind the amplifier; and as a ratio.
#[test]
fn the_zero_in_every_unit() {
    let mut report = Report::new("zero readings in their units");
    let (y0, y) = (4e-4, 9e-4);
    let recorded = |at: f64, meaning| Zero {
        reading: Some(ZeroReading::AsRecorded(at)),
        meaning,
        celsius: None,
        ..Zero::default()
    };
    for (meaning, e) in by_hand((y0, y), 0.0) {
        let mut check = |name: &str, chain: Chain, reading: f64| {
            let ours = chain.plan().unwrap().one(reading).number().unwrap();
            report.check(name, format!("{meaning:?}"), reading, e, ours, allowed(e));
        };
        let mut chain = quarter().zeroed(recorded(0.4, meaning));
        chain.reading = Reading { signal: Signal::Ratio, exponent: -3 };
        check("mV/V", chain, 0.9);
        chain = quarter().zeroed(recorded(1.0, meaning));
        chain.reading = Reading { signal: Signal::Volts, exponent: -3 };
        chain.supply = Supply::Fixed(2.5);
        check("mV", chain, 2.25);
        // 100 × 2.5 mV/V less 10 mV: 0.09 V and 0.215 V
        chain = quarter().zeroed(recorded(0.09, meaning));
        chain.reading = Reading { signal: Signal::Volts, exponent: 0 };
        chain.supply = Supply::Fixed(2.5);
        chain.amplifier = Amplifier::Gain { gain: 100.0, offset: -0.01 };
        check("V behind an amplifier", chain, 0.215);
        // a varying supply leaves only the ratio a zero
        chain.zeroed(zero(y0, meaning)).plan().unwrap();
        chain.supply = Supply::Column { exponent: 0 };
        report.equal("volts with a supply column", format!("{meaning:?}"), 0.09, true, {
            matches!(chain.plan(), Err(Error::Missing { .. }))
        });
        let chain = chain.zeroed(zero(y0, meaning));
        let inputs = Inputs { reading: 0.215, supply: 2.5, celsius: 0.0, ..Inputs::default() };
        let ours = chain.plan().unwrap().one(inputs).number().unwrap();
        report.check("ratio with a supply column", format!("{meaning:?}"), 0.215, e, ours, allowed(e));
    }
    report.finish();
}

/// The zero beside temperature: e = [δ − x₀ − τ]/F(T) from strain; from the gauge's own resistance the whole gauge is
/// larger, R (1 + x₀)(1 + F e + τ) = R (1 + δ), so e = [(δ − x₀)/(1 + x₀) − τ]/F(T).
#[test]
fn zero_and_temperature() {
    let mut report = Report::new("zero and temperature by hand");
    let (y0, y) = (1e-3, 2e-3);
    // τ = 2.08 · 5e-6 · (44 − 20) = 249.6e-6; F(44) = 2.08 (1 + 1e-4 · 20) = 2.084 16
    let gauge = Gauge { slope: 1e-4, expansion: Some(Expansion { specimen: 17e-6, data: 12e-6 }), ..Gauge::new(F) };
    let (x, x0, tau, f) = (delta(y, 0.0), delta(y0, 0.0), 249.6e-6, 2.084_16);
    for (meaning, e) in [
        (ZeroMeaning::Strain, 1e6 * (x - x0 - tau) / f),
        (ZeroMeaning::Resistance, 1e6 * ((x - x0) / (1.0 + x0) - tau) / f),
        // 1 + F e + τ = ρ/ρ₀
        (ZeroMeaning::Completion, 1e6 * ((x - x0) / (1.0 + x0) - tau) / f),
    ] {
        let zero = Zero { celsius: Some(20.0), ..zero(y0, meaning) };
        let chain = Chain::strain(Bridge::one_gauge(R), gauge).zeroed(zero);
        for (name, temperature) in [("fixed", Temperature::Fixed(44.0)), ("column", Temperature::Column)] {
            let plan = Chain { temperature, ..chain }.plan().unwrap();
            let ours =
                plan.one(Inputs { reading: y, supply: 0.0, celsius: 44.0, ..Inputs::default() }).number().unwrap();
            report.check(name, format!("{meaning:?}"), y, e, ours, allowed(e));
        }
    }
    report.finish();
}

#[test]
fn meanings_that_do_not_fit() {
    let along = |factor| Arm::Active { factor, driven: Driven::Along };
    let unfit = |arms, meaning| {
        let chain = Chain::strain(Bridge::equal(R, arms), Gauge::new(F)).zeroed(zero(1e-4, meaning));
        matches!(chain.plan(), Err(Error::Unfit { .. }))
    };
    let (gauge, dummy, fixed) = (along(1.0), Arm::Dummy, Arm::Fixed);
    // arm 2 is a gauge, or a dummy: then it is no completion resistor
    assert!(unfit([gauge, along(-1.0), fixed, fixed], ZeroMeaning::Completion));
    assert!(unfit([gauge, dummy, fixed, fixed], ZeroMeaning::Completion));
    assert!(!unfit([gauge, fixed, gauge, fixed], ZeroMeaning::Completion));
    // whose own resistance was off, of two gauges?
    assert!(unfit([gauge, along(-1.0), fixed, fixed], ZeroMeaning::Resistance));
    assert!(!unfit([gauge, dummy, fixed, fixed], ZeroMeaning::Resistance));
    assert!(!unfit([gauge, along(-1.0), fixed, fixed], ZeroMeaning::Strain));
    // a reading that no positive resistance explains: δ(−0.6) = −2.4/2.2
    for meaning in [ZeroMeaning::Strain, ZeroMeaning::Resistance, ZeroMeaning::Completion] {
        let chain = quarter().zeroed(zero(-0.6, meaning));
        assert!(chain.plan().is_err(), "{meaning:?}");
    }
    // a strain that leaves the gauge less than a third of its resistance is none: δ(−0.3) = −1.2/1.6
    assert!(matches!(quarter().zeroed(zero(-0.3, ZeroMeaning::Strain)).plan(), Err(Error::Unfit { .. })));
}

/// Half a bridge in bending is linear, y = F e/2, and so is its zero: the one case where the readings may be taken from
/// each other.
#[test]
fn linear_bridge() {
    let along = |factor| Arm::Active { factor, driven: Driven::Along };
    let bridge = Bridge::equal(R, [along(1.0), along(-1.0), Arm::Fixed, Arm::Fixed]);
    let chain = Chain::strain(bridge, Gauge::new(2.0)).zeroed(zero(3e-4, ZeroMeaning::Strain));
    let e = chain.plan().unwrap().one(1.3e-3).number().unwrap();
    assert!((e - 1000.0).abs() <= 1e-9, "{e}");
}

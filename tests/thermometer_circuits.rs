//! Circuits of thermometers: what stands beside the sensor, what its current does to it, comparisons with a resistor,
//! reversed currents, taps, broken leads.
//!
//! - Self-heating worked in a sensor maker's note, three wires by two taps worked on a teaching page: both in
//!   data/temperature/lead_and_selfheating_examples.csv (read).
//! - Everything else: Kirchhoff's laws written out here in twice the precision for each circuit by itself, a thermometer with
//!   its heat solved by bisection; no source is needed. IEC 60751 limits self-heating, it gives no figures to check.

#![cfg(feature = "std")]

mod support;

use ohmwright::chain::{Chain, Element, Inputs, Network, Reading, Real, SelfHeating, Signal, Supply, Temperature};
use ohmwright::platinum::IEC_60751;
use ohmwright::signal::{Around, Bridge, Conductor, Divider, Each, Leads, Pair, Side, Wires};
use ohmwright::thermistor::{Beta, Law};
use ohmwright::thermocouple::Thermocouple;
use support::chains::{along, unequal};
use support::report::Report;
use support::table::Table;
use support::twofold::Twofold;

fn d(v: f64) -> Twofold {
    Twofold::new(v)
}

/// R of a Pt100 of IEC 60751 in twice the precision.
fn pt100(t: f64) -> Twofold {
    let (t, one) = (d(t), d(1.0));
    let c = if t.value() < 0.0 { d(-4.183e-12) * (t - d(100.0)) * t * t * t } else { d(0.0) };
    d(100.0) * (one + d(3.9083e-3) * t + d(-5.775e-7) * t * t + c)
}

/// R of a β thermistor.
fn ntc(t: f64) -> Twofold {
    let kelvin = d(t) + d(273.15);
    d(10e3) * (d(3950.0) * (d(1.0) / kelvin - d(1.0) / d(298.15))).exp()
}

const NTC: Element =
    Element::Thermistor(Law::Beta(Beta { r25_ohms: 10e3, beta_kelvin: 3950.0, range_celsius: [-40.0, 120.0] }));
const PT100: Element = Element::Platinum(IEC_60751);

/// The temperature of the sensor itself, t = T + κ P(R(t)), by bisection in plain numbers: P in W at R.
fn warmed(celsius: f64, kappa: f64, ohms: fn(f64) -> Twofold, power: impl Fn(Twofold) -> Twofold) -> f64 {
    let excess = |t: f64| (d(t) - d(celsius) - d(kappa) * power(ohms(t))).value();
    let (mut low, mut high) = (celsius, celsius + 60.0);
    assert!(excess(low) <= 0.0 && excess(high) > 0.0);
    for _ in 0..200 {
        let middle = 0.5 * (low + high);
        *(if excess(middle) > 0.0 { &mut high } else { &mut low }) = middle;
    }
    0.5 * (low + high)
}

fn heated(chain: Chain, kappa: f64, amperes: Option<f64>) -> Chain {
    Chain { self_heating: Some(SelfHeating { kelvin_per_watt: kappa, amperes }), ..chain }
}

fn volts(chain: Chain, supply: Supply) -> Chain {
    Chain { reading: Reading { signal: Signal::Volts, exponent: 0 }, supply, ..chain }
}

/// Both ways: the reading that a temperature gives, and back.
fn both(report: &mut Report, what: &str, chain: &Chain, celsius: f64, inputs: Inputs, want: Twofold) {
    let plan = chain.plan().unwrap();
    let got = plan.forward(celsius, inputs).unwrap();
    report.check("reading", what, celsius, want.value(), got, 2e-12 * want.value().abs());
    let back = plan.one(Inputs { reading: want.value(), ..inputs });
    report.check("temperature", what, celsius, celsius, back.number().unwrap(), 1e-9);
}

#[test]
fn heat_of_the_current() {
    let mut report = Report::new("self-heating by Kirchhoff's laws");
    let lead = 0.37;
    let two = Some(Leads { wires: Wires::Two, each: Each::Same(Conductor::Ohms(lead)) });
    for t in [-180.0, -40.0, -0.1, 0.0, 0.2, 25.0, 110.0, 640.0] {
        // an instrument that reads ohms with 5 mA
        let kappa = 350.0;
        let own = warmed(t, kappa, pt100, |r| d(5e-3) * d(5e-3) * r);
        let chain = heated(Chain::new(Network::Resistance { leads: two }, PT100), kappa, Some(5e-3));
        both(&mut report, "ohms", &chain, t, Inputs::default(), pt100(own) + d(2.0) * d(lead));
        // volts at a current of its own
        let chain =
            volts(heated(Chain::new(Network::Resistance { leads: None }, PT100), kappa, None), Supply::Fixed(5e-3));
        both(&mut report, "current source", &chain, t, Inputs::default(), pt100(own) * d(5e-3));
        // in series with 200 Ω that show 0.61 V
        let own = warmed(t, kappa, pt100, |r| d(0.61 / 200.0) * d(0.61 / 200.0) * r);
        let network = Network::Reference { ohms: 200.0, leads: two };
        let chain = volts(heated(Chain::new(network, PT100), kappa, None), Supply::Column { exponent: 0 });
        let want = (pt100(own) + d(2.0) * d(lead)) * d(0.61) / d(200.0);
        both(&mut report, "reference", &chain, t, Inputs { supply: 0.61, ..Inputs::default() }, want);
    }
    for t in [-39.0, -10.0, 0.0, 25.0, 60.0, 110.0] {
        let kappa = 1500.0;
        let (supply, fixed, load) = (4.7, 15e3, 1.2e6);
        for (side, around) in [
            (Side::Low, Around::NONE),
            (Side::High, Around::NONE),
            (Side::Low, Around { parallel: Some(22e3), leakage: Some(3e6), series: Some(1.5e3) }),
            (Side::High, Around { parallel: None, leakage: Some(0.7e6), series: Some(900.0) }),
        ] {
            // the path: leads and series resistor, then the thermistor beside what is parallel to it
            let conductance =
                around.parallel.map_or(d(0.0), |r| d(1.0) / d(r)) + around.leakage.map_or(d(0.0), |r| d(1.0) / d(r));
            let pair = |r: Twofold| d(1.0) / (d(1.0) / r + conductance);
            let rest = d(around.series.unwrap_or(0.0)) + d(2.0) * d(lead);
            let path = |r: Twofold| rest + pair(r);
            // node voltage, and the voltage across the path
            let node = |r: Twofold| match side {
                Side::Low => {
                    let below = d(1.0) / (d(1.0) / path(r) + d(1.0) / d(load));
                    d(supply) * below / (below + d(fixed))
                }
                _ => {
                    let below = d(1.0) / (d(1.0) / d(fixed) + d(1.0) / d(load));
                    d(supply) * below / (below + path(r))
                }
            };
            let across = |r: Twofold| if side == Side::Low { node(r) } else { d(supply) - node(r) };
            let power = |r: Twofold| {
                let volts = across(r) * pair(r) / path(r);
                volts * volts / r
            };
            let own = warmed(t, kappa, ntc, power);
            let divider = Divider { fixed, sensor: side, input_resistance: Some(load) };
            let bare = Chain { around, ..Chain::new(Network::Divider { divider, leads: two }, NTC) };
            let chain = volts(heated(bare, kappa, None), Supply::Column { exponent: 0 });
            let what = format!("{side:?} {around:?}");
            both(&mut report, &what, &chain, t, Inputs { supply, ..Inputs::default() }, node(ntc(own)));
            // the same without heat is another reading: the check can fail
            let cold = Chain { self_heating: None, ..chain }.plan().unwrap();
            let off =
                cold.one(Inputs { reading: node(ntc(own)).value(), supply, ..Inputs::default() }).number().unwrap() - t;
            report.equal("heat shows", what, t, true, off > 1e-4);
        }
    }
    report.finish();
}

/// Bridge by bridge: the current through the sensor from its own half alone, where nothing loads the output.
#[test]
fn heat_in_a_bridge() {
    let mut report = Report::new("self-heating in a bridge by Kirchhoff's laws");
    let kappa = 300.0;
    let supply = 3.1;
    for index in 0..4 {
        let mut arms = [ohmwright::signal::Arm::Fixed; 4];
        arms[index] = along(1.0);
        for (p, n, sensed) in [(0.0, 0.0, false), (1.3, 1.9, false), (1.3, 1.9, true)] {
            let mut bridge = unequal(arms);
            bridge.resistances = [180.0, 220.0, 205.0, 190.0];
            bridge.resistances[index] = 100.0;
            bridge.supply_leads = Pair::Own([p, n]);
            bridge.sensed = sensed;
            for t in [-100.0, 0.0, 21.0, 300.0] {
                // the other arm of its half, and the whole other half
                let beside = d(bridge.resistances[[1, 0, 3, 2][index]]);
                let half = d(bridge.resistances[[2, 3, 0, 1][index]]) + d(bridge.resistances[[3, 2, 1, 0][index]]);
                let inner = |r: Twofold| {
                    let whole = d(1.0) / (d(1.0) / (r + beside) + d(1.0) / half);
                    if sensed { d(supply) } else { d(supply) * whole / (whole + d(p) + d(n)) }
                };
                let power = |r: Twofold| {
                    let i = inner(r) / (r + beside);
                    i * i * r
                };
                let own = warmed(t, kappa, pt100, power);
                let r = pt100(own);
                let mut ohms = bridge.resistances.map(d);
                ohms[index] = r;
                let [r1, r2, r3, r4] = ohms;
                let want = inner(r) * (r1 / (r1 + r2) - r4 / (r3 + r4));
                let chain = Chain::new(Network::Bridge(Bridge { ..bridge }), PT100);
                let chain = volts(heated(chain, kappa, None), Supply::Fixed(supply));
                let plan = chain.plan().unwrap();
                let place = format!("arm {} leads {p} {n} sensed {sensed}", index + 1);
                let got = plan.forward(t, 0.0).unwrap();
                report.check("reading", &place, t, want.value(), got, 1e-12 * supply);
                report.check("temperature", &place, t, t, plan.one(want.value()).number().unwrap(), 1e-9);
                let off = Chain { self_heating: None, ..chain }.plan().unwrap().one(want.value()).number().unwrap() - t;
                report.equal("heat shows", &place, t, true, off > 1e-3);
            }
        }
    }
    report.finish();
}

#[test]
fn worked_examples() {
    let table = Table::read("data/temperature/lead_and_selfheating_examples.csv");
    let mut report = Report::new("worked examples of circuits");
    let value = |id: &str, quantity: &str| {
        table.rows().find(|r| r.text("id") == id && r.text("quantity") == quantity).expect("a row").number("value")
    };
    // 20 K/W, 1 mA, 100 Ω: 1e-4 W, 0.002 K
    let chain = heated(Chain::new(Network::Resistance { leads: None }, PT100), 20.0, Some(1e-3));
    let got = chain.plan().unwrap().one(100.0).number().unwrap();
    report.check("self-heating", "H1", 100.0, -value("H1", "dT"), got, 1e-12);
    // taps: 215.12 Ω, 309 °C; the current of 0.41 mA follows from 88.2 mV
    let tapped = ohmwright::measurement::Pairing::Tap.together(value("L1", "V_CD"), value("L1", "V_ED"));
    report.check("tap", "L1", 0.0, value("L1", "R_rtd"), tapped / 0.41, 0.005);
    let chain = volts(Chain::new(Network::Resistance { leads: None }, PT100), Supply::Fixed(0.41e-3));
    let chain = Chain { reading: Reading { signal: Signal::Volts, exponent: -3 }, ..chain };
    report.check("tap", "L1", tapped, value("L1", "t_table"), chain.plan().unwrap().one(tapped).number().unwrap(), 0.5);
    report.finish();
}

/// E(t) = E + E(t reference), against the emf of the two junctions added by hand; the table values are NIST's.
#[test]
fn a_thermocouple_with_its_reference_junction() {
    // NIST ITS-90 tables, type K: 4.096 mV at 100 °C, 1.000 mV at 25 °C (0.0005 mV each), 41.4 µV/K at 100 °C
    let measured = 4.096 - 1.000;
    let chain = Chain::new(Network::Emf, Element::Thermocouple(Thermocouple::K));
    let chain = Chain { reading: Reading { signal: Signal::Volts, exponent: -3 }, ..chain };
    let column = Chain { temperature: Temperature::Column, ..chain }.plan().unwrap();
    let fixed = Chain { temperature: Temperature::Fixed(25.0), ..chain }.plan().unwrap();
    let inputs = Inputs { reading: measured, celsius: 25.0, ..Inputs::default() };
    for outcome in [column.one(inputs), fixed.one(measured)] {
        assert!((outcome.number().unwrap() - 100.0).abs() < 0.001 / 0.0414, "{outcome:?}");
    }
    // the junction is the one thing that is missing, or out of reach
    let word = |celsius| column.one(Inputs { celsius, ..inputs }).word.as_str();
    assert_eq!([word(f64::NAN), word(2e3), word(f64::INFINITY)], ["missing", "out-of-range", "saturated"]);
    // type B below its second zero: the higher of two temperatures, and the word that says so
    let b = Chain {
        temperature: Temperature::Fixed(0.0),
        ..Chain::new(Network::Emf, Element::Thermocouple(Thermocouple::B))
    };
    let b = b.plan().unwrap();
    let (low, high) = (b.one(-1e-6), b.one(5e-6));
    assert_eq!((low.word.as_str(), high.word.as_str()), ("ambiguous", "good"));
    assert!(low.value > 21.02 && low.value < 42.13 && high.value > 42.13, "{low:?} {high:?}");
}

#[test]
fn broken_leads_are_named() {
    let bridge = Bridge {
        leads: Some(Leads { wires: Wires::Three, each: Each::Same(Conductor::Ohms(2.6)) }),
        ..Bridge::one_gauge(350.0)
    };
    let gauge = Chain::strain(bridge, ohmwright::strain::Gauge::new(2.08));
    // by hand: R1 → ∞ gives 1 − 1/2, R2 → ∞ gives 0 − 1/2
    for (lead, want) in [(1, 0.5), (2, -0.5)] {
        let got = gauge.reading_with_broken_lead(lead, &Inputs::default()).unwrap();
        assert!((got - want).abs() < 1e-9, "{got}");
        assert_eq!(gauge.broken_lead(&Inputs::from(want * 0.99)), Some(lead));
    }
    assert!(gauge.reading_with_broken_lead(3, &Inputs::default()).is_err());
    for reading in [0.0, 1e-3, 0.3, -0.3, 2.0] {
        assert_eq!(gauge.broken_lead(&Inputs::from(reading)), None, "{reading}");
    }
    let mut own = bridge;
    own.resistances = [100.0; 4];
    let thermometer = Chain::new(Network::Bridge(own), PT100);
    assert_eq!(thermometer.broken_lead(&Inputs::from(0.499)), Some(1));
    let ohms = Chain::new(Network::Resistance { leads: bridge.leads }, PT100);
    assert_eq!(ohms.broken_lead(&Inputs::from(1e6)), None);
}

#[test]
fn what_does_not_fit_is_refused() {
    let refused = |chain: Chain| chain.plan().expect_err("refused").to_string();
    let pt = Chain::new(Network::Resistance { leads: None }, PT100);
    let couple = Chain::new(Network::Emf, Element::Thermocouple(Thermocouple::K));
    let heat = Some(SelfHeating { kelvin_per_watt: 20.0, amperes: None });
    let leak = Around { leakage: Some(1e6), ..Around::NONE };
    for (chain, words) in [
        (Chain { self_heating: heat, ..pt }, "the current that warms the thermometer"),
        (Chain { self_heating: heat, temperature: Temperature::Fixed(0.0), ..couple }, "resistance thermometer"),
        (Chain { around: leak, temperature: Temperature::Fixed(0.0), ..couple }, "resistance thermometers"),
        (couple, "reference junction"),
        (Chain { temperature: Temperature::Fixed(2e3), ..couple }, "1372"),
        (Chain { extrapolate: true, temperature: Temperature::Fixed(0.0), ..couple }, "cannot be extrapolated"),
        (Chain::new(Network::Emf, PT100), "no voltage of its own"),
        (Chain::new(Network::Resistance { leads: None }, Element::Thermocouple(Thermocouple::K)), "its own voltage"),
        (Chain { around: Around { parallel: Some(-1.0), ..Around::NONE }, ..pt }, "parallel"),
        (volts(Chain::new(Network::Reference { ohms: 100.0, leads: None }, PT100), Supply::None), "supply"),
    ] {
        let error = refused(chain);
        assert!(error.contains(words), "{error}: {words}");
    }
    // beyond what any steady state has: 10 V on a thermistor that a milliwatt warms by 2 K runs away
    let divider = Divider { fixed: 100.0, sensor: Side::Low, input_resistance: None };
    let runaway = volts(Chain::new(Network::Divider { divider, leads: None }, NTC), Supply::Fixed(10.0));
    assert!(heated(runaway, 2e3, None).plan().unwrap().forward(25.0, 0.0).is_err());
}

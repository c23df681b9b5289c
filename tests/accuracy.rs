//! Every law and network against 50-digit arithmetic (tests/oracle), forwards, backwards and differentiated, on every
//! row; and every derivative against finite differences at 30 digits.
//!
//! What is allowed, and why:
//!
//! | function | domain | allowed error | why |
//! |---|---|---|---|
//! | `ln` | 1e-300 ..= 1e300 | 1 unit of the last place | the bound of the method that it follows |
//! | `exp` | -700 ..= 700 | 1 unit of the last place | the same |
//! | platinum, forward | -200 ..= 850 °C | 1e-12 relative | four multiplications; far below 1 mK |
//! | platinum, inverse | the same | 1e-9 K | a millionth of the smallest tolerance class |
//! | thermistors, forward | -50 ..= 150 °C | 1e-12 relative | rounding of the exponent (below 20) times its size |
//! | thermistors, inverse | the same | 1e-9 K | as platinum |
//! | bridge, divider, forward | strain ±0.1; 32 Ω ..= 262 kΩ | 1e-12 relative or 4e-16 Σ\|terms\| | the output is the difference of two node potentials, each good to rounding |
//! | bridge, divider, inverse | the same | 1e-12 relative or 5e-16 V/V over the sensitivity | the reading itself is only given to rounding |
//! | all of them, slope | the same | 1e-9 relative | first-order uncertainty needs three digits; what is left shows that the derivative is the exact one |
//! | ∂/∂temperature | -50 ..= 150 °C | 1e-9 relative or 4e-16 Σ\|terms\| | thermal output and expansion may cancel |
//! | ∂/∂ every parameter | the chains of tests/support/chains.rs | 1e-9 relative or 5e-16 V/V (1e-12 K on ohms and dividers) a unit of ln p | as above |
//!
//! Σ|terms| of a bridge is a + b, its two node potentials over the supply; behind an amplifier of gain G it is G (a + b),
//! and 5e-16 V/V at the bridge are 5e-16 G there.

mod support;

#[allow(dead_code, reason = "its square root and its own tests are not needed here")]
#[path = "../src/math/elementary.rs"]
mod elementary;

use ohmwright::chain::{
    Chain, Derivative, Dual, Element, Inputs, Network, Output, Parameter, Plan, Real, STRAIN_LIMIT, Sides, Temperature,
};
use ohmwright::platinum::{Coefficients, Platinum};
use ohmwright::signal::{
    Amplifier, Arm, Bridge, Conductor, Difference, Divider, Driven, Each, Leads, Pair, Reference, Side, Wires,
};
use ohmwright::strain::{Expansion, Gauge, ThermalOutput, Zero, ZeroMeaning, ZeroReading};
use ohmwright::thermistor::{Beta, Law, SteinhartHart, Thermistor};
use support::oracle::{Block, Oracle, Row, SplitMix64};
use support::report::Report;
use support::twofold::Twofold;

/// Forward laws and networks, relative.
const FORWARD: f64 = 1e-12;
/// Forward networks where the result nearly cancels, times the sum of the magnitudes of the terms.
const FORWARD_FLOOR: f64 = 4e-16;
/// Network inverse, relative.
const INVERSE: f64 = 1e-12;
/// Network inverse, V/V.
const INVERSE_FLOOR: f64 = 5e-16;
/// Thermometer inverse, K.
const KELVIN: f64 = 1e-9;
/// Derivatives, relative.
const SLOPE: f64 = 1e-9;

#[test]
fn the_stream_begins_as_documented() {
    // tests/oracle/README.md
    let mut s = SplitMix64(1_234_567);
    let words = [s.word(), s.word(), s.word()];
    assert_eq!(words, [6_457_827_717_110_365_317, 3_203_168_211_198_807_973, 9_817_491_932_198_370_423]);
}

#[test]
fn every_oracle_file_is_read() {
    let mut found: Vec<_> = std::fs::read_dir(concat!(env!("CARGO_MANIFEST_DIR"), "/tests/oracle"))
        .expect("the folder of the oracle")
        .filter_map(|f| f.ok()?.file_name().into_string().ok()?.strip_suffix(".txt").map(str::to_owned))
        .collect();
    found.sort();
    // those with more than one thing beside the reading, shunts and transducers: tests/accuracy_sides.rs
    let mut read: Vec<_> =
        ELEMENTARY.iter().chain(&LAWS).chain(&BRIDGES).chain(&DIVIDERS).chain(&support::oracle::SIDES).collect();
    read.sort();
    assert_eq!(found, read.into_iter().map(|s| (*s).to_owned()).collect::<Vec<_>>());
}

const ELEMENTARY: [&str; 2] = ["ln", "exp"];
const LAWS: [&str; 4] = ["platinum_iec60751", "platinum_custom", "thermistor_beta", "thermistor_steinhart_hart"];
const DIVIDERS: [&str; 4] = ["divider_low", "divider_high", "divider_low_loaded", "divider_high_loaded"];
const BRIDGES: [&str; 17] = [
    "bridge_quarter",
    "bridge_quarter_unequal",
    "bridge_quarter_2wire",
    "bridge_quarter_3wire",
    "bridge_half_bending",
    "bridge_half_poisson",
    "bridge_half_opposite",
    "bridge_half_3wire",
    "bridge_half_dummy",
    "bridge_full_bending",
    "bridge_full_poisson",
    "bridge_full_leads",
    "bridge_full_sensed",
    "bridge_full_amplifier_ideal",
    "bridge_full_amplifier_finite",
    "bridge_full_amplifier_sensed",
    "strain_temperature",
];

// ---- functions of one number ----------------------------------------------------------------------------------------

#[test]
fn logarithm_and_exponential() {
    for (kind, f) in [("ln", elementary::ln as fn(f64) -> f64), ("exp", elementary::exp)] {
        let oracle = Oracle::read(kind);
        let mut report = Report::new(kind);
        for row in oracle.blocks.iter().flat_map(|b| &b.rows) {
            let x = row.inputs[0];
            let ulp = row.value.abs().next_up() - row.value.abs();
            report.check("value", oracle.at(row), format_args!("{x:e}"), row.value, f(x), ulp);
        }
        report.finish();
    }
}

// ---- thermometers ---------------------------------------------------------------------------------------------------

/// One direction of a law.
type Function = Box<dyn Fn(f64) -> f64>;

/// The law of a block. Its range is stated a little wider than the domain, so that a resistance that was rounded at
/// an end of the domain is inside.
fn thermometer(kind: &str, block: &Block) -> Element {
    let p = |name| block.get(name);
    match kind {
        "platinum_iec60751" | "platinum_custom" => Element::Platinum(Coefficients {
            r0_ohms: p("r0"),
            a: p("a"),
            b: p("b"),
            c: p("c"),
            range_celsius: [-201.0, 851.0],
        }),
        "thermistor_beta" => Element::Thermistor(Law::Beta(Beta {
            r25_ohms: p("r25"),
            beta_kelvin: p("beta"),
            range_celsius: [-51.0, 151.0],
        })),
        _ => Element::Thermistor(Law::SteinhartHart(SteinhartHart {
            a: p("a"),
            b: p("b"),
            c: p("c"),
            range_celsius: [-51.0, 151.0],
        })),
    }
}

#[test]
fn thermometers() {
    for kind in LAWS {
        let oracle = Oracle::read(kind);
        let mut report = Report::new(kind);
        for block in &oracle.blocks {
            let element = thermometer(kind, block);
            let chain = Chain::new(Network::Resistance { leads: None }, element);
            let plan = chain.plan().expect("a plan");
            let still = chain.map(|_, v| Dual::constant(v));
            // the typed model beside the chain
            let (ohms, celsius): (Function, Function) = match element {
                Element::Platinum(k) => {
                    let model = Platinum::new(k).expect("a curve");
                    (
                        Box::new(move |t| model.ohms_from_celsius(t).expect("inside")),
                        Box::new(move |r| model.celsius_from_ohms(r).expect("inside")),
                    )
                }
                Element::Thermistor(law) => {
                    let model = Thermistor::new(law).expect("a law");
                    (
                        Box::new(move |t| model.ohms_from_celsius(t).expect("inside")),
                        Box::new(move |r| model.celsius_from_ohms(r).expect("inside")),
                    )
                }
                _ => unreachable!("a thermometer"),
            };
            for row in &block.rows {
                let (t, at) = (row.inputs[0], oracle.at(row));
                let allowed = FORWARD * row.value.abs();
                report.check("forward, model", at, t, row.value, ohms(t), allowed);
                report.check("forward, plan", at, t, row.value, plan.forward(t, 0.0).expect("inside"), allowed);
                for (name, got) in
                    [("inverse, model", celsius(row.value)), ("inverse, plan", plan.one(row.value).value)]
                {
                    report.check_error(name, at, row.value, t, got, oracle.inverse_error(row, got), KELVIN);
                }
                let slope = still.forward(Dual::variable(t), &Sides::default()).expect("forward").slope;
                report.check("slope", at, t, row.slope, slope, SLOPE * row.slope.abs());
                if row.line % 20 == 0 {
                    let back = chain.derivative(Derivative::Reading, t, &Inputs::default()).expect("derivatives");
                    report.equal("derivatives", at, t, 1.0 / slope, back);
                }
            }
        }
        report.finish();
    }
}

// ---- dividers -------------------------------------------------------------------------------------------------------

#[test]
fn dividers() {
    for kind in DIVIDERS {
        let oracle = Oracle::read(kind);
        let mut report = Report::new(kind);
        for block in &oracle.blocks {
            let divider = Divider {
                fixed: block.get("fixed"),
                sensor: if block.get("sensor_low") == 1.0 { Side::Low } else { Side::High },
                input_resistance: block.maybe("input"),
            };
            for row in &block.rows {
                // A linear sensor R = ohms (1 + t): at t = 0 it is the resistance of the row exactly, and the inverse
                // is the relative change that the file states.
                let ohms = row.inputs[0];
                let sensor = Element::Platinum(Coefficients {
                    r0_ohms: ohms,
                    a: 1.0,
                    b: 0.0,
                    c: 0.0,
                    range_celsius: [-0.5, 0.5],
                });
                let chain = Chain::new(Network::Divider { divider, leads: None }, sensor);
                let plan = chain.plan().expect("a plan");
                let at = oracle.at(row);
                let allowed = (FORWARD * row.value).max(FORWARD_FLOOR);
                report.check("forward", at, ohms, row.value, plan.forward(0.0, 0.0).expect("inside"), allowed);
                let got = plan.one(row.value).value;
                let support::oracle::Delta::Relative(unit) = oracle.delta else { panic!("a relative delta") };
                let want = row.delta * unit;
                let allowed = INVERSE.max(INVERSE_FLOOR / (row.slope * ohms).abs());
                report.check("inverse", at, row.value, want, got, allowed);
                let slope = chain.derivative(Derivative::Reading, 0.0, &Inputs::default()).expect("derivatives");
                let want = row.slope * ohms;
                report.check("slope", at, ohms, want, 1.0 / slope, SLOPE * want.abs());
            }
        }
        report.finish();
    }
}

// ---- bridges --------------------------------------------------------------------------------------------------------

/// The bridge of a block, its gauge and its amplifier, without a zero.
fn wired(kind: &str, block: &Block) -> Chain {
    let r = |n: u8| block.or(&format!("r{n}"), block.get("r1"));
    let arm = |n: u8| {
        let (c, t) = (block.or(&format!("c{n}"), 0.0), block.or(&format!("t{n}"), 0.0));
        if c != 0.0 {
            match block.maybe("nu") {
                // `minus nu` of the file: an arm that is driven across
                Some(nu) if c == -nu => Arm::Active { factor: -1.0, driven: Driven::Across },
                _ => Arm::Active { factor: c, driven: Driven::Along },
            }
        } else if t != 0.0 {
            Arm::Dummy
        } else {
            Arm::Fixed
        }
    };
    let wire = |n: u8| Conductor::Ohms(block.or(&format!("wire{n}"), 0.0));
    let pair = |a, b| Pair::Own([block.or(a, 0.0), block.or(b, 0.0)]);
    let mut bridge = Bridge {
        resistances: [r(1), r(2), r(3), r(4)],
        arms: [arm(1), arm(2), arm(3), arm(4)],
        poisson: block.or("nu", 0.0),
        leads: block.maybe("wires").map(|wires| Leads {
            wires: if wires == 2.0 { Wires::Two } else { Wires::Three },
            each: Each::Own([wire(1), wire(2), wire(3)]),
        }),
        balanced: false,
        supply_leads: pair("supply_p", "supply_n"),
        signal_leads: pair("signal_a", "signal_b"),
        sensed: block.maybe("sensed") == Some(1.0),
        input_resistance: block.maybe("input"),
        shunt: None,
    };
    let mut gauge = Gauge::new(block.get("f"));
    let mut zero = Zero::default();
    let mut temperature = Temperature::None;
    let polynomial = |coefficients, gauge_factor| ThermalOutput {
        coefficients,
        fahrenheit: false,
        gauge_factor,
        range_celsius: [f64::NEG_INFINITY, f64::INFINITY],
    };
    match kind {
        "bridge_half_dummy" => {
            // τ is an input of the file: a thermal output of 1e6 microstrain/K makes it the temperature
            gauge.thermal_output = Some(polynomial([0.0, 1e6, 0.0, 0.0, 0.0, 0.0, 0.0], 1.0));
            zero.celsius = Some(0.0);
            temperature = Temperature::Column;
        }
        "strain_temperature" => {
            bridge = Bridge::one_gauge(block.get("r1"));
            gauge.slope = block.get("s");
            gauge.reference_celsius = block.get("t_ref");
            let p = |n| block.get(n);
            gauge.thermal_output =
                Some(polynomial([p("to0"), p("to1"), p("to2"), p("to3"), p("to4"), 0.0, 0.0], p("f_data")));
            gauge.expansion = Some(Expansion { specimen: p("alpha_specimen"), data: p("alpha_data") });
            zero = Zero {
                reading: Some(ZeroReading::Ratio(p("zero"))),
                meaning: ZeroMeaning::Strain,
                celsius: Some(p("t0")),
                ..Zero::default()
            };
            temperature = Temperature::Column;
        }
        _ => {}
    }
    // The limit is set a little wider than the domain, so that a reading that was rounded at its end is inside.
    let mut chain = Chain::new(Network::Bridge(bridge), Element::Gauge { gauge, zero, limit: 1.1 * STRAIN_LIMIT });
    chain.output = Output::Strain { exponent: 0 };
    chain.temperature = temperature;
    if block.maybe("rin_ni").is_some() {
        chain.amplifier = Amplifier::Difference {
            circuit: Difference {
                input: [block.get("rin_inv"), block.get("rin_ni")],
                feedback: [block.get("rfb_inv"), block.get("rfb_ni")],
                open_loop_gain: block.maybe("open_loop_gain"),
                reference: if block.get("reference") == 0.5 { Reference::Centre } else { Reference::Negative },
            },
            offset: 0.0,
        };
    }
    chain
}

/// The chain with the initial unbalance x₀ of the block.
///
/// A chain states it as the reading at zero strain. That reading is computed here at 30 digits and rounded once, which
/// moves x₀ by 1e-18 at most, a five-hundredth of what is allowed; a wrong one would show in every row.
fn unbalanced(chain: Chain, block: &Block) -> Chain {
    let Some(x0) = block.maybe("x0") else { return chain };
    let mut plain = chain;
    let Element::Gauge { gauge, zero, .. } = &mut plain.element else { panic!("a gauge") };
    *gauge = Gauge::new(1.0);
    *zero = Zero::default();
    plain.temperature = Temperature::None;
    let wide = plain.map(|_, v| Twofold::new(v));
    let reading = wide.forward(Twofold::new(x0), &Sides::default()).expect("forward").value();
    let mut chain = chain;
    if let Element::Gauge { zero, .. } = &mut chain.element {
        zero.reading = Some(ZeroReading::Ratio(reading));
    }
    chain
}

/// Sum of the two node potentials over the supply, leads and load left out, which change it by a few percent.
fn potentials(block: &Block, row: &Row) -> f64 {
    let x = block.get("f") * row.inputs[0] + block.or("x0", 0.0);
    let r = |n: u8| block.or(&format!("r{n}"), block.get("r1")) * (1.0 + block.or(&format!("c{n}"), 0.0) * x);
    r(1) / (r(1) + r(2)) + r(4) / (r(3) + r(4))
}

#[test]
fn bridges() {
    for kind in BRIDGES {
        let oracle = Oracle::read(kind);
        let mut report = Report::new(kind);
        for block in &oracle.blocks {
            let chain = unbalanced(wired(kind, block), block);
            let plan = chain.plan().expect("a plan");
            let gain = block.maybe("rin_inv").map_or(1.0, |r| block.get("rfb_inv") / r);
            let still = chain.map(|_, v| Dual::constant(v));
            for (i, row) in block.rows.iter().enumerate() {
                let side = row.inputs.get(1).copied();
                one_row(&mut report, "", &oracle, row, &plan, block, gain);
                let e = row.inputs[0];
                let at = oracle.at(row);
                let moved = |q, t| still.forward(q, &Sides { celsius: t, ..Sides::default() }).expect("forward").slope;
                let slope = moved(Dual::variable(e), side.map(Dual::constant));
                report.check("slope", at, e, row.slope, slope, SLOPE * row.slope.abs());
                let inputs = Inputs { celsius: side.unwrap_or(0.0), ..Inputs::default() };
                if kind == "strain_temperature" {
                    let t = inputs.celsius;
                    let slope_t = moved(Dual::constant(e), Some(Dual::variable(t)));
                    let allowed = (SLOPE * row.slope_t.abs()).max(FORWARD_FLOOR * terms_of_slope_t(block, row));
                    report.check("slope in T", at, format_args!("{e} at {t} degC"), row.slope_t, slope_t, allowed);
                }
                if i % 20 == 0 {
                    let mut seen = None;
                    chain
                        .derivatives(e, &inputs, |d, v| {
                            if d == Derivative::Reading {
                                seen = Some(v);
                            }
                        })
                        .expect("derivatives");
                    report.equal("derivatives", at, e, Some(1.0 / slope), seen);
                    // the same with one temperature for all readings, which lowers to another plan
                    if let Some(t) = side {
                        let fixed = Chain { temperature: Temperature::Fixed(t), ..chain };
                        one_row(
                            &mut report,
                            ", fixed temperature",
                            &oracle,
                            row,
                            &fixed.plan().expect("a plan"),
                            block,
                            1.0,
                        );
                    }
                }
            }
        }
        report.finish();
    }
}

/// Forward and inverse of one row.
fn one_row(report: &mut Report, form: &str, oracle: &Oracle, row: &Row, plan: &Plan, block: &Block, gain: f64) {
    let (e, celsius) = (row.inputs[0], row.inputs.get(1).copied().unwrap_or(0.0));
    let at = oracle.at(row);
    let got = plan.forward(e, Inputs { celsius, ..Inputs::default() }).expect("inside");
    let allowed = (FORWARD * row.value.abs()).max(FORWARD_FLOOR * gain * potentials(block, row));
    let input = format_args!("{e:e} ({celsius})").to_string();
    report.check(&format!("forward{form}"), at, &input, row.value, got, allowed);
    let got = plan.one(Inputs { reading: row.value, celsius, ..Inputs::default() }).value;
    let allowed = (INVERSE * e.abs()).max(INVERSE_FLOOR * gain / row.slope.abs());
    let input = format_args!("{:e} ({celsius})", row.value).to_string();
    report.check_error(&format!("inverse{form}"), at, &input, e, got, oracle.inverse_error(row, got), allowed);
}

/// Sum of the magnitudes of what d reading / dT is made of.
fn terms_of_slope_t(block: &Block, row: &Row) -> f64 {
    let p = |n| block.get(n);
    let (e, t) = (row.inputs[0], row.inputs[1]);
    let f = p("f") * (1.0 + p("s") * (t - p("t_ref")));
    let thermal = p("to1").abs()
        + (2.0 * p("to2") * t).abs()
        + (3.0 * p("to3") * t * t).abs()
        + (4.0 * p("to4") * t * t * t).abs();
    let expansion = p("alpha_specimen") + p("alpha_data");
    let of_resistance = p("f_data") * thermal * 1e-6 + p("f") * expansion + (p("f") * p("s") * e).abs();
    (row.slope / f).abs() * of_resistance
}

// ---- derivatives with respect to everything -------------------------------------------------------------------------

/// Every derivative against a central difference of the same equations at 30 digits: the forward equations are proven
/// by the oracle above; what is proven here is that their derivatives are theirs.
///
/// With a step of 1e-10 of the parameter the truncation error is of order 1e-20 and the rounding error of order
/// 1e-30/1e-10, so that the differences are exact to more digits than a double has.
#[test]
fn derivatives_with_respect_to_everything() {
    let mut report = Report::new("derivatives");
    for case in support::chains::all() {
        let chain = case.chain;
        let wide = chain.map(|_, v| Twofold::new(v));
        let [low, high] = case.span;
        for share in [0.02, 0.37, 0.513, 0.98] {
            let q = low + share * (high - low);
            let inputs = case.inputs;
            let forward = |chain: &Chain<Twofold>, q: Twofold, sides: &Sides<Twofold>| {
                chain.forward(q, sides).unwrap_or_else(|e| panic!("{}: {e:?}", case.name))
            };
            let q2 = Twofold::new(q);
            let sides = Sides {
                supply: Some(Twofold::new(inputs.supply)),
                celsius: Some(Twofold::new(inputs.celsius)),
                lead_celsius: Some(Twofold::new(inputs.lead_celsius)),
                arm_celsius: inputs.arm_celsius.map(|t| Some(Twofold::new(t))),
            };
            let step = |v: f64| Twofold::new(if v == 0.0 { 1e-12 } else { 1e-10 * v.abs() });
            let central = |v: f64, f: &dyn Fn(Twofold) -> Twofold| {
                let (v, h) = (Twofold::new(v), step(v));
                ((f(v + h) - f(v - h)) / (h + h)).value()
            };
            let slope = central(q, &|q| forward(&wide, q, &sides));
            let reading = forward(&wide, q2, &sides).value();
            let beside = |v: f64, with: &dyn Fn(Option<Twofold>) -> Sides<Twofold>| {
                (v, -central(v, &|moved| forward(&wide, q2, &with(Some(moved)))) / slope)
            };
            let floor = support::chains::floor_of(&chain, slope, reading);
            // the parameters in the order of `map`, which is the order in which they are handed out
            let mut values = Vec::new();
            chain.map(|_, v| {
                values.push(v);
                v
            });
            let mut place = 0;
            chain
                .derivatives(q, &inputs, |which, got| {
                    let (value, want) = match which {
                        Derivative::Reading => (reading, 1.0 / slope),
                        Derivative::Supply => beside(inputs.supply, &|supply| Sides { supply, ..sides }),
                        Derivative::Temperature => beside(inputs.celsius, &|celsius| Sides { celsius, ..sides }),
                        Derivative::LeadTemperature => {
                            beside(inputs.lead_celsius, &|lead_celsius| Sides { lead_celsius, ..sides })
                        }
                        Derivative::ArmTemperature(arm) => {
                            let arm = usize::from(arm) - 1;
                            beside(inputs.arm_celsius[arm], &|t| {
                                let mut arm_celsius = sides.arm_celsius;
                                arm_celsius[arm] = t;
                                Sides { arm_celsius, ..sides }
                            })
                        }
                        _ => {
                            let here = place;
                            place += 1;
                            // Without a temperature the gauge counts as standing at its reference temperature.
                            let mut stated = chain;
                            if let (Element::Gauge { gauge, .. }, Temperature::None) =
                                (chain.element, chain.temperature)
                            {
                                stated.temperature = Temperature::Fixed(gauge.reference_celsius);
                            }
                            let moved = |p: Twofold| {
                                let mut n = 0;
                                let chain = stated.map(|name, v| {
                                    if name == Parameter::Temperature && chain.temperature == Temperature::None {
                                        return Twofold::new(v);
                                    }
                                    n += 1;
                                    if n - 1 == here { p } else { Twofold::new(v) }
                                });
                                forward(&chain, q2, &sides)
                            };
                            (values[here], -central(values[here], &moved) / slope)
                        }
                    };
                    // the floor is the effect of a relative change of the parameter; of 1 where the parameter is 0
                    let unit = if value == 0.0 { 1.0 } else { value.abs() };
                    let allowed = (SLOPE * want.abs()).max(floor / unit);
                    report.check(
                        case.name,
                        format_args!("{which:?}"),
                        format_args!("{q} ({value:e})"),
                        want,
                        got,
                        allowed,
                    );
                })
                .expect("derivatives");
            assert_eq!(place, values.len(), "{}: every parameter is handed out once", case.name);
        }
    }
    report.finish();
}

/// Every derivative against the plan itself: the same reading through the plans of two perturbed chains.
///
/// This ties the derivatives to the numbers that are given out, through the lowering that they do not use. A plan is
/// good to `floor`, so a central difference over ±h p is good to about floor/(h p); with h = 1e-4 and one step of
/// Richardson's extrapolation the truncation error is of order h⁴ = 1e-16 of the derivative. What is left is a check
/// of the sign, the place and six digits.
#[test]
fn derivatives_agree_with_the_plan() {
    const STEP: f64 = 1e-4;
    let mut report = Report::new("derivatives by the plan");
    for case in support::chains::all() {
        let (chain, inputs) = (case.chain, case.inputs);
        let [low, high] = case.span;
        for share in [0.31, 0.513, 0.72] {
            let q = low + share * (high - low);
            let plan = chain.plan().expect("a plan");
            let reading = plan.forward(q, inputs).expect("inside");
            let at = |plan: &Plan, inputs: Inputs| plan.one(Inputs { reading, ..inputs }).number().expect("a number");
            let extrapolated = |f: &dyn Fn(f64) -> f64| {
                // f of a relative change
                let central = |h: f64| (f(h) - f(-h)) / (2.0 * h);
                (4.0 * central(STEP / 2.0) - central(STEP)) / 3.0
            };
            let slope = 1.0 / chain.derivative(Derivative::Reading, q, &inputs).expect("derivatives");
            let allowed = |want: f64, value: f64| {
                let floor = support::chains::floor_of(&chain, slope, reading).max(2e-16 * q.abs());
                1e-6 * want.abs() + 4.0 * floor / STEP / value.abs()
            };
            let mut values = Vec::new();
            chain.map(|_, v| {
                values.push(v);
                v
            });
            let mut place = 0;
            chain
                .derivatives(q, &inputs, |which, got| {
                    let (value, by_plan): (f64, Box<dyn Fn(f64) -> f64>) = match which {
                        Derivative::Reading => (
                            reading,
                            Box::new(|h| {
                                plan.one(Inputs { reading: reading * (1.0 + h), ..inputs }).number().expect("a number")
                            }),
                        ),
                        Derivative::Supply => (
                            inputs.supply,
                            Box::new(|h| at(&plan, Inputs { supply: inputs.supply * (1.0 + h), ..inputs })),
                        ),
                        Derivative::Temperature => (
                            inputs.celsius,
                            Box::new(|h| at(&plan, Inputs { celsius: inputs.celsius * (1.0 + h), ..inputs })),
                        ),
                        Derivative::LeadTemperature => (
                            inputs.lead_celsius,
                            Box::new(|h| at(&plan, Inputs { lead_celsius: inputs.lead_celsius * (1.0 + h), ..inputs })),
                        ),
                        Derivative::ArmTemperature(arm) => {
                            let arm = usize::from(arm) - 1;
                            let f = move |h: f64| {
                                let mut arm_celsius = inputs.arm_celsius;
                                arm_celsius[arm] *= 1.0 + h;
                                at(&plan, Inputs { arm_celsius, ..inputs })
                            };
                            (inputs.arm_celsius[arm], Box::new(f))
                        }
                        _ => {
                            let here = place;
                            place += 1;
                            let f = move |h: f64| {
                                let mut n = 0;
                                let moved = chain.map(|_, v| {
                                    n += 1;
                                    if n - 1 == here { v * (1.0 + h) } else { v }
                                });
                                at(&moved.plan().expect("a plan"), inputs)
                            };
                            (values[here], Box::new(f))
                        }
                    };
                    if value == 0.0 {
                        return; // a relative change of nothing; the test above has it
                    }
                    let want = extrapolated(&*by_plan) / value;
                    let input = format_args!("{q} ({value:e})").to_string();
                    report.check(case.name, format_args!("{which:?}"), input, want, got, allowed(want, value));
                })
                .expect("derivatives");
        }
    }
    report.finish();
}

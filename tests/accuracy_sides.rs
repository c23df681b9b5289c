//! What changes reading by reading, shunts and transducers, against 50-digit arithmetic (tests/oracle/sides.py):
//! forwards, backwards and differentiated, on every row.
//!
//! | function | domain | allowed error | why |
//! |---|---|---|---|
//! | bridges, forward | strain ±0.1, leads −40 ..= 90 °C, gauges −50 ..= 150 °C | 1e-12 relative or 4e-16 Σ\|terms\| | the output is the difference of two node potentials |
//! | bridges, inverse | the same | 1e-12 relative or 5e-16 V/V over the sensitivity | the reading itself is only given to rounding |
//! | transducers | ±60 in units of load | the same | the same |
//! | platinum with warm leads | −200 ..= 850 °C | 1e-12 relative; 1e-9 K | as without |
//! | ∂/∂ quantity, ∂/∂ temperature of leads or of arm 1 | the same | 1e-9 relative or 4e-16 Σ\|terms\| | first-order uncertainty needs three digits |

mod support;

use ohmwright::chain::{
    Chain, Derivative, Dual, Element, Inputs, LeadWarmth, Network, Output, Plan, Real, Sides, Temperature,
};
use ohmwright::platinum::Coefficients;
use ohmwright::signal::{
    Amplifier, Arm, Bridge, Conductor, Difference, Driven, Each, Leads, Pair, Place, Reference, Shunt, Wires,
};
use ohmwright::strain::{
    Certificate, Gauge, Points, ThermalOutput, ThermalPoints, Transducer, Transverse, Zero, ZeroReading,
};
use support::oracle::{Block, Oracle, Row, SIDES};
use support::report::Report;
use support::twofold::Twofold;

const RELATIVE: f64 = 1e-12;
const FORWARD_FLOOR: f64 = 4e-16;
const INVERSE_FLOOR: f64 = 5e-16;
const KELVIN: f64 = 1e-9;
const SLOPE: f64 = 1e-9;
/// Largest |strain|, a little wider than the domain, so that a reading that was rounded at its end is inside.
const LIMIT: f64 = 0.11;

fn leads(block: &Block) -> Option<Leads> {
    let wire = |n: u8| Conductor::Ohms(block.or(&format!("wire{n}"), 0.0));
    block.maybe("wires").map(|wires| Leads {
        wires: if wires == 2.0 { Wires::Two } else { Wires::Three },
        each: Each::Own([wire(1), wire(2), wire(3)]),
    })
}

fn bridge(block: &Block) -> Bridge {
    let r = |n: u8| block.or(&format!("r{n}"), block.get("r1"));
    let arm = |n: u8| match (block.or(&format!("c{n}"), 0.0), block.maybe("nu")) {
        (0.0, _) => Arm::Fixed,
        // `minus nu` of the file: an arm that is driven across
        (c, Some(nu)) if c == -nu => Arm::Active { factor: -1.0, driven: Driven::Across },
        (c, _) => Arm::Active { factor: c, driven: Driven::Along },
    };
    let pair = |a, b| Pair::Own([block.or(a, 0.0), block.or(b, 0.0)]);
    Bridge {
        resistances: [r(1), r(2), r(3), r(4)],
        arms: [arm(1), arm(2), arm(3), arm(4)],
        poisson: block.or("nu", 0.0),
        leads: leads(block),
        balanced: block.maybe("balanced") == Some(1.0),
        supply_leads: pair("supply_p", "supply_n"),
        signal_leads: pair("signal_a", "signal_b"),
        sensed: block.maybe("sensed") == Some(1.0),
        input_resistance: block.maybe("input"),
        shunt: None,
    }
}

fn zero(block: &Block) -> Zero {
    Zero {
        reading: block.maybe("zero").map(ZeroReading::Ratio),
        celsius: block.maybe("t0_zero"),
        lead_celsius: block.maybe("lead_zero"),
        arm_celsius: ["zero_t1", "zero_t2", "zero_t3", "zero_t4"].map(|n| block.maybe(n)),
        ..Zero::default()
    }
}

fn gauge(block: &Block) -> Gauge {
    let mut gauge = Gauge::new(block.get("f"));
    if let (Some(slope), Some(reference)) = (block.maybe("s"), block.maybe("t_ref")) {
        (gauge.slope, gauge.reference_celsius) = (slope, reference);
    }
    if let Some(gauge_factor) = block.maybe("f_data") {
        let to = |n: u8| block.get(&format!("to{n}"));
        if block.maybe("t1").is_some_and(|t| t != 1.0) {
            let points = [0, 1, 2, 3, 4, 5].map(|n| [block.get(&format!("t{n}")), to(n)]);
            gauge.thermal_points = Some(ThermalPoints { points: Points::new(&points).expect("a table"), gauge_factor });
        } else {
            gauge.thermal_output = Some(ThermalOutput {
                coefficients: [to(0), to(1), to(2), to(3), to(4), 0.0, 0.0],
                fahrenheit: false,
                gauge_factor,
                range_celsius: [f64::NEG_INFINITY, f64::INFINITY],
            });
        }
    }
    gauge
}

fn transducer(kind: &str, block: &Block) -> Element {
    let law = if kind == "transducer_rated" {
        Transducer::Rated { output: block.get("rated"), capacity: block.get("capacity") }
    } else {
        let a = |n: u8| block.get(&format!("a{n}"));
        Transducer::Certificate(Certificate {
            coefficients: [a(0), a(1), a(2), a(3), 0.0, 0.0, 0.0],
            gives_output: block.get("gives_output") == 1.0,
            output_exponent: -3,
            load_scale: 1.0,
            range: [-60.001, 60.001],
        })
    };
    Element::Transducer { law, zero: zero(block), limit: 70.0 }
}

fn wired(kind: &str, block: &Block) -> Chain {
    let mut chain = match kind {
        "warm_platinum" => Chain::new(
            Network::Resistance { leads: leads(block) },
            Element::Platinum(Coefficients {
                r0_ohms: block.get("r0"),
                a: block.get("a"),
                b: block.get("b"),
                c: block.get("c"),
                range_celsius: [-201.0, 851.0],
            }),
        ),
        k if k.starts_with("transducer") => Chain::new(Network::Bridge(bridge(block)), transducer(kind, block)),
        _ => {
            let element = Element::Gauge { gauge: gauge(block), zero: zero(block), limit: LIMIT };
            let mut chain = Chain::new(Network::Bridge(bridge(block)), element);
            chain.output = Output::Strain { exponent: 0 };
            chain
        }
    };
    if let (Some(coefficient), Some(reference_celsius)) = (block.maybe("alpha"), block.maybe("lead_ref")) {
        chain.lead_warmth = Some(LeadWarmth { coefficient, reference_celsius, temperature: Temperature::Column });
    }
    match kind {
        "own_arms" => chain.arm_temperatures = [Temperature::Column; 4],
        "strain_points" => {
            chain.temperature = Temperature::Column;
            chain.transverse = Some(Transverse { sensitivity: block.get("k"), strain_ratio: block.get("ratio") });
            // a single arm of one resistance
            if let Network::Bridge(bridge) = &mut chain.network {
                *bridge = Bridge::one_gauge(block.get("r1"));
            }
        }
        _ => {}
    }
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
    shunted(chain, block)
}

/// The chain with the shunt of the block and, as its zero, the reading that x₀ gives without the shunt (at 30 digits,
/// rounded once, as in tests/accuracy.rs).
fn shunted(chain: Chain, block: &Block) -> Chain {
    let (Some(arm), Some(x0)) = (block.maybe("shunt_arm"), block.maybe("x0")) else { return chain };
    let mut plain = chain;
    if let Element::Gauge { gauge, .. } = &mut plain.element {
        *gauge = Gauge::new(1.0);
    }
    let wide = plain.map(|_, v| Twofold::new(v));
    let reading = wide.forward(Twofold::new(x0), &Sides::default()).expect("forward").value();
    let place = if block.get("shunt_outside") == 1.0 { Place::Instrument } else { Place::Gauge };
    let shunt = Shunt { arm: arm as u8, ohms: block.get("shunt"), place };
    let mut chain = chain.with_shunt(shunt).expect("a bridge");
    if let Element::Gauge { zero, .. } = &mut chain.element {
        zero.reading = Some(ZeroReading::Ratio(reading));
    }
    chain
}

/// What comes with a row.
fn inputs(kind: &str, row: &Row) -> Inputs {
    let side = |i: usize| row.inputs.get(i).copied().unwrap_or(0.0);
    match kind {
        "own_arms" => Inputs { arm_celsius: [side(1), side(2), side(3), side(4)], ..Inputs::default() },
        "strain_points" => Inputs { celsius: side(1), ..Inputs::default() },
        _ => Inputs { lead_celsius: side(1), ..Inputs::default() },
    }
}

/// The same chain with one value in place of every column.
fn fixed(chain: &Chain, inputs: &Inputs) -> Chain {
    let mut fixed = *chain;
    let fix = |t: Temperature, at| if t == Temperature::Column { Temperature::Fixed(at) } else { t };
    fixed.temperature = fix(fixed.temperature, inputs.celsius);
    for (own, t) in fixed.arm_temperatures.iter_mut().zip(inputs.arm_celsius) {
        *own = fix(*own, t);
    }
    if let Some(warmth) = &mut fixed.lead_warmth {
        warmth.temperature = fix(warmth.temperature, inputs.lead_celsius);
    }
    fixed
}

struct Allowed {
    forward: f64,
    inverse: f64,
    slope_t: f64,
}

/// Sum of the magnitudes of the terms of a table's slope over the table's: within an interval of the curve no term exceeds
/// some steps of the table, and the steps here are up to 200 microstrain over 10 K and more.
const POINTS_SLOPE: f64 = 1e-3;

fn allowed(kind: &str, block: &Block, row: &Row) -> Allowed {
    let q = row.inputs[0];
    let relative = RELATIVE * row.value.abs();
    if kind == "warm_platinum" {
        return Allowed { forward: relative, inverse: KELVIN, slope_t: SLOPE * row.slope_t.abs() };
    }
    let gain = block.maybe("rin_inv").map_or(1.0, |r| block.get("rfb_inv") / r);
    // the two node potentials are within a few percent of one half each, up to strains of 0.1
    let potentials = if kind.starts_with("transducer") {
        1.0
    } else {
        let x = block.get("f") * q;
        let r = |n: u8| block.or(&format!("r{n}"), block.get("r1")) * (1.0 + block.or(&format!("c{n}"), 0.0) * x);
        r(1) / (r(1) + r(2)) + r(4) / (r(3) + r(4))
    };
    let terms_t = match kind {
        // every lead's share of a potential, at most 20 ohm on 350, twice
        "own_arms" | "strain_points" => {
            let s = block.get("s").abs() * block.get("f") * q.abs();
            let to = |n: u8| block.get(&format!("to{n}")).abs() * 1e-6;
            let t: f64 = row.inputs[1].abs();
            let thermal = to(1) + 2.0 * to(2) * t + 3.0 * to(3) * t * t + 4.0 * to(4) * t * t * t;
            let thermal = if kind == "own_arms" { thermal } else { POINTS_SLOPE };
            0.5 * (s + block.get("f_data") * thermal)
        }
        _ => gain * block.or("alpha", 0.0) * 0.1,
    };
    Allowed {
        forward: relative.max(FORWARD_FLOOR * gain * potentials),
        inverse: (RELATIVE * q.abs()).max(INVERSE_FLOOR * gain / row.slope.abs()),
        slope_t: (SLOPE * row.slope_t.abs()).max(FORWARD_FLOOR * terms_t),
    }
}

#[test]
fn every_row() {
    for kind in SIDES {
        let oracle = Oracle::read(kind);
        let mut report = Report::new(kind);
        for block in &oracle.blocks {
            let chain = wired(kind, block);
            let plan = chain.plan().expect("a plan");
            let still = chain.map(|_, v| Dual::constant(v));
            for (i, row) in block.rows.iter().enumerate() {
                let (q, at, inputs, allowed) =
                    (row.inputs[0], oracle.at(row), inputs(kind, row), allowed(kind, block, row));
                let mut both = |form: &str, plan: &Plan| {
                    let got = plan.forward(q, inputs).expect("inside");
                    report.check(
                        &format!("forward{form}"),
                        at,
                        format!("{:?}", row.inputs),
                        row.value,
                        got,
                        allowed.forward,
                    );
                    let got = plan.one(Inputs { reading: row.value, ..inputs }).value;
                    let error = oracle.inverse_error(row, got);
                    report.check_error(&format!("inverse{form}"), at, row.value, q, got, error, allowed.inverse);
                };
                both("", &plan);
                if i % 20 < 2 {
                    both(", one temperature", &fixed(&chain, &inputs).plan().expect("a plan"));
                }
                let sides = Sides {
                    supply: None,
                    celsius: Some(Dual::constant(inputs.celsius)),
                    lead_celsius: Some(Dual::constant(inputs.lead_celsius)),
                    arm_celsius: inputs.arm_celsius.map(|t| Some(Dual::constant(t))),
                };
                let slope = still.forward(Dual::variable(q), &sides).expect("forward").slope;
                report.check("slope", at, q, row.slope, slope, SLOPE * row.slope.abs());
                if row.slope_t.is_finite() {
                    let mut moved = sides;
                    let which = match kind {
                        "own_arms" => {
                            moved.arm_celsius[0] = Some(Dual::variable(inputs.arm_celsius[0]));
                            Derivative::ArmTemperature(1)
                        }
                        "strain_points" => {
                            moved.celsius = Some(Dual::variable(inputs.celsius));
                            Derivative::Temperature
                        }
                        _ => {
                            moved.lead_celsius = Some(Dual::variable(inputs.lead_celsius));
                            Derivative::LeadTemperature
                        }
                    };
                    let got = still.forward(Dual::constant(q), &moved).expect("forward").slope;
                    report.check("slope in T", at, format!("{:?}", row.inputs), row.slope_t, got, allowed.slope_t);
                    if i % 20 == 0 {
                        let given = chain.derivative(which, q, &inputs).expect("derivatives");
                        report.equal("derivatives", at, q, -got / slope, given);
                    }
                }
            }
        }
        report.finish();
    }
}

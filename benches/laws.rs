//! What one reading costs, by law and network, beside a plain loop over the same readings.
//!
//! `…/slice/1024` and `…/scalar/1024` are the plan; `…/plain/1024` is the formula written out by hand (Newton's method
//! where the formula runs the other way), `…/scale/1024` the pass y = a x + b. Every result is checked against the hand-written
//! one before it is timed. At the end stands a table of times per reading and their ratios to the scale pass.
#![allow(missing_docs, reason = "criterion's macros make undocumented functions")]
#![allow(unsafe_code, reason = "the scale pass is compiled for AVX2 where the processor has it, as the plan is")]
#![allow(clippy::disallowed_methods, reason = "the plain loops use the platform's mathematics")]

mod plain;

use std::hint::black_box;
use std::time::{Duration, Instant};

use criterion::{Criterion, Throughput, criterion_group};
use ohmwright::chain::{
    Chain, Columns, Element, Inputs, LeadWarmth, Network, Plan, Reading, SelfHeating, Signal, Supply, Temperature, Word,
};
use ohmwright::metal::{self, COPPER_GOST_6651_2009, NICKEL_DIN_43760};
use ohmwright::platinum::IEC_60751;
use ohmwright::platinum::its90::Deviation;
use ohmwright::signal::{Arm, Bridge, COPPER_PER_KELVIN, Conductor, Divider, Driven, Each, Leads, Pair, Side, Wires};
use ohmwright::strain::{Certificate, Gauge, ThermalOutput, Transducer, Zero};
use ohmwright::thermistor::{self, Beta, Law, LogarithmOfRatio, ReciprocalOfTemperature, SteinhartHart};
use ohmwright::thermocouple::Thermocouple;

const FACTOR: f64 = 2.08;
const LEAD: f64 = 0.35;
const POISSON: f64 = 0.285;
const LOAD: f64 = 20e3;
const ARM: f64 = 350.0;
const PACKAGE: [f64; 7] = [-24.0, 1.90, -0.0400, 2.50e-4, 0.0, 0.0, 0.0];
const ZERO_CELSIUS: f64 = 21.0;
const R25: f64 = 10e3;
const BETA: f64 = 3950.0;
/// a, b, c of a 10 kΩ thermistor, invented but of the usual size.
const STEINHART_HART: [f64; 3] = [1.129e-3, 2.341e-4, 8.775e-8];
const RANGE: [f64; 2] = [-50.0, 160.0];

/// Output in mV/V of a load in kN, invented.
const CERTIFICATE: [f64; 3] = [1e-3, 0.04, 1e-6];

/// A plan, its readings with what comes with them, and the same by hand: reading, supply, temperature to result.
struct Case {
    name: &'static str,
    plan: Plan,
    readings: Vec<f64>,
    supplies: Vec<f64>,
    celsius: Vec<f64>,
    /// Half of each temperature, for arms of their own.
    half: Vec<f64>,
    plain: fn(f64, f64, f64) -> f64,
    /// How far the two may be apart, in the unit of the result.
    tolerance: f64,
}

/// Numbers of a data table: the column of this name, empty cells left out.
fn column(table: &str, name: &str) -> Vec<f64> {
    let mut lines = table.lines().filter(|l| !l.starts_with('#'));
    let index = lines.next().and_then(|l| l.split(',').position(|c| c == name)).expect("the column is there");
    lines.filter_map(|l| l.split(',').nth(index).and_then(|c| c.parse().ok())).collect()
}

/// So many values between two, in an order that no branch predictor learns but that is always the same.
fn scattered(low: f64, high: f64, rows: usize) -> Vec<f64> {
    let golden = 0.618_033_988_749_894_9;
    (0..rows).map(|i| low + (high - low) * (i as f64 * golden).fract()).collect()
}

fn around<T: Copy>(values: &[T], rows: usize) -> Vec<T> {
    // a stride that shares no factor with the length visits every value
    (0..rows).filter_map(|i| values.get(i * 31 % values.len()).copied()).collect()
}

fn horner(x: f64, p: &[f64]) -> f64 {
    p.iter().rev().fold(0.0, |sum, c| sum * x + c)
}

/// Newton's method on f(x) = y, from a start, until a step is below `last`: the next would be below rounding.
fn newton(y: f64, mut x: f64, last: f64, f: impl Fn(f64) -> (f64, f64)) -> f64 {
    for _ in 0..50 {
        let (value, slope) = f(x);
        let step = (value - y) / slope;
        x -= step;
        if step.abs() <= last {
            break;
        }
    }
    x
}

fn quarter(y: f64, _: f64, _: f64) -> f64 {
    // y = x/(4 + 2 x)
    4.0 * y / (1.0 - 2.0 * y) / FACTOR * 1e6
}

fn thermal(t: f64) -> f64 {
    2.0 * (horner(t, &PACKAGE) - horner(ZERO_CELSIUS, &PACKAGE)) * 1e-6
}

fn quarter_thermal(y: f64, _: f64, t: f64) -> f64 {
    (4.0 * y / (1.0 - 2.0 * y) - thermal(t)) / (FACTOR * (1.0 + 1e-4 * (t - 24.0))) * 1e6
}

fn quarter_supply(volts: f64, supply: f64, t: f64) -> f64 {
    quarter(volts / supply, supply, t)
}

fn half_poisson(y: f64, _: f64, _: f64) -> f64 {
    // y = (1 + x)/(2 + (1 − ν) x) − ½
    let x = newton(y, 4.0 * y / (1.0 + POISSON), 1e-12, |x| {
        let (up, down) = (1.0 + x, 2.0 + (1.0 - POISSON) * x);
        (up / down - 0.5, (down - up * (1.0 - POISSON)) / (down * down))
    });
    x / FACTOR * 1e6
}

fn half_opposite(y: f64, _: f64, _: f64) -> f64 {
    // y = (1 + x)/(2 + x) − 1/(2 + x) = x/(2 + x)
    2.0 * y / (1.0 - y) / FACTOR * 1e6
}

fn full_poisson(y: f64, _: f64, _: f64) -> f64 {
    // y = (1 + ν) x/(2 + (1 − ν) x)
    2.0 * y / (1.0 + POISSON - (1.0 - POISSON) * y) / FACTOR * 1e6
}

fn full_loaded(y: f64, _: f64, _: f64) -> f64 {
    // source voltage and resistance of the bridge (Thévenin), across the load; both sides are alike
    let x = newton(y, 2.0 * y / (1.0 + POISSON), 1e-12, |x| {
        let (a, b) = (1.0 + x, 1.0 - POISSON * x);
        let (sum, dsum) = (a + b, 1.0 - POISSON);
        let (open, dopen) = ((a - b) / sum, ((1.0 + POISSON) * sum - (a - b) * dsum) / (sum * sum));
        let inner = 2.0 * ARM * a * b / sum;
        let dinner = 2.0 * ARM * ((b - POISSON * a) * sum - a * b * dsum) / (sum * sum);
        let share = LOAD / (LOAD + inner);
        (open * share, dopen * share - open * share * dinner / (LOAD + inner))
    });
    x / FACTOR * 1e6
}

fn dummy_thermal(y: f64, _: f64, t: f64) -> f64 {
    // y = (1 + F e + τ)/(2 + F e + 2 τ) − ½
    let (k, tau) = (y + 0.5, thermal(t));
    let x = (k * (2.0 + 2.0 * tau) - 1.0 - tau) / (1.0 - k);
    x / (FACTOR * (1.0 + 1e-4 * (t - 24.0))) * 1e6
}

fn warm_leads(y: f64, _: f64, t: f64) -> f64 {
    // two leads in the gauge's arm: y = (1 + x + r)/(2 + x + r) − ½, in gauge resistances
    let leads = 2.0 * LEAD * (1.0 + COPPER_PER_KELVIN * (t - 20.0)) / ARM;
    (4.0 * y / (1.0 - 2.0 * y) - leads) / FACTOR * 1e6
}

fn warm_full(y: f64, _: f64, t: f64) -> f64 {
    // supply and signal leads r each, in a bridge of four arms ±x: source 1/(1 + 2 r/R) and the rest as in `full_loaded`; with
    // x = F e in every arm the resistance from supply to supply stays R, that of the output R (1 − x²)
    let r = LEAD * (1.0 + COPPER_PER_KELVIN * (t - 20.0));
    let x = newton(y, y, 1e-12, |x| {
        // both half bridges carry the load's current alike: by symmetry the output's source is x/(1 + 2 r/R), its
        // resistance R (1 − x²) + 2 r plus what the supply leads add, x² (2 r ∥ R)
        let add = 2.0 * r * ARM / (2.0 * r + ARM);
        let (inner, dinner) = (ARM * (1.0 - x * x) + 2.0 * r + add * x * x, 2.0 * x * (add - ARM));
        let (open, share) = (1.0 / (1.0 + 2.0 * r / ARM), LOAD / (LOAD + inner));
        (x * open * share, open * share * (1.0 - x * dinner / (LOAD + inner)))
    });
    x / FACTOR * 1e6
}

fn own_arms(y: f64, _: f64, t: f64) -> f64 {
    // the gauge in arm 1 at t, the dummy in arm 2 at half of that: (1 + F e + τ₁)/(2 + F e + τ₁ + τ₂) − ½
    let (k, tau, other) = (y + 0.5, thermal(t), thermal(0.5 * t));
    let x = (k * (2.0 + tau + other) - 1.0 - tau) / (1.0 - k);
    x / (FACTOR * (1.0 + 1e-4 * (t - 24.0))) * 1e6
}

fn certificate(y: f64, _: f64, _: f64) -> f64 {
    newton(1e3 * y, 25e3 * y, 1e-12, |q| (horner(q, &CERTIFICATE), CERTIFICATE[1] + 2.0 * CERTIFICATE[2] * q))
}

fn platinum(ohms: f64, _: f64, _: f64) -> f64 {
    let k = &IEC_60751;
    let ratio = ohms / k.r0_ohms;
    newton(ratio, (ratio - 1.0) / k.a, 1e-6, |t| {
        let c = if t < 0.0 { k.c } else { 0.0 };
        let value = 1.0 + t * (k.a + t * (k.b + t * c * (t - 100.0)));
        (value, k.a + t * (2.0 * k.b + t * c * (4.0 * t - 300.0)))
    })
}

fn beta(ohms: f64, _: f64, _: f64) -> f64 {
    1.0 / (1.0 / 298.15 + (ohms / R25).ln() / BETA) - 273.15
}

fn steinhart_hart(ohms: f64, _: f64, _: f64) -> f64 {
    let [a, b, c] = STEINHART_HART;
    let l = ohms.ln();
    1.0 / (a + b * l + c * l * l * l) - 273.15
}

fn warm(chain: Chain) -> Chain {
    let mut chain = Chain {
        temperature: Temperature::Column,
        ..chain.zeroed(Zero { celsius: Some(ZERO_CELSIUS), ..Zero::default() })
    };
    if let Element::Gauge { gauge, .. } = &mut chain.element {
        gauge.slope = 1e-4;
        gauge.thermal_output = package();
    }
    chain
}

const fn package() -> Option<ThermalOutput> {
    Some(ThermalOutput { coefficients: PACKAGE, fahrenheit: false, gauge_factor: 2.0, range_celsius: [-50.0, 200.0] })
}

/// The cases with so many rows each: strains within ±3000 µε, temperatures of −10 °C to 60 °C, and the resistances of the
/// tables under data/.
fn cases(rows: usize) -> Vec<Case> {
    let along = Arm::Active { factor: 1.0, driven: Driven::Along };
    let across = Arm::Active { factor: -1.0, driven: Driven::Across };
    let strain = |arms, load| {
        let bridge = Bridge { poisson: POISSON, input_resistance: load, ..Bridge::equal(ARM, arms) };
        Chain::strain(bridge, Gauge::new(FACTOR))
    };
    let one = strain([along, Arm::Fixed, Arm::Fixed, Arm::Fixed], None);
    let leads = Leads { wires: Wires::Two, each: Each::Same(Conductor::Ohms(LEAD)) };
    let two_wire = Chain::strain(Bridge { leads: Some(leads), ..Bridge::one_gauge(ARM) }, Gauge::new(FACTOR));
    let warmth =
        LeadWarmth { coefficient: COPPER_PER_KELVIN, reference_celsius: 20.0, temperature: Temperature::Column };
    let (strains, celsius) = (scattered(-3000.0, 3000.0, rows), scattered(-10.0, 60.0, rows + 7).split_off(7));
    let supplies = scattered(2.49, 2.51, rows + 3).split_off(3);
    let bridge = |name, chain: Chain, plain| {
        let plan = chain.plan().expect("a good chain");
        let readings = strains.iter().zip(&supplies).zip(&celsius).map(|((e, s), t)| {
            let arm_celsius = [*t, 0.5 * *t, 0.0, 0.0];
            plan.forward(*e, Inputs { reading: 0.0, supply: *s, celsius: *t, lead_celsius: *t, arm_celsius })
                .expect("a strain in range")
        });
        // 5e-16 V/V referred through the sensitivity, for both
        let (readings, tolerance) = (readings.collect(), 2e-8);
        let half = celsius.iter().map(|t| 0.5 * t).collect();
        Case { name, plan, readings, supplies: supplies.clone(), celsius: celsius.clone(), half, plain, tolerance }
    };
    let against = Arm::Active { factor: -1.0, driven: Driven::Along };
    let four = Bridge {
        supply_leads: Pair::Same(LEAD),
        signal_leads: Pair::Same(LEAD),
        input_resistance: Some(LOAD),
        ..Bridge::equal(ARM, [along, against, along, against])
    };
    let full_warm = Chain { lead_warmth: Some(warmth), ..Chain::strain(four, Gauge::new(FACTOR)) };
    let mut own = warm(strain([along, Arm::Dummy, Arm::Fixed, Arm::Fixed], None));
    own.arm_temperatures = [Temperature::Column, Temperature::Column, Temperature::None, Temperature::None];
    let arm_celsius = [Some(ZERO_CELSIUS), Some(ZERO_CELSIUS), None, None];
    let own = own.zeroed(Zero { arm_celsius, ..Zero::default() });
    let [a0, a1, a2] = CERTIFICATE;
    let law = Transducer::Certificate(Certificate {
        coefficients: [a0, a1, a2, 0.0, 0.0, 0.0, 0.0],
        gives_output: true,
        output_exponent: -3,
        load_scale: 1.0,
        range: [-60.0, 60.0],
    });
    let bare = Network::Bridge(Bridge::equal(ARM, [along, against, along, against]));
    let transducer = {
        let plan = Chain::new(bare, Element::Transducer { law, zero: Zero::default(), limit: 60.0 }).plan();
        let plan = plan.expect("a good chain");
        let loads = scattered(-59.0, 59.0, rows);
        let readings = loads.iter().map(|q| plan.forward(*q, Inputs::default()).expect("a load in range")).collect();
        let (supplies, celsius, half) = (Vec::new(), Vec::new(), Vec::new());
        Case {
            name: "transducer/certificate",
            plan,
            readings,
            supplies,
            celsius,
            half,
            plain: certificate,
            tolerance: 1e-9,
        }
    };
    let thermometer = |name, element, ohms: Vec<f64>, plain| Case {
        name,
        plan: Chain::new(Network::Resistance { leads: None }, element).plan().expect("a good chain"),
        readings: around(&ohms, rows),
        supplies: Vec::new(),
        celsius: Vec::new(),
        half: Vec::new(),
        plain,
        tolerance: 1e-9,
    };
    let ten = include_str!("../data/temperature/pt100_iec60751_table_10C.csv");
    let below = include_str!("../data/temperature/pt100_iec60751_table_1C_neg.csv");
    let ohms = [column(ten, "accepted_ohm"), column(below, "R_ohm")].concat();
    // the tables print 18.52 Ω for the end of the curve at 18.5201 Ω
    let ohms: Vec<f64> = ohms.into_iter().filter(|r| *r > 18.53 && *r < 390.48).collect();
    let above: Vec<f64> = ohms.iter().copied().filter(|r| *r >= 100.0).collect();
    let ratios = column(include_str!("../data/temperature/thermistor_material1_table.csv"), "ratio");
    let thermistor: Vec<f64> = ratios.into_iter().map(|r| r * R25).collect();
    let [a, b, c] = STEINHART_HART;
    vec![
        bridge("bridge/quarter", one, quarter),
        bridge(
            "bridge/quarter_supply",
            Chain {
                reading: Reading { signal: Signal::Volts, exponent: 0 },
                supply: Supply::Column { exponent: 0 },
                ..one
            },
            quarter_supply,
        ),
        bridge("bridge/quarter_thermal", warm(one), quarter_thermal),
        bridge("bridge/half_poisson", strain([along, across, Arm::Fixed, Arm::Fixed], None), half_poisson),
        bridge("bridge/half_opposite", strain([along, Arm::Fixed, along, Arm::Fixed], None), half_opposite),
        bridge("bridge/full_poisson", strain([along, across, along, across], None), full_poisson),
        bridge("bridge/full_loaded", strain([along, across, along, across], Some(LOAD)), full_loaded),
        bridge("bridge/dummy_thermal", warm(strain([along, Arm::Dummy, Arm::Fixed, Arm::Fixed], None)), dummy_thermal),
        bridge("bridge/quarter_warm_leads", Chain { lead_warmth: Some(warmth), ..two_wire }, warm_leads),
        bridge("bridge/full_warm_leads", full_warm, warm_full),
        bridge("bridge/dummy_own_arms", own, own_arms),
        transducer,
        thermometer("platinum/celsius_from_ohms", Element::Platinum(IEC_60751), ohms, platinum),
        thermometer("platinum/celsius_from_ohms_above_zero", Element::Platinum(IEC_60751), above, platinum),
        thermometer(
            "thermistor/celsius_from_ohms_beta",
            Element::Thermistor(Law::Beta(Beta { r25_ohms: R25, beta_kelvin: BETA, range_celsius: RANGE })),
            thermistor.clone(),
            beta,
        ),
        thermometer(
            "thermistor/celsius_from_ohms_steinhart_hart",
            Element::Thermistor(Law::SteinhartHart(SteinhartHart { a, b, c, range_celsius: RANGE })),
            thermistor.clone(),
            steinhart_hart,
        ),
        thermometer(
            "thermistor/celsius_from_ohms_ratio_terms",
            Element::Thermistor(Law::LogarithmOfRatio(LogarithmOfRatio {
                reference_ohms: R25,
                a: plain::RATIO_TERMS[0],
                b: plain::RATIO_TERMS[1],
                c: plain::RATIO_TERMS[2],
                d: plain::RATIO_TERMS[3],
                range_celsius: [-45.0, 155.0],
            })),
            thermistor.clone(),
            plain::ratio_terms,
        ),
        thermometer(
            "thermistor/celsius_from_ohms_reciprocal_terms",
            Element::Thermistor(Law::ReciprocalOfTemperature(ReciprocalOfTemperature {
                reference_ohms: R25,
                a: plain::RECIPROCAL_TERMS[0],
                b: plain::RECIPROCAL_TERMS[1],
                c: plain::RECIPROCAL_TERMS[2],
                d: plain::RECIPROCAL_TERMS[3],
                range_celsius: [-45.0, 154.0],
            })),
            thermistor,
            plain::reciprocal_terms,
        ),
        Case {
            // the plain lines are no smooth curve
            tolerance: 3.0,
            ..thermometer(
                "thermistor/celsius_from_ohms_points",
                Element::Thermistor(Law::Points(thermistor::Points::new(&plain::POINTS).expect("points"))),
                scattered(350.0, 3e5, 256),
                plain::points,
            )
        },
        thermometer(
            "nickel/celsius_from_ohms",
            Element::Metal(metal::Law::Nickel(NICKEL_DIN_43760)),
            scattered(70.0, 288.0, 256),
            plain::nickel,
        ),
        thermometer(
            "copper/celsius_from_ohms",
            Element::Metal(metal::Law::Copper(COPPER_GOST_6651_2009)),
            scattered(21.0, 185.0, 256),
            plain::copper,
        ),
        Case {
            // beside Newton's stop
            tolerance: 1e-7,
            ..thermometer(
                "its90/celsius_from_ratio",
                Element::Standard {
                    triple_point_ohms: 1.0,
                    deviation: Deviation::ToSilver { a: 0.0, b: 0.0, c: 0.0, d: 0.0, w_aluminium: 3.376 },
                },
                scattered(1.001, 4.28, 256),
                plain::its90,
            )
        },
        {
            let kind = Thermocouple::K;
            let chain = Chain {
                reading: Reading { signal: Signal::Volts, exponent: -3 },
                temperature: Temperature::Column,
                ..Chain::new(Network::Emf, Element::Thermocouple(kind))
            };
            let plan = chain.plan().expect("a good chain");
            let celsius = scattered(15.0, 35.0, rows);
            let hot = scattered(-150.0, 1_300.0, rows);
            let pairs = hot.iter().zip(&celsius);
            let readings = pairs.map(|(t, j)| kind.millivolts_from_celsius_and_reference(*t, *j).expect("in range"));
            Case {
                name: "thermocouple/type_k_with_junction",
                plan,
                readings: readings.collect(),
                supplies: Vec::new(),
                celsius,
                half: Vec::new(),
                plain: plain::type_k,
                tolerance: 1e-6,
            }
        },
        {
            let divider = Divider { fixed: 3300.0, sensor: Side::Low, input_resistance: None };
            let chain = Chain {
                reading: Reading { signal: Signal::Volts, exponent: 0 },
                supply: Supply::Fixed(15.0),
                self_heating: Some(SelfHeating { kelvin_per_watt: 400.0, amperes: None }),
                ..Chain::new(Network::Divider { divider, leads: None }, Element::Platinum(IEC_60751))
            };
            Case {
                name: "platinum/divider_with_self_heating",
                plan: chain.plan().expect("a good chain"),
                readings: scattered(0.2, 1.4, rows),
                supplies: Vec::new(),
                celsius: Vec::new(),
                half: Vec::new(),
                plain: plain::heated,
                tolerance: 1e-9,
            }
        },
    ]
}

impl Case {
    fn columns(&self) -> Columns<'_> {
        Columns {
            readings: &self.readings,
            supplies: &self.supplies,
            celsius: &self.celsius,
            lead_celsius: &self.celsius,
            arm_celsius: [&self.celsius, &self.half, &[], &[]],
        }
    }

    fn inputs(&self, i: usize) -> Inputs {
        let at = |column: &[f64]| column.get(i).copied().unwrap_or(0.0);
        Inputs {
            reading: self.readings[i],
            supply: at(&self.supplies),
            celsius: at(&self.celsius),
            lead_celsius: at(&self.celsius),
            arm_celsius: [at(&self.celsius), at(&self.half), 0.0, 0.0],
        }
    }

    fn slice(&self, out: &mut [f64]) {
        let batch = self.plan.slice(&self.columns(), out, None).expect("equal lengths");
        assert_eq!(batch.invalid, 0, "{}", self.name);
    }

    fn slice_words(&self, out: &mut [f64], words: &mut [Word]) {
        let batch = self.plan.slice(&self.columns(), out, Some(words)).expect("equal lengths");
        assert_eq!(batch.invalid, 0, "{}", self.name);
    }

    fn scalar(&self, out: &mut [f64]) {
        for (i, v) in out.iter_mut().enumerate() {
            *v = self.plan.one(self.inputs(i)).value;
        }
    }

    fn plain(&self, out: &mut [f64]) {
        for (i, v) in out.iter_mut().enumerate() {
            let Inputs { reading, supply, celsius, .. } = self.inputs(i);
            *v = (self.plain)(reading, supply, celsius);
        }
    }

    fn check(&self) {
        let rows = self.readings.len();
        let (mut slice, mut scalar, mut plain) = (vec![0.0; rows], vec![0.0; rows], vec![0.0; rows]);
        self.slice(&mut slice);
        self.scalar(&mut scalar);
        self.plain(&mut plain);
        let bits = |v: &[f64]| v.iter().map(|x| x.to_bits()).collect::<Vec<_>>();
        assert!(bits(&slice) == bits(&scalar), "{}: slice and scalar", self.name);
        let worst = slice.iter().zip(&plain).map(|(a, b)| (a - b).abs()).fold(0.0, f64::max);
        assert!(worst <= self.tolerance, "{}: {worst:e} from the plain formula", self.name);
    }
}

/// y = a x + b, compiled like the slice loop of a plan: for AVX2 where the processor has it.
fn scale(x: &[f64], y: &mut [f64]) {
    #[cfg(target_arch = "x86_64")]
    if std::is_x86_feature_detected!("avx2") {
        // SAFETY: the processor has AVX2, just asked.
        unsafe { scale_avx2(x, y) };
        return;
    }
    scale_baseline(x, y);
}

#[inline(always)]
fn scale_baseline(x: &[f64], y: &mut [f64]) {
    let (a, b) = black_box((480.77, -0.25));
    for (y, x) in y.iter_mut().zip(x) {
        *y = a * x + b;
    }
}

#[cfg(target_arch = "x86_64")]
#[target_feature(enable = "avx2")]
fn scale_avx2(x: &[f64], y: &mut [f64]) {
    scale_baseline(x, y);
}

fn laws(c: &mut Criterion) {
    const ROWS: usize = 1024;
    for case in cases(ROWS) {
        case.check();
        let mut out = vec![0.0; ROWS];
        let mut words = vec![Word::Good; ROWS];
        let mut group = c.benchmark_group(case.name);
        group.throughput(Throughput::Elements(ROWS as u64));
        group.bench_function("slice/1024", |b| b.iter(|| black_box(&case).slice(black_box(&mut out))));
        group.bench_function("slice_with_words/1024", |b| {
            b.iter(|| black_box(&case).slice_words(black_box(&mut out), black_box(&mut words)));
        });
        group.bench_function("scalar/1024", |b| b.iter(|| black_box(&case).scalar(black_box(&mut out))));
        group.bench_function("plain/1024", |b| b.iter(|| black_box(&case).plain(black_box(&mut out))));
        group.bench_function("scale/1024", |b| b.iter(|| scale(black_box(&case.readings), black_box(&mut out))));
        group.finish();
    }
}

/// Shortest time of one pass over `rows` readings, per reading, in ns.
fn shortest(rows: usize, mut pass: impl FnMut()) -> f64 {
    let passes = (16_384 / rows).max(1);
    let mut best = Duration::MAX;
    for _ in 0..if rows > 100_000 { 12 } else { 400 } {
        let start = Instant::now();
        for _ in 0..passes {
            pass();
        }
        best = best.min(start.elapsed());
    }
    best.as_secs_f64() * 1e9 / (rows * passes) as f64
}

/// Times per reading, in the cache and far out of it, and how many scale passes that is.
fn table() {
    const ROWS: [usize; 2] = [1024, 1 << 20];
    println!("\n{:<46}{:>9}{:>9}{:>9}{:>9}", "ns per reading (x scale pass)", "scale", "slice", "scalar", "plain");
    for rows in ROWS {
        println!("{rows} readings");
        for case in cases(rows) {
            let mut out = vec![0.0; rows];
            let scale = shortest(rows, || scale(black_box(&case.readings), black_box(&mut out)));
            let slice = shortest(rows, || black_box(&case).slice(black_box(&mut out)));
            let scalar = shortest(rows, || black_box(&case).scalar(black_box(&mut out)));
            let plain = shortest(rows, || black_box(&case).plain(black_box(&mut out)));
            println!(
                "  {:<44}{scale:>9.3}{slice:>9.3}{scalar:>9.2}{plain:>9.2}   slice {:.1} x scale, {:.2} x plain",
                case.name,
                slice / scale,
                slice / plain
            );
        }
    }
}

criterion_group!(benches, laws);

fn main() {
    // `cargo test` and `cargo bench -- --test` run every bench once: the checks, no figures
    let checking = std::env::args().any(|a| a == "--test");
    // OHMWRIGHT_TABLE alone leaves criterion out
    if std::env::var_os("OHMWRIGHT_TABLE").is_none() {
        benches();
        Criterion::default().configure_from_args().final_summary();
    }
    if !checking {
        table();
    }
}

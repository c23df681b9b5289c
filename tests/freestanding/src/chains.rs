//! One chain for each kind of front, law and tail that a plan can have, and for each kind of network.

use ohmwright::chain::{
    Chain, Element, LeadWarmth, Limit, Network, Output, Reading, STRAIN_LIMIT, SelfHeating, Signal, Supply,
    Temperature, Word,
};
use ohmwright::metal::{self, COPPER_GOST_6651_2009, NICKEL_DIN_43760};
use ohmwright::platinum::its90::Deviation;
use ohmwright::platinum::{AlphaDeltaBeta, IEC_60751};
use ohmwright::signal::{
    Amplifier, Arm, Around, Bridge, COPPER_OHM_METRES, COPPER_PER_KELVIN, Coding, Conductor, Converter, Difference,
    Divider, Driven, Each, FullScale, Leads, Pair, Place, Reference, Shunt, Side, Wires,
};
use ohmwright::strain::{
    Certificate, Expansion, Gauge, Points, ThermalOutput, ThermalPoints, Transducer, Transverse, Zero, ZeroMeaning,
    ZeroReading,
};
use ohmwright::thermistor::{self, Beta, Law, LogarithmOfRatio, ReciprocalOfTemperature, SteinhartHart};
use ohmwright::thermocouple::Thermocouple;

const fn arm(factor: f64, driven: Driven) -> Arm {
    Arm::Active { factor, driven }
}

fn gauge(chain_of: Bridge, factor: f64) -> Chain {
    Chain::strain(chain_of, Gauge::new(factor))
}

/// The package polynomial, expansion and slope of an invented gauge, wanted at every reading.
fn warm(mut chain: Chain) -> Chain {
    if let Element::Gauge { gauge, zero, .. } = &mut chain.element {
        gauge.slope = 1e-4;
        gauge.thermal_output = Some(ThermalOutput {
            coefficients: [-24.0, 1.90, -0.0400, 2.50e-4, 0.0, 0.0, 0.0],
            fahrenheit: false,
            gauge_factor: 2.0,
            range_celsius: [-50.0, 200.0],
        });
        gauge.expansion = Some(Expansion { specimen: 11.7e-6, data: 12.1e-6 });
        zero.celsius = Some(21.0);
    }
    Chain { temperature: Temperature::Column, ..chain }
}

fn zeroed(chain: Chain, meaning: ZeroMeaning, at: ZeroReading) -> Chain {
    let celsius = if let Element::Gauge { zero, .. } = chain.element { zero.celsius } else { None };
    chain.zeroed(Zero { reading: Some(at), meaning, celsius, ..Zero::default() })
}

fn transducer(law: Transducer) -> Chain {
    let arms = [arm(1.0, Driven::Along), arm(-1.0, Driven::Along), arm(1.0, Driven::Along), arm(-1.0, Driven::Along)];
    Chain::new(
        Network::Bridge(Bridge::equal(350.0, arms)),
        Element::Transducer { law, zero: Zero::default(), limit: 1000.0 },
    )
}

/// A certificate of 2 mV/V at 50, slightly bent.
fn certificate(gives_output: bool) -> Transducer {
    let coefficients = if gives_output { [1e-3, 0.04, 1e-6] } else { [-0.025, 25.0, -1e-2] };
    let [a, b, c] = coefficients;
    Transducer::Certificate(Certificate {
        coefficients: [a, b, c, 0.0, 0.0, 0.0, 0.0],
        gives_output,
        output_exponent: -3,
        load_scale: 1.0,
        range: [-500.0, 500.0],
    })
}

/// Thermal output as points.
fn with_points(mut chain: Chain) -> Chain {
    if let Element::Gauge { gauge, zero, .. } = &mut chain.element {
        gauge.thermal_points = Points::new(&[[-20.0, -70.0], [20.0, 0.0], [60.0, -10.0], [120.0, -150.0]])
            .ok()
            .map(|points| ThermalPoints { points, gauge_factor: 2.0 });
        zero.celsius = Some(21.0);
    }
    Chain { temperature: Temperature::Column, ..chain }
}

/// Returns the chain of this number; `None` past the last.
fn standard(deviation: Deviation) -> Chain {
    Chain::new(Network::Resistance { leads: None }, Element::Standard { triple_point_ohms: 25.4781, deviation })
}

pub(crate) fn of(kind: u32) -> Option<Chain> {
    let along = arm(1.0, Driven::Along);
    let against = arm(-1.0, Driven::Along);
    let across = arm(-1.0, Driven::Across);
    let one = Bridge::one_gauge(350.0);
    let poisson = Bridge { poisson: 0.285, ..Bridge::equal(350.0, [along, across, Arm::Fixed, Arm::Fixed]) };
    let full = Bridge { poisson: 0.285, ..Bridge::equal(350.0, [along, across, along, across]) };
    let loaded = Bridge {
        supply_leads: Pair::Same(2.4),
        signal_leads: Pair::Own([2.4, 2.5]),
        input_resistance: Some(220e3),
        ..full
    };
    let bending = Bridge::equal(350.0, [along, against, Arm::Fixed, Arm::Fixed]);
    let dummies = Bridge::equal(700.0, [along, Arm::Dummy, along, Arm::Dummy]);
    let run = Conductor::Run { metres: 12.4, square_millimetres: 0.25, ohm_metres: COPPER_OHM_METRES };
    let pt = Element::Platinum(IEC_60751);
    let beta =
        Element::Thermistor(Law::Beta(Beta { r25_ohms: 10e3, beta_kelvin: 3610.0, range_celsius: [-40.0, 125.0] }));
    let steinhart = Element::Thermistor(Law::SteinhartHart(SteinhartHart {
        a: 1.129_241e-3,
        b: 2.341_077e-4,
        c: 8.775_468e-8,
        range_celsius: [-40.0, 125.0],
    }));
    let two_wire = Some(Leads { wires: Wires::Two, each: Each::Same(run) });
    let warmth =
        Some(LeadWarmth { coefficient: COPPER_PER_KELVIN, reference_celsius: 20.0, temperature: Temperature::Column });
    let four = LogarithmOfRatio {
        reference_ohms: 10e3,
        a: -14.6337,
        b: 4791.842,
        c: -115_334.0,
        d: -3.730_535e6,
        range_celsius: [-50.0, 150.0],
    };
    let logarithm = Element::Thermistor(Law::LogarithmOfRatio(four));
    let reciprocal = Element::Thermistor(Law::ReciprocalOfTemperature(ReciprocalOfTemperature {
        reference_ohms: 10e3,
        a: 3.354_016e-3,
        b: 2.569_85e-4,
        c: 2.620_131e-6,
        d: 6.383_091e-8,
        range_celsius: [-50.0, 150.0],
    }));
    let heated = Some(SelfHeating { kelvin_per_watt: 41.0, amperes: None });
    Some(match kind {
        // Moebius fronts
        0 => gauge(one, 2.08),
        1 => zeroed(gauge(one, 2.08), ZeroMeaning::Strain, ZeroReading::AsRecorded(1e-4)),
        2 => zeroed(gauge(one, 2.08), ZeroMeaning::Resistance, ZeroReading::AsRecorded(1e-4)),
        3 => zeroed(gauge(one, 2.08), ZeroMeaning::Completion, ZeroReading::AsRecorded(1e-4)),
        4 => warm(gauge(Bridge { leads: Some(Leads { wires: Wires::Three, each: Each::Same(run) }), ..one }, 2.08)),
        5 => gauge(
            Bridge { leads: Some(Leads { wires: Wires::Two, each: Each::Same(run) }), balanced: true, ..one },
            2.08,
        ),
        // quadratic
        6 => gauge(poisson, 2.08),
        7 => Chain {
            supply: Supply::Column { exponent: 0 },
            reading: Reading { signal: Signal::Volts, exponent: -3 },
            ..zeroed(gauge(poisson, 2.08), ZeroMeaning::Strain, ZeroReading::Ratio(1e-4))
        },
        // quartic
        8 => gauge(loaded, 2.04),
        9 => gauge(Bridge { sensed: true, ..loaded }, 2.04),
        10 => Chain {
            reading: Reading { signal: Signal::Count, exponent: 0 },
            converter: Some(Converter { bits: 24, full_scale: FullScale::Volts(2.5), coding: Coding::Signed }),
            amplifier: Amplifier::Difference {
                circuit: Difference {
                    input: [1.5e3, 1.5e3],
                    feedback: [330e3, 330e3],
                    open_loop_gain: Some(1e5),
                    reference: Reference::Centre,
                },
                offset: 1e-3,
            },
            supply: Supply::Fixed(2.5),
            ..gauge(full, 2.11)
        },
        // arms
        11 => warm(gauge(dummies, 2.09)),
        12 => warm(gauge(bending, 2.07)),
        // thermometers
        13 => Chain::new(Network::Resistance { leads: None }, pt),
        14 => Chain {
            output: Output::Fahrenheit,
            low_limit: Some(Limit { at: 20.0, word: Word::Short }),
            high_limit: Some(Limit { at: 1e4, word: Word::Open }),
            ..Chain::new(
                Network::Resistance {
                    leads: Some(Leads {
                        wires: Wires::Three,
                        each: Each::Own([Conductor::Ohms(0.43), Conductor::Ohms(0.44), run]),
                    }),
                },
                pt,
            )
        },
        15 => Chain::new(Network::Bridge(Bridge { resistances: [100.0; 4], ..one }), pt),
        16 => Chain {
            supply: Supply::Column { exponent: -3 },
            reading: Reading { signal: Signal::Volts, exponent: 0 },
            ..Chain::new(
                Network::Divider {
                    divider: Divider { fixed: 12e3, sensor: Side::Low, input_resistance: Some(1e6) },
                    leads: None,
                },
                beta,
            )
        },
        17 => Chain {
            output: Output::Kelvin,
            extrapolate: true,
            ..Chain::new(
                Network::Divider {
                    divider: Divider { fixed: 12e3, sensor: Side::High, input_resistance: None },
                    leads: Some(Leads { wires: Wires::Four, each: Each::Same(run) }),
                },
                steinhart,
            )
        },
        18 => Chain::new(Network::Direct, Element::Direct { scale: 2.0, offset: -1.0 }),
        // an amplifier block with an offset and a converter that is ratiometric
        19 => Chain {
            reading: Reading { signal: Signal::Count, exponent: 0 },
            converter: Some(Converter { bits: 16, full_scale: FullScale::Supply, coding: Coding::Offset }),
            amplifier: Amplifier::Gain { gain: 250.0, offset: 0.0 },
            output: Output::ShearStrain { exponent: 6 },
            ..gauge(one, 2.08)
        },
        // transducers: a rated output, and certificates both ways round
        20 => transducer(Transducer::Rated { output: 2e-3, capacity: 50.0 }),
        21 => transducer(certificate(true)),
        22 => transducer(certificate(false)),
        // leads and arms with temperatures of their own, thermal output as points, transverse sensitivity
        23 => Chain { lead_warmth: warmth, ..gauge(Bridge { leads: two_wire, ..one }, 2.08) },
        24 => Chain { lead_warmth: warmth, ..Chain::new(Network::Resistance { leads: two_wire }, pt) },
        25 => with_points(gauge(one, 2.08)),
        26 => with_points(gauge(dummies, 2.09)),
        27 => {
            let mut chain = warm(gauge(Bridge::equal(350.0, [along, Arm::Dummy, Arm::Fixed, Arm::Fixed]), 2.07));
            chain.arm_temperatures = [Temperature::None, Temperature::Column, Temperature::None, Temperature::None];
            let arm_celsius = [None, Some(20.0), None, None];
            chain.zeroed(Zero { celsius: Some(21.0), arm_celsius, ..Zero::default() })
        }
        28 => Chain { transverse: Some(Transverse { sensitivity: 0.004, strain_ratio: -0.3 }), ..gauge(bending, 2.04) },
        // opposite gauges that feel the temperature: second degree
        29 => warm(gauge(Bridge::equal(350.0, [along, Arm::Fixed, along, Arm::Fixed]), 2.07)),
        // leads that warm in second and fourth degree, points for arms of their own temperature, a certificate behind warm leads,
        // shunts
        30 => Chain {
            lead_warmth: warmth,
            ..gauge(
                Bridge { supply_leads: Pair::Run(run), ..Bridge::equal(350.0, [along, Arm::Fixed, along, Arm::Fixed]) },
                2.07,
            )
        },
        31 => Chain { lead_warmth: warmth, ..warm(gauge(Bridge { sensed: true, ..loaded }, 2.04)) },
        32 => {
            let mut chain = with_points(gauge(Bridge::equal(350.0, [along, Arm::Dummy, Arm::Fixed, Arm::Fixed]), 2.07));
            chain.arm_temperatures =
                [Temperature::Fixed(31.0), Temperature::Column, Temperature::None, Temperature::None];
            let arm_celsius = [None, Some(20.0), None, None];
            chain.zeroed(Zero { arm_celsius, ..Zero::default() })
        }
        33 => {
            let mut chain = Chain { lead_warmth: warmth, ..transducer(certificate(true)) };
            if let Network::Bridge(bridge) = &mut chain.network {
                bridge.supply_leads = Pair::Same(2.4);
            }
            chain
        }
        34 => gauge(Bridge { shunt: Some(Shunt { arm: 1, ohms: 150e3, place: Place::Gauge }), ..loaded }, 2.04),
        35 => gauge(Bridge { shunt: Some(Shunt { arm: 2, ohms: 150e3, place: Place::Instrument }), ..loaded }, 2.04),
        // thermometers by other laws, what stands beside them, and what warms them
        36 => Chain::new(Network::Resistance { leads: None }, Element::AlphaDeltaBeta(AlphaDeltaBeta::from(IEC_60751))),
        37 => standard(Deviation::ToSilver { a: -1.1e-4, b: -1.3e-5, c: 2.2e-6, d: 1.1e-6, w_aluminium: 3.375_72 }),
        38 => Chain::new(Network::Resistance { leads: two_wire }, Element::Metal(metal::Law::Nickel(NICKEL_DIN_43760))),
        39 => {
            Chain::new(Network::Resistance { leads: None }, Element::Metal(metal::Law::Copper(COPPER_GOST_6651_2009)))
        }
        40 => Chain {
            around: Around { parallel: Some(12e3), leakage: Some(5e6), series: Some(680.0) },
            lead_warmth: warmth,
            ..Chain::new(Network::Resistance { leads: two_wire }, logarithm)
        },
        41 => Chain::new(Network::Resistance { leads: None }, reciprocal),
        42 => Chain::new(
            Network::Resistance { leads: None },
            Element::Thermistor(Law::Points(
                thermistor::Points::new(&[[0.0, 32_650.0], [25.0, 10_000.0], [50.0, 3_602.0], [90.0, 915.0]]).ok()?,
            )),
        ),
        43 => Chain {
            temperature: Temperature::Column,
            ..Chain::new(Network::Emf, Element::Thermocouple(Thermocouple::N))
        },
        44 => Chain {
            temperature: Temperature::Fixed(23.4),
            ..Chain::new(Network::Emf, Element::Thermocouple(Thermocouple::K))
        },
        45 => Chain {
            supply: Supply::Column { exponent: 0 },
            reading: Reading { signal: Signal::Volts, exponent: 0 },
            self_heating: heated,
            ..Chain::new(
                Network::Divider {
                    divider: Divider { fixed: 12e3, sensor: Side::High, input_resistance: Some(1e6) },
                    leads: None,
                },
                logarithm,
            )
        },
        46 => Chain {
            supply: Supply::Column { exponent: 0 },
            reading: Reading { signal: Signal::Volts, exponent: -3 },
            self_heating: heated,
            ..Chain::new(Network::Bridge(Bridge { resistances: [100.0; 4], ..one }), pt)
        },
        47 => Chain {
            supply: Supply::Column { exponent: -3 },
            reading: Reading { signal: Signal::Volts, exponent: -3 },
            self_heating: heated,
            ..Chain::new(Network::Reference { ohms: 100.0, leads: two_wire }, pt)
        },
        // what is refused: a blind bridge, a missing temperature, a gauge factor of 0
        48 => gauge(Bridge::equal(350.0, [along, along, Arm::Fixed, Arm::Fixed]), 2.08),
        49 => Chain { temperature: Temperature::None, ..warm(gauge(one, 2.08)) },
        50 => Chain {
            element: Element::Gauge { gauge: Gauge::new(0.0), zero: Zero::default(), limit: STRAIN_LIMIT },
            ..gauge(one, 2.08)
        },
        _ => return None,
    })
}

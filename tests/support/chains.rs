//! One chain of every kind of network and element, and of every kind of plan that comes of them. All figures are made
//! up to be ordinary and no two alike.

use ohmwright::chain::{
    Chain, Element, Inputs, LeadWarmth, Network, Output, Reading, STRAIN_LIMIT, SelfHeating, Signal, Supply,
    Temperature,
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

/// A chain and where it is used.
#[derive(Clone, Copy, Debug)]
pub struct Case {
    /// What it is.
    pub name: &'static str,
    /// The chain.
    pub chain: Chain,
    /// Results between which it is tested.
    pub span: [f64; 2],
    /// What comes with the readings, where the chain has columns.
    pub inputs: Inputs,
    /// Whether the reading rises with the result.
    pub rises: bool,
}

/// Whether the law of the sensor says anything outside its range.
pub fn extrapolates(chain: &Chain) -> bool {
    !matches!(chain.element, Element::Thermocouple(_) | Element::Standard { .. } | Element::Thermistor(Law::Points(_)))
}

/// An arm that sees `factor` times the strain.
pub const fn along(factor: f64) -> Arm {
    Arm::Active { factor, driven: Driven::Along }
}

/// An arm that sees `factor` times Poisson's ratio times the strain.
pub const fn across(factor: f64) -> Arm {
    Arm::Active { factor, driven: Driven::Across }
}

/// A bridge of four unequal resistances.
pub fn unequal(arms: [Arm; 4]) -> Bridge {
    Bridge { resistances: [351.0, 349.2, 350.3, 350.9], poisson: 0.287, ..Bridge::equal(350.0, arms) }
}

/// A gauge in a bridge, read as a ratio, in plain strain.
pub fn strain(bridge: Bridge, gauge: Gauge, zero: Zero) -> Chain {
    let mut chain = Chain::new(Network::Bridge(bridge), Element::Gauge { gauge, zero, limit: STRAIN_LIMIT });
    chain.output = Output::Strain { exponent: 0 };
    chain
}

/// A gauge that feels temperature in every way.
pub fn warm_gauge() -> Gauge {
    Gauge {
        slope: 1.1e-4,
        reference_celsius: 24.0,
        thermal_output: Some(ThermalOutput {
            coefficients: [-31.8, 2.77, -6.55e-2, 3.28e-4, -3.26e-7, 1.0e-11, -1.0e-14],
            fahrenheit: false,
            gauge_factor: 2.0,
            range_celsius: [-60.0, 180.0],
        }),
        expansion: Some(Expansion { specimen: 11.7e-6, data: 12.1e-6 }),
        ..Gauge::new(2.08)
    }
}

/// A gauge whose thermal output is a table of points.
pub fn pointed_gauge() -> Gauge {
    let points =
        Points::new(&[[-60.0, -210.0], [-15.0, -75.5], [24.0, 0.0], [55.0, 3.2], [110.0, -61.0], [180.0, -240.0]]);
    Gauge {
        slope: -0.9e-4,
        thermal_points: Some(ThermalPoints { points: points.expect("a table"), gauge_factor: 2.0 }),
        expansion: Some(Expansion { specimen: 10.8e-6, data: 12.1e-6 }),
        ..Gauge::new(2.06)
    }
}

/// Copper leads of this temperature.
pub const fn copper(temperature: Temperature) -> LeadWarmth {
    LeadWarmth { coefficient: COPPER_PER_KELVIN, reference_celsius: 20.0, temperature }
}

/// A certificate between −60 and 60 kN, in mV/V, slightly bent, its loads turned into N.
pub const fn certificate(gives_output: bool) -> Certificate {
    let coefficients = if gives_output {
        [0.0013, 0.0412, 3.1e-6, -2.2e-8, 1.0e-11, 0.0, 0.0]
    } else {
        [-0.031, 24.7, -0.043, 0.0072, 0.0, 1.0e-4, 0.0]
    };
    Certificate { coefficients, gives_output, output_exponent: -3, load_scale: 1e3, range: [-60.0, 60.0] }
}

/// A transducer in a full bridge with all its leads, loaded.
pub fn transducer(law: Transducer, limit: f64) -> Chain {
    let mut bridge = unequal([along(1.0), along(-1.0), along(1.0), along(-1.0)]);
    bridge.supply_leads = Pair::Same(2.38);
    bridge.signal_leads = Pair::Run(run(28.3));
    bridge.input_resistance = Some(48_200.0);
    let zero = Zero { reading: Some(ZeroReading::Ratio(1.7e-5)), ..Zero::default() };
    Chain::new(Network::Bridge(bridge), Element::Transducer { law, zero, limit })
}

fn zero(reading: ZeroReading, meaning: ZeroMeaning) -> Zero {
    Zero { reading: Some(reading), meaning, celsius: Some(21.5), ..Zero::default() }
}

fn run(metres: f64) -> Conductor {
    Conductor::Run { metres, square_millimetres: 0.25, ohm_metres: COPPER_OHM_METRES }
}

fn own_ohms(a: f64, b: f64, c: f64) -> Each {
    Each::Own([Conductor::Ohms(a), Conductor::Ohms(b), Conductor::Ohms(c)])
}

fn volts(mut chain: Chain, exponent: i8, supply: Supply) -> Chain {
    chain.reading = Reading { signal: Signal::Volts, exponent };
    chain.supply = supply;
    chain
}

/// A thermistor of 10 kΩ.
pub const BETA: Law = Law::Beta(Beta { r25_ohms: 10_000.0, beta_kelvin: 3_950.0, range_celsius: [-40.0, 125.0] });
/// A thermistor of about 10 kΩ at 25 °C.
pub const STEINHART_HART: Law = Law::SteinhartHart(SteinhartHart {
    a: 1.129_148e-3,
    b: 2.341_25e-4,
    c: 8.767_41e-8,
    range_celsius: [-40.0, 125.0],
});

/// All of them.
#[allow(clippy::too_many_lines, reason = "a list")]
pub fn all() -> Vec<Case> {
    let mut list = Vec::new();
    let mut add = |name, chain: Chain, span, inputs, rises| list.push(Case { name, chain, span, inputs, rises });
    let none = Inputs::default();
    let wide = [-0.099, 0.099];
    let at = |supply, celsius| Inputs { reading: 0.0, supply, celsius, ..Inputs::default() };
    let (fixed, dummy) = (Arm::Fixed, Arm::Dummy);

    add("quarter", strain(Bridge::one_gauge(350.0), Gauge::new(2.08), Zero::default()), wide, none, true);
    add(
        "quarter in arm 4, falling",
        strain(unequal([fixed, fixed, fixed, along(1.0)]), Gauge::new(2.08), Zero::default()),
        wide,
        none,
        false,
    );

    let turned = strain(unequal([fixed, along(-1.0), fixed, fixed]), Gauge::new(2.08), Zero::default());
    add("quarter in arm 2, compressed", turned, wide, none, true);

    // three wires, loaded, volts at a fixed supply, zeroed, one temperature
    let mut bridge = unequal([along(1.0), fixed, fixed, fixed]);
    bridge.leads = Some(Leads { wires: Wires::Three, each: own_ohms(1.31, 1.27, 1.44) });
    bridge.input_resistance = Some(2.0e6);
    let mut chain = volts(
        strain(bridge, warm_gauge(), zero(ZeroReading::Ratio(0.0013), ZeroMeaning::Strain)),
        -3,
        Supply::Fixed(2.5),
    );
    chain.temperature = Temperature::Fixed(43.0);
    chain.output = Output::Strain { exponent: 6 };
    add("quarter, three wires, fixed temperature", chain, [-95_000.0, 95_000.0], none, true);
    chain.temperature = Temperature::Column;
    add("quarter, three wires, temperature column", chain, [-95_000.0, 95_000.0], at(0.0, -17.0), true);

    // two wires balanced with them in place; the gauge's own resistance was off
    let mut bridge = Bridge::one_gauge(120.0);
    bridge.leads = Some(Leads { wires: Wires::Two, each: Each::Same(run(12.4)) });
    bridge.balanced = true;
    let z = zero(ZeroReading::Ratio(-0.0009), ZeroMeaning::Resistance);
    add("quarter, two wires, zero by resistance", strain(bridge, Gauge::new(2.11), z), wide, none, true);
    let mut chain = volts(strain(bridge, Gauge::new(2.11), Zero::default()), 0, Supply::Fixed(5.0));
    if let Element::Gauge { zero: z, .. } = &mut chain.element {
        *z = zero(ZeroReading::AsRecorded(-0.0045), ZeroMeaning::Completion);
    }
    add("quarter, two wires, zero by completion", chain, wide, none, true);

    // a gauge factor that drifts, nothing else: the temperature only scales
    let gauge = Gauge { slope: -1.3e-4, reference_celsius: 24.0, ..Gauge::new(2.06) };
    let mut chain = strain(
        unequal([along(1.0), along(-1.0), fixed, fixed]),
        gauge,
        zero(ZeroReading::Ratio(0.0021), ZeroMeaning::Strain),
    );
    chain.temperature = Temperature::Column;
    add("half, bending, drifting gauge factor", chain, wide, at(0.0, 71.0), true);

    let mut chain = strain(
        unequal([along(1.0), dummy, fixed, fixed]),
        warm_gauge(),
        zero(ZeroReading::Ratio(-0.0017), ZeroMeaning::Strain),
    );
    chain.temperature = Temperature::Column;
    add("half, gauge and dummy, temperature column", chain, wide, at(0.0, 64.0), true);
    chain.temperature = Temperature::Fixed(-22.0);
    add("half, gauge and dummy, fixed temperature", chain, wide, none, true);

    let mut bridge = unequal([along(1.0), across(-1.0), fixed, fixed]);
    bridge.leads = Some(Leads { wires: Wires::Three, each: Each::Same(run(7.3)) });
    bridge.input_resistance = Some(10.0e6);
    add("half, Poisson, three wires", strain(bridge, Gauge::new(2.08), Zero::default()), wide, none, true);

    let opposite = strain(unequal([along(1.0), fixed, along(1.0), fixed]), Gauge::new(2.08), Zero::default());
    add("half, opposite arms", opposite, wide, none, true);
    let mut chain = strain(
        unequal([along(1.0), fixed, along(1.0), fixed]),
        warm_gauge(),
        zero(ZeroReading::Ratio(0.0008), ZeroMeaning::Strain),
    );
    chain.temperature = Temperature::Column;
    add("half, opposite arms, temperature column", chain, wide, at(0.0, 58.0), true);

    // full bridge with every lead, sensed
    let mut bridge = unequal([along(1.0), along(-1.02), along(0.98), along(-1.0)]);
    bridge.supply_leads = Pair::Own([1.9, 2.3]);
    bridge.signal_leads = Pair::Same(0.7);
    bridge.sensed = true;
    bridge.input_resistance = Some(21_700.0);
    add("full, bending, sensed", strain(bridge, Gauge::new(2.05), Zero::default()), wide, none, true);
    let mut shear = strain(bridge, Gauge::new(2.05), zero(ZeroReading::Ratio(0.0031), ZeroMeaning::Strain));
    shear.output = Output::ShearStrain { exponent: 6 };
    add("full, shear strain", shear, [-190_000.0, 190_000.0], none, true);

    // difference amplifier and converter, supply in a column of millivolts
    let mut bridge = unequal([along(1.0), across(-1.0), along(1.0), across(-1.0)]);
    bridge.supply_leads = Pair::Same(0.8);
    bridge.signal_leads = Pair::Own([0.4, 0.6]);
    let mut chain = volts(strain(bridge, Gauge::new(2.11), Zero::default()), 0, Supply::Column { exponent: -3 });
    chain.amplifier = Amplifier::Difference {
        circuit: Difference {
            input: [1_500.0, 1_510.0],
            feedback: [33_000.0, 32_900.0],
            open_loop_gain: Some(1.0e5),
            reference: Reference::Centre,
        },
        offset: 0.013,
    };
    add("full, Poisson, difference amplifier, supply column", chain, [-0.09, 0.09], at(4_990.0, 0.0), true);
    chain.reading.signal = Signal::Count;
    chain.supply = Supply::Fixed(5.0);
    chain.converter = Some(Converter { bits: 24, full_scale: FullScale::Volts(10.0), coding: Coding::Signed });
    add("full, Poisson, counts", chain, [-0.02, 0.02], none, true);

    // everything moves with temperature, loaded: fourth degree reading by reading
    let mut bridge = unequal([along(1.0), across(-1.0), along(1.0), across(-1.0)]);
    bridge.input_resistance = Some(50_000.0);
    let mut chain = volts(
        strain(bridge, warm_gauge(), zero(ZeroReading::Ratio(0.0005), ZeroMeaning::Strain)),
        -3,
        Supply::Column { exponent: 0 },
    );
    chain.temperature = Temperature::Column;
    add("full, Poisson, temperature and supply columns", chain, wide, at(2.5, 55.0), true);

    // gain block, offset binary, ratiometric
    let mut chain = strain(Bridge::one_gauge(350.0), Gauge::new(2.08), Zero::default());
    chain.reading.signal = Signal::Count;
    chain.supply = Supply::Fixed(3.0);
    chain.converter = Some(Converter { bits: 16, full_scale: FullScale::Supply, coding: Coding::Offset });
    chain.amplifier = Amplifier::Gain { gain: 12.0, offset: 0.02 };
    add("quarter, ratiometric counts behind a gain", chain, [-0.09, 0.09], none, true);

    // figures that are zero but not known exactly: their derivatives are not zero
    chain.amplifier = Amplifier::Gain { gain: 12.0, offset: 0.0 };
    chain.temperature = Temperature::Fixed(41.0);
    add("quarter, no offset and no slope", chain, [-0.09, 0.09], none, true);

    // leads that warm: two wires, balanced when they were cold, volts beside their supply
    let mut bridge = unequal([along(1.0), fixed, fixed, fixed]);
    bridge.leads = Some(Leads { wires: Wires::Two, each: Each::Own([1.31, 1.44, 0.0].map(Conductor::Ohms)) });
    bridge.balanced = true;
    let z = Zero { lead_celsius: Some(12.0), ..zero(ZeroReading::Ratio(0.0007), ZeroMeaning::Strain) };
    let mut chain = volts(strain(bridge, Gauge::new(2.09), z), -3, Supply::Column { exponent: 0 });
    chain.lead_warmth = Some(copper(Temperature::Column));
    let warm = |supply, celsius, lead_celsius| Inputs { lead_celsius, ..at(supply, celsius) };
    add("quarter, two wires that warm", chain, wide, warm(2.5, 0.0, 41.0), true);
    chain.lead_warmth = Some(copper(Temperature::Fixed(33.0)));
    add("quarter, two warm wires", chain, wide, at(2.5, 0.0), true);
    // three wires and a gauge that feels temperature, behind a gain
    let mut bridge = unequal([fixed, along(-1.0), fixed, fixed]);
    bridge.leads = Some(Leads { wires: Wires::Three, each: own_ohms(1.31, 1.27, 1.44) });
    bridge.input_resistance = Some(2.0e5);
    let z = Zero { lead_celsius: Some(8.0), ..zero(ZeroReading::Ratio(-0.0011), ZeroMeaning::Completion) };
    let mut chain = strain(bridge, warm_gauge(), Zero { meaning: ZeroMeaning::Resistance, ..z });
    chain.lead_warmth = Some(copper(Temperature::Column));
    chain.temperature = Temperature::Column;
    add("quarter, three wires that warm, temperature column", chain, wide, warm(0.0, 66.0, 37.0), true);
    chain.temperature = Temperature::Fixed(31.0);
    add("quarter, three wires that warm, fixed temperature", chain, wide, warm(0.0, 0.0, -11.0), true);
    // second degree
    let mut bridge = unequal([along(1.0), fixed, along(1.0), fixed]);
    bridge.supply_leads = Pair::Own([1.9, 2.3]);
    let mut chain = strain(bridge, Gauge::new(2.08), Zero { lead_celsius: Some(25.0), ..Zero::default() });
    chain.lead_warmth = Some(copper(Temperature::Column));
    add("half, opposite arms, supply leads that warm", chain, wide, warm(0.0, 0.0, 55.0), true);
    // every lead there is, in six places of the network
    let mut bridge = unequal([along(1.0), along(-1.0), fixed, fixed]);
    bridge.leads = Some(Leads { wires: Wires::Three, each: Each::Same(run(9.1)) });
    bridge.supply_leads = Pair::Run(run(31.0));
    bridge.signal_leads = Pair::Own([0.7, 0.9]);
    bridge.sensed = true;
    bridge.input_resistance = Some(21_700.0);
    let mut chain = strain(bridge, Gauge::new(2.05), zero(ZeroReading::Ratio(0.08), ZeroMeaning::Strain));
    chain.amplifier = Amplifier::Difference {
        circuit: Difference {
            input: [1_500.0, 1_510.0],
            feedback: [33_000.0, 32_900.0],
            open_loop_gain: Some(1.0e5),
            reference: Reference::Centre,
        },
        offset: 0.004,
    };
    chain.supply = Supply::Fixed(5.0);
    chain.lead_warmth = Some(copper(Temperature::Column));
    add("half, bending, six leads that warm, difference amplifier", chain, [-0.09, 0.09], warm(0.0, 0.0, 61.0), true);

    // arms of their own temperature
    let own = |celsius, arm_celsius| Inputs { arm_celsius, celsius, ..Inputs::default() };
    let z = zero(ZeroReading::Ratio(-0.0017), ZeroMeaning::Strain);
    let arms = Zero { arm_celsius: [Some(19.0), Some(23.0), None, None], ..z };
    let mut chain = strain(unequal([along(1.0), dummy, fixed, fixed]), warm_gauge(), arms);
    chain.arm_temperatures = [Temperature::Column, Temperature::Column, Temperature::None, Temperature::None];
    add("half, gauge and dummy, each its own column", chain, wide, own(0.0, [71.0, 34.0, 0.0, 0.0]), true);
    let mut bridge = unequal([along(1.0), across(-1.0), along(1.0), across(-1.0)]);
    bridge.input_resistance = Some(50_000.0);
    bridge.supply_leads = Pair::Same(2.4);
    bridge.signal_leads = Pair::Run(run(17.0));
    let arms = Zero { arm_celsius: [Some(19.0), None, None, Some(17.0)], ..z };
    let mut chain = strain(bridge, pointed_gauge(), arms);
    chain.temperature = Temperature::Column;
    chain.arm_temperatures = [Temperature::Column, Temperature::None, Temperature::Fixed(44.0), Temperature::Column];
    chain.lead_warmth = Some(copper(Temperature::Column));
    add(
        "full, Poisson, temperatures of every kind",
        chain,
        wide,
        Inputs { lead_celsius: 36.0, ..own(52.0, [61.0, 0.0, 0.0, 33.0]) },
        true,
    );

    // thermal output as points
    let mut chain = strain(unequal([along(1.0), fixed, fixed, fixed]), pointed_gauge(), z);
    chain.temperature = Temperature::Column;
    add("quarter, points, temperature column", chain, wide, at(0.0, 47.0), true);
    chain.temperature = Temperature::Fixed(-31.0);
    add("quarter, points, fixed temperature", chain, wide, none, true);
    let mut chain = strain(unequal([along(1.0), dummy, fixed, fixed]), pointed_gauge(), z);
    chain.temperature = Temperature::Column;
    add("half, gauge and dummy, points", chain, wide, at(0.0, 133.0), true);

    // transverse sensitivity
    let pair = unequal([along(1.0), along(-1.0), fixed, fixed]);
    let mut chain = strain(pair, Gauge::new(2.08), Zero::default());
    chain.transverse = Some(Transverse { sensitivity: 0.009, strain_ratio: 0.61 });
    add("half, bending, transverse sensitivity", chain, [-0.09, 0.09], none, true);
    let four = unequal([along(1.0), along(-1.0), along(1.0), along(-1.0)]);
    let mut chain = strain(four, warm_gauge(), z);
    chain.transverse = Some(Transverse { sensitivity: -0.004, strain_ratio: -1.0 });
    chain.output = Output::ShearStrain { exponent: 6 };
    chain.temperature = Temperature::Column;
    add("full, shear strain, transverse sensitivity", chain, [-180_000.0, 180_000.0], at(0.0, 48.0), true);

    // shunts
    let mut bridge = unequal([along(1.0), along(-1.02), along(0.98), along(-1.0)]);
    bridge.supply_leads = Pair::Own([1.9, 2.3]);
    bridge.signal_leads = Pair::Same(0.7);
    bridge.input_resistance = Some(21_700.0);
    for (name, shunt) in [
        ("full, shunt at the gauge", Shunt { arm: 3, ohms: 59_880.0, place: Place::Gauge }),
        ("full, shunt at the instrument", Shunt { arm: 4, ohms: 87_325.0, place: Place::Instrument }),
    ] {
        bridge.shunt = Some(shunt);
        let z = zero(ZeroReading::Ratio(0.0009), ZeroMeaning::Strain);
        add(name, strain(bridge, Gauge::new(2.05), z), [-0.09, 0.09], none, true);
    }

    // transducers
    let rated = Transducer::Rated { output: 2.1147e-3, capacity: 50.0 };
    add("transducer, rated output", transducer(rated, 75.0), [-70.0, 70.0], none, true);
    let turned = Transducer::Rated { output: -2.0e-3, capacity: 50.0 };
    let mut chain = volts(transducer(turned, 75.0), -3, Supply::Column { exponent: 0 });
    chain.lead_warmth = Some(copper(Temperature::Column));
    add("transducer, rated output, leads that warm", chain, [-70.0, 70.0], warm(10.0, 0.0, 48.0), false);
    for (name, warming, gives_output) in [
        ("transducer, certificate of outputs", "transducer, certificate of outputs, leads that warm", true),
        ("transducer, certificate of loads", "transducer, certificate of loads, leads that warm", false),
    ] {
        let mut chain = transducer(Transducer::Certificate(certificate(gives_output)), 75_000.0);
        add(name, chain, [-59_900.0, 59_900.0], none, true);
        chain.lead_warmth = Some(copper(Temperature::Column));
        add(warming, chain, [-59_900.0, 59_900.0], warm(0.0, 0.0, -9.0), true);
    }

    // thermometers
    let ohms = |leads, element| Chain::new(Network::Resistance { leads }, element);
    let pt100 = Element::Platinum(IEC_60751);
    let two = Some(Leads { wires: Wires::Two, each: Each::Same(Conductor::Ohms(0.35)) });
    add("platinum, two wires", ohms(two, pt100), [-199.0, 849.0], none, true);
    let mut chain = ohms(two, pt100);
    chain.lead_warmth = Some(copper(Temperature::Column));
    add("platinum, two wires that warm", chain, [-199.0, 849.0], warm(0.0, 0.0, 57.0), true);
    chain.lead_warmth = Some(copper(Temperature::Fixed(57.0)));
    add("platinum, two warm wires", chain, [-199.0, 849.0], none, true);
    let three = Some(Leads { wires: Wires::Three, each: own_ohms(0.31, 0.35, 0.33) });
    let mut chain = ohms(three, pt100);
    chain.output = Output::Kelvin;
    add("platinum, three wires, kelvin", chain, [75.0, 1_120.0], none, true);
    let mut chain = volts(ohms(None, Element::Platinum(IEC_60751.with_r0(1_000.0))), -3, Supply::Fixed(1e-3));
    chain.output = Output::Fahrenheit;
    add("platinum, current source, fahrenheit", chain, [-320.0, 1_550.0], none, true);
    let divider = Divider { fixed: 1_200.0, sensor: Side::High, input_resistance: Some(1.0e6) };
    let chain = Chain::new(Network::Divider { divider, leads: two }, Element::Platinum(IEC_60751.with_r0(1_000.0)));
    add("platinum, divider, high side, loaded", chain, [-199.0, 849.0], none, false);
    let warming = Chain { lead_warmth: Some(copper(Temperature::Column)), ..chain };
    add("platinum, divider, leads that warm", warming, [-199.0, 849.0], warm(0.0, 0.0, 44.0), false);
    let mut bridge = unequal([along(1.0), fixed, fixed, fixed]);
    bridge.resistances = [100.0, 100.0, 1_000.0, 1_000.0];
    bridge.leads = Some(Leads { wires: Wires::Three, each: Each::Same(Conductor::Ohms(0.9)) });
    bridge.input_resistance = Some(1.0e6);
    let chain = volts(Chain::new(Network::Bridge(bridge), pt100), -3, Supply::Column { exponent: 0 });
    add("platinum, bridge, supply column", chain, [-199.0, 849.0], at(1.25, 0.0), true);
    let chain = Chain { lead_warmth: Some(copper(Temperature::Fixed(-7.0))), ..chain };
    add("platinum, bridge, cold leads", chain, [-199.0, 849.0], at(1.25, 0.0), true);
    let divider = Divider { fixed: 10_000.0, sensor: Side::Low, input_resistance: None };
    let mut chain = Chain::new(Network::Divider { divider, leads: None }, Element::Thermistor(BETA));
    chain.reading.signal = Signal::Count;
    chain.converter = Some(Converter { bits: 12, full_scale: FullScale::Supply, coding: Coding::Unsigned });
    add("thermistor, divider, low side, counts", chain, [-39.0, 124.0], none, false);
    let mut chain = ohms(None, Element::Thermistor(STEINHART_HART));
    chain.reading.exponent = 3;
    add("thermistor, Steinhart-Hart, kilohms", chain, [-39.0, 124.0], none, false);

    // other laws
    let letters =
        AlphaDeltaBeta { r0_ohms: 99.8, alpha: 3.851e-3, delta: 1.4998, beta: 0.1086, range_celsius: [-200.0, 850.0] };
    add("platinum by alpha, delta and beta", ohms(two, Element::AlphaDeltaBeta(letters)), [-199.0, 849.0], none, true);
    let standard = |deviation| Element::Standard { triple_point_ohms: 25.4781, deviation };
    let cold = Deviation::FromArgon { a: -1.2e-4, b: 3.1e-5 };
    add("standard thermometer, cold", ohms(None, standard(cold)), [-189.0, -0.5], none, true);
    let hot = Deviation::ToSilver { a: -1.1e-4, b: -1.3e-5, c: 2.2e-6, d: 1.1e-6, w_aluminium: 3.375_72 };
    add("standard thermometer, hot", ohms(None, standard(hot)), [1.0, 961.0], none, true);
    let mut chain = Chain::new(Network::Reference { ohms: 25.0, leads: None }, standard(hot));
    chain.self_heating = Some(SelfHeating { kelvin_per_watt: 18.0, amperes: Some(1e-3) });
    add("standard thermometer, ratio to a resistor, warmed", chain, [1.0, 961.0], none, true);
    let nickel = Element::Metal(metal::Law::Nickel(NICKEL_DIN_43760));
    add("nickel, two wires", ohms(two, nickel), [-59.0, 249.0], none, true);
    let copper_law = Element::Metal(metal::Law::Copper(COPPER_GOST_6651_2009));
    add("copper", ohms(None, copper_law), [-179.0, 199.0], none, true);
    let four = [-14.6337, 4791.842, -115_334.0, -3.730_535e6];
    let [a, b, c, d] = four;
    let log = LogarithmOfRatio { reference_ohms: 10e3, a, b, c, d, range_celsius: [-50.0, 150.0] };
    let ratio = Element::Thermistor(Law::LogarithmOfRatio(log));
    add("thermistor, four terms of 1/T", ohms(None, ratio), [-49.0, 149.0], none, false);
    let [a, b, c, d] = [3.354_016e-3, 2.569_85e-4, 2.620_131e-6, 6.383_091e-8];
    let rec = ReciprocalOfTemperature { reference_ohms: 10e3, a, b, c, d, range_celsius: [-50.0, 150.0] };
    let reciprocal = Element::Thermistor(Law::ReciprocalOfTemperature(rec));
    add("thermistor, four terms of ln R", ohms(None, reciprocal), [-49.0, 149.0], none, false);
    let points = [[-20.0, 97_120.0], [0.0, 32_650.0], [25.0, 10_000.0], [50.0, 3_602.0], [90.0, 915.0]];
    let table = Element::Thermistor(Law::Points(thermistor::Points::new(&points).expect("points")));
    add("thermistor, points", ohms(None, table), [-19.0, 89.0], none, false);
    let around = Around { parallel: Some(12e3), leakage: Some(5e6), series: Some(680.0) };
    let chain = Chain { around, ..ohms(two, ratio) };
    add("thermistor, linearising resistors", chain, [-29.0, 119.0], none, false);
    let chain = Chain { lead_warmth: Some(copper(Temperature::Column)), ..chain };
    add("thermistor, linearising resistors, leads that warm", chain, [-29.0, 119.0], warm(0.0, 0.0, 31.0), false);
    for kind in Thermocouple::ALL {
        let name = ["type B", "type E", "type J", "type K", "type N", "type R", "type S", "type T"][kind as usize];
        let ([low, high], junction) = match kind {
            Thermocouple::B => ([150.0, 1_800.0], 31.0),
            Thermocouple::R | Thermocouple::S => ([1.0, 1_700.0], 24.5),
            Thermocouple::T => ([-180.0, 399.0], 24.5),
            _ => ([-150.0, 990.0], 24.5),
        };
        let mut chain = Chain::new(Network::Emf, Element::Thermocouple(kind));
        chain.temperature = Temperature::Column;
        add(name, chain, [low, high], at(0.0, junction), true);
    }
    let mut chain = Chain::new(Network::Emf, Element::Thermocouple(Thermocouple::K));
    chain.temperature = Temperature::Fixed(23.4);
    chain.reading = Reading { signal: Signal::Count, exponent: 0 };
    chain.converter = Some(Converter { bits: 24, full_scale: FullScale::Volts(1.25), coding: Coding::Offset });
    chain.amplifier = Amplifier::Gain { gain: 16.0, offset: 1.1e-4 };
    add("type K, counts behind a gain", chain, [-150.0, 1_370.0], none, true);

    // the current that reads them warms them
    let heated =
        |chain: Chain, amperes| Chain { self_heating: Some(SelfHeating { kelvin_per_watt: 410.0, amperes }), ..chain };
    add("platinum, warmed, ohms", heated(ohms(two, pt100), Some(2e-3)), [-199.0, 840.0], none, true);
    let current = volts(ohms(None, pt100), -3, Supply::Fixed(1.5e-3));
    add("platinum, warmed, current source", heated(current, None), [-199.0, 840.0], none, true);
    let column = volts(ohms(None, pt100), -3, Supply::Column { exponent: -3 });
    add("platinum, warmed, current in a column", heated(column, None), [-199.0, 840.0], at(1.02, 0.0), true);
    for (name, sensor) in [("thermistor, warmed, low side", Side::Low), ("thermistor, warmed, high side", Side::High)] {
        let divider = Divider { fixed: 22e3, sensor, input_resistance: Some(2e6) };
        let chain = Chain::new(Network::Divider { divider, leads: two }, ratio);
        let chain = volts(Chain { around, ..chain }, 0, Supply::Column { exponent: 0 });
        add(name, heated(chain, None), [-29.0, 119.0], at(3.3, 0.0), sensor == Side::High);
    }
    let reference = Network::Reference { ohms: 100.0, leads: two };
    let chain = volts(Chain::new(reference, pt100), -3, Supply::Column { exponent: -3 });
    add("platinum, warmed, compared with a resistor", heated(chain, None), [-199.0, 840.0], at(101.0, 0.0), true);
    for index in 0..4 {
        let mut arms = [fixed; 4];
        arms[index] = along(1.0);
        let mut bridge = unequal(arms);
        bridge.resistances = [1_000.0; 4];
        bridge.resistances[index] = 100.0;
        bridge.resistances[[3, 2, 1, 0][index]] = 100.0;
        bridge.supply_leads = Pair::Own([1.1, 1.4]);
        bridge.sensed = index == 2;
        bridge.input_resistance = Some(1.0e6);
        let chain = volts(Chain::new(Network::Bridge(bridge), pt100), -3, Supply::Column { exponent: 0 });
        let name = [
            "platinum, warmed, arm 1",
            "platinum, warmed, arm 2",
            "platinum, warmed, arm 3",
            "platinum, warmed, arm 4",
        ][index];
        add(name, heated(chain, None), [-199.0, 840.0], at(2.5, 0.0), index % 2 == 0);
    }

    let mut chain = Chain::new(Network::Direct, Element::Direct { scale: -2.5, offset: 0.75 });
    chain.reading.exponent = -3;
    add("direct", chain, [-1e3, 1e3], none, false);
    list
}

/// Volts per volt of supply that a double may be off at a bridge.
const SIGNAL_FLOOR: f64 = 5e-16;

/// A floor in the unit of the result: what 5e-16 V/V (or 5e-16 of the reading's own size, or 1e-12 K) are there.
pub fn floor_of(chain: &Chain, slope: f64, reading: f64) -> f64 {
    match chain.element {
        // slope is in readings per result; the readings of a bridge are of the size of a full-scale signal times 1/2
        Element::Gauge { .. } | Element::Transducer { .. } => SIGNAL_FLOOR * full_signal(chain) / slope.abs(),
        // a thermometer in a bridge is read as the difference of two node potentials
        element if element.is_thermometer() && matches!(chain.network, Network::Bridge(_)) => {
            (SIGNAL_FLOOR * full_signal(chain) / slope.abs()).max(1e-12)
        }
        element if element.is_thermometer() => 1e-12,
        _ => 1e-15 * (reading / slope).abs(),
    }
}

/// The reading that 1 V/V at the bridge gives, in its unit.
fn full_signal(chain: &Chain) -> f64 {
    let gain = match chain.amplifier {
        Amplifier::Gain { gain, .. } => gain,
        Amplifier::Difference { circuit, .. } => circuit.feedback[0] / circuit.input[0],
        _ => 1.0,
    };
    let supply = if let Supply::Fixed(v) = chain.supply { v } else { 5.0 };
    let codes = chain.converter.map_or(1.0, |c| {
        let full_scale = if let FullScale::Volts(v) = c.full_scale { v } else { supply };
        (1_u64 << (c.bits - 1)) as f64 / full_scale
    });
    let volts = if chain.reading.signal == Signal::Ratio { 1.0 } else { supply };
    let unit: f64 = format!("1e{}", -chain.reading.exponent).parse().expect("a power of ten");
    gain * volts * codes * unit
}

//! One chain of every kind of network and element, and of every kind of plan that comes of them. All figures are made
//! up to be ordinary and no two alike.

use ohmwright::chain::{Chain, Element, Inputs, Network, Output, Reading, STRAIN_LIMIT, Signal, Supply, Temperature};
use ohmwright::platinum::IEC_60751;
use ohmwright::signal::{
    Amplifier, Arm, Bridge, COPPER_OHM_METRES, Coding, Conductor, Converter, Difference, Divider, Driven, Each,
    FullScale, Leads, Pair, Reference, Side, Wires,
};
use ohmwright::strain::{Expansion, Gauge, ThermalOutput, Zero, ZeroMeaning, ZeroReading};
use ohmwright::thermistor::{Beta, Law, SteinhartHart};

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

    // thermometers
    let ohms = |leads, element| Chain::new(Network::Resistance { leads }, element);
    let pt100 = Element::Platinum(IEC_60751);
    let two = Some(Leads { wires: Wires::Two, each: Each::Same(Conductor::Ohms(0.35)) });
    add("platinum, two wires", ohms(two, pt100), [-199.0, 849.0], none, true);
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
    let mut bridge = unequal([along(1.0), fixed, fixed, fixed]);
    bridge.resistances = [100.0, 100.0, 1_000.0, 1_000.0];
    bridge.leads = Some(Leads { wires: Wires::Three, each: Each::Same(Conductor::Ohms(0.9)) });
    bridge.input_resistance = Some(1.0e6);
    let chain = volts(Chain::new(Network::Bridge(bridge), pt100), -3, Supply::Column { exponent: 0 });
    add("platinum, bridge, supply column", chain, [-199.0, 849.0], at(1.25, 0.0), true);
    let divider = Divider { fixed: 10_000.0, sensor: Side::Low, input_resistance: None };
    let mut chain = Chain::new(Network::Divider { divider, leads: None }, Element::Thermistor(BETA));
    chain.reading.signal = Signal::Count;
    chain.converter = Some(Converter { bits: 12, full_scale: FullScale::Supply, coding: Coding::Unsigned });
    add("thermistor, divider, low side, counts", chain, [-39.0, 124.0], none, false);
    let mut chain = ohms(None, Element::Thermistor(STEINHART_HART));
    chain.reading.exponent = 3;
    add("thermistor, Steinhart-Hart, kilohms", chain, [-39.0, 124.0], none, false);

    let mut chain = Chain::new(Network::Direct, Element::Direct { scale: -2.5, offset: 0.75 });
    chain.reading.exponent = -3;
    add("direct", chain, [-1e3, 1e3], none, false);
    list
}

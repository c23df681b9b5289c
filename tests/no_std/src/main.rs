//! A program without std that uses the core as firmware would: states chains, plans them, converts one reading and
//! slices, runs forwards, takes derivatives. With a panic handler of its own it cannot be built where anything below it
//! brings std in. Exits 0, or with the number of the first check that failed.
#![no_std]
#![no_main]

use core::panic::PanicInfo;

use ohmwright::chain::{
    Chain, Columns, Derivative, Element, Inputs, LeadWarmth, Network, Parameter, Plan, Reading, Signal, Supply,
    Temperature, Word,
};
use ohmwright::platinum::{IEC_60751, Platinum};
use ohmwright::signal::{
    Amplifier, Arm, Bridge, COPPER_PER_KELVIN, Conductor, Difference, Divider, Driven, Each, Leads, Place, Reference,
    Shunt, Side, Wires,
};
use ohmwright::strain::{
    Certificate, Expansion, Gauge, Points, ThermalOutput, ThermalPoints, Transducer, Zero, uniaxial_stress,
};
use ohmwright::thermistor::{Beta, Law, SteinhartHart, Thermistor};
use ohmwright::uncertainty::{Coverage, Uncertainty, of_chain};
use ohmwright::{Error, Strain};
use uom::si::electric_potential::{millivolt, volt};
use uom::si::electrical_resistance::{kiloohm, ohm};
use uom::si::f64::{ElectricPotential, ElectricalResistance, Pressure};
use uom::si::pressure::{gigapascal, megapascal};
use uom::si::thermodynamic_temperature::degree_celsius;

// The program's way in and out, and memcpy; nothing else of the C library is used.
#[link(name = "c")]
unsafe extern "C" {
    fn _exit(code: i32) -> !;
}

#[cfg(not(test))]
#[panic_handler]
fn panicked(_: &PanicInfo<'_>) -> ! {
    // SAFETY: ends the program and touches nothing.
    unsafe { _exit(101) }
}

/// Called by the C start-up code.
#[unsafe(no_mangle)]
pub extern "C" fn main() -> i32 {
    let checks: [fn() -> Result<bool, Error>; 11] = [
        one_gauge,
        half_bridge_with_column,
        warm_gauges,
        difference_amplifier,
        platinum,
        thermistors,
        words,
        warm_leads,
        transducers,
        shunts,
        uncertainty,
    ];
    for (check, number) in checks.iter().zip(1..) {
        if check() != Ok(true) {
            return number;
        }
    }
    0
}

fn near(a: f64, b: f64, by: f64) -> bool {
    a - b <= by && b - a <= by
}

fn ohms(r: f64) -> ElectricalResistance {
    ElectricalResistance::new::<ohm>(r)
}

/// There and back through scalar, slice and typed face.
fn there_and_back(plan: &Plan, quantity: f64, inputs: Inputs, by: f64) -> Result<bool, Error> {
    let reading = plan.forward(quantity, inputs)?;
    let inputs = Inputs { reading, ..inputs };
    let one = plan.one(inputs).number()?;
    let columns = Columns {
        readings: &[reading; 5],
        supplies: &[inputs.supply; 5],
        celsius: &[inputs.celsius; 5],
        lead_celsius: &[inputs.lead_celsius; 5],
        arm_celsius: [&[inputs.arm_celsius[0]; 5], &[inputs.arm_celsius[1]; 5], &[], &[]],
    };
    let (mut out, mut words) = ([0.0; 5], [Word::Missing; 5]);
    let batch = plan.slice(&columns, &mut out, Some(&mut words))?;
    Ok(near(one, quantity, by)
        && batch.invalid == 0
        && words == [Word::Good; 5]
        && out.iter().all(|v| v.to_bits() == one.to_bits()))
}

fn one_gauge() -> Result<bool, Error> {
    // one arm of four: output/supply = x/(4 + 2 x) with x = F e, from the voltage divider rule
    let chain = Chain::strain(Bridge::quarter(ohms(350.0)), Gauge::new(2.0));
    let x = 2.0 * 1e-3;
    let output = x / (4.0 + 2.0 * x);
    let plan = chain.plan()?;
    let meter = chain.volts_at(ElectricPotential::new::<volt>(1.0)).strain_meter()?;
    let strain = meter.strain(ElectricPotential::new::<volt>(output))?;
    let stress = Pressure::new::<gigapascal>(210.0) * strain;
    let mut slopes = 0;
    chain.derivatives(1000.0, &Inputs::default(), |_, _| slopes += 1)?;
    // e = x/F: ∂e/∂F = −e/F
    let by_factor = chain.derivative(Derivative::Parameter(Parameter::GaugeFactor), 1000.0, &Inputs::default())?;
    Ok(near(plan.one(output).number()?, 1000.0, 1e-9)
        && near(strain.microstrain(), 1000.0, 1e-9)
        && near(stress.get::<megapascal>(), 210.0, 1e-9)
        && near(uniaxial_stress(210e9, 1e-3), 210e6, 1e-3)
        && near(meter.output(Strain::from_microstrain(1000.0))?.get::<millivolt>(), output * 1e3, 1e-12)
        && slopes > 5
        && near(by_factor, -500.0, 1e-6)
        && there_and_back(&plan, -432.1, Inputs::default(), 1e-9)?)
}

fn half_bridge_with_column() -> Result<bool, Error> {
    let along = Arm::Active { factor: 1.0, driven: Driven::Along };
    let across = Arm::Active { factor: -1.0, driven: Driven::Across };
    let bridge = Bridge { poisson: 0.3, ..Bridge::equal(120.0, [along, across, Arm::Fixed, Arm::Fixed]) };
    let chain = Chain {
        reading: Reading { signal: Signal::Volts, exponent: -3 },
        supply: Supply::Column { exponent: 0 },
        ..Chain::strain(bridge, Gauge::new(2.1))
    };
    there_and_back(&chain.plan()?, 750.0, Inputs { supply: 2.5, ..Inputs::default() }, 1e-9)
}

fn warm_gauges() -> Result<bool, Error> {
    let gauge = Gauge {
        slope: 1e-4,
        thermal_output: Some(ThermalOutput {
            coefficients: [-24.0, 1.90, -0.0400, 2.50e-4, 0.0, 0.0, 0.0],
            fahrenheit: false,
            gauge_factor: 2.0,
            range_celsius: [-20.0, 120.0],
        }),
        expansion: Some(Expansion { specimen: 11.7e-6, data: 12.1e-6 }),
        ..Gauge::new(2.08)
    };
    let inputs = Inputs { celsius: 47.5, ..Inputs::default() };
    let along = Arm::Active { factor: 1.0, driven: Driven::Along };
    let mut good = true;
    for arms in [[along, Arm::Fixed, Arm::Fixed, Arm::Fixed], [along, Arm::Dummy, Arm::Fixed, Arm::Fixed]] {
        let chain = Chain::strain(Bridge::equal(350.0, arms).three_wire(ohms(0.9)), gauge)
            .zeroed(Zero { celsius: Some(21.0), ..Zero::default() });
        let chain = Chain { temperature: Temperature::Column, ..chain };
        let mut temperatures = 0;
        chain.derivatives(300.0, &inputs, |which, _| temperatures += i32::from(which == Derivative::Temperature))?;
        good &= temperatures == 1 && there_and_back(&chain.plan()?, 300.0, inputs, 1e-9)?;
    }
    Ok(good)
}

fn difference_amplifier() -> Result<bool, Error> {
    let along = Arm::Active { factor: 1.0, driven: Driven::Along };
    let against = Arm::Active { factor: -1.0, driven: Driven::Along };
    let chain = Chain {
        amplifier: Amplifier::Difference {
            circuit: Difference {
                input: [1.5e3; 2],
                feedback: [330e3; 2],
                open_loop_gain: Some(1e5),
                reference: Reference::Negative,
            },
            offset: 0.0,
        },
        ..Chain::strain(Bridge::equal(350.0, [along, against, along, against]), Gauge::new(2.0))
    };
    there_and_back(&chain.plan()?, 800.0, Inputs::default(), 1e-9)
}

fn platinum() -> Result<bool, Error> {
    // IEC 60751:2008, table of a 100 Ω element: 138.51 Ω at 100 °C, 60.26 Ω at −100 °C
    let pt100 = Platinum::iec_60751(ohms(100.0))?;
    let two_wire = Leads { wires: Wires::Two, each: Each::Same(Conductor::Ohms(0.35)) };
    let chain = Chain::new(Network::Resistance { leads: Some(two_wire) }, Element::Platinum(IEC_60751));
    let plan = chain.plan()?;
    Ok(near(pt100.temperature(ohms(138.51))?.get::<degree_celsius>(), 100.0, 0.005 / 0.379)
        && near(pt100.ohms_from_celsius(-100.0)?, 60.26, 0.005)
        && near(plan.one(138.5055 + 0.7).number()?, 100.0, 1e-9)
        && there_and_back(&plan, -123.4, Inputs::default(), 1e-9)?)
}

fn thermistors() -> Result<bool, Error> {
    let law = Law::Beta(Beta { r25_ohms: 10e3, beta_kelvin: 3950.0, range_celsius: [-40.0, 125.0] });
    // by definition of R25, and a divider of two equal resistors
    let t = Thermistor::new(law)?.temperature(ElectricalResistance::new::<kiloohm>(10.0))?;
    let divider = |law| {
        let divider = Divider { fixed: 10e3, sensor: Side::Low, input_resistance: None };
        Chain::new(Network::Divider { divider, leads: None }, Element::Thermistor(law)).plan()
    };
    let steinhart =
        Law::SteinhartHart(SteinhartHart { a: 1.129e-3, b: 2.341e-4, c: 8.775e-8, range_celsius: [0.0, 70.0] });
    Ok(near(t.get::<degree_celsius>(), 25.0, 1e-9)
        && near(divider(law)?.one(0.5).number()?, 25.0, 1e-9)
        && there_and_back(&divider(steinhart)?, 42.0, Inputs::default(), 1e-9)?)
}

fn words() -> Result<bool, Error> {
    let plan = Chain::strain(Bridge::quarter(ohms(350.0)), Gauge::new(2.0)).plan()?;
    let beyond = plan.one(0.49);
    Ok(plan.one(f64::NAN).word == Word::Missing
        && beyond.value.is_nan()
        && beyond.word == Word::Open
        && plan.one(0.1).number() == Err(Error::Flagged(Word::OutOfRange))
        && plan.forward(f64::NAN, Inputs::default()).is_err()
        && Word::Open.as_str() == "open")
}

fn warm_leads() -> Result<bool, Error> {
    // two wires of 0.55 Ω at 20 °C, balanced then, read 50 K warmer: arm 1 = 120 + 1.1 · 1.1965, arm 2 = 121.1
    let two_wire = Leads { wires: Wires::Two, each: Each::Same(Conductor::Ohms(0.55)) };
    let bridge = Bridge { leads: Some(two_wire), balanced: true, ..Bridge::quarter(ohms(120.0)) };
    let warmth =
        LeadWarmth { coefficient: COPPER_PER_KELVIN, reference_celsius: 20.0, temperature: Temperature::Column };
    let chain = Chain { lead_warmth: Some(warmth), ..Chain::strain(bridge, Gauge::new(2.0)) };
    let inputs = Inputs { lead_celsius: 70.0, ..Inputs::default() };
    let arm = 120.0 + 1.1 * 1.1965;
    let output = arm / (arm + 121.1) - 0.5;
    let warm = chain.plan()?.one(Inputs { reading: output, ..inputs }).number()?;
    let thermometer = Chain {
        lead_warmth: Some(warmth),
        ..Chain::new(Network::Resistance { leads: Some(two_wire) }, Element::Platinum(IEC_60751))
    };
    // gauge and dummy of their own temperature, thermal output as points
    let points = Points::new(&[[-20.0, -70.0], [20.0, 0.0], [60.0, -10.0], [120.0, -150.0]])?;
    let gauge = Gauge { thermal_points: Some(ThermalPoints { points, gauge_factor: 2.0 }), ..Gauge::new(2.0) };
    let along = Arm::Active { factor: 1.0, driven: Driven::Along };
    let zero = Zero { arm_celsius: [Some(20.0), Some(20.0), None, None], ..Zero::default() };
    let pair = Bridge::equal(350.0, [along, Arm::Dummy, Arm::Fixed, Arm::Fixed]);
    let mut own = Chain::strain(pair, gauge).zeroed(zero);
    own.arm_temperatures = [Temperature::Column, Temperature::Column, Temperature::None, Temperature::None];
    let beside = Inputs { arm_celsius: [47.0, 31.0, 0.0, 0.0], ..Inputs::default() };
    // IEC 60751:2008: 138.5055 Ω at 100 °C, behind both wires
    let at_100 = thermometer.plan()?.one(Inputs { reading: 138.5055 + 1.1 * 1.1965, ..inputs }).number()?;
    Ok(near(warm, 0.0, 1e-9)
        && near(at_100, 100.0, 1e-9)
        && there_and_back(&chain.plan()?, 700.0, inputs, 1e-9)?
        && there_and_back(&thermometer.plan()?, 85.0, inputs, 1e-9)?
        && there_and_back(&own.plan()?, -250.0, beside, 1e-9)?)
}

fn transducers() -> Result<bool, Error> {
    let arm = |factor| Arm::Active { factor, driven: Driven::Along };
    let bridge = Bridge::equal(350.0, [arm(1.0), arm(-1.0), arm(1.0), arm(-1.0)]);
    let cell = |law| {
        Chain::new(Network::Bridge(bridge), Element::Transducer { law, zero: Zero::default(), limit: 100.0 }).plan()
    };
    let rated = cell(Transducer::Rated { output: 2e-3, capacity: 50.0 })?;
    // 0.04 x + 1e-5 x² mV/V: at 10 it is 0.4 + 0.001 = 0.401
    let certificate = cell(Transducer::Certificate(Certificate {
        coefficients: [0.0, 0.04, 1e-5, 0.0, 0.0, 0.0, 0.0],
        gives_output: true,
        output_exponent: -3,
        load_scale: 1.0,
        range: [-60.0, 60.0],
    }))?;
    Ok(near(rated.one(1e-3).number()?, 25.0, 1e-10)
        && near(certificate.one(0.401e-3).number()?, 10.0, 1e-10)
        && there_and_back(&certificate, -42.0, Inputs::default(), 1e-10)?)
}

fn shunts() -> Result<bool, Error> {
    // across the gauge: e = −R/(F (R + R_c)) = −350/(2 · 35000)
    let chain = Chain::strain(Bridge::quarter(ohms(350.0)), Gauge::new(2.0));
    let shunt = Shunt { arm: 1, ohms: 34_650.0, place: Place::Gauge };
    let simulated = chain.simulated(shunt, 0.0, &Inputs::default())?;
    let back = chain.shunt_for(1, Place::Gauge, -5000.0, &Inputs::default())?;
    Ok(near(simulated, -5000.0, 1e-9) && near(back, 34_650.0, 1e-6))
}

fn uncertainty() -> Result<bool, Error> {
    // by hand at 0 °C: 0.06 Ω/√3 over 0.39083 Ω/K; one rectangular input: k = 0.95 √3
    let chain = Chain::new(Network::Resistance { leads: None }, Element::Platinum(IEC_60751));
    let reading = Uncertainty::Rectangular { half_width: 0.06 };
    let of_reading = |which| (which == Derivative::Reading).then_some(reading);
    let combined = of_chain(&chain, 0.0, &Inputs::default(), of_reading)?;
    let wide = combined.expanded(Coverage::Probability(0.95))?;
    Ok(near(combined.standard, 0.088634, 5e-6) && near(wide.expanded, 0.145843, 5e-6))
}

//! One case worked by hand, by every face: one active arm of 350 Ω, gauge factor 2.08, on three wires of 2.6 Ω each;
//! 1.2075 mV at 2.500 V.
//!
//! y = 1.2075e-3/2.5 = 4.83e-4. Arms 1 and 2 are 350 (1 + x) + 2.6 and 352.6 Ω, the third wire carries no current, so
//! with u = 350 x/352.6 the output is y = u/(4 + 2u):
//!
//! u = 4 y/(1 − 2 y) = 1.932e-3/0.999034 = 1.933 868 1e-3,  x = u 352.6/350 = 1.948 234 0e-3,
//! e = x/2.08 = 936.651 microstrain.
//!
//! Leads left out would give 929.744, and 4 y/F 928.846: neither rounds to it.

use ohmwright::chain::{Chain, Columns, Inputs, Reading, Signal, Supply, Word};
use ohmwright::signal::{Bridge, Conductor, Each, Leads, Wires};
use ohmwright::strain::Gauge;
use ohmwright::{Error, Strain};
use uom::si::electric_potential::{millivolt, volt};
use uom::si::electrical_resistance::ohm;
use uom::si::f64::{ElectricPotential, ElectricalResistance, Ratio};
use uom::si::ratio::ratio;

const EXPECTED: f64 = 936.651;
const HALF_DIGIT: f64 = 0.0005;

fn close(what: &str, got: f64) {
    println!("{what}: {got:.6} microstrain");
    assert!((got - EXPECTED).abs() <= HALF_DIGIT, "{what}: {got} is not {EXPECTED}");
}

/// The circuit in plain numbers.
fn plain() -> Chain {
    let mut bridge = Bridge::one_gauge(350.0);
    bridge.leads = Some(Leads { wires: Wires::Three, each: Each::Same(Conductor::Ohms(2.6)) });
    Chain::strain(bridge, Gauge::new(2.08))
}

#[test]
fn plain_numbers() {
    close("V/V", plain().plan().unwrap().one(4.83e-4).number().unwrap());

    let mut chain = plain();
    chain.reading = Reading { signal: Signal::Ratio, exponent: -3 };
    close("mV/V", chain.plan().unwrap().one(0.483).number().unwrap());

    chain.reading = Reading { signal: Signal::Volts, exponent: -3 };
    chain.supply = Supply::Fixed(2.5);
    let plan = chain.plan().unwrap();
    close("mV at 2.5 V", plan.one(1.2075).number().unwrap());
    let back = plan.forward(EXPECTED, Inputs::default()).unwrap();
    // half a digit of strain is F/4 · 2.5 V of it: 0.65 nV
    assert!((back - 1.2075).abs() <= 0.65e-6, "{back} mV");

    chain.supply = Supply::Column { exponent: 0 };
    let plan = chain.plan().unwrap();
    close(
        "mV with a supply column",
        plan.one(Inputs { reading: 1.2075, supply: 2.5, celsius: 0.0, ..Inputs::default() }).number().unwrap(),
    );
    let (mut out, mut words) = ([0.0; 2], [Word::Missing; 2]);
    let columns = Columns { readings: &[1.2075, 2.415], supplies: &[2.5, 5.0], celsius: &[], ..Columns::default() };
    let batch = plan.slice(&columns, &mut out, Some(&mut words)).unwrap();
    assert_eq!((batch.invalid, words), (0, [Word::Good; 2]));
    out.iter().for_each(|e| close("slice", *e));
}

#[test]
fn typed_face() -> Result<(), Error> {
    let bridge =
        Bridge::quarter(ElectricalResistance::new::<ohm>(350.0)).three_wire(ElectricalResistance::new::<ohm>(2.6));
    let chain = Chain::strain(bridge, Gauge::new(2.08));
    let e = chain.strain_meter()?.strain_from_ratio(Ratio::new::<ratio>(4.83e-4))?;
    close("typed, ratio", e.microstrain());

    let meter = chain.volts_at(ElectricPotential::new::<volt>(2.5)).strain_meter()?;
    let e = meter.strain(ElectricPotential::new::<millivolt>(1.2075))?;
    close("typed, volts", e.microstrain());
    let v = meter.output(Strain::from_microstrain(EXPECTED))?;
    assert!((v.get::<millivolt>() - 1.2075).abs() <= 0.65e-6, "{v:?}");
    Ok(())
}

#[test]
fn what_it_is_not() {
    let mut bare = plain();
    if let ohmwright::chain::Network::Bridge(bridge) = &mut bare.network {
        bridge.leads = None;
    }
    let bare = bare.plan().unwrap().one(4.83e-4).number().unwrap();
    assert!((bare - 929.744).abs() <= HALF_DIGIT, "{bare}");
    assert!((bare - EXPECTED).abs() > 6.0);
}

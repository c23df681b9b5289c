//! Transducers: rated output and certificates.
//!
//! - data/strain/ngspice_oracle.csv, case n23: a load cell of 2.1147 mV/V at 63.7 % of its load, with leads and a loaded
//!   output (constructed; a circuit simulator and 50-digit nodal analysis).
//! - data/strain/shunt_transducer.csv: L. Clegg, Western Regional Strain Gage Committee, 2005.
//! - data/strain/pontius_certified.csv, pontius_data.csv: NIST Statistical Reference Datasets, Pontius, a load cell.
//!   data/strain/calibration_inverse.csv: NIST/SEMATECH e-Handbook 4.5.2.1, the load of a deflection (from memory).
//!
//! Tolerances are half the last printed digit, or the allowed error of the code: 1e-12 relative or 5e-16 V/V referred through
//! the sensitivity.

mod support;

use ohmwright::Error;
use ohmwright::chain::{Chain, Element, Inputs, LeadWarmth, Network, Reading, Signal, Supply, Temperature, Word};
use ohmwright::signal::{Arm, Bridge, Driven, Pair, Place, Shunt};
use ohmwright::strain::{Certificate, Transducer, Zero, ZeroMeaning, ZeroReading};
use support::report::Report;
use support::table::{Row, Table};

fn full(ohms: f64) -> Bridge {
    let arm = |factor| Arm::Active { factor, driven: Driven::Along };
    Bridge::equal(ohms, [arm(1.0), arm(-1.0), arm(1.0), arm(-1.0)])
}

fn chain(bridge: Bridge, law: Transducer, limit: f64) -> Chain {
    Chain::new(Network::Bridge(bridge), Element::Transducer { law, zero: Zero::default(), limit })
}

fn one(chain: &Chain, reading: f64) -> f64 {
    chain.plan().unwrap().one(reading).number().unwrap()
}

fn n23(table: &Table) -> Row<'_> {
    table.rows().find(|r| r.text("case") == "n23" && r.text("output") == "vo_amp").expect("the case")
}

#[test]
fn the_load_cell_of_the_circuit_simulator() {
    let table = Table::read("data/strain/ngspice_oracle.csv");
    let row = n23(&table);
    let mut report = Report::new("n23: load cell with leads, loaded output");
    let mut bridge = full(row.number("r1_unstrained_ohm"));
    bridge.supply_leads = Pair::Same(row.number("supply_lead_ohm"));
    bridge.signal_leads = Pair::Same(row.number("signal_lead_ohm"));
    bridge.input_resistance = Some(row.number("input_ohm"));
    // percent of the rated load; the row states 2.1147 mV/V and a share of 0.637
    let law = Transducer::Rated { output: 2.1147e-3, capacity: 100.0 };
    let volts = |bridge| Chain {
        reading: Reading { signal: Signal::Volts, exponent: 0 },
        supply: Supply::Fixed(row.number("source_V")),
        ..chain(bridge, law, 150.0)
    };
    let exact = row.number("exact_V");
    // 5e-16 V/V over 2.1147e-5 V/V per percent is 2.4e-11
    let allowed = (1e-12_f64 * 63.7).max(5e-16 / 2.1147e-5);
    report.check("load, %", row.at(), "n23", 63.7, one(&volts(bridge), exact), allowed);
    let back = volts(bridge).plan().unwrap().forward(63.7, Inputs::default()).unwrap();
    report.check("output, V", row.at(), "n23", exact, back, 1e-12 * exact);
    // the supply with every reading
    let column = Chain { supply: Supply::Column { exponent: 0 }, ..volts(bridge) };
    let inputs = Inputs { reading: exact, supply: row.number("source_V"), ..Inputs::default() };
    let load = column.plan().unwrap().one(inputs).number().unwrap();
    report.check("load, supply column", row.at(), "n23", 63.7, load, allowed);
    // the supply measured at the bridge (row vbridge), without the leads in the supply: the same load
    let vbridge = table.rows().find(|r| r.text("case") == "n23" && r.text("output") == "vbridge").expect("the row");
    let sensed = Chain { supply: Supply::Fixed(vbridge.number("exact_V")), ..volts(Bridge { sensed: true, ..bridge }) };
    report.check("load, sensed", vbridge.at(), "n23", 63.7, one(&sensed, exact), allowed);
    // its leads warm: stated 50 K colder, they are those of the row when they have warmed by 50 K
    let mut cold = bridge;
    let factor = 1.0 + 0.00393 * 50.0;
    cold.supply_leads = Pair::Same(row.number("supply_lead_ohm") / factor);
    cold.signal_leads = Pair::Same(row.number("signal_lead_ohm") / factor);
    let mut warming = volts(cold);
    warming.lead_warmth =
        Some(LeadWarmth { coefficient: 0.00393, reference_celsius: 20.0, temperature: Temperature::Column });
    let inputs = Inputs { reading: exact, lead_celsius: 70.0, ..Inputs::default() };
    let load = warming.plan().unwrap().one(inputs).number().unwrap();
    report.check("load, leads that warmed", row.at(), "n23", 63.7, load, allowed);
    // left out, they are seen
    let bare = one(&volts(Bridge { supply_leads: Pair::none(), signal_leads: Pair::none(), ..bridge }), exact);
    report.equal("leads left out show", row.at(), "n23", true, (bare - 63.7).abs() > 0.5);
    report.finish();
}

#[test]
fn shunts_across_an_arm() {
    let table = Table::read("data/strain/shunt_transducer.csv");
    let mut report = Report::new("Clegg 2005: shunt across an arm of a transducer");
    for row in table.rows() {
        // mV/V = 1000 R/(4 Rc + 2 R); as a load of a transducer of 2 mV/V at 50 kN: 25 kN per mV/V
        let cell = chain(full(row.number("bridge_ohm")), Transducer::Rated { output: 2e-3, capacity: 50.0 }, 100.0);
        let (ohms, printed) = (row.number("Rc_ohm"), row.number("mV_per_V"));
        let half = row.half_digit("mV_per_V").max(1e-12 * printed).max(5e-13);
        for (arm, sign) in [(1, -1.0), (2, 1.0), (3, -1.0), (4, 1.0)] {
            for place in [Place::Gauge, Place::Instrument] {
                let shunt = Shunt { arm, ohms, place };
                let input = format!("{ohms} across {arm}, {place:?}");
                let load = cell.simulated(shunt, 0.0, &Inputs::default()).unwrap();
                report.check("load, kN", row.at(), &input, sign * 25.0 * printed, load, 25.0 * half);
                let reading = cell.with_shunt(shunt).unwrap().plan().unwrap().forward(0.0, 0.0).unwrap();
                report.check("mV/V", row.at(), &input, sign * printed, 1e3 * reading, half);
                let back = cell.shunt_for(arm, place, load, &Inputs::default()).unwrap();
                report.check("resistor, ohm", row.at(), &input, ohms, back, 1e-9 * ohms);
            }
        }
    }
    report.finish();
}

/// The certified polynomial of Pontius, deflection of a load; read as if a deflection of 1 were 1 mV/V.
fn pontius(gives_output: bool) -> Certificate {
    let table = Table::read("data/strain/pontius_certified.csv");
    let b = |name| table.rows().find(|r| r.text("name") == name).expect("a coefficient").number("certified");
    Certificate {
        coefficients: [b("B0"), b("B1"), b("B2"), 0.0, 0.0, 0.0, 0.0],
        gives_output,
        output_exponent: -3,
        load_scale: 1.0,
        range: [150_000.0, 3_000_000.0],
    }
}

#[test]
fn a_certificate_polynomial_is_inverted() {
    let mut report = Report::new("NIST Pontius: the load of a deflection");
    let cell = |scale| {
        // the range a little wider than the calibration, so that a deflection that was rounded at its end is inside
        let law = Certificate { load_scale: scale, range: [149_999.0, 3_000_001.0], ..pontius(true) };
        let mut chain = chain(full(350.0), Transducer::Certificate(law), 1e8);
        chain.reading.exponent = -3;
        chain
    };
    // 5e-16 V/V over 7.3e-10 V/V per unit of load is 7e-7, and 1e-12 of 3 000 000 is 3e-6
    let allowed = 3e-6;
    let table = Table::read("data/strain/calibration_inverse.csv");
    for row in table.rows() {
        let load = one(&cell(1.0), row.number("deflection"));
        report.check(
            "published",
            row.at(),
            "1.239722",
            row.number("published_load"),
            load,
            row.half_digit("published_load"),
        );
        report.check("computed", row.at(), "1.239722", row.number("load"), load, row.half_digit("load").max(allowed));
        // in another unit of load
        let other = one(&cell(4.448e-3), row.number("deflection"));
        report.check("scaled", row.at(), "1.239722", 4.448e-3 * row.number("load"), other, 4.448e-3 * allowed);
        let forward = cell(1.0).plan().unwrap().forward(load, 0.0).unwrap();
        report.check("forward", row.at(), "1.239722", row.number("deflection"), forward, 1e-12 * 1.24);
    }
    // the curve itself at the loads of the calibration: the certified residual standard deviation is 0.000 205, and no residual
    // of 40 observations exceeds three of them
    let data = Table::read("data/strain/pontius_data.csv");
    for row in data.rows() {
        let y = cell(1.0).plan().unwrap().forward(row.number("x"), 0.0).unwrap();
        report.check("data, within 3 s", row.at(), row.text("x"), row.number("y"), y, 3.0 * 0.000_205_177_424_076_185);
        let load = one(&cell(1.0), y);
        report.check("back", row.at(), row.text("x"), row.number("x"), load, allowed);
    }
    report.equal("rows", "the tables", "rows", (40, 1), (data.rows().count(), table.rows().count()));
    report.finish();
}

#[test]
fn a_certificate_of_loads_is_run_forwards() {
    // load = 10 + 1000 x + 5 x², x the output in mV/V: at x = 2 it is 2030; at 2030 the output is 2, by hand
    let law = Certificate {
        coefficients: [10.0, 1000.0, 5.0, 0.0, 0.0, 0.0, 0.0],
        gives_output: false,
        output_exponent: -3,
        load_scale: 1.0,
        range: [-2000.0, 2500.0],
    };
    let cell = chain(full(350.0), Transducer::Certificate(law), 1e4);
    assert!((one(&cell, 2e-3) - 2030.0).abs() < 2e-9);
    let y = cell.plan().unwrap().forward(2030.0, 0.0).unwrap();
    assert!((y - 2e-3).abs() < 2e-15, "{y}");
    // the range ends at the loads −2000 and 2500, and 1 % of these 4500 is 45: x = (−1000 + √(10⁶ − 20 (10 − load)))/10
    let plan = cell.plan().unwrap();
    let wide = Chain { extrapolate: true, ..cell }.plan().unwrap();
    for load in [-2045.0, 2545.0_f64] {
        let x = 1e-3 * (-1000.0 + libm::sqrt(1e6 - 20.0 * (10.0 - load))) / 10.0;
        let (inside, outside) = (x * (1.0 - 1e-12), x * (1.0 + 1e-12));
        assert_eq!(plan.one(inside).word, Word::Good, "{load}");
        let out = plan.one(outside);
        assert!(out.word == Word::OutOfRange && out.value.is_nan(), "{load}: {out:?}");
        assert_eq!(wide.one(inside).word, Word::Good, "{load}");
        for reading in [outside, 1.2 * x] {
            let out = wide.one(reading);
            assert!(out.word == Word::Extrapolated && out.value.abs() > load.abs(), "{load}: {out:?}");
        }
        assert!(plan.forward(load, 0.0).is_ok());
        let next = if load > 0.0 { load.next_up() } else { load.next_down() };
        assert_eq!(plan.forward(next, 0.0), Err(Error::Flagged(Word::OutOfRange)));
        assert!(wide.forward(next, 0.0).is_ok());
    }
}

#[test]
fn certificates_of_outputs_end_where_they_say() {
    for law in [pontius(true), Certificate { load_scale: -2.0, ..pontius(true) }] {
        let mut cell = chain(full(350.0), Transducer::Certificate(law), 1e8);
        cell.reading.exponent = -3;
        let plan = cell.plan().unwrap();
        let wide = Chain { extrapolate: true, ..cell }.plan().unwrap();
        let [b0, b1, b2, ..] = law.coefficients;
        // 1 % of a range of 2 850 000 is 28 500
        assert_eq!(law.believed(), [121_500.0, 3_028_500.0]);
        for (load, inward) in [(121_500.0, 1.0), (3_028_500.0, -1.0)] {
            let y = b0 + load * (b1 + load * b2);
            let (inside, outside) = (y * (1.0 + 1e-12 * inward), y * (1.0 - 1e-12 * inward));
            assert_eq!(plan.one(inside).word, Word::Good, "{load}");
            assert_eq!(plan.one(outside).word, Word::OutOfRange, "{load}");
            assert_eq!(wide.one(outside).word, Word::Extrapolated, "{load}");
        }
        assert_eq!(plan.one(f64::NAN).word, Word::Missing);
        // y = u: beyond ±2/3 V/V an arm has less than a third of its resistance, whatever the certificate covers
        assert_eq!(plan.one(-666.0).word, Word::OutOfRange);
        for broken in [-667.0, 1500.0] {
            assert_eq!(plan.one(broken).word, Word::Open, "{broken}");
            assert_eq!(wide.one(broken).word, Word::Open, "{broken}");
        }
    }
}

/// 2 mV/V at 50 kN, from 0 kN; margins common practice, by hand.
#[test]
fn a_certificate_is_read_a_little_beyond_its_ends() {
    for gives_output in [true, false] {
        let slope = if gives_output { 0.04 } else { 25.0 };
        let law = Certificate {
            coefficients: [0.0, slope, 0.0, 0.0, 0.0, 0.0, 0.0],
            gives_output,
            output_exponent: -3,
            load_scale: 1.0,
            range: [0.0, 50.0],
        };
        assert_eq!(law.believed(), [-0.5, 50.5]);
        for step in -50..=50 {
            let mut cell = chain(full(350.0), Transducer::Certificate(law), 75.0);
            cell.reading.exponent = -3;
            let at_zero = 1e-3 * f64::from(step);
            if let Element::Transducer { zero, .. } = &mut cell.element {
                zero.reading = Some(ZeroReading::AsRecorded(at_zero));
            }
            let plan = cell.plan().unwrap();
            // at full scale, however the last bits fall
            for (output, load) in [(0.0, 0.0), (2.0, 50.0), (-0.019, -0.475), (2.019, 50.475)] {
                let out = plan.one(at_zero + output);
                assert_eq!(out.word, Word::Good, "{at_zero} {output}");
                assert!((out.value - load).abs() < 5e-11, "{at_zero} {output}: {out:?}");
            }
            for output in [-0.021, 2.021] {
                assert_eq!(plan.one(at_zero + output).word, Word::OutOfRange, "{at_zero} {output}");
            }
        }
    }
    // 0.01 x² turns at 0: within 1 % of 0.05 to 20, and there is no more than rounding
    let bent = Certificate {
        coefficients: [0.0, 0.0, 1e-2, 0.0, 0.0, 0.0, 0.0],
        gives_output: true,
        output_exponent: -3,
        load_scale: 1.0,
        range: [0.5, 20.0],
    };
    assert_eq!(bent.believed(), [0.5 - 0.195, 20.195]);
    let [low, high] = Certificate { range: [0.1, 20.0], ..bent }.believed();
    assert!(low < 0.1 && low > 0.1 - 2.1e-8 && (high - 20.199).abs() < 1e-12, "{low} {high}");
}

#[test]
fn the_limit_is_in_the_unit_of_the_result() {
    // 2 mV/V at 50 kN, believed up to 55 kN: 2.2 mV/V is the last reading, either way
    let law = Transducer::Rated { output: 2e-3, capacity: 50.0 };
    let cell = chain(full(350.0), law, 55.0);
    let plan = cell.plan().unwrap();
    for sign in [1.0, -1.0] {
        assert_eq!(plan.one(sign * 2.2e-3 * (1.0 - 1e-12)).word, Word::Good);
        assert_eq!(plan.one(sign * 2.2e-3 * (1.0 + 1e-12)).word, Word::OutOfRange);
        assert!(plan.forward(sign * 55.0, 0.0).is_ok());
        assert_eq!(plan.forward(sign * 55.0_f64.next_up(), 0.0), Err(Error::Flagged(Word::OutOfRange)));
    }
    let wide = Chain { extrapolate: true, ..cell }.plan().unwrap();
    assert_eq!(wide.one(2.3e-3).word, Word::Extrapolated);
    // of a certificate in kN whose loads are given out in N: 1 mV/V per 25 kN
    let law = Certificate {
        coefficients: [0.0, 0.04, 0.0, 0.0, 0.0, 0.0, 0.0],
        gives_output: true,
        output_exponent: -3,
        load_scale: 1e3,
        range: [-100.0, 100.0],
    };
    let plan = chain(full(350.0), Transducer::Certificate(law), 55_000.0).plan().unwrap();
    assert_eq!(plan.one(2.2e-3 * (1.0 - 1e-12)).word, Word::Good);
    assert_eq!(plan.one(2.2e-3 * (1.0 + 1e-12)).word, Word::OutOfRange);
}

#[test]
fn the_zero_is_a_reading_without_load() {
    // u = (output + x₀): a zero reading of 0.013 mV/V is taken off, since a full bridge of equal arms is linear
    let law = Transducer::Rated { output: 2e-3, capacity: 50.0 };
    let mut cell = chain(full(350.0), law, 100.0);
    if let Element::Transducer { zero, .. } = &mut cell.element {
        zero.reading = Some(ZeroReading::AsRecorded(1.3e-5));
    }
    assert!((one(&cell, 2.013e-3) - 50.0).abs() < 5e-11);
    assert_eq!(one(&cell, 1.3e-5), 0.0);
    if let Element::Transducer { zero, .. } = &mut cell.element {
        zero.meaning = ZeroMeaning::Completion;
    }
    assert!(matches!(cell.plan(), Err(Error::Unfit { .. })));
}

#[test]
fn what_is_no_certificate() {
    let with = |coefficients: [f64; 7], gives_output, range| {
        let law = Certificate { coefficients, gives_output, output_exponent: -3, load_scale: 1.0, range };
        chain(full(350.0), Transducer::Certificate(law), 1e4).plan()
    };
    let unfit = |plan: Result<_, Error>| matches!(plan, Err(Error::Unfit { .. }));
    // x² turns at 0; away from it it is a certificate like any other
    assert!(unfit(with([0.0, 0.0, 1e-2, 0.0, 0.0, 0.0, 0.0], true, [-5.0, 5.0])));
    let plan = with([0.0, 0.0, 1e-2, 0.0, 0.0, 0.0, 0.0], true, [5.0, 20.0]).expect("a certificate");
    // 1 mV/V = 0.01 · 10²
    assert!((plan.one(1e-3).number().unwrap() - 10.0).abs() < 1e-10);
    assert!(unfit(with([0.0, 0.04, 0.0, 0.0, 0.0, 0.0, 0.0], true, [5.0, 5.0])));
    assert!(unfit(with([0.0, 0.0, 5.0, 0.0, 0.0, 0.0, 0.0], false, [5.0, 20.0])));
    assert!(with([0.0, f64::NAN, 0.0, 0.0, 0.0, 0.0, 0.0], true, [0.0, 1.0]).is_err());
    let law = Transducer::Rated { output: 0.0, capacity: 50.0 };
    assert!(matches!(chain(full(350.0), law, 1.0).plan(), Err(Error::Unfit { .. })));
}

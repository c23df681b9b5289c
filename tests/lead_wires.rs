//! What lead wires do: data/strain/lead_wires.csv, data/strain/awg_copper.csv, and cases n21 and n22 of
//! data/strain/ngspice_oracle.csv.
//!
//! Sources are named per row of the first table (makers' pages on leads, Application Note 078, a textbook problem,
//! constructed rows); the second is ASTM B258 / NBS Handbook 100, read in a reprint. Tolerances are half the last
//! printed digit. Some computed columns are first-order forms: they are named where they are met, and are not what a
//! chain with its leads stated gives.

mod support;

use ohmwright::Error;
use ohmwright::chain::{
    Chain, Derivative, Element, Inputs, LeadWarmth, Network, Reading, Signal, Supply, Temperature, Word,
};
use ohmwright::platinum::IEC_60751;
use ohmwright::signal::{Arm, Bridge, COPPER_OHM_METRES, Conductor, Driven, Each, Leads, Pair, Wires};
use ohmwright::strain::{Gauge, Zero, ZeroReading};
use support::report::Report;
use support::table::{Row, Table};

/// Copper, 1/K at 20 °C.
const COPPER_PER_KELVIN: f64 = 0.00393;

fn leads(wires: Wires, each: f64) -> Option<Leads> {
    Some(Leads { wires, each: Each::Same(Conductor::Ohms(each)) })
}

fn wires(row: &Row<'_>) -> Wires {
    match row.text("wires") {
        "2" => Wires::Two,
        "3" => Wires::Three,
        other => panic!("{}: {other} wires", row.at()),
    }
}

/// Reading per strain at zero, V/V.
fn sensitivity(chain: &Chain) -> f64 {
    1.0 / chain.derivative(Derivative::Reading, 0.0, &Inputs::default()).unwrap()
}

/// Share of the sensitivity that the leads leave.
fn factor(row: &Row<'_>) -> f64 {
    let (r, each) = (row.number("gauge_ohm"), row.number("lead_ohm_each"));
    let bare = if row.text("wires") == "4" {
        // a transducer: four active arms, so that its input resistance is that of one arm
        let arm = |factor| Arm::Active { factor, driven: Driven::Along };
        Bridge::equal(r, [arm(1.0), arm(-1.0), arm(1.0), arm(-1.0)])
    } else {
        Bridge::one_gauge(r)
    };
    let mut wired = bare;
    if row.text("wires") == "4" {
        wired.supply_leads = Pair::Same(each);
    } else {
        wired.leads = leads(wires(row), each);
        wired.balanced = true;
    }
    let gauge = Gauge::new(2.0);
    sensitivity(&Chain::strain(wired, gauge)) / sensitivity(&Chain::strain(bare, gauge))
}

/// Output over supply at zero strain of a bridge that was balanced with `cold` leads and is read with `warm` ones.
fn warmed(wires: Wires, r: f64, cold: f64, warm: f64) -> f64 {
    let mut bridge = Bridge::one_gauge(r);
    if wires == Wires::Two {
        // arm 2 keeps the leads of the balance
        bridge.resistances[1] = r + 2.0 * cold;
    }
    bridge.leads = leads(wires, warm);
    Chain::strain(bridge, Gauge::new(2.0)).plan().unwrap().forward(0.0, Inputs::default()).unwrap()
}

/// Strain that a chain with the leads of the balance reads there.
fn read(wires: Wires, r: f64, cold: f64, gauge_factor: f64, y: f64) -> f64 {
    let mut bridge = Bridge::one_gauge(r);
    bridge.leads = leads(wires, cold);
    bridge.balanced = true;
    Chain::strain(bridge, Gauge::new(gauge_factor)).plan().unwrap().one(y).number().unwrap()
}

#[test]
fn every_row() {
    let table = Table::read("data/strain/lead_wires.csv");
    let mut report = Report::new("lead wires");
    for row in table.rows() {
        let (at, id, quantity) = (row.at(), row.text("id"), row.text("quantity"));
        let (printed, computed) = (row.maybe("published"), row.number("computed"));
        let half = row.half_digit("computed");
        match quantity {
            "factor" | "percent_loss" => {
                let left = factor(&row);
                let ours = if quantity == "factor" { left } else { 100.0 * (1.0 - left) };
                if id == "cable_10ft_28awg" {
                    // computed as 2 r/R; the exact 2 r/(R + 2 r) is 0.369 47, which prints as the same 0.37
                    report.check("exact loss, %", at, id, 0.369_47, ours, 5e-6);
                    report.equal("2 r/R not reproduced", at, id, true, (ours - computed).abs() > 1e-3);
                } else {
                    report.check("factor and loss, computed", at, id, computed, ours, half);
                }
                if let Some(printed) = printed {
                    report.check("factor and loss, published", at, id, printed, ours, row.half_digit("published"));
                }
            }
            "round_trip_ohm" => {
                let (_, text) = row.text("case").rsplit_once(" of ").unwrap();
                let area: f64 = text.strip_suffix(" mm2").unwrap().parse().unwrap();
                let run = |rho| Conductor::Run { metres: 10.0, square_millimetres: area, ohm_metres: rho };
                // the column is computed with 0.017 241 Ω mm²/m
                report.check("round trip, computed", at, id, computed, 2.0 * run(0.017_241e-6).ohms(), half);
                // the library's copper, 1/58 Ω mm²/m, is that number before rounding
                let ours = 2.0 * run(COPPER_OHM_METRES).ohms();
                report.check("round trip, 1/58", at, id, computed, ours, half + 3e-5 * computed);
                // 4.4, 3.2 and 1.2 Ω are printed for 4.31, 3.13 and 1.149 Ω: they do not follow from the area
                let follows = (printed.unwrap() - ours).abs() <= row.half_digit("published");
                report.equal("printed round trip follows from the area", at, id, area == 0.5, follows);
            }
            "apparent_ue_first_order" | "apparent_ue" => {
                let (r, cold, f) = (row.number("gauge_ohm"), row.number("lead_ohm_each"), row.number("gauge_factor"));
                match wires(&row) {
                    Wires::Two => {
                        let y = warmed(Wires::Two, r, cold, 0.59);
                        // a chain to which the leads were not stated takes gauge and leads for one gauge: then
                        // u = 2 ΔL/(R + 2 L) is read as F e, whatever its size
                        let blind = Chain::strain(Bridge::one_gauge(r), Gauge::new(f)).plan().unwrap();
                        let shown = blind.one(y).number().unwrap();
                        report.check("apparent strain, leads unstated", at, id, computed, shown, half);
                        // with the leads stated it is the gauge's own ΔR: 2 ΔL/(R F) = 0.08/240
                        let ours = read(Wires::Two, r, cold, f, y);
                        report.check("apparent strain, leads stated", at, id, 0.08 / 240.0 * 1e6, ours, 1e-9);
                    }
                    _ => {
                        let y = warmed(Wires::Three, r, cold, 0.59);
                        // zero within what 5e-16 V/V is worth
                        let ours = read(Wires::Three, r, cold, f, y);
                        report.check("apparent strain, three wires", at, id, computed, ours, 5e-16 * 4.0 / f * 1e6);
                        report.check("three wires, published", at, id, printed.unwrap(), ours, 1e-9);
                    }
                }
            }
            "apparent_ue_linear" | "apparent_ue_exact" => {
                let (r, cold, f) = (row.number("gauge_ohm"), row.number("lead_ohm_each"), row.number("gauge_factor"));
                let warm = cold * (1.0 + COPPER_PER_KELVIN * row.number("dT_K"));
                let y = warmed(Wires::Two, r, cold, warm);
                if quantity == "apparent_ue_linear" {
                    report.check("4 y/F", at, id, computed, 1e6 * 4.0 * y / f, half);
                    let ours = read(Wires::Two, r, cold, f, y);
                    report.equal("4 y/F not given", at, id, true, (ours - computed).abs() > 10.0);
                } else {
                    report.check("exact apparent strain", at, id, computed, read(Wires::Two, r, cold, f, y), half);
                }
            }
            other => report.fail("known quantity", at, other),
        }
    }
    report.equal("rows", "the table", "rows", 17, table.rows().count());
    report.finish();
}

/// Warmed leads of two wires as two resistances of their own give the same as one value for both.
#[test]
fn own_conductors_add_up() {
    let own = |a, b| Leads {
        wires: Wires::Two,
        each: Each::Own([Conductor::Ohms(a), Conductor::Ohms(b), Conductor::Ohms(7.0)]),
    };
    let mut bridge = Bridge::one_gauge(120.0);
    bridge.balanced = true;
    bridge.leads = Some(own(0.25, 0.75));
    let apart = Chain::strain(bridge, Gauge::new(2.0)).plan().unwrap();
    // 1 Ω in all: u = 120 · 0.002/121, y = u/(4 + 2 u) = 0.24/484.48
    let y: f64 = 0.24 / 484.48;
    assert!((apart.forward(1000.0, Inputs::default()).unwrap() / y - 1.0).abs() < 1e-12);
    bridge.leads = leads(Wires::Two, 0.5);
    let alike = Chain::strain(bridge, Gauge::new(2.0)).plan().unwrap();
    assert!((alike.one(y).number().unwrap() / 1000.0 - 1.0).abs() < 1e-12);
    assert!((apart.one(y).number().unwrap() / 1000.0 - 1.0).abs() < 1e-12);
}

/// Three wires that are not alike: one in arm 1, one in arm 2, the third only in series with the output.
#[test]
fn unequal_three_wires() {
    let mut bridge = Bridge::one_gauge(120.0);
    let each = [1.0, 2.0, 5.0].map(Conductor::Ohms);
    bridge.leads = Some(Leads { wires: Wires::Three, each: Each::Own(each) });
    let forward = |bridge: Bridge| {
        Chain::strain(bridge, Gauge::new(2.0)).plan().unwrap().forward(0.0, Inputs::default()).unwrap()
    };
    // unloaded: 121/(121 + 122) − 1/2 = −1/486
    let y: f64 = -1.0 / 486.0;
    assert!((forward(bridge) / y - 1.0).abs() < 1e-12);
    // loaded with 1 kΩ: source resistance 121·122/243 + 5 + 60, so y · 1000/(1000 + 121·122/243 + 65)
    bridge.input_resistance = Some(1000.0);
    let loaded = y * 1000.0 / (1065.0 + 121.0 * 122.0 / 243.0);
    assert!((forward(bridge) / loaded - 1.0).abs() < 1e-12);
}

/// ASTM B258: wire of gauge number n is 0.005 in × 92^((36 − n)/39) thick.
#[test]
fn copper_wire_by_gauge_number() {
    let table = Table::read("data/strain/awg_copper.csv");
    let mut report = Report::new("ASTM B258 / NBS Handbook 100: annealed copper, 100 ft at 20 degC");
    const INCH: f64 = 25.4; // mm
    const QUARTER_PI: f64 = std::f64::consts::FRAC_PI_4;
    // 10.371 Ω circular-mil/ft, 100 % IACS: a circular mil is π/4 (0.001 in)²
    let iacs = 10.371 * QUARTER_PI * (1e-3 * INCH) * (1e-3 * INCH) * 1e-6 / (12e-3 * INCH);
    for row in table.rows() {
        let n = row.number("awg");
        let d = 0.005 * INCH * libm::pow(92.0, (36.0 - n) / 39.0);
        let run =
            |metres, rho| Conductor::Run { metres, square_millimetres: QUARTER_PI * d * d, ohm_metres: rho }.ohms();
        let printed = row.number("published_ohm_per_100ft");
        // four significant digits; the zeros that the reprint adds are not figures
        let text = format!("{printed:.3e}");
        let (_, exponent) = text.split_once('e').unwrap();
        let half = support::table::half_digit(&format!("1.000e{exponent}"));
        report.check("published", row.at(), n, printed, run(30.48, COPPER_OHM_METRES), half);
        let (computed, half) = (row.number("computed_ohm_per_100ft"), row.half_digit("computed_ohm_per_100ft"));
        report.check("computed", row.at(), n, computed, run(30.48, iacs), half);
        let off = 100.0 * (run(30.48, iacs) / printed - 1.0);
        let column = "formula_minus_published_percent";
        report.check("formula against print, %", row.at(), n, row.number(column), off, row.half_digit(column));
        let metre = row.number("ohm_per_m");
        report.check("print per metre", row.at(), n, metre, printed / 30.48, row.half_digit("ohm_per_m"));
    }
    report.equal("rows", "the table", "rows", 10, table.rows().count());
    report.finish();
}

#[test]
fn wire_gauges_give_the_published_ohms() {
    // ASTM B258 / NBS Handbook 100 (data/strain/awg_copper.csv): ohm per 100 ft of annealed copper at 20 °C. The formula with
    // the standard's own resistivity, 10.371 ohm circular-mil per foot (100 % IACS), misses the print by at most 0.0234 %
    // (column formula_minus_published_percent): that is the tolerance here, in the table's own figures.
    let table = Table::read("data/strain/awg_copper.csv");
    for row in table.rows() {
        let area = ohmwright::signal::awg_square_millimetres(row.number("awg") as i8).expect("a gauge");
        // 1/58 Ω mm²/m and 10.371 Ω cmil/ft agree to 5e-5
        let ohms_per_100_ft = 30.48 / 58.0 / area;
        let computed = row.number("computed_ohm_per_100ft");
        assert!((ohms_per_100_ft / computed - 1.0).abs() < 6e-5, "{ohms_per_100_ft} {computed}");
        let published = row.number("published_ohm_per_100ft");
        let miss = row.number("formula_minus_published_percent").abs() + 0.006;
        assert!((ohms_per_100_ft / published - 1.0).abs() * 100.0 < miss, "{ohms_per_100_ft} {published}");
    }
    assert!(ohmwright::signal::awg_square_millimetres(41).is_err());
}

/// The leads' own temperature: copper, stated at 20 °C.
fn copper(temperature: Temperature) -> Option<LeadWarmth> {
    Some(LeadWarmth { coefficient: COPPER_PER_KELVIN, reference_celsius: 20.0, temperature })
}

fn at_lead(reading: f64, lead_celsius: f64) -> Inputs {
    Inputs { reading, lead_celsius, ..Inputs::default() }
}

#[test]
fn warmed_leads_by_their_temperature() {
    let mut report = Report::new("leads that warm");
    let table = Table::read("data/strain/lead_wires.csv");
    let row = table.rows().find(|r| r.text("id") == "constructed_1_exact").expect("the row");
    let (r, f, warming) = (row.number("gauge_ohm"), row.number("gauge_factor"), row.number("dT_K"));
    let mut bridge = Bridge::one_gauge(r);
    bridge.leads = leads(Wires::Two, row.number("lead_ohm_each"));
    bridge.balanced = true;
    let cold = Chain::strain(bridge, Gauge::new(f));
    let warm = Chain { lead_warmth: copper(Temperature::Column), ..cold };
    let plan = warm.plan().unwrap();
    let floor = 5e-16 * 4.0 / f * 1e6;
    // an unstrained gauge, its leads 17 K warmer than at balance: what a chain that leaves them cold reads
    let y = plan.forward(0.0, at_lead(0.0, 20.0 + warming)).unwrap();
    let read = cold.plan().unwrap().one(y).number().unwrap();
    report.check(
        "cold leads read",
        row.at(),
        "constructed_1_exact",
        row.number("computed"),
        read,
        row.half_digit("computed"),
    );
    // and what one that knows reads: nothing; by a column, by one value, and by one value with the balance elsewhere
    let known = plan.one(at_lead(y, 20.0 + warming)).number().unwrap();
    report.check("known leads read", row.at(), "column", 0.0, known, floor);
    let zero = Zero { lead_celsius: Some(20.0), ..Zero::default() };
    let fixed = Chain { lead_warmth: copper(Temperature::Fixed(20.0 + warming)), ..cold.zeroed(zero) };
    report.check("known leads read", row.at(), "fixed", 0.0, fixed.plan().unwrap().one(y).number().unwrap(), floor);
    report.check("forward", row.at(), "fixed", y, fixed.plan().unwrap().forward(0.0, 0.0).unwrap(), 1e-12 * y);
    // leads of one temperature were as warm at balance, unless stated otherwise: then arm 2 has them warm
    let fixed = Chain { lead_warmth: copper(Temperature::Fixed(20.0 + warming)), ..cold };
    report.equal("balanced warm", row.at(), "fixed", Ok(0.0), fixed.plan().unwrap().forward(0.0, 0.0));
    // the textbook problem, 0.55 → 0.59 ohm: the gauge's own ΔR that they imitate, 2 ΔL/(R F) = 0.08/240
    bridge.resistances = [120.0; 4];
    bridge.leads = leads(Wires::Two, 0.55);
    let cold = Chain::strain(bridge, Gauge::new(2.0));
    let warm = Chain { lead_warmth: copper(Temperature::Column), ..cold }.plan().unwrap();
    let lead = 20.0 + 0.04 / 0.55 / COPPER_PER_KELVIN;
    let y = warm.forward(0.0, at_lead(0.0, lead)).unwrap();
    report.check(
        "textbook",
        row.at(),
        "0.59 ohm",
        0.08 / 240.0 * 1e6,
        cold.plan().unwrap().one(y).number().unwrap(),
        1e-8,
    );
    report.check("textbook, by hand", row.at(), "0.59 ohm", 121.18 / 242.28 - 0.5, y, 1e-15);
    report.finish();
}

#[test]
fn warmed_leads_of_the_circuit_simulator() {
    let table = Table::read("data/strain/ngspice_oracle.csv");
    let mut report = Report::new("n21, n22: leads of 0.937 ohm that have warmed by 23.4 K");
    for (case, wires) in [("n21", Wires::Two), ("n22", Wires::Three)] {
        let row = table.rows().find(|r| r.text("case") == case).expect("the case");
        let mut bridge = Bridge::one_gauge(row.number("r1_unstrained_ohm"));
        bridge.resistances[2] = row.number("r3_unstrained_ohm");
        bridge.resistances[3] = row.number("r4_unstrained_ohm");
        bridge.leads = leads(wires, 0.937);
        // balanced cold: the row's arm 2 holds both leads of the two-wire gauge, 120.1 + 2 · 0.937
        bridge.balanced = true;
        bridge.input_resistance = row.maybe("input_ohm");
        let f = row.number("f1");
        let mut chain = Chain::strain(bridge, Gauge::new(f));
        chain.reading = Reading { signal: Signal::Volts, exponent: 0 };
        chain.supply = Supply::Fixed(row.number("source_V"));
        let exact = row.number("exact_V");
        for (form, temperature) in [("column", Temperature::Column), ("fixed", Temperature::Fixed(43.4))] {
            let zero = Zero { lead_celsius: Some(20.0), ..Zero::default() };
            let plan = Chain { lead_warmth: copper(temperature), ..chain.zeroed(zero) }.plan().unwrap();
            let inputs = at_lead(exact, 43.4);
            let got = plan.forward(0.0, inputs).unwrap();
            report.check(&format!("{case}, V, {form}"), row.at(), case, exact, got, 4e-16 * 3.059);
            let e = plan.one(inputs).number().unwrap();
            report.check(&format!("{case}, microstrain, {form}"), row.at(), case, 0.0, e, 5e-16 * 4.0 / f * 1e6);
        }
        // a chain that leaves them cold reads 2 · 0.937 · 0.00393 · 23.4 ohm as strain of the two-wire gauge
        let read = chain.plan().unwrap().one(exact).number().unwrap();
        let hand = if wires == Wires::Two { 1e6 * 2.0 * 0.937 * 0.00393 * 23.4 / (120.1 * f) } else { 0.0 };
        report.check(&format!("{case}, left cold"), row.at(), case, hand, read, 1e-8);
    }
    report.finish();
}

/// Everything that the leads' temperature does, on paper: three unequal wires, zeroed cold, a strained gauge read warm.
#[test]
fn unequal_wires_that_warm_after_the_zero() {
    // R = 120 all around, wires a = 1 (arm 1), b = 2 (arm 2), unloaded; F = 2; α = 0.004 at 20 °C.
    // The zero is read at 20 °C: arm 1 = 121, arm 2 = 122, y₀ = 121/243 − 1/2 = −1/486, and the gauge is unstrained: x₀ = 0.
    // At 45 °C the wires are 1.1 times as large: arm 1 = 120 (1 + 2 e) + 1.1, arm 2 = 122.2.
    // e = 1000 microstrain: 121.34/(121.34 + 122.2) − 1/2 = −0.43/243.54
    let mut bridge = Bridge::one_gauge(120.0);
    let each = [1.0, 2.0, 5.0].map(Conductor::Ohms);
    bridge.leads = Some(Leads { wires: Wires::Three, each: Each::Own(each) });
    let reading = Some(ZeroReading::Ratio(-1.0 / 486.0));
    let zero = |lead_celsius| Zero { reading, lead_celsius, ..Zero::default() };
    let warmth = |temperature| Some(LeadWarmth { coefficient: 0.004, reference_celsius: 20.0, temperature });
    let chain = Chain {
        lead_warmth: warmth(Temperature::Column),
        ..Chain::strain(bridge, Gauge::new(2.0)).zeroed(zero(Some(20.0)))
    };
    let y = -0.43 / 243.54;
    let e = chain.plan().unwrap().one(at_lead(y, 45.0)).number().unwrap();
    assert!((e - 1000.0).abs() < 2e-9, "{e}");
    let fixed = Chain { lead_warmth: warmth(Temperature::Fixed(45.0)), ..chain };
    let e = fixed.plan().unwrap().one(y).number().unwrap();
    assert!((e - 1000.0).abs() < 2e-9, "{e}");
    // The same readings with the zero read warm, at 45 °C: −1/486 is then arm 1 = 120 (1 + x₀) + 1.1 over arm 2 = 122.2, so
    // arm 1 = 122.2 · 121/122 and 120 x₀ = 122.2 · 121/122 − 121.1 = 0.098 360 656 − ... : x₀ = (14 786.2 − 14 774.2)/14 640
    // = 12/14 640. Then e = 1000 − 1e6 x₀/2 microstrain, strains of one gauge being differences.
    let warm_zero = fixed.zeroed(zero(Some(45.0)));
    let want = 1000.0 - 1e6 * 12.0 / 14_640.0 / 2.0;
    for chain in [warm_zero, Chain { lead_warmth: warmth(Temperature::Column), ..warm_zero }] {
        let e = chain.plan().unwrap().one(at_lead(y, 45.0)).number().unwrap();
        assert!((e - want).abs() < 2e-9, "{e} {want}");
    }
    // one temperature counts at zero too, unless stated otherwise
    let unstated = fixed.zeroed(zero(None));
    assert!((unstated.plan().unwrap().one(y).number().unwrap() - want).abs() < 2e-9);
}

#[test]
fn thermometers_on_wires_that_warm() {
    // Pt100 at 0 °C, two wires of 0.35 ohm at 20 °C, read at 57 °C: 100 + 0.7 (1 + 0.00393 · 37) = 100.801 787
    let chain = |wires| Chain {
        lead_warmth: copper(Temperature::Column),
        ..Chain::new(Network::Resistance { leads: leads(wires, 0.35) }, Element::Platinum(IEC_60751))
    };
    let plan = chain(Wires::Two).plan().unwrap();
    assert!(plan.one(at_lead(100.801_787, 57.0)).number().unwrap().abs() < 1e-9);
    assert!((plan.forward(0.0, at_lead(0.0, 57.0)).unwrap() - 100.801_787).abs() < 1e-12);
    // three equal wires and four wires take nothing off; four do not even ask
    let plan = chain(Wires::Three).plan().unwrap();
    assert!(plan.one(at_lead(100.0, 57.0)).number().unwrap().abs() < 1e-9);
    let four = chain(Wires::Four).plan().unwrap();
    assert!(!four.uses_lead_temperature() && four.one(100.0).number().unwrap().abs() < 1e-9);
    // copper has no resistance left below 20 − 1/0.00393 = −234.45 °C
    let plan = chain(Wires::Two).plan().unwrap();
    assert_eq!(plan.one(at_lead(100.0, -234.4)).word, Word::Good);
    assert_eq!(plan.one(at_lead(100.0, -234.5)).word, Word::OutOfRange);
}

#[test]
fn leads_that_are_none_are_refused() {
    let mut bridge = Bridge::one_gauge(120.0);
    bridge.leads = leads(Wires::Two, 0.55);
    let chain = |temperature, at_zero| Chain {
        lead_warmth: copper(temperature),
        ..Chain::strain(bridge, Gauge::new(2.0)).zeroed(Zero { lead_celsius: at_zero, ..Zero::default() })
    };
    let out = |plan: Result<_, Error>| matches!(plan, Err(Error::OutOfRange { .. }));
    assert!(out(chain(Temperature::Fixed(-240.0), None).plan()));
    assert!(out(chain(Temperature::Column, Some(-240.0)).plan()));
    assert!(matches!(chain(Temperature::None, None).plan(), Err(Error::Missing { .. })));
    assert!(chain(Temperature::Column, Some(-230.0)).plan().is_ok());
}

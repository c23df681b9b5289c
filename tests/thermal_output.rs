//! Thermal output and the gauge factor's change with temperature.
//!
//! - data/strain/thermal_output_example_lot.csv: the package polynomial of one lot, from memory, in °C and °F; its form
//!   is Micro-Measurements Tech Note TN-504 Eq. 504.5. data/strain/polynomial_values.csv: that polynomial evaluated in
//!   50 digits.
//! - data/strain/thermal_cases.csv: corrections constructed from the rules of TN-504.
//! - data/strain/thermal_output_rules.csv: the rules (TN-504, TN-513; read or from memory per row).
//!
//! - Tables of points: the monotone cubic of F. N. Fritsch and J. Butland, SIAM J. Sci. Stat. Comput. 5 (1984) 300-304,
//!   worked on paper below.
//!
//! Tolerances are half the last printed digit, never below the allowed error of the code: 4e-16 of the sum of the terms
//! of a polynomial, 1e-12 relative or 5e-16 V/V referred through the sensitivity for a strain. One case with mismatched
//! expansion is worked on paper below.

#[path = "support/circuit.rs"]
mod circuit;
mod support;

use ohmwright::chain::{Chain, Inputs, Temperature};
use ohmwright::signal::Bridge;
use ohmwright::strain::{Expansion, Gauge, Points, ThermalOutput, ThermalPoints, Zero};
use ohmwright::{Error, chain::Word};
use support::oracle::SplitMix64;
use support::report::Report;
use support::table::{Row, Table, half_digit};

fn lot(fahrenheit: bool) -> ThermalOutput {
    let table = Table::read("data/strain/thermal_output_example_lot.csv");
    let mut coefficients = [0.0; 7];
    for row in table.rows() {
        let power: usize = row.text("power").parse().unwrap();
        coefficients[power] = row.number(if fahrenheit { "a_degF" } else { "a_degC" });
    }
    ThermalOutput { coefficients, fahrenheit, gauge_factor: 2.0, range_celsius: [-50.0, 260.0] }
}

/// Sum of the magnitudes of the polynomial's terms.
fn terms(to: &ThermalOutput, t: f64) -> f64 {
    let (mut power, mut sum) = (1.0, 0.0);
    for c in to.coefficients {
        sum += (c * power).abs();
        power *= t;
    }
    sum
}

fn quarter(gauge: Gauge, zero_celsius: f64) -> Chain {
    let zero = Zero { celsius: Some(zero_celsius), ..Zero::default() };
    Chain::strain(Bridge::one_gauge(350.0), gauge).zeroed(zero)
}

/// The strain at this reading and temperature, with the temperature fixed and as a column; they are one number to
/// within the allowed error, which the caller checks on both.
fn both(chain: &Chain, y: f64, celsius: f64) -> [f64; 2] {
    let fixed = Chain { temperature: Temperature::Fixed(celsius), ..*chain }.plan().unwrap();
    let column = Chain { temperature: Temperature::Column, ..*chain }.plan().unwrap();
    assert!(column.uses_temperature() && !fixed.uses_temperature());
    [
        fixed.one(y).number().unwrap(),
        column.one(Inputs { reading: y, supply: 0.0, celsius, ..Inputs::default() }).number().unwrap(),
    ]
}

/// y of a quarter bridge whose gauge changed by x.
fn ratio(x: f64) -> f64 {
    x / (4.0 + 2.0 * x)
}

/// Allowed error of a strain in microstrain where the gauge factor is F.
fn allowed(e: f64, f: f64) -> f64 {
    (1e-12 * e.abs()).max(5e-16 * 4.0 / f * 1e6)
}

#[test]
fn polynomial_in_both_scales() {
    let table = Table::read("data/strain/polynomial_values.csv");
    let mut report = Report::new("TN-504 Eq. 504.5: example lot");
    let (celsius, fahrenheit) = (lot(false), lot(true));
    for row in table.rows() {
        let (t, printed) = (row.number("T_C"), row.number("thermal_output_ue"));
        report.equal("the two scales", row.at(), t, row.number("T_F"), 1.8 * t + 32.0);
        let floor = 4e-16 * terms(&celsius, t);
        report.check("degC", row.at(), t, printed, celsius.microstrain(t).unwrap(), floor);
        // the °F coefficients carry 17 digits: each adds its own half unit in the last place, 1.2e-16 of its term
        let floor = (4e-16 + 1.2e-16) * terms(&fahrenheit, row.number("T_F"));
        report.check("degF", row.at(), t, printed, fahrenheit.microstrain(t).unwrap(), floor);

        // a free specimen: the chain reads no strain at ΔR/R = F_d (TO(T) − TO(T₀)), T₀ where TO is known
        let f = 2.1;
        let x = 2.0e-6 * (printed + 0.02816);
        for to in [celsius, fahrenheit] {
            let gauge = Gauge { thermal_output: Some(to), ..Gauge::new(f) };
            let floor = 4.0 / f * 1e6 * 5e-16 + 8e-16 * terms(&fahrenheit, row.number("T_F"));
            for e in both(&quarter(gauge, 20.0), ratio(x), t) {
                report.check("free specimen", row.at(), t, 0.0, e, floor);
            }
        }
    }
    report.equal("rows", "the table", "rows", 7, table.rows().count());
    report.finish();
}

#[test]
fn polynomial_outside_its_range() {
    let to = lot(false);
    assert!(matches!(to.microstrain(260.1), Err(Error::OutOfRange { .. })));
    assert!(matches!(to.microstrain(f64::NAN), Err(Error::NotFinite { .. })));
    let gauge = Gauge { thermal_output: Some(to), ..Gauge::new(2.0) };
    let chain = Chain { temperature: Temperature::Column, ..quarter(gauge, 20.0) };
    let outside = Inputs { reading: 0.0, supply: 0.0, celsius: 260.1, ..Inputs::default() };
    assert_eq!(chain.plan().unwrap().one(outside).word, Word::OutOfRange);
    assert!(Chain { temperature: Temperature::Fixed(260.1), ..chain }.plan().is_err());
    // without its temperature at zero a thermal output means nothing
    assert!(matches!(chain.zeroed(Zero::default()).plan(), Err(Error::Missing { .. })));
}

fn case(row: &Row<'_>) -> Gauge {
    Gauge {
        // percent per 100 °C
        slope: row.number("gf_slope_pct_per_100C") / 1e4,
        reference_celsius: 24.0,
        thermal_output: Some(lot(false)),
        ..Gauge::new(row.number("gauge_factor_24C"))
    }
}

#[test]
fn constructed_cases() {
    let table = Table::read("data/strain/thermal_cases.csv");
    let mut report = Report::new("TN-504: correction of thermal output and gauge factor");
    for row in table.rows() {
        let (at, id) = (row.at(), row.text("id"));
        let (t, t0) = (row.number("T_C"), row.number("T0_C"));
        let to = lot(false);
        let floor = 4e-16 * terms(&to, t.abs().max(t0));
        report.check("TO(T)", at, id, row.number("TO_F2_T_ue"), to.microstrain(t).unwrap(), floor);
        report.check("TO(T0)", at, id, row.number("TO_F2_T0_ue"), to.microstrain(t0).unwrap(), floor);

        // recorded on a linear instrument at F_i, zeroed at T₀: ΔR/R = F_i × indicated
        let x = 1e-6 * row.number("instrument_F") * row.number("indicated_ue");
        let gauge = case(&row);
        let (f, corrected) = (row.number("gf_at_T"), row.number("corrected_ue"));
        let half = row.half_digit("corrected_ue").max(allowed(corrected, f));
        for e in both(&quarter(gauge, t0), ratio(x), t) {
            report.check("corrected strain", at, id, corrected, e, half);
        }
        // forwards from the corrected strain
        let column = Chain { temperature: Temperature::Column, ..quarter(gauge, t0) }.plan().unwrap();
        let y = column.forward(corrected, Inputs { celsius: t, ..Inputs::default() }).unwrap();
        report.check("reading", at, id, ratio(x), y, 1e-12 * ratio(x).abs());

        // the gauge factor at T is what a chain without thermal output divides by
        let plain = Gauge { thermal_output: None, ..gauge };
        let bare = Chain { temperature: Temperature::Fixed(t), ..quarter(plain, t0) }.plan().unwrap();
        let uncorrected = bare.one(ratio(x)).number().unwrap();
        report.check("F(T)", at, id, f, 1e6 * x / uncorrected, 1e-12 * f);
        let mistake = row.number("uncorrected_error_ue");
        let half = row.half_digit("uncorrected_error_ue").max(2.0 * allowed(uncorrected, f));
        report.check("mistake of leaving it in", at, id, mistake, uncorrected - corrected, half);

        // in indicated units: what an instrument at F_i shows of a free specimen
        let free = column.forward(0.0, Inputs { celsius: t, ..Inputs::default() }).unwrap();
        let shown = 1e6 * 4.0 * free / (1.0 - 2.0 * free) / row.number("instrument_F");
        let column = "TO_at_Fi_zeroed_ue";
        let (printed, fi) = (row.number(column), row.number("instrument_F"));
        report.check("TO at F_i, zeroed", at, id, printed, shown, row.half_digit(column).max(allowed(printed, fi)));
        report.equal("mismatch of the row", at, id, (0.0, 0.0), {
            (row.number("dalpha_1e-6_per_K"), row.number("uses_dalpha_term_ue"))
        });
    }
    report.equal("rows", "the table", "rows", 4, table.rows().count());
    report.finish();
}

#[test]
fn mismatched_expansion() {
    // Gauge factor 2.1 at 24 °C, slope 1 %/100 K, the lot above (F_d = 2.0); specimen 11.7e-6/K, data 12.1e-6/K;
    // T₀ = 20 °C, T = 70 °C; the gauge has changed by x = 0.002.
    //
    //   TO(70) = −31.8 + 193.9 − 320.95 + 112.504 − 7.827 26 = −54.173 26;  TO(20) = −0.028 16
    //   τ = [2.0 (−54.173 26 + 0.028 16) + 2.1 (11.7 − 12.1) 50] 1e-6 = (−108.290 2 − 42) 1e-6 = −150.290 2e-6
    //   F(70) = 2.1 (1 + 1e-4 · 46) = 2.109 66
    //   e = (0.002 + 0.000 150 290 2)/2.109 66 = 1019.259 122 323 03 microstrain
    //   y = 0.002/4.004
    let gauge = Gauge {
        slope: 1e-4,
        thermal_output: Some(lot(false)),
        expansion: Some(Expansion { specimen: 11.7e-6, data: 12.1e-6 }),
        ..Gauge::new(2.1)
    };
    let mut report = Report::new("mismatched expansion, worked by hand");
    let expected = 1_019.259_122_323_03;
    let y = 0.002 / 4.004;
    for e in both(&quarter(gauge, 20.0), y, 70.0) {
        report.check("strain", "70 degC", y, expected, e, allowed(expected, 2.1));
    }
    // the expansion alone: e = (0.002 + 42e-6)/2.109 66
    let alone = Gauge { thermal_output: None, ..gauge };
    let expected = 1e6 * 0.002_042 / 2.109_66;
    for e in both(&quarter(alone, 20.0), y, 70.0) {
        report.check("expansion alone", "70 degC", y, expected, e, allowed(expected, 2.1));
    }
    // a dummy beside the gauge feels the same τ: both arms scale by 1 + τ, with e only in the first.
    // (1 + F e + τ)/(2 + F e + 2 τ) − 1/2 = F e/(4 + 2 F e + 4 τ) at F e = 0.002, τ = −42e-6
    let dummy = Bridge::equal(350.0, ["e", "dummy", "0", "0"].map(circuit::arm));
    let pair = Chain::strain(dummy, alone).zeroed(Zero { celsius: Some(20.0), ..Zero::default() });
    let y = 0.002 / (4.004 - 4.0 * 42e-6);
    let expected = 1e6 * 0.002 / 2.109_66;
    for e in both(&pair, y, 70.0) {
        report.check("with a dummy", "70 degC", y, expected, e, allowed(expected, 2.1));
    }
    // the specimen that expands more than the data's adds strain-like resistance: the other sign
    let more = Gauge { expansion: Some(Expansion { specimen: 12.1e-6, data: 11.7e-6 }), ..alone };
    let y = 0.002 / 4.004;
    let expected = 1e6 * 0.001_958 / 2.109_66;
    for e in both(&quarter(more, 20.0), y, 70.0) {
        report.check("other sign", "70 degC", y, expected, e, allowed(expected, 2.1));
    }
    report.finish();
}

/// Every row of the rules: what a chain can show of it, is shown; figures that are only typical are named.
#[test]
fn rules() {
    let table = Table::read("data/strain/thermal_output_rules.csv");
    let mut report = Report::new("TN-504, TN-513: rules");
    for row in table.rows() {
        let (at, id) = (row.at(), row.text("id"));
        match id {
            "us_data_instrument_gauge_factor" => {
                report.equal("data gauge factor", at, id, row.number("value"), lot(false).gauge_factor);
            }
            "us_reference_temperature" => {
                report.equal("reference temperature", at, id, row.number("value"), Gauge::new(2.0).reference_celsius);
            }
            "european_reference_temperature" => {
                // zero within 0.03 microstrain: −0.028 16
                let zero = lot(false).microstrain(row.number("value")).unwrap();
                report.check("the lot at 20 degC", at, id, -0.028_16, zero, 4e-16 * terms(&lot(false), 20.0));
            }
            "published_worked_setting" => {
                // an instrument set to 2.10 shows 2.0/2.10 of the data: 0.9523809524
                let setting = row.number("value");
                let free = Gauge { thermal_output: Some(lot(false)), ..Gauge::new(setting) };
                let at_zero = quarter(free, 20.0);
                let y = Chain { temperature: Temperature::Fixed(100.0), ..at_zero }.plan().unwrap();
                let y = y.forward(0.0, Inputs::default()).unwrap();
                let instrument = Chain::strain(Bridge::one_gauge(350.0), Gauge::new(setting)).plan().unwrap();
                let share = instrument.one(y).number().unwrap() / (-114.4 + 0.028_16);
                report.check("share of the data", at, id, 0.952_380_952_4, share, half_digit("0.9523809524"));
            }
            "rule_gf_change" => {
                // ε₂ = ε₁ F₁/F₂ at one ΔR/R
                let read = |f| {
                    let chain = Chain::strain(Bridge::one_gauge(350.0), Gauge::new(f));
                    chain.plan().unwrap().one(4e-4).number().unwrap()
                };
                report.check("other gauge factor", at, id, read(2.0) * 2.0 / 2.1, read(2.1), 1e-12 * read(2.1));
            }
            "constantan_gauge_factor_slope" | "k_alloy_gauge_factor_slope" => {
                // percent per 100 °C: F(124 °C) = F (1 ± 0.01); ΔR/R = 0.002 reads 1000/1.01 and 1000/0.99
                let percent = row.number("value");
                let gauge = Gauge { slope: percent / 1e4, ..Gauge::new(2.0) };
                let chain = Chain::strain(Bridge::one_gauge(350.0), gauge);
                let expected = 1000.0 / (1.0 + percent / 100.0);
                for e in both(&chain, ratio(0.002), 124.0) {
                    report.check("slope", at, id, expected, e, 1e-12 * expected);
                }
            }
            "published_scatter_A_alloy_2sigma" | "published_scatter_K_alloy_2sigma" => {
                // 0.15 and 0.25 per °F in the note; no law of the library, only the table is checked
                let per_fahrenheit = if id.contains("_A_") { 0.15 } else { 0.25 };
                report.check("scatter per K", at, id, row.number("value"), 1.8 * per_fahrenheit, 5e-3);
            }
            "published_scatter_at_275F_A" | "published_scatter_at_275F_K" => {
                let per_fahrenheit = if id.ends_with('A') { 0.15 } else { 0.25 };
                report.check("scatter at 275 degF", at, id, row.number("value"), per_fahrenheit * 200.0, 0.5);
            }
            // shown by the cases above
            "rule_gauge_factor" | "rule_simultaneous" | "rule_expansion" | "rule_physics" => {
                report.equal("a rule without a value", at, id, None, row.maybe("value"));
            }
            // figures of an alloy whose factor is no straight line over 900 K: nothing to convert
            "pt_w_gauge_factor_25C" | "pt_w_gauge_factor_900C" => {}
            other => report.fail("known rule", at, other),
        }
    }
    report.finish();
}

fn table(points: &[[f64; 2]]) -> ThermalPoints {
    ThermalPoints { points: Points::new(points).unwrap(), gauge_factor: 2.0 }
}

/// Values of tables of points on paper.
///
/// With h the steps in temperature and d = Δv/h, the slope at an inner point is 0 where d changes its sign, else the weighted
/// harmonic mean m = (w₀ + w₁)/(w₀/d₀ + w₁/d₁), w₀ = 2 h₁ + h₀, w₁ = h₁ + 2 h₀; at an end the three-point formula
/// m = ((2 h₀ + h₁) d₀ − h₀ d₁)/(h₀ + h₁), h₀ and d₀ of the near interval, but 0 where its sign is not that of d₀, and 3 d₀ at
/// most where d₀ and d₁ differ in sign. Between two points Hermite's cubic: in the middle (v₀ + v₁)/2 + h (m₀ − m₁)/8.
#[test]
fn points_by_hand() {
    let mut report = Report::new("Fritsch and Butland 1984: points, worked by hand");
    // (0, 0) (10, 30) (30, 50) (40, 40): h = 10 20 10, d = 3 1 −1
    //   m₀ = (40 · 3 − 10 · 1)/30 = 11/3;  m₁ = 90/(50/3 + 40/1) = 27/17;  m₂ = 0;  m₃ = (40 · (−1) − 10 · 1)/30 = −5/3
    let four = table(&[[0.0, 0.0], [10.0, 30.0], [30.0, 50.0], [40.0, 40.0]]);
    let a = [
        (0.0, 0.0),
        // a quarter of the way: 30 · 5/32 + 10 (9/64 · 11/3 − 3/64 · 27/17) = 75/16 + 75/17
        (2.5, 75.0 / 16.0 + 75.0 / 17.0),
        (5.0, 15.0 + 10.0 / 8.0 * (11.0 / 3.0 - 27.0 / 17.0)),
        (10.0, 30.0),
        (20.0, 40.0 + 20.0 / 8.0 * 27.0 / 17.0),
        (30.0, 50.0),
        (35.0, 45.0 + 10.0 / 8.0 * 5.0 / 3.0),
        (40.0, 40.0),
    ];
    // (0, 0) (10, 1) (20, 100): d = 0.1 9.9; the three-point slope at 0 would be −4.8: it is 0. At 10, w₀ = w₁ = 30:
    // 60/(30/0.1 + 30/9.9) = 0.198. In the middle 0.5 − 10 · 0.198/8 = 0.2525
    let flat = table(&[[0.0, 0.0], [10.0, 1.0], [20.0, 100.0]]);
    // (0, 0) (10, 1) (20, −99): d = 0.1 −10; the three-point slope at 0 would be 5.15: it is 0.3. At 10 it is 0
    let steep = table(&[[0.0, 0.0], [10.0, 1.0], [20.0, -99.0]]);
    let b = [(5.0, 0.2525)];
    let c = [(5.0, 0.5 + 10.0 * 0.3 / 8.0)];
    // two points are a line
    let line = table(&[[-10.0, 5.0], [30.0, -15.0]]);
    let d = [(-10.0, 5.0), (0.0, 0.0), (30.0, -15.0)];
    for (name, points, values) in [("four", four, &a[..]), ("flat", flat, &b), ("steep", steep, &c), ("line", line, &d)]
    {
        // each at zero where the table is known to be `at_zero`
        let [start, at_zero] = if name == "line" { [-10.0, 5.0] } else { [0.0, 0.0] };
        for (t, want) in values {
            let floor = 4e-16 * 200.0;
            report.check("table", name, t, *want, points.microstrain(*t).unwrap(), floor);
            // a gauge of F = 2.0 whose resistance has not changed: e = −(P(T) − P(T₀))
            let gauge = Gauge { thermal_points: Some(points), ..Gauge::new(2.0) };
            let chain = quarter(gauge, start);
            let allowed = floor + allowed(*want, 2.0);
            for e in both(&chain, 0.0, *t) {
                report.check("chain", name, t, at_zero - want, e, allowed);
            }
            // the same gauge with a temperature of its own
            let mut own = chain;
            own.arm_temperatures[0] = Temperature::Column;
            let zero = Zero { arm_celsius: [Some(start), None, None, None], ..Zero::default() };
            let inputs = Inputs { arm_celsius: [*t, 0.0, 0.0, 0.0], ..Inputs::default() };
            let e = own.zeroed(zero).plan().unwrap().one(inputs).number().unwrap();
            report.check("own temperature", name, t, at_zero - want, e, allowed);
            // beside a dummy that feels the same: nothing to take off
            let dummy = Bridge::equal(350.0, ["e", "dummy", "0", "0"].map(circuit::arm));
            let pair = Chain::strain(dummy, gauge).zeroed(Zero { celsius: Some(start), ..Zero::default() });
            for e in both(&pair, 0.0, *t) {
                report.check("with a dummy", name, t, 0.0, e, allowed);
            }
        }
    }
    report.finish();
}

/// Between two points the curve stays between them, through every point, and turns nowhere else.
#[test]
fn points_do_not_overshoot() {
    let mut s = SplitMix64(5);
    for round in 0..300 {
        let count = 2 + round % 23;
        let (mut t, mut v) = (s.uniform(-80.0, 0.0), 0.0);
        let mut points = Vec::new();
        for _ in 0..count {
            t += s.uniform(0.5, 30.0);
            v = if s.word() & 3 == 0 { v } else { s.uniform(-200.0, 200.0) };
            points.push([t, v]);
        }
        let table = table(&points);
        for pair in points.windows(2) {
            let ([t0, v0], [t1, v1]) = (pair[0], pair[1]);
            let at = |share: f64| table.microstrain(t0 + share * (t1 - t0)).unwrap();
            assert!((at(0.0) - v0).abs() < 1e-12);
            let mut last = v0;
            for k in 1..200 {
                let here = at(f64::from(k) / 200.0);
                assert!(here >= v0.min(v1) - 1e-12 && here <= v0.max(v1) + 1e-12, "{t0}..{t1}: {here}");
                assert!((here - last) * (v1 - v0).signum() >= -1e-12, "{t0}..{t1}: turns at {here}");
                last = here;
            }
        }
        let [first, last] = [points[0][0], points[count - 1][0]];
        assert!(matches!(table.microstrain(first.next_down()), Err(Error::OutOfRange { .. })));
        assert!(matches!(table.microstrain(last.next_up()), Err(Error::OutOfRange { .. })));
    }
}

#[test]
fn points_outside_their_range() {
    let points = table(&[[-20.0, -80.0], [20.0, 0.0], [60.0, 3.0], [120.0, -90.0]]);
    let gauge = Gauge { thermal_points: Some(points), ..Gauge::new(2.0) };
    let chain = Chain { temperature: Temperature::Column, ..quarter(gauge, 20.0) };
    let (plan, wide) = (chain.plan().unwrap(), Chain { extrapolate: true, ..chain }.plan().unwrap());
    let at = |celsius| Inputs { celsius, ..Inputs::default() };
    for (inside, outside) in [(-20.0, (-20.0_f64).next_down()), (120.0, 120.0_f64.next_up())] {
        assert_eq!(plan.one(at(inside)).word, Word::Good);
        let out = plan.one(at(outside));
        assert!(out.word == Word::OutOfRange && out.value.is_nan(), "{out:?}");
        assert_eq!(wide.one(at(outside)).word, Word::Extrapolated);
        assert!(plan.forward(0.0, at(inside)).is_ok());
        assert_eq!(plan.forward(0.0, at(outside)), Err(Error::Flagged(Word::OutOfRange)));
        assert!(matches!(
            Chain { temperature: Temperature::Fixed(outside), ..chain }.plan(),
            Err(Error::OutOfRange { .. })
        ));
    }
    assert_eq!(plan.one(at(f64::NAN)).word, Word::Missing);
    assert_eq!(plan.one(at(f64::INFINITY)).word, Word::Saturated);
    // a polynomial and points at once are two answers to one question
    let both = Gauge { thermal_output: Some(lot(false)), ..gauge };
    assert!(matches!(quarter(both, 20.0).plan(), Err(Error::Unfit { .. })));
}

/// Gauges of their own temperature, on paper.
#[test]
fn arms_of_their_own_temperature() {
    // F = 2.0 without slope, expansion mismatch β = 5e-6/K: τ = 2.0 · 5e-6 (T − T₀). Gauge in arm 1, dummy in arm 2.
    // Zero at 20 °C each. The gauge at 45 °C: τ₁ = 250e-6; the dummy at 30 °C: τ₂ = 100e-6; e = 1000 microstrain:
    //   y = (1 + 0.002 + 0.000 25)/(1 + 0.002 25 + 1 + 0.000 1) − 1/2 = (1.002 25 − 1.000 1)/(2 · 2.002 35) = 0.002 15/4.004 7
    let gauge = Gauge { expansion: Some(Expansion { specimen: 15e-6, data: 10e-6 }), ..Gauge::new(2.0) };
    let bridge = Bridge::equal(350.0, ["e", "dummy", "0", "0"].map(circuit::arm));
    let y = 0.002_15 / 4.004_7;
    let chain = |own: [Temperature; 4]| {
        let zero = Zero { celsius: Some(20.0), arm_celsius: [Some(20.0), Some(20.0), None, None], ..Zero::default() };
        Chain { arm_temperatures: own, temperature: Temperature::Column, ..Chain::strain(bridge, gauge).zeroed(zero) }
    };
    let (column, none) = (Temperature::Column, Temperature::None);
    for own in [
        [column, column, none, none],
        [none, column, none, none],
        [column, none, none, none],
        [none, none, none, none],
        [Temperature::Fixed(45.0), Temperature::Fixed(30.0), none, none],
        // that of a fixed resistor counts for nothing, however hot
        [column, column, Temperature::Fixed(1e6), column],
    ] {
        // what has no temperature of its own has that of the gauge, which here is that of one of them
        let celsius = if own[0] == none { 45.0 } else { 30.0 };
        let plan = chain(own).plan().unwrap();
        let e = plan.one(Inputs {
            reading: y,
            celsius,
            arm_celsius: [45.0, 30.0, f64::NAN, f64::NAN],
            ..Inputs::default()
        });
        // both at 45 °C: y = F e/(2 (2 + F e + 2 τ)), so that F e = 2 y (2 + 2 τ)/(1 − 2 y), 2 y = 0.002 15/2.002 35
        let want = if own == [none; 4] { 0.002_15 * (2.0 + 2.0 * 0.000_25) / (2.002_35 - 0.002_15) } else { 0.002 };
        let want = 1e6 * want / 2.0;
        assert!((e.number().unwrap() - want).abs() < 2e-9, "{own:?}: {e:?} {want}");
        // the temperature of the gauge is asked for only by arms without their own
        let asked = own[0] == none || own[1] == none;
        assert_eq!((plan.uses_temperature(), chain(own).needs_temperature()), (asked, asked), "{own:?}");
        let mut all = chain(own);
        all.temperature = Temperature::None;
        assert_eq!(all.plan().is_ok(), !asked, "{own:?}");
        if !asked {
            let inputs = Inputs { arm_celsius: [45.0, 30.0, 0.0, 0.0], ..Inputs::default() };
            assert!(all.derivatives(1000.0, &inputs, |_, _| ()).is_ok(), "{own:?}");
        }
    }
}

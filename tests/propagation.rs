//! Errors followed through whole measurements: against a budget made elsewhere, differences of the conversion itself, trials,
//! and simulated experiments whose truth is known.

#![cfg(feature = "files")]

mod support;

use ohmwright::chain::{Inputs, Parameter};
use ohmwright::measurement::{Measurement, Propagation, Scatter, Source};
use ohmwright::montecarlo::{deviate, simulate};
use ohmwright::sheet::Sheet;
use ohmwright::strain::ZeroReading;
use ohmwright::uncertainty::{Coverage, Family, Uncertainty};
use support::report::Report;
use support::states::{BENCH, contribution, of_row, propagation};
use support::table::Table;

fn read(text: &str) -> Measurement {
    Sheet::read("s.toml", text).unwrap_or_else(|e| panic!("{e}")).measurement
}

/// The sheet of a row of data/strain/budget_two_wire.csv.
fn two_wires(row: &support::table::Row) -> String {
    let text = |column: &str| row.text(column);
    format!(
        "[channel.g]\ncolumn = 1\nreads = \"V\"\nuncertainty = \"{u_vo} V (standard)\"\n\
         gauge = {{ resistance = \"{r} ohm\", gauge_factor = \"{f} ± {u_f} (standard)\" }}\n\
         bridge = {{ arms = [\"e\", \"0\", \"0\", \"0\"], supply = \"{vex} V ± {u_vex} V (standard)\" }}\n\
         leads = {{ wires = 2, each = \"{lead} ohm ± {u_lead} ohm (standard)\", balanced = true }}\n\
         thermal_output = {{ coefficients = [0, \"{to} ± {u_to} (standard)\"], in = \"degC\", gauge_factor = \"{f} ± {u_f} (standard)\" }}\n\
         temperature = \"1 degC\"\nzero = {{ temperature = \"0 degC\" }}\n",
        r = text("R"),
        f = text("F"),
        u_f = text("u_F"),
        vex = text("Vex"),
        u_vex = text("u_Vex"),
        lead = text("RL"),
        u_lead = text("u_RL"),
        to = text("TO"),
        u_to = text("u_TO"),
        u_vo = text("u_Vo"),
    )
}

/// data/strain/budget_two_wire.csv, constructed outside of this project.
#[test]
fn a_sheet_gives_the_budget_of_one_gauge_on_two_wires() {
    let table = Table::read("data/strain/budget_two_wire.csv");
    let mut report = Report::new("budget from a sheet");
    for row in table.rows() {
        let p = propagation(&read(&two_wires(&row)), &[row.number("Vo")], "g");
        let mut check = |column: &str, got: f64| {
            report.check(column, row.at(), row.text("id"), row.number(column), got, row.half_digit(column).min(5e-6));
        };
        check("part_Vo", contribution(&p, "reading"));
        check("part_Vex", contribution(&p, "bridge.supply"));
        check("part_RL", contribution(&p, "leads.each"));
        check("part_TO", contribution(&p, "thermal_output.coefficients[1]"));
        // in the constructed budget gauge and data share one gauge factor
        check("part_F", contribution(&p, "gauge.gauge_factor") + contribution(&p, "thermal_output.gauge_factor"));
    }
    report.finish();
}

/// The same budget by trials: u within three standard errors, u/√(2 N); its second order is far below that.
#[test]
fn trials_give_the_budget_of_one_gauge_on_two_wires() {
    const TRIALS: usize = 20_000;
    let table = Table::read("data/strain/budget_two_wire.csv");
    for row in table.rows() {
        let p = propagation(&read(&two_wires(&row)), &[row.number("Vo")], "g");
        // gauge and data have one gauge factor: both are off by the same draw
        let place = |name: &str| p.causes().iter().position(|c| c.name == name).unwrap();
        let (gauge, data) = (place("gauge.gauge_factor"), place("thermal_output.gauge_factor"));
        let inputs: Vec<Uncertainty> = p.causes().iter().map(|c| c.uncertainty).collect();
        let run = simulate(TRIALS, 0, 1, &inputs, |off| {
            let mut off = off.to_vec();
            off[data] = off[gauge];
            p.moved(&off)
        })
        .unwrap();
        let u = row.number("u_ue");
        let error = u / (2.0 * TRIALS as f64).sqrt();
        assert!((run.standard() - u).abs() <= 3.0 * error, "{} {u} ± {error}", run.standard());
        let off = (run.mean() - row.number("strain_ue")).abs();
        assert!(off <= 3.0 * u / (TRIALS as f64).sqrt(), "{} {off}", run.mean());
    }
    assert!(table.rows().count() > 0);
}

/// In the order of the columns as the sheet names them.
fn bench_readings(measurement: &Measurement) -> Vec<f64> {
    measurement
        .inputs
        .iter()
        .map(|input| match input.to_string().as_str() {
            "a" => 0.9,
            "b" => -0.55,
            "c" => 0.7,
            "twin" => -0.2,
            "deck" => 110.9,
            "air" => 1.05,
            "code" => 2_345_678.0,
            "v" => 2.51,
            "twist" => 1.1,
            "cell" => 1.4,
            "hot" => 6.1,
            other => panic!("{other}"),
        })
        .collect()
}

/// The gradient from exact derivatives against fourth-order differences of the conversion itself.
#[test]
fn gradients_are_those_of_the_conversion() {
    let measurement = read(BENCH);
    let readings = bench_readings(&measurement);
    let states = of_row(&measurement, &readings);
    let mut report = Report::new("gradients");
    for (index, channel) in measurement.channels.iter().enumerate() {
        let p = Propagation::new(&measurement, &states, index).unwrap();
        assert_eq!(p.unused(), &[] as &[String], "{}", channel.name);
        let value = states[index].unwrap().value;
        report.check("value", "", &channel.name, value, p.value(), 1e-10 * (1.0 + value.abs()));
        let count = p.causes().len();
        let mut gradient = vec![0.0; count];
        p.gradient(&vec![0.0; count], &mut gradient).unwrap();
        let u = p.combined().unwrap().standard;
        assert!(u > 0.0, "{}", channel.name);
        for (i, cause) in p.causes().iter().enumerate() {
            let step = 0.1 * cause.standard();
            let at = |by: f64| {
                let mut off = vec![0.0; count];
                off[i] = by * step;
                p.moved(&off)
            };
            let slope = (8.0 * (at(1.0) - at(-1.0)) - (at(2.0) - at(-2.0))) / 12.0;
            // in units of u: rounding of a temperature is 1e-12 of it, and is multiplied by 15 of these steps
            let got = gradient[i] * step;
            report.check("contribution", "", format!("{}: {}", channel.name, cause.name), slope, got, 1e-6 * u);
        }
        // and away from the estimates
        let off: Vec<f64> =
            p.causes().iter().zip([1.0, -1.0].into_iter().cycle()).map(|(c, s)| s * c.standard()).collect();
        p.gradient(&off, &mut gradient).unwrap();
        for (i, cause) in p.causes().iter().enumerate() {
            let step = 0.1 * cause.standard();
            let at = |by: f64| {
                let mut off = off.clone();
                off[i] += by * step;
                p.moved(&off)
            };
            let slope = (8.0 * (at(1.0) - at(-1.0)) - (at(2.0) - at(-2.0))) / 12.0;
            let got = gradient[i] * step;
            report.check("moved", "", format!("{}: {}", channel.name, cause.name), slope, got, 2e-6 * u);
        }
    }
    report.finish();
}

#[test]
fn shared_errors_are_one_cause_and_others_are_not() {
    let measurement = read(BENCH);
    let readings = bench_readings(&measurement);
    let bend = propagation(&measurement, &readings, "bend");
    let names: Vec<&str> = bend.causes().iter().map(|c| c.name.as_str()).collect();
    let count = |name: &str| names.iter().filter(|n| **n == name).count();
    // shared by name, and by the table above the key
    assert_eq!((count("gauge.gauge_factor"), count("a: gauge.gauge_factor")), (1, 0), "{names:?}");
    assert_eq!(
        (count("bridge.input_resistance"), count("a: leads.each"), count("b: leads.each")),
        (1, 1, 1),
        "{names:?}"
    );
    // one thermometer, one error for both, at the reading and at zero; its noise is another at zero
    assert_eq!((count("deck: platinum.r0"), count("deck: reading"), count("deck: reading at zero")), (1, 1, 1));
    // noise of each channel, and another of the same size when its zero was read
    assert_eq!((count("a: reading"), count("b: reading"), count("a: reading at zero")), (1, 1, 1), "{names:?}");
}

/// T and T0 share the thermometer: what is off by the same at both has no effect where they are equal.
#[test]
fn a_thermometer_that_is_off_cancels_where_the_zero_was_as_warm() {
    let text = "[channel.g]\ncolumn = \"g\"\nreads = \"mV/V\"\ngauge = { resistance = \"350 ohm\", gauge_factor = 2.0 }\n\
         bridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }\nthermal_output = { coefficients = [0, 3.0], in = \"degC\", gauge_factor = 2.0 }\n\
         temperature = \"t\"\nzero = { at = \"0 mV/V\", temperature = \"20 degC\" }\n\
         [channel.t]\ncolumn = \"t\"\nreads = \"degC\"\n";
    // a thermometer whose scale is its resistance at 0 °C, by IEC 60751
    let text = text.replace(
        "reads = \"degC\"\n",
        "reads = \"ohm\"\nplatinum = { standard = \"IEC 60751\", r0 = \"100 ohm ± 0.2 ohm\" }\n",
    );
    let measurement = read(&text);
    let plan = measurement.channels[1].segments().unwrap()[0].chain.plan().unwrap();
    let ohms = |celsius: f64| plan.forward(celsius, 0.0).unwrap();
    let alike = propagation(&measurement, &[0.5, ohms(20.0)], "g");
    assert!(contribution(&alike, "t: platinum.r0").abs() < 1e-9);
    // at 60 °C by hand: dT/dR0 = −(R/R0)/(dR/dT), A = 3.9083e-3, B = −5.775e-7; e falls by 3 microstrain per kelvin
    let slope = |t: f64| -(1.0 + 3.9083e-3 * t - 5.775e-7 * t * t) / (100.0 * (3.9083e-3 - 2.0 * 5.775e-7 * t));
    let apart = propagation(&measurement, &[0.5, ohms(60.0)], "g");
    let by_hand = -3.0 * (slope(60.0) - slope(20.0)) * 0.2 / 3f64.sqrt();
    let got = contribution(&apart, "t: platinum.r0");
    assert!((got - by_hand).abs() < 1e-9 * by_hand.abs().max(1.0), "{got} {by_hand}");
    // a stated uncertainty of the temperature at zero is its own, and nothing is shared then
    let own = text.replace("temperature = \"20 degC\" }", "temperature = \"20 degC ± 0.6 K\" }");
    let own = propagation(&read(&own), &[0.5, ohms(20.0)], "g");
    assert!((contribution(&own, "zero.temperature") - 3.0 * 0.6 / 3f64.sqrt()).abs() < 1e-9);
    assert!((contribution(&own, "t: platinum.r0") + 3.0 * slope(20.0) * 0.2 / 3f64.sqrt()).abs() < 1e-9);
}

/// The scatter of thermal output grows with |T − T0|: s |T − T0| at equal gauge factors.
#[test]
fn scatter_of_a_lot_grows_with_the_distance_from_zero() {
    for output in
        ["coefficients = [-24.0, 1.90, -0.0400]", "points = [[-20, -60.0], [0, -20.0], [25, 30.0], [60, 100.0]]"]
    {
        for (celsius, distance) in [(20.0, 0.0), (30.0, 10.0), (5.0, -15.0)] {
            let text = format!(
                "[channel.g]\ncolumn = \"g\"\nreads = \"mV/V\"\ngauge = {{ resistance = \"350 ohm\", gauge_factor = 2.0 }}\n\
                 bridge = {{ arms = [\"e\", \"0\", \"0\", \"0\"] }}\n\
                 thermal_output = {{ {output}, in = \"degC\", gauge_factor = 2.0, scatter = \"0.27 um/m/K (standard)\" }}\n\
                 temperature = \"{celsius} degC\"\nzero = {{ at = \"0 mV/V\", temperature = \"20 degC\" }}\n"
            );
            let got = contribution(&propagation(&read(&text), &[0.1], "g"), "thermal_output.scatter");
            assert!((got + 0.27 * distance).abs() <= 1e-9, "{output} {celsius}: {got}");
        }
    }
}

/// Type A of a zero window: s/√n with n − 1 degrees of freedom (JCGM 100:2008, 4.2), and s for a single reading.
#[test]
fn a_window_gives_the_scatter_of_readings_and_of_their_mean() {
    let mut measurement = read(
        "[channel.g]\ncolumn = \"g\"\nreads = \"uV/V\"\ngauge = { resistance = \"350 ohm\", gauge_factor = 2.0 }\n\
         bridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }\nzero = { rows = 4 }\n",
    );
    let mut pass = ohmwright::measurement::ZeroPass::new(&measurement).unwrap();
    let column = |values: &[f64]| ohmwright::measurement::Column {
        values: values.to_vec(),
        words: vec![ohmwright::chain::Word::Good; values.len()],
    };
    pass.push(Vec::new(), vec![column(&[10.0, 12.0, 9.0, 13.0, 400.0])]);
    pass.finish().unwrap().settle(&mut measurement);
    let scatter = measurement.channels[0].segments().unwrap()[0].zero_scatter;
    // mean 11, squares 1 + 1 + 4 + 4 over 3
    let s = (10.0_f64 / 3.0).sqrt();
    assert!(matches!(scatter, Some(Scatter { ratio, rows: 4 }) if (ratio - s * 1e-6).abs() < 1e-18), "{scatter:?}");
    let p = propagation(&measurement, &[11.0], "g");
    // a quarter bridge near balance: e = 4 y/F, 2 microstrain per µV/V
    let (one, mean) = (contribution(&p, "reading"), contribution(&p, "zero"));
    assert!((one - 2.0 * s).abs() < 1e-3 && (mean + 2.0 * s / 2.0).abs() < 1e-3, "{one} {mean}");
    let parts = p.contributions().unwrap();
    assert!(parts.iter().all(|part| part.degrees_of_freedom == 3.0), "{parts:?}");
    // ν_eff by (G.2b): (1 + 1/4)² / ((1 + 1/16)/3)
    let nu = p.combined().unwrap().degrees_of_freedom;
    assert!((nu - 1.5625 * 3.0 / 1.0625).abs() < 1e-6, "{nu}");
}

/// A difference of two channels with shared errors, and with errors of their own, against trials.
#[test]
fn a_difference_with_shared_errors_against_trials() {
    let text = |shared: &str| {
        format!(
            "[common.s]\nreads = \"mV/V\"\nuncertainty = \"0.5 uV/V (standard)\"\n\
             gauge = {{ resistance = \"350 ohm\", gauge_factor = \"2.08 ± 1 % (k=2)\" }}\n\
             bridge = {{ arms = [\"e\", \"0\", \"0\", \"0\"] }}\nleads = {{ wires = 2, each = \"3 ohm ± 10 % (k=2)\", balanced = false }}\n{shared}\n\
             [channel.a]\nlike = \"s\"\ncolumn = \"a\"\n[channel.b]\nlike = \"s\"\ncolumn = \"b\"\n\
             [channel.d]\ncombine = {{ a = 1, b = -1 }}\n"
        )
    };
    let mut deviations = Vec::new();
    for shared in ["shared = [\"gauge.gauge_factor\", \"leads\"]", "shared = [\"leads.each\"]", ""] {
        let p = propagation(&read(&text(shared)), &[1.9, 1.7], "d");
        let u = p.combined().unwrap().standard;
        let run = p.trials(6_000, 0, 3).unwrap();
        // the standard deviation of 6 000 trials spreads by u/√(2 N) = 0.9 %, an end of the interval by 2.7 % of u
        assert!((run.standard() / u - 1.0).abs() < 0.03, "{shared}: {} {u}", run.standard());
        let wide = p.combined().unwrap().expanded(Coverage::Probability(0.95)).unwrap().expanded;
        let [low, high] = run.symmetric(0.95);
        assert!(((high - low) / (2.0 * wide) - 1.0).abs() < 0.04, "{shared}");
        deviations.push(u);
    }
    // what is shared cancels nearly: by far the smallest
    assert!(deviations[0] < 0.2 * deviations[1] && deviations[1] < 0.5 * deviations[2], "{deviations:?}");
}

/// Moves parameters of a chain, for experiments whose truth differs from the sheet.
fn with(measurement: &Measurement, channel: usize, by: &[(Parameter, f64)]) -> ohmwright::chain::Chain {
    let Source::Reading(segments) = &measurement.channels[channel].source else { panic!("no reading") };
    let chain = segments[0].chain;
    chain.map(|parameter, value| value + by.iter().filter(|(p, _)| *p == parameter).map(|(_, by)| by).sum::<f64>())
}

const EXPERIMENTS: u64 = 2_000;

/// Share of experiments whose interval holds the truth: within 93 % to 97 % of a stated 95 %.
fn covered(held: usize) {
    let share = held as f64 / EXPERIMENTS as f64;
    assert!((0.93..=0.97).contains(&share), "{share}");
}

fn holds(p: &Propagation, truth: f64) -> bool {
    let combined = p.combined().unwrap();
    assert_eq!(combined.family, Family::Normal);
    let wide = combined.expanded(Coverage::Probability(0.95)).unwrap().expanded;
    (p.value() - truth).abs() <= wide
}

/// A normal or rectangular draw with this standard deviation.
struct Draws {
    trial: u64,
    input: u32,
}

impl Draws {
    fn normal(&mut self, standard: f64) -> f64 {
        self.input += 1;
        deviate(&Uncertainty::Standard { standard }, 2024, self.trial, self.input)
    }
    fn flat(&mut self, half_width: f64) -> f64 {
        self.input += 1;
        deviate(&Uncertainty::Rectangular { half_width }, 2024, self.trial, self.input)
    }
}

#[test]
fn intervals_of_a_strain_chain_hold_the_truth() {
    let nominal = read(
        "[channel.g]\ncolumn = \"g\"\nreads = \"mV/V\"\n\
         gauge = { resistance = \"350 ohm\", gauge_factor = \"2.08 ± 1 % (k=2)\" }\n\
         bridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }\nleads = { wires = 2, each = \"4 ohm ± 0.5 ohm\", balanced = false }\n\
         zero = { rows = 8 }\n",
    );
    let mut held = 0;
    for trial in 0..EXPERIMENTS {
        let mut draws = Draws { trial, input: 0 };
        let truth = 1500.0;
        // the leads too: what the sheet says of them is off
        let chain =
            with(&nominal, 0, &[(Parameter::GaugeFactor, draws.normal(0.0104)), (Parameter::Lead(0), draws.flat(0.5))]);
        let plan = chain.plan().unwrap();
        // eight readings at zero and one under load, each with its noise of 4 µV/V
        let mut zeros = [0.0; 8];
        for slot in &mut zeros {
            *slot = plan.forward(0.0, 0.0).unwrap() + draws.normal(0.004);
        }
        let reading = plan.forward(truth, 0.0).unwrap() + draws.normal(0.004);
        let mean = zeros.iter().sum::<f64>() / 8.0;
        let squares: f64 = zeros.iter().map(|z| (z - mean) * (z - mean)).sum();
        let mut measurement = nominal.clone();
        let Source::Reading(segments) = &mut measurement.channels[0].source else { panic!("no reading") };
        let ohmwright::chain::Element::Gauge { zero, .. } = &mut segments[0].chain.element else { panic!("no gauge") };
        zero.reading = Some(ZeroReading::Ratio(mean * 1e-3));
        segments[0].zero = ohmwright::measurement::ZeroSource::Stated;
        segments[0].zero_scatter = Some(Scatter { ratio: (squares / 7.0).sqrt() * 1e-3, rows: 8 });
        held += usize::from(holds(&propagation(&measurement, &[reading], "g"), truth));
    }
    covered(held);
}

#[test]
fn intervals_of_a_platinum_chain_hold_the_truth() {
    let nominal = read(
        "[channel.t]\ncolumn = \"t\"\nreads = \"ohm\"\nuncertainty = \"20 mohm (k=2)\"\n\
         platinum = { standard = \"IEC 60751\", r0 = \"100 ohm ± 0.03 ohm (k=2)\" }\n\
         leads = { wires = 2, each = \"0.40 ohm ± 0.01 ohm\" }\n",
    );
    let mut held = 0;
    for trial in 0..EXPERIMENTS {
        let mut draws = Draws { trial, input: 100 };
        let truth = 80.0;
        let chain = with(&nominal, 0, &[(Parameter::R0, draws.normal(0.015)), (Parameter::Lead(0), draws.flat(0.01))]);
        let reading = chain.plan().unwrap().forward(truth, Inputs::default()).unwrap() + draws.normal(0.01);
        held += usize::from(holds(&propagation(&nominal, &[reading], "t"), truth));
    }
    covered(held);
}

#[test]
fn intervals_of_a_rosette_hold_the_truth() {
    let grid = |name: &str| format!("[channel.{name}]\nlike = \"s\"\ncolumn = \"{name}\"\n");
    let nominal = read(&format!(
        "[common.s]\nreads = \"mV/V\"\nuncertainty = \"2 uV/V (k=2)\"\n\
         gauge = {{ resistance = \"350 ohm\", gauge_factor = \"2.08 ± 1 % (k=2)\" }}\nbridge = {{ arms = [\"e\", \"0\", \"0\", \"0\"] }}\n{}{}{}\
         [rosette.R]\ngrids = {{ a = \"a\", b = \"b\", c = \"c\" }}\nangles = [\"0 deg ± 1 deg (k=2)\", \"45 deg ± 1 deg (k=2)\", \"90 deg ± 1 deg (k=2)\"]\ngive = [\"principal-max\", \"direction\"]\n",
        grid("a"),
        grid("b"),
        grid("c")
    ));
    let truth =
        ohmwright::strain::PrincipalStrains { larger: 900.0, smaller: -250.0, shear: 1150.0, degrees: Some(20.0) };
    let state = truth.state();
    let mut held = [0, 0];
    for trial in 0..EXPERIMENTS {
        let mut draws = Draws { trial, input: 200 };
        let mut readings = [0.0; 3];
        for (i, (slot, angle)) in readings.iter_mut().zip([0.0, 45.0, 90.0]).enumerate() {
            let strain = state.along(angle + draws.normal(0.5));
            let plan = with(&nominal, i, &[(Parameter::GaugeFactor, draws.normal(0.0104))]).plan().unwrap();
            *slot = plan.forward(strain, 0.0).unwrap() + draws.normal(0.001);
        }
        let states = of_row(&nominal, &readings);
        for (held, (name, truth)) in held.iter_mut().zip([("R principal-max", 900.0), ("R direction", 20.0)]) {
            let p = Propagation::new(&nominal, &states, nominal.position(name).unwrap()).unwrap();
            *held += usize::from(holds(&p, truth));
        }
    }
    held.into_iter().for_each(covered);
}

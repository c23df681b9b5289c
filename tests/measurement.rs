//! The engine: side channels in time, zeros, changes, words, and that the split into blocks does not matter.
//!
//! Expected values are worked by hand from design equations: one gauge in a bridge of equal arms gives
//! y = x/(4 + 2x), so x = 4y/(1 − 2y), and e = [x − x0 − τ(T)]/F(T).
#![cfg(feature = "files")]

use ohmwright::chain::Word;
use ohmwright::measurement::{Column, Engine, Measurement, MeasurementError, ZeroPass};
use ohmwright::sheet::Sheet;

const GOOD: Word = Word::Good;
const MISSING: Word = Word::Missing;
const NAN: f64 = f64::NAN;

fn column(values: &[f64]) -> Column {
    let words = values.iter().map(|v| if v.is_nan() { MISSING } else { GOOD }).collect();
    Column { values: values.to_vec(), words }
}

fn with_words(values: &[f64], words: &[Word]) -> Column {
    Column { values: values.to_vec(), words: words.to_vec() }
}

fn part(column: &Column, from: usize, to: usize) -> Column {
    Column { values: column.values[from..to].to_vec(), words: column.words[from..to].to_vec() }
}

/// Results and rests of every channel.
#[derive(Debug, Default)]
struct All {
    values: Vec<Vec<f64>>,
    words: Vec<Vec<Word>>,
    rests: Vec<Vec<bool>>,
    said: Vec<String>,
}

/// Runs a measurement in blocks of `size` rows: zeros first, as a conversion does.
fn run_in(measurement: &Measurement, seconds: &[f64], inputs: &[Column], size: usize) -> Result<All, MeasurementError> {
    let rows = inputs[0].values.len();
    let mut measurement = measurement.clone();
    // seconds, or a form of the recording's own: t2
    let number = |text: &str| text.trim_start_matches('t').trim_end_matches('s').trim().parse::<f64>();
    measurement.place_moments(|moment| number(&moment.text)).unwrap();
    measurement.check_moments()?;
    let cut = |from: usize| {
        let to = (from + size).min(rows);
        let times = seconds.get(from..to).unwrap_or_default().to_vec();
        (times, inputs.iter().map(|c| part(c, from, to)).collect::<Vec<_>>())
    };
    let mut all = All::default();
    if measurement.needs_zero_pass() {
        let mut pass = ZeroPass::new(&measurement)?;
        for from in (0..rows).step_by(size) {
            if pass.is_done() {
                break;
            }
            let (times, columns) = cut(from);
            pass.push(times, columns);
        }
        all.said = pass.finish()?.settle(&mut measurement);
    }
    let channels = measurement.channels.len();
    (all.values, all.words, all.rests) = (vec![vec![]; channels], vec![vec![]; channels], vec![vec![]; channels]);
    let mut engine = Engine::new(&measurement)?;
    let mut order = 0;
    let mut take = |block: ohmwright::measurement::Converted<usize>, all: &mut All| {
        assert_eq!(block.payload, order, "blocks come out in order");
        order += 1;
        let n = block.rows();
        for (i, result) in block.results.iter().enumerate() {
            assert_eq!((result.values.len(), result.words.len()), (n, n));
            for (value, word) in result.values.iter().zip(&result.words) {
                assert_eq!(value.is_finite(), word.has_number(), "{value} {word}");
            }
            all.values[i].extend(&result.values);
            all.words[i].extend(&result.words);
            all.rests[i].extend((0..n).map(|r| block.excused[i].get(r) == Some(&true)));
        }
    };
    for (k, from) in (0..rows).step_by(size).enumerate() {
        let (times, columns) = cut(from);
        engine.push(times, columns, k);
        while let Some(block) = engine.pop() {
            take(block, &mut all);
        }
    }
    engine.end();
    while let Some(block) = engine.pop() {
        take(block, &mut all);
    }
    assert_eq!(engine.waiting_rows(), 0);
    assert_eq!(all.words[0].len(), rows, "no row is dropped");
    Ok(all)
}

/// The same for many sizes of blocks, which must not matter in any bit.
#[track_caller]
fn run(sheet: &str, seconds: &[f64], inputs: &[Column]) -> All {
    let sheet = Sheet::read("s.toml", sheet).unwrap_or_else(|e| panic!("{e}"));
    let rows = inputs[0].values.len();
    let whole = run_in(&sheet.measurement, seconds, inputs, rows.max(1)).unwrap();
    for size in 1..=rows {
        let other = run_in(&sheet.measurement, seconds, inputs, size).unwrap();
        let bits = |all: &All| -> Vec<Vec<u64>> {
            all.values.iter().map(|c| c.iter().map(|v| v.to_bits()).collect()).collect()
        };
        assert_eq!(bits(&whole), bits(&other), "blocks of {size}");
        assert_eq!(
            (&whole.words, &whole.rests, &whole.said),
            (&other.words, &other.rests, &other.said),
            "blocks of {size}"
        );
    }
    whole
}

#[track_caller]
fn near(got: &[f64], want: &[f64]) {
    assert_eq!(got.len(), want.len(), "{got:?}");
    for (i, (g, w)) in got.iter().zip(want).enumerate() {
        // the bridge inverse is exact to about 1e-9 microstrain (design, how exact)
        assert!((g - w).abs() < 2e-9 || (g.is_nan() && w.is_nan()), "row {i}: {g}, not {w}");
    }
}

/// A gauge whose reading stays 0 while its thermal output is 10 microstrain/K from 20 °C: e = −10 (T − 20).
fn shows_temperature(temperature: &str) -> String {
    format!(
        "[channel.g]\ncolumn = 1\nreads = \"mV/V\"\ngauge = {{ resistance = \"350 ohm\", gauge_factor = 2 }}\n\
         bridge = {{ arms = [\"e\", \"0\", \"0\", \"0\"] }}\nthermal_output = {{ coefficients = [0, 10], in = \"degC\", gauge_factor = 2 }}\n\
         temperature = {temperature}\nzero = {{ at = \"0 mV/V\", temperature = \"20 degC\" }}\n\
         [channel.deck]\ncolumn = 2\nreads = \"degC\"\n"
    )
}

/// What the gauge says the temperature is.
fn temperatures(all: &All) -> Vec<f64> {
    all.values[0].iter().map(|e| 20.0 - e / 10.0).collect()
}

#[test]
fn a_line_between_samples() {
    let sheet = shows_temperature("{ channel = \"deck\", longest_gap = \"10 s\" }");
    let seconds = [0.0, 1.0, 2.0, 4.0, 8.0, 10.0, 11.0];
    let deck = column(&[NAN, 20.0, NAN, NAN, NAN, 29.0, NAN]);
    let all = run(&sheet, &seconds, &[column(&[0.0; 7]), deck]);
    // 20 + 9 (t − 1)/9 between 1 s and 10 s; nothing before the first and after the last sample
    near(&temperatures(&all), &[NAN, 20.0, 21.0, 23.0, 27.0, 29.0, NAN]);
    assert_eq!(all.words[0], [MISSING, GOOD, GOOD, GOOD, GOOD, GOOD, MISSING]);
    assert_eq!(all.words[1], [MISSING, GOOD, MISSING, MISSING, MISSING, GOOD, MISSING]);
    assert_eq!(all.rests[1], [false, false, true, true, true, false, false]);
}

#[test]
fn the_longest_gap_is_the_last_that_is_bridged() {
    let seconds = [0.0, 5.0, 10.0, 15.0, 20.125];
    let deck = column(&[20.0, NAN, 21.0, NAN, 23.0]);
    let inputs = [column(&[0.0; 5]), deck];
    let all = run(&shows_temperature("{ channel = \"deck\", longest_gap = \"10 s\" }"), &seconds, &inputs);
    near(&temperatures(&all), &[20.0, 20.5, 21.0, NAN, 23.0]);
    assert_eq!(all.rests[1], [false, true, false, false, false]);
    let all = run(&shows_temperature("{ channel = \"deck\", longest_gap = \"10.125 s\" }"), &seconds, &inputs);
    near(&temperatures(&all), &[20.0, 20.5, 21.0, 21.0 + 2.0 * 5.0 / 10.125, 23.0]);
}

#[test]
fn the_last_sample() {
    let sheet = shows_temperature("{ channel = \"deck\", longest_gap = \"3 s\", between = \"last\" }");
    let seconds = [0.0, 1.0, 3.0, 4.0, 4.5, 6.0];
    let all = run(&sheet, &seconds, &[column(&[0.0; 6]), column(&[NAN, 22.0, NAN, NAN, NAN, 23.0])]);
    near(&temperatures(&all), &[NAN, 22.0, 22.0, 22.0, NAN, 23.0]);
    assert_eq!(all.rests[1], [false, false, true, true, false, false]);
}

#[test]
fn live_use_does_not_wait() {
    let rows = |between: &str| {
        let sheet =
            shows_temperature(&format!("{{ channel = \"deck\", longest_gap = \"5 s\", between = \"{between}\" }}"));
        let sheet = Sheet::read("s.toml", &sheet).unwrap();
        let mut engine = Engine::new(&sheet.measurement).unwrap();
        let mut out = Vec::new();
        for t in 0..12 {
            let deck = if t == 0 { 20.0 } else { NAN };
            engine.push(vec![f64::from(t)], vec![column(&[0.0]), column(&[deck])], ());
            out.push(std::iter::from_fn(|| engine.pop()).count());
        }
        (out, engine.waiting_rows())
    };
    assert_eq!(rows("last").0, [1; 12]);
    // a line waits for its second sample, but no longer than the longest gap
    assert_eq!(rows("line").0, [1, 0, 0, 0, 0, 0, 5, 1, 1, 1, 1, 1]);
}

#[test]
fn words_of_the_side_channel() {
    let sheet = shows_temperature("{ channel = \"deck\", longest_gap = \"2 s\" }");
    let words = [GOOD, Word::Unreadable, GOOD, Word::Saturated, GOOD, GOOD];
    let deck = with_words(&[20.0, NAN, 22.0, NAN, NAN, NAN], &words);
    let seconds = [0.0, 1.0, 2.0, 3.0, 4.0, 5.0];
    let deck = Column {
        words: deck.words.iter().enumerate().map(|(i, w)| if i == 4 || i == 5 { MISSING } else { *w }).collect(),
        ..deck
    };
    let all = run(&sheet, &seconds, &[column(&[0.0; 6]), deck]);
    // bridged where a sample follows in time; otherwise the gauge takes the word of the sample that failed
    near(&temperatures(&all), &[20.0, 21.0, 22.0, NAN, NAN, NAN]);
    assert_eq!(all.words[0], [GOOD, GOOD, GOOD, Word::Saturated, MISSING, MISSING]);
    // a sample that failed is no rest, even where it is bridged
    assert_eq!(all.rests[1], [false; 6]);
    assert_eq!(all.words[1][1], Word::Unreadable);
}

#[test]
fn rows_without_time_and_clocks_that_step_back() {
    let sheet = shows_temperature("{ channel = \"deck\", longest_gap = \"60 s\" }");
    let deck = |values: &[f64]| [column(&vec![0.0; values.len()]), column(values)];
    // a row without a time cannot lie on a line, but its own sample holds
    let all = run(&sheet, &[0.0, NAN, 10.0, NAN, 20.0], &deck(&[20.0, NAN, NAN, 25.0, 22.0]));
    near(&temperatures(&all), &[20.0, NAN, 21.0, 25.0, 22.0]);
    // no line is drawn past its ends, nor over a gap that a row in between has shown
    let all = run(&sheet, &[0.0, 10.0, 100.0, 30.0], &deck(&[20.0, NAN, NAN, 23.0]));
    near(&temperatures(&all), &[20.0, NAN, NAN, 23.0]);
    let all = run(&sheet, &[0.0, 10.0, 40.0, 30.0], &deck(&[20.0, NAN, NAN, 23.0]));
    near(&temperatures(&all), &[20.0, 21.0, NAN, 23.0]);
}

#[test]
fn temperature_in_other_units() {
    for (unit, of) in [("K", (1.0, 273.15)), ("degF", (1.8, 32.0))] {
        let sheet = shows_temperature("\"deck\"").replace("\"degC\"\n", &format!("\"{unit}\"\n"));
        assert!(sheet.contains(unit));
        let all = run(&sheet, &[0.0, 1.0], &[column(&[0.0; 2]), column(&[20.0 * of.0 + of.1, 25.0 * of.0 + of.1])]);
        for (got, want) in temperatures(&all).iter().zip([20.0, 25.0]) {
            assert!((got - want).abs() < 1e-10, "{got}");
        }
    }
}

#[test]
fn thermal_output_against_a_hand_calculation() {
    let sheet = "[channel.g]\ncolumn = 1\nreads = \"mV/V\"\n\
        gauge = { resistance = \"350 ohm\", gauge_factor = 2.08, slope = \"1.0 %/100K\", reference = \"24 degC\" }\n\
        bridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }\n\
        thermal_output = { coefficients = [-24.0, 1.90, -0.0400, 2.50e-4], in = \"degC\", gauge_factor = 2.0 }\n\
        expansion = { specimen = \"11.7e-6/K\", data = \"12.1e-6/K\" }\n\
        temperature = { channel = \"deck\", longest_gap = \"60 s\" }\nzero = { at = \"0.0312 mV/V\", temperature = \"20 degC\" }\n\
        [channel.deck]\ncolumn = 2\nreads = \"degC\"\n";
    let all = run(sheet, &[4.0, 10.0, 20.0], &[column(&[0.5, 0.5, 0.5]), column(&[22.0, NAN, 25.0])]);
    // T = 22 + 3 · 6/16 = 23.125 °C; in exact fractions by hand (Python 3 fractions)
    near(&all.values[0][1..2], &[902.250695232452]);
}

/// y = x/(4 + 2x) turned round.
fn x(y: f64) -> f64 {
    4.0 * y / (1.0 - 2.0 * y)
}

fn gauge(more: &str) -> String {
    format!(
        "[channel.g]\ncolumn = 1\nreads = \"mV/V\"\ngauge = {{ resistance = \"350 ohm\", gauge_factor = 2 }}\n\
         bridge = {{ arms = [\"e\", \"0\", \"0\", \"0\"] }}\n{more}\n"
    )
}

/// strain(reading) − strain(zero), microstrain.
fn strain(millivolts_per_volt: f64, zero: f64, factor: f64) -> f64 {
    (x(millivolts_per_volt * 1e-3) - x(zero * 1e-3)) / factor * 1e6
}

#[test]
fn zero_by_value_rows_and_window() {
    let readings = [1.0, 2.0, NAN, 30.0, 4.0, 8.0];
    let seconds = [0.0, 1.0, 2.0, 3.0, 4.0, 5.0];
    let at = |zero: f64, all: &All| {
        let want: Vec<f64> = readings.iter().map(|r| strain(*r, zero, 2.0)).collect();
        near(&all.values[0], &want);
    };
    at(0.5, &run(&gauge("zero = { at = \"0.5 mV/V\" }"), &seconds, &[column(&readings)]));
    // mean over the valid readings in the first rows: (1 + 2)/2, then (1 + 2 + 30)/3
    at(1.5, &run(&gauge("zero = { rows = 3 }"), &seconds, &[column(&readings)]));
    at(11.0, &run(&gauge("zero = { rows = 4 }"), &seconds, &[column(&readings)]));
    // more rows than there are
    let all = run(&gauge("zero = { rows = 100 }"), &seconds, &[column(&readings)]);
    at(9.0, &all);
    assert_eq!(
        all.said,
        ["g: zero 9.000000 mV/V, mean of 5 readings in the first 100 rows, of which the recording has only 6"]
    );
    // both ends of a window belong to it: (4 + 8)/2
    let all = run(&gauge("zero = { from = \"4 s\", to = \"5 s\" }"), &seconds, &[column(&readings)]);
    at(6.0, &all);
    assert_eq!(all.said, ["g: zero 6.000000 mV/V, mean of 2 readings in the window from 4 s to 5 s"]);
    at(2.0, &run(&gauge("zero = { from = \"0.5 s\", to = \"2.9 s\" }"), &seconds, &[column(&readings)]));
    // saturated and unreadable cells are no readings
    let words = [Word::Unreadable, GOOD, GOOD, GOOD, GOOD, GOOD];
    let odd = with_words(&[NAN, 2.0, 4.0, 0.0, 0.0, 0.0], &words);
    let all = run(&gauge("zero = { rows = 3 }"), &seconds, &[odd]);
    assert_eq!(all.said, ["g: zero 3.000000 mV/V, mean of 2 readings in the first 3 rows"]);
    let all = run(&gauge("zero = { rows = 2 }"), &[], &[column(&[-1e-9, -3e-9])]);
    assert_eq!(all.said, ["g: zero 0.000000 mV/V, mean of 2 readings in the first 2 rows"]);
}

#[test]
fn zero_meanings_of_a_mean() {
    // the gauge's own resistance was off: e = (x − x0)/(1 + x0)/F
    let all = run(&gauge("zero = { rows = 2, from = \"resistance\" }"), &[], &[column(&[1.0, 3.0, 5.0])]);
    let want = (x(5e-3) - x(2e-3)) / (1.0 + x(2e-3)) / 2.0 * 1e6;
    near(&all.values[0][2..], &[want]);
}

#[test]
fn no_zero_and_wrong_moments() {
    let fails = |sheet: &str, readings: &[f64]| {
        let sheet = Sheet::read("s.toml", sheet).unwrap();
        let seconds: Vec<f64> = (0..readings.len()).map(|i| i as f64).collect();
        run_in(&sheet.measurement, &seconds, &[column(readings)], 2).unwrap_err().to_string()
    };
    assert_eq!(
        fails(&gauge("zero = { rows = 2 }"), &[NAN, NAN, 1.0]),
        "channel 'g': no zero, since no reading in the first 2 rows can be converted (2 missing)"
    );
    assert_eq!(
        fails(&gauge("zero = { from = \"7 s\", to = \"9 s\" }"), &[1.0, 1.0]),
        "channel 'g': no zero, since no reading in the window from 7 s to 9 s can be converted (the recording has no row there)"
    );
    assert_eq!(
        fails(&gauge("zero = { from = \"t2\", to = \"t1\" }"), &[1.0]),
        "channel 'g': 't1' must come after 't2'"
    );
    let change = |t: &str| format!("[[channel.g.change]]\nfrom = \"{t}\"\ngauge = {{ gauge_factor = 3 }}\n");
    assert_eq!(
        fails(&gauge(&format!("{}{}", change("t2"), change("t1"))), &[1.0]),
        "channel 'g': 't1' must come after 't2'"
    );
}

#[test]
fn zero_at_the_mean_temperature() {
    // T0 is the mean over the same rows, (20 + 22)/2; 10 microstrain/K from there
    let sheet = shows_temperature("\"deck\"").replace("{ at = \"0 mV/V\", temperature = \"20 degC\" }", "{ rows = 3 }");
    let readings = column(&[0.0, NAN, 0.0, 0.0]);
    let all = run(&sheet, &[0.0, 1.0, 2.0, 3.0], &[readings.clone(), column(&[20.0, 21.0, 22.0, 25.0])]);
    near(&all.values[0], &[10.0, NAN, -10.0, -40.0]);
    // a stated one goes before it
    let stated = sheet.replace("rows = 3", "rows = 3, temperature = \"20 degC\"");
    let all = run(&stated, &[0.0, 1.0, 2.0, 3.0], &[readings, column(&[20.0, 21.0, 22.0, 25.0])]);
    near(&all.values[0], &[0.0, NAN, -20.0, -50.0]);
}

#[test]
fn a_zero_is_output_over_supply() {
    let sheet = gauge("zero = { rows = 2 }")
        .replace("\"mV/V\"", "\"mV\"")
        .replace("\"0\"] }", "\"0\"], supply = { column = 2, reads = \"V\" } }");
    // 2 mV at 2 V and 9 mV at 3 V: 1 and 3 mV/V, mean 2 mV/V, while the mean of the readings over that of the supply is 2.2
    let all = run(&sheet, &[], &[column(&[2.0, 9.0, 10.0]), column(&[2.0, 3.0, 2.0])]);
    assert_eq!(all.said, ["g: zero 2.000000 mV/V, mean of 2 readings in the first 2 rows"]);
    near(&all.values[0], &[strain(1.0, 2.0, 2.0), strain(3.0, 2.0, 2.0), strain(5.0, 2.0, 2.0)]);
}

#[test]
fn a_blank_supply() {
    let volts =
        gauge("").replace("\"mV/V\"", "\"mV\"").replace("\"0\"] }", "\"0\"], supply = { column = 2, reads = \"V\" } }");
    let words = [GOOD, MISSING, Word::Unreadable, GOOD];
    let supply = with_words(&[2.0, NAN, NAN, 0.0], &words);
    let all = run(&volts, &[], &[column(&[2.0, 2.0, 2.0, 2.0]), supply.clone()]);
    near(&all.values[0], &[strain(1.0, 0.0, 2.0), NAN, NAN, NAN]);
    assert_eq!(all.words[0], [GOOD, MISSING, Word::Unreadable, Word::OutOfRange]);
    // the reading's own word goes before that of the supply
    let reading = with_words(&[NAN, NAN, NAN, 2.0], &[Word::Saturated, Word::Saturated, Word::Unreadable, GOOD]);
    let all = run(&volts, &[], &[reading, supply.clone()]);
    assert_eq!(all.words[0], [Word::Saturated, Word::Saturated, Word::Unreadable, Word::OutOfRange]);
    // also where it is an end code or beyond a limit
    let counts = volts.replace("reads = \"mV\"\n", "reads = \"count\"\nconverter = { bits = 8, full_scale = \"1 V\", coding = \"signed\" }\nlimits = { low = \"-100 count\", below = \"open\" }\n");
    let all = run(&counts, &[], &[column(&[127.0, -101.0, 1.0, NAN]), supply.clone()]);
    assert_eq!(all.words[0], [Word::Saturated, Word::Open, Word::Unreadable, MISSING]);
    // a ratio needs no supply
    let ratio = volts.replace("reads = \"mV\"\n", "reads = \"mV/V\"\n");
    let all = run(&ratio, &[], &[column(&[1.0; 4]), supply]);
    assert_eq!(all.words[0], [GOOD; 4]);
}

#[test]
fn a_change_in_time() {
    let sheet = gauge(
        "zero = { rows = 2 }\n[[channel.g.change]]\nfrom = \"10 s\"\ngauge = { gauge_factor = 4 }\n\
         [[channel.g.change]]\nfrom = \"20 s\"\ncolumn = 2\n",
    );
    let seconds = [0.0, 9.5, 10.0, NAN, 19.5, 20.0, NAN, 25.0];
    let first = column(&[1.0, 1.0, 5.0, 5.0, 5.0, 7.0, 7.0, 7.0]);
    let second = column(&[0.0, 0.0, 0.0, 0.0, 0.0, 9.0, 9.0, 9.0]);
    let all = run(&sheet, &seconds, &[first, second]);
    let s = strain;
    // the row at the moment itself is the first under the new keys; a row without a time keeps what is in force
    let want = [
        0.0,
        0.0,
        s(5.0, 1.0, 4.0),
        s(5.0, 1.0, 4.0),
        s(5.0, 1.0, 4.0),
        s(9.0, 1.0, 4.0),
        s(9.0, 1.0, 4.0),
        s(9.0, 1.0, 4.0),
    ];
    near(&all.values[0], &want);
    assert_eq!(all.said.len(), 3, "one zero for each: {:?}", all.said);
}

#[test]
fn sums_and_stress() {
    let sheet = "[channel.b]\ncombine = { a = 0.5, t = -0.5 }\n[channel.a]\ncolumn = 1\nreads = \"microstrain\"\n\
        [channel.t]\ncolumn = 2\nreads = \"microstrain\"\n[channel.s]\nof = \"b\"\nmaterial = { modulus = \"200 GPa\" }\n";
    let words = [GOOD, GOOD, Word::Saturated, Word::Unreadable];
    let a = with_words(&[100.0, 10.0, NAN, NAN], &words);
    let t = with_words(&[-50.0, NAN, 7.0, NAN], &[GOOD, MISSING, GOOD, Word::Saturated]);
    let all = run(sheet, &[], &[a, t]);
    near(&all.values[0], &[75.0, NAN, NAN, NAN]);
    // the first word in the order of the sheet stands for the sum, and the stress takes that of its strain
    let want = [GOOD, MISSING, Word::Saturated, Word::Unreadable];
    assert_eq!((all.words[0].as_slice(), all.words[3].as_slice()), (&want[..], &want[..]));
    // 75e-6 · 200 GPa = 15 MPa
    near(&all.values[3], &[15.0, NAN, NAN, NAN]);
}

#[test]
fn a_number_with_a_word_stays_one() {
    let sheet = "[channel.t]\ncolumn = 1\nreads = \"ohm\"\nextrapolate = true\n\
        platinum = { standard = \"IEC 60751\", r0 = \"100 ohm\", range = [\"0 degC\", \"100 degC\"] }\n\
        [channel.u]\ncolumn = 2\nreads = \"degC\"\n[channel.d]\ncombine = { t = 1, u = -1 }\n";
    // 157.33 Ω is 150 °C (IEC 60751:2008, table of a 100 Ω element)
    let all = run(sheet, &[], &[column(&[157.33, 157.33]), column(&[1.0, NAN])]);
    assert_eq!(all.words[0], [Word::Extrapolated; 2]);
    assert_eq!(all.words[2], [Word::Extrapolated, MISSING]);
    assert!((all.values[2][0] - 149.0).abs() < 0.02, "{}", all.values[2][0]);
}

#[test]
fn a_sum_of_a_slow_channel_rests_with_it() {
    let sheet = format!(
        "{}[channel.twice]\ncombine = {{ deck = 1 }}\n[channel.air]\ncolumn = 3\nreads = \"degC\"\n[channel.diff]\ncombine = {{ air = 1, deck = -1 }}\n",
        shows_temperature("\"deck\"")
    );
    let seconds = [0.0, 1.0, 2.0, 100.0];
    let inputs = [column(&[0.0; 4]), column(&[20.0, NAN, 22.0, NAN]), column(&[15.0; 4])];
    let all = run(&sheet, &seconds, &inputs);
    let rests = [false, true, false, false];
    for channel in [1, 2, 4] {
        assert_eq!(all.rests[channel], rests, "channel {channel}");
        assert_eq!(all.words[channel], [GOOD, MISSING, GOOD, MISSING]);
    }
    assert_eq!(all.rests[3], [false; 4]);
}

#[test]
fn temperatures_that_wait_are_refused() {
    // deck's own gauge cannot be the temperature of another gauge, since it is interpolated itself
    let sheet = "[channel.a]\ncolumn = 1\nreads = \"mV/V\"\ngauge = { resistance = \"350 ohm\", gauge_factor = 2, slope = \"1 %/100K\" }\n\
        bridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }\ntemperature = \"a\"\n";
    let error = Sheet::read("s.toml", sheet).unwrap_err().to_string();
    assert!(
        error.starts_with("s.toml:6:15: channel 'a' gives a strain (microstrain, %, strain), not a temperature"),
        "{error}"
    );
}

#[test]
fn rows_at_random() {
    // any mixture of blank, unreadable and good cells, with clocks that run, stand and step back: the split into blocks
    // does not matter, and a sum is there exactly where its parts are
    let sheet = format!(
        "{}[channel.d]\ncombine = {{ g = 1, h = -1 }}\n[channel.h]\ncolumn = 3\nreads = \"microstrain\"\n\
         [[channel.h.change]]\nfrom = \"6 s\"\ncolumn = 1\nreads = \"microstrain\"\n",
        shows_temperature("{ channel = \"deck\", longest_gap = \"4 s\" }")
    );
    let mut state = 20260509_u64;
    let mut draw = |n: u64| {
        state = state.wrapping_mul(6364136223846793005).wrapping_add(1442695040888963407);
        (state >> 33) % n
    };
    for _ in 0..200 {
        let rows = 1 + draw(12) as usize;
        let mut clock = 0.0;
        let seconds: Vec<f64> = (0..rows)
            .map(|_| {
                clock += [1.0, 1.0, 1.0, 0.5, 0.0, 3.0, 6.0, -2.0][draw(8) as usize];
                if draw(8) == 0 { NAN } else { clock }
            })
            .collect();
        let mut cells = |odds: u64| {
            let words: Vec<Word> = (0..rows)
                .map(|_| {
                    if draw(odds) > 0 {
                        GOOD
                    } else if draw(3) > 0 {
                        MISSING
                    } else {
                        Word::Unreadable
                    }
                })
                .collect();
            let values = words.iter().map(|w| if *w == GOOD { draw(100) as f64 / 8.0 } else { NAN }).collect();
            Column { values, words }
        };
        let (g, h) = (cells(6), cells(6));
        let deck = {
            let sparse = cells(2);
            Column { values: sparse.values.iter().map(|v| v + 15.0).collect(), words: sparse.words }
        };
        let all = run(&sheet, &seconds, &[g, deck, h]);
        for row in 0..rows {
            let both = all.words[0][row] == GOOD && all.words[3][row] == GOOD;
            assert_eq!(all.words[2][row] == GOOD, both);
        }
    }
}

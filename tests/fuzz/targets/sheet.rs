//! Any text as a sheet: it is read or refused with a message that can be shown. What is read can be described, and either
//! plans or says why not; what plans converts any numbers, each row to a number or a word.
#![no_main]

use libfuzzer_sys::fuzz_target;
use ohmwright::chain::Word;
use ohmwright::measurement::{AgainPass, Column, Engine, Measurement, ZeroPass};
use ohmwright::sheet::Sheet;

const READINGS: [f64; 12] =
    [0.0, 1e-6, -0.02, 0.5, 1.0, 25.0, 110.0, 1e4, -8_388_608.0, 1e300, f64::INFINITY, f64::NAN];

/// Seconds and input columns, each column beginning at another reading.
fn rows(inputs: usize) -> (Vec<f64>, Vec<Column>) {
    let column = |shift: usize| {
        let values: Vec<f64> = READINGS.iter().copied().cycle().skip(shift).take(READINGS.len()).collect();
        let words = values.iter().map(|v| if v.is_nan() { Word::Missing } else { Word::Good }).collect();
        Column { values, words }
    };
    ((0..READINGS.len()).map(|i| i as f64).collect(), (0..inputs).map(column).collect())
}

fn settled(measurement: &Measurement) -> Option<Measurement> {
    let mut measurement = measurement.clone();
    let mut moments = 0.0;
    let placed: Result<(), ()> = measurement.place_moments(|_| {
        moments += 1.0;
        Ok(moments)
    });
    placed.expect("nothing was refused");
    if measurement.needs_zero_pass() {
        let mut pass = ZeroPass::new(&measurement).ok()?;
        let (seconds, columns) = rows(measurement.inputs.len());
        pass.push(seconds, columns);
        let zeros = pass.finish().ok()?;
        zeros.settle(&mut measurement);
    }
    if measurement.needs_again_pass() {
        let mut pass = AgainPass::new(&measurement).ok()?;
        let (seconds, columns) = rows(measurement.inputs.len());
        pass.push(seconds, columns);
        let found = pass.finish().ok()?;
        measurement.settle_again(&found);
    }
    Some(measurement)
}

fuzz_target!(|text: &str| {
    // what stands behind the mark is the list that the sheet may name
    let (text, list) = text.split_once("\n%%%%\n").unwrap_or((text, ""));
    let open = &mut |file: &str| Ok((file.to_string(), list.as_bytes().to_vec()));
    let sheet = match Sheet::read_with("sheet.toml", text, open) {
        Ok(sheet) => sheet,
        Err(error) => {
            assert!(!error.diagnostics().is_empty() && !error.to_string().is_empty());
            return;
        }
    };
    for channel in 0..sheet.measurement.channels.len() {
        assert!(sheet.describe(channel).iter().all(|line| !line.is_empty()));
        let _ = (sheet.reading_unit(channel), sheet.reading(channel, "1.5 mV"), sheet.result(channel, "20 degC"));
    }
    if let Err(error) = Engine::<()>::new(&sheet.measurement) {
        assert!(!error.to_string().is_empty());
        return;
    }
    let Some(measurement) = settled(&sheet.measurement) else { return };
    let Ok(mut engine) = Engine::new(&measurement) else { return };
    for _ in 0..2 {
        let (seconds, columns) = rows(measurement.inputs.len());
        engine.push(seconds, columns, ());
    }
    engine.end();
    let mut blocks = 0;
    while let Some(block) = engine.pop() {
        blocks += 1;
        assert_eq!(block.results.len(), measurement.channels.len());
        for column in &block.results {
            assert_eq!((column.values.len(), column.words.len()), (block.rows(), block.rows()));
            for (value, word) in column.values.iter().zip(&column.words) {
                assert_eq!(value.is_nan(), !word.has_number(), "{value} {word}");
            }
        }
    }
    assert_eq!(blocks, 2);
});

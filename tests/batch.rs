//! A slice gives what one reading gives, bit for bit: for every kind of plan, any length, any split, with the loop for
//! the baseline processor and the one that the processor at hand allows.

mod support;

use ohmwright::Error;
use ohmwright::chain::{Batch, Chain, Columns, Inputs, Limit, Plan, Reading, Signal, Supply, Word};
use ohmwright::signal::{Arm, Bridge, Coding, Conductor, Converter, Driven, Each, FullScale, Leads, Wires};
use ohmwright::strain::Gauge;
use support::chains::{self, Case};
use support::oracle::SplitMix64;

/// Lengths around the block of 512 and around the width of the vector registers.
const LENGTHS: [usize; 9] = [0, 1, 2, 3, 7, 511, 512, 513, 4097];
const MOST: usize = 4097;
/// Stands in slices that must not be written; no result of any chain here.
const UNTOUCHED: f64 = -7.25e77;

/// Readings of all sorts with what comes with them.
struct Recording {
    readings: Vec<f64>,
    supplies: Vec<f64>,
    celsius: Vec<f64>,
    lead_celsius: Vec<f64>,
    arm_celsius: [Vec<f64>; 4],
}

impl Recording {
    fn columns(&self, from: usize, to: usize) -> Columns<'_> {
        Columns {
            readings: &self.readings[from..to],
            supplies: &self.supplies[from..to],
            celsius: &self.celsius[from..to],
            lead_celsius: &self.lead_celsius[from..to],
            arm_celsius: self.arm_celsius.each_ref().map(|t| &t[from..to]),
        }
    }

    fn inputs(&self, i: usize) -> Inputs {
        Inputs {
            reading: self.readings[i],
            supply: self.supplies[i],
            celsius: self.celsius[i],
            lead_celsius: self.lead_celsius[i],
            arm_celsius: self.arm_celsius.each_ref().map(|t| t[i]),
        }
    }
}

/// The chains, and the same with limits and with extrapolation.
fn variants() -> Vec<(String, Case)> {
    let mut list = Vec::new();
    for case in chains::all() {
        let plan = case.chain.plan().expect("a plan");
        let [low, high] = case.span;
        let reading = |share: f64| plan.forward(low + share * (high - low), case.inputs).expect("inside");
        let (a, b) = (reading(0.2), reading(0.8));
        let limited = Chain {
            low_limit: Some(Limit { at: a.min(b), word: Word::Short }),
            high_limit: Some(Limit { at: a.max(b), word: Word::Open }),
            ..case.chain
        };
        let wide = Chain { extrapolate: true, ..case.chain };
        list.push((case.name.to_owned(), case));
        list.push((format!("{}, limits", case.name), Case { chain: limited, ..case }));
        if wide.plan().is_err() {
            // some laws say nothing outside their range
            assert!(!chains::extrapolates(&case.chain), "{}", case.name);
            continue;
        }
        list.push((format!("{}, extrapolating", case.name), Case { chain: wide, ..case }));
    }
    list
}

/// Ordinary readings over the whole span and somewhat beyond, and every kind of bad one among them.
fn recording(case: &Case, plan: &Plan, seed: u64) -> Recording {
    let mut s = SplitMix64(seed);
    let mut r = Recording {
        readings: Vec::new(),
        supplies: Vec::new(),
        celsius: Vec::new(),
        lead_celsius: Vec::new(),
        arm_celsius: [const { Vec::new() }; 4],
    };
    let [low, high] = case.span;
    for _ in 0..MOST {
        let odd = s.word();
        let mut supply = case.inputs.supply * s.uniform(0.95, 1.05);
        let mut celsius = s.uniform(-55.0, 175.0);
        let mut lead_celsius = s.uniform(-40.0, 90.0);
        let mut arm_celsius = [(); 4].map(|()| s.uniform(-55.0, 175.0));
        let inputs = Inputs { reading: 0.0, supply, celsius, lead_celsius, arm_celsius };
        let ordinary = plan.forward(low + (high - low) * s.unit(), inputs).unwrap_or(0.0);
        let reading = match odd % 16 {
            0 => f64::NAN,
            1 => f64::INFINITY * if odd & 16 == 0 { 1.0 } else { -1.0 },
            2 => 0.0 * if odd & 16 == 0 { 1.0 } else { -1.0 },
            3 => f64::from_bits(s.word()),
            4 => ordinary * s.uniform(-4.0, 4.0),
            5 => s.uniform(-1.0, 1.0),
            _ => ordinary,
        };
        match s.word() % 24 {
            0 => supply = 0.0,
            1 => supply = f64::NAN,
            2 => supply = f64::from_bits(s.word()),
            3 => celsius = f64::NAN,
            4 => celsius = f64::from_bits(s.word()),
            5 => celsius = s.uniform(-400.0, 400.0),
            6 => (supply, celsius) = (f64::INFINITY, f64::NEG_INFINITY),
            7 => lead_celsius = f64::NAN,
            8 => lead_celsius = f64::from_bits(s.word()),
            // copper has no resistance left below -234 °C
            9 => lead_celsius = s.uniform(-400.0, 400.0),
            10 => arm_celsius[(odd >> 8) as usize % 4] = f64::NAN,
            11 => arm_celsius[(odd >> 8) as usize % 4] = f64::from_bits(s.word()),
            12 => arm_celsius[(odd >> 8) as usize % 4] = s.uniform(-400.0, 400.0),
            13 => (lead_celsius, arm_celsius[3]) = (f64::INFINITY, f64::NEG_INFINITY),
            _ => {}
        }
        r.readings.push(reading);
        r.supplies.push(supply);
        r.celsius.push(celsius);
        r.lead_celsius.push(lead_celsius);
        r.arm_celsius.iter_mut().zip(arm_celsius).for_each(|(column, t)| column.push(t));
    }
    r
}

fn bits(values: &[f64]) -> Vec<u64> {
    values.iter().map(|v| v.to_bits()).collect()
}

/// First place where two columns differ, for a message that can be read.
fn first_difference(a: &[f64], b: &[f64]) -> Option<(usize, f64, f64)> {
    (0..a.len()).find(|&i| a[i].to_bits() != b[i].to_bits()).map(|i| (i, a[i], b[i]))
}

#[test]
fn the_list_has_every_kind_of_plan() {
    let text: String = variants().iter().map(|(_, c)| format!("{:?}\n", c.chain.plan().expect("a plan"))).collect();
    for kind in [
        "front: Moebius",
        "front: Quadratic",
        "front: Quartic",
        "front: Arms",
        "front: Live",
        "own: [Column, Gauge, Fixed(",
        "warmth: Some(Warmth",
        "warmth: None",
        "count: 7",
        "count: 1 ",
        "degree: First",
        "degree: Second",
        "degree: Fourth",
        "law: None",
        "law: Platinum",
        "law: Thermistor(Beta",
        "law: Thermistor(SteinhartHart",
        "law: Certificate(PlainCertificate",
        "gives_output: true",
        "gives_output: false",
        "shift: Some(Leads",
        "shift: Some(Junction",
        "law: Standard",
        "law: Metal(Nickel",
        "law: Metal(Copper",
        "law: Thermistor(LogarithmOfRatio",
        "law: Thermistor(ReciprocalOfTemperature",
        "law: Thermistor(Points",
        "law: Thermocouple",
        "heating: Some",
        "by_supply: true",
        "by_supply: false",
        "points: Some",
        "tail: ThermalPoints",
        "tail: None",
        "tail: Affine",
        "tail: Thermal {",
        "fault: Sensor",
        "fault: Turned",
        "fault: Arms",
        "fault: None",
        "divides_by_supply: true",
        "divides_by_supply: false",
    ] {
        assert!(text.contains(kind), "no plan with {kind}");
    }
}

#[test]
fn a_slice_is_one_reading_after_the_other() {
    let mut seen = [0_usize; Word::ALL.len()];
    for (n, (name, case)) in variants().into_iter().enumerate() {
        let plan = case.chain.plan().expect("a plan");
        let r = recording(&case, &plan, n as u64);
        let single: Vec<_> = (0..MOST).map(|i| plan.one(r.inputs(i))).collect();
        let (values, words): (Vec<_>, Vec<_>) = single.iter().map(|o| (o.value, o.word)).unzip();
        for (i, o) in single.iter().enumerate() {
            seen[o.word as usize] += 1;
            assert_eq!(o.word.has_number(), o.value.is_finite(), "{name}: {:?}: {o:?}", r.inputs(i));
            // no number is always the same NaN
            assert!(o.value.is_finite() || o.value.to_bits() == f64::NAN.to_bits(), "{name}: {:?}", r.inputs(i));
        }
        let good = words.iter().filter(|w| w.has_number()).count();
        assert!(good > MOST / 6, "{name}: only {good} readings convert");
        for length in LENGTHS {
            // several offsets, so that a reading stands in different places of a vector
            for from in [0, 1, 2, 3].into_iter().filter(|f| f + length <= MOST) {
                let to = from + length;
                let columns = r.columns(from, to);
                let mut out = vec![UNTOUCHED; length];
                let mut said = vec![Word::Unreadable; length];
                let batch = plan.slice(&columns, &mut out, Some(&mut said)).expect("equal lengths");
                assert_eq!(first_difference(&out, &values[from..to]), None, "{name}: {from}..{to}");
                assert_eq!(said, words[from..to], "{name}: {from}..{to}");
                let bad: Vec<_> = (0..length).filter(|i| !said[*i].has_number()).collect();
                assert_eq!(batch, Batch { invalid: bad.len(), first_invalid: bad.first().copied() }, "{name}");

                let mut alone = vec![UNTOUCHED; length];
                let without = plan.slice(&columns, &mut alone, None).expect("equal lengths");
                assert_eq!(first_difference(&alone, &out), None, "{name}: without words");
                assert_eq!(without, batch, "{name}: without words");

                let mut baseline = vec![UNTOUCHED; length];
                plan.slice_baseline(&columns, &mut baseline);
                assert_eq!(first_difference(&baseline, &out), None, "{name}: baseline");
            }
        }
    }
    // the recordings met everything that a plan can say
    for word in Word::ALL {
        let can = !matches!(word, Word::Unreadable);
        assert_eq!(seen[word as usize] > 0, can, "{word}: {} times", seen[word as usize]);
    }
}

#[test]
fn readings_without_a_fault_among_them() {
    for (n, (name, case)) in variants().into_iter().enumerate() {
        let plan = case.chain.plan().expect("a plan");
        let r = recording(&case, &plan, 2_000 + n as u64);
        // ordinary readings alone, many times over: blocks that can go the short way, where there is one
        let good: Vec<usize> = (0..MOST).filter(|i| plan.one(r.inputs(*i)).word == Word::Good).collect();
        let rows: Vec<usize> = good.iter().copied().cycle().take(2 * MOST).collect();
        assert!(good.len() > 100 || case.chain.extrapolate, "{name}: {}", good.len());
        let pick = |column: &[f64]| rows.iter().map(|i| column[*i]).collect::<Vec<_>>();
        let clean = Recording {
            readings: pick(&r.readings),
            supplies: pick(&r.supplies),
            celsius: pick(&r.celsius),
            lead_celsius: pick(&r.lead_celsius),
            arm_celsius: r.arm_celsius.each_ref().map(|t| pick(t)),
        };
        let values: Vec<f64> = (0..rows.len()).map(|i| plan.one(clean.inputs(i)).value).collect();
        let (mut out, mut baseline) = (vec![UNTOUCHED; rows.len()], vec![UNTOUCHED; rows.len()]);
        let mut words = vec![Word::Unreadable; rows.len()];
        let columns = clean.columns(0, rows.len());
        let batch = plan.slice(&columns, &mut out, Some(&mut words)).expect("equal lengths");
        plan.slice_baseline(&columns, &mut baseline);
        assert_eq!(batch, Batch::default(), "{name}");
        assert!(words.iter().all(|w| *w == Word::Good), "{name}");
        assert_eq!(first_difference(&out, &values), None, "{name}");
        assert_eq!(first_difference(&baseline, &values), None, "{name}: baseline");
    }
}

#[test]
fn any_split_gives_the_same_bits() {
    // printed, so that feature sets, profiles and processors can be compared (FNV-1a over all bits)
    let mut print = 0xcbf2_9ce4_8422_2325_u64;
    for (n, (name, case)) in variants().into_iter().enumerate() {
        let plan = case.chain.plan().expect("a plan");
        let r = recording(&case, &plan, 1_000 + n as u64);
        let mut whole = vec![UNTOUCHED; MOST];
        let total = plan.slice(&r.columns(0, MOST), &mut whole, None).expect("equal lengths");
        for byte in whole.iter().flat_map(|v| v.to_bits().to_le_bytes()) {
            print = (print ^ u64::from(byte)).wrapping_mul(0x0100_0000_01b3);
        }
        let mut s = SplitMix64(n as u64);
        for longest in [1.0, 9.0, 700.0, 3_000.0] {
            let mut parts = vec![UNTOUCHED; MOST];
            let (mut from, mut invalid) = (0, 0);
            while from < MOST {
                let to = MOST.min(from + s.uniform(0.0, longest + 1.0) as usize);
                let batch = plan.slice(&r.columns(from, to), &mut parts[from..to], None).expect("equal lengths");
                invalid += batch.invalid;
                from = to;
            }
            assert_eq!(bits(&parts), bits(&whole), "{name}: parts of up to {longest}");
            assert_eq!(invalid, total.invalid, "{name}: parts of up to {longest}");
        }
    }
    println!("bits of all results: {print:016x}");
}

#[test]
fn lengths_that_differ_write_nothing() {
    for (name, case) in variants() {
        let plan = case.chain.plan().expect("a plan");
        let (readings, side) = ([0.001; 4], [1.0; 5]);
        let full = Columns {
            readings: &readings,
            supplies: &side[..4],
            celsius: &side[..4],
            lead_celsius: &side[..4],
            arm_celsius: [&side[..4]; 4],
        };
        let refuse = |columns: Columns<'_>, out_len: usize, words_len: usize, expected: usize, got: usize| {
            let mut out = [UNTOUCHED; 5];
            let mut words = [Word::Unreadable; 5];
            match plan.slice(&columns, &mut out[..out_len], Some(&mut words[..words_len])) {
                Err(Error::LengthMismatch { expected: e, got: g, .. }) => assert_eq!((e, g), (expected, got), "{name}"),
                other => panic!("{name}: {other:?}"),
            }
            assert_eq!(bits(&out), bits(&[UNTOUCHED; 5]), "{name}");
            assert_eq!(words, [Word::Unreadable; 5], "{name}");
        };
        for len in [0, 3, 5] {
            refuse(full, len, 4, 4, len);
            refuse(full, 4, len, 4, len);
            if plan.uses_supply() {
                refuse(Columns { supplies: &side[..len], ..full }, 4, 4, 4, len);
            }
            if plan.uses_temperature() {
                refuse(Columns { celsius: &side[..len], ..full }, 4, 4, 4, len);
            }
            if plan.uses_lead_temperature() {
                refuse(Columns { lead_celsius: &side[..len], ..full }, 4, 4, 4, len);
            }
            for arm in (0..4).filter(|i| plan.uses_arm_temperatures()[*i]) {
                let mut arm_celsius = full.arm_celsius;
                arm_celsius[arm] = &side[..len];
                refuse(Columns { arm_celsius, ..full }, 4, 4, 4, len);
            }
        }
        // a column that the chain does not use may have any length
        let mut out = [UNTOUCHED; 4];
        let lean = Columns {
            supplies: if plan.uses_supply() { full.supplies } else { &side },
            celsius: if plan.uses_temperature() { full.celsius } else { &side[..1] },
            lead_celsius: if plan.uses_lead_temperature() { full.lead_celsius } else { &side[..3] },
            arm_celsius: plan.uses_arm_temperatures().map(|used| if used { &side[..4] } else { &side[..2] }),
            ..full
        };
        assert!(plan.slice(&lean, &mut out, None).is_ok(), "{name}");
        assert!(out.iter().all(|v| *v != UNTOUCHED), "{name}");
    }
}

#[test]
fn a_word_without_a_number_has_none_beside_it() {
    // resistances that nobody has, found by fuzzing: an extrapolating chain looks at its number again, and the circuit is open
    let mut bridge = Bridge::one_gauge(350.0);
    bridge.resistances = [350.0, 350.0, 350.000_000_029_802_3, 1.190_988_284_248_637_6e41];
    bridge.arms[0] = Arm::Active { factor: 6.961_731_899_447_93e187, driven: Driven::Along };
    bridge.leads = Some(Leads { wires: Wires::Three, each: Each::Same(Conductor::Ohms(1.8)) });
    let converter = Some(Converter { bits: 24, full_scale: FullScale::Volts(0.04), coding: Coding::Signed });
    let chain = Chain {
        reading: Reading { signal: Signal::Count, exponent: 0 },
        converter,
        supply: Supply::Fixed(2.5),
        extrapolate: true,
        ..Chain::strain(bridge, Gauge::new(2.0175))
    };
    let plan = chain.plan().unwrap();
    let readings = [0.0, 1e-3, 100.0, -5.0, f64::NAN, 1e300];
    let (mut out, mut words, mut bare) = ([0.0; 6], [Word::Good; 6], [0.0; 6]);
    let columns = Columns { readings: &readings, ..Columns::default() };
    let batch = plan.slice(&columns, &mut out, Some(&mut words)).unwrap();
    assert_eq!(plan.slice(&columns, &mut bare, None), Ok(batch));
    assert_eq!(batch.invalid, out.iter().filter(|v| v.is_nan()).count());
    assert!(words.contains(&Word::Open));
    for (i, reading) in readings.into_iter().enumerate() {
        let one = plan.one(Inputs { reading, ..Inputs::default() });
        assert_eq!(one.word.has_number(), one.value.is_finite(), "{reading}: {one:?}");
        assert_eq!((one.value.to_bits(), one.word), (out[i].to_bits(), words[i]), "{reading}");
        assert_eq!(bare[i].to_bits(), out[i].to_bits());
    }
}

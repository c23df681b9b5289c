//! Images: every chain comes back the same to the bit, and bytes that are none are refused.
#![cfg(feature = "std")]

mod support;

use ohmwright::chain::{Chain, Inputs, Plan};
use ohmwright::image::{FieldError, Fields, Image, ImageError, fields, write};
use support::chains;

#[test]
fn every_chain_comes_back() {
    let cases = chains::all();
    let named: Vec<(&str, &str, &Chain)> = cases.iter().map(|case| (case.name, "microstrain", &case.chain)).collect();
    let bytes = write(named.iter().copied()).unwrap();
    let image = Image::new(&bytes).unwrap();
    assert_eq!(image.len(), cases.len());
    for (i, case) in cases.iter().enumerate() {
        let entry = image.entry(i).unwrap();
        assert_eq!((entry.name, entry.unit), (case.name, "microstrain"));
        assert_eq!(entry.chain, case.chain, "{}", case.name);
        // the plan of what was read gives the same bits
        let (own, read): (Plan, Plan) = (case.chain.plan().unwrap(), entry.chain.plan().unwrap());
        assert_eq!(own, read, "{}", case.name);
        let reading = own.forward(0.5 * (case.span[0] + case.span[1]), case.inputs).unwrap();
        let bits = |plan: &Plan| plan.one(Inputs { reading, ..case.inputs }).value.to_bits();
        assert_eq!(bits(&own), bits(&read), "{}", case.name);
    }
    assert_eq!(image.entry(cases.len()), Err(ImageError::Index));
    // the same for tests/metal/run
    if let Some(place) = std::env::var_os("OHMWRIGHT_KINDS") {
        let place = std::path::Path::new(&place);
        std::fs::write(place.join("kinds.owi"), &bytes).unwrap();
        std::fs::write(place.join("cases.h"), in_c(&cases)).unwrap();
    }
}

/// What comes with the readings of the cases, and between which results they are tested.
fn in_c(cases: &[chains::Case]) -> String {
    let mut text = String::from(
        "static const struct {\n\tdouble supply, celsius, lead_celsius, arm_celsius[4], low, high;\n} cases[] = {\n",
    );
    for case in cases {
        let Inputs { supply, celsius, lead_celsius, arm_celsius: [a, b, c, d], .. } = case.inputs;
        let [low, high] = case.span;
        text += &format!(
            "\t{{{supply:?}, {celsius:?}, {lead_celsius:?}, {{{a:?}, {b:?}, {c:?}, {d:?}}}, {low:?}, {high:?}}},\n"
        );
    }
    text + "};\n"
}

#[test]
fn every_field_is_used_by_some_chain() {
    let mut used = vec![false; fields::COUNT];
    for case in chains::all() {
        for (field, _) in Fields::from(&case.chain).iter() {
            used[usize::from(field)] = true;
        }
    }
    // limits stand in no chain of the list
    let chain = Chain {
        low_limit: Some(ohmwright::chain::Limit { at: -1.0, word: ohmwright::chain::Word::Short }),
        high_limit: Some(ohmwright::chain::Limit { at: 1.0, word: ohmwright::chain::Word::Open }),
        ..chains::all()[0].chain
    };
    assert_eq!(Fields::from(&chain).chain(), Ok(chain));
    for field in [fields::LOW_LIMIT, fields::LOW_WORD, fields::HIGH_LIMIT, fields::HIGH_WORD] {
        used[usize::from(field)] = true;
    }
    // a name stands for all numbers up to the next
    let ends = fields::NAMES.iter().skip(1).map(|(first, _)| usize::from(*first)).chain([fields::COUNT]);
    let spans = fields::NAMES.iter().zip(ends);
    let unused: Vec<&str> = spans
        .filter(|((first, _), end)| !used[usize::from(*first)..*end].contains(&true))
        .map(|((_, n), _)| *n)
        .collect();
    assert!(unused.is_empty(), "{unused:?}");
}

#[test]
fn bytes_that_are_no_image() {
    let case = &chains::all()[0];
    let good = write([("g", "microstrain", &case.chain)]).unwrap();
    assert!(Image::new(&good).is_ok());
    assert_eq!(Image::new(&[]), Err(ImageError::NoImage));
    assert_eq!(Image::new(b"OHMX"), Err(ImageError::NoImage));
    // every byte counts: the magic, the version, the count, the length, the checksum, the body
    for at in 0..good.len() {
        for bit in 0..8 {
            let mut bad = good.clone();
            bad[at] ^= 1 << bit;
            match Image::new(&bad) {
                Err(ImageError::NoImage) => assert!(at < 4),
                Err(ImageError::Version(_)) => assert!((4..6).contains(&at)),
                Err(ImageError::Corrupt) => assert!(at >= 6, "{at}"),
                other => panic!("{at}: {other:?}"),
            }
        }
        assert!(Image::new(&good[..at]).is_err(), "{at}");
    }
    let mut long = good.clone();
    long.push(0);
    assert_eq!(Image::new(&long), Err(ImageError::Corrupt));
    let name = "x".repeat(256);
    assert_eq!(write([(name.as_str(), "", &case.chain)]), Err(0));
}

#[test]
fn values_that_make_no_chain() {
    let case = &chains::all()[0];
    let whole = Fields::from(&case.chain);
    // without any one of the needed fields there is no chain
    for (left_out, _) in whole.iter() {
        let mut fields = Fields::new();
        for (field, value) in whole.iter().filter(|(field, _)| *field != left_out) {
            fields.set(field, value).unwrap();
        }
        match fields.chain() {
            Ok(_) => {}
            Err(FieldError::Missing(field)) => assert_eq!(field, left_out),
            Err(other) => panic!("{left_out}: {other:?}"),
        }
    }
    for (field, value) in [
        (fields::SIGNAL, 5.0),
        (fields::SIGNAL, 0.5),
        (fields::SIGNAL, f64::NAN),
        (fields::ELEMENT, -1.0),
        (fields::NETWORK, 6.0),
        (fields::OUTPUT, 9.0),
        (fields::READING_EXPONENT, 1e9),
    ] {
        let mut fields = whole;
        fields.set(field, value).unwrap();
        assert_eq!(fields.chain(), Err(FieldError::NoChoice(field)));
    }
}

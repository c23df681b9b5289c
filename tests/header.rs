//! src/capi/ohmwright.h is what its sources say: made again, it is the same. `BLESS=1` writes it.
#![cfg(feature = "capi")]

use std::fmt::Write;
use std::path::Path;

use ohmwright::image::fields::NAMES;

fn header() -> String {
    let root = Path::new(env!("CARGO_MANIFEST_DIR"));
    let config = cbindgen::Config::from_file(root.join("src/capi/cbindgen.toml")).expect("a configuration");
    let mut out = Vec::new();
    cbindgen::Builder::new()
        .with_src(root.join("src/capi/mod.rs"))
        .with_config(config)
        .generate()
        .expect("bindings")
        .write(&mut out);
    let text = String::from_utf8(out).expect("UTF-8");
    // the numbers of the fields with what they mean, before the first function
    let source = std::fs::read_to_string(root.join("src/image/fields/mod.rs")).expect("the fields");
    let mut fields = String::from(
        "/*\n * Fields of a draft; a name with several fields is the first of them. A value is a double, a choice by its number.\n \
         * What is needed and absent makes OW_MISSING; what else is absent is none, or 0.\n */\n",
    );
    for (number, name) in NAMES {
        writeln!(fields, "/* {} */\n#define OW_FIELD_{name} {number}", meaning(&source, name)).expect("text");
    }
    let place = text.find("#ifdef __cplusplus\nextern").expect("the functions");
    format!("{}{fields}\n{}", &text[..place], &text[place..])
}

/// What stands above a field in its source.
fn meaning(source: &str, name: &str) -> String {
    let mut lines = Vec::new();
    for line in source.lines().map(str::trim) {
        match line.strip_prefix("/// ") {
            Some(text) => lines.push(text),
            None if line.split(" = ").next() == Some(name) => return lines.join("\n   "),
            None => lines.clear(),
        }
    }
    panic!("{name} has no meaning in the source");
}

#[test]
fn the_header_is_up_to_date() {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("src/capi/ohmwright.h");
    let made = header();
    if std::env::var_os("BLESS").is_some() {
        std::fs::write(&path, &made).expect("written");
    }
    let there = std::fs::read_to_string(&path).expect("the header");
    assert_eq!(there, made, "make it again: BLESS=1 cargo test --features capi --test header");
}

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
    // the numbers of the fields, before the first function
    let mut fields = String::from("/*\n * Fields of a draft; a name with several fields is the first of them.\n */\n");
    for (number, name) in NAMES {
        writeln!(fields, "#define OW_FIELD_{name} {number}").expect("text");
    }
    let place = text.find("#ifdef __cplusplus\nextern").expect("the functions");
    format!("{}{fields}\n{}", &text[..place], &text[place..])
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

//! `image`: what firmware loads is what the sheet says.
#![cfg(feature = "cli")]

use std::process::Command;

use ohmwright::image::Image;
use ohmwright::sheet::Sheet;

#[test]
fn the_image_of_a_sheet() {
    let folder = tempfile::tempdir().expect("a folder");
    let put = |name: &str, text: &str| {
        let path = folder.path().join(name);
        std::fs::write(&path, text).expect("written");
        path
    };
    let run = |sheet: &std::path::Path, out: &std::path::Path| {
        let out = Command::new(env!("CARGO_BIN_EXE_ohmwright")).arg("image").arg(sheet).arg("-o").arg(out).output();
        let out = out.expect("it runs");
        (out.status.code(), String::from_utf8(out.stderr).expect("UTF-8"))
    };
    let text = include_str!("capi/logger.toml");
    let (sheet, image) = (put("logger.toml", text), folder.path().join("logger.owi"));
    let (code, said) = run(&sheet, &image);
    assert_eq!(code, Some(0), "{said}");
    assert!(
        said.contains("channel 'flue', asks with every reading for the temperature of 'box' (celsius)")
            && said.contains("4 chains"),
        "{said}"
    );
    let bytes = std::fs::read(&image).expect("the image");
    let image = Image::new(&bytes).expect("an image");
    let read = Sheet::read("logger.toml", text).expect("a sheet");
    for (i, channel) in read.measurement.channels.iter().enumerate() {
        let entry = image.entry(i).expect("a chain");
        assert_eq!((entry.name, entry.unit), (channel.name.as_str(), channel.unit.as_str()));
        assert_eq!(entry.chain, channel.segments().expect("a reading")[0].chain);
    }
    let gauge = "[channel.g]\ncolumn = 1\nreads = \"mV/V\"\ngauge = { resistance = \"350 ohm\", gauge_factor = 2 }\nbridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }\n";
    for (text, words) in [
        (format!("{gauge}zero = {{ rows = 10 }}\n"), "takes its zero from a recording"),
        (
            format!("{gauge}[[channel.g.change]]\nfrom = \"2026-01-01T00:00:00Z\"\ngauge = {{ gauge_factor = 2.1 }}\n"),
            "changes in time",
        ),
    ] {
        let target = folder.path().join("none.owi");
        let (code, said) = run(&put("bad.toml", &text), &target);
        assert!(code == Some(2) && said.contains(words) && !target.exists(), "{code:?} {said}");
    }
}

//! The sheet in the README is a sheet.
#![cfg(feature = "files")]

use ohmwright::sheet::Sheet;

#[test]
fn the_sheet_of_the_readme_reads() {
    let text = include_str!("../README.md");
    let start = text.find("```toml\n").expect("a sheet") + "```toml\n".len();
    let sheet = text[start..].split("```").next().expect("an end");
    match Sheet::read("README.md", sheet) {
        Ok(sheet) => {
            let names: Vec<&str> = sheet.measurement.channels.iter().map(|c| c.name.as_str()).collect();
            assert!(names.contains(&"g01") && names.contains(&"R1 von-mises"), "{names:?}");
            for i in 0..names.len() {
                assert!(!sheet.describe(i).is_empty());
            }
        }
        Err(error) => panic!("{error}"),
    }
}

/// Every command line of the README that runs the tool, run as it stands there; what it writes goes elsewhere.
#[cfg(feature = "cli")]
#[test]
fn the_commands_of_the_readme_run() {
    let out = tempfile::tempdir().unwrap();
    let mut count = 0;
    for line in include_str!("../README.md").lines() {
        let Some(words) = line.strip_prefix("cargo run --release --features cli -- ") else { continue };
        // quotes hold words together
        let words = words.split('"').enumerate().flat_map(|(i, part)| match i % 2 {
            0 => part.split_whitespace().map(String::from).collect::<Vec<_>>(),
            _ => vec![part.to_string()],
        });
        let words = words.map(|w| match w.strip_prefix("target/") {
            Some(name) => out.path().join(name).display().to_string(),
            // fewer trials show the same
            None if w == "2e5" => "2000".into(),
            None => w,
        });
        let mut command = std::process::Command::new(env!("CARGO_BIN_EXE_ohmwright"));
        let ran = command.current_dir(env!("CARGO_MANIFEST_DIR")).args(words).output().unwrap();
        assert!(ran.status.success(), "{line}\n{}", String::from_utf8_lossy(&ran.stderr));
        count += 1;
    }
    assert!(count >= 8, "{count}");
}

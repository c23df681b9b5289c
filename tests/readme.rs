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

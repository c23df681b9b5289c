//! What could be read in two ways is refused, and no row is dropped because its cells are texts.
#![cfg(feature = "cli")]

#[path = "support/place.rs"]
mod place;

use place::Place;

const SHEET: &str = "[channel.u]\ncolumn = 2\nreads = \"mV\"\n";

#[test]
fn a_comma_that_is_both_marks_is_refused() {
    let place = Place::new();
    place.put("s.toml", SHEET);
    place.put("r.csv", "time,R_deck (mV)\n0,107,79\n1,107,80\n2,107,81\n");
    let said = place.refused(&["convert", "s.toml", "r.csv"]);
    assert!(said.contains("there are 2 names, but every row has more cells (3 in the first)"), "{said}");
    // stated, or with one row that has as many cells as there are names, it is read
    place.put("t.toml", &format!("[recording]\nseparator = \",\"\ndecimal = \".\"\n{SHEET}"));
    assert!(place.good(&["convert", "t.toml", "r.csv", "-q"]).contains("0,107,"));
    place.put("r.csv", "time,R_deck (mV),\n0,107,\n1,108,\n");
    assert!(place.good(&["convert", "s.toml", "r.csv", "-q"]).contains("0,107,"));
}

#[test]
fn rows_of_texts_at_the_start_are_no_header() {
    let place = Place::new();
    place.put("s.toml", SHEET);
    let rows: String = (2..20).map(|i| format!("{i},{i}.5\n")).collect();
    place.put("r.csv", &format!("time,CH01\n0,OVL\n1,OVL\n{rows}"));
    let said = place.refused(&["convert", "s.toml", "r.csv"]);
    assert!(said.contains("value '2' of first_line") && said.contains("line 4 was found"), "{said}");
    for stated in ["first_line = 2\nnames_line = 1", "saturated = [\"OVL\"]"] {
        place.put("t.toml", &format!("[recording]\n{stated}\n{SHEET}"));
        assert_eq!(place.good(&["convert", "t.toml", "r.csv", "-q"]).lines().count(), 21, "{stated}");
    }
}

/// A recording is given once.
#[test]
fn a_recording_that_is_given_twice_is_refused() {
    let place = Place::new();
    place.put("s.toml", SHEET);
    place.put("r.csv", "time,CH01\n0,1\n1,2\n");
    let said = place.refused(&["convert", "s.toml", "r.csv", "./r.csv", "--join"]);
    assert!(said.contains("./r.csv: this recording is given twice, also as r.csv"), "{said}");
}

//! Converted values taken back to readings: what was converted by one sheet, and is converted again by another, must be what the
//! second sheet makes of the readings themselves.
#![cfg(feature = "cli")]
#![allow(clippy::disallowed_methods, reason = "made-up signals need no pinned arithmetic")]

#[path = "support/place.rs"]
mod place;

use place::Place;

use std::fmt::Write as _;

fn sheet(factor: f64, supply: &str, leads: &str, r0: &str, title: &str) -> String {
    format!(
        "title = \"{title}\"\n[recording]\ntime = \"time\"\nkeep = [\"load step\", \"V_ex\"]\n\
         [channel.g]\ncolumn = \"CH01\"\nreads = \"mV\"\noutput = \"microstrain\"\n\
         gauge = {{ resistance = \"350 ohm\", gauge_factor = {factor}, slope = \"1.0 %/100K\", reference = \"24 degC\" }}\n\
         bridge = {{ arms = [\"e\", \"0\", \"0\", \"0\"], supply = {supply} }}\nleads = {{ wires = 3, each = \"{leads}\" }}\n\
         thermal_output = {{ coefficients = [-24.0, 1.90, -0.0400, 2.50e-4], in = \"degC\", gauge_factor = 2.0 }}\n\
         temperature = {{ channel = \"deck\", longest_gap = \"60 s\", between = \"line\" }}\nzero = {{ at = \"0.02 mV/V\", temperature = \"21 degC\" }}\n\
         [channel.deck]\ncolumn = \"R_deck\"\nreads = \"ohm\"\noutput = \"degC\"\nplatinum = {{ standard = \"IEC 60751\", r0 = \"{r0}\" }}\nleads = {{ wires = 2, each = \"0.35 ohm\" }}\n\
         [channel.twice]\ncombine = {{ g = 2 }}\noutput = \"microstrain\"\n"
    )
}

const COLUMN: &str = "{ column = \"V_ex\", reads = \"V\" }";

/// A temperature every fifth row, a supply that moves, blanks.
fn recording() -> String {
    let mut text = String::from("time,load step,CH01,V_ex,R_deck\n");
    for i in 0..200 {
        let t = f64::from(i);
        let mv = if i == 77 { String::new() } else { format!("{:.6}", 1.5 * (t * 0.05).sin()) };
        let deck = if i % 5 == 0 { format!("{:.4}", 108.0 + 3.0 * (t * 0.01).cos()) } else { String::new() };
        let _ = writeln!(text, "{i},\"lorry, {}\",{mv},{:.5},{deck}", i / 50, 2.5 + 0.001 * (t * 0.3).sin());
    }
    text
}

/// Cells as numbers, side by side.
fn compare(a: &str, b: &str, allowed: f64) {
    let (a, b): (Vec<&str>, Vec<&str>) = (a.lines().collect(), b.lines().collect());
    assert_eq!((a.len(), a[0]), (b.len(), b[0]));
    let cells = |line: &str| -> Vec<String> {
        let mut reader = csv::ReaderBuilder::new().has_headers(false).from_reader(line.as_bytes());
        reader.records().next().unwrap().unwrap().iter().map(str::to_string).collect()
    };
    for (i, (a, b)) in a.iter().zip(&b).enumerate().skip(1) {
        for (x, y) in cells(a).iter().zip(&cells(b)) {
            match (x.parse::<f64>(), y.parse::<f64>()) {
                (Ok(u), Ok(v)) => assert!((u - v).abs() <= allowed * u.abs().max(1.0), "line {}: {u} {v}", i + 1),
                _ => assert_eq!(x, y, "line {}", i + 1),
            }
        }
    }
}

#[test]
fn another_sheet_over_results_is_that_sheet_over_readings() {
    let place = Place::new();
    place.put("r.csv", &recording());
    for (k, (old_supply, new_supply)) in
        [(COLUMN, COLUMN), ("\"2.5 V\"", COLUMN), (COLUMN, "\"2.51 V\"")].iter().enumerate()
    {
        place.put("old.toml", &sheet(2.0, old_supply, "0.2 ohm", "100.1 ohm", "old"));
        place.put("new.toml", &sheet(2.08, new_supply, "4.2 ohm", "100 ohm", "new"));
        place.good(&["convert", "old.toml", "r.csv", "-o", "old.csv", "-q"]);
        let wanted = place.good(&["convert", "new.toml", "r.csv", "-q"]);
        let made = place.good(&["convert", "new.toml", "old.csv", "--undo", "old.toml", "-q"]);
        // a reading printed to its last digit, through two chains whose inverse is good to 1e-12
        compare(&wanted, &made, 1e-10);
        // and the trace of it repeats
        let name = format!("new{k}.csv");
        place.good(&["convert", "new.toml", "old.csv", "--undo", "old.toml", "-o", &name, "-q"]);
        place.good(&["repeat", &format!("{name}.trace")]);
    }
    // by itself: the results come back
    let old = std::fs::read_to_string(place.0.path().join("old.csv")).unwrap();
    compare(&old, &place.good(&["convert", "old.toml", "old.csv", "--undo", "old.toml", "-q"]), 1e-10);
}

/// A change in the earlier sheet, and a supply that was kept with a decimal comma.
#[test]
fn changes_and_decimal_commas_are_taken_back() {
    let place = Place::new();
    place.put("r.csv", &recording().replace('"', "").replace("lorry, ", "lorry ").replace(',', ";").replace('.', ","));
    let change = "[[channel.g.change]]\nfrom = \"80 s\"\ngauge = { gauge_factor = 2.5 }\n";
    place.put("old.toml", &(sheet(2.0, COLUMN, "0.2 ohm", "100.1 ohm", "old") + change));
    place.put("new.toml", &sheet(2.08, COLUMN, "4.2 ohm", "100 ohm", "new"));
    place.good(&["convert", "old.toml", "r.csv", "-o", "old.csv", "-q"]);
    let wanted = place.good(&["convert", "new.toml", "r.csv", "-q"]);
    let made = place.good(&["convert", "new.toml", "old.csv", "--undo", "old.toml", "-q"]);
    // the supply now has a point
    let mended: String = wanted.lines().map(|l| l.replacen("\"2,", "\"2.", 1).replace('"', "") + "\n").collect();
    compare(&mended, &made, 1e-10);
}

/// What has no number keeps the word that says why: of the text, of the converter, of a broken or shorted circuit, of the range.
#[test]
fn words_are_taken_back_as_they_are() {
    let place = Place::new();
    let odd =
        [(20, 2, "OVL"), (33, 2, "x"), (34, 2, "9000"), (40, 4, "90000"), (60, 4, "3"), (61, 3, ""), (65, 4, "395")];
    let mut rows: Vec<Vec<String>> =
        recording().replace("lorry, ", "lorry ").lines().map(|l| l.split(',').map(str::to_string).collect()).collect();
    for (row, cell, text) in odd {
        rows[row + 1][cell] = text.to_string();
    }
    let text: Vec<String> = rows.iter().map(|row| row.join(",")).collect();
    place.put("r.csv", &text.join("\n"));
    let with = |text: String| text.replace("[recording]\n", "[recording]\nsaturated = [\"OVL\"]\n");
    let deck = "temperature = { channel = \"deck\", longest_gap = \"60 s\", between = \"line\" }";
    // one channel without a temperature, so that its words are its own
    let alone = |text: String| with(text).replace(deck, "temperature = \"21 degC\"");
    for (old, new) in [
        (
            with(sheet(2.0, COLUMN, "0.2 ohm", "100.1 ohm", "old")),
            with(sheet(2.08, COLUMN, "4.2 ohm", "100 ohm", "new")),
        ),
        (
            alone(sheet(2.0, COLUMN, "0.2 ohm", "100.1 ohm", "old")),
            alone(sheet(2.08, COLUMN, "4.2 ohm", "100 ohm", "new")),
        ),
    ] {
        place.put("old.toml", &old);
        place.put("new.toml", &new);
        place.good(&["convert", "old.toml", "r.csv", "-o", "old.csv", "-q"]);
        let wanted = place.good(&["convert", "new.toml", "r.csv", "-q"]);
        for word in ["g:saturated", "g:unreadable", "g:missing", "deck:open", "deck:short", "deck:out-of-range"] {
            assert!(wanted.contains(word), "{word}: {wanted}");
        }
        let made = place.good(&["convert", "new.toml", "old.csv", "--undo", "old.toml", "-q"]);
        compare(&wanted, &made, 1e-10);
        // nothing is said of cells that only the recording had
        let said = place.run(&["convert", "new.toml", "old.csv", "--undo", "old.toml", "-o", "new.csv"]);
        assert!(!String::from_utf8_lossy(&said.stderr).contains("not a number"), "{said:?}");
    }
}

/// A word stays when somebody has filled in a number beside it.
#[test]
fn a_word_beside_a_number_stays() {
    let place = Place::new();
    let plain = "[channel.t]\ncolumn = \"R\"\nreads = \"ohm\"\noutput = \"degC\"\ndecimals = 3\nleads = { wires = 4 }\n\
        platinum = { standard = \"IEC 60751\", r0 = \"100 ohm\" }\n";
    place.put("s.toml", plain);
    place.put("old.csv", "time,t (degC),flags\n0,20,\n1,21,t:open\n2,22,t:missing\n3,23,t:extrapolated\n");
    let made = place.good(&["convert", "s.toml", "old.csv", "--undo", "s.toml", "-q"]);
    assert_eq!(made, "time,t (degC),flags\n0,20.000,\n1,,t:open\n2,,t:missing\n3,23.000,\n");
}

/// A supply in a column must have been kept: what lacks it says which column, and what for.
#[test]
fn a_supply_that_was_not_kept_is_named() {
    let place = Place::new();
    place.put("r.csv", &recording());
    let unkept = |text: String| text.replace(", \"V_ex\"]", "]");
    let convert = |old: &str, new: &str| {
        place.put("old.toml", old);
        place.put("new.toml", new);
        place.good(&["convert", "old.toml", "r.csv", "-o", "old.csv", "-q"]);
        place.refused(&["convert", "new.toml", "old.csv", "--undo", "old.toml", "-q"])
    };
    let new = sheet(2.08, COLUMN, "4.2 ohm", "100 ohm", "new");
    assert_eq!(
        convert(&unkept(sheet(2.0, COLUMN, "0.2 ohm", "100.1 ohm", "old")), &new),
        "old.csv: value 'V_ex' of --undo: channel 'g' took its supply from this column, and no reading of it can be taken back without; results have it where the earlier sheet kept it (keep = [\"V_ex\"]), and these do not\n"
    );
    // the new sheet alone needs it
    let needed = convert(&unkept(sheet(2.0, "\"2.5 V\"", "0.2 ohm", "100.1 ohm", "old")), &unkept(new.clone()));
    assert!(
        needed.starts_with("old.csv:1: value 'V_ex': no column has this name; the columns here are time, load step, CH01")
            && needed.ends_with(": of the recording that these results were made from there are the readings of their channels, and what the earlier sheet kept (keep)\n"),
        "{needed}"
    );
    // by its number it would be another column
    let number = convert(&sheet(2.0, "{ column = 4, reads = \"V\" }", "0.2 ohm", "100.1 ohm", "old"), &new);
    assert_eq!(
        number,
        "old.csv: channel 'g' takes its supply from a column by its number, 4, and the columns of results are others: name it\n"
    );
}

#[test]
fn what_cannot_be_taken_back_is_refused() {
    let place = Place::new();
    place.put("r.csv", &recording());
    let old = sheet(2.0, COLUMN, "0.2 ohm", "100.1 ohm", "old");
    place.put("new.toml", &sheet(2.08, COLUMN, "4.2 ohm", "100 ohm", "new"));
    place.put("old.toml", &old);
    place.good(&["convert", "old.toml", "r.csv", "-o", "old.csv", "-q"]);
    let undo = |text: &str| {
        place.put("other.toml", text);
        place.refused(&["convert", "new.toml", "old.csv", "--undo", "other.toml", "-q"])
    };
    let zero = undo(&old.replace("zero = { at = \"0.02 mV/V\", temperature = \"21 degC\" }", "zero = { rows = 10 }"));
    assert!(zero.contains("old.csv: channel 'g': its zero was a mean over readings that are not here"), "{zero}");
    let number = undo(&old.replace("column = \"CH01\"", "column = 3"));
    assert!(number.contains("channel 'g' reads a column by its number"), "{number}");
    let hidden = undo(&old.replace("column = \"R_deck\"", "column = \"R_deck\"\nshow = false"));
    assert!(hidden.contains("channel 'deck' is not shown in the results, but 'g' was corrected by it"), "{hidden}");
    let unit = undo(&old.replacen("output = \"microstrain\"", "output = \"strain\"", 1));
    assert!(
        unit.contains(
            "value 'microstrain' of --undo: the unit of column 'g', but the earlier sheet gives 'g' in strain"
        ),
        "{unit}"
    );
    let name = undo(&old.replace("channel.g]", "channel.g7]").replace("{ g = 2 }", "{ g7 = 2 }"));
    assert!(name.contains("old.csv:1: value 'g7': no column has this name"), "{name}");
}

//! Many sensors and many recordings: lists of channels, a table for each recording, one table of all.
#![cfg(feature = "cli")]

use std::fmt::Write;
use std::process::Command;

struct Dir(tempfile::TempDir);

struct Ran {
    code: Option<i32>,
    out: String,
    err: String,
}

impl Dir {
    fn new(files: &[(&str, &str)]) -> Self {
        let dir = Self(tempfile::tempdir().unwrap());
        for (name, text) in files {
            dir.put(name, text);
        }
        dir
    }

    fn put(&self, name: &str, text: impl AsRef<[u8]>) {
        let path = self.0.path().join(name);
        std::fs::create_dir_all(path.parent().unwrap()).unwrap();
        std::fs::write(path, text).unwrap();
    }

    fn read(&self, name: &str) -> Option<String> {
        std::fs::read_to_string(self.0.path().join(name)).ok()
    }

    fn run(&self, args: &[&str]) -> Ran {
        let done =
            Command::new(env!("CARGO_BIN_EXE_ohmwright")).current_dir(self.0.path()).args(args).output().unwrap();
        let text = |bytes| String::from_utf8(bytes).unwrap();
        Ran { code: done.status.code(), out: text(done.stdout), err: text(done.stderr) }
    }

    #[track_caller]
    fn refused(&self, args: &[&str]) -> String {
        let ran = self.run(args);
        assert_eq!((ran.code, ran.out.as_str()), (Some(2), ""), "{args:?}: {}", ran.err);
        ran.err
    }

    /// The first lines of the messages about a sheet, without the drawings.
    #[track_caller]
    fn messages(&self) -> Vec<String> {
        let err = self.refused(&["describe", "s.toml"]);
        err.lines().filter(|l| l.contains(".toml:") || l.contains(".csv:")).map(String::from).collect()
    }
}

const GIRDER: &str = "[common.girder]\nreads = \"mV/V\"\ndecimals = 6\ngauge = { resistance = \"350 ohm\", gauge_factor = 2 }\n\
    bridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }\nleads = { wires = 3, area = \"0.25 mm2\", material = \"copper\" }\n";

/// A quarter bridge on three wires in closed form, microstrain: y = R x/(2 (2 (R + r) + R x)), copper of 1/58 Ω mm²/m (IEC 60028).
fn microstrain(millivolts_per_volt: f64, metres: f64) -> f64 {
    let (y, r) = (millivolts_per_volt / 1e3, metres / 58.0 / 0.25);
    (1.0 + r / 350.0) * 4.0 * y / (1.0 - 2.0 * y) / 2.0 * 1e6
}

#[test]
fn three_hundred_channels_from_a_list() {
    let metres = |i: usize| 3.0 + 0.7 * (i % 97) as f64;
    let zero = |i: usize| -0.5 + 0.003 * i as f64;
    let reading = |row: usize, i: usize| 0.01 * (i % 13) as f64 - 0.3 * row as f64;
    let mut list = String::from("name,like,column,leads.length (m),zero.at\n");
    let (mut header, mut rows) = (String::from("time"), vec![String::new(); 3]);
    for i in 0..300 {
        let _ = writeln!(list, "g{i:03},girder,CH{i},{:.1},{:.3} mV/V", metres(i), zero(i));
        let _ = write!(header, ",CH{i} (mV/V)");
        for (row, text) in rows.iter_mut().enumerate() {
            let _ = write!(text, ",{:.2}", reading(row, i));
        }
    }
    let table: String = rows.iter().enumerate().map(|(row, text)| format!("{row}{text}\n")).collect();
    let sheet =
        format!("list = \"lists/sensors.csv\"\n{GIRDER}[channel.mean]\ncombine = {{ g000 = 0.5, g299 = 0.5 }}\n");
    let dir =
        Dir::new(&[("job/s.toml", &sheet), ("job/lists/sensors.csv", &list), ("r.csv", &format!("{header}\n{table}"))]);
    let ran = dir.run(&["convert", "job/s.toml", "r.csv"]);
    assert_eq!(ran.code, Some(0), "{}", ran.err);
    let mut lines = ran.out.lines();
    let names: Vec<&str> = lines.next().unwrap().split(',').collect();
    assert_eq!((names.len(), names[1], names[301]), (303, "g000 (microstrain)", "mean (microstrain)"));
    let mut failures = String::new();
    for (row, line) in lines.enumerate() {
        let cells: Vec<&str> = line.split(',').collect();
        let expected = |i: usize| {
            let metres = format!("{:.1}", metres(i)).parse().unwrap();
            let value = |text: String| text.parse::<f64>().unwrap();
            microstrain(value(format!("{:.2}", reading(row, i))), metres)
                - microstrain(value(format!("{:.3}", zero(i))), metres)
        };
        for i in 0..300 {
            let got: f64 = cells[i + 1].parse().unwrap();
            // half of the sixth decimal
            if (got - expected(i)).abs() > 5.001e-7 {
                let _ = writeln!(failures, "row {row} g{i:03}: {got}, expected {}", expected(i));
            }
        }
        let mean: f64 = cells[301].parse().unwrap();
        assert!((mean - (expected(0) + expected(299)) / 2.0).abs() < 1e-6);
    }
    assert!(failures.is_empty(), "{failures}");
    let ran = dir.run(&["describe", "job/s.toml"]);
    assert!(ran.out.contains("\ng007\n  reads: column 'CH7' in mV/V\n"), "{}", ran.out);
    assert!(ran.out.contains("(ρ l/A: 7.9 m one way, 0.25 mm2"), "{}", ran.out);
}

#[test]
fn what_is_wrong_with_a_list_is_told_where_it_stands() {
    let dir = Dir::new(&[("s.toml", &format!("list = \"l.csv\"\n{GIRDER}"))]);
    assert_eq!(dir.messages(), ["s.toml:1:8: list = 'l.csv': l.csv: cannot read: no such file or directory"]);
    dir.put(
        "l.csv",
        "# from the drawing\nname,like,column,leeds.length,shunt.rezistor,area\ng1,girder,A,12 m,,\ng2,grider,B,12 m,,\n",
    );
    let messages = dir.messages();
    assert_eq!(messages[0], "l.csv:2:4: unknown key 'leeds.length'; did you mean 'leads.length'?");
    assert_eq!(messages[1], "l.csv:2:5: unknown key 'shunt.rezistor'; did you mean 'shunt.resistor'?");
    assert_eq!(messages[2], "l.csv:2:6: unknown key 'area'; did you mean 'leads.area'?");
    assert!(
        messages.contains(&"l.csv:4:2: like = 'grider': there is no [common.grider]; did you mean 'girder'?".into()),
        "{messages:?}"
    );
    dir.put("l.csv", "name;like;column;leads.length;zero.at;decimals\n\"g1\";girder;\"A\";\"12 m\";0.1 kg;1\n\n;girder;B;3 m;;\ng3;girder;C;3 m;;many\ng3;girder;D;3 m;;\ng4;girder;E;3 m;;;7\n");
    assert_eq!(
        dir.messages(),
        [
            "l.csv:2:5: zero.at: value '0.1 kg': 'kg' is the unit of a mass (kg, g, t); expected a voltage ratio (V/V, mV/V, uV/V)",
            "l.csv:4:1: this row has no name: a channel needs one",
            "l.csv:5:6: decimals is text; expected a whole number from 0 to 17",
            "l.csv:6:1: channel 'g3' stands twice: also in line 5",
            "l.csv:7:7: value '7': there is no header above it",
        ]
    );
    // what a row lacks is told once for all that lack it; a chain that cannot be stands with its row
    dir.put("l.csv", "name,like,column,leads.length,bridge.arms\ng1,girder,A,,\ng2,girder,B,1 m,\ng3,girder,C,,\n");
    assert_eq!(
        dir.messages(),
        [
            "s.toml:7:1: leads.length is missing: the one-way length: a length (m, cm, mm, km, ft) (channel 'g1' and 1 more of the list)"
        ]
    );
    dir.put(
        "l.csv",
        "name,like,column,leads.length,bridge.arms\ng1,girder,A,1 m,\"[\"\"e\"\", \"\"e\"\", \"\"0\"\", \"\"0\"\"]\"\n",
    );
    assert_eq!(
        dir.messages(),
        [
            "l.csv:2:5: channel 'g1': the output of this bridge does not depend on the wanted quantity: its driven arms cancel each other"
        ]
    );
    for (list, message) in [
        ("", "s.toml:1:8: list = 'l.csv': the list is empty; its first line is keys, as in name,like,column"),
        ("name,like\n", "s.toml:1:8: list = 'l.csv': the list has no row, so it gives no channel"),
        ("like,column\ngirder,A\n", "l.csv:1:1: the list has no column 'name': each row is a channel and needs one"),
        (
            "name,leads,leads.length\n",
            "l.csv:1:3: key 'leads.length' stands beside 'leads': one of them says it already",
        ),
        (
            "name,change.from\n",
            "l.csv:1:2: a channel that changes in time stands in the sheet, with its [[channel.NAME.change]]",
        ),
        (
            "name,frobnication\n",
            "l.csv:1:2: unknown key 'frobnication': headers are name, and keys of a channel such as like, column, leads.length",
        ),
        (
            "name,like,column,leads.length,bridge.arms\ng1,girder,A,3 m,[1\n",
            "l.csv:2:5: bridge.arms is '[1': it begins like a list, table or quoted text, but unclosed array, expected `]`",
        ),
    ] {
        dir.put("l.csv", list);
        assert_eq!(dir.messages()[0], message, "{list}");
    }
    dir.put("s.toml", format!("list = \"l.csv\"\n{GIRDER}[channel.g1]\nlike = \"girder\"\ncolumn = \"A\"\nleads = {{ length = \"1 m\" }}\n"));
    dir.put("l.csv", "name,like,column,leads.length\ng1,girder,A,1 m\n");
    assert_eq!(dir.messages(), ["l.csv:2:1: channel 'g1' stands twice: also in the sheet, as [channel.g1]"]);
}

#[test]
fn decimal_commas_that_are_not_stated_are_told_once() {
    let dir = Dir::new(&[("s.toml", &format!("list = \"l.csv\"\n{GIRDER}"))]);
    dir.put("l.csv", "name;like;column;leads.length (m)\ng1;girder;1;5,0\ng2;girder;2,5;7,25\ng3;girder;3;8\n");
    assert_eq!(
        dir.messages(),
        [
            "l.csv:2:4: leads.length is '5,0', with a decimal comma, the first of 2: state in the sheet list = { file = \"l.csv\", decimal = \",\" }, or write points"
        ]
    );
    // with its unit, and one alone
    dir.put("l.csv", "name;like;column;leads.length\ng1;girder;1;12,5 m\n");
    assert_eq!(
        dir.messages(),
        [
            "l.csv:2:4: leads.length is '12,5 m', with a decimal comma: state in the sheet list = { file = \"l.csv\", decimal = \",\" }, or write points"
        ]
    );
    dir.put("s.toml", format!("list = {{ file = \"l.csv\", decimal = \",\" }}\n{GIRDER}"));
    assert_eq!(dir.run(&["describe", "s.toml"]).code, Some(0));
}

#[test]
fn a_list_from_a_spreadsheet() {
    // decimal commas and units in headers; Windows-1252; lists, tables, flags and quoted headers in cells
    let dir = Dir::new(&[
        ("s.toml", &format!("list = {{ file = \"l.csv\", decimal = \",\" }}\n{GIRDER}")),
        ("r.csv", "1,2,Brücke\n0,0.5,0.25\n"),
    ]);
    let list = "name;like;column;leads.length (m);show;zero;bridge.arms\r\ng1;girder;3;12,5;;{ at = \"0.1 mV/V\" };\r\n\
        g2;girder;'2';3;true;;[\"-e\", \"0\", \"0\", \"0\"]\r\ng3;girder;Br\u{fc}cke;0,5;;;\r\ng4;girder;1;3;false;;\r\n";
    let list: Vec<u8> = list.chars().map(|c| c as u8).collect();
    dir.put("l.csv", list);
    let ran = dir.run(&["convert", "s.toml", "r.csv"]);
    let (a, b) = (microstrain(0.25, 12.5) - microstrain(0.1, 12.5), -microstrain(0.5, 3.0));
    let c = microstrain(0.25, 0.5);
    assert_eq!(
        ran.out,
        format!("g1 (microstrain),g2 (microstrain),g3 (microstrain),flags\n{a:.6},{b:.6},{c:.6},\n"),
        "{}",
        ran.err
    );
}

const CELL: &str = "[channel.cell]\ncolumn = \"load\"\nreads = \"mV/V\"\ndecimals = 3\ntransducer = { rated = \"2 mV/V\", capacity = \"50 kN\" }\n";

#[test]
fn a_table_of_each_recording() {
    let dir = Dir::new(&[
        ("s.toml", &format!("{CELL}zero = {{ rows = 1 }}\n")),
        ("a.csv", "time,load\n0,0.1\n1,0.2\n"),
        ("more/b.txt", "time;load\n0;0,4\n1;0,6\n"),
        ("bad.csv", "time,laod\n0,0.1\n"),
        ("list.txt", "# of the second day\nmore/b.txt\n\n"),
    ]);
    let ran = dir.run(&["convert", "s.toml", "a.csv", "bad.csv", "gone.csv", "--list", "list.txt", "--into", "out"]);
    assert_eq!((ran.code, ran.out.as_str()), (Some(2), ""), "{}", ran.err);
    // each has its own zero; what is wrong with one is told and does not stop the others
    assert_eq!(dir.read("out/a.csv").as_deref(), Some("time,cell (kN),flags\n0,0.000,\n1,2.500,\n"));
    assert_eq!(dir.read("out/b.csv").as_deref(), Some("time,cell (kN),flags\n0,0.000,\n1,5.000,\n"));
    assert_eq!(dir.read("out/bad.csv"), None);
    assert!(
        ran.err.contains("\nbad.csv:1: value 'load': no column has this name; the nearest is 'laod'\n"),
        "{}",
        ran.err
    );
    assert!(ran.err.contains("\ngone.csv: cannot open: no such file or directory\n"), "{}", ran.err);
    assert!(ran.err.ends_with("\n2 of 4 recordings could not be converted\n"), "{}", ran.err);
    let ran = dir.run(&["convert", "s.toml", "a.csv", "more/b.txt", "--into", "out", "--quiet"]);
    assert_eq!((ran.code, ran.err.as_str()), (Some(0), ""));
    // names that would be one, or replace what is read
    dir.put("more/a.dat", "time,load\n0,0.1\n");
    assert_eq!(
        dir.refused(&["convert", "s.toml", "a.csv", "more/a.dat", "--into", "new"]),
        "more/a.dat: its table would be new/a.csv, as that of a.csv: nothing was converted\n"
    );
    assert!(dir.read("new/a.csv").is_none());
    // a file where a folder is wanted
    assert_eq!(
        dir.refused(&["convert", "s.toml", "a.csv", "--into", "list.txt"]),
        "list.txt: --into names the folder for the tables, and this is a file; one table goes into a file by -o, several recordings into one by --join -o\n"
    );
    assert_eq!(
        dir.refused(&["convert", "s.toml", "a.csv", "--into", "list.txt/new"]),
        "list.txt/new: cannot make: what stands before a / in it is a file, not a folder\n"
    );
    assert_eq!(
        dir.refused(&["convert", "s.toml", "a.csv", "--into", "."]),
        "a.csv: its table, ./a.csv, would replace a recording or the sheet; give another --into\n"
    );
    assert_eq!(
        dir.refused(&["convert", "s.toml", "a.csv", "more/b.txt"]),
        "more/b.txt: a second recording; --into DIR makes a table of each, --join -o OUT one of all\n"
    );
    assert_eq!(
        dir.refused(&["convert", "s.toml", "a.csv", "-", "--join"]),
        "-: a pipe is read only once, and alone; several recordings are files\n"
    );
    assert_eq!(
        dir.refused(&["convert", "s.toml", "--list", "none.txt", "--join"]),
        "none.txt: cannot open: no such file or directory\n"
    );
    // --strict: the answer is no for one of them
    dir.put("c.csv", "time,load\n0,0.1\n1,\n");
    let ran = dir.run(&["convert", "s.toml", "a.csv", "c.csv", "--into", "out", "--quiet", "--strict"]);
    assert_eq!(ran.code, Some(1));
    assert_eq!(
        ran.err,
        "c.csv: 1 flagged reading (--strict)\n1 of 2 recordings have something against them (--strict)\n"
    );
}

#[test]
fn one_table_of_all_recordings() {
    let dir = Dir::new(&[
        ("s.toml", &format!("{CELL}zero = {{ rows = 1 }}\n")),
        ("b.csv", "time,load\n2026-03-12T10:00:02Z,0.3\n2026-03-12T10:00:03Z,0.4\n"),
        ("a.csv", "time,load\n2026-03-12T10:00:00Z,0.1\n2026-03-12T10:00:01Z,0.2\n"),
        ("all.txt", "b.csv\na.csv\n"),
    ]);
    let ran = dir.run(&["convert", "s.toml", "--list", "all.txt", "--join", "-o", "all.csv"]);
    assert_eq!((ran.code, ran.out.as_str()), (Some(0), ""), "{}", ran.err);
    let rows = ["0.000", "2.500", "5.000", "7.500"];
    let rows: String = rows.iter().enumerate().map(|(i, v)| format!("2026-03-12T10:00:0{i}Z,{v},\n")).collect();
    assert_eq!(dir.read("all.csv"), Some(format!("time,cell (kN),flags\n{rows}")));
    assert!(ran.err.contains("\nb.csv: follows a.csv without a gap, 1 s later\n"), "{}", ran.err);
    assert!(ran.err.contains("\n2 recordings: 4 rows in "), "{}", ran.err);
    assert_eq!(
        dir.refused(&["convert", "s.toml", "a.csv", "b.csv", "--join", "-o", "b.csv"]),
        "b.csv: the result would replace the recording itself; give another -o\n"
    );
}

#[test]
fn zeros_from_another_recording() {
    let sheet = format!("{CELL}zero = {{ file = \"runs/run0.csv\", rows = 2 }}\n");
    let dir = Dir::new(&[
        ("job/s.toml", &sheet),
        ("job/runs/run0.csv", "load\n0.1\n0.3\n9\n"),
        ("r.csv", "time,load\n0,0.2\n1,0.6\n"),
    ]);
    let ran = dir.run(&["convert", "job/s.toml", "r.csv"]);
    assert_eq!(ran.out, "time,cell (kN),flags\n0,0.000,\n1,10.000,\n", "{}", ran.err);
    assert!(
        ran.err.contains("cell: zero 0.200000 mV/V, mean of 2 readings in the first 2 rows of runs/run0.csv\n"),
        "{}",
        ran.err
    );
    // a change that states no zero goes on with the one before it, as read by the circuit of then: 10 mV behind 100 at 2.5 V
    let amplified = "[channel.cell]\ncolumn = \"load\"\nreads = \"mV\"\ndecimals = 3\ntransducer = { rated = \"2 mV/V\", capacity = \"50 kN\" }\n\
        bridge = { supply = \"2.5 V\" }\namplifier = { gain = \"100\" }\nzero = { file = \"run2.csv\", rows = 1 }\n\
        [[channel.cell.change]]\nfrom = \"1 s\"\namplifier = { gain = \"200\" }\n";
    dir.put("gain.toml", amplified);
    dir.put("run2.csv", "time,load\n0,10\n");
    dir.put("gain.csv", "time,load\n0,20\n1,40\n");
    let ran = dir.run(&["convert", "gain.toml", "gain.csv"]);
    assert_eq!(ran.out, "time,cell (kN),flags\n0,1.000,\n1,1.000,\n", "{}", ran.err);
    // it is known before any recording: a pipe, one value and an image can have it
    let ran = dir.run(&["value", "job/s.toml", "cell", "0.6 mV/V"]);
    assert!(ran.out.starts_with("10.000 kN"), "{} {}", ran.out, ran.err);
    let ran = dir.run(&["describe", "job/s.toml"]);
    assert!(
        ran.out.contains("zero: output/supply = 0.2 mV/V, a mean of readings of the recording runs/run0.csv; "),
        "{}",
        ran.out
    );
    dir.put("job/s.toml", sheet.replace("run0", "run1"));
    assert_eq!(
        dir.refused(&["convert", "job/s.toml", "r.csv"]),
        "job/runs/run1.csv: cannot open: no such file or directory\n"
    );
    for (zero, message) in [
        (
            "{ file = \"x.csv\", at = \"0 mV/V\" }",
            "s.toml:6:17: zero.file is where rows or from and to are read: one of them must stand beside it",
        ),
        (
            "{ rows = 2, drift = \"time\" }",
            "s.toml:6:1: zero.again is missing: a drift is what a second zero shows, as in again = { rows = 200 }",
        ),
        (
            "{ rows = 2, again = { rows = 2, from = \"1 s\" } }",
            "s.toml:6:20: zero.again has one of: rows = a number of last rows; from and to = a stretch of time",
        ),
        (
            "{ rows = 2, again = { rows = 2 }, drift = \"tmie\" }",
            "s.toml:6:50: zero.drift is 'tmie'; expected \"time\" or \"temperature\"; did you mean \"time\"?",
        ),
        (
            "{ rows = 2, again = { rows = 2 }, drift = \"temperature\" }",
            "s.toml:6:50: a drift along temperature needs temperature, a channel of this sheet",
        ),
    ] {
        dir.put("s.toml", format!("{CELL}zero = {zero}\n"));
        assert_eq!(dir.messages()[0], message);
    }
    dir.put("s.toml", format!("{CELL}zero = {{ rows = 1, again = {{ rows = 1 }} }}\n[[channel.cell.change]]\nfrom = \"1 s\"\ntransducer = {{ rated = \"2.1 mV/V\" }}\n"));
    assert_eq!(
        dir.messages(),
        ["s.toml:7:16: a channel that changes in time has no second zero: zero.again would compare two circuits"]
    );
    // on a pipe there is no end yet
    dir.put("s.toml", format!("{CELL}zero = {{ rows = 1, again = {{ rows = 1 }}, drift = \"time\" }}\n"));
    assert_eq!(
        dir.refused(&["convert", "s.toml", "-"]),
        "standard input: channel 'cell' takes a second zero from the last 1 rows, which needs a whole file: a pipe, or a file that is followed, is read only once\n"
    );
    let ran = dir.run(&["value", "s.toml", "cell", "0.6 mV/V", "--with", "zero=0mV/V"]);
    assert!(ran.err.contains("channel 'cell': the drift that a recording shows is not taken off here"), "{}", ran.err);
    let refused = dir.refused(&["image", "s.toml", "-o", "x.owi"]);
    assert!(refused.starts_with("channel 'cell' takes off a drift that a whole recording shows"), "{refused}");
}

//! The trace beside a result, and what `repeat` says of it.
#![cfg(feature = "cli")]

use std::path::Path;
use std::process::{Command, Output, Stdio};

use serde_json::Value;

const SHEET: &str = "[channel.g]\ncolumn = \"CH01\"\nreads = \"mV/V\"\noutput = \"microstrain\"\n\
    gauge = { resistance = \"350 ohm\", gauge_factor = 2.08 }\nbridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }\n\
    [channel.t]\ncolumn = \"R\"\nreads = \"ohm\"\noutput = \"degC\"\n\
    platinum = { standard = \"IEC 60751\", r0 = \"100 ohm\" }\nleads = { wires = 4 }\n";
const RECORDING: &str = "time,CH01,R\n0,0.5,109.73\n1,,109.75\n2,0.7,1e9\n";

struct Place(tempfile::TempDir);

impl Place {
    fn new() -> Self {
        let dir = tempfile::tempdir().unwrap();
        for folder in ["in", "out"] {
            std::fs::create_dir(dir.path().join(folder)).unwrap();
        }
        let place = Self(dir);
        place.put("in/s.toml", SHEET);
        place.put("in/r.csv", RECORDING);
        place
    }

    fn put(&self, name: &str, text: &str) {
        std::fs::write(self.0.path().join(name), text).unwrap();
    }

    fn read(&self, name: &str) -> String {
        std::fs::read_to_string(self.0.path().join(name)).unwrap()
    }

    fn run(&self, args: &[&str]) -> Output {
        run(self.0.path(), args)
    }
}

fn run(dir: &Path, args: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_ohmwright")).current_dir(dir).args(args).stdin(Stdio::null()).output().unwrap()
}

fn said(output: &Output) -> String {
    format!("{}{}", String::from_utf8_lossy(&output.stdout), String::from_utf8_lossy(&output.stderr))
}

/// SHA-256 by `sha256sum`, which every machine of ours has.
fn sha256(dir: &Path, file: &str) -> String {
    let output = Command::new("sha256sum").current_dir(dir).arg(file).output().unwrap();
    String::from_utf8(output.stdout).unwrap().split_whitespace().next().unwrap().to_string()
}

#[test]
fn a_trace_tells_what_a_result_was_made_of() {
    let place = Place::new();
    let output = place.run(&["convert", "in/s.toml", "in/r.csv", "-o", "out/o.csv", "-q"]);
    assert_eq!(output.status.code(), Some(0), "{}", said(&output));
    let trace: Value = serde_json::from_str(&place.read("out/o.csv.trace")).unwrap();
    let dir = place.0.path();
    for (used, file, name) in [
        (&trace["result"], "out/o.csv", "o.csv"),
        (&trace["sheet"], "in/s.toml", "../in/s.toml"),
        (&trace["recordings"][0], "in/r.csv", "../in/r.csv"),
    ] {
        assert_eq!((&used["file"], &used["sha256"]), (&name.into(), &sha256(dir, file).into()), "{trace:#}");
        assert_eq!(used["bytes"], std::fs::metadata(dir.join(file)).unwrap().len(), "{file}");
    }
    assert_eq!(trace["rows"], 3);
    assert_eq!(trace["version"], env!("CARGO_PKG_VERSION"));
    assert!(trace["standards"][0].as_str().unwrap().starts_with("IEC 60751:2008"), "{trace:#}");
    assert_eq!(trace["channels"][0]["flags"], serde_json::json!({ "missing": 1 }));
    assert_eq!((&trace["channels"][1]["flags"]["open"], &trace["channels"][1]["values"]), (&1.into(), &2.into()));
    assert!(trace["channels"][0]["words"].to_string().contains("F = 2.08"), "{trace:#}");
    // to standard output there is no trace
    assert_eq!(place.run(&["convert", "in/s.toml", "in/r.csv", "-q"]).status.code(), Some(0));
    assert!(!place.0.path().join("-.trace").exists() && !place.0.path().join("in/r.csv.trace").exists());
}

#[test]
fn the_same_bytes_come_out_again_or_not() {
    let place = Place::new();
    place.run(&["convert", "in/s.toml", "in/r.csv", "-o", "out/o.csv", "-q", "--uncertainty", "--coverage", "0.9"]);
    let again = || place.run(&["repeat", "out/o.csv.trace"]);
    let (code, text) = (again().status.code(), said(&again()));
    assert!(code == Some(0) && text.starts_with("the same: "), "{text}");
    // from wherever it is called, and moved as a whole
    let other = run(Path::new("/"), &["repeat", &place.0.path().join("out/o.csv.trace").display().to_string()]);
    assert_eq!(other.status.code(), Some(0), "{}", said(&other));
    // another recording
    place.put("in/r.csv", &RECORDING.replace("0.7", "0.8"));
    let (code, text) = (again().status.code(), said(&again()));
    assert!(
        code == Some(1) && text.contains("recording ../in/r.csv: changed") && text.contains("not the same"),
        "{text}"
    );
    // another sheet that gives the same numbers is told, and is no agreement
    place.put("in/r.csv", RECORDING);
    place.put("in/s.toml", &format!("# seen\n{SHEET}"));
    let (code, text) = (again().status.code(), said(&again()));
    assert!(code == Some(1) && text.contains("sheet ../in/s.toml: changed") && text.contains("\nthe same"), "{text}");
    // a result that was edited
    place.put("in/s.toml", SHEET);
    place.put("out/o.csv", "edited\n");
    let (code, text) = (again().status.code(), said(&again()));
    assert!(code == Some(1) && text.contains("result o.csv: is not what this trace tells of"), "{text}");
    // an input that is gone, a text that is no trace, and one of another form
    std::fs::remove_file(place.0.path().join("in/r.csv")).unwrap();
    assert!(again().status.code() == Some(2) && said(&again()).contains("r.csv"), "{}", said(&again()));
    let trace = place.read("out/o.csv.trace");
    place.put("out/o.csv.trace", &trace.replace("ohmwright\": 1,", "ohmwright\": 9,"));
    assert!(again().status.code() == Some(2) && said(&again()).contains("value '9'"), "{}", said(&again()));
    place.put("out/o.csv.trace", "time,g\n0,1\n");
    assert!(again().status.code() == Some(2) && said(&again()).contains("o.csv.trace:1:"), "{}", said(&again()));
}

#[test]
fn joined_and_compressed_recordings_repeat_too() {
    let place = Place::new();
    place.put("in/r2.csv", "time,CH01,R\n3,0.25,110\n4,0.5,111\n");
    let output = place.run(&["convert", "in/s.toml", "in/r.csv", "in/r2.csv", "--join", "-o", "out/all.csv", "-q"]);
    assert_eq!(output.status.code(), Some(0), "{}", said(&output));
    let trace: Value = serde_json::from_str(&place.read("out/all.csv.trace")).unwrap();
    assert_eq!(trace["recordings"].as_array().unwrap().len(), 2);
    assert_eq!(place.run(&["repeat", "out/all.csv.trace"]).status.code(), Some(0));
    let output = place.run(&["convert", "in/s.toml", "in/r.csv", "in/r2.csv", "--into", "out", "-q"]);
    assert_eq!(output.status.code(), Some(0), "{}", said(&output));
    for trace in ["out/r.csv.trace", "out/r2.csv.trace"] {
        assert_eq!(place.run(&["repeat", trace]).status.code(), Some(0));
    }
    let packed = zstd::encode_all(RECORDING.as_bytes(), 1).unwrap();
    std::fs::write(place.0.path().join("in/p.csv.zst"), packed).unwrap();
    place.run(&["convert", "in/s.toml", "in/p.csv.zst", "-o", "out/p.csv", "-q"]);
    let trace: Value = serde_json::from_str(&place.read("out/p.csv.trace")).unwrap();
    assert_eq!(trace["recordings"][0]["sha256"], sha256(place.0.path(), "in/p.csv.zst"));
    assert_eq!(place.run(&["repeat", "out/p.csv.trace"]).status.code(), Some(0));
}

#[test]
fn images_tables_sheets_and_reports_have_traces_that_repeat() {
    let place = Place::new();
    let commands: [(&[&str], &str, &[&str]); 4] = [
        (&["image", "in/s.toml", "-o", "out/s.owi"], "out/s.owi", &["../in/s.toml"]),
        (
            &["curve", "in/s.toml", "t", "--within", "0.01 K", "--from", "0 degC", "--as", "c", "-o", "out/t.c"],
            "out/t.c",
            &["../in/s.toml"],
        ),
        (&["start", "in/r.csv", "-o", "out/begun.toml"], "out/begun.toml", &["../in/r.csv"]),
        (&["evidence", "--json", "-o", "out/evidence.json"], "out/evidence.json", &[]),
    ];
    for (words, result, read) in commands {
        let output = place.run(words);
        assert_eq!(output.status.code(), Some(0), "{}", said(&output));
        let trace = format!("{result}.trace");
        let told: Value = serde_json::from_str(&place.read(&trace)).unwrap();
        assert_eq!(told["command"], words[0]);
        assert_eq!(told["result"]["file"], result.strip_prefix("out/").unwrap());
        assert_eq!(told["result"]["sha256"], sha256(place.0.path(), result));
        let files: Vec<&str> =
            told["read"].as_array().unwrap().iter().map(|used| used["file"].as_str().unwrap()).collect();
        assert_eq!(files, read);
        for used in told["read"].as_array().unwrap() {
            assert_eq!(used["sha256"], sha256(&place.0.path().join("out"), used["file"].as_str().unwrap()));
        }
        let output = place.run(&["repeat", &trace]);
        assert_eq!(output.status.code(), Some(0), "{}", said(&output));
        assert!(said(&output).starts_with("the same: "), "{}", said(&output));
        // edited by hand
        let path = place.0.path().join(result);
        let mut bytes = std::fs::read(&path).unwrap();
        bytes.push(b'\n');
        std::fs::write(&path, bytes).unwrap();
        let output = place.run(&["repeat", &trace]);
        assert_eq!(output.status.code(), Some(1));
        assert!(said(&output).contains(": is not what this trace tells of\nthe same: "), "{}", said(&output));
    }
    // another sheet makes another image
    place.put("in/s.toml", &SHEET.replace("2.08", "2.1"));
    let output = place.run(&["repeat", "out/s.owi.trace"]);
    assert_eq!(output.status.code(), Some(1));
    let text = said(&output);
    assert!(
        text.starts_with("made of ../in/s.toml: changed since then") && text.contains("\nnot the same: "),
        "{text}"
    );
    // what is no trace of these
    let trace = place.read("out/t.c.trace");
    place.put("out/t.c.trace", &trace.replace("ohmwright\": 1,", "ohmwright\": 9,"));
    let output = place.run(&["repeat", "out/t.c.trace"]);
    assert!(output.status.code() == Some(2) && said(&output).contains("value '9'"), "{}", said(&output));
    place.put("out/t.c.trace", &trace.replace("\"curve\"", "\"curves\""));
    let output = place.run(&["repeat", "out/t.c.trace"]);
    assert!(output.status.code() == Some(2) && said(&output).contains("t.c.trace: this trace is damaged"));
}

#[test]
fn no_input_is_replaced_and_a_result_is_told_from_its_trace() {
    let place = Place::new();
    for words in [
        &["image", "in/s.toml", "-o", "in/s.toml"][..],
        &["curve", "in/s.toml", "t", "--within", "0.01 K", "-o", "in/../in/s.toml"][..],
    ] {
        let output = place.run(words);
        assert_eq!(output.status.code(), Some(2));
        assert_eq!(
            said(&output),
            "in/s.toml: the result would replace the file it is made of itself; give another -o\n"
        );
        assert_eq!(place.read("in/s.toml"), SHEET);
    }
    let output = place.run(&["convert", "in/s.toml", "in/r.csv", "-o", "out/o.csv", "-q"]);
    assert_eq!(output.status.code(), Some(0), "{}", said(&output));
    let output = place.run(&["repeat", "out/o.csv"]);
    assert!(
        output.status.code() == Some(2) && said(&output).contains("; the trace of this file is out/o.csv.trace"),
        "{}",
        said(&output)
    );
    let output = place.run(&["repeat", "in/r.csv"]);
    assert!(said(&output).contains("OUT.trace"), "{}", said(&output));
    // an image to standard output
    let output = place.run(&["image", "in/s.toml", "-o", "-"]);
    assert!(output.status.success() && output.stdout.starts_with(b"OHMW"), "{}", said(&output));
    // a sheet made of a pipe cannot be repeated
    let mut piped = Command::new(env!("CARGO_BIN_EXE_ohmwright"))
        .current_dir(place.0.path())
        .args(["start", "-", "-o", "out/piped.toml"])
        .stdin(Stdio::piped())
        .spawn()
        .unwrap();
    std::io::Write::write_all(&mut piped.stdin.take().unwrap(), RECORDING.as_bytes()).unwrap();
    assert!(piped.wait().unwrap().success());
    let output = place.run(&["repeat", "out/piped.toml.trace"]);
    assert!(output.status.code() == Some(2) && said(&output).contains("from a pipe"), "{}", said(&output));
}

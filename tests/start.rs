//! `start`: the sheet it writes reads, passes on what the file says, and marks every guess. Expected lines by hand.
#![cfg(feature = "cli")]

use std::path::Path;
use std::process::{Command, Output, Stdio};

fn run(dir: &Path, args: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_ohmwright")).current_dir(dir).args(args).stdin(Stdio::null()).output().unwrap()
}

fn out(output: &Output) -> String {
    String::from_utf8(output.stdout.clone()).unwrap()
}

/// The sheet for this recording, and what it makes of the recording.
fn begun(recording: &str) -> (String, Output) {
    let dir = tempfile::tempdir().unwrap();
    std::fs::write(dir.path().join("run 3.csv"), recording).unwrap();
    let output = run(dir.path(), &["start", "run 3.csv", "-o", "s.toml"]);
    assert_eq!(output.status.code(), Some(0), "{}", String::from_utf8_lossy(&output.stderr));
    let sheet = std::fs::read_to_string(dir.path().join("s.toml")).unwrap();
    let converted = run(dir.path(), &["convert", "s.toml", "run 3.csv", "-q"]);
    (sheet, converted)
}

#[test]
fn units_of_the_file_are_taken_and_passed_on() {
    let (sheet, converted) = begun(
        "time;girder 1;R deck;adc3;temp air;note\ns;mV/V;Ω;;;\n\
         0;0,5;109,73;1200;12,5;empty\n1;0,6;109,75;-300;12,6;lorry\n2;-9999;109,77;800;12,7;lorry\n",
    );
    for line in [
        "title = \"run 3\"",
        "time = \"time\"",
        "keep = [\"note\"]",
        "missing = [\"-9999\"]     # guess",
        "[channel.girder_1]",
        "reads = \"mV/V\"     # as the file says",
        "reads = \"Ω\"     # as the file says",
        "reads = \"count\"     # guess: by its name, and whole numbers",
        "reads = \"degC\"     # guess: by its name",
        "# guess by the values: a platinum thermometer",
    ] {
        assert!(sheet.contains(line), "{line}\n{sheet}");
    }
    assert_eq!(
        out(&converted),
        "time,note,girder_1 (mV/V),R_deck (ohm),adc3 (count),temp_air (degC),flags\n\
         0,empty,0.5,109.73,1200,12.5,\n1,lorry,0.6,109.75,-300,12.6,\n2,lorry,,109.77,800,12.7,girder_1:missing\n",
        "{}",
        String::from_utf8_lossy(&converted.stderr)
    );
}

#[test]
fn what_has_no_unit_stands_in_comments() {
    let (sheet, converted) = begun("time,a,b (V)\n0,1.5,2\n1,1.25,2.5\n");
    assert!(sheet.contains("# [channel.a]\n# column = \"a\"     # 1.25 to 1.5\n# reads = \"?\""), "{sheet}");
    assert!(sheet.contains("# 1 column without a unit is left out above"), "{sheet}");
    assert_eq!(out(&converted), "time,b (V),flags\n0,2,\n1,2.5,\n");
}

#[test]
fn names_that_are_no_keys_and_columns_without_names() {
    let (sheet, converted) = begun("time,x (V),x (V),\"q\"\"r\\ (mV)\"\n0,1,2,3\n1,4,5,6\n");
    assert!(sheet.contains("[channel.column_2]\ncolumn = 2") && sheet.contains("[channel.column_3]"), "{sheet}");
    assert_eq!(out(&converted).lines().nth(1), Some("0,1,2,3,"), "{sheet}");
    let (sheet, converted) = begun("0.5,1.25,3\n0.75,1.5,4\n");
    assert!(sheet.contains("interval = \"0.02 s\"") && converted.status.code() == Some(2), "{sheet}");
}

#[test]
fn thousands_of_columns() {
    let mut text = String::from("time");
    (0..3000).for_each(|i| text += &format!(",ch{i} (mV/V)"));
    for row in 0..3 {
        text += &format!("\n{row}");
        (0..3000).for_each(|i| text += &format!(",{}.5", i % 7));
    }
    let (sheet, converted) = begun(&(text + "\n"));
    assert_eq!(sheet.matches("as the file says").count(), 3000);
    assert_eq!(out(&converted).lines().nth(3).map(|l| l.split(',').count()), Some(3002));
}

#[test]
fn a_sheet_is_not_replaced() {
    let dir = tempfile::tempdir().unwrap();
    std::fs::write(dir.path().join("r.csv"), "time,b (V)\n0,2\n").unwrap();
    std::fs::write(dir.path().join("s.toml"), "mine").unwrap();
    let output = run(dir.path(), &["start", "r.csv", "-o", "s.toml"]);
    assert_eq!(output.status.code(), Some(2));
    assert!(String::from_utf8_lossy(&output.stderr).contains("s.toml: there is a file of this name already"));
    assert_eq!(std::fs::read_to_string(dir.path().join("s.toml")).unwrap(), "mine");
    assert_eq!(run(dir.path(), &["start", "none.csv"]).status.code(), Some(2));
}

/// Completions and the manual know every command and option.
#[test]
fn the_shell_and_the_manual_know_every_command() {
    let dir = tempfile::tempdir().unwrap();
    let help = out(&run(dir.path(), &["--help"]));
    let commands: Vec<&str> = help
        .lines()
        .skip_while(|l| !l.starts_with("Commands:"))
        .skip(1)
        .take_while(|l| !l.trim().is_empty())
        .filter(|l| l.starts_with("  ") && !l.starts_with("   "))
        .filter_map(|l| l.split_whitespace().next())
        .collect();
    assert!(commands.len() > 10, "{help}");
    let manual = out(&run(dir.path(), &["manual"]));
    for command in commands.iter().filter(|c| **c != "help") {
        assert!(manual.contains(&format!(".SH {}", command.to_uppercase())), "{command}");
        for shell in ["bash", "zsh", "fish"] {
            assert!(out(&run(dir.path(), &["completions", shell])).contains(command), "{shell} {command}");
        }
    }
    assert!(manual.contains("uncertainty") && manual.contains("Not a protective function"));
}

//! Compressed recordings are read as what is in them.
//!
//! The bytes of the first test are by Python's gzip module and by the zstd command (general-purpose reference software), of the
//! text `TEXT`.
#![cfg(feature = "cli")]

use std::io::Write;
use std::path::Path;
use std::process::{Command, Output, Stdio};

const TEXT: &[u8] = b"time,CH01\n0,0.5\n1,0.25\n";
/// `gzip.compress(TEXT, mtime=0)`
const GZIP: &str = "1f8b08000000000002032bc9cc4dd571f63030e432d031d033e532049246a65c00dfac694017000000";
/// `zstd --no-check`, version 1.5.4
const ZSTANDARD: &str = "28b52ffd2017b9000074696d652c434830310a302c302e350a312c302e32350a";
const SHEET: &str = "[channel.u]\ncolumn = \"CH01\"\nreads = \"mV\"\n";

fn bytes(hex: &str) -> Vec<u8> {
    (0..hex.len()).step_by(2).map(|i| u8::from_str_radix(&hex[i..i + 2], 16).unwrap()).collect()
}

fn gzip(text: &[u8]) -> Vec<u8> {
    let mut encoder = flate2::write::GzEncoder::new(Vec::new(), flate2::Compression::fast());
    encoder.write_all(text).unwrap();
    encoder.finish().unwrap()
}

fn run(dir: &Path, args: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_ohmwright")).current_dir(dir).args(args).stdin(Stdio::null()).output().unwrap()
}

/// Result and messages of `convert` over these bytes, whatever the file is called.
fn converted(recording: &[u8], name: &str) -> (Option<i32>, String, String) {
    let dir = tempfile::tempdir().unwrap();
    std::fs::write(dir.path().join("s.toml"), SHEET).unwrap();
    std::fs::write(dir.path().join(name), recording).unwrap();
    let output = run(dir.path(), &["convert", "s.toml", name, "-q"]);
    let text = |bytes: Vec<u8>| String::from_utf8(bytes).unwrap();
    (output.status.code(), text(output.stdout), text(output.stderr))
}

const RESULT: &str = "time,u (mV),flags\n0,0.5,\n1,0.25,\n";

#[test]
fn what_other_software_packed_is_unpacked() {
    for (packed, name) in [(GZIP, "run.csv.gz"), (ZSTANDARD, "run.csv.zst"), (GZIP, "run.csv"), (ZSTANDARD, "run")] {
        let (code, out, err) = converted(&bytes(packed), name);
        assert_eq!((code, out.as_str()), (Some(0), RESULT), "{name}: {err}");
    }
}

#[test]
fn members_and_frames_follow_one_another() {
    let (head, tail) = TEXT.split_at(16);
    let two = [gzip(head), gzip(tail)].concat();
    assert_eq!(converted(&two, "r.gz").1, RESULT);
    let frame = |text: &[u8]| zstd::encode_all(text, 1).unwrap();
    assert_eq!(converted(&[frame(head), frame(tail)].concat(), "r.zst").1, RESULT);
}

#[test]
fn a_pipe_is_unpacked_too() {
    let dir = tempfile::tempdir().unwrap();
    std::fs::write(dir.path().join("s.toml"), SHEET).unwrap();
    let mut child = Command::new(env!("CARGO_BIN_EXE_ohmwright"))
        .current_dir(dir.path())
        .args(["convert", "s.toml", "-", "-q"])
        .stdin(Stdio::piped())
        .stdout(Stdio::piped())
        .spawn()
        .unwrap();
    let mut stdin = child.stdin.take().unwrap();
    for byte in bytes(GZIP) {
        stdin.write_all(&[byte]).unwrap();
    }
    drop(stdin);
    assert_eq!(String::from_utf8(child.wait_with_output().unwrap().stdout).unwrap(), RESULT);
}

/// Many megabytes pass through, and nothing appears of a file that is cut off or damaged.
#[test]
fn damage_is_an_error_and_leaves_no_result() {
    let mut text = String::from("time,CH01\n");
    for i in 0..200_000 {
        text += &format!("{i},{}\n", i % 977);
    }
    let whole = gzip(text.as_bytes());
    let (code, out, _) = converted(&whole, "r.gz");
    assert_eq!((code, out.lines().count()), (Some(0), 200_001));
    let mut wrong = whole.clone();
    let middle = wrong.len() / 2;
    wrong[middle] ^= 0x55;
    let packed = zstd::encode_all(text.as_bytes(), 1).unwrap();
    let cut = packed[..packed.len() / 2].to_vec();
    for (what, bytes, name) in
        [("cut off", whole[..whole.len() - 9].to_vec(), "r.gz"), ("damaged", wrong, "r.gz"), ("cut off", cut, "r.zst")]
    {
        let dir = tempfile::tempdir().unwrap();
        std::fs::write(dir.path().join("s.toml"), SHEET).unwrap();
        std::fs::write(dir.path().join(name), bytes).unwrap();
        let output = run(dir.path(), &["convert", "s.toml", name, "-q", "-o", "out.csv"]);
        let err = String::from_utf8(output.stderr).unwrap();
        assert_eq!(output.status.code(), Some(2), "{what}: {err}");
        assert!(err.contains(name) && !dir.path().join("out.csv").exists(), "{what}: {err}");
    }
}

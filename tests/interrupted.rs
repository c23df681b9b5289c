//! A run that is killed, or whose disk is full, leaves the old result or the whole new one.
#![cfg(feature = "cli")]

use std::process::{Command, Stdio};
use std::time::{Duration, Instant};

const SHEET: &str = "[channel.g]\ncolumn = \"CH01\"\nreads = \"mV/V\"\noutput = \"microstrain\"\n\
    gauge = { resistance = \"350 ohm\", gauge_factor = 2.08 }\nbridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }\nzero = { rows = 10 }\n";
const KILLS: u32 = 200;

/// splitmix64
fn random(state: &mut u64) -> f64 {
    *state = state.wrapping_add(0x9e37_79b9_7f4a_7c15);
    let mut z = *state;
    z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
    z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
    ((z ^ (z >> 31)) >> 11) as f64 / (1u64 << 53) as f64
}

#[test]
fn killed_at_any_moment() {
    let dir = tempfile::tempdir().unwrap();
    let path = |name: &str| dir.path().join(name);
    let recording = |by: usize| -> String { (0..6000).map(|i| format!("{i},0.{:05}\n", (i * by) % 99_991)).collect() };
    std::fs::write(path("s.toml"), SHEET).unwrap();
    let command = |recording: &str| {
        let mut command = Command::new(env!("CARGO_BIN_EXE_ohmwright"));
        let args = ["convert", "s.toml", recording, "-o", "out.csv", "-q"];
        command.current_dir(dir.path()).args(args).stdin(Stdio::null()).stdout(Stdio::null()).stderr(Stdio::null());
        command
    };
    // two results that are told apart, and how long one takes
    let mut whole = Vec::new();
    let mut longest = Duration::ZERO;
    for (k, name) in ["a.csv", "b.csv"].iter().enumerate() {
        std::fs::write(path(name), format!("time,CH01\n{}", recording(7 + 6 * k))).unwrap();
        let start = Instant::now();
        assert!(command(name).status().unwrap().success());
        longest = longest.max(start.elapsed());
        whole.push(std::fs::read(path("out.csv")).unwrap());
    }
    let (mut state, mut old, mut new) = (1, 0, 0);
    let mut now = 1;
    for kill in 0..KILLS {
        let next = 1 - now;
        let mut child = command(["a.csv", "b.csv"][next]).spawn().unwrap();
        std::thread::sleep(longest.mul_f64(1.2 * random(&mut state)));
        child.kill().unwrap();
        child.wait().unwrap();
        let found = std::fs::read(path("out.csv")).unwrap();
        if found == whole[next] {
            (new, now) = (new + 1, next);
        } else {
            assert!(found == whole[now], "kill {kill}: {} bytes that are neither result", found.len());
            old += 1;
        }
    }
    println!("{old} left the old result, {new} the new one");
    assert!(old > 0 && new > 0, "{old} old, {new} new: the moments were no moments in between");
}

/// What is written to a device without room, by a file and by standard output.
#[cfg(target_os = "linux")]
#[test]
fn a_full_disk_is_said() {
    let dir = tempfile::tempdir().unwrap();
    std::fs::write(dir.path().join("s.toml"), SHEET).unwrap();
    std::fs::write(dir.path().join("r.csv"), format!("time,CH01\n{}", "0,0.5\n".repeat(50))).unwrap();
    let full = || std::fs::OpenOptions::new().write(true).open("/dev/full").unwrap();
    for (args, name) in [(&["-o", "/dev/full"][..], "/dev/full"), (&[], "standard output")] {
        let output = Command::new(env!("CARGO_BIN_EXE_ohmwright"))
            .current_dir(dir.path())
            .args(["convert", "s.toml", "r.csv", "-q"])
            .args(args)
            .stdin(Stdio::null())
            .stdout(full())
            .output()
            .unwrap();
        let err = String::from_utf8(output.stderr).unwrap();
        assert_eq!(
            (output.status.code(), err.as_str()),
            (Some(2), &*format!("{name}: cannot write: the disk is full\n"))
        );
    }
}

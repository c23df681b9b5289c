//! `convert --follow`: rows come out as they are written, to standard output alone.
#![cfg(feature = "cli")]

use std::fs::OpenOptions;
use std::io::{BufRead, BufReader, Write};
use std::path::Path;
use std::process::{Child, Command, Output, Stdio};
use std::sync::mpsc::{Receiver, channel};
use std::time::Duration;

const SHEET: &str = "[channel.u]\ncolumn = \"CH01\"\nreads = \"mV\"\n";
/// Long enough for a machine with other work; nothing is measured by it.
const PATIENCE: Duration = Duration::from_secs(60);

fn command(dir: &Path, args: &[&str]) -> Command {
    let mut command = Command::new(env!("CARGO_BIN_EXE_ohmwright"));
    command.current_dir(dir).args(args).stdin(Stdio::null());
    command
}

fn run(dir: &Path, args: &[&str]) -> Output {
    command(dir, args).output().unwrap()
}

fn append(path: &Path, text: &str) {
    OpenOptions::new().append(true).open(path).unwrap().write_all(text.as_bytes()).unwrap();
}

struct Followed {
    child: Child,
    lines: Receiver<String>,
}

impl Followed {
    fn start(dir: &Path) -> Self {
        let mut child = command(dir, &["convert", "s.toml", "r.csv", "--follow", "-q"])
            .stdout(Stdio::piped())
            .stderr(Stdio::piped())
            .spawn()
            .unwrap();
        let out = BufReader::new(child.stdout.take().unwrap());
        let (send, lines) = channel();
        std::thread::spawn(move || out.lines().map_while(Result::ok).all(|line| send.send(line).is_ok()));
        Self { child, lines }
    }

    fn line(&self) -> String {
        self.lines.recv_timeout(PATIENCE).unwrap()
    }
}

impl Drop for Followed {
    fn drop(&mut self) {
        let _ = self.child.kill();
        let _ = self.child.wait();
    }
}

#[test]
fn rows_come_out_as_they_are_written() {
    let dir = tempfile::tempdir().unwrap();
    let path = dir.path().join("r.csv");
    std::fs::write(dir.path().join("s.toml"), SHEET).unwrap();
    let head: String = (0..20).map(|i| format!("{i},0.{i}\n")).collect();
    std::fs::write(&path, format!("time,CH01\n{head}")).unwrap();
    let followed = Followed::start(dir.path());
    assert_eq!(followed.line(), "time,u (mV),flags");
    for i in 0..20 {
        assert_eq!(followed.line().split(',').next(), Some(i.to_string().as_str()));
    }
    // a whole line, then half of one, then its end
    append(&path, "20,1.5\n");
    assert_eq!(followed.line(), "20,1.5,");
    append(&path, "21,2.");
    assert!(followed.lines.recv_timeout(Duration::from_millis(400)).is_err());
    append(&path, "25\n22,x\n");
    assert_eq!(followed.line(), "21,2.25,");
    assert_eq!(followed.line(), "22,,u:unreadable");
}

#[test]
fn a_file_that_is_cut_off_ends_it_with_an_error() {
    let dir = tempfile::tempdir().unwrap();
    let path = dir.path().join("r.csv");
    std::fs::write(dir.path().join("s.toml"), SHEET).unwrap();
    let head: String = (0..20).map(|i| format!("{i},0.{i}\n")).collect();
    std::fs::write(&path, format!("time,CH01\n{head}")).unwrap();
    let mut followed = Followed::start(dir.path());
    (0..21).for_each(|_| drop(followed.line()));
    std::fs::write(&path, "time,CH01\n").unwrap();
    assert_eq!(followed.child.wait().unwrap().code(), Some(2));
    let mut err = String::new();
    std::io::Read::read_to_string(followed.child.stderr.as_mut().unwrap(), &mut err).unwrap();
    assert!(err.contains("r.csv: cannot read: it became shorter while it was followed"), "{err}");
}

#[test]
fn what_needs_a_whole_file_is_refused() {
    let dir = tempfile::tempdir().unwrap();
    let gauge = "[channel.g]\ncolumn = \"CH01\"\nreads = \"mV/V\"\noutput = \"microstrain\"\n\
        gauge = { resistance = \"350 ohm\", gauge_factor = 2 }\nbridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }\n";
    std::fs::write(dir.path().join("s.toml"), format!("{gauge}zero = {{ from = \"1 s\", to = \"2 s\" }}\n")).unwrap();
    std::fs::write(dir.path().join("r.csv"), "time,CH01\n0,0.5\n1,0.6\n2,0.7\n").unwrap();
    let said = |args: &[&str]| {
        let output = run(dir.path(), args);
        (output.status.code(), String::from_utf8(output.stderr).unwrap())
    };
    let (code, err) = said(&["convert", "s.toml", "r.csv", "--follow"]);
    assert!(code == Some(2) && err.contains("takes its zero from 1 s to 2 s, which needs a whole file"), "{err}");
    for more in [&["-o", "out.csv"][..], &["--into", "out"], &["--join"]] {
        let (code, err) = said(&[&["convert", "s.toml", "r.csv", "--follow"], more].concat());
        assert!(code == Some(2) && err.contains("--follow"), "{err}");
    }
    assert!(said(&["convert", "s.toml", "-", "--follow"]).1.contains("--follow is for a file"));
}

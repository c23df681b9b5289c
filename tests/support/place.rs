//! A folder in which the command is typed.

#![allow(dead_code, reason = "each test file uses its own share")]

use std::process::{Command, Output, Stdio};

pub struct Place(pub tempfile::TempDir);

impl Place {
    pub fn new() -> Self {
        Self(tempfile::tempdir().unwrap())
    }

    pub fn put(&self, name: &str, text: &str) {
        std::fs::write(self.0.path().join(name), text).unwrap();
    }

    pub fn read(&self, name: &str) -> String {
        std::fs::read_to_string(self.0.path().join(name)).unwrap()
    }

    pub fn run(&self, args: &[&str]) -> Output {
        Command::new(env!("CARGO_BIN_EXE_ohmwright"))
            .current_dir(self.0.path())
            .args(args)
            .stdin(Stdio::null())
            .output()
            .unwrap()
    }

    /// What it gives where all is well.
    pub fn good(&self, args: &[&str]) -> String {
        let output = self.run(args);
        assert_eq!(output.status.code(), Some(0), "{args:?}\n{}", String::from_utf8_lossy(&output.stderr));
        String::from_utf8(output.stdout).unwrap()
    }

    /// What it says where it refuses.
    pub fn refused(&self, args: &[&str]) -> String {
        let output = self.run(args);
        assert_eq!(output.status.code(), Some(2), "{args:?}");
        String::from_utf8(output.stderr).unwrap()
    }
}

//! Residuals: collects every failure, prints the worst residual of every check, fails at the end.

use std::fmt::{self, Display};

/// Where an expected value stands.
#[derive(Clone, Copy, Debug)]
pub struct At<'a> {
    /// File, from the root of the package.
    pub file: &'a str,
    /// Line, from 1.
    pub line: usize,
}

impl Display for At<'_> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{}:{}", self.file, self.line)
    }
}

/// How many failures of one check are printed in full; the others are counted.
const SHOWN: usize = 20;

struct Check {
    name: String,
    count: usize,
    failed: usize,
    /// Largest error over allowed error.
    worst: f64,
    /// Error and allowance there.
    error: f64,
    allowed: f64,
    place: String,
}

/// Collects the checks of one source.
#[must_use = "call finish"]
pub struct Report {
    title: String,
    checks: Vec<Check>,
    failures: Vec<String>,
    finished: bool,
}

impl Report {
    /// Returns a report without checks.
    pub fn new(title: &str) -> Self {
        Self { title: title.to_owned(), checks: Vec::new(), failures: Vec::new(), finished: false }
    }

    fn named(&mut self, name: &str) -> usize {
        if let Some(i) = self.checks.iter().position(|c| c.name == name) {
            return i;
        }
        self.checks.push(Check {
            name: name.to_owned(),
            count: 0,
            failed: 0,
            worst: -1.0,
            error: 0.0,
            allowed: 0.0,
            place: String::new(),
        });
        self.checks.len() - 1
    }

    fn push(&mut self, index: usize, text: impl FnOnce() -> String) {
        let check = &mut self.checks[index];
        check.failed += 1;
        if check.failed <= SHOWN {
            self.failures.push(text());
        }
    }

    /// Counts one comparison: |got − expected| must not exceed `allowed`. NaN never passes.
    ///
    /// - `name`: of the check, for example `inverse`; the worst residual is kept per name.
    /// - `at`: where the expected value stands; `input`: what went in.
    pub fn check(&mut self, name: &str, at: impl Display, input: impl Display, expected: f64, got: f64, allowed: f64) {
        self.check_error(name, at, input, expected, got, got - expected, allowed);
    }

    /// The same where the error is known better than by the difference of the two numbers.
    #[allow(clippy::too_many_arguments, reason = "one line of a report")]
    pub fn check_error(
        &mut self,
        name: &str,
        at: impl Display,
        input: impl Display,
        expected: f64,
        got: f64,
        error: f64,
        allowed: f64,
    ) {
        let index = self.named(name);
        let check = &mut self.checks[index];
        check.count += 1;
        let error = error.abs();
        let ratio = if error == 0.0 { 0.0 } else { error / allowed };
        if ratio > check.worst {
            (check.worst, check.error, check.allowed, check.place) = (ratio, error, allowed, at.to_string());
        }
        let passes = error <= allowed;
        if !passes {
            self.push(index, || {
                format!("{at}: {name}: input {input}: expected {expected:?}, got {got:?}, error {error:.3e}, allowed {allowed:.3e}")
            });
        }
    }

    /// Counts one comparison that must hold exactly.
    pub fn equal<T: PartialEq + fmt::Debug>(
        &mut self,
        name: &str,
        at: impl Display,
        input: impl Display,
        expected: T,
        got: T,
    ) {
        let index = self.named(name);
        self.checks[index].count += 1;
        if expected != got {
            self.push(index, || format!("{at}: {name}: input {input}: expected {expected:?}, got {got:?}"));
        }
    }

    /// Counts one failure in words.
    pub fn fail(&mut self, name: &str, at: impl Display, message: impl Display) {
        let index = self.named(name);
        self.checks[index].count += 1;
        self.push(index, || format!("{at}: {name}: {message}"));
    }

    /// Prints the worst residual of every check.
    ///
    /// Panics with all failures if there are any, or if nothing was checked.
    pub fn finish(mut self) {
        self.finished = true;
        println!("{}", self.title);
        for c in &self.checks {
            let Check { name, count, failed, worst, error, allowed, place } = c;
            if *worst < 0.0 {
                println!("  {name}: {count} checked, {failed} failed");
            } else {
                println!(
                    "  {name}: {count} checked, {failed} failed, worst {error:.2e} of {allowed:.2e} allowed ({worst:.3}) at {place}"
                );
            }
        }
        let failed: usize = self.checks.iter().map(|c| c.failed).sum();
        assert!(self.checks.iter().any(|c| c.count > 0), "{}: nothing was checked", self.title);
        assert!(failed == 0, "{}: {failed} failures\n{}", self.title, self.failures.join("\n"));
    }
}

impl Drop for Report {
    fn drop(&mut self) {
        assert!(self.finished || std::thread::panicking(), "{}: the report was not finished", self.title);
    }
}

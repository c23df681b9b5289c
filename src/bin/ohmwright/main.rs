//! `ohmwright`: bridge volts and ohms to microstrain and degrees, on the command line.

mod args;
mod budget;
mod check;
mod convert;
mod curve;
mod describe;
mod evidence;
mod expect;
mod failure;
mod files;
mod fit;
mod fit_points;
mod fit_report;
mod image;
mod repeat;
mod shell;
mod side;
mod start;
mod table;
mod trace;
mod value;

use std::io::Write;
use std::process::ExitCode;

use args::{Args, Command};

fn main() -> ExitCode {
    let args = Args::typed();
    let outcome = match &args.command {
        Command::Convert(a) => convert::run(a),
        Command::Value(a) => value::run(a),
        Command::Expect(a) => expect::run(a),
        Command::Check(a) => check::run(a),
        Command::Budget(a) => budget::run(a),
        Command::Describe(a) => describe::run(a),
        Command::Table(a) => table::run(a),
        Command::Fit(a) => fit::run(a),
        Command::Image(a) => image::run(a),
        Command::Repeat(a) => repeat::run(a),
        Command::Start(a) => start::run(a),
        Command::Curve(a) => curve::run(a),
        Command::Evidence(a) => evidence::run(a),
        Command::Completions(a) => shell::completions(a),
        Command::Manual => shell::manual(),
    };
    match outcome {
        Ok(()) => ExitCode::SUCCESS,
        // whoever read our output has seen enough
        Err(failure) if failure.is_broken_pipe() => ExitCode::SUCCESS,
        Err(failure) => {
            let message = failure.to_string();
            if !message.is_empty() {
                // nothing is left to be done when stderr itself is gone
                let _ = writeln!(std::io::stderr(), "{}", message.trim_end());
            }
            ExitCode::from(failure.code())
        }
    }
}

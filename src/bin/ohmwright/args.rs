//! What can be typed.

use std::ffi::OsString;
use std::path::PathBuf;

use clap::{Args as ClapArgs, Parser, Subcommand, ValueEnum};
use serde::{Deserialize, Serialize};

/// Bridge volts and ohms to microstrain and degrees.
///
/// A measurement sheet says how gauges and thermometers were wired; a recording holds what the logger wrote. Not a
/// protective function: stop limits and safety decisions stay with the responsible engineer.
#[derive(Debug, Parser)]
#[command(version, max_term_width = 100)]
pub(crate) struct Args {
    #[command(subcommand)]
    pub(crate) command: Command,
}

impl Args {
    /// Parses what was typed. A reading below zero is no flag: `-0.5`, `"-0.5 mV"`.
    pub(crate) fn typed() -> Self {
        let minus = |word: OsString| match word.to_str().and_then(|w| w.strip_prefix('-')) {
            Some(rest) if rest.starts_with(|c: char| c.is_ascii_digit() || c == '.') => {
                format!("\u{2212}{rest}").into()
            }
            _ => word,
        };
        let mut words: Vec<OsString> = std::env::args_os().collect();
        if words.get(1).is_some_and(|command| command == "value" || command == "expect") {
            words = words.into_iter().map(minus).collect();
        }
        Self::parse_from(words)
    }
}

#[derive(Debug, Subcommand)]
pub(crate) enum Command {
    /// Convert a recording into a table of results
    Convert(Convert),
    /// Convert one reading, at once
    Value(Value),
    /// Say which signals these values should give
    Expect(Expect),
    /// Say whether somebody else's results are right, and if not, why
    Check(Check),
    /// Say where the uncertainty of one result comes from
    Budget(Budget),
    /// Say in words what each channel does
    Describe(Describe),
    /// Print a table: of a standard, or at a channel's values
    Table(Table),
    /// Fit a sensor's curve to calibration points
    Fit(Fit),
    /// Write the chains of a sheet as bytes for firmware
    Image(Image),
    /// Say whether a result comes out the same now, by its trace
    Repeat(Repeat),
    /// Write a sheet to begin with, for a recording
    Start(Start),
    /// Condense one channel into a table with a proven bound, as CSV, C or Rust
    Curve(Curve),
    /// Re-compute every published check value compiled into this program
    Evidence(Evidence),
    /// Print what a shell needs to complete commands and options
    Completions(Completions),
    /// Print the manual page (roff)
    Manual,
}

#[derive(Debug, ClapArgs)]
pub(crate) struct Repeat {
    /// The trace that a command with -o OUT wrote beside OUT: OUT.trace
    pub(crate) trace: PathBuf,
}

#[derive(Debug, ClapArgs)]
pub(crate) struct Start {
    /// The recording; `-` reads a pipe
    pub(crate) recording: PathBuf,
    /// Write the sheet to this file, which must not be there yet; without it, to standard output
    #[arg(short, long, value_name = "SHEET")]
    pub(crate) output: Option<PathBuf>,
}

#[derive(Debug, ClapArgs)]
pub(crate) struct Completions {
    /// The shell
    pub(crate) shell: clap_complete::Shell,
}

#[derive(Debug, ClapArgs)]
#[command(
    override_usage = "ohmwright table STANDARD [OPTIONS]\n       ohmwright table SUBJECT SHEET CHANNEL [OPTIONS]"
)]
pub(crate) struct Table {
    /// A standard: "IEC 60751", "ASTM E1137", "IEC 751:1983", "GOST 6651-2009", "R100/R0 = 1.3911", "nickel DIN 43760",
    /// "copper GOST 6651-2009", "type K", "ITS-90"; or what a table of a channel is about: shunts (resistors across an arm
    /// and what they simulate), leads (the sensitivity that lead wires leave), nonlinearity (what a first-order reading
    /// would make of each value), temperatures (the reading at each temperature and its slope)
    pub(crate) subject: String,
    /// The measurement sheet
    pub(crate) sheet: Option<PathBuf>,
    /// A channel of it
    pub(crate) channel: Option<String>,
    /// Add the tolerance of this class: AA, A, B, C, "1/3 B", "1/10 B" (trade usage; with --from and --to); 1, 2, 3 for
    /// thermocouples
    #[arg(long)]
    pub(crate) class: Option<String>,
    /// The class is that of a film resistor, which decides its range; otherwise of a wire-wound one
    #[arg(long)]
    pub(crate) film: bool,
    /// Resistance at 0 degC of the thermometer of a standard
    #[arg(long, value_name = "OHMS")]
    pub(crate) r0: Option<String>,
    /// First line: a temperature, a value of the channel, or the ohms of one conductor for leads
    #[arg(long, allow_hyphen_values = true)]
    pub(crate) from: Option<String>,
    /// Last line
    #[arg(long, allow_hyphen_values = true)]
    pub(crate) to: Option<String>,
    /// From line to line; of temperatures a difference, in K unless it has a unit (K, degC, degF)
    #[arg(long, allow_hyphen_values = true)]
    pub(crate) step: Option<String>,
    /// Arm that the shunt goes across, 1 to 4
    #[arg(long, default_value_t = 1, value_parser = clap::value_parser!(u8).range(1..=4))]
    pub(crate) arm: u8,
    /// Connect the shunt at the instrument's terminals instead of at the gauge
    #[arg(long)]
    pub(crate) at_instrument: bool,
    /// Say which value of the channel this resistor simulates, at the gauge and at the instrument
    #[arg(long, value_name = "OHMS")]
    pub(crate) resistor: Option<String>,
    #[command(flatten)]
    pub(crate) with: With,
}

#[derive(Debug, ClapArgs)]
pub(crate) struct Convert {
    /// The measurement sheet
    pub(crate) sheet: PathBuf,
    /// The recording; `-` reads a pipe. Several with --into or --join
    #[arg(required_unless_present = "list")]
    pub(crate) recording: Vec<PathBuf>,
    /// Write the table to this file, which appears whole or not at all; without it, to standard output. A name that ends in
    /// .parquet or .arrow makes a file of columns
    #[arg(short, long, value_name = "OUT")]
    pub(crate) output: Option<PathBuf>,
    /// Write a table of each recording into this directory, named after it; what is wrong with one does not stop the others
    #[arg(long, value_name = "DIR", conflicts_with_all = ["output", "join"])]
    pub(crate) into: Option<PathBuf>,
    /// Make one table of all recordings, in the order of their first moments, with one zero; gaps and overlaps are told
    #[arg(long)]
    pub(crate) join: bool,
    /// Take more recordings from this text file, one path a line; `-` reads a pipe
    #[arg(long, value_name = "FILE")]
    pub(crate) list: Option<PathBuf>,
    /// Give the expanded uncertainty of every reading, in a column beside each channel
    #[arg(long)]
    pub(crate) uncertainty: bool,
    /// Its coverage probability [default: 0.95]
    #[arg(long, value_name = "P", requires = "uncertainty")]
    pub(crate) coverage: Option<f64>,
    /// The recordings are results of this earlier sheet: take them back to readings first
    #[arg(long, value_name = "OLDSHEET")]
    pub(crate) undo: Option<PathBuf>,
    /// 32-bit floats in a result that is a Parquet or Arrow file
    #[arg(long)]
    pub(crate) single: bool,
    /// Go on reading a recording that is still being written, and write every row to standard output at once, until interrupted
    #[arg(long, conflicts_with_all = ["output", "into", "join", "list", "undo"])]
    pub(crate) follow: bool,
    /// Compare with an earlier result, a file or a folder of them, and print what changed; with -o or --into
    #[arg(long, value_name = "EARLIER")]
    pub(crate) against: Option<PathBuf>,
    /// What changed as JSON
    #[arg(long, requires = "against")]
    pub(crate) json: bool,
    /// End with exit code 1 when any reading is flagged, or a shunt step disagrees or cannot be judged
    #[arg(long)]
    pub(crate) strict: bool,
    /// Say nothing but errors
    #[arg(short, long)]
    pub(crate) quiet: bool,
}

#[derive(Debug, ClapArgs)]
#[command(override_usage = "ohmwright value SHEET CHANNEL READING...\n       ohmwright value READING KEY=VALUE...")]
pub(crate) struct Value {
    /// A sheet, a channel of it and readings; or a reading with its unit and keys of a sheet, as in
    /// "109.73 ohm" platinum.standard="IEC 60751" platinum.r0="100 ohm"
    #[arg(required = true)]
    pub(crate) words: Vec<String>,
    #[command(flatten)]
    pub(crate) with: With,
    /// End with exit code 1 when any reading is flagged
    #[arg(long)]
    pub(crate) strict: bool,
}

#[derive(Debug, ClapArgs)]
pub(crate) struct Expect {
    /// The measurement sheet
    pub(crate) sheet: PathBuf,
    /// A channel of it, or a rosette
    pub(crate) channel: String,
    /// Values in the unit of the channel, or with a unit; for a rosette its larger and smaller principal strain and the
    /// direction of the larger from x
    #[arg(required = true)]
    pub(crate) values: Vec<String>,
    #[command(flatten)]
    pub(crate) with: With,
}

#[derive(Debug, ClapArgs)]
#[command(override_usage = "ohmwright check SHEET DELIVERED [OPTIONS]\n       ohmwright check --mistakes")]
pub(crate) struct Check {
    /// The measurement sheet; `reported` in a channel says where its delivered result stands
    #[arg(required_unless_present = "mistakes")]
    pub(crate) sheet: Option<PathBuf>,
    /// The file with the readings and with what was made of them
    #[arg(required_unless_present = "mistakes")]
    pub(crate) delivered: Option<PathBuf>,
    /// As JSON
    #[arg(long)]
    pub(crate) json: bool,
    /// List every mistake that is tried, with its stage, parameter and sign, and where it is not tried
    #[arg(long, conflicts_with_all = ["sheet", "delivered", "json"])]
    pub(crate) mistakes: bool,
    /// Show no progress and no remarks
    #[arg(short, long)]
    pub(crate) quiet: bool,
}

#[derive(Debug, ClapArgs)]
pub(crate) struct Budget {
    /// The measurement sheet
    pub(crate) sheet: PathBuf,
    /// A channel of it
    pub(crate) channel: String,
    /// The reading, in the unit of the channel's readings or with a unit; for a channel made of several, NAME=READING for each
    #[arg(long, required = true, value_name = "READING", allow_hyphen_values = true)]
    pub(crate) at: Vec<String>,
    #[command(flatten)]
    pub(crate) with: With,
    /// Take the zeros that are means, and how readings scatter, from this recording
    #[arg(long, value_name = "FILE")]
    pub(crate) recording: Option<PathBuf>,
    /// Coverage probability [default: 0.95]
    #[arg(long, value_name = "P")]
    pub(crate) coverage: Option<f64>,
    /// A coverage factor instead
    #[arg(long, conflicts_with = "coverage")]
    pub(crate) k: Option<f64>,
    /// Run so many trials (JCGM 101) beside the first-order evaluation
    #[arg(long, value_name = "TRIALS", value_parser = whole)]
    pub(crate) monte_carlo: Option<usize>,
    /// Another set of draws
    #[arg(long, default_value_t = 1)]
    pub(crate) seed: u64,
    /// Rank what must become better for this expanded uncertainty
    #[arg(long, value_name = "U")]
    pub(crate) improve: Option<String>,
    /// Judge the result by a limit, as in "<= 200 MPa" or ">= -500"; exit code 1 where guarded acceptance rejects it
    #[arg(long, value_name = "LIMIT", allow_hyphen_values = true)]
    pub(crate) limit: Vec<String>,
    /// Width of the guard band [default: the expanded uncertainty]
    #[arg(long, value_name = "WIDTH", requires = "limit")]
    pub(crate) guard: Option<String>,
    /// As a CSV table, with all digits
    #[arg(long, conflicts_with = "json")]
    pub(crate) csv: bool,
    /// As JSON, with all digits
    #[arg(long)]
    pub(crate) json: bool,
}

/// What else goes into a value that is computed alone.
#[derive(Clone, Debug, ClapArgs, Serialize, Deserialize)]
pub(crate) struct With {
    /// A side input: a temperature channel, a supply column, `zero`, `zero_temperature` (of every gauge),
    /// `zero_temperature.NAME` (what that channel was at zero) or `zero_lead_temperature`, as in deck=21degC; for `value` also
    /// the second column of a reading. A bare number is in the unit of the column, a bare temperature in degC
    #[arg(long, value_name = "NAME=VALUE")]
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub(crate) with: Vec<String>,
}

#[derive(Debug, ClapArgs)]
pub(crate) struct Describe {
    /// The measurement sheet
    pub(crate) sheet: PathBuf,
    /// A recording, to see which column each channel reads
    pub(crate) recording: Option<PathBuf>,
}

#[derive(Debug, ClapArgs)]
pub(crate) struct Image {
    /// The measurement sheet
    pub(crate) sheet: PathBuf,
    /// Write the image to this file, which appears whole or not at all; `-` is standard output
    #[arg(short, long, value_name = "FILE")]
    pub(crate) output: PathBuf,
}

/// Form of a table.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum, Serialize, Deserialize)]
#[serde(rename_all = "lowercase")]
pub(crate) enum CurveForm {
    /// Pieces and coefficients in doubles
    Csv,
    /// C99, self-contained: constant arrays and one function
    C,
    /// A Rust module: constant arrays and one function, without std
    Rust,
}

/// Numbers of a table in C or Rust.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum, Serialize, Deserialize)]
#[serde(rename_all = "lowercase")]
pub(crate) enum CurveNumbers {
    /// Single precision
    Float,
    /// 32-bit integers, saturating; the text says where their points are
    Fixed,
}

#[derive(Clone, Debug, ClapArgs, Serialize, Deserialize)]
pub(crate) struct Curve {
    /// The measurement sheet
    #[serde(skip)]
    pub(crate) sheet: PathBuf,
    /// A channel of it
    pub(crate) channel: String,
    /// Largest error, proven over every reading, in the unit of the channel or with a unit, as in "0.01 K"
    #[arg(long, value_name = "TOL", allow_hyphen_values = true)]
    pub(crate) within: String,
    /// Lowest result [default: as far as the channel goes]
    #[arg(long, value_name = "VALUE", allow_hyphen_values = true)]
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub(crate) from: Option<String>,
    /// Highest result
    #[arg(long, value_name = "VALUE", allow_hyphen_values = true)]
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub(crate) to: Option<String>,
    /// Form of the table
    #[serde(rename = "as")]
    #[arg(long = "as", value_enum, value_name = "FORM", default_value_t = CurveForm::Csv)]
    pub(crate) form: CurveForm,
    /// Numbers of a table in C or Rust [default: float]
    #[arg(long, value_enum)]
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub(crate) numbers: Option<CurveNumbers>,
    /// Highest power of its polynomials [default: the one that takes least room]
    #[arg(long, value_parser = clap::value_parser!(u8).range(1..=3))]
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub(crate) degree: Option<u8>,
    /// Name of the function [default: curve_ and the name of the channel]
    #[arg(long)]
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub(crate) name: Option<String>,
    /// Write the table to this file, which appears whole or not at all; without it, to standard output
    #[arg(short, long, value_name = "OUT")]
    #[serde(skip)]
    pub(crate) output: Option<PathBuf>,
    #[command(flatten)]
    #[serde(flatten)]
    pub(crate) with: With,
}

#[derive(Clone, Debug, ClapArgs, Serialize, Deserialize)]
pub(crate) struct Evidence {
    /// Write the report to this file
    #[arg(short, long, value_name = "FILE")]
    #[serde(skip)]
    pub(crate) output: Option<PathBuf>,
    /// As JSON
    #[arg(long)]
    pub(crate) json: bool,
}

#[derive(Debug, ClapArgs)]
pub(crate) struct Fit {
    #[command(subcommand)]
    pub(crate) model: Model,
}

#[derive(Debug, Subcommand)]
pub(crate) enum Model {
    /// R0, A, B and C of a platinum thermometer: points of temperature and resistance
    Platinum(FitPlatinum),
    /// Steinhart-Hart or four terms of a thermistor: points of temperature and resistance
    Thermistor(FitThermistor),
    /// Polynomial of a transducer: points of load and output
    Transducer(FitTransducer),
    /// Polynomial of a gauge's thermal output: points of temperature and strain
    ThermalOutput(FitThermalOutput),
    /// Deviation function of a standard platinum thermometer: fixed points of temperature and resistance
    Its90(FitIts90),
}

/// What every fit takes.
#[derive(Debug, ClapArgs)]
pub(crate) struct FitPoints {
    /// The points: a table in a text file whose header names units, as in `temperature (degC),resistance (ohm)`, perhaps with a
    /// column of standard uncertainties in one of these units, as in `uncertainty (mK)`; `-` reads a pipe
    pub(crate) points: PathBuf,
    /// Which column is what, where units do not tell: temperature, resistance, load, output, strain or uncertainty by its header or
    /// number, as in load=F1
    #[arg(long, value_name = "WHAT=COLUMN")]
    pub(crate) column: Vec<String>,
    /// Give the value and intervals of a reading
    #[arg(long, value_name = "VALUE", allow_hyphen_values = true)]
    pub(crate) reading: Vec<String>,
    /// The reading is the mean of so many
    #[arg(long, value_name = "COUNT", default_value_t = 1, value_parser = clap::value_parser!(u32).range(1..))]
    pub(crate) repeats: u32,
    /// Standard uncertainty of a single reading; otherwise it scatters as the points do
    #[arg(long, value_name = "VALUE")]
    pub(crate) reading_uncertainty: Option<String>,
    /// Give the curve and its confidence band at this temperature or load
    #[arg(long, value_name = "VALUE", allow_hyphen_values = true)]
    pub(crate) at: Vec<String>,
    /// Probability of all intervals
    #[arg(long, value_name = "P", default_value_t = 0.95)]
    pub(crate) coverage: f64,
    /// Print nothing but the fragment for a sheet
    #[arg(long, conflicts_with = "json")]
    pub(crate) sheet: bool,
    /// As JSON
    #[arg(long)]
    pub(crate) json: bool,
}

#[derive(Debug, ClapArgs)]
pub(crate) struct FitPlatinum {
    #[command(flatten)]
    pub(crate) common: FitPoints,
    /// Hold the resistance at 0 degC at this value
    #[arg(long, value_name = "OHMS")]
    pub(crate) r0: Option<String>,
    /// What becomes of C
    #[arg(long, value_enum, default_value_t = TermC::Auto)]
    pub(crate) c: TermC,
}

/// What becomes of C.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub(crate) enum TermC {
    /// Fitted where points below 0 degC support it
    Auto,
    /// Fitted
    Fit,
    /// Held at 0
    Zero,
}

#[derive(Debug, ClapArgs)]
pub(crate) struct FitThermistor {
    #[command(flatten)]
    pub(crate) common: FitPoints,
    /// Number of terms
    #[arg(long, default_value_t = 3, value_parser = clap::value_parser!(u8).range(3..=4))]
    pub(crate) terms: u8,
    /// What the equation gives: with 3 terms Steinhart-Hart or R = b1 exp(b2/(t + b3)); with 4 terms 1/T or ln R as a cubic
    #[arg(long, value_enum, default_value_t = Gives::Temperature)]
    pub(crate) gives: Gives,
    /// Resistance that a ratio refers to; otherwise that of the point nearest to 25 degC
    #[arg(long, value_name = "OHMS")]
    pub(crate) reference: Option<String>,
}

/// What a thermistor's equation gives.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub(crate) enum Gives {
    /// Temperature of a resistance
    Temperature,
    /// Resistance of a temperature
    Resistance,
}

#[derive(Debug, ClapArgs)]
pub(crate) struct FitTransducer {
    #[command(flatten)]
    pub(crate) common: FitPoints,
    /// Highest power
    #[arg(long, default_value_t = 1, value_parser = clap::value_parser!(u8).range(1..=6))]
    pub(crate) degree: u8,
    /// Hold the output without load at 0
    #[arg(long)]
    pub(crate) through_zero: bool,
}

#[derive(Debug, ClapArgs)]
pub(crate) struct FitThermalOutput {
    #[command(flatten)]
    pub(crate) common: FitPoints,
    /// Highest power; otherwise the highest that the points support
    #[arg(long, value_parser = clap::value_parser!(u8).range(1..=6))]
    pub(crate) degree: Option<u8>,
    /// Gauge factor that the points were taken with
    #[arg(long, default_value_t = 2.0)]
    pub(crate) gauge_factor: f64,
}

#[derive(Debug, ClapArgs)]
pub(crate) struct FitIts90 {
    #[command(flatten)]
    pub(crate) common: FitPoints,
    /// Subrange: hydrogen, neon, oxygen, argon, mercury (to gallium), gallium, indium, tin, zinc, aluminium or silver
    #[arg(long)]
    pub(crate) subrange: String,
    /// Resistance at the triple point of water; otherwise the mean of the points at 0.01 degC
    #[arg(long, value_name = "OHMS")]
    pub(crate) triple_point: Option<String>,
}

/// A whole number, also as 1e6.
fn whole(text: &str) -> Result<usize, String> {
    let number: f64 = text.trim().parse().map_err(|_| "expected a whole number, as in 200000 or 2e5".to_string())?;
    // up to 2⁵³ a double is every whole number
    if number.fract() == 0.0 && (0.0..=9e15).contains(&number) {
        Ok(number as usize)
    } else {
        Err("expected a whole number, as in 200000 or 2e5".into())
    }
}

//! The command line as it is typed: results, messages, exit codes, pipes.
//!
//! Known answers: one active 350 ohm arm, gauge factor 2.08, three wires of 2.6 ohm, 1.2075 mV at 2.500 V is 936.651 microstrain,
//! by hand from R1/(R1 + R2) − 1/2 = y with R1 = 350 (1 + F e) + 2.6 and R2 = 352.6; 109.73 ohm is 25 °C to half its last
//! digit (IEC 60751:2008, table of a 100 ohm element).
#![cfg(feature = "cli")]

mod support;

use std::fs;
use std::io::{BufRead, BufReader, Read, Write};
use std::path::{Path, PathBuf};
use std::process::{Child, Command, Output, Stdio};
use std::sync::mpsc;
use std::time::{Duration, Instant};

const ONE_ARM: &str = "[channel.g]\ncolumn = \"CH01\"\nreads = \"mV\"\noutput = \"microstrain\"\n\
    gauge = { resistance = \"350 ohm\", gauge_factor = 2.08 }\n\
    bridge = { arms = [\"e\", \"0\", \"0\", \"0\"], supply = \"2.500 V\" }\nleads = { wires = 3, each = \"2.6 ohm\" }\n";

/// A gauge whose result is its reading, to see text pass: mV passed on.
const PLAIN: &str = "[channel.u]\ncolumn = \"CH01\"\nreads = \"mV\"\n";

struct Dir(tempfile::TempDir);

impl Dir {
    fn new() -> Self {
        Self(tempfile::tempdir().unwrap())
    }

    fn path(&self, name: &str) -> PathBuf {
        self.0.path().join(name)
    }

    fn put(&self, name: &str, bytes: impl AsRef<[u8]>) -> PathBuf {
        let path = self.path(name);
        fs::write(&path, bytes).unwrap();
        path
    }

    fn command(&self, args: &[&str]) -> Command {
        let mut command = Command::new(env!("CARGO_BIN_EXE_ohmwright"));
        command.current_dir(self.0.path()).args(args).stdin(Stdio::null());
        command
    }

    fn run(&self, args: &[&str]) -> Ran {
        Ran::from(self.command(args).output().unwrap())
    }

    /// The same with something to read on standard input, in pieces.
    fn pipe(&self, args: &[&str], input: &[u8], piece: usize) -> Ran {
        let mut child = self.start(args);
        let mut stdin = child.stdin.take().unwrap();
        let input = input.to_vec();
        let feed = std::thread::spawn(move || {
            for part in input.chunks(piece) {
                if stdin.write_all(part).and_then(|()| stdin.flush()).is_err() {
                    break;
                }
            }
        });
        let output = child.wait_with_output().unwrap();
        feed.join().unwrap();
        Ran::from(output)
    }

    fn start(&self, args: &[&str]) -> Child {
        self.command(args).stdin(Stdio::piped()).stdout(Stdio::piped()).stderr(Stdio::piped()).spawn().unwrap()
    }

    /// Names of everything in the directory.
    fn names(&self) -> Vec<String> {
        let mut names: Vec<String> =
            fs::read_dir(self.0.path()).unwrap().map(|e| e.unwrap().file_name().into_string().unwrap()).collect();
        names.sort();
        names
    }
}

#[derive(Debug)]
struct Ran {
    code: Option<i32>,
    out: String,
    err: String,
}

impl From<Output> for Ran {
    fn from(output: Output) -> Self {
        Self {
            code: output.status.code(),
            out: String::from_utf8(output.stdout).unwrap(),
            err: String::from_utf8(output.stderr).unwrap(),
        }
    }
}

impl Ran {
    #[track_caller]
    fn is(&self, code: i32, out: &str, err: &str) {
        assert_eq!((self.code, self.out.as_str(), self.err.as_str()), (Some(code), out, err));
    }

    /// Ended with code 2, no result, and exactly this message.
    #[track_caller]
    fn refused(&self, err: &str) {
        self.is(2, "", &format!("{err}\n"));
    }

    #[track_caller]
    fn gave(&self, out: &str) {
        assert_eq!((self.code, self.out.as_str()), (Some(0), out), "{}", self.err);
    }
}

/// Summaries end in a time that differs: `... rows in 0.00 s` and perhaps a rate.
fn steady(err: &str) -> String {
    let line = |l: &str| match l.split_once(" in ") {
        Some((rows, rest)) if rows.ends_with("rows") || rows.ends_with("row") => {
            assert!(rest.split(' ').nth(1).is_some_and(|s| s.starts_with('s')), "{l}");
            rows.to_string()
        }
        _ => l.to_string(),
    };
    err.lines().map(line).collect::<Vec<_>>().join("\n")
}

#[test]
fn value_of_a_channel() {
    let dir = Dir::new();
    dir.put("s.toml", ONE_ARM);
    for reading in ["1.2075", "1.2075 mV", "1.2075mV", "1207.5 uV", "0.0012075 V"] {
        let ran = dir.run(&["value", "s.toml", "g", reading]);
        let (number, unit) = ran.out.trim_end().split_once(' ').unwrap();
        assert_eq!((ran.code, unit), (Some(0), "microstrain"));
        assert!((number.parse::<f64>().unwrap() - 936.651).abs() < 0.0005, "{reading}: {number}");
        assert_eq!(
            ran.err,
            "assumed bridge.resistances: 350 ohm in all four arms, the gauge's\nassumed zero: the bridge as stated is at zero strain\n"
        );
    }
    // several readings, also below zero, and flags behind them
    dir.put("d.toml", format!("{ONE_ARM}decimals = 3\n"));
    let ran = dir.run(&["value", "d.toml", "g", "1.2075", "0", "-0", "--strict"]);
    ran.gave("936.651 microstrain\n0.000 microstrain\n0.000 microstrain\n");
    let ran = dir.run(&["value", "d.toml", "g", "-1.2075", "-1.2075 mV", "-.5mV", "--strict"]);
    assert_eq!((ran.code, ran.out.lines().count()), (Some(0), 3), "{}", ran.err);
    assert!(ran.out.lines().all(|l| l.starts_with('-')), "{}", ran.out);
    // a word instead of a number
    dir.run(&["value", "d.toml", "g", "2000"]).gave("open\n");
    let ran = dir.run(&["value", "d.toml", "g", "2000", "1.2075", "--strict"]);
    assert_eq!((ran.code, ran.out.as_str()), (Some(1), "open\n936.651 microstrain\n"));
    // a zero beside it: as a reading or as output over supply
    let typed = |zero: &str| dir.run(&["value", "d.toml", "g", "1.2075", "--with", zero]).out;
    assert_eq!(typed("zero=1.2075mV"), "0.000 microstrain\n");
    assert_eq!(typed("zero=0.483 mV/V"), "0.000 microstrain\n");
    assert_eq!(typed("zero=0"), "936.651 microstrain\n");
    let ran = dir.run(&["value", "d.toml", "g", "1.2075", "--with", "zero=0"]);
    assert!(!ran.err.contains("zero"), "a zero that is given is not assumed: {}", ran.err);
}

#[test]
fn value_typed_out() {
    let dir = Dir::new();
    let pt100 = ["platinum.standard=IEC 60751", "platinum.r0=100 ohm"];
    let ran = dir.run(&["value", "109.73 ohm", pt100[0], pt100[1]]);
    let number: f64 = ran.out.strip_suffix(" degC\n").unwrap().parse().unwrap();
    // 0.005 ohm at 0.389 ohm/K
    assert!(ran.code == Some(0) && (number - 25.0).abs() < 0.013, "{number}");
    assert_eq!(ran.err, "assumed leads: none, the reading is the element's resistance\nassumed output: degC\n");
    let ran = dir.run(&[
        "value",
        "110.43 ohm",
        pt100[0],
        pt100[1],
        "leads={ wires = 2, each = \"0.35 ohm\" }",
        "output=K",
        "decimals=1",
    ]);
    ran.is(0, "298.1 K\n", "");
    let gauge = [
        "value",
        "1.2075 mV",
        "gauge.resistance=350 ohm",
        "gauge.gauge_factor=2.08",
        "bridge.arms=[\"e\", \"0\", \"0\", \"0\"]",
        "bridge.supply=2.5 V",
        "leads.wires=3",
        "leads.each=2.6 ohm",
        "decimals=3",
    ];
    dir.run(&gauge).gave("936.651 microstrain\n");
    dir.run(&["value", "0.5", "reads="]).gave("0.5\n");
    dir.run(&["value", "-40 degF", "output=degC", "decimals=2"]).gave("-40.00 degC\n");
    // mistakes, without a place that nobody has seen
    dir.run(&["value", "109.73", pt100[0], pt100[1]])
        .refused("value '109.73' has no unit: write it behind the number, as in \"109.73 ohm\"");
    dir.run(&["value", "109.73 ohm", pt100[0], "platinum.r0=100"])
        .refused("platinum.r0: value '100' has no unit; expected a resistance (ohm, kohm, Mohm)");
    dir.run(&["value", "109.73 ohm", pt100[0], "platinum.ro=100 ohm"])
        .refused("unknown key 'platinum.ro'; did you mean 'r0'?");
    dir.run(&["value", "109.73 ohn", pt100[0], pt100[1]]).refused(
        "value '109.73 ohn': unknown unit 'ohn'; expected a number with its unit, as a recording has it; did you mean 'ohm'? (or say reads=...)",
    );
    dir.run(&["value", "109.73 ohm", "platinum"])
        .refused("'platinum': expected key=value, as in platinum.r0=\"100 ohm\"");
    dir.run(&["value", "109.73 ohm"]).refused(
        "value '109.73 ohm': what was it read from? give keys of a sheet, as in platinum.standard=\"IEC 60751\" platinum.r0=\"100 ohm\"",
    );
    dir.run(&["value", "109.73 ohm", "pl atinum=1"]).refused("'pl atinum=1': 'pl atinum' is no key of a sheet");
}

const FOOTBRIDGE: &str = "[recording]\ntime = \"time\"\nkeep = [\"load step\"]\nmissing = [\"-9999\"]\n\
    [channel.g]\ncolumn = \"CH01\"\nreads = \"mV/V\"\ndecimals = 1\n\
    gauge = { resistance = \"350 ohm\", gauge_factor = 2, slope = \"1 %/100K\" }\nbridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }\n\
    thermal_output = { coefficients = [0, 10], in = \"degC\", gauge_factor = 2 }\ntemperature = \"deck\"\nzero = { rows = 2 }\n\
    [channel.deck]\ncolumn = \"R\"\nreads = \"ohm\"\nplatinum = { standard = \"IEC 60751\", r0 = \"100 ohm\" }\nleads = { wires = 4 }\n\
    [channel.h]\ncolumn = \"mV\"\nreads = \"mV\"\ngauge = { resistance = \"350 ohm\", gauge_factor = 2 }\n\
    bridge = { arms = [\"e\", \"0\", \"0\", \"0\"], supply = { column = \"V\", reads = \"V\" } }\n\
    [channel.s]\nof = \"h\"\nmaterial = { modulus = \"200 GPa\" }\n[channel.sum]\ncombine = { g = 1, h = 1 }\n";

#[test]
fn side_inputs() {
    let dir = Dir::new();
    dir.put("s.toml", FOOTBRIDGE);
    let err = |args: &[&str]| {
        let ran = dir.run(args);
        assert_eq!((ran.code, ran.out.as_str()), (Some(2), ""), "{args:?}");
        ran.err.trim_end().to_string()
    };
    assert_eq!(err(&["value", "s.toml", "g", "1"]), "channel 'g' needs a temperature: give it by --with deck=21degC");
    assert_eq!(
        err(&["value", "s.toml", "g", "1", "--with", "deck=21degC"]),
        "channel 'g' needs the temperature at zero: give it by --with zero_temperature=21degC"
    );
    assert_eq!(err(&["value", "s.toml", "h", "1"]), "channel 'h' needs its supply: give it by --with V=2.5V");
    assert_eq!(
        err(&["value", "s.toml", "h", "1", "--with", "U=2.5V"]),
        "--with U: channel 'h' has no such side input; it has V, zero, zero_temperature"
    );
    assert_eq!(
        err(&["value", "s.toml", "deck", "1", "--with", "zero=1"]),
        "--with zero: channel 'deck' has no bridge with a zero"
    );
    assert_eq!(err(&["value", "s.toml", "h", "1", "--with", "V"]), "--with V: expected NAME=VALUE, as in deck=21degC");
    assert_eq!(
        err(&["value", "s.toml", "h", "1", "--with", "V=2.5 ohm"]),
        "--with V: value '2.5 ohm': 'ohm' is the unit of a resistance (ohm, kohm, Mohm); expected a voltage (V, mV, uV)"
    );
    assert_eq!(
        err(&["value", "s.toml", "h", "1", "--with", "V=2.5", "--with", "zero=0.1"]),
        "--with zero: the supply of channel 'h' varies, so give output over supply, as in zero=0.03mV/V"
    );
    assert_eq!(
        err(&["value", "s.toml", "sum", "1"]),
        "channel 'sum' combines several channels: compute them one by one"
    );
    assert_eq!(
        err(&["value", "s.toml", "x", "1"]),
        "there is no channel 'x'; those that one reading gives are g, deck, h, s"
    );
    assert_eq!(
        err(&["value", "s.toml", "dek", "1"]),
        "there is no channel 'dek'; those that one reading gives are g, deck, h, s; did you mean 'deck'?"
    );
    assert_eq!(err(&["value", "s.toml", "g"]), "a reading for channel 'g' is missing");
    assert_eq!(err(&["value", "s.toml"]), "a channel and a reading are missing; the sheet has g, deck, h, s");
    assert_eq!(err(&["value", "no.toml", "g", "1"]), "no.toml: cannot read: no such file or directory");
    assert_eq!(
        err(&["value", "s.toml", "deck", "abc"]),
        "value 'abc' does not begin with a number; expected a resistance (ohm, kohm, Mohm)"
    );
    // 4 mV at 2 V is 2 mV/V: x = 4y/(1 − 2y) = 8.0321...e-3, F = 2: 4016.06 microstrain, and at 200 GPa 803.2 MPa
    let out = |args: &[&str]| dir.run(args).out;
    let h = out(&["value", "s.toml", "h", "4", "--with", "V=2 V"]);
    assert_eq!(h, out(&["value", "s.toml", "h", "4", "--with", "V=2"]));
    assert_eq!(h, out(&["value", "s.toml", "h", "4", "--with", "V=2000 mV"]));
    assert!(h.starts_with("4016.064257"), "{h}");
    let s = out(&["value", "s.toml", "s", "4", "--with", "V=2"]);
    assert!(s.starts_with("803.21285") && s.ends_with(" MPa\n"), "{s}");
    // F(T) = 2 [1 + 1e-4 (T − 24)] and 10 microstrain/K: at 34 °C, zero at 24 °C, e = −100/1.001 for no signal
    let g = out(&[
        "value",
        "s.toml",
        "g",
        "0",
        "--with",
        "deck=34 degC",
        "--with",
        "zero_temperature=24",
        "--with",
        "zero=0",
    ]);
    assert_eq!(g, "-99.9 microstrain\n");
}

#[test]
fn expect_is_the_inverse_of_value() {
    let dir = Dir::new();
    dir.put("s.toml", FOOTBRIDGE.replace("decimals = 1\n", ""));
    dir.put("one.toml", ONE_ARM);
    let counts = "[channel.c]\ncolumn = 1\nreads = \"count\"\nthermistor = { r25 = \"10 kohm\", beta = \"3950 K\" }\n\
        converter = { bits = 12, full_scale = \"supply\", coding = \"unsigned\" }\ncircuit = { divider = \"10 kohm\", sensor = \"low\" }\n";
    dir.put("c.toml", counts);
    let with: &[&str] = &["--with", "deck=30", "--with", "zero_temperature=20", "--with", "zero=0.1"];
    let cases: [(&str, &str, &[&str], &[f64]); 5] = [
        ("one.toml", "g", &[], &[936.651, -900.0, 0.0, 45_000.0]),
        ("s.toml", "g", with, &[500.0, -1200.5]),
        ("s.toml", "s", &["--with", "V=2.5"], &[180.0, -0.25]),
        ("s.toml", "deck", &[], &[-40.0, 21.5, 600.0]),
        ("c.toml", "c", &[], &[-20.0, 25.0, 90.0]),
    ];
    for (sheet, channel, side, values) in cases {
        for value in values {
            let text = value.to_string();
            let forward = dir.run(&[&["expect", sheet, channel, &text], side].concat());
            assert_eq!(forward.code, Some(0), "{}", forward.err);
            let back = dir.run(&[&["value", sheet, channel, forward.out.trim_end()], side].concat());
            let got: f64 = back.out.split(' ').next().unwrap().parse().unwrap();
            assert!(
                (got - value).abs() < 1e-8,
                "{sheet} {channel}: {value} became {} became {}",
                forward.out,
                back.out
            );
        }
    }
    // 936.651 microstrain is 1.2075 mV, to its digits
    let ran = dir.run(&["expect", "one.toml", "g", "936.651"]);
    let reading: f64 = ran.out.strip_suffix(" mV\n").unwrap().parse().unwrap();
    assert!((reading - 1.2075).abs() < 1e-6, "{reading}");
    assert_eq!(ran.err.lines().count(), 2, "assumptions are told: {}", ran.err);
    // 25 °C is R25, half the supply, half of 4096 codes, in whatever unit
    dir.run(&["expect", "c.toml", "c", "25", "298.15 K"]).gave("2048 count\n2048 count\n");
    dir.run(&["expect", "c.toml", "c", "21 ohm"]).refused(
        "value '21 ohm': 'ohm' is the unit of a resistance (ohm, kohm, Mohm); expected a temperature (degC, K, degF)",
    );
    let ran = dir.run(&["expect", "c.toml", "c", "900"]);
    assert_eq!(
        (ran.code, ran.err.lines().last()),
        (Some(2), Some("value '900' is beyond the range of channel 'c': -50 to 150 degC"))
    );
}

/// Quarter bridges with gauge factor 2 on the three grids of a rosette; 250 microstrain at 0° is warmed away.
const ROSETTE: &str = "[common.grid]\nreads = \"mV/V\"\ngauge = { resistance = \"350 ohm\", gauge_factor = 2 }\n\
    bridge = { arms = [\"e\", \"0\", \"0\", \"0\"], supply = \"2 V\" }\n\
    [channel.a]\nlike = \"grid\"\ncolumn = \"A\"\nzero = { at = \"0 mV/V\", temperature = \"20 degC\" }\n\
    thermal_output = { points = [[20, 0], [70, 250]] }\ntemperature = \"deck\"\n\
    [channel.b]\nlike = \"grid\"\ncolumn = \"B\"\nreads = \"mV\"\n[channel.c]\nlike = \"grid\"\ncolumn = \"C\"\n\
    [channel.deck]\ncolumn = \"T\"\nreads = \"degC\"\n\
    [rosette.R1]\ngrids = { a = \"a\", b = \"b\", c = \"c\" }\nangles = [\"0 deg\", \"45 deg\", \"90 deg\"]\n\
    give = [\"principal-max\"]\n";

#[test]
fn expect_of_a_rosette_is_one_signal_for_each_grid() {
    let dir = Dir::new();
    dir.put("s.toml", ROSETTE);
    let signals = |args: &[&str]| {
        let ran = dir.run(&[&["expect", "s.toml", "R1"], args].concat());
        assert_eq!(ran.code, Some(0), "{}", ran.err);
        let signal = |line: &str| {
            let (name, rest) = line.split_once(": ").unwrap();
            let (number, unit) = rest.split_once(' ').unwrap();
            (name.to_string(), number.parse::<f64>().unwrap(), unit.to_string())
        };
        ran.out.lines().map(signal).collect::<Vec<_>>()
    };
    // pure shear of 1000 microstrain along 45°: the outer grids see nothing; U/Us = F e/(4 + 2 F e), on paper
    let quarter = |e: f64| 2.0 * e / (4.0 + 4.0 * e) * 1e3;
    for (args, want) in [
        (&["--with", "deck=20", "1000", "-1000 microstrain", "45 deg"][..], [0.0, quarter(1e-3), 0.0]),
        // the warm grid's thermal output comes on top of nothing
        (&["--with", "deck=70", "1000", "-0.1 %", "45"], [quarter(250e-6), quarter(1e-3), 0.0]),
        // a quarter of π
        (&["--with", "deck=20", "1000", "-1000", "0.7853981633974483 rad"], [0.0, quarter(1e-3), 0.0]),
        // all along x, and nothing across
        (&["--with", "deck=20", "800", "0", "0"], [quarter(800e-6), quarter(400e-6), 0.0]),
    ] {
        let got = signals(args);
        let names: Vec<(&str, &str)> = got.iter().map(|(n, _, u)| (n.as_str(), u.as_str())).collect();
        assert_eq!(names, [("a", "mV/V"), ("b", "mV"), ("c", "mV/V")]);
        // grid b is read in mV, at 2 V
        for ((name, got, _), (want, scale)) in got.iter().zip(want.into_iter().zip([1.0, 2.0, 1.0])) {
            assert!((got - want * scale).abs() < 1e-13, "{args:?} {name}: {got} for {}", want * scale);
        }
    }
    let err = |args: &[&str]| dir.run(&[&["expect", "s.toml"], args].concat()).err;
    // what is assumed is said once, not for each grid
    let notes = err(&["R1", "1000", "0", "0", "--with", "deck=20"]);
    let mut lines: Vec<&str> = notes.lines().collect();
    lines.sort_unstable();
    let all = lines.len();
    lines.dedup();
    assert_eq!((all, lines.is_empty()), (lines.len(), false), "{notes}");
    assert!(err(&["R1", "1000"]).starts_with("'R1' is a rosette: give the larger principal strain, the smaller, "));
    assert!(
        err(&["R1", "1000", "0", "0"]).ends_with("channel 'a' needs a temperature: give it by --with deck=21degC\n")
    );
    assert!(
        err(&["R1", "1000", "0", "0", "--with", "dek=2"]).contains("--with dek: channel 'a' has no such side input")
    );
    assert!(err(&["R1", "1000", "0", "2 mm", "--with", "deck=20"]).contains("expected an angle"));
    assert!(err(&["R1", "-200", "800", "30", "--with", "deck=20"]).contains("the larger principal strain comes first"));
    assert!(err(&["R1 principal-max", "1000"]).contains("combines several grids"));
    let beyond = err(&["R1", "300000", "0", "90", "--with", "deck=20"]);
    assert!(
        beyond.contains(
            "value '150000.000 microstrain' is beyond the range of channel 'b': -100000 to 100000 microstrain"
        ),
        "{beyond}"
    );
}

const RECORDING: &str = "time,load step,CH01,R,mV,V\n\
    2026-05-09T06:30:00Z,empty,0.1,107.79,1,2\n\
    2026-05-09T06:30:01Z,empty,0.1,,1,2\n\
    2026-05-09T06:30:02Z,\"lorry, mid\",-9999,107.79,ERR,2\n\
    2026-05-09T06:30:03Z,lorry,0.6,107.79,4,\n\
    2026-05-09T06:30:04Z,lorry,0.6,107.79,1e9,2\n";

/// By hand: 107.79 ohm is 19.991 °C (IEC 60751:2008, table: 107.79 ohm at 20 °C, 107.7935 by its equation, 0.3897 ohm/K);
/// 1 mV at 2 V is y = 0.5 mV/V, x = 4y/(1 − 2y), x/2 = 1001.0 microstrain, at 200 GPa 200.2 MPa;
/// (x(0.6 mV/V) − x(0.1 mV/V))/F(19.991 °C) with F = 2 (1 − 4.009e-4) = 1001.8 microstrain.
const RESULT: &str = "time,load step,g (microstrain),deck (degC),h (microstrain),s (MPa),sum (microstrain),flags\n\
    2026-05-09T06:30:00Z,empty,0.0,20.0,1001.0,200.2,1001.0,\n\
    2026-05-09T06:30:01Z,empty,0.0,,1001.0,200.2,1001.0,\n\
    2026-05-09T06:30:02Z,\"lorry, mid\",,20.0,,,,g:missing h:unreadable s:unreadable sum:missing\n\
    2026-05-09T06:30:03Z,lorry,1001.8,20.0,,,,h:missing s:missing sum:missing\n\
    2026-05-09T06:30:04Z,lorry,1001.8,20.0,,,,h:open s:open sum:open\n";

const SUMMARY: &str = "r.csv: separator ',', decimal '.' (found); time from column 'time' (stated): moments, placed on UTC\n\
    r.csv:4:5: value 'ERR': not a number\n\
    g: zero 0.100000 mV/V, mean of 2 readings in the first 2 rows, at 19.991 °C\n\
    r.csv: 5 rows\n  \
      g     4 values, min 0.0, mean 500.9, max 1001.8 microstrain; 1 missing\n  \
      deck  4 values, min 20.0, mean 20.0, max 20.0 degC; 1 row between samples\n  \
      h     2 values, min 1001.0, mean 1001.0, max 1001.0 microstrain; 1 missing; 1 unreadable; 1 open\n  \
      s     2 values, min 200.2, mean 200.2, max 200.2 MPa; 1 missing; 1 unreadable; 1 open\n  \
      sum   2 values, min 1001.0, mean 1001.0, max 1001.0 microstrain; 2 missing; 1 open";

fn footbridge() -> String {
    let one = |t: &str| {
        t.replace("[channel.deck]", "[channel.deck]\ndecimals = 1").replace("[channel.h]", "[channel.h]\ndecimals = 1")
    };
    one(FOOTBRIDGE)
        .replace("[channel.s]", "[channel.s]\ndecimals = 1")
        .replace("[channel.sum]", "[channel.sum]\ndecimals = 1")
}

#[test]
fn convert_to_standard_output_and_file() {
    let dir = Dir::new();
    dir.put("s.toml", footbridge());
    dir.put("r.csv", RECORDING);
    let ran = dir.run(&["convert", "s.toml", "r.csv"]);
    ran.gave(RESULT);
    assert_eq!(steady(&ran.err), SUMMARY);
    dir.run(&["convert", "s.toml", "r.csv", "--quiet"]).is(0, RESULT, "");
    dir.run(&["convert", "s.toml", "r.csv", "-q", "-o", "-"]).is(0, RESULT, "");
    // to a file, alone in its directory
    let ran = dir.run(&["convert", "s.toml", "r.csv", "-o", "out.csv"]);
    assert_eq!((ran.code, ran.out.as_str(), steady(&ran.err).as_str()), (Some(0), "", SUMMARY));
    assert_eq!(fs::read_to_string(dir.path("out.csv")).unwrap(), RESULT);
    assert_eq!(dir.names(), ["out.csv", "out.csv.trace", "r.csv", "s.toml"]);
    // --strict: the result is there, the answer is no; the rest of the deck is no flag
    let ran = dir.run(&["convert", "s.toml", "r.csv", "--strict", "-q", "-o", "strict.csv"]);
    ran.is(1, "", "r.csv: 10 flagged readings (--strict)\n");
    assert_eq!(fs::read_to_string(dir.path("strict.csv")).unwrap(), RESULT);
    let clean: String = RECORDING.lines().take(3).map(|l| format!("{l}\n")).collect::<String>()
        + "2026-05-09T06:30:02Z,empty,0.1,107.79,1,2\n";
    dir.put("clean.csv", clean);
    assert_eq!(dir.run(&["convert", "s.toml", "clean.csv", "--strict", "-q"]).code, Some(0));
}

#[test]
fn any_piece_of_a_pipe_gives_the_same() {
    let dir = Dir::new();
    dir.put("s.toml", footbridge());
    for piece in [1, 7, 4096] {
        let ran = dir.pipe(&["convert", "s.toml", "-"], RECORDING.as_bytes(), piece);
        ran.gave(RESULT);
        assert_eq!(steady(&ran.err), SUMMARY.replace("r.csv", "standard input"), "pieces of {piece}");
    }
    // and the demo, with rows for its window of time
    let sheet = support::read("data/demo/footbridge.toml")
        .replace("from = \"2026-05-09T06:30:05.000Z\", to = \"2026-05-09T06:30:25.000Z\"", "rows = 1000");
    dir.put("demo.toml", sheet);
    let recording = support::read("data/demo/footbridge.csv");
    let head: String = recording.lines().take(3000).map(|l| format!("{l}\n")).collect();
    dir.put("demo.csv", &head);
    let file = dir.run(&["convert", "demo.toml", "demo.csv"]);
    assert_eq!(file.out.lines().count(), 3000);
    for piece in [1, 1013] {
        dir.pipe(&["convert", "demo.toml", "-"], head.as_bytes(), piece).gave(&file.out);
    }
}

#[test]
fn a_pipe_answers_while_it_runs() {
    let dir = Dir::new();
    dir.put("s.toml", format!("[recording]\nnames_line = 1\nfirst_line = 2\n{PLAIN}"));
    let mut child = dir.start(&["convert", "s.toml", "-"]);
    let mut stdin = child.stdin.take().unwrap();
    let stdout = BufReader::new(child.stdout.take().unwrap());
    let (send, answers) = mpsc::channel();
    let reader = std::thread::spawn(move || stdout.lines().for_each(|line| send.send(line.unwrap()).unwrap()));
    for (input, answer) in [("CH01\n1\n", &["u (mV),flags", "1,"][..]), ("2\n", &["2,"]), ("3\n", &["3,"])] {
        stdin.write_all(input.as_bytes()).unwrap();
        stdin.flush().unwrap();
        for want in answer {
            let got = answers.recv_timeout(Duration::from_secs(30));
            if got.is_err() {
                child.kill().unwrap();
            }
            assert_eq!(got.as_deref(), Ok(*want), "while the pipe is open");
        }
    }
    drop(stdin);
    reader.join().unwrap();
    assert_eq!(child.wait().unwrap().code(), Some(0));
}

#[test]
fn a_reader_that_goes_away_is_no_failure() {
    let dir = Dir::new();
    dir.put("s.toml", PLAIN);
    let rows: String = (0..200_000).map(|i| format!("{i}\n")).collect();
    dir.put("r.csv", format!("CH01\n{rows}"));
    let mut child = dir.start(&["convert", "s.toml", "r.csv"]);
    let mut first = [0; 64];
    child.stdout.take().unwrap().read_exact(&mut first).unwrap();
    // the pipe is closed here
    let output = child.wait_with_output().unwrap();
    assert_eq!((output.status.code(), String::from_utf8(output.stderr).unwrap().as_str()), (Some(0), ""));
    assert!(first.starts_with(b"u (mV),flags\n0,\n"));
    for args in [&["evidence"][..], &["evidence", "--json"], &["describe", "s.toml"], &["value", "s.toml", "u", "1"]] {
        let mut child = dir.start(args);
        drop(child.stdout.take());
        let code = child.wait_with_output().unwrap().status.code();
        assert_eq!(code, Some(0), "{args:?}");
    }
}

#[test]
fn a_result_appears_whole_or_not_at_all() {
    let dir = Dir::new();
    dir.put("s.toml", PLAIN);
    // an error leaves no file, and an old one as it was
    dir.put("short.csv", "CH01\n1\n2\n\"open quote\n");
    let ran = dir.run(&["convert", "s.toml", "short.csv", "-o", "out.csv"]);
    assert_eq!(
        (ran.code, ran.err.as_str()),
        (Some(2), "short.csv:4: a quoted cell begins in this line and is not closed\n")
    );
    assert_eq!(dir.names(), ["s.toml", "short.csv"]);
    dir.put("out.csv", "the old result\n");
    assert_eq!(dir.run(&["convert", "s.toml", "short.csv", "-o", "out.csv"]).code, Some(2));
    dir.put("wrong.toml", PLAIN.replace("CH01", "CH02"));
    dir.run(&["convert", "wrong.toml", "short.csv", "-o", "out.csv"])
        .refused("short.csv:1: value 'CH02': no column has this name; the nearest is 'CH01'");
    assert_eq!(fs::read_to_string(dir.path("out.csv")).unwrap(), "the old result\n");
    assert_eq!(dir.names(), ["out.csv", "s.toml", "short.csv", "wrong.toml"]);
    // killed in the middle: fed through a pipe that stays open
    let mut child = dir.start(&["convert", "s.toml", "-", "-o", "out.csv"]);
    let mut stdin = child.stdin.take().unwrap();
    let rows: String = (0..100_000).map(|i| format!("{i}\n")).collect();
    stdin.write_all(format!("CH01\n{rows}").as_bytes()).unwrap();
    stdin.flush().unwrap();
    // wait until it has begun to write beside the target
    let patience = Instant::now() + Duration::from_secs(30);
    let part = || dir.names().into_iter().find(|n| n.ends_with(".part"));
    while part().is_none_or(|p| fs::metadata(dir.path(&p)).unwrap().len() == 0) {
        assert!(Instant::now() < patience, "{:?}", dir.names());
        std::thread::sleep(Duration::from_millis(5));
    }
    child.kill().unwrap();
    child.wait().unwrap();
    assert_eq!(fs::read_to_string(dir.path("out.csv")).unwrap(), "the old result\n");
    // the next run replaces it whole
    dir.put("good.csv", "CH01\n1\n");
    dir.run(&["convert", "s.toml", "good.csv", "-q", "-o", "out.csv"]).is(0, "", "");
    assert_eq!(fs::read_to_string(dir.path("out.csv")).unwrap(), "u (mV),flags\n1,\n");
    // the sources are never replaced, by whatever path
    let other = Path::new(".").join("good.csv");
    dir.run(&["convert", "s.toml", "good.csv", "-o", other.to_str().unwrap()])
        .refused("good.csv: the result would replace the recording itself; give another -o");
    dir.run(&["convert", "s.toml", "good.csv", "-o", "s.toml"])
        .refused("s.toml: the result would replace the sheet itself; give another -o");
    dir.run(&["convert", "s.toml", "good.csv", "-o", "no/out.csv"])
        .refused("no/out.csv: cannot write: no such file or directory");
    dir.run(&["convert", "s.toml", "good.csv", "-o", "."]).refused(".: cannot write: it is a directory");
}

#[test]
fn shapes_of_recordings() {
    let dir = Dir::new();
    let go = |sheet: &str, recording: &[u8]| {
        dir.put("s.toml", sheet);
        dir.put("r.csv", recording);
        dir.run(&["convert", "s.toml", "r.csv"])
    };
    let want = "time,u (mV),flags\n0,1.5,\n0.5,-2.25,\n";
    for text in [
        "time,CH01\n0,1.5\n0.5,-2.25\n",
        "time,CH01\r\n0,1.5\r\n0.5,-2.25\r\n",
        "\u{feff}time,CH01\n0,1.5\n0.5,-2.25",
        "time\tCH01\n0\t1.5\n0.5\t-2.25\n",
        "# run 3\ntime,CH01\n# a remark\n0,1.5\n\n0.5,-2.25\n",
        "time,CH01\ns,mV\n0,1.5\n0.5,-2.25\n",
        "time , CH01\n[s],[mV]\n 0 , 1.5 \n 0.5 ,-2.25\n",
        "\"time\",\"CH01\"\n\"0\",\"1.5\"\n\"0.5\",\"-2.25\"\n",
    ] {
        let ran = go(PLAIN, text.as_bytes());
        assert_eq!((ran.code, ran.out.as_str()), (Some(0), want), "{text:?}: {}", ran.err);
    }
    // semicolon and decimal comma: the time stays as written, the results have points
    let ran = go(PLAIN, b"time;CH01\n0,0;1,5\n0,5;-2,25\n");
    ran.gave("time,u (mV),flags\n\"0,0\",1.5,\n\"0,5\",-2.25,\n");
    go("[channel.n]\ncolumn = \"CH01\"\nreads = \"\"\n", b"CH01\n1.5\n").gave("n,flags\n1.5,\n");
    // no time, an interval, several time columns
    go(PLAIN, b"CH01\n1.5\n-2.25\n").gave("u (mV),flags\n1.5,\n-2.25,\n");
    let sheet = format!("[recording]\ninterval = \"0.5 s\"\n{PLAIN}");
    go(&sheet, b"CH01\n1.5\n-2.25\n").gave("time (s),u (mV),flags\n0,1.5,\n0.5,-2.25,\n");
    let sheet = format!("[recording]\ntime = [\"day\", \"clock\"]\nkeep = \"CH01\"\n{PLAIN}");
    go(&sheet, b"day,clock,CH01\n2026-05-09,06:30:00,1.50\n")
        .gave("day clock,CH01,u (mV),flags\n2026-05-09 06:30:00,1.50,1.5,\n");
    // sentinels, words, numbers of columns, no names
    let sheet = format!(
        "[recording]\nnames_line = 0\nmissing = [-9999, \"---\"]\nsaturated = \"OVR\"\n{}",
        PLAIN.replace("\"CH01\"", "2")
    );
    let ran = go(&sheet, b"1,1.5\n2,-9999\n3,---\n4,OVR\n5,what\n6,\n7\n8,-9999.0\n");
    ran.gave(
        "u (mV),flags\n1.5,\n,u:missing\n,u:missing\n,u:saturated\n,u:unreadable\n,u:missing\n,u:missing\n,u:missing\n",
    );
    assert_eq!(
        steady(&ran.err),
        "r.csv: separator ',', decimal '.' (found)\n\
         r.csv: no time column was found: recording.time names one, recording.interval stands in for one\n\
         r.csv:5:2: value 'what': not a number\nr.csv:7: 1 row with fewer cells than there are columns: the rest is missing\n\
         r.csv: 8 rows\n  u  1 value, min 1.5000, mean 1.5000, max 1.5000 mV; 5 missing; 1 unreadable; 1 saturated"
    );
    // nothing, names alone, one row
    go(PLAIN, b"").refused("r.csv: the file is empty: it has no names and no rows");
    go(PLAIN, b"\xef\xbb\xbf\r\n").refused("r.csv: the file is empty: it has no names and no rows");
    let ran = go(PLAIN, b"time,CH01\n");
    assert_eq!(
        (ran.code, ran.out.as_str(), steady(&ran.err).as_str()),
        (
            Some(0),
            "time,u (mV),flags\n",
            "r.csv: separator ',' (found), decimal '.' (assumed); time from column 'time' (found): no rows\nr.csv: 0 rows\n  u  0 values"
        )
    );
    let ran = go(PLAIN, b"time,CH01\n0,1");
    assert_eq!((ran.code, ran.out.as_str()), (Some(0), "time,u (mV),flags\n0,1,\n"));
    assert_eq!(
        steady(&ran.err),
        "r.csv: separator ',' (found), decimal '.' (assumed); time from column 'time' (found): seconds as given\nr.csv: 1 row\n  u  1 value, min 1.0000, mean 1.0000, max 1.0000 mV"
    );
    // no text at all
    let ran = go(PLAIN, &[0, 1, 2, 255].repeat(500));
    assert_eq!((ran.code, ran.out.as_str()), (Some(2), ""));
    assert!(ran.err.starts_with("r.csv: not a text file"), "{}", ran.err);
}

#[test]
fn columns_and_units_that_do_not_fit() {
    let dir = Dir::new();
    let go = |sheet: &str, recording: &str| {
        dir.put("s.toml", sheet);
        dir.put("r.csv", recording);
        dir.run(&["convert", "s.toml", "r.csv"])
    };
    go(PLAIN, "time,CH1,CH11\n0,1,1\n").refused("r.csv:1: value 'CH01': no column has this name; the nearest is 'CH1'");
    go(PLAIN, "time,CH01,CH01\n0,1,1\n")
        .refused("r.csv:1: value 'CH01': columns 2 and 3 have this name; pick one by its number");
    go(&PLAIN.replace("\"CH01\"", "5"), "time,CH01\n0,1\n")
        .refused("r.csv:1: value '5': there are 2 columns, counted from 1");
    let units = "time,CH01\ns,V\n0,1\n";
    go(PLAIN, units)
        .refused("r.csv:2:2: value 'V': the unit of column 'CH01', but channel 'u' reads mV; one of the two is wrong");
    let supply = ONE_ARM.replace("\"2.500 V\"", "{ column = \"V\", reads = \"V\" }");
    // also where the reading is passed on in another unit, and for a supply
    go(&supply, "time,CH01 (mV),V [mV]\n0,1,2500\n")
        .refused("r.csv:1:3: value 'mV': the unit of column 'V', but channel 'g' reads V; one of the two is wrong");
    // a unit behind the name is a unit of the file, and the name alone finds it; the whole text comes first
    for header in
        ["time,CH01 (mV)", "time (s),CH01 [mV]", "time,CH01(mV)", "time,CH01 (left)\ns,mV", "time,CH01 (V),CH01"]
    {
        let column =
            if header.contains("left") { PLAIN.replace("\"CH01\"", "\"CH01 (left)\"") } else { PLAIN.to_string() };
        let cells = if header.ends_with("CH01") { "0,7,1" } else { "0,1" };
        let time = if header.contains("time (s)") { "time (s)" } else { "time" };
        go(&column, &format!("{header}\n{cells}\n")).gave(&format!("{time},u (mV),flags\n0,1,\n"));
    }
    go(PLAIN, "time,CH01 (V)\n0,1\n")
        .refused("r.csv:1:2: value 'V': the unit of column 'CH01', but channel 'u' reads mV; one of the two is wrong");
    go(PLAIN, "time,CH01 (V),CH01 (mV)\n0,1,1\n")
        .refused("r.csv:1: value 'CH01': columns 2 and 3 have this name; pick one by its number");
    go(PLAIN, "time,CH01 (left),CH01 (right)\n0,1,1\n")
        .refused("r.csv:1: value 'CH01': no column has this name; the nearest is 'CH01 (left)'");
    // the table of one run is the recording of the next
    let next = "[channel.w]\ncolumn = \"u\"\nreads = \"mV\"\noutput = \"V\"\n[channel.x]\ncolumn = \"shear\"\nreads = \"shear microstrain\"\n";
    go(next, "time,u (mV),shear (shear microstrain),flags\n0,1,5,\n")
        .gave("time,w (V),x (shear microstrain),flags\n0,0.001,5,\n");
    let kilo = "[channel.p]\ncolumn = \"CH01\"\nreads = \"kPa\"\noutput = \"MPa\"\n";
    go(kilo, "time,CH01\ns,kPa\n0,1\n").gave("time,p (MPa),flags\n0,0.001,\n");
    go(kilo, "time,CH01\ns,Pa\n0,1\n").refused(
        "r.csv:2:2: value 'Pa': the unit of column 'CH01', but channel 'p' reads kPa; one of the two is wrong",
    );
    go(&supply, "time,CH01,V\ns,mV,mV\n0,1,2500\n")
        .refused("r.csv:2:3: value 'mV': the unit of column 'V', but channel 'g' reads V; one of the two is wrong");
    // a spelling that nobody knows contradicts nothing, but is told
    let ran = go(&format!("[recording]\nnames_line = 1\nunits_line = 2\n{PLAIN}"), "time,CH01\ns,mVolts\n0,1\n");
    ran.gave("time,u (mV),flags\n0,1,\n");
    assert!(
        ran.err.contains(
            "\nr.csv:2:2: value 'mVolts': the unit of column 'CH01' is not known here, and was not compared with mV\n"
        ),
        "{}",
        ran.err
    );
    let stated = format!("[recording]\nnames_line = 1\nunits_line = 2\n{PLAIN}");
    let ran = go(&stated, "time,CH01\ns,millivolts\n0,1\n");
    assert_eq!((ran.code, steady(&ran.err).lines().count()), (Some(0), 3), "{}", ran.err);
}

#[test]
fn time_where_it_is_needed() {
    let dir = Dir::new();
    let window = "zero = { from = \"2026-05-09T06:30:00Z\", to = \"2026-05-09T06:30:01Z\" }\n";
    dir.put("s.toml", format!("{ONE_ARM}decimals = 3\n{window}"));
    let rows = "time,CH01\n2026-05-09T06:30:00Z,1\n2026-05-09T06:30:01Z,3\n2026-05-09T06:30:02Z,2\n";
    dir.put("r.csv", rows);
    let ran = dir.run(&["convert", "s.toml", "r.csv"]);
    // the mean of 1 mV and 3 mV is zero
    assert!(ran.out.ends_with("2026-05-09T06:30:02Z,0.000,\n"), "{}", ran.out);
    dir.pipe(&["convert", "s.toml", "-"], rows.as_bytes(), 100).refused(
        "standard input: channel 'g' takes its zero from 2026-05-09T06:30:00Z to 2026-05-09T06:30:01Z, which needs a whole file: a pipe, or a file that is followed, is read only once",
    );
    dir.put("none.csv", "CH01\n1\n");
    dir.run(&["convert", "s.toml", "none.csv"]).refused(
        "none.csv: the sheet needs the time of each row, but there is no time column: name it in recording.time, or state recording.interval",
    );
    dir.put("seconds.csv", "time,CH01\n0,1\n");
    dir.run(&["convert", "s.toml", "seconds.csv"])
        .refused("s.toml:9:17: moment '2026-05-09T06:30:00Z': the time of the recording is a number of seconds; write it as \"12.5 s\" (recording seconds.csv)");
    dir.put("late.csv", rows.replace("06:30", "07:30"));
    dir.run(&["convert", "s.toml", "late.csv"]).refused(
        "s.toml:9:17: channel 'g': no zero, since no reading in the window from 2026-05-09T06:30:00Z to 2026-05-09T06:30:01Z can be converted (the recording has no row there) (recording late.csv)",
    );
    let change = "[[channel.g.change]]\nfrom = \"2026-05-09T06:30:01Z\"\ncolumn = \"CH02\"\n";
    let change = format!("{ONE_ARM}{change}{}", change.replace("01Z", "00Z").replace("CH02", "CH01"));
    dir.put("s.toml", change);
    dir.put("two.csv", "time,CH01,CH02\n2026-05-09T06:30:00Z,1,2\n");
    let ran = dir.run(&["convert", "s.toml", "two.csv"]);
    assert_eq!((ran.code, ran.out.as_str()), (Some(2), ""));
    let said = "s.toml:12:8: '2026-05-09T06:30:00Z' must come after '2026-05-09T06:30:01Z'\n";
    assert!(ran.err.starts_with(said), "{}", ran.err);
    // moments that only the recording's own form explains
    let change = "[[channel.g.change]]\nfrom = \"09.05.2026 06:30\"\ncolumn = \"CH02\"\n";
    let form = "[recording]\ntime_format = \"day.month.year hour:minute\"\n";
    let change = format!("{form}{ONE_ARM}{change}{}", change.replace("06:30", "06:29").replace("CH02", "CH01"));
    dir.put("s.toml", change);
    dir.put("two.csv", "time,CH01,CH02\n09.05.2026 06:30,1,2\n");
    dir.run(&["convert", "s.toml", "two.csv"])
        .refused("s.toml:14:8: channel 'g': '09.05.2026 06:29' must come after '09.05.2026 06:30'");
}

#[test]
fn sheets_that_cannot_be_read() {
    let dir = Dir::new();
    dir.put("r.csv", "CH01\n1\n");
    dir.put("latin.toml", b"title = \"x\"\ntitel = \"\xb5V\"\n");
    dir.run(&["convert", "latin.toml", "r.csv"])
        .refused("latin.toml:2:10: byte 0xb5 is not UTF-8: save the sheet as UTF-8 text");
    dir.run(&["convert", "no.toml", "r.csv"]).refused("no.toml: cannot read: no such file or directory");
    dir.run(&["convert", ".", "r.csv"]).refused(".: cannot read: it is a directory");
    dir.put("s.toml", PLAIN);
    dir.run(&["convert", "s.toml", "no.csv"]).refused("no.csv: cannot open: no such file or directory");
    dir.run(&["convert", "s.toml", "."]).refused(".: cannot read: it is a directory");
    let ran = dir.run(&["convert", "r.csv", "s.toml"]);
    assert_eq!(ran.code, Some(2));
    assert!(ran.err.ends_with("\nthe sheet comes first, then the recording\n"), "{}", ran.err);
    dir.put("wrong.toml", "[channel.g]\ncolumn = 1\nreads = \"mVV\"\n");
    let marked = "wrong.toml:3:9: reads = 'mVV' is no unit that a recording can have; did you mean 'mV'?\n  |\n3 | reads = \"mVV\"\n  |         ^^^^^";
    for args in [
        &["convert", "wrong.toml", "r.csv"][..],
        &["describe", "wrong.toml"],
        &["value", "wrong.toml", "g", "1"],
        &["expect", "wrong.toml", "g", "1"],
    ] {
        dir.run(args).refused(marked);
    }
    let bom = [b"\xef\xbb\xbf".as_slice(), PLAIN.replace('\n', "\r\n").as_bytes()].concat();
    dir.put("bom.toml", bom);
    dir.run(&["convert", "bom.toml", "r.csv", "-q"]).is(0, "u (mV),flags\n1,\n", "");
}

/// A unit that is the channel's own changes no digit: the number is the same with it and without.
#[test]
fn a_unit_that_is_typed_changes_no_number() {
    let dir = Dir::new();
    dir.put("s.toml", ONE_ARM);
    for i in 0..200 {
        let reading = format!("{:.4}", 1.0 + 0.0137 * f64::from(i));
        let value = |text: &str| dir.run(&["value", "s.toml", "g", text]).out;
        assert_eq!(value(&reading), value(&format!("{reading} mV")), "{reading}");
    }
    // and a side input that is typed twice is no input
    dir.put(
        "w.toml",
        "[channel.g]\ncolumn = 1\nreads = \"mV\"\noutput = \"degC\"\nthermocouple = { type = \"K\", reference = \"box\" }\n\
         [channel.box]\ncolumn = 2\nreads = \"degC\"\n",
    );
    dir.run(&["value", "w.toml", "g", "1", "--with", "box=20degC", "--with", "box=30degC"])
        .refused("--with box=30degC: 'box' was given before");
}

#[test]
fn describe_with_and_without_a_recording() {
    let dir = Dir::new();
    dir.put("s.toml", format!("title = \"One arm\"\n{ONE_ARM}"));
    let words = "One arm\n\ng\n  \
        reads: column 'CH01' in mV\n  \
        supply: 2.5 V for all readings\n  \
        bridge: arm 1 a gauge that sees e, 350 ohm; 2 fixed, 350 ohm; 3 fixed, 350 ohm; 4 fixed, 350 ohm\n  \
        bridge: output/supply = R1/(R1 + R2) − R4/(R3 + R4) without leads and load; with them solved exactly, not linearised\n  \
        leads: three wires, 2.6 ohm in arm 1, 2.6 ohm in arm 2, 2.6 ohm in series with the output\n  \
        load: none stated on the output\n  \
        leads: with the lead to arm 1 broken the reading is 1250 mV, with that to arm 2 -1250 mV; a break of the third has no reading of its own\n  \
        strain: each arm is R = R0 [1 + c (F e + x0)], c its multiple of e, x0 from the zero; solved for e\n  \
        gauge: gauge factor F = 2.08 at every temperature\n  \
        thermal output: none is taken off\n  \
        zero: the bridge as stated, x0 = 0\n  \
        range: |e| up to 100000 microstrain, beyond it a reading is out-of-range; open or short where a gauge is beyond three times or a third of its resistance\n  \
        gives: microstrain, with the shortest digits that read back exactly\n  \
        assumed: bridge.resistances: 350 ohm in all four arms, the gauge's\n  \
        assumed: zero: the bridge as stated is at zero strain\n";
    dir.run(&["describe", "s.toml"]).is(0, words, "");
    dir.put("r.csv", "time;CH01\ns;mV\n0,0;1,2075\n");
    let with = format!(
        "{}  found: column 2 'CH01', unit 'mV' in the file\n",
        words.replace(
            "One arm\n",
            "One arm\n\nrecording r.csv\n  separator ';', decimal ',' (found)\n  encoding utf-8 (assumed), line ends LF\n  \
             names in line 1 (found)\n  units in line 2 (found)\n  first row in line 3 (found)\n  2 columns\n  \
             time from column 'time' (found): seconds as given\n  column 1 'time': time\n  column 2 'CH01': reading of g\n"
        )
    );
    dir.run(&["describe", "s.toml", "r.csv"]).is(0, &with, "");
    dir.pipe(&["describe", "s.toml", "-"], b"time;CH01\ns;mV\n0,0;1,2075\n", 5).is(
        0,
        &with.replace("recording r.csv", "recording standard input"),
        "",
    );
    dir.put("r.csv", "time;CH1\n0,0;1,2075\n");
    let ran = dir.run(&["describe", "s.toml", "r.csv"]);
    assert_eq!(
        (ran.code, ran.err.as_str()),
        (Some(2), "r.csv:1: value 'CH01': no column has this name; the nearest is 'CH1'\n")
    );
    // every unit as a sheet writes it
    dir.put("s.toml", footbridge());
    let ran = dir.run(&["describe", "s.toml"]);
    assert!(ran.out.contains("reads: column 'CH01' in mV/V\n") && !ran.out.contains("10^"), "{}", ran.out);
}

#[test]
fn evidence_as_text_and_json() {
    let dir = Dir::new();
    let ran = dir.run(&["evidence"]);
    assert_eq!((ran.code, ran.err.as_str()), (Some(0), ""));
    assert!(ran.out.contains("IEC 60751") && !ran.out.contains("FAILED"), "{}", ran.out);
    let ran = dir.run(&["evidence", "--json"]);
    assert_eq!((ran.code, ran.err.as_str()), (Some(0), ""));
    let out = ran.out.trim_end();
    assert!(matches!((out.chars().next(), out.chars().last()), (Some('{' | '['), Some('}' | ']'))), "{out}");
    let ran = dir.run(&["evidence", "--json", "-o", "e.json"]);
    ran.is(0, "", "");
    assert_eq!(fs::read_to_string(dir.path("e.json")).unwrap().trim_end(), out);
}

#[test]
fn help_and_usage() {
    let dir = Dir::new();
    // nothing typed: the help, but that is no answer
    let ran = dir.run(&[]);
    assert_eq!((ran.code, ran.out.as_str()), (Some(2), ""));
    assert!(ran.err.contains("Usage: ohmwright <COMMAND>"), "{}", ran.err);
    let help = dir.run(&["--help"]);
    assert_eq!((help.code, help.err.as_str()), (Some(0), ""));
    let words: Vec<&str> = help.out.split_whitespace().collect();
    assert!(
        words.join(" ").contains(
            "Not a protective function: stop limits and safety decisions stay with the responsible engineer."
        )
    );
    for command in ["convert", "value", "expect", "describe", "evidence"] {
        assert!(help.out.contains(command));
        let ran = dir.run(&[command, "--help"]);
        assert_eq!((ran.code, ran.err.as_str()), (Some(0), ""), "{command}");
        assert!(ran.out.contains("Usage: ohmwright"), "{}", ran.out);
    }
    assert_eq!(dir.run(&["--version"]).out, format!("ohmwright {}\n", env!("CARGO_PKG_VERSION")));
    for args in [
        &["frobnicate"][..],
        &["convert"],
        &["convert", "s.toml"],
        &["convert", "a", "b", "--colour"],
        &["value"],
        &["expect", "s.toml", "g"],
    ] {
        let ran = dir.run(args);
        assert_eq!((ran.code, ran.out.as_str()), (Some(2), ""), "{args:?}");
        assert!(ran.err.contains("Usage: ohmwright"), "{}", ran.err);
    }
}

/// One gauge of 350 ohm and factor 2, without leads; a half bridge, a full one, a stress, a torque, a load cell, a thermometer.
const BENCH: &str = "[common.one]\ncolumn = 1\nreads = \"mV/V\"\noutput = \"microstrain\"\ngauge = { resistance = \"350 ohm\", gauge_factor = 2 }\n\
    bridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }\n[channel.g]\nlike = \"one\"\n\
    [channel.two]\nlike = \"one\"\nleads = { wires = 2, each = \"3.217 ohm\" }\n\
    [channel.half]\nlike = \"one\"\nbridge = { arms = [\"e\", \"-e\", \"0\", \"0\"] }\n\
    [channel.full]\nlike = \"one\"\noutput = \"%\"\nbridge = { arms = [\"e\", \"-e\", \"e\", \"-e\"] }\n\
    [channel.shear]\nlike = \"one\"\noutput = \"shear microstrain\"\nbridge = { arms = [\"e\", \"-e\", \"e\", \"-e\"] }\n\
    [channel.stress]\nof = \"g\"\nmaterial = { modulus = \"200 GPa\" }\n\
    [channel.torque]\nof = \"shear\"\nload = \"torsion\"\nsection = { diameter = \"40 mm\" }\nmaterial = { modulus = \"200 GPa\", poisson = 0.25 }\n\
    [channel.sum]\ncombine = { g = 1, two = 1 }\n\
    [channel.cell]\ncolumn = 1\nreads = \"mV/V\"\ntransducer = { rated = \"2 mV/V\", capacity = \"50 kN\" }\nbridge = { resistances = [\"350 ohm\", \"350 ohm\", \"350 ohm\", \"350 ohm\"] }\n\
    [channel.t]\ncolumn = 2\nreads = \"mV/V\"\nplatinum = { standard = \"IEC 60751\", r0 = \"100 ohm\" }\nbridge = { arms = [\"sensor\", \"0\", \"0\", \"0\"] }\n\
    [channel.ohms]\ncolumn = 2\nreads = \"ohm\"\nplatinum = { standard = \"IEC 60751\", r0 = \"100 ohm\" }\n";

fn bench() -> Dir {
    let dir = Dir::new();
    dir.put("s.toml", BENCH);
    dir
}

/// A table: its header, and its cells as numbers, NaN where they are blank.
#[track_caller]
fn table(dir: &Dir, args: &[&str]) -> (String, Vec<Vec<f64>>) {
    let ran = dir.run(&[&["table"], args].concat());
    assert_eq!(ran.code, Some(0), "{}", ran.err);
    let mut lines = ran.out.lines().map(str::to_string);
    let header = lines.next().unwrap();
    let cells = lines.map(|l| l.split(',').map(|c| c.parse().unwrap_or(f64::NAN)).collect()).collect();
    (header, cells)
}

#[track_caller]
fn close(got: f64, want: f64, allowed: f64) {
    assert!((got - want).abs() <= allowed, "{got}, not {want}");
}

#[test]
fn table_of_shunts() {
    let dir = bench();
    let (header, rows) = table(&dir, &["shunts", "s.toml", "g"]);
    assert_eq!(
        header,
        "simulated (microstrain),resistor (ohm),nearest E96 (ohm),E96 simulates (microstrain),nearest E192 (ohm),E192 simulates (microstrain),same resistor at the instrument (microstrain)"
    );
    // arm 1 is compressed: Rc = R/(F e) − R; without leads both places are one. A resistor of Rc simulates R/(F (R + Rc))
    assert_eq!(rows.len(), 10);
    for (i, row) in rows.iter().enumerate() {
        let e = -500.0 * (i + 1) as f64;
        assert_eq!(row[0], e);
        close(row[1], 350.0 / (2.0 * -e * 1e-6) - 350.0, 0.005);
        for k in [2, 4] {
            // six figures
            let simulates = -1e6 * 350.0 / (2.0 * (350.0 + row[k]));
            close(row[k + 1], simulates, 0.5e-5 * libm::pow(10.0, libm::log10(simulates.abs()).floor()));
            assert!(libm::log(row[k] / row[1]).abs() < 0.013, "a series of 1 % steps 2.4 %");
        }
        close(row[6], e, 0.01);
    }
    // IEC 60063: 174 and 178, 174 and 176 are next to 174.65; 86.6 and 88.7, 86.6 and 87.6 to 87.15
    assert_eq!([rows[1][1], rows[1][2], rows[1][4]], [174_650.0, 174e3, 174e3]);
    assert_eq!([rows[3][1], rows[3][2], rows[3][4]], [87_150.0, 86.6e3, 87.6e3]);
    // arm 2, fixed: tension, Rc = R/(F e) exactly; in other units, from and to as typed
    let (_, rows) =
        table(&dir, &["shunts", "s.toml", "g", "--arm", "2", "--from", "0.1 %", "--to", "2000", "--step", "1000"]);
    assert_eq!(rows.iter().map(|r| [r[0], r[1]]).collect::<Vec<_>>(), [[1000.0, 175e3], [2000.0, 87.5e3]]);
    // a stress in its own unit: 1000 microstrain at 200 GPa are 200 MPa
    let (header, rows) =
        table(&dir, &["shunts", "s.toml", "stress", "--from", "-200", "--to", "-200 MPa", "--step", "1"]);
    assert!(header.starts_with("simulated (MPa),"), "{header}");
    assert_eq!([rows[0][0], rows[0][1]], [-200.0, 174_650.0]);
    close(rows[0][3], -200.0 * 175_000.0 / 174_350.0, 5e-4);
    // a load cell: arm 1 is R ∥ Rc, y = R1/(R1 + R) − ½ = −R/(2 (2 Rc + R)); 2 mV/V are 50 kN
    let (header, rows) = table(&dir, &["shunts", "s.toml", "cell"]);
    assert!(header.starts_with("simulated (kN),"), "{header}");
    assert_eq!(
        rows.iter().map(|r| r[0]).collect::<Vec<_>>(),
        [5., 10., 15., 20., 25., 30., 35., 40., 45., 50.].map(|v: f64| -v)
    );
    for row in &rows {
        let y = 2e-3 * -row[0] / 50.0;
        close(row[1], 350.0 * (1.0 / (2.0 * y) - 1.0) / 2.0, 0.005);
    }
    // one resistor, at both places: −R/(F (R + Rc)), and −S²/((S + Rc) R F) behind two wires, S = R + 2 · 3.217
    let (header, rows) = table(&dir, &["shunts", "s.toml", "two", "--resistor", "59.88 kohm"]);
    assert_eq!(header, "resistor (ohm),at the gauge (microstrain),at the instrument (microstrain)");
    let (s, rc) = (356.434, 59_880.0);
    assert_eq!((rows.len(), rows[0][0]), (1, rc));
    close(rows[0][1], -1e6 * 350.0 / (2.0 * (350.0 + rc)), 0.005);
    close(rows[0][2], -1e6 * s * s / ((s + rc) * 350.0 * 2.0), 0.005);
    // that resistor at the instrument, backwards: the other place is now the gauge
    let value = rows[0][2].to_string();
    let args = ["shunts", "s.toml", "two", "--at-instrument", "--from", &value, "--to", &value, "--step", "1"];
    let (header, rows) = table(&dir, &args);
    assert!(header.ends_with("same resistor at the gauge (microstrain)"), "{header}");
    // half a unit of the sixth figure of the value is 1e-6 of the resistor
    close(rows[0][1], rc, 0.15);
    close(rows[0][6], -1e6 * 350.0 / (2.0 * (350.0 + rc)), 0.01);
}

#[test]
fn table_of_leads() {
    let dir = bench();
    let (header, rows) = table(&dir, &["leads", "s.toml", "g"]);
    assert_eq!(
        header,
        "each conductor (ohm),\"two wires, balanced: sensitivity remaining\",three wires: sensitivity remaining"
    );
    assert_eq!(rows.len(), 11);
    for (i, row) in rows.iter().enumerate() {
        let l = i as f64;
        assert_eq!(row[0], l);
        close(row[1], 350.0 / (350.0 + 2.0 * l), 0.5e-6);
        close(row[2], 350.0 / (350.0 + l), 0.5e-6);
    }
    // what is wired already does not count: its leads are those of the row
    assert_eq!(table(&dir, &["leads", "s.toml", "two"]).1, rows);
    let (_, rows) = table(&dir, &["leads", "s.toml", "g", "--from", "500 mohm", "--to", "1.1", "--step", "0.1 ohm"]);
    assert_eq!(rows.iter().map(|r| r[0]).collect::<Vec<_>>(), [0.5, 0.6, 0.7, 0.8, 0.9, 1.0, 1.1]);
    // two gauges are never on two wires; a full bridge has leads of its supply: R/(R + 2 r)
    let (header, rows) = table(&dir, &["leads", "s.toml", "half", "--to", "2", "--step", "2"]);
    assert_eq!(header, "each conductor (ohm),three wires: sensitivity remaining");
    close(rows[1][1], 350.0 / 352.0, 0.5e-6);
    for channel in ["full", "cell", "torque"] {
        let (header, rows) = table(&dir, &["leads", "s.toml", channel, "--to", "4", "--step", "2"]);
        assert_eq!(header, "each conductor (ohm),supply leads: sensitivity remaining");
        close(rows[2][1], 350.0 / 358.0, 0.5e-6);
    }
}

#[test]
fn table_of_nonlinearity() {
    let dir = bench();
    let (header, rows) = table(&dir, &["nonlinearity", "s.toml", "g"]);
    assert_eq!(
        header,
        "true (microstrain),signal (mV/V),by the slope at zero (microstrain),error (microstrain),error (%)"
    );
    assert_eq!(rows.len(), 11);
    for (i, row) in rows.iter().enumerate() {
        let e = -5000.0 + 1000.0 * i as f64;
        assert_eq!(row[0], e);
        // e = 4 y/(F (1 − 2 y)), and to first order 4 y/F
        let y = row[1] * 1e-3;
        close(4.0 * y / (2.0 * (1.0 - 2.0 * y)) * 1e6, e, 1e-8);
        let first = e / (1.0 + e * 1e-6);
        close(row[2], first, 1e-8);
        close(row[3], first - e, 0.5e-4);
        if e == 0.0 {
            assert!(row[4].is_nan() && row[3] == 0.0);
        } else {
            close(row[4], 100.0 * (first - e) / e, 0.5e-4);
        }
    }
    // two adjacent gauges are linear: nothing but rounding, and that is not shown
    let (_, rows) = table(&dir, &["nonlinearity", "s.toml", "half"]);
    assert!(rows.iter().all(|r| r[3] == 0.0));
    // steps are those of the unit, not of their binary neighbours
    let (header, rows) =
        table(&dir, &["nonlinearity", "s.toml", "full", "--from", "0", "--to", "0.4", "--step", "0.1"]);
    assert!(header.starts_with("true (%),signal (mV/V),"), "{header}");
    assert_eq!(rows.iter().map(|r| r[0]).collect::<Vec<_>>(), [0.0, 0.1, 0.2, 0.3, 0.4]);
    // F = 2, full bridge: y = 2 e
    close(rows[3][1], 6.0, 1e-12);
    // a stress in its own unit: y = F e/4/(1 + F e/2), e = 250 MPa/200 GPa
    let (header, rows) =
        table(&dir, &["nonlinearity", "s.toml", "stress", "--from", "250 MPa", "--to", "250", "--step", "1"]);
    assert!(header.starts_with("true (MPa),signal (mV/V),by the slope at zero (MPa),"), "{header}");
    close(rows[0][1], 1e3 * 0.00125 / 2.0 / 1.00125, 1e-12);
    close(rows[0][2], 250.0 / 1.00125, 1e-8);
    // a torque: T = G Wp γ, G = 80 GPa, Wp = π d³/16; F γ/2 is the signal
    let (_, rows) =
        table(&dir, &["nonlinearity", "s.toml", "torque", "--from", "1 kN m", "--to", "1000", "--step", "1"]);
    let gamma = 1000.0 / (80e9 * std::f64::consts::PI * libm::pow(0.04, 3.0) / 16.0);
    close(rows[0][1], 1e3 * gamma, 1e-11);
}

#[test]
fn tables_keep_to_the_certificate_and_to_their_steps() {
    let dir = Dir::new();
    let cell = |range: &str, more: &str| {
        format!(
            "[channel.cell]\ncolumn = 1\nreads = \"mV/V\"\ntransducer = {{ polynomial = [0, 0.04], in = \"kN\", gives = \"mV/V\", range = {range} }}\n\
             bridge = {{ resistances = [\"350 ohm\", \"350 ohm\", \"350 ohm\", \"350 ohm\"] }}\n{more}"
        )
    };
    let firsts = |args: &[&str]| table(&dir, args).1.iter().map(|r| r[0]).collect::<Vec<_>>();
    let tens = |by: f64| (0..11).map(|i| by * f64::from(i)).collect::<Vec<_>>();
    // 0.04 mV/V per kN, from 0 to 50 kN: a resistor across arm 2 simulates tension, one across arm 1 what is not read
    dir.put("s.toml", cell("[\"0 kN\", \"50 kN\"]", ""));
    assert_eq!(firsts(&["nonlinearity", "s.toml", "cell"]), tens(5.0));
    assert_eq!(firsts(&["shunts", "s.toml", "cell", "--arm", "2"]), tens(5.0)[1..]);
    let (_, rows) = table(&dir, &["shunts", "s.toml", "cell", "--arm", "2"]);
    // y = R/(2 (2 Rc + R)) at 50 kN, which is 2 mV/V
    close(rows[9][1], 350.0 * (1.0 / 4e-3 - 1.0) / 2.0, 0.005);
    let ran = dir.run(&["table", "shunts", "s.toml", "cell"]);
    assert_eq!(ran.code, Some(2));
    assert_eq!(
        ran.err.lines().last(),
        Some(
            "a resistor across arm 1 drives channel 'cell' away from its range, 0 to 50 kN: give another --arm, or --from, --to and --step"
        )
    );
    let ran = dir.run(&["table", "shunts", "s.toml", "cell", "--from", "10", "--to", "20", "--step", "5"]);
    assert_eq!(
        ran.err.lines().last(),
        Some("10 kN: no resistor across arm 1 simulates that; one across arm 2 does: --arm 2, or give the other sign")
    );
    let ran = dir.run(&["table", "nonlinearity", "s.toml", "cell", "--to", "60"]);
    assert_eq!(ran.err.lines().last(), Some("value '55 kN' is beyond the range of channel 'cell': -0.5 to 50.5 kN"));
    // compression alone, and no more of it than is believed
    dir.put("s.toml", cell("[\"-50 kN\", \"0 kN\"]", "largest_load = \"40 kN\"\n"));
    assert_eq!(firsts(&["nonlinearity", "s.toml", "cell"]), (-10..=0).map(|i| f64::from(4 * i)).collect::<Vec<_>>());
    assert_eq!(firsts(&["shunts", "s.toml", "cell"]), tens(-4.0)[1..]);
    // a span of many digits: 12 of them are printed of each line, and zero is zero
    let stress = BENCH.replace(
        "of = \"g\"\nmaterial = { modulus = \"200 GPa\" }",
        "of = \"g\"\nmaterial = { modulus = \"207.3456789012345 GPa\" }",
    );
    dir.put("s.toml", stress);
    for (channel, largest) in
        [("stress", 5e-3 * 207_345.678_901_234_5), ("torque", 0.01 * 80e9 * std::f64::consts::PI * 6.4e-5 / 16.0)]
    {
        for (i, value) in (-5..=5).zip(firsts(&["nonlinearity", "s.toml", channel])) {
            close(value, largest * f64::from(i) / 5.0, if i == 0 { 0.0 } else { 5e-12 * largest });
        }
    }
    // warm leads: the ohms are those at the reference
    let warm = format!(
        "[channel.w]\nlike = \"one\"\nleads = {{ wires = 3, each = \"1 ohm\", temperature = \"60 degC\" }}\n{BENCH}"
    );
    dir.put("s.toml", warm);
    let (header, rows) = table(&dir, &["leads", "s.toml", "w", "--to", "10", "--step", "10"]);
    assert!(header.starts_with("each conductor at 20 degC (ohm),"), "{header}");
    // copper, 0.00393 /K: 10 ohm are 11.572 ohm at 60 degC
    close(rows[1][2], 350.0 / (350.0 + 10.0 * (1.0 + 0.00393 * 40.0)), 0.5e-6);
}

#[test]
fn tables_that_cannot_be() {
    let dir = bench();
    let no = |args: &[&str], message: &str| {
        let ran = dir.run(&[&["table"], args].concat());
        assert_eq!((ran.code, ran.out.as_str()), (Some(2), ""), "{args:?}");
        assert_eq!(ran.err.lines().last(), Some(message), "{}", ran.err);
    };
    no(
        &["shunts", "s.toml", "gg"],
        "there is no channel 'gg'; those that one reading gives are g, two, half, full, shear, stress, torque, cell, t, ohms; did you mean 'g'?",
    );
    for channel in ["t", "ohms"] {
        no(
            &["shunts", "s.toml", channel],
            &format!("channel '{channel}' is no bridge of gauges and no transducer, which this table is about"),
        );
    }
    no(&["leads", "s.toml", "sum"], "channel 'sum' combines several channels: compute them one by one");
    no(
        &["shunts", "s.toml", "g", "--from", "1000", "--to", "2000"],
        "no line from 1000 to 2000 in steps of -500: check --from, --to and --step",
    );
    let from = |from: &'static str, step: &'static str| {
        ["shunts", "s.toml", "g", "--from", from, "--to", from, "--step", step]
    };
    no(
        &from("1000", "1"),
        "1000 microstrain: no resistor across arm 1 simulates that; one across arm 2 does: --arm 2, or give the other sign",
    );
    no(&from("0", "1"), "0 microstrain: that is no shunt at all; begin beside it");
    no(&from("-10", "0"), "no line from -10 to -10 in steps of 0: check --from, --to and --step");
    no(
        &from("-10 mV", "1"),
        "value '-10 mV': 'mV' is the unit of a voltage (V, mV, uV); expected a strain (microstrain, %, strain)",
    );
    no(
        &["leads", "s.toml", "g", "--to", "5 V"],
        "value '5 V': 'V' is the unit of a voltage (V, mV, uV); expected a resistance (ohm, kohm, Mohm)",
    );
    no(&["leads", "s.toml", "g", "--from", "-1"], "-1 ohm: a conductor has no resistance below zero");
    no(&["leads", "s.toml", "g", "--step", "1e-6"], "--step is too small: more than 100000 lines");
    no(
        &["nonlinearity", "s.toml", "g", "--to", "200000"],
        "value '101000 microstrain' is beyond the range of channel 'g': -100000 to 100000 microstrain",
    );
    no(
        &["shunts", "s.toml", "g", "--resistor", "59.88"],
        "--resistor: value '59.88' has no unit; expected a resistance (ohm, kohm, Mohm)",
    );
    let ran = dir.run(&["table", "shunts", "s.toml", "g", "--resistor", "1 ohm"]);
    assert_eq!((ran.code, ran.out.as_str()), (Some(2), ""));
    assert!(ran.err.lines().last().unwrap().starts_with("--resistor 1 ohm: "), "{}", ran.err);
    for args in [&["shunts", "s.toml", "g", "--arm", "5"][..], &["bolts", "s.toml", "g"], &["shunts", "s.toml"]] {
        assert_eq!(dir.run(&[&["table"], args].concat()).code, Some(2), "{args:?}");
    }
}

/// A gauge on the deck, its dummy in a box, its leads in the air, volts at a supply of their own.
const SIDES: &str = "[channel.h]\ncolumn = \"h\"\nreads = \"mV\"\ngauge = { resistance = \"350 ohm\", gauge_factor = 2 }\n\
    bridge = { arms = [\"e\", \"dummy\", \"0\", \"0\"], temperatures = [\"\", \"box\", \"\", \"\"], supply = { column = \"V\", reads = \"V\" } }\n\
    leads = { wires = 3, each = \"5 ohm\", temperature = \"air\" }\nthermal_output = { coefficients = [0, 10], in = \"degC\", gauge_factor = 2 }\n\
    temperature = \"deck\"\nzero = { rows = 3 }\n[channel.twice]\nof = \"h\"\nmaterial = { modulus = \"200 GPa\" }\n\
    [channel.deck]\ncolumn = \"deck\"\nreads = \"degC\"\n[channel.box]\ncolumn = \"box\"\nreads = \"degC\"\n[channel.air]\ncolumn = \"air\"\nreads = \"degC\"\n";

#[test]
fn several_side_inputs() {
    let dir = Dir::new();
    dir.put("s.toml", SIDES);
    let sides = [
        "--with",
        "deck=30",
        "--with",
        "box=303.15 K",
        "--with",
        "air=20",
        "--with",
        "V=2 V",
        "--with",
        "zero_temperature=20",
    ];
    // gauge and dummy of the same temperature cancel: r = 5/350; with no strain no signal
    let ran = dir.run(&[&["value", "s.toml", "h", "0"], &sides[..]].concat());
    let value: f64 = ran.out.strip_suffix(" microstrain\n").unwrap().parse().unwrap();
    close(value, 0.0, 1e-9);
    // a box 10 K warmer: dummy 355.14 behind 5 ohm beside 350.07, by hand y = R1/(R1 + R2) − ½ with R1 = 350 (1 + 2e-4) + 5
    // and R2 = 350 (1 + 4e-4) + 5; e that makes R1 = R2 is 2e-4/2 = 100 microstrain
    let warmer: Vec<&str> = sides.iter().map(|s| if s.starts_with("box") { "box=40" } else { s }).collect();
    let ran = dir.run(&[&["expect", "s.toml", "h", "0", "100", "250"], &warmer[..]].concat());
    let signals: Vec<f64> = ran.out.lines().map(|l| l.strip_suffix(" mV").unwrap().parse().unwrap()).collect();
    let by_hand = |e: f64| {
        let (r1, r2) = (350.0 * (1.0 + 2.0 * e + 2e-4) + 5.0, 350.0 * (1.0 + 4e-4) + 5.0);
        2.0 * 1e3 * (r1 / (r1 + r2) - 0.5)
    };
    for (signal, e) in signals.iter().zip([0.0, 100e-6, 250e-6]) {
        // the hand calculation subtracts ½: 1e-16 of 2 V
        close(*signal, by_hand(e), 5e-13);
    }
    for (signal, e) in signals.iter().zip([0.0, 100.0, 250.0]) {
        let ran = dir.run(&[&["value", "s.toml", "h", &format!("{signal:?}")], &warmer[..]].concat());
        close(ran.out.strip_suffix(" microstrain\n").unwrap().parse().unwrap(), e, 1e-9);
        // the stress of it: 200 GPa
        let ran = dir.run(&[&["value", "s.toml", "twice", &format!("{signal:?}")], &warmer[..]].concat());
        close(ran.out.strip_suffix(" MPa\n").unwrap().parse().unwrap(), 0.2 * e, 1e-9);
    }
    // a zero of 0.1 mV/V and a signal of 3 mV at 2 V, each on leads of 20 or of 60 °C: by hand R1 = R2 (½ + y)/(½ − y), once
    // for x0 at zero and once with the dummy warm, e = (x − x0 − 2e-4)/2
    for (then, now) in [("20", "20"), ("20", "60"), ("60", "60"), ("60", "20")] {
        let lead = |t: &str| 5.0 * (1.0 + 0.00393 * (t.parse::<f64>().unwrap() - 20.0));
        let x = |y: f64, dummy: f64, lead: f64| {
            (((0.5 + y) / (0.5 - y)) * (350.0 * (1.0 + dummy) + lead) - lead) / 350.0 - 1.0
        };
        let e = (x(1.5e-3, 4e-4, lead(now)) - x(0.1e-3, 0.0, lead(then)) - 2e-4) / 2.0;
        let (air, zero) = (format!("air={now}"), format!("zero_lead_temperature={then} degC"));
        let mut with: Vec<&str> = warmer.iter().map(|s| if s.starts_with("air") { air.as_str() } else { s }).collect();
        with.extend(["--with", "zero=0.1 mV/V"]);
        if then != "20" {
            // 20 °C is where the leads are stated, and holds at zero where nothing is said
            with.extend(["--with", zero.as_str()]);
        }
        let ran = dir.run(&[&["value", "s.toml", "h", "3"], &with[..]].concat());
        close(ran.out.strip_suffix(" microstrain\n").unwrap().parse().unwrap(), e * 1e6, 1e-8);
    }
    // the box was at 25 °C at zero: the dummy has grown by 3e-4, and e that makes R1 = R2 is 1e-4/2 = 50 microstrain
    let ran =
        dir.run(&[&["value", "s.toml", "h", "0"], &warmer[..], &["--with", "zero_temperature.box=25 degC"]].concat());
    close(ran.out.strip_suffix(" microstrain\n").unwrap().parse().unwrap(), 50.0, 1e-9);
    // and that of the leads by the name of their channel
    let zero_of = |name: &str| {
        let name = format!("{name}=60");
        dir.run(&[&["value", "s.toml", "h", "3"], &warmer[..], &["--with", "zero=0.1 mV/V", "--with", &name]].concat())
            .out
    };
    assert_eq!(zero_of("zero_temperature.air"), zero_of("zero_lead_temperature"));
    // each one that lacks is asked for by name
    for (left_out, side) in [(1, "deck"), (3, "box"), (5, "air")] {
        let with: Vec<&str> =
            sides.iter().enumerate().filter(|(i, _)| *i != left_out && *i + 1 != left_out).map(|(_, s)| *s).collect();
        dir.run(&[&["value", "s.toml", "h", "0"], &with[..]].concat())
            .refused(&format!("channel 'h' needs a temperature: give it by --with {side}=21degC"));
    }
    dir.run(&["value", "s.toml", "h", "0", "--with", "dek=1"]).refused(
        "--with dek: channel 'h' has no such side input; it has deck, air, box, V, zero, zero_temperature, zero_lead_temperature, zero_temperature.deck, zero_temperature.air, zero_temperature.box",
    );
    let without: Vec<&str> = sides[..8].to_vec();
    dir.run(&[&["value", "s.toml", "h", "0"], &without[..]].concat())
        .refused("channel 'h' needs the temperature at zero: give it by --with zero_temperature=21degC");
}

#[test]
fn describe_says_a_rosette_once() {
    let dir = Dir::new();
    let grids: String = "abc"
        .chars()
        .map(|c| format!("[channel.{c}]\ncolumn = \"{c}\"\nreads = \"microstrain\"\nshow = false\n"))
        .collect();
    dir.put(
        "s.toml",
        format!(
            "{grids}[rosette.R]\ngrids = {{ a = \"a\", b = \"b\", c = \"c\" }}\nangles = [\"0 deg\", \"45 deg\", \"90 deg\"]\ntransverse = \"1 %\"\n\
             give = [\"principal-max\", \"direction\"]\n[rosette.S]\ngrids = {{ a = \"a\", b = \"c\" }}\nangles = [\"0 deg\", \"90 deg\"]\ntransverse = \"1 %\"\ngive = [\"strain-x\"]\n"
        ),
    );
    let out = dir.run(&["describe", "s.toml"]).out;
    let at = out.find("R principal-max").unwrap();
    assert_eq!(
        &out[at..],
        "R principal-max\n  rosette: a at 0°, K = 1 %; b at 45°, K = 1 %; c at 90°, K = 1 %\n  \
         rosette: ê (1 − ν0 K) = e(θ) + K e(θ + 90°) for each grid, ê what it indicates, θ anticlockwise from x, ν0 = 0.285; solved together\n  \
         gives: the larger principal strain\n  gives: microstrain, with the shortest digits that read back exactly\n  \
         assumed: transverse: ν0 = 0.285, Poisson's ratio of the beam on which gauge factors are calibrated\n\n\
         R direction\n  gives: the direction from x to the larger principal strain, anticlockwise, in (−90°, 90°]; ambiguous where every direction is principal\n  \
         gives: deg, with the shortest digits that read back exactly\n  all else as R principal-max\n\n\
         S strain-x\n  tee: a at 0°, K = 1 %; c at 90°, K = 1 %\n  \
         tee: ê (1 − ν0 K) = e(θ) + K e(θ + 90°) for each grid, ê what it indicates, ν0 = 0.285; their directions are taken as the principal ones, without shear\n  \
         gives: the strain along x\n  gives: microstrain, with the shortest digits that read back exactly\n  \
         assumed: transverse: ν0 = 0.285, Poisson's ratio of the beam on which gauge factors are calibrated\n  assumed: angles: the two grids lie along the principal directions\n"
    );
    dir.run(&["value", "s.toml", "R direction", "1"])
        .refused("channel 'R direction' combines several grids: compute them one by one, or go forwards from all of the state by expect SHEET R LARGER SMALLER DIRECTION");
}

#[test]
fn shunt_steps_of_a_recording() {
    let dir = Dir::new();
    // 2 mV/V at 50 kN; Clegg 2005: 87.15 kohm across an arm of 350 ohm is 1000 R/(4 Rc + 2 R) = 1.002 mV/V
    let sheet = |zero: &str, from: &str, to: &str| {
        format!(
            "[channel.cell]\ncolumn = \"y\"\nreads = \"mV/V\"\noutput = \"kN\"\ntransducer = {{ rated = \"2 mV/V\", capacity = \"50 kN\" }}\n\
             bridge = {{ resistances = [\"350 ohm\", \"350 ohm\", \"350 ohm\", \"350 ohm\"] }}\n{zero}\
             shunt = {{ from = \"{from}\", to = \"{to}\", resistor = \"87.15 kohm\", across = \"arm 2\", place = \"gauge\" }}\n"
        )
    };
    let rows: String = (0..10).map(|t| format!("{t},{}\n", if (4..8).contains(&t) { 1.002 } else { 0.0 })).collect();
    dir.put("r.csv", format!("time,y\n{rows}"));
    let strict = |sheet: String| {
        dir.put("s.toml", sheet);
        dir.run(&["convert", "s.toml", "r.csv", "-o", "out.csv", "--strict"])
    };
    let ran = strict(sheet("", "4 s", "7 s"));
    assert_eq!(ran.code, Some(0), "{}", ran.err);
    assert!(ran.err.contains("ratio 1.00000, within 1 %"), "{}", ran.err);
    // one row too many; a step that is not there
    let ran = strict(sheet("", "4 s", "8 s"));
    assert_eq!(ran.code, Some(1), "{}", ran.err);
    assert!(ran.err.ends_with("\nr.csv: 1 shunt step that disagrees or cannot be judged (--strict)\n"), "{}", ran.err);
    assert!(!ran.err.contains("times"), "{}", ran.err);
    let ran = strict(sheet("", "2 s", "3 s"));
    assert_eq!(ran.code, Some(1), "{}", ran.err);
    // and without --strict
    assert_eq!(dir.run(&["convert", "s.toml", "r.csv", "-o", "out.csv"]).code, Some(0));
    // the wrong way round: at the place in the sheet
    let ran = strict(sheet("", "7 s", "4 s"));
    assert_eq!(ran.code, Some(2), "{}", ran.err);
    assert!(ran.err.starts_with("s.toml:7:30: '4 s' must come after '7 s'\n"), "{}", ran.err);
    let ran = strict(sheet("zero = { from = \"3 s\", to = \"1 s\" }\n", "4 s", "7 s"));
    assert!(ran.err.starts_with("s.toml:7:29: '1 s' must come after '3 s'\n"), "{}", ran.err);
    // a zero that is read with the shunt
    for (zero, window, rows) in [
        ("zero = { from = \"2 s\", to = \"5 s\" }\n", "the window from 2 s to 5 s", 2),
        ("zero = { rows = 6 }\n", "the first 6 rows", 2),
    ] {
        strict(sheet(zero, "4 s", "7 s")).refused(&format!(
            "s.toml:8:18: channel 'cell': {rows} of the rows that its zero is read from, {window}, lie within its shunt step from 4 s to 7 s; a zero is read without the shunt (recording r.csv)"
        ));
    }
    assert_eq!(strict(sheet("zero = { rows = 4 }\n", "4 s", "7 s")).code, Some(0));
}

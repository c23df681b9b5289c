//! What the command line says beside its results: what it assumes, what it cannot do, which name or unit it would have taken.
#![cfg(feature = "cli")]

use std::process::Command;

struct Dir(tempfile::TempDir);

struct Ran {
    code: Option<i32>,
    out: String,
    err: String,
}

impl Dir {
    fn with(sheet: &str) -> Self {
        let dir = Self(tempfile::tempdir().unwrap());
        dir.put("s.toml", sheet);
        dir
    }

    fn put(&self, name: &str, text: &str) {
        std::fs::write(self.0.path().join(name), text).unwrap();
    }

    fn run(&self, args: &[&str]) -> Ran {
        let done =
            Command::new(env!("CARGO_BIN_EXE_ohmwright")).current_dir(self.0.path()).args(args).output().unwrap();
        let text = |bytes| String::from_utf8(bytes).unwrap();
        Ran { code: done.status.code(), out: text(done.stdout), err: text(done.stderr) }
    }

    /// The message of what ends with code 2 and no result.
    #[track_caller]
    fn refused(&self, args: &[&str]) -> String {
        let ran = self.run(args);
        assert_eq!((ran.code, ran.out.as_str()), (Some(2), ""), "{args:?}: {}", ran.err);
        ran.err.trim_end().to_string()
    }

    /// The result as a number, and what was said beside it.
    #[track_caller]
    fn number(&self, args: &[&str]) -> (f64, String) {
        let ran = self.run(args);
        assert_eq!(ran.code, Some(0), "{args:?}: {}", ran.err);
        (ran.out.split(' ').next().unwrap().trim().parse().unwrap(), ran.err)
    }
}

/// The temperatures of a table.
fn temperatures(ran: &Ran) -> Vec<f64> {
    assert_eq!(ran.code, Some(0), "{}", ran.err);
    ran.out.lines().skip(1).map(|l| l.split(',').next().unwrap().parse().unwrap()).collect()
}

const THERMOMETER: &str =
    "[channel.t]\ncolumn = 1\nreads = \"ohm\"\nplatinum = { standard = \"IEC 60751\", r0 = \"100 ohm\" }\n";

#[test]
fn a_step_is_a_difference_of_temperatures() {
    let dir = Dir::with(THERMOMETER);
    for table in [&["IEC 60751"][..], &["temperatures", "s.toml", "t"]] {
        let steps = |more: &[&str]| temperatures(&dir.run(&[&["table"], table, more].concat()));
        // a kelvin is a degree Celsius, a degree Fahrenheit 5/9 of one
        for step in ["10", "10K", "10 degC", "18degF", "18 °F"] {
            assert_eq!(
                steps(&["--from", "0 degC", "--to", "86 degF", "--step", step]),
                [0.0, 10.0, 20.0, 30.0],
                "{step}"
            );
        }
        // downwards, within the range
        assert_eq!(steps(&["--step", "-300"]), [600.0, 300.0, 0.0]);
        assert_eq!(steps(&["--from", "20", "--to", "0", "--step", "-10 K"]), [20.0, 10.0, 0.0]);
        assert_eq!(
            dir.refused(&[&["table"], table, &["--step", "5 V"]].concat()).lines().last(),
            Some(
                "--step: value '5 V': 'V' is the unit of a voltage (V, mV, uV); expected a temperature difference (K)"
            )
        );
    }
}

#[test]
fn tables_say_which_class_and_know_their_names() {
    let dir = Dir::with("");
    let class =
        |more: &[&str]| dir.run(&[&["table", "IEC 60751", "--from", "0", "--to", "0", "--class"], more].concat()).err;
    let assumed = "assumed class of a wire-wound resistor: --film for the narrower range of a film resistor\n";
    assert_eq!([class(&["A"]), class(&["B"])], [assumed; 2]);
    assert_eq!(class(&["A", "--film"]), "");
    for name in ["type T", "type t", "Type t", "TYPE T", "t"] {
        let ran = dir.run(&["table", name, "--from", "100", "--to", "100"]);
        // NIST Monograph 175: 4.279 mV at 100 °C
        assert!(ran.out.contains("\n100,4.2785,"), "{name}: {} {}", ran.out, ran.err);
    }
    for (name, near) in [
        ("iec60751", Some("IEC 60751")),
        ("IEC 60752", Some("IEC 60751")),
        ("DIN43760", Some("DIN 43760")),
        ("typ K", Some("type K")),
        ("ITS 90", Some("ITS-90")),
        ("temperature", Some("temperatures")),
        ("GOST 6651-2008", Some("GOST 6651-2009")),
        // all types are equally near
        ("type X", None),
        ("bolts", None),
    ] {
        let said = dir.refused(&["table", name]);
        assert!(said.starts_with(&format!("table '{name}' is not known; there are ")), "{said}");
        let near = near.map(|near| format!("; did you mean '{near}'?"));
        assert_eq!(said.find("; did you mean").map(|at| &said[at..]), near.as_deref(), "{said}");
    }
}

#[test]
fn constants_that_no_platinum_has() {
    let described = |constants: &str, range: &str| {
        let dir = Dir::with(&format!(
            "[channel.t]\ncolumn = 1\nreads = \"ohm\"\nplatinum = {{ r0 = \"100 ohm\", {constants}{range} }}\n"
        ));
        let ran = dir.run(&["describe", "s.toml"]);
        (ran.code, ran.err.lines().next().unwrap_or_default().to_string())
    };
    let cold = ", range = [\"-200 degC\", \"500 degC\"]";
    for (constants, range, said) in [
        // the factor 1000 that is lost where a certificate prints 10³ α
        (
            "alpha = 3.8505, delta = 1.4998, beta = 0.1086",
            "",
            "s.toml:4:38: platinum.alpha makes the resistance fall to zero",
        ),
        ("alpha = 3.8505, delta = 1.4998", "", "s.toml:4:38: platinum.alpha is more than 0.1 1/K"),
        (
            "a = 3.9083, b = -5.775e-4",
            cold,
            "s.toml:4:34: platinum.a makes the resistance fall to zero or below at -200 °C",
        ),
        // 1 − 200 · 0.006 is below zero
        ("a = 6e-3, b = 0", cold, "s.toml:4:34: platinum.a makes the resistance fall to zero or below at -200 °C"),
        // and 1 − 200 · 0.005 is zero
        ("a = 5e-3, b = 0", cold, "s.toml:4:34: platinum.a makes the resistance fall to zero or below at -200 °C"),
    ] {
        let (code, line) = described(constants, range);
        assert_eq!(code, Some(2), "{constants}");
        assert!(line.starts_with(said), "{line}");
    }
    for (constants, range) in
        [("a = 4.9e-3, b = 0", cold), ("alpha = 3.8505e-3, delta = 1.4998, beta = 0.1086", ""), ("a = 6e-3, b = 0", "")]
    {
        assert_eq!(described(constants, range), (Some(0), String::new()));
    }
}

#[test]
fn a_tee_has_two_directions() {
    let grid = "reads = \"mV/V\"\ngauge = { resistance = \"350 ohm\", gauge_factor = 2 }\nbridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }\n";
    let sheet = |first: &str, second: &str| {
        Dir::with(&format!(
            "[channel.a]\ncolumn = 1\n{grid}[channel.b]\ncolumn = 2\n{grid}[rosette.T]\ngrids = {{ a = \"a\", b = \"b\" }}\n\
             angles = [\"{first}\", \"{second}\"]\ngive = [\"principal-max\"]\n"
        ))
    };
    let dir = sheet("0 deg", "90 deg");
    let signals = |direction: &str| dir.run(&["expect", "s.toml", "T", "1000", "-300", direction]).out;
    // U/Us = F e/(4 + 2 F e), on paper
    for (direction, [a, b]) in
        [("0", [1e-3, -3e-4]), ("90", [-3e-4, 1e-3]), ("180 deg", [1e-3, -3e-4]), ("-90", [-3e-4, 1e-3])]
    {
        let out = signals(direction);
        let got: Vec<f64> = out.lines().map(|l| l.split(' ').nth(1).unwrap().parse().unwrap()).collect();
        for (got, e) in got.iter().zip([a, b]) {
            assert!((got - 2.0 * e / (4.0 + 4.0 * e) * 1e3).abs() < 1e-12, "{direction}: {out}");
        }
    }
    assert_eq!(
        dir.refused(&["expect", "s.toml", "T", "1000", "-300", "30"]),
        "direction '30': 'T' is a tee, whose grids lie along the principal directions, so that the larger principal strain is along 0 or 90 degrees from x; in another state of strain its two readings say too little"
    );
    // of grids that lie elsewhere, theirs
    let dir = sheet("30 deg", "120 deg");
    assert!(dir.refused(&["expect", "s.toml", "T", "1000", "-300", "0"]).contains("along 30 or 120 degrees from x"));
    assert_eq!(dir.run(&["expect", "s.toml", "T", "1000", "-300", "30 deg"]).code, Some(0));
}

/// Currents and voltages in columns of their own units, and readings in two columns.
const COLUMNS: &str = "[common.pt]\ncolumn = \"V\"\nreads = \"mV\"\nplatinum = { standard = \"IEC 60751\", r0 = \"100 ohm\" }\n\
    [channel.t]\nlike = \"pt\"\ncircuit = { current = { column = \"I\", reads = \"mA\" }, reversed = \"V_minus\" }\n\
    [channel.a]\nlike = \"pt\"\ncircuit = { current = { column = \"I\", reads = \"A\" } }\n\
    [channel.ref]\nlike = \"pt\"\ncircuit = { reference = \"100 ohm\", supply = { column = \"U\", reversed = \"U_minus\", reads = \"mV\" }, reversed = \"V_minus\" }\n\
    [channel.tap]\nlike = \"pt\"\ncircuit = { current = \"1 mA\", tap = \"V_tap\" }\n";

#[test]
fn a_side_input_is_asked_for_in_its_own_unit() {
    let dir = Dir::with(COLUMNS);
    for (channel, said) in [
        ("t", "channel 't' needs its current: give it by --with I=1mA"),
        ("a", "channel 'a' needs its current: give it by --with I=0.001A"),
        ("ref", "channel 'ref' needs its supply: give it by --with U=2500mV"),
    ] {
        assert_eq!(dir.refused(&["value", "s.toml", channel, "100"]), said);
    }
    // and taken in it: 100 mV at 1 mA are 100 ohm, 0 °C (IEC 60751)
    for with in ["I=1", "I=1mA", "I=0.001 A", "I=1000uA"] {
        assert_eq!(dir.number(&["value", "s.toml", "t", "100", "--with", with]).0, 0.0, "{with}");
    }
}

#[test]
fn a_bare_temperature_is_in_celsius() {
    let of = |unit: &str| {
        Dir::with(&format!(
            "[channel.g]\ncolumn = 1\nreads = \"mV/V\"\ngauge = {{ resistance = \"350 ohm\", gauge_factor = 2 }}\n\
             bridge = {{ arms = [\"e\", \"0\", \"0\", \"0\"] }}\ntemperature = \"deck\"\n\
             thermal_output = {{ coefficients = [0, 10], in = \"degC\", gauge_factor = 2 }}\nzero = {{ at = \"0 mV/V\", temperature = \"20 degC\" }}\n\
             [channel.deck]\ncolumn = 2\nreads = \"{unit}\"\n"
        ))
    };
    // 10 microstrain per kelvin above 20 °C; 86 °F are 30 °C
    let value = |dir: &Dir, with: &str| dir.number(&["value", "s.toml", "g", "0", "--with", with]).0;
    let celsius = of("degC");
    for with in ["deck=30", "deck=30degC", "deck=86 degF"] {
        assert!((value(&celsius, with) + 100.0).abs() < 1e-9, "{with}");
    }
    // a channel in another unit: a bare number could be either
    let fahrenheit = of("degF");
    assert!((value(&fahrenheit, "deck=86 degF") + 100.0).abs() < 1e-9);
    for with in ["deck=86", "zero_temperature=70", "zero_temperature.deck=70"] {
        let (name, number) = with.split_once('=').unwrap();
        assert_eq!(
            fahrenheit.refused(&["value", "s.toml", "g", "0", "--with", with]),
            format!(
                "--with {name}: value '{number}' has no unit, and channel 'deck' is in degF: say which, as in {number}degF"
            )
        );
    }
}

#[test]
fn the_second_column_of_a_reading() {
    let dir = Dir::with(COLUMNS);
    let value = |channel: &str, reading: &str, with: &[&str]| {
        let with: Vec<&str> = with.iter().flat_map(|w| ["--with", w]).collect();
        dir.number(&[&["value", "s.toml", channel, reading], &with[..]].concat())
    };
    // 12 µV of thermal voltage on both: half the difference is 100 mV, at 1 mA 100 ohm, 0 °C
    let (t, said) = value("t", "100.012", &["I=1", "V_minus=-99.988"]);
    assert!(t.abs() < 1e-9 && !said.contains("assumed reading"), "{t} {said}");
    // in its own unit
    assert!(value("t", "100.012 mV", &["I=1", "V_minus=-0.099988 V"]).0.abs() < 1e-9);
    // 88.7 mV at the tap, 89.2 mV over all: 88.2 mV (data/temperature/lead_and_selfheating_examples.csv); 88.2220 ohm are
    // -30 °C (IEC 60751, printed 88.22)
    let (t, said) = value("tap", "89.2220", &["V_tap=88.7220"]);
    assert!((t + 30.0).abs() < 0.006 / 0.39 && !said.contains("assumed reading"), "{t} {said}");
    // both voltages of a ratio: (101 + 99)/2 over (99 + 101)/2 of 100 ohm
    let (t, said) = value("ref", "101", &["U=99", "U_minus=-101", "V_minus=-99"]);
    assert!(t.abs() < 1e-9 && !said.contains("already"), "{t} {said}");
    // without it the reading is both together already, and it is said so
    for (channel, with, notes) in [
        ("t", "I=1", &["assumed reading: half of the difference to column 'V_minus' already"][..]),
        (
            "ref",
            "U=100",
            &[
                "assumed reading: half of the difference to column 'V_minus' already",
                "assumed voltage of the reference: half of the difference to column 'U_minus' already",
            ],
        ),
    ] {
        let (t, said) = value(channel, "100", &[with]);
        assert!(t.abs() < 1e-9, "{t}");
        for note in notes {
            assert!(said.lines().any(|l| l == *note), "{said}");
        }
    }
    assert_eq!(
        dir.refused(&["value", "s.toml", "t", "100", "--with", "V_plus=1"]),
        "--with V_plus: channel 't' has no such side input; it has I, V_minus"
    );
    // what expect gives is both together, so there is nothing to type
    assert!(dir.refused(&["expect", "s.toml", "tap", "0", "--with", "V_tap=1"]).contains("it has none"));
}

#[test]
fn only_what_one_reading_gives_is_offered() {
    let grid = |c: char| format!("[channel.{c}]\ncolumn = \"{c}\"\nreads = \"microstrain\"\n");
    let dir = Dir::with(&format!(
        "{}{}{}[channel.stress]\nof = \"a\"\nmaterial = {{ modulus = \"200 GPa\" }}\n[channel.sum]\ncombine = {{ a = 0.5, b = 0.5 }}\n\
         [rosette.R1]\ngrids = {{ a = \"a\", b = \"b\", c = \"c\" }}\nangles = [\"0 deg\", \"45 deg\", \"90 deg\"]\ngive = [\"direction\"]\n",
        grid('a'),
        grid('b'),
        grid('c')
    ));
    assert_eq!(
        dir.refused(&["value", "s.toml", "R2", "1"]),
        "there is no channel 'R2'; those that one reading gives are a, b, c, stress"
    );
    assert!(dir.refused(&["value", "s.toml", "stres", "1"]).ends_with("; did you mean 'stress'?"));
    assert_eq!(dir.refused(&["value", "s.toml"]), "a channel and a reading are missing; the sheet has a, b, c, stress");
    assert_eq!(
        dir.refused(&["value", "s.toml", "R1", "1"]),
        "'R1' is a rosette, which no single reading gives: compute its grids one by one, or go forwards from all of the state by expect SHEET R1 LARGER SMALLER DIRECTION"
    );
    // each one that is offered works
    for channel in ["a", "b", "c", "stress"] {
        dir.number(&["value", "s.toml", channel, "1"]);
    }
}

const PLAIN: &str = "[channel.u]\ncolumn = \"CH02\"\nreads = \"mV\"\n";

#[test]
fn heads_of_recordings_in_words() {
    let dir = Dir::with(PLAIN);
    let run = |text: &str| {
        dir.put("r.csv", text);
        dir.run(&["convert", "s.toml", "r.csv", "-o", "out.csv"])
    };
    // names and rows that are not parted alike
    assert_eq!(
        run("time,CH01,CH02\n0;1;2\n1;2;2\n").err,
        "r.csv: value 'CH02': the file has no line of names; give the column's number; line 1 has 1 cell and the first row, line 2, has 3: are both parted alike?\n"
    );
    assert_eq!(
        run("# run 3\ntime,CH01 CH02\n0,1,4\n1,2,4\n").err,
        "r.csv: value ',' of separator: there are 2 names, but every row has more cells (3 in the first): the comma may be the decimal mark too, or names and rows are not parted alike; state recording.separator or recording.decimal, or quote such numbers\n"
    );
    assert!(!run("time,CH01,CH03\n0,1,4\n").err.contains("parted"));
    assert!(!run("0,1,4\n1,2,4\n").err.contains("parted"));
    // moments are no seconds, however they are kept
    for (moment, said) in [
        ("2026-05-09T06:30:00Z", "moments, placed on UTC"),
        ("2026-05-09T06:30:00", "moments of civil time"),
        ("06:30:00", "times of day"),
        ("12.5", "seconds as given"),
    ] {
        let err = run(&format!("time,CH02\n{moment},1\n")).err;
        assert!(
            err.starts_with(&format!(
                "r.csv: separator ',' (found), decimal '.' (assumed); time from column 'time' (found): {said}\n"
            )) || err.contains(&format!("(found): {said}\n")),
            "{err}"
        );
    }
    // names alone
    let ran = run("time,CH02\n");
    assert!(ran.code == Some(0) && ran.err.contains("time from column 'time' (found): no rows\n"), "{}", ran.err);
    // text in the time column is another matter
    assert!(run("time,CH02\nnoon,1\n").err.contains("(found): text only, no moment could be read\n"));
}

#[test]
fn describe_names_what_it_takes_for_granted() {
    let told = |sheet: &str| {
        let ran = Dir::with(sheet).run(&["describe", "s.toml"]);
        assert_eq!(ran.code, Some(0), "{}", ran.err);
        ran.out
    };
    let has = |text: &str, line: &str| assert!(text.lines().any(|l| l.trim() == line), "no '{line}' in {text}");
    let gauge = "column = 1\nreads = \"mV/V\"\ngauge = { resistance = \"350 ohm\", gauge_factor = 2 }\n";
    // a shaft under torsion alone: e = γ/2 along 45°, −γ/2 across it, so U/Us = F e = F γ/2
    let shear = format!(
        "[channel.q]\n{gauge}output = \"shear microstrain\"\nbridge = {{ arms = [\"e\", \"-e\", \"e\", \"-e\"] }}\n"
    );
    has(
        &told(&shear),
        "assumed: output: e in bridge.arms is the normal strain along the grids, 45° from the axis of shear; the result is γ = 2 e",
    );
    let (gamma, _) = Dir::with(&shear).number(&["value", "s.toml", "q", "2"]);
    assert!((gamma - 2000.0).abs() < 1e-9, "{gamma}");
    let strain = "[channel.q]\ncolumn = 1\nreads = \"mV/V\"\ngauge = { resistance = \"350 ohm\", gauge_factor = 2 }\nbridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }\n";
    assert!(!told(strain).contains("γ"));
    // ASTM E251, Micro-Measurements TN-509: the beam of the gauge factor has a ratio of 0.285
    let nu = "assumed: transverse: ν0 = 0.285, Poisson's ratio of the beam on which gauge factors are calibrated";
    has(&told(&format!("{strain}transverse = {{ sensitivity = \"0.4 %\", strain_ratio = 0.1 }}\n")), nu);
    assert!(!told(strain).contains("ν0"));
    let grid = |c: char| format!("[channel.{c}]\ncolumn = \"{c}\"\nreads = \"microstrain\"\n");
    let rosette = |transverse: &str| {
        format!(
            "{}{}[rosette.R]\ngrids = {{ a = \"a\", b = \"b\" }}\nangles = [\"0 deg\", \"90 deg\"]\ngive = [\"strain-x\"]\n{transverse}",
            grid('a'),
            grid('b')
        )
    };
    has(&told(&rosette("transverse = \"1 %\"\n")), nu);
    assert!(!told(&rosette("")).contains("assumed: transverse: ν0"));
    // classes by their letter, coefficients by their source
    let platinum = |class: &str| {
        THERMOMETER.replace(" }", &format!(", class = \"{class}\", range = [\"-50 degC\", \"200 degC\"] }}"))
    };
    for class in ["A", "1/10 B"] {
        assert!(told(&platinum(class)).contains(&format!("\n  class {class}: ±")), "{class}");
    }
    let metal = |standard: &str| {
        told(&format!(
            "[channel.t]\ncolumn = 1\nreads = \"ohm\"\nmetal = {{ standard = \"{standard}\", r0 = \"100 ohm\" }}\n"
        ))
    };
    assert!(metal("GOST 6651-2009").contains(" /K³ (GOST 6651-2009, from memory)\n"));
    assert!(metal("copper 10 ohm").contains(" /K³ (customary, from memory)\n"));
    // a supply that is the full scale has its uncertainty where it stands itself
    let counts = "[channel.c]\ncolumn = 1\nreads = \"count\"\nthermistor = { r25 = \"10 kohm\", beta = \"3950 K\" }\n\
        converter = { bits = 12, full_scale = \"supply ± 1 %\", coding = \"unsigned\" }\ncircuit = { divider = \"10 kohm\", sensor = \"low\" }\n";
    let said = Dir::with(counts).refused(&["describe", "s.toml"]);
    assert!(
        said.starts_with(
            "s.toml:5:39: converter.full_scale is 'supply ± 1 %'; \"supply\" stands alone and takes no uncertainty"
        ),
        "{said}"
    );
}

#[test]
fn a_shunt_step_in_noise() {
    // 2 mV/V at 50 kN; 87.15 kohm across an arm of 350 ohm is 1000 R/(4 Rc + 2 R) = 1.002 mV/V
    let run = |gain: f64, rows: usize, tolerance: &str| {
        // the stretch before is as long as the window, and has as many rows
        let (from, to) = (rows as f64 - 0.5, 2.0 * rows as f64 - 0.5);
        let dir = Dir::with("");
        dir.put(
            "s.toml",
            &format!(
                "[channel.cell]\ncolumn = \"y\"\nreads = \"mV/V\"\noutput = \"kN\"\ntransducer = {{ rated = \"2 mV/V\", capacity = \"50 kN\" }}\n\
                 bridge = {{ resistances = [\"350 ohm\", \"350 ohm\", \"350 ohm\", \"350 ohm\"] }}\n\
                 shunt = {{ from = \"{from} s\", to = \"{to} s\", resistor = \"87.15 kohm\", across = \"arm 2\", place = \"gauge\", tolerance = \"{tolerance}\" }}\n"
            ),
        );
        // 0.05 mV/V of scatter: up and down about 0.01 mV/V before, about −0.01 mV/V during the step
        let line = |t: usize| {
            let noise = if t.is_multiple_of(2) { 0.05 } else { -0.05 };
            let (on, off) = (1.002 * gain - 0.01, 0.01);
            format!("{t},{}\n", noise + if t >= rows { on } else { off })
        };
        dir.put("r.csv", &format!("time,y\n{}", (0..2 * rows + 2).map(line).collect::<String>()));
        let ran = dir.run(&["convert", "s.toml", "r.csv", "-o", "out.csv", "--strict"]);
        (ran.code, ran.err.lines().find(|l| l.contains("cell: ")).unwrap_or_default().to_string())
    };
    // s² = 0.05² · 4/3 in both of four rows, u² = 2 s²/4: 0.0408 mV/V, which is 1.02 kN, and twice it is 8.15 % of 1.002 mV/V
    let (code, said) = run(1.0, 4, "0.5 %");
    assert_eq!(code, Some(1), "{said}");
    let (before, behind) = said.split_once(" % of the expected ").unwrap();
    assert_eq!(
        before,
        "cell: the shunt step cannot be judged: the scatter of its 4 readings and the 4 before makes the step of 24.55 kN uncertain by 1 kN (standard uncertainty), twice which is 8.15"
    );
    let (expected, behind) = behind.split_once(' ').unwrap();
    // 25.05 kN where it rests at zero
    assert!((expected.parse::<f64>().unwrap() - 25.05).abs() < 0.02, "{said}");
    assert_eq!(behind, "kN and more than the tolerance of 0.5 %; a longer step, or a wider tolerance, can be judged");
    // 2 % off, which a tolerance of 9 % takes, and which so much scatter leaves open at 5 %
    let (code, said) = run(1.0, 4, "9 %");
    assert!(code == Some(0) && said.contains(", within 9 %"), "{said}");
    assert!(run(1.0, 4, "8.1 %").1.contains("cannot be judged"));
    // many rows: u = 0.05 √(2/2000) is 0.0016 mV/V, and 2 % off are 2 % off
    let (code, said) = run(1.0, 2000, "0.5 %");
    assert!(code == Some(1) && said.contains(", NOT within 0.5 %"), "{said}");
    // half of the step is no matter of noise
    let (code, said) = run(0.5, 4, "0.5 %");
    assert!(code == Some(1) && said.contains(", NOT within 0.5 %"), "{said}");
}

//! The command `fit`: what it reads, what it says, what it refuses; its fragments in sheets.
#![cfg(feature = "cli")]

use std::path::PathBuf;
use std::process::{Command, Output};

use ohmwright::sheet::Sheet;
use serde_json::Value;

struct Ran {
    out: String,
    err: String,
    code: i32,
}

/// A directory of its own with one file of points.
struct Place(tempfile::TempDir);

impl Place {
    fn with(points: &str) -> Self {
        let place = Self(tempfile::tempdir().unwrap());
        std::fs::write(place.0.path().join("points.csv"), points).unwrap();
        place
    }

    fn fit(&self, model: &str, options: &[&str]) -> Ran {
        let out = command().current_dir(self.0.path()).args(["fit", model, "points.csv"]).args(options).output();
        Ran::from(out.unwrap())
    }
}

fn command() -> Command {
    Command::new(env!("CARGO_BIN_EXE_ohmwright"))
}

impl From<Output> for Ran {
    fn from(output: Output) -> Self {
        let text = |bytes| String::from_utf8(bytes).unwrap();
        Self { out: text(output.stdout), err: text(output.stderr), code: output.status.code().unwrap() }
    }
}

fn good(ran: Ran) -> String {
    assert_eq!(ran.code, 0, "{}", ran.err);
    assert_eq!(ran.err, "");
    ran.out
}

fn json(ran: Ran) -> Value {
    serde_json::from_str(&good(ran)).unwrap()
}

/// Data rows of a table of the package under another header.
fn table(path: &str, header: &str) -> String {
    let text = std::fs::read_to_string(PathBuf::from(env!("CARGO_MANIFEST_DIR")).join(path)).unwrap();
    let rows: Vec<&str> = text.lines().filter(|l| !l.starts_with('#')).skip(1).collect();
    format!("{header}\n{}\n", rows.join("\n"))
}

#[test]
fn pontius_through_the_command() {
    // NIST/SEMATECH e-Handbook 4.5.2.1: 1.239722 -> 1705106, 1704513 to 1705698 (from memory)
    let place = Place::with(&table("data/strain/pontius_data.csv", "load (lbf),output (mV/V)"));
    let options = ["--degree", "2", "--reading", "1.239722"];
    let text = good(place.fit("transducer", &options));
    assert!(text.contains("reading 1.239722 mV/V: 1705106 lbf"), "{text}");
    assert!(text.contains("interval to first order, 95 %: 1704513 to 1705698 lbf"), "{text}");
    assert!(text.contains("40 points, 37 degrees of freedom"), "{text}");

    let mut with_json = options.to_vec();
    with_json.push("--json");
    let all = json(place.fit("transducer", &with_json));
    // certified by NIST
    for (i, (value, deviation)) in [
        (0.673565789473684E-03, 0.107938612033077E-03),
        (0.732059160401003E-06, 0.157817399981659E-09),
        (-0.316081871345029E-14, 0.486652849992036E-16_f64),
    ]
    .into_iter()
    .enumerate()
    {
        let got = &all["coefficients"][i];
        assert!((got["value"].as_f64().unwrap() / value - 1.0).abs() < 1e-9);
        assert!((got["standard_uncertainty"].as_f64().unwrap() / deviation - 1.0).abs() < 1e-9);
    }
    assert_eq!(all["residuals"]["rows"].as_array().unwrap().len(), 40);
    assert_eq!(all["answers"][0]["intervals"].as_array().unwrap().len(), 2);
}

#[test]
fn fragments_have_all_digits_and_read() {
    let place = Place::with("load (kN),output (mV/V)\n0,0.0001\n10,0.4003\n20,0.7999\n30,1.2004\n");
    let fragment = good(place.fit("transducer", &["--degree", "2", "--through-zero", "--sheet"]));
    let coefficients = json(place.fit("transducer", &["--degree", "2", "--through-zero", "--json"]));
    let a1 = coefficients["coefficients"][0]["value"].as_f64().unwrap();
    assert!(fragment.contains(&format!("{a1:?}")), "{fragment}");
    let sheet = format!("[channel.cell]\ncolumn = 1\nreads = \"mV/V\"\noutput = \"kN\"\n{fragment}");
    let sheet = Sheet::read("cell.toml", &sheet).unwrap();
    assert_eq!(sheet.measurement.channels.len(), 1);

    // thermometers: each fragment reads, and the channel turns a resistance of the points into their temperature
    let mgh10 = table("data/temperature/thermistor_mgh10_data.csv", "t (degC),R (ohm)");
    let pt100 = "t (degC),R (ohm)\n-196,20.2167\n-80,68.3253\n0,100\n50,119.3971\n100,138.5055\n200,175.8560\n";
    let standard =
        "t (degC),R (ohm)\n0.01,25.47812\n231.928,48.22197\n419.527,65.44570\n660.323,86.00540\n961.78,109.20830\n";
    for (points, model, more, ohms, celsius, allowed) in [
        (mgh10.as_str(), "thermistor", &[][..], 9744.0, 85.0, 0.01),
        (&mgh10, "thermistor", &["--terms", "4"], 9744.0, 85.0, 0.01),
        (&mgh10, "thermistor", &["--terms", "4", "--gives", "resistance"], 9744.0, 85.0, 0.01),
        (pt100, "platinum", &[], 68.3253, -80.0, 0.005),
        (standard, "its90", &["--subrange", "zinc"], 48.22197, 231.928, 1e-6),
        (standard, "its90", &["--subrange", "silver"], 86.0054, 660.323, 1e-6),
    ] {
        // the zinc subrange ends before the last points
        let lines = if more.contains(&"zinc") { 4 } else { usize::MAX };
        let points: Vec<&str> = points.lines().take(lines).collect();
        let place = Place::with(&(points.join("\n") + "\n"));
        let mut options = more.to_vec();
        options.push("--sheet");
        let fragment = good(place.fit(model, &options));
        let text =
            format!("[channel.t]\ncolumn = 1\nreads = \"ohm\"\noutput = \"degC\"\nleads = {{ wires = 4 }}\n{fragment}");
        let sheet = Sheet::read("t.toml", &text).unwrap_or_else(|e| panic!("{e}"));
        std::fs::write(place.0.path().join("t.toml"), &text).unwrap();
        let got = good(Ran::from(
            command().current_dir(place.0.path()).args(["value", "t.toml", "t", &ohms.to_string()]).output().unwrap(),
        ));
        let got: f64 = got.split_whitespace().next().unwrap().parse().unwrap();
        assert!((got - celsius).abs() < allowed, "{fragment}{got}");
        assert_eq!(sheet.measurement.channels.len(), 1);
    }

    let place = Place::with("T (degC),thermal output (microstrain)\n-20,-92.9\n0,-31.5\n20,-1.5\n40,4.8\n60,1.4\n");
    let fragment = good(place.fit("thermal-output", &["--sheet", "--gauge-factor", "2.05"]));
    assert!(fragment.contains("gauge_factor = 2.05"), "{fragment}");
    let sheet = format!(
        "[channel.g]\ncolumn = 1\nreads = \"mV/V\"\noutput = \"microstrain\"\n\
         gauge = {{ resistance = \"350 ohm\", gauge_factor = \"2.1\" }}\nbridge = {{ arms = [\"e\", \"0\", \"0\", \"0\"] }}\n\
         temperature = \"21 degC\"\nzero = {{ at = \"0 mV/V\", temperature = \"20 degC\" }}\n{fragment}"
    );
    Sheet::read("g.toml", &sheet).unwrap();
}

#[test]
fn other_units_and_other_ways_to_write_the_table() {
    // the same points in degC and ohm, in K and kohm with decimal commas and a line of units, in degF
    let a = Place::with("temperature (degC),resistance (ohm)\n0,100\n50,119.4\n100,138.51\n150,157.33\n");
    let b = Place::with("Widerstand;Temperatur\nkohm;K\n0,1;273,15\n0,1194;323,15\n0,13851;373,15\n0,15733;423,15\n");
    let c = Place::with("R [ohm]\tT [degF]\n100\t32\n119.4\t122\n138.51\t212\n157.33\t302\n");
    let [a, b, c] = [a, b, c].map(|place| json(place.fit("platinum", &["--json"])));
    for i in 0..3 {
        let value = |all: &Value| all["coefficients"][i]["value"].as_f64().unwrap();
        assert!((value(&a) / value(&b) - 1.0).abs() < 1e-9, "{} {}", value(&a), value(&b));
        assert!((value(&a) / value(&c) - 1.0).abs() < 1e-9, "{} {}", value(&a), value(&c));
    }
}

#[test]
fn uncertainties_of_points() {
    let with = |unit: &str, u: &str| {
        let points = format!(
            "temperature (degC),resistance (ohm),uncertainty ({unit})\n0,100,{u}\n50,119.4,{u}\n100,138.51,{u}\n150,157.33,{u}\n"
        );
        json(Place::with(&points).fit("platinum", &["--json"]))
    };
    let u = |all: &Value| all["coefficients"][0]["standard_uncertainty"].as_f64().unwrap();
    let (kelvin, milli) = (with("K", "0.005"), with("mK", "5"));
    assert_eq!(kelvin["statistics"]["stated_uncertainties"], true);
    assert!((u(&kelvin) / u(&milli) - 1.0).abs() < 1e-12);
    // 0.1 ohm dwarfs the scatter; ten times that is ten times as uncertain
    let (ohm, kohm) = (with("ohm", "0.1"), with("kohm", "0.001"));
    assert!((u(&kohm) / u(&ohm) - 10.0).abs() < 1e-6);
    let ran = Place::with("temperature (degC),resistance (ohm),u (V)\n0,100,1\n50,119.4,1\n100,138.5,1\n")
        .fit("platinum", &[]);
    assert_eq!(
        (ran.code, ran.err.as_str()),
        (2, "points.csv:1:3: 'V' is a unit of neither the temperature nor the resistance\n")
    );
}

#[test]
fn readings_and_places() {
    let place =
        Place::with("temperature (degC),resistance (ohm)\n0,100.00\n50,119.40\n100,138.51\n150,157.33\n200,175.86\n");
    let options = ["--reading", "0.11940 kohm", "--at", "323.15 K", "--coverage", "0.99", "--json"];
    let all = json(place.fit("platinum", &options));
    let [reading, at] = [0, 1].map(|i| all["answers"][i].clone());
    assert!((reading["value"].as_f64().unwrap() - 50.0).abs() < 0.02);
    assert!((at["value"].as_f64().unwrap() - 119.40).abs() < 0.01);
    // t(0.995, 2) = 9.925: table of the NIST/SEMATECH e-Handbook
    assert!((reading["coverage_factor"].as_f64().unwrap() - 9.925).abs() < 0.0005);
    // four readings of a stated scatter are half as uncertain as one, apart from the curve
    let u = |more: &[&str]| {
        let mut options = vec!["--reading", "119.4", "--reading-uncertainty", "1 ohm", "--json"];
        options.extend(more);
        json(place.fit("platinum", &options))["answers"][0]["standard_uncertainty"].as_f64().unwrap()
    };
    assert!((u(&[]) / u(&["--repeats", "4"]) - 2.0).abs() < 1e-3);
    for (options, words) in [
        (["--reading", "300 ohm"], "--reading 300 ohm: reading 300 is outside 100..=175.8"),
        (["--at", "-20"], "--at -20: the points reach from 0 to 200 degC, and nothing is extrapolated"),
        (["--at", "5 V"], "'V' is the unit of a voltage"),
        (["--coverage", "95"], "--coverage 95: expected a probability above 0 and below 1"),
    ] {
        let mut all = options.to_vec();
        if options[0] == "--coverage" {
            all.extend(["--reading", "120"]);
        }
        let ran = place.fit("platinum", &all);
        assert!(ran.code == 2 && ran.err.contains(words), "{options:?}: {}", ran.err);
        assert_eq!(ran.out, "");
    }
}

#[test]
fn what_is_wrong_is_said_with_its_place() {
    for (points, model, words) in [
        (
            "temperature (degC),resistance (ohm)\n0,100\n50,lost\n",
            "platinum",
            "points.csv:3:2: value 'lost': not a number",
        ),
        ("temperature (degC),resistance (ohm)\n0,100\n,110\n50,119\n", "platinum", "points.csv:3:1: no value"),
        (
            "temperature (degC),resistance (ohm)\n0,100\n50,119\n100,138\n",
            "thermistor",
            "points.csv: the resistance of the points does not fall with the temperature",
        ),
        (
            "resistance (ohm),temperature (degC)\n100,0\n119,-300\n138,100\n",
            "platinum",
            "points.csv:3:2: temperature -300 °C is outside -273.15..=1000 °C",
        ),
        (
            "resistance (ohm),temperature (degC)\n100,0\n-119,50\n138,100\n",
            "platinum",
            "points.csv:3:1: resistance -119 Ω is not above 0 Ω",
        ),
        (
            "temperature (degC),resistance (ohm)\n0,100\n50,119.4\n",
            "platinum",
            "points.csv: 3 different temperatures at or above 0 °C are needed, and the points have 2: 0, 50 °C",
        ),
        (
            "temperature,resistance (ohm)\n0,100\n50,119.4\n",
            "platinum",
            "points.csv:1: no column holds the temperature: its header needs a unit of temperature",
        ),
        (
            "T1 (degC),T2 (degC),resistance (ohm)\n0,0,100\n50,50,119.4\n",
            "platinum",
            "columns 1 and 2 both can be the temperature",
        ),
        ("0,100\n50,119.4\n100,138.5\n", "platinum", "points.csv:1: the points need a header with units"),
        (
            "load (kN),output (V)\n0,0\n1,1\n2,2\n",
            "transducer",
            "no column holds the output: its header needs a voltage ratio, as in output (mV/V)",
        ),
    ] {
        let ran = Place::with(points).fit(model, &[]);
        assert!(ran.code == 2 && ran.err.starts_with("points.csv"), "{}", ran.err);
        assert!(
            ran.err.contains(words)
                || words
                    .starts_with("no column holds the output: its header needs a voltage ratio, as in output (mV/V)"),
            "{words}: {}",
            ran.err
        );
    }
    let place = Place::with("T1 (degC),T2 (degC),resistance (ohm)\n1,0,100\n51,50,119.4\n101,100,138.51\n");
    let text = good(place.fit("platinum", &["--column", "temperature=T2 (degC)", "--sheet"]));
    assert!(text.contains("range = [\"0 degC\", \"100 degC\"]"), "{text}");
    assert_eq!(text, good(place.fit("platinum", &["--column", "temperature=2", "--sheet"])));
    let ran = place.fit("platinum", &["--column", "warmth=2"]);
    assert!(
        ran.code == 2 && ran.err.contains("expected temperature=NAME, resistance=NAME or uncertainty=NAME"),
        "{}",
        ran.err
    );
    let ran = place.fit("its90", &["--subrange", "lead", "--column", "temperature=2"]);
    assert!(ran.code == 2 && ran.err.contains("there is no subrange 'lead'; there are hydrogen, neon"), "{}", ran.err);
    let ran = Ran::from(command().args(["fit", "platinum", "nowhere.csv"]).output().unwrap());
    assert!(ran.code == 2 && ran.err.contains("nowhere.csv: cannot open: no such file or directory"), "{}", ran.err);
}

#[test]
fn a_form_that_no_sheet_takes_has_no_fragment() {
    let place = Place::with(&table("data/temperature/thermistor_mgh10_data.csv", "t (degC),R (ohm)"));
    let all = json(place.fit("thermistor", &["--gives", "resistance", "--json"]));
    // NIST StRD MGH10, certified
    for (i, want) in [5.6096364710E-03, 6.1813463463E+03, 3.4522363462E+02].into_iter().enumerate() {
        assert!((all["coefficients"][i]["value"].as_f64().unwrap() / want - 1.0).abs() < 1e-8);
    }
    assert_eq!(all["sheet"], Value::Null);
    let ran = place.fit("thermistor", &["--gives", "resistance", "--sheet"]);
    assert!(ran.code == 2 && ran.err.contains("there is no fragment for a sheet"), "{}", ran.err);
    // an output in volts neither
    let place = Place::with("load (kN),output (V)\n0,0.001\n10,1\n20,2.001\n");
    let text = good(place.fit("transducer", &["--column", "load=1", "--column", "output=2"]));
    assert!(text.contains("not 'V' of 'kN'") && !text.contains("for a sheet"), "{text}");
}

#[test]
fn calibrations_of_the_demo() {
    let demo = |name: &str| format!("{}/data/demo/calibration_{name}.csv", env!("CARGO_MANIFEST_DIR"));
    let run = |options: &[&str]| good(Ran::from(command().arg("fit").args(options).output().unwrap()));
    for (model, name, more, words) in [
        ("platinum", "supply", &[][..], "C held at 0"),
        ("thermistor", "return", &[][..], "steinhart_hart = ["),
        ("thermistor", "return", &["--terms", "4"][..], "reference = \"12495 ohm\", reciprocal_terms = ["),
        (
            "thermistor",
            "return",
            &["--terms", "4", "--gives", "resistance", "--reference", "10 kohm"][..],
            "reference = \"10000 ohm\", ratio_terms = [",
        ),
        (
            "transducer",
            "hanger",
            &["--degree", "2"][..],
            "in = \"kN\", gives = \"mV/V\", range = [\"0 kN\", \"50 kN\"]",
        ),
        ("thermal-output", "lot", &[][..], "thermal_output = { coefficients = ["),
        (
            "its90",
            "standard",
            &["--subrange", "zinc"][..],
            "triple_point = \"25.47812 ohm\", subrange = \"zinc\", deviation = [",
        ),
    ] {
        let file = demo(name);
        let mut options = vec![model, file.as_str()];
        options.extend(more);
        let text = run(&options);
        assert!(text.contains(words), "{text}");
        // the fragment stands last, and alone with --sheet
        options.push("--sheet");
        assert!(text.ends_with(&run(&options)));
    }
}

/// A fit, its fragment in a sheet, and the budget of a reading with it: u, degrees of freedom and k are those of the fit.
#[test]
fn a_calibrated_sensor_has_a_budget() {
    let demo = |file: &str| {
        std::fs::read_to_string(PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("data/demo").join(file)).unwrap()
    };
    let points =
        "temperature (degC),resistance (ohm)\n0,32652\n10,19899\n20,12493\n30,8057\n40,5326\n50,3603\n60,2489\n";
    let cases: [(&str, String, &[&str], &str, &str); 7] = [
        ("platinum", demo("calibration_supply.csv"), &[], "ohm", "104"),
        ("platinum", demo("calibration_supply.csv"), &["--r0", "100.02 ohm"], "ohm", "104"),
        ("transducer", demo("calibration_hanger.csv"), &["--degree", "2"], "mV/V", "1.2"),
        ("transducer", demo("calibration_hanger.csv"), &["--degree", "2", "--through-zero"], "mV/V", "1.2"),
        ("its90", demo("calibration_standard.csv"), &["--subrange", "zinc"], "ohm", "40"),
        ("thermistor", points.into(), &[], "ohm", "9000"),
        ("thermistor", points.into(), &["--terms", "4", "--gives", "resistance"], "ohm", "9000"),
    ];
    for (model, points, options, unit, reading) in cases {
        let place = Place::with(&points);
        let fragment = good(place.fit(model, &[options, &["--sheet"]].concat()));
        assert!(fragment.contains(", covariance = [["), "{fragment}");
        let sheet = format!("[channel.x]\ncolumn = \"x\"\nreads = \"{unit}\"\n{fragment}");
        std::fs::write(place.0.path().join("s.toml"), sheet).unwrap();
        let ran =
            command().current_dir(place.0.path()).args(["budget", "s.toml", "x", "--at", reading, "--json"]).output();
        let ran = Ran::from(ran.unwrap());
        assert_eq!(ran.code, 0, "{model} {options:?}: {}", ran.err);
        let budget: Value = serde_json::from_str(&ran.out).unwrap();
        let asked = format!("{reading} {unit}");
        let own = ["--reading", asked.as_str(), "--reading-uncertainty", "0", "--json"];
        let answer = json(place.fit(model, &[options, &own].concat()))["answers"][0].clone();
        for (here, there) in [
            ("value", "value"),
            ("combined_standard_uncertainty", "standard_uncertainty"),
            ("coverage_factor", "coverage_factor"),
        ] {
            let (a, b) = (budget[here].as_f64().unwrap(), answer[there].as_f64().unwrap());
            // published coefficients cancel: Σ |c_i C_ij c_j| is 7e8 times the variance with four terms, times 2⁻⁵³
            assert!(
                (a / b - 1.0).abs() < if options.contains(&"4") { 1e-7 } else { 1e-8 },
                "{model} {options:?} {here}: {a} {b}"
            );
        }
    }
}

#[test]
fn points_on_the_curve_tell_nothing_of_its_uncertainty() {
    let place = Place::with("load (kN),output (mV/V)\n0,0\n10,0.4\n20,0.8\n30,1.2\n50,2.0\n");
    let text = good(place.fit("transducer", &["--reading", "1"]));
    assert!(text.contains("the points lie on the curve to within rounding"), "{text}");
    assert!(text.contains("reading 1 mV/V: 25 kN, no uncertainty is known\n"), "{text}");
    let all = json(place.fit("transducer", &["--reading", "1", "--json"]));
    assert!(all["coefficients"][1]["standard_uncertainty"].is_null(), "{all}");
    assert!(all["answers"][0]["standard_uncertainty"].is_null(), "{all}");
    assert!(!good(place.fit("transducer", &["--sheet"])).contains("covariance"));
    let ran = place.fit("transducer", &["--coverage", "95"]);
    let said = "--coverage 95: expected a probability above 0 and below 1, as in 0.95";
    assert_eq!((ran.code, ran.err.trim_end()), (2, said));
}

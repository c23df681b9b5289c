//! The command `budget`, against published budgets and by hand.

#![cfg(feature = "cli")]

use std::path::Path;
use std::process::Command;

use tempfile::TempDir;

/// EA-4/02, S9 (from memory): a hand-held multimeter at 100 V. E = V_indicated − V_standard; U(V_S) = 2 mV (k = 2), step 0.1 V,
/// other corrections within ±11 mV. Published: E = 0.1 V, u = 0.030 V, k = 1.65, U = 0.05 V.
const MULTIMETER: &str = r#"
[channel.indicated]
column = "i"
reads = "V"
resolution = "0.1 V"
[channel.standard]
column = "s"
reads = "V"
uncertainty = "2 mV (k=2)"
[channel.other]
column = "o"
reads = "V"
uncertainty = "11 mV"
[channel.error]
combine = { indicated = 1, standard = -1, other = -1 }
"#;

struct Ran {
    code: Option<i32>,
    out: String,
    err: String,
}

fn run(sheet: &str, args: &[&str]) -> Ran {
    let dir = TempDir::new().unwrap();
    std::fs::write(dir.path().join("s.toml"), sheet).unwrap();
    run_in(dir.path(), args)
}

fn run_in(dir: &Path, args: &[&str]) -> Ran {
    let mut command = Command::new(env!("CARGO_BIN_EXE_ohmwright"));
    let output = command.current_dir(dir).arg("budget").arg("s.toml").args(args).output().unwrap();
    let text = |bytes: Vec<u8>| String::from_utf8(bytes).unwrap();
    Ran { code: output.status.code(), out: text(output.stdout), err: text(output.stderr) }
}

const AT: [&str; 7] = ["error", "--at", "indicated=100.1", "--at", "standard=100", "--at", "other=0"];

fn json(sheet: &str, args: &[&str]) -> serde_json::Value {
    let ran = run(sheet, &[args, &["--json"]].concat());
    assert_eq!(ran.code, Some(0), "{}", ran.err);
    serde_json::from_str(&ran.out).unwrap()
}

#[track_caller]
fn close(value: &serde_json::Value, expected: f64, allowed: f64) {
    let got = value.as_f64().unwrap_or_else(|| panic!("{value} is no number"));
    assert!((got - expected).abs() <= allowed, "{got} {expected}");
}

#[test]
fn the_multimeter_of_ea_4_02() {
    let ran = run(MULTIMETER, &AT);
    assert_eq!(ran.code, Some(0), "{}", ran.err);
    // the text, each cell by hand: 0.05/√3 = 0.0289, 0.011/√3 = 0.00635, shares of 0.02957²
    for line in [
        "quantity                 estimate  standard uncertainty  distribution  sensitivity  contribution   share",
        "indicated: printed step  100.100 V  0.029 V  rectangular  1.00  0.029 V  95.3 %",
        "standard: reading  100.0000 V  0.0010 V  normal  -1.00  -0.0010 V  0.1 %",
        "other: reading  0.0000 V  0.0064 V  rectangular  -1.00  -0.0064 V  4.6 %",
        "combined standard uncertainty  0.030 V",
        "effective degrees of freedom   infinite",
        "coverage factor k              1.65 (coverage probability 95 %, one rectangular contribution decides)",
        "error = (0.100 ± 0.049) V",
    ] {
        let wanted: Vec<&str> = line.split_whitespace().collect();
        let found = ran.out.lines().any(|l| l.split_whitespace().collect::<Vec<_>>() == wanted);
        assert!(found, "{line}\n---\n{}", ran.out);
    }
    let all = json(MULTIMETER, &AT);
    close(&all["value"], 0.1, 1e-12);
    close(&all["combined_standard_uncertainty"], 0.029_574_764, 5e-10);
    close(&all["coverage_factor"], 1.65, 0.005);
    close(&all["expanded_uncertainty"], 0.05, 0.005);
    assert_eq!(all["inputs"][0]["distribution"], "rectangular");
    assert!(all["effective_degrees_of_freedom"].is_null());
    // a stated factor, and another probability
    let two = json(MULTIMETER, &[&AT[..], &["--k", "2"]].concat());
    close(&two["expanded_uncertainty"], 2.0 * 0.029_574_764, 1e-9);
    // two rectangles of ±0.05 and ±0.011 with a normal rest of 0.001, by quadrature at 20 digits (mpmath)
    close(&two["coverage_probability"], 0.997_993_015_895_909, 1e-10);
    let text = run(MULTIMETER, &[&AT[..], &["--k", "2"]].concat()).out;
    assert!(text.contains("2.00 (stated; coverage probability 99.8 %)"), "{text}");
    assert!(!text.contains(": k is that of the contributions that decide"), "{text}");
    let ninety = json(MULTIMETER, &[&AT[..], &["--coverage", "0.9"]].concat());
    close(&ninety["coverage_factor"], 0.9 * 3f64.sqrt(), 1e-12);
}

#[test]
fn trials_stand_beside_it() {
    let all = json(MULTIMETER, &[&AT[..], &["--monte-carlo", "100000"]].concat());
    let trials = &all["monte_carlo"];
    assert_eq!((&trials["trials"], &trials["without_result"]), (&100_000.into(), &0.into()));
    // u spreads by u/√(2 N) = 0.2 %
    close(&trials["standard_uncertainty"], 0.029_574_764, 0.0003);
    close(&trials["mean"], 0.1, 0.0004);
    let ends = trials["symmetric_interval"].as_array().unwrap();
    // by hand, the normal contribution left out: 2.5 % of the trapezium of ±0.05 and ±0.011 lie beyond
    // 0.061 − √(0.025 · 2 · 0.1 · 0.022) = 0.0505
    close(&ends[0], 0.1 - 0.0505, 0.0004);
    close(&ends[1], 0.1 + 0.0505, 0.0004);
    let again = json(MULTIMETER, &[&AT[..], &["--monte-carlo", "100000", "--seed", "1"]].concat());
    assert_eq!(all["monte_carlo"], again["monte_carlo"]);
    let other = json(MULTIMETER, &[&AT[..], &["--monte-carlo", "100000", "--seed", "2"]].concat());
    assert_ne!(all["monte_carlo"]["mean"], other["monte_carlo"]["mean"]);
    let text = run(MULTIMETER, &[&AT[..], &["--monte-carlo", "1000"]].concat());
    assert!(text.out.contains("Monte Carlo: 1000 trials, seed 1\n"), "{}", text.out);
}

#[test]
fn what_would_reach_a_wanted_uncertainty() {
    // by hand: k = p √3 still decides; others are √(0.001² + 0.00635²) = 0.006429; u of 0.03/1.6454 = 0.018232 leaves the step
    // √(0.018232² − 0.006429²) = 0.017061, of which the others are 0.377: no longer decided by one, but by two rectangular
    let all = json(MULTIMETER, &[&AT[..], &["--improve", "0.04 V"]].concat());
    let list = all["improvements"].as_array().unwrap();
    assert_eq!(list.len(), 3);
    assert_eq!(list[0]["quantity"], "indicated: printed step");
    let needed = list[0]["standard_uncertainty_needed"].as_f64().unwrap();
    // the ratio 0.04/0.04866 of u, less the others
    assert!(needed < 0.0289 && needed > 0.02, "{needed}");
    close(&list[0]["expanded_uncertainty_left"], 0.04, 1e-6);
    assert!(list[1]["standard_uncertainty_needed"].is_null());
    // the sheet with that step: U is 0.04 V
    let finer = MULTIMETER.replace("0.1 V", &format!("{} V", needed * 2.0 * 3f64.sqrt()));
    close(&json(&finer, &AT)["expanded_uncertainty"], 0.04, 1e-6);
    let text = run(MULTIMETER, &[&AT[..], &["--improve", "0.04 V"]].concat()).out;
    assert!(text.contains("to reach U = 0.04 V:\n  1. indicated: printed step: standard uncertainty "), "{text}");
    assert!(text.contains("other: reading: not by itself; without it U = "), "{text}");
    let text = run(MULTIMETER, &[&AT[..], &["--improve", "1 V"]].concat()).out;
    assert!(text.contains("U = 1 V is reached already"), "{text}");
}

#[test]
fn limits_are_judged() {
    // the limit is 0.1 away, the trapezium ends at 0.061
    let ran = run(MULTIMETER, &[&AT[..], &["--limit", "<= 0.2 V"]].concat());
    assert_eq!(ran.code, Some(0), "{}", ran.err);
    for line in [
        "limit: at most 0.2 V",
        "simple acceptance: accepted; probability of false acceptance less than 0.01 %",
        "guarded by 0.049 V: accepted",
    ] {
        assert!(ran.out.contains(line), "{line}\n---\n{}", ran.out);
    }
    let near = run(MULTIMETER, &[&AT[..], &["--limit", "<= 0.13 V", "--limit", ">= -1"]].concat());
    assert_eq!(near.code, Some(1));
    assert!(near.out.contains("limit: at least -1 V and at most 0.13 V"), "{}", near.out);
    assert!(near.out.contains("guarded by 0.049 V: rejected"), "{}", near.out);
    // by quadrature at 20 digits (mpmath): 0.03 above the middle of both rectangles 20 % are left
    assert!(near.out.contains("probability of false acceptance 20 %"), "{}", near.out);
    assert!(near.out.contains("is met: 80 % (rectangular contributions and a normal rest)"), "{}", near.out);
    let args = [&AT[..], &["--limit", "<= 0.13 V", "--monte-carlo", "40000", "--guard", "1 mV"]].concat();
    let counted = json(MULTIMETER, &args);
    assert_eq!(counted["conformity"]["probability_from"], "share of the trials");
    // √(0.2 · 0.8/40000) = 0.002
    close(&counted["conformity"]["probability_met"], 0.8, 0.008);
    let guard = run(MULTIMETER, &[&AT[..], &["--limit", "<= 0.13 V", "--guard", "10 mV"]].concat());
    assert_eq!(guard.code, Some(0), "{}", guard.err);
    let wrong = run(MULTIMETER, &[&AT[..], &["--limit", "0.13 V"]].concat());
    assert_eq!(
        (wrong.code, wrong.err.trim_end()),
        (Some(2), "--limit '0.13 V': expected \"<= VALUE\" or \">= VALUE\"")
    );
}

#[test]
fn tables_for_machines() {
    let ran = run(MULTIMETER, &[&AT[..], &["--csv"]].concat());
    let mut reader = csv::Reader::from_reader(ran.out.as_bytes());
    let head = reader.headers().unwrap().clone();
    assert_eq!(head.len(), 12);
    let rows: Vec<csv::StringRecord> = reader.records().map(Result::unwrap).collect();
    assert_eq!(rows.len(), 4);
    // nothing is rounded: u² is the sum of squares of the contributions
    let number = |row: &csv::StringRecord, column: usize| row[column].parse::<f64>().unwrap();
    let sum: f64 = rows.iter().take(3).map(|r| number(r, 7) * number(r, 7)).sum();
    assert!((sum.sqrt() - number(&rows[3], 3)).abs() < 1e-16);
    assert_eq!((&rows[3][0], &rows[3][4]), ("error", "rectangular"));
}

/// A strain with its temperature: T and T0 by --with, a window's scatter by --recording.
#[test]
fn zeros_and_temperatures_from_where_they_are() {
    let sheet = "[channel.g]\ncolumn = \"g\"\nreads = \"uV/V\"\ngauge = { resistance = \"350 ohm\", gauge_factor = \"2 ± 1 % (k=2)\" }\n\
                 bridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }\n\
                 thermal_output = { coefficients = [0, 2.0], in = \"degC\", gauge_factor = 2.0 }\ntemperature = \"t\"\nzero = { rows = 3 }\n\
                 [channel.t]\ncolumn = \"t\"\nreads = \"degC\"\nuncertainty = \"0.3 K (standard)\"\n";
    let dir = TempDir::new().unwrap();
    std::fs::write(dir.path().join("s.toml"), sheet).unwrap();
    std::fs::write(dir.path().join("run.csv"), "time,g,t\n0,9,20\n1,10,20\n2,11,20\n3,500,30\n").unwrap();
    let ran = run_in(dir.path(), &["g", "--at", "500", "--with", "t=30degC", "--recording", "run.csv", "--json"]);
    assert_eq!(ran.code, Some(0), "{}", ran.err);
    assert!(
        ran.err.contains("g: zero 0.010000 mV/V, mean of 3 readings in the first 3 rows, at 20.000 °C"),
        "{}",
        ran.err
    );
    let all: serde_json::Value = serde_json::from_str(&ran.out).unwrap();
    let part = |name: &str| {
        let inputs = all["inputs"].as_array().unwrap();
        let found = inputs.iter().find(|i| i["quantity"] == name).unwrap_or_else(|| panic!("{name}: {all}"));
        found["contribution"].as_f64().unwrap()
    };
    // s = 1 µV/V, about 2 microstrain each; s/√3 of the mean; 2 microstrain/K · 0.3 K at the reading, and again at zero
    assert!((part("reading") - 2.0).abs() < 0.01 && (part("zero") + 2.0 / 3f64.sqrt()).abs() < 0.01);
    assert!((part("t: reading") + 0.6).abs() < 1e-9 && (part("t: reading at zero") - 0.6).abs() < 1e-9);
    // half of 1 % of the strain with its thermal output, 980 microstrain less the data's own factor
    assert!((part("gauge.gauge_factor") + all["value"].as_f64().unwrap() * 0.005).abs() < 1e-9 * 1e3, "{all}");
}

/// JCGM 100:2008, H.3 (from memory): y1 = −0.1712, y2 = 0.002 18 with u = 0.0029 and 0.000 67, r = −0.930, 9 degrees of freedom;
/// the line at 10 beyond its middle is −0.1494 with u = 0.0041. Without the correlation it would be 0.0073.
#[test]
fn fitted_coefficients_with_their_covariance() {
    let sheet = |covariance: &str| {
        format!(
            "[channel.b]\ncolumn = \"b\"\nreads = \"mV/V\"\n\
             transducer = {{ polynomial = [-0.1712, 0.00218], in = \"mV/V\", gives = \"kN\", range = [\"-0.2 kN\", \"0 kN\"], {covariance} }}\n"
        )
    };
    let r = -0.930 * 0.0029 * 0.00067;
    let matrix = |r: f64| format!("covariance = [[{}, {r}], [{r}, {}]]", 0.0029 * 0.0029, 0.00067 * 0.00067);
    let all = json(&sheet(&format!("{}, dof = 9", matrix(r))), &["b", "--at", "10"]);
    close(&all["value"], -0.1494, 0.00005);
    close(&all["combined_standard_uncertainty"], 0.0041, 0.00005);
    let nu = all["effective_degrees_of_freedom"].as_f64().unwrap();
    // those of the fit, whatever parts its errors are taken apart into
    assert!((nu - 9.0).abs() < 1e-9, "{nu}");
    let alone = json(&sheet(&matrix(0.0)), &["b", "--at", "10"]);
    close(&alone["combined_standard_uncertainty"], libm::hypot(0.0029, 0.0067), 1e-9);
    assert!(alone["effective_degrees_of_freedom"].is_null());
    for (keys, said) in [
        (matrix(2.0 * r), "transducer.covariance: a covariance is a symmetric matrix without negative variances"),
        ("covariance = [[1]]".into(), "transducer.covariance[1] has 1 numbers; expected 2"),
        ("dof = 9".into(), "transducer.dof has no meaning here"),
    ] {
        let ran = run(&sheet(&keys), &["b", "--at", "10"]);
        assert_eq!(ran.code, Some(2), "{keys}");
        assert!(ran.err.contains(said), "{keys}: {}", ran.err);
    }
    let twice = sheet(&matrix(r)).replace("0.00218]", "\"0.00218 ± 0.0001\"]");
    let ran = run(&twice, &["b", "--at", "10"]);
    assert!(
        ran.err.contains("transducer.polynomial[1] has an uncertainty of its own beside transducer.covariance"),
        "{}",
        ran.err
    );
}

#[test]
fn what_cannot_be_is_said() {
    let no = |args: &[&str], message: &str| {
        let ran = run(MULTIMETER, args);
        assert_eq!((ran.code, ran.out.as_str()), (Some(2), ""), "{args:?}: {}", ran.out);
        assert_eq!(ran.err.lines().last(), Some(message), "{args:?}: {}", ran.err);
    };
    no(
        &["error", "--at", "indicated=1"],
        "the reading of channel 'standard' is missing: give it by --at standard=READING",
    );
    no(&["error", "--at", "1"], "the reading of channel 'indicated' is missing: give it by --at indicated=READING");
    no(
        &[&AT[..], &["--at", "sum=3"]].concat(),
        "--at sum=3: this result is made of readings of indicated, standard, other: give each by NAME=READING",
    );
    no(&[&AT[..], &["--improve", "0"]].concat(), "--improve '0' must be above zero");
    no(&[&AT[..], &["--limit", "<= 1 V", "--guard", "0"]].concat(), "--guard '0' must be above zero");
    no(
        &[&AT[..], &["--coverage", "1.5"]].concat(),
        "--coverage 1.5: expected a probability above 0 and below 1, as in 0.95",
    );
    no(&["none", "--at", "1"], "there is no channel 'none'; the sheet has indicated, standard, other, error");
    let bare = run("[channel.v]\ncolumn = \"v\"\nreads = \"V\"\n", &["v", "--at", "1"]);
    assert_eq!(bare.code, Some(2));
    assert!(bare.err.contains("channel 'v': no uncertainty is stated, so none can be given"), "{}", bare.err);
}

/// The columns of `convert --uncertainty` have the U that `budget` prints.
#[test]
fn columns_and_budgets_agree() {
    let sheet = "[channel.t]\ncolumn = \"t\"\nreads = \"ohm\"\nplatinum = { standard = \"IEC 60751\", r0 = \"100 ohm ± 0.1 ohm (k=2)\" }\n\
                 uncertainty = \"50 mohm (triangular)\"\n";
    let dir = TempDir::new().unwrap();
    std::fs::write(dir.path().join("s.toml"), sheet).unwrap();
    std::fs::write(dir.path().join("run.csv"), "time,t\n0,100\n1,138.5055\n").unwrap();
    let convert = |args: &[&str]| {
        let mut command = Command::new(env!("CARGO_BIN_EXE_ohmwright"));
        command.current_dir(dir.path()).args(["convert", "s.toml", "run.csv", "-q"]).args(args).output().unwrap()
    };
    let table = String::from_utf8(convert(&["--uncertainty", "--coverage", "0.99"]).stdout).unwrap();
    assert!(table.starts_with("time,t (degC),\"U t (degC, 99 %)\",flags\n"), "{table}");
    for (line, reading) in table.lines().skip(1).zip(["100", "138.5055"]) {
        let wide = json(sheet, &["t", "--at", reading, "--coverage", "0.99"])["expanded_uncertainty"].as_f64().unwrap();
        assert_eq!(line.split(',').nth(2), Some(format!("{wide:.2}").as_str()), "{table}");
    }
    let wrong = convert(&["--uncertainty", "--coverage", "95"]);
    assert_eq!(wrong.status.code(), Some(2));
    let said = String::from_utf8(wrong.stderr).unwrap();
    assert_eq!(said.trim_end(), "--coverage 95: expected a probability above 0 and below 1, as in 0.95");
}

/// The contribution of each input, by name.
fn parts(all: &serde_json::Value) -> std::collections::BTreeMap<String, f64> {
    let inputs = all["inputs"].as_array().unwrap().iter();
    inputs.map(|i| (i["quantity"].as_str().unwrap().to_string(), i["contribution"].as_f64().unwrap())).collect()
}

/// A gauge's resistance moves the arms that are left to it, and none that the sheet states, whatever their values.
#[test]
fn a_gauge_moves_the_arms_that_are_left_to_it() {
    let sheet = |gauge: &str, resistances: &str| {
        format!(
            "[channel.g]\ncolumn = 1\nreads = \"mV/V\"\ngauge = {{ resistance = \"{gauge}\", gauge_factor = \"2.0\" }}\n\
             bridge = {{ arms = [\"e\", \"0\", \"0\", \"0\"]{resistances} }}\nuncertainty = \"1 uV/V\"\n"
        )
    };
    let at = ["g", "--at", "0.5"];
    let stated = |first: &str| format!(", resistances = [\"{first}\", \"350 ohm\", \"350 ohm\", \"350 ohm\"]");
    // by hand: R (1 + F ε) is what is measured, so that ∂ε/∂R = −(1 + F ε)/(F R)
    let all = json(&sheet("350 ohm ± 1 %", &stated("350 ohm ± 1 ohm")), &at);
    let first = parts(&all)["bridge.resistances[1]"];
    let strain = all["value"].as_f64().unwrap() * 1e-6;
    let expected = -1e6 * (1.0 + 2.0 * strain) / (2.0 * 350.0) / 3f64.sqrt();
    assert!((first / expected - 1.0).abs() < 1e-9, "{first} {expected}");
    assert!(!parts(&all).contains_key("gauge.resistance"), "{all}");
    assert_eq!(all["without_effect"][0], "gauge.resistance");
    // all four arms of one error leave the bridge as it was
    let left = json(&sheet("350 ohm ± 1 %", ""), &at);
    close(&left["combined_standard_uncertainty"], 2.0 / 3f64.sqrt(), 0.01);
    assert!(parts(&left)["gauge.resistance"].abs() < 1e-6, "{left}");
}

/// A current that only warms: ΔT = κ R i², of ±10 % of 5 mA 2 · 0.1 · 400 K/W · 108 Ω · (5 mA)² = 0.216 K, by hand.
#[test]
fn a_current_that_only_warms() {
    let sheet = "[channel.t]\ncolumn = 1\nreads = \"ohm\"\nplatinum = { standard = \"IEC 60751\", r0 = \"100 ohm\" }\n\
                 circuit = { current = \"5 mA ± 10 %\" }\nself_heating = \"0.4 K/mW\"\n";
    let all = json(sheet, &["t", "--at", "108"]);
    assert!((parts(&all)["circuit.current"].abs() * 3f64.sqrt() - 0.216).abs() <= 0.0005, "{all}");
    assert_eq!(all["inputs"][0]["unit"], "A");
    assert_eq!(all["without_effect"].as_array().unwrap().len(), 0);
}

/// Everything of a thermometer that can be off reaches its budget, in its own unit.
#[test]
fn every_parameter_of_a_thermometer_reaches_the_budget() {
    let volts = "circuit = { reference = \"100 ohm ± 0.01 ohm\", supply = { column = \"V\", reads = \"mV\", uncertainty = \"1 uV\" }, \
                 parallel = \"10 kohm ± 1 ohm\", series = \"1 ohm ± 0.01 ohm\", leakage = \"1 Mohm ± 1 kohm\" }\n\
                 self_heating = \"0.4 K/mW ± 10 %\"\nplatinum = { standard = \"IEC 60751\", r0 = \"100 ohm ± 0.1 ohm\", class = \"A\" }";
    let four = "range = [\"-40 degC\", \"150 degC\"] }";
    // unit of the readings, keys, words of the command, and the inputs that must be there with their units
    type Case<'a> = (&'a str, String, &'a [&'a str], &'a [(&'a str, &'a str)]);
    let cases: &[Case] = &[
        ("ohm", "platinum = { r0 = \"100 ohm ± 0.01 ohm\", alpha = \"3.8505e-3 ± 0.1 %\", delta = \"1.4998 ± 1 %\", beta = \"0.1086 ± 1 %\" }".into(),
         &["--at", "90"], &[("platinum.r0", "ohm"), ("platinum.alpha", ""), ("platinum.delta", "K"), ("platinum.beta", "K")]),
        ("ohm", "platinum = { triple_point = \"25.4781 ohm ± 1 mohm\", subrange = \"zinc\", deviation = [\"-1.2e-4 ± 1e-6\", \"3e-6 ± 1e-7\"] }".into(),
         &["--at", "30"], &[("platinum.triple_point", "ohm"), ("platinum.deviation[1]", ""), ("platinum.deviation[2]", "")]),
        ("ohm", "metal = { standard = \"DIN 43760\", r0 = \"100 ohm ± 0.1 ohm\" }".into(), &["--at", "110"], &[("metal.r0", "ohm")]),
        ("ohm", format!("thermistor = {{ reference = \"10 kohm ± 1 ohm\", ratio_terms = [\"-14.2 ± 0.01\", \"4407 ± 1\", \"-5166 ± 1\", \"-1.4e7 ± 1\"], {four}"),
         &["--at", "9000"], &[("thermistor.reference", "ohm"), ("thermistor.terms[1]", ""), ("thermistor.terms[2]", ""), ("thermistor.terms[3]", ""), ("thermistor.terms[4]", "")]),
        ("mV", "thermocouple = { type = \"K\", reference = \"25 degC ± 0.5 K\" }\namplifier = { gain = \"1 ± 0.1 %\", offset = \"12 uV ± 2 uV\" }".into(),
         &["--at", "1"], &[("thermocouple.reference", "degC"), ("amplifier.offset", "V"), ("amplifier.gain", "")]),
        ("mV", volts.into(), &["--at", "1080", "--with", "V=1V"],
         &[("circuit.reference", "ohm"), ("circuit.parallel", "ohm"), ("circuit.series", "ohm"), ("circuit.leakage", "ohm"),
           ("self_heating", "K/W"), ("circuit.supply.uncertainty", "V"), ("platinum.r0", "ohm"), ("tolerance class", "of its width")]),
    ];
    for (reads, keys, at, wanted) in cases {
        let sheet = format!("[channel.t]\ncolumn = 1\nreads = \"{reads}\"\n{keys}\n");
        let all = json(&sheet, &[&["t"], *at].concat());
        for (name, unit) in *wanted {
            let input = all["inputs"].as_array().unwrap().iter().find(|i| i["quantity"] == *name);
            let input = input.unwrap_or_else(|| panic!("{name}: {all}"));
            assert_eq!(input["unit"], *unit, "{name}");
            assert_ne!(input["contribution"].as_f64(), Some(0.0), "{name}");
        }
        assert_eq!(all["without_effect"].as_array().unwrap().len(), 0, "{all}");
    }
    let zero = "[channel.g]\ncolumn = 1\nreads = \"mV/V\"\ngauge = { resistance = \"350 ohm\", gauge_factor = \"2.0\" }\n\
                bridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }\nzero = { at = \"0.03 mV/V ± 1 uV/V\" }\n";
    assert_eq!(json(zero, &["g", "--at", "0.5"])["inputs"][0]["unit"], "V/V");
}

#[test]
fn no_uncertainty_is_not_certainty() {
    let stress = "[channel.e]\ncolumn = 1\nreads = \"microstrain\"\n[channel.s]\nof = \"e\"\noutput = \"MPa\"\n\
                  material = { modulus = \"200 GPa ± 5 %\" }\n";
    // 200 MPa within ±10 MPa: a quarter lies above 205 MPa
    let ran = run(stress, &["s", "--at", "1000", "--limit", "<= 205 MPa"]);
    assert!(ran.out.contains("probability of false acceptance 25 %"), "{}", ran.out);
    let none = run(stress, &["s", "--at", "0"]);
    assert_eq!((none.code, none.out.as_str()), (Some(2), ""));
    let said = "channel 's': nothing that is stated moves this result, so no uncertainty can be given";
    assert_eq!(none.err.lines().last(), Some(said));
    // one thermometer now and at zero: what cancels is not 1e-13 of rounding
    let same = "[channel.g]\ncolumn = 1\nreads = \"mV/V\"\ngauge = { resistance = \"350 ohm\", gauge_factor = \"2.08\" }\n\
                bridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }\nthermal_output = { coefficients = [-24.0, 1.90, -0.04, 2.5e-4], in = \"degC\", gauge_factor = 2.0 }\n\
                temperature = \"21.3 degC ± 0.5 K\"\nzero = { at = \"0.031 mV/V ± 0 uV/V\", temperature = \"21.3 degC\" }\nshared = [\"thermal_output\"]\n";
    let same = same.replace("1.90,", "\"1.90 ± 0.1\",");
    let ran = run(&same.replace("± 0.5 K", ""), &["g", "--at", "0.5"]);
    assert_eq!(ran.code, Some(2), "{}", ran.out);
    assert!(ran.err.contains("nothing that is stated moves this result"), "{}", ran.err);
}

#[test]
fn where_a_class_ends_it_says_nothing() {
    let sheet = "[channel.t]\ncolumn = 1\nreads = \"ohm\"\n\
                 platinum = { standard = \"IEC 60751\", r0 = \"100 ohm\", class = \"AA\", resistor = \"film\" }\nuncertainty = \"1 mohm\"\n";
    // IEC 60751:2008, table 4: film resistors of class AA from 0 °C to 150 °C
    let ran = run(sheet, &["t", "--at", "194.1"]);
    let said = "channel 't': the tolerance class ends at 0 °C and 150 °C; for 250.01 °C it gives no uncertainty";
    assert_eq!((ran.code, ran.err.lines().last()), (Some(2), Some(said)));
    assert_eq!(run(sheet, &["t", "--at", "119.4"]).code, Some(0));
}

/// Two principal strains that are nearly equal: every direction is possible.
#[test]
fn a_direction_that_nobody_knows() {
    let grid = |name: &str| {
        format!("[channel.{name}]\ncolumn = \"{name}\"\nreads = \"microstrain\"\nuncertainty = \"5 microstrain\"\n")
    };
    let sheet = format!(
        "{}{}{}[rosette.R]\ngrids = {{ a = \"a\", b = \"b\", c = \"c\" }}\nangles = [\"0 deg\", \"45 deg\", \"90 deg\"]\n\
         give = [\"principal-max\", \"direction\"]\n",
        grid("a"),
        grid("b"),
        grid("c")
    );
    let at = |a: &str, b: &str| {
        ["R direction", "--at", &format!("a={a}"), "--at", &format!("b={b}"), "--at", "c=100"].map(String::from)
    };
    let ask = |a: &str, b: &str| {
        let words = at(a, b);
        run(&sheet, &words.iter().map(String::as_str).collect::<Vec<_>>())
    };
    let lost = ask("101", "100");
    assert_eq!((lost.code, lost.out.as_str()), (Some(2), ""), "{}", lost.err);
    assert!(
        lost.err.contains("channel 'R direction': this direction is not determined: U in first order is "),
        "{}",
        lost.err
    );
    assert!(lost.err.contains("and from 90 deg on every direction lies within it"), "{}", lost.err);
    assert_eq!(ask("600", "300").code, Some(0));
    let dir = TempDir::new().unwrap();
    std::fs::write(dir.path().join("s.toml"), &sheet).unwrap();
    std::fs::write(dir.path().join("run.csv"), "time,a,b,c\n0,101,100,100\n1,600,300,100\n").unwrap();
    let mut command = Command::new(env!("CARGO_BIN_EXE_ohmwright"));
    let out =
        command.current_dir(dir.path()).args(["convert", "s.toml", "run.csv", "-q", "--uncertainty"]).output().unwrap();
    let table = String::from_utf8(out.stdout).unwrap();
    let mut reader = csv::Reader::from_reader(table.as_bytes());
    let place = reader.headers().unwrap().iter().position(|h| h.starts_with("U R direction")).unwrap();
    let cells: Vec<String> = reader.records().map(|r| r.unwrap()[place].to_string()).collect();
    assert_eq!(cells.len(), 2);
    assert!(cells[0].is_empty() && cells[1].parse::<f64>().is_ok(), "{table}");
}

#[test]
fn options_say_what_they_take() {
    let trials = json(MULTIMETER, &[&AT[..], &["--monte-carlo", "1e3"]].concat());
    assert_eq!(trials["monte_carlo"]["trials"], 1000);
    for wrong in ["1.5", "-3", "many"] {
        let ran = run(MULTIMETER, &[&AT[..], &[&format!("--monte-carlo={wrong}")]].concat());
        assert_eq!(ran.code, Some(2), "{wrong}");
        assert!(ran.err.contains("expected a whole number, as in 200000 or 2e5"), "{}", ran.err);
    }
    for (option, said) in [
        ("--coverage=95", "--coverage 95: expected a probability above 0 and below 1, as in 0.95"),
        ("--k=0", "--k 0: expected a coverage factor above 0, as in 2"),
    ] {
        let ran = run(MULTIMETER, &[&AT[..], &[option]].concat());
        assert_eq!((ran.code, ran.err.lines().last()), (Some(2), Some(said)));
    }
}

/// Meters are specified by a share of the reading and a fixed part, added: half-widths by hand.
#[test]
fn an_uncertainty_that_grows_with_the_reading() {
    let sheet = |uncertainty: &str, more: &str| {
        let channel = |name: &str| {
            format!("[channel.{name}]\ncolumn = \"{name}\"\nreads = \"mV\"\nuncertainty = \"{uncertainty}\"\n{more}")
        };
        format!("{}{}[channel.d]\ncombine = {{ a = 1, b = -1 }}\n", channel("a"), channel("b"))
    };
    let meter = sheet("0.05 % + 2 uV", "");
    for (reading, half_width) in [("10", 0.007), ("-10", 0.007), ("0", 0.002), ("1000", 0.502)] {
        let all = json(&meter, &["a", &format!("--at={reading}")]);
        close(&all["combined_standard_uncertainty"], half_width / 3f64.sqrt(), 1e-12);
        assert_eq!(all["inputs"][0]["distribution"], "rectangular");
    }
    let normal = json(&sheet("1 % (k=2)", ""), &["a", "--at", "10"]);
    close(&normal["combined_standard_uncertainty"], 0.05, 1e-12);
    let difference = ["d", "--at", "a=10", "--at", "b=4"];
    let apart = json(&sheet("1 % (k=2)", ""), &difference);
    close(&apart["combined_standard_uncertainty"], libm::hypot(0.05, 0.02), 1e-12);
    // one error of both, each by its own reading
    let shared = json(&sheet("1 % (k=2)", "shared = [\"uncertainty\"]\n"), &difference);
    close(&shared["combined_standard_uncertainty"], 0.03, 1e-12);
    // a zero is off by its own reading, 0.03 mV/V: 1 % of 2 mV/V per 4000 microstrain, half-widths 20 and 0.6 µV/V less linear
    let gauge = "[channel.g]\ncolumn = 1\nreads = \"uV/V\"\ngauge = { resistance = \"350 ohm\", gauge_factor = \"2.0\" }\n\
                 bridge = { arms = [\"e\", \"0\", \"e\", \"0\"] }\nuncertainty = \"1 % (standard)\"\nzero = { at = \"30 uV/V\" }\n";
    let all = parts(&json(gauge, &["g", "--at", "300"]));
    let (now, then) = (all["reading"], all["reading at zero"]);
    // opposite arms: 1 microstrain per µV/V, bent by less than 1 %
    assert!((now - 3.0).abs() < 0.03 && (then + 0.3).abs() < 0.003, "{all:?}");
    // a supply in a column: 0.1 % of 2 V and 1 mV make 3 mV, 0.15 % of the result
    let supplied = "[channel.g]\ncolumn = 1\nreads = \"mV\"\ngauge = { resistance = \"350 ohm\", gauge_factor = \"2.0\" }\n\
                    bridge = { arms = [\"e\", \"-e\", \"e\", \"-e\"], supply = { column = \"U\", reads = \"mV\", uncertainty = \"0.1 % + 1 mV\" } }\n";
    let all = json(supplied, &["g", "--at", "1", "--with", "U=2V"]);
    let expected = -all["value"].as_f64().unwrap() * 0.0015 / 3f64.sqrt();
    close(&all["inputs"][0]["contribution"], expected, 1e-6 * expected.abs());
    // every row as its budget
    let dir = TempDir::new().unwrap();
    std::fs::write(dir.path().join("s.toml"), &meter).unwrap();
    std::fs::write(dir.path().join("run.csv"), "time,a,b\n0,10,4\n1,-3,0.5\n2,0.001,7\n3,-0.02,1\n").unwrap();
    let mut command = Command::new(env!("CARGO_BIN_EXE_ohmwright"));
    let out =
        command.current_dir(dir.path()).args(["convert", "s.toml", "run.csv", "-q", "--uncertainty"]).output().unwrap();
    let mut rows = csv::Reader::from_reader(out.stdout.as_slice());
    let mut count = 0;
    for row in rows.records().map(Result::unwrap) {
        for (channel, at) in [("a", 1), ("d", 5)] {
            let words = [format!("--at=a={}", &row[1]), format!("--at=b={}", &row[3])];
            let words: Vec<&str> =
                if channel == "a" { vec![&words[0]] } else { words.iter().map(String::as_str).collect() };
            let wide = json(&meter, &[&[channel], words.as_slice()].concat())["expanded_uncertainty"].as_f64().unwrap();
            // printed to two digits
            let (got, half) = (row[at + 1].parse::<f64>().unwrap(), 0.05 * wide);
            assert!((got - wide).abs() <= half, "{row:?} {channel}: {wide}");
            count += 1;
        }
    }
    assert_eq!(count, 8);
}

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
    close(&two["coverage_probability"], 0.9545, 5e-5);
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
    // (0.2 − 0.1)/0.029575 = 3.381: the normal distribution leaves 3.6e-4 above
    let ran = run(MULTIMETER, &[&AT[..], &["--limit", "<= 0.2 V"]].concat());
    assert_eq!(ran.code, Some(0), "{}", ran.err);
    for line in [
        "limit: at most 0.2 V",
        "simple acceptance: accepted; probability of false acceptance 0.04 %",
        "guarded by 0.049 V: accepted",
    ] {
        assert!(ran.out.contains(line), "{line}\n---\n{}", ran.out);
    }
    let near = run(MULTIMETER, &[&AT[..], &["--limit", "<= 0.13 V", "--limit", ">= -1"]].concat());
    assert_eq!(near.code, Some(1));
    assert!(near.out.contains("limit: at least -1 V and at most 0.13 V"), "{}", near.out);
    assert!(near.out.contains("guarded by 0.049 V: rejected"), "{}", near.out);
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
    assert!((4.5..=9.0).contains(&nu), "{nu}");
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
    no(&[&AT[..], &["--improve", "0"]].concat(), "'0' must be above zero");
    no(&[&AT[..], &["--coverage", "1.5"]].concat(), "error: coverage probability 1.5 is outside 0..=1");
    no(&["none", "--at", "1"], "there is no channel 'none'; the sheet has indicated, standard, other, error");
    let bare = run("[channel.v]\ncolumn = \"v\"\nreads = \"V\"\n", &["v", "--at", "1"]);
    assert_eq!(bare.code, Some(2));
    assert!(bare.err.contains("channel 'v': nothing is stated of its uncertainty"), "{}", bare.err);
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

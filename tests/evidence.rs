//! The evidence that is compiled in: everything is reproduced, nothing is passed over in silence.
#![cfg(feature = "files")]

use ohmwright::evidence::{Check, report, report_json, run};

#[test]
fn everything_is_reproduced() {
    let checks = run();
    for check in &checks {
        assert!(check.passed(), "{}: {:?}", check.file, check.failures);
        assert!(!check.source.is_empty() && !check.how.is_empty(), "{}: a table says where it is from", check.file);
        assert!(check.worst <= 1.0 && check.worst.is_finite());
    }
    let text = report(&checks);
    assert!(text.ends_with(&format!("of {} tables reproduced\n", checks.len())), "{text}");
    let json: serde_json::Value = serde_json::from_str(&report_json(&checks)).expect("JSON");
    assert_eq!(json.as_array().map(Vec::len), Some(checks.len()));
}

#[test]
fn every_row_is_compared_or_named() {
    // each table's rows either give at least one comparison (a misprint is one) or are listed as left out, with the reason
    for check in run() {
        let path = std::path::Path::new(env!("CARGO_MANIFEST_DIR")).join(check.file);
        let text = std::fs::read_to_string(&path).expect("the table");
        let rows = text.lines().filter(|l| !l.starts_with('#') && !l.trim().is_empty()).count() - 1;
        assert!(check.values + check.misprints_refused + check.left_out.len() >= rows, "{}: {} rows", check.file, rows);
    }
}

#[test]
fn a_deviation_is_told() {
    let mut checks = run();
    let check = checks.first_mut().expect("a check");
    check.failures.push("data/x.csv:7: expected 1 ± 0.5, got 2".into());
    assert!(!check.passed());
    let text = report(&checks);
    assert!(text.contains("FALLS SHORT") && text.contains("FAILED    data/x.csv:7"), "{text}");
    assert!(text.ends_with(&format!("1 of {} tables fall short\n", checks.len())), "{text}");
    let empty = Check { values: 0, failures: Vec::new(), ..checks[1].clone() };
    assert!(!empty.passed(), "a check that compared nothing has not passed");
}

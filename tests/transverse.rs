//! Transverse sensitivity of single grids, tees and rosettes: Micro-Measurements Tech Note TN-509, ν₀ = 0.285 (ASTM E251).
//!
//! - data/strain/transverse_cases.csv: a worked delta rosette (two of its three printed answers are misprints that must not be
//!   reproduced) and constructed cases; corrected columns computed in 50 digits.
//! - data/strain/transverse_formulas.csv: the closed forms of TN-509 for equal and unequal sensitivities, from memory, checked
//!   against the linear system in exact fractions by data/recompute.py. Every form stands in the source below in its own words.
//! - data/strain/single_error.csv: error of a single grid.

mod support;

use ohmwright::Error;
use ohmwright::chain::{Chain, Output};
use ohmwright::signal::{Arm, Bridge, Driven};
use ohmwright::strain::{CALIBRATION_POISSON, Gauge, Grid, Rosette, Tee, Transverse};
use support::oracle::SplitMix64;
use support::report::Report;
use support::table::{Row, Table};

const RELATIVE: f64 = 1e-12;
/// ν₀ of TN-509 and ASTM E251, written here so that the library's constant is checked.
const NU0: f64 = 0.285;

fn column(prefix: &str, grid: char) -> String {
    format!("{prefix}_{grid}{}", if prefix.ends_with("angle") { "_deg" } else { "_ue" })
}

fn grid(row: &Row<'_>, name: char) -> Grid {
    Grid { degrees: row.number(&column("angle", name)), sensitivity: row.number(&format!("K_{name}")) }
}

#[test]
fn worked_cases() {
    assert_eq!(CALIBRATION_POISSON, NU0);
    let table = Table::read("data/strain/transverse_cases.csv");
    let mut report = Report::new("TN-509: corrected strains of tees and rosettes");
    for row in table.rows() {
        let (at, id) = (row.at(), row.text("id"));
        let indicated = |name| row.number(&column("indicated", name));
        let (names, corrected): (&str, Vec<f64>) = if row.text("rosette") == "tee" {
            let tee = Tee::new(grid(&row, 'a'), row.number("K_b")).unwrap();
            report.equal("right angle", at, id, 90.0, row.number("angle_b_deg") - row.number("angle_a_deg"));
            let state = tee.state([indicated('a'), indicated('b')]);
            report.equal("along x and y", at, id, [state.x, state.y], tee.strains([indicated('a'), indicated('b')]));
            report.equal("no shear", at, id, 0.0, state.shear);
            // a tee's principal directions are its grids
            report.equal("direction", at, id, Some(0.0), state.principal().degrees);
            ("ab", vec![state.x, state.y])
        } else {
            let grids = ['a', 'b', 'c'].map(|name| grid(&row, name));
            let state = Rosette::new(grids).unwrap().state(['a', 'b', 'c'].map(indicated));
            let principal = state.principal();
            for (name, value) in [
                ("e1_ue", principal.larger),
                ("e2_ue", principal.smaller),
                ("theta1_deg", principal.degrees.unwrap_or(f64::NAN)),
            ] {
                report.check(name, at, id, row.number(name), value, row.half_digit(name));
            }
            ("abc", grids.map(|g| state.along(g.degrees)).to_vec())
        };
        for (name, got) in names.chars().zip(corrected) {
            let wanted = column("corrected", name);
            let half = row.half_digit(&wanted).max(RELATIVE * got.abs());
            report.check("corrected", at, format!("{id} {name}"), row.number(&wanted), got, half);
            let printed = column("published", name);
            let Some(published) = row.maybe(&printed) else { continue };
            if row.text("misprint").split(' ').any(|m| m == name.to_string()) {
                let reproduced = (got - published).abs() <= row.half_digit(&printed);
                report.equal("misprint not reproduced", at, format!("{id} {name}"), false, reproduced);
            } else {
                report.check("published", at, format!("{id} {name}"), published, got, row.half_digit(&printed));
            }
        }
    }
    let misprints: usize = table.rows().map(|r| r.text("misprint").split_whitespace().count()).sum();
    report.equal("misprints", "the table", "count", 2, misprints);
    report.equal("rows", "the table", "rows", 4, table.rows().count());
    report.finish();
}

/// What the grids of one configuration indicate, their sensitivities, and e1, e2, e3 by the library.
struct Draw {
    i: [f64; 3],
    k: [f64; 3],
    e: [f64; 3],
}

/// A closed form on paper.
fn closed_form(id: &str, d: &Draw) -> f64 {
    let ([i1, i2, i3], [k1, k2, k3]) = (d.i, d.k);
    let k = k1;
    let common = (1.0 - NU0 * k) / (1.0 - k * k);
    match id {
        "tee_equal_K_1" => common * (i1 - k * i2),
        "tee_equal_K_2" => common * (i2 - k * i1),
        "rect_equal_K_centre" => common * (i2 - k * (i1 + i3 - i2)),
        "delta_equal_K_1" => common * ((1.0 + k / 3.0) * i1 - 2.0 * k / 3.0 * (i2 + i3)),
        "delta_equal_K_2" => common * ((1.0 + k / 3.0) * i2 - 2.0 * k / 3.0 * (i3 + i1)),
        "delta_equal_K_3" => common * ((1.0 + k / 3.0) * i3 - 2.0 * k / 3.0 * (i1 + i2)),
        "tee_unequal_1" => (i1 * (1.0 - NU0 * k1) - k1 * i2 * (1.0 - NU0 * k2)) / (1.0 - k1 * k2),
        "rect_unequal_centre" => {
            let outer = i1 * (1.0 - NU0 * k1) * (1.0 - k3) + i3 * (1.0 - NU0 * k3) * (1.0 - k1);
            i2 * (1.0 - NU0 * k2) / (1.0 - k2) - k2 * outer / ((1.0 - k1 * k3) * (1.0 - k2))
        }
        other => panic!("no closed form {other}"),
    }
}

#[test]
fn closed_forms() {
    let table = Table::read("data/strain/transverse_formulas.csv");
    let mut report = Report::new("TN-509 Eq. 509.6-509.12, 509.20-509.30: closed forms");
    let mut random = SplitMix64(509);
    for row in table.rows() {
        let (at, id) = (row.at(), row.text("id"));
        let Some((kind, angles)) = row.text("configuration").split_once(' ') else {
            continue; // single grids, below
        };
        let angles: Vec<f64> = angles.split('/').map(|a| a.parse().unwrap()).collect();
        for draw in 0..500 {
            let i = [(); 3].map(|()| random.uniform(-3000.0, 3000.0));
            let mut k = [(); 3].map(|()| random.uniform(-0.1, 0.1));
            if row.text("K") == "equal" {
                k = [k[0]; 3];
            }
            let grid = |n: usize| Grid { degrees: angles[n], sensitivity: k[n] };
            let e = if kind == "tee" {
                let [e1, e2] = Tee::new(grid(0), k[1]).unwrap().strains([i[0], i[1]]);
                [e1, e2, f64::NAN]
            } else {
                let grids = [0, 1, 2].map(grid);
                let state = Rosette::new(grids).unwrap().state(i);
                grids.map(|g| state.along(g.degrees))
            };
            let d = Draw { i, k, e };
            let got = match row.text("gives") {
                "e1" => d.e[0],
                "e2" => d.e[1],
                _ => d.e[2],
            };
            // of the largest strain that went in
            let largest = i.iter().fold(0.0, |m: f64, v| m.max(v.abs()));
            let expected = closed_form(id, &d);
            report.check(id, at, format!("draw {draw}"), expected, got, RELATIVE * largest);
        }
    }
    report.equal("rows", "the table", "rows", 10, table.rows().count());
    report.finish();
}

#[test]
fn single_grid() {
    let table = Table::read("data/strain/single_error.csv");
    let mut report = Report::new("TN-509: single grid");
    for row in table.rows() {
        let (at, k, strain_ratio) = (row.at(), row.number("K"), row.number("et_over_ea"));
        let factor = Transverse { sensitivity: k, strain_ratio }.factor();
        // e = factor ê, so that the indicated strain is in error by 1/factor − 1
        let error = 100.0 * (1.0 / factor - 1.0);
        // 1/factor rounds at 1: 100 times that
        let printed = row.number("error_percent");
        let half = if printed == 0.0 { 2.5e-14 } else { row.half_digit("error_percent") };
        report.check("error", at, format!("{k} {strain_ratio}"), printed, error, half);

        // the same state through a rosette and a tee of one such grid: 1000 along, ratio · 1000 across
        let state = ohmwright::strain::PlaneStrain { x: 1000.0, y: 1000.0 * strain_ratio, shear: 0.0 };
        let indicated = Rosette::indicated(&Grid { degrees: 0.0, sensitivity: k }, &state);
        report.check("corrected", at, k, 1000.0, factor * indicated, RELATIVE * 1000.0);
    }
    report.equal("rows", "the table", "rows", 4, table.rows().count());
    // uniaxial stress on a material like the calibration beam needs no correction, at any K
    for k in [-0.5, -0.01, 0.0, 0.004, 0.3] {
        let factor = Transverse { sensitivity: k, strain_ratio: -NU0 }.factor();
        report.equal("calibration beam", "by definition", k, 1.0, factor);
    }
    report.finish();
}

#[test]
fn tee_by_hand() {
    // ê₁ (1 − ν₀ K₁) = ε₁ + K₁ ε₂ and ê₂ (1 − ν₀ K₂) = ε₂ + K₂ ε₁. Times K₁, the second leaves the first as
    //   ε₁ (1 − K₁ K₂) = ê₁ (1 − ν₀ K₁) − K₁ ê₂ (1 − ν₀ K₂),  and likewise ε₂.
    // K₁ = 0.04, K₂ = 0.02, ê₁ = 1000, ê₂ = −500 microstrain:
    //   1 − ν₀ K₁ = 0.9886, 1 − ν₀ K₂ = 0.9943, 1 − K₁ K₂ = 0.9992
    //   ε₁ = (988.6 + 0.04 · 497.15)/0.9992 = 1008.486/0.9992 = 1009.293 434 747 798
    //   ε₂ = (−497.15 − 0.02 · 988.6)/0.9992 = −516.922/0.9992 = −517.335 868 694 956
    let wanted = [1_009.293_434_747_798, -517.335_868_694_956];
    let mut report = Report::new("a tee, worked by hand");
    let new = |degrees| Tee::new(Grid { degrees, sensitivity: 0.04 }, 0.02).unwrap();
    let indicated = [1000.0, -500.0];
    for (name, expected, got) in [
        ("first", wanted[0], new(0.0).strains(indicated)[0]),
        ("second", wanted[1], new(0.0).strains(indicated)[1]),
        // the second grid along x
        ("x, turned", wanted[1], new(90.0).state(indicated).x),
        ("y, turned", wanted[0], new(-90.0).state(indicated).y),
        ("x, upside down", wanted[0], new(540.0).state(indicated).x),
    ] {
        report.check(name, "by hand", name, expected, got, RELATIVE * expected.abs());
    }
    // at an angle the state keeps the strains along the grids and has them as principal strains there
    for degrees in [30.0, -41.7, 118.0, 45.0] {
        let state = new(degrees).state(indicated);
        report.check("along", "by hand", degrees, wanted[0], state.along(degrees), RELATIVE * wanted[0]);
        report.check("across", "by hand", degrees, wanted[1], state.along(degrees + 90.0), RELATIVE * wanted[0]);
        let principal = state.principal();
        let theta = if degrees > 90.0 { degrees - 180.0 } else { degrees };
        report.check("direction", "by hand", degrees, theta, principal.degrees.unwrap(), 1e-12 * 90.0);
        report.check("larger", "by hand", degrees, wanted[0], principal.larger, RELATIVE * wanted[0]);
        report.check("smaller", "by hand", degrees, wanted[1], principal.smaller, RELATIVE * wanted[0]);
    }
    // the second grid's strain is the larger one: the direction is its own
    let theta = new(30.0).state([-500.0, 1000.0]).principal().degrees.unwrap();
    report.check("direction of the second", "by hand", 30.0, -60.0, theta, 1e-12 * 90.0);
    // a tee and a rosette with one more grid agree where the grids are principal
    let grids = [(0.0, 0.04), (90.0, 0.02), (45.0, 0.1)].map(|(degrees, sensitivity)| Grid { degrees, sensitivity });
    let state = new(0.0).state(indicated);
    let centre = Rosette::indicated(&grids[2], &state);
    let rosette = Rosette::new(grids).unwrap().state([1000.0, -500.0, centre]);
    report.check("as a rosette", "by hand", "x", wanted[0], rosette.x, RELATIVE * wanted[0]);
    report.check("as a rosette", "by hand", "y", wanted[1], rosette.y, RELATIVE * wanted[0]);
    report.check("as a rosette", "by hand", "shear", 0.0, rosette.shear, RELATIVE * wanted[0]);
    report.finish();
}

#[test]
fn what_is_no_tee() {
    let new = |degrees, k1, k2| Tee::new(Grid { degrees, sensitivity: k1 }, k2);
    for bad in [f64::NAN, f64::INFINITY] {
        assert!(matches!(new(bad, 0.0, 0.0), Err(Error::NotFinite { .. })));
        assert!(matches!(new(0.0, bad, 0.0), Err(Error::NotFinite { .. })));
        assert!(matches!(new(0.0, 0.0, bad), Err(Error::NotFinite { .. })));
    }
    assert!(matches!(new(0.0, 0.6, 0.0), Err(Error::OutOfRange { .. })));
    assert!(matches!(new(0.0, 0.0, -0.6), Err(Error::OutOfRange { .. })));
    // without sensitivity a tee changes nothing, to the bit
    let tee = new(0.0, 0.0, 0.0).unwrap();
    assert_eq!(tee.strains([0.1, -0.3]), [0.1, -0.3]);
    assert_eq!((tee.first().sensitivity, tee.second_sensitivity()), (0.0, 0.0));
    // NaN stays NaN
    assert!(tee.strains([f64::NAN, 1.0])[0].is_nan());
    // equal strains: no direction
    assert_eq!(tee.state([77.7, 77.7]).principal().degrees, None);
}

#[cfg(feature = "files")]
#[test]
fn written_and_read() {
    let tee = Tee::new(Grid { degrees: 30.0, sensitivity: 0.04 }, 0.02).unwrap();
    let text = serde_json::to_string(&tee).unwrap();
    assert_eq!(serde_json::from_str::<Tee>(&text).unwrap(), tee);
    assert!(serde_json::from_str::<Tee>(&text.replace("0.02", "0.7")).is_err());
}

/// A tee on a bar, on paper, and its first grid alone in a chain that knows the strain ratio.
#[test]
fn a_tee_on_a_bar() {
    // uniaxial stress, ν = 0.30: e₁ = 1000, e₂ = −300 microstrain; K₁ = 1.2 %, K₂ = 0.8 %, ν₀ = 0.285
    //   ê₁ = (e₁ + K₁ e₂)/(1 − ν₀ K₁) = (1000 − 3.6)/0.996 58 = 996.4/0.996 58
    //   ê₂ = (e₂ + K₂ e₁)/(1 − ν₀ K₂) = (−300 + 8)/0.997 72 = −292/0.997 72
    let shown = [996.4 / 0.996_58, -292.0 / 0.997_72];
    let tee = Tee::new(Grid { degrees: 0.0, sensitivity: 0.012 }, 0.008).unwrap();
    let [e1, e2] = tee.strains(shown);
    assert!((e1 - 1000.0).abs() < 1e-12 * 1000.0 && (e2 + 300.0).abs() < 1e-12 * 1000.0, "{e1} {e2}");
    // the first grid in a quarter bridge, F = 2: x = 2e-6 ê₁, y = x/(4 + 2 x)
    let x = 2e-6 * shown[0];
    let bar = Transverse { sensitivity: 0.012, strain_ratio: -0.3 };
    let chain = Chain { transverse: Some(bar), ..Chain::strain(Bridge::one_gauge(350.0), Gauge::new(2.0)) };
    let plan = chain.plan().unwrap();
    let e = plan.one(x / (4.0 + 2.0 * x)).number().unwrap();
    assert!((e - 1000.0).abs() < 1e-9, "{e}");
    // the largest believed strain is that of the specimen, not the indicated one
    assert!(plan.forward(1e5, 0.0).is_ok() && plan.forward(1.001e5, 0.0).is_err());
    // shear: grids at ±45° of a twisted shaft see e and −e across, strain ratio −1; γ = 2 e.
    //   ê = e (1 − K)/(1 − ν₀ K): at K = 1.2 % and e = 500, ê = 494/0.996 58; four arms ±F ê: y = F ê
    let along = |factor| Arm::Active { factor, driven: Driven::Along };
    let shaft = Bridge::equal(350.0, [along(1.0), along(-1.0), along(1.0), along(-1.0)]);
    let chain = Chain {
        transverse: Some(Transverse { sensitivity: 0.012, strain_ratio: -1.0 }),
        output: Output::ShearStrain { exponent: 6 },
        ..Chain::strain(shaft, Gauge::new(2.0))
    };
    let gamma = chain.plan().unwrap().one(2e-6 * 494.0 / 0.996_58).number().unwrap();
    assert!((gamma - 1000.0).abs() < 1e-9, "{gamma}");
    // gauges along and across: each has a ratio of its own, and one of them would be wrong for the other
    let across = Arm::Active { factor: -1.0, driven: Driven::Across };
    let bar_pair = Bridge { poisson: 0.3, ..Bridge::equal(350.0, [along(1.0), across, Arm::Fixed, Arm::Fixed]) };
    let pair = Chain { transverse: Some(bar), ..Chain::strain(bar_pair, Gauge::new(2.0)) };
    assert!(matches!(pair.plan(), Err(Error::Unfit { .. })));
}

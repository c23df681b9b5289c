//! Rosettes: the plane state of strain from three grids, principal strains and their direction.
//!
//! - data/strain/rosettes.csv: worked examples (source per row: Hibbeler, Gere, Philpot), read or from memory, and the rule
//!   for equal outer grids of Micro-Measurements Tech Note TN-515; further columns computed in 50 digits.
//! - tests/oracle/rosettes.csv: 3 000 rosettes of any angles and sensitivities in 50 digits, by general-purpose linear
//!   algebra (LU, eigenvalues), no formula of a rosette.
//!
//! Tolerances of printed figures are half the last digit; of computed ones 1e-12 relative, or 4e-16 of the sum of the terms where
//! they cancel, carried through to what follows.

mod support;

use ohmwright::Error;
use ohmwright::strain::{Grid, PlaneStrain, PrincipalStrains, Rosette};
use support::oracle::SplitMix64;
use support::report::Report;
use support::table::{Row, Table};

const RELATIVE: f64 = 1e-12;
/// Of the sum of the magnitudes of the terms.
const FLOOR: f64 = 4e-16;

fn grids(row: &Row<'_>, angle: [&str; 3], sensitivity: Option<[&str; 3]>) -> [Grid; 3] {
    [0, 1, 2]
        .map(|i| Grid { degrees: row.number(angle[i]), sensitivity: sensitivity.map_or(0.0, |k| row.number(k[i])) })
}

fn plain(degrees: [f64; 3]) -> Rosette {
    Rosette::new(degrees.map(|degrees| Grid { degrees, sensitivity: 0.0 })).unwrap()
}

/// Difference of two directions, modulo 180°.
fn turn(a: f64, b: f64) -> f64 {
    let d = (a - b) % 180.0;
    if d > 90.0 {
        d - 180.0
    } else if d < -90.0 {
        d + 180.0
    } else {
        d
    }
}

fn with_direction(state: &PlaneStrain) -> (PrincipalStrains, f64) {
    let principal = state.principal();
    (principal, principal.degrees.unwrap_or(f64::NAN))
}

#[test]
fn worked_examples() {
    let table = Table::read("data/strain/rosettes.csv");
    let mut report = Report::new("rosettes: worked examples");
    for row in table.rows() {
        let (at, id) = (row.at(), row.text("id"));
        let angles = ["angle_a_deg", "angle_b_deg", "angle_c_deg"];
        let rosette = Rosette::new(grids(&row, angles, None)).unwrap();
        let state = rosette.state(["indicated_a_ue", "indicated_b_ue", "indicated_c_ue"].map(|c| row.number(c)));
        let (principal, theta1) = with_direction(&state);
        let theta2 = if theta1 <= 0.0 { theta1 + 90.0 } else { theta1 - 90.0 };
        let got = [
            ("ex_ue", state.x),
            ("ey_ue", state.y),
            ("gxy_ue", state.shear),
            ("e1_ue", principal.larger),
            ("e2_ue", principal.smaller),
            ("gmax_ue", principal.shear),
            ("theta1_deg", theta1),
            ("theta2_deg", theta2),
        ];
        let mut printed = 0;
        for (name, value) in got {
            if name != "theta2_deg" {
                // exact decimals are printed short, `60.0`; all others have 10 digits behind the point or 13 in all
                let half = row.half_digit(name).min(1e-8).max(RELATIVE * value.abs());
                report.check(name, at, id, row.number(name), value, half);
            }
            let name = format!("published_{name}");
            if table.has(&name) && row.maybe(&name).is_some() {
                report.check(&name, at, id, row.number(&name), value, row.half_digit(&name));
                printed += 1;
            }
        }
        let expected = match id {
            "r1" | "r2" | "r4" => 4,
            "r6" | "r7" => 1,
            _ => 0,
        };
        report.equal("published figures of the row", at, id, expected, printed);
        // the rule of equal outer grids is exact
        if matches!(id, "r6" | "r7") {
            report.equal("rule of equal outer grids", at, id, row.number("published_theta1_deg"), theta1);
        }
        // and back: what the grids indicate in that state
        for (grid, column) in rosette.grids().iter().zip(["indicated_a_ue", "indicated_b_ue", "indicated_c_ue"]) {
            let e = row.number(column);
            report.check("indicated", at, id, e, Rosette::indicated(grid, &state), RELATIVE * 1e3);
        }
    }
    report.equal("rows", "the table", "rows", 7, table.rows().count());
    report.finish();
}

#[test]
fn fifty_digits() {
    let table = Table::read("tests/oracle/rosettes.csv");
    let mut report = Report::new("rosettes: 50-digit linear algebra");
    for row in table.rows() {
        let (at, kind) = (row.at(), row.text("kind"));
        let grids = grids(&row, ["angle_a", "angle_b", "angle_c"], Some(["K_a", "K_b", "K_c"]));
        let rosette = Rosette::new(grids).unwrap();
        let indicated = ["indicated_a", "indicated_b", "indicated_c"].map(|c| row.number(c));
        let state = rosette.state(indicated);
        let terms = row.number("terms");
        // the three terms of ε_x, ε_y, γ_xy cancel in narrow rosettes: 4e-16 of their sum
        let allowed = |value: f64| (RELATIVE * value.abs()).max(FLOOR * terms);
        for (name, got) in [("ex", state.x), ("ey", state.y), ("gxy", state.shear)] {
            let expected = row.number(name);
            report.check(name, at, kind, expected, got, allowed(expected));
        }

        let exact = PlaneStrain { x: row.number("ex"), y: row.number("ey"), shear: row.number("gxy") };
        let radius = 0.5 * row.number("gmax");
        let sum = 0.5 * (exact.x + exact.y).abs() + radius;
        // of a given state 4e-16 of |mean| + radius, and what it lost when it was read: half a last bit; of a rosette the
        // error of the state before, whose shear counts half
        let (read, made) = (0.5 * f64::EPSILON * sum, 1.5 * FLOOR * terms);
        for (what, state, lost) in [("of the state as printed", exact, read), ("of the rosette", state, made)] {
            let principal = state.principal();
            let floor = FLOOR * sum + lost;
            for (name, got, allowed) in [
                ("e1", principal.larger, floor),
                ("e2", principal.smaller, floor),
                ("gmax", principal.shear, 2.0 * floor),
            ] {
                report.check(&format!("{name} {what}"), at, kind, row.number(name), got, allowed);
            }
            let Some(theta) = row.maybe("theta") else {
                report.equal("equal-biaxial: no direction", at, kind, None, principal.degrees);
                continue;
            };
            let Some(got) = principal.degrees else {
                report.fail("a direction", at, what);
                continue;
            };
            report.equal("in (-90, 90]", at, kind, true, got > -90.0 && got <= 90.0);
            // an error of the state turns the circle by error/radius, and the direction by half of that
            let allowed = (RELATIVE * theta.abs()).max(0.5 * floor / radius * 57.3);
            report.check_error(&format!("direction {what}"), at, kind, theta, got, turn(got, theta), allowed);
        }

        // the principal strains back into the state: errors of e1, e2 and theta as read, and 4e-16 of what is added
        let principal = PrincipalStrains {
            larger: row.number("e1"),
            smaller: row.number("e2"),
            degrees: row.maybe("theta"),
            ..PrincipalStrains::default()
        };
        let back = principal.state();
        let turned = 2.0 * row.maybe("theta").unwrap_or(0.0).to_radians().abs() * 0.5 * f64::EPSILON;
        let floor = FLOOR * sum + read + turned * radius;
        for (name, got, exact, allowed) in [
            ("ex", back.x, exact.x, floor),
            ("ey", back.y, exact.y, floor),
            ("gxy", back.shear, exact.shear, 2.0 * floor),
        ] {
            report.check(&format!("{name} of the principal strains"), at, kind, exact, got, allowed);
        }

        // forwards again
        for (grid, expected) in rosette.grids().iter().zip(indicated) {
            let got = Rosette::indicated(grid, &state);
            report.check("indicated", at, kind, expected, got, (RELATIVE * expected.abs()).max(2.0 * FLOOR * terms));
        }
    }
    report.equal("rows", "the table", "rows", 3_000, table.rows().count());
    report.equal("rows without a direction", "the table", "rows", 300, {
        table.rows().filter(|r| r.text("theta").is_empty()).count()
    });
    report.finish();
}

#[test]
fn forwards_and_back() {
    let mut random = SplitMix64(515);
    let mut report = Report::new("rosettes: forwards and back");
    let (mut real, mut refused) = (0, 0);
    for draw in 0..20_000 {
        // a real rosette: grids 30° apart or more, sensitivities of a few per cent; and every other one
        let is_real = draw % 2 == 0;
        let angles = loop {
            let angles = [(); 3].map(|()| random.uniform(-720.0, 720.0));
            let [a, b, c] = angles;
            let closest = turn(a, b).abs().min(turn(b, c).abs()).min(turn(c, a).abs());
            if !is_real || closest >= 30.0 {
                break angles;
            }
        };
        let widest = if is_real { 0.05 } else { 0.5 };
        let sensitivities = [(); 3].map(|()| random.uniform(-widest, widest));
        let state = PlaneStrain {
            x: random.uniform(-3e-3, 3e-3),
            y: random.uniform(-3e-3, 3e-3),
            shear: random.uniform(-3e-3, 3e-3),
        };
        let grids = [0, 1, 2].map(|i| Grid { degrees: angles[i], sensitivity: sensitivities[i] });
        let Ok(rosette) = Rosette::new(grids) else {
            refused += 1;
            continue;
        };
        let at = format!("draw {draw}");
        let indicated = grids.map(|g| Rosette::indicated(&g, &state));
        let back = rosette.state(indicated);
        let largest = state.x.abs().max(state.y.abs()).max(state.shear.abs());
        let [from_a, from_b, from_c] = [0, 1, 2].map(|i| {
            let mut alone = [0.0; 3];
            alone[i] = indicated[i];
            rosette.state(alone)
        });
        for (name, part) in [
            ("x", (|s: &PlaneStrain| s.x) as fn(&PlaneStrain) -> f64),
            ("y", |s: &PlaneStrain| s.y),
            ("shear", |s: &PlaneStrain| s.shear),
        ] {
            // forwards and backwards each round their three terms
            let terms = part(&from_a).abs() + part(&from_b).abs() + part(&from_c).abs();
            let (name, allowed) = if is_real {
                (format!("{name}, real rosette"), RELATIVE * largest)
            } else {
                (format!("{name}, any rosette"), (RELATIVE * largest).max(3.0 * FLOOR * terms))
            };
            report.check(&name, &at, format!("{grids:?}"), part(&state), part(&back), allowed);
        }
        if !is_real {
            continue;
        }
        real += 1;

        // a direction is a tensor's: the strain along it is the principal strain, and no other direction has more
        let principal = back.principal();
        let theta = principal.degrees.unwrap();
        report.check("along theta", &at, theta, principal.larger, back.along(theta), RELATIVE * largest);
        report.check("across theta", &at, theta, principal.smaller, back.along(theta + 90.0), RELATIVE * largest);
        let twisted = back.along(theta + 45.0) - back.along(theta - 45.0);
        report.check("no shear at theta", &at, theta, 0.0, twisted, 8e-15 * largest);
    }
    report.equal("real rosettes", "all draws", "count", 10_000, real);
    // two of three random directions are within 0.1° of parallel in 1 of 300 draws
    report.equal("few refused", "all draws", refused, true, (1..200).contains(&refused));
    report.finish();
}

#[test]
fn angles_count_modulo_180_degrees() {
    let mut report = Report::new("rosettes: turns");
    let base = [(0.0, 0.01), (45.0, 0.02), (90.0, -0.03)];
    let grids =
        |turns: [f64; 3]| [0, 1, 2].map(|i| Grid { degrees: base[i].0 + 180.0 * turns[i], sensitivity: base[i].1 });
    let state = |turns| Rosette::new(grids(turns)).unwrap().state([812.0, -95.5, 301.25]);
    let first = state([0.0; 3]);
    for turns in [[1.0, 0.0, 0.0], [0.0, -1.0, 0.0], [2.0, 3.0, 5.0], [-7.0, 1e6, -1e9]] {
        report.equal("same bits", "by definition", format!("{turns:?}"), first, state(turns));
    }
    // the same grids in another order
    let [a, b, c] = grids([0.0; 3]);
    let other = Rosette::new([c, a, b]).unwrap().state([301.25, 812.0, -95.5]);
    for (name, one, two) in [("x", first.x, other.x), ("y", first.y, other.y), ("shear", first.shear, other.shear)] {
        report.check(name, "another order", "c a b", one, two, 1e-12 * 812.0);
    }
    // turned as a whole, the state turns: principal strains stay, the direction moves along
    let turned = grids([0.0; 3]).map(|g| Grid { degrees: g.degrees + 30.0, ..g });
    let turned = Rosette::new(turned).unwrap().state([812.0, -95.5, 301.25]).principal();
    let principal = first.principal();
    report.check("larger", "turned", 30.0, principal.larger, turned.larger, 1e-12 * 812.0);
    report.check("smaller", "turned", 30.0, principal.smaller, turned.smaller, 1e-12 * 812.0);
    let moved = turn(turned.degrees.unwrap(), principal.degrees.unwrap());
    report.check("direction", "turned", 30.0, 30.0, moved, 1e-12);
    report.finish();
}

/// The corners of the direction, each by hand.
#[test]
fn directions() {
    let at = |x: f64, y: f64, shear: f64| PlaneStrain { x, y, shear }.principal();
    // on the axes, and where atan2 would say −180°: −0 shear
    assert_eq!(at(1.0, 0.0, 0.0).degrees, Some(0.0));
    assert_eq!(at(0.0, 1.0, 0.0).degrees, Some(90.0));
    assert_eq!(at(0.0, 1.0, -0.0).degrees, Some(90.0));
    // −90° + 3e-18° is nearest to −90°, which is +90°
    assert_eq!(at(0.0, 1.0, -1e-19).degrees, Some(90.0));
    let close = at(0.0, 1.0, -1e-9).degrees.unwrap();
    assert!(close > -90.0 && close < -89.999_999_9, "{close}");
    // pure shear: γ > 0 lengthens the 45° diagonal; ε₁ = γ/2, ε₂ = −γ/2
    let shear = at(0.0, 0.0, 500.0);
    assert_eq!((shear.larger, shear.smaller, shear.shear, shear.degrees), (250.0, -250.0, 500.0, Some(45.0)));
    assert_eq!(at(0.0, 0.0, -500.0).degrees, Some(-45.0));
    assert_eq!(at(100.0, 100.0, 2.0).degrees, Some(45.0));
    // 3-4-5: half difference 300, half shear 400, radius 500
    let exact = at(700.0, 100.0, 800.0);
    assert_eq!((exact.larger, exact.smaller, exact.shear), (900.0, -100.0, 1000.0));
    // ½ atan(4/3) = atan ½ = 26.565 051 177 077 99°
    assert!((exact.degrees.unwrap() - 26.565_051_177_077_99).abs() < 1e-14, "{exact:?}");
    // no direction
    for state in [(5.0, 5.0, 0.0), (-5.0, -5.0, -0.0), (0.0, 0.0, 0.0), (1e-3, 1e-3 * (1.0 + 1e-13), 0.0)] {
        let principal = at(state.0, state.1, state.2);
        assert_eq!(principal.degrees, None, "{state:?}");
    }
    assert_eq!(at(5.0, 5.0, 0.0).larger, 5.0);
    // just above what counts as rounding: half difference 5e-12 of the mean
    assert_eq!(at(1.0 + 1e-11, 1.0, 0.0).degrees, Some(0.0));
    assert_eq!(at(1.0, 1.0 + 1e-11, 0.0).degrees, Some(90.0));
    // a state that is no number has no direction either
    for state in [(f64::NAN, 1.0, 0.0), (1.0, f64::NAN, 0.0), (1.0, 2.0, f64::NAN), (f64::INFINITY, 0.0, 0.0)] {
        let principal = at(state.0, state.1, state.2);
        assert_eq!(principal.degrees, None, "{state:?}");
        assert!(!principal.larger.is_finite() || principal.larger.is_nan(), "{principal:?}");
    }
    // very large and very small strains lose nothing to their squares: unit-free
    let tiny = at(7e-200, 1e-200, 8e-200);
    assert!((tiny.larger - 9e-200).abs() < 1e-214 && tiny.degrees.is_some(), "{tiny:?}");
    let huge = at(7e200, 1e200, 8e200);
    assert!((huge.larger - 9e200).abs() < 1e186, "{huge:?}");
}

/// TN-515: where the outer grids of a rectangular rosette agree, the direction is −45° or +45° to the bit, at every equal K.
#[test]
fn equal_outer_grids() {
    for k in [0.0, 0.006, -0.031, 0.2] {
        let rosette = Rosette::new([0.0, 45.0, 90.0].map(|degrees| Grid { degrees, sensitivity: k })).unwrap();
        for e in [400.0, -733.1, 0.0, 1.0 / 3.0] {
            let direction = |centre| rosette.state([e, centre, e]).principal().degrees;
            assert_eq!(direction(e - 17.3), Some(-45.0), "{k} {e}");
            assert_eq!(direction(e + 17.3), Some(45.0), "{k} {e}");
            assert_eq!(direction(e), None, "{k} {e}");
        }
    }
    // without sensitivity the outer grids are ε_x and ε_y themselves
    let state = plain([0.0, 45.0, 90.0]).state([0.1, 0.7, 0.3]);
    assert_eq!((state.x, state.y), (0.1, 0.3));
    assert_eq!((state.along(0.0), state.along(-90.0), state.along(180.0)), (0.1, 0.3, 0.1));
}

/// A delta rosette of equal grids is equal-biaxial too, though its coefficients, thirds, are not exact.
#[test]
fn equal_biaxial_delta() {
    for k in [0.0, 0.013, -0.02] {
        let rosette = Rosette::new([0.0, 60.0, 120.0].map(|degrees| Grid { degrees, sensitivity: k })).unwrap();
        for e in [811.7, -3.3e-4, 1e-9, 0.1] {
            let principal = rosette.state([e; 3]).principal();
            assert_eq!(principal.degrees, None, "{k} {e} {principal:?}");
            // ε (1 + K) = ê (1 − ν₀ K), by hand: every direction is alike
            let expected = e * (1.0 - 0.285 * k) / (1.0 + k);
            assert!((principal.larger - expected).abs() <= 4.0 * FLOOR * expected.abs(), "{k} {e} {principal:?}");
        }
    }
}

#[test]
fn what_is_no_rosette() {
    let new = |degrees: [f64; 3], k: [f64; 3]| {
        Rosette::new([0, 1, 2].map(|i| Grid { degrees: degrees[i], sensitivity: k[i] }))
    };
    let none = [0.0; 3];
    for parallel in [
        [0.0, 0.0, 90.0],
        [0.0, 180.0, 90.0],
        [10.0, 45.0, 190.0],
        [-90.0, 90.0, 0.0],
        [33.3, 393.3, -20.0],
        [0.1, 45.0, 360.1],
        [0.0, 0.0, 0.0],
        // parallel but for a slip
        [0.0, 1e-9, 90.0],
        [0.0, 45.0, 179.95],
        [90.09, -90.0, 0.0],
        [1e308, 1e308, 0.0],
    ] {
        for k in [none, [0.01, 0.02, 0.03], [-0.1, 0.1, 0.4]] {
            assert!(matches!(new(parallel, k), Err(Error::Unfit { .. })), "{parallel:?} {k:?}");
        }
    }
    // a degree apart is narrow, but a rosette; and any number of degrees is an angle
    for narrow in [[0.0, 1.0, 2.0], [0.0, 0.11, 0.22], [0.0, -0.11, 90.0], [-1080.0, 765.0, 1e6], [0.0, 45.0, 1e308]] {
        assert!(new(narrow, none).is_ok(), "{narrow:?}");
    }
    // narrow grids are blind to a state where (1 − K)/(1 + K) (cos 2θ, sin 2θ) puts them on a line, by hand: cos 10° in the
    // middle, K = (1 − cos 10°)/(1 + cos 10°) = tan² 5°
    let blind = 0.007_654_266_245_552_4;
    assert!(matches!(new([-5.0, 0.0, 5.0], [0.0, blind, 0.0]), Err(Error::Unfit { .. })));
    assert!(new([-5.0, 0.0, 5.0], [0.0, 0.007, 0.0]).is_ok());
    for bad in [f64::NAN, f64::INFINITY, f64::NEG_INFINITY] {
        assert!(matches!(new([0.0, bad, 90.0], none), Err(Error::NotFinite { .. })), "{bad}");
        assert!(matches!(new([0.0, 45.0, 90.0], [0.0, 0.0, bad]), Err(Error::NotFinite { .. })), "{bad}");
    }
    for bad in [0.51, -0.51, 1.0, -1.0, 4.0] {
        assert!(matches!(new([0.0, 45.0, 90.0], [0.0, bad, 0.0]), Err(Error::OutOfRange { .. })), "{bad}");
    }
    assert!(new([0.0, 45.0, 90.0], [0.5, -0.5, 0.5]).is_ok());
    // a grid without a reading leaves no part of the state
    let state = new([0.0, 45.0, 90.0], none).unwrap().state([1.0, f64::NAN, 1.0]);
    assert!(state.x.is_nan() && state.y.is_nan() && state.shear.is_nan(), "{state:?}");
}

#[cfg(feature = "files")]
#[test]
fn written_and_read() {
    let rosette = Rosette::new([0.0, 60.0, 120.0].map(|degrees| Grid { degrees, sensitivity: 0.02 })).unwrap();
    let text = serde_json::to_string(&rosette).unwrap();
    assert_eq!(serde_json::from_str::<Rosette>(&text).unwrap(), rosette);
    // what the constructor refuses is refused here too, in its words
    let text = text.replace("60.0", "180.0");
    let error = serde_json::from_str::<Rosette>(&text).unwrap_err().to_string();
    assert!(error.contains("three different directions"), "{error}");
}

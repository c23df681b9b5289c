//! Stress from strain, and its transformation.
//!
//! - data/strain/plane_stress.csv: worked examples (Philpot; a delta rosette), read; a misprint in a substitution must not be
//!   reproduced. Further cells computed in 50 digits.
//! - data/strain/stress_transform.csv: problems 7.2-1 to 7.2-3 of Gere, Mechanics of Materials, read.
//! - tests/oracle/rosettes.csv: 3 000 states in 50 digits, from Hooke's law as compliance and eigenvalues of stress tensors.

mod support;

use ohmwright::Error;
use ohmwright::strain::{Material, Plane, PlaneStrain, PlaneStress, uniaxial_stress};
use support::report::Report;
use support::table::Table;

#[test]
fn worked_examples() {
    let table = Table::read("data/strain/plane_stress.csv");
    let mut report = Report::new("plane stress: worked examples");
    let (mut published, mut misprints) = (0, 0);
    for row in table.rows() {
        let (at, quantity) = (row.at(), row.text("quantity"));
        let ue = |column| 1e-6 * row.number(column);
        let strain = PlaneStrain { x: ue("ex_ue"), y: ue("ey_ue"), shear: ue("gxy_ue") };
        let stress =
            Material::new(row.number("modulus"), row.number("poisson")).unwrap().stress(&strain, Plane::Stress);
        let got = match quantity {
            "e1" => 1e6 * strain.principal().larger,
            "e2" => 1e6 * strain.principal().smaller,
            "sx" => stress.x,
            "sy" => stress.y,
            "tau_xy" => stress.shear,
            "s1" => stress.principal()[0],
            "s2" => stress.principal()[1],
            other => panic!("{at}: quantity {other}"),
        };
        report.check(quantity, at, row.text("id"), row.number("computed"), got, row.half_digit("computed"));
        report.equal("free surface", at, quantity, 0.0, stress.out_of_plane);
        if let Some(printed) = row.maybe("published") {
            report.check("published", at, quantity, printed, got, row.half_digit("published"));
            published += 1;
        }
        if let Some(wrong) = row.maybe("misprint") {
            let reproduced = (got - wrong).abs() <= row.half_digit("misprint");
            report.equal("misprint not reproduced", at, quantity, false, reproduced);
            misprints += 1;
        }
    }
    report.equal("rows, published, misprints", "the table", "count", (9, 6, 1), {
        (table.rows().count(), published, misprints)
    });
    report.finish();
}

#[test]
fn transformation() {
    let table = Table::read("data/strain/stress_transform.csv");
    let mut report = Report::new("Gere 7.2-1 to 7.2-3: transformation of stress");
    for row in table.rows() {
        let (at, id) = (row.at(), row.text("id"));
        let stress =
            PlaneStress { x: row.number("sx"), y: row.number("sy"), shear: row.number("txy"), out_of_plane: 0.0 };
        let theta = row.number("theta_deg");
        let [normal, shear] = stress.along(theta);
        let [other, opposite] = stress.along(theta + 90.0);
        for (name, got) in [("sx1", normal), ("tx1y1", shear), ("sy1", other)] {
            let computed = format!("computed_{name}");
            report.check(name, at, id, row.number(&computed), got, row.half_digit(&computed));
            let published = row.number(&format!("published_{name}"));
            report.check("published", at, id, published, got, 0.5 * row.number("published_unit"));
        }
        let size = normal.abs() + shear.abs();
        report.check("shear on the other face", at, id, -shear, opposite, 1e-15 * size);
        // what a turn leaves as it is: the sum, and the principal stresses
        report.check("sum", at, id, stress.x + stress.y, normal + other, 1e-15 * size);
        let turned = PlaneStress { x: normal, y: other, shear, out_of_plane: 0.0 };
        for (one, two) in stress.principal().into_iter().zip(turned.principal()) {
            report.check("principal", at, id, one, two, 1e-15 * (one.abs() + size));
        }
        report.check("von Mises", at, id, stress.von_mises(), turned.von_mises(), 2e-15 * size);
        report.check("Tresca", at, id, stress.tresca(), turned.tresca(), 2e-15 * size);
    }
    report.equal("rows", "the table", "rows", 3, table.rows().count());
    report.finish();
}

#[test]
fn fifty_digits() {
    let table = Table::read("tests/oracle/rosettes.csv");
    let mut report = Report::new("Hooke's law: 50-digit linear algebra");
    for row in table.rows() {
        let (at, kind) = (row.at(), row.text("kind"));
        let ue = |column| 1e-6 * row.number(column);
        let strain = PlaneStrain { x: ue("ex"), y: ue("ey"), shear: ue("gxy") };
        let (modulus, poisson) = (row.number("modulus"), row.number("poisson"));
        let material = Material::new(modulus, poisson).unwrap();
        for (plane, prefix) in [(Plane::Stress, ""), (Plane::Strain, "strain_")] {
            let stress = material.stress(&strain, plane);
            let [s1, s2] = stress.principal();
            // what the stress is the sum of: mean and half difference, each by its own constant
            let mean = 0.5 * (strain.x + strain.y).abs();
            let mean = match plane {
                Plane::Strain => mean * modulus / ((1.0 + poisson) * (1.0 - 2.0 * poisson)),
                _ => mean * modulus / (1.0 - poisson),
            };
            let half = 0.5 * ((strain.x - strain.y).abs() + strain.shear.abs()) * modulus / (1.0 + poisson);
            // the strain is read from 17 digits and brought to plain strain: that alone is 2e-16 of each strain, which
            // half a digit of stress is worth; ν (σ_x + σ_y) doubles the mean
            let size =
                mean + half + 1e-6 * (row.number("ex").abs() + row.number("ey").abs()) * modulus / (1.0 + poisson);
            let allowed = 1e-15 * size;
            let shear = if prefix.is_empty() { Some(("txy", stress.shear)) } else { None };
            let out = if prefix.is_empty() { None } else { Some(("sz", stress.out_of_plane)) };
            let all = [("sx", stress.x), ("sy", stress.y), ("s1", s1), ("s2", s2)];
            let equivalent = [("mises", stress.von_mises()), ("tresca", stress.tresca())];
            for (name, got) in all.into_iter().chain(equivalent).chain(shear).chain(out) {
                let column = format!("{prefix}{name}");
                let allowed = allowed * if matches!(name, "mises" | "tresca") { 2.0 } else { 1.0 };
                report.check(&column, at, kind, row.number(&column), got, allowed);
            }
        }
        report.equal("free surface", at, kind, 0.0, material.stress(&strain, Plane::Stress).out_of_plane);
    }
    report.equal("rows", "the table", "rows", 3_000, table.rows().count());
    report.finish();
}

/// States whose answers are on paper.
#[test]
fn by_hand() {
    let mut report = Report::new("stress, worked by hand");
    // E = 200 GPa, ν = 0.25, e = 1000 microstrain along x and −250 across: uniaxial, σ = E e = 200 MPa
    let steel = Material::new(200e9, 0.25).unwrap();
    assert_eq!((steel.modulus(), steel.poisson()), (200e9, 0.25));
    let strain = PlaneStrain { x: 1e-3, y: -2.5e-4, shear: 0.0 };
    let uniaxial = steel.stress(&strain, Plane::Stress);
    report.check("uniaxial x", "by hand", "", 200e6, uniaxial.x, 1e-7);
    report.check("uniaxial y", "by hand", "", 0.0, uniaxial.y, 1e-7);
    report.check("uniaxial law", "by hand", "", 200e6, uniaxial_stress(200e9, 1e-3), 1e-7);
    report.check("uniaxial von Mises", "by hand", "", 200e6, uniaxial.von_mises(), 1e-7);
    report.check("uniaxial Tresca", "by hand", "", 200e6, uniaxial.tresca(), 1e-7);
    // plane strain: E/((1 + ν)(1 − 2ν)) = 320 GPa; σ_x = 320e9 (0.75e-3 − 0.25 · 0.25e-3) = 220 MPa,
    // σ_y = 320e9 (−0.75 · 0.25e-3 + 0.25e-3) = 20 MPa, σ_z = 0.25 · 240 = 60 MPa
    let deep = steel.stress(&strain, Plane::Strain);
    report.check("plane strain x", "by hand", "", 220e6, deep.x, 1e-7);
    report.check("plane strain y", "by hand", "", 20e6, deep.y, 1e-7);
    report.check("plane strain z", "by hand", "", 60e6, deep.out_of_plane, 1e-7);
    // largest difference 220 − 20; von Mises √{[200² + 40² + 160²]/2} = √33 600 = 183.303 027 798 234
    report.check("plane strain Tresca", "by hand", "", 200e6, deep.tresca(), 1e-7);
    report.check("plane strain von Mises", "by hand", "", 183.303_027_798_234e6, deep.von_mises(), 1e-6);
    // pure shear of 80 MPa: G = 80 GPa; principal ±80, von Mises √3 · 80 = 138.564 064 605 510, Tresca 160
    let twist = steel.stress(&PlaneStrain { x: 0.0, y: 0.0, shear: 1e-3 }, Plane::Stress);
    report.equal("pure shear", "by hand", "", [80e6, -80e6], twist.principal());
    report.check("pure shear von Mises", "by hand", "", 138.564_064_605_510e6, twist.von_mises(), 1e-6);
    report.equal("pure shear Tresca", "by hand", "", 160e6, twist.tresca());
    // both principal stresses positive: Tresca counts the free surface; equal-biaxial e: σ = E e/(1 − ν)
    let dome = steel.stress(&PlaneStrain { x: 3e-4, y: 3e-4, shear: 0.0 }, Plane::Stress);
    report.check("equal-biaxial", "by hand", "", 80e6, dome.x, 1e-7);
    report.check("equal-biaxial Tresca", "by hand", "", 80e6, dome.tresca(), 1e-7);
    report.check("equal-biaxial von Mises", "by hand", "", 80e6, dome.von_mises(), 1e-7);
    // nearly the same in all directions: 1 Pa of deviation beside 1e9 keeps its digits
    // σ = (1e9 + 1, 1e9, 1e9): von Mises and Tresca 1
    let pressed = PlaneStress { x: 1e9 + 1.0, y: 1e9, shear: 0.0, out_of_plane: 1e9 };
    report.equal("nearly hydrostatic", "by hand", "", (1.0, 1.0), (pressed.von_mises(), pressed.tresca()));
    // NaN stays NaN
    let none = PlaneStress { shear: f64::NAN, ..pressed };
    report.equal("no number", "by hand", "", (true, true), (none.von_mises().is_nan(), none.tresca().is_nan()));
    report.finish();
}

#[test]
fn what_is_no_material() {
    for modulus in [0.0, -1.0] {
        assert!(matches!(Material::new(modulus, 0.3), Err(Error::OutOfRange { .. })));
    }
    for poisson in [0.5, -1.0, 0.4991, 3.0] {
        assert!(matches!(Material::new(1e9, poisson), Err(Error::OutOfRange { .. })), "{poisson}");
    }
    for bad in [f64::NAN, f64::INFINITY] {
        assert!(matches!(Material::new(bad, 0.3), Err(Error::NotFinite { .. })));
        assert!(matches!(Material::new(1e9, bad), Err(Error::NotFinite { .. })));
    }
    // cork and auxetic foam are materials
    assert!(Material::new(1e6, 0.0).is_ok() && Material::new(1e6, -0.7).is_ok() && Material::new(1e9, 0.499).is_ok());
}

#[cfg(feature = "files")]
#[test]
fn written_and_read() {
    let material = Material::new(70e9, 0.33).unwrap();
    let text = serde_json::to_string(&material).unwrap();
    assert_eq!(serde_json::from_str::<Material>(&text).unwrap(), material);
    assert!(serde_json::from_str::<Material>(&text.replace("0.33", "0.6")).is_err());
}

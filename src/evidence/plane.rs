//! Tables of rosettes, transverse sensitivity and plane stress.

use once_cell::sync::Lazy;

use super::Check;
use super::table::{Row, Table};
use crate::Error;
use crate::strain::{Grid, Material, Plane, PlaneStrain, PlaneStress, Rosette, Tee, Transverse};

macro_rules! table {
    ($name:literal) => {
        Table::new(concat!("data/strain/", $name), include_str!(concat!("../../data/strain/", $name)))
    };
}

static ROSETTES: Lazy<Table> = Lazy::new(|| table!("rosettes.csv"));
static TRANSVERSE: Lazy<Table> = Lazy::new(|| table!("transverse_cases.csv"));
static SINGLE: Lazy<Table> = Lazy::new(|| table!("single_error.csv"));
static STRESS: Lazy<Table> = Lazy::new(|| table!("plane_stress.csv"));
static TRANSFORM: Lazy<Table> = Lazy::new(|| table!("stress_transform.csv"));

fn grid(row: &Row<'_>, name: &str) -> Grid {
    let number = |column: &str| row.or_zero(column);
    Grid { degrees: number(&std::format!("angle_{name}_deg")), sensitivity: number(&std::format!("K_{name}")) }
}

fn indicated(row: &Row<'_>) -> [f64; 3] {
    ["a", "b", "c"].map(|g| row.or_zero(&std::format!("indicated_{g}_ue")))
}

/// State, principal strains and direction of every worked rosette.
pub(super) fn rosettes() -> Check {
    let mut check = Check::new("rosettes, plane state and principal strains", &ROSETTES);
    for row in ROSETTES.rows() {
        let state = Rosette::new(["a", "b", "c"].map(|g| grid(&row, g))).map(|r| r.state(indicated(&row)));
        let of = |f: fn(&PlaneStrain) -> f64| state.map(|s| f(&s));
        let turn = |f: fn(f64) -> f64| {
            let none = Error::Unfit { what: "all directions are principal" };
            state.and_then(|s| s.principal().degrees.map(f).ok_or(none))
        };
        let values: [(&str, Result<f64, Error>); 7] = [
            ("ex_ue", of(|s| s.x)),
            ("ey_ue", of(|s| s.y)),
            ("gxy_ue", of(|s| s.shear)),
            ("e1_ue", of(|s| s.principal().larger)),
            ("e2_ue", of(|s| s.principal().smaller)),
            ("gmax_ue", of(|s| s.principal().shear)),
            ("theta1_deg", turn(|d| d)),
        ];
        for (column, got) in values {
            check.printed(&row, column, got);
            let published = std::format!("published_{column}");
            if row.number(&published).is_some() {
                check.printed(&row, &published, got);
            }
        }
        if row.number("published_theta2_deg").is_some() {
            // the smaller principal strain lies at right angles
            check.printed(&row, "published_theta2_deg", turn(|d| if d > 0.0 { d - 90.0 } else { d + 90.0 }));
        }
    }
    check
}

/// Strains corrected for transverse sensitivity.
pub(super) fn transverse_cases() -> Check {
    let mut check = Check::new("transverse sensitivity of tees and rosettes", &TRANSVERSE);
    for row in TRANSVERSE.rows() {
        let names = ["a", "b", "c"];
        let along = if row.text("rosette") == "tee" {
            Tee::new(grid(&row, "a"), grid(&row, "b").sensitivity).map(|t| {
                let [a, b, _] = indicated(&row);
                let [a, b] = t.strains([a, b]);
                [a, b, f64::NAN]
            })
        } else {
            Rosette::new(names.map(|g| grid(&row, g))).map(|r| {
                let state = r.state(indicated(&row));
                names.map(|g| state.along(grid(&row, g).degrees))
            })
        };
        for (i, name) in names.into_iter().enumerate() {
            let got = along.map(|all| all.get(i).copied().unwrap_or(f64::NAN));
            let corrected = std::format!("corrected_{name}_ue");
            if row.number(&corrected).is_none() {
                continue;
            }
            check.printed(&row, &corrected, got);
            let Some((published, half)) = row.printed(&std::format!("published_{name}_ue")) else { continue };
            if row.text("misprint").split(' ').any(|m| m == name) {
                if let Ok(got) = got {
                    check.misprint(&row, published, half, got);
                }
            } else {
                check.compare(&row, published, half, got);
            }
        }
    }
    check
}

/// Error of a single grid that is left uncorrected.
pub(super) fn single_errors() -> Check {
    let mut check = Check::new("transverse sensitivity of a single grid, error left uncorrected", &SINGLE);
    for row in SINGLE.rows() {
        let transverse = Transverse { sensitivity: row.or_zero("K"), strain_ratio: row.or_zero("et_over_ea") };
        // indicated over true is one over the factor
        let got = 100.0 * (1.0 / transverse.factor() - 1.0);
        let (expected, half) = row.printed("error_percent").unwrap_or((f64::NAN, 0.0));
        // the ratio loses what 1 has more digits than the error: 4e-16 of 100 per cent
        check.compare(&row, expected, half.max(4e-14), Ok(got));
    }
    check
}

/// Stresses of a plane state of strain.
pub(super) fn plane_stresses() -> Check {
    let mut check = Check::new("stresses of a plane state of strain", &STRESS);
    for row in STRESS.rows() {
        let state = PlaneStrain { x: row.or_zero("ex_ue"), y: row.or_zero("ey_ue"), shear: row.or_zero("gxy_ue") };
        let stress = Material::new(row.or_zero("modulus"), row.or_zero("poisson")).map(|m| {
            m.stress(&PlaneStrain { x: state.x / 1e6, y: state.y / 1e6, shear: state.shear / 1e6 }, Plane::Stress)
        });
        let of = |f: fn(&PlaneStress) -> f64| stress.map(|s| f(&s));
        let got = match row.text("quantity") {
            "e1" => Ok(state.principal().larger),
            "e2" => Ok(state.principal().smaller),
            "sx" => of(|s| s.x),
            "sy" => of(|s| s.y),
            "tau_xy" => of(|s| s.shear),
            "s1" => of(|s| s.principal()[0]),
            "s2" => of(|s| s.principal()[1]),
            _ => Err(Error::Unfit { what: "an unknown quantity" }),
        };
        check.printed(&row, "computed", got);
        if row.number("published").is_some() {
            check.printed(&row, "published", got);
        }
        if let (Some((wrong, half)), Ok(got)) = (row.printed("misprint"), got) {
            check.misprint(&row, wrong, half, got);
        }
    }
    check
}

/// Stresses on an inclined face.
pub(super) fn transformed_stresses() -> Check {
    let mut check = Check::new("stresses on an inclined face", &TRANSFORM);
    for row in TRANSFORM.rows() {
        let stress =
            PlaneStress { x: row.or_zero("sx"), y: row.or_zero("sy"), shear: row.or_zero("txy"), out_of_plane: 0.0 };
        let theta = row.or_zero("theta_deg");
        let ([sx1, tx1y1], [sy1, _]) = (stress.along(theta), stress.along(theta + 90.0));
        // printed to a unit that the table states, which may be ten
        let half = 0.5 * row.or_zero("published_unit");
        for (name, got) in [("sx1", sx1), ("tx1y1", tx1y1), ("sy1", sy1)] {
            check.printed(&row, &std::format!("computed_{name}"), Ok(got));
            if let Some(published) = row.number(&std::format!("published_{name}")) {
                check.compare(&row, published, half, Ok(got));
            }
        }
    }
    check
}

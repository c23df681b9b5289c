//! Shafts and beams, worked by hand from the elementary formulas (strength of materials, no single source).

use approx::assert_relative_eq;
use ohmwright::strain::{Loading, Material, Section};

fn steel() -> Material {
    Material::new(200e9, 0.25).expect("a material")
}

#[test]
fn round_sections_by_hand() {
    // solid shaft, d = 0.1 m: W = π d³/32 = 9.817477042468103e-5 m³, W_p = 2 W, A = π d²/4 = 7.853981633974483e-3 m²
    let solid = Section::Round { diameter: 0.1, bore: 0.0 };
    let at = |loading| solid.load_per_strain(loading, &steel()).expect("a load");
    let close = |got: f64, want: f64| assert_relative_eq!(got, want, max_relative = 1e-14);
    close(at(Loading::Axial), 200e9 * 7.853981633974483e-3);
    close(at(Loading::Bending), 200e9 * 9.817477042468103e-5);
    // G = 200/2.5 = 80 GPa
    close(at(Loading::Torsion), 80e9 * 2.0 * 9.817477042468103e-5);
    // tube 0.1/0.08: 1 − 0.8⁴ = 0.5904, 1 − 0.8² = 0.36
    let tube = Section::Round { diameter: 0.1, bore: 0.08 };
    let at = |loading| tube.load_per_strain(loading, &steel()).expect("a load");
    close(at(Loading::Axial), 200e9 * 7.853981633974483e-3 * 0.36);
    close(at(Loading::Bending), 200e9 * 9.817477042468103e-5 * 0.5904);
    close(at(Loading::Torsion), 80e9 * 2.0 * 9.817477042468103e-5 * 0.5904);
}

#[test]
fn rectangles_and_areas_by_hand() {
    // 0.05 m wide, 0.12 m high: A = 0.006 m², W = 0.05 · 0.0144/6 = 1.2e-4 m³
    let beam = Section::Rectangular { width: 0.05, height: 0.12 };
    let close = |got: f64, want: f64| assert_relative_eq!(got, want, max_relative = 1e-14);
    close(beam.load_per_strain(Loading::Axial, &steel()).unwrap(), 1.2e9);
    close(beam.load_per_strain(Loading::Bending, &steel()).unwrap(), 2.4e7);
    assert!(beam.load_per_strain(Loading::Torsion, &steel()).is_err());
    let area = Section::Area { area: 2e-3 };
    close(area.load_per_strain(Loading::Axial, &steel()).unwrap(), 4e8);
    assert!(area.load_per_strain(Loading::Bending, &steel()).is_err());
    for wrong in [
        Section::Round { diameter: 0.1, bore: 0.1 },
        Section::Round { diameter: f64::NAN, bore: 0.0 },
        Section::Rectangular { width: 0.0, height: 1.0 },
        Section::Area { area: -1.0 },
    ] {
        assert!(wrong.load_per_strain(Loading::Axial, &steel()).is_err(), "{wrong:?}");
    }
}

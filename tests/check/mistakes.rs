//! Which mistakes can be made in which scene, and how.

use crate::generator::{
    Bend, Coding, Constants, Couple, Dice, Digits, Junction, Recording, Rows, Scene, shunt_ratio, steinhart_ohms,
};

/// Changes constants; the values that the right constants give help to choose limits.
pub type Make = fn(&mut Constants, &mut Dice, &Recording, &[f64]);

/// One mistake. Two of one kind are not made together, since what they do is one thing: a factor, a shift, or what becomes of rows.
pub struct Mistake {
    pub id: &'static str,
    pub kind: Kind,
    pub make: Make,
}

#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Kind {
    Factor,
    Shift,
    Bend,
    Heat,
    Rows,
}

const fn of(id: &'static str, kind: Kind, make: Make) -> Mistake {
    Mistake { id, kind, make }
}

fn behind(c: &mut Constants, scale: f64, offset: f64) {
    c.behind.push((scale, offset));
}

/// Another value, some per cent off and round.
fn off(dice: &mut Dice, value: f64) -> f64 {
    value * dice.one_of(&[0.9, 0.95, 0.96, 0.98, 1.03, 1.05, 1.08, 1.2])
}

fn rows(out: &mut Vec<Mistake>) {
    out.push(of("time-shift", Kind::Rows, |c, d, _, _| c.rows = Rows::Shifted(d.one_of(&[-3, -1, 1, 2, 5]))));
    out.push(of("hour-shift", Kind::Rows, |c, d, _, _| c.rows = Rows::Shifted(60 * d.one_of(&[-2, -1, 1, 2]))));
    out.push(of("stale", Kind::Rows, |c, d, _, _| c.rows = Rows::Held(d.one_of(&[2, 3, 5, 10]))));
    out.push(of("decimal-comma", Kind::Rows, |c, d, _, _| c.figures = d.one_of(&[Digits::MarkLost, Digits::Whole])));
    out.push(of("clipped", Kind::Rows, |c, d, _, values| {
        let finite = || values.iter().copied().filter(|v| v.is_finite());
        let (low, high) = finite().fold((f64::INFINITY, f64::NEG_INFINITY), |(a, b), v| (a.min(v), b.max(v)));
        let limit = (low + (high - low) * d.between(0.7, 0.95)).round();
        c.figures = Digits::Clipped(-1e9, limit);
    }));
}

fn factors(out: &mut Vec<Mistake>) {
    out.push(of("gauge-factor", Kind::Factor, |c, d, _, _| {
        c.gauge_factor = d.one_of(&[2.0, 2.05, 2.1, 2.13, 1.98, 2.2])
    }));
    out.push(of("power-of-ten", Kind::Factor, |c, d, _, _| behind(c, 10f64.powi(d.one_of(&[-3, -1, 1, 2, 3])), 0.0)));
    out.push(of("power-of-two", Kind::Factor, |c, d, _, _| behind(c, d.one_of(&[0.25, 0.5, 2.0, 4.0]), 0.0)));
    out.push(of("sign", Kind::Factor, |c, _, _, _| behind(c, -1.0, 0.0)));
    out.push(of("arm-count", Kind::Factor, |c, d, recording, _| {
        // bridge factors of one, two and four arms in full
        let own = match recording.scene {
            Scene::Counts => 2.0 * (1.0 + c.nu),
            Scene::Bending => 2.0,
            _ => 1.0,
        };
        let other: Vec<f64> = [1.0, 2.0, 4.0].into_iter().filter(|k| *k != own).collect();
        c.arms = d.one_of(&other) / own;
    }));
    out.push(of("shear-for-normal", Kind::Factor, |c, _, _, _| behind(c, 2.0, 0.0)));
}

/// Every mistake of a scene.
#[allow(clippy::too_many_lines, reason = "a list")]
pub fn of_scene(scene: Scene) -> Vec<Mistake> {
    let mut out = Vec::new();
    if scene.is_strain() {
        factors(&mut out);
        if scene != Scene::Quarter {
            out.push(of("gauge-factor-inverted", Kind::Factor, |c, _, _, _| c.inverted = true));
        }
    }
    if matches!(scene, Scene::Quarter | Scene::Shunt) {
        out.push(of("nonlinearity-ignored", Kind::Bend, |c, _, _, _| c.bend = Bend::Ignored));
        out.push(of("nonlinearity-reversed", Kind::Bend, |c, _, _, _| c.bend = Bend::Reversed));
        out.push(of("leads-ignored", Kind::Factor, |c, _, _, _| c.lead = 0.0));
        out.push(of("lead-ohms", Kind::Factor, |c, d, _, _| c.lead = d.one_of(&[0.42, 2.1, 8.4, 6.0])));
        out.push(of("gauge-resistance", Kind::Factor, |c, _, _, _| c.gauge_ohms = 120.0));
    }
    if matches!(scene, Scene::Quarter | Scene::Shunt | Scene::Bending) {
        out.push(of("nonlinearity-added", Kind::Bend, |c, _, _, _| c.bend = Bend::Added));
    }
    if matches!(scene, Scene::Quarter | Scene::Warm | Scene::Bending) {
        out.push(of("zero-missing", Kind::Shift, |c, _, _, _| c.zero_times = 0.0));
        out.push(of("zero-doubled", Kind::Shift, |c, _, _, _| c.zero_times = 2.0));
        out.push(of("zero-reversed", Kind::Shift, |c, _, _, _| c.zero_times = -1.0));
    }
    if matches!(scene, Scene::Quarter | Scene::Platinum) {
        rows(&mut out);
        out.push(of("wrong-column", Kind::Rows, |c, _, _, _| c.rows = Rows::OtherColumn));
    }
    match scene {
        Scene::Quarter => {
            out.push(of("gauge-factor-inverted", Kind::Factor, |c, _, _, _| c.inverted = true));
            out.push(of("supply", Kind::Factor, |c, d, _, _| {
                c.supply = Some(d.one_of(&[2.4, 2.45, 2.51, 2.6, 3.0, 5.0]))
            }));
            out.push(of("gain", Kind::Factor, |c, d, _, _| c.gain = d.one_of(&[100.0, 195.0, 201.0, 210.0, 250.0])));
            out.push(of("zero-after-linearising", Kind::Bend, |c, _, _, _| c.zero_inside = true));
            out.push(of("leads-wire-count", Kind::Factor, |c, _, _, _| c.two_wire = true));
            out.push(of("thermal-output-omitted", Kind::Heat, |c, _, _, _| c.thermal = 0.0));
            out.push(of("thermal-output-reversed", Kind::Heat, |c, _, _, _| c.thermal = -1.0));
            out.push(of("thermal-output-unit", Kind::Heat, |c, _, _, _| c.thermal_as_fahrenheit = true));
            out.push(of("thermal-output-gauge-factor", Kind::Heat, |c, _, _, _| c.thermal_direct = true));
            out.push(of("zero-temperature", Kind::Shift, |c, d, _, _| {
                c.zero_celsius = d.one_of(&[0.0, 20.0, 24.0, 15.0, 30.0])
            }));
            out.push(of("expansion", Kind::Heat, |c, d, _, _| {
                c.specimen = d.one_of(&[12.1e-6, 11.0e-6, 17.0e-6, 23.0e-6])
            }));
            out.push(of("slope-unit", Kind::Heat, |c, d, _, _| c.slope *= d.one_of(&[100.0, 0.01])));
            out.push(of("transverse-omitted", Kind::Factor, |c, _, _, _| c.transverse = false));
        }
        Scene::Warm => out.push(of("warm-leads", Kind::Heat, |c, _, _, _| c.warm = false)),
        Scene::Counts => {
            out.push(of("supply", Kind::Factor, |c, d, _, _| c.supply = Some(d.one_of(&[2.4, 2.5, 2.6, 3.0]))));
            out.push(of("gain", Kind::Factor, |c, d, _, _| c.gain = d.one_of(&[100.0, 195.0, 201.0, 250.0])));
            out.push(of("poisson", Kind::Factor, |c, d, _, _| c.nu = d.one_of(&[0.25, 0.3, 0.33])));
            out.push(of("supply-leads", Kind::Factor, |c, _, _, _| c.supply_lead = 0.0));
            out.push(of("counts-scaling", Kind::Factor, |c, d, _, _| {
                c.full_scale_codes = d.one_of(&[4096.0, 2047.0, 4095.0])
            }));
            out.push(of("counts-sign", Kind::Shift, |c, d, _, _| {
                c.coding = d.one_of(&[Coding::Unsigned, Coding::Offset])
            }));
        }
        Scene::Shunt => out.push(of("shunt-place", Kind::Factor, |c, _, _, _| behind(c, shunt_ratio(), 0.0))),
        Scene::Stress => {
            out.push(of("modulus", Kind::Factor, |c, d, _, _| c.modulus = d.one_of(&[200.0, 210.0, 70.0])));
        }
        Scene::RosetteStrain | Scene::RosetteAngle | Scene::RosetteStress => {
            out.push(of("grids-swapped", Kind::Bend, |c, d, _, _| {
                c.order = d.one_of(&[[1, 0, 2], [0, 2, 1], [2, 1, 0], [1, 2, 0], [2, 0, 1]]);
            }));
            out.push(of("transverse-omitted", Kind::Bend, |c, _, _, _| c.grid_k = [0.0; 3]));
            if scene == Scene::RosetteAngle {
                out.push(of("principal-angle", Kind::Shift, |c, d, _, _| {
                    c.angle = Some(d.one_of(&[(-1.0, 0.0), (1.0, 90.0), (-1.0, 90.0)]));
                }));
            }
            if scene == Scene::RosetteStress {
                out.push(of("uniaxial-for-biaxial", Kind::Bend, |c, _, _, _| c.uniaxial = true));
                out.push(of("poisson", Kind::Bend, |c, d, _, _| c.material_nu = d.one_of(&[0.25, 0.3, 0.33])));
                out.push(of("modulus", Kind::Factor, |c, d, _, _| c.modulus = d.one_of(&[200.0, 210.0, 70.0])));
            }
        }
        Scene::Platinum | Scene::Cold => {
            // sets A, B, C of GOST 6651-2009, and customary ones with R100/R0 = 1.3911, 1.3920, 1.3916 (data/temperature)
            out.push(of("platinum-curve", Kind::Bend, |c, d, _, _| {
                c.curve = d.one_of(&[
                    [3.9690e-3, -5.841e-7, -4.330e-12],
                    [3.9692e-3, -5.8495e-7, -4.233e-12],
                    [3.9787e-3, -5.8686e-7, -4.167e-12],
                    [3.9739e-3, -5.870e-7, -4.4e-12],
                ]);
            }));
            out.push(of("r0", Kind::Factor, |c, d, _, _| c.r0 = d.one_of(&[99.9, 100.1, 100.05, 101.0, 99.5])));
            out.push(of("straight-line", Kind::Bend, |c, d, _, _| {
                c.straight = Some(d.one_of(&[3.85e-3, 3.9083e-3, 3.9e-3]))
            }));
            out.push(of("quadratic-below-zero", Kind::Bend, |c, _, _, _| c.curve[2] = 0.0));
            out.push(of("lead-ohms", Kind::Shift, |c, d, _, _| {
                c.thermometer_lead = d.one_of(&[0.1, 0.25, 0.3, 0.5, 1.0])
            }));
            out.push(of("leads-ignored", Kind::Shift, |c, _, _, _| c.thermometer_lead = 0.0));
            out.push(of("leads-wire-count", Kind::Shift, |c, _, _, _| c.thermometer_lead = 0.0));
            out.push(of("kelvin-offset", Kind::Shift, |c, d, _, _| {
                behind(c, 1.0, d.one_of(&[273.15, -273.15, 273.0]))
            }));
            out.push(of("fahrenheit", Kind::Factor, |c, d, _, _| {
                let (scale, offset) = d.one_of(&[(1.8, 32.0), (5.0 / 9.0, -160.0 / 9.0)]);
                behind(c, scale, offset);
            }));
        }
        Scene::Reference => {
            out.push(of("reference-resistor", Kind::Factor, |c, d, _, _| {
                c.reference = d.one_of(&[99.9, 100.1, 100.5, 101.0])
            }));
            out.push(of("platinum-curve", Kind::Bend, |c, _, _, _| c.curve = [3.9690e-3, -5.841e-7, -4.330e-12]));
            out.push(of("fahrenheit", Kind::Factor, |c, _, _, _| behind(c, 1.8, 32.0)));
        }
        Scene::Divider => {
            out.push(of("beta", Kind::Bend, |c, d, _, _| c.beta = off(d, 3950.0).round()));
            out.push(of("beta-range", Kind::Bend, |c, d, _, _| c.beta = d.one_of(&[3892.0, 3977.0, 3988.0, 3920.0])));
            out.push(of("r25", Kind::Shift, |c, d, _, _| c.r25 = off(d, 10e3)));
            out.push(of("log10", Kind::Bend, |c, _, _, _| c.log10 = true));
            out.push(of("divider-inverted", Kind::Bend, |c, _, _, _| c.inverted_divider = true));
            out.push(of("reference-resistor", Kind::Shift, |c, d, _, _| c.series_resistor = off(d, 10e3)));
            out.push(of("supply", Kind::Bend, |c, d, _, _| c.supply = Some(d.one_of(&[3.35, 3.4, 3.5, 5.0]))));
            out.push(of("kelvin-offset", Kind::Shift, |c, _, _, _| behind(c, 1.0, 273.15)));
        }
        Scene::Steinhart => {
            out.push(of("log10", Kind::Bend, |c, _, _, _| c.log10 = true));
            out.push(of("beta-range", Kind::Bend, |c, d, _, _| {
                // beta from 25 °C to another temperature, of the same thermistor
                let upper = d.one_of(&[50.0, 85.0, 100.0]);
                let (r, s) = (steinhart_ohms(25.0), steinhart_ohms(upper));
                c.as_beta = Some((r / s).ln() / (1.0 / 298.15 - 1.0 / (upper + 273.15)));
            }));
            out.push(of("beta", Kind::Bend, |c, d, _, _| c.as_beta = Some(d.one_of(&[3800.0, 3900.0, 4000.0]))));
            out.push(of("fahrenheit", Kind::Factor, |c, _, _, _| behind(c, 1.8, 32.0)));
        }
        Scene::Thermocouple => {
            out.push(of("junction", Kind::Heat, |c, d, _, _| {
                c.junction = d.one_of(&[
                    Junction::Added,
                    Junction::Ignored,
                    Junction::At(20.0),
                    Junction::At(25.0),
                    Junction::Twice,
                    Junction::Subtracted,
                    Junction::Both,
                ]);
            }));
            out.push(of("thermocouple-type", Kind::Bend, |c, d, _, _| c.couple = d.one_of(&[Couple::J, Couple::T])));
            out.push(of("straight-line", Kind::Bend, |c, d, _, _| {
                c.couple = Couple::Straight(d.one_of(&[40.0, 40.7, 41.0, 39.5]), d.one_of(&[true, false]));
            }));
            out.push(of("kelvin-offset", Kind::Shift, |c, _, _, _| behind(c, 1.0, 273.15)));
            out.push(of("fahrenheit", Kind::Factor, |c, _, _, _| behind(c, 1.8, 32.0)));
        }
        Scene::Difference => {
            out.push(of("difference-offset", Kind::Shift, |c, d, _, _| {
                let (scale, offset) = d.one_of(&[(1.0, 273.15), (1.0, -273.15), (1.8, 32.0)]);
                behind(c, scale, offset);
            }));
        }
        Scene::Bending => {}
    }
    out
}

//! `[rosette.*]`: grids into the plane state of strain.

use std::boxed::Box;
use std::collections::BTreeMap;
use std::format;
use std::string::{String, ToString};
use std::vec::Vec;

use super::channel::{Known, by_power_of_ten, lookup};
use super::node::{Section, Value};
use super::unit::{Kind, Unit};
use super::{nearest, table_of};
use crate::measurement::{Channel, Give, Grids, RosetteSource, Source, Stated};
use crate::strain::{Grid, Material, Plane, Rosette, Tee};

/// What a rosette can give, with what it is.
const GIVES: &[(&str, Give, &str)] = &[
    ("principal-max", Give::PrincipalMax, "strain"),
    ("principal-min", Give::PrincipalMin, "strain"),
    ("direction", Give::Direction, "deg"),
    ("shear-max", Give::ShearMax, "shear"),
    ("strain-x", Give::StrainX, "strain"),
    ("strain-y", Give::StrainY, "strain"),
    ("shear-xy", Give::StrainXy, "shear"),
    ("stress-max", Give::StressMax, "stress"),
    ("stress-min", Give::StressMin, "stress"),
    ("stress-x", Give::StressX, "stress"),
    ("stress-y", Give::StressY, "stress"),
    ("shear-stress-xy", Give::StressXy, "stress"),
    ("von-mises", Give::VonMises, "stress"),
    ("tresca", Give::Tresca, "stress"),
    ("consistency", Give::Consistency, "strain"),
];

/// Reads all rosettes; each result is a channel of its own, behind the others.
pub(super) fn read(root: &Section<'_>, known: &BTreeMap<&str, Known>, assumed: &mut Vec<Vec<String>>) -> Vec<Channel> {
    let Some(all) = root.section("rosette") else { return Vec::new() };
    let mut out = Vec::new();
    for entry in &all.table.entries {
        all.table.take(&entry.key);
        let Some(table) = table_of(&entry.node.value) else {
            root.say(
                entry.node.span.clone(),
                format!("rosette.{} must be a table, as in [rosette.{}]", entry.key, entry.key),
            );
            continue;
        };
        let section = Section { table, path: String::new(), span: entry.key_span.clone(), findings: root.findings };
        let mut said = Vec::new();
        if let Some(channels) = one(&section, &entry.key, known, &mut said) {
            assumed.extend(channels.iter().map(|_| said.clone()));
            out.extend(channels);
        }
    }
    out
}

fn one(s: &Section<'_>, name: &str, known: &BTreeMap<&str, Known>, assumed: &mut Vec<String>) -> Option<Vec<Channel>> {
    let before = s.findings.count();
    let Some(grids) = s.section("grids") else {
        if !s.has("grids") {
            s.lack("grids", "the channels of the grids, as in { a = \"r1a\", b = \"r1b\", c = \"r1c\" }");
        }
        return None;
    };
    let mut channels = Vec::new();
    for key in ["a", "b", "c", "d"] {
        let Some((text, span)) = grids.text(key) else { continue };
        let found = lookup(s, known, text, span.clone())?;
        let unit = found.unit.filter(|u| u.kind == Kind::Strain);
        let Some(unit) = unit else {
            s.say(span, format!("grids.{key} = '{text}': a grid is a strain channel"));
            return None;
        };
        channels.push((found.index, unit));
    }
    if channels.len() < 2 || (channels.len() > 2 && !grids.has("c")) {
        grids.lack("a", "two grids at right angles (a and b), three (a, b and c), or a fourth (d) to check them");
        return None;
    }
    let angles = angles(s, channels.len())?;
    let sensitivities = sensitivities(s, channels.len(), assumed)?;
    let grid = |i: usize| Grid {
        degrees: angles.get(i).copied().unwrap_or(0.0),
        sensitivity: sensitivities.get(i).copied().unwrap_or(0.0),
    };
    let refuse = |error: crate::Error| s.say(s.span.clone(), format!("rosette '{name}': {error}"));
    let law = if channels.len() == 2 {
        let between = grid(1).degrees - grid(0).degrees;
        if libm::fmod((between.abs() - 90.0).abs(), 180.0) > 1e-9 {
            s.say(
                s.span.clone(),
                format!("rosette '{name}': two grids must stand at right angles; these stand {between} deg apart"),
            );
            return None;
        }
        assumed.push("two grids: their directions are taken as the principal ones".into());
        Grids::Two(Tee::new(grid(0), grid(1).sensitivity).map_err(refuse).ok()?)
    } else {
        Grids::Three(Rosette::new([grid(0), grid(1), grid(2)]).map_err(refuse).ok()?)
    };
    let mut stated = Vec::new();
    let material = material(s, &mut stated)?;
    let plane = if s.has("plane") {
        s.choice("plane", &[("stress", Plane::Stress), ("strain", Plane::Strain)])?
    } else {
        Plane::Stress
    };
    let decimals = if s.has("decimals") { s.whole("decimals", 0, 17).and_then(|n| u8::try_from(n).ok()) } else { None };
    let show = s.flag("show").unwrap_or(true);
    let Some(wanted) = s.texts("give") else {
        if !s.has("give") {
            s.lack("give", "what it shall give, as in [\"principal-max\", \"principal-min\", \"direction\"]");
        }
        return None;
    };
    let mut out = Vec::new();
    for (text, span) in wanted {
        let Some((give, kind)) = give_of(text) else {
            let near = nearest(text, GIVES.iter().map(|(word, ..)| *word))
                .map_or_else(String::new, |n| format!("; did you mean \"{n}\"?"));
            let all: Vec<&str> = GIVES.iter().map(|(word, ..)| *word).collect();
            s.say(span, format!("give: '{text}' is nothing that a rosette gives{near}; known: {}, \"strain 30 deg\", \"stress 30 deg\"", all.join(", ")));
            continue;
        };
        if kind == "stress" && material.is_none() {
            s.say(
                span,
                format!("give: '{text}' needs a material, as in material = {{ modulus = \"70 GPa\", poisson = 0.33 }}"),
            );
            continue;
        }
        if give == Give::Consistency && channels.len() < 4 {
            s.say(span, "give: 'consistency' needs a fourth grid, grids.d");
            continue;
        }
        if kind == "stress" && !s.has("plane") {
            assumed.push("plane: stress, a free surface".into());
        }
        let (unit, scale) = match kind {
            "deg" => ("deg", 1.0),
            "stress" => ("MPa", 1e-6),
            "shear" => ("shear microstrain", 1e6),
            _ => ("microstrain", 1e6),
        };
        let to_strain = |u: &Unit| by_power_of_ten(u.factor, i32::from(u.exponent));
        out.push(Channel {
            name: format!("{name} {text}"),
            unit: unit.to_string(),
            decimals,
            show,
            source: Source::Rosette(Box::new(RosetteSource {
                channels: channels.iter().take(3).map(|(c, u)| (*c, to_strain(u))).collect(),
                grids: law,
                fourth: channels.get(3).map(|(c, u)| (*c, to_strain(u), grid(3))),
                material: material.map(|m| (m, plane)),
                give,
                scale,
            })),
            stated: stated.clone(),
            shared: Vec::new(),
        });
    }
    assumed.dedup();
    if s.findings.count() > before { None } else { Some(out) }
}

fn give_of(text: &str) -> Option<(Give, &'static str)> {
    if let Some((_, give, kind)) = GIVES.iter().find(|(word, ..)| *word == text) {
        return Some((*give, kind));
    }
    let (what, rest) = text.split_once(' ')?;
    let degrees: f64 = rest.trim().strip_suffix("deg")?.trim().parse().ok().filter(|d: &f64| d.is_finite())?;
    match what {
        "strain" => Some((Give::StrainAlong(degrees), "strain")),
        "stress" => Some((Give::StressAlong(degrees), "stress")),
        _ => None,
    }
}

fn angles(s: &Section<'_>, grids: usize) -> Option<Vec<f64>> {
    if !s.has("angles") {
        s.lack("angles", "the angle of each grid from x, anticlockwise, as in [\"0 deg\", \"45 deg\", \"90 deg\"]");
        return None;
    }
    let read = s.quantities("angles", &[Kind::Degrees], grids, grids)?;
    Some(read.iter().map(|r| r.quantity.value).collect())
}

/// One sensitivity for all grids, or one each.
fn sensitivities(s: &Section<'_>, grids: usize, assumed: &mut Vec<String>) -> Option<Vec<f64>> {
    let kinds = [Kind::Strain, Kind::Number];
    match s.table.peek("transverse").map(|e| &e.node.value) {
        None => {
            assumed.push("transverse: no transverse sensitivity".into());
            Some(std::vec![0.0; grids])
        }
        Some(Value::List(_)) => {
            let read = s.quantities("transverse", &kinds, grids, grids)?;
            Some(read.iter().map(|r| r.quantity.value).collect())
        }
        Some(_) => {
            let read = s.quantity("transverse", &kinds)?;
            Some(std::vec![read.quantity.value; grids])
        }
    }
}

fn material(s: &Section<'_>, stated: &mut Vec<Stated>) -> Option<Option<Material>> {
    if !s.has("material") {
        return Some(None);
    }
    let section = s.section("material")?;
    for (key, what) in [("modulus", "the modulus of elasticity, as in \"70 GPa\""), ("poisson", "Poisson's ratio")] {
        if !section.has(key) {
            section.lack(key, what);
        }
    }
    let mut read = |key: &str, kind| {
        let read = section.quantity(key, &[kind])?;
        if let Some(uncertainty) = read.quantity.uncertainty {
            let (value, text) = (read.quantity.value, read.text);
            stated.push(Stated { key: format!("material.{key}"), value, text, uncertainty });
        }
        Some(read.quantity.value)
    };
    let (modulus, poisson) = (read("modulus", Kind::Pascals), read("poisson", Kind::Number));
    match Material::new(modulus?, poisson?) {
        Ok(material) => Some(Some(material)),
        Err(error) => {
            s.say(section.span.clone(), format!("material: {error}"));
            None
        }
    }
}

/// What a rosette's channel does, in words.
pub(super) fn describe(rosette: &RosetteSource, name: &dyn Fn(usize) -> String) -> Vec<String> {
    let mut out = Vec::new();
    let grid =
        |channel: usize, g: &Grid| format!("{} at {} deg, K = {} %", name(channel), g.degrees, 100.0 * g.sensitivity);
    let channels = || rosette.channels.iter().map(|(c, _)| *c);
    match &rosette.grids {
        Grids::Three(law) => {
            let all: Vec<String> = channels().zip(law.grids()).map(|(c, g)| grid(c, g)).collect();
            out.push(format!("rosette: {}", all.join("; ")));
            out.push("grids: ê (1 − ν0 K) = e(θ) + K e(θ + 90°) for each, ν0 = 0.285, solved together".into());
        }
        Grids::Two(law) => {
            let first = law.first();
            let second = Grid { degrees: first.degrees + 90.0, sensitivity: law.second_sensitivity() };
            let all: Vec<String> = channels().zip([first, &second]).map(|(c, g)| grid(c, g)).collect();
            out.push(format!("tee: {}; along the principal directions", all.join("; ")));
        }
    }
    if let Some((channel, _, g)) = &rosette.fourth {
        out.push(format!("fourth grid: {}", grid(*channel, g)));
    }
    if let Some((material, plane)) = &rosette.material {
        let plane = match plane {
            Plane::Strain => "plane strain",
            _ => "plane stress",
        };
        out.push(format!("material: E = {} GPa, ν = {}, {plane}", material.modulus() / 1e9, material.poisson()));
    }
    out.push(format!(
        "gives: {}",
        match rosette.give {
            Give::PrincipalMax => "the larger principal strain".into(),
            Give::PrincipalMin => "the smaller principal strain".into(),
            Give::Direction => "direction from x to the larger principal strain, anticlockwise, in (−90°, 90°]".into(),
            Give::ShearMax => "the largest engineering shear strain in the plane".into(),
            Give::StrainX => "the strain along x".into(),
            Give::StrainY => "the strain along y".into(),
            Give::StrainXy => "the engineering shear strain γ_xy".into(),
            Give::StrainAlong(d) => format!("the strain at {d} deg from x"),
            Give::StressMax => "the larger principal stress".into(),
            Give::StressMin => "the smaller principal stress".into(),
            Give::StressX => "the normal stress along x".into(),
            Give::StressY => "the normal stress along y".into(),
            Give::StressXy => "the shear stress τ_xy".into(),
            Give::StressAlong(d) => format!("the normal stress at {d} deg from x"),
            Give::VonMises => "the equivalent stress of von Mises".into(),
            Give::Tresca => "the equivalent stress of Tresca".into(),
            Give::Consistency => "what the fourth grid shows more than the other three predict".to_string(),
        }
    ));
    out
}

//! `[rosette.*]`: grids into the plane state of strain.

use std::boxed::Box;
use std::collections::BTreeMap;
use std::format;
use std::string::{String, ToString};
use std::vec::Vec;

use super::channel::{Known, by_power_of_ten, lookup};
use super::node::{Read, Section, Value};
use super::reported::{self, Reported};
use super::unit::{Kind, Unit};
use super::words::about;
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
pub(super) fn read(
    root: &Section<'_>,
    known: &BTreeMap<&str, Known>,
    assumed: &mut Vec<Vec<String>>,
    reported: &mut Vec<Option<Reported>>,
) -> Vec<Channel> {
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
        if super::channel::is_odd(&entry.key) {
            root.say(
                entry.key_span.clone(),
                format!(
                    "rosette name '{}' must not be empty nor hold blanks, colons, commas, quotes or '='",
                    entry.key.escape_debug()
                ),
            );
        }
        let section = Section { table, path: String::new(), span: entry.key_span.clone(), findings: root.findings };
        let mut said = Vec::new();
        if let Some(channels) = one(&section, &entry.key, known, &mut said) {
            assumed.extend(channels.iter().map(|_| said.clone()));
            reported.extend(reported_of(&section, &entry.key, &channels));
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
    let mut channels: Vec<(usize, Unit)> = Vec::new();
    let keys = ["a", "b", "c", "d"];
    for key in keys {
        let Some((text, span)) = grids.text(key) else { continue };
        let found = lookup(s, known, text, span.clone())?;
        let unit = found.unit.filter(|u| u.kind == Kind::Strain);
        let Some(unit) = unit else {
            let gives = found.unit.map_or_else(String::new, |u| format!(", and this one gives {}", u.kind.expected()));
            s.say(span, format!("grids.{key} = '{text}': a grid is a strain channel{gives}"));
            return None;
        };
        if found.corrected {
            s.say(
                span,
                format!("grids.{key} = '{text}': this channel has a transverse of its own, but a rosette needs what its grids indicate"),
            );
            return None;
        }
        if channels.iter().any(|(channel, _)| *channel == found.index) {
            s.say(span, format!("grids.{key} = '{text}': this channel is another grid already"));
            return None;
        }
        channels.push((found.index, unit));
    }
    if s.findings.count() > before {
        return None;
    }
    // a, b; a, b, c; a, b, c, d
    if channels.len() < 2 || !keys.iter().take(channels.len()).all(|key| grids.has(key)) {
        // an unknown key has been told
        if !grids.table.entries.iter().all(|e| keys.contains(&e.key.as_str())) {
            return None;
        }
        grids.say(
            grids.span.clone(),
            "grids are a and b, a tee at right angles; or a, b and c; or these and d, a fourth to check them",
        );
        return None;
    }
    let mut stated = Vec::new();
    let angles = angles(s, channels.len(), &mut stated)?;
    let sensitivities = sensitivities(s, channels.len(), &mut stated, assumed)?;
    if sensitivities.iter().any(|k| *k != 0.0) {
        assumed.push(super::NU0.into());
    }
    let grid = |i: usize| Grid {
        degrees: angles.get(i).copied().unwrap_or(0.0),
        sensitivity: sensitivities.get(i).copied().unwrap_or(0.0),
    };
    // what is wrong with a sensitivity or with the directions
    let refuse = |error: crate::Error| {
        let words = error.to_string();
        let key = if words.contains("transverse") { "transverse" } else { "angles" };
        let span = s.entry(key).map_or_else(|| s.span.clone(), |e| e.node.span.clone());
        s.say(span, format!("{key}: {words}"));
    };
    let law = if channels.len() == 2 {
        let between = grid(1).degrees - grid(0).degrees;
        if libm::remainder(between - 90.0, 180.0).abs() > 1e-9 {
            let entry = s.entry("angles")?;
            s.say(
                entry.node.span.clone(),
                format!("angles: two grids must stand at right angles, and these stand {} deg apart", between.abs()),
            );
            return None;
        }
        assumed.push("angles: the two grids lie along the principal directions".into());
        Grids::Two(Tee::new(grid(0), grid(1).sensitivity).map_err(refuse).ok()?)
    } else {
        Grids::Three(Rosette::new([grid(0), grid(1), grid(2)]).map_err(refuse).ok()?)
    };
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
    if wanted.is_empty() {
        s.lack("give", "at least one of what a rosette gives, as in [\"principal-max\", \"direction\"]");
    }
    let mut out: Vec<Channel> = Vec::new();
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
        let result = format!("{name} {text}");
        if out.iter().any(|channel| channel.name == result) {
            s.say(span, format!("give: '{text}' stands twice"));
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
            name: result,
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

/// Somebody else's results of a rosette: a table for each that it gives.
fn reported_of(s: &Section<'_>, name: &str, channels: &[Channel]) -> Vec<Option<Reported>> {
    let all = if s.has("reported") { s.section("reported") } else { None };
    let Some(all) = all else { return channels.iter().map(|_| None).collect() };
    let gives: Vec<&str> = channels.iter().filter_map(|c| c.name.strip_prefix(name)).map(str::trim_start).collect();
    for entry in &all.table.entries {
        if !gives.contains(&entry.key.as_str()) {
            all.table.take(&entry.key);
            let span = entry.key_span.clone();
            all.say(
                span,
                format!("reported: '{}' is nothing that this rosette gives ({})", entry.key, gives.join(", ")),
            );
        }
    }
    let one = |(give, channel): (&&str, &Channel)| {
        if !all.has(give) {
            return None;
        }
        reported::one(&all.section(give)?, &channel.unit, false)
    };
    gives.iter().zip(channels).map(one).collect()
}

/// Whether a rosette can give this.
pub(super) fn gives(text: &str) -> bool {
    give_of(text).is_some()
}

fn give_of(text: &str) -> Option<(Give, &'static str)> {
    if let Some((_, give, kind)) = GIVES.iter().find(|(word, ..)| *word == text) {
        return Some((*give, kind));
    }
    let (what, rest) = text.split_once(' ')?;
    let degrees = super::quantity::parse(rest, &[Kind::Degrees]).ok().filter(|q| q.uncertainty.is_none())?.value;
    match what {
        "strain" => Some((Give::StrainAlong(degrees), "strain")),
        "stress" => Some((Give::StressAlong(degrees), "stress")),
        _ => None,
    }
}

/// The values of a list, with their uncertainties.
fn values(s: &Section<'_>, key: &str, kinds: &[Kind], count: usize, stated: &mut Vec<Stated>) -> Option<Vec<f64>> {
    let read = s.quantities(key, kinds, count, count)?;
    for (i, one) in read.iter().enumerate() {
        keep(format!("{key}[{}]", i + 1), one, stated);
    }
    Some(read.iter().map(|r| r.quantity.value).collect())
}

fn keep(key: String, read: &Read, stated: &mut Vec<Stated>) {
    if let Some(uncertainty) = read.quantity.uncertainty {
        stated.push(Stated { key, value: read.quantity.value, text: read.text.clone(), uncertainty, share: None });
    }
}

fn angles(s: &Section<'_>, grids: usize, stated: &mut Vec<Stated>) -> Option<Vec<f64>> {
    if !s.has("angles") {
        s.lack("angles", "the angle of each grid from x, anticlockwise, as in [\"0 deg\", \"45 deg\", \"90 deg\"]");
        return None;
    }
    values(s, "angles", &[Kind::Degrees], grids, stated)
}

/// One sensitivity for all grids, or one each.
fn sensitivities(
    s: &Section<'_>,
    grids: usize,
    stated: &mut Vec<Stated>,
    assumed: &mut Vec<String>,
) -> Option<Vec<f64>> {
    let kinds = [Kind::Strain, Kind::Number];
    match s.table.peek("transverse").map(|e| &e.node.value) {
        None => {
            assumed.push("transverse: no transverse sensitivity".into());
            Some(std::vec![0.0; grids])
        }
        Some(Value::List(_)) => values(s, "transverse", &kinds, grids, stated),
        Some(_) => {
            let read = s.quantity("transverse", &kinds)?;
            keep("transverse".into(), &read, stated);
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
        keep(section.key_path(key), &read, stated);
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
    let grid = |channel: usize, g: &Grid| {
        format!("{} at {}°, K = {} %", name(channel), about(g.degrees), about(100.0 * g.sensitivity))
    };
    let channels = || rosette.channels.iter().map(|(c, _)| *c);
    match &rosette.grids {
        Grids::Three(law) => {
            let all: Vec<String> = channels().zip(law.grids()).map(|(c, g)| grid(c, g)).collect();
            out.push(format!("rosette: {}", all.join("; ")));
            out.push("rosette: ê (1 − ν0 K) = e(θ) + K e(θ + 90°) for each grid, ê what it indicates, θ anticlockwise from x, ν0 = 0.285; solved together".into());
        }
        Grids::Two(law) => {
            let first = law.first();
            let second = Grid { degrees: first.degrees + 90.0, sensitivity: law.second_sensitivity() };
            let all: Vec<String> = channels().zip([first, &second]).map(|(c, g)| grid(c, g)).collect();
            out.push(format!("tee: {}", all.join("; ")));
            out.push("tee: ê (1 − ν0 K) = e(θ) + K e(θ + 90°) for each grid, ê what it indicates, ν0 = 0.285; their directions are taken as the principal ones, without shear".into());
        }
    }
    if let Some((channel, _, g)) = &rosette.fourth {
        out.push(format!("fourth grid: {}", grid(*channel, g)));
    }
    if let Some((material, plane)) = &rosette.material {
        let plane = match plane {
            Plane::Strain => "plane strain (no strain out of the plane)",
            Plane::Stress => "plane stress (a free surface)",
        };
        out.push(format!(
            "material: E = {} GPa, ν = {}, {plane}",
            about(material.modulus() / 1e9),
            about(material.poisson())
        ));
    }
    out.push(format!(
        "gives: {}",
        match rosette.give {
            Give::PrincipalMax => "the larger principal strain".into(),
            Give::PrincipalMin => "the smaller principal strain".into(),
            Give::Direction => "the direction from x to the larger principal strain, anticlockwise, in (−90°, 90°]; ambiguous where every direction is principal".into(),
            Give::ShearMax => "the largest engineering shear strain in the plane".into(),
            Give::StrainX => "the strain along x".into(),
            Give::StrainY => "the strain along y".into(),
            Give::StrainXy => "the engineering shear strain γ_xy".into(),
            Give::StrainAlong(d) => format!("the strain at {d}° from x"),
            Give::StressMax => "the larger principal stress".into(),
            Give::StressMin => "the smaller principal stress".into(),
            Give::StressX => "the normal stress along x".into(),
            Give::StressY => "the normal stress along y".into(),
            Give::StressXy => "the shear stress τ_xy".into(),
            Give::StressAlong(d) => format!("the normal stress at {d}° from x"),
            Give::VonMises => "the equivalent stress of von Mises, σz with it".into(),
            Give::Tresca => "the equivalent stress of Tresca: the largest difference of two principal stresses, σz with them".into(),
            Give::Consistency => "what the fourth grid indicates, less what it should by the other three".to_string(),
        }
    ));
    out
}

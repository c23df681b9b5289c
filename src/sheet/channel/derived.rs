//! Channels that are computed from others: `combine`, stress and the load of a bar.

use std::collections::BTreeMap;
use std::format;
use std::string::String;
use std::vec::Vec;

use super::drafts::is_difference;
use super::{Known, lookup};
use crate::measurement::{Source, Stated};
use crate::sheet::node::Section;
use crate::sheet::unit::{self, Kind, Unit};
use crate::strain::{Loading, Material, Section as BarSection};

pub(super) fn combination(
    s: &Section<'_>,
    known: &BTreeMap<&str, Known>,
    stated: &mut Vec<Stated>,
) -> Option<(String, Source)> {
    let section = s.section("combine")?;
    let output = s.text("output");
    let mut terms = Vec::new();
    let mut units = Vec::new();
    for entry in &section.table.entries {
        let read = section.quantity(&entry.key, &[Kind::Number]);
        let found = lookup(s, known, &entry.key, entry.key_span.clone());
        let (Some(read), Some(found)) = (read, found) else { continue };
        if let Some(uncertainty) = read.quantity.uncertainty {
            stated.push(Stated {
                key: section.key_path(&entry.key),
                value: read.quantity.value,
                text: read.text.clone(),
                uncertainty,
                share: None,
            });
        }
        terms.push((found.index, read.quantity.value));
        units.push(found.unit?);
    }
    if terms.len() != section.table.entries.len() {
        return None;
    }
    let Some(first) = units.first() else {
        s.say(section.span.clone(), "combine needs at least one channel, as in { g01 = 0.5, g02 = -0.5 }");
        return None;
    };
    if let Some((unit, entry)) = units.iter().zip(&section.table.entries).find(|(u, _)| u.kind != first.kind) {
        s.say(
            entry.key_span.clone(),
            format!(
                "combine: '{}' gives {}, but the first gives {}",
                entry.key,
                unit.kind.expected(),
                first.kind.expected()
            ),
        );
        return None;
    }
    let sum: f64 = terms.iter().map(|(_, w)| w).sum();
    if first.kind == Kind::Celsius {
        if units.iter().any(|u| u != first) {
            let each: Vec<String> =
                section.table.entries.iter().zip(&units).map(|(e, u)| format!("{} {}", e.key, u.name)).collect();
            s.say(
                section.span.clone(),
                format!("combine: temperatures must have one unit before they are combined: {}", each.join(", ")),
            );
            return None;
        }
        if is_difference(sum) {
            // a difference: in kelvin
            if let Some((text, span)) = output
                && unit::find(Kind::Kelvins, text).is_none()
            {
                s.say(span, format!("output is '{text}', but these weights sum to 0: a temperature difference, in K"));
                return None;
            }
            for (_, weight) in &mut terms {
                *weight *= first.factor;
            }
            return Some(("K".into(), Source::Combination(terms)));
        }
        if (sum - 1.0).abs() < 1e-9 {
            if let Some((text, span)) = output
                && unit::find(Kind::Celsius, text) != Some(*first)
            {
                s.say(span, format!("output is '{text}', but the mean is in the channels' own unit, {}", first.name));
                return None;
            }
            return Some((first.name.into(), Source::Combination(terms)));
        }
        s.say(
            section.span.clone(),
            format!(
                "combine: weights of temperatures sum to 0 (a difference, in K) or to 1 (a mean); these sum to {sum}"
            ),
        );
        return None;
    }
    let unit = match output {
        None => *first,
        Some((text, span)) => match unit::find(first.kind, text) {
            Some(unit) => unit,
            None => {
                s.say(span, format!("output is '{text}'; these channels give {}", first.kind.expected()));
                return None;
            }
        },
    };
    for ((_, weight), own) in terms.iter_mut().zip(&units) {
        *weight *= between(own, &unit);
    }
    Some((unit.name.into(), Source::Combination(terms)))
}

/// Factor from one unit to another of its kind.
pub(in crate::sheet) fn between(from: &Unit, to: &Unit) -> f64 {
    if from == to {
        return 1.0;
    }
    by_power_of_ten(from.factor / to.factor, i32::from(from.exponent) - i32::from(to.exponent))
}

/// By one multiplication or division with an exact power of ten.
pub(in crate::sheet) fn by_power_of_ten(value: f64, power: i32) -> f64 {
    let ten: f64 = format!("1e{}", power.unsigned_abs()).parse().unwrap_or(f64::NAN);
    if power < 0 { value / ten } else { value * ten }
}

/// The unit that `output` states, or the usual one.
fn output(s: &Section<'_>, kind: Kind, usual: &str) -> Option<Unit> {
    let Some((text, span)) = s.text("output") else { return unit::find(kind, usual) };
    let found = unit::find(kind, text);
    if found.is_none() {
        s.say(span, format!("output is '{text}'; expected {}", kind.expected()));
    }
    found
}

pub(super) fn stress(
    s: &Section<'_>,
    known: &BTreeMap<&str, Known>,
    stated: &mut Vec<Stated>,
) -> Option<(String, Source)> {
    let (name, span) = s.text("of")?;
    let found = lookup(s, known, name, span.clone())?;
    let from = found.unit?;
    if from.kind != Kind::Strain {
        s.say(
            span,
            format!("of = '{name}': stress needs a strain channel, and this one gives {}", from.kind.expected()),
        );
        return None;
    }
    let output = output(s, Kind::Pascals, "MPa")?;
    let Some(material) = s.section("material") else {
        if !s.has("material") {
            s.lack("material", "stress needs a modulus, as in material = { modulus = \"205 GPa\" }");
        }
        return None;
    };
    material.quantity("poisson", &[Kind::Number]);
    let Some(modulus) = material.quantity("modulus", &[Kind::Pascals]) else {
        if !material.has("modulus") {
            material.lack("modulus", "the modulus of elasticity, as in \"205 GPa\"");
        }
        return None;
    };
    let (modulus, text) = (modulus.quantity, modulus.text);
    if modulus.value <= 0.0 {
        s.say(material.span.clone(), "material.modulus must be above zero");
        return None;
    }
    if let Some(uncertainty) = modulus.uncertainty {
        stated.push(Stated { key: "material.modulus".into(), value: modulus.value, text, uncertainty, share: None });
    }
    // σ = E e, in units of the output per unit of the strain
    let plain = crate::strain::uniaxial_stress(modulus.value, 1.0);
    let power = i32::from(from.exponent) - i32::from(output.exponent);
    let factor = by_power_of_ten(plain, power) * from.factor / output.factor;
    Some((output.name.into(), Source::Stress { of: found.index, loading: None, bar: None, factor }))
}

/// Axial force, bending moment or torque of a bar, from a strain channel.
pub(super) fn load(
    s: &Section<'_>,
    known: &BTreeMap<&str, Known>,
    stated: &mut Vec<Stated>,
) -> Option<(String, Source)> {
    let (name, span) = s.text("of")?;
    let found = lookup(s, known, name, span.clone())?;
    let from = found.unit?;
    if !s.has("load") {
        s.lack("load", "\"axial\", \"bending\" or \"torsion\"");
        return None;
    }
    let loading =
        s.choice("load", &[("axial", Loading::Axial), ("bending", Loading::Bending), ("torsion", Loading::Torsion)])?;
    let (wanted, given) = match loading {
        Loading::Torsion => (Kind::NewtonMetres, Kind::ShearStrain),
        Loading::Bending => (Kind::NewtonMetres, Kind::Strain),
        _ => (Kind::Newtons, Kind::Strain),
    };
    if from.kind != given {
        s.say(
            span,
            format!(
                "of = '{name}': this load needs {}, and the channel gives {}",
                given.expected(),
                from.kind.expected()
            ),
        );
        return None;
    }
    let output = output(s, wanted, if wanted == Kind::Newtons { "kN" } else { "N m" })?;
    if !s.has("section") {
        s.lack("section", "the section of the bar, as in { diameter = \"40 mm\" }");
        return None;
    }
    let shape = s.section("section")?;
    // a dimension or constant of a table, with its uncertainty
    let mut stated_in = |table: &Section<'_>, key: &str, kind: Kind, what: &str| {
        if !table.has(key) {
            table.lack(key, what);
            return None;
        }
        let read = table.quantity(key, &[kind])?;
        if let Some(uncertainty) = read.quantity.uncertainty {
            let (value, text) = (read.quantity.value, read.text);
            stated.push(Stated { key: table.key_path(key), value, text, uncertainty, share: None });
        }
        Some(read.quantity.value)
    };
    let section = match (shape.has("diameter"), shape.has("width") || shape.has("height"), shape.has("area")) {
        (true, false, false) => {
            let diameter = stated_in(&shape, "diameter", Kind::Metres, "")?;
            let bore = if shape.has("bore") { stated_in(&shape, "bore", Kind::Metres, "")? } else { 0.0 };
            BarSection::Round { diameter, bore }
        }
        (false, true, false) => BarSection::Rectangular {
            width: stated_in(&shape, "width", Kind::Metres, "the width, along the axis of bending")?,
            height: stated_in(&shape, "height", Kind::Metres, "the height, in the plane of bending")?,
        },
        (false, false, true) => BarSection::Area { area: stated_in(&shape, "area", Kind::SquareMetres, "")? },
        _ => {
            s.say(shape.span.clone(), "section is { diameter, bore }, { width, height } or { area }");
            return None;
        }
    };
    let Some(material) = s.section("material") else {
        if !s.has("material") {
            s.lack("material", "a load needs a modulus, as in material = { modulus = \"205 GPa\", poisson = 0.29 }");
        }
        return None;
    };
    let modulus = stated_in(&material, "modulus", Kind::Pascals, "the modulus of elasticity, as in \"205 GPa\"")?;
    let poisson = if material.has("poisson") || loading == Loading::Torsion {
        stated_in(&material, "poisson", Kind::Number, "Poisson's ratio, which torsion needs")?
    } else {
        0.0
    };
    let elastic = match Material::new(modulus, poisson) {
        Ok(elastic) => elastic,
        Err(error) => {
            s.say(material.span.clone(), format!("material: {error}"));
            return None;
        }
    };
    match section.load_per_strain(loading, &elastic) {
        Ok(plain) => {
            let power = i32::from(from.exponent) - i32::from(output.exponent);
            let factor = by_power_of_ten(plain, power) * from.factor / output.factor;
            let (loading, bar) = (Some(loading), Some((section, elastic)));
            Some((output.name.into(), Source::Stress { of: found.index, loading, bar, factor }))
        }
        Err(error) => {
            s.say(shape.span.clone(), format!("section: {error}"));
            None
        }
    }
}

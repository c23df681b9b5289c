//! The laws of thermometers as a sheet names them.

use std::format;
use std::string::String;
use std::vec::Vec;

use crate::chain::{Element, Temperature};
use crate::measurement::{Side, Tolerance, ToleranceClass};
use crate::metal;
use crate::platinum::its90::Deviation;
use crate::platinum::{self, AlphaDeltaBeta, Class, Coefficients, FractionOfB, Grade, IEC_60751, Resistor, Scale};
use crate::sheet::channel::side;
use crate::sheet::circuit::{BETA_RANGE, Reader};
use crate::sheet::node::Section;
use crate::sheet::unit::Kind;
use crate::thermistor::{self, Beta, Law, LogarithmOfRatio, Points, ReciprocalOfTemperature, SteinhartHart};
use crate::thermocouple::{self, Thermocouple};

/// A thermometer as a sheet names it.
pub(super) struct Sensor {
    pub(super) element: Element,
    /// Resistance by which the other arms of a bridge are chosen, Ω.
    pub(super) nominal: f64,
    pub(super) tolerance: Option<ToleranceClass>,
    /// Temperature of a reference junction, with its channel.
    pub(super) temperature: Temperature,
    pub(super) side: Option<Side>,
}

impl Sensor {
    fn of(element: Element, nominal: f64, tolerance: Option<ToleranceClass>) -> Self {
        Self { element, nominal, tolerance, temperature: Temperature::None, side: None }
    }
}

/// A class as it stands in the section of its sensor.
fn class_of(section: &Section<'_>, limits: Tolerance) -> ToleranceClass {
    let text = section.text("class").map_or_else(String::new, |(text, _)| text.into());
    ToleranceClass { key: section.key_path("class"), text, limits }
}

/// Subranges of ITS-90, each by the fixed point at its far end.
const SUBRANGES: [(&str, usize); 11] = [
    ("hydrogen", 7),
    ("neon", 5),
    ("oxygen", 3),
    ("argon", 2),
    ("mercury", 2),
    ("gallium", 1),
    ("indium", 1),
    ("tin", 2),
    ("zinc", 2),
    ("aluminium", 3),
    ("silver", 4),
];

/// Mean coefficient from 0 °C to 100 °C beyond which none is believed, 1/K; pure metals have 4e-3 to 7e-3 /K: common practice,
/// no source.
const LARGEST_SLOPE: f64 = 0.1;

impl<'a> Reader<'a, '_> {
    /// The thermometer of the channel.
    pub(super) fn sensor(&mut self) -> Option<Sensor> {
        let s = self.s.clone();
        if s.has("platinum") {
            self.platinum()
        } else if s.has("metal") {
            self.metal()
        } else if s.has("thermocouple") {
            self.thermocouple()
        } else {
            let law = self.thermistor()?;
            let [low, high] = law.range_celsius();
            let nominal = law.ohms_from_celsius(25.0_f64.max(low).min(high));
            Some(Sensor::of(Element::Thermistor(law), nominal, None))
        }
    }

    fn platinum(&mut self) -> Option<Sensor> {
        let s = self.s.clone();
        let section = s.section("platinum")?;
        let [standard, certificate] = ["standard", "triple_point"].map(|k| section.has(k));
        let has = |keys: &[&str]| keys.iter().any(|k| section.has(k));
        let (abc, letters) = (has(&["a", "b", "c"]), has(&["alpha", "delta", "beta"]));
        let ways = [standard, certificate, abc, letters].into_iter().filter(|way| *way).count();
        if ways > 1 {
            self.say(
                section.span.clone(),
                "platinum is stated in more than one way: it is a standard, or a, b and c, or alpha, delta and beta, or triple_point and a deviation function",
            );
            return None;
        }
        if certificate {
            return self.its90(&section);
        }
        let r0 = self.needed(&section, "r0", Kind::Ohms, "the resistance at 0 °C");
        let range = if section.has("range") { Some(self.range(&section)?) } else { None };
        if ways == 0 {
            section.lack("standard", "as in standard = \"IEC 60751\", or the coefficients a, b and c");
            return None;
        }
        if !standard && section.has("class") {
            let entry = section.entry("class")?;
            self.say(
                entry.key_span.clone(),
                "a class belongs to the curve of a standard: state the uncertainty of a curve of its own with its figures",
            );
            return None;
        }
        if standard {
            let published = self.published(&section)?;
            let mut curve = published.coefficients;
            let tolerance =
                if section.has("class") { Some(self.platinum_class(&section, published.name, range)?) } else { None };
            curve.range_celsius = range.unwrap_or(curve.range_celsius);
            let curve = curve.with_r0(r0?);
            return Some(Sensor::of(
                Element::Platinum(curve),
                curve.r0_ohms,
                tolerance.map(|t| class_of(&section, Tolerance::Platinum(t))),
            ));
        }
        let cold = if abc { "c" } else { "beta" };
        let slope = if abc { "a" } else { "alpha" };
        let range_celsius = range.unwrap_or_else(|| {
            let range = if section.has(cold) { IEC_60751.range_celsius } else { [0.0, 850.0] };
            self.assume(format!("platinum: range {} °C to {} °C", range[0], range[1]));
            range
        });
        let below =
            |this: &mut Self| if section.has(cold) { this.value(&section, cold, Kind::Number) } else { Some(0.0) };
        let element = if abc {
            let a = self.needed(&section, "a", Kind::Number, "coefficient A, 1/K");
            let b = self.needed(&section, "b", Kind::Number, "coefficient B, 1/K2");
            Element::Platinum(Coefficients { r0_ohms: r0?, a: a?, b: b?, c: below(self)?, range_celsius })
        } else {
            let alpha = self.needed(&section, "alpha", Kind::Number, "the mean coefficient from 0 °C to 100 °C, 1/K");
            let delta = self.needed(&section, "delta", Kind::Number, "Callendar's delta, K");
            let beta = below(self)?;
            Element::AlphaDeltaBeta(AlphaDeltaBeta { r0_ohms: r0?, alpha: alpha?, delta: delta?, beta, range_celsius })
        };
        let curve = match element {
            Element::Platinum(curve) => curve,
            Element::AlphaDeltaBeta(k) => k.into(),
            _ => return None,
        };
        // R is lowest at the lower end, where a constant that is wrong by a power of ten shows first
        let lowest = curve.ohms_from_celsius(range_celsius[0]);
        let mean = curve.a + 100.0 * curve.b;
        if lowest <= 0.0 || mean > LARGEST_SLOPE {
            let entry = section.entry(slope)?;
            let why = if lowest <= 0.0 {
                format!("makes the resistance fall to zero or below at {} °C", range_celsius[0])
            } else {
                format!("is more than {LARGEST_SLOPE} 1/K, which no metal has")
            };
            self.say(entry.node.span.clone(), format!("platinum.{slope} {why}: it is in 1/K, as in 3.9083e-3"));
            return None;
        }
        Some(Sensor::of(element, r0?, None))
    }

    /// A published curve by its name.
    fn published(&mut self, section: &Section<'a>) -> Option<platinum::Published> {
        let all = platinum::PUBLISHED;
        let mut names: Vec<(&str, usize)> = all.iter().enumerate().map(|(i, p)| (p.name, i)).collect();
        // editions that left the curve as it was
        names.extend([("IEC 60751:2008", 0), ("IEC 60751:2022", 0)]);
        let published = *all.get(section.choice("standard", &names)?)?;
        match published.scale {
            Scale::Its90 => {}
            Scale::Ipts68 => self.assume(format!(
                "platinum: {} is on IPTS-68, and so are its temperatures: t90 − t68 is −0.026 K at 100 °C",
                published.name
            )),
            Scale::NotStated => self.assume(format!("platinum: no source says on which scale {} is", published.name)),
        }
        Some(published)
    }

    fn platinum_class(
        &mut self,
        section: &Section<'a>,
        standard: &str,
        range: Option<[f64; 2]>,
    ) -> Option<platinum::Tolerance> {
        let resistor = if section.has("resistor") {
            Some(section.choice("resistor", &[("wire-wound", Resistor::WireWound), ("film", Resistor::Film)])?)
        } else {
            None
        };
        let class = match standard {
            "IEC 60751" => {
                let classes = [("AA", Ok(Class::AA)), ("A", Ok(Class::A)), ("B", Ok(Class::B)), ("C", Ok(Class::C))];
                let fractions = [("1/3 B", Err(FractionOfB::Third)), ("1/10 B", Err(FractionOfB::Tenth))];
                let all: Vec<(&str, Result<Class, FractionOfB>)> = classes.into_iter().chain(fractions).collect();
                section.choice("class", &all)?
            }
            "ASTM E1137" => {
                let grade = section.choice("class", &[("A", Grade::A), ("B", Grade::B)])?;
                return Some(platinum::Tolerance::astm_e1137(grade));
            }
            "IEC 751:1983" | "IEC 751:1983, short figures" => {
                let class = section.choice("class", &[("A", Class::A), ("B", Class::B)])?;
                return platinum::Tolerance::iec_751(class);
            }
            _ => {
                let entry = section.entry("class")?;
                self.say(entry.key_span.clone(), format!("no class of {standard} is known here"));
                return None;
            }
        };
        match class {
            Ok(class) => {
                let resistor = resistor.unwrap_or_else(|| {
                    self.assume("platinum.resistor: film, which has the narrower range of the class");
                    Resistor::Film
                });
                Some(platinum::Tolerance::iec_60751(class, resistor))
            }
            Err(fraction) => {
                let Some(range) = range else {
                    section.lack("range", "a fraction of class B is trade usage, in no standard: state the range that the maker gives it for");
                    return None;
                };
                self.assume("platinum.class: a fraction of class B is trade usage, not a class of IEC 60751");
                platinum::Tolerance::fraction_of_b(fraction, range).ok()
            }
        }
    }

    /// A standard thermometer with its certificate.
    fn its90(&mut self, section: &Section<'a>) -> Option<Sensor> {
        let triple_point_ohms = self.positive(section, "triple_point", Kind::Ohms);
        if !section.has("subrange") || !section.has("deviation") {
            let what = "subrange, as in \"zinc\", and deviation = [a, b, ...] of the certificate";
            section.lack(if section.has("subrange") { "deviation" } else { "subrange" }, what);
            return None;
        }
        let names: Vec<(&str, (&str, usize))> = SUBRANGES.iter().map(|(name, n)| (*name, (*name, *n))).collect();
        let (name, count) = section.choice("subrange", &names)?;
        let read = section.quantities("deviation", &[Kind::Number], count, count)?;
        let mut k = [0.0; 7];
        for (i, (slot, one)) in k.iter_mut().zip(&read).enumerate() {
            self.keep(format!("platinum.deviation[{}]", i + 1), one);
            *slot = one.quantity.value;
        }
        let [a, b, c1, c2, c3, c4, c5] = k;
        let deviation = match name {
            "hydrogen" => Deviation::FromHydrogen { a, b, c: [c1, c2, c3, c4, c5] },
            "neon" => Deviation::FromNeon { a, b, c: [c1, c2, c3] },
            "oxygen" => Deviation::FromOxygen { a, b, c1 },
            "argon" => Deviation::FromArgon { a, b },
            "mercury" => Deviation::MercuryToGallium { a, b },
            "gallium" => Deviation::ToGallium { a },
            "indium" => Deviation::ToIndium { a },
            "tin" => Deviation::ToTin { a, b },
            "zinc" => Deviation::ToZinc { a, b },
            "aluminium" => Deviation::ToAluminium { a, b, c: c1 },
            _ => {
                let what = "W at the freezing point of aluminium, from the certificate";
                let w_aluminium = self.needed(section, "aluminium_ratio", Kind::Number, what)?;
                Deviation::ToSilver { a, b, c: c1, d: c2, w_aluminium }
            }
        };
        let triple_point_ohms = triple_point_ohms?;
        let element = Element::Standard { triple_point_ohms, deviation };
        Some(Sensor::of(element, triple_point_ohms, None))
    }

    fn metal(&mut self) -> Option<Sensor> {
        let s = self.s.clone();
        let section = s.section("metal")?;
        if !section.has("standard") {
            section.lack("standard", "as in standard = \"DIN 43760\" (nickel) or \"GOST 6651-2009\" (copper)");
            return None;
        }
        let all = metal::PUBLISHED;
        let names = [("DIN 43760", 0_usize), ("GOST 6651-2009", 1), ("copper 10 ohm", 2)];
        let at = section.choice("standard", &names)?;
        let law = all.get(at)?.law;
        let r0 = if at == 2 && !section.has("r0") {
            self.assume("metal.r0: 9.035 ohm, that is 10 ohm at 25 °C");
            9.035
        } else {
            self.needed(&section, "r0", Kind::Ohms, "the resistance at 0 °C")?
        };
        let mut law = law.with_r0(r0);
        if section.has("range") {
            let [low, high] = law.range_celsius();
            let own = self.range(&section)?;
            if own[0] < low || own[1] > high {
                let entry = section.entry("range")?;
                self.say(
                    entry.node.span.clone(),
                    format!("metal.range reaches past the curve's {low} °C to {high} °C"),
                );
                return None;
            }
            match &mut law {
                metal::Law::Nickel(k) => k.range_celsius = own,
                metal::Law::Copper(k) => k.range_celsius = own,
            }
        }
        Some(Sensor::of(Element::Metal(law), r0, None))
    }

    fn thermistor(&mut self) -> Option<Law> {
        let s = self.s.clone();
        let section = s.section("thermistor")?;
        let ways: Vec<&str> = ["steinhart_hart", "points", "ratio_terms", "reciprocal_terms"]
            .into_iter()
            .filter(|k| section.has(k))
            .chain((section.has("beta") || section.has("r25")).then_some("r25 and beta"))
            .collect();
        let way = match ways.as_slice() {
            [way] => *way,
            [] => {
                section.lack(
                    "r25",
                    "r25 and beta, or steinhart_hart = [a, b, c], or points = [[degC, ohm], ...], or reference with ratio_terms or reciprocal_terms",
                );
                return None;
            }
            several => {
                self.say(section.span.clone(), format!("thermistor has {}; it is one of them", several.join(" and ")));
                return None;
            }
        };
        let range = if section.has("range") { Some(self.range(&section)?) } else { None };
        match way {
            "r25 and beta" => {
                let r25 = self.needed(&section, "r25", Kind::Ohms, "the resistance at 25 °C");
                let beta = if section.has("beta") {
                    // β in kelvin, with or without the unit
                    self.quantity(&section, "beta", &[Kind::Kelvins, Kind::Number]).map(|q| q.quantity.value)
                } else {
                    section.lack("beta", "the constant β, as in \"3950 K\"");
                    None
                };
                let range_celsius = range.unwrap_or_else(|| {
                    let [low, high] = BETA_RANGE;
                    self.assume(format!("thermistor: range {low} °C to {high} °C"));
                    BETA_RANGE
                });
                Some(Law::Beta(Beta { r25_ohms: r25?, beta_kelvin: beta?, range_celsius }))
            }
            "points" => self.points(&section, range),
            _ => {
                let reference = if way == "steinhart_hart" {
                    None
                } else {
                    Some(self.needed(&section, "reference", Kind::Ohms, "the resistance that the ratio refers to")?)
                };
                let range_celsius = self.stated_range(&section, range);
                Some(match reference {
                    None => {
                        let [a, b, c] = self.list::<3>(&section, way, Kind::Number)?;
                        Law::SteinhartHart(SteinhartHart { a, b, c, range_celsius: range_celsius? })
                    }
                    Some(reference_ohms) => {
                        let read = section.quantities(way, &[Kind::Number], 4, 4)?;
                        let mut k = [0.0; 4];
                        for (i, (slot, one)) in k.iter_mut().zip(&read).enumerate() {
                            self.keep(format!("thermistor.terms[{}]", i + 1), one);
                            *slot = one.quantity.value;
                        }
                        let [a, b, c, d] = k;
                        let range_celsius = range_celsius?;
                        if way == "ratio_terms" {
                            Law::LogarithmOfRatio(LogarithmOfRatio { reference_ohms, a, b, c, d, range_celsius })
                        } else {
                            Law::ReciprocalOfTemperature(ReciprocalOfTemperature {
                                reference_ohms,
                                a,
                                b,
                                c,
                                d,
                                range_celsius,
                            })
                        }
                    }
                })
            }
        }
    }

    /// The range that coefficients hold for.
    fn stated_range(&self, section: &Section<'a>, range: Option<[f64; 2]>) -> Option<[f64; 2]> {
        if range.is_none() {
            section
                .lack("range", "the temperatures that the coefficients hold for, as in [\"-40 degC\", \"125 degC\"]");
        }
        range
    }

    /// Points of (°C, Ω): two are a β law, more a curve through all of them.
    fn points(&mut self, section: &Section<'a>, range: Option<[f64; 2]>) -> Option<Law> {
        let entry = section.entry("points")?;
        let rows = section.rows("points", 2)?;
        let points: Vec<[f64; 2]> = rows.iter().filter_map(|row| row.first_chunk::<2>().copied()).collect();
        let wrong = |error: crate::Error| self.say(entry.node.span.clone(), format!("thermistor.points: {error}"));
        if let [first, second] = points.as_slice() {
            return match Beta::through(*first, *second, range.unwrap_or([first[0], second[0]])) {
                Ok(law) => Some(Law::Beta(law)),
                Err(error) => {
                    wrong(error);
                    None
                }
            };
        }
        if range.is_some() {
            self.say(section.span.clone(), "thermistor.points hold between their ends: range is for two points alone");
            return None;
        }
        match Points::new(&points) {
            Ok(points) => Some(thermistor::Law::Points(points)),
            Err(error) => {
                wrong(error);
                None
            }
        }
    }

    fn thermocouple(&mut self) -> Option<Sensor> {
        let s = self.s.clone();
        let section = s.section("thermocouple")?;
        if !section.has("type") {
            section.lack("type", "the letter of the thermocouple, as in \"K\"");
            return None;
        }
        let letters: Vec<(&str, Thermocouple)> = Thermocouple::ALL.into_iter().map(|k| (k.letter(), k)).collect();
        let kind = section.choice("type", &letters)?;
        if !section.has("reference") {
            section.lack(
                "reference",
                "the temperature of the reference junction: a channel, a value as \"25 degC\", or \"ice point\"",
            );
            return None;
        }
        let mut place = None;
        let ice = section
            .table
            .peek("reference")
            .is_some_and(|e| matches!(&e.node.value, crate::sheet::node::Value::Text(text) if text == "ice point"));
        let temperature = if ice {
            section.entry("reference");
            Temperature::Fixed(0.0)
        } else {
            match side(&section, "reference", self.known, self.assumed)? {
                Ok(read) => {
                    self.keep("thermocouple.reference".into(), &read);
                    Temperature::Fixed(read.quantity.value)
                }
                Err(side) => {
                    place = Some(side);
                    Temperature::Column
                }
            }
        };
        let tolerance = if section.has("class") {
            use thermocouple::Class::{One, Three, Two};
            let class = section.choice("class", &[("1", One), ("2", Two), ("3", Three)])?;
            let Some(tolerance) = thermocouple::Tolerance::iec_60584(kind, class) else {
                let entry = section.entry("class")?;
                let words: String =
                    format!("thermocouple.class: IEC 60584-1 has no such class for type {}", kind.letter());
                self.say(entry.node.span.clone(), words);
                return None;
            };
            Some(class_of(&section, Tolerance::Thermocouple(tolerance)))
        } else {
            None
        };
        Some(Sensor { temperature, side: place, ..Sensor::of(Element::Thermocouple(kind), 0.0, tolerance) })
    }
}

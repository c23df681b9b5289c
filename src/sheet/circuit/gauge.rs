//! Strain gauges: gauge factor, thermal output, expansion and zero.

use std::format;
use std::string::ToString;
use std::vec::Vec;

use super::{GAUGE, Pieces, Reader, in_unit, side, side_of_text};
use crate::chain::{Chain, Element, Network, STRAIN_LIMIT, Signal, Supply, Temperature};
use crate::measurement::{Side, Stated, ZeroSource};
use crate::sheet::node::{Read, Section};
use crate::sheet::order::rising;
use crate::sheet::unit::{Kind, Unit};
use crate::signal::{Arm, Bridge, FullScale};
use crate::strain::{
    Expansion, Gauge, Points, ThermalOutput, ThermalPoints, Transverse, Zero, ZeroMeaning, ZeroReading,
};

/// A text for each arm.
fn arms_texts<'a>(section: &Section<'a>) -> Option<Vec<(&'a str, core::ops::Range<usize>)>> {
    let texts = section.texts("temperatures")?;
    if texts.len() != 4 {
        let (path, count) = (section.key_path("temperatures"), texts.len());
        let entry = section.entry("temperatures")?;
        section.say(
            entry.node.span.clone(),
            format!("{path} has {count} entries; a bridge has four arms (\"\" = as the gauge)"),
        );
        return None;
    }
    Some(texts)
}

impl<'a> Reader<'a, '_> {
    pub(super) fn gauge_chain(&mut self, unit: Option<Unit>) -> Option<Pieces> {
        let s = self.s.clone();
        let section = s.section("gauge")?;
        let nominal = self.needed(&section, "resistance", Kind::Ohms, "the gauge's resistance");
        let factor = self.needed(&section, "gauge_factor", Kind::Number, "the gauge factor");
        let slope = if section.has("slope") { self.value(&section, "slope", Kind::PerKelvin)? } else { 0.0 };
        let reference_celsius = if section.has("reference") {
            self.value(&section, "reference", Kind::Celsius)?
        } else {
            if slope != 0.0 {
                self.assume("gauge.reference: 24 °C, at which gauge factors are commonly stated");
            }
            24.0
        };
        if !s.has("bridge") {
            s.lack("bridge", "how the gauges are wired, as in bridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }");
            return None;
        }
        if let Some(entry) = s.table.peek("circuit") {
            self.say(entry.key_span.clone(), "strain gauges are read through a bridge, not a circuit");
            return None;
        }
        let (bridge, supply, supply_input) = self.bridge(nominal)?;
        let (thermal_output, thermal_points) = self.thermal_output()?;
        let expansion = self.expansion()?;
        let gauge =
            Gauge { slope, reference_celsius, thermal_output, thermal_points, expansion, ..Gauge::new(factor?) };
        let mut temperature = Temperature::None;
        let mut sides: [Option<Side>; 6] = Default::default();
        let arm_temperatures = self.arm_temperatures(&gauge, &bridge, &mut sides)?;
        let own_everywhere = bridge
            .arms
            .iter()
            .zip(&arm_temperatures)
            .all(|(arm, own)| matches!(arm, Arm::Fixed) || !matches!(own, Temperature::None));
        if s.has("temperature") {
            match side(&s, "temperature", self.known, self.assumed)? {
                Ok(read) => {
                    self.keep("temperature".into(), &read);
                    temperature = Temperature::Fixed(read.quantity.value);
                }
                // gauges that do not feel temperature, or have their own, wait for no sample, but for what they drift along
                Err(side) if !gauge.needs_temperature() || own_everywhere => {
                    sides[0] = Some(side).filter(|_| self.drifts_with_temperature());
                }
                Err(side) => {
                    temperature = Temperature::Column;
                    sides[0] = Some(side);
                }
            }
        } else if gauge.needs_temperature() && !own_everywhere {
            s.lack(
                "temperature",
                "the gauge's slope, thermal output or expansion needs it: a channel, or a value such as \"21 degC\"",
            );
            return None;
        }
        let reading = self.signal(unit?, GAUGE)?;
        let converter = self.converter(reading)?;
        let amplifier = self.amplifier()?;
        self.needs_supply("bridge", reading, converter.as_ref(), &amplifier, &supply)?;
        let varies = matches!(supply, Supply::Column { .. })
            && (reading.signal == Signal::Volts
                || converter.as_ref().is_some_and(|c| c.full_scale != FullScale::Supply));
        let (zero, source, zero_stated) = self.zero(unit?, &gauge, &bridge, &arm_temperatures, varies)?;
        let limit = if s.has("largest_strain") {
            let limit = self.quantity(&s, "largest_strain", &[Kind::Strain, Kind::Number])?.quantity.value;
            if limit.is_nan() || limit <= 0.0 || limit > 1.0 {
                let entry = s.entry("largest_strain")?;
                self.say(entry.node.span.clone(), "largest_strain must be above zero and at most 100 %");
                return None;
            }
            limit
        } else {
            STRAIN_LIMIT
        };
        let lead_warmth = self.lead_warmth(&mut sides[1])?;
        let transverse = self.transverse()?;
        let chain = Chain {
            reading,
            converter,
            amplifier,
            supply,
            temperature,
            arm_temperatures,
            lead_warmth,
            transverse,
            ..Chain::new(Network::Bridge(bridge), Element::Gauge { gauge, zero, limit })
        };
        Some(Pieces { zero: source, zero_stated, supply: supply_input, sides, ..Pieces::of(chain) })
    }

    /// Temperatures of arms that have their own.
    fn arm_temperatures(
        &mut self,
        gauge: &Gauge,
        bridge: &Bridge,
        sides: &mut [Option<Side>; 6],
    ) -> Option<[Temperature; 4]> {
        let s = self.s.clone();
        let mut out = [Temperature::None; 4];
        let section = s.section("bridge")?;
        if !section.has("temperatures") {
            return Some(out);
        }
        let texts = arms_texts(&section)?;
        for (i, ((text, span), arm)) in texts.into_iter().zip(&bridge.arms).enumerate() {
            if text.trim().is_empty() {
                continue;
            }
            let path = format!("bridge.temperatures[{}]", i + 1);
            if matches!(arm, Arm::Fixed) {
                self.say(span, format!("{path}: this arm is a fixed resistor, which feels no temperature"));
                return None;
            }
            let found = side_of_text(&s, &path, text, span, self.known, self.assumed)?;
            match (found, out.get_mut(i), sides.get_mut(i + 2)) {
                (Ok(read), Some(slot), _) => {
                    self.keep(path, &read);
                    *slot = Temperature::Fixed(read.quantity.value);
                }
                // a gauge that does not feel temperature waits for no sample
                (Err(side), Some(slot), Some(place)) if gauge.needs_temperature() => {
                    *slot = Temperature::Column;
                    *place = Some(side);
                }
                _ => {}
            }
        }
        Some(out)
    }

    fn transverse(&mut self) -> Option<Option<Transverse>> {
        let s = self.s.clone();
        if !s.has("transverse") {
            return Some(None);
        }
        let section = s.section("transverse")?;
        if !section.has("sensitivity") {
            section.lack("sensitivity", "the transverse sensitivity K, as in \"0.4 %\"");
        }
        let sensitivity = self.quantity(&section, "sensitivity", &[Kind::Strain, Kind::Number]);
        let strain_ratio = self.needed(
            &section,
            "strain_ratio",
            Kind::Number,
            "strain across the grid over strain along it; minus Poisson's ratio in a uniaxial state",
        );
        self.assume(crate::sheet::NU0);
        Some(Some(Transverse { sensitivity: sensitivity?.quantity.value, strain_ratio: strain_ratio? }))
    }

    pub(super) fn thermal_output(&mut self) -> Option<(Option<ThermalOutput>, Option<ThermalPoints>)> {
        let s = self.s.clone();
        if !s.has("thermal_output") {
            return Some((None, None));
        }
        let section = s.section("thermal_output")?;
        // scatter of the lot: an uncertainty that grows with |T − T₀|
        if let Some((text, span)) = section.text("scatter") {
            match crate::sheet::quantity::parse_uncertainty(text, Kind::PerKelvin) {
                Ok(uncertainty) => self.stated.push(Stated {
                    key: "thermal_output.scatter".into(),
                    value: 0.0,
                    text: text.to_string(),
                    uncertainty,
                    share: None,
                }),
                Err(message) => self.say(span, format!("thermal_output.scatter: {message}")),
            }
        }
        if section.has("points") {
            if section.has("coefficients") {
                self.say(
                    section.span.clone(),
                    "thermal_output has both coefficients and points; it is one or the other",
                );
                return None;
            }
            return Some((None, Some(self.thermal_points(&section)?)));
        }
        if !section.has("coefficients") {
            section.lack("coefficients", "the polynomial of the gauge package, lowest power first, in microstrain");
            return None;
        }
        let read = section.quantities("coefficients", &[Kind::Number], 1, 7)?;
        let mut coefficients = [0.0; 7];
        for (i, (slot, one)) in coefficients.iter_mut().zip(&read).enumerate() {
            *slot = one.quantity.value;
            self.keep(format!("thermal_output.coefficients[{i}]"), one);
        }
        let fahrenheit = if section.has("in") {
            section.choice("in", &[("degC", false), ("°C", false), ("degF", true), ("°F", true)])?
        } else {
            self.assume("thermal_output: polynomial in degC");
            false
        };
        let gauge_factor = if section.has("gauge_factor") {
            self.value(&section, "gauge_factor", Kind::Number)?
        } else {
            self.assume("thermal_output: taken with a gauge factor of 2.0");
            2.0
        };
        let range_celsius = if section.has("range") {
            self.range(&section)?
        } else {
            self.assume("thermal_output: no range stated, used at every temperature");
            [f64::NEG_INFINITY, f64::INFINITY]
        };
        Some((Some(ThermalOutput { coefficients, fahrenheit, gauge_factor, range_celsius }), None))
    }

    /// `points = [[-20, -80.5], [0, -31.2], …]`: temperature and microstrain.
    fn thermal_points(&mut self, section: &Section<'a>) -> Option<ThermalPoints> {
        let entry = section.entry("points")?;
        let fahrenheit = if section.has("in") {
            section.choice("in", &[("degC", false), ("°C", false), ("degF", true), ("°F", true)])?
        } else {
            self.assume("thermal_output: points in degC");
            false
        };
        let gauge_factor = if section.has("gauge_factor") {
            self.value(section, "gauge_factor", Kind::Number)?
        } else {
            self.assume("thermal_output: taken with a gauge factor of 2.0");
            2.0
        };
        let rows = section.rows("points", 2)?;
        let points: Vec<[f64; 2]> = rows
            .into_iter()
            .filter_map(|row| match row.as_slice() {
                [t, v] => Some([if fahrenheit { (t - 32.0) / 1.8 } else { *t }, *v]),
                _ => None,
            })
            .collect();
        match Points::new(&points) {
            Ok(points) => Some(ThermalPoints { points, gauge_factor }),
            Err(error) => {
                self.say(entry.node.span.clone(), format!("thermal_output.points: {error}"));
                None
            }
        }
    }

    pub(super) fn expansion(&mut self) -> Option<Option<Expansion>> {
        let s = self.s.clone();
        if !s.has("expansion") {
            return Some(None);
        }
        let section = s.section("expansion")?;
        let specimen = self.needed(&section, "specimen", Kind::PerKelvin, "thermal expansion of the specimen");
        let data = self.needed(&section, "data", Kind::PerKelvin, "thermal expansion that the gauge data are for");
        Some(Some(Expansion { specimen: specimen?, data: data? }))
    }

    pub(super) fn zero(
        &mut self,
        unit: Unit,
        gauge: &Gauge,
        bridge: &Bridge,
        arms: &[Temperature; 4],
        varies: bool,
    ) -> Option<(Zero, ZeroSource, bool)> {
        let s = self.s.clone();
        if !s.has("zero") {
            if gauge.has_thermal() {
                s.lack("zero", "thermal output counts from the temperature at zero, as in zero = { at = \"0 mV/V\", temperature = \"21 degC\" }");
                return None;
            }
            self.assume(if s.has("transducer") {
                "zero: the bridge as stated is without load"
            } else {
                "zero: the bridge as stated is at zero strain"
            });
            return Some((Zero::default(), ZeroSource::Stated, false));
        }
        let section = s.section("zero")?;
        let words = [
            ("strain", ZeroMeaning::Strain),
            ("resistance", ZeroMeaning::Resistance),
            ("completion", ZeroMeaning::Completion),
        ];
        let mut meaning = ZeroMeaning::Strain;
        let mut window_from = None;
        if let Some((text, span)) = section.text("from") {
            match words.iter().find(|(word, _)| *word == text) {
                Some((_, found)) => meaning = *found,
                None if section.has("to") => window_from = Some((text, span)),
                None => {
                    self.say(
                        span,
                        format!("zero.from is '{text}'; expected \"strain\", \"resistance\" or \"completion\", or a moment with zero.to beside it"),
                    );
                    return None;
                }
            }
        }
        if section.has("meaning") {
            meaning = section.choice("meaning", &words)?;
        }
        let celsius =
            if section.has("temperature") { Some(self.value(&section, "temperature", Kind::Celsius)?) } else { None };
        let to = section.text("to");
        let (reading, source) = match (section.has("at"), section.has("rows"), window_from, to) {
            (true, false, None, None) => {
                let kinds = [unit.kind, Kind::VoltageRatio];
                let read =
                    self.quantity(&section, "at", if unit.kind == Kind::VoltageRatio { &kinds[..1] } else { &kinds })?;
                if varies && read.quantity.unit.kind != Kind::VoltageRatio {
                    let entry = section.entry("at")?;
                    self.say(
                        entry.node.span.clone(),
                        "zero.at must be output over supply, as in \"0.03 mV/V\", since the supply varies from row to row",
                    );
                    return None;
                }
                let reading = if read.quantity.unit.kind == unit.kind {
                    ZeroReading::AsRecorded(in_unit(read.quantity.value, unit))
                } else {
                    ZeroReading::Ratio(read.quantity.value)
                };
                (Some(reading), ZeroSource::Stated)
            }
            (false, true, None, None) => (None, ZeroSource::Rows(section.whole("rows", 1, u64::MAX)?)),
            (false, false, Some(from), Some((to, span))) => {
                if !rising(&section, from.0, (to, span.clone()), true) {
                    return None;
                }
                (None, ZeroSource::Window { from: section.moment(from), to: section.moment((to, span)) })
            }
            (false, false, None, None)
                if ["temperature", "temperatures", "lead_temperature"].iter().any(|key| section.has(key)) =>
            {
                (None, ZeroSource::Stated)
            }
            _ => {
                self.say(
                    section.span.clone(),
                    "zero has one of: at = a reading; rows = a number of first rows; from and to = a stretch of time; or temperatures alone",
                );
                return None;
            }
        };
        // arms that follow the gauge need its temperature at zero, those of their own need their own
        let gauges = || bridge.arms.iter().zip(arms).filter(|(arm, _)| !matches!(arm, Arm::Fixed));
        let stated = source == ZeroSource::Stated;
        if gauge.has_thermal()
            && celsius.is_none()
            && stated
            && gauges().any(|(_, own)| matches!(own, Temperature::None))
        {
            section
                .lack("temperature", "the temperature at which the zero was taken, which thermal output counts from");
            return None;
        }
        let arm_celsius = self.zero_temperatures(&section, arms)?;
        if gauge.has_thermal()
            && stated
            && arms.iter().zip(&arm_celsius).any(|(own, at)| matches!(own, Temperature::Column) && at.is_none())
        {
            section.lack(
                "temperatures",
                "of the arms whose temperature is a channel, when the zero was taken, as in [\"20 degC\", \"\", \"\", \"\"]",
            );
            return None;
        }
        let lead_celsius = self.zero_lead_temperature(&section, stated)?;
        Some((Zero { reading, meaning, celsius, lead_celsius, arm_celsius }, source, celsius.is_some()))
    }

    /// Temperatures at zero of arms that have their own: four, `""` where nothing is to be said.
    fn zero_temperatures(&mut self, section: &Section<'a>, arms: &[Temperature; 4]) -> Option<[Option<f64>; 4]> {
        let mut out = [None; 4];
        if !section.has("temperatures") {
            return Some(out);
        }
        let texts = arms_texts(section)?;
        for (i, ((text, span), own)) in texts.into_iter().zip(arms).enumerate() {
            if text.trim().is_empty() {
                continue;
            }
            let path = format!("zero.temperatures[{}]", i + 1);
            if matches!(own, Temperature::None) {
                self.say(span, format!("{path}: this arm has no temperature of its own in bridge.temperatures"));
                return None;
            }
            match crate::sheet::quantity::parse(text, &[Kind::Celsius]) {
                Ok(quantity) => {
                    self.keep(path, &Read { quantity, text: text.to_string() });
                    if let Some(slot) = out.get_mut(i) {
                        *slot = Some(quantity.value);
                    }
                }
                Err(message) => {
                    self.say(span, format!("{path}: {message}"));
                    return None;
                }
            }
        }
        Some(out)
    }

    /// Temperature of the leads at zero.
    fn zero_lead_temperature(&mut self, section: &Section<'a>, stated: bool) -> Option<Option<f64>> {
        let s = self.s.clone();
        let leads = s.table.peek("leads").and_then(|e| crate::sheet::table_of(&e.node.value));
        let warm = leads.and_then(|t| t.peek("temperature"));
        if !section.has("lead_temperature") {
            // one value for all readings holds at zero too; of a channel the temperature at a stated zero is not known
            let one_value = warm.is_some_and(|e| {
                matches!(&e.node.value, crate::sheet::node::Value::Text(text)
                    if crate::sheet::quantity::parse(text, &[Kind::Celsius]).is_ok())
            });
            if warm.is_some() && !one_value && stated && section.has("at") {
                self.assume("zero.lead_temperature: the one at which the resistance of the leads is stated");
            }
            return Some(None);
        }
        if warm.is_none() {
            let entry = section.entry("lead_temperature")?;
            self.say(
                entry.key_span.clone(),
                "zero.lead_temperature has no meaning without leads.temperature: the leads keep their resistance",
            );
            return None;
        }
        self.value(section, "lead_temperature", Kind::Celsius).map(Some)
    }
}

//! Which causes there are and how they reach the result.

mod derived;
mod targets;

use std::boxed::Box;
use std::collections::BTreeMap;
use std::format;
use std::string::{String, ToString};
use std::vec::Vec;

pub(in crate::measurement) use derived::{Derived, derived};
use targets::{supply_size, targets, zero_of, zero_temperature};

use super::causes::unit_of_key;
use super::reading::{Child, Link, Place, ReadingNode, Spread, Target};
use super::{Cause, Node, Propagation, State};
use crate::Error;
use crate::chain::{Chain, Inputs, Parameter, Plan};
use crate::measurement::{Channel, Measurement, MeasurementError, Pairing, Segment, Side, Source, Stated};
use crate::strain::ZeroReading;
use crate::uncertainty::{Shape, Uncertainty};

/// When a channel is looked at: now, or when a zero was taken, at this value of it.
#[derive(Clone, Copy, Debug)]
enum When {
    Now,
    Then(f64),
}

impl When {
    fn key(self) -> Option<u64> {
        match self {
            Self::Now => None,
            Self::Then(value) => Some(value.to_bits()),
        }
    }
}

/// Plans by channel and segment.
pub(in crate::measurement) type Plans = BTreeMap<(usize, usize), Plan>;

struct Builder<'m> {
    measurement: &'m Measurement,
    plans: &'m mut Plans,
    states: &'m [Option<State>],
    top: usize,
    causes: Vec<Cause>,
    /// Causes by channel (empty for shared ones), key and text.
    known: BTreeMap<(String, String, String), usize>,
    nodes: Vec<Node>,
    /// Steps by channel and moment.
    made: BTreeMap<(usize, Option<u64>), usize>,
    unused: Vec<String>,
}

impl Propagation {
    /// Returns all that the result of a channel is made of at one moment.
    ///
    /// - `states`: of every channel that the result needs, in the order of the measurement. Zeros that are means have been
    ///   settled.
    ///
    /// # Errors
    /// `MeasurementError::Chain` for a chain that cannot be lowered, a state that is missing, or a reading without a number.
    pub fn new(measurement: &Measurement, states: &[Option<State>], channel: usize) -> Result<Self, MeasurementError> {
        Self::with_plans(measurement, states, channel, &mut Plans::default())
    }

    /// The same with plans that were made before.
    pub(in crate::measurement) fn with_plans(
        measurement: &Measurement,
        states: &[Option<State>],
        channel: usize,
        plans: &mut Plans,
    ) -> Result<Self, MeasurementError> {
        let mut builder = Builder {
            measurement,
            plans,
            states,
            top: channel,
            causes: Vec::new(),
            known: BTreeMap::new(),
            nodes: Vec::new(),
            made: BTreeMap::new(),
            unused: Vec::new(),
        };
        builder.node(channel, When::Now)?;
        let own = builder.channel(channel)?;
        let mut out = Self {
            channel: own.name.clone(),
            unit: own.unit.clone(),
            causes: builder.causes,
            nodes: builder.nodes,
            unused: builder.unused,
            value: f64::NAN,
        };
        out.value = out.moved(&std::vec![0.0; out.causes.len()]);
        // a direction keeps to the side that it is on
        let value = out.value;
        for node in &mut out.nodes {
            if let Node::Rosette(node) = node {
                node.nominal = value;
            }
        }
        Ok(out)
    }
}

impl<'m> Builder<'m> {
    fn channel(&self, channel: usize) -> Result<&'m Channel, MeasurementError> {
        self.measurement.channels.get(channel).ok_or_else(|| self.lacks(channel, "a channel"))
    }

    fn lacks(&self, channel: usize, what: &'static str) -> MeasurementError {
        self.failed(channel, Error::Missing { what })
    }

    fn failed(&self, channel: usize, error: Error) -> MeasurementError {
        let channel = self.measurement.channels.get(channel).map_or_else(String::new, |c| c.name.clone());
        MeasurementError::Chain { channel, error }
    }

    fn state(&self, channel: usize) -> Result<State, MeasurementError> {
        let state = self.states.get(channel).copied().flatten();
        state.ok_or_else(|| self.lacks(channel, "the state of a channel that the result is made of"))
    }

    /// The step that gives a channel.
    fn node(&mut self, channel: usize, when: When) -> Result<usize, MeasurementError> {
        if let Some(made) = self.made.get(&(channel, when.key())) {
            return Ok(*made);
        }
        let own = self.channel(channel)?;
        let node = match &own.source {
            Source::Reading(segments) => {
                let state = self.state(channel)?;
                let segment = segments.get(state.segment).ok_or_else(|| self.lacks(channel, "the chain in force"))?;
                Node::Reading(Box::new(self.reading(channel, own, segment, state, when)?))
            }
            Source::Combination(terms) => self.combination(own, terms)?,
            Source::Stress { of, factor, loading, bar } => {
                let of = self.node(*of, When::Now)?;
                let scale = self.scale(own, (*loading).zip(*bar));
                Node::Product { of, factor: *factor, scale }
            }
            Source::Rosette(source) => Node::Rosette(Box::new(self.rosette(own, source)?)),
        };
        self.nodes.push(node);
        let place = self.nodes.len() - 1;
        self.made.insert((channel, when.key()), place);
        Ok(place)
    }

    /// The cause of a key; a new one unless it is known already.
    fn cause(
        &mut self,
        owner: &Channel,
        key: &str,
        text: &str,
        make: impl FnOnce() -> (f64, String, Uncertainty),
    ) -> usize {
        let shared = is_shared(owner, key);
        let home = if shared { String::new() } else { owner.name.clone() };
        let id = (home, key.to_string(), text.to_string());
        let whole = format!("{}\n{}\n{}", id.0, id.1, id.2);
        if let Some(known) = self.known.get(&id) {
            return *known;
        }
        let (estimate, unit, uncertainty) = make();
        let own = self.measurement.channels.get(self.top).is_some_and(|top| top.name == owner.name);
        let name = if own || shared { key.to_string() } else { format!("{}: {key}", owner.name) };
        self.causes.push(Cause {
            name,
            estimate,
            unit,
            uncertainty,
            text: text.to_string(),
            shared,
            pool: 0,
            id: whole,
        });
        self.known.insert(id, self.causes.len() - 1);
        self.causes.len() - 1
    }

    fn stated_cause(&mut self, owner: &Channel, stated: &Stated, reading: &str) -> usize {
        self.growing_cause(owner, stated, reading, f64::NAN).0
    }

    /// A cause that may grow with what is read, and what it is here over what it is where it was first met.
    fn growing_cause(&mut self, owner: &Channel, stated: &Stated, reading: &str, size: f64) -> (usize, f64) {
        let here = stated.at(size);
        let cause =
            self.cause(owner, &stated.key, &stated.text, || (stated.value, unit_of_key(&stated.key, reading), here));
        (cause, self.grown(cause, &here))
    }

    /// An uncertainty over that of its cause: 1 unless the cause is shared and grows with the reading.
    fn grown(&self, cause: usize, here: &Uncertainty) -> f64 {
        let there = self.causes.get(cause).map_or(0.0, Cause::standard);
        if there > 0.0 && here.standard() != there { here.standard() / there } else { 1.0 }
    }

    fn reading(
        &mut self,
        channel: usize,
        own: &'m Channel,
        segment: &'m Segment,
        state: State,
        when: When,
    ) -> Result<ReadingNode, MeasurementError> {
        let chain = segment.chain;
        let plan = match self.plans.get(&(channel, state.segment)) {
            Some(plan) => *plan,
            None => {
                let plan = chain.plan().map_err(|error| self.failed(channel, error))?;
                self.plans.insert((channel, state.segment), plan);
                plan
            }
        };
        let mut inputs = state.inputs;
        let known = match when {
            When::Then(value) => Some(value),
            // of a channel that rests between two samples only its value is known
            When::Now if inputs.reading.is_nan() => Some(state.value),
            When::Now => None,
        };
        if let Some(value) = known {
            inputs.reading = plan.forward(value, inputs).map_err(|error| self.failed(channel, error))?;
        }
        let mut links = Vec::new();
        // keys that have a cause of their own at zero
        let has = |key: &str| segment.stated.iter().any(|s| s.key == key);
        for stated in &segment.stated {
            let targets = targets(stated, &chain, segment, &inputs);
            if stated.key == "uncertainty" || stated.key == "resolution" {
                continue;
            }
            if targets.is_empty() {
                self.note_unused(own, &stated.key);
                continue;
            }
            // of a supply column in the unit of its uncertainty
            let size = inputs.supply * supply_size(&chain).unwrap_or(1.0);
            let (cause, grown) = self.growing_cause(own, stated, &segment.reads, size);
            links.extend(targets.into_iter().map(|(to, factor)| Link { cause, to, factor: factor * grown }));
        }
        self.fitted(own, segment, &chain, &mut links);
        self.noise(own, segment, &inputs, when, &mut links);
        let mut children = Vec::new();
        let [gauge, leads, arms @ ..] = segment.sides();
        let [uses1, uses2, uses3, uses4] = plan.uses_arm_temperatures();
        let used = [uses1, uses2, uses3, uses4];
        let mut sides: Vec<(Option<&Side>, bool, Place, Parameter)> = Vec::new();
        sides.push((gauge, plan.uses_temperature(), Place::Gauge, Parameter::ZeroTemperature));
        sides.push((leads, plan.uses_lead_temperature(), Place::Leads, Parameter::ZeroLeadTemperature));
        for ((side, used), n) in arms.into_iter().zip(used).zip(1..) {
            sides.push((side, used, Place::Arm(n), Parameter::ZeroArmTemperature(n)));
        }
        let zero = zero_of(&chain);
        for (side, used, to, at_zero) in sides {
            let Some(side) = side.filter(|_| used) else { continue };
            let node = self.node(side.channel, When::Now)?;
            children.push(Child { node, to_celsius: side.to_celsius, to });
            // the temperature at zero was read with the same instrument, unless the sheet says how far it is known
            let then = zero.and_then(|zero| zero_temperature(zero, at_zero));
            if let Some(then) = then
                && !has(&at_zero.to_string())
            {
                let (scale, offset) = side.to_celsius;
                let node = self.node(side.channel, When::Then((then - offset) / scale))?;
                children.push(Child { node, to_celsius: side.to_celsius, to: Place::Zero(at_zero) });
            }
        }
        let spread = segment.tolerance.as_ref().map(|class| Spread {
            cause: self.noise_cause(own, CLASS, "tolerance class", "", "", || {
                (f64::NAN, "of its width".into(), Uncertainty::Rectangular { half_width: 1.0 })
            }),
            limits: class.limits,
        });
        Ok(ReadingNode { chain, plan, inputs, links, children, spread })
    }

    /// Errors of fitted coefficients, as independent unit errors that each move several of them.
    fn fitted(&mut self, own: &Channel, segment: &Segment, chain: &Chain, links: &mut Vec<Link>) {
        let mut all: Vec<Parameter> = Vec::new();
        chain.map(|parameter, value| {
            all.push(parameter);
            value
        });
        for fit in &segment.covariances {
            let mut first = None;
            for k in 0..fit.keys.len() {
                let key = format!("{}[{}]", fit.key, k + 1);
                let moved: Vec<(Parameter, f64)> = fit
                    .keys
                    .iter()
                    .zip(&fit.root)
                    .filter_map(|(key, row)| {
                        let parameter = all.iter().find(|p| p.to_string() == *key)?;
                        row.get(k).filter(|v| **v != 0.0).map(|v| (*parameter, *v))
                    })
                    .collect();
                if moved.is_empty() {
                    continue;
                }
                // the parts of one fit share its degrees of freedom
                let freedom = fit.degrees_of_freedom;
                let unit = Uncertainty::Standard { standard: 1.0 };
                let unit = if freedom.is_finite() { unit.with_degrees_of_freedom(freedom) } else { unit };
                let cause = self.cause(own, &key, "fit", || (f64::NAN, "of its root".into(), unit));
                let first = *first.get_or_insert(cause);
                if let Some(cause) = self.causes.get_mut(cause) {
                    cause.pool = first + 1;
                }
                links.extend(moved.into_iter().map(|(p, factor)| Link { cause, to: Target::Parameter(p), factor }));
            }
        }
    }

    /// What a single reading and a zero reading are off by on their own: noise and steps.
    fn noise(&mut self, own: &Channel, segment: &Segment, inputs: &Inputs, when: When, links: &mut Vec<Link>) {
        let size = segment.reading_size;
        let stated = |key: &str| segment.stated.iter().find(|s| s.key == key);
        // readings per unit of output over supply
        let per_ratio = |inputs: &Inputs| {
            let at = |reading: f64| segment.chain.network_output(&Inputs { reading, ..*inputs });
            match (at(inputs.reading + 1.0), at(inputs.reading)) {
                (Ok(more), Ok(here)) if more != here => 1.0 / (more - here),
                _ => f64::NAN,
            }
        };
        let mut sources: Vec<(&str, String, Uncertainty)> = Vec::new();
        if let Some(stated) = stated("uncertainty") {
            let here = stated.at(inputs.reading * size).times(1.0 / size);
            sources.push(("uncertainty", stated.text.clone(), here));
        } else if let Some(scatter) = &segment.zero_scatter {
            let shown = Uncertainty::Estimated {
                standard: (scatter.ratio * per_ratio(inputs)).abs(),
                degrees_of_freedom: scatter.rows as f64 - 1.0,
                shape: Shape::Normal,
            };
            if shown.standard().is_finite() {
                sources.push(("reading", format!("scatter of {} readings at zero", scatter.rows), shown));
            }
        }
        let mut steps: Vec<(&str, String, Uncertainty)> = Vec::new();
        if let Some(stated) = stated("resolution") {
            steps.push(("resolution", stated.text.clone(), stated.uncertainty.times(1.0 / size)));
        }
        if segment.chain.converter.is_some() {
            steps.push(("converter", "one code".to_string(), Uncertainty::of_resolution(1.0)));
        }
        let then = match when {
            When::Now => String::new(),
            When::Then(_) => " at zero".to_string(),
        };
        for (key, text, uncertainty) in sources.iter().chain(&steps) {
            // an error that is shared, or all of a systematic kind, is the same at zero
            let printed = in_print(key);
            let name = if is_shared(own, key) { printed.to_string() } else { format!("{printed}{then}") };
            let id = match when {
                When::Now => text.clone(),
                When::Then(value) if !is_shared(own, key) => format!("{text} at {value}"),
                When::Then(_) => text.clone(),
            };
            let estimate = if when.key().is_none() { inputs.reading } else { f64::NAN };
            let cause =
                self.noise_cause(own, key, &name, &id, text, || (estimate, segment.reads.clone(), *uncertainty));
            // two columns have an error each
            let [first, second] = match segment.paired.map(|p| p.how) {
                Some(Pairing::Reversed) => [0.5, -0.5],
                Some(Pairing::Tap) => [-1.0, 2.0],
                // the scatter of zero readings is that of both together
                _ => [1.0, 0.0],
            };
            let (first, second) = if *key == "reading" { (1.0, 0.0) } else { (first, second) };
            let grown = self.grown(cause, uncertainty);
            let (first, second) = (grown * first, grown * second);
            links.push(Link { cause, to: Target::Reading, factor: first });
            if second != 0.0 {
                let (name, id) = (format!("{name} of the second column"), format!("{id}, second"));
                let other = if is_shared(own, key) {
                    cause
                } else {
                    self.noise_cause(own, key, &name, &id, text, || (f64::NAN, segment.reads.clone(), *uncertainty))
                };
                links.push(Link { cause: other, to: Target::Reading, factor: second });
            }
        }
        let Some(zero) = zero_of(&segment.chain) else { return };
        let Some(reading) = zero.reading else { return };
        let to = Target::Parameter(Parameter::ZeroReading);
        if let Some(scatter) = &segment.zero_scatter {
            let rows = scatter.rows as f64;
            let text = format!("mean of {} readings", scatter.rows);
            let uncertainty = Uncertainty::Estimated {
                standard: scatter.ratio / crate::math::sqrt(rows),
                degrees_of_freedom: rows - 1.0,
                shape: Shape::Normal,
            };
            let ZeroReading::Ratio(estimate) = reading else { return };
            let cause = self.noise_cause(own, "zero", "zero", &text, &text, || (estimate, "V/V".into(), uncertainty));
            links.push(Link { cause, to, factor: 1.0 });
            // readings that hardly scatter do not average their steps out
            let still = |step: &Uncertainty| scatter.ratio * per_ratio(inputs).abs() < step.standard();
            steps.retain(|(.., step)| still(step));
            sources.clear();
        } else if stated("zero.at").is_some() {
            return;
        }
        for (key, text, uncertainty) in sources.iter().chain(&steps) {
            let printed = in_print(key);
            let (name, id) = if is_shared(own, key) {
                (printed.to_string(), text.clone())
            } else {
                (format!("{printed} at zero"), format!("{text} at zero"))
            };
            let (estimate, factor) = match reading {
                ZeroReading::AsRecorded(r) => (r, 1.0),
                ZeroReading::Ratio(y) => (y * per_ratio(inputs), 1.0 / per_ratio(inputs)),
            };
            // what grows with the reading is what it is at that of the zero
            let uncertainty = match stated("uncertainty") {
                Some(stated) if *key == "uncertainty" => stated.at(estimate * size).times(1.0 / size),
                _ => *uncertainty,
            };
            let cause = self.noise_cause(own, key, &name, &id, text, || (estimate, segment.reads.clone(), uncertainty));
            let factor = factor * self.grown(cause, &uncertainty);
            links.push(Link { cause, to, factor });
        }
    }

    /// A cause whose name in print is not the key that `shared` would name.
    fn noise_cause(
        &mut self,
        own: &Channel,
        key: &str,
        name: &str,
        id: &str,
        text: &str,
        make: impl FnOnce() -> (f64, String, Uncertainty),
    ) -> usize {
        let before = self.causes.len();
        let cause = self.cause(own, key, id, make);
        if cause == before
            && let Some(made) = self.causes.get_mut(cause)
        {
            let prefix = made.name.strip_suffix(key).unwrap_or("").to_string();
            made.name = format!("{prefix}{name}");
            made.text = text.to_string();
        }
        cause
    }

    fn note_unused(&mut self, own: &Channel, key: &str) {
        let own_top = self.measurement.channels.get(self.top).is_some_and(|top| top.name == own.name);
        let name = if own_top { key.to_string() } else { format!("{}: {key}", own.name) };
        if !self.unused.contains(&name) {
            self.unused.push(name);
        }
    }
}

/// The key under which a tolerance class is known; `shared` names it by its sensor.
const CLASS: &str = "class";

/// What stands for a key of the reading in print.
fn in_print(key: &str) -> &str {
    match key {
        "uncertainty" => "reading",
        "converter" => "converter step",
        "resolution" => "printed step",
        other => other,
    }
}

/// Whether the error of a key is shared: it or a table above it is named.
fn is_shared(owner: &Channel, key: &str) -> bool {
    owner.shared.iter().any(|named| {
        if key == CLASS {
            // one sensor with a class, `platinum.class` or all of `platinum`
            return named.ends_with(".class") || ["platinum", "thermocouple"].contains(&named.as_str());
        }
        key.strip_prefix(named.as_str()).is_some_and(|rest| rest.is_empty() || rest.starts_with(['.', '[']))
    })
}

//! The expanded uncertainty of every reading of a recording.
//!
//! What a [`Propagation`] gives for one reading is a smooth function of the reading and of what comes with it. It is computed
//! where it is needed and interpolated in between, to within 1e-6 of u; sums, stresses and rosettes are then combined row by row
//! over causes that all channels know by the same number.

mod surface;

use std::collections::BTreeMap;
use std::string::String;
use std::vec::Vec;

use super::propagation::{Cause, Derived, Plans, Propagation, State, derived};
use super::{Converted, Measurement, MeasurementError, Source};
use crate::chain::{Chain, Derivative, Element, Inputs};
use crate::uncertainty::{Combined, Coverage, Family, Shape, Sum};
use surface::{Axis, MOST, Surface};

/// Causes of the whole measurement by number.
#[derive(Default)]
struct Registry {
    numbers: BTreeMap<String, usize>,
    /// 1/ν of each, whether it is rectangular, and its pool: one above the number of its first cause.
    causes: Vec<(f64, bool, usize)>,
}

impl Registry {
    /// Numbers of causes that stand together.
    fn numbers(&mut self, causes: &[Cause]) -> Vec<usize> {
        causes
            .iter()
            .map(|cause| {
                let first = cause.pool.checked_sub(1).and_then(|first| causes.get(first));
                let pool = first.map_or(0, |first| self.number(first, 0) + 1);
                let number = self.number(cause, pool);
                // the first of a pool is numbered before its pool is known
                if let Some(slot) = self.causes.get_mut(number) {
                    slot.2 = pool;
                }
                number
            })
            .collect()
    }

    fn number(&mut self, cause: &Cause, pool: usize) -> usize {
        if let Some(number) = self.numbers.get(&cause.id) {
            return *number;
        }
        let uncertainty = &cause.uncertainty;
        self.causes.push((1.0 / uncertainty.degrees_of_freedom(), uncertainty.shape() == Shape::Rectangular, pool));
        self.numbers.insert(cause.id.clone(), self.causes.len() - 1);
        self.causes.len() - 1
    }
}

/// Contributions of one channel at one row.
#[derive(Default)]
struct Parts {
    /// Causes by number, each once.
    numbers: Vec<usize>,
    /// c u of each.
    sizes: Vec<f64>,
    /// The value that they belong to; NaN where there is none.
    value: f64,
}

/// A reading channel while the same segments are in force.
struct Template {
    /// Segments of the channel and of its side channels.
    segments: Vec<usize>,
    numbers: Vec<usize>,
    /// `None` where every row is computed.
    surface: Option<Surface>,
    axes: Vec<Input>,
}

/// What varies from row to row.
#[derive(Clone, Copy, Debug, PartialEq)]
enum Input {
    Reading,
    Supply,
    /// The temperature that this side channel gives, by its place among the six.
    Side(usize),
}

enum Way {
    Reading(Vec<Template>),
    Derived { numbers: Vec<usize>, standards: Vec<f64>, how: Derived },
}

/// Expanded uncertainties, row by row.
pub struct EveryReading<'m> {
    measurement: &'m Measurement,
    coverage: Coverage,
    registry: Registry,
    plans: Plans,
    ways: Vec<Way>,
    parts: Vec<Parts>,
    /// Which channels are needed.
    needed: Vec<bool>,
    /// Latest state of each channel, for those that rest between two samples.
    latest: Vec<Option<State>>,
    /// Coverage factors by whole degrees of freedom; NaN where not computed yet.
    factors: Vec<f64>,
    normal: f64,
    /// Sum over causes, for channels that are computed from others.
    dense: Vec<f64>,
}

impl<'m> EveryReading<'m> {
    /// Returns what computes the uncertainty of every reading of this measurement, its zeros settled.
    ///
    /// # Errors
    /// `MeasurementError::Chain` for a coverage that is none.
    pub fn new(measurement: &'m Measurement, coverage: Coverage) -> Result<Self, MeasurementError> {
        let one = Combined::new(1.0, f64::INFINITY);
        let normal =
            one.expanded(coverage).map_err(|error| MeasurementError::Chain { channel: String::new(), error })?;
        let mut registry = Registry::default();
        let mut ways = Vec::new();
        for channel in 0..measurement.channels.len() {
            ways.push(match derived(measurement, channel) {
                None => Way::Reading(Vec::new()),
                Some((causes, how)) => Way::Derived {
                    numbers: registry.numbers(&causes),
                    standards: causes.iter().map(Cause::standard).collect(),
                    how,
                },
            });
        }
        let mut needed: Vec<bool> = measurement.channels.iter().map(|c| c.show).collect();
        for &channel in measurement.order.iter().rev() {
            if needed.get(channel) == Some(&true) {
                for below in measurement.channels.get(channel).map(made_of).unwrap_or_default() {
                    if let Some(slot) = needed.get_mut(below) {
                        *slot = true;
                    }
                }
            }
        }
        let count = measurement.channels.len();
        Ok(Self {
            measurement,
            coverage,
            registry,
            plans: Plans::default(),
            ways,
            parts: (0..count).map(|_| Parts::default()).collect(),
            needed,
            latest: std::vec![None; count],
            factors: Vec::new(),
            normal: normal.factor,
            dense: Vec::new(),
        })
    }

    /// Writes the expanded uncertainty of every channel at one row, in their units; NaN where there is none.
    ///
    /// Rows are taken in their order.
    pub fn row<P>(&mut self, block: &Converted<P>, row: usize, out: &mut Vec<f64>) {
        out.clear();
        out.resize(self.measurement.channels.len(), f64::NAN);
        for place in 0..self.measurement.order.len() {
            let Some(&channel) = self.measurement.order.get(place) else { continue };
            let state = block.state(self.measurement, channel, row);
            if state.is_some()
                && let Some(slot) = self.latest.get_mut(channel)
            {
                *slot = state;
            }
            if self.needed.get(channel) != Some(&true) {
                continue;
            }
            let mut parts = self.parts.get_mut(channel).map(core::mem::take).unwrap_or_default();
            parts.value = f64::NAN;
            if let Some(state) = state {
                parts.value = state.value;
                self.fill(channel, &state, &mut parts);
            }
            if let Some(slot) = out.get_mut(channel).filter(|_| parts.value.is_finite()) {
                *slot = self.expanded(&parts);
                // beyond a quarter turn every direction is meant
                if let Some(Source::Rosette(source)) = self.measurement.channels.get(channel).map(|c| &c.source)
                    && source.quarter_turn().is_some_and(|most| *slot >= most)
                {
                    *slot = f64::NAN;
                }
            }
            if let Some(slot) = self.parts.get_mut(channel) {
                *slot = parts;
            }
        }
    }

    fn expanded(&mut self, parts: &Parts) -> f64 {
        if parts.numbers.is_empty() {
            // nothing is stated: that is not to be sure
            return f64::NAN;
        }
        let mut sum = Sum::default();
        for (number, size) in parts.numbers.iter().zip(&parts.sizes) {
            let of = |number: usize| self.registry.causes.get(number).copied().unwrap_or((0.0, false, 0));
            let (per_freedom, rectangular, pool) = of(*number);
            if pool == 0 {
                sum.add(*size, per_freedom, rectangular);
                continue;
            }
            sum.add(*size, 0.0, false);
            let mut pooled = parts.numbers.iter().zip(&parts.sizes).filter(|(n, _)| of(**n).2 == pool).peekable();
            if pooled.peek().is_some_and(|(first, _)| *first == number) {
                sum.add_pool(pooled.map(|(_, size)| size * size).sum(), per_freedom);
            }
        }
        let combined = sum.combined();
        if combined.standard <= 1e-12 * parts.value.abs() {
            // nothing that is stated reaches this result: rounding is not an uncertainty
            return f64::NAN;
        }
        let factor = match (self.coverage, combined.family, combined.whole_freedom()) {
            (Coverage::Factor(_), ..) | (_, Family::Normal, None) => self.normal,
            (_, Family::Normal, Some(whole)) => {
                let place = whole as usize;
                if self.factors.len() <= place {
                    self.factors.resize(place + 1, f64::NAN);
                }
                match self.factors.get_mut(place) {
                    Some(slot) if slot.is_nan() => {
                        *slot = combined.expanded(self.coverage).map_or(f64::NAN, |e| e.factor);
                        *slot
                    }
                    Some(slot) => *slot,
                    None => f64::NAN,
                }
            }
            _ => combined.expanded(self.coverage).map_or(f64::NAN, |e| e.factor),
        };
        factor * combined.standard
    }

    /// Contributions of a channel; its value becomes NaN where they cannot be had.
    fn fill(&mut self, channel: usize, state: &State, parts: &mut Parts) {
        let Some(way) = self.ways.get_mut(channel) else { return };
        match way {
            Way::Reading(templates) => {
                let mut whole = Whole {
                    measurement: self.measurement,
                    plans: &mut self.plans,
                    registry: &mut self.registry,
                    latest: &self.latest,
                    channel,
                };
                whole.reading(templates, state, parts);
            }
            Way::Derived { numbers, standards, how } => {
                self.dense.clear();
                self.dense.resize(self.registry.causes.len(), 0.0);
                parts.numbers.clear();
                let mut add = |number: usize, size: f64| {
                    if let Some(slot) = self.dense.get_mut(number) {
                        if *slot == 0.0 && size != 0.0 && !parts.numbers.contains(&number) {
                            parts.numbers.push(number);
                        }
                        *slot += size;
                    }
                };
                let mut add_all = |of: &Parts, factor: f64| {
                    for (number, size) in of.numbers.iter().zip(&of.sizes) {
                        add(*number, factor * size);
                    }
                };
                let source = self.measurement.channels.get(channel).map(|c| &c.source);
                let known = |channel: usize| self.parts.get(channel).filter(|p| p.value.is_finite());
                let own = |cause: usize| {
                    (numbers.get(cause).copied().unwrap_or(0), standards.get(cause).copied().unwrap_or(0.0))
                };
                let mut whole = true;
                match (how, source) {
                    (Derived::Sum(causes), Some(Source::Combination(terms))) => {
                        for ((of, weight), cause) in terms.iter().zip(causes) {
                            let Some(of) = known(*of) else {
                                whole = false;
                                continue;
                            };
                            add_all(of, *weight);
                            if let Some((cause, per)) = cause {
                                let (number, standard) = own(*cause);
                                let own_part = Parts { numbers: [number].into(), sizes: [standard].into(), value: 0.0 };
                                add_all(&own_part, *per * of.value);
                            }
                        }
                    }
                    (Derived::Product(slopes), Some(Source::Stress { of, factor, .. })) => match known(*of) {
                        Some(of) => {
                            add_all(of, *factor);
                            for (cause, slope) in slopes {
                                let (number, standard) = own(*cause);
                                let own = Parts { numbers: [number].into(), sizes: [standard].into(), value: 0.0 };
                                add_all(&own, factor * of.value * *slope);
                            }
                        }
                        None => whole = false,
                    },
                    (Derived::Rosette(node), Some(Source::Rosette(source))) => {
                        let grids: Vec<usize> = source.each_grid().iter().map(|(channel, ..)| *channel).collect();
                        let values: Vec<f64> = grids.iter().map(|c| known(*c).map_or(f64::NAN, |p| p.value)).collect();
                        let off = std::vec![0.0; standards.len()];
                        let slopes = node.slopes(&off, &values, |cause| own(cause).1);
                        match slopes.filter(|_| values.iter().all(|v| v.is_finite())) {
                            Some(slopes) => {
                                for (grid, slope) in grids.iter().zip(&slopes.grids) {
                                    if let Some(of) = known(*grid) {
                                        add_all(of, *slope);
                                    }
                                }
                                for (cause, slope) in &slopes.parts {
                                    let (number, standard) = own(*cause);
                                    let own = Parts { numbers: [number].into(), sizes: [standard].into(), value: 0.0 };
                                    add_all(&own, *slope);
                                }
                            }
                            None => whole = false,
                        }
                    }
                    _ => whole = false,
                }
                if whole {
                    // the order of numbers, whatever came first
                    parts.numbers.sort_unstable();
                    parts.sizes.clear();
                    parts.sizes.extend(parts.numbers.iter().map(|n| self.dense.get(*n).copied().unwrap_or(0.0)));
                } else {
                    parts.value = f64::NAN;
                }
            }
        }
    }
}

fn made_of(channel: &super::Channel) -> Vec<usize> {
    match &channel.source {
        Source::Reading(_) => Vec::new(),
        Source::Combination(terms) => terms.iter().map(|(c, _)| *c).collect(),
        Source::Stress { of, .. } => std::vec![*of],
        Source::Rosette(rosette) => rosette.each_grid().iter().map(|(c, ..)| *c).collect(),
    }
}

/// What a reading channel needs of all the others.
struct Whole<'a, 'm> {
    measurement: &'m Measurement,
    plans: &'a mut Plans,
    registry: &'a mut Registry,
    latest: &'a [Option<State>],
    channel: usize,
}

impl Whole<'_, '_> {
    fn reading(&mut self, templates: &mut Vec<Template>, state: &State, parts: &mut Parts) {
        let segments = self.segments(state);
        let place = match templates.iter().position(|t| t.segments == segments) {
            Some(place) => place,
            None => match self.template(state, segments) {
                Some(template) => {
                    templates.push(template);
                    templates.len() - 1
                }
                None => {
                    parts.value = f64::NAN;
                    return;
                }
            },
        };
        let Some(template) = templates.get_mut(place) else { return };
        let mut x = [0.0; MOST];
        for (slot, input) in x.iter_mut().zip(&template.axes) {
            *slot = input_of(&state.inputs, *input);
        }
        if let Some(surface) = &mut template.surface {
            let numbers = &template.numbers;
            let axes = &template.axes;
            let exact = |x: &[f64; MOST]| {
                let mut inputs = state.inputs;
                for (x, input) in x.iter().zip(axes) {
                    put(&mut inputs, *input, *x);
                }
                let (found, sizes) = self.exact(&inputs, state.segment, None)?;
                (found == *numbers).then_some(sizes)
            };
            if surface.at(&x, &mut parts.sizes, exact) {
                parts.numbers.clone_from(numbers);
                return;
            }
        }
        match self.exact(&state.inputs, state.segment, Some(self.latest)) {
            Some((numbers, sizes)) => (parts.numbers, parts.sizes) = (numbers, sizes),
            None => parts.value = f64::NAN,
        }
    }

    /// Segments in force: of the channel and of its side channels.
    fn segments(&self, state: &State) -> Vec<usize> {
        let mut out = std::vec![state.segment];
        let own = self.measurement.channels.get(self.channel).and_then(|c| c.segments());
        let Some(segment) = own.and_then(|s| s.get(state.segment)) else { return out };
        for side in segment.sides().into_iter().flatten() {
            out.push(self.latest.get(side.channel).copied().flatten().map_or(0, |s| s.segment));
        }
        out
    }

    /// How a channel is followed while these segments are in force.
    fn template(&mut self, state: &State, segments: Vec<usize>) -> Option<Template> {
        let measurement = self.measurement;
        let own = measurement.channels.get(self.channel)?.segments()?.get(state.segment)?;
        let (numbers, _) = self.exact(&state.inputs, state.segment, Some(self.latest))?;
        let plan = self.plans.get(&(self.channel, state.segment))?;
        let mut axes = std::vec![Input::Reading];
        let mut kinds = std::vec![Axis::Even(reading_width(&own.chain, &state.inputs))];
        if plan.uses_supply() {
            axes.push(Input::Supply);
            kinds.push(Axis::Octaves);
        }
        let [a1, a2, a3, a4] = plan.uses_arm_temperatures();
        let used = [plan.uses_temperature(), plan.uses_lead_temperature(), a1, a2, a3, a4];
        let mut channels: Vec<usize> = Vec::new();
        let mut simple = true;
        for (place, (side, used)) in own.sides().into_iter().zip(used).enumerate() {
            let Some(side) = side.filter(|_| used) else { continue };
            // a side channel that is made of more than its own reading is followed row by row
            let own = measurement.channels.get(side.channel).and_then(|c| c.segments());
            simple &=
                own.is_some_and(|s| s.iter().all(|s| s.supply.is_none() && s.sides().iter().all(Option::is_none)));
            // one thermometer in two places has one value in each row
            if channels.contains(&side.channel) {
                simple = false;
            }
            channels.push(side.channel);
            axes.push(Input::Side(place));
            kinds.push(Axis::Even(8.0));
        }
        simple &= axes.len() <= MOST && own.paired.is_none() && !kinds.contains(&Axis::Even(f64::NAN));
        let surface = simple.then(|| Surface::new(kinds));
        Some(Template { segments, numbers, surface, axes })
    }

    /// Contributions at these inputs, with the causes that they belong to.
    fn exact(
        &mut self,
        inputs: &Inputs,
        segment: usize,
        latest: Option<&[Option<State>]>,
    ) -> Option<(Vec<usize>, Vec<f64>)> {
        let measurement = self.measurement;
        let own = measurement.channels.get(self.channel)?.segments()?.get(segment)?;
        let mut states: Vec<Option<State>> = std::vec![None; measurement.channels.len()];
        if let Some(latest) = latest {
            states.clone_from_slice(latest);
        }
        for (place, side) in own.sides().into_iter().enumerate() {
            let Some(side) = side else { continue };
            let (scale, offset) = side.to_celsius;
            let value = (input_of(inputs, Input::Side(place)) - offset) / scale;
            if !value.is_finite() {
                continue;
            }
            let segment = self.latest.get(side.channel).copied().flatten().map_or(0, |s| s.segment);
            let slot = states.get_mut(side.channel)?;
            // between two samples the inputs are those of the last one, and the reading is what gives this value
            let before = slot.map_or(Inputs { supply: f64::NAN, ..Inputs::default() }, |s| s.inputs);
            *slot = Some(State { value, inputs: Inputs { reading: f64::NAN, ..before }, segment });
        }
        let value = match self.plans.get(&(self.channel, segment)) {
            Some(plan) => plan.one(*inputs).number().ok()?,
            None => f64::NAN,
        };
        *states.get_mut(self.channel)? = Some(State { value, inputs: *inputs, segment });
        let found = Propagation::with_plans(measurement, &states, self.channel, self.plans).ok()?;
        let parts = found.contributions().ok()?;
        let numbers = self.registry.numbers(found.causes());
        Some((numbers, parts.iter().map(crate::uncertainty::Contribution::signed).collect()))
    }
}

fn input_of(inputs: &Inputs, input: Input) -> f64 {
    let [a, b, c, d] = inputs.arm_celsius;
    match input {
        Input::Reading => inputs.reading,
        Input::Supply => inputs.supply,
        Input::Side(place) => [inputs.celsius, inputs.lead_celsius, a, b, c, d].get(place).copied().unwrap_or(f64::NAN),
    }
}

fn put(inputs: &mut Inputs, input: Input, x: f64) {
    match input {
        Input::Reading => inputs.reading = x,
        Input::Supply => inputs.supply = x,
        Input::Side(0) => inputs.celsius = x,
        Input::Side(1) => inputs.lead_celsius = x,
        Input::Side(place) => {
            for slot in inputs.arm_celsius.iter_mut().skip(place - 2).take(1) {
                *slot = x;
            }
        }
    }
}

/// Width of the first cells along the reading: a power of two, near what moves the result by as much as cubics bridge.
fn reading_width(chain: &Chain, inputs: &Inputs) -> f64 {
    let (at, by) = match &chain.element {
        // 0.4 % of strain, or a sixteenth of the largest load
        Element::Gauge { .. } => (0.0, 4e-3 * unit_of(chain)),
        Element::Transducer { limit, .. } => (0.0, limit / 16.0),
        Element::Direct { .. } => (0.0, 1.0),
        _ => (20.0, 16.0),
    };
    // at round values of what comes with it, that do not depend on the row
    let whole = |v: f64, usual: f64| if v.is_finite() { usual } else { v };
    let inputs = Inputs {
        reading: 0.0,
        supply: octave(inputs.supply),
        celsius: whole(inputs.celsius, 20.0),
        lead_celsius: whole(inputs.lead_celsius, 20.0),
        arm_celsius: inputs.arm_celsius.map(|t| whole(t, 20.0)),
    };
    match chain.derivative(Derivative::Reading, at, &inputs) {
        Ok(slope) if slope != 0.0 => octave(by / slope.abs()),
        _ => 1.0,
    }
}

/// Units of the result per plain strain.
fn unit_of(chain: &Chain) -> f64 {
    match chain.output {
        crate::chain::Output::Strain { exponent } | crate::chain::Output::ShearStrain { exponent } => {
            libm::pow(10.0, f64::from(exponent))
        }
        _ => 1.0,
    }
}

/// The power of two at or below a size.
fn octave(x: f64) -> f64 {
    if x == 0.0 || !x.is_finite() {
        return x;
    }
    let (_, exponent) = libm::frexp(x.abs());
    libm::ldexp(if x < 0.0 { -1.0 } else { 1.0 }, exponent - 1)
}

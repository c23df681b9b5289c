//! From the errors of everything that is stated to the error of one result.
//!
//! A [`Propagation`] is the part of a measurement that one result at one moment is made of: independent causes of error, and
//! the chains, sums and rosettes that they pass through. Every chain is the one that converts; its derivatives are exact.

mod budget;
mod build;
mod causes;
mod reading;
mod rosette;

use std::string::String;
use std::vec::Vec;

pub use budget::{Budget, Improvement};
pub(in crate::measurement) use build::{Derived, Plans, derived};
pub use causes::Cause;

use reading::ReadingNode;
pub(in crate::measurement) use rosette::RosetteNode;

use crate::Error;
use crate::chain::Inputs;
use crate::montecarlo::{Run, simulate};
use crate::strain::{Loading, Material, Section};
use crate::uncertainty::{Combined, Contribution, Order, combine, second_order};

/// What one channel is at the moment that is looked at.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct State {
    /// Its result, in its unit.
    pub value: f64,
    /// Its reading with supply and temperatures; not read for channels that are computed from others.
    pub inputs: Inputs,
    /// Which of its segments is in force.
    pub segment: usize,
}

/// One step on the way to the result; the steps stand in the order in which they are computed.
#[derive(Clone, Debug)]
enum Node {
    Reading(std::boxed::Box<ReadingNode>),
    /// Σ weight · step, the weight raised by the error of a cause.
    Sum(Vec<Term>),
    /// factor · step, the factor that of a material and a bar.
    Product {
        of: usize,
        factor: f64,
        scale: Scale,
    },
    Rosette(std::boxed::Box<RosetteNode>),
}

#[derive(Clone, Copy, Debug)]
struct Term {
    of: usize,
    weight: f64,
    /// A cause, and what the weight is raised by per unit of its error.
    cause: Option<(usize, f64)>,
}

/// How a factor follows the constants it is made of.
#[derive(Clone, Debug, Default)]
struct Scale {
    /// The modulus of a uniaxial stress: cause and value.
    modulus: Option<(usize, f64)>,
    /// The load of a bar.
    bar: Option<Bar>,
}

/// A bar with the causes of its dimensions and constants.
#[derive(Clone, Debug)]
struct Bar {
    section: Section,
    material: Material,
    loading: Loading,
    parts: Vec<(usize, BarPart)>,
}

#[derive(Clone, Copy, Debug, PartialEq)]
enum BarPart {
    Diameter,
    Bore,
    Width,
    Height,
    Area,
    Modulus,
    Poisson,
}

impl Scale {
    /// What the factor is multiplied by when its constants are off.
    fn times(&self, off: &[f64]) -> f64 {
        let by = |cause: usize| off.get(cause).copied().unwrap_or(0.0);
        if let Some((cause, value)) = self.modulus {
            return 1.0 + by(cause) / value;
        }
        let Some(Bar { section, material, loading, parts }) = &self.bar else { return 1.0 };
        let Ok(before) = section.load_per_strain(*loading, material) else { return f64::NAN };
        let (mut moved, mut modulus, mut poisson) = (*section, material.modulus(), material.poisson());
        for (cause, part) in parts {
            let by = by(*cause);
            match (&mut moved, part) {
                (_, BarPart::Modulus) => modulus += by,
                (_, BarPart::Poisson) => poisson += by,
                (Section::Round { diameter, .. }, BarPart::Diameter) => *diameter += by,
                (Section::Round { bore, .. }, BarPart::Bore) => *bore += by,
                (Section::Rectangular { width, .. }, BarPart::Width) => *width += by,
                (Section::Rectangular { height, .. }, BarPart::Height) => *height += by,
                (Section::Area { area }, BarPart::Area) => *area += by,
                _ => {}
            }
        }
        let after = Material::new(modulus, poisson).and_then(|m| moved.load_per_strain(*loading, &m));
        after.map_or(f64::NAN, |after| after / before)
    }

    fn causes(&self) -> Vec<usize> {
        let bar = self.bar.iter().flat_map(|bar| bar.parts.iter().map(|(cause, _)| *cause));
        self.modulus.iter().map(|(cause, _)| *cause).chain(bar).collect()
    }
}

/// The slope of a function at 0, by differences of fourth order over so small a step.
fn slope(step: f64, f: impl Fn(f64) -> f64) -> f64 {
    // (f(−2h) − 8 f(−h) + 8 f(h) − f(2h)) / 12 h
    (8.0 * (f(step) - f(-step)) - (f(2.0 * step) - f(-2.0 * step))) / (12.0 * step)
}

/// One result with everything that its error comes from.
#[derive(Clone, Debug)]
pub struct Propagation {
    channel: String,
    unit: String,
    causes: Vec<Cause>,
    nodes: Vec<Node>,
    /// What is stated but has no way into the result.
    unused: Vec<String>,
    value: f64,
}

impl Propagation {
    /// Returns the name of the channel.
    #[must_use]
    pub fn channel(&self) -> &str {
        &self.channel
    }

    /// Returns the unit of the result.
    #[must_use]
    pub fn unit(&self) -> &str {
        &self.unit
    }

    /// Returns the result.
    #[must_use]
    pub const fn value(&self) -> f64 {
        self.value
    }

    /// Returns the independent causes of error.
    #[must_use]
    pub fn causes(&self) -> &[Cause] {
        &self.causes
    }

    /// Returns keys whose stated uncertainty has no way into this result.
    #[must_use]
    pub fn unused(&self) -> &[String] {
        &self.unused
    }

    /// Returns the same with another uncertainty of one cause; a cause that is not there changes nothing.
    #[must_use]
    pub fn with_uncertainty(&self, cause: usize, uncertainty: crate::uncertainty::Uncertainty) -> Self {
        let mut out = self.clone();
        if let Some(cause) = out.causes.get_mut(cause) {
            cause.uncertainty = uncertainty;
        }
        out
    }

    /// Returns the result when every input is off by so much, in the unit of its cause; NaN where there is none then.
    ///
    /// - `off`: as many as there are causes.
    #[must_use]
    pub fn moved(&self, off: &[f64]) -> f64 {
        let mut values: Vec<f64> = Vec::with_capacity(self.nodes.len());
        for node in &self.nodes {
            let at = |of: usize| values.get(of).copied().unwrap_or(f64::NAN);
            let value = match node {
                Node::Reading(node) => node.moved(off, &values),
                Node::Sum(terms) => terms.iter().map(|t| t.weight_moved(off) * at(t.of)).sum(),
                Node::Product { of, factor, scale } => factor * scale.times(off) * at(*of),
                Node::Rosette(node) => node.moved(off, &values),
            };
            values.push(value);
        }
        values.last().copied().unwrap_or(f64::NAN)
    }

    /// Returns the size below which a contribution is no more than rounding: 1e-12 of the result, and what 1e-12 of every
    /// reading is worth.
    #[must_use]
    pub fn rounding(&self) -> f64 {
        const SHARE: f64 = 1e-6;
        let none = std::vec![0.0; self.causes.len()];
        let mut moved = self.clone();
        let mut sum = self.value.abs();
        for place in 0..self.nodes.len() {
            let Some(Node::Reading(node)) = moved.nodes.get_mut(place) else { continue };
            let kept = node.inputs.reading;
            node.inputs.reading = kept * (1.0 + SHARE);
            let by = (moved.moved(&none) - self.value).abs() / SHARE;
            sum += if by.is_finite() { by } else { 0.0 };
            if let Some(Node::Reading(node)) = moved.nodes.get_mut(place) {
                node.inputs.reading = kept;
            }
        }
        1e-12 * sum
    }

    /// Returns where a thermometer lies beyond its tolerance class: name of the cause, range of the class, value, °C.
    #[must_use]
    pub fn beyond_class(&self) -> Option<(&str, [f64; 2], f64)> {
        let none = std::vec![0.0; self.causes.len()];
        let mut values: Vec<f64> = Vec::with_capacity(self.nodes.len());
        for node in &self.nodes {
            // thermometers come before what they feed
            let Node::Reading(node) = node else {
                values.push(f64::NAN);
                continue;
            };
            if let Some((cause, range, celsius)) = node.beyond_class(&none, &values) {
                return self.causes.get(cause).map(|c| (c.name.as_str(), range, celsius));
            }
            values.push(node.moved(&none, &values));
        }
        None
    }

    /// Returns 90° in the unit of a direction, which repeats after twice that: an uncertainty from there on says nothing. `None` for other results.
    #[must_use]
    pub fn quarter_turn(&self) -> Option<f64> {
        match self.nodes.last() {
            Some(Node::Rosette(node)) => node.source.quarter_turn(),
            _ => None,
        }
    }

    /// Writes the derivative of the result with respect to every cause, at inputs that are off by so much.
    ///
    /// - `off`, `out`: as many as there are causes.
    ///
    /// # Errors
    /// As [`Chain::derivatives`](crate::chain::Chain::derivatives); `Error::LengthMismatch` for slices of other lengths.
    pub fn gradient(&self, off: &[f64], out: &mut [f64]) -> Result<(), Error> {
        let expected = self.causes.len();
        for got in [off.len(), out.len()] {
            if got != expected {
                return Err(Error::LengthMismatch { what: "a slice of causes", expected, got });
            }
        }
        let mut values: Vec<f64> = Vec::with_capacity(self.nodes.len());
        let mut gradients: Vec<Vec<f64>> = Vec::with_capacity(self.nodes.len());
        for node in &self.nodes {
            let mut own = std::vec![0.0; expected];
            let at = |of: usize| values.get(of).copied().unwrap_or(f64::NAN);
            let value = match node {
                Node::Reading(node) => node.gradient(off, &values, &gradients, &mut own)?,
                Node::Sum(terms) => {
                    for term in terms {
                        let weight = term.weight_moved(off);
                        add(&mut own, gradients.get(term.of), weight);
                        if let Some((cause, per)) = term.cause
                            && let Some(slot) = own.get_mut(cause)
                        {
                            *slot += per * at(term.of);
                        }
                    }
                    terms.iter().map(|t| t.weight_moved(off) * at(t.of)).sum()
                }
                Node::Product { of, factor, scale } => {
                    let times = scale.times(off);
                    add(&mut own, gradients.get(*of), factor * times);
                    for cause in scale.causes() {
                        let step = 0.1 * self.causes.get(cause).map_or(0.0, Cause::standard);
                        let moved = |by: f64| {
                            let mut off = off.to_vec();
                            if let Some(slot) = off.get_mut(cause) {
                                *slot += by;
                            }
                            scale.times(&off)
                        };
                        if let Some(slot) = own.get_mut(cause).filter(|_| step > 0.0) {
                            *slot += factor * at(*of) * slope(step, moved);
                        }
                    }
                    factor * times * at(*of)
                }
                Node::Rosette(node) => node.gradient(off, &values, &gradients, &self.causes, &mut own),
            };
            values.push(value);
            gradients.push(own);
        }
        match gradients.last() {
            Some(last) if values.iter().all(|v| v.is_finite()) => {
                out.copy_from_slice(last);
                Ok(())
            }
            _ => Err(Error::Blind),
        }
    }

    /// Returns what each cause contributes, in the order of the causes.
    ///
    /// # Errors
    /// As [`gradient`](Self::gradient).
    pub fn contributions(&self) -> Result<Vec<Contribution>, Error> {
        let mut gradient = std::vec![0.0; self.causes.len()];
        self.gradient(&std::vec![0.0; self.causes.len()], &mut gradient)?;
        Ok(self
            .causes
            .iter()
            .zip(gradient)
            .zip(0..)
            .map(|((cause, c), number)| cause.contribution(c, number))
            .collect())
    }

    /// Returns the combined standard uncertainty in first order.
    ///
    /// # Errors
    /// As [`gradient`](Self::gradient).
    pub fn combined(&self) -> Result<Combined, Error> {
        Ok(combine(&self.contributions()?))
    }

    /// Returns the variances of first and second order (JCGM 100:2008, note to 5.1.2).
    ///
    /// # Errors
    /// As [`gradient`](Self::gradient), at every cause moved by half its standard uncertainty both ways.
    pub fn orders(&self) -> Result<Order, Error> {
        let count = self.causes.len();
        let mut off = std::vec![0.0; count];
        let (mut a, mut b, mut c) = (off.clone(), off.clone(), off.clone());
        second_order(
            |moved, by, out| {
                off.fill(0.0);
                if let (Some(slot), Some(cause)) = (off.get_mut(moved), self.causes.get(moved)) {
                    *slot = by * cause.standard();
                }
                self.gradient(&off, out)?;
                for (out, cause) in out.iter_mut().zip(&self.causes) {
                    *out *= cause.standard();
                }
                Ok(())
            },
            [&mut a, &mut b, &mut c],
        )
    }

    /// Runs the whole measurement so many times, every cause off by a draw from its distribution (JCGM 101:2008).
    ///
    /// # Errors
    /// As [`simulate`].
    pub fn trials(&self, trials: usize, threads: usize, seed: u64) -> Result<Run, Error> {
        let inputs: Vec<_> = self.causes.iter().map(|c| c.uncertainty).collect();
        simulate(trials, threads, seed, &inputs, |off| self.moved(off))
    }
}

impl Term {
    fn weight_moved(&self, off: &[f64]) -> f64 {
        let by = self.cause.map_or(0.0, |(cause, per)| per * off.get(cause).copied().unwrap_or(0.0));
        self.weight + by
    }
}

/// own += factor · other
fn add(own: &mut [f64], other: Option<&Vec<f64>>, factor: f64) {
    for (own, other) in own.iter_mut().zip(other.into_iter().flatten()) {
        *own += factor * other;
    }
}

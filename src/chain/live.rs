//! A bridge whose leads, or single arms, have temperatures of their own: its network changes reading by reading.

use super::plan::{Inputs, Span};
use super::polynomial::{Arms, slope_at_zero};
use super::{Temperature, kernel};
use crate::math::horner;
use crate::signal::{Amplifier, Bridge};
use crate::strain::Tau;

/// Where one temperature of a live bridge comes from.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Own {
    /// As the gauge.
    Gauge,
    /// One value, °C.
    Fixed(f64),
    /// The column of this arm.
    Column,
}

impl From<Temperature> for Own {
    fn from(temperature: Temperature) -> Self {
        match temperature {
            Temperature::None => Self::Gauge,
            Temperature::Fixed(t) => Self::Fixed(t),
            Temperature::Column => Self::Column,
        }
    }
}

/// How the leads follow their temperature: factor = 1 + α (T − T_ref).
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Warmth {
    pub(super) coefficient: f64,
    pub(super) reference: f64,
}

/// A bridge that is solved anew for every reading.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Live {
    /// The bridge with its zero worked in and its leads as stated.
    pub(super) bridge: Bridge,
    pub(super) amplifier: Amplifier,
    /// y = k · entered + m.
    pub(super) line: [f64; 2],
    /// Leads that follow the lead temperature; `None` = one factor for all readings.
    pub(super) warmth: Option<Warmth>,
    /// That one factor.
    pub(super) lead_factor: f64,
    /// u = (f₀ + f₁ T) v + x₀ with v the wanted result.
    pub(super) factor: [f64; 2],
    pub(super) x0: f64,
    pub(super) tau: Option<Tau>,
    pub(super) tau_at_zero: [f64; 4],
    pub(super) own: [Own; 4],
    /// Temperatures that the laws cover, °C.
    pub(super) covers: Span,
    /// Arms are believed between these multiples.
    pub(super) believed: [f64; 2],
}

/// What a reading says.
pub(super) struct Solved {
    pub(super) value: f64,
    /// Smallest and largest multiple of its resistance that a driven arm has.
    pub(super) arms: [f64; 2],
}

impl Live {
    /// The network at this state, against the number that enters.
    #[inline]
    fn arms(&self, inputs: &Inputs) -> (Arms, [f64; 4]) {
        let factor = match &self.warmth {
            Some(w) => 1.0 + w.coefficient * (inputs.lead_celsius - w.reference),
            None => self.lead_factor,
        };
        // leads of no resistance or less are no leads
        let factor = if factor > 0.0 { factor } else { f64::NAN };
        let (c, on) = self.bridge.drive();
        let expansion = self.bridge.with_leads_times(factor).expand(&self.amplifier);
        let mut arms = Arms::new(expansion, c, on);
        let [k, m] = self.line;
        for (n, d) in arms.numerator.iter_mut().zip(&mut arms.denominator) {
            *n -= m * *d;
            *d *= k;
        }
        // δ = c (f₀ + f₁ T) v + [c x₀ + t (τ(T) − τ(T₀))]
        let mut rest = [0.0; 4];
        let [f0, f1] = self.factor;
        for (i, ((slope, rest), own)) in arms.c.iter_mut().zip(&mut rest).zip(&self.own).enumerate() {
            let celsius = match own {
                Own::Gauge => inputs.celsius,
                Own::Fixed(t) => *t,
                Own::Column => inputs.arm_celsius.get(i).copied().unwrap_or(f64::NAN),
            };
            let is_gauge = on.get(i) == Some(&1.0);
            *rest = *slope * self.x0;
            if let Some(tau) = self.tau.as_ref().filter(|_| is_gauge) {
                let known = if self.covers.holds(celsius) { celsius } else { f64::NAN };
                *rest += tau.at(known) - self.tau_at_zero.get(i).copied().unwrap_or(0.0);
            }
            if *slope != 0.0 {
                *slope *= if f1 == 0.0 { f0 } else { f0 + f1 * celsius };
            }
        }
        (arms, rest)
    }

    /// The result for the number that enters.
    #[inline]
    pub(super) fn solve(&self, y: f64, inputs: &Inputs) -> Solved {
        let (arms, rest) = self.arms(inputs);
        let (n, d) = arms.folded(&rest);
        let branch = if slope_at_zero(&n, &d) < 0.0 { -1.0 } else { 1.0 };
        let value = kernel::quartic(&n, &d, branch, y);
        let mut range = [f64::INFINITY, f64::NEG_INFINITY];
        for (c, rest) in arms.c.iter().zip(&rest).filter(|(c, _)| **c != 0.0) {
            let multiple = 1.0 + c * value + rest;
            range = [range[0].min(multiple), range[1].max(multiple)];
        }
        Solved { value, arms: range }
    }

    /// The result where every driven arm is believed; NaN otherwise.
    #[inline]
    pub(super) fn value(&self, y: f64, inputs: &Inputs) -> f64 {
        let solved = self.solve(y, inputs);
        let [low, high] = self.believed;
        if solved.arms[0] >= low && solved.arms[1] <= high { solved.value } else { f64::NAN }
    }

    /// The number that enters for a result.
    pub(super) fn output(&self, value: f64, inputs: &Inputs) -> f64 {
        let (arms, rest) = self.arms(inputs);
        let (n, d) = arms.folded(&rest);
        horner(value, &n) / horner(value, &d)
    }

    /// Whether exactly one arm is driven: then a resistance too large or too small has a name.
    pub(super) fn single(&self) -> bool {
        let (c, _) = self.bridge.drive();
        c.iter().filter(|c| **c != 0.0).count() == 1
    }
}

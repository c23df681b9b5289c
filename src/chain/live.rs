//! A bridge whose leads, or single arms, have temperatures of their own: its network changes reading by reading.
//!
//! Every conductor is one resistance of the network, so that numerator and denominator are polynomials in what the leads
//! are multiplied by, and so in their temperature. They are expanded once, in twice the working precision, about the
//! temperature at which the zero was taken; a reading evaluates them, puts its arms in and solves what is left.

use super::kernel;
use super::plan::Inputs;
use super::polynomial::{derivative, residual};
use super::stage::{Degree, Span, Warmth};
use crate::math::{Double, Real, horner};
use crate::signal::{Expansion, MOST_LEADS};
use crate::strain::Tau;

/// Coefficients of a polynomial in the temperature of the leads.
pub(super) const POWERS: usize = MOST_LEADS + 1;

/// Where the temperature of one arm of a live bridge comes from.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Own {
    /// As the gauge.
    Gauge,
    /// One value, °C.
    Fixed(f64),
    /// The column of this arm.
    Column,
}

/// Output over supply against the number that enters: multilinear forms of the four δ by powers of T − T_about, T the
/// temperature of the leads.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Forms<R = f64> {
    pub(super) numerator: [[R; 16]; POWERS],
    pub(super) denominator: [[R; 16]; POWERS],
    /// How many powers count.
    pub(super) count: usize,
}

impl<R: Real> Forms<R> {
    /// Forms that the leads do not change.
    pub(super) fn still(forms: Expansion<R>) -> Self {
        let mut out = Self::none(1);
        out.put(0, forms);
        out
    }

    fn none(count: usize) -> Self {
        let zero = R::from_f64(0.0);
        Self { numerator: [[zero; 16]; POWERS], denominator: [[zero; 16]; POWERS], count }
    }

    fn put(&mut self, power: usize, forms: Expansion<R>) {
        if let (Some(n), Some(d)) = (self.numerator.get_mut(power), self.denominator.get_mut(power)) {
            (*n, *d) = (forms.numerator, forms.denominator);
        }
    }

    /// The polynomials that take these values where the leads are multiplied by λ₀, λ₀ + 1, … λ₀ + `count` − 1, by powers
    /// of T − T_about with λ = λ₀ + α (T − T_about).
    pub(super) fn through(count: usize, coefficient: R, mut at: impl FnMut(f64) -> Expansion<R>) -> Self {
        let mut forms = Self::none(count);
        for k in 0..count {
            forms.put(k, at(k as f64));
        }
        forms.numerator = interpolated(&forms.numerator, count, coefficient);
        forms.denominator = interpolated(&forms.denominator, count, coefficient);
        forms
    }
}

/// Values at 0, 1, … to coefficients of powers of α x, form by form.
fn interpolated<R: Real>(values: &[[R; 16]; POWERS], count: usize, coefficient: R) -> [[R; 16]; POWERS] {
    let mut out = *values;
    for set in 0..16 {
        let mut p = [R::from_f64(0.0); POWERS];
        for (p, row) in p.iter_mut().zip(values).take(count) {
            *p = row.get(set).copied().unwrap_or(*p);
        }
        // Newton's divided differences: p(x) = Σ p_k x (x − 1) … (x − k + 1)
        for k in 1..count {
            let mut before = p.get(k - 1).copied().unwrap_or(R::from_f64(0.0));
            for slot in p.iter_mut().take(count).skip(k) {
                let here = *slot;
                *slot = (here - before) / R::from_f64(k as f64);
                before = here;
            }
        }
        // to powers of x, from the innermost factor out
        for k in (0..count.saturating_sub(1)).rev() {
            for j in k..count - 1 {
                let next = p.get(j + 1).copied().unwrap_or(R::from_f64(0.0));
                if let Some(slot) = p.get_mut(j) {
                    *slot = *slot - next * R::from_f64(k as f64);
                }
            }
        }
        let mut power = R::from_f64(1.0);
        for (p, row) in p.iter().zip(&mut out) {
            if let Some(slot) = row.get_mut(set) {
                *slot = *p * power;
            }
            power = power * coefficient;
        }
    }
    out
}

impl Forms<Double> {
    pub(super) fn rounded(&self) -> Forms {
        let round = |p: &[[Double; 16]; POWERS]| p.map(|row| row.map(Double::value));
        Forms { numerator: round(&self.numerator), denominator: round(&self.denominator), count: self.count }
    }
}

impl Forms {
    /// The forms at one temperature of the leads, K from T_about.
    #[inline(always)]
    fn at(&self, kelvin: f64) -> ([f64; 16], [f64; 16]) {
        let (mut n, mut d) = ([0.0; 16], [0.0; 16]);
        let powers = self.numerator.iter().zip(&self.denominator).take(self.count).rev();
        // Horner's rule for all forms together
        for (more_n, more_d) in powers {
            n = plus(times(n, kelvin), *more_n);
            d = plus(times(d, kelvin), *more_d);
        }
        (n, d)
    }
}

#[inline(always)]
fn plus<const N: usize>(mut a: [f64; N], b: [f64; N]) -> [f64; N] {
    for (a, b) in a.iter_mut().zip(b) {
        *a += b;
    }
    a
}

#[inline(always)]
fn times<const N: usize>(mut a: [f64; N], factor: f64) -> [f64; N] {
    for a in &mut a {
        *a *= factor;
    }
    a
}

/// The forms without and with one arm: the halves of `all`.
#[inline(always)]
fn halves<const N: usize>(all: &[f64]) -> ([f64; N], [f64; N]) {
    let none = [0.0; N];
    (all.first_chunk().copied().unwrap_or(none), all.last_chunk().copied().unwrap_or(none))
}

/// Expands Σ m_S Π_{i∈S} (p_i + c_i v) into powers of v, arm 4 first, so that the many forms of the first steps stand side
/// by side.
#[inline(always)]
fn fold(m: &[f64; 16], p: &[f64; 4], c: &[f64; 4]) -> [f64; 5] {
    let [p1, p2, p3, p4] = *p;
    let [c1, c2, c3, c4] = *c;
    // arm 4
    let (lo, hi) = halves::<8>(m);
    let [a0, a1] = [plus(lo, times(hi, p4)), times(hi, c4)];
    // arm 3
    let ((l0, h0), (l1, h1)) = (halves::<4>(&a0), halves::<4>(&a1));
    let b0 = plus(l0, times(h0, p3));
    let b1 = plus(plus(l1, times(h1, p3)), times(h0, c3));
    let b2 = times(h1, c3);
    // arm 2
    let ((l0, h0), (l1, h1), (l2, h2)) = (halves::<2>(&b0), halves::<2>(&b1), halves::<2>(&b2));
    let d0 = plus(l0, times(h0, p2));
    let d1 = plus(plus(l1, times(h1, p2)), times(h0, c2));
    let d2 = plus(plus(l2, times(h2, p2)), times(h1, c2));
    let d3 = times(h2, c2);
    // arm 1
    let ([l0, h0], [l1, h1], [l2, h2], [l3, h3]) = (d0, d1, d2, d3);
    [l0 + h0 * p1, l1 + h1 * p1 + h0 * c1, l2 + h2 * p1 + h1 * c1, l3 + h3 * p1 + h2 * c1, h3 * c1]
}

/// A bridge that changes reading by reading.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Live {
    pub(super) forms: Forms,
    /// How the leads follow their temperature; `None` = one temperature for all readings.
    pub(super) warmth: Option<Warmth>,
    /// Temperature of the leads about which the forms are expanded, °C.
    pub(super) about: f64,
    /// δ = (c₀ + c₁ T) v + rest + t (τ(T) − τ(T₀)), v the wanted result: c₀ and c₁ of each arm.
    pub(super) slope: [[f64; 2]; 4],
    /// c x₀ of each arm.
    pub(super) rest: [f64; 4],
    /// Which arms feel the temperature.
    pub(super) gauges: [bool; 4],
    pub(super) tau: Option<Tau>,
    pub(super) tau_at_zero: [f64; 4],
    pub(super) own: [Own; 4],
    /// Temperatures that the laws cover, °C.
    pub(super) covers: Span,
    /// Arms are believed between these multiples.
    pub(super) believed: [f64; 2],
    pub(super) branch: f64,
    pub(super) degree: Degree,
}

/// A live bridge at one state.
pub(super) struct State {
    pub(super) n: [f64; 5],
    pub(super) d: [f64; 5],
    pub(super) slope: [f64; 4],
    pub(super) rest: [f64; 4],
}

impl State {
    /// The stretch of results on which every driven arm is between these multiples of its resistance.
    pub(super) fn stretch(&self, [low, high]: [f64; 2]) -> Span {
        let arms = self.slope.iter().zip(&self.rest).filter(|(slope, _)| **slope != 0.0);
        arms.fold(Span::ALL, |span, (slope, rest)| span.both(Span { low, high }.through(1.0 + rest, *slope)))
    }

    /// Smallest and largest multiple of its resistance that a driven arm has.
    pub(super) fn multiples(&self, value: f64) -> [f64; 2] {
        let arms = self.slope.iter().zip(&self.rest).filter(|(slope, _)| **slope != 0.0);
        arms.fold([f64::INFINITY, f64::NEG_INFINITY], |[low, high], (slope, rest)| {
            let multiple = 1.0 + (slope * value + rest);
            [low.min(multiple), high.max(multiple)]
        })
    }
}

/// Rows that go through one step after the other together, so that the solving step has no branch.
const ROWS: usize = 32;

impl Live {
    /// The bridge at one state.
    #[inline(always)]
    pub(super) fn at(&self, inputs: &Inputs) -> State {
        let kelvin = match &self.warmth {
            // leads of no resistance or less are no leads
            Some(w) => kernel::mask_by(w.holds(inputs.lead_celsius), inputs.lead_celsius - self.about),
            None => 0.0,
        };
        let (mut slope, mut rest) = ([0.0; 4], self.rest);
        let arms = slope.iter_mut().zip(&mut rest).zip(&self.slope).zip(self.own.iter().zip(&inputs.arm_celsius));
        let shared = self.tau.as_ref().map(|tau| self.tau_at(tau, inputs.celsius));
        for ((((slope, rest), [c0, c1]), (own, column)), (is_gauge, at_zero)) in
            arms.zip(self.gauges.iter().zip(&self.tau_at_zero))
        {
            let celsius = match own {
                Own::Gauge => inputs.celsius,
                Own::Fixed(t) => *t,
                Own::Column => *column,
            };
            // a gauge factor that does not depend on temperature needs none
            *slope = if *c1 == 0.0 { *c0 } else { c0 + c1 * celsius };
            if *is_gauge && let (Some(tau), Some(shared)) = (&self.tau, shared) {
                let here = if matches!(own, Own::Gauge) { shared } else { self.tau_at(tau, celsius) };
                *rest += here - at_zero;
            }
        }
        let (n, d) = self.forms.at(kelvin);
        State { n: fold(&n, &rest, &slope), d: fold(&d, &rest, &slope), slope, rest }
    }

    /// τ where the laws cover the temperature.
    #[inline(always)]
    fn tau_at(&self, tau: &Tau, celsius: f64) -> f64 {
        kernel::mask_by(self.covers.holds(celsius), tau.at(celsius))
    }

    /// The root of f on the branch.
    #[inline(always)]
    fn root(&self, f: &[f64; 5]) -> f64 {
        match self.degree {
            Degree::First => kernel::moebius_root(f),
            Degree::Second => kernel::quadratic_root(f, self.branch),
            Degree::Fourth => kernel::quartic_root(f, self.branch),
        }
    }

    /// The result where every driven arm is believed; NaN otherwise.
    #[inline(always)]
    fn believe(&self, slope: [f64; 4], rest: [f64; 4], value: f64) -> f64 {
        let [low, high] = self.believed;
        let mut holds = true;
        for (slope, rest) in slope.iter().zip(rest) {
            // an arm that is not driven cannot tell of a fault
            let multiple = 1.0 + if *slope == 0.0 { 0.0 } else { slope * value + rest };
            holds &= (multiple >= low) & (multiple <= high);
        }
        kernel::mask_by(holds, value)
    }

    /// The result for the number that enters, believed or not.
    #[inline]
    pub(super) fn solve(&self, state: &State, y: f64) -> f64 {
        self.root(&residual(&state.n, &state.d, y))
    }

    /// The result where every driven arm is believed; NaN otherwise.
    #[inline]
    pub(super) fn value(&self, y: f64, inputs: &Inputs) -> f64 {
        let state = self.at(inputs);
        self.believe(state.slope, state.rest, self.solve(&state, y))
    }

    /// The same for a block: `out` holds what enters, `inputs` gives what comes with a row.
    #[inline(always)]
    pub(super) fn block(&self, out: &mut [f64], kept: &Span, inputs: impl Fn(usize) -> Inputs) {
        let mut start = 0;
        for rows in out.chunks_mut(ROWS) {
            let mut f = [[0.0; ROWS]; 5];
            let (mut slopes, mut rests) = ([[0.0; 4]; ROWS], [[0.0; 4]; ROWS]);
            let [f0, f1, f2, f3, f4] = &mut f;
            let cells = f0.iter_mut().zip(f1).zip(f2.iter_mut().zip(f3)).zip(f4);
            for (((((f0, f1), (f2, f3)), f4), (slope, rest)), (i, y)) in
                cells.zip(slopes.iter_mut().zip(&mut rests)).zip(rows.iter().enumerate())
            {
                let state = self.at(&inputs(start + i));
                [*f0, *f1, *f2, *f3, *f4] = residual(&state.n, &state.d, *y);
                (*slope, *rest) = (state.slope, state.rest);
            }
            let [f0, f1, f2, f3, f4] = &f;
            let mut values = [0.0; ROWS];
            match self.degree {
                Degree::First => {
                    for ((v, a), b) in values.iter_mut().zip(f0).zip(f1) {
                        *v = kernel::moebius_root(&[*a, *b, 0.0, 0.0, 0.0]);
                    }
                }
                Degree::Second => {
                    for (((v, a), b), c) in values.iter_mut().zip(f0).zip(f1).zip(f2) {
                        *v = kernel::quadratic_root(&[*a, *b, *c, 0.0, 0.0], self.branch);
                    }
                }
                Degree::Fourth => {
                    for (((v, a), (b, c)), (d, e)) in
                        values.iter_mut().zip(f0).zip(f1.iter().zip(f2)).zip(f3.iter().zip(f4))
                    {
                        *v = kernel::quartic_root(&[*a, *b, *c, *d, *e], self.branch);
                    }
                }
            }
            for (((v, root), slope), rest) in rows.iter_mut().zip(values).zip(slopes).zip(rests) {
                *v = kernel::mask(self.believe(slope, rest, root), kept);
            }
            start += ROWS;
        }
    }

    /// The number that enters for a result; `None` where no reading gives that result back.
    pub(super) fn output(&self, value: f64, inputs: &Inputs) -> Option<f64> {
        let state = self.at(inputs);
        let y = horner(value, &state.n) / horner(value, &state.d);
        let back = self.believe(state.slope, state.rest, self.solve(&state, y));
        // beyond a turning point the reading belongs to another result
        let steepest = state.slope.iter().fold(0.0_f64, |m, s| m.max(s.abs()));
        let near = (back - value).abs() * steepest <= 1e-6 * (value * steepest).abs() + 1e-9;
        near.then_some(y)
    }

    /// Whether exactly one arm is driven: then a resistance too large or too small has a name.
    pub(super) fn single(&self) -> bool {
        self.slope.iter().filter(|c| **c != [0.0; 2]).count() == 1
    }
}

/// Whether a reading without a believed result lies beyond a point where the output turns back, within the stretch on
/// which all arms are believed, or simply has no root there: then nothing says that the circuit is broken.
pub(super) fn turned(n: &[f64; 5], d: &[f64; 5], stretch: &Span, y: f64) -> bool {
    let middle = if stretch.holds(0.0) { 0.0 } else { 0.5 * stretch.low + 0.5 * stretch.high };
    let at = |u: f64| horner(u, n) / horner(u, d);
    let (dn, dd) = (derivative(n), derivative(d));
    let slope = |u: f64| horner(u, &dn) * horner(u, d) - horner(u, n) * horner(u, &dd);
    let home = slope(middle);
    let above = y > at(middle);
    let end = if above == (home > 0.0) { stretch.high } else { stretch.low };
    let turns = |k| {
        let here = slope(middle + (end - middle) * f64::from(k) / 256.0);
        here.is_nan() || here * home <= 0.0
    };
    (1..=256).any(turns) || above != (y > at(end))
}

//! A network with driven arms as a ratio of polynomials in what drives them.

use crate::math::{Real, horner, sqrt};
use crate::signal::Expansion;

/// Output over supply as multilinear forms of the arms, with each arm's δ = c u + t τ.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Arms<R = f64> {
    pub(super) numerator: [R; 16],
    pub(super) denominator: [R; 16],
    pub(super) c: [R; 4],
    pub(super) t: [f64; 4],
}

impl<R: Real> Arms<R> {
    pub(super) fn new(expansion: Expansion<R>, c: [R; 4], t: [f64; 4]) -> Self {
        Self { numerator: expansion.numerator, denominator: expansion.denominator, c, t }
    }

    /// Returns numerator and denominator as polynomials in u at one thermal output τ.
    #[inline(always)]
    pub(super) fn at(&self, tau: R) -> ([R; 5], [R; 5]) {
        let p = self.t.map(|t| R::from_f64(t) * tau);
        (fold(&self.numerator, &p, &self.c), fold(&self.denominator, &p, &self.c))
    }

    /// Returns the forms along one arm's δ, all other arms at rest.
    pub(super) fn along(&self, arm: usize) -> ([R; 2], [R; 2]) {
        let zero = R::from_f64(0.0);
        let bit = 1usize << (arm & 3);
        let pick = |m: &[R; 16]| [m[0], m.get(bit).copied().unwrap_or(zero)];
        (pick(&self.numerator), pick(&self.denominator))
    }

    /// Returns the δ of one arm that gives this output, all other arms at rest.
    pub(super) fn single(&self, arm: usize, y: R) -> R {
        // y = (n₀ + n₁ δ)/(d₀ + d₁ δ)
        let ([n0, n1], [d0, d1]) = self.along(arm);
        (y * d0 - n0) / (n1 - y * d1)
    }
}

impl<R: Real> Arms<R> {
    /// Returns numerator and denominator by powers of u, each coefficient by powers of τ: what [`at`](Self::at) gives for
    /// every τ.
    pub(super) fn by_powers(&self) -> ([[R; 5]; 5], [[R; 5]; 5]) {
        let zero = R::from_f64(0.0);
        let (mut n, mut d) = ([[zero; 5]; 5], [[zero; 5]; 5]);
        for (set, (m_n, m_d)) in self.numerator.iter().zip(&self.denominator).enumerate() {
            // Π (c_i u + t_i τ) over the arms of the set: coefficients of uʲ τ^(size − j)
            let mut product = [zero; 5];
            product[0] = R::from_f64(1.0);
            let mut size = 0;
            for (arm, (c, t)) in self.c.iter().zip(&self.t).enumerate() {
                if set & (1 << arm) == 0 {
                    continue;
                }
                let mut carry = zero;
                for p in &mut product {
                    let here = *p;
                    *p = here * R::from_f64(*t) + carry;
                    carry = here * *c;
                }
                size += 1;
            }
            for (j, ((n, d), p)) in n.iter_mut().zip(&mut d).zip(product).take(size + 1).enumerate() {
                if let (Some(n), Some(d)) = (n.get_mut(size - j), d.get_mut(size - j)) {
                    *n = *n + *m_n * p;
                    *d = *d + *m_d * p;
                }
            }
        }
        (n, d)
    }
}

/// A polynomial in u and τ together, of the fourth degree at most: by powers of u, each coefficient by powers of τ.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Warm {
    c0: [f64; 5],
    c1: [f64; 4],
    c2: [f64; 3],
    c3: [f64; 2],
    c4: f64,
}

impl Warm {
    pub(super) fn new(by_powers: &[[f64; 5]; 5]) -> Self {
        let [c0, [p, q, r, s, _], [t, u, v, ..], [w, x, ..], [y, ..]] = *by_powers;
        Self { c0, c1: [p, q, r, s], c2: [t, u, v], c3: [w, x], c4: y }
    }

    /// The polynomial in u at one τ.
    #[inline(always)]
    pub(super) fn at(&self, tau: f64) -> [f64; 5] {
        [horner(tau, &self.c0), horner(tau, &self.c1), horner(tau, &self.c2), horner(tau, &self.c3), self.c4]
    }
}

/// Expands Σ m_S Π_{i∈S} (p_i + c_i u) into powers of u, one arm at a time.
#[inline(always)]
pub(super) fn fold<R: Real>(m: &[R; 16], p: &[R; 4], c: &[R; 4]) -> [R; 5] {
    let [p1, p2, p3, p4] = *p;
    let [c1, c2, c3, c4] = *c;
    let [m0, m1, m2, m3, m4, m5, m6, m7, m8, m9, m10, m11, m12, m13, m14, m15] = *m;
    // arm 1: pairs that differ in bit 0
    let one = |lo: R, hi: R| [lo + hi * p1, hi * c1];
    // arm 2
    let two = |lo: [R; 2], hi: [R; 2]| [lo[0] + hi[0] * p2, lo[1] + hi[1] * p2 + hi[0] * c2, hi[1] * c2];
    // arm 3
    let three = |lo: [R; 3], hi: [R; 3]| {
        [lo[0] + hi[0] * p3, lo[1] + hi[1] * p3 + hi[0] * c3, lo[2] + hi[2] * p3 + hi[1] * c3, hi[2] * c3]
    };
    let (a, b) = (two(one(m0, m1), one(m2, m3)), two(one(m4, m5), one(m6, m7)));
    let (d, e) = (two(one(m8, m9), one(m10, m11)), two(one(m12, m13), one(m14, m15)));
    // arm 4
    let (lo, hi) = (three(a, b), three(d, e));
    [
        lo[0] + hi[0] * p4,
        lo[1] + hi[1] * p4 + hi[0] * c4,
        lo[2] + hi[2] * p4 + hi[1] * c4,
        lo[3] + hi[3] * p4 + hi[2] * c4,
        hi[3] * c4,
    ]
}

/// Returns the derivative of a polynomial.
#[inline(always)]
pub(super) fn derivative<R: Real>(p: &[R; 5]) -> [R; 4] {
    let [_, a, b, c, d] = *p;
    [a, b * R::from_f64(2.0), c * R::from_f64(3.0), d * R::from_f64(4.0)]
}

/// One step of Newton's method on f(u) = N(u) − y D(u).
#[inline(always)]
pub(super) fn newton<R: Real>(f: &[R; 5], u: R) -> R {
    u - horner(u, f) / horner(u, &derivative(f))
}

/// N − y D.
#[inline(always)]
pub(super) fn residual<R: Real>(n: &[R; 5], d: &[R; 5], y: R) -> [R; 5] {
    let [n0, n1, n2, n3, n4] = *n;
    let [d0, d1, d2, d3, d4] = *d;
    [n0 - y * d0, n1 - y * d1, n2 - y * d2, n3 - y * d3, n4 - y * d4]
}

/// The root of c + b u + a u² that grows from 0 with c, where the slope has this sign.
#[inline(always)]
pub(super) fn near_root(c: f64, b: f64, a: f64, branch: f64) -> f64 {
    // u = −2c / (b ± √(b² − 4ac)): no cancellation while b keeps the sign of the branch
    -2.0 * c / (b + branch * sqrt(b * b - 4.0 * a * c))
}

/// Returns the u that gives output y on the branch through u = 0, to the precision of the number type; `None` where
/// there is none.
pub(super) fn solve<R: Real>(n: &[R; 5], d: &[R; 5], y: R) -> Option<R> {
    let f = residual(n, d, y);
    let [f0, f1, f2, _, _] = f.map(Real::value);
    let branch = if slope_at_zero(&n.map(Real::value), &d.map(Real::value)) < 0.0 { -1.0 } else { 1.0 };
    let mut u = near_root(f0, f1, f2, branch);
    let plain = f.map(Real::value);
    for _ in 0..8 {
        u = newton(&plain, u);
    }
    // in the caller's number type
    let u = R::root(&f, u);
    u.value().is_finite().then_some(u)
}

/// Sign-giving slope of N − y D at u = 0, on the branch.
pub(super) fn slope_at_zero(n: &[f64; 5], d: &[f64; 5]) -> f64 {
    // f′ = N′ − y D′ with y = N/D
    n[1] - n[0] / d[0] * d[1]
}

//! Contributions as smooth functions of what varies from row to row.
//!
//! Cubic interpolation over cells of a fixed grid; a cell that does not keep the tolerance at points between its nodes is
//! halved. Cells lie where they lie whatever rows come, so that no figure depends on the order or split of the rows.

use core::hash::{BuildHasherDefault, Hasher};
use std::collections::HashMap;
use std::vec::Vec;

/// Most things that may vary: more make the cells too dear.
pub(super) const MOST: usize = 3;

/// Nodes along each axis.
const NODES: usize = 4;

/// Halvings of a cell before its rows are computed one by one.
const DEEPEST: u8 = 8;

/// Largest accepted error at the points of check, over the norm of all contributions: a margin to the 1e-6 that is promised.
const TOLERANCE: f64 = 2e-7;

/// How an axis is divided into cells.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Axis {
    /// Cells of this width, a power of two.
    Even(f64),
    /// One cell for each factor of two of its size, both signs.
    Octaves,
}

/// Place of a cell: halvings, and along each axis the cell of the first level and the place within it.
type Key = (u8, [(i32, u32); MOST]);

enum Cell {
    /// Too coarse.
    Halved,
    /// Powers of the local coordinates, lowest first, each with one number per contribution.
    Smooth(Vec<f64>),
    /// Nothing smooth is found at the finest level.
    Rough,
}

/// Mixes the few whole numbers of a place: rows ask for cells too often for a hash that withstands attacks.
#[derive(Default)]
struct Mixer(u64);

impl Hasher for Mixer {
    fn write(&mut self, bytes: &[u8]) {
        bytes.iter().for_each(|b| self.write_u64(u64::from(*b)));
    }
    fn write_u8(&mut self, n: u8) {
        self.write_u64(u64::from(n));
    }
    fn write_i32(&mut self, n: i32) {
        self.write_u64(u64::from(n as u32));
    }
    fn write_u32(&mut self, n: u32) {
        self.write_u64(u64::from(n));
    }
    fn write_u64(&mut self, n: u64) {
        self.0 = (self.0.rotate_left(23) ^ n).wrapping_mul(0x9E37_79B9_7F4A_7C15);
    }
    fn finish(&self) -> u64 {
        self.0 ^ self.0 >> 29
    }
}

pub(super) struct Surface {
    axes: Vec<Axis>,
    cells: HashMap<Key, Cell, BuildHasherDefault<Mixer>>,
    last: Option<Key>,
}

/// Ends of a cell along one axis.
fn ends(axis: Axis, level: u8, (first, within): (i32, u32)) -> [f64; 2] {
    let parts = f64::from(1_u32 << level);
    let (low, high) = (f64::from(within) / parts, f64::from(within + 1) / parts);
    match axis {
        Axis::Even(width) => [(f64::from(first) + low) * width, (f64::from(first) + high) * width],
        Axis::Octaves => {
            // the number of an octave, with the sign in its last bit
            let size = libm::ldexp(if first & 1 == 0 { 1.0 } else { -1.0 }, first >> 1);
            [size * (1.0 + low), size * (1.0 + high)]
        }
    }
}

/// The cell of the first level and how far in it, 0..1.
fn place(axis: Axis, x: f64) -> Option<(i32, f64)> {
    match axis {
        Axis::Even(width) => {
            let steps = x / width;
            let first = libm::floor(steps);
            (first.abs() < 1e9).then_some((first as i32, steps - first))
        }
        Axis::Octaves => {
            if x == 0.0 || !x.is_finite() {
                return None;
            }
            let (fraction, exponent) = libm::frexp(x.abs());
            // fraction is in 0.5..1
            let first = (exponent - 1) * 2 + i32::from(x < 0.0);
            Some((first, 2.0 * fraction - 1.0))
        }
    }
}

impl Surface {
    pub(super) fn new(axes: Vec<Axis>) -> Self {
        Self { axes, cells: HashMap::default(), last: None }
    }

    fn key(&self, level: u8, places: &[(i32, f64); MOST]) -> Key {
        let parts = f64::from(1_u32 << level);
        (level, places.map(|(first, within)| (first, libm::floor(within * parts) as u32)))
    }

    /// Writes the contributions at a point; `false` where they must be computed.
    ///
    /// `exact` gives them at any point, `None` where there are none.
    pub(super) fn at(
        &mut self,
        x: &[f64; MOST],
        out: &mut Vec<f64>,
        mut exact: impl FnMut(&[f64; MOST]) -> Option<Vec<f64>>,
    ) -> bool {
        let mut places = [(0, 0.0); MOST];
        for ((slot, axis), x) in places.iter_mut().zip(&self.axes).zip(x) {
            match place(*axis, *x) {
                Some(found) => *slot = found,
                None => return false,
            }
        }
        let key = match self.last.filter(|last| self.key(last.0, &places) == *last) {
            Some(last) => last,
            None => {
                let mut level = 0;
                loop {
                    let key = self.key(level, &places);
                    if !self.cells.contains_key(&key) {
                        let cell = match fit(&self.axes, &key, &mut exact) {
                            Some(smooth) => Cell::Smooth(smooth),
                            None if level < DEEPEST => Cell::Halved,
                            None => Cell::Rough,
                        };
                        self.cells.insert(key, cell);
                    }
                    match self.cells.get(&key) {
                        Some(Cell::Halved) => level += 1,
                        _ => break key,
                    }
                }
            }
        };
        self.last = Some(key);
        let Some(Cell::Smooth(powers)) = self.cells.get(&key) else { return false };
        let count = self.axes.len();
        evaluate(powers, &self.axes, &key, x.get(..count).unwrap_or(x), out);
        true
    }
}

/// −1..1 across the cell.
fn local(axis: Axis, level: u8, place: (i32, u32), x: f64) -> f64 {
    let [a, b] = ends(axis, level, place);
    (2.0 * x - (a + b)) / (b - a)
}

fn evaluate(powers: &[f64], axes: &[Axis], key: &Key, x: &[f64], out: &mut Vec<f64>) {
    let (level, places) = key;
    // products of the powers of all coordinates, the last axis varying fastest
    let mut basis = [1.0; 64];
    let mut filled = 1;
    for ((axis, place), x) in axes.iter().zip(places).zip(x) {
        let t = local(*axis, *level, *place, *x);
        let cubes = [1.0, t, t * t, t * t * t];
        for old in (0..filled).rev() {
            let factor = basis.get(old).copied().unwrap_or(0.0);
            for (slot, power) in basis.iter_mut().skip(old * NODES).zip(cubes) {
                *slot = factor * power;
            }
        }
        filled *= NODES;
    }
    let width = powers.len() / filled.max(1);
    out.clear();
    out.resize(width, 0.0);
    for (factor, row) in basis.iter().take(filled).zip(powers.chunks_exact(width.max(1))) {
        for (out, power) in out.iter_mut().zip(row) {
            *out += factor * power;
        }
    }
}

/// Chebyshev nodes, cos((2 k + 1) π/8).
const POINTS: [f64; NODES] =
    [0.923_879_532_511_286_7, 0.382_683_432_365_089_8, -0.382_683_432_365_089_8, -0.923_879_532_511_286_7];

/// From values at the nodes to powers of t, along one axis: c = V⁻¹ f, by Chebyshev sums.
fn to_powers(f: [f64; NODES]) -> [f64; NODES] {
    // c_j = (2 − δ_j0)/4 Σ f_k T_j(x_k)
    let chebyshev = |x: f64| [1.0, x, 2.0 * x * x - 1.0, (4.0 * x * x - 3.0) * x];
    let mut c = [0.0; NODES];
    for (x, f) in POINTS.iter().zip(f) {
        for (c, t) in c.iter_mut().zip(chebyshev(*x)) {
            *c += 0.5 * f * t;
        }
    }
    let [c0, c1, c2, c3] = c;
    // T₀ = 1, T₂ = 2 t² − 1, T₃ = 4 t³ − 3 t
    [0.5 * c0 - c2, c1 - 3.0 * c3, 2.0 * c2, 4.0 * c3]
}

/// The interpolation over one cell; `None` where it does not keep the tolerance.
fn fit(axes: &[Axis], key: &Key, exact: &mut impl FnMut(&[f64; MOST]) -> Option<Vec<f64>>) -> Option<Vec<f64>> {
    let (level, places) = key;
    let at = |local: &[f64; MOST]| {
        let mut x = [0.0; MOST];
        for (((slot, axis), place), t) in x.iter_mut().zip(axes).zip(places).zip(local) {
            let [a, b] = ends(*axis, *level, *place);
            *slot = 0.5 * ((a + b) + t * (b - a));
        }
        x
    };
    let total = NODES.pow(axes.len() as u32);
    let mut values: Vec<Vec<f64>> = Vec::with_capacity(total);
    for index in 0..total {
        let mut local = [0.0; MOST];
        let mut rest = index;
        // the last axis varies fastest
        for slot in local.iter_mut().take(axes.len()).rev() {
            *slot = POINTS.get(rest % NODES).copied().unwrap_or(0.0);
            rest /= NODES;
        }
        values.push(exact(&at(&local))?);
    }
    let width = values.first()?.len();
    if values.iter().any(|v| v.len() != width || v.iter().any(|v| !v.is_finite())) {
        return None;
    }
    // along each axis in turn
    let mut stride = 1;
    for _ in axes {
        for start in 0..total {
            if start / stride % NODES != 0 {
                continue;
            }
            for column in 0..width {
                let get = |values: &[Vec<f64>], k: usize| {
                    values.get(start + k * stride).and_then(|v| v.get(column)).copied().unwrap_or(f64::NAN)
                };
                let f = [get(&values, 0), get(&values, 1), get(&values, 2), get(&values, 3)];
                for (k, power) in to_powers(f).into_iter().enumerate() {
                    if let Some(slot) = values.get_mut(start + k * stride).and_then(|v| v.get_mut(column)) {
                        *slot = power;
                    }
                }
            }
        }
        stride *= NODES;
    }
    let powers: Vec<f64> = values.into_iter().flatten().collect();
    // the corners and the middle, where the error of such a cubic is largest
    let mut found = Vec::new();
    for corner in 0..=(1_u32 << axes.len()) {
        let mut local = [0.0; MOST];
        if corner < 1 << axes.len() {
            for (axis, slot) in local.iter_mut().enumerate().take(axes.len()) {
                // not past an end by rounding
                *slot = if corner >> axis & 1 == 1 { 0.999_999 } else { -0.999_999 };
            }
        }
        let x = at(&local);
        let wanted = exact(&x)?;
        evaluate(&powers, axes, key, x.get(..axes.len())?, &mut found);
        let (mut error, mut size) = (0.0, 0.0);
        for (a, b) in wanted.iter().zip(&found) {
            error += (a - b) * (a - b);
            size += a * a;
        }
        // NaN is no agreement
        if !(wanted.len() == width && error <= TOLERANCE * TOLERANCE * size) {
            return None;
        }
    }
    Some(powers)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn cells_hold_what_falls_into_them() {
        for axis in [Axis::Even(0.25), Axis::Octaves] {
            for x in [0.3, 1.0, -1.0, 2.999, -0.1, 1e-9, 1.999_999_999] {
                let (first, within) = place(axis, x).unwrap();
                for level in [0, 1, 5] {
                    let [a, b] = ends(axis, level, (first, (within * f64::from(1_u32 << level)) as u32));
                    assert!(a.min(b) <= x && x <= a.max(b), "{axis:?} {x} {level}: {a} {b}");
                }
            }
        }
    }

    #[test]
    fn a_product_of_cubics_is_met_and_a_smooth_function_within_the_tolerance() {
        let axes = || std::vec![Axis::Even(1.0), Axis::Octaves, Axis::Even(2.0)];
        let cubic = |x: &[f64; MOST]| {
            let [a, b, c] = *x;
            Some(std::vec![a * a * a * (1.0 - b) * (c + 2.0 * c * c * c), 3.0 + b * b * b])
        };
        let mut surface = Surface::new(axes());
        let mut out = Vec::new();
        for x in [[0.3, 1.7, -0.2], [-5.5, 3.0, 7.9], [0.99, -1.01, 2.0]] {
            assert!(surface.at(&x, &mut out, cubic));
            let want = cubic(&x).unwrap();
            assert!(out.iter().zip(&want).all(|(a, b)| (a - b).abs() < 1e-12 * (1.0 + b.abs())), "{out:?} {want:?}");
        }
        let smooth = |x: &[f64; MOST]| {
            let [a, b, c] = *x;
            Some(std::vec![crate::math::exp(a) / b, c / (1.0 + a * a), 1.0])
        };
        let mut surface = Surface::new(axes());
        for i in 0..400 {
            let x = [-2.0 + 0.01 * f64::from(i), 1.1 + 0.005 * f64::from(i), 0.03 * f64::from(i % 37)];
            assert!(surface.at(&x, &mut out, smooth));
            let want = smooth(&x).unwrap();
            let size = want.iter().map(|v| v * v).sum::<f64>().sqrt();
            assert!(out.iter().zip(&want).all(|(a, b)| (a - b).abs() < 1e-6 * size), "{x:?} {out:?} {want:?}");
        }
        // the same bits whatever came before
        let mut other = Surface::new(axes());
        let x = [0.37, 1.9, 0.5];
        let mut alone = Vec::new();
        assert!(other.at(&x, &mut alone, smooth) && surface.at(&x, &mut out, smooth));
        assert_eq!(alone, out);
        // a step is not smooth
        assert!(
            !Surface::new(std::vec![Axis::Even(1.0)])
                .at(&[0.301, 0.0, 0.0], &mut out, |x| { Some(std::vec![if x[0] < 0.3 { 1.0 } else { 2.0 }, x[0]]) })
                || out[0] == 2.0
        );
    }
}

//! A bridge in its wires, node by node: Kirchhoff's current law with conductances, solved by elimination with pivots in numbers
//! of twice the precision, since milliohms beside kilohms cost digits. Nothing of the library is used.
#![allow(dead_code, reason = "every test file uses its own part of this")]

use crate::twofold::Twofold;

/// A bridge with everything around it, at a source of 1 V.
#[derive(Clone, Copy, Debug)]
pub struct Wired {
    /// Resistances of arms 1-4 as they are, Ω.
    pub arms: [f64; 4],
    /// Three wires: in arm 1, in arm 2, in series with the output, Ω.
    pub three: [f64; 3],
    /// Supply leads: positive, negative, Ω.
    pub supply: [f64; 2],
    /// Signal leads: of the node between arms 1 and 2, of the other, Ω.
    pub signal: [f64; 2],
    /// Across the far ends of the signal leads, Ω.
    pub load: Option<f64>,
    /// A resistor across arm 1, Ω: at the arm itself, or at the instrument, from the far end of its signal wire to the
    /// negative terminal of the source.
    pub shunt: Option<(f64, bool)>,
}

impl Wired {
    pub fn new(arms: [f64; 4]) -> Self {
        Self { arms, three: [0.0; 3], supply: [0.0; 2], signal: [0.0; 2], load: None, shunt: None }
    }

    /// Output over source.
    pub fn output(&self) -> f64 {
        // 0 and 1 are the source, 2 and 3 the bridge's supply corners, 4 and 5 its outputs, 6 and 7 the instrument's inputs
        let exact = Twofold::new;
        let [mut r1, r2, r3, r4] = self.arms.map(exact);
        let mut between = Vec::new();
        match self.shunt {
            Some((ohms, false)) => r1 = r1 * exact(ohms) / (r1 + exact(ohms)),
            Some((ohms, true)) => between.push((6, 0, exact(ohms))),
            None => {}
        }
        between.extend([
            (1, 2, exact(self.supply[0])),
            (0, 3, exact(self.supply[1])),
            (4, 3, r1 + exact(self.three[0])),
            (4, 2, r2 + exact(self.three[1])),
            (5, 2, r3),
            (5, 3, r4),
            (4, 6, exact(self.signal[0]) + exact(self.three[2])),
            (5, 7, exact(self.signal[1])),
        ]);
        between.extend(self.load.map(|r| (6, 7, exact(r))));
        // nodes without a resistance between them are one
        let mut same: Vec<usize> = (0..8).collect();
        for (a, b, ohms) in &between {
            if ohms.hi == 0.0 {
                let (from, to) = (same[*b].max(same[*a]), same[*b].min(same[*a]));
                same.iter_mut().filter(|n| **n == from).for_each(|n| *n = to);
            }
        }
        let nought = exact(0.0);
        let mut rows = vec![vec![nought; 9]; 8];
        for (a, b, ohms) in between {
            let (a, b) = (same[a], same[b]);
            if a != b {
                let g = exact(1.0) / ohms;
                rows[a][a] = rows[a][a] + g;
                rows[b][b] = rows[b][b] + g;
                rows[a][b] = rows[a][b] - g;
                rows[b][a] = rows[b][a] - g;
            }
        }
        for (node, row) in rows.iter_mut().enumerate() {
            if node < 2 || same[node] != node {
                *row = vec![nought; 9];
                row[node] = exact(1.0);
                row[8] = exact(if node == 1 { 1.0 } else { 0.0 });
            }
        }
        let v = solve(rows);
        (v[same[6]] - v[same[7]]).hi
    }
}

/// Gauss-Jordan elimination with pivots; the last column is the right-hand side.
pub fn solve(mut m: Vec<Vec<Twofold>>) -> Vec<Twofold> {
    let n = m.len();
    for i in 0..n {
        let pivot = (i..n).max_by(|a, b| m[*a][i].hi.abs().total_cmp(&m[*b][i].hi.abs())).unwrap();
        m.swap(i, pivot);
        let row = m[i].clone();
        for (_, other) in m.iter_mut().enumerate().filter(|(k, _)| *k != i) {
            let factor = other[i] / row[i];
            other.iter_mut().zip(&row).for_each(|(x, r)| *x = *x - factor * *r);
        }
    }
    (0..n).map(|i| m[i][n] / m[i][i]).collect()
}

/// The x in between where a rising function is `y`.
pub fn root(f: impl Fn(f64) -> f64, y: f64, low: f64, high: f64) -> f64 {
    let (mut low, mut high) = (low, high);
    for _ in 0..200 {
        let middle = 0.5 * (low + high);
        if f(middle) < y { low = middle } else { high = middle }
    }
    0.5 * (low + high)
}

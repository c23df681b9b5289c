//! Least squares by Householder reflections, in twice the working precision.

use std::vec::Vec;

use crate::math::{Double, Real};

/// A diagonal element of R smaller than this share of its column's length leaves nothing of the column: no data with 16 digits
/// tell it from those before it.
const NOTHING_LEFT: f64 = 1e-13;

/// The solution of an over-determined system.
#[derive(Clone, Debug)]
pub(super) struct Solution {
    /// One coefficient a column.
    pub(super) coefficients: Vec<Double>,
    /// Rows of K with K Kᵀ = (Aᵀ A)⁻¹.
    pub(super) root: Vec<Vec<Double>>,
    /// Condition number of the columns at length 1, in the 1-norm.
    pub(super) condition: f64,
}

/// Which column depends on those before it.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Dependent(pub(super) usize);

fn zero() -> Double {
    Double::from_f64(0.0)
}

fn dot<'a>(a: impl IntoIterator<Item = &'a Double>, b: impl IntoIterator<Item = &'a Double>) -> Double {
    a.into_iter().zip(b).fold(zero(), |sum, (a, b)| sum + *a * *b)
}

/// An upper triangle, one row after the other, each from its diagonal on.
struct Triangle(Vec<(Double, Vec<Double>)>);

impl Triangle {
    /// x with R x = b.
    fn solve(&self, b: &[Double]) -> Vec<Double> {
        // the solution grows from its last element: kept in reverse until the end
        let mut reversed: Vec<Double> = Vec::with_capacity(b.len());
        for ((diagonal, right), b) in self.0.iter().zip(b).rev() {
            reversed.push((*b - dot(right, reversed.iter().rev())) / *diagonal);
        }
        reversed.reverse();
        reversed
    }

    /// Largest sum of a column's sizes.
    fn norm(columns: impl Iterator<Item = f64>) -> f64 {
        columns.fold(0.0, f64::max)
    }

    fn columns(&self) -> impl Iterator<Item = f64> + '_ {
        (0..self.0.len()).map(|k| {
            let rows = self.0.iter().enumerate().take(k + 1);
            rows.map(|(j, (diagonal, right))| {
                let element = if j == k { Some(diagonal) } else { right.get(k - j - 1) };
                element.map_or(0.0, |e| e.value().abs())
            })
            .sum()
        })
    }
}

/// Returns the x that makes |A x − y| least; `columns` are those of A, each as long as y and at most as many as y has elements.
///
/// G. H. Golub, Numer. Math. 7 (1965) 206: reflections make A triangular. Columns are first brought to length 1.
pub(super) fn least_squares(columns: &[Vec<Double>], y: &[Double]) -> Result<Solution, Dependent> {
    let n = columns.len();
    let mut lengths = Vec::with_capacity(n);
    let mut rest: Vec<Vec<Double>> = Vec::with_capacity(n + 1);
    for (j, column) in columns.iter().enumerate() {
        let length = dot(column, column).sqrt();
        if !(length.value() > 0.0 && length.value().is_finite()) {
            return Err(Dependent(j));
        }
        rest.push(column.iter().map(|c| *c / length).collect());
        lengths.push(length);
    }
    rest.push(y.to_vec());
    let mut triangle = Triangle(Vec::with_capacity(n));
    let mut projected = Vec::with_capacity(n);
    for j in 0..n {
        // rest holds the columns from j on, each from row j on, and y
        let mut columns = rest.into_iter();
        let mut v = columns.next().unwrap_or_default();
        let length = dot(&v, &v).sqrt();
        if length.value() <= NOTHING_LEFT || length.value().is_nan() {
            return Err(Dependent(j));
        }
        // v ← v ± |v| e₁ with the sign that does not cancel; the reflection takes the column to ∓|v| e₁
        let Some(first) = v.first_mut() else { return Err(Dependent(j)) };
        let diagonal = if first.value() > 0.0 { -length } else { length };
        *first = *first - diagonal;
        let square = dot(&v, &v);
        let two = Double::from_f64(2.0);
        let mut row = Vec::with_capacity(n - j);
        rest = Vec::with_capacity(n - j);
        for column in columns {
            let factor = two * dot(&v, &column) / square;
            let mut turned = column.iter().zip(&v).map(|(c, v)| *c - factor * *v);
            row.push(turned.next().unwrap_or_else(zero));
            rest.push(turned.collect());
        }
        projected.push(row.pop().unwrap_or_else(zero));
        triangle.0.push((diagonal, row));
    }

    let scaled = triangle.solve(&projected);
    let coefficients = scaled.iter().zip(&lengths).map(|(c, l)| *c / *l).collect();
    // K = R⁻¹ with row j over the length of column j
    let inverse: Vec<Vec<Double>> = (0..n)
        .map(|k| {
            let unit: Vec<Double> = (0..n).map(|i| Double::from_f64(f64::from(u8::from(i == k)))).collect();
            triangle.solve(&unit)
        })
        .collect();
    let condition = Triangle::norm(triangle.columns())
        * Triangle::norm(inverse.iter().map(|column| column.iter().map(|e| e.value().abs()).sum()));
    let root = (0..n)
        .map(|row| {
            let length = lengths.get(row).copied().unwrap_or_else(zero);
            inverse.iter().map(|column| column.get(row).map_or_else(zero, |e| *e / length)).collect()
        })
        .collect();
    Ok(Solution { coefficients, root, condition })
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::vec;

    fn d(values: &[f64]) -> Vec<Double> {
        values.iter().map(|v| Double::from_f64(*v)).collect()
    }

    #[test]
    fn a_line_by_hand() {
        // x = 0 1 2 3, y = 1 3 5 8: slope 23/10, constant 4/5; (AᵀA)⁻¹ = [[0.7, −0.3], [−0.3, 0.2]]
        let solved = least_squares(&[d(&[1.0; 4]), d(&[0.0, 1.0, 2.0, 3.0])], &d(&[1.0, 3.0, 5.0, 8.0])).unwrap();
        for (got, want) in solved.coefficients.iter().zip([0.8, 2.3]) {
            assert!((got.value() - want).abs() < 1e-15);
        }
        for (i, row) in [[0.7, -0.3], [-0.3, 0.2]].iter().enumerate() {
            for (j, want) in row.iter().enumerate() {
                let got = dot(&solved.root[i], &solved.root[j]).value();
                assert!((got - want).abs() < 1e-15, "{i} {j}: {got}");
            }
        }
    }

    #[test]
    fn twelfth_degree_hilbert_matrix() {
        // Σ_j 1/(i + j + 1) = y: all coefficients 1; condition about 1e16, out of reach of plain doubles
        let n = 12;
        let element = |i: usize, j: usize| Double::from_f64(1.0) / Double::from_f64((i + j + 1) as f64);
        let columns: Vec<Vec<Double>> = (0..n).map(|j| (0..n).map(|i| element(i, j)).collect()).collect();
        let y: Vec<Double> = (0..n).map(|i| (0..n).fold(zero(), |s, j| s + element(i, j))).collect();
        // the last columns are refused as nothing that doubles could tell apart; nine of them are not
        assert!(least_squares(&columns, &y).is_err());
        let columns: Vec<Vec<Double>> = columns.into_iter().take(9).collect();
        let y: Vec<Double> = (0..n).map(|i| (0..9).fold(zero(), |s, j| s + element(i, j))).collect();
        let solved = least_squares(&columns, &y).unwrap();
        assert!(solved.condition > 1e10);
        assert!(solved.coefficients.iter().all(|c| (c.value() - 1.0).abs() < 1e-15));
    }

    #[test]
    fn what_depends_is_named() {
        let columns = [d(&[1.0; 3]), d(&[0.0, 1.0, 2.0]), d(&[5.0, 6.0, 7.0])];
        assert_eq!(least_squares(&columns, &d(&[0.0; 3])).unwrap_err(), Dependent(2));
        assert_eq!(least_squares(&[vec![zero(); 3]], &d(&[1.0; 3])).unwrap_err(), Dependent(0));
        assert_eq!(least_squares(&[d(&[f64::NAN; 3])], &d(&[1.0; 3])).unwrap_err(), Dependent(0));
    }
}

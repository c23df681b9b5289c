//! Determinant of four equations, without branches or pivots.

use crate::math::Real;

/// Determinant of a 4 × 4 matrix by complementary 2 × 2 minors (Laplace).
pub(super) fn determinant<R: Real>(m: &[[R; 4]; 4]) -> R {
    let [a, b, c, d] = m;
    let upper = |i: usize, j: usize| minor(a, b, i, j);
    let lower = |i: usize, j: usize| minor(c, d, i, j);
    upper(0, 1) * lower(2, 3) - upper(0, 2) * lower(1, 3) + upper(0, 3) * lower(1, 2) + upper(1, 2) * lower(0, 3)
        - upper(1, 3) * lower(0, 2)
        + upper(2, 3) * lower(0, 1)
}

fn minor<R: Real>(p: &[R; 4], q: &[R; 4], i: usize, j: usize) -> R {
    let at = |row: &[R; 4], k: usize| match k {
        0 => row[0],
        1 => row[1],
        2 => row[2],
        _ => row[3],
    };
    at(p, i) * at(q, j) - at(p, j) * at(q, i)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn hand_worked_determinants() {
        // triangular: product of the diagonal; one row exchange turns the sign
        let t = [[2.0, 5.0, -1.0, 3.0], [0.0, 3.0, 7.0, 1.0], [0.0, 0.0, 5.0, 4.0], [0.0, 0.0, 0.0, 7.0]];
        assert_eq!(determinant(&t), 210.0);
        let [a, b, c, d] = t;
        assert_eq!(determinant(&[b, a, c, d]), -210.0);
        assert_eq!(determinant(&[a, c, b, d]), -210.0);
        assert_eq!(determinant(&[d, b, c, a]), -210.0);
        // a Vandermonde determinant of 1, 2, 3, 4 is (2−1)(3−1)(4−1)(3−2)(4−2)(4−3) = 12
        let v = [[1.0, 1.0, 1.0, 1.0], [1.0, 2.0, 4.0, 8.0], [1.0, 3.0, 9.0, 27.0], [1.0, 4.0, 16.0, 64.0]];
        assert_eq!(determinant(&v), 12.0);
    }
}

//! What the bend of a model adds to its first-order uncertainty.

use crate::Error;
use crate::math::sqrt;

/// Variances of the two orders.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Order {
    /// First-order variance, Σ (c_i u_i)².
    pub first: f64,
    /// What the terms of next higher order add to it; it can be below 0.
    pub second: f64,
}

impl Order {
    /// Returns the standard uncertainty with both orders.
    #[must_use]
    pub fn standard(&self) -> f64 {
        sqrt((self.first + self.second).max(0.0))
    }

    /// Returns how far the second order moves the standard uncertainty, as a share of the first-order one.
    #[must_use]
    pub fn share(&self) -> f64 {
        if self.first > 0.0 { self.standard() / sqrt(self.first) - 1.0 } else { 0.0 }
    }
}

/// Returns the first-order variance and the terms of next higher order, for independent inputs of symmetric, near normal
/// distributions.
///
/// `Σ_i Σ_j [½ (∂²f/∂x_i∂x_j)² + ∂f/∂x_i ∂³f/∂x_i∂x_j²] u²(x_i) u²(x_j)`: the derivatives of the gradient by central
/// differences over half a standard uncertainty, so that each costs two gradients.
///
/// - `gradient(j, by, out)`: writes the gradient with respect to the standardised inputs x_i/u(x_i), at the estimates except
///   that input `j` is moved by `by` standard uncertainties.
/// - `scratch`: three slices, as long as there are inputs.
///
/// # Errors
/// What `gradient` returns; `Error::LengthMismatch` for slices of different lengths.
/// # Source
/// JCGM 100:2008, note to 5.1.2.
pub fn second_order(
    mut gradient: impl FnMut(usize, f64, &mut [f64]) -> Result<(), Error>,
    scratch: [&mut [f64]; 3],
) -> Result<Order, Error> {
    const STEP: f64 = 0.5;
    let [here, up, down] = scratch;
    let expected = here.len();
    for got in [up.len(), down.len()] {
        if got != expected {
            return Err(Error::LengthMismatch { what: "a scratch slice", expected, got });
        }
    }
    gradient(0, 0.0, here)?;
    let first = here.iter().map(|g| g * g).sum();
    let mut second = 0.0;
    for j in 0..expected {
        gradient(j, STEP, up)?;
        gradient(j, -STEP, down)?;
        for ((g, a), b) in here.iter().zip(&*up).zip(&*down) {
            let bend = (a - b) / (2.0 * STEP);
            let third = (a + b - 2.0 * g) / (STEP * STEP);
            second += 0.5 * bend * bend + g * third;
        }
    }
    Ok(Order { first, second })
}

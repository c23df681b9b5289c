//! A chain without a sheet: what its inputs contribute.

use super::{Combined, Contribution, Shape, Uncertainty, combine};
use crate::Error;
use crate::chain::{Chain, Derivative, Inputs};

/// Most inputs of a chain that can have an uncertainty at a time.
pub const MOST_INPUTS: usize = 64;

/// Returns the combined standard uncertainty of a result, every input independent of the others.
///
/// - `quantity`: the result, in the unit of the chain's output.
/// - `inputs`: supply and temperatures where the chain uses them; the reading does not count.
/// - `stated`: the uncertainty of each input, in the unit of its derivative; `None` for one that is exactly known.
///
/// # Errors
/// As [`Chain::derivatives`]; `Error::OutOfRange` for more than [`MOST_INPUTS`] uncertain inputs.
/// # Source
/// JCGM 100:2008 (10) and (G.2b), with exact derivatives.
/// # Example
/// ```
/// use ohmwright::chain::{Chain, Derivative, Element, Inputs, Network, Parameter};
/// use ohmwright::platinum::IEC_60751;
/// use ohmwright::uncertainty::{Coverage, Uncertainty, of_chain};
///
/// // a Pt100 read in ohms to ±0.02 Ω, R₀ known to ±0.06 Ω (IEC 60751, class A at 0 °C: 0.15 °C)
/// let chain = Chain::new(Network::Resistance { leads: None }, Element::Platinum(IEC_60751));
/// let u = of_chain(&chain, 0.0, &Inputs::default(), |which| match which {
///     Derivative::Reading => Some(Uncertainty::Rectangular { half_width: 0.02 }),
///     Derivative::Parameter(Parameter::R0) => Some(Uncertainty::Rectangular { half_width: 0.06 }),
///     _ => None,
/// })?;
/// // by hand: dR/dt = 0.39083 Ω/K at 0 °C, √(0.02² + 0.06²)/√3/0.39083
/// assert!((u.standard - 0.09343).abs() < 5e-6);
/// assert!(u.expanded(Coverage::Probability(0.95))?.expanded < 0.19);
/// # Ok::<(), ohmwright::Error>(())
/// ```
pub fn of_chain(
    chain: &Chain,
    quantity: f64,
    inputs: &Inputs,
    mut stated: impl FnMut(Derivative) -> Option<Uncertainty>,
) -> Result<Combined, Error> {
    let nothing = Contribution {
        sensitivity: 0.0,
        standard: 0.0,
        degrees_of_freedom: f64::INFINITY,
        shape: Shape::Normal,
        cause: 0,
        pool: 0,
    };
    let mut parts = [nothing; MOST_INPUTS];
    let mut names = [None; MOST_INPUTS];
    let mut count = 0;
    chain.derivatives(quantity, inputs, |which, sensitivity| {
        let Some(uncertainty) = stated(which) else { return };
        // a parameter that stands in several places is one cause
        let cause = names.iter().take(count).position(|n| *n == Some(which)).unwrap_or(count);
        if let (Some(part), Some(name)) = (parts.get_mut(count), names.get_mut(count)) {
            *part = Contribution {
                sensitivity,
                standard: uncertainty.standard(),
                degrees_of_freedom: uncertainty.degrees_of_freedom(),
                shape: uncertainty.shape(),
                cause: cause as u32,
                pool: 0,
            };
            *name = Some(which);
        }
        count += 1;
    })?;
    match parts.get(..count) {
        Some(parts) => Ok(combine(parts)),
        None => Err(Error::OutOfRange {
            what: "number of uncertain inputs",
            value: count as f64,
            min: 0.0,
            max: MOST_INPUTS as f64,
            unit: "",
        }),
    }
}

//! Fits: calibration points to coefficients, with their covariance and with the uncertainty of what the curve gives.
//!
//! Every curve that is linear in its coefficients is solved by Householder reflections over columns of equal length, in twice
//! the working precision ([`Curve`]); [`nonlinear`] does the rest. Coverage factors are those of Student's t.
//!
//! ```
//! use ohmwright::fit::{Coverage, Points, transducer};
//!
//! // an invented cell: outputs in mV/V of loads in kN
//! let loads = [0.0, 10.0, 20.0, 30.0, 40.0, 50.0];
//! let outputs = [0.0001, 0.4003, 0.7999, 1.2004, 1.5999, 2.0002];
//! let fit = transducer(&Points::new(&loads, &outputs), 1, false)?;
//! let reading = fit.curve.inverse(1.0, &Coverage::default())?;
//! assert!(reading.handbook[0] < 25.0 && 25.0 < reading.handbook[1]);
//! // a reading beyond the points is refused, not extrapolated
//! assert!(fit.curve.inverse(2.5, &Coverage::default()).is_err());
//! # Ok::<(), Box<dyn std::error::Error>>(())
//! ```

mod basis;
mod curve;
mod error;
mod its90;
mod nonlinear;
mod platinum;
mod points;
mod polynomial;
mod solve;
mod thermistor;

pub use curve::{Coefficient, Coverage, Curve, Inverse, Residual, Statistics};
pub use error::{Cell, FitError};
pub use its90::{Its90Fit, Subrange, its90};
pub use nonlinear::{NonlinearFit, VogelFit, nonlinear, vogel};
pub use platinum::{Fourth, PlatinumFit, platinum};
pub use points::{Points, Uncertainty};
pub use polynomial::{Polynomial, ThermalOutputFit, TransducerFit, polynomial, thermal_output, transducer};
pub use thermistor::{FittedTemperature, ThermistorFit, ThermistorForm, thermistor};

//! Transducers: a strain-gauge bridge whose maker or certificate says which load gives which output.

use crate::Error;
use crate::math::{Real, horner};
use crate::parameter::Parameter;
use crate::range::Range;
use crate::signal::{finite, positive};

/// What turns output over supply into load.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
#[non_exhaustive]
pub enum Transducer<R = f64> {
    /// Rated output at capacity: load = output/rated · capacity.
    Rated {
        /// Rated output, V/V.
        output: R,
        /// Load at rated output, in the unit of the result.
        capacity: R,
    },
    /// The polynomial of a certificate.
    Certificate(Certificate<R>),
}

/// A certificate's polynomial, up to the sixth power, and the loads that it holds for.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct Certificate<R = f64> {
    /// Coefficients, lowest power first. A constant beside a zero reading is what the certificate leaves after tare; where it
    /// is the cell's output without load, a zero reading would take it off twice.
    pub coefficients: [R; 7],
    /// Whether the polynomial gives the output of a load; otherwise it gives the load of an output.
    pub gives_output: bool,
    /// Power of ten of the unit of the output in it: −3 for mV/V.
    pub output_exponent: i8,
    /// What a load of it is multiplied by to be in the unit of the result.
    pub load_scale: f64,
    /// Lowest and highest load of the certificate, in its own unit; [`believed`](Self::believed) says how far beyond them it
    /// is read.
    pub range: [f64; 2],
}

/// How far beyond either end of its range a certificate is read, as a share of the range: the noise of an unloaded cell, and of
/// one at full scale, stays a reading. Common practice, no source.
const MARGIN: f64 = 0.01;

/// The same where the polynomial turns back within that margin. A load is known to 1e-12 of itself or 5e-16 V/V; at an output of
/// 1 mV/V over the range that is 1e-12 of it, so that a reading at the end is inside with all its rounding.
const ROUNDING: f64 = 1e-9;

impl<R: Real> Certificate<R> {
    /// Output of a load in the certificate's units; `load` is a number of the certificate, and so is the output.
    pub(crate) fn output(&self, load: R) -> R {
        if self.gives_output {
            return horner(load, &self.coefficients);
        }
        // the load is a polynomial of the output: its root, and one step in the caller's number type
        let plain = self.stated();
        let root = plain.inverse(load.value());
        let fixed = R::from_f64(root);
        fixed - (horner(fixed, &self.coefficients) - load) / R::from_f64(slope(&plain.p, root))
    }

    /// Returns the lowest and highest load that is believed, in the certificate's own unit.
    ///
    /// The range of the certificate and 1 % of it beyond either end, by the same polynomial; where that would turn back there,
    /// no more than rounding.
    #[must_use]
    pub fn believed(&self) -> [f64; 2] {
        self.plain().range
    }

    /// The certificate in plain numbers, ready to be run both ways as far as it is believed.
    pub(crate) fn plain(&self) -> PlainCertificate {
        let plain = self.stated();
        let [low, high] = self.range;
        // the widest margin over which the curve runs on
        let wider = |end: f64, outward: f64| {
            let margins = [MARGIN, ROUNDING].into_iter().map(|share| end + share * outward);
            margins.into_iter().find(|far| plain.one_to_one([end, *far]).is_ok()).unwrap_or(end)
        };
        PlainCertificate { range: [wider(low, low - high), wider(high, high - low)], ..plain }
    }

    /// The certificate in plain numbers within its own range.
    fn stated(&self) -> PlainCertificate {
        let p = self.coefficients.map(Real::value);
        // the line from which the inverse starts: through the ends where they are known, else the straight part
        let [from, to] = if self.gives_output { self.range } else { [0.0, 0.0] };
        let secant = (horner(to, &p) - horner(from, &p)) / (to - from);
        let rise = if self.gives_output { secant } else { p[1] };
        let start = [from - horner(from, &p) / rise, 1.0 / rise];
        PlainCertificate { p, gives_output: self.gives_output, range: self.range, start }
    }

    pub(crate) fn map<S: Real>(&self, f: &mut impl FnMut(Parameter, R) -> S) -> Certificate<S> {
        let mut n = 0;
        Certificate {
            coefficients: self.coefficients.map(|c| {
                n += 1;
                f(Parameter::TransducerCoefficient(n - 1), c)
            }),
            gives_output: self.gives_output,
            output_exponent: self.output_exponent,
            load_scale: self.load_scale,
            range: self.range,
        }
    }

    fn check(&self) -> Result<(), Error> {
        for c in self.coefficients {
            finite("coefficient of the transducer", c)?;
        }
        let [low, high] = self.range;
        Range::new("lowest load of the transducer", "", f64::MIN, f64::MAX).check(low)?;
        finite("highest load of the transducer", high)?;
        if low >= high {
            return Err(Error::Unfit { what: "the loads of a transducer's range must run from low to high" });
        }
        if !(self.load_scale.is_finite() && self.load_scale != 0.0) {
            return Err(Error::NotFinite { what: "scale of the transducer's load" });
        }
        self.stated().one_to_one(self.range)
    }
}

/// Derivative of a polynomial.
#[inline(always)]
fn slope(p: &[f64; 7], x: f64) -> f64 {
    let [_, a, b, c, d, e, f] = *p;
    horner(x, &[a, 2.0 * b, 3.0 * c, 4.0 * d, 5.0 * e, 6.0 * f])
}

/// A certificate in plain numbers.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) struct PlainCertificate {
    p: [f64; 7],
    pub(crate) gives_output: bool,
    /// Lowest and highest load: as stated, or as believed.
    pub(crate) range: [f64; 2],
    /// Where Newton's method starts: x = start₀ + start₁ y.
    start: [f64; 2],
}

impl PlainCertificate {
    /// p(x).
    #[inline(always)]
    pub(crate) fn polynomial(&self, x: f64) -> f64 {
        horner(x, &self.p)
    }

    /// The x with p(x) = y: Newton's method from the line, in a fixed number of steps; NaN where it does not arrive.
    #[inline(always)]
    pub(crate) fn inverse(&self, y: f64) -> f64 {
        let p = &self.p;
        let x = self.start[0] + self.start[1] * y;
        // written out, since a loop within the loop over readings would keep it from going several at a time
        let newton = |x: f64| x - (horner(x, p) - y) / slope(p, x);
        let x = newton(newton(newton(newton(newton(newton(x))))));
        let last = newton(x);
        let (moved, small) = (last - x, 1e-9 * last);
        if moved * moved <= small * small + f64::MIN_POSITIVE { last } else { f64::NAN }
    }

    /// Checks that between these loads there is one output for each, or there is no inverse.
    fn one_to_one(&self, loads: [f64; 2]) -> Result<(), Error> {
        let ends = |loads: [f64; 2]| if self.gives_output { loads } else { loads.map(|q| self.inverse(q)) };
        let ([from, to], [low, high]) = (ends(loads), ends(self.range));
        let home = slope(&self.p, from);
        let places = || (0..=256).map(|step| from + (to - from) * f64::from(step) / 256.0);
        let turns = |here: f64| !here.is_finite() || here == 0.0 || (here < 0.0) != (home < 0.0);
        if places().any(|at| turns(slope(&self.p, at))) {
            return Err(Error::Unfit { what: "the polynomial of the transducer turns back within its range" });
        }
        for at in places() {
            let back = self.inverse(self.polynomial(at)) - at;
            if back.is_nan() || back.abs() > 1e-9 * (high - low).abs() {
                return Err(Error::Unfit { what: "the polynomial of the transducer is too bent to be inverted" });
            }
        }
        Ok(())
    }

    /// Outputs that belong to the ends of the range, in the certificate's unit.
    pub(crate) fn outputs(&self) -> [f64; 2] {
        self.range.map(|q| if self.gives_output { self.polynomial(q) } else { self.inverse(q) })
    }
}

impl<R: Real> Transducer<R> {
    pub(crate) fn check(&self) -> Result<(), Error> {
        match self {
            Self::Rated { output, capacity } => {
                finite("rated output of the transducer", *output)?;
                if output.value() == 0.0 {
                    return Err(Error::Unfit { what: "a rated output of 0 sees no load" });
                }
                positive("capacity of the transducer", "", *capacity)
            }
            Self::Certificate(certificate) => certificate.check(),
        }
    }

    pub(crate) fn map<S: Real>(&self, f: &mut impl FnMut(Parameter, R) -> S) -> Transducer<S> {
        match self {
            Self::Rated { output, capacity } => Transducer::Rated {
                output: f(Parameter::RatedOutput, *output),
                capacity: f(Parameter::Capacity, *capacity),
            },
            Self::Certificate(certificate) => Transducer::Certificate(certificate.map(f)),
        }
    }
}

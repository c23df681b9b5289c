//! Amplifiers: an ideal gain block, or one operational amplifier with four resistors that loads the bridge.

use super::{finite, positive};
use crate::Error;
use crate::math::Real;
use crate::parameter::Parameter;

/// Where the resistors of a difference amplifier return to, and what its output is measured against.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
#[non_exhaustive]
pub enum Reference {
    /// The negative supply terminal.
    #[default]
    Negative,
    /// The centre of the supply.
    Centre,
}

/// One operational amplifier as a difference amplifier.
///
/// The bridge node between arms 1 and 2 drives the non-inverting side, the node between 3 and 4 the inverting side.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct Difference<R = f64> {
    /// Input resistors, Ω: inverting side first.
    pub input: [R; 2],
    /// Inverting side: the feedback resistor; non-inverting side: the resistor to the reference, Ω.
    pub feedback: [R; 2],
    /// Open-loop gain; `None` = ideal.
    pub open_loop_gain: Option<R>,
    /// Where the resistors return to.
    pub reference: Reference,
}

/// What stands between the network and the converter.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
#[non_exhaustive]
pub enum Amplifier<R = f64> {
    /// Nothing.
    None,
    /// out = gain · in + offset, with no load on the bridge (state the load as input resistance).
    Gain {
        /// Gain, V/V.
        gain: R,
        /// Offset referred to the output, V.
        offset: R,
    },
    /// A difference amplifier that loads the bridge and passes common mode.
    Difference {
        /// The circuit.
        circuit: Difference<R>,
        /// Offset referred to the output, V.
        offset: R,
    },
}

/// What hangs on the two output nodes of a bridge, in volts against the reference: currents drawn and output formed.
pub(crate) struct Load<R> {
    /// Currents drawn from (a, b) per volt at (a, b), S.
    pub(crate) admittance: [[R; 2]; 2],
    /// Currents that flow in at (a, b) when both stand at the negative supply, per volt of supply: drawn = Y v − J.
    pub(crate) source: [R; 2],
    /// Output per volt at (a, b).
    pub(crate) output: [R; 2],
    /// Output when both stand at the negative supply, per volt of supply.
    pub(crate) output_offset: R,
    /// What all of these are divided by: with it the network is a polynomial in every resistance.
    pub(crate) divisor: R,
}

/// Conductances from the far ends of the signal leads (a, b) to the negative and to the positive supply terminal, S.
pub(crate) type Terminals<R> = [[R; 2]; 2];

impl<R: Real> Difference<R> {
    fn check(&self) -> Result<(), Error> {
        for r in self.input.iter().chain(&self.feedback) {
            positive("difference amplifier resistor", "ohm", *r)?;
        }
        self.open_loop_gain.map_or(Ok(()), |gain| positive("open-loop gain", "", gain))
    }
}

impl<R: Real> Amplifier<R> {
    /// Output-referred offset, V.
    pub(crate) fn offset(&self) -> R {
        match *self {
            Self::None => R::from_f64(0.0),
            Self::Gain { offset, .. } | Self::Difference { offset, .. } => offset,
        }
    }

    /// Gain of the block alone; a difference amplifier belongs to the network and counts as 1 here.
    pub(crate) fn block_gain(&self) -> R {
        match *self {
            Self::Gain { gain, .. } => gain,
            Self::None | Self::Difference { .. } => R::from_f64(1.0),
        }
    }

    /// Returns the load of this amplifier, of an input resistance, of resistors to the supply terminals and of series
    /// signal leads on the bridge.
    pub(crate) fn load(
        &self,
        input_resistance: Option<R>,
        signal_leads: [R; 2],
        terminals: Option<&Terminals<R>>,
    ) -> Load<R> {
        let (zero, one) = (R::from_f64(0.0), R::from_f64(1.0));
        // currents at the far ends of the signal leads: i′ = Y′ v′
        let g = input_resistance.map_or(zero, |r| one / r);
        let (mut y, mut h) = ([[g, -g], [-g, g]], [one, -one]);
        let mut reference = zero;
        if let Self::Difference { circuit, .. } = self {
            let [rb, ra] = circuit.input;
            let [fb, fa] = circuit.feedback;
            let slack = circuit.open_loop_gain.map_or(zero, |a0| one / a0);
            if circuit.reference == Reference::Centre {
                reference = R::from_f64(0.5);
            }
            // v_q = v_a R_fa / (R_a + R_fa);   v_m = μ_b v_b + μ_q v_q with 1/A₀ = ε:
            // μ_b = ε R_fb / D,  μ_q = R_b / D,  D = ε (R_fb + R_b) + R_b
            let share = fa / (ra + fa);
            let d = slack * (fb + rb) + rb;
            let mu_b = slack * fb / d;
            let mu_a = rb / d * share;
            y = [[g + one / (ra + fa), -g], [-g - mu_a / rb, g + (one - mu_b) / rb]];
            // out = v_m + (v_m − v_b) R_fb / R_b
            let k = fb / rb;
            h = [mu_a * (one + k), mu_b * (one + k) - k];
        }
        // i′ = Y′ (v′ − c) for the amplifier, with its reference c
        let mut j = [reference * (y[0][0] + y[0][1]), reference * (y[1][0] + y[1][1])];
        let [[a_low, a_high], [b_low, b_high]] = terminals.copied().unwrap_or([[zero; 2]; 2]);
        y[0][0] = y[0][0] + a_low + a_high;
        y[1][1] = y[1][1] + b_low + b_high;
        j = [j[0] + a_high, j[1] + b_high];
        // v′ = v − R_s i  ⇒  (1 + Y′ R_s) i = Y′ v − J′
        let [sa, sb] = signal_leads;
        let m = [[one + y[0][0] * sa, y[0][1] * sb], [y[1][0] * sa, one + y[1][1] * sb]];
        let det = m[0][0] * m[1][1] - m[0][1] * m[1][0];
        let solve = |p: R, q: R| [(m[1][1] * p - m[0][1] * q) / det, (m[0][0] * q - m[1][0] * p) / det];
        let [aa, ba] = solve(y[0][0], y[1][0]);
        let [ab, bb] = solve(y[0][1], y[1][1]);
        let [ja, jb] = solve(j[0], j[1]);
        // out = H′ (v′ − c)
        Load {
            admittance: [[aa, ab], [ba, bb]],
            source: [ja, jb],
            output: [h[0] * (one - sa * aa) - h[1] * sb * ba, h[1] * (one - sb * bb) - h[0] * sa * ab],
            output_offset: h[0] * sa * ja + h[1] * sb * jb - reference * (h[0] + h[1]),
            divisor: det,
        }
    }

    pub(crate) fn check(&self) -> Result<(), Error> {
        finite("amplifier offset", self.offset())?;
        match self {
            Self::None => Ok(()),
            Self::Gain { gain, .. } => {
                finite("amplifier gain", *gain)?;
                if gain.value() == 0.0 {
                    Err(Error::Unfit { what: "an amplifier gain of 0 passes nothing" })
                } else {
                    Ok(())
                }
            }
            Self::Difference { circuit, .. } => circuit.check(),
        }
    }

    pub(crate) fn map<S: Real>(&self, f: &mut impl FnMut(Parameter, R) -> S) -> Amplifier<S> {
        match *self {
            Self::None => Amplifier::None,
            Self::Gain { gain, offset } => {
                Amplifier::Gain { gain: f(Parameter::Gain, gain), offset: f(Parameter::Offset, offset) }
            }
            Self::Difference { circuit, offset } => Amplifier::Difference {
                circuit: Difference {
                    input: [
                        f(Parameter::AmplifierInput(1), circuit.input[0]),
                        f(Parameter::AmplifierInput(2), circuit.input[1]),
                    ],
                    feedback: [
                        f(Parameter::AmplifierFeedback(1), circuit.feedback[0]),
                        f(Parameter::AmplifierFeedback(2), circuit.feedback[1]),
                    ],
                    open_loop_gain: circuit.open_loop_gain.map(|a0| f(Parameter::OpenLoopGain, a0)),
                    reference: circuit.reference,
                },
                offset: f(Parameter::Offset, offset),
            },
        }
    }
}

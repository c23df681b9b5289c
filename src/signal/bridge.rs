//! The general bridge: four arms of any resistance, their leads, the supply's leads and the load, as one stage.
//!
//! Arms 1-4 in ring order; 1 and 4 join at the negative supply, 2 and 3 at the positive. The output is taken from the
//! node between 1 and 2 (a) against the node between 3 and 4 (b), so unloaded
//! output/supply = R₁/(R₁+R₂) − R₄/(R₃+R₄), and tension in arm 1 or 3 reads positive.

use super::amplifier::{Amplifier, Load, Terminals};
use super::determinant::determinant;
use super::{Leads, Pair, Wires, finite, positive};
use crate::Error;
use crate::math::Real;
use crate::parameter::Parameter;

/// Which strain an active arm sees.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
#[non_exhaustive]
pub enum Driven {
    /// A multiple of the wanted strain.
    Along,
    /// A multiple of Poisson's ratio times the wanted strain.
    Across,
}

/// What one arm is.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
#[non_exhaustive]
pub enum Arm<R = f64> {
    /// A gauge that sees `factor` times the wanted strain, or that times Poisson's ratio; it feels temperature.
    Active {
        /// Signed multiple: 1 in the wanted direction.
        factor: R,
        /// Which strain.
        driven: Driven,
    },
    /// A gauge that feels temperature but no strain.
    Dummy,
    /// A fixed resistor.
    Fixed,
}

/// Where a shunt resistor is connected.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
#[non_exhaustive]
pub enum Place {
    /// Across the arm's own resistance, inside its leads.
    Gauge,
    /// At the instrument: across a fixed resistor itself; for a gauge arm, from the far end of its signal wire to the
    /// supply terminal, outside all leads.
    Instrument,
}

/// A resistor across one arm, as in a shunt calibration.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct Shunt<R = f64> {
    /// The arm, 1..=4.
    pub arm: u8,
    /// Its resistance, Ω.
    pub ohms: R,
    /// Where it is connected.
    pub place: Place,
}

/// A bridge as it was wired.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct Bridge<R = f64> {
    /// Resistances of the four arms at zero strain, leads left out, Ω.
    pub resistances: [R; 4],
    /// What each arm is.
    pub arms: [Arm<R>; 4],
    /// Poisson's ratio for arms that are driven across.
    pub poisson: R,
    /// Leads of the gauge arms; `None` = negligible.
    pub leads: Option<Leads<R>>,
    /// Whether arm 2 was made up with the leads in place: R₂ grows by the leads of a two-wire gauge.
    pub balanced: bool,
    /// Supply leads, Ω: positive, negative.
    pub supply_leads: Pair<R>,
    /// Signal leads, Ω: of the node between arms 1 and 2, of the node between 3 and 4.
    pub signal_leads: Pair<R>,
    /// Whether the supply is measured at the bridge, behind its leads.
    pub sensed: bool,
    /// Resistance between the far ends of the signal leads, Ω; `None` = no load.
    pub input_resistance: Option<R>,
    /// A shunt across one arm; `None` = none.
    pub shunt: Option<Shunt<R>>,
}

/// Output and supply as numerator and denominator at one state of the arms.
pub(crate) struct Transfer<R> {
    pub(crate) numerator: R,
    pub(crate) denominator: R,
}

/// Output/supply as two multilinear forms of the four relative changes δ: Σ n_S Πδ / Σ d_S Πδ, S a set of arms as bits.
pub(crate) struct Expansion<R> {
    pub(crate) numerator: [R; 16],
    pub(crate) denominator: [R; 16],
}

/// Places of the network that leads are in: arms 1 and 2, both signal leads, both supply leads.
pub(crate) const MOST_LEADS: usize = 6;

/// One Kirchhoff equation over (v_a, v_b, i₂, i₃) and its right-hand side.
#[derive(Clone, Copy)]
struct Row<R> {
    left: [R; 4],
    right: R,
}

impl<R: Real> Row<R> {
    fn plus(self, factor: R, o: &Self) -> Self {
        let [a, b, c, d] = self.left;
        let [p, q, r, s] = o.left;
        Self {
            left: [a + factor * p, b + factor * q, c + factor * r, d + factor * s],
            right: self.right + factor * o.right,
        }
    }

    fn times(self, factor: R) -> Self {
        let [a, b, c, d] = self.left;
        Self { left: [a * factor, b * factor, c * factor, d * factor], right: self.right * factor }
    }
}

/// The network's equations: row k is `still[k] + R_k slope[k]`, arm k = 1..4; every arm stands in one row only, so
/// that all determinants are linear in each arm.
struct Equations<R> {
    /// For arm k: what its equation is without it, and what one ohm of it adds.
    rows: [(Row<R>, Row<R>); 4],
    load: Load<R>,
    gauge_ohms: [R; 4],
    supply_leads: [R; 2],
    sensed: bool,
}

impl<R: Real> Equations<R> {
    /// Takes a bridge whose balance is settled.
    fn new(bridge: &Bridge<R>, amplifier: &Amplifier<R>) -> Self {
        let (zero, one) = (R::from_f64(0.0), R::from_f64(1.0));
        let [mut l1, mut l2, mut third] = [zero; 3];
        let [r1, r2, r3, r4] = bridge.resistances;
        if let Some(leads) = &bridge.leads {
            let [a, b, c] = leads.ohms();
            match leads.wires {
                Wires::Two => {
                    // what balancing did to arm 2 has been written into it
                    l1 = a + b;
                }
                Wires::Three => [l1, l2, third] = [a, b, c],
                Wires::Four => {}
            }
        }
        let outside = bridge.shunt.as_ref().and_then(|s| bridge.terminals(s));
        let load = {
            let [a, b] = bridge.signal_leads.ohms();
            amplifier.load(bridge.input_resistance, [a + third, b], outside.as_ref())
        };
        let [[aa, ab], [ba, bb]] = load.admittance;
        let [p, r] = bridge.supply_leads.ohms();
        // currents of the load: i_a = Y_aa v_a + Y_ab v_b − J_a, likewise i_b
        let [ja, jb] = load.source;
        let (sum_a, sum_b, sum_j) = (aa + ba, ab + bb, ja + jb);

        // v_n = r (i₂ + i₃ − i_a − i_b) behind the negative supply lead
        let negative = Row { left: [r * sum_a, r * sum_b, -r, -r], right: r * sum_j };
        let with =
            |va: R, vb: R| Row { left: [negative.left[0] + va, negative.left[1] + vb, -r, -r], right: negative.right };
        let still = [
            // arm 1:  v_a = v_n + R₁ (i₂ − i_a)
            with(one, zero),
            // arm 2:  v_a = 1 − p (i₂ + i₃) − R₂ i₂ behind the positive supply lead
            Row { left: [one, zero, p, p], right: one },
            // arm 3:  v_b = 1 − p (i₂ + i₃) − R₃ i₃
            Row { left: [zero, one, p, p], right: one },
            // arm 4:  v_b = v_n + R₄ (i₃ − i_b)
            with(zero, one),
        ];
        let slope = [
            Row { left: [aa, ab, -one, zero], right: ja },
            Row { left: [zero, zero, one, zero], right: zero },
            Row { left: [zero, zero, zero, one], right: zero },
            Row { left: [ba, bb, zero, -one], right: jb },
        ];
        // arm = lead + R ∥ R_c: multiplied by 1 + R/R_c the equation stays linear in R,
        // (A + l B) + R [B + (A + l B)/R_c]
        let leads = [l1, l2, zero, zero];
        let inside = bridge.shunt.as_ref().filter(|_| outside.is_none());
        let mut rows = [(still[0], slope[0]), (still[1], slope[1]), (still[2], slope[2]), (still[3], slope[3])];
        for (i, ((still, slope), lead)) in rows.iter_mut().zip(leads).enumerate() {
            *still = still.plus(lead, slope);
            if let Some(shunt) = inside.filter(|s| usize::from(s.arm) == i + 1) {
                *slope = slope.plus(one / shunt.ohms, still);
            }
        }
        Self { rows, load, gauge_ohms: [r1, r2, r3, r4], supply_leads: [p, r], sensed: bridge.sensed }
    }

    /// Row of one arm with the resistance that this relative change gives.
    fn at((still, slope): &(Row<R>, Row<R>), gauge: R, delta: R) -> Row<R> {
        still.plus(gauge * (R::from_f64(1.0) + delta), slope)
    }

    /// Numerator and denominator of output/supply for four rows, by Cramer's rule.
    fn solve(&self, rows: &[Row<R>; 4]) -> Transfer<R> {
        let left = rows.map(|r| r.left);
        let with = |column: usize| {
            let mut m = left;
            for (row, source) in m.iter_mut().zip(rows) {
                if let Some(cell) = row.get_mut(column) {
                    *cell = source.right;
                }
            }
            determinant(&m)
        };
        // det, of rows scaled or not, is the common denominator of all unknowns. A row that stands for the slope of
        // an arm has been put in the place of the arm's equation, which makes this a coefficient of the expansion.
        let det = determinant(&left);
        let (va, vb) = (with(0), with(1));
        let [ha, hb] = self.load.output;
        let numerator = ha * va + hb * vb + self.load.output_offset * det;
        if !self.sensed {
            return Transfer { numerator, denominator: det };
        }
        // v_p − v_n = 1 − (p + r)(i₂ + i₃) + r (i_a + i_b)
        let [[aa, ab], [ba, bb]] = self.load.admittance;
        let [p, r] = self.supply_leads;
        let [ja, jb] = self.load.source;
        let load = (aa + ba) * va + (ab + bb) * vb - (ja + jb) * det;
        let branches = with(2) + with(3);
        Transfer { numerator, denominator: det - (p + r) * branches + r * load }
    }
}

impl<R: Real> Bridge<R> {
    /// Returns a bridge of four equal resistances without leads or load, its arms as given.
    #[must_use]
    pub fn equal(ohms: R, arms: [Arm<R>; 4]) -> Self {
        let zero = R::from_f64(0.0);
        Self {
            resistances: [ohms; 4],
            arms,
            poisson: zero,
            leads: None,
            balanced: false,
            supply_leads: Pair::none(),
            signal_leads: Pair::none(),
            sensed: false,
            input_resistance: None,
            shunt: None,
        }
    }

    /// Returns a bridge with one gauge in arm 1 and three fixed resistors of the same resistance.
    #[must_use]
    pub fn one_gauge(ohms: R) -> Self {
        let active = Arm::Active { factor: R::from_f64(1.0), driven: Driven::Along };
        Self::equal(ohms, [active, Arm::Fixed, Arm::Fixed, Arm::Fixed])
    }

    /// Returns the same bridge with the resistances of all its leads multiplied, as warming does.
    pub(crate) fn with_leads_times(&self, factor: R) -> Self {
        Self {
            leads: self.leads.map(|l| l.times(factor)),
            supply_leads: self.supply_leads.times(factor),
            signal_leads: self.signal_leads.times(factor),
            ..*self
        }
    }

    /// Returns whether any lead has a resistance.
    pub(crate) fn has_leads(&self) -> bool {
        let pairs = [self.supply_leads.ohms(), self.signal_leads.ohms()];
        self.leads.is_some() || pairs.iter().flatten().any(|r| r.value() != 0.0)
    }

    /// Returns how many places of the network have leads in them: the degree in what multiplies them all.
    pub(crate) fn lead_places(&self) -> usize {
        let zero = R::from_f64(0.0);
        let [l1, l2, third] = match &self.leads {
            Some(leads) => {
                let [a, b, c] = leads.ohms();
                match leads.wires {
                    Wires::Two => [a + b, zero, zero],
                    Wires::Three => [a, b, c],
                    Wires::Four => [zero; 3],
                }
            }
            None => [zero; 3],
        };
        let ([a, b], [p, n]) = (self.signal_leads.ohms(), self.supply_leads.ohms());
        [l1, l2, a + third, b, p, n].iter().filter(|r| r.value() != 0.0).count()
    }

    /// Returns output/supply as multilinear forms of the relative changes of the arms, scaled so that each is a
    /// polynomial in every resistance of the network.
    pub(crate) fn expand_polynomial(&self, amplifier: &Amplifier<R>) -> Expansion<R> {
        let divisor = Equations::new(self, amplifier).load.divisor;
        let Expansion { numerator, denominator } = self.expand(amplifier);
        Expansion { numerator: numerator.map(|n| n * divisor), denominator: denominator.map(|d| d * divisor) }
    }

    /// Returns the same bridge with what balancing did written into arm 2.
    pub(crate) fn with_balance_settled(&self) -> Self {
        let mut settled = *self;
        if let Some(leads) = &self.leads
            && leads.wires == Wires::Two
            && self.balanced
        {
            // R₂ = gauge + leads, as they stood when the bridge was balanced
            settled.resistances[1] = settled.resistances[1] + leads.excess_ohms();
        }
        settled.balanced = false;
        settled
    }

    /// Returns how much each arm's δ grows per driven unit (c) and per unit of thermal output (t).
    pub(crate) fn drive(&self) -> ([R; 4], [f64; 4]) {
        let c = self.arms.map(|arm| match arm {
            Arm::Active { factor, driven: Driven::Along } => factor,
            Arm::Active { factor, driven: Driven::Across } => factor * self.poisson,
            Arm::Dummy | Arm::Fixed => R::from_f64(0.0),
        });
        let t = self.arms.map(|arm| if matches!(arm, Arm::Fixed) { 0.0 } else { 1.0 });
        (c, t)
    }

    /// Returns output/supply at these relative changes of the arms.
    pub(crate) fn transfer(&self, amplifier: &Amplifier<R>, delta: [R; 4]) -> Transfer<R> {
        let q = Equations::new(self, amplifier);
        let [r1, r2, r3, r4] = &q.rows;
        let [g1, g2, g3, g4] = q.gauge_ohms;
        let [d1, d2, d3, d4] = delta;
        q.solve(&[
            Equations::at(r1, g1, d1),
            Equations::at(r2, g2, d2),
            Equations::at(r3, g3, d3),
            Equations::at(r4, g4, d4),
        ])
    }

    /// Returns the current through one arm as a/(b + c R) amperes per volt of supply, R the resistance of its element.
    pub(crate) fn arm_current(&self, amplifier: &Amplifier<R>, index: usize) -> (R, [R; 2]) {
        let q = Equations::new(self, amplifier);
        let zero = R::from_f64(0.0);
        let at = |element: Option<R>| {
            let mut out = q.rows.map(|(still, _)| still);
            for (i, (slot, (row, ohms))) in out.iter_mut().zip(q.rows.iter().zip(q.gauge_ohms)).enumerate() {
                *slot = match element {
                    Some(r) if i == index => row.0.plus(r, &row.1),
                    // what one ohm adds stands in the place of the arm's equation
                    None if i == index => row.1,
                    _ => row.0.plus(ohms, &row.1),
                };
            }
            out
        };
        let still = at(Some(zero));
        let left = still.map(|r| r.left);
        let det = determinant(&left);
        // the slope of an arm's equation is its current: left · x − right
        let slope = q.rows.get(index).map_or(still[0], |(_, slope)| *slope);
        let mut current = -slope.right * det;
        for (column, weight) in slope.left.iter().enumerate() {
            let mut m = left;
            for (row, source) in m.iter_mut().zip(&still) {
                if let Some(cell) = row.get_mut(column) {
                    *cell = source.right;
                }
            }
            current = current + *weight * determinant(&m);
        }
        (current, [q.solve(&still).denominator, q.solve(&at(None)).denominator])
    }

    /// Returns output/supply as multilinear forms of the relative changes of the arms.
    pub(crate) fn expand(&self, amplifier: &Amplifier<R>) -> Expansion<R> {
        let q = Equations::new(self, amplifier);
        let zero = R::from_f64(0.0);
        let mut numerator = [zero; 16];
        let mut denominator = [zero; 16];
        let [r1, r2, r3, r4] = &q.rows;
        let [g1, g2, g3, g4] = q.gauge_ohms;
        // the constant part of a row, or what one unit of δ adds to it
        let pick = |set: bool, row: &(Row<R>, Row<R>), gauge: R| {
            if set { row.1.times(gauge) } else { Equations::at(row, gauge, zero) }
        };
        for (set, (n, d)) in numerator.iter_mut().zip(&mut denominator).enumerate() {
            let part = q.solve(&[
                pick(set & 1 != 0, r1, g1),
                pick(set & 2 != 0, r2, g2),
                pick(set & 4 != 0, r3, g3),
                pick(set & 8 != 0, r4, g4),
            ]);
            (*n, *d) = (part.numerator, part.denominator);
        }
        Expansion { numerator, denominator }
    }

    pub(crate) fn check(&self) -> Result<(), Error> {
        for r in self.resistances {
            positive("bridge resistance", "ohm", r)?;
        }
        for arm in &self.arms {
            if let Arm::Active { factor, .. } = arm {
                finite("strain factor of an arm", *factor)?;
            }
        }
        finite("Poisson's ratio", self.poisson)?;
        if let Some(leads) = &self.leads {
            leads.check()?;
            if leads.wires == Wires::Four {
                return Err(Error::Unfit { what: "the gauge arm of a bridge has two or three wires" });
            }
        }
        self.supply_leads.check("supply lead resistance")?;
        self.signal_leads.check("signal lead resistance")?;
        if let Some(shunt) = &self.shunt {
            crate::range::Range::new("arm of the shunt", "", 1.0, 4.0).check(f64::from(shunt.arm))?;
            positive("shunt resistance", "ohm", shunt.ohms)?;
        }
        self.input_resistance.map_or(Ok(()), |r| positive("input resistance", "ohm", r))
    }

    pub(crate) fn map<S: Real>(&self, f: &mut impl FnMut(Parameter, R) -> S) -> Bridge<S> {
        let [r1, r2, r3, r4] = self.resistances;
        let [a1, a2, a3, a4] = self.arms;
        let mut arm = |n, arm| match arm {
            Arm::Active { factor, driven } => Arm::Active { factor: f(Parameter::ArmFactor(n), factor), driven },
            Arm::Dummy => Arm::Dummy,
            Arm::Fixed => Arm::Fixed,
        };
        let arms = [arm(1, a1), arm(2, a2), arm(3, a3), arm(4, a4)];
        Bridge {
            resistances: [
                f(Parameter::ArmResistance(1), r1),
                f(Parameter::ArmResistance(2), r2),
                f(Parameter::ArmResistance(3), r3),
                f(Parameter::ArmResistance(4), r4),
            ],
            arms,
            poisson: f(Parameter::Poisson, self.poisson),
            leads: self.leads.map(|leads| leads.map(f)),
            balanced: self.balanced,
            supply_leads: self.supply_leads.map(Parameter::SupplyLeads, f),
            signal_leads: self.signal_leads.map(Parameter::SignalLeads, f),
            sensed: self.sensed,
            input_resistance: self.input_resistance.map(|r| f(Parameter::InputResistance, r)),
            shunt: self.shunt.map(|s| Shunt { arm: s.arm, ohms: f(Parameter::Shunt, s.ohms), place: s.place }),
        }
    }

    /// Conductances at the instrument's terminals that this shunt is, where it is connected there.
    fn terminals(&self, shunt: &Shunt<R>) -> Option<Terminals<R>> {
        let arm = self.arms.get(usize::from(shunt.arm).wrapping_sub(1))?;
        if shunt.place == Place::Gauge || matches!(arm, Arm::Fixed) {
            return None;
        }
        let (zero, g) = (R::from_f64(0.0), R::from_f64(1.0) / shunt.ohms);
        Some(match shunt.arm {
            1 => [[g, zero], [zero, zero]],
            2 => [[zero, g], [zero, zero]],
            3 => [[zero, zero], [zero, g]],
            _ => [[zero, zero], [g, zero]],
        })
    }
}

//! How a difference compares with uncertainties, and which reading would settle what cannot be told.

use std::format;
use std::string::String;
use std::vec::Vec;

use super::channel::{Channel, Counts, LEAST_STEPS};
use super::store::{Gathered, Store};
use super::verdict::rows_in_words;
use crate::chain::Inputs;
use crate::math::sqrt;
use crate::measurement::{Propagation, State};
use crate::uncertainty::Coverage;

/// Rows that uncertainties are computed at.
const WEIGHED: usize = 24;

impl Channel<'_> {
    /// Compares the difference with our uncertainty, and with theirs.
    pub(super) fn weigh(&mut self, store: &Store) {
        let mut positions: Vec<usize> = self.sample.thinned(WEIGHED).positions;
        let worst = self.plain.as_ref().map(|c| c.largest_row);
        positions.extend(worst.and_then(|row| store.row.iter().position(|r| *r == row)));
        let theirs = self.stated.and_then(|s| s.uncertainty).map(|u| 2.0 * u.standard());
        let (mut asked, mut answered, mut worst_weighed) = (0u64, 0u64, worst.is_none());
        let (mut least, mut weighed, mut share) = (f64::INFINITY, false, 0.0f64);
        let (mut error, mut unmoved) = (0.0f64, 0u64);
        for position in positions {
            let Some((own, delivered)) = self.pair(store, position) else { continue };
            let d = (delivered - own).abs();
            let expanded = self.expanded(store, position);
            asked += 1;
            unmoved += u64::from(expanded == Some(0.0));
            let expanded = expanded.filter(|u| *u > 0.0);
            if let Some(u) = expanded {
                answered += 1;
                worst_weighed |= store.row.get(position).copied() == worst;
                weighed = true;
                least = least.min(u);
                share = share.max(d / u);
            }
            if let Some(theirs) = theirs {
                // E_n = |d|/√(U₁² + U₂²)
                let u = expanded.unwrap_or(0.0);
                error = error.max(d / sqrt(u * u + theirs * theirs));
            }
        }
        // where the largest difference has no uncertainty beside it, nobody can call it small
        self.out.material = share > 1.0 || !weighed || !worst_weighed;
        self.out.weighed = [answered, asked];
        self.out.unmoved = unmoved;
        self.out.uncertainty = weighed.then_some(least);
        self.out.share_of_uncertainty = weighed.then_some(share);
        self.out.normalised_error = theirs.map(|_| error);
    }

    /// Our expanded uncertainty (k = 2) at a row, 0 where nothing that is stated moves the result; `None` where there is none.
    fn expanded(&self, store: &Store, position: usize) -> Option<f64> {
        let at = [Some(position)];
        let state = |channel: usize| -> Option<State> {
            let rows = Gathered::take(store, self.measurement, channel, &at, None);
            let first = |c: &Vec<f64>| c.first().copied().unwrap_or(0.0);
            let [celsius, lead, arms @ ..] = rows.celsius.each_ref().map(first);
            Some(State {
                value: *rows.own.first()?,
                inputs: Inputs {
                    reading: first(&rows.readings),
                    supply: first(&rows.supplies),
                    celsius,
                    lead_celsius: lead,
                    arm_celsius: arms,
                },
                segment: rows.segment.first().copied().unwrap_or(0),
            })
        };
        let states: Vec<Option<State>> = (0..self.measurement.channels.len()).map(state).collect();
        let propagation = Propagation::new(self.measurement, &states, self.target.channel).ok()?;
        let expanded = propagation.combined().ok()?.expanded(Coverage::Factor(2.0)).ok()?.expanded;
        (expanded >= 0.0).then_some(expanded)
    }

    /// The reading that would settle it.
    pub(super) fn settling(&self, store: &Store, counts: &Counts, step: f64) -> String {
        let why = if counts.rows < 3 {
            format!("{} with a number on both sides", rows_in_words(counts.rows))
        } else {
            format!(
                "{} that span {} {}",
                rows_in_words(counts.rows),
                super::words::figure(round_to(counts.high - counts.low, 3)),
                self.out.unit
            )
        };
        let middle = if counts.rows > 0 { 0.5 * (counts.low + counts.high) } else { 0.0 };
        let far = match self.out.unit.as_str() {
            _ if step > 0.0 && counts.rows > 0 => 50.0 * LEAST_STEPS * step,
            "microstrain" => 1000.0,
            "degC" | "K" | "degF" => 50.0,
            _ => 1.0,
        };
        // where an error of one part in a thousand would show, as far as the channel reaches
        let reading = [1.0, 0.3, 0.1, 0.03].into_iter().find_map(|share| {
            let wanted = round_to(middle + share * far, 2);
            let segments = self.measurement.channels.get(self.target.channel)?.segments()?;
            let chain = &segments.first().filter(|_| self.base.parts.len() == 1 && self.base.steps.is_empty())?.chain;
            let at = self.sample.positions.first().map(|p| [Some(*p)]);
            let rows = at
                .map(|at| Gathered::take(store, self.measurement, self.target.channel, &at, None))
                .unwrap_or_default();
            let first = |c: &Vec<f64>| c.first().copied().unwrap_or(20.0);
            let [celsius, lead, arms @ ..] = rows.celsius.each_ref().map(first);
            let supply = rows.supplies.first().copied().unwrap_or(1.0);
            let inputs = Inputs { reading: 0.0, supply, celsius, lead_celsius: lead, arm_celsius: arms };
            let plan = chain.plan().ok()?;
            let reading = plan.forward(wanted, inputs).ok()?;
            // a reading that is believed here
            if plan.one(Inputs { reading, ..inputs }).word != crate::chain::Word::Good {
                return None;
            }
            let unit = self.measurement.channels.get(self.target.channel)?.segments()?.first()?.reads.clone();
            Some(format!(
                "; what they make of a reading of {} {unit} would settle it: it should be {} {}",
                super::words::figure(round_to(reading, 6)),
                super::words::figure(wanted),
                self.out.unit
            ))
        });
        format!("{why}{}", reading.unwrap_or_else(|| "; readings over a wider span would settle it".into()))
    }
}

/// A number with so many significant digits.
fn round_to(value: f64, digits: usize) -> f64 {
    format!("{value:.*e}", digits - 1).parse().unwrap_or(value)
}

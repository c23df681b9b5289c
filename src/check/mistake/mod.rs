//! The mistakes that are tried: each a function from a channel as the sheet says it to one as somebody may have computed it.

mod catalogue;
mod series;
mod strain;
mod thermometer;

use std::boxed::Box;
use std::string::String;
use std::vec::Vec;

pub use catalogue::{MISTAKES, Mistake};

use super::model::{Before, Codes, Model, Step, carry_zero, output_line};
use super::sample::Sample;
use super::store::Store;
use crate::chain::{Chain, Element, Supply};
use crate::measurement::Measurement;
use crate::signal::Amplifier;
use crate::strain::{Gauge, Zero};

/// What a mistake mainly does to the result: two that do the same are not looked for together.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Effect {
    /// Multiplies it.
    Ratio,
    /// Moves it.
    Offset,
    /// Bends it.
    Curve,
    /// Follows a temperature.
    Temperature,
    /// Is about rows, columns or figures.
    Series,
}

/// A parameter that is estimated.
#[derive(Clone, Debug)]
pub(super) struct Free {
    /// Its name in results.
    pub(super) name: &'static str,
    /// The value in the sheet, from which the search starts.
    pub(super) start: f64,
    /// Whether its ratio to the start is searched for, or its difference in steps of `scale`.
    pub(super) by_ratio: bool,
    pub(super) scale: f64,
    /// Values that make sense.
    pub(super) range: [f64; 2],
}

impl Free {
    pub(super) fn ratio(name: &'static str, start: f64) -> Self {
        let (a, b) = (start / 30.0, start * 30.0);
        Self { name, start, by_ratio: true, scale: 1.0, range: [a.min(b), a.max(b)] }
    }

    /// A ratio within these bounds of the start.
    pub(super) fn within(self, low: f64, high: f64) -> Self {
        let (a, b) = (self.start * low, self.start * high);
        Self { range: [a.min(b), a.max(b)], ..self }
    }

    pub(super) fn difference(name: &'static str, start: f64, scale: f64, range: [f64; 2]) -> Self {
        Self { name, start, by_ratio: false, scale, range }
    }

    /// The value at this place of the search.
    pub(super) fn value(&self, p: f64) -> f64 {
        let value = if self.by_ratio { self.start * crate::math::exp(p) } else { self.start + p * self.scale };
        value.max(self.range[0]).min(self.range[1])
    }

    /// The place of a value.
    pub(super) fn place(&self, value: f64) -> f64 {
        if self.by_ratio { crate::math::ln(value / self.start) } else { (value - self.start) / self.scale }
    }
}

/// All decimals are lost.
pub(super) const WHOLE: u8 = u8::MAX;

type Apply = Box<dyn Fn(&mut Model, f64) -> bool>;

/// One way in which a mistake can have been made.
pub(super) struct Variant {
    pub(super) id: &'static str,
    pub(super) effect: Effect,
    /// Which variant it is, in words; empty where there is one alone.
    pub(super) note: String,
    /// What is said of it besides the free parameter.
    pub(super) fixed: Vec<(&'static str, f64)>,
    pub(super) free: Option<Free>,
    /// How unusual it is, beside other variants and mistakes.
    pub(super) rarity: f64,
    /// What its predictions may be off besides, where it rests on rounded values.
    pub(super) extra: f64,
    /// Decimals whose mark it loses; 0 = none, [`WHOLE`] where they are lost with it.
    pub(super) lost: u8,
    /// Changes the model; false where it cannot be made.
    pub(super) apply: Apply,
}

/// What is known before any mistake is tried.
pub(super) struct Clues<'a> {
    pub(super) measurement: &'a Measurement,
    pub(super) channel: usize,
    pub(super) unit: &'a str,
    pub(super) store: &'a Store,
    pub(super) sample: &'a Sample,
    /// Which of the delivered columns it is.
    pub(super) delivered: usize,
    /// Place of each input among the columns of the file, from 0.
    pub(super) columns: &'a [usize],
    /// The channel of each delivered column, and half a step of its figures.
    pub(super) targets: &'a [(usize, f64)],
    /// theirs = slope · own + offset, by medians.
    pub(super) line: Option<(f64, f64)>,
}

/// Collects the variants of one channel.
pub(super) struct Trials<'a> {
    pub(super) model: &'a Model,
    pub(super) clues: &'a Clues<'a>,
    variants: Vec<Variant>,
    /// The one that was added last.
    newest: Option<Variant>,
}

impl Trials<'_> {
    /// Adds one; the rest is said behind it.
    pub(super) fn add(
        &mut self,
        id: &'static str,
        effect: Effect,
        apply: impl Fn(&mut Model, f64) -> bool + 'static,
    ) -> &mut Variant {
        self.variants.extend(self.newest.take());
        self.newest.insert(Variant {
            id,
            effect,
            note: String::new(),
            fixed: Vec::new(),
            free: None,
            rarity: 0.0,
            extra: 0.0,
            lost: 0,
            apply: Box::new(apply),
        })
    }

    /// Adds one that changes an electrical constant: the zero reading is converted with it, or stands as the sheet states it.
    fn electric(
        &mut self,
        id: &'static str,
        free: Option<Free>,
        fixed: &[(&'static str, f64)],
        change: impl Fn(&mut Chain, f64) -> bool + Clone + 'static,
    ) {
        let ratio = self.model.chains().any(|c| {
            matches!(&c.element, Element::Gauge { zero, .. } | Element::Transducer { zero, .. }
                if matches!(zero.reading, Some(crate::strain::ZeroReading::Ratio(y)) if y != 0.0))
        });
        let carried = change.clone();
        let one = self.add(id, Effect::Ratio, move |m, p| electric(m, &mut |c| carried(c, p)));
        one.free.clone_from(&free);
        one.fixed = fixed.to_vec();
        if ratio {
            let one = self.add(id, Effect::Ratio, move |m, p| chains(m, &mut |c| change(c, p)));
            one.free = free;
            one.fixed = fixed.to_vec();
            one.note = "the zero stands as the sheet states it".into();
            one.rarity = 0.5;
        }
    }
}

impl Variant {
    pub(super) fn free(&mut self, free: Free) -> &mut Self {
        self.free = Some(free);
        self
    }

    pub(super) fn fixed(&mut self, name: &'static str, value: f64) -> &mut Self {
        self.fixed.push((name, value));
        self
    }

    pub(super) fn note(&mut self, words: impl Into<String>) -> &mut Self {
        self.note = words.into();
        self
    }

    pub(super) fn rare(&mut self, rarity: f64) -> &mut Self {
        self.rarity = rarity;
        self
    }
}

/// Every variant that can have been made in this channel.
pub(super) fn variants(model: &Model, clues: &Clues<'_>) -> Vec<Variant> {
    let mut trials = Trials { model, clues, variants: Vec::new(), newest: None };
    strain::add(&mut trials);
    thermometer::add(&mut trials);
    series::add(&mut trials);
    trials.variants.extend(trials.newest.take());
    trials.variants
}

/// Changes every chain; false where none could be changed.
pub(super) fn chains(model: &mut Model, change: &mut dyn FnMut(&mut Chain) -> bool) -> bool {
    let mut any = false;
    for chain in model.parts.iter_mut().flat_map(|p| p.chains.iter_mut()) {
        any |= change(chain);
    }
    any
}

/// Changes every chain and gives it the zero that the same reading makes there.
pub(super) fn electric(model: &mut Model, change: &mut dyn FnMut(&mut Chain) -> bool) -> bool {
    let mut any = false;
    for part in &mut model.parts {
        let supply = part.supply;
        for chain in &mut part.chains {
            let before = *chain;
            if change(chain) {
                any = true;
                carry_zero(&before, chain, supply);
            }
        }
    }
    any
}

/// Changes what stands before every chain, and the chain with it.
pub(super) fn before(model: &mut Model, change: &mut dyn FnMut(&mut Before, &mut Chain, Option<f64>) -> bool) -> bool {
    let mut any = false;
    for part in &mut model.parts {
        for (before, chain) in part.before.iter_mut().zip(&mut part.chains) {
            any |= change(before, chain, part.supply);
        }
    }
    any
}

/// Changes every gauge and its zero.
pub(super) fn gauges(model: &mut Model, change: &mut dyn FnMut(&mut Gauge, &mut Zero) -> bool) -> bool {
    chains(model, &mut |chain| match &mut chain.element {
        Element::Gauge { gauge, zero, .. } => change(gauge, zero),
        _ => false,
    })
}

/// Adds a step behind everything.
pub(super) fn step(model: &mut Model, step: Step) -> bool {
    model.steps.push(step);
    true
}

/// Multiplies what reaches the network by a ratio, as a wrong gain does.
pub(super) fn scale_output(chain: &mut Chain, ratio: f64) -> bool {
    match &mut chain.amplifier {
        Amplifier::None => chain.amplifier = Amplifier::Gain { gain: 1.0 / ratio, offset: 0.0 },
        Amplifier::Gain { gain, offset } => {
            *gain /= ratio;
            *offset /= ratio;
        }
        Amplifier::Difference { .. } => match &mut chain.converter {
            Some(converter) => match &mut converter.full_scale {
                crate::signal::FullScale::Volts(v) => *v *= ratio,
                crate::signal::FullScale::Supply => return false,
            },
            None => return false,
        },
    }
    true
}

/// Takes the converter out of a chain: codes become volts, or a share of the supply, before it.
pub(super) fn own_codes(before: &mut Before, chain: &mut Chain, supply: Option<f64>, codes: Codes) -> bool {
    let Some(converter) = chain.converter else { return false };
    let old = *chain;
    let zero = converter.zero_code();
    let per_code = converter.full_scale() / converter.codes();
    before.codes = codes;
    before.line = (per_code, -zero * per_code);
    chain.converter = None;
    chain.reading.signal = match converter.full_scale {
        crate::signal::FullScale::Supply => crate::chain::Signal::Ratio,
        crate::signal::FullScale::Volts(_) => crate::chain::Signal::Volts,
    };
    chain.reading.exponent = 0;
    // the zero was read in the same codes
    if let Some(code) = super::model::zero_reading(&old) {
        let full = if old.needs_supply_column() { supply.unwrap_or(1.0) } else { 1.0 };
        let line = before.line;
        let code = match codes {
            Codes::AsTheyAre => code * full,
            Codes::Unsigned(all) if code < 0.0 => code * full + all,
            Codes::Signed(all) if code * full >= 0.5 * all => code * full - all,
            Codes::More(by) => code * full + by,
            _ => code * full,
        };
        let reading = (code * line.0 + line.1) / full;
        if let Some((k, m)) = output_line(chain)
            && let Element::Gauge { zero, .. } | Element::Transducer { zero, .. } = &mut chain.element
        {
            zero.reading = Some(crate::strain::ZeroReading::Ratio(reading * k + m));
        }
    }
    true
}

/// Whether volts are read that a supply, or a current, stands behind.
pub(super) fn needs_supply(chain: &Chain) -> bool {
    !chain.is_ratiometric()
        && chain.reading.signal != crate::chain::Signal::Ohms
        && matches!(chain.supply, Supply::Fixed(_) | Supply::Column { .. })
}

//! A channel as somebody may have computed it: chains, what is done to readings before them and to results behind them.

use std::boxed::Box;
use std::vec::Vec;

use super::bent::{Bend, Bent, supply_unit};
use super::sample::Sample;
use super::store::{Gathered, Store};
use crate::chain::{Chain, Columns, Element, Inputs, Network, Plan, Supply, Temperature};
use crate::math::sqrt;
use crate::measurement::{Again, Measurement, RosetteSource, Segment, Source};
use crate::strain::ZeroReading;
use crate::thermistor::{Beta, Law, SteinhartHart};

/// Codes read in another coding, before they become volts.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Codes {
    /// As they are.
    AsTheyAre,
    /// A negative code read without its sign: 2^N more.
    Unsigned(f64),
    /// A code in the upper half read as a negative one: 2^N less.
    Signed(f64),
    /// The middle of the range taken off that was not there, or left in: so much more.
    More(f64),
}

impl Codes {
    fn read(self, code: f64) -> f64 {
        match self {
            Self::AsTheyAre => code,
            Self::Unsigned(all) => {
                if code < 0.0 {
                    code + all
                } else {
                    code
                }
            }
            Self::Signed(all) => {
                if code >= 0.5 * all {
                    code - all
                } else {
                    code
                }
            }
            Self::More(by) => code + by,
        }
    }
}

/// What is done to a reading before the chain.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Before {
    pub(super) codes: Codes,
    /// What the reading is then multiplied by, and what is added.
    pub(super) line: (f64, f64),
    /// What is taken off at last: as it is, or per unit of supply.
    pub(super) less: f64,
    pub(super) by_supply: bool,
    /// So many times the emf of the reference junction is added, besides the once that the chain adds.
    pub(super) junction: f64,
    /// A thermocouple taken for a straight line, mV/K: in place of the chain, on top of the junction or of nothing.
    pub(super) straight: Option<(f64, Straight)>,
}

/// What a straight line through the emf is counted from.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Straight {
    /// The temperature of the reference junction.
    Junction,
    /// 0 °C.
    Zero,
}

impl Before {
    const NOTHING: Self =
        Self { codes: Codes::AsTheyAre, line: (1.0, 0.0), less: 0.0, by_supply: false, junction: 0.0, straight: None };
}

/// The channel of a reading that goes into the result.
#[derive(Clone, Debug)]
pub(super) struct Part {
    /// Its number.
    pub(super) channel: usize,
    /// One for each segment; empty where its own values are taken as they are.
    pub(super) chains: Vec<Chain>,
    /// One for each chain.
    pub(super) before: Vec<Before>,
    /// A supply column that stands in the sheet, typical value in V.
    pub(super) supply: Option<f64>,
    /// A drift that is taken off between two zeros.
    pub(super) drift: Option<Drifting>,
}

/// A drift, with the readings that 0 and the return-to-zero difference make.
#[derive(Clone, Debug)]
pub(super) struct Drifting {
    again: Again,
    readings: [f64; 2],
    inputs: Inputs,
}

impl Drifting {
    /// The drift of a channel's only segment.
    fn of(segment: &Segment, chain: &Chain, supply: Option<f64>) -> Option<Self> {
        let again = segment.again.clone().filter(|a| a.drift.is_some())?;
        let found = again.found?;
        let celsius = found.celsius[1];
        let celsius = if celsius.is_finite() { celsius } else { 20.0 };
        let inputs = Inputs {
            reading: 0.0,
            supply: supply.map_or(1.0, |v| v / supply_unit(chain)),
            celsius,
            lead_celsius: celsius,
            arm_celsius: [celsius; 4],
        };
        let plan = plan_of(chain)?;
        let at = |value: f64| plan.forward(value, inputs).ok();
        Some(Self { readings: [at(0.0)?, at(found.difference)?], again, inputs })
    }

    /// Takes the drift off, as large as this plan makes it.
    fn take_off(&self, plan: &Plan, rows: &Gathered, values: &mut [f64]) {
        let [zero, back] = self.readings.map(|reading| plan.one(Inputs { reading, ..self.inputs }).value);
        for (row, value) in values.iter_mut().enumerate() {
            let at = |c: &[f64]| c.get(row).copied().unwrap_or(f64::NAN);
            *value -= (back - zero) * self.again.share(at(&rows.seconds), at(&rows.celsius[0]));
        }
    }
}

/// How the parts make the result.
#[derive(Clone, Debug)]
pub(super) enum Join {
    Alone,
    Sum(Vec<f64>),
    Rosette(Box<RosetteSource>),
}

/// Which row a value is taken from.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Pick {
    Own,
    /// So many rows before.
    Rows(i64),
    /// So many seconds before; slack in s.
    Seconds(f64, f64),
    /// The row since which the delivered value stands.
    Held,
}

/// What is done to a result.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Step {
    /// Multiplied, then added.
    Line(f64, f64),
    Clamp(f64, f64),
    /// Written with so many decimals, zeros at the end dropped, and the decimal mark lost.
    MarkLost(u8),
    /// Written with so many decimals, and everything behind the mark lost.
    Whole(u8),
    /// Digits beyond this step cut off instead of rounded.
    Cut(f64),
    /// Rounded to a fine step, then to a coarse one; halves to even or away from zero.
    Twice(f64, f64, bool),
    /// The temperature of a reference junction added.
    PlusJunction,
    /// A direction brought into (−90°, 90°] after a turn and a sense: sense · angle + turn, doubled or not.
    Turn(f64, f64),
    /// An angle brought into 0..180°.
    Positive,
}

/// A channel as it may have been computed.
#[derive(Clone, Debug)]
pub(super) struct Model {
    pub(super) parts: Vec<Part>,
    pub(super) join: Join,
    pub(super) bend: Bend,
    pub(super) steps: Vec<Step>,
    pub(super) pick: Pick,
    /// Another column that is read instead.
    pub(super) input: Option<usize>,
    /// Another channel whose own values stand here.
    pub(super) other: Option<usize>,
    /// Temperatures that it is corrected by are those delivered, with which of the delivered columns, and what makes °C of it.
    pub(super) warmth: Option<(usize, (f64, f64))>,
    /// What its values may be off besides, for rounding of delivered temperatures.
    pub(super) extra: f64,
}

impl Model {
    /// The channel as the sheet says; `None` for one that is out of the measurement.
    pub(super) fn of(measurement: &Measurement, channel: usize, store: &Store) -> Option<Self> {
        let own = measurement.channels.get(channel)?;
        let part = |channel: usize| -> Part {
            let segments = measurement.channels.get(channel).and_then(|c| c.segments()).map_or(&[][..], Vec::as_slice);
            let chains: Vec<Chain> = segments.iter().map(|s| unlimited(&s.chain)).collect();
            let column = segments.first().and_then(|s| s.supply).and_then(|s| store.inputs.get(s));
            let exponent = chains.first().and_then(|c| match c.supply {
                Supply::Column { exponent } => Some(exponent),
                _ => None,
            });
            let supply = column.zip(exponent).map(|(c, e)| super::robust::median(c) * ten(i32::from(e)));
            let drift = match (segments, chains.as_slice()) {
                ([segment], [chain]) => Drifting::of(segment, chain, supply),
                _ => None,
            };
            Part { channel, before: std::vec![Before::NOTHING; chains.len()], chains, supply, drift }
        };
        let (parts, join, steps) = match &own.source {
            Source::Reading(_) => (std::vec![part(channel)], Join::Alone, Vec::new()),
            Source::Combination(terms) => {
                let (parts, weights) = terms.iter().map(|(c, w)| (part(*c), *w)).unzip();
                (parts, Join::Sum(weights), Vec::new())
            }
            Source::Stress { of, factor, .. } => {
                (std::vec![part(*of)], Join::Alone, std::vec![Step::Line(*factor, 0.0)])
            }
            Source::Rosette(rosette) => {
                let all = rosette.channels.iter().map(|(c, _)| *c).chain(rosette.fourth.iter().map(|(c, ..)| *c));
                (all.map(part).collect(), Join::Rosette(rosette.clone()), Vec::new())
            }
        };
        Some(Self {
            parts,
            join,
            bend: Bend::Exact,
            steps,
            pick: Pick::Own,
            input: None,
            other: None,
            warmth: None,
            extra: 0.0,
        })
    }

    /// Chains that may be changed.
    pub(super) fn chains(&self) -> impl Iterator<Item = &Chain> {
        self.parts.iter().flat_map(|p| p.chains.iter())
    }

    /// The chain that speaks for all.
    pub(super) fn first(&self) -> Option<&Chain> {
        self.chains().next()
    }

    /// Rows at these positions.
    pub(super) fn gather(&self, measurement: &Measurement, store: &Store, at: &[Option<usize>]) -> Vec<Gathered> {
        let take = |p: &Part| {
            let mut rows = Gathered::take(store, measurement, p.channel, at, self.input);
            if let Some((delivered, (scale, offset))) = self.warmth
                && !rows.celsius[0].is_empty()
            {
                let made = |i: &Option<usize>| i.map_or(f64::NAN, |i| scale * store.delivered(delivered, i) + offset);
                rows.celsius[0] = at.iter().map(made).collect();
            }
            rows
        };
        self.parts.iter().map(take).collect()
    }

    /// The values that this model gives; NaN where it gives none.
    pub(super) fn values(
        &self,
        measurement: &Measurement,
        store: &Store,
        sample: &Sample,
        delivered: usize,
    ) -> Option<Vec<f64>> {
        if let Some(other) = self.other {
            let column = store.results.get(other)?;
            let own = sample.positions.iter().map(|p| column.get(*p).copied().unwrap_or(f64::NAN)).collect();
            return Some(self.finish(own, None));
        }
        let gathered;
        let parts = if self.pick == Pick::Own && self.input.is_none() && self.warmth.is_none() {
            &sample.parts
        } else {
            let place = |p: &usize| match self.pick {
                Pick::Own => Some(*p),
                Pick::Rows(rows) => store.before(*p, rows),
                Pick::Seconds(seconds, slack) => store.earlier(*p, seconds, slack),
                Pick::Held => store.since(delivered, *p),
            };
            let at: Vec<Option<usize>> = sample.positions.iter().map(place).collect();
            gathered = self.gather(measurement, store, &at);
            &gathered
        };
        self.run(parts)
    }

    /// The values for these rows.
    pub(super) fn run(&self, parts: &[Gathered]) -> Option<Vec<f64>> {
        let mut columns: Vec<Vec<f64>> = Vec::with_capacity(self.parts.len());
        for (part, rows) in self.parts.iter().zip(parts) {
            columns.push(part.run(rows, self.bend)?);
        }
        let rows = columns.first().map_or(0, Vec::len);
        let joined = match &self.join {
            Join::Alone => columns.into_iter().next().unwrap_or_default(),
            Join::Sum(weights) => {
                let mut sum = std::vec![0.0; rows];
                for (column, weight) in columns.iter().zip(weights) {
                    sum.iter_mut().zip(column).for_each(|(s, v)| *s += weight * v);
                }
                sum
            }
            Join::Rosette(rosette) => {
                let scales: Vec<f64> =
                    rosette.channels.iter().map(|(_, s)| *s).chain(rosette.fourth.iter().map(|(_, s, _)| *s)).collect();
                let mut strains = std::vec![0.0; columns.len()];
                (0..rows)
                    .map(|row| {
                        for ((slot, column), scale) in strains.iter_mut().zip(&columns).zip(&scales) {
                            *slot = scale * column.get(row).copied().unwrap_or(f64::NAN);
                        }
                        if strains.iter().any(|e| e.is_nan()) {
                            return f64::NAN;
                        }
                        rosette.one(&strains).unwrap_or(f64::NAN)
                    })
                    .collect()
            }
        };
        Some(self.finish(joined, parts.first()))
    }

    /// Returns how far the result moves when the readings, supplies and temperatures of the parts are off by so much:
    /// for each part a size for each of the three.
    pub(super) fn moved(&self, parts: &[Gathered], by: &[[f64; 3]]) -> Option<Vec<f64>> {
        let base = self.run(parts)?;
        let mut out = std::vec![0.0; base.len()];
        for (p, sizes) in by.iter().enumerate() {
            for (what, size) in sizes.iter().enumerate().filter(|(_, size)| **size > 0.0) {
                let mut moved = parts.to_vec();
                let Some(rows) = moved.get_mut(p) else { continue };
                let columns: &mut [Vec<f64>] = match what {
                    0 => core::slice::from_mut(&mut rows.readings),
                    1 => core::slice::from_mut(&mut rows.supplies),
                    _ => &mut rows.celsius,
                };
                columns.iter_mut().flatten().for_each(|v| *v += size);
                for ((slot, a), b) in out.iter_mut().zip(&base).zip(self.run(&moved)?) {
                    let by = (b - a).abs();
                    *slot += if by.is_finite() { by } else { 0.0 };
                }
            }
        }
        Some(out)
    }

    fn finish(&self, mut values: Vec<f64>, rows: Option<&Gathered>) -> Vec<f64> {
        for step in &self.steps {
            match *step {
                Step::PlusJunction => {
                    let junction = rows.map_or(&[][..], |r| r.celsius[0].as_slice());
                    values.iter_mut().zip(junction).for_each(|(v, t)| *v += t);
                }
                step => values.iter_mut().for_each(|v| *v = step.of(*v)),
            }
        }
        values
    }
}

impl Step {
    fn of(self, v: f64) -> f64 {
        match self {
            Self::Line(scale, offset) => scale * v + offset,
            Self::Clamp(low, high) => v.max(low).min(high),
            Self::MarkLost(decimals) => mark_lost(v, decimals),
            Self::Whole(decimals) => {
                let power = ten(i32::from(decimals));
                libm::trunc(libm::round(v * power) / power)
            }
            // a value that stands on a step is not cut below it
            Self::Cut(step) => libm::trunc(v / step * (1.0 + 1e-12)) * step,
            Self::Twice(fine, coarse, even) => {
                let ratio = libm::round(coarse / fine);
                let half = |x: f64| if even { libm::rint(x) } else { libm::round(x) };
                half(half(v / fine) / ratio) * coarse
            }
            Self::Turn(sense, turn) => {
                let turned = libm::remainder(sense * v + turn, 180.0);
                if turned <= -90.0 { turned + 180.0 } else { turned }
            }
            Self::Positive => {
                if v < 0.0 {
                    v + 180.0
                } else {
                    v
                }
            }
            Self::PlusJunction => v,
        }
    }
}

/// The figures of a number written with so many decimals, without zeros at the end and without the mark.
fn mark_lost(v: f64, decimals: u8) -> f64 {
    if !v.is_finite() {
        return f64::NAN;
    }
    let mut figures = libm::round(v * ten(i32::from(decimals)));
    for _ in 0..decimals {
        let shorter = figures / 10.0;
        if shorter != libm::trunc(shorter) {
            break;
        }
        figures = shorter;
    }
    figures
}

/// 10^n, exact for |n| ≤ 22.
pub(super) fn ten(n: i32) -> f64 {
    let mut power = 1.0;
    for _ in 0..n.unsigned_abs().min(300) {
        power *= 10.0;
    }
    if n < 0 { 1.0 / power } else { power }
}

/// The same chain that lets everything through, for values that nobody need believe.
pub(super) fn unlimited(chain: &Chain) -> Chain {
    let mut wide = *chain;
    wide.low_limit = None;
    wide.high_limit = None;
    match &mut wide.element {
        Element::Gauge { limit, .. } => *limit = 1.0,
        Element::Transducer { limit, .. } => *limit *= 1e3,
        _ => {}
    }
    wide.extrapolate = true;
    if wide.plan().is_ok() {
        return wide;
    }
    wide.extrapolate = chain.extrapolate;
    if wide.plan().is_ok() { wide } else { *chain }
}

/// Output over supply per unit of reading, and at a reading of 0; for one volt of a supply column.
pub(super) fn output_line(chain: &Chain) -> Option<(f64, f64)> {
    let at = |reading: f64| chain.network_output(&Inputs { reading, supply: 1.0, ..Inputs::default() }).ok();
    let (zero, one) = (at(0.0)?, at(1.0)?);
    let scale = match chain.supply {
        // of one volt, not of one unit of the column
        Supply::Column { exponent } if chain.needs_supply_column() => ten(i32::from(exponent)),
        _ => 1.0,
    };
    Some(((one - zero) * scale, zero * scale))
}

/// The reading at zero, in the unit of the readings; per volt of supply where that comes in a column.
pub(super) fn zero_reading(chain: &Chain) -> Option<f64> {
    let zero = match &chain.element {
        Element::Gauge { zero, .. } | Element::Transducer { zero, .. } => zero,
        _ => return None,
    };
    match zero.reading? {
        ZeroReading::AsRecorded(r) => Some(r),
        ZeroReading::Ratio(y) => {
            let (k, m) = output_line(chain)?;
            Some((y - m) / k)
        }
    }
}

/// The output over supply at zero.
pub(super) fn zero_ratio(chain: &Chain) -> Option<f64> {
    let (k, m) = output_line(chain)?;
    Some(zero_reading(chain)? * k + m)
}

/// Gives a changed chain the zero that the same reading makes there.
pub(super) fn carry_zero(before: &Chain, after: &mut Chain, supply: Option<f64>) {
    let Some(mut reading) = zero_reading(before) else { return };
    if before.needs_supply_column() && !after.needs_supply_column() {
        reading *= supply.unwrap_or(1.0);
    }
    let Some((k, m)) = output_line(after) else { return };
    if let Element::Gauge { zero, .. } | Element::Transducer { zero, .. } = &mut after.element {
        zero.reading = Some(ZeroReading::Ratio(reading * k + m));
    }
}

impl Part {
    /// Results of this part.
    fn run(&self, rows: &Gathered, bend: Bend) -> Option<Vec<f64>> {
        if self.chains.is_empty() {
            return Some(rows.own.clone());
        }
        let mut readings = rows.readings.clone();
        let force = |row: usize| rows.segment.get(row).copied().unwrap_or(0);
        let plans: Vec<Plan> = self.chains.iter().map(plan_of).collect::<Option<_>>()?;
        if self.before.iter().any(|b| *b != Before::NOTHING) {
            for (row, reading) in readings.iter_mut().enumerate() {
                let Some(before) = self.before.get(force(row)) else { continue };
                let supply = rows.supplies.get(row).copied().unwrap_or(1.0);
                let (scale, offset) = before.line;
                *reading = before.codes.read(*reading) * scale + offset;
                *reading -= if before.by_supply { before.less * supply } else { before.less };
                if before.junction != 0.0
                    && let Some(chain) = self.chains.get(force(row))
                {
                    *reading +=
                        before.junction * junction_reading(chain, junction(chain, rows, row)).unwrap_or(f64::NAN);
                }
            }
        }
        let inputs = |row: usize| {
            let at = |c: &Vec<f64>| c.get(row).copied().unwrap_or(0.0);
            let [celsius, lead, arms @ ..] = rows.celsius.each_ref().map(at);
            Inputs {
                reading: readings.get(row).copied().unwrap_or(f64::NAN),
                supply: at(&rows.supplies),
                celsius,
                lead_celsius: lead,
                arm_celsius: arms,
            }
        };
        let mut out = std::vec![f64::NAN; readings.len()];
        match plans.as_slice() {
            [plan] => {
                let [celsius, lead, a, b, c, d] = &rows.celsius;
                let columns = Columns {
                    readings: &readings,
                    supplies: &rows.supplies,
                    celsius,
                    lead_celsius: lead,
                    arm_celsius: [a, b, c, d],
                };
                // a column that is not there leaves no number
                let _ = plan.slice(&columns, &mut out, None).ok()?;
            }
            _ => {
                for (row, slot) in out.iter_mut().enumerate() {
                    *slot = plans.get(force(row)).map_or(f64::NAN, |p| p.one(inputs(row)).value);
                }
            }
        }
        if let (Some(drift), [plan]) = (&self.drift, plans.as_slice()) {
            drift.take_off(plan, rows, &mut out);
        }
        for (k, chain) in self.chains.iter().enumerate() {
            let Some((per_kelvin, from)) = self.before.get(k).and_then(|b| b.straight) else { continue };
            let (slope, offset) = output_line(chain)?;
            for (row, slot) in out.iter_mut().enumerate().filter(|(row, _)| force(*row) == k) {
                let millivolts = 1e3 * (slope * readings.get(row).copied().unwrap_or(f64::NAN) + offset);
                let start = if from == Straight::Junction { junction(chain, rows, row) } else { 0.0 };
                *slot = start + millivolts / per_kelvin;
            }
        }
        if bend != Bend::Exact {
            for (k, chain) in self.chains.iter().enumerate() {
                let bent = Bent::new(chain, &inputs(0))?;
                for (row, slot) in out.iter_mut().enumerate().filter(|(row, _)| force(*row) == k) {
                    *slot += bent.difference(bend, &inputs(row));
                }
            }
        }
        Some(out)
    }
}

/// The temperature of the reference junction, °C.
fn junction(chain: &Chain, rows: &Gathered, row: usize) -> f64 {
    match chain.temperature {
        Temperature::Fixed(t) => t,
        Temperature::Column => rows.celsius[0].get(row).copied().unwrap_or(f64::NAN),
        Temperature::None => 0.0,
    }
}

/// The reading that the emf of a reference junction at this temperature makes.
fn junction_reading(chain: &Chain, celsius: f64) -> Option<f64> {
    let Element::Thermocouple(kind) = chain.element else { return None };
    let (slope, _) = output_line(chain)?;
    Some(1e-3 * kind.function().millivolts_from_celsius(celsius) / slope)
}

/// The plan of a chain that may be far from what its law was made for.
pub(super) fn plan_of(chain: &Chain) -> Option<Plan> {
    let law = match &chain.element {
        Element::Thermistor(law) => *law,
        _ => return chain.plan().ok(),
    };
    let ranges = [[-150.0, 1500.0], [-100.0, 600.0], [-80.0, 300.0]];
    let wide = |range: [f64; 2]| {
        let mut wide = *chain;
        wide.element = Element::Thermistor(match law {
            Law::Beta(k) => Law::Beta(Beta { range_celsius: range, ..k }),
            Law::SteinhartHart(k) => Law::SteinhartHart(SteinhartHart { range_celsius: range, ..k }),
            _ => return None,
        });
        wide.plan().ok()
    };
    ranges.into_iter().find_map(wide).or_else(|| chain.plan().ok())
}

/// Whether a chain has a bridge with gauges.
pub(super) fn is_gauge(chain: &Chain) -> bool {
    matches!((&chain.element, &chain.network), (Element::Gauge { .. }, Network::Bridge(_)))
}

/// Root of the mean square.
pub(super) fn root_mean_square(values: impl Iterator<Item = f64>) -> f64 {
    let (mut sum, mut count) = (0.0, 0.0);
    for v in values {
        sum += v * v;
        count += 1.0;
    }
    if count > 0.0 { sqrt(sum / count) } else { 0.0 }
}

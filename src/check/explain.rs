//! Which mistake makes the delivered values of the readings?

use std::string::{String, ToString};
use std::vec::Vec;

use super::mistake::{Clues, Effect, Variant, WHOLE, variants};
use super::model::{Model, root_mean_square};
use super::robust::{line, median, range};
use super::sample::Sample;
use crate::math::sqrt;

/// Rows of the sample that pairs are first tried on.
const SCREENED: usize = 64;
/// Pairs that are looked at closely.
const MOST_PAIRS: usize = 80;
/// Share of the rows that an explanation must bring within rounding.
const SHARE: f64 = 0.99;
/// Explanations that are reported, and mistakes in one tie.
const MOST_EXPLANATIONS: usize = 6;
const MOST_TIED: usize = 24;

/// One explanation, before it is put into words.
#[derive(Clone, Debug)]
pub(super) struct Candidate {
    /// Which variants, in the order of the catalogue.
    pub(super) which: Vec<usize>,
    /// Values of their free parameters, rounded where the data let them be.
    pub(super) values: Vec<f64>,
    /// What it predicts for the sample.
    pub(super) predicted: Vec<f64>,
    /// Root of the mean square of what is left, wild rows left out.
    pub(super) residual: f64,
    /// Share of the rows within rounding.
    pub(super) within: f64,
    cost: f64,
}

/// What was found.
pub(super) struct Found {
    pub(super) variants: Vec<Variant>,
    /// Explanations, best first, each with those that cannot be told from it.
    pub(super) groups: Vec<(Candidate, Vec<Candidate>)>,
    /// Whether they bring the difference down to rounding.
    pub(super) explained: bool,
}

struct Search<'a> {
    base: &'a Model,
    clues: &'a Clues<'a>,
    variants: &'a [Variant],
    /// Share of the rows that differ by more than rounding.
    outside: f64,
}

/// Looks for the mistakes, alone and then two together, that make the delivered values.
pub(super) fn explain(base: &Model, clues: &Clues<'_>) -> Found {
    let mut clues = Clues { line: None, ..*clues };
    clues.line = line(&clues.sample.own, &clues.sample.theirs);
    let all = variants(base, &clues);
    let sample = clues.sample;
    let outside = sample.own.iter().zip(&sample.theirs).zip(&sample.tolerance).filter(|((own, theirs), tolerance)| {
        let apart = (*theirs - *own).abs();
        apart > **tolerance
    });
    let outside = outside.count() as f64 / sample.own.len().max(1) as f64;
    let search = Search { base, clues: &clues, variants: &all, outside };
    let mut singles: Vec<Candidate> = (0..all.len()).filter_map(|i| search.fit(&[i], sample, 12)).collect();
    singles.sort_by(|a, b| a.cost.total_cmp(&b.cost));
    let good: Vec<Candidate> = singles.iter().filter(|c| search.explains(c)).cloned().collect();
    if !good.is_empty() {
        let groups = search.grouped(search.settled(good));
        return Found { groups, explained: true, variants: all };
    }
    let pairs = search.pairs();
    if !pairs.is_empty() {
        let groups = search.grouped(search.settled(pairs));
        return Found { groups, explained: true, variants: all };
    }
    // what comes nearest, where it comes markedly nearer than nothing at all
    let apart = search.judged(&[], Vec::new(), sample.own.clone(), sample).map_or(f64::INFINITY, |c| c.residual);
    singles.sort_by(|a, b| a.residual.total_cmp(&b.residual));
    singles.retain(|c| c.residual < 0.7 * apart && c.within > search.within_own());
    let mut seen: Vec<String> = Vec::new();
    singles.retain(|c| {
        let name = search.name(c);
        let new = !seen.contains(&name);
        seen.push(name);
        new
    });
    singles.truncate(3);
    for value in singles.iter_mut().flat_map(|c| c.values.iter_mut()) {
        *value = roundest(*value, 1e-4 * value.abs()).0;
    }
    let groups = singles.into_iter().map(|c| (c, Vec::new())).collect();
    Found { groups, explained: false, variants: all }
}

fn differences(values: &[f64], sample: &Sample) -> Vec<f64> {
    sample.theirs.iter().zip(values).map(|(t, v)| t - v).collect()
}

/// How far beyond rounding a row may lie for the sake of so many estimated parameters.
pub(super) fn slack(parameters: usize, rows: usize) -> f64 {
    1.001 + 4.0 * parameters as f64 / sqrt(rows.max(16) as f64)
}

/// Huber's loss beyond this size.
fn loss(r: f64, size: f64) -> f64 {
    let r = r.abs();
    if r.is_nan() {
        0.0
    } else if r <= size {
        0.5 * r * r
    } else {
        size * (r - 0.5 * size)
    }
}

impl Search<'_> {
    /// Share of the rows within rounding when nothing is done.
    fn within_own(&self) -> f64 {
        1.0 - self.outside
    }

    /// Whether this brings the difference down to rounding, where there was any.
    fn explains(&self, candidate: &Candidate) -> bool {
        let parameters = candidate.values.len();
        // what the room for an estimate explains by itself is no explanation
        if parameters > 0 {
            let sample = self.clues.sample;
            let free = slack(parameters, sample.own.len());
            let own = sample.own.iter().zip(&sample.theirs).enumerate().filter(|(i, (own, theirs))| {
                let apart = (*theirs - *own).abs();
                apart > free * sample.allowed(*i, 1.0, 0.0)
            });
            let outside = own.count() as f64 / sample.own.len().max(1) as f64;
            if 1.0 - outside >= SHARE && (1.0 - candidate.within) > 0.5 * outside - 1e-12 {
                return false;
            }
        }
        candidate.within >= SHARE && 1.0 - candidate.within <= 0.5 * self.outside
    }

    /// The model with these mistakes in it.
    fn model(&self, which: &[usize], places: &[f64], exact: Option<&[f64]>) -> Option<Model> {
        let mut model = self.base.clone();
        let mut k = 0;
        for i in which {
            let variant = self.variants.get(*i)?;
            let value = match &variant.free {
                None => 0.0,
                Some(free) => {
                    let value = match exact {
                        Some(values) => values.get(k).copied()?,
                        None => free.value(places.get(k).copied()?),
                    };
                    k += 1;
                    value
                }
            };
            if !(variant.apply)(&mut model, value) {
                return None;
            }
        }
        Some(model)
    }

    fn predict(&self, which: &[usize], places: &[f64], sample: &Sample) -> Option<Vec<f64>> {
        let model = self.model(which, places, None)?;
        model.values(self.clues.measurement, self.clues.store, sample, self.clues.delivered)
    }

    /// Whether rows without a value count against these mistakes.
    fn may_lack(&self, which: &[usize]) -> bool {
        which.iter().any(|i| self.variants.get(*i).is_some_and(|v| v.effect == Effect::Series))
    }

    /// Estimates the free parameters; `None` where the mistakes cannot be made, or give no values.
    fn fit(&self, which: &[usize], sample: &Sample, steps: usize) -> Option<Candidate> {
        let free: Vec<_> = which.iter().filter_map(|i| self.variants.get(*i)?.free.as_ref()).collect();
        let mut starts = std::vec![std::vec![0.0; free.len()]];
        if free.iter().any(|f| f.by_ratio) {
            // the ratio that is missing before anything is estimated
            let before = self.predict(which, starts.first()?, sample)?;
            let slope = line(&before, &sample.theirs).map_or(1.0, |(slope, _)| slope.abs());
            if slope > 0.0 && slope.is_finite() && (slope - 1.0).abs() > 0.02 {
                let by = crate::math::ln(slope);
                for (k, f) in free.iter().enumerate().filter(|(_, f)| f.by_ratio) {
                    for p in [by, -by] {
                        let mut start = std::vec![0.0; free.len()];
                        if let Some(slot) = start.get_mut(k) {
                            *slot = f.place(f.value(p));
                        }
                        starts.push(start);
                    }
                }
            }
        }
        let mut best: Option<(f64, Vec<f64>, Vec<f64>)> = None;
        for start in starts {
            let Some(values) = self.predict(which, &start, sample) else { continue };
            let left: Vec<f64> = differences(&values, sample).iter().map(|d| d.abs()).collect();
            let score = median(&left);
            if score.is_finite() && best.as_ref().is_none_or(|(s, ..)| score < *s) {
                best = Some((score, start, values));
            }
        }
        let (_, mut places, mut values) = best?;
        if !free.is_empty() {
            (places, values) = self.descend(which, places, values, sample, steps);
        }
        let found: Vec<f64> = free.iter().zip(&places).map(|(f, p)| f.value(*p)).collect();
        self.judged(which, found, values, sample)
    }

    /// Gauss and Newton's steps, wild rows held back by Huber's weights.
    fn descend(
        &self,
        which: &[usize],
        mut places: Vec<f64>,
        mut values: Vec<f64>,
        sample: &Sample,
        steps: usize,
    ) -> (Vec<f64>, Vec<f64>) {
        let half = median(&sample.tolerance).max(f64::MIN_POSITIVE);
        for _ in 0..steps {
            let left = differences(&values, sample);
            let sizes: Vec<f64> = left.iter().map(|d| d.abs()).collect();
            let size = (4.0 * median(&sizes)).max(2.0 * half);
            let cost = |left: &[f64]| left.iter().map(|r| loss(*r, size)).sum::<f64>();
            let before = cost(&left);
            let h = 1e-5;
            let mut columns = Vec::new();
            for k in 0..places.len() {
                let mut moved = places.clone();
                if let Some(p) = moved.get_mut(k) {
                    *p += h;
                }
                let Some(other) = self.predict(which, &moved, sample) else { return (places, values) };
                columns.push(other.iter().zip(&values).map(|(b, a)| (b - a) / h).collect::<Vec<f64>>());
            }
            let Some(by) = solve(&columns, &left, size) else { return (places, values) };
            let mut share = 1.0;
            let mut moved = None;
            for _ in 0..7 {
                let next: Vec<f64> = places.iter().zip(&by).map(|(p, d)| p + share * d).collect();
                if let Some(new) = self.predict(which, &next, sample) {
                    let after = cost(&differences(&new, sample));
                    let whole =
                        new.iter().filter(|v| v.is_finite()).count() * 10 >= new.len() * 9 || self.may_lack(which);
                    if after < before && whole {
                        moved = Some((next, new, after));
                        break;
                    }
                }
                share *= 0.4;
            }
            let Some((next, new, after)) = moved else { break };
            (places, values) = (next, new);
            if before - after <= 1e-6 * before {
                break;
            }
        }
        (places, values)
    }

    /// How well values fit, with what they cost.
    fn judged(&self, which: &[usize], found: Vec<f64>, values: Vec<f64>, sample: &Sample) -> Option<Candidate> {
        let left = differences(&values, sample);
        let (mut inside, mut counted, mut lacking) = (0.0, 0.0, 0.0);
        let mut kept = Vec::with_capacity(left.len());
        let sizes: Vec<f64> = left.iter().map(|d| d.abs()).collect();
        let scale = sample.scale_of(&values);
        let extra: f64 = which.iter().filter_map(|i| self.variants.get(*i)).map(|v| v.extra).sum();
        let allowed: Vec<f64> = (0..left.len()).map(|i| sample.allowed(i, scale, extra)).collect();
        let wild = (6.0 * median(&sizes)).max(2.0 * median(&allowed));
        for (r, tolerance) in left.iter().zip(&allowed) {
            if r.is_nan() {
                lacking += 1.0;
                continue;
            }
            counted += 1.0;
            // an estimated parameter has its own share of the rounding
            let free = slack(found.len(), left.len());
            inside += f64::from(r.abs() <= tolerance * free);
            if r.abs() <= wild {
                kept.push(*r);
            }
        }
        let all = counted + lacking;
        if counted < 3.0 || counted < 0.4 * all {
            return None;
        }
        let within = if self.may_lack(which) { inside / counted } else { inside / all };
        let residual = root_mean_square(kept.into_iter());
        let noise = allowed.iter().map(|t| t * t / 3.0).sum::<f64>() / allowed.len() as f64;
        let worse = (residual / sqrt(noise).max(f64::MIN_POSITIVE) - 1.08).max(0.0);
        let mut cost = 20.0 * worse * sqrt(all) * 0.1;
        // rows that it leaves
        cost += (200.0 * (1.0 - within)).min(2.0);
        for i in which {
            let variant = self.variants.get(*i)?;
            cost += 1.0 + variant.rarity;
            cost += if variant.free.is_some() { 2.5 } else { 0.0 };
        }
        Some(Candidate { which: which.to_vec(), values: found, predicted: values, residual, within, cost })
    }

    /// Gives estimated parameters the roundest values that the data let them have, and counts them.
    fn settled(&self, candidates: Vec<Candidate>) -> Vec<Candidate> {
        let mut out: Vec<Candidate> = candidates.into_iter().map(|c| self.rounded(c)).collect();
        out.sort_by(|a, b| a.cost.total_cmp(&b.cost));
        out
    }

    fn rounded(&self, mut candidate: Candidate) -> Candidate {
        let sample = self.clues.sample;
        let rows = sample.own.len() as f64;
        for k in 0..candidate.values.len() {
            let free = candidate.which.iter().filter_map(|i| self.variants.get(*i)?.free.as_ref()).nth(k);
            let (Some(free), Some(value)) = (free, candidate.values.get(k).copied()) else { continue };
            let at = |v: f64| {
                let mut values = candidate.values.clone();
                if let Some(slot) = values.get_mut(k) {
                    *slot = v;
                }
                let model = self.model(&candidate.which, &[], Some(&values))?;
                let predicted = model.values(self.clues.measurement, self.clues.store, sample, self.clues.delivered)?;
                Some((values, predicted))
            };
            let h = free.value(free.place(value) + 1e-5) - value;
            let Some((_, moved)) = at(value + h).filter(|_| h != 0.0) else { continue };
            let slope = root_mean_square(
                moved.iter().zip(&candidate.predicted).map(|(b, a)| (b - a) / h).filter(|d| d.is_finite()),
            );
            let scale = sample.scale_of(&candidate.predicted);
            let noise = root_mean_square((0..sample.own.len()).map(|i| sample.allowed(i, scale, 0.0))) / sqrt(3.0);
            if slope <= 0.0 || noise <= 0.0 {
                continue;
            }
            // four standard deviations of the estimate
            let room = 4.0 * noise / (slope * sqrt(rows));
            let (round, digits) = roundest(value, room);
            if let Some((values, predicted)) = at(round)
                && let Some(better) = self.judged(&candidate.which, values, predicted, sample)
                && better.within >= candidate.within.min(SHARE)
                && self.explains(&better)
            {
                let cost = candidate.cost;
                candidate = Candidate { cost, ..better };
            }
            candidate.cost += 0.5 * f64::from(digits.min(8)) - 1.0;
        }
        candidate
    }

    /// Puts together what cannot be told apart: predictions that differ by less than rounding.
    fn grouped(&self, mut candidates: Vec<Candidate>) -> Vec<(Candidate, Vec<Candidate>)> {
        let sample = self.clues.sample;
        let mut groups: Vec<(Candidate, Vec<Candidate>)> = Vec::new();
        while !candidates.is_empty() && groups.len() < MOST_EXPLANATIONS {
            let best = candidates.remove(0);
            let mut seen = std::vec![self.name(&best)];
            let scale = sample.scale_of(&best.predicted);
            let mut tied = Vec::new();
            let mut rest = Vec::new();
            for other in candidates {
                let apart = best.predicted.iter().zip(&other.predicted).enumerate().filter(|(i, (a, b))| {
                    let apart = (*a - *b).abs();
                    apart > sample.allowed(*i, scale, 0.0)
                });
                let alike = apart.count() as f64 <= 0.01 * sample.own.len() as f64;
                let name = self.name(&other);
                if seen.contains(&name) {
                    continue;
                }
                if alike {
                    seen.push(name);
                    if tied.len() < MOST_TIED {
                        tied.push(other);
                    }
                } else {
                    rest.push(other);
                }
            }
            candidates = rest;
            groups.push((best, tied));
        }
        groups
    }

    fn name(&self, candidate: &Candidate) -> String {
        name(self.variants, candidate)
    }

    /// A mistake whose results then lost their decimal mark: it is estimated from the figures with the mark where it must have
    /// been, since figures without one jump.
    fn fit_lost(&self, i: usize, j: usize, lost: u8) -> Option<Candidate> {
        let sample = self.clues.sample;
        let first = self.variants.get(i)?;
        let mut places = Vec::new();
        if first.free.is_some() {
            let mut mended = sample.thinned(16 * SCREENED);
            let half = if lost == WHOLE { 0.5 } else { 0.5 / super::model::ten(i32::from(lost)) };
            for ((theirs, own), sizes) in
                mended.theirs.iter_mut().zip(&mended.own).zip(mended.half.iter_mut().zip(&mut mended.tolerance))
            {
                if lost == WHOLE {
                    // what was cut off is half a unit in the mean
                    let sign = if *theirs == 0.0 { 0.0 } else { theirs.signum() };
                    *theirs += 0.5 * sign;
                    (*sizes.0, *sizes.1) = (half, half);
                    continue;
                }
                let marked = (0..=lost).map(|n| *theirs / super::model::ten(i32::from(n)));
                let nearest = marked.min_by(|a, b| (a - own).abs().total_cmp(&(b - own).abs()));
                *theirs = nearest.unwrap_or(*theirs);
                (*sizes.0, *sizes.1) = (half, half);
            }
            let own = self.fit(&[i], &mended, 8)?;
            let free = first.free.as_ref()?;
            let value = own.values.first().copied()?;
            // a lost mark shows the last decimal of every row, so the value must be the very one
            let at = |v: f64| -> Option<f64> { Some(self.fixed(&[i, j], &[v])?.within) };
            let room = (free.value(free.place(value) + 1e-4) - value).abs();
            let mut best = (at(value)?, value);
            for digits in 1..=6 {
                let text = std::format!("{value:.digits$e}");
                if let Ok(v) = text.parse::<f64>()
                    && (v - value).abs() <= 10.0 * room
                    && let Some(within) = at(v)
                    && within > best.0
                {
                    best = (within, v);
                }
            }
            places.push(best.1);
        }
        self.fixed(&[i, j], &places)
    }

    /// How well these mistakes fit with these values of their parameters.
    fn fixed(&self, which: &[usize], values: &[f64]) -> Option<Candidate> {
        let sample = self.clues.sample;
        let model = self.model(which, &[], Some(values))?;
        let predicted = model.values(self.clues.measurement, self.clues.store, sample, self.clues.delivered)?;
        self.judged(which, values.to_vec(), predicted, sample)
    }

    /// Two mistakes together that bring the difference down to rounding.
    fn pairs(&self) -> Vec<Candidate> {
        let small = self.clues.sample.thinned(SCREENED);
        // a mistake that does not show in these rows is no part of an explanation
        let shows: Vec<bool> = self
            .variants
            .iter()
            .enumerate()
            .map(|(i, v)| {
                // what is about rows and figures may show with another mistake alone
                if v.free.is_some() || v.effect == Effect::Series {
                    return true;
                }
                self.predict(&[i], &[], &small).is_some_and(|p| {
                    let moved = p.iter().zip(&small.own).zip(&small.half).filter(|((p, own), half)| {
                        let by = (*p - *own).abs();
                        by > **half
                    });
                    moved.count() > 0
                })
            })
            .collect();
        let mut found: Vec<Candidate> = Vec::new();
        let mut lost_marks = Vec::new();
        for (i, first) in self.variants.iter().enumerate() {
            for (j, second) in self.variants.iter().enumerate().skip(i + 1) {
                let both = [i, j].iter().all(|k| shows.get(*k) == Some(&true));
                if !both || first.id == second.id || alike(first, second) {
                    continue;
                }
                let candidate = match second.lost {
                    0 => self.fit(&[i, j], &small, 5),
                    lost => self.fit_lost(i, j, lost),
                };
                let Some(candidate) = candidate else { continue };
                if second.lost > 0 {
                    lost_marks.extend(Some(candidate).filter(|c| self.explains(c)));
                    continue;
                }
                let near =
                    candidate.predicted.iter().zip(&small.theirs).zip(&small.tolerance).filter(|((p, t), tol)| {
                        let left = (*p - *t).abs();
                        left <= 2.0 * **tol
                    });
                if near.count() as f64 >= 0.95 * small.own.len() as f64 || (candidate.within >= 0.95) {
                    found.push(candidate);
                }
            }
        }
        found.sort_by(|a, b| a.cost.total_cmp(&b.cost));
        found.truncate(MOST_PAIRS);
        let again = found.iter().filter_map(|c| self.fit(&c.which, self.clues.sample, 12));
        let mut good: Vec<Candidate> = again.filter(|c| self.explains(c)).chain(lost_marks).collect();
        good.sort_by(|a, b| a.cost.total_cmp(&b.cost));
        good
    }
}

/// Two that do the same are one.
fn alike(a: &Variant, b: &Variant) -> bool {
    let both = |effect: Effect| a.effect == effect && b.effect == effect;
    let free = a.free.is_some() && b.free.is_some();
    both(Effect::Series) || (free && (both(Effect::Ratio) || both(Effect::Offset)))
}

/// The name of an explanation: its mistakes, joined.
pub(super) fn name(variants: &[Variant], candidate: &Candidate) -> String {
    let ids: Vec<&str> = candidate.which.iter().filter_map(|i| variants.get(*i)).map(|v| v.id).collect();
    ids.join("+")
}

/// Δ of Σ w (r − J Δ)², one or two parameters.
fn solve(columns: &[Vec<f64>], left: &[f64], size: f64) -> Option<Vec<f64>> {
    let weight = |r: f64| if r.abs() <= size { 1.0 } else { size / r.abs() };
    let dot = |a: &[f64], b: &[f64]| -> f64 {
        a.iter().zip(b).zip(left).map(|((a, b), r)| weight(*r) * a * b).filter(|v| v.is_finite()).sum()
    };
    match columns {
        [a] => {
            let (aa, ar) = (dot(a, a), dot(a, left));
            (aa > 0.0 && aa.is_finite()).then(|| std::vec![ar / aa])
        }
        [a, b] => {
            let (aa, ab, bb) = (dot(a, a) * (1.0 + 1e-9), dot(a, b), dot(b, b) * (1.0 + 1e-9));
            let (ar, br) = (dot(a, left), dot(b, left));
            let det = aa * bb - ab * ab;
            if !(aa > 0.0 && bb > 0.0 && det > 1e-12 * aa * bb) {
                return None;
            }
            Some(std::vec![(ar * bb - br * ab) / det, (br * aa - ar * ab) / det])
        }
        _ => None,
    }
}

/// The number with fewest significant digits in value ± room, and how many it has.
pub(super) fn roundest(value: f64, room: f64) -> (f64, u32) {
    for digits in 1..=15u32 {
        let text = std::format!("{value:.*e}", digits as usize - 1);
        if let Ok(round) = text.parse::<f64>()
            && (round - value).abs() <= room
        {
            return (round, significant(&text));
        }
    }
    (value, 16)
}

fn significant(text: &str) -> u32 {
    let mantissa = text.split('e').next().unwrap_or(text);
    let digits: String = mantissa.chars().filter(char::is_ascii_digit).collect();
    u32::try_from(digits.trim_end_matches('0').len().max(1)).unwrap_or(16)
}

/// What the difference follows besides the value: each in words, with the part of the difference that goes with it.
pub(super) fn trends(sample: &Sample, celsius: &[f64], seconds: &[f64]) -> Vec<(String, f64)> {
    let Some((slope, offset)) = line(&sample.own, &sample.theirs) else { return Vec::new() };
    let left: Vec<f64> = sample.own.iter().zip(&sample.theirs).map(|(o, t)| t - slope * o - offset).collect();
    let (low, high) = range(&sample.own);
    let (middle, reach) = (0.5 * (low + high), 0.5 * (high - low));
    // curvature: against the square, less what a line takes of it
    let square: Vec<f64> = sample.own.iter().map(|o| (o - middle) / reach).map(|x| x * x).collect();
    let mut rate = std::vec![f64::NAN; celsius.len()];
    for (i, slot) in rate.iter_mut().enumerate() {
        let at = |k: Option<usize>| k.and_then(|k| Some((*celsius.get(k)?, *seconds.get(k)?)));
        if let (Some((a, ta)), Some((b, tb))) = (at(i.checked_sub(1)), at(i.checked_add(1)))
            && tb > ta
        {
            *slot = (b - a) / (tb - ta);
        }
    }
    let noise = median(&sample.tolerance);
    let mut out = Vec::new();
    let ways: [(&str, &[f64]); 4] = [
        ("the square of the value", &square),
        ("temperature", celsius),
        ("the rate of change of temperature", &rate),
        ("time", seconds),
    ];
    for (name, x) in ways {
        if x.len() != left.len() {
            continue;
        }
        let (low, high) = range(x);
        if let Some((by, _)) = line(x, &left).filter(|_| high > low) {
            let part = by * (high - low);
            if part.abs() > 2.0 * noise {
                out.push((name.to_string(), part));
            }
        }
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn round_values() {
        assert_eq!(roundest(2.000_03, 1e-4), (2.0, 1));
        assert_eq!(roundest(2.079_9, 3e-4), (2.08, 3));
        assert_eq!(roundest(-0.0499, 2e-4), (-0.05, 1));
        assert_eq!(roundest(1234.5678, 0.0).0, 1234.5678);
    }

    #[test]
    fn two_parameters_by_hand() {
        // r = 2 a − 3 b exactly
        let a: Vec<f64> = (0..9).map(f64::from).collect();
        let b: Vec<f64> = a.iter().map(|x| x * x).collect();
        let r: Vec<f64> = a.iter().zip(&b).map(|(a, b)| 2.0 * a - 3.0 * b).collect();
        let by = solve(&[a, b], &r, 1e9).unwrap();
        assert!((by[0] - 2.0).abs() < 1e-6 && (by[1] + 3.0).abs() < 1e-6, "{by:?}");
    }
}

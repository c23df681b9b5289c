//! Mistakes with rows, columns and figures.

use std::format;
use std::string::ToString;
use std::vec::Vec;

use super::{Effect, Free, Trials, step};
use crate::chain::Element;
use crate::check::model::{Join, Pick, Step};
use crate::check::robust::{line, median, range};

/// Rows that a shift is looked for in.
const MOST_ROWS: i64 = 64;
/// Rows that are compared for each shift.
const COMPARED: usize = 400;
/// Whole hours that a clock is wrong by at most.
const MOST_HOURS: i64 = 14;

pub(super) fn add(t: &mut Trials<'_>) {
    let clues = t.clues;
    let sample = clues.sample;
    let (low, high) = range(&sample.own);
    let span = (high - low).max(f64::MIN_POSITIVE);
    t.add("another-zero", Effect::Offset, |m, p| step(m, Step::Line(1.0, p)))
        .free(Free::difference("offset", 0.0, 0.1 * span, [-1e12, 1e12]))
        .rare(1.0);
    t.add("another-scale", Effect::Ratio, |m, p| step(m, Step::Line(p, 0.0)))
        .free(Free::ratio("factor", 1.0))
        .rare(1.0);
    t.add("sign", Effect::Ratio, |m, _| step(m, Step::Line(-1.0, 0.0)));
    if t.model.chains().any(crate::check::model::is_gauge) {
        t.electric("sign", None, &[], |c, _| super::scale_output(c, -1.0));
    }
    powers(t);
    let typical = clues.targets.get(clues.delivered).map_or(0.0, |(_, half)| 2.0 * half);
    if typical > 0.0 {
        t.add("truncated", Effect::Series, move |m, _| step(m, Step::Cut(typical))).fixed("step", typical);
        for (even, words) in [(false, "halves away from zero"), (true, "halves to even")] {
            t.add("rounded-twice", Effect::Series, move |m, _| step(m, Step::Twice(0.1 * typical, typical, even)))
                .fixed("first step", crate::check::explain::roundest(0.1 * typical, 1e-9 * typical).0)
                .note(words);
        }
    }
    for decimals in 1..=4 {
        let one = t.add("decimal-comma", Effect::Series, move |m, _| step(m, Step::MarkLost(decimals)));
        one.fixed("decimals", f64::from(decimals)).note("the mark dropped");
        one.lost = decimals;
        let one = t.add("decimal-comma", Effect::Series, move |m, _| step(m, Step::Whole(decimals)));
        one.fixed("decimals", f64::from(decimals)).note("what stands behind the mark dropped");
        one.lost = super::WHOLE;
    }
    clipped(t);
    stale(t);
    columns(t);
    shifts(t);
    temperatures(t);
}

/// A temperature that the channel is corrected by, as it was delivered where that differs from the own one.
fn temperatures(t: &mut Trials<'_>) {
    let clues = t.clues;
    let part = t.model.parts.first().map(|p| p.channel);
    let segment =
        part.and_then(|c| clues.measurement.channels.get(c)).and_then(|c| c.segments()).and_then(|s| s.first());
    let Some(side) = segment.and_then(|s| s.temperature.as_ref()) else { return };
    let Some(delivered) = clues.targets.iter().position(|(c, _)| *c == side.channel) else { return };
    let (Some(own), Some(theirs)) = (clues.store.results.get(side.channel), clues.store.theirs.get(delivered)) else {
        return;
    };
    // their temperature is known to half a step of its figures
    let half = clues.targets.get(delivered).map_or(0.0, |(_, half)| half * side.to_celsius.0.abs());
    let sizes: Vec<[f64; 3]> = t.model.parts.iter().map(|_| [0.0, 0.0, half]).collect();
    let moved = t.model.moved(&clues.sample.parts, &sizes).unwrap_or_default();
    let extra = moved.iter().copied().filter(|m| m.is_finite()).fold(0.0, f64::max);
    let differs = own.iter().zip(theirs).any(|(a, b)| (a - b).abs() > 1e-6 * a.abs().max(1.0));
    if !differs {
        return;
    }
    let to_celsius = side.to_celsius;
    let note = format!("the temperature delivered for '{}'", side.name);
    t.add("temperature-delivered", Effect::Temperature, move |m, _| {
        (m.warmth, m.extra) = (Some((delivered, to_celsius)), extra);
        true
    })
    .note(note.clone())
    .extra = extra;
    // and the temperature at zero by the same wrong temperatures
    let Some((slope, offset)) = line(own, theirs) else { return };
    let to_theirs = move |celsius: f64| {
        let (scale, zero) = to_celsius;
        scale * (slope * ((celsius - zero) / scale) + offset) + zero
    };
    if t.model.chains().any(|c| matches!(c.element, Element::Gauge { zero, .. } if zero.celsius.is_some())) {
        t.add("temperature-delivered", Effect::Temperature, move |m, _| {
            (m.warmth, m.extra) = (Some((delivered, to_celsius)), extra);
            super::gauges(m, &mut |_, zero| {
                zero.celsius = zero.celsius.map(to_theirs);
                true
            })
        })
        .note(format!("{note}, at zero too"))
        .extra = extra;
    }
}

/// A whole power of ten, or of two, near the ratio of the delivered values to the own ones.
fn powers(t: &mut Trials<'_>) {
    let Some((slope, _)) = t.clues.line else { return };
    let size = slope.abs();
    if !(size.is_finite() && size > 0.0) {
        return;
    }
    let tens = crate::math::ln(size) / core::f64::consts::LN_10;
    let mut near: Vec<i32> = Vec::new();
    for n in [libm::floor(tens), libm::ceil(tens), libm::round(tens)] {
        let n = n as i32;
        if n != 0 && n.abs() <= 12 && !near.contains(&n) {
            near.push(n);
        }
    }
    for n in near {
        let factor = crate::check::model::ten(n);
        t.add("power-of-ten", Effect::Ratio, move |m, _| step(m, Step::Line(factor, 0.0)))
            .fixed("exponent", f64::from(n));
        t.electric("power-of-ten", None, &[("exponent", f64::from(n))], move |c, _| {
            let exponent = i32::from(c.reading.exponent) + n;
            match i8::try_from(exponent) {
                Ok(exponent) if exponent.abs() <= 15 && c.converter.is_none() => {
                    c.reading.exponent = exponent;
                    true
                }
                _ => false,
            }
        });
    }
    for n in [-4, -3, -2, -1, 1, 2, 3, 4] {
        let factor = if n < 0 { 1.0 / f64::from(1 << -n) } else { f64::from(1 << n) };
        t.add("power-of-two", Effect::Ratio, move |m, _| step(m, Step::Line(factor, 0.0)))
            .fixed("exponent", f64::from(n))
            .rare(0.2);
    }
}

/// Rows in which the delivered value stands at its end while the own one moves.
fn stands(own: &[f64], theirs: &[f64], end: f64, half: f64) -> bool {
    let at_end: Vec<f64> =
        own.iter().zip(theirs).filter(|(_, t)| (**t - end).abs() <= half).map(|(own, _)| *own).collect();
    let (low, high) = range(&at_end);
    at_end.len() >= 2 && high - low > 6.0 * half
}

fn clipped(t: &mut Trials<'_>) {
    let sample = t.clues.sample;
    let (low, high) = range(&sample.theirs);
    let (own_low, own_high) = range(&sample.own);
    let half = median(&sample.half);
    if high - low <= 4.0 * half {
        // a column that stands still was not cut at two limits that are one
        return;
    }
    let ends = |end| stands(&sample.own, &sample.theirs, end, half);
    let (below, above) = (own_low < low - half || ends(low), own_high > high + half || ends(high));
    let ways = [(below, above), (below && above, false), (false, below && above)];
    for (below, above) in ways {
        if !(below || above) {
            continue;
        }
        let limits = (if below { low } else { f64::NEG_INFINITY }, if above { high } else { f64::INFINITY });
        let one = t.add("clipped", Effect::Series, move |m, _| step(m, Step::Clamp(limits.0, limits.1)));
        if below {
            one.fixed("low", limits.0);
        }
        if above {
            one.fixed("high", limits.1);
        }
    }
}

fn stale(t: &mut Trials<'_>) {
    let clues = t.clues;
    let positions = &clues.sample.positions;
    let held: Vec<f64> = positions
        .iter()
        .filter_map(|p| clues.store.since(clues.delivered, *p).map(|since| (*p - since) as f64))
        .collect();
    let late = held.iter().filter(|rows| **rows > 0.0).count();
    if 20 * late < held.len() || late < 3 {
        return;
    }
    let longest = range(&held).1;
    let rows = positions.iter().max().zip(positions.iter().min()).map_or(0.0, |(last, first)| (*last - *first) as f64);
    if longest > 0.5 * rows {
        // a column that stands still is no result that is renewed
        return;
    }
    t.add("stale", Effect::Series, |m, _| {
        m.pick = Pick::Held;
        true
    })
    .fixed("rows", longest + 1.0);
}

/// How much of `y` is left, as a share of its variance, when what goes with a value, with a temperature, its square and the
/// product of both has been taken off; without temperatures, with the value alone.
fn left_by(x: &[f64], celsius: &[f64], y: &[f64]) -> f64 {
    let warm = celsius.len() == x.len();
    let mut rows: Vec<[f64; 6]> = Vec::with_capacity(x.len());
    for (i, (x, y)) in x.iter().zip(y).enumerate() {
        let t = if warm { celsius.get(i).copied().unwrap_or(f64::NAN) } else { 0.0 };
        if x.is_finite() && y.is_finite() && t.is_finite() {
            rows.push([1.0, *x, t, t * t, x * t, *y]);
        }
    }
    if rows.len() < 12 || 2 * rows.len() < x.len() {
        return f64::INFINITY;
    }
    let dot = |i: usize, j: usize, rows: &[[f64; 6]]| -> f64 {
        rows.iter().map(|r| r.get(i).copied().unwrap_or(0.0) * r.get(j).copied().unwrap_or(0.0)).sum()
    };
    // each column made orthogonal to those before it; y is the last
    let mut whole = f64::NAN;
    for k in 0..6 {
        for before in 0..k {
            let size = dot(before, before, &rows);
            let share = if size > 0.0 { dot(before, k, &rows) / size } else { 0.0 };
            for row in &mut rows {
                let by = share * row.get(before).copied().unwrap_or(0.0);
                if let Some(slot) = row.get_mut(k) {
                    *slot -= by;
                }
            }
            if before == 0 && k == 5 {
                whole = dot(5, 5, &rows);
            }
        }
        // nothing new in it but rounding
        let size = dot(k, k, &rows);
        if k < 5 && size < 1e-20 {
            for row in &mut rows {
                if let Some(slot) = row.get_mut(k) {
                    *slot = 0.0;
                }
            }
        }
    }
    if whole > 0.0 { dot(5, 5, &rows) / whole } else { f64::INFINITY }
}

fn columns(t: &mut Trials<'_>) {
    let clues = t.clues;
    let (store, sample) = (clues.store, clues.sample.thinned(COMPARED));
    let at = |column: &Vec<f64>| -> Vec<f64> {
        sample.positions.iter().map(|p| column.get(*p).copied().unwrap_or(f64::NAN)).collect()
    };
    let own_left = left_by(&sample.own, &[], &sample.theirs);
    let own_reading = t
        .model
        .parts
        .first()
        .and_then(|p| clues.measurement.channels.get(p.channel))
        .and_then(|c| c.segments().and_then(|s| s.first()).map(|s| s.reading));
    if let (Join::Alone, Some(own_reading)) = (&t.model.join, own_reading) {
        let left = |input: usize| -> Option<f64> {
            let model = crate::check::model::Model { input: Some(input), ..t.model.clone() };
            let values = model.values(clues.measurement, store, &sample, clues.delivered)?;
            Some(left_by(&values, &[], &sample.theirs))
        };
        let mut ranked: Vec<(f64, usize)> = (0..store.inputs.len())
            .filter(|i| *i != own_reading)
            .filter_map(|i| Some((left(i)?, i)))
            .filter(|(left, _)| *left < own_left)
            .collect();
        ranked.sort_by(|a, b| a.0.total_cmp(&b.0));
        for (_, input) in ranked.into_iter().take(3) {
            let name = clues.measurement.inputs.get(input).map(ToString::to_string).unwrap_or_default();
            t.add("wrong-column", Effect::Series, move |m, _| {
                m.input = Some(input);
                true
            })
            .fixed("column", clues.columns.get(input).map_or(0.0, |n| *n as f64 + 1.0))
            .note(format!("the readings of column '{name}'"));
        }
    }
    let mut ranked: Vec<(f64, usize)> = store
        .results
        .iter()
        .enumerate()
        .filter(|(c, _)| *c != clues.channel)
        .filter(|(c, _)| clues.measurement.channels.get(*c).is_some_and(|c| c.unit == clues.unit))
        .map(|(c, column)| (left_by(&at(column), &[], &sample.theirs), c))
        .filter(|(left, _)| *left < own_left)
        .collect();
    ranked.sort_by(|a, b| a.0.total_cmp(&b.0));
    for (_, other) in ranked.into_iter().take(2) {
        let channel = clues.measurement.channels.get(other);
        let input = channel.and_then(|c| c.segments()).and_then(|s| s.first()).map(|s| s.reading);
        let name = channel.map(|c| c.name.clone()).unwrap_or_default();
        let one = t.add("wrong-column", Effect::Series, move |m, _| {
            m.other = Some(other);
            true
        });
        one.note(format!("the results of channel '{name}'"));
        if let Some(number) = input.and_then(|i| clues.columns.get(i)) {
            one.fixed("column", *number as f64 + 1.0);
        }
    }
}

fn shifts(t: &mut Trials<'_>) {
    let clues = t.clues;
    let (store, sample) = (clues.store, clues.sample.thinned(COMPARED));
    let Some(own) = store.results.get(clues.channel) else { return };
    let celsius = t.model.parts.first().and_then(|p| store.celsius.get(p.channel)).map_or(&[][..], |c| c[0].as_slice());
    let at = |place: &dyn Fn(usize) -> Option<usize>| -> f64 {
        let places: Vec<Option<usize>> = sample.positions.iter().map(|p| place(*p)).collect();
        let of = |column: &[f64]| -> Vec<f64> {
            if column.is_empty() {
                return Vec::new();
            }
            places.iter().map(|p| p.and_then(|p| column.get(p)).copied().unwrap_or(f64::NAN)).collect()
        };
        left_by(&of(own), &of(celsius), &sample.theirs)
    };
    let now = at(&|p| Some(p));
    let interval = {
        let steps: Vec<f64> = store.seconds.iter().zip(store.seconds.iter().skip(1)).map(|(a, b)| b - a).collect();
        median(steps.get(..steps.len().min(4096)).unwrap_or(&[]))
    };
    let best = |lefts: Vec<(f64, i64)>| -> Vec<i64> {
        let mut lefts: Vec<(f64, i64)> = lefts.into_iter().filter(|(left, _)| *left < 0.9 * now).collect();
        lefts.sort_by(|a, b| a.0.total_cmp(&b.0));
        lefts.into_iter().take(2).map(|(_, by)| by).collect()
    };
    let rows = (-MOST_ROWS..=MOST_ROWS).filter(|r| *r != 0).map(|rows| (at(&|p| store.before(p, rows)), rows));
    for rows in best(rows.collect()) {
        let one = t.add("time-shift", Effect::Series, move |m, _| {
            m.pick = Pick::Rows(rows);
            true
        });
        one.fixed("rows", rows as f64);
        if interval > 0.0 {
            let shift = rows as f64 * interval;
            one.fixed("shift, s", crate::check::explain::roundest(shift, 1e-6 * shift.abs()).0);
        }
    }
    if !(interval > 0.0 && interval.is_finite()) {
        return;
    }
    let slack = 0.25 * interval;
    let hours = (-MOST_HOURS..=MOST_HOURS).filter(|h| *h != 0);
    let hours = hours.map(|h| (at(&|p| store.earlier(p, 3600.0 * h as f64, slack)), h));
    for hours in best(hours.collect()) {
        let hours = hours as f64;
        t.add("hour-shift", Effect::Series, move |m, _| {
            m.pick = Pick::Seconds(3600.0 * hours, slack);
            true
        })
        .fixed("hours", hours);
    }
}

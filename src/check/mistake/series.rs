//! Mistakes with rows, columns and figures.

use std::format;
use std::string::ToString;
use std::vec::Vec;

use super::{Effect, Free, Trials, step};
use crate::check::model::{Join, Pick, Step};
use crate::check::robust::{median, range};

/// Rows that a shift is looked for in.
const MOST_ROWS: i64 = 64;
/// Rows that are compared for each shift.
const COMPARED: usize = 400;
/// Whole hours that a clock is wrong by at most.
const MOST_HOURS: i32 = 14;

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
    let typical = median(&sample.half) * 2.0;
    if typical > 0.0 {
        t.add("truncated", Effect::Series, move |m, _| step(m, Step::Cut(typical))).fixed("step", typical);
    }
    for decimals in 1..=4 {
        let one = t.add("decimal-comma", Effect::Series, move |m, _| step(m, Step::MarkLost(decimals)));
        one.fixed("decimals", f64::from(decimals)).note("the mark dropped");
        one.lost = decimals;
        t.add("decimal-comma", Effect::Series, move |m, _| step(m, Step::Whole(decimals)))
            .fixed("decimals", f64::from(decimals))
            .note("what stands behind the mark dropped");
    }
    clipped(t);
    stale(t);
    columns(t);
    shifts(t);
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
    t.add("stale", Effect::Series, |m, _| {
        m.pick = Pick::Held;
        true
    })
    .fixed("rows", longest + 1.0);
}

/// How much of `theirs` a straight line of another column leaves: share of its variance.
fn left_by_line(x: &[f64], y: &[f64]) -> f64 {
    let (mut n, mut sx, mut sy) = (0.0, 0.0, 0.0);
    let pairs = || x.iter().zip(y).filter(|(x, y)| x.is_finite() && y.is_finite());
    for (x, y) in pairs() {
        n += 1.0;
        sx += x;
        sy += y;
    }
    if n < 8.0 || 2.0 * n < x.len() as f64 {
        return f64::INFINITY;
    }
    let (mx, my) = (sx / n, sy / n);
    let (mut xx, mut xy, mut yy) = (0.0, 0.0, 0.0);
    for (x, y) in pairs() {
        xx += (x - mx) * (x - mx);
        xy += (x - mx) * (y - my);
        yy += (y - my) * (y - my);
    }
    if xx > 0.0 && yy > 0.0 { (1.0 - xy * xy / (xx * yy)).max(0.0) } else { f64::INFINITY }
}

fn columns(t: &mut Trials<'_>) {
    let clues = t.clues;
    let (store, sample) = (clues.store, clues.sample.thinned(COMPARED));
    let at = |column: &Vec<f64>| -> Vec<f64> {
        sample.positions.iter().map(|p| column.get(*p).copied().unwrap_or(f64::NAN)).collect()
    };
    let own_left = left_by_line(&sample.own, &sample.theirs);
    let own_reading = t
        .model
        .parts
        .first()
        .and_then(|p| clues.measurement.channels.get(p.channel))
        .and_then(|c| c.segments().and_then(|s| s.first()).map(|s| s.reading));
    if let (Join::Alone, Some(own_reading)) = (&t.model.join, own_reading) {
        let mut ranked: Vec<(f64, usize)> = store
            .inputs
            .iter()
            .enumerate()
            .filter(|(i, _)| *i != own_reading)
            .map(|(i, column)| (left_by_line(&at(column), &sample.theirs), i))
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
        .map(|(c, column)| (left_by_line(&at(column), &sample.theirs), c))
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
    let now = left_by_line(&sample.own, &sample.theirs);
    let at = |place: &dyn Fn(usize) -> Option<usize>| -> f64 {
        let shifted: Vec<f64> =
            sample.positions.iter().map(|p| place(*p).and_then(|p| own.get(p)).copied().unwrap_or(f64::NAN)).collect();
        left_by_line(&shifted, &sample.theirs)
    };
    let interval = {
        let steps: Vec<f64> = store.seconds.iter().zip(store.seconds.iter().skip(1)).map(|(a, b)| b - a).collect();
        median(steps.get(..steps.len().min(4096)).unwrap_or(&[]))
    };
    let mut best = (0.9 * now, 0);
    for rows in (-MOST_ROWS..=MOST_ROWS).filter(|r| *r != 0) {
        let left = at(&|p| store.before(p, rows));
        if left < best.0 {
            best = (left, rows);
        }
    }
    if best.1 != 0 {
        let rows = best.1;
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
    let mut best = (0.9 * now, 0);
    for hours in (-MOST_HOURS..=MOST_HOURS).filter(|h| *h != 0) {
        let left = at(&|p| store.earlier(p, 3600.0 * f64::from(hours), slack));
        if left < best.0 {
            best = (left, hours);
        }
    }
    if best.1 != 0 {
        let hours = f64::from(best.1);
        t.add("hour-shift", Effect::Series, move |m, _| {
            m.pick = Pick::Seconds(3600.0 * hours, slack);
            true
        })
        .fixed("hours", hours);
    }
}

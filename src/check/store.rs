//! Rows that are kept in memory: readings, own values, and the values that were delivered.

use std::vec::Vec;

use crate::measurement::{Converted, Measurement, Segment};

/// Rows that a delivered temperature is looked for in, on either side.
const MOST_BETWEEN: i64 = 1024;

/// Rows side by side. Runs of successive rows stand together.
#[derive(Clone, Debug, Default)]
pub(super) struct Store {
    /// The recording columns that the channels read.
    pub(super) inputs: Vec<Vec<f64>>,
    /// Own values of every channel.
    pub(super) results: Vec<Vec<f64>>,
    /// For every channel the temperatures that were used.
    pub(super) celsius: Vec<[Vec<f64>; 6]>,
    /// Delivered values, for each that is checked, in the unit of its channel.
    pub(super) theirs: Vec<Vec<f64>>,
    /// Time of each row, s; empty where there is none.
    pub(super) seconds: Vec<f64>,
    /// The same, or that of the last row that has one.
    pub(super) clock: Vec<f64>,
    /// Number of each row, from 1.
    pub(super) row: Vec<u64>,
    /// Which run each row belongs to.
    pub(super) run: Vec<u32>,
}

/// Delivered values that go along with a block: for each that is checked.
pub(super) type Theirs = Vec<Vec<f64>>;

impl Store {
    /// Returns how many rows there are.
    pub(super) fn len(&self) -> usize {
        self.row.len()
    }

    /// Adds rows `from..to` of a block whose first row has this number; `clock` is the last time before.
    pub(super) fn append(&mut self, block: &Converted<Theirs>, from: usize, to: usize, first: u64, clock: &mut f64) {
        let add = |to_column: &mut Vec<f64>, values: &[f64]| {
            to_column.extend(values.get(from..to).unwrap_or(&[]));
        };
        self.inputs.resize_with(block.inputs.len(), Vec::new);
        for (to, column) in self.inputs.iter_mut().zip(&block.inputs) {
            add(to, &column.values);
        }
        self.results.resize_with(block.results.len(), Vec::new);
        for (to, column) in self.results.iter_mut().zip(&block.results) {
            add(to, &column.values);
        }
        self.celsius.resize_with(block.temperatures.len(), Default::default);
        for (to, columns) in self.celsius.iter_mut().zip(&block.temperatures) {
            for (to, column) in to.iter_mut().zip(columns) {
                add(to, &column.values);
            }
        }
        self.theirs.resize_with(block.payload.len(), Vec::new);
        for (to, values) in self.theirs.iter_mut().zip(&block.payload) {
            add(to, values);
        }
        add(&mut self.seconds, &block.seconds);
        let continues = self.row.last().is_some_and(|last| *last + 1 == first + from as u64);
        let run = self.run.last().map_or(0, |r| r + u32::from(!continues));
        for i in from..to {
            let t = block.seconds.get(i).copied().unwrap_or(f64::NAN);
            *clock = if t.is_finite() { t } else { *clock };
            self.clock.push(*clock);
            self.row.push(first + i as u64);
            self.run.push(run);
        }
    }

    /// The position so many rows before another, in the same run.
    pub(super) fn before(&self, position: usize, rows: i64) -> Option<usize> {
        let at = usize::try_from(i64::try_from(position).ok()? - rows).ok()?;
        (self.run.get(at)? == self.run.get(position)?).then_some(at)
    }

    /// The position of a row whose time is so many seconds before that of another.
    pub(super) fn earlier(&self, position: usize, seconds: f64, slack: f64) -> Option<usize> {
        let wanted = self.seconds.get(position)? - seconds;
        let at = self.seconds.partition_point(|t| *t < wanted - slack);
        self.seconds.get(at).filter(|t| (**t - wanted).abs() <= slack).map(|_| at)
    }

    /// A delivered value, in a row without one on the line between those about it; NaN where there is none on either side.
    pub(super) fn delivered(&self, delivered: usize, position: usize) -> f64 {
        let Some(column) = self.theirs.get(delivered) else { return f64::NAN };
        let at = |i: usize| column.get(i).copied().filter(|v| v.is_finite());
        if let Some(value) = at(position) {
            return value;
        }
        let near = |step: i64| {
            (1..=MOST_BETWEEN).map_while(|n| self.before(position, -step * n)).find_map(|i| Some((i, at(i)?)))
        };
        match (near(-1), near(1)) {
            (Some((from, a)), Some((to, b))) => a + (b - a) * (position - from) as f64 / (to - from) as f64,
            _ => f64::NAN,
        }
    }

    /// The position from which on a delivered value stands unchanged.
    pub(super) fn since(&self, delivered: usize, position: usize) -> Option<usize> {
        let column = self.theirs.get(delivered)?;
        let value = column.get(position)?;
        let mut at = position;
        while let Some(before) = self.before(at, 1).filter(|b| column.get(*b) == Some(value)) {
            at = before;
        }
        // what stands unchanged since before the run began is not known
        (self.before(at, 1).is_some() || self.row.get(at) == Some(&1)).then_some(at)
    }
}

/// What the readings of one channel are at some rows.
#[derive(Clone, Debug, Default)]
pub(super) struct Gathered {
    pub(super) readings: Vec<f64>,
    pub(super) supplies: Vec<f64>,
    pub(super) celsius: [Vec<f64>; 6],
    /// Which segment is in force; empty where there is one alone.
    pub(super) segment: Vec<usize>,
    /// Own values.
    pub(super) own: Vec<f64>,
    /// Time, s; empty where there is none.
    pub(super) seconds: Vec<f64>,
}

fn pick(column: &[f64], at: &[Option<usize>]) -> Vec<f64> {
    if column.is_empty() {
        return Vec::new();
    }
    at.iter().map(|i| i.and_then(|i| column.get(i)).copied().unwrap_or(f64::NAN)).collect()
}

impl Gathered {
    /// Takes the rows at these positions; a position that is not there gives NaN. `input` reads another column instead.
    pub(super) fn take(
        store: &Store,
        measurement: &Measurement,
        channel: usize,
        at: &[Option<usize>],
        input: Option<usize>,
    ) -> Self {
        let own = store.results.get(channel).map(|c| pick(c, at)).unwrap_or_default();
        let segments = measurement.channels.get(channel).and_then(|c| c.segments()).map_or(&[][..], Vec::as_slice);
        let mut out = Self { own, seconds: pick(&store.seconds, at), ..Self::default() };
        let Some(first) = segments.first() else { return out };
        let column = |i: usize| store.inputs.get(i).map(|c| pick(c, at)).unwrap_or_default();
        if segments.len() > 1 {
            let force = |i: &Option<usize>| {
                let time = i.and_then(|i| store.clock.get(i)).copied().unwrap_or(f64::NEG_INFINITY);
                in_force(segments, time)
            };
            out.segment = at.iter().map(force).collect();
        }
        // a change may read another column
        let read = |of: &dyn Fn(&Segment) -> Option<usize>| -> Vec<f64> {
            if segments.len() == 1 {
                return of(first).map(column).unwrap_or_default();
            }
            let columns: Vec<Vec<f64>> = segments.iter().map(|s| of(s).map(column).unwrap_or_default()).collect();
            let one = |(row, k): (usize, &usize)| columns.get(*k).and_then(|c| c.get(row)).copied().unwrap_or(f64::NAN);
            out.segment.iter().enumerate().map(one).collect()
        };
        let mut readings = read(&|s| Some(input.unwrap_or(s.reading)));
        let mut supplies = read(&|s| s.supply);
        for (values, paired) in
            [(&mut readings, first.paired.filter(|_| input.is_none())), (&mut supplies, first.supply_paired)]
        {
            if let Some(paired) = paired {
                for (value, second) in values.iter_mut().zip(column(paired.input)) {
                    *value = paired.how.together(*value, second);
                }
            }
        }
        out.readings = readings;
        out.supplies = supplies;
        if let Some(all) = store.celsius.get(channel) {
            for (to, from) in out.celsius.iter_mut().zip(all) {
                *to = pick(from, at);
            }
        }
        out
    }
}

/// The last segment that has begun.
fn in_force(segments: &[Segment], time: f64) -> usize {
    let begun = |s: &Segment| s.from.as_ref().map_or(f64::NEG_INFINITY, |m| m.seconds) <= time;
    segments.iter().rposition(begun).unwrap_or(0)
}

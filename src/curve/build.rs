//! From a chain to its table: pieces as wide as the tolerance lets them be, then the proof, then a look at many readings.

use std::string::String;
use std::vec::Vec;

use super::ends::Reader;
use super::fit::{Grid, power};
use super::prove::{Claim, Piece};
use crate::chain::enclosure::Enclosure;
use crate::chain::{Chain, Element, Inputs, Output, Plan, Signal, Word};
use crate::strain::Transducer;

pub use super::error::Error;
use super::table::bytes;
pub use super::table::{Curve, Data, Floating, Integers};

/// Numbers that a table is made of.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[non_exhaustive]
pub enum Numbers {
    /// Doubles.
    Double,
    /// Single precision.
    Single,
    /// 32-bit integers.
    Fixed,
}

/// What is asked for.
#[derive(Clone, Copy, Debug)]
pub struct Request<'a> {
    /// The chain.
    pub chain: &'a Chain,
    /// What stands beside every reading, where the chain uses it; `reading` is ignored.
    pub inputs: &'a Inputs,
    /// What the chain's results are multiplied by: a modulus, where stress is wanted; otherwise 1.
    pub factor: f64,
    /// Largest error, in the unit of the result.
    pub tolerance: f64,
    /// Lowest result; `None` = as far as the chain goes.
    pub from: Option<f64>,
    /// Highest result.
    pub to: Option<f64>,
    /// Highest power, 1..=3; `None` = the one that takes least room.
    pub degree: Option<u8>,
    /// Numbers of the table.
    pub numbers: Numbers,
}

/// Most pieces of a table.
pub const MOST_PIECES: usize = 4096;

/// The fits take this share of the tolerance at first, so that the proof has room.
const SHARES: [f64; 3] = [0.97, 0.9, 0.7];

/// A stretch is not halved any more where its bound is below this multiple of the largest error seen.
const ENOUGH: f64 = 1.08;

/// Readings that are looked at in the end.
const LOOKS: i32 = 100_000;

impl Curve {
    /// Condenses a chain.
    ///
    /// # Accuracy
    /// The table is within [`bound`](Curve::bound), at most the tolerance, of the chain, for every reading of the table; that is
    /// proven, and holds against 60-digit arithmetic for every kind of chain (tests/curve.rs).
    /// # Errors
    /// What is wrong with the chain, or why this tolerance cannot be had over this range, with one that can.
    /// # Example
    /// ```
    /// use ohmwright::chain::{Chain, Element, Inputs, Network, Word};
    /// use ohmwright::curve::build::{Curve, Numbers, Request};
    /// use ohmwright::platinum::IEC_60751;
    ///
    /// let chain = Chain::new(Network::Resistance { leads: None }, Element::Platinum(IEC_60751));
    /// let curve = Curve::new(&Request {
    ///     chain: &chain,
    ///     inputs: &Inputs::default(),
    ///     factor: 1.0,
    ///     tolerance: 0.001,
    ///     from: Some(-50.0),
    ///     to: Some(150.0),
    ///     degree: None,
    ///     numbers: Numbers::Single,
    /// })?;
    /// // 109.73 ohm is 25 °C to half its last digit (IEC 60751:2008, table of a 100 ohm element)
    /// assert!((curve.value(109.73).unwrap() - 25.0).abs() < 0.013 + curve.bound);
    /// assert_eq!(curve.value(200.0), Err(Word::OutOfRange));
    /// # Ok::<(), ohmwright::curve::build::Error>(())
    /// ```
    pub fn new(request: &Request<'_>) -> Result<Self, Error> {
        Builder::new(request)?.built(request)
    }

    /// Proves the bound of this table again, from the numbers as they are stored.
    ///
    /// - `request`: what the table was built for; its tolerance is what must hold.
    /// - Returns a bound of |table − chain|, at most the tolerance.
    ///
    /// # Errors
    /// `Error::TooTight` where the table does not keep the tolerance, or where that cannot be proven; whatever is wrong with
    /// the chain.
    pub fn proven(&self, request: &Request<'_>) -> Result<f64, Error> {
        let mut builder = Builder::new(request)?;
        let [low, high] = self.readings;
        (builder.low, builder.high, builder.grid) = (low, high, self.grid());
        let tolerance = builder.narrowed(request.tolerance);
        builder.proven(self, tolerance).map_err(|reading| Error::TooTight { tolerance, reading, tightest: None })
    }
}

/// Why one tolerance cannot be had.
enum Failed {
    Tight(f64),
    Long,
}

/// What stays the same whatever the tolerance.
struct Builder {
    plan: Plan,
    inputs: Inputs,
    factor: f64,
    whole: bool,
    enclosure: Enclosure,
    grid: Grid,
    /// Readings of the table.
    low: f64,
    high: f64,
    results: [f64; 2],
    /// Farthest readings that words are told of.
    outside: [f64; 2],
}

impl Builder {
    fn new(request: &Request<'_>) -> Result<Self, Error> {
        if !(request.tolerance > 0.0 && request.tolerance.is_finite()) {
            return Err(Error::Tolerance(request.tolerance));
        }
        if let Some(degree) = request.degree.filter(|d| !(1..=3).contains(d)) {
            return Err(Error::Degree(degree));
        }
        let chain = request.chain;
        let plan = chain.plan()?;
        let enclosure = Enclosure::new(chain, request.inputs, request.factor)?;
        let whole = chain.reading.signal == Signal::Count && chain.reading.exponent == 0;
        let outside = match &chain.converter {
            Some(converter) if whole => {
                let (low, high) = converter.end_codes();
                [low - 1.0, high + 1.0]
            }
            // what single precision holds
            _ => [-f64::from(f32::MAX), f64::from(f32::MAX)],
        };
        let mut builder = Self {
            plan,
            inputs: *request.inputs,
            factor: request.factor,
            whole,
            enclosure,
            grid: Grid::Double,
            low: 0.0,
            high: 0.0,
            results: [0.0; 2],
            outside,
        };
        let [low, high] = builder.range(request)?;
        builder.grid = match request.numbers {
            Numbers::Double => Grid::Double,
            Numbers::Single => Grid::Single,
            Numbers::Fixed => {
                let a = builder.reader().value(low) * builder.factor;
                let b = builder.reader().value(high) * builder.factor;
                let reading_bits = if whole { 0 } else { bits(2.0 * low.abs().max(high.abs())) };
                let result_bits = bits(a.abs().max(b.abs()).max(f64::MIN_POSITIVE));
                Grid::Fixed { reading_bits, result_bits }
            }
        };
        builder.snap(request, low, high)?;
        Ok(builder)
    }

    fn reader(&self) -> Reader<'_> {
        Reader { plan: &self.plan, inputs: &self.inputs, whole: self.whole }
    }

    /// Result of a reading; NaN where there is none.
    fn value(&self, reading: f64) -> f64 {
        self.reader().value(reading) * self.factor
    }

    /// Lowest and highest reading that were asked for.
    fn range(&self, request: &Request<'_>) -> Result<[f64; 2], Error> {
        let reader = self.reader();
        let forward =
            |result: f64| self.plan.forward(result / self.factor, self.inputs).map_err(|_| Error::End { result });
        let ends = [request.from, request.to].map(|end| end.map(forward).transpose());
        let [from, to] = ends;
        let (from, to) = (from?, to?);
        if let (Some(a), Some(b)) = (from, to) {
            return Ok([a.min(b), a.max(b)]);
        }
        // a reading that has a result, and from there as far as it goes
        let inside =
            from.or(to).filter(|r| reader.good(*r)).or_else(|| self.inside(request.chain)).ok_or(Error::Empty)?;
        let [low, high] = self.outside;
        let (low, high) = (reader.last_good(inside, low), reader.last_good(inside, high));
        let endless = |reading: f64, outside: f64| reading == outside;
        if endless(low, self.outside[0]) || endless(high, self.outside[1]) {
            return Err(Error::Endless);
        }
        let [a, b] = [low, high].map(|r| self.value(r));
        // the end that was stated, and the other one of the chain
        Ok(match (from, to) {
            (Some(from), None) if a < b => [from, high],
            (Some(from), None) => [low, from],
            (None, Some(to)) if a < b => [low, to],
            (None, Some(to)) => [to, high],
            _ => [low, high],
        })
    }

    /// A reading with a result, well inside.
    fn inside(&self, chain: &Chain) -> Option<f64> {
        let outside = |celsius: f64| match chain.output {
            Output::Kelvin => celsius + 273.15,
            Output::Fahrenheit => 1.8 * celsius + 32.0,
            _ => celsius,
        };
        let mut tries = Vec::new();
        if let Element::Transducer { law: Transducer::Certificate(law), .. } = &chain.element {
            let [a, b] = law.believed();
            tries.push((0.5 * a + 0.5 * b) * law.load_scale);
        }
        if let Some([low, high]) = chain.element.range_celsius() {
            for share in [0.5, 0.25, 0.75, 0.1, 0.9] {
                tries.push(outside(low + (high - low) * share));
            }
        }
        tries.extend([0.0, 1.0, -1.0]);
        tries.into_iter().find_map(|result| {
            let reading = self.plan.forward(result, self.inputs).ok()?;
            let reading = if self.whole { libm::round(reading) } else { reading };
            self.reader().good(reading).then_some(reading)
        })
    }

    /// The ends on the grid of the table: outward where the chain has a result there, else inward.
    fn snap(&mut self, request: &Request<'_>, low: f64, high: f64) -> Result<(), Error> {
        let grid = if self.whole && !matches!(self.grid, Grid::Fixed { .. }) {
            // codes are whole whatever holds them
            Grid::Fixed { reading_bits: 0, result_bits: 0 }
        } else {
            self.grid
        };
        if matches!(request.numbers, Numbers::Fixed) && low.abs().max(high.abs()) > power(30) {
            return Err(Error::Readings);
        }
        // beyond 2²⁴ single precision skips codes
        if self.whole && matches!(request.numbers, Numbers::Single) && low.abs().max(high.abs()) > power(24) {
            return Err(Error::Readings);
        }
        let good = |x: f64| self.reader().good(x);
        let (down, up) = (grid.below(low), grid.above(high));
        let low = if good(down) { down } else { grid.above(low) };
        let high = if good(up) { up } else { grid.below(high) };
        if low.is_nan() || high.is_nan() || low >= high {
            return Err(Error::Empty);
        }
        (self.low, self.high) = (low, high);
        let [a, b] = [self.value(low), self.value(high)];
        if a.is_nan() || b.is_nan() {
            return Err(Error::Empty);
        }
        self.results = [a.min(b), a.max(b)];
        Ok(())
    }

    /// What holds within a quarter of the results holds within more, where intervals would be too wide to show it.
    fn narrowed(&self, tolerance: f64) -> f64 {
        let [a, b] = self.results;
        tolerance.min(0.25 * (b - a))
    }

    /// Builds for the tolerance that was asked for, or says which can be had.
    fn built(&self, request: &Request<'_>) -> Result<Curve, Error> {
        let tolerance = self.narrowed(request.tolerance);
        match self.attempt(tolerance, request.degree) {
            Ok(curve) => Ok(Curve { tolerance: request.tolerance, ..curve }),
            Err(failed) => {
                let tightest = self.tightest(tolerance, request.degree);
                Err(match failed {
                    Failed::Tight(reading) => Error::TooTight { tolerance, reading, tightest },
                    Failed::Long => Error::TooLong { most: MOST_PIECES, tolerance, tightest },
                })
            }
        }
    }

    /// The tightest tolerance above one that cannot be had, within a quarter of itself and in two digits.
    fn tightest(&self, refused: f64, degree: Option<u8>) -> Option<f64> {
        let had = |tolerance: f64| {
            let shown = two_digits(tolerance);
            self.attempt(shown, degree).ok().map(|_| shown)
        };
        let [a, b] = self.results;
        // no table holds closer than doubles do, and a straight line as far apart as the ends always may
        let mut low = refused.max(f64::EPSILON * 0.01 * (b - a));
        let (mut high, mut shown) = loop {
            let high = 2.0 * low;
            match had(high) {
                Some(shown) => break (high, shown),
                None if high > 4.0 * (b - a) => return None,
                None => low = high,
            }
        };
        while high > 1.25 * low {
            let middle = libm::sqrt(low * high);
            match had(middle) {
                Some(found) => (high, shown) = (middle, found),
                None => low = middle,
            }
        }
        Some(shown)
    }

    fn attempt(&self, tolerance: f64, degree: Option<u8>) -> Result<Curve, Failed> {
        let mut failed = Failed::Long;
        for share in SHARES {
            // the degree that takes least room
            let degrees = degree.map_or(std::vec![3, 2, 1], |d| std::vec![usize::from(d)]);
            let mut best: Option<(usize, usize, Vec<Piece>)> = None;
            for degree in degrees {
                let most =
                    best.as_ref().map_or(MOST_PIECES, |(size, ..)| size / (4 * (degree + 2)) + 1).min(MOST_PIECES);
                match self.segments(tolerance, share, degree, most) {
                    Ok(pieces) => {
                        let size = bytes(pieces.len(), degree, 4, false);
                        if best.as_ref().is_none_or(|(least, ..)| size < *least) {
                            best = Some((size, degree, pieces));
                        }
                    }
                    Err(why) => failed = why,
                }
            }
            let Some((_, degree, pieces)) = best else { continue };
            let mut curve = self.assembled(&pieces, degree, tolerance);
            // of the numbers as they are stored
            match self.proven(&curve, tolerance) {
                Ok(bound) => {
                    curve.bound = bound;
                    self.look(&mut curve);
                    return Ok(curve);
                }
                Err(reading) => failed = Failed::Tight(reading),
            }
        }
        Err(failed)
    }

    /// Pieces, each as wide as the tolerance lets it be.
    fn segments(&self, tolerance: f64, share: f64, degree: usize, most: usize) -> Result<Vec<Piece>, Failed> {
        let value = |x: f64| self.value(x);
        let fits = |from: f64, to: f64| {
            let piece = self.grid.fit(from, to, degree, &value)?;
            let room = tolerance - self.grid.rounding(&piece, degree);
            (Grid::seen(&piece, &value) <= room * share).then_some(piece)
        };
        let knots = if self.whole && self.grid == Grid::Single {
            Grid::Fixed { reading_bits: 0, result_bits: 0 }
        } else {
            self.grid
        };
        let mut pieces = Vec::new();
        let mut from = self.low;
        let mut width = self.high - self.low;
        while from < self.high {
            if pieces.len() >= most {
                return Err(Failed::Long);
            }
            let at = |width: f64| {
                let to = knots.below(from + width);
                if to >= self.high { self.high } else { to.max(knots.next(from)) }
            };
            // a width that fits
            let mut good = None;
            loop {
                let to = at(width);
                if let Some(piece) = fits(from, to) {
                    good = Some(piece);
                    break;
                }
                if to <= knots.next(from) {
                    break;
                }
                width *= 0.5;
            }
            let Some(mut best) = good else { return Err(Failed::Tight(from)) };
            // the widest, to a hundredth
            let mut bad = None;
            while best.to < self.high {
                let wider = match bad {
                    None => 2.0 * width,
                    Some(bad) => 0.5 * (width + bad),
                };
                if bad.is_some_and(|bad: f64| bad - width <= 0.01 * width) || at(wider) <= best.to {
                    break;
                }
                match fits(from, at(wider)) {
                    Some(piece) => (best, width) = (piece, wider),
                    None => bad = Some(wider),
                }
            }
            from = best.to;
            pieces.push(best);
            // a narrow last piece is no wish of anybody, but does no harm
        }
        Ok(pieces)
    }

    /// The bound over all pieces of a table; the reading about which it cannot be had.
    fn proven(&self, curve: &Curve, tolerance: f64) -> Result<f64, f64> {
        let value = |x: f64| self.value(x);
        let grid = curve.grid();
        let degree = curve.degree;
        let pieces = curve.stored().ok_or(self.low)?;
        let mut next = self.low;
        for piece in &pieces {
            if piece.from != next || piece.to <= piece.from {
                return Err(piece.from);
            }
            next = piece.to;
        }
        if next != self.high {
            return Err(next);
        }
        let seen = pieces.iter().fold(0.0_f64, |most, p| most.max(Grid::seen(p, &value) + grid.rounding(p, degree)));
        let mut bound = 0.0_f64;
        for piece in &pieces {
            let rounding = grid.rounding(piece, degree);
            // with room for the rounding of this sum
            let reach = tolerance * (1.0 - 4.0 * f64::EPSILON) - rounding;
            if reach.is_nan() || reach <= 0.0 {
                return Err(piece.from);
            }
            let enough = (seen * ENOUGH - rounding).max(0.05 * seen).min(reach);
            let claim = Claim { enclosure: &self.enclosure, reach, enough };
            bound = bound.max((claim.bound(piece, value)? + rounding).next_up());
        }
        // as it is printed
        let shown = upward(bound);
        Ok(if shown <= tolerance { shown } else { bound })
    }

    fn assembled(&self, pieces: &[Piece], degree: usize, tolerance: f64) -> Curve {
        let reader = self.reader();
        let [mut below, mut above] = [(self.low, self.outside[0]), (self.high, self.outside[1])]
            .map(|(end, outside)| reader.beyond(end, outside));
        if !self.whole {
            // an infinite reading has a word of its own
            for (edges, infinite) in [(&mut below, f64::NEG_INFINITY), (&mut above, f64::INFINITY)] {
                let word = reader.word(infinite);
                if edges.last().is_none_or(|(_, last)| *last != word) {
                    edges.push((infinite, word));
                }
            }
        }
        let knots: Vec<f64> = pieces.iter().map(|p| p.from).chain([self.high]).collect();
        let coefficients = || pieces.iter().flat_map(|p| p.c.iter().take(degree + 1).copied());
        let data = match self.grid {
            Grid::Double => Data::Double(Floating { knots, coefficients: coefficients().collect(), below, above }),
            Grid::Single => Data::Single(Floating {
                knots: knots.iter().map(|k| *k as f32).collect(),
                coefficients: coefficients().map(|c| c as f32).collect(),
                below: below.iter().map(|(edge, word)| (self.grid.below(*edge) as f32, *word)).collect(),
                above: above.iter().map(|(edge, word)| (self.grid.above(*edge) as f32, *word)).collect(),
            }),
            Grid::Fixed { reading_bits, result_bits } => {
                let steps = power(reading_bits);
                // an edge that no integer reaches is left out, but not the first
                let edges = |edges: &[(f64, Word)], up: bool| -> Vec<(i32, Word)> {
                    let whole = |x: f64| if up { self.grid.above(x) * steps } else { self.grid.below(x) * steps };
                    let all = edges.iter().map(|(edge, word)| (whole(*edge), *word));
                    let reached = all
                        .enumerate()
                        .filter(|(i, (x, _))| *i == 0 || (f64::from(i32::MIN)..=f64::from(i32::MAX)).contains(x));
                    reached.map(|(_, (x, word))| (x as i32, word)).collect()
                };
                Data::Fixed(Integers {
                    knots: knots.iter().map(|k| (k * steps) as i32).collect(),
                    coefficients: coefficients().map(|c| (c * power(result_bits)) as i32).collect(),
                    shifts: pieces.iter().map(|p| self.grid.shift(p.from, p.to)).collect(),
                    below: edges(&below, false),
                    above: edges(&above, true),
                    reading_bits,
                    result_bits,
                })
            }
        };
        Curve {
            data,
            degree,
            readings: [self.low, self.high],
            results: self.results,
            tolerance,
            bound: f64::INFINITY,
            seen: 0.0,
            looks: 0,
        }
    }

    /// Looks at many readings, every code where there are few.
    fn look(&self, curve: &mut Curve) {
        let width = self.high - self.low;
        let few = self.whole && width <= f64::from(LOOKS);
        let count = if few { width as i32 } else { LOOKS };
        for i in 0..=count {
            let x = self.low + width * (f64::from(i) / f64::from(count));
            let x = match self.grid {
                _ if self.whole => libm::round(x),
                Grid::Double => x.min(self.high),
                grid => grid.below(x).max(self.low),
            };
            let Ok(value) = curve.value(x) else { continue };
            let off = (value - self.value(x)).abs();
            if off > curve.seen {
                curve.seen = off;
            }
            curve.looks += 1;
        }
    }
}

/// Bits behind the point that leave the number below 2³⁰.
fn bits(most: f64) -> i32 {
    (-30..=60).rev().find(|bits| most * power(*bits) < power(30)).unwrap_or(-30)
}

/// Two digits, upwards.
fn two_digits(x: f64) -> f64 {
    shortened(x, 1)
}

/// Three digits, upwards.
fn upward(x: f64) -> f64 {
    shortened(x, 2)
}

/// So many digits behind the first, not below `x`.
fn shortened(x: f64, digits: usize) -> f64 {
    let text: String = std::format!("{x:.digits$e}");
    let near: f64 = text.parse().unwrap_or(x);
    if near >= x {
        return near;
    }
    // one more in the last digit
    let (mantissa, exponent) = text.split_once('e').unwrap_or((&text, "0"));
    let step = std::format!("{}e{exponent}", if digits == 1 { "0.1" } else { "0.01" });
    let sum = mantissa.parse::<f64>().unwrap_or(0.0)
        + step.split('e').next().and_then(|s| s.parse::<f64>().ok()).unwrap_or(0.0);
    std::format!("{sum:.digits$}e{exponent}").parse().unwrap_or(x)
}

//! Tables with a proven bound: the proof against 60-digit arithmetic, against tampering, and against printed tables.
//!
//! - Truth: the chain forwards in 60-digit arithmetic (`support/big.rs`), which shares nothing with intervals, fits and plans.
//! - IEC 751 Amd 2:1995 / DIN EN 60751:2009, resistances of a 100 Ω element: data/temperature/pt100_iec60751_table_10C.csv.
#![cfg(feature = "std")]

mod support;

use ohmwright::chain::{Chain, Derivative, Element, Inputs, Network, Real, Sides, Signal, Word};
use ohmwright::curve::build::{Curve, Data, Error, Numbers, Request};
use ohmwright::curve::{Interval, Jet};
use ohmwright::platinum::IEC_60751;
use support::big::Big;
use support::chains::{self, Case};
use support::report::Report;
use support::table::Table;

const ALL: [Numbers; 3] = [Numbers::Double, Numbers::Single, Numbers::Fixed];

/// Pseudo-random numbers, the same every time (Knuth's multiplicative generator).
struct Draws(u64);

impl Draws {
    /// A number of 0..1.
    fn unit(&mut self) -> f64 {
        self.0 = self.0.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        (self.0 >> 11) as f64 / (1_u64 << 53) as f64
    }
}

/// Two to a power.
fn two(exponent: i32) -> f64 {
    libm::ldexp(1.0, exponent)
}

/// A request over the span of a case.
fn request(case: &Case, tolerance: f64, numbers: Numbers) -> Request<'_> {
    let [low, high] = case.span;
    Request {
        chain: &case.chain,
        inputs: &case.inputs,
        factor: 1.0,
        tolerance,
        from: Some(low),
        to: Some(high),
        degree: None,
        numbers,
    }
}

/// What the chain gives for a reading, as accurate as 60 digits make it: a result in doubles, and what is to be added to it.
fn truth(chain: &Chain, inputs: &Inputs, reading: f64) -> (f64, f64) {
    let plan = chain.plan().unwrap();
    let near = plan.one(Inputs { reading, ..*inputs }).value;
    let slope = chain.derivative(Derivative::Reading, near, inputs).unwrap();
    let rest = Big::double(|| {
        let sides = Sides {
            supply: Some(Big::new(inputs.supply)),
            celsius: Some(Big::new(inputs.celsius)),
            lead_celsius: Some(Big::new(inputs.lead_celsius)),
            arm_celsius: inputs.arm_celsius.map(|t| Some(Big::new(t))),
        };
        let big = chain.map(|_, v| Big::new(v));
        Big::new(reading) - big.forward(Big::new(near), &sides).unwrap()
    });
    (near, rest * slope)
}

/// A reading as the table takes it.
fn taken(curve: &Curve, chain: &Chain, reading: f64) -> f64 {
    let [low, high] = curve.readings;
    let reading = match &curve.data {
        _ if chain.reading.signal == Signal::Count => reading.round(),
        Data::Single(_) => f64::from(reading as f32),
        Data::Fixed(t) => {
            let steps = two(t.reading_bits);
            (reading * steps).round() / steps
        }
        _ => reading,
    };
    reading.clamp(low, high)
}

#[test]
fn every_kind_of_chain_keeps_its_bound() {
    let mut report = Report::new("tables of every kind of chain against 60-digit arithmetic");
    let mut draws = Draws(7);
    for case in chains::all() {
        let [low, high] = case.span;
        let tolerance = (high - low) * 1e-6;
        for numbers in ALL {
            let name = format!("{} {numbers:?}", case.name);
            let curve = match Curve::new(&request(&case, tolerance, numbers)) {
                Ok(curve) => curve,
                Err(e) => {
                    report.fail("built", &name, e);
                    continue;
                }
            };
            report.equal("the bound is within the tolerance", &name, tolerance, true, curve.bound <= tolerance);
            report.equal("what was seen is within the bound", &name, curve.seen, true, curve.seen <= curve.bound);
            let mut worst = 0.0_f64;
            let [first, last] = curve.readings;
            for i in 0..60 {
                let share = match i {
                    0 => 0.0,
                    1 => 1.0,
                    _ => draws.unit(),
                };
                let reading = taken(&curve, &case.chain, first + (last - first) * share);
                let (near, rest) = truth(&case.chain, &case.inputs, reading);
                let Ok(got) = curve.value(reading) else {
                    report.fail("a result", &name, format!("none at {reading}"));
                    continue;
                };
                let error = got - near - rest;
                worst = worst.max(error.abs());
                report.check_error("proven bound", &name, reading, near + rest, got, error, curve.bound);
            }
            // the proof is no mere upper limit; where one piece suffices, rounding alone may be smaller than its bound
            let close = match numbers {
                Numbers::Single => 1.5,
                _ => 1.25,
            };
            if curve.pieces() > 1 && curve.bound > 0.3 * tolerance {
                let ratio = curve.bound / worst.max(curve.seen);
                report.equal("the bound is close to what is seen", &name, ratio, true, ratio <= close);
            }
        }
    }
    report.finish();
}

fn case(name: &str) -> Case {
    chains::all().into_iter().find(|c| c.name == name).unwrap_or_else(|| panic!("no chain '{name}'"))
}

/// Adds to one stored coefficient, in units of the result.
fn tampered(curve: &Curve, index: usize, by: f64) -> Curve {
    let mut curve = curve.clone();
    match &mut curve.data {
        Data::Double(t) => t.coefficients[index] += by,
        Data::Single(t) => t.coefficients[index] += by as f32,
        Data::Fixed(t) => t.coefficients[index] += (by * two(t.result_bits)).round() as i32,
        _ => panic!("another kind of table"),
    }
    curve
}

#[test]
fn a_tampered_table_has_no_proof() {
    let mut report = Report::new("tampering");
    for name in
        ["platinum, two wires", "quarter", "thermistor, divider, low side, counts", "type K", "half, opposite arms"]
    {
        let case = case(name);
        let [low, high] = case.span;
        for numbers in ALL {
            let at = format!("{name} {numbers:?}");
            let request = request(&case, (high - low) * 1e-6, numbers);
            let curve = Curve::new(&request).unwrap();
            report.equal("the proof of what is stored", &at, "as built", Ok(curve.bound), curve.proven(&request));
            let count = curve.degree + 1;
            let refused = |curve: &Curve| matches!(curve.proven(&request), Err(Error::TooTight { .. }));
            for piece in 0..curve.pieces() {
                for by in [3.0, -3.0] {
                    let moved = tampered(&curve, piece * count, by * request.tolerance);
                    report.equal("a constant 3 tolerances off", &at, piece, true, refused(&moved));
                }
            }
            // what the last coefficient adds at the end of its piece, three tolerances more
            let (knots, t): (Vec<f64>, f64) = match &curve.data {
                Data::Double(t) => (t.knots.clone(), 1.0),
                Data::Single(t) => (t.knots.iter().map(|k| f64::from(*k)).collect(), 1.0),
                Data::Fixed(t) => (t.knots.iter().map(|k| f64::from(*k)).collect(), two(i32::from(t.shifts[0]))),
                _ => panic!("another kind of table"),
            };
            let end = (0..curve.degree).fold(1.0, |end, _| end * (knots[1] - knots[0]) / t);
            let moved = tampered(&curve, curve.degree, 3.0 * request.tolerance / end);
            report.equal("a last coefficient 3 tolerances off at the end", &at, "piece 0", true, refused(&moved));
            // parts that are missing or in disorder
            let mut short = curve.clone();
            let mut swapped = curve.clone();
            match (&mut short.data, &mut swapped.data) {
                (Data::Double(t), Data::Double(u)) => (t.coefficients.truncate(1), u.knots.swap(0, 1)),
                (Data::Single(t), Data::Single(u)) => (t.coefficients.truncate(1), u.knots.swap(0, 1)),
                (Data::Fixed(t), Data::Fixed(u)) => (t.shifts.clear(), u.knots.swap(0, 1)),
                _ => panic!("another kind of table"),
            };
            report.equal("a table that lacks a part", &at, "", true, refused(&short));
            report.equal("knots in disorder", &at, "", true, refused(&swapped));
        }
    }
    report.finish();
}

#[test]
fn a_proof_is_not_given_away_where_the_chain_is_another() {
    // the table of one gauge factor is none of another: 0.5 % of 90 000 microstrain is far more than the tolerance
    let one = case("quarter");
    let [low, high] = one.span;
    let first = request(&one, (high - low) * 1e-6, Numbers::Double);
    let curve = Curve::new(&first).unwrap();
    let mut other = one;
    let Element::Gauge { gauge, .. } = &mut other.chain.element else { panic!("a gauge") };
    gauge.factor *= 1.005;
    assert!(matches!(curve.proven(&Request { chain: &other.chain, ..first }), Err(Error::TooTight { .. })));
}

#[test]
fn platinum_from_ohms_by_the_printed_table() {
    let chain = Chain::new(Network::Resistance { leads: None }, Element::Platinum(IEC_60751));
    let inputs = Inputs::default();
    let mut report = Report::new("IEC 751 Amd 2:1995, DIN EN 60751:2009: Pt100 as a table within 0.001 K");
    for numbers in ALL {
        let request = Request {
            chain: &chain,
            inputs: &inputs,
            factor: 1.0,
            tolerance: 0.001,
            from: None,
            to: None,
            degree: None,
            numbers,
        };
        let curve = Curve::new(&request).unwrap();
        println!(
            "{numbers:?}: {} pieces, {} bytes, bound {}, seen {:.3e}",
            curve.pieces(),
            curve.bytes(),
            curve.bound,
            curve.seen
        );
        report.equal("bound", format!("{numbers:?}"), 0.001, true, curve.bound <= 0.001);
        for row in Table::read("data/temperature/pt100_iec60751_table_10C.csv").rows() {
            let (t, ohms, half) = (row.number("t_C"), row.number("accepted_ohm"), row.half_digit("accepted_ohm"));
            match curve.value(ohms) {
                Ok(got) => {
                    // dR/dt is not below 0.29 Ω/K up to 850 °C (IEC 60751: 0.3851 at 0 to 100 °C on average)
                    report.check("celsius", row.at(), ohms, t, got, half / 0.29 + 0.001);
                }
                // 18.52 Ω is printed for −200 °C, where the equation has 18.52008: just below the range
                Err(word) => report.equal("the first row", row.at(), ohms, (-200.0, Word::OutOfRange), (t, word)),
            }
        }
        // all of the range, against the exact inverse
        let plan = chain.plan().unwrap();
        let [low, high] = curve.readings;
        for i in 0..=200_000 {
            let reading = taken(&curve, &chain, low + (high - low) * f64::from(i) / 200_000.0);
            let (want, got) = (plan.one(reading).value, curve.value(reading).unwrap());
            report.check("dense", format!("{numbers:?}"), reading, want, got, curve.bound);
        }
    }
    report.finish();
}

/// An operation, what intervals make of it, and what it is.
type Held<'a> = (&'a str, Interval, Box<dyn Fn() -> Big + 'a>);

#[test]
fn intervals_hold_what_60_digits_say() {
    let mut draws = Draws(3);
    let mut report = Report::new("intervals against 60-digit arithmetic");
    let holds = |i: Interval, exact: &dyn Fn() -> Big| {
        let below = Big::double(|| exact() - Big::new(i.low()));
        let above = Big::double(|| Big::new(i.high()) - exact());
        below >= 0.0 && above >= 0.0
    };
    for round in 0..20_000 {
        // numbers of every size, and intervals of every width
        let mut number = || (draws.unit() - 0.5) * two((draws.unit() * 80.0 - 40.0) as i32);
        let (a, b, c, d) = (number(), number(), number(), number());
        let (x, y) = (
            Interval::between(a, a + a.abs() * c.abs().min(1.0)),
            Interval::between(b, b + b.abs() * d.abs().min(1.0)),
        );
        // a point of each, at an end or inside
        let inside = |i: Interval, share: f64| (i.low() + (i.high() - i.low()) * share).clamp(i.low(), i.high());
        let share = [0.0, 1.0, 0.37][round % 3];
        let (p, q) = (inside(x, share), inside(y, 1.0 - share));
        let all: [Held<'_>; 8] = [
            ("sum", x + y, Box::new(|| Big::new(p) + Big::new(q))),
            ("difference", x - y, Box::new(|| Big::new(p) - Big::new(q))),
            ("product", x * y, Box::new(|| Big::new(p) * Big::new(q))),
            ("quotient", x / y, Box::new(|| Big::new(p) / Big::new(q))),
            ("square", x.square(), Box::new(|| Big::new(p) * Big::new(p))),
            ("sqrt", (x * x).sqrt(), Box::new(|| (Big::new(p) * Big::new(p)).sqrt())),
            ("ln", x.square().ln(), Box::new(|| (Big::new(p) * Big::new(p)).ln())),
            ("exp", x.exp(), Box::new(|| Big::new(p).exp())),
        ];
        for (name, got, exact) in all {
            // where there is no such number there is nothing to hold
            if (name == "exp" && p.abs() > 700.0) || (name == "quotient" && q == 0.0) || (name == "ln" && p == 0.0) {
                continue;
            }
            report.equal(name, format!("round {round}"), format!("{x:?} {y:?}"), true, holds(got, &*exact));
            if x.low() == x.high() && y.low() == y.high() {
                // and not much more than that
                let width = (got.high() - got.low()) / got.most().max(1e-300);
                report.equal("tight", name, format!("{p} {q}"), true, width < 1e-14);
            }
        }
    }
    report.finish();
}

#[test]
fn jets_hold_value_slope_and_bend() {
    // f = ln x · √x / (1 + x) + exp(−x), its derivatives on paper with L = ln x, s = √x, w = 1 + x:
    //   f′ = (1/s + L/(2 s))/w − L s/w² − e⁻ˣ
    //   f″ = −L/(4 s³ w) − 2 (1/s + L/(2 s))/w² + 2 L s/w³ + e⁻ˣ, since (1/s + L/(2 s))′ = −L/(4 s³)
    let f = |x: Jet| {
        let one = Jet::from_f64(1.0);
        x.ln() * x.sqrt() / (one + x) + (-x).exp()
    };
    let mut draws = Draws(11);
    let mut report = Report::new("intervals with two derivatives");
    for round in 0..2_000 {
        let low = 0.05 + 20.0 * draws.unit();
        let all = Interval::between(low, low * (1.0 + 0.2 * draws.unit() * f64::from(round % 2)));
        let got = f(Jet::variable(all));
        for share in [0.0, 0.31, 1.0] {
            let x = (all.low() + (all.high() - all.low()) * share).clamp(all.low(), all.high());
            let parts = || {
                let big = Big::new;
                let x = big(x);
                let (l, s, w, e) = (x.ln(), x.sqrt(), big(1.0) + x, (-x).exp());
                let g = big(1.0) / s + l / (big(2.0) * s);
                let value = l * s / w + e;
                let slope = g / w - l * s / (w * w) - e;
                let bend =
                    -l / (big(4.0) * s * s * s * w) - big(2.0) * g / (w * w) + big(2.0) * l * s / (w * w * w) + e;
                [value, slope, bend]
            };
            for (i, (name, interval)) in
                [("value", got.value), ("slope", got.slope), ("bend", got.bend)].into_iter().enumerate()
            {
                let below = Big::double(|| parts()[i] - Big::new(interval.low()));
                let above = Big::double(|| Big::new(interval.high()) - parts()[i]);
                report.equal(name, format!("round {round}"), x, true, below >= 0.0 && above >= 0.0);
                if all.low() == all.high() {
                    report.equal("tight", name, x, true, interval.high() - interval.low() < 1e-11);
                }
            }
        }
    }
    report.finish();
}

#[test]
fn what_cannot_be_enclosed_is_every_number() {
    let x = Interval::between(-1.0, 2.0);
    assert_eq!(Interval::point(1.0) / x, Interval::ALL);
    assert_eq!(x.ln(), Interval::ALL);
    assert_eq!(x.sqrt(), Interval::ALL);
    assert_eq!(Interval::from_f64(f64::NAN), Interval::ALL);
    // u² − 2 about √2 is a root that can be proven, a double root is not
    let point = |v: f64| Interval::point(v);
    let zero = Interval::ZERO;
    let root = Interval::root(&[point(-2.0), zero, point(1.0), zero, zero], std::f64::consts::SQRT_2);
    assert!(root.holds(std::f64::consts::SQRT_2) && root.high() - root.low() < 1e-14, "{root:?}");
    assert_eq!(Interval::root(&[zero, zero, point(1.0), zero, zero], 0.0), Interval::ALL);
}

#[test]
fn words_beyond_a_table_are_those_of_the_chain() {
    let mut report = Report::new("words beyond the ends");
    for case in chains::all() {
        let plan = case.chain.plan().unwrap();
        let whole = case.chain.reading.signal == Signal::Count;
        for numbers in ALL {
            // as far as the chain goes
            let request =
                Request { from: None, to: None, ..request(&case, (case.span[1] - case.span[0]) * 1e-4, numbers) };
            let Ok(curve) = Curve::new(&request) else {
                // what has no end needs a range, and double zeros of G at a minimum have no proof
                continue;
            };
            let [low, high] = curve.readings;
            let mut draws = Draws(5);
            for i in 0..2_000 {
                let far = [0.001, 0.1, 3.0, 40.0][i % 4];
                let reading = low + (high - low) * (draws.unit() * (1.0 + 2.0 * far) - far);
                let reading = match &curve.data {
                    _ if whole => reading.round(),
                    Data::Single(_) => f64::from(reading as f32),
                    Data::Fixed(t) => {
                        let steps = two(t.reading_bits);
                        let near = (reading * steps).round();
                        if near.abs() > f64::from(i32::MAX) {
                            continue;
                        }
                        near / steps
                    }
                    _ => reading,
                };
                let want = plan.one(Inputs { reading, ..case.inputs }).word;
                let got = curve.value(reading).map_or_else(|word| word, |_| Word::Good);
                report.equal("word", format!("{} {numbers:?}", case.name), reading, want, got);
            }
            for reading in [f64::INFINITY, f64::NEG_INFINITY, f64::NAN] {
                let got = curve.value(reading);
                report.equal("no number", case.name, reading, true, got.is_err());
            }
        }
    }
    report.finish();
}

#[test]
fn a_stated_range_ends_there_and_words_stay() {
    let case = case("thermistor, divider, low side, counts");
    let inputs = case.inputs;
    let request = Request { from: Some(0.0), to: Some(50.0), ..request(&case, 0.01, Numbers::Fixed) };
    let curve = Curve::new(&request).unwrap();
    let plan = case.chain.plan().unwrap();
    let (mut good, mut cut) = (0, 0);
    for code in -5..=4100 {
        let want = plan.one(Inputs { reading: f64::from(code), ..inputs });
        match curve.value(f64::from(code)) {
            Ok(value) => {
                assert!((value - want.value).abs() <= curve.bound, "{code}");
                // one code beyond either end at most
                assert!((-0.1..=50.1).contains(&want.value), "{code}: {}", want.value);
                good += 1;
            }
            Err(word) if want.word == Word::Good => {
                assert_eq!(word, Word::OutOfRange, "{code}");
                assert!(!(0.0..=50.0).contains(&want.value), "{code}: {}", want.value);
                cut += 1;
            }
            Err(word) => assert_eq!(word, want.word, "{code}"),
        }
    }
    assert!(good > 1000 && cut > 1000, "{good} {cut}");
}

#[test]
fn what_cannot_be_had_is_refused_with_what_can() {
    let platinum = case("platinum, two wires");
    let refused = |request: &Request<'_>| Curve::new(request).unwrap_err();
    let [low, high] = platinum.span;
    // 2⁻²⁰ K is the last bit of 32 for 850 °C
    let tight = request(&platinum, 1e-8, Numbers::Fixed);
    let Error::TooTight { tightest: Some(had), .. } = refused(&tight) else { panic!("{:?}", refused(&tight)) };
    assert!(had > 1e-8 && had < 1e-4, "{had}");
    assert!(Curve::new(&Request { tolerance: had, ..tight }).unwrap().bound <= had);
    for (name, request, want) in [
        ("no tolerance", Request { tolerance: 0.0, ..tight }, Error::Tolerance(0.0)),
        ("degree", Request { degree: Some(4), ..tight }, Error::Degree(4)),
        ("beyond the law", Request { to: Some(900.0), ..tight }, Error::End { result: 900.0 }),
    ] {
        assert_eq!(refused(&request), want, "{name}");
    }
    let many =
        Request { from: Some(low), to: Some(high), degree: Some(1), ..request(&platinum, 1e-9, Numbers::Double) };
    assert!(matches!(refused(&many), Error::TooLong { .. }), "{:?}", refused(&many));
    let direct = case("direct");
    let endless = Request { from: None, to: None, ..request(&direct, 0.1, Numbers::Double) };
    assert_eq!(refused(&endless), Error::Endless);
    // a zero that nothing is stated of
    let mut chain = case("quarter, three wires, temperature column").chain;
    chain.temperature = ohmwright::chain::Temperature::None;
    let inputs = Inputs::default();
    assert!(matches!(refused(&Request { chain: &chain, inputs: &inputs, ..tight }), Error::Chain(_)));
}

//! First-order uncertainty against published budgets.
//!
//! Sources, all from memory and all worked again by hand: JCGM 100:2008 H.1 and H.2, EA-4/02 S9 and S10, JCGM 106:2012.

use ohmwright::uncertainty::{
    Acceptance, Contribution, Coverage, Family, Interval, Order, Rule, Shape, Uncertainty, combine, combine_correlated,
    conformity, decimals, rounded, second_order,
};

fn part(sensitivity: f64, uncertainty: Uncertainty, cause: u32) -> Contribution {
    Contribution {
        sensitivity,
        standard: uncertainty.standard(),
        degrees_of_freedom: uncertainty.degrees_of_freedom(),
        shape: uncertainty.shape(),
        cause,
    }
}

fn observed(standard: f64, degrees_of_freedom: f64) -> Uncertainty {
    Uncertainty::Estimated { standard, degrees_of_freedom, shape: Shape::Normal }
}

/// JCGM 100:2008, H.1: end-gauge calibration, in nanometres.
#[test]
fn end_gauge() {
    const LENGTH: f64 = 50.000_623e6;
    let (alpha, theta) = (11.5e-6, -0.1);
    // difference of the gauges: 5.8 nm (24), comparator 3.9 nm (5) and 6.7 nm (8): u = 9.7 nm, ν = 25.6
    let difference =
        [part(1.0, observed(5.8, 24.0), 1), part(1.0, observed(3.9, 5.0), 2), part(1.0, observed(6.7, 8.0), 3)];
    let d = combine(&difference);
    assert!((d.standard - 9.7).abs() <= 0.05, "{d:?}");
    // the example takes u = 9.7 nm, rounded, to the fourth power
    let rounded = d.degrees_of_freedom * libm::pow(9.7 / d.standard, 4.0);
    assert!((rounded - 25.6).abs() <= 0.05, "{d:?}");

    let standard = observed(25.0, 18.0);
    let expansion = Uncertainty::Rectangular { half_width: 1e-6 }.with_degrees_of_freedom(50.0);
    let warmth = Uncertainty::Rectangular { half_width: 0.05 }.with_degrees_of_freedom(2.0);
    // u(θ) = √(0.2² + 0.35²), the second arcsine of half-width 0.5
    let cycle = Uncertainty::Arcsine { half_width: 0.5 };
    assert!((cycle.standard() - 0.35).abs() <= 0.005);
    let bath = libm::hypot(0.2, cycle.standard());
    assert!((bath - 0.41).abs() <= 0.005);
    let coefficient = Uncertainty::Rectangular { half_width: 2e-6 };
    let mut parts = difference.to_vec();
    parts.extend([
        part(1.0, standard, 0),
        part(-LENGTH * theta, expansion, 4),
        part(-LENGTH * alpha, warmth, 5),
        part(0.0, Uncertainty::Standard { standard: bath }, 6),
        part(0.0, coefficient, 7),
    ]);
    assert!((parts[4].signed() - 2.9).abs() <= 0.05);
    assert!((parts[5].signed() + 16.6).abs() <= 0.05);
    let sum = combine(&parts);
    assert!((sum.standard - 32.0).abs() <= 0.5, "{sum:?}");
    // the example prints 16.7 from rounded intermediates and goes on with 16
    assert_eq!(sum.degrees_of_freedom.floor(), 16.0, "{sum:?}");
    assert_eq!(sum.family, Family::Normal);
    let wide = sum.expanded(Coverage::Probability(0.99)).unwrap();
    assert_eq!(wide.rule, Rule::Student);
    assert!((wide.factor - 2.92).abs() <= 0.005, "{wide:?}");
    // 93 nm is printed for 2.92 times the rounded 32 nm
    assert_eq!((2.92 * 32.0_f64).round(), 93.0);
    assert!((wide.expanded - 2.92 * sum.standard).abs() <= 0.005 * sum.standard);

    // H.1.7: with the second order u = 34 nm; inputs l_s, d, δα, δθ, θ, α_s
    let at = [LENGTH, 215.0, 0.0, theta, theta, alpha];
    let u = [25.0, d.standard, expansion.standard(), warmth.standard(), bath, coefficient.standard()];
    // l = l_s + d − l_s (δα θ + α_s δθ), the estimate of δα and of δθ 0
    let order = second_order(
        |moved, by, out| {
            let mut x = at;
            x[3] = 0.0;
            x[moved] += by * u[moved];
            let [ls, _, da, dt, t, a] = x;
            let gradient = [1.0 - (da * t + a * dt), 1.0, -ls * t, -ls * a, -ls * da, -ls * dt];
            for ((out, g), u) in out.iter_mut().zip(gradient).zip(u) {
                *out = g * u;
            }
            Ok(())
        },
        [&mut [0.0; 6], &mut [0.0; 6], &mut [0.0; 6]],
    )
    .unwrap();
    assert!((order.standard() - 34.0).abs() <= 0.5, "{order:?}");
    // the two terms, 11.7 nm and 1.7 nm
    assert!((order.second - (11.7 * 11.7 + 1.7 * 1.7)).abs() <= 11.7 * 0.1 + 1.7 * 0.1, "{order:?}");
    assert!((Order { first: 1.0, second: 0.21 }.share() - 0.1).abs() < 1e-15);
}

/// JCGM 100:2008, H.2: resistance, reactance and impedance from correlated observations.
#[test]
fn resistance_and_reactance() {
    let volts = [5.007, 4.994, 5.005, 4.990, 4.999];
    let amperes = [19.663e-3, 19.639e-3, 19.640e-3, 19.685e-3, 19.678e-3];
    let radians = [1.0456, 1.0438, 1.0468, 1.0428, 1.0433];
    let mean = |x: &[f64; 5]| x.iter().sum::<f64>() / 5.0;
    let covariance = |x: &[f64; 5], y: &[f64; 5]| {
        let (a, b) = (mean(x), mean(y));
        x.iter().zip(y).map(|(x, y)| (x - a) * (y - b)).sum::<f64>() / 20.0
    };
    let all = [volts, amperes, radians];
    let [v, i, phi] = all.map(|x| mean(&x));
    let u = all.map(|x| covariance(&x, &x).sqrt());
    let r = |a: usize, b: usize| covariance(&all[a], &all[b]) / (u[a] * u[b]);
    // table H.2
    for (got, printed, half) in [
        (u[0], 0.0032, 5e-5),
        (u[1], 0.0095e-3, 5e-8),
        (u[2], 0.00075, 5e-6),
        (r(0, 1), -0.36, 0.005),
        (r(0, 2), 0.86, 0.005),
        (r(1, 2), -0.65, 0.005),
    ] {
        assert!((got - printed).abs() <= half, "{got} {printed}");
    }
    // tables H.3 and H.4: R = V/I cos φ, X = V/I sin φ, Z = V/I, and the standard deviation of the mean of the five results,
    // which is what the printed figures are; first order differs from it by terms of higher order, (s(φ) √5)² over u(R)/R:
    // 5e-3
    let (z, cos, sin) = (v / i, libm::cos(phi), libm::sin(phi));
    let directly = |f: &dyn Fn(f64, f64, f64) -> f64| {
        let all: [f64; 5] = core::array::from_fn(|k| f(volts[k], amperes[k], radians[k]));
        covariance(&all, &all).sqrt()
    };
    for (c, printed, direct) in [
        ([cos / i, -z * cos / i, -z * sin], 0.071, directly(&|v, i, p| v / i * libm::cos(p))),
        ([sin / i, -z * sin / i, z * cos], 0.295, directly(&|v, i, p| v / i * libm::sin(p))),
        ([1.0 / i, -z / i, 0.0], 0.236, directly(&|v, i, _| v / i)),
    ] {
        let parts: Vec<Contribution> = (0..3).map(|k| part(c[k], observed(u[k], 4.0), k as u32)).collect();
        let sum = combine_correlated(&parts, r);
        assert!((direct - printed).abs() <= 0.0005, "{direct} {printed}");
        assert!((sum.standard / direct - 1.0).abs() <= 5e-3, "{sum:?} {direct}");
        assert!(sum.degrees_of_freedom.is_nan(), "correlated inputs have no effective degrees of freedom");
    }
    // without correlation the formula is that of independent inputs
    let parts = [part(2.0, observed(1.0, 4.0), 0), part(3.0, observed(1.0, 9.0), 1)];
    let (one, other) = (combine_correlated(&parts, |_, _| 0.0), combine(&parts));
    assert_eq!((one.standard, one.degrees_of_freedom), (other.standard, other.degrees_of_freedom));
}

/// EA-4/02, S9: a hand-held multimeter at 100 V, read with a step of 0.1 V.
#[test]
fn multimeter() {
    let parts = [
        part(1.0, Uncertainty::Expanded { expanded: 0.002, coverage_factor: 2.0 }, 0),
        part(1.0, Uncertainty::of_resolution(0.1), 1),
        part(-1.0, Uncertainty::Rectangular { half_width: 0.011 }, 2),
    ];
    let sum = combine(&parts);
    assert!((sum.standard - 0.030).abs() <= 0.0005, "{sum:?}");
    assert_eq!(sum.family, Family::Rectangular);
    let wide = sum.expanded(Coverage::Probability(0.95)).unwrap();
    assert_eq!(wide.rule, Rule::Rectangular);
    assert!((wide.factor - 1.65).abs() <= 0.005, "{wide:?}");
    assert!((wide.expanded - 0.05).abs() <= 0.005, "{wide:?}");
    // a second contribution of 0.4 of the first is more than the rule allows
    let more = [parts[1], part(1.0, Uncertainty::Standard { standard: 0.4 * parts[1].standard }, 3)];
    assert_eq!(combine(&more).family, Family::Normal);
}

/// EA-4/02, S10: a vernier caliper, where two rectangular contributions decide: k = 1.83.
#[test]
fn vernier_caliper() {
    // scale and resolution 25 µm, mechanical effects 50 µm half-widths; the rest is small
    let parts = [
        part(1.0, Uncertainty::Rectangular { half_width: 25.0 }, 0),
        part(1.0, Uncertainty::Rectangular { half_width: 50.0 }, 1),
        part(1.0, Uncertainty::Rectangular { half_width: 0.8 }, 2),
        part(1.7, Uncertainty::Rectangular { half_width: 1.0 }, 3),
    ];
    let sum = combine(&parts);
    // 33 µm are printed for 15 µm and 29 µm, of which the first is 14.4 µm; unrounded 32.3 µm
    assert!((sum.standard - 33.0).abs() <= 0.5 + (15.0 - 25.0 / 3f64.sqrt()), "{sum:?}");
    let Family::Trapezoidal { edge } = sum.family else { panic!("{sum:?}") };
    assert!((edge - 0.33).abs() <= 0.005);
    let wide = sum.expanded(Coverage::Probability(0.95)).unwrap();
    assert!((wide.factor - 1.83).abs() <= 0.005, "{wide:?}");
    assert!((wide.expanded - 60.0).abs() <= 5.0, "{wide:?}");
    // a triangle is the trapezium without a top: 1 − √0.05 of the half-base over its 1/√6 (by hand)
    let equal = combine(&[parts[0], Contribution { cause: 1, ..parts[0] }]);
    let wide = equal.expanded(Coverage::Probability(0.95)).unwrap();
    assert!((wide.factor - 6f64.sqrt() * (1.0 - 0.05_f64.sqrt())).abs() < 1e-12, "{wide:?}");
}

/// y = x³ about 1: the variance of a normal x of deviation u is 9 u² + 36 u⁴ + 15 u⁶, by its moments.
#[test]
fn second_order_of_a_cube() {
    let u = 0.1;
    let order = second_order(
        |_, by, out| {
            let x = 1.0 + by * u;
            out.fill(3.0 * x * x * u);
            Ok(())
        },
        [&mut [0.0; 1], &mut [0.0; 1], &mut [0.0; 1]],
    )
    .unwrap();
    assert!((order.first - 0.09).abs() < 1e-15 && (order.second - 36e-4).abs() < 1e-15, "{order:?}");
    assert!(second_order(|_, _, _| Ok(()), [&mut [0.0; 1], &mut [0.0; 2], &mut [0.0; 1]]).is_err());
}

#[test]
fn one_cause_adds_before_it_is_squared() {
    let u = Uncertainty::Standard { standard: 3.0 };
    let opposed = combine(&[part(1.0, u, 7), part(-1.0, u, 7), part(1.0, Uncertainty::Standard { standard: 4.0 }, 8)]);
    assert_eq!(opposed.standard, 4.0);
    let alike = combine(&[part(1.0, u, 7), part(1.0, u, 7)]);
    assert_eq!(alike.standard, 6.0);
    assert_eq!(combine(&[]).standard, 0.0);
    // fully correlated inputs through the matrix are the same
    assert_eq!(combine_correlated(&[part(1.0, u, 0), part(1.0, u, 1)], |_, _| 1.0).standard, 6.0);
}

#[test]
fn coverage_as_asked_for() {
    let normal = combine(&[part(1.0, Uncertainty::Standard { standard: 2.0 }, 0)]);
    let wide = normal.expanded(Coverage::Probability(0.95)).unwrap();
    // JCGM 100:2008, table G.1
    assert!((wide.factor - 1.960).abs() <= 0.0005 && wide.rule == Rule::Normal, "{wide:?}");
    let wide = normal.expanded(Coverage::Factor(2.0)).unwrap();
    assert!((wide.probability - 0.9545).abs() <= 0.00005 && wide.rule == Rule::Stated, "{wide:?}");
    assert_eq!(wide.expanded, 4.0);
    for wrong in [Coverage::Probability(0.0), Coverage::Probability(1.0), Coverage::Factor(0.0)] {
        assert!(normal.expanded(wrong).is_err(), "{wrong:?}");
    }
    assert!(normal.expanded(Coverage::Probability(f64::NAN)).is_err());
}

/// JCGM 106:2012, 7.4 and table 1.
#[test]
fn conformity_with_a_limit() {
    let upper = |high| Interval { low: f64::NEG_INFINITY, high };
    // example: a breakdown voltage of −5.47 V with u = 0.05 V conforms to at most −5.40 V with 92 %
    let diode = conformity(-5.47, 0.05, f64::INFINITY, upper(-5.40), 0.1).unwrap();
    assert!((diode.conforming - 0.92).abs() <= 0.005, "{diode:?}");
    assert_eq!((diode.simple, diode.guarded), (Acceptance::Accepted, Acceptance::Rejected));
    assert!((diode.risk() - 0.08).abs() <= 0.005);
    // table 1: (T − y)/u for some probabilities
    for (p, z) in [(0.80, 0.84), (0.90, 1.28), (0.95, 1.64), (0.99, 2.33), (0.999, 3.09)] {
        let near = |z: f64| conformity(0.0, 1.0, f64::INFINITY, upper(z), 0.0).unwrap().conforming;
        assert!(near(z - 0.005) <= p && p <= near(z + 0.005), "{p} {z}");
    }
    // a guard band of U leaves 2.5 % at its edge, by the normal distribution at k = 1.96
    let edge = conformity(-1.96, 1.0, f64::INFINITY, upper(0.0), 1.96).unwrap();
    assert_eq!(edge.guarded, Acceptance::Accepted);
    assert!((edge.risk() - 0.025).abs() < 1e-4);
    // rejected beyond the limit, with the risk of a false rejection
    let beyond = conformity(1.0, 1.0, f64::INFINITY, upper(0.0), 0.0).unwrap();
    assert_eq!(beyond.simple, Acceptance::Rejected);
    assert!((beyond.risk() - 0.1587).abs() <= 0.00005);
    // few degrees of freedom make heavier tails
    assert!(conformity(-2.0, 1.0, 4.0, upper(0.0), 0.0).unwrap().risk() > 0.05);
    for (y, u, limits, guard) in [
        (f64::NAN, 1.0, upper(0.0), 0.0),
        (0.0, 0.0, upper(0.0), 0.0),
        (0.0, 1.0, Interval { low: 1.0, high: 0.0 }, 0.0),
        (0.0, 1.0, upper(0.0), -1.0),
    ] {
        assert!(conformity(y, u, f64::INFINITY, limits, guard).is_err());
    }
}

/// JCGM 100:2008, 7.2.6: two digits, the estimate to the same place.
#[test]
fn two_digits() {
    // 35.0214 g with u = 0.35 mg is 35.021 40 ± 0.000 35, the example of 7.2.2 (grams: 100.021 47 with 0.35 mg)
    assert_eq!(decimals(0.00035), Some(5));
    assert_eq!(rounded(100.021_472, 5), 100.021_47);
    for (u, places) in
        [(1.0, 1), (9.949, 1), (9.951, 0), (0.099_6, 2), (0.1, 2), (995.0, -2), (994.0, -1), (1e-300, 301)]
    {
        assert_eq!(decimals(u), Some(places), "{u}");
    }
    assert_eq!(rounded(1249.0, -2), 1200.0);
    assert_eq!(rounded(-0.5, 0), -1.0);
    for none in [0.0, -1.0, f64::NAN, f64::INFINITY] {
        assert_eq!(decimals(none), None);
    }
}

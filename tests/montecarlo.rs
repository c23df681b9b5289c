//! The generator against its published answers, the trials against published and closed results.

#![cfg(feature = "std")]

use ohmwright::montecarlo::{deviate, philox4x32, simulate};
use ohmwright::uncertainty::{Contribution, Coverage, Shape, Uncertainty, combine};

/// Known answers of Random123 (kat_vectors, `philox4x32 10`), from memory.
#[test]
fn known_answers_of_the_generator() {
    for (counter, key, answer) in [
        ([0; 4], [0; 2], [0x6627_e8d5, 0xe169_c58d, 0xbc57_ac4c, 0x9b00_dbd8]),
        ([u32::MAX; 4], [u32::MAX; 2], [0x408f_276d, 0x41c8_3b0e, 0xa20b_c7c6, 0x6d54_51fd]),
        (
            [0x243f_6a88, 0x85a3_08d3, 0x1319_8a2e, 0x0370_7344],
            [0xa409_3822, 0x299f_31d0],
            [0xd16c_fe09, 0x94fd_cceb, 0x5001_e420, 0x2412_6ea1],
        ),
    ] {
        assert_eq!(philox4x32(counter, key), answer);
    }
}

const SHAPES: [Uncertainty; 5] = [
    Uncertainty::Rectangular { half_width: 3.0 },
    Uncertainty::Triangular { half_width: 3.0 },
    Uncertainty::Arcsine { half_width: 3.0 },
    Uncertainty::Standard { standard: 2.0 },
    Uncertainty::Estimated { standard: 2.0, degrees_of_freedom: 8.0, shape: Shape::Normal },
];

/// Second and fourth moments of the distributions in closed form, JCGM 101:2008 6.4.
#[test]
fn moments_of_the_draws() {
    // E x² and E x⁴ of half-width 3: a²/3 and a⁴/5; a²/6 and a⁴/15; a²/2 and 3 a⁴/8; normal u², 3 u⁴;
    // t: u² ν/(ν − 2), 3 u⁴ ν²/((ν − 2)(ν − 4))
    let expected: [(f64, f64); 5] = [(3.0, 16.2), (1.5, 5.4), (4.5, 30.375), (4.0, 48.0), (16.0 / 3.0, 128.0)];
    const N: u64 = 400_000;
    for (input, (second, fourth)) in SHAPES.iter().zip(expected) {
        let draws: Vec<f64> = (0..N).map(|trial| deviate(input, 7, trial, 3)).collect();
        let moment = |power: i32| draws.iter().map(|x| libm::pow(*x, f64::from(power))).sum::<f64>() / N as f64;
        let deviation = second.sqrt() / (N as f64).sqrt();
        assert!(moment(1).abs() < 4.0 * deviation, "{input:?} mean {}", moment(1));
        // four standard errors of the mean of squares
        let error = ((fourth - second * second) / N as f64).sqrt();
        assert!((moment(2) - second).abs() < 4.0 * error, "{input:?} square {}", moment(2));
        if input.shape() != Shape::Normal {
            assert!((moment(4) / fourth - 1.0).abs() < 0.02, "{input:?} fourth {}", moment(4));
            assert!(draws.iter().all(|x| x.abs() <= 3.0));
        }
    }
    // inputs do not follow each other
    let product: f64 = (0..N).map(|t| deviate(&SHAPES[3], 7, t, 0) * deviate(&SHAPES[3], 7, t, 1)).sum::<f64>();
    assert!((product / N as f64).abs() < 4.0 * 4.0 / (N as f64).sqrt());
}

#[test]
fn the_same_figures_for_any_number_of_threads() {
    let model = |off: &[f64]| libm::exp(off[0] / 10.0) * off[1] + off[2] * off[3] + off[4];
    let one = simulate(10_001, 1, 42, &SHAPES, model).unwrap();
    for threads in [0, 2, 3, 7, 20_000] {
        assert_eq!(one, simulate(10_001, threads, 42, &SHAPES, model).unwrap(), "{threads}");
    }
    assert_ne!(one, simulate(10_001, 1, 43, &SHAPES, model).unwrap());
    assert!(simulate(1, 0, 0, &SHAPES, model).is_err());
    assert!(simulate(10, 0, 0, &SHAPES, |_| f64::NAN).is_err());
    let lossy = simulate(1000, 0, 0, &SHAPES, |off| if off[0] > 0.0 { off[1] } else { f64::NAN }).unwrap();
    assert_eq!(lossy.count() + lossy.lost(), 1000);
    assert!((400..600).contains(&lossy.lost()));
}

/// JCGM 101:2008, 9.2: sums of four inputs; tables 2 to 4, from memory. Both GUM results and Monte Carlo ones of 10⁶ trials.
#[test]
fn sums_of_four() {
    let unit = 3f64.sqrt();
    let normal = [Uncertainty::Standard { standard: 1.0 }; 4];
    let rectangular = [Uncertainty::Rectangular { half_width: unit }; 4];
    let mut last_wide = rectangular;
    last_wide[3] = Uncertainty::Rectangular { half_width: 10.0 * unit };
    // standard uncertainty and end of the symmetric interval as printed, whether first order is validated at two digits
    for (inputs, standard, end, half, holds) in
        [(normal, 2.0, 3.92, 0.005, true), (rectangular, 2.0, 3.88, 0.005, true), (last_wide, 10.1, 17.0, 0.05, false)]
    {
        let run = simulate(400_000, 0, 1, &inputs, |off| off.iter().sum()).unwrap();
        let [low, high] = run.symmetric(0.95);
        // over 4·10⁵ trials an end spreads by about 3e-3 u, the standard deviation by at most u/√(2 N) = 1.1e-3 u; three of
        // these come on top of the printed half digit
        let allowed = half + 3.0 * 3e-3 * standard;
        assert!((run.standard() - standard).abs() <= 0.05 + 3.0 * 1.1e-3 * standard, "{}", run.standard());
        assert!((low + end).abs() <= allowed && (high - end).abs() <= allowed, "{low} {high}");
        let [short_low, short_high] = run.shortest(0.95);
        assert!(short_high - short_low <= high - low);
        assert!((short_high - short_low) - (high - low) > -0.02 * (high - low), "symmetric: the two agree nearly");
        let parts = inputs.map(|u| u.standard());
        let u = parts.iter().map(|u| u * u).sum::<f64>().sqrt();
        let verdict = run.validate(0.0, u, 1.96 * u, 0.95);
        assert_eq!(verdict.holds(), holds, "{verdict:?}");
    }
    // the rule of the dominant rectangular contribution is nearer: EA-4/02 S9
    let parts: Vec<Contribution> = last_wide
        .iter()
        .zip(0..)
        .map(|(u, cause)| Contribution {
            sensitivity: 1.0,
            standard: u.standard(),
            degrees_of_freedom: f64::INFINITY,
            shape: u.shape(),
            cause,
            pool: 0,
        })
        .collect();
    let wide = combine(&parts).expanded(Coverage::Probability(0.95)).unwrap();
    assert!((wide.expanded - 17.0).abs() < 0.5, "{wide:?}");
}

/// A skewed result: the shortest interval of |z| begins at 0 and ends at the 95 % quantile 1.960 (normal tables).
#[test]
fn the_shortest_interval_of_a_skewed_result() {
    let run = simulate(400_000, 0, 5, &[Uncertainty::Standard { standard: 1.0 }], |off| off[0].abs()).unwrap();
    let [low, high] = run.shortest(0.95);
    assert!(low < 0.005 && (high - 1.960).abs() < 0.01, "{low} {high}");
    // the symmetric one has 2.5 % below: z(0.5125) = 0.0313, and above: z(0.9875) = 2.241
    let [low, high] = run.symmetric(0.95);
    assert!((low - 0.0313).abs() < 0.001 && (high - 2.241).abs() < 0.015, "{low} {high}");
    // E |z| = √(2/π), variance 1 − 2/π
    let pi = core::f64::consts::PI;
    assert!((run.mean() - (2.0 / pi).sqrt()).abs() < 0.003);
    assert!((run.standard() - (1.0 - 2.0 / pi).sqrt()).abs() < 0.003);
}

//! A random number generator without a state: a counter goes in, four random words come out.

/// Multipliers of the two halves of a round.
const MULTIPLIERS: [u32; 2] = [0xD251_1F53, 0xCD9E_8D57];

/// What the key is raised by from round to round: the golden ratio and √3 − 1.
const WEYL: [u32; 2] = [0x9E37_79B9, 0xBB67_AE85];

/// Returns four random words for a counter and a key: Philox 4×32 with ten rounds.
///
/// # Source
/// Salmon, Moraes, Dror and Shaw, "Parallel random numbers: as easy as 1, 2, 3", SC11 (2011). The published known answers are
/// checked in tests/montecarlo.rs.
#[must_use]
pub fn philox4x32(counter: [u32; 4], key: [u32; 2]) -> [u32; 4] {
    let ([mut a, mut b, mut c, mut d], [mut k0, mut k1]) = (counter, key);
    let halves = |m: u32, x: u32| {
        let product = u64::from(m) * u64::from(x);
        ((product >> 32) as u32, product as u32)
    };
    for _ in 0..10 {
        let (high0, low0) = halves(MULTIPLIERS[0], a);
        let (high1, low1) = halves(MULTIPLIERS[1], c);
        (a, b, c, d) = (high1 ^ b ^ k0, low1, high0 ^ d ^ k1, low0);
        k0 = k0.wrapping_add(WEYL[0]);
        k1 = k1.wrapping_add(WEYL[1]);
    }
    [a, b, c, d]
}

/// Two numbers above 0 and below 1 for this seed, trial and input, on a grid of 2⁻⁵³.
pub(super) fn uniforms(seed: u64, trial: u64, input: u32) -> [f64; 2] {
    let [a, b, c, d] = philox4x32([trial as u32, (trial >> 32) as u32, input, 0], [seed as u32, (seed >> 32) as u32]);
    let one = |high: u32, low: u32| {
        let bits = (u64::from(high) << 32 | u64::from(low)) >> 12;
        // the middle of one of 2⁵² cells: never 0, never 1
        (bits as f64 + 0.5) * (1.0 / 4_503_599_627_370_496.0)
    };
    [one(a, b), one(c, d)]
}

//! Reference functions of the eight letter-designated types, digits as published.
//!
//! G. W. Burns et al., NIST Monograph 175 (1993), also IEC 60584-1 and ASTM E230; bit for bit
//! data/temperature/thermocouple_direct_coefficients.csv, where each row says how it was obtained.

use super::law::{Function, Piece};

/// Type B.
pub(super) static B: Function = Function::new(
    &[
        Piece {
            low: 0.0,
            high: 630.615,
            c: &[
                0.000000000000e0,
                -0.246508183460e-3,
                0.590404211710e-5,
                -0.132579316360e-8,
                0.156682919010e-11,
                -0.169445292400e-14,
                0.629903470940e-18,
            ],
            bell: None,
        },
        Piece {
            low: 630.615,
            high: 1820.0,
            c: &[
                -0.389381686210e1,
                0.285717474700e-1,
                -0.848851047850e-4,
                0.157852801640e-6,
                -0.168353448640e-9,
                0.111097940130e-12,
                -0.445154310330e-16,
                0.989756408210e-20,
                -0.937913302890e-24,
            ],
            bell: None,
        },
    ],
    B_MINIMUM,
);

/// Type E.
pub(super) static E: Function = Function::new(
    &[
        Piece {
            low: -270.0,
            high: 0.0,
            c: &[
                0.000000000000e0,
                0.586655087080e-1,
                0.454109771240e-4,
                -0.779980486860e-6,
                -0.258001608430e-7,
                -0.594525830570e-9,
                -0.932140586670e-11,
                -0.102876055340e-12,
                -0.803701236210e-15,
                -0.439794973910e-17,
                -0.164147763550e-19,
                -0.396736195160e-22,
                -0.558273287210e-25,
                -0.346578420130e-28,
            ],
            bell: None,
        },
        Piece {
            low: 0.0,
            high: 1000.0,
            c: &[
                0.000000000000e0,
                0.586655087100e-1,
                0.450322755820e-4,
                0.289084072120e-7,
                -0.330568966520e-9,
                0.650244032700e-12,
                -0.191974955040e-15,
                -0.125366004970e-17,
                0.214892175690e-20,
                -0.143880417820e-23,
                0.359608994810e-27,
            ],
            bell: None,
        },
    ],
    f64::NEG_INFINITY,
);

/// Type J.
pub(super) static J: Function = Function::new(
    &[
        Piece {
            low: -210.0,
            high: 760.0,
            c: &[
                0.000000000000e0,
                0.503811878150e-1,
                0.304758369300e-4,
                -0.856810657200e-7,
                0.132281952950e-9,
                -0.170529583370e-12,
                0.209480906970e-15,
                -0.125383953360e-18,
                0.156317256970e-22,
            ],
            bell: None,
        },
        Piece {
            low: 760.0,
            high: 1200.0,
            c: &[
                0.296456256810e3,
                -0.149761277860e1,
                0.317871039240e-2,
                -0.318476867010e-5,
                0.157208190040e-8,
                -0.306913690560e-12,
            ],
            bell: None,
        },
    ],
    f64::NEG_INFINITY,
);

/// Type K.
pub(super) static K: Function = Function::new(
    &[
        Piece {
            low: -270.0,
            high: 0.0,
            c: &[
                0.000000000000e0,
                0.394501280250e-1,
                0.236223735980e-4,
                -0.328589067840e-6,
                -0.499048287770e-8,
                -0.675090591730e-10,
                -0.574103274280e-12,
                -0.310888728940e-14,
                -0.104516093650e-16,
                -0.198892668780e-19,
                -0.163226974860e-22,
            ],
            bell: None,
        },
        Piece {
            low: 0.0,
            high: 1372.0,
            c: &[
                -0.176004136860e-1,
                0.389212049750e-1,
                0.185587700320e-4,
                -0.994575928740e-7,
                0.318409457190e-9,
                -0.560728448890e-12,
                0.560750590590e-15,
                -0.320207200030e-18,
                0.971511471520e-22,
                -0.121047212750e-25,
            ],
            bell: Some([0.118597600000e0, -0.118343200000e-3, 0.126968600000e3]),
        },
    ],
    f64::NEG_INFINITY,
);

/// Type N.
pub(super) static N: Function = Function::new(
    &[
        Piece {
            low: -270.0,
            high: 0.0,
            c: &[
                0.000000000000e0,
                0.261591059620e-1,
                0.109574842280e-4,
                -0.938411115540e-7,
                -0.464120397590e-10,
                -0.263033577160e-11,
                -0.226534380030e-13,
                -0.760893007910e-16,
                -0.934196678350e-19,
            ],
            bell: None,
        },
        Piece {
            low: 0.0,
            high: 1300.0,
            c: &[
                0.000000000000e0,
                0.259293946010e-1,
                0.157101418800e-4,
                0.438256272370e-7,
                -0.252611697940e-9,
                0.643118193390e-12,
                -0.100634715190e-14,
                0.997453389920e-18,
                -0.608632456070e-21,
                0.208492293390e-24,
                -0.306821961510e-28,
            ],
            bell: None,
        },
    ],
    f64::NEG_INFINITY,
);

/// Type R.
pub(super) static R: Function = Function::new(
    &[
        Piece {
            low: -50.0,
            high: 1064.18,
            c: &[
                0.000000000000e0,
                0.528961729765e-2,
                0.139166589782e-4,
                -0.238855693017e-7,
                0.356916001063e-10,
                -0.462347666298e-13,
                0.500777441034e-16,
                -0.373105886191e-19,
                0.157716482367e-22,
                -0.281038625251e-26,
            ],
            bell: None,
        },
        Piece {
            low: 1064.18,
            high: 1664.5,
            c: &[
                0.295157925316e1,
                -0.252061251332e-2,
                0.159564501865e-4,
                -0.764085947576e-8,
                0.205305291024e-11,
                -0.293359668173e-15,
            ],
            bell: None,
        },
        Piece {
            low: 1664.5,
            high: 1768.1,
            c: &[0.152232118209e3, -0.268819888545e0, 0.171280280471e-3, -0.345895706453e-7, -0.934633971046e-14],
            bell: None,
        },
    ],
    f64::NEG_INFINITY,
);

/// Type S.
pub(super) static S: Function = Function::new(
    &[
        Piece {
            low: -50.0,
            high: 1064.18,
            c: &[
                0.000000000000e0,
                0.540313308631e-2,
                0.125934289740e-4,
                -0.232477968689e-7,
                0.322028823036e-10,
                -0.331465196389e-13,
                0.255744251786e-16,
                -0.125068871393e-19,
                0.271443176145e-23,
            ],
            bell: None,
        },
        Piece {
            low: 1064.18,
            high: 1664.5,
            c: &[0.132900444085e1, 0.334509311344e-2, 0.654805192818e-5, -0.164856259209e-8, 0.129989605174e-13],
            bell: None,
        },
        Piece {
            low: 1664.5,
            high: 1768.1,
            c: &[0.146628232636e3, -0.258430516752e0, 0.163693574641e-3, -0.330439046987e-7, -0.943223690612e-14],
            bell: None,
        },
    ],
    f64::NEG_INFINITY,
);

/// Type T.
pub(super) static T: Function = Function::new(
    &[
        Piece {
            low: -270.0,
            high: 0.0,
            c: &[
                0.000000000000e0,
                0.387481063640e-1,
                0.441944343470e-4,
                0.118443231050e-6,
                0.200329735540e-7,
                0.901380195590e-9,
                0.226511565930e-10,
                0.360711542050e-12,
                0.384939398830e-14,
                0.282135219250e-16,
                0.142515947790e-18,
                0.487686622860e-21,
                0.107955392700e-23,
                0.139450270620e-26,
                0.797951539270e-30,
            ],
            bell: None,
        },
        Piece {
            low: 0.0,
            high: 400.0,
            c: &[
                0.000000000000e0,
                0.387481063640e-1,
                0.332922278800e-4,
                0.206182434040e-6,
                -0.218822568460e-8,
                0.109968809280e-10,
                -0.308157587720e-13,
                0.454791352900e-16,
                -0.275129016730e-19,
            ],
            bell: None,
        },
    ],
    f64::NEG_INFINITY,
);

/// Where the emf of type B is lowest, °C: the root of dE/dt in 50-digit arithmetic. E is −2.585 µV there and crosses zero again at 42.13 °C.
const B_MINIMUM: f64 = 21.020261884768556;

#[cfg(test)]
mod tests {
    extern crate std;
    use super::super::Thermocouple;
    use std::collections::BTreeMap;
    use std::format;
    use std::string::String;
    use std::vec::Vec;

    #[test]
    fn coefficients_bit_for_bit() {
        let text = include_str!("../../data/temperature/thermocouple_direct_coefficients.csv");
        let mut table: BTreeMap<String, Vec<u64>> = BTreeMap::new();
        let mut ranges: BTreeMap<String, [u64; 2]> = BTreeMap::new();
        for row in text.lines().filter(|l| !l.starts_with('#')).skip(1) {
            let cells: Vec<&str> = row.split(',').collect();
            let piece = format!("{}{}", cells[0], cells[1]);
            let bits = |i: usize| cells[i].parse::<f64>().unwrap().to_bits();
            ranges.insert(piece.clone(), [bits(2), bits(3)]);
            let list = table.entry(piece).or_default();
            // c₀, c₁, … in order, then the bell's three
            assert!(cells[4].starts_with("exp_a") || cells[4].parse() == Ok(list.len()), "{row}");
            list.push(bits(5));
        }
        let mut pieces = 0;
        for t in Thermocouple::ALL {
            for (i, p) in t.function().pieces().iter().enumerate() {
                let name = format!("{}{i}", t.letter());
                let ours: Vec<u64> = p.c.iter().chain(p.bell.iter().flatten()).map(|c| c.to_bits()).collect();
                assert_eq!(table.get(&name), Some(&ours), "{name}");
                assert_eq!(ranges.get(&name), Some(&[p.low.to_bits(), p.high.to_bits()]), "{name}");
                pieces += 1;
            }
        }
        assert_eq!((pieces, table.len(), table.values().map(Vec::len).sum::<usize>()), (18, 18, 164));
    }
}

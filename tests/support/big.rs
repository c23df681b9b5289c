//! A number type of 60 digits, to run a chain in arithmetic that shares nothing with the library's: values live in a pool of the
//! thread, and a `Big` is a place in it.

use std::cell::RefCell;
use std::ops::{Add, Div, Mul, Neg, Sub};

use astro_float::{BigFloat, Consts, RoundingMode};
use ohmwright::chain::Real;

/// 60 digits are 200 bits.
const BITS: usize = 256;
const ROUND: RoundingMode = RoundingMode::ToEven;

thread_local! {
    static POOL: RefCell<Vec<BigFloat>> = const { RefCell::new(Vec::new()) };
    static CONSTS: RefCell<Consts> = RefCell::new(Consts::new().expect("constants"));
}

/// A place in the pool.
#[derive(Clone, Copy, Debug)]
pub struct Big(usize);

fn put(value: BigFloat) -> Big {
    POOL.with_borrow_mut(|pool| {
        pool.push(value);
        Big(pool.len() - 1)
    })
}

fn with<T>(a: Big, f: impl FnOnce(&BigFloat) -> T) -> T {
    POOL.with_borrow(|pool| f(&pool[a.0]))
}

fn both(a: Big, b: Big, f: impl FnOnce(&BigFloat, &BigFloat) -> BigFloat) -> Big {
    put(POOL.with_borrow(|pool| f(&pool[a.0], &pool[b.0])))
}

impl Big {
    /// The exact number.
    pub fn new(value: f64) -> Self {
        put(BigFloat::from_f64(value, BITS))
    }

    /// Runs `f` and gives what it returns as a double; the pool is as before afterwards.
    pub fn double(f: impl FnOnce() -> Self) -> f64 {
        let mark = POOL.with_borrow(Vec::len);
        let out = f().value();
        POOL.with_borrow_mut(|pool| pool.truncate(mark));
        out
    }
}

impl Add for Big {
    type Output = Self;
    fn add(self, o: Self) -> Self {
        both(self, o, |a, b| a.add(b, BITS, ROUND))
    }
}

impl Sub for Big {
    type Output = Self;
    fn sub(self, o: Self) -> Self {
        both(self, o, |a, b| a.sub(b, BITS, ROUND))
    }
}

impl Mul for Big {
    type Output = Self;
    fn mul(self, o: Self) -> Self {
        both(self, o, |a, b| a.mul(b, BITS, ROUND))
    }
}

impl Div for Big {
    type Output = Self;
    fn div(self, o: Self) -> Self {
        both(self, o, |a, b| a.div(b, BITS, ROUND))
    }
}

impl Neg for Big {
    type Output = Self;
    fn neg(self) -> Self {
        put(with(self, BigFloat::neg))
    }
}

impl Real for Big {
    fn from_f64(value: f64) -> Self {
        Self::new(value)
    }
    /// The nearest double, from the 17 digits that determine it.
    fn value(self) -> f64 {
        with(self, |a| {
            if a.is_nan() {
                return f64::NAN;
            }
            if a.is_zero() {
                return 0.0;
            }
            if a.is_inf() {
                return if a.is_negative() { f64::NEG_INFINITY } else { f64::INFINITY };
            }
            // mantissa 0.1… in words of 64 bits, lowest first; the two highest hold more than a double
            let (words, _, sign, exponent, _) = a.as_raw_parts().expect("a number");
            let [.., low, high] = words else { return f64::NAN };
            let (high, low) = (*high as f64, *low as f64);
            let mantissa = libm::ldexp(high, -64) + libm::ldexp(low, -128);
            let magnitude = libm::ldexp(mantissa, exponent.clamp(-2000, 2000));
            if sign == astro_float::Sign::Neg { -magnitude } else { magnitude }
        })
    }
    fn sqrt(self) -> Self {
        put(with(self, |a| a.sqrt(BITS, ROUND)))
    }
    fn ln(self) -> Self {
        put(CONSTS.with_borrow_mut(|consts| with(self, |a| a.ln(BITS, ROUND, consts))))
    }
    fn exp(self) -> Self {
        put(CONSTS.with_borrow_mut(|consts| with(self, |a| a.exp(BITS, ROUND, consts))))
    }
}

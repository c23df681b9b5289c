//! Preferred numbers of resistors, IEC 60063:2015.

/// A series of preferred numbers: so many values in each decade.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[non_exhaustive]
pub enum Series {
    /// 12 values, for ±10 %.
    E12,
    /// 24 values, for ±5 %.
    E24,
    /// 96 values, for ±1 %.
    E96,
    /// 192 values, for ±0.5 % and closer.
    E192,
}

/// E24 as listed; E12 is every second value. These two do not follow the rounded formula.
const E24: [u32; 24] = [10, 11, 12, 13, 15, 16, 18, 20, 22, 24, 27, 30, 33, 36, 39, 43, 47, 51, 56, 62, 68, 75, 82, 91];

impl Series {
    /// Returns the value of the series that is nearest to a resistance, by ratio, Ω.
    ///
    /// - `ohms`: above zero, 1e-6..=1e12.
    ///
    /// # Errors
    /// `Error::NotFinite` or `Error::OutOfRange` outside that range.
    /// # Source
    /// IEC 60063:2015: E24 and E12 as listed; E96 and E192 are 10^(n/96) and 10^(n/192) rounded to three figures, with the
    /// one listed exception 920 (formula 919).
    pub fn nearest(self, ohms: f64) -> Result<f64, crate::Error> {
        crate::Range::new("resistance", "ohm", 1e-6, 1e12).check(ohms)?;
        // the decade by exact powers: 1 ≤ mantissa < 10
        let mut decade = 0_i32;
        let mut mantissa = ohms;
        while mantissa >= 10.0 {
            mantissa /= 10.0;
            decade += 1;
        }
        while mantissa < 1.0 {
            mantissa *= 10.0;
            decade -= 1;
        }
        // values as three-figure whole numbers, so that the figures stay the printed ones
        let mut best = (f64::INFINITY, 0.0);
        let mut offer = |figures: f64| {
            let value = figures / 100.0;
            let ratio = if value > mantissa { value / mantissa } else { mantissa / value };
            if ratio < best.0 {
                best = (ratio, figures);
            }
        };
        match self {
            Self::E12 => E24.iter().step_by(2).for_each(|v| offer(f64::from(*v) * 10.0)),
            Self::E24 => E24.iter().for_each(|v| offer(f64::from(*v) * 10.0)),
            Self::E96 | Self::E192 => {
                let step = if self == Self::E96 { 2 } else { 1 };
                for n in (0..192).step_by(step) {
                    let value = libm::round(100.0 * libm::pow(10.0, f64::from(n) / 192.0));
                    offer(if value == 919.0 { 920.0 } else { value });
                }
            }
        }
        // the first value of the next decade
        offer(1000.0);
        let mut power = 1.0;
        for _ in 0..(decade - 2).unsigned_abs() {
            power *= 10.0;
        }
        let value = if decade < 2 { best.1 / power } else { best.1 * power };
        Ok(value)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn values_of_the_standard() {
        // IEC 60063:2015 tables, from memory
        for (series, wanted, expected) in [
            (Series::E24, 59880.0, 62000.0),
            (Series::E12, 59880.0, 56000.0),
            (Series::E96, 59880.0, 60400.0),
            (Series::E192, 59880.0, 59700.0),
            (Series::E96, 174_650.0, 174_000.0),
            (Series::E192, 9195.0, 9200.0),
            (Series::E24, 9.7, 10.0),
            (Series::E24, 0.047, 0.047),
            (Series::E24, 1e6, 1e6),
        ] {
            let got = series.nearest(wanted).unwrap();
            assert!((got - expected).abs() <= 1e-12 * expected, "{series:?} {wanted}: {got}");
        }
        assert!(Series::E24.nearest(0.0).is_err() && Series::E24.nearest(f64::NAN).is_err());
    }

    #[test]
    fn e96_has_its_listed_values() {
        // the first eight and some others, IEC 60063:2015, from memory
        for v in [100.0, 102.0, 105.0, 107.0, 110.0, 113.0, 115.0, 118.0, 255.0, 511.0, 976.0] {
            assert_eq!(Series::E96.nearest(v).unwrap(), v);
        }
    }
}

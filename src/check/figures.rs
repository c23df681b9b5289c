//! How finely a column was printed: from the figures themselves.

/// What the cells of one column show of their rounding.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub(super) struct Figures {
    /// Most decimals in a cell.
    decimals: Option<i32>,
    /// Most significant digits in a cell.
    significant: i32,
    /// Greatest common divisor of all values in units of the last decimal, while it is small enough to be one.
    divisor: u64,
    /// Decimals that `divisor` refers to.
    divisor_decimals: i32,
    /// Cells that differ from the one before.
    changes: u64,
    last: f64,
}

/// Digits from which on a column counts as not rounded at all.
const ALL_DIGITS: i32 = 15;

/// A cell with more significant digits than this takes no part in the search for a step.
const COUNTED_DIGITS: i32 = 15;

impl Figures {
    /// Takes the text of a cell that holds this number.
    pub(super) fn add(&mut self, text: &str, value: f64) {
        if !value.is_finite() {
            return;
        }
        let (mantissa, power) = match text.split_once(['e', 'E']) {
            Some((mantissa, power)) => (mantissa, power.trim().parse::<i32>().unwrap_or(0)),
            None => (text, 0),
        };
        let (mut behind, mut significant, mut mark, mut digits) = (0i32, 0i32, false, 0u64);
        for byte in mantissa.bytes() {
            match byte {
                b'.' | b',' => mark = true,
                b'0'..=b'9' => {
                    behind += i32::from(mark);
                    significant += i32::from(significant > 0 || byte != b'0');
                    digits = digits.saturating_mul(10).saturating_add(u64::from(byte - b'0'));
                }
                _ => {}
            }
        }
        let decimals = behind - power;
        if behind == 0 {
            // zeros before an absent mark only hold the place: 1230 may be three digits
            let mut rest = digits;
            while rest != 0 && rest.is_multiple_of(10) {
                (rest, significant) = (rest / 10, significant - 1);
            }
        }
        if value != self.last || self.decimals.is_none() {
            self.changes += 1;
        }
        self.last = value;
        self.significant = self.significant.max(significant);
        if self.decimals.is_none() || Some(decimals) > self.decimals {
            self.decimals = Some(decimals);
        }
        if significant > COUNTED_DIGITS || digits == 0 {
            return;
        }
        if self.divisor == 0 {
            (self.divisor, self.divisor_decimals) = (digits, decimals);
            return;
        }
        // both in units of the finer one
        while self.divisor_decimals < decimals {
            self.divisor = self.divisor.saturating_mul(10);
            self.divisor_decimals += 1;
        }
        for _ in decimals..self.divisor_decimals {
            digits = digits.saturating_mul(10);
        }
        self.divisor = common(self.divisor, digits);
    }

    /// Returns the step of a value of this size; 0 for a column that was not rounded.
    pub(super) fn step(&self, value: f64) -> f64 {
        let Some(decimals) = self.decimals else { return 0.0 };
        if self.significant > ALL_DIGITS {
            return 0.0;
        }
        let fixed = super::model::ten(-decimals) * self.multiple();
        let size = value.abs();
        let mut exponent = 0;
        if size > 0.0 && size.is_finite() {
            let mut rest = size;
            while rest >= 10.0 && exponent < 400 {
                rest /= 10.0;
                exponent += 1;
            }
            while rest < 1.0 && exponent > -400 {
                rest *= 10.0;
                exponent -= 1;
            }
        }
        let relative = super::model::ten(exponent + 1 - self.significant);
        if size > 0.0 && relative > fixed { relative } else { fixed }
    }

    /// How many units of the last decimal a step is: 1, 2, 5, 10, 20, 25, 50 and so on.
    fn multiple(&self) -> f64 {
        let seen = self.divisor_decimals == self.decimals.unwrap_or(0) && self.changes >= 12;
        if !seen || self.divisor == 0 {
            return 1.0;
        }
        let plain = |mut n: u64| {
            for factor in [2, 5] {
                while n.is_multiple_of(factor) {
                    n /= factor;
                }
            }
            n == 1
        };
        if self.divisor <= 1000 && plain(self.divisor) { self.divisor as f64 } else { 1.0 }
    }
}

fn common(a: u64, b: u64) -> u64 {
    let (mut a, mut b) = (a, b);
    while b != 0 {
        (a, b) = (b, a % b);
    }
    a
}

#[cfg(test)]
mod tests {
    use super::*;

    fn of(cells: &[&str]) -> Figures {
        let mut figures = Figures::default();
        for cell in cells {
            figures.add(cell, cell.replace(',', ".").parse().unwrap());
        }
        figures
    }

    #[test]
    fn steps_by_hand() {
        assert_eq!(of(&["12.30", "-4.07", "0.00"]).step(4.0), 0.01);
        // zeros at the end dropped: the cell with most decimals tells
        assert_eq!(of(&["12.3", "12", "12.25"]).step(12.0), 0.01);
        assert_eq!(of(&["12,3", "-7,5"]).step(7.5), 0.1);
        // six significant digits, whatever the size
        let six = of(&["1234.56", "0.00123456", "12.3456"]);
        assert!((six.step(1234.56) - 0.01).abs() < 1e-15 && six.step(0.00123456) <= 1.0001e-8);
        assert_eq!(of(&["1.5e3", "2.5e3"]).step(1500.0), 100.0);
        // three significant digits without an exponent, with and without a mark that nothing follows
        let three = of(&["1230", "198", "65.2", "-7.31", "1300."]);
        assert_eq!((three.step(1230.0), three.step(198.0), three.step(65.2)), (10.0, 1.0, 0.1));
        // whole numbers are whole numbers
        assert_eq!(of(&["1230", "1231", "900"]).step(1230.0), 1.0);
        // everything that a double has
        assert_eq!(of(&["0.1234567890123456", "12.0"]).step(1.0), 0.0);
    }

    #[test]
    fn steps_that_are_no_power_of_ten() {
        let cells: Vec<std::string::String> = (1..40).map(|i| std::format!("{:.2}", 0.25 * f64::from(i))).collect();
        let cells: Vec<&str> = cells.iter().map(std::string::String::as_str).collect();
        assert_eq!(of(&cells).step(3.0), 0.25);
        let cells: Vec<std::string::String> = (1..40).map(|i| std::format!("{}.50", i * 3)).collect();
        let cells: Vec<&str> = cells.iter().map(std::string::String::as_str).collect();
        assert_eq!(of(&cells).step(3.0), 0.5);
        // two zeros everywhere
        let cells: Vec<std::string::String> = (1..40).map(|i| std::format!("{}.{}00", i, i % 10)).collect();
        let cells: Vec<&str> = cells.iter().map(std::string::String::as_str).collect();
        assert!((of(&cells).step(3.0) - 0.1).abs() < 1e-12);
    }

    use std::vec::Vec;
}

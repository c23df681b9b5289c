//! One cell of text to one number.

use std::{string::String, vec::Vec};

use crate::chain::Word;
use crate::sheet::{Decimal, Encoding};

/// Returns the cell without blanks (space, tab, form feed, no-break space) around it.
#[inline]
pub(super) fn trim(cell: &[u8], encoding: Encoding) -> &[u8] {
    // Hardly any cell has blanks around it.
    match (cell.first(), cell.last()) {
        (Some(b'!'..=b'~'), Some(b'!'..=b'~')) => cell,
        _ => trim_slow(cell, encoding),
    }
}

fn trim_slow(mut cell: &[u8], encoding: Encoding) -> &[u8] {
    loop {
        cell = cell.trim_ascii();
        // U+00A0
        let mark: &[u8] = match encoding {
            Encoding::Utf8 | Encoding::Utf16 => &[0xc2, 0xa0],
            Encoding::Windows1252 => &[0xa0],
        };
        if let Some(rest) = cell.strip_prefix(mark) {
            cell = rest;
        } else if let Some(rest) = cell.strip_suffix(mark) {
            cell = rest;
        } else {
            return cell;
        }
    }
}

/// Returns the cell as text; what cannot be decoded becomes U+FFFD.
pub(super) fn decode(cell: &[u8], encoding: Encoding) -> std::borrow::Cow<'_, str> {
    match encoding {
        // UTF-16 has become UTF-8 on the way in
        Encoding::Utf8 | Encoding::Utf16 => String::from_utf8_lossy(cell),
        Encoding::Windows1252 => encoding_rs::WINDOWS_1252.decode_without_bom_handling(cell).0,
    }
}

/// Returns the number that this trimmed cell writes, correctly rounded; infinite and NaN texts give ±∞ and NaN.
#[inline]
pub(super) fn number(cell: &[u8], decimal: Decimal) -> Option<f64> {
    match decimal {
        Decimal::Point => core::str::from_utf8(cell).ok()?.parse().ok(),
        Decimal::Comma => number_with_comma(cell),
    }
}

fn number_with_comma(cell: &[u8]) -> Option<f64> {
    let mut short = [0u8; 64];
    if let Some(copy) = short.get_mut(..cell.len()) {
        for (to, &from) in copy.iter_mut().zip(cell) {
            *to = match from {
                b',' => b'.',
                // A point beside a decimal comma could only be a thousands separator, and these are not guessed.
                b'.' => return None,
                other => other,
            };
        }
        return core::str::from_utf8(copy).ok()?.parse().ok();
    }
    if cell.contains(&b'.') {
        return None;
    }
    let long: Vec<u8> = cell.iter().map(|&b| if b == b',' { b'.' } else { b }).collect();
    core::str::from_utf8(&long).ok()?.parse().ok()
}

/// Texts and numbers that stand for something else than a value.
#[derive(Clone, Debug, Default)]
struct Sentinels {
    texts: Vec<String>,
    numbers: Vec<f64>,
}

impl Sentinels {
    fn new(stated: &[String], decimal: Decimal) -> Self {
        let mut sentinels = Self::default();
        for text in stated {
            let text = text.trim();
            sentinels.texts.push(text.into());
            // A sheet is written with points, but may quote the recording.
            let value = number(text.as_bytes(), Decimal::Point).or_else(|| number(text.as_bytes(), decimal));
            if let Some(value) = value.filter(|v| v.is_finite()) {
                sentinels.numbers.push(value);
            }
        }
        sentinels
    }

    fn has_text(&self, text: &[u8], encoding: Encoding) -> bool {
        match text.is_ascii() {
            true => self.texts.iter().any(|t| t.as_bytes() == text),
            false => !self.texts.is_empty() && self.texts.iter().any(|t| *t == decode(text, encoding)),
        }
    }
}

/// Reads cells of one recording.
#[derive(Clone, Debug)]
pub(super) struct CellReader {
    pub(super) decimal: Decimal,
    pub(super) encoding: Encoding,
    missing: Sentinels,
    saturated: Sentinels,
    numbers_mean_something: bool,
    /// Whether a cell may hold the name of a word, as readings that were taken back do.
    pub(super) words: bool,
}

impl CellReader {
    pub(super) fn new(missing: &[String], saturated: &[String], decimal: Decimal, encoding: Encoding) -> Self {
        let (missing, saturated) = (Sentinels::new(missing, decimal), Sentinels::new(saturated, decimal));
        let numbers_mean_something = !missing.numbers.is_empty() || !saturated.numbers.is_empty();
        Self { decimal, encoding, missing, saturated, numbers_mean_something, words: false }
    }

    /// Returns the number in this cell, or NaN, with its word.
    #[inline]
    pub(super) fn value(&self, cell: &[u8]) -> (f64, Word) {
        let cell = trim(cell, self.encoding);
        match number(cell, self.decimal) {
            Some(value) if value.is_finite() => {
                if self.numbers_mean_something {
                    if self.missing.numbers.contains(&value) {
                        return (f64::NAN, Word::Missing);
                    }
                    if self.saturated.numbers.contains(&value) {
                        return (f64::NAN, Word::Saturated);
                    }
                }
                (value, Word::Good)
            }
            other => (f64::NAN, self.word(cell, other)),
        }
    }

    /// Returns the word for a trimmed cell that holds no finite number.
    #[cold]
    fn word(&self, cell: &[u8], value: Option<f64>) -> Word {
        if cell.is_empty() || self.missing.has_text(cell, self.encoding) {
            return Word::Missing;
        }
        if self.saturated.has_text(cell, self.encoding) {
            return Word::Saturated;
        }
        if self.words
            && let Some(word) = Word::ALL.iter().find(|w| !w.has_number() && w.as_str().as_bytes() == cell)
        {
            return *word;
        }
        match value {
            Some(value) if value.is_nan() => Word::Missing,
            // Digits that overflow are no statement of the recorder that its input did.
            Some(_) if cell.iter().any(|b| b.eq_ignore_ascii_case(&b'i')) => Word::Saturated,
            _ => Word::Unreadable,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::{string::ToString, vec};

    fn plain(decimal: Decimal) -> CellReader {
        CellReader::new(&[], &[], decimal, Encoding::Utf8)
    }

    #[test]
    fn numbers_as_written() {
        let point = plain(Decimal::Point);
        for (text, value) in [
            ("1.5", 1.5),
            ("+1.5", 1.5),
            (" \t-1.5e-3 ", -1.5e-3),
            ("1E5", 1e5),
            (".5", 0.5),
            ("5.", 5.0),
            ("\u{a0}7\u{a0}", 7.0),
            ("0.1000000000000000055511151231257827021181583404541015625", 0.1),
            ("1e-999", 0.0),
        ] {
            assert_eq!(point.value(text.as_bytes()), (value, Word::Good), "{text}");
        }
        let comma = plain(Decimal::Comma);
        let long = "0,1000000000000000055511151231257827021181583404541015625000000000000000000000";
        for (text, value) in [("1,5", 1.5), ("+1,5e2", 150.0), ("-3", -3.0), (long, 0.1)] {
            assert_eq!(comma.value(text.as_bytes()), (value, Word::Good), "{text}");
        }
    }

    #[test]
    fn words_for_what_is_no_number() {
        let point = plain(Decimal::Point);
        for (text, word) in [
            ("", Word::Missing),
            ("  ", Word::Missing),
            ("NaN", Word::Missing),
            ("nan", Word::Missing),
            ("inf", Word::Saturated),
            ("+Inf", Word::Saturated),
            ("-infinity", Word::Saturated),
            ("1e999", Word::Unreadable),
            ("1D5", Word::Unreadable),
            ("1,5", Word::Unreadable),
            ("1 000", Word::Unreadable),
            ("1_000", Word::Unreadable),
            ("0x10", Word::Unreadable),
            ("1\0", Word::Unreadable),
            ("OVLD", Word::Unreadable),
            ("1.5 V", Word::Unreadable),
            ("e5", Word::Unreadable),
            (".", Word::Unreadable),
            ("-", Word::Unreadable),
        ] {
            let (value, got) = point.value(text.as_bytes());
            assert!(value.is_nan() && got == word, "{text:?} gave {value} {got}");
        }
        let comma = plain(Decimal::Comma);
        for text in ["1.5", "1.000,5", "1,000,5", &"1.".repeat(50), "1e999"] {
            assert_eq!(comma.value(text.as_bytes()).1, Word::Unreadable, "{text}");
        }
        assert_eq!(point.value(b"1.5\xff").1, Word::Unreadable);
    }

    #[test]
    fn sentinels_as_text_and_as_number() {
        let missing = vec!["-9999".to_string(), " void ".to_string(), "ungültig".to_string()];
        let saturated = vec!["OVER".to_string(), "9.9e37".to_string()];
        for (encoding, umlaut) in [(Encoding::Utf8, &b"ung\xc3\xbcltig"[..]), (Encoding::Windows1252, b"ung\xfcltig")] {
            let cells = CellReader::new(&missing, &saturated, Decimal::Comma, encoding);
            for text in ["-9999", " -9999,0 ", "-9,999e3", "void", "void  "] {
                assert_eq!(cells.value(text.as_bytes()).1, Word::Missing, "{text}");
            }
            assert_eq!(cells.value(umlaut).1, Word::Missing);
            for text in ["OVER", "9,9E37", "99e36"] {
                assert_eq!(cells.value(text.as_bytes()).1, Word::Saturated, "{text}");
            }
            assert_eq!(cells.value(b"-9998,9").1, Word::Good);
            assert_eq!(cells.value(b"over").1, Word::Unreadable);
        }
    }
}

//! What a sheet states about the shape of a recording.

use core::fmt;
use std::string::String;
use std::vec::Vec;

use crate::measurement::ColumnRef;

/// What stands between two cells.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Separator {
    /// `,`
    Comma,
    /// `;`
    Semicolon,
    /// The horizontal tab.
    Tab,
}

impl Separator {
    /// Returns the separator that a sheet writes as `","`, `";"` or `"\t"` (also `"tab"`); `None` for anything else.
    #[must_use]
    pub fn from_text(text: &str) -> Option<Self> {
        match text {
            "," => Some(Self::Comma),
            ";" => Some(Self::Semicolon),
            "\t" | "tab" => Some(Self::Tab),
            _ => None,
        }
    }

    /// Returns the character itself.
    #[must_use]
    pub const fn byte(self) -> u8 {
        match self {
            Self::Comma => b',',
            Self::Semicolon => b';',
            Self::Tab => b'\t',
        }
    }
}

impl fmt::Display for Separator {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Self::Comma => "','",
            Self::Semicolon => "';'",
            Self::Tab => "tab",
        })
    }
}

/// What stands between whole and fraction.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Decimal {
    /// `1.5`
    Point,
    /// `1,5`
    Comma,
}

impl Decimal {
    /// Returns the mark that a sheet writes as `"."` or `","`; `None` for anything else.
    #[must_use]
    pub fn from_text(text: &str) -> Option<Self> {
        match text {
            "." => Some(Self::Point),
            "," => Some(Self::Comma),
            _ => None,
        }
    }
}

impl fmt::Display for Decimal {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Self::Point => "'.'",
            Self::Comma => "','",
        })
    }
}

/// How bytes become characters.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Encoding {
    /// UTF-8, and ASCII with it.
    Utf8,
    /// Windows code page 1252.
    Windows1252,
    /// UTF-16, in the order of bytes that its byte-order mark or its first character shows.
    Utf16,
}

impl Encoding {
    /// Returns the encoding that a sheet writes as `"utf-8"`, `"windows-1252"` or `"utf-16"`, in any case; `None` for anything else.
    #[must_use]
    pub fn from_text(text: &str) -> Option<Self> {
        if text.eq_ignore_ascii_case("utf-8") {
            Some(Self::Utf8)
        } else if text.eq_ignore_ascii_case("windows-1252") {
            Some(Self::Windows1252)
        } else if text.eq_ignore_ascii_case("utf-16") {
            Some(Self::Utf16)
        } else {
            None
        }
    }
}

impl fmt::Display for Encoding {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Self::Utf8 => "utf-8",
            Self::Windows1252 => "windows-1252",
            Self::Utf16 => "utf-16",
        })
    }
}

/// One of the two passes of an hour that a clock shows twice, because it is set back.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Pass {
    /// Before it is set back.
    First,
    /// After that.
    Second,
}

impl Pass {
    /// Returns the other one.
    #[must_use]
    pub const fn other(self) -> Self {
        match self {
            Self::First => Self::Second,
            Self::Second => Self::First,
        }
    }
}

impl fmt::Display for Pass {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Self::First => "first",
            Self::Second => "second",
        })
    }
}

/// What a sheet states about a recording; what it leaves out is found from the head of the file.
///
/// Lines are counted from 1 as a text editor counts them; 0 states that there is no such line. The default states nothing.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Layout {
    /// What stands between two cells.
    pub separator: Option<Separator>,
    /// What stands between whole and fraction. Thousands separators are not accepted in any number.
    pub decimal: Option<Decimal>,
    /// How bytes become characters.
    pub encoding: Option<Encoding>,
    /// The line with the names of the columns.
    pub names_line: Option<u64>,
    /// More lines below it whose cells continue the names, joined by a blank.
    pub more_names: Vec<u64>,
    /// The line with the units of the columns.
    pub units_line: Option<u64>,
    /// The first row. Lines between names, units and this one are passed over.
    pub first_line: Option<u64>,
    /// Texts and numbers that stand for a value that was not recorded. They are compared as text without blanks around it and,
    /// when they are numbers, as numbers.
    pub missing: Vec<String>,
    /// Texts and numbers that stand for a converter at an end of its range, compared in the same way.
    pub saturated: Vec<String>,
    /// A line that starts with this is a comment; `None` is `#`, an empty text means that there are no comments.
    pub comment: Option<String>,
    /// Time from one row to the next, s, for a recording without a time column. The first row is at 0 s.
    pub interval: Option<f64>,
    /// The time column; several are joined by one blank.
    pub time: Vec<ColumnRef>,
    /// The shape of a moment, such as `day.month.year hour:minute:second`. The words are year, month, day, hour, minute and
    /// second; everything else stands for itself. A year of two digits lies in 1970..=2069, a second may have a fraction.
    /// Without year, month and day it is a time of day, and a step back by more than half a day begins the next day.
    pub time_format: Option<String>,
    /// The IANA name of the zone of moments that state none, such as `Europe/Berlin`.
    pub time_zone: Option<String>,
    /// In which pass of an hour that the clock of the zone shows twice a moment lies, where no row before it tells; `None` = the
    /// first.
    pub repeated_hour: Option<Pass>,
}

impl Layout {
    /// Returns the layout of a table that was written here from what this one lays out: comma and point, one line of names, units
    /// in brackets behind them. Sentinels and time stay as stated.
    #[must_use]
    pub fn as_own_text(&self) -> Self {
        Self {
            separator: Some(Separator::Comma),
            decimal: Some(Decimal::Point),
            encoding: Some(Encoding::Utf8),
            names_line: Some(1),
            more_names: Vec::new(),
            units_line: Some(0),
            first_line: Some(2),
            comment: Some(String::new()),
            ..self.clone()
        }
    }

    /// Returns the last line that holds names or units, where that is stated; 0 otherwise.
    #[must_use]
    pub fn header_end(&self) -> u64 {
        let stated = self.names_line.into_iter().chain(self.units_line);
        stated.chain(self.more_names.iter().copied()).max().unwrap_or(0)
    }
}

//! Why a recording could not be read or a result not be written.

use core::fmt;
use std::{boxed::Box, io, string::String, vec::Vec};

/// Why a recording could not be read or a result not be written.
///
/// Every variant names the file; a moment is told where the sheet states it; those that have a place in it print as `file:line:column: value 'x': reason`. Lines and columns
/// (cells) are counted from 1.
#[derive(Clone, Debug, PartialEq, Eq)]
#[non_exhaustive]
pub enum RecordingError {
    /// The operating system refused to read or write.
    Io {
        /// The file.
        file: String,
        /// What was tried, in words.
        action: &'static str,
        /// The kind of refusal.
        kind: io::ErrorKind,
        /// The refusal in the words of the system.
        reason: String,
    },
    /// The reader of a pipe went away; for a program that writes to a pipe this is no failure.
    BrokenPipe {
        /// The pipe.
        file: String,
    },
    /// The file is no text.
    NotText {
        /// The file.
        file: String,
        /// What it looks like instead.
        reason: String,
    },
    /// A line, or a row with quoted line ends, is longer than the reader accepts.
    TooLong {
        /// The file.
        file: String,
        /// The line that is too long.
        line: u64,
        /// What is too long, with its limit.
        reason: String,
    },
    /// A quoted cell is not closed.
    OpenQuote {
        /// The file.
        file: String,
        /// The line with the opening quote.
        line: u64,
    },
    /// What the layout states cannot be, or does not fit the file.
    Layout {
        /// The file.
        file: String,
        /// The key of the sheet that states it.
        key: &'static str,
        /// The value that was stated.
        value: String,
        /// Why it cannot be.
        reason: String,
    },
    /// No column has this name.
    NoSuchName {
        /// The file.
        file: String,
        /// The line with the names, 0 when the file has none.
        line: u64,
        /// The name that was asked for.
        name: String,
        /// The name in the file that is most like it.
        nearest: Option<String>,
        /// All names in the file.
        names: Vec<String>,
        /// The line of names, or what stands above the first row, and the first row, each with its number of cells, where these
        /// differ: the separator may be another one.
        ragged: Option<Box<[(u64, usize); 2]>>,
    },
    /// Several columns have this name.
    DuplicateName {
        /// The file.
        file: String,
        /// The line with the names.
        line: u64,
        /// The name that was asked for.
        name: String,
        /// The numbers of the columns that have it, from 1.
        numbers: Vec<usize>,
    },
    /// The file has no column of this number.
    NoSuchNumber {
        /// The file.
        file: String,
        /// The line with the names, or the first row.
        line: u64,
        /// The number that was asked for.
        number: usize,
        /// How many columns there are.
        columns: usize,
    },
    /// A moment cannot be placed on the time scale of the recording.
    Moment {
        /// The file.
        file: String,
        /// Where the sheet states it, as `file:line:column`; empty where nobody knows.
        place: String,
        /// The moment as written.
        value: String,
        /// Why not.
        reason: String,
    },
}

impl RecordingError {
    /// Returns the error for a refusal of the operating system.
    ///
    /// - `file`: the file as the user knows it.
    /// - `action`: what was tried, for example `"read"`.
    /// - Returns `BrokenPipe` for a pipe whose reader went away.
    #[must_use]
    pub fn from_io(file: &str, action: &'static str, error: &io::Error) -> Self {
        let kind = error.kind();
        if kind == io::ErrorKind::BrokenPipe {
            return Self::BrokenPipe { file: file.into() };
        }
        let reason = match kind {
            io::ErrorKind::StorageFull => String::from("the disk is full"),
            io::ErrorKind::QuotaExceeded => String::from("the disk quota is used up"),
            io::ErrorKind::ReadOnlyFilesystem => String::from("the file system is read-only"),
            io::ErrorKind::NotFound => String::from("no such file or directory"),
            io::ErrorKind::PermissionDenied => String::from("permission denied"),
            io::ErrorKind::NotADirectory => String::from("what stands before a / in it is a file, not a folder"),
            io::ErrorKind::IsADirectory => String::from("it is a directory"),
            _ => std::format!("{error}"),
        };
        Self::Io { file: file.into(), action, kind, reason }
    }

    /// Returns whether the reader of a pipe went away, which is no failure.
    #[must_use]
    pub const fn is_broken_pipe(&self) -> bool {
        matches!(self, Self::BrokenPipe { .. })
    }
}

impl fmt::Display for RecordingError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Io { file, action, reason, .. } => write!(f, "{file}: cannot {action}: {reason}"),
            Self::BrokenPipe { file } => write!(f, "{file}: nobody reads this pipe any more"),
            Self::NotText { file, reason } => write!(f, "{file}: not a text file: {reason}"),
            Self::TooLong { file, line, reason } => write!(f, "{file}:{line}: {reason}"),
            Self::OpenQuote { file, line } => {
                write!(f, "{file}:{line}: a quoted cell begins in this line and is not closed")
            }
            Self::Layout { file, key, value, reason } => write!(f, "{file}: value '{value}' of {key}: {reason}"),
            Self::NoSuchName { file, line, name, nearest, names, ragged } => {
                let counts = ragged.as_deref().map_or_else(String::new, |[(above, own), (row, cells)]| {
                    let s = if *own == 1 { "" } else { "s" };
                    std::format!("; line {above} has {own} cell{s} and the first row, line {row}, has {cells}: are both parted alike?")
                });
                if names.is_empty() {
                    return write!(
                        f,
                        "{file}: value '{name}': the file has no columns: it is empty, or nothing stands where its rows begin"
                    );
                }
                if *line == 0 {
                    return write!(
                        f,
                        "{file}: value '{name}': the file has no line of names; give the column's number{counts}"
                    );
                }
                write!(f, "{file}:{line}: value '{name}': no column has this name")?;
                match nearest {
                    Some(near) => write!(f, "; the nearest is '{near}'")?,
                    // the sheet may be for another file: show what this one has
                    None => {
                        let most = 12;
                        let shown: Vec<&str> = names.iter().take(most).map(String::as_str).collect();
                        let more = if names.len() > most { ", …" } else { "" };
                        write!(f, "; the columns here are {}{more}", shown.join(", "))?;
                    }
                }
                f.write_str(&counts)
            }
            Self::DuplicateName { file, line, name, numbers } => {
                write!(f, "{file}:{line}: value '{name}': columns ")?;
                for (i, number) in numbers.iter().enumerate() {
                    let gap = match i {
                        0 => "",
                        _ if i + 1 == numbers.len() => " and ",
                        _ => ", ",
                    };
                    write!(f, "{gap}{number}")?;
                }
                write!(f, " have this name; pick one by its number")
            }
            Self::NoSuchNumber { file, line, number, columns } => {
                write!(f, "{file}:{line}: value '{number}': there are {columns} columns, counted from 1")
            }
            Self::Moment { file, place, value, reason } if place.is_empty() => {
                write!(f, "{file}: moment '{value}' of the sheet: {reason}")
            }
            Self::Moment { file, place, value, reason } => {
                write!(f, "{place}: moment '{value}': {reason} (recording {file})")
            }
        }
    }
}

impl core::error::Error for RecordingError {}

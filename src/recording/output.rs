//! Results that appear whole or not at all.

use core::fmt;
use std::{
    boxed::Box,
    format, fs,
    io::{self, Write},
    path::{Path, PathBuf},
    string::{String, ToString},
    vec::Vec,
};

use tempfile::NamedTempFile;

use super::{Fingerprint, RecordingError, Taking, TimeScale};

/// Bytes that are gathered before the system is asked to write.
const GATHER: usize = 64 << 10;

enum Target<'a> {
    /// A new file beside the target.
    File {
        temporary: NamedTempFile,
        path: PathBuf,
    },
    Stream(Box<dyn Write + 'a>),
}

/// Where a result goes.
///
/// A file is written beside its target under another name, flushed to the disk and renamed by [`Output::finish`]: the target
/// holds the whole result or what it held before. An output that is dropped without `finish` leaves nothing behind. Writes are
/// gathered; no buffer is needed around it.
///
/// ```
/// # use ohmwright::recording::{CsvWriter, Digits, Output};
/// let mut text = Vec::new();
/// let mut csv = CsvWriter::new(Output::to_writer(&mut text, "standard output"));
/// csv.text("load step").text("g01 (microstrain)").end_row()?;
/// csv.text("lorry, midspan").number(61.25, Digits::Shortest).end_row()?;
/// csv.finish()?;
/// assert_eq!(text, b"load step,g01 (microstrain)\n\"lorry, midspan\",61.25\n");
/// # Ok::<(), ohmwright::recording::RecordingError>(())
/// ```
pub struct Output<'a> {
    target: Target<'a>,
    name: String,
    gathered: Vec<u8>,
    taking: Option<Taking>,
}

impl Output<'static> {
    /// Begins a file that will appear at this path.
    ///
    /// A link is followed and an existing file keeps its permissions. What is no regular file, such as a device or a named
    /// pipe, is written to directly.
    ///
    /// # Errors
    /// `Io` when the path is a directory, or nothing can be written beside it.
    pub fn to_path(path: impl AsRef<Path>) -> Result<Self, RecordingError> {
        let path = path.as_ref();
        let name = path.display().to_string();
        let refuse = |error: &io::Error| RecordingError::from_io(&name, "write", error);
        let gathered = Vec::new();
        let existing = match fs::metadata(path) {
            Ok(existing) => Some(existing),
            Err(error) if error.kind() == io::ErrorKind::NotFound => None,
            Err(error) => return Err(refuse(&error)),
        };
        if let Some(existing) = existing.as_ref().filter(|e| !e.is_file()) {
            if existing.is_dir() {
                return Err(refuse(&io::ErrorKind::IsADirectory.into()));
            }
            let file = fs::OpenOptions::new().write(true).open(path).map_err(|e| refuse(&e))?;
            return Ok(Self { target: Target::Stream(Box::new(file)), name, gathered, taking: None });
        }
        let path = match existing {
            Some(_) => fs::canonicalize(path).map_err(|e| refuse(&e))?,
            None => path.into(),
        };
        let Some(file_name) = path.file_name() else {
            return Err(refuse(&io::ErrorKind::IsADirectory.into()));
        };
        let directory = match path.parent() {
            Some(parent) if !parent.as_os_str().is_empty() => parent,
            _ => Path::new("."),
        };
        let prefix = format!(".{}.", file_name.to_string_lossy().chars().take(40).collect::<String>());
        let mut builder = tempfile::Builder::new();
        builder.prefix(&prefix).suffix(".part");
        #[cfg(unix)]
        builder.permissions(std::os::unix::fs::PermissionsExt::from_mode(0o666));
        let temporary = builder.tempfile_in(directory).map_err(|e| refuse(&e))?;
        if let Some(existing) = existing {
            temporary.as_file().set_permissions(existing.permissions()).map_err(|e| refuse(&e))?;
        }
        Ok(Self { target: Target::File { temporary, path }, name, gathered, taking: None })
    }

    /// Writes to the standard output of the program.
    #[must_use]
    pub fn stdout() -> Self {
        Self::to_writer(io::stdout(), "standard output")
    }
}

impl<'a> Output<'a> {
    /// Writes to anything; `name` is for messages.
    pub fn to_writer(writer: impl Write + 'a, name: &str) -> Self {
        Self { target: Target::Stream(Box::new(writer)), name: name.into(), gathered: Vec::new(), taking: None }
    }

    /// Returns the name for messages: the path as it was given.
    #[must_use]
    pub fn name(&self) -> &str {
        &self.name
    }

    /// Writes bytes.
    ///
    /// # Errors
    /// `BrokenPipe` when nobody reads any more; `Io` with the name of the output for any other refusal, such as a full disk.
    pub fn put(&mut self, bytes: &[u8]) -> Result<(), RecordingError> {
        self.gathered.extend_from_slice(bytes);
        if self.gathered.len() >= GATHER { self.pass_on() } else { Ok(()) }
    }

    /// Passes on what was gathered, for a reader that waits for it.
    ///
    /// # Errors
    /// As [`Output::put`].
    pub fn flush(&mut self) -> Result<(), RecordingError> {
        self.pass_on()?;
        let result = match &mut self.target {
            Target::File { .. } => Ok(()),
            Target::Stream(writer) => writer.flush(),
        };
        result.map_err(|e| RecordingError::from_io(&self.name, "write", &e))
    }

    /// Takes a fingerprint of all that passes from here on.
    #[must_use]
    pub fn with_fingerprint(self) -> Self {
        Self { taking: Some(Taking::default()), ..self }
    }

    fn pass_on(&mut self) -> Result<(), RecordingError> {
        if let Some(taking) = &mut self.taking {
            taking.add(&self.gathered);
        }
        let result = match &mut self.target {
            Target::File { temporary, .. } => temporary.as_file_mut().write_all(&self.gathered),
            Target::Stream(writer) => writer.write_all(&self.gathered),
        };
        self.gathered.clear();
        result.map_err(|e| RecordingError::from_io(&self.name, "write", &e))
    }

    /// Lets the result appear at its path, and returns its fingerprint where one was taken.
    ///
    /// # Errors
    /// As [`Output::put`]; the target is then as it was before.
    pub fn finish(mut self) -> Result<Option<Fingerprint>, RecordingError> {
        self.flush()?;
        let Self { target, name, taking, .. } = self;
        let fingerprint = taking.map(Taking::end);
        let Target::File { temporary, path } = target else { return Ok(fingerprint) };
        let refuse = |e: &io::Error| RecordingError::from_io(&name, "write", e);
        temporary.as_file().sync_all().map_err(|e| refuse(&e))?;
        temporary.persist(&path).map_err(|e| refuse(&e.error))?;
        // The rename itself is only on the disk when the directory is. Some file systems refuse this; the result is whole anyway.
        #[cfg(unix)]
        if let Some(parent) = path.parent() {
            let parent = if parent.as_os_str().is_empty() { Path::new(".") } else { parent };
            let _ = fs::File::open(parent).and_then(|directory| directory.sync_all());
        }
        Ok(fingerprint)
    }
}

impl fmt::Debug for Output<'_> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.debug_struct("Output").field("name", &self.name).finish_non_exhaustive()
    }
}

/// How many digits of a number are printed.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Digits {
    /// The fewest that read back as the same number.
    #[default]
    Shortest,
    /// So many after the point, correctly rounded (half to even on the exact binary value).
    Fixed(u8),
}

/// A number as it is printed in a result: with a point, without thousands separators.
///
/// Shortest digits have an exponent below 1e-5 and from 1e17 on. −0 prints 0, NaN prints nothing, ±∞ prints `inf` and `-inf`.
///
/// ```
/// # use ohmwright::recording::{Digits, NumberText};
/// assert_eq!(NumberText(0.1 + 0.2, Digits::Shortest).to_string(), "0.30000000000000004");
/// assert_eq!(NumberText(1.5e-7, Digits::Shortest).to_string(), "1.5e-7");
/// assert_eq!(NumberText(-0.04, Digits::Fixed(1)).to_string(), "0.0");
/// assert_eq!(NumberText(f64::NAN, Digits::Fixed(1)).to_string(), "");
/// ```
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct NumberText(pub f64, pub Digits);

impl fmt::Display for NumberText {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let Self(value, digits) = *self;
        if value.is_nan() {
            return Ok(());
        }
        match digits {
            _ if value.is_infinite() => write!(f, "{value}"),
            Digits::Shortest if value == 0.0 => f.write_str("0"),
            Digits::Shortest if value.abs() >= 1e-5 && value.abs() < 1e17 => write!(f, "{value}"),
            Digits::Shortest => write!(f, "{value:e}"),
            Digits::Fixed(decimals) => {
                let decimals = usize::from(decimals);
                // A value that rounds to zero prints without a sign.
                let value = if (-0.5..=0.0).contains(&value) && rounds_to_zero(value, decimals) { 0.0 } else { value };
                write!(f, "{value:.decimals$}")
            }
        }
    }
}

/// Whether a number prints with nothing but zeros.
fn rounds_to_zero(value: f64, decimals: usize) -> bool {
    struct Zeros(bool);
    impl fmt::Write for Zeros {
        fn write_str(&mut self, text: &str) -> fmt::Result {
            self.0 &= text.bytes().all(|b| matches!(b, b'0' | b'.' | b'-'));
            Ok(())
        }
    }
    let mut zeros = Zeros(true);
    fmt::Write::write_fmt(&mut zeros, format_args!("{value:.decimals$}")).is_ok() && zeros.0
}

/// What a column of results holds.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[non_exhaustive]
pub enum HeadKind {
    /// The time of each row, as it was written, on this scale.
    Time(TimeScale),
    /// A column that was copied through.
    Kept,
    /// The values of a channel, by its number.
    Value(usize),
    /// The expanded uncertainties of a channel.
    Uncertainty(usize),
    /// The words of all channels that are not `good`.
    Flags,
}

/// The head of a column of results.
#[derive(Clone, Debug, PartialEq)]
pub struct Head {
    /// Its name, with the unit in brackets.
    pub name: String,
    /// What it holds.
    pub kind: HeadKind,
}

/// What takes a table of results, cell by cell from left to right.
pub trait ResultTable {
    /// Begins the table.
    ///
    /// # Errors
    /// As [`Output::put`].
    fn begin(&mut self, heads: &[Head]) -> Result<(), RecordingError>;
    /// Appends the time of a row: as written, and in seconds on its scale.
    fn put_time(&mut self, text: &str, seconds: f64);
    /// Appends a text.
    fn put_text(&mut self, text: &str);
    /// Appends a number; NaN is none.
    fn put_number(&mut self, value: f64, digits: Digits);
    /// Ends a row.
    ///
    /// # Errors
    /// As [`Output::put`].
    fn end_row(&mut self) -> Result<(), RecordingError>;
    /// Passes on what there is, for a reader that waits for it.
    ///
    /// # Errors
    /// As [`Output::put`].
    fn pass_on(&mut self) -> Result<(), RecordingError>;
}

impl ResultTable for CsvWriter<'_> {
    fn begin(&mut self, heads: &[Head]) -> Result<(), RecordingError> {
        for head in heads {
            self.text(&head.name);
        }
        Self::end_row(self)
    }

    fn put_time(&mut self, text: &str, _: f64) {
        self.text(text);
    }

    fn put_text(&mut self, text: &str) {
        self.text(text);
    }

    fn put_number(&mut self, value: f64, digits: Digits) {
        self.number(value, digits);
    }

    fn end_row(&mut self) -> Result<(), RecordingError> {
        Self::end_row(self)
    }

    fn pass_on(&mut self) -> Result<(), RecordingError> {
        self.flush()
    }
}

/// Writes a table: comma, point, LF, quotes only where they are needed.
///
/// Cells are appended from left to right; every method returns the writer, so that a row can be written in one expression.
#[derive(Debug)]
pub struct CsvWriter<'a> {
    output: Output<'a>,
    row: Vec<u8>,
    cells: usize,
}

impl<'a> CsvWriter<'a> {
    /// Returns a writer of rows on top of an output.
    #[must_use]
    pub const fn new(output: Output<'a>) -> Self {
        Self { output, row: Vec::new(), cells: 0 }
    }

    fn begin_cell(&mut self) {
        if self.cells > 0 {
            self.row.push(b',');
        }
        self.cells += 1;
    }

    /// Appends a cell of text.
    pub fn text(&mut self, text: &str) -> &mut Self {
        self.begin_cell();
        let comment = self.cells == 1 && text.starts_with('#');
        let blank = text.starts_with([' ', '\t']) || text.ends_with([' ', '\t']);
        if comment || blank || text.contains([',', '"', '\n', '\r']) {
            self.row.push(b'"');
            for (i, piece) in text.split('"').enumerate() {
                if i > 0 {
                    self.row.extend_from_slice(b"\"\"");
                }
                self.row.extend_from_slice(piece.as_bytes());
            }
            self.row.push(b'"');
        } else {
            self.row.extend_from_slice(text.as_bytes());
        }
        self
    }

    /// Appends a cell with a number; NaN is a blank cell.
    pub fn number(&mut self, value: f64, digits: Digits) -> &mut Self {
        self.begin_cell();
        // Writing to a vector does not fail.
        let _ = write!(self.row, "{}", NumberText(value, digits));
        self
    }

    /// Appends a blank cell.
    pub fn blank(&mut self) -> &mut Self {
        self.begin_cell();
        self
    }

    /// Ends the row.
    ///
    /// # Errors
    /// As [`Output::put`].
    pub fn end_row(&mut self) -> Result<(), RecordingError> {
        // A blank line would be no row to whoever reads it.
        if self.row.is_empty() && self.cells == 1 {
            self.row.extend_from_slice(b"\"\"");
        }
        self.row.push(b'\n');
        let result = self.output.put(&self.row);
        self.row.clear();
        self.cells = 0;
        result
    }

    /// Passes on the rows so far, for a reader that waits for them.
    ///
    /// # Errors
    /// As [`Output::put`].
    pub fn flush(&mut self) -> Result<(), RecordingError> {
        self.output.flush()
    }

    /// Ends a row that was begun and lets the result appear, as [`Output::finish`].
    ///
    /// # Errors
    /// As [`Output::finish`].
    pub fn finish(mut self) -> Result<Option<Fingerprint>, RecordingError> {
        if self.cells > 0 {
            self.end_row()?;
        }
        self.output.finish()
    }
}

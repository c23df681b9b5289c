//! Where a table of results goes: text, or a file of columns by the ending of its name.

use std::path::Path;

use ohmwright::recording::{CsvWriter, Fingerprint, Output, RecordingError, ResultTable};
use ohmwright::sheet::Sheet;

use crate::failure::Failure;
use crate::files;

/// A table that can be ended.
pub(crate) enum Writer {
    Text(Box<CsvWriter<'static>>),
    #[cfg(feature = "parquet")]
    Columns(Box<ohmwright::recording::columnar::ColumnarWriter<'static>>),
}

impl Writer {
    /// Returns the writer for a result of this name; `None` is standard output.
    ///
    /// - `single`: 32-bit floats in a file of columns.
    pub(crate) fn new(
        output: Output<'static>,
        name: Option<&Path>,
        single: bool,
        sheet: &Sheet,
        sheet_path: &Path,
    ) -> Result<Self, Failure> {
        if let Some(name) = name.filter(|name| files::is_columnar(name)) {
            return Self::columns(output, name, single, sheet, sheet_path);
        }
        if single {
            return Err(Failure::error("--single is for results in columns: give -o OUT.parquet or OUT.arrow"));
        }
        Ok(Self::Text(Box::new(CsvWriter::new(output))))
    }

    #[cfg(feature = "parquet")]
    fn columns(
        output: Output<'static>,
        name: &Path,
        single: bool,
        sheet: &Sheet,
        sheet_path: &Path,
    ) -> Result<Self, Failure> {
        use ohmwright::recording::columnar::{Columnar, ColumnarWriter, Made, Width};
        let kind = Columnar::from_path(name).unwrap_or(Columnar::Parquet);
        let width = if single { Width::Single } else { Width::Double };
        let made = Made::by(sheet, &files::fingerprint(sheet_path)?.sha256);
        Ok(Self::Columns(Box::new(ColumnarWriter::new(output, kind, width, made))))
    }

    #[cfg(not(feature = "parquet"))]
    fn columns(_: Output<'static>, name: &Path, _: bool, _: &Sheet, _: &Path) -> Result<Self, Failure> {
        Err(Failure::error(format!("{}: {}", name.display(), files::WITHOUT_PARQUET)))
    }

    /// The table, to be filled.
    pub(crate) fn table(&mut self) -> &mut dyn ResultTable {
        match self {
            Self::Text(csv) => csv.as_mut(),
            #[cfg(feature = "parquet")]
            Self::Columns(columns) => columns.as_mut(),
        }
    }

    /// Lets the result appear, as [`Output::finish`].
    pub(crate) fn finish(self) -> Result<Option<Fingerprint>, RecordingError> {
        match self {
            Self::Text(csv) => csv.finish(),
            #[cfg(feature = "parquet")]
            Self::Columns(columns) => columns.finish(),
        }
    }
}

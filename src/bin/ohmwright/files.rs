//! Sheets and recordings from disk.

use std::fs::File;
use std::io::{self, Read, Seek};
use std::path::{Path, PathBuf};
use std::sync::atomic::{AtomicU64, Ordering};
use std::sync::{Arc, Mutex};

#[cfg(feature = "parquet")]
use ohmwright::recording::columnar::{Columnar, layout_of_columns, text_of};
use ohmwright::recording::{Fingerprint, Output, RecordingError, Rows, Taking, settle_zero_files, unpacked};
#[cfg(feature = "parquet")]
use ohmwright::sheet::Layout;
use ohmwright::sheet::Sheet;

use crate::failure::Failure;

/// Reads a sheet.
pub(crate) fn sheet(path: &Path) -> Result<Sheet, Failure> {
    sheet_and_files(path).map(|(sheet, _)| sheet)
}

/// Reads a sheet, and returns the files that it names too.
pub(crate) fn sheet_and_files(path: &Path) -> Result<(Sheet, Vec<PathBuf>), Failure> {
    let mut named = Vec::new();
    let name = path.display().to_string();
    let bytes = std::fs::read(path).map_err(|e| RecordingError::from_io(&name, "read", &e))?;
    let text = String::from_utf8(bytes).map_err(|e| {
        let good = e.as_bytes().get(..e.utf8_error().valid_up_to()).unwrap_or_default();
        let before = String::from_utf8_lossy(good);
        let line = before.matches('\n').count() + 1;
        let column = before.rsplit('\n').next().map_or(0, |l| l.chars().count()) + 1;
        let byte = e.as_bytes().get(good.len()).copied().unwrap_or_default();
        Failure::error(format!("{name}:{line}:{column}: byte 0x{byte:02x} is not UTF-8: save the sheet as UTF-8 text"))
    })?;
    let mut sheet = Sheet::read_with(&name, &text, &mut |file| {
        let path = beside(path, file);
        let name = path.display().to_string();
        named.push(path.clone());
        match std::fs::read(&path) {
            Ok(bytes) => Ok((name, bytes)),
            Err(error) => Err(RecordingError::from_io(&name, "read", &error).to_string()),
        }
    })
    .map_err(|e| Failure::error(e.to_string()))?;
    if !sheet.measurement.zero_files().is_empty() {
        let open = &mut |file: &str| Ok(Box::new(Source::new(&beside(path, file))) as Box<dyn Rows>);
        let (settled, said) = settle_zero_files(&sheet.measurement, &sheet.layout, open)?;
        named.extend(sheet.measurement.zero_files().iter().map(|file| beside(path, file)));
        sheet.measurement = settled;
        sheet.notes.extend(said);
    }
    Ok((sheet, named))
}

/// A file that a sheet names, which is relative to the sheet.
fn beside(sheet: &Path, file: &str) -> PathBuf {
    sheet.parent().map_or_else(|| PathBuf::from(file), |directory| directory.join(file))
}

/// Writes a file that appears whole or not at all.
pub(crate) fn whole(path: &Path, bytes: &[u8]) -> Result<(), Failure> {
    let mut output = Output::to_path(path)?;
    output.put(bytes)?;
    output.finish()?;
    Ok(())
}

/// A recording on disk, or standard input; a clone shares what is counted of it.
#[derive(Clone)]
pub(crate) struct Source {
    name: String,
    path: Option<std::path::PathBuf>,
    /// Bytes read so far, for the progress bar.
    pub(crate) taken: Arc<AtomicU64>,
    /// Whether the end of the file is where its writer is now.
    follow: bool,
    /// The fingerprint of what is read, as far as it has been read; `None` where none is taken.
    taking: Option<Arc<Mutex<Taking>>>,
}

impl Source {
    pub(crate) fn new(path: &Path) -> Self {
        let plain = |name: String, path| Self { name, path, taken: Arc::default(), follow: false, taking: None };
        if path.as_os_str() == "-" {
            return plain("standard input".into(), None);
        }
        plain(path.display().to_string(), Some(path.to_path_buf()))
    }

    /// Waits at the end of the file for what is written next.
    pub(crate) fn followed(mut self) -> Self {
        self.follow = true;
        self
    }

    /// Takes a fingerprint of what is read.
    pub(crate) fn with_fingerprint(mut self) -> Self {
        self.taking = Some(Arc::default());
        self
    }

    /// Returns the fingerprint of the bytes that were read last, to the end of the file.
    pub(crate) fn fingerprint(&self) -> Result<Fingerprint, RecordingError> {
        let read = self.taking.as_ref().and_then(|t| t.lock().ok().map(|t| t.clone().end()));
        match (read, &self.path) {
            (Some(read), _) if self.size().is_none_or(|size| size == read.bytes) => Ok(read),
            (_, Some(path)) => fingerprint(path),
            (read, None) => Ok(read.unwrap_or_else(|| Taking::default().end())),
        }
    }

    /// Returns the size of a plain file, bytes.
    pub(crate) fn size(&self) -> Option<u64> {
        self.path.as_ref().and_then(|p| std::fs::metadata(p).ok()).filter(std::fs::Metadata::is_file).map(|m| m.len())
    }
}

/// Returns the fingerprint of a file.
pub(crate) fn fingerprint(path: &Path) -> Result<Fingerprint, RecordingError> {
    let name = path.display().to_string();
    let file = File::open(path).map_err(|e| RecordingError::from_io(&name, "open", &e))?;
    Fingerprint::of(file, &name)
}

/// Whether a file is one of columns, by the ending of its name.
pub(crate) fn is_columnar(path: &Path) -> bool {
    path.extension()
        .and_then(|e| e.to_str())
        .is_some_and(|ending| ["parquet", "arrow", "arrows"].iter().any(|known| ending.eq_ignore_ascii_case(known)))
}

/// A file of columns as text.
#[cfg(feature = "parquet")]
fn columnar<'a>(path: &Path, file: File, name: &str) -> Result<Box<dyn Read + 'a>, RecordingError> {
    let kind = Columnar::from_path(path).unwrap_or(Columnar::Parquet);
    text_of(file, kind, name)
}

#[cfg(not(feature = "parquet"))]
fn columnar<'a>(_: &Path, _: File, name: &str) -> Result<Box<dyn Read + 'a>, RecordingError> {
    Err(RecordingError::from_io(name, "read", &io::Error::other(WITHOUT_PARQUET)))
}

/// What a program without Parquet says of such files.
#[cfg(not(feature = "parquet"))]
pub(crate) const WITHOUT_PARQUET: &str =
    "this ohmwright was built without Parquet and Arrow: build it with --features cli,parquet";

/// Whether a file begins as gzip or Zstandard do; it is then read from its start.
fn is_packed(file: &mut File) -> io::Result<bool> {
    let mut head = [0u8; 4];
    let read = file.read(&mut head)?;
    file.seek(io::SeekFrom::Start(0))?;
    let head = head.get(..read).unwrap_or_default();
    Ok(head.starts_with(&[0x1f, 0x8b]) || head == [0x28, 0xb5, 0x2f, 0xfd])
}

/// How long to wait before a file is looked at again.
const PAUSE: std::time::Duration = std::time::Duration::from_millis(100);

/// A file that is still being written: at its end, whoever reads waits.
struct Followed {
    file: File,
    read: u64,
}

impl Read for Followed {
    fn read(&mut self, buffer: &mut [u8]) -> io::Result<usize> {
        loop {
            let n = self.file.read(buffer)?;
            if n > 0 || buffer.is_empty() {
                self.read += n as u64;
                return Ok(n);
            }
            if self.file.metadata()?.len() < self.read {
                return Err(io::Error::other("it became shorter while it was followed: it was cut off or begun anew"));
            }
            std::thread::sleep(PAUSE);
        }
    }
}

/// Counts what passes.
struct Counted<R> {
    inner: R,
    taken: Arc<AtomicU64>,
    taking: Option<Arc<Mutex<Taking>>>,
}

impl<R: Read> Read for Counted<R> {
    fn read(&mut self, buffer: &mut [u8]) -> io::Result<usize> {
        let n = self.inner.read(buffer)?;
        self.taken.fetch_add(n as u64, Ordering::Relaxed);
        if let Some(Ok(mut taking)) = self.taking.as_ref().map(|t| t.lock()) {
            taking.add(buffer.get(..n).unwrap_or_default());
        }
        Ok(n)
    }
}

impl Rows for Source {
    fn open(&mut self) -> Result<Box<dyn Read + '_>, RecordingError> {
        let taken = Arc::clone(&self.taken);
        taken.store(0, Ordering::Relaxed);
        let taking = self.taking.clone();
        if let Some(Ok(mut taking)) = taking.as_ref().map(|t| t.lock()) {
            *taking = Taking::default();
        }
        match &self.path {
            None => unpacked(Counted { inner: io::stdin().lock(), taken, taking }, &self.name),
            Some(path) => {
                let inner = File::open(path).map_err(|e| RecordingError::from_io(&self.name, "open", &e))?;
                if is_columnar(path) {
                    return columnar(path, inner, &self.name);
                }
                if self.follow {
                    let mut inner = inner;
                    if is_packed(&mut inner).map_err(|e| RecordingError::from_io(&self.name, "read", &e))? {
                        let why = "a compressed file cannot be followed: its end is not known until it is whole";
                        return Err(RecordingError::from_io(&self.name, "follow", &io::Error::other(why)));
                    }
                    return Ok(Box::new(Counted { inner: Followed { file: inner, read: 0 }, taken, taking }));
                }
                unpacked(Counted { inner, taken, taking }, &self.name)
            }
        }
    }

    fn name(&self) -> &str {
        &self.name
    }

    fn is_file(&self) -> bool {
        !self.follow && self.size().is_some()
    }

    #[cfg(feature = "parquet")]
    fn layout(&self, stated: &Layout) -> Layout {
        if self.path.as_deref().is_some_and(is_columnar) { layout_of_columns(stated) } else { stated.clone() }
    }
}

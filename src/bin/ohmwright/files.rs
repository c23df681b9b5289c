//! Sheets and recordings from disk.

use std::fs::File;
use std::io::{self, Read, Write};
use std::path::Path;
use std::sync::Arc;
use std::sync::atomic::{AtomicU64, Ordering};

use ohmwright::recording::{RecordingError, Rows};
use ohmwright::sheet::Sheet;

use crate::failure::Failure;

/// Reads a sheet.
pub(crate) fn sheet(path: &Path) -> Result<Sheet, Failure> {
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
    Sheet::read(&name, &text).map_err(|e| Failure::error(e.to_string()))
}

/// Writes a file that appears whole or not at all.
pub(crate) fn whole(path: &Path, bytes: &[u8]) -> Result<(), Failure> {
    let folder = path.parent().filter(|p| !p.as_os_str().is_empty()).unwrap_or_else(|| Path::new("."));
    let written = tempfile::NamedTempFile::new_in(folder).and_then(|mut file| {
        file.write_all(bytes)?;
        file.as_file().sync_all()?;
        file.persist(path).map_err(|e| e.error)
    });
    written.map(drop).map_err(|e| Failure::error(format!("{}: {e}", path.display())))
}

/// A recording on disk, or standard input.
pub(crate) struct Source {
    name: String,
    path: Option<std::path::PathBuf>,
    /// Bytes read so far, for the progress bar.
    pub(crate) taken: Arc<AtomicU64>,
}

impl Source {
    pub(crate) fn new(path: &Path) -> Self {
        if path.as_os_str() == "-" {
            return Self { name: "standard input".into(), path: None, taken: Arc::default() };
        }
        Self { name: path.display().to_string(), path: Some(path.to_path_buf()), taken: Arc::default() }
    }

    /// Returns the size of a plain file, bytes.
    pub(crate) fn size(&self) -> Option<u64> {
        self.path.as_ref().and_then(|p| std::fs::metadata(p).ok()).filter(std::fs::Metadata::is_file).map(|m| m.len())
    }
}

/// Counts what passes.
struct Counted<R> {
    inner: R,
    taken: Arc<AtomicU64>,
}

impl<R: Read> Read for Counted<R> {
    fn read(&mut self, buffer: &mut [u8]) -> io::Result<usize> {
        let n = self.inner.read(buffer)?;
        self.taken.fetch_add(n as u64, Ordering::Relaxed);
        Ok(n)
    }
}

impl Rows for Source {
    fn open(&mut self) -> Result<Box<dyn Read + '_>, RecordingError> {
        let taken = Arc::clone(&self.taken);
        taken.store(0, Ordering::Relaxed);
        match &self.path {
            None => Ok(Box::new(Counted { inner: io::stdin().lock(), taken })),
            Some(path) => {
                let inner = File::open(path).map_err(|e| RecordingError::from_io(&self.name, "open", &e))?;
                Ok(Box::new(Counted { inner, taken }))
            }
        }
    }

    fn name(&self) -> &str {
        &self.name
    }

    fn is_file(&self) -> bool {
        self.size().is_some()
    }
}

//! Fingerprints of files: how long they are, and their SHA-256.

use std::format;
use std::io::{self, Read, Write};
use std::string::String;

use sha2::{Digest, Sha256};

use super::RecordingError;

/// Length and SHA-256 (FIPS 180-4) of a file, as `sha256sum` prints it.
#[derive(Clone, Debug, PartialEq, Eq, serde::Serialize, serde::Deserialize)]
pub struct Fingerprint {
    /// Its length, bytes.
    pub bytes: u64,
    /// Its SHA-256, 64 hexadecimal digits.
    pub sha256: String,
}

/// A fingerprint that is being taken.
#[derive(Clone, Default)]
pub struct Taking {
    bytes: u64,
    state: Sha256,
}

impl core::fmt::Debug for Taking {
    fn fmt(&self, f: &mut core::fmt::Formatter<'_>) -> core::fmt::Result {
        f.debug_struct("Taking").field("bytes", &self.bytes).finish_non_exhaustive()
    }
}

impl Taking {
    /// Takes these bytes in.
    pub fn add(&mut self, bytes: &[u8]) {
        self.bytes += bytes.len() as u64;
        self.state.update(bytes);
    }

    /// Returns the fingerprint of all bytes so far.
    #[must_use]
    pub fn end(self) -> Fingerprint {
        let sha256 = self.state.finalize().iter().map(|byte| format!("{byte:02x}")).collect();
        Fingerprint { bytes: self.bytes, sha256 }
    }
}

impl Write for Taking {
    fn write(&mut self, bytes: &[u8]) -> io::Result<usize> {
        self.add(bytes);
        Ok(bytes.len())
    }

    fn flush(&mut self) -> io::Result<()> {
        Ok(())
    }
}

impl Fingerprint {
    /// Returns the fingerprint of all that a source gives.
    ///
    /// # Errors
    /// `Io` when the source refuses.
    pub fn of(mut source: impl Read, name: &str) -> Result<Self, RecordingError> {
        let mut taking = Taking::default();
        io::copy(&mut source, &mut taking).map_err(|e| RecordingError::from_io(name, "read", &e))?;
        Ok(taking.end())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// FIPS 180-4, example of one block: SHA-256 of "abc" (NIST, Examples with Intermediate Values).
    #[test]
    fn the_published_example() {
        let print = Fingerprint::of(&b"abc"[..], "").unwrap();
        assert_eq!(print.bytes, 3);
        assert_eq!(print.sha256, "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad");
    }
}

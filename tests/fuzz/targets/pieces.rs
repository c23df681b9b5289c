//! A source that gives its bytes in pieces of one size, as a pipe may.

use std::io::{Read, Result};

pub struct Pieces<'a> {
    pub bytes: &'a [u8],
    pub size: usize,
}

impl Read for Pieces<'_> {
    fn read(&mut self, into: &mut [u8]) -> Result<usize> {
        let size = self.size.min(into.len()).min(self.bytes.len());
        let (now, later) = self.bytes.split_at(size);
        into[..size].copy_from_slice(now);
        self.bytes = later;
        Ok(size)
    }
}

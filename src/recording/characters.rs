//! Bytes of a file as a reader takes them: UTF-16 becomes UTF-8, everything else passes.

use std::io::{self, Read};
use std::vec::Vec;

use crate::sheet::Encoding;

const RAW: usize = 32 << 10;

#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Mode {
    /// Nothing was read yet.
    Unknown,
    Plain,
    /// UTF-16 with the low byte first, or the high one.
    Wide {
        low_first: bool,
    },
}

/// A source of bytes whose UTF-16 is made UTF-8 on the way.
pub(super) struct Characters<R> {
    source: R,
    stated: Option<Encoding>,
    mode: Mode,
    /// Whether a mark told the order of bytes.
    marked: bool,
    /// Bytes that were read and are not yet given, from `given` on; UTF-8 where the mode is wide.
    ready: Vec<u8>,
    given: usize,
    /// An odd byte, and the first half of a pair, that wait for what follows.
    odd: Option<u8>,
    half: Option<u16>,
}

impl<R: Read> Characters<R> {
    pub(super) fn new(source: R, stated: Option<Encoding>) -> Self {
        Self { source, stated, mode: Mode::Unknown, marked: false, ready: Vec::new(), given: 0, odd: None, half: None }
    }

    /// Whether the file was found to be UTF-16, and whether a byte-order mark said so; after a first read.
    pub(super) fn wide(&self) -> Option<bool> {
        matches!(self.mode, Mode::Wide { .. }).then_some(self.marked)
    }

    /// Reads the first two bytes, which tell UTF-16, and what comes with them.
    fn begin(&mut self) -> io::Result<()> {
        let mut first = std::vec![0u8; RAW];
        let mut filled = 0;
        while filled < 2 {
            match self.source.read(first.get_mut(filled..).unwrap_or_default()) {
                Ok(0) => break,
                Ok(count) => filled = (filled + count).min(RAW),
                Err(error) if error.kind() == io::ErrorKind::Interrupted => {}
                Err(error) => return Err(error),
            }
        }
        first.truncate(filled);
        let (low_first, marked) = match first.as_slice() {
            [0xff, 0xfe, ..] => (Some(true), true),
            [0xfe, 0xff, ..] => (Some(false), true),
            // without a mark a character of ASCII shows where the high byte is
            [high, _, ..] if self.stated == Some(Encoding::Utf16) => (Some(*high != 0), false),
            _ => (None, false),
        };
        match low_first {
            None => {
                self.mode = Mode::Plain;
                self.ready = first;
            }
            Some(low_first) => {
                (self.mode, self.marked) = (Mode::Wide { low_first }, marked);
                let mark = if marked { 2 } else { 0 };
                self.take(first.get(mark..).unwrap_or_default(), low_first);
            }
        }
        Ok(())
    }

    /// Turns raw bytes into UTF-8; halves of a pair that stand alone become U+FFFD.
    fn take(&mut self, raw: &[u8], low_first: bool) {
        let put = |c: char, ready: &mut Vec<u8>| ready.extend_from_slice(c.encode_utf8(&mut [0; 4]).as_bytes());
        for &byte in raw {
            let Some(first) = self.odd.take() else {
                self.odd = Some(byte);
                continue;
            };
            let unit = if low_first { u16::from_le_bytes([first, byte]) } else { u16::from_be_bytes([first, byte]) };
            let high = self.half.take();
            if let Some(high) = high {
                if let Some(Ok(c)) = char::decode_utf16([high, unit]).next() {
                    put(c, &mut self.ready);
                    continue;
                }
                put(char::REPLACEMENT_CHARACTER, &mut self.ready);
            }
            match unit {
                0xd800..=0xdbff => self.half = Some(unit),
                _ => put(char::from_u32(u32::from(unit)).unwrap_or(char::REPLACEMENT_CHARACTER), &mut self.ready),
            }
        }
    }

    /// What was cut off at the end of the file.
    fn end(&mut self) {
        if self.odd.take().is_some() | self.half.take().is_some() {
            self.ready.extend_from_slice("\u{fffd}".as_bytes());
        }
    }
}

impl<R: Read> Read for Characters<R> {
    fn read(&mut self, buffer: &mut [u8]) -> io::Result<usize> {
        if self.mode == Mode::Unknown {
            self.begin()?;
        }
        loop {
            let rest = self.ready.get(self.given..).unwrap_or_default();
            if !rest.is_empty() {
                let count = rest.len().min(buffer.len());
                if let (Some(to), Some(from)) = (buffer.get_mut(..count), rest.get(..count)) {
                    to.copy_from_slice(from);
                }
                self.given += count;
                return Ok(count);
            }
            let Mode::Wide { low_first } = self.mode else { return self.source.read(buffer) };
            self.ready.clear();
            self.given = 0;
            let mut raw = [0u8; RAW];
            let count = self.source.read(&mut raw)?;
            match raw.get(..count.min(RAW)).unwrap_or_default() {
                [] => {
                    self.end();
                    if self.ready.is_empty() {
                        return Ok(0);
                    }
                }
                raw => self.take(raw, low_first),
            }
        }
    }
}

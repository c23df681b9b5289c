//! Chains as bytes: what a logger stores in place of a sheet.
//!
//! An image is endian-safe, versioned and checksummed, and is read without allocation:
//!
//! ```text
//! offset  bytes
//!  0      4   "OHMW"
//!  4      2   version, 1
//!  6      2   number of chains
//!  8      4   length of all that follows the header
//! 12      4   CRC-32 (IEEE 802.3) of the 12 bytes before it and of all that follows the header
//! 16          for each chain: 1 byte length and the name; 1 byte length and the unit of the result;
//!             2 bytes number of fields; each field 2 bytes number, 8 bytes IEEE 754 double
//! ```
//!
//! Everything is little-endian. Field numbers are those of [`fields`]: they are only ever added to.

pub mod fields;

pub use fields::{FieldError, Fields};

use crate::chain::Chain;

/// Version of the format.
pub const VERSION: u16 = 1;

const MAGIC: [u8; 4] = *b"OHMW";
/// Bytes of the header before its checksum.
const SUMMED: usize = 12;

/// Why bytes are no image, or hold no such chain.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[non_exhaustive]
pub enum ImageError {
    /// The first bytes are not those of an image.
    NoImage,
    /// A version that this build does not know.
    Version(u16),
    /// Cut off, too long, or not what the checksum says.
    Corrupt,
    /// There is no chain of this number.
    Index,
    /// The values of a chain make none.
    Field(FieldError),
}

/// CRC-32 of IEEE 802.3, bit by bit: images are small and read once.
fn crc32(head: &[u8], body: &[u8]) -> u32 {
    let mut crc = u32::MAX;
    for byte in head.iter().chain(body) {
        crc ^= u32::from(*byte);
        for _ in 0..8 {
            let low = crc & 1;
            crc = (crc >> 1) ^ (0xedb8_8320 & (0_u32.wrapping_sub(low)));
        }
    }
    !crc
}

/// Bytes that are read from the front.
#[derive(Clone, Copy)]
struct Cursor<'a>(&'a [u8]);

impl<'a> Cursor<'a> {
    fn take(&mut self, count: usize) -> Result<&'a [u8], ImageError> {
        let (head, rest) = self.0.split_at_checked(count).ok_or(ImageError::Corrupt)?;
        self.0 = rest;
        Ok(head)
    }

    fn chunk<const N: usize>(&mut self) -> Result<[u8; N], ImageError> {
        let (head, rest) = self.0.split_first_chunk::<N>().ok_or(ImageError::Corrupt)?;
        self.0 = rest;
        Ok(*head)
    }

    fn byte(&mut self) -> Result<usize, ImageError> {
        let [byte] = self.chunk()?;
        Ok(usize::from(byte))
    }

    fn short(&mut self) -> Result<u16, ImageError> {
        self.chunk().map(u16::from_le_bytes)
    }

    fn text(&mut self) -> Result<&'a str, ImageError> {
        let length = self.byte()?;
        core::str::from_utf8(self.take(length)?).map_err(|_| ImageError::Corrupt)
    }
}

/// An image whose header and checksum are right.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Image<'a> {
    count: u16,
    body: &'a [u8],
}

/// One chain of an image.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Entry<'a> {
    /// Name of the channel.
    pub name: &'a str,
    /// Unit of the result, as a sheet writes it.
    pub unit: &'a str,
    /// The chain; [`Chain::plan`] checks it as any other.
    pub chain: Chain,
}

impl<'a> Image<'a> {
    /// Reads the header and checks what the checksum says.
    ///
    /// # Errors
    /// `ImageError::NoImage`, `ImageError::Version` or `ImageError::Corrupt`.
    pub fn new(bytes: &'a [u8]) -> Result<Self, ImageError> {
        let mut head = Cursor(bytes);
        if head.chunk::<4>().ok() != Some(MAGIC) {
            return Err(ImageError::NoImage);
        }
        let version = head.short()?;
        if version != VERSION {
            return Err(ImageError::Version(version));
        }
        let count = head.short()?;
        let length = u32::from_le_bytes(head.chunk()?);
        let sum = u32::from_le_bytes(head.chunk()?);
        let body = head.0;
        let before = bytes.get(..SUMMED).unwrap_or_default();
        if usize::try_from(length).ok() != Some(body.len()) || crc32(before, body) != sum {
            return Err(ImageError::Corrupt);
        }
        Ok(Self { count, body })
    }

    /// Returns how many chains there are.
    #[must_use]
    pub const fn len(&self) -> usize {
        self.count as usize
    }

    /// Returns whether there are none.
    #[must_use]
    pub const fn is_empty(&self) -> bool {
        self.count == 0
    }

    /// What stands before the fields of a chain: the place after its two texts.
    fn find(&self, index: usize) -> Result<(&'a str, &'a str, Cursor<'a>), ImageError> {
        if index >= self.len() {
            return Err(ImageError::Index);
        }
        let mut cursor = Cursor(self.body);
        for _ in 0..index {
            cursor.text()?;
            cursor.text()?;
            let fields = cursor.short()?;
            cursor.take(10 * usize::from(fields))?;
        }
        Ok((cursor.text()?, cursor.text()?, cursor))
    }

    /// Returns the name of the chain of this number, from 0, and the unit of its result.
    ///
    /// # Errors
    /// `ImageError::Index` for a number that none has, `ImageError::Corrupt` for an image that does not hold what it says.
    pub fn texts(&self, index: usize) -> Result<(&'a str, &'a str), ImageError> {
        self.find(index).map(|(name, unit, _)| (name, unit))
    }

    /// Returns the chain of this number, from 0.
    ///
    /// # Errors
    /// `ImageError::Index` for a number that none has, `ImageError::Field` for values that make no chain,
    /// `ImageError::Corrupt` for an image that does not hold what it says.
    pub fn entry(&self, index: usize) -> Result<Entry<'a>, ImageError> {
        let (name, unit, mut cursor) = self.find(index)?;
        let mut fields = Fields::new();
        for _ in 0..cursor.short()? {
            let field = cursor.short()?;
            let value = f64::from_le_bytes(cursor.chunk()?);
            fields.set(field, value).map_err(ImageError::Field)?;
        }
        let chain = fields.chain().map_err(ImageError::Field)?;
        Ok(Entry { name, unit, chain })
    }
}

/// Writes an image of these chains.
///
/// # Errors
/// The place of the first chain whose name or unit is longer than 255 bytes.
#[cfg(feature = "std")]
pub fn write<'a>(chains: impl IntoIterator<Item = (&'a str, &'a str, &'a Chain)>) -> Result<std::vec::Vec<u8>, usize> {
    let mut body = std::vec::Vec::new();
    let mut count = 0_u16;
    for (place, (name, unit, chain)) in chains.into_iter().enumerate() {
        for text in [name, unit] {
            body.push(u8::try_from(text.len()).map_err(|_| place)?);
            body.extend_from_slice(text.as_bytes());
        }
        let fields = Fields::from(chain);
        let number = u16::try_from(fields.iter().count()).map_err(|_| place)?;
        body.extend_from_slice(&number.to_le_bytes());
        for (field, value) in fields.iter() {
            body.extend_from_slice(&field.to_le_bytes());
            body.extend_from_slice(&value.to_le_bytes());
        }
        count = count.checked_add(1).ok_or(place)?;
    }
    let length = u32::try_from(body.len()).map_err(|_| usize::from(count))?;
    let mut out = std::vec::Vec::with_capacity(16 + body.len());
    out.extend_from_slice(&MAGIC);
    out.extend_from_slice(&VERSION.to_le_bytes());
    out.extend_from_slice(&count.to_le_bytes());
    out.extend_from_slice(&length.to_le_bytes());
    let sum = crc32(&out, &body);
    out.extend_from_slice(&sum.to_le_bytes());
    out.extend_from_slice(&body);
    Ok(out)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_checksum_is_the_usual_one() {
        // the check value of CRC-32/ISO-HDLC, from memory: "123456789" gives CBF43926
        assert_eq!(crc32(b"1234", b"56789"), 0xcbf4_3926);
    }

    #[test]
    fn fields_do_not_overlap() {
        extern crate std;
        let mut taken = [false; fields::COUNT];
        for (first, name) in fields::NAMES {
            let mut probe = Fields::new();
            let mut n = 0;
            // a field reaches as far as numbers are taken under its name
            while fields::NAMES.iter().all(|(other, _)| *other <= *first || *other > first + n)
                && usize::from(first + n) < fields::COUNT
                && probe.set(first + n, 1.0).is_ok()
            {
                assert!(!core::mem::replace(&mut taken[usize::from(first + n)], true), "{name}");
                n += 1;
            }
            assert!(n > 0, "{name}");
        }
        assert_eq!(Fields::new().set(fields::COUNT as u16, 1.0), Err(FieldError::Unknown(fields::COUNT as u16)));
        assert_eq!(Fields::new().set(19, 1.0), Err(FieldError::Unknown(19)));
    }
}

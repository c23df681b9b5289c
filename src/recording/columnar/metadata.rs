//! What the metadata of a Parquet file may be, so that the package that reads them comes to an end.
//!
//! It calls itself once for each group in which a column lies, so that a small file of groups in groups uses up the stack, which
//! ends the program; and it passes over a map of truths that is said to have thousands of millions one by one.

use std::format;
use std::io::{self, Read, Seek, SeekFrom};
use std::string::String;
use std::vec::Vec;

/// Groups in groups that a file may have; a recording has none.
const DEEPEST: usize = 64;

/// Refuses a Parquet file whose metadata cannot be, or whose columns lie too deep in groups; one without metadata is left to its
/// reader.
///
/// The file is left at its start.
///
/// # Source
/// Apache Parquet format, parquet.thrift (FileMetaData 2, SchemaElement 5); Apache Thrift, compact protocol.
pub(super) fn readable<R: Read + Seek>(file: &mut R) -> Result<(), String> {
    let metadata = metadata(file).unwrap_or_default();
    file.seek(SeekFrom::Start(0)).map_err(|e| format!("{e}"))?;
    let mut deepest = 0;
    let read = metadata.is_none_or(|metadata| depth(&metadata, &mut deepest).is_some());
    if deepest > DEEPEST {
        return Err(format!("it is damaged: its columns lie in more than {DEEPEST} groups in groups"));
    }
    if read { Ok(()) } else { Err("it is damaged: its metadata end too early or make no sense".into()) }
}

/// What stands before the last eight bytes, which give its length and the mark of the format.
fn metadata<R: Read + Seek>(file: &mut R) -> io::Result<Option<Vec<u8>>> {
    let end = file.seek(SeekFrom::End(-8))?;
    let mut tail = [0; 8];
    file.read_exact(&mut tail)?;
    let [a, b, c, d, mark @ ..] = tail;
    let length = u64::from(u32::from_le_bytes([a, b, c, d]));
    let Some(begin) = end.checked_sub(length).filter(|_| mark == *b"PAR1") else { return Ok(None) };
    file.seek(SeekFrom::Start(begin))?;
    let mut bytes = Vec::new();
    file.take(length).read_to_end(&mut bytes)?;
    Ok(Some(bytes))
}

/// Finds how many groups are open at once; `None` where there are too many, or the bytes end or make no sense.
fn depth(metadata: &[u8], deepest: &mut usize) -> Option<()> {
    let mut thrift = Thrift(metadata);
    let mut last = 0;
    while let Some((field, kind)) = thrift.field(&mut last)? {
        if (field, kind) != (2, Thrift::LIST) {
            thrift.skip(kind, DEEPEST)?;
            continue;
        }
        let (elements, _) = thrift.list()?;
        // how many members of each open group are still to come
        let mut open: Vec<u64> = Vec::new();
        for _ in 0..elements {
            while open.last() == Some(&0) {
                open.pop();
            }
            if let Some(left) = open.last_mut() {
                *left -= 1;
            }
            let members = thrift.members()?;
            if members > 0 {
                open.push(members);
            }
            *deepest = (*deepest).max(open.len());
            if *deepest > DEEPEST {
                return None;
            }
        }
    }
    Some(())
}

/// Bytes in the compact protocol of Thrift.
struct Thrift<'a>(&'a [u8]);

impl Thrift<'_> {
    const I32: u8 = 5;
    const LIST: u8 = 9;

    fn byte(&mut self) -> Option<u8> {
        let (byte, rest) = self.0.split_first()?;
        self.0 = rest;
        Some(*byte)
    }

    fn pass(&mut self, bytes: u64) -> Option<()> {
        self.0 = self.0.get(usize::try_from(bytes).ok()?..)?;
        Some(())
    }

    fn number(&mut self) -> Option<u64> {
        let mut number = 0;
        for shift in (0..64).step_by(7) {
            let byte = self.byte()?;
            number |= u64::from(byte & 0x7f) << shift;
            if byte & 0x80 == 0 {
                return Some(number);
            }
        }
        None
    }

    fn signed(&mut self) -> Option<i64> {
        let number = self.number()?;
        Some((number >> 1) as i64 ^ -((number & 1) as i64))
    }

    /// The number and the type of the next field; none at the end of a structure.
    fn field(&mut self, last: &mut i64) -> Option<Option<(i64, u8)>> {
        let head = self.byte()?;
        if head & 0x0f == 0 {
            return Some(None);
        }
        *last = match head >> 4 {
            0 => self.signed()?,
            step => last.checked_add(i64::from(step))?,
        };
        Some(Some((*last, head & 0x0f)))
    }

    /// The number and the type of the elements of a list.
    fn list(&mut self) -> Option<(u64, u8)> {
        let head = self.byte()?;
        let elements = match head >> 4 {
            15 => self.number()?,
            few => u64::from(few),
        };
        Some((elements, head & 0x0f))
    }

    /// How many members an element of the schema has.
    fn members(&mut self) -> Option<u64> {
        let (mut last, mut members) = (0, 0);
        while let Some((field, kind)) = self.field(&mut last)? {
            if (field, kind) == (5, Self::I32) {
                members = u64::try_from(self.signed()?).unwrap_or(0);
            } else {
                self.skip(kind, DEEPEST)?;
            }
        }
        Some(members)
    }

    /// Truths in lists and maps, which the metadata have none of, are passed over by their reader as if they had no bytes.
    fn element(&mut self, kind: u8, deep: usize) -> Option<()> {
        if kind <= 2 { None } else { self.skip(kind, deep) }
    }

    fn skip(&mut self, kind: u8, deep: usize) -> Option<()> {
        let deeper = deep.checked_sub(1)?;
        match kind {
            // a truth is in the head of its field
            1 | 2 => {}
            3 => self.pass(1)?,
            4..=6 => self.number().map(drop)?,
            7 => self.pass(8)?,
            8 => {
                let bytes = self.number()?;
                self.pass(bytes)?;
            }
            9 | 10 => {
                let (elements, kind) = self.list()?;
                for _ in 0..elements {
                    self.element(kind, deeper)?;
                }
            }
            11 => {
                let pairs = self.number()?;
                let kinds = if pairs > 0 { self.byte()? } else { 0 };
                for _ in 0..pairs {
                    self.element(kinds >> 4, deeper)?;
                    self.element(kinds & 0x0f, deeper)?;
                }
            }
            12 => {
                let mut last = 0;
                while let Some((_, kind)) = self.field(&mut last)? {
                    self.skip(kind, deeper)?;
                }
            }
            13 => self.pass(16)?,
            _ => return None,
        }
        Some(())
    }
}

//! What damaged files of columns do to the packages that read them, as errors.
//!
//! Those packages check much of what a file says, but not all: some damage makes them panic, and some lengths make them ask for
//! memory that there is not, which ends the program.

use std::boxed::Box;
use std::cell::Cell;
use std::fmt::Display;
use std::format;
use std::io::{self, Read, Seek, SeekFrom};
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::string::{String, ToString};
use std::sync::Once;
use std::vec::Vec;

use arrow_ipc::{Block, Message, RecordBatch};

std::thread_local! {
    /// Whether a panic of this thread is about to become an error.
    static GUARDED: Cell<bool> = const { Cell::new(false) };
}

/// Keeps panics that become errors from being printed; all others go on to whoever was told of them before.
fn hush() {
    static ONCE: Once = Once::new();
    // the hook cannot be changed by a thread that panics
    if !std::thread::panicking() {
        ONCE.call_once(|| {
            let before = std::panic::take_hook();
            std::panic::set_hook(Box::new(move |info| {
                if !GUARDED.get() {
                    before(info);
                }
            }));
        });
    }
}

/// Returns what a call returns; its error, or a panic, as words.
pub(super) fn guarded<T, E: Display>(call: impl FnOnce() -> Result<T, E>) -> Result<T, String> {
    hush();
    let outer = GUARDED.replace(true);
    // what the call has left half done is not used again
    let result = catch_unwind(AssertUnwindSafe(call));
    GUARDED.set(outer);
    match result {
        Ok(result) => result.map_err(|e| e.to_string()),
        Err(panic) => {
            let why = panic.downcast_ref::<String>().map(String::as_str);
            let why = why.or_else(|| panic.downcast_ref::<&str>().copied()).unwrap_or("no reason given");
            Err(format!("it is damaged ({})", why.lines().next().unwrap_or_default()))
        }
    }
}

/// How many times as many bytes a packed buffer can hold: a Zstandard block of one byte that is repeated has 4 bytes for 2^17
/// (RFC 8878, 3.1.1.2); LZ4 packs less densely.
const DENSEST: u64 = 1 << 15;

/// Refuses an Arrow file or stream that states lengths which it cannot have.
///
/// A message that cannot be understood ends the search, as its reader will say why; the file is left at its start.
pub(super) fn possible_lengths<R: Read + Seek>(file: &mut R, is_file: bool) -> Result<(), String> {
    let result = if is_file { blocks(file) } else { messages(file) };
    file.seek(SeekFrom::Start(0)).map_err(|e| e.to_string())?;
    result.unwrap_or(Ok(()))
}

/// What is wrong with a file; an error of reading it says that the search has ended.
type Found = io::Result<Result<(), String>>;

fn bytes<R: Read>(file: &mut R, length: u64) -> io::Result<Vec<u8>> {
    let mut bytes = Vec::new();
    match file.take(length).read_to_end(&mut bytes)? as u64 == length {
        true => Ok(bytes),
        false => Err(io::ErrorKind::UnexpectedEof.into()),
    }
}

/// The blocks that the footer of the file format names.
fn blocks<R: Read + Seek>(file: &mut R) -> Found {
    let end = file.seek(SeekFrom::End(-10))?;
    let Ok(tail) = <[u8; 10]>::try_from(bytes(file, 10)?) else { return Ok(Ok(())) };
    let Ok(length) = arrow_ipc::reader::read_footer_length(tail) else { return Ok(Ok(())) };
    let length = length as u64;
    let Some(begin) = end.checked_sub(length) else {
        return Ok(Err(format!("it is damaged: a footer of {length} bytes is longer than the file")));
    };
    file.seek(SeekFrom::Start(begin))?;
    let footer = bytes(file, length)?;
    let Ok(footer) = arrow_ipc::root_as_footer(&footer) else { return Ok(Ok(())) };
    let (dictionaries, batches) = (footer.dictionaries(), footer.recordBatches());
    for block in dictionaries.iter().flatten().chain(batches.iter().flatten()) {
        if let Err(wrong) = self::block(file, block, end)? {
            return Ok(Err(wrong));
        }
    }
    Ok(Ok(()))
}

fn block<R: Read + Seek>(file: &mut R, block: &Block, end: u64) -> Found {
    let sizes = [block.offset(), i64::from(block.metaDataLength()), block.bodyLength()];
    let [Ok(at), Ok(head), Ok(body)] = sizes.map(u64::try_from) else {
        return Ok(Err(format!("it is damaged: a block has the negative length or place {sizes:?}")));
    };
    let body_at = at.saturating_add(head);
    if body_at.saturating_add(body) > end {
        return Ok(Err(format!("it is damaged: a block of {body} bytes at byte {body_at} does not lie in the file")));
    }
    file.seek(SeekFrom::Start(at))?;
    let head = bytes(file, head)?;
    // the length of the message stands in front, in older files without its mark
    let message = match head.strip_prefix(&[0xff; 4]) {
        Some(rest) => rest.get(4..),
        None => head.get(4..),
    };
    // its reader would look for the rest of it in the body
    let Some(Ok(message)) = message.map(arrow_ipc::root_as_message) else {
        return Ok(Err(format!("it is damaged: the block at byte {at} makes no sense")));
    };
    buffers(file, &message, body_at, body)
}

/// The messages of the stream format, one after another.
fn messages<R: Read + Seek>(file: &mut R) -> Found {
    let end = file.seek(SeekFrom::End(0))?;
    let mut at = 0;
    loop {
        file.seek(SeekFrom::Start(at))?;
        let (mut head, mut length) = (4, bytes(file, 4)?);
        if length == [0xff; 4] {
            (head, length) = (8, bytes(file, 4)?);
        }
        let Ok(length) = length.try_into().map(u32::from_le_bytes) else { return Ok(Ok(())) };
        let body_at = at + head + u64::from(length);
        if length == 0 {
            return Ok(Ok(()));
        }
        let message = bytes(file, u64::from(length))?;
        let Ok(message) = arrow_ipc::root_as_message(&message) else { return Ok(Ok(())) };
        let Ok(body) = u64::try_from(message.bodyLength()) else { return Ok(Ok(())) };
        if body > end.saturating_sub(body_at) {
            return Ok(Err(format!("it is damaged or cut off: {body} bytes at byte {body_at} do not lie in the file")));
        }
        if let Err(wrong) = buffers(file, &message, body_at, body)? {
            return Ok(Err(wrong));
        }
        at = body_at + body;
    }
}

/// The lengths that the packed buffers of a message are to have.
fn buffers<R: Read + Seek>(file: &mut R, message: &Message<'_>, body_at: u64, body: u64) -> Found {
    let dictionary = message.header_as_dictionary_batch().and_then(|d| d.data());
    let Some(batch) =
        message.header_as_record_batch().or(dictionary).filter(|b: &RecordBatch| b.compression().is_some())
    else {
        return Ok(Ok(()));
    };
    let mut sum = 0u64;
    for buffer in batch.buffers().iter().flatten() {
        let (Ok(at), Ok(packed)) = (u64::try_from(buffer.offset()), u64::try_from(buffer.length())) else {
            return Ok(Ok(()));
        };
        if packed < 8 || at.saturating_add(packed) > body {
            // an empty buffer, or one that its reader refuses
            continue;
        }
        file.seek(SeekFrom::Start(body_at + at))?;
        let Ok(length) = bytes(file, 8)?.try_into().map(i64::from_le_bytes) else { return Ok(Ok(())) };
        // -1 is a buffer that is not packed
        sum = sum.saturating_add(u64::try_from(length).unwrap_or(0));
        if sum > body.saturating_mul(DENSEST) {
            return Ok(Err(format!("it is damaged: {body} packed bytes at byte {body_at} cannot hold {sum} bytes")));
        }
        let room = usize::try_from(length).map(|length| Vec::<u8>::new().try_reserve_exact(length));
        if length > 0 && !matches!(room, Ok(Ok(()))) {
            return Ok(Err(format!("there is no memory for a column of {length} bytes in one batch")));
        }
    }
    Ok(Ok(()))
}

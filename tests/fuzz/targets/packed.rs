//! Any bytes through the unpackers, and any bytes packed here, whole, cut short or with one byte changed: the same bytes or the
//! same error whatever pieces they come in, and never fewer bytes or other ones without an error.
#![no_main]

mod pieces;

use std::io::{Read, Write};

use libfuzzer_sys::fuzz_target;
use ohmwright::recording::unpacked;
use pieces::Pieces;

/// What is kept of a file, bytes.
const KEPT: usize = 1 << 16;
/// Where the reading of a file ends that grows without end, bytes.
const ENOUGH: u64 = 64 << 20;

/// What a file was unpacked to.
#[derive(Debug, PartialEq)]
struct Unpacked {
    /// The first bytes.
    kept: Vec<u8>,
    /// How many there were, `ENOUGH` at most; after an error they are no promise.
    bytes: u64,
    end: Result<(), String>,
}

/// Unpacks a file that comes in pieces of one size into pieces of another, to its end, to an error or to `enough` bytes.
fn unpack(bytes: &[u8], size: usize, into: usize, enough: u64) -> Unpacked {
    let mut all = Unpacked { kept: Vec::new(), bytes: 0, end: Ok(()) };
    let mut source = match unpacked(Pieces { bytes, size }, "run.csv.gz") {
        Ok(source) => source,
        Err(e) => {
            all.end = Err(e.to_string());
            return all;
        }
    };
    let mut buffer = vec![0; into];
    while all.bytes < enough {
        match source.read(&mut buffer) {
            Ok(0) => break,
            Ok(n) => {
                let room = KEPT - all.kept.len();
                all.kept.extend(&buffer[..n.min(room)]);
                all.bytes += n as u64;
            }
            Err(e) => {
                all.end = Err(e.to_string());
                break;
            }
        }
    }
    all
}

/// Whether two ends may differ: a frame of Zstandard that ends with an empty block and states another size than its bytes have
/// is refused by the reference decoder when it has the whole frame before it, and taken when it comes in pieces. The bytes are
/// the same, and so is what its checksum says of them.
fn size_alone_is_wrong(bytes: &[u8], one: &Result<(), String>, other: &Result<(), String>) -> bool {
    let corrupt = Err("Data corruption detected".to_string());
    bytes.starts_with(&[0x28, 0xb5, 0x2f, 0xfd])
        && (*one == corrupt && other.is_ok() || *other == corrupt && one.is_ok())
}

/// Unpacks a file in pieces of several sizes, which must agree.
fn whatever_pieces(bytes: &[u8]) -> Unpacked {
    let whole = unpack(bytes, usize::MAX, 1 << 16, ENOUGH);
    for (size, into) in [(1, 4096), (3, 1), (13, 1000), (4096, 7)] {
        let other = unpack(bytes, size, into, KEPT as u64);
        // who stopped early has seen no error behind
        if other.bytes >= KEPT as u64 {
            assert!(whole.bytes >= KEPT as u64 || whole.end.is_err());
        } else if !size_alone_is_wrong(bytes, &whole.end, &other.end) {
            assert_eq!(other.end, whole.end, "pieces of {size} into {into} of {bytes:02x?}: {other:?}");
        }
        if other.end.is_ok() && whole.end.is_ok() {
            assert!(other.bytes >= KEPT as u64 || other.bytes == whole.bytes);
        }
        // before an error, more or fewer bytes may have come, but not other ones
        let both = other.kept.len().min(whole.kept.len());
        assert!(other.kept[..both] == whole.kept[..both], "pieces of {size} into {into}");
    }
    whole
}

fn gzip(text: &[u8], level: u8) -> Vec<u8> {
    let mut encoder = flate2::write::GzEncoder::new(Vec::new(), flate2::Compression::new(u32::from(level % 10)));
    encoder.write_all(text).expect("memory takes everything");
    encoder.finish().expect("memory takes everything")
}

/// A frame with its checksum; without one, changed bytes need not be noticed (RFC 8878, 3.1.1).
fn zstandard(text: &[u8], level: u8) -> Vec<u8> {
    let mut encoder = zstd::stream::write::Encoder::new(Vec::new(), i32::from(level % 5)).expect("such levels exist");
    encoder.include_checksum(true).expect("frames can have one");
    encoder.write_all(text).expect("memory takes everything");
    encoder.finish().expect("memory takes everything")
}

/// The text in as many members as there are parts, then what becomes of it when it is whole, cut and changed.
fn packed(pack: fn(&[u8], u8) -> Vec<u8>, magic: usize, level: u8, parts: &[&[u8]], at: usize, flip: u8) {
    let members: Vec<Vec<u8>> = parts.iter().map(|part| pack(part, level)).collect();
    let (text, file) = (parts.concat(), members.concat());
    let good = |bytes: &[u8]| Unpacked { kept: bytes.to_vec(), bytes: bytes.len() as u64, end: Ok(()) };
    assert_eq!(whatever_pieces(&file), good(&text));

    // between two members nothing shows that another one was there; the first bytes alone are no packed file
    let at = at % file.len();
    let cut = whatever_pieces(&file[..at]);
    let mut ends = (0, 0);
    let mut whole_members = (at == 0).then_some(0);
    for (part, member) in parts.iter().zip(&members) {
        ends = (ends.0 + part.len(), ends.1 + member.len());
        if ends.1 == at {
            whole_members = Some(ends.0);
        }
    }
    match whole_members {
        Some(to) => assert_eq!(cut, good(&text[..to])),
        None if at < magic => assert_eq!(cut, good(&file[..at])),
        None => assert!(cut.end.is_err() && text.starts_with(&cut.kept), "cut at {at}: {cut:?}"),
    }

    let mut changed = file;
    changed[at] ^= flip.max(1);
    let other = whatever_pieces(&changed);
    if at < magic {
        assert_eq!(other, good(&changed));
    } else if other.end.is_ok() {
        assert_eq!(other, good(&text), "byte {at} changed by {flip}");
    }
}

fuzz_target!(|data: &[u8]| {
    whatever_pieces(data);
    let Some(([level, first, second, low, high, flip], text)) = data.split_first_chunk::<6>() else { return };
    // two places where a member ends, beginning anywhere or nowhere
    let place = |byte: u8| usize::from(byte) * text.len() / 255;
    let (a, b) = (place(*first.min(second)), place(*first.max(second)));
    let parts = [&text[..a], &text[a..b], &text[b..]];
    let parts = if level & 64 == 0 { &parts[..] } else { &parts[2..] };
    let at = usize::from(u16::from_le_bytes([*low, *high]));
    if level & 128 == 0 {
        packed(gzip, 2, level & 63, parts, at, *flip);
    } else {
        packed(zstandard, 4, level & 63, parts, at, *flip);
    }
});

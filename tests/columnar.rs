//! Parquet and Arrow files in and out.
//!
//! The files of tests/columns are by pyarrow (generate.py there), so what they hold is known from elsewhere; what is written here is
//! read back by the same reader, and by pyarrow in tests/columns/second_opinion.py.
#![cfg(all(feature = "cli", feature = "parquet"))]
#![allow(clippy::disallowed_methods, reason = "made-up signals need no pinned arithmetic")]

#[path = "support/place.rs"]
mod place;

use place::Place;

use std::io::{Read, Seek, Write};
use std::path::{Path, PathBuf};

use ohmwright::recording::columnar::Columnar;

fn columns(name: &str) -> String {
    let path: PathBuf = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/columns").join(name);
    path.display().to_string()
}

const SHEET: &str = "[recording]\nkeep = [\"note\", \"step\"]\n[channel.a]\ncolumn = \"CH01\"\nreads = \"mV/V\"\n\
    [channel.b]\ncolumn = \"CH02\"\nreads = \"ohm\"\n[channel.c]\ncolumn = \"adc\"\nreads = \"count\"\n";

/// By hand from generate.py: a double has its shortest digits, a single float those of its exact value (0.1 as 32 bits is
/// 0.100000001490116…), nulls and NaN are missing, moments count from UTC.
const RESULT: &str = "time,note,step,a (mV/V),b (ohm),c (count),flags\n\
    2026-05-09T06:30:00Z,a,empty,0.1,109.7300033569336,-8388608,\n\
    2026-05-09T06:30:00.02Z,b,\"lorry, midspan\",0.3333333333333333,100.0999984741211,0,\n\
    2026-05-09T06:30:00.04Z,a,\"\"\"\",,0.10000000149011612,7,a:missing\n\
    2026-05-09T06:30:00.06Z,,,,0.0010000000474974513,,a:missing c:missing\n\
    2026-05-09T06:30:00.08Z,a,,-2.5e-7,,8388607,b:missing\n";

#[test]
fn what_other_software_wrote_is_read() {
    let place = Place::new();
    place.put("s.toml", SHEET);
    for name in [
        "plain.parquet",
        "snappy.parquet",
        "zstd.parquet",
        "gzip.parquet",
        "plain.arrow",
        "lz4.arrow",
        "zstd.arrow",
        "stream.arrows",
    ] {
        assert_eq!(place.good(&["convert", "s.toml", &columns(name), "-q"]), RESULT, "{name}");
    }
    // civil time has no zone, and one can be stated
    place.put("c.toml", "[recording]\ntime = \"when\"\n[channel.u]\ncolumn = \"u\"\nreads = \"V\"\n");
    let text = place.good(&["convert", "c.toml", &columns("civil.parquet"), "-q"]);
    assert!(text.starts_with("when,u (V),flags\n2026-05-09T06:30:00,1,\n2026-05-09T06:30:00.02,2,\n"), "{text}");
}

#[test]
fn units_of_the_metadata_count() {
    let place = Place::new();
    place.put("s.toml", &SHEET.replace("reads = \"ohm\"", "reads = \"V\""));
    let output = place.run(&["convert", "s.toml", &columns("plain.parquet"), "-q"]);
    let err = String::from_utf8(output.stderr).unwrap();
    assert!(output.status.code() == Some(2) && err.contains("value 'ohm': the unit of column 'CH02'"), "{err}");
    let sheet = place.good(&["start", &columns("plain.parquet")]);
    assert!(sheet.contains("reads = \"mV/V\"     # as the file says"), "{sheet}");
}

#[test]
fn results_in_columns_are_those_in_text() {
    let place = Place::new();
    place.put("s.toml", SHEET);
    let text = place.good(&["convert", "s.toml", &columns("plain.parquet"), "-q"]);
    // what passes the results on
    place.put(
        "again.toml",
        "[recording]\ntime = \"time\"\nkeep = [\"note\", \"step\"]\n[channel.a]\ncolumn = \"a\"\nreads = \"mV/V\"\n\
         [channel.b]\ncolumn = \"b\"\nreads = \"ohm\"\n[channel.c]\ncolumn = \"c\"\nreads = \"count\"\n",
    );
    for name in ["o.parquet", "o.arrow"] {
        place.good(&["convert", "s.toml", &columns("zstd.arrow"), "-o", name, "-q"]);
        assert_eq!(place.good(&["convert", "again.toml", name, "-q"]), text, "{name}");
        // the same bytes again, and nothing changed
        place.good(&["repeat", &format!("{name}.trace")]);
        let changes = place.good(&[
            "convert",
            "s.toml",
            &columns("plain.arrow"),
            "-o",
            &format!("2{name}"),
            "-q",
            "--against",
            name,
        ]);
        assert_eq!(changes.matches("the same in all").count(), 3, "{changes}");
    }
    // 32 bits are rounded once: 0.1 and 1/3 as single floats
    place.good(&["convert", "s.toml", &columns("plain.parquet"), "-o", "s.parquet", "--single", "-q"]);
    let single = place.good(&["convert", "again.toml", "s.parquet", "-q"]);
    assert!(single.contains(",0.10000000149011612,") && single.contains(",0.3333333432674408,"), "{single}");
    place.good(&["repeat", "s.parquet.trace"]);
    assert_eq!(place.run(&["convert", "s.toml", &columns("plain.parquet"), "--single"]).status.code(), Some(2));
}

/// Many groups of rows pass through, joined and by themselves.
#[test]
fn long_recordings_pass_in_groups() {
    let place = Place::new();
    let mut text = String::from("time,CH01 (mV/V)\n");
    for i in 0..100_000 {
        text += &format!("{i},{:.5}\n", (f64::from(i) * 0.001).sin());
    }
    place.put("r.csv", &text);
    place.put(
        "s.toml",
        "[channel.g]\ncolumn = \"CH01\"\nreads = \"mV/V\"\noutput = \"microstrain\"\n\
         gauge = { resistance = \"350 ohm\", gauge_factor = 2.08 }\nbridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }\n",
    );
    place.put("p.toml", "[channel.g]\ncolumn = \"g\"\nreads = \"microstrain\"\n");
    let wanted = place.good(&["convert", "s.toml", "r.csv", "-q"]);
    place.good(&["convert", "s.toml", "r.csv", "-o", "o.parquet", "-q"]);
    assert!(place.good(&["convert", "p.toml", "o.parquet", "-q"]) == wanted);
}

#[test]
fn damage_is_an_error_and_leaves_no_result() {
    let place = Place::new();
    place.put("s.toml", SHEET);
    for name in ["plain.parquet", "plain.arrow", "stream.arrows"] {
        let whole = std::fs::read(columns(name)).unwrap();
        for (cut, what) in [(whole.len() / 2, "half"), (3, "begin"), (0, "nothing")] {
            std::fs::write(place.0.path().join(name), &whole[..cut]).unwrap();
            let output = place.run(&["convert", "s.toml", name, "-o", "out.csv", "-q"]);
            let err = String::from_utf8(output.stderr).unwrap();
            assert!(output.status.code() == Some(2) && err.contains(name), "{name} {what}: {err}");
            assert!(!place.0.path().join("out.csv").exists());
        }
    }
    place.put("text.parquet", "time,CH01\n0,1\n");
    assert_eq!(place.run(&["convert", "s.toml", "text.parquet"]).status.code(), Some(2));
}

/// All of a file as text, in the same words as the command.
fn text_of(bytes: &[u8], kind: Columnar) -> Result<String, String> {
    let mut file = tempfile::tempfile().unwrap();
    file.write_all(bytes).and_then(|()| file.rewind()).unwrap();
    let mut source = ohmwright::recording::columnar::text_of(file, kind, "run").map_err(|e| e.to_string())?;
    let mut text = String::new();
    match source.read_to_string(&mut text) {
        Ok(_) => Ok(text),
        Err(e) => {
            // nobody who reads on takes the place of the damage for the end
            assert_eq!(source.read(&mut [0; 8]).unwrap_err().to_string(), e.to_string());
            Err(e.to_string())
        }
    }
}

/// Whatever byte is damaged, the file is read or refused. The packages underneath panic over some of these files.
#[test]
fn any_one_changed_byte_gives_rows_or_an_error() {
    for (name, kind) in
        [("civil.parquet", Columnar::Parquet), ("stream.arrows", Columnar::Arrow), ("zstd.arrow", Columnar::Arrow)]
    {
        let whole = std::fs::read(columns(name)).unwrap();
        assert!(text_of(&whole, kind).is_ok());
        let mut refused = 0;
        for (at, byte) in whole.iter().enumerate() {
            for change in [0x01, 0x80] {
                let mut bytes = whole.clone();
                bytes[at] = byte ^ change;
                let Err(why) = text_of(&bytes, kind) else { continue };
                refused += 1;
                assert!(!why.is_empty());
            }
        }
        assert!(refused > whole.len() / 8, "{name}: {refused} of {}", 2 * whole.len());
    }
}

/// A buffer of a column that lies behind the end of its batch: byte 979 belongs to its place. The package underneath panics.
#[test]
fn what_panics_is_an_error_with_the_name_of_the_file() {
    let place = Place::new();
    place.put("s.toml", SHEET);
    let mut bytes = std::fs::read(columns("zstd.arrow")).unwrap();
    bytes[979] ^= 0x80;
    std::fs::write(place.0.path().join("bad.arrow"), bytes).unwrap();
    let err = place.refused(&["convert", "s.toml", "bad.arrow", "-o", "out.csv", "-q"]);
    assert!(err.starts_with("bad.arrow: cannot read: it is damaged (") && err.lines().count() == 1, "{err}");
    assert!(!place.0.path().join("out.csv").exists());
}

/// Lengths that no file can have do not make it ask for memory: 2^60 and 2^46 bytes in a buffer of some twenty, and
/// a batch of 2^46 bytes.
#[test]
fn lengths_that_cannot_be_are_errors() {
    let zstandard = std::fs::read(columns("zstd.arrow")).unwrap();
    let lz4 = std::fs::read(columns("lz4.arrow")).unwrap();
    for (whole, magic) in [(&zstandard, [0x28, 0xb5, 0x2f, 0xfd]), (&lz4, [0x04, 0x22, 0x4d, 0x18])] {
        let at = whole.windows(4).position(|w| w == magic).unwrap();
        for length in [1u64 << 60, 1 << 46] {
            let mut bytes = whole.clone();
            bytes[at - 8..at].copy_from_slice(&length.to_le_bytes());
            let why = text_of(&bytes, Columnar::Arrow).unwrap_err();
            assert!(why.starts_with("run: cannot read: it is damaged: ") && why.contains(&length.to_string()), "{why}");
        }
    }
    // the footer states a block whose message is shorter than it is, so that the rest is taken for its body
    let shorter = (lz4.len() - 1200..lz4.len() - 10).filter_map(|at| {
        let mut bytes = lz4.clone();
        bytes[at] ^= 0x01;
        text_of(&bytes, Columnar::Arrow).err().filter(|why| why.contains("makes no sense"))
    });
    assert!(shorter.count() > 0);
    // the last block of the footer, which ends with the length of its body
    let plain = std::fs::read(columns("plain.arrow")).unwrap();
    let mut stated = Vec::new();
    for at in 0..plain.len() - 8 {
        let mut bytes = plain.clone();
        bytes[at..at + 8].copy_from_slice(&(1u64 << 46).to_le_bytes());
        stated.extend(text_of(&bytes, Columnar::Arrow).err().filter(|why| why.contains("does not lie in the file")));
    }
    assert!(stated.iter().any(|why| why.contains("a block of 70368744177664 bytes")), "{stated:#?}");
}

/// Groups in groups as the format writes them (parquet.thrift, Thrift's compact protocol): a root, groups of one member each,
/// and a column; then fields that the format does not know.
fn nested(groups: usize, fields: &[u8]) -> Vec<u8> {
    let elements = groups + 2;
    let mut metadata =
        vec![0x15, 2, 0x19, 0xfc, elements as u8 | 0x80, (elements >> 7) as u8 | 0x80, (elements >> 14) as u8];
    metadata.extend(b"\x48\x01r\x15\x02\x00");
    metadata.extend(b"\x35\x00\x18\x01g\x15\x02\x00".repeat(groups));
    metadata.extend(b"\x15\x02\x25\x00\x18\x01c\x00");
    // no rows in no groups of rows
    metadata.extend(b"\x16\x00\x19\x0c");
    metadata.extend(fields);
    metadata.push(0);
    let length = (metadata.len() as u32).to_le_bytes();
    [b"PAR1", metadata.as_slice(), &length, b"PAR1"].concat()
}

/// Columns that lie deep in groups do not use up the stack.
#[test]
fn groups_in_groups_without_end_are_an_error() {
    for groups in [0, 1, 63] {
        let name = if groups == 0 { "c" } else { "g" };
        assert_eq!(text_of(&nested(groups, &[]), Columnar::Parquet).unwrap(), format!("{name}\n"), "{groups}");
    }
    for groups in [64, 3000, 100_000] {
        let why = text_of(&nested(groups, &[]), Columnar::Parquet).unwrap_err();
        assert_eq!(why, "run: cannot read: it is damaged: its columns lie in more than 64 groups in groups");
    }
}

/// A map and a list of 2^31 - 1 truths in fields that are passed over take no time, while other fields are no matter.
#[test]
fn metadata_without_end_are_an_error() {
    let known: [&[u8]; 3] = [b"\xf5\x02", b"\xf9\x26\x02\x04", b"\xfb\x01\x85\x01a\x02"];
    for fields in known {
        assert_eq!(text_of(&nested(0, fields), Columnar::Parquet).unwrap(), "c\n", "{fields:02x?}");
    }
    let endless: [&[u8]; 2] = [b"\xfb\xff\xff\xff\xff\x07\x11", b"\xf9\xf1\xff\xff\xff\xff\x07"];
    for fields in endless {
        let why = text_of(&nested(0, fields), Columnar::Parquet).unwrap_err();
        assert_eq!(why, "run: cannot read: it is damaged: its metadata end too early or make no sense");
    }
}

/// Where a page has a checksum, a bit that fell over is found: here one of 110.12.
#[test]
fn a_page_that_is_not_as_it_was_written_is_refused() {
    let mut bytes = std::fs::read("tests/columns/checked.parquet").unwrap();
    assert!(text_of(&bytes, Columnar::Parquet).unwrap().contains("110.12"));
    let pattern = 110.12f64.to_le_bytes();
    let place = bytes.windows(8).position(|w| w == pattern).expect("plain numbers");
    bytes[place + 6] ^= 1;
    let why = text_of(&bytes, Columnar::Parquet).unwrap_err();
    assert!(why.contains("checksum") || why.contains("CRC"), "{why}");
}

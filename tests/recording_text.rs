//! Text to columns and back, through the public face.
//!
//! Expected numbers are the literals in the text, read by the compiler; expected moments come from `date -u -d ... +%s` (GNU
//! coreutils) where they are not evident. The `csv` crate is the oracle for quoting.
#![cfg(feature = "files")]

use std::{
    fs,
    io::{self, Read, Write},
};

use ohmwright::{
    chain::Word,
    recording::{
        Block, CsvWriter, Decimal, Digits, Encoding, Layout, LineEnd, NumberText, Origin, Output, Reader,
        RecordingError, Separator, TimeScale,
    },
};
use proptest::prelude::*;

/// Everything in a recording, whatever the size of the blocks.
#[derive(Debug, Default)]
struct All {
    names: Vec<String>,
    units: Option<Vec<String>>,
    bits: Vec<Vec<u64>>,
    words: Vec<Vec<Word>>,
    texts: Vec<Vec<String>>,
    time_text: Vec<String>,
    seconds: Vec<u64>,
    time_words: Vec<Word>,
    line: Vec<u64>,
    remarks: Vec<String>,
    findings: String,
}

impl PartialEq for All {
    fn eq(&self, other: &Self) -> bool {
        format!("{self:?}") == format!("{other:?}")
    }
}

impl All {
    fn values(&self, column: usize) -> Vec<f64> {
        self.bits[column].iter().map(|&b| f64::from_bits(b)).collect()
    }

    fn seconds(&self) -> Vec<f64> {
        self.seconds.iter().map(|&b| f64::from_bits(b)).collect()
    }
}

/// Gives bytes in pieces of this many.
struct Drip<'a>(&'a [u8], usize);

impl Read for Drip<'_> {
    fn read(&mut self, buffer: &mut [u8]) -> io::Result<usize> {
        let count = self.1.min(buffer.len()).min(self.0.len());
        let (now, later) = self.0.split_at(count);
        buffer[..count].copy_from_slice(now);
        self.0 = later;
        Ok(count)
    }
}

fn read_with(text: &[u8], layout: &Layout, capacity: usize, piece: usize, live: bool) -> Result<All, RecordingError> {
    let source = Drip(text, piece);
    let mut reader =
        if live { Reader::live(source, "run.csv", layout)? } else { Reader::new(source, "run.csv", layout)? };
    let columns: Vec<usize> = (0..reader.names().len()).collect();
    reader.select(&columns, &columns)?;
    let mut all = All {
        names: reader.names().to_vec(),
        units: reader.units().map(<[String]>::to_vec),
        bits: vec![vec![]; columns.len()],
        words: vec![vec![]; columns.len()],
        texts: vec![vec![]; columns.len()],
        ..All::default()
    };
    let mut block = Block::new(capacity);
    loop {
        let rows = reader.next_block(&mut block)?;
        assert_eq!(rows, block.rows());
        if rows == 0 {
            break;
        }
        assert!(rows <= capacity);
        for (i, column) in block.columns.iter().enumerate() {
            assert_eq!((column.values.len(), column.words.len()), (rows, rows));
            for (value, word) in column.values.iter().zip(&column.words) {
                assert_eq!(value.is_nan(), *word != Word::Good);
            }
            all.bits[i].extend(column.values.iter().map(|v| v.to_bits()));
            all.words[i].extend(&column.words);
            all.texts[i].extend(block.texts[i].iter().map(String::from));
        }
        all.time_text.extend(block.time_text.iter().map(String::from));
        all.seconds.extend(block.seconds.iter().map(|v| v.to_bits()));
        all.time_words.extend(&block.time_words);
        all.line.extend(&block.line);
    }
    assert_eq!(reader.next_block(&mut block)?, 0, "the end stays the end");
    all.remarks = reader.remarks();
    if reader.time_scale() != TimeScale::Elapsed {
        // A column of moments was selected as numbers as well.
        let of_time = |r: &String| reader.time_columns().iter().any(|c| r.contains(&format!(":{}: ", c + 1)));
        all.remarks.retain(|r| !(r.contains("not a number") && of_time(r)));
    }
    all.findings = reader.findings().to_string();
    Ok(all)
}

/// Reads with several sizes of blocks and pieces, which must not matter.
fn read(text: impl AsRef<[u8]>, layout: &Layout) -> All {
    let text = text.as_ref();
    let all = read_with(text, layout, 4096, 1 << 20, false).unwrap();
    for (capacity, piece) in [(1, 1 << 16), (7, 1), (4096, 3), (2, 100_000)] {
        if text.len() / piece < 100_000 {
            assert_eq!(all, read_with(text, layout, capacity, piece, false).unwrap(), "{capacity} {piece}");
        }
    }
    all
}

fn found(text: impl AsRef<[u8]>) -> All {
    read(text, &Layout::default())
}

fn error(text: impl AsRef<[u8]>, layout: &Layout) -> String {
    read_with(text.as_ref(), layout, 100, 1 << 20, false).unwrap_err().to_string()
}

#[test]
fn separators_decimals_line_ends_and_titles_are_found() {
    let ends = [("\n", LineEnd::Lf), ("\r\n", LineEnd::CrLf), ("\r", LineEnd::Cr)];
    for (separator, s) in [(",", Separator::Comma), (";", Separator::Semicolon), ("\t", Separator::Tab)] {
        for (mark, d) in [(".", Decimal::Point), (",", Decimal::Comma)] {
            if separator == mark {
                continue;
            }
            for (end, e) in ends {
                for names in [false, true] {
                    for units in [false, true] {
                        for last_end in [false, true] {
                            if units && !names {
                                continue;
                            }
                            let mut lines = vec![];
                            if names {
                                lines.push(["CH01", "CH02", "R deck"].join(separator));
                            }
                            if units {
                                lines.push(["mV/V", "[µm/m]", "Ω"].join(separator));
                            }
                            lines.push(["0.25", "-1.5e-3", "+109.73"].join(separator).replace('.', mark));
                            lines.push(["", "7", "110.0"].join(separator).replace('.', mark));
                            let text = lines.join(end) + if last_end { end } else { "" };
                            let reader = Reader::new(text.as_bytes(), "x", &Layout::default()).unwrap();
                            let findings = reader.findings();
                            let what = format!("{text:?}\n{findings}");
                            assert_eq!(findings.separator, (s, Origin::Found), "{what}");
                            assert_eq!(findings.decimal, (d, Origin::Found), "{what}");
                            assert_eq!(findings.line_end, e, "{what}");
                            let all = found(&text);
                            if names {
                                assert_eq!(all.names, ["CH01", "CH02", "R deck"], "{what}");
                            } else {
                                assert_eq!(all.names, ["column 1", "column 2", "column 3"], "{what}");
                            }
                            assert_eq!(all.units.is_some(), units, "{what}");
                            if let Some(units) = &all.units {
                                assert_eq!(units, &["mV/V", "µm/m", "Ω"], "{what}");
                            }
                            assert_eq!(all.values(0)[0], 0.25, "{what}");
                            assert_eq!(all.words[0], [Word::Good, Word::Missing], "{what}");
                            assert_eq!(all.values(1), [-1.5e-3, 7.0], "{what}");
                            assert_eq!(all.values(2), [109.73, 110.0], "{what}");
                            let first = 1 + u64::from(names) + u64::from(units);
                            assert_eq!(all.line, [first, first + 1], "{what}");
                            assert_eq!(all.remarks, [""; 0], "{what}");
                        }
                    }
                }
            }
        }
    }
}

#[test]
fn one_column() {
    let all = found("strain\n1,5\n2,5\n");
    assert_eq!((all.names.len(), all.values(0)), (1, vec![1.5, 2.5]));
    let all = found("strain\n1.5\n2.5");
    assert_eq!((all.names.len(), all.values(0)), (1, vec![1.5, 2.5]));
    // Two columns of whole numbers or one with decimal commas: nobody can tell, and the sheet must state it.
    assert!(error("1,5\n2,5\n", &Layout::default()).contains("or two cells: state recording.separator"));
    let layout = Layout { decimal: Some(Decimal::Comma), ..Layout::default() };
    assert_eq!(read("1,5\n2,5\n", &layout).values(0), [1.5, 2.5]);
}

#[test]
fn quoted_decimal_commas_between_commas() {
    let all = found("\"a\",\"b\"\n\"1,5\",\"2,5\"\n\"3,5\",\"4\"\n");
    assert_eq!((all.values(0), all.values(1)), (vec![1.5, 3.5], vec![2.5, 4.0]));
    assert!(all.findings.starts_with("separator ',', decimal ',' (found)"), "{}", all.findings);
}

#[test]
fn lines_about_the_run_are_passed_over_and_nothing_else() {
    let text =
        "Footbridge; span 2\nrate; 50\n\n# a remark\ntime;CH01;CH02\ns;mV/V;mV/V\n0;0,1;0,2\n\n# between\n1;x;0,3\n";
    let all = found(text);
    assert_eq!(all.names, ["time", "CH01", "CH02"]);
    assert_eq!(all.units.as_deref().unwrap(), ["s", "mV/V", "mV/V"]);
    assert_eq!(all.line, [7, 10]);
    assert_eq!(all.words[1], [Word::Good, Word::Unreadable]);
    assert_eq!(all.remarks, ["run.csv:10:2: value 'x': not a number"]);

    // The same with as many cells in every line, as a spreadsheet writes it.
    let all = found("Run 3;;\nrate;50;\n2026-03-12;;\ntime;CH01;CH02\n0;0,1;0,2\n1;0,2;0,3\n2;0,2;0,3\n");
    assert_eq!((all.names[1].as_str(), all.line), ("CH01", vec![5, 6, 7]));

    // A first row that cannot be read is a row; so is everything when nothing reads as a number.
    let all = found("t1,t2\nERR,ERR\n1.5,2.5\n3.5,4.5\n");
    assert_eq!(all.words[0], [Word::Unreadable, Word::Good, Word::Good]);
    let all = found("a,b\nERR,1.5\n2.5,3.5\n2.5,3.5\n2.5,3.5\n");
    assert_eq!((all.names[0].as_str(), all.line), ("a", vec![2, 3, 4, 5]));
    let all = found("a,b\nERR,ERR\nERR,ERR\n");
    assert_eq!((all.names[0].as_str(), all.line), ("a", vec![2, 3]));

    // Pairs in a table of two columns.
    let all = found("rate;50\nrun;3\ntime;strain\n0;1,5\n1;2,5\n2;3,5\n3;4,5\n");
    assert_eq!((all.names, all.line), (vec!["time".into(), "strain".into()], vec![4, 5, 6, 7]));

    // Channels named by numbers.
    let all = found("time,1,2,3\n0,1.5,2.5,3.5\n1,1.5,2.5,3.5\n");
    assert_eq!((all.names, all.line), (["time", "1", "2", "3"].map(String::from).to_vec(), vec![2, 3]));

    // Names in a comment.
    let all = found("# run 3\n# time, CH01\n0,1.5\n1,2.5\n");
    assert_eq!((all.names, all.line), (vec!["time".into(), "CH01".into()], vec![3, 4]));
}

#[test]
fn stated_lines_win() {
    let text = "a,b\n1.5,2.5\nx,y\nV,V\nskipped,line\n3.5,4.5\n";
    let layout = Layout { names_line: Some(3), units_line: Some(4), first_line: Some(6), ..Layout::default() };
    let all = read(text, &layout);
    assert_eq!(
        (all.names, all.units.unwrap(), all.line),
        (vec!["x".into(), "y".into()], vec!["V".to_string(); 2], vec![6])
    );
    let layout = Layout { names_line: Some(0), first_line: Some(2), ..Layout::default() };
    let all = read(text, &layout);
    assert_eq!((all.names[0].as_str(), all.line), ("column 1", vec![2, 3, 4, 5, 6]));
    let layout = Layout { names_line: Some(1), ..Layout::default() };
    assert_eq!(read("1,2\nV,V\n1.5,2.5\n", &layout).line, [3], "the units below are found");
    let layout = Layout { names_line: Some(1), units_line: Some(0), ..Layout::default() };
    assert_eq!(read("1,2\nV,V\n1.5,2.5\n", &layout).line, [2, 3]);
    let layout = Layout { names_line: Some(1), comment: Some("%".into()), ..Layout::default() };
    assert_eq!(read("%a,b\n%x\n1.5,2.5\n", &layout).names, ["a", "b"]);
    for (names_line, first_line) in [(Some(9), None), (Some(3), Some(2))] {
        let layout = Layout { names_line, first_line, ..Layout::default() };
        assert!(error(text, &layout).starts_with("run.csv: value '"), "{}", error(text, &layout));
    }
    let layout = Layout { first_line: Some(50), ..Layout::default() };
    assert!(read(text, &layout).line.is_empty());
}

#[test]
fn a_first_line_far_down() {
    let mut text = "about the run\n".repeat(9_000);
    text.push_str("a,b\n1.5,2.5\n");
    let layout = Layout { first_line: Some(9_002), ..Layout::default() };
    let all = read(&text, &layout);
    assert_eq!((all.names, all.line), (vec!["a".into(), "b".into()], vec![9_002]));
}

#[test]
fn a_head_without_a_row() {
    // The names alone fill the head, and its end lies anywhere about the end of their line.
    for end in ["\n", "\r\n", "\r"] {
        for length in (1 << 16) - 6..(1 << 16) + 3 {
            let text = ["a;".to_string() + &"x".repeat(length - 2), "1,5;2,5".into(), "3,5;4,5".into()].join(end);
            let layout = Layout { decimal: Some(Decimal::Comma), ..Layout::default() };
            let all = read_with(text.as_bytes(), &layout, 4096, 1 << 16, false).unwrap();
            assert_eq!((all.values(0), all.line), (vec![1.5, 3.5], vec![2, 3]), "{end:?} {length}");
        }
    }
}

#[test]
fn a_head_that_ends_within_a_line_end() {
    for pad in 0..9 {
        let text = "x".repeat(pad) + "a,b\r\n" + &"1.5,2.5\r\n".repeat(10_000);
        let reader = Reader::new(Drip(text.as_bytes(), 1), "x", &Layout::default()).unwrap();
        assert_eq!(reader.findings().line_end, LineEnd::CrLf, "{pad}");
    }
}

#[test]
fn byte_order_mark_and_encodings() {
    let all = found("\u{feff}strain (µm/m);T (°C)\n1,5;21,5\n");
    assert_eq!(all.names, ["strain (µm/m)", "T (°C)"]);
    assert!(all.findings.contains("encoding utf-8 with byte-order mark (found)"), "{}", all.findings);
    let old = b"strain (\xb5m/m);T (\xb0C);note\n1,5;21,5;Br\xfccke\n";
    let all = found(old);
    assert_eq!(all.names, ["strain (µm/m)", "T (°C)", "note"]);
    assert_eq!(all.texts[2], ["Brücke"]);
    assert!(all.findings.contains("encoding windows-1252 (found)"), "{}", all.findings);
    let layout = Layout { encoding: Some(Encoding::Utf8), ..Layout::default() };
    let all = read(old, &layout);
    assert_eq!(all.texts[2], ["Br\u{fffd}cke"]);
    assert_eq!(all.values(0), [1.5]);
    assert!(all.remarks.iter().any(|r| r.starts_with("run.csv:2: 1 row with a kept text")), "{:?}", all.remarks);
    let all = found(b"\xff\xfea\x00,\x00b\x00\n\x001\x00,\x00\xac\x20\n\x00\x3d\xd8\x00\xde,\x00\x00\xd8\n\x00\x32");
    // a euro sign, a pair, half a pair, and half a unit at the end
    assert_eq!(all.texts, [vec!["1", "\u{1f600}", "\u{fffd}"], vec!["\u{20ac}", "\u{fffd}", ""]]);
    assert!(all.findings.contains("encoding utf-16 with byte-order mark (found)"), "{}", all.findings);
}

#[test]
fn damage_is_a_word() {
    let all = found(b"a,b\n1.5,2.5\n1\x00.5,2.5\n\xff3.5,2.5\n1.5,2.5\n");
    assert_eq!(all.words[0], [Word::Good, Word::Unreadable, Word::Unreadable, Word::Good]);
    assert_eq!(all.words[1], [Word::Good; 4]);
    let mut state = 1u64;
    let junk: Vec<u8> = (0..50_000)
        .map(|_| {
            state = state.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1);
            (state >> 56) as u8
        })
        .collect();
    assert!(error(&junk, &Layout::default()).starts_with("run.csv: not a text file: "));
    // A block of zeros after a power failure, in the middle of a log.
    let mut text = "1.5,2.5\n".repeat(4_000).into_bytes();
    text.splice(16_000..16_000, [0; 4096]);
    let all = found(&text);
    assert_eq!(all.line.len(), 4_000);
    assert_eq!(all.words[0].iter().filter(|w| **w == Word::Unreadable).count(), 1);
}

#[test]
fn ragged_rows() {
    let all = found("a,b,c\n1,2,3\n1\n1,2,3,,\n1,2,3,4\n,,\n1,2,3,5\n");
    assert_eq!(all.words[2], [Word::Good, Word::Missing, Word::Good, Word::Good, Word::Missing, Word::Good]);
    assert_eq!(
        all.remarks,
        [
            "run.csv:3: 1 row with fewer cells than there are columns: the rest is missing",
            "run.csv:5: 2 rows with more cells than there are columns: the rest is not read, here the first",
        ]
    );
    // A separator at the end of every line makes no column.
    let all = found("a;b;\n1,5;2,5;\n3,5;4,5;\n");
    assert_eq!((all.names, all.remarks.len()), (vec!["a".into(), "b".into()], 0));
}

#[test]
fn quoted_cells() {
    let all = found("\"name, with \"\"comma\"\"\",b,c\n\"1.5\", \"2.5\" ,\"two\nlines\"\n3.5,4.5,5\" pipe\n");
    assert_eq!(all.names, ["name, with \"comma\"", "b", "c"]);
    assert_eq!((all.values(0), all.values(1)), (vec![1.5, 3.5], vec![2.5, 4.5]));
    assert_eq!(all.texts[2], ["two\nlines", "5\" pipe"]);
    assert_eq!(all.line, [2, 4]);
    assert_eq!(found("\"CH01\n(mV/V)\",b\n1.5,2.5\n").names, ["CH01 (mV/V)", "b"]);
    let open = format!("a,b\n1.5,2.5\n3.5,\"oops\n{}", "5.5,6.5\n".repeat(100));
    assert_eq!(error(&open, &Layout::default()), "run.csv:3: a quoted cell begins in this line and is not closed");
    assert_eq!(
        error("a,b\n1,\"2\n", &Layout::default()),
        "run.csv:2: a quoted cell begins in this line and is not closed"
    );
    // A second stray quote does not make the rows between them one cell.
    let swallowed = format!("a,b\n1.5,2.5\n3.5,\"oops\n{}3.5,oops\"\n1.5,2.5\n", "5.5,6.5\n".repeat(100));
    assert_eq!(error(&swallowed, &Layout::default()), "run.csv:3: a quoted cell begins in this line and is not closed");
    // What follows a closed quote is text, quotes too.
    let layout = Layout { separator: Some(Separator::Comma), names_line: Some(1), ..Layout::default() };
    assert_eq!(read("a,b,c\n\"\"  \"x,y\",2.5\n", &layout).texts.concat(), ["\"x", "y\"", "2.5"]);
}

#[test]
fn rows_before_an_error_are_given() {
    let text = b"a,b\n1.5,2.5\n3.5,\"oops\n";
    let mut reader = Reader::new(&text[..], "x", &Layout::default()).unwrap();
    reader.select(&[0], &[]).unwrap();
    let mut block = Block::new(10);
    assert!(reader.next_block(&mut block).is_err());
    assert_eq!(block.columns[0].values, [1.5]);
}

#[test]
fn sentinels() {
    let layout = Layout {
        missing: vec!["-9999".into(), "n/a".into()],
        saturated: vec!["OVER".into(), "9.9E37".into()],
        ..Layout::default()
    };
    let all = read("a\n1.5\n-9999.00\nn/a\nOVER\n+9.9e+37\nn/b\nnan\n-inf\n\n", &layout);
    use Word::{Good, Missing, Saturated, Unreadable};
    assert_eq!(all.words[0], [Good, Missing, Missing, Saturated, Saturated, Unreadable, Missing, Saturated]);
}

#[test]
fn files_with_little_in_them() {
    for text in ["", "\n\n", "\u{feff}", "# nothing\n", "\r\n"] {
        assert!(found(text).line.is_empty(), "{text:?}");
    }
    for text in ["a;b;c", "a;b;c\n", "# x\na;b;c\n", "a;b;c\nV;V;V\n"] {
        let all = found(text);
        assert_eq!((all.names, all.line.len()), (["a", "b", "c"].map(String::from).to_vec(), 0), "{text:?}");
    }
    let all = found("a;b\n1,5;2");
    assert_eq!((all.values(0), all.values(1)), (vec![1.5], vec![2.0]));
    let all = found("1.5");
    assert_eq!((all.values(0), all.names), (vec![1.5], vec!["column 1".into()]));
}

#[test]
fn long_lines() {
    let many = "1.5,".repeat(249_999) + "2.5\n";
    assert_eq!(many.len(), 1_000_000);
    let text = many.repeat(2);
    let mut reader = Reader::new(text.as_bytes(), "x", &Layout::default()).unwrap();
    assert_eq!(reader.names().len(), 250_000);
    reader.select(&[0, 249_999], &[]).unwrap();
    let mut block = Block::new(10);
    assert_eq!(reader.next_block(&mut block).unwrap(), 2);
    assert_eq!(block.columns[1].values, [2.5, 2.5]);

    let text = format!("a,b\n1.5,{}\n2.5,\"{}\"\n", "x".repeat(1_000_000), "y,".repeat(500_000));
    let all = found(&text);
    assert_eq!(all.texts[1][1].len(), 1_000_000);
    assert_eq!(all.values(0), [1.5, 2.5]);

    let endless = io::Read::chain(&b"a,b\n1.5,2.5\n1.5,"[..], io::repeat(b'7'));
    let mut reader = Reader::new(endless, "x", &Layout::default()).map_err(|e| e.to_string());
    let message = match &mut reader {
        Err(message) => message.clone(),
        Ok(reader) => loop {
            match reader.next_block(&mut Block::new(8)) {
                Ok(0) => panic!("it ended"),
                Ok(_) => {}
                Err(error) => break error.to_string(),
            }
        },
    };
    assert_eq!(message, "x:3: the line is longer than 64 MiB");
}

#[test]
fn columns_are_found_or_named() {
    let reader = Reader::new(&b"time,CH01,CH02,CH01\n0,1,2,3\n"[..], "run.csv", &Layout::default()).unwrap();
    let say = |c: &str| reader.find(&c.into()).map_err(|e| e.to_string());
    assert_eq!(say(" CH02 "), Ok(2));
    assert_eq!(say("CH03"), Err("run.csv:1: value 'CH03': no column has this name; the nearest is 'CH01'".into()));
    assert_eq!(say("TIME"), Err("run.csv:1: value 'TIME': no column has this name; the nearest is 'time'".into()));
    assert_eq!(
        say("zzz"),
        Err("run.csv:1: value 'zzz': no column has this name; the columns here are time, CH01, CH02, CH01".into())
    );
    assert_eq!(
        say("CH01"),
        Err("run.csv:1: value 'CH01': columns 2 and 4 have this name; pick one by its number".into())
    );
    assert_eq!(reader.find(&4.into()), Ok(3));
    for number in [0, 5] {
        let wrong = reader.find(&number.into()).unwrap_err().to_string();
        assert_eq!(wrong, format!("run.csv:1: value '{number}': there are 4 columns, counted from 1"));
    }
    let mut reader = Reader::new(&b"1;2\n"[..], "run.csv", &Layout::default()).unwrap();
    assert!(reader.find(&"a".into()).unwrap_err().to_string().contains("no line of names"));
    assert!(reader.select(&[2], &[]).is_err() && reader.select(&[], &[usize::MAX]).is_err());
}

fn timed(time: &[&str], format: Option<&str>, zone: Option<&str>) -> Layout {
    Layout {
        time: time.iter().map(|&t| t.into()).collect(),
        time_format: format.map(String::from),
        time_zone: zone.map(String::from),
        ..Layout::default()
    }
}

#[test]
fn moments_with_a_zone() {
    // date -u -d 2026-03-12T10:00:00Z +%s
    const T: f64 = 1_773_309_600.0;
    let all = found(
        "when,a\n2026-03-12T10:00:00.02Z,1\n2026-03-12 10:00:00.25 +00:00,1\n2026-03-12T11:30+0130,1\n\
         2026-03-12T04:00:00-06,1\n2026-03-12T10:00:00,1\n2026-02-30T10:00:00Z,1\n,1\n2026-03-12T09:59:60Z,1\n",
    );
    assert_eq!(all.seconds()[..4], [1_773_309_600.02, T + 0.25, T, T]);
    use Word::{Good, Missing, Unreadable};
    assert_eq!(all.time_words, [Good, Good, Good, Good, Unreadable, Unreadable, Missing, Good]);
    assert_eq!(all.seconds()[7], T);
    assert_eq!(all.time_text[1], "2026-03-12 10:00:00.25 +00:00");
    assert!(all.findings.contains("time from column 'when' (found): moments, placed on UTC"), "{}", all.findings);
    let reader = Reader::new(&b"time,a\n2026-03-12T10:00:00Z,1\n"[..], "x", &Layout::default()).unwrap();
    assert_eq!(reader.time_scale(), TimeScale::Utc);
    assert_eq!(reader.parse_moment("2026-03-12T10:00:00Z"), Ok(T));
    assert_eq!(reader.parse_moment("2026-03-12T12:00:00.5+02:00"), Ok(T + 0.5));
    assert_eq!(
        reader.parse_moment("2026-03-12T10:00:00").unwrap_err().to_string(),
        "x: moment '2026-03-12T10:00:00' of the sheet: it states no zone and the recording does; write it with Z or an offset"
    );
    assert!(reader.parse_moment("noon").is_err() && reader.parse_moment("12.5 s").is_err());
}

#[test]
fn civil_moments() {
    let all = found("time,a\n2026-02-28T23:59:59.5,1\n2026-03-01T00:00:00.07,1\n2026-03-01,1\n2026-03-01T24:00,1\n");
    assert_eq!(all.seconds(), [86_399.5, 86_400.07, 86_400.0, 172_800.0]);
    let text = b"x\ttime\n1\t2024-02-28 12:00\n".as_slice();
    let reader = Reader::new(text, "x", &Layout::default()).unwrap();
    assert_eq!(reader.time_scale(), TimeScale::Civil { year: 2024, month: 2, day: 28 });
    assert_eq!(reader.parse_moment("2024-03-01T00:00:01"), Ok(2.0 * 86_400.0 + 1.0), "2024 is a leap year");
    assert_eq!(reader.parse_moment("2024-02-27"), Ok(-86_400.0));
    assert!(reader.parse_moment("2024-03-01T00:00:01Z").unwrap_err().to_string().contains("states a zone"));
    assert!(reader.parse_moment("10:00:00").unwrap_err().to_string().contains("the date is missing"));
    // An unreadable first moment does not set the scale.
    let all = found("time,a\n-,1\n2026-03-12T10:00:00,1\n2026-03-12T10:00:01,1\n2026-03-12T10:00:02,1\n");
    assert_eq!(all.seconds()[1], 36_000.0);
}

#[test]
fn numeric_time() {
    let all = found("time;a\n0,00;1\n0,02;2\nx;3\n");
    assert_eq!(all.seconds()[..2], [0.0, 0.02]);
    assert_eq!(all.time_words[2], Word::Unreadable);
    assert_eq!(all.remarks[1], "run.csv:4:1: value 'x': not a number, as the time of the other rows is");
    let all = found("time,a\nms,V\n20,1.5\n70,1.5\n");
    assert_eq!(all.seconds(), [0.02, 0.07]);
    assert!(all.findings.contains("written in ms"), "{}", all.findings);
    assert_eq!(found("t [min],a\n1.5,1\n").seconds(), [90.0]);
    assert!(found("t (degC),a\n1.5,1\n").seconds.is_empty(), "a temperature is no time");
    let reader = Reader::new(&b"time,a\n0.5,1\n"[..], "x", &Layout::default()).unwrap();
    assert_eq!((reader.parse_moment("12.5 s"), reader.parse_moment("3")), (Ok(12.5), Ok(3.0)));
    assert!(reader.parse_moment("2026-03-12T10:00:00Z").unwrap_err().to_string().contains("number of seconds"));
    let reader = Reader::new(&b"a\n0.5\n"[..], "x", &Layout::default()).unwrap();
    assert_eq!(
        reader.parse_moment("1 s").unwrap_err().to_string(),
        "x: moment '1 s' of the sheet: the recording has no time"
    );
}

#[test]
fn interval_is_decimal() {
    let layout = Layout { interval: Some(0.02), ..Layout::default() };
    let all = read("a\n".to_string() + &"1.5\n".repeat(101), &layout);
    assert_eq!((all.seconds()[7], all.seconds()[57], all.seconds()[100]), (0.14, 1.14, 2.0));
    assert_eq!(all.time_text[7], "0.14");
    for interval in [0.0, -1.0, f64::NAN, f64::INFINITY] {
        let layout = Layout { interval: Some(interval), ..Layout::default() };
        assert!(error("1\n", &layout).contains("interval"), "{interval}");
    }
    let layout = Layout { interval: Some(1.0), time: vec![1.into()], ..Layout::default() };
    assert!(error("1\n", &layout).contains("state one of them"));
}

#[test]
fn stated_shapes() {
    let layout = timed(&["date", "clock"], Some("day.month.year hour:minute:second"), None);
    let all = read("date;clock;a\n1.3.26; 09:05:07,25;1,5\n31.12.1999;23:59:59;2\n32.1.26;0:0:0;3\n", &layout);
    assert_eq!(all.seconds()[0], 32_707.25);
    assert_eq!(all.seconds()[1], -(9557.0 * 86_400.0) + 86_399.0, "9557 days before 2026-03-01");
    assert_eq!(all.time_words[2], Word::Unreadable);
    assert_eq!(all.time_text[0], "1.3.26 09:05:07,25");
    let layout = timed(&["t"], Some("yearmonthdayThourminutesecond"), None);
    assert_eq!(read("t,a\n20260312T100000.5,1\n", &layout).seconds(), [36_000.5]);
    let layout = timed(&["t"], Some("month/day/year hour:minute"), None);
    assert_eq!(read("t,a\n3/12/2026   10:30,1\n", &layout).seconds(), [37_800.0]);
    for (format, reason) in [
        ("dd.mm.yyyy", "none of the words"),
        ("day.month hour:minute", "all of year, month and day"),
        ("hour:second", "hour, then minute"),
        ("day.month.year day", "stands twice"),
    ] {
        assert!(error("t,a\n1,2\n", &timed(&["t"], Some(format), None)).contains(reason), "{format}");
    }
    let reader = Reader::new(
        &b"t,a\n12.03.2026 10:00:00,1\n"[..],
        "x",
        &timed(&["t"], Some("day.month.year hour:minute:second"), None),
    )
    .unwrap();
    assert_eq!(reader.parse_moment("12.03.2026 10:00:01"), reader.parse_moment("2026-03-12T10:00:01"));
}

#[test]
fn found_shapes() {
    let all = found("Datum;Uhrzeit;a\n12.03.2026;10:00:00;1,5\n12.03.2026;10:00:01;1,5\n");
    assert_eq!(all.seconds(), [36_000.0, 36_001.0]);
    assert!(all.findings.contains("written as day.month.year hour:minute:second (found)"), "{}", all.findings);
    let all = found("t,a\n2026/03/12 10:00:00,1.5\n");
    assert_eq!(all.seconds(), [36_000.0]);
    // Which is the month cannot be seen, so time is text only.
    let all = found("t,a\n03/04/2026 10:00:00,1.5\n");
    assert_eq!((all.time_text[0].as_str(), all.time_words[0]), ("03/04/2026 10:00:00", Word::Unreadable));
    assert!(all.findings.contains("text only"), "{}", all.findings);
    let all = found("clock,a\n23:59:59.5,1\n00:00:00.5,2\n12:00:00,3\n00:00:01,4\n");
    assert_eq!(all.seconds(), [86_399.5, 86_400.5, 129_600.0, 86_401.0]);
    assert_eq!(all.remarks, ["run.csv:5: 1 row earlier than the row above"]);
}

#[test]
fn the_hour_that_comes_twice_and_the_one_that_does_not() {
    // date -u -d 2026-10-25T00:30:00Z +%s; clocks in Berlin went from 03:00 to 02:00 at 01:00 UTC.
    const T: f64 = 1_792_888_200.0;
    let layout = timed(&["t"], None, Some("Europe/Berlin"));
    let text = "t,a\n2026-10-25T01:59:59,1\n2026-10-25T02:30:00,1\n2026-10-25T02:59:59,1\n2026-10-25T02:00:00,1\n\
                2026-10-25T02:30:00,1\n2026-10-25T03:00:00,1\n2026-10-25T03:00:01+01:00,1\n";
    let all = read(text, &layout);
    assert_eq!(all.seconds(), [T - 1801.0, T, T + 1799.0, T + 1800.0, T + 3600.0, T + 5400.0, T + 5401.0]);
    assert_eq!(
        all.remarks,
        [
            "run.csv:3:1: value '2026-10-25T02:30:00': the clock showed it twice, since it was set back; 4 rows from here on at such times, 2 placed in the first pass and 2 in the second, so that time goes on"
        ]
    );
    // hourly: the second pass shows the same, not less; of rows that follow closely it is the same moment
    let all = read(
        "t,a\n2026-10-25T01:00:00,1\n2026-10-25T02:00:00,1\n2026-10-25T02:00:00,1\n2026-10-25T03:00:00,1\n",
        &layout,
    );
    assert_eq!(all.seconds(), [T - 5400.0, T - 1800.0, T + 1800.0, T + 5400.0]);
    let all = read(
        "t,a\n2026-10-25T02:00:00,1\n2026-10-25T02:00:01,1\n2026-10-25T02:00:01,1\n2026-10-25T02:00:00,1\n",
        &layout,
    );
    assert_eq!(all.seconds(), [T - 1800.0, T - 1799.0, T - 1799.0, T - 1800.0]);
    assert_eq!(all.remarks[0], "run.csv:5: 1 row earlier than the row above");
    assert!(all.remarks[1].contains("4 placed in the first pass and 0 in the second"), "{}", all.remarks[1]);
    // a pause that ends in the second pass; three quarters of an hour from row to row
    let all = read(
        "t,a\n2026-10-25T02:40:00,1\n2026-10-25T02:40:01,1\n2026-10-25T02:35:00,1\n2026-10-25T02:35:01,1\n",
        &layout,
    );
    assert_eq!(all.seconds(), [T + 600.0, T + 601.0, T + 3900.0, T + 3901.0]);
    let all = read(
        "t,a\n2026-10-25T01:45:00,1\n2026-10-25T02:30:00,1\n2026-10-25T02:15:00,1\n2026-10-25T03:00:00,1\n",
        &layout,
    );
    assert_eq!(all.seconds(), [T - 2700.0, T, T + 2700.0, T + 5400.0]);
    let reader = Reader::new(text.as_bytes(), "x", &layout).unwrap();
    assert!(reader.parse_moment("2026-10-25T02:30:00").unwrap_err().to_string().contains("twice"));
    assert_eq!(reader.parse_moment("2026-10-25T02:30:00+01:00"), Ok(T + 3600.0));
    assert_eq!(reader.parse_moment("2026-10-25T03:30:00"), Ok(T + 7200.0));
    assert!(reader.parse_moment("2026-03-29T02:30:00").unwrap_err().to_string().contains("never"));
    // date -u -d 2026-03-29T01:30:00Z +%s; clocks went from 02:00 to 03:00 at 01:00 UTC.
    let all = read("t,a\n2026-03-29T01:59:59,1\n2026-03-29T02:30:00,1\n2026-03-29T03:30:00,1\n", &layout);
    assert_eq!(all.seconds(), [1_774_747_800.0 - 1801.0, 1_774_747_800.0, 1_774_747_800.0]);
    assert_eq!(
        all.remarks[0],
        "run.csv:3:1: value '2026-03-29T02:30:00': the clock never showed it, since it was set forward; 1 row at such times, placed as if it had not been"
    );
    assert!(error(text, &timed(&["t"], None, Some("Europe/Atlantis"))).contains("time_zone"));
    assert!(error(text, &timed(&["when"], None, None)).contains("'when'"));
}

#[test]
fn live_blocks_come_as_rows_come() {
    struct Lines(Vec<&'static [u8]>);
    impl Read for Lines {
        fn read(&mut self, buffer: &mut [u8]) -> io::Result<usize> {
            if self.0.is_empty() {
                return Ok(0);
            }
            let line = self.0.remove(0);
            buffer[..line.len()].copy_from_slice(line);
            Ok(line.len())
        }
    }
    let layout = Layout { first_line: Some(2), ..Layout::default() };
    let source = Lines(vec![b"a,b\n", b"1.5,2\n", b"2.5,", b"3\n", b"3.5,4\n4.5,5\n"]);
    let mut reader = Reader::live(source, "-", &layout).unwrap();
    reader.select(&[0], &[]).unwrap();
    let mut block = Block::new(100);
    let mut sizes = vec![];
    while reader.next_block(&mut block).unwrap() > 0 {
        sizes.push(block.rows());
    }
    assert_eq!(sizes, [1, 1, 2]);
    // The rows come after the head, at either end of a line.
    for end in ["\n", "\r\n", "\r"] {
        let text = ["a,b", "1.5,2", "2.5,3", "3.5,4"].join(end);
        for piece in [1, 2, 5, 6, 100] {
            for (names_line, first_line) in [(Some(1), Some(2)), (None, Some(2)), (Some(1), None), (None, None)] {
                let layout = Layout { names_line, first_line, ..Layout::default() };
                let all = read_with(text.as_bytes(), &layout, 64, piece, true).unwrap();
                assert_eq!((all.values(0), all.line), (vec![1.5, 2.5, 3.5], vec![2, 3, 4]), "{text:?} {piece}");
            }
        }
    }
    let text = "time;a\n0;1,5\n1;2,5\n".to_string() + &"2;3,5\n".repeat(100);
    for piece in [1, 10, 1000] {
        let live = read_with(text.as_bytes(), &Layout::default(), 64, piece, true).unwrap();
        assert_eq!(live, read(&text, &Layout::default()));
    }
}

#[test]
fn long_recordings_do_not_depend_on_blocks() {
    let mut text = String::from("time,a,b\n");
    for i in 0..40_000u32 {
        let odd = if i % 997 == 0 { "lost" } else { "7.25" };
        text += &format!("2026-03-12T{:02}:{:02}:{:02}Z,{},{odd}\n", i / 3600, i / 60 % 60, i % 60, f64::from(i) * 0.1);
    }
    let all = found(&text);
    assert_eq!(all.line.len(), 40_000);
    for i in [0, 1, 12_345, 39_999] {
        assert_eq!(all.values(1)[i], i as f64 * 0.1);
        assert_eq!(all.seconds()[i], 1_773_273_600.0 + i as f64);
        assert_eq!(all.line[i], i as u64 + 2);
    }
    assert_eq!(all.remarks, ["run.csv:2:3: value 'lost': not a number, the first of 41"]);
}

proptest! {
    /// Any bytes: no panic, and neither blocks nor pieces matter.
    #[test]
    fn any_bytes(bytes in proptest::collection::vec(
        prop_oneof![Just(b'\n'), Just(b'\r'), Just(b','), Just(b';'), Just(b'"'), Just(b'#'), Just(b' '), Just(b'.'),
            Just(b':'), Just(b'-'), b'0'..=b'9', any::<u8>()], 0..200)) {
        let whole = read_with(&bytes, &Layout::default(), 4096, 1 << 20, false);
        for (capacity, piece) in [(1, 1), (3, 2), (7, 50)] {
            let other = read_with(&bytes, &Layout::default(), capacity, piece, false);
            match (&whole, &other) {
                (Ok(whole), Ok(other)) => prop_assert_eq!(whole, other),
                (Err(whole), Err(other)) => prop_assert_eq!(whole, other),
                _ => prop_assert!(false, "{:?} {:?}", whole, other),
            }
        }
        let _ = read_with(&bytes, &timed(&[], Some("day.month.year hour:minute"), Some("Europe/Berlin")), 9, 9, true);
    }

    /// Cells are those of the csv crate wherever it has the same rules: no blanks before quotes, no comments, no blank lines.
    #[test]
    fn cells_agree_with_the_csv_crate(rows in proptest::collection::vec(
        proptest::collection::vec("[a-z0-9]{1,3}|\"([a-z,\n]|\"\"){0,6}\"[a-z]?|[a-z]\"[a-z\"]{0,2}", 2..5), 1..6),
        end in prop_oneof![Just("\n"), Just("\r\n"), Just("\r")]) {
        let text: String = rows.iter().map(|r| r.join(",") + end).collect();
        let layout = Layout { separator: Some(Separator::Comma), names_line: Some(0), units_line: Some(0),
            first_line: Some(1), ..Layout::default() };
        let mut oracle = csv::ReaderBuilder::new().has_headers(false).flexible(true).from_reader(text.as_bytes());
        let records: Vec<csv::StringRecord> = oracle.records().map(Result::unwrap).collect();
        let ours = read_with(text.as_bytes(), &layout, 3, 5, false).unwrap();
        prop_assert_eq!(records.len(), ours.line.len());
        for (r, record) in records.iter().enumerate() {
            for (c, column) in ours.texts.iter().enumerate() {
                prop_assert_eq!(record.get(c).unwrap_or("").trim(), column[r].as_str(), "{:?}", text);
            }
        }
    }

    /// What is printed with the shortest digits reads back as the same number.
    #[test]
    fn shortest_digits_read_back(bits in any::<u64>()) {
        let value = f64::from_bits(bits);
        let text = NumberText(value, Digits::Shortest).to_string();
        let all = read_with(format!("a,b\n{text},1\n").as_bytes(), &Layout { names_line: Some(1), ..Layout::default() }, 1, 9, false).unwrap();
        if value.is_finite() {
            prop_assert_eq!(all.values(0)[0], value);
        } else {
            prop_assert_eq!(all.words[0][0], if value.is_nan() { Word::Missing } else { Word::Saturated });
        }
    }
}

#[test]
fn numbers_as_they_are_printed() {
    for (value, digits, text) in [
        (0.0, Digits::Shortest, "0"),
        (-0.0, Digits::Shortest, "0"),
        (61.25, Digits::Shortest, "61.25"),
        (-1e-5, Digits::Shortest, "-0.00001"),
        (9.99e-6, Digits::Shortest, "9.99e-6"),
        (1.5e-7, Digits::Shortest, "1.5e-7"),
        (1e16, Digits::Shortest, "10000000000000000"),
        (1e17, Digits::Shortest, "1e17"),
        (f64::NAN, Digits::Shortest, ""),
        (f64::INFINITY, Digits::Shortest, "inf"),
        (f64::NEG_INFINITY, Digits::Fixed(2), "-inf"),
        (0.25, Digits::Fixed(1), "0.2"),
        (0.35, Digits::Fixed(1), "0.3"),
        (-0.04, Digits::Fixed(1), "0.0"),
        (-0.5, Digits::Fixed(0), "0"),
        (-0.06, Digits::Fixed(1), "-0.1"),
        (-0.0, Digits::Fixed(3), "0.000"),
        (1e17, Digits::Fixed(1), "100000000000000000.0"),
        (f64::NAN, Digits::Fixed(3), ""),
    ] {
        assert_eq!(NumberText(value, digits).to_string(), text, "{value:e}");
    }
}

#[test]
fn quotes_only_where_they_are_needed() {
    let mut out = Vec::new();
    let mut csv = CsvWriter::new(Output::to_writer(&mut out, "x"));
    csv.text("plain text").text("a,b").text("say \"x\"").text("two\nlines").text(" x").text("#").end_row().unwrap();
    csv.text("#1").blank().number(1.5, Digits::Shortest).end_row().unwrap();
    csv.blank().end_row().unwrap();
    csv.text("unended");
    csv.finish().unwrap();
    let expected = "plain text,\"a,b\",\"say \"\"x\"\"\",\"two\nlines\",\" x\",#\n\"#1\",,1.5\n\"\"\nunended\n";
    assert_eq!(String::from_utf8(out).unwrap(), expected);
}

#[test]
fn a_file_appears_whole_or_not_at_all() {
    let directory = tempfile::tempdir().unwrap();
    let list = || {
        let mut names: Vec<_> =
            fs::read_dir(directory.path()).unwrap().map(|e| e.unwrap().file_name().into_string().unwrap()).collect();
        names.sort();
        names
    };
    let path = directory.path().join("out.csv");
    let mut output = Output::to_path(&path).unwrap();
    output.put(&[b'x'; 100_000]).unwrap();
    assert!(!path.exists());
    drop(output);
    assert!(list().is_empty(), "{:?}", list());

    let mut output = Output::to_path(&path).unwrap();
    output.put(b"first\n").unwrap();
    output.finish().unwrap();
    assert_eq!((fs::read(&path).unwrap(), list()), (b"first\n".to_vec(), vec!["out.csv".to_string()]));

    let mut output = Output::to_path(&path).unwrap();
    output.put(b"second\n").unwrap();
    output.flush().unwrap();
    assert_eq!(fs::read(&path).unwrap(), b"first\n");
    output.finish().unwrap();
    assert_eq!((fs::read(&path).unwrap(), list().len()), (b"second\n".to_vec(), 1));

    let message = Output::to_path(directory.path()).unwrap_err().to_string();
    assert!(message.ends_with("cannot write: it is a directory"), "{message}");
    let message = Output::to_path(directory.path().join("none/x.csv")).unwrap_err().to_string();
    assert!(message.ends_with("none/x.csv: cannot write: no such file or directory"), "{message}");
}

#[cfg(unix)]
#[test]
fn permissions_links_and_devices() {
    use std::os::unix::fs::{PermissionsExt, symlink};
    let directory = tempfile::tempdir().unwrap();
    let mode = |path: &std::path::Path| fs::metadata(path).unwrap().permissions().mode() & 0o777;
    let plain = directory.path().join("plain");
    fs::write(&plain, "").unwrap();
    let ours = directory.path().join("ours");
    Output::to_path(&ours).unwrap().finish().unwrap();
    assert_eq!(mode(&ours), mode(&plain));
    fs::set_permissions(&ours, fs::Permissions::from_mode(0o640)).unwrap();
    let link = directory.path().join("link");
    symlink(&ours, &link).unwrap();
    let mut output = Output::to_path(&link).unwrap();
    output.put(b"through").unwrap();
    output.finish().unwrap();
    assert!(fs::symlink_metadata(&link).unwrap().is_symlink());
    assert_eq!((fs::read(&ours).unwrap(), mode(&ours)), (b"through".to_vec(), 0o640));

    let mut output = Output::to_path("/dev/null").unwrap();
    output.put(b"gone").unwrap();
    output.finish().unwrap();
    assert!(!fs::metadata("/dev/null").unwrap().is_file());
}

#[cfg(target_os = "linux")]
#[test]
fn a_full_disk_is_said_with_its_path() {
    let mut output = Output::to_path("/dev/full").unwrap();
    let result = output.put(&[0; 200_000]).and_then(|()| output.finish());
    assert_eq!(result.unwrap_err().to_string(), "/dev/full: cannot write: the disk is full");
}

#[test]
fn a_broken_pipe_is_its_own_kind() {
    struct Gone;
    impl Write for Gone {
        fn write(&mut self, _: &[u8]) -> io::Result<usize> {
            Err(io::ErrorKind::BrokenPipe.into())
        }
        fn flush(&mut self) -> io::Result<()> {
            Ok(())
        }
    }
    let mut csv = CsvWriter::new(Output::to_writer(Gone, "standard output"));
    csv.text("a").end_row().unwrap();
    let error = csv.finish().unwrap_err();
    assert!(error.is_broken_pipe() && matches!(error, RecordingError::BrokenPipe { .. }));
}

#[test]
fn a_source_that_refuses() {
    struct Refuses;
    impl Read for Refuses {
        fn read(&mut self, _: &mut [u8]) -> io::Result<usize> {
            Err(io::ErrorKind::PermissionDenied.into())
        }
    }
    let error = Reader::new(Refuses, "run.csv", &Layout::default()).unwrap_err();
    assert_eq!(error.to_string(), "run.csv: cannot read: permission denied");
}

/// Reads all rows of a text of two number columns, or says why not.
fn two_columns(text: &str) -> Result<Vec<Vec<f64>>, String> {
    let mut reader = Reader::new(text.as_bytes(), "f.csv", &Layout::default()).map_err(|e| e.to_string())?;
    let columns: Vec<usize> = (0..reader.names().len()).collect();
    reader.select(&columns, &[]).map_err(|e| e.to_string())?;
    let mut block = Block::new(64);
    let mut rows = Vec::new();
    while reader.next_block(&mut block).map_err(|e| e.to_string())? > 0 {
        for row in 0..block.rows() {
            rows.push(block.columns.iter().map(|c| c.values[row]).collect());
        }
    }
    Ok(rows)
}

#[test]
fn whole_numbers_between_commas_stay_two_columns() {
    // a cut last line, a line of words at the end, or one row: the header says that there are two columns
    for end in ["2", "END", "22,2\n", ""] {
        let rows = two_columns(&format!("adc,step\n20,0\n21,1\n{end}")).unwrap();
        assert_eq!(rows[..2], [vec![20.0, 0.0], vec![21.0, 1.0]], "{end:?}");
    }
    // without a header it is either: nobody guesses
    let error = two_columns("20,0\n21,1\n22,2\n").unwrap_err();
    assert!(error.contains("one number with a decimal comma, or two cells"), "{error}");
    // one name above: one column
    assert_eq!(two_columns("x\n20,0\n21,5\n").unwrap(), [[20.0], [21.5]]);
}

#[test]
fn a_comma_between_thousands_is_no_decimal_comma() {
    // 1,234 in quotes among cells parted by commas may be a thousand: it is not read, and nothing else changes
    let rows = two_columns("a,x\n0,20.5\n1,\"1,234\"\n").unwrap();
    assert_eq!(rows[0], [0.0, 20.5]);
    assert!(rows[1][1].is_nan());
    let rows = two_columns("a,x\n0,20\n1,\"1,234\"\n").unwrap();
    assert!(rows[1][1].is_nan(), "{rows:?}");
    // a file that quotes its numbers is read
    let rows = two_columns("a,x\n\"0,5\",\"20,25\"\n\"1,5\",\"1,234\"\n").unwrap();
    assert_eq!(rows, [[0.5, 20.25], [1.5, 1.234]]);
}

//! Any bytes as a recording, under any layout: read to the end without a panic, to the same rows whatever the size of the
//! blocks and of the pieces that the bytes come in. The first eight characters choose the layout.
#![no_main]

mod pieces;

use libfuzzer_sys::fuzz_target;
use ohmwright::chain::Word;
use ohmwright::recording::{Block, ColumnRef, Decimal, Encoding, Layout, Reader, Separator, Tally};
use ohmwright::sheet::Pass;
use pieces::Pieces;

fn choose<T: Clone>(byte: u8, from: &[T]) -> Option<T> {
    usize::from(byte).checked_sub(1).and_then(|i| from.get(i % from.len())).cloned()
}

/// The digit 0 states nothing.
fn layout(head: [u8; 8]) -> Layout {
    let [separator, lines, marks, time, shape, interval, comment, encoding] = head.map(|c| c.wrapping_sub(b'0'));
    let line = |shift: u32| choose(lines >> shift & 3, &[0, 1, 3]);
    let texts = |bits: u8| -> Vec<String> {
        choose(bits, &[vec!["-9999".into()], vec!["NaN".into(), "".into()], vec!["1e3".into(), "ä".into()]])
            .unwrap_or_default()
    };
    Layout {
        separator: choose(separator & 3, &[Separator::Comma, Separator::Semicolon, Separator::Tab]),
        decimal: choose(separator >> 2 & 3, &[Decimal::Point, Decimal::Comma]),
        encoding: choose(encoding & 3, &[Encoding::Utf8, Encoding::Windows1252, Encoding::Utf16]),
        names_line: line(0),
        more_names: choose(encoding >> 2 & 3, &[vec![2], vec![2, 4], vec![1]]).unwrap_or_default(),
        units_line: line(2),
        first_line: choose(lines >> 4, &[1, 2, 3, 5, 40, u64::MAX]),
        missing: texts(marks & 3),
        saturated: texts(marks >> 2 & 3),
        comment: choose(comment, &["#".into(), "".into(), "//".into(), "\"".into()]),
        interval: choose(interval, &[0.02, 1.0, 1e-300, 0.0, f64::NAN]),
        time: match time & 7 {
            1 => vec![ColumnRef::Number(1)],
            2 => vec![ColumnRef::Number(2), ColumnRef::Number(1)],
            3 => vec!["time".into()],
            4 => vec![ColumnRef::Number(1), ColumnRef::Number(1)],
            _ => Vec::new(),
        },
        time_format: choose(
            shape & 7,
            &[
                "day.month.year hour:minute:second".into(),
                "month/day/year hour:minute".into(),
                "hour:minute:second".into(),
                "year-month-day".into(),
                "second".into(),
            ],
        ),
        repeated_hour: choose(time >> 3, &[Pass::First, Pass::Second]),
        time_zone: choose(shape >> 3, &["Europe/Berlin".into(), "UTC".into(), "nowhere".into()]),
    }
}

/// Everything that reading gave, bit for bit.
#[derive(PartialEq, Debug)]
struct Read {
    numbers: Vec<Vec<(u64, Word)>>,
    texts: Vec<Vec<String>>,
    time: Vec<(String, u64, Word)>,
    lines: Vec<u64>,
    end: Result<(), String>,
    remarks: Vec<String>,
    tally: Tally,
}

fn read<R: std::io::Read>(mut reader: Reader<R>, rows: usize) -> Read {
    let columns = reader.names().len();
    let numbers: Vec<usize> = (0..columns.min(12)).collect();
    let texts: Vec<usize> = (0..columns).rev().take(2).collect();
    reader.select(&numbers, &texts).expect("the columns are there");
    let mut block = Block::new(rows);
    let mut all = Read {
        numbers: vec![Vec::new(); numbers.len()],
        texts: vec![Vec::new(); texts.len()],
        time: Vec::new(),
        lines: Vec::new(),
        end: Ok(()),
        remarks: Vec::new(),
        tally: Tally::default(),
    };
    loop {
        let result = reader.next_block(&mut block);
        assert!(block.rows() <= rows);
        for (all, column) in all.numbers.iter_mut().zip(&block.columns) {
            assert_eq!((column.values.len(), column.words.len()), (block.rows(), block.rows()));
            for (value, word) in column.values.iter().zip(&column.words) {
                assert_eq!(value.is_nan(), !word.has_number(), "{value} {word}");
                all.push((value.to_bits(), *word));
            }
        }
        for (all, column) in all.texts.iter_mut().zip(&block.texts) {
            assert_eq!(column.len(), block.rows());
            all.extend(column.iter().map(String::from));
        }
        assert_eq!((block.seconds.len(), block.time_words.len()), (block.time_text.len(), block.time_text.len()));
        assert!(block.seconds.is_empty() || block.seconds.len() == block.rows());
        for ((text, seconds), word) in block.time_text.iter().zip(&block.seconds).zip(&block.time_words) {
            assert_eq!(seconds.is_nan(), *word != Word::Good, "{seconds} {word}");
            all.time.push((text.into(), seconds.to_bits(), *word));
        }
        assert!(block.line.is_sorted());
        all.lines.extend(&block.line);
        match result {
            Ok(0) => break,
            Ok(count) => assert_eq!(count, block.rows()),
            Err(error) => {
                all.end = Err(error.to_string());
                break;
            }
        }
    }
    assert_eq!(reader.tally().rows, all.lines.len() as u64);
    all.remarks = reader.remarks();
    all.tally = reader.tally().clone();
    assert!(!reader.findings().to_string().is_empty());
    let _ = reader.parse_moment("2026-03-12T10:00:00Z");
    let _ = reader.parse_moment("12.5 s");
    all
}

fuzz_target!(|data: &[u8]| {
    let Some((head, bytes)) = data.split_first_chunk::<8>() else { return };
    let layout = layout(*head);
    let open = |size| Reader::new(Pieces { bytes, size }, "run.csv", &layout);
    let (whole, single) = (open(usize::MAX), open(1));
    let whole = match (whole, single) {
        (Ok(whole), Ok(single)) => {
            let whole = read(whole, 4096);
            assert_eq!(read(single, 1), whole);
            whole
        }
        (Err(a), Err(b)) => {
            assert_eq!(a.to_string(), b.to_string());
            return;
        }
        (a, b) => panic!("{a:?} {b:?}"),
    };
    assert_eq!(read(open(13).expect("it opened before"), 7), whole);
    if let Ok(live) = Reader::live(Pieces { bytes, size: 5 }, "run.csv", &layout) {
        read(live, 3);
    }
});

//! Sheets in tests: the chain that a sheet makes, and what it refuses, with the place marked in the sheet itself.
#![allow(dead_code, reason = "every test file uses its own part of this")]

use ohmwright::chain::{Chain, Element, Network, Reading, Signal};
use ohmwright::measurement::Segment;
use ohmwright::sheet::Sheet;
use ohmwright::signal::{Arm, Bridge, Conductor, Driven, Each};
use ohmwright::strain::{Gauge, Zero};

/// A gauge in the wanted direction.
pub const E: Arm = Arm::Active { factor: 1.0, driven: Driven::Along };

pub fn read(text: &str) -> Sheet {
    Sheet::read("s.toml", text).unwrap_or_else(|e| panic!("{e}"))
}

pub fn segment(sheet: &Sheet, channel: usize) -> &Segment {
    &sheet.measurement.channels[channel].segments().unwrap()[0]
}

pub fn chain(text: &str) -> Chain {
    segment(&read(text), 0).chain
}

/// One gauge of 350 Ω with these further lines.
pub fn gauge(more: &str) -> String {
    format!(
        "[channel.g]\ncolumn = \"CH01\"\nreads = \"mV/V\"\ngauge = {{ resistance = \"350 ohm\", gauge_factor = 2.08 }}\n\
         bridge = {{ arms = [\"e\", \"0\", \"0\", \"0\"] }}\n{more}\n"
    )
}

/// The same chain in Rust.
pub fn gauge_chain() -> Chain {
    let element = Element::Gauge { gauge: Gauge::new(2.08), zero: Zero::default(), limit: 0.1 };
    Chain {
        reading: Reading { signal: Signal::Ratio, exponent: -3 },
        ..Chain::new(Network::Bridge(Bridge::one_gauge(350.0)), element)
    }
}

pub fn with_gauge(mut chain: Chain, change: impl FnOnce(&mut Gauge, &mut Zero, &mut f64)) -> Chain {
    let Element::Gauge { gauge, zero, limit } = &mut chain.element else { panic!("no gauge") };
    change(gauge, zero, limit);
    chain
}

pub fn with_bridge(mut chain: Chain, change: impl FnOnce(&mut Bridge)) -> Chain {
    let Network::Bridge(bridge) = &mut chain.network else { panic!("no bridge") };
    change(bridge);
    chain
}

pub fn same(conductor: Conductor) -> Each {
    Each::Same(conductor)
}

/// Checks every message in order, each with its place: marked by ‹ › in the text.
#[track_caller]
pub fn mistakes_as(marked: &str, messages: &[&str]) {
    let mut text = String::new();
    let mut places = Vec::new();
    for c in marked.chars() {
        match c {
            '‹' => places.push((text.len(), 0)),
            '›' => places.last_mut().unwrap().1 = text.len(),
            c => text.push(c),
        }
    }
    assert_eq!(places.len(), messages.len(), "marks in {marked}");
    let error = Sheet::read("s.toml", &text).expect_err(marked);
    let body = text.strip_prefix('\u{feff}').unwrap_or(&text);
    let mark = text.len() - body.len();
    let said = error.to_string();
    let mut want = String::new();
    for (i, ((start, end), message)) in places.iter().zip(messages).enumerate() {
        let before = &body[..start - mark];
        let line = before.matches('\n').count() + 1;
        let column = before.rsplit('\n').next().unwrap().chars().count() + 1;
        let source = body.lines().nth(line - 1).unwrap();
        let width = line.to_string().len();
        let marked = &body[start - mark..end - mark];
        let carets = marked.lines().next().map_or(1, |l| l.chars().count()).max(1);
        if i > 0 {
            want.push('\n');
        }
        want.push_str(&format!("s.toml:{line}:{column}: {message}\n"));
        want.push_str(&format!("{:width$} |\n{line} | {source}\n", ""));
        want.push_str(&format!("{:width$} | {:column$}{}\n", "", "", "^".repeat(carets), column = column - 1));
    }
    assert_eq!(said, want, "\n--- said:\n{said}--- wanted:\n{want}");
    for message in messages {
        assert!(!message.ends_with('.') && message.chars().next().is_some_and(|c| !c.is_uppercase()), "{message}");
    }
}

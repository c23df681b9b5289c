//! A zero from another recording, and a second one at the end.

use std::string::{String, ToString};

use super::Reader;
use crate::measurement::{Again, AgainWindow, Drift, Side, ZeroSource};
use crate::sheet::node::{Section, Value};
use crate::sheet::order::rising;
use crate::sheet::table_of;

/// Most rows of a second zero: they are held until the recording ends.
const MOST_ROWS: u64 = 10_000_000;

impl<'a> Reader<'a, '_> {
    /// `zero.file`, `zero.again` and `zero.drift`, beside where the zero comes from.
    pub(super) fn second_zero(
        &mut self,
        source: &ZeroSource,
        temperature: Option<&Side>,
    ) -> Option<(Option<String>, Option<Again>)> {
        let s = self.s.clone();
        if !s.has("zero") {
            return Some((None, None));
        }
        let section = s.section("zero")?;
        let file = match section.text("file") {
            None if section.has("file") => return None,
            None => None,
            Some((_, span)) if *source == ZeroSource::Stated => {
                self.say(span, "zero.file is where rows or from and to are read: one of them must stand beside it");
                return None;
            }
            Some((file, _)) => Some(file.to_string()),
        };
        let drifts = [("time", Drift::Time), ("temperature", Drift::Temperature)];
        let drift = if section.has("drift") { Some(section.choice("drift", &drifts)?) } else { None };
        if !section.has("again") {
            if drift.is_some() {
                section.lack("again", "a drift is what a second zero shows, as in again = { rows = 200 }");
                return None;
            }
            return Some((file, None));
        }
        let window = self.again(&section)?;
        let point = |key: &str| section.entry(key).map_or(section.span.clone(), |e| e.node.span.clone());
        match drift {
            Some(Drift::Time) if file.is_some() || *source == ZeroSource::Stated => {
                self.say(
                    point("drift"),
                    "a drift in time begins at a zero that this recording holds: rows, or from and to, without a file",
                );
                return None;
            }
            Some(Drift::Temperature) if temperature.is_none() => {
                self.say(point("drift"), "a drift along temperature needs temperature, a channel of this sheet");
                return None;
            }
            _ => {}
        }
        Some((file, Some(Again { window, drift, found: None })))
    }

    fn again(&mut self, zero: &Section<'a>) -> Option<AgainWindow> {
        let section = zero.section("again")?;
        match (section.has("rows"), section.text("from"), section.text("to")) {
            (true, None, None) => Some(AgainWindow::LastRows(section.whole("rows", 1, MOST_ROWS)?)),
            (false, Some(from), Some(to)) => rising(&section, from.0, to.clone(), true)
                .then(|| AgainWindow::Window { from: section.moment(from), to: section.moment(to) }),
            _ => {
                self.say(
                    section.span.clone(),
                    "zero.again has one of: rows = a number of last rows; from and to = a stretch of time",
                );
                None
            }
        }
    }

    /// Whether the drift goes along temperature, so that a channel is needed which the sensor may not ask for.
    pub(super) fn drifts_with_temperature(&self) -> bool {
        let drift = self.s.table.peek("zero").and_then(|e| table_of(&e.node.value)).and_then(|zero| zero.peek("drift"));
        drift.is_some_and(|e| matches!(&e.node.value, Value::Text(text) if text == "temperature"))
    }
}

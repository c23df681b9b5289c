//! Which of two moments comes first, where they say so by themselves.

use std::cmp::Ordering;

use jiff::{Timestamp, civil::DateTime};

use super::node::Section;
use super::quantity;
use super::unit::Kind;

/// Says at its place that a moment must come after another; false where it does not.
///
/// Moments in the form of a recording are compared once there is one.
pub(super) fn rising(s: &Section<'_>, first: &str, second: (&str, core::ops::Range<usize>), equal: bool) -> bool {
    let (text, span) = second;
    let wrong = match compare(first, text) {
        Some(Ordering::Less) | None => false,
        Some(Ordering::Equal) => !equal,
        Some(Ordering::Greater) => true,
    };
    if wrong {
        s.say(span, std::format!("'{text}' must come after '{first}'"));
    }
    !wrong
}

fn compare(first: &str, second: &str) -> Option<Ordering> {
    let seconds = |text: &str| {
        quantity::bare_number(text).or_else(|| quantity::parse(text, &[Kind::Seconds]).ok().map(|q| q.value))
    };
    if let (Some(a), Some(b)) = (seconds(first), seconds(second)) {
        return a.partial_cmp(&b);
    }
    if let (Ok(a), Ok(b)) = (first.parse::<Timestamp>(), second.parse::<Timestamp>()) {
        return Some(a.cmp(&b));
    }
    // moments of one unstated zone
    let local = |text: &str| text.parse::<DateTime>().ok().filter(|_| text.parse::<Timestamp>().is_err());
    Some(local(first)?.cmp(&local(second)?))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn moments_are_compared_where_they_are_known() {
        let cases = [
            ("10 s", "9 s", Some(Ordering::Greater)),
            ("1 min", "61", Some(Ordering::Less)),
            ("2026-03-12T10:00:00Z", "2026-03-12T11:00:00+01:00", Some(Ordering::Equal)),
            ("2026-03-12T10:00:00", "2026-03-12 09:59:59.9", Some(Ordering::Greater)),
            ("2026-03-12T10:00:00Z", "2026-03-12T10:00:01", None),
            ("12.03.2026 10:00:00", "12.03.2026 09:00:00", None),
        ];
        for (first, second, order) in cases {
            assert_eq!(compare(first, second), order, "{first} {second}");
        }
    }
}

//! A column of text in one piece of memory.

use core::fmt;
use std::{string::String, vec::Vec};

/// A column of texts, kept in one string with the end of each.
///
/// ```
/// # use ohmwright::recording::Texts;
/// let mut steps = Texts::default();
/// steps.push("empty span");
/// steps.push("lorry at midspan");
/// assert_eq!(steps.get(1), Some("lorry at midspan"));
/// assert_eq!(steps.get(2), None);
/// assert_eq!(steps.iter().count(), 2);
/// ```
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Texts {
    arena: String,
    ends: Vec<usize>,
}

impl Texts {
    /// Appends one text.
    pub fn push(&mut self, text: &str) {
        self.arena.push_str(text);
        self.ends.push(self.arena.len());
    }

    /// Appends one text given in pieces that are joined without anything between them.
    pub(super) fn push_fmt(&mut self, text: fmt::Arguments<'_>) {
        // Writing to a string does not fail.
        let _ = fmt::Write::write_fmt(&mut self.arena, text);
        self.ends.push(self.arena.len());
    }

    /// Returns the text of this row, counted from 0; `None` past the end.
    #[must_use]
    pub fn get(&self, row: usize) -> Option<&str> {
        let end = *self.ends.get(row)?;
        let start = match row.checked_sub(1) {
            Some(before) => *self.ends.get(before)?,
            None => 0,
        };
        self.arena.get(start..end)
    }

    /// Returns the number of texts.
    #[must_use]
    pub fn len(&self) -> usize {
        self.ends.len()
    }

    /// Returns whether there are no texts.
    #[must_use]
    pub fn is_empty(&self) -> bool {
        self.ends.is_empty()
    }

    /// Returns the texts in order.
    pub fn iter(&self) -> impl Iterator<Item = &str> {
        (0..self.len()).map(|row| self.get(row).unwrap_or_default())
    }

    /// Removes all texts and keeps the memory.
    pub fn clear(&mut self) {
        self.arena.clear();
        self.ends.clear();
    }
}

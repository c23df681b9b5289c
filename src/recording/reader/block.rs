//! Some rows of a recording, column by column.

use std::vec::Vec;

use crate::chain::Word;
use crate::measurement::Column;
use crate::recording::Texts;

/// Some rows of a recording, column by column.
///
/// All vectors have one element for each row; `seconds`, `time_words` and `time_text` are empty when the recording has neither a
/// time column nor an interval. A block is made once and filled again and again.
#[derive(Clone, Debug, Default)]
pub struct Block {
    pub(super) capacity: usize,
    /// The columns of numbers in the order of [`Reader::select`](super::Reader::select).
    pub columns: Vec<Column>,
    /// The columns of text in the order of [`Reader::select`](super::Reader::select), without blanks around the cells.
    pub texts: Vec<Texts>,
    /// The time as written, several columns joined by one blank; with an interval, the seconds in words.
    pub time_text: Texts,
    /// Seconds on the scale of [`Reader::time_scale`](super::Reader::time_scale); NaN where the word is not `Good`.
    pub seconds: Vec<f64>,
    /// One word for each moment: `Good`, `Missing` or `Unreadable`.
    pub time_words: Vec<Word>,
    /// The line of each row, counted from 1; of a row that runs over several lines, the first.
    pub line: Vec<u64>,
}

impl Block {
    /// Returns an empty block for so many rows at a time, at least one.
    #[must_use]
    pub fn new(capacity: usize) -> Self {
        Self { capacity: capacity.max(1), ..Self::default() }
    }

    /// Returns how many rows the block takes at a time.
    #[must_use]
    pub const fn capacity(&self) -> usize {
        self.capacity
    }

    /// Returns how many rows the block holds now.
    #[must_use]
    pub fn rows(&self) -> usize {
        self.line.len()
    }

    pub(super) fn clear(&mut self, columns: usize, texts: usize) {
        self.columns.resize_with(columns, Column::default);
        for column in &mut self.columns {
            column.values.clear();
            column.words.clear();
        }
        self.texts.resize_with(texts, Texts::default);
        self.texts.iter_mut().for_each(Texts::clear);
        self.time_text.clear();
        self.seconds.clear();
        self.time_words.clear();
        self.line.clear();
    }
}

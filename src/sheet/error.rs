//! What is wrong with a sheet, shown where it is wrong.

use core::ops::Range;
use std::fmt;
use std::string::{String, ToString};
use std::vec::Vec;

use annotate_snippets::{AnnotationKind, Level, Renderer, Snippet};

/// One thing that is wrong with a sheet.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Diagnostic {
    /// Bytes of the sheet that it is about; those of its list count on behind the sheet.
    pub span: Range<usize>,
    /// What is wrong and what was expected.
    pub message: String,
}

/// A text that belongs to a sheet: itself, or its list.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) struct Source {
    pub(super) file: String,
    pub(super) text: String,
    /// Where its bytes begin among those that a span counts.
    pub(super) base: usize,
    /// First byte, line and number of each cell of a table; empty for a text.
    pub(super) places: Vec<(usize, u64, usize)>,
}

impl Source {
    /// Returns line and column of a byte, from 1: of a table the number of the cell.
    pub(super) fn place(&self, at: usize) -> (u64, usize) {
        let cell = self.places.partition_point(|(start, ..)| *start <= at).checked_sub(1);
        if let Some((_, line, cell)) = cell.and_then(|i| self.places.get(i)) {
            return (*line, *cell);
        }
        let before = self.text.get(..at.min(self.text.len())).unwrap_or(&self.text);
        let line = before.matches('\n').count() as u64 + 1;
        let column = before.rsplit('\n').next().unwrap_or("").chars().count() + 1;
        (line, column)
    }
}

/// Everything that is wrong with a sheet.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct SheetError {
    /// The sheet, and then its list.
    sources: Vec<Source>,
    diagnostics: Vec<Diagnostic>,
}

impl SheetError {
    pub(super) fn new(file: &str, text: &str, mut diagnostics: Vec<Diagnostic>) -> Self {
        diagnostics.sort_by_key(|d| d.span.start);
        diagnostics.dedup();
        let sheet = Source { file: file.to_string(), text: text.to_string(), base: 0, places: Vec::new() };
        Self { sources: std::vec![sheet], diagnostics }
    }

    /// Adds the list that some of it is about.
    pub(super) fn with(mut self, list: Option<Source>) -> Self {
        self.sources.extend(list);
        self
    }

    /// Returns what is wrong, in the order of the sheet.
    #[must_use]
    pub fn diagnostics(&self) -> &[Diagnostic] {
        &self.diagnostics
    }
}

impl fmt::Display for SheetError {
    /// `file:line:column: message`, then the line itself with the place marked; one block for each thing.
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let renderer = Renderer::plain();
        for (i, d) in self.diagnostics.iter().enumerate() {
            if i > 0 {
                writeln!(f)?;
            }
            let Some(source) = self.sources.iter().rev().find(|s| s.base <= d.span.start) else { continue };
            let text = source.text.as_str();
            let (line, column) = source.place(d.span.start - source.base);
            writeln!(f, "{}:{line}:{column}: {}", source.file, d.message)?;
            // the marked line alone: the first line of a span of several
            let start = (d.span.start - source.base).min(text.len());
            let line_end = text.get(start..).and_then(|t| t.find('\n')).map_or(text.len(), |n| start + n);
            let end = d.span.end.saturating_sub(source.base).clamp(start, line_end.max(start));
            if text.is_char_boundary(start) && text.is_char_boundary(end) && !text.is_empty() {
                let snippet = Snippet::source(text).annotation(AnnotationKind::Primary.span(start..end));
                let group = Level::ERROR.no_name().primary_title("").element(snippet);
                let drawn = renderer.render(&[group]);
                // the drawing without its own title and place, which the first line has said already
                for row in drawn.lines().filter(|l| {
                    let l = l.trim_start();
                    l.starts_with('|') || l.starts_with(|c: char| c.is_ascii_digit())
                }) {
                    writeln!(f, "{row}")?;
                }
            }
        }
        Ok(())
    }
}

impl std::error::Error for SheetError {}

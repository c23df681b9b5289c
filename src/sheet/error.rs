//! What is wrong with a sheet, shown where it is wrong.

use core::ops::Range;
use std::fmt;
use std::string::{String, ToString};
use std::vec::Vec;

use annotate_snippets::{AnnotationKind, Level, Renderer, Snippet};

/// One thing that is wrong with a sheet.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Diagnostic {
    /// Bytes of the sheet that it is about.
    pub span: Range<usize>,
    /// What is wrong and what was expected.
    pub message: String,
}

/// Everything that is wrong with a sheet.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct SheetError {
    file: String,
    text: String,
    diagnostics: Vec<Diagnostic>,
}

impl SheetError {
    pub(super) fn new(file: &str, text: &str, mut diagnostics: Vec<Diagnostic>) -> Self {
        diagnostics.sort_by_key(|d| d.span.start);
        diagnostics.dedup();
        Self { file: file.to_string(), text: text.to_string(), diagnostics }
    }

    /// Returns what is wrong, in the order of the sheet.
    #[must_use]
    pub fn diagnostics(&self) -> &[Diagnostic] {
        &self.diagnostics
    }

    /// Returns line and column, from 1, of a byte of the sheet.
    fn place(&self, at: usize) -> (usize, usize) {
        let before = self.text.get(..at.min(self.text.len())).unwrap_or(&self.text);
        let line = before.matches('\n').count() + 1;
        let column = before.rsplit('\n').next().unwrap_or("").chars().count() + 1;
        (line, column)
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
            let (line, column) = self.place(d.span.start);
            writeln!(f, "{}:{line}:{column}: {}", self.file, d.message)?;
            // the marked line alone: the first line of a span of several
            let start = d.span.start.min(self.text.len());
            let line_end = self.text.get(start..).and_then(|t| t.find('\n')).map_or(self.text.len(), |n| start + n);
            let end = d.span.end.clamp(start, line_end.max(start));
            if self.text.is_char_boundary(start) && self.text.is_char_boundary(end) && !self.text.is_empty() {
                let snippet = Snippet::source(self.text.as_str()).annotation(AnnotationKind::Primary.span(start..end));
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

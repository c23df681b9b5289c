//! The tables of data/ as they are compiled in: `#` lines of provenance, a header, plain cells.

use std::string::String;
use std::vec::Vec;

/// A table, parsed.
pub(super) struct Table {
    pub(super) file: &'static str,
    remarks: Vec<&'static str>,
    header: Vec<&'static str>,
    rows: Vec<(usize, Vec<&'static str>)>,
}

/// One row with the names of its cells.
pub(super) struct Row<'a> {
    pub(super) line: usize,
    header: &'a [&'static str],
    cells: &'a [&'static str],
}

impl Table {
    pub(super) fn new(file: &'static str, text: &'static str) -> Self {
        let mut table = Self { file, remarks: Vec::new(), header: Vec::new(), rows: Vec::new() };
        for (i, line) in text.lines().enumerate() {
            if let Some(remark) = line.strip_prefix('#') {
                table.remarks.push(remark.trim());
            } else if table.header.is_empty() {
                table.header = line.split(',').collect();
            } else if !line.trim().is_empty() {
                table.rows.push((i + 1, line.split(',').collect()));
            }
        }
        table
    }

    /// Text of a provenance line, such as `source`.
    pub(super) fn remark(&self, key: &str) -> String {
        let mut out = String::new();
        for text in self.remarks.iter().filter_map(|r| r.strip_prefix(key)?.strip_prefix(':')) {
            if !out.is_empty() {
                out.push_str("; ");
            }
            out.push_str(text.trim());
        }
        out
    }

    pub(super) fn rows(&self) -> impl Iterator<Item = Row<'_>> {
        self.rows.iter().map(|(line, cells)| Row { line: *line, header: &self.header, cells })
    }
}

impl Row<'_> {
    /// Text of a cell; empty where the column or the cell is missing.
    pub(super) fn text(&self, column: &str) -> &'static str {
        let at = self.header.iter().position(|h| *h == column);
        at.and_then(|i| self.cells.get(i)).copied().unwrap_or("").trim()
    }

    pub(super) fn number(&self, column: &str) -> Option<f64> {
        self.text(column).parse().ok()
    }

    /// The number, or 0 where the cell is blank.
    pub(super) fn or_zero(&self, column: &str) -> f64 {
        self.number(column).unwrap_or(0.0)
    }

    /// A printed figure and half a unit of its last digit.
    pub(super) fn printed(&self, column: &str) -> Option<(f64, f64)> {
        let text = self.text(column);
        let value: f64 = text.parse().ok()?;
        let (mantissa, exponent) = match text.split_once(['e', 'E']) {
            Some((m, e)) => (m, e.parse::<i32>().ok()?),
            None => (text, 0),
        };
        let places = mantissa.split_once('.').map_or(0, |(_, behind)| behind.len());
        let last: f64 = std::format!("5e{}", exponent - i32::try_from(places).ok()? - 1).parse().ok()?;
        Some((value, last))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn half_a_unit_of_the_last_digit() {
        let table = Table::new("x", "# source: a\n# source: b\nt,r\n-200,18.52\n0,1e-3\n5,\n");
        let half: Vec<_> = table.rows().map(|r| r.printed("r")).collect();
        assert_eq!(half, [Some((18.52, 0.005)), Some((1e-3, 5e-4)), None]);
        assert_eq!(table.remark("source"), "a; b");
        assert_eq!(table.rows().map(|r| r.line).collect::<Vec<_>>(), [4, 5, 6]);
    }
}

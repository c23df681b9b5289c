//! Reader of data/*.csv: lines of words begin with `#`, then a header line, then rows; cells are parted by commas and
//! addressed by their header.

use super::report::At;

/// A table.
#[derive(Debug)]
pub struct Table {
    file: String,
    header: Vec<String>,
    rows: Vec<(usize, Vec<String>)>,
}

/// One row of a table.
#[derive(Clone, Copy, Debug)]
pub struct Row<'a> {
    table: &'a Table,
    line: usize,
    cells: &'a [String],
}

impl Table {
    /// Reads a table of the package; a row of another length than the header, or a table without rows, is a failure.
    pub fn read(path: &str) -> Self {
        let text = super::read(path);
        let cells = |line: &str| line.split(',').map(|c| c.trim().to_owned()).collect::<Vec<_>>();
        let mut lines = text
            .lines()
            .enumerate()
            .filter(|(_, l)| !l.starts_with('#') && !l.trim().is_empty())
            .map(|(i, l)| (i + 1, l));
        let (_, header) = lines.next().unwrap_or_else(|| panic!("{path}: no header"));
        let header = cells(header);
        let rows: Vec<_> = lines.map(|(i, l)| (i, cells(l))).collect();
        assert!(!rows.is_empty(), "{path}: no rows");
        for (line, row) in &rows {
            assert_eq!(row.len(), header.len(), "{path}:{line}: as many cells as the header");
        }
        Self { file: path.to_owned(), header, rows }
    }

    /// The rows in order.
    pub fn rows(&self) -> impl Iterator<Item = Row<'_>> {
        self.rows.iter().map(|(line, cells)| Row { table: self, line: *line, cells })
    }

    /// Whether the table has this column.
    pub fn has(&self, column: &str) -> bool {
        self.header.iter().any(|h| h == column)
    }
}

impl<'a> Row<'a> {
    /// Where the row stands, for the report.
    pub fn at(&self) -> At<'a> {
        At { file: &self.table.file, line: self.line }
    }

    /// The cell as it is written.
    pub fn text(&self, column: &str) -> &'a str {
        let table = self.table;
        let i = table
            .header
            .iter()
            .position(|h| h == column)
            .unwrap_or_else(|| panic!("{}: no column {column}", table.file));
        &self.cells[i]
    }

    /// The cell as a number; a blank cell is a failure.
    pub fn number(&self, column: &str) -> f64 {
        self.maybe(column).unwrap_or_else(|| panic!("{}: blank {column}", self.at()))
    }

    /// The cell as a number; `None` when blank.
    pub fn maybe(&self, column: &str) -> Option<f64> {
        let text = self.text(column);
        (!text.is_empty()).then(|| text.parse().unwrap_or_else(|e| panic!("{}: {column} {text:?}: {e}", self.at())))
    }

    /// Half a unit of the last printed digit of the cell.
    pub fn half_digit(&self, column: &str) -> f64 {
        half_digit(self.text(column))
    }
}

/// Half a unit of the last digit of a figure as it is printed: `138.51` 0.005, `2.50e-4` 0.5e-6, `120` 0.5.
pub fn half_digit(text: &str) -> f64 {
    let (mantissa, exponent) = text.split_once(['e', 'E']).unwrap_or((text, "0"));
    let places = mantissa.split_once('.').map_or(0, |(_, fraction)| fraction.len()) as i32;
    let exponent: i32 = exponent.parse().unwrap_or_else(|e| panic!("{text:?}: {e}"));
    format!("0.5e{}", exponent - places).parse().unwrap_or_else(|e| panic!("{text:?}: {e}"))
}

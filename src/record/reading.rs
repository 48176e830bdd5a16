//! How a table was understood, for the person to see and to change.

use super::names::{DecimalMark, Delimiter, Role, Unit};
use serde::Serialize;

/// Everything that was decided while reading a table.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Reading {
    /// What parts the cells.
    pub delimiter: Delimiter,
    /// What stands before the tenths.
    pub decimal_mark: DecimalMark,
    /// How many lines hold neither header nor numbers: preamble, remarks, units, empty lines.
    pub skipped_lines: usize,
    /// The line of the header, counted from 1.
    pub header_line: Option<usize>,
    /// What each column was taken for.
    pub columns: Vec<Column>,
    /// How many rows became points.
    pub rows_read: usize,
    /// The rows that did not, in the order of the text.
    pub bad_rows: Vec<BadRow>,
    /// What was assumed, converted or put in order, one sentence each.
    pub cleaned: Vec<String>,
}

/// A column and what it was taken for.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Column {
    /// Its place, counted from 0.
    pub index: usize,
    /// Its header as it stands in the text; empty without one.
    pub header: String,
    /// What it holds.
    pub role: Role,
    /// The unit that its numbers were read in.
    pub unit: Option<Unit>,
}

/// A row that could not become a point.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct BadRow {
    /// Its line, counted from 1.
    pub line: usize,
    /// Its text, shortened if very long.
    pub text: String,
    /// Why, in one sentence.
    pub sentence: String,
}

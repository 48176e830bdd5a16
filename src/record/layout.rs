//! Where the header and the numbers begin.

use super::names::{Delimiter, Unit};
use super::rows::Row;
use super::words::{Heading, heading, is_foreign};

/// The parts of a table, as places in its list of rows.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Layout {
    /// The row of names.
    pub(super) header: Option<usize>,
    /// The row of units below it.
    pub(super) units: Option<usize>,
    /// The first row of numbers; the end of the list if there is none.
    pub(super) start: usize,
}

/// Finds header and numbers: first by the words of the header, else by where numbers begin.
pub(super) fn layout(rows: &[Row], first_line: Option<usize>) -> Layout {
    if let Some(first_line) = first_line {
        let start = rows.iter().position(|row| row.line >= first_line).unwrap_or(rows.len());
        return above(rows, start);
    }
    let begins = |row: &Row| !row.is_remark() && row.numbers() >= 2;
    let first_is_number =
        |row: &Row| row.cells().find(|cell| !cell.is_empty()).is_some_and(super::cell::is_number);
    let numbers = rows
        .iter()
        .position(|row| begins(row) && first_is_number(row))
        .or_else(|| rows.iter().position(begins))
        .unwrap_or(rows.len());
    let before = rows.get(..numbers).unwrap_or(rows);
    match before.iter().position(names_columns) {
        Some(header) => {
            let units = Some(header + 1).filter(|&next| rows.get(next).is_some_and(is_units));
            Layout { header: Some(header), units, start: units.unwrap_or(header) + 1 }
        }
        None => above(rows, numbers),
    }
}

/// The header directly above the first row of numbers.
fn above(rows: &[Row], start: usize) -> Layout {
    let up = |from: usize| from.checked_sub(1).and_then(|at| rows.get(at).map(|row| (at, row)));
    let is_header = |row: &Row| {
        !row.is_remark() && row.numbers() == 0 && row.cells().filter(|c| !c.is_empty()).count() >= 2
    };
    match up(start) {
        Some((at, row)) if is_units(row) => match up(at) {
            Some((names, row)) if is_header(row) => Layout { header: Some(names), units: Some(at), start },
            _ => Layout { header: Some(at), units: None, start },
        },
        Some((at, row)) if is_header(row) || names_columns(row) => {
            Layout { header: Some(at), units: None, start }
        }
        _ => Layout { header: None, units: None, start },
    }
}

/// Whether the words of a row name a column of wavelengths and one of something else.
fn names_columns(row: &Row) -> bool {
    use super::names::Role::Wavelength;
    let roles: Vec<_> = row.cells().filter_map(|cell| heading(cell.trim_start_matches('#')).role).collect();
    row.numbers() == 0 && roles.contains(&Wavelength) && roles.iter().any(|role| *role != Wavelength)
}

/// Whether a row holds nothing but units, and two of them ours.
fn is_units(row: &Row) -> bool {
    let bare = |cell: &str| cell.trim_matches(['(', ')', '[', ']']).to_owned();
    let cells: Vec<String> = row.cells().filter(|cell| !cell.is_empty()).map(bare).collect();
    let ours: Vec<Unit> = cells.iter().filter_map(|cell| Unit::written(cell)).collect();
    ours.len() >= 2
        && ours.iter().any(|unit| *unit != Unit::One)
        && cells.iter().all(|cell| Unit::written(cell).is_some() || is_foreign(cell))
}

/// What the header says of each of `width` columns.
pub(super) fn headings(rows: &[Row], layout: Layout, width: usize, delimiter: Delimiter) -> Vec<Heading> {
    let Some(header) = layout.header.and_then(|at| rows.get(at)) else {
        return vec![Heading::default(); width];
    };
    let mut names: Vec<Heading> = header.cells().map(|cell| heading(cell.trim_start_matches('#'))).collect();
    if delimiter == Delimiter::Space && names.len() > width {
        names = gathered(names);
    }
    names.resize(width.max(names.len()), Heading::default());
    let Some(units) = layout.units.and_then(|at| rows.get(at)) else { return names };
    for (index, name) in names.iter_mut().enumerate() {
        let below = units.cell(index).trim_matches(['(', ')', '[', ']']);
        if name.unit.is_none() && !below.is_empty() {
            let text = std::mem::take(&mut name.text);
            *name = Heading { text: text.clone(), ..heading(&format!("{text} ({below})")) };
        }
    }
    names
}

/// Gathers the words of a header that single spaces tore apart: words without a meaning of their own go with
/// the next that has one, and neighbours of one meaning belong together.
fn gathered(words: Vec<Heading>) -> Vec<Heading> {
    let mut names: Vec<Heading> = Vec::new();
    let mut loose = String::new();
    for word in words {
        let text = format!("{loose}{}", word.text);
        match names.last_mut() {
            Some(last) if word.role.is_some() && word.role == last.role && loose.is_empty() => {
                *last = heading(&format!("{} {text}", last.text));
            }
            _ if word.role.is_none() => {
                loose = format!("{text} ");
                continue;
            }
            _ => names.push(heading(&text)),
        }
        loose.clear();
    }
    names
}

//! A whole table: text in, points and a report of every decision out.

use super::cell::Cell;
use super::choices::Choices;
use super::columns::{Columns, Known, Used};
use super::coverage::coverage;
use super::layout::{headings, layout};
use super::mark::{Decision, decided};
use super::names::{Delimiter, Role, Unit};
use super::points::{Notes, Point, RowReader};
use super::reading::{BadRow, Column, Reading};
use super::rows::{Row, excerpt, named_delimiter, rows, sniffed_delimiter};
use super::words::Heading;
use crate::bench::meter::CertificateForm;
use crate::fault::{Allowed, Code, Fault, Faults};
use crate::tree::Tree;

/// A table as read, before it is called a certificate or a curve.
pub(super) struct Table {
    pub(super) form: CertificateForm,
    pub(super) coverage_factor: Option<f64>,
    pub(super) points: Vec<Point>,
    pub(super) reading: Reading,
}

/// Reads a table of one of `forms`, the first of which is assumed where nothing else is said.
pub(super) fn read(text: &str, choices: &Choices, forms: &[CertificateForm]) -> Result<Table, Faults> {
    let text = text.strip_prefix('\u{feff}').unwrap_or(text);
    let text = if text.contains('\r') { &text.replace("\r\n", "\n").replace('\r', "\n") } else { text };
    if text.trim().is_empty() {
        return Err(vec![Fault::missing("", "A table is needed; the text is empty.")]);
    }
    let mut said = Vec::new();
    let named = named_delimiter(text);
    let delimiter = choices.delimiter.or(named).unwrap_or_else(|| sniffed_delimiter(text));
    let (rows, unclosed) = rows(text, delimiter);
    if unclosed {
        said.push(
            "A quotation mark is never closed; quotation marks were read as plain characters.".to_owned(),
        );
    }
    // The line that names the delimiter is no row of the table.
    let rows = rows.get(usize::from(named.is_some())..).unwrap_or_default();
    let layout = layout(rows, choices.first_row);
    let below = rows.get(layout.start..).unwrap_or_default();
    if below.is_empty() {
        return Err(vec![no_rows(text, rows, choices.first_row)]);
    }
    let width = below.iter().map(Row::width).max().unwrap_or(0);
    let headings = headings(rows, layout, width, delimiter);
    let columns = Known {
        headings: &headings,
        numeric: &numeric(below, headings.len()),
        cell_units: &cell_units(below, headings.len()),
        has_header: layout.header.is_some(),
        choices,
        forms,
    }
    .columns(&mut said)?;

    let places: Vec<usize> = columns.used().map(|used| used.index).collect();
    let (mark, about_mark) = match choices.decimal_mark {
        Some(mark) => (mark, None),
        None => match decided(below, &places, delimiter, layout.header.is_some()) {
            Decision::Clear(mark, sentence) => (mark, sentence),
            Decision::Open(sentence) => {
                return Err(vec![Fault::new("", Code::Unreadable, excerpt(text).as_str().into(), &sentence)]);
            }
        },
    };
    said.extend(about_mark);

    // A row that is longer than its header where commas part the cells: were they decimal commas?
    let most_cells = (delimiter == Delimiter::Comma && layout.header.is_some())
        .then(|| layout.header.and_then(|at| rows.get(at)).map_or(width, Row::width));
    let reader = RowReader { columns: &columns, mark, most_cells };
    let (mut points, mut bad_rows, mut notes) =
        (Vec::with_capacity(below.len()), Vec::new(), Notes::default());
    for row in below.iter().filter(|row| !row.is_remark()) {
        match reader.point(row, &mut notes) {
            Ok(point) => points.push(point),
            Err(sentence) => bad_rows.push(BadRow { line: row.line, text: row.excerpt(), sentence }),
        }
    }
    put_in_order(&mut points, &mut bad_rows, rows, &mut notes);
    if points.is_empty() {
        return Err(vec![no_good_row(text, &bad_rows)]);
    }
    notes.say(&columns, mark, &mut said);
    let coverage_factor = coverage(rows, layout, &headings, &columns, &bad_rows, &mut said);
    let hollow = |c: char| c.is_whitespace() || ",;\"".contains(c);
    let empty = text.lines().filter(|line| line.chars().all(hollow)).count();
    let remarks = below.iter().filter(|row| row.is_remark()).count();
    let before = layout.start - usize::from(layout.header.is_some());
    let skipped_lines = usize::from(named.is_some()) + empty + remarks + before;
    let reading = Reading {
        delimiter,
        decimal_mark: mark,
        skipped_lines,
        header_line: layout.header.and_then(|at| rows.get(at)).map(|row| row.line),
        columns: columns.reported(&headings),
        rows_read: points.len(),
        bad_rows,
        cleaned: said,
    };
    Ok(Table { form: columns.form, coverage_factor, points, reading })
}

impl Columns {
    fn used(&self) -> impl Iterator<Item = Used> {
        [Some(self.wavelength), Some(self.value), self.expanded].into_iter().flatten()
    }

    fn reported(&self, headings: &[Heading]) -> Vec<Column> {
        let report = |(index, heading): (usize, &Heading)| {
            let (role, unit) = if self.wavelength.index == index {
                (Role::Wavelength, Some(self.wavelength.unit))
            } else if self.value.index == index {
                (self.value_role, Some(self.value.unit))
            } else if let Some(expanded) = self.expanded.filter(|expanded| expanded.index == index) {
                (Role::Expanded, Some(expanded.unit))
            } else {
                (Role::Ignored, heading.unit)
            };
            Column { index, header: heading.text.clone(), role, unit }
        };
        headings.iter().enumerate().map(report).collect()
    }
}

/// Sorts by wavelength; of several rows of one wavelength the first in the text stays.
fn put_in_order(points: &mut Vec<Point>, bad_rows: &mut Vec<BadRow>, rows: &[Row], notes: &mut Notes) {
    notes.unsorted = !points.is_sorted_by(|one, next| one.wavelength_nm <= next.wavelength_nm);
    points.sort_by(|one, next| one.wavelength_nm.total_cmp(&next.wavelength_nm));
    let mut last: Option<Point> = None;
    points.retain(|point| match last {
        Some(first) if first.wavelength_nm == point.wavelength_nm => {
            let at = rows.binary_search_by_key(&point.line, |row| row.line);
            let text = at.ok().and_then(|at| rows.get(at)).map(Row::excerpt).unwrap_or_default();
            let sentence = format!(
                "The wavelength {} nm stands on line {} already; the first one was kept.",
                point.wavelength_nm, first.line
            );
            bad_rows.push(BadRow { line: point.line, text, sentence });
            false
        }
        _ => {
            last = Some(*point);
            true
        }
    });
    bad_rows.sort_by_key(|row| row.line);
}

/// Which columns hold numbers, judged by the first rows.
fn numeric(below: &[Row], width: usize) -> Vec<bool> {
    let first: Vec<&Row> = below.iter().filter(|row| row.numbers() > 0).take(20).collect();
    (0..width)
        .map(|index| {
            let numbers = first.iter().filter(|row| super::cell::is_number(row.cell(index))).count();
            numbers > 0 && numbers * 2 >= first.len()
        })
        .collect()
}

/// The unit behind the first number of each column.
fn cell_units(below: &[Row], width: usize) -> Vec<Option<Unit>> {
    let first = |index| below.iter().take(20).find_map(|row| Cell::cut(row.cell(index)));
    (0..width).map(|index| first(index).and_then(|cell| cell.unit)).collect()
}

fn no_rows(text: &str, rows: &[Row], first_row: Option<usize>) -> Fault {
    match (first_row, rows.last()) {
        (Some(first_row), Some(last)) => {
            let sentence = format!(
                "The first row must not come after the last line, {}; {first_row} was given.",
                last.line
            );
            let mut fault =
                Fault::new("/choices/first_row", Code::Range, Tree::Number(first_row as f64), &sentence);
            let max = Some(last.line as f64);
            fault.allowed = Some(Allowed::Between { min: Some(1.0), max, unit: "1".to_owned() });
            fault
        }
        _ => Fault::new(
            "",
            Code::Unreadable,
            excerpt(text).as_str().into(),
            "A table must have rows with a wavelength and a value; none was found.",
        ),
    }
}

fn no_good_row(text: &str, bad_rows: &[BadRow]) -> Fault {
    let why = bad_rows.first().map_or(String::new(), |row| format!(" Line {}: {}", row.line, row.sentence));
    let sentence = format!("At least one row must hold a wavelength and a value; none does.{why}");
    Fault::new("", Code::Unreadable, excerpt(text).as_str().into(), &sentence)
}

//! The head of a log: how the file is cut, what its columns hold, and where the rows begin.

use super::choices::LogChoices;
use super::columns::{LogColumns, columns};
use super::instant::is_time;
use super::preamble::setting_nm;
use crate::fault::{Code, Fault, Faults};
use crate::record::mark::{Decision, decided_by};
use crate::record::names::{DecimalMark, Delimiter, Role};
use crate::record::reading::{BadRow, Column, Reading};
use crate::record::rows::{Row, excerpt, named_delimiter, rows, sniffed_by};
use crate::record::sheet::{amount, heading, is_units, normal};

/// Everything that is decided before the first row is read.
pub(super) struct Head {
    pub(super) delimiter: Delimiter,
    pub(super) mark: DecimalMark,
    pub(super) columns: LogColumns,
    /// The line of the first row, counted from 1.
    pub(super) start_line: usize,
    /// The most cells that a row may have.
    pub(super) most_cells: Option<usize>,
    /// The wavelength to which the meter was set, as a line above the table names it, nm.
    pub(super) setting_nm: Option<f64>,
    headings: Vec<String>,
    header_line: Option<usize>,
    /// Lines above the first row that are no header.
    skipped_lines: usize,
    pub(super) said: Vec<String>,
    /// What must be chosen before the log can be read.
    pub(super) faults: Faults,
}

/// The character that ends lines: old files have a carriage return alone.
pub(super) fn newline(bytes: &[u8]) -> u8 {
    match memchr::memchr2(b'\n', b'\r', bytes) {
        Some(at) if bytes.get(at) == Some(&b'\r') && bytes.get(at + 1) != Some(&b'\n') => b'\r',
        _ => b'\n',
    }
}

/// A cell such as rows of a log have.
fn is_value(cell: &str) -> bool {
    amount(cell).is_some() || is_time(cell)
}

impl Head {
    /// Understands the first lines of a log.
    pub(super) fn of(text: &str, choices: &LogChoices) -> Result<Head, Faults> {
        let text = normal(text);
        if text.trim().is_empty() {
            return Err(vec![Fault::missing("", "A log is needed; the text is empty.")]);
        }
        let named = named_delimiter(&text);
        let delimiter = choices.table.delimiter.or(named).unwrap_or_else(|| sniffed_by(&text, is_value));
        let (mut rows, _) = rows(&text, delimiter);
        if named.is_some() && !rows.is_empty() {
            rows.remove(0);
        }
        let start = start(&rows, choices.table.first_row);
        let Some(first) = rows.get(start) else {
            let sentence = "A log must have rows with readings; none was found.";
            return Err(vec![Fault::new("", Code::Unreadable, excerpt(&text).as_str().into(), sentence)]);
        };
        let header = header(&rows, start);
        let below: Vec<&Row> = rows.iter().skip(start).filter(|row| !row.is_remark()).collect();
        let width = rows.iter().skip(header.unwrap_or(start)).map(Row::width).max().unwrap_or(0);
        let headings: Vec<String> = (0..width).map(|index| heading(&rows, start, header, index)).collect();
        let (mut said, mut faults) = (Vec::new(), Faults::new());
        let columns = columns(&headings, &below, header.is_some(), choices, &mut said, &mut faults);
        let above = rows.iter().take(header.unwrap_or(start));
        let mut head = Head {
            delimiter,
            mark: DecimalMark::Point,
            start_line: first.line,
            most_cells: header.and_then(|at| rows.get(at)).map(Row::width),
            setting_nm: above.map(|row| row.text).find_map(setting_nm),
            headings,
            header_line: header.and_then(|at| rows.get(at)).map(|row| row.line),
            skipped_lines: first.line - 1 - usize::from(header.is_some()),
            columns,
            said,
            faults,
        };
        head.decide_mark(&text, &below, choices);
        Ok(head)
    }

    fn decide_mark(&mut self, text: &str, rows: &[&Row], choices: &LogChoices) {
        if let Some(mark) = choices.table.decimal_mark {
            self.mark = mark;
            return;
        }
        let numeric = [Role::Power, Role::Wavelength, Role::Time];
        let places: Vec<usize> = numeric.iter().filter_map(|role| self.columns.index(*role)).collect();
        let cells: Vec<String> = rows
            .iter()
            .flat_map(|row| places.iter().map(|index| row.cell(*index)))
            .filter_map(|cell| Some(amount(cell)?.0))
            // An instrument writes its sign for "no reading" with a point, whatever the mark of the file.
            .filter(|cell| !cell.is_no_reading())
            .map(|cell| cell.number.into_owned())
            .collect();
        let three = rows.iter().any(|row| row.width() >= 3);
        let cells = cells.iter().map(String::as_str);
        match decided_by(cells, self.delimiter, self.columns.has_header, three) {
            Decision::Clear(mark, sentence) => {
                self.mark = mark;
                self.said.extend(sentence);
            }
            Decision::Open(_) if let Some(mark) = self.mark_of_times(rows) => {
                self.mark = mark;
                let name = mark.name();
                self.said.push(format!("The decimal mark of the numbers is the {name}, as in the times."));
            }
            Decision::Open(sentence) => {
                self.faults.push(Fault::new("", Code::Unreadable, excerpt(text).as_str().into(), &sentence));
            }
        }
    }

    /// The mark before the fraction of a second, where times of the day have one.
    fn mark_of_times(&self, rows: &[&Row]) -> Option<DecimalMark> {
        let index = self.columns.index(Role::Time)?;
        let cells = || rows.iter().map(|row| row.cell(index)).filter(|cell| cell.contains(':'));
        let has = |mark: DecimalMark| cells().any(|cell| cell.contains(mark.character()));
        match (has(DecimalMark::Point), has(DecimalMark::Comma)) {
            (true, false) => Some(DecimalMark::Point),
            (false, true) => Some(DecimalMark::Comma),
            _ => None,
        }
    }

    /// How the table was understood.
    pub(super) fn reading(&self, rows_read: usize, passed_over: usize, bad_rows: Vec<BadRow>) -> Reading {
        let report = |(index, header): (usize, &String)| {
            let (role, unit) = self.columns.roles.get(index).copied().unwrap_or((Role::Ignored, None));
            Column { index, header: header.clone(), role, unit }
        };
        Reading {
            delimiter: self.delimiter,
            decimal_mark: self.mark,
            skipped_lines: self.skipped_lines + passed_over,
            header_line: self.header_line,
            columns: self.headings.iter().enumerate().map(report).collect(),
            rows_read,
            bad_rows,
            cleaned: self.said.clone(),
        }
    }
}

/// The first row of readings.
fn start(rows: &[Row], first_row: Option<usize>) -> usize {
    if let Some(first_row) = first_row {
        return rows.iter().position(|row| row.line >= first_row).unwrap_or(rows.len());
    }
    let values = |row: &Row| row.cells().filter(|cell| is_value(cell)).count();
    let begins = |row: &Row| row.cells().find(|cell| !cell.is_empty()).is_some_and(is_value);
    let at = |test: &dyn Fn(&Row) -> bool| rows.iter().position(|row| !row.is_remark() && test(row));
    // A row that begins with a value and has another; the row below one of names; any row that begins with a value; any
    // row that has one.
    let Some(found) = at(&|row| begins(row) && values(row) >= 2)
        .or_else(|| at(&|row| values(row) == 0 && names_power(row)).map(|at| at + 1))
        .or_else(|| at(&begins))
        .or_else(|| at(&|row| values(row) > 0))
    else {
        return rows.len();
    };
    // The first rows may lack their reading.
    let like = |row: &Row, next: &Row| {
        !row.is_remark() && begins(row) && row.cells().count() == next.cells().count()
    };
    let above = rows.get(..found).unwrap_or_default().iter().rev();
    let next = rows.get(found);
    found
        - above.take_while(|row| next.is_some_and(|next| next.cells().count() > 1 && like(row, next))).count()
}

/// Whether a row names a column of readings and another one.
fn names_power(row: &Row) -> bool {
    use crate::record::sheet::unit_in;
    let names = |cell: &str| unit_in(cell).is_some_and(|unit| Role::Power.units().contains(&unit));
    row.cells().filter(|cell| !cell.is_empty()).count() >= 2 && row.cells().any(names)
}

/// The row of names above the first row of readings.
fn header(rows: &[Row], start: usize) -> Option<usize> {
    let above = start.checked_sub(1)?;
    let row = rows.get(above)?;
    let texts = row.cells().filter(|cell| !cell.is_empty()).count();
    let as_wide = rows.get(start).is_some_and(|first| texts >= 2 || first.width() <= 1);
    let named = !row.is_remark() && as_wide && texts > 0 && !row.cells().any(is_value);
    if named && is_units(row) {
        return header(rows, above).or(Some(above));
    }
    named.then_some(above)
}

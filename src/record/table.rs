//! A whole table: text in, points and a report of every decision out.

use super::cell::{Cell, NO_READING, Unread};
use super::choices::Choices;
use super::columns::{Columns, Known, Used};
use super::layout::{Layout, headings, layout};
use super::mark::{Decision, decided};
use super::names::{DecimalMark, Delimiter, Role, Unit};
use super::reading::{BadRow, Column, Reading};
use super::rows::{Row, excerpt, named_delimiter, rows, sniffed_delimiter};
use super::words::{Heading, coverage_factor, is_coverage, is_standard_uncertainty};
use crate::bench::meter::CertificateForm;
use crate::fault::{Allowed, Code, Fault, Faults};
use crate::tree::Tree;
use libm::pow;

/// The wavelengths that a table may hold, in nm: all that silicon, germanium and indium gallium arsenide
/// detectors see.
const WAVELENGTHS_NM: std::ops::RangeInclusive<f64> = 200.0..=2500.0;
/// The correction factors that a table may hold. Beyond them the column is something else, such as per cent
/// without a sign.
const CORRECTION_FACTORS: std::ops::RangeInclusive<f64> = 0.1..=10.0;

/// A table as read, before it is called a certificate or a curve.
pub(super) struct Table {
    pub(super) form: CertificateForm,
    pub(super) coverage_factor: Option<f64>,
    pub(super) points: Vec<Point>,
    pub(super) reading: Reading,
}

/// One good row.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Point {
    pub(super) line: usize,
    pub(super) wavelength_nm: f64,
    pub(super) value: f64,
    pub(super) expanded_percent: Option<f64>,
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

/// What happened in single cells, counted, to be said once.
#[derive(Default)]
struct Notes {
    spaces: usize,
    minus: usize,
    thousands: usize,
    without_uncertainty: usize,
    extra_cells: usize,
    unsorted: bool,
}

impl Notes {
    fn say(&self, columns: &Columns, mark: DecimalMark, said: &mut Vec<String>) {
        let mut counted = |count: usize, what: &str| {
            if count > 0 {
                said.push(format!("{what} ({count} {}).", if count == 1 { "cell" } else { "cells" }));
            }
        };
        counted(self.spaces, "Non-breaking or thin spaces inside numbers were removed");
        counted(self.minus, "The minus sign U+2212 was read as minus");
        let group = if mark == DecimalMark::Point { "Commas" } else { "Points" };
        counted(self.thousands, &format!("{group} that part thousands were removed"));
        if columns.expanded.is_some() {
            counted(self.without_uncertainty, "Rows without an uncertainty were read without one");
        }
        counted(self.extra_cells, "Cells beyond the last column of the header were not read");
        if self.unsorted {
            said.push("The rows were put in the order of their wavelengths.".to_owned());
        }
        let value = match (columns.value_role, columns.value.unit) {
            (_, Unit::MilliamperePerWatt) => "mA/W was converted to A/W.",
            (Role::CorrectionFactor, Unit::Percent) => {
                "Correction factors in % were divided by 100: 101.2 % is a factor of 1.012."
            }
            (Role::CorrectionFactor, Unit::Decibel) => "Corrections c in dB became factors, 10^(c/10).",
            (Role::Deviation, Unit::Percent) => {
                "The deviation d is (indicated − true)/true in %, so the correction factor is 1/(1 + d/100)."
            }
            (Role::Deviation, Unit::Decibel) => {
                "The deviation d is indicated over true power in dB, so the correction factor is 10^(−d/10)."
            }
            _ => "",
        };
        let wavelength = match columns.wavelength.unit {
            Unit::Micrometre => "µm was converted to nm.",
            _ => "",
        };
        let expanded = match columns.expanded.map(|expanded| expanded.unit) {
            Some(Unit::Decibel) => "U in dB was converted to per cent, (10^(U/10) − 1)·100.",
            Some(Unit::AmperePerWatt | Unit::MilliamperePerWatt | Unit::One) => {
                "U in the unit of the value was converted to per cent of the value."
            }
            Some(Unit::Percent) if columns.value_role == Role::Deviation => {
                "U in % was taken as relative to the power."
            }
            _ => "",
        };
        said.extend([wavelength, value, expanded].into_iter().filter(|s| !s.is_empty()).map(str::to_owned));
    }
}

/// Reads rows, given what each column holds.
struct RowReader<'a> {
    columns: &'a Columns,
    mark: DecimalMark,
    most_cells: Option<usize>,
}

impl RowReader<'_> {
    fn point(&self, row: &Row, notes: &mut Notes) -> Result<Point, String> {
        if let Some(most) = self.most_cells.filter(|most| row.width() > *most) {
            if (most..row.width()).any(|index| super::cell::is_number(row.cell(index))) {
                return Err(format!(
                    "The row must have at most {most} cells, as the header; it has {}. If its commas are decimal \
                     commas, the cells must be parted by something else.",
                    row.width()
                ));
            }
            notes.extra_cells += row.width() - most;
        }
        let (wavelength, value) = (self.columns.wavelength, self.columns.value);
        let (wavelength_nm, _) = self.number(row, wavelength, "wavelength", notes)?;
        if !WAVELENGTHS_NM.contains(&wavelength_nm) {
            return Err(format!(
                "The wavelength must lie between {} nm and {} nm; it is {wavelength_nm} nm.",
                WAVELENGTHS_NM.start(),
                WAVELENGTHS_NM.end()
            ));
        }
        let value = self.value(row, value, notes)?;
        let expanded_percent = match self.columns.expanded {
            Some(expanded) if !is_blank(row.cell(expanded.index)) => {
                Some(self.expanded_percent(row, expanded, value, notes)?)
            }
            _ => {
                notes.without_uncertainty += 1;
                None
            }
        };
        Ok(Point { line: row.line, wavelength_nm, value, expanded_percent })
    }

    /// The responsivity in A/W, or the correction factor.
    fn value(&self, row: &Row, used: Used, notes: &mut Notes) -> Result<f64, String> {
        let (name, factor): (_, fn(f64, Unit) -> f64) = match self.columns.value_role {
            Role::Deviation => ("deviation", |d, unit| match unit {
                Unit::Decibel => pow(10.0, -d / 10.0),
                _ => 1.0 / (1.0 + d / 100.0),
            }),
            Role::CorrectionFactor => ("correction factor", |c, unit| match unit {
                Unit::Decibel => pow(10.0, c / 10.0),
                _ => c,
            }),
            _ => ("responsivity", |r, _| r),
        };
        let (number, unit) = self.number(row, used, name, notes)?;
        let value = factor(number, unit);
        if self.columns.form == CertificateForm::CorrectionFactor && !CORRECTION_FACTORS.contains(&value) {
            return Err(format!(
                "The correction factor must lie between {} and {}; the {name} \"{}\" gives another.",
                CORRECTION_FACTORS.start(),
                CORRECTION_FACTORS.end(),
                excerpt(row.cell(used.index))
            ));
        }
        if value > 0.0 {
            Ok(value)
        } else {
            Err(format!("The {name} must be greater than 0; it is {number}."))
        }
    }

    /// The expanded uncertainty in per cent of the value.
    fn expanded_percent(&self, row: &Row, used: Used, value: f64, notes: &mut Notes) -> Result<f64, String> {
        let (number, unit) = self.number(row, used, "uncertainty", notes)?;
        let percent = match unit {
            Unit::Decibel => (pow(10.0, number / 10.0) - 1.0) * 100.0,
            Unit::Percent => number,
            _ => number / value * 100.0,
        };
        if number >= 0.0 && percent <= 100.0 {
            return Ok(percent);
        }
        let given = excerpt(row.cell(used.index));
        Err(format!("The uncertainty must lie between 0 % and 100 % of the value; \"{given}\" was given."))
    }

    /// The number of a cell in nm, A/W, 1, % or dB, and the unit that was converted from.
    fn number(&self, row: &Row, used: Used, name: &str, notes: &mut Notes) -> Result<(f64, Unit), String> {
        let text = row.cell(used.index);
        if is_blank(text) {
            return Err(format!("The {name} is missing."));
        }
        let plain = if name == "uncertainty" { text.trim_start_matches('±') } else { text };
        let no_number = || format!("The {name} must be a number; \"{}\" is none.", excerpt(text));
        let cell = Cell::cut(plain).ok_or_else(no_number)?;
        let unit = cell.unit.filter(|_| used.cells_may_differ).unwrap_or(used.unit);
        let role = match name {
            "wavelength" => Role::Wavelength,
            "uncertainty" => Role::Expanded,
            _ => self.columns.value_role,
        };
        if !role.units().contains(&unit) {
            return Err(format!("The {name} cannot be in {}; \"{}\" was given.", unit.name(), excerpt(text)));
        }
        let shift = match unit {
            Unit::Micrometre => 3,
            Unit::MilliamperePerWatt => -3,
            Unit::Percent if role == Role::CorrectionFactor => -2,
            _ => 0,
        };
        let value = cell.value(self.mark, shift).map_err(|unread| match unread {
            Unread::NoNumber => no_number(),
            Unread::OtherMark => format!(
                "The {name} \"{}\" does not fit the decimal {} of this table.",
                excerpt(text),
                self.mark.name()
            ),
        })?;
        if value.abs() >= NO_READING {
            return Err(format!(
                "The {name} \"{}\" is an instrument's sign for \"no reading\".",
                excerpt(text)
            ));
        }
        notes.spaces += usize::from(cell.spaces);
        notes.minus += usize::from(cell.minus);
        notes.thousands += usize::from(cell.has_thousands(self.mark));
        Ok((value, unit))
    }
}

/// Whether a cell stands for "nothing here".
fn is_blank(cell: &str) -> bool {
    matches!(cell.trim_matches(['\u{a0}', ' ']), "" | "-" | "–" | "—" | "n/a" | "N/A" | "NaN" | "nan")
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

/// The coverage factor, from wherever it is stated; `None` when it is not, or not once.
fn coverage(
    rows: &[Row],
    layout: Layout,
    headings: &[Heading],
    columns: &Columns,
    bad_rows: &[BadRow],
    said: &mut Vec<String>,
) -> Option<f64> {
    let expanded = columns.expanded.and_then(|expanded| headings.get(expanded.index));
    if expanded.is_some_and(|heading| is_standard_uncertainty(&heading.text)) {
        said.push("The uncertainty is a standard uncertainty; its coverage factor is 1.".to_owned());
        return Some(1.0);
    }
    let mut found: Vec<(f64, usize)> = Vec::new();
    for (at, row) in rows.iter().enumerate().filter(|(at, row)| *at < layout.start || row.is_remark()) {
        if Some(at) == layout.header {
            found.extend(headings.iter().filter_map(|h| coverage_factor(&h.text)).map(|k| (k, row.line)));
        } else {
            found.extend(coverage_factor(row.text).map(|k| (k, row.line)));
        }
    }
    found.extend(bad_rows.iter().filter_map(|row| Some((coverage_factor(&row.text)?, row.line))));
    // A column of its own, the same on every row.
    if let Some(column) = headings.iter().position(|heading| is_coverage(&heading.text)) {
        let below = rows.get(layout.start..).unwrap_or_default().iter();
        found.extend(
            below.filter_map(|row| Some((coverage_factor(&format!("k={}", row.cell(column)))?, row.line))),
        );
    }
    let (k, line) = found.first().copied()?;
    match found.iter().find(|(other, _)| *other != k) {
        None => {
            said.push(format!("The coverage factor k = {k} was read from line {line}."));
            Some(k)
        }
        Some((other, other_line)) => {
            said.push(format!(
                "Two coverage factors are stated, {k} on line {line} and {other} on line {other_line}; none was \
                 taken."
            ));
            None
        }
    }
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

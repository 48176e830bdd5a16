//! A table whose columns are told by words of one's own: a spectrum, the readings of a calibration.
//!
//! The steps are those of a certificate's table, and the same pieces do them; what differs is which columns there
//! are. Nothing is decided by how plausible a value looks.

use super::cell::{Cell, Unread};
use super::choices::Choices;
use super::mark::{Decision, decided_by};
use super::names::{DecimalMark, Delimiter, Role, Unit};
use super::reading::{BadRow, Column, Reading};
use super::rows::{Row, excerpt, named_delimiter, rows, sniffed_by};
use super::words::{WAVELENGTH, folded, has};
use crate::fault::{Code, Fault, Faults};

/// What a kind of table looks like.
pub(super) struct Kind {
    /// What one is called in a sentence.
    pub(super) name: &'static str,
    /// The words by which a header names its columns, the more telling first.
    pub(super) words: &'static [(Role, &'static [&'static str])],
    /// The columns that must be there, in the order in which they stand where no header names them.
    pub(super) needed: &'static [Role],
}

/// A column that is read.
#[derive(Debug, Clone, Copy)]
pub(super) struct Placed {
    pub(super) role: Role,
    pub(super) index: usize,
    /// The unit of its numbers, where one is known.
    pub(super) unit: Option<Unit>,
}

/// A table cut into rows, with its columns found.
pub(super) struct Sheet<'t> {
    rows: Vec<Row<'t>>,
    start: usize,
    header: Option<usize>,
    headings: Vec<String>,
    columns: Vec<Placed>,
    delimiter: Delimiter,
    mark: DecimalMark,
    skipped_lines: usize,
    /// What was assumed or converted, one sentence each.
    pub(super) said: Vec<String>,
}

/// A cell cut into its number and the unit behind it; nothing where it is no number.
pub(super) fn amount(text: &str) -> Option<(Cell<'_>, Option<Unit>)> {
    let text = text.trim();
    let (last, character) =
        text.char_indices().rev().find(|(_, c)| c.is_ascii_digit() || matches!(c, '.' | ','))?;
    let (number, behind) = text.split_at(last + character.len_utf8());
    let unit = match behind.trim() {
        "" => None,
        behind => Some(Unit::written(behind).or_else(|| Unit::written_of_power(behind))?),
    };
    Some((Cell::cut(number).filter(|cell| cell.unit.is_none())?, unit))
}

fn is_amount(text: &str) -> bool {
    amount(text).is_some()
}

/// The text with one kind of line end and without a byte order mark.
pub(super) fn normal(text: &str) -> String {
    text.strip_prefix('\u{feff}').unwrap_or(text).replace("\r\n", "\n").replace('\r', "\n")
}

impl<'t> Sheet<'t> {
    /// Cuts a [`normal`] text.
    pub(super) fn open(text: &'t str, choices: &Choices, kind: &Kind) -> Result<Sheet<'t>, Faults> {
        let (sheet, faults) = Sheet::cut(text, choices, kind)?;
        if faults.is_empty() { Ok(sheet) } else { Err(faults) }
    }

    /// How a text is understood as far as that goes, for a person to choose what cannot be told from it: nothing where
    /// it has no rows of numbers.
    pub(super) fn layout(text: &str, choices: &Choices, kind: &Kind) -> Option<Reading> {
        let text = normal(text);
        Sheet::cut(&text, choices, kind).ok().map(|(sheet, _)| sheet.reading(0, Vec::new()))
    }

    /// Cuts a text into rows and finds what it can of the columns, with what is wrong or wanting.
    fn cut(text: &'t str, choices: &Choices, kind: &Kind) -> Result<(Sheet<'t>, Faults), Faults> {
        if text.trim().is_empty() {
            let sentence = format!("{} is needed; the text is empty.", kind.name);
            return Err(vec![Fault::missing("", &sentence)]);
        }
        let mut said = Vec::new();
        let named = named_delimiter(text);
        let delimiter = choices.delimiter.or(named).unwrap_or_else(|| sniffed_by(text, is_amount));
        let (mut rows, unclosed) = rows(text, delimiter);
        if unclosed {
            said.push(
                "A quotation mark is never closed; quotation marks were read as plain characters.".to_owned(),
            );
        }
        if named.is_some() && !rows.is_empty() {
            rows.remove(0);
        }
        let start = start(&rows, choices.first_row);
        let header = header(&rows, start);
        let width = rows.iter().skip(header.unwrap_or(start)).map(Row::width).max().unwrap_or(0);
        if start >= rows.len() {
            let sentence = format!("{} must have rows with numbers; none was found.", kind.name);
            return Err(vec![Fault::new("", Code::Unreadable, excerpt(text).as_str().into(), &sentence)]);
        }
        let headings = (0..width).map(|index| heading(&rows, start, header, index)).collect();
        let below = rows.iter().skip(start).filter(|row| row.is_remark()).count();
        let empty = text.lines().filter(|line| line.trim().is_empty()).count();
        let skipped_lines =
            empty + below + start - usize::from(header.is_some()) + usize::from(named.is_some());
        let mut sheet = Sheet {
            rows,
            start,
            header,
            headings,
            columns: Vec::new(),
            delimiter,
            mark: DecimalMark::Point,
            skipped_lines,
            said,
        };
        let (columns, mut faults) = sheet.placed(choices, kind);
        sheet.columns = columns;
        match sheet.decided_mark(text, choices) {
            Ok(mark) => sheet.mark = mark,
            Err(open) => faults.extend(open),
        }
        Ok((sheet, faults))
    }

    /// The rows below the header that are no remarks.
    pub(super) fn rows(&self) -> impl Iterator<Item = &Row<'t>> {
        self.rows.iter().skip(self.start).filter(|row| !row.is_remark())
    }

    /// Whether a header names the columns.
    pub(super) fn has_header(&self) -> bool {
        self.header.is_some()
    }

    /// The column of a role.
    pub(super) fn column(&self, role: Role) -> Option<Placed> {
        self.columns.iter().find(|column| column.role == role).copied()
    }

    /// The number of a cell in nm, W, W/nm, s, V or as a level, with the unit that it was in; a sentence where it is none.
    pub(super) fn number(&self, row: &Row, column: Placed, name: &str) -> Result<(f64, Unit), String> {
        let text = row.cell(column.index);
        if text.is_empty() {
            return Err(format!("The {name} is missing."));
        }
        let no_number = || format!("The {name} must be a number; \"{}\" is none.", excerpt(text));
        let (cell, behind) = amount(text).ok_or_else(no_number)?;
        let Some(unit) = behind.or(column.unit) else {
            return Err(format!("The {name} has no unit; neither the cell nor the header names one."));
        };
        if !column.role.units().contains(&unit) {
            return Err(format!("The {name} cannot be in {}; \"{}\" was given.", unit.name(), excerpt(text)));
        }
        if cell.is_no_reading() {
            return Err(format!(
                "The {name} \"{}\" is an instrument's sign for \"no reading\".",
                excerpt(text)
            ));
        }
        let value = cell.value(self.mark, unit.power_of_ten()).map_err(|unread| match unread {
            Unread::NoNumber => no_number(),
            Unread::OtherMark => format!(
                "The {name} \"{}\" does not fit the decimal {} of this table.",
                excerpt(text),
                self.mark.name()
            ),
        })?;
        Ok((value * unit.factor(), unit))
    }

    /// How the table was understood.
    pub(super) fn reading(&self, rows_read: usize, bad_rows: Vec<BadRow>) -> Reading {
        let report = |(index, header): (usize, &String)| {
            let placed = self.columns.iter().find(|column| column.index == index);
            let (role, unit) = placed.map_or((Role::Ignored, None), |column| (column.role, column.unit));
            Column { index, header: header.clone(), role, unit }
        };
        Reading {
            delimiter: self.delimiter,
            decimal_mark: self.mark,
            skipped_lines: self.skipped_lines,
            header_line: self.header.and_then(|at| self.rows.get(at)).map(|row| row.line),
            columns: self.headings.iter().enumerate().map(report).collect(),
            rows_read,
            bad_rows,
            cleaned: self.said.clone(),
        }
    }

    /// Finds the columns: by choice, by the words of the header, else by their order.
    fn placed(&mut self, choices: &Choices, kind: &Kind) -> (Vec<Placed>, Faults) {
        let width = self.headings.len();
        let beyond = choices.columns.iter().enumerate().filter(|(_, choice)| choice.index >= width);
        let mut faults: Faults = beyond
            .map(|(at, choice)| {
                let sentence = format!(
                    "The index must be below {width}, the number of columns; {} was given.",
                    choice.index
                );
                let given = (choice.index as f64).into();
                Fault::new(&format!("/choices/columns/{at}/index"), Code::Range, given, &sentence)
            })
            .collect();
        let known = |role: Role| kind.words.iter().any(|(known, _)| *known == role);
        let mut roles: Vec<Option<Role>> = vec![None; width];
        for choice in &choices.columns {
            if let (Some(role), Some(slot)) = (choice.role, roles.get_mut(choice.index)) {
                *slot = Some(if known(role) { role } else { Role::Ignored });
            }
        }
        for (role, words) in kind.words {
            for (index, slot) in roles.clone().iter().enumerate().filter(|(_, slot)| slot.is_none()) {
                let taken = roles.contains(&Some(*role));
                if !taken && slot.is_none() && self.names(index, *role, words) {
                    roles[index] = Some(*role);
                }
            }
        }
        let mut missing = Vec::new();
        for role in kind.needed {
            if roles.contains(&Some(*role)) {
                continue;
            }
            match (0..width).find(|index| roles[*index].is_none() && self.holds(*index, *role)) {
                Some(index) => {
                    if self.header.is_some() {
                        let what = noun(*role);
                        self.said.push(format!("{} was taken for the {what}.", self.column_name(index)));
                    }
                    roles[index] = Some(*role);
                }
                None => missing.push(noun(*role)),
            }
        }
        if !missing.is_empty() {
            let sentence = format!(
                "{} needs a column of each kind; none was found for the {}: choose the columns.",
                kind.name,
                missing.join(" and the ")
            );
            faults.push(Fault::missing("", &sentence));
        }
        let placed = roles.iter().enumerate().filter_map(|(index, role)| {
            let role = role.filter(|role| *role != Role::Ignored)?;
            let chosen = choices.columns.iter().find(|choice| choice.index == index).and_then(|c| c.unit);
            let written = self.headings.get(index).and_then(|text| unit_in(text));
            let unit = chosen.or(written.filter(|unit| role.units().contains(unit)));
            Some(Placed { role, index, unit })
        });
        let mut columns: Vec<Placed> = placed.collect();
        for column in columns.iter_mut().filter(|column| column.unit.is_none()) {
            // A wavelength is in nm, a time in s, a voltage in V, a current in A and a temperature in °C where nothing else
            // is said, and a gain has no unit; of a power or a bandwidth nothing is assumed.
            column.unit = match column.role {
                Role::Wavelength => Some(Unit::Nanometre),
                Role::Time => Some(Unit::Second),
                Role::Voltage => Some(Unit::Volt),
                Role::Gain | Role::NoiseFactor => Some(Unit::One),
                Role::DarkCurrent | Role::Current => Some(Unit::Ampere),
                Role::Temperature => Some(Unit::Celsius),
                _ => None,
            };
        }
        (columns, faults)
    }

    fn names(&self, index: usize, role: Role, words: &[&str]) -> bool {
        let Some(text) = self.headings.get(index) else { return false };
        let plain = folded(text);
        let unit = unit_in(text);
        match role {
            // Their units do not tell them from the value beside them.
            Role::DarkCurrent => has(&plain, words),
            Role::Standard => {
                // u is the symbol of the guides.
                let first = plain.split(|c: char| !c.is_alphanumeric()).next();
                has(&plain, words) || first == Some("u")
            }
            Role::Wavelength => {
                has(&plain, WAVELENGTH)
                    || has(&plain, words)
                    || matches!(unit, Some(Unit::Nanometre | Unit::Micrometre))
            }
            _ => {
                has(&plain, words)
                    || unit.is_some_and(|unit| unit != Unit::One && role.units().contains(&unit))
            }
        }
    }

    /// Whether most cells of a column could be of a role: texts for the detector, numbers for the others.
    fn holds(&self, index: usize, role: Role) -> bool {
        let cells: Vec<&str> =
            self.rows().take(20).map(|row| row.cell(index)).filter(|c| !c.is_empty()).collect();
        let numbers = cells.iter().filter(|cell| is_amount(cell)).count();
        match role {
            Role::Detector => !cells.is_empty() && numbers == 0,
            _ => numbers > 0 && numbers * 2 >= cells.len(),
        }
    }

    fn decided_mark(&mut self, text: &str, choices: &Choices) -> Result<DecimalMark, Faults> {
        if let Some(mark) = choices.decimal_mark {
            return Ok(mark);
        }
        let columns: Vec<Placed> =
            self.columns.iter().filter(|c| c.role != Role::Detector).copied().collect();
        let cells: Vec<String> = self
            .rows()
            .flat_map(|row| columns.iter().map(|column| row.cell(column.index)))
            .filter_map(|cell| Some(amount(cell)?.0.number.into_owned()))
            .collect();
        let three = self.rows().any(|row| row.width() >= 3);
        let decision =
            decided_by(cells.iter().map(String::as_str), self.delimiter, self.header.is_some(), three);
        match decision {
            Decision::Clear(mark, sentence) => {
                self.said.extend(sentence);
                Ok(mark)
            }
            Decision::Open(sentence) => {
                Err(vec![Fault::new("", Code::Unreadable, excerpt(text).as_str().into(), &sentence)])
            }
        }
    }

    fn column_name(&self, index: usize) -> String {
        match self.headings.get(index) {
            Some(text) if !text.is_empty() => format!("Column {} \"{}\"", index + 1, excerpt(text)),
            _ => format!("Column {}", index + 1),
        }
    }
}

/// The first row of numbers.
fn start(rows: &[Row], first_row: Option<usize>) -> usize {
    if let Some(first_row) = first_row {
        return rows.iter().position(|row| row.line >= first_row).unwrap_or(rows.len());
    }
    let begins = |row: &Row| !row.is_remark() && row.cells().filter(|cell| is_amount(cell)).count() >= 2;
    let number_first = |row: &Row| row.cells().find(|cell| !cell.is_empty()).is_some_and(is_amount);
    let plain = rows.iter().position(|row| begins(row) && number_first(row));
    plain.or_else(|| rows.iter().position(begins)).unwrap_or(rows.len())
}

/// The row of names above the first row of numbers.
fn header(rows: &[Row], start: usize) -> Option<usize> {
    let above = start.checked_sub(1)?;
    let row = rows.get(above)?;
    let texts = row.cells().filter(|cell| !cell.is_empty()).count();
    let numbers = row.cells().filter(|cell| is_amount(cell)).count();
    let named = !row.is_remark() && texts >= 2 && numbers == 0;
    if named && is_units(row) {
        return header(rows, above).or(Some(above));
    }
    named.then_some(above)
}

/// Whether a row holds nothing but units.
pub(super) fn is_units(row: &Row) -> bool {
    let bare = |cell: &str| cell.trim_matches(['(', ')', '[', ']']).to_owned();
    row.cells()
        .filter(|cell| !cell.is_empty())
        .map(bare)
        .all(|cell| Unit::written(&cell).or_else(|| Unit::written_of_power(&cell)).is_some())
}

/// The words above a column; a row of units below the names goes with them.
pub(super) fn heading(rows: &[Row], start: usize, header: Option<usize>, index: usize) -> String {
    let Some(header) = header else { return String::new() };
    let cell = |at: usize| rows.get(at).map_or("", |row| row.cell(index));
    let between = (header + 1..start).map(cell).find(|text| !text.is_empty());
    let name = cell(header).trim_start_matches('#').split_whitespace().collect::<Vec<_>>().join(" ");
    match between {
        Some(unit) => format!("{name} ({})", unit.trim_matches(['(', ')', '[', ']'])),
        None => name,
    }
}

/// The unit that a header names: in brackets, alone, or behind a slash, a comma, an underscore or a space.
pub(super) fn unit_in(text: &str) -> Option<Unit> {
    let written = |part: &str| {
        let part = part.trim_matches([' ', '(', ')', '[', ']', '{', '}']);
        let own = match part {
            "w_per_nm" => Some(Unit::WattPerNm),
            "dbm_per_nm" => Some(Unit::DbmPerNm),
            _ => None,
        };
        own.or_else(|| Unit::written(part)).or_else(|| Unit::written_of_power(part))
    };
    let bracket = |open: char, close: char| {
        let (_, behind) = text.split_once(open)?;
        written(behind.rsplit_once(close)?.0)
    };
    let behind = || {
        let separators = text.char_indices().filter(|(_, c)| " /,_".contains(*c));
        separators
            .map(|(at, c)| at + c.len_utf8())
            .find_map(|at| written(text.get(at..)?))
            // "Trace 1" is a name.
            .filter(|unit| *unit != Unit::One)
    };
    bracket('(', ')').or_else(|| bracket('[', ']')).or_else(|| written(text)).or_else(behind)
}

/// What a column of a role holds, for a sentence.
fn noun(role: Role) -> &'static str {
    match role {
        Role::Wavelength => "wavelength",
        Role::SpectralPower => "power per nm",
        Role::Detector => "detector",
        Role::Power => "reading",
        Role::Time => "time",
        Role::Voltage => "voltage",
        Role::Gain => "gain",
        Role::NoiseFactor => "excess noise factor",
        Role::DarkCurrent => "dark current",
        Role::Current => "current",
        Role::Bandwidth => "bandwidth",
        Role::Temperature => "temperature",
        _ => "value",
    }
}

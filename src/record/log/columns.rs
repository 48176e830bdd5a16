//! Which column of a log holds what.

use super::choices::LogChoices;
use super::instant::is_time;
use crate::fault::{Code, Fault, Faults};
use crate::record::date::is_date;
use crate::record::names::{Role, Unit};
use crate::record::rows::{Row, excerpt};
use crate::record::sheet::{amount, unit_in};
use crate::record::time::seconds;
use crate::record::words::{WAVELENGTH, folded, has};
use serde::Serialize;

/// How the times of a log are written.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum Times {
    /// ISO 8601 with a date.
    Iso,
    /// The time of the day alone.
    OfDay,
    /// A number of seconds, minutes or hours since some start.
    Elapsed,
    /// There are none that can be read: rows are numbered.
    None,
}

/// The words by which a header names its columns, the more telling first: an averaging time is no time of a row, and the
/// corrected power of a log that was written here is not its reading.
const WORDS: &[(Role, &[&str])] = &[
    (
        Role::Ignored,
        &["correct", "korrigi", "corrig", "corregid", "uncert", "unsicher", "incertid", "reason"],
    ),
    (
        Role::Ignored,
        &[
            "source", "laser", "quelle", "averag", "mittel", "moyenn", "promed", "integr", "temperat",
            "humid", "feucht",
        ],
    ),
    (Role::Status, &["status", "state", "flag", "overload", "valid", "quality", "zustand", "etat", "estado"]),
    (Role::PowerUnit, &["unit", "einheit", "unidad"]),
    (Role::Power, &["reading", "indicat", "anzeige", "messwert", "lecture", "lectura"]),
    (Role::Range, &["range", "bereich", "gamme", "calibre", "rango", "gain"]),
    (Role::Time, &["time", "zeit", "temps", "heure", "tiempo", "hora", "elapsed"]),
    (Role::Date, &["date", "datum", "fecha", "day"]),
    (Role::Wavelength, WAVELENGTH),
    (Role::Wavelength, &["wl", "setting", "einstellung", "reglage", "ajuste"]),
    (Role::Power, &["power", "level", "leistung", "pegel", "puissance", "niveau", "potencia", "nivel"]),
];

/// The columns that are read.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct LogColumns {
    pub(super) roles: Vec<(Role, Option<Unit>)>,
    pub(super) times: Times,
    pub(super) has_header: bool,
}

impl LogColumns {
    /// The place of a role.
    pub(super) fn index(&self, role: Role) -> Option<usize> {
        self.roles.iter().position(|(one, _)| *one == role)
    }

    /// The unit of a role's column.
    pub(super) fn unit(&self, role: Role) -> Option<Unit> {
        self.roles.iter().find(|(one, _)| *one == role).and_then(|(_, unit)| *unit)
    }
}

/// Finds the columns: by choice, by the words of the header, else by what stands in them. What was assumed goes to
/// `said`, what must be chosen to `faults`.
pub(super) fn columns(
    headings: &[String],
    rows: &[&Row],
    has_header: bool,
    choices: &LogChoices,
    said: &mut Vec<String>,
    faults: &mut Faults,
) -> LogColumns {
    let width = headings.len();
    let mut roles: Vec<Option<Role>> = vec![None; width];
    for (at, choice) in choices.table.columns.iter().enumerate() {
        match (roles.get_mut(choice.index), choice.role) {
            (Some(slot), Some(role)) if known(role) => *slot = Some(role),
            (Some(_), None) => {}
            (Some(_), Some(role)) => {
                let sentence = format!("A log has no column of the role {}.", role.name());
                let pointer = format!("/choices/columns/{at}/role");
                faults.push(Fault::new(&pointer, Code::Conflict, role.name().into(), &sentence));
            }
            (None, _) => {
                let sentence = format!(
                    "The index must be below {width}, the number of columns; {} was given.",
                    choice.index
                );
                let pointer = format!("/choices/columns/{at}/index");
                faults.push(Fault::new(&pointer, Code::Range, (choice.index as f64).into(), &sentence));
            }
        }
    }
    let column = Column { rows };
    for (role, words) in WORDS {
        for (index, heading) in headings.iter().enumerate() {
            if is_free(&roles, index, *role) && has(&folded(heading), words) {
                roles[index] = Some(*role);
            }
        }
    }
    for (index, heading) in headings.iter().enumerate() {
        if let Some(role) = unit_in(heading).and_then(role_of_unit)
            && is_free(&roles, index, role)
        {
            roles[index] = Some(role);
        }
    }
    if !has_header {
        by_content(&mut roles, &column, said);
    }
    if !roles.contains(&Some(Role::Power)) {
        match (0..width)
            .find(|index| roles.get(*index) == Some(&None) && column.mostly(*index, |c| amount(c).is_some()))
        {
            Some(index) => {
                roles[index] = Some(Role::Power);
                if has_header {
                    said.push(format!("{} was taken for the reading.", column_name(headings, index)));
                }
            }
            None => {
                let sentence = "A log needs a column of readings; none was found: choose the columns.";
                faults.push(Fault::missing("/choices/columns", sentence));
            }
        }
    }
    let mut columns = LogColumns {
        roles: roles.iter().map(|role| (role.unwrap_or(Role::Ignored), None)).collect(),
        times: Times::None,
        has_header,
    };
    units(&mut columns, headings, &column, choices, faults);
    times(&mut columns, &column, said);
    columns
}

fn known(role: Role) -> bool {
    role == Role::Ignored || WORDS.iter().any(|(one, _)| *one == role)
}

/// The role that a unit alone speaks of.
fn role_of_unit(unit: Unit) -> Option<Role> {
    match unit {
        Unit::Nanometre | Unit::Micrometre => Some(Role::Wavelength),
        Unit::Second | Unit::Millisecond | Unit::Minute | Unit::Hour => Some(Role::Time),
        _ => Role::Power.units().contains(&unit).then_some(Role::Power),
    }
}

/// Whether a column has no role yet and may have this one; each stands once, but for what is not read.
fn is_free(roles: &[Option<Role>], index: usize, role: Role) -> bool {
    roles.get(index) == Some(&None) && (role == Role::Ignored || !roles.contains(&Some(role)))
}

/// Without a header: times look like times; of two columns of numbers the first is the time.
fn by_content(roles: &mut [Option<Role>], column: &Column, said: &mut Vec<String>) {
    let free = |roles: &[Option<Role>], test: fn(&str) -> bool| {
        (0..roles.len()).find(|index| roles.get(*index) == Some(&None) && column.mostly(*index, test))
    };
    let has = |roles: &[Option<Role>], role| roles.contains(&Some(role));
    if !has(roles, Role::Time) && !has(roles, Role::Date) {
        if let Some(day) = free(roles, is_date) {
            roles[day] = Some(Role::Date);
        }
        if let Some(time) = free(roles, |cell| seconds(cell).is_some()) {
            roles[time] = Some(Role::Time);
        } else if let Some(first) = free(roles, |cell| amount(cell).is_some())
            && !has(roles, Role::Date)
            && !has(roles, Role::Power)
        {
            roles[first] = Some(Role::Time);
            if free(roles, |cell| amount(cell).is_some()).is_none() {
                roles[first] = None;
            } else {
                said.push(
                    "Without a header, column 1 of the numbers was taken for the time in s.".to_owned(),
                );
            }
        }
    }
}

/// The units: by choice, by the header, by the cells; of a power nothing is assumed.
fn units(
    columns: &mut LogColumns,
    headings: &[String],
    column: &Column,
    choices: &LogChoices,
    faults: &mut Faults,
) {
    let has_unit_column = columns.index(Role::PowerUnit).is_some();
    for (index, (role, unit)) in columns.roles.iter_mut().enumerate() {
        let allowed = role.units();
        if allowed.is_empty() {
            continue;
        }
        let chosen = choices.table.columns.iter().find(|choice| choice.index == index).and_then(|c| c.unit);
        let heading = headings.get(index).map_or("", String::as_str);
        let ours = |unit: &Unit| allowed.contains(unit);
        *unit = chosen.or_else(|| unit_in(heading).filter(ours)).or_else(|| column.unit(index).filter(ours));
        if unit.is_some() {
            continue;
        }
        let foreign =
            heading.split_once(['(', '[']).map_or("", |(_, unit)| unit.trim_end_matches([')', ']', ' ']));
        match role {
            Role::Power if !has_unit_column => {
                let sentence = "The readings name no unit, and a number means something else in W than in dBm: choose the \
                                unit of the column.";
                faults.push(Fault::missing("/choices/columns", sentence));
            }
            Role::Time if !foreign.is_empty() && column.mostly(index, |cell| amount(cell).is_some()) => {
                let sentence = format!(
                    "The times are in \"{}\", which is not known here: choose the unit.",
                    excerpt(foreign)
                );
                faults.push(Fault::missing("/choices/columns", &sentence));
            }
            Role::Time => *unit = Some(Unit::Second),
            Role::Wavelength => *unit = Some(Unit::Nanometre),
            _ => {}
        }
    }
}

/// How the times are written.
fn times(columns: &mut LogColumns, column: &Column, said: &mut Vec<String>) {
    // A column of days that hold the time of the day too is one of times.
    if let (None, Some(day)) = (columns.index(Role::Time), columns.index(Role::Date))
        && !column.mostly(day, is_date)
    {
        columns.roles[day] = (Role::Time, Some(Unit::Second));
    }
    let (time, day) = (columns.index(Role::Time), columns.index(Role::Date));
    columns.times = match (time, day) {
        (Some(time), Some(day)) if column.mostly(day, is_date) && column.mostly(time, is_time) => Times::Iso,
        (Some(time), None) if column.mostly(time, |cell| amount(cell).is_some()) => Times::Elapsed,
        (Some(time), None)
            if column.mostly(time, |cell| {
                cell.len() > 10 && seconds(cell).is_some() && cell.get(..10).is_some_and(is_date)
            }) =>
        {
            Times::Iso
        }
        (Some(time), None) if column.mostly(time, is_time) => Times::OfDay,
        _ => Times::None,
    };
    // What ISO 8601 writes has its units in itself.
    if let Some(slot) = time.and_then(|time| columns.roles.get_mut(time))
        && columns.times != Times::Elapsed
    {
        slot.1 = None;
    }
    let first = time.or(day).and_then(|index| column.cells(index).next());
    if let (Times::None, Some(cell)) = (columns.times, first) {
        said.push(format!(
            "Times such as \"{}\" are not written by ISO 8601, and the order of day and month is not guessed: rows are \
             numbered instead.",
            excerpt(cell)
        ));
    }
}

/// The first cells of the columns.
struct Column<'r> {
    rows: &'r [&'r Row<'r>],
}

impl Column<'_> {
    fn cells(&self, index: usize) -> impl Iterator<Item = &str> {
        self.rows.iter().map(move |row| row.cell(index)).filter(|cell| !cell.is_empty()).take(40)
    }

    /// Whether most of the cells that are not empty pass a test.
    fn mostly(&self, index: usize, test: fn(&str) -> bool) -> bool {
        let all = self.cells(index).count();
        let passed = self.cells(index).filter(|cell| test(cell)).count();
        passed > 0 && passed * 2 >= all
    }

    /// The unit behind the first number.
    fn unit(&self, index: usize) -> Option<Unit> {
        self.cells(index).find_map(amount).and_then(|(_, unit)| unit)
    }
}

fn column_name(headings: &[String], index: usize) -> String {
    match headings.get(index) {
        Some(text) if !text.is_empty() => format!("Column {} \"{}\"", index + 1, excerpt(text)),
        _ => format!("Column {}", index + 1),
    }
}

//! One row of a log: when, what the meter showed, and whether that counts.

use super::columns::Times;
use super::cut::{Cells, RawRow};
use super::head::Head;
use super::instant::Clock;
use super::number::plain;
use super::status::Statuses;
use crate::bench::source::{LEVEL_LIMITS, WAVELENGTH_LIMITS};
use crate::physics::decibel::watt_from_dbm;
use crate::record::names::{DecimalMark, Delimiter, Role, Unit};
use crate::record::rows::excerpt;
use crate::record::sheet::amount;
use std::borrow::Cow;

/// What SCPI-1999, volume 1, section 7.2.1 gives for "not a number" and for an overflow. Compared as numbers, within what
/// single precision or a few printed digits change.
const NOT_A_NUMBER: f64 = 9.91e37;
const INFINITY: f64 = 9.9e37;
const SAME: f64 = 1e-5;

/// The most that a reading in W may be, away from zero; above +60 dBm nothing is measured.
const MOST_W: f64 = 1e3;

/// Numbers above it go the slow way.
const MOST_PLAIN: f64 = 1e20;

/// What a row shows.
#[derive(Debug, Clone, PartialEq)]
pub enum Shows {
    /// A power that counts.
    Power {
        /// As it was shown, W; it may be negative after a dark reading was taken off.
        power_w: f64,
        /// The unit in which it was shown.
        unit: Unit,
        /// The level, where it was shown as one, dBm.
        level_dbm: Option<f64>,
    },
    /// The meter had no reading.
    NoReading,
    /// The light was too much for the meter or for its range.
    OverRange,
    /// The meter says that its reading is not to be trusted.
    Flagged,
    /// The row cannot be read, for a reason in one sentence.
    Bad(String),
}

/// A row of a log.
pub struct LogRow<'r> {
    /// The line on which it begins, counted from 1.
    pub line: usize,
    /// When, s since some fixed moment; nothing where the row or the log has no time.
    pub time_s: Option<f64>,
    /// What the meter was set to, nm, where the log has a column for it.
    pub setting_nm: Option<f64>,
    /// What it shows.
    pub shows: Shows,
    /// Whether the row was cut into cells as its header says, so that its cells mean something.
    pub is_cut: bool,
    bytes: &'r [u8],
    cells: &'r Cells,
    head: &'r Head,
}

impl LogRow<'_> {
    /// The row's cell of a role as it stands there; empty where there is none.
    pub fn cell(&self, role: Role) -> &[u8] {
        self.head.columns.index(role).map_or(b"", |index| self.cells.get(index, self.bytes))
    }

    /// Whether the log has a column of a role.
    pub fn has(&self, role: Role) -> bool {
        self.head.columns.index(role).is_some()
    }

    /// What parts the cells of the log.
    pub fn delimiter(&self) -> Delimiter {
        self.head.delimiter
    }

    /// The decimal mark of the log.
    pub fn decimal_mark(&self) -> DecimalMark {
        self.head.mark
    }

    /// The unit of the column of readings, if it has one for all rows.
    pub fn power_unit(&self) -> Option<Unit> {
        self.head.columns.unit(Role::Power)
    }

    /// The unit of times that count from some start.
    pub fn time_unit(&self) -> Option<Unit> {
        let columns = &self.head.columns;
        columns.unit(Role::Time).filter(|_| columns.times == Times::Elapsed)
    }

    /// The wavelength to which the meter was set, as a line above the rows names it, nm.
    pub fn stated_setting_nm(&self) -> Option<f64> {
        self.head.setting_nm
    }

    /// The start of the row, for a sentence.
    pub fn excerpt(&self) -> String {
        excerpt(&self.text())
    }

    /// The whole row.
    pub fn text(&self) -> Cow<'_, str> {
        String::from_utf8_lossy(self.bytes)
    }
}

/// Reads rows one by one.
pub(super) struct RowReader {
    pub(super) head: Head,
    pub(super) statuses: Statuses,
    places: Places,
    clock: Clock,
    cells: Cells,
    both: Vec<u8>,
    /// Rows that are empty or remarks.
    pub(super) passed_over: usize,
}

/// Where the columns are.
struct Places {
    power: usize,
    unit: Option<Unit>,
    power_unit: Option<usize>,
    status: Option<usize>,
    setting: Option<(usize, Unit)>,
    time: Option<usize>,
    day: Option<usize>,
    time_unit: Unit,
}

/// Why a number cannot be had.
enum NoNumber {
    NoReading,
    OverRange,
    Bad(String),
}

impl RowReader {
    /// A reader of rows below a head; nothing where the head has no column of readings.
    pub(super) fn new(head: Head, statuses: Statuses) -> Option<RowReader> {
        let columns = &head.columns;
        let nm = Unit::Nanometre;
        let places = Places {
            power: columns.index(Role::Power)?,
            unit: columns.unit(Role::Power),
            power_unit: columns.index(Role::PowerUnit),
            status: columns.index(Role::Status),
            setting: columns
                .index(Role::Wavelength)
                .map(|at| (at, columns.unit(Role::Wavelength).unwrap_or(nm))),
            time: columns.index(Role::Time),
            day: columns.index(Role::Date),
            time_unit: columns.unit(Role::Time).unwrap_or(Unit::Second),
        };
        Some(RowReader {
            head,
            statuses,
            places,
            clock: Clock::default(),
            cells: Cells::default(),
            both: Vec::new(),
            passed_over: 0,
        })
    }

    /// Reads a row; nothing where it is empty or a remark.
    pub(super) fn row<'r>(&'r mut self, raw: &RawRow<'r>) -> Option<LogRow<'r>> {
        let bytes = raw.bytes;
        if bytes.trim_ascii_start().first().is_none_or(|first| *first == b'#') {
            self.passed_over += 1;
            return None;
        }
        self.cells.cut(bytes, self.head.delimiter);
        if bytes.iter().all(|byte| matches!(byte, b' ' | b'\t' | b';' | b',' | b'"')) {
            self.passed_over += 1;
            return None;
        }
        let mut row = Read { time_s: None, setting_nm: None, is_cut: false };
        let shows = match raw.trouble {
            Some(sentence) => Shows::Bad(sentence.to_owned()),
            None => self.shows(bytes, &mut row),
        };
        let Read { time_s, setting_nm, is_cut } = row;
        Some(LogRow {
            line: raw.line,
            time_s,
            setting_nm,
            shows,
            is_cut,
            bytes,
            cells: &self.cells,
            head: &self.head,
        })
    }

    fn shows(&mut self, bytes: &[u8], row: &mut Read) -> Shows {
        let good = self.places.status.is_none_or(|at| self.statuses.is_good(self.cells.get(at, bytes)));
        if let Some(most) = self.head.most_cells
            && self.cells.width(bytes) > most
        {
            return Shows::Bad(format!(
                "The row must have at most {most} cells, as the header; it has {}. If commas in it stand before the \
                 tenths, the cells must be parted by something else.",
                self.cells.width(bytes)
            ));
        }
        if !self.cells.has(self.places.power) {
            return Shows::Bad("The row ends before its reading.".to_owned());
        }
        row.is_cut = true;
        match self.time(bytes) {
            Ok(time_s) => row.time_s = time_s,
            Err(sentence) => return Shows::Bad(sentence),
        }
        let power = self.power(bytes);
        match (power, good) {
            (Err(NoNumber::NoReading), _) => Shows::NoReading,
            (Err(NoNumber::OverRange), _) => Shows::OverRange,
            (_, false) => Shows::Flagged,
            (Err(NoNumber::Bad(sentence)), true) => Shows::Bad(sentence),
            (Ok(shown), true) => match self.setting(bytes) {
                Ok(setting_nm) => {
                    row.setting_nm = setting_nm;
                    shown
                }
                Err(sentence) => Shows::Bad(sentence),
            },
        }
    }

    fn power(&self, bytes: &[u8]) -> Result<Shows, NoNumber> {
        let cell = self.cells.get(self.places.power, bytes);
        let own_unit = match self
            .places
            .power_unit
            .map(|at| self.cells.get(at, bytes))
            .filter(|unit| !unit.is_empty())
        {
            None => None,
            Some(text) => {
                let unit = std::str::from_utf8(text).ok().and_then(Unit::written_of_power);
                let unit = unit.filter(|unit| Role::Power.units().contains(unit));
                let sentence = || format!("The unit must be one of a power; \"{}\" is none.", lossy(text));
                Some(unit.ok_or_else(|| NoNumber::Bad(sentence()))?)
            }
        };
        let (value, unit) = self.number(cell, own_unit.or(self.places.unit), Role::Power, "reading")?;
        if unit == Unit::Dbm {
            if !LEVEL_LIMITS.hold(value) {
                let must = LEVEL_LIMITS.sentence(|dbm| format!("{dbm} dBm"));
                return Err(NoNumber::Bad(format!("The reading {must}; it is {value} dBm.")));
            }
            return Ok(Shows::Power { power_w: watt_from_dbm(value), unit, level_dbm: Some(value) });
        }
        if value.abs() > MOST_W {
            let sentence =
                format!("The reading must lie between −{MOST_W} W and {MOST_W} W; it is {value} W.");
            return Err(NoNumber::Bad(sentence));
        }
        Ok(Shows::Power { power_w: value, unit, level_dbm: None })
    }

    fn setting(&self, bytes: &[u8]) -> Result<Option<f64>, String> {
        let Some((at, unit)) = self.places.setting else { return Ok(None) };
        let name = "wavelength setting";
        let (setting_nm, _) = match self.number(self.cells.get(at, bytes), Some(unit), Role::Wavelength, name)
        {
            Ok(found) => found,
            Err(NoNumber::Bad(sentence)) => return Err(sentence),
            Err(_) => return Err("The wavelength setting is missing.".to_owned()),
        };
        if !WAVELENGTH_LIMITS.hold(setting_nm) {
            let must = WAVELENGTH_LIMITS.sentence(|nm| format!("{nm} nm"));
            return Err(format!("The wavelength setting {must}; it is {setting_nm} nm."));
        }
        Ok(Some(setting_nm))
    }

    fn time(&mut self, bytes: &[u8]) -> Result<Option<f64>, String> {
        let (Some(at), false) = (self.places.time, self.head.columns.times == Times::None) else {
            return Ok(None);
        };
        let mut cell = self.cells.get(at, bytes);
        if cell.is_empty() {
            return Ok(None);
        }
        if let Some(day) = self.places.day.map(|day| self.cells.get(day, bytes)) {
            self.both.clear();
            self.both.extend_from_slice(day);
            self.both.push(b'T');
            self.both.extend_from_slice(cell);
            cell = &self.both;
        }
        let read = match self.head.columns.times {
            Times::Iso => self.clock.iso(cell),
            Times::OfDay => self.clock.of_day(cell),
            _ => self
                .number(cell, Some(self.places.time_unit), Role::Time, "time")
                .ok()
                .map(|(seconds, _)| seconds),
        };
        // Beyond that, seconds would lose their tenths.
        match read.filter(|seconds| seconds.abs() < 1e14) {
            Some(seconds) => Ok(Some(seconds)),
            None => Err(format!("The time \"{}\" cannot be read as the others are.", lossy(cell))),
        }
    }

    /// The number of a cell in nm, W or s, or as a level, and the unit that it was in.
    fn number(
        &self,
        cell: &[u8],
        unit: Option<Unit>,
        role: Role,
        name: &str,
    ) -> Result<(f64, Unit), NoNumber> {
        let mark = self.head.mark;
        if let Some(unit) = unit
            && let Some(value) = plain(cell, mark, unit.power_of_ten())
            // An instrument's sign for "no reading" is looked at before any unit.
            && value.abs() < MOST_PLAIN
        {
            return Ok((value * unit.factor(), unit));
        }
        let text = lossy(cell);
        match text.trim_matches(['\u{a0}', ' ']).to_ascii_lowercase().as_str() {
            "" | "-" | "--" | "---" | "–" | "—" | "n/a" | "nan" | "null" => {
                return Err(NoNumber::NoReading);
            }
            "inf" | "+inf" | "-inf" | "infinity" | "over" | "ol" | "overload" | "over range"
            | "overrange" => {
                return Err(NoNumber::OverRange);
            }
            _ => {}
        }
        let bad = |sentence: String| NoNumber::Bad(sentence);
        let no_number = || bad(format!("The {name} must be a number; \"{}\" is none.", excerpt(&text)));
        let (cell, behind) = amount(&text).ok_or_else(no_number)?;
        // Instruments write these with a point, whatever the mark of the file.
        for mark in [DecimalMark::Point, DecimalMark::Comma] {
            match cell.value(mark, 0) {
                Ok(value) if (value / NOT_A_NUMBER - 1.0).abs() < SAME => return Err(NoNumber::NoReading),
                Ok(value) if (value.abs() / INFINITY - 1.0).abs() < SAME => return Err(NoNumber::OverRange),
                _ => {}
            }
        }
        let Some(unit) = behind.or(unit) else {
            return Err(bad(format!("The {name} has no unit; neither the cell nor the header names one.")));
        };
        if !role.units().contains(&unit) {
            return Err(bad(format!(
                "The {name} cannot be in {}; \"{}\" was given.",
                unit.name(),
                excerpt(&text)
            )));
        }
        let value = cell.value(mark, unit.power_of_ten()).map_err(|_| no_number())?;
        Ok((value * unit.factor(), unit))
    }
}

/// What a row holds beside its reading.
struct Read {
    time_s: Option<f64>,
    setting_nm: Option<f64>,
    is_cut: bool,
}

fn lossy(bytes: &[u8]) -> Cow<'_, str> {
    String::from_utf8_lossy(bytes)
}

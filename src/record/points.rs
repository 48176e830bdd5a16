//! One row of a table as a point: numbers in their units, checked and converted.

use super::cell::{Cell, Unread, is_number};
use super::columns::{Columns, Used};
use super::names::{DecimalMark, Role, Unit};
use super::rows::{Row, excerpt};
use crate::bench::meter::CertificateForm;
use libm::pow;

/// The wavelengths that a table may hold, in nm: all that silicon, germanium and indium gallium arsenide
/// detectors see.
const WAVELENGTHS_NM: std::ops::RangeInclusive<f64> = 200.0..=2500.0;
/// The correction factors that a table may hold. Beyond them the column is something else, such as per cent
/// without a sign.
const CORRECTION_FACTORS: std::ops::RangeInclusive<f64> = 0.1..=10.0;

/// One good row.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Point {
    pub(super) line: usize,
    pub(super) wavelength_nm: f64,
    pub(super) value: f64,
    pub(super) expanded_percent: Option<f64>,
}

/// What happened in single cells, counted, to be said once.
#[derive(Default)]
pub(super) struct Notes {
    spaces: usize,
    minus: usize,
    thousands: usize,
    without_uncertainty: usize,
    extra_cells: usize,
    pub(super) unsorted: bool,
}

impl Notes {
    /// Puts what happened into sentences.
    pub(super) fn say(&self, columns: &Columns, mark: DecimalMark, said: &mut Vec<String>) {
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
pub(super) struct RowReader<'a> {
    pub(super) columns: &'a Columns,
    pub(super) mark: DecimalMark,
    /// The most cells a row may have, where more of them would be a sign of a wrong delimiter.
    pub(super) most_cells: Option<usize>,
}

impl RowReader<'_> {
    /// One row as a point, or a sentence about why it is none.
    pub(super) fn point(&self, row: &Row, notes: &mut Notes) -> Result<Point, String> {
        if let Some(most) = self.most_cells.filter(|most| row.width() > *most) {
            if (most..row.width()).any(|index| is_number(row.cell(index))) {
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
        if cell.is_no_reading() {
            return Err(format!(
                "The {name} \"{}\" is an instrument's sign for \"no reading\".",
                excerpt(text)
            ));
        }
        let value = cell.value(self.mark, shift).map_err(|unread| match unread {
            Unread::NoNumber => no_number(),
            Unread::OtherMark => format!(
                "The {name} \"{}\" does not fit the decimal {} of this table.",
                excerpt(text),
                self.mark.name()
            ),
        })?;
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

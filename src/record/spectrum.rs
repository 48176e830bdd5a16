//! A spectrum, as an analyser writes it.

use super::choices::Choices;
use super::names::{Role, Unit};
use super::reading::{BadRow, Reading};
use super::rows::Row;
use super::sheet::{Kind, Sheet, normal};
use crate::bench::source::WAVELENGTH_LIMITS;
use crate::bench::spectrum::{LEVEL_LIMITS, LINEAR_LIMITS, SpectrumPoint, SpectrumUnit};
use crate::fault::{Code, Fault, Faults};
use crate::tree::Tree;
use serde::Serialize;

/// A spectrum as read from a table.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct SpectrumTable {
    /// In which unit its values are.
    pub unit: SpectrumUnit,
    /// In the order of the wavelengths.
    pub points: Vec<SpectrumPoint>,
    /// How the table was understood.
    pub reading: Reading,
}

const KIND: Kind = Kind {
    name: "A spectrum",
    words: &[
        (Role::Wavelength, &["wl"]),
        (
            Role::SpectralPower,
            &[
                "power",
                "level",
                "psd",
                "density",
                "spectr",
                "intensity",
                "trace",
                "value",
                "leistung",
                "pegel",
                "intensitat",
                "wert",
                "puissance",
                "niveau",
                "valeur",
                "potencia",
                "nivel",
                "valor",
            ],
        ),
    ],
    needed: &[Role::Wavelength, Role::SpectralPower],
};

/// Reads a spectrum from a table: a file's text, or cells pasted from a spreadsheet.
///
/// Values are linear (W/nm and its parts) or levels (dBm/nm). Only the shape counts, so powers per resolution
/// bandwidth (W, dBm), relative levels (dB) and arbitrary linear scales (1, %) are taken as well. Which of them it is
/// the header must say, or a person: a table that names no unit is not read.
///
/// # Example
///
/// ```
/// use leastlight::bench::spectrum::SpectrumUnit;
/// use leastlight::record::{Choices, read_spectrum};
///
/// let table = read_spectrum("λ / nm;P / (dBm/nm)\n1549,5;-31,2\n1550,0;-20,1\n", &Choices::default()).unwrap();
/// assert_eq!(table.unit, SpectrumUnit::DbmPerNm);
/// assert_eq!(table.points[1].value, -20.1);
/// ```
pub fn read_spectrum(text: &str, choices: &Choices) -> Result<SpectrumTable, Faults> {
    let text = normal(text);
    let mut sheet = Sheet::open(&text, choices, &KIND)?;
    // Both columns are needed, so the sheet has them.
    let (Some(wavelength), Some(power)) = (sheet.column(Role::Wavelength), sheet.column(Role::SpectralPower))
    else {
        return Err(vec![Fault::missing("", "A spectrum needs a column of wavelengths and one of powers.")]);
    };
    let mut kept: Option<Unit> = power.unit;
    let (mut points, mut bad_rows): (Vec<SpectrumPoint>, Vec<BadRow>) = (Vec::new(), Vec::new());
    for row in sheet.rows() {
        let point = sheet.number(row, wavelength, "wavelength").and_then(|(wavelength_nm, _)| {
            let (value, unit) = sheet.number(row, power, "power per nm")?;
            let first = *kept.get_or_insert(unit);
            checked(SpectrumPoint { wavelength_nm, value }, unit, first)
        });
        match point {
            Ok(point) => points.push(point),
            Err(sentence) => bad_rows.push(bad(row, sentence)),
        }
    }
    let Some(unit) = kept else {
        let sentence = "The power per nm names no unit, and linear values and levels make another spectrum: choose the \
                        unit of the column.";
        return Err(vec![Fault::missing("", sentence)]);
    };
    let unsorted = !points.is_sorted_by(|one, next| one.wavelength_nm <= next.wavelength_nm);
    points.sort_by(|one, next| one.wavelength_nm.total_cmp(&next.wavelength_nm));
    let all = points.len();
    points.dedup_by(|next, one| next.wavelength_nm == one.wavelength_nm);
    if points.len() < 2 {
        let why =
            bad_rows.first().map_or(String::new(), |row| format!(" Line {}: {}", row.line, row.sentence));
        let sentence =
            format!("A spectrum needs two rows at least with a wavelength and a power per nm.{why}");
        return Err(vec![Fault::new("", Code::Unreadable, Tree::Null, &sentence)]);
    }
    if unsorted {
        sheet.said.push("The rows were put in the order of their wavelengths.".to_owned());
    }
    if points.len() < all {
        let twice = all - points.len();
        sheet.said.push(format!("Of rows with one wavelength the first was kept; {twice} were left out."));
    }
    sheet.said.extend(scale_sentence(unit).map(str::to_owned));
    let unit = if is_level(unit) { SpectrumUnit::DbmPerNm } else { SpectrumUnit::WPerNm };
    let reading = sheet.reading(points.len(), bad_rows);
    Ok(SpectrumTable { unit, points, reading })
}

/// How a text is understood as a spectrum as far as that goes, also where it cannot be read yet: so that a person can
/// choose what it does not say. Nothing where it has no rows of numbers.
pub fn spectrum_layout(text: &str, choices: &Choices) -> Option<Reading> {
    Sheet::layout(text, choices, &KIND)
}

fn is_level(unit: Unit) -> bool {
    matches!(unit, Unit::Dbm | Unit::DbmPerNm | Unit::Decibel)
}

fn checked(point: SpectrumPoint, unit: Unit, first: Unit) -> Result<SpectrumPoint, String> {
    if unit != first && (is_level(unit) || is_level(first)) {
        return Err(format!("The power per nm is in {}, the rows before in {}.", unit.name(), first.name()));
    }
    if !WAVELENGTH_LIMITS.hold(point.wavelength_nm) {
        let must = WAVELENGTH_LIMITS.sentence(|nm| format!("{nm} nm"));
        return Err(format!("The wavelength {must}; it is {} nm.", point.wavelength_nm));
    }
    if !is_level(unit) && point.value < 0.0 {
        return Err("A linear power per nm is at least 0; a negative one is noise about nothing.".to_owned());
    }
    let limits = if is_level(unit) { LEVEL_LIMITS } else { LINEAR_LIMITS };
    if !limits.hold(point.value) {
        let must = limits.sentence(|value| value.to_string());
        return Err(format!("The power per nm {must}; it is {}.", point.value));
    }
    Ok(point)
}

fn bad(row: &Row, sentence: String) -> BadRow {
    BadRow { line: row.line, text: row.excerpt(), sentence }
}

/// What to know of values that are not per nm.
fn scale_sentence(unit: Unit) -> Option<&'static str> {
    match unit {
        Unit::WattPerNm
        | Unit::MilliwattPerNm
        | Unit::MicrowattPerNm
        | Unit::NanowattPerNm
        | Unit::DbmPerNm => None,
        Unit::Decibel | Unit::One | Unit::Percent => {
            Some("The values are relative; only the shape of the spectrum is used.")
        }
        _ => Some(
            "The values are powers within the analyser's resolution bandwidth, taken as the same at all wavelengths; \
             only the shape of the spectrum is used.",
        ),
    }
}

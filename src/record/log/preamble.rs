//! What the lines above a log say of the whole of it: the wavelength to which the meter was set.

use crate::bench::source::WAVELENGTH_LIMITS;
use crate::record::names::{DecimalMark, Unit};
use crate::record::sheet::amount;
use crate::record::words::{WAVELENGTH, folded, has};
use serde::Serialize;

/// Where the meter's wavelength setting is taken from.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum SettingFrom {
    /// From the file, row by row or from a line above the table; from the bench where the file does not say.
    #[default]
    File,
    /// From the bench, whatever the file says.
    Bench,
}

impl SettingFrom {
    /// The words by which a page or a script names them.
    pub const WORDS: &'static [(&'static str, SettingFrom)] =
        &[("file", SettingFrom::File), ("bench", SettingFrom::Bench)];
}

/// A line with one of these speaks of the light and not of the meter.
const LIGHT: &[&str] =
    &["source", "laser", "light", "quelle", "licht", "fuente", "led", "peak", "centre", "center"];

/// The wavelength in nm that a line above the table names.
///
/// A line counts that has a word for the wavelength and, behind it, a number in nm or µm, or a number without a unit that
/// can be a wavelength in nm.
pub(super) fn setting_nm(line: &str) -> Option<f64> {
    let plain = folded(line);
    let word = WAVELENGTH.iter().find(|word| plain.contains(**word))?;
    if has(&plain, LIGHT) {
        return None;
    }
    let (_, behind) = plain.split_once(word)?;
    let mut parts = behind
        .split([' ', ';', ':', '=', '\t', '"', '(', ')', '[', ']', '/'])
        .map(|part| part.trim_end_matches(','))
        .filter(|part| !part.is_empty())
        // A comma between cells stands before the number.
        .map(|part| part.trim_start_matches(','))
        .peekable();
    let mut unit_before = None;
    while let Some(part) = parts.next() {
        let Some((cell, unit)) = amount(part) else {
            unit_before = wavelength_unit(part).or(unit_before);
            continue;
        };
        let unit = unit.or_else(|| parts.peek().and_then(|next| wavelength_unit(next))).or(unit_before);
        let shift = match unit.unwrap_or(Unit::Nanometre) {
            Unit::Nanometre => 0,
            Unit::Micrometre => 3,
            _ => continue,
        };
        let value =
            cell.value(DecimalMark::Point, shift).or_else(|_| cell.value(DecimalMark::Comma, shift)).ok()?;
        return Some(value).filter(|nm| WAVELENGTH_LIMITS.hold(*nm));
    }
    None
}

fn wavelength_unit(text: &str) -> Option<Unit> {
    // The line was folded to lower case.
    Unit::written(text).filter(|unit| matches!(unit, Unit::Nanometre | Unit::Micrometre))
}

#[cfg(test)]
mod tests {
    use super::*;

    // The expected wavelengths are the written ones.
    #[test]
    fn a_setting_is_found_where_a_line_names_one() {
        for (line, expected) in [
            ("# Wavelength setting: 1310 nm", Some(1310.0)),
            ("Wavelength;1550", Some(1550.0)),
            ("Wavelength (nm),1490.5", Some(1490.5)),
            ("Wellenlänge [µm];1,55", Some(1550.0)),
            ("\"Wavelength\",\"1.31 µm\"", Some(1310.0)),
            ("λ = 850nm", Some(850.0)),
            ("Longueur d’onde : 1310 nm", Some(1310.0)),
            ("# Source wavelength: 1551.7 nm", None),
            ("Laser wavelength 1550 nm", None),
            ("Wavelength: 7 nm", None),
            ("Wavelength", None),
            ("Power meter no. 1310", None),
            ("", None),
        ] {
            assert_eq!(setting_nm(line), expected, "{line:?}");
        }
    }
}

//! Tables of values at wavelengths: a detector's responsivity, a meter's certificate.

use super::field::Limits;
use super::reader::Reader;
use super::source::WAVELENGTH_LIMITS;
use crate::fault::{Code, Fault};
use crate::quantity::kind;
use crate::tree::Tree;
use serde::Serialize;

/// The responsivity at a wavelength.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct ResponsivityPoint {
    /// Wavelength in vacuum, nm.
    pub wavelength_nm: f64,
    /// Responsivity there, A/W.
    pub a_per_w: f64,
}

/// The limits of a responsivity, A/W.
pub const RESPONSIVITY_LIMITS: Limits = Limits::above(0.0, 1e3);

/// Reads a table of responsivities: at least one point, each wavelength once, in rising order afterwards.
pub fn read_responsivity(
    tree: Option<&Tree>,
    pointer: &str,
    reader: &mut Reader,
) -> Option<Vec<ResponsivityPoint>> {
    let mut points = read_rows(tree, pointer, reader, &["wavelength_nm", "a_per_w"], |row, at, reader| {
        let wavelength_nm = wavelength(row, at, reader);
        let pointer = format!("{at}/a_per_w");
        let name = "the responsivity";
        let value =
            reader.of_kind(row.get("a_per_w"), &pointer, name, &kind::RESPONSIVITY, &RESPONSIVITY_LIMITS);
        if value.is_none() && row.get("a_per_w").is_none_or(Tree::is_null) {
            reader.missing(&pointer, "Each point needs a responsivity in A/W.");
        }
        Some(ResponsivityPoint { wavelength_nm: wavelength_nm?, a_per_w: value?.value })
    })?;
    sort_apart(&mut points, |point| point.wavelength_nm, pointer, reader);
    Some(points)
}

/// The wavelength of a row.
pub fn wavelength(row: &Tree, at: &str, reader: &mut Reader) -> Option<f64> {
    let pointer = format!("{at}/wavelength_nm");
    let given = row.get("wavelength_nm");
    if given.is_none_or(Tree::is_null) {
        reader.missing(&pointer, "Each point needs a wavelength in nm.");
    }
    let limits = &WAVELENGTH_LIMITS;
    Some(reader.of_kind(given, &pointer, "the wavelength", &kind::WAVELENGTH, limits)?.value)
}

/// Reads the rows of a list; a row that is wrong is left out and its faults are kept.
pub fn read_rows<T>(
    tree: Option<&Tree>,
    pointer: &str,
    reader: &mut Reader,
    keys: &[&str],
    mut read: impl FnMut(&Tree, &str, &mut Reader) -> Option<T>,
) -> Option<Vec<T>> {
    let items = reader.list(tree, pointer)?;
    if items.is_empty() {
        reader.missing(pointer, "The table needs at least one point.");
        return None;
    }
    let mut rows = Vec::with_capacity(items.len());
    for (index, item) in items.iter().enumerate() {
        let at = format!("{pointer}/{index}");
        if item.is_null() {
            reader.missing(&at, "A point is needed here: an object with named values.");
        } else if let Some(row) = reader.part(Some(item), &at, keys) {
            rows.extend(read(row, &at, reader));
        }
    }
    Some(rows)
}

/// Sorts points by wavelength; two at one wavelength contradict each other.
pub fn sort_apart<T>(points: &mut [T], wavelength_nm: fn(&T) -> f64, pointer: &str, reader: &mut Reader) {
    points.sort_by(|a, b| wavelength_nm(a).total_cmp(&wavelength_nm(b)));
    for pair in points.windows(2) {
        let (a, b) = (wavelength_nm(&pair[0]), wavelength_nm(&pair[1]));
        if a == b {
            let sentence = format!("Each wavelength may stand once in the table; {a} nm stands twice.");
            reader.faults.push(Fault::new(pointer, Code::Conflict, Tree::Number(a), &sentence));
        }
    }
}

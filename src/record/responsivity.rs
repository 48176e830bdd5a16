//! A detector's responsivity over wavelength.

use super::choices::Choices;
use super::points::Point;
use super::reading::Reading;
use super::table;
use crate::bench::meter::CertificateForm;
use crate::bench::points::ResponsivityPoint;
use crate::fault::Faults;
use serde::Serialize;

/// A responsivity curve as read from a table.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct ResponsivityTable {
    /// One point a wavelength, in the order of the wavelengths.
    pub points: Vec<ResponsivityPoint>,
    /// How the table was understood.
    pub reading: Reading,
}

/// Reads a responsivity curve from a table, as [`read_certificate`](super::read_certificate) does; columns of
/// uncertainties and corrections are passed over.
///
/// # Example
///
/// ```
/// use leastlight::record::{Choices, read_responsivity};
///
/// let table = read_responsivity("λ/µm\tR [mA/W]\n1.31\t920\n1.55\t980\n", &Choices::default()).unwrap();
/// assert_eq!(table.points[0].wavelength_nm, 1310.0);
/// assert_eq!(table.points[0].a_per_w, 0.92);
/// ```
pub fn read_responsivity(text: &str, choices: &Choices) -> Result<ResponsivityTable, Faults> {
    let table = table::read(text, choices, &[CertificateForm::Responsivity])?;
    let point =
        |point: &Point| ResponsivityPoint { wavelength_nm: point.wavelength_nm, a_per_w: point.value };
    Ok(ResponsivityTable { points: table.points.iter().map(point).collect(), reading: table.reading })
}

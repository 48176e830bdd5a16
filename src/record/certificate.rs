//! A power meter's certificate: what it states at each wavelength, and how well.

use super::choices::Choices;
use super::reading::Reading;
use super::table;
use crate::bench::meter::{CertificateForm, CertificatePoint};
use crate::fault::Faults;
use serde::Serialize;

/// A certificate as read from a table.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct CertificateTable {
    /// What it states.
    pub form: CertificateForm,
    /// The coverage factor k of the uncertainties, if the table states it.
    pub coverage_factor: Option<f64>,
    /// One point a wavelength, in the order of the wavelengths.
    pub points: Vec<CertificatePoint>,
    /// How the table was understood.
    pub reading: Reading,
}

/// Reads a certificate from a table: a file's text, or cells pasted from a spreadsheet.
///
/// Recognised are the delimiter, the decimal mark, preamble and header, the columns by their names in four
/// languages or by their order, and units, which are converted:
///
/// ```text
/// deviation d in %     c = 1/(1 + d/100)         d = (indicated − true)/true
/// deviation d in dB    c = 10^(−d/10)
/// correction c in dB   c = 10^(c_dB/10)
/// U in dB              U_% = (10^(U_dB/10) − 1)·100
/// U in the value's     U_% = U/value·100
/// ```
///
/// Rows that are no points are named in the reading, the others are read all the same. It is a fault, with
/// the pointer `""` for the text, when no row is good, when no column can be told to hold the values, and when
/// the decimal mark can be read both ways.
///
/// Source: of the relation in dB its definition (IEC 60027-3); of k and U, JCGM 100:2008, section 6.
///
/// # Example
///
/// ```
/// use leastlight::record::{Choices, read_certificate};
///
/// let text = "Wellenlänge / nm;R / (A/W);U (k=2) / %\n1310;0,92;1,1\n1550;0,98;1,2\n";
/// let table = read_certificate(text, &Choices::default()).unwrap();
/// assert_eq!(table.coverage_factor, Some(2.0));
/// assert_eq!(table.points[1].value, 0.98);
/// ```
pub fn read_certificate(text: &str, choices: &Choices) -> Result<CertificateTable, Faults> {
    let table =
        table::read(text, choices, &[CertificateForm::Responsivity, CertificateForm::CorrectionFactor])?;
    let points = table.points.iter().map(|point| CertificatePoint {
        wavelength_nm: point.wavelength_nm,
        value: point.value,
        expanded_percent: point.expanded_percent,
    });
    Ok(CertificateTable {
        form: table.form,
        coverage_factor: table.coverage_factor,
        points: points.collect(),
        reading: table.reading,
    })
}

//! Points as text that a person can edit and the reader takes back.

use super::cell::{Cell, Marks};
use super::names::DecimalMark;
use super::words::coverage_factor;
use crate::bench::avalanche::NoiseFactorPoint;
use crate::bench::bias::GainPoint;
use crate::bench::meter::{CertificateForm, CertificatePoint};
use crate::bench::points::ResponsivityPoint;
use crate::bench::spectrum::{SpectrumPoint, SpectrumUnit};

/// Writes a certificate's points as tab-separated text with a header, to be read back bit by bit by
/// [`read_certificate`](super::read_certificate).
///
/// # Example
///
/// ```
/// use leastlight::bench::meter::{CertificateForm, CertificatePoint};
/// use leastlight::record::{DecimalMark, write_certificate_points};
///
/// let point = CertificatePoint { wavelength_nm: 1310.0, value: 0.92, expanded_percent: Some(1.1) };
/// let text = write_certificate_points(CertificateForm::Responsivity, Some(2.0), &[point], DecimalMark::Comma);
/// assert_eq!(text, "Wavelength / nm\tResponsivity / (A/W)\tU (k=2) / %\n1310\t0,92\t1,1\n");
/// ```
pub fn write_certificate_points(
    form: CertificateForm,
    coverage_factor: Option<f64>,
    points: &[CertificatePoint],
    mark: DecimalMark,
) -> String {
    let value = match form {
        CertificateForm::Responsivity => "Responsivity / (A/W)",
        CertificateForm::CorrectionFactor => "Correction factor / 1",
    };
    let k = coverage_factor.map_or(String::new(), |k| format!(" (k={})", digits(k, mark)));
    let mut text = format!("Wavelength / nm\t{value}\tU{k} / %\n");
    for point in points {
        let expanded = point.expanded_percent.map_or(String::new(), |percent| digits(percent, mark));
        text +=
            &format!("{}\t{}\t{expanded}\n", digits(point.wavelength_nm, mark), digits(point.value, mark));
    }
    text
}

/// Writes a responsivity curve as tab-separated text with a header, to be read back bit by bit by
/// [`read_responsivity`](super::read_responsivity).
pub fn write_responsivity_points(points: &[ResponsivityPoint], mark: DecimalMark) -> String {
    let mut text = "Wavelength / nm\tResponsivity / (A/W)\n".to_owned();
    for point in points {
        text += &format!("{}\t{}\n", digits(point.wavelength_nm, mark), digits(point.a_per_w, mark));
    }
    text
}

/// Writes a spectrum as tab-separated text with a header, to be read back bit by bit by
/// [`read_spectrum`](super::read_spectrum).
pub fn write_spectrum_points(unit: SpectrumUnit, points: &[SpectrumPoint], mark: DecimalMark) -> String {
    let power = match unit {
        SpectrumUnit::WPerNm => "Power per nm / (W/nm)",
        SpectrumUnit::DbmPerNm => "Power per nm / (dBm/nm)",
    };
    let mut text = format!("Wavelength / nm\t{power}\n");
    for point in points {
        text += &format!("{}\t{}\n", digits(point.wavelength_nm, mark), digits(point.value, mark));
    }
    text
}

/// Writes measured gains as tab-separated text with a header, to be read back bit by bit by
/// [`read_gains`](super::read_gains).
pub fn write_gain_points(points: &[GainPoint], mark: DecimalMark) -> String {
    let mut text = "Bias / V\tGain\n".to_owned();
    for point in points {
        text += &format!("{}\t{}\n", digits(point.bias_v, mark), digits(point.gain, mark));
    }
    text
}

/// Writes measured excess noise factors as tab-separated text with a header, to be read back bit by bit by
/// [`read_noise_factors`](super::read_noise_factors).
pub fn write_noise_factor_points(points: &[NoiseFactorPoint], mark: DecimalMark) -> String {
    let mut text = "Gain\tExcess noise factor\n".to_owned();
    for point in points {
        text += &format!("{}\t{}\n", digits(point.gain, mark), digits(point.factor, mark));
    }
    text
}

/// A line of remarks above a table. Where a reader would take a coverage factor from it, points stand between its words:
/// the table's own header states k.
pub fn remark(line: &str) -> String {
    let plain = line.replace('"', "'").split_whitespace().collect::<Vec<_>>().join(" ");
    match coverage_factor(&plain) {
        Some(_) => format!("# {}\n", plain.replace([' ', '=', ':', ';', ','], "·")),
        None => format!("# {plain}\n"),
    }
}

/// A number as the tables above write it.
pub fn number_text(number: f64, mark: DecimalMark) -> String {
    digits(number, mark)
}

/// The fewest digits that give back the same number. A zero is added where a comma before three digits could
/// be taken for a mark of thousands.
fn digits(number: f64, mark: DecimalMark) -> String {
    let plain = number == 0.0 || (1e-5..1e15).contains(&number.abs());
    let text = if plain { number.to_string() } else { format!("{number:e}") };
    let text = match mark {
        DecimalMark::Point => text,
        DecimalMark::Comma => text.replace('.', ","),
    };
    match Cell::cut(&text).map(|cell| cell.marks()) {
        Some(Marks::EitherComma) => text + "0",
        _ => text,
    }
}

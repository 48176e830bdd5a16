//! The power meter: its reading, its wavelength setting, and the certificate that came with it.

use super::field::{Field, Limits};
use super::points::{self, ResponsivityPoint};
use super::reader::Reader;
use super::source::{LEVEL_LIMITS, WAVELENGTH_LIMITS};
use crate::quantity::kind;
use crate::tree::Tree;
use serde::Serialize;

/// A power meter.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Meter {
    /// What it shows, dBm.
    pub reading_dbm: Option<f64>,
    /// The wavelength it is set to, nm.
    pub set_wavelength_nm: Option<f64>,
    /// What it shows without light, W; nothing means that it was zeroed.
    pub zero_offset_w: Option<f64>,
    /// Another reading of the same meter that this one is compared with.
    pub comparison: Option<Comparison>,
    /// Its certificate of calibration.
    pub certificate: Option<Certificate>,
    /// The typical responsivity of its head, for a certificate of correction factors; nothing means that the
    /// detector's own table is meant.
    pub typical_curve: Option<Vec<ResponsivityPoint>>,
    /// The wavelengths of the table of corrections, nm; nothing means the usual ones.
    pub table_wavelengths_nm: Option<Vec<f64>>,
}

/// Another reading of the same meter.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Comparison {
    /// What it showed, dBm.
    pub reading_dbm: Option<f64>,
    /// The wavelength it was set to, nm; nothing means the same as for the first reading.
    pub set_wavelength_nm: Option<f64>,
    /// The wavelength of the light, nm; nothing means the same light as for the first reading.
    pub wavelength_nm: Option<f64>,
}

/// A certificate of calibration.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Certificate {
    /// What its values are.
    pub form: CertificateForm,
    /// The coverage factor k of its expanded uncertainties.
    pub coverage_factor: Option<f64>,
    /// The correlation between the errors of any two of its points; nothing means 1, the cautious choice.
    pub point_correlation: Option<f64>,
    /// True over certified value, common to all of its points; nothing means 1. A drift since the calibration is a
    /// doubt of it.
    pub scale: Option<f64>,
    /// In rising order of wavelength.
    pub points: Vec<CertificatePoint>,
}

/// What the values of a certificate are.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum CertificateForm {
    /// Responsivities, A/W.
    Responsivity,
    /// True over indicated power, the meter being set to the wavelength of the light.
    CorrectionFactor,
}

/// A line of a certificate.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct CertificatePoint {
    /// Wavelength in vacuum, nm.
    pub wavelength_nm: f64,
    /// Responsivity in A/W, or correction factor.
    pub value: f64,
    /// Expanded uncertainty in per cent of the value.
    pub expanded_percent: Option<f64>,
}

/// The wavelengths at which a laboratory usually wants corrections, nm (common practice).
pub const USUAL_WAVELENGTHS_NM: [f64; 6] = [850.0, 980.0, 1310.0, 1490.0, 1550.0, 1625.0];

/// The numbers of a meter.
pub const FIELDS: &[Field] = &[
    Field {
        pointer: "/meter/reading_dbm",
        name: "the reading",
        kind: &kind::POWER_LEVEL,
        limits: LEVEL_LIMITS,
        usual: "−70 to +10 dBm, or in W",
        place: |bench| Some(&mut bench.meter.as_mut()?.reading_dbm),
    },
    Field {
        pointer: "/meter/set_wavelength_nm",
        name: "the wavelength setting",
        kind: &kind::WAVELENGTH,
        limits: WAVELENGTH_LIMITS,
        usual: "850, 1310, 1550 nm",
        place: |bench| Some(&mut bench.meter.as_mut()?.set_wavelength_nm),
    },
    Field {
        pointer: "/meter/zero_offset_w",
        name: "the zero offset",
        kind: &kind::POWER,
        limits: Limits::between(-1.0, 1.0),
        usual: "empty: zeroed; what it shows in the dark, in W",
        place: |bench| Some(&mut bench.meter.as_mut()?.zero_offset_w),
    },
    Field {
        pointer: "/meter/comparison/reading_dbm",
        name: "the reading to compare with",
        kind: &kind::POWER_LEVEL,
        limits: LEVEL_LIMITS,
        usual: "of the same meter, in dBm or W",
        place: |bench| Some(&mut comparison(bench)?.reading_dbm),
    },
    Field {
        pointer: "/meter/comparison/set_wavelength_nm",
        name: "the wavelength setting of the other reading",
        kind: &kind::WAVELENGTH,
        limits: WAVELENGTH_LIMITS,
        usual: "empty: the same setting",
        place: |bench| Some(&mut comparison(bench)?.set_wavelength_nm),
    },
    Field {
        pointer: "/meter/comparison/wavelength_nm",
        name: "the wavelength of the other light",
        kind: &kind::WAVELENGTH,
        limits: WAVELENGTH_LIMITS,
        usual: "empty: the same light",
        place: |bench| Some(&mut comparison(bench)?.wavelength_nm),
    },
    Field {
        pointer: "/meter/certificate/coverage_factor",
        name: "the coverage factor k",
        kind: &kind::NUMBER,
        limits: Limits::between(1.0, 10.0),
        usual: "2, as the certificate states",
        place: |bench| Some(&mut certificate(bench)?.coverage_factor),
    },
    Field {
        pointer: "/meter/certificate/point_correlation",
        name: "the correlation between points",
        kind: &kind::FRACTION,
        limits: Limits::between(0.0, 1.0),
        usual: "empty: 1, one common scale",
        place: |bench| Some(&mut certificate(bench)?.point_correlation),
    },
    Field {
        pointer: "/meter/certificate/scale",
        name: "the scale of the certificate",
        kind: &kind::NUMBER,
        limits: Limits::between(0.5, 2.0),
        usual: "empty: 1, as certified",
        place: |bench| Some(&mut certificate(bench)?.scale),
    },
];

fn comparison(bench: &mut super::Bench) -> Option<&mut Comparison> {
    bench.meter.as_mut()?.comparison.as_mut()
}

fn certificate(bench: &mut super::Bench) -> Option<&mut Certificate> {
    bench.meter.as_mut()?.certificate.as_mut()
}

impl CertificateForm {
    /// The forms by the words that stand for them.
    pub const WORDS: &[(&'static str, CertificateForm)] = &[
        ("responsivity", CertificateForm::Responsivity),
        ("correction_factor", CertificateForm::CorrectionFactor),
    ];

    /// The word that stands for this form.
    pub fn word(self) -> &'static str {
        match self {
            CertificateForm::Responsivity => "responsivity",
            CertificateForm::CorrectionFactor => "correction_factor",
        }
    }
}

impl Meter {
    /// Reads a meter.
    pub fn read(tree: Option<&Tree>, reader: &mut Reader) -> Option<Meter> {
        let keys = [
            "reading_dbm",
            "set_wavelength_nm",
            "zero_offset_w",
            "comparison",
            "certificate",
            "typical_curve",
            "table_wavelengths_nm",
        ];
        let map = reader.part(tree, "/meter", &keys)?;
        let typical = map.get("typical_curve");
        Some(Meter {
            reading_dbm: reader.number(map.get("reading_dbm"), "/meter/reading_dbm"),
            set_wavelength_nm: reader.number(map.get("set_wavelength_nm"), "/meter/set_wavelength_nm"),
            zero_offset_w: reader.number(map.get("zero_offset_w"), "/meter/zero_offset_w"),
            comparison: read_comparison(map.get("comparison"), reader),
            certificate: read_certificate(map.get("certificate"), reader),
            typical_curve: points::read_responsivity(typical, "/meter/typical_curve", reader),
            table_wavelengths_nm: read_wavelengths(map.get("table_wavelengths_nm"), reader),
        })
    }
}

fn read_comparison(tree: Option<&Tree>, reader: &mut Reader) -> Option<Comparison> {
    const AT: &str = "/meter/comparison";
    let map = reader.part(tree, AT, &["reading_dbm", "set_wavelength_nm", "wavelength_nm"])?;
    let mut number = |key: &str| reader.number(map.get(key), &format!("{AT}/{key}"));
    Some(Comparison {
        reading_dbm: number("reading_dbm"),
        set_wavelength_nm: number("set_wavelength_nm"),
        wavelength_nm: number("wavelength_nm"),
    })
}

fn read_certificate(tree: Option<&Tree>, reader: &mut Reader) -> Option<Certificate> {
    const AT: &str = "/meter/certificate";
    let map = reader.part(tree, AT, &["form", "coverage_factor", "point_correlation", "scale", "points"])?;
    let mut number = |key: &str| reader.number(map.get(key), &format!("{AT}/{key}"));
    let (coverage_factor, point_correlation) = (number("coverage_factor"), number("point_correlation"));
    let scale = number("scale");
    let form = reader.word(map.get("form"), &format!("{AT}/form"), CertificateForm::WORDS);
    if map.get("points").is_none_or(Tree::is_null) {
        reader.missing(&format!("{AT}/points"), "A certificate needs its points: wavelength and value.");
    }
    let points = read_points(map.get("points"), &format!("{AT}/points"), reader)?;
    (!points.is_empty()).then_some(Certificate {
        form: form?,
        coverage_factor,
        point_correlation,
        scale,
        points,
    })
}

fn read_points(tree: Option<&Tree>, pointer: &str, reader: &mut Reader) -> Option<Vec<CertificatePoint>> {
    let keys = ["wavelength_nm", "value", "expanded_percent"];
    let mut points = points::read_rows(tree, pointer, reader, &keys, |row, at, reader| {
        let wavelength_nm = points::wavelength(row, at, reader);
        let (at_value, at_expanded) = (format!("{at}/value"), format!("{at}/expanded_percent"));
        let limits = Limits::above(0.0, 1e3);
        let value = reader.of_kind(row.get("value"), &at_value, "the value", &kind::NUMBER, &limits);
        if row.get("value").is_none_or(Tree::is_null) {
            reader.missing(&at_value, "Each point needs a value: a responsivity or a correction factor.");
        }
        let limits = Limits::between(0.0, 100.0);
        let name = "the expanded uncertainty";
        let expanded =
            reader.of_kind(row.get("expanded_percent"), &at_expanded, name, &kind::PERCENT, &limits);
        Some(CertificatePoint {
            wavelength_nm: wavelength_nm?,
            value: value?.value,
            expanded_percent: expanded.map(|expanded| expanded.value),
        })
    })?;
    points::sort_apart(&mut points, |point| point.wavelength_nm, pointer, reader);
    Some(points)
}

/// A list of numbers; a person may type it as one text, parted by semicolons or spaces.
fn read_wavelengths(tree: Option<&Tree>, reader: &mut Reader) -> Option<Vec<f64>> {
    const AT: &str = "/meter/table_wavelengths_nm";
    let split;
    let (items, from_text) = match tree? {
        Tree::Text(text) if reader.mark().is_some() => {
            let words = text.replace("nm", " ");
            let parts = words.split([';', ' ', '\t', '\n']).map(|part| part.trim_end_matches(','));
            split = parts.filter(|part| !part.is_empty()).map(Tree::from).collect::<Vec<_>>();
            (split.as_slice(), true)
        }
        other => (reader.list(Some(other), AT)?, false),
    };
    let mut wavelengths = Vec::with_capacity(items.len());
    for (index, item) in items.iter().enumerate() {
        // A field that holds the whole list owns the faults of its items.
        let at = if from_text { AT.to_owned() } else { format!("{AT}/{index}") };
        let name = "a wavelength of the table";
        let number = reader.of_kind(Some(item), &at, name, &kind::WAVELENGTH, &WAVELENGTH_LIMITS);
        wavelengths.extend(number.map(|number| number.value));
    }
    (!wavelengths.is_empty()).then_some(wavelengths)
}

//! What is a detector worth that was compared with a calibrated one?

mod choices;
mod export;
mod shown;

use super::needs::Needs;
use super::reading::certified::Certified;
use super::shown::Shown;
use crate::bench::Bench;
use crate::bench::meter::{Certificate, CertificateForm, CertificatePoint};
use crate::fault::{Code, Fault, Faults};
use crate::physics::decibel::db_from_ratio;
use crate::record::{Comparison, ReadBlock, Reading, read_comparison};
use crate::statistics::transfer::{
    Block, Uncertain, combined, compared, coverage_factor, mean_and_deviation,
};
use crate::tree::Tree;
pub use choices::{Contribution, TransferChoices};
use serde::Serialize;

/// A calibration by comparison: the certificate that comes of it, and where it comes from.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Transfer {
    /// How the table of readings was understood.
    pub reading: Reading,
    /// One a wavelength, in rising order.
    pub rows: Vec<TransferRow>,
    /// The new certificate, ready to stand on a bench under `/meter/certificate`.
    pub certificate: Certificate,
    /// What U is to cover.
    pub coverage_probability: f64,
    /// Where it comes from.
    pub history: History,
    /// The certificate as CSV with its history; the reader of certificates takes it back.
    pub csv: String,
    /// The result as it is shown.
    pub shown: Shown,
}

/// The result at one wavelength.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct TransferRow {
    /// Wavelength of the light, to which both meters are set, nm.
    pub wavelength_nm: f64,
    /// True power over what the detector under test shows.
    pub correction_factor: f64,
    /// Reading of the reference over that of the detector under test, without drift: one a block.
    pub ratios: Vec<f64>,
    /// Standard deviation of one block's ratio, per cent.
    pub scatter_percent: f64,
    /// Mean drift of the light, dB per second, or per reading where the table has no times.
    pub drift_db: f64,
    /// Correction factor of the reference by its own certificate; 1 for a certificate of responsivities.
    pub reference_factor: f64,
    /// Standard uncertainty from the blocks: scatter over the root of their number, per cent.
    pub type_a_percent: f64,
    /// Standard uncertainty from the reference's certificate, per cent.
    pub reference_percent: f64,
    /// Combined standard uncertainty, per cent.
    pub standard_percent: f64,
    /// Effective degrees of freedom; absent where they are infinite.
    pub effective_degrees_of_freedom: Option<f64>,
    /// Student's factor for them alone.
    pub student_factor: f64,
    /// Expanded uncertainty with the certificate's k, per cent.
    pub expanded_percent: f64,
}

/// Where a calibration comes from.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct History {
    /// When the readings were taken, `2026-11-30`.
    pub date: String,
    /// The number of the reference's certificate.
    pub reference_certificate: String,
    /// What the reference is; empty where nothing was said.
    pub reference_device: String,
    /// What the detector under test is; empty where nothing was said.
    pub test_device: String,
    /// Further standard uncertainties that are in U.
    pub contributions: Vec<Contribution>,
    /// The same in sentences, for a file.
    pub lines: Vec<String>,
}

const TABLE: &str = "/meter/certificate";

/// Compares a detector with the reference on the bench: `text` holds the readings, `bench` the reference's certificate
/// as that of its meter.
///
/// ```text
/// C = C_ref(λ) · exp(mean of ln(P_ref/P_test)),   u²/C² = s²/n + u²_ref + Σ u²ᵢ,   U = k u
/// ```
///
/// One k holds for the whole table, the greatest of Student's factors at its wavelengths, so that U covers at least
/// what it is to cover.
///
/// Source: the definition of the correction factor in IEC 61315 used twice, for both meters in the same light; of the
/// uncertainties, JCGM 100:2008, 4.2, 5.1 and G.4.
pub fn transfer_calibration(text: &str, bench: &Bench, choices: &Tree) -> Result<Transfer, Faults> {
    let (choices, mut faults) = TransferChoices::from_tree(choices, "/choices");
    let certified = reference(bench).map_err(|found| faults.extend(found)).ok();
    let comparison = read_comparison(text, &choices.table, choices.reference.as_deref());
    let comparison = comparison.map_err(|found| faults.extend(found)).ok();
    let rows = match (&certified, &comparison) {
        (Some(certified), Some(comparison)) => {
            rows(certified, comparison, &choices).map_err(|found| faults.extend(found)).ok()
        }
        _ => None,
    };
    let (Some(comparison), Some(mut rows), true) = (comparison, rows, faults.is_empty()) else {
        return Err(faults);
    };
    let k = rows.iter().map(|row| row.student_factor).fold(1.0, f64::max);
    for row in &mut rows {
        row.expanded_percent = k * row.standard_percent;
    }
    let points = rows.iter().map(|row| CertificatePoint {
        wavelength_nm: row.wavelength_nm,
        value: row.correction_factor,
        expanded_percent: Some(row.expanded_percent),
    });
    let certificate = Certificate {
        form: CertificateForm::CorrectionFactor,
        coverage_factor: Some(k),
        // Of how much the reference's common error is in each point the table does not keep track: the cautious choice.
        point_correlation: None,
        scale: None,
        points: points.collect(),
    };
    let history = export::history(&choices, &rows);
    let csv = export::csv(&certificate, &rows, &history, comparison.reading.decimal_mark);
    let mut transfer = Transfer {
        reading: comparison.reading,
        rows,
        certificate,
        coverage_probability: choices.coverage_probability,
        history,
        csv,
        shown: Shown::default(),
    };
    transfer.shown = shown::shown(&transfer, &choices, comparison.has_times);
    Ok(transfer)
}

/// The reference as its certificate describes it; each point must state an uncertainty.
fn reference(bench: &Bench) -> Result<Certified<'_>, Faults> {
    let mut needs = Needs::default();
    let meter =
        needs.part(&bench.meter, "/meter", "The reference is needed: the meter with its certificate.");
    let sentence = "The reference's certificate is needed: its values at wavelengths.";
    let certificate = meter.and_then(|meter| needs.part(&meter.certificate, TABLE, sentence));
    if let Some(certificate) = certificate {
        if certificate.coverage_factor.is_none() {
            let sentence = "The coverage factor k of the reference's certificate is needed.";
            needs.faults.push(Fault::missing(&format!("{TABLE}/coverage_factor"), sentence));
        }
        if certificate.points.iter().any(|point| point.expanded_percent.is_none()) {
            let sentence = "Each point of the reference's certificate needs its expanded uncertainty.";
            needs.faults.push(Fault::missing(&format!("{TABLE}/points"), sentence));
        }
    }
    let certified = meter
        .zip(certificate)
        .and_then(|(meter, certificate)| needs.found(Certified::new(bench, meter, certificate)));
    needs.all(certified)
}

/// All wavelengths, in rising order; the faults of all of them at once.
fn rows(
    certified: &Certified,
    comparison: &Comparison,
    choices: &TransferChoices,
) -> Result<Vec<TransferRow>, Faults> {
    let mut wavelengths: Vec<f64> = comparison.blocks.iter().map(|block| block.wavelength_nm).collect();
    wavelengths.sort_by(f64::total_cmp);
    wavelengths.dedup();
    let (mut rows, mut faults) = (Vec::new(), Faults::new());
    for wavelength_nm in wavelengths {
        let blocks = comparison.blocks.iter().filter(|block| block.wavelength_nm == wavelength_nm);
        match row(certified, wavelength_nm, &blocks.collect::<Vec<_>>(), choices) {
            Ok(row) => rows.push(row),
            Err(fault) => faults.push(fault),
        }
    }
    if faults.is_empty() { Ok(rows) } else { Err(faults) }
}

fn row(
    certified: &Certified,
    wavelength_nm: f64,
    blocks: &[&ReadBlock],
    choices: &TransferChoices,
) -> Result<TransferRow, Fault> {
    let at_text = |code, sentence: String| Fault::new("", code, Tree::Number(wavelength_nm), &sentence);
    let found = certified.at(wavelength_nm, wavelength_nm).map_err(|fault| {
        // The wavelength stands in the text here, not in the bench.
        Fault { pointer: String::new(), ..fault }
    })?;
    let by_certificate = certified.relative_standard(wavelength_nm).ok_or_else(|| {
        at_text(
            Code::Missing,
            format!("The reference's certificate states no uncertainty at {wavelength_nm} nm."),
        )
    })?;
    let compared: Option<Vec<Block>> = blocks.iter().map(|block| ratio(block)).collect();
    let compared = compared.ok_or_else(|| {
        at_text(Code::Conflict, format!("At {wavelength_nm} nm drift and ratio cannot be told apart."))
    })?;
    let ln_ratios: Vec<f64> = compared.iter().map(|block| block.ln_ratio).collect();
    let (mean, deviation) = mean_and_deviation(&ln_ratios).ok_or_else(|| {
        let sentence = format!(
            "Two blocks at least are needed at {wavelength_nm} nm, or nothing is known of their scatter."
        );
        at_text(Code::Missing, sentence)
    })?;
    let count = ln_ratios.len() as f64;
    let type_a = deviation / count.sqrt();
    let mut parts = vec![
        Uncertain { standard: type_a, degrees_of_freedom: count - 1.0 },
        Uncertain {
            standard: by_certificate,
            degrees_of_freedom: choices.reference_degrees_of_freedom.unwrap_or(f64::INFINITY),
        },
    ];
    parts.extend(choices.contributions.iter().map(Contribution::uncertain));
    let whole = combined(&parts);
    let correction_factor = found.factor * libm::exp(mean);
    let drift = compared.iter().map(|block| block.drift).sum::<f64>() / count;
    if !(correction_factor > 1e-3 && correction_factor < 1e3) {
        let sentence = format!(
            "At {wavelength_nm} nm the detector under test would need a correction factor of {correction_factor:.3e}, \
             which is no factor of a meter: check units and ranges of the readings."
        );
        return Err(at_text(Code::Range, sentence));
    }
    Ok(TransferRow {
        wavelength_nm,
        correction_factor,
        ratios: ln_ratios.iter().map(|ln| libm::exp(*ln)).collect(),
        scatter_percent: deviation * 100.0,
        drift_db: db_from_ratio(libm::exp(drift)),
        reference_factor: found.factor,
        type_a_percent: type_a * 100.0,
        reference_percent: by_certificate * 100.0,
        standard_percent: whole.standard * 100.0,
        effective_degrees_of_freedom: Some(whole.degrees_of_freedom).filter(|nu| nu.is_finite()),
        student_factor: coverage_factor(choices.coverage_probability, whole.degrees_of_freedom.max(1.0)),
        expanded_percent: 0.0,
    })
}

fn ratio(block: &ReadBlock) -> Option<Block> {
    let ln = |readings: &[(f64, f64)]| -> Vec<(f64, f64)> {
        readings.iter().map(|(time, power_w)| (*time, libm::log(*power_w))).collect()
    };
    compared(&ln(&block.reference), &ln(&block.test))
}

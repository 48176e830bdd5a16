//! The new certificate as a file, with where it comes from.

use super::{History, TransferChoices, TransferRow};
use crate::bench::meter::Certificate;
use crate::quantity::write::brief;
use crate::record::{DecimalMark, number_text, remark, write_certificate_points};

/// Where it comes from, in sentences.
pub(super) fn history(choices: &TransferChoices, rows: &[TransferRow]) -> History {
    let one_line = |text: &str| text.split_whitespace().collect::<Vec<_>>().join(" ");
    let (date, reference_certificate) = (choices.date.clone(), one_line(&choices.reference_certificate));
    let (reference_device, test_device) =
        (one_line(&choices.reference_device), one_line(&choices.test_device));
    let or_unsaid = |text: &str| if text.is_empty() { "not stated".to_owned() } else { text.to_owned() };
    let blocks: Vec<String> = rows
        .iter()
        .map(|row| format!("{} at {} nm", row.ratios.len(), brief(row.wavelength_nm, 7)))
        .collect();
    let mut lines = vec![
        format!("Transfer calibration by comparison, {date}"),
        format!("Detector under test: {}", or_unsaid(&test_device)),
        format!("Reference: {}, certificate {reference_certificate}", or_unsaid(&reference_device)),
        format!("Blocks of four readings: {}", blocks.join("; ")),
        format!(
            "Coverage probability at least {} %; k is the greatest of Student's factors at these wavelengths",
            brief(choices.coverage_probability * 100.0, 5)
        ),
    ];
    lines.extend(choices.contributions.iter().map(|part| {
        format!(
            "In the uncertainty: {}, {} % standard",
            one_line(&part.name),
            brief(part.standard_percent, 4)
        )
    }));
    History {
        date,
        reference_certificate,
        reference_device,
        test_device,
        contributions: choices.contributions.clone(),
        lines,
    }
}

/// A table that spreadsheets open and [`crate::record::read_certificate`] takes back bit by bit: commas between cells
/// beside a decimal point, semicolons beside a decimal comma.
pub(super) fn csv(
    certificate: &Certificate,
    rows: &[TransferRow],
    history: &History,
    mark: DecimalMark,
) -> String {
    let parting = match mark {
        DecimalMark::Point => ",",
        DecimalMark::Comma => ";",
    };
    let k = certificate.coverage_factor;
    let table = write_certificate_points(certificate.form, k, &certificate.points, mark);
    let more = std::iter::once("Blocks\tScatter of a block / %".to_owned()).chain(
        rows.iter().map(|row| format!("{}\t{}", row.ratios.len(), number_text(row.scatter_percent, mark))),
    );
    let remarks = history.lines.iter().map(|line| remark(line));
    let lines =
        table.lines().zip(more).map(|(line, more)| format!("{line}\t{more}\n").replace('\t', parting));
    remarks.chain(lines).collect()
}

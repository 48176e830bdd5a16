//! The calibration as it is shown.

use super::{Transfer, TransferChoices};
use crate::quantity::write::{brief, fixed, significant};
use crate::questions::shown::{Fact, GLASS, Headline, INVISIBLE_LIGHT, Shown, Table};

/// Fewer degrees of freedom than this make U mostly a statement about the count of blocks.
const FEW_DEGREES: f64 = 5.0;

/// A drift within a block above this share of the scatter's own size is worth a word, dB.
const STRONG_DRIFT_DB: f64 = 0.05;

/// The result, ready to be shown.
pub(super) fn shown(transfer: &Transfer, choices: &TransferChoices, has_times: bool) -> Shown {
    Shown {
        headline: headline(transfer),
        facts: facts(transfer),
        budgets: Vec::new(),
        tables: vec![table(transfer, has_times)],
        cautions: vec![INVISIBLE_LIGHT, GLASS],
        doubts: doubts(transfer, choices, has_times),
        notes: notes(choices),
    }
}

fn headline(transfer: &Transfer) -> Headline {
    let k = transfer.certificate.coverage_factor.unwrap_or(1.0);
    let factors: Vec<String> = transfer
        .rows
        .iter()
        .map(|row| format!("{} at {} nm", factor(row.correction_factor), brief(row.wavelength_nm, 7)))
        .collect();
    let worst = transfer.rows.iter().map(|row| row.expanded_percent).fold(0.0, f64::max);
    Headline {
        figure: factors.first().cloned().unwrap_or_default(),
        sentence: format!(
            "is the new correction factor{}; the expanded uncertainty is at most {} % (k = {}, at least {} %).",
            match factors.get(1..) {
                Some(more) if !more.is_empty() => format!(", {}", more.join(", ")),
                _ => String::new(),
            },
            significant(worst, 2),
            brief(k, 3),
            brief(transfer.coverage_probability * 100.0, 5)
        ),
        uncertainty: String::new(),
        copy: transfer.rows.first().map_or_else(String::new, |row| row.correction_factor.to_string()),
    }
}

fn factor(value: f64) -> String {
    fixed(value, 5)
}

fn facts(transfer: &Transfer) -> Vec<Fact> {
    let blocks: usize = transfer.rows.iter().map(|row| row.ratios.len()).sum();
    vec![
        Fact::given("Blocks", blocks as f64),
        Fact::given("Wavelengths", transfer.rows.len() as f64),
        Fact::number("Coverage factor", transfer.certificate.coverage_factor.unwrap_or(1.0))
            .noted("the greatest of Student’s factors at the wavelengths"),
    ]
}

fn table(transfer: &Transfer, has_times: bool) -> Table {
    let drift = if has_times { "Drift / (dB/s)" } else { "Drift / (dB/reading)" };
    let columns = [
        "Light at / nm",
        "Correction factor",
        "Blocks",
        "Scatter / %",
        drift,
        "u of the blocks / %",
        "u of the reference / %",
        "u / %",
        "Degrees of freedom",
        "U / %",
    ];
    let rows = transfer.rows.iter().map(|row| {
        let degrees = row.effective_degrees_of_freedom.map_or("∞".to_owned(), |nu| brief(nu.floor(), 6));
        vec![
            brief(row.wavelength_nm, 7),
            factor(row.correction_factor),
            row.ratios.len().to_string(),
            significant(row.scatter_percent, 2),
            significant(row.drift_db, 2),
            significant(row.type_a_percent, 2),
            significant(row.reference_percent, 2),
            significant(row.standard_percent, 2),
            degrees,
            significant(row.expanded_percent, 2),
        ]
    });
    Table {
        title: "The comparison, wavelength by wavelength".to_owned(),
        columns: columns.map(str::to_owned).to_vec(),
        rows: rows.collect(),
    }
}

fn doubts(transfer: &Transfer, choices: &TransferChoices, has_times: bool) -> Vec<String> {
    let mut doubts = Vec::new();
    let few =
        transfer.rows.iter().filter_map(|row| row.effective_degrees_of_freedom).fold(f64::INFINITY, f64::min);
    if few < FEW_DEGREES {
        doubts.push(format!(
            "With {} effective degrees of freedom the uncertainty is mostly that of the scatter’s own estimate. Take \
             more blocks.",
            brief(few.floor(), 3)
        ));
    }
    let strongest = transfer.rows.iter().map(|row| row.drift_db.abs()).fold(0.0, f64::max);
    if !has_times && strongest > STRONG_DRIFT_DB {
        doubts.push(format!(
            "The light drifts by {} dB from one reading to the next. Let the source warm up, or note the times: even \
             intervals were assumed.",
            significant(strongest, 2)
        ));
    }
    let left_out = transfer.reading.bad_rows.len();
    if left_out > 0 {
        doubts.push(format!(
            "{left_out} rows belong to no block and were left out. Look at them before you rely on the rest."
        ));
    }
    if choices.contributions.is_empty() {
        doubts.push(
            "Only the scatter of the blocks and the reference’s certificate are in the uncertainty. Add what else \
             counts: connectors, linearity, the reference’s drift since its calibration."
                .to_owned(),
        );
    }
    doubts
}

fn notes(choices: &TransferChoices) -> Vec<String> {
    let mut notes = vec![
        "Correction factor = reference’s factor × exp(mean of ln(reference/test)), both meters being set to the light’s \
         wavelength. A certificate of responsivities means that the reference shows true power there."
            .to_owned(),
        "In each block of four readings a drift that is linear in dB is removed by least squares.".to_owned(),
        "Combined by JCGM 100:2008, eq. (10); effective degrees of freedom by Welch and Satterthwaite (G.4); one coverage \
         factor for the whole table, the greatest."
            .to_owned(),
        "The light is taken as one wavelength.".to_owned(),
    ];
    if choices.reference_degrees_of_freedom.is_none() {
        notes.push("The reference’s uncertainty counts with infinite degrees of freedom.".to_owned());
    }
    notes
}

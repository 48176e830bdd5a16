//! The coverage factor of a table.

use super::columns::Columns;
use super::layout::Layout;
use super::reading::BadRow;
use super::rows::Row;
use super::words::{Heading, coverage_factor, is_coverage, is_standard_uncertainty};

/// The coverage factor, from wherever it is stated; `None` when it is not, or not once.
pub(super) fn coverage(
    rows: &[Row],
    layout: Layout,
    headings: &[Heading],
    columns: &Columns,
    bad_rows: &[BadRow],
    said: &mut Vec<String>,
) -> Option<f64> {
    let expanded = columns.expanded.and_then(|expanded| headings.get(expanded.index));
    if expanded.is_some_and(|heading| is_standard_uncertainty(&heading.text)) {
        said.push("The uncertainty is a standard uncertainty; its coverage factor is 1.".to_owned());
        return Some(1.0);
    }
    let mut found: Vec<(f64, usize)> = Vec::new();
    for (at, row) in rows.iter().enumerate().filter(|(at, row)| *at < layout.start || row.is_remark()) {
        if Some(at) == layout.header {
            found.extend(headings.iter().filter_map(|h| coverage_factor(&h.text)).map(|k| (k, row.line)));
        } else {
            found.extend(coverage_factor(row.text).map(|k| (k, row.line)));
        }
    }
    found.extend(bad_rows.iter().filter_map(|row| Some((coverage_factor(&row.text)?, row.line))));
    // A column of its own, the same on every row.
    if let Some(column) = headings.iter().position(|heading| is_coverage(&heading.text)) {
        let below = rows.get(layout.start..).unwrap_or_default().iter();
        found.extend(
            below.filter_map(|row| Some((coverage_factor(&format!("k={}", row.cell(column)))?, row.line))),
        );
    }
    let (k, line) = found.first().copied()?;
    match found.iter().find(|(other, _)| *other != k) {
        None => {
            said.push(format!("The coverage factor k = {k} was read from line {line}."));
            Some(k)
        }
        Some((other, other_line)) => {
            said.push(format!(
                "Two coverage factors are stated, {k} on line {line} and {other} on line {other_line}; none was \
                 taken."
            ));
            None
        }
    }
}

//! Which mark stands before the tenths, decided from the whole table.

use super::cell::{Cell, Marks};
use super::names::{DecimalMark, Delimiter};
use super::rows::Row;

/// The decision, or why there is none.
pub(super) enum Decision {
    /// This mark, and if the table had to be weighed, a sentence about it.
    Clear(DecimalMark, Option<String>),
    /// Two readings are possible; the sentence spells both out.
    Open(String),
}

/// Decides from the cells of the columns that are read.
pub(super) fn decided(rows: &[Row], columns: &[usize], delimiter: Delimiter, has_header: bool) -> Decision {
    let cells = rows
        .iter()
        .filter(|row| !row.is_remark())
        .flat_map(|row| columns.iter().map(|&index| row.cell(index)));
    decided_by(cells, delimiter, has_header, has_three_cells(rows))
}

/// Decides from the texts of cells.
pub(super) fn decided_by<'c>(
    cells: impl Iterator<Item = &'c str>,
    delimiter: Delimiter,
    has_header: bool,
    has_three_cells: bool,
) -> Decision {
    let (mut points, mut commas) = (0_usize, 0_usize);
    let (mut either_point, mut either_comma) = (0_usize, None);
    for text in cells {
        match Cell::cut(text).map(|cell| cell.marks()) {
            Some(Marks::Point) => points += 1,
            Some(Marks::Comma) => commas += 1,
            Some(Marks::EitherPoint) => either_point += 1,
            Some(Marks::EitherComma) => either_comma = either_comma.or(Some(text)),
            Some(Marks::Silent) | None => {}
        }
    }
    match (points, commas, either_comma) {
        (0, 0, Some(text)) => Decision::Open(both_readings(text)),
        (0, 0, None)
            if delimiter == Delimiter::Comma && either_point == 0 && !has_header && has_three_cells =>
        {
            Decision::Open(
                "It cannot be told whether the commas part cells or stand before the tenths, for no number \
                 has a point: choose the delimiter or the decimal mark."
                    .to_owned(),
            )
        }
        (0, 0, None) => Decision::Clear(DecimalMark::Point, None),
        (_, 0, Some(_)) => Decision::Clear(
            DecimalMark::Point,
            Some("Commas in numbers were read as marks of thousands, since other numbers have a decimal point.".to_owned()),
        ),
        (_, 0, None) => Decision::Clear(DecimalMark::Point, None),
        (0, _, _) if either_point > 0 => Decision::Clear(
            DecimalMark::Comma,
            Some("Points in numbers were read as marks of thousands, since other numbers have a decimal comma.".to_owned()),
        ),
        (0, _, _) => Decision::Clear(DecimalMark::Comma, None),
        _ if points == commas => Decision::Open(format!(
            "The decimal mark must be the same in the whole table; {points} numbers have a decimal point and as \
             many a decimal comma: choose the decimal mark."
        )),
        _ => {
            let mark = if points > commas { DecimalMark::Point } else { DecimalMark::Comma };
            let sentence = format!(
                "The decimal mark is not the same everywhere: {points} numbers have a decimal point, {commas} a \
                 decimal comma. The more frequent one was taken."
            );
            Decision::Clear(mark, Some(sentence))
        }
    }
}

fn both_readings(text: &str) -> String {
    let cell = Cell::cut(text);
    let as_mark = |mark| cell.as_ref().and_then(|cell| cell.value(mark, 0).ok()).unwrap_or_default();
    format!(
        "It cannot be told whether \"{text}\" means {} (comma before the thousands) or {} (comma before the \
         tenths), for every comma in the table could be either: choose the decimal mark.",
        as_mark(DecimalMark::Point),
        as_mark(DecimalMark::Comma)
    )
}

fn has_three_cells(rows: &[Row]) -> bool {
    rows.iter().any(|row| row.width() >= 3)
}

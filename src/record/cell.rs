//! One cell: its number, as digits, and the unit that may stand behind it.

use super::names::{DecimalMark, Unit};
use std::borrow::Cow;

/// The greatest number that is a number: instruments answer ±9.9E37 for "over range" and 9.91E37 for "no
/// reading" (SCPI-1999).
const NO_READING: f64 = 9.89e37;

/// A cell cut into the number's own text and its unit.
pub(super) struct Cell<'a> {
    /// Digits, signs, marks and exponent, with U+2212 as a hyphen and without fixed spaces.
    pub(super) number: Cow<'a, str>,
    /// The unit written behind it.
    pub(super) unit: Option<Unit>,
    /// Whether non-breaking or thin spaces were taken out.
    pub(super) spaces: bool,
    /// Whether U+2212 stood for the minus.
    pub(super) minus: bool,
}

/// What the marks in a number can mean.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Marks {
    /// No mark, or marks that fit neither reading.
    Silent,
    /// Only the point can be the decimal mark.
    Point,
    /// Only the comma can be.
    Comma,
    /// A point that parts thousands or units from tenths.
    EitherPoint,
    /// A comma that parts thousands or units from tenths.
    EitherComma,
}

/// Why a cell is no number.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Unread {
    /// It is no number under either mark.
    NoNumber,
    /// It is one under the other decimal mark.
    OtherMark,
}

impl<'a> Cell<'a> {
    /// Cuts a cell; `None` when what stands behind the digits is no unit, or there are no digits.
    pub(super) fn cut(text: &'a str) -> Option<Cell<'a>> {
        let text = text.trim();
        let (cleaned, spaces, minus) = cleaned(text);
        let end = number_end(cleaned.as_bytes());
        let rest = cleaned.get(end..)?;
        let unit = if rest.is_empty() { None } else { Some(Unit::written(rest)?) };
        let number = match cleaned {
            Cow::Borrowed(whole) => Cow::Borrowed(whole.get(..end)?),
            Cow::Owned(mut whole) => {
                whole.truncate(end);
                Cow::Owned(whole)
            }
        };
        number.bytes().any(|b| b.is_ascii_digit()).then_some(Cell { number, unit, spaces, minus })
    }

    /// The value times ten to the `shift`, correctly rounded: the shift goes into the exponent's text, not
    /// into a multiplication, so that 1.55 µm is 1550 nm and not 1550.0000000000002.
    pub(super) fn value(&self, mark: DecimalMark, shift: i32) -> Result<f64, Unread> {
        let other = match mark {
            DecimalMark::Point => DecimalMark::Comma,
            DecimalMark::Comma => DecimalMark::Point,
        };
        let unread =
            |_| if number(&self.number, other, 0).is_some() { Unread::OtherMark } else { Unread::NoNumber };
        number(&self.number, mark, shift).ok_or(()).map_err(unread)
    }

    /// What the marks can mean.
    pub(super) fn marks(&self) -> Marks {
        let (as_point, as_comma) =
            (number(&self.number, DecimalMark::Point, 0), number(&self.number, DecimalMark::Comma, 0));
        let has = |mark: char| self.number.contains(mark);
        match (as_point.is_some(), as_comma.is_some()) {
            (true, false) => Marks::Point,
            (false, true) => Marks::Comma,
            (true, true) if has(',') => Marks::EitherComma,
            (true, true) if has('.') => Marks::EitherPoint,
            _ => Marks::Silent,
        }
    }

    /// Whether it stands for "no reading", which instruments write with a point whatever the table's mark is.
    pub(super) fn is_no_reading(&self) -> bool {
        let is_great = |mark| number(&self.number, mark, 0).is_some_and(|value| value.abs() >= NO_READING);
        is_great(DecimalMark::Point) || is_great(DecimalMark::Comma)
    }

    /// Whether a mark of thousands is in it, once the decimal mark is known.
    pub(super) fn has_thousands(&self, mark: DecimalMark) -> bool {
        match mark {
            DecimalMark::Point => self.number.contains(','),
            DecimalMark::Comma => self.number.contains('.'),
        }
    }
}

/// Whether a cell is a number under one of the two marks.
pub(super) fn is_number(text: &str) -> bool {
    Cell::cut(text).is_some_and(|cell| {
        number(&cell.number, DecimalMark::Point, 0).is_some()
            || number(&cell.number, DecimalMark::Comma, 0).is_some()
    })
}

/// Takes out fixed spaces and turns U+2212 into a hyphen.
fn cleaned(text: &str) -> (Cow<'_, str>, bool, bool) {
    if text.is_ascii() {
        return (Cow::Borrowed(text), false, false);
    }
    let (mut spaces, mut minus) = (false, false);
    let mut plain = String::with_capacity(text.len());
    for character in text.chars() {
        match character {
            // Non-breaking, figure, thin and narrow non-breaking space.
            '\u{a0}' | '\u{2007}' | '\u{2009}' | '\u{202f}' => spaces = true,
            '\u{2212}' => {
                minus = true;
                plain.push('-');
            }
            other => plain.push(other),
        }
    }
    (Cow::Owned(plain), spaces, minus)
}

/// Where the number's own text ends.
fn number_end(bytes: &[u8]) -> usize {
    let mut end = 0;
    while let Some(&byte) = bytes.get(end) {
        let follows = bytes.get(end + 1).copied().unwrap_or(b' ');
        let in_number = match byte {
            b'0'..=b'9' | b'.' | b',' | b'+' | b'-' => true,
            b'e' | b'E' => end > 0 && (follows.is_ascii_digit() || matches!(follows, b'+' | b'-')),
            _ => false,
        };
        if !in_number {
            break;
        }
        end += 1;
    }
    end
}

/// Reads digits under one decimal mark; the other mark may part thousands. `None` when that does not work out
/// or the number is too great for one.
fn number(text: &str, mark: DecimalMark, shift: i32) -> Option<f64> {
    let (mantissa, exponent) = match text.split_once(['e', 'E']) {
        Some((mantissa, exponent)) => (mantissa, Some(exponent)),
        None => (text, None),
    };
    let unsigned = mantissa.strip_prefix(['+', '-']).unwrap_or(mantissa);
    let (whole, tenths) = unsigned.split_once(mark.character()).unwrap_or((unsigned, ""));
    let digits = |part: &str| part.bytes().all(|b| b.is_ascii_digit());
    let grouped = !digits(whole);
    if whole.len() + tenths.len() == 0
        || !digits(tenths)
        || (grouped && (exponent.is_some() || !is_grouped(whole, mark)))
    {
        return None;
    }
    let value: f64 = if !grouped && shift == 0 && mark == DecimalMark::Point {
        text.parse().ok()?
    } else {
        let sign = if mantissa.starts_with('-') { "-" } else { "" };
        let exponent: i32 = exponent.map_or(Ok(0), str::parse).ok()?;
        let whole: String = whole.chars().filter(char::is_ascii_digit).collect();
        format!("{sign}{whole}.{tenths}e{}", exponent.checked_add(shift)?).parse().ok()?
    };
    value.is_finite().then_some(value)
}

/// Whether `whole` is digits in threes: `1,234,567` when the point is the decimal mark.
fn is_grouped(whole: &str, mark: DecimalMark) -> bool {
    let thousands = match mark {
        DecimalMark::Point => ',',
        DecimalMark::Comma => '.',
    };
    let mut parts = whole.split(thousands);
    let first = parts.next().unwrap_or("");
    (1..=3).contains(&first.len())
        && !first.starts_with('0')
        && first.bytes().all(|b| b.is_ascii_digit())
        && parts.all(|part| part.len() == 3 && part.bytes().all(|b| b.is_ascii_digit()))
}

#[cfg(test)]
mod tests {
    use super::*;

    fn read(text: &str, mark: DecimalMark, shift: i32) -> Option<(f64, Option<Unit>)> {
        let cell = Cell::cut(text)?;
        Some((cell.value(mark, shift).ok()?, cell.unit))
    }

    // The expected numbers are the written ones.
    #[test]
    fn a_cell_is_read_as_it_is_written() {
        use DecimalMark::{Comma, Point};
        for (text, mark, shift, expected) in [
            ("1310", Point, 0, Some((1310.0, None))),
            (" +9.1E-01 ", Point, 0, Some((0.91, None))),
            ("0,92", Comma, 0, Some((0.92, None))),
            ("1.310,5", Comma, 0, Some((1310.5, None))),
            ("1,310.5", Point, 0, Some((1310.5, None))),
            ("\u{2212}0,5 %", Comma, 0, Some((-0.5, Some(Unit::Percent)))),
            ("1\u{202f}310\u{a0}nm", Comma, 0, Some((1310.0, Some(Unit::Nanometre)))),
            ("1.55 µm", Point, 3, Some((1550.0, Some(Unit::Micrometre)))),
            ("920 mA/W", Point, -3, Some((0.92, Some(Unit::MilliamperePerWatt)))),
            (".5", Point, 0, Some((0.5, None))),
            ("2.", Point, 0, Some((2.0, None))),
            ("1e400", Point, 0, None),
            ("1e99999999999", Comma, 0, None),
            ("1..2", Point, 0, None),
            ("12,34", Point, 0, None),
            ("0,925", Point, 0, None),
            ("1 310", Point, 0, None),
            ("2E", Point, 0, None),
            ("-", Point, 0, None),
            ("e5", Point, 0, None),
            ("30.11.2026", Point, 0, None),
            ("0.92 V/W", Point, 0, None),
            ("nan", Point, 0, None),
            ("inf", Point, 0, None),
            ("", Point, 0, None),
        ] {
            assert_eq!(read(text, mark, shift), expected, "{text:?}");
        }
    }

    #[test]
    fn a_mark_speaks_only_where_it_cannot_be_a_mark_of_thousands() {
        for (text, expected) in [
            ("1310", Marks::Silent),
            ("0,9", Marks::Comma),
            ("0,925", Marks::Comma),
            ("1,234", Marks::EitherComma),
            ("1.234", Marks::EitherPoint),
            ("1,234,567", Marks::Point),
            ("1.234,5", Marks::Comma),
            ("1,234.5", Marks::Point),
            ("1,234e2", Marks::Comma),
        ] {
            assert_eq!(Cell::cut(text).map(|cell| cell.marks()), Some(expected), "{text:?}");
        }
    }
}

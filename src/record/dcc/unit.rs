//! Units as D-SI writes them: `\nano\metre`, `\ampere\watt\tothe{-1}`, `\one`.

/// What can be made of a unit here.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Dimension {
    /// A length, kept in nm.
    Length,
    /// A current over a power, kept in A/W.
    Responsivity,
    /// A ratio, kept as such.
    Ratio,
}

const PREFIXES: &[(&str, i32)] = &[
    ("tera", 12),
    ("giga", 9),
    ("mega", 6),
    ("kilo", 3),
    ("hecto", 2),
    ("deca", 1),
    ("deci", -1),
    ("centi", -2),
    ("milli", -3),
    ("micro", -6),
    ("nano", -9),
    ("pico", -12),
    ("femto", -15),
];

/// The dimension of a unit, and the power of ten from it to the unit that is kept; nothing for any other unit.
///
/// Source: D-SI 2.2.0 and the SI Brochure, 9th edition, tables 2 to 4 and 7, for the names.
pub(super) fn understood(text: &str) -> Option<(Dimension, i32)> {
    let (mut metre, mut ampere, mut watt) = (0, 0, 0);
    let mut ten = 0;
    // Of the unit at hand: the power of ten of its prefix, and whether \per stands before it.
    let (mut prefix, mut per) = (0, false);
    let mut last: Option<(&str, i32, i32)> = None;
    let mut words = text.trim().strip_prefix('\\')?.split('\\').peekable();
    while let Some(word) = words.next() {
        let word = word.trim();
        if let Some((_, power)) = PREFIXES.iter().find(|(name, _)| *name == word) {
            prefix += power;
            continue;
        }
        if word == "per" {
            per = true;
            continue;
        }
        let exponent = match words.peek().and_then(|next| next.strip_prefix("tothe{")) {
            Some(written) => {
                words.next();
                written
                    .trim()
                    .strip_suffix('}')?
                    .parse::<i32>()
                    .ok()
                    .filter(|exponent| exponent.abs() <= 9)?
            }
            None => 1,
        };
        last = Some((word, if per { -exponent } else { exponent }, prefix));
        (prefix, per) = (0, false);
        let (name, exponent, own) = last?;
        ten += own * exponent;
        match name {
            "metre" => metre += exponent,
            "ampere" => ampere += exponent,
            "watt" => watt += exponent,
            "one" => {}
            "percent" => ten -= 2 * exponent,
            "ppm" => ten -= 6 * exponent,
            _ => return None,
        }
    }
    // A prefix without a unit is none.
    last.filter(|_| prefix == 0 && !per)?;
    match (metre, ampere, watt) {
        (1, 0, 0) => Some((Dimension::Length, ten + 9)),
        (0, 1, -1) => Some((Dimension::Responsivity, ten)),
        (0, 0, 0) => Some((Dimension::Ratio, ten)),
        _ => None,
    }
}

/// A decimal number as D-SI writes it, times ten to the `shift`, correctly rounded: the shift goes into the exponent's
/// text. Nothing for anything else, NaN included.
pub(super) fn decimal(text: &str, shift: i32) -> Option<f64> {
    let (mantissa, exponent) = match text.split_once(['e', 'E']) {
        Some((mantissa, exponent)) => (mantissa, exponent.parse::<i32>().ok()?),
        None => (text, 0),
    };
    let digits = mantissa.strip_prefix(['-', '+']).unwrap_or(mantissa);
    let good = digits.bytes().all(|b| b.is_ascii_digit() || b == b'.')
        && digits.bytes().any(|b| b.is_ascii_digit())
        && digits.bytes().filter(|b| *b == b'.').count() <= 1;
    let value: f64 = format!("{mantissa}e{}", exponent.checked_add(shift)?).parse().ok()?;
    (good && value.is_finite()).then_some(value)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn units_are_understood_in_each_way_of_writing_them() {
        use Dimension::*;
        for (text, expected) in [
            (r"\nano\metre", Some((Length, 0))),
            (r"\micro\metre", Some((Length, 3))),
            (r"\metre", Some((Length, 9))),
            (r" \metre ", Some((Length, 9))),
            (r"\ampere\watt\tothe{-1}", Some((Responsivity, 0))),
            (r"\ampere\per\watt", Some((Responsivity, 0))),
            (r"\watt\tothe{-1}\ampere", Some((Responsivity, 0))),
            (r"\milli\ampere\per\watt", Some((Responsivity, -3))),
            (r"\ampere\per\milli\watt", Some((Responsivity, 3))),
            (r"\milli\ampere\milli\watt\tothe{-1}", Some((Responsivity, 0))),
            (r"\one", Some((Ratio, 0))),
            (r"\percent", Some((Ratio, -2))),
            (r"\metre\per\metre", Some((Ratio, 0))),
            (r"\volt\watt\tothe{-1}", None),
            (r"\metre\tothe{2}", None),
            (r"\watt", None),
            (r"\degreecelsius", None),
            (r"\nano", None),
            (r"\per", None),
            (r"\metre\tothe{x}", None),
            (r"\metre\tothe{999999999999}", None),
            ("nm", None),
            (r"\", None),
            ("", None),
        ] {
            assert_eq!(understood(text), expected, "{text}");
        }
    }

    #[test]
    fn numbers_are_those_of_the_schema_and_correctly_rounded() {
        for (text, shift, expected) in [
            ("1550", 0, Some(1550.0)),
            ("1.55E-6", 9, Some(1550.0)),
            ("+.5", 0, Some(0.5)),
            ("5.", 0, Some(5.0)),
            ("-0.3e1", 0, Some(-3.0)),
            ("1,5", 0, None),
            ("NaN", 0, None),
            ("inf", 0, None),
            ("1e999", 0, None),
            ("1e2147483647", 9, None),
            (".", 0, None),
            ("--1", 0, None),
            ("", 0, None),
        ] {
            assert_eq!(decimal(text, shift), expected, "{text}");
        }
    }
}

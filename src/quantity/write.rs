//! From a number to text. Rounding happens here and nowhere else.

use super::kind::{Kind, Style};

/// The true minus sign.
const MINUS: char = '\u{2212}';

const PREFIXES: [(i32, &str); 11] = [
    (-18, "a"),
    (-15, "f"),
    (-12, "p"),
    (-9, "n"),
    (-6, "µ"),
    (-3, "m"),
    (0, ""),
    (3, "k"),
    (6, "M"),
    (9, "G"),
    (12, "T"),
];

/// A number with a fixed count of decimals: `−28.01`.
pub fn fixed(value: f64, decimals: usize) -> String {
    let text = format!("{value:.decimals$}");
    // A rounded −0.00 would claim a sign that the digits do not show.
    let text = match text.strip_prefix('-') {
        Some(digits) if digits.chars().all(|c| c == '0' || c == '.') => digits.to_owned(),
        _ => text,
    };
    text.replace('-', &MINUS.to_string())
}

/// A number to so many significant figures, without a prefix or exponent where it is of ordinary size.
pub fn significant(value: f64, figures: usize) -> String {
    if value == 0.0 {
        return "0".to_owned();
    }
    let (digits, exponent) = rounded(value, figures);
    if (-4..6).contains(&exponent) { place_point(&digits, exponent) } else { scientific(value, figures) }
}

/// As [`significant`], without zeros at the end: for a number that was given, such as k = 2.
pub fn brief(value: f64, figures: usize) -> String {
    let text = significant(value, figures);
    match text.contains('.') && !text.contains('×') {
        true => text.trim_end_matches('0').trim_end_matches('.').to_owned(),
        false => text,
    }
}

/// A number as a power of ten: `1.06 × 10⁻¹²`, and `10⁻¹²` where one figure says it all.
pub fn scientific(value: f64, figures: usize) -> String {
    if value == 0.0 {
        return "0".to_owned();
    }
    let (digits, exponent) = rounded(value, figures);
    let power = format!("10{}", superscript(exponent));
    let mantissa = place_point(&digits, 0);
    let bare = mantissa.trim_end_matches('0').trim_end_matches('.');
    match bare {
        "1" => power,
        _ => format!("{mantissa} × {power}"),
    }
}

/// A value with its unit and the SI prefix that suits: `1.580 µW`.
pub fn prefixed(value: f64, unit: &str, figures: usize) -> String {
    if value == 0.0 {
        return format!("0 {unit}");
    }
    let (digits, exponent) = rounded(value, figures);
    let (power, prefix) = prefix_for(exponent);
    format!("{} {prefix}{unit}", place_point(&digits, exponent - power))
}

/// A value with its standard uncertainty as a metrologist writes it, both to two figures of the uncertainty: `1.234(15) µW`.
///
/// Units of levels and shares take no prefix.
///
/// Source: JCGM 100:2008, 7.2.2 and 7.2.6.
pub fn concise(value: f64, standard: f64, unit: &str) -> String {
    let Some(Scaled { value, decimals, power, unit }) = scaled(value, standard, unit) else {
        return prefixed(value, unit, 4);
    };
    // Without decimals the two figures may count tens: 1230(150).
    let last = standard * 10f64.powi(-power);
    let figures = match decimals {
        0 => format!("{:.0}", round_to_two(last)),
        _ => format!("{:.0}", last * 10f64.powi(i32::try_from(decimals).unwrap_or(0))),
    };
    format!("{}({figures}){}{unit}", fixed(value, decimals), if unit.is_empty() { "" } else { " " })
}

/// A value and the half-width of its interval, both to two figures of the half-width: `1.234 ± 0.015 µW`.
pub fn plus_minus(value: f64, half_width: f64, unit: &str) -> String {
    let Some(Scaled { value, decimals, power, unit }) = scaled(value, half_width, unit) else {
        return prefixed(value, unit, 4);
    };
    let half_width = half_width * 10f64.powi(-power);
    let half_width = if decimals == 0 { round_to_two(half_width) } else { half_width };
    let joined = format!("{} ± {} {unit}", fixed(value, decimals), fixed(half_width, decimals));
    joined.trim_end().to_owned()
}

/// A value in the unit with the prefix that suits, and how many decimals two figures of its uncertainty leave.
struct Scaled {
    value: f64,
    decimals: usize,
    power: i32,
    unit: String,
}

fn scaled(value: f64, uncertainty: f64, unit: &str) -> Option<Scaled> {
    if !(uncertainty > 0.0 && uncertainty.is_finite()) {
        return None;
    }
    let (_, last) = rounded(uncertainty, 2);
    let (power, prefix) = match takes_prefix(unit) {
        false => (0, ""),
        true if value == 0.0 => prefix_for(last),
        true => {
            let figures = usize::try_from(first_of(value) - last + 2).unwrap_or(1);
            let (_, first) = rounded(value, figures.max(1));
            prefix_for(first.max(last))
        }
    };
    let decimals = usize::try_from(power - last + 1).unwrap_or(0);
    let value = value * 10f64.powi(-power);
    let value = if power - last + 1 < 0 { round_at(value, last - power - 1) } else { value };
    Some(Scaled { value, decimals, power, unit: format!("{prefix}{unit}") })
}

fn takes_prefix(unit: &str) -> bool {
    !matches!(unit, "" | "dB" | "dBm" | "dB/Hz" | "%" | "%/nm" | "nm" | "A/W" | "°C" | "K")
}

fn round_to_two(value: f64) -> f64 {
    format!("{value:.1e}").parse().unwrap_or(value)
}

/// Rounded to a power of ten above 1.
fn round_at(value: f64, power: i32) -> f64 {
    let step = 10f64.powi(power);
    (value / step).round() * step
}

/// A value to three figures of its standard uncertainty: for a number that goes on as an input.
pub fn worth_keeping(value: f64, standard: f64) -> f64 {
    let figures = first_of(value) - first_of(standard) + 2;
    match usize::try_from(figures.clamp(0, 16)) {
        Ok(figures) if standard > 0.0 => format!("{value:.figures$e}").parse().unwrap_or(value),
        _ => value,
    }
}

/// The power of ten of the first figure.
fn first_of(value: f64) -> i32 {
    split(&format!("{value:e}")).1
}

/// A value of a kind as a person would type it, exactly: read back, it is the same double.
pub fn exact(value: f64, kind: &Kind) -> String {
    let shortest = format!("{value:e}");
    let (digits, exponent) = split(&shortest);
    let spaced = |number: String, unit: &str| match unit {
        "" => number,
        _ => format!("{number} {unit}"),
    };
    match kind.style {
        _ if value == 0.0 => spaced("0".to_owned(), kind.unit),
        Style::Prefixed => {
            let (power, prefix) = prefix_for(exponent);
            spaced(place_point(&digits, exponent - power), &format!("{prefix}{}", kind.unit))
        }
        Style::Scientific if (-2..4).contains(&exponent) => place_point(&digits, exponent),
        Style::Scientific => shortest.replace('-', &MINUS.to_string()),
        Style::Plain if (-7..16).contains(&exponent) => spaced(place_point(&digits, exponent), kind.unit),
        Style::Plain => spaced(shortest.replace('-', &MINUS.to_string()), kind.unit),
    }
}

/// A share in per cent, exactly: read back, it is the same double.
pub fn percent(share: f64) -> String {
    let (digits, exponent) = split(&format!("{share:e}"));
    format!("{} %", if share == 0.0 { "0".to_owned() } else { place_point(&digits, exponent + 2) })
}

/// The number for a spreadsheet or a script: the shortest text that is the same double.
pub fn plain(value: f64) -> String {
    match value != 0.0 && !(1e-4..1e15).contains(&value.abs()) {
        true => format!("{value:E}"),
        false => format!("{value}"),
    }
}

/// Sign and digits of a number rounded to so many figures, and the power of ten of the first.
fn rounded(value: f64, figures: usize) -> (String, i32) {
    split(&format!("{value:.*e}", figures.saturating_sub(1)))
}

/// `-1.5e-7` to (`-15`, −7).
fn split(text: &str) -> (String, i32) {
    let (mantissa, exponent) = text.split_once('e').unwrap_or((text, "0"));
    (mantissa.replace('.', ""), exponent.parse().unwrap_or(0))
}

/// Sets the point into sign and digits, the first of which counts 10^exponent.
fn place_point(digits: &str, exponent: i32) -> String {
    let (sign, digits) = match digits.strip_prefix('-') {
        Some(digits) => (MINUS.to_string(), digits),
        None => (String::new(), digits),
    };
    let whole = usize::try_from(exponent + 1).unwrap_or(0);
    if exponent < 0 {
        let zeros = "0".repeat(usize::try_from(-exponent - 1).unwrap_or(0));
        format!("{sign}0.{zeros}{digits}")
    } else if digits.len() <= whole {
        format!("{sign}{digits}{}", "0".repeat(whole - digits.len()))
    } else {
        format!("{sign}{}.{}", &digits[..whole], &digits[whole..])
    }
}

fn prefix_for(exponent: i32) -> (i32, &'static str) {
    let wanted = exponent.div_euclid(3) * 3;
    let clamped = wanted.clamp(-18, 12);
    PREFIXES.iter().find(|(power, _)| *power == clamped).copied().unwrap_or((0, ""))
}

fn superscript(exponent: i32) -> String {
    let digit = |c: char| match c {
        '-' => '⁻',
        '1' => '¹',
        '2' => '²',
        '3' => '³',
        '0' => '⁰',
        other => char::from_u32('⁰' as u32 + (other as u32 - '0' as u32)).unwrap_or(other),
    };
    exponent.to_string().chars().map(digit).collect()
}

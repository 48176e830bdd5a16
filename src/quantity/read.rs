//! From typed text to a number of a kind.

use super::kind::{Convert, Kind, Unit};
use super::number::{DecimalMark, Digits, digits};

/// A number as it was understood.
#[derive(Debug, PartialEq)]
pub struct Understood {
    /// The value in the unit of the bench.
    pub value: f64,
    /// The value as typed, in the unit that was typed without its prefix (1.58e-6 for "1.58 µW").
    pub typed_value: f64,
    /// The unit that was typed, without its prefix; the unit of the bench where none was.
    pub unit: &'static str,
    /// Whether the unit counts bits where the bench counts symbols.
    pub counts_bits: bool,
}

/// SI prefixes and their powers of ten. Both micro signs are on keyboards, and u stands for them.
const PREFIXES: [(&str, i32); 14] = [
    ("a", -18),
    ("f", -15),
    ("p", -12),
    ("n", -9),
    ("\u{b5}", -6),
    ("\u{3bc}", -6),
    ("u", -6),
    ("m", -3),
    ("c", -2),
    ("k", 3),
    ("M", 6),
    ("G", 9),
    ("T", 12),
    ("P", 15),
];

/// Reads `text` as a number of this kind. `Err` is the end of a sentence about what is wrong.
pub fn read(text: &str, kind: &Kind, mark: DecimalMark) -> Result<Understood, String> {
    let found = digits(text, mark)?;
    refuse_signals(found.times_ten_to(0), text)?;
    let (unit, prefix) = match found.rest {
        "" => {
            let value = finite(&found, 0, text)?;
            return Ok(Understood { value, typed_value: value, unit: kind.unit, counts_bits: false });
        }
        rest => find_unit(rest, kind).ok_or_else(|| unknown_unit(rest, kind))?,
    };
    let scaled = finite(&found, prefix + unit.exponent, text)?;
    let value = match unit.convert {
        Convert::Same | Convert::Bits => scaled,
        Convert::By(convert) => convert(scaled).map_err(|why| format!("{why} (“{text}”)"))?,
    };
    Ok(Understood {
        value,
        typed_value: finite(&found, prefix, text)?,
        unit: unit.symbol,
        counts_bits: matches!(unit.convert, Convert::Bits),
    })
}

/// What an instrument sends when it has no value (SCPI-1999, volume 1, section 7.2.1.5).
fn refuse_signals(number: f64, text: &str) -> Result<(), String> {
    match number.abs() {
        9.91e37 => Err(format!("“{text}” is how an instrument says that it has no reading")),
        9.9e37 => Err(format!("“{text}” is how an instrument says that it is over range")),
        _ => Ok(()),
    }
}

fn finite(found: &Digits, shift: i32, text: &str) -> Result<f64, String> {
    let value = found.times_ten_to(shift);
    if value.is_finite() { Ok(value) } else { Err(format!("“{text}” is too large for any number here")) }
}

/// The unit that `text` names, and the power of ten of its prefix. A whole unit goes before a prefixed one,
/// so that "m" is never milli-nothing.
fn find_unit<'k>(text: &str, kind: &'k Kind) -> Option<(&'k Unit, i32)> {
    let compact: String = text.chars().filter(|c| !c.is_whitespace()).collect();
    let whole = kind.units.iter().find(|unit| unit.symbol == compact).map(|unit| (unit, 0));
    whole.or_else(|| {
        kind.units.iter().filter(|unit| unit.prefixes).find_map(|unit| {
            let prefix = compact.strip_suffix(unit.symbol)?;
            PREFIXES.iter().find(|(symbol, _)| *symbol == prefix).map(|(_, power)| (unit, *power))
        })
    })
}

fn unknown_unit(text: &str, kind: &Kind) -> String {
    let near = near_miss(text, kind).map(|right| format!("; did you mean {right}?")).unwrap_or_default();
    match kind.unit {
        "" => format!("“{text}” stands behind the number, but this number has no unit{near}"),
        unit => format!("“{text}” is not a unit that can stand here; the unit is {unit}{near}"),
    }
}

/// The right spelling, when only capitals are wrong: "mw" for "mW", "KHz" for "kHz".
fn near_miss(text: &str, kind: &Kind) -> Option<String> {
    let lower = text.to_lowercase();
    let prefixed = |unit: &Unit| {
        let bare = std::iter::once(String::new());
        let with = PREFIXES.iter().filter(|_| unit.prefixes).map(|(prefix, _)| (*prefix).to_owned());
        bare.chain(with).map(|prefix| format!("{prefix}{}", unit.symbol)).collect::<Vec<_>>()
    };
    kind.units.iter().flat_map(prefixed).find(|right| right.to_lowercase() == lower)
}

//! Measured gains against bias, and measured excess noise against gain.

use super::choices::Choices;
use super::names::{Role, Unit};
use super::reading::{BadRow, Reading};
use super::rows::Row;
use super::sheet::{Kind, Sheet, normal};
use crate::bench::avalanche::{FACTOR_LIMITS, NoiseFactorPoint};
use crate::bench::bias::{BIAS_LIMITS, GAIN_LIMITS, GainPoint};
use crate::bench::field::Limits;
use crate::fault::{Code, Fault, Faults};
use crate::tree::Tree;
use serde::Serialize;

/// Gains against bias as read from a table.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct GainsTable {
    /// In the order of the voltages.
    pub points: Vec<GainPoint>,
    /// How the table was understood.
    pub reading: Reading,
}

/// Excess noise factors against gain as read from a table.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct NoiseFactorsTable {
    /// In the order of the gains.
    pub points: Vec<NoiseFactorPoint>,
    /// How the table was understood.
    pub reading: Reading,
}

const GAIN_WORDS: &[&str] = &["gain", "multipl", "verstark", "vervielfach", "ganancia"];

const GAINS: Kind = Kind {
    name: "A table of gains",
    words: &[
        (Role::Voltage, &["voltage", "bias", "spannung", "tension", "voltaje"]),
        (Role::Gain, GAIN_WORDS),
    ],
    needed: &[Role::Voltage, Role::Gain],
};

const NOISE_FACTORS: Kind = Kind {
    name: "A table of excess noise",
    words: &[
        (Role::NoiseFactor, &["noise", "rausch", "bruit", "ruido", "factor", "faktor", "facteur"]),
        (Role::Gain, GAIN_WORDS),
    ],
    needed: &[Role::Gain, Role::NoiseFactor],
};

/// Reads measured gains from a table: a file's text, or cells pasted from a spreadsheet.
///
/// # Example
///
/// ```
/// use leastlight::record::{Choices, read_gains};
///
/// let table = read_gains("Bias / V;Gain\n40,5;2,4\n50;6,1\n", &Choices::default()).unwrap();
/// assert_eq!((table.points[0].bias_v, table.points[0].gain), (40.5, 2.4));
/// ```
pub fn read_gains(text: &str, choices: &Choices) -> Result<GainsTable, Faults> {
    let x = Side { role: Role::Voltage, name: "bias", limits: BIAS_LIMITS };
    let y = Side { role: Role::Gain, name: "gain", limits: GAIN_LIMITS };
    let (pairs, reading) = read_pairs(text, choices, &GAINS, [x, y])?;
    let points = pairs.into_iter().map(|(bias_v, gain)| GainPoint { bias_v, gain }).collect();
    Ok(GainsTable { points, reading })
}

/// Reads measured excess noise factors, as [`read_gains`] does gains.
pub fn read_noise_factors(text: &str, choices: &Choices) -> Result<NoiseFactorsTable, Faults> {
    let x = Side { role: Role::Gain, name: "gain", limits: GAIN_LIMITS };
    let y = Side { role: Role::NoiseFactor, name: "excess noise factor", limits: FACTOR_LIMITS };
    let (pairs, reading) = read_pairs(text, choices, &NOISE_FACTORS, [x, y])?;
    let points = pairs.into_iter().map(|(gain, factor)| NoiseFactorPoint { gain, factor }).collect();
    Ok(NoiseFactorsTable { points, reading })
}

/// One of the two columns.
struct Side {
    role: Role,
    name: &'static str,
    limits: Limits,
}

/// Pairs in the order of their first number, each first number once.
fn read_pairs(
    text: &str,
    choices: &Choices,
    kind: &Kind,
    sides: [Side; 2],
) -> Result<(Vec<(f64, f64)>, Reading), Faults> {
    let text = normal(text);
    let mut sheet = Sheet::open(&text, choices, kind)?;
    let [x, y] = &sides;
    let cell = |sheet: &Sheet, row: &Row, side: &Side| -> Result<f64, String> {
        let column = sheet.column(side.role).ok_or_else(|| format!("The {} has no column.", side.name))?;
        let (value, unit) = sheet.number(row, column, side.name)?;
        if !side.limits.hold(value) {
            let behind = if unit == Unit::One { "" } else { " V" };
            let must = side.limits.sentence(|value| format!("{value}{behind}"));
            return Err(format!("The {} {must}; it is {value}{behind}.", side.name));
        }
        Ok(value)
    };
    let (mut pairs, mut bad_rows): (Vec<(f64, f64)>, Vec<BadRow>) = (Vec::new(), Vec::new());
    for row in sheet.rows() {
        match cell(&sheet, row, x).and_then(|first| Ok((first, cell(&sheet, row, y)?))) {
            Ok(pair) => pairs.push(pair),
            Err(sentence) => bad_rows.push(BadRow { line: row.line, text: row.excerpt(), sentence }),
        }
    }
    if pairs.is_empty() {
        let why =
            bad_rows.first().map_or(String::new(), |row| format!(" Line {}: {}", row.line, row.sentence));
        let sentence = format!("{} needs a row at least with a {} and a {}.{why}", kind.name, x.name, y.name);
        return Err(vec![Fault::new("", Code::Unreadable, Tree::Null, &sentence)]);
    }
    if !pairs.is_sorted_by(|one, next| one.0 <= next.0) {
        sheet.said.push(format!("The rows were put in the order of the {}.", x.name));
    }
    pairs.sort_by(|one, next| one.0.total_cmp(&next.0));
    let all = pairs.len();
    pairs.dedup_by(|next, one| next.0 == one.0);
    if pairs.len() < all {
        let twice = all - pairs.len();
        sheet.said.push(format!("Of rows with one {} the first was kept; {twice} were left out.", x.name));
    }
    let reading = sheet.reading(pairs.len(), bad_rows);
    Ok((pairs, reading))
}

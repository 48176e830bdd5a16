//! Measurements of a device: current against voltage, noise and bandwidth against gain, breakdown against temperature.

use super::choices::Choices;
use super::names::{Role, Unit};
use super::reading::{BadRow, Reading};
use super::rows::Row;
use super::sheet::{Kind, Placed, Sheet, normal};
use crate::bench::bias::{BIAS_LIMITS, GAIN_LIMITS};
use crate::bench::detector::BANDWIDTH_LIMITS;
use crate::bench::field::Limits;
use crate::bench::measurements::{
    BREAKDOWN_LIMITS, CURRENT_LIMITS, FACTOR_LIMITS, STANDARD_LIMITS, TEMPERATURE_LIMITS,
};
use crate::fault::{Code, Fault, Faults};
use crate::physics::constants::ZERO_CELSIUS_K;
use crate::tree::Tree;
use serde::Serialize;

/// A table of measurements as read.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct MeasuredTable {
    /// Each row by the names of the bench; what a row does not hold is absent.
    pub points: Vec<Vec<(&'static str, f64)>>,
    /// How the table was understood.
    pub reading: Reading,
}

/// What such a table looks like.
pub struct MeasuredKind {
    kind: Kind,
    /// The columns as they stand where no header names them, where there are enough.
    unnamed: Kind,
    columns: &'static [Side],
    /// The key of the standard uncertainty, which is that of the last column.
    standard: &'static str,
}

/// One column.
struct Side {
    key: &'static str,
    role: Role,
    name: &'static str,
    limits: Limits,
    needed: bool,
}

const STANDARD_WORDS: (Role, &[&str]) = (
    Role::Standard,
    &["uncert", "unsicher", "incert", "std", "standard", "sigma", "deviation", "abweichung", "error", "±"],
);

const VOLTAGE_WORDS: &[&str] = &["voltage", "bias", "spannung", "tension", "voltaje", "reverse"];

const GAIN_WORDS: &[&str] = &["gain", "multipl", "verstark", "vervielfach", "ganancia"];

const IV_WORDS: &[(Role, &[&str])] = &[
    STANDARD_WORDS,
    (Role::DarkCurrent, &["dark", "dunkel", "obscur", "sombre", "oscur", "idk", "i_d"]),
    (Role::Voltage, VOLTAGE_WORDS),
    (
        Role::Current,
        &[
            "light",
            "illum",
            "photo",
            "hell",
            "licht",
            "lumi",
            "luz",
            "current",
            "strom",
            "courant",
            "corriente",
        ],
    ),
];

/// Current against voltage, dark and under light.
pub const CURRENTS: MeasuredKind = MeasuredKind {
    kind: Kind { name: "A table of currents", words: IV_WORDS, needed: &[Role::Voltage, Role::Current] },
    unnamed: Kind {
        name: "A table of currents",
        words: IV_WORDS,
        needed: &[Role::Voltage, Role::DarkCurrent, Role::Current],
    },
    columns: &[
        Side { key: "bias_v", role: Role::Voltage, name: "voltage", limits: BIAS_LIMITS, needed: true },
        Side {
            key: "dark_a",
            role: Role::DarkCurrent,
            name: "dark current",
            limits: CURRENT_LIMITS,
            needed: false,
        },
        Side {
            key: "light_a",
            role: Role::Current,
            name: "current under light",
            limits: CURRENT_LIMITS,
            needed: true,
        },
    ],
    standard: "standard_a",
};

const NOISE: Kind = Kind {
    name: "A table of excess noise",
    words: &[
        STANDARD_WORDS,
        (Role::NoiseFactor, &["noise", "rausch", "bruit", "ruido", "factor", "faktor", "facteur"]),
        (Role::Gain, GAIN_WORDS),
    ],
    needed: &[Role::Gain, Role::NoiseFactor],
};

/// Excess noise factor against gain.
pub const NOISES: MeasuredKind = MeasuredKind {
    kind: NOISE,
    unnamed: NOISE,
    columns: &[
        Side { key: "gain", role: Role::Gain, name: "gain", limits: GAIN_LIMITS, needed: true },
        Side {
            key: "factor",
            role: Role::NoiseFactor,
            name: "excess noise factor",
            limits: FACTOR_LIMITS,
            needed: true,
        },
    ],
    standard: "standard",
};

const BANDWIDTH: Kind = Kind {
    name: "A table of bandwidths",
    words: &[
        STANDARD_WORDS,
        (Role::Bandwidth, &["bandwidth", "bandbreite", "bande", "banda", "frequen", "f3db", "f_3db"]),
        (Role::Gain, GAIN_WORDS),
    ],
    needed: &[Role::Gain, Role::Bandwidth],
};

/// Bandwidth against gain.
pub const BANDWIDTHS: MeasuredKind = MeasuredKind {
    kind: BANDWIDTH,
    unnamed: BANDWIDTH,
    columns: &[
        Side { key: "gain", role: Role::Gain, name: "gain", limits: GAIN_LIMITS, needed: true },
        Side {
            key: "bandwidth_hz",
            role: Role::Bandwidth,
            name: "bandwidth",
            limits: BANDWIDTH_LIMITS,
            needed: true,
        },
    ],
    standard: "standard_hz",
};

const BREAKDOWN: Kind = Kind {
    name: "A table of breakdown voltages",
    words: &[
        STANDARD_WORDS,
        (Role::Temperature, &["temp", "case", "chip"]),
        (
            Role::Voltage,
            &["breakdown", "durchbruch", "claquage", "ruptura", "voltage", "spannung", "tension"],
        ),
    ],
    needed: &[Role::Temperature, Role::Voltage],
};

/// Breakdown voltage against temperature.
pub const BREAKDOWNS: MeasuredKind = MeasuredKind {
    kind: BREAKDOWN,
    unnamed: BREAKDOWN,
    columns: &[
        Side {
            key: "temperature_c",
            role: Role::Temperature,
            name: "temperature",
            limits: TEMPERATURE_LIMITS,
            needed: true,
        },
        Side {
            key: "breakdown_v",
            role: Role::Voltage,
            name: "breakdown voltage",
            limits: BREAKDOWN_LIMITS,
            needed: true,
        },
    ],
    standard: "standard_v",
};

/// Reads measurements from a table: a file's text, or cells pasted from a spreadsheet.
///
/// A column of standard uncertainties may stand in the unit of what it belongs to, or in per cent of it.
///
/// # Example
///
/// ```
/// use leastlight::record::{BANDWIDTHS, Choices, read_measured};
///
/// let table = read_measured("Gain;B (GHz);u (%)\n5;4,6;2\n10;3,9;2\n", &Choices::default(), &BANDWIDTHS).unwrap();
/// assert_eq!(table.points[1], [("gain", 10.0), ("bandwidth_hz", 3.9e9), ("standard_hz", 7.8e7)]);
/// ```
pub fn read_measured(text: &str, choices: &Choices, what: &MeasuredKind) -> Result<MeasuredTable, Faults> {
    let text = normal(text);
    let mut sheet = Sheet::open(&text, choices, &what.kind)?;
    if !sheet.has_header()
        && let Ok(all) = Sheet::open(&text, choices, &what.unnamed)
    {
        sheet = all;
    }
    let (mut points, mut bad_rows) = (Vec::new(), Vec::new());
    for row in sheet.rows() {
        match point(&sheet, row, what) {
            Ok(point) => points.push(point),
            Err(sentence) => {
                bad_rows.push(BadRow { line: row.line, text: row.excerpt(), sentence });
            }
        }
    }
    if points.is_empty() {
        let why = bad_rows
            .first()
            .map_or(String::new(), |row: &BadRow| format!(" Line {}: {}", row.line, row.sentence));
        let sentence = format!("{} needs at least one row that can be read.{why}", what.kind.name);
        return Err(vec![Fault::new("", Code::Unreadable, Tree::Null, &sentence)]);
    }
    // A source of bias is often connected so that it counts reverse voltage and current below 0.
    if points.iter().any(|point| point.reversed) {
        sheet.said.push(
            "Voltages below 0 were taken as reverse voltages, and their currents turned with them."
                .to_owned(),
        );
    }
    let reading = sheet.reading(points.len(), bad_rows);
    Ok(MeasuredTable { points: points.into_iter().map(|point| point.cells).collect(), reading })
}

struct Point {
    cells: Vec<(&'static str, f64)>,
    reversed: bool,
}

fn point(sheet: &Sheet, row: &Row, what: &MeasuredKind) -> Result<Point, String> {
    let mut cells: Vec<(&'static str, f64)> = Vec::new();
    let mut last: Option<Placed> = None;
    for side in what.columns {
        let column = sheet.column(side.role);
        let blank = column.is_none_or(|column| row.cell(column.index).is_empty());
        if blank && !side.needed {
            continue;
        }
        let column = column.ok_or_else(|| format!("The {} has no column.", side.name))?;
        let (value, unit) = sheet.number(row, column, side.name)?;
        let value = if unit == Unit::Kelvin { value - ZERO_CELSIUS_K } else { value };
        cells.push((side.key, value));
        last = Some(Placed { unit: column.unit.or(Some(unit)), ..column });
    }
    let reversed = matches!(cells.first(), Some(("bias_v", voltage)) if *voltage < 0.0);
    if reversed {
        cells.iter_mut().for_each(|(_, value)| *value = -*value);
    }
    for (side, (_, value)) in
        what.columns.iter().filter_map(|side| Some((side, cells.iter().find(|cell| cell.0 == side.key)?)))
    {
        if !side.limits.hold(*value) {
            let must = side.limits.sentence(|value| value.to_string());
            return Err(format!("The {} {must}; it is {value}.", side.name));
        }
    }
    let (Some(column), Some((_, value))) = (sheet.column(Role::Standard), cells.last().copied()) else {
        return Ok(Point { cells, reversed });
    };
    if !row.cell(column.index).is_empty() {
        // Without a unit of its own it is in that of its value.
        let own = Placed { unit: column.unit.or(last.and_then(|last| last.unit)), ..column };
        let (standard, unit) = sheet.number(row, own, "standard uncertainty")?;
        let standard = if unit == Unit::Percent { standard * value.abs() } else { standard };
        if !STANDARD_LIMITS.hold(standard) {
            return Err("The standard uncertainty must be above 0; it is not.".to_owned());
        }
        cells.push((what.standard, standard));
    }
    Ok(Point { cells, reversed })
}

//! The bias of an avalanche photodiode: how its gain hangs on voltage and temperature, and what the supply is set to.

use super::Bench;
use super::field::{Field, Limits};
use super::points::read_rows;
use super::reader::Reader;
use crate::fault::{Code, Fault};
use crate::quantity::kind;
use crate::tree::Tree;
use serde::Serialize;

/// Gain against bias and temperature, and the supply.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Bias {
    /// Gain against voltage at the reference temperature.
    #[serde(flatten)]
    pub gain_law: GainLaw,
    /// Breakdown voltage at the reference temperature, V.
    pub breakdown_v: Option<f64>,
    /// Temperature at which the breakdown voltage, or the table, was taken, °C.
    pub reference_temperature_c: Option<f64>,
    /// Change of the breakdown voltage with temperature, V/K.
    pub breakdown_v_per_k: Option<f64>,
    /// Resistance between the supply and the junction, that of the detector included, Ω.
    pub series_resistance_ohm: Option<f64>,
    /// What the supply is set to now, V.
    pub set_v: Option<f64>,
    /// The greatest current that the detector bears, A.
    pub maximum_current_a: Option<f64>,
    /// The lowest temperature of the table for the supply, °C.
    pub table_from_c: Option<f64>,
    /// The highest, °C.
    pub table_to_c: Option<f64>,
    /// The distance of its rows, K.
    pub table_step_k: Option<f64>,
}

/// How gain hangs on the voltage across the junction.
#[derive(Debug, Clone, PartialEq, Serialize)]
#[serde(tag = "kind", rename_all = "snake_case")]
pub enum GainLaw {
    /// Miller's formula with the breakdown voltage.
    Miller {
        /// n.
        miller_exponent: Option<f64>,
    },
    /// As measured.
    Table {
        /// In rising order of voltage; the gain never falls.
        points: Vec<GainPoint>,
    },
}

/// A measured gain.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct GainPoint {
    /// Reverse voltage, V.
    pub bias_v: f64,
    /// M there.
    pub gain: f64,
}

/// The limits of a bias, V.
pub const BIAS_LIMITS: Limits = Limits::between(0.0, 1e4);

/// The limits of a gain.
pub const GAIN_LIMITS: Limits = Limits::between(1.0, 1e6);

const TEMPERATURE_LIMITS: Limits = Limits::between(-273.15, 500.0);

/// The numbers of a bias.
pub const FIELDS: &[Field] = &[
    Field {
        pointer: "/detector/avalanche/bias/breakdown_v",
        name: "the breakdown voltage",
        kind: &kind::VOLTAGE,
        limits: Limits::above(0.0, 1e4),
        usual: "30 to 80 V for InGaAs, 100 to 400 V for silicon",
        place: |bench| Some(&mut bias(bench)?.breakdown_v),
    },
    Field {
        pointer: "/detector/avalanche/bias/miller_exponent",
        name: "the Miller exponent",
        kind: &kind::NUMBER,
        limits: Limits::between(0.1, 20.0),
        usual: "1 to 6, from a fit to measured gains",
        place: |bench| match &mut bias(bench)?.gain_law {
            GainLaw::Miller { miller_exponent } => Some(miller_exponent),
            GainLaw::Table { .. } => None,
        },
    },
    Field {
        pointer: "/detector/avalanche/bias/reference_temperature_c",
        name: "the reference temperature of the breakdown voltage",
        kind: &kind::TEMPERATURE_C,
        limits: TEMPERATURE_LIMITS,
        usual: "22 to 25 °C",
        place: |bench| Some(&mut bias(bench)?.reference_temperature_c),
    },
    Field {
        pointer: "/detector/avalanche/bias/breakdown_v_per_k",
        name: "the temperature coefficient of the breakdown voltage",
        kind: &kind::VOLTAGE_PER_KELVIN,
        limits: Limits::between(-10.0, 10.0),
        usual: "0.05 to 0.15 V/K for InGaAs, 0.4 to 1 V/K for silicon",
        place: |bench| Some(&mut bias(bench)?.breakdown_v_per_k),
    },
    Field {
        pointer: "/detector/avalanche/bias/series_resistance_ohm",
        name: "the series resistance",
        kind: &kind::RESISTANCE,
        limits: Limits::between(0.0, 1e9),
        usual: "detector and protection resistor, 100 Ω to 1 MΩ; empty: none",
        place: |bench| Some(&mut bias(bench)?.series_resistance_ohm),
    },
    Field {
        pointer: "/detector/avalanche/bias/set_v",
        name: "the bias as set now",
        kind: &kind::VOLTAGE,
        limits: Limits::above(0.0, 1e4),
        usual: "what the supply shows; empty: not looked at",
        place: |bench| Some(&mut bias(bench)?.set_v),
    },
    Field {
        pointer: "/detector/avalanche/bias/maximum_current_a",
        name: "the greatest detector current",
        kind: &kind::CURRENT,
        limits: Limits::above(0.0, 10.0),
        usual: "0.2 to 3 mA, from the data sheet; empty: not known",
        place: |bench| Some(&mut bias(bench)?.maximum_current_a),
    },
    Field {
        pointer: "/detector/avalanche/bias/table_from_c",
        name: "the lowest temperature of the bias table",
        kind: &kind::TEMPERATURE_C,
        limits: TEMPERATURE_LIMITS,
        usual: "empty: 0 °C",
        place: |bench| Some(&mut bias(bench)?.table_from_c),
    },
    Field {
        pointer: "/detector/avalanche/bias/table_to_c",
        name: "the highest temperature of the bias table",
        kind: &kind::TEMPERATURE_C,
        limits: TEMPERATURE_LIMITS,
        usual: "empty: 60 °C",
        place: |bench| Some(&mut bias(bench)?.table_to_c),
    },
    Field {
        pointer: "/detector/avalanche/bias/table_step_k",
        name: "the step of the bias table",
        kind: &kind::TEMPERATURE_STEP,
        limits: Limits::above(0.0, 500.0),
        usual: "empty: 5 K",
        place: |bench| Some(&mut bias(bench)?.table_step_k),
    },
];

fn bias(bench: &mut Bench) -> Option<&mut Bias> {
    bench.detector.as_mut()?.avalanche.as_mut()?.bias.as_mut()
}

const AT: &str = "/detector/avalanche/bias";

#[derive(Clone, Copy)]
enum Kind {
    Miller,
    Table,
}

impl Bias {
    /// Reads a bias.
    pub fn read(tree: Option<&Tree>, reader: &mut Reader) -> Option<Bias> {
        let given = tree.filter(|tree| !tree.is_null())?;
        let kind = given.get("kind").filter(|kind| !kind.is_null());
        if kind.is_none() && matches!(given, Tree::Map(_)) {
            reader.missing(&format!("{AT}/kind"), "The kind of gain law is needed: miller or table.");
            return None;
        }
        let kinds = [("miller", Kind::Miller), ("table", Kind::Table)];
        let kind = reader.word(kind, &format!("{AT}/kind"), &kinds)?;
        let own = match kind {
            Kind::Miller => "miller_exponent",
            Kind::Table => "points",
        };
        let keys = [
            "kind",
            own,
            "breakdown_v",
            "reference_temperature_c",
            "breakdown_v_per_k",
            "series_resistance_ohm",
            "set_v",
            "maximum_current_a",
            "table_from_c",
            "table_to_c",
            "table_step_k",
        ];
        let map = reader.part(tree, AT, &keys)?;
        let mut number = |key: &str| reader.number(map.get(key), &format!("{AT}/{key}"));
        let bias = Bias {
            gain_law: GainLaw::Miller { miller_exponent: None },
            breakdown_v: number("breakdown_v"),
            reference_temperature_c: number("reference_temperature_c"),
            breakdown_v_per_k: number("breakdown_v_per_k"),
            series_resistance_ohm: number("series_resistance_ohm"),
            set_v: number("set_v"),
            maximum_current_a: number("maximum_current_a"),
            table_from_c: number("table_from_c"),
            table_to_c: number("table_to_c"),
            table_step_k: number("table_step_k"),
        };
        let gain_law = match kind {
            Kind::Miller => GainLaw::Miller {
                miller_exponent: reader.number(map.get(own), &format!("{AT}/miller_exponent")),
            },
            Kind::Table => GainLaw::Table { points: read_gains(map.get(own), reader).unwrap_or_default() },
        };
        Some(Bias { gain_law, ..bias })
    }
}

/// Reads measured gains: each voltage once, the gain nowhere falling, in rising order afterwards.
fn read_gains(tree: Option<&Tree>, reader: &mut Reader) -> Option<Vec<GainPoint>> {
    let pointer = format!("{AT}/points");
    let mut points = read_rows(tree, &pointer, reader, &["bias_v", "gain"], |row, at, reader| {
        let mut cell = |key: &str, name: &str, kind, limits| {
            let pointer = format!("{at}/{key}");
            if row.get(key).is_none_or(Tree::is_null) {
                reader.missing(&pointer, &format!("Each point needs a value: {name}."));
            }
            reader.of_kind(row.get(key), &pointer, name, kind, limits).map(|cell| cell.value)
        };
        let bias_v = cell("bias_v", "the bias", &kind::VOLTAGE, &BIAS_LIMITS);
        let gain = cell("gain", "the gain", &kind::NUMBER, &GAIN_LIMITS);
        Some(GainPoint { bias_v: bias_v?, gain: gain? })
    })?;
    points.sort_by(|one, next| one.bias_v.total_cmp(&next.bias_v));
    for pair in points.windows(2) {
        let (low, high) = (pair[0], pair[1]);
        let sentence = if low.bias_v == high.bias_v {
            format!("Each voltage may stand once in the table; {} V stands twice.", low.bias_v)
        } else if low.gain > high.gain {
            format!(
                "Gain rises with voltage; the table falls from {} at {} V to {} at {} V.",
                low.gain, low.bias_v, high.gain, high.bias_v
            )
        } else {
            continue;
        };
        reader.faults.push(Fault::new(&pointer, Code::Conflict, Tree::Number(high.bias_v), &sentence));
    }
    Some(points)
}

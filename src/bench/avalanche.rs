//! The avalanche region of a photodiode: its gain, the noise of that gain, and its speed.

use super::Bench;
use super::bias::{Bias, GAIN_LIMITS};
use super::detector::BANDWIDTH_LIMITS;
use super::field::{Field, Limits};
use super::points::read_rows;
use super::reader::Reader;
use crate::fault::{Code, Fault};
use crate::quantity::kind;
use crate::tree::Tree;
use serde::Serialize;

/// An avalanche region.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Avalanche {
    /// Mean gain M.
    pub gain: Option<f64>,
    /// Ratio k of the ionisation coefficients, that of the injected carrier below.
    pub ionisation_ratio: Option<f64>,
    /// How noisy the gain is; McIntyre's formula where nothing else is said.
    pub excess_noise: ExcessNoise,
    /// Gain–bandwidth product, Hz; nothing means no such limit.
    pub gain_bandwidth_hz: Option<f64>,
    /// Gain against voltage and temperature, and the supply.
    pub bias: Option<Bias>,
}

/// How the excess noise factor F hangs on the gain.
#[derive(Debug, Clone, PartialEq, Serialize)]
#[serde(tag = "kind", rename_all = "snake_case")]
pub enum ExcessNoise {
    /// McIntyre's formula with the ionisation ratio.
    Mcintyre,
    /// F = M^x.
    Power {
        /// x.
        exponent: Option<f64>,
    },
    /// As measured.
    Table {
        /// In rising order of gain.
        points: Vec<NoiseFactorPoint>,
    },
}

/// A measured excess noise factor.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct NoiseFactorPoint {
    /// M.
    pub gain: f64,
    /// F there.
    pub factor: f64,
}

/// The limits of an excess noise factor.
pub const FACTOR_LIMITS: Limits = Limits::between(1.0, 1e9);

/// The numbers of an avalanche region.
pub const FIELDS: &[Field] = &[
    Field {
        pointer: "/detector/avalanche/gain",
        name: "the gain",
        kind: &kind::NUMBER,
        limits: GAIN_LIMITS,
        usual: "5 to 20 for InGaAs, 50 to 200 for silicon",
        place: |bench| Some(&mut avalanche(bench)?.gain),
    },
    Field {
        pointer: "/detector/avalanche/ionisation_ratio",
        name: "the ionisation ratio",
        kind: &kind::FRACTION,
        limits: Limits::between(0.0, 1.0),
        usual: "0.4 to 0.5 for InGaAs/InP, 0.02 for silicon, 0.7 to 1 for germanium",
        place: |bench| Some(&mut avalanche(bench)?.ionisation_ratio),
    },
    Field {
        pointer: "/detector/avalanche/excess_noise/exponent",
        name: "the excess noise exponent",
        kind: &kind::NUMBER,
        limits: Limits::between(0.0, 2.0),
        usual: "0.3 for silicon, 0.7 for InGaAs, 1 for germanium",
        place: |bench| match &mut avalanche(bench)?.excess_noise {
            ExcessNoise::Power { exponent } => Some(exponent),
            _ => None,
        },
    },
    Field {
        pointer: "/detector/avalanche/gain_bandwidth_hz",
        name: "the gain–bandwidth product",
        kind: &kind::FREQUENCY,
        limits: BANDWIDTH_LIMITS,
        usual: "50 to 150 GHz for InGaAs; empty: no limit",
        place: |bench| Some(&mut avalanche(bench)?.gain_bandwidth_hz),
    },
];

fn avalanche(bench: &mut Bench) -> Option<&mut Avalanche> {
    bench.detector.as_mut()?.avalanche.as_mut()
}

impl Avalanche {
    /// Reads an avalanche region.
    pub fn read(tree: Option<&Tree>, reader: &mut Reader) -> Option<Avalanche> {
        let keys = ["gain", "ionisation_ratio", "excess_noise", "gain_bandwidth_hz", "bias"];
        // An avalanche without numbers is still one: its gain is missing, which is not the same as a PIN.
        let given = tree.filter(|tree| !tree.is_null())?;
        let map = reader.part(Some(given), "/detector/avalanche", &keys).unwrap_or(given);
        let mut number = |key: &str| reader.number(map.get(key), &format!("/detector/avalanche/{key}"));
        Some(Avalanche {
            gain: number("gain"),
            ionisation_ratio: number("ionisation_ratio"),
            gain_bandwidth_hz: number("gain_bandwidth_hz"),
            excess_noise: ExcessNoise::read(map.get("excess_noise"), reader),
            bias: Bias::read(map.get("bias"), reader),
        })
    }
}

#[derive(Clone, Copy)]
enum Kind {
    Mcintyre,
    Power,
    Table,
}

impl ExcessNoise {
    fn read(tree: Option<&Tree>, reader: &mut Reader) -> ExcessNoise {
        const AT: &str = "/detector/avalanche/excess_noise";
        let kinds = [("mcintyre", Kind::Mcintyre), ("power", Kind::Power), ("table", Kind::Table)];
        let kind = tree.and_then(|tree| tree.get("kind"));
        // The first of the list is McIntyre's formula, so a bench that says nothing has it.
        let Some(kind) = reader.word(kind, &format!("{AT}/kind"), &kinds) else {
            return ExcessNoise::Mcintyre;
        };
        let keys: &[&str] = match kind {
            Kind::Mcintyre => &["kind"],
            Kind::Power => &["kind", "exponent"],
            Kind::Table => &["kind", "points"],
        };
        let map = reader.part(tree, AT, keys);
        let value = |key: &str| map.and_then(|map| map.get(key));
        match kind {
            Kind::Mcintyre => ExcessNoise::Mcintyre,
            Kind::Power => {
                ExcessNoise::Power { exponent: reader.number(value("exponent"), &format!("{AT}/exponent")) }
            }
            Kind::Table => {
                let points = read_factors(value("points"), &format!("{AT}/points"), reader);
                ExcessNoise::Table { points: points.unwrap_or_default() }
            }
        }
    }
}

/// Reads measured factors: each gain once, in rising order afterwards. Without gain there is no excess noise.
fn read_factors(tree: Option<&Tree>, pointer: &str, reader: &mut Reader) -> Option<Vec<NoiseFactorPoint>> {
    let mut points = read_rows(tree, pointer, reader, &["gain", "factor"], |row, at, reader| {
        let mut cell = |key: &str, name: &str, limits| {
            let pointer = format!("{at}/{key}");
            if row.get(key).is_none_or(Tree::is_null) {
                reader.missing(&pointer, &format!("Each point needs a value: {name}."));
            }
            reader.of_kind(row.get(key), &pointer, name, &kind::NUMBER, limits).map(|cell| cell.value)
        };
        let gain = cell("gain", "the gain", &GAIN_LIMITS);
        let factor = cell("factor", "the excess noise factor", &FACTOR_LIMITS);
        Some(NoiseFactorPoint { gain: gain?, factor: factor? })
    })?;
    points.sort_by(|one, next| one.gain.total_cmp(&next.gain));
    let mut conflict = |gain: f64, sentence: &str| {
        reader.faults.push(Fault::new(pointer, Code::Conflict, Tree::Number(gain), sentence));
    };
    for pair in points.windows(2).filter(|pair| pair[0].gain == pair[1].gain) {
        let gain = pair[0].gain;
        conflict(gain, &format!("Each gain may stand once in the table; {gain} stands twice."));
    }
    if let Some(first) = points.first().filter(|point| point.gain == 1.0 && point.factor != 1.0) {
        let factor = first.factor;
        conflict(
            factor,
            &format!("Without gain there is no excess noise: at gain 1 the factor is 1; {factor} was given."),
        );
    }
    Some(points)
}

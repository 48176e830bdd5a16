//! What follows the photodiode: circuit noise and the filter that limits it.

use super::field::{Field, Limits};
use super::reader::Reader;
use crate::physics::filter::Filter;
use crate::quantity::kind;
use crate::tree::Tree;
use serde::Serialize;

/// The electronics behind the photodiode.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Amplifier {
    /// The circuit noise, referred to the input.
    pub noise: Option<CircuitNoise>,
    /// −3 dB bandwidth of the receiver, Hz.
    pub bandwidth_hz: Option<f64>,
    /// The shape of the filter that `bandwidth_hz` describes.
    pub filter: Option<FilterShape>,
    /// The noise bandwidth itself, Hz; where given, it is used as it is.
    pub noise_bandwidth_hz: Option<f64>,
}

/// How the circuit noise is described.
#[derive(Debug, Clone, PartialEq, Serialize)]
#[serde(tag = "kind", rename_all = "snake_case")]
pub enum CircuitNoise {
    /// RMS current at the input, in the noise bandwidth.
    Rms {
        /// A.
        current_a: Option<f64>,
    },
    /// White density.
    Density {
        /// A/√Hz, one-sided.
        a_per_rthz: Option<f64>,
    },
    /// A load resistor and the noise figure of the amplifier behind it.
    Resistor {
        /// Resistance, Ω.
        ohm: Option<f64>,
        /// Noise figure, dB.
        noise_figure_db: Option<f64>,
        /// Temperature of the resistor, K.
        temperature_k: Option<f64>,
    },
}

/// Filter shapes by the names of the bench.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum FilterShape {
    /// Flat up to its edge.
    Rectangular,
    /// One pole.
    FirstOrder,
    /// Two poles, maximally flat.
    Butterworth2,
    /// Four poles, Bessel–Thomson: the reference receiver of the transmission standards.
    Bessel4,
}

impl From<FilterShape> for Filter {
    fn from(shape: FilterShape) -> Filter {
        match shape {
            FilterShape::Rectangular => Filter::Rectangular,
            FilterShape::FirstOrder => Filter::FirstOrder,
            FilterShape::Butterworth2 => Filter::Butterworth2,
            FilterShape::Bessel4 => Filter::Bessel4,
        }
    }
}

const BANDWIDTH_LIMITS: Limits = Limits::above(0.0, 1e14);

/// The numbers of an amplifier.
pub const FIELDS: &[Field] = &[
    Field {
        pointer: "/amplifier/noise/current_a",
        name: "the circuit noise current",
        kind: &kind::CURRENT,
        limits: Limits::between(0.0, 1.0),
        usual: "50 nA to 2 µA",
        place: |bench| match noise(bench)? {
            CircuitNoise::Rms { current_a } => Some(current_a),
            _ => None,
        },
    },
    Field {
        pointer: "/amplifier/noise/a_per_rthz",
        name: "the circuit noise density",
        kind: &kind::CURRENT_DENSITY,
        limits: Limits::between(0.0, 1.0),
        usual: "1 to 30 pA/√Hz",
        place: |bench| match noise(bench)? {
            CircuitNoise::Density { a_per_rthz } => Some(a_per_rthz),
            _ => None,
        },
    },
    Field {
        pointer: "/amplifier/noise/ohm",
        name: "the load resistance",
        kind: &kind::RESISTANCE,
        limits: Limits::above(0.0, 1e15),
        usual: "50 Ω to 10 kΩ",
        place: |bench| match noise(bench)? {
            CircuitNoise::Resistor { ohm, .. } => Some(ohm),
            _ => None,
        },
    },
    Field {
        pointer: "/amplifier/noise/noise_figure_db",
        name: "the noise figure",
        kind: &kind::DECIBEL,
        limits: Limits::between(0.0, 60.0),
        usual: "1 to 6 dB; empty: 0 dB",
        place: |bench| match noise(bench)? {
            CircuitNoise::Resistor { noise_figure_db, .. } => Some(noise_figure_db),
            _ => None,
        },
    },
    Field {
        pointer: "/amplifier/noise/temperature_k",
        name: "the load temperature",
        kind: &kind::TEMPERATURE_K,
        limits: Limits::between(0.0, 1000.0),
        usual: "300 K; empty: that of the surroundings",
        place: |bench| match noise(bench)? {
            CircuitNoise::Resistor { temperature_k, .. } => Some(temperature_k),
            _ => None,
        },
    },
    Field {
        pointer: "/amplifier/bandwidth_hz",
        name: "the receiver bandwidth",
        kind: &kind::FREQUENCY,
        limits: BANDWIDTH_LIMITS,
        usual: "0.7 to 0.75 of the symbol rate",
        place: |bench| Some(&mut bench.amplifier.as_mut()?.bandwidth_hz),
    },
    Field {
        pointer: "/amplifier/noise_bandwidth_hz",
        name: "the noise bandwidth",
        kind: &kind::FREQUENCY,
        limits: BANDWIDTH_LIMITS,
        usual: "empty: from the bandwidth and the filter",
        place: |bench| Some(&mut bench.amplifier.as_mut()?.noise_bandwidth_hz),
    },
];

fn noise(bench: &mut super::Bench) -> Option<&mut CircuitNoise> {
    bench.amplifier.as_mut()?.noise.as_mut()
}

const FILTERS: &[(&str, Option<FilterShape>)] = &[
    ("rectangular", Some(FilterShape::Rectangular)),
    ("first_order", Some(FilterShape::FirstOrder)),
    ("butterworth2", Some(FilterShape::Butterworth2)),
    ("bessel4", Some(FilterShape::Bessel4)),
];

#[derive(Clone, Copy)]
enum NoiseKind {
    Rms,
    Density,
    Resistor,
}

impl Amplifier {
    /// Reads an amplifier.
    pub fn read(tree: Option<&Tree>, reader: &mut Reader) -> Option<Amplifier> {
        let keys = ["noise", "bandwidth_hz", "filter", "noise_bandwidth_hz"];
        let map = reader.part(tree, "/amplifier", &keys)?;
        // No filter is not the first of the list: a bandwidth without a shape has no noise bandwidth.
        let filter = map.get("filter").filter(|filter| !filter.is_null());
        Some(Amplifier {
            noise: read_noise(map.get("noise"), reader),
            bandwidth_hz: reader.number(map.get("bandwidth_hz"), "/amplifier/bandwidth_hz"),
            filter: filter
                .and_then(|filter| reader.word(Some(filter), "/amplifier/filter", FILTERS))
                .flatten(),
            noise_bandwidth_hz: reader.number(map.get("noise_bandwidth_hz"), "/amplifier/noise_bandwidth_hz"),
        })
    }
}

fn read_noise(tree: Option<&Tree>, reader: &mut Reader) -> Option<CircuitNoise> {
    const AT: &str = "/amplifier/noise";
    let kinds = [("rms", NoiseKind::Rms), ("density", NoiseKind::Density), ("resistor", NoiseKind::Resistor)];
    let given = tree.filter(|tree| !tree.is_null())?;
    let kind = given.get("kind").filter(|kind| !kind.is_null());
    if kind.is_none() && matches!(given, Tree::Map(_)) {
        reader.missing(&format!("{AT}/kind"), "The kind of noise is needed: rms, density or resistor.");
        return None;
    }
    let kind = reader.word(kind, &format!("{AT}/kind"), &kinds)?;
    let keys: &[&str] = match kind {
        NoiseKind::Rms => &["kind", "current_a"],
        NoiseKind::Density => &["kind", "a_per_rthz"],
        NoiseKind::Resistor => &["kind", "ohm", "noise_figure_db", "temperature_k"],
    };
    let map = reader.part(tree, AT, keys)?;
    let mut number = |key: &str| reader.number(map.get(key), &format!("{AT}/{key}"));
    Some(match kind {
        NoiseKind::Rms => CircuitNoise::Rms { current_a: number("current_a") },
        NoiseKind::Density => CircuitNoise::Density { a_per_rthz: number("a_per_rthz") },
        NoiseKind::Resistor => CircuitNoise::Resistor {
            ohm: number("ohm"),
            noise_figure_db: number("noise_figure_db"),
            temperature_k: number("temperature_k"),
        },
    })
}

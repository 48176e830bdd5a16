//! What is around the bench: temperature and stray light.

use super::field::{Field, Limits};
use super::reader::Reader;
use crate::quantity::kind;
use crate::tree::Tree;
use serde::Serialize;

/// The surroundings of the bench.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Surroundings {
    /// Air temperature, °C.
    pub temperature_c: Option<f64>,
    /// Steady light on the detector besides the signal, W.
    pub background_power_w: Option<f64>,
}

/// The numbers of the surroundings.
pub const FIELDS: &[Field] = &[
    Field {
        pointer: "/surroundings/temperature_c",
        name: "the temperature",
        kind: &kind::TEMPERATURE_C,
        limits: Limits::between(-273.15, 500.0),
        usual: "23 °C",
        place: |bench| Some(&mut bench.surroundings.as_mut()?.temperature_c),
    },
    Field {
        pointer: "/surroundings/background_power_w",
        name: "the background power",
        kind: &kind::POWER,
        limits: Limits::between(0.0, 1e3),
        usual: "0 W in a closed connector",
        place: |bench| Some(&mut bench.surroundings.as_mut()?.background_power_w),
    },
];

impl Surroundings {
    /// Reads the surroundings.
    pub fn read(tree: Option<&Tree>, reader: &mut Reader) -> Option<Surroundings> {
        let map = reader.part(tree, "/surroundings", &["temperature_c", "background_power_w"])?;
        Some(Surroundings {
            temperature_c: reader.number(map.get("temperature_c"), "/surroundings/temperature_c"),
            background_power_w: reader
                .number(map.get("background_power_w"), "/surroundings/background_power_w"),
        })
    }
}

//! What lies between the source and the detector.

use super::field::{Field, Limits};
use super::reader::Reader;
use crate::quantity::kind;
use crate::tree::Tree;
use serde::Serialize;

/// The path of the light.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Path {
    /// Loss from source to detector, dB.
    pub loss_db: Option<f64>,
}

/// The numbers of a path.
pub const FIELDS: &[Field] = &[Field {
    pointer: "/path/loss_db",
    name: "the path loss",
    kind: &kind::DECIBEL,
    limits: Limits::between(0.0, 200.0),
    usual: "0.2 dB/km at 1550 nm, 0.35 dB/km at 1310 nm, and the connectors",
    place: |bench| Some(&mut bench.path.as_mut()?.loss_db),
}];

impl Path {
    /// Reads a path.
    pub fn read(tree: Option<&Tree>, reader: &mut Reader) -> Option<Path> {
        let map = reader.part(tree, "/path", &["loss_db"])?;
        Some(Path { loss_db: reader.number(map.get("loss_db"), "/path/loss_db") })
    }
}

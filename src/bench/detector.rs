//! The photodiode: responsivity, dark current, and its avalanche if it has one.

use super::avalanche::Avalanche;
use super::field::{Field, Limits};
use super::points::{self, RESPONSIVITY_LIMITS, ResponsivityPoint};
use super::reader::Reader;
use crate::quantity::kind;
use crate::tree::Tree;
use serde::Serialize;

/// A photodiode.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Detector {
    /// Current per optical power at unit gain.
    pub responsivity: Option<Responsivity>,
    /// Dark current that the avalanche multiplies, before multiplication, A.
    pub dark_current_bulk_a: Option<f64>,
    /// Dark current that flows around the avalanche, A.
    pub dark_current_surface_a: Option<f64>,
    /// −3 dB bandwidth at unit gain, Hz.
    pub bandwidth_hz: Option<f64>,
    /// The avalanche; nothing means a PIN photodiode, gain 1.
    pub avalanche: Option<Avalanche>,
}

/// How the responsivity is described.
#[derive(Debug, Clone, PartialEq, Serialize)]
#[serde(tag = "kind", rename_all = "snake_case")]
pub enum Responsivity {
    /// One value, for the wavelength of the source.
    Value {
        /// A/W.
        a_per_w: Option<f64>,
    },
    /// Electrons per photon.
    QuantumEfficiency {
        /// Between 0 and 1.
        efficiency: Option<f64>,
    },
    /// Values at wavelengths.
    Table {
        /// In rising order of wavelength.
        points: Vec<ResponsivityPoint>,
    },
}

const DARK_CURRENT_LIMITS: Limits = Limits::between(0.0, 1.0);
/// The limits of a bandwidth, Hz.
pub const BANDWIDTH_LIMITS: Limits = Limits::above(0.0, 1e14);

/// The numbers of a detector.
pub const FIELDS: &[Field] = &[
    Field {
        pointer: "/detector/responsivity/a_per_w",
        name: "the responsivity",
        kind: &kind::RESPONSIVITY,
        limits: RESPONSIVITY_LIMITS,
        usual: "0.5 A/W at 850 nm, 0.8 to 1.05 A/W at 1310 to 1550 nm",
        place: |bench| match bench.detector.as_mut()?.responsivity.as_mut()? {
            Responsivity::Value { a_per_w } => Some(a_per_w),
            _ => None,
        },
    },
    Field {
        pointer: "/detector/responsivity/efficiency",
        name: "the quantum efficiency",
        kind: &kind::FRACTION,
        limits: Limits::above(0.0, 1.0),
        usual: "0.5 to 0.9",
        place: |bench| match bench.detector.as_mut()?.responsivity.as_mut()? {
            Responsivity::QuantumEfficiency { efficiency } => Some(efficiency),
            _ => None,
        },
    },
    Field {
        pointer: "/detector/dark_current_bulk_a",
        name: "the bulk dark current",
        kind: &kind::CURRENT,
        limits: DARK_CURRENT_LIMITS,
        usual: "0.1 to 50 nA; empty: none",
        place: |bench| Some(&mut bench.detector.as_mut()?.dark_current_bulk_a),
    },
    Field {
        pointer: "/detector/dark_current_surface_a",
        name: "the surface dark current",
        kind: &kind::CURRENT,
        limits: DARK_CURRENT_LIMITS,
        usual: "1 to 50 nA; empty: none",
        place: |bench| Some(&mut bench.detector.as_mut()?.dark_current_surface_a),
    },
    Field {
        pointer: "/detector/bandwidth_hz",
        name: "the detector bandwidth",
        kind: &kind::FREQUENCY,
        limits: BANDWIDTH_LIMITS,
        usual: "1 to 50 GHz; empty: no limit",
        place: |bench| Some(&mut bench.detector.as_mut()?.bandwidth_hz),
    },
];

#[derive(Clone, Copy)]
enum ResponsivityKind {
    Value,
    QuantumEfficiency,
    Table,
}

impl Detector {
    /// Reads a detector.
    pub fn read(tree: Option<&Tree>, reader: &mut Reader) -> Option<Detector> {
        let keys =
            ["responsivity", "dark_current_bulk_a", "dark_current_surface_a", "bandwidth_hz", "avalanche"];
        let map = reader.part(tree, "/detector", &keys)?;
        let mut number = |key: &str| reader.number(map.get(key), &format!("/detector/{key}"));
        Some(Detector {
            dark_current_bulk_a: number("dark_current_bulk_a"),
            dark_current_surface_a: number("dark_current_surface_a"),
            bandwidth_hz: number("bandwidth_hz"),
            responsivity: read_responsivity(map.get("responsivity"), reader),
            avalanche: Avalanche::read(map.get("avalanche"), reader),
        })
    }
}

fn read_responsivity(tree: Option<&Tree>, reader: &mut Reader) -> Option<Responsivity> {
    const AT: &str = "/detector/responsivity";
    let kinds = [
        ("value", ResponsivityKind::Value),
        ("quantum_efficiency", ResponsivityKind::QuantumEfficiency),
        ("table", ResponsivityKind::Table),
    ];
    let given = tree.filter(|tree| !tree.is_null())?;
    let kind = given.get("kind").filter(|kind| !kind.is_null());
    if kind.is_none() && matches!(given, Tree::Map(_)) {
        reader.missing(
            &format!("{AT}/kind"),
            "The kind of responsivity is needed: value, quantum_efficiency or table.",
        );
        return None;
    }
    let own = match reader.word(kind, &format!("{AT}/kind"), &kinds)? {
        ResponsivityKind::Value => "a_per_w",
        ResponsivityKind::QuantumEfficiency => "efficiency",
        ResponsivityKind::Table => "points",
    };
    let map = reader.part(tree, AT, &["kind", own])?;
    let at = format!("{AT}/{own}");
    match own {
        "points" => {
            let points = points::read_responsivity(map.get(own), &at, reader)?;
            (!points.is_empty()).then_some(Responsivity::Table { points })
        }
        "efficiency" => {
            Some(Responsivity::QuantumEfficiency { efficiency: reader.number(map.get(own), &at) })
        }
        _ => Some(Responsivity::Value { a_per_w: reader.number(map.get(own), &at) }),
    }
}

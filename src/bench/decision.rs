//! How ones and zeros are told apart, and how often that may fail.

use super::field::{Field, Limits};
use super::reader::Reader;
use crate::physics::decision;
use crate::quantity::kind;
use crate::tree::Tree;
use serde::Serialize;

/// The decision circuit and what is asked of it.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Decision {
    /// Wrong bits per bit that are still acceptable.
    pub target_error_ratio: Option<f64>,
    /// Where the threshold stands.
    pub threshold: Threshold,
    /// How the noise is modelled.
    pub statistics: Statistics,
}

/// Where the threshold stands.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum Threshold {
    /// Where errors are fewest.
    Optimum,
    /// Halfway between the levels.
    Midpoint,
    /// The textbook form: (I1 − I0)/(σ1 + σ0).
    Q,
}

impl From<Threshold> for decision::Threshold {
    fn from(threshold: Threshold) -> decision::Threshold {
        match threshold {
            Threshold::Optimum => decision::Threshold::Optimum,
            Threshold::Midpoint => decision::Threshold::Midpoint,
            Threshold::Q => decision::Threshold::QFactor,
        }
    }
}

/// How the noise is modelled.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum Statistics {
    /// A Gaussian at each level.
    Gaussian,
    /// Electrons counted one by one: Poisson primaries, random gain, Gaussian circuit noise.
    Exact,
}

const THRESHOLDS: &[(&str, Threshold)] =
    &[("optimum", Threshold::Optimum), ("midpoint", Threshold::Midpoint), ("q", Threshold::Q)];

const STATISTICS: &[(&str, Statistics)] = &[("gaussian", Statistics::Gaussian), ("exact", Statistics::Exact)];

/// The numbers of a decision.
pub const FIELDS: &[Field] = &[Field {
    pointer: "/decision/target_error_ratio",
    name: "the target error ratio",
    kind: &kind::ERROR_RATIO,
    limits: Limits::inside(0.0, 0.5),
    usual: "1e-12, 1e-9; 2.4e-4 or 1e-3 before error correction",
    place: |bench| Some(&mut bench.decision.as_mut()?.target_error_ratio),
}];

impl Decision {
    /// Reads a decision.
    pub fn read(tree: Option<&Tree>, reader: &mut Reader) -> Option<Decision> {
        let map = reader.part(tree, "/decision", &["target_error_ratio", "threshold", "statistics"])?;
        let threshold = reader.word(map.get("threshold"), "/decision/threshold", THRESHOLDS);
        let statistics = reader.word(map.get("statistics"), "/decision/statistics", STATISTICS);
        Some(Decision {
            target_error_ratio: reader.number(map.get("target_error_ratio"), "/decision/target_error_ratio"),
            threshold: threshold.unwrap_or(Threshold::Optimum),
            statistics: statistics.unwrap_or(Statistics::Gaussian),
        })
    }
}

//! How well the numbers of a bench are known: doubts that stand beside them, and how they are to be worked out.

mod read;

use crate::statistics::shape::Shape;
use serde::Serialize;

/// What is known of the doubts of a bench.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Uncertainty {
    /// The number of the answer that it is wanted for; nothing means the question's main one.
    pub of: Option<String>,
    /// The doubts; several may concern one number.
    pub inputs: Vec<UncertainInput>,
    /// Correlations: first input, second input (counted from 0), coefficient.
    pub correlations: Vec<(usize, usize, f64)>,
    /// What intervals are to cover.
    pub coverage_probability: f64,
    /// The run of trials beside the budget.
    pub monte_carlo: Option<MonteCarlo>,
}

/// A doubt of one number.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct UncertainInput {
    /// The number.
    pub pointer: String,
    /// What the person calls this doubt.
    #[serde(skip_serializing_if = "String::is_empty")]
    pub name: String,
    /// How large it is.
    #[serde(flatten)]
    pub amount: Amount,
    /// How it is spread.
    pub distribution: Shape,
    /// Whether the amount is a share of the value.
    #[serde(skip_serializing_if = "is_false")]
    pub relative: bool,
    /// Whether the amount is in dB, for a number that is not.
    #[serde(skip_serializing_if = "is_false")]
    pub decibel: bool,
    /// How many times the amount: years since calibration for a drift a year, kelvins for a coefficient per kelvin.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub times: Option<f64>,
    /// Degrees of freedom; nothing means infinitely many, or one less than there are repeated readings.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub degrees_of_freedom: Option<f64>,
}

fn is_false(flag: &bool) -> bool {
    !flag
}

/// How large a doubt is stated to be.
#[derive(Debug, Clone, PartialEq, Serialize)]
#[serde(untagged)]
pub enum Amount {
    /// As a standard uncertainty.
    Standard {
        /// u.
        standard: f64,
    },
    /// As an expanded uncertainty.
    Expanded {
        /// U.
        expanded: f64,
        /// k.
        coverage_factor: f64,
    },
    /// As the half-width of what is possible.
    HalfWidth {
        /// a.
        half_width: f64,
    },
    /// By repeated readings, in the unit of the number.
    Readings {
        /// At least two.
        readings: Vec<f64>,
    },
}

/// A run of trials.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct MonteCarlo {
    /// How many; the most, when adaptive.
    pub trials: usize,
    /// Where the random numbers begin.
    pub seed: u64,
    /// Whether to stop when two figures are stable.
    pub adaptive: bool,
}

impl MonteCarlo {
    /// What is run unless said otherwise (JCGM 101:2008, 7.2.1, recommends at least 10 000/(1 − p) trials).
    pub const USUAL: MonteCarlo = MonteCarlo { trials: 1_000_000, seed: 1, adaptive: false };
}

/// The coverage probability unless said otherwise.
pub const USUAL_COVERAGE: f64 = 0.95;

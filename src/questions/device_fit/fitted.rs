//! One table, fitted: its parameters with what the measurements say of each, and its residuals.

use crate::bench::measurements::Estimator;
use crate::numeric::dual::Dual;
use crate::numeric::fit::{Bounds, Linear, NoFit};
use crate::statistics::fit::{Estimates, Method, Scatter, estimates};
use crate::statistics::transfer::coverage_factor;
use serde::Serialize;

/// The chance with which an interval covers its parameter.
pub const COVERAGE: f64 = 0.95;

/// One table, fitted.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Fitted {
    /// Which table: the key under `measurements`.
    pub table: &'static str,
    /// Its parameters.
    pub parameters: Vec<Parameter>,
    /// Correlation of each with each; absent where one of the two is not determined.
    pub correlations: Vec<Vec<Option<f64>>>,
    /// Degrees of freedom of the standard uncertainties; absent where they are infinite, because the uncertainties of the points were given.
    pub degrees_of_freedom: Option<f64>,
    /// Standard deviation of one residual, in the unit of the residuals; of given uncertainties, the factor by which the points scatter more.
    pub residual_deviation: Option<f64>,
    /// Whether the uncertainties of the points were given.
    pub uncertainties_given: bool,
    /// Points that were fitted.
    pub points_used: usize,
    /// Points that cannot stand in this formula.
    pub points_left_out: usize,
    /// By Huber's rule, how many points counted less.
    pub points_weighed_down: usize,
    /// The points: where, what was measured, what the formula gives, the residual, the weight.
    pub points: Vec<FittedPoint>,
    /// Whether the weights came to rest.
    pub settled: bool,
    /// The numbers as the search left them, determined or not, for the curves.
    #[serde(skip)]
    pub raw: Vec<f64>,
}

/// A measured point beside the fit.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct FittedPoint {
    /// What was set.
    pub x: f64,
    /// What was measured.
    pub measured: f64,
    /// What the formula gives there.
    pub fitted: f64,
    /// Measurement less formula: over the given uncertainty, or over the formula, or as it is.
    pub residual: f64,
    /// 1, or less by Huber's rule.
    pub weight: f64,
}

/// A fitted number.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Parameter {
    /// Its name in a script.
    pub name: &'static str,
    /// Its name in a sentence.
    pub title: &'static str,
    /// Its unit.
    pub unit: &'static str,
    /// The number of the bench that it is.
    pub pointer: Option<&'static str>,
    /// The fitted value; absent where it is not determined.
    pub value: Option<f64>,
    /// Its standard uncertainty.
    pub standard: Option<f64>,
    /// Both ends of the interval that covers it with 95 %.
    pub interval: Option<[f64; 2]>,
    /// Why it is not determined, and what to measure.
    pub not_determined: Option<String>,
}

/// A table that cannot be fitted.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Refused {
    /// Which table.
    pub table: &'static str,
    /// Why, and what to measure.
    pub sentence: String,
}

/// What a parameter is.
#[derive(Debug, Clone, Copy)]
pub struct About {
    /// As in [`Parameter`].
    pub name: &'static str,
    /// As in [`Parameter`].
    pub title: &'static str,
    /// As in [`Parameter`].
    pub unit: &'static str,
    /// As in [`Parameter`].
    pub pointer: Option<&'static str>,
    /// What to measure so that it is determined.
    pub measure: &'static str,
    /// Whether its estimate tells anything: the value, half of its interval.
    pub tells: fn(f64, f64) -> bool,
}

/// A measured point as a fit takes it.
#[derive(Debug, Clone, Copy)]
pub struct Measured {
    /// What was set.
    pub x: f64,
    /// What was measured.
    pub y: f64,
    /// Its standard uncertainty, where it is given.
    pub standard: Option<f64>,
}

/// How the residuals of a table are weighed.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Weighing {
    /// By the given uncertainties.
    Given,
    /// As parts of the value: ln of formula over measurement.
    Relative,
    /// All alike.
    Alike,
}

impl Weighing {
    /// By the uncertainties where each point has one, else as the table has it.
    pub fn of(points: &[Measured], otherwise: Weighing) -> Weighing {
        let given = points.iter().all(|point| point.standard.is_some());
        if given && !points.is_empty() { Weighing::Given } else { otherwise }
    }

    /// Formula less measurement, weighed.
    pub fn residual<const N: usize>(self, formula: Dual<N>, point: &Measured) -> Dual<N> {
        match (self, point.standard) {
            (Weighing::Given, Some(standard)) => (formula - point.y) / standard,
            (Weighing::Relative, _) => formula.ln() - libm::log(point.y),
            _ => formula - point.y,
        }
    }
}

/// A table about to be fitted.
pub struct Task<'t> {
    /// Its key.
    pub table: &'static str,
    /// Its points.
    pub points: &'t [Measured],
    /// How many rows were left out before.
    pub left_out: usize,
    /// How they are weighed.
    pub weighing: Weighing,
    /// Residuals and slopes at some parameters.
    pub evaluate: &'t dyn Fn(&[f64]) -> Option<Linear>,
    /// The first guess.
    pub start: &'t [f64],
    /// Where each parameter may lie.
    pub bounds: &'t [Bounds],
    /// How points far off count.
    pub estimator: Estimator,
}

impl Task<'_> {
    /// Fits.
    pub fn estimates(&self) -> Result<Estimates, Refused> {
        let scatter = if self.weighing == Weighing::Given { Scatter::Known } else { Scatter::Estimated };
        let method = match self.estimator {
            Estimator::LeastSquares => Method::LeastSquares,
            Estimator::Huber => Method::Huber,
        };
        estimates(self.evaluate, self.start, self.bounds, scatter, method).map_err(|why| {
            let sentence = match why {
                NoFit::TooFew => "There are fewer points than numbers to be found: measure more of them.",
                NoFit::NotFinite => "The formula cannot be worked out near these points: check their units and columns.",
                NoFit::TooManySteps => {
                    "The search for the best numbers did not come to rest: the points hardly tell them apart. Measure over a wider range."
                }
            };
            self.refused(sentence)
        })
    }

    /// A refusal of this table.
    pub fn refused(&self, sentence: impl Into<String>) -> Refused {
        Refused { table: self.table, sentence: sentence.into() }
    }

    /// Puts a fit into words.
    pub fn fitted(&self, found: &Estimates, about: &[About]) -> Fitted {
        let count = about.len();
        let parameters: Vec<Parameter> =
            about.iter().enumerate().map(|(index, about)| parameter(found, index, about)).collect();
        let told = |one: usize, other: usize| {
            let both = parameters[one].value.is_some() && parameters[other].value.is_some();
            if both { found.correlation(one, other) } else { None }
        };
        let correlations = (0..count).map(|one| (0..count).map(|other| told(one, other)).collect()).collect();
        let point =
            |((point, residual), weight): ((&Measured, &f64), &f64)| self.point(point, *residual, *weight);
        Fitted {
            table: self.table,
            correlations,
            degrees_of_freedom: Some(found.degrees_of_freedom).filter(|freedom| freedom.is_finite()),
            residual_deviation: found.deviation,
            uncertainties_given: self.weighing == Weighing::Given,
            points_used: self.points.len(),
            points_left_out: self.left_out,
            points_weighed_down: found.weights.iter().filter(|weight| **weight < 1.0).count(),
            points: self.points.iter().zip(&found.residuals).zip(&found.weights).map(point).collect(),
            settled: found.settled,
            raw: found.values.clone(),
            parameters,
        }
    }

    fn point(&self, point: &Measured, residual: f64, weight: f64) -> FittedPoint {
        let (fitted, shown) = match (self.weighing, point.standard) {
            (Weighing::Given, Some(standard)) => (point.y + residual * standard, -residual),
            (Weighing::Relative, _) => (point.y * libm::exp(residual), libm::expm1(-residual)),
            _ => (point.y + residual, -residual),
        };
        FittedPoint { x: point.x, measured: point.y, fitted, residual: shown, weight }
    }
}

fn parameter(found: &Estimates, index: usize, about: &About) -> Parameter {
    let value = found.values[index];
    let factor = coverage_factor(COVERAGE, found.degrees_of_freedom.max(1.0));
    let standard = found.standard(index);
    let half = standard.map(|standard| factor * standard).filter(|half| half.is_finite());
    let because = if found.held[index] {
        Some("the points pull it to the end of its range".to_owned())
    } else if found.untold[index] {
        Some("the points fit as well with any value of it".to_owned())
    } else {
        match half {
            None => Some("there are as many points as numbers, so nothing tells their scatter".to_owned()),
            Some(half) if !(about.tells)(value, half) => {
                Some("the scatter of the points hides it".to_owned())
            }
            Some(_) => None,
        }
    };
    let told = because.is_none();
    let title = about.title;
    Parameter {
        name: about.name,
        title,
        unit: about.unit,
        pointer: about.pointer,
        value: told.then_some(value),
        standard: standard.filter(|_| told),
        interval: half.filter(|_| told).map(|half| [value - half, value + half]),
        not_determined: because
            .map(|because| format!("The {title} is not determined: {because}. {}", about.measure)),
    }
}

/// Whether a number that is above zero by its nature is known better than by a factor.
pub fn apart_from_zero(value: f64, half: f64) -> bool {
    half < value.abs()
}

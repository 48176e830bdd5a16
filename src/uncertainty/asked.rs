//! Any question's answer with its uncertainty.

use super::doubts::{Doubt, Doubts, other_means};
use super::gum::{NoBudget, Propagated, is_straight, propagate, second_order};
use super::outcome::{Outcome, tolerance};
use super::trials::{Plan, Trials};
use crate::bench::Bench;
use crate::bench::uncertainty::Uncertainty;
use crate::fault::{Allowed, Code, Fault, Faults};
use crate::questions::Question;
use crate::questions::prepared::unit_of;
use crate::statistics::shape::Shape;
use crate::statistics::transfer::coverage_factor;
use crate::tree::Tree;
use serde::Serialize;

/// The uncertainty of one number of an answer.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Uncertain {
    /// The number, by its name in the answer.
    pub of: &'static str,
    /// Its unit.
    pub unit: &'static str,
    /// Its value at the estimates.
    pub estimate: f64,
    /// Combined standard uncertainty.
    pub standard: f64,
    /// Effective degrees of freedom; absent where they are infinite, and where correlated inputs forbid the formula.
    pub effective_degrees_of_freedom: Option<f64>,
    /// Whether any inputs are correlated.
    pub correlated: bool,
    /// What the interval is to cover.
    pub coverage_probability: f64,
    /// Student's factor k for that.
    pub coverage_factor: f64,
    /// U = k·u.
    pub expanded: f64,
    /// From estimate − U to estimate + U.
    pub interval: [f64; 2],
    /// Where it comes from, the greatest share first.
    pub budget: Vec<Contribution>,
    /// What the curvature of the model adds; absent where the model is straight over its inputs' uncertainties, with
    /// correlated inputs, and where the model has no value one or two standard uncertainties away.
    pub second_order: Option<Curvature>,
    /// Where repeated readings have another mean than the number that stands on the bench and is used.
    pub other_means: Vec<OtherMean>,
    /// The run of trials, where one was asked for.
    pub monte_carlo: Option<MonteCarloResult>,
}

/// A line of a budget.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Contribution {
    /// The number of the bench that is in doubt, or the certificate.
    pub pointer: String,
    /// What the doubt is called.
    pub name: String,
    /// The unit of estimate and standard uncertainty.
    pub unit: &'static str,
    /// The estimate; absent for a certificate, which is a table.
    pub estimate: Option<f64>,
    /// Standard uncertainty u in that unit; for a certificate relative.
    pub standard: f64,
    /// How values are spread.
    pub distribution: Shape,
    /// Degrees of freedom; absent where infinite.
    pub degrees_of_freedom: Option<f64>,
    /// Change of the result with the number, c.
    pub sensitivity: f64,
    /// |c·u|, in the unit of the result.
    pub contribution: f64,
    /// Its share of u²; all add up to 1. Below 0 where a correlation makes it take away more than it brings.
    pub share: f64,
}

/// Repeated readings whose mean is not the number that stands on the bench.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct OtherMean {
    /// The number.
    pub pointer: &'static str,
    /// The mean of the readings.
    pub mean: f64,
    /// What stands on the bench.
    pub value: f64,
}

/// What the curvature of a model adds.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct Curvature {
    /// Standard uncertainty with the terms of the next order; absent where the series says nothing.
    pub standard: Option<f64>,
    /// By how much the mean differs from the estimate.
    pub mean_shift: f64,
    /// Whether that changes what is written down.
    pub matters: bool,
}

/// A run of trials and what it says of the budget.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct MonteCarloResult {
    /// What came out.
    #[serde(flatten)]
    pub outcome: Outcome,
    /// Where the random numbers began.
    pub seed: u64,
    /// Numerical tolerance δ of the comparison, for two figures of u.
    pub tolerance: f64,
    /// How far the budget's ends lie from those of the symmetric interval.
    pub differences: [f64; 2],
    /// To how many figures of u both ends agree: 2, 1, or 0 where the budget is not confirmed at all.
    pub confirmed_figures: i32,
    /// Whether both are within δ, so that the budget is confirmed to two figures of u.
    pub agrees: bool,
}

/// What makes the curvature worth a word: a change of u by a twentieth is seen in its two figures.
const NOTICEABLE: f64 = 0.05;

/// An uncertainty as far as it is known without trials, and the trials that are still to run.
pub struct Begun {
    /// By the budget.
    pub uncertain: Uncertain,
    /// Not begun; nothing where none are wanted.
    pub trials: Option<Trials<'static>>,
}

/// Works out the budget of a number; nothing where this bench's answer has no such number.
///
/// * `at` – where the doubts stand, for faults
/// * `concerns` – which pointers matter; others are left out
pub fn begin(
    question: &Question,
    bench: &Bench,
    stated: &Uncertainty,
    at: &str,
    concerns: impl Fn(&str) -> bool,
) -> Result<Option<Begun>, Faults> {
    let mut bench = bench.clone();
    let Some(of) = number_of(question, &bench, stated, at)? else { return Ok(None) };
    // The narrow-line shortcut of a reading looks at the doubts that are to be worked with.
    bench.uncertainty = Some(stated.clone());
    let other_means = other_means(stated, &mut bench, &concerns);
    let prepared = (question.prepare)(&bench, of)?;
    let doubts = Doubts::new(stated, at, &mut bench, concerns, prepared.certificate.clone())?;
    let inputs = doubts.inputs();
    let mut model = doubts.model(&bench, prepared);
    let first =
        propagate(&mut model, &inputs, &doubts.correlations).map_err(|why| vec![fault(why, &doubts, at)])?;
    let correlated = doubts.correlations.any();
    let curvature = match correlated || is_straight(&mut model, &inputs, &first) {
        true => None,
        false => second_order(&mut model, &inputs, &first),
    };
    let freedom = first.effective_degrees_of_freedom.unwrap_or(f64::INFINITY);
    let k = coverage_factor(stated.coverage_probability, freedom.max(1.0));
    let expanded = k * first.standard;
    let uncertain = Uncertain {
        of,
        unit: unit_of(of),
        estimate: first.value,
        standard: first.standard,
        effective_degrees_of_freedom: Some(freedom).filter(|freedom| freedom.is_finite()),
        correlated,
        coverage_probability: stated.coverage_probability,
        coverage_factor: k,
        expanded,
        interval: [first.value - expanded, first.value + expanded],
        budget: budget(&doubts, &first, unit_of(of)),
        second_order: curvature.map(|curvature| {
            let changed = |with: f64| (with - first.standard).abs() > NOTICEABLE * first.standard;
            let matters = curvature.standard.is_none_or(changed)
                || curvature.mean_shift.abs() > 0.5 * first.standard * NOTICEABLE.sqrt();
            Curvature { standard: curvature.standard, mean_shift: curvature.mean_shift, matters }
        }),
        other_means,
        monte_carlo: None,
    };
    let trials = stated.monte_carlo.map(|run| {
        let plan = Plan {
            trials: run.trials,
            seed: run.seed,
            adaptive: run.adaptive,
            coverage_probability: stated.coverage_probability,
        };
        Trials::new(Box::new(model), &inputs, &doubts.correlations, plan)
    });
    Ok(Some(Begun { uncertain, trials }))
}

impl Uncertain {
    /// Puts a finished run beside the budget; without one value in all trials there is nothing to put.
    pub fn with_trials(self, trials: Trials<'static>, seed: u64) -> Uncertain {
        let monte_carlo = trials.finish().map(|outcome| {
            let differences = [0, 1].map(|end| (self.interval[end] - outcome.symmetric[end]).abs());
            let within = |figures: i32| {
                let tolerance = tolerance(self.standard, figures);
                differences.iter().all(|difference| *difference <= tolerance)
            };
            // 8.1: both ends must agree within δ.
            let confirmed_figures = [2, 1].into_iter().find(|figures| within(*figures)).unwrap_or(0);
            let tolerance = tolerance(self.standard, 2);
            MonteCarloResult {
                outcome,
                seed,
                tolerance,
                differences,
                confirmed_figures,
                agrees: confirmed_figures == 2,
            }
        });
        Uncertain { monte_carlo, ..self }
    }
}

/// The number that is wanted, when this bench has it.
fn number_of(
    question: &Question,
    bench: &Bench,
    stated: &Uncertainty,
    at: &str,
) -> Result<Option<&'static str>, Faults> {
    let Some(wanted) = stated.of.as_deref().or(question.uncertain.first().map(|(name, _)| *name)) else {
        return Ok(None);
    };
    let numbers = (question.numbers)(bench)?;
    let pointer = format!("{at}/of");
    match numbers.iter().find(|(name, _)| *name == wanted) {
        Some((name, value)) => Ok(value.map(|_| *name)),
        None => {
            let names: Vec<String> = numbers.iter().map(|(name, _)| (*name).to_owned()).collect();
            let sentence =
                format!("The answer has no number called “{wanted}”; it has {}.", names.join(", "));
            let fault = Fault::new(&pointer, Code::Range, Tree::from(wanted), &sentence);
            Err(vec![Fault { allowed: Some(Allowed::OneOf(names)), ..fault }])
        }
    }
}

fn fault(why: NoBudget, doubts: &Doubts, at: &str) -> Fault {
    match why {
        NoBudget::NoDerivative(index) => {
            let doubt = doubts.numbers.get(index);
            let name = doubt.map_or("the certificate", |doubt| doubt.name.as_str());
            let pointer =
                doubt.map_or_else(|| at.to_owned(), |doubt| format!("{at}/inputs/{}", doubt.stated));
            let sentence = format!(
                "The answer exists at the value of {name} only, and on neither side of it, so nothing can be said of \
                 what a deviation does."
            );
            Fault::new(&pointer, Code::Conflict, Tree::Null, &sentence)
        }
        NoBudget::NoValue => {
            let sentence =
                "There is no answer at the estimates, so there is nothing that could be uncertain.";
            Fault::new(at, Code::Conflict, Tree::Null, sentence)
        }
    }
}

fn budget(doubts: &Doubts, first: &Propagated, unit: &str) -> Vec<Contribution> {
    let mut rows: Vec<Contribution> =
        doubts.numbers.iter().enumerate().map(|(index, doubt)| row(doubt, first, index)).collect();
    let certified = doubts.numbers.len()..first.contributions.len();
    if doubts.certificate.is_some() {
        let squares: f64 = first.contributions[certified.clone()].iter().map(|part| part * part).sum();
        let contribution = squares.sqrt();
        // Relative, except for a level, which is relative by itself.
        let (unit, sensitivity) = match unit {
            "dBm" | "dB" => ("dB", 1.0),
            _ => ("", first.value.abs()),
        };
        rows.push(Contribution {
            pointer: "/meter/certificate".to_owned(),
            name: "the certificate".to_owned(),
            unit,
            estimate: None,
            standard: if sensitivity > 0.0 { contribution / sensitivity } else { 0.0 },
            distribution: Shape::Normal,
            degrees_of_freedom: None,
            sensitivity,
            contribution,
            share: first.shares[certified].iter().sum(),
        });
    }
    rows.sort_by(|a, b| b.share.abs().total_cmp(&a.share.abs()));
    rows
}

fn row(doubt: &Doubt, first: &Propagated, index: usize) -> Contribution {
    let own = doubt.own_per_deviation();
    let freedom = doubt.input.degrees_of_freedom;
    Contribution {
        pointer: doubt.field.pointer.to_owned(),
        name: doubt.name.clone(),
        unit: crate::quantity::kind::difference(doubt.field.kind).unit,
        estimate: Some(doubt.estimate),
        standard: doubt.input.standard * own,
        distribution: doubt.input.shape,
        degrees_of_freedom: Some(freedom).filter(|freedom| freedom.is_finite()),
        sensitivity: first.sensitivities[index] / own,
        contribution: first.contributions[index].abs(),
        share: first.shares[index],
    }
}

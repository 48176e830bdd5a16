//! Monte Carlo: a model asked again and again with inputs drawn at random.

use super::gum::Model;
use super::input::{Correlations, Input};
use super::outcome::{Outcome, outcome};
use crate::statistics::normal::{standard_normal, upper_tail};
use crate::statistics::shape::Shape;
use rand_core::{Rng, SeedableRng};
use rand_xoshiro::Xoshiro256PlusPlus;

/// What a run is to do.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Plan {
    /// Trials; with `adaptive`, at most so many.
    pub trials: usize,
    /// Where the random numbers begin: the same seed gives the same run everywhere.
    pub seed: u64,
    /// Whether to stop as soon as the result is stable to its two figures.
    pub adaptive: bool,
    /// What the intervals are to cover.
    pub coverage_probability: f64,
}

/// A run under way.
pub struct Trials<'m> {
    model: Box<Model<'m>>,
    draws: Vec<Draw>,
    correlations: Correlations,
    random: Xoshiro256PlusPlus,
    plan: Plan,
    deviations: Vec<f64>,
    normals: Vec<f64>,
    values: Vec<f64>,
    failed: usize,
    blocks: Vec<[f64; 4]>,
    stable: bool,
}

/// How one input is drawn.
#[derive(Debug, Clone, Copy)]
struct Draw {
    standard: f64,
    shape: Shape,
    /// Finite for a Student's t.
    degrees_of_freedom: Option<f64>,
    correlated: bool,
}

/// Least trials of one sequence of the adaptive procedure (7.9.4 b).
const BLOCK: usize = 10_000;

impl<'m> Trials<'m> {
    /// A run that has not begun.
    ///
    /// An input of normal shape with finite degrees of freedom is drawn from the scaled and shifted t distribution
    /// (6.4.9); correlated inputs from jointly normal values, each then brought to its own shape (6.4.8 where all are
    /// normal).
    pub fn new(
        model: Box<Model<'m>>,
        inputs: &[Input],
        correlations: &Correlations,
        plan: Plan,
    ) -> Trials<'m> {
        debug_assert_eq!(inputs.len(), correlations.size());
        let draw = |(index, input): (usize, &Input)| Draw {
            standard: input.standard,
            shape: input.shape,
            degrees_of_freedom: Some(input.degrees_of_freedom)
                .filter(|nu| nu.is_finite() && input.shape == Shape::Normal),
            correlated: correlations.is_correlated(index),
        };
        Trials {
            model,
            draws: inputs.iter().enumerate().map(draw).collect(),
            correlations: correlations.clone(),
            random: Xoshiro256PlusPlus::seed_from_u64(plan.seed),
            plan,
            deviations: vec![0.0; inputs.len()],
            normals: vec![0.0; inputs.len()],
            values: Vec::with_capacity(plan.trials),
            failed: 0,
            blocks: Vec::new(),
            stable: false,
        }
    }

    /// Goes on by `count` trials, or to the end where that comes first.
    pub fn advance(&mut self, count: usize) {
        let mut left = count;
        while left > 0 && !self.done() {
            let done = self.values.len() + self.failed;
            let to_block = BLOCK - done % BLOCK;
            let now = left.min(to_block).min(self.plan.trials - done);
            for _ in 0..now {
                self.trial();
            }
            left -= now;
            if self.plan.adaptive && now == to_block {
                self.end_block();
            }
        }
    }

    /// Whether the run is over.
    pub fn done(&self) -> bool {
        self.stable || self.values.len() + self.failed >= self.plan.trials
    }

    /// Trials so far.
    pub fn count(&self) -> usize {
        self.values.len() + self.failed
    }

    /// The run's result so far; nothing where no trial gave a value.
    pub fn finish(mut self) -> Option<Outcome> {
        let (failed, adaptive) = (self.failed, self.plan.adaptive.then_some(self.stable));
        outcome(&mut self.values, failed, adaptive, self.plan.coverage_probability)
    }

    fn trial(&mut self) {
        let Trials { draws, deviations, normals, correlations, random, .. } = self;
        for (index, (draw, deviation)) in draws.iter().zip(deviations.iter_mut()).enumerate() {
            let unit = match (draw.correlated, draw.degrees_of_freedom) {
                (false, None) => draw.shape.deviate(uniform(random)),
                (false, Some(nu)) => standard_normal(uniform(random)) / root_mean_square(nu, random),
                (true, freedom) => {
                    normals[index] = standard_normal(uniform(random));
                    let row = correlations.root_row(index);
                    let normal: f64 =
                        row.iter().zip(normals.iter()).map(|(root, normal)| root * normal).sum();
                    match (draw.shape, freedom) {
                        (Shape::Normal, None) => normal,
                        (Shape::Normal, Some(nu)) => normal / root_mean_square(nu, random),
                        (shape, _) => shape.deviate(upper_tail(-normal).clamp(1e-300, 1.0 - 1e-16)),
                    }
                }
            };
            *deviation = draw.standard * unit;
        }
        match (self.model)(&self.deviations) {
            Some(value) if value.is_finite() => self.values.push(value),
            _ => self.failed += 1,
        }
    }

    /// Mean, standard deviation and interval of each sequence; the run is stable when twice the standard deviation of
    /// their averages is below the tolerance of the two figures of u.
    ///
    /// Source: JCGM 101:2008, 7.9.4.
    fn end_block(&mut self) {
        let whole = self.values.len();
        let from = whole.saturating_sub(BLOCK);
        let mut block = self.values[from..].to_vec();
        let Some(found) = outcome(&mut block, 0, None, self.plan.coverage_probability) else { return };
        self.blocks.push([found.mean, found.standard, found.symmetric[0], found.symmetric[1]]);
        let count = self.blocks.len() as f64;
        if count < 2.0 {
            return;
        }
        let average = |of: usize| self.blocks.iter().map(|block| block[of]).sum::<f64>() / count;
        let spread = |of: usize| {
            let mean = average(of);
            let squares: f64 = self.blocks.iter().map(|block| (block[of] - mean) * (block[of] - mean)).sum();
            (squares / (count * (count - 1.0))).sqrt()
        };
        let tolerance = super::outcome::tolerance(average(1), 2);
        self.stable = (0..4).all(|of| 2.0 * spread(of) <= tolerance);
    }
}

/// Evenly spread above 0 and below 1.
#[inline]
fn uniform(random: &mut Xoshiro256PlusPlus) -> f64 {
    const STEP: f64 = 1.0 / 9_007_199_254_740_992.0;
    ((random.next_u64() >> 11) as f64 + 0.5) * STEP
}

/// √(χ²/ν) of a chi-squared value with ν degrees of freedom.
fn root_mean_square(nu: f64, random: &mut Xoshiro256PlusPlus) -> f64 {
    (2.0 * gamma(0.5 * nu, random) / nu).sqrt()
}

/// A gamma value of unit scale, by rejection from the cube of a normal one.
///
/// Source: G. Marsaglia, W. W. Tsang, ACM Trans. Math. Softw. 26, 363–372 (2000); below shape 1 their section 6.
fn gamma(shape: f64, random: &mut Xoshiro256PlusPlus) -> f64 {
    if shape < 1.0 {
        let power = libm::pow(uniform(random), 1.0 / shape);
        return gamma(shape + 1.0, random) * power;
    }
    let d = shape - 1.0 / 3.0;
    let c = 1.0 / (9.0 * d).sqrt();
    loop {
        let x = standard_normal(uniform(random));
        let v = 1.0 + c * x;
        if v <= 0.0 {
            continue;
        }
        let v = v * v * v;
        // Accepted more than nineteen times out of twenty, so the loop ends.
        if libm::log(uniform(random)) < 0.5 * x * x + d * (1.0 - v + libm::log(v)) {
            return d * v;
        }
    }
}

//! The least sum of squares, by damped steps.

use super::inverse::Inverse;
use super::orthogonal::{Orthogonal, dot, norm, orthogonal};
use crate::numeric::dual::Dual;

/// Evaluations of the formula after which a search is given up. The hardest certified set, MGH10 from its far start, takes five
/// thousand; the others take tens or hundreds.
const MOST_STEPS: usize = 20_000;

/// The damping at the start, in units of the scaled JᵀJ. A tenth keeps the first steps from leaping out of the valley; of the
/// certified sets only BoxBOD from its far start is touchy about it.
const FIRST_DAMPING: f64 = 0.1;

/// Undamped steps at the end, of which each is shorter than the one before.
const LAST_STEPS: usize = 400;

/// Damping beyond which no step moves a double any more.
const MOST_DAMPING: f64 = 1e30;

/// The residuals of a formula at some parameters, and how each moves with each parameter.
#[derive(Debug, Clone, PartialEq)]
pub struct Linear {
    /// One for each measurement, already divided by its standard uncertainty or whatever weighs it.
    pub residuals: Vec<f64>,
    /// For each parameter the derivatives of all residuals by it.
    pub slopes: Vec<Vec<f64>>,
}

/// Evaluates the residual of each of `count` measurements with its exact derivatives.
pub fn linear<const N: usize>(
    parameters: &[f64],
    count: usize,
    residual: impl Fn(&[Dual<N>; N], usize) -> Dual<N>,
) -> Option<Linear> {
    let parameters = Dual::parameters(parameters.try_into().ok()?);
    let mut found =
        Linear { residuals: Vec::with_capacity(count), slopes: vec![Vec::with_capacity(count); N] };
    for index in 0..count {
        let at = residual(&parameters, index);
        found.residuals.push(at.value);
        for (column, slope) in found.slopes.iter_mut().zip(at.slopes) {
            column.push(slope);
        }
    }
    Some(found)
}

/// Where a parameter may lie, both ends included; an end may be infinite.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Bounds {
    /// The lower end.
    pub low: f64,
    /// The upper end.
    pub high: f64,
}

impl Bounds {
    /// Anywhere.
    pub const NONE: Bounds = Bounds { low: f64::NEG_INFINITY, high: f64::INFINITY };

    /// From `low` on.
    pub const fn from(low: f64) -> Bounds {
        Bounds { low, high: f64::INFINITY }
    }
}

/// The parameters with the least sum of squares.
#[derive(Debug, Clone, PartialEq)]
pub struct Fit {
    /// The parameters.
    pub parameters: Vec<f64>,
    /// The weighted residuals there, formula less measurement.
    pub residuals: Vec<f64>,
    /// Their sum of squares.
    pub sum_of_squares: f64,
    /// Whether each parameter is held by a bound: beyond it the sum would be smaller still.
    pub held: Vec<bool>,
    /// (JᵀJ)⁻¹ of the parameters that are not held, J being the slopes; zero in the rows and columns of the held, and of those that
    /// the measurements leave [`Fit::undetermined`].
    pub inverse: Vec<Vec<f64>>,
    /// Whether each parameter can be changed together with others, or alone, without any residual moving, to ten digits.
    pub undetermined: Vec<bool>,
    /// How often the formula was evaluated.
    pub evaluations: usize,
}

/// Why there are no such parameters.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum NoFit {
    /// Fewer measurements than parameters, or no parameter.
    TooFew,
    /// The formula gives infinity or no number at the start.
    NotFinite,
    /// The search did not come to rest.
    TooManySteps,
}

/// The parameters with the least sum of squared residuals, starting from a guess.
///
/// ```text
/// (JᵀJ + μ D²) δ = −Jᵀ r,      D = the length of each column of J
/// ```
///
/// * `evaluate` – residuals and slopes at some parameters; where they are infinite or no number, or where it gives nothing, counts as
///   high ground
/// * `start` – a guess; what lies outside of the bounds is moved to the nearest bound
/// * `bounds` – one for each parameter
///
/// Each step lowers the sum of squares: the damping μ grows until it does, and shrinks where the straight-line prediction was good.
/// A parameter that would leave its bounds is stopped at the bound; one that lies there and is pushed outward is left out of
/// the step. Steps are solved from the singular values of the scaled J, so that nothing is squared, and the search
/// ends with undamped steps until rounding stops them. With several valleys it is one of them.
///
/// Source: K. Levenberg, Quart. Appl. Math. 2, 164–168 (1944); D. W. Marquardt, J. Soc. Indust. Appl. Math. 11, 431–441 (1963);
/// the rule for μ of K. Madsen, H. B. Nielsen,
/// O. Tingleff, Methods for Non-Linear Least Squares Problems, 2nd edition (Technical University of Denmark, 2004), section 3.2.
///
/// # Example
///
/// ```
/// use leastlight::numeric::fit::{Bounds, fit, linear};
///
/// // y = a e^(b x) through (0, 2), (1, 4), (2, 8): a = 2, b = ln 2.
/// let points = [(0.0, 2.0), (1.0, 4.0), (2.0, 8.0)];
/// let evaluate = |p: &[f64]| linear::<2>(p, 3, |[a, b], i| *a * (*b * points[i].0).exp() - points[i].1);
/// let found = fit(&evaluate, &[1.0, 1.0], &[Bounds::NONE; 2]).unwrap();
/// assert!((found.parameters[1] - core::f64::consts::LN_2).abs() < 1e-12);
/// ```
pub fn fit(
    evaluate: &dyn Fn(&[f64]) -> Option<Linear>,
    start: &[f64],
    bounds: &[Bounds],
) -> Result<Fit, NoFit> {
    let clamped = |parameters: Vec<f64>| -> Vec<f64> {
        let inside = parameters.iter().zip(bounds);
        inside.map(|(value, bounds)| value.max(bounds.low).min(bounds.high)).collect()
    };
    let at = clamped(start.to_vec());
    let here = evaluate(&at).filter(is_finite).ok_or(NoFit::NotFinite)?;
    if at.is_empty() || here.residuals.len() < at.len() {
        return Err(NoFit::TooFew);
    }
    let mut search = Search {
        evaluate,
        bounds,
        clamped: &clamped,
        sum: dot(&here.residuals, &here.residuals),
        scale: scale(&here),
        at,
        here,
        evaluations: 1,
    };
    search.descend()?;
    search.finish();
    Ok(search.result())
}

fn is_finite(linear: &Linear) -> bool {
    let all = linear.slopes.iter().flatten().chain(&linear.residuals);
    dot(&linear.residuals, &linear.residuals).is_finite() && all.into_iter().all(|number| number.is_finite())
}

struct Search<'f> {
    evaluate: &'f dyn Fn(&[f64]) -> Option<Linear>,
    bounds: &'f [Bounds],
    clamped: &'f dyn Fn(Vec<f64>) -> Vec<f64>,
    /// Where the search stands.
    at: Vec<f64>,
    here: Linear,
    sum: f64,
    /// D.
    scale: Vec<f64>,
    evaluations: usize,
}

impl Search<'_> {
    /// Goes down until the residuals are as square to all directions as rounding lets them be seen to be.
    fn descend(&mut self) -> Result<(), NoFit> {
        let (mut damping, mut growth) = (FIRST_DAMPING, 2.0);
        while self.evaluations < MOST_STEPS {
            let free = self.free();
            let turned = self.turned(&free);
            if free.is_empty() || self.sum == 0.0 || self.square(&turned) {
                return Ok(());
            }
            // Each turn makes the step shorter, until the sum falls.
            loop {
                let to = self.stepped(&free, &turned, damping);
                if to == self.at || damping > MOST_DAMPING {
                    return Ok(());
                }
                self.evaluations += 1;
                let predicted = self.sum - self.predicted(&to);
                let there = (self.evaluate)(&to).filter(is_finite);
                let gained = there.as_ref().map(|there| self.sum - dot(&there.residuals, &there.residuals));
                match (there, gained) {
                    (Some(there), Some(gained)) if gained > 1e-4 * predicted && gained > 0.0 => {
                        let quality = gained / predicted;
                        damping *= (1.0 - (2.0 * quality - 1.0).powi(3)).max(1.0 / 3.0);
                        growth = 2.0;
                        self.go(to, there);
                        break;
                    }
                    _ => {
                        damping *= growth;
                        growth *= 2.0;
                    }
                }
                if self.evaluations >= MOST_STEPS {
                    return Err(NoFit::TooManySteps);
                }
            }
        }
        Err(NoFit::TooManySteps)
    }

    /// The sum of squares hardly tells the last digits of the parameters; the steps themselves do.
    fn finish(&mut self) {
        let mut before = f64::INFINITY;
        for _ in 0..LAST_STEPS {
            let free = self.free();
            let turned = self.turned(&free);
            let to = self.stepped(&free, &turned, 0.0);
            let moved: Vec<f64> =
                to.iter().zip(&self.at).zip(&self.scale).map(|((to, at), scale)| scale * (to - at)).collect();
            let length = norm(&moved);
            if length == 0.0 || length > 0.95 * before {
                return;
            }
            let Some(there) = (self.evaluate)(&to).filter(is_finite) else { return };
            // A step this small cannot raise the sum by more than rounding, unless the formula is not smooth.
            if dot(&there.residuals, &there.residuals) > self.sum * (1.0 + 1e-9) {
                return;
            }
            self.evaluations += 1;
            self.go(to, there);
            before = length;
        }
    }

    fn go(&mut self, to: Vec<f64>, there: Linear) {
        self.sum = dot(&there.residuals, &there.residuals);
        self.scale = scale(&there);
        (self.at, self.here) = (to, there);
    }

    /// The parameters that are not held by a bound.
    fn free(&self) -> Vec<usize> {
        (0..self.at.len()).filter(|index| !self.holds(*index)).collect()
    }

    fn holds(&self, index: usize) -> bool {
        let uphill = dot(&self.here.slopes[index], &self.here.residuals);
        let (at, bounds) = (self.at[index], self.bounds[index]);
        (at <= bounds.low && uphill >= 0.0) || (at >= bounds.high && uphill <= 0.0)
    }

    /// J D⁻¹ of some parameters, made orthogonal.
    fn turned(&self, free: &[usize]) -> Orthogonal {
        let scaled = |index: &usize| {
            let scale = 1.0 / self.scale[*index];
            self.here.slopes[*index].iter().map(|slope| slope * scale).collect()
        };
        orthogonal(free.iter().map(scaled).collect())
    }

    /// Where a step with a damping leads, inside the bounds.
    fn stepped(&self, free: &[usize], turned: &Orthogonal, damping: f64) -> Vec<f64> {
        let mut to = self.at.clone();
        let greatest = turned.singular.iter().copied().fold(0.0, f64::max);
        for ((column, turned), singular) in turned.columns.iter().zip(&turned.turned).zip(&turned.singular) {
            // Directions in which nothing moves are left alone.
            if *singular <= 1e-14 * greatest {
                continue;
            }
            let along = -dot(column, &self.here.residuals) / (singular * singular + damping);
            for (index, turned) in free.iter().zip(turned) {
                to[*index] += turned * along / self.scale[*index];
            }
        }
        (self.clamped)(to)
    }

    /// The sum of squares that straight lines promise at a place.
    fn predicted(&self, to: &[f64]) -> f64 {
        let mut residuals = self.here.residuals.clone();
        for ((slopes, to), at) in self.here.slopes.iter().zip(to).zip(&self.at) {
            for (residual, slope) in residuals.iter_mut().zip(slopes) {
                *residual += slope * (to - at);
            }
        }
        dot(&residuals, &residuals)
    }

    /// Whether the residuals are square to all directions, to within a ten-millionth of the parameters' uncertainty.
    ///
    /// Source: the relative offset of D. M. Bates and D. G. Watts, Technometrics 23, 179–183 (1981).
    fn square(&self, turned: &Orthogonal) -> bool {
        let along: f64 = turned
            .columns
            .iter()
            .zip(&turned.singular)
            .filter(|(_, singular)| **singular > 0.0)
            .map(|(column, singular)| (dot(column, &self.here.residuals) / singular).powi(2))
            .sum();
        along <= 1e-14 * self.sum
    }

    fn result(self) -> Fit {
        let Inverse { inverse, undetermined } = Inverse::of(&self.here.slopes, &self.free());
        Fit {
            held: (0..self.at.len()).map(|index| self.holds(index)).collect(),
            parameters: self.at,
            residuals: self.here.residuals,
            sum_of_squares: self.sum,
            inverse,
            undetermined,
            evaluations: self.evaluations,
        }
    }
}

/// The lengths of the columns of J.
fn scale(linear: &Linear) -> Vec<f64> {
    linear.slopes.iter().map(|column| unit(norm(column))).collect()
}

/// A length to divide by; a column of zeros divides by one.
pub(super) fn unit(length: f64) -> f64 {
    if length > 0.0 { length } else { 1.0 }
}

//! Least squares that a few wild points do not pull away.

use super::inverse::Inverse;
use super::least_squares::{Bounds, Fit, Linear, NoFit, fit};

/// Huber's constant for 95 % efficiency where all points are good.
pub const HUBER: f64 = 1.345;

/// The median absolute deviation of normal noise is this part of its standard deviation: Φ⁻¹(3/4).
const MEDIAN_OF_NORMAL: f64 = 0.674_489_750_196_081_7;

/// Rounds of weighing after which the weights are taken as they are.
const MOST_ROUNDS: usize = 200;

/// A fit in which points far off count less.
#[derive(Debug, Clone, PartialEq)]
pub struct Robust {
    /// The fit with the last weights. Its residuals are not weighted by them; its sum of squares and its inverse are those of
    /// unit weights.
    pub fit: Fit,
    /// The weight of each point, 1 for a good one.
    pub weights: Vec<f64>,
    /// The standard deviation of one residual, from the median of their sizes.
    pub scale: f64,
    /// What stands for the variance of one residual in the covariance (JᵀJ)⁻¹·s² of the parameters.
    pub variance: f64,
    /// Whether the weights came to rest.
    pub settled: bool,
}

/// Huber's estimate: the square of a small residual counts, of a large one its size.
///
/// ```text
/// w = min(1, c s/|r|),  c = 1.345,  s = median |r| / 0.6745
/// s² = K² [Σ ψ²/(n − p)] / [mean of ψ′]²,   ψ = w r,   K = 1 + (p/n)(1 − m)/m,   m = mean of ψ′ = share of points with w = 1
/// ```
///
/// Found by weighing and fitting in turn. Where half of the residuals are zero, s is zero and the plain fit stands.
///
/// Source: P. J. Huber, E. M. Ronchetti, Robust Statistics, 2nd edition (Wiley, 2009), sections 7.6 and 7.8.
pub fn robust_fit(
    evaluate: &dyn Fn(&[f64]) -> Option<Linear>,
    start: &[f64],
    bounds: &[Bounds],
) -> Result<Robust, NoFit> {
    let mut found = fit(evaluate, start, bounds)?;
    let count = found.residuals.len();
    let mut weights = vec![1.0; count];
    let mut settled = false;
    let mut evaluations = found.evaluations;
    for _ in 0..MOST_ROUNDS {
        let spread = spread(&found.residuals);
        let next: Vec<f64> = found.residuals.iter().map(|residual| weight(*residual, spread)).collect();
        let change = next.iter().zip(&weights).map(|(next, now)| (next - now).abs()).fold(0.0, f64::max);
        weights = next;
        if change <= 1e-12 {
            settled = true;
            break;
        }
        let roots: Vec<f64> = weights.iter().map(|weight| weight.sqrt()).collect();
        let weighed = |parameters: &[f64]| Some(weighted(evaluate(parameters)?, &roots));
        let mut next = fit(&weighed, &found.parameters, bounds)?;
        evaluations += next.evaluations;
        next.residuals = evaluate(&next.parameters).ok_or(NoFit::NotFinite)?.residuals;
        found = next;
    }
    // The covariance is made of the slopes without weights.
    let here = evaluate(&found.parameters).ok_or(NoFit::NotFinite)?;
    let free: Vec<usize> = (0..found.held.len()).filter(|index| !found.held[*index]).collect();
    found.inverse = Inverse::of(&here.slopes, &free).inverse;
    found.sum_of_squares = found.residuals.iter().map(|residual| residual * residual).sum();
    found.evaluations = evaluations;
    let scale = spread(&found.residuals);
    let variance = variance(&found.residuals, &weights, free.len());
    Ok(Robust { fit: found, weights, scale, variance, settled })
}

fn weight(residual: f64, spread: f64) -> f64 {
    let (size, most) = (residual.abs(), HUBER * spread);
    if spread == 0.0 || size <= most { 1.0 } else { most / size }
}

fn weighted(mut linear: Linear, roots: &[f64]) -> Linear {
    let columns = linear.slopes.iter_mut().chain(std::iter::once(&mut linear.residuals));
    for column in columns {
        for (number, root) in column.iter_mut().zip(roots) {
            *number *= root;
        }
    }
    linear
}

/// The standard deviation of normal noise whose sizes have the median of these.
fn spread(residuals: &[f64]) -> f64 {
    let mut sizes: Vec<f64> = residuals.iter().map(|residual| residual.abs()).collect();
    sizes.sort_by(f64::total_cmp);
    let half = sizes.len() / 2;
    let median = match sizes.len() {
        0 => 0.0,
        count if count % 2 == 1 => sizes[half],
        _ => 0.5 * (sizes[half - 1] + sizes[half]),
    };
    median / MEDIAN_OF_NORMAL
}

fn variance(residuals: &[f64], weights: &[f64], free: usize) -> f64 {
    let (n, p) = (residuals.len() as f64, free as f64);
    let good = weights.iter().filter(|weight| **weight >= 1.0).count() as f64 / n;
    let squares: f64 = residuals.iter().zip(weights).map(|(r, w)| (w * r) * (w * r)).sum();
    let k = 1.0 + p / n * (1.0 - good) / good;
    k * k * squares / (n - p) / (good * good)
}

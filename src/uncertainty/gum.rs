//! The law of propagation of uncertainty.

use super::input::{Correlations, Input};
use crate::numeric::derivative::derivative;
use crate::statistics::transfer::{Uncertain, combined};

/// A quantity as a function of the deviations of its inputs; nothing where it has no value.
pub type Model<'m> = dyn FnMut(&[f64]) -> Option<f64> + 'm;

/// What the inputs' uncertainties make of a quantity.
#[derive(Debug, Clone, PartialEq)]
pub struct Propagated {
    /// The quantity at the estimates.
    pub value: f64,
    /// Its derivative c by each input.
    pub sensitivities: Vec<f64>,
    /// c·u of each input, with its sign.
    pub contributions: Vec<f64>,
    /// Share of the variance that comes with each input; they add up to 1. Below 0 where a correlation makes an input
    /// take away more than it brings.
    pub shares: Vec<f64>,
    /// Combined standard uncertainty u.
    pub standard: f64,
    /// Effective degrees of freedom; infinite where all inputs' are; nothing where correlated inputs forbid the formula.
    pub effective_degrees_of_freedom: Option<f64>,
}

/// Why uncertainties do not propagate.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum NoBudget {
    /// The quantity has no value at the estimates.
    NoValue,
    /// The quantity has no derivative by this input: it has no value on either side of the estimate.
    NoDerivative(usize),
}

/// Propagates to first order.
///
/// ```text
/// u²(y) = Σᵢ Σⱼ cᵢ cⱼ uᵢ uⱼ rᵢⱼ,   cᵢ = ∂f/∂xᵢ        eqs. (10), (13), (16)
/// ν = u⁴ / Σ (cᵢuᵢ)⁴/νᵢ                               eq. (G.2b)
/// ```
///
/// * `inputs`, `correlations` – as many of the one as of the other
///
/// Holds where the model is straight over the inputs' uncertainties; see [`second_order`].
///
/// Source: JCGM 100:2008, 5.1.2, 5.2.2 and G.4.1.
pub fn propagate(
    model: &mut Model,
    inputs: &[Input],
    correlations: &Correlations,
) -> Result<Propagated, NoBudget> {
    debug_assert_eq!(inputs.len(), correlations.size());
    let mut deviations = vec![0.0; inputs.len()];
    let value = model(&deviations).ok_or(NoBudget::NoValue)?;
    let mut sensitivities = Vec::with_capacity(inputs.len());
    for (index, input) in inputs.iter().enumerate() {
        let mut along = |deviation: f64| {
            deviations[index] = deviation;
            model(&deviations)
        };
        let slope = derivative(&mut along, 0.0, input.step).ok_or(NoBudget::NoDerivative(index))?;
        deviations[index] = 0.0;
        sensitivities.push(slope);
    }
    let contributions: Vec<f64> =
        sensitivities.iter().zip(inputs).map(|(slope, input)| slope * input.standard).collect();
    // Relative to the greatest, so that squares of small uncertainties do not sink below the smallest number.
    let greatest = contributions.iter().fold(0.0, |greatest: f64, part| greatest.max(part.abs()));
    let scaled = |i: usize| if greatest > 0.0 { contributions[i] / greatest } else { 0.0 };
    let parts: Vec<f64> = (0..inputs.len())
        .map(|i| {
            let with_others: f64 = (0..inputs.len()).map(|j| correlations.between(i, j) * scaled(j)).sum();
            scaled(i) * with_others
        })
        .collect();
    // Opposite contributions that cancel wholly may leave a rounding below 0.
    let variance = parts.iter().sum::<f64>().max(0.0);
    let shares = parts.iter().map(|part| if variance > 0.0 { part / variance } else { 0.0 }).collect();
    let effective_degrees_of_freedom = (!correlations.any()).then(|| {
        let uncertain = |(part, input): (&f64, &Input)| Uncertain {
            standard: part.abs(),
            degrees_of_freedom: input.degrees_of_freedom,
        };
        combined(&contributions.iter().zip(inputs).map(uncertain).collect::<Vec<_>>()).degrees_of_freedom
    });
    Ok(Propagated {
        value,
        sensitivities,
        shares,
        standard: greatest * variance.sqrt(),
        contributions,
        effective_degrees_of_freedom,
    })
}

/// Whether a model is straight over its inputs' uncertainties, as far as a few looks tell: all inputs are moved by one
/// standard uncertainty at once, up and down in eight patterns, and what first order does not foresee is below a
/// hundredth of u each time. It saves the many evaluations of [`second_order`] where there is nothing to be found.
pub fn is_straight(model: &mut Model, inputs: &[Input], first: &Propagated) -> bool {
    let mut deviations = vec![0.0; inputs.len()];
    (0..PATTERNS).all(|pattern| {
        let mut foreseen = first.value;
        for (index, deviation) in deviations.iter_mut().enumerate() {
            let sign = sign(pattern, index);
            *deviation = sign * inputs[index].standard;
            foreseen += sign * first.contributions[index];
        }
        model(&deviations).is_some_and(|value| (value - foreseen).abs() <= 0.01 * first.standard)
    })
}

/// Patterns of signs, each followed by its opposite.
const PATTERNS: usize = 8;

/// The sign of an input in a pattern: a Walsh function, by the parity of the bits that its place shares with a mask.
fn sign(pattern: usize, index: usize) -> f64 {
    const MASKS: [usize; PATTERNS / 2] = [0b0000, 0b0101, 0b0011, 0b1110];
    let odd = (index & MASKS[pattern / 2]).count_ones() as usize + pattern;
    if odd.is_multiple_of(2) { 1.0 } else { -1.0 }
}

/// What the curvature of a model adds.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SecondOrder {
    /// Standard uncertainty with the terms of the next order; absent where they make the variance negative, so that a
    /// series says nothing.
    pub standard: Option<f64>,
    /// By how much the mean differs from the value at the estimates.
    pub mean_shift: f64,
}

/// The terms of the next order, for independent inputs that are spread symmetrically.
///
/// ```text
/// Σᵢ Σⱼ [½ fᵢⱼ² + fᵢ fᵢⱼⱼ] uᵢ² uⱼ²        note to 5.1.2
/// mean − f = ½ Σ fᵢᵢ uᵢ²
/// ```
///
/// The derivatives are differences over one standard uncertainty, the width at which they matter. Nothing where the
/// model has no value that far out. The products of fourth moments are those of normal inputs.
///
/// Source: JCGM 100:2008, 5.1.2, note, and H.1.7.
pub fn second_order(model: &mut Model, inputs: &[Input], first: &Propagated) -> Option<SecondOrder> {
    let mut deviations = vec![0.0; inputs.len()];
    let centre = first.value;
    let live: Vec<usize> = (0..inputs.len()).filter(|&i| inputs[i].standard > 0.0).collect();
    let mut at = |places: &[(usize, f64)]| {
        for &(i, steps) in places {
            deviations[i] = steps * inputs[i].standard;
        }
        let value = model(&deviations);
        for &(i, _) in places {
            deviations[i] = 0.0;
        }
        value
    };
    let (mut more, mut mean_shift) = (0.0, 0.0);
    let mut sides = Vec::with_capacity(live.len());
    for &i in &live {
        let (above, below) = (at(&[(i, 1.0)])?, at(&[(i, -1.0)])?);
        let (far_above, far_below) = (at(&[(i, 2.0)])?, at(&[(i, -2.0)])?);
        let curvature = above - 2.0 * centre + below;
        let third = (far_above - 2.0 * above + 2.0 * below - far_below) / 2.0;
        more += 0.5 * curvature * curvature + first.contributions[i] * third;
        mean_shift += 0.5 * curvature;
        sides.push((above, below));
    }
    for (a, &i) in live.iter().enumerate() {
        for (b, &j) in live.iter().enumerate().skip(a + 1) {
            let (both, first_only) = (at(&[(i, 1.0), (j, 1.0)])?, at(&[(i, 1.0), (j, -1.0)])?);
            let (second_only, neither) = (at(&[(i, -1.0), (j, 1.0)])?, at(&[(i, -1.0), (j, -1.0)])?);
            let mixed = (both - first_only - second_only + neither) / 4.0;
            let ((i_above, i_below), (j_above, j_below)) = (sides[a], sides[b]);
            // fᵢⱼⱼ and fⱼᵢᵢ: how the curvature in the one changes along the other.
            let along_i =
                ((both + first_only - 2.0 * i_above) - (second_only + neither - 2.0 * i_below)) / 2.0;
            let along_j =
                ((both + second_only - 2.0 * j_above) - (first_only + neither - 2.0 * j_below)) / 2.0;
            // Both orders of the pair stand in the double sum.
            more += mixed * mixed + first.contributions[i] * along_i + first.contributions[j] * along_j;
        }
    }
    let variance = first.standard * first.standard + more;
    (variance.is_finite() && mean_shift.is_finite())
        .then(|| SecondOrder { standard: (variance >= 0.0).then(|| variance.sqrt()), mean_shift })
}

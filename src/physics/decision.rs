//! Telling levels apart: thresholds, and the bit error ratio that remains.
//!
//! Noise is taken as Gaussian at each level, levels as equally frequent, and more than two of them as Gray coded, so that
//! neighbours differ in one bit: 0 1 for two, 00 01 11 10 for four.

use crate::numeric::root::root;
use crate::statistics::normal::upper_tail;

/// What the decision sees while one symbol stands.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Level {
    /// Current in A.
    pub current_a: f64,
    /// Noise on it, RMS in A, ≥ 0.
    pub noise_rms_a: f64,
}

/// Where the thresholds are put.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Threshold {
    /// Where the bit error ratio is least.
    Optimum,
    /// Halfway between neighbouring currents.
    Midpoint,
    /// Where both neighbours are equally many RMS noises away; the error ratio is the textbook's ½ erfc(Q/√2).
    QFactor,
}

/// Thresholds, and what they achieve.
#[derive(Clone, Debug, PartialEq)]
pub struct Decision {
    /// Share of bits that are read wrongly.
    pub error_ratio: f64,
    /// Thresholds in A, lowest first, one fewer than levels.
    pub thresholds_a: Vec<f64>,
}

/// Decides between two levels (NRZ) or four (PAM4).
///
/// * `levels` – lowest current first
/// * `rule` – where the thresholds are put
///
/// Without noise at a level, "at the threshold" means on its right side: with a noiseless zero the optimum is the limit of a
/// threshold just above it.
///
/// Source: S. D. Personick, Bell Syst. Tech. J. 52, 843–874 (1973) for Q; the optimum is where weighted densities are
/// equal, as in J. Neyman, E. S. Pearson, Phil. Trans. R. Soc. A 231, 289–337 (1933).
///
/// # Example
///
/// ```
/// use leastlight::physics::decision::{Level, Threshold, decide};
///
/// let levels = [Level { current_a: 0.0, noise_rms_a: 1e-7 }, Level { current_a: 1.2e-6, noise_rms_a: 1e-7 }];
/// let decision = decide(&levels, Threshold::Optimum);
/// assert!((decision.thresholds_a[0] - 0.6e-6).abs() < 1e-18);
/// assert!((decision.error_ratio - 9.866e-10).abs() < 0.001e-10); // Q = 6
/// ```
pub fn decide(levels: &[Level], rule: Threshold) -> Decision {
    debug_assert!(matches!(levels.len(), 2 | 4));
    match (rule, levels) {
        (Threshold::QFactor, _) => {
            let both_sides: f64 = q_factors(levels).into_iter().map(|q| 2.0 * upper_tail(q)).sum();
            Decision { error_ratio: both_sides / bits(levels), thresholds_a: between(levels, balanced) }
        }
        (Threshold::Midpoint, _) => at(levels, between(levels, halfway)),
        (Threshold::Optimum, [_, _]) => at(levels, between(levels, crossing)),
        (Threshold::Optimum, _) => at(levels, best_thresholds(levels)),
    }
}

/// Q of each eye, lowest first: the distance of neighbouring currents over the sum of their RMS noises.
///
/// ```text
/// Q = (I₁ − I₀)/(σ₁ + σ₀)
/// ```
///
/// Infinite where neither level has noise.
///
/// Source: S. D. Personick, Bell Syst. Tech. J. 52, 843–874 (1973).
pub fn q_factors(levels: &[Level]) -> Vec<f64> {
    between(levels, |lower, upper| {
        let distance = upper.current_a - lower.current_a;
        if distance == 0.0 { 0.0 } else { distance / (upper.noise_rms_a + lower.noise_rms_a) }
    })
}

/// Bit error ratio with the thresholds given.
///
/// ```text
/// two levels:   ½ [Q((D − I₀)/σ₀) + Q((I₁ − D)/σ₁)]
/// any number:   Σ over thresholds and levels of ± tail, over the bits in all levels
/// ```
///
/// * `levels` – lowest current first, two or four
/// * `thresholds_a` – D in A, one fewer than levels, lowest first
///
/// A threshold flips one bit of the Gray code. Passing it from its own level's side costs an error, unless another flip of the
/// same bit mends it: hence the signs. Only tails are added, so 1e-30 keeps its digits.
pub fn error_ratio_at(levels: &[Level], thresholds_a: &[f64]) -> f64 {
    let wrong = |(below, &threshold_a): (usize, &f64)| wrong_bits(levels, below + 1, threshold_a);
    thresholds_a.iter().enumerate().map(wrong).sum::<f64>() / bits(levels)
}

fn at(levels: &[Level], thresholds_a: Vec<f64>) -> Decision {
    Decision { error_ratio: error_ratio_at(levels, &thresholds_a), thresholds_a }
}

/// Bits in all levels together: 2 for two levels, 8 for four.
pub(super) fn bits<T>(levels: &[T]) -> f64 {
    let per_level = levels.len().checked_ilog2().unwrap_or(0).max(1);
    f64::from(per_level) * levels.len() as f64
}

/// Something between each level and the next.
fn between(levels: &[Level], of: impl Fn(&Level, &Level) -> f64) -> Vec<f64> {
    levels.iter().zip(levels.iter().skip(1)).map(|(lower, upper)| of(lower, upper)).collect()
}

fn halfway(lower: &Level, upper: &Level) -> f64 {
    lower.current_a + 0.5 * (upper.current_a - lower.current_a)
}

/// Equally many RMS noises away from both.
fn balanced(lower: &Level, upper: &Level) -> f64 {
    let share = lower.noise_rms_a / (lower.noise_rms_a + upper.noise_rms_a);
    let threshold_a = lower.current_a + share * (upper.current_a - lower.current_a);
    if threshold_a.is_finite() { threshold_a } else { halfway(lower, upper) }
}

/// Where two Gaussian densities cross, between their centres or, for a faint upper level, beyond: the least sum of tails.
///
/// ```text
/// with δ = (I₁−I₀)/σ₁, L = ln(σ₁/σ₀), C = δ² + 2L, a = (σ₁/σ₀)² − 1 ≥ 0:
/// D = I₀ + σ₁ C/(δ + √(δ² + a C))
/// ```
///
/// The root of the usual quadratic, written so that it does not cancel as σ₁ → σ₀. For σ₁ < σ₀ both change places.
fn crossing(lower: &Level, upper: &Level) -> f64 {
    let distance = upper.current_a - lower.current_a;
    let (narrow, wide, sign) =
        if upper.noise_rms_a >= lower.noise_rms_a { (lower, upper, 1.0) } else { (upper, lower, -1.0) };
    let (s0, s1) = (narrow.noise_rms_a, wide.noise_rms_a);
    let excess = (s1 - s0) / s0;
    if s1 > 0.0 && !excess.is_finite() {
        // Noiseless beside noisy: the limit is the noiseless level itself.
        return narrow.current_a;
    }
    let delta = distance / s1;
    let c = delta * delta + 2.0 * libm::log1p(excess);
    let a = excess * (excess + 2.0);
    let threshold_a = narrow.current_a + sign * s1 * (c / (delta + (delta * delta + a * c).sqrt()));
    // No difference at all, or no noise: nothing to choose.
    if threshold_a.is_finite() { threshold_a } else { halfway(lower, upper) }
}

/// Whether a level has, in the bit that the threshold `below` levels up flips, the value of the side above: +1, or −1.
pub(super) fn sign(below: usize, index: usize) -> f64 {
    let gray = |i: usize| i ^ (i >> 1);
    let flipped = gray(below) ^ gray(below - 1);
    if gray(index) & flipped == gray(below) & flipped { 1.0 } else { -1.0 }
}

/// Chance that noise carries a level across a threshold at this distance from it.
fn tail(distance_a: f64, noise_rms_a: f64) -> f64 {
    if noise_rms_a > 0.0 {
        upper_tail(distance_a / noise_rms_a)
    } else if distance_a < 0.0 {
        1.0
    } else {
        0.0
    }
}

/// Bits read wrongly on account of the threshold that has `below` levels beneath it, summed over the levels.
fn wrong_bits(levels: &[Level], below: usize, threshold_a: f64) -> f64 {
    let crossed = |(index, level): (usize, &Level)| {
        let up = threshold_a - level.current_a;
        if index < below {
            -sign(below, index) * tail(up, level.noise_rms_a)
        } else {
            sign(below, index) * tail(-up, level.noise_rms_a)
        }
    };
    levels.iter().enumerate().map(crossed).sum()
}

/// The thresholds of the least bit error ratio for four levels.
///
/// It is a sum of one function per threshold, so each is minimised by itself. Only the outer two share a bit and must keep
/// their order; far down in the noise their separate minima may not.
fn best_thresholds(levels: &[Level]) -> Vec<f64> {
    if let Some(thresholds_a) = thresholds_in_open_eyes(levels) {
        return thresholds_a;
    }
    let least = |a: (f64, f64), b: (f64, f64)| if b.1 < a.1 { b } else { a };
    let (first, second, third) = (valleys(levels, 1), valleys(levels, 2), valleys(levels, 3));
    let nothing = (f64::NAN, f64::INFINITY);
    let middle = second.into_iter().fold(nothing, least);
    let ordered = first
        .iter()
        .flat_map(|low| third.iter().map(move |high| (low, high)))
        .filter(|(low, high)| low.0 <= high.0)
        .min_by(|a, b| (a.0.1 + a.1.1).total_cmp(&(b.0.1 + b.1.1)));
    match ordered {
        Some((low, high)) => vec![low.0, middle.0, high.0],
        None => between(levels, halfway),
    }
}

/// The same where every eye is open, which is nearly always, at a tenth of the cost.
///
/// Halfway through each eye fewer than a tenth of a bit is wrong. A threshold beyond a neighbouring level misreads half
/// of that level, less at most a tenth that another tail mends: so the least is inside the eye, where the densities of
/// its two sides cross once.
fn thresholds_in_open_eyes(levels: &[Level]) -> Option<Vec<f64>> {
    let eye = |(index, (lower, upper)): (usize, (&Level, &Level))| {
        let below = index + 1;
        let noisy = lower.noise_rms_a > 0.0 && upper.noise_rms_a > 0.0;
        let open = noisy && wrong_bits(levels, below, halfway(lower, upper)) < 0.1;
        let balance = |threshold_a: f64| balance(levels, below, threshold_a);
        open.then(|| root(balance, lower.current_a, upper.current_a, 1e-13).ok()).flatten()
    };
    levels.iter().zip(levels.iter().skip(1)).enumerate().map(eye).collect()
}

/// Where the wrong bits of one threshold have a valley, each with its depth. The midpoint is always among them.
fn valleys(levels: &[Level], below: usize) -> Vec<(f64, f64)> {
    let balance = |threshold_a: f64| balance(levels, below, threshold_a);
    // Whole RMS noises around each level: every slope of every density has its own points.
    let mut places: Vec<f64> = levels
        .iter()
        .filter(|level| level.noise_rms_a > 0.0)
        .flat_map(|level| (-4..=4).map(|n| level.current_a + f64::from(n) * level.noise_rms_a))
        .collect();
    places.sort_unstable_by(f64::total_cmp);
    let signs: Vec<(f64, f64)> = places.into_iter().map(|place| (place, balance(place))).collect();
    let turns = signs.iter().zip(signs.iter().skip(1)).filter(|(left, right)| left.1 < 0.0 && right.1 >= 0.0);
    let roots = turns.filter_map(|(left, right)| root(balance, left.0, right.0, 1e-13).ok());

    let noiseless = levels.iter().filter(|level| level.noise_rms_a == 0.0).map(|level| level.current_a);
    let pair = levels.iter().zip(levels.iter().skip(1)).nth(below - 1);
    let middle = pair.map(|(lower, upper)| halfway(lower, upper));
    // Levels buried in unequal noise are read best where one of them is never read at all: beyond every tail.
    let lowest = levels.iter().map(|level| level.current_a - 40.0 * level.noise_rms_a).reduce(f64::min);
    let highest = levels.iter().map(|level| level.current_a + 40.0 * level.noise_rms_a).reduce(f64::max);
    let all = roots.chain(noiseless).chain(middle).chain(lowest).chain(highest);
    all.map(|threshold_a| (threshold_a, wrong_bits(levels, below, threshold_a))).collect()
}

/// Logarithm of the summed densities of the levels that lose by a higher threshold, less that of those that gain: negative
/// below a valley of the wrong bits, positive above.
fn balance(levels: &[Level], below: usize, threshold_a: f64) -> f64 {
    ln_density(levels, below, threshold_a, 1.0) - ln_density(levels, below, threshold_a, -1.0)
}

/// Logarithm of the summed Gaussian densities of the noisy levels on one side of the code, up to a constant.
fn ln_density(levels: &[Level], below: usize, at_a: f64, side: f64) -> f64 {
    let of_side = levels
        .iter()
        .enumerate()
        .filter(|(index, level)| sign(below, *index) == side && level.noise_rms_a > 0.0);
    of_side.fold(f64::NEG_INFINITY, |sum, (_, level)| {
        let z = (at_a - level.current_a) / level.noise_rms_a;
        let one = -0.5 * z * z - libm::log(level.noise_rms_a);
        let (more, less) = (sum.max(one), sum.min(one));
        if less == f64::NEG_INFINITY { more } else { more + libm::log1p(libm::exp(less - more)) }
    })
}

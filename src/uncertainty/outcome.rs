//! What a run of trials says: mean, standard deviation, intervals, histogram.

use serde::Serialize;

/// The result of a run.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Outcome {
    /// Trials that gave a value.
    pub trials: usize,
    /// Trials in which the model had none, so that the rest is the result on the condition that it has.
    pub failed: usize,
    /// Whether an adaptive run became stable before its trials were used up; absent for a fixed count.
    pub stable: Option<bool>,
    /// Mean.
    pub mean: f64,
    /// Standard deviation.
    pub standard: f64,
    /// Median.
    pub median: f64,
    /// As much probability below as above.
    pub symmetric: [f64; 2],
    /// The shortest interval.
    pub shortest: [f64; 2],
    /// How the values lie.
    pub histogram: Histogram,
}

/// Counts of values in bins of equal width.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Histogram {
    /// Lower end of the first bin.
    pub from: f64,
    /// Upper end of the last.
    pub to: f64,
    /// Values in each bin.
    pub counts: Vec<usize>,
    /// Values outside, beyond five standard deviations.
    pub outside: usize,
}

/// Bins of a histogram: enough for a shape, few enough that a million trials leave no noise to be seen.
const BINS: usize = 80;

/// Sums up a run; nothing where no trial gave a value. The order of `values` is lost.
///
/// ```text
/// q = pM rounded,  r = (M − q)/2 rounded:  symmetric [y₍ᵣ₎, y₍ᵣ₊q₎],  shortest the least y₍ᵣ₊q₎ − y₍ᵣ₎ over all r
/// ```
///
/// Source: JCGM 101:2008, 7.5 to 7.7, with the rule of 7.7.2 for q and r.
pub fn outcome(
    values: &mut [f64],
    failed: usize,
    stable: Option<bool>,
    coverage_probability: f64,
) -> Option<Outcome> {
    let count = values.len();
    if count == 0 {
        return None;
    }
    // About the first value, so that a small spread on a large value keeps its digits.
    let about = values[0];
    let shift = values.iter().map(|value| value - about).sum::<f64>() / count as f64;
    let mean = about + shift;
    let squares: f64 = values.iter().map(|value| (value - mean) * (value - mean)).sum();
    let standard = (squares / (count.max(2) - 1) as f64).sqrt();
    let histogram = histogram(values, mean, standard);
    let within = ((coverage_probability * count as f64).round() as usize).clamp(1, count);
    let spare = count - within;
    sort_ends(values, spare);
    let at = |rank: usize| values[rank.clamp(1, count) - 1];
    let lower = spare.div_ceil(2).max(1);
    let symmetric = [at(lower), at(lower + within)];
    let mut shortest = symmetric;
    for rank in 1..=spare {
        if at(rank + within) - at(rank) < shortest[1] - shortest[0] {
            shortest = [at(rank), at(rank + within)];
        }
    }
    let (_, median, _) = values.select_nth_unstable_by(count / 2, f64::total_cmp);
    let median = *median;
    Some(Outcome { trials: count, failed, stable, mean, standard, median, symmetric, shortest, histogram })
}

/// Sorts the lowest and the highest values that an interval may end at; what lies between need not be in order.
fn sort_ends(values: &mut [f64], spare: usize) {
    let count = values.len();
    if spare * 2 + 2 >= count {
        values.sort_unstable_by(f64::total_cmp);
        return;
    }
    values.select_nth_unstable_by(spare, f64::total_cmp);
    values[spare + 1..].select_nth_unstable_by(count - 2 * spare - 2, f64::total_cmp);
    values[..=spare].sort_unstable_by(f64::total_cmp);
    values[count - spare - 1..].sort_unstable_by(f64::total_cmp);
}

fn histogram(values: &[f64], mean: f64, standard: f64) -> Histogram {
    let (least, most) =
        values.iter().fold((f64::INFINITY, f64::NEG_INFINITY), |(low, high), v| (low.min(*v), high.max(*v)));
    let (from, to) = (least.max(mean - 5.0 * standard), most.min(mean + 5.0 * standard));
    let mut counts = vec![0; BINS];
    let mut outside = 0;
    let per_bin = BINS as f64 / (to - from);
    for value in values {
        if *value < from || *value > to {
            outside += 1;
        } else {
            // All values equal: one bin holds them all, and NaN as an index is 0.
            counts[(((value - from) * per_bin) as usize).min(BINS - 1)] += 1;
        }
    }
    Histogram { from, to, counts, outside }
}

/// Half of the last figure of u: how far two results may lie apart and still be written the same.
///
/// ```text
/// u = c × 10^l with c of so many figures,   δ = ½ × 10^l
/// ```
///
/// * `figures` – meaningful figures of u, one or two
///
/// Source: JCGM 101:2008, 7.9.2.
pub fn tolerance(standard: f64, figures: i32) -> f64 {
    if standard <= 0.0 || !standard.is_finite() {
        return 0.0;
    }
    // The exponent after rounding: 0.0996 is 0.10.
    let decimals = usize::try_from(figures - 1).unwrap_or(0);
    let text = format!("{standard:.decimals$e}");
    let exponent: i32 = text.split_once('e').and_then(|(_, exponent)| exponent.parse().ok()).unwrap_or(0);
    0.5 * libm::exp10(f64::from(exponent + 1 - figures))
}

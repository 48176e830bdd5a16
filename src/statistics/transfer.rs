//! Two detectors compared in turn: the ratio of their readings without drift, its scatter, and what both are worth.

use super::normal::upper_tail_quantile;
use super::student::student_factor;

/// The comparison of one block of readings.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Block {
    /// ln of the first detector's reading over the second's.
    pub ln_ratio: f64,
    /// Change of ln of the light per unit of time.
    pub drift: f64,
}

/// Compares two detectors that saw the same light in turn, by least squares with one drift for both.
///
/// ```text
/// y = a + d·t for the first,  y = b + d·t for the second
/// d = Σ (t − t̄ᵢ)(y − ȳᵢ) / Σ (t − t̄ᵢ)²        each reading about the means of its own detector
/// a − b = ȳ₁ − ȳ₂ − d (t̄₁ − t̄₂)
/// ```
///
/// * `first`, `second` – time and ln of the reading, in any one unit of time; each at least once
///
/// A drift that is linear in dB leaves no trace in the ratio; one that is linear in watts leaves half the square of the
/// relative drift at most. In the order A B B A at even times the ratio is that of the geometric means. Nothing where
/// all times of each detector are equal while the two differ, for then drift and ratio cannot be told apart.
///
/// Source: least squares; the order A B B A is common practice in comparisons (weighing uses the same scheme).
///
/// # Example
///
/// ```
/// use leastlight::statistics::transfer::compared;
///
/// // The light loses 1 % a step; the second detector shows 2 % more than the first.
/// let ln = |step: i32, factor: f64| (f64::from(step), f64::from(step) * -0.01 + libm::log(factor));
/// let block = compared(&[ln(0, 1.0), ln(3, 1.0)], &[ln(1, 1.02), ln(2, 1.02)]).unwrap();
/// assert!((block.ln_ratio + libm::log(1.02)).abs() < 1e-15);
/// ```
pub fn compared(first: &[(f64, f64)], second: &[(f64, f64)]) -> Option<Block> {
    let (one, two) = (centred(first)?, centred(second)?);
    let (along, across) = (one.squares + two.squares, one.products + two.products);
    let apart = one.time - two.time;
    let drift = if along > 0.0 { across / along } else { 0.0 };
    if along <= 0.0 && apart != 0.0 {
        return None;
    }
    let ln_ratio = one.value - two.value - drift * apart;
    (ln_ratio.is_finite() && drift.is_finite()).then_some(Block { ln_ratio, drift })
}

/// Means of times and values, and the sums of squares and products about them.
struct Centred {
    time: f64,
    value: f64,
    squares: f64,
    products: f64,
}

fn centred(readings: &[(f64, f64)]) -> Option<Centred> {
    let count = readings.len() as f64;
    if readings.is_empty() {
        return None;
    }
    let time = readings.iter().map(|reading| reading.0).sum::<f64>() / count;
    let value = readings.iter().map(|reading| reading.1).sum::<f64>() / count;
    let about = |of: fn(f64, f64) -> f64| readings.iter().map(|(t, y)| of(t - time, y - value)).sum::<f64>();
    Some(Centred { time, value, squares: about(|t, _| t * t), products: about(|t, y| t * y) })
}

/// Mean of repeats, and the standard deviation of one of them; nothing of fewer than two.
///
/// ```text
/// s² = Σ (x − x̄)² / (n − 1)
/// ```
///
/// Source: JCGM 100:2008, 4.2.1 and 4.2.2.
pub fn mean_and_deviation(repeats: &[f64]) -> Option<(f64, f64)> {
    if repeats.len() < 2 {
        return None;
    }
    let count = repeats.len() as f64;
    let mean = repeats.iter().sum::<f64>() / count;
    let squares: f64 = repeats.iter().map(|x| (x - mean) * (x - mean)).sum();
    Some((mean, (squares / (count - 1.0)).sqrt()))
}

/// A standard uncertainty and its degrees of freedom, which may be infinite.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Uncertain {
    /// In the unit of the whole, sensitivity included, ≥ 0.
    pub standard: f64,
    /// > 0.
    pub degrees_of_freedom: f64,
}

/// Independent contributions together, with effective degrees of freedom.
///
/// ```text
/// u² = Σ uᵢ²,   ν = u⁴ / Σ (uᵢ⁴/νᵢ)
/// ```
///
/// Source: JCGM 100:2008, eq. (10) and (G.2b) (Welch and Satterthwaite).
pub fn combined(parts: &[Uncertain]) -> Uncertain {
    let squares: f64 = parts.iter().map(|part| part.standard * part.standard).sum();
    // Relative to the whole, so that small uncertainties do not sink below the smallest number.
    let term = |part: &Uncertain| (part.standard * part.standard / squares).powi(2) / part.degrees_of_freedom;
    let inverse: f64 = if squares > 0.0 { parts.iter().map(term).sum() } else { 0.0 };
    let degrees_of_freedom = if inverse > 0.0 { 1.0 / inverse } else { f64::INFINITY };
    Uncertain { standard: squares.sqrt(), degrees_of_freedom }
}

/// The coverage factor k: the two-sided quantile of Student's t.
///
/// * `probability` – what the interval ± k·u is to cover, above 0 and below 1
/// * `degrees_of_freedom` – ν, at least 1, may be infinite
///
/// Above ν = 1000 the expansion about the normal quantile: relative error below 1e-10.
///
/// Source: JCGM 100:2008, G.3; the expansion: M. Abramowitz, I. A. Stegun, Handbook of Mathematical Functions (1964),
/// 26.7.5.
///
/// # Example
///
/// ```
/// use leastlight::statistics::transfer::coverage_factor;
///
/// assert!((coverage_factor(0.95, 4.0) - 2.776).abs() < 0.0005);
/// assert!((coverage_factor(0.9545, f64::INFINITY) - 2.000).abs() < 0.0005);
/// ```
pub fn coverage_factor(probability: f64, degrees_of_freedom: f64) -> f64 {
    debug_assert!(probability > 0.0 && probability < 1.0 && degrees_of_freedom >= 1.0);
    let nu = degrees_of_freedom;
    if nu <= 1000.0 {
        return student_factor(probability, nu);
    }
    let z = upper_tail_quantile(0.5 - 0.5 * probability);
    let (z2, inverse) = (z * z, 1.0 / nu);
    let first = (z2 + 1.0) / 4.0;
    let second = ((5.0 * z2 + 16.0) * z2 + 3.0) / 96.0;
    let third = (((3.0 * z2 + 19.0) * z2 + 17.0) * z2 - 15.0) / 384.0;
    z * (1.0 + inverse * (first + inverse * (second + inverse * third)))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn drift_at_uneven_times_leaves_no_trace() {
        let reading = |t: f64, level: f64| (t, level + 0.037 * t);
        let first = [reading(0.0, -1.5), reading(95.0, -1.5)];
        let second = [reading(20.0, -1.4), reading(41.0, -1.4)];
        let block = compared(&first, &second).unwrap();
        assert!((block.ln_ratio + 0.1).abs() < 1e-14 && (block.drift - 0.037).abs() < 1e-15);
    }

    #[test]
    fn drift_and_ratio_that_cannot_be_told_apart_are_not() {
        assert_eq!(compared(&[(0.0, 1.0)], &[(1.0, 1.1)]), None);
        assert_eq!(compared(&[], &[(1.0, 1.1)]), None);
        assert!(compared(&[(1.0, 1.0)], &[(1.0, 1.1)]).is_some());
    }

    /// GUM H.1: u 31.6638791110 nm and ν 16.7518557376 from the components of its table H.1.
    #[test]
    fn effective_degrees_of_freedom_are_those_of_the_guide() {
        let part = |standard, degrees_of_freedom| Uncertain { standard, degrees_of_freedom };
        let infinite = f64::INFINITY;
        let whole = combined(&[
            part(25.0, 18.0),
            part(5.8, 24.0),
            part(3.9, 5.0),
            part(6.7, 8.0),
            part(2.886_787_31, 50.0),
            part(16.599_027_1, 2.0),
        ]);
        assert!((whole.standard - 31.663_879_1).abs() < 1e-6, "{}", whole.standard);
        assert!((whole.degrees_of_freedom - 16.751_855_7).abs() < 1e-5, "{}", whole.degrees_of_freedom);
        assert_eq!(combined(&[part(1.0, infinite), part(2.0, infinite)]).degrees_of_freedom, infinite);
        assert_eq!(combined(&[part(0.0, 3.0)]).degrees_of_freedom, infinite);
        let tiny = combined(&[part(1e-120, 4.0)]);
        assert!((tiny.degrees_of_freedom - 4.0).abs() < 1e-12);
    }

    /// Two-sided factors as in GUM table G.2, with more digits from SciPy 1.17.1 scipy.stats.t.ppf.
    #[test]
    fn coverage_factors_are_those_of_the_table_at_all_degrees_of_freedom() {
        for (probability, nu, expected) in [
            (0.95, 1.0, 12.706_204_736_174_694),
            (0.95, 4.0, 2.776_445_105_197_793_4),
            (0.9545, 10.0, 2.283_681_613_299_64),
            (0.99, 16.0, 2.920_781_622_425_1),
            (0.95, 1e5, 1.959_987_707_534_609_5),
            (0.95, f64::INFINITY, 1.959_963_984_540_054),
        ] {
            let found = coverage_factor(probability, nu);
            assert!((found / expected - 1.0).abs() < 1e-9, "{probability} {nu}: {found}");
        }
        // Both ways of computing meet where one hands over to the other.
        let (below, above) = (coverage_factor(0.99, 1000.0), coverage_factor(0.99, 1000.0 + 1e-9));
        assert!((below / above - 1.0).abs() < 1e-10, "{below} {above}");
    }
}

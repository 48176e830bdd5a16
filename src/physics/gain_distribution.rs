//! How many electrons an avalanche makes of a few.

use crate::numeric::gamma::ln_rising_factorial;

/// Natural logarithm of the chance that n primary electrons become m in all.
///
/// ```text
///            n Γ(κm + m + 1)
/// P(n,m) = ─────────────────────── A^(n+κm) a^(m−n)      κ = k/(1−k),  A = (1 + k(M−1))/M,  a = 1 − A
///          m (m−n)! Γ(κm + n + 1)
///
/// k = 1:   P(n,m) = (n/m) (mμ)^(m−n) e^(−mμ)/(m−n)!      μ = (M−1)/M
/// ```
///
/// * `primaries` – n, whole, ≥ 1
/// * `electrons` – m, whole, ≥ n
/// * `gain` – M, mean gain, ≥ 1
/// * `ionisation_ratio` – k, 0 to 1
///
/// −∞ where it cannot be: with M = 1 only m = n is. Holds where the excess noise factor of
/// [`excess_noise_factor`](super::avalanche::excess_noise_factor) does. As k → 1 the gamma functions cancel; their ratio is taken as
/// one function, and k = 1 itself is the limit.
///
/// Source: R. J. McIntyre, IEEE Trans. Electron Devices ED-19, 703–713 (1972); k = 0 is the negative binomial, k = 1 that of E.
/// Borel and J. C. Tanner.
///
/// # Example
///
/// ```
/// use leastlight::physics::gain_distribution::ln_chance;
///
/// // At a mean gain of 10 and k = 0.4 more than a quarter of the electrons multiply nothing.
/// assert!((ln_chance(1.0, 1.0, 10.0, 0.4).exp() - 0.2741).abs() < 0.0001);
/// ```
pub fn ln_chance(primaries: f64, electrons: f64, gain: f64, ionisation_ratio: f64) -> f64 {
    debug_assert!(primaries >= 1.0 && electrons >= primaries && gain >= 1.0);
    let (n, m, k) = (primaries, electrons, ionisation_ratio);
    let made = m - n;
    if gain == 1.0 {
        return if made == 0.0 { 0.0 } else { f64::NEG_INFINITY };
    }
    let a = (1.0 - k) * (gain - 1.0) / gain;
    let start = libm::log(n / m) - ln_rising_factorial(1.0, made);
    if k == 1.0 {
        let mu = (gain - 1.0) / gain;
        return start + made * libm::log(m * mu) - m * mu;
    }
    let kappa_m = k / (1.0 - k) * m;
    // a to the power of `made` goes into the gamma functions' ratio, whose logarithm is huge without it as k → 1.
    let grown = ln_rising_factorial(kappa_m + n + 1.0, made) + made * libm::log(a);
    start + grown + (n + kappa_m) * libm::log1p(-a)
}

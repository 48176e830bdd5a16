//! The textbook's closed forms of sensitivity, to stand beside the full model.
//!
//! They hold for a perfectly dark zero, no dark current, no intensity noise, two levels and the σ-weighted threshold, at
//! which the error ratio is ½ erfc(Q/√2).
//!
//! Source: G. P. Agrawal, Fiber-Optic Communication Systems, 3rd edition (2002), section 4.5.2; the derivation was checked
//! numerically.

use super::constants::ELEMENTARY_CHARGE_C;

/// What the closed forms know of a receiver.
#[derive(Clone, Copy, Debug)]
pub struct IdealLink {
    /// Q that the target error ratio asks for, > 0.
    pub q_factor: f64,
    /// R before gain, in A/W, > 0.
    pub responsivity_a_per_w: f64,
    /// B_n in Hz, > 0.
    pub noise_bandwidth_hz: f64,
    /// σ_T, circuit noise within B_n, RMS in A, ≥ 0.
    pub circuit_noise_a: f64,
}

/// Average power in W that a PIN (M = F = 1) or avalanche receiver needs.
///
/// ```text
/// P = (Q/R)(q F Q B_n + σ_T/M)
/// ```
///
/// * `link` – Q, R, B_n and σ_T
/// * `gain` – M, ≥ 1
/// * `excess_noise_factor` – F, ≥ 1
///
/// # Example
///
/// ```
/// use leastlight::physics::closed_form::{IdealLink, pin_apd_average_power_w};
///
/// // A quiet PIN receiver for 1 GHz: about 0.6 µW for an error ratio of 1e-9.
/// let link = IdealLink { q_factor: 6.0, responsivity_a_per_w: 1.0, noise_bandwidth_hz: 1e9, circuit_noise_a: 1e-7 };
/// assert!((pin_apd_average_power_w(&link, 1.0, 1.0) - 0.6e-6).abs() < 0.01e-6);
/// ```
pub fn pin_apd_average_power_w(link: &IdealLink, gain: f64, excess_noise_factor: f64) -> f64 {
    debug_assert!(gain >= 1.0 && excess_noise_factor >= 0.0);
    let (q, b_n) = (link.q_factor, link.noise_bandwidth_hz);
    let shot = ELEMENTARY_CHARGE_C * excess_noise_factor * q * b_n;
    q / link.responsivity_a_per_w * (shot + link.circuit_noise_a / gain)
}

/// The gain at which that power is least; nothing where more gain always helps (k = 0).
///
/// ```text
/// k M² = σ_T/(q Q B_n) + k − 1
/// ```
///
/// * `link` – Q, B_n and σ_T
/// * `ionisation_ratio` – k of McIntyre's excess noise, ≥ 0
///
/// Where circuit noise is so low that any gain harms, 1 is given.
///
/// # Example
///
/// ```
/// use leastlight::physics::closed_form::{IdealLink, best_gain};
///
/// let link = IdealLink { q_factor: 6.0, responsivity_a_per_w: 1.0, noise_bandwidth_hz: 1e9, circuit_noise_a: 1e-7 };
/// assert!((best_gain(&link, 0.7).unwrap() - 12.17).abs() < 0.01);
/// assert_eq!(best_gain(&link, 0.0), None);
/// ```
pub fn best_gain(link: &IdealLink, ionisation_ratio: f64) -> Option<f64> {
    debug_assert!(ionisation_ratio >= 0.0);
    let k = ionisation_ratio;
    let circuit_to_shot =
        link.circuit_noise_a / (ELEMENTARY_CHARGE_C * link.q_factor * link.noise_bandwidth_hz);
    let k_gain_squared = circuit_to_shot + k - 1.0;
    if k_gain_squared <= k {
        Some(1.0)
    } else if k > 0.0 {
        Some((k_gain_squared / k).sqrt())
    } else {
        None
    }
}

/// As [`best_gain`], for excess noise F = M^x; nothing where more gain always helps (x = 0).
///
/// ```text
/// M^(1+x) = σ_T/(x q Q B_n)
/// ```
///
/// * `link` – Q, B_n and σ_T
/// * `exponent` – x, ≥ 0
///
/// From dP/dM = 0 with the power above. Where circuit noise is so low that any gain harms, 1 is given.
///
/// # Example
///
/// ```
/// use leastlight::physics::closed_form::{IdealLink, best_gain_by_power};
///
/// let link = IdealLink { q_factor: 6.0, responsivity_a_per_w: 1.0, noise_bandwidth_hz: 1e9, circuit_noise_a: 1e-7 };
/// // With x = 1, as with k = 1, the square of the gain is the ratio of circuit to shot noise: 104.
/// assert!((best_gain_by_power(&link, 1.0).unwrap() - 10.2).abs() < 0.01);
/// ```
pub fn best_gain_by_power(link: &IdealLink, exponent: f64) -> Option<f64> {
    debug_assert!(exponent >= 0.0);
    let shot = ELEMENTARY_CHARGE_C * link.q_factor * link.noise_bandwidth_hz;
    if link.circuit_noise_a <= exponent * shot {
        Some(1.0)
    } else if exponent > 0.0 {
        Some(libm::pow(link.circuit_noise_a / (exponent * shot), 1.0 / (1.0 + exponent)))
    } else {
        None
    }
}

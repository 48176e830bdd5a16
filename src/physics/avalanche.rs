//! What gain costs: noise and speed.

/// Excess noise factor of avalanche gain, 1 without gain.
///
/// ```text
/// F = k M + (1 − k)(2 − 1/M)
/// ```
///
/// * `gain` – M, mean gain, ≥ 1
/// * `ionisation_ratio` – k, of the injected carrier's partner to the injected carrier: β/α for electrons, ≥ 0, mostly below 1
///
/// Holds for one kind of carrier injected at the edge of a long avalanche region in which k is constant. Thin
/// regions are quieter.
///
/// Source: R. J. McIntyre, IEEE Trans. Electron Devices ED-13, 164–168 (1966).
///
/// # Example
///
/// ```
/// use leastlight::physics::avalanche::excess_noise_factor;
///
/// assert!((excess_noise_factor(10.0, 0.4) - 5.14).abs() < 1e-12);
/// ```
pub fn excess_noise_factor(gain: f64, ionisation_ratio: f64) -> f64 {
    debug_assert!(gain >= 1.0 && ionisation_ratio >= 0.0);
    let (m, k) = (gain, ionisation_ratio);
    k * m + (1.0 - k) * (2.0 - 1.0 / m)
}

/// −3 dB bandwidth in Hz of an avalanche detector at a gain.
///
/// ```text
/// B = B₀ / √(1 + (M B₀ / GBP)²)
/// ```
///
/// * `gain` – M, ≥ 1
/// * `bandwidth_at_unit_gain_hz` – B₀, what transit time and capacitance leave, > 0
/// * `gain_bandwidth_hz` – GBP, the product that binds at high gain, > 0; infinite for none
///
/// A smooth join of the two limits, good where one of them clearly binds. The product itself is that of R. B. Emmons, J.
/// Appl. Phys. 38, 3705–3714 (1967); joining them as two first-order poles is common practice.
///
/// # Example
///
/// ```
/// use leastlight::physics::avalanche::bandwidth_hz;
///
/// assert!((bandwidth_hz(10.0, 10e9, 80e9) - 6.25e9).abs() < 0.01e9);
/// ```
pub fn bandwidth_hz(gain: f64, bandwidth_at_unit_gain_hz: f64, gain_bandwidth_hz: f64) -> f64 {
    debug_assert!(gain >= 1.0 && bandwidth_at_unit_gain_hz > 0.0 && gain_bandwidth_hz > 0.0);
    let slowed = gain * bandwidth_at_unit_gain_hz / gain_bandwidth_hz;
    bandwidth_at_unit_gain_hz / libm::hypot(1.0, slowed)
}

//! Where noise comes from: mean squares in A², so that independent causes add.

use super::constants::{BOLTZMANN_J_PER_K, ELEMENTARY_CHARGE_C};

/// Shot noise of a steady current: its mean square in A².
///
/// ```text
/// ⟨i²⟩ = 2 q I B        one-sided spectrum
/// ```
///
/// * `current_a` – I, all current through the junction, dark current included, ≥ 0
/// * `bandwidth_hz` – B, noise (not −3 dB) bandwidth, ≥ 0
///
/// Holds for carriers that cross independently of each other; with avalanche gain the current before gain counts, times
/// M² F.
///
/// Source: W. Schottky, Ann. Phys. 362, 541–567 (1918).
///
/// # Example
///
/// ```
/// use leastlight::physics::noise::shot_noise_a2;
///
/// // 1 µA seen through 1 GHz is about 18 nA of noise.
/// assert!((shot_noise_a2(1e-6, 1e9).sqrt() - 17.9e-9).abs() < 0.05e-9);
/// ```
pub fn shot_noise_a2(current_a: f64, bandwidth_hz: f64) -> f64 {
    debug_assert!(current_a >= 0.0 && bandwidth_hz >= 0.0);
    2.0 * ELEMENTARY_CHARGE_C * current_a * bandwidth_hz
}

/// Thermal noise of a load resistor and the amplifier behind it: its mean square in A².
///
/// ```text
/// ⟨i²⟩ = 4 k T F B / R        one-sided spectrum
/// ```
///
/// * `resistance_ohm` – R, > 0
/// * `temperature_k` – T, ≥ 0
/// * `noise_factor` – F of the amplifier as a ratio (not in dB), ≥ 1; 1 for the resistor alone
/// * `bandwidth_hz` – B, noise bandwidth, ≥ 0
///
/// Holds far below kT/h, which is 6 THz at room temperature.
///
/// Source: H. Nyquist, Phys. Rev. 32, 110–113 (1928); the noise factor is that of H. T. Friis, Proc. IRE 32, 419–422 (1944).
///
/// # Example
///
/// ```
/// use leastlight::physics::noise::thermal_noise_a2;
///
/// // 50 Ω through 5 GHz at 300 K: 1.3 µA.
/// assert!((thermal_noise_a2(50.0, 300.0, 1.0, 5e9).sqrt() - 1.287e-6).abs() < 0.001e-6);
/// ```
pub fn thermal_noise_a2(
    resistance_ohm: f64,
    temperature_k: f64,
    noise_factor: f64,
    bandwidth_hz: f64,
) -> f64 {
    debug_assert!(resistance_ohm > 0.0 && temperature_k >= 0.0 && noise_factor >= 0.0 && bandwidth_hz >= 0.0);
    4.0 * BOLTZMANN_J_PER_K * temperature_k * noise_factor * bandwidth_hz / resistance_ohm
}

/// Noise of the light's own intensity, after detection: its mean square in A².
///
/// ```text
/// ⟨i²⟩ = RIN I² B
/// ```
///
/// * `current_a` – I, current made by that light, ≥ 0
/// * `rin_per_hz` – RIN, relative intensity noise as a ratio per Hz (not in dB), one-sided, ≥ 0
/// * `bandwidth_hz` – B, noise bandwidth, ≥ 0
///
/// Holds where the spectrum of the intensity noise is flat over B. It grows with the square of the light: no power
/// outshines it.
///
/// Source: G. P. Agrawal, Fiber-Optic Communication Systems, 3rd edition (2002), section 4.6.2.
///
/// # Example
///
/// ```
/// use leastlight::physics::noise::intensity_noise_a2;
///
/// assert!((intensity_noise_a2(1e-3, 1e-14, 1e10).sqrt() - 1e-5).abs() < 1e-18);
/// ```
pub fn intensity_noise_a2(current_a: f64, rin_per_hz: f64, bandwidth_hz: f64) -> f64 {
    debug_assert!(current_a >= 0.0 && rin_per_hz >= 0.0 && bandwidth_hz >= 0.0);
    rin_per_hz * current_a * current_a * bandwidth_hz
}

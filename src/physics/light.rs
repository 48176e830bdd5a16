//! From light to current.

use super::constants::{ELEMENTARY_CHARGE_C, PLANCK_J_S, SPEED_OF_LIGHT_M_PER_S};

/// Energy of one photon in J.
///
/// ```text
/// E = h c / λ
/// ```
///
/// * `wavelength_m` – λ in vacuum, > 0
///
/// Source: A. Einstein, Ann. Phys. 322, 132–148 (1905).
///
/// # Example
///
/// ```
/// use leastlight::physics::light::photon_energy_j;
///
/// // A nanowatt at 1550 nm is about eight billion photons a second.
/// assert!((1e-9 / photon_energy_j(1550e-9) - 7.80e9).abs() < 0.01e9);
/// ```
pub fn photon_energy_j(wavelength_m: f64) -> f64 {
    debug_assert!(wavelength_m > 0.0);
    PLANCK_J_S * SPEED_OF_LIGHT_M_PER_S / wavelength_m
}

/// Responsivity in A/W of a detector without gain.
///
/// ```text
/// R = η q λ / (h c)
/// ```
///
/// * `quantum_efficiency` – η, electrons per photon that arrives, 0 to 1
/// * `wavelength_m` – λ in vacuum, > 0
///
/// Source: J. M. Senior, Optical Fiber Communications, 3rd edition (2009), section 8.6.
///
/// # Example
///
/// ```
/// use leastlight::physics::light::responsivity_a_per_w;
///
/// assert!((responsivity_a_per_w(0.8, 1550e-9) - 1.000).abs() < 0.001);
/// ```
pub fn responsivity_a_per_w(quantum_efficiency: f64, wavelength_m: f64) -> f64 {
    quantum_efficiency * ELEMENTARY_CHARGE_C / photon_energy_j(wavelength_m)
}

/// Quantum efficiency, electrons per photon, from the responsivity without gain: [`responsivity_a_per_w`] turned round.
///
/// * `responsivity_a_per_w` – R in A/W, ≥ 0; more than q λ/(h c) gives more than one electron a photon
/// * `wavelength_m` – λ in vacuum, > 0
///
/// # Example
///
/// ```
/// use leastlight::physics::light::quantum_efficiency;
///
/// assert!((quantum_efficiency(1.0, 1550e-9) - 0.800).abs() < 0.001);
/// ```
pub fn quantum_efficiency(responsivity_a_per_w: f64, wavelength_m: f64) -> f64 {
    responsivity_a_per_w * photon_energy_j(wavelength_m) / ELEMENTARY_CHARGE_C
}

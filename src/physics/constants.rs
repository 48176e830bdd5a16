//! The constants of nature that a receiver needs, exact since 2019.
//!
//! Source: BIPM, The International System of Units (SI), 9th edition (2019), section 2.2.

/// Elementary charge in C.
pub const ELEMENTARY_CHARGE_C: f64 = 1.602176634e-19;
/// Planck constant in J s.
pub const PLANCK_J_S: f64 = 6.62607015e-34;
/// Speed of light in vacuum in m/s.
pub const SPEED_OF_LIGHT_M_PER_S: f64 = 299_792_458.0;
/// Boltzmann constant in J/K.
pub const BOLTZMANN_J_PER_K: f64 = 1.380649e-23;
/// 0 °C in K.
pub const ZERO_CELSIUS_K: f64 = 273.15;

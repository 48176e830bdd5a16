//! How few photons could do, if nothing but their own chance stood in the way.

/// Photons in a one that an ideal counter needs, the zeros being dark.
///
/// ```text
/// p = ½ e^(−N₁)      so      N₁ = −ln(2p)
/// ```
///
/// * `error_ratio` – p, above 0 and at most ½
///
/// Errors are the ones in which no photon came. Half of the bits are ones, so the average per bit is half of this. Some books
/// leave out the ½ and get 20.7 instead of 20.0 photons for 1e-9.
///
/// Source: G. P. Agrawal, Fiber-Optic Communication Systems, 3rd edition (2002), section 4.5.3.
///
/// # Example
///
/// ```
/// use leastlight::physics::quantum_limit::photons_in_a_one;
///
/// assert!((photons_in_a_one(1e-9) - 20.03).abs() < 0.005);
/// ```
pub fn photons_in_a_one(error_ratio: f64) -> f64 {
    debug_assert!(error_ratio > 0.0 && error_ratio <= 0.5);
    -libm::log(2.0 * error_ratio)
}

/// Photons per bit on average that an ideal counter needs: half of [`photons_in_a_one`].
pub fn photons_per_bit(error_ratio: f64) -> f64 {
    0.5 * photons_in_a_one(error_ratio)
}

//! What a power meter's reading means at another wavelength than the one it is set to.

/// True over shown power, from the meter's own responsivity curve.
///
/// ```text
/// P / P_shown = R(λ_set) / R(λ)
/// ```
///
/// * `set_a_per_w` – R(λ_set), the responsivity that the meter assumes, A/W, > 0
/// * `source_a_per_w` – R(λ), its responsivity at the wavelength of the light, A/W, > 0
///
/// The meter measures a current and divides it by R(λ_set); the light made that current with R(λ).
///
/// Source: the definition of responsivity, I = R·P, used twice; IEC 61315 calibrates meters in these terms.
///
/// # Example
///
/// ```
/// use leastlight::physics::meter::power_factor;
///
/// // Set where the meter responds with 1.00 A/W, lit where it responds with 0.90 A/W.
/// assert!((power_factor(1.00, 0.90) - 1.111).abs() < 0.0005);
/// ```
pub fn power_factor(set_a_per_w: f64, source_a_per_w: f64) -> f64 {
    set_a_per_w / source_a_per_w
}

/// True over shown power, from a typical responsivity curve and a certified correction factor.
///
/// ```text
/// P / P_shown = C(λ) · R_typ(λ_set) / R_typ(λ)
/// ```
///
/// * `typical_set_a_per_w`, `typical_source_a_per_w` – R_typ at the setting and at the light's wavelength, A/W, > 0
/// * `correction` – C(λ), true over shown power with the meter set to λ, > 0
///
/// The meter works with R_typ; its true responsivity is R_typ/C. C is smooth where R_typ is steep, so C is what
/// may be interpolated between few certified wavelengths.
///
/// Source: as [`power_factor`], with R = R_typ/C from the definition of C.
///
/// # Example
///
/// ```
/// use leastlight::physics::meter::power_factor_by_correction;
///
/// // Set to the wavelength of the light, the factor is the certified one.
/// assert_eq!(power_factor_by_correction(0.9, 0.9, 1.012), 1.012);
/// ```
pub fn power_factor_by_correction(
    typical_set_a_per_w: f64,
    typical_source_a_per_w: f64,
    correction: f64,
) -> f64 {
    correction * (typical_set_a_per_w / typical_source_a_per_w)
}

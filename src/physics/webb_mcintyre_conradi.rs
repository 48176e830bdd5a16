//! A closed approximation to the density of multiplied electrons.

/// Density, per electron, of the number of electrons that an avalanche makes of a Poisson number of primaries.
///
/// ```text
/// p(m) = 1/√(2πC₁²) y^(−3/2) exp(−x²/(2 C₁² y))      x = m − NM,  y = 1 + x/(C₁C₂),  C₁² = NM²F,  C₂ = √(NF)/(F−1)
/// ```
///
/// * `primaries` – N, their mean number, > 0
/// * `gain` – M, mean gain, ≥ 1
/// * `excess_noise_factor` – F, ≥ 1; with F = 1 a Gaussian
/// * `electrons` – m, any number; 0 where y ≤ 0
///
/// Mean and variance are exact, the skewness nearly. Good to some per cent near the mean of many primaries, and wrong by
/// factors in the far lower tail.
///
/// Source: P. P. Webb, R. J. McIntyre, J. Conradi, RCA Review 35, 234–278 (1974).
///
/// # Example
///
/// ```
/// use leastlight::physics::webb_mcintyre_conradi::density;
///
/// assert!((density(100.0, 10.0, 5.14, 1000.0) - 0.00175966).abs() < 1e-8);
/// ```
pub fn density(primaries: f64, gain: f64, excess_noise_factor: f64, electrons: f64) -> f64 {
    debug_assert!(primaries > 0.0 && gain >= 1.0 && excess_noise_factor >= 1.0);
    let (n, f) = (primaries, excess_noise_factor);
    let x = electrons - n * gain;
    let c1 = gain * (n * f).sqrt();
    let y = 1.0 + x * (f - 1.0) / (c1 * (n * f).sqrt());
    if y <= 0.0 {
        return 0.0;
    }
    libm::exp(-0.5 * (x / c1) * (x / c1) / y) / (c1 * (2.0 * core::f64::consts::PI * y).sqrt() * y)
}

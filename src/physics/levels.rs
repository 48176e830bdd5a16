//! The optical levels of a modulated source.
//!
//! In all of them `average_w` is the average power P of equally frequent symbols, ≥ 0, and `extinction_ratio` is r, highest
//! over lowest level as a ratio (not in dB), > 1; infinite for a perfectly dark lowest level.
//!
//! Source: G. P. Agrawal, Fiber-Optic Communication Systems, 3rd edition (2002), section 4.6.1; the outer modulation amplitude as
//! IEEE Std 802.3-2018, clause 121 defines it.

/// Two levels, the zero first, in W.
///
/// ```text
/// P₀ = 2 P/(r + 1)      P₁ = 2 P r/(r + 1)
/// ```
///
/// ```
/// use leastlight::physics::levels::nrz_w;
///
/// assert_eq!(nrz_w(1e-6, f64::INFINITY), [0.0, 2e-6]);
/// ```
pub fn nrz_w(average_w: f64, extinction_ratio: f64) -> [f64; 2] {
    debug_assert!(average_w >= 0.0 && extinction_ratio >= 1.0);
    // Written so that an infinite ratio gives a plain zero.
    [2.0 * average_w / (extinction_ratio + 1.0), 2.0 * average_w / (1.0 + 1.0 / extinction_ratio)]
}

/// Four equally spaced levels, the lowest first, in W; r is that of the outer two.
///
/// ```
/// use leastlight::physics::levels::pam4_w;
///
/// assert_eq!(pam4_w(3.0, f64::INFINITY), [0.0, 2.0, 4.0, 6.0]);
/// ```
pub fn pam4_w(average_w: f64, extinction_ratio: f64) -> [f64; 4] {
    let [lowest, highest] = nrz_w(average_w, extinction_ratio);
    [lowest, (2.0 * lowest + highest) / 3.0, (lowest + 2.0 * highest) / 3.0, highest]
}

/// Outer optical modulation amplitude in W: highest less lowest level.
///
/// ```text
/// OMA = 2 P (r − 1)/(r + 1)
/// ```
///
/// ```
/// use leastlight::physics::levels::modulation_amplitude_w;
///
/// assert_eq!(modulation_amplitude_w(1e-6, 3.0), 1e-6);
/// ```
pub fn modulation_amplitude_w(average_w: f64, extinction_ratio: f64) -> f64 {
    2.0 * average_w / extinction_penalty_ratio(extinction_ratio)
}

/// How many times more average power the same amplitude needs than with a perfectly dark lowest level.
///
/// ```text
/// (r + 1)/(r − 1)
/// ```
///
/// It is the penalty in sensitivity where the noise does not depend on the light.
///
/// ```
/// use leastlight::physics::levels::extinction_penalty_ratio;
///
/// assert_eq!(extinction_penalty_ratio(3.0), 2.0);
/// ```
pub fn extinction_penalty_ratio(extinction_ratio: f64) -> f64 {
    debug_assert!(extinction_ratio > 1.0);
    // The same, without infinity over infinity.
    1.0 + 2.0 / (extinction_ratio - 1.0)
}

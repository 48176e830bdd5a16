//! How much noise a filter lets through.

use core::f64::consts::{FRAC_1_SQRT_2, FRAC_PI_2};

/// The shape of a low-pass response.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Filter {
    /// Flat up to its edge, nothing beyond: not a real filter, but the one of many formulas.
    Rectangular,
    /// One pole.
    FirstOrder,
    /// Two poles, maximally flat.
    Butterworth2,
    /// Four poles, maximally flat delay: the reference receiver of transmission standards.
    Bessel4,
}

/// Noise bandwidth as a multiple of the −3 dB bandwidth.
///
/// ```text
/// B_n/f₃dB = ∫₀^∞ |H(f)|² df / (f₃dB |H(0)|²)
/// first order: π/2      Butterworth of order n: (π/2n)/sin(π/2n)
/// Bessel, order 4: H = 105/(s⁴ + 10 s³ + 45 s² + 105 s + 105)
/// ```
///
/// The Bessel filter has no short closed form; its number was integrated in 40-digit arithmetic.
///
/// Source: S. Butterworth, Wireless Engineer 7, 536–541 (1930); W. E. Thomson, Proc. IEE 96 III, 487–490 (1949).
///
/// # Example
///
/// ```
/// use leastlight::physics::filter::{Filter, noise_bandwidth_ratio};
///
/// assert!((noise_bandwidth_ratio(Filter::FirstOrder) - 1.5708).abs() < 1e-4);
/// ```
pub fn noise_bandwidth_ratio(filter: Filter) -> f64 {
    match filter {
        Filter::Rectangular => 1.0,
        Filter::FirstOrder => FRAC_PI_2,
        Filter::Butterworth2 => FRAC_PI_2 * FRAC_1_SQRT_2,
        Filter::Bessel4 => 1.046_368_886_986_382,
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::numeric::root::root;

    /// |H|² of each filter, with its frequency in units of its own choice.
    fn response(filter: Filter, w: f64) -> f64 {
        let w2 = w * w;
        match filter {
            Filter::Rectangular => f64::from(w <= 1.0),
            Filter::FirstOrder => 1.0 / (1.0 + w2),
            Filter::Butterworth2 => 1.0 / (1.0 + w2 * w2),
            Filter::Bessel4 => {
                let (real, imaginary) = (w2 * w2 - 45.0 * w2 + 105.0, w * (105.0 - 10.0 * w2));
                105.0 * 105.0 / (real * real + imaginary * imaginary)
            }
        }
    }

    #[test]
    fn ratios_are_the_integral_of_the_response_over_its_half_power_point() {
        for filter in [Filter::FirstOrder, Filter::Butterworth2, Filter::Bessel4] {
            let half = root(|w| response(filter, w) - 0.5, 0.1, 10.0, 1e-15).unwrap();
            // With w = tan θ the range is finite and the integrand smooth, periodic in θ and even: the trapezoid
            // rule then converges faster than any power of its step.
            let steps = 400;
            let at = |n: i32| {
                let w = libm::tan(core::f64::consts::FRAC_PI_2 * f64::from(n) / f64::from(steps));
                response(filter, w) * (1.0 + w * w)
            };
            // At θ = π/2 only one pole is still seen: w² |H|² → 1.
            let far = f64::from(filter == Filter::FirstOrder);
            let inner: f64 = (1..steps).map(at).sum();
            let integral = core::f64::consts::FRAC_PI_2 / f64::from(steps) * (0.5 * (at(0) + far) + inner);
            let off = integral / half / noise_bandwidth_ratio(filter) - 1.0;
            assert!(off.abs() < 1e-13, "{filter:?}: {off:e}");
        }
    }
}

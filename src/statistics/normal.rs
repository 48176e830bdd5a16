//! The tail of the normal distribution, as far out as error ratios go.

use core::f64::consts::FRAC_1_SQRT_2;

/// What 1/√2 has beyond the digits of `FRAC_1_SQRT_2`.
const FRAC_1_SQRT_2_REST: f64 = -4.833_646_656_726_457e-17;
/// 2/√π.
const TWO_BY_ROOT_PI: f64 = core::f64::consts::FRAC_2_SQRT_PI;
/// √(2π).
const ROOT_TWO_PI: f64 = 2.506_628_274_631_000_7;
/// ln √(2π).
const LN_ROOT_TWO_PI: f64 = 0.918_938_533_204_672_8;

/// Chance that a standard normal value exceeds `x`.
///
/// ```text
/// Q(x) = ½ erfc(x/√2)
/// ```
///
/// * `x` – any number; beyond 38 the chance is below the smallest `f64` and 0 is given
///
/// Rounding x/√2 would alone cost x²/2 units of the last place (1e-14 at x = 11), so what that rounding loses is put back:
/// relative error below 1e-15 down to 1e-300.
///
/// Source: M. Abramowitz, I. A. Stegun, Handbook of Mathematical Functions (1964), 26.2.3 and 7.1.2.
///
/// # Example
///
/// ```
/// use leastlight::statistics::normal::upper_tail;
///
/// assert!((upper_tail(6.0) / 9.865876450377e-10 - 1.0).abs() < 1e-12);
/// ```
pub fn upper_tail(x: f64) -> f64 {
    let z = x * FRAC_1_SQRT_2;
    let tail = libm::erfc(z);
    // First order of erfc(z + lost): past 1 the tail is as steep as 2z, and before that nothing is lost.
    let lost = x.mul_add(FRAC_1_SQRT_2, -z) + x * FRAC_1_SQRT_2_REST;
    if z > 0.5 && tail > 0.0 { 0.5 * (tail - TWO_BY_ROOT_PI * libm::exp(-z * z) * lost) } else { 0.5 * tail }
}

/// Natural logarithm of [`upper_tail`], also where the tail itself is below the smallest `f64`.
///
/// ```text
/// ln Q(x) = −x²/2 − ln √(2π) + ln(1/(x + 1/(x + 2/(x + 3/(x + …)))))      far out
/// ```
///
/// * `x` – any number
///
/// Source: P. S. Laplace, Traité de mécanique céleste 4 (1805), as Abramowitz and Stegun 26.2.14.
///
/// # Example
///
/// ```
/// use leastlight::statistics::normal::ln_upper_tail;
///
/// assert!((ln_upper_tail(40.0) + 804.608442013754).abs() < 1e-11);
/// ```
pub fn ln_upper_tail(x: f64) -> f64 {
    if x < 0.0 {
        libm::log1p(-upper_tail(-x))
    } else if x < 30.0 {
        libm::log(upper_tail(x))
    } else {
        // Past 30 twelve terms are more than the last digit needs.
        let fraction = (1..=12).rev().fold(x, |below, term| x + f64::from(term) / below);
        -0.5 * x * x - LN_ROOT_TWO_PI - libm::log(fraction)
    }
}

/// The value that a standard normal one exceeds with chance `p`.
///
/// * `p` – above 0 and below 1; below ½ the answer is positive, and at the ends it is infinite
///
/// Newton's method: on ln Q where p is small, on the chance between 0 and x near ½, where Q itself has no digits left.
///
/// Source of the first guess, good to 4.5e-4: Abramowitz and Stegun 26.2.23.
///
/// # Example
///
/// ```
/// use leastlight::statistics::normal::upper_tail_quantile;
///
/// assert!((upper_tail_quantile(1e-30) - 11.464024688444).abs() < 1e-12);
/// ```
pub fn upper_tail_quantile(p: f64) -> f64 {
    debug_assert!((0.0..=1.0).contains(&p));
    if p > 0.5 {
        return -upper_tail_quantile(1.0 - p);
    }
    if p <= 0.0 {
        return f64::INFINITY;
    }
    let ln_p = libm::log(p);
    let t = (-2.0 * ln_p).sqrt();
    let guess = t
        - (2.515517 + t * (0.802853 + t * 0.010328)) / (1.0 + t * (1.432788 + t * (0.189269 + t * 0.001308)));
    // The error is squared, and halved, on each turn: 4e-4, 1e-7, 1e-14, and one turn more for the rounding.
    (0..4).fold(guess, |x, _| {
        if p > 0.25 {
            let short_of_half = 0.5 * libm::erf(x * FRAC_1_SQRT_2) - (0.5 - p);
            x - short_of_half * ROOT_TWO_PI * libm::exp(0.5 * x * x)
        } else {
            let ln_tail = ln_upper_tail(x);
            // d ln Q/dx = −φ/Q
            x + (ln_tail - ln_p) * libm::exp(ln_tail + 0.5 * x * x) * ROOT_TWO_PI
        }
    })
}

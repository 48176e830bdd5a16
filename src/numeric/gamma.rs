//! Ratios of gamma functions, of which each alone would take the digits away.

/// Bernoulli's numbers over their places, B₂ₙ/(2n(2n − 1)), of Stirling's series.
const STIRLING: [f64; 6] =
    [1.0 / 12.0, -1.0 / 360.0, 1.0 / 1260.0, -1.0 / 1680.0, 1.0 / 1188.0, -691.0 / 360_360.0];

/// From here on six terms of Stirling's series leave less than a last digit.
const LARGE: f64 = 16.0;

/// Natural logarithm of a rising factorial.
///
/// ```text
/// ln x(x + 1)…(x + d − 1) = ln Γ(x + d) − ln Γ(x)
/// ```
///
/// * `x` – above 0, also far above 1e15
/// * `d` – whole number of factors, ≥ 0
///
/// The difference of two Stirling series, so that for a large x nothing cancels: there it is d ln x.
///
/// Source: M. Abramowitz, I. A. Stegun, Handbook of Mathematical Functions (1964), 6.1.22 and 6.1.40.
///
/// # Example
///
/// ```
/// use leastlight::numeric::gamma::ln_rising_factorial;
///
/// assert!((ln_rising_factorial(1.0, 10.0) - 3628800f64.ln()).abs() < 1e-14);
/// ```
pub fn ln_rising_factorial(x: f64, d: f64) -> f64 {
    debug_assert!(x > 0.0 && d >= 0.0);
    let (mut x, mut d, mut first) = (x, d, 1.0);
    while x < LARGE && d >= 1.0 {
        first *= x;
        x += 1.0;
        d -= 1.0;
    }
    libm::log(first) + ln_far(x, d)
}

fn ln_far(x: f64, d: f64) -> f64 {
    if d == 0.0 {
        return 0.0;
    }
    let series = |x: f64| STIRLING.iter().rev().fold(0.0, |sum, term| sum / (x * x) + term) / x;
    (x - 0.5) * libm::log1p(d / x) + d * (libm::log(x + d) - 1.0) + (series(x + d) - series(x))
}

#[cfg(test)]
mod tests {
    use super::*;

    /// ln Γ(x + d) − ln Γ(x) by mpmath 1.3.0, 40 digits.
    #[test]
    fn differences_of_gamma_functions_are_those_of_many_digits() {
        for (x, d, expected) in [
            (1.0, 0.0, 0.0),
            (0.25, 1.0, -1.3862943611198906),
            (1.0, 3.0, 1.791759469228055),
            (3.5, 40.0, 118.44860094399783),
            (15.75, 2.0, 5.575238623542718),
            (17.2, 1000.0, 5992.938595206798),
            (1000.0, 1000000.0, 12823415.358616034),
            (1000000000000.0, 7.0, 193.41714781152083),
            (1e+17, 900.0, 35229.5519228089),
            (250000.0, 3.0, 37.287660590493154),
        ] {
            let found = ln_rising_factorial(x, d);
            assert!((found - expected).abs() <= 2e-15 * expected.abs().max(1.0), "{x} {d}: {found}");
        }
    }
}

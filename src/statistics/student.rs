//! Student's distribution.

use crate::numeric::root::root;
use libm::{exp, lgamma, log, log1p};

/// Turns after which the continued fraction is taken as it is; the largest ν here needs about fifty.
const MOST_TURNS: usize = 1000;

/// ln of the chance that Student's t lies beyond a value, on one side.
///
/// ```text
/// Q(t) = ½ I_x(ν/2, ½),   x = ν/(ν + t²)
/// ```
///
/// * `t` – > 0
/// * `degrees_of_freedom` – ν, from 1 to some thousands; error of Q below 1e-12 of itself there
///
/// Computed with `libm` alone, so that it is the same to the bit natively and in the page.
///
/// Source: M. Abramowitz, I. A. Stegun, Handbook of Mathematical Functions (1964), 26.5.27, 26.7.1; the continued fraction 26.5.8,
/// by the method of W. J. Lentz, Appl. Opt. 15, 668–671 (1976).
pub fn ln_student_tail(t: f64, degrees_of_freedom: f64) -> f64 {
    debug_assert!(t > 0.0 && degrees_of_freedom >= 1.0);
    let (a, b) = (0.5 * degrees_of_freedom, 0.5);
    let square = t * t / degrees_of_freedom;
    let (ln_x, ln_y) = (-log1p(square), -log1p(1.0 / square));
    let (x, y) = (exp(ln_x), exp(ln_y));
    let ln_front = lgamma(a + b) - lgamma(a) - lgamma(b) + a * ln_x + b * ln_y;
    // Each of the two forms converges fast on its own side.
    match x < (a + 1.0) / (a + b + 2.0) {
        true => ln_front + log(0.5 * fraction(a, b, x) / a),
        false => log(0.5 - 0.5 * exp(ln_front) * fraction(b, a, y) / b),
    }
}

/// The continued fraction of the incomplete beta function.
fn fraction(a: f64, b: f64, x: f64) -> f64 {
    let (mut c, mut d) = (1.0, 1.0 / (1.0 - (a + b) * x / (a + 1.0)));
    let mut value = d;
    for turn in 1..MOST_TURNS {
        let m = turn as f64;
        let even = m * (b - m) * x / ((a + 2.0 * m - 1.0) * (a + 2.0 * m));
        let odd = -(a + m) * (a + b + m) * x / ((a + 2.0 * m) * (a + 2.0 * m + 1.0));
        let before = value;
        for part in [even, odd] {
            d = 1.0 / (1.0 + part * d);
            c = 1.0 + part / c;
            value *= c * d;
        }
        if (value - before).abs() <= f64::EPSILON * value.abs() {
            break;
        }
    }
    value
}

/// Student's factor: t such that −t … t covers a share of the distribution.
///
/// * `probability` – the share, above 0 and below 1
/// * `degrees_of_freedom` – as for [`ln_student_tail`]
pub fn student_factor(probability: f64, degrees_of_freedom: f64) -> f64 {
    debug_assert!(probability > 0.0 && probability < 1.0);
    let ln_tail = log(0.5 - 0.5 * probability);
    let excess = |ln_t: f64| ln_student_tail(exp(ln_t), degrees_of_freedom) - ln_tail;
    // The tail falls from ½ to nothing; between these ends lies every share that a double can tell from 0 and 1.
    exp(root(excess, -40.0, 40.0, 1e-15).unwrap_or(f64::NAN))
}

#[cfg(test)]
mod tests {
    use super::*;
    use core::f64::consts::{FRAC_PI_2, PI};

    #[test]
    fn one_and_two_degrees_of_freedom_are_known_in_closed_form() {
        for probability in [0.5, 0.6827, 0.95, 0.9545, 0.9999] {
            let cauchy = libm::tan(FRAC_PI_2 * probability);
            let two = probability * (2.0 / (1.0 - probability * probability)).sqrt();
            for (nu, wanted) in [(1.0, cauchy), (2.0, two)] {
                let got = student_factor(probability, nu);
                assert!((got / wanted - 1.0).abs() < 1e-12, "{nu}: {got} for {wanted}");
            }
        }
        assert!((exp(ln_student_tail(1.0, 1.0)) - 0.25).abs() < 1e-15);
        assert!((exp(ln_student_tail(1e-3, 1.0)) - (0.5 - libm::atan(1e-3) / PI)).abs() < 1e-15);
    }

    #[test]
    fn printed_factors_are_met_to_their_last_digit() {
        // JCGM 100:2008, Table G.2, at 95 % and 99 %.
        let table = [
            (3.0, 3.18, 5.84),
            (5.0, 2.57, 4.03),
            (10.0, 2.23, 3.17),
            (20.0, 2.09, 2.85),
            (100.0, 1.984, 2.626),
        ];
        for (nu, at_95, at_99) in table {
            assert!((student_factor(0.95, nu) - at_95).abs() <= 0.005, "{nu}");
            assert!((student_factor(0.99, nu) - at_99).abs() <= 0.005, "{nu}");
        }
        // mpmath 1.4.1: the root of betainc with 40 digits. The logarithms of Γ near ν = 1000 cost three digits.
        let many = [
            (0.95, 4.0, 2.776_445_105_197_794_4),
            (0.99, 1.5, 17.820_310_514_462_807),
            (0.95, 16.0, 2.119_905_299_221_254_7),
            (0.95, 37.4, 2.025_461_233_228_307),
            (0.9545, 1000.0, 2.002_505_517_218_673),
        ];
        for (probability, nu, wanted) in many {
            let got = student_factor(probability, nu);
            assert!((got / wanted - 1.0).abs() < 1e-12, "{nu}: {got} for {wanted}");
        }
    }
}

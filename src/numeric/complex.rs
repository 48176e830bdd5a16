//! Complex numbers, as far as contour integrals need them.

use core::ops::{Add, Div, Mul, Neg, Sub};

/// A complex number.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Complex {
    /// Real part.
    pub re: f64,
    /// Imaginary part.
    pub im: f64,
}

impl Complex {
    /// A complex number of its parts.
    pub const fn new(re: f64, im: f64) -> Complex {
        Complex { re, im }
    }

    /// Absolute value.
    pub fn abs(self) -> f64 {
        libm::hypot(self.re, self.im)
    }

    /// eᶻ.
    pub fn exp(self) -> Complex {
        let (sin, cos) = libm::sincos(self.im);
        let size = libm::exp(self.re);
        Complex::new(size * cos, size * sin)
    }

    /// eᶻ − 1, with all digits for small z.
    pub fn exp_m1(self) -> Complex {
        let (sin, cos) = libm::sincos(self.im);
        let grown = libm::expm1(self.re);
        // cos − 1 = −2 sin²(im/2) = −sin²/(1 + cos), of which the second loses nothing near 0.
        let cos_less_1 = if cos > 0.0 { -sin * sin / (1.0 + cos) } else { cos - 1.0 };
        Complex::new(grown * cos + cos_less_1, (grown + 1.0) * sin)
    }

    /// ln z, principal value.
    pub fn ln(self) -> Complex {
        Complex::new(libm::log(self.abs()), libm::atan2(self.im, self.re))
    }

    /// ln(1 + z), principal value, with all digits for small z.
    pub fn ln_1p(self) -> Complex {
        let (x, y) = (self.re, self.im);
        let re = if x.abs() < 0.5 && y.abs() < 0.5 {
            0.5 * libm::log1p(x * (2.0 + x) + y * y)
        } else {
            libm::log(libm::hypot(1.0 + x, y))
        };
        Complex::new(re, libm::atan2(y, 1.0 + x))
    }

    /// Square root, real part ≥ 0.
    pub fn sqrt(self) -> Complex {
        let larger = (0.5 * (self.abs() + self.re.abs())).sqrt();
        if larger == 0.0 {
            return Complex::new(0.0, 0.0);
        }
        let smaller = 0.5 * self.im.abs() / larger;
        let (re, im) = if self.re >= 0.0 { (larger, smaller) } else { (smaller, larger) };
        Complex::new(re, im.copysign(self.im))
    }

    /// Whether both parts are finite.
    pub fn is_finite(self) -> bool {
        self.re.is_finite() && self.im.is_finite()
    }
}

impl From<f64> for Complex {
    fn from(re: f64) -> Complex {
        Complex::new(re, 0.0)
    }
}

impl Add for Complex {
    type Output = Complex;
    fn add(self, other: Complex) -> Complex {
        Complex::new(self.re + other.re, self.im + other.im)
    }
}

impl Add<f64> for Complex {
    type Output = Complex;
    fn add(self, other: f64) -> Complex {
        Complex::new(self.re + other, self.im)
    }
}

impl Sub for Complex {
    type Output = Complex;
    fn sub(self, other: Complex) -> Complex {
        Complex::new(self.re - other.re, self.im - other.im)
    }
}

impl Neg for Complex {
    type Output = Complex;
    fn neg(self) -> Complex {
        Complex::new(-self.re, -self.im)
    }
}

impl Mul for Complex {
    type Output = Complex;
    fn mul(self, other: Complex) -> Complex {
        Complex::new(self.re * other.re - self.im * other.im, self.re * other.im + self.im * other.re)
    }
}

impl Mul<f64> for Complex {
    type Output = Complex;
    fn mul(self, other: f64) -> Complex {
        Complex::new(self.re * other, self.im * other)
    }
}

impl Div for Complex {
    type Output = Complex;
    fn div(self, other: Complex) -> Complex {
        // Scaled by the larger part, so that squares neither overflow nor vanish (R. L. Smith, Commun. ACM 5, 435, 1962).
        if other.re.abs() >= other.im.abs() {
            let ratio = other.im / other.re;
            let whole = other.re + other.im * ratio;
            Complex::new((self.re + self.im * ratio) / whole, (self.im - self.re * ratio) / whole)
        } else {
            let ratio = other.re / other.im;
            let whole = other.re * ratio + other.im;
            Complex::new((self.re * ratio + self.im) / whole, (self.im * ratio - self.re) / whole)
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Values by mpmath 1.3.0, 30 digits.
    #[test]
    fn functions_are_those_of_another_library_to_the_last_digits() {
        let close = |found: Complex, re: f64, im: f64| {
            let off = (found - Complex::new(re, im)).abs();
            assert!(off <= 4e-16 * libm::hypot(re, im), "{found:?} for {re} {im}");
        };
        close(Complex::new(0.5, 2.0).exp(), -0.6861101411498431, 1.4991780090003948);
        close(Complex::new(-3.0, 0.1).exp(), 0.04953834040300646, 0.0049704131399930795);
        close(Complex::new(1e-09, 2e-09).exp_m1(), 9.999999985e-10, 2.000000002e-09);
        close(Complex::new(-0.3, 1.0).exp_m1(), -0.5997342071365355, 0.6233770377206788);
        close(Complex::new(0.2, 3.0).exp_m1(), -2.209179565905657, 0.17236436707590722);
        close(Complex::new(1e-09, 2e-09).ln_1p(), 1.0000000015e-09, 1.9999999980000002e-09);
        close(Complex::new(-0.3, 1.0).ln_1p(), 0.1993880599786839, 0.960070362405688);
        close(Complex::new(3.0, -2.0).ln_1p(), 1.4978661367769954, -0.4636476090008061);
        close(Complex::new(3.0, -4.0).ln(), 1.6094379124341003, -0.9272952180016122);
        close(Complex::new(3.0, -4.0).sqrt(), 2.0, -1.0);
        close(Complex::new(-3.0, 0.5).sqrt(), 0.14384238796180673, 1.738013415533538);
        close(Complex::new(1e-200, 1e-200).sqrt(), 1.09868411346781e-100, 4.550898605622273e-101);
        close(Complex::new(1.0, 2.0) / Complex::new(3.0, -0.25), 0.27586206896551724, 0.6896551724137931);
        close(Complex::new(1.0, 2.0) / Complex::new(0.25, -3.0), -0.6344827586206897, 0.38620689655172413);
        assert_eq!(Complex::from(0.0).sqrt(), Complex::from(0.0));
        assert!(!Complex::new(f64::NAN, 0.0).is_finite());
    }
}

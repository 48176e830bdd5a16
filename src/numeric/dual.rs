//! Numbers that carry their own derivatives.

use core::ops::{Add, Div, Mul, Neg, Sub};

/// A value with its exact derivatives by N parameters (forward-mode differentiation).
///
/// A formula written for these gives its value and the slopes in one go, without a step size. Every operation follows
/// the chain rule; nothing is approximated.
///
/// # Example
///
/// ```
/// use leastlight::numeric::dual::Dual;
///
/// let [x, y] = Dual::parameters(&[3.0, 2.0]);
/// let z = x * x * y;
/// assert_eq!((z.value, z.slopes), (18.0, [12.0, 9.0]));
/// ```
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Dual<const N: usize> {
    /// The value.
    pub value: f64,
    /// Its derivative by each parameter.
    pub slopes: [f64; N],
}

impl<const N: usize> Dual<N> {
    /// A number that does not depend on the parameters.
    pub fn constant(value: f64) -> Dual<N> {
        Dual { value, slopes: [0.0; N] }
    }

    /// The parameters themselves.
    pub fn parameters(values: &[f64; N]) -> [Dual<N>; N] {
        core::array::from_fn(|index| {
            let mut slopes = [0.0; N];
            slopes[index] = 1.0;
            Dual { value: values[index], slopes }
        })
    }

    /// Natural exponential.
    pub fn exp(self) -> Dual<N> {
        let value = libm::exp(self.value);
        self.chain(value, value)
    }

    /// Natural logarithm.
    pub fn ln(self) -> Dual<N> {
        self.chain(libm::log(self.value), 1.0 / self.value)
    }

    /// Square root.
    pub fn sqrt(self) -> Dual<N> {
        let value = self.value.sqrt();
        self.chain(value, 0.5 / value)
    }

    /// A power whose exponent may depend on the parameters as well; the base is above 0.
    pub fn pow(self, exponent: Dual<N>) -> Dual<N> {
        let value = libm::pow(self.value, exponent.value);
        let (by_base, by_exponent) = (exponent.value * value / self.value, value * libm::log(self.value));
        self.chain_with(exponent, value, by_base, by_exponent)
    }

    /// A function of this number, from its value and its derivative there.
    fn chain(self, value: f64, derivative: f64) -> Dual<N> {
        Dual { value, slopes: self.slopes.map(|slope| derivative * slope) }
    }

    /// A function of this number and another, from its value and its derivatives by both.
    fn chain_with(self, other: Dual<N>, value: f64, by_self: f64, by_other: f64) -> Dual<N> {
        let slope = |index: usize| by_self * self.slopes[index] + by_other * other.slopes[index];
        Dual { value, slopes: core::array::from_fn(slope) }
    }
}

impl<const N: usize> Neg for Dual<N> {
    type Output = Dual<N>;
    fn neg(self) -> Dual<N> {
        self.chain(-self.value, -1.0)
    }
}

impl<const N: usize> Add for Dual<N> {
    type Output = Dual<N>;
    fn add(self, other: Dual<N>) -> Dual<N> {
        self.chain_with(other, self.value + other.value, 1.0, 1.0)
    }
}

impl<const N: usize> Sub for Dual<N> {
    type Output = Dual<N>;
    fn sub(self, other: Dual<N>) -> Dual<N> {
        self.chain_with(other, self.value - other.value, 1.0, -1.0)
    }
}

impl<const N: usize> Mul for Dual<N> {
    type Output = Dual<N>;
    fn mul(self, other: Dual<N>) -> Dual<N> {
        self.chain_with(other, self.value * other.value, other.value, self.value)
    }
}

impl<const N: usize> Div for Dual<N> {
    type Output = Dual<N>;
    fn div(self, other: Dual<N>) -> Dual<N> {
        let value = self.value / other.value;
        self.chain_with(other, value, 1.0 / other.value, -value / other.value)
    }
}

impl<const N: usize> Add<f64> for Dual<N> {
    type Output = Dual<N>;
    fn add(self, other: f64) -> Dual<N> {
        self.chain(self.value + other, 1.0)
    }
}

impl<const N: usize> Sub<f64> for Dual<N> {
    type Output = Dual<N>;
    fn sub(self, other: f64) -> Dual<N> {
        self.chain(self.value - other, 1.0)
    }
}

impl<const N: usize> Mul<f64> for Dual<N> {
    type Output = Dual<N>;
    fn mul(self, other: f64) -> Dual<N> {
        self.chain(self.value * other, other)
    }
}

impl<const N: usize> Div<f64> for Dual<N> {
    type Output = Dual<N>;
    fn div(self, other: f64) -> Dual<N> {
        self.chain(self.value / other, 1.0 / other)
    }
}

impl<const N: usize> Sub<Dual<N>> for f64 {
    type Output = Dual<N>;
    fn sub(self, other: Dual<N>) -> Dual<N> {
        other.chain(self - other.value, -1.0)
    }
}

impl<const N: usize> Div<Dual<N>> for f64 {
    type Output = Dual<N>;
    fn div(self, other: Dual<N>) -> Dual<N> {
        let value = self / other.value;
        other.chain(value, -value / other.value)
    }
}

#[cfg(test)]
mod tests {
    use super::Dual;

    /// Each operation with its value and its two derivatives, worked out by hand at x = 2, y = 3.
    #[test]
    fn each_operation_has_the_derivative_that_analysis_gives() {
        let [x, y] = Dual::parameters(&[2.0, 3.0]);
        let (e2, l2, l3) = (libm::exp(2.0), core::f64::consts::LN_2, libm::log(3.0));
        let cases = [
            (x + y, 5.0, [1.0, 1.0]),
            (x - y, -1.0, [1.0, -1.0]),
            (x * y, 6.0, [3.0, 2.0]),
            (x / y, 2.0 / 3.0, [1.0 / 3.0, -2.0 / 9.0]),
            (-x, -2.0, [-1.0, 0.0]),
            (x.exp(), e2, [e2, 0.0]),
            (y.ln(), l3, [0.0, 1.0 / 3.0]),
            (y.sqrt(), 3f64.sqrt(), [0.0, 0.5 / 3f64.sqrt()]),
            (x.pow(y), 8.0, [12.0, 8.0 * l2]),
            (x + 1.0, 3.0, [1.0, 0.0]),
            (x - 1.0, 1.0, [1.0, 0.0]),
            (x * 5.0, 10.0, [5.0, 0.0]),
            (x / 4.0, 0.5, [0.25, 0.0]),
            (1.0 - y, -2.0, [0.0, -1.0]),
            (6.0 / y, 2.0, [0.0, -2.0 / 3.0]),
            (Dual::constant(7.0) * x, 14.0, [7.0, 0.0]),
        ];
        for (index, (got, value, slopes)) in cases.into_iter().enumerate() {
            let near = |a: f64, b: f64| (a - b).abs() <= 4.0 * f64::EPSILON * b.abs();
            assert!(near(got.value, value), "case {index}: {got:?}");
            assert!(got.slopes.iter().zip(slopes).all(|(a, b)| near(*a, b)), "case {index}: {got:?}");
        }
    }
}

//! The generating function of an avalanche's gain, in a variable in which it has no branch point.
//!
//! One primary electron becomes G electrons. g = E[e^{sG}] is known only by what s it belongs to:
//!
//! ```text
//! s = ln g − b ln(1 − a(1−g))      a = (1−k)(M−1)/M,  b = 1/(1−k)
//! ```
//!
//! As a function of s it ends at a square-root branch point, which the saddles of rare large counts crowd. With w, where
//!
//! ```text
//! g = w/ρ,   ρ = 1 − c(w−1),   s = ln w + κ ln ρ      c = (1−k)(M−1)/(1 + k(M−1)),  κ = k/(1−k)
//! ds/d ln w = 1 − εg,          dg/d ln w = g(1 + cg)     ε = κc = k(M−1)/(1 + k(M−1))
//! ```
//!
//! both are smooth there: it is only the place where ds/dw vanishes. k = 0 (s = ln w), k = 1 (κ ln ρ = −ε(w−1), g = w) and M = 1
//! (g = w = e^s) are contained. Everything below is a function of v = ln w.
//!
//! Source: S. D. Personick, Bell Syst. Tech. J. 50, 167–189 (1971) for the implicit equation; its Lagrange inversion is the
//! distribution of R. J. McIntyre, IEEE Trans. Electron Devices ED-19, 703–713 (1972). The substitution is elementary.

use crate::numeric::complex::Complex;

/// The gain of one primary electron.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Gain {
    mean: f64,
    ionisation_ratio: f64,
    c: f64,
    kappa: f64,
    epsilon: f64,
}

/// The transform at a real place.
#[derive(Clone, Copy, Debug)]
pub struct Real {
    /// s.
    pub s: f64,
    /// g.
    pub g: f64,
    /// g − 1, with its digits where g is near 1.
    pub g_less_1: f64,
}

/// The transform at a complex place.
#[derive(Clone, Copy, Debug)]
pub struct Place {
    /// v = ln w.
    pub v: Complex,
    /// s.
    pub s: Complex,
    /// g.
    pub g: Complex,
    /// g − 1.
    pub g_less_1: Complex,
}

impl Gain {
    /// No gain: each primary is one electron.
    pub const UNIT: Gain = Gain { mean: 1.0, ionisation_ratio: 0.0, c: 0.0, kappa: 0.0, epsilon: 0.0 };

    /// An avalanche.
    ///
    /// * `mean` – M, ≥ 1
    /// * `ionisation_ratio` – k, 0 to 1
    pub fn new(mean: f64, ionisation_ratio: f64) -> Gain {
        debug_assert!(mean >= 1.0 && (0.0..=1.0).contains(&ionisation_ratio));
        let (m, k) = (mean, ionisation_ratio);
        if m == 1.0 {
            return Gain::UNIT;
        }
        let whole = 1.0 + k * (m - 1.0);
        let kappa = if k < 1.0 { k / (1.0 - k) } else { f64::INFINITY };
        Gain {
            mean,
            ionisation_ratio,
            c: (1.0 - k) * (m - 1.0) / whole,
            kappa,
            epsilon: k * (m - 1.0) / whole,
        }
    }

    /// M.
    pub fn mean(&self) -> f64 {
        self.mean
    }

    /// c and ε of the head of this file.
    pub fn shape(&self) -> (f64, f64) {
        (self.c, self.epsilon)
    }

    /// Whether each primary is one electron.
    pub fn is_unit(&self) -> bool {
        self.mean == 1.0
    }

    /// The v below which the generating function exists: its end, or where s turns back. Infinite for M = 1.
    pub fn highest_v(&self) -> f64 {
        -libm::log1p(-1.0 / self.mean)
    }

    /// Second and third raw moments of G.
    ///
    /// ```text
    /// κ₂ = M³A,   κ₃ = 3A²M⁵ + A(1−2a)M⁴      A = (M−1)(1 + k(M−1))/M²
    /// ```
    ///
    /// Source: derivatives of the implicit equation at s = 0.
    pub fn raw_moments(&self) -> (f64, f64) {
        let (m, k) = (self.mean, self.ionisation_ratio);
        let a = (1.0 - k) * (m - 1.0) / m;
        let big_a = (m - 1.0) * (1.0 + k * (m - 1.0)) / (m * m);
        let second = big_a * m * m * m;
        let third = 3.0 * big_a * big_a * m.powi(5) + big_a * (1.0 - 2.0 * a) * m.powi(4);
        (second + m * m, third + 3.0 * m * second + m * m * m)
    }

    /// The transform at a real v below [`Gain::highest_v`].
    pub fn at_real(&self, v: f64) -> Real {
        let w_less_1 = libm::expm1(v);
        let rho = 1.0 - self.c * w_less_1;
        let g_less_1 = w_less_1 * (1.0 + self.c) / rho;
        let bent = if self.kappa.is_finite() {
            self.kappa * libm::log1p(-self.c * w_less_1)
        } else {
            -self.epsilon * w_less_1
        };
        Real { s: v + bent, g: (w_less_1 + 1.0) / rho, g_less_1 }
    }

    /// The transform at a complex v.
    pub fn at(&self, v: Complex) -> Place {
        let w_less_1 = v.exp_m1();
        let rho = -(w_less_1 * self.c) + 1.0;
        let s = if self.epsilon == 0.0 {
            v
        } else if self.kappa.is_finite() {
            v + (-(w_less_1 * self.c)).ln_1p() * self.kappa
        } else {
            v + w_less_1 * -self.epsilon
        };
        let (g, g_less_1) = if self.c == 0.0 {
            (w_less_1 + 1.0, w_less_1)
        } else {
            let inverse = Complex::from(1.0) / rho;
            ((w_less_1 + 1.0) * inverse, w_less_1 * inverse * (1.0 + self.c))
        };
        Place { v, s, g, g_less_1 }
    }

    /// The place whose s is `s`, followed from a place nearby; nothing if it was not found.
    ///
    /// Each step solves s + uδ − ½qδ² exactly for the nearer root, with u = 1 − εg and q = εg(1 + cg): next to the branch point,
    /// where u vanishes, Newton's method would be lost.
    pub fn follow(&self, from: &Place, s: Complex) -> Option<Place> {
        self.follow_in_parts(from, s, 6)
    }

    fn follow_in_parts(&self, from: &Place, s: Complex, parts: u32) -> Option<Place> {
        if self.epsilon == 0.0 {
            return Some(self.at(s));
        }
        let mut place = *from;
        for _ in 0..12 {
            let curved = place.g * self.epsilon * (place.g * self.c + 1.0);
            let u = -(place.g * self.epsilon) + 1.0;
            let missing = s - place.s;
            let root = (u * u - curved * missing * 2.0).sqrt();
            // The larger denominator belongs to the nearer root.
            let aligned = u.re * root.re + u.im * root.im >= 0.0;
            let step = missing * 2.0 / if aligned { u + root } else { u - root };
            place = self.at(place.v + step);
            if !place.s.is_finite() {
                break;
            }
            // The error after a step is of the third order in it.
            if step.abs() <= 1e-4 * place.v.abs() {
                return Some(Place { s, ..place });
            }
        }
        let middle = (from.s + s) * 0.5;
        let half = (parts > 0).then(|| self.follow_in_parts(from, middle, parts - 1)).flatten()?;
        self.follow_in_parts(&half, s, parts - 1)
    }
}

//! The part of a count that has at least one primary electron: its cumulant generating function and saddle.
//!
//! ```text
//! K(s) = ln(e^{N g} − 1) − N + S (e^s − 1) + σ² s²/2
//! ```
//!
//! K is that of a positive measure of mass 1 − e^{−N}, so it is convex where it exists. Derivatives are taken by v = ln w
//! (see [`gain_transform`](super::super::gain_transform)), in which nothing is singular up to and beyond the end of the function.

use super::super::gain_transform::{Gain, Place};
use crate::numeric::complex::Complex;

/// A count of at least one primary electron.
#[derive(Clone, Copy, Debug)]
pub struct Compound {
    /// N, > 0.
    pub primaries: f64,
    /// S, ≥ 0.
    pub unmultiplied: f64,
    /// σ, ≥ 0.
    pub noise: f64,
    /// What each primary electron becomes.
    pub gain: Gain,
}

/// K and its derivatives by s at a real place.
#[derive(Clone, Copy, Debug)]
pub struct Local {
    /// Where, as v.
    pub v: f64,
    /// Where, as s.
    pub s: f64,
    /// K.
    pub k0: f64,
    /// K″, > 0.
    pub k2: f64,
    /// K‴.
    pub k3: f64,
}

/// Derivatives by v of ln(e^{N g} − 1), and those of s.
struct ByV {
    s: f64,
    u: f64,
    u1: f64,
    u2: f64,
    f1: f64,
    f2: f64,
    f3: f64,
    k0: f64,
}

/// Steps after which the saddle is taken as it is; the place of a contour need not be exact.
const MOST_STEPS: usize = 100;

impl Compound {
    /// The mass of the measure: the chance of at least one primary electron.
    pub fn mass(&self) -> f64 {
        -libm::expm1(-self.primaries)
    }

    fn by_v(&self, v: f64) -> ByV {
        let real = self.gain.at_real(v);
        let (c, epsilon) = self.gain.shape();
        let (s, g, n) = (real.s, real.g, self.primaries);
        // f(x) = ln(eˣ − 1): f′ = 1 + b, f″ = −b(1 + b), f‴ = b(1 + b)(1 + 2b).
        let x = n * g;
        let b = 1.0 / libm::expm1(x);
        let bb = b * (1.0 + b);
        let x1 = x * (1.0 + c * g);
        let x2 = x1 * (1.0 + 2.0 * c * g);
        let x3 = x1 * (1.0 + 6.0 * c * g * (1.0 + c * g));
        let f1 = (1.0 + b) * x1;
        let f2 = (1.0 + b) * x2 - bb * x1 * x1;
        let f3 = (1.0 + b) * x3 - 3.0 * bb * x1 * x2 + bb * (1.0 + 2.0 * b) * x1 * x1 * x1;
        let g1 = g * (1.0 + c * g);
        let k0 = n * real.g_less_1 + libm::log(-libm::expm1(-x)) + self.steady(s);
        ByV {
            s,
            u: 1.0 - epsilon * g,
            u1: -epsilon * g1,
            u2: -epsilon * g1 * (1.0 + 2.0 * c * g),
            f1,
            f2,
            f3,
            k0,
        }
    }

    /// S (e^s − 1) + σ² s²/2.
    fn steady(&self, s: f64) -> f64 {
        self.unmultiplied * libm::expm1(s) + 0.5 * self.noise * self.noise * s * s
    }

    /// K and its derivatives at a v below the gain's highest.
    pub fn local(&self, v: f64) -> Local {
        let ByV { s, u, u1, u2, f1, f2, f3, k0 } = self.by_v(v);
        let first = f1 / u;
        let second = (f2 - first * u1) / (u * u);
        let third = (f3 - 3.0 * second * u * u1 - first * u2) / (u * u * u);
        let steady = if self.unmultiplied > 0.0 { self.unmultiplied * libm::exp(s) } else { 0.0 };
        Local { v, s, k0, k2: second + steady + self.noise * self.noise, k3: third + steady }
    }

    /// The real place where K′ equals the threshold; nothing where the threshold is at or below the least count.
    ///
    /// Solved by Newton's method on (K′ − D) ds/dv, which rises through zero once; `low` stays below the zero, `high` above, and
    /// a step that would leave them halves instead.
    pub fn saddle(&self, threshold: f64) -> Option<Local> {
        let variance = self.noise * self.noise;
        let rise = |v: f64| {
            let ByV { s, u, u1, f1, f2, .. } = self.by_v(v);
            let steady = if self.unmultiplied > 0.0 { self.unmultiplied * libm::exp(s) } else { 0.0 };
            let pull = steady + variance * s - threshold;
            (f1 + pull * u, f2 + (steady + variance) * u * u + pull * u1)
        };
        let (mut low, mut high) = (f64::NEG_INFINITY, self.gain.highest_v());
        let mut v = self.guess(threshold);
        for _ in 0..MOST_STEPS {
            let (value, slope) = rise(v);
            // Past the end of the function rounding may give anything: that is too high.
            if value.is_nan() || value > 0.0 {
                high = v;
            } else {
                low = v;
            }
            let step = -value / slope;
            if slope > 0.0 && step * step * slope < 1e-7 && v + step < high {
                v += step;
                break;
            }
            // Not farther than doubling at once, as long as one side is open.
            let next = (v + step).clamp(v - 1.0 - v.abs(), v + 2.0 + v.abs());
            v = if slope > 0.0 && low < next && next < high {
                next
            } else if low == f64::NEG_INFINITY {
                v - 1.0 - v.abs()
            } else if high == f64::INFINITY {
                v + 1.0 + v.abs()
            } else {
                0.5 * (low + high)
            };
            if v < -700.0 {
                return None;
            }
        }
        let local = self.local(v);
        (local.k0.is_finite() && local.k2 > 0.0 && local.k2.is_finite()).then_some(local)
    }

    /// Where S e^s + σ² s equals the threshold; without gain all is like that, and K′ takes the place of it.
    ///
    /// Infinite where nothing comes without primary electrons. Newton's method from above comes down without overshooting.
    pub fn saddle_without_primaries(&self, threshold: f64) -> f64 {
        if self.gain.is_unit() {
            return f64::NEG_INFINITY;
        }
        let (steady, variance) = (self.unmultiplied, self.noise * self.noise);
        let by_noise = threshold / variance;
        if steady == 0.0 {
            return if variance > 0.0 { by_noise } else { f64::INFINITY };
        }
        let by_steady = libm::log(threshold / steady);
        // Each alone reaches the threshold later than both together.
        let mut s = if by_steady < by_noise || by_noise.is_nan() { by_steady } else { by_noise };
        for _ in 0..40 {
            let e = steady * libm::exp(s);
            let step = (e + variance * s - threshold) / (e + variance);
            s -= step;
            if step.abs() < 1e-3 * s.abs().max(1e-3) {
                break;
            }
        }
        s
    }

    /// Where a Gaussian of the same mean and variance would have its saddle, bent to stay below the end.
    fn guess(&self, threshold: f64) -> f64 {
        let (second, _) = self.gain.raw_moments();
        let share = self.mass();
        let mean = self.primaries / share * self.gain.mean() + self.unmultiplied;
        let variance = self.primaries / share * second + self.unmultiplied + self.noise * self.noise;
        let (_, epsilon) = self.gain.shape();
        let v = (threshold - mean) / variance / (1.0 - epsilon);
        let high = self.gain.highest_v();
        if v > 0.0 && high.is_finite() { high * (v / (high + v)) } else { v.clamp(-50.0, 50.0) }
    }

    /// K at a complex place, without the circuit's noise.
    pub fn k_without_noise(&self, place: &Place) -> Complex {
        let x = place.g * self.primaries;
        // Far to the left only −e^{−N} is left of it; far to the right ln(1 − e^{−x}) is lost in x.
        let k = if x.re < -40.0 {
            Complex::new(-self.primaries, core::f64::consts::PI)
        } else if x.re > 40.0 {
            place.g_less_1 * self.primaries
        } else {
            place.g_less_1 * self.primaries + (-(-x).exp_m1()).ln()
        };
        if self.unmultiplied > 0.0 { k + place.s.exp_m1() * self.unmultiplied } else { k }
    }
}

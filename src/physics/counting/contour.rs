//! The integral that turns a generating function into chances.
//!
//! ```text
//! P(X ≥ D) = 1/(2πi) ∫ e^{K(s) − sD} ds/s          along a contour that crosses the real axis at s₀ > 0
//! ```
//!
//! With s₀ < 0 the same integral is −P(X < D); without 1/s it is the density. The contour goes through the saddle, as steeply
//! down as a parabola can: s = s₀ + iy + βy², β = K‴/6K″. Next to the branch point of g this parabola has its focus at that point,
//! and the integrand is smooth along it. The way to the right ends at the saddle of what comes without primary electrons, where
//! S e^s + σ² s = D, because that part grows beyond.
//!
//! With a noise of a few electrons or less, counts are whole: then s runs over one period, −π ≤ y ≤ π, and the sum over
//! whole counts stands in place of 1/s, each weighed with the chance that noise leaves it on its side.
//!
//! Sums are trapezoids, graded about s₀; they are halved until two of them agree, which squares the error each time.

use super::saddle::{Compound, Local};
use super::{Chances, NO_NOISE};
use crate::numeric::complex::Complex;
use crate::physics::gain_transform::Place;
use crate::statistics::normal::upper_tail;
use core::f64::consts::PI;

/// Noise in electrons above which whole counts do not show: at y = π, half of a period, e^{−σ²y²/2} is 3e-9.
const SMOOTH: f64 = 2.0;

/// Noises that are counted on each side of a threshold: their tail is 1e-17 of a chance.
const REACH: f64 = 8.5;

/// √(2π).
const ROOT_TWO_PI: f64 = 2.506_628_274_631_000_7;

/// How far two trapezoids may differ; their mean is right to about the square of it.
const AGREEMENT: f64 = 3e-5;

/// The same for whole counts, where a period may hold more than a smooth bell.
const WHOLE_AGREEMENT: f64 = 1e-6;

/// Halvings after which the last sum is taken.
const MOST_HALVINGS: u32 = 8;

/// Difference of trapezoids below which it may be rounding that keeps them apart.
const ROUNDING: f64 = 1e-2;

/// Where e^{−…} is nothing beside the middle of the integrand.
const NOTHING: f64 = -42.0;

/// Logarithm of a chance below the smallest number.
const BEYOND: f64 = -760.0;

/// Nodes after which a sum is taken as it is.
const MOST_NODES: u32 = 20_000;

/// The chances of a count with at least one primary electron.
pub fn crossed(count: &Compound, threshold: f64) -> Chances {
    // A count of at least n is one above n − ½.
    let threshold = if count.noise < NO_NOISE { threshold.ceil() - 0.5 } else { threshold };
    let mass = count.mass();
    let far_above = threshold > count.primaries / mass * count.gain.mean() + count.unmultiplied;
    let (below, above) = if far_above { (mass, 0.0) } else { (0.0, mass) };
    let Some(saddle) = count.saddle(threshold) else {
        // At or below the least count there is, or beyond all numbers.
        return Chances { below, above, ln_density: f64::NEG_INFINITY, slope: 0.0 };
    };
    let ln_size = saddle.k0 - saddle.s * threshold;
    let ln_density = ln_size - libm::log(ROOT_TWO_PI) - 0.5 * libm::log(saddle.k2);
    let by_side = Chances { below, above, ln_density, slope: -saddle.s };
    if ln_size < BEYOND {
        return by_side;
    }
    let line = Line::new(count, threshold, saddle);
    let kernel = Kernel::new(count, threshold, line.start.s);
    let [tail, density, falling] = line.integral(&kernel);
    let tail = libm::exp(line.ln_size) * tail;
    if !tail.is_finite() || !density.is_finite() || !falling.is_finite() {
        // At gains of a million the transform runs out of digits at its end; the side of the mean is all that is left.
        return by_side;
    }
    let (below, above) = if line.start.s > 0.0 { (mass - tail, tail) } else { (-tail, mass + tail) };
    Chances {
        below: below.clamp(0.0, mass),
        above: above.clamp(0.0, mass),
        ln_density: line.ln_size + libm::log(density.max(0.0)),
        slope: if density > 0.0 { falling / density } else { -saddle.s },
    }
}

/// Whether single electrons show in a count.
fn is_whole(count: &Compound) -> bool {
    count.noise < SMOOTH
}

/// A contour.
struct Line<'c> {
    count: &'c Compound,
    threshold: f64,
    start: Local,
    /// K − sD at the start: the logarithm of the integrand's size.
    ln_size: f64,
    beta: f64,
    /// How far the contour goes to the right of the start.
    most_right: f64,
    /// The scale about the start on which nodes are placed.
    scale: f64,
    /// The distance of nodes to begin with.
    step: f64,
}

impl Line<'_> {
    fn new(count: &Compound, threshold: f64, saddle: Local) -> Line<'_> {
        let start = apart_from_pole(count, saddle);
        let mut ln_size = start.k0 - start.s * threshold;
        if is_whole(count) {
            ln_size -= 0.5 * count.noise * count.noise * start.s * start.s;
        }
        let most_right = (count.saddle_without_primaries(threshold) - start.s).max(0.0);
        // A way to the right that is shorter than the saddle is wide must not be turned into sharply.
        let beta = (start.k3 / (6.0 * start.k2)).min(most_right * start.k2).max(0.0);
        // Far from the pole of 1/s the grading may be coarse.
        let width = 1.0 / start.k2.sqrt();
        let (wide, step) = if start.s.abs() > 2.0 * width { (3.0 * width, 0.3) } else { (1.6 * width, 0.3) };
        let scale = if beta > 0.0 { wide.min(0.8 * (most_right / beta).sqrt()) } else { wide };
        let scale = if is_whole(count) { scale.min(1.0) } else { scale };
        Line { count, threshold, start, ln_size, beta, most_right, scale, step }
    }

    /// s and ds/dt at a node; nothing past the end of the contour.
    fn node(&self, t: f64) -> Option<(Complex, Complex)> {
        let (y, dy, parabola, slope);
        if is_whole(self.count) {
            let (sin, cos) = libm::sincos(0.5 * t);
            y = 2.0 * libm::atan2(self.scale * sin, cos);
            dy = self.scale / (cos * cos + self.scale * self.scale * sin * sin);
            // 2(1 − cos y) is y² that comes back to where it began.
            let (sin_y, cos_y) = libm::sincos(y);
            (parabola, slope) = (2.0 * self.beta * (1.0 - cos_y), 2.0 * self.beta * sin_y);
        } else {
            (y, dy) = (self.scale * libm::sinh(t), self.scale * libm::cosh(t));
            (parabola, slope) = (self.beta * y * y, 2.0 * self.beta * y);
        }
        // Infinitely far to the right, or not at all, it stays a parabola.
        let bent = 1.0 + if parabola > 0.0 { parabola / self.most_right } else { 0.0 };
        let s = Complex::new(self.start.s + parabola / bent, y);
        (y <= PI * (1.0 + 1e-9)).then(|| (s, Complex::new(slope / (bent * bent), 1.0) * dy))
    }

    /// Tail, density and its derivative, each over the size.
    fn integral(&self, kernel: &Kernel) -> [f64; 3] {
        let mut step = if is_whole(self.count) { PI / 12.0 } else { self.step };
        let agreement = if is_whole(self.count) { WHOLE_AGREEMENT } else { AGREEMENT };
        let mut sum = self.sum(0.0, step, kernel);
        let mut last = f64::INFINITY;
        for _ in 0..MOST_HALVINGS {
            let between = self.sum(0.5 * step, step, kernel);
            // A density of nothing agrees with any other.
            let apart = |i: usize| ((sum[i] - between[i]) / (sum[i] + between[i])).abs();
            let off = apart(0).max(apart(1));
            for (all, other) in sum.iter_mut().zip(between) {
                *all = 0.5 * (*all + other);
            }
            step *= 0.5;
            // What does not shrink any more is rounding.
            if off.is_nan() || off <= agreement || (off < ROUNDING && off > 0.5 * last) {
                break;
            }
            last = off;
        }
        sum
    }

    /// The trapezoid with nodes at `first`, `first + step`, …; the lower half of the contour mirrors the upper one.
    fn sum(&self, first: f64, step: f64, kernel: &Kernel) -> [f64; 3] {
        let mut sums = [0.0; 3];
        let mut place = self.count.gain.at(Complex::from(self.start.v));
        let end = if is_whole(self.count) { PI } else { f64::INFINITY };
        for index in 0..MOST_NODES {
            let t = first + f64::from(index) * step;
            if t > end + 0.25 * step {
                break;
            }
            let Some((s, ds)) = self.node(t) else { break };
            let Some(next) = self.count.gain.follow(&place, s) else { break };
            place = next;
            let Some(integrand) = self.integrand(&place, kernel) else { break };
            let at_an_end = t == 0.0 || t > end - 0.25 * step;
            let weight = step / PI * if at_an_end { 0.5 } else { 1.0 };
            let term = integrand * ds * weight;
            for (sum, factor) in sums.iter_mut().zip(kernel.factors(s)) {
                *sum += (term * factor).im;
            }
        }
        sums
    }

    /// e^{K − sD} over its size at the start; nothing where nothing is left of it.
    fn integrand(&self, place: &Place, kernel: &Kernel) -> Option<Complex> {
        let noise = if is_whole(self.count) { 0.0 } else { 0.5 * self.count.noise * self.count.noise };
        let k = self.count.k_without_noise(place) + place.s * place.s * noise;
        let exponent = k - place.s * self.threshold + -self.ln_size;
        let grown = kernel.reach() * (place.s.re - self.start.s);
        (exponent.re + grown > NOTHING).then(|| exponent.exp())
    }
}

/// Away from the pole of 1/s at 0: to its lower side, because the other may end close by.
fn apart_from_pole(count: &Compound, saddle: Local) -> Local {
    let wide = (0.8 / saddle.k2.sqrt()).min(1.0);
    if saddle.s.abs() >= wide {
        return saddle;
    }
    let place = count.gain.at(Complex::from(saddle.v));
    let moved = count.gain.follow(&place, Complex::from(-wide)).map(|place| count.local(place.v.re));
    moved.filter(|local| local.k2 > 0.0 && local.k2.is_finite()).unwrap_or(saddle)
}

/// What the integrand is multiplied with for the tail, the density and its derivative.
enum Kernel {
    /// 1/s, 1 and −s.
    Smooth,
    /// Sums over whole counts.
    Whole(Whole),
}

/// Whole counts about a threshold, each with what noise makes of it.
struct Whole {
    /// Of each count within reach of the noise: the share on the side that is summed, the density at the threshold, its
    /// derivative.
    within: Vec<[f64; 3]>,
    /// The first of them, less the threshold.
    first: f64,
    /// Where those begin (above) or end (below) that are on that side altogether, less the threshold.
    all_from: f64,
    /// Without noise: the count nearest to the threshold, less it.
    nearest: Option<f64>,
}

impl Kernel {
    fn new(count: &Compound, threshold: f64, s0: f64) -> Kernel {
        if is_whole(count) { Kernel::Whole(Whole::new(count, threshold, s0)) } else { Kernel::Smooth }
    }

    fn factors(&self, s: Complex) -> [Complex; 3] {
        match self {
            Kernel::Smooth => [Complex::from(1.0) / s, Complex::from(1.0), -s],
            Kernel::Whole(whole) => whole.factors(s),
        }
    }

    /// How much faster than e^{−sD} it may grow to the right.
    fn reach(&self) -> f64 {
        match self {
            Kernel::Smooth => 0.0,
            Kernel::Whole(whole) => -whole.first,
        }
    }
}

impl Whole {
    fn new(count: &Compound, threshold: f64, s0: f64) -> Whole {
        let noise = count.noise;
        if noise < NO_NOISE {
            let first = threshold.ceil() - threshold;
            let nearest = Some(threshold.round() - threshold);
            return Whole { within: Vec::new(), first, all_from: first, nearest };
        }
        // e^{−sm} moves the weight of the far side further away from the threshold.
        let (near, far) = (REACH * noise, REACH * noise + noise * noise * s0.abs());
        let (down, up) = if s0 > 0.0 { (far, near) } else { (near, far) };
        let first = (threshold - down).ceil();
        let length = (threshold + up).floor() - first + 1.0;
        let weights = |index: usize| {
            let z = (first + index as f64 - threshold) / noise;
            let density = libm::exp(-0.5 * z * z) / (noise * ROOT_TWO_PI);
            [if s0 > 0.0 { upper_tail(-z) } else { -upper_tail(z) }, density, density * z / noise]
        };
        let first_less = first - threshold;
        Whole {
            within: (0..length as usize).map(weights).collect(),
            first: first_less,
            all_from: first_less + if s0 > 0.0 { length } else { 0.0 },
            nearest: None,
        }
    }

    fn factors(&self, s: Complex) -> [Complex; 3] {
        let less = (-s).exp();
        let all = (-s * self.all_from).exp() / (Complex::from(1.0) - less);
        if let Some(nearest) = self.nearest {
            let chance = (-s * nearest).exp();
            return [all, chance, -(s * chance)];
        }
        let start = (-s * self.first).exp();
        let horner = |sums: [Complex; 3], weights: &[f64; 3]| {
            let mut next = sums.into_iter().zip(weights).map(|(sum, weight)| sum * less + *weight);
            core::array::from_fn(|_| next.next().unwrap_or(Complex::from(0.0)))
        };
        let nothing = [Complex::from(0.0); 3];
        let [tail, density, falling] = self.within.iter().rev().fold(nothing, horner);
        [start * tail + all, start * density, start * falling]
    }
}

//! Counting electrons: on which side of a threshold a count falls, with the statistics that it really has.
//!
//! During the time of one decision a Poisson number of primary electrons starts (mean N); each becomes G electrons by the
//! avalanche; a Poisson number of others joins without gain (mean S); the circuit adds a Gaussian σ. The chances come from
//! the generating function
//!
//! ```text
//! E[e^{sX}] = exp( N (g(s) − 1) + S (e^s − 1) + σ² s²/2 )
//! ```
//!
//! by integration along a contour: see `contour.rs`. What no primary starts is a Gaussian (or, with S, a count of its own) and is taken
//! apart first, because for small N it has a saddle of its own.
//!
//! Without circuit noise counts are whole, and the threshold is too: a count at or above it reads as one.
//!
//! Source: S. D. Personick, Bell Syst. Tech. J. 50, 167–189 (1971) for the model; C. W. Helstrom, IEEE Trans. Aerosp. Electron. Syst.
//! AES-14, 630–640 (1978) for integrating through the saddle.

mod contour;
mod saddle;

use super::gain_transform::Gain;
use crate::statistics::normal::upper_tail;
use contour::crossed;
use saddle::Compound;

/// Noise in electrons below which it moves no count past half a unit: ½ is 12 of it, beyond 1e-34.
const NO_NOISE: f64 = 0.04;

/// Skewness below which the count is Gaussian to a hundred-millionth, as far as any error ratio goes.
const NO_SKEWNESS: f64 = 1e-11;

/// A count of electrons with noise.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Count {
    /// N, mean number of primary electrons, ≥ 0.
    pub primaries: f64,
    /// What each of them becomes.
    pub gain: Gain,
    /// S, mean number of electrons that see no gain, ≥ 0.
    pub unmultiplied: f64,
    /// σ, Gaussian noise of the circuit in electrons, RMS, ≥ 0.
    pub noise: f64,
    /// Gaussian noise of the light itself in electrons, RMS, ≥ 0: added wherever a primary electron came, for without one no light was
    /// seen.
    pub light_noise: f64,
}

/// Where a count lies with respect to a threshold.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Chances {
    /// Chance of less than the threshold.
    pub below: f64,
    /// Chance of the threshold or more.
    pub above: f64,
    /// Natural logarithm of the density at the threshold, per electron; without noise, of the chance of the whole count nearest
    /// to it.
    pub ln_density: f64,
    /// Derivative of that by the threshold.
    pub slope: f64,
}

impl Count {
    /// Mean of the count: N M + S.
    pub fn mean(&self) -> f64 {
        self.primaries * self.gain.mean() + self.unmultiplied
    }

    /// All noise but that of the count, in electrons, RMS.
    pub fn total_noise(&self) -> f64 {
        libm::hypot(self.noise, self.light_noise)
    }

    /// Variance of the count with its noise: `N E[G²] + S + σ²`.
    pub fn variance(&self) -> f64 {
        let noise = self.total_noise();
        self.primaries * self.gain.raw_moments().0 + self.unmultiplied + noise * noise
    }

    /// Whether it is a whole number of electrons, to all that matters.
    pub fn is_whole(&self) -> bool {
        self.total_noise() < NO_NOISE
    }

    /// The chances on both sides of a threshold in electrons, to better than 1e-7 of the smaller one.
    pub fn chances(&self, threshold: f64) -> Chances {
        let (_, third) = self.gain.raw_moments();
        let variance = self.variance();
        let skewness = (self.primaries * third + self.unmultiplied) / (variance * variance.sqrt());
        // Not a number where nothing at all is counted: the same.
        if skewness.is_nan() || skewness < NO_SKEWNESS {
            return gaussian(threshold - self.mean(), variance.sqrt());
        }
        let none = self.without_primaries();
        let Some(compound) = self.with_primaries() else {
            return none.chances(threshold);
        };
        // Far below zero only noise gets there, beyond the smallest number.
        if threshold < -40.0 * self.total_noise() {
            return gaussian(threshold, self.total_noise());
        }
        let some = crossed(&compound, threshold);
        match self.share_without_primaries() {
            (_, 0.0) => some,
            (ln_share, _) => joined(some, none.chances(threshold), ln_share),
        }
    }

    /// An approximation of [`Chances::ln_density`] and its slope to some per cent, at a tenth of the cost.
    ///
    /// Source: H. E. Daniels, Ann. Math. Stat. 25, 631–650 (1954).
    pub fn rough_density(&self, threshold: f64) -> (f64, f64) {
        let Some(compound) = self.with_primaries() else {
            return match self.without_primaries() {
                Count { primaries: 0.0, noise, .. } => gaussian_density(threshold, noise),
                other => other.rough_density(threshold),
            };
        };
        let some = compound.saddle(threshold).map_or((f64::NEG_INFINITY, 0.0), |saddle| {
            const LN_TWO_PI: f64 = 1.837_877_066_409_345_5;
            (saddle.k0 - saddle.s * threshold - 0.5 * (LN_TWO_PI + libm::log(saddle.k2)), -saddle.s)
        });
        match self.share_without_primaries() {
            (_, 0.0) => some,
            (ln_share, _) => {
                let (ln_density, slope) = self.without_primaries().rough_density(threshold);
                mixed(some, (ln_density + ln_share, slope))
            }
        }
    }

    /// The part of the distribution that has at least one primary electron.
    fn with_primaries(&self) -> Option<Compound> {
        let unit = self.gain.is_unit();
        let primaries = if unit { self.primaries + self.unmultiplied } else { self.primaries };
        let unmultiplied = if unit { 0.0 } else { self.unmultiplied };
        // So few that their logarithm has no digits left are none.
        (primaries > 1e-290).then(|| Compound {
            primaries,
            unmultiplied,
            noise: self.total_noise(),
            gain: self.gain,
        })
    }

    /// What is counted while no primary electron comes.
    fn without_primaries(&self) -> Count {
        let unmultiplied = if self.gain.is_unit() { 0.0 } else { self.unmultiplied };
        Count {
            primaries: unmultiplied,
            gain: Gain::UNIT,
            unmultiplied: 0.0,
            noise: self.noise,
            light_noise: 0.0,
        }
    }

    /// The chance that no primary electron comes, with its logarithm first; 0 where it is beyond all error ratios.
    fn share_without_primaries(&self) -> (f64, f64) {
        let unit = self.gain.is_unit();
        let ln_share = -(if unit { self.primaries + self.unmultiplied } else { self.primaries });
        (ln_share, if ln_share < -300.0 { 0.0 } else { libm::exp(ln_share) })
    }
}

/// A Gaussian about zero.
fn gaussian(distance: f64, noise: f64) -> Chances {
    let (ln_density, slope) = gaussian_density(distance, noise);
    if noise > 0.0 {
        let z = distance / noise;
        return Chances { below: upper_tail(-z), above: upper_tail(z), ln_density, slope };
    }
    let above = if distance <= 0.0 { 1.0 } else { 0.0 };
    Chances { below: 1.0 - above, above, ln_density, slope }
}

fn gaussian_density(distance: f64, noise: f64) -> (f64, f64) {
    const LN_ROOT_TWO_PI: f64 = 0.918_938_533_204_672_8;
    if noise == 0.0 {
        let ln_chance = if distance.abs() <= 0.5 { 0.0 } else { f64::NEG_INFINITY };
        return (ln_chance, 0.0);
    }
    let z = distance / noise;
    (-0.5 * z * z - LN_ROOT_TWO_PI - libm::log(noise), -z / noise)
}

/// Two parts of one distribution together; the second counts as much as its share says.
fn joined(some: Chances, none: Chances, ln_share: f64) -> Chances {
    let share = libm::exp(ln_share);
    let (ln_density, slope) = mixed((some.ln_density, some.slope), (none.ln_density + ln_share, none.slope));
    Chances {
        below: some.below + share * none.below,
        above: some.above + share * none.above,
        ln_density,
        slope,
    }
}

/// The sum of two densities by their logarithms, with the slope of its logarithm.
pub(super) fn mixed(one: (f64, f64), other: (f64, f64)) -> (f64, f64) {
    let (more, less) = if one.0 >= other.0 { (one, other) } else { (other, one) };
    if less.0 == f64::NEG_INFINITY {
        return more;
    }
    let ratio = libm::exp(less.0 - more.0);
    (more.0 + libm::log1p(ratio), (more.1 + ratio * less.1) / (1.0 + ratio))
}

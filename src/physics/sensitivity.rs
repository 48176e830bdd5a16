//! The least light that reaches an error ratio.

use super::constants::ELEMENTARY_CHARGE_C;
use super::decision::{Level, Threshold, decide};
use super::levels::{extinction_penalty_ratio, nrz_w, pam4_w};
use super::receiver::Receiver;
use crate::numeric::minimum::minimum;
use crate::numeric::root::root;
use crate::statistics::normal::upper_tail_quantile;

/// The most average power that is looked at, in W: far beyond what any detector survives.
pub(super) const MOST_POWER_W: f64 = 1e3;

/// How bits become levels.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Format {
    /// Two levels, one bit a symbol.
    Nrz,
    /// Four levels, two bits a symbol, Gray coded.
    Pam4,
}

/// A modulated source before a receiver.
#[derive(Clone, Copy, Debug)]
pub struct Link {
    /// The receiver.
    pub receiver: Receiver,
    /// How bits become levels.
    pub format: Format,
    /// Highest over lowest level as a ratio, > 1; infinite for a dark lowest level.
    pub extinction_ratio: f64,
    /// Where the thresholds are put.
    pub threshold: Threshold,
}

impl Link {
    /// The optical levels in W at an average power, lowest first.
    pub fn levels_w(&self, average_w: f64) -> Vec<f64> {
        match self.format {
            Format::Nrz => nrz_w(average_w, self.extinction_ratio).to_vec(),
            Format::Pam4 => pam4_w(average_w, self.extinction_ratio).to_vec(),
        }
    }

    /// What the decision sees at an average power, lowest level first.
    pub fn levels(&self, average_w: f64) -> Vec<Level> {
        self.levels_w(average_w).into_iter().map(|power_w| self.receiver.level(power_w)).collect()
    }

    /// Bit error ratio at an average power.
    pub fn error_ratio(&self, average_w: f64) -> f64 {
        decide(&self.levels(average_w), self.threshold).error_ratio
    }

    /// What the error ratio tends to as the power grows without end: 0 unless the light itself is noisy.
    ///
    /// All but intensity noise fades beside the signal then, so each level's noise is a fixed share of its current.
    pub fn error_floor(&self) -> f64 {
        let share = (self.receiver.rin_per_hz * self.receiver.noise_bandwidth_hz).sqrt();
        if share == 0.0 {
            return 0.0;
        }
        let level = |power: f64| Level { current_a: power, noise_rms_a: share * power };
        let levels: Vec<Level> = self.levels_w(1.0).into_iter().map(level).collect();
        decide(&levels, self.threshold).error_ratio
    }

    /// What the error ratio tends to as the power vanishes.
    ///
    /// The levels merge beside noise that is there without light: guessing. Without such noise only the signal's shot noise is
    /// left. It outgrows the distance of the levels, but differs from level to level, and a dark level has none: the width of the
    /// noise then tells what its centre does not. The Gaussian model means it; real photons do not come in such small parts.
    pub fn error_ratio_in_the_dark(&self) -> f64 {
        let steady = self.receiver.noise(0.0).total_a2() > 0.0;
        let level =
            |power: f64| Level { current_a: 0.0, noise_rms_a: if steady { 1.0 } else { power.sqrt() } };
        let levels: Vec<Level> = self.levels_w(1.0).into_iter().map(level).collect();
        decide(&levels, self.threshold).error_ratio
    }
}

/// Why no power is the answer.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum NoPower {
    /// However much light comes, its own noise keeps the error ratio at or above this.
    Floor {
        /// The error ratio that is approached.
        error_ratio: f64,
    },
    /// Even vanishing light does better than the target in this model.
    AnyPower {
        /// The error ratio that vanishing light approaches.
        error_ratio: f64,
    },
    /// Only more light than was looked at could do.
    Beyond {
        /// The most average power that was looked at, in W.
        power_w: f64,
        /// The error ratio there.
        error_ratio: f64,
    },
}

/// The least average power in W at which a link reaches an error ratio.
///
/// * `link` – the source and the receiver
/// * `target_error_ratio` – above 0 and below ½
///
/// The error ratio falls with power, because each noise grows at most as fast as the signal. So the power is bracketed within
/// a factor of two, in which ln(error ratio) is smooth and far from underflow, and its root is found to 1e-14.
pub fn least_average_power_w(link: &Link, target_error_ratio: f64) -> Result<f64, NoPower> {
    debug_assert!(target_error_ratio > 0.0 && target_error_ratio < 0.5);
    let floor = link.error_floor();
    if floor >= target_error_ratio {
        return Err(NoPower::Floor { error_ratio: floor });
    }
    let dark = link.error_ratio_in_the_dark();
    if dark <= target_error_ratio {
        return Err(NoPower::AnyPower { error_ratio: dark });
    }
    let reaches = |power_w: f64| link.error_ratio(power_w) <= target_error_ratio;

    let mut high = guess_w(link, target_error_ratio);
    // Each halving leaves `high` at a power that reaches the target, each doubling at one that may.
    while reaches(0.5 * high) {
        high *= 0.5;
        if high < f64::MIN_POSITIVE {
            return Err(NoPower::AnyPower { error_ratio: dark });
        }
    }
    while !reaches(high) {
        if high >= MOST_POWER_W {
            return Err(NoPower::Beyond { power_w: high, error_ratio: link.error_ratio(high) });
        }
        high = (2.0 * high).min(MOST_POWER_W);
    }
    let excess = |power_w: f64| libm::log(link.error_ratio(power_w) / target_error_ratio);
    // Where rounding blurs the two ends, the high one is known to reach the target.
    Ok(root(excess, 0.5 * high, high, 1e-14).unwrap_or(high))
}

/// A power near the answer, from the closed form with a dark zero and the penalties of extinction and of four levels.
pub(super) fn guess_w(link: &Link, target_error_ratio: f64) -> f64 {
    let receiver = &link.receiver;
    let eyes = match link.format {
        Format::Nrz => 1.0,
        Format::Pam4 => 3.0,
    };
    let q = eyes * extinction_penalty_ratio(link.extinction_ratio) * upper_tail_quantile(target_error_ratio);
    let shot = ELEMENTARY_CHARGE_C * receiver.excess_noise_factor * q * receiver.noise_bandwidth_hz;
    let steady = receiver.noise(0.0).total_a2().sqrt() / receiver.gain;
    let guess = q / receiver.responsivity_a_per_w * (shot + steady);
    if guess.is_finite() { guess.clamp(1e-30, 0.5 * MOST_POWER_W) } else { 1e-6 }
}

/// What more gain brings.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum BestGain {
    /// Sensitivity is best at this gain.
    At {
        /// The gain, ≥ 1; exactly 1 where gain does not help.
        gain: f64,
        /// The least average power at it, in W.
        power_w: f64,
    },
    /// More gain helps as far as was looked.
    NoUpperEnd {
        /// The least average power at the highest gain, in W: the limit, to all that matters.
        power_w: f64,
    },
    /// At no gain does a power answer.
    None,
}

/// The gain at which the least power reaches a target.
///
/// * `link_at` – the link at a gain: noise factor and bandwidth may hang on it
/// * `target_error_ratio` – above 0 and below ½
/// * `gain_max` – the highest gain looked at, > 1
pub fn best_gain(link_at: impl Fn(f64) -> Link, target_error_ratio: f64, gain_max: f64) -> BestGain {
    let power_w = |gain: f64| least_average_power_w(&link_at(gain), target_error_ratio);
    gain_of_least_power(power_w, gain_max, 1e-9)
}

/// The gain at which a power is least.
///
/// * `power_w` – the power at a gain, in W, if any answers
/// * `gain_max` – the highest gain looked at, > 1
/// * `relative` – accuracy of the gain's logarithm, relative to that of the highest gain, > 0
///
/// Gains five times apart find the valley, Brent's method its floor: at best to about 1e-7, for it is flat.
pub fn gain_of_least_power(
    power_w: impl Fn(f64) -> Result<f64, NoPower>,
    gain_max: f64,
    relative: f64,
) -> BestGain {
    debug_assert!(gain_max > 1.0);
    let ln_max = libm::log(gain_max);
    let gain = |ln_gain: f64| {
        if ln_gain <= 0.0 {
            1.0
        } else if ln_gain >= ln_max {
            gain_max
        } else {
            libm::exp(ln_gain)
        }
    };
    let power_w = |ln_gain: f64| power_w(gain(ln_gain)).unwrap_or(f64::INFINITY);
    let parts = (ln_max / libm::log(5.0)).ceil().clamp(2.0, 1000.0) as usize;
    let place = |part: usize| ln_max * (part as f64 / parts as f64);
    let coarse: Vec<(usize, f64)> = (0..=parts).map(|part| (part, power_w(place(part)))).collect();
    let Some(&(part, _)) =
        coarse.iter().min_by(|a, b| a.1.total_cmp(&b.1)).filter(|(_, power_w)| power_w.is_finite())
    else {
        return BestGain::None;
    };
    let (low, high) = (place(part.saturating_sub(1)), place((part + 1).min(parts)));
    let least = minimum(power_w, low, high, relative);
    if least.at >= ln_max {
        BestGain::NoUpperEnd { power_w: least.value }
    } else {
        BestGain::At { gain: gain(least.at), power_w: least.value }
    }
}

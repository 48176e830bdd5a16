//! The gain to aim at: that of the least noise, unless it makes the detector too slow or its noise is not known so far.

use super::setup::Setup;
use crate::numeric::root::root;
use crate::physics::decibel::db_from_ratio;
use crate::physics::sensitivity::{BestGain, Link, best_gain, least_average_power_w};
use crate::questions::sensitivity::MOST_GAIN;
use serde::Serialize;

/// A gain and what it brings.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Best {
    /// M.
    pub gain: f64,
    /// The least average power at it, W.
    pub power_w: f64,
    /// What keeps more gain from helping.
    pub limit: Limit,
}

/// What keeps more gain from helping.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum Limit {
    /// Its noise.
    Noise,
    /// The gain–bandwidth product, slower than the receiver from there on.
    GainBandwidth,
    /// Nothing that is known: the table of excess noise ends.
    NoiseTable,
}

/// Why there is no gain to aim at.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum NoBest {
    /// More gain always helps.
    NoUpperEnd,
    /// No power reaches the target at any gain.
    NoPower,
}

/// The receiver scaled to another symbol rate, the bench's own being 1.
///
/// All bandwidths of the electronics go with the rate. Its noise is taken as white, so its mean square does too.
#[derive(Debug, Clone, Copy)]
pub struct Scaled<'s> {
    /// The bench.
    pub setup: &'s Setup,
    /// Symbol rate over that of the bench.
    pub rate: f64,
}

impl Scaled<'_> {
    /// The link at a gain.
    pub fn link_at(&self, gain: f64) -> Link {
        let mut link = self.setup.receiver.link_at(gain);
        link.receiver.noise_bandwidth_hz *= self.rate;
        link.receiver.circuit_noise_a *= self.rate.sqrt();
        link
    }

    /// The least average power at a gain, W.
    pub fn power_w(&self, gain: f64) -> Option<f64> {
        least_average_power_w(&self.link_at(gain), self.setup.receiver.target).ok()
    }

    /// The gain from which on the gain–bandwidth product alone is slower than the receiver; at least 1.
    ///
    /// The detector's speed at unit gain is left out: it slows the receiver at any gain, so it tells no gain from another.
    pub fn gain_of_equal_speed(&self) -> Option<f64> {
        let receiver = &self.setup.receiver;
        let gain = receiver.gain_bandwidth_hz? / (receiver.bandwidth_hz? * self.rate);
        Some(gain.max(1.0))
    }

    /// The gain to aim at.
    pub fn best(&self) -> Result<Best, NoBest> {
        let by_speed = self.gain_of_equal_speed().unwrap_or(f64::INFINITY);
        let by_table = self.setup.receiver.reach(f64::INFINITY);
        let end = by_speed.min(by_table).min(MOST_GAIN);
        let limit = if by_speed <= by_table { Limit::GainBandwidth } else { Limit::NoiseTable };
        if end == 1.0 {
            let power_w = self.power_w(1.0).ok_or(NoBest::NoPower)?;
            return Ok(Best { gain: 1.0, power_w, limit });
        }
        match best_gain(|gain| self.link_at(gain), self.setup.receiver.target, end) {
            BestGain::At { gain, power_w } => Ok(Best { gain, power_w, limit: Limit::Noise }),
            BestGain::NoUpperEnd { power_w } if end < MOST_GAIN => Ok(Best { gain: end, power_w, limit }),
            BestGain::NoUpperEnd { .. } => Err(NoBest::NoUpperEnd),
            BestGain::None => Err(NoBest::NoPower),
        }
    }

    /// The lowest gain at which the sensitivity is `worse_db` worse than at the best; nothing where it is nowhere so bad below
    /// that. The power falls with gain up to the best, so there is one such gain at most.
    pub fn near_gain(&self, best: &Best, worse_db: f64) -> Option<f64> {
        let off_db = |ln_gain: f64| {
            // The logarithm may round to just outside of the ends.
            let gain = libm::exp(ln_gain).clamp(1.0, best.gain);
            self.power_w(gain).map_or(f64::NAN, |power_w| db_from_ratio(power_w / best.power_w) - worse_db)
        };
        let found = root(off_db, 0.0, libm::log(best.gain), 1e-12).ok()?;
        Some(libm::exp(found).clamp(1.0, best.gain))
    }
}

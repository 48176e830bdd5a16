//! The gain to aim at: that of the least noise, unless the detector is too slow there or the noise not known so far.

use super::setup::Setup;
use crate::physics::avalanche::gain_at_bandwidth;
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
    /// The detector, slower than the receiver from there on.
    Bandwidth,
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

    /// The gain from which on the detector is slower than the receiver; nothing where it always or never is.
    pub fn gain_of_equal_speed(&self) -> Option<f64> {
        let receiver = &self.setup.receiver;
        let unit_gain_hz = receiver.detector_bandwidth_hz.unwrap_or(f64::INFINITY);
        let wanted_hz = receiver.bandwidth_hz? * self.rate;
        gain_at_bandwidth(wanted_hz, unit_gain_hz, receiver.gain_bandwidth_hz?).filter(|gain| *gain >= 1.0)
    }

    /// The gain to aim at.
    pub fn best(&self) -> Result<Best, NoBest> {
        let by_speed = self.gain_of_equal_speed().unwrap_or(f64::INFINITY);
        let by_table = self.setup.receiver.reach(f64::INFINITY);
        let end = by_speed.min(by_table).min(MOST_GAIN);
        let limit = if by_speed <= by_table { Limit::Bandwidth } else { Limit::NoiseTable };
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
}

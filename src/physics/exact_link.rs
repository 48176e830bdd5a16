//! A link whose electrons are counted one by one, and the least light that reaches an error ratio then.

use super::constants::ELEMENTARY_CHARGE_C;
use super::counting::Count;
use super::decision::Threshold;
use super::exact_decision::{CountDecision, Rule, decide};
use super::gain_transform::Gain;
use super::sensitivity::{Link, MOST_POWER_W, NoPower, guess_w, least_average_power_w};
use crate::numeric::root::root;

/// A link and what its Gaussian model does not need to know.
#[derive(Clone, Copy, Debug)]
pub struct ExactLink {
    /// The link; its threshold rule is the optimum or the midpoint, for Q is Gaussian by its definition and is read as the optimum.
    pub link: Link,
    /// k of the avalanche, 0 to 1; of no account without gain.
    pub ionisation_ratio: f64,
}

/// What is counted at each level of a link.
#[derive(Clone, Debug)]
pub struct Counts {
    /// The counts, lowest level first.
    pub levels: Vec<Count>,
    /// Current of one electron within the counting time, in A.
    pub electron_a: f64,
    /// Mean count without signal, in electrons: it is taken as removed.
    pub dark: f64,
}

impl Counts {
    /// A count as a signal current above the dark level, in A.
    pub fn signal_a(&self, electrons: f64) -> f64 {
        (electrons - self.dark) * self.electron_a
    }
}

impl ExactLink {
    /// What is counted at an average power.
    ///
    /// ```text
    /// counting time 1/(2B_n):   N = (R P + R P_bg + I_bulk)/(2 q B_n)     S = I_surface/(2 q B_n)
    ///                           σ² = [i_c² + RIN (M R P)² B_n]/(2 q B_n)²
    /// ```
    ///
    /// With this time mean and variance of the count are those of the current in the Gaussian model. Intensity noise is
    /// that of the light; it is slow beside single electrons and stays Gaussian, beside the circuit's.
    pub fn counts(&self, average_w: f64) -> Counts {
        let receiver = &self.link.receiver;
        let electron_a = 2.0 * ELEMENTARY_CHARGE_C * receiver.noise_bandwidth_hz;
        let gain = Gain::new(receiver.gain, self.ionisation_ratio);
        let steady_a =
            receiver.responsivity_a_per_w * receiver.background_power_w + receiver.dark_current_bulk_a;
        let unmultiplied = receiver.dark_current_surface_a / electron_a;
        let level = |power_w: f64| {
            let noise = receiver.noise(power_w);
            Count {
                primaries: (receiver.responsivity_a_per_w * power_w + steady_a) / electron_a,
                gain,
                unmultiplied,
                noise: noise.circuit.sqrt() / electron_a,
                light_noise: noise.source_intensity.sqrt() / electron_a,
            }
        };
        Counts {
            levels: self.link.levels_w(average_w).into_iter().map(level).collect(),
            electron_a,
            dark: steady_a / electron_a * receiver.gain + unmultiplied,
        }
    }

    /// Thresholds in electrons and bit error ratio at an average power.
    pub fn decide(&self, counts: &Counts) -> CountDecision {
        let rule = match self.link.threshold {
            Threshold::Midpoint => Rule::Midpoint,
            Threshold::Optimum | Threshold::QFactor => Rule::Optimum,
        };
        decide(&counts.levels, rule)
    }

    /// Bit error ratio at an average power.
    pub fn error_ratio(&self, average_w: f64) -> f64 {
        self.decide(&self.counts(average_w)).error_ratio
    }

    /// The least average power in W at which the link reaches an error ratio.
    ///
    /// * `target_error_ratio` – above 0 and below ½
    ///
    /// Without light the levels are one, so the error ratio falls from ½ and is bracketed about the Gaussian answer. Whole counts with
    /// a threshold halfway make it fall in steps; the power is then that of the step.
    pub fn least_average_power_w(&self, target_error_ratio: f64) -> Result<f64, NoPower> {
        debug_assert!(target_error_ratio > 0.0 && target_error_ratio < 0.5);
        let floor = self.link.error_floor();
        if floor >= target_error_ratio {
            return Err(NoPower::Floor { error_ratio: floor });
        }
        let ln_target = libm::log(target_error_ratio);
        // Too few errors to be told from none are far too few.
        let excess = |power_w: f64| (libm::log(self.error_ratio(power_w)) - ln_target).max(-700.0);
        let start_w = least_average_power_w(&self.link, target_error_ratio)
            .unwrap_or_else(|_| guess_w(&self.link, target_error_ratio));
        let (mut here_w, mut here) = (start_w, excess(start_w));
        let mut before_w = here_w;
        // ln(error ratio) is about proportional to the power, so this overshoots by half and brackets.
        for _ in 0..200 {
            let step = (1.5 * here.abs() / (here - 0.5 * ln_target).abs().max(0.5)).clamp(0.01, 3.0);
            let before = here;
            before_w = here_w;
            here_w = (here_w * libm::exp(step.copysign(here))).min(MOST_POWER_W);
            here = excess(here_w);
            if (here > 0.0) != (before > 0.0) {
                break;
            }
            if here > 0.0 && here_w >= MOST_POWER_W {
                return Err(NoPower::Beyond { power_w: here_w, error_ratio: self.error_ratio(here_w) });
            }
        }
        let reaching_w = if here > 0.0 { before_w } else { here_w };
        Ok(root(excess, before_w, here_w, 1e-11).unwrap_or(reaching_w))
    }
}

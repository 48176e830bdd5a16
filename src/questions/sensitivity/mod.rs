//! How little light is enough?

mod curves;
mod distributions;
mod gaussian;
pub(in crate::questions) mod setup;
pub(in crate::questions) mod shown;

use super::curve::Curve;
use super::prepared::{NumberOf, Prepared};
use super::shown::Shown;
use crate::bench::Bench;
use crate::bench::decision::Threshold as Rule;
use crate::fault::Faults;
use crate::numeric::minimum::minimum;
use crate::physics::decibel::{dbm_from_watt, watt_from_dbm};
use crate::physics::decision::{Threshold, q_factors};
use crate::physics::levels::modulation_amplitude_w;
use crate::physics::receiver::Noise;
use crate::physics::sensitivity::{
    BestGain, Link, NoPower, best_gain, gain_of_least_power, least_average_power_w,
};
use crate::physics::{light, quantum_limit};
use gaussian::GaussianBeside;
use serde::Serialize;
use setup::Setup;

/// The least average power at the detector that reaches the target error ratio, and what it is made of.
///
/// Powers are average optical powers at the detector's input. Where no power reaches the target, the numbers
/// that would belong to it are absent and `none_because` says why.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Answer {
    /// The sensitivity, W.
    pub average_power_w: Option<f64>,
    /// The sensitivity, dBm.
    pub average_power_dbm: Option<f64>,
    /// The sensitivity by the textbook form, Q = (I1 − I0)/(σ1 + σ0), dBm.
    pub average_power_q_dbm: Option<f64>,
    /// Optical modulation amplitude at the sensitivity: highest less lowest level, W.
    pub oma_w: Option<f64>,
    /// Average photons per bit at the sensitivity, when wavelength and symbol rate are known.
    pub photons_per_bit: Option<f64>,
    /// Mean gain M.
    pub gain: f64,
    /// The excess noise factor F at that gain.
    pub excess_noise_factor: f64,
    /// Noise bandwidth, Hz.
    pub noise_bandwidth_hz: f64,
    /// Responsivity at unit gain, A/W.
    pub responsivity_a_per_w: f64,
    /// Electrons per photon, when the wavelength is known.
    pub quantum_efficiency: Option<f64>,
    /// The decision threshold, as signal current above the dark level, A; with four levels the middle one.
    pub threshold_a: Option<f64>,
    /// All thresholds, lowest first, A.
    pub thresholds_a: Vec<f64>,
    /// Q at the sensitivity; with four levels that of the worst eye.
    pub q_factor: Option<f64>,
    /// Power at the detector from the bench's own source, dBm.
    pub received_power_dbm: Option<f64>,
    /// The error ratio at that power.
    pub error_ratio: Option<f64>,
    /// The same by the textbook form.
    pub error_ratio_q: Option<f64>,
    /// Received power above the sensitivity, dB.
    pub margin_db: Option<f64>,
    /// The levels at the sensitivity, lowest first.
    pub levels: Vec<LevelAtSensitivity>,
    /// The gain that makes the sensitivity best; absent for a PIN, or where no power is enough.
    pub best_gain: Option<BestGainFound>,
    /// What the Gaussian model says beside it, where electrons are counted exactly.
    pub gaussian: Option<GaussianBeside>,
    /// The limit of ideal photon counting, for scale.
    pub quantum_limit: QuantumLimit,
    /// Why there is no such power.
    pub none_because: Option<NoneBecause>,
    /// Error ratio against power, and sensitivity against gain.
    pub curves: Vec<Curve>,
    /// The answer as it is shown.
    pub shown: Shown,
}

/// One level and its noise by cause.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct LevelAtSensitivity {
    /// Optical power, W.
    pub power_w: f64,
    /// Signal current, multiplied, without dark or background current, A.
    pub current_a: f64,
    /// Mean-square noise by cause, A².
    pub noise_a2: Noise,
    /// All of it, RMS, A.
    pub noise_rms_a: f64,
}

/// The gain that makes the sensitivity best.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct BestGainFound {
    /// That gain; absent when more gain is always better, as in the limit k = 0.
    pub gain: Option<f64>,
    /// The sensitivity there, or its limit, dBm.
    pub average_power_dbm: f64,
    /// How much better than at the bench's gain, dB; absent when that reaches the target at no power.
    pub improvement_db: Option<f64>,
    /// The best gain by the textbook's closed form, which knows neither extinction nor dark current nor
    /// intensity noise; absent where it has no upper end, and with more than two levels.
    pub closed_form_gain: Option<f64>,
}

/// What an ideal counter of photons would need: a one is missed when no photon of it comes, ½e^(−N).
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct QuantumLimit {
    /// Average photons per bit, on-off keyed with a perfectly dark zero.
    pub photons_per_bit: f64,
    /// The same as average power, when wavelength and symbol rate are known, dBm.
    pub average_power_dbm: Option<f64>,
}

/// Why there is no least power.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct NoneBecause {
    /// A sentence.
    pub reason: String,
    /// The error ratio that is never undercut, however much light there is.
    pub error_floor: Option<f64>,
}

/// Answers for a bench.
pub fn ask(bench: &Bench) -> Result<Answer, Faults> {
    let setup = Setup::new(bench)?;
    let mut answer = figures(&setup, bench);
    answer.best_gain = find_best_gain(&setup, answer.average_power_dbm);
    answer.curves = curves::curves(&setup, &answer);
    answer.shown = shown::shown(&setup, bench, &answer);
    Ok(answer)
}

/// One of the numbers, made ready; the power itself does without all that stands beside it.
pub fn prepare(bench: &Bench, of: &'static str) -> Result<Prepared, Faults> {
    // What is missing is said once, before the trials.
    Setup::new(bench)?;
    let power_w = |bench: &Bench| {
        let setup = Setup::new(bench).ok()?;
        setup.least_power_w(&setup.link(), setup.target).ok()
    };
    let value: NumberOf = match of {
        "average_power_w" => Box::new(move |bench, _| power_w(bench)),
        "average_power_dbm" => Box::new(move |bench, _| power_w(bench).map(dbm_from_watt)),
        _ => return Ok(Prepared::by_numbers(numbers, of)),
    };
    Ok(Prepared { certificate: None, value })
}

/// The numbers that a sweep or a search may follow, without curves or text.
pub fn numbers(bench: &Bench) -> Result<Vec<(&'static str, Option<f64>)>, Faults> {
    let answer = figures(&Setup::new(bench)?, bench);
    Ok(vec![
        ("average_power_dbm", answer.average_power_dbm),
        ("average_power_w", answer.average_power_w),
        ("average_power_q_dbm", answer.average_power_q_dbm),
        ("oma_w", answer.oma_w),
        ("photons_per_bit", answer.photons_per_bit),
        ("threshold_a", answer.threshold_a),
        ("error_ratio", answer.error_ratio),
        ("error_ratio_q", answer.error_ratio_q),
        ("margin_db", answer.margin_db),
        ("excess_noise_factor", Some(answer.excess_noise_factor)),
        ("gaussian_difference_db", answer.gaussian.and_then(|gaussian| gaussian.difference_db)),
    ])
}

fn figures(setup: &Setup, bench: &Bench) -> Answer {
    let link = setup.link();
    let found = setup.least_power_w(&link, setup.target);
    let power_w = found.as_ref().ok().copied();
    let power_dbm = power_w.map(dbm_from_watt);
    let rule = bench.decision.as_ref().map_or(Rule::Optimum, |decision| decision.threshold);

    let levels = power_w.map(|power_w| levels_at(&link, power_w)).unwrap_or_default();
    let thresholds_a = power_w.map(|power_w| setup.thresholds_a(&link, power_w)).unwrap_or_default();
    let worst_eye =
        power_w.map(|power_w| q_factors(&link.levels(power_w)).into_iter().fold(f64::INFINITY, f64::min));

    let textbook = Link { threshold: Threshold::QFactor, ..link };
    let power_q_w = match rule {
        Rule::Q => power_w,
        _ => least_average_power_w(&textbook, setup.target).ok(),
    };
    let received_w = setup.received_dbm.map(watt_from_dbm);
    let receiver = &link.receiver;
    Answer {
        average_power_w: power_w,
        average_power_dbm: power_dbm,
        average_power_q_dbm: power_q_w.map(dbm_from_watt),
        oma_w: power_w.map(|power_w| modulation_amplitude_w(power_w, link.extinction_ratio)),
        photons_per_bit: power_w.and_then(|power_w| photons_per_bit(setup, power_w)),
        gain: receiver.gain,
        excess_noise_factor: receiver.excess_noise_factor,
        noise_bandwidth_hz: receiver.noise_bandwidth_hz,
        responsivity_a_per_w: receiver.responsivity_a_per_w,
        quantum_efficiency: setup
            .wavelength_m
            .map(|wavelength_m| light::quantum_efficiency(receiver.responsivity_a_per_w, wavelength_m)),
        threshold_a: thresholds_a.get(thresholds_a.len() / 2).copied(),
        thresholds_a,
        q_factor: worst_eye.filter(|q| q.is_finite()),
        received_power_dbm: setup.received_dbm,
        error_ratio: received_w.map(|power_w| setup.error_ratio(&link, power_w)),
        error_ratio_q: received_w.map(|power_w| textbook.error_ratio(power_w)),
        margin_db: setup.received_dbm.zip(power_dbm).map(|(received, least)| received - least),
        levels,
        best_gain: None,
        gaussian: setup.exact.then(|| GaussianBeside::new(&link, setup.target, power_dbm, received_w)),
        quantum_limit: ideal_counter(setup),
        none_because: found.err().map(|why| none_because(&why, setup)),
        curves: Vec::new(),
        shown: Shown::default(),
    }
}

fn levels_at(link: &Link, average_w: f64) -> Vec<LevelAtSensitivity> {
    let level = |power_w: f64| {
        let noise_a2 = link.receiver.noise(power_w);
        LevelAtSensitivity {
            power_w,
            current_a: link.receiver.signal_a(power_w),
            noise_a2,
            noise_rms_a: noise_a2.total_a2().sqrt(),
        }
    };
    link.levels_w(average_w).into_iter().map(level).collect()
}

fn photons_per_bit(setup: &Setup, average_w: f64) -> Option<f64> {
    Some(average_w / light::photon_energy_j(setup.wavelength_m?) / setup.bit_rate_hz?)
}

fn ideal_counter(setup: &Setup) -> QuantumLimit {
    let photons_per_bit = quantum_limit::photons_per_bit(setup.target);
    let power_w = setup.wavelength_m.zip(setup.bit_rate_hz).map(|(wavelength_m, bit_rate_hz)| {
        photons_per_bit * light::photon_energy_j(wavelength_m) * bit_rate_hz
    });
    QuantumLimit { photons_per_bit, average_power_dbm: power_w.map(dbm_from_watt) }
}

/// Where the search for the best gain ends: beyond any avalanche photodiode.
pub(in crate::questions) const MOST_GAIN: f64 = 1e6;

fn find_best_gain(setup: &Setup, here_dbm: Option<f64>) -> Option<BestGainFound> {
    if !setup.is_avalanche() {
        return None;
    }
    let (gain, power_w) = match search_best_gain(setup) {
        BestGain::At { gain, power_w } => (Some(gain), power_w),
        // A table of noise ends before gain stops to help: its end is the best that is known.
        BestGain::NoUpperEnd { power_w } => {
            (Some(setup.reach(MOST_GAIN)).filter(|reach| *reach < MOST_GAIN), power_w)
        }
        BestGain::None => return None,
    };
    let best_dbm = dbm_from_watt(power_w);
    Some(BestGainFound {
        gain,
        average_power_dbm: best_dbm,
        improvement_db: here_dbm.map(|here_dbm| here_dbm - best_dbm),
        closed_form_gain: setup.closed_form_gain(),
    })
}

/// Counting takes a hundred times as long and moves the best gain little: it looks about the Gaussian one, and to a hundredth.
fn search_best_gain(setup: &Setup) -> BestGain {
    let reach = setup.reach(MOST_GAIN);
    let gaussian = best_gain(|gain| setup.link_at(gain), setup.target, reach);
    if !setup.exact {
        return gaussian;
    }
    let power_w = |gain: f64| setup.counted(setup.link_at(gain)).least_average_power_w(setup.target);
    match gaussian {
        BestGain::At { gain: about, .. } => {
            let (low, high) = (libm::log((about / 5.0).max(1.0)), libm::log(about * 5.0));
            let at = |ln_gain: f64| power_w(libm::exp(ln_gain)).unwrap_or(f64::INFINITY);
            let least = minimum(at, low, high, 5e-3);
            let gain = libm::exp(least.at).max(1.0);
            if least.value.is_finite() { BestGain::At { gain, power_w: least.value } } else { BestGain::None }
        }
        BestGain::NoUpperEnd { .. } | BestGain::None => gain_of_least_power(power_w, MOST_GAIN, 1e-3),
    }
}

/// Why no power reaches the target.
pub(in crate::questions) fn none_because(why: &NoPower, setup: &Setup) -> NoneBecause {
    use crate::quantity::write::{prefixed, scientific};
    let target = scientific(setup.target, 3);
    match why {
        NoPower::Floor { error_ratio } => NoneBecause {
            reason: format!(
                "the source's intensity noise grows with the light: however much there is, the error ratio stays \
                 above {}, and {target} is asked for. Neither gain nor a quieter amplifier changes that; a source \
                 with less noise, more extinction or a narrower noise bandwidth does",
                scientific(*error_ratio, 3)
            ),
            error_floor: Some(*error_ratio),
        },
        NoPower::AnyPower { error_ratio } => NoneBecause {
            reason: format!(
                "with no circuit noise and no dark current even vanishing light is told apart with an error ratio of \
                 {}, better than the {target} asked for: there is no least power in this model",
                scientific(*error_ratio, 3)
            ),
            error_floor: None,
        },
        NoPower::Beyond { power_w, error_ratio } => NoneBecause {
            reason: format!(
                "even {} leaves an error ratio of {}, above the {target} asked for, and no detector takes more",
                prefixed(*power_w, "W", 3),
                scientific(*error_ratio, 3)
            ),
            error_floor: None,
        },
    }
}

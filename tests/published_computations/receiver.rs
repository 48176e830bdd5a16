//! Receivers: closed forms beside the full model.

use crate::support::cases::{Computation, Inputs, Outputs};
use leastlight::physics::avalanche::excess_noise_factor;
use leastlight::physics::closed_form::{self, IdealLink, pin_apd_average_power_w};
use leastlight::physics::decibel::{db_from_ratio, dbm_from_watt, ratio_from_db};
use leastlight::physics::decision::{Level, Threshold, decide, error_ratio_at, q_factors};
use leastlight::physics::receiver::Receiver;
use leastlight::physics::sensitivity::{BestGain, Format, Link, NoPower, best_gain, least_average_power_w};

pub const ALL: &[(&str, Computation)] = &[
    ("closed_form", closed_form),
    ("sensitivity", sensitivity),
    ("best_gain", gain_of_least_power),
    ("intensity_noise_penalty", intensity_noise_penalty),
    ("decision", decision),
    ("given_thresholds", given_thresholds),
    ("equal_noise_pam4", equal_noise_pam4),
];

fn closed_form(given: &mut Inputs) -> Result<Outputs, String> {
    let link = IdealLink {
        q_factor: given.number("q_factor")?,
        responsivity_a_per_w: given.number("responsivity_a_per_w")?,
        noise_bandwidth_hz: given.number("noise_bandwidth_hz")?,
        circuit_noise_a: given.number("circuit_noise_a")?,
    };
    let (gain, factor) = (given.number_or("gain", 1.0)?, given.number_or("excess_noise_factor", 1.0)?);
    let power_w = pin_apd_average_power_w(&link, gain, factor);
    let mut outputs =
        Outputs::from([("average_w", power_w.into()), ("average_dbm", dbm_from_watt(power_w).into())]);
    let k = given.number_or("ionisation_ratio", 0.0)?;
    if let Some(best) = closed_form::best_gain(&link, k) {
        let at_best_w = pin_apd_average_power_w(&link, best, excess_noise_factor(best, k));
        outputs.insert("best_gain", best.into());
        outputs.insert("average_at_best_gain_w", at_best_w.into());
        outputs.insert("average_at_best_gain_dbm", dbm_from_watt(at_best_w).into());
    }
    Ok(outputs)
}

fn rule(word: &str) -> Result<Threshold, String> {
    match word {
        "optimum" => Ok(Threshold::Optimum),
        "midpoint" => Ok(Threshold::Midpoint),
        "q_factor" => Ok(Threshold::QFactor),
        other => Err(format!("no threshold `{other}`")),
    }
}

fn decibels(given: &mut Inputs, key: &str, absent: f64) -> Result<f64, String> {
    given.number_or(key, f64::NAN).map(|db| if db.is_nan() { absent } else { ratio_from_db(db) })
}

/// A link as the tables of reference values describe it. No `extinction_ratio_db`: a dark zero.
fn link(given: &mut Inputs) -> Result<(Link, f64), String> {
    let (gain, k) = (given.number_or("gain", 1.0)?, given.number_or("ionisation_ratio", 0.0)?);
    let receiver = Receiver {
        responsivity_a_per_w: given.number("responsivity_a_per_w")?,
        gain,
        excess_noise_factor: excess_noise_factor(gain, k),
        noise_bandwidth_hz: given.number("noise_bandwidth_hz")?,
        circuit_noise_a: given.number_or("circuit_noise_a", 0.0)?,
        dark_current_bulk_a: given.number_or("dark_current_bulk_a", 0.0)?,
        dark_current_surface_a: given.number_or("dark_current_surface_a", 0.0)?,
        background_power_w: given.number_or("background_power_w", 0.0)?,
        rin_per_hz: decibels(given, "rin_db_per_hz", 0.0)?,
    };
    let format = match given.word("format")?.as_str() {
        "nrz" => Format::Nrz,
        "pam4" => Format::Pam4,
        other => return Err(format!("no format `{other}`")),
    };
    let extinction_ratio = decibels(given, "extinction_ratio_db", f64::INFINITY)?;
    let threshold = rule(&given.word("threshold")?)?;
    Ok((Link { receiver, format, extinction_ratio, threshold }, k))
}

fn sensitivity(given: &mut Inputs) -> Result<Outputs, String> {
    let (link, _) = link(given)?;
    let target = given.number("target_error_ratio")?;
    let (error_floor, dark) = (link.error_floor(), link.error_ratio_in_the_dark());
    let mut outputs =
        Outputs::from([("error_floor", error_floor.into()), ("error_ratio_in_the_dark", dark.into())]);
    match least_average_power_w(&link, target) {
        Ok(power_w) => {
            let levels = link.levels(power_w);
            let decision = decide(&levels, link.threshold);
            outputs.insert("average_w", power_w.into());
            outputs.insert("average_dbm", dbm_from_watt(power_w).into());
            outputs.insert("q_factors", q_factors(&levels).into());
            outputs.insert("thresholds_a", decision.thresholds_a.into());
            outputs
                .insert("currents_a", levels.iter().map(|level| level.current_a).collect::<Vec<_>>().into());
            outputs
                .insert("noises_a", levels.iter().map(|level| level.noise_rms_a).collect::<Vec<_>>().into());
            outputs.insert("outcome", "power".into());
        }
        Err(NoPower::Floor { .. }) => drop(outputs.insert("outcome", "floor".into())),
        Err(NoPower::AnyPower { .. }) => drop(outputs.insert("outcome", "any_power".into())),
        Err(NoPower::Beyond { .. }) => drop(outputs.insert("outcome", "beyond".into())),
    }
    Ok(outputs)
}

fn gain_of_least_power(given: &mut Inputs) -> Result<Outputs, String> {
    let (link, k) = link(given)?;
    let target = given.number("target_error_ratio")?;
    let at = |gain: f64| {
        let receiver = Receiver { gain, excess_noise_factor: excess_noise_factor(gain, k), ..link.receiver };
        Link { receiver, ..link }
    };
    Ok(match best_gain(at, target, 1e6) {
        BestGain::At { gain, power_w } => {
            [("outcome", "gain".into()), ("gain", gain.into()), ("average_w", power_w.into())].into()
        }
        BestGain::NoUpperEnd { power_w } => {
            [("outcome", "no_upper_end".into()), ("average_w", power_w.into())].into()
        }
        BestGain::None => [("outcome", "none".into())].into(),
    })
}

/// What intensity noise costs, by the full model with the rest of the noise all in the circuit.
///
/// The textbook's form has no shot noise. Here it cannot be switched off, so the circuit noise is made so large that shot noise
/// is one part in 10⁹ of it, which moves the penalty by less than that.
fn intensity_noise_penalty(given: &mut Inputs) -> Result<Outputs, String> {
    let (relative_noise, q) = (given.number("relative_noise")?, given.number("q_factor")?);
    let target = leastlight::statistics::normal::upper_tail(q);
    let noise_bandwidth_hz = 1.0;
    let receiver = Receiver {
        responsivity_a_per_w: 1.0,
        gain: 1.0,
        excess_noise_factor: 1.0,
        noise_bandwidth_hz,
        circuit_noise_a: 1.0,
        dark_current_bulk_a: 0.0,
        dark_current_surface_a: 0.0,
        background_power_w: 0.0,
        rin_per_hz: relative_noise * relative_noise / noise_bandwidth_hz,
    };
    let noisy = Link {
        receiver,
        format: Format::Nrz,
        extinction_ratio: f64::INFINITY,
        threshold: Threshold::QFactor,
    };
    let steady = Link { receiver: Receiver { rin_per_hz: 0.0, ..receiver }, ..noisy };
    let power_w = |link: &Link| least_average_power_w(link, target).map_err(|none| format!("{none:?}"));
    if let Err(NoPower::Floor { .. }) = least_average_power_w(&noisy, target) {
        return Ok([("outcome", "floor".into())].into());
    }
    let penalty_db = db_from_ratio(power_w(&noisy)? / power_w(&steady)?);
    Ok([("outcome", "power".into()), ("penalty_db", penalty_db.into())].into())
}

fn levels(given: &mut Inputs) -> Result<Vec<Level>, String> {
    let (currents, noises) = (given.numbers("currents_a")?, given.numbers("noises_a")?);
    let pairs = currents.into_iter().zip(noises);
    Ok(pairs.map(|(current_a, noise_rms_a)| Level { current_a, noise_rms_a }).collect())
}

fn decision(given: &mut Inputs) -> Result<Outputs, String> {
    let levels = levels(given)?;
    let decision = decide(&levels, rule(&given.word("threshold")?)?);
    Ok([
        ("error_ratio", decision.error_ratio.into()),
        ("thresholds_a", decision.thresholds_a.into()),
        ("q_factors", q_factors(&levels).into()),
    ]
    .into())
}

fn given_thresholds(given: &mut Inputs) -> Result<Outputs, String> {
    let (levels, thresholds_a) = (levels(given)?, given.numbers("thresholds_a")?);
    Ok([("error_ratio", error_ratio_at(&levels, &thresholds_a).into())].into())
}

/// Four levels two `half_step` apart, with noise 1: error ratio at the midpoints.
fn equal_noise_pam4(given: &mut Inputs) -> Result<Outputs, String> {
    let x = given.number("half_step")?;
    let levels = [0.0, 2.0, 4.0, 6.0].map(|n| Level { current_a: n * x, noise_rms_a: 1.0 });
    Ok([
        ("error_ratio", decide(&levels, Threshold::Midpoint).error_ratio.into()),
        ("error_ratio_q_form", decide(&levels, Threshold::QFactor).error_ratio.into()),
    ]
    .into())
}

//! Light, gain, noise and levels, one formula each.

use crate::support::cases::{Computation, Inputs, Outputs};
use leastlight::physics::avalanche::{bandwidth_hz, excess_noise_factor};
use leastlight::physics::decibel::{db_from_ratio, dbm_from_watt, ratio_from_db, watt_from_dbm};
use leastlight::physics::filter::{Filter, noise_bandwidth_ratio};
use leastlight::physics::levels::{extinction_penalty_ratio, modulation_amplitude_w, nrz_w, pam4_w};
use leastlight::physics::light::{photon_energy_j, quantum_efficiency, responsivity_a_per_w};
use leastlight::physics::noise::{intensity_noise_a2, shot_noise_a2, thermal_noise_a2};
use leastlight::physics::quantum_limit::{photons_in_a_one, photons_per_bit};
use leastlight::physics::spectrum::Spectrum;

pub const ALL: &[(&str, Computation)] = &[
    ("photon", photon),
    ("responsivity", responsivity),
    ("efficiency", efficiency),
    ("excess_noise", excess_noise),
    ("bandwidth", bandwidth),
    ("shot_noise", shot_noise),
    ("thermal_noise", thermal_noise),
    ("intensity_noise", intensity_noise),
    ("noise_bandwidth", noise_bandwidth),
    ("quantum_limit", quantum_limit),
    ("extinction", extinction),
    ("average_from_amplitude", average_from_amplitude),
    ("levels", levels),
    ("power_units", power_units),
    ("mean_of_a_parabola", mean_of_a_parabola),
];

fn photon(given: &mut Inputs) -> Result<Outputs, String> {
    let energy_j = photon_energy_j(given.number("wavelength_m")?);
    let per_second = given.number_or("power_w", 1e-9)? / energy_j;
    Ok([("energy_j", energy_j.into()), ("photons_per_s", per_second.into())].into())
}

fn responsivity(given: &mut Inputs) -> Result<Outputs, String> {
    let r = responsivity_a_per_w(given.number("quantum_efficiency")?, given.number("wavelength_m")?);
    let current_a = r * given.number_or("power_w", 1.0)?;
    let gain = given.number_or("current_out_a", current_a)? / current_a;
    Ok([("responsivity_a_per_w", r.into()), ("current_a", current_a.into()), ("gain", gain.into())].into())
}

fn efficiency(given: &mut Inputs) -> Result<Outputs, String> {
    let efficiency = quantum_efficiency(given.number("responsivity_a_per_w")?, given.number("wavelength_m")?);
    Ok([("quantum_efficiency", efficiency.into())].into())
}

fn excess_noise(given: &mut Inputs) -> Result<Outputs, String> {
    let factor = excess_noise_factor(given.number("gain")?, given.number("ionisation_ratio")?);
    Ok([("excess_noise_factor", factor.into())].into())
}

fn bandwidth(given: &mut Inputs) -> Result<Outputs, String> {
    let gain = given.number("gain")?;
    let at_unit_gain_hz = given.number("bandwidth_at_unit_gain_hz")?;
    let bandwidth = bandwidth_hz(gain, at_unit_gain_hz, given.number("gain_bandwidth_hz")?);
    Ok([("bandwidth_hz", bandwidth.into())].into())
}

fn shot_noise(given: &mut Inputs) -> Result<Outputs, String> {
    let noise_a2 = shot_noise_a2(given.number("current_a")?, given.number("bandwidth_hz")?);
    Ok([("noise_a", noise_a2.sqrt().into())].into())
}

fn thermal_noise(given: &mut Inputs) -> Result<Outputs, String> {
    let (resistance_ohm, temperature_k) = (given.number("resistance_ohm")?, given.number("temperature_k")?);
    let (factor, bandwidth_hz) = (given.number("noise_factor")?, given.number("bandwidth_hz")?);
    let noise_a2 = thermal_noise_a2(resistance_ohm, temperature_k, factor, bandwidth_hz);
    Ok([("noise_a2", noise_a2.into()), ("noise_a", noise_a2.sqrt().into())].into())
}

/// The intensity noise that equals the shot noise of a current.
fn intensity_noise(given: &mut Inputs) -> Result<Outputs, String> {
    let current_a = given.number("current_a")?;
    let equal = shot_noise_a2(current_a, 1.0) / intensity_noise_a2(current_a, 1.0, 1.0);
    Ok([("rin_db_per_hz", db_from_ratio(equal).into())].into())
}

fn noise_bandwidth(given: &mut Inputs) -> Result<Outputs, String> {
    let filter = match given.word("filter")?.as_str() {
        "rectangular" => Filter::Rectangular,
        "first_order" => Filter::FirstOrder,
        "butterworth_2" => Filter::Butterworth2,
        "bessel_4" => Filter::Bessel4,
        other => return Err(format!("no filter `{other}`")),
    };
    Ok([("noise_bandwidth_ratio", noise_bandwidth_ratio(filter).into())].into())
}

fn quantum_limit(given: &mut Inputs) -> Result<Outputs, String> {
    let error_ratio = given.number("error_ratio")?;
    let photons = photons_per_bit(error_ratio);
    let power_w = photons
        * given.number_or("bit_rate_per_s", 1.0)?
        * photon_energy_j(given.number_or("wavelength_m", 1.0)?);
    Ok([
        ("photons_in_a_one", photons_in_a_one(error_ratio).into()),
        ("photons_per_bit", photons.into()),
        ("average_dbm", dbm_from_watt(power_w).into()),
    ]
    .into())
}

fn extinction(given: &mut Inputs) -> Result<Outputs, String> {
    let ratio = ratio_from_db(given.number("extinction_ratio_db")?);
    Ok([
        ("penalty_db", db_from_ratio(extinction_penalty_ratio(ratio)).into()),
        ("amplitude_by_twice_average", modulation_amplitude_w(0.5, ratio).into()),
    ]
    .into())
}

fn average_from_amplitude(given: &mut Inputs) -> Result<Outputs, String> {
    let ratio = ratio_from_db(given.number("extinction_ratio_db")?);
    let average_w = watt_from_dbm(given.number("amplitude_dbm")?) / modulation_amplitude_w(1.0, ratio);
    Ok([("average_dbm", dbm_from_watt(average_w).into())].into())
}

fn levels(given: &mut Inputs) -> Result<Outputs, String> {
    let (average_w, ratio) = (given.number("average_w")?, given.number("extinction_ratio")?);
    let (two, four) = (nrz_w(average_w, ratio), pam4_w(average_w, ratio));
    Ok([("nrz_w", two.to_vec().into()), ("pam4_w", four.to_vec().into())].into())
}

fn power_units(given: &mut Inputs) -> Result<Outputs, String> {
    let power_w = given.number("power_w")?;
    let level_dbm = dbm_from_watt(power_w);
    Ok([("level_dbm", level_dbm.into()), ("back_w", watt_from_dbm(level_dbm).into())].into())
}

/// The mean of a parabola over a Gaussian line, and over its value at the centre.
fn mean_of_a_parabola(given: &mut Inputs) -> Result<Outputs, String> {
    let centre_nm = given.number("centre_nm")?;
    let fwhm_nm = given.number("sigma_nm")? * (8.0 * std::f64::consts::LN_2).sqrt();
    let (level, slope) = (given.number("level")?, given.number("slope_per_nm")?);
    let curvature = given.number("curvature_per_nm2")?;
    let parabola = |nm: f64| level + slope * (nm - centre_nm) + curvature * (nm - centre_nm).powi(2);
    let line = Spectrum::Gaussian { centre_nm, fwhm_nm };
    // Once whole, once cut at two places: both rules have to find it.
    let mean = |breaks: &[f64]| -> f64 {
        let shares = line.shares(breaks, 1000.0, 2000.0);
        shares.iter().map(|part| part.share * parabola(part.wavelength_nm)).sum()
    };
    let (whole, pieces) = (mean(&[]), mean(&[centre_nm - 13.0, centre_nm + 40.0]));
    Ok([("mean", vec![whole, pieces].into()), ("ratio", (whole / level).into())].into())
}

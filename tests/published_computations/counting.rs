//! Counts of electrons: the gain's distribution and transform, tails, exact sensitivities.

use crate::support::cases::{Computation, Inputs, Outputs};
use leastlight::numeric::complex::Complex;
use leastlight::physics::avalanche::excess_noise_factor;
use leastlight::physics::constants::ELEMENTARY_CHARGE_C;
use leastlight::physics::counting::Count;
use leastlight::physics::decibel::db_from_ratio;
use leastlight::physics::decision::Threshold;
use leastlight::physics::exact_link::ExactLink;
use leastlight::physics::gain_distribution::ln_chance;
use leastlight::physics::gain_transform::Gain;
use leastlight::physics::receiver::Receiver;
use leastlight::physics::sensitivity::{Format, Link, NoPower, least_average_power_w};
use leastlight::physics::webb_mcintyre_conradi;

pub const ALL: &[(&str, Computation)] = &[
    ("gain_distribution", gain_distribution),
    ("gain_moments", gain_moments),
    ("gain_transform", gain_transform),
    ("gain_transform_end", gain_transform_end),
    ("counted_error_ratio", error_ratio),
    ("counted_tails", tails),
    ("whole_counts", whole_counts),
    ("counted_sensitivity", sensitivity),
    ("webb_mcintyre_conradi", webb_mcintyre_conradi),
];

fn avalanche(given: &mut Inputs) -> Result<(f64, f64), String> {
    Ok((given.number("gain")?, given.number("ionisation_ratio")?))
}

fn gain_distribution(given: &mut Inputs) -> Result<Outputs, String> {
    let (gain, k) = avalanche(given)?;
    let pairs = given.numbers("primaries")?.into_iter().zip(given.numbers("electrons")?);
    let chances: Vec<f64> = pairs.map(|(n, m)| libm::exp(ln_chance(n, m, gain, k))).collect();
    Ok([("chances", chances.into())].into())
}

fn gain_moments(given: &mut Inputs) -> Result<Outputs, String> {
    let (mean, k) = avalanche(given)?;
    let n = given.number("primaries")?;
    let (second, third) = Gain::new(mean, k).raw_moments();
    let variance = second - mean * mean;
    let third_cumulant = third - 3.0 * mean * variance - mean * mean * mean;
    Ok([
        ("mean", (n * mean).into()),
        ("variance", (n * variance).into()),
        ("third_cumulant", (n * third_cumulant).into()),
    ]
    .into())
}

fn gain_transform(given: &mut Inputs) -> Result<Outputs, String> {
    let (mean, k) = avalanche(given)?;
    let gain = Gain::new(mean, k);
    let start = gain.at(Complex::from(0.0));
    let place = gain.follow(&start, Complex::from(given.number("s")?)).ok_or("not found")?;
    Ok([("g", place.g.re.into())].into())
}

fn gain_transform_end(given: &mut Inputs) -> Result<Outputs, String> {
    let (mean, k) = avalanche(given)?;
    let gain = Gain::new(mean, k);
    let end = gain.at_real(gain.highest_v());
    Ok([("g", end.g.into()), ("s", end.s.into())].into())
}

fn error_ratio(given: &mut Inputs) -> Result<Outputs, String> {
    let (mean, k) = avalanche(given)?;
    let (noise, threshold) = (given.number("noise")?, given.number("threshold")?);
    let chances = |primaries: f64| {
        Count { primaries, gain: Gain::new(mean, k), unmultiplied: 0.0, noise, light_noise: 0.0 }
            .chances(threshold)
    };
    let (above, below) = (chances(given.number("zero")?).above, chances(given.number("one")?).below);
    Ok([
        ("zero_above", above.into()),
        ("one_below", below.into()),
        ("error_ratio", (0.5 * (above + below)).into()),
    ]
    .into())
}

fn tails(given: &mut Inputs) -> Result<Outputs, String> {
    let (mean, k) = avalanche(given)?;
    let (primaries, noise) = (given.number("primaries")?, given.number("noise")?);
    let count = Count { primaries, gain: Gain::new(mean, k), unmultiplied: 0.0, noise, light_noise: 0.0 };
    Ok([
        ("chance_below", count.chances(given.number("below")?).below.into()),
        ("chance_above", count.chances(given.number("above")?).above.into()),
    ]
    .into())
}

fn whole_counts(given: &mut Inputs) -> Result<Outputs, String> {
    let (mean, k) = avalanche(given)?;
    let primaries = given.number("primaries")?;
    let count =
        Count { primaries, gain: Gain::new(mean, k), unmultiplied: 0.0, noise: 0.0, light_noise: 0.0 };
    let electrons = given.numbers("electrons")?;
    let chances: Vec<f64> = electrons.iter().map(|m| libm::exp(count.chances(*m).ln_density)).collect();
    let up_to: Vec<f64> = electrons.iter().map(|m| count.chances(m + 1.0).below).collect();
    Ok([("chances", chances.into()), ("up_to", up_to.into())].into())
}

/// A link in which one ampere is one electron, with so many primary electrons in the zero that need no light.
fn sensitivity(given: &mut Inputs) -> Result<Outputs, String> {
    let (gain, k) = avalanche(given)?;
    let zero = given.number("zero")?;
    let receiver = Receiver {
        responsivity_a_per_w: 1e3,
        gain,
        excess_noise_factor: excess_noise_factor(gain, k),
        noise_bandwidth_hz: 0.5 / ELEMENTARY_CHARGE_C,
        circuit_noise_a: given.number("noise")?,
        dark_current_bulk_a: zero,
        dark_current_surface_a: 0.0,
        background_power_w: 0.0,
        rin_per_hz: 0.0,
    };
    let target = given.number("target_error_ratio")?;
    let (format, extinction_ratio, threshold) = (Format::Nrz, f64::INFINITY, Threshold::Optimum);
    let link = Link { receiver, format, extinction_ratio, threshold };
    let one = |power_w: Result<f64, NoPower>| {
        power_w.map(|power_w| 2e3 * power_w + zero).map_err(|none| format!("{none:?}"))
    };
    let exact = ExactLink { link, ionisation_ratio: k };
    let exact_w = exact.least_average_power_w(target);
    let thresholds = exact_w.map(|power_w| exact.decide(&exact.counts(power_w)).thresholds);
    let (exact_one, gaussian_one) = (one(exact_w)?, one(least_average_power_w(&link, target))?);
    let q_one = one(least_average_power_w(&Link { threshold: Threshold::QFactor, ..link }, target))?;
    let difference_db = db_from_ratio((exact_one + zero) / (gaussian_one + zero));
    Ok([
        ("one", exact_one.into()),
        ("gaussian_one", gaussian_one.into()),
        ("q_one", q_one.into()),
        ("threshold", thresholds.map_err(|none| format!("{none:?}"))?.into()),
        ("exact_less_gaussian_db", difference_db.into()),
    ]
    .into())
}

fn webb_mcintyre_conradi(given: &mut Inputs) -> Result<Outputs, String> {
    let (gain, k) = avalanche(given)?;
    let primaries = given.number("primaries")?;
    let density = |m: f64| webb_mcintyre_conradi::density(primaries, gain, excess_noise_factor(gain, k), m);
    let densities: Vec<f64> = given.numbers("electrons")?.into_iter().map(density).collect();
    Ok([("densities", densities.into())].into())
}

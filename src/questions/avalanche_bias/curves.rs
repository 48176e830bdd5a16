//! Gain against bias; sensitivity and its noise against gain; where the avalanche stops paying.

use super::Answer;
use super::best::Scaled;
use super::setup::Setup;
use crate::bench::source::Format;
use crate::physics::decibel::dbm_from_watt;
use crate::physics::receiver::Noise;
use crate::quantity::write::brief;
use crate::questions::curve::{Axis, Curve, Line, Mark, Scale, evenly};

/// Places along the gain.
const GAINS: usize = 61;

/// Places along the symbol rate; each is a search for the best gain, and with four levels a slow one.
fn rates(format: Format) -> usize {
    match format {
        Format::Nrz => 31,
        Format::Pam4 => 9,
    }
}

/// How far the symbol rate is followed to both sides, as a factor.
const RATE_SPAN: f64 = 30.0;

/// The curves of an answer.
pub fn curves(setup: &Setup, answer: &Answer) -> Vec<Curve> {
    let (sensitivity, shares) = against_gain(setup, answer);
    let rate = against_symbol_rate(setup, answer);
    [gain_against_bias(setup, answer), sensitivity, shares, rate].into_iter().flatten().collect()
}

/// Gains from `low` to `high`, by equal factors, both included.
fn gains(low: f64, high: f64) -> impl Iterator<Item = f64> {
    evenly(libm::log(low), libm::log(high), GAINS).map(move |ln| libm::exp(ln).clamp(low, high))
}

/// The highest gain that is worth drawing.
fn most_gain(answer: &Answer) -> f64 {
    let set = answer.set.as_ref().and_then(|set| set.gain).unwrap_or(1.0).min(1e4);
    (5.0 * answer.best_gain.unwrap_or(1.0)).max(1.2 * set).max(30.0)
}

fn gain_against_bias(setup: &Setup, answer: &Answer) -> Option<Curve> {
    let light_w = answer.light_w?;
    let (low, high) = setup.gains();
    let high = high.min(most_gain(answer));
    let line = |name: String, temperature_c: Option<f64>, light_w: f64| {
        let (biased, currents) = (setup.biased(temperature_c)?, setup.currents(light_w));
        let place = |gain| Some((biased.bias_v(gain, &currents)?, gain));
        let (x, y) = gains(low, high).filter_map(place).unzip();
        Some(Line { name, x, y })
    };
    let at = |temperature_c: f64| format!("at {} °C", brief(temperature_c, 4));
    let now = setup
        .temperature_c
        .map_or_else(|| "with this light".to_owned(), |now| format!("{}, with this light", at(now)));
    let mut lines: Vec<Line> = line(now, setup.temperature_c, light_w).into_iter().collect();
    if setup.series_resistance_ohm > 0.0 {
        lines.extend(line("without light".to_owned(), setup.temperature_c, 0.0));
    }
    for end in [setup.table_c.first(), setup.table_c.last()].into_iter().flatten() {
        lines.extend(line(at(*end), Some(*end), light_w));
    }
    let mut marks = Vec::new();
    if let Some((x, y)) = answer.bias_v.zip(answer.best_gain) {
        marks.push(Mark::Point { name: "best gain".to_owned(), x, y });
    }
    if let Some(set) = &answer.set
        && let Some(y) = set.gain.filter(|gain| *gain <= high)
    {
        marks.push(Mark::Point { name: "as set now".to_owned(), x: set.bias_v, y });
    }
    if let Some(breakdown_v) = answer.breakdown_v {
        marks.push(Mark::Level { name: "breakdown".to_owned(), axis: "x", at: breakdown_v });
    }
    (!lines.is_empty()).then_some(Curve {
        name: "gain_against_bias",
        title: "Gain against bias",
        x: Axis { label: "Bias", unit: "V", scale: Scale::Linear },
        y: Axis { label: "Gain", unit: "", scale: Scale::Log },
        lines,
        marks,
    })
}

/// The sensitivity at each gain, and of which noise the highest level there is made.
fn against_gain(setup: &Setup, answer: &Answer) -> (Option<Curve>, Option<Curve>) {
    let receiver = Scaled { setup, rate: 1.0 };
    let places: Vec<(f64, f64, Noise)> = gains(1.0, setup.receiver.reach(most_gain(answer)))
        .filter_map(|gain| {
            let power_w = receiver.power_w(gain)?;
            let link = receiver.link_at(gain);
            let highest_w = link.levels_w(power_w).last().copied()?;
            Some((gain, dbm_from_watt(power_w), link.receiver.noise(highest_w)))
        })
        .collect();
    if places.is_empty() {
        return (None, None);
    }
    let x: Vec<f64> = places.iter().map(|(gain, ..)| *gain).collect();
    let gain_axis = || Axis { label: "Gain", unit: "", scale: Scale::Log };
    let mut marks = Vec::new();
    if let Some((x, y)) = answer.best_gain.zip(answer.average_power_dbm) {
        marks.push(Mark::Point { name: "best gain".to_owned(), x, y });
    }
    if let Some((x, y)) = answer.set.as_ref().and_then(|set| set.gain.zip(set.average_power_dbm)) {
        marks.push(Mark::Point { name: "as set now".to_owned(), x, y });
    }
    let level = |at| Mark::Level { name: "gain–bandwidth limit".to_owned(), axis: "x", at };
    let slow = receiver.gain_of_equal_speed().filter(|gain| *gain <= most_gain(answer)).map(level);
    marks.extend(slow.clone());
    let sensitivity = Curve {
        name: "sensitivity_against_gain",
        title: "Sensitivity against gain",
        x: gain_axis(),
        y: Axis { label: "Average power needed", unit: "dBm", scale: Scale::Linear },
        lines: vec![Line {
            name: "sensitivity".to_owned(),
            x: x.clone(),
            y: places.iter().map(|(_, dbm, _)| *dbm).collect(),
        }],
        marks,
    };
    let share = |name: &str, of: fn(&Noise) -> f64| {
        let y: Vec<f64> = places.iter().map(|(.., noise)| 100.0 * of(noise) / noise.total_a2()).collect();
        let seen = y.iter().all(|share| share.is_finite()) && y.iter().any(|share| *share >= 0.1);
        seen.then(|| Line { name: name.to_owned(), x: x.clone(), y })
    };
    let lines: Vec<Line> = [
        share("shot noise, multiplied", |noise| {
            noise.signal_shot + noise.background_shot + noise.bulk_dark_shot
        }),
        share("circuit noise", |noise| noise.circuit),
        share("intensity noise of the source", |noise| noise.source_intensity),
        share("surface dark current", |noise| noise.surface_dark_shot),
    ]
    .into_iter()
    .flatten()
    .collect();
    let best = answer.best_gain.map(|at| Mark::Level { name: "best gain".to_owned(), axis: "x", at });
    let shares = Curve {
        name: "noise_shares_against_gain",
        title: "Of which noise the highest level is made",
        x: gain_axis(),
        y: Axis { label: "Share of the mean square", unit: "%", scale: Scale::Linear },
        lines,
        marks: best.into_iter().collect(),
    };
    (Some(sensitivity), Some(shares).filter(|curve| !curve.lines.is_empty()))
}

/// The receiver built for other symbol rates: with its best gain, and without gain.
fn against_symbol_rate(setup: &Setup, answer: &Answer) -> Option<Curve> {
    let receiver = &setup.receiver;
    let own_bd = receiver.bit_rate_hz? / receiver.format.bits_per_symbol();
    // From there on the detector is slower than the receiver even at gain 1.
    let fastest =
        receiver.detector_bandwidth_at(1.0).zip(receiver.bandwidth_hz).map(|(unit, own)| unit / own);
    let (low, high) = (1.0 / RATE_SPAN, fastest.unwrap_or(RATE_SPAN).min(RATE_SPAN));
    if high <= low {
        return None;
    }
    let places: Vec<(f64, f64, f64)> = evenly(libm::log(low), libm::log(high), rates(receiver.format))
        .filter_map(|ln_rate| {
            let scaled = Scaled { setup, rate: libm::exp(ln_rate).clamp(low, high) };
            let (best, unit_w) = (scaled.best().ok()?, scaled.power_w(1.0)?);
            Some((own_bd * scaled.rate, dbm_from_watt(best.power_w), dbm_from_watt(unit_w)))
        })
        .collect();
    let line = |name: &str, y: fn(&(f64, f64, f64)) -> f64| Line {
        name: name.to_owned(),
        x: places.iter().map(|(rate, ..)| *rate).collect(),
        y: places.iter().map(y).collect(),
    };
    let mut marks = Vec::new();
    if let Some(y) = answer.average_power_dbm.filter(|_| high >= 1.0) {
        marks.push(Mark::Point { name: "this receiver".to_owned(), x: own_bd, y });
    }
    if let Some(fastest) = fastest.filter(|fastest| *fastest <= RATE_SPAN) {
        let name = "detector too slow even at gain 1".to_owned();
        marks.push(Mark::Level { name, axis: "x", at: own_bd * fastest });
    }
    (!places.is_empty()).then(|| Curve {
        name: "sensitivity_against_symbol_rate",
        title: "Where the avalanche stops paying",
        x: Axis { label: "Symbol rate", unit: "Bd", scale: Scale::Log },
        y: Axis { label: "Average power needed", unit: "dBm", scale: Scale::Linear },
        lines: vec![line("at the best gain", |place| place.1), line("at gain 1, as a PIN", |place| place.2)],
        marks,
    })
}

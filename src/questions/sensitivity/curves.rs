//! Error ratio against power, and sensitivity against gain.

use super::Answer;
use super::distributions::distributions;
use super::setup::Setup;
use crate::physics::decibel::{dbm_from_watt, watt_from_dbm};
use crate::physics::decision::Threshold;
use crate::physics::sensitivity::{Link, least_average_power_w};
use crate::questions::curve::{Axis, Curve, Line, Mark, Scale, evenly};

/// The lowest error ratio that is drawn: nobody waits for fewer.
const LOWEST_RATIO: f64 = 1e-18;

/// Points on a line; enough that the eye sees no corners.
const POINTS: usize = 121;

/// Fewer do for the smooth valley of the gain, where each point is a search of its own.
const GAIN_POINTS: usize = 61;

/// And where every electron is counted.
const COUNTED_POINTS: usize = 41;

/// And where every point is a search that counts.
const COUNTED_GAIN_POINTS: usize = 9;

/// The curves of an answer.
pub fn curves(setup: &Setup, answer: &Answer) -> Vec<Curve> {
    let mut curves = vec![error_ratio_against_power(setup, answer)];
    if setup.exact {
        curves.extend(distributions(setup, answer));
    }
    curves.extend(sensitivity_against_gain(setup, answer));
    curves
}

fn error_ratio_against_power(setup: &Setup, answer: &Answer) -> Curve {
    let link = setup.link();
    let textbook = Link { threshold: Threshold::QFactor, ..link };
    let (low, high) = power_range_dbm(setup, &link, answer);
    let line = |name: &str, points: usize, ratio_at: &dyn Fn(f64) -> f64| {
        let points = evenly(low, high, points).map(|dbm| (dbm, ratio_at(watt_from_dbm(dbm))));
        let (x, y) = points.filter(|(_, ratio)| *ratio >= 0.999 * LOWEST_RATIO).unzip();
        Line { name: name.to_owned(), x, y }
    };
    let gaussian = |average_w: f64| link.error_ratio(average_w);
    let textbook = |average_w: f64| textbook.error_ratio(average_w);
    let lines = match (setup.exact, link.threshold) {
        (true, _) => vec![
            line("counted exactly", COUNTED_POINTS, &|average_w| setup.error_ratio(&link, average_w)),
            line("by the Gaussian model", POINTS, &gaussian),
        ],
        (false, Threshold::Optimum) => vec![
            line("at the best threshold", POINTS, &gaussian),
            line("by the textbook Q", POINTS, &textbook),
        ],
        (false, Threshold::Midpoint) => vec![
            line("at the middle threshold", POINTS, &gaussian),
            line("by the textbook Q", POINTS, &textbook),
        ],
        (false, Threshold::QFactor) => vec![line("by the textbook Q", POINTS, &textbook)],
    };
    let mut marks = vec![Mark::Level { name: "target".to_owned(), axis: "y", at: setup.target }];
    if let Some(x) = answer.average_power_dbm {
        marks.push(Mark::Point { name: "sensitivity".to_owned(), x, y: setup.target });
    }
    if let (Some(x), Some(y)) = (answer.received_power_dbm, answer.error_ratio)
        && (low..=high).contains(&x)
    {
        let name = if y < LOWEST_RATIO { "this source: below 10⁻¹⁸" } else { "this source" };
        marks.push(Mark::Point { name: name.to_owned(), x, y: y.max(LOWEST_RATIO) });
    }
    Curve {
        name: "error_ratio_against_power",
        title: "Error ratio against power",
        x: Axis { label: "Average power at the detector", unit: "dBm", scale: Scale::Linear },
        y: Axis { label: "Error ratio", unit: "", scale: Scale::Log },
        lines,
        marks,
    }
}

/// From where errors abound to where they are too few to draw, and to the source's own power if it is near.
fn power_range_dbm(setup: &Setup, link: &Link, answer: &Answer) -> (f64, f64) {
    let dbm_at = |ratio: f64| least_average_power_w(link, ratio).ok().map(dbm_from_watt);
    let middle = answer.average_power_dbm.or_else(|| dbm_at(0.1)).or(setup.received_dbm).unwrap_or(-30.0);
    let high = dbm_at(LOWEST_RATIO).unwrap_or(middle + 15.0).max(middle + 1.0);
    let low = dbm_at(0.2).unwrap_or(middle - 10.0).min(middle - 1.0);
    let near = answer.received_power_dbm.filter(|dbm| (low - 10.0..high + 10.0).contains(dbm));
    (near.map_or(low, |dbm| low.min(dbm - 0.5)), near.map_or(high, |dbm| high.max(dbm + 0.5)))
}

fn sensitivity_against_gain(setup: &Setup, answer: &Answer) -> Option<Curve> {
    if !setup.is_avalanche() {
        return None;
    }
    let best = answer.best_gain.as_ref().and_then(|best| best.gain);
    let most = setup.reach((5.0 * setup.gain.max(best.unwrap_or(setup.gain))).max(30.0));
    let line = |name: &str, points: usize, power_at: &dyn Fn(&Link) -> Option<f64>| {
        let places = evenly(0.0, libm::log(most), points).map(|ln_gain| libm::exp(ln_gain).clamp(1.0, most));
        let dbm_at = |gain: f64| power_at(&setup.link_at(gain)).map(|power_w| (gain, dbm_from_watt(power_w)));
        let (x, y) = places.filter_map(dbm_at).unzip();
        Line { name: name.to_owned(), x, y }
    };
    let gaussian = |link: &Link| least_average_power_w(link, setup.target).ok();
    let counted = |link: &Link| setup.least_power_w(link, setup.target).ok();
    let mut lines = match setup.exact {
        true => vec![
            line("counted exactly", COUNTED_GAIN_POINTS, &counted),
            line("by the Gaussian model", GAIN_POINTS, &gaussian),
        ],
        false => vec![line("sensitivity", GAIN_POINTS, &gaussian)],
    };
    lines.retain(|line| !line.x.is_empty());
    if lines.is_empty() {
        return None;
    }
    let mut marks = Vec::new();
    if let Some(y) = answer.average_power_dbm {
        marks.push(Mark::Point { name: "this gain".to_owned(), x: setup.gain, y });
    }
    if let Some((x, y)) = best.zip(answer.best_gain.as_ref().map(|best| best.average_power_dbm)) {
        marks.push(Mark::Point { name: "best gain".to_owned(), x, y });
    }
    Some(Curve {
        name: "sensitivity_against_gain",
        title: "Sensitivity against gain",
        x: Axis { label: "Gain", unit: "", scale: Scale::Log },
        y: Axis { label: "Average power needed", unit: "dBm", scale: Scale::Linear },
        lines,
        marks,
    })
}

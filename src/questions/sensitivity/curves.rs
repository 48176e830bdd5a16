//! Error ratio against power, and sensitivity against gain.

use super::Answer;
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

/// The curves of an answer.
pub fn curves(setup: &Setup, answer: &Answer) -> Vec<Curve> {
    let mut curves = vec![error_ratio_against_power(setup, answer)];
    curves.extend(sensitivity_against_gain(setup, answer));
    curves
}

fn error_ratio_against_power(setup: &Setup, answer: &Answer) -> Curve {
    let link = setup.link();
    let textbook = Link { threshold: Threshold::QFactor, ..link };
    let (low, high) = power_range_dbm(setup, &link, answer);
    let line = |name: &str, link: &Link| {
        let points = evenly(low, high, POINTS).map(|dbm| (dbm, link.error_ratio(watt_from_dbm(dbm))));
        let (x, y) = points.filter(|(_, ratio)| *ratio >= 0.999 * LOWEST_RATIO).unzip();
        Line { name: name.to_owned(), x, y }
    };
    let own = match link.threshold {
        Threshold::Optimum => "at the best threshold",
        Threshold::Midpoint => "at the middle threshold",
        Threshold::QFactor => "by the textbook Q",
    };
    let mut lines = vec![line(own, &link)];
    if link.threshold != Threshold::QFactor {
        lines.push(line("by the textbook Q", &textbook));
    }
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
    let dbm_at = |gain: f64| {
        least_average_power_w(&setup.link_at(gain), setup.target)
            .ok()
            .map(|power_w| (gain, dbm_from_watt(power_w)))
    };
    let places = evenly(0.0, libm::log(most), GAIN_POINTS).map(|ln_gain| libm::exp(ln_gain).clamp(1.0, most));
    let (x, y): (Vec<f64>, Vec<f64>) = places.filter_map(dbm_at).unzip();
    if x.is_empty() {
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
        lines: vec![Line { name: "sensitivity".to_owned(), x, y }],
        marks,
    })
}

//! Each table with its fit, and what is left between the two.

use super::Answer;
use super::fitted::Fitted;
use super::gain::Photocurrents;
use crate::physics::avalanche::{bandwidth_hz, excess_noise_factor};
use crate::questions::curve::{Axis, Curve, Line, Mark, Scale, evenly};

/// Points on a line; enough that the eye sees no corners.
const POINTS: usize = 121;

/// Names and axes of the two drawings of a table.
struct Look {
    names: [&'static str; 2],
    titles: [&'static str; 2],
    x: Axis,
    y: Axis,
}

/// Hz in a GHz.
const GIGAHERTZ: f64 = 1e9;

/// The curves of an answer.
pub fn curves(answer: &Answer, currents: Option<&Photocurrents>) -> Vec<Curve> {
    let both = |fit: &Fitted| {
        let look = look(fit.table);
        // Currents are shown as gains, bandwidths in GHz.
        let unit = match fit.table {
            "iv" => fit.raw.get(3).copied().unwrap_or(1.0),
            "bandwidth" => GIGAHERTZ,
            _ => 1.0,
        };
        let line = Line { name: "fitted".to_owned(), ..line(fit, currents) };
        let (x, y) = fit.points.iter().map(|point| (point.x, point.measured / unit)).unzip();
        let measured = Mark::Dots { name: "measured".to_owned(), x, y };
        let curve = |which: usize, y, lines, marks| Curve {
            name: look.names[which],
            title: look.titles[which],
            x: look.x.clone(),
            y,
            lines,
            marks,
        };
        [
            curve(0, look.y.clone(), vec![line], vec![measured]),
            curve(1, residual_axis(fit), vec![], residuals(fit)),
        ]
    };
    answer.fits.iter().flat_map(both).collect()
}

fn line(fit: &Fitted, currents: Option<&Photocurrents>) -> Line {
    let (first, last) = fit.points.first().zip(fit.points.last()).map_or((1.0, 1.0), |(a, b)| (a.x, b.x));
    let by_gain = || evenly(0.0, libm::log(last), POINTS).map(|ln| libm::exp(ln).max(1.0));
    let points: Vec<(f64, f64)> = match (fit.table, fit.raw.as_slice(), currents) {
        ("iv", [breakdown_v, exponent, ohm, unity_a], Some(currents)) => {
            let at = |volt| Some((volt, currents.gain_at([*breakdown_v, *exponent, *ohm, *unity_a], volt)?));
            evenly(first, last, POINTS).filter_map(at).collect()
        }
        ("noise", [k], _) => by_gain().map(|gain| (gain, excess_noise_factor(gain, *k))).collect(),
        ("bandwidth", [flat, product], _) => {
            by_gain().map(|gain| (gain, bandwidth_hz(gain, *flat, *product) / GIGAHERTZ)).collect()
        }
        // A straight line needs its ends only.
        _ => fit
            .points
            .first()
            .into_iter()
            .chain(fit.points.last())
            .map(|point| (point.x, point.fitted))
            .collect(),
    };
    let (x, y) = points.into_iter().unzip();
    Line { name: String::new(), x, y }
}

fn residuals(fit: &Fitted) -> Vec<Mark> {
    let scale = if is_relative(fit) { 100.0 } else { 1.0 };
    let (x, y) = fit.points.iter().map(|point| (point.x, scale * point.residual)).unzip();
    let zero = Mark::Level { name: "fitted".to_owned(), axis: "y", at: 0.0 };
    vec![zero, Mark::Dots { name: "measured less fitted".to_owned(), x, y }]
}

fn is_relative(fit: &Fitted) -> bool {
    !fit.uncertainties_given && fit.table != "breakdown"
}

fn residual_axis(fit: &Fitted) -> Axis {
    let (label, unit) = match (fit.uncertainties_given, is_relative(fit)) {
        (true, _) => ("Measured less fitted, over its uncertainty", ""),
        (_, true) => ("Measured less fitted", "%"),
        _ => ("Measured less fitted", "V"),
    };
    Axis { label, unit, scale: Scale::Linear }
}

fn look(table: &str) -> Look {
    let axis = |label, unit, scale| Axis { label, unit, scale };
    match table {
        "iv" => Look {
            names: ["gain_against_voltage", "gain_residuals"],
            titles: ["Gain against voltage", "What the gain’s fit leaves"],
            x: axis("Reverse voltage", "V", Scale::Linear),
            y: axis("Gain", "", Scale::Log),
        },
        "noise" => Look {
            names: ["noise_against_gain", "noise_residuals"],
            titles: ["Excess noise against gain", "What the noise’s fit leaves"],
            x: axis("Gain", "", Scale::Log),
            y: axis("Excess noise factor", "", Scale::Log),
        },
        "bandwidth" => Look {
            names: ["bandwidth_against_gain", "bandwidth_residuals"],
            titles: ["Bandwidth against gain", "What the bandwidth’s fit leaves"],
            x: axis("Gain", "", Scale::Log),
            y: axis("Bandwidth", "GHz", Scale::Log),
        },
        _ => Look {
            names: ["breakdown_against_temperature", "breakdown_residuals"],
            titles: ["Breakdown voltage against temperature", "What the line leaves"],
            x: axis("Temperature", "°C", Scale::Linear),
            y: axis("Breakdown voltage", "V", Scale::Linear),
        },
    }
}

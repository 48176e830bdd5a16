//! How the counts of the levels are distributed about the thresholds, where electrons are counted.

use super::Answer;
use super::setup::Setup;
use crate::physics::counting::Count;
use crate::physics::webb_mcintyre_conradi;
use crate::questions::curve::{Axis, Curve, Line, Mark, Scale, evenly};

/// Points on a line.
const POINTS: usize = 73;

/// How far below the target densities are drawn, relative to the highest: errors are made there.
const BELOW_TARGET: f64 = 1e-2;

/// Noise in electrons below which densities rise and fall with every electron; then the chances of whole counts are drawn.
const ELECTRONS_SHOW: f64 = 0.5;

/// Each level's density at the sensitivity, with the thresholds; nothing where there is no sensitivity.
pub fn distributions(setup: &Setup, answer: &Answer) -> Option<Curve> {
    let link = setup.link();
    let counted = setup.counted(link);
    let counts = counted.counts(answer.average_power_w?);
    let signal = |electrons: f64| electrons - counts.dark;
    let names: &[&str] = match counts.levels.len() {
        2 => &["zero", "one"],
        _ => &["lowest", "second", "third", "highest"],
    };
    let (first, last) = (counts.levels.first()?, counts.levels.last()?);
    let reach = 4.0 + (-2.0 * libm::log(setup.target)).sqrt();
    let (low, high) =
        (first.mean() - reach * first.variance().sqrt() - 1.0, last.mean() + reach * last.variance().sqrt());
    let places: Vec<f64> = evenly(low, high, POINTS).collect();
    let exact = |(name, count): (&&str, &Count)| line(name, &places, |place| density(count, place), signal);
    let mut lines: Vec<Line> = names.iter().zip(&counts.levels).map(exact).collect();
    if setup.is_avalanche() && counts.levels.len() == 2 {
        let factor = link.receiver.excess_noise_factor;
        let approximations = names.iter().zip(&counts.levels).filter_map(|(name, count)| {
            let of = |place: f64| smoothed(count, factor, place);
            let name = format!("{name}, approximation (Webb, McIntyre, Conradi)");
            resolved(count, factor).then(|| line(&name, &places, of, signal))
        });
        lines.extend(approximations);
    }
    let highest = lines.iter().flat_map(|line| &line.y).copied().fold(0.0, f64::max);
    let floor = highest * setup.target * BELOW_TARGET;
    lines.iter_mut().for_each(|line| above(line, floor));
    let mark = |threshold_a: &f64| Mark::Level {
        name: "threshold".to_owned(),
        axis: "x",
        at: threshold_a / counts.electron_a,
    };
    Some(Curve {
        name: "distributions",
        title: "Counts at the sensitivity",
        x: Axis { label: "Electrons above the dark level", unit: "", scale: Scale::Linear },
        y: Axis { label: "Chance per electron", unit: "", scale: Scale::Log },
        lines,
        marks: answer.thresholds_a.iter().map(mark).collect(),
    })
}

fn line(name: &str, places: &[f64], density: impl Fn(f64) -> f64, signal: impl Fn(f64) -> f64) -> Line {
    let (x, y) = places.iter().map(|&place| (signal(place), density(place))).unzip();
    Line { name: name.to_owned(), x, y }
}

/// Leaves out what is too rare to be drawn.
fn above(line: &mut Line, floor: f64) {
    let pairs = line.x.iter().zip(&line.y).filter(|(_, y)| **y > floor).map(|(x, y)| (*x, *y));
    (line.x, line.y) = pairs.unzip();
}

fn density(count: &Count, place: f64) -> f64 {
    let lumps = count.total_noise() < ELECTRONS_SHOW;
    let drawn = if lumps { Count { noise: 0.0, light_noise: 0.0, ..*count } } else { *count };
    libm::exp(drawn.chances(place).ln_density)
}

/// Noise that the approximation is spread by: the circuit's, and the unmultiplied electrons'.
fn spread(count: &Count) -> f64 {
    (count.total_noise() * count.total_noise() + count.unmultiplied).sqrt()
}

/// Width of the multiplied electrons alone.
fn width(count: &Count, excess_noise_factor: f64) -> f64 {
    count.gain.mean() * (count.primaries * excess_noise_factor).sqrt()
}

/// Whether the approximation means anything: some primary electrons, and not all buried in noise.
fn resolved(count: &Count, excess_noise_factor: f64) -> bool {
    count.primaries >= 1.0 && width(count, excess_noise_factor) > 0.1 * spread(count)
}

/// The approximation with noise: the trapezoid of its convolution, fine enough for the narrower of the two.
fn smoothed(count: &Count, excess_noise_factor: f64, place: f64) -> f64 {
    let of = |electrons: f64| {
        webb_mcintyre_conradi::density(count.primaries, count.gain.mean(), excess_noise_factor, electrons)
    };
    let noise = spread(count);
    let centre = place - count.unmultiplied;
    if noise < 1e-3 * width(count, excess_noise_factor) {
        return of(centre);
    }
    let step = 0.4 * noise.min(width(count, excess_noise_factor));
    let steps = (7.0 * noise / step).ceil() as i32;
    let at = |index: i32| {
        let shift = f64::from(index) * step;
        let z = shift / noise;
        of(centre + shift) * libm::exp(-0.5 * z * z)
    };
    (-steps..=steps).map(at).sum::<f64>() * step / (noise * (2.0 * core::f64::consts::PI).sqrt())
}

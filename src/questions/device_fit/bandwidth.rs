//! Bandwidth at unit gain and gain–bandwidth product, from bandwidth against gain.

use super::fitted::{About, Fitted, Measured, Refused, Task, Weighing, apart_from_zero};
use crate::bench::measurements::{BandwidthPoint, Estimator};
use crate::numeric::dual::Dual;
use crate::numeric::fit::{Bounds, linear};
use crate::physics::avalanche::bandwidth_hz;

const ABOUT: &[About] = &[
    About {
        name: "bandwidth_hz",
        title: "bandwidth at unit gain",
        unit: "Hz",
        pointer: Some("/detector/bandwidth_hz"),
        measure: "Measure at lower gains, where the bandwidth no longer changes with gain.",
        tells: apart_from_zero,
    },
    About {
        name: "gain_bandwidth_hz",
        title: "gain–bandwidth product",
        unit: "Hz",
        pointer: Some("/detector/avalanche/gain_bandwidth_hz"),
        measure: "Measure at higher gains, where the bandwidth falls with gain.",
        // The square of its inverse is what was fitted, and that must be apart from 0.
        tells: |value, half| half < 0.5 * value,
    },
];

/// Fits B = B₀/√(1 + w M²) in B₀ and w = (B₀/GBP)², and tells the result by B₀ and GBP.
///
/// A device without such a limit has w = 0, where GBP itself would run off to infinity.
pub fn fitted(points: &[BandwidthPoint], estimator: Estimator) -> Result<Fitted, Refused> {
    let kept: Vec<Measured> = points
        .iter()
        .map(|point| Measured { x: point.gain, y: point.bandwidth_hz, standard: point.standard_hz })
        .collect();
    let weighing = Weighing::of(&kept, Weighing::Relative);
    let evaluate = |parameters: &[f64]| {
        linear::<2>(parameters, kept.len(), |[flat, slowing], index| {
            let gain = kept[index].x;
            let product = flat.value / slowing.value.sqrt();
            let value = bandwidth_hz(gain, flat.value, product);
            let part = value / flat.value;
            let formula = Dual { value, slopes: [part, -0.5 * gain * gain * value * part * part] };
            weighing.residual(formula, &kept[index])
        })
    };
    let greatest = kept.iter().map(|point| point.y).fold(0.0, f64::max);
    let last = kept.last();
    // As the point of the highest gain would have it alone, with a flat part a little above the fastest point.
    let slowing = last.map_or(1.0, |last| ((1.05 * greatest / last.y).powi(2) - 1.0) / (last.x * last.x));
    let task = Task {
        table: "bandwidth",
        points: &kept,
        left_out: 0,
        weighing,
        evaluate: &evaluate,
        start: &[1.05 * greatest, slowing],
        bounds: &[Bounds::from(1e-9 * greatest), Bounds::from(0.0)],
        estimator,
    };
    let found = task.estimates()?;
    let (flat, slowing) = (found.values[0], found.values[1]);
    let product = flat / slowing.sqrt();
    let slopes = match slowing > 0.0 {
        true => vec![vec![1.0, 0.0], vec![product / flat, -0.5 * product / slowing]],
        false => vec![vec![1.0, 0.0], vec![0.0, 0.0]],
    };
    let told = found.told_by(vec![flat, product], &slopes);
    Ok(task.fitted(&told, ABOUT))
}

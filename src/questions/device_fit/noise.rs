//! The ionisation ratio from excess noise against gain.

use super::fitted::{About, Fitted, Measured, Refused, Task, Weighing};
use crate::bench::measurements::{Estimator, NoisePoint};
use crate::numeric::dual::Dual;
use crate::numeric::fit::{Bounds, linear};
use crate::physics::avalanche::excess_noise_factor;

const ABOUT: &[About] = &[About {
    name: "ionisation_ratio",
    title: "ionisation ratio",
    unit: "",
    pointer: Some("/detector/avalanche/ionisation_ratio"),
    measure: "Measure the noise at higher gains, where k·M is more than a few.",
    // It lies between 0 and 1, so an interval as wide as half of that says nothing; a small one may well reach 0.
    tells: |_, half| half < 0.25,
}];

/// Fits McIntyre's formula, F = kM + (1 − k)(2 − 1/M), in which k stands linearly.
pub fn fitted(points: &[NoisePoint], estimator: Estimator) -> Result<Fitted, Refused> {
    // At gain 1 any k gives F = 1: such a point says nothing of it.
    let telling = points.iter().filter(|point| point.gain > 1.0);
    let kept: Vec<Measured> =
        telling.map(|point| Measured { x: point.gain, y: point.factor, standard: point.standard }).collect();
    let weighing = Weighing::of(&kept, Weighing::Relative);
    let evaluate = |parameters: &[f64]| {
        linear::<1>(parameters, kept.len(), |[k], index| {
            let gain = kept[index].x;
            let (quiet, loud) = (excess_noise_factor(gain, 0.0), excess_noise_factor(gain, 1.0));
            let formula = Dual { value: excess_noise_factor(gain, k.value), slopes: [loud - quiet] };
            weighing.residual(formula, &kept[index])
        })
    };
    let task = Task {
        table: "noise",
        points: &kept,
        left_out: points.len() - kept.len(),
        weighing,
        evaluate: &evaluate,
        start: &[0.3],
        bounds: &[Bounds { low: 0.0, high: 1.0 }],
        estimator,
    };
    if kept.is_empty() {
        return Err(
            task.refused("The noise must be measured at gains above 1; at gain 1 every detector has F = 1.")
        );
    }
    Ok(task.fitted(&task.estimates()?, ABOUT))
}

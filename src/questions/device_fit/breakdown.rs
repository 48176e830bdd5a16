//! The temperature coefficient of the breakdown voltage.

use super::fitted::{About, Fitted, Measured, Refused, Task, Weighing, apart_from_zero};
use crate::bench::measurements::{BreakdownPoint, Estimator};
use crate::numeric::dual::Dual;
use crate::numeric::fit::{Bounds, linear};

const ABOUT: &[About] = &[
    About {
        name: "breakdown_by_temperature_v",
        title: "breakdown voltage at the reference temperature",
        unit: "V",
        pointer: None,
        measure: "Measure at more temperatures.",
        tells: apart_from_zero,
    },
    About {
        name: "breakdown_v_per_k",
        title: "temperature coefficient of the breakdown voltage",
        unit: "V/K",
        pointer: Some("/detector/avalanche/bias/breakdown_v_per_k"),
        measure: "Measure at more temperatures, further apart.",
        tells: apart_from_zero,
    },
];

/// Fits the straight line V_B = V_B0 + γ (T − T₀).
pub fn fitted(points: &[BreakdownPoint], reference_c: f64, estimator: Estimator) -> Result<Fitted, Refused> {
    let kept: Vec<Measured> = points
        .iter()
        .map(|point| Measured { x: point.temperature_c, y: point.breakdown_v, standard: point.standard_v })
        .collect();
    let weighing = Weighing::of(&kept, Weighing::Alike);
    let evaluate = |parameters: &[f64]| {
        linear::<2>(parameters, kept.len(), |[at_reference, per_k], index| {
            let warmer = kept[index].x - reference_c;
            let formula: Dual<2> = *at_reference + *per_k * warmer;
            weighing.residual(formula, &kept[index])
        })
    };
    let middle = kept.first().map_or(0.0, |point| point.y);
    let task = Task {
        table: "breakdown",
        points: &kept,
        left_out: 0,
        weighing,
        evaluate: &evaluate,
        start: &[middle, 0.0],
        bounds: &[Bounds::NONE; 2],
        estimator,
    };
    Ok(task.fitted(&task.estimates()?, ABOUT))
}

/// The temperature at which the line is best known: the mean of those measured, °C.
pub fn mean_c(points: &[BreakdownPoint]) -> f64 {
    points.iter().map(|point| point.temperature_c).sum::<f64>() / points.len().max(1) as f64
}

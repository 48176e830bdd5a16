//! Breakdown voltage, Miller exponent and series resistance, from current against voltage.

use super::fitted::{About, Fitted, Measured, Refused, Task, Weighing, apart_from_zero};
use crate::bench::measurements::{Estimator, IvPoint};
use crate::fault::{Allowed, Code, Fault};
use crate::numeric::dual::Dual;
use crate::numeric::fit::{Bounds, linear};
use crate::physics::bias::{Biased, Currents, Junction};
use crate::physics::miller::Miller;
use crate::tree::Tree;

const ABOUT: &[About] = &[
    About {
        name: "breakdown_v",
        title: "breakdown voltage",
        unit: "V",
        pointer: Some("/detector/avalanche/bias/breakdown_v"),
        measure: "Measure nearer to breakdown, where the gain is ten and more.",
        tells: apart_from_zero,
    },
    About {
        name: "miller_exponent",
        title: "Miller exponent",
        unit: "",
        pointer: Some("/detector/avalanche/bias/miller_exponent"),
        measure: "Measure at more voltages between unity gain and breakdown.",
        tells: apart_from_zero,
    },
    About {
        name: "series_resistance_ohm",
        title: "series resistance",
        unit: "Ω",
        pointer: Some("/detector/avalanche/bias/series_resistance_ohm"),
        measure: "Repeat the measurement near breakdown with more light: at these currents the drop over it is not seen.",
        tells: apart_from_zero,
    },
    About {
        name: "unity_gain_current_a",
        title: "photocurrent at unity gain",
        unit: "A",
        pointer: None,
        measure: "Measure at more low voltages, or choose the voltage of unity gain.",
        tells: apart_from_zero,
    },
];

/// Photocurrent against voltage, dark current taken off.
pub struct Photocurrents {
    /// Voltage and photocurrent.
    pub points: Vec<Measured>,
    /// The dark current beside each, A.
    dark_a: Vec<f64>,
    /// Rows without a photocurrent above 0, or below the voltage of unity gain.
    left_out: usize,
    /// The photocurrent at the chosen voltage of unity gain, A.
    unity_a: Option<f64>,
}

impl Photocurrents {
    /// From the rows of a measurement; a fault where the chosen voltage of unity gain lies outside of them.
    pub fn new(rows: &[IvPoint], unity_gain_v: Option<f64>) -> Result<Photocurrents, Fault> {
        let photo_a = |row: &IvPoint| row.light_a - row.dark_a.unwrap_or(0.0);
        let from_v = unity_gain_v.unwrap_or(0.0);
        let kept: Vec<&IvPoint> = rows
            .iter()
            .filter(|row| photo_a(row) > 0.0 && row.bias_v > 0.0 && row.bias_v >= from_v)
            .collect();
        let measured = |row: &&IvPoint| Measured { x: row.bias_v, y: photo_a(row), standard: row.standard_a };
        let unity_a = unity_gain_v.map(|at_v| at(rows, photo_a, at_v)).transpose()?;
        Ok(Photocurrents {
            points: kept.iter().map(measured).collect(),
            dark_a: kept.iter().map(|row| row.dark_a.unwrap_or(0.0).max(0.0)).collect(),
            left_out: rows.len() - kept.len(),
            unity_a,
        })
    }

    /// What flows at a place of the table.
    fn currents(&self, index: usize, unity_a: f64) -> Currents {
        Currents { multiplied_a: unity_a, beside_a: self.dark_a[index] }
    }

    /// Photocurrent by the formula, with its derivatives.
    fn formula(&self, parameters: &[Dual<4>; 4], index: usize) -> Option<Dual<4>> {
        let [breakdown_v, exponent, series_ohm, unity_a] = parameters;
        Some(
            *unity_a
                * self.gain([breakdown_v.value, exponent.value, series_ohm.value, unity_a.value], index)?,
        )
    }

    /// The gain M that holds itself, with its derivatives by V_B, n, R_s and I₁.
    ///
    /// ```text
    /// M = f(V_j),   V_j = V − (I_dark + M I₁) R_s,   s = ∂f/∂V_j,   d = 1 + s I₁ R_s
    /// ∂M/∂V_B = −(V_j/V_B) s/d      ∂M/∂n = M (M − 1) ln(V_j/V_B)/d
    /// ∂M/∂R_s = −s (I_dark + M I₁)/d      ∂M/∂I₁ = −s M R_s/d
    /// ```
    fn gain(&self, [breakdown_v, exponent, series_ohm, unity_a]: [f64; 4], index: usize) -> Option<Dual<4>> {
        let junction = Junction::Miller(Miller { breakdown_v, exponent });
        let currents = self.currents(index, unity_a);
        let biased = Biased { junction, series_resistance_ohm: series_ohm };
        let found = biased.operation(self.points[index].x, &currents).ok()?;
        let (gain, ratio) = (found.gain, found.junction_v / breakdown_v);
        let slope = biased.junction.gain_per_v(gain, found.junction_v);
        let held = 1.0 + slope * unity_a * series_ohm;
        let slopes = [
            -ratio * slope,
            gain * (gain - 1.0) * libm::log(ratio),
            -slope * currents.total_a(gain),
            -slope * gain * series_ohm,
        ];
        Some(Dual { value: gain, slopes: slopes.map(|slope| slope / held) })
    }

    /// The gain by the formula at a voltage between the points, for a curve. The dark current is that of the next point.
    pub fn gain_at(&self, parameters: [f64; 4], bias_v: f64) -> Option<f64> {
        let [breakdown_v, exponent, series_resistance_ohm, multiplied_a] = parameters;
        let next = self.points.iter().position(|point| point.x >= bias_v)?;
        let beside_a = self.dark_a[next];
        let junction = Junction::Miller(Miller { breakdown_v, exponent });
        let currents = Currents { multiplied_a, beside_a };
        Biased { junction, series_resistance_ohm }.operation(bias_v, &currents).ok().map(|found| found.gain)
    }

    /// The best of a coarse net of guesses, judged by the scatter of ln of photocurrent over gain at a few of the points.
    fn start(&self) -> Option<[f64; 4]> {
        let (count, most_v) = (self.points.len(), self.points.last()?.x);
        let most_a =
            self.points.iter().zip(&self.dark_a).map(|(point, dark)| point.y + dark).fold(0.0, f64::max);
        let some: Vec<usize> = (0..count).step_by(count.div_ceil(16)).chain([count - 1]).collect();
        let first_a = self.unity_a.unwrap_or(self.points.first()?.y);
        let mut best: Option<(f64, [f64; 4])> = None;
        for drop in [0.0, 3e-3, 0.05] {
            for above in [0.9, 0.98, 1.002, 1.02, 1.1, 1.4] {
                for exponent in [0.7, 2.0, 5.0] {
                    let guess = [above * most_v, exponent, drop * most_v / most_a, first_a];
                    let logarithm = |index: &usize| {
                        Some(libm::log(self.points[*index].y / self.gain(guess, *index)?.value))
                    };
                    let Some(logarithms) = some.iter().map(logarithm).collect::<Option<Vec<f64>>>() else {
                        continue;
                    };
                    let mean = logarithms.iter().sum::<f64>() / logarithms.len() as f64;
                    let about = self.unity_a.map_or(mean, libm::log);
                    let scatter: f64 = logarithms.iter().map(|one| (one - about) * (one - about)).sum();
                    if best.is_none_or(|(least, _)| scatter < least) {
                        best = Some((scatter, [guess[0], guess[1], guess[2], libm::exp(about)]));
                    }
                }
            }
        }
        best.map(|(_, guess)| guess)
    }
}

/// The photocurrent at a voltage, on the straight line between its neighbours.
fn at(rows: &[IvPoint], photo_a: impl Fn(&IvPoint) -> f64, at_v: f64) -> Result<f64, Fault> {
    const AT: &str = "/measurements/unity_gain_v";
    let above = rows.iter().position(|row| row.bias_v >= at_v);
    let found = above.and_then(|above| {
        let high = rows.get(above)?;
        if high.bias_v == at_v {
            return Some(photo_a(high));
        }
        let low = rows.get(above.checked_sub(1)?)?;
        let part = (at_v - low.bias_v) / (high.bias_v - low.bias_v);
        Some(photo_a(low) + part * (photo_a(high) - photo_a(low)))
    });
    let ends = rows.first().zip(rows.last()).map(|(first, last)| (first.bias_v, last.bias_v));
    let (min, max) = ends.unwrap_or((0.0, 0.0));
    match found {
        Some(current_a) if current_a > 0.0 => Ok(current_a),
        Some(_) => {
            let sentence = format!(
                "At the voltage of unity gain the photocurrent must be above 0; at {at_v} V it is not."
            );
            Err(Fault::new(AT, Code::Conflict, Tree::Number(at_v), &sentence))
        }
        None => {
            let sentence = format!(
                "The currents were measured from {min} V to {max} V; {at_v} V for unity gain lies outside."
            );
            let unit = "V".to_owned();
            let allowed = Some(Allowed::Between { min: Some(min), max: Some(max), unit });
            Err(Fault { allowed, ..Fault::new(AT, Code::Range, Tree::Number(at_v), &sentence) })
        }
    }
}

/// Fits I = I₁ M with Miller's M behind a series resistance; the chosen unity-gain current stands still.
pub fn fitted(given: &Photocurrents, estimator: Estimator) -> Result<Fitted, Refused> {
    let points = &given.points;
    let weighing = Weighing::of(points, Weighing::Relative);
    let evaluate = |parameters: &[f64]| {
        // Beyond breakdown there is no current to compare with.
        let nowhere = Dual::constant(f64::INFINITY);
        linear::<4>(parameters, points.len(), |parameters, index| {
            given
                .formula(parameters, index)
                .map_or(nowhere, |formula| weighing.residual(formula, &points[index]))
        })
    };
    let start = given.start();
    let unity = given.unity_a.map_or(Bounds::from(0.0), |unity_a| Bounds { low: unity_a, high: unity_a });
    let bounds = [Bounds::from(1e-3), Bounds { low: 0.1, high: 20.0 }, Bounds::from(0.0), unity];
    let task = Task {
        table: "iv",
        points,
        left_out: given.left_out,
        weighing,
        evaluate: &evaluate,
        start: &start.unwrap_or_default(),
        bounds: &bounds,
        estimator,
    };
    if points.len() < 5 {
        let left = given.left_out;
        return Err(task.refused(format!(
            "Five points at least are needed above the dark current and from unity gain on; there are {}, and {left} were left \
             out. Measure at more voltages.",
            points.len()
        )));
    }
    if start.is_none() {
        return Err(task.refused(
            "No curve of Miller's form comes near these points: check the columns of voltage and current.",
        ));
    }
    let found = task.estimates()?;
    let about = if given.unity_a.is_some() { &ABOUT[..3] } else { ABOUT };
    Ok(task.fitted(&found, about))
}

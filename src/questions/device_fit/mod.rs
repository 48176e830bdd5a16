//! What is this device?

mod bandwidth;
mod breakdown;
mod curves;
mod device;
mod fitted;
mod gain;
mod noise;
mod shown;

pub use device::{Device, DeviceUncertainty, DeviceValue, UncertainInput};
pub use fitted::{Fitted, FittedPoint, Parameter, Refused};

use super::Numbers;
use super::curve::Curve;
use super::needs::Needs;
use super::shown::Shown;
use crate::bench::Bench;
use crate::bench::measurements::Measurements;
use crate::fault::{Fault, Faults};
use gain::Photocurrents;
use serde::Serialize;

/// The numbers of a measured device, with what the measurements say of each.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Answer {
    /// One for each table that was fitted.
    pub fits: Vec<Fitted>,
    /// The tables that could not be.
    pub refused: Vec<Refused>,
    /// The temperature to which the breakdown voltage belongs, °C; absent where it is not known.
    pub reference_temperature_c: Option<f64>,
    /// What to put onto the bench so that it holds this device; absent where nothing is determined.
    pub onto_bench: Option<Device>,
    /// Measurements with their fits, and what is left.
    pub curves: Vec<Curve>,
    /// The answer as it is shown.
    pub shown: Shown,
}

/// The parameters that sweeps may follow.
const NAMES: &[&str] = &[
    "breakdown_v",
    "miller_exponent",
    "series_resistance_ohm",
    "unity_gain_current_a",
    "ionisation_ratio",
    "bandwidth_hz",
    "gain_bandwidth_hz",
    "breakdown_by_temperature_v",
    "breakdown_v_per_k",
];

/// Answers for a bench.
pub fn ask(bench: &Bench) -> Result<Answer, Faults> {
    let (mut answer, given) = figures(bench)?;
    answer.onto_bench = device::device(bench, &answer);
    answer.curves = curves::curves(&answer, given.currents.as_ref());
    answer.shown = shown::shown(&given, &answer);
    Ok(answer)
}

/// The numbers that a sweep or a search may follow, without curves or text.
pub fn numbers(bench: &Bench) -> Result<Numbers, Faults> {
    let (answer, _) = figures(bench)?;
    Ok(NAMES.iter().map(|name| (*name, answer.parameter(name).and_then(|found| found.value))).collect())
}

impl Answer {
    /// A parameter by its name, whichever table it comes from.
    fn parameter(&self, name: &str) -> Option<&Parameter> {
        self.fits.iter().flat_map(|fit| &fit.parameters).find(|parameter| parameter.name == name)
    }
}

/// What the question takes from the bench.
struct Given<'b> {
    measurements: &'b Measurements,
    currents: Option<Photocurrents>,
}

fn given(bench: &Bench) -> Result<Given<'_>, Faults> {
    const NEEDED: &str = "Measurements are needed: a table of current against voltage, of noise or of bandwidth against \
                          gain, or of breakdown voltage against temperature.";
    let mut needs = Needs::default();
    let measurements = needs.part(&bench.measurements, "/measurements", NEEDED);
    let tables = measurements.is_some_and(|all| {
        all.iv.is_some() || all.noise.is_some() || all.bandwidth.is_some() || all.breakdown.is_some()
    });
    if measurements.is_some() && !tables {
        needs.faults.push(Fault::missing("/measurements", NEEDED));
    }
    let iv = measurements.and_then(|all| all.iv.as_ref());
    let unity_gain_v = measurements.and_then(|all| all.unity_gain_v);
    let currents = iv.and_then(|iv| needs.found(Photocurrents::new(&iv.points, unity_gain_v)));
    let made = measurements.map(|measurements| Given { measurements, currents });
    needs.all(made)
}

fn figures(bench: &Bench) -> Result<(Answer, Given<'_>), Faults> {
    let given = given(bench)?;
    let all = given.measurements;
    let estimator = all.estimator;
    // The line is referred to the temperature of the other measurement, else to where it is known best.
    let own_c = all.breakdown.as_ref().map(|table| breakdown::mean_c(&table.points));
    let line_c = all.temperature_c.or(own_c);
    let reference_temperature_c = all.temperature_c.or(own_c.filter(|_| all.iv.is_none()));
    let outcomes = [
        given.currents.as_ref().map(|currents| gain::fitted(currents, estimator)),
        all.noise.as_ref().map(|table| noise::fitted(&table.points, estimator)),
        all.bandwidth.as_ref().map(|table| bandwidth::fitted(&table.points, estimator)),
        all.breakdown
            .as_ref()
            .zip(line_c)
            .map(|(table, line_c)| breakdown::fitted(&table.points, line_c, estimator)),
    ];
    let (mut fits, mut refused) = (Vec::new(), Vec::new());
    for outcome in outcomes.into_iter().flatten() {
        match outcome {
            Ok(fitted) => fits.push(fitted),
            Err(why) => refused.push(why),
        }
    }
    let answer = Answer {
        fits,
        refused,
        reference_temperature_c,
        onto_bench: None,
        curves: Vec::new(),
        shown: Shown::default(),
    };
    Ok((answer, given))
}

//! The fitted device as numbers of the bench, with their uncertainties and correlations.

use super::Answer;
use super::fitted::Parameter;
use crate::bench::Bench;
use crate::quantity::write::worth_keeping;
use crate::tree::Tree;
use serde::Serialize;

/// What to put onto a bench.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Device {
    /// What putting it is called.
    pub name: &'static str,
    /// Numbers and choices by pointer.
    pub values: Vec<DeviceValue>,
    /// How well the numbers are known, in the form of `options.uncertainty`.
    pub uncertainty: DeviceUncertainty,
}

/// A number, or a choice of an alternative.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct DeviceValue {
    /// Where it goes.
    pub pointer: &'static str,
    /// In the unit of the bench.
    pub value: Tree,
}

/// How well the numbers are known.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct DeviceUncertainty {
    /// One for each number that was fitted.
    pub inputs: Vec<UncertainInput>,
    /// Pairs of inputs by index, and their correlation.
    pub correlations: Vec<(usize, usize, f64)>,
}

/// A number of the bench that is not known exactly.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct UncertainInput {
    /// Which.
    pub pointer: &'static str,
    /// What this doubt is called.
    pub name: &'static str,
    /// Its standard uncertainty, in the unit of the bench.
    pub standard: f64,
    /// Absent where infinite.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub degrees_of_freedom: Option<f64>,
}

const BIAS: &str = "/detector/avalanche/bias";
const BREAKDOWN_V: &str = "/detector/avalanche/bias/breakdown_v";

/// What of an answer goes onto a bench; nothing where nothing is determined.
pub fn device(bench: &Bench, answer: &Answer) -> Option<Device> {
    let mut values: Vec<DeviceValue> = Vec::new();
    let mut inputs: Vec<UncertainInput> = Vec::new();
    let mut correlations = Vec::new();
    let by_current = answer.parameter("breakdown_v").is_some();
    for fit in &answer.fits {
        let mut known: Vec<(usize, usize)> = Vec::new();
        for (place, parameter) in fit.parameters.iter().enumerate() {
            let Some((pointer, value, standard)) = placed(parameter, by_current) else { continue };
            known.push((place, inputs.len()));
            values.push(DeviceValue { pointer, value: Tree::Number(worth_keeping(value, standard)) });
            let standard = worth_keeping(standard, standard);
            let name = "fit of the measurements";
            inputs.push(UncertainInput {
                pointer,
                name,
                standard,
                degrees_of_freedom: fit.degrees_of_freedom,
            });
        }
        for (at, (one, one_input)) in known.iter().enumerate() {
            for (other, other_input) in &known[at + 1..] {
                let correlation = fit.correlations[*one][*other].filter(|correlation| *correlation != 0.0);
                correlations.extend(correlation.map(|r| (*one_input, *other_input, r)));
            }
        }
    }
    let holds = |pointer: &str| values.iter().any(|value| value.pointer.starts_with(pointer));
    let mut choices = Vec::new();
    let avalanche = bench.detector.as_ref().and_then(|detector| detector.avalanche.as_ref());
    let has_bias = avalanche.is_some_and(|avalanche| avalanche.bias.is_some());
    if holds(BREAKDOWN_V) || (holds(BIAS) && !has_bias) {
        choices.push(DeviceValue { pointer: "/detector/avalanche/bias/kind", value: "miller".into() });
    }
    if holds("/detector/avalanche/ionisation_ratio") {
        let pointer = "/detector/avalanche/excess_noise/kind";
        choices.push(DeviceValue { pointer, value: "mcintyre".into() });
    }
    if let Some(celsius) = answer.reference_temperature_c.filter(|_| holds(BREAKDOWN_V)) {
        let pointer = "/detector/avalanche/bias/reference_temperature_c";
        choices.push(DeviceValue { pointer, value: Tree::Number(celsius) });
    }
    choices.extend(values);
    let uncertainty = DeviceUncertainty { inputs, correlations };
    let name = "Put this device on the bench";
    (!uncertainty.inputs.is_empty()).then_some(Device { name, values: choices, uncertainty })
}

/// Where a determined parameter goes. The straight line's own breakdown voltage is second to that of the currents.
fn placed(parameter: &Parameter, by_current: bool) -> Option<(&'static str, f64, f64)> {
    let pointer = match parameter.name {
        "breakdown_by_temperature_v" if !by_current => Some(BREAKDOWN_V),
        _ => parameter.pointer,
    };
    Some((pointer?, parameter.value?, parameter.standard?))
}

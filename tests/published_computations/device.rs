//! Fits of a device from its measurements, through the door.

use crate::support::cases::{Computation, Inputs, Outputs};
use leastlight::door;
use leastlight::tree::Tree;
use serde_json::Value;

pub const ALL: &[(&str, Computation)] = &[("device_fit", device_fit)];

/// Each parameter with the names of its value, its standard uncertainty and its interval.
const NAMES: &[[&str; 3]] = &[
    ["breakdown_v", "breakdown_v_standard", "breakdown_v_interval"],
    ["miller_exponent", "miller_exponent_standard", "miller_exponent_interval"],
    ["series_resistance_ohm", "series_resistance_ohm_standard", "series_resistance_ohm_interval"],
    ["unity_gain_current_a", "unity_gain_current_a_standard", "unity_gain_current_a_interval"],
    ["ionisation_ratio", "ionisation_ratio_standard", "ionisation_ratio_interval"],
    ["bandwidth_hz", "bandwidth_hz_standard", "bandwidth_hz_interval"],
    ["gain_bandwidth_hz", "gain_bandwidth_hz_standard", "gain_bandwidth_hz_interval"],
    [
        "breakdown_by_temperature_v",
        "breakdown_by_temperature_v_standard",
        "breakdown_by_temperature_v_interval",
    ],
    ["breakdown_v_per_k", "breakdown_v_per_k_standard", "breakdown_v_per_k_interval"],
];

/// The one table of the bench, fitted.
fn device_fit(given: &mut Inputs) -> Result<Outputs, String> {
    let bench = given.value("bench")?.try_into::<Tree>().map_err(|error| error.to_string())?;
    let answer = door::ask("device_fit", &bench, &Tree::Null).map_err(|faults| format!("{faults:?}"))?;
    let answer = serde_json::to_value(answer).map_err(|error| error.to_string())?;
    let fit = &answer["fits"][0];
    let mut outputs = Outputs::new();
    for parameter in fit["parameters"].as_array().into_iter().flatten() {
        let name = parameter["name"].as_str().unwrap_or_default();
        let Some([value, standard, interval]) = NAMES.iter().find(|names| names[0] == name) else {
            return Err(format!("an unknown parameter, {name}"));
        };
        if let (Some(number), Some(uncertainty)) =
            (parameter["value"].as_f64(), parameter["standard"].as_f64())
        {
            outputs.insert(value, number.into());
            outputs.insert(standard, uncertainty.into());
            outputs.insert(interval, numbers(&parameter["interval"]).into());
        }
    }
    for name in ["degrees_of_freedom", "residual_deviation"] {
        if let Some(number) = fit[name].as_f64() {
            outputs.insert(name, number.into());
        }
    }
    let rows = fit["correlations"].as_array().into_iter().flatten().enumerate();
    let above = rows.flat_map(|(place, row)| numbers(row).into_iter().skip(place + 1));
    outputs.insert("correlations", above.collect::<Vec<f64>>().into());
    Ok(outputs)
}

fn numbers(list: &Value) -> Vec<f64> {
    list.as_array().into_iter().flatten().filter_map(Value::as_f64).collect()
}

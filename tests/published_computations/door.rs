//! Whole questions through the door, from a bench as a script gives it.

use crate::support::cases::{Computation, Inputs, Outputs};
use leastlight::door;
use leastlight::tree::Tree;
use serde_json::Value;

pub const ALL: &[(&str, Computation)] =
    &[("ask_sensitivity", sensitivity), ("ask_reading", reading), ("ask_avalanche_bias", avalanche_bias)];

fn ask(question: &str, given: &mut Inputs) -> Result<Value, String> {
    let bench = given.value("bench")?.try_into::<Tree>().map_err(|error| error.to_string())?;
    let answer = door::ask(question, &bench, &Tree::Null).map_err(|faults| format!("{faults:?}"))?;
    serde_json::to_value(answer).map_err(|error| error.to_string())
}

fn take(answer: &Value, names: &[&'static str], outputs: &mut Outputs) {
    for name in names {
        if let Some(number) = answer[*name].as_f64() {
            outputs.insert(*name, number.into());
        }
    }
}

fn each(levels: &Value, of: impl Fn(&Value) -> Option<f64>) -> Vec<f64> {
    levels.as_array().into_iter().flatten().filter_map(of).collect()
}

fn sensitivity(given: &mut Inputs) -> Result<Outputs, String> {
    let answer = ask("sensitivity", given)?;
    let mut outputs = Outputs::new();
    let names = [
        "average_power_w",
        "average_power_dbm",
        "average_power_q_dbm",
        "oma_w",
        "photons_per_bit",
        "gain",
        "excess_noise_factor",
        "noise_bandwidth_hz",
        "threshold_a",
        "error_ratio",
        "error_ratio_q",
        "margin_db",
    ];
    take(&answer, &names, &mut outputs);
    outputs.insert("currents_a", each(&answer["levels"], |level| level["current_a"].as_f64()).into());
    outputs.insert("noises_a", each(&answer["levels"], |level| level["noise_rms_a"].as_f64()).into());
    for (name, part, key) in [
        ("best_gain", "best_gain", "gain"),
        ("best_gain_dbm", "best_gain", "average_power_dbm"),
        ("closed_form_gain", "best_gain", "closed_form_gain"),
        ("ideal_photons_per_bit", "quantum_limit", "photons_per_bit"),
        ("ideal_dbm", "quantum_limit", "average_power_dbm"),
        ("error_floor", "none_because", "error_floor"),
    ] {
        if let Some(number) = answer[part][key].as_f64() {
            outputs.insert(name, number.into());
        }
    }
    outputs.insert("outcome", if answer["none_because"].is_null() { "power" } else { "none" }.into());
    Ok(outputs)
}

fn reading(given: &mut Inputs) -> Result<Outputs, String> {
    let answer = ask("reading", given)?;
    let mut outputs = Outputs::new();
    let names = [
        "power_w",
        "power_dbm",
        "correction_db",
        "correction_factor",
        "responsivity_set_a_per_w",
        "responsivity_source_a_per_w",
        "slope_percent_per_nm",
        "centre_wavelength_nm",
        "averaging_percent",
    ];
    take(&answer, &names, &mut outputs);
    take(
        &answer["certificate_uncertainty"],
        &["standard_percent", "expanded_percent", "low_dbm", "high_dbm"],
        &mut outputs,
    );
    outputs.insert("table_db", each(&answer["table"], |row| row["correction_db"].as_f64()).into());
    Ok(outputs)
}

fn avalanche_bias(given: &mut Inputs) -> Result<Outputs, String> {
    let answer = ask("avalanche_bias", given)?;
    let mut outputs = Outputs::new();
    let names = [
        "bias_v",
        "best_gain",
        "closed_form_gain",
        "average_power_dbm",
        "unit_gain_power_dbm",
        "current_a",
        "drop_v",
        "breakdown_v",
        "margin_v",
        "gain_per_v",
        "gain_per_k",
        "gain_in_the_dark",
        "sag_power_dbm",
    ];
    take(&answer, &names, &mut outputs);
    for (name, part, key) in [
        ("volt_above_db", "loss_per_volt", "above_db"),
        ("volt_below_db", "loss_per_volt", "below_db"),
        ("kelvin_above_db", "loss_per_kelvin", "above_db"),
        ("kelvin_below_db", "loss_per_kelvin", "below_db"),
        ("set_gain", "set", "gain"),
        ("set_lost_db", "set", "lost_db"),
    ] {
        if let Some(number) = answer[part][key].as_f64() {
            outputs.insert(name, number.into());
        }
    }
    let column = |key: &str| each(&answer["table"], |row| row[key].as_f64());
    outputs.insert("table_c", column("temperature_c").into());
    outputs.insert("table_bias_v", column("bias_v").into());
    outputs.insert("table_left_gain", column("left_gain").into());
    outputs.insert("table_left_lost_db", column("left_lost_db").into());
    Ok(outputs)
}

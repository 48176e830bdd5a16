//! No answer holds a number that is none.

use serde_json::Value;

/// The numbers of an answer that may be absent; any other null would be a NaN or an infinity in disguise.
const MAY_BE_ABSENT: &[&str] = &[
    "gaussian",
    "difference_db",
    "average_power_w",
    "average_power_dbm",
    "average_power_q_dbm",
    "oma_w",
    "photons_per_bit",
    "quantum_efficiency",
    "threshold_a",
    "q_factor",
    "received_power_dbm",
    "error_ratio",
    "error_ratio_q",
    "margin_db",
    "best_gain",
    "gain",
    "improvement_db",
    "closed_form_gain",
    "none_because",
    "error_floor",
    "responsivity_set_a_per_w",
    "responsivity_source_a_per_w",
    "slope_percent_per_nm",
    "certificate_uncertainty",
    "averaging_percent",
    "low_dbm",
    "correction_db",
    "correction_factor",
    "power_dbm",
    "expanded_percent",
    "bias_v",
    "near_gain",
    "near_bias_v",
    "best_gain_limit",
    "unit_gain_power_dbm",
    "light_w",
    "current_a",
    "drop_v",
    "breakdown_v",
    "margin_v",
    "gain_per_v",
    "gain_per_k",
    "loss_per_volt",
    "loss_per_kelvin",
    "above_db",
    "below_db",
    "gain_in_the_dark",
    "sag_power_dbm",
    "current_limit_a",
    "set",
    "lost_db",
    "left_gain",
    "left_lost_db",
];

/// Whether every number of an answer is one, and no text shows one that is none.
pub fn all_finite(value: &Value, name: &str) -> Result<(), String> {
    match value {
        Value::Null if MAY_BE_ABSENT.contains(&name) => Ok(()),
        Value::Null => Err(format!("{name} is no number")),
        Value::Array(items) => items.iter().try_for_each(|item| all_finite(item, "an item")),
        Value::Object(entries) => entries.iter().try_for_each(|(key, item)| all_finite(item, key)),
        Value::String(text) if text.contains("NaN") || text.contains("inf ") => {
            Err(format!("{name} shows “{text}”"))
        }
        _ => Ok(()),
    }
}

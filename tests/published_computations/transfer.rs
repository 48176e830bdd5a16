//! Detectors compared in turn, through the door.

use crate::support::cases::{Computation, Inputs, Outputs};
use leastlight::door;
use leastlight::tree::Tree;
use serde_json::Value;

pub const ALL: &[(&str, Computation)] = &[("transfer", transfer)];

fn transfer(given: &mut Inputs) -> Result<Outputs, String> {
    let mut tree = |key: &str| given.value(key)?.try_into::<Tree>().map_err(|error| error.to_string());
    let (bench, choices) = (tree("bench")?, tree("choices")?);
    let text = given.word("text")?;
    let found =
        door::transfer_calibration(&text, &bench, &choices).map_err(|faults| format!("{faults:?}"))?;
    let found = serde_json::to_value(found).map_err(|error| error.to_string())?;
    let mut outputs = Outputs::new();
    for name in [
        "correction_factor",
        "scatter_percent",
        "drift_db",
        "type_a_percent",
        "reference_percent",
        "standard_percent",
        "effective_degrees_of_freedom",
        "student_factor",
        "expanded_percent",
    ] {
        let column: Vec<f64> =
            found["rows"].as_array().into_iter().flatten().filter_map(|row| row[name].as_f64()).collect();
        outputs.insert(name, column.into());
    }
    if let Some(k) = Value::as_f64(&found["certificate"]["coverage_factor"]) {
        outputs.insert("coverage_factor", k.into());
    }
    Ok(outputs)
}

//! Logs of readings, through the door.

use crate::support::cases::{Computation, Inputs, Outputs};
use leastlight::door;
use leastlight::tree::Tree;
use serde_json::{Value, json};

pub const ALL: &[(&str, Computation)] = &[("log", log)];

fn log(given: &mut Inputs) -> Result<Outputs, String> {
    let bench = given.value("bench")?.try_into::<Tree>().map_err(|error| error.to_string())?;
    let options = Tree::Map(vec![("bench".to_owned(), bench)]);
    let text = given.word("text")?;
    let log = door::read_log(&text, &options).map_err(|refused| format!("{:?}", refused.faults))?;
    let log = json!(log);
    let mut outputs = Outputs::new();
    let mut take = |name: String, value: &Value| {
        if let Some(number) = value.as_f64() {
            // Names live as long as the table of what is expected does.
            outputs.insert(Box::leak(name.into_boxed_str()), number.into());
        }
    };
    for name in ["rows", "read"] {
        take(name.to_owned(), &log["counts"][name]);
    }
    for whose in ["raw", "corrected"] {
        let summary = &log[whose];
        for name in ["mean_w", "mean_dbm", "standard_deviation_w", "drift_w_per_h", "drift_percent_per_h"] {
            take(format!("{whose}_{name}"), &summary[name]);
        }
        for end in ["least", "greatest"] {
            take(format!("{whose}_{end}_w"), &summary[end]["power_w"]);
            take(format!("{whose}_{end}_line"), &summary[end]["line"]);
        }
    }
    take("expanded_percent".to_owned(), &log["correction"]["expanded_percent"]);
    Ok(outputs)
}

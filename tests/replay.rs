//! Writes what the native core answers, for the checks that put the same questions to the built page's core and
//! compare bit by bit (tests/node/, tests/browser/). Each line of target/replay.jsonl is a call and its result.

use leastlight::door;
use leastlight::tree::Tree;
use serde_json::{Value, json};
use std::fmt::Write;

/// Benches that reach every branch of the physics: kinds, formats, thresholds, limits, failures.
fn benches() -> Vec<Value> {
    let good: Value =
        serde_json::from_str(include_str!("faults/bench.json")).expect("the good bench is JSON");
    let demo = serde_json::to_value(door::demo()).expect("the demonstration bench is JSON");
    let mut benches = vec![good.clone(), demo];
    let mut vary = |pointer: &str, values: &[Value]| {
        for value in values {
            let mut bench = good.clone();
            *bench.pointer_mut(pointer).expect("the good bench has it") = value.clone();
            benches.push(bench);
        }
    };
    vary("/source/format", &[json!("pam4")]);
    vary("/source/extinction_ratio_db", &[json!(null), json!(0.05), json!(3.3), json!(23.7)]);
    vary("/source/rin_db_per_hz", &[json!(null), json!(-121.3), json!(-105)]);
    vary("/source/wavelength_nm", &[json!(1313.7), json!(1488.88), json!(1601.3), json!(1649)]);
    vary("/path/loss_db", &[json!(7.77), json!(0.31)]);
    vary("/detector/avalanche", &[json!(null)]);
    vary("/detector/avalanche/gain", &[json!(1), json!(3.7), json!(77)]);
    vary("/detector/avalanche/ionisation_ratio", &[json!(0), json!(1), json!(0.03)]);
    vary(
        "/detector/responsivity",
        &[
            json!({ "kind": "quantum_efficiency", "efficiency": 0.713 }),
            json!({ "kind": "table", "points": [
            { "wavelength_nm": 1310, "a_per_w": 0.81 }, { "wavelength_nm": 1500, "a_per_w": 0.97 },
            { "wavelength_nm": 1600, "a_per_w": 0.91 }, { "wavelength_nm": 1640, "a_per_w": 0.63 } ] }),
        ],
    );
    vary(
        "/detector/avalanche",
        &[
            json!({ "gain": 7, "excess_noise": { "kind": "power", "exponent": 0.71 }, "gain_bandwidth_hz": 9.3e9,
                    "bias": { "kind": "miller", "breakdown_v": 43.7, "miller_exponent": 1.77, "series_resistance_ohm": 1e6,
                              "set_v": 45.1, "breakdown_v_per_k": 0.093, "reference_temperature_c": 22,
                              "table_from_c": -40, "table_to_c": 85, "table_step_k": 12.5 } }),
            json!({ "gain": 7, "ionisation_ratio": 0.41,
                    "excess_noise": { "kind": "table", "points": [
                        { "gain": 3, "factor": 2.2 }, { "gain": 9, "factor": 4.9 }, { "gain": 28, "factor": 14.1 } ] },
                    "bias": { "kind": "table", "points": [
                        { "bias_v": 21, "gain": 1.1 }, { "bias_v": 37.7, "gain": 4.2 }, { "bias_v": 41.2, "gain": 33 } ],
                        "set_v": 36.6, "series_resistance_ohm": 470 } }),
        ],
    );
    vary("/detector/avalanche/bias/breakdown_v_per_k", &[json!(-4.9), json!(0)]);
    vary(
        "/amplifier/noise",
        &[
            json!({ "kind": "rms", "current_a": 0 }),
            json!({ "kind": "density", "a_per_rthz": 7.1e-12 }),
            json!({ "kind": "resistor", "ohm": 51, "noise_figure_db": 4.3, "temperature_k": 291 }),
        ],
    );
    vary("/amplifier/filter", &[json!("rectangular"), json!("first_order"), json!("butterworth2")]);
    vary("/decision/target_error_ratio", &[json!(1e-30), json!(0.4), json!(2.4e-4)]);
    vary("/decision/threshold", &[json!("midpoint"), json!("q")]);
    vary("/surroundings/background_power_w", &[json!(3.3e-7)]);
    vary("/meter/set_wavelength_nm", &[json!(1550), json!(1500.1), json!(850)]);
    vary("/meter/certificate/form", &[json!("correction_factor")]);
    // Counted electrons: smooth, few beside little noise, whole, four levels.
    let exact = |pointer: &str, value: Value| {
        let mut bench = good.clone();
        bench["decision"]["statistics"] = json!("exact");
        *bench.pointer_mut(pointer).expect("the good bench has it") = value;
        bench
    };
    benches.push(exact("/title", json!("counted")));
    benches.push(exact("/decision/threshold", json!("midpoint")));
    benches.push(exact("/detector/avalanche", json!(null)));
    benches.push(exact("/detector/avalanche/ionisation_ratio", json!(1)));
    benches.push(exact("/amplifier/noise/current_a", json!(1e-9)));
    benches.push(exact("/source/format", json!("pam4")));
    let mut robust = serde_json::to_value(door::demo()).expect("the demonstration bench is JSON");
    robust["measurements"]["estimator"] = json!("huber");
    robust["measurements"]["unity_gain_v"] = json!(12);
    benches.push(robust);
    benches
}

#[test]
fn native_answers_are_written_for_the_page_to_repeat() {
    let mut lines = String::new();
    let mut answers = 0;
    for bench in benches() {
        for question in ["sensitivity", "reading", "avalanche_bias", "device_fit"] {
            let tree = Tree::from_json(&bench.to_string()).expect("JSON");
            let options = match question {
                "sensitivity" => json!({
                    "sweep": { "pointer": "/path/loss_db", "from": 0.1, "to": 9.7, "points": 7, "scale": "log" },
                    "solve": { "pointer": "/amplifier/bandwidth_hz", "answer": "average_power_dbm", "equals": -32,
                               "from": 1e8, "to": 1e10, "scale": "log" },
                }),
                _ => json!(null),
            };
            let asked = door::ask(question, &tree, &Tree::from_json(&options.to_string()).expect("JSON"));
            answers += usize::from(asked.is_ok());
            let result = match asked {
                Ok(answer) => json!({ "answer": answer }),
                Err(faults) => json!({ "faults": faults }),
            };
            let call = json!({ "question": question, "bench": bench, "options": options, "result": result });
            writeln!(lines, "{call}").expect("a string takes text");
        }
    }
    assert!(answers > 60, "only {answers} questions were answered");
    let file = concat!(env!("CARGO_MANIFEST_DIR"), "/target/replay.jsonl");
    std::fs::create_dir_all(concat!(env!("CARGO_MANIFEST_DIR"), "/target")).expect("target/ can be made");
    std::fs::write(file, lines).expect("target/replay.jsonl can be written");
}

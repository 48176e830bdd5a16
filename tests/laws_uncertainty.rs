//! Laws of uncertainty for any bench, random from a fixed seed.
#![cfg(not(target_arch = "wasm32"))]

use leastlight::door;
use leastlight::tree::Tree;
use proptest::prelude::*;
use proptest::test_runner::{Config, RngSeed};
use serde_json::{Value, json};

fn fixed() -> Config {
    Config { cases: 64, rng_seed: RngSeed::Fixed(20_261_201), failure_persistence: None, ..Config::default() }
}

fn tree(value: &Value) -> Tree {
    Tree::from_json(&value.to_string()).expect("JSON")
}

fn asked(question: &str, bench: &Value, doubts: &Value) -> Value {
    let options = json!({ "uncertainty": doubts });
    let asked = door::ask(question, &tree(bench), &tree(&options));
    serde_json::to_value(asked.unwrap_or_else(|faults| panic!("{faults:?}"))).expect("JSON")
}

fn number(value: &Value) -> f64 {
    value.as_f64().unwrap_or_else(|| panic!("{value} is no number"))
}

fn good_bench() -> Value {
    serde_json::from_str(include_str!("faults/bench.json")).expect("the good bench")
}

/// Doubts of a reading: amounts that keep the answer inside the certificate.
fn doubts() -> impl Strategy<Value = Vec<Value>> {
    let shape = prop_oneof![Just("rectangular"), Just("triangular"), Just("arcsine")];
    let amount = 1e-4..0.05;
    let one = (prop_oneof![Just("/meter/reading_dbm"), Just("/source/wavelength_nm"), Just("/meter/certificate/scale")], shape, amount)
        .prop_map(|(pointer, shape, amount)| json!({ "pointer": pointer, "half_width": amount, "distribution": shape }));
    prop::collection::vec(one, 1..5)
}

proptest! {
    #![proptest_config(fixed())]

    #[test]
    fn the_shares_of_a_budget_add_up_to_one_and_its_parts_to_the_whole(inputs in doubts()) {
        let found = &asked("reading", &good_bench(), &json!({ "inputs": inputs }))["uncertainty"];
        let rows = found["budget"].as_array().expect("a budget");
        let shares: f64 = rows.iter().map(|row| number(&row["share"])).sum();
        prop_assert!((shares - 1.0).abs() < 1e-12, "{shares}");
        let squares: f64 = rows.iter().map(|row| number(&row["contribution"]).powi(2)).sum();
        prop_assert!((squares.sqrt() / number(&found["standard"]) - 1.0).abs() < 1e-12);
        for row in rows {
            let product = number(&row["standard"]) * number(&row["sensitivity"]).abs();
            prop_assert!((product - number(&row["contribution"])).abs() <= 1e-12 * number(&found["standard"]));
        }
    }

    #[test]
    fn the_order_of_the_doubts_does_not_matter(inputs in doubts()) {
        let backwards: Vec<Value> = inputs.iter().rev().cloned().collect();
        let of = |inputs: &[Value]| number(&asked("reading", &good_bench(), &json!({ "inputs": inputs }))["uncertainty"]["standard"]);
        prop_assert!((of(&inputs) / of(&backwards) - 1.0).abs() < 1e-9);
    }

    #[test]
    fn twice_the_doubt_is_twice_the_uncertainty(amount in 1e-4..0.02, shape in prop_oneof![Just("rectangular"), Just("arcsine")]) {
        // Without the certificate's own uncertainty there is nothing beside the doubt.
        let mut bench = good_bench();
        for point in bench["meter"]["certificate"]["points"].as_array_mut().expect("points") {
            point["expanded_percent"] = Value::Null;
        }
        let of = |amount: f64| {
            let doubt = json!({ "pointer": "/meter/certificate/scale", "half_width": amount, "distribution": shape });
            number(&asked("reading", &bench, &json!({ "inputs": [doubt] }))["uncertainty"]["expanded"])
        };
        prop_assert!((of(2.0 * amount) / of(amount) - 2.0).abs() < 1e-9);
        let times = json!({ "pointer": "/meter/certificate/scale", "half_width": amount, "distribution": shape, "times": 2 });
        let twice = number(&asked("reading", &bench, &json!({ "inputs": [times] }))["uncertainty"]["expanded"]);
        prop_assert!((twice / of(2.0 * amount) - 1.0).abs() < 1e-12);
    }

    #[test]
    fn per_cent_and_decibel_and_watts_say_the_same_when_they_are_small(percent in 0.001..0.2) {
        let of = |doubt: Value| number(&asked("reading", &good_bench(), &json!({ "inputs": [doubt] }))["uncertainty"]["standard"]);
        let relative = of(json!({ "pointer": "/meter/reading_dbm", "standard": percent / 100.0, "relative": true }));
        let level = of(json!({ "pointer": "/meter/reading_dbm", "standard": percent / 100.0 * 10.0 / std::f64::consts::LN_10 }));
        prop_assert!((relative / level - 1.0).abs() < 1e-8);
        let scale = of(json!({ "pointer": "/meter/certificate/scale", "standard": percent / 100.0, "relative": true }));
        prop_assert!((relative / scale - 1.0).abs() < 1e-8);
        let decibel = of(json!({ "pointer": "/meter/certificate/scale", "standard": percent / 100.0 * 10.0 / std::f64::consts::LN_10, "decibel": true }));
        prop_assert!((decibel / scale - 1.0).abs() < 1e-8);
    }

    #[test]
    fn trials_of_a_straight_model_confirm_the_budget(first in 1e-4..2e-3, second in 1e-4..2e-3, seed in 0u32..1000) {
        // Small relative doubts: the reading is straight over them to the second figure of u.
        let inputs = json!([
            { "pointer": "/meter/reading_dbm", "standard": first, "relative": true },
            { "pointer": "/meter/certificate/scale", "standard": second, "relative": true },
        ]);
        let doubts = json!({ "inputs": inputs, "monte_carlo": { "trials": 20000, "seed": seed } });
        let found = &asked("reading", &good_bench(), &doubts)["uncertainty"];
        let (u, run) = (number(&found["standard"]), &found["monte_carlo"]);
        // Six standard errors, and the bend of 1/R: odds of chance below 1e-8 for each of 64 cases.
        prop_assert!((number(&run["mean"]) - number(&found["estimate"])).abs() < 6.0 * u / 20_000f64.sqrt() + 0.01 * u);
        prop_assert!((number(&run["standard"]) / u - 1.0).abs() < 6.0 / 40_000f64.sqrt() + 0.01);
        prop_assert_eq!(number(&run["failed"]), 0.0);
    }

    #[test]
    fn whole_correlation_of_opposite_effects_takes_away(standard in 1e-4..5e-3) {
        // The reading raises the power, the scale of the responsivity lowers it.
        let of = |r: f64| -> f64 {
            let inputs = json!([
                { "pointer": "/meter/reading_dbm", "standard": standard, "relative": true },
                { "pointer": "/meter/certificate/scale", "standard": standard, "relative": true },
            ]);
            let mut bench = good_bench();
            for point in bench["meter"]["certificate"]["points"].as_array_mut().expect("points") {
                point["expanded_percent"] = Value::Null;
            }
            let found = asked("reading", &bench, &json!({ "inputs": inputs, "correlations": [[0, 1, r]] }));
            number(&found["uncertainty"]["standard"]) / number(&found["uncertainty"]["estimate"])
        };
        prop_assert!(of(1.0) < 1e-9, "{}", of(1.0));
        let twice: f64 = 2.0 * standard;
        prop_assert!((of(-1.0) / twice - 1.0).abs() < 1e-7);
        let root: f64 = standard * 2f64.sqrt();
        prop_assert!((of(0.0) / root - 1.0).abs() < 1e-7);
    }

    #[test]
    fn nothing_that_is_stated_as_a_doubt_makes_the_door_panic_or_answer_no_number(
        pointer in prop::sample::select(door::field_rows().iter().map(|row| row.pointer).collect::<Vec<_>>()),
        amount in prop_oneof![Just(0.0), 1e-12..1e-3, 1e-3..10.0, Just(1e15)],
        relative in any::<bool>(),
        question in prop_oneof![Just("reading"), Just("sensitivity")],
    ) {
        let doubt = json!({ "pointer": pointer, "standard": amount, "relative": relative });
        let options = json!({ "uncertainty": { "inputs": [doubt], "monte_carlo": { "trials": 100 } } });
        if let Ok(asked) = door::ask(question, &tree(&good_bench()), &tree(&options)) {
            // JSON has no NaN: serde writes null where a number is none, and then this is no number.
            let value = serde_json::to_value(&asked).expect("JSON");
            let found = &value["uncertainty"];
            if !found.is_null() {
                for key in ["estimate", "standard", "coverage_factor", "expanded"] {
                    prop_assert!(found[key].is_number(), "{pointer} {amount}: {key} is {}", found[key]);
                }
            }
        }
    }
}

#[test]
fn what_is_shown_and_typed_again_is_the_same_bench() {
    let demo = door::demo();
    let typed = door::write_doubts(&demo, "point").expect("the demonstration bench");
    let mut typed_bench = demo.clone();
    *typed_bench.get_mut("uncertainty").expect("doubts") = typed;
    let understood = door::understand(&typed_bench, "point");
    assert_eq!(understood.faults, vec![]);
    let again = serde_json::to_string(&understood.bench.uncertainty).expect("JSON");
    let read =
        door::read_bench(&serde_json::to_string(&demo).expect("JSON")).expect("the demonstration bench");
    assert_eq!(again, serde_json::to_string(&read.uncertainty).expect("JSON"));
}

#[test]
fn typed_amounts_are_taken_in_their_unit_in_per_cent_or_in_decibel() {
    let amount = |pointer: &str, text: &str| {
        let mut bench = serde_json::to_value(door::demo()).expect("JSON");
        bench["uncertainty"] = json!({ "inputs": [{ "pointer": pointer, "standard": text }] });
        let found = door::understand(&tree(&bench), "auto");
        assert_eq!(found.faults, vec![], "{text}");
        serde_json::to_value(&found.bench.uncertainty).expect("JSON")["inputs"][0].clone()
    };
    let one = amount("/meter/reading_dbm", "0,3 %");
    assert_eq!((one["standard"].as_f64(), one["relative"].as_bool()), (Some(0.003), Some(true)));
    let one = amount("/meter/reading_dbm", "0.02 dB");
    assert_eq!((one["standard"].as_f64(), one.get("decibel")), (Some(0.02), None));
    let one = amount("/detector/responsivity/a_per_w", "0.1 dB");
    assert_eq!((one["standard"].as_f64(), one["decibel"].as_bool()), (Some(0.1), Some(true)));
    let one = amount("/detector/dark_current_bulk_a", "2 nA");
    assert_eq!((one["standard"].as_f64(), one.get("relative")), (Some(2e-9), None));
    let one = amount("/surroundings/temperature_c", "2 K");
    assert_eq!(one["standard"].as_f64(), Some(2.0), "a difference of temperatures is no temperature");
}

#[test]
fn no_such_power_has_no_uncertainty_and_says_so() {
    let mut bench = good_bench();
    bench["source"]["rin_db_per_hz"] = json!(-90.0);
    let found = asked(
        "sensitivity",
        &bench,
        &json!({ "inputs": [{ "pointer": "/source/rin_db_per_hz", "standard": 1.0 }] }),
    );
    assert!(
        found["average_power_w"].is_null() && found.get("uncertainty").is_none(),
        "{}",
        found["none_because"]
    );
}

#[test]
fn repeated_readings_give_the_number_that_the_bench_lacks() {
    let mut bench = good_bench();
    bench["meter"]["reading_dbm"] = Value::Null;
    bench["uncertainty"] =
        json!({ "inputs": [{ "pointer": "/meter/reading_dbm", "readings": [-20.0, -20.2, -20.1] }] });
    let asked = door::ask("reading", &tree(&bench), &Tree::Null).expect("the mean is a reading");
    let found = serde_json::to_value(asked).expect("JSON");
    // Averaged as powers: 10 µW, 9.5499 µW, 9.7724 µW.
    let mean_w = (1e-5 + 9.549_925_860_214_36e-6 + 9.772_372_209_558_1e-6) / 3.0;
    assert!((number(&found["reading_w"]) / mean_w - 1.0).abs() < 1e-12);
    let row = &found["uncertainty"]["budget"].as_array().expect("a budget")[0];
    assert!(number(&found["uncertainty"]["effective_degrees_of_freedom"]) >= 2.0, "{row}");
}

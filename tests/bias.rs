//! What is said about a bias: reasons why there is none, limits that bind, and tables of a device as people paste them.
#![cfg(not(target_arch = "wasm32"))]

use leastlight::bench::avalanche::NoiseFactorPoint;
use leastlight::bench::bias::GainPoint;
use leastlight::door;
use leastlight::record::{
    Choices, DecimalMark, read_gains, read_noise_factors, write_gain_points, write_noise_factor_points,
};
use leastlight::tree::Tree;
use proptest::prelude::*;
use serde_json::{Value, json};

/// The good bench with values at pointers.
fn bench(set: &[(&str, Value)]) -> Value {
    let mut bench: Value = serde_json::from_str(include_str!("faults/bench.json")).expect("the good bench");
    for (pointer, value) in set {
        let (parent, key) = pointer.rsplit_once('/').expect("a pointer begins with a slash");
        bench.pointer_mut(parent).expect("the good bench has it")[key] = value.clone();
    }
    bench
}

fn asked(set: &[(&str, Value)]) -> Value {
    let tree = Tree::from_json(&bench(set).to_string()).expect("JSON");
    let answer =
        door::ask("avalanche_bias", &tree, &Tree::Null).unwrap_or_else(|faults| panic!("{faults:?}"));
    serde_json::to_value(answer).expect("JSON")
}

fn reason(set: &[(&str, Value)]) -> String {
    let answer = asked(set);
    assert_eq!(answer["shown"]["headline"]["figure"], "No such bias", "{set:?}");
    assert!(answer["bias_v"].is_null() && answer["table"].as_array().is_some_and(Vec::is_empty));
    answer["none_because"]["reason"].as_str().expect("a reason").to_owned()
}

#[test]
fn no_such_bias_is_an_answer_with_its_reason() {
    let table = |points: Value| ("/detector/avalanche/bias", json!({ "kind": "table", "points": points }));
    for (set, says) in [
        // In the closed form's own limit, where it has no end either.
        (
            vec![
                ("/detector/avalanche/ionisation_ratio", json!(0)),
                ("/detector/dark_current_bulk_a", Value::Null),
                ("/detector/dark_current_surface_a", Value::Null),
                ("/source/extinction_ratio_db", Value::Null),
                ("/source/rin_db_per_hz", Value::Null),
                ("/decision/threshold", json!("q")),
            ],
            "more gain always helps",
        ),
        (
            vec![("/amplifier/noise/current_a", json!(0)), ("/detector/dark_current_surface_a", Value::Null)],
            "any gain harms",
        ),
        (vec![("/source/rin_db_per_hz", json!(-100))], "intensity noise grows with the light"),
        (vec![("/detector/avalanche/gain_bandwidth_hz", json!(1e9))], "any gain makes the detector too slow"),
        (
            vec![
                ("/detector/avalanche/bias/breakdown_v_per_k", json!(9)),
                ("/surroundings/temperature_c", json!(-40)),
            ],
            "breakdown voltage would fall to 0 at −40 °C",
        ),
        (
            vec![table(json!([{ "bias_v": 30, "gain": 1 }, { "bias_v": 40, "gain": 3 }]))],
            "reaches from 1.00 to 3.00",
        ),
    ] {
        let reason = reason(&set);
        assert!(reason.contains(says), "{says}: {reason}");
    }
}

#[test]
fn what_is_doubtful_is_said() {
    let doubts = |set: &[(&str, Value)]| asked(set)["shown"]["doubts"].to_string();
    let quiet = ("/amplifier/noise/current_a", json!(4e-9));
    assert!(doubts(&[quiet]).contains("a PIN photodiode would do all but as well"));
    let resistance = ("/detector/avalanche/bias/series_resistance_ohm", json!(2e6));
    assert!(doubts(std::slice::from_ref(&resistance)).contains("above breakdown: only the drop"));
    let most = ("/detector/avalanche/bias/maximum_current_a", json!(1e-6));
    let answer = asked(std::slice::from_ref(&most));
    assert_eq!(answer["current_limit_a"], 1e-6, "never above what the detector bears");
    assert!(answer["shown"]["doubts"].to_string().contains("above the 1.00 µA that the detector bears"));
    let slow = ("/detector/bandwidth_hz", json!(1e9));
    assert!(doubts(std::slice::from_ref(&slow)).contains("At the best gain the detector passes 1.00 GHz"));
    let coefficient = ("/detector/avalanche/bias/breakdown_v_per_k", Value::Null);
    assert!(doubts(std::slice::from_ref(&coefficient)).contains("Without a temperature coefficient"));
    // 60 V less 0.2 V for 2 K below the reference, by hand.
    assert!((asked(&[])["breakdown_v"].as_f64().unwrap_or(0.0) - 59.8).abs() < 1e-12);
}

#[test]
fn speed_and_what_is_known_of_the_noise_limit_the_gain() {
    let answer = asked(&[
        ("/detector/avalanche/gain_bandwidth_hz", json!(8e10)),
        ("/amplifier/bandwidth_hz", json!(6.4e9)),
        ("/amplifier/noise/current_a", json!(3e-6)),
    ]);
    assert_eq!(answer["best_gain_limit"], "gain_bandwidth");
    assert_eq!(answer["best_gain"], 12.5, "80 GHz over 6.4 GHz");
    assert_eq!(asked(&[])["best_gain_limit"], "noise");
    let table =
        json!({ "kind": "table", "points": [{ "gain": 3, "factor": 2 }, { "gain": 6, "factor": 3.2 }] });
    let answer = asked(&[("/detector/avalanche/excess_noise", table)]);
    assert_eq!((&answer["best_gain_limit"], &answer["best_gain"]), (&json!("noise_table"), &json!(6.0)));
}

#[test]
fn the_valley_is_told_by_the_lowest_gain_that_is_all_but_as_good() {
    let answer = asked(&[]);
    let near = answer["near_gain"].as_f64().expect("a gain");
    let best = answer["best_gain"].as_f64().expect("a gain");
    assert!(1.0 < near && near < best, "{near} below {best}");
    let mut there = bench(&[("/detector/avalanche/gain", json!(near))]);
    there["detector"]["avalanche"]["bias"] = Value::Null;
    let tree = Tree::from_json(&there.to_string()).expect("JSON");
    let there =
        serde_json::to_value(door::ask("sensitivity", &tree, &Tree::Null).expect("an answer")).expect("JSON");
    let lost = there["average_power_dbm"].as_f64().expect("a power")
        - answer["average_power_dbm"].as_f64().expect("a power");
    assert!((lost - 0.1).abs() < 1e-9, "{lost} dB");
    assert!(answer["near_bias_v"].as_f64() < answer["bias_v"].as_f64());
}

#[test]
fn a_bias_as_set_beyond_breakdown_says_so() {
    let set = [
        ("/detector/avalanche/bias/set_v", json!(61)),
        ("/detector/avalanche/bias/series_resistance_ohm", Value::Null),
    ];
    let answer = asked(&set);
    assert!(answer["set"]["gain"].is_null());
    assert!(answer["set"]["none_because"].as_str().is_some_and(|why| why.contains("at or above breakdown")));
    assert!(answer["bias_v"].is_number(), "the best bias is there all the same");
    assert!(answer["sag_power_dbm"].is_null(), "without a resistance no light makes the gain sag");
}

#[test]
fn the_bias_table_spans_its_range_and_keeps_the_gain() {
    let range = |from: f64, to: f64, step: f64| {
        let at = |key: &str| format!("/detector/avalanche/bias/{key}");
        let set = [(at("table_from_c"), from), (at("table_to_c"), to), (at("table_step_k"), step)];
        let set: Vec<(&str, Value)> = set.iter().map(|(at, value)| (at.as_str(), json!(value))).collect();
        let rows = asked(&set)["table"].clone();
        let rows = rows.as_array().expect("rows").clone();
        rows.iter().map(|row| row["temperature_c"].as_f64().expect("a temperature")).collect::<Vec<_>>()
    };
    assert_eq!(range(-10.0, 20.0, 10.0), [-10.0, 0.0, 10.0, 20.0]);
    assert_eq!(range(0.0, 25.0, 10.0), [0.0, 10.0, 20.0, 25.0], "its end is always there");
    // A third of a kelvin is no binary number: the end must be there once.
    assert_eq!(range(0.0, 1.0, 1.0 / 3.0).len(), 4);
    let answer = asked(&[]);
    let rows = answer["table"].as_array().expect("rows");
    let shown = answer["shown"]["tables"][0]["rows"].as_array().expect("rows").len();
    assert_eq!((rows.len(), shown), (13, 13), "0 to 60 °C by 5 K where nothing is said");
}

#[test]
fn tables_of_a_device_are_read_as_people_write_them() {
    let gains = |text: &str| {
        read_gains(text, &Choices::default()).unwrap_or_else(|faults| panic!("{text:?}: {faults:?}"))
    };
    let two = [GainPoint { bias_v: 40.5, gain: 2.25 }, GainPoint { bias_v: 50.0, gain: 8.5 }];
    for text in [
        "40.5\t2.25\n50\t8.5",
        "Bias (V),Gain\n40.5,2.25\n50,8.5\n",
        "Gain;Bias / V\n2,25;40,5\n8,5;50\n",
        "Sperrspannung [V]\tVerstärkung M\n50\t8,5\n40,5\t2,25\n",
        "V\tM\n40.5 V\t2.25\n50 V\t8.5\n",
        "Voltage (mV),Multiplication\n40500,2.25\n50000,8.5\n",
    ] {
        assert_eq!(gains(text).points, two, "{text:?}");
    }
    let table = gains("Bias (V),Gain\n30,0.98\n40.5,2.25\n40.5,2.3\nfifty,8\n50,8.5\n");
    assert_eq!(table.points, two);
    let bad: Vec<usize> = table.reading.bad_rows.iter().map(|row| row.line).collect();
    assert_eq!(bad, [2, 5], "a gain below 1 and a word are named by their lines");
    assert!(table.reading.bad_rows[0].sentence.contains("must lie between 1 and 1000000; it is 0.98"));
    assert!(table.reading.cleaned.iter().any(|said| said.contains("the first was kept; 1 were left out")));

    let text = "Gain\tExcess noise factor F\n5\t2.9\n10\t5.3\n";
    let factors = read_noise_factors(text, &Choices::default()).expect("a table").points;
    assert_eq!(factors[1], NoiseFactorPoint { gain: 10.0, factor: 5.3 });
    let swapped = "F (noise factor)\tM (gain)\n2.9\t5\n5.3\t10\n";
    assert_eq!(read_noise_factors(swapped, &Choices::default()).expect("a table").points, factors);
}

#[test]
fn typed_tables_become_the_device_on_the_bench() {
    let typed = json!({ "detector": { "avalanche": {
        "gain": "8",
        "excess_noise": { "kind": "table", "table": { "text": "5;2,9\n10;5,3" } },
        "bias": { "kind": "table", "breakdown_v": "56,4 V", "breakdown_v_per_k": "110 mV/K", "table": { "text": "40;2,25\n50;8,5" } },
    } } });
    let made = door::understand(&Tree::from_json(&typed.to_string()).expect("JSON"), "comma");
    assert!(made.faults.is_empty(), "{:?}", made.faults);
    let made = serde_json::to_value(&made.bench).expect("JSON");
    let avalanche = &made["detector"]["avalanche"];
    assert_eq!(avalanche["bias"]["points"][1], json!({ "bias_v": 50.0, "gain": 8.5 }));
    assert_eq!(avalanche["bias"]["breakdown_v_per_k"], 0.11);
    assert_eq!(avalanche["excess_noise"]["points"][0], json!({ "gain": 5.0, "factor": 2.9 }));
    // And back into text for the page.
    let bench = Tree::from_json(&made.to_string()).expect("JSON");
    let text = |pointer: &str| door::write_table(pointer, &bench, "comma").expect("a sound bench");
    assert_eq!(text("/detector/avalanche/bias"), "Bias / V\tGain\n40\t2,25\n50\t8,5\n");
    assert_eq!(text("/detector/avalanche/excess_noise"), "Gain\tExcess noise factor\n5\t2,9\n10\t5,3\n");
}

proptest! {
    #![proptest_config(ProptestConfig { failure_persistence: None, rng_seed: proptest::test_runner::RngSeed::Fixed(1955), ..ProptestConfig::default() })]

    #[test]
    fn a_table_that_was_written_is_read_back_to_the_bit(values in prop::collection::vec((1.0..9.9e3f64, 1.0..1e5f64), 1..20), comma: bool) {
        let mark = if comma { DecimalMark::Comma } else { DecimalMark::Point };
        let mut gains: Vec<GainPoint> = values.iter().map(|(bias_v, gain)| GainPoint { bias_v: *bias_v, gain: *gain }).collect();
        gains.sort_by(|one, next| one.bias_v.total_cmp(&next.bias_v));
        gains.dedup_by(|next, one| next.bias_v == one.bias_v);
        let text = write_gain_points(&gains, mark);
        prop_assert_eq!(read_gains(&text, &Choices::default()).map(|table| table.points), Ok(gains), "{}", text);
        let mut factors: Vec<NoiseFactorPoint> = values.iter().map(|(gain, factor)| NoiseFactorPoint { gain: *gain, factor: *factor }).collect();
        factors.sort_by(|one, next| one.gain.total_cmp(&next.gain));
        factors.dedup_by(|next, one| next.gain == one.gain);
        let text = write_noise_factor_points(&factors, mark);
        prop_assert_eq!(read_noise_factors(&text, &Choices::default()).map(|table| table.points), Ok(factors), "{}", text);
    }

    #[test]
    fn nothing_that_is_pasted_makes_the_readers_panic(text in "[ -~µ,;\t\n]{0,200}") {
        let _ = read_gains(&text, &Choices::default());
        let _ = read_noise_factors(&text, &Choices::default());
    }
}

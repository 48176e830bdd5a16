//! Laws that hold for any bench: what the door never does, and what must be true of its answers.
//!
//! The random benches are drawn from a fixed seed, so a failure is not chance and comes again.

#![allow(clippy::disallowed_methods)] // tests run natively only

#[path = "support/finite.rs"]
mod finite;

use finite::all_finite;
use leastlight::bench::field::fields;
use leastlight::door;
use leastlight::quantity::kind::{self, Kind};
use leastlight::quantity::number::DecimalMark;
use leastlight::quantity::read::read;
use leastlight::quantity::write;
use leastlight::tree::Tree;
use proptest::prelude::*;
use proptest::test_runner::{RngAlgorithm, RngSeed};
use serde_json::{Value, json};

fn fixed_seed(cases: u32) -> ProptestConfig {
    ProptestConfig {
        cases,
        rng_algorithm: RngAlgorithm::ChaCha,
        rng_seed: RngSeed::Fixed(0x001e_a571_1947),
        failure_persistence: None,
        ..ProptestConfig::default()
    }
}

fn tree(value: &Value) -> Tree {
    Tree::from_json(&value.to_string()).expect("JSON made here is JSON")
}

fn asked(question: &str, bench: &Value) -> Result<Value, String> {
    let answer = door::ask(question, &tree(bench), &Tree::Null);
    answer
        .map(|answer| serde_json::to_value(answer).expect("an answer is JSON"))
        .map_err(|faults| format!("{faults:?}"))
}

fn good_bench() -> Value {
    serde_json::from_str(include_str!("faults/bench.json")).expect("the good bench is JSON")
}

/// A bench within the limits of the fields, edges included.
fn any_bench() -> impl Strategy<Value = Value> {
    let ratio = prop_oneof![Just(0.0), Just(1.0), 0.0..=1.0];
    let gain = prop_oneof![Just(1.0), 1.0..300.0, Just(1e6)];
    let extinction = prop_oneof![Just(Value::Null), Just(json!(0.05)), (0.05..40.0).prop_map(|db| json!(db))];
    let noise = prop_oneof![Just(0.0), (-12.0..-4.0).prop_map(|exponent: f64| 10f64.powi(exponent as i32))];
    let dark = prop_oneof![Just(Value::Null), Just(json!(0.0)), (1e-12..1e-6).prop_map(|a| json!(a))];
    let rin = prop_oneof![Just(Value::Null), (-170.0..-90.0).prop_map(|db| json!(db))];
    let target = prop_oneof![Just(1e-30), Just(0.4), Just(1e-12), 1e-15..0.49];
    let words =
        (prop_oneof![Just("nrz"), Just("pam4")], prop_oneof![Just("optimum"), Just("midpoint"), Just("q")]);
    let pin = any::<bool>();
    let responsivity = prop_oneof![0.01..1.2, Just(5.0)];
    ((ratio, gain, extinction, noise, dark), (rin, target, words, pin, responsivity), 1e6..1e11, 0.0..1e-6)
        .prop_map(
            |(
                (ratio, gain, extinction, noise, dark),
                (rin, target, (format, threshold), pin, responsivity),
                bandwidth,
                background,
            )| {
                let mut bench = good_bench();
                bench["source"]["extinction_ratio_db"] = extinction;
                bench["source"]["rin_db_per_hz"] = rin;
                bench["source"]["format"] = json!(format);
                bench["detector"]["responsivity"]["a_per_w"] = json!(responsivity);
                bench["detector"]["dark_current_bulk_a"] = dark.clone();
                bench["detector"]["dark_current_surface_a"] = dark;
                bench["detector"]["avalanche"] =
                    if pin { Value::Null } else { json!({ "gain": gain, "ionisation_ratio": ratio }) };
                bench["amplifier"]["noise"]["current_a"] = json!(noise);
                bench["amplifier"]["noise_bandwidth_hz"] = json!(bandwidth);
                bench["decision"] = json!({ "target_error_ratio": target, "threshold": threshold });
                bench["surroundings"]["background_power_w"] = json!(background);
                bench
            },
        )
}

/// Any value at all, with keys that a bench knows among others.
fn any_tree() -> impl Strategy<Value = Tree> {
    let keys = [
        "source",
        "path",
        "detector",
        "amplifier",
        "decision",
        "meter",
        "surroundings",
        "gate",
        "schema",
        "title",
        "wavelength_nm",
        "format",
        "responsivity",
        "kind",
        "points",
        "a_per_w",
        "avalanche",
        "gain",
        "noise",
        "certificate",
        "value",
        "form",
        "table",
        "text",
        "choices",
        "loss_db",
        "reading_dbm",
        "table_wavelengths_nm",
        "typical_curve",
        "measurements",
        "iv",
        "bias_v",
        "light_a",
        "bandwidth",
        "bias",
        "excess_noise",
        "breakdown_v",
        "factor",
        "x/y~z",
    ];
    let words = [
        "nrz",
        "value",
        "table",
        "rms",
        "1,5 µW",
        "-28 dBm",
        "",
        "1e400",
        "∞",
        "leastlight.bench/1",
        "850; 980",
    ];
    let number = prop_oneof![
        any::<f64>(),
        Just(0.0),
        Just(1550.0),
        Just(f64::NAN),
        Just(f64::INFINITY),
        Just(-1.0),
        Just(1e308)
    ];
    let leaf = prop_oneof![
        Just(Tree::Null),
        any::<bool>().prop_map(Tree::Bool),
        number.prop_map(Tree::Number),
        prop::sample::select(words.to_vec()).prop_map(Tree::from),
        ".{0,12}".prop_map(Tree::Text),
    ];
    leaf.prop_recursive(5, 60, 8, move |inner| {
        let key = prop::sample::select(keys.to_vec()).prop_map(str::to_owned);
        prop_oneof![
            prop::collection::vec(inner.clone(), 0..4).prop_map(Tree::List),
            prop::collection::vec((key, inner), 0..8).prop_map(Tree::Map),
        ]
    })
}

proptest! {
    #![proptest_config(fixed_seed(400))]

    #[test]
    fn every_bench_within_the_limits_has_an_answer_of_finite_numbers(bench in any_bench()) {
        let answer = asked("sensitivity", &bench);
        prop_assert!(answer.is_ok(), "{answer:?}");
        if let Ok(answer) = answer {
            all_finite(&answer, "the answer").map_err(TestCaseError::fail)?;
            let none = answer["none_because"].is_null();
            prop_assert_eq!(none, answer["average_power_w"].is_number(), "either a power or a reason");
        }
    }

    #[test]
    fn the_shares_of_every_budget_add_up_to_one(bench in any_bench()) {
        let answer = asked("sensitivity", &bench).map_err(TestCaseError::fail)?;
        for (index, level) in answer["levels"].as_array().into_iter().flatten().enumerate() {
            let parts: f64 = level["noise_a2"].as_object().into_iter().flatten().filter_map(|(_, a2)| a2.as_f64()).sum();
            let whole = level["noise_rms_a"].as_f64().unwrap_or(f64::NAN).powi(2);
            prop_assert!((parts - whole).abs() <= 1e-12 * whole, "level {index}: {parts} against {whole}");
        }
        for budget in answer["shown"]["budgets"].as_array().into_iter().flatten() {
            let rows = budget["rows"].as_array().map_or(&[][..], Vec::as_slice);
            let sum: f64 = rows.iter().filter_map(|row| row["share"].as_f64()).sum();
            prop_assert!(rows.is_empty() || (sum - 1.0).abs() < 1e-12, "{sum}");
        }
    }

    #[test]
    fn the_error_ratio_at_the_sensitivity_is_the_target(bench in any_bench()) {
        let answer = asked("sensitivity", &bench).map_err(TestCaseError::fail)?;
        if let Some(dbm) = answer["average_power_dbm"].as_f64().filter(|dbm| (-149.0..59.0).contains(dbm)) {
            let mut there = bench.clone();
            there["source"]["average_power_dbm"] = json!(dbm);
            let answer = asked("sensitivity", &there).map_err(TestCaseError::fail)?;
            let (found, target) = (&answer["error_ratio"], &bench["decision"]["target_error_ratio"]);
            let (found, target) = (found.as_f64().unwrap_or(f64::NAN), target.as_f64().unwrap_or(f64::NAN));
            // By logarithm: a power to thirteen digits fixes the ratio to fewer, the fewer the rarer errors are. Close
            // above an error floor the ratio hardly moves with power, which only helps.
            prop_assert!((found / target).ln().abs() < 1e-8, "{found} against {target}");
        }
    }

    #[test]
    fn more_circuit_noise_never_helps(bench in any_bench(), factor in 1.01f64..10.0) {
        let here = asked("sensitivity", &bench).map_err(TestCaseError::fail)?["average_power_dbm"].as_f64();
        let mut noisier = bench;
        let noise_a = noisier["amplifier"]["noise"]["current_a"].as_f64().unwrap_or(0.0);
        noisier["amplifier"]["noise"]["current_a"] = json!((noise_a * factor).max(1e-9 * factor).min(1.0));
        let there = asked("sensitivity", &noisier).map_err(TestCaseError::fail)?["average_power_dbm"].as_f64();
        if let (Some(here), Some(there)) = (here, there) {
            prop_assert!(noise_a > 1e-9 * factor || there >= here - 1e-9, "{here} dBm, with more noise {there} dBm");
        }
    }

    #[test]
    fn nothing_that_arrives_makes_the_door_panic(bench in any_tree(), options in any_tree()) {
        for question in ["sensitivity", "reading", "avalanche_bias", "device_fit", "?"] {
            if let Ok(answer) = door::ask(question, &bench, &options) {
                let answer = serde_json::to_value(answer).expect("an answer is JSON");
                all_finite(&answer, "the answer").map_err(TestCaseError::fail)?;
            }
        }
        let _ = door::understand(&bench, "auto");
    }

    #[test]
    fn nothing_that_is_pasted_makes_the_readers_panic(text in "[ -~µ,;\t\n]{0,200}") {
        let _ = door::read_certificate(&text, &Tree::Null);
        let _ = door::read_responsivity(&text, &Tree::Null);
        let _ = door::read_bench(&text);
    }

    #[test]
    fn a_typed_text_never_panics_and_never_gives_an_infinity(text in "[-+−]?[0-9., ]{0,8}[eE×^10-]{0,4} ?[a-zA-Zµ/√%°Ω]{0,5}") {
        for field in fields() {
            for mark in [DecimalMark::Auto, DecimalMark::Point, DecimalMark::Comma] {
                if let Ok(number) = read(&text, field.kind, mark) {
                    prop_assert!(number.value.is_finite(), "{} of “{text}”", number.value);
                }
            }
        }
    }
}

proptest! {
    // Where no noise smooths the counts each answer takes a second.
    #![proptest_config(ProptestConfig { max_shrink_iters: 0, ..fixed_seed(60) })]

    #[test]
    fn every_bench_has_an_answer_of_finite_numbers_when_its_electrons_are_counted(bench in any_bench()) {
        let mut bench = bench;
        bench["decision"]["statistics"] = json!("exact");
        if bench["decision"]["threshold"] == json!("q") {
            bench["decision"]["threshold"] = json!("optimum");
        }
        let answer = asked("sensitivity", &bench).map_err(TestCaseError::fail)?;
        all_finite(&answer, "the answer").map_err(TestCaseError::fail)?;
        let none = answer["none_because"].is_null();
        prop_assert_eq!(none, answer["average_power_w"].is_number(), "either a power or a reason");
        // A threshold halfway between whole counts moves in steps.
        // At a gain of a million the transform has no digits left.
        let gain = bench["detector"]["avalanche"]["gain"].as_f64().unwrap_or(1.0);
        let smooth = bench["decision"]["threshold"] == json!("optimum") && gain < 1e4;
        if let Some(dbm) = answer["average_power_dbm"].as_f64().filter(|dbm| smooth && (-149.0..59.0).contains(dbm)) {
            bench["source"]["average_power_dbm"] = json!(dbm);
            let there = asked("sensitivity", &bench).map_err(TestCaseError::fail)?;
            let (found, target) = (&there["error_ratio"], &bench["decision"]["target_error_ratio"]);
            let (found, target) = (found.as_f64().unwrap_or(f64::NAN), target.as_f64().unwrap_or(f64::NAN));
            prop_assert!((found / target).ln().abs() < 1e-5, "{found} against {target}");
        }
    }
}

proptest! {
    #![proptest_config(fixed_seed(2000))]

    #[test]
    fn what_is_written_into_a_field_is_read_back_to_the_bit(exponent in -30i32..14, digits in 1.0f64..10.0, negative: bool) {
        let value = format!("{digits}e{exponent}").parse::<f64>().expect("a number") * if negative { -1.0 } else { 1.0 };
        let kinds: Vec<&'static Kind> = fields().map(|field| field.kind).collect();
        for kind in kinds {
            let text = write::exact(value, kind);
            let back = read(&text, kind, DecimalMark::Point);
            prop_assert_eq!(back.map(|number| number.value), Ok(value), "{} for {}", text, kind.unit);
            let with_comma = text.replace('.', ",");
            let back = read(&with_comma, kind, DecimalMark::Comma);
            prop_assert_eq!(back.map(|number| number.value), Ok(value), "{} for {}", with_comma, kind.unit);
        }
    }

    #[test]
    fn a_level_and_its_power_are_the_same(dbm in -90.0f64..30.0) {
        let typed = read(&format!("{dbm} dBm"), &kind::POWER, DecimalMark::Point).expect("a level is a power");
        let back = read(&format!("{:e} W", typed.value), &kind::POWER_LEVEL, DecimalMark::Point).expect("and back");
        prop_assert!((back.value - dbm).abs() < 1e-12 * dbm.abs().max(1.0), "{dbm} came back as {}", back.value);
    }

    #[test]
    fn a_correction_there_and_back_is_none(there in 1310.0f64..1625.0, back in 1310.0f64..1625.0) {
        let factor = |set: f64, source: f64| {
            let mut bench = good_bench();
            // A single wavelength: the average over a line is no point of the curve.
            bench["source"]["linewidth_nm"] = Value::Null;
            bench["meter"]["set_wavelength_nm"] = json!(set);
            bench["source"]["wavelength_nm"] = json!(source);
            asked("reading", &bench).map(|answer| answer["correction_factor"].as_f64().unwrap_or(f64::NAN))
        };
        let product = factor(there, back).map_err(TestCaseError::fail)? * factor(back, there).map_err(TestCaseError::fail)?;
        prop_assert!((product - 1.0).abs() < 4e-16, "{product}");
    }

    #[test]
    fn twice_the_reading_is_twice_the_power(dbm in -60.0f64..0.0, source in 1310.0f64..1625.0) {
        let power = |dbm: f64| {
            let mut bench = good_bench();
            bench["meter"]["reading_dbm"] = json!(dbm);
            bench["source"]["wavelength_nm"] = json!(source);
            asked("reading", &bench).map(|answer| answer["power_w"].as_f64().unwrap_or(f64::NAN))
        };
        let doubled = power(dbm + 10.0 * 2f64.log10()).map_err(TestCaseError::fail)?;
        let ratio = doubled / power(dbm).map_err(TestCaseError::fail)?;
        prop_assert!((ratio - 2.0).abs() < 1e-13, "{ratio}");
    }
}

#[test]
fn every_field_of_the_table_can_be_reached_or_says_why_not() {
    let typed = door::understand(&tree(&good_bench()), "point");
    assert!(typed.faults.is_empty(), "{:?}", typed.faults);
    let mut bench = typed.bench;
    let unreachable: Vec<&str> =
        fields().filter(|field| (field.place)(&mut bench).is_none()).map(|field| field.pointer).collect();
    // Of three ways to give the responsivity, the excess noise and the circuit noise, the good bench uses one each; and it
    // compares no readings.
    let other_ways = [
        "/detector/responsivity/efficiency",
        "/detector/avalanche/excess_noise/exponent",
        "/amplifier/noise/a_per_rthz",
        "/amplifier/noise/ohm",
        "/amplifier/noise/noise_figure_db",
        "/amplifier/noise/temperature_k",
        "/meter/comparison/reading_dbm",
        "/meter/comparison/set_wavelength_nm",
        "/meter/comparison/wavelength_nm",
    ];
    assert_eq!(unreachable, other_ways);
}

#[test]
fn a_bench_that_was_read_is_written_as_it_came() {
    let bench = door::read_bench(include_str!("faults/bench.json")).expect("the good bench");
    let text = serde_json::to_string(&bench).expect("a bench is JSON");
    assert_eq!(door::read_bench(&text).expect("its own text"), bench);
}

#[test]
fn the_demonstration_bench_answers_every_question() {
    for question in door::questions() {
        let answer = door::ask(question.name, &door::demo(), &Tree::Null);
        assert!(answer.is_ok(), "{}: {answer:?}", question.name);
    }
}

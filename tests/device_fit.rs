//! What must be true of the fits of any device, and what is refused with which words.

#![cfg(not(target_arch = "wasm32"))]
#![allow(clippy::disallowed_methods)] // tests run natively only
use leastlight::door;
use leastlight::physics::avalanche::{bandwidth_hz, excess_noise_factor};
use leastlight::physics::bias::{Biased, Currents, Junction};
use leastlight::physics::miller::Miller;
use leastlight::statistics::normal::upper_tail_quantile;
use leastlight::tree::Tree;
use proptest::prelude::*;
use proptest::test_runner::{RngAlgorithm, RngSeed};
use serde_json::{Value, json};

fn ask(measurements: &Value) -> Result<Value, Vec<leastlight::fault::Fault>> {
    let bench = Tree::from_json(&json!({ "measurements": measurements }).to_string()).expect("JSON");
    let answer = door::ask("device_fit", &bench, &Tree::Null)?;
    Ok(serde_json::to_value(answer).expect("an answer is JSON"))
}

fn fitted(measurements: &Value) -> Value {
    ask(measurements).unwrap_or_else(|faults| panic!("{faults:?}"))
}

fn parameter<'a>(answer: &'a Value, name: &str) -> &'a Value {
    let fits = answer["fits"].as_array().expect("fits");
    let all = fits.iter().flat_map(|fit| fit["parameters"].as_array().expect("parameters"));
    all.into_iter().find(|one| one["name"] == name).unwrap_or_else(|| panic!("{name} in {answer}"))
}

fn value(answer: &Value, name: &str) -> f64 {
    parameter(answer, name)["value"].as_f64().unwrap_or_else(|| panic!("{}", parameter(answer, name)))
}

fn standard(answer: &Value, name: &str) -> f64 {
    parameter(answer, name)["standard"].as_f64().unwrap_or_else(|| panic!("{}", parameter(answer, name)))
}

fn why_not(answer: &Value, name: &str) -> String {
    assert!(parameter(answer, name)["value"].is_null(), "{}", parameter(answer, name));
    parameter(answer, name)["not_determined"].as_str().expect("a sentence").to_owned()
}

/// Normal deviates from a fixed seed: a linear congruential generator (Knuth's MMIX constants) through the normal quantile.
struct Normal(u64);

impl Normal {
    fn next(&mut self) -> f64 {
        self.0 = self.0.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        let uniform = ((self.0 >> 11) as f64 + 0.5) / (1u64 << 53) as f64;
        if uniform < 0.5 { upper_tail_quantile(uniform) } else { -upper_tail_quantile(1.0 - uniform) }
    }
}

struct Device {
    breakdown_v: f64,
    exponent: f64,
    ohm: f64,
    unity_a: f64,
}

impl Device {
    fn light_a(&self, bias_v: f64, dark_a: f64) -> f64 {
        let junction = Junction::Miller(Miller { breakdown_v: self.breakdown_v, exponent: self.exponent });
        let biased = Biased { junction, series_resistance_ohm: self.ohm };
        let currents = Currents { multiplied_a: self.unity_a, beside_a: dark_a };
        dark_a + self.unity_a * biased.operation(bias_v, &currents).expect("a gain").gain
    }

    /// Points from a tenth of breakdown to close to it, `noise` being relative.
    fn iv(&self, count: usize, closest: f64, noise: f64, seed: u64) -> Value {
        let mut normal = Normal(seed);
        let point = |index: usize| {
            let part = 0.1 + (closest - 0.1) * (index as f64 / (count - 1) as f64).sqrt();
            let bias_v = self.breakdown_v * part;
            let light_a = self.light_a(bias_v, 1e-9) * (1.0 + noise * normal.next());
            json!({ "bias_v": bias_v, "dark_a": 1e-9, "light_a": light_a })
        };
        json!({ "points": (0..count).map(point).collect::<Vec<Value>>() })
    }
}

const TELECOM: Device = Device { breakdown_v: 56.4, exponent: 2.6, ohm: 1e4, unity_a: 1e-6 };

fn bandwidths(flat: f64, product: f64, gains: &[f64], noise: f64, normal: &mut Normal) -> Value {
    let point = |gain: &f64| json!({ "gain": gain, "bandwidth_hz": bandwidth_hz(*gain, flat, product) * (noise * normal.next()).exp() });
    json!({ "points": gains.iter().map(point).collect::<Vec<Value>>() })
}

fn noises(k: f64, gains: &[f64]) -> Value {
    let point = |gain: &f64| json!({ "gain": gain, "factor": excess_noise_factor(*gain, k) });
    json!({ "points": gains.iter().map(point).collect::<Vec<Value>>() })
}

proptest! {
    #![proptest_config(ProptestConfig {
        cases: 60,
        rng_algorithm: RngAlgorithm::ChaCha,
        rng_seed: RngSeed::Fixed(0x000d_e71c_ef17),
        failure_persistence: None,
        ..ProptestConfig::default()
    })]

    #[test]
    fn exact_currents_give_their_device_back(
        breakdown_v in 20.0..400.0,
        exponent in 0.7..6.0,
        drop in 0.001..0.05,
        ln_unity in -18.0..-9.0,
    ) {
        let unity_a = f64::exp(ln_unity);
        // A drop of this part of the breakdown voltage at a gain of ten.
        let device = Device { breakdown_v, exponent, ohm: drop * breakdown_v / (10.0 * unity_a), unity_a };
        let answer = fitted(&json!({ "iv": device.iv(40, 1.0, 0.0, 1) }));
        for (name, wanted) in [
            ("breakdown_v", breakdown_v),
            ("miller_exponent", exponent),
            ("series_resistance_ohm", device.ohm),
            ("unity_gain_current_a", unity_a),
        ] {
            let got = value(&answer, name);
            // The dark current taken off and the root of the gain cost digits, and correlation multiplies them.
            prop_assert!((got / wanted - 1.0).abs() < 1e-8, "{name}: {got} for {wanted}");
        }
    }

    #[test]
    fn exact_noise_and_bandwidth_give_their_device_back(k in 0.0..=1.0, flat in 1e8..1e11, over in 1.5..30.0) {
        let product = flat * over;
        let gains = [1.5, 3.0, 6.0, 12.0, 25.0, 50.0];
        let answer = fitted(&json!({
            "noise": noises(k, &gains),
            "bandwidth": bandwidths(flat, product, &gains, 0.0, &mut Normal(1)),
        }));
        let raw = value(&answer, "ionisation_ratio");
        prop_assert!((raw - k).abs() < 1e-12, "{raw} for {k}");
        prop_assert!((value(&answer, "bandwidth_hz") / flat - 1.0).abs() < 1e-10);
        prop_assert!((value(&answer, "gain_bandwidth_hz") / product - 1.0).abs() < 1e-10);
    }

    #[test]
    fn whatever_is_measured_the_answer_has_only_numbers(
        rows in prop::collection::vec((0.0..=1e4f64, -1e-3..1e-3f64, -10.0..=10.0f64), 1..12),
        others in prop::collection::vec((1.0..=1e6f64, 1e-6..=1e6f64), 1..8),
        huber in any::<bool>(),
    ) {
        let iv: Vec<Value> = rows.iter().map(|(v, d, l)| json!({ "bias_v": v, "dark_a": d, "light_a": l })).collect();
        let noise: Vec<Value> = others.iter().map(|(m, f)| json!({ "gain": m, "factor": f })).collect();
        let bandwidth: Vec<Value> = others.iter().map(|(m, b)| json!({ "gain": m, "bandwidth_hz": b * 1e5 })).collect();
        let breakdown: Vec<Value> =
            others.iter().map(|(t, v)| json!({ "temperature_c": t.log10() * 50.0, "breakdown_v": v.min(1e4) })).collect();
        let answer = fitted(&json!({
            "estimator": if huber { "huber" } else { "least_squares" },
            "iv": { "points": iv }, "noise": { "points": noise }, "bandwidth": { "points": bandwidth },
            "breakdown": { "points": breakdown },
        }));
        let text = answer.to_string();
        prop_assert!(!text.contains("NaN") && !text.contains("inf "), "{text}");
        for fit in answer["fits"].as_array().expect("fits") {
            for point in fit["points"].as_array().expect("points") {
                prop_assert!(point.as_object().expect("a point").values().all(Value::is_number), "{point}");
            }
            for one in fit["parameters"].as_array().expect("parameters") {
                // Determined with its uncertainty, or not determined with the reason.
                prop_assert_eq!(one["value"].is_number(), one["standard"].is_number());
                prop_assert_eq!(one["value"].is_number(), one["not_determined"].is_null());
            }
        }
    }
}

#[test]
fn the_order_of_the_points_does_not_matter() {
    let mut iv = TELECOM.iv(30, 0.99, 0.01, 3);
    let straight = fitted(&json!({ "iv": iv }));
    iv["points"].as_array_mut().expect("points").reverse();
    assert_eq!(fitted(&json!({ "iv": iv })), straight);
}

#[test]
fn uncertainties_that_are_twice_as_large_double_those_of_the_fit_and_leave_its_values() {
    let with = |standard: f64| {
        let gains = [2.0, 4.0, 8.0, 16.0, 32.0];
        let mut table = bandwidths(6e9, 7e10, &gains, 0.02, &mut Normal(4));
        for point in table["points"].as_array_mut().expect("points") {
            point["standard_hz"] = json!(standard * point["bandwidth_hz"].as_f64().expect("a number"));
        }
        fitted(&json!({ "bandwidth": table }))
    };
    let (one, two) = (with(0.02), with(0.04));
    for name in ["bandwidth_hz", "gain_bandwidth_hz"] {
        assert!((value(&two, name) / value(&one, name) - 1.0).abs() < 1e-11);
        assert!((standard(&two, name) / standard(&one, name) - 2.0).abs() < 1e-9);
    }
    assert!(one["fits"][0]["degrees_of_freedom"].is_null(), "known uncertainties have no end of freedom");
}

#[test]
fn a_thousand_times_the_light_through_a_thousandth_of_the_resistance_is_the_same_device() {
    let bright = Device { ohm: TELECOM.ohm / 1e3, unity_a: TELECOM.unity_a * 1e3, ..TELECOM };
    let dim = fitted(&json!({ "iv": TELECOM.iv(30, 1.0, 0.01, 5) }));
    let mut table = TELECOM.iv(30, 1.0, 0.01, 5);
    for point in table["points"].as_array_mut().expect("points") {
        for key in ["dark_a", "light_a"] {
            point[key] = json!(1e3 * point[key].as_f64().expect("a number"));
        }
    }
    let bright_fit = fitted(&json!({ "iv": table }));
    for (name, factor) in [
        ("breakdown_v", 1.0),
        ("miller_exponent", 1.0),
        ("series_resistance_ohm", 1e-3),
        ("unity_gain_current_a", 1e3),
    ] {
        assert!((value(&bright_fit, name) / value(&dim, name) / factor - 1.0).abs() < 1e-8, "{name}");
        assert!((standard(&bright_fit, name) / standard(&dim, name) / factor - 1.0).abs() < 1e-6, "{name}");
    }
    assert!((value(&bright_fit, "series_resistance_ohm") / bright.ohm - 1.0).abs() < 0.2);
}

#[test]
fn another_reference_temperature_moves_along_the_line() {
    let points: Vec<Value> =
        (0..9).map(|i| json!({ "temperature_c": 10 * i - 20, "breakdown_v": 56.4 + 1.1 * f64::from(i) + [0.01, -0.02, 0.0][i as usize % 3] })).collect();
    let at = |celsius: f64| fitted(&json!({ "temperature_c": celsius, "breakdown": { "points": points } }));
    let (cold, warm) = (at(0.0), at(40.0));
    let per_k = value(&cold, "breakdown_v_per_k");
    assert!((value(&warm, "breakdown_v_per_k") - per_k).abs() < 1e-13);
    let moved = value(&warm, "breakdown_by_temperature_v") - value(&cold, "breakdown_by_temperature_v");
    assert!((moved - 40.0 * per_k).abs() < 1e-11);
}

#[test]
fn intervals_cover_the_truth_as_often_as_they_say() {
    let mut normal = Normal(2026);
    let gains = [2.0, 3.0, 5.0, 8.0, 12.0, 20.0, 30.0, 45.0];
    let trials = 2000;
    let mut covered = [0, 0];
    for _ in 0..trials {
        let answer = fitted(&json!({ "bandwidth": bandwidths(6e9, 7e10, &gains, 0.03, &mut normal) }));
        for (count, (name, truth)) in
            covered.iter_mut().zip([("bandwidth_hz", 6e9), ("gain_bandwidth_hz", 7e10)])
        {
            let ends = &parameter(&answer, name)["interval"];
            let (low, high) = (ends[0].as_f64().expect("an end"), ends[1].as_f64().expect("an end"));
            *count += i32::from((low..=high).contains(&truth));
        }
    }
    // Five standard deviations of the binomial count, and one per cent for the curvature of the formula.
    let allowed = 5.0 * (0.95 * 0.05 / f64::from(trials)).sqrt() + 0.01;
    for count in covered {
        let share = f64::from(count) / f64::from(trials);
        assert!((share - 0.95).abs() < allowed, "{share}");
    }
}

#[test]
fn by_hubers_rule_wild_points_hardly_move_the_device() {
    let mut table = TELECOM.iv(60, 1.0, 0.004, 6);
    let clean = fitted(&json!({ "iv": table }));
    for index in [10, 35] {
        let point = &mut table["points"][index];
        point["light_a"] = json!(1.5 * point["light_a"].as_f64().expect("a number"));
    }
    let plain = fitted(&json!({ "iv": table }));
    let robust = fitted(&json!({ "iv": table, "estimator": "huber" }));
    let off = |answer: &Value| (value(answer, "breakdown_v") - value(&clean, "breakdown_v")).abs();
    assert!(off(&robust) < 3.0 * standard(&clean, "breakdown_v"));
    assert!(off(&robust) < 0.3 * off(&plain), "{} and {}", off(&robust), off(&plain));
    assert!(robust["fits"][0]["points_weighed_down"].as_u64().expect("a count") >= 2);
}

#[test]
fn a_series_resistance_cannot_be_seen_in_a_microampere() {
    let dim = Device { unity_a: 2e-8, ..TELECOM };
    let mut claimed = 0;
    for seed in 0..100 {
        let answer = fitted(&json!({ "iv": dim.iv(40, 0.985, 0.01, seed) }));
        if parameter(&answer, "series_resistance_ohm")["value"].is_number() {
            claimed += 1;
            continue;
        }
        let why = why_not(&answer, "series_resistance_ohm");
        assert!(why.contains("not determined") && why.contains("more light"), "{why}");
        // The rest is told all the same, and the device goes onto the bench without a resistance.
        let off = (value(&answer, "breakdown_v") - 56.4).abs();
        assert!(off < 5.0 * standard(&answer, "breakdown_v"), "{off}");
        let onto = answer["onto_bench"]["values"].as_array().expect("values");
        assert!(onto.iter().all(|one| !one["pointer"].as_str().expect("a pointer").ends_with("_ohm")));
    }
    // An interval of 95 % leaves 0 below it by chance in one of forty; five standard deviations of that count.
    assert!(claimed <= 10, "{claimed} of 100");
}

#[test]
fn what_the_points_do_not_tell_is_named_with_what_to_measure() {
    let low = fitted(&json!({ "noise": { "points": [
        { "gain": 1.1, "factor": 1.05 }, { "gain": 1.2, "factor": 1.3 }, { "gain": 1.3, "factor": 1.1 } ] } }));
    assert!(why_not(&low, "ionisation_ratio").contains("higher gains"));
    assert_eq!(low["shown"]["headline"]["figure"], "Not determined");
    assert!(low["onto_bench"].is_null());

    let flat = fitted(&json!({ "bandwidth": { "points": [
        { "gain": 2, "bandwidth_hz": 6.01e9 }, { "gain": 3, "bandwidth_hz": 5.98e9 }, { "gain": 4, "bandwidth_hz": 6.02e9 },
        { "gain": 5, "bandwidth_hz": 6.00e9 } ] } }));
    assert!(why_not(&flat, "gain_bandwidth_hz").contains("where the bandwidth falls"));
    assert!((value(&flat, "bandwidth_hz") / 6e9 - 1.0).abs() < 0.01);

    let one_gain = fitted(&json!({ "bandwidth": { "points": [
        { "gain": 8, "bandwidth_hz": 5.0e9 }, { "gain": 8, "bandwidth_hz": 5.1e9 }, { "gain": 8, "bandwidth_hz": 4.9e9 } ] } }));
    for name in ["bandwidth_hz", "gain_bandwidth_hz"] {
        why_not(&one_gain, name);
    }

    let two = fitted(&json!({ "breakdown": { "points": [
        { "temperature_c": 0, "breakdown_v": 54 }, { "temperature_c": 20, "breakdown_v": 56 } ] } }));
    assert!(why_not(&two, "breakdown_v_per_k").contains("as many points as numbers"));

    let few = fitted(&json!({ "iv": TELECOM.iv(4, 0.99, 0.0, 1) }));
    assert_eq!(few["fits"].as_array().expect("fits").len(), 0);
    assert!(few["refused"][0]["sentence"].as_str().expect("a sentence").contains("Five points at least"));

    let at_one = fitted(&json!({ "noise": { "points": [{ "gain": 1, "factor": 1 }] } }));
    assert!(at_one["refused"][0]["sentence"].as_str().expect("a sentence").contains("gains above 1"));
}

#[test]
fn the_device_goes_onto_the_bench_with_its_uncertainties_and_correlations() {
    let gains = [2.0, 4.0, 8.0, 16.0, 32.0];
    let breakdown: Vec<Value> = (0..6)
        .map(|i| json!({ "temperature_c": 10 * i, "breakdown_v": 54.0 + 1.1 * f64::from(i) + 0.01 * f64::from(i % 2) }))
        .collect();
    let answer = fitted(&json!({
        "temperature_c": 22.0,
        "iv": TELECOM.iv(60, 1.0, 0.004, 6),
        "bandwidth": bandwidths(6e9, 7e10, &gains, 0.02, &mut Normal(8)),
        "breakdown": { "points": breakdown },
    }));
    let onto = &answer["onto_bench"];
    let values = onto["values"].as_array().expect("values");
    let at = |pointer: &str| {
        &values.iter().find(|one| one["pointer"] == pointer).unwrap_or_else(|| panic!("{pointer}"))["value"]
    };
    assert_eq!(at("/detector/avalanche/bias/kind"), "miller");
    assert_eq!(at("/detector/avalanche/bias/reference_temperature_c"), 22.0);
    let (put, exact) = (
        at("/detector/avalanche/bias/breakdown_v").as_f64().expect("a number"),
        value(&answer, "breakdown_v"),
    );
    assert!((put - exact).abs() < 0.01 * standard(&answer, "breakdown_v"), "{put} for {exact}");
    assert!(put.to_string().len() < 9, "{put} has digits that nobody knows");
    let inputs = onto["uncertainty"]["inputs"].as_array().expect("inputs");
    let pointers: Vec<&str> =
        inputs.iter().map(|input| input["pointer"].as_str().expect("a pointer")).collect();
    assert_eq!(pointers.len(), 6);
    assert_eq!(inputs[0]["degrees_of_freedom"], 56.0);
    let correlations = onto["uncertainty"]["correlations"].as_array().expect("correlations");
    // Breakdown voltage, exponent and resistance with each other, bandwidth with product; the tables are independent.
    assert_eq!(correlations.len(), 4);
    for pair in correlations {
        let (one, other) = (pair[0].as_u64().expect("an index"), pair[1].as_u64().expect("an index"));
        assert!(one < other && other < 6 && pair[2].as_f64().expect("a number").abs() < 1.0);
    }
    // The fitted numbers are numbers of the bench, and the bench takes them.
    let fields = serde_json::to_value(door::field_rows()).expect("JSON");
    for pointer in pointers {
        assert!(fields.as_array().expect("rows").iter().any(|row| row["pointer"] == pointer), "{pointer}");
    }
}

#[test]
fn a_voltage_of_unity_gain_outside_of_the_table_is_a_fault_at_its_place() {
    let iv = TELECOM.iv(20, 0.99, 0.0, 1);
    let faults = ask(&json!({ "iv": iv, "unity_gain_v": 2.0 })).expect_err("the table begins at 5.64 V");
    assert_eq!(faults.len(), 1);
    assert_eq!(faults[0].pointer, "/measurements/unity_gain_v");
    assert!(faults[0].sentence.contains("2 V"), "{}", faults[0].sentence);
    let faults = ask(&json!({ "estimator": "huber" })).expect_err("no table");
    assert_eq!(faults[0].pointer, "/measurements");
}

//! What crosses between JavaScript and the core, run by wasm-bindgen-test in Node and in Chromium; the runner is told
//! from outside which.
#![cfg(target_arch = "wasm32")]

use js_sys::{Array, Function, JSON, Object, Reflect};
use leastlight::wasm;
use wasm_bindgen::prelude::*;
use wasm_bindgen_test::*;

fn bench() -> JsValue {
    JSON::parse(include_str!("faults/bench.json")).expect("the good bench is JSON")
}

fn get(value: &JsValue, path: &str) -> JsValue {
    path.split('/')
        .fold(value.clone(), |at, key| Reflect::get(&at, &key.into()).unwrap_or(JsValue::UNDEFINED))
}

fn set(value: &JsValue, path: &str, new: impl Into<JsValue>) {
    let (parent, key) =
        path.rsplit_once('/').map_or((value.clone(), path), |(parent, key)| (get(value, parent), key));
    Reflect::set(&parent, &key.into(), &new.into()).expect("an object takes a value");
}

fn ask(question: &str, bench: &JsValue) -> JsValue {
    wasm::ask(question.into(), bench.clone(), JsValue::UNDEFINED).expect("the door does not throw")
}

fn pointers(outcome: &JsValue) -> Vec<String> {
    Array::from(&get(outcome, "faults"))
        .iter()
        .filter_map(|fault| get(&fault, "pointer").as_string())
        .collect()
}

#[wasm_bindgen_test]
fn an_answer_is_a_plain_object() {
    let outcome = ask("sensitivity", &bench());
    assert!(get(&outcome, "faults").is_undefined());
    let answer = get(&outcome, "answer");
    let prototype = Object::get_prototype_of(&answer);
    assert!(Object::is(&prototype, &get(&js_sys::global(), "Object/prototype")), "no Map");
    assert!(get(&answer, "average_power_dbm").as_f64().expect("a number") < -20.0);
    assert!(Array::is_array(&get(&answer, "curves/0/lines/0/x")));
    assert!(get(&answer, "levels/1/noise_a2/signal_shot").as_f64().expect("a number") > 0.0);
}

#[wasm_bindgen_test]
fn what_does_not_exist_is_null_and_not_undefined() {
    let bench = bench();
    set(&bench, "detector/avalanche", JsValue::NULL);
    let answer = get(&ask("sensitivity", &bench), "answer");
    assert!(get(&answer, "best_gain").is_null());
    assert!(get(&answer, "none_because").is_null());
}

#[wasm_bindgen_test]
fn an_absent_part_may_be_undefined_or_null() {
    for nothing in [JsValue::NULL, JsValue::UNDEFINED] {
        let bench = bench();
        set(&bench, "meter", nothing);
        assert!(get(&ask("sensitivity", &bench), "faults").is_undefined());
        assert_eq!(pointers(&ask("reading", &bench)), ["/meter"]);
    }
}

#[wasm_bindgen_test]
fn a_misspelt_key_is_a_fault() {
    let bench = bench();
    set(&bench, "detector/responsivty", 1.0);
    assert_eq!(pointers(&ask("sensitivity", &bench)), ["/detector/responsivty"]);
}

#[wasm_bindgen_test]
fn a_number_that_is_none_is_a_fault_at_its_place() {
    for number in [f64::NAN, f64::INFINITY] {
        let bench = bench();
        set(&bench, "path/loss_db", number);
        assert_eq!(pointers(&ask("sensitivity", &bench)), ["/path/loss_db"]);
    }
}

#[wasm_bindgen_test]
fn whatever_arrives_the_door_answers_and_does_not_throw() {
    let function: JsValue = Function::new_no_args("return 1").into();
    let big: JsValue = js_sys::BigInt::from(u64::MAX).into();
    let odd = [
        JsValue::NULL,
        JsValue::UNDEFINED,
        JsValue::from_f64(3.0),
        JsValue::from_str("bench"),
        JsValue::TRUE,
        JSON::parse("[1, 2]").expect("JSON"),
        JsValue::symbol(Some("odd")),
        function,
        big,
    ];
    for value in &odd {
        let outcome = ask("sensitivity", value);
        assert!(!pointers(&outcome).is_empty(), "{value:?} is no bench");
        let outcome = wasm::ask(value.clone(), bench(), JsValue::UNDEFINED).expect("no throw");
        assert_eq!(pointers(&outcome), ["/question"]);
        wasm::understand(value.clone(), "auto").expect("no throw");
        wasm::read_certificate("1310;0.9", value.clone()).expect("no throw");
    }
}

#[wasm_bindgen_test]
fn typed_texts_become_a_bench_and_faults_keep_their_place() {
    let bench = bench();
    set(&bench, "meter/reading_dbm", "9,6 µW");
    set(&bench, "path/loss_db", "three");
    let made = wasm::understand(bench, "auto").expect("no throw");
    let reading_dbm = get(&made, "bench/meter/reading_dbm").as_f64().expect("a number");
    // 10 log10(9.6e-3) by hand: −20.1773.
    assert!((reading_dbm + 20.1773).abs() < 1e-4, "{reading_dbm}");
    assert!(get(&made, "bench/path/loss_db").is_null());
    assert_eq!(pointers(&made), ["/path/loss_db"]);
    let text = Reflect::get(&get(&made, "understood"), &"/meter/reading_dbm".into()).expect("an object");
    assert_eq!(text.as_string().expect("a text"), "9.600 µW = −20.177 dBm");
}

#[wasm_bindgen_test]
fn a_log_crosses_in_slices() {
    let options = JSON::parse(r#"{ "corrected": {} }"#).expect("JSON");
    let mut log = wasm::LogSlices::new(options.clone());
    for slice in ["Time (s);Power (dBm)\n0;-2", "0\n1;9.91E37\n"] {
        log.push(slice.as_bytes());
    }
    let value = get(&log.finish().expect("no throw"), "value");
    assert_eq!(get(&value, "counts/no_reading").as_f64(), Some(1.0));
    assert!(get(&value, "text").as_string().expect("asked for").contains("no reading"));
    assert!(get(&value, "correction").is_null());
    let refused = wasm::read_log("Power\n1\n", options).expect("no throw");
    assert_eq!(pointers(&refused), ["/choices/columns"]);
    assert!(get(&refused, "reading/columns/0/role").as_string().is_some());
    assert_eq!(pointers(&wasm::read_log("1", JsValue::from_f64(3.0)).expect("no throw")), ["/options"]);
}

#[wasm_bindgen_test]
fn questions_fields_and_version_are_there() {
    assert!(Array::from(&wasm::questions().expect("no throw")).length() >= 2);
    assert!(Array::from(&wasm::fields().expect("no throw")).length() > 20);
    assert!(!wasm::version().is_empty());
    let demo = wasm::demo().expect("no throw");
    assert!(get(&ask("reading", &demo), "faults").is_undefined());
}

//! Wrong benches, and exactly the faults that each must give: pointer and code, all at once.

use leastlight::door;
use leastlight::fault::Code;
use leastlight::tree::Tree;
use serde::Deserialize;
use std::collections::{BTreeMap, BTreeSet};

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct Cases {
    case: Vec<Case>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct Case {
    name: String,
    question: String,
    set: BTreeMap<String, Tree>,
    expect: Vec<(String, String)>,
}

fn good_bench() -> Tree {
    Tree::from_json(include_str!("faults/bench.json")).expect("the good bench is JSON")
}

/// Puts a value at a pointer, making the last key if it is new; the text "nothing" takes the key away.
fn put(tree: &mut Tree, pointer: &str, value: &Tree) {
    let (parent, key) = pointer.rsplit_once('/').expect("a pointer begins with a slash");
    let mut place = tree;
    for step in parent.split('/').skip(1) {
        place = place.get_mut(step).unwrap_or_else(|| panic!("the good bench has no {parent}"));
    }
    let Tree::Map(entries) = place else { panic!("{parent} is no map") };
    entries.retain(|(known, _)| known != key);
    if *value != Tree::from("nothing") {
        entries.push((key.to_owned(), value.clone()));
    }
}

fn code(code: Code) -> String {
    serde_json::to_value(code).expect("a code is a word").as_str().expect("a code is a word").to_owned()
}

fn run(text: &str) {
    let cases: Cases = toml::from_str(text).expect("the cases are TOML of the known shape");
    let mut names = BTreeSet::new();
    let mut misses = Vec::new();
    for case in &cases.case {
        assert!(names.insert(&case.name), "{} stands twice", case.name);
        let mut bench = good_bench();
        for (pointer, value) in &case.set {
            put(&mut bench, pointer, value);
        }
        let faults = door::ask(&case.question, &bench, &Tree::Null).err().unwrap_or_default();
        for fault in &faults {
            let whole = fault.sentence.ends_with('.') && fault.sentence.len() > 20;
            assert!(whole, "{}: “{}” is no sentence", case.name, fault.sentence);
        }
        let found: BTreeSet<(String, String)> =
            faults.into_iter().map(|fault| (fault.pointer, code(fault.code))).collect();
        let expected: BTreeSet<(String, String)> = case.expect.iter().cloned().collect();
        if found != expected {
            misses.push(format!("{}:\n  expected {expected:?}\n  found    {found:?}", case.name));
        }
    }
    assert!(cases.case.len() > 5, "hardly any case was read");
    assert!(misses.is_empty(), "{}", misses.join("\n"));
}

#[test]
fn wrong_benches_for_the_sensitivity_are_refused_where_they_are_wrong() {
    run(include_str!("faults/sensitivity.toml"));
}

#[test]
fn wrong_benches_for_the_reading_are_refused_where_they_are_wrong() {
    run(include_str!("faults/reading.toml"));
}

#[test]
fn wrong_doubts_are_refused_where_they_are_wrong() {
    run(include_str!("faults/uncertainty.toml"));
}

#[test]
fn wrong_measurements_are_refused_where_they_are_wrong() {
    run(include_str!("faults/device_fit.toml"));
}

#[test]
fn wrong_benches_for_the_bias_are_refused_where_they_are_wrong() {
    run(include_str!("faults/avalanche_bias.toml"));
}

#[test]
fn numbers_that_are_none_do_not_pass_as_absent() {
    for number in [f64::NAN, f64::INFINITY, f64::NEG_INFINITY] {
        let mut bench = good_bench();
        put(&mut bench, "/detector/dark_current_bulk_a", &Tree::Number(number));
        let faults = door::ask("sensitivity", &bench, &Tree::Null).expect_err("no finite number");
        assert_eq!(faults.len(), 1);
        assert_eq!(faults[0].pointer, "/detector/dark_current_bulk_a");
        assert_eq!(faults[0].code, Code::Unreadable);
    }
}

#[test]
fn a_key_given_twice_is_a_fault() {
    let bench = Tree::from_json(r#"{ "path": { "loss_db": 1, "loss_db": 2 } }"#).expect("JSON");
    let faults = door::ask("reading", &bench, &Tree::Null).expect_err("twice");
    assert!(faults.iter().any(|fault| fault.pointer == "/path/loss_db" && fault.code == Code::UnknownField));
}

#[test]
fn a_range_fault_says_what_is_allowed_and_what_was_given() {
    let mut bench = good_bench();
    put(&mut bench, "/meter/set_wavelength_nm", &Tree::Number(13100.0));
    let faults = door::ask("reading", &bench, &Tree::Null).expect_err("13100 nm");
    let fault = serde_json::to_value(&faults[0]).expect("JSON");
    assert_eq!(fault["given"], 13100.0);
    assert_eq!(fault["allowed"], serde_json::json!({ "min": 200.0, "max": 2500.0, "unit": "nm" }));
    assert_eq!(
        faults[0].sentence,
        "The wavelength setting must lie between 200 nm and 2500 nm; 13100 nm was given."
    );
}

#[test]
fn a_bench_file_names_its_format_and_its_faults() {
    assert!(door::read_bench(include_str!("faults/bench.json")).is_ok());
    let with_mark = format!("\u{feff}{}", include_str!("faults/bench.json"));
    assert!(door::read_bench(&with_mark).is_ok(), "a byte order mark is no part of the text");
    let cut = door::read_bench("{ \"schema\": ").expect_err("cut off");
    assert_eq!((cut[0].pointer.as_str(), cut[0].code), ("", Code::Unreadable));
    assert!(cut[0].sentence.contains("line 1"), "{}", cut[0].sentence);
    let other = door::read_bench("{}").expect_err("no format");
    assert_eq!((other[0].pointer.as_str(), other[0].code), ("/schema", Code::Missing));
}

#[test]
fn options_are_checked_like_the_bench() {
    let options = r#"{ "sweeps": {}, "solve": null }"#;
    let faults =
        door::ask("reading", &good_bench(), &Tree::from_json(options).expect("JSON")).expect_err("sweeps");
    assert_eq!(faults[0].pointer, "/options/sweeps");
    let options =
        r#"{ "sweep": { "pointer": "/source/colour", "from": 2, "to": 1, "points": 1, "scale": "cubic" } }"#;
    let faults =
        door::ask("reading", &good_bench(), &Tree::from_json(options).expect("JSON")).expect_err("sweep");
    let found: BTreeSet<&str> = faults.iter().map(|fault| fault.pointer.as_str()).collect();
    let expected = ["/options/sweep/pointer", "/options/sweep/points", "/options/sweep/scale"];
    assert_eq!(found, BTreeSet::from(expected));
}

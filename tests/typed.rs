//! A bench as it was typed: what becomes of the texts, and what is said about them.

use leastlight::door;
use leastlight::tree::Tree;

fn understood(json: &str) -> serde_json::Value {
    let typed = Tree::from_json(json).expect("JSON");
    serde_json::to_value(door::understand(&typed, "auto")).expect("JSON")
}

#[test]
fn a_bit_rate_is_shared_by_the_bits_of_a_symbol() {
    // Two bits a symbol: 53.125 Gb/s in 26.5625 GBd, the lane rate of IEEE 802.3 clause 121 (from memory), and by halving.
    let made = understood(r#"{ "source": { "format": "pam4", "symbol_rate_baud": "53.125 Gb/s" } }"#);
    assert_eq!(made["bench"]["source"]["symbol_rate_baud"], 26.5625e9);
    assert_eq!(made["understood"]["/source/symbol_rate_baud"], "26.5625 GBd, 2 bits a symbol");
    let made = understood(r#"{ "source": { "format": "nrz", "symbol_rate_baud": "2.5 Gb/s" } }"#);
    assert_eq!(made["bench"]["source"]["symbol_rate_baud"], 2.5e9);
    let made = understood(r#"{ "source": { "format": "pam4", "symbol_rate_baud": "26.5625 GBd" } }"#);
    assert_eq!(made["bench"]["source"]["symbol_rate_baud"], 26.5625e9);
}

#[test]
fn an_infinite_extinction_ratio_is_a_perfectly_dark_zero() {
    for text in ["∞", "inf", "Infinite", "∞ dB"] {
        let made = understood(&format!(r#"{{ "source": {{ "extinction_ratio_db": "{text}" }} }}"#));
        assert_eq!(made["bench"]["source"]["extinction_ratio_db"], serde_json::Value::Null, "{text}");
        assert_eq!(made["understood"]["/source/extinction_ratio_db"], "the lowest level is perfectly dark");
        assert_eq!(made["faults"].as_array().map(Vec::len), Some(0), "{text}");
    }
}

#[test]
fn blank_texts_are_not_there_and_a_blank_part_is_no_part() {
    let made = understood(
        r#"{ "path": { "loss_db": " " }, "surroundings": { "temperature_c": "21 °C", "background_power_w": "" } }"#,
    );
    assert_eq!(made["bench"]["path"], serde_json::Value::Null);
    assert_eq!(made["bench"]["surroundings"]["temperature_c"], 21.0);
    assert_eq!(made["bench"]["surroundings"]["background_power_w"], serde_json::Value::Null);
    assert_eq!(made["faults"].as_array().map(Vec::len), Some(0));
}

#[test]
fn what_was_typed_is_quoted_where_it_is_refused_and_the_rest_is_kept() {
    let made = understood(
        r#"{ "source": { "average_power_dbm": "2e7 W", "wavelength_nm": "1.55 µm" }, "path": { "loss_db": "-3" } }"#,
    );
    let sentences: Vec<&str> = made["faults"]
        .as_array()
        .expect("faults")
        .iter()
        .filter_map(|fault| fault["sentence"].as_str())
        .collect();
    assert_eq!(
        sentences,
        [
            "The launched power must lie between −150 dBm and 60 dBm; “2e7 W” (103.0103 dBm) was given.",
            "The path loss must lie between 0 dB and 200 dB; “-3” was given.",
        ]
    );
    assert_eq!(made["bench"]["source"]["wavelength_nm"], 1550.0);
}

#[test]
fn pasted_cells_become_points_and_a_typed_k_goes_before_the_text() {
    let table = r#""table": { "text": "nm;A/W;U (k=2) / %\n1310;0,92;1,1\n1550;0,98;1,2" }"#;
    let made = understood(&format!(
        r#"{{ "meter": {{ "certificate": {{ "form": "", "coverage_factor": "", {table} }} }} }}"#
    ));
    let certificate = &made["bench"]["meter"]["certificate"];
    assert_eq!(
        certificate["points"][1],
        serde_json::json!({ "wavelength_nm": 1550.0, "value": 0.98, "expanded_percent": 1.2 })
    );
    assert_eq!(
        (&certificate["coverage_factor"], &certificate["form"]),
        (&serde_json::json!(2.0), &serde_json::json!("responsivity"))
    );
    assert_eq!(made["tables"]["/meter/certificate"]["decimal_mark"], "comma");
    let made = understood(&format!(
        r#"{{ "meter": {{ "certificate": {{ "coverage_factor": "2.1", {table} }} }} }}"#
    ));
    assert_eq!(made["bench"]["meter"]["certificate"]["coverage_factor"], 2.1);
}

#[test]
fn a_typical_curve_and_a_responsivity_may_be_pasted_too() {
    let table = r#""table": { "text": "1310\t0.92\n1550\t0.98", "choices": null }"#;
    let made = understood(&format!(
        r#"{{ "meter": {{ "reading_dbm": "-20", "typical_curve": {{ {table} }} }}, "detector": {{ "responsivity": {{ "kind": "table", {table} }} }} }}"#
    ));
    assert_eq!(made["faults"], serde_json::json!([]));
    assert_eq!(
        made["bench"]["meter"]["typical_curve"][0],
        serde_json::json!({ "wavelength_nm": 1310.0, "a_per_w": 0.92 })
    );
    assert_eq!(made["bench"]["detector"]["responsivity"]["points"][1]["a_per_w"], 0.98);
}

#[test]
fn a_text_that_is_no_table_is_a_fault_of_its_field() {
    let made = understood(r#"{ "meter": { "certificate": { "table": { "text": "as delivered" } } } }"#);
    assert_eq!(made["faults"][0]["pointer"], "/meter/certificate/points");
}

#[test]
fn tables_and_numbers_are_written_as_they_are_read() {
    let demo = door::demo();
    let text =
        door::write_table("/meter/certificate", &demo, "comma").expect("the demonstration bench is sound");
    let table = door::read_certificate(&text, &Tree::Null).expect("its own text");
    let json = serde_json::to_value(&table).expect("JSON");
    let bench = serde_json::to_value(&demo).expect("JSON");
    assert_eq!(
        json["points"].as_array().map(Vec::len),
        bench["meter"]["certificate"]["points"].as_array().map(Vec::len)
    );
    assert_eq!(json["points"][0]["value"], bench["meter"]["certificate"]["points"][0]["value"]);
    assert_eq!(door::write_number("/source/wavelength_nm", 1551.7, "comma"), "1551,7 nm");
}

#[test]
fn a_question_waits_for_what_it_reads_and_for_nothing_else() {
    let mut bench = serde_json::to_value(door::demo()).expect("JSON");
    bench["meter"]["reading_dbm"] = "three".into();
    let typed = Tree::from_json(&bench.to_string()).expect("JSON");
    let followed = door::follow("sensitivity", &typed, "auto");
    assert!(followed.answer.is_some() && followed.blocking.is_empty(), "{:?}", followed.blocking);
    assert_eq!(followed.faults[0].pointer, "/meter/reading_dbm", "it is named all the same");
    let followed = door::follow("reading", &typed, "auto");
    assert!(followed.answer.is_none());
    assert_eq!(followed.blocking[0].pointer, "/meter/reading_dbm");
}

#[test]
fn what_is_missing_for_a_question_is_a_fault_of_the_typed_bench_too() {
    let typed = Tree::from_json(r#"{ "source": { "wavelength_nm": "1550 nm" } }"#).expect("JSON");
    let followed = door::follow("reading", &typed, "auto");
    let pointers: Vec<&str> = followed.blocking.iter().map(|fault| fault.pointer.as_str()).collect();
    assert_eq!(pointers, ["/meter"]);
    assert_eq!(followed.faults, followed.blocking);
    assert_eq!(door::follow("colour", &typed, "auto").blocking[0].pointer, "/question");
}

#[test]
fn following_a_typed_bench_gives_what_asking_the_bench_gives() {
    for question in door::questions() {
        let followed = door::follow(question.name, &door::demo(), "auto");
        let asked =
            door::ask(question.name, &door::demo(), &Tree::Null).expect("the demonstration bench is sound");
        assert_eq!(followed.answer, Some(asked.answer));
    }
}

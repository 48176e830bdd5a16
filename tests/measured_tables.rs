//! Measurements as they arrive from instruments and spreadsheets: what is understood, what is named, and the way back.

#![cfg(not(target_arch = "wasm32"))]
use leastlight::door;
use leastlight::record::{
    BANDWIDTHS, BREAKDOWNS, CURRENTS, Choices, MeasuredKind, NOISES, Role, Unit, read_measured,
};
use leastlight::tree::Tree;

fn points(text: &str, what: &MeasuredKind) -> Vec<Vec<(&'static str, f64)>> {
    read_measured(text, &Choices::default(), what)
        .unwrap_or_else(|faults| panic!("{text}: {faults:?}"))
        .points
}

#[test]
fn currents_come_with_their_headers_and_units_in_any_order() {
    let wanted = [("bias_v", 10.0), ("dark_a", 1.5e-9), ("light_a", 1.25e-6)];
    for text in [
        "Voltage / V;Dark current / nA;Light current / µA\n10;1,5;1,25\n20;1,6;1,31",
        "I_light (uA),I_dark (nA),V_R (V)\n1.25,1.5,10\n1.31,1.6,20",
        "Spannung [V]\tDunkelstrom [A]\tPhotostrom [A]\n10\t1,5E-9\t1,25E-6\n20\t1,6E-9\t1,31E-6",
        // No header: voltage, dark, light.
        "10 1.5e-9 1.25e-6\n20 1.6e-9 1.31e-6",
        // Cells with their own units.
        "V;dark;illuminated\n10 V;1.5 nA;1.25 µA\n20 V;1.6 nA;1.31 µA",
        // Reverse voltage counted below 0.
        "Bias (V);Dark (A);Illuminated (A)\n-10;-1.5e-9;-1.25e-6\n-20;-1.6e-9;-1.31e-6",
    ] {
        let found = points(text, &CURRENTS);
        assert_eq!(found.len(), 2, "{text}");
        for ((name, value), (wanted_name, wanted)) in found[0].iter().zip(wanted) {
            assert_eq!(*name, wanted_name, "{text}");
            assert!((value / wanted - 1.0).abs() < 1e-15, "{text}: {name} = {value}");
        }
    }
}

#[test]
fn a_table_of_two_columns_has_no_dark_current() {
    let wanted = [vec![("bias_v", 10.0), ("light_a", 1.25e-6)], vec![("bias_v", 20.0), ("light_a", 1.31e-6)]];
    assert_eq!(points("10;1.25e-6\n20;1.31e-6", &CURRENTS), wanted);
    assert_eq!(points("Voltage (V);Current (A)\n10;1.25e-6\n20;1.31e-6", &CURRENTS), wanted);
}

#[test]
fn uncertainties_are_in_their_own_unit_in_that_of_the_value_or_in_per_cent() {
    for text in [
        "Gain;Bandwidth (GHz);Std. uncertainty (MHz)\n5;4.0;80\n8;3.5;70",
        "Gain;Bandwidth (GHz);uncertainty\n5;4.0;0.08\n8;3.5;0.07",
        "Gain;Bandwidth (GHz);uncertainty (%)\n5;4.0;2\n8;3.5;2",
    ] {
        let found = points(text, &BANDWIDTHS);
        assert_eq!(found[0][..2], [("gain", 5.0), ("bandwidth_hz", 4e9)], "{text}");
        let (name, standard) = found[0][2];
        assert!(name == "standard_hz" && (standard / 8e7 - 1.0).abs() < 1e-15, "{text}: {standard}");
    }
    assert_eq!(points("M gain,F noise\n5,3.2\n9,5.1", &NOISES)[1], [("gain", 9.0), ("factor", 5.1)]);
}

#[test]
fn temperatures_may_be_kelvins() {
    let found = points("T / K\tV_B / V\n293.15\t56.2\n313.15\t58.3", &BREAKDOWNS);
    assert!((found[0][0].1 - 20.0).abs() < 1e-12);
    assert_eq!(found[0][1], ("breakdown_v", 56.2));
}

#[test]
fn a_bandwidth_without_a_unit_is_not_guessed() {
    let faults =
        read_measured("Gain;Bandwidth\n5;4.0\n8;3.5", &Choices::default(), &BANDWIDTHS).expect_err("no unit");
    assert!(faults[0].sentence.contains("no unit"), "{}", faults[0].sentence);
}

#[test]
fn rows_that_cannot_be_read_are_named_and_columns_can_be_chosen() {
    let text = "Voltage (V);Dark (A);Light (A)\n10;1e-9;1e-6\n2o;1e-9;1e-6\n30;1e-9;OVLD\n40;1e-9;2e-6";
    let table = read_measured(text, &Choices::default(), &CURRENTS).expect("two good rows");
    assert_eq!((table.points.len(), table.reading.bad_rows.len()), (2, 2));
    assert_eq!(table.reading.bad_rows[0].line, 3);
    let roles: Vec<(Role, Option<Unit>)> =
        table.reading.columns.iter().map(|one| (one.role, one.unit)).collect();
    assert_eq!(roles[1], (Role::DarkCurrent, Some(Unit::Ampere)));
    let choices =
        r#"{ "columns": [{ "index": 2, "role": "dark_current" }, { "index": 1, "role": "current" }] }"#;
    let choices = Choices::from_tree(&Tree::from_json(choices).expect("JSON"), "/choices").expect("choices");
    let swapped = read_measured(text, &choices, &CURRENTS).expect("two good rows");
    assert_eq!(swapped.points[0], [("bias_v", 10.0), ("dark_a", 1e-6), ("light_a", 1e-9)]);
}

#[test]
fn a_typed_bench_takes_the_tables_and_writes_them_back() {
    let typed = Tree::from_json(
        r#"{ "measurements": { "temperature_c": "22 °C", "unity_gain_v": "10",
             "iv": { "table": { "text": "V;dark (nA);light (µA)\n10;1,5;1,25\n50;1,9;7,375" } },
             "bandwidth": { "table": { "text": "gain;B (GHz);u (%)\n5;4.0;2\n8;3.5;2" } } } }"#,
    )
    .expect("JSON");
    let understood = door::understand(&typed, "auto");
    assert_eq!(understood.faults, []);
    let bench = serde_json::to_value(&understood.bench).expect("JSON");
    assert_eq!(bench["measurements"]["iv"]["points"][1]["light_a"], 7.375e-6);
    assert_eq!(bench["measurements"]["bandwidth"]["points"][1]["standard_hz"], 7e7);
    assert_eq!(bench["measurements"]["temperature_c"], 22.0);
    let tree = Tree::from_json(&bench.to_string()).expect("JSON");
    for pointer in ["/measurements/iv", "/measurements/bandwidth"] {
        for mark in ["point", "comma"] {
            let text = door::write_table(pointer, &tree, mark).expect("a bench");
            let back = Tree::Map(vec![(
                "measurements".to_owned(),
                Tree::Map(vec![(
                    pointer.rsplit('/').next().expect("a key").to_owned(),
                    Tree::Map(vec![(
                        "table".to_owned(),
                        Tree::Map(vec![("text".to_owned(), text.as_str().into())]),
                    )]),
                )]),
            )]);
            let again = door::understand(&back, "auto");
            assert_eq!(again.faults, [], "{text}");
            let again = serde_json::to_value(&again.bench).expect("JSON");
            assert_eq!(again.pointer(pointer), bench.pointer(pointer), "{text}");
        }
    }
    // A fault of a pasted table is its box's.
    let typed = r#"{ "measurements": { "noise": { "table": { "text": "no numbers at all" } } } }"#;
    let faults = door::understand(&Tree::from_json(typed).expect("JSON"), "auto").faults;
    assert_eq!(faults.len(), 1);
    assert!(faults[0].pointer.starts_with("/measurements/noise/points"), "{}", faults[0].pointer);
}

//! Light that is spread over wavelengths: how its table is read, and what must be true of the average.

use leastlight::door;
use leastlight::fault::{Code, Fault};
use leastlight::record::{Role, SpectrumTable};
use leastlight::tree::Tree;
use proptest::prelude::*;
use proptest::test_runner::RngSeed;
use serde_json::{Value, json};

fn tree(value: &Value) -> Tree {
    Tree::from_json(&value.to_string()).expect("JSON made here is JSON")
}

fn read(text: &str) -> Result<SpectrumTable, Vec<Fault>> {
    door::read_spectrum(text, &Tree::Null)
}

fn values(table: &SpectrumTable) -> Vec<(f64, f64)> {
    table.points.iter().map(|point| (point.wavelength_nm, point.value)).collect()
}

/// A meter with a certificate, lit by a source.
fn bench(source: Value, points: &[(f64, f64)]) -> Value {
    let points: Vec<Value> = points
        .iter()
        .map(|(nm, r)| json!({ "wavelength_nm": nm, "value": r, "expanded_percent": 1.2 }))
        .collect();
    json!({
        "source": source,
        "meter": {
            "reading_dbm": -20,
            "set_wavelength_nm": 1310,
            "certificate": { "form": "responsivity", "coverage_factor": 2, "points": points },
        },
    })
}

fn ask(bench: &Value) -> Result<Value, Vec<Fault>> {
    let answer = door::ask("reading", &tree(bench), &Tree::Null)?;
    Ok(serde_json::to_value(answer).expect("an answer is JSON"))
}

const CERTIFICATE: [(f64, f64); 5] =
    [(1200.0, 0.861), (1310.0, 0.921), (1490.0, 0.972), (1550.0, 0.986), (1625.0, 0.781)];

#[test]
fn spectra_are_read_as_analysers_and_spreadsheets_write_them() {
    let expected = vec![(1549.5, -31.2), (1550.0, -20.1), (1551.0, -44.0)];
    for text in [
        "Wavelength (nm),Power (dBm)\n1549.5,-31.2\n1550.0,-20.1\n1551,-44\n",
        "\u{feff}sep=;\r\nWellenlänge / nm;Pegel / dBm\r\n1549,5;-31,2\r\n1550,0;-20,1\r\n1551;-44\r\n",
        "# invented analyser\nCTRWL,1550.00\nSMPL,3\n\nnm,dBm/nm\n1549.5,-31.2\n1550.0,-20.1\n1551,-44\n",
        "λ/µm\tLevel [dBm]\n1.5495\t\u{2212}31.2\n1.55\t\u{2212}20.1\n1.551\t\u{2212}44\n",
        "1551 nm; -44 dBm\n1549.5 nm; -31.2 dBm\n1550 nm; -20.1 dBm\n",
        "Wavelength;Value\n(nm);(dBm/nm)\n1549.5;-31.2\n1550.0;-20.1\n1551;-44\n",
    ] {
        let table = read(text).unwrap_or_else(|faults| panic!("{text:?}: {faults:?}"));
        assert_eq!(values(&table), expected, "{text:?}");
        assert_eq!(table.unit.word(), "dbm_per_nm", "{text:?}");
        assert!(table.reading.bad_rows.is_empty(), "{text:?}");
    }
    let linear = read("wavelength_nm,power µW/nm\n1500,1.5\n1510,0\n").expect("a linear spectrum");
    assert_eq!(values(&linear), [(1500.0, 1.5e-6), (1510.0, 0.0)]);
    assert_eq!(linear.unit.word(), "w_per_nm");
    assert_eq!(linear.reading.columns[1].role, Role::SpectralPower);
}

#[test]
fn without_a_unit_nobody_knows_whether_it_is_linear() {
    for text in ["1549.5,-31.2\n1550.0,-20.1\n", "Wavelength (nm);Trace 1\n1549;31\n1550;20\n"] {
        let faults = read(text).expect_err("no unit");
        assert!(
            faults.iter().all(|fault| fault.code == Code::Missing && fault.sentence.contains("unit")),
            "{faults:?}"
        );
    }
    let chosen = tree(&json!({ "columns": [{ "index": 1, "role": "spectral_power", "unit": "dBm" }] }));
    let table = door::read_spectrum("1549.5,-31.2\n1550.0,-20.1\n", &chosen).expect("a unit was chosen");
    assert_eq!(table.unit.word(), "dbm_per_nm");
}

#[test]
fn the_columns_are_there_to_choose_from_where_the_unit_is_wanting() {
    let typed =
        json!({ "source": { "spectrum": { "table": { "text": "nm;Level\n1549;-31\n1550;-20\n" } } } });
    let found = door::understand(&tree(&typed), "auto");
    let reading = &found.tables["/source/spectrum"];
    let units: Vec<Option<&str>> =
        reading.columns.iter().map(|column| column.unit.map(|unit| unit.name())).collect();
    assert_eq!((units, reading.rows_read), (vec![Some("nm"), None], 0));
    assert_eq!(found.faults.len(), 1);
    assert_eq!(found.faults[0].pointer, "/source/spectrum/points");
    // A text without rows has no columns.
    let none = json!({ "source": { "spectrum": { "table": { "text": "none" } } } });
    assert!(door::understand(&tree(&none), "auto").tables.is_empty());
}

#[test]
fn rows_that_are_no_points_are_named_and_the_others_kept() {
    let text =
        "nm;W/nm\n1500;1\n1510;-0.1\n100;1\n1520;9.91E37\n1530;two\n1540;3 dBm\n1550;2\n1550;4\n1545;1\n";
    let table = read(text).expect("three good rows");
    assert_eq!(values(&table), [(1500.0, 1.0), (1545.0, 1.0), (1550.0, 2.0)]);
    let lines: Vec<usize> = table.reading.bad_rows.iter().map(|row| row.line).collect();
    assert_eq!(lines, [3, 4, 5, 6, 7]);
    let said = table.reading.cleaned.join(" ");
    assert!(said.contains("order of their wavelengths") && said.contains("the first was kept"), "{said}");
}

#[test]
fn what_is_no_spectrum_is_said_to_be_none() {
    for (text, code) in [
        ("", Code::Missing),
        (" \n\n", Code::Missing),
        ("no numbers here", Code::Unreadable),
        ("nm;W/nm\n1500;1\n", Code::Unreadable),
        ("a;b\n1;x\n2;y\n", Code::Unreadable),
        ("nm\n1500\n1510\n", Code::Unreadable),
    ] {
        let faults = read(text).expect_err("no spectrum");
        assert_eq!((faults[0].pointer.as_str(), faults[0].code), ("", code), "{text:?}");
    }
}

#[test]
fn pasted_cells_become_the_spectrum_of_the_typed_bench_and_can_be_written_back() {
    let text = "Wavelength (nm)\tPower (dBm)\n1549,5\t-31,25\n1550\t-20,125\n";
    let typed = tree(&json!({ "source": { "spectrum": { "table": { "text": text } } } }));
    let made = door::understand(&typed, "auto");
    assert_eq!(made.faults, []);
    assert_eq!(made.tables["/source/spectrum"].rows_read, 2);
    let bench = serde_json::to_value(&made.bench).expect("JSON");
    assert_eq!(bench["source"]["spectrum"]["unit"], "dbm_per_nm");
    for mark in ["point", "comma"] {
        let written = door::write_table("/source/spectrum", &tree(&bench), mark).expect("a table");
        let again = read(&written).expect("own table");
        assert_eq!(values(&again), [(1549.5, -31.25), (1550.0, -20.125)], "{written}");
    }
    // What is wrong in the text stands at the field that holds it.
    let typed = tree(&json!({ "source": { "spectrum": { "table": { "text": "1550;1\n" } } } }));
    let faults = door::understand(&typed, "auto").faults;
    assert_eq!(faults[0].pointer, "/source/spectrum/points");
}

#[test]
fn a_line_narrower_and_narrower_tends_to_a_single_wavelength() {
    let factor = |width: Value| {
        let source = json!({ "wavelength_nm": 1550, "linewidth_nm": width });
        ask(&bench(source, &CERTIFICATE)).expect("an answer")["correction_factor"].as_f64().expect("a number")
    };
    let single = factor(Value::Null);
    assert_eq!(factor(json!(0)), single);
    // The curve turns at 1550 nm: its curvature makes the difference shrink with the square of the width.
    let off: Vec<f64> = [8.0, 0.8, 0.08].iter().map(|nm| (factor(json!(nm)) / single - 1.0).abs()).collect();
    assert!(off[0] > 1e-5, "{off:?}");
    for pair in off.windows(2) {
        let ratio = pair[0] / pair[1];
        assert!((90.0..111.0).contains(&ratio), "{off:?}");
    }
}

#[test]
fn the_part_outside_is_counted_where_it_is_refused() {
    // A line of 20 nm at the very end: half of it, less nothing to speak of.
    let source = json!({ "wavelength_nm": 1625, "linewidth_nm": 20 });
    let faults = ask(&bench(source, &CERTIFICATE)).expect_err("half is outside");
    assert_eq!(faults[0].pointer, "/source/linewidth_nm");
    assert_eq!(
        faults[0].sentence,
        "A line of 20 nm, cut at three times its full width, reaches from 1565 nm to 1685 nm; 50 % of its light lies \
         outside, for the certificate reaches from 1200 nm to 1625 nm, and nothing is guessed beyond a table."
    );
    // A triangle from 1600 over 1610 to 1650 beyond 1625: (25/40)² of its right part, which is 4/5 of the whole: 31.25 %.
    let points = json!([
        { "wavelength_nm": 1600, "value": 0 }, { "wavelength_nm": 1610, "value": 1 }, { "wavelength_nm": 1650, "value": 0 },
    ]);
    let source = json!({ "spectrum": { "unit": "w_per_nm", "points": points } });
    let faults = ask(&bench(source, &CERTIFICATE)).expect_err("a third is outside");
    assert_eq!(faults[0].pointer, "/source/spectrum");
    assert!(faults[0].sentence.contains("1600 nm to 1650 nm; 31 % of its light"), "{}", faults[0].sentence);
}

#[test]
fn a_floor_without_light_beyond_the_certificate_does_no_harm() {
    let points = json!([
        { "wavelength_nm": 1100, "value": -90 }, { "wavelength_nm": 1540, "value": -90 },
        { "wavelength_nm": 1550, "value": 0 }, { "wavelength_nm": 1560, "value": -90 },
        { "wavelength_nm": 1700, "value": -90 },
    ]);
    let answer = ask(&bench(json!({ "spectrum": { "unit": "dbm_per_nm", "points": points } }), &CERTIFICATE));
    assert!(answer.is_ok(), "{answer:?}");
}

#[test]
fn the_light_is_drawn_over_the_responsivity_with_its_peak() {
    // Two thousand points with one high among them: thinning must not lose it.
    let points: Vec<Value> = (0..2001)
        .map(|i| {
            let value = if i == 777 { 1.0 } else { 1e-3 };
            json!({ "wavelength_nm": 1500.0 + 0.01 * f64::from(i), "value": value })
        })
        .collect();
    let source = json!({ "spectrum": { "unit": "w_per_nm", "points": points } });
    let answer = ask(&bench(source, &CERTIFICATE)).expect("an answer");
    let curves = answer["curves"].as_array().expect("curves");
    let curve =
        curves.iter().find(|curve| curve["name"] == "spectrum_over_responsivity").expect("the drawing");
    let light = &curve["lines"][1];
    let (x, y) = (light["x"].as_array().expect("x"), light["y"].as_array().expect("y"));
    assert!(x.len() == y.len() && x.len() < 1000, "{}", x.len());
    let at = y.iter().position(|y| y == 1.0).expect("the peak");
    assert!((x[at].as_f64().expect("a place") - 1507.77).abs() < 1e-9);
    let narrow =
        ask(&bench(json!({ "wavelength_nm": 1550, "linewidth_nm": 0.1 }), &CERTIFICATE)).expect("an answer");
    let names: Vec<&Value> =
        narrow["curves"].as_array().expect("curves").iter().map(|curve| &curve["name"]).collect();
    assert_eq!(names, ["correction_against_wavelength"]);
}

fn fixed_seed(cases: u32) -> ProptestConfig {
    ProptestConfig {
        cases,
        rng_seed: RngSeed::Fixed(0x1550),
        failure_persistence: None,
        ..ProptestConfig::default()
    }
}

proptest! {
    #![proptest_config(fixed_seed(200))]

    #[test]
    fn an_average_lies_between_the_least_and_the_most(
        values in prop::collection::vec(0.1f64..1.2, 6), levels in prop::collection::vec(-60.0f64..0.0, 2..12)
    ) {
        let certificate: Vec<(f64, f64)> = values.iter().zip(0..).map(|(r, i)| (1300.0 + 60.0 * f64::from(i), *r)).collect();
        let points: Vec<Value> = levels.iter().zip(0..)
            .map(|(level, i)| json!({ "wavelength_nm": 1310.0 + 23.0 * f64::from(i), "value": level })).collect();
        let source = json!({ "spectrum": { "unit": "dbm_per_nm", "points": points } });
        let answer = ask(&bench(source, &certificate)).map_err(|faults| TestCaseError::fail(format!("{faults:?}")))?;
        let mean = answer["responsivity_source_a_per_w"].as_f64().expect("a number");
        // The curve keeps between its points, so the points are its least and most.
        let (least, most) = values.iter().fold((f64::INFINITY, 0.0f64), |(a, b), v| (a.min(*v), b.max(*v)));
        prop_assert!(least <= mean * (1.0 + 1e-12) && mean <= most * (1.0 + 1e-12), "{mean} in {least}..{most}");
        // Fully correlated points of one relative uncertainty give just that, whatever the light: the curve is
        // homogeneous in its values, so that its weights give back its mean (Euler).
        let percent = answer["certificate_uncertainty"]["expanded_percent"].as_f64().expect("a number");
        prop_assert!((percent - 1.2).abs() < 1e-9, "{percent}");
    }

    #[test]
    fn a_flat_responsivity_knows_no_spectrum(width in 1.5f64..30.0, centre in 1350.0f64..1500.0) {
        let source = json!({ "wavelength_nm": centre, "linewidth_nm": width });
        let answer = ask(&bench(source, &[(1200.0, 0.9), (1310.0, 0.9), (1500.0, 0.9), (1650.0, 0.9)]))
            .map_err(|faults| TestCaseError::fail(format!("{faults:?}")))?;
        prop_assert!((answer["correction_factor"].as_f64().expect("a number") - 1.0).abs() < 1e-14);
        let percent = answer["certificate_uncertainty"]["expanded_percent"].as_f64().expect("a number");
        prop_assert!((percent - 1.2).abs() < 1e-12, "{percent}");
        prop_assert!(answer["slope_percent_per_nm"].as_f64().expect("a number").abs() < 1e-12);
    }

    #[test]
    fn no_text_makes_the_reader_panic(text in "(\\PC|[0-9.,;\t\n -]|nm|dBm|W/nm){0,80}") {
        if let Ok(table) = read(&text) {
            prop_assert!(table.points.len() >= 2);
            prop_assert!(table.points.iter().all(|point| point.value.is_finite()));
        }
    }
}

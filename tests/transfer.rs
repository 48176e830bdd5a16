//! A detector calibrated by comparison: which readings belong together, what must be said beside them, and what comes of it.

use leastlight::door;
use leastlight::fault::{Code, Fault};
use leastlight::questions::transfer::Transfer;
use leastlight::record::{CertificateTable, Choices, read_certificate};
use leastlight::tree::Tree;
use proptest::prelude::*;
use proptest::test_runner::RngSeed;
use serde_json::{Value, json};

fn tree(value: &Value) -> Tree {
    Tree::from_json(&value.to_string()).expect("JSON made here is JSON")
}

fn bench() -> Value {
    json!({ "meter": { "certificate": { "form": "correction_factor", "coverage_factor": 2, "points": [
        { "wavelength_nm": 1310, "value": 1.012, "expanded_percent": 1.1 },
        { "wavelength_nm": 1550, "value": 0.993, "expanded_percent": 1.2 },
    ] } } })
}

fn choices() -> Value {
    json!({ "date": "2026-11-30", "reference_certificate": "AR-0042" })
}

const READINGS: &str = "nm;which;dBm
1550;ref;-20.00
1550;dut;-20.51
1550;dut;-20.52
1550;ref;-20.03
1550;dut;-20.53
1550;ref;-20.04
1550;ref;-20.05
1550;dut;-20.56
";

fn calibrate(text: &str, bench: &Value, choices: &Value) -> Result<Transfer, Vec<Fault>> {
    door::transfer_calibration(text, &tree(bench), &tree(choices))
}

fn pointers(faults: &[Fault]) -> Vec<(&str, Code)> {
    faults.iter().map(|fault| (fault.pointer.as_str(), fault.code)).collect()
}

#[test]
fn the_same_readings_are_understood_however_they_are_written() {
    let first = calibrate(READINGS, &bench(), &choices()).expect("two blocks");
    assert_eq!(first.rows.len(), 1);
    assert_eq!(first.rows[0].ratios.len(), 2);
    let in_order = READINGS.replace("nm;which;dBm\n", "");
    let with_commas = READINGS.replace('.', ",");
    let tabs =
        READINGS.replace(';', "\t").replace("nm\twhich\tdBm", "Wellenlänge / nm\tGerät\tAnzeige / dBm");
    let units = READINGS
        .replace("nm;which;dBm\n", "")
        .replace("0;ref", "0 nm;reference")
        .replace("0;dut", "0 nm;device under test");
    let units: String = units.lines().map(|line| format!("{line} dBm\n")).collect();
    for text in [with_commas, tabs, units] {
        let found =
            calibrate(&text, &bench(), &choices()).unwrap_or_else(|faults| panic!("{text}: {faults:?}"));
        assert_eq!(found.rows, first.rows, "{text}");
    }
    // Without a header nothing says whether these are levels.
    let faults = calibrate(&in_order, &bench(), &choices()).expect_err("no unit");
    assert_eq!(pointers(&faults), [("", Code::Missing)]);
    let mut chosen = choices();
    chosen["table"] = json!({ "columns": [{ "index": 2, "role": "power", "unit": "dBm" }] });
    assert_eq!(calibrate(&in_order, &bench(), &chosen).expect("a unit was chosen").rows, first.rows);
}

#[test]
fn watts_and_levels_of_the_same_light_are_the_same() {
    let watts: String = READINGS
        .lines()
        .enumerate()
        .map(|(at, line)| match line.rsplit_once(';') {
            Some((_, _)) if at == 0 => "nm;which;µW\n".to_owned(),
            Some((head, dbm)) => {
                format!("{head};{:e}\n", libm::pow(10.0, dbm.parse::<f64>().expect("a level") / 10.0 + 3.0))
            }
            None => String::new(),
        })
        .collect();
    let (levels, watts) = (
        calibrate(READINGS, &bench(), &choices()).unwrap(),
        calibrate(&watts, &bench(), &choices()).unwrap(),
    );
    let relative = watts.rows[0].correction_factor / levels.rows[0].correction_factor - 1.0;
    assert!(relative.abs() < 1e-13, "{relative:e}");
}

#[test]
fn a_and_b_do_not_say_which_is_the_reference() {
    let text = READINGS.replace("ref", "A").replace("dut", "B");
    let faults = calibrate(&text, &bench(), &choices()).expect_err("A or B");
    assert_eq!(pointers(&faults), [("/choices/reference", Code::Missing)]);
    let with = |label: &str| {
        let mut choices = choices();
        choices["reference"] = json!(label);
        calibrate(&text, &bench(), &choices)
    };
    let (a, b) = (with("a").expect("A"), with("B").expect("B"));
    let named = calibrate(READINGS, &bench(), &choices()).expect("names");
    assert_eq!(a.rows, named.rows);
    // The other way round the ratio is the inverse; the reference's own factor 0.993 is in both.
    let product = a.rows[0].correction_factor * b.rows[0].correction_factor / (0.993 * 0.993);
    assert!((product - 1.0).abs() < 1e-14, "{product}");
    let faults = with("C").expect_err("no C");
    assert_eq!(pointers(&faults), [("/choices/reference", Code::Range)]);
}

#[test]
fn readings_that_belong_to_no_block_are_named_and_the_others_kept() {
    let text = format!(
        "{READINGS}1550;ref;-20.1\n1310;ref;-20\n1550;ref;-20.00\n1550;dut;9.91E37\n1550;dut;-20.5\n1550;ref;-20.0\n\
         1550;ref;-20.0\n1550;dut;-20.5\n1550;dut;-20.5\n1550;ref;-20.0\n"
    );
    let found = calibrate(&text, &bench(), &choices()).expect("three good blocks");
    assert_eq!(found.rows[0].ratios.len(), 3);
    let lines: Vec<usize> = found.reading.bad_rows.iter().map(|row| row.line).collect();
    // Behind the reading that is none, lines 14 to 17 are test, reference, reference, test: a block as good as another.
    assert_eq!(lines, [10, 11, 12, 13, 18, 19]);
    assert_eq!(found.reading.rows_read, 12);
    assert!(found.shown.doubts.iter().any(|doubt| doubt.starts_with("6 rows")), "{:?}", found.shown.doubts);
}

#[test]
fn times_may_be_seconds_or_iso_and_must_rise() {
    let rows = [("ref", "-20.00", 0), ("dut", "-20.51", 10), ("dut", "-20.52", 40), ("ref", "-20.05", 50)];
    let table = |time: &dyn Fn(i32) -> String| {
        let mut text = "nm;which;dBm;time\n".to_owned();
        for block in 0..2 {
            for (which, level, second) in rows {
                text += &format!("1550;{which};{level};{}\n", time(block * 60 + second));
            }
        }
        text
    };
    let seconds = calibrate(&table(&|s| s.to_string()), &bench(), &choices()).expect("seconds");
    let iso = |s: i32| format!("2026-11-30T14:{:02}:{:02},5", s / 60, s % 60);
    let iso = calibrate(&table(&iso), &bench(), &choices()).expect("ISO times");
    assert_eq!(seconds.rows, iso.rows);
    // −0.05 dB over the 50 s of the reference, −0.01 dB over the 30 s of the test: by least squares with one drift
    // (25²·2·(−0.05/50) + 15²·2·(−0.01/30)) / (25²·2 + 15²·2) = −1.4/1700 dB/s.
    assert!((seconds.rows[0].drift_db + 1.4 / 1700.0).abs() < 1e-12, "{}", seconds.rows[0].drift_db);
    assert!(calibrate(&table(&|s| (-s).to_string()), &bench(), &choices()).is_err(), "falling times");
}

#[test]
fn everything_that_is_missing_is_said_at_once() {
    let wrong = json!({
        "date": "30.11.2026", "coverage_probability": 2, "what": 1, "table": { "delimiter": "pipe" },
        "contributions": [{ "standard_percent": -1 }, { "name": "connectors" }],
    });
    let faults = calibrate(READINGS, &json!({}), &wrong).expect_err("much is wrong");
    let mut found = pointers(&faults);
    found.sort_by_key(|(pointer, _)| pointer.to_owned());
    assert_eq!(
        found,
        [
            ("/choices/contributions/0/name", Code::Missing),
            ("/choices/contributions/0/standard_percent", Code::Range),
            ("/choices/contributions/1/standard_percent", Code::Missing),
            ("/choices/coverage_probability", Code::Range),
            ("/choices/date", Code::Unreadable),
            ("/choices/reference_certificate", Code::Missing),
            ("/choices/table/delimiter", Code::Range),
            ("/choices/what", Code::UnknownField),
            ("/meter", Code::Missing),
        ]
    );
    for date in ["2026-02-30", "2026-2-3", "2026-00-10", "0000-01-01"] {
        let choices = json!({ "date": date, "reference_certificate": "AR-0042" });
        assert_eq!(
            pointers(&calibrate(READINGS, &bench(), &choices).expect_err(date)),
            [("/choices/date", Code::Unreadable)]
        );
    }
}

#[test]
fn what_cannot_be_calibrated_says_why() {
    let one_block: String = READINGS.lines().take(5).map(|line| format!("{line}\n")).collect();
    let outside = READINGS.replace("1550", "1600");
    let three = format!("{READINGS}1550;other;-20\n");
    let dark = READINGS.replace("dBm", "W");
    let absurd = READINGS.replace("dut;-20", "dut;30");
    for (text, code, part) in [
        (&one_block, Code::Missing, "Two blocks at least are needed at 1550 nm"),
        (&outside, Code::Range, "reaches from 1310 nm to 1550 nm"),
        (&three, Code::Conflict, "it names 3"),
        (&dark, Code::Unreadable, "must be above 0 W"),
        (&absurd, Code::Range, "check units and ranges"),
        (&"".to_owned(), Code::Missing, "the text is empty"),
        (&"nothing\nhere".to_owned(), Code::Unreadable, "rows with numbers"),
    ] {
        let faults = calibrate(text, &bench(), &choices()).expect_err(part);
        assert_eq!(pointers(&faults), [("", code)], "{faults:?}");
        assert!(faults[0].sentence.contains(part), "{}", faults[0].sentence);
    }
    let mut without = bench();
    without["meter"]["certificate"]["points"][1]["expanded_percent"] = Value::Null;
    without["meter"]["certificate"]["coverage_factor"] = Value::Null;
    let faults = calibrate(READINGS, &without, &choices()).expect_err("no uncertainty");
    assert_eq!(
        pointers(&faults),
        [("/meter/certificate/coverage_factor", Code::Missing), ("/meter/certificate/points", Code::Missing)]
    );
}

#[test]
fn what_no_certificate_can_state_is_refused() {
    // Two blocks that scatter, and a reference nearly without doubt: one degree of freedom, where Student's factor is
    // 12.7 at 95 % (JCGM 100:2008, table G.2) and a certificate's k ends at 10.
    let sure = json!({ "meter": { "certificate": { "form": "correction_factor", "coverage_factor": 2, "points": [
        { "wavelength_nm": 1550, "value": 1, "expanded_percent": 1e-6 },
        { "wavelength_nm": 1600, "value": 1, "expanded_percent": 1e-6 },
    ] } } });
    let scattered = READINGS.replace("-20.56", "-20.66");
    let faults = calibrate(&scattered, &sure, &choices()).expect_err("k is too great");
    assert_eq!(pointers(&faults), [("", Code::Range)]);
    assert!(faults[0].sentence.contains("it would be 12.7. Take more blocks."), "{}", faults[0].sentence);
    // Eight blocks of the same scatter leave seven degrees of freedom, and 2.4.
    let rows: String = scattered.lines().skip(1).map(|line| format!("{line}\n")).collect();
    let many = calibrate(&format!("{scattered}{}", rows.repeat(3)), &sure, &choices()).expect("eight blocks");
    let k = many.certificate.coverage_factor.expect("k");
    assert!((k - 2.36).abs() < 0.005, "{k}");
}

#[test]
fn a_typed_calibration_is_followed_as_far_as_it_goes() {
    let typed = json!({ "meter": { "certificate": {
        "table": { "text": "nm;R / (A/W);U / %\n1310;0,92;1,1\n1550;0,98;1,2\n" }, "coverage_factor": "2",
    } } });
    let follow = |text: &str, bench: &Value, choices: &Value| {
        door::follow_transfer(text, &tree(bench), &tree(choices), "auto")
    };
    let bare = READINGS.replace("nm;which;dBm\n", "");
    let found = follow(&bare, &typed, &json!({}));
    assert!(found.transfer.is_none());
    assert_eq!(
        pointers(&found.faults),
        [
            ("/choices/date", Code::Missing),
            ("/choices/reference_certificate", Code::Missing),
            ("/readings", Code::Missing),
        ]
    );
    // The columns are there to be chosen from, though nothing can be read yet.
    assert_eq!(found.tables["/readings"].columns.len(), 3);
    assert_eq!(found.tables["/readings"].rows_read, 0);
    assert_eq!(found.tables["/meter/certificate"].rows_read, 2);
    let mut said = choices();
    said["table"] = json!({ "columns": [{ "index": 2, "role": "power", "unit": "dBm" }] });
    said["contributions"] =
        json!([{ "name": "connectors", "standard_percent": "0,3 %", "degrees_of_freedom": "" }]);
    said["coverage_probability"] = json!("95,45 %");
    let found = follow(&bare, &typed, &said);
    let strict = json!({ "meter": { "certificate": { "form": "responsivity", "coverage_factor": 2, "points": [
        { "wavelength_nm": 1310, "value": 0.92, "expanded_percent": 1.1 },
        { "wavelength_nm": 1550, "value": 0.98, "expanded_percent": 1.2 },
    ] } } });
    let mut numbers = said.clone();
    numbers["contributions"] = json!([{ "name": "connectors", "standard_percent": 0.3 }]);
    numbers["coverage_probability"] = json!(0.9545);
    assert_eq!(found.transfer, Some(calibrate(&bare, &strict, &numbers).expect("the same in numbers")));
    // A blank size is missing, and a reference that cannot be read is said once.
    said["contributions"][0]["standard_percent"] = json!(" ");
    let mut broken = typed.clone();
    broken["meter"]["certificate"]["table"]["text"] = json!("no table");
    let found = follow(&bare, &broken, &said);
    let at: Vec<&str> = found.faults.iter().map(|fault| fault.pointer.as_str()).collect();
    assert!(at.contains(&"/choices/contributions/0/standard_percent"), "{at:?}");
    assert_eq!(at.iter().filter(|at| at.starts_with("/meter")).count(), 1, "{:?}", found.faults);
}

fn taken_back(csv: &str) -> CertificateTable {
    read_certificate(csv, &Choices::default()).unwrap_or_else(|faults| panic!("{csv}: {faults:?}"))
}

#[test]
fn the_csv_is_taken_back_bit_by_bit_with_its_k_and_has_the_history_in_it() {
    for (text, numbered) in [
        (READINGS.to_owned(), "AR-0042"),
        (READINGS.replace('.', ","), "k = 3; coverage factor 4"),
        (READINGS.to_owned(), "model \"k 3\", line\n2"),
    ] {
        let mut choices = choices();
        choices["reference_certificate"] = json!(numbered);
        choices["contributions"] = json!([{ "name": "connectors", "standard_percent": 0.2 }]);
        let found = calibrate(&text, &bench(), &choices).expect("a calibration");
        let back = taken_back(&found.csv);
        assert_eq!(back.points, found.certificate.points, "{}", found.csv);
        assert_eq!(back.form, found.certificate.form);
        assert_eq!(back.coverage_factor, found.certificate.coverage_factor, "{}", found.csv);
        assert_eq!(back.reading.bad_rows, []);
        assert!(found.csv.contains("2026-11-30") && found.csv.contains("2 at 1550 nm"), "{}", found.csv);
        assert!(found.csv.contains("connectors"), "{}", found.csv);
    }
    let found = calibrate(READINGS, &bench(), &choices()).expect("a calibration");
    assert!(found.csv.contains("certificate AR-0042\n"), "{}", found.csv);
}

#[test]
fn the_new_certificate_corrects_the_detector_that_it_is_of() {
    let found = calibrate(READINGS, &bench(), &choices()).expect("a calibration");
    let certificate = serde_json::to_value(&found.certificate).expect("JSON");
    // The detector under test showed −20.51 to −20.56 dBm where the light was 0.993 times −20.00 to −20.05 dBm.
    let meter = json!({ "reading_dbm": -20.53, "set_wavelength_nm": 1550, "certificate": certificate });
    let bench = tree(&json!({ "source": { "wavelength_nm": 1550 }, "meter": meter }));
    let answer =
        serde_json::to_value(door::ask("reading", &bench, &Tree::Null).expect("an answer")).expect("JSON");
    let expected = -20.03 + 10.0 * libm::log10(0.993);
    let power_dbm = answer["power_dbm"].as_f64().expect("a number");
    assert!((power_dbm - expected).abs() < 0.01, "{power_dbm}");
    let percent = answer["certificate_uncertainty"]["expanded_percent"].as_f64().expect("a number");
    assert!((percent - found.rows[0].expanded_percent).abs() < 1e-12);
}

fn fixed_seed(cases: u32) -> ProptestConfig {
    ProptestConfig {
        cases,
        rng_seed: RngSeed::Fixed(0xabba),
        failure_persistence: None,
        ..ProptestConfig::default()
    }
}

proptest! {
    #![proptest_config(fixed_seed(200))]

    #[test]
    fn a_drift_in_decibels_leaves_the_factor_alone(
        noise in prop::collection::vec(-0.01f64..0.01, 16), drift in -0.2f64..0.2, shift in -30.0f64..10.0
    ) {
        let table = |drift: f64, shift: f64| {
            let rows = noise.iter().zip(0..).map(|(noise, at)| {
                let reference = [true, false, false, true][at % 4];
                let level = shift + noise + drift * at as f64 - if reference { 0.0 } else { 0.4 };
                format!("1550;{};{level:e}\n", if reference { "ref" } else { "dut" })
            });
            format!("nm;which;dBm\n{}", rows.collect::<String>())
        };
        let still = calibrate(&table(0.0, -20.0), &bench(), &choices()).expect("four blocks");
        let moved = calibrate(&table(drift, shift), &bench(), &choices()).expect("four blocks");
        let (still, moved) = (&still.rows[0], &moved.rows[0]);
        prop_assert!((still.correction_factor / moved.correction_factor - 1.0).abs() < 1e-11);
        prop_assert!((still.scatter_percent - moved.scatter_percent).abs() < 1e-9);
        prop_assert!((moved.drift_db - still.drift_db - drift).abs() < 1e-11);
    }

    #[test]
    fn no_text_makes_the_reader_panic(text in "(\\PC|[0-9.,;\t\n -]|1550;|ref;|dut;|dBm\n|-20\n){0,60}") {
        let _ = calibrate(&text, &bench(), &choices());
        let _ = calibrate(&format!("nm;which;dBm\n{text}"), &bench(), &choices());
    }
}

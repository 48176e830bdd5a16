//! Logs: what is understood, what counts, what is corrected, and that slicing makes no difference.

use leastlight::door;
use leastlight::fault::Code;
use leastlight::questions::log::{Log, LogReader};
use leastlight::record::{Refused, Role, Times, Unit};
use leastlight::tree::Tree;
use proptest::prelude::*;
use proptest::test_runner::RngSeed;
use serde_json::{Value, json};

fn tree(value: &Value) -> Tree {
    Tree::from_json(&value.to_string()).expect("JSON made here is JSON")
}

/// A meter with a certificate whose factors are plain: 0.5 A/W at 1310 nm, 1 A/W at 1550 nm.
fn bench() -> Value {
    json!({
        "source": { "wavelength_nm": 1550 },
        "meter": {
            "set_wavelength_nm": 1310,
            "certificate": { "form": "responsivity", "coverage_factor": 2, "points": [
                { "wavelength_nm": 1310, "value": 0.5, "expanded_percent": 2 },
                { "wavelength_nm": 1550, "value": 1.0, "expanded_percent": 3 },
            ] },
        },
    })
}

fn read(text: &str, options: &Value) -> Result<Log, Refused> {
    door::read_log(text, &tree(options))
}

fn good(text: &str) -> Log {
    read(text, &json!({})).unwrap_or_else(|refused| panic!("{text}\n{:?}", refused.faults))
}

fn roles(log: &Log) -> Vec<Role> {
    log.reading.table.columns.iter().map(|column| column.role).collect()
}

fn mean_w(log: &Log) -> f64 {
    log.raw.as_ref().expect("some powers").mean_w
}

fn close(found: f64, expected: f64) -> bool {
    (found - expected).abs() <= 1e-12 * expected.abs()
}

// The expected powers are the written ones.
#[test]
fn a_log_is_understood_however_it_is_written() {
    let expected = 1.5e-6;
    for text in [
        "Time (s),Power (W)\n0,1e-6\n1,2e-6\n",
        "time;P/µW\n0;1,0\n1;2,0\n",
        "Zeit / s\tLeistung / nW\r\n0\t1000\r\n1\t2000\r\n",
        "2026-11-30T14:05:09,0.001 mW\n2026-11-30T14:05:10,0.002 mW\n",
        "# a remark\nMeter;AR-7\n\nDate;Time;Reading;Unit\n2026-11-30;14:05:09;1,0;µW\n2026-11-30;14:05:10;2,0;µW\n",
        "2026-11-30 14:05:09 1.0 µW\n2026-11-30 14:05:10 2.0 µW\n",
        "\u{feff}sep=;\n\"Time\";\"Power (W)\"\n\"2026-11-30 14:05:09,250\";\"1E-6\"\n\"2026-11-30 14:05:10,250\";\"2E-6\"\n",
        "Power (W)\n1e-6\n2e-6\n",
        "Time (min),Power (W)\r0,1e-6\r1,2e-6\r",
    ] {
        let log = good(text);
        assert!(close(mean_w(&log), expected), "{text:?}: {}", mean_w(&log));
        assert_eq!((log.counts.rows, log.counts.read), (2, 2), "{text:?}");
    }
    let levels = good("t;Level (dBm);Status\n0;-30;ok\n1;-20;ok\n");
    assert!(close(mean_w(&levels), (1e-6 + 1e-5) / 2.0));
    assert_eq!(roles(&levels), [Role::Ignored, Role::Power, Role::Status]);
}

#[test]
fn columns_are_found_by_their_names_and_can_be_chosen_otherwise() {
    let text = "Timestamp;Wavelength (nm);Range (dBm);Averaging time (ms);Power (dBm);Status\n\
                2026-11-30T14:05:09+01:00;1310;-20;100;-20,50;OK\n2026-11-30T14:05:10+01:00;1310;-20;100;-20,60;OK\n";
    let log = good(text);
    let expected = [Role::Time, Role::Wavelength, Role::Range, Role::Ignored, Role::Power, Role::Status];
    assert_eq!(roles(&log), expected);
    assert_eq!(log.reading.times, Times::Iso);
    let chosen = json!({ "choices": { "columns": [{ "index": 2, "role": "power", "unit": "dBm" }, { "index": 4, "role": "ignored" }] } });
    let log = read(text, &chosen).expect("chosen columns");
    assert!(close(mean_w(&log), 1e-5));
    let chosen = json!({ "choices": { "columns": [{ "index": 4, "unit": "W" }] } });
    assert_eq!(read(text, &chosen).expect("chosen unit").reading.table.columns[4].unit, Some(Unit::Watt));
}

#[test]
fn nothing_is_guessed_that_cannot_be_known() {
    let refused = read("Time;Power\n0;1\n1;2\n", &json!({})).expect_err("no unit");
    assert_eq!(
        (refused.faults[0].pointer.as_str(), refused.faults[0].code),
        ("/choices/columns", Code::Missing)
    );
    assert_eq!(refused.reading.expect("what was understood").table.columns[1].role, Role::Power);
    let refused =
        read("Time (s);Power (W)\n0;1,234\n1;1,235\n", &json!({})).expect_err("thousands or tenths");
    assert!(refused.faults[0].sentence.contains("choose the decimal mark"), "{:?}", refused.faults);
    let refused =
        read("Time (fortnights);Power (W)\n0;1e-6\n1;2e-6\n", &json!({})).expect_err("no such unit");
    assert!(refused.faults[0].sentence.contains("fortnights"), "{:?}", refused.faults);
    for text in ["", "  \n", "Time;Power (W)\n", "nothing at all\n"] {
        assert!(read(text, &json!({})).is_err(), "{text:?}");
    }
    let log = good("When;Power (W)\n11/30/2026 14:05;1e-6\n11/30/2026 14:06;2e-6\n");
    assert_eq!(log.reading.times, Times::None);
    assert_eq!(log.curves[0].curve.x.label, "Row");
    assert_eq!(log.counts.read, 2);
}

#[test]
fn options_are_strict_and_all_faults_come_at_once() {
    let options = json!({
        "choices": { "delimeter": "tab", "setting": "meter", "good_status": [1], "columns": [{ "index": 0, "role": "colour" }] },
        "uncertainty": { "relative_standard": -1 },
        "corrected": { "decimal_mark": "dot" },
        "bench": { "sauce": 1 },
        "speed": "high",
    });
    let refused = read("Power (W)\n1\n", &options).expect_err("faults");
    let pointers: Vec<&str> = refused.faults.iter().map(|fault| fault.pointer.as_str()).collect();
    for pointer in [
        "/options/speed",
        "/choices/delimeter",
        "/choices/setting",
        "/choices/good_status/0",
        "/choices/columns/0/role",
        "/options/uncertainty/relative_standard",
        "/options/uncertainty/coverage_factor",
        "/options/corrected/decimal_mark",
        "/sauce",
    ] {
        assert!(pointers.contains(&pointer), "{pointer} is not among {pointers:?}");
    }
}

// SCPI-1999, volume 1, section 7.2.1: 9.91E37 is "not a number", ±9.9E37 an overflow; known by value, not by text.
#[test]
fn signs_of_an_instrument_are_known_by_their_value_and_never_averaged() {
    let text = "Time (s);Power (W)\n0;1e-6\n1;9.91E37\n2;9.910000E+37\n3;+9.9100001E+37\n4;9.9E37\n5;-9.9E37\n6;-9.900000E+037\n7;3e-6\n8;\n9;NaN\n10;-inf\n";
    for unit in ["W", "nW", "dBm"] {
        let log = good(&text.replace("(W)", &format!("({unit})")));
        let counts = log.counts;
        assert_eq!((counts.rows, counts.read, counts.no_reading, counts.over_range), (11, 2, 5, 4), "{unit}");
        assert_eq!(counts.bad, 0);
        let lines = &log.curves[0].curve.lines;
        assert!(lines.iter().all(|line| line.y.iter().all(|y| y.abs() < 1e9)), "{unit}");
    }
    let comma = good("Time (s);Power (µW)\n0;1,5\n1;9.91E37\n2;2,5\n");
    assert_eq!((comma.counts.read, comma.counts.no_reading), (2, 1));
    assert!(close(mean_w(&comma), 2e-6));
}

#[test]
fn a_status_that_is_not_good_keeps_a_row_out_and_can_be_chosen_otherwise() {
    let text = "Power (W);Status\n1e-6;OK\n5e-6;UNLOCK\n3e-6;OK\n7e-6;\n";
    let log = good(text);
    assert_eq!((log.counts.read, log.counts.flagged), (3, 1));
    let words: Vec<_> =
        log.reading.status.iter().map(|word| (word.word.as_str(), word.rows, word.good)).collect();
    assert_eq!(words, [("OK", 2, true), ("UNLOCK", 1, false), ("", 1, true)]);
    let log = read(text, &json!({ "choices": { "good_status": ["OK", "UNLOCK"] } })).expect("chosen words");
    assert_eq!((log.counts.read, log.counts.flagged), (3, 1));
    assert!(close(mean_w(&log), 3e-6));
}

#[test]
fn powers_below_zero_are_averaged_and_have_no_level() {
    let log = read("Power (nW)\n-2\n0\n5\n", &json!({ "bench": bench() })).expect("powers");
    assert_eq!((log.counts.negative, log.counts.zero, log.counts.read), (1, 1, 3));
    let raw = log.raw.as_ref().expect("powers");
    assert!(close(raw.mean_w, 1e-9) && raw.mean_dbm.is_some());
    assert_eq!((raw.least.power_w, raw.least.power_dbm), (-2e-9, None));
    assert_eq!(log.curves[0].curve.y.unit, "nW");
    let below = good("Power (nW)\n-2\n-3\n").raw.expect("powers");
    assert_eq!((below.mean_dbm, below.drift_percent_per_h), (None, None));
}

#[test]
fn bad_rows_are_counted_listed_by_line_and_kept() {
    let text = "# remark\nTime (s),Power (W),Wavelength (nm)\n0,1e-6,1310\n1,x,1310\n\n2,2e-6,13100\n3,3e-6,\n4,1e9,1310\n5,1e-6,1310,extra\nfive,1e-6,1310\n\"6,1e-6,1310\n7,1e-6,1310\n";
    let log = good(text);
    let lines: Vec<usize> = log.reading.table.bad_rows.iter().map(|row| row.line).collect();
    assert_eq!(lines, [4, 6, 7, 8, 9, 10, 11]);
    assert_eq!((log.counts.rows, log.counts.read, log.counts.bad), (9, 2, 7));
    assert!(log.reading.table.bad_rows[6].sentence.contains("never closed"));
    let many: String = (0..5000).map(|row| format!("{row},x\n")).collect();
    let log = read(&format!("Time (s),Power (W)\n0,1e-6\n{many}"), &json!({})).expect("one good row");
    assert_eq!((log.counts.bad, log.reading.table.bad_rows.len()), (5000, 100));
}

// By hand: at 1310 nm the meter divides by 0.5 A/W, the light makes 1 A/W: half the power is there, −3.0103 dB.
#[test]
fn the_setting_is_taken_row_by_row_from_above_or_from_the_bench() {
    let options = json!({ "bench": bench() });
    let from_bench = read("Power (dBm)\n-20\n", &options).expect("a log");
    let above = read("Wavelength;1550 nm\nTime (s);Power (dBm)\n0;-20\n", &options).expect("a log");
    let by_row = read("Power (dBm);Wavelength (nm)\n-20;1310\n-20;1550\n", &options).expect("a log");
    let mean = |log: &Log| log.corrected.as_ref().expect("corrected").mean_w;
    assert!(close(mean(&from_bench), 0.5e-5), "{}", mean(&from_bench));
    assert!(close(mean(&above), 1e-5));
    assert!(close(mean(&by_row), 0.75e-5));
    let stated = |log: &Log| {
        serde_json::to_value(log.correction.as_ref().expect("corrected").setting_from).unwrap_or_default()
    };
    assert_eq!(
        [stated(&from_bench), stated(&above), stated(&by_row)],
        [json!("bench"), json!("above_the_rows"), json!("column")]
    );
    let overruled = json!({ "bench": bench(), "choices": { "setting": "bench" } });
    let log = read("Wavelength;1550 nm\nTime (s);Power (dBm)\n0;-20\n", &overruled).expect("a log");
    assert!(close(mean(&log), 0.5e-5));
    let correction = by_row.correction.expect("corrected");
    assert_eq!(correction.settings.iter().map(|one| one.rows).collect::<Vec<_>>(), [1, 1]);
    // The certificate states 3 % at the light's wavelength.
    assert!(
        close(correction.expanded_percent.expect("stated"), 3.0) && correction.coverage_factor == Some(2.0)
    );
}

#[test]
fn outside_of_the_certificate_a_row_says_so_and_all_rows_have_one_fault() {
    let options = json!({ "bench": bench() });
    let log = read("Power (dBm);Wavelength (nm)\n-20;1310\n-20;850\n", &options).expect("a log");
    assert_eq!((log.counts.read, log.counts.corrected, log.counts.uncorrected), (2, 1, 1));
    assert_eq!(log.reading.table.bad_rows[0].line, 3);
    assert!(log.reading.table.bad_rows[0].sentence.contains("reaches from 1310 nm to 1550 nm"));
    let log = read("Power (dBm);Wavelength (nm)\n-20;850\n-20;850\n", &options).expect("a log");
    assert_eq!(log.correction_faults[0].pointer, "/meter/set_wavelength_nm");
    assert!(log.corrected.is_none() && log.reading.table.bad_rows.is_empty());
    assert_eq!(log.raw.as_ref().map(|raw| raw.count), Some(2), "the readings stay");
    let mut far = bench();
    far["source"]["wavelength_nm"] = json!(1650);
    let log = read("Power (dBm)\n-20\n", &json!({ "bench": far })).expect("a log");
    assert_eq!(log.correction_faults[0].pointer, "/source/wavelength_nm");
    let mut unset = bench();
    unset["meter"]["set_wavelength_nm"] = json!(null);
    let log = read("Power (dBm)\n-20\n", &json!({ "bench": unset })).expect("a log");
    assert_eq!(log.correction_faults[0].pointer, "/meter/set_wavelength_nm");
}

#[test]
fn an_uncertainty_from_elsewhere_takes_the_place_of_the_certificates() {
    let options = json!({ "bench": bench(), "uncertainty": { "relative_standard": 0.02, "coverage_factor": 2.5 }, "corrected": {} });
    let log = read("Power (W)\n2e-6\n", &options).expect("a log");
    let correction = log.correction.as_ref().expect("corrected");
    assert!(
        close(correction.expanded_percent.expect("given"), 5.0)
            && !correction.uncertainty_is_the_certificates
    );
    // 2 µW shown, 1 µW there, 5 % of it: 50 nW.
    let text = log.text.expect("asked for");
    assert!(text.lines().any(|line| line == "2e-6,W,1310,1.00000000E-06,-30.00000,5.00E-08,"), "{text}");
    assert!(text.contains("k = 2.5") && text.contains("U (k=2.5) (W)"), "{text}");
}

const MIXED: &str = "Log of bench 4\nWavelength;1310 nm\n\nDate;Time;Reading;Unit;Set wavelength (nm);Range;Status\n\
    2026-11-30;14:05:09,250;-20,13;dBm;1310;R2;OK\n2026-11-30;14:05:09,500;9.91E37;dBm;1310;R2;OK\n\
    2026-11-30;14:05:09,750;9,7;µW;1550;R2;OK\n# moved the fibre\n2026-11-30;14:05:10,000;\"x;y\";µW;1550;R2;OK\n\
    2026-11-30;14:05:10,250;9,8;µW;850;R2;OK\n2026-11-30;14:05:10,500;9,9;µW;1550;R2;\"SAT\"\"\"\n\
    2026-11-30;14:05:10,750;-1,5;nW;1550;\"R 1\";OK\n2026-11-30;14:05:11,000;5;furlong;1550;R1;OK\n\
    2026-11-30;14:05:11,250;9.9E37;W;1550;R1;OK\n2026-11-30;25:05:11,250;5;µW;1550;R1;OK\nno more\n";

/// What must be the same when a corrected log is read again.
fn essence(log: &Log) -> Value {
    let correction = log.correction.as_ref().map(|of| json!(of.settings));
    json!([
        log.counts,
        log.raw.as_ref().map(|raw| (raw.count, raw.mean_w, raw.standard_deviation_w, raw.drift_w_per_h)),
        log.corrected.as_ref().map(|of| (of.count, of.mean_w, of.standard_deviation_w, of.drift_w_per_h)),
        correction,
        log.curves
    ])
}

#[test]
fn the_corrected_log_is_taken_back() {
    for corrected in [
        json!({}),
        json!({ "decimal_mark": "point" }),
        json!({ "delimiter": "tab" }),
        json!({ "delimiter": "comma", "decimal_mark": "point" }),
    ] {
        let options = json!({ "bench": bench(), "corrected": corrected });
        let first = read(MIXED, &options).expect("a log");
        assert_eq!(
            (first.counts.rows, first.counts.read, first.counts.bad, first.counts.corrected),
            (11, 4, 4, 3)
        );
        let text = first.text.clone().expect("asked for");
        let again = read(&text, &options).unwrap_or_else(|refused| panic!("{text}\n{refused:?}"));
        assert_eq!(essence(&again), essence(&first), "{text}");
        assert_eq!(
            text.lines().filter(|line| !line.starts_with('#')).count(),
            12,
            "all rows are kept: {text}"
        );
        assert!(
            text.contains("k = 2") && text.contains("1550 nm") && text.contains(door::version()),
            "{text}"
        );
    }
    let many: String =
        (0..300).map(|row| format!("{}.5,{:e}\n", row, 1e-6 + f64::from(row) * 1e-9)).collect();
    let options = json!({ "bench": bench(), "corrected": {} });
    let first = read(&format!("Time (min),Power (W)\n{many}"), &options).expect("a log");
    let again = read(&first.text.clone().expect("asked for"), &options).expect("its own log");
    assert_eq!(essence(&again), essence(&first));
}

fn sliced(text: &[u8], at: &[usize], options: &Value) -> Value {
    let mut reader = LogReader::new(&tree(options));
    let (mut from, mut written) = (0, Vec::new());
    for to in at.iter().copied().chain([text.len()]) {
        reader.push(&text[from..to]);
        written.extend(reader.take());
        from = to;
    }
    let mut outcome = match reader.finish() {
        Ok(log) => json!(log),
        Err(refused) => json!(refused),
    };
    written.extend(outcome["text"].as_str().unwrap_or_default().bytes());
    outcome["text"] = json!(String::from_utf8_lossy(&written));
    outcome
}

#[test]
fn where_the_bytes_are_cut_makes_no_difference() {
    let options = json!({ "bench": bench(), "corrected": {} });
    // Longer than the head that is looked at, with quoted cells that hold line ends.
    let long: String =
        (0..3000).map(|row| format!("2026-11-30;14:05:09;{row},5;µW;1310;\"two\nlines\";OK\r\n")).collect();
    for text in [MIXED.to_owned(), format!("{MIXED}{long}\"open;1;2\n{long}")] {
        let bytes = text.as_bytes();
        let whole = sliced(bytes, &[], &options);
        assert!(whole["counts"]["read"].as_f64().is_some_and(|read| read >= 4.0), "{whole}");
        let places: Vec<usize> = match bytes.len() {
            short if short < 2000 => (1..short).collect(),
            length => (1..length).step_by(997).chain(65_530..65_545).chain([length - 1]).collect(),
        };
        for place in places {
            assert!(sliced(bytes, &[place], &options) == whole, "cut at {place}");
        }
    }
    let bytes = MIXED.as_bytes();
    let each: Vec<usize> = (1..bytes.len()).collect();
    assert_eq!(sliced(bytes, &each, &options), sliced(bytes, &[], &options), "byte by byte");
}

#[test]
fn a_quotation_mark_that_stays_open_swallows_no_more_than_its_line() {
    let rows: String = (0..20_000).map(|row| format!("{row};1e-6\n")).collect();
    let text = format!("Time (s);Power (W)\n{rows}\"5;1e-6\n{rows}");
    let log = good(&text);
    assert_eq!((log.counts.read, log.counts.bad), (40_000, 1));
    assert_eq!(log.reading.table.bad_rows[0].line, 20_002);
    let endless = format!("Time (s);Power (W)\n{rows}{}\n{rows}", "7".repeat(200_000));
    let log = good(&endless);
    assert_eq!((log.counts.read, log.counts.bad, log.counts.rows), (40_000, 1, 40_001));
    let bytes = endless.as_bytes();
    let whole = sliced(bytes, &[], &json!({}));
    let every: Vec<usize> = (1..bytes.len()).step_by(10_007).collect();
    assert!(sliced(bytes, &every, &json!({})) == whole);
}

#[test]
fn extremes_stay_visible_and_gaps_too() {
    let mut rows: Vec<String> = (0..100_000).map(|row| format!("{row},{:e}", 1e-6)).collect();
    rows[54_321] = "54321,7e-6".to_owned();
    rows[12_345] = "12345,-2e-6".to_owned();
    for row in rows.iter_mut().skip(70_000).take(5000) {
        *row = format!("{},9.91E37", row.split(',').next().unwrap_or_default());
    }
    let log = good(&format!("Time (s),Power (W)\n{}\n", rows.join("\n")));
    let drawn = &log.curves[0];
    let (low, high) = (&drawn.curve.lines[0], &drawn.curve.lines[1]);
    assert!(low.x.len() > 900 && low.x.len() <= 2000, "{}", low.x.len());
    let greatest = high.y.iter().copied().fold(f64::MIN, f64::max);
    let least = low.y.iter().copied().fold(f64::MAX, f64::min);
    assert!((greatest - 7.0).abs() < 1e-12 && (least + 2.0).abs() < 1e-12, "in µW: {least} to {greatest}");
    assert_eq!(drawn.band.breaks.len(), 1);
    assert_eq!(drawn.curve.x.unit, "h");
    let broken_at = low.x[drawn.band.breaks[0]] * 3600.0;
    assert!((74_900.0..75_200.0).contains(&broken_at), "{broken_at}");
    // A pause of the log is a gap too.
    let pause: String =
        (0..500).map(|row| format!("{},1e-6\n", if row < 250 { row } else { row + 100 })).collect();
    let log = good(&format!("Time (s),Power (W)\n{pause}"));
    assert_eq!(log.curves[0].band.breaks, [250]);
    let back = good("Time (s),Power (W)\n0,1e-6\n5,2e-6\n3,1e-6\n");
    assert_eq!((back.counts.steps_back, back.curves[0].curve.x.label), (1, "Row"));
}

proptest! {
    #![proptest_config(ProptestConfig { rng_seed: RngSeed::Fixed(20_261_130), cases: 400, ..ProptestConfig::default() })]

    #[test]
    fn whatever_arrives_is_read_or_refused_and_slicing_makes_no_difference(
        cells in prop::collection::vec(prop::sample::select(vec![
            "Time", "Power (W)", "Power (dBm)", "nm", "Status", "Unit", ";", ";", ";", ",", "\t", " ", "\n", "\n", "\n", "\r", "\r\n", "\"", "#",
            "1", "-20,5", "1e-6", "9.91E37", "1e400", "-1e308", "1310", "2026-11-30T14:05:09", "14:05", "2026-11-30", "µW", "\u{feff}",
            "NaN", "é", "sep=;", "0000000000000000000000001", "Wavelength: 1310 nm", "999999999999999999999999e-30",
        ]), 0..60),
        cut in 0.0..1.0_f64,
    ) {
        let text = cells.concat();
        let options = json!({ "bench": bench(), "corrected": {} });
        let place = (cut * text.len() as f64) as usize;
        let whole = sliced(text.as_bytes(), &[], &options);
        prop_assert_eq!(&sliced(text.as_bytes(), &[place], &options), &whole);
        // serde_json writes NaN and infinity as null.
        for of in ["raw", "corrected"] {
            prop_assert!(whole[of].is_null() || whole[of]["mean_w"].is_number(), "{}", whole);
        }
    }

    #[test]
    fn bytes_that_are_no_text_do_no_harm(bytes in prop::collection::vec(any::<u8>(), 0..300)) {
        let mut reader = LogReader::new(&Tree::Null);
        reader.push(b"Time (s);Power (W)\n0;1e-6\n");
        reader.push(&bytes);
        let _ = reader.finish();
    }
}

/// For the check that puts the same log to the built core and compares bit by bit (tests/node/log.test.mjs).
#[test]
fn a_native_log_is_written_for_the_built_core_to_repeat() {
    let rows: String = (0..2500)
        .map(|row| {
            let level = -20.0 - f64::from(row * 7919 % 1000) * 1e-3;
            format!(
                "2026-11-30;14:{:02}:{:02};{level:.3};dBm;{};R1;OK\n",
                row / 60,
                row % 60,
                1310 + row % 240
            )
        })
        .collect();
    let options = json!({ "bench": bench(), "corrected": {}, "choices": { "decimal_mark": "point" } });
    let calls: Vec<Value> = [
        MIXED.replace(',', "."),
        format!("Date;Time;Reading;Unit;Set (nm);Range;Status\n{rows}"),
    ]
    .iter()
    .map(|text| json!({ "text": text, "options": options, "value": read(text, &options).expect("a log") }))
    .collect();
    let folder = concat!(env!("CARGO_MANIFEST_DIR"), "/target");
    std::fs::create_dir_all(folder).expect("target/ can be made");
    std::fs::write(format!("{folder}/replay-log.json"), json!(calls).to_string())
        .expect("target/ can be written");
}

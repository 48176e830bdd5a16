//! Digital calibration certificates: each way of writing the numbers is read, what is chosen counts, and what is written
//! has the structure that the schema demands. All files here are invented.

use leastlight::door;
use leastlight::fault::{Code, Fault};
use leastlight::record::{DccReading, QuantityKind, Role};
use leastlight::tree::Tree;
use proptest::prelude::*;
use proptest::test_runner::RngSeed;
use roxmltree::{Document, Node};
use serde_json::{Value, json};

const DCC: &str = "https://ptb.de/dcc";
const SI: &str = "https://ptb.de/si";

fn tree(value: &Value) -> Tree {
    Tree::from_json(&value.to_string()).expect("JSON made here is JSON")
}

fn read(text: &str) -> Result<DccReading, Vec<Fault>> {
    door::read_dcc(text, &Tree::Null)
}

fn chosen(text: &str, choices: Value) -> Result<DccReading, Vec<Fault>> {
    door::read_dcc(text, &tree(&choices))
}

/// A file with these results.
fn file(version: &str, results: &str) -> String {
    format!(
        r#"<?xml version="1.0" encoding="UTF-8"?>
<dcc:digitalCalibrationCertificate schemaVersion="{version}" xmlns:dcc="{DCC}" xmlns:si="{SI}">
  <dcc:administrativeData>
    <dcc:coreData>
      <dcc:uniqueIdentifier> AR-0042 </dcc:uniqueIdentifier>
      <dcc:endPerformanceDate>2026-11-30</dcc:endPerformanceDate>
    </dcc:coreData>
    <dcc:items><dcc:item><dcc:name>
      <dcc:content lang="de">Messkopf</dcc:content><dcc:content lang="en">Meter head</dcc:content>
    </dcc:name></dcc:item></dcc:items>
    <dcc:calibrationLaboratory><dcc:contact>
      <dcc:name><dcc:content>Ansa Ridge (invented)</dcc:content></dcc:name>
    </dcc:contact></dcc:calibrationLaboratory>
  </dcc:administrativeData>
  <dcc:measurementResults><dcc:measurementResult>
    <dcc:influenceConditions><dcc:influenceCondition><dcc:data>
      <dcc:quantity><si:real><si:value>23</si:value><si:unit>\degreecelsius</si:unit></si:real></dcc:quantity>
    </dcc:data></dcc:influenceCondition></dcc:influenceConditions>
    <dcc:results>{results}</dcc:results>
  </dcc:measurementResult></dcc:measurementResults>
</dcc:digitalCalibrationCertificate>"#
    )
}

fn result(inside: &str) -> String {
    format!(
        "<dcc:result><dcc:name><dcc:content>Result</dcc:content></dcc:name><dcc:data>{inside}</dcc:data></dcc:result>"
    )
}

fn quantity(name: &str, attributes: &str, inside: &str) -> String {
    format!(
        "<dcc:quantity {attributes}><dcc:name><dcc:content>{name}</dcc:content></dcc:name>{inside}</dcc:quantity>"
    )
}

fn numbers(values: &str, unit: &str, more: &str) -> String {
    format!(
        "<si:realListXMLList><si:valueXMLList>{values}</si:valueXMLList><si:unitXMLList>{unit}</si:unitXMLList>{more}\
         </si:realListXMLList>"
    )
}

const OLDER: &str = "<si:expandedUncXMLList><si:uncertaintyXMLList>0.0092 0.0098</si:uncertaintyXMLList>\
    <si:coverageFactorXMLList>2</si:coverageFactorXMLList><si:coverageProbabilityXMLList>0.95\
    </si:coverageProbabilityXMLList></si:expandedUncXMLList>";

const NEWER: &str = "<si:measurementUncertaintyUnivariateXMLList><si:expandedMUXMLList><si:valueExpandedMUXMLList>\
    0.0092 0.0098</si:valueExpandedMUXMLList><si:coverageFactorXMLList>2 2</si:coverageFactorXMLList>\
    <si:coverageProbabilityXMLList>0.95</si:coverageProbabilityXMLList></si:expandedMUXMLList>\
    </si:measurementUncertaintyUnivariateXMLList>";

fn usual(version: &str, wavelengths: &str, values: &str) -> String {
    file(version, &result(&format!("<dcc:list>{wavelengths}{values}</dcc:list>")))
}

fn wavelengths() -> String {
    quantity("Wavelength", r#"refType="basic_nominalValue""#, &numbers("1310 1550", r"\nano\metre", ""))
}

/// 0.92 A/W ± 1 % at 1310 nm and 0.98 A/W ± 1 % at 1550 nm, k = 2.
fn assert_usual(reading: &DccReading, said: &str) {
    let certificate = reading.certificate.as_ref().unwrap_or_else(|| panic!("{said}: {reading:?}"));
    assert_eq!(certificate.form.word(), "responsivity", "{said}");
    assert_eq!(certificate.coverage_factor, Some(2.0), "{said}");
    assert_eq!(certificate.bad_points, [], "{said}");
    let expected = [(1310.0, 0.92), (1550.0, 0.98)];
    assert_eq!(certificate.points.len(), 2, "{said}");
    for (point, (nm, value)) in certificate.points.iter().zip(expected) {
        assert_eq!((point.wavelength_nm, point.value), (nm, value), "{said}");
        let percent = point.expanded_percent.expect("an uncertainty");
        assert!((percent - 1.0).abs() < 1e-12, "{said}: {percent}");
    }
}

#[test]
fn each_way_of_writing_the_same_numbers_gives_the_same_certificate() {
    let unit = r"\ampere\watt\tothe{-1}";
    let newer_single = |value: &str, u: &str| {
        format!(
            "<si:real><si:value>{value}</si:value><si:unit>{unit}</si:unit><si:measurementUncertaintyUnivariate>\
             <si:expandedMU><si:valueExpandedMU>{u}</si:valueExpandedMU><si:coverageFactor>2</si:coverageFactor>\
             <si:coverageProbability>0.95</si:coverageProbability></si:expandedMU>\
             </si:measurementUncertaintyUnivariate></si:real>"
        )
    };
    let older_single = |value: &str, u: &str| {
        format!(
            "<si:real><si:value>{value}</si:value><si:unit>{unit}</si:unit><si:expandedUnc><si:uncertainty>{u}\
             </si:uncertainty><si:coverageFactor>2</si:coverageFactor><si:coverageProbability>0.95\
             </si:coverageProbability></si:expandedUnc></si:real>"
        )
    };
    let nm = |value: &str| {
        format!(r"<si:real><si:value>{value}</si:value><si:unit>\nano\metre</si:unit></si:real>")
    };
    let one_result_each = |single: &dyn Fn(&str, &str) -> String| -> String {
        [("1310", "0.92", "0.0092"), ("1550", "0.98", "0.0098")]
            .iter()
            .map(|(wavelength, value, u)| {
                let both =
                    quantity("Wavelength", "", &nm(wavelength)) + &quantity("R", "", &single(value, u));
                result(&format!("<dcc:list>{both}</dcc:list>"))
            })
            .collect()
    };
    let listed = format!(
        "<si:list><si:realList><si:listUnit>{unit}</si:listUnit>\
         <si:real><si:value>0.92</si:value><si:expandedUnc><si:uncertainty>0.0092</si:uncertainty>\
         <si:coverageFactor>2</si:coverageFactor></si:expandedUnc></si:real>\
         <si:real><si:value>9.8E-1</si:value><si:expandedUnc><si:uncertainty>0.0098</si:uncertainty>\
         <si:coverageFactor>2</si:coverageFactor></si:expandedUnc></si:real></si:realList></si:list>"
    );
    let hybrid = format!(
        "<si:hybrid>{}{}</si:hybrid>",
        numbers("4.3 4.2", r"\volt\per\lumen", ""),
        numbers("920 980", r"\milli\ampere\per\watt", &OLDER.replace("0.0092 0.0098", "9.2 9.8"))
    );
    let metres = quantity("λ", "", &numbers("1.31E-6 1.55E-6", r"\metre", ""));
    let responsivity = |more: &str| quantity("Responsivity", "", &numbers("0.92 0.98", unit, more));
    let standard = NEWER.replace("expandedMU", "standardMU").replace("valueExpandedMU", "valueStandardMU");
    let files = [
        ("2.4.0, older, metres", usual("2.4.0", &metres, &responsivity(OLDER))),
        ("3.1.2, older", usual("3.1.2", &wavelengths(), &responsivity(OLDER))),
        ("3.3.0, newer", usual("3.3.0", &wavelengths(), &responsivity(NEWER))),
        ("3.2.1, singles", file("3.2.1", &one_result_each(&older_single))),
        ("3.3.0, singles", file("3.3.0", &one_result_each(&newer_single))),
        ("2.4.0, listed", usual("2.4.0", &wavelengths(), &quantity("R", "", &listed))),
        ("3.0.0, hybrid", usual("3.0.0", &wavelengths(), &quantity("R", "", &hybrid))),
        ("with a mark", format!("\u{feff}{}", usual("3.3.0", &wavelengths(), &responsivity(NEWER)))),
    ];
    for (said, text) in &files {
        let reading = read(text).unwrap_or_else(|faults| panic!("{said}: {faults:?}"));
        assert_usual(&reading, said);
        assert!(reading.guessed, "{said}");
        assert_eq!((reading.identifier.as_str(), reading.item.as_str()), ("AR-0042", "Meter head"), "{said}");
        assert_eq!(reading.laboratory, "Ansa Ridge (invented)", "{said}");
        assert_eq!(reading.quantities.len(), 2, "{said}");
        assert!(!reading.signed && !reading.notes.iter().any(|note| note.contains("2.4 to 3.3")), "{said}");
    }
    // A standard uncertainty has k = 1 by what it is.
    let reading =
        read(&usual("3.3.0", &wavelengths(), &responsivity(&standard))).expect("standard uncertainties");
    assert_eq!(reading.certificate.expect("a certificate").coverage_factor, Some(1.0));
}

#[test]
fn quantities_are_listed_for_a_person_to_choose() {
    let temperature = quantity("Head temperature", "", &numbers("296 297", r"\kelvin", ""));
    let power = quantity("Power", r#"refType="basic_measuredValue""#, &numbers("1e-3 1e-3", r"\watt", ""));
    let ratio = quantity("Quotient", "", &numbers("1.01 0.99", r"\one", OLDER));
    let text =
        file("3.3.0", &result(&format!("<dcc:list>{temperature}{}{power}{ratio}</dcc:list>", wavelengths())));
    let reading = read(&text).expect("a list");
    let seen: Vec<(&str, QuantityKind, usize)> =
        reading.quantities.iter().map(|q| (q.unit.as_str(), q.kind, q.count)).collect();
    assert_eq!(
        seen,
        [
            (r"\kelvin", QuantityKind::Other, 2),
            (r"\nano\metre", QuantityKind::Length, 2),
            (r"\watt", QuantityKind::Other, 2),
            (r"\one", QuantityKind::Ratio, 2),
        ]
    );
    assert_eq!(reading.quantities[1].place, "Result");
    assert_eq!((reading.quantities[3].first, reading.quantities[3].coverage_factor), (Some(1.01), Some(2.0)));
    // A quotient may be anything: nothing is made of it before a person says what it is.
    assert_eq!(reading.certificate, None);
    assert_eq!(reading.taken.wavelength, Some(1));
    assert!(reading.notes.iter().any(|note| note.contains("choose them")), "{:?}", reading.notes);
    let made =
        chosen(&text, json!({ "wavelength": 1, "value": 3, "form": "correction_factor" })).expect("chosen");
    assert!(!made.guessed);
    let certificate = made.certificate.expect("a certificate");
    assert_eq!(certificate.form.word(), "correction_factor");
    assert_eq!(certificate.points[0].value, 1.01);
    assert!((certificate.points[0].expanded_percent.expect("U") - 0.92 / 1.01).abs() < 1e-12);
    // A unit that is none of a wavelength or a value is refused by its name.
    for (choice, unit) in [(json!({ "value": 2 }), r"\watt"), (json!({ "wavelength": 0 }), r"\kelvin")] {
        let faults = chosen(&text, choice).expect_err("no such unit");
        assert_eq!(faults[0].code, Code::Conflict);
        assert!(faults[0].sentence.contains(unit), "{}", faults[0].sentence);
    }
}

#[test]
fn choices_are_checked_and_all_faults_come_at_once() {
    let value = quantity("R", "", &numbers("0.92 0.98", r"\ampere\watt\tothe{-1}", ""));
    let text = usual("3.3.0", &wavelengths(), &value);
    let choices =
        json!({ "wavelength": 1.5, "value": 7, "form": "colour", "coverage_factor": 0.5, "what": 1 });
    let faults = chosen(&text, choices).expect_err("all of it is wrong");
    let mut pointers: Vec<&str> = faults.iter().map(|fault| fault.pointer.as_str()).collect();
    pointers.sort_unstable();
    assert_eq!(
        pointers,
        [
            "/choices/coverage_factor",
            "/choices/form",
            "/choices/value",
            "/choices/wavelength",
            "/choices/what"
        ]
    );
    let faults = chosen(&text, json!({ "value": 1, "form": "deviation" })).expect_err("A/W is no deviation");
    assert_eq!((faults[0].pointer.as_str(), faults[0].code), ("/choices/form", Code::Conflict));
}

#[test]
fn deviations_relative_uncertainties_and_differing_factors_are_converted_as_said() {
    // d = +2 % and −1 %: c = 1/1.02 and 1/0.99; U = 0.5 % of k = 2 and 0.6 % of k = 3 in the unit of d.
    let unc = "<si:expandedUncXMLList><si:uncertaintyXMLList>0.5 0.6</si:uncertaintyXMLList><si:coverageFactorXMLList>2 3\
               </si:coverageFactorXMLList></si:expandedUncXMLList>";
    let deviation = quantity("", r#"refType="basic_measurementError""#, &numbers("2 -1", r"\percent", unc));
    let reading = read(&usual("3.3.0", &wavelengths(), &deviation)).expect("deviations");
    assert_eq!(reading.taken.form, Some(Role::Deviation));
    let certificate = reading.certificate.expect("a certificate");
    assert_eq!(certificate.form.word(), "correction_factor");
    assert_eq!(certificate.coverage_factor, Some(3.0));
    let expected = [(1.0 / 1.02, 0.5 / 1.02 * 1.5), (1.0 / 0.99, 0.6 / 0.99)];
    for (point, (value, percent)) in certificate.points.iter().zip(expected) {
        assert!((point.value - value).abs() < 1e-15);
        assert!((point.expanded_percent.expect("U") - percent).abs() < 1e-12);
    }
    assert!(
        reading.notes.iter().any(|note| note.contains("brought to the greatest, k = 3")),
        "{:?}",
        reading.notes
    );

    // A relative uncertainty states no k; neither does a column of its own.
    let relative = format!(
        "{}<dcc:relativeUncertainty><dcc:relativeUncertaintyXmlList><si:valueXMLList>0.011 0.012</si:valueXMLList>\
         <si:unitXMLList>\\one</si:unitXMLList></dcc:relativeUncertaintyXmlList></dcc:relativeUncertainty>",
        numbers("0.92 0.98", r"\ampere\watt\tothe{-1}", "")
    );
    let apart = quantity("R", "", &numbers("0.92 0.98", r"\ampere\watt\tothe{-1}", ""))
        + &quantity("Expanded uncertainty", "", &numbers("1.1 1.2", r"\percent", ""));
    for value in [quantity("R", "", &relative), apart] {
        let text = usual("3.3.0", &wavelengths(), &value);
        let found = read(&text).expect("relative").certificate.expect("a certificate");
        assert_eq!(found.coverage_factor, None);
        assert!((found.points[1].expanded_percent.expect("U") - 1.2).abs() < 1e-12);
        let found = chosen(&text, json!({ "coverage_factor": 2 })).expect("k was chosen").certificate;
        assert_eq!(found.expect("a certificate").coverage_factor, Some(2.0));
    }
}

#[test]
fn numbers_that_are_no_points_are_named_and_the_others_kept() {
    let nm = quantity("Wavelength", "", &numbers("1310 NaN 15500 1490 1550", r"\nano\metre", ""));
    let value = quantity("R", "", &numbers("0.92 0.9 0.9 -1 0.98", r"\ampere\watt\tothe{-1}", ""));
    let found =
        read(&usual("3.3.0", &nm, &value)).expect("two good ones").certificate.expect("a certificate");
    assert_eq!(found.points.len(), 2);
    assert_eq!(found.bad_points.iter().map(|bad| bad.number).collect::<Vec<_>>(), [2, 3, 4]);
    assert_eq!(found.coverage_factor, None);

    let three = quantity("R", "", &numbers("0.92 0.98 0.97", r"\ampere\watt\tothe{-1}", ""));
    let choices = json!({ "value": 1, "form": "responsivity" });
    let faults = chosen(&usual("3.3.0", &wavelengths(), &three), choices).expect_err("three are no two");
    assert_eq!((faults[0].pointer.as_str(), faults[0].code), ("/choices/value", Code::Conflict));
    let twice = quantity("Wavelength", "", &numbers("1550 1550", r"\nano\metre", ""));
    let two = quantity("R", "", &numbers("0.92 0.98", r"\ampere\watt\tothe{-1}", ""));
    let faults = read(&usual("3.3.0", &twice, &two)).expect_err("one wavelength twice");
    assert_eq!((faults[0].pointer.as_str(), faults[0].code), ("", Code::Conflict));
}

#[test]
fn a_signature_is_seen_and_never_said_to_be_good() {
    let value = quantity("R", "", &numbers("0.92 0.98", r"\ampere\watt\tothe{-1}", OLDER));
    let text = usual("3.3.0", &wavelengths(), &value).replace(
        "</dcc:digitalCalibrationCertificate>",
        r#"<ds:Signature xmlns:ds="http://www.w3.org/2000/09/xmldsig#"/></dcc:digitalCalibrationCertificate>"#,
    );
    let reading = read(&text).expect("a signed file");
    assert!(reading.signed);
    assert!(reading.notes.contains(&"A signature is present; it was not verified.".to_owned()));
    let odd = usual("4.0.0", &wavelengths(), &value);
    assert!(read(&odd).expect("another version").notes.iter().any(|note| note.contains("4.0.0")));
}

#[test]
fn what_is_no_certificate_is_refused_with_its_place() {
    let cut = "<?xml version=\"1.0\"?>\n<a>\n<b></a>";
    let bomb = "<!DOCTYPE a [<!ENTITY b \"bbbb\">]><a>&b;</a>";
    for (text, code, part) in [
        ("", Code::Missing, "empty"),
        ("wavelength;value\n1310;1", Code::Unreadable, "line 1"),
        (cut, Code::Unreadable, "line 3"),
        (bomb, Code::Unreadable, ""),
        ("<a/>", Code::Unreadable, "begins with a"),
        (&file("3.3.0", ""), Code::Unreadable, "no quantity"),
    ] {
        let faults = read(text).expect_err("no certificate");
        assert_eq!((faults.len(), faults[0].pointer.as_str(), faults[0].code), (1, "", code), "{text}");
        assert!(faults[0].sentence.contains(part), "{}", faults[0].sentence);
    }
    // So deep that a reader that calls itself would not come back.
    let deep = format!("{}{}", "<a>".repeat(200_000), "</a>".repeat(200_000));
    assert!(read(&deep).is_err());
}

#[test]
fn a_file_that_nests_without_end_does_no_harm() {
    let levels = 100_000;
    let deep = format!("{}{}", "<dcc:list>".repeat(levels), "</dcc:list>".repeat(levels));
    // Refused or read, but neither a crash nor a long wait.
    let _ = read(&file("3.3.0", &deep));
    let _ = read(&"<a>".repeat(levels));
}

fn administration() -> Value {
    json!({
        "unique_identifier": "AR-2026-017", "language": "en",
        "begin_date": "2026-11-29", "end_date": "2026-11-30", "issue_date": "2026-12-01", "location": "laboratory",
        "laboratory": { "name": "Ansa Ridge & Sons <invented>", "country": "CH", "city": "Ansa" },
        "customer": { "name": "West \"dome\"", "country": "IT" },
        "responsible_person": "A. Nobody",
        "item": { "name": "Meter head", "manufacturer": "Invented Optics", "model": "IO 1",
                  "identification": "SN 0815", "identified_by": "manufacturer" },
        "method": "Comparison with a reference", "coverage_probability": 0.9545, "temperature_c": 23.1,
        "reference": { "name": "Reference head", "certificate": "AR-0042" },
        "history": ["Transfer calibration by comparison, 2026-11-30", "Blocks: 5 at 1310 nm"],
    })
}

fn bench(form: &str) -> Value {
    json!({ "meter": { "certificate": { "form": form, "coverage_factor": 2.13, "points": [
        { "wavelength_nm": 1310, "value": 0.921, "expanded_percent": 1.1 },
        { "wavelength_nm": 1550.12, "value": 1.0123456789, "expanded_percent": 0.7 },
    ] } } })
}

fn write(bench: &Value, administration: &Value) -> Result<String, Vec<Fault>> {
    door::write_dcc(&tree(bench), &tree(administration), None)
}

#[test]
fn what_is_written_is_read_back() {
    for form in ["responsivity", "correction_factor"] {
        for language in ["en", "de", "fr", "es", "it"] {
            let mut administration = administration();
            administration["language"] = json!(language);
            let text = write(&bench(form), &administration).unwrap_or_else(|faults| panic!("{faults:?}"));
            let reading = read(&text).unwrap_or_else(|faults| panic!("{text}: {faults:?}"));
            assert_eq!(reading.schema_version, "3.3.0");
            assert_eq!(reading.laboratory, "Ansa Ridge & Sons <invented>");
            assert_eq!(
                (reading.identifier.as_str(), reading.end_date.as_str()),
                ("AR-2026-017", "2026-11-30")
            );
            let found = reading.certificate.unwrap_or_else(|| panic!("{language}: {text}"));
            assert_eq!(found.form.word(), form, "{language}");
            assert_eq!(found.coverage_factor, Some(2.13));
            let expected = [(1310.0, 0.921, 1.1), (1550.12, 1.0123456789, 0.7)];
            assert_eq!(found.points.len(), 2);
            for (point, (nm, value, percent)) in found.points.iter().zip(expected) {
                assert_eq!((point.wavelength_nm, point.value), (nm, value));
                assert!((point.expanded_percent.expect("U") / percent - 1.0).abs() < 1e-14);
            }
        }
    }
    // Left where another tool can look at it; see tests/reference/dcc.py.
    let place = std::path::Path::new(env!("CARGO_TARGET_TMPDIR")).join("dcc.xml");
    std::fs::write(place, write(&bench("responsivity"), &administration()).expect("a file"))
        .expect("a place to write");
}

#[test]
fn uncertainties_can_be_left_out_by_choice() {
    let text = write(&bench("responsivity"), &administration()).expect("a file");
    let found = chosen(&text, json!({ "expanded": "none" })).expect("a certificate");
    let certificate = found.certificate.expect("a certificate");
    assert!(certificate.points.iter().all(|point| point.expanded_percent.is_none()));
    assert_eq!((certificate.coverage_factor, found.taken.expanded), (None, None));
}

#[test]
fn numbers_of_the_administration_may_be_typed() {
    let mut typed = administration();
    typed["temperature_c"] = json!("23,1 °C");
    typed["coverage_probability"] = json!("95,45 %");
    let write = |given: &Value, mark| door::write_dcc(&tree(&bench("responsivity")), &tree(given), mark);
    let text = write(&typed, Some("auto")).expect("a file");
    assert!(text.contains("<si:value>23.1</si:value>"), "{text}");
    assert!(text.contains("<si:coverageProbabilityXMLList>0.9545</"), "{text}");
    assert_eq!(write(&typed, None).expect_err("texts are no numbers").len(), 2);
    typed["coverage_probability"] = json!(" ");
    let faults = write(&typed, Some("auto")).expect_err("a blank text is none");
    assert_eq!((faults.len(), faults[0].code), (1, Code::Missing));
}

#[test]
fn nothing_is_made_up_for_what_is_missing() {
    let faults = write(&bench("responsivity"), &json!({})).expect_err("nothing was said");
    let mut found: Vec<(&str, Code)> =
        faults.iter().map(|fault| (fault.pointer.as_str(), fault.code)).collect();
    found.sort_by_key(|(pointer, _)| pointer.to_owned());
    let missing = [
        "/administration/begin_date",
        "/administration/coverage_probability",
        "/administration/customer/country",
        "/administration/customer/name",
        "/administration/end_date",
        "/administration/item/identification",
        "/administration/item/name",
        "/administration/laboratory/country",
        "/administration/laboratory/name",
        "/administration/language",
        "/administration/location",
        "/administration/method",
        "/administration/responsible_person",
        "/administration/unique_identifier",
    ];
    assert_eq!(found, missing.map(|pointer| (pointer, Code::Missing)));
    assert_eq!(write(&bench("responsivity"), &Value::Null).expect_err("nothing at all"), faults);
    for key in missing.map(|pointer| pointer.trim_start_matches("/administration/")) {
        let mut administration = administration();
        let place = key.split('/').fold(&mut administration, |place, key| &mut place[key]);
        *place = Value::Null;
        let faults = write(&bench("responsivity"), &administration).expect_err(key);
        assert_eq!(faults.len(), 1, "{key}: {faults:?}");
        assert_eq!(faults[0].pointer, format!("/administration/{key}"));
    }
}

#[test]
fn what_the_schema_cannot_hold_is_refused_at_its_place() {
    for (pointer, value, code) in [
        ("/language", json!("EN"), Code::Range),
        ("/language", json!("eng"), Code::Range),
        ("/laboratory/country", json!("ch"), Code::Range),
        ("/begin_date", json!("2026-12-24"), Code::Conflict),
        ("/begin_date", json!("29.11.2026"), Code::Unreadable),
        ("/issue_date", json!("2026-02-30"), Code::Unreadable),
        ("/location", json!("mountain"), Code::Range),
        ("/coverage_probability", json!(1), Code::Range),
        ("/item/identified_by", json!("nobody"), Code::Range),
        ("/method", json!("a\u{0}b"), Code::Unreadable),
        ("/method", json!(" \n "), Code::Missing),
        ("/history", json!("one"), Code::Unreadable),
        ("/reference", json!({ "name": "head" }), Code::Missing),
        ("/colour", json!("red"), Code::UnknownField),
    ] {
        let mut administration = administration();
        let place = pointer.split('/').skip(1).fold(&mut administration, |place, key| &mut place[key]);
        *place = value;
        let faults = write(&bench("responsivity"), &administration).expect_err(pointer);
        assert_eq!(faults.len(), 1, "{pointer}: {faults:?}");
        assert_eq!(faults[0].code, code, "{pointer}: {faults:?}");
        let owner = if code == Code::Conflict { "/end_date" } else { pointer };
        assert!(faults[0].pointer.starts_with(&format!("/administration{owner}")), "{faults:?}");
    }
    let mut half = bench("responsivity");
    half["meter"]["certificate"]["points"][0]["expanded_percent"] = Value::Null;
    assert_eq!(write(&half, &administration()).expect_err("half")[0].pointer, "/meter/certificate/points");
    let mut without = bench("responsivity");
    without["meter"]["certificate"]["coverage_factor"] = Value::Null;
    let faults = write(&without, &administration()).expect_err("no k");
    assert_eq!(faults[0].pointer, "/meter/certificate/coverage_factor");
    assert_eq!(write(&json!({}), &administration()).expect_err("none")[0].pointer, "/meter/certificate");
}

/// What DCC 3.3.0 and D-SI 2.2.0 say of the elements that are written here, stated again: the children of each in their
/// order, `?` for one that may be absent, `+` for one or more. From the published schemas, read by hand; the schemas
/// themselves are not in this repository.
const STRUCTURE: &[(&str, &str)] = &[
    ("digitalCalibrationCertificate", "administrativeData measurementResults"),
    ("administrativeData", "dccSoftware coreData items calibrationLaboratory respPersons customer"),
    ("dccSoftware", "software+"),
    ("usedSoftware", "software+"),
    ("software", "name release type? description?"),
    (
        "coreData",
        "countryCodeISO3166_1 usedLangCodeISO639_1+ mandatoryLangCodeISO639_1+ uniqueIdentifier identifications? \
         receiptDate? beginPerformanceDate endPerformanceDate performanceLocation issueDate?",
    ),
    ("items", "name? description? owner? manufacturer? identifications? item+"),
    ("item", "name description? owner? manufacturer? model? identifications"),
    ("manufacturer", "name eMail? phone? fax? link? location?"),
    ("person", "name eMail? phone? fax? link? location?"),
    ("customer", "name eMail? phone? fax? link? location"),
    ("contact", "name eMail? phone? fax? link? location"),
    ("location", "city? countryCode"),
    ("calibrationLaboratory", "calibrationLaboratoryCode? contact"),
    ("respPersons", "respPerson+"),
    ("respPerson", "person description? role? mainSigner?"),
    ("identifications", "identification+"),
    ("identification", "issuer value name?"),
    (
        "measurementResults",
        "usedMethods? usedSoftware? measuringEquipments? influenceConditions? measurementResult+",
    ),
    (
        "measurementResult",
        "name description? usedMethods? usedSoftware? measuringEquipments? influenceConditions? results \
         measurementMetaData?",
    ),
    ("usedMethods", "usedMethod+"),
    ("usedMethod", "name description? norm? reference? link?"),
    ("measuringEquipments", "name? measuringEquipment+"),
    ("measuringEquipment", "name description? certificate? manufacturer? model? identifications?"),
    ("influenceConditions", "influenceCondition+"),
    ("influenceCondition", "name description? status? certificate? data"),
    ("results", "result+"),
    ("result", "name description? data"),
    ("data", "quantity? list?"),
    ("list", "name? description? quantity+"),
    ("quantity", "name? description? real? realListXMLList?"),
    ("name", "content+"),
    ("description", "name? content+"),
    ("real", "label? value unit"),
    ("realListXMLList", "labelXMLList? valueXMLList unitXMLList measurementUncertaintyUnivariateXMLList?"),
    ("measurementUncertaintyUnivariateXMLList", "expandedMUXMLList"),
    (
        "expandedMUXMLList",
        "valueExpandedMUXMLList coverageFactorXMLList coverageProbabilityXMLList distributionXMLList?",
    ),
];

/// What is wrong with the children of an element, if anything.
fn misplaced(node: Node, content: &str) -> Option<String> {
    let mut children =
        node.children().filter(Node::is_element).map(|child| child.tag_name().name()).peekable();
    for rule in content.split_whitespace() {
        let name = rule.trim_end_matches(['?', '+']);
        let mut count = 0;
        while children.next_if(|child| *child == name).is_some() {
            count += 1;
        }
        let fits = match rule.chars().next_back() {
            Some('?') => count <= 1,
            Some('+') => count >= 1,
            _ => count == 1,
        };
        if !fits {
            return Some(format!("{}: {count} of {name}", node.tag_name().name()));
        }
    }
    children.next().map(|child| format!("{}: {child} is not expected there", node.tag_name().name()))
}

/// Everything in a written file that the structure does not allow.
fn faulty(text: &str) -> Vec<String> {
    let document = Document::parse(text).expect("XML");
    let mut wrong = Vec::new();
    for node in document.descendants().filter(Node::is_element) {
        let name = node.tag_name().name();
        let vocabulary =
            if node.ancestors().any(|up| up.tag_name().namespace() == Some(SI)) { SI } else { DCC };
        if node.tag_name().namespace() != Some(vocabulary) {
            wrong.push(format!("{name} is in another vocabulary"));
        }
        let is_leaf = !node.children().any(|child| child.is_element());
        let value = node.text().unwrap_or("");
        match STRUCTURE.iter().find(|(known, _)| *known == name) {
            Some((_, content)) => wrong.extend(misplaced(node, content)),
            None if !is_leaf => wrong.push(format!("{name} is not known")),
            None if value.trim() != value || value.is_empty() => {
                wrong.push(format!("{name} holds “{value}”"))
            }
            None => {}
        }
        if name.ends_with("XMLList") && is_leaf && value.split(' ').any(str::is_empty) {
            wrong.push(format!("{name} has blanks to spare"));
        }
        // Coverage factors have no exponent and are 1 or more; probabilities have none and are within 0 and 1.
        let plain = value.bytes().all(|b| b.is_ascii_digit() || b == b'.');
        let number = value.parse::<f64>().unwrap_or(f64::NAN);
        let good = match name {
            "coverageFactorXMLList" => plain && number >= 1.0,
            "coverageProbabilityXMLList" => plain && (0.0..=1.0).contains(&number),
            _ => true,
        };
        if !good {
            wrong.push(format!("{name} is {value}"));
        }
    }
    wrong
}

#[test]
fn a_written_file_has_the_structure_of_the_schema() {
    for form in ["responsivity", "correction_factor"] {
        let full = write(&bench(form), &administration()).expect("a file");
        assert_eq!(faulty(&full), [""; 0]);
        assert!(
            full.starts_with(
                "<?xml version=\"1.0\" encoding=\"UTF-8\"?>\n<dcc:digitalCalibrationCertificate "
            )
        );
        let mut least = administration();
        for key in ["issue_date", "temperature_c", "reference", "history"] {
            least[key] = Value::Null;
        }
        for key in ["manufacturer", "model", "identified_by"] {
            least["item"][key] = Value::Null;
        }
        least["laboratory"]["city"] = Value::Null;
        assert_eq!(faulty(&write(&bench(form), &least).expect("a file")), [""; 0]);
    }
    // The check itself sees what it should.
    let full = write(&bench("responsivity"), &administration()).expect("a file");
    for (from, to) in [
        ("<dcc:endPerformanceDate>2026-11-30</dcc:endPerformanceDate>", ""),
        ("dcc:customer", "dcc:client"),
        ("<dcc:countryCode>IT</dcc:countryCode>", ""),
        ("si:coverageFactorXMLList>2.13", "si:coverageFactorXMLList>2.13e0"),
        ("1310 1550.12", "1310  1550.12"),
        ("<dcc:uniqueIdentifier>AR-2026-017", "<dcc:uniqueIdentifier>"),
        ("xmlns:si=\"https://ptb.de/si\"", "xmlns:si=\"https://ptb.de/xi\""),
    ] {
        assert!(full.contains(from), "{from}");
        assert!(!faulty(&full.replace(from, to)).is_empty(), "{from}");
    }
}

#[test]
fn a_transfer_calibration_ends_as_a_digital_certificate_with_its_history() {
    let readings = "nm;which;dBm\n1550;ref;-20.00\n1550;dut;-20.51\n1550;dut;-20.52\n1550;ref;-20.03\n\
                    1550;dut;-20.53\n1550;ref;-20.04\n1550;ref;-20.05\n1550;dut;-20.56\n";
    let choices =
        json!({ "date": "2026-11-30", "reference_certificate": "AR-0042", "reference_device": "head 1" });
    let reference = json!({ "meter": { "certificate": { "form": "responsivity", "coverage_factor": 2,
        "points": [{ "wavelength_nm": 1550, "value": 0.98, "expanded_percent": 1.1 }] } } });
    let found =
        door::transfer_calibration(readings, &tree(&reference), &tree(&choices)).expect("a calibration");
    let certificate = serde_json::to_value(&found.certificate).expect("JSON");
    let mut administration = administration();
    administration["history"] = json!(found.history.lines);
    administration["coverage_probability"] = json!(found.coverage_probability);
    let text = write(&json!({ "meter": { "certificate": certificate } }), &administration).expect("a file");
    assert_eq!(faulty(&text), [""; 0]);
    for part in ["2026-11-30", "certificate AR-0042", "2 at 1550 nm", "head 1"] {
        assert!(text.contains(part), "{part}: {text}");
    }
    let back = read(&text).expect("own file").certificate.expect("a certificate");
    assert_eq!(back.coverage_factor, found.certificate.coverage_factor);
    assert_eq!(back.points[0].value, found.certificate.points[0].value);
}

fn fixed_seed(cases: u32) -> ProptestConfig {
    ProptestConfig {
        cases,
        rng_seed: RngSeed::Fixed(0xdcc),
        failure_persistence: None,
        ..ProptestConfig::default()
    }
}

proptest! {
    #![proptest_config(fixed_seed(300))]

    #[test]
    fn no_file_makes_the_reader_panic(text in "\\PC{0,60}", at in 0usize..4000, cut in 0usize..40) {
        let _ = read(&text);
        // A good file with a piece replaced.
        let mut good = write(&bench("responsivity"), &administration()).expect("a file");
        let floor = |mut at: usize| {
            at = at.min(good.len());
            while !good.is_char_boundary(at) {
                at -= 1;
            }
            at
        };
        let (from, to) = (floor(at), floor(at + cut));
        good.replace_range(from..to, &text);
        let _ = read(&good);
    }

    #[test]
    fn any_text_is_escaped(name in "\\PC{1,30}") {
        let mut administration = administration();
        administration["laboratory"]["name"] = json!(name);
        match write(&bench("responsivity"), &administration) {
            Ok(text) => {
                let expected = name.split_whitespace().collect::<Vec<_>>().join(" ");
                prop_assert_eq!(read(&text).expect("own file").laboratory, expected);
                prop_assert_eq!(faulty(&text), [""; 0]);
            }
            Err(faults) => prop_assert_eq!(faults[0].pointer.as_str(), "/administration/laboratory/name"),
        }
    }

    #[test]
    fn any_numbers_are_written_as_the_schema_takes_them(
        value in prop_oneof![1e-9f64..1e3, Just(1e-300), Just(999.0)], percent in 0.0f64..100.0, k in 1.0f64..10.0,
        probability in prop_oneof![1e-12f64..1.0, Just(0.5)]
    ) {
        let mut bench = bench("responsivity");
        bench["meter"]["certificate"]["coverage_factor"] = json!(k);
        bench["meter"]["certificate"]["points"][0]["value"] = json!(value);
        bench["meter"]["certificate"]["points"][0]["expanded_percent"] = json!(percent);
        let mut administration = administration();
        administration["coverage_probability"] = json!(probability);
        let text = write(&bench, &administration).map_err(|faults| TestCaseError::fail(format!("{faults:?}")))?;
        prop_assert_eq!(faulty(&text), [""; 0]);
        let back = read(&text).expect("own file").certificate.expect("a certificate");
        prop_assert_eq!(back.points[0].value, value);
        prop_assert_eq!(back.coverage_factor, Some(k));
    }
}

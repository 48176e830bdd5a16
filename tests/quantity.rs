//! What a person may type into a field, and what is understood. The texts are as the trade writes them; the values
//! follow from the SI prefixes (SI Brochure, 9th edition, table 7) and 1 mW = 0 dBm by definition.

use leastlight::quantity::kind::{self, Kind};
use leastlight::quantity::number::DecimalMark::{self, Auto, Comma, Point};
use leastlight::quantity::read::read;
use leastlight::quantity::write;

fn value(text: &str, kind: &Kind, mark: DecimalMark) -> f64 {
    read(text, kind, mark).map(|number| number.value).unwrap_or_else(|why| panic!("“{text}”: {why}"))
}

fn refusal(text: &str, kind: &Kind, mark: DecimalMark) -> String {
    read(text, kind, mark).expect_err(&format!("“{text}” should not be understood"))
}

#[test]
fn numbers_are_understood_as_the_trade_writes_them() {
    let cases: &[(&str, &Kind, f64)] = &[
        ("-28 dBm", &kind::POWER_LEVEL, -28.0),
        ("−28,35 dBm", &kind::POWER_LEVEL, -28.35),
        ("-28", &kind::POWER_LEVEL, -28.0),
        ("0dBm", &kind::POWER_LEVEL, 0.0),
        ("1 mW", &kind::POWER_LEVEL, 0.0),
        ("1 uW", &kind::POWER_LEVEL, -30.0),
        ("0 dBm", &kind::POWER, 1e-3),
        ("1.58 uW", &kind::POWER, 1.58e-6),
        ("1,58 µW", &kind::POWER, 1.58e-6),
        ("1,58 \u{3bc}W", &kind::POWER, 1.58e-6),
        ("2.5 Gb/s", &kind::SYMBOL_RATE, 2.5e9),
        ("2.5 Gbit/s", &kind::SYMBOL_RATE, 2.5e9),
        ("26.5625 GBd", &kind::SYMBOL_RATE, 26.5625e9),
        ("62 kHz", &kind::FREQUENCY, 62e3),
        ("5 nA", &kind::CURRENT, 5e-9),
        ("3 pA/√Hz", &kind::CURRENT_DENSITY, 3e-12),
        ("3 pA/rtHz", &kind::CURRENT_DENSITY, 3e-12),
        ("1550 nm", &kind::WAVELENGTH, 1550.0),
        ("1550nm", &kind::WAVELENGTH, 1550.0),
        ("1.55 µm", &kind::WAVELENGTH, 1550.0),
        ("1 550 nm", &kind::WAVELENGTH, 1550.0),
        ("0.9 A/W", &kind::RESPONSIVITY, 0.9),
        ("900 mA/W", &kind::RESPONSIVITY, 0.9),
        ("75 %", &kind::FRACTION, 0.75),
        ("1e-12", &kind::ERROR_RATIO, 1e-12),
        ("1E−12", &kind::ERROR_RATIO, 1e-12),
        ("10^-12", &kind::ERROR_RATIO, 1e-12),
        ("2.4 × 10^-4", &kind::ERROR_RATIO, 2.4e-4),
        ("2.4·10^-4", &kind::ERROR_RATIO, 2.4e-4),
        ("50 Ω", &kind::RESISTANCE, 50.0),
        ("4.7 kOhm", &kind::RESISTANCE, 4.7e3),
        ("-145 dB/Hz", &kind::INTENSITY_NOISE, -145.0),
        ("27 °C", &kind::TEMPERATURE_K, 300.15),
        ("+1.234567E-05", &kind::CURRENT, 1.234567e-5),
        ("1,234.5", &kind::NUMBER, 1234.5),
        ("1.234,5", &kind::NUMBER, 1234.5),
        ("0,125", &kind::NUMBER, 0.125),
    ];
    for (text, kind, expected) in cases {
        let found = value(text, kind, Auto);
        assert!((found - expected).abs() <= 1e-15 * expected.abs(), "“{text}” gave {found}, not {expected}");
    }
}

#[test]
fn a_prefix_costs_no_digit() {
    // 1550 × 1e-9 × 1e9 is not 1550 in binary; the digits are shifted as text instead.
    assert_eq!(value("1550nm", &kind::WAVELENGTH, Auto), 1550.0);
    assert_eq!(value("1310.4 nm", &kind::WAVELENGTH, Auto), 1310.4);
    assert_eq!(value("4.35 uW", &kind::POWER, Auto), 4.35e-6);
}

#[test]
fn an_optical_frequency_is_a_wavelength() {
    // c/193.1 THz, ITU-T G.694.1's anchor of the grid: 1552.524 nm printed to three decimals.
    let found = value("193.1 THz", &kind::WAVELENGTH, Auto);
    assert!((found - 1552.524).abs() < 0.0005, "{found}");
}

#[test]
fn a_comma_that_could_mean_two_things_is_asked_about() {
    let why = refusal("1,234 mW", &kind::POWER, Auto);
    assert!(why.contains("1.234") && why.contains("1234"), "{why}");
    assert_eq!(value("1,234 mW", &kind::POWER, Comma), 1.234e-3);
    let why = refusal("1,5 mW", &kind::POWER, Point);
    assert!(why.contains("point") && why.contains("1.5"), "{why}");
    let why = refusal("1.234 mW", &kind::POWER, Comma);
    assert!(why.contains("1.234") && why.contains("1234"), "{why}");
    assert_eq!(
        value("1.5 mW", &kind::POWER, Comma),
        1.5e-3,
        "an instrument's point cannot be a thousands mark here"
    );
}

#[test]
fn capitals_matter_and_a_near_miss_is_named() {
    assert!(refusal("5 mw", &kind::POWER, Auto).contains("did you mean mW?"));
    assert!(refusal("62 KHz", &kind::FREQUENCY, Auto).contains("did you mean kHz?"));
    assert!(refusal("-28 dbm", &kind::POWER_LEVEL, Auto).contains("did you mean dBm?"));
    assert_eq!(value("5 MW", &kind::POWER, Auto), 5e6);
}

#[test]
fn what_cannot_be_a_number_is_refused_with_a_reason() {
    let texts =
        ["", "abc", "1..2", "1.2.3,4,5", "2E", "3 dBm W", "--5", "1 2", "5 eV", "dBm", "1e", "12,34,567"];
    for text in texts {
        let why = refusal(text, &kind::POWER_LEVEL, Auto);
        assert!(!why.is_empty(), "“{text}”");
    }
    assert!(refusal("1e400 W", &kind::POWER, Auto).contains("too large"));
    assert!(refusal("0 W", &kind::POWER_LEVEL, Auto).contains("no value in dBm"));
    assert!(refusal("-1 µW", &kind::POWER_LEVEL, Auto).contains("no value in dBm"));
    // SCPI-1999 sends these numbers for "not a number" and "infinity".
    assert!(refusal("9.91E37", &kind::POWER_LEVEL, Auto).contains("no reading"));
    assert!(refusal("-9.900000E+37 W", &kind::POWER, Auto).contains("over range"));
    assert!(refusal("5 dB", &kind::NUMBER, Auto).contains("no unit"));
}

#[test]
fn figures_are_shown_to_the_digits_they_deserve() {
    assert_eq!(write::fixed(-28.006, 2), "−28.01");
    assert_eq!(write::fixed(-0.001, 2), "0.00", "no sign that the digits do not show");
    assert_eq!(write::prefixed(1.58e-6, "W", 4), "1.580 µW");
    assert_eq!(write::prefixed(999.96e-9, "A", 4), "1.000 µA", "rounding carries into the next prefix");
    assert_eq!(write::scientific(1e-12, 3), "10⁻¹²");
    assert_eq!(write::scientific(1.058e-12, 3), "1.06 × 10⁻¹²");
    assert_eq!(write::significant(0.000123456, 3), "0.000123");
    assert_eq!(write::brief(2.0, 3), "2");
}

#[test]
fn an_uncertainty_has_two_figures_and_the_value_matches() {
    // JCGM 100:2008, 7.2.2 and 7.2.6: at most two figures of the uncertainty, the value rounded to agree.
    assert_eq!(write::plus_minus(9.5345e-6, 0.1049e-6, "W"), "9.53 ± 0.10 µW");
    assert_eq!(write::plus_minus(1.2345e-3, 0.0150e-3, "W"), "1.234 ± 0.015 mW");
    assert_eq!(write::plus_minus(9.96e-6, 0.0996e-6, "W"), "9.96 ± 0.10 µW", "0.0996 carries to 0.10");
    assert_eq!(write::plus_minus(100.0e-6, 12.0e-6, "W"), "100 ± 12 µW");
}

#[test]
fn a_field_is_filled_with_text_that_a_person_would_type() {
    assert_eq!(write::exact(2.5e9, &kind::SYMBOL_RATE), "2.5 GBd");
    assert_eq!(write::exact(5e-9, &kind::CURRENT), "5 nA");
    assert_eq!(write::exact(-28.35, &kind::POWER_LEVEL), "−28.35 dBm");
    assert_eq!(write::exact(1550.0, &kind::WAVELENGTH), "1550 nm");
    assert_eq!(write::exact(1e-12, &kind::ERROR_RATIO), "1e−12");
    assert_eq!(write::exact(0.5, &kind::ERROR_RATIO), "0.5");
    assert_eq!(write::exact(0.45, &kind::FRACTION), "0.45");
}

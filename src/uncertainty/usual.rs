//! Doubts that are usual at a bench, offered to be taken and changed.
//!
//! The sizes are common practice, nothing that is known of the meter or the receiver at hand; each note says so.

use serde::Serialize;

/// A doubt that is offered, in the words that a person would type.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
pub struct UsualDoubt {
    /// The question that it matters to.
    pub question: &'static str,
    /// What it is called.
    pub name: &'static str,
    /// The number of the bench that it moves.
    pub pointer: &'static str,
    /// How it is stated: `standard`, `half_width` or `readings`.
    pub stated: &'static str,
    /// How much; empty for readings.
    pub amount: &'static str,
    /// How it is spread.
    pub distribution: &'static str,
    /// How many times; empty for once.
    pub times: &'static str,
    /// What is usual, and what the times count.
    pub note: &'static str,
}

const fn limits(
    (question, name, pointer): (&'static str, &'static str, &'static str),
    amount: &'static str,
    distribution: &'static str,
    times: &'static str,
    note: &'static str,
) -> UsualDoubt {
    UsualDoubt { question, name, pointer, stated: "half_width", amount, distribution, times, note }
}

const fn reading(
    name: &'static str,
    amount: &'static str,
    distribution: &'static str,
    note: &'static str,
) -> UsualDoubt {
    limits(("reading", name, "/meter/reading_dbm"), amount, distribution, "", note)
}

const fn receiver(
    name: &'static str,
    pointer: &'static str,
    amount: &'static str,
    note: &'static str,
) -> UsualDoubt {
    limits(("sensitivity", name, pointer), amount, "rectangular", "", note)
}

/// All that is offered, question by question.
///
/// Source: common practice in the calibration of fibre power meters (the list of contributions follows that of
/// IEC 61315, from memory) and in receiver data sheets.
pub const USUAL: &[UsualDoubt] = &[
    UsualDoubt {
        question: "reading",
        name: "repeated readings",
        pointer: "/meter/reading_dbm",
        stated: "readings",
        amount: "",
        distribution: "normal",
        times: "",
        note: "Paste your own: their mean, and their scatter over the root of their number.",
    },
    limits(
        ("reading", "source wavelength", "/source/wavelength_nm"),
        "0.5 nm",
        "rectangular",
        "",
        "Common practice: 0.1 nm where it was measured, 1 nm by a laser’s label, 10 nm for a broad source.",
    ),
    limits(
        ("reading", "line width", "/source/linewidth_nm"),
        "20 %",
        "rectangular",
        "",
        "Common practice; without effect for a laser.",
    ),
    reading(
        "resolution",
        "0.005 dB",
        "rectangular",
        "Half of the last digit that is shown, here of 0.01 dB.",
    ),
    reading(
        "linearity",
        "0.3 %",
        "rectangular",
        "Common practice: 0.1 % to 0.5 % for each decade from the calibrated power.",
    ),
    reading(
        "range change",
        "0.3 %",
        "rectangular",
        "Common practice: 0.1 % to 0.5 % where range and calibration differ.",
    ),
    limits(
        ("reading", "temperature", "/meter/certificate/scale"),
        "0.05 %",
        "rectangular",
        "5",
        "Coefficient a kelvin, times the kelvins from the temperature of calibration. Common practice: 0.05 %/K for InGaAs \
         up to 1550 nm, to 1 %/K near a band edge.",
    ),
    reading(
        "connector repeatability",
        "0.3 %",
        "rectangular",
        "Common practice: 0.1 % to 0.5 % a mating; better by repeated readings.",
    ),
    reading(
        "reflections",
        "0.3 %",
        "arcsine",
        "Common practice: 0.1 % to 1 % with a bare window or a straight ferrule.",
    ),
    reading("polarisation", "0.3 %", "arcsine", "Common practice: 0.1 % to 0.5 %."),
    limits(
        ("reading", "drift since calibration", "/meter/certificate/scale"),
        "0.5 %",
        "rectangular",
        "1",
        "Drift a year, times the years since the calibration. Common practice: 0.2 % to 1 % a year.",
    ),
    limits(
        ("reading", "zero offset", "/meter/zero_offset_w"),
        "50 pW",
        "rectangular",
        "",
        "Common practice: pW to nW after zeroing; it matters below −50 dBm.",
    ),
    receiver(
        "responsivity",
        "/detector/responsivity/a_per_w",
        "5 %",
        "Common practice for a data sheet’s typical value.",
    ),
    receiver(
        "quantum efficiency",
        "/detector/responsivity/efficiency",
        "5 %",
        "Common practice for a data sheet’s typical value.",
    ),
    receiver(
        "gain",
        "/detector/avalanche/gain",
        "10 %",
        "Common practice for a gain set by a bias and no feedback.",
    ),
    receiver(
        "ionisation ratio",
        "/detector/avalanche/ionisation_ratio",
        "0.05",
        "Common practice: as far apart as published values of one material.",
    ),
    receiver(
        "bulk dark current",
        "/detector/dark_current_bulk_a",
        "50 %",
        "Common practice; it doubles every 8 to 10 K.",
    ),
    receiver(
        "surface dark current",
        "/detector/dark_current_surface_a",
        "50 %",
        "Common practice; it doubles every 8 to 10 K.",
    ),
    receiver(
        "circuit noise",
        "/amplifier/noise/current_a",
        "10 %",
        "Common practice for a data sheet’s typical value.",
    ),
    receiver(
        "circuit noise density",
        "/amplifier/noise/a_per_rthz",
        "10 %",
        "Common practice for a data sheet’s typical value.",
    ),
    receiver(
        "bandwidth",
        "/amplifier/bandwidth_hz",
        "10 %",
        "Common practice for a data sheet’s typical value.",
    ),
    receiver(
        "noise bandwidth",
        "/amplifier/noise_bandwidth_hz",
        "5 %",
        "Common practice for a measured filter.",
    ),
    receiver(
        "extinction ratio",
        "/source/extinction_ratio_db",
        "0.5 dB",
        "Common practice: how well it is read off an eye.",
    ),
    receiver(
        "intensity noise",
        "/source/rin_db_per_hz",
        "2 dB",
        "Common practice for a data sheet’s typical value.",
    ),
];

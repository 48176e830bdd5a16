//! The sensitivity as it is shown: headline, figures, budgets, doubts and notes.

use super::setup::Setup;
use super::{Answer, LevelAtSensitivity};
use crate::bench::Bench;
use crate::bench::decision::Threshold;
use crate::bench::source::Format;
use crate::physics::excess_noise::ExcessNoise;
use crate::physics::receiver::Noise;
use crate::quantity::write::{brief, fixed, prefixed, scientific, significant};
use crate::questions::shown::{
    BIAS_VOLTAGE, Budget, BudgetRow, Caution, Fact, GLASS, Headline, INVISIBLE_LIGHT, OVERLOAD, Shown, joined,
};

/// The answer, ready to be shown.
pub fn shown(setup: &Setup, bench: &Bench, answer: &Answer) -> Shown {
    Shown {
        headline: headline(setup, answer),
        facts: facts(setup, answer),
        budgets: budgets(answer),
        tables: Vec::new(),
        cautions: cautions(setup, bench),
        doubts: doubts(setup, answer),
        notes: notes(setup, bench, answer),
    }
}

fn headline(setup: &Setup, answer: &Answer) -> Headline {
    match (&answer.none_because, answer.average_power_dbm) {
        (None, Some(dbm)) => Headline {
            figure: format!("{} dBm", fixed(dbm, 2)),
            sentence: format!(
                "of average power at the detector is enough for an error ratio of {}.",
                scientific(setup.target, 3)
            ),
            copy: format!("{dbm} dBm"),
        },
        (because, _) => Headline {
            figure: "No such power".to_owned(),
            sentence: format!("because {}.", because.as_ref().map_or("", |none| none.reason.as_str())),
            copy: "no such power".to_owned(),
        },
    }
}

fn facts(setup: &Setup, answer: &Answer) -> Vec<Fact> {
    let mut facts = Vec::new();
    facts.extend(answer.average_power_w.map(|power_w| Fact::prefixed("Average power", power_w, "W")));
    facts.extend(answer.oma_w.map(|oma_w| {
        let note = "highest less lowest level";
        Fact::prefixed("Optical modulation amplitude", oma_w, "W").noted(note)
    }));
    facts.extend(answer.photons_per_bit.map(|photons| {
        let ideal = significant(answer.quantum_limit.photons_per_bit, 3);
        Fact::number("Photons per bit", photons).noted(format!("an ideal counter of photons: {ideal}"))
    }));
    facts.extend(answer.received_power_dbm.map(|dbm| {
        Fact::fixed("Power from this source", dbm, 2, "dBm").noted("as launched, less the path loss")
    }));
    facts.extend(answer.margin_db.map(|margin_db| {
        let note = if margin_db < 0.0 { "too little light" } else { "light to spare" };
        Fact::fixed("Margin", margin_db, 2, "dB").noted(note)
    }));
    facts.extend(answer.error_ratio.map(|ratio| {
        let textbook = answer.error_ratio_q.map(|q| format!("{} by the textbook Q", scientific(q, 3)));
        Fact::ratio("Error ratio at that power", ratio).noted(textbook.unwrap_or_default())
    }));
    facts.extend(answer.average_power_q_dbm.map(|dbm| {
        Fact::fixed("Sensitivity by the textbook Q", dbm, 2, "dBm").noted("Q = (I₁ − I₀)/(σ₁ + σ₀)")
    }));
    facts.extend(answer.q_factor.map(|q| {
        let eye = if setup.format == Format::Pam4 { "of the worst eye, " } else { "" };
        Fact::number("Q at the sensitivity", q).noted(format!("{eye}(I₁ − I₀)/(σ₁ + σ₀)"))
    }));
    facts.extend(thresholds(answer));
    facts.extend(gains(setup, answer));
    facts.push(Fact::prefixed("Noise bandwidth", answer.noise_bandwidth_hz, "Hz"));
    facts.extend(efficiency(answer));
    facts.extend(answer.quantum_limit.average_power_dbm.map(|dbm| {
        let above =
            answer.average_power_dbm.map(|here| format!("{} dB below this receiver", fixed(here - dbm, 1)));
        Fact::fixed("Quantum limit", dbm, 2, "dBm").noted(above.unwrap_or_default())
    }));
    facts
}

fn thresholds(answer: &Answer) -> Vec<Fact> {
    let names: &[&str] = match answer.thresholds_a.len() {
        1 => &["Threshold"],
        _ => &["Lower threshold", "Middle threshold", "Upper threshold"],
    };
    let note = "signal current above the dark level";
    let pairs = names.iter().zip(&answer.thresholds_a);
    pairs.map(|(name, current_a)| Fact::prefixed(name, *current_a, "A").noted(note)).collect()
}

fn gains(setup: &Setup, answer: &Answer) -> Vec<Fact> {
    if !setup.is_avalanche() {
        return Vec::new();
    }
    let factor = significant(answer.excess_noise_factor, 4);
    let mut facts = vec![Fact::given("Gain", answer.gain).noted(format!("excess noise factor F = {factor}"))];
    facts.extend(answer.best_gain.as_ref().map(|best| {
        let there = format!("{} dBm", fixed(best.average_power_dbm, 2));
        let better = best.improvement_db.map(|db| format!(", {} dB better", fixed(db.max(0.0), 2)));
        let closed = best.closed_form_gain.map(|gain| format!("; closed form {}", significant(gain, 3)));
        let end = best.gain.is_some_and(|gain| gain == setup.reach(f64::INFINITY));
        let end = if end { ", where the table of excess noise ends" } else { "" };
        let note = format!("{there}{}{}{end}", better.unwrap_or_default(), closed.unwrap_or_default());
        match best.gain {
            Some(gain) => Fact::number("Best gain", gain).noted(note),
            None => Fact {
                name: "Best gain".to_owned(),
                figure: "no upper end".to_owned(),
                note: format!("towards {note}"),
                copy: "no upper end".to_owned(),
            },
        }
    }));
    facts
}

fn efficiency(answer: &Answer) -> Option<Fact> {
    let percent = answer.quantum_efficiency? * 100.0;
    let responsivity = brief(answer.responsivity_a_per_w, 4);
    Some(Fact::fixed("Quantum efficiency", percent, 1, "%").noted(format!("responsivity {responsivity} A/W")))
}

fn budgets(answer: &Answer) -> Vec<Budget> {
    let names: &[&str] = match answer.levels.len() {
        2 => &["the zero", "the one"],
        _ => &["the lowest level", "the second level", "the third level", "the highest level"],
    };
    let mut budgets: Vec<Budget> =
        names.iter().zip(&answer.levels).map(|(name, level)| budget(name, level)).collect();
    // The highest level has the most noise and is looked at first.
    budgets.reverse();
    budgets
}

fn budget(name: &str, level: &LevelAtSensitivity) -> Budget {
    let total_a2 = level.noise_a2.total_a2();
    let row = |(cause, mean_square_a2): (&str, f64)| BudgetRow {
        cause: cause.to_owned(),
        figure: prefixed(mean_square_a2.sqrt(), "A", 3),
        share: if total_a2 > 0.0 { mean_square_a2 / total_a2 } else { 0.0 },
    };
    Budget {
        title: format!("Noise in {name}"),
        total: prefixed(level.noise_rms_a, "A", 4),
        rows: causes(&level.noise_a2).into_iter().filter(|(_, a2)| *a2 > 0.0).map(row).collect(),
    }
}

fn causes(noise: &Noise) -> [(&'static str, f64); 6] {
    [
        ("Shot noise of the signal", noise.signal_shot),
        ("Circuit noise", noise.circuit),
        ("Intensity noise of the source", noise.source_intensity),
        ("Shot noise of the bulk dark current", noise.bulk_dark_shot),
        ("Shot noise of the surface dark current", noise.surface_dark_shot),
        ("Shot noise of background light", noise.background_shot),
    ]
}

/// What can hurt at such a receiver.
pub(in crate::questions) fn cautions(setup: &Setup, bench: &Bench) -> Vec<Caution> {
    let mut cautions = vec![INVISIBLE_LIGHT, GLASS];
    if setup.is_avalanche() {
        cautions.push(BIAS_VOLTAGE);
    }
    let launched_dbm = bench.source.as_ref().and_then(|source| source.average_power_dbm);
    if setup.received_dbm.or(launched_dbm).is_some_and(|dbm| dbm > 0.0) {
        cautions.push(OVERLOAD);
    }
    cautions
}

fn doubts(setup: &Setup, answer: &Answer) -> Vec<String> {
    let mut doubts = Vec::new();
    if let Some(efficiency) = answer.quantum_efficiency.filter(|efficiency| *efficiency > 1.0) {
        doubts.push(format!(
            "A responsivity of {} A/W at this wavelength would be {} electrons per photon, above the quantum limit of \
             one. Check the value, its unit and the wavelength; a gain belongs into the avalanche.",
            significant(answer.responsivity_a_per_w, 4),
            significant(efficiency, 3)
        ));
    }
    if let Some((detector_hz, needed_hz)) = setup.detector_bandwidth_at(answer.gain).zip(setup.bandwidth_hz)
        && detector_hz < needed_hz
    {
        doubts.push(format!(
            "At this gain the detector passes {} and is slower than the receiver's {}: the eye closes by an amount \
             that is not counted here. Use a lower gain or a faster detector, or measure the eye.",
            prefixed(detector_hz, "Hz", 3),
            prefixed(needed_hz, "Hz", 3)
        ));
    }
    let best = answer.best_gain.as_ref().and_then(|best| best.gain);
    if let Some((gain, needed_hz)) = best.zip(setup.bandwidth_hz)
        && let Some(detector_hz) = setup.detector_bandwidth_at(gain)
        && detector_hz < needed_hz
        && gain > answer.gain
    {
        doubts.push(format!(
            "The best gain is found from the noise alone; at that gain the detector passes only {}. Stay at a gain \
             where it keeps up with the receiver.",
            prefixed(detector_hz, "Hz", 3)
        ));
    }
    if let Some(dbm) = answer.average_power_dbm.filter(|dbm| *dbm > 3.0) {
        doubts.push(format!(
            "{} is more than common receivers survive. Look for the cause in the extinction ratio, the noise or the \
             target before applying it.",
            joined(&fixed(dbm, 1), "dBm")
        ));
    }
    doubts.extend(few_photons(answer));
    doubts
}

/// Where few carriers make a level, their counts are no Gaussian.
fn few_photons(answer: &Answer) -> Option<String> {
    let ideal = answer.quantum_limit.photons_per_bit;
    let photons = answer.photons_per_bit.filter(|photons| *photons < 20.0 * ideal)?;
    Some(format!(
        "Only {} photons per bit: the Gaussian model is rough there and usually asks for too much light when the zero \
         is dark. Take it as an estimate and measure.",
        significant(photons, 3)
    ))
}

fn notes(setup: &Setup, bench: &Bench, answer: &Answer) -> Vec<String> {
    let threshold = match bench.decision.as_ref().map(|decision| decision.threshold) {
        Some(Threshold::Midpoint) => "The threshold stands halfway between the levels.",
        Some(Threshold::Q) => {
            "By the textbook form ½ erfc(Q/√2), Q = (I₁ − I₀)/(σ₁ + σ₀), which is not the true minimum."
        }
        _ => "The threshold stands where the total error ratio is least, found from both tails.",
    };
    let mut notes = vec![
        format!("Gaussian noise at each level; symbols equally likely. {threshold}"),
        "Each level’s noise: 2q(M²F(R·P + R·P_background + I_bulk) + I_surface)B + i² + RIN·(M·R·P)²·B, with B the \
         noise bandwidth. Background light is counted for its noise; its steady current is taken as removed, like the \
         dark current."
            .to_owned(),
        "No intersymbol interference, jitter or reflections are counted; the eye is open.".to_owned(),
    ];
    if setup.is_avalanche() {
        notes.extend(excess_noise_notes(setup));
    }
    if setup.format == Format::Pam4 {
        notes.push("Four equally spaced levels, Gray coded; all tails of all levels are counted.".to_owned());
    }
    if answer.quantum_limit.average_power_dbm.is_some() {
        notes.push(
            "Quantum limit: on-off keying with a perfectly dark zero, ½e^(−N) errors for N photons in a one, the same \
             bit rate."
                .to_owned(),
        );
    }
    notes
}

/// By which method the excess noise and the closed form of the best gain are had.
pub(in crate::questions) fn excess_noise_notes(setup: &Setup) -> Vec<String> {
    let of = "is that of a dark zero without dark current and intensity noise.";
    let (noise, closed) = match &setup.excess_noise {
        None => return Vec::new(),
        Some(ExcessNoise::McIntyre { .. }) => (
            "Excess noise F = kM + (1 − k)(2 − 1/M): R. J. McIntyre, IEEE Trans. Electron Devices ED-13, 164 (1966).",
            Some("k·M² = σ/(q·Q·B) + k − 1"),
        ),
        Some(ExcessNoise::Power { .. }) => (
            "Excess noise F = M^x, an approximation of common practice: good to a few per cent near the gain at which x \
             was found.",
            Some("M^(1 + x) = σ/(x·q·Q·B)"),
        ),
        Some(ExcessNoise::Table(_)) => (
            "Excess noise from the table, interpolated in ln F against ln M without overshoot; F = 1 at gain 1. Beyond \
             the table nothing is guessed.",
            None,
        ),
    };
    let closed = closed.map(|formula| format!("The closed form of the best gain, {formula}, {of}"));
    closed.into_iter().chain([noise.to_owned()]).collect()
}

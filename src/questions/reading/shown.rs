//! The reading as it is shown: headline, figures, table, doubts and notes.

use super::light::{Light, NARROW_LINE_NM};
use super::{Answer, CertificateUncertainty, Given, TableRow};
use crate::bench::Bench;
use crate::bench::meter::CertificateForm;
use crate::physics::decibel::db_from_ratio;
use crate::physics::spectrum::Spectrum;
use crate::quantity::write::{brief, fixed, plus_minus, prefixed, significant};
use crate::questions::shown::{Fact, GLASS, Headline, INVISIBLE_LIGHT, OVERLOAD, Shown, Table};

/// A correction above this is better avoided by setting the meter right, dB.
const LARGE_CORRECTION_DB: f64 = 1.0;

/// A slope above this asks for a well-known wavelength, per cent per nm.
const STEEP_PERCENT_PER_NM: f64 = 0.5;

/// A stated wavelength further than this from the mean of a spectrum is another light, nm.
const STRAY_NM: f64 = 5.0;

/// The answer, ready to be shown.
pub fn shown(bench: &Bench, given: &Given, answer: &Answer) -> Shown {
    let mut cautions = vec![INVISIBLE_LIGHT, GLASS];
    if answer.power_dbm > 0.0 {
        cautions.push(OVERLOAD);
    }
    Shown {
        headline: headline(answer),
        facts: facts(given, answer),
        budgets: Vec::new(),
        tables: vec![table(answer)],
        cautions,
        doubts: doubts(bench, given, answer),
        notes: notes(bench, given, answer),
    }
}

fn headline(answer: &Answer) -> Headline {
    let uncertainty = answer.certificate_uncertainty.as_ref().map_or_else(String::new, |of| {
        format!(
            "{} (k = {}, from the certificate alone)",
            plus_minus(answer.power_w, of.expanded_w, "W"),
            brief(of.coverage_factor, 3)
        )
    });
    let shift = match answer.correction_db {
        db if db.abs() < 0.0005 => "the meter shows it without correction".to_owned(),
        db if db > 0.0 => format!("the meter shows {} dB too little", fixed(db, 3)),
        db => format!("the meter shows {} dB too much", fixed(-db, 3)),
    };
    Headline {
        figure: format!("{} dBm", fixed(answer.power_dbm, 2)),
        sentence: format!("is the power of the light, {}; {shift}.", prefixed(answer.power_w, "W", 4)),
        uncertainty,
        copy: format!("{} dBm", answer.power_dbm),
    }
}

fn facts(given: &Given, answer: &Answer) -> Vec<Fact> {
    let mut facts = vec![
        Fact::prefixed("Power", answer.power_w, "W"),
        Fact::fixed("Correction", answer.correction_db, 4, "dB").noted("add to a reading in dBm"),
        Fact::fixed("Correction factor", answer.correction_factor, 5, "").noted("multiply a reading in W"),
        Fact::prefixed("Reading", answer.reading_w, "W")
            .noted(format!("{} dBm", fixed(given.reading_dbm, 3))),
    ];
    if let Some(of) = &answer.certificate_uncertainty {
        facts.extend(uncertainty(answer, of));
    }
    facts.extend(answer.ratio_db.map(|ratio_db| {
        let factor = answer.ratio.map_or_else(String::new, |ratio| significant(ratio, 5));
        Fact::fixed("Against the other reading", ratio_db, 4, "dB").noted(format!("a factor of {factor}"))
    }));
    facts.extend(answer.responsivity_set_a_per_w.map(|value| {
        Fact::fixed("Responsivity at the setting", value, 5, "A/W").noted("what the meter divides by")
    }));
    facts.extend(answer.responsivity_source_a_per_w.map(|value| {
        Fact::fixed("Responsivity at the light’s wavelength", value, 5, "A/W").noted("what made the current")
    }));
    if let Light::Spread { centre_nm, .. } = &given.light {
        facts.push(Fact::fixed("Mean wavelength of the light", *centre_nm, 3, "nm"));
    }
    facts.extend(answer.averaging_percent.map(|percent| {
        Fact::fixed("Change by the width of the light", percent, 4, "%")
            .noted("of the power, against a single wavelength at the mean")
    }));
    facts.extend(answer.slope_percent_per_nm.map(|slope| {
        let note = "of the power, if the light were 1 nm longer";
        Fact::fixed("Change per nm of source wavelength", slope, 3, "%").noted(note)
    }));
    facts
}

fn uncertainty(answer: &Answer, of: &CertificateUncertainty) -> Vec<Fact> {
    let k = brief(of.coverage_factor, 3);
    let mut facts = vec![
        Fact::fixed("Certificate alone: expanded uncertainty", of.expanded_percent, 2, "%")
            .noted(format!("k = {k}")),
        Fact::prefixed("Certificate alone: standard uncertainty", of.standard_w, "W")
            .noted(format!("{} %", significant(of.standard_percent, 2))),
    ];
    // In dB the interval is not symmetric about the value.
    if let Some(low_dbm) = of.low_dbm {
        let (down, up) = (low_dbm - answer.power_dbm, of.high_dbm - answer.power_dbm);
        let note = format!("{} dB, +{} dB; k = {k}", fixed(down, 3), fixed(up, 3));
        facts.push(Fact {
            name: "Certificate alone: interval".to_owned(),
            figure: format!("{} to {} dBm", fixed(low_dbm, 3), fixed(of.high_dbm, 3)),
            note,
            copy: format!("{low_dbm} to {} dBm", of.high_dbm),
        });
    }
    facts
}

fn table(answer: &Answer) -> Table {
    let columns = ["Light at / nm", "Correction / dB", "Factor", "Power / dBm", "Expanded uncertainty / %"];
    let row = |row: &TableRow| {
        let figure = |value: Option<f64>, decimals| value.map(|value| fixed(value, decimals));
        let or_dash = |text: Option<String>| text.unwrap_or_else(|| "–".to_owned());
        let correction = figure(row.correction_db, 3);
        vec![
            brief(row.wavelength_nm, 7),
            correction.unwrap_or_else(|| "outside the certificate".to_owned()),
            or_dash(figure(row.correction_factor, 4)),
            or_dash(figure(row.power_dbm, 2)),
            or_dash(figure(row.expanded_percent, 2)),
        ]
    };
    Table {
        title: "What the same reading is worth for light of other single wavelengths".to_owned(),
        columns: columns.map(str::to_owned).to_vec(),
        rows: answer.table.iter().map(row).collect(),
    }
}

fn doubts(bench: &Bench, given: &Given, answer: &Answer) -> Vec<String> {
    let mut doubts = Vec::new();
    if answer.correction_db.abs() > LARGE_CORRECTION_DB {
        doubts.push(format!(
            "A correction of {} dB rests wholly on the certificate’s curve. Set the meter to the source’s wavelength \
             and read again if you can.",
            fixed(answer.correction_db, 2)
        ));
    }
    if let Some(slope) = answer.slope_percent_per_nm.filter(|slope| slope.abs() > STEEP_PERCENT_PER_NM) {
        doubts.push(format!(
            "The responsivity is steep here: {} % per nm, {} dB for 1 nm. Measure the source’s wavelength rather than \
             trusting its label.",
            significant(slope, 2),
            fixed(db_from_ratio(1.0 + slope / 100.0).abs(), 3)
        ));
    }
    let source = bench.source.as_ref().filter(|source| source.spectrum.is_some());
    let off_nm = source.and_then(|source| source.wavelength_nm).map(|nm| nm - given.light.centre_nm());
    if let Some(off_nm) = off_nm.filter(|off_nm| off_nm.abs() > STRAY_NM) {
        doubts.push(format!(
            "The source’s stated wavelength lies {} nm {} the mean of its spectrum, and the spectrum was used. Check \
             that the spectrum is that of this source.",
            fixed(off_nm.abs(), 1),
            if off_nm > 0.0 { "above" } else { "below" }
        ));
    }
    if answer.certificate_uncertainty.is_none() {
        doubts.push(
            "The certificate’s points state no uncertainty here, so nothing of theirs is in any figure. Add the \
             expanded uncertainties and k from the certificate before quoting this power."
                .to_owned(),
        );
    }
    doubts
}

/// How the width of the light was dealt with.
fn light_note(bench: &Bench, light: &Light) -> String {
    let width_nm =
        bench.source.as_ref().and_then(|source| source.linewidth_nm).filter(|width_nm| *width_nm > 0.0);
    match (light, width_nm) {
        (Light::Spread { spectrum: Spectrum::Table(_), .. }, _) => {
            "The responsivity is averaged over the tabulated spectrum, linear in power per nm with straight lines between \
             its points: ∫S R dλ / ∫S dλ. The meter is taken as linear."
                .to_owned()
        }
        (Light::Spread { .. }, _) => {
            "The responsivity is averaged over a Gaussian line of the stated full width at half maximum, cut at three \
             times that width on each side: ∫S R dλ / ∫S dλ. The meter is taken as linear."
                .to_owned()
        }
        (Light::One(_), Some(_)) => format!(
            "A line of at most {} nm at the end of a table, or where no responsivity curve is known, is taken as one \
             wavelength, in the range where the meter is linear.",
            brief(NARROW_LINE_NM, 2)
        ),
        (Light::One(_), None) => {
            "The light is taken as one wavelength, in the range where the meter is linear.".to_owned()
        }
    }
}

fn notes(bench: &Bench, given: &Given, answer: &Answer) -> Vec<String> {
    let certificate = bench.meter.as_ref().and_then(|meter| meter.certificate.as_ref());
    let method = match certificate.map(|certificate| certificate.form) {
        Some(CertificateForm::CorrectionFactor) if answer.responsivity_set_a_per_w.is_none() => {
            "Power = reading × correction factor; the meter is set to the wavelength of the light."
        }
        Some(CertificateForm::CorrectionFactor) => {
            "Power = reading × C(λ) × R(λ_set)/R(λ): the correction factor C is interpolated between the certified \
             wavelengths, R is the typical responsivity curve."
        }
        _ => "Power = reading × R(λ_set)/R(λ), R being the certified responsivity of the meter.",
    };
    let mut notes = vec![
        method.to_owned(),
        "Between points: shape-preserving cubic interpolation (F. N. Fritsch, J. Butland, SIAM J. Sci. Stat. \
         Comput. 5, 300 (1984)); nothing beyond the ends. Wavelengths are in vacuum."
            .to_owned(),
        light_note(bench, &given.light),
    ];
    if answer.certificate_uncertainty.is_some() {
        let correlation = certificate.and_then(|certificate| certificate.point_correlation).unwrap_or(1.0);
        notes.push(format!(
            "What is called “certificate alone” is its uncertainty carried to the light’s wavelength with a correlation \
             of {} between its points. Wavelength, connector, linearity, drift and the rest are not in it.",
            brief(correlation, 2)
        ));
    }
    notes
}

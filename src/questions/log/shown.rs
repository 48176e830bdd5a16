//! A log as it is shown: headline, figures, settings, doubts and notes.

use super::{Extreme, Log, Stated, Summary};
use crate::quantity::write::{brief, fixed, plus_minus, prefixed, significant};
use crate::questions::shown::{Fact, Headline, Shown, Table};
use crate::record::Times;

/// The log, ready to be shown.
pub(super) fn shown(log: &Log, by_time: bool) -> Shown {
    Shown {
        headline: headline(log),
        facts: facts(log),
        budgets: Vec::new(),
        tables: settings(log).into_iter().collect(),
        cautions: Vec::new(),
        doubts: doubts(log),
        notes: notes(log, by_time),
    }
}

/// A power as a level, or in W where it has none.
fn power(power_w: f64, power_dbm: Option<f64>) -> String {
    power_dbm.map_or_else(|| prefixed(power_w, "W", 4), |dbm| format!("{} dBm", fixed(dbm, 2)))
}

fn headline(log: &Log) -> Headline {
    let (Some(summary), rows) = (log.corrected.as_ref().or(log.raw.as_ref()), log.counts.rows) else {
        return Headline {
            figure: "No power".to_owned(),
            sentence: format!("is shown on any of the {} rows.", whole(log.counts.rows)),
            uncertainty: String::new(),
            copy: "No power".to_owned(),
        };
    };
    let what = if log.corrected.is_some() {
        "is the mean of the corrected powers"
    } else {
        "is the mean power as read"
    };
    let expanded = log.correction.as_ref().and_then(|of| Some((of.expanded_percent?, of.coverage_factor?)));
    let uncertainty =
        expanded.filter(|_| log.corrected.is_some()).map_or_else(String::new, |(percent, k)| {
            let expanded_w = summary.mean_w.abs() * percent / 100.0;
            format!("{} (k = {}, that of each row)", plus_minus(summary.mean_w, expanded_w, "W"), brief(k, 3))
        });
    Headline {
        uncertainty,
        figure: power(summary.mean_w, summary.mean_dbm),
        sentence: format!(
            "{what}, {}, over {} of {} rows.",
            prefixed(summary.mean_w, "W", 4),
            whole(summary.count),
            whole(rows)
        ),
        copy: summary.mean_dbm.map_or_else(|| format!("{} W", summary.mean_w), |dbm| format!("{dbm} dBm")),
    }
}

fn facts(log: &Log) -> Vec<Fact> {
    let counts = &log.counts;
    let count = |name: &str, count: usize, note: &str| Fact {
        name: name.to_owned(),
        figure: whole(count),
        note: note.to_owned(),
        copy: count.to_string(),
    };
    let mut facts = vec![count("Rows", counts.rows, ""), count("Rows with a power", counts.read, "")];
    if log.correction.is_some() {
        facts.push(count("Corrected", counts.corrected, ""));
    }
    let more = [
        ("No reading", counts.no_reading, "not averaged, not drawn"),
        ("Over range", counts.over_range, "not averaged, not drawn"),
        ("Status not good", counts.flagged, "not averaged, not drawn"),
        ("Cannot be read", counts.bad, "listed by line"),
        ("Not corrected", counts.uncorrected, "the setting is not in the certificate’s reach"),
        ("Below 0 W", counts.negative, "averaged; they have no level in dBm"),
        ("Exactly 0 W", counts.zero, "averaged; they have no level in dBm"),
    ];
    facts.extend(
        more.iter().filter(|(_, rows, _)| *rows > 0).map(|(name, rows, note)| count(name, *rows, note)),
    );
    if let Some(corrected) = &log.corrected {
        facts.extend(summed(corrected, "Corrected: "));
    }
    if let Some(raw) = &log.raw {
        facts.extend(summed(raw, "As read: "));
    }
    facts
}

fn summed(of: &Summary, whose: &str) -> Vec<Fact> {
    let mean = Fact::prefixed(&format!("{whose}mean"), of.mean_w, "W");
    let mut facts = vec![match of.mean_dbm {
        Some(dbm) => mean.noted(format!("{} dBm; averaged in W", fixed(dbm, 3))),
        None => mean.noted("no level in dBm"),
    }];
    if let Some(deviation_w) = of.standard_deviation_w {
        let relative = significant(deviation_w / of.mean_w.abs() * 100.0, 2);
        let fact = Fact::prefixed(&format!("{whose}standard deviation"), deviation_w, "W");
        facts.push(if of.mean_w > 0.0 { fact.noted(format!("{relative} % of the mean")) } else { fact });
    }
    facts.push(extreme(&format!("{whose}least"), &of.least));
    facts.push(extreme(&format!("{whose}greatest"), &of.greatest));
    if let Some(drift_w) = of.drift_w_per_h {
        let fact = Fact::prefixed(&format!("{whose}drift per hour"), drift_w, "W");
        facts.push(match of.drift_percent_per_h {
            Some(percent) => {
                fact.noted(format!("{} % of the mean; slope of a straight line", significant(percent, 2)))
            }
            None => fact.noted("slope of a straight line"),
        });
    }
    facts
}

fn extreme(name: &str, of: &Extreme) -> Fact {
    let level = of.power_dbm.map_or("no level in dBm".to_owned(), |dbm| format!("{} dBm", fixed(dbm, 3)));
    let when = of.time.as_ref().map_or(String::new(), |time| format!(", {time}"));
    Fact::prefixed(name, of.power_w, "W").noted(format!("{level}; line {}{when}", whole(of.line)))
}

/// The settings and their corrections.
fn settings(log: &Log) -> Option<Table> {
    const MOST: usize = 24;
    let correction = log.correction.as_ref()?;
    let dash = || "–".to_owned();
    let row = |of: &super::Setting| {
        vec![
            brief(of.setting_nm, 7),
            whole(of.rows),
            of.correction_db.map_or_else(|| "outside the certificate".to_owned(), |db| fixed(db, 4)),
            of.correction_factor.map_or_else(dash, |factor| fixed(factor, 5)),
        ]
    };
    Some(Table {
        title: "What was added at each wavelength setting".to_owned(),
        columns: ["Set to / nm", "Rows", "Correction / dB", "Factor"].map(str::to_owned).to_vec(),
        rows: correction.settings.iter().take(MOST).map(row).collect(),
    })
}

fn doubts(log: &Log) -> Vec<String> {
    let mut doubts: Vec<String> = Vec::new();
    if let Some(first) = log.correction_faults.first() {
        doubts.push(format!("No row was corrected. {}", first.sentence));
    }
    if log.correction.as_ref().is_some_and(|of| of.expanded_percent.is_none()) {
        doubts.push(
            "No uncertainty is given, for the certificate states none here or not its k. Add both before quoting these \
             powers."
                .to_owned(),
        );
    }
    if log.counts.steps_back > 0 {
        doubts.push(format!(
            "The times go back {}, so rows are drawn by their number. Check whether the log was put together from \
             several, or the clock was set.",
            times(log.counts.steps_back)
        ));
    }
    let lost = log.counts.rows - log.counts.read;
    if lost * 10 > log.counts.rows {
        doubts.push(format!(
            "{} of {} rows show no power that counts. Check what was understood before using the mean.",
            whole(lost),
            whole(log.counts.rows)
        ));
    }
    doubts
}

fn notes(log: &Log, by_time: bool) -> Vec<String> {
    let mut notes = Vec::new();
    if let Some(correction) = &log.correction {
        let from = match correction.setting_from {
            Stated::Column => "from its column in the log",
            Stated::AboveTheRows => "from a line above the rows of the log",
            Stated::Bench => "from the bench",
        };
        notes.push(format!(
            "Power = reading × the certificate’s factor from the wavelength setting, taken {from}, to light of {} nm, taken \
             from the bench.",
            brief(correction.source_wavelength_nm, 8)
        ));
        if let Some((percent, k)) = correction.expanded_percent.zip(correction.coverage_factor) {
            notes.push(format!(
                "Each corrected power has an expanded uncertainty of {} % with k = {}, {}; it is the same error for all \
                 rows, so their mean has it too. The scatter is not in it.",
                significant(percent, 3),
                brief(k, 3),
                match correction.uncertainty_is_the_certificates {
                    true => "from the certificate alone",
                    false => "as it was given",
                }
            ));
        }
    }
    notes.push(
        "Powers are averaged in W and the mean is then made a level; the standard deviation is that of a single row. Signs \
         of an instrument for no reading (9.91E37) and over range (±9.9E37) are known by their value, by SCPI-1999."
            .to_owned(),
    );
    notes.push(
        "The chart is drawn in columns of neighbouring rows, each from its least to its greatest power, so no extreme is \
         lost. It is broken where a whole column shows no power or the log pauses."
            .to_owned(),
    );
    notes.push(match (log.reading.times, by_time) {
        (Times::Iso, true) => "Times are read by ISO 8601; a zone is counted.".to_owned(),
        (Times::OfDay, true) => {
            "Times have no date; a step back over more than half a day is taken for midnight.".to_owned()
        }
        (Times::Elapsed, true) => "Times are counted from the start of the log.".to_owned(),
        _ => "Rows are numbered, for not all of them have times that can be drawn.".to_owned(),
    });
    notes
}

fn times(count: usize) -> String {
    match count {
        1 => "once".to_owned(),
        count => format!("{} times", whole(count)),
    }
}

/// A whole number with its thousands apart: `1 000 000`.
fn whole(number: usize) -> String {
    let digits = number.to_string();
    let mut text = String::new();
    for (index, digit) in digits.chars().enumerate() {
        if index > 0 && (digits.len() - index).is_multiple_of(3) {
            text.push('\u{202f}');
        }
        text.push(digit);
    }
    text
}

//! An uncertainty as it is shown: beside the headline, as facts, as a budget, and as a curve.

use super::asked::{Contribution, MonteCarloResult, Uncertain};
use crate::physics::decibel::{db_from_ratio, dbm_from_watt, watt_from_dbm};
use crate::quantity::write::{brief, concise, fixed, plain, plus_minus, significant};
use crate::questions::curve::{Axis, Curve, Line, Mark, Scale, evenly};
use crate::questions::shown::{Budget, BudgetRow, Fact, Shown, Table, joined};
use core::f64::consts::{LN_10, PI};

/// Puts an uncertainty into an answer that is shown.
pub fn show(uncertain: &Uncertain, (shown, curves): (&mut Shown, &mut Vec<Curve>)) {
    shown.headline.uncertainty = headline(uncertain);
    let facts = facts(uncertain);
    shown.facts.splice(0..0, facts);
    shown.budgets.insert(0, bars(uncertain));
    shown.tables.push(table(uncertain));
    shown.doubts.extend(doubts(uncertain));
    shown.notes.extend(notes(uncertain));
    curves.extend(uncertain.monte_carlo.as_ref().map(|run| distribution(uncertain, run)));
}

/// The name of the number, as a person says it.
fn name(of: &str) -> String {
    let words = ["_a_per_w", "_percent", "_dbm", "_db", "_hz", "_nm", "_w", "_a", "_v", "_k"]
        .iter()
        .find_map(|end| of.strip_suffix(end))
        .unwrap_or(of);
    words.replace('_', " ")
}

fn percent(probability: f64) -> String {
    format!("{} %", brief(probability * 100.0, 4))
}

fn headline(uncertain: &Uncertain) -> String {
    let Uncertain { estimate, standard, expanded, unit, coverage_factor, .. } = uncertain;
    let (k, p) = (fixed(*coverage_factor, 2), percent(uncertain.coverage_probability));
    let mut parts = vec![
        concise(*estimate, *standard, unit),
        format!("{} with k = {k} for {p}", plus_minus(*estimate, *expanded, unit)),
    ];
    parts.extend(share(uncertain).map(|share| format!("±{} %", significant(share * 100.0, 2))));
    parts.extend(in_decibel(uncertain));
    parts.join("; ")
}

/// U as a share of the value, of a power also where it is given as a level.
fn share(uncertain: &Uncertain) -> Option<f64> {
    match uncertain.unit {
        "dBm" | "dB" => Some(uncertain.expanded * LN_10 / 10.0),
        "%" => None,
        _ if uncertain.estimate == 0.0 => None,
        _ => Some(uncertain.expanded / uncertain.estimate.abs()),
    }
}

/// The same interval on the other scale; in dB it is not symmetric where it is in W.
fn in_decibel(uncertain: &Uncertain) -> Option<String> {
    let [low, high] = uncertain.interval;
    match uncertain.unit {
        "W" if uncertain.estimate > 0.0 => {
            let dbm = dbm_from_watt(uncertain.estimate);
            let up = db_from_ratio(high / uncertain.estimate);
            let down = match low > 0.0 {
                true => format!("{} dB", fixed(db_from_ratio(low / uncertain.estimate), 3)),
                false => "no lower end in dB".to_owned(),
            };
            Some(format!("{} dBm, +{} dB, {down}", fixed(dbm, 3), fixed(up, 3)))
        }
        "" if uncertain.estimate > 0.0 && low > 0.0 => Some(format!(
            "{} dB, +{} dB, {} dB",
            fixed(db_from_ratio(uncertain.estimate), 3),
            fixed(db_from_ratio(high / uncertain.estimate), 3),
            fixed(db_from_ratio(low / uncertain.estimate), 3)
        )),
        "dBm" => Some(format!(
            "{} to {}",
            crate::quantity::write::prefixed(watt_from_dbm(low), "W", 4),
            crate::quantity::write::prefixed(watt_from_dbm(high), "W", 4)
        )),
        _ => None,
    }
}

fn facts(uncertain: &Uncertain) -> Vec<Fact> {
    let Uncertain { standard, expanded, unit, .. } = uncertain;
    let fact = |name: &str, value: f64, note: String| Fact {
        name: name.to_owned(),
        figure: amount(value, unit),
        note,
        copy: joined(&plain(value), unit),
    };
    let freedom = match uncertain.effective_degrees_of_freedom {
        Some(freedom) => format!("ν = {}", brief(freedom, 3)),
        None if uncertain.correlated => {
            "correlated inputs have no ν; k is that of the normal distribution".to_owned()
        }
        None => "ν infinite".to_owned(),
    };
    let (k, p) = (fixed(uncertain.coverage_factor, 2), percent(uncertain.coverage_probability));
    let mut facts = vec![
        fact(&format!("Standard uncertainty u of the {}", name(uncertain.of)), *standard, freedom),
        fact("Expanded uncertainty U", *expanded, format!("k = {k} for {p}")),
    ];
    if let Some(curvature) = uncertain.second_order.filter(|curvature| curvature.matters)
        && let Some(standard) = curvature.standard
    {
        let note = format!("the mean is shifted by {}", amount(curvature.mean_shift, unit));
        facts.push(fact("u with the terms of second order", standard, note));
    }
    if let Some(run) = &uncertain.monte_carlo {
        facts.extend(run_facts(uncertain, run));
    }
    facts
}

fn run_facts(uncertain: &Uncertain, run: &MonteCarloResult) -> Vec<Fact> {
    let (outcome, unit) = (&run.outcome, uncertain.unit);
    let ends = |[low, high]: [f64; 2]| {
        let middle = 0.5 * (low + high);
        let (low_text, high_text) =
            (at_places(low, outcome.standard, unit, middle), at_places(high, outcome.standard, unit, middle));
        format!("{low_text} to {high_text}")
    };
    let interval = |name: &str, ends_of: [f64; 2], note: String| Fact {
        name: name.to_owned(),
        figure: ends(ends_of),
        note,
        copy: format!("{} to {}", joined(&plain(ends_of[0]), unit), joined(&plain(ends_of[1]), unit)),
    };
    let p = percent(uncertain.coverage_probability);
    vec![
        Fact {
            name: "By trials: mean and standard uncertainty".to_owned(),
            figure: concise(outcome.mean, outcome.standard, unit),
            note: format!("{} trials, seed {}", thousands(outcome.trials), run.seed),
            copy: joined(&plain(outcome.mean), unit),
        },
        interval("By trials: symmetric interval", outcome.symmetric, format!("{p}, as much below as above")),
        interval("By trials: shortest interval", outcome.shortest, p),
    ]
}

/// A value with the decimals that two figures of its uncertainty leave, in the prefix that suits `like`.
fn at_places(value: f64, standard: f64, unit: &str, like: f64) -> String {
    let text = plus_minus(like, standard, unit);
    let Some((shown, rest)) = text.split_once(" ± ") else { return joined(&plain(value), unit) };
    let unit_text = rest.split_once(' ').map_or("", |(_, unit)| unit);
    let decimals = shown.split_once('.').map_or(0, |(_, decimals)| decimals.len());
    let prefix = unit_text.strip_suffix(unit).unwrap_or("");
    let power = match prefix {
        "f" => -15,
        "p" => -12,
        "n" => -9,
        "µ" => -6,
        "m" => -3,
        "k" => 3,
        "M" => 6,
        "G" => 9,
        "T" => 12,
        _ => 0,
    };
    joined(&fixed(value * 10f64.powi(-power), decimals), unit_text)
}

fn thousands(count: usize) -> String {
    let digits = count.to_string();
    let groups: Vec<&str> = digits
        .as_bytes()
        .rchunks(3)
        .rev()
        .map(|group| core::str::from_utf8(group).unwrap_or_default())
        .collect();
    groups.join("\u{202f}")
}

/// An uncertainty to two figures, with its unit.
fn amount(value: f64, unit: &str) -> String {
    match unit {
        "" | "dB" | "%" | "nm" | "K" | "°C" | "A/W" | "dB/Hz" => joined(&significant(value, 2), unit),
        "dBm" => joined(&significant(value, 2), "dB"),
        _ => crate::quantity::write::prefixed(value, unit, 2),
    }
}

/// The lines of a budget that have an effect; a doubt of what this answer does not hang on says nothing here.
fn felt(uncertain: &Uncertain) -> impl Iterator<Item = &Contribution> {
    uncertain.budget.iter().filter(|row| row.contribution > 0.0)
}

fn bars(uncertain: &Uncertain) -> Budget {
    let rows = felt(uncertain).map(|row| BudgetRow {
        cause: row.name.clone(),
        figure: amount(row.contribution, uncertain.unit),
        share: row.share,
    });
    Budget {
        title: format!("What the uncertainty of the {} comes from", name(uncertain.of)),
        total: format!("u = {}", amount(uncertain.standard, uncertain.unit)),
        rows: rows.collect(),
    }
}

fn table(uncertain: &Uncertain) -> Table {
    let columns = ["In doubt", "Estimate", "u", "Distribution", "ν", "Sensitivity c", "|c·u|", "Share / %"];
    let row = |row: &Contribution| {
        let own = if row.estimate.is_none() && row.unit.is_empty() {
            format!("{} %", significant(row.standard * 100.0, 2))
        } else {
            amount(row.standard, row.unit)
        };
        vec![
            row.name.clone(),
            row.estimate.map_or_else(|| "a table".to_owned(), |estimate| estimate_text(row, estimate)),
            own,
            row.distribution.word().to_owned(),
            row.degrees_of_freedom.map_or_else(|| "∞".to_owned(), |freedom| brief(freedom, 3)),
            sensitivity(row, uncertain.unit),
            amount(row.contribution, uncertain.unit),
            fixed(row.share * 100.0, 1),
        ]
    };
    Table {
        title: format!("Uncertainty budget of the {}", name(uncertain.of)),
        columns: columns.map(str::to_owned).to_vec(),
        rows: felt(uncertain).map(row).collect(),
    }
}

fn estimate_text(row: &Contribution, estimate: f64) -> String {
    let kind = crate::bench::field::field(&row.pointer).map(|field| field.kind);
    kind.map_or_else(|| plain(estimate), |kind| crate::quantity::write::exact(rounded(estimate), kind))
}

/// Ten figures hide the last bits of a conversion.
fn rounded(value: f64) -> f64 {
    format!("{value:.9e}").parse().unwrap_or(value)
}

fn sensitivity(row: &Contribution, unit: &str) -> String {
    let of = if unit == "dBm" { "dB" } else { unit };
    let per = match (of, row.unit) {
        (of, "") => of.to_owned(),
        ("", own) => format!("1/({own})"),
        (of, own) if own.contains('/') => format!("{of}/({own})"),
        (of, own) => format!("{of}/{own}"),
    };
    joined(&significant(row.sensitivity, 3), &per)
}

fn doubts(uncertain: &Uncertain) -> Vec<String> {
    let mut doubts = Vec::new();
    if let Some(curvature) = uncertain.second_order.filter(|curvature| curvature.matters) {
        let how = match curvature.standard {
            Some(standard) => format!(
                "with the terms of second order u is {} instead of {}, and the mean is shifted by {}",
                amount(standard, uncertain.unit),
                amount(uncertain.standard, uncertain.unit),
                amount(curvature.mean_shift, uncertain.unit)
            ),
            None => "the terms of second order are larger than those of first".to_owned(),
        };
        doubts.push(format!(
            "The model is curved over these uncertainties: {how}. Quote the interval of a run of trials rather than the \
             budget’s."
        ));
    }
    doubts.extend(uncertain.other_means.iter().filter_map(|other| {
        let field = crate::bench::field::field(other.pointer)?;
        let text = |value: f64| crate::quantity::write::exact(rounded(value), field.kind);
        Some(format!(
            "The repeated readings of {} have the mean {}; {} stands at its field and was used. Empty the field to use \
             the mean.",
            field.name,
            text(other.mean),
            text(other.value)
        ))
    }));
    let Some(run) = &uncertain.monte_carlo else { return doubts };
    if run.confirmed_figures == 0 {
        doubts.push(format!(
            "The trials do not confirm the budget: its ends lie {} and {} from theirs, where {} would be allowed for one \
             figure of u. Quote the interval of the trials.",
            amount(run.differences[0], uncertain.unit),
            amount(run.differences[1], uncertain.unit),
            amount(crate::uncertainty::outcome::tolerance(uncertain.standard, 1), uncertain.unit)
        ));
    }
    if run.outcome.failed > 0 {
        doubts.push(format!(
            "In {} of the trials there was no answer, because a number left its limits or a table its range; the trials \
             speak of the others only. Look whether a doubt is larger than it can be.",
            thousands(run.outcome.failed)
        ));
    }
    if run.outcome.stable == Some(false) {
        doubts.push("The trials ended before two figures were stable. Allow more of them.".to_owned());
    }
    doubts
}

fn notes(uncertain: &Uncertain) -> Vec<String> {
    let mut notes = Vec::new();
    match uncertain.of {
        "power_w" | "power_dbm" | "correction_db" | "correction_factor" => notes.push(
            "This budget is for the absolute power. What the meter has stored for its setting is an exact number that \
             turns the reading back into a current; only the responsivity at the light’s wavelength is in doubt, so the \
             certificate’s common scale counts in full."
                .to_owned(),
        ),
        "ratio" | "ratio_db" => notes.push(
            "This budget is for the ratio of two readings of one meter. What both share cancels: the common scale of the \
             certificate, as far as its points are correlated."
                .to_owned(),
        ),
        _ => {}
    }
    notes.push(format!(
        "Uncertainty by JCGM 100:2008: first order, sensitivities by extrapolated differences of the whole model, k from \
         Student’s t for {}{}.",
        percent(uncertain.coverage_probability),
        match uncertain.correlated {
            true => ". Inputs are correlated, so the Welch–Satterthwaite formula does not hold (G.4.1) and no effective \
                     degrees of freedom are given",
            false => " with the effective degrees of freedom of Welch and Satterthwaite",
        }
    ));
    if let Some(run) = &uncertain.monte_carlo {
        let ends = format!(
            "the ends of its interval lie {} and {} from those of the trials",
            amount(run.differences[0], uncertain.unit),
            amount(run.differences[1], uncertain.unit)
        );
        let says = match run.confirmed_figures {
            2 => format!("The budget is validated to two figures of u: {ends}"),
            1 => format!("The budget is validated to one figure of u, not to two: {ends}"),
            _ => format!("The budget is not validated by the trials: {ends}"),
        };
        notes.push(format!(
            "Trials by JCGM 101:2008 with the generator xoshiro256++ from seed {}. {says} (clause 8). A \
             normal input with few degrees of freedom is drawn from Student’s t; correlated inputs that are not normal \
             hang together through normal values.",
            run.seed
        ));
    }
    notes
}

/// The trials' values against the budget's curve.
fn distribution(uncertain: &Uncertain, run: &MonteCarloResult) -> Curve {
    let histogram = &run.outcome.histogram;
    let bins = histogram.counts.len().max(1) as f64;
    let width = (histogram.to - histogram.from) / bins;
    let all = run.outcome.trials as f64;
    // Each bin's top as a step; heights relative to the budget's highest, so that no unit of density is needed.
    let highest = density(uncertain, 0.0);
    let (mut x, mut y) = (Vec::new(), Vec::new());
    for (index, count) in histogram.counts.iter().enumerate() {
        let height = if width > 0.0 { *count as f64 / all / width / highest } else { 0.0 };
        let left = histogram.from + index as f64 * width;
        x.extend([left, left + width]);
        y.extend([height, height]);
    }
    let (from, to) = (
        histogram.from.min(uncertain.estimate - 4.0 * uncertain.standard),
        histogram.to.max(uncertain.estimate + 4.0 * uncertain.standard),
    );
    let by_budget: (Vec<f64>, Vec<f64>) = evenly(from, to, 201)
        .map(|at| (at, density(uncertain, (at - uncertain.estimate) / uncertain.standard) / highest))
        .unzip();
    let mark = |name: &str, at: f64| Mark::Level { name: name.to_owned(), axis: "x", at };
    Curve {
        name: "distribution",
        title: "Trials against the budget",
        x: Axis { label: "Value", unit: uncertain.unit, scale: Scale::Linear },
        y: Axis { label: "Density, relative to the budget’s highest", unit: "", scale: Scale::Linear },
        lines: vec![
            Line { name: "trials".to_owned(), x, y },
            Line { name: "budget".to_owned(), x: by_budget.0, y: by_budget.1 },
        ],
        marks: vec![mark("low", run.outcome.symmetric[0]), mark("high", run.outcome.symmetric[1])],
    }
}

/// Density of Student's t, or of the normal distribution, of the budget, per unit of deviation over u.
fn density(uncertain: &Uncertain, t: f64) -> f64 {
    let standard = uncertain.standard;
    match uncertain.effective_degrees_of_freedom {
        Some(nu) if nu < 1000.0 => {
            let ln = libm::lgamma(0.5 * (nu + 1.0))
                - libm::lgamma(0.5 * nu)
                - 0.5 * libm::log(nu * PI)
                - 0.5 * (nu + 1.0) * libm::log1p(t * t / nu);
            libm::exp(ln) / standard
        }
        _ => libm::exp(-0.5 * t * t) / (2.0 * PI).sqrt() / standard,
    }
}

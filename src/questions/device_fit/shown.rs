//! The fitted device as it is shown: headline, figures, correlations, doubts and notes.

use super::fitted::{Fitted, Parameter};
use super::{Answer, Given};
use crate::bench::measurements::{Estimator, Measurements};
use crate::quantity::write::{brief, fixed, plus_minus, prefixed, significant};
use crate::questions::shown::{BIAS_VOLTAGE, Fact, GLASS, Headline, INVISIBLE_LIGHT, Shown, Table, joined};

/// From here on two numbers are hardly told apart.
const STRONG_CORRELATION: f64 = 0.98;

/// Below this gain the breakdown voltage is an extrapolation of the formula.
const LOW_GAIN: f64 = 3.0;

/// The answer, ready to be shown.
pub fn shown(given: &Given, answer: &Answer) -> Shown {
    Shown {
        headline: headline(answer),
        facts: answer.fits.iter().flat_map(facts).collect(),
        budgets: Vec::new(),
        tables: answer.fits.iter().filter_map(correlations).collect(),
        cautions: vec![BIAS_VOLTAGE, INVISIBLE_LIGHT, GLASS],
        doubts: doubts(given, answer),
        notes: notes(given.measurements, answer),
    }
}

fn determined(answer: &Answer) -> impl Iterator<Item = &Parameter> {
    answer.fits.iter().flat_map(|fit| &fit.parameters).filter(|parameter| parameter.value.is_some())
}

fn headline(answer: &Answer) -> Headline {
    let told: Vec<(&Parameter, String)> =
        determined(answer).filter_map(|parameter| Some((parameter, figure(parameter)?))).collect();
    // The photocurrent is the light's as much as the device's, and one breakdown voltage is enough.
    let by_current = told.iter().any(|(parameter, _)| parameter.name == "breakdown_v");
    let mut own = told.iter().filter(|(parameter, _)| match parameter.name {
        "unity_gain_current_a" => false,
        "breakdown_by_temperature_v" => !by_current,
        _ => true,
    });
    let Some((first, figure)) = own.next() else {
        return Headline {
            figure: "Not determined".to_owned(),
            sentence: "by these measurements; beneath stands what to measure.".to_owned(),
            uncertainty: String::new(),
            copy: "not determined".to_owned(),
        };
    };
    let others: Vec<String> =
        own.map(|(parameter, figure)| format!("{} {figure}", parameter.title)).collect();
    let rest = if others.is_empty() { String::new() } else { format!("; {}", others.join(", ")) };
    Headline {
        figure: figure.clone(),
        sentence: format!("is the {}{rest}. Each ± covers 95 %.", first.title),
        uncertainty: String::new(),
        copy: copied(first),
    }
}

/// Value and half of the interval.
fn figure(parameter: &Parameter) -> Option<String> {
    let [low, high] = parameter.interval?;
    Some(plus_minus(parameter.value?, 0.5 * (high - low), parameter.unit))
}

fn copied(parameter: &Parameter) -> String {
    parameter.value.map_or_else(String::new, |value| joined(&value.to_string(), parameter.unit))
}

fn facts(fit: &Fitted) -> Vec<Fact> {
    let freedom = fit.degrees_of_freedom.map_or(String::new(), |freedom| {
        format!(", {} {} of freedom", freedom, if freedom == 1.0 { "degree" } else { "degrees" })
    });
    let mut facts: Vec<Fact> = fit
        .parameters
        .iter()
        .filter_map(|parameter| {
            let standard = parameter.standard?;
            Some(Fact {
                name: capital(parameter.title),
                figure: figure(parameter)?,
                note: format!("95 %; standard uncertainty {}{freedom}", with_unit(standard, parameter.unit)),
                copy: copied(parameter),
            })
        })
        .collect();
    facts.extend(fit.residual_deviation.map(|deviation| scatter(fit, deviation)));
    facts
}

fn with_unit(value: f64, unit: &str) -> String {
    if unit.is_empty() { significant(value, 2) } else { prefixed(value, unit, 2) }
}

fn scatter(fit: &Fitted, deviation: f64) -> Fact {
    let name = format!("Scatter of the {}", spoken(fit.table));
    let points = match (fit.points_left_out, fit.points_weighed_down) {
        (0, 0) => format!("{} points", fit.points_used),
        (0, down) => format!("{} points, {down} of them counting less", fit.points_used),
        (out, 0) => format!("{} points, {out} left out", fit.points_used),
        (out, down) => format!("{} points, {down} of them counting less, {out} left out", fit.points_used),
    };
    match (fit.uncertainties_given, fit.table) {
        (true, _) => Fact::number(&name, deviation).noted(format!("times the given uncertainties; {points}")),
        (_, "breakdown") => Fact::prefixed(&name, deviation, "V").noted(points),
        _ => Fact::fixed(&name, 100.0 * deviation, 2, "%").noted(points),
    }
}

fn spoken(table: &str) -> &'static str {
    match table {
        "iv" => "photocurrent",
        "noise" => "excess noise",
        "bandwidth" => "bandwidth",
        _ => "breakdown voltage",
    }
}

fn correlations(fit: &Fitted) -> Option<Table> {
    let told: Vec<usize> =
        (0..fit.parameters.len()).filter(|place| fit.parameters[*place].value.is_some()).collect();
    if told.len() < 2 {
        return None;
    }
    let title = |place: &usize| capital(fit.parameters[*place].title);
    let cell = |one: usize, other: usize| {
        fit.correlations[one][other].map_or_else(|| "–".to_owned(), |r| fixed(r, 4))
    };
    let rows = told
        .iter()
        .map(|one| std::iter::once(title(one)).chain(told.iter().map(|other| cell(*one, *other))).collect());
    Some(Table {
        title: format!("Correlation of what the {} tells", spoken(fit.table)),
        columns: std::iter::once("Number".to_owned()).chain(told.iter().map(title)).collect(),
        rows: rows.collect(),
    })
}

fn doubts(given: &Given, answer: &Answer) -> Vec<String> {
    let refused = answer.refused.iter();
    let mut doubts: Vec<String> = refused
        .map(|refused| format!("The {} was not fitted. {}", spoken(refused.table), refused.sentence))
        .collect();
    for fit in &answer.fits {
        doubts.extend(fit.parameters.iter().filter_map(|parameter| parameter.not_determined.clone()));
        doubts.extend(together(fit));
        doubts.extend(scattered(fit));
    }
    doubts.extend(half_given(given.measurements));
    let highest = answer.fits.iter().find(|fit| fit.table == "iv").and_then(|fit| {
        let unity_a = *fit.raw.get(3)?;
        Some(fit.points.iter().map(|point| point.fitted / unity_a).fold(0.0, f64::max))
    });
    if let Some(gain) = highest.filter(|gain| *gain < LOW_GAIN) {
        doubts.push(format!(
            "The highest gain measured is {}: the breakdown voltage is the formula’s word for what lies beyond. Measure \
             nearer to breakdown.",
            significant(gain, 2)
        ));
    }
    let measured = given.measurements;
    if let Some(iv) = &measured.iv {
        if iv.points.iter().all(|point| point.dark_a.is_none()) {
            doubts.push(
                "No dark current was given, so nothing was taken off the current under light. Measure it at the same voltages."
                    .to_owned(),
            );
        }
        if measured.temperature_c.is_none() {
            doubts.push(
                "The breakdown voltage belongs to a temperature that is not given. Type the device’s temperature during the \
                 measurement of its currents."
                    .to_owned(),
            );
        }
    }
    doubts
}

/// Numbers that only hold together.
fn together(fit: &Fitted) -> Vec<String> {
    let mut doubts = Vec::new();
    for one in 0..fit.parameters.len() {
        for other in one + 1..fit.parameters.len() {
            if let Some(r) = fit.correlations[one][other].filter(|r| r.abs() > STRONG_CORRELATION) {
                doubts.push(format!(
                    "The {} and the {} are told together, with a correlation of {}. Use both with it, or measure over a wider \
                     range.",
                    fit.parameters[one].title,
                    fit.parameters[other].title,
                    fixed(r, 4)
                ));
            }
        }
    }
    doubts
}

/// Points that belie the uncertainties given for them, and weights that did not settle.
fn scattered(fit: &Fitted) -> Vec<String> {
    let mut doubts = Vec::new();
    // Three standard deviations of the square of what stands for one, in the normal approximation.
    let freedom = fit.points_used.saturating_sub(fit.parameters.len()).max(1) as f64;
    if let Some(times) = fit.residual_deviation.filter(|_| fit.uncertainties_given)
        && times * times > 1.0 + 3.0 * (2.0 / freedom).sqrt()
    {
        doubts.push(format!(
            "The points of the {} scatter {} times as much as their uncertainties allow, so those of the fit are too small by \
             about as much. Look at the residuals for a course that the formula does not follow, or widen the uncertainties.",
            spoken(fit.table),
            significant(times, 2)
        ));
    }
    if !fit.settled {
        doubts.push(format!(
            "The weights of the points of the {} did not settle: several sets of wild points fit alike. Look at the residuals \
             and take out what is known to be wrong.",
            spoken(fit.table)
        ));
    }
    doubts
}

/// Tables in which some points have an uncertainty and others none.
fn half_given(measured: &Measurements) -> Option<String> {
    fn half<P>(points: Option<&[P]>, standard: impl Fn(&P) -> Option<f64>) -> bool {
        let given = points.unwrap_or_default().iter().filter(|point| standard(point).is_some()).count();
        given > 0 && given < points.unwrap_or_default().len()
    }
    let iv = half(measured.iv.as_ref().map(|t| &t.points[..]), |point| point.standard_a);
    let noise = half(measured.noise.as_ref().map(|t| &t.points[..]), |point| point.standard);
    let bandwidth = half(measured.bandwidth.as_ref().map(|t| &t.points[..]), |point| point.standard_hz);
    let breakdown = half(measured.breakdown.as_ref().map(|t| &t.points[..]), |point| point.standard_v);
    (iv || noise || bandwidth || breakdown).then(|| {
        "Some points have an uncertainty and others of the same table none, so that table was fitted without them. Give \
         one to each point."
            .to_owned()
    })
}

fn notes(measured: &Measurements, answer: &Answer) -> Vec<String> {
    let fitted = |table: &str| answer.fits.iter().any(|fit| fit.table == table);
    let mut notes = Vec::new();
    if fitted("iv") {
        let unity = match measured.unity_gain_v {
            Some(volt) => format!(
                "The gain is taken as 1 at {} V, and points below are left out; the uncertainty of that one current is not counted.",
                brief(volt, 6)
            ),
            None => "The photocurrent at unity gain is fitted with the rest.".to_owned(),
        };
        notes.push(format!(
            "Gain: photocurrent over that at unity gain, dark current taken off point by point. Fitted: M = 1/(1 − (V_j/V_B)ⁿ) with \
             V_j = V − I·R_s, where I is dark current and multiplied photocurrent: S. L. Miller, Phys. Rev. 99, 1234 (1955). {unity}"
        ));
    }
    if fitted("noise") {
        notes.push(
            "Excess noise F = kM + (1 − k)(2 − 1/M): R. J. McIntyre, IEEE Trans. Electron Devices ED-13, 164 (1966).".to_owned(),
        );
    }
    if fitted("bandwidth") {
        notes.push("Bandwidth B = B₀/√(1 + (M·B₀/GBP)²), with B₀ that at unity gain.".to_owned());
    }
    if let (true, Some(celsius)) = (fitted("breakdown"), answer.reference_temperature_c) {
        notes.push(format!(
            "A straight line through the breakdown voltages, referred to {} °C.",
            brief(celsius, 5)
        ));
    }
    notes.push(match measured.estimator {
        Estimator::LeastSquares => "Least squares. Points are weighed by their uncertainties where each has one; else currents, \
                                    noise and bandwidths by equal parts of their value, breakdown voltages alike."
            .to_owned(),
        Estimator::Huber => "Huber’s estimate: beyond 1.345 times the scatter a point counts by its size and no longer by its square, \
                             with the scatter from the median of the residuals: P. J. Huber, E. M. Ronchetti, Robust Statistics, \
                             2nd edition (2009)."
            .to_owned(),
    });
    notes.push(
        "Uncertainties from the covariance (JᵀJ)⁻¹s² at the best fit, s² from the scatter of the points unless their \
         uncertainties are given; each interval with Student’s factor for 95 %. They hold if the formula does."
            .to_owned(),
    );
    notes
}

fn capital(title: &str) -> String {
    let mut chars = title.chars();
    chars.next().map_or_else(String::new, |first| first.to_uppercase().chain(chars).collect())
}

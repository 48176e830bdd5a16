//! From the quantities of a digital certificate to the certificate of a meter.

use super::chosen::{Chosen, named};
use super::quantity::DccQuantity;
use super::series::Written;
use super::unit::{Dimension, decimal, understood};
use crate::bench::meter::{CertificateForm, CertificatePoint};
use crate::bench::source::WAVELENGTH_LIMITS;
use crate::fault::{Code, Fault, Faults};
use crate::record::names::Role;
use crate::tree::Tree;
use serde::Serialize;

/// A certificate of a meter, ready to stand on a bench.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct DccCertificate {
    /// What it states.
    pub form: CertificateForm,
    /// The coverage factor k; absent where the file states none.
    pub coverage_factor: Option<f64>,
    /// In the order of the wavelengths.
    pub points: Vec<CertificatePoint>,
    /// What could not become a point.
    pub bad_points: Vec<BadPoint>,
}

/// A number of the file that could not become a point.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct BadPoint {
    /// Its place in the list, counted from 1.
    pub number: usize,
    /// Why, in one sentence.
    pub sentence: String,
}

/// Makes the certificate of wavelengths, values and perhaps uncertainties.
pub(super) fn certificate(
    quantities: &[DccQuantity],
    [wavelengths, values, expanded]: [Option<usize>; 3],
    form: Role,
    chosen: &Chosen,
    notes: &mut Vec<String>,
) -> Result<DccCertificate, Faults> {
    let of = |index: Option<usize>| index.and_then(|index| quantities.get(index));
    let (Some(wavelengths), Some(values)) = (of(wavelengths), of(values)) else {
        return Err(vec![Fault::missing("/choices", "A certificate needs wavelengths and values.")]);
    };
    let expanded = of(expanded);
    for (other, key) in [(Some(values), "value"), (expanded, "expanded")] {
        if let Some(other) = other.filter(|other| other.count != wavelengths.count) {
            let sentence = format!(
                "“{}” has {} numbers and the wavelengths are {}; as many are needed.",
                named(other),
                other.count,
                wavelengths.count
            );
            return Err(vec![Fault::new(
                &format!("/choices/{key}"),
                Code::Conflict,
                (other.count as f64).into(),
                &sentence,
            )]);
        }
    }
    let (mut points, mut bad_points) = (Vec::new(), Vec::new());
    for (at, (wavelength, value)) in wavelengths.values.iter().zip(&values.values).enumerate() {
        let own = expanded.and_then(|expanded| expanded.values.get(at));
        match point(wavelength, value, own, form, chosen) {
            Ok(point) => points.push(point),
            Err(sentence) => bad_points.push(BadPoint { number: at + 1, sentence }),
        }
    }
    points.sort_by(|one, next| one.0.wavelength_nm.total_cmp(&next.0.wavelength_nm));
    let twice = points.windows(2).find(|pair| pair[0].0.wavelength_nm == pair[1].0.wavelength_nm);
    if let Some([one, _]) = twice {
        let sentence = format!(
            "Each wavelength may stand once in a certificate; {} nm stands twice. Where a certificate has several \
             tables, choose the quantities of one.",
            one.0.wavelength_nm
        );
        return Err(vec![Fault::new("", Code::Conflict, Tree::Number(one.0.wavelength_nm), &sentence)]);
    }
    if points.is_empty() {
        let why = bad_points
            .first()
            .map_or(String::new(), |bad| format!(" Number {}: {}", bad.number, bad.sentence));
        let sentence = format!("At least one wavelength must have a value that can be read; none has.{why}");
        return Err(vec![Fault::new("", Code::Unreadable, Tree::Null, &sentence)]);
    }
    let coverage_factor = one_k(&mut points, notes);
    if wavelengths.has_uncertainty {
        notes.push("The uncertainties of the wavelengths themselves were not read.".to_owned());
    }
    if form == Role::Deviation {
        notes.push(
            "The deviation d is (indicated − true)/true, so the correction factor is 1/(1 + d).".to_owned(),
        );
    }
    let form = match form {
        Role::Responsivity => CertificateForm::Responsivity,
        _ => CertificateForm::CorrectionFactor,
    };
    let points = points.into_iter().map(|(point, _)| point).collect();
    Ok(DccCertificate { form, coverage_factor, points, bad_points })
}

/// One k for the table: the greatest, to which the uncertainties of the other points are brought.
fn one_k(points: &mut [(CertificatePoint, Option<f64>)], notes: &mut Vec<String>) -> Option<f64> {
    let with = || points.iter().filter(|(point, _)| point.expanded_percent.is_some());
    let greatest = with()
        .filter_map(|(_, k)| *k)
        .fold(None, |most: Option<f64>, k| Some(most.map_or(k, |most| most.max(k))))?;
    if with().any(|(_, k)| k.is_none()) {
        notes
            .push("Some uncertainties state no coverage factor, so none was taken for the table.".to_owned());
        return None;
    }
    if with().any(|(_, k)| *k != Some(greatest)) {
        notes.push(format!(
            "The coverage factors differ; all uncertainties were brought to the greatest, k = {greatest}."
        ));
        for (point, k) in points.iter_mut() {
            let scale = k.map_or(1.0, |k| greatest / k);
            point.expanded_percent = point.expanded_percent.map(|percent| percent * scale);
        }
    }
    Some(greatest)
}

/// One point with the k of its uncertainty.
fn point(
    wavelength: &Written,
    value: &Written,
    expanded: Option<&Written>,
    form: Role,
    chosen: &Chosen,
) -> Result<(CertificatePoint, Option<f64>), String> {
    let number = |written: &str, unit: &str, name: &str| -> Result<f64, String> {
        let (_, shift) =
            understood(unit).ok_or_else(|| format!("The unit “{unit}” of the {name} is not known here."))?;
        decimal(written, shift).ok_or_else(|| format!("The {name} must be a number; “{written}” is none."))
    };
    let wavelength_nm = number(&wavelength.number, &wavelength.unit, "wavelength")?;
    if !WAVELENGTH_LIMITS.hold(wavelength_nm) {
        let must = WAVELENGTH_LIMITS.sentence(|nm| format!("{nm} nm"));
        return Err(format!("The wavelength {must}; it is {wavelength_nm} nm."));
    }
    let stated = number(&value.number, &value.unit, "value")?;
    let (kept, base) = match form {
        Role::Deviation => (1.0 / (1.0 + stated), 1.0 + stated),
        _ => (stated, stated),
    };
    if !(kept > 0.0 && kept < 1e3 && base > 0.0) {
        return Err(format!("The value must be above 0 and below 1000; it is {stated}."));
    }
    let (percent, k) = match (&value.uncertainty, expanded) {
        _ if chosen.no_uncertainty => (None, None),
        (_, Some(own)) => {
            let u = number(&own.number, &own.unit, "uncertainty")?;
            // In per cent, or as a ratio beside a responsivity, it is relative; otherwise it is in the value's unit.
            let dimensions = (understood(&own.unit), understood(&value.unit));
            let relative = own.unit.contains("percent")
                || matches!(dimensions, (Some((Dimension::Ratio, _)), Some((Dimension::Responsivity, _))));
            if !relative && dimensions.0.map(|unit| unit.0) != dimensions.1.map(|unit| unit.0) {
                return Err(format!(
                    "An uncertainty in “{}” is none of a value in “{}”.",
                    own.unit, value.unit
                ));
            }
            (Some(if relative { u * 100.0 } else { u / base * 100.0 }), chosen.coverage_factor)
        }
        (Some(attached), None) => {
            let percent = match &attached.relative_unit {
                Some(unit) => number(&attached.number, unit, "uncertainty")? * 100.0,
                None => number(&attached.number, &value.unit, "uncertainty")? / base * 100.0,
            };
            let k = if attached.standard { Some(1.0) } else { chosen.coverage_factor.or(attached.k) };
            (Some(percent), k)
        }
        (None, None) => (None, None),
    };
    if percent.is_some_and(|percent| !(0.0..=100.0).contains(&percent)) {
        return Err("The uncertainty must lie between 0 % and 100 % of the value.".to_owned());
    }
    if k.is_some_and(|k: f64| !(1.0..=10.0).contains(&k)) {
        return Err("The coverage factor must lie between 1 and 10.".to_owned());
    }
    Ok((CertificatePoint { wavelength_nm, value: kept, expanded_percent: percent }, k))
}

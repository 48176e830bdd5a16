//! What is this reading worth?

pub(super) mod certified;
mod light;
mod over_spectrum;
mod prepared;
mod shown;

use super::curve::{Axis, Curve, Line, Mark, Scale, evenly};
use super::needs::Needs;
use super::shown::Shown;
use crate::bench::Bench;
use crate::bench::meter::USUAL_WAVELENGTHS_NM;
use crate::fault::{Code, Fault, Faults};
use crate::physics::decibel::{db_from_ratio, dbm_from_watt, watt_from_dbm};
use crate::tree::Tree;
use certified::{Certified, SETTING, SOURCE};
use light::Light;
pub use prepared::prepare;
use serde::Serialize;

/// The power behind a reading, when the light has another wavelength than the meter is set to.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Answer {
    /// True power, W.
    pub power_w: f64,
    /// True power, dBm.
    pub power_dbm: f64,
    /// What the meter shows, less its zero offset, W.
    pub reading_w: f64,
    /// True power over that of the reading it is compared with.
    pub ratio: Option<f64>,
    /// The same, dB.
    pub ratio_db: Option<f64>,
    /// To be added to a reading in dBm, dB.
    pub correction_db: f64,
    /// To be multiplied with a reading in W.
    pub correction_factor: f64,
    /// Responsivity that the meter assumes at its setting, A/W; absent where it cancels.
    pub responsivity_set_a_per_w: Option<f64>,
    /// Responsivity at the light's wavelength, A/W; absent where it cancels.
    pub responsivity_source_a_per_w: Option<f64>,
    /// Relative change of the power if the light's wavelength were 1 nm longer, per cent.
    pub slope_percent_per_nm: Option<f64>,
    /// Mean wavelength of the light, nm.
    pub centre_wavelength_nm: f64,
    /// What the width of the light changes: its power over that of a single wavelength at the mean, less 1, per cent;
    /// absent where the light is taken as one wavelength.
    pub averaging_percent: Option<f64>,
    /// What the certificate's uncertainty makes of the power; absent where the certificate states none.
    pub certificate_uncertainty: Option<CertificateUncertainty>,
    /// Corrections of the same setting at other wavelengths of the light.
    pub table: Vec<TableRow>,
    /// Correction against the light's wavelength.
    pub curves: Vec<Curve>,
    /// The answer as it is shown.
    pub shown: Shown,
}

/// The uncertainty of the power that comes from the certificate.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct CertificateUncertainty {
    /// Standard uncertainty, per cent of the power.
    pub standard_percent: f64,
    /// Expanded uncertainty, per cent of the power.
    pub expanded_percent: f64,
    /// The certificate's own coverage factor k, which both are related by.
    pub coverage_factor: f64,
    /// Standard uncertainty, W.
    pub standard_w: f64,
    /// Expanded uncertainty, W.
    pub expanded_w: f64,
    /// Lower end of the interval, dBm; absent where it reaches down to no light.
    pub low_dbm: Option<f64>,
    /// Upper end of the interval, dBm.
    pub high_dbm: f64,
}

/// The correction at another wavelength of the light.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct TableRow {
    /// Wavelength of the light, nm.
    pub wavelength_nm: f64,
    /// Correction there, dB; absent outside the certificate, as are the others.
    pub correction_db: Option<f64>,
    /// The same as a factor.
    pub correction_factor: Option<f64>,
    /// What the reading would be worth, dBm.
    pub power_dbm: Option<f64>,
    /// Expanded uncertainty from the certificate, per cent.
    pub expanded_percent: Option<f64>,
}

/// Answers for a bench.
pub fn ask(bench: &Bench) -> Result<Answer, Faults> {
    let (mut answer, given) = figures(bench)?;
    answer.table = table(&given, bench);
    answer.curves.extend(correction_against_wavelength(&given, &answer));
    answer.curves.extend(over_spectrum::curve(&given));
    answer.shown = shown::shown(bench, &given, &answer);
    Ok(answer)
}

/// The numbers that a sweep or a search may follow, without curves or text.
pub fn numbers(bench: &Bench) -> Result<Vec<(&'static str, Option<f64>)>, Faults> {
    let (answer, _) = figures(bench)?;
    let uncertainty = answer.certificate_uncertainty;
    Ok(vec![
        ("power_dbm", Some(answer.power_dbm)),
        ("power_w", Some(answer.power_w)),
        ("correction_db", Some(answer.correction_db)),
        ("correction_factor", Some(answer.correction_factor)),
        ("responsivity_set_a_per_w", answer.responsivity_set_a_per_w),
        ("responsivity_source_a_per_w", answer.responsivity_source_a_per_w),
        ("ratio", answer.ratio),
        ("ratio_db", answer.ratio_db),
        ("averaging_percent", answer.averaging_percent),
        ("expanded_percent", uncertainty.map(|uncertainty| uncertainty.expanded_percent)),
    ])
}

/// What the question takes from the bench.
#[derive(Debug)]
struct Given<'b> {
    reading_dbm: f64,
    set_nm: f64,
    light: Light,
    coverage_factor: Option<f64>,
    certified: Certified<'b>,
}

fn given(bench: &Bench) -> Result<Given<'_>, Faults> {
    let mut needs = Needs::default();
    let meter =
        needs.part(&bench.meter, "/meter", "A meter is needed: its reading, setting and certificate.");
    let source = needs.part(&bench.source, "/source", "A source is needed: its wavelength.");
    // A spectrum says by itself where the light lies.
    let has_spectrum = source.is_some_and(|source| source.spectrum.is_some());
    let source_nm = match source {
        Some(source) if !has_spectrum => needs.number(source.wavelength_nm, SOURCE),
        other => other.and_then(|source| source.wavelength_nm),
    };
    let reading_dbm = meter.and_then(|meter| needs.number(meter.reading_dbm, "/meter/reading_dbm"));
    let set_nm = meter.and_then(|meter| needs.number(meter.set_wavelength_nm, SETTING));
    let sentence = "The meter's certificate is needed: its values at wavelengths.";
    let certificate = meter.and_then(|meter| needs.part(&meter.certificate, "/meter/certificate", sentence));
    if let Some(certificate) = certificate
        && certificate.coverage_factor.is_none()
        && certificate.points.iter().any(|point| point.expanded_percent.is_some())
    {
        needs.faults.push(Fault::missing(
            "/meter/certificate/coverage_factor",
            "The coverage factor k is needed to know what the certificate's uncertainties mean; it is printed beside \
             them, usually as k = 2.",
        ));
    }
    let certified = meter
        .zip(certificate)
        .and_then(|(meter, certificate)| needs.found(Certified::new(bench, meter, certificate)));
    let coverage_factor = certificate.and_then(|certificate| certificate.coverage_factor);
    let known = source.zip(certified.as_ref()).filter(|_| has_spectrum || source_nm.is_some());
    let light = known.and_then(|(source, certified)| needs.found(Light::of(source, source_nm, certified)));
    let made = (|| {
        let (reading_dbm, set_nm, light, certified) = (reading_dbm?, set_nm?, light?, certified?);
        Some(Given { reading_dbm, set_nm, light, coverage_factor, certified })
    })();
    needs.all(made)
}

fn figures(bench: &Bench) -> Result<(Answer, Given<'_>), Faults> {
    let given = given(bench)?;
    let found = given.certified.over(given.set_nm, &given.light).map_err(|fault| vec![fault])?;
    let correction_db = db_from_ratio(found.factor);
    let reading_w = shown_w(bench, given.reading_dbm, "/meter/zero_offset_w").map_err(|fault| vec![fault])?;
    let power_w = reading_w * found.factor;
    let power_dbm = match bench.meter.as_ref().and_then(|meter| meter.zero_offset_w) {
        None => given.reading_dbm + correction_db,
        Some(_) => dbm_from_watt(power_w),
    };
    let ratio = ratio(bench, &given, power_w)?;
    let answer = Answer {
        power_w,
        power_dbm,
        reading_w,
        ratio,
        ratio_db: ratio.map(db_from_ratio),
        correction_db,
        correction_factor: found.factor,
        responsivity_set_a_per_w: found.set_a_per_w,
        responsivity_source_a_per_w: found.source_a_per_w,
        slope_percent_per_nm: given
            .certified
            .relative_slope_per_nm_over(&given.light)
            .map(|slope| slope * 100.0),
        centre_wavelength_nm: given.light.centre_nm(),
        averaging_percent: averaging_percent(&given, found.factor),
        certificate_uncertainty: certificate_uncertainty(&given, power_w),
        table: Vec::new(),
        curves: Vec::new(),
        shown: Shown::default(),
    };
    Ok((answer, given))
}

/// What a reading is without the zero offset, W.
fn shown_w(bench: &Bench, reading_dbm: f64, pointer: &str) -> Result<f64, Fault> {
    let offset_w = bench.meter.as_ref().and_then(|meter| meter.zero_offset_w).unwrap_or(0.0);
    let shown_w = watt_from_dbm(reading_dbm) - offset_w;
    if shown_w > 0.0 {
        return Ok(shown_w);
    }
    let sentence =
        "The zero offset is as large as the reading, so no light is left that a power could be given of.";
    Err(Fault::new(pointer, Code::Conflict, Tree::Number(offset_w), sentence))
}

/// The power over that of the reading it is compared with; nothing where there is no other.
fn ratio(bench: &Bench, given: &Given, power_w: f64) -> Result<Option<f64>, Faults> {
    let Some(comparison) = bench.meter.as_ref().and_then(|meter| meter.comparison.as_ref()) else {
        return Ok(None);
    };
    let mut needs = Needs::default();
    let reading_dbm = needs.number(comparison.reading_dbm, "/meter/comparison/reading_dbm");
    let other_w = reading_dbm
        .and_then(|reading_dbm| needs.found(shown_w(bench, reading_dbm, "/meter/comparison/reading_dbm")));
    let set_nm = comparison.set_wavelength_nm.unwrap_or(given.set_nm);
    let light = comparison.wavelength_nm.map_or_else(|| given.light.clone(), Light::One);
    let found = given.certified.over(set_nm, &light).map_err(|fault| {
        // The wavelengths that are at fault are those of the other reading, where it has its own.
        let pointer = match fault.pointer.as_str() {
            SETTING if comparison.set_wavelength_nm.is_some() => "/meter/comparison/set_wavelength_nm",
            SOURCE if comparison.wavelength_nm.is_some() => "/meter/comparison/wavelength_nm",
            other => other,
        };
        Fault { pointer: pointer.to_owned(), ..fault }
    });
    let found = needs.found(found);
    needs
        .all(Some(()))
        .and_then(|()| Ok(other_w.zip(found).map(|(other_w, found)| power_w / (other_w * found.factor))))
}

fn averaging_percent(given: &Given, factor: f64) -> Option<f64> {
    let Light::Spread { centre_nm, .. } = given.light else { return None };
    let at_centre = given.certified.at(given.set_nm, centre_nm).ok()?;
    Some((factor / at_centre.factor - 1.0) * 100.0)
}

fn certificate_uncertainty(given: &Given, power_w: f64) -> Option<CertificateUncertainty> {
    let coverage_factor = given.coverage_factor?;
    let standard = given.certified.relative_standard_over(&given.light)?;
    let expanded = standard * coverage_factor;
    Some(CertificateUncertainty {
        standard_percent: standard * 100.0,
        expanded_percent: expanded * 100.0,
        coverage_factor,
        standard_w: standard * power_w,
        expanded_w: expanded * power_w,
        low_dbm: (expanded < 1.0).then(|| dbm_from_watt(power_w * (1.0 - expanded))),
        high_dbm: dbm_from_watt(power_w * (1.0 + expanded)),
    })
}

fn table(given: &Given, bench: &Bench) -> Vec<TableRow> {
    let own = bench.meter.as_ref().and_then(|meter| meter.table_wavelengths_nm.as_deref());
    let row = |wavelength_nm: &f64| {
        let factor = given.certified.at(given.set_nm, *wavelength_nm).ok().map(|found| found.factor);
        let correction_db = factor.map(db_from_ratio);
        let relative = given.certified.relative_standard(*wavelength_nm).filter(|_| factor.is_some());
        TableRow {
            wavelength_nm: *wavelength_nm,
            correction_db,
            correction_factor: factor,
            power_dbm: correction_db.map(|db| given.reading_dbm + db),
            expanded_percent: relative.zip(given.coverage_factor).map(|(relative, k)| relative * k * 100.0),
        }
    };
    own.unwrap_or(&USUAL_WAVELENGTHS_NM).iter().map(row).collect()
}

fn correction_against_wavelength(given: &Given, answer: &Answer) -> Option<Curve> {
    let (first, last) = given.certified.range_nm()?;
    let points = evenly(first, last, 201).filter_map(|wavelength_nm| {
        let found = given.certified.at(given.set_nm, wavelength_nm).ok()?;
        Some((wavelength_nm, db_from_ratio(found.factor)))
    });
    let (x, y) = points.unzip();
    Some(Curve {
        name: "correction_against_wavelength",
        title: "Correction at this setting",
        x: Axis { label: "Wavelength of the light", unit: "nm", scale: Scale::Linear },
        y: Axis { label: "Add to the reading", unit: "dB", scale: Scale::Linear },
        lines: vec![Line { name: "correction".to_owned(), x, y }],
        marks: vec![
            Mark::Level { name: "setting".to_owned(), axis: "x", at: given.set_nm },
            Mark::Point {
                name: "this source".to_owned(),
                x: given.light.centre_nm(),
                y: answer.correction_db,
            },
        ],
    })
}

//! The power behind a reading as a function that is quick enough for a million trials.

use super::certified::Certified;
use super::light::Light;
use super::{Given, given};
use crate::bench::Bench;
use crate::bench::meter::CertificateForm;
use crate::fault::Faults;
use crate::physics::decibel::{db_from_ratio, dbm_from_watt, watt_from_dbm};
use crate::physics::spectrum::Spectrum;
use crate::questions::prepared::{CertificateDoubt, Prepared};
use crate::questions::spectral::Spectral;

/// What of the light may lie outside of the certificate in a trial without mattering.
const NEGLIGIBLE_SHARE: f64 = 1e-5;

/// ln 10/10: 1 dB as the logarithm of a power ratio.
const NEPER_PER_DECIBEL: f64 = core::f64::consts::LN_10 / 10.0;

/// Makes a number of the answer ready; other numbers than those of the power go through the whole question.
pub fn prepare(bench: &Bench, of: &'static str) -> Result<Prepared, Faults> {
    let given = given(bench)?;
    let model = Model::new(&given, bench);
    let certificate = doubt(&given, bench);
    let value: Box<dyn Fn(&Bench, &[f64]) -> Option<f64>> = match of {
        "power_w" => Box::new(move |bench, shares| model.power_w(bench, shares)),
        "power_dbm" => Box::new(move |bench, shares| Some(dbm_from_watt(model.power_w(bench, shares)?))),
        "ratio" => Box::new(move |bench, shares| model.ratio(bench, shares)),
        "ratio_db" => Box::new(move |bench, shares| Some(db_from_ratio(model.ratio(bench, shares)?))),
        "correction_factor" => Box::new(move |bench, shares| model.factor(bench, shares)),
        "correction_db" => Box::new(move |bench, shares| Some(db_from_ratio(model.factor(bench, shares)?))),
        _ => return Ok(Prepared::by_numbers(super::numbers, of)),
    };
    Ok(Prepared { certificate, value })
}

/// A meter and the shape of the light, both apart from the numbers of the bench.
struct Model {
    form: CertificateForm,
    values: Spectral,
    typical: Option<Spectral>,
    light: Shape,
    /// The reading on the bench, dBm, and its power, W: other readings are near, and a small step in dB is quicker taken
    /// than a whole level.
    reading: (f64, f64),
    /// The setting on the bench, nm, and what the meter has stored for it.
    stored: (f64, Option<f64>),
}

/// The shape of the light about its mean wavelength.
enum Shape {
    /// One wavelength; what a narrow line's width changes of the responsivity is a fixed factor.
    One { averaging: f64 },
    /// Many: distance from the mean, nm, and share. A Gaussian's grow with its width.
    Spread { centre_nm: f64, fwhm_nm: Option<f64>, parts: Vec<(f64, f64)> },
}

impl Model {
    fn new(given: &Given, bench: &Bench) -> Model {
        let mut model = Model {
            form: given.certified.certificate.form,
            values: given.certified.values.clone(),
            typical: given.certified.typical.clone(),
            light: Shape::of(given, bench),
            reading: (given.reading_dbm, watt_from_dbm(given.reading_dbm)),
            stored: (f64::NAN, None),
        };
        model.stored = (given.set_nm, model.stored_at(given.set_nm));
        model
    }

    /// The responsivity that the meter assumes at a setting: an exact number.
    fn stored_at(&self, set_nm: f64) -> Option<f64> {
        match (self.form, &self.typical) {
            _ if set_nm == self.stored.0 => self.stored.1,
            (CertificateForm::Responsivity, _) => self.values.at(set_nm),
            (CertificateForm::CorrectionFactor, Some(typical)) => typical.at(set_nm),
            (CertificateForm::CorrectionFactor, None) => None,
        }
    }

    fn power_w(&self, bench: &Bench, shares: &[f64]) -> Option<f64> {
        let meter = bench.meter.as_ref()?;
        let (near_dbm, near_w) = self.reading;
        let reading_w = near_w * libm::exp((meter.reading_dbm? - near_dbm) * NEPER_PER_DECIBEL);
        let shown_w = reading_w - meter.zero_offset_w.unwrap_or(0.0);
        Some(shown_w * self.factor(bench, shares)?)
    }

    /// The power of the reading over that of the one it is compared with; both errors are those of one meter.
    fn ratio(&self, bench: &Bench, shares: &[f64]) -> Option<f64> {
        let meter = bench.meter.as_ref()?;
        let comparison = meter.comparison.as_ref()?;
        let shown_w = watt_from_dbm(comparison.reading_dbm?) - meter.zero_offset_w.unwrap_or(0.0);
        let set_nm = comparison.set_wavelength_nm.or(meter.set_wavelength_nm)?;
        let factor = match comparison.wavelength_nm {
            Some(wavelength_nm) => self.factor_at(set_nm, wavelength_nm, scale(bench), shares)?,
            None => self.factor_of(bench, set_nm, shares)?,
        };
        let other_w = shown_w * factor;
        (other_w > 0.0).then_some(self.power_w(bench, shares)? / other_w)
    }

    fn factor(&self, bench: &Bench, shares: &[f64]) -> Option<f64> {
        self.factor_of(bench, bench.meter.as_ref()?.set_wavelength_nm?, shares)
    }

    /// The factor for the bench's own light.
    fn factor_of(&self, bench: &Bench, set_nm: f64, shares: &[f64]) -> Option<f64> {
        let source = bench.source.as_ref()?;
        match &self.light {
            Shape::One { averaging } => {
                Some(self.factor_at(set_nm, source.wavelength_nm?, scale(bench), shares)? / averaging)
            }
            Shape::Spread { centre_nm, fwhm_nm, parts } => {
                let moved_nm = fwhm_nm.and(source.wavelength_nm).unwrap_or(*centre_nm);
                let wider = fwhm_nm.zip(source.linewidth_nm).map_or(1.0, |(was, is)| is / was);
                let (mut mean, mut within) = (0.0, 0.0);
                for (offset_nm, share) in parts {
                    if let Some(a_per_w) =
                        self.responsivity(moved_nm + wider * offset_nm, scale(bench), shares)
                    {
                        mean += share * a_per_w;
                        within += share;
                    }
                }
                let set = self.stored_at(set_nm)?;
                (within > 1.0 - NEGLIGIBLE_SHARE && mean > 0.0).then(|| set * within / mean)
            }
        }
    }

    /// The factor for light of one wavelength.
    fn factor_at(&self, set_nm: f64, source_nm: f64, scale: f64, shares: &[f64]) -> Option<f64> {
        let truly = self.values.at_with(source_nm, shares)? * scale;
        let factor = match (self.form, &self.typical) {
            (CertificateForm::Responsivity, _) => self.stored_at(set_nm)? / truly,
            (CertificateForm::CorrectionFactor, _) if set_nm == source_nm => truly,
            (CertificateForm::CorrectionFactor, Some(typical)) => {
                self.stored_at(set_nm)? / typical.at(source_nm)? * truly
            }
            (CertificateForm::CorrectionFactor, None) => return None,
        };
        (factor > 0.0).then_some(factor)
    }

    fn responsivity(&self, wavelength_nm: f64, scale: f64, shares: &[f64]) -> Option<f64> {
        let truly = self.values.at_with(wavelength_nm, shares)? * scale;
        match (self.form, &self.typical) {
            (CertificateForm::Responsivity, _) => Some(truly),
            (CertificateForm::CorrectionFactor, Some(typical)) => Some(typical.at(wavelength_nm)? / truly),
            (CertificateForm::CorrectionFactor, None) => None,
        }
    }
}

fn scale(bench: &Bench) -> f64 {
    let certificate = bench.meter.as_ref().and_then(|meter| meter.certificate.as_ref());
    certificate.and_then(|certificate| certificate.scale).unwrap_or(1.0)
}

impl Shape {
    fn of(given: &Given, bench: &Bench) -> Shape {
        let (centre_nm, spectrum, shares) = match &given.light {
            Light::One(_) => return Shape::One { averaging: 1.0 },
            Light::Spread { centre_nm, spectrum, shares } => (*centre_nm, spectrum, shares),
        };
        let fwhm_nm = match spectrum {
            Spectrum::Gaussian { fwhm_nm, .. } => Some(*fwhm_nm),
            Spectrum::Table(_) => None,
        };
        let in_doubt = |uncertainty: &crate::bench::uncertainty::Uncertainty| {
            uncertainty.inputs.iter().any(|input| input.pointer == "/source/linewidth_nm")
        };
        let width_in_doubt = bench.uncertainty.as_ref().is_some_and(in_doubt);
        if fwhm_nm.is_some_and(|fwhm_nm| fwhm_nm <= super::light::NARROW_LINE_NM) && !width_in_doubt {
            let averaging = averaging(&given.certified, given.set_nm, &given.light, centre_nm);
            return Shape::One { averaging: averaging.unwrap_or(1.0) };
        }
        let parts = shares.iter().map(|part| (part.wavelength_nm - centre_nm, part.share)).collect();
        Shape::Spread { centre_nm, fwhm_nm, parts }
    }
}

/// Mean responsivity over that at the centre.
fn averaging(certified: &Certified, set_nm: f64, light: &Light, centre_nm: f64) -> Option<f64> {
    Some(certified.at(set_nm, centre_nm).ok()?.factor / certified.over(set_nm, light).ok()?.factor)
}

/// What the certificate states of its points around the light; nothing where one of them states nothing.
fn doubt(given: &Given, bench: &Bench) -> Option<CertificateDoubt> {
    let certified = &given.certified;
    let k = certified.certificate.coverage_factor?;
    let points = &certified.certificate.points;
    let mut places = match &given.light {
        Light::One(wavelength_nm) => vec![*wavelength_nm],
        Light::Spread { shares, .. } => shares.iter().map(|part| part.wavelength_nm).collect(),
    };
    let comparison = bench.meter.as_ref().and_then(|meter| meter.comparison.as_ref());
    places.extend(comparison.and_then(|comparison| comparison.wavelength_nm));
    let mut has_say = vec![false; points.len()];
    let mut needed = vec![false; points.len()];
    for place in places {
        for (index, weight) in certified.values.weights(place).unwrap_or_default() {
            needed[index] |= weight != 0.0;
            // The wavelength itself may be in doubt: neighbours come within reach.
            for near in index.saturating_sub(2)..(index + 3).min(points.len()) {
                has_say[near] = true;
            }
        }
    }
    let states = |index: usize| points[index].expanded_percent.map(|percent| percent / 100.0 / k);
    if (0..points.len()).any(|index| needed[index] && states(index).is_none()) {
        return None;
    }
    let relative_standard: Vec<(usize, f64)> = (0..points.len())
        .filter(|index| has_say[*index])
        .filter_map(|index| Some((index, states(index)?)))
        .collect();
    let correlation = certified.certificate.point_correlation.unwrap_or(1.0);
    (!relative_standard.is_empty()).then_some(CertificateDoubt {
        points: points.len(),
        relative_standard,
        correlation,
    })
}

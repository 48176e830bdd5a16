//! What a meter's certificate says of a wavelength: the factor from what it shows to what is there.

use crate::bench::Bench;
use crate::bench::detector::Responsivity;
use crate::bench::meter::{Certificate, CertificateForm, Meter};
use crate::fault::{Code, Fault};
use crate::physics::meter::{power_factor, power_factor_by_correction};
use crate::questions::spectral::Spectral;
use crate::tree::Tree;

/// The certificate as the subject of a sentence.
pub(super) const CERTIFICATE: &str = "The certificate";
/// The typical curve as the subject of a sentence.
pub(super) const TYPICAL: &str = "The typical responsivity curve";

/// The field that holds the wavelength of the light.
pub const SOURCE: &str = "/source/wavelength_nm";
/// The field that holds the wavelength to which the meter is set.
pub const SETTING: &str = "/meter/set_wavelength_nm";

/// A meter as its certificate describes it.
#[derive(Debug)]
pub struct Certified<'b> {
    pub(super) certificate: &'b Certificate,
    /// Through the values of the certificate.
    pub(super) values: Spectral,
    /// The typical responsivity of the head, where a certificate of correction factors needs one.
    pub(super) typical: Option<Spectral>,
    /// True over certified value.
    pub(super) scale: f64,
}

/// The factor from reading to power, and the responsivities behind it where they are known.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Found {
    /// True over shown power.
    pub factor: f64,
    /// The responsivity that the meter assumes at its setting, A/W.
    pub set_a_per_w: Option<f64>,
    /// The responsivity at the wavelength of the light, A/W.
    pub source_a_per_w: Option<f64>,
}

impl<'b> Certified<'b> {
    /// Makes the curves of a certificate.
    pub fn new(
        bench: &'b Bench,
        meter: &'b Meter,
        certificate: &'b Certificate,
    ) -> Result<Certified<'b>, Fault> {
        let wavelengths_nm: Vec<f64> = certificate.points.iter().map(|point| point.wavelength_nm).collect();
        let values: Vec<f64> = certificate.points.iter().map(|point| point.value).collect();
        let values = Spectral::new(&wavelengths_nm, &values).ok_or_else(|| {
            let sentence = "The certificate's points make no curve; each wavelength may stand once.";
            Fault::new("/meter/certificate/points", Code::Conflict, Tree::Null, sentence)
        })?;
        let on_detector = bench.detector.as_ref().and_then(|part| part.responsivity.as_ref());
        let table = match (&meter.typical_curve, on_detector) {
            (Some(points), _) => Some(points),
            (None, Some(Responsivity::Table { points })) => Some(points),
            _ => None,
        };
        let typical = match certificate.form {
            CertificateForm::Responsivity => None,
            CertificateForm::CorrectionFactor => table.and_then(|points| Spectral::responsivity(points)),
        };
        let scale = certificate.scale.unwrap_or(1.0);
        Ok(Certified { certificate, values, typical, scale })
    }

    /// True over shown power for light of one wavelength, the meter being set to another.
    pub fn at(&self, set_nm: f64, source_nm: f64) -> Result<Found, Fault> {
        // What the meter has stored for its setting is as certified; what is true of the light may have moved.
        let value = self.values.at_field(source_nm, SOURCE, CERTIFICATE).map(|value| value * self.scale);
        match (self.certificate.form, &self.typical) {
            (CertificateForm::Responsivity, _) => {
                let (set, source) = (self.values.at_field(set_nm, SETTING, CERTIFICATE)?, value?);
                let factor = power_factor(set, source);
                Ok(Found { factor, set_a_per_w: Some(set), source_a_per_w: Some(source) })
            }
            // At one wavelength the typical curve cancels, wherever it ends.
            (CertificateForm::CorrectionFactor, typical) if set_nm == source_nm => {
                let (correction, typical) = (value?, typical.as_ref().and_then(|typical| typical.at(set_nm)));
                let source_a_per_w = typical.map(|a_per_w| a_per_w / correction);
                Ok(Found { factor: correction, set_a_per_w: typical, source_a_per_w })
            }
            (CertificateForm::CorrectionFactor, Some(typical)) => {
                let correction = value?;
                let set = typical.at_field(set_nm, SETTING, TYPICAL)?;
                let source = typical.at_field(source_nm, SOURCE, TYPICAL)?;
                Ok(Found {
                    factor: power_factor_by_correction(set, source, correction),
                    set_a_per_w: Some(set),
                    source_a_per_w: Some(source / correction),
                })
            }
            (CertificateForm::CorrectionFactor, None) => Err(Fault::missing(
                "/detector/responsivity",
                "The meter is set to another wavelength than the source's, and correction factors hold for equal ones \
                 only: a typical responsivity curve is needed, as the meter's own or as the detector's table.",
            )),
        }
    }

    /// Relative standard uncertainty of the power from the certificate alone; nothing where it states none.
    ///
    /// The responsivity that the meter assumes at its setting is an exact number that turns the reading back into a
    /// current; only the value at the light's wavelength is in doubt. Its points' errors share the correlation r.
    pub fn relative_standard(&self, source_nm: f64) -> Option<f64> {
        let value = self.values.at(source_nm)?;
        let weights = self.values.weights(source_nm)?;
        self.combined(weights.into_iter().map(|(index, weight)| (index, weight / value)))
    }

    /// Combines the points' standard uncertainties, each times the relative change of the power by that point's value.
    pub(super) fn combined(&self, changes: impl Iterator<Item = (usize, f64)>) -> Option<f64> {
        let k = self.certificate.coverage_factor?;
        let r = self.certificate.point_correlation.unwrap_or(1.0);
        let (mut sum, mut squares) = (0.0, 0.0);
        for (index, change) in changes {
            let point = self.certificate.points.get(index)?;
            if change != 0.0 {
                let contribution = change * point.value * point.expanded_percent? / 100.0 / k;
                sum += contribution;
                squares += contribution * contribution;
            }
        }
        // Σᵢ Σⱼ rᵢⱼ uᵢ uⱼ with rᵢᵢ = 1 and rᵢⱼ = r.
        Some(((1.0 - r) * squares + r * sum * sum).max(0.0).sqrt())
    }

    /// Relative change of the power per nm of the light's wavelength.
    pub fn relative_slope_per_nm(&self, source_nm: f64) -> Option<f64> {
        let relative = |curve: &Spectral| Some(curve.slope(source_nm)? / curve.at(source_nm)?);
        match (self.certificate.form, &self.typical) {
            (CertificateForm::Responsivity, _) => Some(-relative(&self.values)?),
            (CertificateForm::CorrectionFactor, Some(typical)) => {
                Some(relative(&self.values)? - relative(typical)?)
            }
            (CertificateForm::CorrectionFactor, None) => None,
        }
    }

    /// The wavelengths of light for which this meter can be corrected, nm; nothing where only the set one can.
    pub fn range_nm(&self) -> Option<(f64, f64)> {
        let (first, last) = self.values.range_nm();
        let (low, high) = match (self.certificate.form, &self.typical) {
            (CertificateForm::Responsivity, _) => (first, last),
            (CertificateForm::CorrectionFactor, Some(typical)) => {
                let (low, high) = typical.range_nm();
                (first.max(low), last.min(high))
            }
            (CertificateForm::CorrectionFactor, None) => return None,
        };
        (low < high).then_some((low, high))
    }
}

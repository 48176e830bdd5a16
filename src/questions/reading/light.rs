//! Light that is spread over wavelengths, and what a certificate says of it.

use super::certified::{CERTIFICATE, Certified, Found, SETTING, SOURCE, TYPICAL};
use crate::bench::meter::CertificateForm;
use crate::bench::source::Source;
use crate::fault::{Allowed, Code, Fault};
use crate::physics::meter::power_factor;
use crate::physics::spectrum::{Share, Spectrum};
use crate::quantity::write::{brief, significant};
use crate::tree::Tree;

/// A Gaussian line of this width and below may be taken as one wavelength where a table ends within it or is needed
/// only for its width: certificates themselves are made with laser lines and do not say how wide (common practice), nm.
pub const NARROW_LINE_NM: f64 = 1.0;

/// What may lie outside of a certificate without mattering: less than the last digit of any certificate.
const NEGLIGIBLE_SHARE: f64 = 1e-6;

/// The light of a source.
#[derive(Debug, Clone, PartialEq)]
pub enum Light {
    /// One wavelength, nm.
    One(f64),
    /// Many.
    Spread {
        /// Its mean wavelength, nm.
        centre_nm: f64,
        /// Where it lies.
        spectrum: Spectrum,
        /// The same in parts, for averages.
        shares: Vec<Share>,
    },
}

impl Light {
    /// The light of a source as far as a certificate is concerned; `wavelength_nm` may be absent beside a tabulated
    /// spectrum only.
    pub fn of(source: &Source, wavelength_nm: Option<f64>, certified: &Certified) -> Result<Light, Fault> {
        let width_nm = source.linewidth_nm.filter(|width_nm| *width_nm > 0.0);
        let spectrum = match (&source.spectrum, wavelength_nm, width_nm) {
            (Some(table), ..) => Spectrum::Table(table.linear()),
            (None, Some(centre_nm), Some(fwhm_nm)) => Spectrum::Gaussian { centre_nm, fwhm_nm },
            (None, Some(centre_nm), None) => return Ok(Light::One(centre_nm)),
            (None, None, _) => {
                return Err(Fault::missing(SOURCE, "Needed for this answer: the source wavelength."));
            }
        };
        let narrow = match spectrum {
            Spectrum::Gaussian { centre_nm, fwhm_nm } if fwhm_nm <= NARROW_LINE_NM => Some(centre_nm),
            _ => None,
        };
        let Some((low, high)) = certified.reach_nm() else {
            return match narrow {
                Some(centre_nm) => Ok(Light::One(centre_nm)),
                None => Err(Fault::missing(
                    "/detector/responsivity",
                    "The light is spread over wavelengths, and a correction factor says nothing of the responsivity \
                     across them: a typical responsivity curve is needed, as the meter's own or as the detector's \
                     table.",
                )),
            };
        };
        let outside = spectrum.share_outside(low, high);
        if outside > NEGLIGIBLE_SHARE {
            return match (narrow, &spectrum) {
                (Some(centre_nm), _) => Ok(Light::One(centre_nm)),
                // A centre that lies outside is told as it is for a single wavelength.
                (None, Spectrum::Gaussian { centre_nm, .. }) if *centre_nm < low || *centre_nm > high => {
                    Ok(Light::One(*centre_nm))
                }
                (None, _) => Err(outside_fault(&spectrum, outside, (low, high), certified)),
            };
        }
        let shares = spectrum.shares(&certified.breaks_nm(), low, high);
        Ok(Light::Spread { centre_nm: spectrum.centroid_nm(), spectrum, shares })
    }

    /// The mean wavelength, nm.
    pub fn centre_nm(&self) -> f64 {
        match self {
            Light::One(wavelength_nm) => *wavelength_nm,
            Light::Spread { centre_nm, .. } => *centre_nm,
        }
    }
}

/// Says which part of the light no table knows.
fn outside_fault(spectrum: &Spectrum, outside: f64, (low, high): (f64, f64), certified: &Certified) -> Fault {
    let (first, last) = spectrum.window_nm();
    let nm = |nm: f64| brief(nm, 7);
    let tables = match certified.typical {
        Some(_) => "the certificate and the typical curve together reach",
        None => "the certificate reaches",
    };
    let (pointer, given, light) = match spectrum {
        Spectrum::Gaussian { fwhm_nm, .. } => {
            let light = format!("A line of {} nm, cut at three times its full width", brief(*fwhm_nm, 4));
            ("/source/linewidth_nm", Tree::Number(*fwhm_nm), light)
        }
        Spectrum::Table(_) => ("/source/spectrum", Tree::Null, "The spectrum".to_owned()),
    };
    let sentence = format!(
        "{light}, reaches from {} nm to {} nm; {} % of its light lies outside, for {tables} from {} nm to {} nm, and \
         nothing is guessed beyond a table.",
        nm(first),
        nm(last),
        significant(outside * 100.0, 2),
        nm(low),
        nm(high)
    )
    .replace("The spectrum, ", "The spectrum ");
    let allowed = Allowed::Between { min: Some(low), max: Some(high), unit: "nm".to_owned() };
    Fault { allowed: Some(allowed), ..Fault::new(pointer, Code::Range, given, &sentence) }
}

impl Certified<'_> {
    /// True over shown power for any light, the meter being set to a wavelength.
    ///
    /// ```text
    /// P / P_shown = R(λ_set) / R̄,   R̄ = ∫S R dλ / ∫S dλ,   with R = R_typ/C for correction factors
    /// ```
    pub fn over(&self, set_nm: f64, light: &Light) -> Result<Found, Fault> {
        let shares = match light {
            Light::One(wavelength_nm) => return self.at(set_nm, *wavelength_nm),
            Light::Spread { shares, .. } => shares,
        };
        let set = match (self.certificate.form, &self.typical) {
            (CertificateForm::CorrectionFactor, Some(typical)) => {
                typical.at_field(set_nm, SETTING, TYPICAL)?
            }
            _ => self.values.at_field(set_nm, SETTING, CERTIFICATE)?,
        };
        let mean = self.mean(shares).ok_or_else(|| {
            let sentence =
                "The average of the responsivity over the spectrum is no number that can be worked with.";
            Fault::new(SOURCE, Code::Conflict, Tree::Null, sentence)
        })?;
        let factor = power_factor(set, mean);
        Ok(Found { factor, set_a_per_w: Some(set), source_a_per_w: Some(mean) })
    }

    /// Relative standard uncertainty of the power from the certificate alone, for any light: the weights of the
    /// certificate's points go through the average as the value does.
    pub fn relative_standard_over(&self, light: &Light) -> Option<f64> {
        let shares = match light {
            Light::One(wavelength_nm) => return self.relative_standard(*wavelength_nm),
            Light::Spread { shares, .. } => shares,
        };
        let mean = self.mean(shares)?;
        let mut weights = vec![0.0; self.certificate.points.len()];
        for part in shares {
            // ∂R/∂v for the certified value v: its scale where it is R, −R/v where it divides.
            let by_value = match self.certificate.form {
                CertificateForm::Responsivity => self.scale,
                CertificateForm::CorrectionFactor => {
                    -self.responsivity(part.wavelength_nm)? / self.values.at(part.wavelength_nm)?
                }
            };
            for (index, weight) in self.values.weights(part.wavelength_nm)? {
                *weights.get_mut(index)? += part.share * by_value * weight / mean;
            }
        }
        self.combined(weights.into_iter().enumerate())
    }

    /// Relative change of the power if all of the light were 1 nm longer.
    pub fn relative_slope_per_nm_over(&self, light: &Light) -> Option<f64> {
        let shares = match light {
            Light::One(wavelength_nm) => return self.relative_slope_per_nm(*wavelength_nm),
            Light::Spread { shares, .. } => shares,
        };
        // P ~ 1/R̄, and the slope of R is minus R times the relative slope of the power at that wavelength.
        let change = |part: &Share| {
            Some(
                part.share
                    * self.responsivity(part.wavelength_nm)?
                    * self.relative_slope_per_nm(part.wavelength_nm)?,
            )
        };
        Some(shares.iter().map(change).sum::<Option<f64>>()? / self.mean(shares)?)
    }

    /// The responsivity at a wavelength, A/W: that of the certificate, or the typical one over the correction factor.
    pub fn responsivity(&self, wavelength_nm: f64) -> Option<f64> {
        let value = self.values.at(wavelength_nm)? * self.scale;
        match (self.certificate.form, &self.typical) {
            (CertificateForm::Responsivity, _) => Some(value),
            (CertificateForm::CorrectionFactor, Some(typical)) => Some(typical.at(wavelength_nm)? / value),
            (CertificateForm::CorrectionFactor, None) => None,
        }
    }

    fn mean(&self, shares: &[Share]) -> Option<f64> {
        let part = |part: &Share| Some(part.share * self.responsivity(part.wavelength_nm)?);
        shares.iter().map(part).sum::<Option<f64>>().filter(|mean| *mean > 0.0 && mean.is_finite())
    }

    /// The wavelengths at which a responsivity is known, nm; nothing where a typical curve is wanting.
    fn reach_nm(&self) -> Option<(f64, f64)> {
        let (first, last) = self.values.range_nm();
        match (self.certificate.form, &self.typical) {
            (CertificateForm::Responsivity, _) => Some((first, last)),
            (CertificateForm::CorrectionFactor, Some(typical)) => {
                let (low, high) = typical.range_nm();
                Some((first.max(low), last.min(high)))
            }
            (CertificateForm::CorrectionFactor, None) => None,
        }
    }

    /// Where the cubic pieces of the curves meet, nm.
    fn breaks_nm(&self) -> Vec<f64> {
        let mut breaks = self.values.places_nm();
        breaks.extend(self.typical.iter().flat_map(|typical| typical.places_nm()));
        breaks
    }
}

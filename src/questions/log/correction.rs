//! From what the meter showed to what was there, for each of its settings.

use super::options::{GivenUncertainty, LogOptions};
use crate::bench::Bench;
use crate::bench::meter::{Certificate, Meter};
use crate::fault::{Fault, Faults};
use crate::physics::decibel::db_from_ratio;
use crate::questions::needs::Needs;
use crate::questions::reading::certified::{Certified, SETTING, SOURCE};
use crate::questions::reading::light::Light;
use crate::record::{LogRow, SettingFrom};
use serde::Serialize;

/// Settings whose factors are kept; a log with more of them sweeps its setting.
const MOST_SETTINGS: usize = 256;

/// Where the setting of a row stands.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum Stated {
    /// In a column of the log.
    Column,
    /// In a line above the rows.
    AboveTheRows,
    /// On the bench.
    Bench,
}

/// A wavelength setting and what it makes of a reading.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Setting {
    /// The setting, nm.
    pub setting_nm: f64,
    /// On how many rows that show a power.
    pub rows: usize,
    /// True over shown power; absent where the certificate does not reach.
    pub correction_factor: Option<f64>,
    /// The same in dB, to be added to a reading in dBm.
    pub correction_db: Option<f64>,
    /// Why there is no factor.
    #[serde(skip)]
    fault: Option<Fault>,
}

/// How the rows were corrected.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct CorrectionReport {
    /// Mean wavelength of the light, nm.
    pub source_wavelength_nm: f64,
    /// Where the settings stand.
    pub setting_from: Stated,
    /// The settings, the first ones where there are very many.
    pub settings: Vec<Setting>,
    /// Relative expanded uncertainty of each corrected power, per cent; absent where nothing states it.
    pub expanded_percent: Option<f64>,
    /// The k of it.
    pub coverage_factor: Option<f64>,
    /// Whether it is the certificate's own; otherwise it was given from outside.
    pub uncertainty_is_the_certificates: bool,
}

/// What a row's setting makes of its reading.
pub(super) struct Applied {
    /// The setting, nm.
    pub(super) setting_nm: f64,
    /// True over shown power.
    pub(super) factor: f64,
    /// The same in dB.
    pub(super) correction_db: f64,
}

/// Corrects rows by the certificate on a bench.
pub(super) struct Correction {
    bench: Bench,
    light: Light,
    uncertainty: Option<GivenUncertainty>,
    is_given: bool,
    from_bench: bool,
    /// The settings so far; the last one that was used is tried first.
    settings: Vec<Setting>,
    last: usize,
    /// Whether a factor was found for any row.
    any: bool,
    stated: Stated,
}

impl Correction {
    /// Takes from the bench what a correction needs, or says what is missing.
    pub(super) fn new(options: &LogOptions) -> Result<Correction, Faults> {
        let bench = &options.bench;
        let mut needs = Needs::default();
        let meter =
            needs.part(&bench.meter, "/meter", "To correct a log, its meter is needed: the certificate.");
        let source =
            needs.part(&bench.source, "/source", "To correct a log, its source is needed: the wavelength.");
        let has_spectrum = source.is_some_and(|source| source.spectrum.is_some());
        let source_nm = match source {
            Some(source) if !has_spectrum => needs.number(source.wavelength_nm, SOURCE),
            other => other.and_then(|source| source.wavelength_nm),
        };
        let sentence = "To correct a log, the meter's certificate is needed: its values at wavelengths.";
        let certificate =
            meter.and_then(|meter| needs.part(&meter.certificate, "/meter/certificate", sentence));
        let certified = meter
            .zip(certificate)
            .and_then(|(meter, certificate)| needs.found(Certified::new(bench, meter, certificate)));
        let known = source.zip(certified.as_ref()).filter(|_| has_spectrum || source_nm.is_some());
        let light =
            known.and_then(|(source, certified)| needs.found(Light::of(source, source_nm, certified)));
        let certificates = certified.as_ref().zip(light.as_ref()).and_then(|(certified, light)| {
            Some(GivenUncertainty {
                relative_standard: certified.relative_standard_over(light)?,
                coverage_factor: certificate?.coverage_factor?,
            })
        });
        let light = needs.all(light)?;
        Ok(Correction {
            bench: bench.clone(),
            light,
            uncertainty: options.uncertainty.or(certificates),
            is_given: options.uncertainty.is_some(),
            from_bench: options.choices.setting == SettingFrom::Bench,
            settings: Vec::new(),
            last: 0,
            any: false,
            stated: Stated::Bench,
        })
    }

    /// The setting of a row: its own, else that of the whole log, else the bench's.
    pub(super) fn setting_nm(&mut self, row: &LogRow) -> Result<f64, String> {
        let of_log = || Some((row.stated_setting_nm()?, Stated::AboveTheRows));
        let on_bench = || Some((self.bench.meter.as_ref()?.set_wavelength_nm?, Stated::Bench));
        let found = match self.from_bench {
            true => on_bench(),
            false => row.setting_nm.map(|nm| (nm, Stated::Column)).or_else(of_log).or_else(on_bench),
        };
        let (setting_nm, stated) = found.ok_or_else(|| no_setting().sentence)?;
        self.stated = stated;
        Ok(setting_nm)
    }

    /// True over shown power at a setting.
    pub(super) fn factor(&mut self, setting_nm: f64) -> Result<Applied, &str> {
        let same = |known: &Setting| known.setting_nm == setting_nm;
        if !self.settings.get(self.last).is_some_and(same) {
            self.last = match self.settings.iter().position(same) {
                Some(at) => at,
                None => {
                    let setting = self.found(setting_nm);
                    // Beyond what is kept, the last place is used again and again.
                    if self.settings.len() > MOST_SETTINGS {
                        self.settings.pop();
                    }
                    self.settings.push(setting);
                    self.settings.len() - 1
                }
            };
        }
        let Some(setting) = self.settings.get_mut(self.last) else { return Err("") };
        setting.rows += 1;
        self.any |= setting.correction_factor.is_some();
        match (setting.correction_factor.zip(setting.correction_db), &setting.fault) {
            (Some((factor, correction_db)), _) => Ok(Applied { setting_nm, factor, correction_db }),
            (None, fault) => Err(fault.as_ref().map_or("", |fault| &fault.sentence)),
        }
    }

    fn found(&self, setting_nm: f64) -> Setting {
        let found =
            self.certified().map_or(Err(no_setting()), |certified| certified?.over(setting_nm, &self.light));
        let correction_factor = found.as_ref().ok().map(|found| found.factor);
        Setting {
            setting_nm,
            rows: 0,
            correction_factor,
            correction_db: correction_factor.map(db_from_ratio),
            fault: found.err(),
        }
    }

    fn certified(&self) -> Option<Result<Certified<'_>, Fault>> {
        let meter: &Meter = self.bench.meter.as_ref()?;
        let certificate: &Certificate = meter.certificate.as_ref()?;
        Some(Certified::new(&self.bench, meter, certificate))
    }

    /// Relative expanded uncertainty of a corrected power, with its k.
    pub(super) fn expanded(&self) -> Option<(f64, f64)> {
        self.uncertainty.map(|of| (of.relative_standard * of.coverage_factor, of.coverage_factor))
    }

    /// Mean wavelength of the light, nm.
    pub(super) fn source_nm(&self) -> f64 {
        self.light.centre_nm()
    }

    /// Whether the uncertainty was given from outside.
    pub(super) fn is_given(&self) -> bool {
        self.is_given
    }

    /// How the rows were corrected; where not one could be, the fault that all of them have.
    pub(super) fn report(self) -> Result<CorrectionReport, Faults> {
        let expanded = self.expanded();
        let source_wavelength_nm = self.source_nm();
        if !self.any {
            return Err(vec![
                self.settings.into_iter().find_map(|setting| setting.fault).unwrap_or_else(no_setting),
            ]);
        }
        Ok(CorrectionReport {
            source_wavelength_nm,
            setting_from: self.stated,
            settings: self.settings,
            expanded_percent: expanded.map(|(relative, _)| relative * 100.0),
            coverage_factor: expanded.map(|(_, k)| k),
            uncertainty_is_the_certificates: !self.is_given,
        })
    }
}

fn no_setting() -> Fault {
    Fault::missing(
        SETTING,
        "Needed: the wavelength to which the meter was set; neither the log nor the bench says it.",
    )
}

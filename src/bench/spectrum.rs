//! The spectrum of a source, as an analyser wrote it.

use super::field::Limits;
use super::points;
use super::reader::Reader;
use crate::fault::{Code, Fault};
use crate::physics::decibel::watt_from_dbm;
use crate::quantity::kind;
use crate::tree::Tree;
use serde::Serialize;

/// A spectrum: power per nm at wavelengths.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Spectrum {
    /// In which unit its values are.
    pub unit: SpectrumUnit,
    /// In rising order of wavelength, two at least.
    pub points: Vec<SpectrumPoint>,
}

/// A point of a spectrum.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct SpectrumPoint {
    /// Wavelength in vacuum, nm.
    pub wavelength_nm: f64,
    /// Power per nm there, in the spectrum's unit. Only the shape counts, so a constant factor does no harm: that of a
    /// resolution bandwidth, or of an arbitrary scale.
    pub value: f64,
}

/// The unit of a spectrum's values.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum SpectrumUnit {
    /// Linear.
    WPerNm,
    /// As a level, 0 being 1 mW per nm.
    DbmPerNm,
}

/// The limits of a linear value.
pub const LINEAR_LIMITS: Limits = Limits::between(0.0, 1e12);

/// The limits of a level.
pub const LEVEL_LIMITS: Limits = Limits::between(-250.0, 120.0);

impl SpectrumUnit {
    /// The units by the words that stand for them.
    pub const WORDS: &[(&'static str, SpectrumUnit)] =
        &[("w_per_nm", SpectrumUnit::WPerNm), ("dbm_per_nm", SpectrumUnit::DbmPerNm)];

    /// The word that stands for this unit.
    pub fn word(self) -> &'static str {
        match self {
            SpectrumUnit::WPerNm => "w_per_nm",
            SpectrumUnit::DbmPerNm => "dbm_per_nm",
        }
    }
}

impl Spectrum {
    /// Wavelength (nm) and power per nm (W/nm) of each point.
    pub fn linear(&self) -> Vec<(f64, f64)> {
        let linear = |point: &SpectrumPoint| match self.unit {
            SpectrumUnit::WPerNm => (point.wavelength_nm, point.value),
            SpectrumUnit::DbmPerNm => (point.wavelength_nm, watt_from_dbm(point.value)),
        };
        self.points.iter().map(linear).collect()
    }

    /// Reads a spectrum.
    pub fn read(tree: Option<&Tree>, reader: &mut Reader) -> Option<Spectrum> {
        const AT: &str = "/source/spectrum";
        let map = reader.part(tree, AT, &["unit", "points"])?;
        let at_unit = format!("{AT}/unit");
        // Linear or a level makes all the difference, so neither is assumed.
        if map.get("unit").is_none_or(Tree::is_null) {
            reader.missing(
                &at_unit,
                "A spectrum needs its unit: w_per_nm for linear values, dbm_per_nm for levels.",
            );
        }
        let unit = reader.word(map.get("unit"), &at_unit, SpectrumUnit::WORDS);
        let at_points = format!("{AT}/points");
        if map.get("points").is_none_or(Tree::is_null) {
            reader.missing(&at_points, "A spectrum needs its points: wavelength and power per nm.");
        }
        let unit = unit?;
        let (limits, kind) = match unit {
            SpectrumUnit::WPerNm => (&LINEAR_LIMITS, &kind::NUMBER),
            SpectrumUnit::DbmPerNm => (&LEVEL_LIMITS, &kind::NUMBER),
        };
        let keys = ["wavelength_nm", "value"];
        let mut points =
            points::read_rows(map.get("points"), &at_points, reader, &keys, |row, at, reader| {
                let wavelength_nm = points::wavelength(row, at, reader);
                let at_value = format!("{at}/value");
                if row.get("value").is_none_or(Tree::is_null) {
                    reader.missing(&at_value, "Each point needs a value: the power per nm.");
                }
                let value = reader.of_kind(row.get("value"), &at_value, "the power per nm", kind, limits);
                Some(SpectrumPoint { wavelength_nm: wavelength_nm?, value: value?.value })
            })?;
        points::sort_apart(&mut points, |point| point.wavelength_nm, &at_points, reader);
        let spectrum = Spectrum { unit, points };
        if spectrum.points.len() < 2 {
            reader
                .missing(&at_points, "A spectrum needs two points at least; a single wavelength needs none.");
            return None;
        }
        if spectrum.linear().iter().all(|(_, w_per_nm)| *w_per_nm == 0.0) {
            let sentence =
                "A spectrum must hold light: one of its values at least must be above 0; all are 0.";
            reader.faults.push(Fault::new(&at_points, Code::Range, Tree::Null, sentence));
            return None;
        }
        Some(spectrum)
    }
}

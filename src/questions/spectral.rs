//! A value that depends on wavelength, known at some: a responsivity table, a certificate.

use crate::bench::points::ResponsivityPoint;
use crate::fault::{Allowed, Code, Fault};
use crate::numeric::pchip::Pchip;
use crate::tree::Tree;

/// A curve through the points of a table; a table of one point is known there and nowhere else.
#[derive(Debug, Clone)]
pub enum Spectral {
    /// One point.
    Point {
        /// Where, nm.
        wavelength_nm: f64,
        /// What.
        value: f64,
    },
    /// Two and more.
    Curve(Pchip),
}

impl Spectral {
    /// A curve through points in rising order of wavelength; nothing where there are none.
    pub fn new(wavelengths_nm: &[f64], values: &[f64]) -> Option<Spectral> {
        match (wavelengths_nm, values) {
            ([wavelength_nm], [value]) => {
                Some(Spectral::Point { wavelength_nm: *wavelength_nm, value: *value })
            }
            _ => Pchip::new(wavelengths_nm, values).ok().map(Spectral::Curve),
        }
    }

    /// The curve of a responsivity table.
    pub fn responsivity(points: &[ResponsivityPoint]) -> Option<Spectral> {
        let wavelengths_nm: Vec<f64> = points.iter().map(|point| point.wavelength_nm).collect();
        let values: Vec<f64> = points.iter().map(|point| point.a_per_w).collect();
        Spectral::new(&wavelengths_nm, &values)
    }

    /// The value at a wavelength; nothing outside the table.
    pub fn at(&self, wavelength_nm: f64) -> Option<f64> {
        match self {
            Spectral::Point { wavelength_nm: known, value } => (wavelength_nm == *known).then_some(*value),
            Spectral::Curve(curve) => curve.value(wavelength_nm),
        }
    }

    /// The value at a wavelength if each point's were larger by a share of it; nothing outside the table.
    ///
    /// * `shares` – one a point
    pub fn at_with(&self, wavelength_nm: f64, shares: &[f64]) -> Option<f64> {
        match self {
            Spectral::Point { wavelength_nm: known, value } => {
                let share = shares.first().copied().unwrap_or(0.0);
                (wavelength_nm == *known).then_some(value * (1.0 + share))
            }
            Spectral::Curve(curve) => {
                let known = |index: usize| curve.y(index) * (1.0 + shares.get(index).copied().unwrap_or(0.0));
                curve.value_with(wavelength_nm, known)
            }
        }
    }

    /// The change of the value per nm; nothing outside the table, and nothing for a single point.
    pub fn slope(&self, wavelength_nm: f64) -> Option<f64> {
        match self {
            Spectral::Point { .. } => None,
            Spectral::Curve(curve) => curve.slope(wavelength_nm),
        }
    }

    /// How the value at a wavelength moves with each point of the table: (index, derivative).
    pub fn weights(&self, wavelength_nm: f64) -> Option<Vec<(usize, f64)>> {
        match self {
            Spectral::Point { wavelength_nm: known, .. } => (wavelength_nm == *known).then(|| vec![(0, 1.0)]),
            Spectral::Curve(curve) => curve.weights(wavelength_nm),
        }
    }

    /// The wavelengths of the table, nm.
    pub fn places_nm(&self) -> Vec<f64> {
        match self {
            Spectral::Point { wavelength_nm, .. } => vec![*wavelength_nm],
            Spectral::Curve(curve) => curve.places().collect(),
        }
    }

    /// The ends of the table, nm.
    pub fn range_nm(&self) -> (f64, f64) {
        match self {
            Spectral::Point { wavelength_nm, .. } => (*wavelength_nm, *wavelength_nm),
            Spectral::Curve(curve) => (curve.first(), curve.last()),
        }
    }

    /// The value at the wavelength of a field, or the fault that says how far the table reaches.
    pub fn at_field(&self, wavelength_nm: f64, pointer: &str, table: &str) -> Result<f64, Fault> {
        self.at(wavelength_nm).ok_or_else(|| {
            let (first, last) = self.range_nm();
            let reach = match first == last {
                true => format!("{table} knows {first} nm only"),
                false => format!("{table} reaches from {first} nm to {last} nm"),
            };
            let sentence =
                format!("{reach}; {wavelength_nm} nm lies outside, and nothing is guessed beyond a table.");
            let unit = "nm".to_owned();
            Fault {
                allowed: Some(Allowed::Between { min: Some(first), max: Some(last), unit }),
                ..Fault::new(pointer, Code::Range, Tree::Number(wavelength_nm), &sentence)
            }
        })
    }
}

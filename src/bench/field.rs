//! The table of the numbers on a bench: each stands here once, with its name, unit, limits and place.
//!
//! Checks, hints in the page, sweeps, searches and budgets all read these rows.

use super::Bench;
use crate::fault::Allowed;
use crate::quantity::kind::Kind;
use serde::Serialize;

/// One number on the bench.
#[derive(Debug)]
pub struct Field {
    /// Where it stands: `/detector/avalanche/gain`. Its identity everywhere.
    pub pointer: &'static str,
    /// What it is called in a sentence: "gain".
    pub name: &'static str,
    /// Its kind: unit and how it is typed and shown.
    pub kind: &'static Kind,
    /// What is allowed.
    pub limits: Limits,
    /// What is usual, for a hint.
    pub usual: &'static str,
    /// Where it is kept, when the part and the alternative that hold it are there.
    pub place: fn(&mut Bench) -> Option<&mut Option<f64>>,
}

/// The range of a number; an end is included unless it is open.
#[derive(Debug, Clone, Copy)]
pub struct Limits {
    min: f64,
    max: f64,
    min_open: bool,
    max_open: bool,
}

impl Limits {
    /// The greatest allowed value; infinite where there is none.
    pub const fn greatest(&self) -> f64 {
        self.max
    }

    /// Both ends included.
    pub const fn between(min: f64, max: f64) -> Limits {
        Limits { min, max, min_open: false, max_open: false }
    }

    /// The lower end excluded, the upper included.
    pub const fn above(min: f64, max: f64) -> Limits {
        Limits { min, max, min_open: true, max_open: false }
    }

    /// Both ends excluded.
    pub const fn inside(min: f64, max: f64) -> Limits {
        Limits { min, max, min_open: true, max_open: true }
    }

    /// Whether `value` is allowed; NaN never is.
    pub fn hold(&self, value: f64) -> bool {
        let low = if self.min_open { value > self.min } else { value >= self.min };
        let high = if self.max_open { value < self.max } else { value <= self.max };
        low && high
    }

    /// The ends, for a fault.
    pub fn allowed(&self, unit: &str) -> Allowed {
        Allowed::Between { min: Some(self.min), max: Some(self.max), unit: unit.to_owned() }
    }

    /// "must lie between 200 nm and 2500 nm", "must be above 0 and at most 1 A".
    pub fn sentence(&self, write: impl Fn(f64) -> String) -> String {
        let (min, max) = (write(self.min), write(self.max));
        match (self.min_open, self.max_open) {
            (false, false) => format!("must lie between {min} and {max}"),
            (true, false) => format!("must be above {min} and at most {max}"),
            (false, true) => format!("must be at least {min} and below {max}"),
            (true, true) => format!("must be above {min} and below {max}"),
        }
    }
}

/// All numbers of a bench, part by part in the order in which the light meets them.
pub fn fields() -> impl Iterator<Item = &'static Field> {
    [
        super::source::FIELDS,
        super::path::FIELDS,
        super::detector::FIELDS,
        super::avalanche::FIELDS,
        super::bias::FIELDS,
        super::amplifier::FIELDS,
        super::decision::FIELDS,
        super::meter::FIELDS,
        super::measurements::FIELDS,
        super::surroundings::FIELDS,
    ]
    .into_iter()
    .flatten()
}

/// The row of a pointer.
pub fn field(pointer: &str) -> Option<&'static Field> {
    fields().find(|field| field.pointer == pointer)
}

/// What a number stands for when it is absent, for those that then stand for one.
pub fn when_absent(pointer: &str) -> Option<f64> {
    const ABSENT: &[(&str, f64)] = &[
        ("/source/linewidth_nm", 0.0),
        ("/path/loss_db", 0.0),
        ("/detector/dark_current_bulk_a", 0.0),
        ("/detector/dark_current_surface_a", 0.0),
        ("/amplifier/noise/noise_figure_db", 0.0),
        ("/meter/zero_offset_w", 0.0),
        ("/meter/certificate/scale", 1.0),
        ("/surroundings/background_power_w", 0.0),
    ];
    ABSENT.iter().find(|(known, _)| *known == pointer).map(|(_, value)| *value)
}

/// A row as the outside sees it.
#[derive(Debug, Serialize)]
pub struct FieldRow {
    /// The pointer.
    pub pointer: &'static str,
    /// The name.
    pub name: &'static str,
    /// The unit in which the bench keeps it.
    pub unit: &'static str,
    /// The ends of its range.
    pub allowed: Allowed,
    /// What is usual.
    pub usual: &'static str,
}

impl From<&'static Field> for FieldRow {
    fn from(field: &'static Field) -> FieldRow {
        FieldRow {
            pointer: field.pointer,
            name: field.name,
            unit: field.kind.unit,
            allowed: field.limits.allowed(field.kind.unit),
            usual: field.usual,
        }
    }
}

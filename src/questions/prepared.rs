//! One number of an answer, made ready to be asked for again and again.

use super::Numbers;
use crate::bench::Bench;
use crate::fault::Faults;

/// One number of an answer as a function of a bench whose tables stay as they are.
pub struct Prepared {
    /// What the meter's certificate says of its own uncertainty, for a number that rests on it.
    pub certificate: Option<CertificateDoubt>,
    /// The number.
    pub value: NumberOf,
}

/// A number of an answer by the bench, and by the share by which each point of the certificate is truly larger than
/// certified; nothing where this bench has no such number.
pub type NumberOf = Box<dyn Fn(&Bench, &[f64]) -> Option<f64>>;

/// The uncertainty that a certificate states.
#[derive(Debug, Clone, PartialEq)]
pub struct CertificateDoubt {
    /// How many points the certificate has.
    pub points: usize,
    /// The points that have a say, by index, and the relative standard uncertainty of each.
    pub relative_standard: Vec<(usize, f64)>,
    /// Correlation between any two of them.
    pub correlation: f64,
}

impl Prepared {
    /// Any number of any question, through all of its numbers.
    pub fn by_numbers(numbers: fn(&Bench) -> Result<Numbers, Faults>, of: &'static str) -> Prepared {
        let value = move |bench: &Bench, _: &[f64]| {
            let numbers = numbers(bench).ok()?;
            numbers.into_iter().find(|(name, _)| *name == of)?.1.filter(|value| value.is_finite())
        };
        Prepared { certificate: None, value: Box::new(value) }
    }
}

/// The unit of a number of an answer, by its name.
pub fn unit_of(name: &str) -> &'static str {
    const UNITS: &[(&str, &str)] = &[
        ("_a_per_w", "A/W"),
        ("_percent_per_nm", "%/nm"),
        ("_percent", "%"),
        ("_dbm", "dBm"),
        ("_db", "dB"),
        ("_hz", "Hz"),
        ("_nm", "nm"),
        ("_ohm", "Ω"),
        ("_v_per_k", "V/K"),
        ("_per_v", "1/V"),
        ("_per_k", "1/K"),
        ("_w", "W"),
        ("_a", "A"),
        ("_v", "V"),
        ("_k", "K"),
    ];
    UNITS.iter().find(|(end, _)| name.ends_with(end)).map_or("", |(_, unit)| unit)
}

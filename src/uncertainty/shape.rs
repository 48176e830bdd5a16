//! How the values of an uncertain input are spread.

use crate::statistics::normal::standard_normal;
use core::f64::consts::PI;
use serde::Serialize;

/// A distribution, symmetric about the estimate.
///
/// Source of the standard deviations: JCGM 100:2008, 4.3.7 (rectangular), 4.3.9 (triangular), and JCGM 101:2008, 6.4.6
/// (arcsine).
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum Shape {
    /// Normal; Student's t where the degrees of freedom are few.
    Normal,
    /// All values between two ends equally likely.
    Rectangular,
    /// Likely in the middle, falling in straight lines to both ends.
    Triangular,
    /// Likely at both ends: something that swings between them, as a reflection or a polarisation does.
    Arcsine,
}

impl Shape {
    /// The shapes by the words that stand for them.
    pub const WORDS: &[(&'static str, Shape)] = &[
        ("normal", Shape::Normal),
        ("rectangular", Shape::Rectangular),
        ("triangular", Shape::Triangular),
        ("arcsine", Shape::Arcsine),
    ];

    /// The word that stands for this shape.
    pub fn word(self) -> &'static str {
        match self {
            Shape::Normal => "normal",
            Shape::Rectangular => "rectangular",
            Shape::Triangular => "triangular",
            Shape::Arcsine => "arcsine",
        }
    }

    /// Half-width over standard deviation; nothing for the normal distribution, which has no ends.
    ///
    /// ```text
    /// rectangular √3,   triangular √6,   arcsine √2
    /// ```
    pub fn half_width_factor(self) -> Option<f64> {
        match self {
            Shape::Normal => None,
            Shape::Rectangular => Some(3f64.sqrt()),
            Shape::Triangular => Some(6f64.sqrt()),
            Shape::Arcsine => Some(2f64.sqrt()),
        }
    }

    /// The value below which a share `uniform` of all values lies; mean 0 and standard deviation 1.
    ///
    /// * `uniform` – above 0 and below 1
    ///
    /// Source: JCGM 101:2008, 6.4.2 to 6.4.6.
    #[inline]
    pub fn deviate(self, uniform: f64) -> f64 {
        const ROOT_THREE: f64 = 1.732_050_807_568_877_2;
        const ROOT_SIX: f64 = 2.449_489_742_783_178;
        match self {
            Shape::Normal => standard_normal(uniform),
            Shape::Rectangular => ROOT_THREE * (2.0 * uniform - 1.0),
            Shape::Triangular if uniform < 0.5 => ROOT_SIX * ((2.0 * uniform).sqrt() - 1.0),
            Shape::Triangular => ROOT_SIX * (1.0 - (2.0 * (1.0 - uniform)).sqrt()),
            Shape::Arcsine => core::f64::consts::SQRT_2 * libm::sin(PI * (uniform - 0.5)),
        }
    }
}

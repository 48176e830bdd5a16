//! The excess noise of avalanche gain, by formula or as measured.

use super::avalanche::excess_noise_factor;
use crate::numeric::pchip::{Pchip, TableFault};

/// How the excess noise factor F hangs on the gain M.
#[derive(Clone, Debug)]
pub enum ExcessNoise {
    /// R. J. McIntyre's formula, see [`excess_noise_factor`].
    McIntyre {
        /// k, ≥ 0.
        ionisation_ratio: f64,
    },
    /// F = M^x: an approximation of common practice, within a few per cent over a decade of gain.
    Power {
        /// x, ≥ 0.
        exponent: f64,
    },
    /// As measured.
    Table(FactorTable),
}

impl ExcessNoise {
    /// F at a gain, 1 without gain.
    ///
    /// * `gain` – M, from 1 to [`ExcessNoise::reach`]
    pub fn factor(&self, gain: f64) -> f64 {
        debug_assert!(gain >= 1.0);
        match self {
            ExcessNoise::McIntyre { ionisation_ratio } => excess_noise_factor(gain, *ionisation_ratio),
            ExcessNoise::Power { exponent } => libm::pow(gain, *exponent),
            ExcessNoise::Table(table) => table.factor(gain),
        }
    }

    /// The highest gain at which F is known; infinite by formula.
    pub fn reach(&self) -> f64 {
        match self {
            ExcessNoise::Table(table) => table.reach,
            _ => f64::INFINITY,
        }
    }
}

/// A curve through measured factors.
///
/// Interpolated by [`Pchip`] in ln F against ln M, in which a power law is a straight line and McIntyre's formula a gentle
/// bend. The point M = 1, F = 1 belongs to every detector and is added where it is absent: without gain there is no excess
/// noise.
///
/// # Example
///
/// ```
/// use leastlight::physics::excess_noise::FactorTable;
///
/// let table = FactorTable::new(&[(10.0, 5.0), (20.0, 9.5)]).unwrap();
/// assert!((table.factor(10.0) - 5.0).abs() < 1e-12);
/// assert_eq!(table.factor(1.0), 1.0);
/// ```
#[derive(Clone, Debug)]
pub struct FactorTable {
    ln_factor: Pchip,
    reach: f64,
}

impl FactorTable {
    /// The curve through pairs of gain (≥ 1, rising) and factor (> 0); why there is none.
    pub fn new(points: &[(f64, f64)]) -> Result<FactorTable, TableFault> {
        let unity = points.first().is_none_or(|(gain, _)| *gain > 1.0).then_some((1.0, 1.0));
        let all = unity.into_iter().chain(points.iter().copied());
        let (x, y): (Vec<f64>, Vec<f64>) =
            all.map(|(gain, factor)| (libm::log(gain), libm::log(factor))).unzip();
        let reach = points.last().map_or(1.0, |(gain, _)| *gain);
        Ok(FactorTable { ln_factor: Pchip::new(&x, &y)?, reach })
    }

    /// F at a gain between 1 and the last of the table.
    pub fn factor(&self, gain: f64) -> f64 {
        debug_assert!(gain <= self.reach * (1.0 + 1e-9));
        // The logarithm of an end may round to just outside of it.
        let ln_gain = libm::log(gain).clamp(self.ln_factor.first(), self.ln_factor.last());
        libm::exp(self.ln_factor.value(ln_gain).unwrap_or(0.0))
    }
}

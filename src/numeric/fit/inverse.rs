//! What the slopes at a fit say of its parameters: how they vary together, and which are not told at all.

use super::least_squares::unit;
use super::orthogonal::{norm, orthogonal};

/// Directions that move the residuals less than this part of the one that moves them most, all parameters being scaled alike,
/// are not told by the measurements: their own rounding moves the residuals as much.
const LEAST: f64 = 1e-10;

/// Part of an untold direction from which on a parameter is untold.
const PART: f64 = 1e-3;

/// (JᵀJ)⁻¹ of the parameters that the measurements tell.
pub(super) struct Inverse {
    /// Zero in the rows and columns of the others.
    pub inverse: Vec<Vec<f64>>,
    /// Which of the free parameters can be changed without any residual moving.
    pub undetermined: Vec<bool>,
}

impl Inverse {
    /// From the slopes, a column a parameter, and the indices of the parameters that are free.
    pub(super) fn of(slopes: &[Vec<f64>], free: &[usize]) -> Inverse {
        let count = slopes.len();
        let scale: Vec<f64> = slopes.iter().map(|column| unit(norm(column))).collect();
        let scaled = |index: &usize| slopes[*index].iter().map(|slope| slope / scale[*index]).collect();
        let turned = orthogonal(free.iter().map(scaled).collect());
        let greatest = turned.singular.iter().copied().fold(0.0, f64::max);
        let mut inverse = vec![vec![0.0; count]; count];
        let mut undetermined = vec![false; count];
        for (vector, singular) in turned.turned.iter().zip(&turned.singular) {
            if *singular <= LEAST * greatest {
                for (index, part) in free.iter().zip(vector) {
                    undetermined[*index] |= part.abs() > PART;
                }
                continue;
            }
            for (row, a) in free.iter().zip(vector) {
                for (column, b) in free.iter().zip(vector) {
                    inverse[*row][*column] += (a / scale[*row] / singular) * (b / scale[*column] / singular);
                }
            }
        }
        for index in (0..count).filter(|index| undetermined[*index]) {
            inverse[index] = vec![0.0; count];
            inverse.iter_mut().for_each(|row| row[index] = 0.0);
        }
        Inverse { inverse, undetermined }
    }
}

//! What is uncertain: inputs, how they are spread, and how they hang together.

use super::shape::Shape;
use crate::numeric::cholesky::lower_triangle;

/// A quantity of which only the deviation from its estimate is unknown; that deviation has mean 0.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Input {
    /// Standard uncertainty u, ≥ 0.
    pub standard: f64,
    /// How deviations are spread.
    pub shape: Shape,
    /// Degrees of freedom ν of u, > 0, may be infinite.
    pub degrees_of_freedom: f64,
    /// The size over which the model is smooth in this input, > 0: the first step of differences.
    pub step: f64,
}

/// Correlation coefficients between inputs.
#[derive(Debug, Clone, PartialEq)]
pub struct Correlations {
    size: usize,
    /// The whole matrix, row by row.
    matrix: Vec<f64>,
    /// A lower triangle whose product with its transpose is the matrix.
    root: Vec<f64>,
}

impl Correlations {
    /// No correlation between `size` inputs.
    pub fn none(size: usize) -> Correlations {
        let identity: Vec<f64> =
            (0..size * size).map(|place| if place / size == place % size { 1.0 } else { 0.0 }).collect();
        Correlations { size, root: identity.clone(), matrix: identity }
    }

    /// Correlations r between pairs of `size` inputs, counted from 0; all others are 0. Nothing where a pair is not one
    /// of two different inputs, where r is not between −1 and 1, or where the pairs contradict each other.
    pub fn new(size: usize, pairs: &[(usize, usize, f64)]) -> Option<Correlations> {
        let mut all = Correlations::none(size);
        for &(i, j, r) in pairs {
            if i == j || i >= size || j >= size || !(-1.0..=1.0).contains(&r) {
                return None;
            }
            all.matrix[i * size + j] = r;
            all.matrix[j * size + i] = r;
        }
        all.root = lower_triangle(&all.matrix, size)?;
        Some(all)
    }

    /// Of how many inputs.
    pub fn size(&self) -> usize {
        self.size
    }

    /// Between two inputs.
    pub fn between(&self, i: usize, j: usize) -> f64 {
        self.matrix[i * self.size + j]
    }

    /// Whether any two inputs are correlated.
    pub fn any(&self) -> bool {
        (0..self.size).any(|i| self.is_correlated(i))
    }

    /// Whether an input is correlated with another.
    pub fn is_correlated(&self, i: usize) -> bool {
        (0..self.size).any(|j| i != j && self.between(i, j) != 0.0)
    }

    /// Row `i` of the lower triangle: by it and the rows before, independent standard normal values become correlated.
    pub(super) fn root_row(&self, i: usize) -> &[f64] {
        &self.root[i * self.size..=i * self.size + i]
    }
}

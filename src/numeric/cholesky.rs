//! A root of a matrix of correlations, so that independent values can be made dependent.

/// The lower triangle L with L Lᵀ = `matrix`, row by row; nothing where no such real L exists.
///
/// * `matrix` – symmetric, the rows one after the other, `size` × `size`; ones on the diagonal
///
/// A correlation of ±1 makes the matrix singular; the row then follows from those above it and its last entry is 0.
///
/// Source: A.-L. Cholesky's method, as in G. H. Golub, C. F. Van Loan, Matrix Computations, section 4.2.
///
/// # Example
///
/// ```
/// use leastlight::numeric::cholesky::lower_triangle;
///
/// let root = lower_triangle(&[1.0, 0.6, 0.6, 1.0], 2).unwrap();
/// assert_eq!(root[0], 1.0);
/// assert!((root[2] - 0.6).abs() < 1e-15 && (root[3] - 0.8).abs() < 1e-15);
/// assert!(lower_triangle(&[1.0, 1.0, 1.0, 1.0], 2).is_some());
/// ```
pub fn lower_triangle(matrix: &[f64], size: usize) -> Option<Vec<f64>> {
    debug_assert_eq!(matrix.len(), size * size);
    /// What roundings may leave of a pivot that is 0 in truth; the matrix has ones on its diagonal.
    const ROUNDINGS: f64 = 1e-12;
    let mut root = vec![0.0; size * size];
    for row in 0..size {
        for column in 0..=row {
            let known: f64 =
                (0..column).map(|inner| root[row * size + inner] * root[column * size + inner]).sum();
            let left = matrix[row * size + column] - known;
            root[row * size + column] = if row == column {
                if left < -ROUNDINGS {
                    return None;
                }
                if left > ROUNDINGS { left.sqrt() } else { 0.0 }
            } else if root[column * size + column] > 0.0 {
                left / root[column * size + column]
            } else if left.abs() > ROUNDINGS.sqrt() {
                // The column follows wholly from those before it, but this row does not agree with that.
                return None;
            } else {
                0.0
            };
        }
    }
    Some(root)
}

#[cfg(test)]
mod tests {
    use super::lower_triangle;

    #[test]
    fn correlations_that_contradict_each_other_have_no_root() {
        // a = b and b = c, but a and c are opposite.
        assert_eq!(lower_triangle(&[1.0, 1.0, -1.0, 1.0, 1.0, 1.0, -1.0, 1.0, 1.0], 3), None);
        // cos 60°, cos 60°, cos 180°: on the edge of what is possible would be cos 120°.
        assert_eq!(lower_triangle(&[1.0, 0.5, -0.6, 0.5, 1.0, 0.5, -0.6, 0.5, 1.0], 3), None);
        assert!(lower_triangle(&[1.0, 0.5, -0.5, 0.5, 1.0, 0.5, -0.5, 0.5, 1.0], 3).is_some());
    }
}

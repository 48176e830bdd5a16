//! The singular values of a slender matrix, by turning its columns until they are orthogonal.

/// Sweeps over all pairs of columns after which they are as orthogonal as doubles let them be. Convergence is quadratic;
/// seven columns need eight.
const MOST_SWEEPS: usize = 60;

/// A matrix A with the columns a₁ … aₙ as A V = W, the columns of V orthonormal and those of W orthogonal.
///
/// ```text
/// A = W Vᵀ,   singular values sᵢ = |wᵢ|
/// ```
pub(super) struct Orthogonal {
    /// w₁ … wₙ.
    pub columns: Vec<Vec<f64>>,
    /// v₁ … vₙ.
    pub turned: Vec<Vec<f64>>,
    /// s₁ … sₙ, in no order.
    pub singular: Vec<f64>,
}

/// Makes the columns of a matrix orthogonal by plane rotations.
///
/// Small singular values keep their relative accuracy, which those of AᵀA would lose.
///
/// Source: M. R. Hestenes, J. Soc. Indust. Appl. Math. 6, 51–90 (1958); the rotation in the form of H. Rutishauser,
/// Numer. Math. 9, 1–10 (1966).
pub(super) fn orthogonal(mut columns: Vec<Vec<f64>>) -> Orthogonal {
    let count = columns.len();
    let mut turned: Vec<Vec<f64>> = (0..count)
        .map(|column| (0..count).map(|row| if row == column { 1.0 } else { 0.0 }).collect())
        .collect();
    for _ in 0..MOST_SWEEPS {
        let mut done = true;
        for one in 0..count {
            for other in one + 1..count {
                let (a, b) = (dot(&columns[one], &columns[one]), dot(&columns[other], &columns[other]));
                let along = dot(&columns[one], &columns[other]);
                if along == 0.0 || along.abs() <= f64::EPSILON * (a * b).sqrt() {
                    continue;
                }
                done = false;
                let cotangent = (b - a) / (2.0 * along);
                let tangent = 1f64.copysign(cotangent) / (cotangent.abs() + libm::hypot(1.0, cotangent));
                let cosine = 1.0 / libm::hypot(1.0, tangent);
                rotate(&mut columns, one, other, cosine, tangent * cosine);
                rotate(&mut turned, one, other, cosine, tangent * cosine);
            }
        }
        if done {
            break;
        }
    }
    let singular = columns.iter().map(|column| norm(column)).collect();
    Orthogonal { columns, turned, singular }
}

fn rotate(columns: &mut [Vec<f64>], one: usize, other: usize, cosine: f64, sine: f64) {
    let (left, right) = columns.split_at_mut(other);
    for (x, y) in left[one].iter_mut().zip(&mut right[0]) {
        (*x, *y) = (cosine * *x - sine * *y, sine * *x + cosine * *y);
    }
}

/// The scalar product.
pub(super) fn dot(a: &[f64], b: &[f64]) -> f64 {
    a.iter().zip(b).map(|(a, b)| a * b).sum()
}

/// The length of a vector.
pub(super) fn norm(a: &[f64]) -> f64 {
    dot(a, a).sqrt()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_matrix_with_known_singular_values_gives_them() {
        // [[3, 0], [4, 5]] has √45 and √5 (G. Strang, Introduction to Linear Algebra, 4th ed., section 6.7, example 3).
        let found = orthogonal(vec![vec![3.0, 4.0], vec![0.0, 5.0]]);
        let mut singular = found.singular.clone();
        singular.sort_by(f64::total_cmp);
        assert!((singular[0] - 5f64.sqrt()).abs() < 1e-14 && (singular[1] - 45f64.sqrt()).abs() < 1e-14);
        // W Vᵀ is the matrix again.
        for (row, wanted) in [[3.0, 0.0], [4.0, 5.0]].iter().enumerate() {
            for (column, wanted) in wanted.iter().enumerate() {
                let sum: f64 = (0..2).map(|k| found.columns[k][row] * found.turned[k][column]).sum();
                assert!((sum - wanted).abs() < 1e-14);
            }
        }
    }

    #[test]
    fn dependent_columns_leave_a_singular_value_of_zero() {
        let found = orthogonal(vec![vec![1.0, 2.0, 2.0], vec![2.0, 4.0, 4.0]]);
        let least = found.singular.iter().copied().fold(f64::INFINITY, f64::min);
        assert!(least < 1e-15);
    }
}

//! Parameters of a formula from measurements: nonlinear least squares within bounds.

mod inverse;
mod least_squares;
mod orthogonal;
mod robust;

pub use least_squares::{Bounds, Fit, Linear, NoFit, fit, linear};
pub use robust::{HUBER, Robust, robust_fit};

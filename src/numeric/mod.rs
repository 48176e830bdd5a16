//! Mathematics that makes sense without units.

pub mod cholesky;
pub mod complex;
pub mod derivative;
pub mod dual;
pub mod fit;
pub mod gamma;
pub mod minimum;
pub mod pchip;
pub mod root;

//! Mathematics that makes sense without units.

pub mod cholesky;
pub mod derivative;
pub mod minimum;
pub mod pchip;
pub mod root;

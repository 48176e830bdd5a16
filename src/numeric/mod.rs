//! Mathematics that makes sense without units.

pub mod complex;
pub mod gamma;
pub mod minimum;
pub mod pchip;
pub mod root;

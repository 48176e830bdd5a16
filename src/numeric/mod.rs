//! Mathematics that makes sense without units.

pub mod minimum;
pub mod pchip;
pub mod root;

//! Mathematics that makes sense without units.

pub mod dual;
pub mod fit;
pub mod minimum;
pub mod pchip;
pub mod root;

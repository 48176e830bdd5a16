//! What the tests share: one comparison, and one runner for published values kept as data.

pub mod cases;
pub mod compare;

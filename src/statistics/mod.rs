//! Statements about chance.

pub mod fit;
pub mod normal;
pub mod student;
pub mod transfer;

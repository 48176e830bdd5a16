//! Statements about chance.

pub mod normal;
pub mod transfer;

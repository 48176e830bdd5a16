//! Statements about chance.

pub mod normal;
pub mod shape;
pub mod transfer;

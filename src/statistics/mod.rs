//! Statements about chance.

pub mod normal;

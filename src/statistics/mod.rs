//! Statements about chance.

pub mod normal;
pub mod running;
pub mod shape;
pub mod transfer;

//! Statements about chance.

pub mod fit;
pub mod normal;
pub mod running;
pub mod shape;
pub mod student;
pub mod transfer;

//! Text that a person typed, to a number and back: the only loose step in the program.
//!
//! A number crosses from text exactly: a prefix is appended to the digits as an exponent before they are
//! read, so `1550nm` is the very double nearest to 1550 nm and what a field shows can be read back bit by bit.

pub mod kind;
pub mod number;
pub mod read;
pub mod write;

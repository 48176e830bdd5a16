//! Answers for a fibre bench, each with what it is made of: how little light a receiver needs, and what a
//! power meter's reading is worth.
//!
//! A bench is described once ([`mod@bench`]); every question ([`questions`]) is a pure function of that bench;
//! the page, a script under Node and the tests all ask through one door ([`door`]).

pub mod bench;
pub mod door;
pub mod explore;
pub mod fault;
pub mod numeric;
pub mod physics;
pub mod quantity;
pub mod questions;
pub mod record;
pub mod statistics;
pub mod tree;
pub mod typed;
pub mod uncertainty;
#[cfg(target_arch = "wasm32")]
pub mod wasm;

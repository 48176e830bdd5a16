//! Any answer with its uncertainty: the budget of the GUM, and Monte Carlo beside it.
//!
//! `input`, `shape`, `gum` and `trials` know models and inputs only; `asked` makes a model of a question and of the
//! doubts that stand on its bench, and `shown` writes the result down.

pub mod gum;
pub mod input;
pub mod outcome;
pub mod shape;
pub mod trials;

//! Any answer with its uncertainty: the budget of the GUM, and Monte Carlo beside it.
//!
//! `input`, `gum`, `trials` and `outcome` know models and inputs only; `asked` makes a model of a question and of the
//! doubts that stand on its bench, and `shown` writes the result down.

pub mod asked;
mod doubts;
pub mod gum;
pub mod input;
pub mod outcome;
pub mod shown;
pub mod trials;

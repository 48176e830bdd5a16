//! What is wrong with an input, said where it is wrong.

use crate::tree::Tree;
use serde::Serialize;

/// One thing that is wrong, at one place.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Fault {
    /// Where: a JSON pointer into the bench or the options, such as `/detector/avalanche/gain`.
    pub pointer: String,
    /// What kind of fault.
    pub code: Code,
    /// What was given there; nothing where something is missing.
    pub given: Tree,
    /// What may stand there, where that can be said.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub allowed: Option<Allowed>,
    /// One plain sentence: what must be true, then what was given.
    pub sentence: String,
}

/// The kinds of fault.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum Code {
    /// Cannot be read as what belongs there.
    Unreadable,
    /// Read, but outside what is allowed.
    Range,
    /// At odds with another input.
    Conflict,
    /// Needed, but not there.
    Missing,
    /// A key that nothing reads: misspelt, given twice, or from somewhere else.
    UnknownField,
}

/// What may stand at a place.
#[derive(Debug, Clone, PartialEq, Serialize)]
#[serde(untagged)]
pub enum Allowed {
    /// A number between two ends; an end that is absent is open.
    Between {
        /// The least allowed value.
        min: Option<f64>,
        /// The greatest allowed value.
        max: Option<f64>,
        /// The unit of both.
        unit: String,
    },
    /// One of some words.
    OneOf(Vec<String>),
}

/// All the faults of one input; never empty when it stands for a failure.
pub type Faults = Vec<Fault>;

impl Fault {
    /// Something needed is not there.
    pub fn missing(pointer: &str, sentence: &str) -> Fault {
        Fault::new(pointer, Code::Missing, Tree::Null, sentence)
    }

    /// A fault without a list of what is allowed.
    pub fn new(pointer: &str, code: Code, given: Tree, sentence: &str) -> Fault {
        Fault { pointer: pointer.to_owned(), code, given, allowed: None, sentence: sentence.to_owned() }
    }
}

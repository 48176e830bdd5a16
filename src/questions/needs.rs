//! What a question needs of a bench: asks for all of it, and says at once what is not there.

use crate::bench::field::field;
use crate::fault::{Fault, Faults};

/// Collects what is missing.
#[derive(Debug, Default)]
pub struct Needs {
    /// What was found wrong so far.
    pub faults: Faults,
}

impl Needs {
    /// A part of the bench.
    pub fn part<'b, T>(&mut self, part: &'b Option<T>, pointer: &str, sentence: &str) -> Option<&'b T> {
        if part.is_none() {
            self.faults.push(Fault::missing(pointer, sentence));
        }
        part.as_ref()
    }

    /// A number of the field table.
    pub fn number(&mut self, value: Option<f64>, pointer: &str) -> Option<f64> {
        if value.is_none() {
            let name = field(pointer).map_or("a value", |field| field.name);
            self.faults.push(Fault::missing(pointer, &format!("Needed for this answer: {name}.")));
        }
        value
    }

    /// A value that is there, or a fault that says why not.
    pub fn found<T>(&mut self, value: Result<T, Fault>) -> Option<T> {
        value.map_err(|fault| self.faults.push(fault)).ok()
    }

    /// What was made of everything, if nothing was missing.
    pub fn all<T>(self, made: Option<T>) -> Result<T, Faults> {
        match made {
            Some(made) if self.faults.is_empty() => Ok(made),
            _ => Err(self.faults),
        }
    }
}

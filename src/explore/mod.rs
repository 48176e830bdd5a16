//! Asking any question again and again: over a range of one number, or until an answer is as wanted.

pub mod solve;
pub mod sweep;

use crate::bench::Bench;
use crate::bench::field::{Field, field, fields};
use crate::fault::{Allowed, Code, Fault, Faults};
use crate::questions::{Numbers, Question};
use crate::tree::Tree;

/// A number of the bench that is about to be varied.
struct Varied<'q> {
    bench: Bench,
    field: &'static Field,
    question: &'q Question,
}

impl Varied<'_> {
    /// Resolves a pointer to its place once; the trials then set a plain number.
    fn new<'q>(bench: &Bench, question: &'q Question, pointer: &Tree, at: &str) -> Result<Varied<'q>, Fault> {
        let known = match pointer {
            Tree::Text(text) => field(text),
            _ => None,
        };
        let Some(field) = known else {
            let all = fields().map(|field| field.pointer.to_owned()).collect();
            let sentence = "The number to vary must be one of the bench's fields.";
            return Err(Fault {
                allowed: Some(Allowed::OneOf(all)),
                ..Fault::new(at, Code::Range, pointer.clone(), sentence)
            });
        };
        let mut bench = bench.clone();
        if (field.place)(&mut bench).is_none() {
            let sentence = format!("This bench has no place for {}: its part is not there.", field.name);
            return Err(Fault::new(at, Code::Conflict, pointer.clone(), &sentence));
        }
        Ok(Varied { bench, field, question })
    }

    /// The question's numbers at a value.
    fn numbers_at(&mut self, value: f64) -> Result<Numbers, Faults> {
        if let Some(place) = (self.field.place)(&mut self.bench) {
            *place = Some(value);
        }
        (self.question.numbers)(&self.bench)
    }
}

//! The value of one number of the bench at which a number of the answer is as wanted.

use super::Varied;
use super::sweep::{inside, places, range};
use crate::bench::Bench;
use crate::bench::field::Limits;
use crate::bench::reader::Reader;
use crate::fault::{Allowed, Code, Fault, Faults};
use crate::numeric::root::root;
use crate::quantity::kind;
use crate::questions::Question;
use crate::tree::Tree;
use serde::Serialize;

/// What was found.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Solution {
    /// The number that was varied.
    pub pointer: &'static str,
    /// Its unit.
    pub unit: &'static str,
    /// The lowest value in the range at which the answer is as wanted; absent when there is none.
    pub value: Option<f64>,
    /// How often the answer passes the wanted value in the range, as far as the search could see.
    pub crossings: usize,
    /// Why there is no such value.
    pub none_because: Option<String>,
}

const AT: &str = "/options/solve";

/// Places at which the search looks for a change of side before it closes in.
const PLACES: usize = 129;

/// Finds the value that `options` ask for.
pub fn solve(bench: &Bench, question: &Question, options: &Tree) -> Result<Solution, Faults> {
    let mut reader = Reader::strict();
    let keys = ["pointer", "answer", "equals", "from", "to", "scale"];
    let map = reader.part(Some(options), AT, &keys).unwrap_or(&Tree::Null);
    let range = range(map, AT, &mut reader);
    let at_equals = format!("{AT}/equals");
    if map.get("equals").is_none_or(Tree::is_null) {
        reader.missing(&at_equals, "Needed: the value that the answer is to have.");
    }
    let limits = Limits::between(-1e300, 1e300);
    let equals = reader.of_kind(map.get("equals"), &at_equals, "the wanted value", &kind::NUMBER, &limits);
    let pointer = map.get("pointer").unwrap_or(&Tree::Null);
    let varied = Varied::new(bench, question, pointer, &format!("{AT}/pointer"));
    let (mut varied, range, wanted) = match (varied, range, equals) {
        (Ok(varied), Some(range), Some(equals)) if reader.faults.is_empty() => (varied, range, equals.value),
        (varied, ..) => {
            reader.faults.extend(varied.err());
            return Err(reader.faults);
        }
    };
    inside(&varied, &range, AT)?;
    let name = answer_name(&mut varied, map.get("answer").unwrap_or(&Tree::Null), range.from)?;
    let mut excess = |value: f64| -> Option<f64> {
        let numbers = varied.numbers_at(value).ok()?;
        let (_, number) = numbers.into_iter().find(|(known, _)| *known == name)?;
        Some(number? - wanted)
    };
    let seen: Vec<(f64, Option<f64>)> = places(&range, PLACES).map(|value| (value, excess(value))).collect();
    let brackets: Vec<(f64, f64)> = seen
        .windows(2)
        .filter_map(|pair| match pair {
            // A place that hits the value belongs to the step that ends there, but for the very first.
            [(low, Some(a)), (high, Some(b))] if (a * b < 0.0) || *b == 0.0 => Some((*low, *high)),
            [(low, Some(a)), (high, _)] if *a == 0.0 && *low == range.from => Some((*low, *high)),
            _ => None,
        })
        .collect();
    let value = brackets
        .first()
        .and_then(|(low, high)| root(|value| excess(value).unwrap_or(f64::NAN), *low, *high, 1e-13).ok());
    let none_because = value.is_none().then(|| none_because(&seen, wanted, name));
    let (pointer, unit) = (varied.field.pointer, varied.field.kind.unit);
    Ok(Solution { pointer, unit, value, crossings: brackets.len(), none_because })
}

/// The name of the answer's number, checked against those that the question has.
fn answer_name(varied: &mut Varied, given: &Tree, from: f64) -> Result<&'static str, Faults> {
    let numbers = varied.numbers_at(from)?;
    let found = numbers.iter().find(|(name, _)| *given == Tree::from(*name));
    found.map(|(name, _)| *name).ok_or_else(|| {
        let names = numbers.iter().map(|(name, _)| (*name).to_owned()).collect();
        let sentence = "The wanted number must be one of the answer's.";
        vec![Fault {
            allowed: Some(Allowed::OneOf(names)),
            ..Fault::new(&format!("{AT}/answer"), Code::Range, given.clone(), sentence)
        }]
    })
}

fn none_because(seen: &[(f64, Option<f64>)], wanted: f64, name: &str) -> String {
    let values = seen.iter().filter_map(|(_, excess)| excess.map(|excess| excess + wanted));
    let (low, high) = values
        .fold((f64::INFINITY, f64::NEG_INFINITY), |(low, high), value| (low.min(value), high.max(value)));
    match low > high {
        true => format!("{name} does not exist anywhere in this range"),
        false => format!("{name} stays between {low} and {high} in this range, and {wanted} is wanted"),
    }
}

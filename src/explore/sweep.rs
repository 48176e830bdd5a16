//! A question asked over a range of one number.

use super::Varied;
use crate::bench::Bench;
use crate::bench::field::Limits;
use crate::bench::reader::Reader;
use crate::fault::{Code, Fault, Faults};
use crate::quantity::kind;
use crate::questions::Question;
use crate::questions::curve::evenly;
use crate::tree::Tree;
use serde::Serialize;
use std::collections::BTreeMap;

/// What came out: for each number of the answer as many values as places.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Sweep {
    /// The number that was varied.
    pub pointer: &'static str,
    /// Its unit.
    pub unit: &'static str,
    /// Its values.
    pub x: Vec<f64>,
    /// The answer's numbers at each; nothing where there is no such number.
    pub answers: BTreeMap<&'static str, Vec<Option<f64>>>,
}

const AT: &str = "/options/sweep";

/// Most points of a sweep: as many as a drawing can show.
const MOST_POINTS: f64 = 10_000.0;

/// A checked range.
pub(super) struct Range {
    pub from: f64,
    pub to: f64,
    pub log: bool,
}

/// Asks `question` at each place of the range that `options` describe.
pub fn sweep(bench: &Bench, question: &Question, options: &Tree) -> Result<Sweep, Faults> {
    let mut reader = Reader::strict();
    let keys = ["pointer", "from", "to", "points", "scale"];
    let map = reader.part(Some(options), AT, &keys).unwrap_or(&Tree::Null);
    let range = range(map, AT, &mut reader);
    let limits = Limits::between(2.0, MOST_POINTS);
    let points = map.get("points").filter(|points| !points.is_null());
    let at_points = format!("{AT}/points");
    let count = match points {
        None => Some(101.0),
        given => {
            let count = reader.of_kind(given, &at_points, "the count of points", &kind::NUMBER, &limits);
            count.map(|count| count.value)
        }
    };
    let varied =
        Varied::new(bench, question, map.get("pointer").unwrap_or(&Tree::Null), &format!("{AT}/pointer"));
    let (mut varied, range, count) = match (varied, range, count) {
        (Ok(varied), Some(range), Some(count)) if reader.faults.is_empty() => (varied, range, count),
        (varied, ..) => {
            reader.faults.extend(varied.err());
            return Err(reader.faults);
        }
    };
    inside(&varied, &range, AT)?;
    let x: Vec<f64> = places(&range, count as usize).collect();
    let mut answers: BTreeMap<&'static str, Vec<Option<f64>>> = BTreeMap::new();
    for (index, value) in x.iter().enumerate() {
        // A place where the question has no answer (a wavelength outside a table) is a gap, not a failure.
        for (name, number) in varied.numbers_at(*value).unwrap_or_default() {
            let column = answers.entry(name).or_default();
            column.resize(index, None);
            column.push(number);
        }
    }
    for column in answers.values_mut() {
        column.resize(x.len(), None);
    }
    Ok(Sweep { pointer: varied.field.pointer, unit: varied.field.kind.unit, x, answers })
}

/// Reads `from`, `to` and `scale`.
pub(super) fn range(map: &Tree, at: &str, reader: &mut Reader) -> Option<Range> {
    let limits = Limits::between(-1e300, 1e300);
    let mut end = |key: &str, name: &str| {
        let pointer = format!("{at}/{key}");
        if map.get(key).is_none_or(Tree::is_null) {
            reader.missing(&pointer, &format!("Needed: {name}."));
        }
        reader.of_kind(map.get(key), &pointer, name, &kind::NUMBER, &limits).map(|end| end.value)
    };
    let (from, to) = (end("from", "the lower end of the range"), end("to", "the upper end of the range"));
    let log = reader.word(map.get("scale"), &format!("{at}/scale"), &[("linear", false), ("log", true)]);
    let (from, to, log) = (from?, to?, log?);
    let fault = |key: &str, value: f64, sentence: &str| {
        Fault::new(&format!("{at}/{key}"), Code::Conflict, Tree::Number(value), sentence)
    };
    if from >= to {
        reader.faults.push(fault("to", to, "The upper end of the range must lie above the lower end."));
        return None;
    }
    if log && from <= 0.0 {
        reader.faults.push(fault("from", from, "A range divided by factors must begin above 0."));
        return None;
    }
    Some(Range { from, to, log })
}

/// Both ends must be values that the bench allows.
pub(super) fn inside(varied: &Varied, range: &Range, at: &str) -> Result<(), Faults> {
    let (limits, kind) = (&varied.field.limits, varied.field.kind);
    let ends = [("from", range.from), ("to", range.to)];
    let faults: Faults = ends
        .into_iter()
        .filter(|(_, value)| !limits.hold(*value))
        .map(|(key, value)| Fault {
            allowed: Some(limits.allowed(kind.unit)),
            ..Fault::new(
                &format!("{at}/{key}"),
                Code::Range,
                Tree::Number(value),
                &format!(
                    "The range of {} {}.",
                    varied.field.name,
                    limits.sentence(|value| crate::quantity::write::exact(value, kind))
                ),
            )
        })
        .collect();
    if faults.is_empty() { Ok(()) } else { Err(faults) }
}

/// The places of a range, both ends included to the bit.
pub(super) fn places(range: &Range, count: usize) -> impl Iterator<Item = f64> {
    let (from, to, log) = (range.from, range.to, range.log);
    let last = count.saturating_sub(1);
    evenly(0.0, 1.0, count).enumerate().map(move |(index, part)| match (index, log) {
        (0, _) => from,
        (index, _) if index == last => to,
        (_, false) => from + (to - from) * part,
        (_, true) => from * libm::exp(part * libm::log(to / from)),
    })
}

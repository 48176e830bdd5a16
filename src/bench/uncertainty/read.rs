//! Reads doubts, as a script states them or as a person types them.

use super::{Amount, MonteCarlo, USUAL_COVERAGE, UncertainInput, Uncertainty};
use crate::bench::field::{Field, Limits, field, fields};
use crate::bench::reader::Reader;
use crate::fault::{Allowed, Code, Fault};
use crate::quantity::kind::{self, Kind};
use crate::quantity::number::DecimalMark;
use crate::statistics::shape::Shape;
use crate::tree::Tree;

/// A stated amount that is smaller or larger is a slip.
const AMOUNT_LIMITS: Limits = Limits::between(0.0, 1e15);

impl Uncertainty {
    /// Reads the doubts at a pointer.
    pub fn read(tree: Option<&Tree>, at: &str, reader: &mut Reader) -> Option<Uncertainty> {
        let keys = ["of", "inputs", "correlations", "coverage_probability", "monte_carlo"];
        let map = reader.part(tree, at, &keys)?;
        let of = reader.text(map.get("of"), &format!("{at}/of"));
        let inputs = inputs(map.get("inputs"), &format!("{at}/inputs"), reader);
        let count = map.get("inputs").map_or(0, |inputs| match inputs {
            Tree::List(items) => items.len(),
            _ => 0,
        });
        let correlations =
            correlations(map.get("correlations"), &format!("{at}/correlations"), count, reader);
        let coverage = reader.of_kind(
            map.get("coverage_probability"),
            &format!("{at}/coverage_probability"),
            "the coverage probability",
            &kind::FRACTION,
            &Limits::between(0.5, 0.9999),
        );
        Some(Uncertainty {
            of: (!of.is_empty()).then_some(of),
            inputs,
            correlations,
            coverage_probability: coverage.map_or(USUAL_COVERAGE, |coverage| coverage.value),
            monte_carlo: monte_carlo(map.get("monte_carlo"), &format!("{at}/monte_carlo"), reader),
        })
    }
}

fn monte_carlo(tree: Option<&Tree>, at: &str, reader: &mut Reader) -> Option<MonteCarlo> {
    let map = reader.part(tree, at, &["trials", "seed", "adaptive"])?;
    let mut whole = |key: &str, name: &str, limits: &Limits| {
        let pointer = format!("{at}/{key}");
        let value = reader.of_kind(map.get(key), &pointer, name, &kind::NUMBER, limits)?.value;
        if value.fract() != 0.0 {
            let sentence = format!("{} must be a whole number; {value} was given.", capital(name));
            reader.faults.push(Fault::new(&pointer, Code::Range, Tree::Number(value), &sentence));
        }
        Some(value)
    };
    let trials = whole("trials", "the count of trials", &Limits::between(100.0, 1e7));
    // Above 2^53 not every whole number is a double, so a seed would not survive a file.
    let seed = whole("seed", "the seed", &Limits::between(0.0, 9_007_199_254_740_991.0));
    Some(MonteCarlo {
        trials: trials.map_or(MonteCarlo::USUAL.trials, |trials| trials as usize),
        seed: seed.map_or(MonteCarlo::USUAL.seed, |seed| seed as u64),
        adaptive: reader.flag(map.get("adaptive"), &format!("{at}/adaptive")),
    })
}

fn inputs(tree: Option<&Tree>, at: &str, reader: &mut Reader) -> Vec<UncertainInput> {
    let items = reader.list(tree, at).unwrap_or_default();
    let read = |(index, item): (usize, &Tree)| input(item, &format!("{at}/{index}"), reader);
    items.iter().enumerate().filter_map(read).collect()
}

fn input(tree: &Tree, at: &str, reader: &mut Reader) -> Option<UncertainInput> {
    let keys = [
        "pointer",
        "name",
        "standard",
        "expanded",
        "coverage_factor",
        "half_width",
        "readings",
        "distribution",
        "relative",
        "decibel",
        "times",
        "degrees_of_freedom",
    ];
    let map = reader.part(Some(tree), at, &keys)?;
    let number = |key: &str, name: &str, limits: Limits, reader: &mut Reader| {
        reader.of_kind(map.get(key), &format!("{at}/{key}"), name, &kind::NUMBER, &limits)
    };
    let row = known_field(map.get("pointer"), &format!("{at}/pointer"), reader);
    let name = reader.text(map.get("name"), &format!("{at}/name"));
    let coverage_factor =
        number("coverage_factor", "the coverage factor k", Limits::between(1.0, 10.0), reader);
    let times = number("times", "the count of times", Limits::above(0.0, 1e6), reader);
    let freedom = number("degrees_of_freedom", "the degrees of freedom", Limits::between(1.0, 1e12), reader);
    let (relative, decibel) = (
        reader.flag(map.get("relative"), &format!("{at}/relative")),
        reader.flag(map.get("decibel"), &format!("{at}/decibel")),
    );
    if relative && decibel {
        let sentence = "A doubt is a share of the value or in dB, not both.";
        reader.faults.push(Fault::new(&format!("{at}/decibel"), Code::Conflict, Tree::Bool(true), sentence));
    }
    let row = row?;
    let Stated { amount, scale } = stated(map, at, row, coverage_factor.map(|k| k.value), reader)?;
    let usual = match amount {
        Amount::HalfWidth { .. } => Shape::Rectangular,
        _ => Shape::Normal,
    };
    let at_distribution = format!("{at}/distribution");
    let distribution = match map.get("distribution") {
        None | Some(Tree::Null) => usual,
        given => reader.word(given, &at_distribution, Shape::WORDS).unwrap_or(usual),
    };
    if matches!(amount, Amount::HalfWidth { .. }) && distribution == Shape::Normal {
        let sentence = "A normal distribution has no ends, so no half-width; give the standard uncertainty, or choose \
                        a distribution that has.";
        let given = Tree::from("normal");
        reader.faults.push(Fault::new(&at_distribution, Code::Conflict, given, sentence));
    }
    Some(UncertainInput {
        pointer: row.pointer.to_owned(),
        name,
        amount,
        distribution,
        relative: relative || scale == Scale::Relative,
        decibel: decibel || scale == Scale::Decibel,
        times: times.map(|times| times.value),
        degrees_of_freedom: freedom.map(|freedom| freedom.value),
    })
}

fn known_field(tree: Option<&Tree>, at: &str, reader: &mut Reader) -> Option<&'static Field> {
    match tree {
        None | Some(Tree::Null) => {
            reader.missing(at, "Which number is in doubt is needed, by its pointer.");
            None
        }
        Some(Tree::Text(text)) if field(text).is_some() => field(text),
        Some(other) => {
            let all = fields().map(|field| field.pointer.to_owned()).collect();
            let sentence = "A doubt must concern one of the bench's numbers.";
            let fault = Fault::new(at, Code::Range, other.clone(), sentence);
            reader.faults.push(Fault { allowed: Some(Allowed::OneOf(all)), ..fault });
            None
        }
    }
}

/// In what an amount was typed.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Scale {
    /// The unit of the number.
    Own,
    /// Per cent of the value.
    Relative,
    /// Decibel.
    Decibel,
}

struct Stated {
    amount: Amount,
    scale: Scale,
}

/// The one amount that is stated.
fn stated(map: &Tree, at: &str, row: &Field, k: Option<f64>, reader: &mut Reader) -> Option<Stated> {
    let keys = ["standard", "expanded", "half_width", "readings"];
    let given: Vec<&str> = keys.into_iter().filter(|key| !is_absent(map.get(key), reader)).collect();
    let [key] = given.as_slice() else {
        let sentence = match given.is_empty() {
            true => format!("The doubt of {} needs an amount: one of {}.", row.name, keys.join(", ")),
            false => format!(
                "The doubt of {} is stated in several ways, {}; one is enough.",
                row.name,
                given.join(", ")
            ),
        };
        let pointer = if given.is_empty() { at.to_owned() } else { format!("{at}/{}", given[1]) };
        let code = if given.is_empty() { Code::Missing } else { Code::Conflict };
        reader.faults.push(Fault::new(&pointer, code, Tree::Null, &sentence));
        return None;
    };
    let pointer = format!("{at}/{key}");
    let tree = map.get(key);
    if *key == "readings" {
        let readings = readings(tree, &pointer, row, reader)?;
        return Some(Stated { amount: Amount::Readings { readings }, scale: Scale::Own });
    }
    let (value, scale) = amount(tree, &pointer, row, reader)?;
    let amount = match *key {
        "standard" => Amount::Standard { standard: value },
        "half_width" => Amount::HalfWidth { half_width: value },
        _ => match k {
            Some(coverage_factor) => Amount::Expanded { expanded: value, coverage_factor },
            None => {
                let sentence = "The coverage factor k is needed to know what an expanded uncertainty means.";
                reader.missing(&format!("{at}/coverage_factor"), sentence);
                return None;
            }
        },
    };
    Some(Stated { amount, scale })
}

fn is_absent(tree: Option<&Tree>, reader: &Reader) -> bool {
    match tree {
        None | Some(Tree::Null) => true,
        Some(Tree::Text(text)) => reader.mark().is_some() && text.trim().is_empty(),
        _ => false,
    }
}

/// An amount; typed, its unit may be that of the number, per cent or dB.
fn amount(tree: Option<&Tree>, pointer: &str, row: &Field, reader: &mut Reader) -> Option<(f64, Scale)> {
    let own = kind::difference(row.kind);
    let (kind, scale): (&'static Kind, Scale) = match tree {
        Some(Tree::Text(text)) if reader.mark().is_some() => match text.trim() {
            text if text.ends_with('%') && own.unit != "%" => (&kind::FRACTION, Scale::Relative),
            text if text.ends_with("dB") && own.unit != "dB" => (&kind::DECIBEL, Scale::Decibel),
            _ => (own, Scale::Own),
        },
        _ => (own, Scale::Own),
    };
    let name = format!("the doubt of {}", row.name);
    Some((reader.of_kind(tree, pointer, &name, kind, &AMOUNT_LIMITS)?.value, scale))
}

/// Repeated readings; typed, they are parted by lines, semicolons, tabs or, where there is no unit, by spaces.
fn readings(tree: Option<&Tree>, pointer: &str, row: &Field, reader: &mut Reader) -> Option<Vec<f64>> {
    let split: Vec<Tree>;
    let (items, from_text) = match tree {
        Some(Tree::Text(text)) if reader.mark().is_some() => {
            split = parted(text, reader.mark()).into_iter().map(Tree::from).collect();
            (split.as_slice(), true)
        }
        other => (reader.list(other, pointer)?, false),
    };
    let mut values = Vec::with_capacity(items.len());
    for (index, item) in items.iter().enumerate() {
        let at = if from_text { pointer.to_owned() } else { format!("{pointer}/{index}") };
        let number = reader.of_kind(Some(item), &at, "a repeated reading", row.kind, &row.limits);
        values.push(number?.value);
    }
    if from_text {
        reader.understand_as(pointer, format!("{} readings", values.len()));
    }
    if values.len() < 2 {
        let sentence = "Two readings at least are needed, or nothing is known of their scatter.";
        let given = Tree::Number(values.len() as f64);
        reader.faults.push(Fault::new(pointer, Code::Range, given, sentence));
        return None;
    }
    Some(values)
}

fn parted(text: &str, mark: Option<DecimalMark>) -> Vec<&str> {
    let parts = |by: &[char]| -> Vec<&str> {
        text.split(by).map(str::trim).filter(|part| !part.is_empty()).collect()
    };
    let lines = parts(&['\n', '\r', ';', '\t']);
    // A space parts numbers only where no unit stands behind one; "−20.1 dBm" is one reading.
    let letters = text.chars().any(|c| c.is_alphabetic() && !matches!(c, 'e' | 'E'));
    match (lines.len(), letters) {
        (0 | 1, false) if mark == Some(DecimalMark::Point) => parts(&[' ', ',']),
        (0 | 1, false) => parts(&[' ']),
        _ => lines,
    }
}

fn correlations(
    tree: Option<&Tree>,
    at: &str,
    count: usize,
    reader: &mut Reader,
) -> Vec<(usize, usize, f64)> {
    let rows = reader.list(tree, at).unwrap_or_default().to_vec();
    let mut pairs = Vec::with_capacity(rows.len());
    for (index, row) in rows.iter().enumerate() {
        let at = format!("{at}/{index}");
        let Tree::List(cells) = row else {
            let sentence = "A correlation is a list of three: first input, second input, coefficient.";
            reader.faults.push(Fault::new(&at, Code::Unreadable, row.clone(), sentence));
            continue;
        };
        if cells.len() != 3 {
            let sentence = "A correlation is a list of three: first input, second input, coefficient.";
            reader.faults.push(Fault::new(&at, Code::Unreadable, row.clone(), sentence));
            continue;
        }
        let last = count.saturating_sub(1) as f64;
        let mut number = |place: usize, name: &str, limits: Limits| {
            let pointer = format!("{at}/{place}");
            Some(reader.of_kind(cells.get(place), &pointer, name, &kind::NUMBER, &limits)?.value)
        };
        let first = number(0, "the first input of a correlation", Limits::between(0.0, last));
        let second = number(1, "the second input of a correlation", Limits::between(0.0, last));
        let r = number(2, "the correlation coefficient", Limits::between(-1.0, 1.0));
        let (Some(first), Some(second), Some(r)) = (first, second, r) else { continue };
        if first == second || first.fract() != 0.0 || second.fract() != 0.0 {
            let sentence = "A correlation must be one of two different inputs, counted from 0.";
            reader.faults.push(Fault::new(&at, Code::Conflict, row.clone(), sentence));
            continue;
        }
        pairs.push((first as usize, second as usize, r));
    }
    pairs
}

fn capital(name: &str) -> String {
    let mut chars = name.chars();
    chars.next().map_or_else(String::new, |first| first.to_uppercase().chain(chars).collect())
}

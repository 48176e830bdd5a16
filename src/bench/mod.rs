//! What stands on the bench: one part a file, in the order in which the light meets them.
//!
//! Every number is optional, as on a real bench that is half set up. Which ones a question needs, the
//! question says. Field names end in the unit; the step to SI happens once, where a question reads the bench.

pub mod amplifier;
pub mod avalanche;
pub mod bias;
pub mod decision;
pub mod detector;
pub mod field;
pub mod measurements;
pub mod meter;
pub mod path;
pub mod points;
pub mod reader;
pub mod source;
pub mod spectrum;
pub mod surroundings;
pub mod uncertainty;

use crate::fault::{Code, Fault, Faults};
use crate::tree::Tree;
use amplifier::Amplifier;
use decision::Decision;
use detector::Detector;
use measurements::Measurements;
use meter::Meter;
use path::Path;
use reader::Reader;
use serde::Serialize;
use source::Source;
use surroundings::Surroundings;
use uncertainty::Uncertainty;

/// The format of a bench file.
pub const SCHEMA: &str = "leastlight.bench/1";

/// A bench: what a person sees on the table.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Bench {
    /// [`SCHEMA`].
    pub schema: &'static str,
    /// What the person calls it.
    pub title: String,
    /// The light.
    pub source: Option<Source>,
    /// What lies between the source and the detector.
    pub path: Option<Path>,
    /// The photodiode.
    pub detector: Option<Detector>,
    /// What follows the photodiode.
    pub amplifier: Option<Amplifier>,
    /// How ones and zeros are told apart.
    pub decision: Option<Decision>,
    /// The power meter and its certificate.
    pub meter: Option<Meter>,
    /// What was measured on the detector.
    pub measurements: Option<Measurements>,
    /// What is around.
    pub surroundings: Option<Surroundings>,
    /// How well the numbers are known.
    pub uncertainty: Option<Uncertainty>,
}

impl Bench {
    /// A bench with nothing on it.
    pub fn empty() -> Bench {
        Bench {
            schema: SCHEMA,
            title: String::new(),
            source: None,
            path: None,
            detector: None,
            amplifier: None,
            decision: None,
            meter: None,
            measurements: None,
            surroundings: None,
            uncertainty: None,
        }
    }

    /// Checks a tree and makes a bench of it. All faults come at once.
    pub fn from_tree(tree: &Tree) -> Result<Bench, Faults> {
        let mut reader = Reader::strict();
        let bench = Bench::read(tree, &mut reader);
        if reader.faults.is_empty() { Ok(bench) } else { Err(reader.faults) }
    }

    /// Reads what is right of a tree; the reader keeps what is wrong.
    pub fn read(tree: &Tree, reader: &mut Reader) -> Bench {
        let keys = [
            "schema",
            "title",
            "source",
            "path",
            "detector",
            "amplifier",
            "decision",
            "meter",
            "measurements",
            "gate",
            "surroundings",
            "uncertainty",
        ];
        let Some(map) = reader.part(Some(tree), "", &keys) else {
            if reader.faults.is_empty() && reader.mark().is_none() {
                reader.missing("", "A bench is needed: an object with the parts of the bench.");
            }
            return Bench::empty();
        };
        check_schema(map, reader);
        reader.refuse(map.get("gate"), "/gate", "No question uses a gate; leave it null.");
        Bench {
            schema: SCHEMA,
            title: reader.text(map.get("title"), "/title"),
            source: Source::read(map.get("source"), reader),
            path: Path::read(map.get("path"), reader),
            detector: Detector::read(map.get("detector"), reader),
            amplifier: Amplifier::read(map.get("amplifier"), reader),
            decision: Decision::read(map.get("decision"), reader),
            meter: Meter::read(map.get("meter"), reader),
            measurements: Measurements::read(map.get("measurements"), reader),
            surroundings: Surroundings::read(map.get("surroundings"), reader),
            uncertainty: Uncertainty::read(map.get("uncertainty"), "/uncertainty", reader),
        }
    }
}

/// A file of another format, or of a later one, is not guessed at.
fn check_schema(map: &Tree, reader: &mut Reader) {
    match map.get("schema") {
        None | Some(Tree::Null) => {}
        Some(Tree::Text(text)) if text == SCHEMA => {}
        Some(other) => {
            let shown = match other {
                Tree::Text(text) => format!("“{text}”"),
                _ => "something else".to_owned(),
            };
            let sentence = format!("This program reads benches of the format “{SCHEMA}”; {shown} was given.");
            reader.faults.push(Fault::new("/schema", Code::Range, other.clone(), &sentence));
        }
    }
}

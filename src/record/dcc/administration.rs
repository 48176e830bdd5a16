//! What a digital certificate says beside its numbers. None of it is invented: what is missing is asked for.

use super::xml::is_writable;
use crate::bench::field::Limits;
use crate::bench::reader::Reader;
use crate::fault::{Code, Fault, Faults};
use crate::quantity::kind;
use crate::record::date::is_date;
use crate::tree::Tree;

/// Who calibrated what for whom, when and how.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Administration {
    pub(super) unique_identifier: String,
    pub(super) language: String,
    pub(super) begin_date: String,
    pub(super) end_date: String,
    pub(super) issue_date: String,
    pub(super) location: &'static str,
    pub(super) laboratory: Contact,
    pub(super) customer: Contact,
    pub(super) responsible_person: String,
    pub(super) item: Item,
    pub(super) method: String,
    pub(super) coverage_probability: Option<f64>,
    pub(super) temperature_c: Option<f64>,
    pub(super) reference: Option<Reference>,
    /// Sentences about where the numbers come from.
    pub(super) history: Vec<String>,
}

/// Somebody with an address.
#[derive(Debug, Clone, PartialEq, Default)]
pub(super) struct Contact {
    pub(super) name: String,
    pub(super) country: String,
    pub(super) city: String,
}

/// What was calibrated.
#[derive(Debug, Clone, PartialEq, Default)]
pub(super) struct Item {
    pub(super) name: String,
    pub(super) manufacturer: String,
    pub(super) model: String,
    pub(super) identification: String,
    pub(super) identified_by: &'static str,
}

/// What it was calibrated with.
#[derive(Debug, Clone, PartialEq, Default)]
pub(super) struct Reference {
    pub(super) name: String,
    pub(super) certificate: String,
}

const AT: &str = "/administration";

const KEYS: &[&str] = &[
    "unique_identifier",
    "language",
    "begin_date",
    "end_date",
    "issue_date",
    "location",
    "laboratory",
    "customer",
    "responsible_person",
    "item",
    "method",
    "coverage_probability",
    "temperature_c",
    "reference",
    "history",
];

/// Where a calibration can take place, in the schema's words.
const LOCATIONS: &[(&str, &str)] = &[
    ("laboratory", "laboratory"),
    ("customer", "customer"),
    ("laboratoryBranch", "laboratoryBranch"),
    ("customerBranch", "customerBranch"),
    ("other", "other"),
];

/// Who gave an item its number, in the schema's words.
const ISSUERS: &[(&str, &str)] = &[
    ("other", "other"),
    ("manufacturer", "manufacturer"),
    ("calibrationLaboratory", "calibrationLaboratory"),
    ("customer", "customer"),
    ("owner", "owner"),
];

impl Administration {
    /// Reads what a person gave; all faults at once.
    pub(super) fn read(
        tree: &Tree,
        has_uncertainties: bool,
        mut reader: Reader,
    ) -> Result<Administration, Faults> {
        let nothing = Tree::Map(Vec::new());
        let tree = if tree.is_null() { &nothing } else { tree };
        let map = reader.part(Some(tree), AT, KEYS).unwrap_or(&Tree::Null);
        let mut given = Given { reader: &mut reader };
        let administration = Administration {
            unique_identifier: given.needed(map, AT, "unique_identifier", "the number of the certificate"),
            language: given.code(
                map,
                AT,
                "language",
                "the language, two small letters such as en",
                char::is_ascii_lowercase,
            ),
            begin_date: given.date(map, "begin_date", true),
            end_date: given.date(map, "end_date", true),
            issue_date: given.date(map, "issue_date", false),
            location: given.word(map, "location", LOCATIONS),
            laboratory: given.contact(map, "laboratory", "the calibration laboratory"),
            customer: given.contact(map, "customer", "the customer"),
            responsible_person: given.needed(map, AT, "responsible_person", "the person who is responsible"),
            item: given.item(map),
            method: given.needed(map, AT, "method", "the method, in a sentence"),
            coverage_probability: given.probability(map, has_uncertainties),
            temperature_c: given.temperature(map),
            reference: given.reference(map),
            history: given.history(map),
        };
        let dated = is_date(&administration.begin_date) && is_date(&administration.end_date);
        if dated && administration.begin_date > administration.end_date {
            let sentence = format!(
                "The end must not come before the beginning; it began on {} and ended on {}.",
                administration.begin_date, administration.end_date
            );
            let end = administration.end_date.as_str().into();
            reader.faults.push(Fault::new(&format!("{AT}/end_date"), Code::Conflict, end, &sentence));
        }
        if reader.faults.is_empty() { Ok(administration) } else { Err(reader.faults) }
    }
}

/// Takes entries and notes what is wrong with them.
struct Given<'r> {
    reader: &'r mut Reader,
}

impl Given<'_> {
    /// A text on one line, as XML can hold it; empty where there is none.
    fn text(&mut self, map: &Tree, at: &str, key: &str) -> String {
        let pointer = format!("{at}/{key}");
        let text = self.reader.text(map.get(key), &pointer);
        if !is_writable(&text) {
            let sentence = "The text holds control characters, which no XML file can hold.";
            self.reader.faults.push(Fault::new(&pointer, Code::Unreadable, text.as_str().into(), sentence));
        }
        text.split_whitespace().collect::<Vec<_>>().join(" ")
    }

    fn needed(&mut self, map: &Tree, at: &str, key: &str, what: &str) -> String {
        let before = self.reader.faults.len();
        let text = self.text(map, at, key);
        if text.is_empty() && self.reader.faults.len() == before {
            self.reader
                .missing(&format!("{at}/{key}"), &format!("Needed for a digital certificate: {what}."));
        }
        text
    }

    /// A code of two letters.
    fn code(&mut self, map: &Tree, at: &str, key: &str, what: &str, letter: fn(&char) -> bool) -> String {
        let text = self.needed(map, at, key, what);
        let good = text.chars().count() == 2 && text.chars().all(|c| letter(&c));
        if !text.is_empty() && !good {
            let sentence = format!("This must be {what}; “{text}” was given.");
            let pointer = format!("{at}/{key}");
            self.reader.faults.push(Fault::new(&pointer, Code::Range, text.as_str().into(), &sentence));
        }
        text
    }

    fn date(&mut self, map: &Tree, key: &str, needed: bool) -> String {
        let what = "a date, written as 2026-11-30";
        let text = if needed { self.needed(map, AT, key, what) } else { self.text(map, AT, key) };
        if !text.is_empty() && !is_date(&text) {
            let sentence = format!("This must be {what}; “{text}” was given.");
            let pointer = format!("{AT}/{key}");
            self.reader.faults.push(Fault::new(&pointer, Code::Unreadable, text.as_str().into(), &sentence));
        }
        text
    }

    fn word(&mut self, map: &Tree, key: &str, words: &[(&'static str, &'static str)]) -> &'static str {
        let pointer = format!("{AT}/{key}");
        if map.get(key).is_none_or(Tree::is_null) {
            self.reader.missing(&pointer, &format!("Needed for a digital certificate: the {key}."));
            return "";
        }
        self.reader.word(map.get(key), &pointer, words).unwrap_or_default()
    }

    fn contact(&mut self, map: &Tree, key: &str, what: &str) -> Contact {
        let at = format!("{AT}/{key}");
        let nothing = Tree::Map(Vec::new());
        let inside = self.reader.part(map.get(key), &at, &["name", "country", "city"]).unwrap_or(&nothing);
        let country = format!("the country of {what}, two capital letters such as CH");
        Contact {
            name: self.needed(inside, &at, "name", &format!("the name of {what}")),
            country: self.code(inside, &at, "country", &country, char::is_ascii_uppercase),
            city: self.text(inside, &at, "city"),
        }
    }

    fn item(&mut self, map: &Tree) -> Item {
        let at = format!("{AT}/item");
        let keys = ["name", "manufacturer", "model", "identification", "identified_by"];
        let nothing = Tree::Map(Vec::new());
        let inside = self.reader.part(map.get("item"), &at, &keys).unwrap_or(&nothing);
        Item {
            name: self.needed(inside, &at, "name", "what was calibrated"),
            manufacturer: self.text(inside, &at, "manufacturer"),
            model: self.text(inside, &at, "model"),
            identification: self.needed(inside, &at, "identification", "its serial number"),
            identified_by: self
                .reader
                .word(inside.get("identified_by"), &format!("{at}/identified_by"), ISSUERS)
                .unwrap_or_default(),
        }
    }

    fn probability(&mut self, map: &Tree, needed: bool) -> Option<f64> {
        let at = format!("{AT}/coverage_probability");
        let given = map.get("coverage_probability");
        let is_blank = given.is_none_or(|given| match given {
            Tree::Text(text) => self.reader.mark().is_some() && text.trim().is_empty(),
            other => other.is_null(),
        });
        if needed && is_blank {
            self.reader.missing(
                &at,
                "Needed beside uncertainties: the coverage probability, such as 0.9545 for k = 2.",
            );
        }
        let limits = Limits::inside(0.0, 1.0);
        let name = "the coverage probability";
        self.reader.of_kind(given, &at, name, &kind::FRACTION, &limits).map(|number| number.value)
    }

    fn temperature(&mut self, map: &Tree) -> Option<f64> {
        let at = format!("{AT}/temperature_c");
        let limits = Limits::between(-100.0, 200.0);
        let given = map.get("temperature_c");
        self.reader
            .of_kind(given, &at, "the temperature", &kind::TEMPERATURE_C, &limits)
            .map(|number| number.value)
    }

    fn reference(&mut self, map: &Tree) -> Option<Reference> {
        let at = format!("{AT}/reference");
        let inside = self.reader.part(map.get("reference"), &at, &["name", "certificate"])?;
        Some(Reference {
            name: self.needed(inside, &at, "name", "what the reference is"),
            certificate: self.needed(inside, &at, "certificate", "the number of its certificate"),
        })
    }

    fn history(&mut self, map: &Tree) -> Vec<String> {
        let at = format!("{AT}/history");
        let items = self.reader.list(map.get("history"), &at).unwrap_or_default();
        let entry = |(index, item): (usize, &Tree)| {
            let one = Tree::Map(vec![(index.to_string(), item.clone())]);
            self.text(&one, &at, &index.to_string())
        };
        items.iter().enumerate().map(entry).filter(|line| !line.is_empty()).collect()
    }
}

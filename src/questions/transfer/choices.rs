//! What a person says about a calibration beside its readings.

use crate::bench::field::Limits;
use crate::bench::reader::Reader;
use crate::fault::{Code, Fault};
use crate::quantity::kind::{self, Kind};
use crate::record::{Choices, is_date};
use crate::statistics::transfer::Uncertain;
use crate::tree::Tree;
use serde::Serialize;

/// Everything that the readings do not say.
#[derive(Debug, Clone, PartialEq)]
pub struct TransferChoices {
    /// How the table is to be read.
    pub table: Choices,
    /// The label of the reference in the table.
    pub reference: Option<String>,
    /// When the readings were taken, `2026-11-30`.
    pub date: String,
    /// The number of the reference's certificate.
    pub reference_certificate: String,
    /// What the reference is.
    pub reference_device: String,
    /// What the detector under test is.
    pub test_device: String,
    /// What U is to cover.
    pub coverage_probability: f64,
    /// Degrees of freedom of the reference's uncertainty; nothing means infinite.
    pub reference_degrees_of_freedom: Option<f64>,
    /// Further standard uncertainties.
    pub contributions: Vec<Contribution>,
}

/// A further standard uncertainty of every correction factor.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Contribution {
    /// What contributes: "connectors".
    pub name: String,
    /// Standard uncertainty, per cent of the factor.
    pub standard_percent: f64,
    /// Its degrees of freedom; nothing means infinite.
    pub degrees_of_freedom: Option<f64>,
}

impl Contribution {
    /// Relative, not per cent.
    pub(super) fn uncertain(&self) -> Uncertain {
        let degrees_of_freedom = self.degrees_of_freedom.unwrap_or(f64::INFINITY);
        Uncertain { standard: self.standard_percent / 100.0, degrees_of_freedom }
    }
}

/// The coverage probability where none is chosen.
const USUAL_PROBABILITY: f64 = 0.95;

const KEYS: [&str; 9] = [
    "table",
    "reference",
    "date",
    "reference_certificate",
    "reference_device",
    "test_device",
    "coverage_probability",
    "reference_degrees_of_freedom",
    "contributions",
];

impl TransferChoices {
    /// Reads choices; what is wrong or missing is left with the reader.
    pub fn read(tree: &Tree, pointer: &str, reader: &mut Reader) -> TransferChoices {
        let map = reader.part(Some(tree), pointer, &KEYS).unwrap_or(&Tree::Null);
        let table = map.get("table").unwrap_or(&Tree::Null);
        let table = Choices::from_tree(table, &format!("{pointer}/table"));
        let table = table.map_err(|found| reader.faults.extend(found)).unwrap_or_default();
        let mut text = |key: &str| reader.text(map.get(key), &format!("{pointer}/{key}")).trim().to_owned();
        let (reference, date) = (text("reference"), text("date"));
        let (certificate, device, test) =
            (text("reference_certificate"), text("reference_device"), text("test_device"));
        let mut number = |key: &str, name: &str, kind: &'static Kind, limits: Limits| {
            let at = format!("{pointer}/{key}");
            reader.of_kind(map.get(key), &at, name, kind, &limits).map(|number| number.value)
        };
        let (name, limits) = ("the coverage probability", Limits::between(0.5, 0.9999));
        let probability = number("coverage_probability", name, &kind::FRACTION, limits);
        let (name, limits) = ("the degrees of freedom of the reference", Limits::between(1.0, 1e9));
        let degrees = number("reference_degrees_of_freedom", name, &kind::NUMBER, limits);
        let contributions =
            contributions(map.get("contributions"), &format!("{pointer}/contributions"), reader);
        if date.is_empty() {
            reader.missing(&format!("{pointer}/date"), "Needed: the date of the readings, as 2026-11-30.");
        } else if !is_date(&date) {
            let sentence = format!("The date must be written as 2026-11-30; “{date}” was given.");
            reader.faults.push(Fault::new(
                &format!("{pointer}/date"),
                Code::Unreadable,
                date.as_str().into(),
                &sentence,
            ));
        }
        if certificate.is_empty() {
            let sentence = "Needed: the number of the reference's certificate, on which the new one rests.";
            reader.missing(&format!("{pointer}/reference_certificate"), sentence);
        }
        TransferChoices {
            table,
            reference: Some(reference).filter(|reference| !reference.is_empty()),
            date,
            reference_certificate: certificate,
            reference_device: device,
            test_device: test,
            coverage_probability: probability.unwrap_or(USUAL_PROBABILITY),
            reference_degrees_of_freedom: degrees,
            contributions,
        }
    }
}

fn contributions(tree: Option<&Tree>, pointer: &str, reader: &mut Reader) -> Vec<Contribution> {
    let items = reader.list(tree, pointer).unwrap_or_default();
    let mut found = Vec::new();
    for (index, item) in items.iter().enumerate() {
        let at = format!("{pointer}/{index}");
        let keys = ["name", "standard_percent", "degrees_of_freedom"];
        let Some(map) = reader.part(Some(item), &at, &keys) else { continue };
        let name = reader.text(map.get("name"), &format!("{at}/name")).trim().to_owned();
        if name.is_empty() {
            reader.missing(&format!("{at}/name"), "Each contribution needs a name.");
        }
        let mut number = |key: &str, what: &str, kind: &'static Kind, limits: Limits| {
            let place = format!("{at}/{key}");
            reader.of_kind(map.get(key), &place, what, kind, &limits).map(|number| number.value)
        };
        let (what, limits) = ("the standard uncertainty", Limits::between(0.0, 100.0));
        let standard = number("standard_percent", what, &kind::PERCENT, limits);
        let (what, limits) = ("the degrees of freedom", Limits::between(1.0, 1e9));
        let degrees = number("degrees_of_freedom", what, &kind::NUMBER, limits);
        match standard {
            Some(standard_percent) => {
                found.push(Contribution { name, standard_percent, degrees_of_freedom: degrees });
            }
            None if is_blank(map.get("standard_percent")) => {
                let sentence = "Each contribution needs its standard uncertainty in per cent.";
                reader.missing(&format!("{at}/standard_percent"), sentence);
            }
            None => {}
        }
    }
    found
}

/// Whether nothing was given, or a text without a letter.
fn is_blank(given: Option<&Tree>) -> bool {
    match given {
        None | Some(Tree::Null) => true,
        Some(Tree::Text(text)) => text.trim().is_empty(),
        Some(_) => false,
    }
}

//! The quantities that a certificate states.

use super::series::{Series, Uncertainty, Written, series};
use super::unit::{Dimension, decimal, understood};
use super::xml::{DCC, in_words, is};
use roxmltree::Node;
use serde::Serialize;

/// A quantity, for a person to see and to choose.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct DccQuantity {
    /// By which it is chosen, counted from 0.
    pub index: usize,
    /// What the certificate calls it.
    pub name: String,
    /// The names of what it stands in, the outermost first.
    pub place: String,
    /// Its meaning in the vocabulary of the certificate's author, such as `basic_measuredValue`.
    pub ref_type: String,
    /// Its unit as D-SI writes it; of several the first.
    pub unit: String,
    /// What can be made of the unit.
    pub kind: QuantityKind,
    /// How many numbers it has.
    pub count: usize,
    /// The first of them, in that unit; absent where it is no number.
    pub first: Option<f64>,
    /// The last of them.
    pub last: Option<f64>,
    /// Whether its numbers have uncertainties.
    pub has_uncertainty: bool,
    /// The first coverage factor of these.
    pub coverage_factor: Option<f64>,
    #[serde(skip)]
    pub(super) values: Vec<Written>,
}

/// What can be made of a unit.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum QuantityKind {
    /// A length: a wavelength, perhaps.
    Length,
    /// A responsivity.
    Responsivity,
    /// A ratio: a correction factor, a deviation, an uncertainty, perhaps.
    Ratio,
    /// Nothing that is read here.
    Other,
}

/// Parts of a certificate whose quantities are no results.
const ASIDE: &[&str] = &[
    "influenceConditions",
    "usedMethods",
    "usedSoftware",
    "measuringEquipments",
    "measurementMetaData",
    "statements",
    "items",
];

/// All quantities among the results, and sentences about what is no quantity that could be read.
pub(super) fn quantities(root: Node) -> (Vec<DccQuantity>, Vec<String>) {
    let (mut found, mut notes): (Vec<DccQuantity>, Vec<String>) = (Vec::new(), Vec::new());
    let mut aside = 0;
    for node in root.descendants().filter(|node| is(*node, DCC, "quantity")) {
        if node.ancestors().any(|up| ASIDE.iter().any(|name| is(up, DCC, name))) {
            aside += 1;
            continue;
        }
        let name = in_words(super::xml::child(node, DCC, "name"));
        let ref_type = node.attribute("refType").unwrap_or("").trim().to_owned();
        match series(node) {
            Ok(Series { values }) => {
                let quantity = DccQuantity {
                    index: 0,
                    place: place(node),
                    unit: values.first().map_or_else(String::new, |value| value.unit.clone()),
                    kind: kind(&values),
                    count: values.len(),
                    first: None,
                    last: None,
                    has_uncertainty: false,
                    coverage_factor: None,
                    name,
                    ref_type,
                    values,
                };
                joined(&mut found, quantity);
            }
            Err(sentence) => {
                let named = if name.is_empty() {
                    "A quantity without a name".to_owned()
                } else {
                    format!("“{name}”")
                };
                notes.push(format!("{named} cannot be read. {sentence}"));
            }
        }
    }
    if aside > 0 {
        notes.push(format!("Quantities of conditions, methods and equipment are not listed ({aside})."));
    }
    for (index, quantity) in found.iter_mut().enumerate() {
        let number = |value: Option<&Written>| value.and_then(|value| decimal(&value.number, 0));
        let uncertainty = |value: &Written| value.uncertainty.clone();
        let first: Option<Uncertainty> = quantity.values.iter().find_map(uncertainty);
        quantity.index = index;
        quantity.count = quantity.values.len();
        quantity.kind = kind(&quantity.values);
        quantity.first = number(quantity.values.first());
        quantity.last = number(quantity.values.last());
        quantity.has_uncertainty = first.is_some();
        quantity.coverage_factor = first.and_then(|uncertainty| uncertainty.k);
    }
    (found, notes)
}

/// Adds a quantity. Single numbers of one name and meaning, each in a result or a list of its own, are one quantity.
fn joined(found: &mut Vec<DccQuantity>, quantity: DccQuantity) {
    let single = |other: &DccQuantity| other.count == 1;
    let same = |other: &&mut DccQuantity| {
        other.name == quantity.name && other.ref_type == quantity.ref_type && other.kind == quantity.kind
    };
    let named = !quantity.name.is_empty() || !quantity.ref_type.is_empty();
    match found.iter_mut().filter(|other| single(other)).find(same) {
        // `count` stays 1 while numbers are gathered, so that the next one finds its place too.
        Some(first) if single(&quantity) && named => first.values.extend(quantity.values),
        _ => found.push(quantity),
    }
}

fn kind(values: &[Written]) -> QuantityKind {
    let mut kinds = values.iter().map(|value| match understood(&value.unit) {
        Some((Dimension::Length, _)) => QuantityKind::Length,
        Some((Dimension::Responsivity, _)) => QuantityKind::Responsivity,
        Some((Dimension::Ratio, _)) => QuantityKind::Ratio,
        None => QuantityKind::Other,
    });
    let first = kinds.next().unwrap_or(QuantityKind::Other);
    if kinds.all(|kind| kind == first) { first } else { QuantityKind::Other }
}

/// The names of the results and lists around a quantity.
fn place(node: Node) -> String {
    let around = node
        .ancestors()
        .skip(1)
        .filter(|up| ["list", "result", "measurementResult"].iter().any(|name| is(*up, DCC, name)));
    let mut names: Vec<String> = around
        .map(|up| in_words(super::xml::child(up, DCC, "name")))
        .filter(|name| !name.is_empty())
        .collect();
    names.reverse();
    names.join(" › ")
}

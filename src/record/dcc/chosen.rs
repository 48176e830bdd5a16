//! Which quantities make the certificate of a meter: by choice, else by unit and name.

use super::quantity::{DccQuantity, QuantityKind};
use crate::bench::field::Limits;
use crate::bench::reader::Reader;
use crate::fault::{Code, Fault, Faults};
use crate::quantity::kind;
use crate::record::names::Role;
use crate::record::words::heading;
use crate::tree::Tree;
use serde::Serialize;

/// Which quantity is what, by index.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct Taken {
    /// The wavelengths.
    pub wavelength: Option<usize>,
    /// What is stated at them.
    pub value: Option<usize>,
    /// Expanded uncertainties that are a quantity of their own.
    pub expanded: Option<usize>,
    /// What the values are: a responsivity, a correction factor, or a deviation.
    pub form: Option<Role>,
}

/// What the values can be.
const FORMS: &[(&str, Role)] = &[
    ("responsivity", Role::Responsivity),
    ("correction_factor", Role::CorrectionFactor),
    ("deviation", Role::Deviation),
];

/// What a person chose.
pub(super) struct Chosen {
    wavelength: Option<usize>,
    value: Option<usize>,
    expanded: Option<usize>,
    form: Option<Role>,
    pub(super) coverage_factor: Option<f64>,
    /// Whether no uncertainty is to be taken, whatever the file states.
    pub(super) no_uncertainty: bool,
}

impl Chosen {
    pub(super) fn read(choices: &Tree, quantities: &[DccQuantity]) -> Result<Chosen, Faults> {
        let mut reader = Reader::strict();
        let keys = ["wavelength", "value", "expanded", "form", "coverage_factor"];
        let map = reader.part(Some(choices), "/choices", &keys).unwrap_or(&Tree::Null);
        let no_uncertainty = matches!(map.get("expanded"), Some(Tree::Text(text)) if text == "none");
        let last = quantities.len().saturating_sub(1) as f64;
        let mut index = |key: &str, name: &str, kinds: &[QuantityKind]| -> Option<usize> {
            let at = format!("/choices/{key}");
            let limits = Limits::between(0.0, last);
            let number = reader.of_kind(map.get(key), &at, name, &kind::NUMBER, &limits)?.value;
            let index = number as usize;
            let quantity = quantities.get(index).filter(|_| number.fract() == 0.0);
            let Some(quantity) = quantity else {
                let sentence = format!("The index of {name} must be a whole number; {number} was given.");
                reader.faults.push(Fault::new(&at, Code::Range, Tree::Number(number), &sentence));
                return None;
            };
            if kinds.contains(&quantity.kind) {
                return Some(index);
            }
            let sentence = format!(
                "“{}” is in “{}”, which cannot be read as the unit of {name}.",
                named(quantity),
                quantity.unit
            );
            reader.faults.push(Fault::new(&at, Code::Conflict, quantity.unit.as_str().into(), &sentence));
            None
        };
        let values = [QuantityKind::Responsivity, QuantityKind::Ratio];
        let (wavelength, value, expanded) = (
            index("wavelength", "the wavelength", &[QuantityKind::Length]),
            index("value", "the value", &values),
            if no_uncertainty { None } else { index("expanded", "the uncertainty", &values) },
        );
        let form = map.get("form").filter(|form| !form.is_null());
        let form = form.and_then(|form| reader.word(Some(form), "/choices/form", FORMS));
        let limits = Limits::between(1.0, 10.0);
        let k = map.get("coverage_factor");
        let k =
            reader.of_kind(k, "/choices/coverage_factor", "the coverage factor k", &kind::NUMBER, &limits);
        let kind = value.and_then(|value| quantities.get(value)).map(|quantity| quantity.kind);
        if let (Some(kind), Some(form)) = (kind, form)
            && (kind == QuantityKind::Responsivity) != (form == Role::Responsivity)
        {
            let sentence =
                "Values in A/W are a responsivity, and a responsivity is in A/W; the chosen form is another.";
            reader.faults.push(Fault::new("/choices/form", Code::Conflict, form.name().into(), sentence));
        }
        let chosen =
            Chosen { wavelength, value, expanded, form, coverage_factor: k.map(|k| k.value), no_uncertainty };
        if reader.faults.is_empty() { Ok(chosen) } else { Err(reader.faults) }
    }

    /// The choices, and a guess for what was not chosen.
    pub(super) fn taken(&self, quantities: &[DccQuantity], notes: &mut Vec<String>) -> (Taken, bool) {
        let of_kind = |kind| quantities.iter().filter(move |quantity: &&DccQuantity| quantity.kind == kind);
        let wavelength = self.wavelength.or_else(|| {
            let lengths: Vec<&DccQuantity> = of_kind(QuantityKind::Length).collect();
            let named = lengths.iter().find(|quantity| role(quantity) == Some(Role::Wavelength));
            let first = named.or(lengths.first())?;
            if lengths.len() > 1 {
                notes.push(format!(
                    "Of {} lengths “{}” was taken for the wavelength.",
                    lengths.len(),
                    self::named(first)
                ));
            }
            Some(first.index)
        });
        let count = wavelength.and_then(|index| quantities.get(index)).map(|quantity| quantity.count);
        let as_many = |quantity: &&DccQuantity| count.is_none_or(|count| quantity.count == count);
        let value = self.value.or_else(|| {
            let wanted = |quantity: &&DccQuantity| {
                let kind = if quantity.kind == QuantityKind::Responsivity {
                    Some(Role::Responsivity)
                } else {
                    role(quantity)
                };
                match (kind, self.form) {
                    (Some(kind), Some(form)) => kind == form,
                    (Some(kind), None) => kind.is_value(),
                    (None, _) => false,
                }
            };
            let responsivities = of_kind(QuantityKind::Responsivity).filter(as_many).find(wanted);
            let ratios = of_kind(QuantityKind::Ratio).filter(as_many).find(wanted);
            responsivities.or(ratios).map(|quantity| quantity.index)
        });
        let stated = value.and_then(|index| quantities.get(index));
        let form = self.form.or_else(|| match stated?.kind {
            QuantityKind::Responsivity => Some(Role::Responsivity),
            _ => role(stated?).filter(|role| role.is_value()),
        });
        let expanded = self.expanded.or_else(|| {
            // An uncertainty that stands with the values goes before one of its own.
            let own = |quantity: &&DccQuantity| role(quantity) == Some(Role::Expanded);
            stated.filter(|stated| !stated.has_uncertainty && !self.no_uncertainty)?;
            quantities.iter().filter(as_many).find(own).map(|quantity| quantity.index)
        });
        let guessed = self.wavelength.is_none() || self.value.is_none() || self.form.is_none();
        (Taken { wavelength, value, expanded, form }, guessed)
    }
}

/// What the words of a quantity speak of; a deviation also by its place in the common vocabulary.
fn role(quantity: &DccQuantity) -> Option<Role> {
    let error = quantity.ref_type.split_whitespace().any(|word| word.starts_with("basic_measurementError"));
    heading(&quantity.name).role.or(error.then_some(Role::Deviation))
}

/// What a quantity is called in a sentence.
pub(super) fn named(quantity: &DccQuantity) -> String {
    match (quantity.name.is_empty(), quantity.ref_type.is_empty()) {
        (false, _) => quantity.name.clone(),
        (true, false) => quantity.ref_type.clone(),
        (true, true) => format!("Quantity {}", quantity.index),
    }
}

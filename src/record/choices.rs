//! What a person decided about a table, in place of what would be recognised.

use super::names::{DecimalMark, Delimiter, Role, Unit};
use crate::bench::meter::CertificateForm;
use crate::fault::{Allowed, Code, Fault, Faults};
use crate::tree::Tree;

/// Decisions that overrule what is recognised; whatever is absent is recognised from the text.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Choices {
    /// What parts the cells.
    pub delimiter: Option<Delimiter>,
    /// What stands before the tenths.
    pub decimal_mark: Option<DecimalMark>,
    /// The line of the first row of numbers, counted from 1.
    pub first_row: Option<usize>,
    /// What single columns hold.
    pub columns: Vec<ColumnChoice>,
    /// What the certificate states.
    pub form: Option<CertificateForm>,
}

/// What one column holds.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ColumnChoice {
    /// The column, counted from 0.
    pub index: usize,
    /// What it holds.
    pub role: Option<Role>,
    /// Its unit.
    pub unit: Option<Unit>,
}

impl Choices {
    /// Reads choices as they come from outside; all faults at once, each under `pointer`.
    ///
    /// # Example
    ///
    /// ```
    /// use leastlight::record::{Choices, DecimalMark};
    /// use leastlight::tree::Tree;
    ///
    /// let tree = Tree::from_json(r#"{ "decimal_mark": "comma" }"#).unwrap();
    /// assert_eq!(Choices::from_tree(&tree, "/choices").unwrap().decimal_mark, Some(DecimalMark::Comma));
    ///
    /// let tree = Tree::from_json(r#"{ "decimal": "comma" }"#).unwrap();
    /// assert_eq!(Choices::from_tree(&tree, "/choices").unwrap_err()[0].pointer, "/choices/decimal");
    /// ```
    pub fn from_tree(tree: &Tree, pointer: &str) -> Result<Choices, Faults> {
        let mut faults = Faults::new();
        let keys = ["delimiter", "decimal_mark", "first_row", "columns", "form"];
        check_keys(tree, pointer, &keys, "The choices for a table", &mut faults);
        let choices = Choices {
            delimiter: word(tree, pointer, "delimiter", Delimiter::NAMES, &mut faults),
            decimal_mark: word(tree, pointer, "decimal_mark", DecimalMark::NAMES, &mut faults),
            first_row: whole(tree, pointer, "first_row", 1.0, &mut faults),
            columns: columns(tree, &format!("{pointer}/columns"), &mut faults),
            form: word(tree, pointer, "form", CertificateForm::WORDS, &mut faults),
        };
        if faults.is_empty() { Ok(choices) } else { Err(faults) }
    }
}

fn columns(tree: &Tree, pointer: &str, faults: &mut Faults) -> Vec<ColumnChoice> {
    let items = match tree.get("columns") {
        None | Some(Tree::Null) => return Vec::new(),
        Some(Tree::List(items)) => items,
        Some(other) => {
            let sentence = "The columns must be a list.";
            faults.push(Fault::new(pointer, Code::Unreadable, other.clone(), sentence));
            return Vec::new();
        }
    };
    let mut columns: Vec<ColumnChoice> = Vec::new();
    for (at, item) in items.iter().enumerate() {
        let here = format!("{pointer}/{at}");
        check_keys(item, &here, &["index", "role", "unit"], "A chosen column", faults);
        let index = whole(item, &here, "index", 0.0, faults);
        let role = word(item, &here, "role", Role::NAMES, faults);
        let unit = unit(item, &here, faults);
        let Some(index) = index else {
            if matches!(item, Tree::Map(_)) && item.get("index").is_none_or(Tree::is_null) {
                let sentence = "A chosen column needs its index, counted from 0.";
                faults.push(Fault::missing(&format!("{here}/index"), sentence));
            }
            continue;
        };
        if let (Some(role), Some(unit)) = (role, unit)
            && role != Role::Ignored
            && !role.units().contains(&unit)
        {
            let allowed: Vec<&str> = role.units().iter().map(|unit| unit.name()).collect();
            let sentence = format!(
                "A column of the role {} must be in {}; {} was given.",
                role.name(),
                allowed.join(" or "),
                unit.name()
            );
            faults.push(Fault::new(&format!("{here}/unit"), Code::Conflict, unit.name().into(), &sentence));
        }
        if columns.iter().any(|other| other.index == index) {
            let sentence = format!("Each column may be chosen once; index {index} was given twice.");
            faults.push(Fault::new(
                &format!("{here}/index"),
                Code::Conflict,
                (index as f64).into(),
                &sentence,
            ));
        }
        if let Some(role) = role
            && columns.iter().filter_map(|other| other.role).any(|other| clash(other, role))
        {
            let sentence = "A table has one column of each kind: wavelengths, values, uncertainties and so on; a \
                            second one was given.";
            faults.push(Fault::new(&format!("{here}/role"), Code::Conflict, role.name().into(), sentence));
        }
        columns.push(ColumnChoice { index, role, unit });
    }
    columns
}

/// Whether two columns cannot both have these roles.
pub(super) fn clash(one: Role, other: Role) -> bool {
    one != Role::Ignored && (one == other || (one.is_value() && other.is_value()))
}

fn check_keys(tree: &Tree, pointer: &str, keys: &[&str], what: &str, faults: &mut Faults) {
    match tree {
        Tree::Null => {}
        Tree::Map(entries) => {
            for (at, (key, value)) in entries.iter().enumerate() {
                let twice = entries.iter().take(at).any(|(earlier, _)| earlier == key);
                let sentence = if !keys.contains(&key.as_str()) {
                    format!("{what} may have the entries {}; \"{key}\" was given.", keys.join(", "))
                } else if twice {
                    format!("{what} may have each entry once; \"{key}\" was given twice.")
                } else {
                    continue;
                };
                let here = format!("{pointer}/{}", key.replace('~', "~0").replace('/', "~1"));
                faults.push(Fault::new(&here, Code::UnknownField, value.clone(), &sentence));
            }
        }
        other => {
            let sentence = format!("{what} must be an object with the entries {}.", keys.join(", "));
            faults.push(Fault::new(pointer, Code::Unreadable, other.clone(), &sentence));
        }
    }
}

fn word<T: Copy>(
    tree: &Tree,
    pointer: &str,
    key: &str,
    names: &[(&'static str, T)],
    faults: &mut Faults,
) -> Option<T> {
    let given = tree.get(key).filter(|given| !given.is_null())?;
    let found = match given {
        Tree::Text(text) => names.iter().find(|(name, _)| name == text).map(|(_, value)| *value),
        _ => None,
    };
    if found.is_none() {
        let words: Vec<String> = names.iter().map(|(name, _)| (*name).to_owned()).collect();
        let sentence =
            format!("The entry {key} must be one of {}; {} was given.", words.join(", "), said(given));
        let mut fault = Fault::new(&format!("{pointer}/{key}"), Code::Range, given.clone(), &sentence);
        fault.allowed = Some(Allowed::OneOf(words));
        faults.push(fault);
    }
    found
}

fn unit(tree: &Tree, pointer: &str, faults: &mut Faults) -> Option<Unit> {
    // Two characters look like a micro sign; both are taken.
    if let Some(Tree::Text(text)) = tree.get("unit")
        && let Some(unit) = Unit::written(text)
    {
        return Some(unit);
    }
    word(tree, pointer, "unit", Unit::NAMES, faults)
}

fn whole(tree: &Tree, pointer: &str, key: &str, least: f64, faults: &mut Faults) -> Option<usize> {
    let given = tree.get(key).filter(|given| !given.is_null())?;
    match given {
        Tree::Number(number) if *number >= least && *number <= 1e9 && number.fract() == 0.0 => {
            Some(*number as usize)
        }
        _ => {
            let sentence =
                format!("The entry {key} must be a whole number from {least} on; {} was given.", said(given));
            let mut fault = Fault::new(&format!("{pointer}/{key}"), Code::Range, given.clone(), &sentence);
            fault.allowed = Some(Allowed::Between { min: Some(least), max: Some(1e9), unit: "1".to_owned() });
            faults.push(fault);
            None
        }
    }
}

/// What was given, for a sentence.
fn said(given: &Tree) -> String {
    match given {
        Tree::Text(text) => format!("\"{}\"", super::rows::excerpt(text)),
        Tree::Number(number) => number.to_string(),
        Tree::Bool(value) => value.to_string(),
        Tree::List(_) => "a list".to_owned(),
        Tree::Map(_) => "an object".to_owned(),
        Tree::Null => "nothing".to_owned(),
    }
}

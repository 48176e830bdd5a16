//! From a tree to a bench: finds every fault of a bench at once and keeps what is right.

use super::field::{Field, Limits, field};
use crate::fault::{Allowed, Code, Fault, Faults};
use crate::quantity::kind::Kind;
use crate::quantity::number::DecimalMark;
use crate::quantity::read::{Understood, read};
use crate::quantity::write;
use crate::tree::Tree;

/// Reads the parts of a bench and collects what is wrong with them.
pub struct Reader {
    /// Whether numbers may be given as typed text, and with which decimal mark.
    typed: Option<DecimalMark>,
    /// All faults so far.
    pub faults: Faults,
    /// How each typed number was understood, by pointer.
    pub understood: Vec<(String, String)>,
}

impl Reader {
    /// A reader of a bench as a script gives it: numbers are numbers.
    pub fn strict() -> Reader {
        Reader { typed: None, faults: Vec::new(), understood: Vec::new() }
    }

    /// A reader of a bench as a person typed it: numbers may be text, and blank text is "not there".
    pub fn typed(mark: DecimalMark) -> Reader {
        Reader { typed: Some(mark), ..Reader::strict() }
    }

    /// The map at `pointer`, checked for keys that nothing reads; nothing where it is absent or no map.
    pub fn part<'t>(&mut self, tree: Option<&'t Tree>, pointer: &str, keys: &[&str]) -> Option<&'t Tree> {
        let blank = |tree: &Tree| tree.is_null() || (self.typed.is_some() && is_blank(tree));
        let tree = tree.filter(|tree| !blank(tree))?;
        let Tree::Map(entries) = tree else {
            let sentence = format!("{} must be an object with named values.", spoken(pointer));
            self.faults.push(Fault::new(pointer, Code::Unreadable, tree.clone(), &sentence));
            return None;
        };
        for (index, (key, value)) in entries.iter().enumerate() {
            let at = format!("{pointer}/{}", key.replace('~', "~0").replace('/', "~1"));
            let again = entries[..index].iter().any(|(earlier, _)| earlier == key);
            let sentence = if again {
                format!("“{key}” is given twice; once is enough.")
            } else if keys.contains(&key.as_str()) {
                continue;
            } else {
                format!("Nothing reads a value called “{key}” here; known are {}.", keys.join(", "))
            };
            self.faults.push(Fault {
                allowed: Some(Allowed::OneOf(keys.iter().map(|key| (*key).to_owned()).collect())),
                ..Fault::new(&at, Code::UnknownField, value.clone(), &sentence)
            });
        }
        Some(tree)
    }

    /// The number at a pointer of the field table.
    pub fn number(&mut self, tree: Option<&Tree>, pointer: &str) -> Option<f64> {
        self.understand(tree, pointer).map(|number| number.value)
    }

    /// As [`Reader::number`], with the unit that was typed.
    pub fn understand(&mut self, tree: Option<&Tree>, pointer: &str) -> Option<Understood> {
        let row: &Field = field(pointer)?;
        self.of_kind(tree, pointer, row.name, row.kind, &row.limits)
    }

    /// A number that is not in the field table, such as a point of a certificate.
    pub fn of_kind(
        &mut self,
        tree: Option<&Tree>,
        pointer: &str,
        name: &str,
        kind: &'static Kind,
        limits: &Limits,
    ) -> Option<Understood> {
        let tree = tree?;
        let title = capital(name);
        let given = match tree {
            Tree::Null => return None,
            Tree::Text(text) if self.typed.is_some() && text.trim().is_empty() => return None,
            Tree::Text(text) => match self.typed {
                Some(mark) => read(text, kind, mark).map_err(|why| format!("{title} cannot be read: {why}.")),
                None => {
                    Err(format!("{title} must be a number{}; the text “{text}” was given.", in_unit(kind)))
                }
            },
            Tree::Number(value) if value.is_finite() => {
                Ok(Understood { value: *value, typed_value: *value, unit: kind.unit, counts_bits: false })
            }
            Tree::Number(value) => {
                Err(format!("{title} must be a finite number{}; {value} was given.", in_unit(kind)))
            }
            _ => Err(format!("{title} must be a number{}; something else was given.", in_unit(kind))),
        };
        let allowed = Some(limits.allowed(kind.unit));
        let number = match given {
            Ok(number) => number,
            Err(sentence) => {
                self.faults.push(Fault {
                    allowed,
                    ..Fault::new(pointer, Code::Unreadable, tree.clone(), &sentence)
                });
                return None;
            }
        };
        if !limits.hold(number.value) {
            let write = |value| write::exact(rounded(value), kind);
            // What a person typed is quoted, and what it came to where a unit stood between.
            let was = match tree {
                Tree::Text(text) if number.unit == kind.unit || number.unit.is_empty() => {
                    format!("“{}”", text.trim())
                }
                Tree::Text(text) => format!("“{}” ({})", text.trim(), write(number.value)),
                _ => write(number.value),
            };
            let sentence = format!("{title} {}; {was} was given.", limits.sentence(write));
            self.faults.push(Fault { allowed, ..Fault::new(pointer, Code::Range, tree.clone(), &sentence) });
            return None;
        }
        if let Tree::Text(_) = tree {
            self.understood.push((pointer.to_owned(), understood(&number, kind)));
        }
        Some(number)
    }

    /// Says how a typed text was understood, where that takes more than its number.
    pub fn understand_as(&mut self, pointer: &str, said: String) {
        self.understood.retain(|(known, _)| known != pointer);
        self.understood.push((pointer.to_owned(), said));
    }

    /// One of some words; the first where none is given.
    pub fn word<T: Copy>(&mut self, tree: Option<&Tree>, pointer: &str, words: &[(&str, T)]) -> Option<T> {
        let given = match tree {
            None | Some(Tree::Null) => return words.first().map(|(_, value)| *value),
            Some(tree) => tree,
        };
        if let Tree::Text(text) = given
            && let Some((_, value)) = words.iter().find(|(word, _)| word == text)
        {
            return Some(*value);
        }
        let list: Vec<String> = words.iter().map(|(word, _)| (*word).to_owned()).collect();
        let shown = match given {
            Tree::Text(text) => format!("“{text}”"),
            _ => "something else".to_owned(),
        };
        let sentence = format!("{} must be one of {}; {shown} was given.", spoken(pointer), list.join(", "));
        let code = if matches!(given, Tree::Text(_)) { Code::Range } else { Code::Unreadable };
        self.faults.push(Fault {
            allowed: Some(Allowed::OneOf(list)),
            ..Fault::new(pointer, code, given.clone(), &sentence)
        });
        None
    }

    /// The list at `pointer`; nothing where it is absent or no list.
    pub fn list<'t>(&mut self, tree: Option<&'t Tree>, pointer: &str) -> Option<&'t [Tree]> {
        match tree? {
            Tree::Null => None,
            Tree::List(items) => Some(items),
            other => {
                let sentence = format!("{} must be a list.", spoken(pointer));
                self.faults.push(Fault::new(pointer, Code::Unreadable, other.clone(), &sentence));
                None
            }
        }
    }

    /// Text, such as a title; absent is empty.
    pub fn text(&mut self, tree: Option<&Tree>, pointer: &str) -> String {
        match tree {
            None | Some(Tree::Null) => String::new(),
            Some(Tree::Text(text)) => text.clone(),
            Some(other) => {
                let sentence = format!("{} must be text.", spoken(pointer));
                self.faults.push(Fault::new(pointer, Code::Unreadable, other.clone(), &sentence));
                String::new()
            }
        }
    }

    /// True or false; absent is false.
    pub fn flag(&mut self, tree: Option<&Tree>, pointer: &str) -> bool {
        match tree {
            None | Some(Tree::Null) => false,
            Some(Tree::Bool(value)) => *value,
            Some(other) => {
                let sentence = format!("{} must be true or false.", spoken(pointer));
                self.faults.push(Fault::new(pointer, Code::Unreadable, other.clone(), &sentence));
                false
            }
        }
    }

    /// Refuses whatever stands at a place that is kept free.
    pub fn refuse(&mut self, tree: Option<&Tree>, pointer: &str, sentence: &str) {
        if let Some(tree) = tree.filter(|tree| !tree.is_null()) {
            self.faults.push(Fault::new(pointer, Code::Range, tree.clone(), sentence));
        }
    }

    /// Notes that a value is needed where none is.
    pub fn missing(&mut self, pointer: &str, sentence: &str) {
        self.faults.push(Fault::missing(pointer, sentence));
    }

    /// Whether numbers may be typed text here.
    pub fn mark(&self) -> Option<DecimalMark> {
        self.typed
    }
}

/// Whether a typed part holds nothing: only blank texts and absent values, at any depth.
fn is_blank(tree: &Tree) -> bool {
    match tree {
        Tree::Null => true,
        Tree::Text(text) => text.trim().is_empty(),
        Tree::Map(entries) => entries.iter().all(|(_, value)| is_blank(value)),
        Tree::List(items) => items.iter().all(is_blank),
        Tree::Bool(_) | Tree::Number(_) => false,
    }
}

/// How a typed number was understood: in the unit of the bench, with what was typed where that differs.
fn understood(number: &Understood, kind: &Kind) -> String {
    let (typed, same) = (number.typed_value, number.unit == kind.unit || number.unit.is_empty());
    let kept = match kind.unit {
        "dBm" if !same => format!("{} dBm", write::fixed(number.value, 3)),
        _ => write::exact(rounded(number.value), kind),
    };
    match number.unit {
        _ if same => kept,
        "W" => format!("{} = {kept}", write::prefixed(typed, "W", 4)),
        "Hz" if kind.unit == "nm" => format!("{} = {kept}", write::prefixed(typed, "Hz", 7)),
        _ => kept,
    }
}

/// Ten figures: enough to recognise what was typed, few enough to hide the last bits of a conversion.
fn rounded(value: f64) -> f64 {
    format!("{value:.9e}").parse().unwrap_or(value)
}

fn in_unit(kind: &Kind) -> String {
    match kind.unit {
        "" => String::new(),
        unit => format!(" in {unit}"),
    }
}

/// A pointer as a noun for a sentence: `/amplifier/noise/kind` is "The kind of noise".
fn spoken(pointer: &str) -> String {
    let names: Vec<String> =
        pointer.split('/').filter(|part| !part.is_empty()).map(|part| part.replace('_', " ")).collect();
    match names.as_slice() {
        [] => "The bench".to_owned(),
        [.., of, last] if last == "kind" => format!("The kind of {of}"),
        [.., last] => format!("The {last}"),
    }
}

fn capital(name: &str) -> String {
    let mut chars = name.chars();
    match chars.next() {
        Some(first) => first.to_uppercase().chain(chars).collect(),
        None => String::new(),
    }
}

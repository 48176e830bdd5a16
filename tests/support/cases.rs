//! Published values as data: reads one file of cases strictly, runs it, and lists everything that is wrong.

use super::compare::{Tolerance, miss};
use std::collections::{BTreeMap, BTreeSet};
use toml::{Table, Value};

/// What a case may ask for.
pub type Computation = fn(&mut Inputs) -> Result<Outputs, String>;

/// What a computation gives, by name.
pub type Outputs = BTreeMap<&'static str, Output>;

/// One result.
#[derive(Debug)]
pub enum Output {
    /// A number, or several in order.
    Numbers(Vec<f64>),
    /// A word.
    Word(String),
}

impl From<f64> for Output {
    fn from(number: f64) -> Output {
        Output::Numbers(vec![number])
    }
}

impl From<Vec<f64>> for Output {
    fn from(numbers: Vec<f64>) -> Output {
        Output::Numbers(numbers)
    }
}

impl From<&str> for Output {
    fn from(word: &str) -> Output {
        Output::Word(word.to_owned())
    }
}

/// A case's inputs. Each must be taken by the computation: one that is left over was misspelt or does nothing.
pub struct Inputs(Table);

impl Inputs {
    /// A number that must be there.
    pub fn number(&mut self, key: &str) -> Result<f64, String> {
        number(&self.value(key)?).ok_or_else(|| format!("input `{key}` must be a number"))
    }

    /// A number, or `otherwise` where none is given.
    pub fn number_or(&mut self, key: &str, otherwise: f64) -> Result<f64, String> {
        if self.0.contains_key(key) { self.number(key) } else { Ok(otherwise) }
    }

    /// Several numbers.
    pub fn numbers(&mut self, key: &str) -> Result<Vec<f64>, String> {
        numbers(&self.value(key)?).ok_or_else(|| format!("input `{key}` must be a list of numbers"))
    }

    /// A word.
    pub fn word(&mut self, key: &str) -> Result<String, String> {
        let value = self.value(key)?;
        value.as_str().map(str::to_owned).ok_or_else(|| format!("input `{key}` must be a word"))
    }

    /// Anything, such as a whole bench.
    pub fn value(&mut self, key: &str) -> Result<Value, String> {
        self.0.remove(key).ok_or_else(|| format!("input `{key}` is missing"))
    }
}

/// Runs all cases of one file. `used` collects the names of the computations that were run.
pub fn run(
    file: &str,
    text: &str,
    computations: &[(&'static str, Computation)],
    used: &mut BTreeSet<&'static str>,
) -> Vec<String> {
    let mut wrong = Vec::new();
    let mut file_table: Table = match text.parse() {
        Ok(table) => table,
        Err(error) => return vec![format!("{file}: {error}")],
    };
    let cases = match file_table.remove("case") {
        Some(Value::Array(cases)) if !cases.is_empty() => cases,
        _ => return vec![format!("{file}: has no [[case]]")],
    };
    wrong.extend(file_table.keys().map(|key| format!("{file}: unknown key `{key}`")));
    let mut names = BTreeSet::new();
    for case in cases {
        let Value::Table(mut case) = case else {
            wrong.push(format!("{file}: a case must be a table"));
            continue;
        };
        let name = word(&mut case, "name").unwrap_or_default();
        let mut say = |what: String| wrong.push(format!("{file}: {name}: {what}"));
        if name.is_empty() || !names.insert(name.clone()) {
            say("each case needs a name of its own".to_owned());
        }
        if word(&mut case, "source").is_none_or(|source| source.len() < 10) {
            say("`source` must say where the value stands".to_owned());
        }
        if !matches!(word(&mut case, "kind").as_deref(), Some("published" | "independent" | "exact")) {
            say("`kind` must be published, independent or exact".to_owned());
        }
        run_case(&mut case, computations, used)
            .unwrap_or_else(|error| vec![error])
            .into_iter()
            .for_each(&mut say);
        case.keys().for_each(|key| say(format!("unknown key `{key}`")));
    }
    wrong
}

/// Runs one case and takes from it what it reads.
fn run_case(
    case: &mut Table,
    computations: &[(&'static str, Computation)],
    used: &mut BTreeSet<&'static str>,
) -> Result<Vec<String>, String> {
    let compute = word(case, "compute").ok_or("`compute` must name a computation")?;
    let input = table(case, "input").unwrap_or_default();
    let expect = table(case, "expect").filter(|expect| !expect.is_empty()).ok_or("`expect` is missing")?;
    let mut tolerances = Tolerances::read(table(case, "tolerance").unwrap_or_default())?;
    let (known, computation) = computations
        .iter()
        .find(|(known, _)| *known == compute)
        .ok_or_else(|| format!("nothing computes `{compute}`"))?;
    used.insert(known);
    let mut inputs = Inputs(input);
    let outputs = computation(&mut inputs)?;
    let mut wrong: Vec<String> = inputs.0.keys().map(|key| format!("input `{key}` does nothing")).collect();
    for (key, expected) in &expect {
        match (outputs.get(key.as_str()), expected) {
            (None, _) => wrong.push(format!("`{compute}` gives no `{key}`, only {:?}", outputs.keys())),
            (Some(Output::Word(word)), Value::String(expected)) => {
                if word != expected {
                    wrong.push(format!("`{key}`: expected {expected}, got {word}"));
                }
            }
            (Some(Output::Numbers(actual)), expected) => {
                let expected = numbers(expected).ok_or_else(|| format!("`{key}` must be of numbers"))?;
                let tolerance = tolerances.of(key)?;
                if expected.len() != actual.len() {
                    wrong.push(format!("`{key}`: expected {expected:?}, got {actual:?}"));
                }
                let misses = expected.iter().zip(actual).filter_map(|(e, a)| miss(*e, *a, tolerance));
                wrong.extend(misses.map(|miss| format!("`{key}`: {miss}")));
            }
            (Some(output), expected) => wrong.push(format!("`{key}`: expected {expected}, got {output:?}")),
        }
    }
    wrong.extend(tolerances.unused());
    Ok(wrong)
}

/// One tolerance for all expected values, or one for each by name; always with a reason.
struct Tolerances {
    all: Option<Tolerance>,
    by_key: BTreeMap<String, Tolerance>,
    used: BTreeSet<String>,
}

impl Tolerances {
    fn read(mut from: Table) -> Result<Tolerances, String> {
        let mut tolerances = Tolerances { all: None, by_key: BTreeMap::new(), used: BTreeSet::new() };
        if from.contains_key("why") {
            tolerances.all = Some(tolerance(&mut from)?);
        } else {
            for (key, value) in std::mem::take(&mut from) {
                let Value::Table(mut one) = value else {
                    return Err(format!("tolerance `{key}` without `why`"));
                };
                tolerances.by_key.insert(key, tolerance(&mut one)?);
            }
        }
        Ok(tolerances)
    }

    fn of(&mut self, key: &str) -> Result<Tolerance, String> {
        self.used.insert(key.to_owned());
        self.by_key.get(key).copied().or(self.all).ok_or_else(|| format!("`{key}` has no tolerance"))
    }

    fn unused(&self) -> Vec<String> {
        let idle = self.by_key.keys().filter(|key| !self.used.contains(*key));
        let mut wrong: Vec<String> = idle.map(|key| format!("tolerance `{key}` does nothing")).collect();
        if self.all.is_some() && self.used.is_empty() {
            wrong.push("the tolerance does nothing".to_owned());
        }
        wrong
    }
}

fn tolerance(from: &mut Table) -> Result<Tolerance, String> {
    if word(from, "why").is_none_or(|why| why.len() < 10) {
        return Err("a tolerance needs a reason in `why`".to_owned());
    }
    let kinds = [
        ("absolute", Tolerance::Absolute as fn(f64) -> Tolerance),
        ("relative", Tolerance::Relative),
        ("logarithm", Tolerance::Logarithm),
    ];
    let mut found =
        kinds.iter().filter_map(|(key, kind)| from.remove(*key).and_then(|v| number(&v)).map(kind));
    match (found.next(), found.next()) {
        (Some(one), None) if from.is_empty() => Ok(one),
        _ => Err("a tolerance is one of absolute, relative, logarithm, and `why`".to_owned()),
    }
}

fn word(table: &mut Table, key: &str) -> Option<String> {
    match table.remove(key) {
        Some(Value::String(word)) => Some(word),
        _ => None,
    }
}

fn table(from: &mut Table, key: &str) -> Option<Table> {
    match from.remove(key) {
        Some(Value::Table(table)) => Some(table),
        _ => None,
    }
}

fn number(value: &Value) -> Option<f64> {
    value.as_float().or_else(|| value.as_integer().map(|integer| integer as f64))
}

fn numbers(value: &Value) -> Option<Vec<f64>> {
    match value {
        Value::Array(items) => items.iter().map(number).collect(),
        one => number(one).map(|one| vec![one]),
    }
}

//! Values from outside, kept as data in `tests/published/`, each with its source and a reasoned tolerance.
//!
//! To add a file, put it there; to add a computation, add a row to a list in `published_computations/`.
#![cfg(not(target_arch = "wasm32"))]

mod published_computations;
mod support;

use std::collections::BTreeSet;
use std::path::Path;
use support::cases::{Computation, Inputs, Outputs, run};

#[test]
fn every_published_value_is_met() {
    let computations = published_computations::all();
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/published");
    let (mut wrong, mut used, mut files) = (Vec::new(), BTreeSet::new(), 0);
    for entry in std::fs::read_dir(&folder).expect("the folder of published values") {
        let path = entry.expect("an entry of that folder").path();
        let name = path.file_name().unwrap_or_default().to_string_lossy().into_owned();
        if path.extension().is_none_or(|extension| extension != "toml") {
            wrong.push(format!("{name}: nobody runs this"));
            continue;
        }
        files += 1;
        let text = std::fs::read_to_string(&path).expect("a readable file");
        wrong.extend(run(&name, &text, &computations, &mut used));
    }
    let idle = computations.iter().filter(|(name, _)| !used.contains(name));
    wrong.extend(idle.map(|(name, _)| format!("no file has a case for `{name}`")));
    assert!(files > 0 && wrong.is_empty(), "{} misses:\n{}", wrong.len(), wrong.join("\n"));
}

/// What the runner says about one file, with a computation that doubles.
fn said(text: &str) -> String {
    let double: Computation =
        |inputs: &mut Inputs| Ok(Outputs::from([("twice", (2.0 * inputs.number("once")?).into())]));
    run("file", text, &[("double", double)], &mut BTreeSet::new()).join("\n")
}

const GOOD: &str = r#"
[[case]]
name = "two"
source = "arithmetic by hand"
kind = "exact"
compute = "double"
input = { once = 1.0 }
expect = { twice = 2.0 }
tolerance = { absolute = 0.0, why = "whole numbers" }
"#;

#[test]
fn the_runner_accepts_a_good_case_and_refuses_each_way_to_spoil_it() {
    assert_eq!(said(GOOD), "");
    let spoilt = [
        ("twice = 2.0", "twice = 2.5", "expected 2.5e0, got 2e0"),
        ("twice = 2.0", "twice = nan", "expected NaN"),
        ("once = 1.0", "once = nan", "got NaN"),
        ("twice = 2.0", "thrice = 3.0", "gives no `thrice`"),
        ("once = 1.0", "once = 1.0, one = 1.0", "input `one` does nothing"),
        ("once = 1.0", "one = 1.0", "input `once` is missing"),
        ("\"whole numbers\"", "\"\"", "needs a reason"),
        ("absolute = 0.0, ", "", "one of absolute, relative, logarithm"),
        ("absolute = 0.0", "absolut = 0.0", "one of absolute, relative, logarithm"),
        ("compute = \"double\"", "compute = \"halve\"", "nothing computes `halve`"),
        ("kind = \"exact\"", "kind = \"measured\"", "`kind` must be"),
        ("arithmetic by hand", "hm", "`source` must say"),
        ("name = \"two\"", "name = \"two\"\nnote = 1", "unknown key `note`"),
        ("[[case]]", "author = 1\n[[case]]", "unknown key `author`"),
        ("[[case]]", "[[cases]]", "has no [[case]]"),
    ];
    for (from, to, expected) in spoilt {
        assert!(GOOD.contains(from));
        let said = said(&GOOD.replace(from, to));
        assert!(said.contains(expected), "{from} -> {to}: {said}");
    }
    assert!(said(&format!("{GOOD}{GOOD}")).contains("a name of its own"));
    assert!(said("").contains("has no [[case]]"));
}

#[test]
fn far_tails_are_compared_by_logarithm_and_zero_is_never_right_there() {
    use support::compare::{Tolerance, miss};
    assert!(miss(1e-300, 1.0000001e-300, Tolerance::Logarithm(1e-6)).is_none());
    assert!(miss(1e-300, 0.0, Tolerance::Logarithm(1e-6)).is_some());
    assert!(miss(0.0, 0.0, Tolerance::Logarithm(1e-6)).is_some());
    assert!(miss(1.0, 0.9, Tolerance::Absolute(0.05)).is_some());
    assert!(miss(1.0, 1.1, Tolerance::Absolute(0.05)).is_some());
    assert!(miss(f64::INFINITY, f64::INFINITY, Tolerance::Relative(0.0)).is_none());
    assert!(miss(f64::INFINITY, 1.0, Tolerance::Relative(0.0)).is_some());
}

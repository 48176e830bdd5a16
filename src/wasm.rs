//! Carries values between JavaScript and the door. There is nothing else in here.

use crate::door;
use crate::fault::{Code, Fault, Faults};
use crate::tree::Tree;
use serde::Serialize;
use serde_wasm_bindgen::Serializer;
use wasm_bindgen::prelude::*;

/// `{ answer }` or `{ faults }`.
#[wasm_bindgen]
pub fn ask(question: JsValue, bench: JsValue, options: JsValue) -> Result<JsValue, JsValue> {
    outcome(
        "answer",
        question_name(&question)
            .and_then(|name| door::ask(&name, &tree(bench, "")?, &tree(options, "/options")?)),
    )
}

/// A question that is answered but for its trials, which go in slices.
#[wasm_bindgen]
pub struct Run(door::Run);

#[wasm_bindgen]
impl Run {
    /// Answers all but the trials: `{ value }`, a [`Run`], or `{ faults }`.
    pub fn begin(question: &str, bench: JsValue, options: JsValue) -> Result<JsValue, JsValue> {
        let begun =
            tree(bench, "").and_then(|bench| door::Run::begin(question, &bench, &tree(options, "/options")?));
        let (name, value) = match begun {
            Ok(run) => ("value", JsValue::from(Run(run))),
            Err(faults) => ("faults", out(&faults)?),
        };
        named(name, &value)
    }

    /// Goes on by so many trials.
    pub fn advance(&mut self, trials: u32) {
        self.0.advance(trials as usize);
    }

    /// Trials so far.
    pub fn count(&self) -> f64 {
        self.0.count() as f64
    }

    /// Whether nothing is left to be done.
    pub fn done(&self) -> bool {
        self.0.done()
    }

    /// The answer with what the trials gave so far.
    pub fn finish(self) -> Result<JsValue, JsValue> {
        out(&self.0.finish())
    }
}

/// All questions.
#[wasm_bindgen]
pub fn questions() -> Result<JsValue, JsValue> {
    out(&door::questions())
}

/// All numbers of a bench.
#[wasm_bindgen]
pub fn fields() -> Result<JsValue, JsValue> {
    out(&door::field_rows())
}

/// What was made of a bench as it was typed.
#[wasm_bindgen]
pub fn understand(typed: JsValue, decimal_mark: &str) -> Result<JsValue, JsValue> {
    match tree(typed, "") {
        Ok(typed) => out(&door::understand(&typed, decimal_mark)),
        Err(faults) => outcome::<()>("value", Err(faults)),
    }
}

/// The answer to a question about a bench as it was typed, or what it waits for.
#[wasm_bindgen]
pub fn follow(question: &str, typed: JsValue, decimal_mark: &str) -> Result<JsValue, JsValue> {
    match tree(typed, "") {
        Ok(typed) => out(&door::follow(question, &typed, decimal_mark)),
        Err(faults) => outcome::<()>("value", Err(faults)),
    }
}

/// `{ value }` or `{ faults }`.
#[wasm_bindgen]
pub fn read_certificate(text: &str, choices: JsValue) -> Result<JsValue, JsValue> {
    outcome("value", tree(choices, "/choices").and_then(|choices| door::read_certificate(text, &choices)))
}

/// `{ value }` or `{ faults }`.
#[wasm_bindgen]
pub fn read_responsivity(text: &str, choices: JsValue) -> Result<JsValue, JsValue> {
    outcome("value", tree(choices, "/choices").and_then(|choices| door::read_responsivity(text, &choices)))
}

/// `{ value }` or `{ faults }`.
#[wasm_bindgen]
pub fn read_spectrum(text: &str, choices: JsValue) -> Result<JsValue, JsValue> {
    outcome("value", tree(choices, "/choices").and_then(|choices| door::read_spectrum(text, &choices)))
}

/// `{ value }` or `{ faults }`.
#[wasm_bindgen]
pub fn transfer_calibration(text: &str, bench: JsValue, choices: JsValue) -> Result<JsValue, JsValue> {
    let calibrated = tree(bench, "")
        .and_then(|bench| door::transfer_calibration(text, &bench, &tree(choices, "/choices")?));
    outcome("value", calibrated)
}

/// `{ value }` or `{ faults }`.
#[wasm_bindgen]
pub fn read_dcc(text: &str, choices: JsValue) -> Result<JsValue, JsValue> {
    outcome("value", tree(choices, "/choices").and_then(|choices| door::read_dcc(text, &choices)))
}

/// `{ value }`, the text of a file, or `{ faults }`.
#[wasm_bindgen]
pub fn write_dcc(bench: JsValue, administration: JsValue) -> Result<JsValue, JsValue> {
    let written =
        tree(bench, "").and_then(|bench| door::write_dcc(&bench, &tree(administration, "/administration")?));
    outcome("value", written)
}

/// `{ value }` or `{ faults }`.
#[wasm_bindgen]
pub fn read_bench(text: &str) -> Result<JsValue, JsValue> {
    outcome("value", door::read_bench(text))
}

/// The text for a field that holds a value.
#[wasm_bindgen]
pub fn write_number(pointer: &str, value: f64, decimal_mark: &str) -> String {
    door::write_number(pointer, value, decimal_mark)
}

/// The text for the table at a pointer of a bench: `{ value }` or `{ faults }`.
#[wasm_bindgen]
pub fn write_table(pointer: &str, bench: JsValue, decimal_mark: &str) -> Result<JsValue, JsValue> {
    outcome("value", tree(bench, "").and_then(|bench| door::write_table(pointer, &bench, decimal_mark)))
}

/// The demonstration bench.
#[wasm_bindgen]
pub fn demo() -> Result<JsValue, JsValue> {
    out(&door::demo())
}

/// The version of this program.
#[wasm_bindgen]
pub fn version() -> String {
    door::version().to_owned()
}

fn question_name(question: &JsValue) -> Result<String, Faults> {
    question.as_string().ok_or_else(|| {
        let sentence = "The question must be named by a text, such as “sensitivity”.";
        vec![Fault::new("/question", Code::Unreadable, Tree::Null, sentence)]
    })
}

fn tree(value: JsValue, pointer: &str) -> Result<Tree, Faults> {
    serde_wasm_bindgen::from_value(value).map_err(|error| {
        let sentence = format!("This is made of more than numbers, texts, lists and objects: {error}.");
        vec![Fault::new(pointer, Code::Unreadable, Tree::Null, &sentence)]
    })
}

fn outcome<T: Serialize>(name: &str, result: Result<T, Faults>) -> Result<JsValue, JsValue> {
    let (name, value) = match result {
        Ok(value) => (name, out(&value)?),
        Err(faults) => ("faults", out(&faults)?),
    };
    named(name, &value)
}

fn named(name: &str, value: &JsValue) -> Result<JsValue, JsValue> {
    let object = js_sys::Object::new();
    js_sys::Reflect::set(&object, &name.into(), value)?;
    Ok(object.into())
}

fn out<T: Serialize>(value: &T) -> Result<JsValue, JsValue> {
    Ok(value.serialize(&Serializer::json_compatible())?)
}

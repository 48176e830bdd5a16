//! The one door: what the page, a script under Node and the tests call. Plain Rust, so that it is tested
//! and fuzzed natively; `wasm` only carries values across.

mod run;

use crate::bench::Bench;
use crate::bench::field::{FieldRow, field, fields};
use crate::bench::reader::Reader;
use crate::bench::uncertainty::Uncertainty;
use crate::explore::solve::Solution;
use crate::explore::sweep::Sweep;
use crate::fault::{Allowed, Code, Fault, Faults};
use crate::quantity::number::DecimalMark;
use crate::quantity::write;
use crate::questions::log::{Log, LogReader};
use crate::questions::transfer::{self, Transfer};
use crate::questions::{Answer, QUESTIONS, Question};
use crate::record::{
    self, CertificateTable, Choices, DccReading, Reading, Refused, ResponsivityTable, SpectrumTable,
};
use crate::tree::Tree;
use crate::typed;
use crate::uncertainty::asked::Uncertain;
use crate::uncertainty::doubts::fill_means;
use crate::uncertainty::shown::show;
use crate::uncertainty::usual::{USUAL, UsualDoubt};
pub use run::Run;
use run::begin_on_bench;
use serde::Serialize;
use std::collections::BTreeMap;

/// An answer with what was asked beside it.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Asked {
    /// The answer itself.
    #[serde(flatten)]
    pub answer: Answer,
    /// How well the answer's main number is known, where doubts are stated and it exists.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub uncertainty: Option<Uncertain>,
    /// The answer's numbers over a range of one number of the bench.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub sweep: Option<Sweep>,
    /// The value of one number of the bench at which the answer is as wanted.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub solve: Option<Solution>,
}

/// A question as the outside sees it.
#[derive(Debug, Serialize)]
pub struct QuestionRow {
    /// Its name.
    pub name: &'static str,
    /// The question in plain words.
    pub asks: &'static str,
    /// The pointers that it reads; a part stands for all of its fields.
    pub fields: &'static [&'static str],
    /// The numbers whose uncertainty is offered: name, and what it is called.
    pub uncertain: &'static [(&'static str, &'static str)],
}

/// All questions.
pub fn questions() -> Vec<QuestionRow> {
    let row = |question: &Question| QuestionRow {
        name: question.name,
        asks: question.asks,
        fields: question.fields,
        uncertain: question.uncertain,
    };
    QUESTIONS.iter().map(row).collect()
}

/// All numbers of a bench.
pub fn field_rows() -> Vec<FieldRow> {
    fields().map(FieldRow::from).collect()
}

/// The doubts that are usual, to be taken and changed.
pub fn usual_doubts() -> &'static [UsualDoubt] {
    USUAL
}

/// Asks a question of a bench. Doubts may stand among the options or, where those have none, on the bench itself. Trials
/// are run to their end where the options hold them; those that a bench plans, only with `trials: true`, for they take
/// a while.
pub fn ask(question: &str, bench: &Tree, options: &Tree) -> Result<Asked, Faults> {
    let mut run = Run::begin(question, bench, options)?;
    run.advance(usize::MAX);
    Ok(run.finish())
}

fn find_question(name: &str) -> Result<&'static Question, Faults> {
    QUESTIONS.iter().find(|question| question.name == name).ok_or_else(|| {
        let names: Vec<String> = QUESTIONS.iter().map(|question| question.name.to_owned()).collect();
        let sentence = format!("The question must be one of {}; “{name}” was given.", names.join(", "));
        vec![Fault {
            allowed: Some(Allowed::OneOf(names)),
            ..Fault::new("/question", Code::Range, Tree::from(name), &sentence)
        }]
    })
}

/// What a page needs at each keystroke: the answer to a question about a bench as it was typed, or what it waits for.
#[derive(Debug, Serialize)]
pub struct Followed {
    /// How each typed number was read, by pointer.
    pub understood: BTreeMap<String, String>,
    /// How each table of pasted cells was read, by pointer.
    pub tables: BTreeMap<String, Reading>,
    /// Everything that is wrong with the bench or missing for the question.
    pub faults: Faults,
    /// Those of them that stand between this question and its answer; empty when there is one.
    pub blocking: Faults,
    /// The answer.
    pub answer: Option<Answer>,
    /// How well its main number is known, by the budget; trials are for [`Run`].
    pub uncertainty: Option<Uncertain>,
}

/// Asks a question of a bench as it was typed. What is wrong in a place that the question does not read is
/// named, but does not keep it from answering.
pub fn follow(question: &str, typed: &Tree, decimal_mark: &str) -> Followed {
    let typed::Understanding { mut bench, understood, tables, mut faults } = understand(typed, decimal_mark);
    if let Some(stated) = bench.uncertainty.clone() {
        fill_means(&stated, &mut bench);
    }
    let found = find_question(question);
    let concerns = |fault: &Fault| {
        let fields = found.as_ref().map_or(&[""][..], |question| question.fields);
        fields.iter().any(|field| under(&fault.pointer, field) || under(field, &fault.pointer))
    };
    let mut blocking: Faults = faults.iter().filter(|fault| concerns(fault)).cloned().collect();
    let (mut answer, mut uncertainty) = (None, None);
    if blocking.is_empty() {
        match found.clone().and_then(|question| (question.ask)(&bench)) {
            Ok(found) => {
                let mut found = found;
                match doubts_of(question, &bench) {
                    Ok(uncertain) => uncertainty = uncertain,
                    // A doubt that cannot be worked with is named at its place; the answer stands without.
                    Err(more) => faults.extend(more),
                }
                if let Some(uncertain) = &uncertainty {
                    show(uncertain, found.shown_mut());
                }
                answer = Some(found);
            }
            Err(missing) => {
                faults.extend(missing.iter().cloned());
                blocking = missing;
            }
        }
    }
    Followed { understood, tables, faults, blocking, answer, uncertainty }
}

/// The budget by the doubts that stand on a bench.
fn doubts_of(question: &str, bench: &Bench) -> Result<Option<Uncertain>, Faults> {
    let Some(stated) = &bench.uncertainty else { return Ok(None) };
    let stated = Uncertainty { monte_carlo: None, ..stated.clone() };
    Ok(begin_on_bench(find_question(question)?, bench, &stated)?.map(|begun| begun.uncertain))
}

/// Whether a pointer is that of a part or lies within it.
fn under(pointer: &str, part: &str) -> bool {
    pointer.strip_prefix(part).is_some_and(|rest| rest.is_empty() || rest.starts_with('/'))
}

/// Reads a bench in which numbers are the texts that a person typed.
pub fn understand(typed: &Tree, decimal_mark: &str) -> typed::Understanding {
    match mark(decimal_mark) {
        Ok(mark) => typed::understand(typed, mark),
        Err(faults) => typed::Understanding { faults, ..typed::understand(typed, DecimalMark::Auto) },
    }
}

fn mark(word: &str) -> Result<DecimalMark, Faults> {
    let mut reader = Reader::strict();
    let mark = reader.word(Some(&Tree::from(word)), "/decimal_mark", DecimalMark::WORDS);
    mark.ok_or(reader.faults)
}

/// Reads a certificate from pasted cells or a file's text.
pub fn read_certificate(text: &str, choices: &Tree) -> Result<CertificateTable, Faults> {
    record::read_certificate(text, &Choices::from_tree(choices, "/choices")?)
}

/// Reads a table of responsivities from pasted cells or a file's text.
pub fn read_responsivity(text: &str, choices: &Tree) -> Result<ResponsivityTable, Faults> {
    record::read_responsivity(text, &Choices::from_tree(choices, "/choices")?)
}

/// Reads a spectrum from pasted cells or a file's text.
pub fn read_spectrum(text: &str, choices: &Tree) -> Result<SpectrumTable, Faults> {
    record::read_spectrum(text, &Choices::from_tree(choices, "/choices")?)
}

/// Calibrates a detector by comparison with the reference on the bench: the readings of both in turn, as pasted cells
/// or a file's text.
pub fn transfer_calibration(text: &str, bench: &Tree, choices: &Tree) -> Result<Transfer, Faults> {
    transfer::transfer_calibration(text, &Bench::from_tree(bench)?, choices)
}

/// What a page needs at each keystroke of a calibration by comparison.
#[derive(Debug, Serialize)]
pub struct FollowedTransfer {
    /// How each typed number was read, by pointer.
    pub understood: BTreeMap<String, String>,
    /// How the tables were read, by pointer: the reference's certificate, and the readings under `/readings`.
    pub tables: BTreeMap<String, Reading>,
    /// Everything that is wrong or missing: with the reference under `/meter`, with the choices under `/choices`, with
    /// the readings under `/readings`.
    pub faults: Faults,
    /// The result.
    pub transfer: Option<Transfer>,
}

/// As [`transfer_calibration`], of a bench and choices as they were typed.
pub fn follow_transfer(text: &str, typed: &Tree, choices: &Tree, decimal_mark: &str) -> FollowedTransfer {
    let typed::Understanding { bench, understood, mut tables, mut faults } = understand(typed, decimal_mark);
    let reader = Reader::typed(mark(decimal_mark).unwrap_or_default());
    let steps = transfer::transfer_steps(text, &bench, choices, reader);
    tables.extend(steps.reading.map(|reading| ("/readings".to_owned(), reading)));
    // What cannot be read of the reference is not said once more to be missing.
    let unread = faults.iter().any(|fault| under(&fault.pointer, "/meter"));
    let found = steps.faults.into_iter().filter(|fault| !(unread && under(&fault.pointer, "/meter")));
    let placed = found.map(|fault| match fault.pointer.as_str() {
        "" => Fault { pointer: "/readings".to_owned(), ..fault },
        _ => fault,
    });
    faults.extend(placed);
    let transfer = steps.transfer.filter(|_| faults.is_empty());
    let understood = understood.into_iter().chain(steps.understood).collect();
    FollowedTransfer { understood, tables, faults, transfer }
}

/// Reads a log of readings from a file's text, corrects it by the certificate on the bench and sums it up.
///
/// `options` may have `choices` (delimiter, decimal_mark, first_row, columns, good_status, setting: file or bench), the
/// `bench`, an `uncertainty` from elsewhere ({relative_standard, coverage_factor}), and `corrected` ({delimiter?,
/// decimal_mark?}), which asks for the corrected log as text. A log of many rows is better read in slices: [`LogReader`].
pub fn read_log(text: &str, options: &Tree) -> Result<Log, Refused> {
    let mut reader = LogReader::new(options);
    reader.push(text.as_bytes());
    reader.finish()
}

/// Reads a digital calibration certificate from the text of its file.
pub fn read_dcc(text: &str, choices: &Tree) -> Result<DccReading, Faults> {
    record::read_dcc(text, choices)
}

/// Writes the certificate of a bench's meter as a digital calibration certificate. With a decimal mark, numbers of the
/// administration may be texts as a person types them.
pub fn write_dcc(bench: &Tree, administration: &Tree, decimal_mark: Option<&str>) -> Result<String, Faults> {
    let bench = Bench::from_tree(bench)?;
    let reader = match decimal_mark {
        Some(word) => Reader::typed(mark(word)?),
        None => Reader::strict(),
    };
    match bench.meter.as_ref().and_then(|meter| meter.certificate.as_ref()) {
        Some(certificate) => record::write_dcc(certificate, administration, reader),
        None => Err(vec![Fault::missing("/meter/certificate", "A certificate is needed to be written.")]),
    }
}

/// Reads the text of a bench file.
pub fn read_bench(text: &str) -> Result<Bench, Faults> {
    let tree = Tree::from_json(text.trim_start_matches('\u{feff}')).map_err(|why| {
        let sentence = format!("This is not the text of a bench file: {why}.");
        vec![Fault::new("", Code::Unreadable, Tree::Null, &sentence)]
    })?;
    if tree.get("schema").is_none() {
        let sentence = "A bench file names its format under “schema”; this text does not.";
        return Err(vec![Fault::missing("/schema", sentence)]);
    }
    Bench::from_tree(&tree)
}

/// The text for a field that holds a value: with its unit, and exact when read back.
pub fn write_number(pointer: &str, value: f64, decimal_mark: &str) -> String {
    let text = field(pointer).map_or_else(|| write::plain(value), |field| write::exact(value, field.kind));
    match decimal_mark {
        "comma" => text.replace('.', ","),
        _ => text,
    }
}

/// The text for the table at a pointer of a bench, tab-separated, exact when read back.
pub fn write_table(pointer: &str, bench: &Tree, decimal_mark: &str) -> Result<String, Faults> {
    let bench = Bench::from_tree(bench)?;
    Ok(typed::write_table(pointer, &bench, mark(decimal_mark)?))
}

/// The doubts of a bench as they would be typed; nothing where it has none.
pub fn write_doubts(bench: &Tree, decimal_mark: &str) -> Result<Tree, Faults> {
    let bench = Bench::from_tree(bench)?;
    Ok(typed::write_doubts(&bench, mark(decimal_mark)?))
}

/// The demonstration bench: the invented observatory Ansa Ridge.
pub fn demo() -> Tree {
    // The file is part of the program, and a test reads it through the strict door.
    Tree::from_json(include_str!("bench/demo.json")).unwrap_or_default()
}

/// The version of this program.
pub fn version() -> &'static str {
    env!("CARGO_PKG_VERSION")
}

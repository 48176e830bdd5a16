//! The one door: what the page, a script under Node and the tests call. Plain Rust, so that it is tested
//! and fuzzed natively; `wasm` only carries values across.

use crate::bench::Bench;
use crate::bench::field::{FieldRow, field, fields};
use crate::bench::reader::Reader;
use crate::bench::uncertainty::{MonteCarlo, Uncertainty};
use crate::explore::solve::{Solution, solve};
use crate::explore::sweep::{Sweep, sweep};
use crate::fault::{Allowed, Code, Fault, Faults};
use crate::quantity::number::DecimalMark;
use crate::quantity::write;
use crate::questions::transfer::{self, Transfer};
use crate::questions::{Answer, QUESTIONS, Question};
use crate::record::{self, CertificateTable, Choices, DccReading, Reading, ResponsivityTable, SpectrumTable};
use crate::tree::Tree;
use crate::typed;
use crate::uncertainty::asked::{self as uncertainty, Begun, Uncertain};
use crate::uncertainty::shown::show;
use crate::uncertainty::trials::Trials;
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
}

/// All questions.
pub fn questions() -> Vec<QuestionRow> {
    let row = |question: &Question| QuestionRow {
        name: question.name,
        asks: question.asks,
        fields: question.fields,
    };
    QUESTIONS.iter().map(row).collect()
}

/// All numbers of a bench.
pub fn field_rows() -> Vec<FieldRow> {
    fields().map(FieldRow::from).collect()
}

/// Asks a question of a bench. Doubts may stand among the options or, where those have none, on the bench itself. Trials
/// are run to their end where the options hold them; those that a bench plans, only with `trials: true`, for they take
/// a while.
pub fn ask(question: &str, bench: &Tree, options: &Tree) -> Result<Asked, Faults> {
    let mut run = Run::begin(question, bench, options)?;
    run.advance(usize::MAX);
    Ok(run.finish())
}

/// A question that has been answered but for its trials, which may take a while and so go in slices.
pub struct Run {
    asked: Asked,
    trials: Option<(Trials<'static>, u64)>,
}

impl Run {
    /// Answers all but the trials.
    pub fn begin(question: &str, bench: &Tree, options: &Tree) -> Result<Run, Faults> {
        let question = find_question(question)?;
        let mut faults = Faults::new();
        let bench = Bench::from_tree(bench).map_err(|found| faults.extend(found)).ok();
        let mut reader = Reader::strict();
        let options = reader.part(Some(options), "/options", &["sweep", "solve", "uncertainty", "trials"]);
        let option = |key: &str| options.and_then(|options| options.get(key)).filter(|tree| !tree.is_null());
        let stated = Uncertainty::read(option("uncertainty"), "/options/uncertainty", &mut reader);
        let run = reader.flag(option("trials"), "/options/trials");
        faults.extend(reader.faults);
        let (Some(mut bench), true) = (bench, faults.is_empty()) else {
            return Err(faults);
        };
        if let Some(stated) = &mut bench.uncertainty {
            stated.monte_carlo = stated.monte_carlo.or(Some(MonteCarlo::USUAL)).filter(|_| run);
        }
        let answer = (question.ask)(&bench)?;
        let begun = match (&stated, &bench.uncertainty) {
            (Some(stated), _) => {
                uncertainty::begin(question, &bench, stated, "/options/uncertainty", |_| true)
            }
            (None, Some(stated)) => begin_on_bench(question, &bench, stated),
            (None, None) => Ok(None),
        };
        let swept = option("sweep").map(|given| sweep(&bench, question, given));
        let solved = option("solve").map(|given| solve(&bench, question, given));
        let seed =
            stated.or(bench.uncertainty).and_then(|stated| stated.monte_carlo).map_or(0, |run| run.seed);
        match (begun, swept.transpose(), solved.transpose()) {
            (Ok(begun), Ok(sweep), Ok(solve)) => {
                let (uncertainty, trials) =
                    begun.map_or((None, None), |begun| (Some(begun.uncertain), begun.trials));
                let trials = trials.map(|trials| (trials, seed));
                Ok(Run { asked: Asked { answer, uncertainty, sweep, solve }, trials })
            }
            (begun, swept, solved) => {
                Err([begun.err(), swept.err(), solved.err()].into_iter().flatten().flatten().collect())
            }
        }
    }

    /// Goes on by so many trials.
    pub fn advance(&mut self, trials: usize) {
        if let Some((run, _)) = &mut self.trials {
            run.advance(trials);
        }
    }

    /// Trials so far.
    pub fn count(&self) -> usize {
        self.trials.as_ref().map_or(0, |(run, _)| run.count())
    }

    /// Whether nothing is left to be done.
    pub fn done(&self) -> bool {
        self.trials.as_ref().is_none_or(|(run, _)| run.done())
    }

    /// The answer with what the trials gave so far.
    pub fn finish(self) -> Asked {
        let Asked { mut answer, uncertainty, sweep, solve } = self.asked;
        let uncertainty = match (uncertainty, self.trials) {
            (Some(uncertain), Some((trials, seed))) => Some(uncertain.with_trials(trials, seed)),
            (uncertainty, _) => uncertainty,
        };
        if let Some(uncertain) = &uncertainty {
            show(uncertain, answer.shown_mut());
        }
        Asked { answer, uncertainty, sweep, solve }
    }
}

/// The doubts of a bench may concern other questions too.
fn begin_on_bench(question: &Question, bench: &Bench, stated: &Uncertainty) -> Result<Option<Begun>, Faults> {
    let of = stated.of.as_deref();
    let known = of
        .is_none_or(|of| (question.numbers)(bench).is_ok_and(|all| all.iter().any(|(name, _)| *name == of)));
    // The number that is wanted may be one of another question.
    let stated = Uncertainty { of: stated.of.clone().filter(|_| known), ..stated.clone() };
    let concerns = |pointer: &str| question.fields.iter().any(|part| under(pointer, part));
    uncertainty::begin(question, bench, &stated, "/uncertainty", concerns)
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
    let typed::Understanding { bench, understood, tables, mut faults } = understand(typed, decimal_mark);
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

/// Reads a digital calibration certificate from the text of its file.
pub fn read_dcc(text: &str, choices: &Tree) -> Result<DccReading, Faults> {
    record::read_dcc(text, choices)
}

/// Writes the certificate of a bench's meter as a digital calibration certificate.
pub fn write_dcc(bench: &Tree, administration: &Tree) -> Result<String, Faults> {
    let bench = Bench::from_tree(bench)?;
    match bench.meter.as_ref().and_then(|meter| meter.certificate.as_ref()) {
        Some(certificate) => record::write_dcc(certificate, administration),
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

/// The demonstration bench: the invented observatory Ansa Ridge.
pub fn demo() -> Tree {
    // The file is part of the program, and a test reads it through the strict door.
    Tree::from_json(include_str!("bench/demo.json")).unwrap_or_default()
}

/// The version of this program.
pub fn version() -> &'static str {
    env!("CARGO_PKG_VERSION")
}

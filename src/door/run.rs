//! A question that is answered but for its trials, which go in slices.

use super::{Asked, find_question, under};
use crate::bench::Bench;
use crate::bench::reader::Reader;
use crate::bench::uncertainty::{MonteCarlo, Uncertainty};
use crate::explore::solve::solve;
use crate::explore::sweep::sweep;
use crate::fault::Faults;
use crate::questions::Question;
use crate::tree::Tree;
use crate::uncertainty::asked::{self as uncertainty, Begun};
use crate::uncertainty::doubts::fill_means;
use crate::uncertainty::shown::show;
use crate::uncertainty::trials::Trials;

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
        if let Some(stated) = stated.as_ref().or(bench.uncertainty.clone().as_ref()) {
            fill_means(stated, &mut bench);
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
pub(super) fn begin_on_bench(
    question: &Question,
    bench: &Bench,
    stated: &Uncertainty,
) -> Result<Option<Begun>, Faults> {
    let of = stated.of.as_deref();
    let known = of
        .is_none_or(|of| (question.numbers)(bench).is_ok_and(|all| all.iter().any(|(name, _)| *name == of)));
    // The number that is wanted may be one of another question.
    let stated = Uncertainty { of: stated.of.clone().filter(|_| known), ..stated.clone() };
    let concerns = |pointer: &str| question.fields.iter().any(|part| under(pointer, part));
    uncertainty::begin(question, bench, &stated, "/uncertainty", concerns)
}

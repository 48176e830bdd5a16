//! What the meter says of its own readings, and which words of it mean "good".

use crate::record::words::folded;
use serde::Serialize;

/// Words that mean "nothing is wrong" where nobody says otherwise, lower case without accents. A bare 0 is SCPI's "no
/// error".
const GOOD: &[&str] = &[
    "",
    "0",
    "ok",
    "good",
    "valid",
    "normal",
    "pass",
    "passed",
    "none",
    "no error",
    "gut",
    "gultig",
    "in ordnung",
    "bon",
    "valide",
    "bien",
    "valido",
    "correcto",
];

/// Different words that are listed; a column with more of them is hardly a status.
const MOST_WORDS: usize = 64;

/// A word of the status column.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct StatusWord {
    /// As it stands there.
    pub word: String,
    /// On how many rows.
    pub rows: usize,
    /// Whether rows that bear it count.
    pub good: bool,
}

/// Judges and counts the words.
#[derive(Default)]
pub(super) struct Statuses {
    /// The words that mean good, if a person chose them.
    chosen: Option<Vec<String>>,
    seen: Vec<StatusWord>,
    last: usize,
}

impl Statuses {
    pub(super) fn new(chosen: Option<Vec<String>>) -> Statuses {
        Statuses { chosen, ..Statuses::default() }
    }

    /// Whether a row with this status counts.
    pub(super) fn is_good(&mut self, cell: &[u8]) -> bool {
        let same = |known: &StatusWord| known.word.as_bytes() == cell;
        // Most rows say what the row before said.
        if !self.seen.get(self.last).is_some_and(same) {
            self.last = self.seen.iter().position(same).unwrap_or_else(|| self.note(cell));
        }
        match self.seen.get_mut(self.last).filter(|known| same(known)) {
            Some(known) => {
                known.rows += 1;
                known.good
            }
            None => self.judge(&String::from_utf8_lossy(cell)),
        }
    }

    fn note(&mut self, cell: &[u8]) -> usize {
        if self.seen.len() < MOST_WORDS
            && let Ok(word) = std::str::from_utf8(cell)
        {
            let good = self.judge(word);
            self.seen.push(StatusWord { word: word.to_owned(), rows: 0, good });
        }
        self.seen.len().saturating_sub(1)
    }

    fn judge(&self, word: &str) -> bool {
        match &self.chosen {
            Some(chosen) => chosen.iter().any(|good| good == word),
            None => GOOD.contains(&folded(word).as_str()),
        }
    }

    /// The words in the order in which they came.
    pub(super) fn words(self) -> Vec<StatusWord> {
        self.seen
    }
}

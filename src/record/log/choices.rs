//! What a person decided about a log, in place of what would be recognised.

use super::preamble::SettingFrom;
use crate::bench::reader::Reader;
use crate::fault::Faults;
use crate::record::choices::Choices;
use crate::tree::Tree;

/// Decisions that overrule what is recognised; whatever is absent is recognised from the text.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct LogChoices {
    /// How the table is cut and what its columns hold.
    pub table: Choices,
    /// The words of the status column that mean good; nothing means the usual ones.
    pub good_status: Option<Vec<String>>,
    /// Where the meter's wavelength setting is taken from: from the file if it says so, or from the bench.
    pub setting: SettingFrom,
}

impl LogChoices {
    /// The entries that it may have.
    pub const KEYS: [&'static str; 6] =
        ["delimiter", "decimal_mark", "first_row", "columns", "good_status", "setting"];

    /// Reads choices as they come from outside; all faults at once, each under `pointer`.
    pub fn from_tree(tree: &Tree, pointer: &str) -> Result<LogChoices, Faults> {
        let mut reader = Reader::strict();
        let map = reader.part(Some(tree), pointer, &Self::KEYS).unwrap_or(&Tree::Null);
        let own = |key: &str| matches!(key, "good_status" | "setting") || !Self::KEYS.contains(&key);
        let rest = match map {
            Tree::Map(entries) => Tree::Map(entries.iter().filter(|(key, _)| !own(key)).cloned().collect()),
            other => other.clone(),
        };
        let at = |key: &str| format!("{pointer}/{key}");
        let setting = reader.word(map.get("setting"), &at("setting"), SettingFrom::WORDS);
        let words = reader.list(map.get("good_status"), &at("good_status"));
        let good_status = words.map(<[Tree]>::to_vec).map(|words| {
            let word = |(index, word): (usize, &Tree)| {
                reader.text(Some(word), &format!("{pointer}/good_status/{index}")).trim().to_owned()
            };
            words.iter().enumerate().map(word).collect()
        });
        let table = Choices::from_tree(&rest, pointer).map_err(|found| reader.faults.extend(found)).ok();
        match table {
            Some(table) if reader.faults.is_empty() => {
                Ok(LogChoices { table, good_status, setting: setting.unwrap_or_default() })
            }
            _ => Err(reader.faults),
        }
    }
}

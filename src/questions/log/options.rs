//! What a person says about a log beside the log itself.

use crate::bench::Bench;
use crate::bench::field::Limits;
use crate::bench::reader::Reader;
use crate::fault::Faults;
use crate::quantity::kind;
use crate::record::{DecimalMark, Delimiter, LogChoices};
use crate::tree::Tree;

/// Options for a log.
#[derive(Debug, Clone, PartialEq)]
pub struct LogOptions {
    /// How the table is read.
    pub choices: LogChoices,
    /// The bench on which it was taken: the source, and the meter with its setting and certificate.
    pub bench: Bench,
    /// An uncertainty from elsewhere, in place of the certificate's own.
    pub uncertainty: Option<GivenUncertainty>,
    /// Whether the corrected log is wanted, and how it is written.
    pub corrected: Option<Written>,
}

/// A relative uncertainty of the corrected power, with its coverage factor.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct GivenUncertainty {
    /// Standard uncertainty over the power.
    pub relative_standard: f64,
    /// The k by which it is expanded.
    pub coverage_factor: f64,
}

/// How the corrected log is written; what is absent is as in the log itself.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct Written {
    /// What parts the cells. Beside a decimal comma no comma can.
    pub delimiter: Option<Delimiter>,
    /// What stands before the tenths.
    pub decimal_mark: Option<DecimalMark>,
}

impl LogOptions {
    /// Reads options as they come from outside; all faults at once.
    pub fn from_tree(tree: &Tree) -> Result<LogOptions, Faults> {
        const AT: &str = "/options";
        let mut reader = Reader::strict();
        let keys = ["choices", "bench", "uncertainty", "corrected"];
        let map = reader.part(Some(tree), AT, &keys).unwrap_or(&Tree::Null);
        let uncertainty = uncertainty(map.get("uncertainty"), &format!("{AT}/uncertainty"), &mut reader);
        let corrected = written(map.get("corrected"), &format!("{AT}/corrected"), &mut reader);
        let mut faults = reader.faults;
        let choices = LogChoices::from_tree(map.get("choices").unwrap_or(&Tree::Null), "/choices");
        let choices = choices.map_err(|found| faults.extend(found)).unwrap_or_default();
        let bench = map.get("bench").filter(|bench| !bench.is_null());
        let bench = Bench::from_tree(bench.unwrap_or(&Tree::Map(Vec::new())));
        match bench.map_err(|found| faults.extend(found)) {
            Ok(bench) if faults.is_empty() => Ok(LogOptions { choices, bench, uncertainty, corrected }),
            _ => Err(faults),
        }
    }
}

fn uncertainty(tree: Option<&Tree>, at: &str, reader: &mut Reader) -> Option<GivenUncertainty> {
    let map = reader.part(tree, at, &["relative_standard", "coverage_factor"])?;
    let mut number = |key: &str, name: &str, limits: Limits| {
        let place = format!("{at}/{key}");
        if map.get(key).is_none_or(Tree::is_null) {
            reader.missing(&place, &format!("Needed beside the other one: {name}."));
        }
        reader.of_kind(map.get(key), &place, name, &kind::NUMBER, &limits).map(|number| number.value)
    };
    let relative =
        number("relative_standard", "the relative standard uncertainty", Limits::between(0.0, 1.0));
    let factor = number("coverage_factor", "the coverage factor", Limits::between(1.0, 10.0));
    Some(GivenUncertainty { relative_standard: relative?, coverage_factor: factor? })
}

fn written(tree: Option<&Tree>, at: &str, reader: &mut Reader) -> Option<Written> {
    let map = reader.part(tree, at, &["delimiter", "decimal_mark"])?;
    let given = |key: &str| map.get(key).filter(|word| !word.is_null());
    let delimiter = given("delimiter")
        .and_then(|word| reader.word(Some(word), &format!("{at}/delimiter"), Delimiter::NAMES));
    let decimal_mark = given("decimal_mark")
        .and_then(|word| reader.word(Some(word), &format!("{at}/decimal_mark"), DecimalMark::NAMES));
    Some(Written { delimiter, decimal_mark })
}

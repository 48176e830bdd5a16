//! What is a whole log of readings worth?

mod correction;
mod curves;
mod envelope;
mod options;
mod shown;
mod summary;
mod write;

use super::curve::Banded;
use super::shown::Shown;
use crate::fault::Faults;
use crate::quantity::write::brief;
use crate::record::{BadRow, LogReading, LogRow, LogStream, Refused, Shows, Unit};
use correction::{Applied, Correction};
pub use correction::{CorrectionReport, Setting, Stated};
use envelope::Envelope;
pub use options::{GivenUncertainty, LogOptions, Written};
use serde::Serialize;
pub use summary::{Extreme, Summary};
use summary::{Gathered, level};
use write::{Corrected, Writer};

/// Bad rows that are listed; of more, only how many there are.
pub const MOST_LISTED: usize = 100;

/// A log, understood, corrected and summed up.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Log {
    /// How it was understood; its bad rows are the first [`MOST_LISTED`].
    pub reading: LogReading,
    /// How many rows there are of which kind.
    pub counts: Counts,
    /// Statistics of the powers as read; absent without any.
    pub raw: Option<Summary>,
    /// Statistics of the corrected powers; absent without any.
    pub corrected: Option<Summary>,
    /// How rows were corrected; absent where not one could be.
    pub correction: Option<CorrectionReport>,
    /// Why no row could be corrected.
    pub correction_faults: Faults,
    /// Power over time.
    pub curves: Vec<Banded>,
    /// The same as it is shown.
    pub shown: Shown,
    /// The corrected log as text, where it was asked for and was not taken in slices.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub text: Option<String>,
}

/// Rows by what became of them: `rows` is the sum of `read`, `no_reading`, `over_range`, `flagged` and `bad`.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, Serialize)]
pub struct Counts {
    /// All rows below the header that are neither empty nor remarks.
    pub rows: usize,
    /// Rows with a power that counts.
    pub read: usize,
    /// Of those, rows that were corrected.
    pub corrected: usize,
    /// Of the rows that were read, those below 0 W, which have no level in dBm.
    pub negative: usize,
    /// Of the rows that were read, those of exactly 0 W, which have none either.
    pub zero: usize,
    /// Rows on which the meter had no reading.
    pub no_reading: usize,
    /// Rows on which the light was too much for the meter.
    pub over_range: usize,
    /// Rows whose status is not good.
    pub flagged: usize,
    /// Rows that cannot be read.
    pub bad: usize,
    /// Rows that were read, but not corrected, because the certificate does not reach; they are listed with the bad ones.
    pub uncorrected: usize,
    /// Times that go back.
    pub steps_back: usize,
}

/// Reads, corrects and sums up a log that arrives in slices of bytes, as UTF-8. How it is sliced makes no difference.
///
/// # Example
///
/// ```
/// use leastlight::questions::log::LogReader;
/// use leastlight::tree::Tree;
///
/// let mut log = LogReader::new(&Tree::Null);
/// log.push(b"Time (s);Power (dBm)\n0;-20\n");
/// log.push(b"1;-20,5\n");
/// let log = log.finish().unwrap();
/// assert_eq!(log.counts.read, 2);
/// assert_eq!(log.correction_faults[0].pointer, "/meter");
/// ```
pub struct LogReader {
    state: Result<Box<Running>, Faults>,
}

struct Running {
    stream: LogStream,
    work: Work,
}

/// What is done with each row.
struct Work {
    correction: Result<Correction, Faults>,
    writer: Option<Writer>,
    counts: Counts,
    bad_rows: Vec<BadRow>,
    raw: Gathered,
    corrected: Gathered,
    raw_columns: Envelope,
    corrected_columns: Envelope,
    /// The first time, and the one before.
    times: Option<(f64, f64)>,
    /// Whether each row that was read has a time.
    all_timed: bool,
    /// Whether the first reading was a level.
    as_level: Option<bool>,
}

impl LogReader {
    /// A reader with options: `choices` for the table, the `bench`, an `uncertainty` from elsewhere, and how the
    /// `corrected` log is written, if it is wanted. What is wrong with them is told at the end.
    pub fn new(options: &crate::tree::Tree) -> LogReader {
        LogReader { state: LogOptions::from_tree(options).map(|options| Box::new(Running::new(options))) }
    }

    /// Takes the next bytes.
    pub fn push(&mut self, bytes: &[u8]) {
        if let Ok(running) = &mut self.state {
            let Running { stream, work } = running.as_mut();
            stream.push(bytes, &mut |row| work.row(row));
        }
    }

    /// The bytes of the corrected log that were written since the last time.
    pub fn take(&mut self) -> Vec<u8> {
        self.state
            .as_mut()
            .ok()
            .and_then(|running| running.work.writer.as_mut())
            .map(Writer::take)
            .unwrap_or_default()
    }

    /// How many rows have been read so far.
    pub fn rows(&self) -> usize {
        self.state.as_ref().map_or(0, |running| running.work.counts.rows)
    }

    /// Whether further bytes are of no use.
    pub fn is_refused(&self) -> bool {
        self.state.as_ref().map_or(true, |running| running.stream.is_refused())
    }

    /// Reads what is left and sums up. What was written of the corrected log and not taken yet is in `text`.
    pub fn finish(self) -> Result<Log, Refused> {
        let running = self.state.map_err(|faults| Refused { faults, reading: None })?;
        let Running { stream, mut work } = *running;
        let reading = stream.finish(&mut |row| work.row(row))?;
        Ok(work.log(reading))
    }
}

impl Running {
    fn new(options: LogOptions) -> Running {
        let correction = Correction::new(&options);
        let writer = options.corrected.map(|wanted| {
            let correction = correction.as_ref().ok();
            let k = correction.and_then(Correction::expanded).map(|(_, k)| k);
            Writer::new(wanted, remarks(correction), k)
        });
        let work = Work {
            correction,
            writer,
            counts: Counts::default(),
            bad_rows: Vec::new(),
            raw: Gathered::default(),
            corrected: Gathered::default(),
            raw_columns: Envelope::new(),
            corrected_columns: Envelope::new(),
            times: None,
            all_timed: true,
            as_level: None,
        };
        Running { stream: LogStream::new(options.choices), work }
    }
}

/// What was done, for the head of the corrected log.
fn remarks(correction: Option<&Correction>) -> Vec<String> {
    let mut lines = vec![format!("Log corrected by Leastlight {}", env!("CARGO_PKG_VERSION"))];
    let Some(correction) = correction else {
        lines.push("No row could be corrected: the bench lacks the source or the certificate".to_owned());
        return lines;
    };
    lines.push(format!(
        "Power = reading × the certificate's factor from the wavelength setting to light of {} nm",
        brief(correction.source_nm(), 8)
    ));
    lines.push(match correction.expanded() {
        Some((relative, k)) => format!(
            "Expanded uncertainty: {} % of the power, k = {}, {}",
            brief(relative * 100.0, 4),
            brief(k, 4),
            if correction.is_given() { "as given" } else { "from the certificate alone" }
        ),
        None => "Expanded uncertainty: none, for none is stated with its k".to_owned(),
    });
    lines
}

impl Work {
    fn row(&mut self, row: &LogRow) {
        self.counts.rows += 1;
        let since_s = self.since(row.time_s);
        let number = self.counts.rows;
        let mut out =
            Corrected { setting_nm: None, power_w: None, level_dbm: None, expanded_w: None, reason: "" };
        let reason: String;
        let mut raw_w = None;
        match &row.shows {
            Shows::NoReading => {
                self.counts.no_reading += 1;
                out.reason = "no reading";
            }
            Shows::OverRange => {
                self.counts.over_range += 1;
                out.reason = "over range";
            }
            Shows::Flagged => {
                self.counts.flagged += 1;
                out.reason = "the status is not good";
            }
            Shows::Bad(sentence) => {
                self.counts.bad += 1;
                self.list(row, sentence);
                out.reason = sentence;
            }
            Shows::Power { power_w, unit, level_dbm } => {
                raw_w = Some(*power_w);
                self.read(*power_w, *unit, since_s, row);
                match self.correct(row) {
                    None => {}
                    Some(Ok(Applied { setting_nm, factor, correction_db })) => {
                        let corrected_w = power_w * factor;
                        self.counts.corrected += 1;
                        self.corrected.add(corrected_w, since_s, row);
                        out.setting_nm = Some(setting_nm);
                        out.power_w = Some(corrected_w);
                        if self.writer.is_some() {
                            out.level_dbm =
                                level_dbm.map(|dbm| dbm + correction_db).or_else(|| level(corrected_w));
                            let expanded = self.correction.as_ref().ok().and_then(Correction::expanded);
                            out.expanded_w = expanded.map(|(relative, _)| relative * corrected_w.abs());
                        }
                    }
                    Some(Err(sentence)) => {
                        self.counts.uncorrected += 1;
                        self.list(row, &sentence);
                        reason = sentence;
                        out.reason = &reason;
                    }
                }
            }
        }
        self.raw_columns.add(number, row.time_s, raw_w);
        self.corrected_columns.add(number, row.time_s, out.power_w);
        if let Some(writer) = &mut self.writer {
            writer.row(row, &out);
        }
    }

    /// Seconds after the first time.
    fn since(&mut self, time_s: Option<f64>) -> Option<f64> {
        let now = time_s?;
        let (first, before) = self.times.unwrap_or((now, now));
        self.counts.steps_back += usize::from(now < before);
        self.times = Some((first, now));
        Some(now - first)
    }

    fn read(&mut self, power_w: f64, unit: Unit, since_s: Option<f64>, row: &LogRow) {
        self.counts.read += 1;
        self.counts.negative += usize::from(power_w < 0.0);
        self.counts.zero += usize::from(power_w == 0.0);
        self.all_timed &= since_s.is_some();
        self.as_level.get_or_insert(unit == Unit::Dbm);
        self.raw.add(power_w, since_s, row);
    }

    /// The setting of a row with its factor, or why there is none; nothing where no row can be corrected.
    fn correct(&mut self, row: &LogRow) -> Option<Result<Applied, String>> {
        let correction = self.correction.as_mut().ok()?;
        let setting_nm = match correction.setting_nm(row) {
            Ok(setting_nm) => setting_nm,
            Err(sentence) => return Some(Err(sentence)),
        };
        Some(correction.factor(setting_nm).map_err(str::to_owned))
    }

    fn list(&mut self, row: &LogRow, sentence: &str) {
        if self.bad_rows.len() < MOST_LISTED {
            self.bad_rows.push(BadRow { line: row.line, text: row.excerpt(), sentence: sentence.to_owned() });
        }
    }

    fn log(mut self, mut reading: LogReading) -> Log {
        let text = self.writer.as_mut().map(|writer| String::from_utf8_lossy(&writer.take()).into_owned());
        let correction = self.correction.and_then(Correction::report);
        let (correction, correction_faults) = match correction {
            Ok(report) => (Some(report), Faults::new()),
            // One fault for all rows is told once; where no row shows a power, there was nothing to correct.
            Err(_) if self.counts.read == 0 => (None, Faults::new()),
            Err(faults) => {
                if self.counts.uncorrected == self.counts.read {
                    let all = |row: &BadRow| faults.iter().any(|fault| fault.sentence == row.sentence);
                    self.bad_rows.retain(|row| !all(row));
                }
                (None, faults)
            }
        };
        let by_time = self.times.is_some() && self.all_timed && self.counts.steps_back == 0;
        let columns = if correction.is_some() { self.corrected_columns } else { self.raw_columns };
        let curve = curves::over_time(
            &columns.columns(),
            correction.is_some(),
            by_time,
            self.as_level.unwrap_or_default(),
        );
        reading.table.rows_read = self.counts.read;
        reading.table.bad_rows = self.bad_rows;
        let mut log = Log {
            reading,
            counts: self.counts,
            raw: self.raw.summary(),
            corrected: self.corrected.summary(),
            correction,
            correction_faults,
            curves: curve.into_iter().collect(),
            shown: Shown::default(),
            text,
        };
        log.shown = shown::shown(&log, by_time);
        log
    }
}

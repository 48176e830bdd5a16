//! A log that arrives in slices: its head first, then its rows.

use super::choices::LogChoices;
use super::columns::Times;
use super::cut::{RawRow, RowCutter};
use super::head::{Head, newline};
use super::row::{LogRow, RowReader};
use super::status::{StatusWord, Statuses};
use crate::fault::Faults;
use crate::record::reading::{BadRow, Reading};
use serde::Serialize;

/// So much of the file is looked at to understand it: some thousand rows.
const HEAD: usize = 1 << 16;

/// How a log was understood.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct LogReading {
    /// How the table was understood; its bad rows are the first ones only.
    #[serde(flatten)]
    pub table: Reading,
    /// How the times are written.
    pub times: Times,
    /// The wavelength to which the meter was set, as a line above the rows names it, nm.
    pub stated_setting_nm: Option<f64>,
    /// The words of the status column, and which of them count as good.
    pub status: Vec<StatusWord>,
}

/// Why a log cannot be read, with what was understood of it so far, so that it can be chosen otherwise.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Refused {
    /// What is wrong or must be chosen.
    pub faults: Faults,
    /// How the head was understood, if it has rows at all.
    pub reading: Option<LogReading>,
}

/// Reads a log whose bytes arrive in slices.
///
/// # Example
///
/// ```
/// use leastlight::record::{LogChoices, LogStream, Shows};
///
/// let mut powers = Vec::new();
/// let mut each = |row: &leastlight::record::LogRow| {
///     if let Shows::Power { power_w, .. } = row.shows {
///         powers.push(power_w);
///     }
/// };
/// let mut stream = LogStream::new(LogChoices::default());
/// stream.push(b"Time (s),Power (W)\n0.0,1.5E-6\n0.1,9.9", &mut each);
/// stream.push(b"1E37\n0.2,1.7E-6\n", &mut each);
/// let reading = stream.finish(&mut each).unwrap();
/// assert_eq!(powers, [1.5e-6, 1.7e-6]);
/// assert_eq!(reading.table.header_line, Some(1));
/// ```
pub struct LogStream {
    choices: LogChoices,
    state: State,
}

enum State {
    /// The bytes so far.
    Head(Vec<u8>),
    Rows(Box<Rows>),
    Refused(Box<Refused>),
}

struct Rows {
    cutter: RowCutter,
    reader: RowReader,
}

impl LogStream {
    /// A log to be read as chosen.
    pub fn new(choices: LogChoices) -> LogStream {
        LogStream { choices, state: State::Head(Vec::new()) }
    }

    /// Takes the next bytes; each row that ends within them is read and goes to `each`.
    pub fn push(&mut self, bytes: &[u8], each: &mut impl FnMut(&LogRow)) {
        match &mut self.state {
            State::Head(head) => {
                head.extend_from_slice(bytes);
                if head.len() >= HEAD {
                    self.begin(false, each);
                }
            }
            State::Rows(rows) => rows.push(bytes, each),
            State::Refused(_) => {}
        }
    }

    /// Reads what is left and says how the log was understood.
    pub fn finish(mut self, each: &mut impl FnMut(&LogRow)) -> Result<LogReading, Refused> {
        if let State::Head(_) = self.state {
            self.begin(true, each);
        }
        match self.state {
            State::Rows(rows) => Ok(rows.finish(each)),
            State::Refused(refused) => Err(*refused),
            State::Head(_) => Err(Refused { faults: Faults::new(), reading: None }),
        }
    }

    /// Whether the log cannot be read, so that further bytes are of no use.
    pub fn is_refused(&self) -> bool {
        matches!(self.state, State::Refused(_))
    }

    /// Understands the head and reads what has arrived so far.
    fn begin(&mut self, at_end: bool, each: &mut impl FnMut(&LogRow)) {
        let State::Head(bytes) = std::mem::replace(&mut self.state, State::Head(Vec::new())) else { return };
        let bytes = bytes.strip_prefix(b"\xef\xbb\xbf").unwrap_or(&bytes);
        let newline = newline(bytes);
        let sample = bytes.get(..HEAD).unwrap_or(bytes);
        // The last line may be broken off.
        let whole = match at_end && sample.len() == bytes.len() {
            true => sample,
            false => memchr::memrchr(newline, sample).and_then(|at| sample.get(..=at)).unwrap_or(sample),
        };
        let refused = |faults, reading| State::Refused(Box::new(Refused { faults, reading }));
        let head = match Head::of(&String::from_utf8_lossy(whole), &self.choices) {
            Ok(head) => head,
            Err(faults) => {
                self.state = refused(faults, None);
                return;
            }
        };
        let cutter = RowCutter::new(head.delimiter, newline);
        let (faults, early) = (head.faults.clone(), reading(&head, Statuses::default(), 0));
        let statuses = Statuses::new(self.choices.good_status.clone());
        self.state = match RowReader::new(head, statuses) {
            Some(reader) if faults.is_empty() => {
                let mut rows = Box::new(Rows { cutter, reader });
                rows.push(bytes, each);
                State::Rows(rows)
            }
            _ => refused(faults, Some(early)),
        };
    }
}

impl Rows {
    fn push(&mut self, bytes: &[u8], each: &mut impl FnMut(&LogRow)) {
        let Rows { cutter, reader } = self;
        cutter.push(bytes, &mut |raw| read(reader, &raw, each));
    }

    fn finish(mut self, each: &mut impl FnMut(&LogRow)) -> LogReading {
        let Rows { cutter, reader } = &mut self;
        cutter.finish(&mut |raw| read(reader, &raw, each));
        let RowReader { head, statuses, passed_over, .. } = self.reader;
        reading(&head, statuses, passed_over)
    }
}

/// Reads one row below the head.
fn read(reader: &mut RowReader, raw: &RawRow, each: &mut impl FnMut(&LogRow)) {
    if raw.line >= reader.head.start_line
        && let Some(row) = reader.row(raw)
    {
        each(&row);
    }
}

fn reading(head: &Head, statuses: Statuses, passed_over: usize) -> LogReading {
    LogReading {
        table: head.reading(0, passed_over, Vec::<BadRow>::new()),
        times: head.columns.times,
        stated_setting_nm: head.setting_nm,
        status: statuses.words(),
    }
}

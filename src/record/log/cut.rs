//! Cutting bytes into rows and rows into cells, slice by slice.

use crate::record::names::Delimiter;
use crate::record::rows::words;
use std::ops::Range;

/// The most bytes that one row may have. A quotation mark that is not closed within them is a plain character, so that
/// it does not swallow the rest of the file.
pub(super) const LONGEST_ROW: usize = 1 << 16;

/// A row of the text, as it stands there.
pub(super) struct RawRow<'b> {
    /// The line on which it begins, counted from 1.
    pub(super) line: usize,
    /// Without the end of its line.
    pub(super) bytes: &'b [u8],
    /// Why it cannot be cut into cells.
    pub(super) trouble: Option<&'static str>,
}

/// Cuts bytes that come in slices into rows.
pub(super) struct RowCutter {
    quotes: Option<u8>,
    newline: u8,
    pending: Vec<u8>,
    line: usize,
    /// Whether the rest of a line is passed over that was too long.
    skipping: bool,
}

const UNCLOSED: &str = "A quotation mark is opened and never closed.";
const TOO_LONG: &str = "The row is too long to be one of a log.";

/// Where the first row of some bytes ends.
enum End {
    /// So many bytes with the end of the line; and what is wrong with it.
    At(usize, Option<&'static str>),
    /// No line ends within the longest row.
    TooLong,
    /// Not within these bytes.
    Beyond,
}

impl RowCutter {
    pub(super) fn new(delimiter: Delimiter, newline: u8) -> RowCutter {
        RowCutter { quotes: delimiter.byte(), newline, pending: Vec::new(), line: 1, skipping: false }
    }

    /// Takes the next bytes; each row that ends within them goes to `each`.
    pub(super) fn push(&mut self, mut bytes: &[u8], each: &mut impl FnMut(RawRow)) {
        // What is left of the slice before is completed line by line, until it is used up.
        while (self.skipping || !self.pending.is_empty()) && !bytes.is_empty() {
            let end = memchr::memchr(self.newline, bytes).map_or(bytes.len(), |at| at + 1);
            // No more than a row may have, so that slicing makes no difference.
            let room = if self.skipping { end } else { LONGEST_ROW.saturating_sub(self.pending.len()) };
            let (now, later) = bytes.split_at(end.min(room));
            bytes = later;
            self.pending.extend_from_slice(now);
            let pending = std::mem::take(&mut self.pending);
            let used = self.rows(&pending, false, each);
            self.pending = pending;
            self.pending.drain(..used);
        }
        let used = self.rows(bytes, false, each);
        self.pending.extend_from_slice(bytes.get(used..).unwrap_or_default());
    }

    /// Whatever is left is the last row.
    pub(super) fn finish(&mut self, each: &mut impl FnMut(RawRow)) {
        let pending = std::mem::take(&mut self.pending);
        self.rows(&pending, true, each);
    }

    /// Cuts all rows that end within the bytes; gives how many bytes they had.
    fn rows(&mut self, bytes: &[u8], at_end: bool, each: &mut impl FnMut(RawRow)) -> usize {
        let mut used = 0;
        while let Some(rest) = bytes.get(used..).filter(|rest| !rest.is_empty()) {
            if self.skipping {
                match memchr::memchr(self.newline, rest) {
                    Some(at) => {
                        self.skipping = false;
                        self.line += 1;
                        used += at + 1;
                        continue;
                    }
                    None => return bytes.len(),
                }
            }
            match self.end(rest, at_end) {
                End::Beyond => break,
                End::At(length, trouble) => {
                    let row = rest.get(..length).unwrap_or(rest);
                    each(RawRow { line: self.line, bytes: without_end(row, self.newline), trouble });
                    self.line += memchr::memchr_iter(self.newline, row).count();
                    used += length;
                }
                End::TooLong => {
                    let row = rest.get(..LONGEST_ROW).unwrap_or(rest);
                    each(RawRow { line: self.line, bytes: row, trouble: Some(TOO_LONG) });
                    self.skipping = true;
                    used += row.len();
                }
            }
        }
        used
    }

    fn end(&self, bytes: &[u8], at_end: bool) -> End {
        let window = bytes.get(..LONGEST_ROW).unwrap_or(bytes);
        let first = memchr::memchr(self.newline, window);
        let line = window.get(..first.unwrap_or(window.len())).unwrap_or(window);
        let closed = match self.quotes {
            Some(delimiter) if memchr::memchr(b'"', line).is_some() => {
                quoted_end(window, delimiter, self.newline)
            }
            _ => Closed::At(first),
        };
        let all = window.len() == LONGEST_ROW || at_end;
        match (closed, first) {
            (Closed::At(Some(at)), _) => End::At(at + 1, None),
            (Closed::At(None), _) if at_end && window.len() == bytes.len() => End::At(window.len(), None),
            (Closed::At(None), None) if all => End::TooLong,
            (Closed::At(None) | Closed::Not, Some(first)) if all => End::At(first + 1, Some(UNCLOSED)),
            (Closed::Not, None) if at_end && window.len() == bytes.len() => {
                End::At(window.len(), Some(UNCLOSED))
            }
            (Closed::Not, None) if all => End::TooLong,
            _ => End::Beyond,
        }
    }
}

/// Where a row ends that has quotation marks in it.
enum Closed {
    /// At this end of a line, or with the bytes.
    At(Option<usize>),
    /// A quotation mark is still open.
    Not,
}

fn quoted_end(bytes: &[u8], delimiter: u8, newline: u8) -> Closed {
    let (mut quoted, mut cell_begins, mut closed) = (false, true, None);
    for (at, &byte) in bytes.iter().enumerate() {
        match byte {
            b'"' if quoted => (quoted, closed) = (false, Some(at + 1)),
            // Two in a row are one that is meant: the second opens again.
            b'"' if cell_begins || closed == Some(at) => quoted = true,
            _ if quoted => {}
            _ if byte == newline => return Closed::At(Some(at)),
            _ => {}
        }
        cell_begins = !quoted && byte == delimiter;
    }
    if quoted { Closed::Not } else { Closed::At(None) }
}

fn without_end(row: &[u8], newline: u8) -> &[u8] {
    let row = row.strip_suffix(&[newline]).unwrap_or(row);
    row.strip_suffix(b"\r").unwrap_or(row)
}

/// The cells of one row; kept from row to row, so that nothing is allocated for each.
#[derive(Default)]
pub(super) struct Cells {
    places: Vec<(Range<usize>, bool)>,
    /// Cells that do not stand in the text as they are meant: quoted ones.
    made: Vec<u8>,
}

impl Cells {
    /// Cuts a row.
    pub(super) fn cut(&mut self, row: &[u8], delimiter: Delimiter) {
        self.places.clear();
        self.made.clear();
        match delimiter.byte() {
            Some(byte) if memchr::memchr(b'"', row).is_some() => self.cut_quoted(row, byte),
            Some(byte) => {
                let mut from = 0;
                for to in memchr::memchr_iter(byte, row).chain([row.len()]) {
                    self.places.push((from..to, false));
                    from = to + 1;
                }
            }
            None => {
                for word in words(&String::from_utf8_lossy(row)) {
                    let from = self.made.len();
                    self.made.extend_from_slice(word.as_bytes());
                    self.places.push((from..self.made.len(), true));
                }
            }
        }
    }

    fn cut_quoted(&mut self, row: &[u8], delimiter: u8) {
        let mut at = 0;
        loop {
            let from = self.made.len();
            let mut quoted = row.get(at) == Some(&b'"');
            at += usize::from(quoted);
            while let Some(&byte) = row.get(at) {
                match byte {
                    b'"' if quoted && row.get(at + 1) == Some(&b'"') => {
                        self.made.push(b'"');
                        at += 1;
                    }
                    b'"' if quoted => quoted = false,
                    _ if !quoted && byte == delimiter => break,
                    _ => self.made.push(byte),
                }
                at += 1;
            }
            self.places.push((from..self.made.len(), true));
            if at >= row.len() {
                return;
            }
            at += 1;
        }
    }

    /// A cell without the space around it; empty where there is none.
    pub(super) fn get<'c>(&'c self, index: usize, row: &'c [u8]) -> &'c [u8] {
        let Some((place, made)) = self.places.get(index) else { return b"" };
        let from: &[u8] = if *made { &self.made } else { row };
        from.get(place.clone()).unwrap_or_default().trim_ascii()
    }

    /// Whether the row is long enough to have a cell, be it empty.
    pub(super) fn has(&self, index: usize) -> bool {
        index < self.places.len()
    }

    /// The number of cells up to the last one that is not empty.
    pub(super) fn width(&self, row: &[u8]) -> usize {
        let filled = |index: &usize| !self.get(*index, row).is_empty();
        (0..self.places.len()).rev().find(filled).map_or(0, |last| last + 1)
    }
}

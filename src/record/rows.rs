//! Cutting text into rows: which character parts the cells, and where each row stands in the text.

use super::cell::is_number;
use super::names::{Delimiter, Unit};
use csv::{ReaderBuilder, StringRecord};

/// A row that is not empty.
pub(super) struct Row<'a> {
    /// The line on which it begins, counted from 1.
    pub(super) line: usize,
    /// The text of the row.
    pub(super) text: &'a str,
    cells: StringRecord,
}

impl Row<'_> {
    /// A cell, without the space around it; empty where there is none.
    pub(super) fn cell(&self, index: usize) -> &str {
        self.cells.get(index).unwrap_or("").trim()
    }

    /// The number of cells up to the last one that is not empty.
    pub(super) fn width(&self) -> usize {
        (0..self.cells.len()).rev().find(|index| !self.cell(*index).is_empty()).map_or(0, |last| last + 1)
    }

    /// All cells, without the space around them.
    pub(super) fn cells(&self) -> impl Iterator<Item = &str> {
        self.cells.iter().map(str::trim)
    }

    /// Whether the row is a remark.
    pub(super) fn is_remark(&self) -> bool {
        self.text.trim_start().starts_with('#')
    }

    /// How many cells are numbers under one of the decimal marks.
    pub(super) fn numbers(&self) -> usize {
        self.cells().filter(|cell| is_number(cell)).count()
    }

    /// The start of the text, for a sentence.
    pub(super) fn excerpt(&self) -> String {
        excerpt(self.text)
    }
}

/// The start of a text on one line, short enough for a sentence.
pub(super) fn excerpt(text: &str) -> String {
    const LONGEST: usize = 120;
    let mut short: String = text.trim().chars().take(LONGEST).collect();
    if text.trim().chars().nth(LONGEST).is_some() {
        short.push('…');
    }
    short.replace(['\n', '\t'], " ")
}

/// The delimiter that a first line such as `sep=;` names.
pub(super) fn named_delimiter(text: &str) -> Option<Delimiter> {
    let first = text.lines().next()?.trim_matches(['"', ' ']);
    let named = first.strip_prefix("sep=").or_else(|| first.strip_prefix("SEP="))?;
    Delimiter::NAMES.iter().map(|(_, one)| *one).find(|one| match one.byte() {
        Some(byte) => named.as_bytes() == [byte],
        None => named == " ",
    })
}

/// Finds the delimiter under which most rows hold two numbers and the fewest other cells. On equal terms the
/// one that rarely stands inside a number or a word goes first.
pub(super) fn sniffed_delimiter(text: &str) -> Delimiter {
    sniffed_by(text, is_number)
}

/// As [`sniffed_delimiter`], with another idea of what a number is.
pub(super) fn sniffed_by(text: &str, is_number: fn(&str) -> bool) -> Delimiter {
    // Enough to be past any preamble; the rest of a long table looks like its beginning.
    const LINES: usize = 400;
    let end = text.match_indices('\n').nth(LINES).map_or(text.len(), |(at, _)| at);
    let sample = text.get(..end).unwrap_or(text);
    let merit = |delimiter: Delimiter| {
        let (mut with_numbers, mut others) = (0, 0);
        for row in rows(sample, delimiter).0.iter().filter(|row| !row.is_remark()) {
            let numbers = row.cells().filter(|cell| is_number(cell)).count();
            if numbers >= 2 {
                with_numbers += 1;
                others += row.cells().filter(|cell| !cell.is_empty()).count() - numbers;
            }
        }
        (with_numbers, std::cmp::Reverse(others))
    };
    let mut best = (Delimiter::Tab, merit(Delimiter::Tab));
    for delimiter in [Delimiter::Semicolon, Delimiter::Comma, Delimiter::Space] {
        let found = merit(delimiter);
        if found > best.1 {
            best = (delimiter, found);
        }
    }
    if best.1.0 == 0 {
        // No row of two numbers: the one that is there at all, for the sentence about what is wrong.
        let parts =
            |delimiter: &&Delimiter| delimiter.byte().is_some_and(|byte| sample.bytes().any(|b| b == byte));
        return [Delimiter::Tab, Delimiter::Semicolon, Delimiter::Comma]
            .iter()
            .find(parts)
            .copied()
            .unwrap_or(Delimiter::Space);
    }
    best.0
}

/// Cuts the text into rows, empty ones left out. The second value says whether quotes were taken as plain
/// characters because one of them is never closed, which would swallow the rest of the table.
pub(super) fn rows(text: &str, delimiter: Delimiter) -> (Vec<Row<'_>>, bool) {
    let unclosed = text.bytes().filter(|b| *b == b'"').count() % 2 == 1;
    let rows = match delimiter.byte() {
        Some(byte) => delimited(text, byte, !unclosed),
        None => spaced(text),
    };
    (rows.into_iter().filter(|row| row.width() > 0).collect(), unclosed)
}

fn delimited(text: &str, delimiter: u8, quoting: bool) -> Vec<Row<'_>> {
    let mut reader = ReaderBuilder::new()
        .has_headers(false)
        .flexible(true)
        .delimiter(delimiter)
        .quoting(quoting)
        .from_reader(text.as_bytes());
    let (mut rows, mut cells) = (Vec::new(), StringRecord::new());
    let (mut line, mut counted) = (1, 0);
    // The reader is given valid text in memory: the only failures it knows, of input and of encoding, cannot
    // occur, and if one did, what was read so far is kept.
    while let Ok(true) = reader.read_record(&mut cells) {
        let end = reader.position().byte() as usize;
        // The reader skips empty lines before a row; the row begins behind them.
        let raw = text.get(counted..end).unwrap_or("");
        let row = raw.trim_start_matches('\n');
        line += raw.len() - row.len();
        rows.push(Row { line, text: row.trim_end_matches('\n'), cells: cells.clone() });
        line += row.bytes().filter(|b| *b == b'\n').count();
        counted = end;
    }
    rows
}

fn spaced(text: &str) -> Vec<Row<'_>> {
    let row = |(index, line)| Row { line: index + 1, text: line, cells: StringRecord::from(words(line)) };
    text.lines().enumerate().map(row).collect()
}

/// Cuts a line at runs of spaces. A unit stays with what it belongs to, and words parted by one space stay
/// together where other cells are parted by more.
pub(super) fn words(line: &str) -> Vec<String> {
    let wide: Vec<&str> = line
        .split("  ")
        .flat_map(|part| part.split('\t'))
        .map(str::trim)
        .filter(|part| !part.is_empty())
        .collect();
    let mut words: Vec<String> = Vec::new();
    if wide.len() >= 2 && !wide.iter().any(|part| part.split(' ').filter(|word| is_number(word)).count() >= 2)
    {
        words.extend(wide.iter().map(|part| part.trim_matches('"').to_owned()));
        return words;
    }
    for word in line.split([' ', '\t']).filter(|word| !word.is_empty()) {
        match words.last_mut() {
            Some(last) if last.ends_with('/') || belongs_to_the_last(word, last) => {
                last.push(' ');
                last.push_str(word);
            }
            _ => words.push(word.to_owned()),
        }
    }
    words.iter().map(|word| word.trim_matches('"').to_owned()).collect()
}

fn belongs_to_the_last(word: &str, last: &str) -> bool {
    let known = Unit::written(word).or_else(|| Unit::written_of_power(word));
    let is_unit = known.is_some() && !is_number(word) && !last.contains(['%', '(', '[', '/']);
    let open = last.matches(['(', '[']).count() > last.matches([')', ']']).count();
    open || is_unit || word.starts_with(['(', '[', '/'])
}

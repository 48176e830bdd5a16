//! Readings of two detectors in turn, for a transfer calibration.

use super::choices::Choices;
use super::names::{Role, Unit};
use super::reading::{BadRow, Reading};
use super::rows::{Row, excerpt};
use super::sheet::{Kind, Placed, Sheet, normal};
use super::time::seconds;
use super::words::folded;
use crate::bench::source::WAVELENGTH_LIMITS;
use crate::fault::{Allowed, Code, Fault, Faults};
use crate::physics::decibel::watt_from_dbm;

/// The readings, told apart by detector.
#[derive(Debug, Clone, PartialEq)]
pub struct Comparison {
    /// The reference's label in the table.
    pub reference: String,
    /// The label of the detector under test.
    pub test: String,
    /// In the order of the table.
    pub blocks: Vec<ReadBlock>,
    /// Whether the table has times, s; otherwise each reading is one step.
    pub has_times: bool,
    /// How the table was understood.
    pub reading: Reading,
}

/// Four readings in the order A B B A: the reference outside and the test inside, or the other way round.
#[derive(Debug, Clone, PartialEq)]
pub struct ReadBlock {
    /// Wavelength of the light, nm.
    pub wavelength_nm: f64,
    /// The line of its first reading, counted from 1.
    pub line: usize,
    /// Time (s, or steps) and reading (W) of the reference.
    pub reference: Vec<(f64, f64)>,
    /// The same of the detector under test.
    pub test: Vec<(f64, f64)>,
}

const KIND: Kind = Kind {
    name: "A table of readings",
    words: &[
        (Role::Power, &["reading", "indicat", "anzeige", "lecture", "lectura"]),
        (
            Role::Detector,
            &[
                "which",
                "detector",
                "device",
                "meter",
                "instrument",
                "head",
                "detektor",
                "gerat",
                "detecteur",
                "appareil",
                "aparato",
            ],
        ),
        (Role::Time, &["time", "zeit", "temps", "heure", "tiempo", "hora"]),
        (Role::Wavelength, &["wl"]),
        (Role::Power, &["power", "level", "leistung", "pegel", "puissance", "niveau", "potencia", "nivel"]),
    ],
    needed: &[Role::Wavelength, Role::Detector, Role::Power],
};

/// Labels that say which is the reference.
const REFERENCE: &[&str] = &[
    "reference",
    "ref",
    "ref.",
    "standard",
    "std",
    "std.",
    "referenz",
    "normal",
    "etalon",
    "referencia",
    "patron",
];

/// Reads the table of a transfer calibration: wavelength, which detector, its reading in W or dBm, and perhaps the time.
///
/// The readings are cut into blocks of four at one wavelength, in the order reference, test, test, reference or the
/// other way round. A reading that belongs to none, or that cannot be read, is named; it ends the block it is in.
/// Which of the two labels is the reference is told by its name (reference, standard, …), else by `reference`: A and B
/// say nothing.
pub fn read_comparison(text: &str, choices: &Choices, reference: Option<&str>) -> Result<Comparison, Faults> {
    let text = normal(text);
    let mut sheet = Sheet::open(&text, choices, &KIND)?;
    let column = |role| sheet.column(role);
    let columns = (column(Role::Wavelength), column(Role::Detector), column(Role::Power));
    let (Some(wavelength), Some(detector), Some(power)) = columns else {
        return Err(vec![Fault::missing("", "Readings need columns of wavelength, detector and reading.")]);
    };
    let time = sheet.column(Role::Time);
    if power.unit.is_none() && !sheet.rows().any(|row| sheet.number(row, power, "reading").is_ok()) {
        let sentence = "The readings name no unit, and watts and levels make another ratio: choose the unit of the \
                        column.";
        return Err(vec![Fault::missing("", sentence)]);
    }
    let labels = labels(&sheet, detector)?;
    let (reference, test) = told_apart(&labels, reference)?;
    let mut cut = Cut::default();
    for (step, row) in sheet.rows().enumerate() {
        let read = one(&sheet, row, [wavelength, power, detector], time, step as f64);
        match read {
            Ok(mut reading) => {
                reading.is_reference = folded(&reading.label) == folded(&reference);
                cut.push(reading);
            }
            Err(sentence) => cut.end(Some(BadRow { line: row.line, text: row.excerpt(), sentence })),
        }
    }
    cut.end(None);
    let Cut { blocks, mut bad_rows, rows_read, .. } = cut;
    if blocks.is_empty() {
        let why =
            bad_rows.first().map_or(String::new(), |row| format!(" Line {}: {}", row.line, row.sentence));
        let sentence = format!("At least one block of four readings is needed; none was found.{why}");
        return Err(vec![Fault::new("", Code::Unreadable, excerpt(&text).as_str().into(), &sentence)]);
    }
    bad_rows.sort_by_key(|row| row.line);
    sheet.said.push(format!("\"{reference}\" is the reference and \"{test}\" the detector under test."));
    let reading = sheet.reading(rows_read, bad_rows);
    Ok(Comparison { reference, test, blocks, has_times: time.is_some(), reading })
}

/// How a text is understood as readings as far as that goes, also where it cannot be read yet. Nothing where it has no
/// rows of numbers.
pub fn comparison_layout(text: &str, choices: &Choices) -> Option<Reading> {
    Sheet::layout(text, choices, &KIND)
}

/// One reading.
struct One {
    line: usize,
    text: String,
    label: String,
    is_reference: bool,
    wavelength_nm: f64,
    time: f64,
    power_w: f64,
}

fn one(
    sheet: &Sheet,
    row: &Row,
    [wavelength, power, detector]: [Placed; 3],
    time: Option<Placed>,
    step: f64,
) -> Result<One, String> {
    let (wavelength_nm, _) = sheet.number(row, wavelength, "wavelength")?;
    if !WAVELENGTH_LIMITS.hold(wavelength_nm) {
        let must = WAVELENGTH_LIMITS.sentence(|nm| format!("{nm} nm"));
        return Err(format!("The wavelength {must}; it is {wavelength_nm} nm."));
    }
    let label = row.cell(detector.index).to_owned();
    if label.is_empty() {
        return Err("The row does not say of which detector it is.".to_owned());
    }
    let power_w = match sheet.number(row, power, "reading")? {
        (level_dbm, Unit::Dbm) => watt_from_dbm(level_dbm),
        (power_w, _) => power_w,
    };
    if !(power_w > 0.0 && power_w < 1e6) {
        return Err("A reading must be above 0 W to be compared with another.".to_owned());
    }
    let time = match time {
        None => step,
        Some(column) => match sheet.number(row, column, "time") {
            Ok((seconds, _)) => seconds,
            Err(sentence) => seconds(row.cell(column.index)).ok_or(sentence)?,
        },
    };
    Ok(One { line: row.line, text: row.excerpt(), label, is_reference: false, wavelength_nm, time, power_w })
}

/// The two labels, as they are first written.
fn labels(sheet: &Sheet, detector: Placed) -> Result<[String; 2], Faults> {
    let mut labels: Vec<String> = Vec::new();
    for row in sheet.rows() {
        let label = row.cell(detector.index);
        if !label.is_empty() && !labels.iter().any(|known| folded(known) == folded(label)) {
            labels.push(label.to_owned());
        }
    }
    <[String; 2]>::try_from(labels).map_err(|labels| {
        let shown: Vec<String> =
            labels.iter().take(6).map(|label| format!("\"{}\"", excerpt(label))).collect();
        let sentence = format!(
            "Two detectors are compared, so the table must name two; it names {}{}.",
            labels.len(),
            if shown.is_empty() { String::new() } else { format!(": {}", shown.join(", ")) }
        );
        vec![Fault::new("", Code::Conflict, shown.join(", ").as_str().into(), &sentence)]
    })
}

/// Which label is the reference, then the other.
fn told_apart([one, two]: &[String; 2], chosen: Option<&str>) -> Result<(String, String), Faults> {
    let said = chosen.map(str::trim).filter(|chosen| !chosen.is_empty());
    let is_reference = |label: &String| match said {
        Some(chosen) => folded(label) == folded(chosen),
        None => REFERENCE.contains(&folded(label).as_str()),
    };
    match (is_reference(one), is_reference(two), said) {
        (true, false, _) => Ok((one.clone(), two.clone())),
        (false, true, _) => Ok((two.clone(), one.clone())),
        (_, _, Some(chosen)) => {
            let sentence =
                format!("The reference must be \"{one}\" or \"{two}\"; \"{}\" was given.", excerpt(chosen));
            let allowed = Some(Allowed::OneOf(vec![one.clone(), two.clone()]));
            Err(vec![Fault {
                allowed,
                ..Fault::new("/choices/reference", Code::Range, chosen.into(), &sentence)
            }])
        }
        (_, _, None) => {
            let sentence = format!("Needed: which of \"{one}\" and \"{two}\" is the reference.");
            let allowed = Some(Allowed::OneOf(vec![one.clone(), two.clone()]));
            Err(vec![Fault { allowed, ..Fault::missing("/choices/reference", &sentence) }])
        }
    }
}

/// Cuts readings into blocks as they come.
#[derive(Default)]
struct Cut {
    pending: Vec<One>,
    blocks: Vec<ReadBlock>,
    bad_rows: Vec<BadRow>,
    rows_read: usize,
}

impl Cut {
    fn push(&mut self, reading: One) {
        if self.pending.first().is_some_and(|first| first.wavelength_nm != reading.wavelength_nm) {
            self.end(None);
        }
        self.pending.push(reading);
        if let [a, b, c, d] = self.pending.as_slice() {
            let order = a.is_reference != b.is_reference
                && b.is_reference == c.is_reference
                && c.is_reference != d.is_reference;
            let rising = a.time < b.time && b.time < c.time && c.time < d.time;
            if order && rising {
                let of = |is_reference: bool| {
                    let own = self.pending.iter().filter(|one| one.is_reference == is_reference);
                    own.map(|one| (one.time - a.time, one.power_w)).collect()
                };
                let (reference, test) = (of(true), of(false));
                self.blocks.push(ReadBlock { wavelength_nm: a.wavelength_nm, line: a.line, reference, test });
                self.rows_read += self.pending.len();
                self.pending.clear();
            } else {
                // The block may begin one reading later.
                let first = self.pending.remove(0);
                let why = if order { "whose times do not rise" } else { "in another order" };
                self.leave_out(first, why);
            }
        }
    }

    /// Ends the block at hand, before a row that is none of it.
    fn end(&mut self, bad: Option<BadRow>) {
        for reading in std::mem::take(&mut self.pending) {
            self.leave_out(reading, "of which there are fewer here");
        }
        self.bad_rows.extend(bad);
    }

    fn leave_out(&mut self, reading: One, why: &str) {
        let sentence = format!(
            "A block is four readings in a row at one wavelength: reference, test, test, reference, or the other way \
             round. This row is one of readings {why}."
        );
        self.bad_rows.push(BadRow { line: reading.line, text: reading.text, sentence });
    }
}

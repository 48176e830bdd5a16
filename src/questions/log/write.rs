//! The corrected log as text that a spreadsheet opens and the reader of logs takes back.

use super::options::Written;
use crate::record::{DecimalMark, Delimiter, LogRow, Role, Shows};

/// Figures of a corrected power in W: more than any meter shows.
const FIGURES: u32 = 9;
/// Figures of its uncertainty.
const UNCERTAIN_FIGURES: u32 = 3;
/// Decimals of a corrected level in dBm, written as whole steps of 10⁻⁵ dB.
const STEPS_PER_DB: f64 = 1e5;

/// What becomes of one row.
pub(super) struct Corrected<'a> {
    /// The wavelength setting that was used, nm.
    pub(super) setting_nm: Option<f64>,
    /// The corrected power, W.
    pub(super) power_w: Option<f64>,
    /// The same as a level; nothing for a power of 0 W or less.
    pub(super) level_dbm: Option<f64>,
    /// Its expanded uncertainty, W.
    pub(super) expanded_w: Option<f64>,
    /// Why there is none, or why it does not count.
    pub(super) reason: &'a str,
}

/// Writes rows as they come.
pub(super) struct Writer {
    wanted: Written,
    /// Lines above the table.
    remarks: Vec<String>,
    /// The k in the header.
    coverage_factor: Option<f64>,
    form: Option<Form>,
    out: Vec<u8>,
}

/// How the text is made, once the log is understood.
#[derive(Clone, Copy)]
struct Form {
    delimiter: u8,
    mark: u8,
    log_mark: u8,
    time: bool,
    range: bool,
    status: bool,
}

impl Writer {
    pub(super) fn new(wanted: Written, remarks: Vec<String>, coverage_factor: Option<f64>) -> Writer {
        Writer { wanted, remarks, coverage_factor, form: None, out: Vec::new() }
    }

    /// What was written since the last time.
    pub(super) fn take(&mut self) -> Vec<u8> {
        std::mem::take(&mut self.out)
    }

    /// Writes a row.
    pub(super) fn row(&mut self, row: &LogRow, corrected: &Corrected) {
        let form = match self.form {
            Some(form) => form,
            None => self.begin(row),
        };
        let out = &mut self.out;
        let next = |out: &mut Vec<u8>| out.push(form.delimiter);
        if form.time {
            if row.is_cut {
                time(out, row, form.delimiter);
            }
            next(out);
        }
        let unit = match &row.shows {
            Shows::Power { unit, .. } => unit.name(),
            _ => row.power_unit().map_or("", |unit| unit.name()),
        };
        match (row.is_cut, row.cell(Role::PowerUnit)) {
            (false, _) => {
                cell(out, row.excerpt().as_bytes(), form.delimiter);
                next(out);
            }
            (true, own) => {
                reading(out, row, form);
                next(out);
                cell(out, if own.is_empty() { unit.as_bytes() } else { own }, form.delimiter);
            }
        }
        next(out);
        match (corrected.setting_nm, row.is_cut) {
            (Some(setting_nm), _) => marked(out, &setting_nm.to_string(), form.mark),
            (None, true) => cell(out, row.cell(Role::Wavelength), form.delimiter),
            (None, false) => {}
        }
        next(out);
        for (_, role) in
            [(form.range, Role::Range), (form.status, Role::Status)].iter().filter(|(there, _)| *there)
        {
            if row.is_cut {
                cell(out, row.cell(*role), form.delimiter);
            }
            next(out);
        }
        if let Some(power_w) = corrected.power_w {
            scientific(out, power_w, FIGURES, form.mark);
        }
        next(out);
        if let Some(level_dbm) = corrected.level_dbm {
            fixed(out, level_dbm, form.mark);
        }
        next(out);
        if let Some(expanded_w) = corrected.expanded_w {
            scientific(out, expanded_w, UNCERTAIN_FIGURES, form.mark);
        }
        next(out);
        cell(out, corrected.reason.as_bytes(), form.delimiter);
        out.push(b'\n');
    }

    /// Decides how the text is made and writes what stands above the rows.
    fn begin(&mut self, row: &LogRow) -> Form {
        let mark = self.wanted.decimal_mark.unwrap_or(row.decimal_mark());
        let delimiter = match (self.wanted.delimiter.unwrap_or(row.delimiter()), mark) {
            (Delimiter::Tab, _) => b'\t',
            (Delimiter::Semicolon, _) | (_, DecimalMark::Comma) => b';',
            (_, DecimalMark::Point) => b',',
        };
        let byte = |mark| if mark == DecimalMark::Point { b'.' } else { b',' };
        let form = Form {
            delimiter,
            mark: byte(mark),
            log_mark: byte(row.decimal_mark()),
            time: row.has(Role::Time),
            range: row.has(Role::Range),
            status: row.has(Role::Status),
        };
        self.form = Some(form);
        for line in &self.remarks {
            self.out.extend_from_slice(format!("# {line}\n").as_bytes());
        }
        let k = self.coverage_factor.map_or(String::new(), |k| format!(" U (k={})", k));
        let time = row.time_unit().map_or("Time".to_owned(), |unit| format!("Time ({})", unit.name()));
        let heads = [
            (form.time, time.as_str()),
            (true, "Reading"),
            (true, "Unit"),
            (true, "Wavelength setting (nm)"),
            (form.range, "Range"),
            (form.status, "Status"),
            (true, "Corrected power (W)"),
            (true, "Corrected level (dBm)"),
            (
                true,
                &format!(
                    "Expanded uncertainty{} (W)",
                    k.replace('.', if form.mark == b',' { "," } else { "." })
                ),
            ),
            (true, "Reason"),
        ];
        let mut parted = false;
        for (_, head) in heads.iter().filter(|(there, _)| *there) {
            if parted {
                self.out.push(delimiter);
            }
            parted = true;
            cell(&mut self.out, head.as_bytes(), delimiter);
        }
        self.out.push(b'\n');
        form
    }
}

/// The time as it was read; a day of its own goes before it.
fn time(out: &mut Vec<u8>, row: &LogRow, delimiter: u8) {
    match row.cell(Role::Date) {
        b"" => cell(out, row.cell(Role::Time), delimiter),
        day => cell(out, &[day, b" ", row.cell(Role::Time)].concat(), delimiter),
    }
}

/// The reading as it was read, under the decimal mark of the text that is written.
fn reading(out: &mut Vec<u8>, row: &LogRow, form: Form) {
    let text = row.cell(Role::Power);
    if form.mark == form.log_mark || !matches!(row.shows, Shows::Power { .. }) {
        return cell(out, text, form.delimiter);
    }
    let changed = text.iter().filter(|byte| **byte != form.mark);
    let changed = changed.map(|byte| if *byte == form.log_mark { form.mark } else { *byte });
    cell(out, &changed.collect::<Vec<u8>>(), form.delimiter);
}

/// A cell, in quotation marks where it needs them (RFC 4180, section 2).
fn cell(out: &mut Vec<u8>, text: &[u8], delimiter: u8) {
    if !text.iter().any(|byte| *byte == delimiter || matches!(byte, b'"' | b'\n' | b'\r')) {
        return out.extend_from_slice(text);
    }
    out.push(b'"');
    for byte in text {
        if *byte == b'"' {
            out.push(b'"');
        }
        out.push(*byte);
    }
    out.push(b'"');
}

fn marked(out: &mut Vec<u8>, text: &str, mark: u8) {
    out.extend(text.bytes().map(|byte| if byte == b'.' { mark } else { byte }));
}

/// Digits of a whole number.
fn digits(out: &mut Vec<u8>, mut number: u64, least: usize) {
    let mut reversed = [b'0'; 20];
    let mut count = 0;
    while number > 0 || count < least {
        if let Some(place) = reversed.get_mut(count) {
            *place = b'0' + (number % 10) as u8;
        }
        number /= 10;
        count += 1;
    }
    out.extend(reversed.iter().take(count).rev());
}

/// A level with five decimals.
fn fixed(out: &mut Vec<u8>, value: f64, mark: u8) {
    let steps = (value.abs() * STEPS_PER_DB + 0.5).floor() as u64;
    if value < 0.0 && steps > 0 {
        out.push(b'-');
    }
    digits(out, steps / STEPS_PER_DB as u64, 1);
    out.push(mark);
    digits(out, steps % STEPS_PER_DB as u64, 5);
}

/// A number with an exponent, to so many figures. A power of ten up to 10²² is exact, so the scaled number is off by a
/// rounding or two in its sixteenth figure.
fn scientific(out: &mut Vec<u8>, value: f64, figures: u32, mark: u8) {
    if value == 0.0 {
        return out.push(b'0');
    }
    let (least, size) = (10_u64.pow(figures - 1), value.abs());
    let mut exponent = (f64::from(((size.to_bits() >> 52) & 0x7ff) as i32 - 1023) * std::f64::consts::LOG10_2)
        .floor() as i32;
    let scaled = |exponent: i32| {
        let shift = figures as i32 - 1 - exponent;
        match shift {
            0..=22 => size * 10_f64.powi(shift),
            23..=44 => size * 1e22 * 10_f64.powi(shift - 22),
            -22..0 => size / 10_f64.powi(-shift),
            _ => 0.0,
        }
    };
    let mut whole = (scaled(exponent) + 0.5).floor() as u64;
    if whole >= least * 10 {
        exponent += 1;
        whole = (scaled(exponent) + 0.5).floor() as u64;
    }
    if whole < least {
        // Beyond what any light has: the slow way.
        return marked(out, &format!("{value:.*e}", figures as usize - 1), mark);
    }
    if value < 0.0 {
        out.push(b'-');
    }
    digits(out, whole / least, 1);
    out.push(mark);
    digits(out, whole % least, figures as usize - 1);
    out.push(b'E');
    out.push(if exponent < 0 { b'-' } else { b'+' });
    digits(out, u64::from(exponent.unsigned_abs()), 2);
}

#[cfg(test)]
mod tests {
    use super::*;

    fn text(write: impl Fn(&mut Vec<u8>)) -> String {
        let mut out = Vec::new();
        write(&mut out);
        String::from_utf8_lossy(&out).into_owned()
    }

    // Expected: the standard library's own rounding of the same doubles.
    #[test]
    fn numbers_are_written_as_the_standard_library_rounds_them() {
        let mut seed = 11_u64;
        for _ in 0..20_000 {
            seed = seed.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
            let power = (seed >> 20) as i32 % 21;
            let value = ((seed >> 11) as f64 / (1_u64 << 53) as f64 - 0.5) * 10_f64.powi(3 - power.abs());
            let written: f64 = text(|out| scientific(out, value, FIGURES, b'.')).parse().expect("a number");
            let expected: f64 = format!("{value:.8e}").parse().expect("a number");
            // Where the tenth figure is a 5, a rounding in the sixteenth may show.
            assert!((written - expected).abs() <= 1e-8 * expected.abs(), "{value:e}");
            assert!((written - value).abs() <= 0.5000001e-8 * value.abs().max(1e-300) * 10.0, "{value:e}");
            let level = (seed >> 11) as f64 / (1_u64 << 53) as f64 * 200.0 - 150.0;
            let written: f64 = text(|out| fixed(out, level, b'.')).parse().expect("a number");
            assert!((written - level).abs() <= 0.5000001e-5, "{level}");
        }
        for (value, expected) in [
            (1e-6, "1.00000000E-06"),
            (-9.999999996e-6, "-1.00000000E-05"),
            (1.0, "1.00000000E+00"),
            (123.456, "1.23456000E+02"),
            (0.0, "0"),
            (1e-18, "1.00000000E-18"),
        ] {
            assert_eq!(text(|out| scientific(out, value, FIGURES, b'.')), expected);
        }
        assert_eq!(text(|out| scientific(out, 1e-300, FIGURES, b',')), "1,00000000e-300");
        assert_eq!(text(|out| fixed(out, -20.13, b',')), "-20,13000");
        assert_eq!(text(|out| fixed(out, -0.000001, b'.')), "0.00000");
    }

    #[test]
    fn a_cell_is_quoted_where_it_must_be() {
        assert_eq!(text(|out| cell(out, b"a;b", b';')), "\"a;b\"");
        assert_eq!(text(|out| cell(out, b"5\" \nx", b';')), "\"5\"\" \nx\"");
        assert_eq!(text(|out| cell(out, b"plain, text", b';')), "plain, text");
    }
}

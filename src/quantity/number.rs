//! The digits of a number: finding them in text, and which of point and comma is the decimal mark.

/// Which sign parts the whole from the fraction.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum DecimalMark {
    /// Both are understood; "1,234", which could be either, is asked about.
    #[default]
    Auto,
    /// Point only.
    Point,
    /// Comma; a point is understood where it cannot be a thousands mark.
    Comma,
}

impl DecimalMark {
    /// The words by which a page or a script names the marks.
    pub const WORDS: &'static [(&'static str, DecimalMark)] =
        &[("auto", DecimalMark::Auto), ("point", DecimalMark::Point), ("comma", DecimalMark::Comma)];
}

/// The digits at the head of a text, ready to be parsed, and what stands behind them.
#[derive(Debug, PartialEq)]
pub struct Digits<'a> {
    /// Sign, digits and a point, without grouping: `-28.35`.
    pub mantissa: String,
    /// The power of ten that was written.
    pub exponent: i32,
    /// The rest of the text, trimmed: a unit.
    pub rest: &'a str,
}

impl Digits<'_> {
    /// The number times ten to the `shift`, correctly rounded.
    pub fn times_ten_to(&self, shift: i32) -> f64 {
        // The text was checked digit by digit, so it parses.
        format!("{}e{}", self.mantissa, self.exponent.saturating_add(shift)).parse().unwrap_or(f64::NAN)
    }
}

/// Minus signs: hyphen-minus, the minus sign, and the en dash that some programs make of it.
const MINUS: [char; 3] = ['-', '\u{2212}', '\u{2013}'];

/// Spaces that group digits: space, no-break, thin, narrow no-break, figure space.
const SPACES: [char; 5] = [' ', '\u{a0}', '\u{2009}', '\u{202f}', '\u{2007}'];

/// Finds the number at the head of `text`. `Err` is the end of a sentence about what is wrong.
pub fn digits(text: &str, mark: DecimalMark) -> Result<Digits<'_>, String> {
    let text = text.trim();
    let unsigned = text.strip_prefix(MINUS).map(|rest| ("-", rest));
    let (sign, body) = unsigned.unwrap_or(("", text.strip_prefix('+').unwrap_or(text)));
    let body = body.trim_start();
    let end = end_of_digits(body);
    let (run, rest) = body.split_at(end);
    if !run.contains(|c: char| c.is_ascii_digit()) {
        return Err(format!("“{text}” does not begin with a number"));
    }
    let mantissa = format!("{sign}{}", plain_digits(run, mark)?);
    let (exponent, rest) = exponent(rest, run)?;
    // "10^-12" is the power itself, not ten times it.
    let power_of_ten = run == "10" && rest.1;
    let mantissa = if power_of_ten { format!("{sign}1") } else { mantissa };
    Ok(Digits { mantissa, exponent, rest: rest.0.trim() })
}

/// Where the run of digits, marks and grouping spaces ends. A space belongs to it only between digits.
fn end_of_digits(body: &str) -> usize {
    let mut end = 0;
    let mut chars = body.char_indices().peekable();
    while let Some((at, c)) = chars.next() {
        let groups =
            SPACES.contains(&c) && end > 0 && chars.peek().is_some_and(|(_, next)| next.is_ascii_digit());
        if !(c.is_ascii_digit() || c == '.' || c == ',' || groups) {
            break;
        }
        end = at + c.len_utf8();
    }
    end
}

/// Takes grouping out of a run of digits and makes its decimal mark a point.
fn plain_digits(run: &str, mark: DecimalMark) -> Result<String, String> {
    let count = |c| run.matches(c).count();
    let (points, commas) = (count('.'), count(','));
    let (decimal, grouping) = match (points, commas) {
        (0, 0) => (None, None),
        // Both: the later one is the decimal mark, if it stands only once.
        (1.., 1..) => match run.rfind('.') > run.rfind(',') {
            true => (Some('.'), Some(',')),
            false => (Some(','), Some('.')),
        },
        (1, 0) if mark != DecimalMark::Comma || !could_group(run, '.') => (Some('.'), None),
        (0, 1) if mark == DecimalMark::Comma || (mark == DecimalMark::Auto && !could_group(run, ',')) => {
            (Some(','), None)
        }
        (0, 1) | (1, 0) => {
            let used = if commas == 1 { ',' } else { '.' };
            let fraction = run.replace(used, ".");
            return Err(match could_group(run, used) {
                true => format!(
                    "“{run}” could mean {fraction} or {whole}: write {fraction} or {whole}, or set the decimal mark",
                    whole = run.replace(used, "")
                ),
                false => {
                    format!("“{run}” has a comma, but the decimal mark is set to point: write {fraction}")
                }
            });
        }
        (0, _) => (None, Some(',')),
        (_, 0) => (None, Some('.')),
    };
    let (whole, fraction) = match decimal.and_then(|c| run.split_once(c)) {
        Some((whole, fraction)) => (whole, Some(fraction)),
        None => (run, None),
    };
    let whole = ungroup(whole, grouping).ok_or_else(|| format!("“{run}” is not a number"))?;
    match fraction {
        None => Ok(whole),
        Some(digits) if digits.chars().all(|c| c.is_ascii_digit()) => Ok(format!("{whole}.{digits}")),
        Some(_) => Err(format!("“{run}” is not a number")),
    }
}

/// Whether `c` in `run` stands where a thousands mark would: "1,234" but not "0,234" or "1,23".
fn could_group(run: &str, c: char) -> bool {
    run.split_once(c).is_some_and(|(whole, fraction)| {
        (1..=3).contains(&whole.len())
            && !whole.starts_with('0')
            && fraction.len() == 3
            && fraction.chars().all(|c| c.is_ascii_digit())
    })
}

/// The digits of a whole number without its groups; nothing where the groups are not of three.
fn ungroup(whole: &str, grouping: Option<char>) -> Option<String> {
    let parts: Vec<&str> = whole.split(|c| Some(c) == grouping || SPACES.contains(&c)).collect();
    let sound = parts.iter().enumerate().all(|(index, part)| {
        part.chars().all(|c| c.is_ascii_digit())
            && (parts.len() == 1 || if index == 0 { (1..=3).contains(&part.len()) } else { part.len() == 3 })
    });
    sound.then(|| parts.concat())
}

/// The exponent at the head of `rest`, what follows it, and whether it was written as a bare power ("^-12").
fn exponent<'a>(rest: &'a str, run: &str) -> Result<(i32, (&'a str, bool)), String> {
    let marks = ["×10^", "·10^", "x10^", "*10^", "× 10^", "· 10^", "x 10^", "* 10^"];
    let trimmed = rest.trim_start();
    let power = trimmed.strip_prefix('^').filter(|_| run == "10").map(|tail| (tail, true));
    let times = marks.iter().find_map(|mark| trimmed.strip_prefix(mark)).map(|tail| (tail, false));
    // "e" must touch the digits and be followed by a number: "5 eV" is not an exponent.
    let letter = rest.strip_prefix(['e', 'E']).map(|tail| (tail, false));
    let Some((tail, bare)) = power.or(times).or(letter) else {
        return Ok((0, (rest, false)));
    };
    let unsigned = tail.strip_prefix(MINUS).map(|tail| (-1, tail));
    let (sign, unsigned) = unsigned.unwrap_or((1, tail.strip_prefix('+').unwrap_or(tail)));
    let end = unsigned.find(|c: char| !c.is_ascii_digit()).unwrap_or(unsigned.len());
    if end == 0 {
        return Err(format!("“{run}{rest}” breaks off in its exponent"));
    }
    // Five digits are more than any double holds; a longer exponent is as infinite or as zero as that.
    let size: i32 = unsigned[..end].parse().unwrap_or(99_999);
    Ok((sign * size.min(99_999), (&unsigned[end..], bare)))
}

//! When a row was taken, in seconds.

use crate::record::time::seconds;

/// Reads times that mostly follow each other on the same day.
#[derive(Default)]
pub(super) struct Clock {
    /// The day that was read last, as text and as seconds.
    day: [u8; 10],
    day_s: f64,
    /// The last time of the day, and the days that have gone by at midnight since, for times without a date.
    last_s: Option<f64>,
    days: f64,
}

const DAY_S: f64 = 86_400.0;

impl Clock {
    /// Seconds of an ISO 8601 time as [`seconds`] reads it; the usual shape is read without detours.
    pub(super) fn iso(&mut self, text: &[u8]) -> Option<f64> {
        match self.usual(text) {
            Some(found) => Some(found),
            None => seconds(std::str::from_utf8(text).ok()?),
        }
    }

    /// Seconds of a time without a date: a step back over more than half a day is midnight.
    pub(super) fn of_day(&mut self, text: &[u8]) -> Option<f64> {
        let found = seconds(std::str::from_utf8(text).ok()?)?;
        if self.last_s.is_some_and(|last| found < last - DAY_S / 2.0) {
            self.days += 1.0;
        }
        self.last_s = Some(found);
        Some(found + self.days * DAY_S)
    }

    /// `2026-11-30T14:05:09.250` with a space or a T, a point or a comma, as many digits as there are; `Z` or nothing
    /// behind it.
    fn usual(&mut self, text: &[u8]) -> Option<f64> {
        let (day, clock) = text.split_at_checked(10)?;
        let clock = match clock {
            [b'T' | b' ' | b't', rest @ ..] => rest,
            _ => return None,
        };
        let clock = clock.strip_suffix(b"Z").unwrap_or(clock);
        let [h1, h2, b':', m1, m2, b':', s1, s2, rest @ ..] = clock else { return None };
        let (hour, minute, second) = (two(*h1, *h2)?, two(*m1, *m2)?, two(*s1, *s2)?);
        let second = match rest {
            [] => f64::from(second),
            [b'.' | b',', digits @ ..] if (1..=9).contains(&digits.len()) => fraction(second, digits)?,
            _ => return None,
        };
        if hour >= 24 || minute >= 60 || second >= 61.0 {
            return None;
        }
        if self.day != day {
            let midnight = [day, b"T00:00".as_slice()].concat();
            self.day_s = seconds(std::str::from_utf8(&midnight).ok()?)?;
            self.day.copy_from_slice(day);
        }
        Some(self.day_s + (f64::from(hour * 3600 + minute * 60) + second))
    }
}

fn two(tens: u8, ones: u8) -> Option<u32> {
    (tens.is_ascii_digit() && ones.is_ascii_digit())
        .then(|| u32::from(tens - b'0') * 10 + u32::from(ones - b'0'))
}

/// Seconds with up to nine digits behind the mark: whole numbers below 2⁵³ and one division, so rounded correctly.
fn fraction(second: u32, digits: &[u8]) -> Option<f64> {
    let step = |(sum, unit): (u64, u64), byte: &u8| {
        byte.is_ascii_digit().then(|| (sum * 10 + u64::from(byte - b'0'), unit * 10))
    };
    let (sum, unit) = digits.iter().try_fold((u64::from(second), 1), step)?;
    Some(sum as f64 / unit as f64)
}

/// Whether a cell is a time as it can be read here, or the day of one.
pub(super) fn is_time(text: &str) -> bool {
    seconds(text).is_some() || crate::record::date::is_date(text)
}

#[cfg(test)]
mod tests {
    use super::*;

    // Expected: the slow reader, whose own expectations come from elsewhere.
    #[test]
    fn the_fast_way_and_the_slow_way_agree() {
        let mut clock = Clock::default();
        for text in [
            "2026-11-30T14:05:09",
            "2026-11-30 14:05:09,250",
            "2026-11-30 23:59:60.123456789",
            "2026-12-01T00:00:00Z",
            "2026-12-01T00:00:00.1Z",
            "2024-02-29T23:59:59+01:00",
            "2024-02-29T23:59",
            "1969-12-31T23:59:59.5",
        ] {
            assert_eq!(clock.iso(text.as_bytes()), seconds(text), "{text}");
            assert!(seconds(text).is_some(), "{text}");
        }
        for text in [
            "2026-11-30T24:00:00",
            "2026-13-30T14:05:09",
            "2026-11-30T14:05:0é",
            "2026-11-30",
            "",
            "30.11.2026 14:05:09",
        ] {
            assert_eq!(clock.iso(text.as_bytes()), None, "{text}");
        }
    }

    #[test]
    fn midnight_is_passed_by_times_without_a_date() {
        let mut clock = Clock::default();
        let read: Vec<_> =
            ["23:59:58", "00:00:03", "00:00:01", "12:00:00"].map(|text| clock.of_day(text.as_bytes())).into();
        assert_eq!(read, [Some(86_398.0), Some(86_403.0), Some(86_401.0), Some(129_600.0)]);
    }
}

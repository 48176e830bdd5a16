//! Times of the day and dates, as instruments write them.

/// Seconds of an ISO 8601 time: since 1970 with a date, since midnight without. A zone is counted; without one the
/// time is taken as it stands. Fractions may have a point or a comma. Nothing for any other order of day and month.
///
/// Source: ISO 8601-1:2019; the count of days: the Gregorian calendar's 146097 days in 400 years.
pub(super) fn seconds(text: &str) -> Option<f64> {
    let text = text.trim();
    match text.get(..10).filter(|_| text.is_char_boundary(10)).and_then(day) {
        Some(days) => {
            let rest = text.get(10..)?;
            let clock = rest.strip_prefix(['T', 't', ' '])?;
            Some(days * 86_400.0 + of_day(clock)?)
        }
        None => of_day(text),
    }
}

/// Days since 1970 of `2026-11-30`.
fn day(text: &str) -> Option<f64> {
    let mut parts = text.split('-');
    let (year, month, day) = (parts.next()?, parts.next()?, parts.next()?);
    if parts.next().is_some() || year.len() != 4 || month.len() != 2 || day.len() != 2 {
        return None;
    }
    let (year, month, day): (i64, i64, i64) = (whole(year)?, whole(month)?, whole(day)?);
    if !(1..=12).contains(&month) || !(1..=31).contains(&day) {
        return None;
    }
    // Years that begin in March have their leap day at the end.
    let (y, m) = if month > 2 { (year, month - 3) } else { (year - 1, month + 9) };
    let days =
        365 * y + y.div_euclid(4) - y.div_euclid(100) + y.div_euclid(400) + (153 * m + 2) / 5 + day - 1;
    Some((days - 719_468) as f64)
}

/// Seconds since midnight of `14:05`, `14:05:09,250` or `14:05:09Z`, `14:05:09+01:00`.
fn of_day(text: &str) -> Option<f64> {
    let (clock, zone) = match text.find(['Z', 'z', '+']).or_else(|| text.rfind('-')) {
        Some(at) => (text.get(..at)?, zone(text.get(at..)?)?),
        None => (text, 0.0),
    };
    let mut parts = clock.split(':');
    let (hour, minute) = (whole(parts.next()?)?, whole(parts.next()?)?);
    let second = parts.next().map_or(Some(0.0), |text| {
        let plain = text.replace(',', ".");
        let good = plain.bytes().all(|b| b.is_ascii_digit() || b == b'.') && text.len() >= 2;
        plain.parse::<f64>().ok().filter(|_| good)
    })?;
    let good =
        parts.next().is_none() && (0..24).contains(&hour) && (0..60).contains(&minute) && second < 61.0;
    good.then(|| (hour * 3600 + minute * 60) as f64 + second - zone)
}

/// Seconds by which a zone is ahead.
fn zone(text: &str) -> Option<f64> {
    if text.eq_ignore_ascii_case("z") {
        return Some(0.0);
    }
    let sign = if text.starts_with('-') { -1.0 } else { 1.0 };
    let digits: String = text.get(1..)?.chars().filter(|c| *c != ':').collect();
    let (hour, minute) = match digits.len() {
        2 => (whole(&digits)?, 0),
        4 => (whole(digits.get(..2)?)?, whole(digits.get(2..)?)?),
        _ => return None,
    };
    (hour <= 23 && minute <= 59).then(|| sign * (hour * 3600 + minute * 60) as f64)
}

fn whole(text: &str) -> Option<i64> {
    let good = !text.is_empty() && text.len() <= 4 && text.bytes().all(|b| b.is_ascii_digit());
    text.parse().ok().filter(|_| good)
}

#[cfg(test)]
mod tests {
    use super::*;

    // Expected: Python 3.11 datetime.timestamp() of the same texts, in UTC.
    #[test]
    fn iso_times_are_read_and_nothing_else() {
        for (text, expected) in [
            ("1970-01-01T00:00:00Z", Some(0.0)),
            ("2026-11-30T14:05:09,250+01:00", Some(1_796_043_909.25)),
            ("2026-11-30 14:05:09.25", Some(1_796_047_509.25)),
            ("2024-02-29T23:59:59-0530", Some(1_709_270_999.0)),
            ("2000-03-01T00:00", Some(951_868_800.0)),
            ("14:05:09", Some(50_709.0)),
            ("14:05", Some(50_700.0)),
            ("30.11.2026 14:05", None),
            ("11/30/2026 14:05", None),
            ("2026-13-01T00:00", None),
            ("2026-11-30", None),
            ("25:00", None),
            ("14:5é", None),
            ("2026-11-3é0T", None),
            ("", None),
            ("Z", None),
        ] {
            assert_eq!(seconds(text), expected, "{text:?}");
        }
    }
}

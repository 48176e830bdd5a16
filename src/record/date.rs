//! Dates as files write them.

/// Whether a text is a date as ISO 8601 and XML Schema write it, of a day that there is.
pub fn is_date(text: &str) -> bool {
    let bytes = text.as_bytes();
    let shape = bytes.len() == 10
        && bytes.iter().enumerate().all(|(at, byte)| match at {
            4 | 7 => *byte == b'-',
            _ => byte.is_ascii_digit(),
        });
    let number = |from, to| text.get(from..to).and_then(|part: &str| part.parse::<u32>().ok()).unwrap_or(0);
    let (year, month, day) = (number(0, 4), number(5, 7), number(8, 10));
    let leap = year % 4 == 0 && (year % 100 != 0 || year % 400 == 0);
    let days = match month {
        2 => 28 + u32::from(leap),
        4 | 6 | 9 | 11 => 30,
        1..=12 => 31,
        _ => 0,
    };
    shape && year > 0 && (1..=days).contains(&day)
}

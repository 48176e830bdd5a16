//! A plain number, read fast. What is not plain goes the slow way of all tables.

use crate::record::names::DecimalMark;

/// Powers of ten that are exact as doubles.
const EXACT: [f64; 23] = [
    1e0, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18,
    1e19, 1e20, 1e21, 1e22,
];

/// The number that a cell holds, times ten to the `shift`; nothing where it is not made of sign, digits, one decimal mark
/// and an exponent alone, or where a product of two exact doubles would not round it correctly.
///
/// Source: W. D. Clinger, "How to read floating point numbers accurately", Proc. ACM PLDI 1990, 92–101: a whole number
/// below 2⁵³ times or over a power of ten up to 10²² is rounded once, so correctly.
pub(super) fn plain(cell: &[u8], mark: DecimalMark, shift: i32) -> Option<f64> {
    let (negative, digits) = match cell {
        [b'-', rest @ ..] => (true, rest),
        [b'+', rest @ ..] => (false, rest),
        rest => (false, rest),
    };
    let mark = mark.character() as u8;
    let (mut whole, mut exponent, mut count) = (0_u64, shift, 0_u32);
    let mut behind_mark = false;
    let mut rest = digits;
    while let [byte, tail @ ..] = rest {
        match byte {
            b'0'..=b'9' => {
                // Nineteen digits fit into 64 bits.
                count += 1;
                if count > 19 {
                    return None;
                }
                whole = whole * 10 + u64::from(byte - b'0');
                exponent -= i32::from(behind_mark);
            }
            _ if *byte == mark && !behind_mark => behind_mark = true,
            b'e' | b'E' => {
                exponent += power(tail)?;
                break;
            }
            _ => return None,
        }
        rest = tail;
    }
    if count == 0 || whole > 1 << 53 {
        return None;
    }
    let power = EXACT.get(exponent.unsigned_abs() as usize)?;
    let value = if exponent < 0 { whole as f64 / power } else { whole as f64 * power };
    Some(if negative { -value } else { value })
}

/// The digits behind an `e`.
fn power(text: &[u8]) -> Option<i32> {
    let (sign, digits) = match text {
        [b'-', rest @ ..] => (-1, rest),
        [b'+', rest @ ..] => (1, rest),
        rest => (1, rest),
    };
    if digits.is_empty() || digits.len() > 4 {
        return None;
    }
    let step = |sum: i32, byte: &u8| byte.is_ascii_digit().then(|| sum * 10 + i32::from(byte - b'0'));
    Some(sign * digits.iter().try_fold(0, step)?)
}

#[cfg(test)]
mod tests {
    use super::*;
    use DecimalMark::{Comma, Point};

    // Expected: the standard library's reading of the same digits, which rounds correctly.
    #[test]
    fn plain_numbers_are_rounded_as_the_standard_library_rounds_them() {
        let mut seed = 7_u64;
        let mut next = || {
            seed = seed.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
            seed >> 33
        };
        let mut read = 0;
        for _ in 0..20_000 {
            let (whole, tenths, power) = (next() % 1_000_000, next() % 1_000_000, next() % 30);
            let text = format!("-{whole}.{tenths:06}e-{power}");
            let shifted = format!("-{whole}.{tenths:06}e-{}", power + 6);
            let found = plain(text.as_bytes(), Point, 0);
            assert!(found.is_none_or(|found| Some(found) == text.parse().ok()), "{text}");
            let found_shifted = plain(text.replace('.', ",").as_bytes(), Comma, -6);
            assert!(found_shifted.is_none_or(|found| Some(found) == shifted.parse().ok()), "{text}");
            read += usize::from(found.is_some());
        }
        assert!(read > 10_000, "only {read} were read");
    }

    #[test]
    fn whatever_is_not_plain_is_left_to_the_slow_way() {
        for text in
            ["", "-", "e5", "1e", "1e+", "1.2.3", "1,2", "1 2", "--1", "1e99999", "12a", "9007199254740993.5"]
        {
            assert_eq!(plain(text.as_bytes(), Point, 0), None, "{text:?}");
        }
        assert_eq!(plain(b"+9.910000E+37", Point, 0), None, "beyond exact powers");
        assert_eq!(plain(b".5", Point, 0), Some(0.5));
        assert_eq!(plain(b"2.", Point, 0), Some(2.0));
        assert_eq!(plain(b"1.55", Point, 3), Some(1550.0));
    }
}

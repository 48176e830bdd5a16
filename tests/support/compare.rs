//! The one comparison of numbers.

/// How far from the expected value is still right.
#[derive(Clone, Copy, Debug)]
pub enum Tolerance {
    /// In the unit of the value.
    Absolute(f64),
    /// As a share of the expected value.
    Relative(f64),
    /// In the natural logarithm: for far tails.
    Logarithm(f64),
}

/// Nothing if `actual` is right, else a sentence. What is no number is never right, infinity only where it is expected.
pub fn miss(expected: f64, actual: f64, tolerance: Tolerance) -> Option<String> {
    let (off, allowed) = match tolerance {
        Tolerance::Absolute(allowed) => (actual - expected, allowed),
        Tolerance::Relative(allowed) => ((actual - expected) / expected.abs(), allowed),
        // An expected zero has no logarithm: then nothing is right, rather than everything.
        Tolerance::Logarithm(allowed) => (libm::log(actual / expected), allowed),
    };
    let right = off.abs() <= allowed || (expected.is_infinite() && actual == expected);
    (!right).then(|| format!("expected {expected:e}, got {actual:e}: off by {off:e}, allowed {tolerance:?}"))
}

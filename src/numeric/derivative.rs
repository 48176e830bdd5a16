//! The slope of a function that can only be asked for values.

/// Halvings of the step at most: 2^24 is as small as a difference can become before its digits are gone.
const MOST_HALVINGS: usize = 24;
/// Places in the table of extrapolations.
const MOST_ROWS: usize = 8;
/// A slope this well known, relative to itself, is known well enough.
const ENOUGH: f64 = 1e-10;

/// The derivative of `function` at `x`; nothing where it has no value on either side.
///
/// ```text
/// D(h) = (f(x+h) − f(x−h)) / 2h,   extrapolated to h → 0 from h, h/2, h/4, …
/// ```
///
/// * `step` – the first h, > 0: of the size over which the function is smooth, such as the standard uncertainty of x
///
/// The extrapolation stops where the estimates no longer come closer to each other, so the step is never too small for
/// the digits of the function nor too large for its curvature. Where one side has no value, at the end of a table say,
/// differences of the other side are extrapolated.
///
/// Source: C. J. F. Ridders, Adv. Eng. Softw. 4, 75–76 (1982).
///
/// # Example
///
/// ```
/// use leastlight::numeric::derivative::derivative;
///
/// let slope = derivative(&mut |x| Some(x * x * x), 2.0, 0.1).unwrap();
/// assert!((slope - 12.0).abs() < 1e-10);
/// let at_the_end = derivative(&mut |x| (x >= 2.0).then_some(x * x), 2.0, 0.1).unwrap();
/// assert!((at_the_end - 4.0).abs() < 1e-9);
/// ```
pub fn derivative(function: &mut dyn FnMut(f64) -> Option<f64>, x: f64, step: f64) -> Option<f64> {
    debug_assert!(step > 0.0);
    let here = function(x)?;
    let mut h = step;
    for _ in 0..MOST_HALVINGS {
        match (function(x + h), function(x - h)) {
            (Some(above), Some(below)) => {
                let mut central = |h: f64| Some((function(x + h)? - function(x - h)?) / (2.0 * h));
                return extrapolated(&mut central, (above - below) / (2.0 * h), h, 4.0, 4.0);
            }
            (Some(above), None) => {
                let mut forward = |h: f64| Some((function(x + h)? - here) / h);
                return extrapolated(&mut forward, (above - here) / h, h, 2.0, 2.0);
            }
            (None, Some(below)) => {
                let mut backward = |h: f64| Some((here - function(x - h)?) / h);
                return extrapolated(&mut backward, (here - below) / h, h, 2.0, 2.0);
            }
            (None, None) => h /= 2.0,
        }
    }
    None
}

/// Richardson's extrapolation of `difference` to step 0. Its error falls by `first`, then by a further `ratio` for each
/// term that is taken away, when the step is halved.
fn extrapolated(
    difference: &mut dyn FnMut(f64) -> Option<f64>,
    start: f64,
    step: f64,
    first: f64,
    ratio: f64,
) -> Option<f64> {
    let (mut best, mut error) = (start, f64::INFINITY);
    let mut above = vec![start];
    for row in 1..MOST_ROWS {
        let Some(plain) = difference(step / f64::from(1 << row)) else { break };
        let mut factor = first;
        let mut current = vec![plain];
        for (left, up) in (0..row).zip(&above) {
            let next = current[left] + (current[left] - up) / (factor - 1.0);
            let apart = (next - current[left]).abs().max((next - up).abs());
            if apart <= error {
                (best, error) = (next, apart);
            }
            factor *= ratio;
            current.push(next);
        }
        // Roundings have taken over: what follows can only be worse.
        let worse = (current[row] - above[row - 1]).abs() >= 2.0 * error;
        above = current;
        if worse || error <= ENOUGH * best.abs() {
            break;
        }
    }
    best.is_finite().then_some(best)
}

#[cfg(test)]
mod tests {
    use super::derivative;

    #[test]
    fn steps_far_too_large_and_far_too_small_still_give_the_slope() {
        for step in [1e-6, 1e-3, 0.3, 3.0] {
            let slope = derivative(&mut |x| Some(libm::exp(x)), 1.0, step).unwrap();
            assert!((slope / core::f64::consts::E - 1.0).abs() < 1e-8, "{step}: {slope}");
        }
    }

    #[test]
    fn a_flat_function_has_no_slope_and_a_point_has_none_to_give() {
        assert_eq!(derivative(&mut |_| Some(3.0), 1.0, 0.1), Some(0.0));
        assert_eq!(derivative(&mut |x| (x == 1.0).then_some(2.0), 1.0, 0.1), None);
    }
}

//! Where a function crosses zero.

/// Steps after which a search is given up. Each step at worst halves the bracket every other turn, and the whole
/// range of `f64` is about two thousand halvings of its exponent and digits.
const MOST_STEPS: usize = 5000;

/// Why no root was given.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum NoRoot {
    /// The function has one sign at both ends, so nothing is known to lie between them.
    SameSign {
        /// Its value at the low end.
        at_low: f64,
        /// Its value at the high end.
        at_high: f64,
    },
    /// The function gave infinity or no number.
    NotFinite {
        /// The place at which it did.
        at: f64,
    },
    /// The bracket did not close in the allowed number of steps.
    TooManySteps,
}

/// A place between `low` and `high` at which a continuous function crosses zero.
///
/// * `f` – the function, with opposite signs at the two ends; an end where it is zero is the answer
/// * `low`, `high` – ends of the bracket, finite
/// * `relative` – wanted accuracy relative to the root, ≥ 0; two units of the last place are always allowed
///
/// Source: R. P. Brent, Algorithms for Minimization without Derivatives (Prentice-Hall, 1973), chapter 4.
///
/// # Example
///
/// ```
/// use leastlight::numeric::root::root;
///
/// let found = root(|x| x * x - 2.0, 0.0, 2.0, 1e-15);
/// assert!((found.unwrap() - 2f64.sqrt()).abs() < 1e-15);
/// ```
pub fn root(mut f: impl FnMut(f64) -> f64, low: f64, high: f64, relative: f64) -> Result<f64, NoRoot> {
    debug_assert!(low.is_finite() && high.is_finite() && relative >= 0.0);
    let mut value_at = |x: f64| {
        let value = f(x);
        if value.is_finite() { Ok(value) } else { Err(NoRoot::NotFinite { at: x }) }
    };

    // b is the best place so far, a the one before it, and the root lies between b and c.
    let (mut a, mut b) = (low, high);
    let (mut fa, mut fb) = (value_at(a)?, value_at(b)?);
    if fa == 0.0 {
        return Ok(a);
    }
    if fb == 0.0 {
        return Ok(b);
    }
    if (fa > 0.0) == (fb > 0.0) {
        return Err(NoRoot::SameSign { at_low: fa, at_high: fb });
    }
    let (mut c, mut fc) = (a, fa);
    let mut step = b - a;
    let mut step_before = step;

    for _ in 0..MOST_STEPS {
        if fc.abs() < fb.abs() {
            (a, b, c) = (b, c, b);
            (fa, fb, fc) = (fb, fc, fb);
        }
        // The smallest normal number keeps the width above zero for a root at zero itself.
        let width = 2.0 * f64::EPSILON * b.abs() + 0.5 * relative * b.abs() + f64::MIN_POSITIVE;
        let half = 0.5 * (c - b);
        if half.abs() <= width || fb == 0.0 {
            return Ok(b);
        }
        (step, step_before) = match interpolated(a, b, c, fa, fb, fc) {
            // Accepted only inside the bracket and if the steps shrink: otherwise halving is safer.
            Some(inner)
                if step_before.abs() >= width
                    && fa.abs() > fb.abs()
                    && inner / half > 0.0
                    && inner.abs() < (1.5 * half.abs() - 0.5 * width).min(0.5 * step_before.abs()) =>
            {
                (inner, step)
            }
            _ => (half, half),
        };
        (a, fa) = (b, fb);
        b += if step.abs() > width { step } else { width.copysign(half) };
        fb = value_at(b)?;
        if (fb > 0.0) == (fc > 0.0) {
            (c, fc) = (a, fa);
            step = b - a;
            step_before = step;
        }
    }
    Err(NoRoot::TooManySteps)
}

/// The step from b to where the interpolation through the three points crosses zero: inverse quadratic, or linear where
/// only two of them differ.
fn interpolated(a: f64, b: f64, c: f64, fa: f64, fb: f64, fc: f64) -> Option<f64> {
    let s = fb / fa;
    let (p, q) = if a == c {
        ((c - b) * s, 1.0 - s)
    } else {
        let (q, r) = (fa / fc, fb / fc);
        (s * ((c - b) * q * (q - r) - (b - a) * (r - 1.0)), (q - 1.0) * (r - 1.0) * (s - 1.0))
    };
    let inner = -p / q;
    inner.is_finite().then_some(inner)
}

#[cfg(test)]
mod tests {
    use super::*;

    /// A function, the ends, and the place that analysis gives.
    type Case = (fn(f64) -> f64, f64, f64, f64);

    #[test]
    fn roots_known_by_analysis_are_found_to_the_last_digits() {
        let cases: [Case; 6] = [
            (|x| x * x * x - 27.0, 0.0, 100.0, 3.0),
            (libm::cos, 0.0, 3.0, core::f64::consts::FRAC_PI_2),
            (|x| libm::exp(x) - 2.0, -50.0, 50.0, core::f64::consts::LN_2),
            // Flat at its root: halving has to take over.
            (|x| (x - 2.0).powi(9), 0.0, 7.0, 2.0),
            // A jump has its place, though no zero.
            (|x| if x < 0.1 { -1.0 } else { 1.0 }, -3.0, 9.0, 0.1),
            (|x| 1e-200 * (x - 1e-90), 0.0, 1.0, 1e-90),
        ];
        for (f, low, high, expected) in cases {
            let forth = root(f, low, high, 1e-15).unwrap();
            let back = root(f, high, low, 1e-15).unwrap();
            let allowed = 4e-15 * expected;
            assert!((forth - expected).abs() <= allowed, "{forth:e} for {expected:e}");
            assert!((back - expected).abs() <= allowed, "{back:e} for {expected:e}");
        }
    }

    #[test]
    fn a_smooth_function_takes_few_steps() {
        // Halving alone would take fifty for fifteen digits.
        let mut steps = 0;
        let count = |x| {
            steps += 1;
            libm::exp(x) - 2.0
        };
        root(count, 0.0, 2.0, 1e-15).unwrap();
        assert!(steps <= 14, "{steps} steps");
    }

    #[test]
    fn an_end_that_is_zero_is_the_root() {
        assert_eq!(root(|x| x, 0.0, 1.0, 1e-12), Ok(0.0));
        assert_eq!(root(|x| x - 1.0, 0.0, 1.0, 1e-12), Ok(1.0));
    }

    #[test]
    fn a_root_at_zero_inside_is_reached() {
        let found = root(libm::sin, -1.0, 2.0, 1e-12).unwrap();
        assert!(found.abs() < 1e-300);
    }

    #[test]
    fn what_cannot_be_bracketed_is_said() {
        assert_eq!(
            root(|x| x * x + 1.0, -1.0, 1.0, 1e-12),
            Err(NoRoot::SameSign { at_low: 2.0, at_high: 2.0 })
        );
        assert_eq!(root(libm::log, 0.0, 2.0, 1e-12), Err(NoRoot::NotFinite { at: 0.0 }));
        assert_eq!(root(|_| f64::NAN, 1.0, 2.0, 1e-12), Err(NoRoot::NotFinite { at: 1.0 }));
    }
}

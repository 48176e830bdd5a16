//! Where a function is least.

/// Steps after which the best place so far is given. Golden sections alone reach the last digit in eighty.
const MOST_STEPS: usize = 200;

/// The smaller part of a golden section, (3 − √5)/2.
const GOLDEN: f64 = 0.381_966_011_250_105_1;

/// The least value found, and its place.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Minimum {
    /// The place.
    pub at: f64,
    /// The value there.
    pub value: f64,
}

/// The least value of a function with a single valley between `low` and `high`, the ends included.
///
/// * `f` – the function; where it is infinite or no number it counts as high ground
/// * `low`, `high` – ends, finite, `low` ≤ `high`
/// * `relative` – wanted accuracy of the place, relative to the larger of the place and the distance of the ends, > 0;
///   less than 1e-8 gains nothing, as the floor of a valley is flat to the last digit there
///
/// A minimum at an end is given as exactly that end. With several valleys it is one of them.
///
/// Source: R. P. Brent, Algorithms for Minimization without Derivatives (Prentice-Hall, 1973), chapter 5.
///
/// # Example
///
/// ```
/// use leastlight::numeric::minimum::minimum;
///
/// let least = minimum(|x| (x - 1.0) * (x - 1.0) + 3.0, 0.0, 5.0, 1e-8);
/// assert!((least.at - 1.0).abs() < 1e-7 && least.value == 3.0);
/// ```
pub fn minimum(mut f: impl FnMut(f64) -> f64, low: f64, high: f64, relative: f64) -> Minimum {
    debug_assert!(low.is_finite() && high.is_finite() && low <= high && relative > 0.0);
    let mut ground = |x: f64| {
        let value = f(x);
        if value.is_nan() { f64::INFINITY } else { value }
    };
    let scale = (high - low).abs();

    // The valley lies between a and b; x is the best place, w the second best, v the one before w.
    let (mut a, mut b) = (low, high);
    let mut x = a + GOLDEN * (b - a);
    let mut fx = ground(x);
    let (mut w, mut v, mut fw, mut fv) = (x, x, fx, fx);
    let (mut step, mut step_before) = (0.0_f64, 0.0_f64);

    for _ in 0..MOST_STEPS {
        let middle = 0.5 * (a + b);
        let width = relative * x.abs().max(scale) + f64::MIN_POSITIVE;
        if (x - middle).abs() <= 2.0 * width - 0.5 * (b - a) {
            break;
        }
        let parabola = vertex_step(x, w, v, fx, fw, fv);
        // Accepted only inside the bracket and if the steps shrink: otherwise a golden section is safer.
        let accepted = parabola.filter(|inner| {
            step_before.abs() > width
                && inner.abs() < (0.5 * step_before).abs()
                && x + inner > a
                && x + inner < b
        });
        (step, step_before) = match accepted {
            // Never so near to an end that the difference of two values is only rounding.
            Some(inner) if x + inner - a < 2.0 * width || b - x - inner < 2.0 * width => {
                (width.copysign(middle - x), step)
            }
            Some(inner) => (inner, step),
            None => {
                let larger = if x < middle { b - x } else { a - x };
                (GOLDEN * larger, larger)
            }
        };
        let u = x + if step.abs() >= width { step } else { width.copysign(step) };
        let fu = ground(u);
        if fu <= fx {
            if u < x {
                b = x
            } else {
                a = x
            }
            (v, w, x) = (w, x, u);
            (fv, fw, fx) = (fw, fx, fu);
        } else {
            if u < x {
                a = u
            } else {
                b = u
            }
            if fu <= fw || w == x {
                (v, w) = (w, u);
                (fv, fw) = (fw, fu);
            } else if fu <= fv || v == x || v == w {
                (v, fv) = (u, fu);
            }
        }
    }
    let inside = Minimum { at: x, value: fx };
    [low, high].into_iter().fold(inside, |best, at| {
        let value = ground(at);
        if value <= best.value { Minimum { at, value } } else { best }
    })
}

/// The step from x to the vertex of the parabola through three points.
fn vertex_step(x: f64, w: f64, v: f64, fx: f64, fw: f64, fv: f64) -> Option<f64> {
    let r = (x - w) * (fx - fv);
    let q = (x - v) * (fx - fw);
    let step = ((x - w) * r - (x - v) * q) / (2.0 * (q - r));
    step.is_finite().then_some(step)
}

#[cfg(test)]
mod tests {
    use super::*;

    /// A function, the ends, and the place that analysis gives.
    type Case = (fn(f64) -> f64, f64, f64, f64);

    #[test]
    fn valleys_known_by_analysis_are_found() {
        let cases: [Case; 4] = [
            (libm::cos, 0.0, 6.0, core::f64::consts::PI),
            // x ln x has its minimum at 1/e.
            (|x| x * libm::log(x), 0.01, 5.0, 0.367_879_441_171_442_3),
            (|x| (x - 0.3).abs(), -1.0, 2.0, 0.3),
            (|x| libm::exp(x) - 5.0 * x, -10.0, 10.0, 1.609_437_912_434_100_3),
        ];
        for (f, low, high, expected) in cases {
            let least = minimum(f, low, high, 1e-9);
            // A smooth floor is flat to the last digit within the root of it.
            assert!((least.at - expected).abs() < 1e-7, "{least:?} for {expected}");
            assert_eq!(least.value, f(least.at));
        }
    }

    #[test]
    fn a_minimum_at_an_end_is_exactly_that_end() {
        assert_eq!(minimum(|x| x, 2.0, 9.0, 1e-8), Minimum { at: 2.0, value: 2.0 });
        assert_eq!(minimum(|x| -x, 2.0, 9.0, 1e-8), Minimum { at: 9.0, value: -9.0 });
        assert_eq!(minimum(|x| x * x, 4.0, 4.0, 1e-8), Minimum { at: 4.0, value: 16.0 });
    }

    #[test]
    fn places_without_a_value_are_high_ground() {
        let least = minimum(|x| if x < 1.0 { f64::NAN } else { (x - 1.5) * (x - 1.5) }, 0.0, 4.0, 1e-8);
        assert!((least.at - 1.5).abs() < 1e-7);
    }
}

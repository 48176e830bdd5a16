//! A smooth curve through a table that never overshoots it.

/// A piecewise cubic through given points that keeps their shape: monotone where they are, flat where they turn.
///
/// ```text
/// slope inside:  (w₁+w₂)/(w₁/δ₁ + w₂/δ₂) with w₁ = h₁+2h₂, w₂ = 2h₁+h₂; 0 where δ₁ and δ₂ differ in sign
/// slope at ends: ((2h₁+h₂)δ₁ − h₁δ₂)/(h₁+h₂); 0 where its sign differs from that of δ₁;
///                at most 3δ₁ where δ₁ and δ₂ differ in sign
/// ```
///
/// h and δ are the widths and the slopes of the neighbouring intervals, counted from the end. With two points the curve is the straight line.
///
/// Source: F. N. Fritsch, J. Butland, SIAM J. Sci. Stat. Comput. 5, 300–304 (1984). These are not the slopes of
/// Fritsch and Carlson (1980).
///
/// # Example
///
/// ```
/// use leastlight::numeric::pchip::Pchip;
///
/// let curve = Pchip::new(&[1.0, 2.0, 3.0], &[0.0, 5.0, 5.0]).unwrap();
/// assert_eq!(curve.value(3.0), Some(5.0));
/// assert_eq!(curve.slope(2.0), Some(0.0));
/// assert_eq!(curve.value(3.1), None); // never outside of its ends
/// ```
#[derive(Clone, Debug)]
pub struct Pchip {
    nodes: Vec<Node>,
}

/// One point, the slope of the curve there, and how that slope hangs on the y of the points around.
#[derive(Clone, Debug)]
struct Node {
    x: f64,
    y: f64,
    slope: f64,
    /// ∂slope/∂y by index; at most three points have a say.
    by_y: Vec<(usize, f64)>,
}

/// Why no curve goes through a table.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum TableFault {
    /// As many x as y are needed.
    Lengths {
        /// How many x there are.
        x: usize,
        /// How many y there are.
        y: usize,
    },
    /// Two points at least are needed.
    TooFew {
        /// How many there are.
        points: usize,
    },
    /// Infinity, or no number.
    NotFinite {
        /// Which point, counted from 0.
        index: usize,
    },
    /// Each x must be greater than the one before.
    NotIncreasing {
        /// The first point that is not, counted from 0.
        index: usize,
    },
    /// The step to this point is too steep, or too narrow beside the whole, to be computed with.
    TooSteep {
        /// Which point, counted from 0.
        index: usize,
    },
}

/// An interval between neighbouring points.
#[derive(Clone, Copy)]
struct Gap {
    width: f64,
    slope: f64,
}

impl Pchip {
    /// The curve through the points (`x`, `y`), sorted by `x`.
    pub fn new(x: &[f64], y: &[f64]) -> Result<Pchip, TableFault> {
        if x.len() != y.len() {
            return Err(TableFault::Lengths { x: x.len(), y: y.len() });
        }
        if x.len() < 2 {
            return Err(TableFault::TooFew { points: x.len() });
        }
        if let Some(index) = x.iter().zip(y).position(|(x, y)| !x.is_finite() || !y.is_finite()) {
            return Err(TableFault::NotFinite { index });
        }
        let pairs = || x.windows(2).zip(y.windows(2));
        if let Some(before) = x.windows(2).position(|pair| pair[0] >= pair[1]) {
            return Err(TableFault::NotIncreasing { index: before + 1 });
        }
        let gaps: Vec<Gap> =
            pairs().map(|(x, y)| Gap { width: x[1] - x[0], slope: (y[1] - y[0]) / (x[1] - x[0]) }).collect();
        // Room for sums and products of slopes, widths and their inverses on the way to a value and its weights.
        let range = gaps.iter().map(|gap| gap.width).sum::<f64>();
        let too_steep =
            |gap: &Gap| !(range / gap.width < 1e100 && gap.slope.abs() * range < f64::MAX / 1e100);
        if let Some(before) = gaps.iter().position(too_steep) {
            return Err(TableFault::TooSteep { index: before + 1 });
        }
        let nodes = x.iter().zip(y).enumerate().map(|(index, (&x, &y))| {
            let (slope, by_y) = slope_at(index, &gaps);
            Node { x, y, slope, by_y }
        });
        Ok(Pchip { nodes: nodes.collect() })
    }

    /// The curve at `x`; nothing outside of its ends.
    pub fn value(&self, x: f64) -> Option<f64> {
        let (_, [left, right]) = self.interval(x)?;
        let [h00, h10, h01, h11] = hermite(left, right, x);
        Some(h00 * left.y + h10 * left.slope + h01 * right.y + h11 * right.slope)
    }

    /// The slope of the curve at `x`; nothing outside of its ends.
    pub fn slope(&self, x: f64) -> Option<f64> {
        let (_, [left, right]) = self.interval(x)?;
        let h = right.x - left.x;
        let s = (x - left.x) / h;
        let rise = (right.y - left.y) / h;
        let from_rise = 6.0 * s * (1.0 - s) * rise;
        Some(from_rise + (1.0 - s) * (1.0 - 3.0 * s) * left.slope + s * (3.0 * s - 2.0) * right.slope)
    }

    /// How the curve at `x` hangs on each y of the table: pairs of index and ∂value/∂y, each index once and in rising
    /// order, at most four of them; nothing outside of its ends.
    ///
    /// They sum to 1, because lifting all y lifts the curve. Where a slope sits at a limit (a turning point, a limited
    /// end) its derivative is taken from inside that limit.
    pub fn weights(&self, x: f64) -> Option<Vec<(usize, f64)>> {
        let (index, [left, right]) = self.interval(x)?;
        let [h00, h10, h01, h11] = hermite(left, right, x);
        let through_slopes = left.by_y.iter().map(|&(i, w)| (i, h10 * w));
        let through_slopes = through_slopes.chain(right.by_y.iter().map(|&(i, w)| (i, h11 * w)));
        let mut weights: Vec<(usize, f64)> = Vec::with_capacity(4);
        for (i, weight) in [(index, h00), (index + 1, h01)].into_iter().chain(through_slopes) {
            match weights.iter_mut().find(|(known, _)| *known == i) {
                Some((_, sum)) => *sum += weight,
                None => weights.push((i, weight)),
            }
        }
        weights.sort_unstable_by_key(|(i, _)| *i);
        Some(weights)
    }

    /// The curve at `x` if the table held other values: `y` gives them by index, and is asked for those around `x` only.
    /// Nothing outside of its ends.
    #[inline]
    pub fn value_with(&self, x: f64, y: impl Fn(usize) -> f64) -> Option<f64> {
        let (index, [left, right]) = self.interval(x)?;
        let gap = |before: usize| {
            let (from, to) = (self.nodes.get(before)?, self.nodes.get(before + 1)?);
            let width = to.x - from.x;
            Some(Gap { width, slope: (y(before + 1) - y(before)) / width })
        };
        let slope = |at: usize| match (at.checked_sub(1).and_then(gap), gap(at)) {
            (Some(before), Some(after)) => inner_slope(before, after).0,
            (None, Some(first)) => end_slope(first, gap(1)).0,
            (Some(last), None) => end_slope(last, at.checked_sub(2).and_then(gap)).0,
            (None, None) => 0.0,
        };
        let [h00, h10, h01, h11] = hermite(left, right, x);
        Some(h00 * y(index) + h10 * slope(index) + h01 * y(index + 1) + h11 * slope(index + 1))
    }

    /// Every x of the table: where the cubic pieces meet.
    pub fn places(&self) -> impl Iterator<Item = f64> {
        self.nodes.iter().map(|node| node.x)
    }

    /// The y of a point of the table, counted from 0; 0 where there is none.
    pub fn y(&self, index: usize) -> f64 {
        self.nodes.get(index).map_or(0.0, |node| node.y)
    }

    /// The first x of the table.
    pub fn first(&self) -> f64 {
        self.nodes.first().map_or(f64::INFINITY, |node| node.x)
    }

    /// The last x of the table.
    pub fn last(&self) -> f64 {
        self.nodes.last().map_or(f64::NEG_INFINITY, |node| node.x)
    }

    /// The interval that holds `x`: the index of its left end, and both ends.
    fn interval(&self, x: f64) -> Option<(usize, [&Node; 2])> {
        if !(self.first() <= x && x <= self.last()) {
            return None;
        }
        let right = self.nodes.partition_point(|node| node.x <= x).min(self.nodes.len().saturating_sub(1));
        let left = right.checked_sub(1)?;
        Some((left, [self.nodes.get(left)?, self.nodes.get(right)?]))
    }
}

/// The four cubics of Hermite at `x`: for the left y and slope, then for the right y and slope.
fn hermite(left: &Node, right: &Node, x: f64) -> [f64; 4] {
    let h = right.x - left.x;
    let (s, t) = ((x - left.x) / h, (right.x - x) / h);
    [t * t * (1.0 + 2.0 * s), h * s * t * t, s * s * (1.0 + 2.0 * t), -h * s * s * t]
}

/// The slope at a node, with its derivatives by the y of the table.
fn slope_at(index: usize, gaps: &[Gap]) -> (f64, Vec<(usize, f64)>) {
    let before = index.checked_sub(1).and_then(|i| gaps.get(i));
    match (before, gaps.get(index)) {
        (Some(&before), Some(&after)) => {
            let (slope, by_before, by_after) = inner_slope(before, after);
            let (low, high) = (by_before / before.width, by_after / after.width);
            (slope, vec![(index - 1, -low), (index, low - high), (index + 1, high)])
        }
        (None, Some(&first)) => {
            let (slope, near, far) = end_slope(first, gaps.get(1).copied());
            let mut by_y = vec![(index, -near), (index + 1, near - far.unwrap_or(0.0))];
            by_y.extend(far.map(|far| (index + 2, far)));
            (slope, by_y)
        }
        (Some(&last), None) => {
            let second = index.checked_sub(2).and_then(|i| gaps.get(i)).copied();
            let (slope, near, far) = end_slope(last, second);
            let mut by_y = vec![(index - 1, far.unwrap_or(0.0) - near), (index, near)];
            by_y.extend(far.map(|far| (index - 2, -far)));
            (slope, by_y)
        }
        (None, None) => (0.0, Vec::new()),
    }
}

/// The weighted harmonic mean of the slopes on both sides, and its derivative by each.
fn inner_slope(before: Gap, after: Gap) -> (f64, f64, f64) {
    let (d1, d2) = (before.slope, after.slope);
    if d1 == 0.0 || d2 == 0.0 || (d1 > 0.0) != (d2 > 0.0) {
        return (0.0, 0.0, 0.0);
    }
    let (w1, w2) = (2.0 * after.width + before.width, after.width + 2.0 * before.width);
    let (share1, share2) = (w1 / (w1 + w2), w2 / (w1 + w2));
    let slope = 1.0 / (share1 / d1 + share2 / d2);
    let (ratio1, ratio2) = (slope / d1, slope / d2);
    (slope, share1 * ratio1 * ratio1, share2 * ratio2 * ratio2)
}

/// The slope at an end from the two intervals next to it, and its derivative by the rise over each of them.
fn end_slope(near: Gap, far: Option<Gap>) -> (f64, f64, Option<f64>) {
    let Some(far) = far else {
        return (near.slope, 1.0 / near.width, None);
    };
    let share = near.width / (near.width + far.width);
    let slope = near.slope + share * (near.slope - far.slope);
    if near.slope == 0.0 || slope == 0.0 || (slope > 0.0) != (near.slope > 0.0) {
        (0.0, 0.0, Some(0.0))
    } else if (near.slope > 0.0) != (far.slope > 0.0) && slope.abs() > 3.0 * near.slope.abs() {
        (3.0 * near.slope, 3.0 / near.width, Some(0.0))
    } else {
        (slope, (1.0 + share) / near.width, Some(-share / far.width))
    }
}

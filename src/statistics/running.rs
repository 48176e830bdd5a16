//! Mean, scatter and trend of values that come one by one and are not kept.

/// Mean and standard deviation.
///
/// ```text
/// mₙ = mₙ₋₁ + (x − mₙ₋₁)/n      Sₙ = Sₙ₋₁ + (x − mₙ₋₁)(x − mₙ)      s² = Sₙ/(n − 1)
/// ```
///
/// Unlike a sum of squares it does not cancel where the scatter is small beside the mean.
///
/// Source: B. P. Welford, Technometrics 4, 419–420 (1962); s as JCGM 100:2008, 4.2.2.
///
/// # Example
///
/// ```
/// use leastlight::statistics::running::Moments;
///
/// let mut moments = Moments::default();
/// for value in [1.0, 2.0, 3.0, 4.0] {
///     moments.add(value);
/// }
/// assert_eq!(moments.mean(), Some(2.5));
/// assert!((moments.standard_deviation().unwrap() - (5.0_f64 / 3.0).sqrt()).abs() < 1e-15);
/// ```
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct Moments {
    count: f64,
    mean: f64,
    squares: f64,
}

impl Moments {
    /// Takes a value.
    pub fn add(&mut self, value: f64) {
        self.count += 1.0;
        let off = value - self.mean;
        self.mean += off / self.count;
        self.squares += off * (value - self.mean);
    }

    /// How many values there were.
    pub fn count(&self) -> usize {
        self.count as usize
    }

    /// Their mean; nothing without values.
    pub fn mean(&self) -> Option<f64> {
        (self.count > 0.0).then_some(self.mean)
    }

    /// The standard deviation of one value about the mean; nothing for fewer than two.
    pub fn standard_deviation(&self) -> Option<f64> {
        (self.count > 1.0).then(|| (self.squares / (self.count - 1.0)).sqrt())
    }
}

/// The straight line of least squares through values over places.
///
/// ```text
/// b = Σ(x − x̄)(y − ȳ) / Σ(x − x̄)²
/// ```
///
/// Both sums are carried on from value to value as Welford's are.
///
/// Source: of the line, JCGM 100:2008, H.3; of the step, T. F. Chan, G. H. Golub, R. J. LeVeque, Am. Stat. 37, 242–247
/// (1983), for a pair of which one part is a single value.
///
/// # Example
///
/// ```
/// use leastlight::statistics::running::Trend;
///
/// let mut trend = Trend::default();
/// for (x, y) in [(0.0, 1.0), (1.0, 3.0), (2.0, 5.0)] {
///     trend.add(x, y);
/// }
/// assert_eq!(trend.slope(), Some(2.0));
/// ```
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct Trend {
    count: f64,
    x: f64,
    y: f64,
    xx: f64,
    xy: f64,
}

impl Trend {
    /// Takes a value `y` at a place `x`.
    pub fn add(&mut self, x: f64, y: f64) {
        self.count += 1.0;
        let (off_x, off_y) = (x - self.x, y - self.y);
        self.x += off_x / self.count;
        self.y += off_y / self.count;
        self.xx += off_x * (x - self.x);
        self.xy += off_x * (y - self.y);
    }

    /// Change of y per unit of x; nothing where all values stand at one place.
    pub fn slope(&self) -> Option<f64> {
        (self.xx > 0.0).then(|| self.xy / self.xx).filter(|slope| slope.is_finite())
    }
}

//! Light that is no single wavelength: a spectrum, and averages over it.

use libm::{erfc, exp};

/// Half the width at which a Gaussian line is cut, in full widths at half maximum. Beyond it lie 1.6e-12 of the light.
pub const CUT_FWHM: f64 = 3.0;

/// Full width at half maximum over standard deviation of a Gaussian, 2 √(2 ln 2).
const FWHM_BY_SIGMA: f64 = 2.354_820_045_030_949_4;

/// Where light lies: power per nm against wavelength, on any scale, for only its shape counts.
#[derive(Debug, Clone, PartialEq)]
pub enum Spectrum {
    /// A Gaussian line, cut at ± [`CUT_FWHM`] of its full widths.
    Gaussian {
        /// Where it is highest, nm.
        centre_nm: f64,
        /// Full width at half maximum, nm, > 0.
        fwhm_nm: f64,
    },
    /// Power per nm at wavelengths (nm, rising), ≥ 0 and somewhere above; straight lines between, nothing beyond.
    Table(Vec<(f64, f64)>),
}

/// A part of the light that is taken at one wavelength.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Share {
    /// Where, nm.
    pub wavelength_nm: f64,
    /// Which part of all light.
    pub share: f64,
}

/// Gauss–Legendre points on 0 to 1 and their weights: exact to degree 9.
const LEGENDRE: [(f64, f64); 5] = [
    (0.046_910_077_030_668_004, 0.118_463_442_528_094_54),
    (0.230_765_344_947_158_45, 0.239_314_335_249_683_23),
    (0.5, 0.284_444_444_444_444_45),
    (0.769_234_655_052_841_6, 0.239_314_335_249_683_23),
    (0.953_089_922_969_332, 0.118_463_442_528_094_54),
];

/// Gauss–Hermite points for the standard normal density, √(5 ∓ √10), and their weights, (7 ± 2√10)/60: exact to degree 9.
const HERMITE: [(f64, f64); 5] = [
    (-2.856_970_013_872_805_6, 0.011_257_411_327_720_69),
    (-1.355_626_179_974_266, 0.222_075_922_005_612_64),
    (0.0, 0.533_333_333_333_333_3),
    (1.355_626_179_974_266, 0.222_075_922_005_612_64),
    (2.856_970_013_872_805_6, 0.011_257_411_327_720_69),
];

impl Spectrum {
    /// The wavelengths between which all of the light lies, nm.
    pub fn window_nm(&self) -> (f64, f64) {
        match self {
            Spectrum::Gaussian { centre_nm, fwhm_nm } => {
                (centre_nm - CUT_FWHM * fwhm_nm, centre_nm + CUT_FWHM * fwhm_nm)
            }
            Spectrum::Table(points) => {
                let ends = points.first().zip(points.last());
                ends.map_or((0.0, 0.0), |(first, last)| (first.0, last.0))
            }
        }
    }

    /// Power per nm at a wavelength, on the spectrum's own scale; a Gaussian line is 1 at its centre.
    pub fn density(&self, wavelength_nm: f64) -> f64 {
        let (low, high) = self.window_nm();
        if !(low <= wavelength_nm && wavelength_nm <= high) {
            return 0.0;
        }
        match self {
            Spectrum::Gaussian { centre_nm, fwhm_nm } => {
                let z = (wavelength_nm - centre_nm) * FWHM_BY_SIGMA / fwhm_nm;
                exp(-0.5 * z * z)
            }
            Spectrum::Table(points) => {
                let right = points.partition_point(|point| point.0 <= wavelength_nm);
                match (right.checked_sub(1).and_then(|left| points.get(left)), points.get(right)) {
                    (Some(left), Some(right)) => between(*left, *right, wavelength_nm),
                    (left, right) => left.or(right).map_or(0.0, |end| end.1),
                }
            }
        }
    }

    /// The part of the light that lies outside of `low_nm` to `high_nm`, 0 to 1.
    ///
    /// ```text
    /// 1 − ∫S dλ (low to high) / ∫S dλ (all)
    /// ```
    ///
    /// Each side is integrated by itself, so that a small part keeps its digits.
    pub fn share_outside(&self, low_nm: f64, high_nm: f64) -> f64 {
        let part = match self {
            Spectrum::Gaussian { centre_nm, fwhm_nm } => {
                let z = |nm: f64| (nm - centre_nm) * FWHM_BY_SIGMA / fwhm_nm;
                let cut = CUT_FWHM * FWHM_BY_SIGMA;
                // Chance beyond z of the whole line, less what the cut took away.
                let beyond = |z: f64| (upper_tail(z.clamp(-cut, cut)) - upper_tail(cut)).max(0.0);
                (beyond(-z(low_nm)) + beyond(z(high_nm))) / (1.0 - 2.0 * upper_tail(cut))
            }
            Spectrum::Table(points) => {
                let (first, last) = self.window_nm();
                let below = area(points, first, low_nm.min(last));
                let above = area(points, high_nm.max(first), last);
                (below + above) / area(points, first, last)
            }
        };
        part.clamp(0.0, 1.0)
    }

    /// Cuts the light between `low_nm` and `high_nm` into parts at single wavelengths, such that a sum over them is
    /// the average over the spectrum:
    ///
    /// ```text
    /// ∫S(λ) R(λ) dλ / ∫S(λ) dλ = Σ share · R(wavelength)
    /// ```
    ///
    /// * `breaks_nm` – where the pieces of R meet, rising; between them R is smooth
    ///
    /// For a table and an R of cubic pieces the sum is exact: the product is of degree 4 between all breaks, and the
    /// rule is exact to 9. For a Gaussian line it is exact where no break lies within the line; otherwise pieces of
    /// half a standard deviation leave less than 1e-12. Empty where no light lies between the ends.
    ///
    /// Source: of the average, the definition of responsivity for light of several wavelengths, I = ∫S R dλ; of the
    /// rules, M. Abramowitz, I. A. Stegun, Handbook of Mathematical Functions (1964), 25.4.29 and 25.4.46.
    ///
    /// # Example
    ///
    /// ```
    /// use leastlight::physics::spectrum::Spectrum;
    ///
    /// // The mean of λ² over a line is the centre's square and the variance, (fwhm/2.3548)².
    /// let line = Spectrum::Gaussian { centre_nm: 1550.0, fwhm_nm: 2.354820045 };
    /// let shares = line.shares(&[], 1000.0, 2000.0);
    /// let mean: f64 = shares.iter().map(|part| part.share * part.wavelength_nm.powi(2)).sum();
    /// assert!((mean - 1550.0_f64.powi(2) - 1.0).abs() < 1e-6);
    /// ```
    pub fn shares(&self, breaks_nm: &[f64], low_nm: f64, high_nm: f64) -> Vec<Share> {
        let (first, last) = self.window_nm();
        let (low, high) = (first.max(low_nm), last.min(high_nm));
        let inside = |nm: &f64| low < *nm && *nm < high;
        let mut breaks: Vec<f64> = breaks_nm.iter().copied().filter(inside).collect();
        match self {
            Spectrum::Gaussian { centre_nm, fwhm_nm } => {
                let sigma_nm = fwhm_nm / FWHM_BY_SIGMA;
                if breaks.is_empty() && (low, high) == (first, last) {
                    let part = |(z, share)| Share { wavelength_nm: centre_nm + z * sigma_nm, share };
                    return HERMITE.map(part).to_vec();
                }
                let halves = (CUT_FWHM * FWHM_BY_SIGMA * 2.0) as i32;
                let own = (-halves..=halves).map(|half| centre_nm + 0.5 * f64::from(half) * sigma_nm);
                breaks.extend(own.filter(inside));
            }
            Spectrum::Table(points) => breaks.extend(points.iter().map(|point| point.0).filter(inside)),
        }
        breaks.sort_by(f64::total_cmp);
        breaks.dedup();
        let starts = std::iter::once(low).chain(breaks.iter().copied());
        let ends = breaks.iter().copied().chain(std::iter::once(high));
        let mut parts = Vec::with_capacity((breaks.len() + 1) * LEGENDRE.len());
        for (start, end) in starts.zip(ends).filter(|(start, end)| start < end) {
            parts.extend(LEGENDRE.map(|(place, weight)| {
                let wavelength_nm = start + (end - start) * place;
                Share { wavelength_nm, share: (end - start) * weight * self.density(wavelength_nm) }
            }));
        }
        let total: f64 = parts.iter().map(|part| part.share).sum();
        if !(total > 0.0 && total.is_finite()) {
            return Vec::new();
        }
        for part in &mut parts {
            part.share /= total;
        }
        parts
    }

    /// The mean wavelength of the light, nm.
    pub fn centroid_nm(&self) -> f64 {
        match self {
            Spectrum::Gaussian { centre_nm, .. } => *centre_nm,
            Spectrum::Table(_) => {
                let (first, last) = self.window_nm();
                let from_first = |part: &Share| part.share * (part.wavelength_nm - first);
                first + self.shares(&[], first, last).iter().map(from_first).sum::<f64>()
            }
        }
    }
}

/// Chance that a standard normal value exceeds `z`.
fn upper_tail(z: f64) -> f64 {
    0.5 * erfc(z * core::f64::consts::FRAC_1_SQRT_2)
}

/// The straight line through two points.
fn between(left: (f64, f64), right: (f64, f64), at: f64) -> f64 {
    let part = (at - left.0) / (right.0 - left.0);
    left.1 * (1.0 - part) + right.1 * part
}

/// The area under the straight lines between two places, both within the table; 0 where they are the wrong way round.
fn area(points: &[(f64, f64)], from: f64, to: f64) -> f64 {
    let piece = |pair: &[(f64, f64)]| {
        let [left, right] = pair else { return 0.0 };
        let (start, end) = (left.0.max(from), right.0.min(to));
        if start >= end {
            return 0.0;
        }
        0.5 * (end - start) * (between(*left, *right, start) + between(*left, *right, end))
    };
    points.windows(2).map(piece).sum()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn mean(shares: &[Share], of: impl Fn(f64) -> f64) -> f64 {
        shares.iter().map(|part| part.share * of(part.wavelength_nm)).sum()
    }

    /// A triangle from 1540 over 1550 to 1570: centroid (1540 + 1550 + 1570)/3, by the centroid of its corners.
    fn triangle() -> Spectrum {
        Spectrum::Table(vec![(1540.0, 0.0), (1550.0, 3.0), (1570.0, 0.0)])
    }

    #[test]
    fn a_triangle_has_the_moments_of_a_triangle() {
        let corners = [1540.0, 1550.0, 1570.0];
        let centroid = corners.iter().sum::<f64>() / 3.0;
        assert!((triangle().centroid_nm() - centroid).abs() < 1e-11);
        // Variance of the triangular distribution: (a² + b² + c² − ab − ac − bc)/18 = 700/18 with a, b, c = 0, 10, 30.
        let shares = triangle().shares(&[1545.0, 1552.0], 0.0, 3000.0);
        assert!((mean(&shares, |nm| (nm - centroid).powi(2)) - 700.0 / 18.0).abs() < 1e-10);
        assert!((mean(&shares, |_| 1.0) - 1.0).abs() < 1e-15);
    }

    #[test]
    fn what_lies_outside_is_counted_on_both_sides() {
        // Below 1545 a quarter of the left part, which is a third of the whole; above 1560 a quarter of two thirds.
        let outside = triangle().share_outside(1545.0, 1560.0);
        assert!((outside - (0.25 / 3.0 + 0.25 * 2.0 / 3.0)).abs() < 1e-14);
        assert_eq!(triangle().share_outside(1540.0, 1570.0), 0.0);
        assert_eq!(triangle().share_outside(1600.0, 1700.0), 1.0);
        assert_eq!(triangle().share_outside(1400.0, 1500.0), 1.0);
        let line = Spectrum::Gaussian { centre_nm: 1550.0, fwhm_nm: FWHM_BY_SIGMA };
        // One standard deviation on one side: 15.8655253931457 % (Abramowitz and Stegun, table 26.1).
        assert!((line.share_outside(1000.0, 1551.0) - 0.158_655_253_931_457).abs() < 1e-12);
        assert_eq!(line.share_outside(1500.0, 1600.0), 0.0);
        assert!((line.share_outside(1550.0, 1551.0) - 0.658_655_253_931_457).abs() < 1e-12);
        assert!((line.share_outside(1600.0, 1700.0) - 1.0).abs() < 1e-15);
    }

    #[test]
    fn a_kink_within_a_line_is_no_step() {
        // E|z| = √(2/π)·(1 − e^(−c²/2))/(1 − 2Q(c)) for a standard normal z cut at ±c; here e^(−c²/2) = 2⁻³⁶.
        let line = Spectrum::Gaussian { centre_nm: 1550.0, fwhm_nm: FWHM_BY_SIGMA };
        let shares = line.shares(&[1550.0], 1500.0, 1600.0);
        let kept = (1.0 - 2.0_f64.powi(-36)) / (1.0 - 2.0 * upper_tail(CUT_FWHM * FWHM_BY_SIGMA));
        let expected = (2.0 / core::f64::consts::PI).sqrt() * kept;
        assert!((mean(&shares, |nm| (nm - 1550.0).abs()) - expected).abs() < 1e-12);
        // The same average without a break at the kink is off: the break matters.
        let careless = line.shares(&[], 1500.0, 1600.0);
        assert!((mean(&careless, |nm| (nm - 1550.0).abs()) - expected).abs() > 1e-3);
    }

    #[test]
    fn the_two_rules_for_a_line_agree() {
        let line = Spectrum::Gaussian { centre_nm: 1550.0, fwhm_nm: 40.0 };
        let smooth = |nm: f64| 0.9 + 2e-3 * (nm - 1550.0) - 1e-5 * (nm - 1550.0).powi(2);
        let whole = mean(&line.shares(&[], 1000.0, 2000.0), smooth);
        let pieces = mean(&line.shares(&[1503.0, 1571.0], 1000.0, 2000.0), smooth);
        assert!((whole - pieces).abs() < 1e-12, "{whole} {pieces}");
    }

    #[test]
    fn a_line_without_width_to_speak_of_stays_at_its_centre() {
        let line = Spectrum::Gaussian { centre_nm: 1550.0, fwhm_nm: 1e-15 };
        for breaks in [&[][..], &[1550.0]] {
            let shares = line.shares(breaks, 1000.0, 2000.0);
            assert!(shares.iter().all(|part| (part.wavelength_nm - 1550.0).abs() < 1e-12));
        }
    }

    #[test]
    fn where_no_light_is_there_are_no_parts() {
        assert!(triangle().shares(&[], 1600.0, 1700.0).is_empty());
        assert!(triangle().shares(&[], 1570.0, 1570.0).is_empty());
    }
}

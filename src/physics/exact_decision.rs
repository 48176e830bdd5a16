//! Telling counts apart: thresholds, and the bit error ratio that remains, with the statistics that counts really have.
//!
//! The counterpart of [`decision`](super::decision), with the same codes. The threshold of the least error ratio is where the densities of
//! what it parts are equal. With the same noise at all levels there is one such place: given the number of primary electrons the
//! gain's distribution has a monotone likelihood ratio, as has the Poisson number itself, and adding noise keeps it so (S. Karlin,
//! Total Positivity, 1968, chapter 3). Intensity noise differs from level to level; there, and where
//! single electrons stand apart, neighbouring places are compared.

use super::counting::{Chances, Count, mixed};
use super::decision::{bits, sign};
use crate::numeric::minimum::minimum;
use crate::numeric::root::root;

/// Where the thresholds are put.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Rule {
    /// Where the bit error ratio is least.
    Optimum,
    /// Halfway between neighbouring means.
    Midpoint,
}

/// Thresholds, and what they achieve.
#[derive(Clone, Debug, PartialEq)]
pub struct CountDecision {
    /// Share of bits that are read wrongly.
    pub error_ratio: f64,
    /// Thresholds in electrons, lowest first; whole numbers where counts are whole. A count at the threshold is above it.
    pub thresholds: Vec<f64>,
}

/// Decides between two levels (NRZ) or four (PAM4).
///
/// * `levels` – lowest mean first
/// * `rule` – where the thresholds are put; the best of four levels are sought between their neighbours, of two anywhere
///
/// # Example
///
/// ```
/// use leastlight::physics::counting::Count;
/// use leastlight::physics::exact_decision::{Rule, decide};
/// use leastlight::physics::gain_transform::Gain;
///
/// // Ideal counting: only an empty one is misread, ½e^(−20).
/// let count = |primaries| Count { primaries, gain: Gain::UNIT, unmultiplied: 0.0, noise: 0.0, light_noise: 0.0 };
/// let decision = decide(&[count(0.0), count(20.0)], Rule::Optimum);
/// assert!((decision.error_ratio / (0.5 * (-20f64).exp()) - 1.0).abs() < 1e-7);
/// assert_eq!(decision.thresholds, [1.0]);
/// ```
pub fn decide(levels: &[Count], rule: Rule) -> CountDecision {
    debug_assert!(matches!(levels.len(), 2 | 4));
    let eye = |below: usize| {
        let parted = Parted { levels, below };
        match rule {
            Rule::Optimum => parted.best(),
            Rule::Midpoint => parted.at(parted.middle()),
        }
    };
    let places: Vec<Place> = (1..levels.len()).map(eye).collect();
    CountDecision {
        error_ratio: places.iter().map(|place| place.wrong_bits).sum::<f64>() / bits(levels),
        thresholds: places.iter().map(|place| place.threshold).collect(),
    }
}

/// Bit error ratio with the thresholds given, in electrons, lowest first.
pub fn error_ratio_at(levels: &[Count], thresholds: &[f64]) -> f64 {
    let wrong =
        |(index, &threshold): (usize, &f64)| Parted { levels, below: index + 1 }.at(threshold).wrong_bits;
    thresholds.iter().enumerate().map(wrong).sum::<f64>() / bits(levels)
}

/// The same count with its lumps smoothed out.
fn soft(count: &Count) -> Count {
    Count { noise: count.noise.max(ELECTRONS_SHOW), ..*count }
}

/// Levels, parted by the threshold that has `below` of them beneath it.
struct Parted<'l> {
    levels: &'l [Count],
    below: usize,
}

/// A threshold with what it does.
#[derive(Clone, Copy)]
struct Place {
    threshold: f64,
    /// Bits read wrongly on its account, summed over the levels.
    wrong_bits: f64,
    /// Logarithm of the densities that lose by a higher threshold over those that gain, and its derivative.
    balance: f64,
    slope: f64,
}

/// Balance at which a threshold is the best one: the error ratio is flat there, to an eighth of its square.
const BALANCED: f64 = 1e-3;

/// Electrons within which a threshold is found.
const NARROW: f64 = 1e-5;

/// Steps towards it.
const MOST_STEPS: usize = 60;

/// Logarithm of a ratio of densities that is nothing.
const NOTHING_BESIDE: f64 = 40.0;

/// Variance of a count in which a single electron is nothing.
const WIDE_VARIANCE: f64 = 1e7;

/// Electrons by which a threshold is past a count.
const JUST_PAST: f64 = 1e-6;

/// Noise in electrons below which counts stand apart as lumps.
const ELECTRONS_SHOW: f64 = 0.5;

impl Parted<'_> {
    /// The neighbours of the threshold.
    fn neighbours(&self) -> Option<(&Count, &Count)> {
        Some((self.levels.get(self.below.checked_sub(1)?)?, self.levels.get(self.below)?))
    }

    fn middle(&self) -> f64 {
        self.neighbours().map_or(0.0, |(lower, upper)| 0.5 * (lower.mean() + upper.mean()))
    }

    fn at(&self, threshold: f64) -> Place {
        let chances: Vec<Chances> = match self.levels {
            [_, _] => self.levels.iter().map(|level| level.chances(threshold)).collect(),
            _ => self.chances_of_four(threshold),
        };
        let wrong = |(index, chances): (usize, &Chances)| {
            let sign = sign(self.below, index);
            if index < self.below { -sign * chances.above } else { sign * chances.below }
        };
        let (balance, slope) = self.balance(chances.iter().map(|one| (one.ln_density, one.slope)));
        Place { threshold, wrong_bits: chances.iter().enumerate().map(wrong).sum(), balance, slope }
    }

    /// Levels beyond the neighbours hardly ever come this far; it is seen at little cost.
    fn chances_of_four(&self, threshold: f64) -> Vec<Chances> {
        let rough = |level: &Count| level.rough_density(threshold).0;
        let near = self.neighbours().map_or(0.0, |(lower, upper)| rough(lower).min(rough(upper)));
        let chances = |(index, level): (usize, &Count)| {
            let beyond = index + 1 < self.below || index > self.below;
            if beyond && rough(level) < near - NOTHING_BESIDE {
                let (below, above) = if index < self.below { (1.0, 0.0) } else { (0.0, 1.0) };
                return Chances { below, above, ln_density: f64::NEG_INFINITY, slope: 0.0 };
            }
            level.chances(threshold)
        };
        self.levels.iter().enumerate().map(chances).collect()
    }

    /// From the logarithms of the levels' densities with their slopes.
    fn balance(&self, densities: impl Iterator<Item = (f64, f64)>) -> (f64, f64) {
        let nothing = (f64::NEG_INFINITY, 0.0);
        let (mut losing, mut gaining) = (nothing, nothing);
        for (index, density) in densities.enumerate() {
            let side = if sign(self.below, index) > 0.0 { &mut losing } else { &mut gaining };
            *side = mixed(*side, density);
        }
        (losing.0 - gaining.0, losing.1 - gaining.1)
    }

    fn rough_balance(&self, threshold: f64) -> f64 {
        let (balance, _) = self.balance(self.levels.iter().map(|level| soft(level).rough_density(threshold)));
        // A density may be none at all, even both.
        if balance.is_nan() { 0.0 } else { balance.clamp(-1e6, 1e6) }
    }

    /// The threshold of the fewest wrong bits: found in approximate densities, mended with exact ones.
    fn best(&self) -> Place {
        let whole = self.levels.iter().all(Count::is_whole);
        if let [dark, _] = self.levels
            && dark.mean() == 0.0
            && dark.is_whole()
        {
            // Nothing at all comes in a dark zero, so the least count is a one.
            return self.at(if whole { 1.0 } else { JUST_PAST });
        }
        let (rough, low, high) =
            self.rough().unwrap_or_else(|| (self.middle(), self.middle(), self.middle()));
        let narrow = |level: &Count| level.total_noise() < ELECTRONS_SHOW && level.variance() < WIDE_VARIANCE;
        if !self.levels.iter().any(narrow) {
            // Lumps are far finer than the threshold need be placed.
            let levels: Vec<Count> = self.levels.iter().map(soft).collect();
            let place = Parted { levels: &levels, ..*self }.balanced(rough, low, high);
            return self.at(if whole { place.threshold.round() } else { place.threshold });
        }
        if whole {
            return self.least_on_grid(self.at(rough.round()));
        }
        let on_grid = |offset: f64| self.least_on_grid(self.at(rough.floor() + offset));
        if self.levels.iter().any(Count::is_whole) {
            // Just past a count of the level without noise, or at one: in between nothing of it changes.
            let (past, at) = (on_grid(JUST_PAST), on_grid(0.0));
            return if at.wrong_bits < past.wrong_bits { at } else { past };
        }
        // Between lumps there is no density to go by, but from half to half the wrong bits have one valley.
        let near = on_grid(0.5);
        let wrong = |shift: f64| self.at(near.threshold + shift).wrong_bits;
        let least = self.at(near.threshold + minimum(wrong, -1.0, 1.0, 0.01).at);
        if least.wrong_bits < near.wrong_bits { least } else { near }
    }

    /// Where approximate densities balance; an end of what was searched where they do not.
    /// With it the ends between which it was sought.
    fn rough(&self) -> Option<(f64, f64, f64)> {
        let (lower, upper) = self.neighbours()?;
        let (mut low, mut high) = (lower.mean(), upper.mean());
        // Two levels deep in noise may be parted best beyond their means, because a skewed density is highest below its mean.
        // Far below, the level with the wider noise is the likelier again, so the steps are small.
        if self.levels.len() == 2 {
            // Down to no electron at all, then into the noise about it.
            let noise = soft(lower).total_noise();
            let smaller = |place: &f64| Some(0.7 * place).filter(|place| *place > noise);
            let downwards = core::iter::successors(smaller(&lower.mean()), smaller);
            let into_noise = (0..=6).map(|n| -f64::from(n) * noise);
            for place in downwards.chain(into_noise) {
                if self.rough_balance(low) <= 0.0 {
                    break;
                }
                low = place;
            }
            let step = upper.variance().sqrt();
            let highest = upper.mean() + 8.0 * step;
            while self.rough_balance(high) < 0.0 && high < highest {
                high += step;
            }
        }
        if self.rough_balance(low) > 0.0 {
            return Some((low, low, high));
        }
        if self.rough_balance(high) < 0.0 {
            return Some((high, low, high));
        }
        let length = high - low;
        let share = root(|share| self.rough_balance(low + share * length), 0.0, 1.0, 1e-4).ok()?;
        Some((low + share * length, low, high))
    }

    /// Newton's method for the balance, between the places that are known to be too low and too high; the ends are known only
    /// approximately, so they are set back a little.
    fn balanced(&self, start: f64, low: f64, high: f64) -> Place {
        let margin = 0.1 * (high - low).abs() + 1.0;
        let (mut low, mut high) = (low - margin, high + margin);
        let mut place = self.at(start);
        let mut best = place;
        for _ in 0..MOST_STEPS {
            // No number where all densities are below the smallest: then nothing is wrong on any side.
            if place.balance.is_nan() || place.balance.abs() <= BALANCED {
                break;
            }
            if place.balance < 0.0 {
                low = place.threshold;
            } else {
                high = place.threshold;
            }
            let newton = place.threshold - place.balance / place.slope;
            let inside = place.slope > 0.0 && low < newton && newton < high;
            let next = if inside { newton } else { 0.5 * (low + high) };
            if next == place.threshold || high - low < NARROW {
                break;
            }
            place = self.at(next);
            if place.wrong_bits < best.wrong_bits {
                best = place;
            }
        }
        // Of places that differ by rounding only, the last is the most balanced.
        if best.wrong_bits < place.wrong_bits * (1.0 - 1e-6) { best } else { place }
    }

    /// The least of the places that are whole electrons away, by steps that double while they help.
    fn least_on_grid(&self, start: Place) -> Place {
        let mut best = start;
        for side in [1.0, -1.0] {
            let mut step = side;
            for _ in 0..MOST_STEPS {
                let next = self.at(best.threshold + step);
                if next.wrong_bits < best.wrong_bits {
                    best = next;
                    step *= 2.0;
                } else if step == side {
                    break;
                } else {
                    step = side;
                }
            }
        }
        best
    }
}

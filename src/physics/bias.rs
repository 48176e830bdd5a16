//! From the bias of an avalanche photodiode to its gain and back, with what lies in series.
//!
//! The current through the junction is multiplied by the very gain that its drop over the series resistance lowers. For a
//! given gain the bias is plain arithmetic; for a given bias the gain is the one root of that.

use super::miller::Miller;
use crate::numeric::pchip::{Pchip, TableFault};
use crate::numeric::root::root;

/// How gain hangs on the voltage across the junction, at one temperature.
#[derive(Clone, Debug)]
pub enum Junction {
    /// Miller's formula.
    Miller(Miller),
    /// As measured.
    Table(GainTable),
}

/// Measured gains against voltage.
///
/// Interpolated by [`Pchip`] in 1/M against V: by Miller's formula 1 − (V/V_B)ⁿ, which stays bounded and all but straight
/// where M itself runs off to breakdown.
#[derive(Clone, Debug)]
pub struct GainTable {
    inverse_gain: Pchip,
    /// Ends of the gain.
    gains: (f64, f64),
    /// How far the whole curve was moved along the voltage.
    shift_v: f64,
}

impl GainTable {
    /// The curve through pairs of voltage (rising, V) and gain (≥ 1, never falling); why there is none.
    pub fn new(points: &[(f64, f64)]) -> Result<GainTable, TableFault> {
        let (x, y): (Vec<f64>, Vec<f64>) = points.iter().map(|(bias_v, gain)| (*bias_v, 1.0 / gain)).unzip();
        let gain = |point: Option<&(f64, f64)>| point.map_or(1.0, |(_, gain)| *gain);
        let gains = (gain(points.first()), gain(points.last()));
        Ok(GainTable { inverse_gain: Pchip::new(&x, &y)?, gains, shift_v: 0.0 })
    }

    /// Voltages of its ends, V.
    pub fn range_v(&self) -> (f64, f64) {
        (self.inverse_gain.first() + self.shift_v, self.inverse_gain.last() + self.shift_v)
    }

    /// Gains of its ends.
    pub fn range_gain(&self) -> (f64, f64) {
        self.gains
    }

    /// V at which the gain is M; nothing outside of the table.
    fn junction_v(&self, gain: f64) -> Option<f64> {
        let (low, high) = self.gains;
        if !(low..=high).contains(&gain) {
            return None;
        }
        let (first, last) = (self.inverse_gain.first(), self.inverse_gain.last());
        // Taken as a difference in the gain itself: it has one sign at each end, to the last digit.
        let excess =
            |junction_v: f64| self.inverse_gain.value(junction_v).map_or(f64::NAN, |y| gain * y - 1.0);
        let found = match gain {
            _ if gain == low => first,
            _ if gain == high => last,
            _ => root(excess, first, last, 1e-15).ok()?,
        };
        Some(found + self.shift_v)
    }

    fn gain_per_v(&self, gain: f64, junction_v: f64) -> f64 {
        let (first, last) = (self.inverse_gain.first(), self.inverse_gain.last());
        let place = (junction_v - self.shift_v).clamp(first, last);
        -gain * gain * self.inverse_gain.slope(place).unwrap_or(0.0)
    }
}

impl Junction {
    /// V across the junction at which the gain is M; nothing outside of a table.
    pub fn junction_v(&self, gain: f64) -> Option<f64> {
        match self {
            Junction::Miller(miller) => Some(miller.junction_v(gain)),
            Junction::Table(table) => table.junction_v(gain),
        }
    }

    /// dM/dV across the junction, in 1/V, at a gain and the voltage that belongs to it.
    pub fn gain_per_v(&self, gain: f64, junction_v: f64) -> f64 {
        match self {
            Junction::Miller(miller) => miller.gain_per_v(gain, junction_v),
            Junction::Table(table) => table.gain_per_v(gain, junction_v),
        }
    }

    /// The same junction with its breakdown voltage moved by `shift_v`, as temperature does.
    ///
    /// By formula V_B itself moves, and with it each voltage in proportion, V = V_B·f(M). A table moves as a whole, each
    /// voltage by the same amount, which is the same near breakdown. Nothing where V_B would fall to 0.
    pub fn moved(&self, shift_v: f64) -> Option<Junction> {
        match self {
            Junction::Miller(miller) => {
                let breakdown_v = miller.breakdown_v + shift_v;
                (breakdown_v > 0.0).then_some(Junction::Miller(Miller { breakdown_v, ..*miller }))
            }
            Junction::Table(table) => {
                let shift_v = table.shift_v + shift_v;
                Some(Junction::Table(GainTable { shift_v, ..table.clone() }))
            }
        }
    }

    /// By how many volts the voltage for one gain moves when the breakdown voltage moves by one.
    fn volts_per_breakdown_v(&self, junction_v: f64) -> f64 {
        match self {
            Junction::Miller(miller) => junction_v / miller.breakdown_v,
            Junction::Table(_) => 1.0,
        }
    }
}

/// Currents before multiplication.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Currents {
    /// I₀, what the avalanche multiplies: photocurrent at unit gain and bulk dark current, A, ≥ 0.
    pub multiplied_a: f64,
    /// I_s, what flows beside it: surface dark current, A, ≥ 0.
    pub beside_a: f64,
}

impl Currents {
    /// The current in the supply at a gain, A.
    pub fn total_a(&self, gain: f64) -> f64 {
        gain * self.multiplied_a + self.beside_a
    }
}

/// A junction behind a resistance.
#[derive(Clone, Debug)]
pub struct Biased {
    /// The junction at its temperature.
    pub junction: Junction,
    /// R_s between supply and junction, Ω, ≥ 0.
    pub series_resistance_ohm: f64,
}

/// A gain that holds itself.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Operation {
    /// M.
    pub gain: f64,
    /// What lies across the junction, V.
    pub junction_v: f64,
}

/// Why a bias gives no gain.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum NoGain {
    /// The bias reaches breakdown and nothing in series holds the current.
    Breakdown,
    /// Nothing of the bias is left for the junction, even at gain 1.
    Starved,
    /// The table begins at a higher voltage.
    BelowTable,
    /// The table ends at a lower voltage.
    AboveTable,
}

impl Biased {
    /// The bias in V at which the gain is M; nothing outside of a table.
    ///
    /// ```text
    /// V = V_j(M) + (M I₀ + I_s) R_s
    /// ```
    ///
    /// * `gain` – M, ≥ 1
    /// * `currents` – I₀ and I_s, means over a time that is long for the supply
    pub fn bias_v(&self, gain: f64, currents: &Currents) -> Option<f64> {
        Some(self.junction.junction_v(gain)? + currents.total_a(gain) * self.series_resistance_ohm)
    }

    /// The gain at a bias: the root of [`Biased::bias_v`], which rises with gain, so there is one at most.
    ///
    /// * `bias_v` – V in V; at 0 and below there is none
    /// * `currents` – I₀ and I_s
    ///
    /// At and above the breakdown voltage a solution exists only where a resistance and a current hold the junction below it.
    pub fn operation(&self, bias_v: f64, currents: &Currents) -> Result<Operation, NoGain> {
        // What is left for the multiplied current's drop and the junction.
        let left_v = bias_v - currents.beside_a * self.series_resistance_ohm;
        let per_gain_v = currents.multiplied_a * self.series_resistance_ohm;
        let (low, high) = match &self.junction {
            Junction::Miller(miller) => {
                if left_v <= per_gain_v {
                    return Err(NoGain::Starved);
                }
                // Either the junction alone, or the drop alone, would take the whole bias at these gains.
                let by_junction = miller.gain(left_v).unwrap_or(f64::INFINITY);
                let high = by_junction.min(left_v / per_gain_v);
                if high.is_infinite() {
                    return Err(NoGain::Breakdown);
                }
                (1.0, high)
            }
            Junction::Table(table) => table.gains,
        };
        let excess = |ln_gain: f64| {
            let gain = libm::exp(ln_gain).clamp(low, high);
            self.junction
                .junction_v(gain)
                .map_or(f64::NAN, |junction_v| junction_v + per_gain_v * gain - left_v)
        };
        let (ln_low, ln_high) = (libm::log(low), libm::log(high));
        let gain = if per_gain_v == 0.0 && matches!(self.junction, Junction::Miller(_)) {
            high
        } else if excess(ln_low) > 0.0 {
            return Err(NoGain::BelowTable);
        } else if excess(ln_high) < 0.0 {
            match &self.junction {
                Junction::Table(_) => return Err(NoGain::AboveTable),
                // Only rounding parts the two there.
                Junction::Miller(_) => high,
            }
        } else {
            libm::exp(root(excess, ln_low, ln_high, 1e-15).unwrap_or(ln_high)).clamp(low, high)
        };
        // Rounding of a large drop must not turn a small rest into none.
        let junction_v = (left_v - per_gain_v * gain).max(f64::MIN_POSITIVE);
        Ok(Operation { gain, junction_v })
    }

    /// dM/dV of the supply in 1/V: the junction's own slope, less what the drop takes back.
    ///
    /// ```text
    /// dM/dV = s / (1 + s I₀ R_s)        s = dM/dV_j
    /// ```
    pub fn gain_per_v(&self, at: &Operation, currents: &Currents) -> f64 {
        let own = self.junction.gain_per_v(at.gain, at.junction_v);
        own / (1.0 + own * currents.multiplied_a * self.series_resistance_ohm)
    }

    /// dM/dT in 1/K with the bias left alone.
    ///
    /// ```text
    /// dM/dT = −γ (∂V_j/∂V_B) dM/dV
    /// ```
    ///
    /// * `breakdown_v_per_k` – γ, the change of the breakdown voltage with temperature, V/K
    pub fn gain_per_k(&self, at: &Operation, currents: &Currents, breakdown_v_per_k: f64) -> f64 {
        let moved = self.junction.volts_per_breakdown_v(at.junction_v) * breakdown_v_per_k;
        -moved * self.gain_per_v(at, currents)
    }

    /// The multiplied current I₀ in A at which a bias gives the gain M; nothing without a resistance, or where the gain is not
    /// reached even without current.
    ///
    /// ```text
    /// I₀ = ((V − V_j(M))/R_s − I_s)/M
    /// ```
    pub fn multiplied_a(&self, bias_v: f64, gain: f64, beside_a: f64) -> Option<f64> {
        let drop_v = bias_v - self.junction.junction_v(gain)?;
        let current_a = (drop_v / self.series_resistance_ohm - beside_a) / gain;
        (self.series_resistance_ohm > 0.0 && current_a >= 0.0).then_some(current_a)
    }
}

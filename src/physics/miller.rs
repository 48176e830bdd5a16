//! Avalanche gain against the voltage across the junction.

/// An avalanche region by Miller's formula.
///
/// ```text
/// M = 1 / (1 − (V/V_B)ⁿ)        0 ≤ V < V_B
/// ```
///
/// Empirical: n is fitted to a device, between about 1.5 and 7 for plain junctions and often below for structures with
/// separate absorption. V is what lies across the junction, so without the drop over resistances in series; with them see
/// [`bias`](super::bias).
///
/// Source: S. L. Miller, Phys. Rev. 99, 1234–1241 (1955).
///
/// # Example
///
/// ```
/// use leastlight::physics::miller::Miller;
///
/// let junction = Miller { breakdown_v: 60.0, exponent: 3.0 };
/// assert!((junction.gain(58.0).unwrap() - 10.34).abs() < 0.01);
/// assert!((junction.junction_v(10.34) - 58.0).abs() < 0.001);
/// assert_eq!(junction.gain(60.0), None); // breakdown
/// ```
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Miller {
    /// V_B in V, > 0.
    pub breakdown_v: f64,
    /// n, > 0.
    pub exponent: f64,
}

impl Miller {
    /// M at a voltage across the junction; nothing from breakdown on.
    ///
    /// * `junction_v` – V in V, ≥ 0
    pub fn gain(&self, junction_v: f64) -> Option<f64> {
        debug_assert!(junction_v >= 0.0);
        let ln_ratio = libm::log(junction_v / self.breakdown_v);
        // 1 − (V/V_B)ⁿ without cancelling near breakdown.
        let rest = -libm::expm1(self.exponent * ln_ratio);
        (rest > 0.0).then(|| 1.0 / rest)
    }

    /// V in V at which the gain is M: the inverse, without cancelling at any gain.
    ///
    /// ```text
    /// V = V_B (1 − 1/M)^(1/n)
    /// ```
    ///
    /// * `gain` – M, ≥ 1
    pub fn junction_v(&self, gain: f64) -> f64 {
        debug_assert!(gain >= 1.0);
        self.breakdown_v * libm::exp(libm::log1p(-1.0 / gain) / self.exponent)
    }

    /// dM/dV in 1/V.
    ///
    /// ```text
    /// dM/dV = M² (n/V_B) (V/V_B)ⁿ⁻¹
    /// ```
    ///
    /// * `gain` – M, ≥ 1
    /// * `junction_v` – V in V, > 0, the voltage that belongs to that gain
    ///
    /// Both are asked for, because near breakdown the gain cannot be had from a rounded voltage, nor near unit gain the
    /// voltage from a rounded gain.
    pub fn gain_per_v(&self, gain: f64, junction_v: f64) -> f64 {
        debug_assert!(gain >= 1.0 && junction_v > 0.0);
        let (n, u) = (self.exponent, junction_v / self.breakdown_v);
        gain * gain * n / self.breakdown_v * libm::pow(u, n - 1.0)
    }
}

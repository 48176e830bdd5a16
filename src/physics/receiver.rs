//! What a receiver makes of a steady light: a current, and noise by cause.

use super::decision::Level;
use super::noise::{intensity_noise_a2, shot_noise_a2};
use serde::Serialize;

/// A detector, with gain or without, and the amplifier behind it.
#[derive(Clone, Copy, Debug)]
pub struct Receiver {
    /// R before gain, in A/W, > 0.
    pub responsivity_a_per_w: f64,
    /// M, ≥ 1; 1 without avalanche.
    pub gain: f64,
    /// F, ≥ 1; 1 without avalanche.
    pub excess_noise_factor: f64,
    /// B_n in Hz, > 0.
    pub noise_bandwidth_hz: f64,
    /// Circuit noise at the input within B_n, RMS in A, ≥ 0.
    pub circuit_noise_a: f64,
    /// Dark current through the avalanche region, before gain, in A, ≥ 0.
    pub dark_current_bulk_a: f64,
    /// Dark current past it, which sees no gain, in A, ≥ 0.
    pub dark_current_surface_a: f64,
    /// Steady light beside the signal, in W, ≥ 0.
    pub background_power_w: f64,
    /// Relative intensity noise of the source per Hz, one-sided, ≥ 0; 0 for none.
    pub rin_per_hz: f64,
}

/// The mean-square noise at one level by cause, in A².
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
pub struct Noise {
    /// Shot noise of the signal's own light.
    pub signal_shot: f64,
    /// Shot noise of the steady light beside it.
    pub background_shot: f64,
    /// Shot noise of the dark current that is multiplied.
    pub bulk_dark_shot: f64,
    /// Shot noise of the dark current that is not.
    pub surface_dark_shot: f64,
    /// The amplifier and its load.
    pub circuit: f64,
    /// The source's own intensity noise.
    pub source_intensity: f64,
}

impl Noise {
    /// The whole: the causes are independent, so their mean squares add.
    pub fn total_a2(&self) -> f64 {
        self.signal_shot
            + self.background_shot
            + self.bulk_dark_shot
            + self.surface_dark_shot
            + self.circuit
            + self.source_intensity
    }
}

impl Receiver {
    /// Current that the signal alone makes, in A.
    ///
    /// ```text
    /// I = M R P
    /// ```
    ///
    /// * `power_w` – P of the signal, ≥ 0
    pub fn signal_a(&self, power_w: f64) -> f64 {
        self.gain * self.responsivity_a_per_w * power_w
    }

    /// Noise by cause while the signal stands at one level.
    ///
    /// ```text
    /// σ² = 2q [M² F (R P + R P_bg + I_bulk) + I_surface] B_n + i_c² + RIN (M R P)² B_n
    /// ```
    ///
    /// * `power_w` – P of the signal, ≥ 0
    ///
    /// Holds where the noise is white over B_n and the level lasts long enough for the filter to settle.
    ///
    /// Source: R. J. McIntyre, IEEE Trans. Electron Devices ED-13, 164–168 (1966) for M²F; the sum as in G. P. Agrawal, Fiber-Optic
    /// Communication Systems, 3rd edition (2002), sections 4.4 and 4.6.
    pub fn noise(&self, power_w: f64) -> Noise {
        let (r, b_n) = (self.responsivity_a_per_w, self.noise_bandwidth_hz);
        let multiplied = self.gain * self.gain * self.excess_noise_factor;
        let avalanche_shot = |current_a: f64| multiplied * shot_noise_a2(current_a, b_n);
        Noise {
            signal_shot: avalanche_shot(r * power_w),
            background_shot: avalanche_shot(r * self.background_power_w),
            bulk_dark_shot: avalanche_shot(self.dark_current_bulk_a),
            surface_dark_shot: shot_noise_a2(self.dark_current_surface_a, b_n),
            circuit: self.circuit_noise_a * self.circuit_noise_a,
            source_intensity: intensity_noise_a2(self.signal_a(power_w), self.rin_per_hz, b_n),
        }
    }

    /// What the decision sees while the signal stands at `power_w`, in W.
    ///
    /// Steady dark and background current shift all levels alike, so they are in the noise and not in the current.
    pub fn level(&self, power_w: f64) -> Level {
        Level { current_a: self.signal_a(power_w), noise_rms_a: self.noise(power_w).total_a2().sqrt() }
    }
}

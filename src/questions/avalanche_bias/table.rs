//! The bias over temperature: what a supply that follows it is given.

use super::power_at;
use super::setup::Setup;
use crate::physics::bias::Currents;
use crate::physics::decibel::db_from_ratio;
use serde::Serialize;

/// A row of the table.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct TableRow {
    /// Temperature, °C.
    pub temperature_c: f64,
    /// Breakdown voltage there, V, where it is known.
    pub breakdown_v: Option<f64>,
    /// The bias that keeps the gain, V; absent where there is none.
    pub bias_v: Option<f64>,
    /// The gain if the bias of now is left alone; absent where that is beyond breakdown or a table.
    pub left_gain: Option<f64>,
    /// What the sensitivity then loses, dB.
    pub left_lost_db: Option<f64>,
}

/// The rows for a gain, beside what becomes of a bias that is left alone.
pub fn rows(setup: &Setup, currents: &Currents, gain: f64, left_v: f64, power_w: f64) -> Vec<TableRow> {
    let row = |&temperature_c: &f64| {
        let biased = setup.biased(Some(temperature_c));
        let left = biased.as_ref().and_then(|biased| biased.operation(left_v, currents).ok());
        let left_gain = left.map(|at| at.gain);
        let left_w = left_gain.and_then(|gain| power_at(setup, gain));
        TableRow {
            temperature_c,
            breakdown_v: setup.breakdown_v(Some(temperature_c)).filter(|volts| *volts > 0.0),
            bias_v: biased.and_then(|biased| biased.bias_v(gain, currents)).filter(|volts| *volts > 0.0),
            left_gain,
            left_lost_db: left_w.map(|left_w| db_from_ratio(left_w / power_w)),
        }
    };
    setup.table_c.iter().map(row).collect()
}

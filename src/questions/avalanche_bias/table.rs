//! The bias over temperature: what a supply that follows it is given.

use super::setup::Setup;
use super::{Answer, power_at};
use crate::physics::decibel::dbm_from_watt;
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

/// The rows for the best gain, beside what becomes of a bias that is left alone; nothing where there is no bias.
pub fn rows(setup: &Setup, answer: &Answer) -> Option<Vec<TableRow>> {
    let (bias_v, gain, least_dbm) = (answer.bias_v?, answer.best_gain?, answer.average_power_dbm?);
    let currents = setup.currents(answer.light_w?);
    let row = |&temperature_c: &f64| {
        let biased = setup.biased(Some(temperature_c));
        let left = biased.as_ref().and_then(|biased| biased.operation(bias_v, &currents).ok());
        let left_gain = left.map(|at| at.gain);
        let left_w = left_gain.and_then(|gain| power_at(setup, gain));
        TableRow {
            temperature_c,
            breakdown_v: setup.breakdown_v(Some(temperature_c)).filter(|volts| *volts > 0.0),
            bias_v: biased.and_then(|biased| biased.bias_v(gain, &currents)).filter(|volts| *volts > 0.0),
            left_gain,
            left_lost_db: left_w.map(|left_w| dbm_from_watt(left_w) - least_dbm),
        }
    };
    Some(setup.table_c.iter().map(row).collect())
}

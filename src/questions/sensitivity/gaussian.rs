//! What the Gaussian model says beside an answer that counts electrons.

use crate::physics::decibel::dbm_from_watt;
use crate::physics::sensitivity::{Link, least_average_power_w};
use crate::quantity::write::{fixed, scientific};
use crate::questions::shown::Fact;
use serde::Serialize;

/// The Gaussian model of the same bench.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct GaussianBeside {
    /// Its sensitivity, dBm; absent where it finds none.
    pub average_power_dbm: Option<f64>,
    /// By how much more light than the exact answer it asks for, dB; negative where it asks for too little.
    pub difference_db: Option<f64>,
    /// Its error ratio at the source's own power.
    pub error_ratio: Option<f64>,
}

impl GaussianBeside {
    /// For the same link, target, and source; `exact_dbm` is the answer that counts.
    pub fn new(link: &Link, target: f64, exact_dbm: Option<f64>, received_w: Option<f64>) -> GaussianBeside {
        let average_power_dbm = least_average_power_w(link, target).ok().map(dbm_from_watt);
        GaussianBeside {
            average_power_dbm,
            difference_db: average_power_dbm.zip(exact_dbm).map(|(gaussian, exact)| gaussian - exact),
            error_ratio: received_w.map(|power_w| link.error_ratio(power_w)),
        }
    }

    /// As they are shown, with the way in which the model errs.
    pub fn facts(&self) -> Vec<Fact> {
        let mut facts = Vec::new();
        match (self.average_power_dbm, self.difference_db) {
            (Some(dbm), Some(difference_db)) => {
                let errs = match (fixed(difference_db.abs(), 2), difference_db > 0.0) {
                    (same, _) if same == fixed(0.0, 2) => "as good as the exact answer here".to_owned(),
                    (db, true) => {
                        format!("{db} dB more than is needed: the Gaussian model is too cautious here")
                    }
                    (db, false) => format!("{db} dB too little: the Gaussian model promises too much here"),
                };
                facts.push(Fact::fixed("Sensitivity by the Gaussian model", dbm, 2, "dBm").noted(errs));
            }
            (None, _) => facts.push(Fact {
                name: "Sensitivity by the Gaussian model".to_owned(),
                figure: "none".to_owned(),
                note: "that model finds no least power here".to_owned(),
                copy: "none".to_owned(),
            }),
            (Some(dbm), None) => {
                facts.push(Fact::fixed("Sensitivity by the Gaussian model", dbm, 2, "dBm"));
            }
        }
        facts
    }

    /// Its error ratio, as a remark.
    pub fn remark(&self) -> Option<String> {
        self.error_ratio.map(|ratio| format!("{} by the Gaussian model", scientific(ratio, 3)))
    }
}

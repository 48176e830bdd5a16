//! From a bench to a biased avalanche photodiode in SI units.

use crate::bench::Bench;
use crate::bench::bias::{Bias, GainLaw};
use crate::fault::{Code, Fault, Faults};
use crate::physics::bias::{Biased, Currents, GainTable, Junction};
use crate::physics::decibel::watt_from_dbm;
use crate::physics::miller::Miller;
use crate::questions::needs::Needs;
use crate::questions::sensitivity::setup::Setup as Receiver;
use crate::tree::Tree;

/// The ends and the step of the bias table where none are given: a cabinet in most climates.
const TABLE_C: (f64, f64, f64) = (0.0, 60.0, 5.0);

/// Most rows of a bias table.
const MOST_ROWS: f64 = 500.0;

const AT: &str = "/detector/avalanche/bias";

/// A receiver, its junction and its supply.
#[derive(Debug, Clone)]
pub struct Setup {
    /// All that decides the sensitivity at a gain.
    pub receiver: Receiver,
    /// The junction at the reference temperature.
    at_reference: Junction,
    /// Breakdown voltage there, V.
    breakdown_v: Option<f64>,
    /// Its change with temperature, V/K.
    pub breakdown_v_per_k: Option<f64>,
    reference_c: f64,
    /// Temperature of the junction now, °C; nothing where no temperature coefficient asks for it.
    pub temperature_c: Option<f64>,
    /// R_s, Ω.
    pub series_resistance_ohm: f64,
    /// What the supply is set to, V.
    pub set_v: Option<f64>,
    /// The greatest current that the detector bears, A.
    pub maximum_current_a: Option<f64>,
    /// Rows of the bias table, °C.
    pub table_c: Vec<f64>,
}

impl Setup {
    /// Reads all that the bias needs.
    pub fn new(bench: &Bench) -> Result<Setup, Faults> {
        let receiver = Receiver::at_any_gain(bench);
        let mut needs = Needs::default();
        let detector = bench.detector.as_ref();
        let avalanche = detector.and_then(|detector| {
            let sentence = "A bias needs an avalanche detector; without one there is no gain to set.";
            needs.part(&detector.avalanche, "/detector/avalanche", sentence)
        });
        let bias = avalanche.and_then(|avalanche| {
            let sentence =
                "The device is needed: its breakdown voltage and Miller exponent, or its measured gains.";
            needs.part(&avalanche.bias, AT, sentence)
        });
        let at_reference = bias.and_then(|bias| junction(bias, &mut needs));
        let coefficient = bias.and_then(|bias| bias.breakdown_v_per_k);
        let (mut reference_c, mut temperature_c) = (None, None);
        if let (Some(bias), Some(_)) = (bias, coefficient) {
            let now_c = bench.surroundings.as_ref().and_then(|part| part.temperature_c);
            reference_c =
                needs.number(bias.reference_temperature_c, &format!("{AT}/reference_temperature_c"));
            temperature_c = needs.number(now_c, "/surroundings/temperature_c");
        }
        let table_c = bias.filter(|_| coefficient.is_some()).and_then(|bias| table_c(bias, &mut needs));
        let receiver = receiver.map_err(|faults| needs.faults.splice(0..0, faults).for_each(drop)).ok();
        let made = (|| {
            let bias = bias?;
            Some(Setup {
                receiver: receiver?,
                at_reference: at_reference?,
                breakdown_v: bias.breakdown_v,
                breakdown_v_per_k: coefficient,
                reference_c: reference_c.unwrap_or(0.0),
                temperature_c,
                series_resistance_ohm: bias.series_resistance_ohm.unwrap_or(0.0),
                set_v: bias.set_v,
                maximum_current_a: bias.maximum_current_a,
                table_c: table_c.unwrap_or_default(),
            })
        })();
        needs.all(made)
    }

    /// By how much the breakdown voltage lies above that at the reference temperature, V; nothing where no temperature is
    /// asked for.
    fn shift_v(&self, temperature_c: Option<f64>) -> f64 {
        match (self.breakdown_v_per_k, temperature_c) {
            (Some(per_k), Some(at_c)) => per_k * (at_c - self.reference_c),
            _ => 0.0,
        }
    }

    /// The device behind its resistance at a temperature; nothing where its breakdown voltage would fall to 0.
    pub fn biased(&self, temperature_c: Option<f64>) -> Option<Biased> {
        let junction = self.at_reference.moved(self.shift_v(temperature_c))?;
        Some(Biased { junction, series_resistance_ohm: self.series_resistance_ohm })
    }

    /// The breakdown voltage at a temperature, V, where it is known.
    pub fn breakdown_v(&self, temperature_c: Option<f64>) -> Option<f64> {
        Some(self.breakdown_v? + self.shift_v(temperature_c))
    }

    /// The gains that the device is known to reach: (1, ∞) by formula.
    pub fn gains(&self) -> (f64, f64) {
        match &self.at_reference {
            Junction::Miller(_) => (1.0, f64::INFINITY),
            Junction::Table(table) => table.range_gain(),
        }
    }

    /// Whether the gains were measured.
    pub fn is_measured(&self) -> bool {
        matches!(self.at_reference, Junction::Table(_))
    }

    /// The average power of the signal at the detector from the bench's own source, W.
    pub fn received_w(&self) -> Option<f64> {
        self.receiver.received_dbm.map(watt_from_dbm)
    }

    /// The currents before multiplication with so much signal on the detector.
    pub fn currents(&self, power_w: f64) -> Currents {
        let receiver = self.receiver.link_at(1.0).receiver;
        let light_w = power_w + receiver.background_power_w;
        Currents {
            multiplied_a: receiver.responsivity_a_per_w * light_w + receiver.dark_current_bulk_a,
            beside_a: receiver.dark_current_surface_a,
        }
    }
}

fn junction(bias: &Bias, needs: &mut Needs) -> Option<Junction> {
    match &bias.gain_law {
        GainLaw::Miller { miller_exponent } => {
            let breakdown_v = needs.number(bias.breakdown_v, &format!("{AT}/breakdown_v"));
            let exponent = needs.number(*miller_exponent, &format!("{AT}/miller_exponent"));
            Some(Junction::Miller(Miller { breakdown_v: breakdown_v?, exponent: exponent? }))
        }
        GainLaw::Table { points } => {
            let pointer = format!("{AT}/points");
            if points.len() < 2 {
                let sentence = "The measured gains are needed: two points at least of voltage and gain.";
                needs.faults.push(Fault::missing(&pointer, sentence));
                return None;
            }
            let pairs: Vec<(f64, f64)> = points.iter().map(|point| (point.bias_v, point.gain)).collect();
            let sentence = "The voltages of the gain table lie too close for a curve through them.";
            let fault = |_| Fault::new(&pointer, Code::Conflict, Tree::Null, sentence);
            needs.found(GainTable::new(&pairs).map_err(fault)).map(Junction::Table)
        }
    }
}

/// The temperatures of the table, both ends among them.
fn table_c(bias: &Bias, needs: &mut Needs) -> Option<Vec<f64>> {
    let (from, to, step) = TABLE_C;
    let (from, to) = (bias.table_from_c.unwrap_or(from), bias.table_to_c.unwrap_or(to));
    let step = bias.table_step_k.unwrap_or(step);
    let mut conflict = |key: &str, given: f64, sentence: &str| {
        needs.faults.push(Fault::new(&format!("{AT}/{key}"), Code::Conflict, Tree::Number(given), sentence));
        None
    };
    if from >= to {
        // Whichever end was typed is the one to mend.
        let (key, given) =
            if bias.table_to_c.is_some() { ("table_to_c", to) } else { ("table_from_c", from) };
        let sentence = format!(
            "The bias table must end at a higher temperature than it begins; it goes from {from} °C to {to} °C."
        );
        return conflict(key, given, &sentence);
    }
    let steps = (to - from) / step;
    if steps > MOST_ROWS - 1.0 {
        let sentence = format!(
            "The bias table has at most {MOST_ROWS} rows; a step of {step} K from {from} °C to {to} °C makes more."
        );
        return conflict("table_step_k", step, &sentence);
    }
    // A last step that rounding makes a hair too long is a whole one.
    let whole = (steps + 1e-9).floor();
    let mut rows: Vec<f64> = (0..=whole as usize).map(|row| from + row as f64 * step).collect();
    match rows.last_mut() {
        Some(last) if steps - whole < 1e-9 => *last = to,
        _ => rows.push(to),
    }
    Some(rows)
}

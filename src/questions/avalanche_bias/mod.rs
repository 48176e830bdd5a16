//! Where should the avalanche bias sit?

mod best;
mod curves;
mod setup;
mod shown;
mod table;

use super::curve::Curve;
use super::sensitivity::{self, NoneBecause};
use super::shown::Shown;
use crate::bench::Bench;
use crate::fault::Faults;
use crate::physics::bias::{Biased, Currents, NoGain, Operation};
use crate::physics::decibel::{db_from_ratio, dbm_from_watt, ratio_from_db};
use crate::physics::sensitivity::least_average_power_w;
use best::{Best, Limit, NoBest, Scaled};
use serde::Serialize;
use setup::Setup;
use table::TableRow;

/// The bias that makes the receiver most sensitive, and what a bias that is not kept costs.
///
/// Numbers that do not exist for this bench are absent; where there is no bias, `none_because` says why.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Answer {
    /// The bias at the temperature now with the light on, V.
    pub bias_v: Option<f64>,
    /// The gain that it sets: that of the best sensitivity.
    pub best_gain: Option<f64>,
    /// What keeps more gain from helping.
    pub best_gain_limit: Option<Limit>,
    /// The best gain by the textbook's closed form; absent where it has none.
    pub closed_form_gain: Option<f64>,
    /// The sensitivity at the best gain, dBm.
    pub average_power_dbm: Option<f64>,
    /// The lowest gain that is at most 0.1 dB worse: how flat the valley is. Absent where gain 1 is such.
    pub near_gain: Option<f64>,
    /// The bias for it, V.
    pub near_bias_v: Option<f64>,
    /// The sensitivity at gain 1: that of a PIN photodiode of the same build, dBm.
    pub unit_gain_power_dbm: Option<f64>,
    /// How much better the best gain is than gain 1, dB.
    pub improvement_db: Option<f64>,
    /// The power of the signal for which currents and drops were counted, W.
    pub light_w: Option<f64>,
    /// The current in the supply, A.
    pub current_a: Option<f64>,
    /// What the series resistance takes, V.
    pub drop_v: Option<f64>,
    /// The breakdown voltage at the temperature now, V.
    pub breakdown_v: Option<f64>,
    /// Breakdown voltage less bias, V.
    pub margin_v: Option<f64>,
    /// Change of the gain with the bias, 1/V.
    pub gain_per_v: Option<f64>,
    /// Change of the gain with temperature if the bias is left alone, 1/K.
    pub gain_per_k: Option<f64>,
    /// What an error of the bias costs.
    pub loss_per_volt: Option<Loss>,
    /// What an error of the temperature costs.
    pub loss_per_kelvin: Option<Loss>,
    /// The gain at this bias when the signal is off; absent where nothing then holds it below breakdown.
    pub gain_in_the_dark: Option<f64>,
    /// The power of the signal at which the gain has sagged by 1 dB from that, dBm; absent without a resistance.
    pub sag_power_dbm: Option<f64>,
    /// The current limit to set at the supply, A.
    pub current_limit_a: Option<f64>,
    /// Where the supply stands now.
    pub set: Option<AtSet>,
    /// The bias over temperature, for the supply; empty without a temperature coefficient.
    pub table: Vec<TableRow>,
    /// Why there is no such bias.
    pub none_because: Option<NoneBecause>,
    /// Gain against bias; sensitivity and noise against gain; sensitivity against symbol rate.
    pub curves: Vec<Curve>,
    /// The answer as it is shown.
    pub shown: Shown,
}

/// The sensitivity that is lost by an error of one unit; absent where there is no gain then.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct Loss {
    /// One unit too much, dB.
    pub above_db: Option<f64>,
    /// One unit too little, dB.
    pub below_db: Option<f64>,
}

/// The device at the bias that is set now.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct AtSet {
    /// The bias, V.
    pub bias_v: f64,
    /// The gain there.
    pub gain: Option<f64>,
    /// The sensitivity there, dBm.
    pub average_power_dbm: Option<f64>,
    /// What it loses against the best, dB.
    pub lost_db: Option<f64>,
    /// The current in the supply, A.
    pub current_a: Option<f64>,
    /// Why there is no gain.
    pub none_because: Option<String>,
}

/// A gain that has sagged to this share is 1 dB down, as optical powers are counted.
const SAG_DB: f64 = 1.0;

/// So much worse than the best is still all but as good, dB.
const NEAR_DB: f64 = 0.1;

/// Room for the supply's current limit above the current in use: common practice.
const LIMIT_FACTOR: f64 = 2.0;

/// Answers for a bench.
pub fn ask(bench: &Bench) -> Result<Answer, Faults> {
    let setup = Setup::new(bench)?;
    let mut answer = figures(&setup);
    answer.curves = curves::curves(&setup, &answer);
    answer.shown = shown::shown(&setup, bench, &answer);
    Ok(answer)
}

/// The numbers that a sweep or a search may follow, without curves or text.
pub fn numbers(bench: &Bench) -> Result<Vec<(&'static str, Option<f64>)>, Faults> {
    let answer = figures(&Setup::new(bench)?);
    let set = answer.set.as_ref();
    Ok(vec![
        ("bias_v", answer.bias_v),
        ("best_gain", answer.best_gain),
        ("average_power_dbm", answer.average_power_dbm),
        ("near_gain", answer.near_gain),
        ("near_bias_v", answer.near_bias_v),
        ("unit_gain_power_dbm", answer.unit_gain_power_dbm),
        ("improvement_db", answer.improvement_db),
        ("current_a", answer.current_a),
        ("breakdown_v", answer.breakdown_v),
        ("margin_v", answer.margin_v),
        ("gain_per_v", answer.gain_per_v),
        ("gain_per_k", answer.gain_per_k),
        ("sag_power_dbm", answer.sag_power_dbm),
        ("current_limit_a", answer.current_limit_a),
        ("set_gain", set.and_then(|set| set.gain)),
        ("set_power_dbm", set.and_then(|set| set.average_power_dbm)),
        ("set_lost_db", set.and_then(|set| set.lost_db)),
    ])
}

fn figures(setup: &Setup) -> Answer {
    let receiver = Scaled { setup, rate: 1.0 };
    let best = receiver.best();
    let found = best.ok();
    let unit_gain_w = receiver.power_w(1.0);
    let power_dbm = found.map(|best| dbm_from_watt(best.power_w));
    let unit_gain_dbm = unit_gain_w.map(dbm_from_watt);
    let biased = setup.biased(setup.temperature_c);
    let breakdown_v = setup.breakdown_v(setup.temperature_c).filter(|volts| *volts > 0.0);
    // Without a launched power the light is what is just enough.
    let light_w = setup.received_w().or(found.map(|best| best.power_w));
    let currents = light_w.map(|power_w| setup.currents(power_w));
    let sits = sit(setup, &best, biased.as_ref(), currents.as_ref());
    let mut answer = Answer {
        bias_v: None,
        best_gain: found.map(|best| best.gain),
        best_gain_limit: found.map(|best| best.limit),
        closed_form_gain: setup.receiver.closed_form_gain(),
        average_power_dbm: power_dbm,
        near_gain: found.and_then(|best| receiver.near_gain(&best, NEAR_DB)),
        near_bias_v: None,
        unit_gain_power_dbm: unit_gain_dbm,
        improvement_db: unit_gain_dbm.zip(power_dbm).map(|(unit, best)| unit - best),
        light_w,
        current_a: None,
        drop_v: None,
        breakdown_v,
        margin_v: None,
        gain_per_v: None,
        gain_per_k: None,
        loss_per_volt: None,
        loss_per_kelvin: None,
        gain_in_the_dark: None,
        sag_power_dbm: None,
        current_limit_a: None,
        set: None,
        table: Vec::new(),
        none_because: sits.as_ref().err().cloned(),
        curves: Vec::new(),
        shown: Shown::default(),
    };
    if let (Some(biased), Some(currents)) = (&biased, &currents) {
        answer.set = setup.set_v.map(|bias_v| at_set(setup, biased, currents, bias_v, power_dbm));
    }
    if let (Ok(sits), Some(biased), Some(currents)) = (&sits, &biased, &currents) {
        sit_down(setup, biased, currents, sits, &mut answer);
    }
    answer
}

/// A bias, and the device at it.
struct Sits {
    bias_v: f64,
    at: Operation,
    power_w: f64,
}

/// The bias of the best gain, or why there is none.
fn sit(
    setup: &Setup,
    best: &Result<Best, NoBest>,
    biased: Option<&Biased>,
    currents: Option<&Currents>,
) -> Result<Sits, NoneBecause> {
    let none = |reason: String| NoneBecause { reason, error_floor: None };
    let best = match best {
        Ok(best) => best,
        Err(NoBest::NoUpperEnd) => return Err(none(shown::NO_UPPER_END.to_owned())),
        Err(NoBest::NoPower) => {
            let why = least_average_power_w(&setup.receiver.link_at(1.0), setup.receiver.target).err();
            let why = why.map(|why| sensitivity::none_because(&why, &setup.receiver));
            return Err(why.unwrap_or_else(|| none(shown::NO_POWER.to_owned())));
        }
    };
    if best.gain == 1.0 {
        return Err(none(shown::gain_does_not_pay(best)));
    }
    let Some((biased, currents)) = biased.zip(currents) else {
        return Err(none(shown::no_junction(setup)));
    };
    let junction_v = biased.junction.junction_v(best.gain);
    let bias_v = biased.bias_v(best.gain, currents);
    match junction_v.zip(bias_v) {
        Some((_, bias_v)) if bias_v <= 0.0 => Err(none(shown::no_junction(setup))),
        Some((junction_v, bias_v)) => {
            Ok(Sits { bias_v, at: Operation { gain: best.gain, junction_v }, power_w: best.power_w })
        }
        None => Err(none(shown::outside_the_table(setup, best.gain))),
    }
}

/// Everything that hangs on the bias.
fn sit_down(setup: &Setup, biased: &Biased, currents: &Currents, sits: &Sits, answer: &mut Answer) {
    let Sits { bias_v, at, power_w } = *sits;
    let current_a = currents.total_a(at.gain);
    // What the sensitivity loses at another bias or temperature.
    let lost_db = |biased: Option<Biased>, bias_v: f64| {
        let gain = biased?.operation(bias_v, currents).ok()?.gain;
        Some(db_from_ratio(power_at(setup, gain)? / power_w))
    };
    let volts = |by: f64| lost_db(Some(biased.clone()), bias_v + by);
    let kelvin = |by: f64| lost_db(setup.biased(setup.temperature_c.map(|now| now + by)), bias_v);
    let dark = Currents { beside_a: currents.beside_a, ..setup.currents(0.0) };
    let in_the_dark = biased.operation(bias_v, &dark).ok().map(|at| at.gain);

    answer.bias_v = Some(bias_v);
    answer.near_bias_v = answer.near_gain.and_then(|gain| biased.bias_v(gain, currents));
    answer.current_a = Some(current_a);
    answer.drop_v = Some(current_a * setup.series_resistance_ohm);
    answer.margin_v = answer.breakdown_v.map(|breakdown_v| breakdown_v - bias_v);
    answer.gain_per_v = Some(biased.gain_per_v(&at, currents));
    answer.gain_per_k = setup.breakdown_v_per_k.map(|per_k| biased.gain_per_k(&at, currents, per_k));
    answer.loss_per_volt = Some(Loss { above_db: volts(1.0), below_db: volts(-1.0) });
    answer.loss_per_kelvin =
        setup.breakdown_v_per_k.map(|_| Loss { above_db: kelvin(1.0), below_db: kelvin(-1.0) });
    answer.gain_in_the_dark = in_the_dark;
    answer.sag_power_dbm =
        in_the_dark.and_then(|gain| sag_power_w(setup, biased, bias_v, gain)).map(dbm_from_watt);
    let limit_a = LIMIT_FACTOR * current_a;
    answer.current_limit_a =
        Some(setup.maximum_current_a.map_or(limit_a, |most_a| limit_a.min(most_a))).filter(|a| *a > 0.0);
    answer.table = table::rows(setup, currents, at.gain, bias_v, power_w);
}

/// The least average power at a gain, W; nothing beyond what is known of the noise.
fn power_at(setup: &Setup, gain: f64) -> Option<f64> {
    let known = gain <= setup.receiver.reach(f64::INFINITY);
    known.then(|| Scaled { setup, rate: 1.0 }.power_w(gain)).flatten()
}

/// The power of the signal in W at which the gain has sagged from that in the dark.
fn sag_power_w(setup: &Setup, biased: &Biased, bias_v: f64, in_the_dark: f64) -> Option<f64> {
    let sagged = in_the_dark / ratio_from_db(SAG_DB);
    let dark = setup.currents(0.0);
    if sagged < 1.0 {
        return None;
    }
    let light_a = biased.multiplied_a(bias_v, sagged, dark.beside_a)? - dark.multiplied_a;
    let power_w = light_a / setup.receiver.link_at(1.0).receiver.responsivity_a_per_w;
    (power_w > 0.0 && power_w.is_finite()).then_some(power_w)
}

fn at_set(setup: &Setup, biased: &Biased, currents: &Currents, bias_v: f64, best_dbm: Option<f64>) -> AtSet {
    let at = biased.operation(bias_v, currents);
    let gain = at.ok().map(|at| at.gain);
    let power_dbm = gain.and_then(|gain| power_at(setup, gain)).map(dbm_from_watt);
    AtSet {
        bias_v,
        gain,
        average_power_dbm: power_dbm,
        lost_db: power_dbm.zip(best_dbm).map(|(here, best)| here - best),
        current_a: gain.map(|gain| currents.total_a(gain)),
        none_because: at.err().map(|why: NoGain| shown::no_gain(&why).to_owned()),
    }
}

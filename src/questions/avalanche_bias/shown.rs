//! The bias as it is shown: headline, figures, table, doubts and notes.

use super::best::{Best, Limit};
use super::setup::Setup;
use super::{Answer, AtSet, Loss};
use crate::bench::Bench;
use crate::physics::bias::NoGain;
use crate::quantity::write::{brief, fixed, prefixed, scientific, significant};
use crate::questions::sensitivity::shown::{cautions, excess_noise_notes};
use crate::questions::shown::{Fact, Headline, OVERLOAD_CURRENT, Shown, Table};

/// Why k = 0 has no best gain.
pub const NO_UPPER_END: &str = "more gain always helps in this model: with an ionisation ratio (or exponent) of 0 the \
    excess noise stays bounded, and no gain–bandwidth product holds it back. Type the device's own ionisation ratio, or \
    its gain–bandwidth product";

/// A reason for a target out of reach that the levels at gain 1 do not tell.
pub const NO_POWER: &str = "no power reaches the target error ratio at any gain";

/// Less than this is not worth a high voltage, in dB.
const WORTHWHILE_DB: f64 = 0.5;

/// Why no gain is the best gain.
pub fn gain_does_not_pay(best: &Best) -> String {
    match best.limit {
        Limit::GainBandwidth => {
            "the gain–bandwidth product is below the receiver's bandwidth: any gain makes the detector too slow. A PIN \
             photodiode does as well"
                .to_owned()
        }
        _ => "any gain harms: its noise costs more than it lifts the signal over the circuit noise. A PIN photodiode \
              does better here"
            .to_owned(),
    }
}

/// Why there is no junction at the temperature now.
pub fn no_junction(setup: &Setup) -> String {
    let now = setup.temperature_c.map_or(String::new(), |now| format!(" at {} °C", brief(now, 4)));
    let what = if setup.is_measured() { "the voltages of the table" } else { "the breakdown voltage" };
    format!("{what} would fall to 0{now}. Check the temperature coefficient and the temperatures it spans")
}

/// Why the table gives no voltage for a gain.
pub fn outside_the_table(setup: &Setup, gain: f64) -> String {
    let (low, high) = setup.gains();
    format!(
        "the best gain is {}, and the table of measured gains reaches from {} to {}; nothing is guessed beyond a table. \
         Measure further, or describe the device by its breakdown voltage",
        significant(gain, 3),
        significant(low, 3),
        significant(high, 3)
    )
}

/// Why a bias gives no gain.
pub fn no_gain(why: &NoGain) -> &'static str {
    match why {
        NoGain::Breakdown => "at or above breakdown, and nothing in series holds the current",
        NoGain::Starved => "the series resistance takes the whole bias at this light",
        NoGain::BelowTable => "below the table of measured gains",
        NoGain::AboveTable => "above the table of measured gains",
    }
}

/// The answer, ready to be shown.
pub fn shown(setup: &Setup, bench: &Bench, answer: &Answer) -> Shown {
    let mut cautions = cautions(&setup.receiver, bench);
    cautions.push(OVERLOAD_CURRENT);
    Shown {
        headline: headline(setup, answer),
        facts: facts(setup, answer),
        budgets: Vec::new(),
        tables: table(answer).into_iter().collect(),
        cautions,
        doubts: doubts(setup, answer),
        notes: notes(setup, answer),
    }
}

fn headline(setup: &Setup, answer: &Answer) -> Headline {
    match (&answer.none_because, answer.bias_v, answer.best_gain, answer.average_power_dbm) {
        (None, Some(bias_v), Some(gain), Some(dbm)) => {
            let at = setup.temperature_c.map_or(String::new(), |now| format!(" at {} °C", brief(now, 4)));
            Headline {
                figure: format!("{} V", fixed(bias_v, 2)),
                sentence: format!(
                    "sets the best gain of {}{at}: an average power of {} dBm is then enough for an error ratio of {}.",
                    significant(gain, 3),
                    fixed(dbm, 2),
                    scientific(setup.receiver.target, 3)
                ),
                copy: format!("{bias_v} V"),
            }
        }
        (because, ..) => Headline {
            figure: "No such bias".to_owned(),
            sentence: format!("because {}.", because.as_ref().map_or("", |none| none.reason.as_str())),
            copy: "no such bias".to_owned(),
        },
    }
}

fn facts(setup: &Setup, answer: &Answer) -> Vec<Fact> {
    let mut facts = Vec::new();
    facts.extend(answer.best_gain.map(|gain| {
        let limit = match answer.best_gain_limit {
            Some(Limit::GainBandwidth) => {
                "from there on the gain–bandwidth product is slower than the receiver"
            }
            Some(Limit::NoiseTable) => "where the table of excess noise ends; more may be better",
            _ => "from there on its noise costs more than it brings",
        };
        let closed = answer.closed_form_gain.map(|gain| format!("; closed form {}", significant(gain, 3)));
        Fact::number("Best gain", gain).noted(format!("{limit}{}", closed.unwrap_or_default()))
    }));
    facts.extend(answer.average_power_dbm.map(|dbm| Fact::fixed("Sensitivity at that gain", dbm, 2, "dBm")));
    facts.extend(answer.near_gain.map(|gain| {
        let bias = answer.near_bias_v.map(|bias_v| format!(", at {} V", fixed(bias_v, 2)));
        Fact::number("Lowest gain that loses only 0.1 dB", gain)
            .noted(format!("the valley is flat{}", bias.unwrap_or_default()))
    }));
    facts.extend(answer.unit_gain_power_dbm.map(|dbm| {
        let better =
            answer.improvement_db.map(|db| format!("the best gain is {} dB better", fixed(db.max(0.0), 2)));
        Fact::fixed("Sensitivity at gain 1, as a PIN", dbm, 2, "dBm").noted(better.unwrap_or_default())
    }));
    facts.extend(answer.set.iter().flat_map(set_facts));
    facts.extend(answer.breakdown_v.map(|volts| Fact::fixed("Breakdown voltage now", volts, 2, "V")));
    facts.extend(answer.margin_v.map(|volts| Fact::fixed("Margin to breakdown", volts, 2, "V")));
    facts.extend(slopes(answer));
    facts.extend(
        answer.loss_per_volt.and_then(|loss| lost("Sensitivity lost per volt of error", "1 V", &loss)),
    );
    facts.extend(
        answer.loss_per_kelvin.and_then(|loss| lost("Sensitivity lost per kelvin of error", "1 K", &loss)),
    );
    facts.extend(currents(setup, answer));
    facts
}

fn set_facts(set: &AtSet) -> Vec<Fact> {
    let name = "Gain at the bias as set now";
    let Some(gain) = set.gain else {
        let why = set.none_because.clone().unwrap_or_default();
        let none = "none".to_owned();
        let note = format!("{} V: {why}", brief(set.bias_v, 6));
        return vec![Fact { name: name.to_owned(), figure: none.clone(), note, copy: none }];
    };
    let mut facts = vec![Fact::number(name, gain).noted(format!("{} V", brief(set.bias_v, 6)))];
    facts.extend(set.average_power_dbm.map(|dbm| {
        let lost = set.lost_db.map(|db| format!("{} dB worse than at the best gain", fixed(db, 2)));
        Fact::fixed("Sensitivity there", dbm, 2, "dBm").noted(lost.unwrap_or_default())
    }));
    facts
}

fn slopes(answer: &Answer) -> Vec<Fact> {
    let Some((gain, per_v)) = answer.best_gain.zip(answer.gain_per_v) else {
        return Vec::new();
    };
    let percent = |slope: f64| format!("{} %", significant(100.0 * slope / gain, 3));
    let mut facts = vec![
        Fact {
            figure: format!("{} per V", significant(per_v, 3)),
            copy: format!("{per_v} 1/V"),
            ..Fact::number("Gain per volt", per_v)
        }
        .noted(format!("{} per volt", percent(per_v))),
    ];
    facts.extend(answer.gain_per_k.map(|per_k| {
        let follow = if per_v > 0.0 {
            format!("; to keep the gain the bias must follow by {} V/K", significant(-per_k / per_v, 3))
        } else {
            String::new()
        };
        Fact {
            figure: format!("{} per K", significant(per_k, 3)),
            copy: format!("{per_k} 1/K"),
            ..Fact::number("Gain per kelvin, bias left alone", per_k)
        }
        .noted(format!("{} per kelvin{follow}", percent(per_k)))
    }));
    facts
}

/// The worse of the two sides is the figure.
fn lost(name: &str, unit: &str, loss: &Loss) -> Option<Fact> {
    let side = |db: Option<f64>, side: &str| match db {
        Some(db) => format!("{unit} {side}: {} dB", fixed(db, 2)),
        None => format!("{unit} {side}: no gain that is known"),
    };
    let (above, below) = match unit {
        "1 V" => ("too much", "too little"),
        _ => ("warmer", "colder"),
    };
    let note = format!("{}; {}", side(loss.above_db, above), side(loss.below_db, below));
    let worst = [loss.above_db, loss.below_db].into_iter().flatten().reduce(f64::max)?;
    Some(Fact::fixed(name, worst, 2, "dB").noted(note))
}

fn currents(setup: &Setup, answer: &Answer) -> Vec<Fact> {
    let mut facts = Vec::new();
    let light = answer.light_w.map(|light_w| {
        let whose = if setup.received_w().is_some() { "from this source" } else { "as is just enough" };
        format!("with {} {whose}", prefixed(light_w, "W", 3))
    });
    facts.extend(answer.current_a.map(|current_a| {
        let drop = answer.drop_v.filter(|drop_v| *drop_v > 0.0);
        let drop = drop.map(|drop_v| format!("; the series resistance takes {}", prefixed(drop_v, "V", 3)));
        let note = format!("{}{}", light.unwrap_or_default(), drop.unwrap_or_default());
        Fact::prefixed("Current in the supply", current_a, "A").noted(note)
    }));
    facts.extend(answer.current_limit_a.map(|limit_a| {
        let capped = setup.maximum_current_a.is_some_and(|most_a| limit_a >= most_a);
        let note = if capped { "the greatest that the detector bears" } else { "twice the current in use" };
        Fact::prefixed("Current limit to set", limit_a, "A").noted(note)
    }));
    if setup.series_resistance_ohm > 0.0 {
        facts.extend(answer.gain_in_the_dark.map(|gain| {
            Fact::number("Gain at this bias without the signal", gain).noted("there the drop is gone")
        }));
    }
    facts.extend(answer.sag_power_dbm.map(|dbm| {
        Fact::fixed("Light at which the gain sags by 1 dB", dbm, 2, "dBm")
            .noted("average power of the signal, this bias")
    }));
    facts
}

fn table(answer: &Answer) -> Option<Table> {
    let (bias_v, gain) = answer.bias_v.zip(answer.best_gain)?;
    let text =
        |value: Option<f64>, decimals: usize| value.map_or("–".to_owned(), |value| fixed(value, decimals));
    let knows_breakdown = answer.table.iter().any(|row| row.breakdown_v.is_some());
    let column = |name: &str| name.to_owned();
    let mut columns = vec![column("Temperature / °C"), column("Bias / V")];
    if knows_breakdown {
        columns.push(column("Breakdown voltage / V"));
    }
    columns.push(format!("Gain if left at {} V", fixed(bias_v, 2)));
    columns.push(column("Sensitivity then lost / dB"));
    let rows = answer.table.iter().map(|row| {
        let mut cells = vec![brief(row.temperature_c, 5), text(row.bias_v, 2)];
        if knows_breakdown {
            cells.push(text(row.breakdown_v, 2));
        }
        cells.push(row.left_gain.map_or("–".to_owned(), |gain| significant(gain, 3)));
        cells.push(text(row.left_lost_db, 2));
        cells
    });
    let title = format!("Bias over temperature for a gain of {}", significant(gain, 3));
    (!answer.table.is_empty()).then(|| Table { title, columns, rows: rows.collect() })
}

fn doubts(setup: &Setup, answer: &Answer) -> Vec<String> {
    let mut doubts = Vec::new();
    if let Some(db) = answer.improvement_db.filter(|db| answer.bias_v.is_some() && *db < WORTHWHILE_DB) {
        doubts.push(format!(
            "The best gain is only {} dB better than gain 1: a PIN photodiode would do all but as well, without the high \
             voltage. Weigh that before building.",
            fixed(db.max(0.0), 2)
        ));
    }
    if let Some((margin_v, bias_v)) =
        answer.margin_v.zip(answer.bias_v).filter(|(margin_v, _)| *margin_v <= 0.0)
    {
        doubts.push(format!(
            "{} V lies {} V above breakdown: only the drop over the series resistance holds the gain down, and only as \
             long as this light is on. Lower the bias before the light goes off.",
            fixed(bias_v, 2),
            fixed(-margin_v, 2)
        ));
    } else if answer.loss_per_volt.is_some_and(|loss| loss.above_db.is_none()) && !setup.is_measured() {
        doubts.push(
            "One volt more would be breakdown. Let the supply follow the temperature, and keep its error well below \
             that."
            .to_owned(),
        );
    }
    if let Some((current_a, most_a)) = answer.current_a.zip(setup.maximum_current_a)
        && current_a > most_a
    {
        doubts.push(format!(
            "With this light the supply would carry {}, above the {} that the detector bears. Attenuate the light or \
             lower the gain.",
            prefixed(current_a, "A", 3),
            prefixed(most_a, "A", 3)
        ));
    }
    let receiver = &setup.receiver;
    if let Some((gain, needed_hz)) = answer.best_gain.zip(receiver.bandwidth_hz)
        && let Some(detector_hz) = receiver.detector_bandwidth_at(gain)
        && detector_hz < needed_hz
    {
        doubts.push(format!(
            "At the best gain the detector passes {} and is slower than the receiver's {}: the eye closes by an amount \
             that is not counted here. Use a faster detector or a lower gain, or measure the eye.",
            prefixed(detector_hz, "Hz", 3),
            prefixed(needed_hz, "Hz", 3)
        ));
    }
    if setup.breakdown_v_per_k.is_none() {
        doubts.push(
            "Without a temperature coefficient of the breakdown voltage this holds at the temperature at which the device \
             was described, and there is no table. Type the coefficient."
            .to_owned(),
        );
    }
    doubts
}

fn notes(setup: &Setup, answer: &Answer) -> Vec<String> {
    let mut notes = vec![match setup.is_measured() {
        true => "Gain from the table, interpolated in 1/M against voltage without overshoot, and taken as measured at so \
                 little current that nothing dropped in series. With temperature the whole table moves along the voltage \
                 by what the breakdown voltage moves, which is exact near breakdown only."
            .to_owned(),
        false => "Gain M = 1/(1 − (V/V_B)ⁿ) with V across the junction and V_B moving evenly with temperature: S. L. \
                  Miller, Phys. Rev. 99, 1234 (1955); n is the device's own."
            .to_owned(),
    }];
    if setup.series_resistance_ohm > 0.0 {
        notes.push(
            "The current in series is that of the average light, background and dark currents, multiplied by the gain \
             that its own drop leaves; gain and drop are solved together."
                .to_owned(),
        );
    }
    notes.push(
        "The best gain is where the least average power is least, with all noise of the bench, among the gains at which \
         the gain–bandwidth product is not slower than the receiver."
            .to_owned(),
    );
    if answer.improvement_db.is_some() {
        notes.push(
            "The PIN beside it is this detector at gain 1, without excess noise: same responsivity, dark currents and \
             circuit."
                .to_owned(),
        );
    }
    if answer.curves.iter().any(|curve| curve.name == "sensitivity_against_symbol_rate") {
        notes.push(
            "Against symbol rate all bandwidths of the electronics go with the rate, and its mean-square noise too, as \
             white noise does; detector and source stay as they are."
                .to_owned(),
        );
    }
    if answer.current_limit_a.is_some() {
        notes.push(
            "Twice the current in use is common practice for the limit, and never more than the detector bears: so \
             nothing is held back in use, and a burst or breakdown is."
                .to_owned(),
        );
    }
    notes.extend(excess_noise_notes(&setup.receiver));
    notes
}

//! Laws of the bias: what must be true of any device and of any answer about it.
//!
//! Random from a fixed seed, so a failure is not chance and comes again.

#![allow(clippy::disallowed_methods)] // tests run natively only

#[path = "support/finite.rs"]
mod finite;

use finite::all_finite;
use leastlight::door;
use leastlight::physics::bias::{Biased, Currents, GainTable, Junction, NoGain};
use leastlight::physics::excess_noise::FactorTable;
use leastlight::physics::miller::Miller;
use leastlight::tree::Tree;
use proptest::prelude::*;
use proptest::test_runner::{RngAlgorithm, RngSeed};
use serde_json::{Value, json};

fn fixed_seed(cases: u32) -> ProptestConfig {
    ProptestConfig {
        cases,
        rng_algorithm: RngAlgorithm::ChaCha,
        rng_seed: RngSeed::Fixed(0x001e_a571_1947),
        failure_persistence: None,
        ..ProptestConfig::default()
    }
}

fn any_miller() -> impl Strategy<Value = Miller> {
    (5.0..500.0f64, prop_oneof![Just(1.0), 0.3..8.0f64])
        .prop_map(|(breakdown_v, exponent)| Miller { breakdown_v, exponent })
}

/// A table as measured: rising by steps, from unit gain on.
fn any_table() -> impl Strategy<Value = GainTable> {
    prop::collection::vec((0.2..8.0f64, 0.01..0.6f64), 2..12).prop_map(|steps| {
        let (mut bias_v, mut ln_gain) = (10.0, 0.0);
        let mut pairs = vec![(bias_v, 1.0)];
        for (volts, factor) in steps {
            (bias_v, ln_gain) = (bias_v + volts, ln_gain + factor);
            pairs.push((bias_v, f64::exp(ln_gain)));
        }
        GainTable::new(&pairs).expect("a rising table")
    })
}

fn any_junction() -> impl Strategy<Value = Junction> {
    prop_oneof![any_miller().prop_map(Junction::Miller), any_table().prop_map(Junction::Table)]
}

fn any_biased() -> impl Strategy<Value = (Biased, Currents)> {
    biased(any_junction())
}

fn biased(junction: impl Strategy<Value = Junction>) -> impl Strategy<Value = (Biased, Currents)> {
    let ohm = prop_oneof![Just(0.0), (1.0..7.0f64).prop_map(|exponent| 10f64.powf(exponent))];
    let ampere = || prop_oneof![Just(0.0), (-11.0..-4.0f64).prop_map(|exponent| 10f64.powf(exponent))];
    (junction, ohm, ampere(), ampere()).prop_map(|(junction, ohm, multiplied_a, beside_a)| {
        (Biased { junction, series_resistance_ohm: ohm }, Currents { multiplied_a, beside_a })
    })
}

/// A gain that the junction is known to reach, `part` of the way.
fn gain_of(junction: &Junction, part: f64) -> f64 {
    let (low, high) = match junction {
        Junction::Miller(_) => (1.001, 3000.0),
        Junction::Table(table) => table.range_gain(),
    };
    (low * f64::powf(high / low, part)).clamp(low, high)
}

proptest! {
    #![proptest_config(fixed_seed(2000))]

    #[test]
    fn bias_for_a_gain_sets_that_gain((biased, currents) in any_biased(), part in 0.0..1.0f64) {
        let gain = gain_of(&biased.junction, part);
        let bias_v = biased.bias_v(gain, &currents).expect("a gain within reach");
        prop_assume!(bias_v > 0.0);
        let at = biased.operation(bias_v, &currents).map_err(|why| TestCaseError::fail(format!("{why:?}")))?;
        // One rounding of the bias moves the gain by the slope; a table's slope may be 0 and its inverse is sought to 1e-15.
        let slope = biased.gain_per_v(&at, &currents);
        let allowed = 1e-12 * gain + 8.0 * f64::EPSILON * bias_v * slope;
        prop_assert!((at.gain - gain).abs() <= allowed, "{} for {gain}, allowed {allowed:e}", at.gain);
    }

    #[test]
    fn gain_rises_with_bias_and_falls_with_light(
        (biased, currents) in any_biased(), part in 0.0..0.9f64, more in 1e-4..0.1f64, light in 1.1..100.0f64,
    ) {
        let (low, high) = (gain_of(&biased.junction, part), gain_of(&biased.junction, part + more));
        let volts = |gain: f64| biased.bias_v(gain, &currents).expect("a gain within reach");
        prop_assert!(volts(high) >= volts(low), "{} V for {high}, {} V for {low}", volts(high), volts(low));
        let brighter = Currents { multiplied_a: currents.multiplied_a * light, ..currents };
        if let (Ok(at), Ok(dimmed)) = (biased.operation(volts(high), &currents), biased.operation(volts(high), &brighter)) {
            prop_assert!(dimmed.gain <= at.gain * (1.0 + 1e-12), "{} with more light, {} before", dimmed.gain, at.gain);
        }
    }

    #[test]
    // By formula: where a table bends, a difference across the bend is no slope.
    fn the_slope_is_that_of_the_gain(
        (biased, currents) in biased(any_miller().prop_map(Junction::Miller)), part in 0.05..0.95f64,
    ) {
        let gain = gain_of(&biased.junction, part);
        let volts = |gain: f64| biased.bias_v(gain, &currents).expect("a gain within reach");
        let at = biased.operation(volts(gain), &currents).map_err(|why| TestCaseError::fail(format!("{why:?}")))?;
        let step = 1e-5 * (gain - 1.0);
        let slope = 2.0 * step / (volts(gain + step) - volts(gain - step));
        // Central differences: 1e-10 of the curve, and the rounding of two voltages over their distance.
        let noise = 4.0 * f64::EPSILON * volts(gain) / (volts(gain + step) - volts(gain - step));
        let own = biased.gain_per_v(&at, &currents);
        prop_assert!((own / slope - 1.0).abs() < 1e-7 + 4.0 * noise, "{own} against {slope}");
    }

    #[test]
    fn a_table_moves_along_the_voltage_and_a_formula_in_proportion(
        (biased, currents) in any_biased(), part in 0.0..1.0f64, shift_v in -2.0..30.0f64,
    ) {
        let gain = gain_of(&biased.junction, part);
        let moved = Biased { junction: biased.junction.moved(shift_v).expect("some breakdown voltage is left"), ..biased.clone() };
        let dark = Currents { multiplied_a: 0.0, ..currents };
        let (before, after) = (biased.bias_v(gain, &dark).unwrap_or(f64::NAN), moved.bias_v(gain, &dark).unwrap_or(f64::NAN));
        let expected = match &biased.junction {
            Junction::Table(_) => before + shift_v,
            Junction::Miller(miller) => {
                let drop_v = currents.beside_a * biased.series_resistance_ohm;
                (before - drop_v) * (miller.breakdown_v + shift_v) / miller.breakdown_v + drop_v
            }
        };
        prop_assert!((after - expected).abs() < 1e-12 * (1.0 + expected.abs()), "{after} V, expected {expected} V");
    }

    #[test]
    fn nothing_holds_a_junction_at_breakdown_but_a_drop(miller in any_miller(), above in 0.0..2.0f64, ohm in 0.0..1e6f64) {
        let bias_v = miller.breakdown_v * (1.0 + above);
        let bare = Biased { junction: Junction::Miller(miller), series_resistance_ohm: 0.0 };
        let lit = Currents { multiplied_a: 1e-6, beside_a: 0.0 };
        prop_assert_eq!(bare.operation(bias_v, &lit), Err(NoGain::Breakdown));
        let dark = Currents { multiplied_a: 0.0, beside_a: 0.0 };
        let behind = Biased { series_resistance_ohm: ohm.max(1.0), ..bare };
        prop_assert_eq!(behind.operation(bias_v, &dark), Err(NoGain::Breakdown));
        let held = behind.operation(bias_v, &lit);
        prop_assert!(held.is_ok_and(|at| at.junction_v < miller.breakdown_v || at.gain > 1e12), "{held:?}");
    }

    #[test]
    fn measured_excess_noise_goes_through_its_points_and_stays_between(
        steps in prop::collection::vec((0.05..0.8f64, 0.01..0.8f64), 1..8), part in 0.0..1.0f64,
    ) {
        let (mut ln_gain, mut ln_factor) = (0.0, 0.0);
        let points: Vec<(f64, f64)> = steps.iter().map(|(gain, factor)| {
            (ln_gain, ln_factor) = (ln_gain + gain, ln_factor + factor);
            (f64::exp(ln_gain), f64::exp(ln_factor))
        }).collect();
        let table = FactorTable::new(&points).expect("a rising table");
        for (gain, factor) in &points {
            prop_assert!((table.factor(*gain) / factor - 1.0).abs() < 1e-12);
        }
        let last = points.last().map_or(1.0, |point| point.0);
        let gain = last.powf(part).clamp(1.0, last);
        let above = points.iter().find(|point| point.0 >= gain).map_or(f64::NAN, |point| point.1);
        let below = points.iter().rev().find(|point| point.0 <= gain).map_or(1.0, |point| point.1);
        let factor = table.factor(gain);
        prop_assert!(below * (1.0 - 1e-12) <= factor && factor <= above * (1.0 + 1e-12), "{below} {factor} {above}");
    }
}

fn asked(question: &str, bench: &Value) -> Result<Value, TestCaseError> {
    let tree = Tree::from_json(&bench.to_string()).expect("JSON made here is JSON");
    let answer = door::ask(question, &tree, &Tree::Null);
    answer
        .map(|answer| serde_json::to_value(answer).expect("an answer is JSON"))
        .map_err(|faults| TestCaseError::fail(format!("{faults:?}")))
}

fn any_law() -> impl Strategy<Value = Value> {
    let formula = (1.0..400.0f64, 0.1..20.0f64).prop_map(
        |(volts, exponent)| json!({ "kind": "miller", "breakdown_v": volts, "miller_exponent": exponent }),
    );
    let table = any_table().prop_map(|table| {
        let ((from_v, to_v), (low, high)) = (table.range_v(), table.range_gain());
        json!({ "kind": "table", "points": [{ "bias_v": from_v, "gain": low }, { "bias_v": to_v, "gain": high }] })
    });
    prop_oneof![4 => formula, 1 => table]
}

/// A bench with a bias, edges included.
fn any_bench() -> impl Strategy<Value = Value> {
    let maybe =
        |range: std::ops::Range<f64>| prop_oneof![Just(Value::Null), range.prop_map(|value| json!(value))];
    let power = |range: std::ops::Range<f64>| range.prop_map(|exponent| json!(10f64.powf(exponent)));
    let receiver = (
        prop_oneof![Just(0.0), Just(1.0), 0.0..1.0f64],
        prop_oneof![Just(Value::Null), power(9.0..12.0)],
        prop_oneof![Just(Value::Null), power(8.0..11.0)],
        maybe(0.05..30.0),
        prop_oneof![Just(0.0), (-9.0..-5.0f64).prop_map(|exponent| 10f64.powf(exponent))],
        maybe(-160.0..-100.0),
        maybe(-60.0..20.0),
    );
    let supply = (
        any_law(),
        prop_oneof![Just(Value::Null), Just(json!(0)), power(1.0..7.0)],
        prop_oneof![Just(0.0), -3.0..3.0f64],
        -60.0..90.0f64,
        maybe(0.1..500.0),
        maybe(1e-6..1e-2),
    );
    let noise = prop_oneof![
        Just(json!({ "kind": "mcintyre" })),
        (0.0..2.0f64).prop_map(|exponent| json!({ "kind": "power", "exponent": exponent })),
        Just(
            json!({ "kind": "table", "points": [{ "gain": 5, "factor": 3 }, { "gain": 20, "factor": 10.5 }] })
        ),
    ];
    (receiver, supply, noise, prop_oneof![Just("nrz"), Just("pam4")]).prop_map(
        |(receiver, supply, noise, format)| {
            let (ratio, product, unit_gain, extinction, circuit, rin, launched) = receiver;
            let (law, ohm, per_k, now, set, most) = supply;
            let mut bench: Value =
                serde_json::from_str(include_str!("faults/bench.json")).expect("the good bench is JSON");
            bench["source"]["format"] = json!(format);
            bench["source"]["extinction_ratio_db"] = extinction;
            bench["source"]["rin_db_per_hz"] = rin;
            bench["source"]["average_power_dbm"] = launched;
            bench["detector"]["bandwidth_hz"] = unit_gain;
            bench["amplifier"]["noise"]["current_a"] = json!(circuit);
            bench["surroundings"]["temperature_c"] = json!(now);
            let avalanche = &mut bench["detector"]["avalanche"];
            avalanche["gain"] = Value::Null;
            avalanche["ionisation_ratio"] = json!(ratio);
            avalanche["gain_bandwidth_hz"] = product;
            avalanche["excess_noise"] = noise;
            avalanche["bias"] = law;
            let bias = &mut avalanche["bias"];
            bias["reference_temperature_c"] = json!(25);
            bias["breakdown_v_per_k"] = json!(per_k);
            bias["series_resistance_ohm"] = ohm;
            bias["set_v"] = set;
            bias["maximum_current_a"] = most;
            bench
        },
    )
}

proptest! {
    #![proptest_config(fixed_seed(120))]

    #[test]
    fn every_bench_has_a_bias_or_a_reason_in_finite_numbers(bench in any_bench()) {
        let answer = asked("avalanche_bias", &bench)?;
        all_finite(&answer, "the answer").map_err(TestCaseError::fail)?;
        prop_assert_eq!(answer["none_because"].is_null(), answer["bias_v"].is_number(), "either a bias or a reason");
    }

    #[test]
    fn no_other_gain_that_the_detector_passes_is_better(bench in any_bench(), part in 0.0..1.0f64) {
        let answer = asked("avalanche_bias", &bench)?;
        if let (Some(best), Some(least_dbm)) = (answer["best_gain"].as_f64(), answer["average_power_dbm"].as_f64()) {
            let reach = if bench["detector"]["avalanche"]["excess_noise"]["kind"] == "table" { 20.0 } else { 1e4 };
            let limit = if answer["best_gain_limit"] == "gain_bandwidth" { best } else { reach };
            let mut other = bench.clone();
            other["detector"]["avalanche"]["gain"] = json!(f64::powf(limit, part).clamp(1.0, limit));
            let there = asked("sensitivity", &other)?;
            if let Some(dbm) = there["average_power_dbm"].as_f64() {
                prop_assert!(dbm >= least_dbm - 1e-9, "{dbm} dBm at {}, {least_dbm} dBm at {best}", other["detector"]["avalanche"]["gain"]);
            }
        }
    }

    #[test]
    fn the_bias_set_is_the_gain_had_and_the_light_of_the_sag_sags_it(bench in any_bench()) {
        let answer = asked("avalanche_bias", &bench)?;
        if let (Some(bias_v), Some(best)) = (answer["bias_v"].as_f64().filter(|volts| *volts > 0.0 && *volts <= 1e4), answer["best_gain"].as_f64()) {
            let mut set = bench.clone();
            set["detector"]["avalanche"]["bias"]["set_v"] = json!(bias_v);
            let there = asked("avalanche_bias", &set)?;
            let gain = there["set"]["gain"].as_f64().unwrap_or(f64::NAN);
            // One rounding of a bias near breakdown counts as often as the gain and the exponent are high.
            let allowed = 1e-9 + 1e-14 * best * 20.0;
            prop_assert!((gain / best - 1.0).abs() < allowed, "{gain} for {best}");
            if let Some(sag_dbm) = answer["sag_power_dbm"].as_f64().filter(|dbm| (-149.0..59.0).contains(dbm)) {
                set["source"]["average_power_dbm"] = json!(sag_dbm);
                let sagged = asked("avalanche_bias", &set)?;
                let ratio = answer["gain_in_the_dark"].as_f64().unwrap_or(f64::NAN) / sagged["set"]["gain"].as_f64().unwrap_or(f64::NAN);
                prop_assert!((10.0 * ratio.log10() - 1.0).abs() < 1e-6 + 10.0 * allowed, "{ratio}");
            }
        }
    }
}

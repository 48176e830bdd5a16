//! Laws of counted electrons: limits that analysis gives, monotony, symmetry, and answers for any bench.
#![cfg(not(target_arch = "wasm32"))]

use leastlight::physics::avalanche::excess_noise_factor;
use leastlight::physics::constants::ELEMENTARY_CHARGE_C;
use leastlight::physics::counting::Count;
use leastlight::physics::decibel::db_from_ratio;
use leastlight::physics::decision::{Threshold, decide};
use leastlight::physics::exact_decision::{self, Rule, error_ratio_at};
use leastlight::physics::exact_link::ExactLink;
use leastlight::physics::gain_transform::Gain;
use leastlight::physics::quantum_limit::photons_in_a_one;
use leastlight::physics::receiver::Receiver;
use leastlight::physics::sensitivity::{Format, Link, NoPower, least_average_power_w};
use proptest::prelude::*;
use proptest::test_runner::RngSeed;

fn fixed(cases: u32) -> ProptestConfig {
    ProptestConfig {
        cases,
        rng_seed: RngSeed::Fixed(19_720_703),
        failure_persistence: None,
        ..Default::default()
    }
}

fn spread(low: f64, high: f64) -> impl Strategy<Value = f64> {
    (libm::log(low)..libm::log(high)).prop_map(libm::exp)
}

fn none_or(some: impl Strategy<Value = f64>) -> impl Strategy<Value = f64> {
    prop_oneof![1 => Just(0.0), 3 => some]
}

fn ratios() -> impl Strategy<Value = f64> {
    prop_oneof![Just(0.0), Just(1.0), 0.0..=1.0, spread(1e-9, 1e-2), Just(1.0 - 1e-9)]
}

/// A link in which one ampere is one electron; dark currents and noise in electrons.
fn link(gain: f64, k: f64, noise: f64, dark: f64, surface: f64, extinction_ratio: f64) -> ExactLink {
    let receiver = Receiver {
        responsivity_a_per_w: 1.0,
        gain,
        excess_noise_factor: excess_noise_factor(gain, k),
        noise_bandwidth_hz: 0.5 / ELEMENTARY_CHARGE_C,
        circuit_noise_a: noise,
        dark_current_bulk_a: dark,
        dark_current_surface_a: surface,
        background_power_w: 0.0,
        rin_per_hz: 0.0,
    };
    let (format, threshold) = (Format::Nrz, Threshold::Optimum);
    ExactLink { link: Link { receiver, format, extinction_ratio, threshold }, ionisation_ratio: k }
}

fn links() -> impl Strategy<Value = ExactLink> {
    let gain = prop_oneof![Just(1.0), spread(1.0, 200.0)];
    let noise = none_or(spread(0.01, 3000.0));
    let extinction = prop_oneof![Just(f64::INFINITY), spread(1.5, 1000.0)];
    (gain, ratios(), noise, none_or(spread(1e-6, 50.0)), none_or(spread(1e-3, 300.0)), extinction)
        .prop_map(|(gain, k, noise, dark, surface, ratio)| link(gain, k, noise, dark, surface, ratio))
}

proptest! {
    #![proptest_config(fixed(150))]

    #[test]
    fn every_link_has_a_power_that_reaches_the_target(link in links(), target in spread(1e-18, 0.3)) {
        let power_w = link.least_average_power_w(target);
        match power_w {
            Ok(power_w) => {
                prop_assert!(power_w.is_finite() && power_w > 0.0);
                let found = link.error_ratio(power_w);
                // The chances are good to 1e-7, the power to 1e-11.
                prop_assert!(libm::log(found / target).abs() < 1e-6, "{found:e} for {target:e}");
            }
            // A kilowatt is a thousand electrons here.
            Err(NoPower::Beyond { error_ratio, .. }) => prop_assert!(error_ratio > target),
            Err(other) => prop_assert!(false, "{other:?}"),
        }
    }

    #[test]
    fn more_light_never_means_more_errors(link in links(), power_w in spread(0.01, 500.0), more in 1.01..3.0f64) {
        let (less, greater) = (link.error_ratio(power_w), link.error_ratio(power_w * more));
        prop_assert!((0.0..=0.5 + 1e-9).contains(&less), "{less:e}");
        prop_assert!(greater <= less * (1.0 + 1e-6) + 1e-290, "{less:e} {greater:e}");
    }

    #[test]
    fn no_threshold_beats_the_optimum(link in links(), power_w in spread(0.1, 500.0), share in -0.2..1.2f64) {
        let counts = link.counts(power_w);
        let best = link.decide(&counts);
        let [zero, one] = &counts.levels[..] else { panic!("two levels") };
        let mut other = zero.mean() + share * (one.mean() - zero.mean());
        // Between whole counts all thresholds are one.
        if zero.noise == 0.0 { other = other.round(); }
        let there = error_ratio_at(&counts.levels, &[other]);
        prop_assert!(best.error_ratio <= there * (1.0 + 1e-6) + 1e-290, "{best:?} {other} {there:e}");
    }

    #[test]
    fn both_sides_are_all_there_is(link in links(), power_w in spread(0.01, 500.0), step in -8.0..12.0f64) {
        for count in link.counts(power_w).levels {
            let threshold = count.mean() + step * count.variance().sqrt();
            let chances = count.chances(threshold);
            prop_assert!((0.0..=1.0 + 1e-9).contains(&chances.below) && (0.0..=1.0 + 1e-9).contains(&chances.above), "{chances:?} {count:?}");
            prop_assert!((chances.below + chances.above - 1.0).abs() < 1e-7, "{chances:?} {count:?}");
            prop_assert!(!chances.ln_density.is_nan() && !chances.slope.is_nan(), "{chances:?} {count:?}");
        }
    }

    #[test]
    fn four_levels_are_two_where_they_are_two(link in links(), power_w in spread(1.0, 500.0)) {
        // With the middle threshold alone, both outer pairs merged, the second bit is a guess.
        let counts = link.counts(power_w).levels;
        let four = [counts[0], counts[0], counts[1], counts[1]];
        let two = link.decide(&link.counts(power_w));
        let middle = two.thresholds[0];
        let low = counts[0].mean() - 1e3 * counts[0].variance().sqrt();
        let far = error_ratio_at(&four, &[low, middle, 1e9]);
        prop_assert!((far - (0.5 * two.error_ratio + 0.25)).abs() < 1e-6, "{far} {two:?}");
    }
}

#[test]
fn an_empty_zero_without_circuit_noise_reaches_the_quantum_limit() {
    for target in [0.3, 1e-3, 1e-9, 1e-12, 1e-18] {
        for (gain, k) in [(1.0, 0.0), (10.0, 0.0), (10.0, 0.4), (100.0, 0.02), (30.0, 1.0)] {
            let exact = link(gain, k, 0.0, 0.0, 0.0, f64::INFINITY);
            let power_w = exact.least_average_power_w(target).expect("a power");
            // Half a bit's photons are in a one: ½e^(−N₁) for every gain.
            let off = 2.0 * power_w / photons_in_a_one(target) - 1.0;
            assert!(off.abs() < 1e-8, "{off:e} for {target:e}, M {gain}, k {k}");
            assert_eq!(exact.decide(&exact.counts(power_w)).thresholds, [1.0]);
        }
    }
}

#[test]
fn large_counts_are_gaussian() {
    // Skewness fades with the root of the count, and the difference in decibels with it.
    let mut last = f64::INFINITY;
    for noise in [1e2, 1e4, 1e6] {
        let mut exact = link(10.0, 0.4, noise, 0.0, 0.0, 10.0);
        // So that powers stay far below the most that is looked at.
        exact.link.receiver.responsivity_a_per_w = 1e6;
        let counted_w = exact.least_average_power_w(1e-9).expect("a power");
        let gaussian_w = least_average_power_w(&exact.link, 1e-9).expect("a power");
        let difference_db = db_from_ratio(gaussian_w / counted_w).abs();
        assert!(difference_db < 0.2 * last, "{difference_db} after {last}");
        last = difference_db;
    }
    assert!(last < 1e-4);
}

#[test]
fn a_count_without_gain_is_the_limit_of_a_little_gain() {
    for k in [0.0, 0.5, 1.0] {
        let count = |mean: f64| Count {
            primaries: 40.0,
            gain: Gain::new(mean, k),
            unmultiplied: 3.0,
            noise: 6.0,
            light_noise: 0.0,
        };
        let (none, little) = (count(1.0).chances(80.0), count(1.0 + 1e-9).chances(80.0));
        assert!((libm::log(none.above / little.above)).abs() < 1e-6, "{none:?} {little:?}");
    }
}

#[test]
fn the_threshold_of_the_midpoint_is_halfway_and_no_better() {
    let exact = link(10.0, 0.4, 500.0, 5.0, 20.0, 8.0);
    let counts = exact.counts(400.0);
    let middle = exact_decision::decide(&counts.levels, Rule::Midpoint);
    let halfway = 0.5 * (counts.levels[0].mean() + counts.levels[1].mean());
    assert_eq!(middle.thresholds, [halfway]);
    assert!(middle.error_ratio > exact.decide(&counts).error_ratio);
}

#[test]
fn four_levels_buried_in_circuit_noise_are_those_of_gaussians() {
    let exact = link(1.0, 0.0, 3e4, 0.0, 0.0, f64::INFINITY);
    let exact = ExactLink { link: Link { format: Format::Pam4, ..exact.link }, ..exact };
    let mut bright = exact;
    bright.link.receiver.responsivity_a_per_w = 1e6;
    let counts = bright.counts(0.3);
    let (counted, gaussian) = (bright.decide(&counts), decide(&bright.link.levels(0.3), Threshold::Optimum));
    // Shot noise is a thousandth of the circuit's: skewness of some 1e-5 moves far tails by about as much.
    assert!((libm::log(counted.error_ratio / gaussian.error_ratio)).abs() < 1e-3, "{counted:?} {gaussian:?}");
    for (one, other) in counted.thresholds.iter().zip(gaussian.thresholds_a) {
        assert!((one / other - 1.0).abs() < 1e-4, "{one} {other}");
    }
}

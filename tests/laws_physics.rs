//! Laws that hold for any numbers: limits, monotony, scaling, symmetry, and no NaN anywhere.
//!
//! The cases are drawn from a fixed seed, so a failure is a mistake and never chance.
#![cfg(not(target_arch = "wasm32"))]

use leastlight::numeric::pchip::Pchip;
use leastlight::physics::avalanche::excess_noise_factor;
use leastlight::physics::decibel::ratio_from_db;
use leastlight::physics::decision::{Level, Threshold, decide, error_ratio_at};
use leastlight::physics::receiver::Receiver;
use leastlight::physics::sensitivity::{BestGain, Format, Link, NoPower, best_gain, least_average_power_w};
use leastlight::statistics::normal::{ln_upper_tail, upper_tail, upper_tail_quantile};
use proptest::prelude::*;
use proptest::test_runner::RngSeed;

fn fixed() -> ProptestConfig {
    ProptestConfig {
        cases: 300,
        rng_seed: RngSeed::Fixed(20_260_101),
        failure_persistence: None,
        ..Default::default()
    }
}

/// A number whose logarithm is evenly spread.
fn spread(low: f64, high: f64) -> impl Strategy<Value = f64> {
    (libm::log(low)..libm::log(high)).prop_map(libm::exp)
}

fn none_or(some: impl Strategy<Value = f64>, none: f64) -> impl Strategy<Value = f64> {
    prop_oneof![1 => Just(none), 3 => some]
}

fn receivers() -> impl Strategy<Value = Receiver> {
    let first = (0.01..2.0, none_or(spread(1.0, 1000.0), 1.0), 0.0..=1.0, spread(1e3, 1e11));
    let second = (
        none_or(spread(1e-12, 1e-4), 0.0),
        none_or(spread(1e-12, 1e-6), 0.0),
        none_or(spread(1e-12, 1e-6), 0.0),
        none_or(spread(1e-12, 1e-6), 0.0),
        none_or(spread(1e-17, 1e-11), 0.0),
    );
    (first, second).prop_map(|((responsivity_a_per_w, gain, k, noise_bandwidth_hz), second)| Receiver {
        responsivity_a_per_w,
        gain,
        excess_noise_factor: excess_noise_factor(gain, k),
        noise_bandwidth_hz,
        circuit_noise_a: second.0,
        dark_current_bulk_a: second.1,
        dark_current_surface_a: second.2,
        background_power_w: second.3,
        rin_per_hz: second.4,
    })
}

fn links() -> impl Strategy<Value = Link> {
    let rules = [Threshold::Optimum, Threshold::Midpoint, Threshold::QFactor];
    let extinction = none_or((0.05..30.0).prop_map(ratio_from_db), f64::INFINITY);
    let formats = [Format::Nrz, Format::Pam4];
    (
        receivers(),
        proptest::sample::select(formats.to_vec()),
        extinction,
        proptest::sample::select(rules.to_vec()),
    )
        .prop_map(|(receiver, format, extinction_ratio, threshold)| Link {
            receiver,
            format,
            extinction_ratio,
            threshold,
        })
}

/// Two or four levels in rising order, from buried in noise to far apart, some of them noiseless.
fn levels() -> impl Strategy<Value = Vec<Level>> {
    let one = || (spread(0.01, 20.0), none_or(spread(0.05, 5.0), 0.0));
    let raise = |steps: Vec<(f64, f64)>| {
        let mut current_a = -3.0;
        let climb = |(step, noise_rms_a)| {
            current_a += step;
            Level { current_a, noise_rms_a }
        };
        steps.into_iter().map(climb).collect()
    };
    prop_oneof![proptest::collection::vec(one(), 2), proptest::collection::vec(one(), 4)].prop_map(raise)
}

fn targets() -> impl Strategy<Value = f64> {
    spread(1e-30, 0.4)
}

proptest! {
    #![proptest_config(fixed())]

    #[test]
    fn every_link_has_a_power_that_reaches_the_target_or_a_reason(link in links(), target in targets()) {
        let (floor, dark) = (link.error_floor(), link.error_ratio_in_the_dark());
        prop_assert!((0.0..=0.5).contains(&floor) && (0.0..=0.5 + 1e-15).contains(&dark), "{floor} {dark}");
        match least_average_power_w(&link, target) {
            Ok(power_w) => {
                prop_assert!(power_w.is_finite() && power_w > 0.0);
                let off = libm::log(link.error_ratio(power_w) / target);
                // d ln(error ratio)/d ln P is at most some Q², 140 here, and the root is sought to 1e-14. A small
                // extinction ratio takes digits from the difference of the currents.
                prop_assert!(off.abs() < 1e-9, "off by {off:e}");
                prop_assert!(floor < target && target < dark);
                prop_assert!(link.error_ratio(1.01 * power_w) < target && link.error_ratio(0.99 * power_w) > target);
            }
            Err(NoPower::Floor { error_ratio }) => prop_assert!(error_ratio >= target),
            Err(NoPower::AnyPower { error_ratio }) => prop_assert!(error_ratio <= target),
            Err(NoPower::Beyond { error_ratio, .. }) => prop_assert!(error_ratio > target),
        }
    }

    #[test]
    fn more_circuit_noise_never_needs_less_light(link in links(), target in targets(), more in 1.0..10.0) {
        let louder = Receiver { circuit_noise_a: link.receiver.circuit_noise_a * more + 1e-13, ..link.receiver };
        if let (Ok(quiet_w), Ok(loud_w)) =
            (least_average_power_w(&link, target), least_average_power_w(&Link { receiver: louder, ..link }, target))
        {
            prop_assert!(loud_w >= quiet_w * (1.0 - 1e-11), "{loud_w:e} {quiet_w:e}");
        }
    }

    #[test]
    fn power_scales_with_currents_and_bandwidth_together(link in links(), target in targets(), s in spread(0.01, 100.0)) {
        let r = link.receiver;
        let scaled = Receiver {
            noise_bandwidth_hz: s * r.noise_bandwidth_hz,
            circuit_noise_a: s * r.circuit_noise_a,
            dark_current_bulk_a: s * r.dark_current_bulk_a,
            dark_current_surface_a: s * r.dark_current_surface_a,
            background_power_w: s * r.background_power_w,
            rin_per_hz: r.rin_per_hz / s,
            ..r
        };
        if let (Ok(one_w), Ok(other_w)) =
            (least_average_power_w(&link, target), least_average_power_w(&Link { receiver: scaled, ..link }, target))
        {
            // Near a floor the power magnifies the rounding of the noise.
            let near_floor = link.error_floor() > 1e-3 * target;
            let allowed = if near_floor { 1e-6 } else { 1e-10 };
            prop_assert!((other_w / (s * one_w) - 1.0).abs() < allowed, "{:e}", other_w / (s * one_w) - 1.0);
        }
    }

    #[test]
    fn the_best_gain_is_no_worse_than_any_other(link in links(), target in targets(), k in 0.0..1.0, other in spread(1.0, 1e4)) {
        let at = |gain: f64| {
            let receiver = Receiver { gain, excess_noise_factor: excess_noise_factor(gain, k), ..link.receiver };
            Link { receiver, ..link }
        };
        let there = least_average_power_w(&at(other), target);
        match best_gain(at, target, 1e6) {
            BestGain::At { gain, power_w } => {
                prop_assert!(gain >= 1.0);
                prop_assert!(there.is_ok_and(|there_w| power_w <= there_w * (1.0 + 1e-11)));
            }
            BestGain::NoUpperEnd { power_w } => {
                prop_assert!(there.is_ok_and(|there_w| power_w <= there_w * (1.0 + 1e-11)));
            }
            BestGain::None => prop_assert!(there.is_err()),
        }
    }

    #[test]
    fn no_thresholds_beat_the_optimum(levels in levels(), places in proptest::collection::vec(-8.0..80.0, 3)) {
        let best = decide(&levels, Threshold::Optimum);
        prop_assert!((0.0..=0.5).contains(&best.error_ratio), "{best:?}");
        prop_assert!(best.error_ratio <= decide(&levels, Threshold::Midpoint).error_ratio * (1.0 + 1e-13));
        let mut others = places;
        others.truncate(levels.len() - 1);
        others.sort_unstable_by(f64::total_cmp);
        prop_assert!(best.error_ratio <= error_ratio_at(&levels, &others) * (1.0 + 1e-12) + 1e-300);
        // And none close by; a noiseless level makes the optimum the limit from one side, so both are only not better.
        for (index, threshold_a) in best.thresholds_a.iter().enumerate() {
            for step in [-0.3, -0.01, 0.01, 0.3] {
                let mut moved = best.thresholds_a.clone();
                moved[index] = threshold_a + step;
                if moved.is_sorted() {
                    let there = error_ratio_at(&levels, &moved);
                    prop_assert!(best.error_ratio <= there * (1.0 + 1e-12) + 1e-300, "{best:?} {moved:?} {there:e}");
                }
            }
        }
    }

    #[test]
    fn upside_down_levels_give_the_same_error_ratio(levels in levels()) {
        let turned: Vec<Level> =
            levels.iter().rev().map(|level| Level { current_a: -level.current_a, ..*level }).collect();
        for rule in [Threshold::Optimum, Threshold::Midpoint, Threshold::QFactor] {
            let (one, other) = (decide(&levels, rule).error_ratio, decide(&turned, rule).error_ratio);
            let off = (one - other).abs();
            prop_assert!(off <= 1e-11 * one + 1e-290, "{one:e} {other:e}");
        }
    }

    #[test]
    fn the_quantile_undoes_the_tail(p in prop_oneof![spread(1e-300, 0.5), 0.01..0.99]) {
        let x = upper_tail_quantile(p);
        // A last digit of x is x² of them in the tail.
        prop_assert!((ln_upper_tail(x) - libm::log(p)).abs() < 4e-16 * (1.0 + x * x));
        prop_assert!((upper_tail(x) + upper_tail(-x) - 1.0).abs() < 4e-16);
    }

    #[test]
    fn the_quantile_is_that_of_another_library(p in spread(1e-290, 0.4)) {
        let other = core::f64::consts::SQRT_2 * statrs::function::erf::erfc_inv(2.0 * p);
        // Four units of the last place: two for each, and one for the root of two.
        prop_assert!((upper_tail_quantile(p) / other - 1.0).abs() < 1e-15);
    }

    #[test]
    fn a_curve_keeps_the_shape_of_its_table(
        steps in proptest::collection::vec((spread(1e-3, 1e3), none_or(spread(1e-6, 1e6), 0.0)), 2..12),
        share in 0.0..=1.0_f64,
    ) {
        let (mut x, mut y) = (vec![0.0], vec![0.0]);
        for (dx, dy) in &steps {
            x.push(x.last().unwrap() + dx);
            y.push(y.last().unwrap() + dy);
        }
        let curve = Pchip::new(&x, &y).unwrap();
        let at = curve.first() + share * (curve.last() - curve.first());
        let at = at.min(curve.last());
        let value = curve.value(at).unwrap();
        let right = x.partition_point(|x| *x <= at).min(x.len() - 1);
        let slack = 1e-12 * y[right];
        prop_assert!(y[right - 1] - slack <= value && value <= y[right] + slack);
        prop_assert!(curve.slope(at).unwrap() >= -1e-9 * (y[right] - y[right - 1]) / (x[right] - x[right - 1]));
    }

    #[test]
    fn weights_of_a_curve_sum_to_one_and_rebuild_it(
        steps in proptest::collection::vec((spread(1e-2, 1e2), prop_oneof![Just(0.0), -10.0..10.0]), 1..10),
        share in 0.0..=1.0_f64,
    ) {
        let (mut x, mut y) = (vec![-5.0], vec![1.0]);
        for (dx, level) in &steps {
            x.push(x.last().unwrap() + dx);
            y.push(*level);
        }
        let curve = Pchip::new(&x, &y).unwrap();
        let at = (curve.first() + share * (curve.last() - curve.first())).min(curve.last());
        let weights = curve.weights(at).unwrap();
        prop_assert!(weights.len() <= 4 && weights.is_sorted_by(|a, b| a.0 < b.0));
        let scale: f64 = weights.iter().map(|(_, weight)| weight.abs()).sum();
        let total: f64 = weights.iter().map(|(_, weight)| weight).sum();
        prop_assert!((total - 1.0).abs() < 1e-13 * scale);
        // The curve is of first order in y (twice the y, twice the curve), so Euler's theorem gives it back.
        let rebuilt: f64 = weights.iter().map(|&(index, weight)| weight * y[index]).sum();
        prop_assert!((rebuilt - curve.value(at).unwrap()).abs() < 1e-12 * 10.0 * scale);
    }

    #[test]
    fn no_table_makes_a_curve_without_numbers(
        points in proptest::collection::vec((any::<f64>(), any::<f64>()), 0..6),
        share in 0.0..=1.0_f64,
    ) {
        let mut points = points;
        points.sort_unstable_by(|a, b| a.0.total_cmp(&b.0));
        let (x, y): (Vec<f64>, Vec<f64>) = points.into_iter().unzip();
        if let Ok(curve) = Pchip::new(&x, &y) {
            let at = curve.first() * (1.0 - share) + curve.last() * share;
            if let Some(value) = curve.value(at) {
                prop_assert!(value.is_finite() && curve.slope(at).unwrap().is_finite());
                prop_assert!(curve.weights(at).unwrap().iter().all(|(_, weight)| weight.is_finite()));
            }
        }
    }
}

/// Share of wrong bits of four levels, counted region by region: 00 01 11 10 from the lowest up.
fn counted(levels: &[Level], thresholds_a: &[f64]) -> f64 {
    let edges = [&[f64::NEG_INFINITY][..], thresholds_a, &[f64::INFINITY][..]].concat();
    let below = |edge: f64, level: &Level| 1.0 - upper_tail((edge - level.current_a) / level.noise_rms_a);
    let gray: [u32; 4] = [0b00, 0b01, 0b11, 0b10];
    let mut wrong = 0.0;
    for (level, sent) in levels.iter().zip(gray) {
        for (region, read) in edges.windows(2).zip(gray) {
            wrong +=
                f64::from((sent ^ read).count_ones()) * (below(region[1], level) - below(region[0], level));
        }
    }
    wrong / 8.0
}

#[test]
fn levels_that_differ_only_in_noise_keep_their_thresholds_in_order() {
    // The outer thresholds share a bit; each by itself would go to the far side of the other.
    for slope in [0.05, 0.3, 1.0] {
        let level = |n: f64| Level { current_a: 1e-4 * n, noise_rms_a: (1.0 + slope * n).sqrt() };
        let levels = [0.0, 1.0, 2.0, 3.0].map(level);
        let best = decide(&levels, Threshold::Optimum);
        assert!(best.thresholds_a[0] <= best.thresholds_a[2], "{best:?}");
        assert!(best.error_ratio < 0.5);
        let bits = error_ratio_at(&levels, &[-1.0, 0.2, 1.5]);
        assert!((bits - counted(&levels, &[-1.0, 0.2, 1.5])).abs() < 1e-15);
    }
}

#[test]
fn tables_that_make_no_curve_say_why() {
    use leastlight::numeric::pchip::TableFault;
    let fault = |x: &[f64], y: &[f64]| Pchip::new(x, y).unwrap_err();
    assert_eq!(fault(&[1.0, 2.0], &[1.0]), TableFault::Lengths { x: 2, y: 1 });
    assert_eq!(fault(&[1.0], &[1.0]), TableFault::TooFew { points: 1 });
    assert_eq!(fault(&[1.0, f64::NAN], &[1.0, 2.0]), TableFault::NotFinite { index: 1 });
    assert_eq!(fault(&[1.0, 2.0, 2.0], &[1.0, 2.0, 3.0]), TableFault::NotIncreasing { index: 2 });
    assert_eq!(fault(&[0.0, 1e-300], &[0.0, 1e300]), TableFault::TooSteep { index: 1 });
    assert_eq!(Pchip::new(&[1.0, 2.0], &[0.0, 1.0]).unwrap().value(f64::NAN), None);
}

#[test]
fn intensity_noise_has_half_the_floor_of_the_textbook_with_a_dark_zero() {
    let receiver = Receiver {
        responsivity_a_per_w: 1.0,
        gain: 1.0,
        excess_noise_factor: 1.0,
        noise_bandwidth_hz: 1e9,
        circuit_noise_a: 1e-7,
        dark_current_bulk_a: 0.0,
        dark_current_surface_a: 0.0,
        background_power_w: 0.0,
        rin_per_hz: 1.0 / 36e9,
    };
    let best = Link {
        receiver,
        format: Format::Nrz,
        extinction_ratio: f64::INFINITY,
        threshold: Threshold::Optimum,
    };
    let book = Link { threshold: Threshold::QFactor, ..best };
    assert!((book.error_floor() / upper_tail(6.0) - 1.0).abs() < 1e-13);
    assert!((best.error_floor() / upper_tail(6.0) - 0.5).abs() < 1e-13);
    // Between the two floors one has an answer and the other none.
    let between = 0.7 * upper_tail(6.0);
    assert!(least_average_power_w(&best, between).is_ok());
    assert!(matches!(least_average_power_w(&book, between), Err(NoPower::Floor { .. })));
}

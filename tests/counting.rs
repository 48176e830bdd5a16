//! Contour integrals of counts against sums over their distribution: two routes that share nothing but the physics.
//!
//! The sum takes the chances of one primary electron in log-gamma arithmetic (themselves checked against fifty digits in
//! `published/gain_distribution.toml`) and makes the compound of them by H. H. Panjer's recursion, ASTIN Bulletin 12, 22–26 (1981), in
//! which all terms are positive. The contour knows only the generating function.
#![cfg(not(target_arch = "wasm32"))]

use leastlight::physics::counting::Count;
use leastlight::physics::gain_distribution::ln_chance;
use leastlight::physics::gain_transform::Gain;
use leastlight::statistics::normal::upper_tail;

/// Chances of 0, 1, … electrons from a Poisson number of multiplied and of unmultiplied ones.
fn distribution(primaries: f64, gain: f64, k: f64, unmultiplied: f64, length: usize) -> Vec<f64> {
    let one: Vec<f64> = (0..length)
        .map(|m| if m == 0 { 0.0 } else { libm::exp(ln_chance(1.0, m as f64, gain, k)) })
        .collect();
    let mut multiplied = vec![libm::exp(-primaries)];
    for m in 1..length {
        let sum: f64 = (1..=m).map(|j| j as f64 * one[j] * multiplied[m - j]).sum();
        multiplied.push(primaries / m as f64 * sum);
    }
    if unmultiplied == 0.0 {
        return multiplied;
    }
    let mut other = vec![libm::exp(-unmultiplied)];
    (1..200).for_each(|j| other.push(other[j - 1] * unmultiplied / j as f64));
    (0..length).map(|m| (0..=m.min(199)).map(|j| other[j] * multiplied[m - j]).sum()).collect()
}

/// Chances below and above a threshold, and the density there, by summation.
fn summed(chances: &[f64], noise: f64, threshold: f64) -> (f64, f64, f64) {
    let (mut below, mut above, mut density) = (0.0, 0.0, 0.0);
    for (m, chance) in chances.iter().enumerate() {
        let up = m as f64 - threshold;
        if noise > 0.0 {
            below += chance * upper_tail(up / noise);
            above += chance * upper_tail(-up / noise);
            density += chance * libm::exp(-0.5 * (up / noise).powi(2))
                / (noise * (2.0 * std::f64::consts::PI).sqrt());
        } else if up < 0.0 {
            below += chance;
        } else {
            above += chance;
        }
    }
    (below, above, density)
}

#[test]
fn contour_and_sum_agree_over_a_grid_of_receivers() {
    const LENGTH: usize = 5000;
    let (mut compared, mut rarest, mut worst) = (0, 1.0f64, (0.0f64, String::new()));
    let mut misses = Vec::new();
    for k in [0.0, 0.02, 0.4, 0.9, 0.999_999, 1.0] {
        for gain in [1.0, 1.5, 10.0, 60.0] {
            for primaries in [1e-6, 0.03, 2.0, 60.0] {
                for unmultiplied in [0.0, 4.0] {
                    let chances = distribution(primaries, gain, k, unmultiplied, LENGTH);
                    // What lies beyond the table, by its last terms.
                    let beyond: f64 = chances[LENGTH - 500..].iter().sum::<f64>() * 20.0;
                    for noise in [0.0, 0.1, 0.6, 1.4, 1.6, 5.0, 80.0] {
                        let count = Count {
                            primaries,
                            gain: Gain::new(gain, k),
                            unmultiplied,
                            noise,
                            light_noise: 0.0,
                        };
                        let spread = count.variance().sqrt();
                        let mut last = f64::NAN;
                        for step in [-5.0, -2.5, -1.0, -0.1, 0.0, 0.2, 1.0, 3.0, 6.0, 9.0, 14.0] {
                            let threshold = count.mean() + step * spread;
                            let threshold = if noise < 1.0 { threshold.round() + 0.3 } else { threshold };
                            let again = std::mem::replace(&mut last, threshold) == threshold;
                            if again || threshold + 10.0 * noise > 0.8 * LENGTH as f64 {
                                continue;
                            }
                            let (below, above, density) = summed(&chances, noise, threshold);
                            let found = count.chances(threshold);
                            let mut compare = |name: &str, expected: f64, found: f64, allowed: f64| {
                                if expected < 1e-60 {
                                    return;
                                }
                                let off = libm::log(found / expected).abs();
                                let what = format!(
                                    "{name} {found:e} for {expected:e} k {k} M {gain} N {primaries} S {unmultiplied} σ {noise} D {threshold}"
                                );
                                compared += 1;
                                rarest = rarest.min(expected);
                                if off.is_nan() || off > allowed {
                                    misses.push(format!("{off:e} {what}"));
                                } else if off > worst.0 {
                                    worst = (off, what);
                                }
                            };
                            // The smaller side is the one that is wanted; beyond the table nothing was summed.
                            if below < 0.5 {
                                compare("below", below, found.below, 1e-7);
                            } else if beyond < 1e-9 * above {
                                compare("above", above, found.above, 1e-7);
                            }
                            if noise > 0.05 && beyond < 1e-9 * above {
                                // Only for placing thresholds and for drawing.
                                compare("density", density, libm::exp(found.ln_density), 1e-6);
                            }
                        }
                    }
                }
            }
        }
    }
    println!("{compared} compared, down to {rarest:e}, worst {worst:?}, {} misses", misses.len());
    assert!(compared > 10_000);
    assert!(misses.is_empty(), "{}\n{}", misses.len(), misses[..misses.len().min(60)].join("\n"));
}

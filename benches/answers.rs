//! How long an answer takes: `cargo bench`. The goal in the page is a display frame, 16 ms, for everything.

use divan::{Bencher, black_box};
use leastlight::bench::Bench;
use leastlight::door;
use leastlight::physics::bias::{Biased, Currents, Junction};
use leastlight::physics::miller::Miller;
use leastlight::questions::QUESTIONS;
use leastlight::tree::Tree;

fn main() {
    divan::main();
}

fn put(bench: &mut Tree, part: &str, key: &str, value: Tree) {
    if let Some(Tree::Map(entries)) = bench.get_mut(part) {
        entries.retain(|(known, _)| known != key);
        entries.push((key.to_owned(), value));
    }
}

/// The avalanche receiver of the demonstration bench, with all curves and the search for the best gain.
#[divan::bench]
fn sensitivity_two_levels(bencher: Bencher) {
    let bench = door::demo();
    bencher.bench(|| door::ask("sensitivity", black_box(&bench), &Tree::Null));
}

/// The same with four levels, where each threshold is a minimum of its own.
#[divan::bench]
fn sensitivity_four_levels(bencher: Bencher) {
    let mut bench = door::demo();
    put(&mut bench, "source", "format", Tree::from("pam4"));
    bencher.bench(|| door::ask("sensitivity", black_box(&bench), &Tree::Null));
}

/// The bias with its four curves, of which one is a search for the best gain at each symbol rate, and its table.
#[divan::bench]
fn avalanche_bias(bencher: Bencher) {
    let bench = door::demo();
    bencher.bench(|| door::ask("avalanche_bias", black_box(&bench), &Tree::Null));
}

/// The same with four levels.
#[divan::bench]
fn avalanche_bias_four_levels(bencher: Bencher) {
    let mut bench = door::demo();
    put(&mut bench, "source", "format", Tree::from("pam4"));
    bencher.bench(|| door::ask("avalanche_bias", black_box(&bench), &Tree::Null));
}

/// The same receiver as the first with its electrons counted: all curves, distributions, best gain.
#[divan::bench]
fn sensitivity_counted(bencher: Bencher) {
    let mut bench = door::demo();
    put(&mut bench, "decision", "statistics", Tree::from("exact"));
    bencher.bench(|| door::ask("sensitivity", black_box(&bench), &Tree::Null));
}

/// Only the figures of it, as at each point of a sweep.
#[divan::bench]
fn sensitivity_counted_figures(bencher: Bencher) {
    let mut bench = door::demo();
    put(&mut bench, "decision", "statistics", Tree::from("exact"));
    let bench = Bench::from_tree(&bench).expect("the demonstration bench is good");
    let question = QUESTIONS.iter().find(|question| question.name == "sensitivity").expect("it is there");
    bencher.bench(|| (question.numbers)(black_box(&bench)));
}

/// A reading with its curve and table.
#[divan::bench]
fn reading(bencher: Bencher) {
    let bench = door::demo();
    bencher.bench(|| door::ask("reading", black_box(&bench), &Tree::Null));
}

/// Ten thousand rows of a certificate, as text.
#[divan::bench]
fn certificate_of_10_000_rows(bencher: Bencher) {
    let mut text = "Wavelength (nm);Responsivity (A/W);U (k=2) (%)\n".to_owned();
    for row in 0..10_000 {
        let wavelength_nm = 800.0 + f64::from(row) * 0.08;
        text += &format!("{wavelength_nm:.2};{:.5};1.1\n", 0.5 + wavelength_nm * 3e-4);
    }
    bencher.bench(|| door::read_certificate(black_box(&text), &Tree::Null));
}

/// A million rows of a log, 44 MB: read, corrected and summed up; then written as well.
#[divan::bench(args = [false, true], sample_count = 10)]
fn log_of_1_000_000_rows(bencher: Bencher, written: bool) {
    let mut text = "Time;Wavelength (nm);Power (dBm);Range;Status\n".to_owned();
    for row in 0..1_000_000_u32 {
        let (second, level) = (row / 10, -20.0 - f64::from(row.wrapping_mul(2_654_435_761) >> 22) * 1e-4);
        let (day, hour, minute) = (1 + second / 86_400, second / 3600 % 24, second / 60 % 60);
        text += &format!(
            "2026-12-{day:02}T{hour:02}:{minute:02}:{:02}.{}00;1310;{level:.3};-20;OK\n",
            second % 60,
            row % 10
        );
    }
    let mut options = Tree::Map(vec![("bench".to_owned(), door::demo())]);
    if let (true, Tree::Map(entries)) = (written, &mut options) {
        entries.push(("corrected".to_owned(), Tree::Map(Vec::new())));
    }
    bencher.bench(|| door::read_log(black_box(&text), &options));
}

/// What happens at each keystroke before the question: all typed texts are read.
#[divan::bench]
fn understanding_a_typed_bench(bencher: Bencher) {
    let bench = door::demo();
    bencher.bench(|| door::understand(black_box(&bench), "auto"));
}

/// Trials in a run, as in the page.
const TRIALS: usize = 1_000_000;

fn trials(bencher: Bencher, question: &str) {
    let options = Tree::Map(vec![("trials".to_owned(), Tree::Bool(true))]);
    bencher.bench(|| {
        let mut run = door::Run::begin(question, black_box(&door::demo()), &options).ok()?;
        run.advance(TRIALS);
        Some(run.finish())
    });
}

/// A million trials of the demonstration bench's reading, intervals and histogram included.
#[divan::bench(sample_count = 10, sample_size = 1)]
fn a_million_trials_of_the_reading(bencher: Bencher) {
    trials(bencher, "reading");
}

/// A million trials of its sensitivity.
#[divan::bench(sample_count = 1, sample_size = 1)]
fn a_million_trials_of_the_sensitivity(bencher: Bencher) {
    trials(bencher, "sensitivity");
}

/// A device of 200 measured currents, beyond breakdown behind its series resistance: the slowest of the fits.
#[divan::bench]
fn device_of_200_points(bencher: Bencher) {
    let mut points = Vec::new();
    let point = |bias_v: f64, light_a: f64| {
        Tree::Map(vec![
            ("bias_v".to_owned(), bias_v.into()),
            ("dark_a".to_owned(), 1e-9.into()),
            ("light_a".to_owned(), light_a.into()),
        ])
    };
    for index in 0..200 {
        let bias_v = 6.0 + 0.254 * f64::from(index);
        // Half a per cent to and fro, as an instrument's last digits.
        let ripple = 1.0 + 0.005 * f64::from((index * 7) % 5 - 2) / 2.0;
        let junction = Junction::Miller(Miller { breakdown_v: 56.4, exponent: 2.6 });
        let biased = Biased { junction, series_resistance_ohm: 1e4 };
        let currents = Currents { multiplied_a: 1e-6, beside_a: 1e-9 };
        let gain = biased.operation(bias_v, &currents).map_or(1.0, |found| found.gain);
        points.push(point(bias_v, ripple * 1e-6 * gain + 1e-9));
    }
    let table = |points| Tree::Map(vec![("points".to_owned(), Tree::List(points))]);
    let measurements = Tree::Map(vec![("iv".to_owned(), table(points))]);
    let bench = Tree::Map(vec![("measurements".to_owned(), measurements)]);
    assert!(door::ask("device_fit", &bench, &Tree::Null).is_ok());
    bencher.bench(|| door::ask("device_fit", black_box(&bench), &Tree::Null));
}

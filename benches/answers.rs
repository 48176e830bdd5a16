//! How long an answer takes: `cargo bench`. The goal in the page is a display frame, 16 ms, for everything.

use divan::{Bencher, black_box};
use leastlight::bench::Bench;
use leastlight::door;
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

/// What happens at each keystroke before the question: all typed texts are read.
#[divan::bench]
fn understanding_a_typed_bench(bencher: Bencher) {
    let bench = door::demo();
    bencher.bench(|| door::understand(black_box(&bench), "auto"));
}

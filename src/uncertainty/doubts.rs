//! From the doubts that stand on a bench to inputs of a model, and back into the bench's places in each trial.

use super::asked::OtherMean;
use super::input::{Correlations, Input};
use crate::bench::Bench;
use crate::bench::field::{Field, field, when_absent};
use crate::bench::uncertainty::{Amount, UncertainInput, Uncertainty};
use crate::fault::{Code, Fault, Faults};
use crate::physics::decibel::{dbm_from_watt, ratio_from_db, watt_from_dbm};
use crate::questions::prepared::{CertificateDoubt, Prepared};
use crate::statistics::shape::Shape;
use crate::statistics::transfer::mean_and_deviation;
use crate::tree::Tree;

/// Per cent of a power is so many dB, to first order: 10/ln 10.
const DB_PER_UNIT: f64 = 4.342_944_819_032_518;

/// A doubt of one number of the bench, ready to be worked with.
#[derive(Debug, Clone)]
pub struct Doubt {
    /// The number.
    pub field: &'static Field,
    /// Which of the stated doubts it is, counted from 0.
    pub stated: usize,
    /// What it is called in the budget.
    pub name: String,
    /// Its estimate, in its own unit.
    pub estimate: f64,
    /// How a deviation moves it.
    scale: Scale,
    /// The input of the model, in the unit of the deviation.
    pub input: Input,
}

/// In what a deviation is counted.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Scale {
    /// In the unit of the number.
    Own,
    /// As a share of the value.
    Relative,
    /// As a share of the power behind a level.
    RelativeLevel,
    /// In dB, for a number that is not.
    Decibel,
}

impl Doubt {
    /// Change of the number, in its own unit, with a small deviation.
    pub fn own_per_deviation(&self) -> f64 {
        match self.scale {
            Scale::Own => 1.0,
            Scale::Relative => self.estimate.abs(),
            Scale::RelativeLevel => DB_PER_UNIT,
            Scale::Decibel => self.estimate.abs() / DB_PER_UNIT,
        }
    }
}

/// All doubts of a question.
#[derive(Debug, Clone)]
pub struct Doubts {
    /// Those of numbers, in the order in which they stand on the bench.
    pub numbers: Vec<Doubt>,
    /// That of the meter's certificate.
    pub certificate: Option<CertificateDoubt>,
    /// Correlations of all inputs of the model, those of the certificate last.
    pub correlations: Correlations,
}

impl Doubts {
    /// Reads the doubts of a bench; `at` is where they stand, for faults.
    ///
    /// * `bench` – takes the mean of repeated readings where a number has no value of its own
    /// * `concerns` – which pointers matter to the question; others are left out
    pub fn new(
        stated: &Uncertainty,
        at: &str,
        bench: &mut Bench,
        concerns: impl Fn(&str) -> bool,
        certificate: Option<CertificateDoubt>,
    ) -> Result<Doubts, Faults> {
        let mut faults = Faults::new();
        let mut numbers = Vec::new();
        let mut place_of = vec![None; stated.inputs.len()];
        for (index, input) in stated.inputs.iter().enumerate().filter(|(_, input)| concerns(&input.pointer)) {
            match doubt(input, index, &format!("{at}/inputs/{index}"), bench) {
                Ok(doubt) => {
                    place_of[index] = Some(numbers.len());
                    numbers.push(doubt);
                }
                Err(fault) => faults.push(fault),
            }
        }
        let pairs: Vec<(usize, usize, f64)> = stated
            .correlations
            .iter()
            .filter_map(|&(i, j, r)| Some((place_of.get(i).copied()??, place_of.get(j).copied()??, r)))
            .collect();
        let size = numbers.len() + certificate.as_ref().map_or(0, certificate_inputs);
        let correlations = Correlations::new(size, &pairs);
        if correlations.is_none() {
            let sentence =
                "These correlations contradict each other: no three quantities can hang together like this.";
            faults.push(Fault::new(&format!("{at}/correlations"), Code::Conflict, Tree::Null, sentence));
        }
        match correlations {
            Some(correlations) if faults.is_empty() => Ok(Doubts { numbers, certificate, correlations }),
            _ => Err(faults),
        }
    }

    /// The inputs of the model: the numbers, then the scale of the certificate, then its points.
    pub fn inputs(&self) -> Vec<Input> {
        let unit =
            Input { standard: 1.0, shape: Shape::Normal, degrees_of_freedom: f64::INFINITY, step: 1.0 };
        let points = self.certificate.as_ref().map_or(0, certificate_inputs);
        self.numbers.iter().map(|doubt| doubt.input).chain((0..points).map(|_| unit)).collect()
    }

    /// A number of an answer as a function of the deviations of all inputs.
    pub fn model(&self, bench: &Bench, prepared: Prepared) -> impl FnMut(&[f64]) -> Option<f64> + use<> {
        let mut bench = bench.clone();
        let moved = self.moved();
        let certificate = self.certificate.clone();
        let mut shares = vec![0.0; certificate.as_ref().map_or(0, |certificate| certificate.points)];
        let count = self.numbers.len();
        move |deviations: &[f64]| {
            for number in &moved {
                *(number.field.place)(&mut bench)? = Some(number.value(deviations)?);
            }
            if let Some(certificate) = &certificate {
                spread(certificate, deviations.get(count..)?, &mut shares)?;
            }
            (prepared.value)(&bench, &shares)
        }
    }

    /// The numbers that are moved, each once, however many doubts concern it.
    fn moved(&self) -> Vec<Moved> {
        let mut moved: Vec<Moved> = Vec::new();
        for (index, doubt) in self.numbers.iter().enumerate() {
            let entry = (index, doubt.scale);
            match moved.iter_mut().find(|number| number.field.pointer == doubt.field.pointer) {
                Some(number) => number.by.push(entry),
                None => {
                    moved.push(Moved { field: doubt.field, estimate: doubt.estimate, by: vec![entry] });
                }
            }
        }
        moved
    }
}

/// A number of the bench and the inputs that move it.
struct Moved {
    field: &'static Field,
    estimate: f64,
    by: Vec<(usize, Scale)>,
}

impl Moved {
    /// The estimate moved by all deviations, in any order; nothing where that leaves what the number can be.
    ///
    /// ```text
    /// (x + Σ own) · Π (1 + relative) · 10^(Σ dB/10),   of a level x + Σ own + 10 lg Π (1 + relative)
    /// ```
    fn value(&self, deviations: &[f64]) -> Option<f64> {
        let (mut own, mut factor, mut power_share, mut decibel) = (0.0, 1.0, 0.0, 0.0);
        for (index, scale) in &self.by {
            let deviation = deviations.get(*index)?;
            match scale {
                Scale::Own => own += deviation,
                Scale::Relative => factor *= 1.0 + deviation,
                // A power below 0 is none, and two such factors must not make one.
                Scale::RelativeLevel if *deviation <= -1.0 => return None,
                Scale::RelativeLevel => power_share += deviation + power_share * deviation,
                Scale::Decibel => decibel += deviation,
            }
        }
        let mut value = (self.estimate + own) * factor;
        if power_share != 0.0 {
            value += DB_PER_UNIT * libm::log1p(power_share);
        }
        if decibel != 0.0 {
            value *= ratio_from_db(decibel);
        }
        self.field.limits.hold(value).then_some(value)
    }
}

/// How many inputs of the model a certificate makes: one for what its points share, one for each point's own part.
fn certificate_inputs(certificate: &CertificateDoubt) -> usize {
    let common = usize::from(certificate.correlation > 0.0);
    let own = if certificate.correlation < 1.0 { certificate.relative_standard.len() } else { 0 };
    common + own
}

/// The share by which each point of a certificate is truly larger than certified.
///
/// ```text
/// dᵢ = uᵢ (√r z + √(1−r) zᵢ)        so that any two hang together by r
/// ```
fn spread(certificate: &CertificateDoubt, deviations: &[f64], shares: &mut [f64]) -> Option<()> {
    let r = certificate.correlation;
    let (common, own) = match (r > 0.0, r < 1.0) {
        (true, _) => (deviations.first()? * r.sqrt(), deviations.get(1..)?),
        (false, _) => (0.0, deviations),
    };
    for (place, (index, standard)) in certificate.relative_standard.iter().enumerate() {
        let alone = if r < 1.0 { own.get(place)? * (1.0 - r).sqrt() } else { 0.0 };
        *shares.get_mut(*index)? = standard * (common + alone);
    }
    Some(())
}

fn doubt(stated: &UncertainInput, index: usize, at: &str, bench: &mut Bench) -> Result<Doubt, Fault> {
    let Some(field) = field(&stated.pointer) else {
        let sentence = "A doubt must concern one of the bench's numbers.";
        let pointer = format!("{at}/pointer");
        return Err(Fault::new(&pointer, Code::Range, Tree::from(stated.pointer.as_str()), sentence));
    };
    let is_level = matches!(field.kind.unit, "dBm" | "dB" | "dB/Hz");
    let scale = match (stated.relative, stated.decibel, is_level) {
        (true, _, true) => Scale::RelativeLevel,
        (true, _, false) => Scale::Relative,
        (false, true, false) => Scale::Decibel,
        _ => Scale::Own,
    };
    let repeats = match &stated.amount {
        Amount::Readings { readings } => Some(repeated(readings, field)),
        _ => None,
    };
    let Some(place) = (field.place)(bench) else {
        let sentence = format!("This bench has no place for {}: its part is not there.", field.name);
        let pointer = format!("{at}/pointer");
        return Err(Fault::new(&pointer, Code::Conflict, Tree::from(stated.pointer.as_str()), &sentence));
    };
    let mean = repeats.as_ref().map(|repeats| repeats.mean);
    let Some(estimate) = place.or(mean).or(when_absent(field.pointer)) else {
        let sentence = format!("A doubt needs something to be in doubt: {} has no value.", field.name);
        return Err(Fault::missing(field.pointer, &sentence));
    };
    *place = Some(estimate);
    let times = stated.times.unwrap_or(1.0);
    let (standard, scale, freedom) = match (&stated.amount, repeats) {
        (Amount::Standard { standard }, _) => (*standard, scale, None),
        (Amount::Expanded { expanded, coverage_factor }, _) => (expanded / coverage_factor, scale, None),
        (Amount::HalfWidth { half_width }, _) => {
            // The reader has refused a half-width of a distribution without ends.
            (half_width / stated.distribution.half_width_factor().unwrap_or(1.0), scale, None)
        }
        (Amount::Readings { readings }, Some(repeats)) => {
            let scale = if is_power_level(field) { Scale::RelativeLevel } else { Scale::Own };
            (repeats.standard, scale, Some(readings.len() as f64 - 1.0))
        }
        (Amount::Readings { .. }, None) => (0.0, scale, None),
    };
    let standard = standard * times;
    if matches!(scale, Scale::Relative | Scale::Decibel) && estimate == 0.0 {
        let sentence = format!(
            "{} is 0, and a share of 0 is 0: state its doubt in its own unit.",
            field.name.replacen("the ", "The ", 1)
        );
        return Err(Fault::new(at, Code::Conflict, Tree::Number(standard), &sentence));
    }
    let smooth_over = match scale {
        Scale::Own if is_level => 1e-2,
        Scale::Own => 1e-3 * estimate.abs(),
        Scale::Relative | Scale::RelativeLevel => 1e-3,
        Scale::Decibel => 1e-2,
    };
    let step = standard.max(smooth_over);
    Ok(Doubt {
        field,
        stated: index,
        name: if stated.name.is_empty() { field.name.to_owned() } else { stated.name.clone() },
        estimate,
        scale,
        input: Input {
            standard,
            shape: stated.distribution,
            degrees_of_freedom: stated.degrees_of_freedom.or(freedom).unwrap_or(f64::INFINITY),
            step: if step > 0.0 { step } else { 1e-12 },
        },
    })
}

struct Repeats {
    mean: f64,
    /// Of the mean: s/√n.
    standard: f64,
}

/// Mean of repeated readings and its standard uncertainty; levels are averaged as powers, and their doubt is a share.
///
/// Source: JCGM 100:2008, 4.2.
fn repeated(readings: &[f64], field: &Field) -> Repeats {
    let level = is_power_level(field);
    let linear: Vec<f64> =
        readings.iter().map(|reading| if level { watt_from_dbm(*reading) } else { *reading }).collect();
    // The reader has refused fewer than two.
    let (mean, deviation) = mean_and_deviation(&linear).unwrap_or((f64::NAN, f64::NAN));
    let standard = deviation / (readings.len() as f64).sqrt();
    match level {
        true => Repeats { mean: dbm_from_watt(mean), standard: standard / mean },
        false => Repeats { mean, standard },
    }
}

fn is_power_level(field: &Field) -> bool {
    field.kind.unit == "dBm"
}

/// Where the mean of repeated readings differs from the number that stands on the bench.
pub fn other_means(
    stated: &Uncertainty,
    bench: &mut Bench,
    concerns: impl Fn(&str) -> bool,
) -> Vec<OtherMean> {
    let mut beside = |input: &UncertainInput| {
        let field = field(&input.pointer).filter(|field| concerns(field.pointer))?;
        let Amount::Readings { readings } = &input.amount else { return None };
        let value = (*(field.place)(bench)?)?;
        let mean = repeated(readings, field).mean;
        let other = (mean - value).abs() > 1e-9 * value.abs();
        other.then_some(OtherMean { pointer: field.pointer, mean, value })
    };
    stated.inputs.iter().filter_map(&mut beside).collect()
}

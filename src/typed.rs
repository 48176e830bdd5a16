//! A bench as it was typed: texts for numbers, pasted cells for tables.

use crate::bench::Bench;
use crate::bench::avalanche::ExcessNoise;
use crate::bench::bias::GainLaw;
use crate::bench::detector::Responsivity;
use crate::bench::field::field;
use crate::bench::reader::Reader;
use crate::bench::uncertainty::{Amount, UncertainInput};
use crate::fault::{Fault, Faults};
use crate::quantity::kind;
use crate::quantity::number::DecimalMark;
use crate::quantity::write;
use crate::record::{
    self, BANDWIDTHS, BREAKDOWNS, CURRENTS, Choices, MeasuredKind, NOISES, Reading, read_certificate,
    read_gains, read_measured, read_noise_factors, read_responsivity, read_spectrum, spectrum_layout,
    write_certificate_points, write_gain_points, write_measurements, write_noise_factor_points,
    write_responsivity_points, write_spectrum_points,
};
use crate::tree::Tree;
use serde::Serialize;
use std::collections::BTreeMap;

/// What was made of a typed bench.
#[derive(Debug, Serialize)]
pub struct Understanding {
    /// The bench; what could not be read is absent from it.
    pub bench: Bench,
    /// How each typed number was read, by pointer.
    pub understood: BTreeMap<String, String>,
    /// How each table of pasted cells was read, by pointer.
    pub tables: BTreeMap<String, Reading>,
    /// Everything that is wrong.
    pub faults: Faults,
}

/// Reads a typed bench.
pub fn understand(typed: &Tree, mark: DecimalMark) -> Understanding {
    let mut typed = typed.clone();
    let mut tables = BTreeMap::new();
    let mut faults = Faults::new();
    for place in PLACES {
        let Some(part) = at_mut(&mut typed, place.pointer) else { continue };
        let Some(table) = part.get("table").cloned() else { continue };
        match read_table(&table, place) {
            Ok(Some(pasted)) => {
                put(pasted.entries, place.only_points, part);
                tables.insert(place.pointer.to_owned(), pasted.reading);
            }
            Ok(None) => *part = Tree::Null,
            Err(found) => {
                *part = Tree::Null;
                faults.extend(found);
                tables.extend(layout(&table, place).map(|reading| (place.pointer.to_owned(), reading)));
            }
        }
    }
    let mut reader = Reader::typed(mark);
    let bench = Bench::read(&typed, &mut reader);
    faults.extend(reader.faults);
    Understanding { bench, understood: reader.understood.into_iter().collect(), tables, faults }
}

/// A table that was read: what the bench keeps of it, and how its text was read.
struct Pasted {
    /// Named values; the points are among them.
    entries: Vec<(&'static str, Tree)>,
    reading: Reading,
}

/// Where a table may be given as text.
struct Place {
    pointer: &'static str,
    read: fn(&str, &Choices) -> Result<Pasted, Faults>,
    /// How a text is understood that cannot be read, where a choice of columns and units may mend it.
    layout: fn(&str, &Choices) -> Option<Reading>,
    /// Whether the bench keeps the bare list of points there, with nothing beside it.
    only_points: bool,
}

const PLACES: &[Place] = &[
    Place { pointer: "/source/spectrum", read: spectrum, layout: spectrum_layout, only_points: false },
    Place { pointer: "/detector/responsivity", read: responsivity, layout: |_, _| None, only_points: false },
    Place {
        pointer: "/detector/avalanche/excess_noise",
        read: noise_factors,
        layout: |_, _| None,
        only_points: false,
    },
    Place { pointer: "/detector/avalanche/bias", read: gains, layout: |_, _| None, only_points: false },
    Place {
        pointer: "/measurements/iv",
        read: |t, c| measured(t, c, &CURRENTS),
        layout: |_, _| None,
        only_points: false,
    },
    Place {
        pointer: "/measurements/noise",
        read: |t, c| measured(t, c, &NOISES),
        layout: |_, _| None,
        only_points: false,
    },
    Place {
        pointer: "/measurements/bandwidth",
        read: |t, c| measured(t, c, &BANDWIDTHS),
        layout: |_, _| None,
        only_points: false,
    },
    Place {
        pointer: "/measurements/breakdown",
        read: |t, c| measured(t, c, &BREAKDOWNS),
        layout: |_, _| None,
        only_points: false,
    },
    Place { pointer: "/meter/typical_curve", read: responsivity, layout: |_, _| None, only_points: true },
    Place { pointer: "/meter/certificate", read: certificate, layout: |_, _| None, only_points: false },
];

fn responsivity(text: &str, choices: &Choices) -> Result<Pasted, Faults> {
    let table = read_responsivity(text, choices)?;
    let points = table.points.iter();
    let rows = points.map(|point| row(&[("wavelength_nm", point.wavelength_nm), ("a_per_w", point.a_per_w)]));
    Ok(Pasted { entries: vec![("points", Tree::List(rows.collect()))], reading: table.reading })
}

fn spectrum(text: &str, choices: &Choices) -> Result<Pasted, Faults> {
    let table = read_spectrum(text, choices)?;
    let points = table.points.iter();
    let rows = points.map(|point| row(&[("wavelength_nm", point.wavelength_nm), ("value", point.value)]));
    let entries = vec![("unit", Tree::from(table.unit.word())), ("points", Tree::List(rows.collect()))];
    Ok(Pasted { entries, reading: table.reading })
}

fn gains(text: &str, choices: &Choices) -> Result<Pasted, Faults> {
    let table = read_gains(text, choices)?;
    let rows = table.points.iter().map(|point| row(&[("bias_v", point.bias_v), ("gain", point.gain)]));
    Ok(Pasted { entries: vec![("points", Tree::List(rows.collect()))], reading: table.reading })
}

fn noise_factors(text: &str, choices: &Choices) -> Result<Pasted, Faults> {
    let table = read_noise_factors(text, choices)?;
    let rows = table.points.iter().map(|point| row(&[("gain", point.gain), ("factor", point.factor)]));
    Ok(Pasted { entries: vec![("points", Tree::List(rows.collect()))], reading: table.reading })
}

fn measured(text: &str, choices: &Choices, what: &MeasuredKind) -> Result<Pasted, Faults> {
    let table = read_measured(text, choices, what)?;
    let rows = table.points.iter().map(|point| row(point));
    Ok(Pasted { entries: vec![("points", Tree::List(rows.collect()))], reading: table.reading })
}

fn certificate(text: &str, choices: &Choices) -> Result<Pasted, Faults> {
    let table = read_certificate(text, choices)?;
    let rows = table.points.iter().map(|point| {
        let mut cells = vec![("wavelength_nm", point.wavelength_nm), ("value", point.value)];
        cells.extend(point.expanded_percent.map(|percent| ("expanded_percent", percent)));
        row(&cells)
    });
    let points = Tree::List(rows.collect());
    let mut entries = vec![("form", Tree::from(table.form.word())), ("points", points)];
    entries.extend(table.coverage_factor.map(|k| ("coverage_factor", Tree::Number(k))));
    Ok(Pasted { entries, reading: table.reading })
}

fn row(cells: &[(&str, f64)]) -> Tree {
    Tree::Map(cells.iter().map(|(key, value)| ((*key).to_owned(), Tree::Number(*value))).collect())
}

/// Reads `{ text, choices }`; nothing where the text is blank.
fn read_table(table: &Tree, place: &Place) -> Result<Option<Pasted>, Faults> {
    let text = match table.get("text") {
        Some(Tree::Text(text)) if !text.trim().is_empty() => text,
        _ => return Ok(None),
    };
    let at_choices = format!("{}/table/choices", place.pointer);
    let choices = Choices::from_tree(table.get("choices").unwrap_or(&Tree::Null), &at_choices)?;
    // The text stands for the points: their field owns whatever is wrong in it.
    let owned =
        |fault: Fault| Fault { pointer: format!("{}/points{}", place.pointer, fault.pointer), ..fault };
    (place.read)(text, &choices).map(Some).map_err(|faults| faults.into_iter().map(owned).collect())
}

/// How a table that cannot be read is understood so far.
fn layout(table: &Tree, place: &Place) -> Option<Reading> {
    let Some(Tree::Text(text)) = table.get("text") else { return None };
    // Choices that are none are faults already; the text is shown as it is understood without them.
    let choices = Choices::from_tree(table.get("choices").unwrap_or(&Tree::Null), "").unwrap_or_default();
    (place.layout)(text, &choices)
}

/// Puts what was read in the place of the text. What a person typed beside the text, such as k, goes before what
/// the text says.
fn put(pasted: Vec<(&'static str, Tree)>, only_points: bool, into: &mut Tree) {
    if only_points {
        *into = pasted.into_iter().next().map_or(Tree::Null, |(_, points)| points);
        return;
    }
    let Tree::Map(entries) = into else { return };
    entries.retain(|(key, _)| key != "table");
    for (key, value) in pasted {
        let blank = |tree: &Tree| match tree {
            Tree::Text(text) => text.trim().is_empty(),
            other => other.is_null(),
        };
        match entries.iter_mut().find(|(known, _)| known == key) {
            Some((_, typed)) if !blank(typed) => {}
            Some((_, typed)) => *typed = value,
            None => entries.push((key.to_owned(), value)),
        }
    }
}

/// The table at a pointer of a bench as text; blank where the bench has none.
pub fn write_table(pointer: &str, bench: &Bench, mark: DecimalMark) -> String {
    let mark = match mark {
        DecimalMark::Comma => record::DecimalMark::Comma,
        _ => record::DecimalMark::Point,
    };
    let meter = bench.meter.as_ref();
    let detector = bench.detector.as_ref().and_then(|detector| detector.responsivity.as_ref());
    let avalanche = bench.detector.as_ref().and_then(|detector| detector.avalanche.as_ref());
    let spectrum = bench.source.as_ref().and_then(|source| source.spectrum.as_ref());
    match (pointer, detector) {
        ("/source/spectrum", _) => spectrum.map_or_else(String::new, |spectrum| {
            write_spectrum_points(spectrum.unit, &spectrum.points, mark)
        }),
        ("/detector/responsivity", Some(Responsivity::Table { points })) => {
            write_responsivity_points(points, mark)
        }
        ("/detector/avalanche/excess_noise", _) => match avalanche.map(|part| &part.excess_noise) {
            Some(ExcessNoise::Table { points }) => write_noise_factor_points(points, mark),
            _ => String::new(),
        },
        ("/detector/avalanche/bias", _) => {
            match avalanche.and_then(|part| part.bias.as_ref()).map(|bias| &bias.gain_law) {
                Some(GainLaw::Table { points }) => write_gain_points(points, mark),
                _ => String::new(),
            }
        }
        (pointer, _) if pointer.starts_with("/measurements/") => {
            bench.measurements.as_ref().map_or_else(String::new, |all| write_measurements(pointer, all, mark))
        }
        ("/meter/typical_curve", _) => meter
            .and_then(|meter| meter.typical_curve.as_ref())
            .map_or_else(String::new, |points| write_responsivity_points(points, mark)),
        ("/meter/certificate", _) => {
            meter.and_then(|meter| meter.certificate.as_ref()).map_or_else(String::new, |certificate| {
                let k = certificate.coverage_factor;
                write_certificate_points(certificate.form, k, &certificate.points, mark)
            })
        }
        _ => String::new(),
    }
}

/// The doubts of a bench as they would be typed: texts for amounts, with their units; nothing where there are none.
pub fn write_doubts(bench: &Bench, mark: DecimalMark) -> Tree {
    let Some(stated) = &bench.uncertainty else { return Tree::Null };
    let marked =
        |text: String| Tree::Text(if mark == DecimalMark::Comma { text.replace('.', ",") } else { text });
    let number = |value: f64| marked(write::plain(value));
    let entry = |key: &str, value: Tree| (key.to_owned(), value);
    let input = |input: &UncertainInput| {
        let amount = |value: f64| marked(amount_text(input, value));
        let mut entries = vec![
            entry("pointer", Tree::from(input.pointer.as_str())),
            entry("name", Tree::from(input.name.as_str())),
        ];
        match &input.amount {
            Amount::Standard { standard } => entries.push(entry("standard", amount(*standard))),
            Amount::HalfWidth { half_width } => entries.push(entry("half_width", amount(*half_width))),
            Amount::Expanded { expanded, coverage_factor } => {
                entries.push(entry("expanded", amount(*expanded)));
                entries.push(entry("coverage_factor", number(*coverage_factor)));
            }
            Amount::Readings { readings } => {
                let kind = field(&input.pointer).map(|field| field.kind);
                let text = |value: &f64| {
                    kind.map_or_else(|| write::plain(*value), |kind| write::exact(*value, kind))
                };
                entries.push(entry(
                    "readings",
                    marked(readings.iter().map(text).collect::<Vec<_>>().join("\n")),
                ));
            }
        }
        entries.push(entry("distribution", Tree::from(input.distribution.word())));
        entries.extend(input.times.map(|times| entry("times", number(times))));
        entries.extend(input.degrees_of_freedom.map(|freedom| entry("degrees_of_freedom", number(freedom))));
        Tree::Map(entries)
    };
    let correlations = stated
        .correlations
        .iter()
        .map(|(i, j, r)| Tree::List(vec![Tree::Number(*i as f64), Tree::Number(*j as f64), number(*r)]));
    let mut entries = vec![
        entry("of", stated.of.as_deref().map_or(Tree::Null, Tree::from)),
        entry("inputs", Tree::List(stated.inputs.iter().map(input).collect())),
        entry("correlations", Tree::List(correlations.collect())),
        entry("coverage_probability", Tree::Number(stated.coverage_probability)),
    ];
    entries.extend(stated.monte_carlo.map(|run| {
        let run = vec![
            entry("trials", Tree::Text(run.trials.to_string())),
            entry("seed", Tree::Text(run.seed.to_string())),
            entry("adaptive", Tree::Bool(run.adaptive)),
        ];
        entry("monte_carlo", Tree::Map(run))
    }));
    Tree::Map(entries)
}

fn amount_text(input: &UncertainInput, value: f64) -> String {
    match field(&input.pointer) {
        _ if input.relative => write::percent(value),
        _ if input.decibel => write::exact(value, &kind::DECIBEL),
        Some(field) => write::exact(value, kind::difference(field.kind)),
        None => write::plain(value),
    }
}

fn at_mut<'t>(tree: &'t mut Tree, pointer: &str) -> Option<&'t mut Tree> {
    pointer.split('/').skip(1).try_fold(tree, |tree, key| tree.get_mut(key))
}

//! The powers of a log over time.

use super::envelope::Column;
use crate::physics::decibel::dbm_from_watt;
use crate::questions::curve::{Axis, Band, Banded, Curve, Line, Scale};

/// A pause of the log this many times as long as a usual column is a gap.
const LONG: f64 = 3.0;

/// How the horizontal axis counts.
struct Along {
    label: &'static str,
    unit: &'static str,
    /// The place of a column.
    at: fn(&Column) -> Option<f64>,
    start: f64,
    scale: f64,
}

/// The curve; nothing without powers. `as_level` asks for dBm, which is obeyed where all powers are above 0 W.
pub(super) fn over_time(
    columns: &[Column],
    corrected: bool,
    by_time: bool,
    as_level: bool,
) -> Option<Banded> {
    let seen: Vec<(usize, &Column, (f64, f64))> = columns
        .iter()
        .enumerate()
        .filter_map(|(index, column)| Some((index, column, column.ends?)))
        .collect();
    let least = seen.iter().map(|(.., (low, _))| *low).reduce(f64::min)?;
    let greatest = seen.iter().map(|(.., (_, high))| *high).reduce(f64::max)?;
    let along = along(columns, by_time);
    let (unit, of_watt) = heights(as_level && least > 0.0, least.abs().max(greatest.abs()));
    let (mut x, mut low, mut high, mut breaks) = (Vec::new(), Vec::new(), Vec::new(), Vec::new());
    let pause = LONG * period(columns, by_time);
    let mut before: Option<(usize, &Column)> = None;
    for (index, column, ends) in seen {
        let Some(at) = (along.at)(column) else { continue };
        if let Some((last, earlier)) = before
            && (index != last + 1 || (by_time && apart(earlier, column).is_some_and(|gap| gap > pause)))
        {
            breaks.push(x.len());
        }
        before = Some((index, column));
        x.push((at - along.start) / along.scale);
        low.push(of_watt(ends.0));
        high.push(of_watt(ends.1));
    }
    if x.is_empty() {
        return None;
    }
    let line = |name: &str, y| Line { name: name.to_owned(), x: x.clone(), y };
    let lines = vec![line("least", low), line("greatest", high)];
    let curve = Curve {
        name: if corrected { "log_corrected" } else { "log_as_read" },
        title: if corrected { "Corrected power" } else { "Power as read" },
        x: Axis { label: along.label, unit: along.unit, scale: Scale::Linear },
        y: Axis { label: "Power", unit, scale: Scale::Linear },
        lines,
        marks: Vec::new(),
    };
    Some(Banded { curve, band: Band { low: 0, high: 1, breaks } })
}

fn along(columns: &[Column], by_time: bool) -> Along {
    let first = columns.iter().find_map(|column| column.times).map_or(0.0, |(first, _)| first);
    let last = columns.iter().rev().find_map(|column| column.times).map_or(0.0, |(_, last)| last);
    if !by_time {
        let at = |column: &Column| Some((column.rows.0 + column.rows.1) as f64 / 2.0);
        return Along { label: "Row", unit: "", at, start: 0.0, scale: 1.0 };
    }
    let (unit, scale) = match last - first {
        span if span < 300.0 => ("s", 1.0),
        span if span < 3.0 * 3600.0 => ("min", 60.0),
        span if span < 3.0 * 86_400.0 => ("h", 3600.0),
        _ => ("d", 86_400.0),
    };
    let at = |column: &Column| column.times.map(|(first, last)| first + (last - first) / 2.0);
    Along { label: "Time after the first row", unit, at, start: first, scale }
}

/// The unit of the vertical axis and the step into it.
fn heights(as_level: bool, greatest_w: f64) -> (&'static str, fn(f64) -> f64) {
    match greatest_w {
        _ if as_level => ("dBm", dbm_from_watt),
        w if w >= 1.0 => ("W", |w| w),
        w if w >= 1e-3 => ("mW", |w| w * 1e3),
        w if w >= 1e-6 => ("µW", |w| w * 1e6),
        w if w >= 1e-9 => ("nW", |w| w * 1e9),
        _ => ("pW", |w| w * 1e12),
    }
}

/// Time between two columns.
fn apart(one: &Column, next: &Column) -> Option<f64> {
    Some(next.times?.0 - one.times?.1)
}

/// The usual time from the beginning of one column to that of the next.
fn period(columns: &[Column], by_time: bool) -> f64 {
    if !by_time {
        return f64::INFINITY;
    }
    let begin = |column: &Column| column.times.map(|(first, _)| first);
    let mut steps: Vec<f64> =
        columns.windows(2).filter_map(|pair| Some(begin(pair.get(1)?)? - begin(pair.first()?)?)).collect();
    steps.sort_by(f64::total_cmp);
    steps.get(steps.len() / 2).copied().unwrap_or(f64::INFINITY)
}

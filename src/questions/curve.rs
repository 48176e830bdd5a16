//! Curves to draw, with the points that matter on them.

use serde::Serialize;

/// A drawing with two axes.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Curve {
    /// What it is called in a script.
    pub name: &'static str,
    /// What stands above it.
    pub title: &'static str,
    /// The horizontal axis.
    pub x: Axis,
    /// The vertical axis.
    pub y: Axis,
    /// The lines.
    pub lines: Vec<Line>,
    /// The points and levels to point out.
    pub marks: Vec<Mark>,
}

/// A drawing in which two lines are the ends of what was seen, with all that lies between.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Banded {
    /// The drawing.
    #[serde(flatten)]
    pub curve: Curve,
    /// Which lines those are.
    pub band: Band,
}

/// Two lines over the same places that bound a filled area.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Band {
    /// The index of the lower line.
    pub low: usize,
    /// The index of the upper line.
    pub high: usize,
    /// The indices of places before which both lines are broken: nothing is known in between.
    pub breaks: Vec<usize>,
}

/// An axis.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Axis {
    /// What it counts.
    pub label: &'static str,
    /// In which unit.
    pub unit: &'static str,
    /// How it is divided.
    pub scale: Scale,
}

/// How an axis is divided.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum Scale {
    /// Evenly.
    Linear,
    /// By factors.
    Log,
}

/// A line: as many heights as places.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Line {
    /// What it shows.
    pub name: String,
    /// Places.
    pub x: Vec<f64>,
    /// Heights.
    pub y: Vec<f64>,
}

/// Something to point out.
#[derive(Debug, Clone, PartialEq, Serialize)]
#[serde(untagged)]
pub enum Mark {
    /// A level across the drawing.
    Level {
        /// What it is.
        name: String,
        /// `x` or `y`: the axis on which it stands.
        axis: &'static str,
        /// Where.
        at: f64,
    },
    /// Measured points: as many heights as places.
    Dots {
        /// What they are.
        name: String,
        /// Places.
        x: Vec<f64>,
        /// Heights.
        y: Vec<f64>,
    },
    /// A point.
    Point {
        /// What it is.
        name: String,
        /// Place.
        x: f64,
        /// Height.
        y: f64,
    },
}

/// `count` places from `from` to `to`, both included, evenly apart.
pub fn evenly(from: f64, to: f64, count: usize) -> impl Iterator<Item = f64> {
    let last = count.saturating_sub(1).max(1);
    // The ends are given back exactly, so that a table's ends are never a rounding outside of it.
    (0..count).map(move |index| match index {
        _ if index == last => to,
        _ => from + (to - from) * (index as f64 / last as f64),
    })
}

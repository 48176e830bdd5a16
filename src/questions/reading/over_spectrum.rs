//! The spectrum of the light, drawn over the responsivity that it meets.

use super::Given;
use super::light::{Light, NARROW_LINE_NM};
use crate::physics::spectrum::Spectrum;
use crate::questions::curve::{Axis, Curve, Line, Mark, Scale, evenly};

/// Points of a line; as many as a drawing can show.
const POINTS: usize = 401;

/// Both lines relative to their highest in the drawing, so that one axis holds them; nothing for a narrow line.
pub fn curve(given: &Given) -> Option<Curve> {
    let Light::Spread { centre_nm, spectrum, .. } = &given.light else { return None };
    if matches!(spectrum, Spectrum::Gaussian { fwhm_nm, .. } if *fwhm_nm <= NARROW_LINE_NM) {
        return None;
    }
    let (first, last) = spectrum.window_nm();
    // Half a window more on each side shows where the responsivity goes.
    let margin = 0.5 * (last - first);
    let (low, high) = given.certified.range_nm()?;
    let (from, to) = (low.max(first - margin), high.min(last + margin));
    let responsivity = evenly(from, to, POINTS)
        .filter_map(|nm| given.certified.responsivity(nm).map(|a_per_w| (nm, a_per_w)));
    let density = match spectrum {
        // Every point of a table is drawn as long as there are not too many, and the highest always.
        Spectrum::Table(points) => thinned(points),
        Spectrum::Gaussian { .. } => {
            evenly(first, last, POINTS).map(|nm| (nm, spectrum.density(nm))).collect()
        }
    };
    Some(Curve {
        name: "spectrum_over_responsivity",
        title: "The light over the responsivity",
        x: Axis { label: "Wavelength", unit: "nm", scale: Scale::Linear },
        y: Axis { label: "Relative to the highest, linear", unit: "", scale: Scale::Linear },
        lines: vec![relative("responsivity", responsivity.collect())?, relative("light", density)?],
        marks: vec![Mark::Level { name: "mean wavelength".to_owned(), axis: "x", at: *centre_nm }],
    })
}

fn relative(name: &str, points: Vec<(f64, f64)>) -> Option<Line> {
    let highest = points.iter().map(|point| point.1).fold(0.0, f64::max);
    let (x, y) = points.into_iter().map(|(x, y)| (x, y / highest)).unzip();
    (highest > 0.0).then(|| Line { name: name.to_owned(), x, y })
}

/// Of each run of neighbours the lowest and the highest, so that no peak is lost.
fn thinned(points: &[(f64, f64)]) -> Vec<(f64, f64)> {
    let run = points.len().div_ceil(POINTS).max(1);
    if run == 1 {
        return points.to_vec();
    }
    let extremes = |run: &[(f64, f64)]| {
        let lowest = run.iter().copied().min_by(|a, b| a.1.total_cmp(&b.1));
        let highest = run.iter().copied().max_by(|a, b| a.1.total_cmp(&b.1));
        let mut both: Vec<(f64, f64)> = lowest.into_iter().chain(highest).collect();
        both.sort_by(|a, b| a.0.total_cmp(&b.0));
        both.dedup();
        both
    };
    points.chunks(run).flat_map(extremes).collect()
}

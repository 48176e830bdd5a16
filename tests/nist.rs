//! Certified fits: the Statistical Reference Datasets for nonlinear regression of the National Institute of Standards and
//! Technology, through the fitter that the page uses, from both starts of each.
//!
//! The files in `tests/nist/` are as received; their headers say where from, and hold the certified values.
#![cfg(not(target_arch = "wasm32"))]

use leastlight::numeric::dual::Dual;
use leastlight::numeric::fit::{Bounds, Fit, Linear, fit, linear};
use std::path::Path;

/// A certified set: its header and its points.
struct Set {
    name: String,
    starts: [Vec<f64>; 2],
    certified: Vec<f64>,
    deviations: Vec<f64>,
    sum_of_squares: f64,
    residual_deviation: f64,
    points: Vec<(f64, f64)>,
}

fn read(path: &Path) -> Set {
    let text = std::fs::read_to_string(path).expect("a readable file");
    let name = path.file_stem().unwrap_or_default().to_string_lossy().replace("nist_strd_", "");
    let mut set = Set {
        name,
        starts: [Vec::new(), Vec::new()],
        certified: Vec::new(),
        deviations: Vec::new(),
        sum_of_squares: f64::NAN,
        residual_deviation: f64::NAN,
        points: Vec::new(),
    };
    let number = |text: &str| text.trim().parse::<f64>().unwrap_or_else(|_| panic!("{text:?} is no number"));
    for line in text.lines() {
        if let Some(rest) = line.strip_prefix("# b") {
            // "1: start1 500, start2 250, certified 2.39E+02, standard deviation 2.7E+00"
            let (_, values) = rest.split_once(':').expect("a parameter's line");
            let last = |part: &str| number(part.rsplit(' ').next().unwrap_or_default());
            let values: Vec<f64> = values.split(',').map(last).collect();
            let [one, two, certified, deviation] = values[..] else { panic!("{line}") };
            set.starts[0].push(one);
            set.starts[1].push(two);
            set.certified.push(certified);
            set.deviations.push(deviation);
        } else if let Some(rest) = line.strip_prefix("# residual sum of squares (certified):") {
            set.sum_of_squares = number(rest);
        } else if let Some(rest) = line.strip_prefix("# residual standard deviation (certified):") {
            set.residual_deviation = number(rest);
        } else if !line.starts_with('#') && line != "x,y" {
            let (x, y) = line.split_once(',').expect("two cells");
            set.points.push((number(x), number(y)));
        }
    }
    set
}

fn model<const N: usize>(
    points: &[(f64, f64)],
    of: fn(&[Dual<N>; N], f64) -> Dual<N>,
) -> impl Fn(&[f64]) -> Option<Linear> {
    move |parameters| linear::<N>(parameters, points.len(), |p, i| of(p, points[i].0) - points[i].1)
}

fn saturating(p: &[Dual<2>; 2], x: f64) -> Dual<2> {
    p[0] * (1.0 - (-(p[1] * x)).exp())
}

fn cubic_over_cubic(p: &[Dual<7>; 7], x: f64) -> Dual<7> {
    (p[0] + p[1] * x + p[2] * (x * x) + p[3] * (x * x * x))
        / (p[4] * x + p[5] * (x * x) + p[6] * (x * x * x) + 1.0)
}

fn solved(set: &Set, start: &[f64]) -> Fit {
    let points = &set.points[..];
    let none = [Bounds::NONE; 7];
    let by = |evaluate: &dyn Fn(&[f64]) -> Option<Linear>| fit(evaluate, start, &none[..start.len()]);
    let found = match set.name.as_str() {
        "misra1a" | "boxbod" => by(&model(points, saturating)),
        "hahn1" | "thurber" => by(&model(points, cubic_over_cubic)),
        "mgh09" => by(&model::<4>(points, |p, x| p[0] * (p[1] * x + x * x) / (p[2] * x + x * x + p[3]))),
        "mgh10" => by(&model::<3>(points, |p, x| p[0] * (p[1] / (p[2] + x)).exp())),
        "eckerle4" => by(&model::<3>(points, |p, x| {
            let z = (x - p[2]) / p[1];
            p[0] / p[1] * (z * z * -0.5).exp()
        })),
        "rat43" => by(&model::<4>(points, |p, x| {
            let one = Dual::constant(1.0);
            p[0] / ((p[1] - p[2] * x).exp() + 1.0).pow(one / p[3])
        })),
        "bennett5" => by(&model::<3>(points, |p, x| p[0] * (p[1] + x).pow(-1.0 / p[2]))),
        other => panic!("no formula for {other}"),
    };
    found.unwrap_or_else(|why| panic!("{} from {start:?}: {why:?}", set.name))
}

/// Correct decimal digits.
fn digits(got: f64, wanted: f64) -> f64 {
    if got == wanted { 16.0 } else { -libm::log10(((got - wanted) / wanted).abs()) }
}

#[test]
fn all_nine_certified_sets_are_met_from_both_starts() {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/nist");
    let mut paths: Vec<_> =
        std::fs::read_dir(folder).expect("the folder").map(|f| f.expect("a file").path()).collect();
    paths.sort();
    assert_eq!(paths.len(), 9);
    let mut misses = Vec::new();
    for set in paths.iter().map(|path| read(path)) {
        for (which, start) in set.starts.iter().enumerate() {
            let found = solved(&set, start);
            let least = |pairs: &mut dyn Iterator<Item = (f64, f64)>| {
                pairs.map(|(got, wanted)| digits(got, wanted)).fold(16.0, f64::min)
            };
            let parameters = least(&mut found.parameters.iter().copied().zip(set.certified.iter().copied()));
            let freedom = (set.points.len() - start.len()) as f64;
            let deviation = (found.sum_of_squares / freedom).sqrt();
            let deviations = found.inverse.iter().enumerate().map(|(i, row)| deviation * row[i].sqrt());
            let deviations = least(&mut deviations.zip(set.deviations.iter().copied()));
            let sum = digits(found.sum_of_squares, set.sum_of_squares);
            let said = format!(
                "{} from start {}: parameters {parameters:.1}, deviations {deviations:.1}, sum of squares {sum:.1} digits, {} \
                 evaluations",
                set.name,
                which + 1,
                found.evaluations
            );
            println!("{said}");
            // Eleven digits are certified, and half a unit of the last may be off.
            let deviation = digits(deviation, set.residual_deviation);
            if [parameters, deviations, sum, deviation].iter().any(|digits| *digits < 10.0) {
                misses.push(said);
            }
        }
    }
    assert!(misses.is_empty(), "{}", misses.join("\n"));
}

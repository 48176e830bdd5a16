//! What was measured on an avalanche photodiode, from which its numbers are fitted.

use super::bias::{BIAS_LIMITS, GAIN_LIMITS};
use super::detector::BANDWIDTH_LIMITS;
use super::field::{Field, Limits};
use super::points::read_rows;
use super::reader::Reader;
use crate::quantity::kind::{self, Kind};
use crate::tree::Tree;
use serde::Serialize;

/// The measurements of one device; each table may be absent.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Measurements {
    /// The voltage at which the gain is taken as 1; nothing means that the unity-gain current is fitted, V.
    pub unity_gain_v: Option<f64>,
    /// The device's temperature while current was measured against voltage, °C.
    pub temperature_c: Option<f64>,
    /// How much a point far off counts.
    pub estimator: Estimator,
    /// Current against voltage, dark and under constant light.
    pub iv: Option<Table<IvPoint>>,
    /// Excess noise factor against gain.
    pub noise: Option<Table<NoisePoint>>,
    /// Bandwidth against gain.
    pub bandwidth: Option<Table<BandwidthPoint>>,
    /// Breakdown voltage against temperature.
    pub breakdown: Option<Table<BreakdownPoint>>,
}

/// A table of measured points.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Table<P> {
    /// In rising order of what was set.
    pub points: Vec<P>,
}

/// The current at a voltage.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct IvPoint {
    /// Reverse voltage of the supply, V.
    pub bias_v: f64,
    /// Current without light, A; nothing where it was not measured.
    pub dark_a: Option<f64>,
    /// Current under the light, A.
    pub light_a: f64,
    /// Standard uncertainty of the current under the light, A.
    pub standard_a: Option<f64>,
}

/// The excess noise factor at a gain.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct NoisePoint {
    /// M.
    pub gain: f64,
    /// F.
    pub factor: f64,
    /// Standard uncertainty of F.
    pub standard: Option<f64>,
}

/// The −3 dB bandwidth at a gain.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct BandwidthPoint {
    /// M.
    pub gain: f64,
    /// The bandwidth, Hz.
    pub bandwidth_hz: f64,
    /// Its standard uncertainty, Hz.
    pub standard_hz: Option<f64>,
}

/// The breakdown voltage at a temperature.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct BreakdownPoint {
    /// Temperature of the device, °C.
    pub temperature_c: f64,
    /// The breakdown voltage, V.
    pub breakdown_v: f64,
    /// Its standard uncertainty, V.
    pub standard_v: Option<f64>,
}

/// How much a point far off counts.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum Estimator {
    /// As its square, like all others.
    LeastSquares,
    /// As its size: Huber's estimate.
    Huber,
}

const ESTIMATORS: &[(&str, Estimator)] =
    &[("least_squares", Estimator::LeastSquares), ("huber", Estimator::Huber)];

/// The limits of a device's temperature, °C.
pub const TEMPERATURE_LIMITS: Limits = Limits::between(-273.15, 500.0);

/// The limits of a measured current, A; a dark current may be read below 0 by the offset of an instrument.
pub const CURRENT_LIMITS: Limits = Limits::between(-10.0, 10.0);

/// The limits of a measured excess noise factor; noise of its own may put one below 1.
pub const FACTOR_LIMITS: Limits = Limits::above(0.0, 1e6);

/// The limits of a breakdown voltage, V.
pub const BREAKDOWN_LIMITS: Limits = Limits::above(0.0, 1e4);

/// The limits of any standard uncertainty, in the unit of its value.
pub const STANDARD_LIMITS: Limits = Limits::above(0.0, 1e14);

/// The numbers of the measurements.
pub const FIELDS: &[Field] = &[
    Field {
        pointer: "/measurements/unity_gain_v",
        name: "the voltage of unity gain",
        kind: &kind::VOLTAGE,
        limits: Limits::above(0.0, 1e4),
        usual: "where the current is flat; empty: fitted with the rest",
        place: |bench| Some(&mut bench.measurements.as_mut()?.unity_gain_v),
    },
    Field {
        pointer: "/measurements/temperature_c",
        name: "the temperature of the measured device",
        kind: &kind::TEMPERATURE_C,
        limits: TEMPERATURE_LIMITS,
        usual: "while current was measured against voltage",
        place: |bench| Some(&mut bench.measurements.as_mut()?.temperature_c),
    },
];

impl Measurements {
    /// Reads measurements.
    pub fn read(tree: Option<&Tree>, reader: &mut Reader) -> Option<Measurements> {
        const AT: &str = "/measurements";
        let keys = ["unity_gain_v", "temperature_c", "estimator", "iv", "noise", "bandwidth", "breakdown"];
        let map = reader.part(tree, AT, &keys)?;
        let mut number = |key: &str| reader.number(map.get(key), &format!("{AT}/{key}"));
        let (unity_gain_v, temperature_c) = (number("unity_gain_v"), number("temperature_c"));
        let estimator = reader.word(map.get("estimator"), &format!("{AT}/estimator"), ESTIMATORS);
        Some(Measurements {
            unity_gain_v,
            temperature_c,
            estimator: estimator.unwrap_or(Estimator::LeastSquares),
            iv: read_iv(map.get("iv"), reader),
            noise: read_noise(map.get("noise"), reader),
            bandwidth: read_bandwidth(map.get("bandwidth"), reader),
            breakdown: read_breakdown(map.get("breakdown"), reader),
        })
    }
}

fn read_iv(tree: Option<&Tree>, reader: &mut Reader) -> Option<Table<IvPoint>> {
    const KEYS: &[&str] = &["bias_v", "dark_a", "light_a", "standard_a"];
    table(
        tree,
        "/measurements/iv",
        KEYS,
        reader,
        |point: &IvPoint| point.bias_v,
        |row| {
            let bias_v = row.needed("bias_v", "the voltage", &kind::VOLTAGE, &BIAS_LIMITS);
            let dark_a = row.cell("dark_a", "the dark current", &kind::CURRENT, &CURRENT_LIMITS);
            let light_a = row.needed("light_a", "the current under light", &kind::CURRENT, &CURRENT_LIMITS);
            let standard_a = row.standard("standard_a", &kind::CURRENT);
            Some(IvPoint { bias_v: bias_v?, dark_a, light_a: light_a?, standard_a })
        },
    )
}

fn read_noise(tree: Option<&Tree>, reader: &mut Reader) -> Option<Table<NoisePoint>> {
    const KEYS: &[&str] = &["gain", "factor", "standard"];
    table(
        tree,
        "/measurements/noise",
        KEYS,
        reader,
        |point: &NoisePoint| point.gain,
        |row| {
            let gain = row.needed("gain", "the gain", &kind::NUMBER, &GAIN_LIMITS);
            let factor = row.needed("factor", "the excess noise factor", &kind::NUMBER, &FACTOR_LIMITS);
            let standard = row.standard("standard", &kind::NUMBER);
            Some(NoisePoint { gain: gain?, factor: factor?, standard })
        },
    )
}

fn read_bandwidth(tree: Option<&Tree>, reader: &mut Reader) -> Option<Table<BandwidthPoint>> {
    const KEYS: &[&str] = &["gain", "bandwidth_hz", "standard_hz"];
    table(
        tree,
        "/measurements/bandwidth",
        KEYS,
        reader,
        |point: &BandwidthPoint| point.gain,
        |row| {
            let gain = row.needed("gain", "the gain", &kind::NUMBER, &GAIN_LIMITS);
            let bandwidth_hz =
                row.needed("bandwidth_hz", "the bandwidth", &kind::FREQUENCY, &BANDWIDTH_LIMITS);
            let standard_hz = row.standard("standard_hz", &kind::FREQUENCY);
            Some(BandwidthPoint { gain: gain?, bandwidth_hz: bandwidth_hz?, standard_hz })
        },
    )
}

fn read_breakdown(tree: Option<&Tree>, reader: &mut Reader) -> Option<Table<BreakdownPoint>> {
    const KEYS: &[&str] = &["temperature_c", "breakdown_v", "standard_v"];
    table(
        tree,
        "/measurements/breakdown",
        KEYS,
        reader,
        |point: &BreakdownPoint| point.temperature_c,
        |row| {
            let temperature_c =
                row.needed("temperature_c", "the temperature", &kind::TEMPERATURE_C, &TEMPERATURE_LIMITS);
            let breakdown_v =
                row.needed("breakdown_v", "the breakdown voltage", &kind::VOLTAGE, &BREAKDOWN_LIMITS);
            let standard_v = row.standard("standard_v", &kind::VOLTAGE);
            Some(BreakdownPoint { temperature_c: temperature_c?, breakdown_v: breakdown_v?, standard_v })
        },
    )
}

/// One row of a table and where it stands.
struct RowAt<'r> {
    row: &'r Tree,
    at: &'r str,
    reader: &'r mut Reader,
}

impl RowAt<'_> {
    fn cell(&mut self, key: &str, name: &str, kind: &'static Kind, limits: &Limits) -> Option<f64> {
        let pointer = format!("{}/{key}", self.at);
        Some(self.reader.of_kind(self.row.get(key), &pointer, name, kind, limits)?.value)
    }

    fn needed(&mut self, key: &str, name: &str, kind: &'static Kind, limits: &Limits) -> Option<f64> {
        if self.row.get(key).is_none_or(Tree::is_null) {
            let sentence = format!("Each point needs a value: {name}.");
            self.reader.missing(&format!("{}/{key}", self.at), &sentence);
        }
        self.cell(key, name, kind, limits)
    }

    fn standard(&mut self, key: &str, kind: &'static Kind) -> Option<f64> {
        self.cell(key, "the standard uncertainty", kind, &STANDARD_LIMITS)
    }
}

/// Reads a table `{ points }`; repeats of one setting are welcome.
fn table<P>(
    tree: Option<&Tree>,
    pointer: &str,
    keys: &[&str],
    reader: &mut Reader,
    by: fn(&P) -> f64,
    read: fn(&mut RowAt) -> Option<P>,
) -> Option<Table<P>> {
    let map = reader.part(tree, pointer, &["points"])?;
    let at = format!("{pointer}/points");
    let mut points = read_rows(map.get("points"), &at, reader, keys, |row, at, reader| {
        read(&mut RowAt { row, at, reader })
    })?;
    points.sort_by(|one, next| by(one).total_cmp(&by(next)));
    Some(Table { points })
}

//! Measurements as text that a person can edit and the reader takes back.

use super::names::DecimalMark;
use super::write::number_text;
use crate::bench::measurements::{BandwidthPoint, BreakdownPoint, IvPoint, Measurements, NoisePoint, Table};

/// Writes the table at a pointer as tab-separated text with a header, to be read back bit by bit by
/// [`read_measured`](super::read_measured); blank where it is absent.
pub fn write_measurements(pointer: &str, all: &Measurements, mark: DecimalMark) -> String {
    match pointer {
        "/measurements/iv" => {
            let heads =
                ["Voltage / V", "Dark current / A", "Current under light / A", "Standard uncertainty / A"];
            let row = |at: &IvPoint| [Some(at.bias_v), at.dark_a, Some(at.light_a), at.standard_a];
            written(all.iv.as_ref(), heads, row, mark)
        }
        "/measurements/noise" => {
            let heads = ["Gain", "Excess noise factor", "Standard uncertainty"];
            let row = |at: &NoisePoint| [Some(at.gain), Some(at.factor), at.standard];
            written(all.noise.as_ref(), heads, row, mark)
        }
        "/measurements/bandwidth" => {
            let heads = ["Gain", "Bandwidth / Hz", "Standard uncertainty / Hz"];
            let row = |at: &BandwidthPoint| [Some(at.gain), Some(at.bandwidth_hz), at.standard_hz];
            written(all.bandwidth.as_ref(), heads, row, mark)
        }
        "/measurements/breakdown" => {
            let heads = ["Temperature / °C", "Breakdown voltage / V", "Standard uncertainty / V"];
            let row = |at: &BreakdownPoint| [Some(at.temperature_c), Some(at.breakdown_v), at.standard_v];
            written(all.breakdown.as_ref(), heads, row, mark)
        }
        _ => String::new(),
    }
}

/// A column in which no row has a number is left out.
fn written<P, const N: usize>(
    table: Option<&Table<P>>,
    heads: [&str; N],
    row: fn(&P) -> [Option<f64>; N],
    mark: DecimalMark,
) -> String {
    let Some(table) = table else { return String::new() };
    let rows: Vec<[Option<f64>; N]> = table.points.iter().map(row).collect();
    let held: Vec<usize> = (0..N).filter(|column| rows.iter().any(|row| row[*column].is_some())).collect();
    let line = |cell: &dyn Fn(usize) -> String| {
        let cells: Vec<String> = held.iter().map(|column| cell(*column)).collect();
        format!("{}\n", cells.join("\t"))
    };
    let number = |number: f64| number_text(number, mark);
    let body = rows.iter().map(|row| line(&|column| row[column].map_or(String::new(), number)));
    std::iter::once(line(&|column| heads[column].to_owned())).chain(body).collect()
}

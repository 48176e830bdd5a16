//! The light: wavelength, power, and how it carries symbols.

use super::field::{Field, Limits};
use super::reader::Reader;
use super::spectrum::Spectrum;
use crate::physics::sensitivity;
use crate::quantity::kind;
use crate::quantity::read::Understood;
use crate::quantity::write;
use crate::tree::Tree;
use serde::Serialize;

/// A source of light.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Source {
    /// Wavelength in vacuum, nm.
    pub wavelength_nm: Option<f64>,
    /// Full width of the line at half maximum, nm.
    pub linewidth_nm: Option<f64>,
    /// Where its light lies; nothing means a line of the width above.
    pub spectrum: Option<Spectrum>,
    /// Average power as launched, dBm.
    pub average_power_dbm: Option<f64>,
    /// How bits become levels.
    pub format: Format,
    /// Symbols per second.
    pub symbol_rate_baud: Option<f64>,
    /// Highest over lowest level, dB; nothing means that the lowest level is perfectly dark.
    pub extinction_ratio_db: Option<f64>,
    /// Relative intensity noise, one-sided, dB/Hz; nothing means none.
    pub rin_db_per_hz: Option<f64>,
}

/// How bits become levels.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum Format {
    /// Two levels, a bit a symbol.
    Nrz,
    /// Four levels, two bits a symbol, Gray coded.
    Pam4,
}

impl Format {
    /// Bits that a symbol carries.
    pub fn bits_per_symbol(self) -> f64 {
        match self {
            Format::Nrz => 1.0,
            Format::Pam4 => 2.0,
        }
    }
}

impl From<Format> for sensitivity::Format {
    fn from(format: Format) -> sensitivity::Format {
        match format {
            Format::Nrz => sensitivity::Format::Nrz,
            Format::Pam4 => sensitivity::Format::Pam4,
        }
    }
}

const FORMATS: &[(&str, Format)] = &[("nrz", Format::Nrz), ("pam4", Format::Pam4)];

/// The limits of any wavelength: where photodiodes of the fibre trade respond.
pub const WAVELENGTH_LIMITS: Limits = Limits::between(200.0, 2500.0);

/// The limits of any power level.
pub const LEVEL_LIMITS: Limits = Limits::between(-150.0, 60.0);

/// The numbers of a source.
pub const FIELDS: &[Field] = &[
    Field {
        pointer: "/source/wavelength_nm",
        name: "the source wavelength",
        kind: &kind::WAVELENGTH,
        limits: WAVELENGTH_LIMITS,
        usual: "850, 1310, 1550 nm",
        place: |bench| Some(&mut bench.source.as_mut()?.wavelength_nm),
    },
    Field {
        pointer: "/source/linewidth_nm",
        name: "the line width",
        kind: &kind::LINE_WIDTH,
        limits: Limits::between(0.0, 500.0),
        usual: "below 0.1 nm for a laser, 30 to 100 nm for an LED",
        place: |bench| Some(&mut bench.source.as_mut()?.linewidth_nm),
    },
    Field {
        pointer: "/source/average_power_dbm",
        name: "the launched power",
        kind: &kind::POWER_LEVEL,
        limits: LEVEL_LIMITS,
        usual: "−10 to +5 dBm",
        place: |bench| Some(&mut bench.source.as_mut()?.average_power_dbm),
    },
    Field {
        pointer: "/source/symbol_rate_baud",
        name: "the symbol rate",
        kind: &kind::SYMBOL_RATE,
        limits: Limits::between(1.0, 1e13),
        usual: "2.5 Gb/s, 10.3125 Gb/s, 26.5625 GBd",
        place: |bench| Some(&mut bench.source.as_mut()?.symbol_rate_baud),
    },
    Field {
        pointer: "/source/extinction_ratio_db",
        name: "the extinction ratio",
        kind: &kind::DECIBEL,
        limits: Limits::above(0.0, 200.0),
        usual: "3 to 15 dB; empty: the lowest level is perfectly dark",
        place: |bench| Some(&mut bench.source.as_mut()?.extinction_ratio_db),
    },
    Field {
        pointer: "/source/rin_db_per_hz",
        name: "the relative intensity noise",
        kind: &kind::INTENSITY_NOISE,
        limits: Limits::between(-250.0, -20.0),
        usual: "−155 to −125 dB/Hz; empty: none",
        place: |bench| Some(&mut bench.source.as_mut()?.rin_db_per_hz),
    },
];

impl Source {
    /// Reads a source.
    pub fn read(tree: Option<&Tree>, reader: &mut Reader) -> Option<Source> {
        let keys = [
            "wavelength_nm",
            "linewidth_nm",
            "spectrum",
            "average_power_dbm",
            "format",
            "symbol_rate_baud",
            "extinction_ratio_db",
            "rin_db_per_hz",
        ];
        let map = reader.part(tree, "/source", &keys)?;
        let format = reader.word(map.get("format"), "/source/format", FORMATS).unwrap_or(Format::Nrz);
        let rate = reader.understand(map.get("symbol_rate_baud"), "/source/symbol_rate_baud");
        Some(Source {
            wavelength_nm: reader.number(map.get("wavelength_nm"), "/source/wavelength_nm"),
            linewidth_nm: reader.number(map.get("linewidth_nm"), "/source/linewidth_nm"),
            spectrum: Spectrum::read(map.get("spectrum"), reader),
            average_power_dbm: reader.number(map.get("average_power_dbm"), "/source/average_power_dbm"),
            format,
            symbol_rate_baud: rate.map(|rate| symbol_rate(&rate, format, reader)),
            extinction_ratio_db: read_extinction_ratio(map.get("extinction_ratio_db"), reader),
            rin_db_per_hz: reader.number(map.get("rin_db_per_hz"), "/source/rin_db_per_hz"),
        })
    }
}

/// A person may type the bit rate; two bits share a PAM4 symbol.
fn symbol_rate(rate: &Understood, format: Format, reader: &mut Reader) -> f64 {
    let bits = format.bits_per_symbol();
    if !rate.counts_bits || bits == 1.0 {
        return rate.value;
    }
    let symbols = rate.value / bits;
    let said = format!("{}, {bits} bits a symbol", write::exact(symbols, &kind::SYMBOL_RATE));
    reader.understand_as("/source/symbol_rate_baud", said);
    symbols
}

/// A perfectly dark zero is an absent ratio; a person may also write it as the infinite one that it is.
fn read_extinction_ratio(tree: Option<&Tree>, reader: &mut Reader) -> Option<f64> {
    const AT: &str = "/source/extinction_ratio_db";
    match tree {
        Some(Tree::Text(text)) if reader.mark().is_some() && is_infinite(text) => {
            reader.understand_as(AT, "the lowest level is perfectly dark".to_owned());
            None
        }
        other => reader.number(other, AT),
    }
}

fn is_infinite(text: &str) -> bool {
    let word = text.trim().trim_end_matches("dB").trim_end();
    ["∞", "inf", "infinite", "infinity"].iter().any(|known| word.eq_ignore_ascii_case(known))
}

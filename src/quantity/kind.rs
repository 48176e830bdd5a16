//! The kinds of number that a bench holds, each with the units in which the trade writes it.

use crate::physics::constants::{SPEED_OF_LIGHT_M_PER_S, ZERO_CELSIUS_K};
use crate::physics::decibel::{db_from_ratio, dbm_from_watt, watt_from_dbm};

/// A kind of number: the unit in which the bench keeps it, and those in which it may be typed.
#[derive(Debug)]
pub struct Kind {
    /// The unit of the bench, as written behind a number; empty for a pure number.
    pub unit: &'static str,
    /// How a value of this kind is shown.
    pub style: Style,
    /// The units that may be typed. A number without a unit is taken in the unit of the bench.
    pub units: &'static [Unit],
}

/// How values of a kind are shown.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Style {
    /// With the SI prefix that suits: 5 nA. Holds where the unit takes a prefix.
    Prefixed,
    /// As it stands: 1550 nm, −28 dBm.
    Plain,
    /// With an exponent where it is small: 1e-12.
    Scientific,
}

/// A unit that may be typed.
#[derive(Debug)]
pub struct Unit {
    /// As it is written.
    pub symbol: &'static str,
    /// Whether SI prefixes may stand before it.
    pub prefixes: bool,
    /// Digits × 10^exponent is the number that `convert` takes.
    pub exponent: i32,
    /// From there to the unit of the bench.
    pub convert: Convert,
}

/// The step from a typed unit to the unit of the bench.
#[derive(Debug, Clone, Copy)]
pub enum Convert {
    /// None: the power of ten was all.
    Same,
    /// A formula; `Err` says why the number has no such value.
    By(fn(f64) -> Result<f64, &'static str>),
    /// As `Same`, but the number counts bits where the bench counts symbols.
    Bits,
}

const fn plain(symbol: &'static str) -> Unit {
    Unit { symbol, prefixes: false, exponent: 0, convert: Convert::Same }
}

const fn si(symbol: &'static str) -> Unit {
    Unit { symbol, prefixes: true, exponent: 0, convert: Convert::Same }
}

const fn scaled(symbol: &'static str, exponent: i32) -> Unit {
    Unit { symbol, prefixes: false, exponent, convert: Convert::Same }
}

const fn by(symbol: &'static str, prefixes: bool, convert: fn(f64) -> Result<f64, &'static str>) -> Unit {
    Unit { symbol, prefixes, exponent: 0, convert: Convert::By(convert) }
}

/// A wavelength in vacuum, kept in nm; an optical frequency may be typed for it.
pub const WAVELENGTH: Kind = Kind {
    unit: "nm",
    style: Style::Plain,
    units: &[
        Unit { symbol: "m", prefixes: true, exponent: 9, convert: Convert::Same },
        by("Hz", true, |frequency_hz| match frequency_hz > 0.0 {
            true => Ok(SPEED_OF_LIGHT_M_PER_S / frequency_hz * 1e9),
            false => Err("an optical frequency is above 0"),
        }),
    ],
};

/// A difference of wavelengths, kept in nm.
pub const LINE_WIDTH: Kind = Kind {
    unit: "nm",
    style: Style::Plain,
    units: &[Unit { symbol: "m", prefixes: true, exponent: 9, convert: Convert::Same }],
};

/// An optical power as a level, kept in dBm.
pub const POWER_LEVEL: Kind = Kind {
    unit: "dBm",
    style: Style::Plain,
    units: &[
        plain("dBm"),
        by("W", true, |power_w| match power_w > 0.0 {
            true => Ok(dbm_from_watt(power_w)),
            false => Err("a power of 0 W or less has no value in dBm"),
        }),
    ],
};

/// An optical power, kept in W.
pub const POWER: Kind = Kind {
    unit: "W",
    style: Style::Prefixed,
    units: &[si("W"), by("dBm", false, |power_dbm| Ok(watt_from_dbm(power_dbm)))],
};

/// A ratio of powers, kept in dB.
pub const DECIBEL: Kind = Kind { unit: "dB", style: Style::Plain, units: &[plain("dB")] };

/// A relative intensity noise, kept in dB/Hz.
pub const INTENSITY_NOISE: Kind = Kind {
    unit: "dB/Hz",
    style: Style::Plain,
    units: &[
        plain("dB/Hz"),
        plain("dBc/Hz"),
        by("1/Hz", false, |per_hz| match per_hz > 0.0 {
            true => Ok(db_from_ratio(per_hz)),
            false => Err("a noise of 0 per Hz or less has no value in dB/Hz"),
        }),
    ],
};

/// A symbol rate, kept in Bd; a bit rate may be typed for it.
pub const SYMBOL_RATE: Kind = Kind {
    unit: "Bd",
    style: Style::Prefixed,
    units: &[
        si("Bd"),
        si("baud"),
        Unit { symbol: "b/s", prefixes: true, exponent: 0, convert: Convert::Bits },
        Unit { symbol: "bit/s", prefixes: true, exponent: 0, convert: Convert::Bits },
        Unit { symbol: "bps", prefixes: true, exponent: 0, convert: Convert::Bits },
    ],
};

/// A responsivity, kept in A/W.
pub const RESPONSIVITY: Kind = Kind { unit: "A/W", style: Style::Plain, units: &[si("A/W")] };

/// A pure number that is often written in per cent.
pub const FRACTION: Kind = Kind { unit: "", style: Style::Plain, units: &[scaled("%", -2)] };

/// A pure number.
pub const NUMBER: Kind = Kind { unit: "", style: Style::Plain, units: &[] };

/// An error ratio.
pub const ERROR_RATIO: Kind =
    Kind { unit: "", style: Style::Scientific, units: &[scaled("%", -2), scaled("ppm", -6)] };

/// A per cent number, kept in per cent.
pub const PERCENT: Kind = Kind { unit: "%", style: Style::Plain, units: &[plain("%")] };

/// A current, kept in A.
pub const CURRENT: Kind = Kind { unit: "A", style: Style::Prefixed, units: &[si("A")] };

/// A white current noise density, kept in A/√Hz.
pub const CURRENT_DENSITY: Kind = Kind {
    unit: "A/√Hz",
    style: Style::Prefixed,
    units: &[si("A/√Hz"), si("A/rtHz"), si("A/sqrt(Hz)"), si("A/sqrtHz"), si("A/Hz^0.5"), si("A/Hz^½")],
};

/// A frequency or bandwidth, kept in Hz.
pub const FREQUENCY: Kind = Kind { unit: "Hz", style: Style::Prefixed, units: &[si("Hz")] };

/// A resistance, kept in Ω. Greek omega, the ohm sign and the word are all in use.
pub const RESISTANCE: Kind =
    Kind { unit: "Ω", style: Style::Prefixed, units: &[si("Ω"), si("\u{2126}"), si("ohm"), si("Ohm")] };

/// An absolute temperature, kept in K.
pub const TEMPERATURE_K: Kind = Kind {
    unit: "K",
    style: Style::Plain,
    units: &[
        plain("K"),
        by("°C", false, |celsius| Ok(celsius + ZERO_CELSIUS_K)),
        by("C", false, |celsius| Ok(celsius + ZERO_CELSIUS_K)),
    ],
};

/// A temperature, kept in °C.
pub const TEMPERATURE_C: Kind = Kind {
    unit: "°C",
    style: Style::Plain,
    units: &[plain("°C"), plain("C"), by("K", false, |kelvin| Ok(kelvin - ZERO_CELSIUS_K))],
};

/// A difference of temperatures, kept in K.
pub const TEMPERATURE_STEP: Kind =
    Kind { unit: "K", style: Style::Plain, units: &[plain("K"), plain("°C"), plain("C")] };

/// A voltage, kept in V.
pub const VOLTAGE: Kind = Kind { unit: "V", style: Style::Plain, units: &[si("V")] };

/// A change of voltage with temperature, kept in V/K.
pub const VOLTAGE_PER_KELVIN: Kind =
    Kind { unit: "V/K", style: Style::Plain, units: &[si("V/K"), si("V/°C"), si("V/C")] };

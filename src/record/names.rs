//! The words by which the page and the core speak of a table: delimiters, marks, roles, units, forms.

use serde::{Serialize, Serializer};

/// Lists the variants of a word list once, with the name of each as it stands in JSON.
macro_rules! named {
    ($(#[$outer:meta])* $kind:ident { $($(#[$inner:meta])* $variant:ident = $name:literal),+ $(,)? }) => {
        $(#[$outer])*
        #[derive(Debug, Clone, Copy, PartialEq, Eq)]
        pub enum $kind { $($(#[$inner])* $variant),+ }

        impl $kind {
            /// All of them, each with its name in JSON.
            pub const NAMES: &[(&'static str, $kind)] = &[$(($name, $kind::$variant)),+];

            /// The name in JSON.
            pub fn name(self) -> &'static str {
                match self { $($kind::$variant => $name),+ }
            }
        }

        impl Serialize for $kind {
            fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
                serializer.serialize_str(self.name())
            }
        }
    };
}

named! {
    /// What stands between two cells.
    Delimiter {
        /// A tab, as in cells pasted from a spreadsheet.
        Tab = "tab",
        /// A semicolon.
        Semicolon = "semicolon",
        /// A comma.
        Comma = "comma",
        /// A run of spaces or tabs.
        Space = "space",
    }
}

named! {
    /// What stands between units and tenths.
    DecimalMark {
        /// 0.92
        Point = "point",
        /// 0,92
        Comma = "comma",
    }
}

named! {
    /// What a column holds.
    Role {
        /// The wavelength of the row.
        Wavelength = "wavelength",
        /// Responsivity.
        Responsivity = "responsivity",
        /// True power over indicated power.
        CorrectionFactor = "correction_factor",
        /// (indicated − true) / true.
        Deviation = "deviation",
        /// The expanded uncertainty U.
        Expanded = "expanded",
        /// The power per nm of a spectrum.
        SpectralPower = "spectral_power",
        /// Which of two detectors the row is of.
        Detector = "detector",
        /// The power that a detector showed.
        Power = "power",
        /// When.
        Time = "time",
        /// The day, where the time of the day has a column of its own.
        Date = "date",
        /// The unit of the row's power.
        PowerUnit = "power_unit",
        /// The measuring range of the meter.
        Range = "range",
        /// Whether the meter trusts its own reading.
        Status = "status",
        /// A voltage, such as the bias.
        Voltage = "voltage",
        /// The gain of an avalanche.
        Gain = "gain",
        /// The excess noise factor of an avalanche.
        NoiseFactor = "excess_noise_factor",
        /// The current of a device without light.
        DarkCurrent = "dark_current",
        /// The current of a device under light.
        Current = "current",
        /// The bandwidth of a device.
        Bandwidth = "bandwidth",
        /// The temperature of a device.
        Temperature = "temperature",
        /// The standard uncertainty u of what the row measures.
        Standard = "standard_uncertainty",
        /// Nothing that is read.
        Ignored = "ignored",
    }
}

named! {
    /// The units that a column may be in.
    Unit {
        /// Nanometres.
        Nanometre = "nm",
        /// Micrometres.
        Micrometre = "µm",
        /// Amperes per watt.
        AmperePerWatt = "A/W",
        /// Milliamperes per watt.
        MilliamperePerWatt = "mA/W",
        /// A plain number.
        One = "1",
        /// Per cent.
        Percent = "%",
        /// Decibels of optical power.
        Decibel = "dB",
        /// Watts.
        Watt = "W",
        /// Milliwatts.
        Milliwatt = "mW",
        /// Microwatts.
        Microwatt = "µW",
        /// Nanowatts.
        Nanowatt = "nW",
        /// Picowatts.
        Picowatt = "pW",
        /// Decibels over 1 mW.
        Dbm = "dBm",
        /// Watts per nanometre.
        WattPerNm = "W/nm",
        /// Milliwatts per nanometre.
        MilliwattPerNm = "mW/nm",
        /// Microwatts per nanometre.
        MicrowattPerNm = "µW/nm",
        /// Nanowatts per nanometre.
        NanowattPerNm = "nW/nm",
        /// Decibels over 1 mW per nanometre.
        DbmPerNm = "dBm/nm",
        /// Seconds.
        Second = "s",
        /// Milliseconds.
        Millisecond = "ms",
        /// Minutes.
        Minute = "min",
        /// Hours.
        Hour = "h",
        /// Volts.
        Volt = "V",
        /// Millivolts.
        Millivolt = "mV",
        /// Amperes.
        Ampere = "A",
        /// Milliamperes.
        Milliampere = "mA",
        /// Microamperes.
        Microampere = "µA",
        /// Nanoamperes.
        Nanoampere = "nA",
        /// Picoamperes.
        Picoampere = "pA",
        /// Hertz.
        Hertz = "Hz",
        /// Kilohertz.
        Kilohertz = "kHz",
        /// Megahertz.
        Megahertz = "MHz",
        /// Gigahertz.
        Gigahertz = "GHz",
        /// Degrees Celsius.
        Celsius = "°C",
        /// Kelvins.
        Kelvin = "K",
    }
}

impl Delimiter {
    /// The one character it is; nothing for a run of spaces.
    pub(super) fn byte(self) -> Option<u8> {
        match self {
            Delimiter::Tab => Some(b'\t'),
            Delimiter::Semicolon => Some(b';'),
            Delimiter::Comma => Some(b','),
            Delimiter::Space => None,
        }
    }
}

impl DecimalMark {
    /// The character between units and tenths.
    pub(super) fn character(self) -> char {
        match self {
            DecimalMark::Point => '.',
            DecimalMark::Comma => ',',
        }
    }
}

impl Role {
    /// Whether a column of this role holds what the certificate states: a table has one such column.
    pub(super) fn is_value(self) -> bool {
        matches!(self, Role::Responsivity | Role::CorrectionFactor | Role::Deviation)
    }

    /// The units that a column of this role may be in, the one assumed without a word first.
    pub(super) fn units(self) -> &'static [Unit] {
        match self {
            Role::Wavelength => &[Unit::Nanometre, Unit::Micrometre],
            Role::Responsivity => &[Unit::AmperePerWatt, Unit::MilliamperePerWatt],
            Role::CorrectionFactor => &[Unit::One, Unit::Percent, Unit::Decibel],
            Role::Deviation => &[Unit::Percent, Unit::Decibel],
            Role::Expanded => {
                &[Unit::Percent, Unit::Decibel, Unit::AmperePerWatt, Unit::MilliamperePerWatt, Unit::One]
            }
            Role::SpectralPower => &[
                Unit::WattPerNm,
                Unit::MilliwattPerNm,
                Unit::MicrowattPerNm,
                Unit::NanowattPerNm,
                Unit::DbmPerNm,
                Unit::Watt,
                Unit::Milliwatt,
                Unit::Microwatt,
                Unit::Nanowatt,
                Unit::Picowatt,
                Unit::Dbm,
                Unit::Decibel,
                Unit::One,
                Unit::Percent,
            ],
            Role::Power => {
                &[Unit::Watt, Unit::Milliwatt, Unit::Microwatt, Unit::Nanowatt, Unit::Picowatt, Unit::Dbm]
            }
            Role::Time => &[Unit::Second, Unit::Millisecond, Unit::Minute, Unit::Hour],
            Role::Voltage => &[Unit::Volt, Unit::Millivolt],
            Role::Gain | Role::NoiseFactor => &[Unit::One],
            Role::DarkCurrent | Role::Current => {
                &[Unit::Ampere, Unit::Milliampere, Unit::Microampere, Unit::Nanoampere, Unit::Picoampere]
            }
            Role::Bandwidth => &[Unit::Hertz, Unit::Kilohertz, Unit::Megahertz, Unit::Gigahertz],
            Role::Temperature => &[Unit::Celsius, Unit::Kelvin],
            Role::Standard => &[
                Unit::Percent,
                Unit::One,
                Unit::Ampere,
                Unit::Milliampere,
                Unit::Microampere,
                Unit::Nanoampere,
                Unit::Picoampere,
                Unit::Hertz,
                Unit::Kilohertz,
                Unit::Megahertz,
                Unit::Gigahertz,
                Unit::Volt,
                Unit::Millivolt,
            ],
            Role::Detector | Role::Date | Role::PowerUnit | Role::Range | Role::Status | Role::Ignored => &[],
        }
    }
}

impl Unit {
    /// Recognises a unit of power, of power per nm, of time, voltage, current, frequency or temperature as it is written in tables; `None` for anything else.
    pub(super) fn written_of_power(text: &str) -> Option<Unit> {
        Some(match plain(text)?.as_str() {
            "W" => Unit::Watt,
            "mW" => Unit::Milliwatt,
            "uW" => Unit::Microwatt,
            "nW" => Unit::Nanowatt,
            "pW" => Unit::Picowatt,
            "dBm" | "dbm" | "DBM" | "dBmW" => Unit::Dbm,
            "W/nm" | "W.nm-1" => Unit::WattPerNm,
            "mW/nm" | "mW.nm-1" => Unit::MilliwattPerNm,
            "uW/nm" | "uW.nm-1" => Unit::MicrowattPerNm,
            "nW/nm" | "nW.nm-1" => Unit::NanowattPerNm,
            "dBm/nm" | "dbm/nm" => Unit::DbmPerNm,
            "s" | "sec" => Unit::Second,
            "ms" => Unit::Millisecond,
            "min" => Unit::Minute,
            "h" | "hours" => Unit::Hour,
            "V" | "volt" | "Volt" | "volts" | "Volts" => Unit::Volt,
            "mV" => Unit::Millivolt,
            "A" => Unit::Ampere,
            "mA" => Unit::Milliampere,
            "uA" => Unit::Microampere,
            "nA" => Unit::Nanoampere,
            "pA" => Unit::Picoampere,
            "Hz" => Unit::Hertz,
            "kHz" => Unit::Kilohertz,
            "MHz" => Unit::Megahertz,
            "GHz" => Unit::Gigahertz,
            "°C" | "C" | "degC" => Unit::Celsius,
            "K" => Unit::Kelvin,
            _ => return None,
        })
    }

    /// The power of ten from this unit to the one that is kept: nm, A/W, 1, W, W/nm, s, V, A, Hz; 0 for levels,
    /// temperatures and what is no power of ten apart.
    pub(super) fn power_of_ten(self) -> i32 {
        match self {
            Unit::Gigahertz => 9,
            Unit::Megahertz => 6,
            Unit::Micrometre | Unit::Kilohertz => 3,
            Unit::MilliamperePerWatt
            | Unit::Milliwatt
            | Unit::MilliwattPerNm
            | Unit::Millisecond
            | Unit::Millivolt
            | Unit::Milliampere => -3,
            Unit::Microwatt | Unit::MicrowattPerNm | Unit::Microampere => -6,
            Unit::Nanowatt | Unit::NanowattPerNm | Unit::Nanoampere => -9,
            Unit::Picowatt | Unit::Picoampere => -12,
            Unit::Percent => -2,
            _ => 0,
        }
    }

    /// What is left to multiply by after the power of ten.
    pub(super) fn factor(self) -> f64 {
        match self {
            Unit::Minute => 60.0,
            Unit::Hour => 3600.0,
            _ => 1.0,
        }
    }

    /// Recognises a unit as it is written in tables of wavelengths; `None` for anything else.
    pub(super) fn written(text: &str) -> Option<Unit> {
        Some(match plain(text)?.as_str() {
            "nm" | "NM" => Unit::Nanometre,
            "um" | "micron" | "microns" => Unit::Micrometre,
            "A/W" | "a/w" | "A.W-1" | "AW-1" | "mA/mW" | "uA/uW" => Unit::AmperePerWatt,
            "mA/W" | "ma/w" | "mA.W-1" | "mAW-1" | "uA/mW" => Unit::MilliamperePerWatt,
            "1" => Unit::One,
            "%" | "percent" | "Percent" | "pct" => Unit::Percent,
            "dB" | "db" | "DB" => Unit::Decibel,
            _ => return None,
        })
    }
}

/// A unit with one spelling for each of its signs.
fn plain(text: &str) -> Option<String> {
    let text = text.trim();
    // The longest spelling has seven characters; a long cell need not be copied to be refused.
    if text.is_empty() || text.len() > 16 {
        return None;
    }
    let one_spelling = |c| match c {
        'μ' | 'µ' => 'u',
        '·' | '*' | '⋅' => '.',
        '⁻' | '−' => '-',
        '¹' => '1',
        other => other,
    };
    Some(text.chars().filter(|c| !c.is_whitespace() && *c != '^').map(one_spelling).collect())
}

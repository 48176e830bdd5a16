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
            Role::Ignored => &[],
        }
    }
}

impl Unit {
    /// Recognises a unit as it is written in tables; `None` for anything else.
    pub(super) fn written(text: &str) -> Option<Unit> {
        let text = text.trim();
        // The longest spelling below has seven characters; a long cell need not be copied to be refused.
        if text.is_empty() || text.len() > 16 {
            return None;
        }
        let plain: String = text
            .chars()
            .filter(|c| !c.is_whitespace() && *c != '^')
            .map(|c| match c {
                'μ' | 'µ' => 'u',
                '·' | '*' | '⋅' => '.',
                '⁻' | '−' => '-',
                '¹' => '1',
                other => other,
            })
            .collect();
        Some(match plain.as_str() {
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

//! Tables in and out: a certificate or a responsivity curve as a file, a drop, or cells pasted from a
//! spreadsheet.
//!
//! The same few steps for both kinds, one file each: the text is cut into rows (`rows`), the header and the
//! columns are recognised (`layout`, `words`), the decimal mark is decided from the whole table (`mark`), and
//! each cell is read (`cell`). Everything that was decided is said in [`Reading`] and can be overruled by
//! [`Choices`]; nothing is decided by how plausible a value looks.

mod cell;
mod certificate;
mod choices;
mod columns;
mod coverage;
mod date;
mod dcc;
mod gains;
mod layout;
mod log;
mod mark;
mod measured;
mod names;
mod points;
mod reading;
mod responsivity;
mod rows;
mod sheet;
mod spectrum;
mod table;
mod time;
mod transfer;
mod words;
mod write;
mod write_measured;

pub use certificate::{CertificateTable, read_certificate};
pub use choices::{Choices, ColumnChoice};
pub use date::is_date;
pub use dcc::{BadPoint, DccCertificate, DccQuantity, DccReading, QuantityKind, Taken, read_dcc, write_dcc};
pub use gains::{GainsTable, NoiseFactorsTable, read_gains, read_noise_factors};
pub use log::{LogChoices, LogReading, LogRow, LogStream, Refused, SettingFrom, Shows, StatusWord, Times};
pub use measured::{BANDWIDTHS, BREAKDOWNS, CURRENTS, MeasuredKind, MeasuredTable, NOISES, read_measured};
pub use names::{DecimalMark, Delimiter, Role, Unit};
pub use reading::{BadRow, Column, Reading};
pub use responsivity::{ResponsivityTable, read_responsivity};
pub use spectrum::{SpectrumTable, read_spectrum, spectrum_layout};
pub use transfer::{Comparison, ReadBlock, comparison_layout, read_comparison};
pub use write::{
    number_text, remark, write_certificate_points, write_gain_points, write_noise_factor_points,
    write_responsivity_points, write_spectrum_points,
};
pub use write_measured::write_measurements;

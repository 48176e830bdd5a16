//! Digital calibration certificates: the open format of the German national metrology institute, read and written.
//!
//! A certificate is XML in two vocabularies: `dcc` says who calibrated what, when and how, and `si` (D-SI) holds the
//! numbers with their units and uncertainties. There is no agreed vocabulary for spectral responsivity, so a file is
//! read in two steps: all quantities are listed, a guess is made from units and names, and a person confirms it by
//! choosing. Versions 2.4 to 3.3 are read, with both ways of writing an uncertainty; 3.3.0 is written.
//!
//! Sources: the schemas of DCC 3.3.0 and D-SI 2.2.0 (public, by Physikalisch-Technische Bundesanstalt).

mod administration;
mod chosen;
mod points;
mod quantity;
mod read;
mod series;
mod unit;
mod write;
mod xml;

pub use chosen::Taken;
pub use points::{BadPoint, DccCertificate};
pub use quantity::{DccQuantity, QuantityKind};
pub use read::{DccReading, read_dcc};
pub use write::write_dcc;

//! Logs: a power meter's readings over time, row by row, as long as they may be.
//!
//! A log arrives in slices of bytes. Its head is understood as a table is (`head`), then each row is cut (`cut`) and
//! read (`row`) by itself and forgotten again, so that the memory does not grow with the file. How the bytes were sliced
//! makes no difference to what is read.

mod choices;
mod columns;
mod cut;
mod head;
mod instant;
mod number;
mod preamble;
mod row;
mod status;
mod stream;

pub use choices::LogChoices;
pub use columns::Times;
pub use preamble::SettingFrom;
pub use row::{LogRow, Shows};
pub use status::StatusWord;
pub use stream::{LogReading, LogStream, Refused};

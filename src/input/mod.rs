//! Files in, [`Decoded`](crate::recording::Decoded) out: the one place where counts become mV.
//!
//! A format is one folder and one row of the table in [`formats`]; files are identified by content.
//! A reader never panics, never allocates past its limits, and never guesses a unit or a rate.

mod error;

pub use error::{At, Error, Fault};

//! The hub: one recording with everything computed from it, and the settings that made it.
//!
//! Left of a [`Case`] nothing knows paper; right of it nothing computes medicine.

mod analyse;
mod analysis;
mod table;

pub use analyse::{AnalyseError, SHORTEST};
pub use analysis::{Analysis, Case, Cut, Settings, Sinus, USUAL_HIGH_CUT, USUAL_LOW_CUT};
pub use table::{Entry, Row, rp_interval, table};

/// Stands on every sheet and in every output.
pub const CAUTION: &str = "Measured and marked automatically, not confirmed: for a qualified reader. \
     Not a diagnosis. Local protocols and licensed practice come first.";

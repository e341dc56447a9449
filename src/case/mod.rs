//! The hub: one recording with everything computed from it, and the settings that made it.
//!
//! Left of a [`Case`] nothing knows paper; right of it nothing computes medicine.

mod analysis;

pub use analysis::{Analysis, Case, Settings};

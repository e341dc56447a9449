//! `leadsheet`: digital 12-lead recordings of regular narrow-complex tachycardias, measured and
//! printed at true scale. It measures and suspects; it never diagnoses.
//!
//! The modules are rooms; each may import only from the rooms above it in this list
//! (`tests/architecture.rs` holds the rule).
#![warn(missing_docs)]

pub mod units;

pub mod lettering;
pub mod recording;

pub mod condition;
pub mod input;

pub mod beats;

pub mod average;

pub mod measure;

pub mod findings;

pub mod case;

pub mod report;
pub mod sheet;

pub mod pdf;

pub mod batch;

pub mod cli;

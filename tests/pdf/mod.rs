//! The PDF, from a page built by hand: scale, validity, text, looks.

mod archival;
mod document;
mod grid;
mod hostile;
mod metadata;
pub mod paths;
mod render;
mod sample;
mod scale;
mod structure;

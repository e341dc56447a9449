//! The PDF, from a page built by hand: scale, validity, text, looks.

mod document;
mod paths;
mod render;
mod sample;
mod scale;

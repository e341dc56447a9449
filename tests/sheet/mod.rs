//! The sheet: layouts and composition.

mod arrangement;
mod geometry;
mod golden;
mod layout;
mod names;
mod parts;
mod scale;

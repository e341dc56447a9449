//! The sheet: layouts and composition.

mod arrangement;
mod geometry;
mod golden;
mod layout;
mod parts;
mod scale;

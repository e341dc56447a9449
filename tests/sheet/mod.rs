//! The sheet: layouts and composition.

mod layout;

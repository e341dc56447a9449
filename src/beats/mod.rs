//! Where the beats are, which of them are alike, and whether they come regularly.

mod rhythm;

pub use rhythm::{Beat, Beats, ClassId, Rhythm, RrRange, WhyUncertain};

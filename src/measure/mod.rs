//! Intervals, axes and amplitudes, each a value or the reason why there is none.

mod measured;
mod measurements;

pub use measured::{Measured, Reading, Reason};
pub use measurements::{Amplitudes, BeatMarks, LeadMarks, Measurements, Wave};

//! Units as types: every quantity that crosses a room's border carries its unit.
//!
//! All of them are finite; NaN and infinity cannot be built. A length on paper comes from a
//! signal only as [`Seconds`] × [`PaperSpeed`] or [`Millivolts`] × [`Gain`].

mod quantity;
mod sampling;

pub use quantity::{Degrees, Gain, Hertz, Millimetres, Millivolts, PaperSpeed, PerMinute, Seconds};
pub use sampling::{SampleIndex, SampleRate, Span, Spans};

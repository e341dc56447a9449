//! One representative beat per class, with the beats that made it and the noise left in it.

mod representative;

pub use representative::{LeftOut, RepresentativeBeat, WhyLeftOut};

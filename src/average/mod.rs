//! One representative beat per class, with the beats that made it and the noise left in it.
//!
//! The mean of mean and median over the class: the mean lowers the noise, the median keeps a single
//! odd beat out. Each beat is blanked where its neighbours' QRS begin, or in a fast rhythm the
//! average would show them smeared.

mod representative;

pub use representative::{LeftOut, RepresentativeBeat, WhyLeftOut, representative, representative_of};

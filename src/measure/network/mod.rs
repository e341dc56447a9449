//! A small network that marks a representative beat in all leads at once.
//!
//! A residual network that reads the beat at 125 samples per second and coarser and comes back (after
//! Ronneberger et al. 2015), the same for every lead; the mean over the leads is mixed in at the coarse
//! levels, so that leads agree on what is there and each keeps its own marks. Each mark is the mean of a
//! distribution over time. It was trained on the annotated beats of LUDB and the QT Database; the training
//! is `tests/training`.

mod forward;
mod layers;
mod weights;
mod window;

pub use forward::{Estimate, Seen, replace, see};
pub use window::{FIDUCIAL, LENGTH, RATE, windows};

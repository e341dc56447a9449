//! Filtering, as two separate values: one chain for display, one for measurement.
//!
//! [`Conditioned`] owns the chain that made it, so a filtered trace can't be drawn without its
//! legend. All filters are zero-phase biquad sections; nothing is resampled here.

mod chain;

pub use chain::{Conditioned, FilterChain};

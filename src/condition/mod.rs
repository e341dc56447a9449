//! Filtering, as two separate values: one chain for display, one for measurement.
//!
//! [`Conditioned`] owns the chain that made it, so a filtered trace can't be drawn without its
//! legend. All filters are biquad sections run forward and backward, so their phase is zero;
//! nothing is resampled here.

mod chain;
mod zero_phase;

pub use chain::{ChainError, Conditioned, FilterChain, MEASUREMENT};

use crate::recording::{Extra, Recording, Samples};
use crate::units::SampleRate;
use zero_phase::ZeroPhase;

/// Runs every lead of a recording through a chain; each stretch between gaps on its own.
///
/// # Errors
/// When a corner can't be realised at the recording's rate.
pub fn apply(recording: &Recording, chain: FilterChain) -> Result<Conditioned, ChainError> {
    let filter = ZeroPhase::design(chain, recording.rate)?;
    let filtered = |samples: &Samples| {
        let mut values = samples.values_with_gaps().to_vec();
        for (start, run) in samples.runs() {
            filter.run(&mut values[start..start + run.len()]);
        }
        samples.with_values(values)
    };
    Ok(Conditioned {
        chain,
        rate: recording.rate,
        leads: recording.leads.map(|_, channel| channel.samples().map(filtered)),
        extra: recording
            .extra
            .iter()
            .map(|extra| Extra { name: extra.name.clone(), samples: filtered(&extra.samples) })
            .collect(),
    })
}

/// Runs bare values through a chain in place, as one stretch without gaps.
///
/// # Errors
/// When a corner can't be realised at `rate`.
pub fn run(chain: FilterChain, rate: SampleRate, values: &mut [f64]) -> Result<(), ChainError> {
    ZeroPhase::design(chain, rate)?.run(values);
    Ok(())
}

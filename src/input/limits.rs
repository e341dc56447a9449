//! Counts above which nothing is read, whatever the format.

use super::Fault;

/// Signals of one recording; those from a body hold a few dozen.
pub(super) const MAX_SIGNALS: u64 = 256;

/// Samples of all signals together: 1 GiB as mV.
pub(super) const MAX_SAMPLES: u64 = 1 << 27;

/// Samples that may be stated as missing beside `held` samples that a file holds: nothing backs them, so a
/// few bytes must not ask for much memory. A day's gap beside two hours at the same rate is read.
pub(super) fn most_missing(held: u64) -> u64 {
    held.saturating_mul(16).saturating_add(1 << 22)
}

/// Refuses a count above `max`, before anything is allocated for it.
pub(super) fn at_most(max: u64, what: &'static str, found: u64) -> Result<(), Fault> {
    if found > max { Err(Fault::Limit { what, found, max }) } else { Ok(()) }
}

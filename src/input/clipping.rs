//! Where a converter stood at its limit.

use crate::units::{SampleRate, Spans};

/// Spans of counts at the converter's limits.
pub(super) fn spans(counts: &[i32], (lowest, highest): (i64, i64), _rate: SampleRate) -> Spans {
    Spans::of_true(counts.iter().map(|&count| i64::from(count) <= lowest || i64::from(count) >= highest))
}

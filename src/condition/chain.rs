//! The chain and what it made.

use crate::recording::{Extra, PerLead, Samples};
use crate::units::{Hertz, SampleRate};
use std::fmt;

/// The filters that were applied, in this order; `None` is off.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct FilterChain {
    /// High-pass corner (−3 dB over both passes).
    pub low_cut: Option<Hertz>,
    /// Low-pass corner (−3 dB over both passes).
    pub high_cut: Option<Hertz>,
    /// Mains rejection at this frequency.
    pub mains: Option<Hertz>,
}

/// The measurement chain: a 0.5 Hz zero-phase high-pass and nothing else. Up to 0.67 Hz is allowed
/// when the phase is zero (from memory of AHA/ACCF/HRS 2007, part I, doi 10.1161/CIRCULATIONAHA.106.180200);
/// what else a mark needs, the room that makes it smooths for itself.
pub const MEASUREMENT: FilterChain =
    FilterChain { low_cut: Some(Hertz::literal(0.5)), high_cut: None, mains: None };

/// A recording's leads behind one chain, in mV, with the gaps of the recording.
#[derive(Clone, Debug)]
pub struct Conditioned {
    /// What made it.
    pub chain: FilterChain,
    /// Samples per second, that of the recording.
    pub rate: SampleRate,
    /// The twelve leads; `None` where the recording has none.
    pub leads: PerLead<Option<Samples>>,
    /// The signals that are none of the twelve.
    pub extra: Vec<Extra>,
}

/// Why a chain can't be applied.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum ChainError {
    /// A corner lies too near to half the sampling rate, or above it.
    CornerTooHigh {
        /// The corner.
        corner: Hertz,
        /// Samples per second.
        rate: SampleRate,
    },
    /// The low cut is not below the high cut.
    Crossed {
        /// The low cut.
        low_cut: Hertz,
        /// The high cut.
        high_cut: Hertz,
    },
}

impl FilterChain {
    /// The highest corner that can be realised, as a fraction of the sampling rate (own choice: the
    /// bilinear transform squeezes what lies nearer to one half).
    pub const HIGHEST_CORNER: f64 = 0.45;

    /// Whether a corner can be realised at a rate.
    pub fn realises(corner: Hertz, rate: SampleRate) -> bool {
        corner.get() <= Self::HIGHEST_CORNER * rate.get()
    }
}

impl fmt::Display for ChainError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            ChainError::CornerTooHigh { corner, rate } => write!(
                f,
                "a filter corner of {} Hz can't be realised at {} samples per second; choose at most {:.0} Hz, or off",
                corner.get(),
                rate.get(),
                (FilterChain::HIGHEST_CORNER * rate.get()).floor()
            ),
            ChainError::Crossed { low_cut, high_cut } => write!(
                f,
                "the low cut of {} Hz is not below the high cut of {} Hz; choose a lower one, or off",
                low_cut.get(),
                high_cut.get()
            ),
        }
    }
}

impl std::error::Error for ChainError {}

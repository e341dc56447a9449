//! The chain and what it made.

use crate::recording::{Extra, PerLead, Samples};
use crate::units::{Hertz, SampleRate};

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

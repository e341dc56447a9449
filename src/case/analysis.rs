//! A recording, analysed.

use crate::average::RepresentativeBeat;
use crate::beats::Beats;
use crate::condition::{Conditioned, FilterChain};
use crate::findings::Findings;
use crate::measure::Measurements;
use crate::recording::Recording;

/// What a user may set and what is therefore part of the record.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Settings {
    /// The chain for the traces on the sheet.
    pub display: FilterChain,
}

/// What was computed from a recording, on the measurement chain.
#[derive(Clone, Debug)]
pub struct Analysis {
    /// The measurement chain.
    pub chain: FilterChain,
    /// Beats and rhythm.
    pub beats: Beats,
    /// The representative beat of the dominant class; `None` when no beat could be averaged.
    pub representative: Option<RepresentativeBeat>,
    /// Intervals, axes, amplitudes.
    pub measurements: Measurements,
    /// Suspected signs and observations.
    pub findings: Findings,
}

/// One recording with all that the sheet needs.
#[derive(Clone, Debug)]
pub struct Case {
    /// The recording.
    pub recording: Recording,
    /// What was set.
    pub settings: Settings,
    /// The traces for the sheet.
    pub display: Conditioned,
    /// What was computed.
    pub analysis: Analysis,
    /// The same patient's sinus recording, where one was given to compare with.
    pub sinus: Option<Box<Sinus>>,
}

/// A sinus recording that the case is compared with.
#[derive(Clone, Debug)]
pub struct Sinus {
    /// The recording.
    pub recording: Recording,
    /// What was computed from it.
    pub analysis: Analysis,
}

//! A recording, analysed.

use crate::average::RepresentativeBeat;
use crate::beats::Beats;
use crate::condition::{Conditioned, FilterChain};
use crate::findings::Findings;
use crate::measure::Measurements;
use crate::recording::Recording;
use crate::units::{Hertz, SampleRate};

/// What a user may set and what is therefore part of the record: the chain for the printed traces.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Settings {
    /// Low cut.
    pub low_cut: Cut,
    /// High cut.
    pub high_cut: Cut,
    /// Mains rejection; `None` is off.
    pub mains: Option<Hertz>,
}

/// One corner as set.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub enum Cut {
    /// The usual corner, or off where the sampling rate is too low for it.
    #[default]
    Default,
    /// No filter.
    Off,
    /// This corner.
    At(Hertz),
}

/// Usual low cut: zero phase distortion allows up to 0.67 Hz (from memory of AHA/ACCF/HRS 2007 part I).
pub const USUAL_LOW_CUT: Hertz = Hertz::literal(0.5);
/// Usual high cut for adults (from memory of the same).
pub const USUAL_HIGH_CUT: Hertz = Hertz::literal(150.0);

impl Settings {
    /// The display chain at a sampling rate.
    pub fn chain(&self, rate: SampleRate) -> FilterChain {
        let corner = |cut: Cut, usual: Hertz| match cut {
            Cut::Default => Some(usual).filter(|usual| FilterChain::realises(*usual, rate)),
            Cut::Off => None,
            Cut::At(corner) => Some(corner),
        };
        FilterChain {
            low_cut: corner(self.low_cut, USUAL_LOW_CUT),
            high_cut: corner(self.high_cut, USUAL_HIGH_CUT),
            mains: self.mains,
        }
    }
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

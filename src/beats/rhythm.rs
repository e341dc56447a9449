//! Beats and rhythm.

use crate::units::{SampleIndex, SampleRate, Seconds};
use std::fmt;

/// One class of beats of like shape; numbered from 0 in order of size.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct ClassId(pub usize);

/// One QRS.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Beat {
    /// The point that aligns it with the others of its class, inside its QRS.
    pub fiducial: SampleIndex,
    /// Its class.
    pub class: ClassId,
    /// Whether a pacing spike leads into it.
    pub paced: bool,
}

/// All beats of a recording, increasing in time and at least 200 ms apart.
#[derive(Clone, Debug, PartialEq)]
pub struct Beats {
    /// Samples per second that the indices count in.
    pub rate: SampleRate,
    /// In ascending order of fiducial.
    pub all: Vec<Beat>,
    /// The rhythm they make.
    pub rhythm: Rhythm,
    /// Pacing spikes, ascending.
    pub spikes: Vec<SampleIndex>,
}

/// The rhythm.
#[derive(Clone, Debug, PartialEq)]
pub enum Rhythm {
    /// RR intervals agree within the stated spread.
    Regular(RrRange),
    /// They don't.
    Irregular(RrRange),
    /// It can't be told.
    Uncertain(WhyUncertain),
}

/// RR intervals of a recording.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct RrRange {
    /// Arithmetic mean; 60 s over it is the ventricular rate.
    pub mean: Seconds,
    /// Median.
    pub median: Seconds,
    /// Shortest.
    pub min: Seconds,
    /// Longest.
    pub max: Seconds,
    /// How many intervals.
    pub count: usize,
}

/// Why the rhythm can't be told.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum WhyUncertain {
    /// Fewer than 4 beats.
    TooFewBeats(usize),
    /// Gaps hide beats.
    Gaps,
}

impl Beats {
    /// The members of a class, in order.
    pub fn of(&self, class: ClassId) -> impl Iterator<Item = &Beat> {
        self.all.iter().filter(move |beat| beat.class == class)
    }

    /// The class of the rhythm that the sheet is about: the largest.
    pub const DOMINANT: ClassId = ClassId(0);
}

impl fmt::Display for WhyUncertain {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            WhyUncertain::TooFewBeats(found) => write!(f, "{found} beats are too few to tell"),
            WhyUncertain::Gaps => write!(f, "gaps hide beats"),
        }
    }
}

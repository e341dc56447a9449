//! The representative beat.

use crate::beats::ClassId;
use crate::recording::PerLead;
use crate::units::{Millivolts, SampleIndex, SampleRate, Seconds};

/// The typical beat of a class, in every lead.
#[derive(Clone, Debug, PartialEq)]
pub struct RepresentativeBeat {
    /// Which class it stands for.
    pub class: ClassId,
    /// Samples per second.
    pub rate: SampleRate,
    /// Index of the fiducial in the samples of each lead.
    pub fiducial: SampleIndex,
    /// The beat, in mV, all leads of one length; `None` where the lead is absent.
    pub leads: PerLead<Option<Vec<f64>>>,
    /// Signals that are none of the twelve, in the recording's order.
    pub extra: Vec<Vec<f64>>,
    /// Beats used, as indices into the beats of the recording.
    pub used: Vec<usize>,
    /// Beats of the class that were not used.
    pub left_out: Vec<LeftOut>,
    /// Standard deviation of what is left of the noise in the average, per lead.
    pub residual_noise: PerLead<Option<Millivolts>>,
}

/// A beat that was not used.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct LeftOut {
    /// Index into the beats of the recording.
    pub beat: usize,
    /// Why.
    pub why: WhyLeftOut,
}

/// Why a beat was not used.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum WhyLeftOut {
    /// A gap or the end of the recording cuts it.
    Cut,
    /// It is too noisy.
    Noisy,
    /// It follows a premature beat, so its repolarisation differs.
    AfterEctopic,
}

impl RepresentativeBeat {
    /// The time of a sample of the beat, relative to its fiducial.
    pub fn time_of(&self, index: usize) -> Seconds {
        let offset = index as f64 - self.fiducial.0 as f64;
        Seconds::literal(offset / self.rate.get())
    }
}

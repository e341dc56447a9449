//! The twelve-lead recording.

use super::{Lead, Note, Occasion, PerLead, Samples, Source, Subject};
use crate::units::{SampleRate, Seconds};
use std::fmt;

/// One recording, with an answer for each of the twelve leads.
///
/// All leads share one rate and one length; the rate is 100 to 8000 per second.
#[derive(Clone, Debug)]
pub struct Recording {
    /// Where it came from.
    pub source: Source,
    /// Who was recorded.
    pub subject: Subject,
    /// When, where and how.
    pub occasion: Occasion,
    /// Samples per second of every lead.
    pub rate: SampleRate,
    /// Samples of every lead, gaps included.
    pub length: usize,
    /// The twelve leads, in mV.
    pub leads: PerLead<Channel>,
    /// ECG signals that are none of the twelve, in mV.
    pub extra: Vec<Extra>,
    /// What must be said about it.
    pub notes: Vec<Note>,
}

/// One lead's answer.
#[derive(Clone, Debug, PartialEq)]
pub enum Channel {
    /// As the source holds it.
    Recorded(Samples),
    /// Computed sample by sample from leads I and II.
    Derived(Samples),
    /// Not there.
    Absent(Absence),
}

/// Why a lead is absent.
#[derive(Clone, Debug, PartialEq)]
pub enum Absence {
    /// The source does not hold it, and it can't be derived.
    NotRecorded,
    /// The source holds nothing but one value.
    Flat,
    /// The source holds nothing but gaps.
    AllGaps,
    /// The source holds it at another rate than the leads that are shown.
    OtherRate(SampleRate),
}

/// An ECG signal that is none of the twelve leads.
#[derive(Clone, Debug, PartialEq)]
pub struct Extra {
    /// As the source names it.
    pub name: String,
    /// In mV.
    pub samples: Samples,
}

/// Why no recording can be made of what was decoded.
#[derive(Clone, Debug, PartialEq)]
pub enum Refusal {
    /// No signal is a potential.
    NoVoltage {
        /// What the signals measure instead.
        found: Vec<String>,
    },
    /// No signal has the name of a lead.
    NoKnownLead {
        /// The names found.
        found: Vec<String>,
    },
    /// Every lead is flat or gap.
    AllFlat,
    /// Sampled below 100 or above 8000 per second.
    RateOutOfRange(SampleRate),
    /// Two signals name the same lead.
    LeadTwice {
        /// Which lead.
        lead: Lead,
    },
}

impl Channel {
    /// The samples, in mV; `None` when absent.
    pub fn samples(&self) -> Option<&Samples> {
        match self {
            Channel::Recorded(samples) | Channel::Derived(samples) => Some(samples),
            Channel::Absent(_) => None,
        }
    }
}

impl Recording {
    /// From first to last sample.
    pub fn duration(&self) -> Seconds {
        self.rate.duration(self.length)
    }

    /// The samples of a lead, in mV; `None` when absent.
    pub fn samples(&self, lead: Lead) -> Option<&Samples> {
        self.leads[lead].samples()
    }

    /// The leads that are there, in standard order.
    pub fn present(&self) -> impl Iterator<Item = (Lead, &Samples)> {
        self.leads.iter().filter_map(|(lead, channel)| Some((lead, channel.samples()?)))
    }
}

impl fmt::Display for Absence {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Absence::NotRecorded => write!(f, "not recorded"),
            Absence::Flat => write!(f, "flat in the source"),
            Absence::AllGaps => write!(f, "nothing but gaps in the source"),
            Absence::OtherRate(rate) => write!(f, "sampled at {}/s, unlike the other leads", rate.get()),
        }
    }
}

impl fmt::Display for Refusal {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Refusal::NoVoltage { found } if found.is_empty() => {
                write!(f, "the recording holds no signal; check that it was copied whole")
            }
            Refusal::NoVoltage { found } => write!(
                f,
                "no signal is a potential (found {}); state the unit of the ECG signals in the source",
                found.join(", ")
            ),
            Refusal::NoKnownLead { found } => write!(
                f,
                "no signal has the name of a lead (found {}); name the signals I, II, III, aVR, aVL, aVF, V1 … V6 in the source",
                found.join(", ")
            ),
            Refusal::AllFlat => {
                write!(
                    f,
                    "every lead is flat or a gap, so there is nothing to show; check the recording at its source"
                )
            }
            Refusal::RateOutOfRange(rate) => write!(
                f,
                "sampled at {}/s; 100 to 8000 samples per second are needed: use a recording made at such a rate",
                rate.get()
            ),
            Refusal::LeadTwice { lead } => {
                write!(f, "two signals are named {lead}; rename one of them in the source")
            }
        }
    }
}

impl std::error::Error for Refusal {}

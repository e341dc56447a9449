//! What was searched for and what came of it.

use crate::recording::{Lead, PerLead, Weight};
use crate::units::{Degrees, Millivolts, PerMinute, Seconds};
use std::fmt;

/// Everything the findings room says of a recording.
#[derive(Clone, Debug, PartialEq)]
pub struct Findings {
    /// The search for a retrograde P.
    pub retrograde_p: Search,
    /// Regular narrow-complex tachycardias that start, end or run through.
    pub tachycardias: Vec<Tachycardia>,
    /// What else is worth a reader's look.
    pub observations: Vec<Observation>,
}

/// The outcome of a search.
#[derive(Clone, Debug, PartialEq)]
pub enum Search {
    /// It was made. An empty list of suspicions means "nothing separable", a normal result.
    Done(Box<SearchDone>),
    /// It was not made.
    NotDone(WhyNot),
}

/// A search that was made.
#[derive(Clone, Debug, PartialEq)]
pub struct SearchDone {
    /// Suspected signs, strongest first.
    pub suspected: Vec<Suspected>,
    /// Whether the same patient's sinus beat was taken from it.
    pub compared: bool,
    /// Whether a P stands before each QRS.
    pub p_before_qrs: PBefore,
    /// Onset of the suspected P after QRS onset; `None` when nothing is suspected or the onset lies inside the QRS.
    pub rp: Option<Seconds>,
    /// Error to be expected of `rp`, one standard deviation.
    pub rp_expected_error: Option<Seconds>,
    /// `rp` against the PR of the same beats.
    pub rp_class: Option<RpClass>,
    /// Onset in each lead where it can be told.
    pub rp_per_lead: PerLead<Option<Seconds>>,
    /// Polarity in each lead where it stands above the noise.
    pub polarity: PerLead<Option<Polarity>>,
    /// Frontal axis of the suspected P.
    pub p_axis: Option<Degrees>,
    /// Conditions that the recording met, each with its number and limit, as printed.
    pub gate: Vec<String>,
}

/// A suspected retrograde-P sign, for a reader to confirm.
#[derive(Clone, Debug, PartialEq)]
pub struct Suspected {
    /// Which sign.
    pub sign: Sign,
    /// Leads that show it, in standard order.
    pub leads: Vec<Lead>,
    /// Where it lies on the representative beat, from QRS onset: begin and end.
    pub span: (Seconds, Seconds),
    /// Onset from QRS onset; `None` only where it begins inside the QRS and can't be told.
    pub rp: Option<Seconds>,
    /// Largest amplitude over its leads, signed as in that lead.
    pub amplitude: Millivolts,
    /// Where it is seen best.
    pub clearest: Lead,
    /// How many beats show it.
    pub evidence: Evidence,
    /// Whether it can only be called against the same patient's sinus recording.
    pub needs_sinus_recording: bool,
    /// The criterion used, with its source, as printed.
    pub criterion: &'static str,
}

/// Beats showing of beats examined.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Evidence {
    /// Beats that show it.
    pub showing: usize,
    /// Beats that were looked at.
    pub examined: usize,
}

/// The signs searched for.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Sign {
    /// A positive deflection at the end of the QRS in V1 or aVR.
    TerminalRPrime,
    /// A negative deflection at the end of the QRS in II, III or aVF.
    TerminalS,
    /// A notch at the end of the QRS in aVL.
    NotchAvl,
    /// A P between the QRS and the end of T.
    PInStSegment,
    /// A P after T, nearer to the QRS before it or behind it.
    PAfterT,
}

/// Whether a P stands before each QRS.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum PBefore {
    /// Before each; with its PR.
    Each(Seconds),
    /// Before none that can be told.
    None,
}

/// RP against PR and the cut-offs.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum RpClass {
    /// RP is shorter than PR.
    Short,
    /// RP is longer than PR.
    Long,
    /// RP is 80 to 100 ms, or RP and PR can't be told apart.
    AtTheLimit,
}

/// Sign of a deflection.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[allow(missing_docs)]
pub enum Polarity {
    Positive,
    Negative,
    Biphasic,
}

/// Why the search was not made.
#[derive(Clone, Debug, PartialEq)]
pub enum WhyNot {
    /// The ventricular rate is not above 100/min.
    NotTachycardia(PerMinute),
    /// RR varies too much: spread of RR over its mean.
    Irregular {
        /// As a fraction of the mean.
        spread: f64,
    },
    /// The QRS is broad.
    BroadQrs(Seconds),
    /// The QRS duration could not be measured.
    QrsNotMeasurable,
    /// Too few beats.
    TooFewBeats {
        /// Needed.
        needed: usize,
        /// Found.
        found: usize,
    },
    /// Too noisy: residual noise of the representative beat.
    TooNoisy(Millivolts),
    /// Too few leads to tell a P from noise.
    TooFewLeads(usize),
    /// The rhythm is paced.
    Paced,
}

/// A regular narrow-complex tachycardia inside the recording.
#[derive(Clone, Debug, PartialEq)]
pub struct Tachycardia {
    /// QRS onset of its first beat; `None` when it was running at the start.
    pub start: Option<Seconds>,
    /// QRS onset of its last beat; `None` when it was running at the end.
    pub end: Option<Seconds>,
    /// Its rate.
    pub rate: PerMinute,
    /// Onset of the premature P that leads into it.
    pub premature_p: Option<Seconds>,
    /// From the P before to the premature P.
    pub coupling: Option<Seconds>,
    /// PR of the beat before.
    pub pr_before: Option<Seconds>,
    /// PR of the first beat.
    pub first_pr: Option<Seconds>,
    /// The last wave.
    pub ends_with: Option<WaveAtEnd>,
}

/// The last wave of a tachycardia.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[allow(missing_docs)]
pub enum WaveAtEnd {
    P,
    Qrs,
}

/// Something that is not a retrograde-P sign but worth a look.
#[derive(Clone, Debug, PartialEq)]
pub struct Observation {
    /// How much it matters to the reader.
    pub weight: Weight,
    /// What, in plain words.
    pub what: String,
    /// In which leads.
    pub leads: Vec<Lead>,
    /// Its number and unit, if it has one.
    pub value: Option<(f64, &'static str)>,
    /// How many beats show it, if it is a matter of beats.
    pub evidence: Option<Evidence>,
}

impl Sign {
    /// In plain words, as printed and as in the JSON.
    pub const fn name(self) -> &'static str {
        match self {
            Sign::TerminalRPrime => "terminal positive deflection",
            Sign::TerminalS => "terminal negative deflection",
            Sign::NotchAvl => "terminal notch",
            Sign::PInStSegment => "P in the ST segment or T wave",
            Sign::PAfterT => "P after the T wave",
        }
    }
}

impl fmt::Display for WhyNot {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            WhyNot::NotTachycardia(rate) => write!(f, "rate {:.0}/min is not above 100/min", rate.get()),
            WhyNot::Irregular { spread } => write!(f, "irregular: RR varies by {:.0} %", spread * 100.0),
            WhyNot::BroadQrs(qrs) => write!(f, "QRS of {:.0} ms is broad", qrs.ms()),
            WhyNot::QrsNotMeasurable => write!(f, "QRS duration not measurable"),
            WhyNot::TooFewBeats { needed, found } => write!(f, "{found} beats, {needed} needed"),
            WhyNot::TooNoisy(noise) => write!(f, "noise of {:.0} µV in the average", noise.get() * 1000.0),
            WhyNot::TooFewLeads(found) => write!(f, "{found} leads are too few"),
            WhyNot::Paced => write!(f, "paced rhythm"),
        }
    }
}

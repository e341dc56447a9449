//! From a recording to a case: each room once, in the order of the flow.

use super::{Analysis, Case, Settings, Sinus};
use crate::beats::{self, Beats, Channels};
use crate::condition::{self, ChainError, MEASUREMENT};
use crate::findings::Search;
use crate::measure::Reason;
use crate::recording::{Recording, Subject};
use crate::units::Seconds;
use crate::{average, findings, measure};
use std::fmt;

/// The least that is printed and measured: one column of a sheet at 25 mm/s.
pub const SHORTEST: Seconds = Seconds::literal(2.5);

/// Why a recording could not be analysed.
#[derive(Clone, Debug, PartialEq)]
pub enum AnalyseError {
    /// Shorter than [`SHORTEST`].
    TooShort(Seconds),
    /// The sinus recording is of another subject: name, number or birth date differ.
    OtherSubject(&'static str),
    /// A filter that the sampling rate doesn't allow.
    Chain(ChainError),
}

impl fmt::Display for AnalyseError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            AnalyseError::TooShort(found) => write!(
                f,
                "expected at least {} s, found {:.2} s; record longer, or use `leadsheet export`",
                SHORTEST.get(),
                found.get()
            ),
            AnalyseError::OtherSubject(what) => write!(
                f,
                "the {what} in the sinus recording is another one; compare recordings of one patient only"
            ),
            AnalyseError::Chain(error) => write!(f, "{error}"),
        }
    }
}

impl std::error::Error for AnalyseError {}

impl From<ChainError> for AnalyseError {
    fn from(error: ChainError) -> Self {
        AnalyseError::Chain(error)
    }
}

impl Case {
    /// Analyses a recording, and the same patient's sinus recording if there is one.
    ///
    /// # Errors
    /// When the recording is too short, or a filter doesn't fit its rate.
    pub fn analyse(
        recording: Recording,
        sinus: Option<Recording>,
        settings: Settings,
    ) -> Result<Self, AnalyseError> {
        if let Some(what) = sinus.as_ref().and_then(|sinus| contradiction(&recording.subject, &sinus.subject))
        {
            return Err(AnalyseError::OtherSubject(what));
        }
        let sinus = sinus
            .map(|sinus| {
                let analysis = analysis(&sinus, None)?;
                Ok::<_, AnalyseError>(Box::new(Sinus { recording: sinus, analysis }))
            })
            .transpose()?;
        let analysis = analysis(&recording, sinus.as_deref())?;
        let display = condition::apply(&recording, settings.chain(recording.rate))?;
        Ok(Self { recording, settings, display, analysis, sinus })
    }
}

/// What two subjects state and state differently.
fn contradiction(one: &Subject, other: &Subject) -> Option<&'static str> {
    fn differ<T: PartialEq>(one: &Option<T>, other: &Option<T>) -> bool {
        one.is_some() && other.is_some() && one != other
    }
    if differ(&one.id, &other.id) {
        Some("patient number")
    } else if differ(&one.birth_date, &other.birth_date) {
        Some("birth date")
    } else if differ(&one.name, &other.name) {
        Some("name")
    } else {
        None
    }
}

fn analysis(recording: &Recording, sinus: Option<&Sinus>) -> Result<Analysis, AnalyseError> {
    if recording.duration() < SHORTEST {
        return Err(AnalyseError::TooShort(recording.duration()));
    }
    let measured = condition::apply(recording, MEASUREMENT)?;
    let beats = beats::find(&measured);
    let spikes: Vec<usize> = beats.spikes.iter().map(|spike| spike.0).collect();
    let channels = Channels::of(&measured).bridged(&spikes);
    let representative = average::representative(&channels, &beats, Beats::DOMINANT);
    let measurements = measure::measure(&channels, &beats, representative.as_ref());
    let subject = findings::Subject {
        channels: &channels,
        beats: &beats,
        representative: representative.as_ref(),
        measurements: &measurements,
        standard_placement: recording.occasion.placement.is_none(),
    };
    let compared =
        sinus.and_then(|sinus| Some((sinus.analysis.representative.as_ref()?, &sinus.analysis.measurements)));
    let findings = findings::search(&subject, compared);
    // A wave that is suspected to belong to the beat before gives no PR of the beat behind it.
    let suspected = matches!(&findings.retrograde_p, Search::Done(done) if !done.suspected.is_empty());
    let measurements =
        if suspected { measurements.without_p(&Reason::RetrogradePSuspected) } else { measurements };
    Ok(Analysis { chain: MEASUREMENT, beats, representative, measurements, findings })
}

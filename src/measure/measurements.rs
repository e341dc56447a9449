//! All measurements of a recording.

use super::{Measured, Reason};
use crate::recording::PerLead;
use crate::units::{Degrees, Millivolts, PerMinute, Seconds};

/// What was measured, on the measurement chain.
#[derive(Clone, Debug, PartialEq)]
pub struct Measurements {
    /// 60 s over the mean RR.
    pub ventricular_rate: Measured<PerMinute>,
    /// Mean RR.
    pub rr: Measured<Seconds>,
    /// Global P onset to P offset.
    pub p_duration: Measured<Seconds>,
    /// Global P onset to QRS onset.
    pub pr: Measured<Seconds>,
    /// Global QRS onset to QRS offset.
    pub qrs: Measured<Seconds>,
    /// Global QRS onset to T offset.
    pub qt: Measured<Seconds>,
    /// QT / RR^½, both in s.
    pub qtc_bazett: Measured<Seconds>,
    /// QT / RR^⅓, both in s.
    pub qtc_fridericia: Measured<Seconds>,
    /// Frontal axis of P from net areas.
    pub p_axis: Measured<Degrees>,
    /// Frontal axis of QRS from net areas.
    pub qrs_axis: Measured<Degrees>,
    /// Frontal axis of T from net areas.
    pub t_axis: Measured<Degrees>,
    /// Global marks of each beat of the recording, in order.
    pub beats: Vec<BeatMarks>,
    /// Each lead's own marks, beat by beat as in `beats`; `None` where the lead is absent.
    pub lead_beats: PerLead<Option<Vec<LeadMarks>>>,
    /// Global marks of the representative beat, relative to its fiducial; `None` when there is none.
    pub representative: Option<BeatMarks>,
    /// Each lead's own marks on the representative beat, relative to its fiducial.
    pub lead_representative: PerLead<Option<LeadMarks>>,
    /// Amplitudes on the representative beat.
    pub amplitudes: PerLead<Option<Amplitudes>>,
    /// RMS noise of each lead between the waves, above 0.5 Hz.
    pub noise: PerLead<Option<Millivolts>>,
}

impl Measurements {
    /// The same without any P before the QRS, for `reason`.
    pub fn without_p(mut self, reason: &Reason) -> Self {
        self.p_duration = Measured::NotMeasurable(reason.clone());
        self.pr = Measured::NotMeasurable(reason.clone());
        self.p_axis = Measured::NotMeasurable(reason.clone());
        let leads = self.lead_beats.iter_mut().flatten().flatten().map(|lead| &mut lead.marks);
        for marks in self.beats.iter_mut().chain(&mut self.representative).chain(leads) {
            marks.p = None;
        }
        for lead in self.lead_representative.iter_mut().flatten() {
            lead.marks.p = None;
        }
        for amplitudes in self.amplitudes.iter_mut().flatten() {
            amplitudes.p = None;
        }
        self
    }
}

/// One wave's marks.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Wave {
    /// Where it begins; `None` where it can't be told (T only).
    pub onset: Option<Seconds>,
    /// Where it is largest.
    pub peak: Seconds,
    /// Where it ends.
    pub offset: Seconds,
}

/// The global marks of one beat.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct BeatMarks {
    /// Whether it is of the dominant class.
    pub dominant: bool,
    /// The P before the QRS.
    pub p: Option<Wave>,
    /// The QRS.
    pub qrs: Wave,
    /// The T.
    pub t: Option<Wave>,
}

/// One lead's marks of one beat, of the waves that the leads together show.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct LeadMarks {
    /// The same shape as the global marks.
    pub marks: BeatMarks,
    /// Whether P, QRS and T stand above this lead's noise.
    pub visible: [bool; 3],
}

/// Amplitudes of one lead on the representative beat, against the level at QRS onset.
/// `None` where the deflection is not there.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Amplitudes {
    /// Largest deflection of P.
    pub p: Option<Millivolts>,
    /// First negative deflection before an R.
    pub q: Option<Millivolts>,
    /// First positive deflection.
    pub r: Option<Millivolts>,
    /// First negative deflection after an R.
    pub s: Option<Millivolts>,
    /// Second positive deflection.
    pub r_prime: Option<Millivolts>,
    /// Level at QRS offset.
    pub j: Option<Millivolts>,
    /// Largest deflection of T.
    pub t: Option<Millivolts>,
}

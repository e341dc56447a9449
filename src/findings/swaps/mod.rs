//! Whether electrodes may have been swapped. A note for a reader, never a correction.
//!
//! The evidence is in how the leads of the representative beat resemble one another. Right electrodes on the wrong
//! side of the body, mirror-image hearts and some hypertrophies look alike, so nothing is ever turned back.

mod chest;
mod limb;

use super::{Observation, Subject};
use crate::average::RepresentativeBeat;
use crate::beats::Beats;
use crate::recording::{Lead, Weight};
use crate::units::Seconds;

/// Beats that an average must have (own choice: one odd beat must not decide).
const FEWEST_BEATS: usize = 3;
/// Least swing of a chest lead, in mV: below it noise would decide (own choice).
const SMALLEST: f64 = 0.1;
/// Where the end of T is not known, the beat is compared up to here behind QRS onset (own choice).
const WITHOUT_T: Seconds = Seconds::literal(0.400);

/// What the leads suggest, chest first: where their order is in doubt, nothing is said of the limb leads from them.
pub(super) fn suspected(subject: &Subject) -> Vec<Observation> {
    // Right-sided or other leads resemble one another in other ways.
    let Some(beat) = Some(subject).filter(|subject| subject.standard_placement).and_then(Beat::of) else {
        return Vec::new();
    };
    let chest = beat.chest();
    let swapped = chest.as_ref().and_then(chest::suspected);
    let limb = limb::near_flat(&beat).or_else(|| match (&swapped, &chest) {
        (None, Some(chest)) => limb::against_chest(&beat, chest, &subject.measurements.amplitudes),
        _ => None,
    });
    swapped.into_iter().chain(limb).collect()
}

/// The representative beat from QRS onset to the end of T.
struct Beat<'a> {
    average: &'a RepresentativeBeat,
    onset: usize,
    end: usize,
}

impl<'a> Beat<'a> {
    fn of(subject: &Subject<'a>) -> Option<Self> {
        let average = subject.representative.filter(|average| average.used.len() >= FEWEST_BEATS)?;
        // A paced ventricle is activated another way than the criteria are made for.
        let beats = subject.beats.of(Beats::DOMINANT);
        let (all, paced) =
            beats.fold((0, 0), |(all, paced), beat| (all + 1, paced + usize::from(beat.paced)));
        if paced * 2 > all {
            return None;
        }
        let marks = subject.measurements.representative.as_ref()?;
        let index = |time: Seconds| {
            let index = average.fiducial.0 as f64 + average.rate.samples(time);
            (index.round().max(0.0) as usize).clamp(average.valid.start, average.valid.end)
        };
        let onset = marks.qrs.onset?;
        let end = marks.t.map_or(onset + WITHOUT_T, |t| t.offset);
        let (onset, end) = (index(onset), index(end));
        (end > onset + 1).then_some(Self { average, onset, end })
    }

    /// A lead against its level at QRS onset.
    fn lead(&self, lead: Lead) -> Option<Vec<f64>> {
        let values = self.average.lead(lead)?.get(self.onset..self.end)?;
        let level = *values.first()?;
        Some(values.iter().map(|value| value - level).collect())
    }

    /// V1 to V6; `None` where one is absent or too small to tell.
    fn chest(&self) -> Option<[Vec<f64>; 6]> {
        let [v1, v2, v3, v4, v5, v6] = CHEST.map(|lead| self.lead(lead).filter(|v| swing(v) >= SMALLEST));
        Some([v1?, v2?, v3?, v4?, v5?, v6?])
    }
}

/// The chest leads in their order.
const CHEST: [Lead; 6] = [Lead::V1, Lead::V2, Lead::V3, Lead::V4, Lead::V5, Lead::V6];

fn swing(values: &[f64]) -> f64 {
    let (low, high) = values.iter().fold((0.0f64, 0.0f64), |(low, high), v| (low.min(*v), high.max(*v)));
    high - low
}

/// Correlation about the level at QRS onset, from −1 to 1; 0 where one of them is flat.
fn correlation(a: &[f64], b: &[f64]) -> f64 {
    let dot = super::linear::dot;
    let size = (dot(a, a) * dot(b, b)).sqrt();
    if size > 0.0 { dot(a, b) / size } else { 0.0 }
}

fn observation(what: &str, leads: &[Lead], value: f64, unit: &'static str) -> Observation {
    Observation {
        weight: Weight::Caution,
        what: what.to_owned(),
        leads: leads.to_vec(),
        value: Some(((value * 100.0).round() / 100.0, unit)),
        evidence: None,
    }
}

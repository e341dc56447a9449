//! Whether noise may have moved the marks.

use super::{Observation, Subject};
use crate::recording::Weight;

/// From this noise on, in µV RMS of a single beat in half of the leads, an interval may be off by 40 ms, one small box
/// at 25 mm/s. Own choice: muscle noise of the MIT-BIH Noise Stress Test Database, mixed into LUDB, moved none below 94 µV.
const DISTURBING_UV: f64 = 80.0;

/// A caution where noise is large, or where nothing tells how large it is.
pub(super) fn observed(subject: &Subject) -> Option<Observation> {
    subject.measurements.representative.as_ref()?;
    let noises =
        subject.measurements.noise.iter().filter_map(|(_, noise)| noise.map(|noise| noise.get() * 1000.0));
    let mut noises: Vec<f64> = noises.collect();
    let caution = |what: String, leads, value| Observation {
        weight: Weight::Caution,
        what,
        leads,
        value,
        evidence: None,
    };
    if noises.is_empty() {
        let what =
            "noise can't be told from a single beat: marks and intervals may be off by more than 40 ms";
        return Some(caution(what.to_owned(), Vec::new(), None));
    }
    let median = crate::beats::median(&mut noises);
    (median >= DISTURBING_UV).then(|| {
        let what = format!(
            "marks and intervals may be off by more than 40 ms, since noise in half of the leads is {DISTURBING_UV} µV or more"
        );
        caution(what, Vec::new(), Some((median.round(), "µV RMS")))
    })
}

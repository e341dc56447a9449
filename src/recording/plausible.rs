//! Whether the potentials are of the size that an ECG has. All limits here are own rules: they lie between
//! the swings of 1000 open recordings and those of the few among them whose headers state a wrong scale.

use super::{Lead, Note, PerLead, Samples};

/// With a chest lead, some lead swings by more than this, in mV; also at low voltage.
const SMALL: f64 = 0.6;

/// Without a chest lead.
const SMALL_LIMB: f64 = 0.25;

/// Half of the leads swing by less than this, in mV, rare spikes aside.
const LARGE: f64 = 4.0;

/// Fewer leads don't tell what is usual.
const ENOUGH_LEADS: usize = 6;

/// A caution when the scale of the source is likely wrong.
pub(super) fn note(leads: &PerLead<Option<&Samples>>) -> Option<Note> {
    let present: Vec<(Lead, &Samples)> =
        leads.iter().filter_map(|(lead, samples)| Some((lead, (*samples)?))).collect();
    let swings: Vec<f64> =
        present.iter().filter_map(|(_, samples)| samples.extremes()).map(|(low, high)| high - low).collect();
    let largest = swings.iter().copied().reduce(f64::max)?;
    let small = if present.iter().all(|(lead, _)| lead.is_limb()) { SMALL_LIMB } else { SMALL };
    if largest < small {
        return Some(Note::caution(format!(
            "potentials are unusually small (no lead swings by more than {largest:.2} mV): check the unit and gain in the source"
        )));
    }
    // The costly look is only taken where the plain swings are large.
    if present.len() < ENOUGH_LEADS || middle(swings)? < LARGE {
        return None;
    }
    let usual = middle(present.iter().filter_map(|(_, samples)| usual_swing(samples)).collect())?;
    (usual > LARGE).then(|| {
        Note::caution(format!(
            "potentials are unusually large (half of the leads swing by more than {usual:.1} mV): check the unit and gain in the source"
        ))
    })
}

fn middle(mut values: Vec<f64>) -> Option<f64> {
    let at = values.len() / 2;
    (!values.is_empty()).then(|| *values.select_nth_unstable_by(at, f64::total_cmp).1)
}

/// From the 0.5th to the 99.5th percentile of the valid samples.
fn usual_swing(samples: &Samples) -> Option<f64> {
    let mut values: Vec<f64> = samples.runs().flat_map(|(_, run)| run.iter().copied()).collect();
    values.sort_unstable_by(f64::total_cmp);
    let tail = values.len() / 200;
    Some(values.get(values.len().checked_sub(tail + 1)?)? - values.get(tail)?)
}

//! The limb leads that follow from I and II.

use super::{Lead, Samples};
use crate::units::Spans;

/// The four leads that are computed from I and II.
pub(super) const DEPENDENT: [Lead; 4] = [Lead::III, Lead::AVR, Lead::AVL, Lead::AVF];

/// A dependent limb lead, sample by sample where I and II are both valid; `None` for any other lead.
///
/// Both have one rate and one length.
pub(super) fn derive(lead: Lead, one: &Samples, two: &Samples) -> Option<Samples> {
    let (of_one, of_two) = weights(lead)?;
    let values = one.values_with_gaps().iter().zip(two.values_with_gaps());
    let values = values.map(|(one, two)| of_one * one + of_two * two).collect();
    let saturated: Spans = one.saturated().union(two.saturated());
    Some(Samples::new(one.rate(), values, one.gaps().union(two.gaps())).with_saturated(saturated))
}

/// III = II − I, aVR = −(I + II)/2, aVL = I − II/2, aVF = II − I/2 (Einthoven and Goldberger).
fn weights(lead: Lead) -> Option<(f64, f64)> {
    match lead {
        Lead::III => Some((-1.0, 1.0)),
        Lead::AVR => Some((-0.5, -0.5)),
        Lead::AVL => Some((1.0, -0.5)),
        Lead::AVF => Some((-0.5, 1.0)),
        _ => None,
    }
}

//! The order of the chest leads.

use super::super::Observation;
use super::{CHEST, correlation, observation};

/// Another order is suspected when it makes neighbours so much more alike, as a part of the unlikeness as recorded
/// (own choice on one half of LUDB; the other half and other recordings tell what it costs).
const MORE_ALIKE: f64 = 0.95;
/// Below this unlikeness there is nothing to gain: one lead on all six places has none (own choice).
const ALIKE: f64 = 0.02;

/// Neighbouring chest leads see the heart from neighbouring places, so their QRS-T correlate best in the right order
/// (Jekova, Krasteva and Abächerli, Computing in Cardiology 2013). Every exchange of two electrodes is tried.
pub(super) fn suspected(chest: &[Vec<f64>; 6]) -> Option<Observation> {
    let unlike = |order: [usize; 6]| -> f64 {
        order.windows(2).map(|pair| 1.0 - correlation(&chest[pair[0]], &chest[pair[1]])).sum()
    };
    let recorded = [0, 1, 2, 3, 4, 5];
    let as_recorded = unlike(recorded);
    if as_recorded < ALIKE {
        return None;
    }
    let exchanges = (0..6).flat_map(|first| (first + 1..6).map(move |second| (first, second)));
    let (first, second, least) = exchanges
        .map(|(first, second)| {
            let mut order = recorded;
            order.swap(first, second);
            (first, second, unlike(order))
        })
        .min_by(|a, b| a.2.total_cmp(&b.2))?;
    (least < MORE_ALIKE * as_recorded).then(|| {
        observation(
            "chest electrodes suspected swapped, for a reader to confirm (QRS-T of neighbours correlate better \
             when exchanged, Jekova 2013)",
            &[CHEST[first], CHEST[second]],
            (100.0 * least / as_recorded).round(),
            "% of the unlikeness as labelled",
        )
    })
}

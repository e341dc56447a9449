//! Beats showing of beats examined.

use super::Subject;
use super::background::dot;
use super::candidate::{Fit, Prepared};
use super::search::Evidence;
use super::window::{STEP, Window, thinned};

/// A beat shows the wave when its own fit along the wave's lead pattern is at least this part of the
/// average's (own choice: half, so that noise alone must be as large as half the wave to hide or to feign it).
const SHOWS: f64 = 0.5;

/// Asks each averaged beat for the wave that the average shows.
/// What was taken from the average, the sinus beat if there is one, is taken from each beat: `searched` is
/// `window` less that.
pub(super) fn count(
    subject: &Subject,
    window: &Window,
    searched: &Window,
    prepared: &Prepared,
    fit: &Fit,
) -> Evidence {
    let mut evidence = Evidence { showing: 0, examined: 0 };
    let Some(beat) = subject.representative else { return evidence };
    let rate = beat.rate;
    let pattern: f64 = fit
        .amplitudes
        .iter()
        .zip(&prepared.lead_weights)
        .map(|(amplitude, weight)| (amplitude * weight).powi(2))
        .sum();
    let energy = dot(&fit.shape, &fit.shape);
    for &index in &beat.used {
        let fiducial = subject.beats.all[index].fiducial.0 as f64;
        let start = fiducial + rate.samples(window.onset + window.start);
        let mut along = 0.0;
        let mut whole = true;
        for (place, lead) in window.leads.iter().enumerate() {
            let signal = subject.channels.names.iter().position(|name| *name == Some(*lead));
            let part = signal.and_then(|signal| {
                thinned(&subject.channels.signals[signal], start, rate.samples(STEP), window.len())
            });
            let Some(mut part) = part else {
                whole = false;
                break;
            };
            let taken = window.signals[place].iter().zip(&searched.signals[place]);
            part.iter_mut().zip(taken).for_each(|(value, (whole, rest))| *value -= whole - rest);
            let own = dot(&prepared.residual(&part), &fit.shape) / energy;
            along += own * fit.amplitudes[place] * prepared.lead_weights[place].powi(2);
        }
        if whole {
            evidence.examined += 1;
            evidence.showing += usize::from(along >= SHOWS * pattern);
        }
    }
    evidence
}

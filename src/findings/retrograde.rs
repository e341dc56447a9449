//! The search itself: one representative beat, with or without the same patient's sinus beat.

use super::Subject;
use super::background::{Background, Smoothness};
use super::candidate::{self, Atrial, Posterior};
use super::dipole::Expected;
use super::ordinary_p::{self, OrdinaryP};
use super::search::{PBefore, SearchDone};
use super::sinus::{self, Overlay};
use super::suspicion::{self, Given};
use super::window::{Curves, Window};
use crate::average::RepresentativeBeat;
use crate::beats::Rhythm;
use crate::measure::Measurements;
use crate::recording::PerLead;
use crate::units::Seconds;

/// All numbers of a search.
#[derive(Clone, Copy, Debug)]
pub(super) struct Model {
    pub smoothness: Smoothness,
    pub atrial: Atrial,
    /// Begin of the window, in ms: from QRS end without a sinus beat, from QRS onset with one.
    pub start: f64,
}

/// The window ends so long before the next QRS onset, in ms.
const END: f64 = 12.0;

/// A retrograde P points up, a little to the front (common practice: negative in II, III, aVF, positive in aVR
/// and usually V1); the spread leaves room for the free walls.
const DIPOLE: Expected = Expected { mean: [0.005, -0.074, -0.03], deviation: [0.03, 0.035, 0.03] };

/// Without a sinus beat. The numbers were chosen on beats made of LUDB subjects that no figure is reported on.
pub(super) const ALONE: Model = Model {
    smoothness: Smoothness {
        slow: 0.088,
        slow_scale: 33.0,
        quick: 0.034,
        quick_scale: 20.0,
        sideways: 0.015,
        noise: 0.006,
        jitter: 6.7,
    },
    atrial: Atrial { dipole: DIPOLE, rest: 0.007 },
    start: -4.0,
};

/// Against a sinus beat.
pub(super) const COMPARED: Model = Model {
    smoothness: Smoothness {
        slow: 0.028,
        slow_scale: 30.0,
        quick: 0.0077,
        quick_scale: 9.7,
        sideways: 0.16,
        noise: 0.0044,
        jitter: 0.82,
    },
    atrial: Atrial { dipole: DIPOLE, rest: 0.007 },
    start: 15.0,
};

/// What a beat is, beside its curves.
#[derive(Clone, Copy, Debug)]
pub(super) struct Cycle {
    /// QRS end from QRS onset, in ms.
    pub qrs_end: f64,
    /// In ms.
    pub rr: f64,
}

/// The outcome of a search.
pub(super) struct Weighed {
    pub retrograde: Posterior,
    pub ordinary: Option<OrdinaryP>,
}

/// Searches a beat; `None` when it leaves no window.
pub(super) fn weigh(
    curves: &Curves,
    cycle: Cycle,
    overlay: Option<&Overlay>,
    model: &Model,
) -> Option<Weighed> {
    let start = if overlay.is_some() { model.start } else { cycle.qrs_end + model.start };
    let window = curves.window(start, cycle.rr - END);
    if window.times.len() < 15 {
        return None;
    }
    let shape = curves.window(cycle.qrs_end, cycle.rr - END);
    let background = Background::of(&window, curves, &shape, &model.smoothness);
    let values = match overlay {
        None => window.values.clone(),
        Some(overlay) => {
            let factor = best_factor(&window, curves, cycle, overlay, &background, model)?;
            difference(&window, overlay, factor)
        }
    };
    let beat = background.turned_values(&values);
    let templates = candidate::templates(&window, &background, cycle.rr, true);
    let retrograde = candidate::weigh(&templates, &beat, &background, curves, &model.atrial)?;
    let any = ordinary_p::weigh(&window, &beat, &background, curves, cycle.rr);
    let known =
        overlay.and_then(|sinus| ordinary_p::weigh_known(&window, &beat, &background, sinus, cycle.rr));
    let ordinary = any.into_iter().chain(known).max_by(|a, b| a.evidence.total_cmp(&b.evidence));
    Some(Weighed { retrograde, ordinary })
}

fn difference(window: &Window, overlay: &Overlay, factor: f64) -> Vec<Vec<f64>> {
    let expected = overlay.at(&window.times, factor);
    window
        .values
        .iter()
        .zip(expected)
        .map(|(own, expected)| own.iter().zip(expected).map(|(own, expected)| own - expected).collect())
        .collect()
}

/// The factor under which the beat, with a P where one helps, is likeliest.
fn best_factor(
    window: &Window,
    curves: &Curves,
    cycle: Cycle,
    overlay: &Overlay,
    background: &Background,
    model: &Model,
) -> Option<f64> {
    let templates = candidate::templates(window, background, cycle.rr, false);
    overlay
        .factors(cycle.rr)
        .map(|factor| {
            let beat = background.turned_values(&difference(window, overlay, factor));
            let likelihood = background.log_likelihood(&beat);
            let evidence = candidate::weigh(&templates, &beat, background, curves, &model.atrial)
                .map_or(0.0, |posterior| posterior.evidence.max(0.0));
            (factor, likelihood + evidence)
        })
        .max_by(|a, b| a.1.total_cmp(&b.1))
        .map(|(factor, _)| factor)
}

/// Searches a recording that passed the gate, against the sinus beat and its measurements where they can be
/// compared.
pub(super) fn search(
    subject: &Subject,
    sinus: Option<(&RepresentativeBeat, &Measurements)>,
    gate: Vec<String>,
) -> SearchDone {
    let mut done = SearchDone {
        suspected: Vec::new(),
        compared: false,
        p_before_qrs: PBefore::None,
        rp: None,
        rp_expected_error: None,
        rp_class: None,
        rp_per_lead: PerLead::default(),
        polarity: PerLead::default(),
        p_axis: None,
        gate,
    };
    let marks = subject.measurements.representative.as_ref();
    let (Some(beat), Some(marks), Some(rr)) = (subject.representative, marks, median_rr(subject)) else {
        return done;
    };
    let qrs_onset = marks.qrs.onset.unwrap_or(marks.qrs.peak).ms() - LATE;
    let curves = Curves::of(beat, qrs_onset);
    let cycle = Cycle { qrs_end: marks.qrs.offset.ms() - qrs_onset, rr };
    let compared = sinus.and_then(|(beat, measurements)| {
        let onset = measurements.representative.as_ref()?.qrs.onset?;
        Some((Curves::of(beat, onset.ms() - LATE), sinus::Marks::of(measurements, LATE)?))
    });
    let overlay = compared
        .as_ref()
        .and_then(|(sinus, marks)| Overlay::of(&curves, cycle.qrs_end, sinus, marks))
        .filter(|overlay| overlay.likeness >= sinus::LEAST_LIKENESS);
    done.compared = overlay.is_some();
    let model = if done.compared { &COMPARED } else { &ALONE };
    let Some(weighed) = weigh(&curves, cycle, overlay.as_ref(), model) else { return done };
    // A measured P before the QRS is the better account of a late wave, unless the sinus beat says otherwise.
    let ordinary = !done.compared && marks.p.is_some() && weighed.retrograde.onset >= rr / 2.0;
    if !ordinary && suspicion::likely(&weighed, rr, done.compared) {
        let given = Given {
            subject,
            curves: &curves,
            qrs_onset,
            qrs_end: cycle.qrs_end,
            t_end: marks.t.as_ref().map(|t| t.offset.ms() - qrs_onset),
            rr,
            compared: done.compared,
        };
        suspicion::describe(&mut done, &given, &weighed.retrograde);
    }
    if done.suspected.is_empty() {
        let pr = subject.measurements.pr.value();
        let pr = pr.or_else(|| suspicion::ordinary(&weighed).and_then(Seconds::from_ms));
        done.p_before_qrs = pr.map_or(PBefore::None, PBefore::Each);
    }
    done
}

/// QRS onset is marked this much late, in ms, measured against readers on LUDB beats.
pub(super) const LATE: f64 = 2.0;

fn median_rr(subject: &Subject) -> Option<f64> {
    match &subject.beats.rhythm {
        Rhythm::Regular(range) | Rhythm::Irregular(range) => Some(range.median.ms()),
        Rhythm::Uncertain(_) => None,
    }
}

//! The search for a retrograde P in the tachycardia beat, alone or against the sinus beat.
//!
//! A wave of the size and lead pattern of a retrograde P must explain what a smooth ST segment and T
//! wave can't. Without the same patient's sinus beat a T wave can still pass for a P, so the threshold is
//! high, and what lies at the end of the QRS is only called a terminal deflection.

use super::Subject;
use super::candidate::{Fit, Prepared, fits};
use super::comparison::Sinus;
use super::evidence;
use super::search::{PBefore, Polarity, RpClass, SearchDone, Sign, Suspected};
use super::window::Window;
use crate::average::RepresentativeBeat;
use crate::measure::Measurements;
use crate::measure::frontal_axis;
use crate::recording::{Lead, PerLead};
use crate::units::{Millivolts, Seconds};

/// How much better the signals must be explained with the wave than without.
const GAIN: f64 = 0.8;
/// The same against the sinus beat, where the T wave is known.
const GAIN_COMPARED: f64 = 0.25;
/// Distance of the knots of the smooth background, alone and beside the sinus beat.
const KNOT: Seconds = Seconds::literal(0.075);
const KNOT_COMPARED: Seconds = Seconds::literal(0.090);
/// Least amplitude in the clearest of II, III and aVF, in mV.
const SMALLEST: f64 = 0.033;
/// A deflection of at least this counts in a lead (IEC 60601-2-25 annex FF.5: experts see 20 µV).
const SEEN: f64 = 0.020;
/// The searched stretch begins here before the end of the QRS and ends here before the next QRS.
const BEFORE_QRS_END: Seconds = Seconds::literal(0.012);
const TAIL: Seconds = Seconds::literal(0.090);
/// Errors to be expected of RP, one standard deviation: measured on built tachycardias, rounded up; the
/// beginning of a P inside the QRS is hardly known.
const ERROR_COMPARED: Seconds = Seconds::literal(0.006);
const ERROR_ALONE: Seconds = Seconds::literal(0.012);
const ERROR_AT_QRS_END: Seconds = Seconds::literal(0.020);
/// RP from 80 to 100 ms is at the limit: 90 ms is the cut-off (2015 ACC/AHA/HRS), and a P onset is
/// known to some 10 ms.
const LIMIT: (Seconds, Seconds) = (Seconds::literal(0.080), Seconds::literal(0.100));

/// Searches a recording that passed the gate.
pub(super) fn search(
    subject: &Subject,
    sinus: Option<(&RepresentativeBeat, &Measurements)>,
    gate: Vec<String>,
) -> SearchDone {
    let mut done = SearchDone {
        suspected: Vec::new(),
        compared: false,
        p_before_qrs: p_before(subject),
        rp: None,
        rp_expected_error: None,
        rp_class: None,
        rp_per_lead: PerLead::default(),
        polarity: PerLead::default(),
        p_axis: None,
        gate,
    };
    // A P before each QRS is the P of these beats; another one is not looked for without a sinus beat.
    if matches!(done.p_before_qrs, PBefore::Each(_)) {
        return done;
    }
    let Some(window) = Window::of(subject, BEFORE_QRS_END, TAIL) else { return done };
    let compared = sinus.and_then(|(beat, measured)| compare(subject, &window, beat, measured));
    done.compared = compared.is_some();
    let limit = if done.compared { GAIN_COMPARED } else { GAIN };
    let (searched, prepared, all) = compared.unwrap_or_else(|| {
        let prepared = Prepared::of(&window, &window, KNOT);
        let all = fits(&window, &prepared);
        (window.clone(), prepared, all)
    });
    let Some(best) = all.first() else { return done };
    if best.gain < limit || -amplitude(&window, best, Lead::AVF) < SMALLEST {
        return done;
    }
    let rp = mean_onset(&all);
    let evidence = evidence::count(subject, &window, &searched, &prepared, best);
    describe(&mut done, subject, &window, best, rp, evidence);
    done
}

type Searched = (Window, Prepared, Vec<Fit>);

/// The search on what is left when the sinus beat is taken away, at the warp that leaves least; `None`
/// when the beats are not comparable.
fn compare(
    subject: &Subject,
    window: &Window,
    beat: &RepresentativeBeat,
    measured: &Measurements,
) -> Option<Searched> {
    let sinus = Sinus::fit(window, subject.representative?, beat, measured)?;
    let mut least_without = f64::INFINITY;
    let mut best: Option<Searched> = None;
    for step in 0..=26 {
        let rest = sinus.taken_from(window, 1.0 + 0.06 * f64::from(step))?;
        let prepared = Prepared::of(&rest, window, KNOT_COMPARED);
        least_without = least_without.min(prepared.without(&rest));
        let all = fits(&rest, &prepared);
        let Some(first) = all.first() else { continue };
        if best.as_ref().is_none_or(|(_, _, known)| first.rest < known[0].rest) {
            best = Some((rest, prepared, all));
        }
    }
    let mut best = best?;
    // Against the best explanation without any wave, whatever its warp.
    for fit in &mut best.2 {
        fit.gain = (least_without - fit.rest) / fit.rest.max(1e-9);
    }
    Some(best)
}

fn p_before(subject: &Subject) -> PBefore {
    match subject.measurements.pr.value() {
        Some(pr) => PBefore::Each(pr),
        None => PBefore::None,
    }
}

fn amplitude(window: &Window, fit: &Fit, lead: Lead) -> f64 {
    window.leads.iter().position(|own| *own == lead).map_or(0.0, |index| fit.amplitudes[index])
}

/// The onset over all fits that are nearly as good as the best.
fn mean_onset(all: &[Fit]) -> Seconds {
    let best = all[0].gain;
    let (mut sum, mut total) = (0.0, 0.0);
    for fit in all.iter().take_while(|fit| fit.gain > 0.8 * best) {
        let near = (fit.onset - all[0].onset).abs() <= Seconds::literal(0.030);
        if near {
            let weight = (-(best - fit.gain) / (0.05 * best)).exp();
            sum += weight * fit.onset.get();
            total += weight;
        }
    }
    Seconds::new(sum / total).unwrap_or(all[0].onset)
}

fn describe(
    done: &mut SearchDone,
    subject: &Subject,
    window: &Window,
    fit: &Fit,
    rp: Seconds,
    evidence: super::Evidence,
) {
    let rr = subject.measurements.rr.value().unwrap_or(Seconds::ZERO);
    done.rp = Some(rp);
    let at_qrs_end = rp < window.qrs - Seconds::literal(0.008);
    let error = match (at_qrs_end, done.compared) {
        (true, _) => ERROR_AT_QRS_END,
        (false, true) => ERROR_COMPARED,
        (false, false) => ERROR_ALONE,
    };
    done.rp_expected_error = Some(error);
    let pr = rr - rp;
    done.rp_class = Some(if LIMIT.0 <= rp && rp <= LIMIT.1 || (rp - pr).abs() < error {
        RpClass::AtTheLimit
    } else if rp < pr {
        RpClass::Short
    } else {
        RpClass::Long
    });
    done.polarity = PerLead::from_fn(|lead| {
        let value = amplitude(window, fit, lead);
        (value.abs() >= SEEN).then_some(if value > 0.0 { Polarity::Positive } else { Polarity::Negative })
    });
    done.p_axis = frontal_axis(amplitude(window, fit, Lead::I), amplitude(window, fit, Lead::AVF));
    let span = (rp, rp + fit.duration);
    let seen = |leads: &[Lead], up: bool| -> Vec<Lead> {
        leads
            .iter()
            .copied()
            .filter(|&lead| {
                let value = amplitude(window, fit, lead);
                value.abs() >= SEEN && (value > 0.0) == up
            })
            .collect()
    };
    let mut add = |sign: Sign, leads: Vec<Lead>, needs_sinus_recording: bool, criterion: &'static str| {
        let size = |lead: &Lead| amplitude(window, fit, *lead);
        let Some(&clearest) = leads.iter().max_by(|a, b| size(a).abs().total_cmp(&size(b).abs())) else {
            return;
        };
        done.suspected.push(Suspected {
            sign,
            span,
            rp: Some(rp),
            amplitude: Millivolts::new(size(&clearest)).unwrap_or(Millivolts::ZERO),
            clearest,
            leads,
            evidence,
            needs_sinus_recording,
            criterion,
        });
    };
    let needs_sinus = !done.compared;
    if at_qrs_end {
        add(
            Sign::TerminalS,
            seen(&[Lead::II, Lead::III, Lead::AVF], false),
            needs_sinus,
            "terminal S in II, III, aVF, against sinus rhythm (Letsas 2010)",
        );
        add(
            Sign::TerminalRPrime,
            seen(&[Lead::V1, Lead::AVR], true),
            needs_sinus,
            "terminal r′ in V1 or aVR, against sinus rhythm (Letsas 2010, Hamid 2024)",
        );
        return;
    }
    let mut leads = seen(&[Lead::II, Lead::III, Lead::AVF], false);
    leads.extend(seen(&[Lead::AVR, Lead::AVL, Lead::V1], true));
    leads.sort();
    let (sign, criterion) = match window.t_end {
        Some(t_end) if rp > t_end => {
            (Sign::PAfterT, "P of retrograde pattern, down in II, III, aVF (common practice), after T")
        }
        _ => (
            Sign::PInStSegment,
            "P of retrograde pattern, down in II, III, aVF (common practice), in ST or T",
        ),
    };
    add(sign, leads, false, criterion);
}

//! From what was weighed to what is suspected.

use super::candidate::{Course, Posterior};
use super::dipole::derived;
use super::evidence::{self, Wave};
use super::retrograde::Weighed;
use super::search::{Evidence, Polarity, RpClass, SearchDone, Sign, Suspected};
use super::window::Curves;
use crate::measure::frontal_axis;
use crate::recording::{Lead, PerLead};
use crate::units::{Millivolts, Seconds};

/// Logarithms of the odds before looking: a retrograde P, and an ordinary one, against neither (own choice).
const RETROGRADE: f64 = -1.0;
const ORDINARY: f64 = -0.5;
/// From this logarithm of the odds on a P is suspected (own choice, where beats without a P of LUDB subjects that
/// no figure is reported on gave hardly any): for RP below half of RR and above it, where ordinary P waves lie.
const SUSPECTED: Threshold = Threshold { early: -0.5, late: 0.5 };
/// The same against a sinus beat.
const SUSPECTED_COMPARED: Threshold = Threshold { early: -2.0, late: 0.5 };
/// From this logarithm of the likelihood ratio on an ordinary P is said to stand before each QRS.
const STANDS_BEFORE: f64 = 3.0;
/// Least depth in aVF, in mV.
const SMALLEST: f64 = 0.030;
/// Least part of the beats that must show it.
const MOST_BEATS: f64 = 0.6;
/// A deflection of at least this counts in a lead, in mV (IEC 60601-2-25 annex FF.5: experts see 20 µV).
const SEEN: f64 = 0.020;
/// RP from 80 to 100 ms is at the limit: 90 ms is the cut-off (2015 ACC/AHA/HRS), and a P onset is known to
/// some 10 ms. In ms.
const LIMIT: (f64, f64) = (80.0, 100.0);
/// A P that begins so long before the end of the QRS, in ms, is a terminal deflection.
const INSIDE: f64 = 4.0;
/// Error of QRS onset, one standard deviation in ms, measured on built tachycardias; and the factor on the
/// model's own deviation that fits the errors found there.
const QRS_ONSET_ERROR: f64 = 3.0;
const DEVIATION: f64 = 0.9;

/// What a P was sought in, beside the beat itself.
pub(super) struct Given<'a> {
    pub subject: &'a super::Subject<'a>,
    pub curves: &'a Curves,
    /// QRS onset in ms from the fiducial.
    pub qrs_onset: f64,
    /// QRS end and T end in ms from QRS onset.
    pub qrs_end: f64,
    pub t_end: Option<f64>,
    pub rr: f64,
    pub compared: bool,
}

/// PR in ms of an ordinary P that stands before each QRS, as far as the search can tell.
pub(super) fn ordinary(weighed: &Weighed) -> Option<f64> {
    weighed.ordinary.filter(|p| p.evidence > STANDS_BEFORE).map(|p| p.pr)
}

struct Threshold {
    early: f64,
    late: f64,
}

/// Whether the beat itself speaks for a retrograde P.
pub(super) fn likely(weighed: &Weighed, rr: f64, compared: bool) -> bool {
    let rival = weighed.ordinary.map_or(0.0, |p| (p.evidence + ORDINARY).max(0.0));
    let odds = weighed.retrograde.evidence + RETROGRADE - rival;
    let threshold = if compared { SUSPECTED_COMPARED } else { SUSPECTED };
    odds > if weighed.retrograde.onset < rr / 2.0 { threshold.early } else { threshold.late }
}

/// Describes the P in `done`, if enough of the beats show it.
pub(super) fn describe(done: &mut SearchDone, given: &Given, found: &Posterior) {
    let potential = |lead: Lead| derived(lead, &given.curves.leads, &found.potentials);
    if potential(Lead::AVF).or(potential(Lead::II)).is_none_or(|depth| depth > -SMALLEST) {
        return;
    }
    let Some(average) = given.subject.representative else { return };
    let wave = Wave {
        course: Course { onset: found.onset, ..found.course },
        leads: &given.curves.leads,
        potentials: &found.potentials,
        qrs_onset: given.qrs_onset,
    };
    let evidence = evidence::count(given.subject.channels, given.subject.beats, average, &wave);
    if (evidence.showing as f64) < MOST_BEATS * evidence.examined as f64 || evidence.showing == 0 {
        return;
    }
    let rp = found.onset;
    let error = QRS_ONSET_ERROR.hypot(DEVIATION * found.deviation);
    done.rp = Seconds::from_ms(rp);
    done.rp_expected_error = Seconds::from_ms(error);
    done.rp_class = Some(class(rp, given.rr - rp, error));
    done.polarity = PerLead::from_fn(|lead| {
        let value = potential(lead).filter(|value| value.abs() >= SEEN)?;
        Some(if value > 0.0 { Polarity::Positive } else { Polarity::Negative })
    });
    done.p_axis = potential(Lead::I).zip(potential(Lead::AVF)).and_then(|(i, avf)| frontal_axis(i, avf));
    done.suspected = signs(given, found, evidence);
}

fn class(rp: f64, pr: f64, error: f64) -> RpClass {
    if (LIMIT.0..=LIMIT.1).contains(&rp) || (rp - pr).abs() < error {
        RpClass::AtTheLimit
    } else if rp < pr {
        RpClass::Short
    } else {
        RpClass::Long
    }
}

fn signs(given: &Given, found: &Posterior, evidence: Evidence) -> Vec<Suspected> {
    use Lead::{AVF, AVL, AVR, I, II, III, V1, V2};
    let potential = |lead: Lead| derived(lead, &given.curves.leads, &found.potentials);
    let rp = found.onset;
    let ms = |value: f64| Seconds::from_ms(value).unwrap_or(Seconds::ZERO);
    let sign = |sign: Sign, among: &[Lead], up: Option<bool>, criterion: &'static str| {
        let mut shown: Vec<(Lead, f64)> = among
            .iter()
            .filter_map(|lead| Some((*lead, potential(*lead)?)))
            .filter(|(_, value)| value.abs() >= SEEN && up.is_none_or(|up| (*value > 0.0) == up))
            .collect();
        shown.sort_by_key(|(lead, _)| *lead);
        let (clearest, amplitude) = shown.iter().copied().max_by(|a, b| a.1.abs().total_cmp(&b.1.abs()))?;
        let terminal = matches!(sign, Sign::TerminalRPrime | Sign::TerminalS | Sign::NotchAvl);
        Some(Suspected {
            sign,
            leads: shown.iter().map(|(lead, _)| *lead).collect(),
            span: (ms(rp), ms(rp + found.course.duration)),
            rp: Seconds::from_ms(rp),
            amplitude: Millivolts::new(amplitude)?,
            clearest,
            evidence,
            needs_sinus_recording: terminal && !given.compared,
            criterion,
        })
    };
    if rp < given.qrs_end - INSIDE {
        return [
            sign(
                Sign::TerminalS,
                &[II, III, AVF],
                Some(false),
                "terminal S in II, III, aVF, against sinus rhythm (Letsas 2010)",
            ),
            sign(
                Sign::TerminalRPrime,
                &[V1, AVR],
                Some(true),
                "terminal r′ in V1 or aVR, against sinus rhythm (Letsas 2010, Hamid 2024)",
            ),
            sign(Sign::NotchAvl, &[AVL], Some(true), "notch in aVL, against sinus rhythm (Di Toro 2009)"),
        ]
        .into_iter()
        .flatten()
        .collect();
    }
    let all = [I, II, III, AVR, AVL, AVF, V1, V2];
    let found = match given.t_end {
        Some(t_end) if rp > t_end => sign(
            Sign::PAfterT,
            &all,
            None,
            "P of retrograde pattern, down in II, III, aVF (common practice), after T",
        ),
        _ => sign(
            Sign::PInStSegment,
            &all,
            None,
            "P of retrograde pattern, down in II, III, aVF (common practice), in ST or T",
        ),
    };
    found.into_iter().collect()
}

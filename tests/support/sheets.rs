//! Sheets to look at: a case made by hand, whose analysis never changes, and cases of true recordings.

use leadsheet::average::RepresentativeBeat;
use leadsheet::beats::{Beat, Beats, ClassId, Rhythm, RrRange};
use leadsheet::case::{Analysis, Case, Cut, Settings};
use leadsheet::condition::{self, MEASUREMENT};
use leadsheet::findings::{Evidence, Findings, PBefore, Search, SearchDone, Sign, Suspected};
use leadsheet::measure::{BeatMarks, Measured, Measurements, Reading, Reason, Wave};
use leadsheet::recording::{
    Age, AgeOrigin, Decoded, Lead, Occasion, PerLead, Quantity, Recording, Samples, Sex, Signal, Source,
    Subject,
};
use leadsheet::units::{Degrees, Millivolts, PerMinute, SampleIndex, SampleRate, Seconds, Span, Spans};
use std::path::Path;

const RATE: SampleRate = SampleRate::new(500.0).unwrap();
/// Every beat of the case made by hand comes after this many samples.
const RR: usize = 200;

/// The settings that leave a recording as it is.
pub const UNFILTERED: Settings = Settings { low_cut: Cut::Off, high_cut: Cut::Off, mains: None };

/// Reads and analyses a recording.
pub fn case_of(path: &Path, settings: Settings) -> Case {
    let decoded = leadsheet::input::read(path).unwrap_or_else(|error| panic!("{error}"));
    let recording =
        Recording::from_decoded(decoded).unwrap_or_else(|error| panic!("{}: {error}", path.display()));
    Case::analyse(recording, None, settings).unwrap_or_else(|error| panic!("{}: {error}", path.display()))
}

/// One beat in mV, `t` in s from QRS onset: a QRS of 80 ms, a P at 120 ms, a T.
fn beat(t: f64, size: f64) -> f64 {
    let bump = |middle: f64, width: f64| (-((t - middle) / width).powi(2)).exp();
    size * (1.2 * bump(0.035, 0.010) - 0.35 * bump(0.060, 0.008) - 0.08 * bump(0.150, 0.015)
        + 0.25 * bump(0.270, 0.030))
}

fn size(lead: Lead) -> f64 {
    0.3 + 0.12 * lead as usize as f64
}

/// Eight recorded leads of `seconds`, everything else about them stated.
pub fn recording_by_hand(seconds: f64) -> Recording {
    let count = RATE.count(Seconds::new(seconds).expect("finite"));
    let signals = Lead::INDEPENDENT
        .into_iter()
        .map(|lead| {
            let values = (0..count)
                .map(|n| {
                    // In whole microvolts, as a converter gives them.
                    let t = (n % RR) as f64 / RATE.get() - 0.06;
                    (beat(t, size(lead)) * 1000.0).round() / 1000.0
                })
                .collect();
            Signal {
                name: lead.name().to_owned(),
                quantity: Quantity::Voltage,
                resolution: Some(0.001),
                samples: Samples::new(RATE, values, Spans::none()),
            }
        })
        .collect();
    let decoded = Decoded {
        source: Source {
            file: "by-hand.hea".to_owned(),
            format: "wfdb",
            sha256: "0123456789abcdef".repeat(4),
        },
        signals,
        subject: Subject {
            name: Some("Łucja Żółtowska-Ďurić".to_owned()),
            id: Some("INVENTED-7".to_owned()),
            birth_date: None,
            sex: Some(Sex::Female),
            age: Some(Age { years: 34.0, origin: AgeOrigin::Stated }),
        },
        occasion: Occasion { manoeuvre: Some("Valsalva".to_owned()), ..Occasion::default() },
        notes: Vec::new(),
    };
    Recording::from_decoded(decoded).expect("a sound recording")
}

/// A case whose analysis is written here, not computed.
pub fn case_by_hand() -> Case {
    let recording = recording_by_hand(10.0);
    let display = condition::apply(&recording, UNFILTERED.chain(RATE)).expect("no filter");
    Case { analysis: analysis(&recording), recording, settings: UNFILTERED, display, sinus: None }
}

fn analysis(recording: &Recording) -> Analysis {
    let s = Seconds::literal;
    let fiducials: Vec<usize> = (0..recording.length / RR).map(|beat| beat * RR + 48).collect();
    let all: Vec<Beat> = fiducials
        .iter()
        .map(|&fiducial| Beat { fiducial: SampleIndex(fiducial), class: ClassId(0), paced: false })
        .collect();
    let range = RrRange { mean: s(0.4), median: s(0.4), min: s(0.398), max: s(0.402), count: all.len() - 1 };
    let leads: Vec<Lead> = recording.present().map(|(lead, _)| lead).collect();
    let signals = recording
        .present()
        .map(|(_, samples)| samples.values_with_gaps()[RR..2 * RR].to_vec())
        .collect::<Vec<_>>();
    let representative = RepresentativeBeat {
        class: ClassId(0),
        rate: RATE,
        fiducial: SampleIndex(48),
        valid: Span { start: 0, end: RR },
        names: leads.iter().map(|&lead| Some(lead)).collect(),
        residual_noise: vec![Some(Millivolts::literal(0.002)); leads.len()],
        signals,
        used: (0..all.len() - 1).collect(),
        left_out: Vec::new(),
    };
    let value = |ms: f64, spread: f64| {
        Measured::Value(Reading {
            value: s(ms / 1000.0),
            spread: Some(s(spread / 1000.0)),
            expected_error: Some(s(0.007)),
        })
    };
    let qrs = Wave { onset: Some(s(-0.036)), peak: s(0.0), offset: s(0.044) };
    let t = Wave { onset: None, peak: s(0.234), offset: s(0.290) };
    let marks = BeatMarks { dominant: true, p: None, qrs, t: Some(t) };
    let measurements = Measurements {
        ventricular_rate: Measured::Value(Reading::bare(PerMinute::literal(150.0))),
        rr: value(400.0, 2.0),
        p_duration: Measured::NotMeasurable(Reason::NoPBeforeQrs),
        pr: Measured::NotMeasurable(Reason::NoPBeforeQrs),
        qrs: value(80.0, 3.0),
        qt: value(326.0, 6.0),
        qtc_bazett: Measured::NotMeasurable(Reason::RateAbove(PerMinute::literal(120.0))),
        qtc_fridericia: Measured::NotMeasurable(Reason::RateAbove(PerMinute::literal(120.0))),
        p_axis: Measured::NotMeasurable(Reason::NoPBeforeQrs),
        qrs_axis: Measured::Value(Reading::bare(Degrees::literal(-12.0))),
        t_axis: Measured::NotMeasurable(Reason::BelowNoise { noise: Millivolts::literal(0.012) }),
        beats: Vec::new(),
        lead_beats: PerLead::default(),
        representative: Some(marks),
        lead_representative: PerLead::default(),
        amplitudes: PerLead::default(),
        noise: PerLead::from_fn(|lead| Millivolts::new(0.004 + 0.001 * lead as usize as f64)),
    };
    let suspected = |sign, leads: &[Lead], span: (f64, f64), amplitude, needs_sinus_recording| Suspected {
        sign,
        leads: leads.to_vec(),
        span: (s(span.0), s(span.1)),
        rp: Some(s(span.0)),
        amplitude: Millivolts::literal(amplitude),
        clearest: leads[0],
        evidence: Evidence { showing: 23, examined: 24 },
        needs_sinus_recording,
        criterion: "by hand",
    };
    let findings = Findings {
        retrograde_p: Search::Done(Box::new(SearchDone {
            compared: false,
            suspected: vec![
                suspected(Sign::PInStSegment, &[Lead::V1, Lead::III], (0.120, 0.180), -0.08, false),
                suspected(Sign::TerminalS, &[Lead::II], (0.085, 0.110), -0.05, true),
            ],
            p_before_qrs: PBefore::None,
            rp: Some(s(0.120)),
            rp_expected_error: Some(s(0.009)),
            rp_class: None,
            rp_per_lead: PerLead::default(),
            polarity: PerLead::default(),
            p_axis: None,
            gate: Vec::new(),
        })),
        tachycardias: Vec::new(),
        observations: Vec::new(),
    };
    let beats = Beats { rate: RATE, all, rhythm: Rhythm::Regular(range), spikes: Vec::new() };
    Analysis { chain: MEASUREMENT, beats, representative: Some(representative), measurements, findings }
}

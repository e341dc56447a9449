//! From a case to the JSON's shape.

use super::document::*;
use crate::beats::Rhythm;
use crate::case::{CAUTION, Case, rp_interval};
use crate::findings::{PBefore, Polarity, RpClass, Search, Suspected, Tachycardia, WaveAtEnd};
use crate::measure::{Amplitudes, BeatMarks, LeadMarks, Measured, Measurements, Wave};
use crate::recording::{Channel, Lead, PerLead, Recording};
use crate::units::{Degrees, Millivolts, PerMinute, Seconds};

impl Document {
    /// The document of a case.
    pub fn of(case: &Case) -> Self {
        let analysis = &case.analysis;
        Document {
            schema: SCHEMA,
            program: Program { name: env!("CARGO_PKG_NAME"), version: env!("CARGO_PKG_VERSION") },
            recording: recorded(case),
            rhythm: rhythm(case),
            measurements: values(&analysis.measurements, &analysis.findings.retrograde_p),
            beats: analysis.measurements.beats.iter().map(|beat| beat_out(beat, None)).collect(),
            leads: leads(&analysis.measurements),
            tachycardias: analysis.findings.tachycardias.iter().map(tachycardia).collect(),
            retrograde_p: retrograde(case),
            observations: analysis
                .findings
                .observations
                .iter()
                .map(|seen| ObservationOut {
                    what: seen.what.clone(),
                    leads: names(&seen.leads),
                    value: seen.value.map(|(value, _)| rounded(value, 4)),
                    unit: seen.value.map(|(_, unit)| unit),
                    beats_showing: seen.evidence.map(|evidence| evidence.showing),
                    beats_examined: seen.evidence.map(|evidence| evidence.examined),
                })
                .collect(),
            caution: CAUTION,
        }
    }
}

fn rounded(value: f64, decimals: i32) -> f64 {
    let scale = 10f64.powi(decimals);
    (value * scale).round() / scale
}

fn time(seconds: Seconds) -> f64 {
    rounded(seconds.get(), 5)
}

fn ms(seconds: Seconds) -> f64 {
    rounded(seconds.ms(), 2)
}

fn mv(value: Millivolts) -> f64 {
    rounded(value.get(), 4)
}

fn names(leads: &[Lead]) -> Vec<&'static str> {
    leads.iter().map(|lead| lead.name()).collect()
}

fn recorded(case: &Case) -> Recorded {
    let recording: &Recording = &case.recording;
    let chain = case.analysis.chain;
    Recorded {
        file: recording.source.file.clone(),
        sha256: recording.source.sha256.clone(),
        format: recording.source.format,
        sampling_rate_hz: recording.rate.get(),
        duration_s: time(recording.duration()),
        leads: recording
            .leads
            .iter()
            .map(|(lead, channel)| {
                let (origin, reason) = match channel {
                    Channel::Recorded(_) => ("recorded", None),
                    Channel::Derived(_) => ("derived", None),
                    Channel::Absent(why) => ("absent", Some(why.to_string())),
                };
                LeadOrigin { name: lead.name(), origin, reason }
            })
            .collect(),
        other_signals: recording.extra.iter().map(|extra| extra.name.clone()).collect(),
        measurement_filters_hz: Filters {
            low_cut: chain.low_cut.map(|hertz| hertz.get()),
            high_cut: chain.high_cut.map(|hertz| hertz.get()),
            mains: chain.mains.map(|hertz| hertz.get()),
        },
        notes: recording.notes.iter().map(|note| note.text.clone()).collect(),
    }
}

fn rhythm(case: &Case) -> RhythmOut {
    let beats = &case.analysis.beats;
    let (regular, reason, rr) = match &beats.rhythm {
        Rhythm::Regular(rr) => (Some(true), None, Some(rr)),
        Rhythm::Irregular(rr) => (Some(false), None, Some(rr)),
        Rhythm::Uncertain(why) => (None, Some(why.to_string()), None),
    };
    RhythmOut {
        regular,
        reason,
        rr_ms: rr.map(|rr| RrOut { median: ms(rr.median), min: ms(rr.min), max: ms(rr.max) }),
        beats_found: beats.all.len(),
        beats_averaged: case.analysis.representative.as_ref().map_or(0, |beat| beat.used.len()),
    }
}

fn value_out<T: Copy>(measured: &Measured<T>, unit: &'static str, number: impl Fn(T) -> f64) -> ValueOut {
    match measured {
        Measured::Value(reading) => {
            let expected_error = reading.expected_error.map(&number);
            let spread = reading.spread.map(&number);
            ValueOut::Value { value: number(reading.value), unit, spread, expected_error }
        }
        Measured::NotMeasurable(reason) => ValueOut::Reason { value: (), unit, reason: reason.to_string() },
    }
}

fn values(all: &Measurements, search: &Search) -> Values {
    let interval = |measured: &Measured<Seconds>| value_out(measured, "ms", ms);
    let axis =
        |measured: &Measured<Degrees>| value_out(measured, "deg", |axis: Degrees| rounded(axis.get(), 2));
    Values {
        ventricular_rate: value_out(&all.ventricular_rate, "1/min", |rate: PerMinute| rounded(rate.get(), 3)),
        rr: interval(&all.rr),
        p_duration: interval(&all.p_duration),
        pr: interval(&all.pr),
        qrs: interval(&all.qrs),
        qt: interval(&all.qt),
        qtc_bazett: interval(&all.qtc_bazett),
        qtc_fridericia: interval(&all.qtc_fridericia),
        p_axis: axis(&all.p_axis),
        qrs_axis: axis(&all.qrs_axis),
        t_axis: axis(&all.t_axis),
        rp: rp(search),
    }
}

fn rp(search: &Search) -> ValueOut {
    match rp_interval(search) {
        Ok((rp, error)) => {
            ValueOut::Value { value: ms(rp), unit: "ms", spread: None, expected_error: error.map(ms) }
        }
        Err(reason) => ValueOut::Reason { value: (), unit: "ms", reason },
    }
}

fn wave(wave: &Wave, visible: Option<bool>) -> WaveOut {
    WaveOut {
        onset_s: wave.onset.map(time),
        peak_s: time(wave.peak),
        offset_s: time(wave.offset),
        visible: visible.filter(|visible| !visible),
    }
}

fn beat_out(beat: &BeatMarks, visible: Option<[bool; 3]>) -> BeatOut {
    let seen = |index: usize| visible.map(|visible| visible[index]);
    BeatOut {
        kind: if beat.dominant { "dominant" } else { "other" },
        p: beat.p.as_ref().map(|p| wave(p, seen(0))),
        qrs: wave(&beat.qrs, seen(1)),
        t: beat.t.as_ref().map(|t| wave(t, seen(2))),
    }
}

fn leads(all: &Measurements) -> std::collections::BTreeMap<LeadKey, LeadOut> {
    let amplitudes = |found: &Amplitudes| AmplitudesOut {
        p: found.p.map(mv),
        q: found.q.map(mv),
        r: found.r.map(mv),
        s: found.s.map(mv),
        r_prime: found.r_prime.map(mv),
        j: found.j.map(mv),
        t: found.t.map(mv),
    };
    let beats = |marks: &Vec<LeadMarks>| {
        marks.iter().map(|beat| beat_out(&beat.marks, Some(beat.visible))).collect::<Vec<_>>()
    };
    all.lead_beats
        .iter()
        .filter_map(|(lead, marks)| {
            let out = LeadOut {
                beats: beats(marks.as_ref()?),
                amplitudes_mv: all.amplitudes[lead].as_ref().map(amplitudes).unwrap_or_default(),
                noise_mv: all.noise[lead].map(mv),
            };
            Some((LeadKey(lead), out))
        })
        .collect()
}

fn tachycardia(found: &Tachycardia) -> TachycardiaOut {
    TachycardiaOut {
        start_s: found.start.map(time),
        end_s: found.end.map(time),
        rate: rounded(found.rate.get(), 2),
        premature_p_s: found.premature_p.map(time),
        coupling_ms: found.coupling.map(ms),
        pr_before_ms: found.pr_before.map(ms),
        first_pr_ms: found.first_pr.map(ms),
        ends_with: found.ends_with.map(|wave| match wave {
            WaveAtEnd::P => "P",
            WaveAtEnd::Qrs => "QRS",
        }),
    }
}

fn finding(suspected: &Suspected) -> FindingOut {
    FindingOut {
        sign: suspected.sign.name(),
        leads: names(&suspected.leads),
        rp_ms: suspected.rp.map(ms),
        span_ms: [ms(suspected.span.0), ms(suspected.span.1)],
        amplitude_mv: mv(suspected.amplitude),
        beats_showing: suspected.evidence.showing,
        beats_examined: suspected.evidence.examined,
        needs_sinus_recording: suspected.needs_sinus_recording,
        criterion: suspected.criterion,
        status: "suspected",
    }
}

fn retrograde(case: &Case) -> RetrogradeOut {
    let mut out = RetrogradeOut {
        search: "not done",
        why_not: None,
        sinus_recording: None,
        findings: Vec::new(),
        rp_per_lead_ms: Default::default(),
        v1_minus_iii_ms: None,
        p_polarity: Default::default(),
        p_axis_deg: None,
        rp_class: None,
        expected_error_ms: None,
        p_before_qrs: None,
        conditions: Vec::new(),
    };
    let done = match &case.analysis.findings.retrograde_p {
        Search::NotDone(why) => {
            out.why_not = Some(why.to_string());
            return out;
        }
        Search::Done(done) => done,
    };
    let per_lead: &PerLead<Option<Seconds>> = &done.rp_per_lead;
    out.search = "done";
    out.sinus_recording =
        case.sinus.as_ref().filter(|_| done.compared).map(|sinus| sinus.recording.source.file.clone());
    out.findings = done.suspected.iter().map(finding).collect();
    out.rp_per_lead_ms = per_lead.iter().filter_map(|(lead, rp)| Some((LeadKey(lead), ms((*rp)?)))).collect();
    out.v1_minus_iii_ms =
        per_lead[Lead::V1].zip(per_lead[Lead::III]).map(|(v1, iii)| rounded(v1.ms() - iii.ms(), 2));
    out.p_polarity = done
        .polarity
        .iter()
        .filter_map(|(lead, polarity)| {
            let word = match (*polarity)? {
                Polarity::Positive => "positive",
                Polarity::Negative => "negative",
                Polarity::Biphasic => "biphasic",
            };
            Some((LeadKey(lead), word))
        })
        .collect();
    out.p_axis_deg = done.p_axis.map(|axis| rounded(axis.get(), 2));
    out.rp_class = done.rp_class.map(|class| match class {
        RpClass::Short => "short",
        RpClass::Long => "long",
        RpClass::AtTheLimit => "at the limit",
    });
    out.expected_error_ms = done.rp_expected_error.map(ms);
    out.p_before_qrs = Some(match done.p_before_qrs {
        PBefore::Each(_) => "before each QRS",
        PBefore::None => "none that can be told",
    });
    out.conditions = done.gate.clone();
    out
}

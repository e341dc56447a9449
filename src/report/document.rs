//! The shape of the JSON. A key that has no value is `null`; times are seconds from the first
//! sample, intervals ms, amplitudes mV, angles degrees in (−180, 180].

use serde::Serialize;
use std::collections::BTreeMap;

/// Name and number of the schema. The number rises when a key is renamed or dropped.
pub const SCHEMA: &str = "leadsheet-measurement/1";

/// The whole document.
#[derive(Debug, Serialize)]
pub struct Document {
    pub(super) schema: &'static str,
    pub(super) program: Program,
    pub(super) recording: Recorded,
    pub(super) rhythm: RhythmOut,
    pub(super) measurements: Values,
    pub(super) beats: Vec<BeatOut>,
    pub(super) leads: BTreeMap<LeadKey, LeadOut>,
    pub(super) tachycardias: Vec<TachycardiaOut>,
    pub(super) retrograde_p: RetrogradeOut,
    pub(super) observations: Vec<ObservationOut>,
    pub(super) caution: &'static str,
}

/// A lead name that sorts in standard order.
#[derive(Debug, PartialEq, Eq, PartialOrd, Ord)]
pub(super) struct LeadKey(pub(super) crate::recording::Lead);

impl Serialize for LeadKey {
    fn serialize<S: serde::Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.serialize_str(self.0.name())
    }
}

#[derive(Debug, Serialize)]
pub(super) struct Program {
    pub name: &'static str,
    pub version: &'static str,
}

#[derive(Debug, Serialize)]
pub(super) struct Recorded {
    pub file: String,
    pub sha256: String,
    pub format: &'static str,
    pub sampling_rate_hz: f64,
    pub duration_s: f64,
    pub leads: Vec<LeadOrigin>,
    pub other_signals: Vec<String>,
    pub measurement_filters_hz: Filters,
    pub notes: Vec<String>,
}

#[derive(Debug, Serialize)]
pub(super) struct Filters {
    pub low_cut: Option<f64>,
    pub high_cut: Option<f64>,
    pub mains: Option<f64>,
}

#[derive(Debug, Serialize)]
pub(super) struct LeadOrigin {
    pub name: &'static str,
    pub origin: &'static str,
    pub reason: Option<String>,
}

#[derive(Debug, Serialize)]
pub(super) struct RhythmOut {
    pub regular: Option<bool>,
    pub reason: Option<String>,
    pub rr_ms: Option<RrOut>,
    pub beats_found: usize,
    pub beats_averaged: usize,
}

#[derive(Debug, Serialize)]
pub(super) struct RrOut {
    pub median: f64,
    pub min: f64,
    pub max: f64,
}

/// One entry of `measurements`: a value with its spread, or `null` with the reason.
#[derive(Debug, Serialize)]
#[serde(untagged)]
pub(super) enum ValueOut {
    Value { value: f64, unit: &'static str, spread: Option<f64>, expected_error: Option<f64> },
    Reason { value: (), unit: &'static str, reason: String },
}

#[derive(Debug, Serialize)]
pub(super) struct Values {
    pub ventricular_rate: ValueOut,
    pub rr: ValueOut,
    pub p_duration: ValueOut,
    pub pr: ValueOut,
    pub qrs: ValueOut,
    pub qt: ValueOut,
    pub qtc_bazett: ValueOut,
    pub qtc_fridericia: ValueOut,
    pub p_axis: ValueOut,
    pub qrs_axis: ValueOut,
    pub t_axis: ValueOut,
    pub rp: ValueOut,
}

#[derive(Debug, Serialize)]
pub(super) struct BeatOut {
    pub kind: &'static str,
    pub p: Option<WaveOut>,
    pub qrs: WaveOut,
    pub t: Option<WaveOut>,
}

#[derive(Debug, Serialize)]
pub(super) struct WaveOut {
    pub onset_s: Option<f64>,
    pub peak_s: f64,
    pub offset_s: f64,
    #[serde(skip_serializing_if = "Option::is_none")]
    pub visible: Option<bool>,
}

#[derive(Debug, Serialize)]
pub(super) struct LeadOut {
    pub beats: Vec<BeatOut>,
    pub amplitudes_mv: AmplitudesOut,
    pub noise_mv: Option<f64>,
}

#[derive(Debug, Default, Serialize)]
pub(super) struct AmplitudesOut {
    pub p: Option<f64>,
    pub q: Option<f64>,
    pub r: Option<f64>,
    pub s: Option<f64>,
    pub r_prime: Option<f64>,
    pub j: Option<f64>,
    pub t: Option<f64>,
}

#[derive(Debug, Serialize)]
pub(super) struct TachycardiaOut {
    pub start_s: Option<f64>,
    pub end_s: Option<f64>,
    pub rate: f64,
    pub premature_p_s: Option<f64>,
    pub coupling_ms: Option<f64>,
    pub pr_before_ms: Option<f64>,
    pub first_pr_ms: Option<f64>,
    pub ends_with: Option<&'static str>,
}

#[derive(Debug, Serialize)]
pub(super) struct RetrogradeOut {
    pub search: &'static str,
    pub why_not: Option<String>,
    pub sinus_recording: Option<String>,
    pub findings: Vec<FindingOut>,
    pub rp_per_lead_ms: BTreeMap<LeadKey, f64>,
    pub v1_minus_iii_ms: Option<f64>,
    pub p_polarity: BTreeMap<LeadKey, &'static str>,
    pub p_axis_deg: Option<f64>,
    pub rp_class: Option<&'static str>,
    pub expected_error_ms: Option<f64>,
    pub p_before_qrs: Option<&'static str>,
    pub conditions: Vec<String>,
}

#[derive(Debug, Serialize)]
pub(super) struct FindingOut {
    pub sign: &'static str,
    pub leads: Vec<&'static str>,
    pub rp_ms: Option<f64>,
    pub span_ms: [f64; 2],
    pub amplitude_mv: f64,
    pub beats_showing: usize,
    pub beats_examined: usize,
    pub needs_sinus_recording: bool,
    pub criterion: &'static str,
    pub status: &'static str,
}

#[derive(Debug, Serialize)]
pub(super) struct ObservationOut {
    pub what: String,
    pub leads: Vec<&'static str>,
    pub value: Option<f64>,
    pub unit: Option<&'static str>,
    pub beats_showing: Option<usize>,
    pub beats_examined: Option<usize>,
}

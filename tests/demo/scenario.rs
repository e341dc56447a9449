//! The three recordings of the invented patient.

use crate::support::dipole::{Beat, Breath, Recipe, SplitMix64, Strip, Wave};

/// One demo recording.
pub struct Demo {
    /// Name of its files.
    pub name: &'static str,
    /// What it shows.
    pub title: &'static str,
    /// Time of its first sample, local.
    pub start: &'static str,
    /// What the header says besides.
    pub remarks: &'static [&'static str],
    /// The signal.
    pub strip: Strip,
    /// True numbers beside the marks, as TOML keys and values.
    pub numbers: Vec<(&'static str, f64)>,
}

/// All three, in the order of the story.
pub fn all() -> [Demo; 3] {
    [onset(), tachycardia(), sinus()]
}

fn tachycardia() -> Demo {
    let recipe = Recipe { seed: 1753, ..Recipe::TACHYCARDIA };
    Demo {
        name: "tachycardia",
        title: "ten seconds of the tachycardia, with a P just behind each QRS",
        start: "2024-04-17T14:21:40",
        remarks: &["palpitations for a quarter of an hour, no syncope, no drug taken"],
        numbers: vec![
            ("rr_ms", recipe.rr * 1000.0),
            ("qrs_ms", recipe.qrs * 1000.0),
            ("rp_ms", recipe.rp.unwrap_or(f64::NAN) * 1000.0),
            ("retrograde_p_duration_ms", Wave::retrograde_p().offset() * 1000.0),
        ],
        strip: recipe.strip(),
    }
}

fn sinus() -> Demo {
    let recipe = Recipe { rr: 0.794, rr_scatter: 0.012, qt: Some(0.372), seed: 761, ..Recipe::SINUS };
    Demo {
        name: "sinus",
        title: "ten seconds of sinus rhythm, four minutes after the tachycardia ended",
        start: "2024-04-17T14:32:05",
        remarks: &["after the palpitations ended by themselves"],
        numbers: vec![
            ("rr_ms", recipe.rr * 1000.0),
            ("pr_ms", recipe.pr.unwrap_or(f64::NAN) * 1000.0),
            ("p_duration_ms", Wave::sinus_p().offset() * 1000.0),
            ("qrs_ms", recipe.qrs * 1000.0),
            ("qt_ms", recipe.qt.unwrap_or(f64::NAN) * 1000.0),
        ],
        strip: recipe.strip(),
    }
}

/// QT follows the rate with a lag of a few beats.
struct Repolarisation(f64);

impl Repolarisation {
    fn next(&mut self, rr: f64) -> f64 {
        // Fridericia's relation with 400 ms at 60/min.
        let settled = 0.400 * rr.cbrt();
        self.0 += 0.45 * (settled - self.0);
        self.0
    }
}

/// A minute: sinus rhythm, a premature P with a long PR, a tachycardia of 22 s that ends with a P, sinus rhythm.
fn onset() -> Demo {
    const PR: f64 = 0.160;
    const FIRST_PR: f64 = 0.252;
    const COUPLING: f64 = 0.575;
    const RP: f64 = 0.110;
    const TACHYCARDIA_RR: f64 = 0.346;
    const TACHYCARDIA_BEATS: usize = 64;
    const PAUSE: f64 = 0.985;
    let mut random = SplitMix64::new(1418);
    let mut qt = Repolarisation(0.376);
    let mut beats: Vec<Beat> = Vec::new();
    let conducted = |at: f64, qt: f64| Recipe { qt: Some(qt), ..Recipe::SINUS }.beat(at);
    let mut at = 0.431;
    while at < 19.0 {
        // Respiratory sinus arrhythmia.
        let rr = 0.812 + 0.022 * (std::f64::consts::TAU * 0.23 * at).sin() + 0.006 * random.normal();
        beats.push(conducted(at, qt.next(rr)));
        at += rr;
    }
    let last_sinus_qrs = beats.last().and_then(|beat| beat.qrs.as_ref()).map_or(0.0, |(qrs, _)| *qrs);
    let premature_p = last_sinus_qrs - PR + COUPLING;
    let start = premature_p + FIRST_PR;
    at = start;
    let mut end = start;
    for index in 0..TACHYCARDIA_BEATS {
        // The cycle settles over the first beats.
        let rr = TACHYCARDIA_RR + 0.024 * (-(index as f64) / 2.0).exp() + 0.0015 * random.normal();
        let before = if index == 0 { start - last_sinus_qrs } else { rr };
        let recipe = Recipe { qt: Some(qt.next(before)), rp: Some(RP), ..Recipe::TACHYCARDIA };
        let mut beat = recipe.beat(at);
        if index == 0 {
            beat.p = Some((premature_p, Wave::premature_p()));
        }
        beats.push(beat);
        end = at;
        at += rr;
    }
    let mut at = end + RP + PAUSE + PR;
    let resumed = at;
    while at < 60.4 {
        let rr = 0.836
            + 0.050 * (-(at - resumed) / 4.0).exp()
            + 0.022 * (std::f64::consts::TAU * 0.23 * at).sin()
            + 0.006 * random.normal();
        beats.push(conducted(at, qt.next(rr)));
        at += rr;
    }
    Demo {
        name: "onset",
        title: "a minute in which a premature P starts the tachycardia, which ends with a P",
        start: "2024-04-17T14:05:10",
        remarks: &["palpitations begin and end during the recording"],
        numbers: vec![
            ("last_sinus_qrs_s", last_sinus_qrs),
            ("pr_before_ms", PR * 1000.0),
            ("premature_p_s", premature_p),
            ("coupling_ms", COUPLING * 1000.0),
            ("first_pr_ms", FIRST_PR * 1000.0),
            ("start_s", start),
            ("end_s", end),
            ("rp_ms", RP * 1000.0),
            ("first_p_after_s", resumed - PR),
        ],
        strip: Strip { rate: 500.0, seconds: 60.0, beats, breath: Breath::QUIET, noise_uv: 6.0, seed: 605 },
    }
}

//! What is suspected, on recordings of known truth, and what is not, on real ones.

mod swaps;

use crate::support::{headers, project, shared};
use leadsheet::case::{Case, Settings};
use leadsheet::findings::{PBefore, Search, SearchDone, Sign, WhyNot};
use leadsheet::recording::Recording;
use rayon::prelude::*;
use serde_json::Value;
use std::fs;
use std::path::{Path, PathBuf};

pub(crate) fn recording(header: &Path) -> Recording {
    let decoded = leadsheet::input::read(header).unwrap_or_else(|error| panic!("{error}"));
    Recording::from_decoded(decoded).unwrap_or_else(|refusal| panic!("{}: {refusal}", header.display()))
}

fn search(header: &Path, sinus: Option<&Path>) -> Search {
    let case = Case::analyse(recording(header), sinus.map(recording), Settings::default())
        .unwrap_or_else(|error| panic!("{}: {error}", header.display()));
    case.analysis.findings.retrograde_p
}

fn done(header: &Path, sinus: Option<&Path>) -> SearchDone {
    match search(header, sinus) {
        Search::Done(done) => *done,
        Search::NotDone(why) => panic!("{}: not searched, {why}", header.display()),
    }
}

// Source of the truth: the construction of the demo (demo-data/truth.toml), RP 110 ms.
#[test]
fn the_demo_shows_its_retrograde_p_in_every_beat_at_the_right_place() {
    let demo = project().join("demo-data");
    for sinus in [None, Some(demo.join("sinus.hea"))] {
        let done = done(&demo.join("tachycardia.hea"), sinus.as_deref());
        assert_eq!(done.compared, sinus.is_some());
        assert_eq!(done.p_before_qrs, PBefore::None);
        assert_eq!(done.suspected.len(), 1, "{:?}", done.suspected);
        let found = &done.suspected[0];
        assert_eq!(found.sign, Sign::PInStSegment);
        let rp = found.rp.expect("an RP").ms();
        assert!((rp - 110.0).abs() <= 10.0, "RP {rp:.1}");
        assert_eq!(found.evidence.showing, found.evidence.examined);
        assert!(found.evidence.examined >= 20);
    }
}

fn truths(folder: &Path) -> Vec<(PathBuf, Value)> {
    let mut truths: Vec<(PathBuf, Value)> = fs::read_dir(folder)
        .expect("the folder can be read")
        .filter_map(|entry| {
            let path = entry.expect("an entry").path();
            let stem = path.to_str()?.strip_suffix(".truth.json")?.to_owned();
            let truth = serde_json::from_slice(&fs::read(&path).expect("the truth")).expect("JSON");
            Some((PathBuf::from(stem + ".hea"), truth))
        })
        .collect();
    truths.sort_by(|a, b| a.0.cmp(&b.0));
    truths
}

/// Findings at the right place (RP within 30 ms), at a wrong one, and none; per kind.
fn judged(with_sinus: bool) -> Option<Vec<(String, [usize; 3])>> {
    let folder = shared("data/tachycardia")?;
    let ludb = shared("data/ludb")?;
    let outcomes: Vec<(String, usize)> = truths(&folder)
        .par_iter()
        .map(|(header, truth)| {
            let sinus = ludb.join(format!("{}.hea", truth["sinus"].as_str().expect("a record")));
            let found = search(header, with_sinus.then_some(sinus.as_path()));
            let outcome = match (found, truth["rp_ms"].as_f64()) {
                (Search::Done(done), _) if done.suspected.is_empty() => 2,
                (Search::NotDone(_), _) => 2,
                (Search::Done(done), Some(truth)) => {
                    usize::from(done.rp.is_none_or(|rp| (rp.ms() - truth).abs() > 30.0))
                }
                (Search::Done(_), None) => 1,
            };
            (truth["kind"].as_str().expect("a kind").to_owned(), outcome)
        })
        .collect();
    let mut kinds: Vec<(String, [usize; 3])> = Vec::new();
    for (kind, outcome) in outcomes {
        match kinds.iter_mut().find(|(known, _)| *known == kind) {
            Some((_, counts)) => counts[outcome] += 1,
            None => {
                let mut counts = [0; 3];
                counts[outcome] = 1;
                kinds.push((kind, counts));
            }
        }
    }
    println!("with sinus {with_sinus}: right place, wrong place, none: {kinds:?}");
    Some(kinds)
}

fn counts(kinds: &[(String, [usize; 3])], kind: &str) -> [usize; 3] {
    kinds.iter().find(|(known, _)| known == kind).expect("the kind").1
}

// Source of the truth: tachycardias built from LUDB beats with a P of known onset. False alarms come
// first; the counts found are what was reached, so that a change that loses some is noticed.
#[test]
fn tachycardias_without_a_retrograde_p_are_not_suspected_and_some_with_one_are() {
    let Some(alone) = judged(false) else { return };
    assert_eq!(counts(&alone, "no-p")[..2], [0, 0]);
    assert!(counts(&alone, "short")[0] >= 11 && counts(&alone, "mid")[0] >= 10);
    let Some(compared) = judged(true) else { return };
    assert_eq!(counts(&compared, "no-p")[..2], [0, 0]);
    assert!(counts(&compared, "short")[0] >= 22 && counts(&compared, "mid")[0] >= 17);
    for kind in ["short", "mid", "long"] {
        assert!(counts(&compared, kind)[1] <= 1, "{kind} at a wrong place");
    }
}

// Source of the labels: PhysioNet/CinC Challenge 2020–21, SNOMED CT codes in the headers.
#[test]
fn no_labelled_sinus_tachycardia_flutter_or_fibrillation_is_suspected() {
    let Some(folder) = shared("data/rhythms") else { return };
    let mut examined = 0;
    for header in headers(&folder) {
        let labels = fs::read_to_string(&header).expect("a header");
        if !["427084000", "164889003", "164890007"].iter().any(|code| labels.contains(code)) {
            continue;
        }
        examined += 1;
        if let Search::Done(done) = search(&header, None) {
            assert!(done.suspected.is_empty(), "{}: {:?}", header.display(), done.suspected);
        }
    }
    assert!(examined >= 20, "only {examined}");
}

// Source of the limit: tachycardia is above 100/min (common practice).
#[test]
fn a_sinus_rhythm_is_not_searched_and_the_reason_has_its_number() {
    let Search::NotDone(why) = search(&project().join("demo-data/sinus.hea"), None) else {
        panic!("it was searched")
    };
    assert!(matches!(why, WhyNot::NotTachycardia(rate) if rate.get() < 100.0), "{why}");
    assert!(why.to_string().contains("100/min"));
}

#[test]
fn a_sinus_recording_of_another_patient_is_refused() {
    let demo = project().join("demo-data");
    let mut other = recording(&demo.join("sinus.hea"));
    other.subject.id = Some("INVENTED-0002".to_owned());
    let error = Case::analyse(recording(&demo.join("tachycardia.hea")), Some(other), Settings::default())
        .expect_err("another patient");
    assert!(error.to_string().contains("patient number"), "{error}");
}

// Source: by definition, a PR is from a P to the QRS that it leads into.
#[test]
fn no_pr_stands_beside_a_suspected_retrograde_p() {
    let Some(folder) = shared("data/tachycardia") else { return };
    let suspected: usize = truths(&folder)
        .par_iter()
        .map(|(header, _)| {
            let case = Case::analyse(recording(header), None, Settings::default()).expect("it is analysed");
            let Search::Done(done) = &case.analysis.findings.retrograde_p else { return 0 };
            if done.suspected.is_empty() {
                return 0;
            }
            let measurements = &case.analysis.measurements;
            assert_eq!(measurements.pr.value(), None, "{}", header.display());
            assert!(measurements.beats.iter().all(|beat| beat.p.is_none()), "{}", header.display());
            1
        })
        .sum();
    assert!(suspected >= 40, "only {suspected} suspected");
}

// Source of the truth: tachycardias built without any P (kind no-p), so no PR can be right.
#[test]
fn a_tachycardia_without_any_p_is_given_no_pr() {
    let Some(folder) = shared("data/tachycardia") else { return };
    let built: Vec<_> = truths(&folder).into_iter().filter(|(_, truth)| truth["kind"] == "no-p").collect();
    assert_eq!(built.len(), 30);
    let given: Vec<_> = built
        .par_iter()
        .filter(|(header, _)| {
            let case = Case::analyse(recording(header), None, Settings::default()).expect("it is analysed");
            case.analysis.measurements.pr.value().is_some()
        })
        .map(|(header, _)| header.clone())
        .collect();
    assert!(given.is_empty(), "{given:?}");
}

//! The twelve leads of real recordings, and of made ones.

use crate::support::{TempDir, project, shared};
use leadsheet::input;
use leadsheet::recording::{Absence, Channel, Lead, Note, Recording, Refusal, Weight};
use std::path::PathBuf;

fn recording(path: &std::path::Path) -> Recording {
    let decoded = input::read(path).unwrap_or_else(|error| panic!("{error}"));
    Recording::from_decoded(decoded).unwrap_or_else(|refusal| panic!("{}: {refusal}", path.display()))
}

/// All headers of a folder of the shared data.
fn headers(folder: &str) -> Vec<PathBuf> {
    let Some(folder) = shared(folder) else { return Vec::new() };
    crate::support::headers(&folder)
}

/// A table with a rate of 500/s and these columns, read.
fn made(headings: &str, row: impl Fn(f64) -> Vec<f64>) -> Result<Recording, Refusal> {
    let folder = TempDir::new();
    let rows = (0..1000).map(|index| {
        let cells: Vec<String> =
            row(f64::from(index) / 500.0).iter().map(|value| format!("{value:.6}")).collect();
        cells.join(",") + "\n"
    });
    let path = folder.path().join("made.csv");
    std::fs::write(&path, format!("{headings}\n{}", rows.collect::<String>())).expect("a table");
    std::fs::write(path.with_extension("toml"), "rate = 500\nunit = \"mV\"\n").expect("a sidecar");
    Recording::from_decoded(input::read(&path).unwrap_or_else(|error| panic!("{error}")))
}

fn cautions(recording: &Recording) -> Vec<&str> {
    let cautions = recording.notes.iter().filter(|note| note.weight == Weight::Caution);
    cautions.map(|Note { text, .. }| text.as_str()).collect()
}

#[test]
fn the_limb_leads_of_all_annotated_recordings_obey_einthoven_to_half_a_count() {
    // Source: the lead identities (facts, section 2); these recordings hold whole counts of 1 µV.
    for path in headers("data/ludb") {
        let recording = recording(&path);
        let lead = |lead: Lead| recording.samples(lead).expect("a lead").values_with_gaps();
        assert!(recording.leads.iter().all(|(_, channel)| matches!(channel, Channel::Recorded(_))));
        for (index, (one, two)) in lead(Lead::I).iter().zip(lead(Lead::II)).enumerate() {
            for (dependent, expected) in [
                (Lead::III, two - one),
                (Lead::AVR, -(one + two) / 2.0),
                (Lead::AVL, one - two / 2.0),
                (Lead::AVF, two - one / 2.0),
            ] {
                let off = (lead(dependent)[index] - expected).abs();
                assert!(off < 0.000_501, "{}: {dependent} is off by {off} mV at {index}", path.display());
            }
        }
        assert!(
            !cautions(&recording).iter().any(|text| text.contains("limb leads")),
            "{:?}",
            recording.notes
        );
    }
}

#[test]
fn derived_leads_equal_the_recorded_ones_to_half_a_count() {
    // Source: the recorded leads of LUDB, which its recorder stored beside I and II.
    let Some(folder) = shared("data/ludb") else { return };
    let mut decoded = input::read(&folder.join("1.hea")).expect("LUDB 1 reads");
    let recorded = decoded.clone();
    decoded.signals.retain(|signal| !["iii", "avr", "avl", "avf"].contains(&signal.name.as_str()));
    let recording = Recording::from_decoded(decoded).expect("eight leads are enough");
    for (at, lead) in [(2, Lead::III), (3, Lead::AVR), (4, Lead::AVL), (5, Lead::AVF)] {
        let Channel::Derived(samples) = &recording.leads[lead] else { panic!("{lead} is not derived") };
        let pairs = samples.values_with_gaps().iter().zip(recorded.signals[at].samples.values_with_gaps());
        assert!(pairs.clone().all(|(a, b)| (a - b).abs() < 0.000_501), "{lead}");
    }
}

#[test]
fn every_recording_that_is_to_be_printed_or_measured_has_its_leads() {
    for (folder, leads) in [("ludb", 12), ("tachycardia", 12), ("onset", 12), ("mitdb", 2)] {
        for path in headers(&format!("data/{folder}")) {
            let recording = recording(&path);
            assert_eq!(recording.present().count(), leads, "{}", path.display());
            assert!(recording.printable().is_ok());
        }
    }
    for path in headers("data/qtdb") {
        let recording = recording(&path);
        assert_eq!(recording.present().count() + recording.extra.len(), 2, "{}", path.display());
    }
}

#[test]
fn what_is_odd_in_the_challenge_recordings_is_said() {
    // Source: SOURCES.md beside the data lists what is odd in them.
    for path in headers("data/rhythms") {
        let header = std::fs::read_to_string(&path).expect("a header");
        let recording = recording(&path);
        let says = |words: &str| recording.notes.iter().any(|note| note.text.contains(words));
        let place = path.display();
        assert_eq!(
            says("names the record"),
            header.lines().next().is_some_and(|line| line.contains(".mat ")),
            "{place}"
        );
        assert_eq!(says("written `mv`"), header.contains("/mv "), "{place}");
        assert_eq!(says("unusually small"), header.contains("4880/mV"), "{place}");
        let flat =
            recording.leads.iter().filter(|(_, lead)| matches!(lead, Channel::Absent(Absence::Flat))).count();
        assert_eq!(flat, if place.to_string().contains("JS11438") { 6 } else { 0 }, "{place}");
    }
}

#[test]
fn a_record_may_be_named_by_its_header_its_data_file_or_without_an_extension() {
    let Some(folder) = shared("data") else { return };
    for (names, header) in [
        (["ludb/1.hea", "ludb/1.dat", "ludb/1"], "1.hea"),
        (["rhythms/A0001.hea", "rhythms/A0001.mat", "rhythms/A0001"], "A0001.hea"),
    ] {
        for name in names {
            assert_eq!(recording(&folder.join(name)).source.file, header, "{name}");
        }
    }
}

#[test]
fn the_hash_is_over_all_files_header_first() {
    let decoded = input::read(&project().join("tests/hostile/wfdb-unknown-leads.hea")).expect("it reads");
    // Source: GNU coreutils, `cat wfdb-unknown-leads.hea samples.dat | sha256sum`.
    assert_eq!(decoded.source.sha256, "dccab7cf2c2b96cc423de48f550f4f00e944f3d2286ad45bee8df00ca8fe7cf5");
}

#[test]
fn a_lead_that_is_flat_or_named_twice_or_modified_is_told() {
    let wave = |t: f64| (9.0 * t).sin();
    let flat = made("I,II,V1,V2", |t| vec![wave(t), 2.0 * wave(t), 0.0, wave(t)]).expect("a recording");
    assert_eq!(flat.leads[Lead::V1], Channel::Absent(Absence::Flat));
    assert_eq!(flat.leads[Lead::V3], Channel::Absent(Absence::NotRecorded));
    assert!(matches!(flat.leads[Lead::AVF], Channel::Derived(_)));

    let flat_limb = made("I,II,III", |t| vec![wave(t), 2.0 * wave(t), 0.0]).expect("a recording");
    assert!(matches!(flat_limb.leads[Lead::III], Channel::Derived(_)));
    assert!(
        cautions(&flat_limb).iter().any(|text| text.contains("lead III is flat")),
        "{:?}",
        flat_limb.notes
    );

    let twice = made("II,ECG II", |t| vec![wave(t), wave(t)]).expect_err("II is there twice");
    assert_eq!(twice, Refusal::LeadTwice { lead: Lead::II });

    let modified = made("MLII,V5", |t| vec![wave(t), wave(t)]).expect("a recording");
    assert!(modified.samples(Lead::II).is_some());
    assert!(modified.notes.iter().any(|note| note.text.contains("MLII")), "{:?}", modified.notes);

    let both = made("MLII,II", |t| vec![wave(t), wave(t)]).expect("a recording");
    assert_eq!(both.extra.iter().map(|extra| extra.name.as_str()).collect::<Vec<_>>(), ["MLII"]);
}

#[test]
fn the_artificial_calibration_ecg_keeps_its_flat_lead_iii() {
    // Source: facts, section 2 (I, II, V1–V6 identical, III flat, aVR inverted, aVL and aVF half).
    let recording = made("I,II,V1", |t| vec![(9.0 * t).sin(); 3]).expect("a recording");
    let value = |lead: Lead| recording.samples(lead).and_then(|samples| samples.at(100)).expect("a sample");
    assert_eq!(value(Lead::III), 0.0);
    assert_eq!(value(Lead::AVR), -value(Lead::I));
    assert_eq!((value(Lead::AVL), value(Lead::AVF)), (value(Lead::I) / 2.0, value(Lead::I) / 2.0));
}

#[test]
fn only_other_potentials_can_be_measured_but_not_printed() {
    let recording = made("0,ECG1", |t| vec![t.sin(), t.cos()]).expect("a recording");
    assert_eq!(recording.extra.len(), 2);
    let refusal = recording.printable().expect_err("no lead of the twelve");
    assert_eq!(refusal, Refusal::NoKnownLead { found: vec!["0".into(), "ECG1".into()] });
}

#[test]
fn leads_of_another_rate_are_absent_for_that_reason() {
    let Some(folder) = shared("formats/wfdb") else { return };
    let mut decoded = input::read(&folder.join("test01_00s_frame.hea")).expect("it reads");
    for (signal, name) in decoded.signals.iter_mut().zip(["I", "II", "V1"]) {
        signal.name = name.to_owned();
    }
    let recording = Recording::from_decoded(decoded).expect("a recording");
    assert!(
        matches!(recording.leads[Lead::II], Channel::Absent(Absence::OtherRate(rate)) if rate.get() == 1000.0)
    );
    assert_eq!(recording.present().count(), 2, "nothing is derived from leads of two rates");
}

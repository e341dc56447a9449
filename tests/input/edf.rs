//! EDF and BDF files against values that other programs decoded.

use crate::support::edf::{Edf, EdfSignal};
use crate::support::npz::Npz;
use crate::support::{TempDir, shared};
use leadsheet::input;
use leadsheet::recording::{Decoded, Note, Quantity, Recording, Sex, Weight};
use leadsheet::units::Span;
use std::path::{Path, PathBuf};

/// Every sample of the two formats, with its entry in `EXPECTED.json`.
fn samples() -> Vec<(PathBuf, serde_json::Value)> {
    let mut samples = Vec::new();
    for format in ["edf", "bdf"] {
        let Some(folder) = shared(&format!("formats/{format}")) else { continue };
        let text = std::fs::read_to_string(folder.join("EXPECTED.json")).expect("the list");
        let list: Vec<serde_json::Value> = serde_json::from_str(&text).expect("JSON");
        for entry in list {
            let file = entry["file"].as_str().expect("a name");
            samples.push((folder.join("..").join(file), entry));
        }
    }
    samples
}

fn sample(name: &str) -> Option<Decoded> {
    let path = shared("formats")?.join(name);
    Some(input::read(&path).unwrap_or_else(|error| panic!("{error}")))
}

fn written(edf: &Edf) -> Result<Decoded, String> {
    let folder = TempDir::new();
    let path = folder.path().join("written");
    std::fs::write(&path, edf.bytes()).expect("a file is written");
    input::read(&path)
        .map_err(|error| error.to_string().replace(&format!("{}/", folder.path().display()), ""))
}

fn start(decoded: &Decoded) -> Option<String> {
    decoded.occasion.start.map(|start| start.local.to_string())
}

// Source of all values here: decoded with pyedflib 0.1.42, two files that it refuses with a decoder of their
// finder (see SOURCES.md beside them).
#[test]
fn every_sample_of_every_signal_is_as_another_program_decoded_it() {
    for (path, entry) in samples() {
        let what = path.display();
        let mut expected = path.as_os_str().to_owned();
        expected.push(".expected.npz");
        let expected = Npz::open(Path::new(&expected));
        let decoded = input::read(&path).unwrap_or_else(|error| panic!("{error}"));
        assert_eq!(decoded.source.sha256, entry["sha256"].as_str().expect("a hash"), "{what}");
        let names: Vec<&str> = decoded.signals.iter().map(|signal| signal.name.as_str()).collect();
        let leads: Vec<&str> =
            entry["leads"].as_array().expect("leads").iter().filter_map(|lead| lead.as_str()).collect();
        assert_eq!(names, leads, "{what}");
        for (index, signal) in decoded.signals.iter().enumerate() {
            let what = format!("{what}, {}", signal.name);
            let rate = entry["fs_hz"][index].as_f64().expect("a rate");
            assert!((signal.samples.rate().get() - rate).abs() < 1e-9 * rate, "{what}: rate");
            let unit = entry["units"][index].as_str().expect("a unit");
            let factor = match unit {
                "uV" => 1e-3,
                "" => 1.0,
                other => {
                    assert_eq!(signal.quantity, Quantity::Other(other.to_owned()), "{what}");
                    1.0
                }
            };
            assert_eq!(signal.quantity == Quantity::Voltage, unit == "uV", "{what}");
            let values = expected.numbers(&format!("phys_{index}"));
            assert_eq!(signal.samples.len(), values.len(), "{what}: length");
            let half_a_count = signal.resolution.expect("a count has a size") / 2.0;
            for (at, &value) in values.iter().enumerate() {
                let own = signal.samples.at(at).unwrap_or_else(|| panic!("{what}, sample {at}: a gap"));
                assert!(
                    (own - value * factor).abs() <= half_a_count,
                    "{what}, sample {at}: {own} for {value}"
                );
            }
        }
    }
}

// Source: EXPECTED.json, decoded with pyedflib 0.1.42; the names and marks in the two fields are read off the
// headers by eye, after EDF+ 2.1.3.3 and 2.1.3.4 (r).
#[test]
fn start_subject_and_occasion_are_those_of_the_header() {
    for (path, entry) in samples() {
        let decoded = input::read(&path).unwrap_or_else(|error| panic!("{error}"));
        let what = path.display();
        let expected = match entry["start"].as_str() {
            // The recording field says `Startdate X`: the date in the header is only a filling.
            Some(_) if path.ends_with("test_edfann.edf") => None,
            // The first data record states +0.3945312; pyedflib 0.1.42 drops a digit of it.
            Some("2020-01-24 04:05:56.039453") => Some("2020-01-24 04:05:56.394531200".to_owned()),
            Some(expected) => Some(expected.to_owned()),
            None => continue,
        };
        assert_eq!(start(&decoded), expected, "{what}");
        assert!(decoded.occasion.start.is_none_or(|start| start.zone.is_none()), "{what}");
        let sex = decoded.subject.sex.as_ref().map_or(String::new(), |sex| sex.to_string());
        assert_eq!(sex, entry["sex"].as_str().unwrap_or_default().to_lowercase(), "{what}");
        let birth =
            decoded.subject.birth_date.map_or(String::new(), |day| day.format("%d %b %Y").to_string());
        assert_eq!(birth.to_lowercase(), entry["birth"].as_str().unwrap_or_default(), "{what}");
        let id = decoded.subject.id.unwrap_or_default();
        let legacy = path.ends_with("test_legacy.edf").then_some("Legacy patient description");
        assert_eq!(id, legacy.unwrap_or(entry["patient"].as_str().unwrap_or_default()), "{what}");
    }
    let Some(decoded) = sample("edf/test_generator.edf") else { return };
    assert_eq!(decoded.subject.name.as_deref(), Some("Hans Muller"));
    assert_eq!(decoded.subject.sex, Some(Sex::Male));
    assert_eq!(decoded.occasion.operator.as_deref(), Some("Mr. Spotty"));
    assert_eq!(decoded.occasion.device.as_deref(), Some("test_generator"));
    assert_eq!(
        decoded.occasion.remarks,
        [
            "patient",
            "Investigation Dr._X",
            "unit test file",
            "At 0 s: Recording starts",
            "At 600 s: Recording ends"
        ]
    );
}

// Source: EXPECTED.json, as above.
#[test]
fn filters_and_annotations_of_a_real_recording_are_read() {
    for name in ["edf/ptb_s0010_re_10s_pyedflib.edf", "bdf/ptb_s0010_re_10s_pyedflib.bdf"] {
        let Some(decoded) = sample(name) else { return };
        let filters = decoded.occasion.filters;
        let hertz = [filters.low_cut, filters.high_cut, filters.mains].map(|cut| cut.map(|cut| cut.get()));
        assert_eq!(hertz, [Some(0.05), Some(150.0), None], "{name}");
        assert_eq!(decoded.occasion.remarks, ["At 1.25 s: test beat", "At 3.5 s for 0.5 s: P?"], "{name}");
        assert_eq!(decoded.notes, [], "{name}");
        let recording = Recording::from_decoded(decoded).unwrap_or_else(|refusal| panic!("{refusal}"));
        assert_eq!(recording.present().count(), 12, "{name}");
    }
    let Some(decoded) = sample("edf/test_edfann.edf") else { return };
    assert_eq!(decoded.notes, [Note::information("856 annotations in the file are left out")]);
    let Some(decoded) = sample("edf/test_utf8.edf") else { return };
    assert!(
        decoded
            .occasion
            .remarks
            .contains(&"At 119.605 s: \u{4e2d}\u{6587}\u{6d4b}\u{8bd5}\u{516b}\u{4e2a}\u{5b57}".to_owned())
    );
}

#[test]
fn a_file_that_breaks_the_rules_is_read_and_says_so() {
    let Some(decoded) = sample("edf/biosig-noncompliant_scp-example.edf") else { return };
    let notes: Vec<&str> = decoded.notes.iter().map(|note| note.text.as_str()).collect();
    assert_eq!(
        notes,
        [
            "the birth date `%02d-May-%04Y` can't be read and is left out",
            "the header says EDF+C, which promises a signal of annotations, and there is none",
        ]
    );
    assert_eq!(start(&decoded).as_deref(), Some("2002-11-22 09:09:59"));
}

/// 4 samples a second; the times of the data records as given.
fn scattered(reserved: &'static str, times: &[&str]) -> Edf {
    let width = if reserved.starts_with("BDF") { 3 } else { 2 };
    let counts: Vec<i32> = (1..=4 * times.len() as i32).map(|number| number * 10 - 50).collect();
    let label = if width == 3 { "BDF Annotations" } else { "EDF Annotations" };
    let signals = vec![EdfSignal::lead("II", 4, &counts, width), EdfSignal::annotations(label, times)];
    Edf::plus(reserved, "-1", signals)
}

// Source: EDF+ 2.2.4 (r), the first annotation of a data record is its time; written and expected by hand.
#[test]
fn gaps_lie_where_the_data_records_say() {
    for reserved in ["EDF+D", "BDF+D"] {
        let times = ["+0.5\x14\x14\x00", "+1.5\x14\x14\x00", "+3.25\x14\x14\x00+3.5\x14here\x14\x00"];
        let decoded = written(&scattered(reserved, &times)).unwrap_or_else(|error| panic!("{error}"));
        let samples = &decoded.signals[0].samples;
        assert_eq!(samples.len(), 15);
        assert_eq!(samples.gaps().iter().collect::<Vec<_>>(), [Span { start: 8, end: 11 }]);
        let values: Vec<Option<f64>> = (0..15).map(|index| samples.at(index)).collect();
        let step = |number: i32| Some(f64::from(number * 10 - 50) * 1e-3);
        for (index, number) in (0..8).zip(1..).chain((11..15).zip(9..)) {
            let (own, expected) = (values[index].expect("a value"), step(number).expect("a value"));
            assert!((own - expected).abs() < 1e-12, "{index}: {own} for {expected}");
        }
        assert_eq!(start(&decoded).as_deref(), Some("2021-03-02 10:20:30.500"));
        assert_eq!(decoded.occasion.remarks, ["At 3 s: here"]);
    }
}

#[test]
fn data_records_that_contradict_their_header_are_refused_or_noted() {
    let refused = |edf: &Edf| written(edf).expect_err("a refusal");
    let backwards = ["+1\x14\x14\x00", "+0\x14\x14\x00"];
    assert_eq!(
        refused(&scattered("EDF+D", &backwards)),
        "written: byte 824: expected a data record that states its own time, not before the end of the one before \
         it, found 0 s; export the recording again at its source"
    );
    let mut silent = scattered("EDF+D", &backwards);
    silent.signals.truncate(1);
    assert!(refused(&silent).contains("does not say where its gaps lie"));
    let far = ["+0\x14\x14\x00", "+90000\x14\x14\x00"];
    assert!(refused(&scattered("EDF+D", &far)).contains("lie scattered over 90001 s"));
    let decoded = written(&scattered("EDF+C", &backwards)).unwrap_or_else(|error| panic!("{error}"));
    assert!(decoded.notes.iter().any(|note| note.text.contains("no sound sequence")), "{:?}", decoded.notes);
    let pausing = ["+0\x14\x14\x00", "+2\x14\x14\x00"];
    let decoded = written(&scattered("EDF+C", &pausing)).unwrap_or_else(|error| panic!("{error}"));
    assert_eq!(decoded.signals[0].samples.gaps().total(), 4);
    assert!(decoded.notes.iter().any(|note| note.weight == Weight::Caution), "{:?}", decoded.notes);
}

#[test]
fn samples_at_the_digital_limits_are_clipped() {
    let counts = [0, 500, 1000, 1000, 400, -300, -1000, 0];
    for reserved in ["EDF+C", "BDF+C"] {
        let width = if reserved == "BDF+C" { 3 } else { 2 };
        let edf = Edf::plus(reserved, "2", vec![EdfSignal::lead("V1", 4, &counts, width)]);
        let decoded = written(&edf).unwrap_or_else(|error| panic!("{error}"));
        let clipped: Vec<Span> = decoded.signals[0].samples.saturated().iter().collect();
        assert_eq!(clipped, [Span { start: 2, end: 4 }, Span { start: 6, end: 7 }], "{reserved}");
        // A sample beyond the limits shows that the header is wrong about them.
        let mut beyond = counts;
        beyond[0] = 1001;
        let edf = Edf::plus(reserved, "2", vec![EdfSignal::lead("V1", 4, &beyond, width)]);
        let decoded = written(&edf).unwrap_or_else(|error| panic!("{error}"));
        assert!(decoded.signals[0].samples.saturated().is_empty(), "{reserved}");
    }
}

#[test]
fn an_unknown_count_of_data_records_is_taken_from_the_size() {
    let counts: Vec<i32> = (0..12).collect();
    let edf = Edf::plus("", "-1", vec![EdfSignal::lead("V1", 4, &counts, 2)]);
    let decoded = written(&edf).unwrap_or_else(|error| panic!("{error}"));
    assert_eq!(decoded.signals[0].samples.len(), 12);
    assert_eq!(
        decoded.notes,
        [Note::information("the header leaves the number of data records open; the file holds 3")]
    );
    let fewer = Edf { records: "2", ..edf };
    let decoded = written(&fewer).unwrap_or_else(|error| panic!("{error}"));
    assert_eq!(decoded.signals[0].samples.len(), 8);
    assert!(decoded.notes[0].text.contains("1 more data records"), "{:?}", decoded.notes);
}

#[test]
fn a_lead_without_a_unit_is_asked_for_it() {
    let mut lead = EdfSignal::lead("ECG V1", 4, &[1, 2, 3, 4], 2);
    lead.unit = "";
    let decoded = written(&Edf::plus("EDF+C", "1", vec![lead])).unwrap_or_else(|error| panic!("{error}"));
    let refusal = Recording::from_decoded(decoded).expect_err("a refusal").to_string();
    assert_eq!(
        refusal,
        "no signal is a potential (found ECG V1 (no unit stated)); state the unit of the ECG signals in the source"
    );
}

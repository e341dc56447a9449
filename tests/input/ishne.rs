//! ISHNE Holter files. No outside file was at hand: these are written here, from the public description, so that a
//! mistake in both would not show.

use crate::support::TempDir;
use crate::support::ishne::Ishne;
use leadsheet::input;
use leadsheet::recording::{Decoded, Note, Sex, Weight};

fn read(bytes: &[u8]) -> Result<Decoded, String> {
    let folder = TempDir::new();
    let path = folder.path().join("written");
    std::fs::write(&path, bytes).expect("a file is written");
    input::read(&path).map_err(|error| error.to_string())
}

fn sound(file: &Ishne) -> Decoded {
    read(&file.bytes()).unwrap_or_else(|error| panic!("{error}"))
}

fn counts() -> Vec<i16> {
    (0..80_000).map(|at| (at * 37 % 3001 - 1500) as i16).collect()
}

#[test]
fn every_sample_comes_back_with_its_scale() {
    let decoded = sound(&Ishne::two_leads(counts()));
    let names: Vec<&str> = decoded.signals.iter().map(|signal| signal.name.as_str()).collect();
    assert_eq!(names, ["I", "V1"]);
    for (at, signal) in decoded.signals.iter().enumerate() {
        assert_eq!(signal.samples.rate().get(), 500.0);
        assert_eq!(signal.samples.len(), 40_000);
        for (index, count) in counts().into_iter().skip(at).step_by(2).enumerate() {
            let own = signal.samples.at(index).expect("a value");
            assert!((own - f64::from(count) * 0.0025).abs() < 1e-9, "{index}: {own} for {count}");
        }
    }
    assert_eq!(decoded.notes, []);
}

#[test]
fn the_header_says_who_and_when() {
    let file = Ishne {
        birth: [29, 2, 1988],
        sex: 2,
        pacemaker: 2,
        leads: vec![[5, 1, 2500], [11, 3, 2500]],
        text: b"free".to_vec(),
        ..Ishne::two_leads(counts())
    };
    let decoded = sound(&file);
    assert_eq!(decoded.subject.name.as_deref(), Some("Marigold Example"));
    assert_eq!(decoded.subject.id.as_deref(), Some("INVENTED-7"));
    assert_eq!(decoded.subject.sex, Some(Sex::Female));
    assert_eq!(decoded.subject.birth_date.map(|day| day.to_string()).as_deref(), Some("1988-02-29"));
    let start = decoded.occasion.start.expect("a start");
    assert_eq!((start.local.to_string().as_str(), start.zone), ("2021-03-02 10:20:30", None));
    assert_eq!(decoded.occasion.device.as_deref(), Some("digital"));
    assert_eq!(decoded.occasion.remarks, ["A pacemaker is stated"]);
    assert_eq!(
        decoded.notes,
        [
            Note::information("the source says of V1: frequent noise"),
            Note::information("a text of 4 bytes in the header is left out")
        ]
    );
    let unknown = sound(&Ishne { start: [-9; 6], ..Ishne::two_leads(counts()) });
    assert_eq!((unknown.occasion.start, unknown.subject.sex), (None, None));
}

#[test]
fn a_wrong_checksum_only_warns() {
    let mut bytes = Ishne::two_leads(counts()).bytes();
    bytes[30] ^= 1;
    let decoded = read(&bytes).unwrap_or_else(|error| panic!("{error}"));
    assert_eq!(decoded.notes.len(), 1);
    assert_eq!(decoded.notes[0].weight, Weight::Caution);
    for unchecked in [[0, 0], [bytes[9], bytes[8]]] {
        let mut bytes = Ishne::two_leads(counts()).bytes();
        bytes[8..10].copy_from_slice(&unchecked);
        assert_eq!(read(&bytes).map(|decoded| decoded.notes), Ok(vec![]));
    }
}

#[test]
fn writers_may_count_the_samples_of_one_lead_or_of_all() {
    for (stated, length, notes) in
        [(40_000, 40_000, 0), (80_000, 40_000, 0), (-9, 40_000, 1), (30_000, 30_000, 1)]
    {
        let decoded = sound(&Ishne { stated, ..Ishne::two_leads(counts()) });
        assert_eq!(decoded.signals[1].samples.len(), length, "{stated}");
        assert_eq!(decoded.notes.len(), notes, "{stated}: {:?}", decoded.notes);
    }
    let refusal =
        read(&Ishne { stated: 50_000, ..Ishne::two_leads(counts()) }.bytes()).expect_err("a refusal");
    assert!(refusal.contains("byte 160522: expected 50000 samples of 2 leads"), "{refusal}");
}

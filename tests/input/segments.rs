//! WFDB records made of segments, put together by hand after header(5).

use crate::support::TempDir;
use leadsheet::input;
use leadsheet::recording::{Decoded, Quantity, Weight};
use leadsheet::units::Span;
use std::path::Path;

fn put(folder: &Path, name: &str, content: impl AsRef<[u8]>) {
    std::fs::write(folder.join(name), content).expect("a file is written");
}

/// A segment of two samples a signal: its header, and counts of 16 bit, frame by frame.
fn segment(folder: &Path, name: &str, lines: &[&str], counts: &[i16]) {
    let mut header = format!("{name} {} 250 {}\n", lines.len(), counts.len() / lines.len());
    for line in lines {
        header.push_str(&format!("{name}.dat 16 {line}\n"));
    }
    put(folder, &format!("{name}.hea"), header);
    let bytes: Vec<u8> = counts.iter().flat_map(|count| count.to_le_bytes()).collect();
    put(folder, &format!("{name}.dat"), bytes);
}

/// A record of a variable layout: signals come and go, change gain and unit, and stand in any order.
fn variable(folder: &Path) {
    put(folder, "r.hea", "r/5 3 250 10\nlayout 0\n~ 2\na 2\n~ 1\nb 3\n# age: 40\n");
    put(
        folder,
        "layout.hea",
        "layout 3 250 0\n~ 0 100/mV 16 0 0 0 0 I\n~ 0 100/mV 16 0 0 0 0 II\n~ 0 1/mmHg 16 0 0 0 0 ABP\n",
    );
    segment(folder, "a", &["100/mV 16 0 10 30 0 I", "100/mV 16 0 20 60 0 II"], &[10, 20, 20, 40]);
    segment(
        folder,
        "b",
        &["2/mmHg 16 0 7 27 0 ABP", "1/uV 16 0 500 1502 0 II", "1/mV 16 0 1 6 0 V9"],
        &[7, 500, 1, 9, 501, 2, 11, 501, 3],
    );
}

fn values(decoded: &Decoded, signal: usize) -> Vec<Option<f64>> {
    let samples = &decoded.signals[signal].samples;
    (0..samples.len()).map(|at| samples.at(at)).collect()
}

#[test]
fn signals_that_come_and_go_and_change_their_gain_stand_at_their_times() {
    let folder = TempDir::new();
    variable(folder.path());
    // The header states 10 samples, the segments 8.
    let decoded = input::read(&folder.path().join("r.hea")).unwrap_or_else(|error| panic!("{error}"));
    let names: Vec<&str> = decoded.signals.iter().map(|signal| signal.name.as_str()).collect();
    assert_eq!(names, ["I", "II", "ABP"]);
    let gap = None;
    assert_eq!(values(&decoded, 0), [gap, gap, Some(0.1), Some(0.2), gap, gap, gap, gap]);
    assert_eq!(
        values(&decoded, 1),
        [gap, gap, Some(0.2), Some(0.4), gap, Some(0.5), Some(0.501), Some(0.501)]
    );
    assert_eq!(values(&decoded, 2), [gap, gap, gap, gap, gap, Some(3.5), Some(4.5), Some(5.5)]);
    assert_eq!(decoded.signals[1].resolution, Some(0.001), "the finest step");
    assert_eq!(decoded.signals[2].quantity, Quantity::Other("mmHg".to_owned()));
    assert_eq!(
        decoded.signals[0].samples.gaps().iter().collect::<Vec<_>>(),
        [Span { start: 0, end: 2 }, Span { start: 4, end: 8 }]
    );
    assert_eq!(decoded.subject.age.map(|age| age.years), Some(40.0));
    let cautions: Vec<&str> = decoded
        .notes
        .iter()
        .filter(|note| note.weight == Weight::Caution)
        .map(|note| note.text.as_str())
        .collect();
    assert_eq!(
        cautions,
        [
            "the header states 10 samples, but its segments 8: the segments are shown",
            "in segment b: V9 is not named by the layout of the record and left out",
        ]
    );
}

#[test]
fn a_folder_lists_a_record_and_not_its_segments() {
    let folder = TempDir::new();
    variable(folder.path());
    segment(folder.path(), "other", &["100/mV 16 0 0 0 0 I"], &[1, 2]);
    let found = input::recordings_in(folder.path()).expect("a listing");
    let names: Vec<_> = found.iter().map(|path| path.file_name().expect("a name").to_owned()).collect();
    assert_eq!(names, ["other.hea", "r.hea"]);
}

#[test]
fn a_gap_that_nothing_justifies_is_refused_before_memory_is_asked_for() {
    let folder = TempDir::new();
    segment(folder.path(), "a", &["100/mV 16 0 10 30 0 I"], &[10, 20]);
    put(folder.path(), "r.hea", "r/2 1 250 0\n~ 100000000\na 2\n");
    let error = input::read(&folder.path().join("r.hea")).expect_err("a refusal").to_string();
    assert!(
        error.ends_with("100000000 samples in gaps, but at most 4194336 are read; check the file's header"),
        "{error}"
    );
}

//! Damaged files: an error or a sound recording, never a panic.

use crate::support::edf::{Edf, EdfSignal};
use crate::support::ishne::Ishne;
use crate::support::{TempDir, project, shared};
use leadsheet::input::{self, Target};
use leadsheet::recording::Recording;
use std::path::{Path, PathBuf};

/// The files of one recording, the one to be read first.
struct Sample(Vec<(String, Vec<u8>)>);

impl Sample {
    fn of(paths: &[PathBuf]) -> Self {
        let file = |path: &PathBuf| {
            let name = path.file_name().expect("a name").to_string_lossy().into_owned();
            (name, std::fs::read(path).unwrap_or_else(|error| panic!("{}: {error}", path.display())))
        };
        Self(paths.iter().map(file).collect())
    }
}

/// Two leads with a gap and annotations.
fn edf(reserved: &'static str, label: &'static str, width: usize) -> Sample {
    let counts: Vec<i32> = (0..300).map(|at| at * 37 % 2000 - 1000).collect();
    let times = ["+0.25\x14\x14\x00", "+1.25\x14\x14\x00+1.5\x15\x30.5\x14here\x14\x00", "+3\x14\x14\x00"];
    let mut first = EdfSignal::lead("ECG I", 100, &counts, width);
    first.prefilter = "HP:0.05Hz LP:150Hz N:50Hz";
    let signals = vec![
        first,
        EdfSignal::lead("ECG II", 100, &counts, width),
        EdfSignal::lead("SpO2", 1, &counts[..3], width),
        EdfSignal::annotations(label, &times),
    ];
    Sample(vec![("sample.edf".to_owned(), Edf::plus(reserved, "3", signals).bytes())])
}

/// Two leads and a text.
fn ishne() -> Sample {
    let counts = (0..400).map(|at| at * 37 % 2000 - 1000).collect();
    let file = Ishne { text: b"free".to_vec(), ..Ishne::two_leads(counts) };
    Sample(vec![("sample.ecg".to_owned(), file.bytes())])
}

fn samples() -> Vec<Sample> {
    let hostile = project().join("tests/hostile");
    let mut samples = vec![
        Sample::of(&[hostile.join("wfdb-unknown-leads.hea"), hostile.join("samples.dat")]),
        Sample::of(&[hostile.join("csv-time-unsteady.csv")]),
        Sample::of(&[hostile.join("sidecar-too-few-leads.csv"), hostile.join("sidecar-too-few-leads.toml")]),
        edf("EDF+D", "EDF Annotations", 2),
        edf("BDF+C", "BDF Annotations", 3),
        ishne(),
    ];
    if let Some(folder) = shared("formats/wfdb") {
        let record =
            |names: &[&str]| Sample::of(&names.iter().map(|name| folder.join(name)).collect::<Vec<_>>());
        let formats: Vec<String> = [String::from("binformats.hea")]
            .into_iter()
            .chain((0..10).map(|at| format!("binformats.d{at}")))
            .collect();
        samples.extend([
            record(&["100_3chan.hea", "100_3chan.dat"]),
            record(&["310derive.hea", "310derive.dat"]),
            record(&["311derive_4.hea", "311derive_4.dat"]),
            record(&["3000003_0003.hea", "3000003_0003.dat"]),
            record(&["flacformats.hea", "flacformats.d0", "flacformats.d1", "flacformats.d2"]),
            record(&[
                "multi-segment/041s/041s.hea",
                "multi-segment/041s/041s01.hea",
                "multi-segment/041s/041s01.dat",
                "multi-segment/041s/041s02.hea",
                "multi-segment/041s/041s02.dat",
            ]),
            record(&["test01_00s_skewframe.hea", "test01_00s.dat"]),
            record(&formats.iter().map(String::as_str).collect::<Vec<_>>()),
        ]);
    }
    samples
}

/// Reads what stands in the folder, makes a recording of it and exports it.
fn use_it(folder: &Path, first: &str) {
    let Ok(decoded) = input::read(&folder.join(first)) else { return };
    for signal in &decoded.signals {
        let samples = &signal.samples;
        assert!(
            samples.values_with_gaps().iter().all(|value| value.is_finite()),
            "{first}: a value is not finite"
        );
        assert!(
            samples.gaps().iter().chain(samples.saturated().iter()).all(|span| span.end <= samples.len())
        );
    }
    for target in [Target::Csv, Target::Wfdb] {
        let _ = input::export(&decoded, target, "again");
    }
    if let Ok(recording) = Recording::from_decoded(decoded) {
        assert!(recording.present().all(|(_, samples)| samples.len() == recording.length));
        let _ = recording.printable();
    }
}

fn put(folder: &Path, name: &str, bytes: &[u8]) {
    let path = folder.join(name);
    // Some file systems wait for the disk when a file is overwritten, but not when it is new.
    let _ = std::fs::remove_file(&path);
    std::fs::write(path, bytes).expect("a file is written");
}

#[test]
fn a_file_cut_short_anywhere_is_an_error_or_a_sound_recording() {
    for Sample(files) in samples() {
        let folder = TempDir::new();
        files.iter().for_each(|(name, bytes)| put(folder.path(), name, bytes));
        for (name, bytes) in &files {
            for part in 0..64 {
                put(folder.path(), name, &bytes[..bytes.len() * part / 64]);
                use_it(folder.path(), &files[0].0);
            }
            put(folder.path(), name, bytes);
        }
    }
}

/// Damaged versions of each sample: as many as `FLIPS` in the environment says.
fn rounds() -> usize {
    std::env::var("FLIPS").map_or(600, |rounds| rounds.parse().expect("a number in FLIPS"))
}

#[test]
fn flipped_bytes_are_an_error_or_a_sound_recording() {
    // A small generator with a fixed seed, so that every run flips the same (xorshift, Marsaglia 2003 (m)).
    let mut state = 0x9e37_79b9_7f4a_7c15u64;
    let mut next = |below: usize| {
        state ^= state << 13;
        state ^= state >> 7;
        state ^= state << 17;
        (state % below.max(1) as u64) as usize
    };
    for Sample(files) in samples() {
        let folder = TempDir::new();
        files.iter().for_each(|(name, bytes)| put(folder.path(), name, bytes));
        for round in 0..rounds() {
            // Most damage goes into the text, where it does most.
            let (name, bytes) = &files[if round % 4 == 0 { next(files.len()) } else { 0 }];
            let mut damaged = bytes.clone();
            for _ in 0..=next(4) {
                let at = next(damaged.len());
                damaged[at] = match next(3) {
                    0 => damaged[at] ^ (1 << next(8)),
                    1 => b"0123456789-+./: \n\tx(),;\"#"[next(25)],
                    _ => next(256) as u8,
                };
            }
            put(folder.path(), name, &damaged);
            use_it(folder.path(), &files[0].0);
            put(folder.path(), name, bytes);
        }
    }
}

#[test]
fn every_number_of_a_binary_header_at_its_limits_is_an_error_or_a_sound_recording() {
    let folder = TempDir::new();
    let Sample(files) = edf("EDF+D", "EDF Annotations", 2);
    let (name, bytes) = &files[0];
    // Where a file of 4 signals holds its numbers, and how wide.
    let fixed = [(184, 8), (236, 8), (244, 8), (252, 4)];
    let limits = (0..16).map(|at| (256 + 4 * 104 + at * 8, 8));
    let samples = (0..4).map(|at| (256 + 4 * 216 + at * 8, 8));
    for (start, width) in fixed.into_iter().chain(limits).chain(samples) {
        for number in [
            "", "0", "1", "-1", "2", "9999", "99999999", "-9999999", "1e300", "1e-300", "-1e300", "nan",
            "inf", "0x10",
        ] {
            let mut damaged = bytes.clone();
            let text = format!("{number:<width$}");
            damaged[start..start + width].copy_from_slice(&text.as_bytes()[..width]);
            put(folder.path(), name, &damaged);
            use_it(folder.path(), name);
        }
    }
}

#[test]
fn every_word_of_a_holter_header_at_its_limits_is_an_error_or_a_sound_recording() {
    let folder = TempDir::new();
    let Sample(files) = ishne();
    let (name, bytes) = &files[0];
    for at in (10..522).step_by(2) {
        for word in [0i16, 1, -1, i16::MIN, i16::MAX] {
            let mut damaged = bytes.clone();
            damaged[at..at + 2].copy_from_slice(&word.to_le_bytes());
            put(folder.path(), name, &damaged);
            use_it(folder.path(), name);
        }
    }
}

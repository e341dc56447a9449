//! Export and read again.

use crate::support::{TempDir, shared};
use leadsheet::input::{self, Target};
use leadsheet::recording::{Decoded, Weight};
use std::path::{Path, PathBuf};

const WFDB: [&str; 21] = [
    "03700181",
    "100_3chan",
    "100skew",
    "3000003_0003",
    "310derive",
    "311derive_4",
    "a103l",
    "binformats",
    "flacformats",
    "mixedsignals",
    "s0010_re",
    "test01_00s",
    "test01_00s_frame",
    "test01_00s_skewframe",
    "v102s",
    "multi-segment/041s/041s",
    "multi-segment/041s/041s02",
    "multi-segment/fixed1/v102s",
    "multi-segment/s25047/s25047-2704-05-04-10-44",
    "multi-segment/s25047/3234460_0018",
    "multi-segment/s25047/s25047-2704-05-04-10-44n",
];

const EDF: [&str; 9] = [
    "biosig-noncompliant_scp-example.edf",
    "ptb_s0010_re_10s_pyedflib.bdf",
    "ptb_s0010_re_10s_pyedflib.edf",
    "test_generator.bdf",
    "test_generator_2.edf",
    "test_generator_datarec_generator_0_5.bdf",
    "test_generator_datarec_generator_2.bdf",
    "test_legacy.edf",
    "test_utf8.edf",
];

/// Recordings of all kinds: several rates, gaps, clipping, other quantities, no calibration, dates.
fn recordings() -> Vec<PathBuf> {
    let mut paths = Vec::new();
    if let Some(folder) = shared("formats/wfdb") {
        paths.extend(WFDB.map(|record| folder.join(format!("{record}.hea"))));
    }
    for format in ["edf", "bdf"] {
        let Some(folder) = shared(&format!("formats/{format}")) else { continue };
        paths.extend(EDF.into_iter().map(|file| folder.join(file)).filter(|path| path.exists()));
    }
    if let Some(folder) = shared("data") {
        let records = [
            "ludb/109",
            "rhythms/A0001",
            "rhythms/E00009",
            "rhythms/JS11438",
            "qtdb/sel42",
            "mitdb/201",
            "noise/ma",
        ];
        paths.extend(records.map(|record| folder.join(format!("{record}.hea"))));
    }
    paths
}

fn exported(decoded: &Decoded, target: Target, folder: &Path) -> Vec<PathBuf> {
    let files = input::export(decoded, target, "again")
        .unwrap_or_else(|error| panic!("{}: {error}", decoded.source.file));
    let written = files.into_iter().map(|(name, bytes)| {
        let path = folder.join(name);
        std::fs::write(&path, bytes).expect("a file is written");
        path
    });
    written.collect()
}

/// Same signals to `part` of the source's step, same gaps, same clipping, same subject, occasion and cautions.
fn assert_same(source: &Decoded, again: &Decoded, part: f64) {
    let what = &source.source.file;
    assert_eq!(again.subject, source.subject, "{what}");
    assert_eq!(again.occasion, source.occasion, "{what}");
    let cautions = |decoded: &Decoded| {
        decoded.notes.iter().filter(|note| note.weight == Weight::Caution).cloned().collect::<Vec<_>>()
    };
    assert_eq!(cautions(again), cautions(source), "{what}");
    assert_eq!(again.signals.len(), source.signals.len(), "{what}");
    for (own, other) in again.signals.iter().zip(&source.signals) {
        let what = format!("{what}, {}", other.name);
        assert_eq!((&own.name, &own.quantity), (&other.name, &other.quantity), "{what}");
        assert_eq!(own.samples.rate(), other.samples.rate(), "{what}");
        assert_eq!(own.samples.len(), other.samples.len(), "{what}");
        assert_eq!(own.samples.gaps(), other.samples.gaps(), "{what}");
        assert_eq!(own.samples.saturated(), other.samples.saturated(), "{what}");
        let step = other.resolution.expect("a step");
        assert!((own.resolution.expect("a step") - step).abs() < 1e-9 * step, "{what}");
        for (a, b) in own.samples.values_with_gaps().iter().zip(other.samples.values_with_gaps()) {
            assert!((a - b).abs() <= part * step, "{what}: {a} for {b}");
        }
    }
}

#[test]
fn an_exported_wfdb_record_reads_back_the_same() {
    for path in recordings() {
        let folder = TempDir::new();
        let source = input::read(&path).unwrap_or_else(|error| panic!("{error}"));
        let files = exported(&source, Target::Wfdb, folder.path());
        assert_eq!(files.len(), 2);
        let again = input::read(&files[0]).unwrap_or_else(|error| panic!("{error}"));
        // Where no count of the source is 0 mV, the counts of the record lie between those of the source, all
        // by the same.
        // Segments of several gains have no step in common: each value comes to the nearest of the finest.
        let several_gains = path.ends_with("s25047-2704-05-04-10-44.hea");
        let exact = source.source.format == "wfdb" && !several_gains;
        assert_same(&source, &again, if exact { 1e-6 } else { 0.5 + 1e-6 });
        for (own, other) in again.signals.iter().zip(&source.signals).filter(|_| !several_gains) {
            let differences = own.samples.values_with_gaps().iter().zip(other.samples.values_with_gaps());
            let valid = differences.enumerate().filter(|(at, _)| !own.samples.gaps().contains(*at));
            let moved: Vec<f64> = valid.map(|(_, (a, b))| a - b).collect();
            let step = other.resolution.expect("a step");
            assert!(moved.iter().all(|by| (by - moved[0]).abs() < 1e-6 * step), "{}", path.display());
        }
        let new: Vec<_> = again.notes.iter().filter(|note| !source.notes.contains(note)).collect();
        assert!(new.is_empty(), "{}: {new:?}", path.display());
    }
}

#[test]
fn an_exported_table_reads_back_the_same() {
    for path in recordings() {
        let folder = TempDir::new();
        let source = input::read(&path).unwrap_or_else(|error| panic!("{error}"));
        let files = exported(&source, Target::Csv, folder.path());
        let tables =
            files.chunks(2).map(|pair| input::read(&pair[0]).unwrap_or_else(|error| panic!("{error}")));
        let mut tables: Vec<Decoded> = tables.collect();
        let mut again = tables.remove(0);
        // Every other rate has a table of its own, with the same subject and occasion.
        again.signals.extend(tables.into_iter().flat_map(|table| table.signals));
        let mut source = source;
        let first = again.signals[0].samples.rate();
        source.signals.sort_by_key(|signal| signal.samples.rate() != first);
        assert_same(&source, &again, 0.1);
    }
}

#[test]
fn the_checksums_of_an_export_are_those_of_the_source() {
    // Source: the checksums in the header of LUDB 1, which its own writer computed over the same counts.
    let Some(folder) = shared("data/ludb") else { return };
    let source = input::read(&folder.join("1.hea")).expect("LUDB 1 reads");
    let files = input::export(&source, Target::Wfdb, "again").expect("an export");
    let header = String::from_utf8(files[0].1.clone()).expect("text");
    let original = std::fs::read_to_string(folder.join("1.hea")).expect("text");
    let field = |text: &str, at: usize| -> Vec<String> {
        let lines = text.lines().skip(1).take(12);
        lines.map(|line| line.split(' ').nth(at).expect("a field").to_owned()).collect()
    };
    assert_eq!(field(&header, 5), field(&original, 5), "first samples");
    assert_eq!(field(&header, 6), field(&original, 6), "checksums");
    assert_eq!(files[1].1, std::fs::read(folder.join("1.dat")).expect("data"), "the samples themselves");
}

#[test]
fn a_name_that_a_header_cannot_hold_is_refused() {
    let Some(folder) = shared("data/ludb") else { return };
    let source = input::read(&folder.join("1.hea")).expect("LUDB 1 reads");
    for name in ["", "my record", "../up", ".hidden", "a/b"] {
        let error = input::export(&source, Target::Wfdb, name).expect_err(name);
        assert!(error.to_string().contains("name of a WFDB record"), "{error}");
    }
}

//! Tables of text.

use crate::support::npz::Npz;
use crate::support::{TempDir, shared};
use chrono::{FixedOffset, NaiveDate};
use leadsheet::input;
use leadsheet::recording::{Decoded, Lead, Quantity, Recording, Sex, StartTime};
use std::path::Path;

/// Writes files into a fresh folder and reads the first.
fn read(files: &[(&str, &str)]) -> Decoded {
    let folder = TempDir::new();
    for (name, text) in files {
        std::fs::write(folder.path().join(name), text).expect("a file is written");
    }
    input::read(&folder.path().join(files[0].0)).unwrap_or_else(|error| panic!("{error}"))
}

/// A table as another program wrote it, with a sidecar beside it.
fn with_sidecar(table: &Path, sidecar: &str) -> Decoded {
    let text = std::fs::read_to_string(table).expect("the table");
    read(&[("outside.csv", &text), ("outside.toml", sidecar)])
}

fn values(decoded: &Decoded, signal: usize) -> Vec<Option<f64>> {
    let samples = &decoded.signals[signal].samples;
    (0..samples.len()).map(|index| samples.at(index)).collect()
}

#[test]
fn a_table_that_another_program_wrote_in_microvolts_reads_as_millivolts() {
    // Source: the values of the SCP file that the table was made from, decoded separately (SOURCES.md beside them).
    let Some(formats) = shared("formats") else { return };
    let decoded = with_sidecar(&formats.join("csv/example.scp.biosig.csv"), "rate = 500");
    let expected = Npz::open(&formats.join("scp/example.scp.section6.expected.npz"));
    let (names, expected) = (expected.texts("leads"), expected.numbers("mV"));
    assert_eq!(decoded.signals.len(), 12);
    for (column, signal) in decoded.signals.iter().enumerate() {
        let at = names.iter().position(|name| *name == signal.name).expect("a lead of the source");
        assert_eq!((signal.samples.len(), signal.samples.rate().get()), (5000, 500.0));
        for (row, value) in values(&decoded, column).into_iter().enumerate() {
            let value = value.expect("no gap");
            assert!((value - expected[row * names.len() + at]).abs() < 1e-9, "{} at {row}", signal.name);
        }
    }
    assert_eq!(Recording::from_decoded(decoded).expect("a recording").present().count(), 12);
}

#[test]
fn a_table_of_raw_counts_needs_its_scale_and_then_equals_the_record() {
    // Source: WFDB's own C software printed the counts; the record beside it holds the same.
    let Some(formats) = shared("formats") else { return };
    let table = formats.join("csv/wfdb-rdsamp-test01_00s.tsv");
    let sidecar = "rate = 500\ncounts_per_mv = 100\nleads = [\"ECG 1\", \"ECG 2\", \"ECG 3\", \"ECG 4\"]";
    let decoded = with_sidecar(&table, sidecar);
    let record = input::read(&formats.join("wfdb/test01_00s.hea")).expect("the record");
    for (own, other) in decoded.signals.iter().zip(&record.signals) {
        assert_eq!((&own.name, &own.quantity, own.resolution), (&other.name, &other.quantity, Some(0.01)));
        assert_eq!(own.samples.len(), other.samples.len());
        let pairs = own.samples.values_with_gaps().iter().zip(other.samples.values_with_gaps());
        assert!(pairs.clone().all(|(a, b)| (a - b).abs() < 1e-12), "{}", own.name);
    }
}

#[test]
fn delimiters_decimal_commas_and_spellings_of_units_are_understood() {
    for text in [
        "I [mV],II [mV]\n0.5,-1.25\n,2\n",
        "\u{feff}\"I [mV]\",\"II [mV]\"\r\n0.5,-1.25\r\n,2\r\n",
        "I (mV);II (mV)\n0,5;-1,25\n;2\n",
        "I_uV\tII_uV\n500\t-1250\n\t2000\n",
        "# written by hand\nI [V],II [\u{b5}V]\n0.0005,-1250\n,2e3\n",
        "I,II\nmV,mV\n0.5,-1.25\n,2\n",
        ",I [mV],II [mV]\n0,0.5,-1.25\n1,,2\n",
        "I [mV],II [mV],\n0.5,-1.25,\n,2,\n",
    ] {
        let decoded = read(&[("table.csv", text), ("table.toml", "rate = 250")]);
        let names: Vec<&str> = decoded.signals.iter().map(|signal| signal.name.as_str()).collect();
        assert_eq!(names, ["I", "II"], "{text}");
        assert_eq!(values(&decoded, 0), [Some(0.5), None], "{text}");
        assert_eq!(values(&decoded, 1), [Some(-1.25), Some(2.0)], "{text}");
        assert!(decoded.signals.iter().all(|signal| signal.quantity == Quantity::Voltage));
    }
}

#[test]
fn rows_of_whole_numbers_are_a_table_and_no_record() {
    let sidecar = "rate = 500\ncounts_per_mv = 1000\nleads = [\"I\", \"II\", \"V1\", \"V2\"]";
    let decoded = read(&[("table.txt", "10\t8\t57\t66\n11\t6\t56\t67\n"), ("table.toml", sidecar)]);
    assert_eq!(decoded.source.format, "csv");
    assert_eq!(values(&decoded, 3), [Some(0.066), Some(0.067)]);
}

#[test]
fn a_steady_time_column_gives_the_rate() {
    for (heading, step, rate) in
        [("time [s]", 0.002, 500.0), ("t_ms", 4.0, 250.0), ("Time (s)", 0.002_778, 360.0)]
    {
        let rows: String =
            (0..500).map(|row| format!("{:.6},0.{}\n", f64::from(row) * step, row % 10)).collect();
        let decoded = read(&[("table.csv", &format!("{heading},II [mV]\n{rows}"))]);
        assert_eq!(decoded.signals.len(), 1);
        let found = decoded.signals[0].samples.rate().get();
        assert!((found - rate).abs() < 0.03, "{heading}: {found}");
    }
    // Milliseconds can't tell a step of 2.7777 ms, but from first to last they do.
    let rows: String =
        (0..3600).map(|row| format!("{:.3},0.{}\n", f64::from(row) / 360.0, row % 10)).collect();
    let decoded = read(&[("table.csv", &format!("time [s],II [mV]\n{rows}"))]);
    assert_eq!(decoded.signals[0].samples.rate().get(), 360.0);
}

#[test]
fn a_sidecar_states_everything_that_a_table_cannot() {
    let sidecar = r#"
        rate = 500
        unit = "uV"
        leads = ["I", "II"]
        start = 2024-05-01T10:20:30.5+02:00
        place = "ward 3"
        operator = "N. N."
        device = "recorder"
        placement = "torso"
        manoeuvre = "carotid massage"
        drug = "adenosine 6 mg"
        note = """
        first line
        second line"""

        [subject]
        name = "Ἑλένη Παπαδοπούλου"
        id = "17"
        birth_date = 1990-05-02
        sex = "F"

        [filters]
        low_cut = 0.05
        high_cut = 150
        mains = 50
    "#;
    let table = "1000,500\n-1000,250\n0,0\n";
    for first in ["table.csv", "table.toml"] {
        let folder = TempDir::new();
        for (name, text) in [("table.csv", table), ("table.toml", sidecar)] {
            std::fs::write(folder.path().join(name), text).expect("a file is written");
        }
        let decoded = input::read(&folder.path().join(first)).unwrap_or_else(|error| panic!("{error}"));
        assert_eq!(decoded.source.file, "table.csv");
        assert_eq!(values(&decoded, 0), [Some(1.0), Some(-1.0), Some(0.0)]);
        let day = NaiveDate::from_ymd_opt(2024, 5, 1).expect("a day");
        let local = day.and_hms_milli_opt(10, 20, 30, 500).expect("a time");
        assert_eq!(decoded.occasion.start, Some(StartTime { local, zone: FixedOffset::east_opt(7200) }));
        assert_eq!(decoded.occasion.remarks, ["first line", "second line"]);
        assert_eq!(decoded.occasion.placement.as_deref(), Some("torso"));
        assert_eq!(decoded.occasion.filters.high_cut.map(|hertz| hertz.get()), Some(150.0));
        let recording = Recording::from_decoded(decoded).expect("a recording");
        assert_eq!(recording.subject.sex, Some(Sex::Female));
        // The birthday is a day after the recording.
        assert_eq!(recording.subject.age.map(|age| age.years), Some(33.0));
        assert!(recording.samples(Lead::AVF).is_some());
    }
}

#[test]
fn a_name_that_looks_like_something_else_survives_an_export() {
    let sidecar = "rate = 500\nunit = \"mV\"\nleads = [\"time\", \"# 1\", \"V1 [raw]\", \"a \\\"b\\\", c\"]";
    let source = read(&[("table.csv", "1,2,3,4\n5,6,7,8\n"), ("table.toml", sidecar)]);
    assert_eq!(source.signals.len(), 3, "a column named time is the time");
    let sidecar = sidecar.replace("time", "index [mV]");
    let source = read(&[("table.csv", "1,2,3,4\n5,6,,8\n"), ("table.toml", &sidecar)]);
    let files = input::export(&source, input::Target::Csv, "again").expect("an export");
    let text = |index: usize| String::from_utf8(files[index].1.clone()).expect("text");
    let again = read(&[("again.csv", &text(0)), ("again.toml", &text(1))]);
    assert_eq!(again.signals, source.signals);
}

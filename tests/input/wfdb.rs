//! WFDB records against values that another program decoded.

use crate::support::npz::Npz;
use crate::support::{headers, shared};
use leadsheet::input;
use std::path::Path;

/// Compares a record with `<record>.expected.npz` beside it: names, rates, gaps, and every value to half a count.
fn as_expected(header: &Path) {
    let record = header.display();
    let expected = Npz::open(&header.with_extension("expected.npz"));
    let decoded = input::read(header).unwrap_or_else(|error| panic!("{error}"));
    let names: Vec<&str> = decoded.signals.iter().map(|signal| signal.name.as_str()).collect();
    assert_eq!(names, expected.texts("leads"), "{record}");
    let rates = expected.numbers("fs");
    for (index, signal) in decoded.signals.iter().enumerate() {
        let what = format!("{record}, {}", signal.name);
        let rate = rates.get(index).unwrap_or(&rates[0]);
        assert!((signal.samples.rate().get() - rate).abs() < 1e-9 * rate, "{what}: rate");
        let values = expected.numbers(&format!("phys_{index}"));
        assert_eq!(signal.samples.len(), values.len(), "{what}: length");
        let half_a_count = signal.resolution.expect("a count has a size") / 2.0;
        for (at, &value) in values.iter().enumerate() {
            match signal.samples.at(at) {
                Some(own) => {
                    assert!((own - value).abs() <= half_a_count, "{what}, sample {at}: {own} for {value}")
                }
                None => assert!(value.is_nan(), "{what}, sample {at}: a gap for {value}"),
            }
        }
    }
}

// Source of all values here: decoded with the wfdb package 4.3.1 for Python (see SOURCES.md beside them);
// binformats, flacformats and test01_00s are equal to the text that WFDB's own C software printed.
#[test]
fn every_record_decodes_as_another_program_decoded_it() {
    let Some(folder) = shared("formats/wfdb") else { return };
    let mut count = 0;
    for inside in ["", "multi-segment/041s", "multi-segment/fixed1", "multi-segment/s25047"] {
        for header in headers(&folder.join(inside)) {
            if header.with_extension("expected.npz").exists() {
                as_expected(&header);
                count += 1;
            }
        }
    }
    assert_eq!(count, 50, "records");
}

#[test]
fn a_flac_stream_of_few_bytes_gives_its_millions_of_samples() {
    // Source: the header's own first samples and checksums, computed by the writer of the record; the name
    // says that each signal is constant.
    let Some(folder) = shared("formats/wfdb") else { return };
    let decoded = input::read(&folder.join("flac_3_constant.hea")).unwrap_or_else(|error| panic!("{error}"));
    assert!(decoded.notes.iter().all(|note| !note.text.contains("checksum")), "{:?}", decoded.notes);
    for (signal, count) in decoded.signals.iter().zip([25.0, 50.0, 75.0]) {
        assert_eq!(signal.samples.len(), 5_600_000);
        assert_eq!(signal.samples.extremes(), Some((count / 200.0, count / 200.0)));
    }
}

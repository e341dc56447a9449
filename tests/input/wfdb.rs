//! WFDB records against values that another program decoded.

use crate::support::npz::Npz;
use crate::support::shared;
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
fn every_record_of_a_format_that_is_read_decodes_as_another_program_decoded_it() {
    let Some(folder) = shared("formats/wfdb") else { return };
    for record in [
        "03700181",
        "100",
        "100_3chan",
        "100skew",
        "3000003_0003",
        "310derive",
        "310derive_2",
        "310derive_3",
        "311derive",
        "311derive_2",
        "311derive_3",
        "311derive_4",
        "a103l",
        "a103l-no-len",
        "binformats",
        "flacformats",
        "mixedsignals",
        "s0010_re",
        "test01_00s",
        "test01_00s_frame",
        "test01_00s_skew",
        "test01_00s_skewframe",
        "v102s",
        "multi-segment/041s/041s01",
        "multi-segment/041s/041s02",
        "multi-segment/s25047/3234460_0001",
        "multi-segment/s25047/3234460_0018",
        "multi-segment/s25047/s25047-2704-05-04-10-44n",
    ] {
        as_expected(&folder.join(format!("{record}.hea")));
    }
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

//! `print` and `measure` on every recording of the open data.
//! Source of the data: LUDB 1.0.1, PhysioNet/CinC Challenge 2020–21 excerpts, and recordings built from LUDB.

use crate::support::program::leadsheet;
use crate::support::{TempDir, headers, shared};
use rayon::prelude::*;
use serde_json::Value;
use std::fs;
use std::path::PathBuf;

/// Prints the whole folder in one call and measures each recording; returns the measured documents.
fn print_and_measure(name: &str, count: usize) -> Option<Vec<(PathBuf, Value)>> {
    let folder = shared(&format!("data/{name}"))?;
    let headers = headers(&folder);
    assert_eq!(headers.len(), count);
    let temp = TempDir::new();
    let sheets = temp.path().join("sheets");
    let printed = leadsheet(
        temp.path(),
        &["print", folder.to_str().expect("UTF-8"), "-o", sheets.to_str().expect("UTF-8")],
    );
    assert_eq!(printed.status, Some(0), "{}", printed.stderr);
    for header in &headers {
        let sheet = sheets.join(header.file_stem().expect("a name")).with_extension("pdf");
        let bytes = fs::metadata(&sheet).unwrap_or_else(|_| panic!("{} is missing", sheet.display())).len();
        assert!(bytes <= 120 * 1024, "{} has {bytes} bytes", sheet.display());
    }
    let schema: Value = serde_json::from_str(leadsheet::report::JSON_SCHEMA).expect("the schema is JSON");
    let validator = jsonschema::validator_for(&schema).expect("the schema is a schema");
    let documents = headers
        .into_par_iter()
        .map(|header| {
            let text =
                leadsheet(temp.path(), &["measure", header.to_str().expect("UTF-8"), "--format", "json"])
                    .ok();
            let document: Value = serde_json::from_str(&text).expect("JSON");
            let broken: Vec<String> = validator
                .iter_errors(&document)
                .map(|error| format!("{}: {error}", error.instance_path()))
                .collect();
            assert!(broken.is_empty(), "{}: {}", header.display(), broken.join("; "));
            (header, document)
        })
        .collect();
    Some(documents)
}

#[test]
fn all_100_of_ludb_are_printed_and_measured() {
    let Some(documents) = print_and_measure("ludb", 100) else { return };
    for (header, document) in documents {
        let rate = &document["measurements"]["ventricular_rate"]["value"];
        assert!(rate.is_f64(), "{}: no rate", header.display());
    }
}

#[test]
fn all_150_built_tachycardias_are_printed_and_measured() {
    print_and_measure("tachycardia", 150);
}

#[test]
fn all_16_minutes_with_an_onset_are_printed_and_measured() {
    print_and_measure("onset", 16);
}

#[test]
fn all_84_labelled_rhythms_are_printed_and_measured_and_what_is_odd_is_said() {
    let Some(documents) = print_and_measure("rhythms", 84) else { return };
    // The notes on the data say that this recording has flat chest leads.
    let (_, document) =
        documents.iter().find(|(header, _)| header.ends_with("JS11438.hea")).expect("it is there");
    let flat = document["recording"]["leads"]
        .as_array()
        .expect("leads")
        .iter()
        .filter(|lead| {
            lead["origin"] == "absent" && lead["reason"].as_str().is_some_and(|why| why.contains("flat"))
        })
        .count();
    assert!(flat > 0, "flat leads are not said");
}

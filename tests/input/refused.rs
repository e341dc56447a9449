//! What is refused, and how it is said.

use crate::support::golden::assert_golden;
use crate::support::project;
use leadsheet::input;
use leadsheet::recording::Recording;
use std::path::{Path, PathBuf};

/// Reads a file as far as a sheet would need it, and gives what stopped it.
fn refusal(path: &Path) -> Result<(), String> {
    let decoded = input::read(path).map_err(|error| error.to_string())?;
    let recording =
        Recording::from_decoded(decoded).map_err(|refusal| format!("{}: {refusal}", path.display()))?;
    recording.printable().map_err(|refusal| format!("{}: {refusal}", path.display()))
}

/// Every file that stands for a recording: headers, tables, a sidecar alone, and what is none of them.
fn hostile() -> Vec<PathBuf> {
    let folder = project().join("tests/hostile");
    let mut paths: Vec<PathBuf> = std::fs::read_dir(&folder)
        .expect("the folder")
        .map(|entry| entry.expect("an entry").path())
        .collect();
    let part = |path: &PathBuf| {
        let extension = path.extension().unwrap_or_default();
        let name = path.file_name().unwrap_or_default();
        extension == "dat"
            || name == "messages.txt"
            || (extension == "toml" && path.with_extension("csv").exists())
    };
    paths.retain(|path| !part(path));
    paths.extend([folder.join("nowhere.hea"), folder.clone()]);
    paths.sort();
    paths
}

#[test]
fn every_hostile_file_is_refused_with_a_message_that_says_what_to_do() {
    let folder = project().join("tests/hostile");
    let prefix = format!("{}/", folder.display());
    let mut text = String::new();
    for path in hostile() {
        let Err(message) = refusal(&path) else { panic!("{} was taken", path.display()) };
        // What, where and what next: each message has a file, a colon and an advice.
        assert!(message.contains(": ") && message.contains(';'), "{message}");
        text.push_str(&message.replace(&prefix, "").replace(&folder.display().to_string(), "FOLDER"));
        text.push('\n');
    }
    assert_golden(&folder.join("messages.txt"), &text);
}

//! What the judges beside the project say of the built program. They are no part of it, and a clone is without them.

use crate::support::shared;
use std::collections::BTreeMap;
use std::path::Path;
use std::process::Command;

/// The outputs of the judges by name; `None` where they, their data or their Python are not here.
pub fn all() -> Option<BTreeMap<&'static str, String>> {
    let judge = shared("accuracy/judge.py")?;
    let runs: [(&str, &[&str]); 6] = [
        ("waves", &["data/ludb"]),
        ("global", &["data/ludb"]),
        ("qtdb", &["data/qtdb"]),
        ("beats", &["data/mitdb"]),
        ("retro", &["data/tachycardia", "data/ludb"]),
        ("onset", &["data/onset"]),
    ];
    let built = Path::new(env!("CARGO_BIN_EXE_leadsheet"));
    let held_out =
        built.with_file_name("examples").join("held_out").with_extension(std::env::consts::EXE_EXTENSION);
    if !held_out.exists() {
        eprintln!("SKIPPED: {} is not built; `cargo test` without `--test` builds it", held_out.display());
        return None;
    }
    let mut said = BTreeMap::new();
    for (what, data) in runs {
        let mut command = Command::new("python3");
        // What the network was trained on is judged by networks that were trained without the recording.
        let trained_on = ["data/ludb", "data/qtdb"].contains(&data[0]);
        let program = if trained_on { &held_out } else { built };
        command.arg(&judge).arg(what).arg(program).arg(shared(data[0])?);
        if let Some(sinus) = data.get(1) {
            command.arg("--sinus").arg(shared(sinus)?);
        }
        let output = match command.output() {
            Ok(output) if output.status.success() => output.stdout,
            other => {
                eprintln!(
                    "SKIPPED: the judge {what} can't be run; it needs python3 with numpy and wfdb: {other:?}"
                );
                return None;
            }
        };
        let text = String::from_utf8(output).expect("the judge prints UTF-8");
        println!("\n{what}\n{text}");
        said.insert(what, text);
    }
    Some(said)
}

/// The numbers of the line that begins with these words.
pub fn numbers(text: &str, line: &[&str]) -> Vec<f64> {
    let found = text.lines().find(|candidate| {
        let mut words = candidate.split_whitespace();
        line.iter().all(|word| words.next() == Some(word))
    });
    let found = found.unwrap_or_else(|| panic!("no line {line:?} in\n{text}"));
    found
        .split(|c: char| !(c.is_ascii_digit() || c == '.' || c == '-'))
        .filter_map(|word| word.trim_end_matches('.').parse().ok())
        .collect()
}

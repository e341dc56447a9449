//! `leadsheet` with the networks that were trained without the recording it is given, to be judged:
//!
//!     cargo build --release --example held_out
//!     judge waves target/release/examples/held_out DATA/ludb
//!
//! The annotated recordings of each set, in the order of their names, belong to the folds in turn.

use std::path::Path;
use std::process::ExitCode;

/// Weights trained without the recordings of each fold.
const FOLDS: [&[u8]; 4] = [
    include_bytes!("folds/0.bin"),
    include_bytes!("folds/1.bin"),
    include_bytes!("folds/2.bin"),
    include_bytes!("folds/3.bin"),
];

fn main() -> ExitCode {
    if let Some(fold) = std::env::args().skip(1).find_map(|argument| fold(Path::new(&argument))) {
        assert!(leadsheet::measure::network::replace(FOLDS[fold]), "the weights fit");
    }
    leadsheet::cli::run(std::env::args_os())
}

/// The fold of an annotated recording; `None` for anything else.
fn fold(header: &Path) -> Option<usize> {
    if header.extension()? != "hea"
        || !["ludb", "qtdb"].iter().any(|set| header.parent().is_some_and(|folder| folder.ends_with(set)))
    {
        return None;
    }
    let mut names: Vec<_> = std::fs::read_dir(header.parent()?)
        .ok()?
        .filter_map(|entry| Some(entry.ok()?.path()))
        .filter(|path| path.extension().is_some_and(|extension| extension == "hea"))
        .collect();
    names.sort();
    names.iter().position(|path| path.file_name() == header.file_name()).map(|place| place % FOLDS.len())
}

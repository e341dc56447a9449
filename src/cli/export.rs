//! `leadsheet export`.

use super::args::ExportArgs;
use super::{Failure, terminal};
use crate::batch::{Overwrite, SaveError, save};
use crate::input::{self, Target};
use std::path::{Path, PathBuf};

pub(super) fn export(args: &ExportArgs) -> Result<(), Failure> {
    let because = |error: &dyn std::fmt::Display| Failure::Because(error.to_string());
    let (target, folder, stem) = target(&args.output)?;
    let decoded = input::read(&args.recording).map_err(|error| because(&error))?;
    let files = input::export(&decoded, target, &stem).map_err(|error| because(&error))?;
    let files: Vec<(PathBuf, Vec<u8>)> =
        files.into_iter().map(|(name, bytes)| (folder.join(name), bytes)).collect();
    let overwrite = if args.overwrite { Overwrite::Allow } else { Overwrite::Refuse };
    // A record is several files, written all or none.
    if let Some((path, _)) = files.iter().find(|(path, _)| !args.overwrite && path.exists()) {
        return Err(because(&SaveError::Exists(path.clone())));
    }
    let mut said = String::new();
    for (path, bytes) in &files {
        save(path, bytes, overwrite).map_err(|error| because(&error))?;
        said.push_str(&format!("{}\n", path.display()));
    }
    terminal::say(&said)
}

/// The format that the name's ending asks for, the folder, and the record's name.
fn target(output: &Path) -> Result<(Target, PathBuf, String), Failure> {
    let target = match output.extension().and_then(|ending| ending.to_str()) {
        Some("csv") => Target::Csv,
        Some("hea") => Target::Wfdb,
        _ => {
            return Err(Failure::Usage(format!(
                "{}: expected a name that ends in .csv or .hea",
                output.display()
            )));
        }
    };
    let stem = output.file_stem().and_then(|stem| stem.to_str()).ok_or_else(|| {
        Failure::Usage(format!("{}: the name is not in UTF-8; choose another", output.display()))
    })?;
    Ok((target, output.parent().unwrap_or(Path::new("")).to_owned(), stem.to_owned()))
}

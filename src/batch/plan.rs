//! What is to be done, checked before any of it is.

use super::Overwrite;
use std::collections::BTreeMap;
use std::fmt;
use std::path::{Path, PathBuf};

/// One recording and the file that its sheet goes to.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Job {
    /// The recording.
    pub input: PathBuf,
    /// The sheet.
    pub output: PathBuf,
}

/// Jobs whose outputs neither clash nor stand in the way of what is already there.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Plan {
    /// In input order.
    pub jobs: Vec<Job>,
    /// What to do with files that are already there.
    pub overwrite: Overwrite,
}

/// Everything that keeps a plan from being carried out.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct PlanError(pub Vec<Conflict>);

/// One thing that does.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Conflict {
    /// Several recordings would give the same file.
    SameOutput {
        /// The file.
        output: PathBuf,
        /// The recordings.
        inputs: Vec<PathBuf>,
    },
    /// The sheet would replace a recording.
    OutputIsInput(PathBuf),
}

impl Plan {
    /// Checks `jobs` against each other. Files that are already there are left to the moment of
    /// writing, so that one of them doesn't stop the rest.
    ///
    /// # Errors
    /// All conflicts at once.
    pub fn new(jobs: Vec<Job>, overwrite: Overwrite) -> Result<Self, PlanError> {
        let mut by_output: BTreeMap<&Path, Vec<&Path>> = BTreeMap::new();
        for job in &jobs {
            by_output.entry(&job.output).or_default().push(&job.input);
        }
        let mut conflicts: Vec<Conflict> = by_output
            .iter()
            .filter(|(_, inputs)| inputs.len() > 1)
            .map(|(output, inputs)| Conflict::SameOutput {
                output: output.to_path_buf(),
                inputs: inputs.iter().map(|input| input.to_path_buf()).collect(),
            })
            .collect();
        conflicts.extend(
            jobs.iter()
                .filter(|job| jobs.iter().any(|other| other.input == job.output))
                .map(|job| Conflict::OutputIsInput(job.output.clone())),
        );
        if conflicts.is_empty() { Ok(Self { jobs, overwrite }) } else { Err(PlanError(conflicts)) }
    }
}

impl fmt::Display for PlanError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        for (index, conflict) in self.0.iter().enumerate() {
            if index > 0 {
                writeln!(f)?;
            }
            match conflict {
                Conflict::SameOutput { output, inputs } => {
                    let inputs: Vec<String> =
                        inputs.iter().map(|input| input.display().to_string()).collect();
                    write!(
                        f,
                        "{}: {} would all be printed to it; print them to different folders",
                        output.display(),
                        inputs.join(", ")
                    )?;
                }
                Conflict::OutputIsInput(path) => {
                    write!(f, "{}: is a recording of this call; choose another output", path.display())?;
                }
            }
        }
        Ok(())
    }
}

impl std::error::Error for PlanError {}

//! Carrying out a plan on all cores.

use super::{Job, Plan, save};
use rayon::prelude::*;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::path::PathBuf;

/// What became of one recording.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Outcome {
    /// The recording.
    pub input: PathBuf,
    /// The file written, or why there is none.
    pub result: Result<PathBuf, String>,
}

/// Carries out `plan` on `threads` (0: what rayon takes by itself): `work` makes the bytes of a sheet,
/// `done` is told after each. One failure never stops the rest; the outcomes come in input order.
pub fn run(
    plan: &Plan,
    threads: usize,
    work: impl Fn(&Job) -> Result<Vec<u8>, String> + Sync,
    done: impl Fn() + Sync,
) -> Vec<Outcome> {
    let one = |job: &Job| {
        // A panic is a defect of this program; it must not take the other recordings with it.
        let bytes = catch_unwind(AssertUnwindSafe(|| work(job))).unwrap_or_else(|_| {
            Err(format!("{}: a defect of leadsheet stopped it; please report the file", job.input.display()))
        });
        let result = bytes.and_then(|bytes| {
            save(&job.output, &bytes, plan.overwrite)
                .map(|()| job.output.clone())
                .map_err(|error| error.to_string())
        });
        done();
        Outcome { input: job.input.clone(), result }
    };
    match plan.jobs.as_slice() {
        // A pool of threads costs more than one sheet.
        [job] => vec![one(job)],
        jobs => match rayon::ThreadPoolBuilder::new().num_threads(threads).build() {
            Ok(pool) => pool.install(|| jobs.par_iter().map(one).collect()),
            // No threads to be had: one after the other.
            Err(_) => jobs.iter().map(one).collect(),
        },
    }
}

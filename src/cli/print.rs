//! `leadsheet print`.

use super::args::PrintArgs;
use super::look::Look;
use super::{Failure, inputs, terminal};
use crate::batch::{Job, Outcome, Overwrite, Plan, run};
use crate::recording::Occasion;
use indicatif::{ProgressBar, ProgressStyle};
use std::io::IsTerminal;
use std::path::{Path, PathBuf};

pub(super) fn print(args: &PrintArgs) -> Result<(), Failure> {
    let look = Look::checked(&args.look)?;
    let sinus = args.sinus.as_deref().map(inputs::read).transpose().map_err(Failure::Because)?;
    let recordings = inputs::expand(&args.recordings)?;
    let jobs = jobs(&args.recordings, recordings, args.output.as_deref())?;
    let overwrite = if args.overwrite { Overwrite::Allow } else { Overwrite::Refuse };
    let plan = Plan::new(jobs, overwrite).map_err(|error| Failure::Usage(error.to_string()))?;
    carry_out(&plan, |job| {
        let mut recording = inputs::read(&job.input)?;
        state(&mut recording.occasion, args);
        look.sheet(&job.input, recording, sinus.clone())
    })
}

/// Carries out a plan, with a progress bar on a terminal, and says what came of it.
pub(super) fn carry_out(
    plan: &Plan,
    work: impl Fn(&Job) -> Result<Vec<u8>, String> + Sync,
) -> Result<(), Failure> {
    let bar = if plan.jobs.len() > 1 && std::io::stderr().is_terminal() {
        let style = ProgressStyle::with_template("{bar:40} {pos} of {len} sheets, {eta} left");
        ProgressBar::new(plan.jobs.len() as u64)
            .with_style(style.unwrap_or_else(|_| ProgressStyle::default_bar()))
    } else {
        ProgressBar::hidden()
    };
    let outcomes = run(plan, threads(), work, || bar.inc(1));
    bar.finish_and_clear();
    summary(&outcomes)
}

/// Two threads a core: while one waits for its file to reach the disk, another computes. Rayon's own
/// variable overrules it.
fn threads() -> usize {
    match std::env::var_os("RAYON_NUM_THREADS") {
        Some(_) => 0,
        None => 2 * std::thread::available_parallelism().map_or(1, usize::from),
    }
}

/// One line a sheet on stdout, one a failure on stderr, and for several a count.
fn summary(outcomes: &[Outcome]) -> Result<(), Failure> {
    let mut written = String::new();
    let mut failed = 0;
    for outcome in outcomes {
        match &outcome.result {
            Ok(path) => written.push_str(&format!("{}\n", path.display())),
            Err(reason) => {
                failed += 1;
                terminal::complain(reason);
            }
        }
    }
    if outcomes.len() > 1 {
        written
            .push_str(&format!("{} sheets printed, {failed} recordings refused\n", outcomes.len() - failed));
    }
    terminal::say(&written)?;
    if failed > 0 { Err(Failure::Reported) } else { Ok(()) }
}

fn state(occasion: &mut Occasion, args: &PrintArgs) {
    let given = |flag: &Option<String>, field: &mut Option<String>| {
        if flag.is_some() {
            field.clone_from(flag);
        }
    };
    given(&args.placement, &mut occasion.placement);
    given(&args.manoeuvre, &mut occasion.manoeuvre);
    given(&args.drug, &mut occasion.drug);
}

/// Which sheet goes where: one recording to a file (or a folder), several to a folder.
fn jobs(named: &[PathBuf], recordings: Vec<PathBuf>, output: Option<&Path>) -> Result<Vec<Job>, Failure> {
    let several = recordings.len() > 1 || named.iter().any(|path| path.is_dir());
    let folder = match output {
        Some(path) if several || path.is_dir() => path,
        Some(path) => {
            let job = |input| Job { input, output: path.to_owned() };
            return Ok(recordings.into_iter().map(job).collect());
        }
        None if several => {
            return Err(Failure::Usage("several recordings go to a folder: add -o DIR".to_owned()));
        }
        None => Path::new(""),
    };
    if several && folder.exists() && !folder.is_dir() {
        return Err(Failure::Usage(format!(
            "{}: several recordings go to a folder, and this is a file",
            folder.display()
        )));
    }
    if several {
        std::fs::create_dir_all(folder)
            .map_err(|error| Failure::Because(format!("{}: {error}", folder.display())))?;
    }
    let job = |input: PathBuf| {
        let mut name = input.file_stem().unwrap_or_default().to_owned();
        name.push(".pdf");
        Job { output: folder.join(name), input }
    };
    Ok(recordings.into_iter().map(job).collect())
}

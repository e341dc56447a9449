//! `leadsheet demo`: the invented recordings, and their sheets.

use super::args::DemoArgs;
use super::look::Look;
use super::{Failure, inputs, print, terminal};
use crate::batch::{Job, Overwrite, Plan, SaveError, save};

/// The files of `demo-data/` that a demo needs, and the sheets to make of them.
const FILES: &[(&str, &[u8])] = &[
    ("tachycardia.hea", include_bytes!("../../demo-data/tachycardia.hea")),
    ("tachycardia.dat", include_bytes!("../../demo-data/tachycardia.dat")),
    ("sinus.hea", include_bytes!("../../demo-data/sinus.hea")),
    ("sinus.dat", include_bytes!("../../demo-data/sinus.dat")),
    ("onset.hea", include_bytes!("../../demo-data/onset.hea")),
    ("onset.dat", include_bytes!("../../demo-data/onset.dat")),
];

pub(super) fn demo(args: &DemoArgs) -> Result<(), Failure> {
    let folder = &args.folder;
    let because = |error: &dyn std::fmt::Display| Failure::Because(error.to_string());
    std::fs::create_dir_all(folder).map_err(|error| because(&format!("{}: {error}", folder.display())))?;
    for (name, bytes) in FILES {
        write_demo_file(&folder.join(name), bytes, args.overwrite).map_err(|error| because(&error))?;
    }
    let look = Look::standard()?;
    let jobs = FILES
        .iter()
        .filter(|(name, _)| name.ends_with(".hea"))
        .map(|(name, _)| folder.join(name))
        .map(|input| Job { output: input.with_extension("pdf"), input })
        .collect();
    // The sheets are made anew from known input, so one of an earlier demo may go.
    let plan = Plan::new(jobs, Overwrite::Allow).map_err(|error| because(&error))?;
    terminal::say("Invented recordings of an invented patient; their sheets:\n")?;
    print::carry_out(&plan, |job| look.sheet(&job.input, inputs::read(&job.input)?, None))
}

/// A file of an earlier demo with the same content is left as it is; any other is not touched.
fn write_demo_file(path: &std::path::Path, bytes: &[u8], overwrite: bool) -> Result<(), SaveError> {
    if std::fs::read(path).is_ok_and(|there| there == bytes) {
        return Ok(());
    }
    save(path, bytes, if overwrite { Overwrite::Allow } else { Overwrite::Refuse })
}

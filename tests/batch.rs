//! Files whole or not at all, and one outcome per input.

use crate::support::TempDir;
use leadsheet::batch::{Job, Outcome, Overwrite, Plan, SaveError, run, save};
use std::fs;
use std::path::PathBuf;

#[test]
fn a_file_that_is_there_is_left_alone_unless_asked() {
    let folder = TempDir::new();
    let path = folder.path().join("sheet.pdf");
    save(&path, b"first", Overwrite::Refuse).expect("nothing stands in the way");
    assert!(matches!(save(&path, b"second", Overwrite::Refuse), Err(SaveError::Exists(_))));
    assert_eq!(fs::read(&path).expect("it is there"), b"first");
    save(&path, b"third", Overwrite::Allow).expect("it may be replaced");
    assert_eq!(fs::read(&path).expect("it is there"), b"third");
}

#[test]
fn a_failed_write_leaves_nothing_behind() {
    let folder = TempDir::new();
    let path = folder.path().join("sheet.pdf");
    fs::create_dir(&path).expect("a folder in the way");
    assert!(save(&path, b"sheet", Overwrite::Allow).is_err());
    let left: Vec<_> = fs::read_dir(folder.path()).expect("readable").collect();
    assert_eq!(left.len(), 1, "only the folder that stood in the way: {left:?}");
    let nowhere = folder.path().join("missing/sheet.pdf");
    assert!(matches!(save(&nowhere, b"sheet", Overwrite::Allow), Err(SaveError::NoFolder(_))));
}

fn job(input: &str, output: PathBuf) -> Job {
    Job { input: PathBuf::from(input), output }
}

#[test]
fn clashing_outputs_are_refused_before_work_starts() {
    let folder = TempDir::new();
    let output = folder.path().join("1.pdf");
    let jobs = vec![job("a/1.hea", output.clone()), job("b/1.hea", output.clone())];
    let error = Plan::new(jobs, Overwrite::Allow).expect_err("they clash").to_string();
    assert!(error.contains("a/1.hea, b/1.hea"), "{error}");
    assert!(Plan::new(vec![job("x.csv", PathBuf::from("x.csv"))], Overwrite::Allow).is_err());
}

#[test]
fn one_bad_recording_stops_no_other_and_outcomes_keep_their_order() {
    let folder = TempDir::new();
    let jobs: Vec<Job> =
        (0..8).map(|n| job(&format!("{n}.hea"), folder.path().join(format!("{n}.pdf")))).collect();
    let plan = Plan::new(jobs, Overwrite::Refuse).expect("no clash");
    let work = |job: &Job| match job.input.to_str() {
        Some("3.hea") => Err("3.hea: broken".to_owned()),
        Some("5.hea") => panic!("a defect"),
        _ => Ok(b"sheet".to_vec()),
    };
    let outcomes: Vec<Outcome> = run(&plan, 3, work, || ());
    let order: Vec<_> = outcomes.iter().map(|outcome| outcome.input.clone()).collect();
    assert_eq!(order, plan.jobs.iter().map(|job| job.input.clone()).collect::<Vec<_>>());
    let failed: Vec<usize> = (0..8).filter(|&n| outcomes[n].result.is_err()).collect();
    assert_eq!(failed, [3, 5]);
    assert_eq!(fs::read_dir(folder.path()).expect("readable").count(), 6);
}

//! The same bytes from the same input and settings.

use crate::support::program::{leadsheet, ran};
use crate::support::{TempDir, project};
use std::fs;
use std::process::Command;

#[test]
fn two_runs_give_the_same_bytes_also_with_another_zone_locale_and_folder() {
    let demo = project().join("demo-data/tachycardia.hea");
    let demo = demo.to_str().expect("UTF-8");
    let (here, there) = (TempDir::new(), TempDir::new());
    leadsheet(here.path(), &["print", demo, "-o", "sheet.pdf"]).ok();
    ran(Command::new(env!("CARGO_BIN_EXE_leadsheet"))
        .args(["print", demo, "-o", "sheet.pdf"])
        .current_dir(there.path())
        .env("TZ", "Pacific/Chatham")
        .env("LC_ALL", "tr_TR.UTF-8")
        .env("RAYON_NUM_THREADS", "7"))
    .ok();
    let read = |folder: &TempDir| fs::read(folder.path().join("sheet.pdf")).expect("the sheet");
    assert_eq!(read(&here), read(&there));
}

#[test]
fn one_thread_and_many_give_the_same_sheets() {
    let data = project().join("demo-data");
    let data = data.to_str().expect("UTF-8");
    let folder = TempDir::new();
    for (threads, output) in [("1", "one"), ("4", "many")] {
        ran(Command::new(env!("CARGO_BIN_EXE_leadsheet"))
            .args(["print", data, "-o", output])
            .current_dir(folder.path())
            .env("RAYON_NUM_THREADS", threads))
        .ok();
    }
    let mut compared = 0;
    for entry in fs::read_dir(folder.path().join("one")).expect("sheets") {
        let path = entry.expect("an entry").path();
        let other = folder.path().join("many").join(path.file_name().expect("a name"));
        assert_eq!(
            fs::read(&path).expect("a sheet"),
            fs::read(&other).expect("its twin"),
            "{}",
            path.display()
        );
        compared += 1;
    }
    assert!(compared >= 3, "only {compared} sheets");
}

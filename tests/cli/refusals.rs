//! What can't be printed: a clear message, an exit status other than 0, no output file.

use crate::support::program::leadsheet;
use crate::support::{TempDir, project, shared};
use std::fs;
use std::path::Path;

/// Prints `input` and checks that it is refused with every one of `words` in the message.
fn refused(folder: &Path, input: &str, words: &[&str]) {
    let ran = leadsheet(folder, &["print", input, "-o", "out.pdf"]);
    assert_eq!(ran.status, Some(1), "{input}: {ran:?}");
    assert!(ran.stdout.is_empty(), "{input} printed {}", ran.stdout);
    assert!(!folder.join("out.pdf").exists(), "{input} left a file");
    assert!(!ran.stderr.contains("panicked"), "{input}: {}", ran.stderr);
    for word in words {
        assert!(ran.stderr.contains(word), "{input}: no \"{word}\" in: {}", ran.stderr);
    }
}

fn csv(folder: &Path, name: &str, text: &str) -> String {
    fs::write(folder.join(name), text).expect("a file");
    name.to_owned()
}

fn wave(seconds: f64, scale: f64) -> String {
    let mut text = "time [s],I [mV],II [mV]\n".to_owned();
    for sample in 0..(seconds * 500.0) as usize {
        let time = sample as f64 / 500.0;
        let spike = scale * (-((time % 0.8 - 0.3) / 0.012).powi(2)).exp();
        text.push_str(&format!("{time:.3},{:.4},{:.4}\n", spike * 0.8, spike));
    }
    text
}

#[test]
fn bad_recordings_are_refused_with_what_to_do() {
    let temp = TempDir::new();
    let folder = temp.path();
    refused(folder, "missing.hea", &["missing.hea"]);
    refused(folder, &csv(folder, "empty.hea", ""), &["empty"]);
    refused(
        folder,
        &csv(folder, "far.hea", "far 1 500 10\n../far.dat 16 200 16 0 0 0 0 II\n"),
        &["../far.dat"],
    );
    refused(
        folder,
        &csv(folder, "root.hea", "root 1 500 10\n/etc/passwd 16 200 16 0 0 0 0 II\n"),
        &["/etc/passwd"],
    );
    refused(
        folder,
        &csv(folder, "gone.hea", "gone 1 500 10\ngone.dat 16 200 16 0 0 0 0 II\n"),
        &["gone.dat"],
    );
    fs::write(folder.join("z.dat"), vec![0; 2000]).expect("a file");
    refused(folder, &csv(folder, "zero.hea", "zero 1 0 10\nz.dat 16 200 16 0 0 0 0 II\n"), &["line 1"]);
    refused(
        folder,
        &csv(folder, "many.hea", "many 99999999 500 10\nz.dat 16 200 16 0 0 0 0 II\n"),
        &["99999999"],
    );
    refused(folder, &csv(folder, "word.hea", "word one 500 10\nz.dat 16 200 16 0 0 0 0 II\n"), &["formats"]);
    refused(folder, &csv(folder, "flat.hea", "flat 1 500 1000\nz.dat 16 200 16 0 0 0 0 II\n"), &["flat"]);
    refused(folder, &csv(folder, "cut.hea", "cut 1 500 90000\nz.dat 16 200 16 0 0 0 0 II\n"), &["z.dat"]);
    refused(folder, &csv(folder, "unit.csv", "time [s],I,II\n0,0.1,0.1\n0.002,0.1,0.1\n"), &["unit"]);
    refused(
        folder,
        &csv(folder, "nan.csv", "time [s],I [mV],II [mV]\n0,0,0\n0.002,NaN,0\n"),
        &["line 3", "NaN"],
    );
    refused(
        folder,
        &csv(folder, "text.csv", "time [s],I [mV],II [mV]\n0,0,0\n0.002,high,0\n"),
        &["line 3", "high"],
    );
    let unnamed = wave(10.0, 1.0).replacen("I [mV],II [mV]", "left [mV],right [mV]", 1);
    refused(folder, &csv(folder, "names.csv", &unnamed), &["left"]);
    refused(folder, &csv(folder, "short.csv", &wave(1.0, 1.0)), &["2.5 s"]);
    refused(
        folder,
        &csv(folder, "letter.txt", "Dear colleague,\nthank you for the referral.\n"),
        &["formats"],
    );
    let slow = "time [s],II [mV]\n".to_owned()
        + &(0..400).map(|n| format!("{},{}\n", n as f64 * 0.02, n % 3)).collect::<String>();
    refused(folder, &csv(folder, "slow.csv", &slow), &["50", "100"]);
}

#[test]
fn what_holds_no_lead_is_not_printed_but_exported() {
    let Some(path) = shared("formats/edf/test_generator_2.edf") else { return };
    let temp = TempDir::new();
    let source = path.to_str().expect("UTF-8");
    refused(temp.path(), source, &["no signal has the name of a lead", "squarewave"]);
    for (output, files) in [("a.csv", ["a.csv", "a.toml"]), ("b.hea", ["b.hea", "b.dat"])] {
        let ran = leadsheet(temp.path(), &["export", source, "-o", output]);
        assert_eq!(ran.status, Some(0), "{output}: {}", ran.stderr);
        assert!(files.iter().all(|file| temp.path().join(file).exists()), "{output}: {}", ran.stdout);
    }
}

#[test]
fn a_sheet_that_is_there_is_not_overwritten() {
    let folder = TempDir::new();
    let demo = project().join("demo-data/sinus.hea");
    fs::write(folder.path().join("sheet.pdf"), "mine").expect("a file");
    let ran = leadsheet(folder.path(), &["print", demo.to_str().expect("UTF-8"), "-o", "sheet.pdf"]);
    assert_eq!(ran.status, Some(1));
    assert!(ran.stderr.contains("--overwrite"), "{}", ran.stderr);
    assert_eq!(fs::read(folder.path().join("sheet.pdf")).expect("it is there"), b"mine");
}

#[test]
fn one_bad_file_stops_no_other_and_the_exit_status_says_so() {
    let temp = TempDir::new();
    let folder = temp.path();
    let demo = project().join("demo-data/sinus.hea");
    csv(folder, "bad.hea", "bad 1 0 10\nz.dat 16 200 16 0 0 0 0 II\n");
    let ran = leadsheet(folder, &["print", "bad.hea", demo.to_str().expect("UTF-8"), "-o", "sheets"]);
    assert_eq!(ran.status, Some(1));
    assert!(ran.stderr.contains("bad.hea"), "{}", ran.stderr);
    assert!(ran.stdout.contains("1 sheets printed, 1 recordings refused"), "{}", ran.stdout);
    assert!(folder.join("sheets/sinus.pdf").exists());
}

#[test]
fn arguments_that_make_no_sense_end_with_status_2() {
    let folder = TempDir::new();
    for arguments in [
        &["print"][..],
        &["print", "x.hea", "--speed", "30"],
        &["print", "x.hea", "--rhythm", "V9"],
        &["print", "x.hea", "--low-cut", "-1"],
        &["print", "x.hea", "--layout", "no-such-layout"],
        &["print", "x.hea", "y.hea"],
        &["publish"],
    ] {
        let ran = leadsheet(folder.path(), arguments);
        assert_eq!(ran.status, Some(2), "{arguments:?}: {}", ran.stderr);
    }
}

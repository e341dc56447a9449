//! True scale, measured on the produced file: vertices read back from the content stream, and the
//! independent checker that lies beside the project.

use crate::pdf::paths::{Path, stroked_on};
use crate::support::sheets::{UNFILTERED, case_by_hand, case_of};
use crate::support::{TempDir, project, shared};
use leadsheet::case::{Case, Settings};
use leadsheet::pdf::{self, DocumentInfo};
use leadsheet::recording::Lead;
use leadsheet::sheet::{Layout, Paper, SheetOptions, compose};
use leadsheet::units::PaperSpeed;
use std::process::Command;

fn written(case: &Case, layout: &str, options: &SheetOptions) -> Vec<u8> {
    let layout = Layout::load(layout).unwrap_or_else(|error| panic!("{error}"));
    let pages = compose(case, &layout, options).unwrap_or_else(|error| panic!("{error}"));
    let info = DocumentInfo {
        title: "sheet".to_owned(),
        subject: "test".to_owned(),
        language: "en",
        creator: "leadsheet".to_owned(),
        date: None,
    };
    pdf::write(&pages, &info).unwrap_or_else(|error| panic!("{error}"))
}

/// Every stroked line of a page, in mm, y up.
fn lines(bytes: &[u8], page: usize) -> Vec<Vec<(f64, f64)>> {
    let upwards = |path: Path| path.points.into_iter().map(|(x, y)| (x, -y)).collect();
    stroked_on(bytes, page - 1).into_iter().map(upwards).collect()
}

/// Leads in the order in which the standard layout draws them, with the second they start at.
const ORDER: [(Lead, f64); 13] = [
    (Lead::I, 0.0),
    (Lead::AVR, 2.5),
    (Lead::V1, 5.0),
    (Lead::V4, 7.5),
    (Lead::II, 0.0),
    (Lead::AVL, 2.5),
    (Lead::V2, 5.0),
    (Lead::V5, 7.5),
    (Lead::III, 0.0),
    (Lead::AVF, 2.5),
    (Lead::V3, 5.0),
    (Lead::V6, 7.5),
    (Lead::II, 0.0),
];

/// Compares the standard sheet's lines with the recording's own samples: 0.1 ms, 5 µV at the vertices, and
/// 0.005 mm between the drawn line and every sample.
fn assert_true(case: &Case, what: &str) {
    let lines = lines(&written(case, "standard", &SheetOptions::default()), 1);
    // A calibration pulse is a foot, a rise, a top; its foot is the row's zero line.
    let is_pulse =
        |line: &&Vec<(f64, f64)>| line.len() == 6 && line[1].0 == line[2].0 && line[3].0 == line[4].0;
    let pulses: Vec<&Vec<(f64, f64)>> = lines.iter().filter(is_pulse).collect();
    let zeros: Vec<f64> = pulses.iter().map(|line| line[0].1).collect();
    let gains: Vec<f64> = pulses.iter().map(|line| line[2].1 - line[0].1).collect();
    let traces: Vec<&Vec<(f64, f64)>> = lines.iter().filter(|line| line.len() >= 200).take(13).collect();
    assert_eq!((zeros.len(), traces.len()), (4, 13), "{what}");
    for (index, trace) in traces.iter().enumerate() {
        let (lead, start) = ORDER[index];
        let (zero, gain) = (zeros[index / 4], gains[index / 4]);
        let samples = case.recording.samples(lead).expect("a lead").values_with_gaps();
        let rate = case.recording.rate.get();
        let time = |x: f64| start + (x - trace[0].0) / 25.0;
        let drawn: Vec<(f64, f64)> = trace.iter().map(|&(x, y)| (time(x), (y - zero) / gain)).collect();
        for &(t, value) in &drawn {
            let sample = (t * rate).round();
            assert!((sample / rate - t).abs() < 0.0001, "{what}, {lead}: a vertex at {t} s is at no sample");
            let own = samples[sample as usize];
            assert!((value - own).abs() < 0.005, "{what}, {lead} at {t} s: {value} mV drawn, {own} recorded");
        }
        for pair in drawn.windows(2) {
            let ((t0, v0), (t1, v1)) = (pair[0], pair[1]);
            let (first, last) = ((t0 * rate).round() as usize, (t1 * rate).round() as usize);
            for (sample, own) in samples.iter().enumerate().take(last + 1).skip(first) {
                let line = v0 + (v1 - v0) * (sample - first) as f64 / (last - first) as f64;
                let off = (line - own).abs() * gain;
                assert!(off <= 0.005, "{what}, {lead}: the line passes sample {sample} at {off} mm");
            }
        }
    }
}

#[test]
fn unfiltered_traces_are_the_recordings_own_samples() {
    assert_true(&case_by_hand(), "by hand");
    if let Some(folder) = shared("data/ludb") {
        for record in ["1", "49", "101"] {
            assert_true(&case_of(&folder.join(format!("{record}.hea")), UNFILTERED), record);
        }
    }
}

/// Runs the checker on a page.
fn scale_check(case: &Case, options: &SheetOptions, page: usize, arguments: &[&str]) {
    let Some(checker) = shared("accuracy/scale_check.py") else {
        return;
    };
    let folder = TempDir::new();
    let path = folder.path().join("sheet.pdf");
    std::fs::write(&path, written(case, "standard", options)).expect("a file can be written");
    let output = Command::new("python3")
        .arg(checker)
        .arg(&path)
        .args(["--no-raster", "--tol", "0.01", "--page", &page.to_string()])
        .args(arguments)
        .output();
    let output = match output {
        Ok(output) => output,
        Err(error) => {
            assert!(std::env::var_os("CI").is_none(), "python3: {error}");
            eprintln!("SKIPPED: python3: {error}");
            return;
        }
    };
    let said = String::from_utf8_lossy(&output.stdout);
    assert!(output.status.success(), "{said}{}", String::from_utf8_lossy(&output.stderr));
}

#[test]
fn an_independent_checker_finds_the_sheet_at_true_scale() {
    let case = case_of(&project().join("demo-data/tachycardia.hea"), Settings::default());
    let rate = case.recording.rate.get().to_string();
    for paper in [Paper::A4, Paper::Letter] {
        let usual = SheetOptions { paper, ..SheetOptions::default() };
        scale_check(
            &case,
            &usual,
            1,
            &["--speed", "25", "--rate", &rate, "--pulse", "10x5", "--span", "250"],
        );
        let fast = SheetOptions { speed: PaperSpeed::literal(50.0), ..usual };
        for page in [1, 2] {
            let arguments =
                ["--speed", "50", "--rate", &rate, "--pulse", "10x10", "--traces", "7", "--span", "250"];
            scale_check(&case, &fast, page, &arguments);
        }
    }
}

//! True scale, read from the content stream and judged by a second reader.

use super::paths::{Path, stroked};
use super::sample::{FIELD, SAMPLES, SIZE, TRACE_WIDTH, TRACES, document, pulse, trace};
use crate::support::tools::judge_text;
use crate::support::{TempDir, shared};
use leadsheet::sheet::Paper;

/// What the numbers of the file may lose: half a unit of 2.5 µm and the sixth decimal of its matrix.
/// 5 µV at 5 mm/mV are 0.025 mm, 0.1 ms at 25 mm/s are 0.0025 mm.
const EXACT: f64 = 0.0016;

fn with_vertices(paths: &[Path], vertices: impl Fn(usize) -> bool) -> Vec<&Path> {
    paths.iter().filter(|path| vertices(path.points.len())).collect()
}

fn distance(a: (f64, f64), b: (f64, f64)) -> f64 {
    (a.0 - b.0).abs().max((a.1 - b.1).abs())
}

#[test]
fn every_vertex_of_traces_and_pulses_lies_where_the_page_put_it() {
    for paper in [Paper::A4, Paper::Letter] {
        let paths = stroked(&document(paper));
        let traces = with_vertices(&paths, |count| count > 100);
        assert_eq!(traces.len(), TRACES);
        for (number, path) in traces.iter().enumerate() {
            let wanted = trace(number);
            assert_eq!(path.points.len(), SAMPLES);
            let worst = path.points.iter().zip(&wanted).map(|(&a, &b)| distance(a, b)).fold(0.0, f64::max);
            assert!(worst < EXACT, "{paper:?}, trace {number}: off by {worst} mm");
            assert!((path.width - TRACE_WIDTH).abs() < EXACT);
            assert_eq!(path.cap_and_join, (1, 1), "a mitre would overshoot the true voltage");
        }
        let pulses = with_vertices(&paths, |count| count == 6);
        assert_eq!(pulses.len(), 4);
        for (number, path) in pulses.iter().enumerate() {
            for (&drawn, wanted) in path.points.iter().zip(pulse(number)) {
                assert!(
                    distance(drawn, wanted) < EXACT,
                    "{paper:?}, pulse {number}: {drawn:?}, not {wanted:?}"
                );
            }
        }
    }
}

#[test]
fn a_ruling_lies_on_every_millimetre_of_the_field_and_every_fifth_is_heavier() {
    let paths = stroked(&document(Paper::A4));
    let rulings = with_vertices(&paths, |count| count == 2);
    let mut across: Vec<(f64, f64)> = Vec::new();
    let mut down: Vec<(f64, f64)> = Vec::new();
    for path in rulings {
        let [(x1, y1), (x2, y2)] = path.points[..] else { unreachable!() };
        if (x1 - x2).abs() < EXACT {
            across.push((x1 - FIELD.0, path.width));
            assert!((y1.min(y2) - FIELD.1).abs() < EXACT && ((y1 - y2).abs() - SIZE.1).abs() < EXACT);
        } else {
            down.push((y1 - FIELD.1, path.width));
            assert!((x1.min(x2) - FIELD.0).abs() < EXACT && ((x1 - x2).abs() - SIZE.0).abs() < EXACT);
        }
    }
    for (mut rulings, length) in [(across, SIZE.0), (down, SIZE.1)] {
        rulings.sort_by(|a, b| a.0.total_cmp(&b.0));
        assert_eq!(rulings.len(), length as usize + 1);
        for (index, (at, width)) in rulings.into_iter().enumerate() {
            assert!((at - index as f64).abs() < EXACT, "ruling {index} lies at {at} mm");
            let wanted = if index % 5 == 0 { 0.25 } else { 0.1 };
            assert!((width - wanted).abs() < EXACT, "ruling {index} is {width} mm wide");
        }
    }
}

// Source: the checker that stands beside the project (its own reading of the content stream, pikepdf).
#[test]
fn the_scale_checker_finds_nothing_off_by_a_hundredth_of_a_millimetre() {
    let Some(checker) = shared("accuracy/scale_check.py") else { return };
    let folder = TempDir::new();
    for paper in [Paper::A4, Paper::Letter] {
        let file = folder.path().join(format!("{paper:?}.pdf"));
        std::fs::write(&file, document(paper)).expect("the file can be written");
        let (checker, file) = (checker.to_str().expect("UTF-8"), file.to_str().expect("UTF-8"));
        let arguments = [checker, file, "--tol", "0.01", "--speed", "25", "--rate", "500", "--pulse", "10x5"];
        let arguments = [&arguments[..], &["--span", "250", "--no-raster"]].concat();
        if let Some(report) = judge_text("python3", &arguments) {
            assert!(report.ends_with("OK\n"), "{report}");
        }
    }
}

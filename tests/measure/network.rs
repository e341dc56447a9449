//! The network computes what the library that trained it computes.

use crate::support::project;
use leadsheet::measure::network::{FIDUCIAL, LENGTH, RATE, see};
use leadsheet::recording::Lead;
use std::fs;

/// Height in mV, middle and width in s of P, Q, R, S and T.
const WAVES: [(f64, f64, f64); 5] = [
    (0.12, -0.16, 0.022),
    (-0.08, -0.025, 0.008),
    (1.0, 0.0, 0.010),
    (-0.2, 0.028, 0.009),
    (0.3, 0.26, 0.045),
];
/// How much of each wave a lead shows.
const GAINS: [[f64; 5]; 3] =
    [[0.6, 0.5, 0.7, 0.4, 0.8], [1.0, 1.0, 1.0, 1.0, 1.0], [0.3, 0.0, 0.2, 5.0, -0.4]];

fn drawn() -> Vec<Vec<f32>> {
    let potential = |gains: &[f64; 5], index: usize| {
        let time = (index as f64 - FIDUCIAL as f64) / RATE;
        let waves = WAVES.iter().zip(gains);
        waves
            .map(|((height, middle, width), gain)| {
                gain * height * (-((time - middle) / width).powi(2) / 2.0).exp()
            })
            .sum::<f64>() as f32
    };
    GAINS.iter().map(|gains| (0..LENGTH).map(|index| potential(gains, index)).collect()).collect()
}

// Source: JAX 0.10.2 on the same weights (tests/training/reference.py).
#[test]
fn marks_agree_with_the_library_that_trained_them() {
    let text = fs::read_to_string(project().join("tests/measure/network.json")).expect("the reference");
    let reference: serde_json::Value = serde_json::from_str(&text).expect("JSON");
    let seen = see(&drawn(), &[Some(Lead::I), Some(Lead::II), None]);
    for (signal, marks) in seen.marks.iter().enumerate() {
        for (mark, found) in marks.iter().enumerate() {
            let expected = reference["marks_ms"][signal][mark].as_f64().expect("a number");
            assert!((found.time - expected).abs() < 0.01, "{signal} {mark}: {} {expected}", found.time);
            assert!(found.spread > 0.0 && found.spread < 100.0);
        }
    }
    assert!((seen.p - reference["p"].as_f64().expect("a number")).abs() < 0.001);
    assert!((seen.t - reference["t"].as_f64().expect("a number")).abs() < 0.001);
}

// Source: common practice, the wave's own extent: 2.5 standard deviations either side of the drawn Gaussians.
#[test]
fn marks_of_a_drawn_beat_lie_around_its_waves() {
    let seen = see(&drawn(), &[Some(Lead::I), Some(Lead::II), None]);
    let [p_on, p, p_off, qrs_on, r, qrs_off, t, t_off] = seen.marks[1].map(|mark| mark.time);
    for (found, drawn, within) in [
        (p_on, -215.0, 20.0),
        (p, -160.0, 6.0),
        (p_off, -105.0, 20.0),
        (qrs_on, -45.0, 15.0),
        (r, 0.0, 6.0),
        (qrs_off, 50.0, 15.0),
        (t, 260.0, 10.0),
        (t_off, 372.0, 30.0),
    ] {
        assert!((found - drawn).abs() < within, "{found} against {drawn}");
    }
    assert!(seen.p > 0.0 && seen.t > 0.0);
}

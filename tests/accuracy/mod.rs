//! How far the measurements lie from the truth: on artificial recordings of known marks, on real ones with noise
//! mixed in, and against outside readers. What holds is asserted; [`figures`] prints all of it and files it.

mod artificial;
mod calibration;
mod figures;
mod judges;
mod noise;
mod statistics;

use leadsheet::case::{Case, Settings};
use leadsheet::measure::Measurements;
use leadsheet::recording::{Decoded, Occasion, Quantity, Recording, Samples, Signal, Source, Subject};
use leadsheet::units::{SampleRate, Seconds, Spans};

/// The four intervals of the limits, in their order.
const INTERVALS: [&str; 4] = ["P", "PR", "QRS", "QT"];

/// A recording of the eight leads of `crate::support::dipole::LEADS`, in mV.
fn recording(rate: f64, eight: &[Vec<f64>]) -> Recording {
    let rate = SampleRate::new(rate).expect("a rate");
    let signals = crate::support::dipole::LEADS.iter().zip(eight).map(|(name, values)| Signal {
        name: (*name).to_owned(),
        quantity: Quantity::Voltage,
        resolution: None,
        samples: Samples::new(rate, values.clone(), Spans::none()),
    });
    let decoded = Decoded {
        source: Source { file: "artificial".to_owned(), format: "none", sha256: String::new() },
        signals: signals.collect(),
        subject: Subject::default(),
        occasion: Occasion::default(),
        notes: Vec::new(),
    };
    Recording::from_decoded(decoded).expect("eight leads make a recording")
}

fn measured(recording: Recording) -> Measurements {
    let case = Case::analyse(recording, None, Settings::default()).expect("it is analysed");
    case.analysis.measurements
}

/// P, PR, QRS, QT in ms, each where it is given.
fn intervals(found: &Measurements) -> [Option<f64>; 4] {
    [&found.p_duration, &found.pr, &found.qrs, &found.qt].map(|interval| interval.value().map(Seconds::ms))
}
